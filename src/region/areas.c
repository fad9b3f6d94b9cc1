/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Areas of cells on the sphere. */
#include "region/sphere.h"

#include <assert.h>
#include <math.h>

double stericol_polygon_area(double radius, size_t corners, const double *latitude, const double *longitude)
{
    stericol_direction first, before, here;
    double angle = 0.0;

    assert(corners >= 3);
    first = stericol_direction_of(latitude[0], longitude[0]);
    before = stericol_direction_of(latitude[1], longitude[1]);
    for (size_t i = 2; i < corners; i++) {
        here = stericol_direction_of(latitude[i], longitude[i]);
        angle += stericol_triangle_angle(first, before, here);
        before = here;
    }
    return radius * radius * fabs(angle);
}

stericol_status stericol_cell_areas(stericol_context *context, const stericol_cells *cells, double radius,
                                    size_t first_row, size_t row_count, double *area)
{
    double corner_latitude[STERICOL_MOST_CORNERS], corner_longitude[STERICOL_MOST_CORNERS];
    bool regular = cells->kind == STERICOL_CELLS_REGULAR;
    stericol_status status;

    assert(radius > 0.0 && first_row <= cells->rows && row_count <= cells->rows - first_row);
    status = stericol_check_cells(context, cells);
    if (status != STERICOL_OK)
        return status;
    for (size_t row = first_row; row < first_row + row_count; row++) {
        double *out = area + (row - first_row) * cells->columns;
        double south, north, zone = 0.0, west, width;

        if (regular) {
            stericol_row_span(cells, row, &south, &north);
            zone = radius * radius * stericol_sine_difference(south, north) * STERICOL_RADIANS;
        }
        for (size_t column = 0; column < cells->columns; column++) {
            if (regular) {
                stericol_column_span(cells, column, &west, &width);
                out[column] = zone * width;
            } else {
                size_t count =
                    stericol_corners_of_cell(cells, row, column, corner_latitude, corner_longitude);

                out[column] = stericol_polygon_area(radius, count, corner_latitude, corner_longitude);
            }
        }
    }
    return STERICOL_OK;
}
