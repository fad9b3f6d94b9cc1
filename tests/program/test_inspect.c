/* SPDX-License-Identifier: GPL-3.0-or-later */
/* `stericol inspect`: how files would be read, one by one and several at once. */
#include "program/inspect_sea.h"
#include "support/testing.h"

#include <stdio.h>
#include <string.h>

enum { LINE_ROOM = 4096 };

/* ---- a file that is as it should be ---- */

static void a_good_file_is_described(void **state)
{
    const inspect_recipe how = {.level_bounds = true, .title = "The Velmar Sea"};
    json_t *whole = inspect_document(inspect_make("good.nc", &how), "", 0);

    (void)state;
    inspect_expect_plain(whole, 0.0);
    assert_same_number(inspect_number(whole, "refused"), 0);
    assert_true(json_is_null(inspect_at(whole, "set")));
    assert_string_equal(inspect_text_at(whole, "files.0.format"), "NetCDF-4");
    assert_string_equal(inspect_text_at(whole, "files.0.conventions"), "CF-1.10");
    assert_string_equal(inspect_text_at(whole, "files.0.title"), "The Velmar Sea");
    assert_string_equal(inspect_text_at(whole, "files.0.dimensions.0.name"), "depth");
    assert_same_number(inspect_number(whole, "files.0.dimensions.0.length"), LEVELS);
    assert_true(inspect_lists(inspect_at(whole, "files.0.variables"), "role", "temperature"));
    assert_true(inspect_lists(inspect_at(whole, "files.0.variables"), "role", "coordinate"));
    assert_string_equal(inspect_text_at(whole, "files.0.reading.temperature.name"), "warmth");
    assert_string_equal(inspect_text_at(whole, "files.0.reading.temperature.kind"), "potential");
    assert_false(inspect_true(whole, "files.0.reading.temperature.kind_assumed"));
    assert_string_equal(inspect_text_at(whole, "files.0.reading.temperature.recognised_by"), "standard_name");
    assert_string_equal(inspect_text_at(whole, "files.0.reading.salinity.kind"), "practical");
    assert_string_equal(inspect_text_at(whole, "files.0.reading.vertical.coordinate"), "depth");
    assert_string_equal(inspect_text_at(whole, "files.0.reading.vertical.vertical"), "cells");
    assert_string_equal(inspect_text_at(whole, "files.0.reading.vertical.positive"), "down");
    assert_same_number(inspect_number(whole, "files.0.reading.vertical.last"), 100);
    assert_false(inspect_true(whole, "files.0.reading.vertical.upward"));
    assert_string_equal(inspect_text_at(whole, "files.0.reading.horizontal.grid"), "regular");
    assert_same_number(inspect_number(whole, "files.0.reading.horizontal.latitude.1"), -16);
    assert_same_number(inspect_number(whole, "files.0.reading.horizontal.longitude_spacing.0"), 3);
    assert_false(inspect_true(whole, "files.0.reading.horizontal.cyclic"));
    assert_same_number((double)json_array_size(inspect_at(whole, "files.0.suspects")), 0);
    json_decref(whole);
}

static void the_text_is_narrow_and_plain(void **state)
{
    const inspect_recipe how = {.title = "Salt \xC3\xA9 and \x1B[31mred", .times = 2, .months = {1, 2}};
    run_result result = inspect_run(inspect_make("plain.nc", &how));
    size_t width = 0;

    (void)state;
    assert_exit(&result, 0);
    assert_string_equal(result.errors, "");
    assert_holds(result.output, "Salt \\xC3\\xA9 and \\x1B[31mred");
    assert_holds(result.output,
                 "T warmth(time, depth, lat, lon) float [degC] sea_water_potential_temperature");
    assert_holds(result.output,
                 "temperature   warmth, recognised by standard_name: potential (as the file says)");
    assert_holds(result.output, "--vertical auto means linear");
    assert_holds(result.output,
                 "Values of 2031-01, the first of 2 times (others: --field-time, --field-step)");
    assert_holds(result.output, "\n       5.00   90.0   20.000  22.750  25.500 ");
    assert_holds(result.output, "\n               [%]         of cells                  of cells\n");
    assert_holds(result.output,
                 "72 of 80 cells hold a column (90.0 % at the surface): 9 end above the deepest level");
    assert_holds(result.output, "Nothing would be refused.");
    assert_holds(result.output,
                 "--earlier-time FROM..TO and --later-time FROM..TO within 2031-01-01..2031-02-28");
    for (const char *c = result.output; *c != '\0'; c++) {
        assert_true(*c == '\n' || (*c >= ' ' && *c <= '~'));
        width = *c == '\n' ? 0 : width + 1;
        assert_true(width <= 100);
    }
    run_free(&result);
}

