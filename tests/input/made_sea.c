/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "made_sea.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const double latitudes[SEA_ROWS] = {-40.0, -20.0, 0.0, 20.0, 40.0};
static const double depths[SEA_LEVELS] = {5.0, 20.0, 100.0, 1000.0};
static const double depth_edges[SEA_LEVELS + 1] = {0.0, 10.0, 50.0, 500.0, 2000.0};
static const double fill = -32767.0;

double sea_temperature(size_t t, size_t k, size_t j, size_t i)
{
    return 20.0 - 4.0 * (double)k + 0.25 * (double)j + 0.125 * (double)i + 0.5 * (double)t;
}

double sea_salinity(size_t t, size_t k, size_t j, size_t i)
{
    return 34.0 + 0.25 * (double)k + 0.125 * (double)j - 0.125 * (double)i + 0.125 * (double)(t % 5);
}

sea sea_plain(const char *file)
{
    static const double months[3] = {15.5, 45.0, 74.5};
    return (sea){
        .file = file,
        .mode = NC_NETCDF4,
        .order = "tzyx",
        .west = 30.0,
        .temperature = {"theta", "sea_water_potential_temperature", NULL, "degC", 1.0, 0.0, sea_temperature},
        .salinity = {"sal", "sea_water_practical_salinity", NULL, "1", 1.0, 0.0, sea_salinity},
        .times = 3,
        .time = months,
        .time_units = "days since 2005-01-01",
        .bounds_attribute = "bounds",
        .depth_units = "m",
        .depth_standard_name = "depth",
        .depth_scale = 1.0,
        .depth = depths};
}

static void put_text(int file, int variable, const char *name, const char *text)
{
    if (text)
        must(nc_put_att_text(file, variable, name, strlen(text), text));
}

typedef struct handles {
    int file, home; /* home: the group of the variables */
    int time, depth, latitude, longitude, pair;
    int time_d, depth_d, latitude_d, longitude_d;
} handles;

static int line(const sea *how, handles *at, char letter)
{
    switch (letter) {
    case 't':
        return at->time_d;
    case 'z':
        return at->depth_d;
    case 'y':
        return at->latitude_d;
    default:
        (void)how;
        return at->longitude_d;
    }
}

static void define_axes(const sea *how, handles *at)
{
    must(nc_def_dim(at->file, "time", how->times, &at->time_d));
    must(nc_def_dim(at->file, "depth", SEA_LEVELS, &at->depth_d));
    must(nc_def_dim(at->file, "lat", SEA_ROWS, &at->latitude_d));
    must(nc_def_dim(at->file, "lon", SEA_COLUMNS, &at->longitude_d));
    must(nc_def_dim(at->file, "pair", 2, &at->pair));
    must(nc_def_var(at->file, "time", NC_DOUBLE, 1, &at->time_d, &at->time));
    must(nc_def_var(at->file, "depth", NC_DOUBLE, 1, &at->depth_d, &at->depth));
    must(nc_def_var(at->file, "lat", NC_DOUBLE, 1, &at->latitude_d, &at->latitude));
    must(nc_def_var(at->file, "lon", NC_DOUBLE, 1, &at->longitude_d, &at->longitude));
    put_text(at->file, at->time, "units", how->time_units);
    put_text(at->file, at->time, "calendar", how->calendar);
    put_text(at->file, at->depth, "units", how->depth_units);
    put_text(at->file, at->depth, "standard_name", how->depth_standard_name);
    if (how->heights)
        put_text(at->file, at->depth, "positive", "up");
    if (how->plain_axes)
        return;
    put_text(at->file, at->latitude, "units", "degrees_north");
    put_text(at->file, at->longitude, "units", "degrees_east");
    put_text(at->file, at->latitude, "standard_name", "latitude");
    put_text(at->file, at->longitude, "standard_name", "longitude");
}

