/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The invented sea of science.h, written in any form. */
#define _XOPEN_SOURCE 700 /* for nftw() */
#include "program/science.h"

#include <ftw.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

enum { T, Z, Y, X, AXES };

static const double MISSING = 1e20; /* too large for a short: there SHORT_MISSING stands */
static const short SHORT_MISSING = -32768;

sea sea_plain(void)
{
    return (sea){.time_units = "days since 2000-01-01",
                 .calendar = "noleap",
                 .depth_units = "m",
                 .temperature_name = "sea_water_conservative_temperature",
                 .salinity_name = "sea_water_absolute_salinity",
                 .salinity_units = "g kg-1"};
}

sea_form form_plain(void)
{
    return (sea_form){.type = NC_DOUBLE, .scale = 1.0, .order = "tzyx", .west_limit = -1e9};
}

static void put_text(int file, int variable, const char *name, const char *text)
{
    if (text != NULL)
        must(nc_put_att_text(file, variable, name, strlen(text), text));
}

static int remove_one(const char *path, const struct stat *about, int kind, struct FTW *where)
{
    (void)about;
    (void)kind;
    (void)where;
    return remove(path);
}

/* ---- axes ---- */

/* The order in which the file has the members of an axis. */
typedef struct arrangement {
    size_t count[AXES];
    size_t *from[AXES];    /* place in the file -> index in the sea */
    double shift[360 * 4]; /* of each longitude, in the file's order */
} arrangement;

static void arrange_longitudes(const sea *of, const sea_form *form, arrangement *how)
{
    size_t count = how->count[X], first = 0;
    double least = HUGE_VAL;

    assert_true(count <= sizeof how->shift / sizeof how->shift[0]);
    memset(how->shift, 0, sizeof how->shift);
    if (form->west_limit < -1e8)
        return;
    for (size_t i = 0; i < count; i++) {
        double centre = of->longitude.centre[i];
        double placed = centre - 360.0 * floor((centre - form->west_limit) / 360.0);

        if (placed < least) {
            least = placed;
            first = i;
        }
    }
    for (size_t i = 0; i < count; i++) {
        size_t index = (first + i) % count;
        double centre = of->longitude.centre[index];

        how->from[X][i] = index;
        how->shift[i] = -360.0 * floor((centre - form->west_limit) / 360.0);
    }
}

static void arrange(const sea *of, const sea_form *form, arrangement *how)
{
    const size_t count[AXES] = {form->time_count > 0 ? form->time_count : of->time.count, of->depth.count,
                                of->latitude.count, of->longitude.count};

    for (int a = 0; a < AXES; a++) {
        how->count[a] = count[a];
        how->from[a] = malloc((count[a] + 1) * sizeof(size_t));
        assert_non_null(how->from[a]);
        for (size_t i = 0; i < count[a]; i++)
            how->from[a][i] = i;
    }
    for (size_t i = 0; i < count[T]; i++)
        how->from[T][i] = form->first_time + i;
    for (size_t i = 0; i < count[Z] && form->levels_up; i++)
        how->from[Z][i] = count[Z] - 1 - i;
    for (size_t i = 0; i < count[Y] && form->rows_down; i++)
        how->from[Y][i] = count[Y] - 1 - i;
    arrange_longitudes(of, form, how);
}

static void arrangement_free(arrangement *how)
{
    for (int a = 0; a < AXES; a++)
        free(how->from[a]);
}

static const char *const axis_names[AXES] = {"time", "depth", "lat", "lon"};

static const sea_axis *axis_of(const sea *of, int a)
{
    return a == T ? &of->time : a == Z ? &of->depth : a == Y ? &of->latitude : &of->longitude;
}

typedef struct definition {
    int dimension[AXES], axis[AXES], bounds[AXES], two;
} definition;

