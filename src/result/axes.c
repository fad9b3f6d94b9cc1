/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "result/axes.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* One coordinate variable or its bounds. */
typedef struct coordinate {
    const char *name, *long_name, *standard_name, *unit, *axis, *bounds, *positive;
    size_t rank;
    size_t dimension[3];
    bool fill;
} coordinate;

static stericol_status label(stericol_context *context, stericol_cf_writer *writer, size_t variable,
                             const char *name, const char *text)
{
    return text == NULL ? STERICOL_OK : stericol_cf_write_text(context, writer, variable, name, text);
}

static stericol_status define(stericol_context *context, stericol_cf_writer *writer, const coordinate *given,
                              size_t *variable)
{
    const char *const pairs[][2] = {{"long_name", given->long_name}, {"standard_name", given->standard_name},
                                    {"units", given->unit},          {"axis", given->axis},
                                    {"positive", given->positive},   {"bounds", given->bounds}};
    stericol_status status =
        stericol_cf_write_variable(context, writer, given->name, STERICOL_CF_DOUBLE, given->rank,
                                   given->dimension, given->rank > 1 && given->fill, given->fill, variable);

    for (size_t i = 0; i < sizeof pairs / sizeof pairs[0] && status == STERICOL_OK; i++)
        status = label(context, writer, *variable, pairs[i][0], pairs[i][1]);
    return status;
}

/* ---- regular grids ---- */

static bool is_monotonic(const double *values, size_t count)
{
    bool up = true, down = true;

    for (size_t i = 1; i < count; i++) {
        up = up && values[i] > values[i - 1];
        down = down && values[i] < values[i - 1];
    }
    return up || down;
}

/* Whole circles onto the branch nearest to `near`. */
static double onto_branch(double longitude, double near)
{
    return longitude - 360.0 * round((longitude - near) / 360.0);
}

/* Copies; a branch that breaks (0 .. 180, -180 .. 0) is carried on. */
static void carry_on(const double *longitude, const double *bounds, size_t count, double *carried,
                     double *carried_bounds)
{
    memcpy(carried, longitude, count * sizeof *carried);
    if (bounds != NULL)
        memcpy(carried_bounds, bounds, 2 * count * sizeof *bounds);
    if (is_monotonic(longitude, count))
        return;
    for (size_t i = 1; i < count; i++)
        carried[i] = onto_branch(longitude[i], carried[i - 1]);
    for (size_t i = 0; bounds != NULL && i < 2 * count; i++)
        carried_bounds[i] = onto_branch(bounds[i], carried[i / 2]);
}

/* A coordinate variable on its own dimension, with its bounds where there are any. */
static stericol_status write_straight(stericol_context *context, stericol_cf_writer *writer,
                                      const coordinate *given, size_t bounds_dimension, size_t count,
                                      const double *values, const double *bounds)
{
    const size_t start[2] = {0, 0}, extent[2] = {count, 2};
    coordinate edges = {
        .name = given->bounds, .rank = 2, .dimension = {given->dimension[0], bounds_dimension}};
    coordinate middle = *given;
    stericol_status status;
    size_t variable = 0;

    if (bounds == NULL)
        middle.bounds = NULL;
    status = define(context, writer, &middle, &variable);
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, variable, start, extent, values);
    if (status == STERICOL_OK && bounds != NULL)
        status = define(context, writer, &edges, &variable);
    if (status == STERICOL_OK && bounds != NULL)
        status = stericol_cf_write_values(context, writer, variable, start, extent, bounds);
    return status;
}

/* ---- curvilinear grids ---- */

static stericol_status write_curved(stericol_context *context, stericol_cf_writer *writer,
                                    const coordinate *given, size_t corner_dimension,
                                    const stericol_change_layout *layout, const double *values,
                                    const double *bounds)
{
    const size_t start[3] = {0, 0, 0}, extent[3] = {layout->rows, layout->columns, layout->corners};
    coordinate edges = {.name = given->bounds,
                        .rank = 3,
                        .dimension = {given->dimension[0], given->dimension[1], corner_dimension},
                        .fill = true};
    coordinate middle = *given;
    stericol_status status;
    size_t variable = 0;

    if (bounds == NULL)
        middle.bounds = NULL;
    middle.axis = NULL; /* the axes of these grids are x and y */
    middle.rank = 2;
    middle.fill = true; /* cells without a position are met on land */
    status = define(context, writer, &middle, &variable);
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, variable, start, extent, values);
    if (status == STERICOL_OK && bounds != NULL)
        status = define(context, writer, &edges, &variable);
    if (status == STERICOL_OK && bounds != NULL)
        status = stericol_cf_write_values(context, writer, variable, start, extent, bounds);
    return status;
}

