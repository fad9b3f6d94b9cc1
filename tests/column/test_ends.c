/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Where and why columns begin and end: flags, layers at the sea floor, reaches, gaps, bathymetry, casts.
 * Every expected number is arithmetic with the linear law.
 */
#include "column/outcomes.h"

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

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(every_flag_can_be_reached),
        cmocka_unit_test(layers_know_the_sea_floor),
        cmocka_unit_test(top_is_carried_within_reach),
        cmocka_unit_test(carried_water_feels_its_new_pressure),
        cmocka_unit_test(gaps_are_bridged_within_reach),
        cmocka_unit_test(bathymetry_cuts_and_carries),
        cmocka_unit_test(unequal_ends_are_not_carried_to_the_floor),
        cmocka_unit_test(casts_are_completed_when_close),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