static void fill_axes(const sea *how, const handles *at)
{
    for (size_t i = 0; i < how->times; i++)
        must(nc_put_var1_double(at->file, at->time, &i, &how->time[i]));
    for (size_t i = 0; i < SEA_LEVELS; i++) {
        const double depth = how->depth[how->deep_first ? SEA_LEVELS - 1 - i : i] * how->depth_scale *
                             (how->heights ? -1.0 : 1.0);
        must(nc_put_var1_double(at->file, at->depth, &i, &depth));
    }
    for (size_t i = 0; i < SEA_ROWS; i++)
        must(
            nc_put_var1_double(at->file, at->latitude, &i, &latitudes[how->south_up ? SEA_ROWS - 1 - i : i]));
    for (size_t i = 0; i < SEA_COLUMNS; i++) {
        double longitude = how->west + 60.0 * (double)i;
        if (how->wrapped && longitude > 180.0)
            longitude -= 360.0;
        must(nc_put_var1_double(at->file, at->longitude, &i, &longitude));
    }
}

static void add_bounds(const sea *how, const handles *at)
{
    int variable, dimension[2] = {at->time_d, at->pair}, edge;
    if (how->time_bounds) {
        must(nc_def_var(at->file, "time_bnds", NC_DOUBLE, 2, dimension, &variable));
        put_text(at->file, at->time, how->bounds_attribute, "time_bnds");
        must(nc_put_var_double(at->file, variable, how->time_bounds));
    }
    if (!how->depth_bounds && !how->depth_edges)
        return;
    dimension[0] = at->depth_d;
    if (how->depth_edges)
        must(nc_def_dim(at->file, "depth_edge", SEA_LEVELS + 1, &edge));
    must(nc_def_var(at->file, "depth_limits", NC_DOUBLE, how->depth_edges ? 1 : 2,
                    how->depth_edges ? &edge : dimension, &variable));
    put_text(at->file, at->depth, how->depth_edges ? "edges" : "bounds", "depth_limits");
    for (size_t i = 0; i < (how->depth_edges ? SEA_LEVELS + 1u : 2u * SEA_LEVELS); i++) {
        const size_t level = how->depth_edges ? i : i / 2 + i % 2, last = SEA_LEVELS;
        const double sign = how->heights ? -1.0 : 1.0;
        size_t edge_at = how->deep_first ? last - level : level;
        const double value = depth_edges[edge_at] * sign * how->depth_scale;
        const size_t index[2] = {i / 2, i % 2};
        must(nc_put_var1_double(at->file, variable, how->depth_edges ? &i : index, &value));
    }
}

static int define_variable(const sea *how, handles *at, const sea_variable *variable)
{
    int dimension[4], handle;
    const size_t rank = strlen(how->order);
    for (size_t i = 0; i < rank; i++)
        dimension[i] = line(how, at, how->order[i]);
    must(nc_def_var(at->home, variable->name, how->packed ? NC_SHORT : NC_DOUBLE, (int)rank, dimension,
                    &handle));
    put_text(at->home, handle, "standard_name", variable->standard_name);
    put_text(at->home, handle, "long_name", variable->long_name);
    put_text(at->home, handle, "units", variable->units);
    if (how->packed) {
        const double scale = 0.125, offset = 16.0;
        const short none = (short)fill;
        must(nc_put_att_double(at->home, handle, "scale_factor", NC_DOUBLE, 1, &scale));
        must(nc_put_att_double(at->home, handle, "add_offset", NC_DOUBLE, 1, &offset));
        must(nc_put_att_short(at->home, handle, "_FillValue", NC_SHORT, 1, &none));
    } else {
        must(nc_put_att_double(at->home, handle, "_FillValue", NC_DOUBLE, 1, &fill));
    }
    if (how->chunk_levels) {
        size_t chunk[4];
        for (size_t i = 0; i < rank; i++)
            chunk[i] = how->order[i] == 't'   ? 1
                       : how->order[i] == 'z' ? (size_t)how->chunk_levels
                       : how->order[i] == 'y' ? SEA_ROWS
                                              : SEA_COLUMNS;
        must(nc_def_var_chunking(at->home, handle, NC_CHUNKED, chunk));
        must(nc_def_var_deflate(at->home, handle, 1, 1, 1));
    }
    return handle;
}

