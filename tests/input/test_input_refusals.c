/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What cannot be used is refused with a message that says what is wrong and what to do. */
#include "made_sea.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static void refused(const sea *how, const char *message)
{
    try one;
    try_begin(&one, sea_write(how));
    assert_open_fails(&one, STERICOL_INPUT, message);
}

static void test_units(void **state)
{
    (void)state;
    sea how = sea_plain("wrong.nc");
    how.temperature.units = "degrees_of_frost";
    refused(&how,
            "theta: the unit \"degrees_of_frost\" is not known; correct the units attribute, or remove it");
    how = sea_plain("wrong.nc");
    how.temperature.units = "PSU";
    refused(&how, "theta: the unit \"PSU\" is not one of temperature; correct the units attribute, or name "
                  "another variable");
    how = sea_plain("wrong.nc");
    how.salinity.units = "m";
    refused(
        &how,
        "sal: the unit \"m\" is not one of salinity; correct the units attribute, or name another variable");
}

static void test_vertical(void **state)
{
    (void)state;
    static const double repeated[4] = {5.0, 20.0, 20.0, 100.0}, unordered[4] = {5.0, 20.0, 10.0, 100.0},
                        gap[4] = {5.0, (double)NAN, 50.0, 100.0}, mixed[4] = {-5.0, 0.0, 5.0, 10.0},
                        deep[4] = {5.0, 20.0, 100.0, 50000.0}, number[4] = {1.0, 2.0, 3.0, 4.0};
    sea how = sea_plain("vertical.nc");
    how.depth = number;
    how.depth_units = NULL;
    refused(&how, "depth: the vertical axis has no units (values 1 to 4); say what the levels are with "
                  "--vertical-unit m "
                  "or --vertical-unit dbar");
    how.depth_units = "level";
    refused(&how,
            "depth: the unit \"level\" is neither a length nor a pressure; say what the levels are with "
            "--vertical-unit m or --vertical-unit dbar");
    how = sea_plain("vertical.nc");
    how.depth = repeated;
    refused(&how, "depth: level 3 (20 m) breaks the order of the axis; correct the axis");
    how.depth = unordered;
    refused(&how, "depth: level 3 (10 m) breaks the order of the axis; correct the axis");
    how.depth = gap;
    refused(&how, "depth: level 2 of 4 is missing; correct the axis");
    how.depth = deep;
    refused(&how,
            "depth: level 4 at 50000 m lies deeper than any sea; correct its units attribute or its values");
    how.depth = mixed;
    refused(&how,
            "depth: level 1 lies 5 m above the sea surface; correct its positive attribute or its values");
    how.depth_standard_name = NULL;
    refused(&how, "depth: values on both sides of 0 and no positive attribute; add a positive attribute");
    /* `positive` wins over the sign: depths that are called heights lie in the air. */
    how = sea_plain("vertical.nc");
    try one;
    const char *path = sea_write(&how);
    sea_attribute(path, "depth", "positive", "up");
    try_begin(&one, path);
    assert_open_fails(
        &one, STERICOL_INPUT,
        "depth: level 1 lies 5 m above the sea surface; correct its positive attribute or its values");
}