/* ---- both ---- */

/* Least and greatest of what is there. */
static void extent_of(const double *values, size_t count, double *least, double *greatest)
{
    *least = HUGE_VAL;
    *greatest = -HUGE_VAL;
    for (size_t i = 0; i < count; i++) {
        *least = fmin(*least, values[i]);
        *greatest = fmax(*greatest, values[i]);
    }
    if (*least > *greatest)
        *least = *greatest = (double)NAN;
}

/* Whether the layers, sorted, follow each other without gap or overlap: each starts where exactly one other
 * ends. */
static bool are_contiguous(size_t layers, const double (*bounds)[2])
{
    double top = HUGE_VAL, reached;
    size_t used = 0;

    for (size_t i = 0; i < layers; i++)
        top = fmin(top, bounds[i][0]);
    reached = top;
    while (used < layers) {
        size_t next = layers;

        for (size_t i = 0; i < layers; i++)
            if (!(bounds[i][0] < reached) && !(bounds[i][0] > reached)) {
                if (next < layers)
                    return false;
                next = i;
            }
        if (next == layers || !(bounds[next][1] > reached))
            return false;
        reached = bounds[next][1];
        used++;
    }
    return true;
}

static stericol_status define_dimensions(stericol_context *context, stericol_cf_writer *writer,
                                         const stericol_change_layout *layout, stericol_result_axes *axes,
                                         size_t *bounds, size_t *corners)
{
    stericol_status status = stericol_cf_write_dimension(context, writer, layout->curvilinear ? "y" : "lat",
                                                         layout->rows, &axes->row);

    if (status == STERICOL_OK)
        status = stericol_cf_write_dimension(context, writer, layout->curvilinear ? "x" : "lon",
                                             layout->columns, &axes->column);
    if (status == STERICOL_OK)
        status = stericol_cf_write_dimension(context, writer, "layer", layout->layers, &axes->layer);
    if (status == STERICOL_OK)
        status = stericol_cf_write_dimension(context, writer, "bounds", 2, bounds);
    if (status == STERICOL_OK && layout->curvilinear &&
        (layout->latitude_bounds != NULL || layout->longitude_bounds != NULL))
        status = stericol_cf_write_dimension(context, writer, "corner", layout->corners, corners);
    return status;
}

static stericol_status define_depths(stericol_context *context, stericol_cf_writer *writer, size_t bounds,
                                     stericol_result_axes *axes)
{
    const coordinate given[4] = {
        {.name = "layer_depth",
         .long_name = "middle of the layer",
         .standard_name = "depth",
         .unit = "m",
         .positive = "down",
         .bounds = "layer_bounds",
         .rank = 1,
         .dimension = {axes->layer}},
        {.name = "layer_bounds",
         .long_name = "upper and lower limit of the layer",
         .unit = "m",
         .rank = 2,
         .dimension = {axes->layer, bounds}},
        {.name = "column_depth",
         .long_name = "middle of all layers together",
         .standard_name = "depth",
         .unit = "m",
         .positive = "down",
         .bounds = "column_bounds"},
        {.name = "column_bounds",
         .long_name = "upper and lower limit of all layers together",
         .unit = "m",
         .rank = 1,
         .dimension = {bounds}},
    };
    size_t *const variables[4] = {&axes->layer_depth, &axes->layer_bounds, &axes->column_depth,
                                  &axes->column_bounds};
    stericol_status status = STERICOL_OK;

    for (int i = 0; i < (axes->contiguous ? 4 : 2) && status == STERICOL_OK; i++)
        status = define(context, writer, &given[i], variables[i]);
    return status;
}

