/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Sums that can be done by hand (see columns.h), layers, and the rules about where columns begin and end.
 *
 * Tolerances: the two volumes are rounded to 2^-53 each, so that their relative difference is wrong by up to
 * 4e-16 whatever its size, and a column of up to 4000 m by 2e-12 m.  For the ratio of two such sums relative
 * to 0.01 m and more that is a relative 1e-10 at the most.
 */
#include "column/columns.h"

#include <string.h>

static const double rounding = 2e-12, rounded_ratio = 1e-10;
static const double a = 2e-4, density = 1027.0;
static const stericol_water linear_water = {STERICOL_EQUATION_LINEAR, 2e-4, 7.5e-4, 1027.0};
static const stericol_water polynomial = STERICOL_WATER_DEFAULT;

static stericol_column_options plain_options(stericol_vertical vertical)
{
    stericol_column_options options = stericol_column_options_default();
    options.water = &linear_water;
    options.vertical = vertical;
    return options;
}

/* One column with a warming at every level. */
static field one_column(size_t levels, const double *position, const double *warming)
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
static field one_column_of_cells(size_t levels, const double *limits, const double *warming)
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

static outcome run(const stericol_column_options *options, const field *f)
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
static outcome run_once(const stericol_column_options *options, field f)
{
    const outcome o = run(options, &f);
    free_field(&f);
    return o;
}

static void uniform_warming_is_plain_arithmetic(void **state)
{
    (void)state;
    const double position[] = {0, 100, 500, 2000}, warming[] = {0.2, 0.2, 0.2, 0.2};
    field f = one_column(4, position, warming);
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    stericol_sweep *sweep = sweep_field(&options, &f);
    const size_t whole = STERICOL_WHOLE_COLUMN;
    assert_close(result_of(sweep, STERICOL_COLUMN_TOTAL, whole, 0), a * 0.2 * 2000.0, rounding);
    assert_close(result_of(sweep, STERICOL_COLUMN_THERMOSTERIC, whole, 0), a * 0.2 * 2000.0, rounding);
    assert_close(result_of(sweep, STERICOL_COLUMN_HALOSTERIC, whole, 0), 0.0, rounding);
    assert_same_number(result_of(sweep, STERICOL_COLUMN_REMAINDER, whole, 0), 0.0);
    assert_relative(result_of(sweep, STERICOL_COLUMN_HEAT, whole, 0),
                    STERICOL_HEAT_CAPACITY * density * 0.2 * 2000.0, 1e-14); /* rounding */
    assert_relative(result_of(sweep, STERICOL_COLUMN_EFFICIENCY, whole, 0),
                    a / (STERICOL_HEAT_CAPACITY * density), rounded_ratio);
    assert_relative(result_of(sweep, STERICOL_COLUMN_EXPANSION, whole, 0), a, 1e-14); /* rounding */
    assert_same_number(result_of(sweep, STERICOL_COLUMN_DEPTH, whole, 0), 2000.0);
    assert_int_equal(stericol_sweep_flags(sweep)[0], STERICOL_COLUMN_END_OF_DATA);
    assert_same_number(stericol_sweep_deepest(sweep), 2000.0);
    stericol_sweep_free(sweep);
    free_field(&f);
}

/* An ocean of 1.4e18 m3 on 3.6e14 m2 that warms by 0.2 K with 1.7e-4 1/K rises by about 0.13 m (common
   practice, no source): the product is 0.1322 m. */
static void whole_ocean_rises_by_thirteen_centimetres(void **state)
{
    (void)state;
    const double depth = 1.4e18 / 3.6e14;
    const stericol_water water = {STERICOL_EQUATION_LINEAR, 1.7e-4, 7.5e-4, 1027.0};
    const double limits[] = {0, depth}, warming[] = {0.2};
    field f = one_column_of_cells(1, limits, warming);
    stericol_column_options options = plain_options(STERICOL_VERTICAL_CELLS);
    options.water = &water;
    const outcome o = run_once(&options, f);
    assert_close(o.total, 0.13, 0.005); /* two digits */
    assert_close(o.total, 1.7e-4 * 0.2 * depth, rounding);
}

/* Warmings 1, 2, 4 at 0, 100, 300 m: between samples the warming is linear. */
static void limits_cut_the_linear_integrand_exactly(void **state)
{
    (void)state;
    const double position[] = {0, 100, 300}, warming[] = {1, 2, 4};
    const stericol_layer layers[] = {{0, 50}, {50, 200}, {200, 250}, {250, BOTTOM}};
    /* 0..50: (1 + 1.5)/2*50 = 62.5; 50..200: (1.5+2)/2*50 + (2+3)/2*100 = 337.5; 200..250: (3+3.5)/2*50 =
       162.5; 250..300: (3.5+4)/2*50 = 187.5. */
    const double expected[] = {62.5, 337.5, 162.5, 187.5};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.layers = layers;
    options.layer_count = 4;
    const outcome o = run_once(&options, one_column(3, position, warming));
    double sum = 0.0;
    for (int k = 0; k < 4; k++) {
        assert_close(o.layer[k], a * expected[k], rounding);
        assert_int_equal(o.state[k], STERICOL_LAYER_COMPLETE);
        sum += o.layer[k];
    }
    assert_same_number(o.total, sum); /* layers side by side add up to the column to the bit */
    assert_close(o.total, a * 750.0, rounding);
    assert_same_number(o.depth, 300.0);
}

