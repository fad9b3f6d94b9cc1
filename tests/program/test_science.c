/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The whole program on invented seas whose answer is simple arithmetic: uniform oceans under the linear law,
 * boxes whose area is a formula, parts that must add up.
 *
 * The linear law (docs/definitions.md): v = (1/r) [1 + a (Theta - 10) - b (SA - 35)], r in kg/m3, a in
 * 1/K, b in kg/g.  With m = 1 + a (Theta - 10) - b (SA - 35) at the mean of both states (v is linear, so that
 * its mean is v at the mean) the fractional change of volume is [a dTheta - b dSA] / m at every depth: height
 * = that times depth.
 */
#include "program/science.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const double HEAT_CAPACITY = 3991.86795711963; /* cp0, J/(kg K): IOC Manuals and Guides 56, 2010 */

/* What the law says of a uniform ocean. */
typedef struct law {
    double a, b, r;
    double warmth[2], salt[2];
} law;

static double mean_factor(const law *of)
{
    return 1.0 + of->a * (0.5 * (of->warmth[0] + of->warmth[1]) - 10.0) -
           of->b * (0.5 * (of->salt[0] + of->salt[1]) - 35.0);
}

static double heat_height(const law *of, double depth)
{
    return of->a * (of->warmth[1] - of->warmth[0]) * depth / mean_factor(of);
}

static double salt_height(const law *of, double depth)
{
    return -of->b * (of->salt[1] - of->salt[0]) * depth / mean_factor(of);
}

static double uniform(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    const law *known = of->user;

    (void)k;
    (void)j;
    (void)i;
    return quantity == SEA_TEMPERATURE ? known->warmth[t] : known->salt[t];
}

/* ---- grids ---- */

static const double two_times[2] = {0.5, 1.5};
static const double two_time_bounds[4] = {0, 1, 1, 2};

enum { REGULAR_ROWS = 18, REGULAR_COLUMNS = 12 };
static double regular_rows[REGULAR_ROWS], regular_columns[REGULAR_COLUMNS];
/* unequal rows and columns with limits of their own */
static const double rows_of_4[4] = {-50, -10, 20, 70}, bounds_of_4[8] = {-80, -25, -25, 5, 5, 40, 40, 85};
static const double columns_of_3[3] = {20, 100, 250}, bounds_of_3[6] = {0, 45, 45, 180, 180, 360};
static const double levels_of_5[5] = {5, 50, 400, 1500, 4000};
static const double cells_of_5[10] = {0, 10, 10, 90, 90, 700, 700, 2300, 2300, 5700};

static void fill_regular_axes(void)
{
    for (size_t j = 0; j < REGULAR_ROWS; j++)
        regular_rows[j] = -85.0 + 10.0 * (double)j;
    for (size_t i = 0; i < REGULAR_COLUMNS; i++)
        regular_columns[i] = 15.0 + 30.0 * (double)i;
}

typedef struct grid_case {
    const char *name;
    sea_axis depth, latitude, longitude;
    double thickness, south, north; /* of the ocean */
} grid_case;

static const grid_case grids[] = {
    /* samples, the last at 4000 m; limits half way between centres reach the poles */
    {"samples",
     {5, levels_of_5, NULL},
     {REGULAR_ROWS, regular_rows, NULL},
     {REGULAR_COLUMNS, regular_columns, NULL},
     4000.0,
     -90.0,
     90.0},
    {"cells",
     {5, levels_of_5, cells_of_5},
     {REGULAR_ROWS, regular_rows, NULL},
     {REGULAR_COLUMNS, regular_columns, NULL},
     5700.0,
     -90.0,
     90.0},
    {"cells with limits of their own",
     {5, levels_of_5, cells_of_5},
     {4, rows_of_4, bounds_of_4},
     {3, columns_of_3, bounds_of_3},
     5700.0,
     -80.0,
     85.0},
    {"samples with limits of their own",
     {5, levels_of_5, NULL},
     {4, rows_of_4, bounds_of_4},
     {3, columns_of_3, bounds_of_3},
     4000.0,
     -80.0,
     85.0},
};

