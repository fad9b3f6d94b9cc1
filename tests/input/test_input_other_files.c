/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Grids that are not plain, and what other files add: positions, areas, masks, thicknesses. */
#include "made_sea.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const made_format netcdf4 = {"", NC_NETCDF4, true, true, false};
static const sea_text north[] = {{"units", "degrees_north"}}, east[] = {{"units", "degrees_east"}};

/* ---- positions ---- */

enum { Y = 3, X = 2, Z = 2 };

/* temp(z, x, y) or (z, y, x) with positions on (y, x) or (x, y). */
static const char *write_curved(const char *name, bool field_turned, bool positions_turned, bool named,
                                bool inside)
{
    static const double levels[Z] = {10.0, 30.0};
    double latitude[Y * X], longitude[Y * X], corner_latitude[Y * X * 4], corner_longitude[Y * X * 4],
        values[Z * Y * X];
    int file = made_create(&netcdf4, name), dimension;
    must(nc_def_dim(file, "depth", Z, &dimension));
    must(nc_def_dim(file, named ? "y" : "rr", Y, &dimension));
    must(nc_def_dim(file, named ? "x" : "cc", X, &dimension));
    must(nc_def_dim(file, "corner", 4, &dimension));
    for (size_t row = 0; row < Y; row++)
        for (size_t column = 0; column < X; column++) {
            const size_t at = positions_turned ? column * Y + row : row * X + column;
            latitude[at] = 60.0 + 10.0 * (double)row + (double)column;
            longitude[at] = 5.0 * (double)column - (double)row;
            for (size_t c = 0; c < 4; c++) {
                corner_latitude[4 * at + c] = latitude[at] + (c / 2 ? 5.0 : -5.0);
                corner_longitude[4 * at + c] = longitude[at] + (c % 2 ? 2.5 : -2.5);
            }
            for (size_t level = 0; level < Z; level++)
                values[level * Y * X + (field_turned ? column * Y + row : row * X + column)] =
                    (double)(1 + level * 10 + row * 2 + column);
        }
    const char *yx = named ? "y x" : "rr cc", *xy = named ? "x y" : "cc rr";
    char dimensions[32];
    (void)snprintf(dimensions, sizeof dimensions, "depth %s", field_turned ? xy : yx);
    const sea_text metres[] = {{"units", "m"}};
    const sea_text temperature[] = {{"units", "degC"}, {"coordinates", "nav_lat nav_lon"}};
    const sea_text salinity[] = {{"units", "PSU"}, {"coordinates", "nav_lat nav_lon"}};
    sea_add(file, "depth", "depth", metres, 1, levels);
    sea_add(file, "temp", dimensions, temperature, inside ? 2 : 1, values);
    sea_add(file, "salt", dimensions, salinity, inside ? 2 : 1, values);
    if (inside) {
        const sea_text with_bounds[2][2] = {{north[0], {"bounds", "lat_corners"}},
                                            {east[0], {"bounds", "lon_corners"}}};
        sea_add(file, "nav_lat", positions_turned ? xy : yx, with_bounds[0], 2, latitude);
        sea_add(file, "nav_lon", positions_turned ? xy : yx, with_bounds[1], 2, longitude);
        (void)snprintf(dimensions, sizeof dimensions, "%s corner", positions_turned ? xy : yx);
        sea_add(file, "lat_corners", dimensions, NULL, 0, corner_latitude);
        sea_add(file, "lon_corners", dimensions, NULL, 0, corner_longitude);
    }
    must(nc_close(file));
    return made_path(name);
}