static void limits_cut_cells_in_proportion(void **state)
{
    (void)state;
    const double limits[] = {0, 100, 300, 600}, warming[] = {1, 2, 4};
    /* Overlapping, with a hole from 400 to 500. */
    const stericol_layer layers[] = {{0, 150}, {50, 400}, {500, 600}, {120, 130}};
    /* 100*1 + 50*2; 50*1 + 200*2 + 100*4; 100*4; 10*2. */
    const double expected[] = {200, 850, 400, 20};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_CELLS);
    options.layers = layers;
    options.layer_count = 4;
    const outcome o = run_once(&options, one_column_of_cells(3, limits, warming));
    for (int k = 0; k < 4; k++)
        assert_close(o.layer[k], a * expected[k], rounding);
    /* Each depth once: 0..400 and 500..600. */
    assert_close(o.total, a * (100.0 + 400.0 + 400.0 + 400.0), rounding);
    assert_same_number(o.depth, 500.0);
    assert_int_equal(o.flag, STERICOL_COLUMN_COMPLETE);
    assert_same_number(o.deepest, 600.0);
}

static void attributions_keep_their_rules(void **state)
{
    (void)state;
    const double position[] = {0, 400, 1000}, warming[] = {1, 0.5, -0.25}, salting[] = {0.2, -0.1, 0.05};
    const stericol_attribution all[] = {STERICOL_ATTRIBUTION_SYMMETRIC, STERICOL_ATTRIBUTION_EARLIER,
                                        STERICOL_ATTRIBUTION_LINEAR};
    for (size_t k = 0; k < 3; k++) {
        field f = one_column(3, position, warming);
        for (size_t i = 0; i < 3; i++) {
            f.salinity[0][i] = 35.0 - 0.5 * salting[i];
            f.salinity[1][i] = 35.0 + 0.5 * salting[i];
        }
        stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
        options.attribution = all[k];
        /* Linear water: no cross term, so all three agree.  Warming: 300 + 75 = (1+.5)/2*400 +
         * (.5-.25)/2*600. */
        stericol_sweep *sweep = sweep_field(&options, &f);
        const double thermosteric = result_of(sweep, STERICOL_COLUMN_THERMOSTERIC, 0, 0);
        const double halosteric = result_of(sweep, STERICOL_COLUMN_HALOSTERIC, 0, 0);
        assert_close(thermosteric, a * 375.0, rounding);
        /* (.2-.1)/2*400 + (-.1+.05)/2*600 = 20 - 15. */
        assert_close(halosteric, -7.5e-4 * 5.0, rounding);
        assert_close(result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 0), thermosteric + halosteric, rounding);
        assert_close(result_of(sweep, STERICOL_COLUMN_REMAINDER, 0, 0), 0.0, rounding);
        stericol_sweep_free(sweep);
        /* Real water: the symmetric parts close, the others leave what they say they leave. */
        options.water = &polynomial;
        sweep = sweep_field(&options, &f);
        const double total = result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 0);
        const double parts = result_of(sweep, STERICOL_COLUMN_THERMOSTERIC, 0, 0) +
                             result_of(sweep, STERICOL_COLUMN_HALOSTERIC, 0, 0);
        const double remainder = result_of(sweep, STERICOL_COLUMN_REMAINDER, 0, 0);
        if (k == 0) {
            assert_close(total, parts, 1e-16); /* the same differences of volume, in another order */
            assert_same_number(remainder, 0.0);
        } else {
            assert_close(remainder, total - parts, 1e-16); /* the same subtraction in another order */
            assert_true(fabs(remainder) > 1e-9);
            assert_true(fabs(remainder) < 0.01 * fabs(total));
        }
        stericol_sweep_free(sweep);
        free_field(&f);
    }
}

/* Warming above, as much cooling below: height and heat cancel, their ratio means nothing. */
static void efficiency_is_missing_where_heat_cancels(void **state)
{
    (void)state;
    const double limits[] = {0, 100, 200};
    /* |heat| over turnover: (1 - w)/(1 + w); 0.3 at w = 7/13 = 0.538. */
    const double below[] = {-0.53, -0.55};
    for (int k = 0; k < 2; k++) {
        const double warming[] = {1.0, below[k]};
        field f = one_column_of_cells(2, limits, warming);
        stericol_column_options options = plain_options(STERICOL_VERTICAL_CELLS);
        stericol_sweep *sweep = sweep_field(&options, &f);
        const double efficiency = result_of(sweep, STERICOL_COLUMN_EFFICIENCY, 0, 0);
        if (k == 0)
            assert_relative(efficiency, a / (STERICOL_HEAT_CAPACITY * density), rounded_ratio);
        else
            assert_nan(efficiency);
        assert_relative(result_of(sweep, STERICOL_COLUMN_HEAT, 0, 0),
                        STERICOL_HEAT_CAPACITY * density * 100.0 * (1.0 + below[k]), 1e-13); /* rounding */
        stericol_sweep_free(sweep);
        free_field(&f);
    }
}

