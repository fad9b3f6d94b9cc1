/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The values of options that are more than a number.  Each parser returns NULL when the whole text fits, else
 * a phrase that says what is wrong or allowed, for a message; outputs are then not set.
 */
#ifndef STERICOL_JOB_VALUES_H
#define STERICOL_JOB_VALUES_H

#include <stddef.h>

/* A depth range, m, lower > upper >= 0; lower is INFINITY for "bottom". */
typedef struct stericol_depth_range {
    double upper, lower;
} stericol_depth_range;

enum { STERICOL_LAYERS_MOST = 1000 };

/*
 * "0..700,700..2000,2000..bottom": at least one range, at most STERICOL_LAYERS_MOST.  Ranges may overlap and
 * come in any order, but none twice.  *layers is allocated, free with free(); NULL for both outputs only
 * checks. When memory is out: *layers NULL, *count 0 and a phrase.
 */
const char *stericol_parse_layers(const char *text, stericol_depth_range **layers, size_t *count);

/* "3" or "3..5", counted from 1, first <= last. */
const char *stericol_parse_steps(const char *text, size_t *first, size_t *last);

/* A number with K, M, G, T (also KiB, KB, k ...): powers of 1024; without a letter bytes.  At least 1 byte.
 */
const char *stericol_parse_size(const char *text, size_t *bytes);

/* "NAME=INDEX", index from 1: the length of the name at the start of `text`, and the index. */
const char *stericol_parse_assignment(const char *text, size_t *name_length, size_t *index);

/*
 * "NAME=W,S,E,N": the length of the name, and west, south, east, north in degrees (RFC 7946, section 5).
 * South is less than north, both within +-90; west and east within +-360 and different.
 */
const char *stericol_parse_box(const char *text, size_t *name_length, double box[4]);

/* "FROM..TO", neither empty: the length of FROM and the start of TO; one date alone is both. */
const char *stericol_parse_window(const char *text, size_t *from_length, const char **to);

#endif