static void check_curved(try *one, bool bounds)
{
    const stericol_grid *grid = stericol_epoch_grid(one->epoch);
    double plane[Y * X];
    assert_true(grid->curvilinear);
    assert_int_equal(grid->rows, Y);
    assert_int_equal(grid->columns, X);
    assert_int_equal(grid->latitude_bounds != NULL, bounds);
    assert_int_equal(stericol_epoch_load(one->seen.context, one->epoch, 1, 1, 0, Y, plane, NULL, NULL),
                     STERICOL_OK);
    for (size_t row = 0; row < Y; row++)
        for (size_t column = 0; column < X; column++) {
            const size_t at = row * X + column;
            assert_close(grid->latitude[at], 60.0 + 10.0 * (double)row + (double)column, 1e-12);
            assert_close(grid->longitude[at], 5.0 * (double)column - (double)row, 1e-12);
            assert_same_number(plane[at], (double)(11 + row * 2 + column));
            for (size_t c = 0; bounds && c < 4; c++)
                assert_close(grid->latitude_bounds[4 * at + c], grid->latitude[at] + (c / 2 ? 5.0 : -5.0),
                             1e-12);
        }
    assert_int_equal(grid->corners, bounds ? 4 : grid->corners);
}

static void test_curvilinear(void **state)
{
    (void)state;
    for (int i = 0; i < 8; i++) {
        const bool field_turned = i & 1, positions_turned = i & 2, named = i & 4;
        try one;
        /* Without names that tell x from y the rows are those of the positions. */
        if (!named && positions_turned)
            continue;
        try_begin(&one, write_curved("curved.nc", field_turned, positions_turned, named, true));
        try_open(&one);
        check_curved(&one, true);
        try_end(&one);
    }
}

static void test_coordinates_file(void **state)
{
    (void)state;
    try one;
    char path[256], positions[256];
    (void)snprintf(positions, sizeof positions, "%s", write_curved("positions.nc", false, false, true, true));
    (void)snprintf(path, sizeof path, "%s", write_curved("nowhere.nc", false, false, true, false));
    try_begin(&one, path);
    assert_open_fails(&one, STERICOL_INPUT,
                      "temp: no latitude was found for it; give the file that holds them with --coordinates");
    try_begin(&one, path);
    one.request.coordinates_file = positions;
    try_open(&one);
    check_curved(&one, true);
    try_end(&one);
    const sea how = sea_plain("other.nc");
    (void)snprintf(positions, sizeof positions, "%s", sea_write(&how));
    try_begin(&one, path);
    one.request.coordinates_file = positions;
    stericol_text text = {0};
    stericol_text_format(
        &text,
        "no latitude and longitude of the shape that temp has in %s; give the coordinates file of this "
        "very grid",
        path);
    assert_open_fails_at(&one, STERICOL_INPUT, positions, stericol_text_string(&text));
    stericol_text_free(&text);
}

/* One column: latitude and longitude are scalars. */
static void test_single_column(void **state)
{
    (void)state;
    static const double levels[3] = {10.0, 30.0, 50.0}, values[3] = {3.0, 2.0, 1.0}, latitude = 12.5,
                        longitude = -30.0;
    int file = made_create(&netcdf4, "column.nc"), dimension;
    const sea_text metres[] = {{"units", "dbar"}}, degrees[] = {{"units", "degC"}},
                   psu[] = {{"units", "PSU"}};
    double plane[1];
    try one;
    must(nc_def_dim(file, "pressure", 3, &dimension));
    sea_add(file, "pressure", "pressure", metres, 1, levels);
    sea_add(file, "temp", "pressure", degrees, 1, values);
    sea_add(file, "salt", "pressure", psu, 1, values);
    sea_add(file, "lat", "", north, 1, &latitude);
    sea_add(file, "lon", "", east, 1, &longitude);
    must(nc_close(file));
    try_begin(&one, made_path("column.nc"));
    try_open(&one);
    const stericol_grid *grid = stericol_epoch_grid(one.epoch);
    assert_int_equal(grid->rows * grid->columns, 1);
    assert_int_equal(grid->vertical, STERICOL_VERTICAL_PRESSURE);
    assert_same_number(grid->latitude[0], 12.5);
    assert_same_number(grid->longitude[0], -30.0);
    assert_null(grid->latitude_name);
    assert_int_equal(stericol_epoch_load(one.seen.context, one.epoch, 2, 1, 0, 1, plane, NULL, NULL),
                     STERICOL_OK);
    assert_same_number(plane[0], 1.0);
    try_end(&one);
}