static void define_axes(int file, const sea *of, const arrangement *how, definition *defined)
{
    static const char *const standard[AXES] = {"time", "depth", "latitude", "longitude"};
    const char *const units[AXES] = {of->time_units, of->depth_units, "degrees_north", "degrees_east"};

    must(nc_def_dim(file, "two", 2, &defined->two));
    for (int a = 0; a < AXES; a++) {
        int pair[2];
        char name[32];

        if (how->count[a] == 0)
            continue;
        must(nc_def_dim(file, axis_names[a], how->count[a], &defined->dimension[a]));
        must(nc_def_var(file, axis_names[a], NC_DOUBLE, 1, &defined->dimension[a], &defined->axis[a]));
        put_text(file, defined->axis[a], "units", units[a]);
        if (a != Z || strcmp(of->depth_units, "m") == 0)
            put_text(file, defined->axis[a], "standard_name", standard[a]);
        else
            put_text(file, defined->axis[a], "standard_name", "sea_water_pressure_due_to_sea_water");
        if (a == Z)
            put_text(file, defined->axis[a], "positive", "down");
        if (a == T)
            put_text(file, defined->axis[a], "calendar", of->calendar);
        if (axis_of(of, a)->bounds == NULL)
            continue;
        snprintf(name, sizeof name, "%s_bounds", axis_names[a]);
        put_text(file, defined->axis[a], "bounds", name);
        pair[0] = defined->dimension[a];
        pair[1] = defined->two;
        must(nc_def_var(file, name, NC_DOUBLE, 2, pair, &defined->bounds[a]));
    }
}

static void put_axes(int file, const sea *of, const arrangement *how, const definition *defined)
{
    for (int a = 0; a < AXES; a++) {
        const sea_axis *axis = axis_of(of, a);

        for (size_t i = 0; i < how->count[a]; i++) {
            size_t index = how->from[a][i], place[2] = {i, 0};
            double shift = a == X ? how->shift[i] : 0.0, centre = axis->centre[index] + shift;

            must(nc_put_var1_double(file, defined->axis[a], &i, &centre));
            for (size_t b = 0; b < 2 && axis->bounds != NULL; b++) {
                double bound = axis->bounds[2 * index + b] + shift;

                place[1] = b;
                must(nc_put_var1_double(file, defined->bounds[a], place, &bound));
            }
        }
    }
}

/* ---- fields ---- */

static int axis_of_letter(char letter)
{
    static const char letters[] = "tzyx";
    const char *found = strchr(letters, letter);

    assert_non_null(found);
    return (int)(found - letters);
}

static int define_field(int group, const sea *of, const sea_form *form, const arrangement *how,
                        const definition *defined, sea_quantity quantity)
{
    bool warmth = quantity == SEA_TEMPERATURE;
    int dimension[AXES], variable, rank = 0;
    size_t chunk[AXES];
    float lost = (float)MISSING;

    for (const char *c = form->order; *c != '\0'; c++) {
        int a = axis_of_letter(*c);

        if (how->count[a] == 0)
            continue;
        chunk[rank] = form->chunk[a] < how->count[a] ? form->chunk[a] : how->count[a];
        dimension[rank++] = defined->dimension[a];
    }
    must(nc_def_var(group, warmth ? "temperature" : "salinity", form->type, rank, dimension, &variable));
    put_text(group, variable, "standard_name", warmth ? of->temperature_name : of->salinity_name);
    put_text(group, variable, "units", !warmth ? of->salinity_units : form->kelvin ? "K" : "degC");
    if (form->chunk[X] > 0)
        must(nc_def_var_chunking(group, variable, NC_CHUNKED, chunk));
    if (form->deflate > 0)
        must(nc_def_var_deflate(group, variable, 1, 1, form->deflate));
    if (form->type == NC_SHORT) {
        must(nc_put_att_short(group, variable, "_FillValue", NC_SHORT, 1, &SHORT_MISSING));
        must(nc_put_att_double(group, variable, "scale_factor", NC_DOUBLE, 1, &form->scale));
        must(nc_put_att_double(group, variable, "add_offset", NC_DOUBLE, 1, &form->offset));
    } else if (form->type == NC_FLOAT) {
        must(nc_put_att_float(group, variable, "_FillValue", NC_FLOAT, 1, &lost));
    } else {
        must(nc_put_att_double(group, variable, "_FillValue", NC_DOUBLE, 1, &MISSING));
    }
    return variable;
}