static void every_flag_can_be_reached(void **state)
{
    (void)state;
    const double position[] = {0, 50, 100, 150, 200, 250};
    const stericol_layer shallow[] = {{0, 120}}, deep[] = {{0, 200}};
    const double full[] = {1, 1, 1, 1, 1, 1}, ends[] = {1, 1, 1, MISSING, MISSING, MISSING};
    const double none[] = {MISSING, MISSING, MISSING, MISSING, MISSING, MISSING};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);

    assert_int_equal(run_once(&options, one_column(6, position, full)).flag, STERICOL_COLUMN_END_OF_DATA);
    assert_int_equal(run_once(&options, one_column(6, position, ends)).flag, STERICOL_COLUMN_SEA_FLOOR);
    outcome o = run_once(&options, one_column(6, position, none));
    assert_int_equal(o.flag, STERICOL_COLUMN_NO_DATA);
    assert_int_equal(o.state[0], STERICOL_LAYER_INCOMPLETE);
    assert_nan(o.total);
    assert_nan(o.deepest);

    options.layers = shallow;
    o = run_once(&options, one_column(6, position, full));
    assert_int_equal(o.flag, STERICOL_COLUMN_COMPLETE);
    assert_close(o.total, a * 120.0, rounding);
    assert_same_number(o.deepest, 120.0);
    /* The column ends at 100 m, at the sea floor: the layer 0..200 is complete there. */
    options.layers = deep;
    o = run_once(&options, one_column(6, position, ends));
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    assert_int_equal(o.state[0], STERICOL_LAYER_COMPLETE);
    assert_close(o.total, a * 100.0, rounding);

    /* Epochs that end at different levels. */
    field f = one_column(6, position, full);
    f.temperature[0][4] = f.temperature[0][5] = f.salinity[1][5] = MISSING;
    options = plain_options(STERICOL_VERTICAL_LINEAR);
    o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_UNEQUAL);
    assert_close(o.total, a * 150.0, rounding);
    options.layers = deep;
    o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_UNEQUAL);
    assert_int_equal(o.state[0], STERICOL_LAYER_INCOMPLETE);
    assert_nan(o.total);
    /* A value is outside physical limits right below the end. */
    f.temperature[1][4] = REJECTED;
    assert_int_equal(run(&options, &f).flag, STERICOL_COLUMN_OUTSIDE_RANGE);
    /* ... and further down it is not the reason. */
    f.temperature[1][4] = MISSING;
    f.salinity[0][5] = -REJECTED;
    assert_int_equal(run(&options, &f).flag, STERICOL_COLUMN_SEA_FLOOR);
    free_field(&f);

    /* A single common level. */
    const double one[] = {1, MISSING, MISSING, MISSING, MISSING, MISSING};
    options = plain_options(STERICOL_VERTICAL_LINEAR);
    o = run_once(&options, one_column(6, position, one));
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    for (int flag = 0; flag < STERICOL_COLUMN_FLAGS; flag++)
        assert_string_not_equal(stericol_column_flag_word(flag), "unknown");
    assert_string_equal(stericol_column_flag_word(STERICOL_COLUMN_OUTSIDE_RANGE), "outside_range");
    assert_string_equal(stericol_column_flag_word(-1), "unknown");
    assert_string_equal(stericol_column_flag_word(STERICOL_COLUMN_FLAGS), "unknown");
}

static void layers_know_the_sea_floor(void **state)
{
    (void)state;
    const double position[] = {0, 10, 600, 800};
    const stericol_layer layers[] = {{0, 700}, {700, 2000}, {600, BOTTOM}};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.layers = layers;
    options.layer_count = 3;
    const double to_600[] = {1, 1, 1, MISSING};
    outcome o = run_once(&options, one_column(4, position, to_600));
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    assert_int_equal(o.state[0], STERICOL_LAYER_COMPLETE);
    assert_int_equal(o.state[1], STERICOL_LAYER_BELOW_SEA_FLOOR);
    assert_int_equal(o.state[2], STERICOL_LAYER_BELOW_SEA_FLOOR);
    assert_close(o.layer[0], a * 600.0, rounding);
    assert_nan(o.layer[1]);
    assert_same_number(o.total, o.layer[0]); /* below the floor is zero in the column */
    assert_same_number(o.deepest, 600.0);

    /* The same end by the end of the data leaves 0..700 incomplete. */
    o = run_once(&options, one_column(3, position, to_600));
    assert_int_equal(o.flag, STERICOL_COLUMN_END_OF_DATA);
    assert_int_equal(o.state[0], STERICOL_LAYER_INCOMPLETE);
    assert_int_equal(o.state[1], STERICOL_LAYER_INCOMPLETE);
    assert_int_equal(o.state[2], STERICOL_LAYER_INCOMPLETE); /* nothing of it was seen */
    assert_nan(o.total);
    const double all[] = {1, 1, 1, 1};
    options.layers = &layers[2];
    options.layer_count = 1;
    o = run_once(&options, one_column(4, position, all));
    assert_int_equal(o.flag, STERICOL_COLUMN_END_OF_DATA);
    assert_int_equal(o.state[0],
                     STERICOL_LAYER_COMPLETE); /* only a limit in metres makes a layer incomplete */
    assert_close(o.total, a * 200.0, rounding);
}

