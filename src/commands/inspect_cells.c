/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/inspect_inside.h"

#include "base/checked.h"
#include "stericol/region.h"

#include <stdlib.h>

/* Limits half way between the positions, where the file has none; a lone row or column gets a width of its
 * own. */
static stericol_status try_bounds(stericol_session *session, bool latitude, size_t count,
                                  const double *centre)
{
    double *bounds;
    stericol_status status;

    if (count < 2)
        return STERICOL_OK;
    bounds = stericol_new_doubles(2 * count);
    if (bounds == NULL)
        return stericol_fail_memory(session->context, 0, "the bounds of cells");
    status = latitude ? stericol_latitude_bounds(session->context, count, centre, bounds)
                      : stericol_longitude_bounds(session->context, count, centre, bounds);
    free(bounds);
    return status;
}

static stericol_status try_corners(stericol_session *session, const stericol_grid *grid)
{
    size_t corners = (grid->rows + 1) * (grid->columns + 1);
    double *latitude = stericol_new_doubles(corners), *longitude = stericol_new_doubles(corners);
    stericol_status status =
        latitude == NULL || longitude == NULL
            ? stericol_fail_memory(session->context, 0, "the corners of cells")
            : stericol_cell_corners(session->context, grid->rows, grid->columns, grid->latitude,
                                    grid->longitude, latitude, longitude);

    free(latitude);
    free(longitude);
    return status;
}

static stericol_status try_areas(stericol_session *session, const stericol_grid *grid)
{
    stericol_cells cells = {.kind = grid->curvilinear ? STERICOL_CELLS_POLYGONS : STERICOL_CELLS_REGULAR,
                            .rows = grid->rows,
                            .columns = grid->columns,
                            .corners = grid->curvilinear ? grid->corners : 0,
                            .latitude = grid->latitude,
                            .longitude = grid->longitude};
    double *area = stericol_new_doubles(grid->columns);
    stericol_status status = STERICOL_OK;

    if (grid->curvilinear) {
        cells.corner_latitude = grid->latitude_bounds;
        cells.corner_longitude = grid->longitude_bounds;
    } else {
        cells.latitude_bounds = grid->latitude_bounds;
        cells.longitude_bounds = grid->longitude_bounds;
    }
    if (area == NULL)
        status = stericol_fail_memory(session->context, 0, "the areas of cells");
    for (size_t row = 0; row < grid->rows && status == STERICOL_OK; row++)
        status = stericol_cell_areas(session->context, &cells, STERICOL_AUTHALIC_RADIUS, row, 1, area);
    free(area);
    return status;
}

stericol_status stericol_inspect_cells(stericol_session *session, stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    stericol_status status = STERICOL_OK;

    if (grid->latitude_bounds != NULL && grid->longitude_bounds != NULL) {
        status = try_areas(session, grid);
    } else if (grid->curvilinear) {
        status = try_corners(session, grid);
    } else {
        if (grid->latitude_bounds == NULL)
            status = try_bounds(session, true, grid->rows, grid->latitude);
        if (status == STERICOL_OK && grid->longitude_bounds == NULL)
            status = try_bounds(session, false, grid->columns, grid->longitude);
    }
    return stericol_inspect_refuse(session, inspection, status);
}
