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
 * Each adds its table to `text`, in the order of `rows`.  STERICOL_MEMORY, then `text` holds a part.
 *
 * text   aligned columns of at most 100 characters with mm, ZJ, m3 and the share of the area covered; a
 * column that is empty in every row is left out, a missing value is blank; names are made printable csv RFC
 * 4180 (CRLF, quotes where needed), one line of names with SI units, numbers that read back the same; a
 * missing value is empty json   one object: "units" and "regions", numbers that read back the same; a missing
 * value is null
 *
 * csv and json name every quantity as the result file does (region_...), whether it is known or not.
 */
stericol_status stericol_table_text(stericol_context *context, const stericol_table_row *rows, size_t count,
                                    stericol_text *text);
stericol_status stericol_table_csv(stericol_context *context, const stericol_table_row *rows, size_t count,
                                   stericol_text *text);
stericol_status stericol_table_json(stericol_context *context, const stericol_table_row *rows, size_t count,
                                    stericol_text *text);

#endif
