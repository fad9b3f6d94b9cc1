/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Region totals as they appear on standard output: for people, for spreadsheets, for programs. */
#ifndef STERICOL_RESULT_TABLE_H
#define STERICOL_RESULT_TABLE_H

#include "base/text.h"
#include "result/change.h"

/* One region over the whole column, or in one layer. */
typedef struct stericol_table_row {
    const char *region;
    const char *layer;                             /* "0..700"; NULL for the whole column */
    double values[STERICOL_REGION_QUANTITY_COUNT]; /* SI as in the result file; NaN: not known */
} stericol_table_row;

/* Sets all values of a row to NaN. */
void stericol_table_row_clear(stericol_table_row *row);

/*
 * Each adds its table to `text`, in the order of `rows`.  STERICOL_MEMORY, then `text` holds a part.  The
 * share of the area covered needs STERICOL_REGION_AREA in the rows of layers too.
 *
 * For people: aligned columns, mostly within 100 characters, with the share of the area covered (%), the mean
 * steric, thermosteric and halosteric height (mm), the volume (m3; thermosteric where there is no total),
 * heat (ZJ), the thermosteric sea-level equivalent (mm) and its ratio to the heat (m/YJ).  A column that is
 * empty in every row is left out; a missing value is blank; names are made printable, and a long one has a
 * line to itself.
 */
stericol_status stericol_table_text(stericol_context *context, const stericol_table_row *rows, size_t count,
                                    stericol_text *text);
/*
 * For spreadsheets: RFC 4180 (CRLF, quotes where needed), one line of names with SI units, then numbers that
 * read back the same; a missing value is empty.  Every quantity is there under its name in the result file,
 * known or not.
 */
stericol_status stericol_table_csv(stericol_context *context, const stericol_table_row *rows, size_t count,
                                   stericol_text *text);
/* For programs: one object with "units" and "regions"; names and numbers as above, a missing value is null.
 */
stericol_status stericol_table_json(stericol_context *context, const stericol_table_row *rows, size_t count,
                                    stericol_text *text);

#endif
