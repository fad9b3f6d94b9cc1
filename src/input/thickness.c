/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Depths from a field of cell thicknesses: they add up from the surface.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

struct stericol_input_thickness {
    stericol_cf_file *file;
    stericol_cf_field *field;
    size_t levels, columns;
    bool reversed;
    /* The limits below the levels done, so that level after level reads each plane once. */
    double *floor, *read;
    size_t next_level, row0, rows;
};

void stericol_input_thickness_close(stericol_input_thickness *thickness)
{
    if (!thickness)
        return;
    stericol_cf_field_close(thickness->field);
    stericol_cf_close(thickness->file);
    free(thickness->floor);
    free(thickness->read);
    free(thickness);
}

/* standard_name cell_thickness, else the only variable with levels, rows and columns in a unit of length. */
static const stericol_cf_variable *find_variable(const stericol_input_reader *reader, double *scale)
{
    const stericol_cf_variable *only = NULL;
    size_t count = 0;
    for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
        const char *standard_name = stericol_cf_text_of(variable, "standard_name");
        double offset;
        if (!stericol_cf_units_convert(reader->units, stericol_cf_text_of(variable, "units"), "m", scale,
                                       &offset))
            continue;
        if (standard_name && strcmp(standard_name, "cell_thickness") == 0)
            return variable;
        if (variable->rank >= 3) {
            only = variable;
            count++;
        }
    }
    if (count != 1)
        return NULL;
    double offset;
    stericol_cf_units_convert(reader->units, stericol_cf_text_of(only, "units"), "m", scale, &offset);
    return only;
}

static stericol_status open_field(const stericol_input_reader *reader, const stericol_grid *grid,
                                  stericol_input_thickness *thickness)
{
    stericol_cf_conversion conversion = {1.0, 0.0, -INFINITY, INFINITY};
    const stericol_cf_variable *variable = find_variable(reader, &conversion.scale);
    stericol_input_roles roles;
    stericol_cf_field_axes axes = {.time = STERICOL_CF_NO_AXIS, .level = STERICOL_CF_NO_AXIS};
    if (!variable)
        return stericol_input_refuse(
            reader, NULL, "give a file with one variable of standard_name cell_thickness in metres",
            "no cell thickness was recognised");
    stericol_status status = stericol_input_plane_axes(reader, variable, grid, &axes.row, &axes.column);
    if (status == STERICOL_OK)
        status = stericol_input_check_positions(reader, variable, grid);
    if (status != STERICOL_OK)
        return status;
    stericol_input_find_roles(reader, variable, &roles);
    for (size_t i = 0; i < variable->rank; i++) {
        const size_t length = stericol_cf_dimension_at(reader->file, variable->dimension[i])->length;
        if ((int)i == axes.row || (int)i == axes.column)
            continue;
        if (roles.sign[i].role == STERICOL_INPUT_TIME) {
            axes.time = (int)i;
            if (length > 1)
                stericol_input_say(reader, STERICOL_WARNING, variable->name,
                                   "thicknesses of the first of %zu times are used throughout", length);
        } else if (length == grid->levels) {
            axes.level = (int)i;
        } else if (length > 1) {
            return stericol_input_refuse(reader, variable->name, "give it on the grid of the field",
                                         "its shape is not that of the field (%zu levels)", grid->levels);
        }
    }
    if (axes.level == STERICOL_CF_NO_AXIS && grid->levels > 1)
        return stericol_input_refuse(reader, variable->name, "give it on the grid of the field",
                                     "its shape is not that of the field (%zu levels)", grid->levels);
    stericol_input_say(reader, STERICOL_NOTE, variable->name,
                       "depths of every column from the thicknesses in this file");
    return stericol_cf_field_open(reader->context, reader->file, variable, &axes, &conversion, 0,
                                  &thickness->field);
}

stericol_status stericol_input_thickness_open(const stericol_input_reader *reader, const char *path,
                                              const stericol_grid *grid, bool reversed,
                                              stericol_input_thickness **thickness)
{
    stericol_input_reader there = *reader;
    *thickness = NULL;
    stericol_input_thickness *made = stericol_new_array(1, sizeof *made);
    if (!made)
        return stericol_fail_memory(reader->context, sizeof *made, "the cell thicknesses");
    made->levels = grid->levels;
    made->columns = grid->columns;
    made->reversed = reversed;
    stericol_status status = stericol_cf_open(reader->context, path, &made->file);
    there.file = made->file;
    if (status == STERICOL_OK)
        status = open_field(&there, grid, made);
    if (status != STERICOL_OK) {
        stericol_input_thickness_close(made);
        return status;
    }
    *thickness = made;
    return STERICOL_OK;
}

static stericol_status start_over(stericol_context *context, stericol_input_thickness *thickness, size_t row0,
                                  size_t rows)
{
    if (!thickness->floor || rows != thickness->rows) {
        const size_t plane = rows * thickness->columns;
        free(thickness->floor);
        free(thickness->read);
        thickness->floor = stericol_new_array(plane, sizeof(double));
        thickness->read = stericol_new_array(plane, sizeof(double));
        if (!thickness->floor || !thickness->read)
            return stericol_fail_memory(context, 2 * plane * sizeof(double), "the cell thicknesses");
    }
    memset(thickness->floor, 0, rows * thickness->columns * sizeof(double));
    thickness->next_level = 0;
    thickness->row0 = row0;
    thickness->rows = rows;
    return STERICOL_OK;
}

stericol_status stericol_input_thickness_load(stericol_context *context, stericol_input_thickness *thickness,
                                              size_t level0, size_t levels, size_t row0, size_t rows,
                                              double *depth, double *upper, double *lower)
{
    const size_t plane = rows * thickness->columns;
    stericol_status status = STERICOL_OK;
    if (!thickness->floor || thickness->next_level > level0 || thickness->row0 != row0 ||
        thickness->rows != rows)
        status = start_over(context, thickness, row0, rows);
    while (status == STERICOL_OK && thickness->next_level < level0 + levels) {
        const size_t level = thickness->next_level;
        const size_t stored = thickness->reversed ? thickness->levels - 1 - level : level;
        status = stericol_cf_field_read(context, thickness->field, 0, stored, 1, row0, rows, thickness->read,
                                        NULL);
        for (size_t i = 0; i < plane && status == STERICOL_OK; i++) {
            const double height = thickness->read[i], above = thickness->floor[i];
            const bool cell = height > 0.0; /* false for NaN */
            const size_t at = (level - (level < level0 ? level : level0)) * plane + i;
            if (level >= level0) {
                depth[at] = cell ? above + 0.5 * height : (double)NAN;
                if (upper)
                    upper[at] = cell ? above : (double)NAN;
                if (lower)
                    lower[at] = cell ? above + height : (double)NAN;
            }
            if (cell)
                thickness->floor[i] = above + height;
        }
        thickness->next_level++;
    }
    if (status != STERICOL_OK)
        thickness->next_level = SIZE_MAX; /* begin again next time */
    return status;
}
