/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Makes a pair of states on a quarter-degree grid with 50 levels for the benchmark: smooth fields, eddies and
 * full-mantissa noise (the slow case for inflating), land over a third of the surface, a sea floor.
 *
 *   make_pair FILE LAYOUT TYPE [ROWS COLUMNS LEVELS]
 *   LAYOUT  slices | blocks | default | classic | depth-fastest      TYPE  float | short
 */
#include <netcdf.h>

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { STEPS = 2 };
static const double PI = 3.14159265358979323846;
static const double SCALE[2] = {1e-3, 1e-3}, OFFSET[2] = {15.0, 20.0};
static const double FILL = 1e20;
static const short SHORT_FILL = -32768;

static size_t rows = 720, columns = 1440, levels = 50;
static int packed, depth_fastest;

static void check(int status, const char *what)
{
    if (status != NC_NOERR) {
        fprintf(stderr, "make_pair: %s: %s\n", what, nc_strerror(status));
        exit(1);
    }
}

static double noise(uint64_t *seed)
{
    *seed ^= *seed << 13;
    *seed ^= *seed >> 7;
    *seed ^= *seed << 17;
    return (double)(*seed >> 11) * (2.0 / 9007199254740992.0) - 1.0;
}

static double depth_of(size_t level)
{
    double x = ((double)level + 0.5) / (double)levels;

    return 5500.0 * (0.04 * x + 0.96 * pow(x, 2.6));
}

static double floor_of(double latitude, double longitude)
{
    double a = sin(2.0 * longitude) * cos(1.3 * latitude) + 0.6 * cos(3.0 * longitude + 2.0 * latitude);

    return 4800.0 * tanh(1.5 * (a + 0.75));
}

/* One level of temperature (which 0) or salinity (1). */
static void fill_level(size_t step, size_t level, int which, float *values)
{
    double z = depth_of(level);
    uint64_t seed = 88172645463325252u + 1000u * level + 10u * step + (uint64_t)which;

    for (size_t j = 0; j < rows; j++) {
        double latitude = ((double)j + 0.5) / (double)rows * PI - 0.5 * PI;

        for (size_t i = 0; i < columns; i++) {
            double longitude = ((double)i + 0.5) / (double)columns * 2.0 * PI;
            double eddy = sin(40.0 * longitude) * sin(31.0 * latitude + (double)step) * exp(-z / 700.0);
            double state = which == 0 ? 1.0 + 24.0 * cos(latitude) * exp(-z / 800.0) + 0.4 * eddy +
                                            0.3 * (double)step * exp(-z / 500.0)
                                      : 34.7 + 0.8 * cos(2.0 * latitude) * exp(-z / 600.0) + 0.05 * eddy;

            state += (which == 0 ? 2e-3 : 5e-4) * noise(&seed);
            values[j * columns + i] = z < floor_of(latitude, longitude) ? (float)state : (float)FILL;
        }
    }
}

static void put_level(int file, int variable, size_t step, size_t level, int which, const float *values)
{
    static short *stored;
    size_t start[4] = {step, level, 0, 0}, count[4] = {1, 1, rows, columns};

    if (depth_fastest) {
        start[1] = 0, start[3] = level;
        count[1] = rows, count[2] = columns, count[3] = 1;
    }
    if (!packed) {
        check(nc_put_vara_float(file, variable, start, count, values), "values");
        return;
    }
    if (stored == NULL)
        stored = malloc(rows * columns * sizeof *stored);
    for (size_t i = 0; i < rows * columns; i++)
        stored[i] =
            values[i] > 1e19f ? SHORT_FILL : (short)lrint(((double)values[i] - OFFSET[which]) / SCALE[which]);
    check(nc_put_vara_short(file, variable, start, count, stored), "values");
}