static void test_horizontal(void **state)
{
    (void)state;
    sea how = sea_plain("horizontal.nc");
    static const struct {
        const char *variable;
        size_t index;
        double value;
        const char *message;
    } cases[] = {
        {"lat", 4, 90.5, "lat: latitude number 5 is 90.5, outside -90..90 degrees; correct the values"},
        {"lat", 2, (double)NAN,
         "lat: latitude number 3 of 5 is missing; give a file with all positions with --coordinates"},
        {"lat", 2, -20.0, "lat: latitude number 3 (-20) stands there twice; correct the axis"},
        {"lat", 2, 30.0, "lat: latitude number 4 (20) breaks the order of the axis; correct the axis"},
        {"lon", 1, 30.0, "lon: longitude number 2 (30) stands there twice; correct the axis"},
        {"lon", 3, 100.0, "lon: longitude number 4 (100) breaks the order of the axis; correct the axis"},
        {"lon", 5, (double)NAN,
         "lon: longitude number 6 of 6 is missing; give a file with all positions with --coordinates"},
    };
    try one;
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        const char *path = sea_write(&how);
        sea_put(path, cases[i].variable, cases[i].index, cases[i].value);
        try_begin(&one, path);
        assert_open_fails(&one, STERICOL_INPUT, cases[i].message);
    }
    /* Within the rounding of a float the pole is the pole. */
    const char *path = sea_write(&how);
    sea_put(path, "lat", 4, 90.0000001);
    try_begin(&one, path);
    try_open(&one);
    try_end(&one);
    path = sea_write(&how);
    sea_attribute(path, "lat", "units", "m");
    try_begin(&one, path);
    assert_open_fails(
        &one, STERICOL_INPUT,
        "lat: the unit \"m\" is no angle, so it is no latitude; correct the units attribute, or give another "
        "file with --coordinates");
}

static void test_dimensions(void **state)
{
    (void)state;
    sea how = sea_plain("dimensions.nc");
    try one;
    how.order = "tyx";
    refused(&how, "theta: has no vertical dimension, so it holds no columns; give a file with levels");
    try_begin(&one, sea_write(&how));
    one.request.temperature = "theta";
    assert_open_fails(
        &one, STERICOL_INPUT,
        "theta: no vertical dimension among its dimensions (time, lat, lon); give a file with levels");
    how.order = "tzx";
    refused(&how, "theta: no latitude was found for it; give the file that holds them with --coordinates");
}

/* A file with a dimension of three members in front; its path. */
static const char *write_members(void)
{
    const made_format format = {"", NC_NETCDF4, true, true, false};
    static const char *const names[4] = {"member", "depth", "lat", "lon"};
    static const size_t lengths[4] = {3, 2, 2, 2};
    const double depths[2] = {5.0, 10.0}, places[2] = {10.0, 20.0};
    int file = made_create(&format, "ensemble.nc"), dimension[4], axis[4], temperature, salinity;
    double values[24];
    for (int i = 0; i < 24; i++)
        values[i] = i;
    for (int i = 0; i < 4; i++)
        must(nc_def_dim(file, names[i], lengths[i], &dimension[i]));
    for (int i = 1; i < 4; i++)
        must(nc_def_var(file, names[i], NC_DOUBLE, 1, &dimension[i], &axis[i]));
    must(nc_put_att_text(file, axis[1], "units", 1, "m"));
    must(nc_def_var(file, "temp", NC_DOUBLE, 4, dimension, &temperature));
    must(nc_def_var(file, "salt", NC_DOUBLE, 4, dimension, &salinity));
    must(nc_put_var_double(file, axis[1], depths));
    must(nc_put_var_double(file, axis[2], places));
    must(nc_put_var_double(file, axis[3], places));
    must(nc_put_var_double(file, temperature, values));
    must(nc_put_var_double(file, salinity, values));
    must(nc_close(file));
    return made_path("ensemble.nc");
}

static void test_members(void **state)
{
    (void)state;
    const char *path = write_members();
    try one;
    try_begin(&one, path);
    assert_open_fails(
        &one, STERICOL_INPUT,
        "temp: its dimension member of length 3 is neither time, depth nor horizontal; pick one with "
        "--select member=INDEX");
    static const char *selects[3] = {"member=4", "member=2", "menber=2"};
    for (int i = 0; i < 3; i++) {
        try_begin(&one, path);
        one.request.select = &selects[i];
        one.request.select_count = 1;
        if (i == 0)
            assert_open_fails(
                &one, STERICOL_INPUT,
                "member: --select member=4 is not a whole number from 1 to 3; give an index within it");
        if (i == 2)
            assert_open_fails(
                &one, STERICOL_INPUT,
                "temp: its dimension member of length 3 is neither time, depth nor horizontal; pick one "
                "with --select member=INDEX");
        if (i != 1)
            continue;
        try_open(&one);
        double plane[4];
        assert_int_equal(stericol_epoch_load(one.seen.context, one.epoch, 1, 1, 0, 2, plane, NULL, NULL),
                         STERICOL_OK);
        for (int p = 0; p < 4; p++)
            assert_same_number(plane[p], 8.0 + 4.0 + p); /* second member, second level */
        assert_assumed(&one, "temp: index 2 of 3 of its dimension member");
        try_end(&one);
    }
}