static stericol_status write_regular(stericol_context *context, stericol_cf_writer *writer,
                                     const stericol_change_layout *layout, stericol_result_axes *axes,
                                     size_t bounds, const coordinate *latitude, const coordinate *longitude)
{
    double *carried = stericol_new_array(layout->columns, 3 * sizeof *carried), *edges;
    stericol_status status;

    if (carried == NULL)
        return stericol_fail_memory(context, 0, "the coordinates");
    edges = layout->longitude_bounds == NULL ? NULL : carried + layout->columns;
    carry_on(layout->longitude, layout->longitude_bounds, layout->columns, carried, edges);
    if (edges != NULL)
        extent_of(edges, 2 * layout->columns, &axes->west, &axes->east);
    else
        extent_of(carried, layout->columns, &axes->west, &axes->east);
    if (layout->latitude_bounds != NULL)
        extent_of(layout->latitude_bounds, 2 * layout->rows, &axes->south, &axes->north);
    else
        extent_of(layout->latitude, layout->rows, &axes->south, &axes->north);
    status = write_straight(context, writer, latitude, bounds, layout->rows, layout->latitude,
                            layout->latitude_bounds);
    if (status == STERICOL_OK)
        status = write_straight(context, writer, longitude, bounds, layout->columns, carried, edges);
    free(carried);
    return status;
}

static stericol_status write_curvilinear(stericol_context *context, stericol_cf_writer *writer,
                                         const stericol_change_layout *layout, stericol_result_axes *axes,
                                         size_t corners, const coordinate *latitude,
                                         const coordinate *longitude)
{
    const size_t cells = layout->rows * layout->columns; /* fits: the caller holds arrays of that many */
    stericol_status status;

    extent_of(layout->latitude, cells, &axes->south, &axes->north);
    extent_of(layout->longitude, cells, &axes->west, &axes->east);
    status =
        write_curved(context, writer, latitude, corners, layout, layout->latitude, layout->latitude_bounds);
    if (status == STERICOL_OK)
        status = write_curved(context, writer, longitude, corners, layout, layout->longitude,
                              layout->longitude_bounds);
    return status;
}

stericol_status stericol_result_axes_write(stericol_context *context, stericol_cf_writer *writer,
                                           const stericol_change_layout *layout, stericol_result_axes *axes)
{
    size_t bounds = 0, corners = 0;
    stericol_status status;

    axes->rows = layout->rows;
    axes->columns = layout->columns;
    axes->curvilinear = layout->curvilinear;
    axes->contiguous = are_contiguous(layout->layers, layout->layer_bounds);
    status = define_dimensions(context, writer, layout, axes, &bounds, &corners);
    if (status == STERICOL_OK) {
        const coordinate latitude = {.name = "lat",
                                     .long_name = "latitude",
                                     .standard_name = "latitude",
                                     .unit = "degrees_north",
                                     .axis = "Y",
                                     .bounds = "lat_bounds",
                                     .rank = 1,
                                     .dimension = {axes->row, axes->column}};
        const coordinate longitude = {
            .name = "lon",
            .long_name = "longitude",
            .standard_name = "longitude",
            .unit = "degrees_east",
            .axis = "X",
            .bounds = "lon_bounds",
            .rank = 1,
            .dimension = {layout->curvilinear ? axes->row : axes->column, axes->column}};

        status = layout->curvilinear
                     ? write_curvilinear(context, writer, layout, axes, corners, &latitude, &longitude)
                     : write_regular(context, writer, layout, axes, bounds, &latitude, &longitude);
    }
    return status == STERICOL_OK ? define_depths(context, writer, bounds, axes) : status;
}

stericol_status stericol_result_axes_write_depths(stericol_context *context, stericol_cf_writer *writer,
                                                  const stericol_result_axes *axes, size_t layers,
                                                  const double (*bounds)[2])
{
    const size_t start[2] = {0, 0}, extent[2] = {layers, 2}, two = 2;
    double ends[2] = {HUGE_VAL, -HUGE_VAL}, middle;
    stericol_status status = STERICOL_OK;

    for (size_t i = 0; i < layers && status == STERICOL_OK; i++) {
        const size_t one = 1;

        middle = 0.5 * (bounds[i][0] + bounds[i][1]);
        status = stericol_cf_write_values(context, writer, axes->layer_depth, &i, &one, &middle);
        ends[0] = fmin(ends[0], bounds[i][0]);
        ends[1] = fmax(ends[1], bounds[i][1]);
    }
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, axes->layer_bounds, start, extent, bounds[0]);
    if (!axes->contiguous)
        return status;
    middle = 0.5 * (ends[0] + ends[1]);
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, axes->column_depth, NULL, NULL, &middle);
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, axes->column_bounds, start, &two, ends);
    return status;
}
