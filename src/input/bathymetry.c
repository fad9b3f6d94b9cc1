/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Sea floor depth on the grid of the field.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* The deepest sounding is 10.9 km. */
static const double deepest = 12000.0;
enum { STRIP = 64 }; /* rows of a source read at once: the source may be far finer than the grid */

typedef struct floor_source {
    const stericol_cf_variable *variable;
    stericol_cf_field *field;
    stericol_grid grid;
    double sense; /* +1 depth, -1 height */
} floor_source;

static bool is_floor_name(const char *name)
{
    return stericol_starts_with(name, "sea_floor_depth") ||
           strcmp(name, "model_sea_floor_depth_below_geoid") == 0;
}

static bool is_height_name(const char *name)
{
    static const char *const names[] = {"altitude",
                                        "height",
                                        "surface_altitude",
                                        "height_above_mean_sea_level",
                                        "height_above_reference_ellipsoid",
                                        "height_above_geopotential_datum",
                                        "bedrock_altitude"};
    for (size_t i = 0; i < sizeof names / sizeof *names; i++)
        if (strcmp(name, names[i]) == 0)
            return true;
    return false;
}

/* By standard_name; else the only variable with two dimensions or more in a unit of length. */
static const stericol_cf_variable *find_variable(const stericol_input_reader *reader, size_t *count)
{
    const stericol_cf_variable *only = NULL;
    for (int round = 0; round < 3; round++) {
        *count = 0;
        for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
            const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
            const char *name = stericol_cf_text_of(variable, "standard_name");
            const bool length =
                stericol_cf_units_quantity(reader->units, stericol_cf_text_of(variable, "units")) ==
                STERICOL_CF_QUANTITY_LENGTH;
            const bool wanted = round == 0   ? name && is_floor_name(name)
                                : round == 1 ? name && is_height_name(name) && variable->rank >= 2
                                             : length && variable->rank == 2;
            if (wanted) {
                only = variable;
                ++*count;
            }
        }
        if (*count)
            return *count == 1 ? only : NULL;
    }
    return NULL;
}

/* Heights or depths: by name, by positive, else by what most of the values say. */
static stericol_status find_sense(const stericol_input_reader *reader, floor_source *source,
                                  const double *values, size_t count)
{
    const char *name = stericol_cf_text_of(source->variable, "standard_name");
    const char *positive = stericol_cf_text_of(source->variable, "positive");
    double least = INFINITY, most = -INFINITY;
    for (size_t i = 0; i < count; i++) {
        if (isnan(values[i]))
            continue;
        least = fmin(least, values[i]);
        most = fmax(most, values[i]);
    }
    if (source->sense != 0.0)
        return STERICOL_OK;
    if (positive && stericol_same_ignoring_case(positive, "down"))
        source->sense = 1.0;
    else if (positive && stericol_same_ignoring_case(positive, "up"))
        source->sense = -1.0;
    else if (name && is_floor_name(name))
        source->sense = 1.0;
    else if (name && is_height_name(name))
        source->sense = -1.0;
    else
        source->sense = least < -deepest / 1000.0 ? -1.0 : 1.0;
    if (!positive && !name)
        stericol_input_say(
            reader, STERICOL_NOTE, source->variable->name, "taken as %s, by its values from %.6g to %.6g m",
            source->sense > 0.0 ? "depth below the sea surface" : "height above the sea surface", least,
            most);
    return STERICOL_OK;
}

static stericol_status open_source(const stericol_input_reader *reader, floor_source *source)
{
    stericol_input_layout layout;
    stericol_cf_conversion conversion = {1.0, 0.0, -INFINITY, INFINITY};
    size_t count;
    source->variable = find_variable(reader, &count);
    if (!source->variable)
        return stericol_input_refuse(
            reader, NULL, "give a file with one variable of standard_name sea_floor_depth_below_geoid",
            count ? "%zu variables could be the sea floor depth"
                  : "no sea floor depth was recognised (%zu variables fit)",
            count);
    const char *unit = stericol_cf_text_of(source->variable, "units");
    if (!stericol_cf_units_convert(reader->units, unit, "m", &conversion.scale, &conversion.offset))
        return stericol_input_refuse(reader, source->variable->name, "correct its units attribute",
                                     "a sea floor depth needs a unit of length");
    stericol_status status = stericol_input_lay_out(reader, source->variable, NULL, false, &layout);
    if (status == STERICOL_OK)
        status = stericol_input_read_horizontal(reader, &layout, &source->grid);
    if (status == STERICOL_OK)
        status = stericol_cf_field_open(reader->context, reader->file, source->variable, &layout.axes,
                                        &conversion, 0, &source->field);
    return status;
}

