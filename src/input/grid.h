/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The grid of gridded files: what cf/ reads is turned into rows, columns and levels of one fixed meaning.
 */
#ifndef STERICOL_INPUT_GRID_H
#define STERICOL_INPUT_GRID_H

#include "cf/file.h"
#include "cf/units.h"

#include <stdbool.h>
#include <stddef.h>

typedef enum stericol_vertical_axis {
    STERICOL_VERTICAL_DEPTH,   /* m, positive down */
    STERICOL_VERTICAL_PRESSURE /* dbar, sea pressure */
} stericol_vertical_axis;

/*
 * Rows run along latitude (or y), columns along longitude (or x), both in the file's order; levels run from
 * the surface down, whatever the file's order.  Arrays are owned by the grid.
 */
typedef struct stericol_grid {
    size_t rows, columns, levels;
    bool curvilinear;        /* positions on rows x columns instead of rows and columns */
    double *latitude;        /* degrees north; [rows], or [rows][columns] where curvilinear */
    double *longitude;       /* degrees east, the file's own branch; [columns], or [rows][columns] */
    double *latitude_bounds; /* [rows][2] as in the file, or [rows][columns][corners]; NULL where the file has
                                none */
    double *longitude_bounds; /* likewise [columns][2] */
    size_t corners;           /* 2, or the corners of curvilinear cells */
    double radius;            /* m: the grid mapping's sphere, else 0 */
    double *cell_area; /* m2, [rows][columns]: from cell_measures or --cell-area; NULL where there is none */
    char *cell_area_source; /* says which; NULL where there is none */
    unsigned char *dry;     /* [rows][columns], 1 where --mask says land; NULL without a mask */

    stericol_vertical_axis vertical;
    double *level;        /* [levels], ascending: depth or pressure of the samples */
    double *level_bounds; /* [levels][2] upper and lower limit, same unit; NULL where the file has none */
    /*
     * Where depth differs from column to column (terrain-following levels, thickness fields) `level` holds
     * the nominal values and stericol_epoch_load_depths() gives the true ones.
     */
    bool own_depths;

    char *latitude_name, *longitude_name,
        *level_name; /* as in the file; NULL for a missing (size one) axis */
} stericol_grid;

/* Whether two grids are the same within rounding of float coordinates; false with *difference (static or
   allocated in `text`, at least 160 bytes) saying what differs and where. */
bool stericol_grid_same(const stericol_grid *a, const stericol_grid *b, char *text, size_t room);

#endif
