/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The same sea in every encoding gives the same averaged planes. */
#include "made_sea.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* January to March 2005: 31, 28, 31 days. */
static double expected(sea_value *value, size_t k, size_t j, size_t i)
{
    return (31.0 * value(0, k, j, i) + 28.0 * value(1, k, j, i) + 31.0 * value(2, k, j, i)) / 90.0;
}

/* Sums of a few numbers below 100 in another order: some units in the last place. */
static const double rounding = 1e-13;

static void check_planes(try *one, const sea *how, double tolerance)
{
    double temperature[SEA_POINTS], salinity[SEA_POINTS];
    const stericol_grid *grid = stericol_epoch_grid(one->epoch);
    assert_int_equal(grid->rows, SEA_ROWS);
    assert_int_equal(grid->columns, SEA_COLUMNS);
    assert_int_equal(grid->levels, SEA_LEVELS);
    for (size_t k = 0; k < SEA_LEVELS; k++) {
        assert_close(grid->level[k], how->depth[k], 1e-9);
        try_load(one, k, temperature, salinity);
        for (size_t p = 0; p < SEA_POINTS; p++) {
            const size_t j = how->south_up ? SEA_ROWS - 1 - p / SEA_COLUMNS : p / SEA_COLUMNS,
                         i = p % SEA_COLUMNS;
            assert_close(temperature[p], expected(sea_temperature, k, j, i), tolerance);
            assert_close(salinity[p], expected(sea_salinity, k, j, i), tolerance);
            assert_close(grid->latitude[p / SEA_COLUMNS], -40.0 + 20.0 * (double)j, 1e-12);
        }
    }
}

static void check(const sea *how, double tolerance)
{
    try one;
    try_begin(&one, sea_write(how));
    try_open(&one);
    check_planes(&one, how, tolerance);
    try_end(&one);
}

static void test_plain(void **state)
{
    (void)state;
    const sea how = sea_plain("plain.nc");
    try one;
    try_begin(&one, sea_write(&how));
    try_open(&one);
    check_planes(&one, &how, rounding);
    const stericol_epoch_variable chosen = stericol_epoch_temperature(one.epoch);
    assert_string_equal(chosen.name, "theta");
    assert_string_equal(chosen.unit, "degC");
    assert_string_equal(chosen.reason, "standard_name");
    assert_int_equal(chosen.kind, STERICOL_TEMPERATURE_POTENTIAL);
    assert_false(chosen.kind_assumed);
    assert_false(chosen.unit_assumed);
    assert_int_equal(stericol_epoch_salinity(one.epoch).kind, STERICOL_SALINITY_PRACTICAL);
    assert_string_equal(stericol_epoch_description(one.epoch), "2005-01-01 to 2005-03-31, 3 monthly means");
    assert_string_equal(stericol_epoch_first_date(one.epoch), "2005-01-01");
    assert_string_equal(stericol_epoch_last_date(one.epoch), "2005-03-31");
    /* Nothing was assumed but what the stamps stand for. */
    assert_int_equal(stericol_epoch_assumption_count(one.epoch), 1);
    assert_assumed(&one, "no time bounds: each time stands for the calendar month that holds it");
    try_end(&one);
}

static void test_dimension_orders(void **state)
{
    (void)state;
    static const char *const orders[] = {"tzyx", "tzxy", "xyzt", "zyxt", "yxzt", "ztyx", "tyzx", "xtzy"};
    for (size_t i = 0; i < sizeof orders / sizeof *orders; i++) {
        sea how = sea_plain("order.nc");
        how.order = orders[i];
        check(&how, rounding);
    }
}

static void test_directions(void **state)
{
    (void)state;
    for (int i = 0; i < 8; i++) {
        sea how = sea_plain("directions.nc");
        how.south_up = i & 1;
        how.deep_first = i & 2;
        how.heights = i & 4;
        if (how.heights)
            how.depth_standard_name = "altitude";
        check(&how, rounding);
    }
}