static void test_unstructured(void **state)
{
    (void)state;
    static const double levels[2] = {10.0, 30.0}, values[6] = {3.0, 2.0, 1.0, 3.0, 2.0, 1.0},
                        places[3] = {1.0, 2.0, 3.0};
    int file = made_create(&netcdf4, "cells.nc"), dimension;
    const sea_text metres[] = {{"units", "m"}}, degrees[] = {{"units", "degC"}, {"coordinates", "lat lon"}};
    try one;
    must(nc_def_dim(file, "depth", 2, &dimension));
    must(nc_def_dim(file, "ncells", 3, &dimension));
    sea_add(file, "depth", "depth", metres, 1, levels);
    sea_add(file, "temp", "depth ncells", degrees, 2, values);
    sea_add(file, "lat", "ncells", north, 1, places);
    sea_add(file, "lon", "ncells", east, 1, places);
    must(nc_close(file));
    try_begin(&one, made_path("cells.nc"));
    assert_open_fails(
        &one, STERICOL_INPUT,
        "temp: latitude and longitude run along one dimension: an unstructured grid; put the field on a grid "
        "of rows and columns first");
}

/* ---- pressure ---- */

static void test_pressure(void **state)
{
    (void)state;
    static const double with_air[SEA_LEVELS] = {15.1325, 110.1325, 510.1325, 1010.1325},
                        without[SEA_LEVELS] = {5.0, 100.0, 500.0, 1000.0};
    static const struct {
        const char *standard_name, *units;
        double scale;
        bool air;
        const char *said;
    } cases[] = {{"sea_water_pressure_due_to_sea_water", "dbar", 1.0, false, NULL},
                 {"sea_water_pressure_due_to_sea_water", "decibar", 1.0, false, NULL},
                 {"sea_water_pressure_due_to_sea_water", "Pa", 1e4, false, NULL},
                 {"sea_water_pressure", "dbar", 1.0, true,
                  "depth: sea_water_pressure counts the air; 10.1325 dbar are taken off"},
                 {"sea_water_pressure", "dbar", 1.0, false,
                  "depth: called sea_water_pressure, which counts the air, but begins at 5 dbar; taken as "
                  "pressure due to sea water"},
                 {NULL, "bar", 0.1, false, NULL}};
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        sea how = sea_plain("pressure.nc");
        try one;
        how.depth = cases[i].air ? with_air : without;
        how.depth_standard_name = cases[i].standard_name;
        how.depth_units = cases[i].units;
        how.depth_scale = cases[i].scale;
        how.deep_first = i % 2;
        try_begin(&one, sea_write(&how));
        try_open(&one);
        const stericol_grid *grid = stericol_epoch_grid(one.epoch);
        assert_int_equal(grid->vertical, STERICOL_VERTICAL_PRESSURE);
        for (size_t k = 0; k < SEA_LEVELS; k++)
            assert_close(grid->level[k], without[k], 1e-9);
        if (cases[i].said)
            assert_assumed(&one, cases[i].said);
        try_end(&one);
    }
}

static void test_vertical_unit_option(void **state)
{
    (void)state;
    for (int i = 0; i < 3; i++) {
        sea how = sea_plain("option.nc");
        try one;
        how.depth_units = i < 2 ? NULL : "m";
        how.depth_standard_name = NULL;
        try_begin(&one, sea_write(&how));
        one.request.vertical_unit = i == 0 ? "m" : "dbar";
        try_open(&one);
        assert_int_equal(stericol_epoch_grid(one.epoch)->vertical,
                         i == 1 ? STERICOL_VERTICAL_PRESSURE : STERICOL_VERTICAL_DEPTH);
        assert_assumed(
            &one, i == 0   ? "depth: levels taken in m as --vertical-unit says"
                  : i == 1 ? "depth: levels taken in dbar as --vertical-unit says"
                           : "depth: the file's own unit \"m\" is used; --vertical-unit dbar is left aside");
        try_end(&one);
    }
}

