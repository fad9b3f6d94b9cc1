/* SPDX-License-Identifier: GPL-3.0-or-later */
/* `stericol inspect`: values that cannot be right, and refusals and numbers as they are told. */
#include "program/inspect_sea.h"
#include "support/testing.h"

#include <stdio.h>
#include <string.h>

/* ---- values that cannot be right ---- */

static void kelvin_called_celsius_is_refused(void **state)
{
    const inspect_recipe how = {.added = 273.0};
    json_t *whole = inspect_document(inspect_make("kelvin.nc", &how), "", 3);

    (void)state;
    inspect_expect_refusal(whole, "these look like kelvin; correct the units attribute");
    assert_holds(inspect_text_at(whole, "files.0.refused.0"), "72 of 72 values at 5 m");
    assert_holds(inspect_text_at(whole, "files.0.refused.0"), "range from 293 to 298.5");
    assert_true(inspect_true(whole, "files.0.values.levels.0.temperature.refused"));
    assert_same_number(inspect_number(whole, "files.0.values.levels.0.temperature.values"), 0);
    /* The rest is shown all the same. */
    assert_false(inspect_true(whole, "files.0.values.levels.0.salinity.refused"));
    assert_same_number(inspect_number(whole, "files.0.values.levels.0.salinity.maximum"), 36.125);
    json_decref(whole);
}

static void kelvin_called_kelvin_is_converted(void **state)
{
    const inspect_recipe how = {.added = 273.0, .temperature_unit = "K"};
    json_t *whole = inspect_document(inspect_make("real_kelvin.nc", &how), "", 0);

    (void)state;
    /* 293 K; 0 degC is 273.15 K by definition.  One subtraction of numbers near 293. */
    assert_close(inspect_number(whole, "files.0.values.levels.0.temperature.minimum"), 19.85, 1e-12);
    json_decref(whole);
}

static void land_written_as_zeros_is_recognised(void **state)
{
    const inspect_recipe how = {.zeros = true};
    json_t *whole = inspect_document(inspect_make("zeros.nc", &how), "", 0);

    (void)state;
    inspect_expect_plain(whole, 0.0); /* zeros on 8, 8 and 17 of 80 cells: a tenth or more */
    assert_same_number(inspect_number(whole, "files.0.values.levels.0.zeros"), 8);
    assert_same_number(inspect_number(whole, "files.0.values.levels.2.zeros"), 17);
    assert_true(inspect_true(whole, "files.0.values.levels.0.land_as_zeros"));
    assert_true(inspect_lists(inspect_at(whole, "files.0.suspects"), "what", "land_as_zeros"));
    json_decref(whole);
}

static void a_constant_level_is_suspect(void **state)
{
    const inspect_recipe how = {.constant = 12.5};
    json_t *whole = inspect_document(inspect_make("constant.nc", &how), "", 0);

    (void)state;
    assert_true(inspect_lists(inspect_at(whole, "files.0.suspects"), "what", "constant_level"));
    assert_same_number(inspect_number(whole, "files.0.values.levels.1.temperature.mean_of_cells"), 12.5);
    assert_same_number(inspect_number(whole, "files.0.values.levels.1.zeros"), 0);
    json_decref(whole);
}

/* On the first level 20 + i/2 + j/4 is at most 22.5 in 9 + 9 + 7 + 5 + 3 + 1 of 72 cells of sea. */
static void values_cut_off_are_suspect(void **state)
{
    const inspect_recipe how = {.clip = 22.5};
    json_t *whole = inspect_document(inspect_make("clip.nc", &how), "", 0);
    const json_t *found = inspect_listed(inspect_at(whole, "files.0.suspects"), "what", "repeated_extreme");

    (void)state;
    assert_non_null(found);
    assert_holds(inspect_text_at(found, "text"),
                 "on 1 level more than a tenth of the values are exactly the level's least "
                 "(22.5 in 34 of 72 at 5 m)");
    json_decref(whole);
}

/* The same 34 values of 72, 9 and 6 of them with few others: the next one is one step of a float away (2^-19
 * between 16 and 32, IEEE 754), or 1/1024, of which the whole level spans twelve. */
static void values_that_rounding_makes_alike_are_not(void **state)
{
    static const double shrunk[2] = {1.0 / 131072.0, 1.0 / 256.0};

    (void)state;
    for (size_t i = 0; i < 2; i++) {
        const inspect_recipe how = {.clip = 22.5, .shrunk = shrunk[i]};
        json_t *whole = inspect_document(inspect_make("alike.nc", &how), "", 0);

        assert_same_number(inspect_number(whole, "files.0.values.levels.0.temperature.minimum"), 22.5);
        assert_same_number(inspect_number(whole, "files.0.values.levels.0.temperature.maximum"),
                           22.5 + 3.0 * shrunk[i]);
        assert_false(inspect_lists(inspect_at(whole, "files.0.suspects"), "what", "repeated_extreme"));
        json_decref(whole);
    }
}

/*
 * From memory: UNESCO technical papers in marine science 44 (1983), check value: sea water of practical
 * salinity 40 at 500 dbar freezes at -2.588567 degC.  Half a kelvin below it is -3.088567.  Near the surface
 * it freezes 0.37 K higher: 7.53e-4 K/dbar.
 */
