/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Small gridded files for the tests of the program.  Start from small_grid_plain(), which the program
 * accepts, and change what the case is about; then every bad case is a few lines.
 */
#ifndef STERICOL_TESTS_MAKE_GRID_H
#define STERICOL_TESTS_MAKE_GRID_H

#include <stdbool.h>
#include <stddef.h>

#include <netcdf.h>

enum { SMALL_GRID_CHANGES = 6 };

typedef struct small_grid small_grid;

/* Value of a field (in its own unit) at time t, level k, row j, column i; NaN is the fill value. */
typedef double small_grid_value(const small_grid *grid, size_t t, size_t k, size_t j, size_t i);

/* A field; name NULL: the file has none. */
typedef struct small_grid_field {
    const char *name, *standard_name, *units; /* the last two NULL: no such attribute */
    nc_type type;
    double scale, offset; /* stored = (value - offset) / scale; 1 and 0: not packed, no attributes */
    double fill;          /* _FillValue, in the stored type; NaN: none is declared */
    small_grid_value *value;
} small_grid_field;

/* An attribute that is set after all else, or deleted. */
typedef struct small_grid_change {
    const char *variable; /* NULL ends the list; "" is the file itself */
    const char *attribute;
    const char *text; /* NULL and count 0: the attribute is deleted */
    nc_type type;     /* of numbers */
    size_t count;     /* of numbers; 0: the text */
    double numbers[4];
} small_grid_change;

struct small_grid {
    int mode; /* of nc_create(): 0, NC_64BIT_DATA, NC_NETCDF4 ... */
    size_t rows, columns, levels;
    size_t times; /* 0: no time dimension, or an empty one with `has_time` */
    bool has_time, unlimited;
    const char *order; /* a permutation of t z y x; the dimensions that there are stand in it */
    /* [rows], [columns], [levels], [times]; NULL: 2 degrees apart from 50 south, from 10 east, STEP metres
       apart from 5 m, 30 days apart */
    const double *latitude, *longitude, *depth, *time;
    double depth_step;
    const char *time_units, *depth_name;
    bool bare_plane;   /* no coordinate variables for rows and columns */
    size_t members;    /* a first dimension "member" of the fields, each 0.7 warmer than the last; 0: none */
    bool depth_bounds; /* cells that meet half way between the levels */
    int deflate;       /* NetCDF-4: 0 contiguous, else the level */
    double warmer, saltier; /* added by the usual values to all that they give */
    small_grid_field temperature, salinity;
    small_grid_change changes[SMALL_GRID_CHANGES];
};

/* 4 x 5 cells, 6 levels to 505 m, no time, classic, float; conservative temperature and absolute salinity. */
small_grid small_grid_plain(void);
/* The usual values: 12 degC and 34.5 at the top, colder and saltier with depth, a little of everything along
   the rows, columns and times. */
small_grid_value small_grid_temperature, small_grid_salinity, small_grid_missing, small_grid_nothing;

/*
 * A file with one variable on the same rows and columns (and levels, where `levels`), of the value
 * plain + slope * (row + column); attributes: names and texts in turn, ended by NULL.
 */
typedef struct small_grid_plane {
    const char *name;
    bool levels;
    nc_type type;
    double plain, slope;
    const char *attributes[9];
    size_t flags; /* flag_values 1..flags */
    double most;  /* of the values; 0: no limit */
} small_grid_plane;
void small_grid_write_plane(const small_grid *grid, const small_grid_plane *plane, const char *folder,
                            const char *name);

/* Writes the file; fails the test where NetCDF-C does not take it. */
void small_grid_write(const small_grid *grid, const char *folder, const char *name);

#endif