/* Bounds that are absent, or that do not enclose their level, are left aside and said. */
static void test_awkward_bounds(void **state)
{
    (void)state;
    sea how = sea_plain("limits.nc");
    try one;
    how.depth_bounds = true;
    const char *path = sea_write(&how);
    const size_t index[2] = {1, 0};
    const double wrong = 30.0;
    int file, limits;
    sea_attribute(path, "lat", "bounds", "lat_bnds");
    must(nc_open(path, NC_WRITE, &file));
    must(nc_inq_varid(file, "depth_limits", &limits));
    must(nc_put_var1_double(file, limits, index, &wrong));
    must(nc_close(file));
    try_begin(&one, path);
    try_open(&one);
    assert_null(stericol_epoch_grid(one.epoch)->level_bounds);
    assert_null(stericol_epoch_grid(one.epoch)->latitude_bounds);
    assert_assumed(
        &one,
        "depth: its limits do not enclose its levels; they are left aside and the levels count as samples");
    assert_assumed(&one, "lat: its bounds \"lat_bnds\" are not in the file");
    try_end(&one);
    path = sea_write(&how);
    sea_attribute(path, "depth", "bounds", "nowhere");
    try_begin(&one, path);
    try_open(&one);
    assert_assumed(
        &one, "depth: its limits are not in the file; they are left aside and the levels count as samples");
    try_end(&one);
}

/* ---- areas and masks ---- */

static void test_cell_areas(void **state)
{
    (void)state;
    double areas[SEA_POINTS];
    sea how = sea_plain("areas.nc");
    try one;
    for (int i = 0; i < SEA_POINTS; i++)
        areas[i] = 100.0 + i;
    const sea_text area[] = {{"standard_name", "cell_area"}, {"units", "km2"}};
    for (int kind = 0; kind < 2; kind++) {
        char path[256], other[256];
        (void)snprintf(path, sizeof path, "%s", sea_write(&how));
        (void)snprintf(other, sizeof other, "%s", made_path("area_alone.nc"));
        sea_attribute(path, "theta", "cell_measures", "volume: v area: areacello");
        int file = kind == 0 ? sea_change(path) : sea_plane_file("area_alone.nc", SEA_ROWS, SEA_COLUMNS);
        sea_add(file, kind == 0 ? "areacello" : "a", "lat lon", area, 2, areas);
        must(nc_close(file));
        try_begin(&one, path);
        if (kind == 1)
            one.request.cell_area_file = other;
        try_open(&one);
        const stericol_grid *grid = stericol_epoch_grid(one.epoch);
        assert_string_equal(grid->cell_area_source, kind == 0 ? "areacello" : other);
        for (int i = 0; i < SEA_POINTS; i++)
            assert_relative(grid->cell_area[i], areas[i] * 1e6, 1e-15);
        try_end(&one);
    }
    how.file = "areas2.nc";
    const char *path = sea_write(&how);
    sea_attribute(path, "theta", "cell_measures", "area: areacello");
    try_begin(&one, path);
    try_open(&one);
    assert_null(stericol_epoch_grid(one.epoch)->cell_area);
    assert_assumed(&one, "theta: its cell areas \"areacello\" are in another file (--cell-area); areas are "
                         "computed from the positions");
    try_end(&one);
    int file = sea_plane_file("area_wrong.nc", SEA_ROWS, SEA_COLUMNS + 1);
    double more[SEA_ROWS * (SEA_COLUMNS + 1)] = {0.0};
    sea_add(file, "a", "lat lon", area, 2, more);
    must(nc_close(file));
    char wrong[256];
    (void)snprintf(wrong, sizeof wrong, "%s", made_path("area_wrong.nc"));
    try_begin(&one, made_path("areas2.nc"));
    one.request.cell_area_file = wrong;
    assert_open_fails_at(
        &one, STERICOL_INPUT, wrong,
        "a: its shape is not that of the field (5 rows, 6 columns); give it on the grid of the field");
}