/* The columns stay where they are on every branch; an axis that changes its branch runs on. */
static void test_branches(void **state)
{
    (void)state;
    static const double wests[] = {30.0, -180.0, -150.0, 210.0};
    for (size_t n = 0; n < 8; n++) {
        try one;
        sea how = sea_plain("branch.nc");
        how.west = wests[n % 4];
        how.wrapped = n >= 4;
        try_begin(&one, sea_write(&how));
        try_open(&one);
        check_planes(&one, &how, rounding);
        const double *longitude = stericol_epoch_grid(one.epoch)->longitude;
        for (size_t i = 0; i < SEA_COLUMNS; i++) {
            assert_close(remainder(longitude[i] - how.west - 60.0 * (double)i, 360.0), 0.0, 1e-9);
            if (i)
                assert_close(longitude[i] - longitude[i - 1], 60.0, 1e-9);
        }
        try_end(&one);
    }
}

static void test_formats(void **state)
{
    (void)state;
    static const struct {
        int mode;
        bool zarr, packed;
        int chunk;
    } formats[] = {{0, false, false, 0},
                   {NC_64BIT_OFFSET, false, true, 0},
                   {NC_64BIT_DATA, false, false, 0},
                   {NC_NETCDF4, false, true, 0},
                   {NC_NETCDF4, false, false, 1},
                   {NC_NETCDF4, false, true, 3},
                   {NC_NETCDF4 | NC_CLASSIC_MODEL, false, false, SEA_LEVELS},
                   {NC_NETCDF4, true, false, 0}};
    for (size_t i = 0; i < sizeof formats / sizeof *formats; i++) {
        sea how = sea_plain(formats[i].zarr ? "format.zarr" : "format.nc");
        how.mode = formats[i].mode;
        how.zarr = formats[i].zarr;
        how.packed = formats[i].packed;
        how.chunk_levels = formats[i].chunk;
        check(&how, rounding);
    }
}

static void test_groups(void **state)
{
    (void)state;
    sea how = sea_plain("group.nc");
    how.group = "ocean";
    check(&how, rounding);
}

static void test_units(void **state)
{
    (void)state;
    static const struct {
        const char *unit;
        double scale, offset, tolerance;
    } temperatures[] = {{"degC", 1.0, 0.0, 1e-13},
                        {"DEG C", 1.0, 0.0, 1e-13},
                        {"Degree_C", 1.0, 0.0, 1e-13},
                        {"celsius", 1.0, 0.0, 1e-13},
                        {"deg C (ITS-90)", 1.0, 0.0, 1e-13},
                        /* 300 K in double has units in the last place of 6e-14. */
                        {"K", 1.0, 273.15, 2e-13},
                        {"Kelvins", 1.0, 273.15, 2e-13},
                        {"degF", 1.8, 32.0, 2e-13}};
    static const struct {
        const char *unit;
        double scale;
    } salinities[] = {{"1", 1.0},   {"PSU", 1.0},  {"psu", 1.0},    {"ppt", 1.0},
                      {"PPT", 1.0}, {"1e-3", 1.0}, {"g kg-1", 1.0}, {"kg/kg", 0.001}};
    for (size_t i = 0; i < 8; i++) {
        sea how = sea_plain("units.nc");
        how.temperature.units = temperatures[i].unit;
        how.temperature.scale = temperatures[i].scale;
        how.temperature.offset = temperatures[i].offset;
        how.salinity.units = salinities[i].unit;
        how.salinity.scale = salinities[i].scale;
        check(&how, temperatures[i].tolerance);
    }
}

