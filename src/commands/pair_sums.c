/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/pair_inside.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>

size_t stericol_pair_sum_count(const stericol_pair *pair)
{
    return (pair->column.layer_count + 1) * STERICOL_PAIR_SUMS + 1; /* the last is the region's sea area */
}

typedef struct sum_work {
    stericol_pair_work *work;
    const stericol_pair_tile *tile;
} sum_work;

/* Quantities of the sweep in the order of STERICOL_PAIR_SUM_... */
static const stericol_column_quantity summed[] = {STERICOL_COLUMN_TOTAL, STERICOL_COLUMN_THERMOSTERIC,
                                                  STERICOL_COLUMN_HALOSTERIC, STERICOL_COLUMN_HEAT,
                                                  STERICOL_COLUMN_HEAT_MAGNITUDE};

/*
 * Whether a column counts for a layer, or for all of them together: complete, or wholly below the sea floor,
 * where its part is zero.  So the divisor does not depend on which other layers are asked for.
 */
static bool counts(const stericol_sweep *sweep, size_t layer, size_t layers, size_t column)
{
    size_t first = layer == layers ? 0 : layer, last = layer == layers ? layers - 1 : layer;

    for (size_t k = first; k <= last; k++)
        if (stericol_sweep_layer_state(sweep, k)[column] == STERICOL_LAYER_INCOMPLETE)
            return false;
    return true;
}

/* What one row adds to one layer's sums (layer == layers: the whole column). */
static void sum_layer_row(const sum_work *sum, stericol_region_totals *totals, size_t region, size_t layer,
                          size_t tile_row, const double *weight, double *value)
{
    const stericol_pair_work *work = sum->work;
    size_t layers = work->pair->column.layer_count, columns = work->grid->columns, at = tile_row * columns;
    size_t first = layer * STERICOL_PAIR_SUMS, which = layer == layers ? STERICOL_WHOLE_COLUMN : layer;
    const signed char *flags = stericol_sweep_flags(sum->tile->sweep) + at;

    for (size_t q = 0; q < sizeof summed / sizeof summed[0]; q++) {
        const double *result = stericol_sweep_result(sum->tile->sweep, summed[q], which) + at;

        stericol_region_totals_add_row(totals, region, first + q, columns, weight, result);
    }
    for (size_t i = 0; i < columns; i++)
        value[i] = counts(sum->tile->sweep, layer, layers, at + i) ? 1.0 : (double)NAN;
    stericol_region_totals_add_row(totals, region, first + STERICOL_PAIR_SUM_AREA, columns, weight, value);
    for (size_t i = 0; i < columns; i++)
        if (weight[i] > 0.0 && isnan(value[i]) && flags[i] != STERICOL_COLUMN_NO_DATA)
            stericol_region_totals_add(totals, region, first + STERICOL_PAIR_SUM_INCOMPLETE, 1.0, 1.0);
}

/*
 * Sea, as region_area counts it: by the sea floor, by the mask, or by any value on the first level.  Where
 * there is a value there is water, though the sea floor's file may have land there: else more than all were
 * covered.
 */
static bool is_sea(const sum_work *sum, size_t grid_at, size_t tile_at)
{
    const stericol_pair *pair = sum->work->pair;

    if (pair->area_from_floor)
        return pair->sea_floor[grid_at] > 0.0 || sum->tile->wet[tile_at] != 0;
    if (pair->area_from_mask)
        return sum->work->grid->dry[grid_at] == 0;
    return sum->tile->wet[tile_at] != 0;
}

static void sum_rows(void *argument, size_t from, size_t to, size_t worker)
{
    const sum_work *sum = argument;
    const stericol_pair *pair = sum->work->pair;
    size_t columns = sum->work->grid->columns, layers = pair->column.layer_count;
    double *buffers = sum->work->row_buffers + worker * 2 * columns;
    double *weight = buffers, *value = buffers + columns;
    stericol_region_totals *totals = sum->work->totals[worker];

    for (size_t row = from; row < to; row++)
        for (size_t region = 0; region < stericol_regions_count(pair->regions); region++) {
            size_t grid_at = (sum->tile->row0 + row) * columns;

            stericol_regions_row(pair->regions, region, sum->tile->row0 + row, weight);
            for (size_t i = 0; i < columns; i++)
                weight[i] *= pair->cell_area[grid_at + i];
            /* A lone layer is the whole column: one sum serves both. */
            for (size_t layer = layers == 1 ? 1 : 0; layer <= layers; layer++)
                sum_layer_row(sum, totals, region, layer, row, weight, value);
            for (size_t i = 0; i < columns; i++)
                value[i] = is_sea(sum, grid_at + i, row * columns + i) ? 1.0 : (double)NAN;
            stericol_region_totals_add_row(totals, region, stericol_pair_sum_count(pair) - 1, columns, weight,
                                           value);
        }
}

void stericol_pair_sum_tile(stericol_pair_work *work, const stericol_pair_tile *tile)
{
    sum_work sum = {work, tile};

    work->executor->run(work->executor, tile->rows, 4, sum_rows, &sum);
}