static void packed_values_are_unpacked(void **state)
{
    const inspect_recipe how = {.packed = true};
    json_t *whole = inspect_document(inspect_make("packed.nc", &how), "", 0);
    const json_t *variables = inspect_at(whole, "files.0.variables");

    (void)state;
    inspect_expect_plain(whole, 0.0);
    for (size_t i = 0; i < json_array_size(variables); i++) {
        const json_t *variable = json_array_get(variables, i);

        if (strcmp(inspect_text_at(variable, "name"), "warmth") == 0) {
            assert_string_equal(inspect_text_at(variable, "type"), "int16");
            assert_true(inspect_true(variable, "packed"));
        }
    }
    json_decref(whole);
}

/* However little memory there is, and however the file is cut into chunks. */
static void bands_and_chunks_change_nothing(void **state)
{
    const inspect_recipe how = {.chunked = true, .level_bounds = true, .title = "The Velmar Sea"};
    const char *path = inspect_make("chunks.nc", &how);
    json_t *whole = inspect_document(path, "", 0), *narrow = inspect_document(path, "--memory 2K", 0);

    (void)state;
    inspect_expect_plain(whole, 0.0);
    assert_true(json_equal(whole, narrow));
    assert_true(inspect_lists(inspect_at(whole, "files.0.variables"), "type", "float"));
    json_decref(whole);
    json_decref(narrow);
}

static void heights_are_turned_over(void **state)
{
    const inspect_recipe how = {.heights = true};
    json_t *whole = inspect_document(inspect_make("heights.nc", &how), "", 0);

    (void)state;
    inspect_expect_plain(whole, 0.0);
    assert_true(inspect_true(whole, "files.0.reading.vertical.upward"));
    assert_same_number(inspect_number(whole, "files.0.reading.vertical.first"), 5);
    json_decref(whole);
}

/* ---- times ---- */

static void times_are_described_and_averaged(void **state)
{
    const inspect_recipe how = {.times = 4, .months = {1, 2, 3, 6}};
    const char *path = inspect_make("times.nc", &how);
    json_t *whole = inspect_document(path, "", 0), *window, *steps;

    (void)state;
    inspect_expect_plain(whole, 0.0); /* the first alone */
    assert_same_number(inspect_number(whole, "files.0.values.times"), 1);
    assert_string_equal(inspect_text_at(whole, "files.0.values.time"), "2031-01");
    assert_same_number(inspect_number(whole, "files.0.reading.times.count"), 4);
    assert_string_equal(inspect_text_at(whole, "files.0.reading.times.calendar"), "noleap");
    assert_string_equal(inspect_text_at(whole, "files.0.reading.times.last"), "2031-06-30");
    assert_same_number(inspect_number(whole, "files.0.reading.times.months.5"), 1);
    assert_same_number(inspect_number(whole, "files.0.reading.times.months.3"), 0);
    assert_same_number((double)json_array_size(inspect_at(whole, "files.0.reading.times.holes")), 1);
    assert_string_equal(inspect_text_at(whole, "files.0.reading.times.holes.0.0"), "2031-03");
    assert_string_equal(inspect_text_at(whole, "files.0.reading.times.holes.0.1"), "2031-06");
    assert_true(inspect_lists(inspect_at(whole, "files.0.suggestions"), "option", "--earlier-time"));
    /* January (31 days) and March (31 days) with February (28) between: (0*31 + 1*28 + 2*31)/90 = 1 above
     * January. */
    window = inspect_document(path, "--field-time 2031-01..2031-03", 0);
    assert_same_number(inspect_number(window, "files.0.values.times"), 3);
    /* The mean of 72 values that are rounded once each: a few parts in 1e15 of 20. */
    assert_close(inspect_number(window, "files.0.values.levels.0.temperature.mean_of_cells"), 23.75, 1e-13);
    steps = inspect_document(path, "--field-step 2", 0);
    inspect_expect_plain(steps, 1.0);
    json_decref(whole);
    json_decref(window);
    json_decref(steps);
}