static double stored(const sea *of, const sea_form *form, sea_quantity quantity, const size_t index[AXES])
{
    double value = of->value(of, quantity, index[T], index[Z], index[Y], index[X]);

    if (isnan(value))
        return form->type == NC_SHORT ? SHORT_MISSING : MISSING;
    if (form->kelvin && quantity == SEA_TEMPERATURE)
        value += 273.15;
    return (value - form->offset) / form->scale;
}

static void put_field(int group, int variable, const sea *of, const sea_form *form, const arrangement *how,
                      sea_quantity quantity)
{
    int axis[AXES], rank = 0;
    size_t whole = 1;
    double *values;

    for (const char *c = form->order; *c != '\0'; c++)
        if (how->count[axis_of_letter(*c)] > 0) {
            axis[rank] = axis_of_letter(*c);
            whole *= how->count[axis[rank++]];
        }
    values = malloc((whole + 1) * sizeof(double));
    assert_non_null(values);
    for (size_t n = 0; n < whole; n++) {
        size_t rest = n, index[AXES] = {form->first_time, 0, 0, 0};

        for (int r = rank - 1; r >= 0; r--) {
            index[axis[r]] = how->from[axis[r]][rest % how->count[axis[r]]];
            rest /= how->count[axis[r]];
        }
        values[n] = stored(of, form, quantity, index);
    }
    must(nc_put_var_double(group, variable, values));
    free(values);
}

const char *sea_write(const sea *of, const sea_form *form, const char *name)
{
    static char urls[16][2200];
    static size_t next;
    const char *path = in_folder(name);
    char *url = urls[next++ % 16];
    arrangement how;
    definition defined = {{0}, {0}, {0}, 0};
    int file, group, variable[SEA_QUANTITIES] = {0};
    bool alone = form->only[SEA_TEMPERATURE] || form->only[SEA_SALINITY];

    nftw(path, remove_one, 16, FTW_DEPTH | FTW_PHYS);
    snprintf(url, sizeof urls[0], form->zarr != NULL ? "file://%s#mode=nczarr,%s" : "%s", path, form->zarr);
    arrange(of, form, &how);
    must(nc_create(url, form->mode | NC_CLOBBER, &file));
    put_text(file, NC_GLOBAL, "Conventions", "CF-1.10");
    define_axes(file, of, &how, &defined);
    group = file;
    if (form->group != NULL)
        must(nc_def_grp(file, form->group, &group));
    for (int q = 0; q < SEA_QUANTITIES; q++)
        if (!alone || form->only[q])
            variable[q] = define_field(group, of, form, &how, &defined, (sea_quantity)q);
    must(nc_enddef(file));
    put_axes(file, of, &how, &defined);
    for (int q = 0; q < SEA_QUANTITIES; q++)
        if (!alone || form->only[q])
            put_field(group, variable[q], of, form, &how, (sea_quantity)q);
    must(nc_close(file));
    arrangement_free(&how);
    return url;
}

const char *sea_write_plane(const sea *of, const char *name, const char *variable_name, nc_type type,
                            const double *values, const char *const *attributes)
{
    const char *path = in_folder(name);
    sea_form form = form_plain();
    sea flat = *of;
    arrangement how;
    definition defined = {{0}, {0}, {0}, 0};
    int file, variable;

    flat.time.count = flat.depth.count = 0;
    arrange(&flat, &form, &how);
    must(nc_create(path, NC_CLOBBER | NC_NETCDF4, &file));
    define_axes(file, &flat, &how, &defined);
    must(nc_def_var(file, variable_name, type, 2, &defined.dimension[Y], &variable));
    for (size_t i = 0; attributes[i] != NULL; i += 2)
        put_text(file, variable, attributes[i], attributes[i + 1]);
    must(nc_enddef(file));
    put_axes(file, &flat, &how, &defined);
    must(nc_put_var_double(file, variable, values));
    must(nc_close(file));
    arrangement_free(&how);
    return path;
}