static void top_is_carried_within_reach(void **state)
{
    (void)state;
    const double warming[] = {1, 3, 3};
    const double within[] = {20, 120, 220}, beyond[] = {20.001, 120, 220};
    const stericol_layer layers[] = {{0, 10}, {10, 220}, {100, 220}};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.layers = layers;
    options.layer_count = 3;
    outcome o = run_once(&options, one_column(3, within, warming));
    assert_close(o.layer[0], a * 10.0, rounding);
    assert_close(o.layer[1], a * (10.0 + 200.0 + 300.0), rounding);
    o = run_once(&options, one_column(3, beyond, warming));
    assert_int_equal(o.state[0], STERICOL_LAYER_INCOMPLETE);
    assert_int_equal(o.state[1], STERICOL_LAYER_INCOMPLETE); /* begins above the first sample */
    assert_int_equal(o.state[2], STERICOL_LAYER_COMPLETE);
    assert_nan(o.total);
    options.surface_reach = 25.0;
    o = run_once(&options, one_column(3, beyond, warming));
    assert_int_equal(o.state[0], STERICOL_LAYER_COMPLETE);

    /* Cells: the water of the first cell above it.  Its sample is its middle. */
    const double limits[] = {10, 30, 130}, deeper[] = {10, 30.002, 130};
    stericol_column_options cells = plain_options(STERICOL_VERTICAL_CELLS);
    o = run_once(&cells, one_column_of_cells(2, limits, warming));
    assert_close(o.total, a * (30.0 + 300.0), rounding);
    assert_same_number(o.depth, 130.0);
    o = run_once(&cells, one_column_of_cells(2, deeper, warming));
    assert_int_equal(o.state[0], STERICOL_LAYER_INCOMPLETE);
    /* A first cell that begins at the surface needs no carrying, however thick. */
    const double thick[] = {0, 100, 200};
    o = run_once(&cells, one_column_of_cells(2, thick, warming));
    assert_close(o.total, a * 400.0, rounding);
}

/* Real water: what is carried up is evaluated at the new pressure. */
static void carried_water_feels_its_new_pressure(void **state)
{
    (void)state;
    const double position[] = {18}, warming[] = {2};
    field f = one_column(1, position, warming);
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.water = &polynomial;
    const outcome o = run(&options, &f);
    double integrand[2];
    const double at[] = {0.0, stericol_sea_pressure(18.0, 45.0)};
    for (int k = 0; k < 2; k++) {
        const double v1 = stericol_specific_volume(35, 9, at[k]),
                     v2 = stericol_specific_volume(35, 11, at[k]);
        integrand[k] = (v2 - v1) / (0.5 * (v1 + v2));
    }
    assert_true(integrand[1] > integrand[0]);
    assert_relative(o.total, 18.0 * 0.5 * (integrand[0] + integrand[1]),
                    1e-11); /* v2 - v1 loses four digits */
    assert_int_equal(o.flag, STERICOL_COLUMN_END_OF_DATA);
    assert_same_number(o.depth, 18.0);
    free_field(&f);
}

static void gaps_are_bridged_within_reach(void **state)
{
    (void)state;
    /* At 200 m the rule gives 50 + 45 = 95 m. */
    const double within[] = {0, 100, 200, 250, 295, 395}, beyond[] = {0, 100, 200, 250, 295.001, 395};
    const double warming[] = {1, 1, 1, MISSING, 3, 3};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    outcome o = run_once(&options, one_column(6, within, warming));
    assert_close(o.total, a * (200.0 + 190.0 + 300.0), rounding);
    assert_int_equal(o.flag, STERICOL_COLUMN_END_OF_DATA);
    o = run_once(&options, one_column(6, beyond, warming));
    assert_close(o.total, a * 200.0, rounding);
    assert_int_equal(o.flag, STERICOL_COLUMN_GAP);
    assert_same_number(o.depth, 200.0);
    options.gap_reach = 120.0;
    assert_int_equal(run_once(&options, one_column(6, beyond, warming)).flag, STERICOL_COLUMN_END_OF_DATA);
    options.gap_reach = 94.0;
    assert_int_equal(run_once(&options, one_column(6, within, warming)).flag, STERICOL_COLUMN_GAP);
    options.gap_reach = 0.0;
    assert_int_equal(run_once(&options, one_column(6, within, warming)).flag, STERICOL_COLUMN_GAP);

    /* Neighbouring levels: never a gap on a grid, judged in a cast.  The rule's ends: 50 m at 0, 500 m from
     * 2000 m. */
    const double steps[][3] = {{0, 50, 50.1}, {0, 50.01, 60}, {2500, 3000, 3001}, {2500, 3000.1, 3100}};
    const double ones[] = {1, 1, 1};
    for (int k = 0; k < 4; k++) {
        options = plain_options(STERICOL_VERTICAL_LINEAR);
        assert_int_equal(run_once(&options, one_column(3, steps[k], ones)).flag, STERICOL_COLUMN_END_OF_DATA);
        options.cast = true;
        assert_int_equal(run_once(&options, one_column(3, steps[k], ones)).flag,
                         k % 2 == 1 ? STERICOL_COLUMN_GAP : STERICOL_COLUMN_END_OF_DATA);
    }
    /* Cells 0..20, 20..40, 40..60 with the middle one missing: from 20 to 40 linear between the mid-depths 10
       and 50, 1 + 2*10/40 = 1.5 to 2.5. */
    const double limits[] = {0, 20, 40, 60}, holed[] = {1, MISSING, 3};
    options = plain_options(STERICOL_VERTICAL_CELLS);
    o = run_once(&options, one_column_of_cells(3, limits, holed));
    assert_close(o.total, a * (20.0 + 40.0 + 60.0), rounding);
}