static sea uniform_sea(const grid_case *grid, const law *known)
{
    sea of = sea_plain();

    of.time = (sea_axis){2, two_times, two_time_bounds};
    of.depth = grid->depth;
    of.latitude = grid->latitude;
    of.longitude = grid->longitude;
    of.value = uniform;
    of.user = known;
    return of;
}

static const char *result_path(void)
{
    return in_folder("change.nc");
}

#define TWO_STEPS "--earlier-step", "1", "--later-step", "2", "--replace", "--output", result_path()

static double whole(const char *variable)
{
    return region_value(result_path(), variable, "whole_domain");
}

/*
 * What rounding leaves of a fractional change: it is the difference of two volumes, each rounded to 1.1e-16
 * of itself by its own three operations, the same in every cell of a uniform sea, so that sums do not even it
 * out.
 */
static double rounding(double fraction)
{
    return 4.0 * 1.1e-16 / fabs(fraction);
}

/*
 * Areas and heat to 1e-12: some thousand operations of 1e-16 each, all terms of one sign.  Heights by
 * rounding(), here 4e-12.  Maps are floats, 6e-8.
 */
static void test_uniform_warming_and_salting(void **state)
{
    const law known = {2e-4, 7.5e-4, 1027.0, {14.0, 14.5}, {34.5, 34.375}};

    (void)state;
    for (size_t g = 0; g < sizeof grids / sizeof grids[0]; g++) {
        sea of = uniform_sea(&grids[g], &known);
        sea_form form = form_plain();
        const char *path = sea_write(&of, &form, "uniform.nc");
        double warm = heat_height(&known, grids[g].thickness), salt = salt_height(&known, grids[g].thickness);
        double area = ring_area(grids[g].south, grids[g].north);
        double gain = HEAT_CAPACITY * 0.5 * 1027.0 / mean_factor(&known) * grids[g].thickness;
        field map;

        print_message("%s\n", grids[g].name);
        run_well("change", "--earlier", path, "--later", path, "--equation", "linear", TWO_STEPS);
        assert_relative(whole("region_area"), area, 1e-12);
        assert_relative(whole("region_covered_area"), area, 1e-12);
        assert_relative(whole("region_mean_thermosteric_height_change"), warm, rounding(1e-4));
        assert_relative(whole("region_mean_halosteric_height_change"), salt, rounding(9.4e-5));
        assert_relative(whole("region_mean_steric_height_change"), warm + salt, rounding(1.9e-4));
        assert_relative(whole("region_steric_volume_change"), (warm + salt) * area, rounding(1.9e-4));
        assert_relative(whole("region_heat_content_change"), gain * area, 1e-12);
        assert_relative(whole("region_sea_level_equivalent"), warm * area / 3.625e14, rounding(1e-4));
        assert_relative(whole("region_expansion_efficiency"), warm * area / 3.625e14 / (gain * area / 1e24),
                        1e-12);
        map = read_field(result_path(), "thermosteric_height_change");
        for (size_t i = 0; i < map.count; i++)
            assert_relative(map.value[i], warm, 6e-8);
        field_free(&map);
    }
}

/* Other coefficients, and density over a constant: (r/r0) [1/m1 - 1/m2] D, m at each state. */
static void test_coefficients_and_reference_density(void **state)
{
    const law known = {1.5e-4, 8e-4, 1030.0, {4.0, 6.0}, {35.5, 35.25}};
    sea of = uniform_sea(&grids[1], &known);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "coefficients.nc");
    double m[2];

    (void)state;
    for (size_t e = 0; e < 2; e++)
        m[e] = 1.0 + known.a * (known.warmth[e] - 10.0) - known.b * (known.salt[e] - 35.0);
    run_well("change", "--earlier", path, "--later", path, "--equation", "linear", "--expansion", "1.5e-4",
             "--contraction", "8e-4", "--density", "1030", TWO_STEPS);
    assert_relative(whole("region_mean_steric_height_change"),
                    heat_height(&known, 5700.0) + salt_height(&known, 5700.0), rounding(5e-4));
    run_well("change", "--earlier", path, "--later", path, "--equation", "linear", "--expansion", "1.5e-4",
             "--contraction", "8e-4", "--density", "1030", "--reference-density", "1025", TWO_STEPS);
    assert_relative(whole("region_mean_steric_height_change"),
                    1030.0 / 1025.0 * (1.0 / m[0] - 1.0 / m[1]) * 5700.0, rounding(5e-4));
}

