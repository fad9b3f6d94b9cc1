/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "program/make_grid.h"

#include "support/testing.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { T, Z, Y, X, M, AXES };

static const char letters[] = "tzyxm", usual_order[] = "tzyx";

/* What is being written. */
typedef struct writing {
    const small_grid *grid;
    int file;
    int dimension[AXES];
    bool there[AXES];
    size_t count[AXES];
} writing;

static void check(int code, const char *what, int line)
{
    if (code == NC_NOERR)
        return;
    print_error("%s: %s\n", what, nc_strerror(code));
    _fail(__FILE__, line);
}

#define must(call) check((call), #call, __LINE__)

double small_grid_temperature(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return 12.0 - 9.0 * (double)k / (double)grid->levels + 0.3 * (double)j + 0.1 * (double)i +
           0.02 * (double)t + grid->warmer;
}

double small_grid_salinity(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return 34.5 + 0.4 * (double)k / (double)grid->levels - 0.02 * (double)j + 0.01 * (double)i +
           0.001 * (double)t + grid->saltier;
}

double small_grid_missing(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    (void)grid, (void)t, (void)k, (void)j, (void)i;
    return NAN;
}

double small_grid_nothing(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    (void)grid, (void)t, (void)k, (void)j, (void)i;
    return 0.0;
}

small_grid small_grid_plain(void)
{
    return (small_grid){
        .rows = 4,
        .columns = 5,
        .levels = 6,
        .order = usual_order,
        .depth_step = 100.0,
        .time_units = "days since 2001-01-01",
        .depth_name = "depth",
        .temperature = {"temperature", "sea_water_conservative_temperature", "degC", NC_FLOAT, 1.0, 0.0,
                        -999.0, small_grid_temperature},
        .salinity = {"salinity", "sea_water_absolute_salinity", "g kg-1", NC_FLOAT, 1.0, 0.0, -999.0,
                     small_grid_salinity},
    };
}

/* ---- header ---- */

static void put_text(int file, int variable, const char *name, const char *text)
{
    if (text != NULL)
        must(nc_put_att_text(file, variable, name, strlen(text), text));
}

static void define_axis(writing *of, int axis, const char *name, const char *standard_name, const char *units)
{
    int variable;

    must(nc_def_dim(of->file, name, axis == T && of->grid->unlimited ? NC_UNLIMITED : of->count[axis],
                    &of->dimension[axis]));
    if (of->grid->bare_plane && (axis == Y || axis == X))
        return;
    must(nc_def_var(of->file, name, NC_DOUBLE, 1, &of->dimension[axis], &variable));
    put_text(of->file, variable, "standard_name", standard_name);
    put_text(of->file, variable, "units", units);
    if (axis == Z)
        put_text(of->file, variable, "positive", "down");
}

static void define_bounds(writing *of)
{
    int two, variable, depth, dimensions[2];

    if (!of->grid->depth_bounds)
        return;
    must(nc_def_dim(of->file, "two", 2, &two));
    dimensions[0] = of->dimension[Z];
    dimensions[1] = two;
    must(nc_def_var(of->file, "depth_limits", NC_DOUBLE, 2, dimensions, &variable));
    must(nc_inq_varid(of->file, of->grid->depth_name, &depth));
    put_text(of->file, depth, "bounds", "depth_limits");
}

/* The axes of a field, slowest first; their number. */
static size_t axes_of(const writing *of, int axes[AXES])
{
    size_t rank = 0;

    if (of->there[M])
        axes[rank++] = M;
    for (const char *c = of->grid->order; *c != '\0'; c++) {
        const int axis = (int)(strchr(letters, *c) - letters);

        if (of->there[axis])
            axes[rank++] = axis;
    }
    return rank;
}