static void bathymetry_cuts_and_carries(void **state)
{
    (void)state;
    const double position[] = {0, 100, 200, 300}, warming[] = {1, 1, 2, 4};
    const stericol_layer layers[] = {{0, 250}, {250, 500}, {500, BOTTOM}};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.layers = layers;
    options.layer_count = 3;
    field f = one_column(4, position, warming);
    f.floor = new_values(1);

    f.floor[0] = 250.0; /* cuts the last stretch at its middle: (2+3)/2*50 */
    outcome o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    assert_close(o.layer[0], a * (100.0 + 150.0 + 125.0), rounding);
    assert_int_equal(o.state[1], STERICOL_LAYER_BELOW_SEA_FLOOR);
    assert_same_number(o.depth, 250.0);

    f.floor[0] = 400.0; /* not reached, and nothing is carried */
    o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_END_OF_DATA);
    assert_int_equal(o.state[0], STERICOL_LAYER_COMPLETE);
    assert_int_equal(o.state[1], STERICOL_LAYER_INCOMPLETE);
    assert_int_equal(o.state[2], STERICOL_LAYER_BELOW_SEA_FLOOR); /* whatever the data do */
    options.bottom_reach = 100.0;
    o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    assert_close(o.layer[1], a * (175.0 + 400.0), rounding); /* (3+4)/2*50, then 4*100 */
    assert_same_number(o.deepest, 400.0);
    options.bottom_reach = 99.0; /* the floor is out of reach: nothing is carried */
    o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_END_OF_DATA);
    assert_int_equal(o.state[1], STERICOL_LAYER_INCOMPLETE);
    options.layers = stericol_column_options_default().layers;
    options.layer_count = 1;
    o = run(&options, &f);
    assert_same_number(o.depth, 300.0);
    assert_close(o.total, a * (100.0 + 150.0 + 300.0), rounding);

    /* A column that stops above the axis' last level has not reached a floor that is known to be deeper. */
    f.temperature[0][3] = MISSING;
    f.temperature[1][3] = MISSING;
    assert_int_equal(run(&options, &f).flag, STERICOL_COLUMN_END_OF_DATA);
    f.floor[0] = MISSING;
    assert_int_equal(run(&options, &f).flag, STERICOL_COLUMN_SEA_FLOOR);
    f.floor[0] = -3.0; /* land */
    o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_NO_DATA);
    assert_nan(o.total);
    free_field(&f);

    /* Cells: cut in proportion, carried from the lowest cell's lower limit. */
    const double limits[] = {0, 100, 200}, two[] = {1, 2};
    options = plain_options(STERICOL_VERTICAL_CELLS);
    f = one_column_of_cells(2, limits, two);
    f.floor = new_values(1);
    f.floor[0] = 125.0;
    o = run(&options, &f);
    assert_close(o.total, a * 150.0, rounding);
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    f.floor[0] = 230.0;
    options.bottom_reach = 30.0;
    o = run(&options, &f);
    assert_close(o.total, a * 360.0, rounding);
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    free_field(&f);
}

/* Water that one epoch alone has, or that was rejected, is below the end: no floor within reach is met there.
 */
static void unequal_ends_are_not_carried_to_the_floor(void **state)
{
    (void)state;
    const double position[] = {0, 50, 100, 150, 200, 640}, warming[] = {1, 1, 1, 1, 1, 1};
    for (int cast = 0; cast < 2; cast++) {
        for (int which = 0; which < 2; which++) {
            /* The floor 490 m below the end, and so near that a cast would count as complete. */
            const double floors[] = {640.0, 165.0};
            for (size_t i = 0; i < 2; i++) {
                stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
                field f = one_column(6, position, warming);
                options.cast = cast == 1;
                options.bottom_reach = 500.0;
                f.floor = new_values(1);
                f.floor[0] = floors[i];
                f.temperature[which][4] = f.temperature[which][5] = MISSING;
                outcome o = run(&options, &f);
                assert_int_equal(o.flag, STERICOL_COLUMN_UNEQUAL);
                assert_same_number(o.depth, 150.0);
                assert_close(o.total, a * 150.0, rounding);
                f.temperature[which][4] = REJECTED;
                o = run(&options, &f);
                assert_int_equal(o.flag, STERICOL_COLUMN_OUTSIDE_RANGE);
                assert_same_number(o.depth, 150.0);
                /* Both epochs end alike: carried, as ever. */
                for (size_t k = 4; k < 6; k++)
                    f.temperature[0][k] = f.temperature[1][k] = MISSING;
                o = run(&options, &f);
                assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
                assert_same_number(o.depth, floors[i]);
                free_field(&f);
            }
        }
    }
    /* The limit of a layer below a floor that is near does not draw a cast down to the floor either. */
    const stericol_layer layer = {0, 168};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    field f = one_column(6, position, warming);
    options.cast = true;
    options.layers = &layer;
    options.layer_count = 1;
    f.floor = new_values(1);
    f.floor[0] = 165.0;
    f.temperature[0][4] = f.temperature[0][5] = MISSING;
    const outcome o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_UNEQUAL);
    assert_int_equal(o.state[0], STERICOL_LAYER_INCOMPLETE);
    free_field(&f);
}

