/* SPDX-License-Identifier: GPL-3.0-or-later */
/**
 * \file
 * Cells of a horizontal grid and their areas; regions (boxes, hemispheres, the world's oceans, masks) and the
 * share of every cell that they cover; sums over regions that do not depend on the order of addition.
 *
 * Index order is [row][column] throughout, the column running fastest.  Latitudes are degrees north within
 * +-90, longitudes degrees east on any branch (each value within +-1080), areas m2.  Nothing here changes
 * after stericol_regions_prepare(), so that any number of threads may read rows at once.
 */
#ifndef STERICOL_REGION_H
#define STERICOL_REGION_H

#include "stericol/status.h"

#include <stdbool.h>
#include <stddef.h>

#ifdef __cplusplus
extern "C" {
#endif

/** Radius of the sphere with the surface of GRS 80 [m] (Moritz 2000, J. Geodesy 74, 128-133). */
#define STERICOL_AUTHALIC_RADIUS 6371007.181

/** How the sides of the cells are given. */
typedef enum stericol_cells_kind {
    STERICOL_CELLS_REGULAR, /**< sides along parallels and meridians, given by row and by column */
    STERICOL_CELLS_LATTICE, /**< four-sided cells that share corners: corner arrays [rows + 1][columns + 1] */
    STERICOL_CELLS_POLYGONS /**< each cell with its own `corners` corners: corner arrays
                               [rows][columns][corners] */
} stericol_cells_kind;

/**
 * The cells of a grid.  A plain record of borrowed arrays: whoever fills it keeps the arrays alive as long as
 * anything prepared with it is used.  Start from `{0}`.
 */
typedef struct stericol_cells {
    stericol_cells_kind kind;
    size_t rows;
    size_t columns;
    size_t corners; /**< POLYGONS only: corners of each cell, 3 to 64 */
    /**
     * Centres: [rows] if REGULAR, else [rows][columns], degrees north.  Areas and regions can do without
     * (NULL): then the middle of the corners serves, and wrapped bounds of longitude are not recognised.
     */
    const double *latitude;
    const double *longitude;        /**< centres: [columns] if REGULAR, else [rows][columns], degrees east */
    const double *latitude_bounds;  /**< REGULAR: [rows][2], degrees north, either order */
    const double *longitude_bounds; /**< REGULAR: [columns][2], degrees east, either order */
    const double *corner_latitude;  /**< LATTICE, POLYGONS: degrees north */
    const double *corner_longitude; /**< LATTICE, POLYGONS: degrees east */
} stericol_cells;

/* ---- bounds and corners where a file has none ---- */

/**
 * Bounds of latitudes half way between neighbouring centres; the outermost lie as far outside their centre as
 * the inner ones lie inside, and are moved to the pole where they would lie beyond it.
 *
 * \param count   number of centres, at least 1
 * \param centre  [count] degrees north, strictly rising or strictly falling
 * \param bounds  [count][2] out, in the order of the axis: bounds[i][1] is bounds[i+1][0]
 *
 * \retval STERICOL_INPUT a centre is missing, outside +-90, out of order, or `count` is 1 (one centre has no
 *         width).  `bounds` then holds nothing of use.
 */
STERICOL_API stericol_status stericol_latitude_bounds(stericol_context *context, size_t count,
                                                      const double *centre, double *bounds);

/**
 * Bounds of longitudes half way between neighbouring centres.  The axis may jump by 360 once or more (179.5,
 * -179.5): steps are taken the short way round, the bounds of a cell stay beside its own centre.  Where the
 * gap from last to first centre is no wider than 1.5 mean steps (and no narrower than half of one) the axis
 * goes all round, and the outer bounds meet in the middle of that gap; else they lie as far outside as the
 * inner ones lie inside.
 *
 * \param count   number of centres, at least 1
 * \param centre  [count] degrees east, all steps of one sign
 * \param bounds  [count][2] out; bounds[i][0] and bounds[i][1] in the order of the axis
 *
 * \retval STERICOL_INPUT as for latitudes; also steps of both signs, or equal neighbours.
 */
STERICOL_API stericol_status stericol_longitude_bounds(stericol_context *context, size_t count,
                                                       const double *centre, double *bounds);

/**
 * Corners of a curvilinear grid from its centres: the mean direction of the four centres around a corner; at
 * the rim the row or column of centres beyond it is first extrapolated along the great circle.
 *
 * \param latitude, longitude                 [rows][columns] centres, at least 2 by 2
 * \param corner_latitude, corner_longitude   [rows + 1][columns + 1] out, longitudes within -180..180; NaN
 *                                            where a centre needed is NaN
 *
 * \retval STERICOL_INPUT fewer than two rows or columns, or a latitude outside +-90
 * \retval STERICOL_MEMORY
 */
STERICOL_API stericol_status stericol_cell_corners(stericol_context *context, size_t rows, size_t columns,
                                                   const double *latitude, const double *longitude,
                                                   double *corner_latitude, double *corner_longitude);

/* ---- areas ---- */

/**
 * Areas of the cells of some rows.
 *
 * REGULAR: R^2 |dlon| |sin(lat2) - sin(lat1)|, longitudes rounded to 2^-40 degrees (0.1 micrometre),
 * evaluated as a product so that narrow cells lose no digits; the same bits for either order of the bounds
 * and for either branch of the longitude.  A cell whose bounds lie more than 360 degrees apart is refused.
 * LATTICE, POLYGONS: stericol_polygon_area() of each cell; NaN where a corner is NaN.
 *
 * \param cells      the grid
 * \param radius     of the sphere [m], > 0
 * \param first_row, row_count  the rows wanted
 * \param area       [row_count][columns] out [m2]
 *
 * \retval STERICOL_INPUT  REGULAR: a bound is missing, a latitude lies outside +-90 (by more than 1e-4, what
 *         a float leaves; less is taken as the pole), a cell is wider than 360 or has no width.  POLYGONS:
 *         fewer than 3 or more than 64 corners.  `area` then holds nothing of use.
 */
STERICOL_API stericol_status stericol_cell_areas(stericol_context *context, const stericol_cells *cells,
                                                 double radius, size_t first_row, size_t row_count,
                                                 double *area);

/**
 * Area of a polygon on the sphere whose sides are great-circle arcs.
 *
 * The polygon is cut into triangles from its first corner; each gives the signed solid angle
 * 2 atan2(a . (b x c), 1 + a.b + b.c + c.a) (Eriksson 1990, Mathematics Magazine 63, 184-187; also Van
 * Oosterom & Strackee 1983), the triple product from differences of corners, so that cells of metres keep
 * their digits. Repeated corners do no harm.  The polygon must be smaller than a hemisphere.
 *
 * \param radius     [m]
 * \param corners    number of corners, at least 3
 * \param latitude, longitude  [corners] degrees, in either sense of rotation, not closed
 * \return area [m2], never negative; NaN where a corner is not finite
 */
STERICOL_API double stericol_polygon_area(double radius, size_t corners, const double *latitude,
                                          const double *longitude);

/**
 * Marks cells whose centre was already met in an earlier cell (row by row), so that each piece of sea counts
 * once: REGULAR: columns whose longitude equals an earlier one modulo 360 within 1e-4 of the spacing;
 * curvilinear: among the two first and two last columns and the three first and three last rows (cyclic
 * columns, the fold at the pole), centres within 1e-4 of the distance to a neighbour.  NaN centres are never
 * marked.
 *
 * \param repeated  [rows][columns] out, 1 where repeated, else 0
 * \param count     out, how many are marked; NULL allowed
 * \retval STERICOL_MEMORY  `repeated` is then all zero
 */
STERICOL_API stericol_status stericol_repeated_cells(stericol_context *context, const stericol_cells *cells,
                                                     unsigned char *repeated, size_t *count);

/* ---- regions ---- */

/** A box between two meridians and two parallels, in the order of RFC 7946, section 5. */
typedef struct stericol_box {
    char name[64];
    double west;  /**< degrees east; west > east crosses the date line */
    double south; /**< degrees north */
    double east;  /**< degrees east; east - west >= 360 is the whole circle */
    double north; /**< degrees north */
} stericol_box;

/**
 * Reads "NAME=W,S,E,N".  The name is 1 to 63 letters, digits, `_`, `-` or `.`, the four numbers are finite, W
 * and E within +-360, S and N within +-90, S < N, W and E not the same meridian unless a whole circle apart.
 *
 * \retval STERICOL_USAGE  the text breaks one of these; the message says which.  `box` is untouched.
 */
STERICOL_API stericol_status stericol_box_parse(stericol_context *context, const char *text,
                                                stericol_box *box);

/** How many regions one array of labels can tell apart. */
#define STERICOL_MOST_LABELS 254

/** A set of regions, in the order in which they were added. */
typedef struct stericol_regions stericol_regions;

/** An empty set; NULL when memory is out. */
STERICOL_API stericol_regions *stericol_regions_new(void);
/** NULL is allowed. */
STERICOL_API void stericol_regions_free(stericol_regions *set);

/*
 * Each of the following adds one or more regions to a set that is not yet prepared.
 * STERICOL_USAGE: the name is empty or was used before; STERICOL_MEMORY.  On failure the set is as it was.
 */

/** All cells. */
STERICOL_API stericol_status stericol_regions_add_whole(stericol_context *context, stericol_regions *set,
                                                        const char *name);
/** northern_hemisphere and southern_hemisphere; the fractions of a cell add to 1 exactly. */
STERICOL_API stericol_status stericol_regions_add_hemispheres(stericol_context *context,
                                                              stericol_regions *set);
/** A box; STERICOL_USAGE also where its numbers break the rules of stericol_box_parse(). */
STERICOL_API stericol_status stericol_regions_add_box(stericol_context *context, stericol_regions *set,
                                                      const stericol_box *box);
/**
 * arctic_ocean, atlantic_ocean, indian_ocean, pacific_ocean, southern_ocean (names: CF standardized region
 * list, version 5), with limits simplified after IHO S-23; see stericol_ocean_at().
 */
STERICOL_API stericol_status stericol_regions_add_oceans(stericol_context *context, stericol_regions *set);
/** What is used when nothing is asked for: the oceans, both hemispheres, and all cells under `whole_name`. */
STERICOL_API stericol_status stericol_regions_add_usual(stericol_context *context, stericol_regions *set,
                                                        const char *whole_name);
/**
 * A region given cell by cell (a mask, or a polygon already laid over the grid).
 *
 * \param rows, columns  must be those of the cells that the set is prepared with
 * \param fraction       [rows][columns] share of the cell, 0 to 1; NaN counts as 0; copied
 * \retval STERICOL_INPUT a fraction outside 0..1
 */
STERICOL_API stericol_status stericol_regions_add_mask(stericol_context *context, stericol_regions *set,
                                                       const char *name, size_t rows, size_t columns,
                                                       const float *fraction);
/**
 * Several regions that share no cell, one byte a cell for all together (a mask with flag values).
 *
 * \param count  number of regions, 1 to STERICOL_MOST_LABELS
 * \param names  [count]
 * \param label  [rows][columns]: 0 for none, else 1 + the index into `names`; copied
 * \retval STERICOL_INPUT a label above `count`
 */
STERICOL_API stericol_status stericol_regions_add_labels(stericol_context *context, stericol_regions *set,
                                                         size_t count, const char *const *names, size_t rows,
                                                         size_t columns, const unsigned char *label);

/** Number of regions. */
STERICOL_API size_t stericol_regions_count(const stericol_regions *set);
/** Name of a region, owned by the set. */
STERICOL_API const char *stericol_regions_name(const stericol_regions *set, size_t region);

/**
 * Lays the regions over a grid.  To be called once, after the last addition and before the first
 * stericol_regions_row().  `cells` (the record and its arrays) must outlive the set.
 *
 * REGULAR cells: boxes and hemispheres by the exact covered fraction; oceans exactly along each of 12 to 16
 * parallels that stand for strips of the row, whose borders take up 60 S, 60 N and 61 N, so that these cut
 * exactly too.  Other cells: a cell whose corners and centre agree
 * is wholly in or out; else by 64 or more sample points, each standing for an equal part of a triangle
 * between the centre and a side.  A strip of a region narrower than a cell that touches none of these points
 * is missed.  A cell with a NaN corner belongs to whatever holds its centre.  Memory: one byte a cell for all
 * oceans together; a box or the hemispheres need a number a row and column, on other than regular cells a
 * byte a cell; each cell that a limit cuts some 50 bytes more.
 *
 * After a failure the set can only be freed.
 *
 * \retval STERICOL_INPUT the cells' bounds cannot be used (see stericol_cell_areas()), or a mask has other
 *         rows and columns
 * \retval STERICOL_MEMORY
 */
STERICOL_API stericol_status stericol_regions_prepare(stericol_context *context, stericol_regions *set,
                                                      const stericol_cells *cells);

/**
 * The share of each cell of a row that a region covers.
 *
 * \param fraction  [columns] out, 0 to 1, never NaN
 */
STERICOL_API void stericol_regions_row(const stericol_regions *set, size_t region, size_t row,
                                       double *fraction);

/** The oceans as stericol_ocean_at() tells them; fixed numbers. */
typedef enum stericol_ocean {
    STERICOL_OCEAN_NONE = 0, /**< waters that belong to none: the Caspian, the great lakes */
    STERICOL_OCEAN_ARCTIC = 1,
    STERICOL_OCEAN_ATLANTIC = 2,
    STERICOL_OCEAN_INDIAN = 3,
    STERICOL_OCEAN_PACIFIC = 4,
    STERICOL_OCEAN_SOUTHERN = 5
} stericol_ocean;

/**
 * The ocean of a point.  Every point belongs to exactly one, or to none.  Land belongs to the nearest sea's
 * side of a dividing line drawn roughly along the watershed, so that data near a coast fall right.
 *
 * Limits, simplified after IHO S-23 (3rd edition 1953; the Southern and the Arctic Ocean after the draft of
 * 2002), the limits being straight on a chart of longitude and latitude: Southern: south of 60 S.  Atlantic |
 * Indian: 20 E.  Indian | Pacific: 146 49' E south of Australia, through Bass Strait; Cape Don - Selaru -
 * Timor - Roti - Savu - Sumba - Sumbawa - Java - Sunda Strait - Sumatra - Singapore: the Timor Sea and the
 * Strait of Malacca are Indian, the Java, Flores, Savu, Banda and Arafura seas and the South China Sea are
 * Pacific. Pacific | Atlantic: 67 16' W.  Arctic | Pacific: the narrows of Bering Strait.  Arctic | Atlantic
 * (the extent of the draft of 2002): 60 N in Davis Strait, Cape Nansen - Iceland - Faroes - Shetland - 61 N:
 * the Norwegian and Greenland seas, Baffin Bay, Hudson Bay and Hudson Strait are Arctic.  The Mediterranean,
 * Black Sea and Baltic are Atlantic, the Red Sea and the Persian Gulf Indian.
 *
 * \param latitude   degrees north; \param longitude degrees east, any branch
 * \return STERICOL_OCEAN_NONE also where either is not finite
 */
STERICOL_API stericol_ocean stericol_ocean_at(double latitude, double longitude);

/* ---- sums ---- */

/**
 * Sums of several quantities over several regions, exact until they are read: the same bits in whatever order
 * and in however many parts the terms were added.  One thread at a time adds to one record; workers get their
 * own and merge.
 */
typedef struct stericol_region_totals stericol_region_totals;

/** All sums zero; NULL when memory is out (or the product of the sizes is too large). */
STERICOL_API stericol_region_totals *stericol_region_totals_new(size_t regions, size_t quantities);
/** NULL is allowed. */
STERICOL_API void stericol_region_totals_free(stericol_region_totals *totals);
/** All sums zero again. */
STERICOL_API void stericol_region_totals_clear(stericol_region_totals *totals);
/** Adds weight * value, the product not rounded.  A term that is not finite makes the sum NaN. */
STERICOL_API void stericol_region_totals_add(stericol_region_totals *totals, size_t region, size_t quantity,
                                             double weight, double value);
/** Adds weight[i] * value[i] of a row; a cell whose value is NaN (missing) or whose weight is 0 is passed
 * over. */
STERICOL_API void stericol_region_totals_add_row(stericol_region_totals *totals, size_t region,
                                                 size_t quantity, size_t columns, const double *weight,
                                                 const double *value);
/** totals += other; both must have the same sizes. */
STERICOL_API void stericol_region_totals_merge(stericol_region_totals *totals,
                                               const stericol_region_totals *other);
/** A sum, rounded once. */
STERICOL_API double stericol_region_totals_value(const stericol_region_totals *totals, size_t region,
                                                 size_t quantity);

#ifdef __cplusplus
}
#endif

#endif
