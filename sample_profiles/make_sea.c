/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Makes the demonstration data: two epochs of the Velmar Sea, a sea that does not exist, on a half-degree grid with
 * land, a shelf, two islands and a hole in the observations.
 *
 *   make_sea FOLDER      writes velmar_1990s.nc, velmar_2010s.nc and velmar_depth.nc
 *
 * The fields are simple formulas, so the answer can be judged by eye: between the decades the upper 400 m warm by up to
 * 0.6 K, most in the west; the eastern basin freshens by up to 0.12.
 */
#include <netcdf.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { COLUMNS = 44, ROWS = 28, LEVELS = 24, MONTHS = 12 };

static const double PI = 3.14159265358979323846;
static const double WEST = -168.75, SOUTH = 30.25, SPACING = 0.5;
static const double LIMITS[LEVELS + 1] = {0,   10,  20,  30,  40,  50,   75,   100,  125,  150,  200,  250, 300,
                                          400, 500, 600, 700, 900, 1200, 1500, 2000, 2500, 3000, 3500, 4000};
static const double MISSING = 1e20;

static char folder_path[3500];

static void check(int status, const char *what)
{
    if (status != NC_NOERR) {
        fprintf(stderr, "make_sea: %s: %s\n", what, nc_strerror(status));
        exit(1);
    }
}

/* Sea floor in m; 0 or less is land.  A shelf in the north, a ridge in the middle, two islands. */
static double sea_floor(double x, double y)
{
    double basin = 4200.0 - 1800.0 * exp(-pow((x - 0.55) / 0.06, 2.0));
    double edge = fmin(fmin(x, 1.0 - x) * 9.0, fmin(y * 9.0, (0.93 - y) * 6.0)) - 0.25;
    double shelf = y > 0.75 ? 180.0 + 9000.0 * (0.80 - y) : 9000.0;
    double island = fmin(pow((x - 0.3) / 0.05, 2.0) + pow((y - 0.4) / 0.06, 2.0),
                         pow((x - 0.72) / 0.04, 2.0) + pow((y - 0.62) / 0.05, 2.0));
    double depth = basin * tanh(1.6 * edge);

    if (shelf > 120.0 && shelf < depth)
        depth = shelf;
    else if (shelf <= 120.0 && depth > 120.0)
        depth = 120.0;
    return depth * tanh(0.7 * (island - 0.8));
}

static double temperature(double x, double y, double z, int month, int later)
{
    double season = 4.5 * cos(2.0 * PI * (month - 7.5) / 12.0) * exp(-z / 35.0);
    double state = 1.6 + (19.0 - 9.0 * y) * exp(-z / 420.0) + 0.8 * sin(5.0 * x + 3.0 * y) * exp(-z / 250.0);

    return state + season + later * (0.62 - 0.4 * x) * exp(-z / 400.0);
}

static double salinity(double x, double y, double z, int month, int later)
{
    double state = 34.62 + 0.9 * (0.55 - y) * exp(-z / 300.0) + 0.08 * cos(4.0 * x) * exp(-z / 600.0);

    return state + 0.1 * sin(2.0 * PI * month / 12.0) * exp(-z / 30.0) - later * 0.12 * x * exp(-z / 350.0);
}

static int define(int file, const char *name, nc_type type, int rank, const int *dimensions, const char *standard,
                  const char *units)
{
    int variable;

    check(nc_def_var(file, name, type, rank, dimensions, &variable), name);
    if (standard != NULL)
        check(nc_put_att_text(file, variable, "standard_name", strlen(standard), standard), name);
    check(nc_put_att_text(file, variable, "units", strlen(units), units), name);
    return variable;
}

static void axes(double *longitude, double *latitude)
{
    for (size_t i = 0; i < COLUMNS; i++)
        longitude[i] = WEST + SPACING * (double)i;
    for (size_t j = 0; j < ROWS; j++)
        latitude[j] = SOUTH + SPACING * (double)j;
}

static int create(const char *name, char *path, size_t room, const char *title)
{
    int file;

    snprintf(path, room, "%s/%s", folder_path, name);
    check(nc_create(path, NC_NETCDF4 | NC_CLOBBER, &file), path);
    check(nc_put_att_text(file, NC_GLOBAL, "Conventions", strlen("CF-1.10"), "CF-1.10"), path);
    check(nc_put_att_text(file, NC_GLOBAL, "title", strlen(title), title), path);
    return file;
}

/* The two fields of one month; observations are lacking below 600 m in the hole. */
static void fill_month(int month, int later, float *t, float *s)
{
    for (size_t k = 0; k < LEVELS; k++)
        for (size_t j = 0; j < ROWS; j++)
            for (size_t i = 0; i < COLUMNS; i++) {
                size_t point = (k * ROWS + j) * COLUMNS + i;
                double x = ((double)i + 0.5) / COLUMNS, y = ((double)j + 0.5) / ROWS;
                double z = 0.5 * (LIMITS[k] + LIMITS[k + 1]);
                int hole = later && i >= 34 && i < 38 && j >= 5 && j < 9 && z > 600.0;

                if (z < sea_floor(x, y) && !hole) {
                    t[point] = (float)temperature(x, y, z, month, later);
                    s[point] = (float)salinity(x, y, z, month, later);
                } else {
                    t[point] = s[point] = (float)MISSING;
                }
            }
}