static void casts_are_completed_when_close(void **state)
{
    (void)state;
    const stericol_layer layers[] = {{0, 700}, {700, 2000}};
    const double to_680[] = {0, 40, 90, 150, 220, 310, 420, 560, 680};
    const double to_679[] = {0, 40, 90, 150, 220, 310, 420, 560, 679.9};
    const double warming[] = {1, 1, 1, 1, 1, 1, 1, 1, 1};
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.cast = true;
    options.layers = layers;
    options.layer_count = 1;
    outcome o = run_once(&options, one_column(9, to_680, warming));
    assert_int_equal(o.flag, STERICOL_COLUMN_COMPLETE);
    assert_close(o.total, a * 700.0, rounding);
    assert_same_number(o.depth, 700.0);
    o = run_once(&options, one_column(9, to_679, warming));
    assert_int_equal(o.flag, STERICOL_COLUMN_END_OF_DATA);
    assert_nan(o.total);
    /* 2 % of 2000 m is 40 m. */
    const double far[] = {680, 850, 1080, 1350, 1600, 1800, 1960},
                 short_of[] = {680, 850, 1080, 1350, 1600, 1800, 1959};
    options.layers = &layers[1];
    o = run_once(&options, one_column(7, far, warming));
    assert_int_equal(o.flag, STERICOL_COLUMN_COMPLETE);
    assert_close(o.total, a * 1300.0, rounding);
    assert_int_equal(run_once(&options, one_column(7, short_of, warming)).flag, STERICOL_COLUMN_END_OF_DATA);
    /* Close to the sea floor by bathymetry. */
    field f = one_column(7, far, warming);
    f.floor = new_values(1);
    f.floor[0] = 1999.0;
    o = run(&options, &f);
    assert_int_equal(o.flag, STERICOL_COLUMN_SEA_FLOOR);
    assert_int_equal(o.state[0], STERICOL_LAYER_COMPLETE);
    f.floor[0] = 2100.0;
    f.position[6] = 1950.0;
    assert_int_equal(run(&options, &f).flag, STERICOL_COLUMN_END_OF_DATA);
    f.floor[0] = MISSING; /* a cast that stops has not touched the floor for that */
    f.temperature[0][6] = f.temperature[1][6] = MISSING;
    assert_int_equal(run(&options, &f).flag, STERICOL_COLUMN_END_OF_DATA);
    free_field(&f);
}

static void pressure_and_depth_agree(void **state)
{
    (void)state;
    enum { LEVELS = 41 };
    const stericol_layer layers[] = {{0, 700}, {700, 2000}};
    for (int cells = 0; cells < 2; cells++) {
        field f = new_field(1, 1, LEVELS);
        for (size_t k = 0; k < LEVELS; k++) {
            f.position[k] = 50.0 * (double)k;
            f.upper[k] = 50.0 * (double)k;
            f.lower[k] = 50.0 * (double)(k + 1);
            f.temperature[0][k] = 2.0 + 16.0 * exp(-f.position[k] / 600.0);
            f.temperature[1][k] = f.temperature[0][k] + 0.8 * exp(-f.position[k] / 400.0);
            f.salinity[1][k] = 35.0 + 0.1 * exp(-f.position[k] / 300.0);
        }
        stericol_column_options options =
            plain_options(cells ? STERICOL_VERTICAL_CELLS : STERICOL_VERTICAL_LINEAR);
        options.water = &polynomial;
        options.layers = layers;
        options.layer_count = 2;
        stericol_sweep *by_depth = sweep_field(&options, &f);
        for (size_t k = 0; k < LEVELS; k++) {
            f.position[k] = stericol_sea_pressure(f.position[k], 45.0);
            f.upper[k] = stericol_sea_pressure(f.upper[k], 45.0);
            f.lower[k] = stericol_sea_pressure(f.lower[k], 45.0);
        }
        options.coordinate = STERICOL_COORDINATE_PRESSURE;
        stericol_sweep *by_pressure = sweep_field(&options, &f);
        for (size_t layer = 0; layer < 2; layer++) {
            /* dz = v dp/g with the water's own v and g at the surface instead of the standard ocean's v and
               g(z): water at 10 degC, 35 is 0.2 % lighter than at 0 degC, g grows by 0.05 % to 2000 m. */
            assert_relative(result_of(by_pressure, STERICOL_COLUMN_TOTAL, layer, 0),
                            result_of(by_depth, STERICOL_COLUMN_TOTAL, layer, 0), 5e-3);
            assert_relative(result_of(by_pressure, STERICOL_COLUMN_HEAT, layer, 0),
                            result_of(by_depth, STERICOL_COLUMN_HEAT, layer, 0), 5e-3);
            assert_relative(result_of(by_pressure, STERICOL_COLUMN_EXPANSION, layer, 0),
                            result_of(by_depth, STERICOL_COLUMN_EXPANSION, layer, 0), 5e-3);
            /* Newton's method on both ways stops at 1e-9 m or better. */
            assert_close(result_of(by_pressure, STERICOL_COLUMN_DEPTH, layer, 0), layer == 0 ? 700.0 : 1300.0,
                         1e-7);
            assert_int_equal(stericol_sweep_layer_state(by_pressure, layer)[0], STERICOL_LAYER_COMPLETE);
        }
        stericol_sweep_free(by_depth);
        stericol_sweep_free(by_pressure);
        free_field(&f);
    }
}

