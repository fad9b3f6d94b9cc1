/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Latitudes and longitudes, in the file's order.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Beyond the poles by more than the rounding of a packed or float coordinate. */
static const double most_latitude = 90.001, most_longitude = 720.0;
static const double bounds_tolerance = 1e-3;

typedef struct coordinate {
    const stericol_cf_variable *variable;
    const char *name; /* "latitude" */
    bool latitude;
    size_t count;
    double *values;
    double scale; /* into degrees */
} coordinate;

/* The reader with the file in which the positions stand. */
static stericol_input_reader of_positions(const stericol_input_reader *reader,
                                          const stericol_input_layout *layout)
{
    stericol_input_reader there = *reader;
    there.file = layout->position_file;
    return there;
}

static stericol_status scale_of(const stericol_input_reader *reader, coordinate *line)
{
    const char *unit = stericol_cf_text_of(line->variable, "units");
    double offset = 0.0;
    line->scale = 1.0;
    if (!unit || !unit[strspn(unit, " ")])
        stericol_input_say(reader, STERICOL_NOTE, line->variable->name, "no units; taken as %s in degrees",
                           line->name);
    else if (stericol_cf_units_convert(reader->units, unit, line->latitude ? "degrees_north" : "degrees_east",
                                       &line->scale, &offset) ||
             stericol_cf_units_convert(reader->units, unit, "degree", &line->scale, &offset))
        return STERICOL_OK;
    else
        return stericol_input_refuse(reader, line->variable->name,
                                     "correct the units attribute, or give another file with --coordinates",
                                     "the unit \"%s\" is no angle, so it is no %s", unit, line->name);
    return STERICOL_OK;
}

static stericol_status check_values(const stericol_input_reader *reader, const coordinate *line)
{
    const double most = line->latitude ? most_latitude : most_longitude;
    for (size_t i = 0; i < line->count; i++) {
        line->values[i] *= line->scale;
        if (isnan(line->values[i]))
            return stericol_input_refuse(reader, line->variable->name,
                                         "give a file with all positions with --coordinates",
                                         "%s number %zu of %zu is missing", line->name, i + 1, line->count);
        if (fabs(line->values[i]) > most)
            return stericol_input_refuse(reader, line->variable->name, "correct the values",
                                         "%s number %zu is %.6g, outside -%.0f..%.0f degrees", line->name,
                                         i + 1, line->values[i], most, most);
    }
    return STERICOL_OK;
}

/* A branch cut inside the axis is not a disorder: the values after it are moved by a turn. */
static void unwrap(const stericol_input_reader *reader, const coordinate *line)
{
    double shift = 0.0, last = line->values[0];
    for (size_t i = 1; i < line->count; i++) {
        const double raw = line->values[i];
        if (raw - last > 180.0)
            shift -= 360.0;
        else if (raw - last < -180.0)
            shift += 360.0;
        last = raw;
        line->values[i] = raw + shift;
    }
    if (shift < 0.0 || shift > 0.0)
        stericol_input_say(
            reader, STERICOL_NOTE, line->variable->name,
            "the longitudes change their branch within the axis; moved by 360 degrees so that they run on");
}

static stericol_status check_order(const stericol_input_reader *reader, const coordinate *line)
{
    for (size_t i = 1; i < line->count; i++) {
        const double step = line->values[i] - line->values[i - 1];
        const double first = line->values[1] - line->values[0];
        if (fabs(step) > 0.0 && (step > 0.0) == (first > 0.0))
            continue;
        return stericol_input_refuse(reader, line->variable->name, "correct the axis",
                                     fabs(step) > 0.0 ? "%s number %zu (%.6g) breaks the order of the axis"
                                                      : "%s number %zu (%.6g) stands there twice",
                                     line->name, i + 1, line->values[i]);
    }
    return STERICOL_OK;
}

static stericol_status read_all(const stericol_input_reader *reader, coordinate *line)
{
    size_t count;
    stericol_status status = stericol_cf_read_all(reader->context, reader->file, line->variable, line->count,
                                                  &line->values, &count);
    if (status == STERICOL_OK && count != line->count)
        return stericol_input_refuse(reader, line->variable->name, "correct the file",
                                     "%zu values where %zu are needed", count, line->count);
    if (status == STERICOL_OK)
        status = scale_of(reader, line);
    if (status == STERICOL_OK)
        status = check_values(reader, line);
    return status;
}