static void colder_than_freezing_is_suspect(void **state)
{
    static const struct {
        double cold, salinity; /* salinity 0: none in the file */
        double found[LEVELS];
        const char *text;
    } cases[] = {
        {-3.09,
         40.0,
         {1, 1, 1},
         "warmth: 3 values more than 0.5 K below the freezing point of sea water of "
         "their salinity, on 3 of 3 levels, the coldest -3.09 degC at 5 dbar"},
        {-3.085, 40.0, {1, 1, 0}, "2 values more than"},
        {-2.69, 40.0, {0, 0, 0}, NULL},
        /* From memory: at salinity 35 it freezes at -1.922 degC under no pressure. */
        {-2.43,
         0.0,
         {1, 0, 0},
         "warmth: 1 value more than 0.5 K below the freezing point of sea water of "
         "salinity 35, on 1 of 3 levels"},
        {-2.42, 0.0, {0, 0, 0}, NULL},
    };

    (void)state;
    for (size_t c = 0; c < sizeof cases / sizeof *cases; c++) {
        const inspect_recipe how = {.cold = cases[c].cold,
                                    .salinity = cases[c].salinity,
                                    .no_salinity = cases[c].salinity <= 0.0,
                                    .pressures = true};
        json_t *whole = inspect_document(inspect_make("cold.nc", &how), "", 0);
        const json_t *found = inspect_listed(inspect_at(whole, "files.0.suspects"), "what", "below_freezing");
        char path[64];

        for (size_t k = 0; k < LEVELS; k++) {
            snprintf(path, sizeof path, "files.0.values.levels.%zu.below_freezing", k);
            assert_same_number(inspect_number(whole, path), cases[c].found[k]);
        }
        if (cases[c].text == NULL)
            assert_null(found);
        else
            assert_holds(inspect_text_at(found, "text"), cases[c].text);
        json_decref(whole);
    }
}

static void a_hole_in_a_column_is_suspect(void **state)
{
    const inspect_recipe how = {.hole = true};
    json_t *whole = inspect_document(inspect_make("hole.nc", &how), "", 0);

    (void)state;
    assert_true(inspect_lists(inspect_at(whole, "files.0.suspects"), "what", "holes"));
    assert_same_number(inspect_number(whole, "files.0.values.columns_with_holes"), 1);
    assert_same_number(inspect_number(whole, "files.0.values.levels.1.columns"), 71);
    json_decref(whole);
}

/* ---- how it is told ---- */

/* Two things are wrong, both are on the page, and one line is on standard error. */
static void standard_error_has_one_line_a_file(void **state)
{
    const inspect_recipe how = {.second_temperature = "warmth_too", .level_without_unit = true};
    const char *path = inspect_make("twice.nc", &how);
    json_t *whole = inspect_document(path, "", 3);
    run_result result = inspect_run(path);

    (void)state;
    assert_same_number(inspect_number(whole, "refused"), 1);
    assert_same_number((double)json_array_size(inspect_at(whole, "files.0.refused")), 2);
    assert_exit(&result, 3);
    assert_holds(inspect_text_at(whole, "files.0.refused.0"), "2 variables could be the temperature");
    assert_holds(inspect_text_at(whole, "files.0.refused.1"), "the vertical axis has no units");
    assert_holds(result.output, "\n  - would be refused: ");
    assert_holds(result.errors, "2 variables could be the temperature");
    assert_ptr_equal(strchr(result.errors, '\n'), result.errors + strlen(result.errors) - 1);
    /* Nor is it said a second time among the assumptions. */
    assert_int_equal(json_array_size(inspect_at(whole, "files.0.assumptions")), 0);
    run_free(&result);
    json_decref(whole);
}

/* 0.9 has 17 digits as Jansson writes it, and a title may look like a number. */
static void numbers_have_no_digits_to_spare(void **state)
{
    const inspect_recipe how = {.title = "0.90000000000000002 \"-1.50000000000000000"};
    char line[1100];
    run_result result;

    (void)state;
    snprintf(line, sizeof line, "%s --table json", inspect_make("digits.nc", &how));
    result = inspect_run(line);
    assert_exit(&result, 0);
    assert_holds(result.output, "\"surface_coverage\": 0.9,");
    assert_holds(result.output, "\"title\": \"0.90000000000000002 \\\"-1.50000000000000000\",");
    assert_holds(result.output, "\"mean_of_cells\": 22.75,");
    assert_holds(result.output, "\"depth\": 5.0,");
    run_free(&result);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(kelvin_called_celsius_is_refused),
        cmocka_unit_test(kelvin_called_kelvin_is_converted),
        cmocka_unit_test(land_written_as_zeros_is_recognised),
        cmocka_unit_test(a_constant_level_is_suspect),
        cmocka_unit_test(values_cut_off_are_suspect),
        cmocka_unit_test(values_that_rounding_makes_alike_are_not),
        cmocka_unit_test(colder_than_freezing_is_suspect),
        cmocka_unit_test(a_hole_in_a_column_is_suspect),
        cmocka_unit_test(standard_error_has_one_line_a_file),
        cmocka_unit_test(numbers_have_no_digits_to_spare),
    };

    return cmocka_run_group_tests(tests, inspect_make_folder, inspect_remove_folder);
}
