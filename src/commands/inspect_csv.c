/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The levels of all files as one table, RFC 4180: for spreadsheets.  What has no numbers is not in it. */
#include "commands/inspect_inside.h"

#include <math.h>

void stericol_inspect_csv_heading(stericol_text *text)
{
    stericol_text_add(text, "file,time,level,position,position_units,columns,cells");
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++) {
        const char *name = stericol_inspect_quantity_name((stericol_inspect_quantity)q);

        stericol_text_format(text, ",%s_minimum,%s_mean_of_cells,%s_maximum,%s_below,%s_above", name, name,
                             name, name, name);
    }
    stericol_text_add(text, ",zeros,ends\r\n");
}

static void add_number(stericol_text *text, double value)
{
    if (isfinite(value))
        stericol_text_format(text, ",%.17g", value);
    else
        stericol_text_add(text, ",");
}

static void add_words(stericol_text *text, const char *words)
{
    stericol_text printable = {0};

    stericol_text_add_printable(&printable, words);
    stericol_text_add(text, "\"");
    for (const char *c = stericol_text_string(&printable); *c != '\0'; c++)
        stericol_text_add(text, *c == '"' ? "\"\"" : (char[2]){*c, '\0'});
    stericol_text_add(text, "\"");
    text->failed = text->failed || printable.failed;
    stericol_text_free(&printable);
}

static void add_range(stericol_text *text, const stericol_inspection *inspection,
                      const stericol_inspect_level *level, stericol_inspect_quantity quantity)
{
    const stericol_inspect_range *range = &level->range[quantity];

    if (!inspection->reads[quantity]) {
        stericol_text_add(text, ",,,,,");
        return;
    }
    add_number(text, range->low);
    add_number(text, range->mean);
    add_number(text, range->high);
    stericol_text_format(text, ",%llu,%llu", range->below, range->above);
}

void stericol_inspect_csv(const stericol_inspection *inspection, stericol_text *text)
{
    const stericol_inspect_values *values = &inspection->values;
    const stericol_grid *grid;

    if (inspection->epoch == NULL || values->levels == NULL)
        return;
    grid = stericol_epoch_grid(inspection->epoch);
    for (size_t k = 0; k < grid->levels; k++) {
        const stericol_inspect_level *level = &values->levels[k];

        add_words(text, inspection->path == NULL ? "(all files as one set)" : inspection->path);
        stericol_text_add(text, ",");
        add_words(text, values->members == 1 ? values->first : stericol_epoch_description(inspection->epoch));
        stericol_text_format(text, ",%zu", k + 1);
        add_number(text, grid->own_depths ? (double)NAN : grid->level[k]);
        stericol_text_format(text, ",%s,%llu,%llu",
                             grid->vertical == STERICOL_VERTICAL_PRESSURE ? "dbar" : "m", level->columns,
                             values->cells);
        for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
            add_range(text, inspection, level, (stericol_inspect_quantity)q);
        stericol_text_format(text, ",%llu,%llu\r\n", level->zeros, level->ends);
    }
}
