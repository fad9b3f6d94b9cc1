/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "base/executor.h"

static void run_serially(stericol_executor *self, size_t count, size_t grain, stericol_task *task, void *argument)
{
    (void)self;
    for (size_t from = 0; from < count;) {
        size_t to = count - from > grain ? from + grain : count;

        task(argument, from, to, 0);
        from = to;
    }
}

static void start_at_once(stericol_executor *self, void (*background)(void *argument), void *argument)
{
    (void)self;
    background(argument);
}

static void wait_for_nothing(stericol_executor *self)
{
    (void)self;
}

stericol_executor stericol_serial_executor = {1, run_serially, start_at_once, wait_for_nothing};