static void test_land_masks(void **state)
{
    (void)state;
    static const struct {
        const char *name, *standard_name;
        double sea, land;
    } cases[] = {{"m", "land_binary_mask", 0.0, 1.0},
                 {"m", "sea_binary_mask", 1.0, 0.0},
                 {"sftof", "sea_area_fraction", 100.0, 20.0},
                 {"tmask", NULL, 1.0, 0.0}};
    double values[SEA_POINTS], plane[SEA_POINTS];
    for (size_t n = 0; n < sizeof cases / sizeof *cases; n++) {
        sea how = sea_plain("masked.nc");
        const sea_text name[] = {{"standard_name", cases[n].standard_name}};
        char path[256];
        try one;
        for (int i = 0; i < SEA_POINTS; i++)
            values[i] = i % 3 == 0 ? cases[n].land : cases[n].sea;
        int file = sea_plane_file("mask.nc", SEA_ROWS, SEA_COLUMNS);
        sea_add(file, cases[n].name, "lat lon", name, cases[n].standard_name ? 1 : 0, values);
        must(nc_close(file));
        (void)snprintf(path, sizeof path, "%s", made_path("mask.nc"));
        try_begin(&one, sea_write(&how));
        one.request.mask_file = path;
        try_open(&one);
        try_load(&one, 0, plane, NULL);
        for (int i = 0; i < SEA_POINTS; i++) {
            assert_int_equal(stericol_epoch_grid(one.epoch)->dry[i], i % 3 == 0);
            assert_int_equal(isnan(plane[i]) != 0, i % 3 == 0);
        }
        try_end(&one);
    }
}

static double zero_land(size_t t, size_t k, size_t j, size_t i)
{
    (void)t;
    (void)k;
    return j == 0 && i < 4 ? 0.0 : 10.0;
}

static void test_zeros_are_counted(void **state)
{
    (void)state;
    sea how = sea_plain("zeros.nc");
    double temperature[SEA_POINTS], salinity[SEA_POINTS];
    stericol_epoch_tally tally = {{0}, {0}, 0};
    try one;
    how.temperature.value = how.salinity.value = zero_land;
    try_begin(&one, sea_write(&how));
    try_open(&one);
    assert_int_equal(
        stericol_epoch_load(one.seen.context, one.epoch, 0, 1, 0, SEA_ROWS, temperature, salinity, &tally),
        STERICOL_OK);
    assert_int_equal(tally.zeros, 4);
    try_end(&one);
}

/* ---- depths of their own ---- */

