/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Planes that model output keeps in other files: cell areas, land masks.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

stericol_status stericol_input_read_plane(stericol_context *context, stericol_cf_file *file,
                                          const stericol_cf_variable *variable, int row, int column,
                                          double *values)
{
    const stericol_cf_field_axes axes = {
        .time = STERICOL_CF_NO_AXIS, .level = STERICOL_CF_NO_AXIS, .row = row, .column = column};
    const stericol_cf_conversion conversion = {1.0, 0.0, -INFINITY, INFINITY};
    stericol_cf_field *field = NULL;
    stericol_status status = stericol_cf_field_open(context, file, variable, &axes, &conversion, 0, &field);
    if (status == STERICOL_OK) {
        const size_t rows =
            row == STERICOL_CF_NO_AXIS ? 1 : stericol_cf_dimension_at(file, variable->dimension[row])->length;
        status = stericol_cf_field_read(context, field, 0, 0, 1, 0, rows, values, NULL);
    }
    stericol_cf_field_close(field);
    return status;
}

static size_t length_at(const stericol_input_reader *reader, const stericol_cf_variable *variable, int at)
{
    return at == STERICOL_CF_NO_AXIS
               ? 1
               : stericol_cf_dimension_at(reader->file, variable->dimension[at])->length;
}

stericol_status stericol_input_plane_axes(const stericol_input_reader *reader,
                                          const stericol_cf_variable *variable, const stericol_grid *grid,
                                          int *row, int *column)
{
    stericol_input_roles roles;
    *row = *column = STERICOL_CF_NO_AXIS;
    if (variable->rank <= STERICOL_CF_MOST_RANK) {
        stericol_input_find_roles(reader, variable, &roles);
        for (size_t i = 0; i < variable->rank; i++) {
            const stericol_input_role role = roles.sign[i].role;
            if (role == STERICOL_INPUT_LATITUDE || role == STERICOL_INPUT_Y)
                *row = (int)i;
            if (role == STERICOL_INPUT_LONGITUDE || role == STERICOL_INPUT_X)
                *column = (int)i;
        }
    }
    const bool known = length_at(reader, variable, *row) == grid->rows &&
                       length_at(reader, variable, *column) == grid->columns;
    if (!known && variable->rank >= 2 && variable->rank <= STERICOL_CF_MOST_RANK) {
        *row = (int)variable->rank - 2;
        *column = (int)variable->rank - 1;
    }
    if (variable->rank > STERICOL_CF_MOST_RANK || length_at(reader, variable, *row) != grid->rows ||
        length_at(reader, variable, *column) != grid->columns)
        return stericol_input_refuse(reader, variable->name, "give it on the grid of the field",
                                     "its shape is not that of the field (%zu rows, %zu columns)", grid->rows,
                                     grid->columns);
    return STERICOL_OK;
}

stericol_status stericol_input_check_positions(const stericol_input_reader *reader,
                                               const stericol_cf_variable *variable,
                                               const stericol_grid *grid)
{
    char differs[160];
    stericol_input_layout layout;
    stericol_grid own = {0};
    /* A file without positions (an areas file often has none) is believed by its shape. */
    stericol_context *aside = stericol_context_new();
    const stericol_input_reader quiet = {aside, reader->units, NULL, NULL, reader->file};
    stericol_status status = STERICOL_OK;
    if (!aside)
        return stericol_fail_memory(reader->context, 0, "a message");
    if (stericol_input_lay_out(&quiet, variable, NULL, false, &layout) == STERICOL_OK &&
        stericol_input_read_horizontal(&quiet, &layout, &own) == STERICOL_OK &&
        own.curvilinear == grid->curvilinear && own.rows == grid->rows && own.columns == grid->columns) {
        const stericol_grid plane = *grid;
        stericol_grid other = plane;
        other.latitude = own.latitude;
        other.longitude = own.longitude;
        if (!stericol_grid_same(&other, &plane, differs, sizeof differs))
            status = stericol_input_refuse(reader, variable->name, "give it on the grid of the field",
                                           "its grid is not that of the field: %s", differs);
    }
    stericol_input_grid_clear(&own);
    stericol_context_free(aside);
    return status;
}

static bool is_named(const stericol_cf_variable *variable, const char *const *standard_names,
                     const char *const *names, int *rank)
{
    const char *standard_name = stericol_cf_text_of(variable, "standard_name");
    *rank = 0;
    for (size_t i = 0; standard_name && standard_names[i]; i++)
        if (strcmp(standard_name, standard_names[i]) == 0)
            *rank = 2;
    for (size_t i = 0; !*rank && names[i]; i++)
        if (stericol_same_ignoring_case(variable->short_name, names[i]))
            *rank = 1;
    return *rank > 0;
}

