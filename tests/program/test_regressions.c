/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Faults that were found once and must not come back.  Every expected number is arithmetic on an invented sea
 * under the linear law (docs/definitions.md): v = (1/r) [1 + a (Theta - 10) - b (SA - 35)], with a = 2e-4 1/K
 * and b = 7.5e-4 kg/g, so that water warmed from T1 to T2 at SA = 35 rises by a (T2 - T1)/m of its depth, m =
 * 1 + a ((T1 + T2)/2 - 10).
 */
#include "program/option_sea.h"
#include "program/science.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

enum { ROWS = 2, COLUMNS = 10, CELLS = ROWS * COLUMNS, LEVELS = 7, MOST_TIMES = 50 };
/* Why a column ends (docs/definitions.md), as column_flag has it. */
enum { FLOOR = 1, DATA = 2, UNEQUAL = 3, NOTHING = 5, OUTSIDE = 6 };

static const double A = 2e-4, B = 7.5e-4;
static const double EARLIER = 12.0, LATER = 12.5, SALT = 35.0;
/* All sums below are some hundred operations of 1e-16, over a difference of volumes that is 1e-4 of each. */
static const double SUMS = 1e-11;
static const double FLOATS = 6.1e-8; /* maps */

/* Two rows and ten columns of equal cells: 10 S to 10 N, 0 to 100 E. */
static const double latitudes[ROWS] = {-5, 5};
static const double longitudes[COLUMNS] = {5, 15, 25, 35, 45, 55, 65, 75, 85, 95};
static const double levels[LEVELS] = {10, 100, 200, 400, 700, 1000, 1300};

static double fraction(void)
{
    return A * (LATER - EARLIER) / (1.0 + A * (0.5 * (EARLIER + LATER) - 10.0));
}

static double area_of(double cells)
{
    return ring_area(-10.0, 10.0) * 100.0 / 360.0 * cells / CELLS;
}

/* `times` of 30 days; 0: no time dimension. */
static sea sea_of(size_t times, sea_value *value, const void *user)
{
    static double time[MOST_TIMES], bounds[2 * MOST_TIMES];
    sea of = sea_plain();

    for (size_t t = 0; t < MOST_TIMES; t++) {
        bounds[2 * t] = 30.0 * (double)t;
        time[t] = bounds[2 * t] + 15.0;
        bounds[2 * t + 1] = bounds[2 * t] + 30.0;
    }
    of.time = (sea_axis){times, time, bounds};
    of.depth = (sea_axis){LEVELS, levels, NULL};
    of.latitude = (sea_axis){ROWS, latitudes, NULL};
    of.longitude = (sea_axis){COLUMNS, longitudes, NULL};
    of.value = value;
    of.user = user;
    return of;
}

static const char *result_path(void)
{
    return in_folder("result.nc");
}

#define LINEAR_RUN "--equation", "linear", "--replace", "--output", result_path()
#define TWO_STEPS "--earlier-step", "1", "--later-step", "2", LINEAR_RUN

static double whole(const char *variable)
{
    return region_value(result_path(), variable, "whole_domain");
}

static double whole_layer(const char *variable, int layer)
{
    return region_layer_value(result_path(), variable, "whole_domain", layer);
}

/* Depth and flag of each column, the same in both rows; depth 0: nothing is given. */
static void assert_columns(const double depth[COLUMNS], const int flag[COLUMNS])
{
    field integrated = read_field(result_path(), "integrated_depth");
    field flags = read_field(result_path(), "column_flag");

    assert_int_equal(integrated.count, CELLS);
    for (size_t n = 0; n < CELLS; n++) {
        size_t i = n % COLUMNS;

        if (depth[i] > 0.0)
            assert_relative(integrated.value[n], depth[i], FLOATS);
        else
            assert_nan(integrated.value[n]);
        if ((int)flags.value[n] != flag[i])
            fail_msg("column %zu has flag %d, should have %d", i, (int)flags.value[n], flag[i]);
    }
    field_free(&integrated);
    field_free(&flags);
}

