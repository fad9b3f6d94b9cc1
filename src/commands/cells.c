/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/cells.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>

/* A grid of one row or column has no neighbours to take a width from. */
static const double LONE_WIDTH = 1.0; /* degrees */

static double *lone_bounds(double centre)
{
    double *bounds = stericol_new_doubles(2);

    if (bounds != NULL) {
        bounds[0] = centre - 0.5 * LONE_WIDTH;
        bounds[1] = centre + 0.5 * LONE_WIDTH;
    }
    return bounds;
}

static stericol_status make_bounds(stericol_session *session, const stericol_grid *grid, bool latitude,
                                   double **bounds)
{
    size_t count = latitude ? grid->rows : grid->columns;
    const double *centre = latitude ? grid->latitude : grid->longitude;

    if (count == 1) {
        *bounds = lone_bounds(centre[0]);
        if (*bounds != NULL && latitude) {
            (*bounds)[0] = fmax((*bounds)[0], -90.0);
            (*bounds)[1] = fmin((*bounds)[1], 90.0);
        }
        stericol_session_warn(session,
                              "the grid has one %s and no bounds: its cells are taken as %g degree wide",
                              latitude ? "row" : "column", LONE_WIDTH);
        return *bounds == NULL ? stericol_fail_memory(session->context, 0, "the bounds of cells")
                               : STERICOL_OK;
    }
    *bounds = stericol_new_doubles(2 * count);
    if (*bounds == NULL)
        return stericol_fail_memory(session->context, 0, "the bounds of cells");
    return latitude ? stericol_latitude_bounds(session->context, count, centre, *bounds)
                    : stericol_longitude_bounds(session->context, count, centre, *bounds);
}

static stericol_status make_corners(stericol_session *session, const stericol_grid *grid,
                                    stericol_grid_cells *made)
{
    size_t corners = (grid->rows + 1) * (grid->columns + 1);

    made->latitude_limits = stericol_new_doubles(corners);
    made->longitude_limits = stericol_new_doubles(corners);
    if (made->latitude_limits == NULL || made->longitude_limits == NULL)
        return stericol_fail_memory(session->context, 0, "the corners of cells");
    made->cells.kind = STERICOL_CELLS_LATTICE;
    made->cells.corner_latitude = made->latitude_limits;
    made->cells.corner_longitude = made->longitude_limits;
    return stericol_cell_corners(session->context, grid->rows, grid->columns, grid->latitude, grid->longitude,
                                 made->latitude_limits, made->longitude_limits);
}

stericol_status stericol_grid_cells_make(stericol_session *session, const stericol_grid *grid,
                                         stericol_grid_cells *made)
{
    bool has_bounds = grid->latitude_bounds != NULL && grid->longitude_bounds != NULL;
    stericol_status status = STERICOL_OK;

    *made = (stericol_grid_cells){0};
    made->cells = (stericol_cells){.rows = grid->rows,
                                   .columns = grid->columns,
                                   .latitude = grid->latitude,
                                   .longitude = grid->longitude};
    made->made = !has_bounds;
    if (grid->curvilinear && has_bounds) {
        made->cells.kind = STERICOL_CELLS_POLYGONS;
        made->cells.corners = grid->corners;
        made->cells.corner_latitude = grid->latitude_bounds;
        made->cells.corner_longitude = grid->longitude_bounds;
    } else if (grid->curvilinear) {
        status = make_corners(session, grid, made);
    } else {
        made->cells.kind = STERICOL_CELLS_REGULAR;
        if (grid->latitude_bounds == NULL)
            status = make_bounds(session, grid, true, &made->latitude_limits);
        if (status == STERICOL_OK && grid->longitude_bounds == NULL)
            status = make_bounds(session, grid, false, &made->longitude_limits);
        made->cells.latitude_bounds =
            grid->latitude_bounds != NULL ? grid->latitude_bounds : made->latitude_limits;
        made->cells.longitude_bounds =
            grid->longitude_bounds != NULL ? grid->longitude_bounds : made->longitude_limits;
    }
    return status;
}

void stericol_grid_cells_free(stericol_grid_cells *cells)
{
    free(cells->latitude_limits);
    free(cells->longitude_limits);
    *cells = (stericol_grid_cells){0};
}
