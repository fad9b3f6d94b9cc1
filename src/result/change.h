/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The result file of `change` (and of `scenario`, which writes the same names): maps, layer maps and region
 * totals under fixed names, with the units and attributes of CF-1.10 and ACDD-1.3.
 *
 * Everything goes through cf/write.h: the file appears whole at stericol_result_commit() or not at all.  One
 * thread at a time may be inside.  Missing values are NaN everywhere.
 */
#ifndef STERICOL_RESULT_CHANGE_H
#define STERICOL_RESULT_CHANGE_H

#include "base/context.h"

#include <stdbool.h>
#include <stddef.h>

/* Maps [rows][columns], held as float in the file; with more than one layer each has a layer_... variant too.
 */
typedef enum stericol_map {
    STERICOL_MAP_STERIC,       /* m; needs has_salinity */
    STERICOL_MAP_THERMOSTERIC, /* m */
    STERICOL_MAP_HALOSTERIC,   /* m; needs has_salinity */
    STERICOL_MAP_REMAINDER,    /* m; needs has_remainder (and has_salinity) */
    STERICOL_MAP_HEAT,         /* J m-2 */
    STERICOL_MAP_EFFICIENCY,   /* m3 J-1 */
    STERICOL_MAP_EXPANSION,    /* K-1 */
    STERICOL_MAP_DEPTH,        /* m, depth integrated over */
    STERICOL_MAP_COUNT
} stericol_map;

/*
 * Quantities [regions], held as double; with more than one layer each but STERICOL_REGION_AREA has a
 * region_layer_... variant too.  Those named FILLED are the sums scaled up from the covered to the region's
 * whole sea area; they need fill_coverage.  Those of the total and of salt need has_salinity.
 */
typedef enum stericol_region_quantity {
    STERICOL_REGION_AREA,         /* m2, sea area of the region */
    STERICOL_REGION_COVERED_AREA, /* m2, of the columns used; by layer: of the columns in which the layer is
                                     complete or lies wholly below the sea floor, the divisor of that layer's
                                     mean */
    STERICOL_REGION_MEAN_STERIC,  /* m, volume change over covered area */
    STERICOL_REGION_MEAN_THERMOSTERIC,
    STERICOL_REGION_MEAN_HALOSTERIC,
    STERICOL_REGION_VOLUME_STERIC, /* m3 */
    STERICOL_REGION_VOLUME_THERMOSTERIC,
    STERICOL_REGION_VOLUME_HALOSTERIC,
    STERICOL_REGION_HEAT,          /* J */
    STERICOL_REGION_SEA_LEVEL,     /* m, thermosteric volume change over the ocean area */
    STERICOL_REGION_EFFICIENCY,    /* m YJ-1, sea-level equivalent over heat content change */
    STERICOL_REGION_FILLED_STERIC, /* m3 */
    STERICOL_REGION_FILLED_THERMOSTERIC,
    STERICOL_REGION_FILLED_HALOSTERIC,
    STERICOL_REGION_FILLED_HEAT,      /* J */
    STERICOL_REGION_FILLED_SEA_LEVEL, /* m */
    STERICOL_REGION_QUANTITY_COUNT
} stericol_region_quantity;

/* What the file will hold.  Pointers need to live until stericol_result_new() returns; texts that are NULL
 * are left out. */