static void test_select(void **state)
{
    (void)state;
    try one;
    sea how = sea_plain("dimensions.nc");
    static const char *level = "depth=2";
    try_begin(&one, sea_write(&how));
    one.request.select = &level;
    one.request.select_count = 1;
    assert_open_fails(&one, STERICOL_INPUT,
                      "theta: --select cannot pick from its dimension depth; choose depths with --layers");
    static const char *nowhere = "member=1";
    try_begin(&one, sea_write(&how));
    one.request.select = &nowhere;
    one.request.select_count = 1;
    assert_open_fails(&one, STERICOL_INPUT,
                      "--select member=1 names no dimension of this file; name one of the file's dimensions");
}

static void test_no_times(void **state)
{
    (void)state;
    sea how = sea_plain("never.nc");
    how.times = 0; /* NetCDF-4 takes length 0 as unlimited */
    refused(&how, "theta: its time dimension has length 0; give a file that holds data");
    static const double stamps[3] = {15.5, (double)NAN, 74.5};
    how = sea_plain("never.nc");
    how.time = stamps;
    refused(&how, "time: time 2 of 3 is missing; correct the axis");
}

static void test_grids_differ(void **state)
{
    (void)state;
    sea how = sea_plain("first.nc"), other = sea_plain("second.nc");
    stericol_text text = {0};
    try one;
    other.west = 31.0;
    other.temperature.name = how.salinity.name = NULL;
    try_begin(&one, sea_write(&how));
    try_add(&one, sea_write(&other));
    stericol_text_format(
        &text,
        "sal: its grid is not that of %s: longitude number 1 differs: 30 against 31; give files of one grid",
        one.paths[0]);
    assert_open_fails_at(&one, STERICOL_INPUT, made_path("second.nc"), stericol_text_string(&text));
    stericol_text_free(&text);
    other = sea_plain("second.nc");
    other.temperature.standard_name = "sea_water_temperature";
    how = sea_plain("first.nc");
    try_begin(&one, sea_write(&how));
    try_add(&one, sea_write(&other));
    stericol_text_format(
        &text, "theta: in situ temperature here, but potential temperature in %s; give files of one kind",
        one.paths[0]);
    assert_open_fails_at(&one, STERICOL_INPUT, made_path("second.nc"), stericol_text_string(&text));
    stericol_text_free(&text);
    try_begin(&one, sea_write(&how));
    try_add(&one, TEST_BUILD_FOLDER "/is_not_there.nc");
    assert_int_equal(stericol_epoch_open(one.seen.context, one.units, &one.request, &one.epoch),
                     STERICOL_INPUT);
    assert_non_null(strstr(stericol_context_message(one.seen.context), "is_not_there.nc: "));
    try_end(&one);
}

/* ---- files that are something else ---- */

static void refused_file(const char *path, const char *message)
{
    try one;
    try_begin(&one, path);
    assert_open_fails(&one, STERICOL_INPUT, message);
}

/*
 * Casts as CF's discrete sampling geometries have them, with common levels, with none and under a name that
 * says nothing, and in the float-profile format.
 */
