/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Command lines as a whole: the same numbers for any number of threads and from written settings, what is
 * said and in which form, what is refused, and the smallest seas.
 */
#include "program/option_sea.h"

#include "support/testing.h"

#include <jansson.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* ---- the same numbers ---- */

/* A grid of some tiles and rows of different depth, so that the workers have something to share out. */
static double sloping(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return (7 * j + i) % 13 < k ? (double)NAN : small_grid_temperature(grid, t, k, j % 5, i % 7);
}

static double sloping_salt(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return small_grid_salinity(grid, t, k, j % 5, i % 7);
}

static void test_any_number_of_threads(void **state)
{
    static const char *const counts[] = {"1", "2", "3", "7"};
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "threads");
    small_grid grid = small_grid_plain();
    double latitude[60], longitude[90];

    (void)state;
    for (size_t j = 0; j < 60; j++)
        latitude[j] = -88.5 + 3.0 * (double)j;
    for (size_t i = 0; i < 90; i++)
        longitude[i] = 2.0 + 4.0 * (double)i;
    grid.rows = 60;
    grid.columns = 90;
    grid.levels = 14;
    grid.latitude = latitude;
    grid.longitude = longitude;
    grid.mode = NC_NETCDF4;
    grid.deflate = 1;
    grid.temperature.value = sloping;
    grid.salinity.value = sloping_salt;
    option_sea_pair(&grid, folder, "a.nc", "b.nc");
    for (size_t i = 0; i < sizeof counts / sizeof counts[0]; i++) {
        char line[256], output[32];
        run_result result;

        snprintf(output, sizeof output, "out_%s.nc", counts[i]);
        snprintf(line, sizeof line, PLAIN "--output %s --quiet --threads %s --layers 0..300,300..bottom",
                 output, counts[i]);
        result = run_line(line, folder);
        assert_exit(&result, 0);
        run_free(&result);
        if (i > 0)
            expect_same_maps(folder, "out_1.nc", output);
    }
    run_remove_folder(folder);
}

/* The settings of a result, fed back, give the same numbers and the same settings. */
static void test_settings_round_trip(void **state)
{
    static const char *const lines[] = {
        PLAIN,
        PLAIN
        "--equation linear --expansion 3e-4 --layers 0..200,200..bottom --region Inner_Bight=11,-51,19,-43",
        PLAIN "--bathymetry floor.nc --bottom-reach 20 --attribution linear --reference-density 1030 "
              "--fill-coverage",
        SERIES "--earlier-step 1..4 --later-time 2001-05..2001-08 --mean integral --least-times 0.9 "
               "--vertical linear",
        WARMED "--vertical akima --surface-reach 7.5 --gap-reach 400 --ocean-area 3.6e14",
        "scenario --field ./a.nc --profile profile.txt --equation gibbs --cell-area area.nc --mask mask.nc",
        "change --earlier 'with # and blank.nc' --later b.nc",
    };
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "round"), from[4096], to[4096];

    (void)state;
    option_sea_write(folder);
    snprintf(from, sizeof from, "%s/a.nc", folder);
    snprintf(to, sizeof to, "%s/with # and blank.nc", folder);
    {
        size_t count;
        unsigned char *bytes = read_bytes(folder, "a.nc", &count);

        write_bytes(folder, "with # and blank.nc", bytes, count);
        free(bytes);
    }
    for (size_t i = 0; i < sizeof lines / sizeof lines[0]; i++) {
        run_result result = run_into(folder, "out.nc", lines[i]);
        char *settings, *again, line[128];

        assert_non_null(result.errors);
        run_free(&result);
        settings = result_text(folder, "settings");
        run_write_file(folder, "settings.txt", settings);
        snprintf(from, sizeof from, "%s/out.nc", folder);
        snprintf(to, sizeof to, "%s/first.nc", folder);
        assert_int_equal(rename(from, to), 0);
        snprintf(line, sizeof line, "%.*s --settings settings.txt", (int)strcspn(lines[i], " "), lines[i]);
        result = run_line(line, folder);
        assert_exit(&result, 0);
        run_free(&result);
        expect_same_maps(folder, "first.nc", "out.nc");
        again = result_text(folder, "settings");
        assert_string_equal(again, settings);
        free(settings);
        free(again);
    }
    run_remove_folder(folder);
}

