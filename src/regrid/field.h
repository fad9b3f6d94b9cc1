/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A field on one regular latitude-longitude grid, asked for at points elsewhere: how a background (a salinity
 * climatology, say) comes to the grid of the data.
 */
#ifndef STERICOL_REGRID_FIELD_H
#define STERICOL_REGRID_FIELD_H

#include "base/context.h"

#include <stddef.h>

/* How far the nearest wet cell may be, in metres, where nobody said otherwise: a choice of ours. */
#define STERICOL_REGRID_DEFAULT_REACH 1.0e6

/*
 * The source grid, borrowed during the call only.  `values` is [level][row][column], row along latitude,
 * column along longitude; a value that is not finite is dry.
 */
typedef struct stericol_regrid_source {
    const char *file, *variable; /* what messages name; NULL allowed */
    size_t levels, rows, columns;
    const double *depth;     /* levels; ascending; m or dbar, whatever the caller will ask in */
    const double *latitude;  /* rows; degrees north, -90..90; ascending or descending; spacing may vary */
    const double *longitude; /* columns; degrees east on any branch, may pass the date line; ascending or
                                descending, by less than 180 */
    const float *values;
    double reach; /* m, >= 0: how far the nearest wet cell may be; see STERICOL_REGRID_DEFAULT_REACH */
} stericol_regrid_source;

typedef struct stericol_regrid_field stericol_regrid_field;

/*
 * Copies a source into *field, ready to be asked; nothing changes in it afterwards, so that any number of
 * threads may ask at once.
 *
 * The grid closes round the globe when the gap between its last and its first column is no wider than its
 * widest spacing (a hundredth is allowed for longitudes stored as float); columns that repeat the first ones
 * 360 degrees on are left out.  Memory held: the values and one bit for each.
 *
 * STERICOL_INPUT   no levels, rows or columns; depth not ascending; latitude outside -90..90 or not in order;
 * longitude not finite or not in order STERICOL_MEMORY  memory is out, or the sizes multiply beyond what can
 * be addressed *field is NULL on failure.  A NULL pointer, or a reach that is negative or NaN, is a caller's
 * mistake.
 */
stericol_status stericol_regrid_field_new(stericol_context *context, const stericol_regrid_source *source,
                                          stericol_regrid_field **field);
/* NULL allowed. */
void stericol_regrid_field_free(stericol_regrid_field *field);

/*
 * out[i] = the field at `depth` (unit of the source's levels), latitude[i] (degrees north), longitude[i]
 * (degrees east, any branch), for 0 <= i < count.
 *
 * On one level: bilinear in latitude and longitude over the wet ones of the four cell centres around the
 * point, their weights divided by their sum.  Where none of them is wet with a weight above zero, or the
 * point lies beyond the outermost centres (a pole too): the value of the wet cell of the level whose centre
 * is nearest by great circle (sphere of 6371007.181 m), if it is within the reach.
 *
 * Between two levels: linear in depth, of what each level gives at the point by the rule above; so where the
 * deeper level is dry at that place its nearest wet cell fills in.  Where one of the two has nothing within
 * the reach the other's value is taken. Above the first level and below the last one: that level's value.
 *
 * NaN where the level, or both levels, have nothing within the reach; where depth, latitude or longitude is
 * not finite; and where the latitude is beyond a pole.
 */
void stericol_regrid_level(const stericol_regrid_field *field, double depth, size_t count,
                           const double *latitude, const double *longitude, double *out);

#endif
