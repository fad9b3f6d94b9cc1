/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/profile.h"

#include "base/checked.h"
#include "input/table.h"

#include <math.h>
#include <stdbool.h>
#include <stdlib.h>

enum { DEPTH, WARMING, FRESHENING, QUANTITIES };

static const char *const depth_names[] = {"depth", NULL};
static const char *const warming_names[] = {"warming", NULL};
static const char *const freshening_names[] = {"freshening", NULL};

/* Limits are there to catch a wrong unit; those of the changes are those of --warming and --freshening. */
static const struct {
    const char *const *names;
    const char *unit; /* as UDUNITS-2 spells it */
    double low, high;
    bool difference;
} quantities[QUANTITIES] = {
    [DEPTH] = {depth_names, "m", 0.0, 12000.0, false},
    [WARMING] = {warming_names, "K", -20.0, 20.0, true},
    [FRESHENING] = {freshening_names, "g/kg", -20.0, 20.0, true},
};

/* A column that is none of the three is a slip of spelling, and its change would be lost. */
static stericol_status find_columns(stericol_context *context, const stericol_text_table *table,
                                    const stericol_cf_units *units, size_t columns[QUANTITIES])
{
    const char *const path = stericol_text_table_path(table);

    for (size_t q = 0; q < QUANTITIES; q++)
        columns[q] = stericol_text_table_find(table, units, 0, quantities[q].names);
    for (size_t c = 0; c < stericol_text_table_columns(table); c++)
        if (c != columns[DEPTH] && c != columns[WARMING] && c != columns[FRESHENING])
            return stericol_fail(context, STERICOL_INPUT, path, stericol_text_table_name(table, c),
                                 "name the columns depth, warming, freshening, and take others out",
                                 "is no column of a depth table");
    if (columns[DEPTH] == STERICOL_TEXT_TABLE_NONE)
        return stericol_fail(context, STERICOL_INPUT, path, "depth", "add the depth of every row, in metres",
                             "there is no such column");
    if (columns[WARMING] == STERICOL_TEXT_TABLE_NONE && columns[FRESHENING] == STERICOL_TEXT_TABLE_NONE)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "add one of them or both",
                             "has neither a column warming nor one freshening");
    return STERICOL_OK;
}

static stericol_status check_row(stericol_context *context, const stericol_text_table *table, size_t row,
                                 size_t q, size_t column, const double *values)
{
    if (isnan(values[row]))
        return stericol_text_table_refuse(context, table, row, column, "give a value, or take the row out",
                                          "there is no value");
    if (!(values[row] >= quantities[q].low && values[row] <= quantities[q].high))
        return stericol_text_table_refuse(context, table, row, column, "check its unit and its sign",
                                          "%g %s is not within %g..%g", values[row], quantities[q].unit,
                                          quantities[q].low, quantities[q].high);
    if (q == DEPTH && row > 0 && !(values[row] > values[row - 1]))
        return stericol_text_table_refuse(
            context, table, row, column, "order the rows from the surface down, each depth once",
            "%g m does not lie below the row before (%g m)", values[row], values[row - 1]);
    return STERICOL_OK;
}

static stericol_status read_columns(stericol_context *context, const stericol_text_table *table,
                                    const stericol_cf_units *units, const size_t columns[QUANTITIES],
                                    double *values)
{
    const size_t rows = stericol_text_table_rows(table);

    for (size_t q = 0; q < QUANTITIES; q++) {
        double *const own = values + q * rows;
        stericol_status status;

        if (columns[q] == STERICOL_TEXT_TABLE_NONE)
            continue; /* zero, as allocated */
        status = stericol_text_table_numbers(context, table, units, columns[q], quantities[q].unit,
                                             quantities[q].difference, own);
        for (size_t row = 0; row < rows && status == STERICOL_OK; row++)
            status = check_row(context, table, row, q, columns[q], own);
        if (status != STERICOL_OK)
            return status;
    }
    return STERICOL_OK;
}

stericol_status stericol_profile_read(stericol_context *context, const stericol_cf_units *units,
                                      const char *path, double **values, size_t *count)
{
    size_t columns[QUANTITIES];
    stericol_text_table *table;
    stericol_status status = stericol_text_table_read(context, path, &table);

    *values = NULL;
    *count = 0;
    if (status != STERICOL_OK)
        return status;
    status = find_columns(context, table, units, columns);
    if (status == STERICOL_OK) {
        *count = stericol_text_table_rows(table);
        *values = stericol_new_array(QUANTITIES * *count, sizeof **values);
        status = *values == NULL ? stericol_fail_memory(context, 0, "the depth table")
                                 : read_columns(context, table, units, columns, *values);
    }
    if (status != STERICOL_OK) {
        free(*values);
        *values = NULL;
        *count = 0;
    }
    stericol_text_table_free(table);
    return status;
}