static void write_epoch(const char *name, int year, int later, const char *title)
{
    static float t[LEVELS * ROWS * COLUMNS], s[LEVELS * ROWS * COLUMNS];
    static const int month_start[MONTHS + 1] = {0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334, 365};
    char path[4096], since[64];
    double longitude[COLUMNS], latitude[ROWS], level[LEVELS];
    float missing = (float)MISSING;
    int file = create(name, path, sizeof path, title), dimension[4], bounds, time, time_bounds, z, z_bounds, y, x, tv, sv;

    snprintf(since, sizeof since, "days since %d-01-01", year);
    check(nc_def_dim(file, "time", NC_UNLIMITED, &dimension[0]), path);
    check(nc_def_dim(file, "depth", LEVELS, &dimension[1]), path);
    check(nc_def_dim(file, "lat", ROWS, &dimension[2]), path);
    check(nc_def_dim(file, "lon", COLUMNS, &dimension[3]), path);
    check(nc_def_dim(file, "bounds", 2, &bounds), path);
    time = define(file, "time", NC_DOUBLE, 1, &dimension[0], "time", since);
    check(nc_put_att_text(file, time, "calendar", 6, "noleap"), path);
    check(nc_put_att_text(file, time, "bounds", 11, "time_bounds"), path);
    time_bounds = define(file, "time_bounds", NC_DOUBLE, 2, (int[]){dimension[0], bounds}, NULL, since);
    z = define(file, "depth", NC_DOUBLE, 1, &dimension[1], "depth", "m");
    check(nc_put_att_text(file, z, "positive", 4, "down"), path);
    check(nc_put_att_text(file, z, "bounds", 12, "depth_bounds"), path);
    z_bounds = define(file, "depth_bounds", NC_DOUBLE, 2, (int[]){dimension[1], bounds}, NULL, "m");
    y = define(file, "lat", NC_DOUBLE, 1, &dimension[2], "latitude", "degrees_north");
    x = define(file, "lon", NC_DOUBLE, 1, &dimension[3], "longitude", "degrees_east");
    tv = define(file, "potential_temperature", NC_FLOAT, 4, dimension, "sea_water_potential_temperature", "degree_Celsius");
    sv = define(file, "salinity", NC_FLOAT, 4, dimension, "sea_water_practical_salinity", "1");
    check(nc_put_att_float(file, tv, "_FillValue", NC_FLOAT, 1, &missing), path);
    check(nc_put_att_float(file, sv, "_FillValue", NC_FLOAT, 1, &missing), path);
    check(nc_def_var_deflate(file, tv, 1, 1, 4), path);
    check(nc_def_var_deflate(file, sv, 1, 1, 4), path);
    axes(longitude, latitude);
    for (size_t k = 0; k < LEVELS; k++)
        level[k] = 0.5 * (LIMITS[k] + LIMITS[k + 1]);
    check(nc_put_var_double(file, x, longitude), path);
    check(nc_put_var_double(file, y, latitude), path);
    check(nc_put_var_double(file, z, level), path);
    for (size_t k = 0; k < LEVELS; k++)
        check(nc_put_vara_double(file, z_bounds, (size_t[]){k, 0}, (size_t[]){1, 2}, &LIMITS[k]), path);
    for (int m = 0; m < MONTHS; m++) {
        double edge[2] = {month_start[m], month_start[m + 1]}, middle = 0.5 * (edge[0] + edge[1]);
        size_t start[4] = {(size_t)m, 0, 0, 0}, count[4] = {1, LEVELS, ROWS, COLUMNS};

        fill_month(m, later, t, s);
        check(nc_put_vara_double(file, time, start, count, &middle), path);
        check(nc_put_vara_double(file, time_bounds, start, (size_t[]){1, 2}, edge), path);
        check(nc_put_vara_float(file, tv, start, count, t), path);
        check(nc_put_vara_float(file, sv, start, count, s), path);
    }
    check(nc_close(file), path);
}

static void write_depth(void)
{
    static double depth[ROWS * COLUMNS];
    char path[4096];
    double longitude[COLUMNS], latitude[ROWS];
    int file = create("velmar_depth.nc", path, sizeof path, "Sea floor of the Velmar Sea (invented)"), dimension[2], y, x, d;

    check(nc_def_dim(file, "lat", ROWS, &dimension[0]), path);
    check(nc_def_dim(file, "lon", COLUMNS, &dimension[1]), path);
    y = define(file, "lat", NC_DOUBLE, 1, &dimension[0], "latitude", "degrees_north");
    x = define(file, "lon", NC_DOUBLE, 1, &dimension[1], "longitude", "degrees_east");
    d = define(file, "sea_floor", NC_DOUBLE, 2, dimension, "sea_floor_depth_below_mean_sea_level", "m");
    axes(longitude, latitude);
    for (size_t j = 0; j < ROWS; j++)
        for (size_t i = 0; i < COLUMNS; i++)
            depth[j * COLUMNS + i] = sea_floor(((double)i + 0.5) / COLUMNS, ((double)j + 0.5) / ROWS);
    check(nc_put_var_double(file, x, longitude), path);
    check(nc_put_var_double(file, y, latitude), path);
    check(nc_put_var_double(file, d, depth), path);
    check(nc_close(file), path);
}

int main(int argc, char **argv)
{
    if (argc != 2 || strlen(argv[1]) >= sizeof folder_path) {
        fputs("usage: make_sea FOLDER\n", stderr);
        return 2;
    }
    strcpy(folder_path, argv[1]);
    write_epoch("velmar_1990s.nc", 1995, 0, "Velmar Sea, mean year of the 1990s (invented)");
    write_epoch("velmar_2010s.nc", 2015, 1, "Velmar Sea, mean year of the 2010s (invented)");
    write_depth();
    return 0;
}