/* In the file's order, in one go. */
static void fill_variable(const sea *how, const handles *at, const sea_variable *variable, int handle)
{
    const size_t rank = strlen(how->order);
    size_t length[4], index[4] = {0}, count = 1;
    for (size_t d = 0; d < rank; d++) {
        length[d] = how->order[d] == 't'   ? how->times
                    : how->order[d] == 'z' ? SEA_LEVELS
                    : how->order[d] == 'y' ? SEA_ROWS
                                           : SEA_COLUMNS;
        count *= length[d];
    }
    double *values = malloc(count * sizeof *values);
    assert_non_null(values);
    for (size_t p = 0; p < count; p++) {
        size_t t = 0, k = 0, j = 0, i = 0;
        for (size_t d = 0; d < rank; d++)
            *(how->order[d] == 't'   ? &t
              : how->order[d] == 'z' ? &k
              : how->order[d] == 'y' ? &j
                                     : &i) = index[d];
        k = how->deep_first ? SEA_LEVELS - 1 - k : k;
        j = how->south_up ? SEA_ROWS - 1 - j : j;
        double value = variable->value(how->first + t, k, j, i) * variable->scale + variable->offset;
        if (how->packed)
            value = (value - 16.0) / 0.125;
        values[p] = isnan(value) ? fill : value;
        for (size_t d = rank; d-- > 0 && ++index[d] == length[d];)
            index[d] = 0;
    }
    must(nc_put_var_double(at->home, handle, values));
    free(values);
}

const char *sea_write(const sea *how)
{
    const made_format format = {"", how->mode, true, true, how->zarr};
    const sea_variable *variables[2] = {&how->temperature, &how->salinity};
    handles at = {0};
    int handle[2] = {0, 0};
    at.file = at.home = made_create(&format, how->file);
    define_axes(how, &at);
    if (how->group)
        must(nc_def_grp(at.file, how->group, &at.home));
    for (int i = 0; i < 2; i++)
        if (variables[i]->name)
            handle[i] = define_variable(how, &at, variables[i]);
    (void)nc_enddef(at.file);
    fill_axes(how, &at);
    for (int i = 0; i < 2; i++)
        if (variables[i]->name)
            fill_variable(how, &at, variables[i], handle[i]);
    (void)nc_redef(at.file);
    add_bounds(how, &at);
    must(nc_close(at.file));
    return made_path(how->file);
}

int sea_change(const char *path)
{
    int file;
    must(nc_open(path, NC_WRITE, &file));
    (void)nc_redef(file);
    return file;
}

void sea_changed(int file)
{
    (void)nc_enddef(file);
    must(nc_close(file));
}

void sea_attribute(const char *path, const char *variable, const char *name, const char *text)
{
    const int file = sea_change(path);
    int handle;
    must(nc_inq_varid(file, variable, &handle));
    if (text)
        put_text(file, handle, name, text);
    else
        must(nc_del_att(file, handle, name));
    sea_changed(file);
}

void sea_put(const char *path, const char *variable, size_t index, double value)
{
    int file, handle;
    must(nc_open(path, NC_WRITE, &file));
    must(nc_inq_varid(file, variable, &handle));
    must(nc_put_var1_double(file, handle, &index, &value));
    must(nc_close(file));
}

static const made_format netcdf4 = {"", NC_NETCDF4, true, true, false};

void sea_add(int file, const char *name, const char *dimensions, const sea_text *attributes, size_t count,
             const double *values)
{
    int dimension[4], variable;
    size_t rank = 0;
    char copy[64], *rest = copy;
    (void)snprintf(copy, sizeof copy, "%s", dimensions);
    for (char *word = strtok_r(copy, " ", &rest); word; word = strtok_r(NULL, " ", &rest))
        must(nc_inq_dimid(file, word, &dimension[rank++]));
    must(nc_def_var(file, name, NC_DOUBLE, (int)rank, dimension, &variable));
    for (size_t i = 0; i < count; i++)
        must(nc_put_att_text(file, variable, attributes[i].name, strlen(attributes[i].text),
                             attributes[i].text));
    must(nc_put_var_double(file, variable, values));
}