/* On levels of pressure: (1/g) (v2 - v1) dp with g at the surface of each latitude (IOC Manuals and Guides
 * 56, 2010, eq. D.3). */
static void test_levels_of_pressure(void **state)
{
    const law known = {2e-4, 7.5e-4, 1027.0, {14.0, 14.5}, {34.5, 34.5}};
    grid_case grid = grids[0];
    sea of = uniform_sea(&grid, &known);
    sea_form form = form_plain();
    const char *path;
    field map, latitude;

    (void)state;
    of.depth_units = "dbar";
    path = sea_write(&of, &form, "pressure.nc");
    run_well("change", "--earlier", path, "--later", path, "--equation", "linear", TWO_STEPS);
    map = read_field(result_path(), "thermosteric_height_change");
    latitude = read_field(result_path(), "lat");
    for (size_t n = 0; n < map.count; n++) {
        double s = pow(sin(latitude.value[n / REGULAR_COLUMNS] * PI / 180.0), 2.0);
        double g = 9.780327 * (1.0 + 5.2792e-3 * s + 2.32e-5 * s * s);

        assert_relative(map.value[n], 2e-4 * 0.5 / 1027.0 * 4000.0 * 1e4 / g, 6e-8);
    }
    field_free(&map);
    field_free(&latitude);
}

/*
 * The ocean on the back of an envelope (common practice, no source): 1.4e18 m3 warmed by 0.2 K at 1.7e-4 1/K
 * gains 4.8e13 m3: 0.13 m over 3.6e14 m2.  The ring between 44.9 S and 44.9 N has that area.
 */
static void test_ocean_of_the_envelope(void **state)
{
    const law known = {1.7e-4, 7.5e-4, 1027.0, {10.0, 10.0}, {35.0, 35.0}};
    const double north = asin(3.6e14 / (4.0 * PI * AUTHALIC_RADIUS * AUTHALIC_RADIUS)) * 180.0 / PI;
    const double deep = 1.4e18 / 3.6e14, limits[2] = {0.0, deep}, middle = 0.5 * deep;
    const double rows[2] = {-0.5 * north, 0.5 * north}, row_limits[4] = {-north, 0.0, 0.0, north};
    sea of = sea_plain();
    sea_form form = form_plain();
    const char *path;

    (void)state;
    fill_regular_axes();
    of.depth = (sea_axis){1, &middle, limits};
    of.latitude = (sea_axis){2, rows, row_limits};
    of.longitude = (sea_axis){REGULAR_COLUMNS, regular_columns, NULL};
    of.value = uniform;
    of.user = &known;
    path = sea_write(&of, &form, "envelope.nc");
    run_well("scenario", "--field", path, "--warming", "0.2", "--equation", "linear", "--expansion", "1.7e-4",
             "--ocean-area", "3.6e14", "--replace", "--output", result_path());
    assert_close(whole("region_sea_level_equivalent"), 0.13, 0.005);
    assert_relative(whole("region_area"), 3.6e14, 1e-12);
    /* over the mean factor of the law, at 10.1 degrees */
    assert_relative(whole("region_thermosteric_volume_change"), 1.7e-4 * 0.2 * 1.4e18 / (1.0 + 1.7e-4 * 0.1),
                    rounding(3.4e-5));
    assert_relative(whole("region_steric_volume_change"), whole("region_thermosteric_volume_change"), 1e-14);
    assert_close(whole("region_halosteric_volume_change"), 0.0, 1.0); /* m3, of 4.8e13 */
}

/* ---- regions ---- */

/* Warmth by column, so that a box is known by what it holds: 1 K x (column + 1). */
static double warmer_eastward(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    (void)of;
    (void)k;
    (void)j;
    return quantity == SEA_TEMPERATURE ? 10.0 + (t > 0 ? 0.125 * (double)(i + 1) : 0.0) : 35.0;
}

/* Height of column i of warmer_eastward over 5700 m. */
static double eastward_height(size_t i)
{
    double rise = 0.125 * (double)(i + 1);

    return 2e-4 * rise * 5700.0 / (1.0 + 1e-4 * rise);
}