static void test_casts(void **state)
{
    (void)state;
    static const sea_text warm[] = {{"units", "degC"}, {"standard_name", "sea_water_temperature"}},
                          north[] = {{"standard_name", "latitude"}, {"units", "degrees_north"}},
                          east[] = {{"standard_name", "longitude"}, {"units", "degrees_east"}},
                          down[] = {{"standard_name", "depth"}, {"units", "m"}, {"positive", "down"}};
    static const struct {
        const char *rows, *levels, *both, *depth, *depth_along, *name;
        size_t attributes;
        bool feature;
    } cases[] = {{"profile", "z", "profile z", "z", "z", "temp", 2, true},
                 {"profile", "obs", "profile obs", "how_deep", "profile obs", "temp", 2, true},
                 {"profile", "obs", "profile obs", "how_deep", "profile obs", "hotness", 1, true},
                 {"N_PROF", "N_LEVELS", "N_PROF N_LEVELS", "PRES", "N_PROF N_LEVELS", "TEMP", 2, false}};
    static const double values[6] = {5, 10, 20, 6, 11, 21}, place[2] = {10, 20};
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        const made_format format = {"", NC_NETCDF4, true, true, false};
        int file = made_create(&format, "casts.nc"), dimension;
        must(nc_def_dim(file, cases[i].rows, 2, &dimension));
        must(nc_def_dim(file, cases[i].levels, 3, &dimension));
        if (cases[i].feature)
            must(nc_put_att_text(file, NC_GLOBAL, "featureType", 7, "Profile"));
        sea_add(file, "lat", cases[i].rows, north, 2, place);
        sea_add(file, "lon", cases[i].rows, east, 2, place);
        sea_add(file, cases[i].depth, cases[i].depth_along, down, 3, values);
        sea_add(file, cases[i].name, cases[i].both, warm, cases[i].attributes, values);
        must(nc_close(file));
        refused_file(made_path("casts.nc"),
                     cases[i].feature
                         ? "holds floats or casts (featureType profile), which this version does not read; "
                           "give gridded fields"
                         : "holds floats or casts (dimensions N_PROF and N_LEVELS), which this version does "
                           "not read; give gridded fields");
    }
}

static void test_other_files(void **state)
{
    (void)state;
    static const double values[4] = {1, 0, 0, 1};
    static const struct {
        const char *name, *message;
        sea_text attributes[2];
        size_t count;
    } cases[] = {
        {"sea_floor",
         "sea_floor: no temperature in this file, which seems to hold the depth of the sea floor; give it "
         "with --bathymetry, beside a file of temperature",
         {{"standard_name", "sea_floor_depth_below_geoid"}, {"units", "m"}},
         2},
        {"elevation",
         "elevation: no temperature in this file, which seems to hold the depth of the sea floor; give it "
         "with --bathymetry, beside a file of temperature",
         {{"units", "m"}},
         1},
        {"tmask",
         "tmask: no temperature in this file, which seems to hold a mask of land and sea; give it with "
         "--mask, beside a file of temperature",
         {{"units", "1"}},
         1},
        {"basin",
         "basin: no temperature in this file, which seems to hold a mask of regions; give it with --regions, "
         "beside a file of temperature",
         {{"flag_values", "0 1"}, {"flag_meanings", "none inner_bight"}},
         2},
        {"size",
         "size: no temperature in this file, which seems to hold the areas of cells; give it with "
         "--cell-area, beside a file of temperature",
         {{"standard_name", "cell_area"}, {"units", "m2"}},
         2},
        {"colour",
         "no variable was recognised as temperature; there are colour; name it with --temperature",
         {{"units", "1"}},
         1},
    };
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        int file = sea_plane_file("other.nc", 2, 2);
        sea_add(file, cases[i].name, "lat lon", cases[i].attributes, cases[i].count, values);
        must(nc_close(file));
        refused_file(made_path("other.nc"), cases[i].message);
    }
}

/* ---- values that cannot be what they are called ---- */

static double fill_like(size_t t, size_t k, size_t j, size_t i)
{
    return k == 1 && i < 2 ? -99.0 : sea_temperature(t, k, j, i);
}

static double few_bad(size_t t, size_t k, size_t j, size_t i)
{
    return j == 0 && i < 2 ? 60.0 : sea_temperature(t, k, j, i);
}