static double uniform(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    (void)of;
    (void)k;
    (void)j;
    (void)i;
    return quantity == SEA_SALINITY ? SALT : t == 0 ? EARLIER : LATER;
}

/* ---- the output is no file that the run uses ---- */

static void test_output_is_an_input(void **state)
{
    static const char *const lines[] = {
        PLAIN "--output a.nc",
        PLAIN "--mask mask.nc --output mask.nc",
        PLAIN "--mask mask.nc --output ./mask.nc",
        PLAIN "--bathymetry floor.nc --output floor.nc",
        PLAIN "--cell-area area.nc --output area.nc",
        PLAIN "--regions parts.nc --output parts.nc",
        PLAIN "--settings settings.txt --output settings.txt",
        "change --earlier @list.txt --later b.nc --output list.txt",
        "change --earlier bare_a.nc --later bare_b.nc --coordinates a.nc --output a.nc",
        "change --earlier warm_a.nc --later warm_b.nc --background-salinity salt.nc --output salt.nc",
        ("change --earlier reference_a.nc --later reference_b.nc --salinity-anomaly anomaly.nc "
         "--output anomaly.nc"),
        "scenario --field a.nc --profile profile.txt --output profile.txt",
        "scenario --field a.nc --warming 1 --vertical cells --thickness thick.nc --output thick.nc",
    };
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "regressions"), *before;
    size_t failed = 0;

    (void)state;
    option_sea_write(folder);
    run_write_file(folder, "settings.txt", "table = csv\n");
    run_write_file(folder, "list.txt", "a.nc\n");
    before = folder_state(folder);
    for (size_t i = 0; i < sizeof lines / sizeof lines[0]; i++) {
        char line[1024];
        run_result result;

        snprintf(line, sizeof line, "%s --replace --quiet", lines[i]);
        result = run_line(line, folder);
        failed += !refused_well(&result, 2, (const char *[]){"--output", "already", NULL}, line);
        failed += !folder_untouched(folder, before, line);
        run_free(&result);
    }
    assert_int_equal(failed, 0);
    free(before);
    run_remove_folder(folder);
}

/* ---- layers ---- */

/* Cells of three levels, the last of which ends where it is told. */
static const char *write_cells(double end, const char *name)
{
    static const double centres[3] = {250, 750, 1500};
    const double bounds[6] = {0, 500, 500, 1000, 1000, end};
    sea of = sea_of(2, uniform, NULL);
    sea_form form = form_plain();

    of.depth = (sea_axis){3, centres, bounds};
    return sea_write(&of, &form, name);
}

static void test_layer_below_the_data(void **state)
{
    const char *path = write_cells(1975.0, "short.nc");

    (void)state;
    run_well("change", "--earlier", path, "--later", path, "--layers", "0..700,700..2000", "--table", "csv",
             TWO_STEPS);
    assert_said("the layer 700..2000 is complete in no column");
    assert_relative(whole_layer("region_layer_mean_steric_height_change", 0), 700.0 * fraction(), SUMS);
    assert_relative(whole_layer("region_layer_covered_area", 0), area_of(CELLS), SUMS);
    assert_nan(whole_layer("region_layer_mean_steric_height_change", 1));
    assert_nan(whole("region_mean_steric_height_change"));
    assert_null(strstr(said_error(), "the layer 0..700 is complete in no"));
    /* a limit kept as float misses the metre that is meant by less than 0.2 mm */
    path = write_cells((double)1999.9999F, "almost.nc");
    run_well("change", "--earlier", path, "--later", path, "--layers", "0..2000", TWO_STEPS);
    assert_relative(whole("region_mean_steric_height_change"), (double)1999.9999F * fraction(), SUMS);
    assert_relative(whole("region_covered_area"), area_of(CELLS), SUMS);
    /* two metres are no rounding */
    path = write_cells(1998.0, "shorter.nc");
    run_to(1, "change", "--earlier", path, "--later", path, "--layers", "0..2000", TWO_STEPS);
}

/* A shelf of 200 m in columns 0..3; the last column has its later water to 1000 m alone. */
static double shelf(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    const bool *short_of_water = of->user;

    if (i < 4 && levels[k] > 200.0)
        return (double)NAN;
    if (*short_of_water && i == COLUMNS - 1 && t == 1 && levels[k] > 1000.0)
        return (double)NAN;
    return uniform(of, quantity, t, k, j, i);
}