static void windows_can_be_empty_or_wrong(void **state)
{
    const inspect_recipe how = {.times = 2, .months = {1, 2}};
    const char *path = inspect_make("windows.nc", &how);
    char line[LINE_ROOM];
    json_t *whole = inspect_document(path, "--field-time 2040..2041", 3);
    run_result result;

    (void)state;
    inspect_expect_refusal(whole, "no time lies in --field-time 2040..2041");
    json_decref(whole);
    snprintf(line, sizeof line, "%s --field-time 2031-13..2032", path);
    result = inspect_run(line);
    assert_exit(&result, 2);
    run_free(&result);
    snprintf(line, sizeof line, "%s --field-time 2031..2032 --field-step 1", path);
    result = inspect_run(line);
    assert_exit(&result, 2);
    run_free(&result);
}

/* ---- what a file lacks, or leaves open ---- */

static void salinity_may_be_absent(void **state)
{
    const inspect_recipe how = {.no_salinity = true};
    const char *path = inspect_make("no_salinity.nc", &how);
    json_t *whole = inspect_document(path, "", 0);
    char line[LINE_ROOM];
    run_result result;

    (void)state;
    assert_true(json_is_null(inspect_at(whole, "files.0.reading.salinity")));
    assert_true(json_is_null(inspect_at(whole, "files.0.values.levels.0.salinity")));
    assert_true(inspect_lists(inspect_at(whole, "files.0.suggestions"), "option", "--background-salinity"));
    assert_string_equal(inspect_text_at(whole, "files.0.conditions.0.what"), "no_salinity");
    assert_string_equal(inspect_text_at(whole, "files.0.conditions.0.text"),
                        "would be refused without --background-salinity or --constant-salinity: no salinity "
                        "in this file");
    assert_same_number(inspect_number(whole, "files.0.values.levels.2.columns"), 63);
    json_decref(whole);
    result = inspect_run(path);
    assert_exit(&result, 0);
    assert_holds(result.output, "would be refused without --background-salinity or --constant-salinity");
    assert_null(strstr(result.output, "Nothing would be refused."));
    run_free(&result);
    /* It is as inspect says. */
    snprintf(line, sizeof line, "change --earlier %s --later %s --output %s", path, path,
             inspect_path("never.nc"));
    result = run_line(line, NULL);
    assert_exit(&result, 3);
    assert_holds(result.errors, "--background-salinity or --constant-salinity");
    run_free(&result);
}

static void two_temperatures_are_a_question(void **state)
{
    const inspect_recipe how = {.second_temperature = "warmth_too"};
    const char *path = inspect_make("two.nc", &how);
    json_t *whole = inspect_document(path, "", 3);

    (void)state;
    inspect_expect_refusal(
        whole, "2 variables could be the temperature (warmth, warmth_too); name one with --temperature");
    /* Salinity alone is still described. */
    assert_true(json_is_null(inspect_at(whole, "files.0.reading.temperature")));
    assert_string_equal(inspect_text_at(whole, "files.0.reading.salinity.name"), "saltiness");
    assert_same_number(inspect_number(whole, "files.0.values.levels.0.salinity.minimum"), 35);
    json_decref(whole);
    whole = inspect_document(path, "--temperature warmth_too", 0);
    inspect_expect_plain(whole, 0.0);
    json_decref(whole);
}

