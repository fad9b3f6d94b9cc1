/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One invented sea, written in every encoding that the tests ask for. */
#ifndef STERICOL_TESTS_MADE_SEA_H
#define STERICOL_TESTS_MADE_SEA_H

#include "cf/made_files.h"

#include "input/epoch.h"
#include "input/field2d.h"

enum {
    SEA_ROWS = 5,
    SEA_COLUMNS = 6,
    SEA_LEVELS = 4,
    SEA_POINTS = SEA_ROWS * SEA_COLUMNS,
    SEA_MOST_TIMES = 60
};

/* Temperature and salinity of the sea at time t, level k, row j, column i: multiples of 1/8, so that short
 * integers hold them exactly. */
double sea_temperature(size_t t, size_t k, size_t j, size_t i);
double sea_salinity(size_t t, size_t k, size_t j, size_t i);

typedef double sea_value(size_t t, size_t k, size_t j, size_t i);

/* A variable of the file; name NULL: none. */
typedef struct sea_variable {
    const char *name, *standard_name, *long_name, *units; /* NULL: none */
    double scale, offset;                                 /* stored = value * scale + offset */
    sea_value *value;                                     /* NaN: the fill value */
} sea_variable;

/* How the sea is written; start from sea_plain() and change what the test is about. */
typedef struct sea {
    const char *file;
    int mode;
    bool zarr;
    const char *order; /* a permutation of letters out of t z y x; without t: the first time alone */
    bool south_up, deep_first,
        heights;       /* rows from the north; levels from the bottom; negative, positive up */
    double west;       /* longitude of the first column; the next are 60 degrees apart */
    bool wrapped;      /* longitudes brought into -180..180 */
    bool packed;       /* short, scale 1/8, offset 16 */
    int chunk_levels;  /* 0: as the library likes */
    const char *group; /* the variables stand in it, the coordinates in the root */
    sea_variable temperature, salinity;
    size_t times, first;       /* number of times; which time of the series is the first */
    const double *time;        /* [times] */
    const double *time_bounds; /* [times][2] or NULL */
    const char *time_units, *calendar;
    const char *bounds_attribute; /* "bounds", "climatology" */
    const char *depth_units, *depth_standard_name;
    double depth_scale; /* stored = depth * scale */
    const double *depth;
    bool depth_bounds, depth_edges,
        plain_axes; /* plain_axes: no standard_name and no units on latitude and longitude */
} sea;

sea sea_plain(const char *file);
/* Writes it and gives its path. */
const char *sea_write(const sea *how);

/* Opens a made file again to change its header: nc_redef() done, nc_enddef() and nc_close() in sea_changed().
 */
int sea_change(const char *path);
void sea_changed(int file);
/* Sets (or, with NULL, deletes) a text attribute of a variable of the file. */
void sea_attribute(const char *path, const char *variable, const char *name, const char *text);
void sea_put(const char *path, const char *variable, size_t index, double value);

/* A text attribute. */
typedef struct sea_text {
    const char *name, *text;
} sea_text;
/* Defines a variable on the dimensions of these names (blanks between them), with text attributes, and fills
 * it. */
void sea_add(int file, const char *name, const char *dimensions, const sea_text *attributes, size_t count,
             const double *values);
/* A new NetCDF-4 file with dimensions lat and lon; its handle. */
int sea_plane_file(const char *name, size_t rows, size_t columns);

/* Everything that a test of an epoch needs. */
typedef struct
try {
    watched seen;
    stericol_cf_units *units;
    stericol_epoch_request request;
    const char *paths[SEA_MOST_TIMES];
    stericol_epoch *epoch;
}
try;
void try_begin(try *one, const char *path);
void try_add(try *one, const char *path);
/* Opens or fails the test with the message. */
void try_open(try *one);
void try_end(try *one);
/* Asserts that opening gives `status` and a message that is, behind the path of the first file and ": ",
 * `message`. */
void assert_open_fails(try *one, stericol_status status, const char *message);
/* The same where the message names another file, or none (path NULL). */
void assert_open_fails_at(try *one, stericol_status status, const char *path, const char *message);
/* A notice "FILE: text" was given; `text` in whole. */
void assert_noticed(const try *one, const char *text);
void assert_not_noticed(const try *one, const char *text);
void assert_assumed(const try *one, const char *text);
/* One level of all rows; NULL skips. */
void try_load(try *one, size_t level, double *temperature, double *salinity);

#endif
