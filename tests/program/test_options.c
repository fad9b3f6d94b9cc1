/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Every option of change and scenario in a real run, held to what it must do to the result by arithmetic.
 * That no option is forgotten is checked against --help.
 */
#include "program/option_sea.h"

#include "support/testing.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* ---- what an option must do ---- */

typedef enum effect {
    RATIO,   /* the sum of the variable is `value` times that of the run without, within `tolerance` */
    DIFFERS, /* the sum is another, by more than rounding and less than `tolerance` of it */
    SUM,     /* the sum is `value`, within a relative `tolerance` */
    PRESENT, /* the variable is there, and in the run without it is not */
    ABSENT,  /* the other way round */
    PRINTED, /* standard output holds `name` */
    SAID,    /* standard error holds `name` */
    SETTING  /* the attribute `settings` holds `name`: an option that may not change any number */
} effect;

typedef struct option_case {
    const char *with, *without; /* the options; the inputs stand in them */
    effect kind;
    const char *name; /* of a variable of the result */
    double value, tolerance;
} option_case;

static bool holds(const option_case *one, double with, double without)
{
    const double ratio = with / without;

    switch (one->kind) {
    case RATIO:
        return fabs(ratio - one->value) <= one->tolerance * fabs(one->value);
    case DIFFERS:
        return fabs(ratio - 1.0) > 1e-9 && fabs(ratio - 1.0) < one->tolerance;
    case SUM:
        return fabs(with - one->value) <= one->tolerance * fabs(one->value);
    case PRESENT:
        return !isnan(with) && isnan(without);
    case ABSENT:
        return isnan(with) && !isnan(without);
    default:
        return true;
    }
}

/* `last`: the options of the run that without.nc is of; many cases in a row have the same. */
static bool run_option(const char *folder, const option_case *one, const char **last)
{
    double without = NAN, with;
    run_result result;
    char *settings;
    bool well = true;

    if (one->without != NULL && (*last == NULL || strcmp(*last, one->without) != 0)) {
        *last = one->without;
        result = run_into(folder, "without.nc", one->without);
        if (result.errors == NULL)
            return false;
        run_free(&result);
    }
    result = run_into(folder, "out.nc", one->with);
    if (result.errors == NULL)
        return false;
    if (one->without != NULL)
        without = result_sum(folder, "without.nc", one->name);
    with = result_sum(folder, "out.nc", one->name);
    settings = result_text(folder, "settings");
    if (one->kind == PRINTED)
        well = strstr(result.output, one->name) != NULL;
    else if (one->kind == SAID)
        well = strstr(result.errors, one->name) != NULL;
    else if (one->kind == SETTING)
        well = strstr(settings, one->name) != NULL;
    else
        well = holds(one, with, without);
    if (!well)
        print_error("%s: %s: %.12g, without %.12g; settings\n%s\n", one->with, one->name, with, without,
                    settings);
    free(settings);
    run_free(&result);
    return well;
}

#define STEPS SERIES "--earlier-step 1 --later-step 2 "
#define STERIC "steric_height_change"
#define WARM "thermosteric_height_change"
#define SALT "halosteric_height_change"
#define HEAT "heat_content_change"
#define DEPTH "integrated_depth"

