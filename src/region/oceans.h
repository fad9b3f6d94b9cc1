/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The world's oceans, laid over a grid.  Classes are the values of stericol_ocean. */
#ifndef STERICOL_REGION_OCEANS_H
#define STERICOL_REGION_OCEANS_H

#include "region/cover.h"

enum { STERICOL_OCEANS = 6 }; /* classes, none included */

/* The name of an ocean, 1 <= ocean < STERICOL_OCEANS. */
const char *stericol_ocean_name(size_t ocean);

/* Covers any grid; REGULAR bounds were checked before.  False when memory is out. */
bool stericol_oceans_cover(stericol_cover *cover, const stericol_cells *cells);

#endif