int sea_plane_file(const char *name, size_t rows, size_t columns)
{
    int file = made_create(&netcdf4, name), dimension;
    must(nc_def_dim(file, "lat", rows, &dimension));
    must(nc_def_dim(file, "lon", columns, &dimension));
    return file;
}

/* ---- epochs ---- */

void try_begin(try *one, const char *path)
{
    memset(one, 0, sizeof *one);
    watch(&one->seen);
    assert_int_equal(stericol_cf_units_new(one->seen.context, &one->units), STERICOL_OK);
    one->request = (stericol_epoch_request){.label = "earlier",
                                            .paths = one->paths,
                                            .least_times = 0.5,
                                            .wants_temperature = true,
                                            .wants_salinity = true};
    try_add(one, path);
}

void try_add(try *one, const char *path)
{
    assert_true(one->request.path_count < SEA_MOST_TIMES);
    /* made_path() gives one of a few buffers. */
    one->paths[one->request.path_count++] = strdup(path);
}

void try_open(try *one)
{
    if (stericol_epoch_open(one->seen.context, one->units, &one->request, &one->epoch) != STERICOL_OK) {
        print_error("%s\n", stericol_context_message(one->seen.context));
        fail();
    }
}

void try_end(try *one)
{
    stericol_epoch_close(one->epoch);
    for (size_t i = 0; i < one->request.path_count; i++)
        free((void *)(uintptr_t)one->paths[i]);
    stericol_cf_units_free(one->units);
    unwatch(&one->seen);
}

void assert_open_fails_at(try *one, stericol_status status, const char *path, const char *message)
{
    stericol_text expected = {0};
    if (path)
        stericol_text_format(&expected, "%s: ", path);
    stericol_text_add(&expected, message);
    const stericol_status met =
        stericol_epoch_open(one->seen.context, one->units, &one->request, &one->epoch);
    assert_string_equal(stericol_context_message(one->seen.context), stericol_text_string(&expected));
    assert_int_equal(met, status);
    assert_null(one->epoch);
    stericol_text_free(&expected);
    try_end(one);
}

void assert_open_fails(try *one, stericol_status status, const char *message)
{
    assert_open_fails_at(one, status, one->paths[0], message);
}

static bool was_noticed(const try *one, const char *text)
{
    stericol_text expected = {0};
    bool found = false;
    stericol_text_format(&expected, "%s: %s\n", one->paths[0], text);
    found = strstr(stericol_text_string(&one->seen.notices), stericol_text_string(&expected)) != NULL;
    stericol_text_free(&expected);
    return found;
}

void assert_noticed(const try *one, const char *text)
{
    if (!was_noticed(one, text)) {
        print_error("no notice \"%s\" among\n%s", text, stericol_text_string(&one->seen.notices));
        fail();
    }
}

void assert_not_noticed(const try *one, const char *text)
{
    if (strstr(stericol_text_string(&one->seen.notices), text)) {
        print_error("unwanted notice \"%s\" among\n%s", text, stericol_text_string(&one->seen.notices));
        fail();
    }
}

void assert_assumed(const try *one, const char *text)
{
    for (size_t i = 0; i < stericol_epoch_assumption_count(one->epoch); i++)
        if (strcmp(stericol_epoch_assumption(one->epoch, i), text) == 0)
            return;
    print_error("no assumption \"%s\" among\n", text);
    for (size_t i = 0; i < stericol_epoch_assumption_count(one->epoch); i++)
        print_error("%s\n", stericol_epoch_assumption(one->epoch, i));
    fail();
}

void try_load(try *one, size_t level, double *temperature, double *salinity)
{
    if (stericol_epoch_load(one->seen.context, one->epoch, level, 1, 0, SEA_ROWS, temperature, salinity,
                            NULL) != STERICOL_OK) {
        print_error("%s\n", stericol_context_message(one->seen.context));
        fail();
    }
}
