/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * How work is given to several workers.  The rooms below only see this interface; job/ brings the threads.
 */
#ifndef STERICOL_BASE_EXECUTOR_H
#define STERICOL_BASE_EXECUTOR_H

#include <stddef.h>

/* Handles the items from <= i < to; `worker` is 0 <= worker < workers and never used twice at once. */
typedef void stericol_task(void *argument, size_t from, size_t to, size_t worker);

typedef struct stericol_executor stericol_executor;
struct stericol_executor {
    size_t workers;
    /*
     * Cuts 0..count into ranges of `grain` items (the last may be shorter), runs `task` on each, in any order
     * and at the same time, and returns when all are done.
     */
    void (*run)(stericol_executor *self, size_t count, size_t grain, stericol_task *task, void *argument);
    /*
     * Starts `background(argument)` beside the workers; at most one at a time.  wait() returns when it is
     * done.  The serial executor runs it inside start().
     */
    void (*start)(stericol_executor *self, void (*background)(void *argument), void *argument);
    void (*wait)(stericol_executor *self);
};

/* One worker: the calling thread. */
extern stericol_executor stericol_serial_executor;

#endif
