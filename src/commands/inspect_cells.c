/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/inspect_inside.h"

#include "base/checked.h"
#include "commands/cells.h"

#include <stdlib.h>

/* Makes the cells and their areas as `change` would, row by row, to learn whether it could. */
static stericol_status try_cells(stericol_session *session, const stericol_grid *grid)
{
    stericol_grid_cells made;
    double *area = stericol_new_doubles(grid->columns);
    stericol_status status = stericol_grid_cells_make(session, grid, &made);

    if (status == STERICOL_OK && area == NULL)
        status = stericol_fail_memory(session->context, 0, "the areas of cells");
    for (size_t row = 0; row < grid->rows && status == STERICOL_OK; row++)
        status = stericol_cell_areas(session->context, &made.cells, STERICOL_AUTHALIC_RADIUS, row, 1, area);
    free(area);
    stericol_grid_cells_free(&made);
    return status;
}

stericol_status stericol_inspect_cells(stericol_session *session, stericol_inspection *inspection)
{
    return stericol_inspect_refuse(session, inspection,
                                   try_cells(session, stericol_epoch_grid(inspection->epoch)));
}
