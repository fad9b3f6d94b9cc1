/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Areas, bounds, corners, repeated cells. */
#include "region/grids.h"

static const double R = STERICOL_AUTHALIC_RADIUS;

static double sum_of(const double *values, size_t count)
{
    double sum = 0.0;

    for (size_t i = 0; i < count; i++)
        sum += values[i];
    return sum;
}

/* The surface of a sphere is 4 pi R^2 (Archimedes); rounding of a plain sum of n terms stays below 1e-12. */
static void regular_cells_fill_the_sphere(void **state)
{
    static const size_t sizes[][2] = {{180, 360}, {7, 5}, {1, 1}, {73, 144}, {1, 3}};

    (void)state;
    for (size_t i = 0; i < sizeof sizes / sizeof sizes[0]; i++) {
        test_grid grid = regular_grid(sizes[i][0], sizes[i][1], -90.0, 90.0, 0.0, 360.0);
        double *area = areas_of(&grid.cells, R);

        assert_relative(sum_of(area, sizes[i][0] * sizes[i][1]), 4.0 * PI * R * R, 1e-12);
        free(area);
        free(grid.memory);
    }
    /* Digits of the surface of the authalic sphere: GRS 80, Moritz 2000: R = 6371007.181 m; 5.100656e14 m2.
     */
    assert_relative(4.0 * PI * R * R, 5.100656e14, 1e-7);
}

/* By hand: 10 degrees of longitude between the equator and 30 N, sin 30 = 1/2: R^2 (pi / 18) / 2. */
static void a_cell_by_hand(void **state)
{
    const double latitude_bounds[2] = {30.0, 0.0}, longitude_bounds[2] = {5.0, -5.0};
    stericol_cells cells = {.kind = STERICOL_CELLS_REGULAR,
                            .rows = 1,
                            .columns = 1,
                            .latitude_bounds = latitude_bounds,
                            .longitude_bounds = longitude_bounds};
    double area;

    (void)state;
    assert_int_equal(stericol_cell_areas(NULL, &cells, 1.0, 0, 1, &area), STERICOL_OK);
    assert_relative(area, PI / 36.0, 1e-15);
}

static void branch_and_order_do_not_matter(void **state)
{
    test_grid east = regular_grid(18, 36, -90.0, 90.0, 0.0, 360.0);
    test_grid west = regular_grid(18, 36, -90.0, 90.0, -360.0, 0.0);
    test_grid falling = regular_grid(18, 36, 90.0, -90.0, 360.0, 0.0);
    double *a = areas_of(&east.cells, R), *b = areas_of(&west.cells, R), *c = areas_of(&falling.cells, R);

    (void)state;
    for (size_t i = 0; i < 18 * 36; i++) {
        assert_same_number(a[i], b[i]);
        assert_same_number(a[i], c[18 * 36 - 1 - i]);
    }
    free(a);
    free(b);
    free(c);
    free(east.memory);
    free(west.memory);
    free(falling.memory);
}

/* A tenth of a degree is no binary fraction: 350.1 and -9.9 differ in their last bits, the areas must not. */
static void branch_does_not_matter_for_decimal_axes(void **state)
{
    const double latitude_bounds[2] = {10.1, 10.2}, latitude = 10.15;
    const double east[2] = {350.1, 350.2}, west[2] = {-9.9, -9.8};
    stericol_cells cells = {
        .rows = 1, .columns = 1, .latitude = &latitude, .latitude_bounds = latitude_bounds};
    double a, b;

    (void)state;
    cells.longitude_bounds = east;
    assert_int_equal(stericol_cell_areas(NULL, &cells, R, 0, 1, &a), STERICOL_OK);
    cells.longitude_bounds = west;
    assert_int_equal(stericol_cell_areas(NULL, &cells, R, 0, 1, &b), STERICOL_OK);
    assert_same_number(a, b);
}

