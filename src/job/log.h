/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The log of a run: JSON Lines (RFC 8259, one object a line, UTF-8), each with "time" (ISO 8601, UTC),
 * "level", "event", "message" and what else the event has.
 */
#ifndef STERICOL_JOB_LOG_H
#define STERICOL_JOB_LOG_H

#include "stericol/status.h"

#include <stddef.h>

typedef enum stericol_log_level {
    STERICOL_LOG_INFO,
    STERICOL_LOG_WARNING,
    STERICOL_LOG_ERROR
} stericol_log_level;

typedef enum stericol_log_kind {
    STERICOL_LOG_TEXT,
    STERICOL_LOG_NUMBER,
    STERICOL_LOG_WHOLE
} stericol_log_kind;

/* One more member of the object; make it by the functions below.  A number that is not finite becomes null.
 */
typedef struct stericol_log_field {
    const char *name;
    stericol_log_kind kind;
    const char *text;
    double number;
    long long whole;
} stericol_log_field;

stericol_log_field stericol_log_text(const char *name, const char *text); /* NULL becomes null */
stericol_log_field stericol_log_number(const char *name, double number);
stericol_log_field stericol_log_whole(const char *name, long long whole);

typedef struct stericol_log stericol_log;

/* Opens a log; lines are added to a file that exists.  STERICOL_OUTPUT, STERICOL_MEMORY: *log is NULL. */
stericol_status stericol_log_open(stericol_context *context, const char *path, stericol_log **log);

/*
 * Adds a line and passes it to the system.  Any thread may call it; a NULL log does nothing.  Bytes that are
 * not printable are written as in messages (\xNN).  A field with one of the four names above is a caller's
 * mistake.  A write that fails is told by stericol_log_close().
 */
void stericol_log_write(stericol_log *log, stericol_log_level level, const char *event, const char *message,
                        const stericol_log_field *fields, size_t count);

/* STERICOL_OUTPUT: some line could not be written.  NULL is allowed and gives STERICOL_OK. */
stericol_status stericol_log_close(stericol_context *context, stericol_log *log);

#endif
