/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Threads behind the executor of base/executor.h. */
#ifndef STERICOL_JOB_WORKERS_H
#define STERICOL_JOB_WORKERS_H

#include "base/executor.h"
#include "stericol/status.h"

#include <stddef.h>

enum { STERICOL_WORKERS_MOST = 1024 };

typedef struct stericol_workers stericol_workers;

/*
 * Starts `threads` workers, the calling thread being one of them (0: stericol_default_threads()); at most
 * STERICOL_WORKERS_MOST.  Signals are blocked in the new threads, so that they reach the main one.
 * STERICOL_MEMORY: no memory, or the system gives no more threads.  On failure *workers is NULL.
 */
stericol_status stericol_workers_new(stericol_context *context, size_t threads, stericol_workers **workers);
/* Waits for the background task and ends the threads.  NULL is allowed. */
void stericol_workers_free(stericol_workers *workers);

/*
 * The executor; it lives as long as the workers.
 *
 * run() hands out grains in order to whoever is free.  Two threads that call run() at once take turns; a task
 * must not call run().  start() uses a thread of its own, so that the background task and run() overlap; a
 * second start() before wait() is a caller's mistake.  The background task may call run().  What was written
 * before run(), start() is seen by the tasks, and what they wrote is seen after run(), wait().
 */
stericol_executor *stericol_workers_executor(stericol_workers *workers);

/* The CPUs that this process may use: its affinity mask, less where the control group's quota is lower. >= 1.
 */
size_t stericol_default_threads(void);

/*
 * The CPU quota of this process's control group (versions 2 and 1) and the groups above it, rounded up; 0
 * where there is none.  `root` stands before /proc and /sys, "" for this machine.
 */
size_t stericol_cpu_quota(const char *root);

#endif
