/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "region/sphere.h"

#include "base/context.h"

#include <assert.h>
#include <math.h>

/* Poles that were stored as float, or bounds a rounding beyond them, are still poles. */
static const double POLE_SLACK = 1e-4;
/* Longitudes are taken on any branch, but a fill value is none. */
static const double MOST_LONGITUDE = 1080.0;

stericol_direction stericol_direction_of(double latitude, double longitude)
{
    double phi = latitude * STERICOL_RADIANS, lambda = longitude * STERICOL_RADIANS;

    return (stericol_direction){cos(phi) * cos(lambda), cos(phi) * sin(lambda), sin(phi)};
}

void stericol_point_of(stericol_direction direction, double *latitude, double *longitude)
{
    double across = hypot(direction.x, direction.y);

    *latitude = atan2(direction.z, across) / STERICOL_RADIANS;
    *longitude = atan2(direction.y, direction.x) / STERICOL_RADIANS;
    if (!(across > 0.0 || fabs(direction.z) > 0.0))
        *latitude = *longitude = (double)NAN;
}

stericol_direction stericol_direction_sum(stericol_direction a, stericol_direction b)
{
    return (stericol_direction){a.x + b.x, a.y + b.y, a.z + b.z};
}

stericol_direction stericol_direction_difference(stericol_direction a, stericol_direction b)
{
    return (stericol_direction){a.x - b.x, a.y - b.y, a.z - b.z};
}

stericol_direction stericol_direction_scaled(stericol_direction a, double factor)
{
    return (stericol_direction){factor * a.x, factor * a.y, factor * a.z};
}

double stericol_direction_dot(stericol_direction a, stericol_direction b)
{
    return a.x * b.x + a.y * b.y + a.z * b.z;
}

stericol_direction stericol_direction_cross(stericol_direction a, stericol_direction b)
{
    return (stericol_direction){a.y * b.z - a.z * b.y, a.z * b.x - a.x * b.z, a.x * b.y - a.y * b.x};
}

double stericol_triangle_angle(stericol_direction a, stericol_direction b, stericol_direction c)
{
    /* a . (b x c) = a . ((b - a) x (c - a)): the differences of near corners are exact, their product small.
     */
    stericol_direction ab = stericol_direction_difference(b, a), ac = stericol_direction_difference(c, a);
    double volume = stericol_direction_dot(a, stericol_direction_cross(ab, ac));
    double rest =
        1.0 + stericol_direction_dot(a, b) + stericol_direction_dot(b, c) + stericol_direction_dot(c, a);

    return 2.0 * atan2(volume, rest);
}

double stericol_sine_difference(double south, double north)
{
    return 2.0 * cos(0.5 * (south + north) * STERICOL_RADIANS) *
           sin(0.5 * (north - south) * STERICOL_RADIANS);
}

double stericol_snapped_longitude(double longitude)
{
    static const double STEPS = 1099511627776.0; /* 2^40 */

    return nearbyint(longitude * STEPS) / STEPS;
}

double stericol_reduced_longitude(double longitude)
{
    double reduced;

    if (longitude >= -180.0 && longitude < 180.0)
        return longitude;
    reduced = remainder(longitude, 360.0);
    return reduced >= 180.0 ? -180.0 : reduced;
}

static stericol_status check_bounds(stericol_context *context, const stericol_cells *cells)
{
    static const char REMEDY[] = "give bounds of the cells in degrees, or none";

    for (size_t row = 0; row < cells->rows; row++) {
        double a = cells->latitude_bounds[2 * row], b = cells->latitude_bounds[2 * row + 1];

        if (!(fabs(a) <= 90.0 + POLE_SLACK && fabs(b) <= 90.0 + POLE_SLACK && fabs(b - a) > 0.0))
            return stericol_fail(context, STERICOL_INPUT, NULL, "latitude bounds", REMEDY,
                                 "row %zu reaches from %.9g to %.9g degrees north", row + 1, a, b);
    }
    for (size_t column = 0; column < cells->columns; column++) {
        double a = cells->longitude_bounds[2 * column], b = cells->longitude_bounds[2 * column + 1];
        double width = stericol_snapped_longitude(b) - stericol_snapped_longitude(a);

        if (!(fabs(a) <= MOST_LONGITUDE && fabs(b) <= MOST_LONGITUDE && fabs(width) > 0.0 &&
              fabs(width) <= 360.0))
            return stericol_fail(context, STERICOL_INPUT, NULL, "longitude bounds", REMEDY,
                                 "column %zu reaches from %.9g to %.9g degrees east", column + 1, a, b);
    }
    return STERICOL_OK;
}

stericol_status stericol_check_cells(stericol_context *context, const stericol_cells *cells)
{
    if (cells->kind == STERICOL_CELLS_REGULAR)
        return check_bounds(context, cells);
    if (cells->kind == STERICOL_CELLS_POLYGONS &&
        (cells->corners < 3 || cells->corners > STERICOL_MOST_CORNERS))
        return stericol_fail(context, STERICOL_INPUT, NULL, "bounds",
                             "give cells with 3 to 64 corners, or no bounds", "cells have %zu corners",
                             cells->corners);
    return STERICOL_OK;
}

void stericol_row_span(const stericol_cells *cells, size_t row, double *south, double *north)
{
    double a = cells->latitude_bounds[2 * row], b = cells->latitude_bounds[2 * row + 1];

    *south = fmax(fmin(a, b), -90.0);
    *north = fmin(fmax(a, b), 90.0);
}

void stericol_column_span(const stericol_cells *cells, size_t column, double *west, double *width)
{
    double a = stericol_snapped_longitude(cells->longitude_bounds[2 * column]);
    double b = stericol_snapped_longitude(cells->longitude_bounds[2 * column + 1]);

    *west = fmin(a, b);
    *width = fabs(b - a);
    if (*width > 180.0 && *width < 360.0 && cells->longitude != NULL) {
        double ahead =
            stericol_reduced_longitude(stericol_snapped_longitude(cells->longitude[column]) - *west);

        if (ahead < 0.0)
            ahead += 360.0;
        if (ahead > *width) {
            *west += *width;
            *width = 360.0 - *width;
        }
    }
    *west = stericol_reduced_longitude(*west);
}

size_t stericol_corners_of_cell(const stericol_cells *cells, size_t row, size_t column, double *latitude,
                                double *longitude)
{
    size_t count, start;

    assert(cells->kind != STERICOL_CELLS_REGULAR);
    if (cells->kind == STERICOL_CELLS_LATTICE) {
        size_t across = cells->columns + 1, first = row * across + column;
        const size_t at[4] = {first, first + 1, first + across + 1, first + across};

        for (size_t i = 0; i < 4; i++) {
            latitude[i] = cells->corner_latitude[at[i]];
            longitude[i] = cells->corner_longitude[at[i]];
        }
        return 4;
    }
    count = cells->corners;
    assert(count >= 3 && count <= STERICOL_MOST_CORNERS);
    start = (row * cells->columns + column) * count;
    for (size_t i = 0; i < count; i++) {
        latitude[i] = cells->corner_latitude[start + i];
        longitude[i] = cells->corner_longitude[start + i];
    }
    return count;
}
