/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Writes result files of three shapes into the build folder; read_change.py reads them with another library
 * and holds them against the names and units promised and against CF-1.10.  What concerns failures is tested
 * here.
 */
#include "support/testing.h"

#include "result/change.h"
#include "result/names.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum { ROWS = 3, COLUMNS = 4, CELLS = ROWS * COLUMNS, LAYERS = 3, REGIONS = 2, CORNERS = 4 };

#define FOLDER TEST_BUILD_FOLDER "/"

/* The Miradel Sea and its regions are invented.  The branch of longitude breaks, as in 0 .. 180, -180 .. 0.
 */
static const double latitudes[ROWS] = {-10.0, 0.0, 10.0};
static const double latitude_bounds[2 * ROWS] = {-15.0, -5.0, -5.0, 5.0, 5.0, 15.0};
static const double longitudes[COLUMNS] = {165.0, 175.0, -175.0, -165.0};
static const double longitude_bounds[2 * COLUMNS] = {160.0,  170.0,  170.0,  180.0,
                                                     -180.0, -170.0, -170.0, -160.0};
static const double layer_bounds[LAYERS][2] = {{0.0, 700.0}, {700.0, 2000.0}, {2000.0, HUGE_VAL}};
static const char *const region_names[REGIONS] = {"Miradel Basin", "Outer \xc3\x85land Shelf"};

#define DEEPEST 5432.5

/* Different in every place and every variable, and the formula is known to read_change.py. */
static double value_at(int quantity, size_t layer, size_t place)
{
    if (place == 1)
        return (double)NAN;
    return 1000.0 * (quantity + 1) + 100.0 * (layer == STERICOL_WHOLE_COLUMN ? 0.0 : (double)layer + 1.0) +
           (double)place + 0.1;
}

static void fill_values(int quantity, size_t layer, size_t count, double *values)
{
    for (size_t i = 0; i < count; i++)
        values[i] = value_at(quantity, layer, i);
}

static const stericol_change_layout regular = {
    .rows = ROWS,
    .columns = COLUMNS,
    .latitude = latitudes,
    .longitude = longitudes,
    .latitude_bounds = latitude_bounds,
    .longitude_bounds = longitude_bounds,
    .layers = LAYERS,
    .layer_bounds = layer_bounds,
    .regions = REGIONS,
    .region_names = region_names,
    .has_salinity = true,
    .fill_coverage = true,
    .ocean_area = 3.625e14,
    .created = "2031-05-04T12:00:00Z",
    .command_line = "stericol change --earlier a.nc --later b.nc",
    .earlier_epoch = "2005-01..2009-12",
    .later_epoch = "2015-01..2019-12",
    .coverage_start = "2005-01-01",
    .coverage_end = "2020-01-01",
    .cell_area_source = "from the bounds of the cells",
    .region_area_source = "cells with a value at the surface",
};

#define assert_ok(call, context)                                                                             \
    do {                                                                                                     \
        const stericol_status got_ = (call);                                                                 \
        if (got_ != STERICOL_OK)                                                                             \
            print_error("%s\n", stericol_context_message(context));                                          \
        assert_int_equal(got_, STERICOL_OK);                                                                 \
    } while (0)

/* Rows go out in two parts, as tiles do. */
static void put_map(stericol_context *context, stericol_result *result, int map, size_t layer)
{
    double values[CELLS];

    fill_values(map, layer, CELLS, values);
    assert_ok(stericol_result_map(context, result, (stericol_map)map, layer, 0, 1, values), context);
    assert_ok(stericol_result_map(context, result, (stericol_map)map, layer, 1, ROWS - 1, values + COLUMNS),
              context);
}