/* By hand: 1000 dbar of linear water that warms by 1 K: (1/g) a/rho0 * 1e7 Pa. */
static void pressure_sums_are_plain_arithmetic(void **state)
{
    (void)state;
    const double position[] = {0, 300, 1000}, warming[] = {1, 1, 1};
    field f = one_column(3, position, warming);
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.coordinate = STERICOL_COORDINATE_PRESSURE;
    outcome o = run(&options, &f);
    const double g = stericol_gravity(45.0, 0.0);
    assert_relative(o.total, a / density * 1e7 / g, rounded_ratio);
    assert_relative(o.heat, STERICOL_HEAT_CAPACITY * 1e7 / g, 1e-13);
    assert_close(o.depth, stericol_depth(1000.0, 45.0), 1e-9);
    /* With a reference density of the mean water, (rho1 - rho2)/rho0 dz = a d (1 + (a d/2)^2 ...) v dp/g. */
    options.reference_density = density;
    o = run(&options, &f);
    assert_relative(o.total, a / density * 1e7 / g, 2e-8); /* (a d / 2)^2 = 1e-8 */
    /* The same water per metre. */
    options.coordinate = STERICOL_COORDINATE_DEPTH;
    o = run(&options, &f);
    assert_relative(o.total, a * 1000.0, 2e-8);
    free_field(&f);
}

static void reference_density_changes_one_percent(void **state)
{
    (void)state;
    const double position[] = {0, 500, 2000}, warming[] = {1, 1, 1};
    field f = one_column(3, position, warming);
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.water = &polynomial;
    const double local = run(&options, &f).total;
    for (size_t i = 0; i < 3; i++)
        f.salinity[0][i] = f.salinity[1][i] = 35.0;
    options.reference_density = 1025.0;
    stericol_sweep *sweep = sweep_field(&options, &f);
    const double fixed = result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 0);
    /* design.md: 1 % apart.  Water at 10 degC: 1027 at the surface, 1036 at 2000 m, 1031.5 on average: 0.6 %.
     */
    assert_relative(fixed, local * 1031.5 / 1025.0, 2e-3);
    assert_relative(result_of(sweep, STERICOL_COLUMN_THERMOSTERIC, 0, 0), fixed,
                    1e-12); /* the parts scale along */
    stericol_sweep_free(sweep);
    free_field(&f);
}

/* EOS-80: heat = mean density * cp(S, theta, 0) * change of theta, done here point by point. */
static void eos80_uses_its_own_heat_capacity(void **state)
{
    (void)state;
    const stericol_water water = {.equation = STERICOL_EQUATION_EOS80};
    const double limits[] = {0, 100}, warming[] = {1};
    field f = one_column_of_cells(1, limits, warming);
    stericol_column_options options = plain_options(STERICOL_VERTICAL_CELLS);
    options.water = &water;
    const outcome o = run(&options, &f);
    const double pressure = stericol_sea_pressure(50.0, 45.0);
    double volume[2];
    for (int k = 0; k < 2; k++)
        stericol_volume_row(&water, pressure, 1, f.salinity[k], f.temperature[k], &volume[k]);
    const double mass = 100.0 * 2.0 / (volume[0] + volume[1]);
    assert_relative(o.heat, mass * stericol_eos80_heat_capacity(35.0, 10.0, 0.0), 1e-13); /* rounding */
    free_field(&f);
}

/* Averaged integrands replace the evaluation, carry to the surface and to the floor unchanged. */
static void averaged_integrands_are_used(void **state)
{
    (void)state;
    const double position[] = {10, 100, 200}, warming[] = {1, 1, 1};
    field f = one_column(3, position, warming);
    for (int k = 0; k < 4; k++)
        f.averaged[k] = new_values(3);
    for (size_t i = 0; i < 3; i++) {
        f.averaged[0][i] = 1e-3 - 1e-7;
        f.averaged[1][i] = 1e-3 + 1e-7;
        f.averaged[2][i] = 3e-7;
        f.averaged[3][i] = -1e-7;
    }
    f.floor = new_values(1);
    f.floor[0] = 300.0;
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.bottom_reach = 100.0;
    stericol_sweep *sweep = sweep_field(&options, &f);
    assert_relative(result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 0), 2e-4 * 300.0,
                    1e-12); /* v2 - v1 loses 4 digits */
    assert_relative(result_of(sweep, STERICOL_COLUMN_THERMOSTERIC, 0, 0), 3e-4 * 300.0, 1e-13);
    assert_relative(result_of(sweep, STERICOL_COLUMN_HALOSTERIC, 0, 0), -1e-4 * 300.0, 1e-13);
    assert_relative(result_of(sweep, STERICOL_COLUMN_HEAT, 0, 0), STERICOL_HEAT_CAPACITY * 1e3 * 300.0,
                    1e-13);
    assert_relative(result_of(sweep, STERICOL_COLUMN_EXPANSION, 0, 0), a, 1e-13);
    stericol_sweep_free(sweep);
    f.averaged[3][2] = MISSING; /* a level without them is missing */
    options.bottom_reach = 0.0;
    sweep = sweep_field(&options, &f);
    assert_same_number(result_of(sweep, STERICOL_COLUMN_DEPTH, 0, 0), 100.0);
    stericol_sweep_free(sweep);
    free_field(&f);
}

