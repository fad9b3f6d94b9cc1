/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What the whole-program checks share: an invented sea of any size written in any form, a run of the program
 * on it, and the numbers of the result read back with NetCDF-C.
 */
#ifndef STERICOL_TESTS_SCIENCE_H
#define STERICOL_TESTS_SCIENCE_H

#include "support/testing.h"

#include "program/run.h"

#include <netcdf.h>

/* Fails the test unless a NetCDF call succeeds. */
#define must(call)                                                                                           \
    do {                                                                                                     \
        int must_status_ = (call);                                                                           \
        if (must_status_ != NC_NOERR) {                                                                      \
            print_error("%s: %s\n", #call, nc_strerror(must_status_));                                       \
            _fail(__FILE__, __LINE__);                                                                       \
        }                                                                                                    \
    } while (0)

/* Radius of the sphere with the surface of GRS 80, m (Moritz 2000, J. Geodesy 74, 128-133). */
#define AUTHALIC_RADIUS 6371007.181
#define PI 3.14159265358979323846

/* Area of a ring between two parallels, m2. */
double ring_area(double south, double north);

/* ---- files ---- */

/* The folder of this test program inside the build folder; made by work_in(), which comes first. */
void work_in(const char *name);
/* FOLDER/name, in one of some buffers in turn. */
const char *in_folder(const char *name);
void write_text(const char *name, const char *text);

/* ---- an invented sea ---- */

typedef enum sea_quantity { SEA_TEMPERATURE, SEA_SALINITY, SEA_QUANTITIES } sea_quantity;

/* centre[count]; bounds[count][2] or NULL. */
typedef struct sea_axis {
    size_t count;
    const double *centre, *bounds;
} sea_axis;

typedef struct sea sea;
/* Value at time t, level k (from the surface down), row j (from the south up), column i (eastward); NaN is
 * missing. */
typedef double sea_value(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i);

/* How a sea is written. */
typedef struct sea_form {
    int mode;                  /* for nc_create() */
    const char *zarr;          /* the storage of a Zarr store ("file"), or NULL */
    nc_type type;              /* of the two fields */
    double scale, offset;      /* value = stored * scale + offset */
    const char *order;         /* a permutation of t z y x */
    bool levels_up, rows_down; /* the file's order is the other way round */
    double west_limit;         /* longitudes are brought into west_limit .. west_limit + 360, in that order */
    size_t chunk[4];           /* of t, z, y, x; all 0: as the library likes */
    int deflate;               /* level; 0: none */
    const char *group;         /* the fields stand in this group, the axes in the root */
    bool kelvin;
    bool only[SEA_QUANTITIES];     /* write this one alone */
    size_t first_time, time_count; /* time_count 0: all times */
} sea_form;

struct sea {
    sea_axis time, depth, latitude, longitude; /* time.count 0: no time dimension */
    const char *time_units, *calendar, *depth_units;
    const char *temperature_name, *salinity_name; /* standard names */
    const char *salinity_units;
    sea_value *value;
    const void *user;
};

/* Conservative temperature and absolute salinity, no times, depths in metres, daily noleap time units. */
sea sea_plain(void);
/* Classic format, double, t z y x. */
sea_form form_plain(void);
/* Writes it; returns what the program takes as a path (a URL for Zarr). */
const char *sea_write(const sea *of, const sea_form *form, const char *name);
/* A field of rows and columns alone, on the axes of the sea; attributes in pairs, ended by NULL. */
const char *sea_write_plane(const sea *of, const char *name, const char *variable, nc_type type,
                            const double *values, const char *const *attributes);

/* ---- a run ---- */

/* What the last run said. */
const char *said_out(void);
const char *said_error(void);
void forget_said(void);

/* Runs the program with these arguments and asserts success. */
#define run_well(...) assert_runs(__FILE__, __LINE__, 0, (const char *const[]){__VA_ARGS__, NULL})
/* Asserts an exit code. */
#define run_to(code, ...) assert_runs(__FILE__, __LINE__, (code), (const char *const[]){__VA_ARGS__, NULL})
void assert_runs(const char *file, int line, int code, const char *const *arguments);
#define assert_said(text) assert_holds(said_error(), (text))

/* ---- a result ---- */

enum { MOST_REGIONS = 16 };

typedef struct field {
    size_t count;
    double *value; /* NaN where missing */
} field;

/* A variable as a whole; field_free(). */
field read_field(const char *path, const char *variable);
/* The same of a file that is open. */
field read_field_of(int file, const char *variable);
void field_free(field *of);
bool holds(const char *path, const char *variable);
/* A text attribute of the file, in one of some buffers in turn; "" where it is absent. */
const char *file_text(const char *path, const char *attribute);
double file_number(const char *path, const char *attribute);
/* The value of a region, by its name; layer -1 for variables without a layer. */
double region_layer_value(const char *path, const char *variable, const char *region, int layer);
double region_value(const char *path, const char *variable, const char *region);

#endif