static void put_all(stericol_context *context, stericol_result *result, const stericol_change_layout *layout)
{
    const signed char flags[CELLS] = {0, -1, 1, 2, 3, 4, 5, 6, 0, 0, 1, 1};
    double values[CELLS];

    for (int map = 0; map < STERICOL_MAP_COUNT; map++) {
        if (!stericol_change_holds_map(layout, (stericol_map)map))
            continue;
        put_map(context, result, map, STERICOL_WHOLE_COLUMN);
        for (size_t layer = 0; layout->layers > 1 && layer < layout->layers; layer++)
            put_map(context, result, map, layer);
    }
    assert_ok(stericol_result_flags(context, result, 0, ROWS, flags), context);
    for (size_t i = 0; i < CELLS; i++)
        values[i] = 1e11 + (double)i;
    assert_ok(stericol_result_cell_area(context, result, 0, ROWS, values), context);
    for (int quantity = 0; quantity < STERICOL_REGION_QUANTITY_COUNT; quantity++) {
        if (!stericol_change_holds_region(layout, (stericol_region_quantity)quantity))
            continue;
        fill_values(quantity, STERICOL_WHOLE_COLUMN, REGIONS, values);
        assert_ok(stericol_result_region(context, result, (stericol_region_quantity)quantity,
                                         STERICOL_WHOLE_COLUMN, values),
                  context);
        for (size_t layer = 0;
             layout->layers > 1 && layer < layout->layers && quantity != STERICOL_REGION_AREA; layer++) {
            fill_values(quantity, layer, REGIONS, values);
            assert_ok(
                stericol_result_region(context, result, (stericol_region_quantity)quantity, layer, values),
                context);
        }
    }
    assert_ok(stericol_result_attribute(context, result, "settings", "layers = 0..700"), context);
    assert_ok(stericol_result_attribute(context, result, "title", "Miradel Sea"), context);
    assert_ok(stericol_result_attribute_number(context, result, "heat_capacity", 3991.86795711963), context);
}

static void write_whole(const char *path, const stericol_change_layout *layout)
{
    stericol_context *context = stericol_context_new();
    stericol_result *result = NULL;

    assert_ok(stericol_result_new(context, path, true, layout, &result), context);
    put_all(context, result, layout);
    assert_ok(stericol_result_commit(context, result, DEEPEST), context);
    stericol_result_free(result);
    stericol_context_free(context);
}

static void test_regular_with_layers(void **state)
{
    (void)state;
    write_whole(FOLDER "regular.nc", &regular);
}

/* Without salinity, one layer, no bounds, no regions: nothing that is not known may be there. */
static void test_heat_alone(void **state)
{
    static const double straight[COLUMNS] = {10.0, 20.0, 30.0, 40.0};
    stericol_change_layout layout = regular;

    (void)state;
    layout.longitude = straight;
    layout.latitude_bounds = layout.longitude_bounds = NULL;
    layout.layers = 1;
    layout.layer_bounds = layer_bounds + 2;
    layout.regions = 0;
    layout.has_salinity = false;
    layout.has_remainder = true; /* of no meaning without salinity */
    layout.fill_coverage = false;
    layout.created = layout.command_line = layout.earlier_epoch = layout.later_epoch = NULL;
    layout.coverage_start = layout.coverage_end = NULL;
    layout.ocean_area = 0.0;
    write_whole(FOLDER "heat_alone.nc", &layout);
}

/* A tilted grid with corners, two layers that leave a gap, and a remainder. */
static void test_curvilinear(void **state)
{
    double latitude[CELLS], longitude[CELLS], lat_corners[CELLS * CORNERS], lon_corners[CELLS * CORNERS];
    static const double apart[2][2] = {{0.0, 100.0}, {500.0, 1000.0}};
    stericol_change_layout layout = regular;

    (void)state;
    for (int i = 0; i < CELLS; i++) {
        latitude[i] = 60.0 + i / COLUMNS + 0.1 * (i % COLUMNS);
        longitude[i] = -20.0 + i % COLUMNS;
        for (int corner = 0; corner < CORNERS; corner++) {
            lat_corners[i * CORNERS + corner] = latitude[i] + (corner < 2 ? -0.5 : 0.5);
            lon_corners[i * CORNERS + corner] = longitude[i] + (corner == 0 || corner == 3 ? -0.5 : 0.5);
        }
    }
    latitude[1] = longitude[1] = (double)NAN;
    layout.curvilinear = true;
    layout.latitude = latitude;
    layout.longitude = longitude;
    layout.latitude_bounds = lat_corners;
    layout.longitude_bounds = lon_corners;
    layout.corners = CORNERS;
    layout.layers = 2;
    layout.layer_bounds = apart;
    layout.has_remainder = true;
    layout.fill_coverage = false;
    write_whole(FOLDER "curvilinear.nc", &layout);
}

