/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Reporting into a context.  The public half is in stericol/status.h. */
#ifndef STERICOL_BASE_CONTEXT_H
#define STERICOL_BASE_CONTEXT_H

#include "stericol/status.h"

/*
 * Records a failure and returns `status`, so that `return stericol_fail(...)` reads as one act.
 *
 * file, variable   what it is about; NULL leaves the part out
 * remedy           what the user can do, without a full stop; NULL leaves it out
 * format, ...      what is wrong
 *
 * The first failure stays: a later one in the same context does not replace it, since what went wrong first
 * is the cause of what follows.  Bytes that are not printable (names come from files) are written as \xNN.
 * A NULL context is allowed: only the status is passed on.
 */
stericol_status stericol_fail(stericol_context *context, stericol_status status, const char *file,
                              const char *variable, const char *remedy, const char *format, ...)
    STERICOL_PRINTF(6, 7);

/* As above for memory that could not be had; `bytes` is what was asked for, 0 where not known. */
stericol_status stericol_fail_memory(stericol_context *context, size_t bytes, const char *what);

/* Records in `context` the failure that `other` holds, with its message, and returns its status. */
stericol_status stericol_fail_again(stericol_context *context, const stericol_context *other);

/* Sends a notice, "FILE: VARIABLE: text", to the context's receiver. */
void stericol_notice(stericol_context *context, stericol_notice_level level, const char *file,
                     const char *variable, const char *format, ...) STERICOL_PRINTF(5, 6);

#endif