static void levels_need_a_unit(void **state)
{
    const inspect_recipe how = {.level_without_unit = true};
    const char *path = inspect_make("levels.nc", &how);
    json_t *whole = inspect_document(path, "", 3);

    (void)state;
    inspect_expect_refusal(whole,
                           "depth: the vertical axis has no units (values 5 to 100); say what the levels "
                           "are with --vertical-unit m or --vertical-unit dbar");
    assert_true(json_is_null(inspect_at(whole, "files.0.reading")));
    assert_same_number((double)json_array_size(inspect_at(whole, "files.0.dimensions")), 3);
    json_decref(whole);
    whole = inspect_document(path, "--vertical-unit dbar", 0);
    assert_string_equal(inspect_text_at(whole, "files.0.reading.vertical.coordinate"), "pressure");
    assert_same_number(inspect_number(whole, "files.0.values.levels.2.pressure"), 100);
    assert_true(inspect_lists(inspect_at(whole, "files.0.assumptions"), "level", "warning"));
    json_decref(whole);
}

static void more_dimensions_need_a_choice(void **state)
{
    const inspect_recipe how = {.members = 3};
    const char *path = inspect_make("members.nc", &how);
    json_t *whole = inspect_document(path, "", 3);

    (void)state;
    assert_holds(inspect_text_at(whole, "files.0.refused.0"), "pick one with --select member=INDEX");
    json_decref(whole);
    whole = inspect_document(path, "--select member=3", 0);
    inspect_expect_plain(whole, 2.0);
    json_decref(whole);
}

static void a_kind_that_is_assumed_can_be_said(void **state)
{
    const inspect_recipe how = {.no_name = "temp"};
    const char *path = inspect_make("kind.nc", &how);
    json_t *whole = inspect_document(path, "", 0);

    (void)state;
    assert_string_equal(inspect_text_at(whole, "files.0.reading.temperature.kind"), "in-situ");
    assert_true(inspect_true(whole, "files.0.reading.temperature.kind_assumed"));
    assert_true(inspect_lists(inspect_at(whole, "files.0.suggestions"), "option", "--temperature-kind"));
    assert_true(inspect_lists(inspect_at(whole, "files.0.assumptions"), "level", "note"));
    json_decref(whole);
    whole = inspect_document(path, "--temperature-kind potential", 0);
    assert_string_equal(inspect_text_at(whole, "files.0.reading.temperature.kind"), "potential");
    assert_false(inspect_lists(inspect_at(whole, "files.0.suggestions"), "option", "--temperature-kind"));
    json_decref(whole);
}

/* ---- files that cannot be opened, and several at once ---- */

