/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Two-dimensional fields that go with a grid: bathymetry, masks with flags. */
#ifndef STERICOL_INPUT_FIELD2D_H
#define STERICOL_INPUT_FIELD2D_H

#include "input/grid.h"

/*
 * Sea floor depth, m positive down, [rows][columns]; NaN where land or unknown.  Recognised by standard_name
 * (the sea_floor_depth_below_... family), else the only two-dimensional variable in metres; heights positive
 * up (altitude, negative in the sea) are turned.  On another regular grid: mean of the source cells whose
 * centres lie in the cell, else the nearest.
 */
stericol_status stericol_input_bathymetry(stericol_context *context, const stericol_cf_units *units,
                                          const char *path, const stericol_grid *grid, double **depth);

/* A region mask: an integer variable with flag_values and flag_meanings on the same grid. */
typedef struct stericol_input_mask {
    size_t count;         /* flags, those called none, land or unset left out */
    char **names;         /* flag_meanings */
    unsigned char *index; /* [rows][columns]: 1 + index of the flag, 0 for none */
} stericol_input_mask;
stericol_status stericol_input_mask_read(stericol_context *context, const char *path,
                                         const stericol_grid *grid, stericol_input_mask *mask);
void stericol_input_mask_free(stericol_input_mask *mask);

#endif