static const char *write_eastward(void)
{
    sea of = uniform_sea(&grids[1], NULL);
    sea_form form = form_plain();

    of.value = warmer_eastward;
    return sea_write(&of, &form, "eastward.nc");
}

/*
 * A box across the date line covers a third of column 5 (150..180 E) and two thirds of column 6 (180..210 E),
 * and halves of rows: areas and sums by the formula of a ring.
 */
static void test_box_across_the_date_line(void **state)
{
    const char *path = write_eastward();
    double ring = ring_area(-5.0, 15.0), part[2];

    (void)state;
    part[0] = ring * 10.0 / 360.0; /* 170..180 E */
    part[1] = ring * 20.0 / 360.0; /* 180..200 E */
    run_well("change", "--earlier", path, "--later", path, "--equation", "linear", "--region",
             "Line=170,-5,-160,15", "--region", "Rest=-160,-5,170,15", "--region", "Ring=-180,-5,180,15",
             TWO_STEPS);
    assert_relative(region_value(result_path(), "region_area", "Line"), part[0] + part[1], 1e-12);
    assert_relative(region_value(result_path(), "region_steric_volume_change", "Line"),
                    part[0] * eastward_height(5) + part[1] * eastward_height(6), rounding(1.5e-4));
    for (int v = 0; v < 2; v++) {
        const char *name = v == 0 ? "region_area" : "region_heat_content_change";

        assert_relative(region_value(result_path(), name, "Line") + region_value(result_path(), name, "Rest"),
                        region_value(result_path(), name, "Ring"), 1e-12);
    }
}

static void test_regions_of_a_mask(void **state)
{
    static double flags[REGULAR_ROWS * REGULAR_COLUMNS];
    sea of = uniform_sea(&grids[1], NULL);
    const char *path = write_eastward(), *mask;
    const int values[3] = {0, 1, 4};
    double ring;
    int file, variable;

    (void)state;
    for (size_t n = 0; n < sizeof flags / sizeof flags[0]; n++) {
        size_t j = n / REGULAR_COLUMNS, i = n % REGULAR_COLUMNS;

        flags[n] = j == 9 && i == 2 ? 1 : j == 9 && (i == 3 || i == 11) ? 4 : 0;
    }
    mask = sea_write_plane(&of, "regions.nc", "basin", NC_INT, flags,
                           (const char *const[]){"flag_meanings", "none Ostra_Bight Tarneth_Deep", NULL});
    must(nc_open(mask, NC_WRITE, &file));
    must(nc_redef(file));
    must(nc_inq_varid(file, "basin", &variable));
    must(nc_put_att_int(file, variable, "flag_values", NC_INT, 3, values));
    must(nc_close(file));
    run_well("change", "--earlier", path, "--later", path, "--equation", "linear", "--regions", mask,
             TWO_STEPS);
    ring = ring_area(0.0, 10.0) / REGULAR_COLUMNS; /* row 9, one cell */
    assert_relative(region_value(result_path(), "region_area", "Ostra_Bight"), ring, 1e-12);
    assert_relative(region_value(result_path(), "region_steric_volume_change", "Ostra_Bight"),
                    ring * eastward_height(2), rounding(7.5e-5));
    assert_relative(region_value(result_path(), "region_area", "Tarneth_Deep"), 2.0 * ring, 1e-12);
    assert_relative(region_value(result_path(), "region_mean_steric_height_change", "Tarneth_Deep"),
                    0.5 * (eastward_height(3) + eastward_height(11)), rounding(1e-4));
}

/* ---- results read by another library ---- */

static void assert_python_agrees(const char *path, const char *what)
{
    const char *words[] = {"/usr/bin/python3", TEST_SOURCE_FOLDER "/read_result.py", path, what, NULL};
    run_result got = run_captured(words, NULL, NULL);

    run_expect_code(&got, 0, __FILE__, __LINE__);
    assert_holds(got.output, "checks passed");
    run_free(&got);
}

