/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Small text tables: one header line with the names of the columns, then a row a line.
 *
 * Fields are parted by tabs, semicolons or commas, or by blanks; the header decides, in this order, and a
 * mark inside brackets or double quotes does not count.  Between marks a field may stand in double quotes
 * (RFC 4180, but on one line).  A name may carry a unit: "depth [m]", "pressure (dbar)", "temperature_degC".
 * Lines end as on any system; empty lines and lines that begin with # say nothing; a byte order mark is
 * skipped.
 *
 * A missing value is an empty field, NA, NaN or -.  A comma as the decimal mark is read in tables parted by
 * semicolons, where it can mean nothing else, unless the same column also has points; elsewhere it is
 * refused.
 *
 * Messages read "FILE: line 7, column 'salinity': what is wrong; what to do".
 */
#ifndef STERICOL_INPUT_TABLE_H
#define STERICOL_INPUT_TABLE_H

#include "base/context.h"
#include "cf/units.h"

#include <stdbool.h>
#include <stddef.h>

enum {
    STERICOL_TEXT_TABLE_MOST_ROWS = 100000,
    STERICOL_TEXT_TABLE_MOST_COLUMNS = 1000,
    STERICOL_TEXT_TABLE_MOST_BYTES = 64 * 1024 * 1024
};

/* Instead of a column's number. */
#define STERICOL_TEXT_TABLE_NONE ((size_t)-1)

typedef struct stericol_text_table stericol_text_table;

/*
 * Reads a table from a file.
 *
 * STERICOL_INPUT: a file that cannot be read; what is not text, or larger than the bounds above; no header, a
 * name that is missing or there twice, no rows, a row with another number of fields.  STERICOL_MEMORY.  On
 * failure *table is NULL.
 */
stericol_status stericol_text_table_read(stericol_context *context, const char *path,
                                         stericol_text_table **table);
/* The same from bytes in memory, which are copied; `name` stands for the file in messages. */
stericol_status stericol_text_table_parse(stericol_context *context, const char *name, const char *bytes,
                                          size_t length, stericol_text_table **table);
/* NULL is allowed. */
void stericol_text_table_free(stericol_text_table *table);

/* What the table was read from, for messages. */
const char *stericol_text_table_path(const stericol_text_table *table);
size_t stericol_text_table_rows(const stericol_text_table *table);
size_t stericol_text_table_columns(const stericol_text_table *table);
/* The line of the file that a row stands in, from 1. */
size_t stericol_text_table_line(const stericol_text_table *table, size_t row);
/* As written, without its unit in brackets. */
const char *stericol_text_table_name(const stericol_text_table *table, size_t column);
/* The unit, in brackets or behind the last underscore; NULL for none. */
const char *stericol_text_table_unit(const stericol_text_table *table, const stericol_cf_units *units,
                                     size_t column);

/*
 * Whether a column has one of the `names` (ended by NULL, lower case with underscores).  Capitals do not
 * matter, blanks and hyphens count as underscores, and a unit that units.h knows may follow an underscore.
 */
bool stericol_text_table_is(const stericol_text_table *table, const stericol_cf_units *units, size_t column,
                            const char *const *names);
/* The first column from `from` on with one of the names; STERICOL_TEXT_TABLE_NONE where there is none. */
size_t stericol_text_table_find(const stericol_text_table *table, const stericol_cf_units *units, size_t from,
                                const char *const *names);

/*
 * The numbers of a column in the unit `target`; a column without a unit is taken to be in it.
 *
 * difference  the values are differences, so that a scale's zero does not matter: a warming of 1 degC is 1 K
 * values      [rows] out; NaN is missing
 *
 * STERICOL_INPUT: a field that is no number; a unit that does not convert.  What `values` holds then is not
 * set.
 */
stericol_status stericol_text_table_numbers(stericol_context *context, const stericol_text_table *table,
                                            const stericol_cf_units *units, size_t column, const char *target,
                                            bool difference, double *values);

/* Fails with STERICOL_INPUT about one field: "FILE: line 7, column 'salinity': ...; remedy". */
stericol_status stericol_text_table_refuse(stericol_context *context, const stericol_text_table *table,
                                           size_t row, size_t column, const char *remedy, const char *format,
                                           ...) STERICOL_PRINTF(6, 7);

#endif