/* ---- what is said ---- */

static size_t count_of(const char *text, char which)
{
    size_t count = 0;

    for (; *text != '\0'; text++)
        count += *text == which;
    return count;
}

static void test_tables_parse(void **state)
{
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "tables");
    run_result result;
    json_error_t where;
    json_t *json;

    (void)state;
    option_sea_write(folder);
    result = run_line(PLAIN "--quiet --table json --layers 0..200,200..bottom", folder);
    assert_exit(&result, 0);
    json = json_loads(result.output, 0, &where);
    if (json == NULL)
        fail_msg("line %d: %s in\n%s", where.line, where.text, result.output);
    json_decref(json);
    run_free(&result);
    result = run_line(PLAIN "--quiet --table csv --layers 0..200,200..bottom", folder);
    assert_exit(&result, 0);
    for (char *line = strtok(result.output, "\n"), *first = line; line != NULL; line = strtok(NULL, "\n"))
        assert_int_equal(count_of(line, ','), count_of(first, ','));
    run_free(&result);
    run_remove_folder(folder);
}

static void test_log_progress_and_quiet(void **state)
{
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "talk"), *log;
    run_result result;
    size_t count, lines = 0;

    (void)state;
    option_sea_write(folder);
    result = run_line(PLAIN "--log log.txt --progress always --output out.nc", folder);
    assert_exit(&result, 0);
    assert_holds(result.errors, "%");
    assert_holds(result.errors, "wrote out.nc");
    run_free(&result);
    result = run_line(PLAIN "--log log.txt --output out.nc", folder); /* refused, and logged behind it */
    assert_exit(&result, 2);
    run_free(&result);
    log = (char *)read_bytes(folder, "log.txt", &count);
    for (char *line = strtok(log, "\n"); line != NULL; line = strtok(NULL, "\n")) {
        json_t *json = json_loads(line, 0, NULL);

        assert_true(json_is_object(json));
        assert_true(json_is_string(json_object_get(json, "time")) &&
                    json_is_string(json_object_get(json, "event")));
        json_decref(json);
        lines++;
    }
    assert_true(lines >= 4);
    free(log);
    result = run_line(PLAIN "--quiet --output out.nc --replace", folder);
    assert_exit(&result, 0);
    assert_string_equal(result.errors, "");
    assert_true(result.output[0] != '\0');
    run_free(&result);
    run_remove_folder(folder);
}

/* ---- what is refused ---- */

typedef struct refusal {
    const char *line;
    const char *part; /* of the message */
} refusal;

static void expect_refusals(const char *folder, const refusal *refusals, size_t count)
{
    char *before = folder_state(folder);
    size_t failed = 0;

    for (size_t i = 0; i < count; i++) {
        run_result result = run_line(refusals[i].line, folder);

        failed += !refused_well(&result, 2, (const char *[]){refusals[i].part, NULL}, refusals[i].line);
        run_free(&result);
    }
    assert_int_equal(failed, 0);
    assert_true(folder_untouched(folder, before, "refused command lines"));
    free(before);
}

