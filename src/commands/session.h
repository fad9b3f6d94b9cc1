/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What every command needs around its work: settings, context, units, workers, log, progress; and the only
 * place that prints.  Results go to standard output, talk to standard error.
 */
#ifndef STERICOL_COMMANDS_SESSION_H
#define STERICOL_COMMANDS_SESSION_H

#include "base/context.h"
#include "base/executor.h"
#include "base/text.h"
#include "cf/units.h"
#include "job/log.h"
#include "job/progress.h"
#include "job/settings.h"
#include "job/workers.h"

#include <stdbool.h>
#include <stddef.h>

typedef struct stericol_session {
    const stericol_settings *settings;
    const char *command_line;
    stericol_context *context;
    stericol_cf_units *units;
    stericol_workers *workers;
    stericol_executor *executor;
    stericol_log *log;
    stericol_progress *progress;
    bool quiet;
    bool keeps_notices;        /* set to collect notices in `notices` instead of printing them */
    stericol_text notices;     /* one a line */
    stericol_text assumptions; /* every notice, one a line, for provenance */
} stericol_session;

/* Opens what the settings ask for.  On failure the message is in session->context, and close is still to be
 * called. */
stericol_status stericol_session_open(stericol_session *session, const stericol_settings *settings,
                                      const char *command_line);
/*
 * Starts the threads that --threads asks for; until then the executor is the serial one.  Files are opened
 * before: their first contact is in a forked child, and a fork is safest while there is one thread.
 */
stericol_status stericol_session_start_workers(stericol_session *session);
/* Closes everything and returns `status`, or what closing the log gave where that was STERICOL_OK. */
stericol_status stericol_session_close(stericol_session *session, stericol_status status);

/* Prints the failure in the session's context, one line on standard error, "stericol: ...". */
void stericol_session_print_failure(const stericol_session *session);
/* Prints text to standard output; STERICOL_OUTPUT when that fails. */
stericol_status stericol_session_print(stericol_session *session, const char *text);
/* A line on standard error that --quiet silences, for what the user should know at the end. */
void stericol_session_say(stericol_session *session, const char *format, ...) STERICOL_PRINTF(2, 3);
/* A warning, as notices are. */
void stericol_session_warn(stericol_session *session, const char *format, ...) STERICOL_PRINTF(2, 3);

/* A pair pipeline's tick: draws the progress, looks for an interruption. */
bool stericol_session_tick(void *session, double done, double whole);

/* The memory to use: --memory, else half of what is free. */
size_t stericol_session_memory(const stericol_session *session);

/* "2031-05-04T12:00:00Z", now. */
enum { STERICOL_SESSION_TIME_ROOM = 32 };
void stericol_session_time(char text[STERICOL_SESSION_TIME_ROOM]);

#endif