static void transpose(double **values, size_t rows, size_t columns, size_t inner, stericol_status *status)
{
    double *turned = stericol_new_array(rows * columns * inner, sizeof(double));
    if (!turned) {
        *status = STERICOL_MEMORY;
        return;
    }
    for (size_t row = 0; row < rows; row++)
        for (size_t column = 0; column < columns; column++)
            memcpy(turned + (row * columns + column) * inner, *values + (column * rows + row) * inner,
                   inner * sizeof(double));
    free(*values);
    *values = turned;
}

/* Whether the limits enclose their own coordinate; a curvilinear cell only in the mean. */
static bool enclosed(const double *bounds, size_t corners, double centre)
{
    double low = INFINITY, high = -INFINITY;
    for (size_t i = 0; i < corners; i++) {
        low = bounds[i] < low ? bounds[i] : low;
        high = bounds[i] > high ? bounds[i] : high;
    }
    return low <= centre + bounds_tolerance && high >= centre - bounds_tolerance && high - low > 0.0;
}

static bool bounds_are_sane(const coordinate *line, double *bounds, size_t corners)
{
    for (size_t i = 0; i < line->count; i++) {
        double *cell = bounds + i * corners;
        for (size_t j = 0; j < corners; j++) {
            cell[j] *= line->scale;
            if (isnan(cell[j]))
                return false;
            if (!line->latitude) /* on the branch of its centre */
                cell[j] = line->values[i] + remainder(cell[j] - line->values[i], 360.0);
        }
        if (corners == 2 && !enclosed(cell, corners, line->values[i]))
            return false;
    }
    return true;
}

static stericol_status read_bounds(const stericol_input_reader *reader, const coordinate *line,
                                   size_t *corners, double **bounds)
{
    const char *name = stericol_cf_text_of(line->variable, "bounds");
    const stericol_cf_variable *found = name ? stericol_cf_find(reader->file, name, line->variable) : NULL;
    size_t count = 0, most = 0;
    *bounds = NULL;
    if (!name)
        return STERICOL_OK;
    if (!found) {
        stericol_input_say(reader, STERICOL_NOTE, line->variable->name,
                           "its bounds \"%s\" are not in the file", name);
        return STERICOL_OK;
    }
    const bool shaped = found->rank == line->variable->rank + 1;
    *corners = shaped ? stericol_cf_dimension_at(reader->file, found->dimension[found->rank - 1])->length : 0;
    const bool fits = shaped && *corners >= 2 && *corners <= 16 &&
                      (line->variable->rank == 2 || *corners == 2) &&
                      stericol_multiply_sizes(line->count, *corners, &most) &&
                      stericol_cf_value_count(reader->file, found, &count) && count == most;
    if (!fits) {
        stericol_input_say(reader, STERICOL_WARNING, found->name, "bounds of the wrong shape are left aside");
        return STERICOL_OK;
    }
    return stericol_cf_read_all(reader->context, reader->file, found, most, bounds, &count);
}

static stericol_status read_both_bounds(const stericol_input_reader *reader,
                                        const stericol_input_layout *layout, const coordinate lines[2],
                                        stericol_grid *grid)
{
    double *bounds[2] = {NULL, NULL};
    size_t corners[2] = {2, 2};
    stericol_status status = STERICOL_OK;
    for (int i = 0; i < 2 && status == STERICOL_OK; i++)
        status = read_bounds(reader, &lines[i], &corners[i], &bounds[i]);
    for (int i = 0; i < 2 && status == STERICOL_OK; i++) {
        if (bounds[i] && layout->curvilinear && layout->transposed)
            transpose(&bounds[i], grid->rows, grid->columns, corners[i], &status);
        if (status == STERICOL_OK && bounds[i] && !bounds_are_sane(&lines[i], bounds[i], corners[i])) {
            stericol_input_say(reader, STERICOL_WARNING, lines[i].variable->name,
                               "its bounds do not enclose it, or are missing in part; they are left aside");
            free(bounds[i]);
            bounds[i] = NULL;
        }
    }
    if (layout->curvilinear && (!bounds[0] || !bounds[1] || corners[0] != corners[1] || corners[0] < 3)) {
        free(bounds[0]);
        free(bounds[1]);
        bounds[0] = bounds[1] = NULL;
    }
    grid->latitude_bounds = bounds[0];
    grid->longitude_bounds = bounds[1];
    grid->corners = layout->curvilinear ? corners[0] : 2;
    return status;
}