static void assert_load_fails(const sea *how, size_t level, const char *message)
{
    double temperature[SEA_POINTS], salinity[SEA_POINTS];
    stericol_text expected = {0};
    try one;
    try_begin(&one, sea_write(how));
    try_open(&one);
    stericol_text_format(&expected, "%s: %s", one.paths[0], message);
    assert_int_equal(
        stericol_epoch_load(one.seen.context, one.epoch, level, 1, 0, SEA_ROWS, temperature, salinity, NULL),
        STERICOL_INPUT);
    assert_string_equal(stericol_context_message(one.seen.context), stericol_text_string(&expected));
    stericol_text_free(&expected);
    try_end(&one);
}

static void test_values(void **state)
{
    (void)state;
    sea how = sea_plain("values.nc");
    how.temperature.offset = 273.15;
    assert_load_fails(
        &how, 1,
        "theta: 30 of 30 values at 20 m (2005-01) cannot be sea temperatures with the unit \"degC\": they "
        "range "
        "from 289.15 to 290.775 after conversion; these look like kelvin; correct the units attribute");
    how.temperature.units = NULL;
    assert_load_fails(
        &how, 1,
        "theta: 30 of 30 values at 20 m (2005-01) cannot be sea temperatures without units: they range from "
        "289.15 to 290.775 after conversion; these look like kelvin; correct the units attribute");
    how = sea_plain("values.nc");
    how.temperature.units = "K";
    assert_load_fails(
        &how, 0,
        "theta: 30 of 30 values at 5 m (2005-01) cannot be sea temperatures with the unit \"K\": they range "
        "from "
        "-253.15 to -251.525 after conversion; these look like degrees Celsius called kelvin; correct the "
        "units attribute");
    how = sea_plain("values.nc");
    how.temperature.value = fill_like;
    assert_load_fails(
        &how, 1,
        "theta: 10 of 30 values at 20 m (2005-01) cannot be sea temperatures with the unit \"degC\": they "
        "range "
        "from -99 to 17.625 after conversion; correct the units or the packing of the variable, or name "
        "another with --temperature");
    how = sea_plain("values.nc");
    how.salinity.scale = 0.001;
    assert_load_fails(
        &how, 0,
        "sal: 30 of 30 values at 5 m (2005-01) cannot be salinities with the unit \"1\": they range from "
        "0.033375 to 0.0345 after conversion; these look like a mass fraction (kg/kg); correct the units "
        "attribute");
    how.salinity.scale = 1000.0;
    assert_load_fails(
        &how, 0,
        "sal: 30 of 30 values at 5 m (2005-01) cannot be salinities with the unit \"1\": they range from "
        "33375 to "
        "34500 after conversion; these look a thousand times too large; correct the units attribute");
}

/* A few bad values are rejected one by one; without units even one is too many. */
static void test_few_bad_values(void **state)
{
    (void)state;
    sea how = sea_plain("few.nc");
    double plane[SEA_POINTS];
    try one;
    how.temperature.value = few_bad;
    try_begin(&one, sea_write(&how));
    one.request.first_step = one.request.last_step = 1;
    try_open(&one);
    try_load(&one, 0, plane, NULL);
    assert_same_number(plane[0], (double)INFINITY);
    assert_same_number(plane[1], (double)INFINITY);
    assert_same_number(plane[2], sea_temperature(0, 0, 0, 2));
    try_end(&one);
    how.temperature.units = NULL;
    assert_load_fails(
        &how, 0,
        "theta: 2 of 30 values at 5 m (2005-01) cannot be sea temperatures without units: they range from "
        "20.25 "
        "to 60 after conversion; correct the units or the packing of the variable, or name another with "
        "--temperature");
}

/* 3 of the 30 values of a level outside, no more than a tenth, but all in its first row. */
static double tenth_bad(size_t t, size_t k, size_t j, size_t i)
{
    return k == 1 && j == 0 && i < 3 ? 60.0 : sea_temperature(t, k, j, i);
}

/* 4 of 30, in the first two rows. */
static double bad_rows(size_t t, size_t k, size_t j, size_t i)
{
    return k == 1 && j < 2 && i < 2 ? 60.0 : sea_temperature(t, k, j, i);
}

/* Four rows would be fractions (kg/kg), the last one is salinities. */
static double mostly_fraction(size_t t, size_t k, size_t j, size_t i)
{
    return sea_salinity(t, k, j, i) * (j < 4 ? 0.001 : 1.0);
}

