/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/signals.h"

#include "base/context.h"

#include <errno.h>
#include <signal.h>
#include <stdatomic.h>
#include <string.h>

/* Who interrupts three times does not want to wait for the tidying up.  Twice is no sign of that: some tools
   send a signal to the process and then to its whole group. */
enum { PATIENCE = 3 };

/* The one mutable state of the program outside its functions: a handler has no other way to speak.  Lock-free
   atomics may be used in handlers (C17, 7.14.1.1). */
static atomic_int first_signal;
static atomic_int signals_seen;
_Static_assert(ATOMIC_INT_LOCK_FREE == 2, "a signal handler needs lock-free integers");

static void remember(int number)
{
    int none = 0;
    int before = errno;

    atomic_compare_exchange_strong(&first_signal, &none, number);
    if (atomic_fetch_add(&signals_seen, 1) + 1 >= PATIENCE) {
        signal(number, SIG_DFL);
        raise(number);
    }
    errno = before;
}

static bool handle(int number)
{
    struct sigaction action, present;

    if (sigaction(number, NULL, &present) != 0)
        return false;
    if (present.sa_handler == SIG_IGN) /* as nohup and shells ask for it */
        return true;
    memset(&action, 0, sizeof action);
    action.sa_handler = remember;
    action.sa_flags = 0; /* no SA_RESTART: opening a pipe that nobody writes to must end */
    sigemptyset(&action.sa_mask);
    return sigaction(number, &action, NULL) == 0;
}

stericol_status stericol_signals_begin(stericol_context *context)
{
    if (handle(SIGINT) && handle(SIGTERM) && handle(SIGHUP) && signal(SIGPIPE, SIG_IGN) != SIG_ERR)
        return STERICOL_OK;
    return stericol_fail(context, STERICOL_FAULT, NULL, NULL, NULL, "signals cannot be handled: %s",
                         strerror(errno));
}

bool stericol_interrupted(void)
{
    return stericol_interrupting_signal() != 0;
}

int stericol_interrupting_signal(void)
{
    return atomic_load(&first_signal);
}

void stericol_signals_raise_again(void)
{
    int number = stericol_interrupting_signal();
    sigset_t only;

    if (number == 0)
        return;
    signal(number, SIG_DFL);
    sigemptyset(&only);
    sigaddset(&only, number);
    sigprocmask(SIG_UNBLOCK, &only, NULL);
    raise(number);
}