/* Bounds 359.5, 0.5 about the centre 0 are a cell of one degree, not of 359. */
static void bounds_wrapped_apart(void **state)
{
    const double latitude_bounds[2] = {0.0, 1.0}, longitude = 0.0, longitude_bounds[2] = {359.5, 0.5};
    stericol_cells cells = {.rows = 1,
                            .columns = 1,
                            .longitude = &longitude,
                            .latitude_bounds = latitude_bounds,
                            .longitude_bounds = longitude_bounds};
    double area;

    (void)state;
    assert_int_equal(stericol_cell_areas(NULL, &cells, 1.0, 0, 1, &area), STERICOL_OK);
    assert_relative(area, PI / 180.0 * sin(PI / 180.0), 1e-14);
}

static void bad_bounds_are_refused(void **state)
{
    static const struct {
        double latitude[2], longitude[2];
        const char *message;
    } rows[] = {
        {{80.0, 91.0}, {0.0, 1.0}, "latitude bounds: row 1 reaches from 80 to 91 degrees north"},
        {{10.0, 10.0}, {0.0, 1.0}, "latitude bounds: row 1 reaches from 10 to 10 degrees north"},
        {{10.0, 20.0}, {0.0, 0.0}, "longitude bounds: column 1 reaches from 0 to 0 degrees east"},
        {{10.0, 20.0}, {0.0, 361.0}, "longitude bounds: column 1 reaches from 0 to 361 degrees east"},
        {{10.0, 20.0}, {0.0, 1e20}, "longitude bounds: column 1 reaches from 0 to 1e+20 degrees east"},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        stericol_cells cells = {.rows = 1,
                                .columns = 1,
                                .latitude_bounds = rows[i].latitude,
                                .longitude_bounds = rows[i].longitude};
        stericol_context *context = stericol_context_new();
        double area;

        assert_int_equal(stericol_cell_areas(context, &cells, R, 0, 1, &area), STERICOL_INPUT);
        assert_non_null(strstr(stericol_context_message(context), rows[i].message));
        stericol_context_free(context);
    }
}

/* Eight octants fill the sphere: the triangle with three right angles has the solid angle pi / 2. */
static void the_octant(void **state)
{
    const double latitude[3] = {0.0, 0.0, 90.0}, longitude[3] = {0.0, 90.0, 17.0};
    const double back_latitude[3] = {-90.0, 0.0, 0.0}, back_longitude[3] = {0.0, 180.0, 270.0};

    (void)state;
    assert_relative(stericol_polygon_area(R, 3, latitude, longitude), 4.0 * PI * R * R / 8.0, 1e-14);
    assert_relative(stericol_polygon_area(R, 3, back_latitude, back_longitude), 4.0 * PI * R * R / 8.0,
                    1e-14);
}

/*
 * The polar cap of n sides has n isosceles triangles with the apex angle 2 pi / n; each has the excess
 * 2 atan(tan^2(c/2) sin A / (1 + tan^2(c/2) cos A)), c the polar distance (Todhunter & Leathem 1901, art.
 * 103).
 */
static void a_cell_about_the_pole(void **state)
{
    const double latitude[4] = {80.0, 80.0, 80.0, 80.0}, longitude[4] = {10.0, 100.0, -170.0, -80.0};
    double t = tan(PI / 36.0);

    (void)state;
    assert_relative(stericol_polygon_area(1.0, 4, latitude, longitude), 4.0 * 2.0 * atan(t * t), 1e-13);
}

/*
 * In a cell of d radians the great circle leaves the parallel by d^2/8 sin(lat) cos(lat), which changes the
 * area by a part of order d^2: 3e-4 at 1 degree, 2e-6 at 1/12. Below, the rounding of what is put in is left:
 * 2^-53 in the corners over the narrow side of d cos 85, and 2^-41 degrees in the longitudes of the regular
 * cell over d.
 */
static void small_polygons_equal_regular_cells(void **state)
{
    static const struct {
        double step, tolerance;
    } rows[] = {{1.0, 1e-3}, {1.0 / 12.0, 1e-5}, {1e-2, 1e-7}, {1e-4, 2e-8}, {1e-6, 2e-6}};

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
        for (double south = -85.0; south < 86.0; south += 17.0) {
            double step = rows[i].step;
            test_grid polygon = lattice_grid(1, 1, south, south + step, 179.9, 179.9 + step);
            test_grid regular = regular_grid(1, 1, south, south + step, 179.9, 179.9 + step);
            double *a = areas_of(&polygon.cells, R), *b = areas_of(&regular.cells, R);

            assert_relative(a[0], b[0], rows[i].tolerance);
            free(a);
            free(b);
            free(polygon.memory);
            free(regular.memory);
        }
}