static const refusal refused[] = {
    {"", "--help"},
    {"chagne", "change"},
    {"--earlier a.nc", "--earlier"},
    {"change", "--earlier"},
    {"change --earlier a.nc", "--later"},
    {PLAIN "--equatoin teos10", "--equation"},
    {PLAIN "-o out.nc", "-o"},
    {PLAIN "c.nc", "c.nc"},
    {PLAIN "--output", "--output"},
    {PLAIN "--output=", "--output"},
    {PLAIN "--output --replace", "--output"},
    {PLAIN "--table text --table csv", "once"},
    {PLAIN "--quiet --quiet", "--quiet"},
    {PLAIN "--quiet=maybe", "--quiet"},
    {PLAIN "--quiet --progress always", "--progress"},
    {PLAIN "--replace", "--output"},
    {PLAIN "--equation quadratic", "teos10"},
    {PLAIN "--equation", "--equation"},
    {PLAIN "--expansion 2e-4", "linear"},
    {PLAIN "--density 1025 --equation eos80", "linear"},
    {PLAIN "--earlier-time 2001..2002 --earlier-step 3", "--earlier-step"},
    {SERIES "--quiet --later-step 3 --earlier-time 2002..2001", "2002"},
    {SERIES "--quiet --later-step 3 --earlier-time 2001-13..2002", "2001-13"},
    {SERIES "--quiet --later-step 3 --earlier-time yesterday..2002", "yesterday"},
    {PLAIN "--earlier-time 2001..", "--earlier-time"},
    {PLAIN "--earlier-step 0", "--earlier-step"},
    {PLAIN "--earlier-step 3..1", "--earlier-step"},
    {PLAIN "--earlier-step -1", "--earlier-step"},
    {PLAIN "--earlier-step 99999999999999999999", "--earlier-step"},
    {PLAIN "--least-times 1.5", "1.5"},
    {PLAIN "--least-times nan", "nan"},
    {PLAIN "--ocean-area 0", "--ocean-area"},
    {PLAIN "--ocean-area inf", "--ocean-area"},
    {PLAIN "--reference-density 1", "--reference-density"},
    {PLAIN "--reference-density near", "local"},
    {PLAIN "--surface-reach 5m", "5m"},
    {PLAIN "--surface-reach 0x10", "0x10"},
    {PLAIN "--surface-reach ''", "--surface-reach"},
    {PLAIN "--layers 700..0", "--layers"},
    {PLAIN "--layers 0..700,,700..800", "--layers"},
    {PLAIN "--layers bottom..700", "--layers"},
    {PLAIN "--layers -5..700", "--layers"},
    {PLAIN "--layers 0..1e400", "--layers"},
    {PLAIN "--region Box=1,2,3", "--region"},
    {PLAIN "--region Box=0,50,10,40", "--region"},
    {PLAIN "--region Box=0,-100,10,40", "--region"},
    {PLAIN "--region Box=nan,-10,10,40", "--region"},
    {PLAIN "--region =0,-10,10,40", "--region"},
    {PLAIN "--region A=0,-60,30,-40 --region A=0,-60,20,-40", "twice"},
    {PLAIN "--select member", "--select"},
    {PLAIN "--select member=0", "--select"},
    {PLAIN "--select member=1 --select member=2", "twice"},
    {PLAIN "--threads 0", "--threads"},
    {PLAIN "--threads 2.5", "--threads"},
    {PLAIN "--threads -2", "--threads"},
    {PLAIN "--memory lots", "--memory"},
    {PLAIN "--memory -1G", "--memory"},
    {PLAIN "--memory 0", "--memory"},
    {PLAIN "--memory 99999999999T", "--memory"},
    {PLAIN "--constant-salinity 35 --background-salinity salt.nc", "--constant-salinity"},
    {PLAIN "--constant-salinity 35 --salinity ss", "--salinity"},
    {PLAIN "--vertical splines", "akima"},
    {PLAIN "--vertical akima --mean integral", "--mean"},
    {PLAIN "--warming 1", "--warming"},
    {"scenario --field a.nc", "--warming"},
    {"scenario --warming 1", "--field"},
    {"scenario --field a.nc --warming 1 --earlier b.nc", "--earlier"},
    {"scenario --field a.nc --warming 100", "--warming"},
    {"scenario --field a.nc --warming 1 --profile profile.txt", "--profile"},
    {"scenario --field a.nc --freshening 1 --constant-salinity 35", "--constant-salinity"},
    {"--version change", "--version"},
    {"change --settings a.nc", "a.nc"},
};

