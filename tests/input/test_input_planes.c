/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Planes that go with a grid: sea floor, masks of regions; and when two grids are the same. */
#include "made_sea.h"

#include <stdlib.h>
#include <string.h>

static const sea_text north[] = {{"units", "degrees_north"}}, east[] = {{"units", "degrees_east"}};

/* ---- sea floor ---- */

static void grid_of(stericol_grid *grid, double *latitude, double *longitude, size_t rows, size_t columns)
{
    *grid = (stericol_grid){.rows = rows, .columns = columns, .latitude = latitude, .longitude = longitude};
}

static void test_bathymetry(void **state)
{
    (void)state;
    double latitude[2] = {0.0, 10.0}, longitude[3] = {350.0, 0.0, 10.0}, fine_latitude[4], fine_longitude[6],
           heights[24];
    stericol_grid grid;
    double *depth = NULL;
    watched seen;
    stericol_cf_units *units;
    watch(&seen);
    assert_int_equal(stericol_cf_units_new(seen.context, &units), STERICOL_OK);
    longitude[1] = 360.0;
    longitude[2] = 370.0;
    grid_of(&grid, latitude, longitude, 2, 3);
    for (int i = 0; i < 4; i++)
        fine_latitude[i] = -2.5 + 5.0 * i;
    for (int i = 0; i < 6; i++)
        fine_longitude[i] = -12.5 + 5.0 * i; /* another branch */
    for (int i = 0; i < 24; i++)
        heights[i] = -1000.0 - 100.0 * (i % 6) - 10.0 * (i / 6.0 - (i % 6) / 6.0);
    heights[0] = 50.0;                                          /* land in a cell of sea */
    heights[4] = heights[5] = heights[10] = heights[11] = 20.0; /* a cell of land */
    const sea_text name[] = {{"standard_name", "altitude"}, {"units", "m"}};
    int file = sea_plane_file("floor.nc", 4, 6);
    sea_add(file, "lat", "lat", north, 1, fine_latitude);
    sea_add(file, "lon", "lon", east, 1, fine_longitude);
    sea_add(file, "elevation", "lat lon", name, 2, heights);
    must(nc_close(file));
    assert_int_equal(stericol_input_bathymetry(seen.context, units, made_path("floor.nc"), &grid, &depth),
                     STERICOL_OK);
    assert_close(depth[0], (1100.0 + 1010.0 + 1110.0) / 3.0, 1e-9);
    assert_close(depth[1], (1200.0 + 1300.0 + 1210.0 + 1310.0) / 4.0, 1e-9);
    assert_nan(depth[2]);
    assert_close(depth[3], (1020.0 + 1120.0 + 1030.0 + 1130.0) / 4.0, 1e-9);
    free(depth);
    /* On the very grid: as it is; positive down by its name. */
    static const double same[6] = {100.0, 200.0, 0.0, 400.0, -5.0, 600.0};
    const sea_text down[] = {{"standard_name", "sea_floor_depth_below_geoid"}, {"units", "km"}};
    double kilometres[6];
    for (int i = 0; i < 6; i++)
        kilometres[i] = same[i] / 1000.0;
    file = sea_plane_file("floor.nc", 2, 3);
    sea_add(file, "lat", "lat", north, 1, latitude);
    sea_add(file, "lon", "lon", east, 1, longitude);
    sea_add(file, "deptho", "lat lon", down, 2, kilometres);
    must(nc_close(file));
    assert_int_equal(stericol_input_bathymetry(seen.context, units, made_path("floor.nc"), &grid, &depth),
                     STERICOL_OK);
    for (int i = 0; i < 6; i++)
        if (same[i] > 0.0)
            assert_close(depth[i], same[i], 1e-9);
        else
            assert_nan(depth[i]);
    free(depth);
    /* A coarser source: the nearest. */
    const double coarse_latitude[1] = {4.0}, coarse_longitude[2] = {0.0, 180.0},
                 coarse[2] = {-3000.0, -100.0};
    const sea_text metres[] = {{"units", "m"}};
    file = sea_plane_file("floor.nc", 1, 2);
    sea_add(file, "lat", "lat", north, 1, coarse_latitude);
    sea_add(file, "lon", "lon", east, 1, coarse_longitude);
    sea_add(file, "z", "lat lon", metres, 1, coarse);
    must(nc_close(file));
    assert_int_equal(stericol_input_bathymetry(seen.context, units, made_path("floor.nc"), &grid, &depth),
                     STERICOL_OK);
    for (int i = 0; i < 6; i++)
        assert_close(depth[i], 3000.0, 1e-9);
    free(depth);
    const sea how = sea_plain("no_floor.nc");
    assert_int_equal(stericol_input_bathymetry(seen.context, units, sea_write(&how), &grid, &depth),
                     STERICOL_INPUT);
    assert_null(depth);
    assert_non_null(
        strstr(stericol_context_message(seen.context),
               "no sea floor depth was recognised (0 variables fit); give a file with one variable of "
               "standard_name sea_floor_depth_below_geoid"));
    stericol_cf_units_free(units);
    unwatch(&seen);
}