static void test_two_runs_give_the_same_bytes(void **state)
{
    FILE *a, *b;
    int one, two;

    (void)state;
    write_whole(FOLDER "again_a.nc", &regular);
    write_whole(FOLDER "again_b.nc", &regular);
    a = fopen(FOLDER "again_a.nc", "rb");
    b = fopen(FOLDER "again_b.nc", "rb");
    assert_true(a != NULL && b != NULL);
    do {
        one = getc(a);
        two = getc(b);
        assert_int_equal(one, two);
    } while (one != EOF);
    fclose(a);
    fclose(b);
    unlink(FOLDER "again_a.nc");
    unlink(FOLDER "again_b.nc");
}

static void test_what_a_layout_holds(void **state)
{
    stericol_change_layout layout = regular;

    (void)state;
    assert_true(stericol_change_holds_map(&layout, STERICOL_MAP_STERIC));
    assert_false(stericol_change_holds_map(&layout, STERICOL_MAP_REMAINDER));
    assert_true(stericol_change_holds_region(&layout, STERICOL_REGION_FILLED_HALOSTERIC));
    layout.has_remainder = true;
    assert_true(stericol_change_holds_map(&layout, STERICOL_MAP_REMAINDER));
    layout.has_salinity = false;
    assert_false(stericol_change_holds_map(&layout, STERICOL_MAP_REMAINDER));
    assert_false(stericol_change_holds_map(&layout, STERICOL_MAP_STERIC));
    assert_false(stericol_change_holds_map(&layout, STERICOL_MAP_HALOSTERIC));
    assert_true(stericol_change_holds_map(&layout, STERICOL_MAP_THERMOSTERIC));
    assert_true(stericol_change_holds_map(&layout, STERICOL_MAP_EFFICIENCY));
    assert_false(stericol_change_holds_region(&layout, STERICOL_REGION_MEAN_HALOSTERIC));
    assert_true(stericol_change_holds_region(&layout, STERICOL_REGION_FILLED_HEAT));
    layout.regions = 0;
    assert_false(stericol_change_holds_region(&layout, STERICOL_REGION_HEAT));
}

static void test_failures_leave_nothing(void **state)
{
    const char *path = FOLDER "never.nc";
    stericol_context *context = stericol_context_new();
    stericol_result *result = NULL;
    double values[CELLS] = {0};
    struct stat found;

    (void)state;
    unlink(path);
    assert_ok(stericol_result_new(context, path, false, &regular, &result), context);
    values[5] = 1e39;
    assert_int_equal(stericol_result_map(context, result, STERICOL_MAP_HEAT, 1, 0, ROWS, values),
                     STERICOL_OUTPUT);
    assert_non_null(strstr(stericol_context_message(context),
                           "never.nc: layer_heat_content_change: the value 1e+39 is beyond the range"));
    stericol_result_free(result);
    assert_true(stat(path, &found) != 0 && errno == ENOENT);

    stericol_context_clear(context);
    assert_ok(stericol_result_new(context, path, false, &regular, &result), context);
    assert_true(stericol_result_remove_temporary(result));
    assert_false(stericol_result_remove_temporary(result));
    stericol_result_free(result);
    stericol_result_free(NULL);
    assert_false(stericol_result_remove_temporary(NULL));

    assert_int_equal(stericol_result_new(context, FOLDER "regular.nc", false, &regular, &result),
                     STERICOL_USAGE);
    assert_null(result);
    stericol_context_free(context);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_regular_with_layers), cmocka_unit_test(test_heat_alone),
        cmocka_unit_test(test_curvilinear),         cmocka_unit_test(test_two_runs_give_the_same_bytes),
        cmocka_unit_test(test_what_a_layout_holds), cmocka_unit_test(test_failures_leave_nothing),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
