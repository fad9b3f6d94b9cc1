/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * How the grid is cut.  Chunks decide: a tile's rows and a slab's levels are multiples of what the files
 * want, so that a chunk is inflated once.  Where the memory allowed is too small for that, slabs and tiles
 * shrink and chunks are inflated again; the notice says how often.
 */
#include "commands/pair_inside.h"

#include "base/checked.h"

#include <math.h>
#include <stdint.h>

/* Enough columns to keep the workers busy, and enough values that the cost of starting a slab does not show.
 */
static const size_t ENOUGH_COLUMNS = 65536, ENOUGH_VALUES = 500000;

static size_t smaller(size_t a, size_t b)
{
    return a < b ? a : b;
}

/* The memory that a plan takes, as a double so that nothing overflows. */
static double plan_bytes(const stericol_pair_work *work, size_t rows, size_t levels)
{
    const stericol_pair *pair = work->pair;
    size_t columns = work->grid->columns, count = rows * columns;
    size_t row_length = work->grid->curvilinear ? 1 : columns;
    double point = 2.0 * 4.0 * sizeof(double); /* two slabs: temperature and salinity of two epochs */
    double bytes;

    if (work->grid->own_depths)
        point += 2.0 * 3.0 * sizeof(double);
    if (pair->average_integrals)
        point += 26.0 * sizeof(double); /* the arrays of pair_integral.c and what it fills */
    bytes = point * (double)count * (double)levels;
    bytes += (double)stericol_sweep_bytes(&pair->column, count, row_length, pair->sea_floor != NULL);
    bytes += (double)count; /* wet */
    for (size_t e = 0; e < work->epoch_count; e++)
        bytes += (double)stericol_epoch_bytes(pair->epochs[e].epoch, levels, rows);
    return bytes;
}

/* The least common multiple, or `limit` where that is smaller. */
static size_t common_multiple(size_t a, size_t b, size_t limit)
{
    size_t x = a, y = b, product;

    while (y != 0) {
        size_t rest = x % y;

        x = y;
        y = rest;
    }
    if (!stericol_multiply_sizes(a / x, b, &product))
        return limit;
    return smaller(product, limit);
}

static void wanted_strides(const stericol_pair_work *work, size_t *levels, size_t *rows)
{
    *levels = *rows = 1;
    for (size_t e = 0; e < work->epoch_count; e++) {
        size_t epoch_levels, epoch_rows;

        stericol_epoch_stride(work->pair->epochs[e].epoch, &epoch_levels, &epoch_rows);
        *levels = common_multiple(*levels, epoch_levels == 0 ? 1 : epoch_levels, work->grid->levels);
        *rows = common_multiple(*rows, epoch_rows == 0 ? 1 : epoch_rows, work->grid->rows);
    }
    /* Levels that no layer needs are not read. */
    *levels = smaller(*levels, work->level_count);
}

/* Makes the tile and the slab larger, by whole strides, while that pays and fits. */
static void widen(const stericol_pair_work *work, size_t stride_levels, size_t stride_rows, double budget,
                  stericol_pair_plan *plan)
{
    size_t columns = work->grid->columns;

    while (plan->rows < work->grid->rows && plan->rows * columns < ENOUGH_COLUMNS) {
        size_t rows = smaller(plan->rows + stride_rows, work->grid->rows);

        if (plan_bytes(work, rows, plan->levels) > budget)
            break;
        plan->rows = rows;
    }
    while (plan->levels < work->level_count && plan->rows * columns * plan->levels < ENOUGH_VALUES) {
        size_t levels = smaller(plan->levels + stride_levels, work->level_count);

        if (plan_bytes(work, plan->rows, levels) > budget)
            break;
        plan->levels = levels;
    }
}

stericol_status stericol_pair_plan_make(stericol_pair_work *work, stericol_pair_plan *plan)
{
    double budget = (double)work->pair->memory;
    size_t stride_levels, stride_rows;

    wanted_strides(work, &stride_levels, &stride_rows);
    *plan = (stericol_pair_plan){.rows = stride_rows, .levels = stride_levels, .inflations = 1.0};
    while (plan_bytes(work, plan->rows, plan->levels) > budget && plan->levels > 1)
        plan->levels = (plan->levels + 1) / 2;
    while (plan_bytes(work, plan->rows, plan->levels) > budget && plan->rows > 1)
        plan->rows = (plan->rows + 1) / 2;
    if (plan_bytes(work, plan->rows, plan->levels) > budget)
        return stericol_fail(work->context, STERICOL_MEMORY, NULL, NULL, "give a larger --memory",
                             "the smallest tile takes %.0f MiB, and --memory leaves %.0f MiB",
                             ceil(plan_bytes(work, plan->rows, plan->levels) / 1048576.0),
                             budget / 1048576.0);
    plan->inflations =
        ceil((double)stride_levels / (double)plan->levels) * ceil((double)stride_rows / (double)plan->rows);
    if (plan->rows == stride_rows && plan->levels == stride_levels)
        widen(work, stride_levels, stride_rows, budget, plan);
    return STERICOL_OK;
}