/* Neighbours share their sides, so that a lattice round the sphere leaves no gap; a pole row is triangles. */
static void a_lattice_fills_the_sphere(void **state)
{
    test_grid grid = lattice_grid(36, 72, -90.0, 90.0, 0.0, 360.0);
    double *area = areas_of(&grid.cells, R);

    (void)state;
    assert_relative(sum_of(area, 36 * 72), 4.0 * PI * R * R, 1e-12);
    free(area);
    free(grid.memory);
}

static void polygons_with_missing_corners(void **state)
{
    const double latitude[3] = {0.0, 0.0, (double)NAN}, longitude[3] = {0.0, 90.0, 17.0};

    (void)state;
    assert_nan(stericol_polygon_area(R, 3, latitude, longitude));
}

static void polygons_with_a_wrong_number_of_corners(void **state)
{
    static const size_t corners[] = {2, 65};
    static const char *const messages[] = {
        "bounds: cells have 2 corners; give cells with 3 to 64 corners, or no bounds",
        "bounds: cells have 65 corners; give cells with 3 to 64 corners, or no bounds"};

    (void)state;
    for (size_t i = 0; i < 2; i++) {
        const double corner[65] = {0.0};
        stericol_context *context = stericol_context_new();
        stericol_cells cells = {.kind = STERICOL_CELLS_POLYGONS,
                                .rows = 1,
                                .columns = 1,
                                .corners = corners[i],
                                .corner_latitude = corner,
                                .corner_longitude = corner};
        double area;

        assert_int_equal(stericol_cell_areas(context, &cells, R, 0, 1, &area), STERICOL_INPUT);
        assert_string_equal(stericol_context_message(context), messages[i]);
        stericol_context_free(context);
    }
}

static void latitude_bounds(void **state)
{
    /* By hand. */
    const double centre[4] = {-89.0, -80.0, -70.0, -66.0}, falling[2] = {10.0, 0.0};
    const double expected[8] = {-90.0, -84.5, -84.5, -75.0, -75.0, -68.0, -68.0, -64.0};
    const double unsorted[3] = {0.0, 10.0, 5.0}, beyond[2] = {80.0, 95.0};
    stericol_context *context = stericol_context_new();
    double bounds[8];

    (void)state;
    assert_int_equal(stericol_latitude_bounds(context, 4, centre, bounds), STERICOL_OK);
    for (size_t i = 0; i < 8; i++)
        assert_same_number(bounds[i], expected[i]);
    assert_int_equal(stericol_latitude_bounds(context, 2, falling, bounds), STERICOL_OK);
    assert_same_number(bounds[0], 15.0);
    assert_same_number(bounds[3], -5.0);
    assert_int_equal(stericol_latitude_bounds(context, 3, unsorted, bounds), STERICOL_INPUT);
    assert_string_equal(stericol_context_message(context),
                        "latitude: value 3 (5) is out of order; sort the axis");
    stericol_context_clear(context);
    assert_int_equal(stericol_latitude_bounds(context, 2, beyond, bounds), STERICOL_INPUT);
    assert_string_equal(stericol_context_message(context),
                        "latitude: value 2 is 95 degrees; correct the axis");
    stericol_context_clear(context);
    assert_int_equal(stericol_latitude_bounds(context, 1, centre, bounds), STERICOL_INPUT);
    assert_string_equal(
        stericol_context_message(context),
        "latitude: a single value without bounds has no width; give a file with bounds of the cells");
    stericol_context_free(context);
}

