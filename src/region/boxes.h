/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Boxes between meridians and parallels. */
#ifndef STERICOL_REGION_BOXES_H
#define STERICOL_REGION_BOXES_H

#include "stericol/region.h"

/* STERICOL_USAGE with a message that quotes `text` (NULL: the box's name) where the numbers make no box. */
stericol_status stericol_box_check(stericol_context *context, const stericol_box *box, const char *text);
/* 360 for the whole circle, else 0 < width < 360. */
double stericol_box_width(const stericol_box *box);
bool stericol_box_holds(const stericol_box *box, double latitude, double longitude);
/*
 * Exact shares of REGULAR cells that passed the check: row_share[rows], column_share[columns]; a cell's share
 * is their product.
 */
void stericol_box_shares(const stericol_box *box, const stericol_cells *cells, double *row_share,
                         double *column_share);
/* The share of each row of REGULAR cells north of the equator, and south of it; they add to 1 exactly. */
void stericol_hemisphere_shares(const stericol_cells *cells, bool north, double *row_share);

#endif