/* 20 cells; the levels are at 5, 105 ... 505 m, so that 0..bottom is 505 m deep. */
static const option_case cases[] = {
    /* Times: the sea warms by 0.02 K a month. */
    {SERIES "--earlier-step 1 --later-step=3", NULL, SETTING, "later-step = 3", 0, 0},
    {SERIES "--earlier-step 1 --later-step 3", STEPS, RATIO, HEAT, 2.0, 1e-3},
    {SERIES "--earlier-time 2001-01..2001-03 --later-time 2001-04..2001-06", STEPS, RATIO, HEAT, 3.0, 1e-2},
    {SERIES "--earlier-step 1..4 --later-step 5..8 --mean integral",
     SERIES "--earlier-step 1..4 --later-step 5..8", DIFFERS, STERIC, 0, 1e-4},
    {SERIES "--earlier-step 1..4 --later-step 5..8 --least-times 0.9",
     SERIES "--earlier-step 1..4 --later-step 5..8", RATIO, DEPTH, (20 * 505.0 - 100.0) / (20 * 505.0), 1e-6},
    {"scenario --field series.nc --field-step 3 --warming 1",
     "scenario --field series.nc --field-step 1 --warming 1", DIFFERS, STERIC, 0, 1e-2},
    {"scenario --field series.nc --field-time 2001-03..2001-03 --warming 1",
     "scenario --field series.nc --field-step 3 --warming 1", RATIO, STERIC, 1.0, 1e-12},
    {"scenario --field series.nc --warming 1 --least-times 0.9", "scenario --field series.nc --warming 1",
     RATIO, DEPTH, (20 * 505.0 - 100.0) / (20 * 505.0), 1e-6},
    {"scenario --field series.nc --warming 1 --mean integral", "scenario --field series.nc --warming 1",
     DIFFERS, STERIC, 0, 1e-4},
    /* Scenario: heat is cp0 times the warming over the specific volume; both tables double what is asked. */
    {"scenario --field a.nc --warming 2", WARMED, RATIO, HEAT, 2.0, 1e-3},
    {"scenario --field a.nc --freshening 0.2", "scenario --field a.nc --freshening 0.1", RATIO, SALT, 2.0,
     1e-3},
    {"scenario --field a.nc --profile profile.txt", WARMED, RATIO, HEAT, 2.0, 1e-3},
    {"scenario --field a.nc --profile profile.txt", "scenario --field a.nc --freshening 0.1", RATIO, SALT,
     2.0, 1e-2},
    /* Reading. */
    {"change --earlier named_a.nc --later named_b.nc --vertical-unit m --temperature tt --salinity ss "
     "--temperature-kind conservative --salinity-kind absolute",
     PLAIN, RATIO, STERIC, 1.0, 1e-6},
    {PLAIN "--temperature-kind in-situ", PLAIN, DIFFERS, STERIC, 0, 0.05},
    {PLAIN "--temperature-kind potential", PLAIN, DIFFERS, STERIC, 0, 0.05},
    {PLAIN "--salinity-kind practical", PLAIN, DIFFERS, SALT, 0, 0.05},
    {PLAIN "--salinity-kind reference", PLAIN, SETTING, "salinity-kind = reference", 0, 0},
    /* t90 = t68/1.00024 (Preston-Thomas 1990, Metrologia 27, 3-10; for oceanic use Saunders 1990, WOCE News
       10) */
    {PLAIN "--temperature-scale ipts68", PLAIN, RATIO, HEAT, 1.0 / 1.00024, 1e-6},
    {"change --earlier named_a.nc --later named_b.nc --vertical-unit dbar --temperature tt --salinity ss "
     "--temperature-kind conservative --salinity-kind absolute",
     PLAIN, DIFFERS, HEAT, 0, 0.03},
    /* Half of the second step of 0.7 K: member 3 is 1.4 K warmer than member 1, the later file 1 K than that.
     */
    {"scenario --field members.nc --select member=3 --warming 1", WARMED, DIFFERS, STERIC, 0, 0.2},
    {"scenario --field members.nc --select member=1 --warming 1", WARMED, RATIO, STERIC, 1.0, 1e-12},
    /* Salinity from elsewhere. */
    {"change --earlier warm_a.nc --later warm_b.nc --background-salinity salt.nc", PLAIN, ABSENT, STERIC, 0,
     0},
    {"change --earlier warm_a.nc --later warm_b.nc --background-salinity salt.nc", PLAIN, RATIO, WARM, 1.0,
     1e-3},
    {"change --earlier warm_a.nc --later warm_b.nc --constant-salinity 34.7 --salinity-kind absolute", PLAIN,
     RATIO, WARM, 1.0, 1e-2},
    {"change --earlier reference_a.nc --later reference_b.nc --salinity-anomaly anomaly.nc",
     "change --earlier reference_a.nc --later reference_b.nc", DIFFERS, STERIC, 0, 1e-3},
    /* Companions: areas 1e10 + 1e9 (j + i) sum to 20e10 + 1e9 (5 * 6 + 4 * 10). */
    {PLAIN "--cell-area area.nc", NULL, SUM, "cell_area", 2.7e11, 1e-12},
    {"scenario --field a.nc --warming 1 --thickness thick.nc --vertical cells", NULL, SUM, DEPTH, 20 * 300.0,
     1e-6},
    {PLAIN "--mask mask.nc", PLAIN, RATIO, DEPTH, 19.0 / 20.0, 1e-6}, /* the first cell is land */
    {"change --earlier bare_a.nc --later bare_b.nc --coordinates a.nc", PLAIN, RATIO, STERIC, 1.0, 1e-9},
    {PLAIN "--bathymetry floor.nc", PLAIN, RATIO, DEPTH, 540.0 / 505.0, 1e-6},
    {PLAIN "--bathymetry floor.nc --bottom-reach 0", PLAIN, RATIO, DEPTH, 1.0, 1e-6},
    /* Layers and the vertical. */
    {PLAIN "--layers 0..200,200..bottom", PLAIN, PRESENT, "layer_" STERIC, 0, 0},
    {PLAIN "--layers 0..200,200..bottom", PLAIN, RATIO, STERIC, 1.0, 1e-6},
    {PLAIN "--layers 100..300", NULL, SUM, DEPTH, 20 * 200.0, 1e-6},
    {"change --earlier cells_a.nc --later cells_b.nc", NULL, SUM, DEPTH, 20 * 555.0, 1e-6},
    {"change --earlier cells_a.nc --later cells_b.nc --vertical linear", NULL, SUM, DEPTH, 20 * 505.0, 1e-6},
    {"change --earlier cells_a.nc --later cells_b.nc --vertical cells", NULL, SUM, DEPTH, 20 * 555.0, 1e-6},
    {PLAIN "--vertical steffen", PLAIN, DIFFERS, STERIC, 0, 1e-2},
    {PLAIN "--vertical akima", PLAIN, DIFFERS, STERIC, 0, 1e-2},
    {PLAIN "--surface-reach 3 --layers 10..bottom", NULL, SUM, DEPTH, 20 * 495.0, 1e-6},
    {"change --earlier gap_a.nc --later gap_b.nc --gap-reach 400",
     "change --earlier gap_a.nc --later gap_b.nc", RATIO, DEPTH, 20 * 505.0 / (19 * 505.0 + 105.0), 1e-6},
    /* Equation and sharing out. */
    {PLAIN "--equation gibbs", PLAIN, DIFFERS, STERIC, 0, 1e-3},
    {PLAIN "--equation eos80", PLAIN, DIFFERS, STERIC, 0, 0.05},
    {PLAIN "--equation linear --expansion 4e-4", PLAIN "--equation linear", RATIO, WARM, 2.0, 2e-3},
    {PLAIN "--equation linear --contraction 15e-4", PLAIN "--equation linear", RATIO, SALT, 2.0, 2e-3},
    {PLAIN "--equation linear --density 1100", PLAIN "--equation linear", RATIO, HEAT, 1100.0 / 1027.0, 1e-6},
    {PLAIN "--reference-density 1000", PLAIN "--reference-density 1100", RATIO, STERIC, 1.1, 1e-6},
    {PLAIN "--attribution earlier", PLAIN, PRESENT, "attribution_remainder", 0, 0},
    {PLAIN "--attribution linear", PLAIN, DIFFERS, WARM, 0, 1e-2},
    /* Regions: columns at 10, 12 ... 18 E, rows at 50, 48 ... 44 S; the box takes the last four columns. */
    {PLAIN "--region Inner_Bight=11,-51,19,-43", PLAIN "--region Whole=9,-51,19,-43", RATIO, "region_area",
     0.8, 1e-9},
    {PLAIN "--regions parts.nc", PLAIN "--region Whole=9,-51,19,-43", RATIO, "region_" HEAT, 1.0, 1e-9},
    {PLAIN "--regions parts.nc", NULL, PRINTED, "inner_bight", 0, 0},
    {PLAIN "--ocean-area 1.8125e14", PLAIN, RATIO, "region_sea_level_equivalent", 2.0, 1e-12},
    {PLAIN "--fill-coverage", PLAIN, PRESENT, "region_filled_" HEAT, 0, 0},
    /* Results and running. */
    {PLAIN "--table csv", NULL, PRINTED, "region_name,layer [m],", 0, 0},
    {PLAIN "--table json", NULL, PRINTED, "{", 0, 0},
    {PLAIN "--memory 64M", PLAIN, RATIO, STERIC, 1.0, 1e-15},
    {PLAIN "--progress always", NULL, SAID, "100", 0, 0},
    {PLAIN "--progress never --log log.txt", NULL, SETTING, "log = ", 0, 0},
};