static void test_thickness(void **state)
{
    (void)state;
    for (int deep_first = 0; deep_first < 2; deep_first++) {
        sea how = sea_plain("thick_field.nc"), other = sea_plain("thick.nc");
        double depth[SEA_POINTS], upper[SEA_POINTS], lower[SEA_POINTS], all[SEA_LEVELS * SEA_COLUMNS];
        char path[256];
        try one;
        how.deep_first = other.deep_first = deep_first;
        how.depth_units = NULL; /* a level index will do here */
        /* Thickness 10 + 10 k m, thinner in the fifth row; no cell below the third level in the first column.
         */
        double values[SEA_LEVELS * SEA_POINTS];
        for (size_t p = 0; p < SEA_LEVELS * SEA_POINTS; p++) {
            const size_t stored = p / SEA_POINTS, k = deep_first ? SEA_LEVELS - 1 - stored : stored;
            values[p] = p % SEA_COLUMNS == 0 && k == 3
                            ? 0.0
                            : 10.0 + 10.0 * (double)k - (p / SEA_COLUMNS % SEA_ROWS == 4);
        }
        other.temperature.name = other.salinity.name = NULL;
        (void)snprintf(path, sizeof path, "%s", sea_write(&other));
        const sea_text thickness[] = {{"standard_name", "cell_thickness"}, {"units", "m"}};
        int file = sea_change(path);
        sea_add(file, "thkcello", "depth lat lon", thickness, 2, values);
        must(nc_close(file));
        try_begin(&one, sea_write(&how));
        one.request.thickness_file = path;
        if (deep_first)
            one.request.vertical_unit = "m"; /* else the order of the levels could not be known */
        try_open(&one);
        assert_true(stericol_epoch_grid(one.epoch)->own_depths);
        for (size_t k = 0; k < SEA_LEVELS; k++) {
            assert_int_equal(stericol_epoch_load_depths(one.seen.context, one.epoch, k, 1, 0, SEA_ROWS, depth,
                                                        upper, lower),
                             STERICOL_OK);
            const double top = 10.0 * (double)k + 5.0 * (double)(k * k - k); /* sum of 10 + 10 i below k */
            for (size_t p = 0; p < SEA_POINTS; p++) {
                const double thin = p / SEA_COLUMNS == 4 ? 1.0 : 0.0;
                if (p % SEA_COLUMNS == 0 && k == 3) {
                    assert_nan(depth[p]);
                    assert_nan(lower[p]);
                    continue;
                }
                const double above = top - thin * (double)k, below = above + 10.0 + 10.0 * (double)k - thin;
                assert_close(upper[p], above, 1e-12);
                assert_close(lower[p], below, 1e-12);
                assert_close(depth[p], 0.5 * (above + below), 1e-12);
            }
        }
        /* A part of the rows, all levels at once, after the others. */
        assert_int_equal(
            stericol_epoch_load_depths(one.seen.context, one.epoch, 0, SEA_LEVELS, 4, 1, all, NULL, NULL),
            STERICOL_OK);
        assert_close(all[1], 4.5, 1e-12);
        assert_close(all[SEA_COLUMNS + 1], 9.0 + 9.5, 1e-12);
        assert_close(all[3 * SEA_COLUMNS + 1], 57.0 + 19.5, 1e-12);
        try_end(&one);
    }
}

/* Parametric levels tell their order even where the depths come from another file. */
static const char *write_terrain(const char *standard_name, bool edges, bool with_eta);
static void test_thickness_of_terrain(void **state)
{
    (void)state;
    double values[12], depth[4], plane[4];
    const double latitude[2] = {10.0, 20.0}, longitude[2] = {30.0, 40.0};
    const sea_text metres[] = {{"units", "m"}};
    int dimension;
    char path[256];
    try one;
    const int file = sea_plane_file("layers.nc", 2, 2);
    must(nc_def_dim(file, "s_rho", 3, &dimension));
    for (int p = 0; p < 12; p++)
        values[p] = 10.0 * (3 - p / 4); /* 30 m at the bottom, 10 m at the surface */
    sea_add(file, "lat", "lat", north, 1, latitude);
    sea_add(file, "lon", "lon", east, 1, longitude);
    sea_add(file, "dz", "s_rho lat lon", metres, 1, values);
    must(nc_close(file));
    (void)snprintf(path, sizeof path, "%s", made_path("layers.nc"));
    try_begin(&one, write_terrain("ocean_s_coordinate_g2", false, true));
    one.request.thickness_file = path;
    try_open(&one);
    static const double expected[3] = {5.0, 20.0, 45.0};
    for (size_t k = 0; k < 3; k++) {
        assert_int_equal(
            stericol_epoch_load_depths(one.seen.context, one.epoch, k, 1, 0, 2, depth, NULL, NULL),
            STERICOL_OK);
        assert_int_equal(stericol_epoch_load(one.seen.context, one.epoch, k, 1, 0, 2, plane, NULL, NULL),
                         STERICOL_OK);
        assert_close(depth[3], expected[k], 1e-12);
        assert_same_number(plane[0], (double)(4 * (2 - k)));
    }
    try_end(&one);
}

