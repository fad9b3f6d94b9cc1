/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a result says about where it comes from. */
#ifndef STERICOL_RESULT_PROVENANCE_H
#define STERICOL_RESULT_PROVENANCE_H

#include "base/text.h"

#include <stddef.h>

typedef struct stericol_input_record {
    const char *path;
    unsigned long long bytes;
    long long changed; /* seconds since 1970-01-01 UTC */
    const char *id;    /* the file's own id; NULL where it has none */
} stericol_input_record;

/*
 * Adds one line an input, without a line end after the last:
 * "PATH, N bytes, changed 2031-05-04T12:00:00Z, id ID".  Names and ids are made printable.  A time beyond the
 * years of the system's calendar is left out.  Look at text->failed afterwards.
 */
void stericol_result_inputs_text(stericol_text *text, const stericol_input_record *inputs, size_t count);

/* "2031-05-04T12:00:00Z" into a buffer of STERICOL_INSTANT_ROOM bytes; false (and "") when the calendar has
 * no such time. */
enum { STERICOL_INSTANT_ROOM = 40 };
bool stericol_result_instant_text(long long seconds, char *buffer);

#endif