/* The sphere of the grid mapping, where there is one. */
static void read_radius(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                        stericol_grid *grid)
{
    const char *name = stericol_cf_text_of(variable, "grid_mapping");
    const stericol_cf_variable *mapping = name ? stericol_cf_find(reader->file, name, variable) : NULL;
    const stericol_cf_attribute *radius = mapping ? stericol_cf_attribute_of(mapping, "earth_radius") : NULL;
    if (!radius || radius->count != 1)
        return;
    if (radius->numbers[0] > 6.3e6 && radius->numbers[0] < 6.4e6)
        grid->radius = radius->numbers[0];
    else
        stericol_input_say(reader, STERICOL_WARNING, mapping->name,
                           "earth_radius %.6g m is not the Earth's; left aside", radius->numbers[0]);
}

stericol_status stericol_input_read_horizontal(const stericol_input_reader *reader,
                                               const stericol_input_layout *layout, stericol_grid *grid)
{
    const stericol_input_reader there = of_positions(reader, layout);
    size_t points;
    stericol_status status = STERICOL_OK;
    if (!stericol_multiply_sizes(layout->rows, layout->columns, &points))
        return stericol_fail_memory(reader->context, 0, "the grid");
    grid->rows = layout->rows;
    grid->columns = layout->columns;
    grid->curvilinear = layout->curvilinear;
    coordinate lines[2] = {
        {layout->latitude, "latitude", true, layout->curvilinear ? points : layout->rows, NULL, 1.0},
        {layout->longitude, "longitude", false, layout->curvilinear ? points : layout->columns, NULL, 1.0}};
    for (int i = 0; i < 2 && status == STERICOL_OK; i++) {
        status = read_all(&there, &lines[i]);
        if (status == STERICOL_OK && layout->curvilinear && layout->transposed)
            transpose(&lines[i].values, grid->rows, grid->columns, 1, &status);
        if (status == STERICOL_OK && !layout->curvilinear) {
            if (i == 1)
                unwrap(&there, &lines[i]);
            status = check_order(&there, &lines[i]);
        }
    }
    grid->latitude = lines[0].values;
    grid->longitude = lines[1].values;
    if (status == STERICOL_OK)
        status = read_both_bounds(&there, layout, lines, grid);
    if (status != STERICOL_OK)
        return status == STERICOL_MEMORY ? stericol_fail_memory(reader->context, 0, "the grid") : status;
    if (layout->curvilinear || layout->axes.row != STERICOL_CF_NO_AXIS)
        grid->latitude_name = stericol_copy_string(layout->latitude->name);
    if (layout->curvilinear || layout->axes.column != STERICOL_CF_NO_AXIS)
        grid->longitude_name = stericol_copy_string(layout->longitude->name);
    return STERICOL_OK;
}

stericol_status stericol_input_read_cell_measures(const stericol_input_reader *reader,
                                                  const stericol_cf_variable *variable,
                                                  const stericol_input_layout *layout, stericol_grid *grid)
{
    int row, column;
    (void)layout;
    read_radius(reader, variable, grid);
    char *name = stericol_input_term(stericol_cf_text_of(variable, "cell_measures"), "area");
    const stericol_cf_variable *area = name ? stericol_cf_find(reader->file, name, variable) : NULL;
    double scale = 1.0, offset = 0.0;
    stericol_status status = STERICOL_OK;
    if (name && !area)
        stericol_input_say(
            reader, STERICOL_NOTE, variable->name,
            "its cell areas \"%s\" are in another file (--cell-area); areas are computed from the positions",
            name);
    free(name);
    if (!area)
        return STERICOL_OK;
    if (!stericol_cf_units_convert(reader->units, stericol_cf_text_of(area, "units"), "m2", &scale,
                                   &offset)) {
        stericol_input_say(
            reader, STERICOL_WARNING, area->name,
            "cell areas without a unit of area are left aside; areas are computed from the positions");
        return STERICOL_OK;
    }
    status = stericol_input_plane_axes(reader, area, grid, &row, &column);
    if (status != STERICOL_OK)
        return status;
    const size_t points = grid->rows * grid->columns;
    grid->cell_area = stericol_new_doubles(points);
    grid->cell_area_source = stericol_copy_string(area->name);
    if (!grid->cell_area || !grid->cell_area_source)
        return stericol_fail_memory(reader->context, points * sizeof(double), "the cell areas");
    status = stericol_input_read_plane(reader->context, reader->file, area, row, column, grid->cell_area);
    for (size_t i = 0; i < points && status == STERICOL_OK; i++)
        grid->cell_area[i] *= scale;
    return status;
}