typedef struct layer_case {
    const char *layers;
    int upper, lower; /* places of 700..1000 and 1000..1200; -1: not asked for */
    double whole;     /* m that the column's mean is over, where all columns count */
} layer_case;

static const layer_case layer_cases[] = {
    {"700..1000", 0, -1, 0.6 * 300.0},
    {"1000..1200", -1, 0, 0.6 * 200.0},
    {"700..1000,1000..1200", 0, 1, 0.6 * 500.0},
    {"0..100,700..1000,1000..1200", 1, 2, 100.0 + 0.6 * 500.0},
    {"0..700,700..1000,1000..1200", 1, 2, 0.4 * 200.0 + 0.6 * 1200.0},
};

static void expect_layer(int layer, bool lone, double thickness, double covered)
{
    const char *mean = lone ? "region_mean_steric_height_change" : "region_layer_mean_steric_height_change";
    const char *area = lone ? "region_covered_area" : "region_layer_covered_area";

    assert_relative(whole_layer(mean, lone ? -1 : layer), thickness * fraction(), SUMS);
    assert_relative(whole_layer(area, lone ? -1 : layer), area_of(covered), SUMS);
}

/*
 * Six columns of ten are deep; the shelf counts as zero below its floor.  Where the last column is short, the
 * lower layer has 5 of 9 columns left, whatever else is asked for, and the upper one still has all.
 */
static void test_layers_do_not_know_of_each_other(void **state)
{
    (void)state;
    for (int run = 0; run < 2; run++) {
        const bool short_of_water = run == 1;
        sea of = sea_of(2, shelf, &short_of_water);
        sea_form form = form_plain();
        const char *path = sea_write(&of, &form, "shelf.nc");

        for (size_t c = 0; c < sizeof layer_cases / sizeof layer_cases[0]; c++) {
            const layer_case *one = &layer_cases[c];
            bool lone = strchr(one->layers, ',') == NULL;

            print_message("%s %s\n", short_of_water ? "short" : "full", one->layers);
            run_well("change", "--earlier", path, "--later", path, "--layers", one->layers, TWO_STEPS);
            if (one->upper >= 0)
                expect_layer(one->upper, lone, 0.6 * 300.0, CELLS);
            if (one->lower >= 0)
                expect_layer(one->lower, lone, short_of_water ? 5.0 / 9.0 * 200.0 : 0.6 * 200.0,
                             short_of_water ? 18.0 : CELLS);
            if (!short_of_water)
                expect_layer(-1, true, one->whole, CELLS);
        }
    }
}

static void test_lone_layer_is_named(void **state)
{
    sea of = sea_of(2, uniform, NULL);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "uniform.nc"), *line;

    (void)state;
    run_well("change", "--earlier", path, "--later", path, "--layers", "100..300", "--table", "csv",
             TWO_STEPS);
    assert_holds(said_out(), "whole_domain,100..300,");
    run_well("change", "--earlier", path, "--later", path, "--layers", "100..300", "--table", "json",
             TWO_STEPS);
    assert_holds(said_out(), "\"100..300\"");
    /* every line says what it is */
    assert_said("stericol: note: ");
    for (line = said_error(); *line != '\0'; line = strchr(line, '\n') + 1) {
        if (strncmp(line, "stericol: note: ", 16) != 0 && strncmp(line, "stericol: warning: ", 19) != 0)
            fail_msg("neither note nor warning: %s", line);
        assert_non_null(strchr(line, '\n'));
    }
}

/* ---- members that are missing ---- */

/*
 * Two epochs of `members` times.  On the last level of the earlier epoch column 1 lacks T in three of four
 * times, column 2 T in the first half and S in the second.
 */
static double torn(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    if (k == LEVELS - 1 && t < 4) {
        if (i == 1 && quantity == SEA_TEMPERATURE && t > 0)
            return (double)NAN;
        if (i == 2 && (quantity == SEA_TEMPERATURE) == (t < 2))
            return (double)NAN;
    }
    return uniform(of, quantity, t / 4, k, j, i);
}

