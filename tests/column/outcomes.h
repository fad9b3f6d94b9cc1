/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One column after another through the sweep, and what came out of it. */
#ifndef STERICOL_TESTS_COLUMN_OUTCOMES_H
#define STERICOL_TESTS_COLUMN_OUTCOMES_H

#include "column/columns.h"

/*
 * Tolerances: the two volumes are rounded to 2^-53 each, so that their relative difference is wrong by up to
 * 4e-16 whatever its size, and a column of up to 4000 m by 2e-12 m.  For the ratio of two such sums relative
 * to 0.01 m and more that is a relative 1e-10 at the most.
 */
static const double rounding = 2e-12, rounded_ratio = 1e-10;
static const double a = 2e-4, density = 1027.0;
static const stericol_water linear_water = {STERICOL_EQUATION_LINEAR, 2e-4, 7.5e-4, 1027.0};
static const stericol_water polynomial = STERICOL_WATER_DEFAULT;

static inline stericol_column_options plain_options(stericol_vertical vertical)
{
    stericol_column_options options = stericol_column_options_default();
    options.water = &linear_water;
    options.vertical = vertical;
    return options;
}

/* One column with a warming at every level. */
static inline field one_column(size_t levels, const double *position, const double *warming)
{
    field f = new_field(1, 1, levels);
    for (size_t k = 0; k < levels; k++) {
        f.position[k] = position[k];
        f.temperature[0][k] = 10.0 - 0.5 * warming[k];
        f.temperature[1][k] = 10.0 + 0.5 * warming[k];
    }
    return f;
}

/* Cells with given limits, limits[levels + 1]. */
static inline field one_column_of_cells(size_t levels, const double *limits, const double *warming)
{
    field f = one_column(levels, limits, warming);
    for (size_t k = 0; k < levels; k++) {
        f.upper[k] = limits[k];
        f.lower[k] = limits[k + 1];
    }
    return f;
}

/* What came of a single column. */
typedef struct outcome {
    int flag;
    unsigned char state[8];
    double layer[8];
    double total;
    double heat;
    double depth;
    double deepest;
} outcome;

static inline outcome run(const stericol_column_options *options, const field *f)
{
    outcome o = {0};
    stericol_sweep *sweep = sweep_field(options, f);
    o.flag = stericol_sweep_flags(sweep)[0];
    assert_int_equal(stericol_sweep_count(sweep), f->count);
    assert_int_equal(stericol_sweep_layer_count(sweep), options->layer_count);
    for (size_t k = 0; k < options->layer_count; k++) {
        o.state[k] = stericol_sweep_layer_state(sweep, k)[0];
        o.layer[k] = result_of(sweep, STERICOL_COLUMN_TOTAL, k, 0);
    }
    o.total = result_of(sweep, STERICOL_COLUMN_TOTAL, STERICOL_WHOLE_COLUMN, 0);
    o.heat = result_of(sweep, STERICOL_COLUMN_HEAT, STERICOL_WHOLE_COLUMN, 0);
    o.depth = result_of(sweep, STERICOL_COLUMN_DEPTH, STERICOL_WHOLE_COLUMN, 0);
    o.deepest = stericol_sweep_deepest(sweep);
    stericol_sweep_free(sweep);
    return o;
}

/* Runs and drops the column. */
static inline outcome run_once(const stericol_column_options *options, field f)
{
    const outcome o = run(options, &f);
    free_field(&f);
    return o;
}

#endif