static void test_vertical_units(void **state)
{
    (void)state;
    static const struct {
        const char *unit;
        double scale;
    } units[] = {{"METERS", 1.0}, {"km", 1e-3}, {"centimeters", 100.0}, {"cm", 100.0}};
    for (size_t i = 0; i < sizeof units / sizeof *units; i++)
        for (int kind = 0; kind < 3; kind++) {
            sea how = sea_plain("vertical.nc");
            try one;
            how.depth_units = units[i].unit;
            how.depth_scale = units[i].scale;
            how.depth_bounds = kind == 1;
            how.depth_edges = kind == 2;
            how.deep_first = i % 2;
            how.heights = i / 2;
            if (how.heights)
                how.depth_standard_name = "height";
            try_begin(&one, sea_write(&how));
            try_open(&one);
            check_planes(&one, &how, rounding);
            const stericol_grid *grid = stericol_epoch_grid(one.epoch);
            static const double edges[] = {0.0, 10.0, 50.0, 500.0, 2000.0};
            assert_int_equal(grid->level_bounds != NULL, kind > 0);
            for (size_t k = 0; kind && k < SEA_LEVELS; k++) {
                assert_close(grid->level_bounds[2 * k], edges[k], 1e-9);
                assert_close(grid->level_bounds[2 * k + 1], edges[k + 1], 1e-9);
            }
            try_end(&one);
        }
}

static void test_separate_files(void **state)
{
    (void)state;
    sea how = sea_plain("t.nc");
    try one;
    how.salinity.name = NULL;
    try_begin(&one, sea_write(&how));
    sea other = sea_plain("s.nc");
    other.temperature.name = NULL;
    other.deep_first = true; /* each file in its own order */
    other.order = "xyzt";
    /* Stamps at the first of the month here, in the middle there. */
    static const double firsts[3] = {0.0, 31.0, 59.0};
    other.time = firsts;
    try_add(&one, sea_write(&other));
    try_open(&one);
    check_planes(&one, &how, rounding);
    assert_string_equal(stericol_epoch_member_at(one.epoch, 1)->text, "2005-02");
    assert_string_equal(stericol_epoch_member_at(one.epoch, 1)->temperature_file, one.paths[0]);
    assert_string_equal(stericol_epoch_member_at(one.epoch, 1)->salinity_file, one.paths[1]);
    try_end(&one);
}

/* A file a month, given in the wrong order; more files than are kept open. */
static void test_many_files(void **state)
{
    (void)state;
    enum { FILES = 40 };
    char names[FILES][32];
    double stamps[FILES];
    try one;
    for (size_t n = 0; n < FILES; n++) {
        const size_t month = (n * 7) % FILES; /* every month once */
        sea how = sea_plain(names[n]);
        (void)snprintf(names[n], sizeof names[n], "many_%02zu.nc", month);
        stamps[n] = 15.0 + 30.0 * (double)month;
        how.time = &stamps[n];
        how.times = 1;
        how.first = month;
        how.calendar = "360_day";
        if (n == 0)
            try_begin(&one, sea_write(&how));
        else
            try_add(&one, sea_write(&how));
    }
    one.request.time_window = "2005-01..2005-03";
    try_open(&one);
    assert_int_equal(stericol_epoch_member_count(one.epoch), 3);
    assert_int_equal(stericol_epoch_file_count(one.epoch), FILES);
    double plane[SEA_POINTS];
    try_load(&one, 2, plane, NULL);
    for (size_t p = 0; p < SEA_POINTS; p++)
        assert_close(plane[p], sea_temperature(1, 2, p / SEA_COLUMNS, p % SEA_COLUMNS), rounding);
    stericol_epoch_close(one.epoch);
    one.request.time_window = NULL;
    try_open(&one);
    assert_int_equal(stericol_epoch_member_count(one.epoch), FILES);
    /* Years 2005..2007 whole and January to April 2008: month means of the series, then equal months. */
    double sum = 0.0;
    for (size_t month = 0; month < 12; month++) {
        const size_t years = month < 4 ? 4 : 3;
        double mean = 0.0;
        for (size_t year = 0; year < years; year++)
            mean += sea_temperature(12 * year + month, 3, 4, 5) / (double)years;
        sum += mean / 12.0;
    }
    for (int twice = 0; twice < 2; twice++) {
        try_load(&one, 3, plane, NULL);
        assert_close(plane[SEA_POINTS - 1], sum, rounding);
    }
    try_end(&one);
}

