/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Directions on the unit sphere, and the spans of regular cells. */
#ifndef STERICOL_REGION_SPHERE_H
#define STERICOL_REGION_SPHERE_H

#include "stericol/region.h"

#define STERICOL_RADIANS 0.017453292519943295769 /* pi / 180 */

typedef struct stericol_direction {
    double x, y, z;
} stericol_direction;

/* The unit vector towards a point; NaN in, NaN out. */
stericol_direction stericol_direction_of(double latitude, double longitude);
/* The point that a vector of any length > 0 shows; longitude within -180..180.  A zero vector gives NaN. */
void stericol_point_of(stericol_direction direction, double *latitude, double *longitude);
stericol_direction stericol_direction_sum(stericol_direction a, stericol_direction b);
stericol_direction stericol_direction_difference(stericol_direction a, stericol_direction b);
stericol_direction stericol_direction_scaled(stericol_direction a, double factor);
double stericol_direction_dot(stericol_direction a, stericol_direction b);
stericol_direction stericol_direction_cross(stericol_direction a, stericol_direction b);

/*
 * Signed solid angle of a triangle of unit vectors, positive when a, b, c turn to the left seen from outside
 * (Eriksson 1990).  NaN where a corner is NaN.
 */
double stericol_triangle_angle(stericol_direction a, stericol_direction b, stericol_direction c);

/*
 * sin(north) - sin(south) in degrees, as 2 cos(middle) sin(half): close parallels lose no digits.
 */
double stericol_sine_difference(double south, double north);

/*
 * A longitude rounded to a multiple of 2^-40 degrees (0.1 micrometre), so that differences are exact and an
 * axis written on another branch gives the same bits.
 */
double stericol_snapped_longitude(double longitude);
/* The same meridian within -180 <= longitude < 180; exact for snapped longitudes. */
double stericol_reduced_longitude(double longitude);

/* Whether the bounds or corners of cells can be used; the message says what is wrong. */
stericol_status stericol_check_cells(stericol_context *context, const stericol_cells *cells);
/* Southern and northern side of a row of REGULAR cells that passed the check. */
void stericol_row_span(const stericol_cells *cells, size_t row, double *south, double *north);
/*
 * Western side (within -180..180) and width (0..360) of a column of REGULAR cells that passed the check.
 * Bounds that were wrapped apart (359.5, 0.5 about the centre 0) are taken the short way, since the centre
 * says so.
 */
void stericol_column_span(const stericol_cells *cells, size_t column, double *west, double *width);

/* Corners of a LATTICE or POLYGONS cell; returns how many, at most STERICOL_MOST_CORNERS. */
enum { STERICOL_MOST_CORNERS = 64 };
size_t stericol_corners_of_cell(const stericol_cells *cells, size_t row, size_t column, double *latitude,
                                double *longitude);

#endif