/* s(k) = -(k + 1/2)/3, C = s^2 sign -> -s^2; depth 300 + 100 column, eta 0.6 + 0.1 row. */
static const char *write_terrain(const char *standard_name, bool edges, bool with_eta)
{
    double s[3], c[3], sw[4], cw[4], depth[4], eta[4], values[12];
    const double latitude[2] = {10.0, 20.0}, longitude[2] = {30.0, 40.0}, critical = 50.0, a = 5.0, b = 0.4;
    int file = made_create(&netcdf4, "terrain.nc"), dimension;
    const bool sigma = strcmp(standard_name, "ocean_sigma_coordinate") == 0;
    must(nc_def_dim(file, "s_rho", 3, &dimension));
    must(nc_def_dim(file, "s_w", 4, &dimension));
    must(nc_def_dim(file, "lat", 2, &dimension));
    must(nc_def_dim(file, "lon", 2, &dimension));
    for (int k = 0; k < 3; k++) { /* from the bottom up, as such files have it */
        s[k] = -(2.5 - k) / 3.0;
        c[k] = -s[k] * s[k];
    }
    for (int k = 0; k < 4; k++) {
        sw[k] = -(3.0 - k) / 3.0;
        cw[k] = -sw[k] * sw[k];
    }
    for (int p = 0; p < 4; p++) {
        depth[p] = 300.0 + 100.0 * (p % 2);
        eta[p] = 0.6 + 0.1 * (p / 2);
    }
    for (int p = 0; p < 12; p++)
        values[p] = p;
    const char *terms = sigma ? "sigma: s_rho eta: zeta depth: h"
                              : "s: s_rho C: Cs_r eta: zeta depth: h depth_c: hc a: theta_s b: theta_b";
    const char *limits = sigma ? "sigma: s_w eta: zeta depth: h"
                               : "s: s_w C: Cs_w eta: zeta depth: h depth_c: hc a: theta_s b: theta_b";
    const sea_text axis[] = {{"standard_name", standard_name}, {"formula_terms", terms}, {"positive", "up"}};
    const sea_text axis_w[] = {
        {"standard_name", standard_name}, {"formula_terms", limits}, {"positive", "up"}};
    const sea_text metres[] = {{"units", "meter"}}, degrees[] = {{"units", "Celsius"}},
                   psu[] = {{"units", "PSU"}};
    sea_add(file, "s_rho", "s_rho", axis, 3, s);
    if (edges)
        sea_add(file, "s_w", "s_w", axis_w, 3, sw);
    sea_add(file, "Cs_r", "s_rho", NULL, 0, c);
    sea_add(file, "Cs_w", "s_w", NULL, 0, cw);
    sea_add(file, "hc", "", metres, 1, &critical);
    sea_add(file, "theta_s", "", NULL, 0, &a);
    sea_add(file, "theta_b", "", NULL, 0, &b);
    sea_add(file, "lat", "lat", north, 1, latitude);
    sea_add(file, "lon", "lon", east, 1, longitude);
    sea_add(file, "h", "lat lon", metres, 1, depth);
    if (with_eta)
        sea_add(file, "zeta", "lat lon", metres, 1, eta);
    sea_add(file, "temp", "s_rho lat lon", degrees, 1, values);
    sea_add(file, "salt", "s_rho lat lon", psu, 1, values);
    must(nc_close(file));
    return made_path("terrain.nc");
}

/* CF 1.10, appendix D, written out again from the text. */
static double height_by_text(const char *standard_name, double s, double c, double depth, double eta)
{
    const double critical = 50.0, a = 5.0, b = 0.4;
    if (strcmp(standard_name, "ocean_sigma_coordinate") == 0)
        return eta + s * (depth + eta);
    if (strcmp(standard_name, "ocean_s_coordinate") == 0) {
        const double stretch =
            (1.0 - b) * sinh(a * s) / sinh(a) + b * (tanh(a * (s + 0.5)) / (2.0 * tanh(0.5 * a)) - 0.5);
        return eta * (1.0 + s) + critical * s + (depth - critical) * stretch;
    }
    if (strcmp(standard_name, "ocean_s_coordinate_g1") == 0) {
        const double still = critical * s + (depth - critical) * c;
        return still + eta * (1.0 + still / depth);
    }
    return eta + (eta + depth) * (critical * s + depth * c) / (critical + depth);
}

