/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Bounds and corners of cells that are known by their centres only. */
#include "base/checked.h"
#include "base/context.h"
#include "region/sphere.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>

static const char BOUNDS_REMEDY[] = "give a file with bounds of the cells";

static stericol_status one_centre(stericol_context *context, const char *axis)
{
    return stericol_fail(context, STERICOL_INPUT, NULL, axis, BOUNDS_REMEDY,
                         "a single value without bounds has no width");
}

stericol_status stericol_latitude_bounds(stericol_context *context, size_t count, const double *centre,
                                         double *bounds)
{
    bool rising;

    assert(count >= 1);
    if (count == 1)
        return one_centre(context, "latitude");
    rising = centre[1] > centre[0];
    for (size_t i = 0; i < count; i++) {
        if (!(fabs(centre[i]) <= 90.0))
            return stericol_fail(context, STERICOL_INPUT, NULL, "latitude", "correct the axis",
                                 "value %zu is %.9g degrees", i + 1, centre[i]);
        if (i > 0 && !(rising ? centre[i] > centre[i - 1] : centre[i] < centre[i - 1]))
            return stericol_fail(context, STERICOL_INPUT, NULL, "latitude", "sort the axis",
                                 "value %zu (%.9g) is out of order", i + 1, centre[i]);
    }
    for (size_t i = 0; i + 1 < count; i++)
        bounds[2 * i + 1] = bounds[2 * i + 2] = 0.5 * (centre[i] + centre[i + 1]);
    bounds[0] = fmin(fmax(2.0 * centre[0] - bounds[1], -90.0), 90.0);
    bounds[2 * count - 1] = fmin(fmax(2.0 * centre[count - 1] - bounds[2 * count - 2], -90.0), 90.0);
    return STERICOL_OK;
}

stericol_status stericol_longitude_bounds(stericol_context *context, size_t count, const double *centre,
                                          double *bounds)
{
    double span = 0.0, gap, step = 0.0, mean, first_half, last_half;

    assert(count >= 1);
    if (count == 1)
        return one_centre(context, "longitude");
    for (size_t i = 0; i < count; i++)
        if (!(fabs(centre[i]) <= 1080.0))
            return stericol_fail(context, STERICOL_INPUT, NULL, "longitude", "correct the axis",
                                 "value %zu is %.9g degrees", i + 1, centre[i]);
    for (size_t i = 0; i + 1 < count; i++) {
        double before = step, turns = 360.0 * nearbyint((centre[i + 1] - centre[i]) / 360.0), middle;

        step = centre[i + 1] - turns - centre[i];
        if (!(fabs(step) > 0.0) || (i > 0 && (step > 0.0) != (before > 0.0)))
            return stericol_fail(context, STERICOL_INPUT, NULL, "longitude", "sort the axis",
                                 "value %zu (%.9g) is out of order", i + 2, centre[i + 1]);
        middle = 0.5 * (centre[i] + (centre[i + 1] - turns));
        bounds[2 * i + 1] = middle;
        bounds[2 * i + 2] = middle + turns;
        span += step;
    }
    /* The signs of the halves are those of the axis. */
    first_half = bounds[1] - centre[0];
    last_half = centre[count - 1] - bounds[2 * count - 2];
    mean = fabs(span) / (double)(count - 1);
    gap = 360.0 - fabs(span);
    if (gap >= 0.5 * mean && gap <= 1.5 * mean)
        first_half = last_half = copysign(0.5 * gap, span);
    bounds[0] = centre[0] - first_half;
    bounds[2 * count - 1] = centre[count - 1] + last_half;
    return STERICOL_OK;
}

/* p beyond a, as far as a is beyond b, on the great circle through both: the mirror image of b in a. */
static stericol_direction beyond(stericol_direction a, stericol_direction b)
{
    return stericol_direction_difference(stericol_direction_scaled(a, 2.0 * stericol_direction_dot(a, b)), b);
}

typedef struct centres {
    size_t rows, columns;
    const double *latitude, *longitude;
} centres;

/* Row `row` of the centres, row 0 and row rows + 1 being extrapolated, with one more column at either end. */
static void padded_row(const centres *grid, size_t row, stericol_direction *out)
{
    size_t columns = grid->columns;

    for (size_t i = 0; i < columns; i++) {
        if (row >= 1 && row <= grid->rows) {
            size_t at = (row - 1) * columns + i;

            out[i + 1] = stericol_direction_of(grid->latitude[at], grid->longitude[at]);
        } else {
            size_t near = row == 0 ? i : (grid->rows - 1) * columns + i;
            size_t far = row == 0 ? near + columns : near - columns;

            out[i + 1] = beyond(stericol_direction_of(grid->latitude[near], grid->longitude[near]),
                                stericol_direction_of(grid->latitude[far], grid->longitude[far]));
        }
    }
    out[0] = beyond(out[1], out[2]);
    out[columns + 1] = beyond(out[columns], out[columns - 1]);
}

stericol_status stericol_cell_corners(stericol_context *context, size_t rows, size_t columns,
                                      const double *latitude, const double *longitude,
                                      double *corner_latitude, double *corner_longitude)
{
    const centres grid = {rows, columns, latitude, longitude};
    stericol_direction *lower, *upper;
    stericol_status status = STERICOL_OK;

    if (rows < 2 || columns < 2)
        return stericol_fail(context, STERICOL_INPUT, NULL, "latitude", BOUNDS_REMEDY,
                             "%zu by %zu cells are too few to tell their corners", rows, columns);
    for (size_t i = 0; i < rows * columns; i++)
        if (fabs(latitude[i]) > 90.0)
            return stericol_fail(context, STERICOL_INPUT, NULL, "latitude", "correct the coordinates",
                                 "value %zu is %.9g degrees", i + 1, latitude[i]);
    lower = stericol_new_array(columns + 2, sizeof *lower);
    upper = stericol_new_array(columns + 2, sizeof *upper);
    if (lower == NULL || upper == NULL) {
        status = stericol_fail_memory(context, 2 * (columns + 2) * sizeof *lower, "corners of cells");
        goto done;
    }
    padded_row(&grid, 0, upper);
    for (size_t row = 0; row <= rows; row++) {
        stericol_direction *swap = lower;

        lower = upper;
        upper = swap;
        padded_row(&grid, row + 1, upper);
        for (size_t i = 0; i <= columns; i++) {
            size_t at = row * (columns + 1) + i;
            stericol_direction sum = stericol_direction_sum(stericol_direction_sum(lower[i], upper[i + 1]),
                                                            stericol_direction_sum(lower[i + 1], upper[i]));

            stericol_point_of(sum, &corner_latitude[at], &corner_longitude[at]);
        }
    }
done:
    free(lower);
    free(upper);
    return status;
}
