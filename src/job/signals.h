/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Interruption by SIGINT, SIGTERM and SIGHUP. */
#ifndef STERICOL_JOB_SIGNALS_H
#define STERICOL_JOB_SIGNALS_H

#include "stericol/status.h"

#include <stdbool.h>

/*
 * From now on SIGINT, SIGTERM and SIGHUP only raise a flag (one that was ignored at the start stays
 * ignored), and SIGPIPE is ignored, so that a write to a closed pipe fails with EPIPE.  The third signal ends the program
 * at once.  Call it once, before any thread is started.  STERICOL_FAULT where the system refuses.
 */
stericol_status stericol_signals_begin(stericol_context *context);

/* An interruption has come; loops ask now and then.  Any thread. */
bool stericol_interrupted(void);
/* The first signal that came, 0 for none. */
int stericol_interrupting_signal(void);

/* Ends the program as the signal would have: default action restored, signal raised.  Returns where none has
 * come. */
void stericol_signals_raise_again(void);

#endif