/* ncdump opens it as well, and shows the heights as floats and the sums as doubles. */
static void assert_dump_shows(const char *path)
{
    const char *words[] = {"/usr/bin/env", "ncdump", "-h", path, NULL};
    run_result got = run_captured(words, NULL, NULL);

    run_expect_code(&got, 0, __FILE__, __LINE__);
    assert_holds(got.output, "float thermosteric_height_change(lat, lon) ;");
    assert_holds(got.output, "double region_heat_content_change(region) ;");
    assert_holds(got.output, "string region_name(region) ;");
    run_free(&got);
}

enum { VARIED_LEVELS = 8 };

/* Curved fields with land, a sea floor and columns that end early. */
static double varied(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    double z = of->depth.centre[k], x = (double)i / REGULAR_COLUMNS, y = (double)j / REGULAR_ROWS;

    if ((i + 2 * j) % 7 == 0 || z > 900.0 * (double)((2 * i + 3 * j) % 6 + 1))
        return (double)NAN;
    if (t == 1 && (i + j) % 9 == 4 && z > 100.0)
        return (double)NAN; /* a survey that stops short in one epoch */
    if (quantity == SEA_TEMPERATURE)
        return 3.0 + 20.0 * exp(-z / 500.0) * sin(3.0 * y + 0.1) + (double)t * exp(-z / 400.0) * cos(3.0 * x);
    return 34.0 + exp(-z / 300.0) * x - (double)t * 0.2 * exp(-z / 500.0) * y;
}

static const char *write_varied(const char *name)
{
    static const double depth[VARIED_LEVELS] = {5, 20, 60, 150, 400, 900, 2000, 4000};
    sea of = uniform_sea(&grids[0], NULL);
    sea_form form = form_plain();

    of.depth = (sea_axis){VARIED_LEVELS, depth, NULL};
    of.value = varied;
    return sea_write(&of, &form, name);
}

static void test_results_read_by_another_library(void **state)
{
    const char *path = write_varied("varied.nc");

    (void)state;
    run_well("change", "--earlier", path, "--later", path, "--layers", "0..300,300..1000,1000..bottom",
             "--attribution", "earlier", "--fill-coverage", TWO_STEPS);
    assert_python_agrees(result_path(), "salinity,remainder,filled,dated");
    assert_dump_shows(result_path());
    run_well("change", "--earlier", path, "--later", path, "--layers", "0..300", "--attribution", "linear",
             TWO_STEPS);
    assert_python_agrees(result_path(), "salinity,remainder,dated");
    run_well("change", "--earlier", path, "--later", path, TWO_STEPS);
    assert_python_agrees(result_path(), "salinity,dated");
    run_well("change", "--earlier", path, "--later", path, "--constant-salinity", "35", TWO_STEPS);
    assert_python_agrees(result_path(), "dated");
    run_well("scenario", "--field", path, "--field-step", "1", "--warming", "0.3", "--freshening", "0.1",
             "--layers", "0..300,300..bottom", "--replace", "--output", result_path());
    assert_python_agrees(result_path(), "salinity,dated");
}

/* Other laws go the same way: each result keeps its own rules. */
static void test_every_equation_keeps_the_rules(void **state)
{
    static const char *const laws[] = {"gibbs", "eos80", "linear"};
    const char *path = write_varied("varied_laws.nc");

    (void)state;
    for (size_t e = 0; e < sizeof laws / sizeof laws[0]; e++) {
        run_well("change", "--earlier", path, "--later", path, "--equation", laws[e], "--layers",
                 "0..300,300..bottom", TWO_STEPS);
        assert_python_agrees(result_path(), "salinity,dated");
    }
}

static int begin(void **state)
{
    (void)state;
    fill_regular_axes();
    work_in("science");
    return 0;
}

static int end(void **state)
{
    (void)state;
    forget_said();
    return 0;
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_uniform_warming_and_salting),
        cmocka_unit_test(test_coefficients_and_reference_density),
        cmocka_unit_test(test_levels_of_pressure),
        cmocka_unit_test(test_ocean_of_the_envelope),
        cmocka_unit_test(test_box_across_the_date_line),
        cmocka_unit_test(test_regions_of_a_mask),
        cmocka_unit_test(test_results_read_by_another_library),
        cmocka_unit_test(test_every_equation_keeps_the_rules),
    };

    return cmocka_run_group_tests(tests, begin, end);
}
