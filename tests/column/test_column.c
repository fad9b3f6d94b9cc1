/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Sums that can be done by hand, attributions, layers, coordinates, options.
 */
#include "column/outcomes.h"

#include <string.h>

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