static bool same_plane(const stericol_grid *a, const stericol_grid *b)
{
    char text[160];
    stericol_grid first = *a, second = *b;
    first.levels = second.levels = 0;
    first.vertical = second.vertical = STERICOL_VERTICAL_DEPTH;
    first.own_depths = second.own_depths = false;
    return stericol_grid_same(&first, &second, text, sizeof text);
}

static double below_surface(const floor_source *source, double value)
{
    const double depth = source->sense * value;
    return depth > 0.0 ? depth : (double)NAN;
}

static stericol_status check_depth(const stericol_input_reader *reader, const floor_source *source,
                                   double depth)
{
    if (depth <= deepest || isnan(depth))
        return STERICOL_OK;
    return stericol_input_refuse(reader, source->variable->name, "correct its units attribute",
                                 "a sea floor at %.6g m lies deeper than any sea", depth);
}

static stericol_status read_same(const stericol_input_reader *reader, floor_source *source, double *depth)
{
    const size_t points = source->grid.rows * source->grid.columns;
    stericol_status status =
        stericol_cf_field_read(reader->context, source->field, 0, 0, 1, 0, source->grid.rows, depth, NULL);
    if (status == STERICOL_OK)
        status = find_sense(reader, source, depth, points);
    for (size_t i = 0; i < points && status == STERICOL_OK; i++) {
        depth[i] = below_surface(source, depth[i]);
        status = check_depth(reader, source, depth[i]);
    }
    return status;
}

/* ---- another grid ---- */

/* The cell whose limits hold `value`: limits are halfway between centres, the outer ones mirrored; SIZE_MAX
 * outside. */
static size_t cell_of(const double *centre, size_t count, double value, double turn)
{
    const double sense = count > 1 && centre[count - 1] < centre[0] ? -1.0 : 1.0;
    if (turn > 0.0) {
        const double middle = 0.5 * (centre[0] + centre[count - 1]);
        value = middle + remainder(value - middle, turn);
    }
    size_t low = 0, high = count; /* the first centre beyond value */
    while (low < high) {
        const size_t half = low + (high - low) / 2;
        if (sense * centre[half] <= sense * value)
            low = half + 1;
        else
            high = half;
    }
    if (count == 1)
        return 0;
    if (low == 0)
        return fabs(value - centre[0]) <= 0.5 * fabs(centre[1] - centre[0]) ? 0 : SIZE_MAX;
    if (low == count)
        return fabs(value - centre[count - 1]) <= 0.5 * fabs(centre[count - 1] - centre[count - 2])
                   ? count - 1
                   : SIZE_MAX;
    return fabs(value - centre[low - 1]) <= fabs(centre[low] - value) ? low - 1 : low;
}

/* The nearest centre; for longitudes around the circle. */
static size_t nearest_of(const double *centre, size_t count, double value, double turn)
{
    size_t best = 0;
    double least = INFINITY;
    for (size_t i = 0; i < count; i++) {
        const double off = turn > 0.0 ? fabs(remainder(centre[i] - value, turn)) : fabs(centre[i] - value);
        if (off < least) {
            least = off;
            best = i;
        }
    }
    return best;
}

typedef struct floor_gathering {
    double *sum;
    unsigned *count;            /* source cells that are sea */
    size_t *row_of, *column_of; /* target row of each source row, target column of each source column */
    double *strip;
} floor_gathering;

static void gathering_free(floor_gathering *gathering)
{
    free(gathering->sum);
    free(gathering->count);
    free(gathering->row_of);
    free(gathering->column_of);
    free(gathering->strip);
}

static stericol_status gather(const stericol_input_reader *reader, floor_source *source,
                              const stericol_grid *grid, floor_gathering *gathering)
{
    const size_t columns = source->grid.columns;
    for (size_t row0 = 0; row0 < source->grid.rows; row0 += STRIP) {
        const size_t rows = source->grid.rows - row0 < STRIP ? source->grid.rows - row0 : STRIP;
        stericol_status status = stericol_cf_field_read(reader->context, source->field, 0, 0, 1, row0, rows,
                                                        gathering->strip, NULL);
        if (status == STERICOL_OK)
            status = find_sense(reader, source, gathering->strip, rows * columns);
        for (size_t i = 0; i < rows * columns && status == STERICOL_OK; i++) {
            const size_t row = gathering->row_of[row0 + i / columns],
                         column = gathering->column_of[i % columns];
            const double depth = below_surface(source, gathering->strip[i]);
            status = check_depth(reader, source, depth);
            if (isnan(depth) || row == SIZE_MAX || column == SIZE_MAX)
                continue;
            gathering->sum[row * grid->columns + column] += depth;
            gathering->count[row * grid->columns + column]++;
        }
        if (status != STERICOL_OK)
            return status;
    }
    return STERICOL_OK;
}

