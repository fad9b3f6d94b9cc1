/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The cells of a grid as the region room takes them, with limits made where a file has none. */
#ifndef STERICOL_COMMANDS_CELLS_H
#define STERICOL_COMMANDS_CELLS_H

#include "commands/session.h"
#include "input/grid.h"
#include "stericol/region.h"

typedef struct stericol_grid_cells {
    stericol_cells cells; /* borrows from the grid and from the two below */
    double *latitude_limits,
        *longitude_limits; /* made here: bounds or corners; NULL where the file has them */
    bool made;             /* whether any limit was made */
} stericol_grid_cells;

/*
 * STERICOL_INPUT: positions that no cells can be made of; STERICOL_MEMORY.  Call stericol_grid_cells_free()
 * in any case; the grid must outlive the cells.
 */
stericol_status stericol_grid_cells_make(stericol_session *session, const stericol_grid *grid,
                                         stericol_grid_cells *cells);
void stericol_grid_cells_free(stericol_grid_cells *cells);

#endif