static void test_refused_lines(void **state)
{
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "lines");

    (void)state;
    option_sea_write(folder);
    expect_refusals(folder, refused, sizeof refused / sizeof refused[0]);
    run_remove_folder(folder);
}

static void test_refused_settings(void **state)
{
    static const struct {
        const char *text, *line;
    } cases_of_settings[] = {
        {"earlier = a.nc\nlater = b.nc\nequatoin = teos10\n", "line 3"},
        {"earlier = a.nc\n\n# a comment\nlater b.nc\n", "line 4"},
        {"earlier = a.nc\nlater = b.nc\nthreads = many\n", "line 3"},
        {"earlier = a.nc\nlater = b.nc\ntable = csv\ntable = json\n", "line 4"},
        {"earlier = a.nc\nlater = b.nc\nquiet = perhaps\n", "line 3"},
        {"earlier = a.nc\nlater = b.nc\nlayers =\n", "line 3"},
        {"earlier = a.nc\nlater = \"b.nc\n", "line 2"},
        {"earlier = a.nc\nlater = b.nc\nsettings = other.txt\n", "line 3"},
        {"earlier = a.nc\nlater = b.nc\n= 3\n", "line 3"},
        {"earlier = a.nc\nlater = b.nc\n\033[31m = 3\n", "line 3"},
    };
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "settings");

    (void)state;
    option_sea_write(folder);
    for (size_t i = 0; i < sizeof cases_of_settings / sizeof cases_of_settings[0]; i++) {
        run_write_file(folder, "wrong.txt", cases_of_settings[i].text);
        expect_refusals(
            folder, &(refusal){"change --settings wrong.txt --output out.nc", cases_of_settings[i].line}, 1);
    }
    run_remove_folder(folder);
}

/* ---- small and odd seas ---- */

static void expect_works(const small_grid *grid, const char *options, const char *what)
{
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "small");
    attempt how = {.folder = folder};
    run_result result;

    option_sea_pair(grid, folder, "a.nc", "b.nc");
    attempt_add(&how, PLAIN "--output out.nc");
    attempt_add(&how, options);
    result = attempt_run(&how);
    if (result.exit_code != 0 || !no_report(&result, what))
        fail_msg("%s: exit code %d, standard error:\n%s", what, result.exit_code, result.errors);
    assert_true(result_sum(folder, "out.nc", "integrated_depth") > 0.0);
    run_free(&result);
    run_remove_folder(folder);
}

static void test_small_grids(void **state)
{
    small_grid grid = small_grid_plain();

    (void)state;
    grid.columns = 1;
    expect_works(&grid, "", "one column of cells");
    grid.rows = 1;
    expect_works(&grid, "", "one column");
    expect_works(&grid, "--vertical akima", "one column, a spline");
    grid.levels = 2;
    expect_works(&grid, "--vertical akima", "one column of two levels, a spline");
    grid.levels = 1;
    grid.depth_bounds = true;
    expect_works(&grid, "", "one cell");
    grid = small_grid_plain();
    grid.rows = 1;
    expect_works(&grid, "", "one row");
    grid = small_grid_plain();
    grid.levels = 1;
    grid.depth_bounds = true;
    expect_works(&grid, "", "one level of cells");
    grid.depth_bounds = false;
    expect_works(&grid, "", "one level of samples: the top is carried up");
    grid = small_grid_plain();
    grid.temperature.name = "quiet";
    grid.temperature.standard_name = NULL;
    expect_works(&grid, "--temperature quiet --temperature-kind conservative",
                 "a variable named like an option");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_any_number_of_threads), cmocka_unit_test(test_settings_round_trip),
        cmocka_unit_test(test_tables_parse),          cmocka_unit_test(test_log_progress_and_quiet),
        cmocka_unit_test(test_refused_lines),         cmocka_unit_test(test_refused_settings),
        cmocka_unit_test(test_small_grids),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