static void test_one_epoch_is_short_of_members(void **state)
{
    static const int by_state[COLUMNS] = {DATA, UNEQUAL, DATA, DATA, DATA, DATA, DATA, DATA, DATA, DATA};
    static const int by_integral[COLUMNS] = {DATA, UNEQUAL, UNEQUAL, DATA, DATA,
                                             DATA, DATA,    DATA,    DATA, DATA};
    sea of = sea_of(8, torn, NULL);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "torn.nc");

    (void)state;
    for (int run = 0; run < 2; run++) {
        double full = levels[LEVELS - 1], less = levels[LEVELS - 2], third = run == 0 ? full : less;
        const double depth[COLUMNS] = {full, less, third, full, full, full, full, full, full, full};

        run_well("change", "--earlier", path, "--later", path, "--earlier-step", "1..4", "--later-step",
                 "5..8", "--mean", run == 0 ? "state" : "integral", LINEAR_RUN);
        assert_columns(depth, run == 0 ? by_state : by_integral);
        assert_said("reach deeper in one epoch than in the other");
    }
}

/* Of 25 members column 1 has 14 on its last level, column 2 has 13; 0.56 x 25 is 14 and a rounding. */
static double seldom(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    if (k == LEVELS - 1 && ((i == 1 && t % 25 >= 14) || (i == 2 && t % 25 >= 13)))
        return (double)NAN;
    return uniform(of, quantity, t / 25, k, j, i);
}

static void test_just_enough_members(void **state)
{
    static const double depth[COLUMNS] = {1300, 1300, 1000, 1300, 1300, 1300, 1300, 1300, 1300, 1300};
    static const int flag[COLUMNS] = {DATA, DATA, FLOOR, DATA, DATA, DATA, DATA, DATA, DATA, DATA};
    sea of = sea_of(50, seldom, NULL);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "seldom.nc");

    (void)state;
    for (int run = 0; run < 2; run++) {
        run_well("change", "--earlier", path, "--later", path, "--earlier-step", "1..25", "--later-step",
                 "26..50", "--least-times", "0.56", "--mean", run == 0 ? "state" : "integral", LINEAR_RUN);
        assert_columns(depth, flag);
    }
}

/* ---- land ---- */

typedef struct land {
    size_t cells; /* the first of each level, counted along the rows, are land */
    double value; /* what stands there */
    bool warms;   /* they are water, and warm */
} land;

static double with_land(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    const land *known = of->user;

    if (j * COLUMNS + i < known->cells)
        return known->warms && quantity == SEA_SALINITY ? SALT : known->warms && t > 0 ? 0.5 : known->value;
    return uniform(of, quantity, t, k, j, i);
}

static void test_land_of_zeros(void **state)
{
    const land zeros = {6, 0.0, false}, gaps = {6, (double)NAN, false};
    sea of = sea_of(2, with_land, &zeros);
    sea_form form = form_plain();
    const char *path;

    (void)state;
    for (int run = 0; run < 2; run++) {
        of.user = run == 0 ? &zeros : &gaps;
        path = sea_write(&of, &form, "land.nc");
        run_well("change", "--earlier", path, "--later", path, TWO_STEPS);
        assert_relative(whole("region_area"), area_of(CELLS - 6), SUMS);
        assert_relative(whole("region_covered_area"), area_of(CELLS - 6), SUMS);
        assert_relative(whole("region_mean_steric_height_change"), 1300.0 * fraction(), SUMS);
        if (run == 0)
            assert_said("taken as land written as zeros");
    }
}

#define SALT_OF_35 "--constant-salinity", "35", "--salinity-kind", "absolute"