static void what_cannot_be_opened_stops_nothing(void **state)
{
    const inspect_recipe how = {.level_bounds = false};
    const char *good = inspect_make("beside.nc", &how);
    char line[LINE_ROOM];
    unsigned char bytes[600];
    size_t count;
    FILE *file = fopen(good, "rb");
    run_result result;

    (void)state;
    assert_non_null(file);
    count = fread(bytes, 1, sizeof bytes, file);
    fclose(file);
    file = fopen(inspect_path("cut.nc"), "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, count, file), count);
    fclose(file);
    run_write_file(inspect_folder(), "words.txt", "depth temperature salinity\n0 10 35\n");
    snprintf(line, sizeof line, "%s %s %s %s", inspect_path("cut.nc"), inspect_path("words.txt"),
             inspect_path("absent.nc"), good);
    result = inspect_run(line);
    assert_exit(&result, 3);
    assert_holds(result.errors, "cut.nc: ");
    assert_holds(result.errors, "words.txt: is a text file, not NetCDF");
    assert_holds(result.errors, "absent.nc: ");
    assert_holds(result.output, "would be refused: ");
    assert_holds(result.output, "beside.nc\n====");
    assert_holds(result.output, "Nothing would be refused.");
    assert_holds(result.output, "All 4 files as one set");
    run_free(&result);
}

static void temperature_and_salinity_may_lie_in_two_files(void **state)
{
    const inspect_recipe warm = {.no_salinity = true, .times = 2, .months = {1, 2}};
    const inspect_recipe salt = {.no_temperature = true, .times = 2, .months = {1, 2}};
    const char *first = inspect_make("warm.nc", &warm), *second = inspect_make("salt.nc", &salt);
    char line[LINE_ROOM];
    json_t *whole;

    (void)state;
    snprintf(line, sizeof line, "%s %s", first, second);
    whole = inspect_document(line, "", 0);
    assert_same_number((double)json_array_size(inspect_at(whole, "files")), 2);
    assert_string_equal(inspect_text_at(whole, "set.reading.temperature.name"), "warmth");
    assert_string_equal(inspect_text_at(whole, "set.reading.salinity.name"), "saltiness");
    assert_same_number(inspect_number(whole, "set.reading.times.count"), 2);
    /* Alone the first lacks something, both together nothing. */
    assert_holds(inspect_text_at(whole, "files.0.conditions.0.text"), "would be refused by itself without");
    assert_same_number((double)json_array_size(inspect_at(whole, "set.conditions")), 0);
    assert_same_number(inspect_number(whole, "set.values.levels.2.salinity.mean_of_cells"), 36.125);
    json_decref(whole);
    /* A file of salinity alone is nothing. */
    whole = inspect_document(second, "", 3);
    inspect_expect_refusal(whole, "no variable was recognised as temperature");
    json_decref(whole);
}

static void files_of_two_grids_are_no_set(void **state)
{
    const inspect_recipe one = {.times = 1, .months = {1}}, other = {.times = 1, .months = {2}, .rows = 7};
    const char *first = inspect_make("one.nc", &one), *second = inspect_make("other.nc", &other);
    char line[LINE_ROOM];
    json_t *whole;

    (void)state;
    snprintf(line, sizeof line, "%s %s", first, second);
    whole = inspect_document(line, "", 3);
    assert_same_number(inspect_number(whole, "refused"), 1);
    assert_same_number((double)json_array_size(inspect_at(whole, "files.0.refused")), 0);
    assert_same_number((double)json_array_size(inspect_at(whole, "set.refused")), 1);
    assert_holds(inspect_text_at(whole, "set.refused.0"), "its grid is not that of");
    json_decref(whole);
}

/* RFC 4180: lines end with CR LF, and every line has as many fields. */
static void the_table_of_levels_can_be_csv(void **state)
{
    const inspect_recipe how = {.title = "The Velmar Sea"};
    char line[LINE_ROOM];
    size_t lines = 0, fields = 0;
    run_result result;

    (void)state;
    snprintf(line, sizeof line, "%s --table csv", inspect_make("levels_table.nc", &how));
    result = inspect_run(line);
    assert_exit(&result, 0);
    assert_holds(result.output, "file,time,level,position,position_units,columns,cells,temperature_minimum,"
                                "temperature_mean_of_cells,");
    assert_holds(result.output, ",1,5,m,72,80,20,22.75,25.5,0,0,35,35.5625,36.125,0,0,0,0\r\n");
    assert_holds(result.output, ",3,100,m,63,80,10.5,13,15.5,0,0,35.625,36.125,36.625,0,0,0,63\r\n");
    for (const char *c = result.output; *c != '\0'; c++) {
        fields += *c == ',';
        if (*c != '\n')
            continue;
        assert_int_equal(c[-1], '\r');
        assert_int_equal(fields, 18);
        fields = 0;
        lines++;
    }
    assert_int_equal(lines, 1 + LEVELS);
    run_free(&result);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(a_good_file_is_described),
        cmocka_unit_test(the_text_is_narrow_and_plain),
        cmocka_unit_test(packed_values_are_unpacked),
        cmocka_unit_test(bands_and_chunks_change_nothing),
        cmocka_unit_test(heights_are_turned_over),
        cmocka_unit_test(times_are_described_and_averaged),
        cmocka_unit_test(windows_can_be_empty_or_wrong),
        cmocka_unit_test(salinity_may_be_absent),
        cmocka_unit_test(two_temperatures_are_a_question),
        cmocka_unit_test(levels_need_a_unit),
        cmocka_unit_test(more_dimensions_need_a_choice),
        cmocka_unit_test(a_kind_that_is_assumed_can_be_said),
        cmocka_unit_test(what_cannot_be_opened_stops_nothing),
        cmocka_unit_test(temperature_and_salinity_may_lie_in_two_files),
        cmocka_unit_test(files_of_two_grids_are_no_set),
        cmocka_unit_test(the_table_of_levels_can_be_csv),
    };

    return cmocka_run_group_tests(tests, inspect_make_folder, inspect_remove_folder);
}