static void test_effects(void **state)
{
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "options");
    const char *last = NULL;
    size_t failed = 0;

    (void)state;
    option_sea_write(folder);
    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++)
        failed += !run_option(folder, &cases[i], &last);
    run_remove_folder(folder);
    assert_int_equal(failed, 0);
}

/* Every --name of the help stands in a case above or in a test below. */
static void test_none_is_forgotten(void **state)
{
    static const char elsewhere[] = " --output --replace --threads --settings --quiet --log --help ";
    static const char *const commands[] = {"change", "scenario"};
    size_t forgotten = 0, options = 0;

    (void)state;
    for (size_t c = 0; c < 2; c++) {
        run_result result = run_line(c == 0 ? "change --help" : "scenario --help", NULL);
        const char *at = result.output;

        assert_exit(&result, 0);
        while ((at = strstr(at, "\n  --")) != NULL) {
            char name[64], spaced[66];
            bool found;

            at += 3;
            snprintf(name, sizeof name, "%.*s", (int)strcspn(at, " ,=\n"), at);
            snprintf(spaced, sizeof spaced, " %s ", name);
            found = strstr(elsewhere, spaced) != NULL;
            for (size_t i = 0; i < sizeof cases / sizeof cases[0] && !found; i++) {
                const char *stands = strstr(cases[i].with, name);

                found = stands != NULL && strchr(" =", stands[strlen(name)]) != NULL;
            }
            if (!found)
                print_error("%s of %s is tested nowhere\n", name, commands[c]);
            forgotten += !found;
            options++;
        }
        run_free(&result);
    }
    assert_true(options > 80);
    assert_int_equal(forgotten, 0);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_effects),
        cmocka_unit_test(test_none_is_forgotten),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