static void test_lone_temperature_of_zeros(void **state)
{
    const land coast = {2, 0.0, false}, water = {1, 0.0, true};
    const char *const meaning[] = {"standard_name", "sea_binary_mask", NULL};
    double wet[CELLS];
    sea of = sea_of(2, with_land, &coast);
    sea_form form = form_plain();
    const char *path, *mask;
    field map;

    (void)state;
    for (size_t n = 0; n < CELLS; n++)
        wet[n] = n < coast.cells ? 0.0 : 1.0;
    form.only[SEA_TEMPERATURE] = true;
    path = sea_write(&of, &form, "coast.nc"); /* a tenth of the cells */
    mask = sea_write_plane(&of, "wet.nc", "wet", NC_INT, wet, meaning);
    unlink(result_path());
    run_to(3, "change", "--earlier", path, "--later", path, SALT_OF_35, TWO_STEPS);
    assert_said("--mask");
    assert_int_not_equal(access(result_path(), F_OK), 0);
    run_well("change", "--earlier", path, "--later", path, SALT_OF_35, "--mask", mask, TWO_STEPS);
    assert_relative(whole("region_area"), area_of(CELLS - 2), SUMS);
    assert_relative(whole("region_mean_thermosteric_height_change"), 1300.0 * fraction(), SUMS);
    /* a single zero is water, which warms from 0 to 0.5 degC */
    of.user = &water;
    path = sea_write(&of, &form, "cold.nc");
    run_well("change", "--earlier", path, "--later", path, SALT_OF_35, TWO_STEPS);
    assert_relative(whole("region_area"), area_of(CELLS), SUMS);
    map = read_field(result_path(), "thermosteric_height_change");
    assert_relative(map.value[0], 1300.0 * A * 0.5 / (1.0 + A * (0.25 - 10.0)), 2.0 * FLOATS);
    assert_relative(map.value[1], 1300.0 * fraction(), 2.0 * FLOATS);
    field_free(&map);
}

/* Columns 0 and 1 are land in all water that there is. */
static double dry_west(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    return i < 2 ? (double)NAN : uniform(of, quantity, t, k, j, i);
}

static void test_no_region_holds_data(void **state)
{
    sea of = sea_of(2, dry_west, NULL);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "dry.nc");

    (void)state;
    unlink(result_path());
    run_to(1, "change", "--earlier", path, "--later", path, "--region", "West=1,-9,19,9", TWO_STEPS);
    assert_int_not_equal(access(result_path(), F_OK), 0);
    assert_string_equal(said_out(), "");
    /* one that holds some is enough */
    run_well("change", "--earlier", path, "--later", path, "--region", "West=1,-9,19,9", "--region",
             "East=21,-9,99,9", TWO_STEPS);
    assert_relative(region_value(result_path(), "region_mean_steric_height_change", "East"),
                    1300.0 * fraction(), SUMS);
    assert_nan(region_value(result_path(), "region_mean_steric_height_change", "West"));
}

/* ---- epochs ---- */

static double saltier(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    const double *salt = of->user;

    (void)t;
    (void)k;
    (void)j;
    (void)i;
    return quantity == SEA_SALINITY ? *salt : EARLIER;
}

/* One temperature and two salinities: b dS / (1 + a (T - 10) - b (S1 + S2 - 70)/2) of the depth. */
static void test_salinity_alone_differs(void **state)
{
    static const double salt[2] = {35.0, 35.5};
    const double expected = -B * 0.5 / (1.0 + A * (EARLIER - 10.0) - B * 0.25);

    (void)state;
    for (size_t times = 0; times < 2; times++) {
        sea of = sea_of(times, saltier, &salt[0]);
        sea_form form = form_plain();
        const char *warmth, *file[2];

        form.only[SEA_TEMPERATURE] = true;
        warmth = sea_write(&of, &form, "warmth.nc");
        form.only[SEA_TEMPERATURE] = false;
        form.only[SEA_SALINITY] = true;
        file[0] = sea_write(&of, &form, "salt_1.nc");
        of.user = &salt[1];
        file[1] = sea_write(&of, &form, "salt_2.nc");
        run_well("change", "--earlier", warmth, "--earlier", file[0], "--later", warmth, "--later", file[1],
                 LINEAR_RUN);
        assert_close(whole("region_mean_thermosteric_height_change"), 0.0, 1e-12); /* m, of 0.5 m */
        assert_relative(whole("region_mean_halosteric_height_change"), 1300.0 * expected, SUMS);
        run_to(2, "change", "--earlier", warmth, "--earlier", file[0], "--later", warmth, "--later", file[0],
               LINEAR_RUN);
        assert_said("both epochs are the same times of the same files");
    }
}