static void test_terrain(void **state)
{
    (void)state;
    static const char *const names[] = {"ocean_sigma_coordinate", "ocean_s_coordinate",
                                        "ocean_s_coordinate_g1", "ocean_s_coordinate_g2"};
    for (int n = 0; n < 16; n++) {
        const char *name = names[n / 4];
        const bool edges = n & 1, with_eta = n & 2;
        double depth[4], upper[4], lower[4], before[4] = {0.0, 0.0, 0.0, 0.0}, plane[4];
        try one;
        try_begin(&one, write_terrain(name, edges, with_eta));
        try_open(&one);
        const stericol_grid *grid = stericol_epoch_grid(one.epoch);
        assert_true(grid->own_depths);
        assert_close(grid->level[0], 0.5 / 3.0, 1e-15);
        for (size_t k = 0; k < 3; k++) {
            assert_int_equal(
                stericol_epoch_load_depths(one.seen.context, one.epoch, k, 1, 0, 2, depth, upper, lower),
                STERICOL_OK);
            assert_int_equal(stericol_epoch_load(one.seen.context, one.epoch, k, 1, 0, 2, plane, NULL, NULL),
                             STERICOL_OK);
            for (int p = 0; p < 4; p++) {
                const double s = -((double)k + 0.5) / 3.0, floor = 300.0 + 100.0 * (p % 2);
                const double eta = with_eta ? 0.6 + 0.1 * (p / 2) : 0.0;
                assert_close(depth[p], eta - height_by_text(name, s, -s * s, floor, eta), 1e-9);
                assert_true(upper[p] < depth[p] && depth[p] < lower[p]);
                /* Cells touch; the first begins at the surface, the last ends at the sea floor (the check of
                   the formulas: s = 0 gives z = eta, s = -1 with C = -1 gives z = -depth). */
                assert_close(upper[p], before[p], 1e-9);
                before[p] = lower[p];
                if (k == 2)
                    assert_close(lower[p], floor + eta, 1e-9);
                assert_same_number(plane[p], (double)(4 * (2 - k)) + p);
            }
        }
        try_end(&one);
    }
    try one;
    const char *path = write_terrain("ocean_double_sigma_coordinate", false, true);
    try_begin(&one, path);
    assert_open_fails(&one, STERICOL_INPUT,
                      "s_rho: terrain-following levels of a kind that is not read "
                      "(ocean_double_sigma_coordinate); give the "
                      "cells with --thickness, or put the field on levels of depth first");
    path = write_terrain("ocean_s_coordinate_g2", false, true);
    sea_attribute(path, "s_rho", "formula_terms", "s: s_rho C: Cs_r eta: zeta depth: nowhere depth_c: hc");
    try_begin(&one, path);
    assert_open_fails(&one, STERICOL_INPUT,
                      "s_rho: its formula_terms name no variable for \"depth\" in the file, so depths cannot "
                      "be computed; put "
                      "the missing part into the file, or give the cells with --thickness");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_curvilinear),    cmocka_unit_test(test_coordinates_file),
        cmocka_unit_test(test_single_column),  cmocka_unit_test(test_unstructured),
        cmocka_unit_test(test_pressure),       cmocka_unit_test(test_vertical_unit_option),
        cmocka_unit_test(test_awkward_bounds), cmocka_unit_test(test_cell_areas),
        cmocka_unit_test(test_land_masks),     cmocka_unit_test(test_zeros_are_counted),
        cmocka_unit_test(test_thickness),      cmocka_unit_test(test_thickness_of_terrain),
        cmocka_unit_test(test_terrain),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