/* Reads one level in bands of `rows` rows, from the first row or from the last; stops at a failure. */
static stericol_status load_bands(try *one, size_t level, size_t rows, bool upwards)
{
    double temperature[SEA_POINTS], salinity[SEA_POINTS];
    stericol_status status = STERICOL_OK;
    const size_t bands = (SEA_ROWS + rows - 1) / rows;
    for (size_t n = 0; n < bands && status == STERICOL_OK; n++) {
        const size_t row0 = (upwards ? bands - 1 - n : n) * rows;
        const size_t count = row0 + rows < SEA_ROWS ? rows : SEA_ROWS - row0;
        status = stericol_epoch_load(one->seen.context, one->epoch, level, 1, row0, count, temperature,
                                     salinity, NULL);
    }
    return status;
}

/* A level is judged as a whole: whether it is refused, and in which words, is the same however it is cut. */
static void test_cut_levels(void **state)
{
    (void)state;
    static const struct {
        sea_value *temperature, *salinity;
        double scale;
        const char *message; /* NULL: used */
    } cases[] = {
        {tenth_bad, sea_salinity, 1.0, NULL},
        {sea_temperature, mostly_fraction, 1.0, NULL},
        {bad_rows, sea_salinity, 1.0,
         "theta: 4 of 30 values at 20 m (2005-01) cannot be sea temperatures with the unit \"degC\": they "
         "range from 16.25 to 60 after conversion; correct the units or the packing of the variable, or "
         "name another with --temperature"},
        {sea_temperature, sea_salinity, 0.001,
         "sal: 30 of 30 values at 20 m (2005-01) cannot be salinities with the unit \"1\": they range from "
         "0.033625 to 0.03475 after conversion; these look like a mass fraction (kg/kg); correct the units "
         "attribute"},
    };
    for (size_t n = 0; n < sizeof cases / sizeof *cases; n++) {
        sea how = sea_plain("cut.nc");
        how.temperature.value = cases[n].temperature;
        how.salinity.value = cases[n].salinity;
        how.salinity.scale = cases[n].scale;
        const char *path = sea_write(&how);
        for (size_t rows = 1; rows <= SEA_ROWS; rows++) {
            for (int upwards = 0; upwards < 2; upwards++) {
                try one;
                try_begin(&one, path);
                try_open(&one);
                stericol_status status = load_bands(&one, 1, rows, upwards == 1);
                if (cases[n].message) {
                    stericol_text expected = {0};
                    assert_int_equal(status, STERICOL_INPUT);
                    stericol_text_format(&expected, "%s: %s", one.paths[0], cases[n].message);
                    assert_string_equal(stericol_context_message(one.seen.context),
                                        stericol_text_string(&expected));
                    stericol_text_free(&expected);
                } else {
                    /* Read again, and in bands that overlap, nothing is counted twice. */
                    assert_int_equal(status, STERICOL_OK);
                    for (size_t again = 1; again <= SEA_ROWS; again++)
                        assert_int_equal(load_bands(&one, 1, again, upwards == 0), STERICOL_OK);
                    for (int times = 0; times < 9; times++)
                        assert_int_equal(stericol_epoch_load(one.seen.context, one.epoch, 1, 1, 0, 1,
                                                             (double[SEA_POINTS]){0}, NULL, NULL),
                                         STERICOL_OK);
                }
                try_end(&one);
            }
        }
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_units),      cmocka_unit_test(test_vertical),
        cmocka_unit_test(test_horizontal), cmocka_unit_test(test_dimensions),
        cmocka_unit_test(test_members),    cmocka_unit_test(test_select),
        cmocka_unit_test(test_casts),      cmocka_unit_test(test_other_files),
        cmocka_unit_test(test_no_times),   cmocka_unit_test(test_grids_differ),
        cmocka_unit_test(test_values),     cmocka_unit_test(test_few_bad_values),
        cmocka_unit_test(test_cut_levels),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