/* ---- scenario ---- */

/* Column 1 is nearly fresh from 400 m down, column 2 throughout. */
static double river(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    if (quantity == SEA_SALINITY && ((i == 1 && levels[k] > 200.0) || i == 2))
        return 1.0;
    return uniform(of, quantity, t, k, j, i);
}

/* 5 g/kg less than 1 g/kg is no water: 4 levels and 7 in each of two rows. */
static void test_scenario_of_impossible_water(void **state)
{
    sea of = sea_of(0, river, NULL);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "river.nc");
    static const double depth[COLUMNS] = {1300, 200, 0, 1300, 1300, 1300, 1300, 1300, 1300, 1300};
    static const int flag[COLUMNS] = {DATA, OUTSIDE, NOTHING, DATA, DATA, DATA, DATA, DATA, DATA, DATA};
    field map;

    (void)state;
    run_well("scenario", "--field", path, "--freshening", "5", LINEAR_RUN);
    assert_said("warning: 22 values lie outside");
    assert_close(file_number(result_path(), "values_outside_physical_limits"), 22.0, 0.0);
    assert_columns(depth, flag);
    map = read_field(result_path(), "halosteric_height_change");
    for (size_t n = 0; n < CELLS; n++)
        if (n % COLUMNS == 2)
            assert_nan(map.value[n]);
        else
            assert_relative(map.value[n], depth[n % COLUMNS] * B * 5.0 / (1.0 + A * 2.0 + B * 2.5),
                            2.0 * FLOATS);
    field_free(&map);
    run_well("scenario", "--field", path, "--freshening", "0.5", LINEAR_RUN);
    assert_close(file_number(result_path(), "values_outside_physical_limits"), 0.0, 0.0);
}

static void test_scenario_of_a_table(void **state)
{
    sea of = sea_of(0, uniform, NULL);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "plain.nc"), *inputs, *found;

    (void)state;
    write_text("table.txt", "depth warming freshening\n0 0.5 0.125\n500 0.25 0\n");
    run_well("scenario", "--field", path, "--profile", in_folder("table.txt"), LINEAR_RUN);
    assert_said("the table ends at 500 m and the field at 1300 m");
    assert_string_equal(file_text(result_path(), "scenario"), "0 m: warming 0.5 K, freshening 0.125 g kg-1\n"
                                                              "500 m: warming 0.25 K, freshening 0 g kg-1");
    inputs = file_text(result_path(), "inputs");
    found = strstr(inputs, in_folder("table.txt"));
    assert_non_null(found);
    assert_null(strstr(found + 1, in_folder("table.txt")));
    write_text("table.txt", "depth warming\n0 0.5\n1300 0.5\n");
    run_well("scenario", "--field", path, "--profile", in_folder("table.txt"), LINEAR_RUN);
    assert_null(strstr(said_error(), "the table ends"));
    assert_relative(whole("region_mean_steric_height_change"), 1300.0 * fraction(), SUMS);
}

static int begin(void **state)
{
    (void)state;
    work_in("regressions");
    return 0;
}

static int end(void **state)
{
    (void)state;
    forget_said();
    return 0;
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_output_is_an_input),
        cmocka_unit_test(test_layer_below_the_data),
        cmocka_unit_test(test_layers_do_not_know_of_each_other),
        cmocka_unit_test(test_lone_layer_is_named),
        cmocka_unit_test(test_one_epoch_is_short_of_members),
        cmocka_unit_test(test_just_enough_members),
        cmocka_unit_test(test_land_of_zeros),
        cmocka_unit_test(test_lone_temperature_of_zeros),
        cmocka_unit_test(test_no_region_holds_data),
        cmocka_unit_test(test_salinity_alone_differs),
        cmocka_unit_test(test_scenario_of_impossible_water),
        cmocka_unit_test(test_scenario_of_a_table),
    };

    return cmocka_run_group_tests(tests, begin, end);
}