/* The best variable by names; NULL when there is none. */
static const stericol_cf_variable *find_named(const stericol_cf_file *file, const char *const *standard_names,
                                              const char *const *names)
{
    const stericol_cf_variable *best = NULL;
    int best_rank = 0, rank;
    for (size_t i = 0; i < stericol_cf_variable_count(file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(file, i);
        if (is_named(variable, standard_names, names, &rank) && rank > best_rank) {
            best = variable;
            best_rank = rank;
        }
    }
    return best;
}

static stericol_status read_checked_plane(const stericol_input_reader *reader,
                                          const stericol_cf_variable *variable, const stericol_grid *grid,
                                          double **values)
{
    int row, column;
    *values = NULL;
    stericol_status status = stericol_input_plane_axes(reader, variable, grid, &row, &column);
    if (status == STERICOL_OK)
        status = stericol_input_check_positions(reader, variable, grid);
    if (status != STERICOL_OK)
        return status;
    const size_t points = grid->rows * grid->columns;
    *values = stericol_new_doubles(points);
    if (!*values)
        return stericol_fail_memory(reader->context, points * sizeof(double), "a plane of the grid");
    status = stericol_input_read_plane(reader->context, reader->file, variable, row, column, *values);
    if (status != STERICOL_OK) {
        free(*values);
        *values = NULL;
    }
    return status;
}

static stericol_status area_from(const stericol_input_reader *reader, stericol_grid *grid)
{
    static const char *const standard_names[] = {"cell_area", NULL};
    static const char *const names[] = {"areacello", "cell_area", "area", "tarea", "area_t", NULL};
    const stericol_cf_variable *variable = find_named(reader->file, standard_names, names);
    double scale = 1.0, offset = 0.0, *values = NULL;
    if (!variable)
        return stericol_input_refuse(reader, NULL, "give a file with a variable of standard_name cell_area",
                                     "no cell areas were found");
    if (!stericol_cf_units_convert(reader->units, stericol_cf_text_of(variable, "units"), "m2", &scale,
                                   &offset))
        return stericol_input_refuse(reader, variable->name, "correct its units attribute",
                                     "cell areas without a unit of area");
    stericol_status status = read_checked_plane(reader, variable, grid, &values);
    if (status != STERICOL_OK)
        return status;
    bool any = false;
    for (size_t i = 0; i < grid->rows * grid->columns && status == STERICOL_OK; i++) {
        values[i] *= scale;
        any = any || values[i] > 0.0;
        if (values[i] < 0.0)
            status = stericol_input_refuse(reader, variable->name, "correct the values",
                                           "a cell area of %.6g m2", values[i]);
    }
    if (status == STERICOL_OK && !any)
        status = stericol_input_refuse(reader, variable->name, "correct the values", "no cell area above 0");
    free(grid->cell_area);
    free(grid->cell_area_source);
    grid->cell_area = values;
    grid->cell_area_source = stericol_copy_string(stericol_cf_path(reader->file));
    stericol_input_say(reader, STERICOL_NOTE, variable->name, "cell areas from this file");
    return status;
}

static stericol_status with_file(const stericol_input_reader *reader, const char *path, stericol_grid *grid,
                                 stericol_status (*read)(const stericol_input_reader *, stericol_grid *))
{
    stericol_input_reader there = *reader;
    stericol_status status = stericol_cf_open(reader->context, path, &there.file);
    if (status == STERICOL_OK)
        status = read(&there, grid);
    stericol_cf_close(there.file);
    return status;
}

stericol_status stericol_input_read_cell_area_file(const stericol_input_reader *reader, const char *path,
                                                   stericol_grid *grid)
{
    return with_file(reader, path, grid, area_from);
}

static stericol_status mask_from(const stericol_input_reader *reader, stericol_grid *grid)
{
    static const char *const land_names[] = {"land_binary_mask", "land_area_fraction", NULL};
    static const char *const sea_names[] = {"sea_binary_mask", "sea_area_fraction", NULL};
    static const char *const land_usual[] = {"land_mask", "landmask", "land", "sftlf", NULL};
    static const char *const sea_usual[] = {"mask", "tmask", "mask_rho", "sea_mask", "ocean_mask",
                                            "wet",  "lsm",   "sftof",    NULL};
    const stericol_cf_variable *land = find_named(reader->file, land_names, land_usual);
    const stericol_cf_variable *sea = find_named(reader->file, sea_names, sea_usual);
    int land_rank = 0, sea_rank = 0;
    if (land)
        is_named(land, land_names, land_usual, &land_rank);
    if (sea)
        is_named(sea, sea_names, sea_usual, &sea_rank);
    const bool by_land = land_rank > sea_rank;
    const stericol_cf_variable *variable = by_land ? land : sea;
    double *values = NULL;
    if (!variable)
        return stericol_input_refuse(
            reader, NULL, "give a file with a variable of standard_name sea_binary_mask or land_binary_mask",
            "no land mask was found");
    stericol_status status = read_checked_plane(reader, variable, grid, &values);
    if (status != STERICOL_OK)
        return status;
    const size_t points = grid->rows * grid->columns;
    double most = 0.0;
    size_t wet = 0;
    for (size_t i = 0; i < points; i++)
        most = values[i] > most ? values[i] : most;
    /* A fraction in percent has values above 1. */
    const double half = most > 1.0 ? 50.0 : 0.5;
    free(grid->dry);
    grid->dry = stericol_new_array(points, 1);
    for (size_t i = 0; grid->dry && i < points; i++) {
        const bool is_sea = by_land ? values[i] < half : values[i] >= half; /* missing is land either way */
        grid->dry[i] = !is_sea;
        wet += is_sea;
    }
    free(values);
    if (!grid->dry)
        return stericol_fail_memory(reader->context, points, "the land mask");
    if (!wet)
        return stericol_input_refuse(reader, variable->name, "give another mask",
                                     "the mask has no sea at all");
    stericol_input_say(reader, STERICOL_NOTE, variable->name,
                       "land mask: 1 taken as %s; %zu of %zu cells are sea", by_land ? "land" : "sea", wet,
                       points);
    return STERICOL_OK;
}

stericol_status stericol_input_read_land_mask(const stericol_input_reader *reader, const char *path,
                                              stericol_grid *grid)
{
    return with_file(reader, path, grid, mask_from);
}