static void longitude_bounds(void **state)
{
    const double jump[4] = {178.0, 179.0, -180.0, -179.0};
    const double uneven[4] = {0.0, 90.0, 180.0, 300.0}; /* the gap of 60 closes the circle */
    const double part[3] = {300.0, 302.0, 306.0};
    const double repeated[5] = {0.0, 90.0, 180.0, 270.0, 360.0};
    const double both_ways[3] = {0.0, 10.0, 5.0};
    stericol_context *context = stericol_context_new();
    double bounds[10];

    (void)state;
    assert_int_equal(stericol_longitude_bounds(context, 4, jump, bounds), STERICOL_OK);
    assert_same_number(bounds[0], 177.5);
    assert_same_number(bounds[3], 179.5);
    assert_same_number(bounds[4], -180.5);
    assert_same_number(bounds[7], -178.5);
    assert_int_equal(stericol_longitude_bounds(context, 4, uneven, bounds), STERICOL_OK);
    assert_same_number(bounds[0], -30.0);
    assert_same_number(bounds[7], 330.0);
    assert_int_equal(stericol_longitude_bounds(context, 3, part, bounds), STERICOL_OK);
    assert_same_number(bounds[0], 299.0);
    assert_same_number(bounds[5], 308.0);
    assert_int_equal(stericol_longitude_bounds(context, 5, repeated, bounds), STERICOL_OK);
    assert_same_number(bounds[0], -45.0);
    assert_same_number(bounds[9], 405.0);
    assert_int_equal(stericol_longitude_bounds(context, 3, both_ways, bounds), STERICOL_INPUT);
    assert_string_equal(stericol_context_message(context),
                        "longitude: value 3 (5) is out of order; sort the axis");
    stericol_context_free(context);
}

/* On the equator the corners of a regular grid are half way; on the sphere the means fall there by symmetry.
 */
static void corners_of_centres(void **state)
{
    test_grid grid = lattice_grid(2, 3, -0.5, 0.5, 178.5, 180.0);
    double latitude[12], longitude[12];

    (void)state;
    assert_int_equal(
        stericol_cell_corners(NULL, 2, 3, grid.cells.latitude, grid.cells.longitude, latitude, longitude),
        STERICOL_OK);
    for (size_t i = 0; i < 12; i++) {
        double apart = remainder(longitude[i] - grid.cells.corner_longitude[i], 360.0);

        /* Means of directions bend by the square of the half step, 7.6e-5, of half a degree at most. */
        assert_close(latitude[i], grid.cells.corner_latitude[i], 3.8e-5);
        assert_close(apart, 0.0, 3.8e-5);
    }
    assert_int_equal(
        stericol_cell_corners(NULL, 1, 3, grid.cells.latitude, grid.cells.longitude, latitude, longitude),
        STERICOL_INPUT);
    free(grid.memory);
}

/* Areas by corners found from centres fill the region between the outer corners within the same bend. */
static void areas_of_cells_known_by_centres(void **state)
{
    test_grid grid = lattice_grid(40, 40, 40.0, 50.0, -5.0, 5.0);
    test_grid regular = regular_grid(40, 40, 40.0, 50.0, -5.0, 5.0);
    double *latitude = malloc(41 * 41 * sizeof *latitude), *longitude = malloc(41 * 41 * sizeof *longitude);
    double *a, *b;

    (void)state;
    assert_int_equal(
        stericol_cell_corners(NULL, 40, 40, grid.cells.latitude, grid.cells.longitude, latitude, longitude),
        STERICOL_OK);
    grid.cells.corner_latitude = latitude;
    grid.cells.corner_longitude = longitude;
    a = areas_of(&grid.cells, R);
    b = areas_of(&regular.cells, R);
    for (size_t i = 0; i < 1600; i++)
        assert_relative(a[i], b[i], 1e-4); /* (0.25 degrees)^2 = 2e-5 */
    free(a);
    free(b);
    free(latitude);
    free(longitude);
    free(grid.memory);
    free(regular.memory);
}

static void repeated_columns(void **state)
{
    const double latitude[2] = {0.0, 1.0};
    const double cyclic[6] = {-180.0, -90.0, 0.0, 90.0, 180.0, 270.00001};
    const unsigned char expected[12] = {0, 0, 0, 0, 1, 1, 0, 0, 0, 0, 1, 1};
    stericol_cells cells = {.rows = 2, .columns = 6, .latitude = latitude, .longitude = cyclic};
    unsigned char repeated[12];
    size_t count;

    (void)state;
    assert_int_equal(stericol_repeated_cells(NULL, &cells, repeated, &count), STERICOL_OK);
    assert_memory_equal(repeated, expected, sizeof expected);
    assert_int_equal(count, 4);
    cells.columns = 4;
    assert_int_equal(stericol_repeated_cells(NULL, &cells, repeated, &count), STERICOL_OK);
    assert_int_equal(count, 0);
}