static stericol_status point_value(const stericol_input_reader *reader, floor_source *source, double latitude,
                                   double longitude, double *line, double *depth)
{
    const size_t row = nearest_of(source->grid.latitude, source->grid.rows, latitude, 0.0);
    const size_t column = nearest_of(source->grid.longitude, source->grid.columns, longitude, 360.0);
    const stericol_status status =
        stericol_cf_field_read(reader->context, source->field, 0, 0, 1, row, 1, line, NULL);
    *depth = status == STERICOL_OK ? below_surface(source, line[column]) : (double)NAN;
    return status;
}

static stericol_status resample(const stericol_input_reader *reader, floor_source *source,
                                const stericol_grid *grid, double *depth)
{
    const size_t points = grid->rows * grid->columns;
    floor_gathering gathering = {.sum = stericol_new_array(points, sizeof(double)),
                                 .count = stericol_new_array(points, sizeof(unsigned)),
                                 .row_of = stericol_new_array(source->grid.rows, sizeof(size_t)),
                                 .column_of = stericol_new_array(source->grid.columns, sizeof(size_t)),
                                 .strip = stericol_new_array(source->grid.columns * STRIP, sizeof(double))};
    stericol_status status = STERICOL_OK;
    if (!gathering.sum || !gathering.count || !gathering.row_of || !gathering.column_of || !gathering.strip)
        status = stericol_fail_memory(reader->context, points * (sizeof(double) + sizeof(unsigned)),
                                      "the sea floor");
    for (size_t i = 0; status == STERICOL_OK && !grid->curvilinear && i < source->grid.rows; i++)
        gathering.row_of[i] = cell_of(grid->latitude, grid->rows, source->grid.latitude[i], 0.0);
    for (size_t i = 0; status == STERICOL_OK && !grid->curvilinear && i < source->grid.columns; i++)
        gathering.column_of[i] = cell_of(grid->longitude, grid->columns, source->grid.longitude[i], 360.0);
    if (status == STERICOL_OK && !grid->curvilinear)
        status = gather(reader, source, grid, &gathering);
    else if (status == STERICOL_OK) { /* only to learn which way the values count */
        const size_t middle = source->grid.rows / 2;
        const size_t rows = source->grid.rows - middle < STRIP ? source->grid.rows - middle : STRIP;
        status = stericol_cf_field_read(reader->context, source->field, 0, 0, 1, middle, rows,
                                        gathering.strip, NULL);
        if (status == STERICOL_OK)
            status = find_sense(reader, source, gathering.strip, rows * source->grid.columns);
    }
    for (size_t i = 0; i < points && status == STERICOL_OK; i++) {
        const double latitude = grid->curvilinear ? grid->latitude[i] : grid->latitude[i / grid->columns];
        const double longitude = grid->curvilinear ? grid->longitude[i] : grid->longitude[i % grid->columns];
        if (gathering.count[i])
            depth[i] = gathering.sum[i] / gathering.count[i];
        else
            status = point_value(reader, source, latitude, longitude, gathering.strip, &depth[i]);
    }
    gathering_free(&gathering);
    return status;
}

static stericol_status read(const stericol_input_reader *reader, floor_source *source,
                            const stericol_grid *grid, double *depth)
{
    stericol_status status = open_source(reader, source);
    if (status != STERICOL_OK)
        return status;
    if (same_plane(&source->grid, grid))
        return read_same(reader, source, depth);
    if (source->grid.curvilinear)
        return stericol_input_refuse(reader, source->variable->name,
                                     "give it on the grid of the field or on a regular one",
                                     "its curvilinear grid is not that of the field");
    stericol_input_say(reader, STERICOL_NOTE, source->variable->name,
                       "sea floor on another grid (%zu x %zu): mean of the sea cells whose centres lie in a "
                       "cell, else the nearest",
                       source->grid.rows, source->grid.columns);
    return resample(reader, source, grid, depth);
}

stericol_status stericol_input_bathymetry(stericol_context *context, const stericol_cf_units *units,
                                          const char *path, const stericol_grid *grid, double **depth)
{
    floor_source source = {0};
    stericol_input_reader reader = {.context = context, .units = units};
    *depth = stericol_new_array(grid->rows * grid->columns, sizeof(double));
    if (!*depth)
        return stericol_fail_memory(context, grid->rows * grid->columns * sizeof(double), "the sea floor");
    stericol_status status = stericol_cf_open(context, path, &reader.file);
    if (status == STERICOL_OK)
        status = read(&reader, &source, grid, *depth);
    stericol_cf_field_close(source.field);
    stericol_cf_close(reader.file);
    stericol_input_grid_clear(&source.grid);
    if (status != STERICOL_OK) {
        free(*depth);
        *depth = NULL;
    }
    return status;
}