static void define_field(writing *of, const small_grid_field *field)
{
    int dimensions[AXES], axes[AXES], rank, variable;

    if (field->name == NULL)
        return;
    rank = (int)axes_of(of, axes);
    for (int d = 0; d < rank; d++)
        dimensions[d] = of->dimension[axes[d]];
    must(nc_def_var(of->file, field->name, field->type, rank, dimensions, &variable));
    put_text(of->file, variable, "standard_name", field->standard_name);
    put_text(of->file, variable, "units", field->units);
    if (!isnan(field->fill))
        must(nc_put_att_double(of->file, variable, "_FillValue", field->type, 1, &field->fill));
    if (field->scale < 1.0 || field->scale > 1.0 || field->offset < 0.0 || field->offset > 0.0) {
        must(nc_put_att_double(of->file, variable, "scale_factor", NC_DOUBLE, 1, &field->scale));
        must(nc_put_att_double(of->file, variable, "add_offset", NC_DOUBLE, 1, &field->offset));
    }
    if ((of->grid->mode & NC_NETCDF4) != 0 && of->grid->deflate > 0)
        must(nc_def_var_deflate(of->file, variable, 1, 1, of->grid->deflate));
}

static void make_changes(const writing *of)
{
    for (size_t i = 0; i < SMALL_GRID_CHANGES && of->grid->changes[i].variable != NULL; i++) {
        const small_grid_change *change = &of->grid->changes[i];
        int variable = NC_GLOBAL;

        if (change->variable[0] != '\0')
            must(nc_inq_varid(of->file, change->variable, &variable));
        if (change->count > 0)
            must(nc_put_att_double(of->file, variable, change->attribute, change->type, change->count,
                                   change->numbers));
        else if (change->text != NULL)
            put_text(of->file, variable, change->attribute, change->text);
        else
            must(nc_del_att(of->file, variable, change->attribute));
    }
}

/* ---- values ---- */

static double axis_value(const small_grid *grid, int axis, size_t at)
{
    const double *given[AXES] = {grid->time, grid->depth, grid->latitude, grid->longitude, NULL};
    const double first[AXES] = {15.0, 5.0, -50.0, 10.0, 0.0},
                 step[AXES] = {30.0, grid->depth_step, 2.0, 2.0, 0.0};

    return given[axis] != NULL ? given[axis][at] : first[axis] + step[axis] * (double)at;
}

static void write_axis(const writing *of, int axis, const char *name)
{
    int variable;

    if (!of->there[axis] || (of->grid->bare_plane && (axis == Y || axis == X)))
        return;
    must(nc_inq_varid(of->file, name, &variable));
    for (size_t at = 0; at < of->count[axis]; at++) {
        const double value = axis_value(of->grid, axis, at);

        must(nc_put_var1_double(of->file, variable, &at, &value));
    }
}

static void write_bounds(const writing *of)
{
    int variable;

    if (!of->grid->depth_bounds)
        return;
    must(nc_inq_varid(of->file, "depth_limits", &variable));
    for (size_t k = 0; k < of->count[Z]; k++)
        for (size_t end = 0; end < 2; end++) {
            const size_t place[2] = {k, end}, other = end == 0 ? k - 1 : k + 1;
            double value = axis_value(of->grid, Z, k);

            if (k + end > 0 && other < of->count[Z])
                value = 0.5 * (value + axis_value(of->grid, Z, other));
            else
                value = end == 0 ? 0.0 : value + 0.5 * of->grid->depth_step;
            must(nc_put_var1_double(of->file, variable, place, &value));
        }
}

static double stored(const small_grid_field *field, double value)
{
    if (isnan(value))
        return isnan(field->fill) ? value : field->fill;
    value = (value - field->offset) / field->scale;
    return field->type == NC_FLOAT || field->type == NC_DOUBLE ? value : round(value);
}

static void write_field(const writing *of, const small_grid_field *field)
{
    size_t at[AXES] = {0}, length[AXES], stride[AXES], points = 1, rank;
    int axes[AXES], variable;
    double *values;

    if (field->name == NULL)
        return;
    rank = axes_of(of, axes);
    for (size_t d = rank; d-- > 0;) {
        length[d] = of->count[axes[d]];
        stride[axes[d]] = points;
        points *= length[d];
    }
    if (points == 0)
        return;
    values = malloc(points * sizeof *values);
    assert_non_null(values);
    for (size_t p = 0; p < points; p++) {
        for (int axis = 0; axis < AXES; axis++)
            at[axis] = of->there[axis] ? p / stride[axis] % of->count[axis] : 0;
        values[p] = field->value(of->grid, at[T], at[Z], at[Y], at[X]);
        if (of->there[M] && field == &of->grid->temperature)
            values[p] += 0.7 * (double)at[M];
        values[p] = stored(field, values[p]);
    }
    must(nc_inq_varid(of->file, field->name, &variable));
    if (field->type != NC_CHAR) { /* characters hold no numbers */
        const int code = nc_put_vara_double(of->file, variable, (const size_t[AXES]){0}, length, values);

        must(code == NC_ERANGE ? NC_NOERR : code); /* some cases store what a float cannot hold: infinity */
    }
    free(values);
}

