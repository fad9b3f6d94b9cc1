/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Dimensions and coordinates of a result file. */
#ifndef STERICOL_RESULT_AXES_H
#define STERICOL_RESULT_AXES_H

#include "cf/write.h"
#include "result/change.h"

typedef struct stericol_result_axes {
    size_t rows, columns;
    bool curvilinear;
    bool contiguous;           /* the layers together are one depth range: column_depth describes it */
    size_t row, column, layer; /* dimensions */
    size_t layer_depth, layer_bounds, column_depth, column_bounds; /* variables */
    double south, north, west, east;                               /* degrees, of the cells where known */
} stericol_result_axes;

/*
 * Defines the dimensions and writes the horizontal coordinates; the depths are defined and written later,
 * once they are known.  Longitudes of a regular grid are shifted by whole circles where their branch breaks,
 * since CF wants a coordinate variable to be monotonic.
 */
stericol_status stericol_result_axes_write(stericol_context *context, stericol_cf_writer *writer,
                                           const stericol_change_layout *layout, stericol_result_axes *axes);

/* The depths of the layers and of the column; bounds in m, all finite. */
stericol_status stericol_result_axes_write_depths(stericol_context *context, stericol_cf_writer *writer,
                                                  const stericol_result_axes *axes, size_t layers,
                                                  const double (*bounds)[2]);

#endif