/* ---- masks of regions ---- */

static const char *write_regions(const char *meanings, const signed char *flags, size_t count, bool text)
{
    static const double latitude[2] = {0.0, 10.0}, longitude[2] = {20.0, 30.0};
    static const signed char values[4] = {0, 3, 7, 3};
    int file = sea_plane_file("regions.nc", 2, 2), dimension[2] = {0, 1}, variable;
    sea_add(file, "lat", "lat", north, 1, latitude);
    sea_add(file, "lon", "lon", east, 1, longitude);
    must(nc_def_var(file, "basin", NC_BYTE, 2, dimension, &variable));
    must(nc_put_att_text(file, variable, "flag_meanings", strlen(meanings), meanings));
    if (text)
        must(nc_put_att_text(file, variable, "flag_values", 10, "0b, 3b, 7b"));
    else
        must(nc_put_att_schar(file, variable, "flag_values", NC_BYTE, count, flags));
    must(nc_put_var_schar(file, variable, values));
    must(nc_close(file));
    return made_path("regions.nc");
}

static void test_region_mask(void **state)
{
    (void)state;
    static const signed char flags[3] = {0, 3, 7};
    double latitude[2] = {0.0, 10.0}, longitude[2] = {20.0, 30.0}, elsewhere[2] = {20.0, 31.0};
    stericol_grid grid;
    watched seen;
    stericol_input_mask mask;
    watch(&seen);
    grid_of(&grid, latitude, longitude, 2, 2);
    for (int text = 0; text < 2; text++) {
        const char *path = write_regions("land  inner_velm outer_velm", flags, 3, text);
        assert_int_equal(stericol_input_mask_read(seen.context, path, &grid, &mask), STERICOL_OK);
        assert_int_equal(mask.count, 2);
        assert_string_equal(mask.names[0], "inner_velm");
        assert_string_equal(mask.names[1], "outer_velm");
        static const unsigned char expected[4] = {0, 1, 2, 1};
        assert_memory_equal(mask.index, expected, 4);
        stericol_input_mask_free(&mask);
    }
    static const struct {
        const char *meanings;
        size_t count;
        const char *message;
    } cases[] = {{"none one", 3,
                  "basin: flag_values has 3 entries, flag_meanings has another number; give one meaning for "
                  "each flag"},
                 {"none one", 2,
                  "basin: the value 7 is none of its flag_values; add the value to flag_values and "
                  "flag_meanings"}};
    for (size_t i = 0; i < 2; i++) {
        stericol_text text = {0};
        const char *path = write_regions(cases[i].meanings, flags, cases[i].count, false);
        stericol_context_clear(seen.context);
        stericol_text_format(&text, "%s: %s", path, cases[i].message);
        assert_int_equal(stericol_input_mask_read(seen.context, path, &grid, &mask), STERICOL_INPUT);
        assert_string_equal(stericol_context_message(seen.context), stericol_text_string(&text));
        assert_null(mask.index);
        stericol_text_free(&text);
    }
    stericol_text text = {0};
    const char *path = write_regions("none inner_velm outer_velm", flags, 3, false);
    grid_of(&grid, latitude, elsewhere, 2, 2);
    stericol_context_clear(seen.context);
    stericol_text_format(
        &text,
        "%s: basin: its grid is not that of the field: longitude number 2 differs: 30 against 31; give it "
        "on the grid of the field",
        path);
    assert_int_equal(stericol_input_mask_read(seen.context, path, &grid, &mask), STERICOL_INPUT);
    assert_string_equal(stericol_context_message(seen.context), stericol_text_string(&text));
    stericol_text_free(&text);
    unwatch(&seen);
}

/* ---- the same grid ---- */

static void test_grid_same(void **state)
{
    (void)state;
    double latitude[2] = {0.0, 10.0}, longitude[2] = {20.0, 350.0}, branch[2] = {20.0, -10.0},
           level[2] = {5.0, 5000.0};
    double as_float[2] = {5.0, 5000.0004}, moved[2] = {0.0, 10.01};
    char text[160];
    stericol_grid a, b;
    grid_of(&a, latitude, longitude, 2, 2);
    a.levels = 2;
    a.level = level;
    b = a;
    b.longitude = branch;
    b.level = as_float;
    assert_true(stericol_grid_same(&a, &b, text, sizeof text));
    b.latitude = moved;
    assert_false(stericol_grid_same(&a, &b, text, sizeof text));
    assert_string_equal(text, "latitude number 2 differs: 10 against 10.01");
    b = a;
    b.levels = 1;
    assert_false(stericol_grid_same(&a, &b, text, sizeof text));
    assert_string_equal(text, "2 x 2 x 2 against 1 x 2 x 2 levels, rows, columns");
    b = a;
    b.vertical = STERICOL_VERTICAL_PRESSURE;
    assert_false(stericol_grid_same(&a, &b, text, sizeof text));
    assert_string_equal(text, "one has levels of depth, the other of pressure");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_bathymetry),
        cmocka_unit_test(test_region_mask),
        cmocka_unit_test(test_grid_same),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