void small_grid_write(const small_grid *grid, const char *folder, const char *name)
{
    writing of = {.grid = grid,
                  .there = {grid->has_time || grid->times > 0, true, true, true, grid->members > 0},
                  .count = {grid->times, grid->levels, grid->rows, grid->columns, grid->members}};
    char path[4096];

    assert_true((size_t)snprintf(path, sizeof path, "%s/%s", folder, name) < sizeof path);
    must(nc_create(path, grid->mode | NC_CLOBBER, &of.file));
    if (of.there[T])
        define_axis(&of, T, "time", "time", grid->time_units);
    define_axis(&of, Z, grid->depth_name, "depth", "m");
    define_axis(&of, Y, "latitude", "latitude", "degrees_north");
    define_axis(&of, X, "longitude", "longitude", "degrees_east");
    if (of.there[M])
        must(nc_def_dim(of.file, "member", grid->members, &of.dimension[M]));
    define_bounds(&of);
    define_field(&of, &grid->temperature);
    define_field(&of, &grid->salinity);
    make_changes(&of);
    must(nc_enddef(of.file));
    write_axis(&of, T, "time");
    write_axis(&of, Z, grid->depth_name);
    write_axis(&of, Y, "latitude");
    write_axis(&of, X, "longitude");
    write_bounds(&of);
    write_field(&of, &grid->temperature);
    write_field(&of, &grid->salinity);
    must(nc_close(of.file));
}

void small_grid_write_plane(const small_grid *grid, const small_grid_plane *plane, const char *folder,
                            const char *name)
{
    writing of = {.grid = grid, .there = {false, plane->levels, true, true, false}};
    char path[4096];
    int variable;

    memcpy(of.count, (const size_t[]){0, grid->levels, grid->rows, grid->columns, 0}, sizeof of.count);
    assert_true((size_t)snprintf(path, sizeof path, "%s/%s", folder, name) < sizeof path);
    must(nc_create(path, NC_CLOBBER, &of.file));
    if (plane->levels)
        define_axis(&of, Z, grid->depth_name, "depth", "m");
    define_axis(&of, Y, "latitude", "latitude", "degrees_north");
    define_axis(&of, X, "longitude", "longitude", "degrees_east");
    must(nc_def_var(of.file, plane->name, plane->type, plane->levels ? 3 : 2,
                    of.dimension + (plane->levels ? Z : Y), &variable));
    for (size_t i = 0; plane->attributes[i] != NULL; i += 2)
        put_text(of.file, variable, plane->attributes[i], plane->attributes[i + 1]);
    if (plane->flags > 0) {
        const signed char flags[] = {1, 2, 3, 4};

        assert_true(plane->flags <= sizeof flags);
        must(nc_put_att_schar(of.file, variable, "flag_values", NC_BYTE, plane->flags, flags));
    }
    must(nc_enddef(of.file));
    write_axis(&of, Z, grid->depth_name);
    write_axis(&of, Y, "latitude");
    write_axis(&of, X, "longitude");
    for (size_t k = 0; k < (plane->levels ? grid->levels : 1); k++)
        for (size_t j = 0; j < grid->rows; j++)
            for (size_t i = 0; i < grid->columns; i++) {
                const size_t at[] = {k, j, i};
                double value = plane->plain + plane->slope * (double)(j + i);

                value = plane->most > 0.0 ? fmin(value, plane->most) : value;

                must(nc_put_var1_double(of.file, variable, at + !plane->levels, &value));
            }
    must(nc_close(of.file));
}