/*
 * A curvilinear grid with one column repeated on either side and a top row that holds the row two below once
 * more, the other way round, as folded grids of ocean models do.
 */
static void repeated_curvilinear_cells(void **state)
{
    enum { ROWS = 8, COLUMNS = 14 };
    double latitude[ROWS * COLUMNS], longitude[ROWS * COLUMNS];
    unsigned char repeated[ROWS * COLUMNS];
    stericol_cells cells = {.kind = STERICOL_CELLS_LATTICE,
                            .rows = ROWS,
                            .columns = COLUMNS,
                            .latitude = latitude,
                            .longitude = longitude};
    size_t count;

    (void)state;
    for (size_t row = 0; row < ROWS; row++)
        for (size_t column = 0; column < COLUMNS; column++) {
            size_t from = row < ROWS - 1 ? row : ROWS - 3,
                   along = row < ROWS - 1 ? column : COLUMNS - 1 - column;
            double turn = 30.0 * (double)((along + 11) % 12);

            latitude[row * COLUMNS + column] = 10.0 * (double)from + 2.0 * sin(turn * PI / 180.0);
            longitude[row * COLUMNS + column] = turn + (column == 0 ? 360.0 : 0.0);
        }
    assert_int_equal(stericol_repeated_cells(NULL, &cells, repeated, &count), STERICOL_OK);
    for (size_t row = 0; row < ROWS; row++)
        for (size_t column = 0; column < COLUMNS; column++)
            assert_int_equal(repeated[row * COLUMNS + column], row == ROWS - 1 || column >= COLUMNS - 2);
    assert_int_equal(count, 2 * (ROWS - 1) + COLUMNS);
}

/* A regular grid written with two-dimensional coordinates and a row at the pole: one place, many cells. */
static void a_row_at_the_pole_is_not_repeated(void **state)
{
    enum { ROWS = 3, COLUMNS = 8 };
    double latitude[ROWS * COLUMNS], longitude[ROWS * COLUMNS];
    unsigned char repeated[ROWS * COLUMNS];
    stericol_cells cells = {.kind = STERICOL_CELLS_LATTICE,
                            .rows = ROWS,
                            .columns = COLUMNS,
                            .latitude = latitude,
                            .longitude = longitude};
    size_t count;

    (void)state;
    for (size_t i = 0; i < ROWS * COLUMNS; i++) {
        latitude[i] = 88.0 + (double)(i / COLUMNS);
        longitude[i] = 45.0 * (double)(i % COLUMNS);
    }
    latitude[1] = (double)NAN;
    assert_int_equal(stericol_repeated_cells(NULL, &cells, repeated, &count), STERICOL_OK);
    assert_int_equal(count, 0);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(regular_cells_fill_the_sphere),
        cmocka_unit_test(a_cell_by_hand),
        cmocka_unit_test(branch_and_order_do_not_matter),
        cmocka_unit_test(branch_does_not_matter_for_decimal_axes),
        cmocka_unit_test(bounds_wrapped_apart),
        cmocka_unit_test(bad_bounds_are_refused),
        cmocka_unit_test(the_octant),
        cmocka_unit_test(a_cell_about_the_pole),
        cmocka_unit_test(small_polygons_equal_regular_cells),
        cmocka_unit_test(a_lattice_fills_the_sphere),
        cmocka_unit_test(polygons_with_missing_corners),
        cmocka_unit_test(polygons_with_a_wrong_number_of_corners),
        cmocka_unit_test(latitude_bounds),
        cmocka_unit_test(longitude_bounds),
        cmocka_unit_test(corners_of_centres),
        cmocka_unit_test(areas_of_cells_known_by_centres),
        cmocka_unit_test(repeated_columns),
        cmocka_unit_test(repeated_curvilinear_cells),
        cmocka_unit_test(a_row_at_the_pole_is_not_repeated),
    };

    return cmocka_run_group_tests_name("region_areas", tests, NULL, NULL);
}