static int define_field(int file, const char *name, const int *dimension, int which, const char *layout)
{
    const char *standard = which == 0 ? "sea_water_conservative_temperature" : "sea_water_absolute_salinity";
    const char *units = which == 0 ? "degree_Celsius" : "g kg-1";
    float fill = (float)FILL;
    int variable;

    check(nc_def_var(file, name, packed ? NC_SHORT : NC_FLOAT, 4, dimension, &variable), name);
    check(nc_put_att_text(file, variable, "standard_name", strlen(standard), standard), name);
    check(nc_put_att_text(file, variable, "units", strlen(units), units), name);
    if (packed) {
        check(nc_put_att_short(file, variable, "_FillValue", NC_SHORT, 1, &SHORT_FILL), name);
        check(nc_put_att_double(file, variable, "scale_factor", NC_DOUBLE, 1, &SCALE[which]), name);
        check(nc_put_att_double(file, variable, "add_offset", NC_DOUBLE, 1, &OFFSET[which]), name);
    } else {
        check(nc_put_att_float(file, variable, "_FillValue", NC_FLOAT, 1, &fill), name);
    }
    if (strcmp(layout, "classic") == 0)
        return variable;
    check(nc_def_var_deflate(file, variable, 1, 1, 1), name);
    if (strcmp(layout, "slices") == 0)
        check(nc_def_var_chunking(file, variable, NC_CHUNKED, (size_t[]){1, 1, rows, columns}), name);
    else if (strcmp(layout, "blocks") == 0)
        check(nc_def_var_chunking(file, variable, NC_CHUNKED,
                                  (size_t[]){1, (levels + 1) / 2, (rows + 3) / 4, (columns + 3) / 4}),
              name);
    else if (depth_fastest)
        check(nc_def_var_chunking(file, variable, NC_CHUNKED,
                                  (size_t[]){1, (rows + 15) / 16, (columns + 15) / 16, levels}),
              name);
    return variable;
}

static void put_axis(int file, int variable, size_t length, int which)
{
    for (size_t i = 0; i < length; i++) {
        double value = which == 0   ? depth_of(i)
                       : which == 1 ? ((double)i + 0.5) / (double)length * 180.0 - 90.0
                                    : ((double)i + 0.5) / (double)length * 360.0;

        check(nc_put_var1_double(file, variable, &i, &value), "axis");
    }
}

int main(int argc, char **argv)
{
    static const char *const names[4] = {"time", "depth", "lat", "lon"};
    static const char *const units[4] = {"days since 2000-01-01", "m", "degrees_north", "degrees_east"};
    const char *layout = argc > 2 ? argv[2] : "";
    size_t length[4];
    int file, dimension[4], ordered[4], axis[4], field[2], order[4] = {0, 1, 2, 3};
    float *values;

    if (argc != 4 && argc != 7) {
        fputs("usage: make_pair FILE LAYOUT TYPE [ROWS COLUMNS LEVELS]\n", stderr);
        return 2;
    }
    if (argc == 7) {
        rows = strtoul(argv[4], NULL, 10);
        columns = strtoul(argv[5], NULL, 10);
        levels = strtoul(argv[6], NULL, 10);
    }
    packed = strcmp(argv[3], "short") == 0;
    depth_fastest = strcmp(layout, "depth-fastest") == 0;
    length[0] = STEPS, length[1] = levels, length[2] = rows, length[3] = columns;
    if (depth_fastest)
        order[1] = 2, order[2] = 3, order[3] = 1;
    check(nc_create(argv[1], strcmp(layout, "classic") == 0 ? NC_64BIT_DATA : NC_NETCDF4, &file), argv[1]);
    check(nc_set_fill(file, NC_NOFILL, NULL), argv[1]);
    for (size_t d = 0; d < 4; d++) {
        check(nc_def_dim(file, names[d], length[d], &dimension[d]), names[d]);
        check(nc_def_var(file, names[d], NC_DOUBLE, 1, &dimension[d], &axis[d]), names[d]);
        check(nc_put_att_text(file, axis[d], "units", strlen(units[d]), units[d]), names[d]);
    }
    check(nc_put_att_text(file, axis[1], "positive", 4, "down"), "depth");
    for (size_t d = 0; d < 4; d++)
        ordered[d] = dimension[order[d]];
    field[0] = define_field(file, "temperature", ordered, 0, layout);
    field[1] = define_field(file, "salinity", ordered, 1, layout);
    check(nc_enddef(file), argv[1]);
    for (size_t step = 0; step < STEPS; step++) {
        double day = 365.0 * 10.0 * (double)step;

        check(nc_put_var1_double(file, axis[0], &step, &day), "time");
    }
    for (size_t d = 1; d < 4; d++)
        put_axis(file, axis[d], length[d], (int)d - 1);
    values = malloc(rows * columns * sizeof *values);
    for (int which = 0; which < 2; which++) {
        /* A cache that holds every chunk a level touches, or writing block chunks takes for ever. */
        if (strcmp(layout, "classic") != 0)
            check(nc_set_var_chunk_cache(file, field[which], 512u << 20, 100003, 0.5F), "cache");
        for (size_t step = 0; step < STEPS; step++)
            for (size_t level = 0; level < levels; level++) {
                fill_level(step, level, which, values);
                put_level(file, field[which], step, level, which, values);
            }
        if (strcmp(layout, "classic") != 0)
            check(nc_set_var_chunk_cache(file, field[which], 0, 1, 0.5F), "cache");
    }
    free(values);
    check(nc_close(file), argv[1]);
    return 0;
}