typedef struct stericol_change_layout {
    size_t rows, columns;
    bool curvilinear;               /* as in the grid read: positions on [rows][columns] */
    const double *latitude;         /* degrees north, [rows] or [rows][columns] */
    const double *longitude;        /* degrees east, [columns] or [rows][columns] */
    const double *latitude_bounds;  /* [rows][2] or [rows][columns][corners]; NULL where there are none */
    const double *longitude_bounds; /* [columns][2] or [rows][columns][corners]; NULL where there are none */
    size_t corners;                 /* corners of curvilinear cells; not used otherwise */

    size_t layers;                   /* at least 1; layer_... variants only when more than 1 */
    const double (*layer_bounds)[2]; /* m, [layers]; a lower bound INFINITY becomes `deepest` of the commit */

    size_t regions; /* 0 leaves all region variables out */
    const char *const *region_names;

    bool has_salinity;  /* false: only thermosteric height and heat; total and halosteric are absent, never
                           zero */
    bool has_remainder; /* attribution_remainder is written */
    bool fill_coverage; /* the FILLED quantities are written too */
    double ocean_area;  /* m2, divisor of the sea-level equivalent; <= 0 leaves the attribute out */

    const char *title;                         /* NULL gives one that fits `change` */
    const char *created;                       /* "2031-05-04T12:00:00Z": date_created and history */
    const char *command_line;                  /* in history */
    const char *earlier_epoch, *later_epoch;   /* "2005-01-01..2009-12-31", or words */
    const char *coverage_start, *coverage_end; /* ISO 8601, ends of both epochs together */
    const char *cell_area_source;              /* what the areas were taken from */
    const char *region_area_source;            /* what region_area was taken from */
} stericol_change_layout;

/* Whether a file of this layout holds that map or quantity (its layer variant: and layers > 1). */
bool stericol_change_holds_map(const stericol_change_layout *layout, stericol_map map);
bool stericol_change_holds_region(const stericol_change_layout *layout, stericol_region_quantity quantity);

typedef struct stericol_result stericol_result;

/* Instead of a layer's index. */
#define STERICOL_WHOLE_COLUMN ((size_t)-1)

/*
 * Makes the file under a temporary name with all that the layout says.  Statuses as stericol_cf_writer_new():
 * STERICOL_USAGE when `path` exists and !replace, STERICOL_OUTPUT when it cannot be written; STERICOL_MEMORY.
 * *result is NULL on failure.
 */
stericol_status stericol_result_new(stericol_context *context, const char *path, bool replace,
                                    const stericol_change_layout *layout, stericol_result **result);
/* Removes what was not committed; NULL allowed. */
void stericol_result_free(stericol_result *result);
/* As stericol_cf_writer_remove_temporary(): may be called from a signal handler. */
bool stericol_result_remove_temporary(const stericol_result *result);

/*
 * values[rows][columns] into rows row0 .. row0 + rows - 1 of a map that the layout holds; `layer` is an index
 * below layers (layers > 1) or STERICOL_WHOLE_COLUMN.  What is never written is missing.  STERICOL_OUTPUT on
 * a value that no float holds or when writing fails; STERICOL_MEMORY.
 */
stericol_status stericol_result_map(stericol_context *context, stericol_result *result, stericol_map map,
                                    size_t layer, size_t row0, size_t rows, const double *values);
/*
 * flags[rows][columns]: 0 complete, 1 sea_floor, 2 end_of_data, 3 unequal, 4 gap, 5 no_data, 6 outside_range;
 * a negative one is missing (land by a mask).
 */
stericol_status stericol_result_flags(stericol_context *context, stericol_result *result, size_t row0,
                                      size_t rows, const signed char *flags);
/* values[rows][columns] in m2. */
stericol_status stericol_result_cell_area(stericol_context *context, stericol_result *result, size_t row0,
                                          size_t rows, const double *values);
/* values[regions], of the whole column or of one layer; a quantity that the layout holds. */
stericol_status stericol_result_region(stericol_context *context, stericol_result *result,
                                       stericol_region_quantity quantity, size_t layer, const double *values);

/* A global attribute: settings, inputs, assumptions, equation of state, constants ...; a second one of a name
   replaces the first, also those that stericol_result_new() wrote. */
stericol_status stericol_result_attribute(stericol_context *context, stericol_result *result,
                                          const char *name, const char *text);
stericol_status stericol_result_attribute_number(stericol_context *context, stericol_result *result,
                                                 const char *name, double value);

/*
 * Writes the layer bounds (`deepest`, m: the deepest level used anywhere, in the place of INFINITY), closes,
 * syncs and renames.  On failure nothing is left and an existing file is untouched.
 */
stericol_status stericol_result_commit(stericol_context *context, stericol_result *result, double deepest);

#endif