/* A file without a time dimension is one state, with a date where it has a scalar time. */
static void test_no_time(void **state)
{
    (void)state;
    sea how = sea_plain("still.nc");
    try one;
    double plane[SEA_POINTS], salinity[SEA_POINTS];
    how.order = "zyx";
    const char *path = sea_write(&how);
    try_begin(&one, path);
    try_open(&one);
    assert_string_equal(stericol_epoch_description(one.epoch), "one state without a date");
    assert_null(stericol_epoch_first_date(one.epoch));
    assert_false(stericol_epoch_member_at(one.epoch, 0)->dated);
    try_load(&one, 1, plane, salinity);
    for (size_t p = 0; p < SEA_POINTS; p++) {
        assert_same_number(plane[p], sea_temperature(0, 1, p / SEA_COLUMNS, p % SEA_COLUMNS));
        assert_same_number(salinity[p], sea_salinity(0, 1, p / SEA_COLUMNS, p % SEA_COLUMNS));
    }
    try_end(&one);

    how = sea_plain("still.nc");
    how.order = "zyx";
    path = sea_write(&how);
    const int file = sea_change(path);
    int scalar;
    const double day = 400.0;
    must(nc_def_var(file, "date", NC_DOUBLE, 0, NULL, &scalar));
    must(nc_put_att_text(file, scalar, "units", 21, "days since 2005-01-01"));
    must(nc_put_att_text(file, scalar, "standard_name", 4, "time"));
    must(nc_put_var_double(file, scalar, &day));
    sea_changed(file);
    sea_attribute(path, "theta", "coordinates", "date");
    sea_attribute(path, "sal", "coordinates", "date");
    try_begin(&one, path);
    try_open(&one);
    /* 400 days after 2005-01-01: 365 + 35. */
    assert_string_equal(stericol_epoch_description(one.epoch), "2006-02-05, 1 time");
    assert_int_equal(stericol_epoch_member_at(one.epoch, 0)->month, 2);
    try_end(&one);
}

/* Levels in one call, rows in parts: the same numbers as level after level. */
static void test_slabs(void **state)
{
    (void)state;
    enum { ROWS = 2, ROW0 = 3, LEVELS = 3, LEVEL0 = 1 };
    double all[LEVELS * ROWS * SEA_COLUMNS], plane[SEA_POINTS];
    stericol_epoch_tally tally[LEVELS] = {{{0}, {0}, 0}};
    for (int deep = 0; deep < 2; deep++) {
        sea how = sea_plain("slab.nc");
        try one;
        how.deep_first = deep;
        try_begin(&one, sea_write(&how));
        try_open(&one);
        memset(tally, 0, sizeof tally);
        assert_int_equal(
            stericol_epoch_load(one.seen.context, one.epoch, LEVEL0, LEVELS, ROW0, ROWS, all, NULL, tally),
            STERICOL_OK);
        for (size_t k = 0; k < LEVELS; k++) {
            try_load(&one, LEVEL0 + k, plane, NULL);
            for (size_t p = 0; p < ROWS * SEA_COLUMNS; p++)
                assert_same_number(all[k * ROWS * SEA_COLUMNS + p], plane[ROW0 * SEA_COLUMNS + p]);
            assert_int_equal(tally[k].temperature.values, 3 * ROWS * SEA_COLUMNS);
            assert_int_equal(tally[k].temperature.missing, 0);
        }
        size_t levels, rows;
        stericol_epoch_stride(one.epoch, &levels, &rows);
        assert_true(levels >= 1 && levels <= SEA_LEVELS && rows >= 1 && rows <= SEA_ROWS);
        assert_true(stericol_epoch_bytes(one.epoch, 2, 3) >= 2 * 3 * SEA_COLUMNS * sizeof(double));
        try_end(&one);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_plain),          cmocka_unit_test(test_dimension_orders),
        cmocka_unit_test(test_directions),     cmocka_unit_test(test_branches),
        cmocka_unit_test(test_formats),        cmocka_unit_test(test_groups),
        cmocka_unit_test(test_units),          cmocka_unit_test(test_vertical_units),
        cmocka_unit_test(test_separate_files), cmocka_unit_test(test_many_files),
        cmocka_unit_test(test_no_time),        cmocka_unit_test(test_slabs),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