/* Partial cells: limits per column, a column without a second cell. */
static void places_can_differ_between_columns(void **state)
{
    (void)state;
    field f = new_field(2, 2, 2);
    f.uppers = new_values(4);
    f.lowers = new_values(4);
    const double uppers[] = {0, 0, 100, MISSING}, lowers[] = {100, 60, 130, MISSING};
    memcpy(f.uppers, uppers, sizeof uppers);
    memcpy(f.lowers, lowers, sizeof lowers);
    for (size_t i = 0; i < 4; i++) {
        f.temperature[0][i] = 9.5;
        f.temperature[1][i] = 10.5;
    }
    stericol_column_options options = plain_options(STERICOL_VERTICAL_CELLS);
    stericol_sweep *sweep = sweep_field(&options, &f);
    assert_close(result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 0), a * 130.0, rounding);
    assert_close(result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 1), a * 60.0, rounding);
    assert_int_equal(stericol_sweep_flags(sweep)[0], STERICOL_COLUMN_END_OF_DATA);
    assert_int_equal(stericol_sweep_flags(sweep)[1], STERICOL_COLUMN_SEA_FLOOR);
    stericol_sweep_free(sweep);
    free_field(&f);
    /* Samples that do not go down count as missing. */
    const double position[] = {0, 100, 90, 200}, warming[] = {1, 1, 5, 1};
    options = plain_options(STERICOL_VERTICAL_LINEAR);
    options.gap_reach = 100.0;
    assert_close(run_once(&options, one_column(4, position, warming)).total, a * 200.0, rounding);
}

static void contradictions_are_refused(void **state)
{
    (void)state;
    const double latitude = 45.0;
    const stericol_layer layers[] = {{100, 100}, {-1, 5}, {BOTTOM, BOTTOM}, {MISSING, 5}, {5, MISSING}};
    stericol_column_options list[11];
    size_t count = 0;
    for (; count < 5; count++) {
        list[count] = plain_options(STERICOL_VERTICAL_LINEAR);
        list[count].layers = &layers[count];
    }
    for (size_t k = count; k < 11; k++)
        list[k] = plain_options(STERICOL_VERTICAL_LINEAR);
    list[count++].layer_count = 0;
    list[count++].layer_count = 65;
    list[count++].surface_reach = -1.0;
    list[count++].bottom_reach = MISSING;
    list[count++].reference_density = -1025.0;
    list[count++].vertical = STERICOL_VERTICAL_AKIMA;
    assert_int_equal(count, 11);
    for (size_t k = 0; k < count; k++) {
        stericol_sweep *sweep = NULL;
        stericol_context *context = stericol_context_new();
        assert_int_equal(stericol_sweep_new(context, &list[k], 1, 1, &latitude, NULL, &sweep),
                         STERICOL_USAGE);
        assert_null(sweep);
        assert_string_not_equal(stericol_context_message(context), "");
        assert_true(stericol_sweep_bytes(&list[k], 1, 1, false) == SIZE_MAX);
        stericol_context_free(context);
    }
    /* Sizes that cannot be. */
    stericol_column_options options = plain_options(STERICOL_VERTICAL_LINEAR);
    assert_true(stericol_sweep_bytes(&options, SIZE_MAX / 2, 1, false) == SIZE_MAX);
    const size_t without = stericol_sweep_bytes(&options, 1000, 100, false);
    assert_true(without > 1000 * 8 * 10 &&
                without < 1000 * 8 * 25); /* design.md: about 20 doubles a column */
    assert_true(stericol_sweep_bytes(&options, 1000, 100, true) >= without + 8000);
    options.vertical = STERICOL_VERTICAL_STEFFEN;
    options.levels = 50;
    assert_true(stericol_sweep_bytes(&options, 1000, 100, false) >= without + 1000 * 50 * 5 * 8);
    stericol_sweep_free(NULL);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(uniform_warming_is_plain_arithmetic),
        cmocka_unit_test(whole_ocean_rises_by_thirteen_centimetres),
        cmocka_unit_test(limits_cut_the_linear_integrand_exactly),
        cmocka_unit_test(limits_cut_cells_in_proportion),
        cmocka_unit_test(attributions_keep_their_rules),
        cmocka_unit_test(efficiency_is_missing_where_heat_cancels),
        cmocka_unit_test(every_flag_can_be_reached),
        cmocka_unit_test(layers_know_the_sea_floor),
        cmocka_unit_test(top_is_carried_within_reach),
        cmocka_unit_test(carried_water_feels_its_new_pressure),
        cmocka_unit_test(gaps_are_bridged_within_reach),
        cmocka_unit_test(bathymetry_cuts_and_carries),
        cmocka_unit_test(unequal_ends_are_not_carried_to_the_floor),
        cmocka_unit_test(casts_are_completed_when_close),
        cmocka_unit_test(pressure_and_depth_agree),
        cmocka_unit_test(pressure_sums_are_plain_arithmetic),
        cmocka_unit_test(reference_density_changes_one_percent),
        cmocka_unit_test(eos80_uses_its_own_heat_capacity),
        cmocka_unit_test(averaged_integrands_are_used),
        cmocka_unit_test(places_can_differ_between_columns),
        cmocka_unit_test(contradictions_are_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
