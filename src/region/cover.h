/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Which class every cell of a grid belongs to: one byte a cell, and a list of the cells that are shared. */
#ifndef STERICOL_REGION_COVER_H
#define STERICOL_REGION_COVER_H

#include "stericol/region.h"

#include <stdint.h>

enum { STERICOL_COVER_SHARED = 255, STERICOL_COVER_MOST_CLASSES = 8 };

typedef struct stericol_cover {
    size_t rows, columns;
    size_t classes; /* classes 0 .. classes - 1; shared cells allow at most STERICOL_COVER_MOST_CLASSES */
    unsigned char *cell; /* [rows][columns]: the class, or STERICOL_COVER_SHARED */
    size_t *row_start;   /* [rows + 1] into the list of shared cells */
    size_t shared, room; /* cells in the list; cells that it has room for */
    uint32_t *column;    /* [shared] */
    double *share;       /* [shared][classes], adding to 1 exactly */
} stericol_cover;

/* False when memory is out; the cover is then empty and may be freed. */
bool stericol_cover_start(stericol_cover *cover, size_t rows, size_t columns, size_t classes);
void stericol_cover_free(stericol_cover *cover);
/*
 * Enters a cell; cells come row by row, each row from the first column on.  `share` [classes] adds to about
 * 1; it is rounded to multiples of 2^-40 and its largest member takes up the rest.  False when memory is out.
 */
bool stericol_cover_put(stericol_cover *cover, size_t row, size_t column, const double *share);
/* The same for a cell that is wholly of one class. */
void stericol_cover_put_whole(stericol_cover *cover, size_t row, size_t column, size_t class);
/* The share of `class` in each cell of a row: fraction[columns]. */
void stericol_cover_row(const stericol_cover *cover, size_t class, size_t row, double *fraction);

/* The class of a point. */
typedef size_t stericol_classifier(const void *what, double latitude, double longitude);

/*
 * Covers a LATTICE or POLYGONS grid by sampling, see stericol_regions_prepare().  The class of a cell without
 * a centre is 0.  False when memory is out.
 */
bool stericol_cover_sample(stericol_cover *cover, const stericol_cells *cells, size_t classes,
                           stericol_classifier *classify, const void *what);

#endif
