/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "support/testing.h"

#include "regrid/field.h"

#include <stdlib.h>
#include <string.h>

static const double earth_radius = 6371007.181; /* m; the sphere that the header names */
static const double radians = 0.017453292519943295;

/* xorshift64*, G. Marsaglia 2003 and S. Vigna 2016 (from memory); only has to be the same everywhere. */
static double draw(uint64_t *state)
{
    *state ^= *state >> 12;
    *state ^= *state << 25;
    *state ^= *state >> 27;
    return (double)((*state * UINT64_C(2685821657736338717)) >> 11) / 9007199254740992.0;
}

static stericol_regrid_field *make(const stericol_regrid_source *source)
{
    stericol_regrid_field *field = NULL;
    stericol_context *context = stericol_context_new();

    if (stericol_regrid_field_new(context, source, &field) != STERICOL_OK) {
        print_error("%s\n", stericol_context_message(context));
        fail();
    }
    stericol_context_free(context);
    assert_non_null(field);
    return field;
}

static double ask(const stericol_regrid_field *field, double depth, double latitude, double longitude)
{
    double out = -1e30;

    stericol_regrid_level(field, depth, 1, &latitude, &longitude, &out);
    return out;
}

enum { LEVELS = 3, ROWS = 6, COLUMNS = 8 };
static const double depths[LEVELS] = {5, 20, 100};
static const double latitudes[ROWS] = {-30, -20, -15, 0, 10, 40};
static const double longitudes[COLUMNS] = {150, 155, 160, 170, 180, 190, 200, 210};

/* Every value is a multiple of 1/8 below 2^20: exact as float. */
static double plane(double depth, double latitude, double longitude)
{
    return 7.0 + 0.5 * longitude - 0.25 * latitude + 0.125 * depth;
}

static void fill_plane(float *values, bool reversed_rows, bool reversed_columns)
{
    for (size_t k = 0; k < LEVELS; k++)
        for (size_t j = 0; j < ROWS; j++)
            for (size_t i = 0; i < COLUMNS; i++)
                values[(k * ROWS + j) * COLUMNS + i] =
                    (float)plane(depths[k], latitudes[reversed_rows ? ROWS - 1 - j : j],
                                 longitudes[reversed_columns ? COLUMNS - 1 - i : i]);
}

/* A function linear in all three coordinates is its own interpolation; any order, any branch of either side.
 */
static void a_linear_function_is_reproduced(void **state)
{
    const uint64_t seed = 20240612;
    uint64_t random = seed;

    (void)state;
    for (int variant = 0; variant < 8; variant++) {
        const bool down = variant & 1, back = variant & 2, other_branch = variant & 4;
        float values[LEVELS * ROWS * COLUMNS];
        double latitude[ROWS], longitude[COLUMNS];
        const stericol_regrid_source source = {NULL,   NULL,     LEVELS,    ROWS,   COLUMNS,
                                               depths, latitude, longitude, values, 0.0};

        fill_plane(values, down, back);
        for (size_t j = 0; j < ROWS; j++)
            latitude[j] = latitudes[down ? ROWS - 1 - j : j];
        for (size_t i = 0; i < COLUMNS; i++) {
            longitude[i] = longitudes[back ? COLUMNS - 1 - i : i];
            if (other_branch && longitude[i] >= 180)
                longitude[i] -= 360; /* passes the date line: 170, -180, -170 */
        }
        stericol_regrid_field *field = make(&source);

        for (int n = 0; n < 2000; n++) {
            const double depth = 5 + 95 * draw(&random), lat = -30 + 70 * draw(&random),
                         lon = 150 + 60 * draw(&random);
            const double expected = plane(depth, lat, lon), branch = 360.0 * (n % 5 - 2);

            /* Values of about 100; adding 720 to a longitude costs 1e-13 of it. */
            if (!(fabs(ask(field, depth, lat, lon + branch) - expected) <= 1e-12 * expected))
                print_error("seed %llu, variant %d, point %d\n", (unsigned long long)seed, variant, n);
            assert_relative(ask(field, depth, lat, lon + branch), expected, 1e-12);
        }
        /* The samples themselves, corners too, come back exactly. */
        for (size_t k = 0; k < LEVELS; k++)
            for (size_t j = 0; j < ROWS; j++)
                for (size_t i = 0; i < COLUMNS; i++)
                    assert_same_number(ask(field, depths[k], latitudes[j], longitudes[i]),
                                       plane(depths[k], latitudes[j], longitudes[i]));
        /* Constant above the first level and below the last. */
        assert_same_number(ask(field, -3, 0, 170), plane(5, 0, 170));
        assert_same_number(ask(field, 6000, 0, 170), plane(100, 0, 170));
        /* Beyond the outermost centres nothing is within a reach of 0. */
        assert_nan(ask(field, 5, 0, 149.9));
        assert_nan(ask(field, 5, 0, 210.1));
        assert_nan(ask(field, 5, -30.1, 170));
        assert_nan(ask(field, 5, 90, 170));
        stericol_regrid_field_free(field);
    }
}

static void questions_without_sense_give_nan(void **state)
{
    float values[LEVELS * ROWS * COLUMNS];
    const stericol_regrid_source source = {NULL,   NULL,      LEVELS,     ROWS,   COLUMNS,
                                           depths, latitudes, longitudes, values, INFINITY};

    (void)state;
    fill_plane(values, false, false);
    stericol_regrid_field *field = make(&source);

    assert_nan(ask(field, NAN, 0, 170));
    assert_nan(ask(field, INFINITY, 0, 170));
    assert_nan(ask(field, 5, NAN, 170));
    assert_nan(ask(field, 5, 90.001, 170));
    assert_nan(ask(field, 5, 0, NAN));
    assert_nan(ask(field, 5, 0, INFINITY));
    assert_true(!isnan(ask(field, 5, -90, -10)));
    assert_true(!isnan(ask(field, 5, 0, 1e15)));
    stericol_regrid_level(field, 5, 0, NULL, NULL, NULL);
    stericol_regrid_field_free(field);
}

/* The circle in four columns: between the last and the first one the field goes on. */
static void a_grid_round_the_globe_has_no_seam(void **state)
{
    static const double depth[1] = {0}, latitude[2] = {-10, 10};
    static const struct {
        size_t columns;
        double longitude[6];
        float values[6];
    } grids[] = {
        {4, {0, 90, 180, 270}, {1, 2, 4, 8}},
        {4, {-180, -90, 0, 90}, {4, 8, 1, 2}},
        {5, {0, 90, 180, 270, 360}, {1, 2, 4, 8, 99}},            /* the repeated column is left out */
        {6, {-270, -180, -90, 0, 90, 180}, {2, 4, 8, 1, 99, 99}}, /* two of them */
        {4, {90, 180, -90, 0}, {2, 4, 8, 1}},
        {4, {270, 180, 90, 0}, {8, 4, 2, 1}},
        {4, {0, 90, (double)179.99998f, 270}, {1, 2, 4, 8}}, /* stored as float */
    };

    (void)state;
    for (size_t g = 0; g < sizeof grids / sizeof *grids; g++) {
        float values[12];
        const size_t columns = grids[g].columns;
        const stericol_regrid_source source = {
            NULL, NULL, 1, 2, columns, depth, latitude, grids[g].longitude, values, 0.0};

        for (size_t i = 0; i < columns; i++)
            values[i] = values[columns + i] = grids[g].values[i];
        stericol_regrid_field *field = make(&source);

        for (int turn = -2; turn <= 2; turn++) {
            /* Half-way values by hand; 1e-6 for the column that float moved by 2e-5 degrees. */
            assert_close(ask(field, 0, 3, 45 + 360.0 * turn), 1.5, 1e-6);
            assert_close(ask(field, 0, 3, 135 + 360.0 * turn), 3.0, 1e-6);
            assert_close(ask(field, 0, 3, 225 + 360.0 * turn), 6.0, 1e-6);
            assert_close(ask(field, 0, 3, 315 + 360.0 * turn), 4.5, 1e-6);
            assert_close(ask(field, 0, 3, 360.0 * turn), 1.0, 1e-12);
        }
        stericol_regrid_field_free(field);
    }
}

/* A gap wider than the widest spacing stays open. */
static void a_part_of_the_globe_is_not_closed(void **state)
{
    static const double depth[1] = {0}, latitude[2] = {-10, 10}, longitude[3] = {0, 90, 180};
    static const float values[6] = {1, 2, 4, 1, 2, 4};
    const stericol_regrid_source source = {NULL, NULL, 1, 2, 3, depth, latitude, longitude, values, 0.0};
    stericol_regrid_field *field = make(&source);

    (void)state;
    assert_nan(ask(field, 0, 3, 270));
    assert_nan(ask(field, 0, 3, -1));
    assert_same_number(ask(field, 0, 3, 180), 4);
    stericol_regrid_field_free(field);
}

/* By hand: four corners of 1, 2, 3, 4 (south-west, south-east, north-west, north-east), the point at a
 * quarter east, half north. */
static void dry_corners_give_their_weight_away(void **state)
{
    static const double depth[1] = {0}, latitude[2] = {0, 1}, longitude[2] = {0, 1};
    static const struct {
        float values[4];
        double expected;
    } rows[] = {
        {{1, 2, 3, 4}, 0.375 * 1 + 0.125 * 2 + 0.375 * 3 + 0.125 * 4},
        {{1, 2, 3, NAN}, (0.375 * 1 + 0.125 * 2 + 0.375 * 3) / 0.875},
        {{NAN, 2, NAN, 4}, 3},
        {{NAN, 2, NAN, NAN}, 2},
        {{INFINITY, 2, -INFINITY, 4}, 3}, /* what is not finite is dry */
        {{NAN, NAN, NAN, NAN}, NAN},
    };

    (void)state;
    for (size_t r = 0; r < sizeof rows / sizeof *rows; r++) {
        const stericol_regrid_source source = {NULL,      NULL,           1,  2, 2, depth, latitude,
                                               longitude, rows[r].values, 1e6};
        stericol_regrid_field *field = make(&source);

        if (isnan(rows[r].expected))
            assert_nan(ask(field, 0, 0.5, 0.25));
        else
            assert_relative(ask(field, 0, 0.5, 0.25), rows[r].expected, 1e-15);
        stericol_regrid_field_free(field);
    }
    {
        /* On a dry centre no neighbour has a weight: the nearest one is taken, 111 km to the north or east.
         */
        static const float values[4] = {NAN, NAN, NAN, 4};
        stericol_regrid_source source = {NULL, NULL, 1, 2, 2, depth, latitude, longitude, values, 160e3};
        stericol_regrid_field *field = make(&source);

        assert_same_number(ask(field, 0, 0, 0), 4); /* 157 km away: sqrt(2) of 111.2 km */
        stericol_regrid_field_free(field);
        source.reach = 150e3;
        field = make(&source);
        assert_nan(ask(field, 0, 0, 0));
        stericol_regrid_field_free(field);
    }
}

static void levels_are_joined(void **state)
{
    static const double depth[3] = {0, 10, 30}, latitude[1] = {0}, longitude[3] = {0, 1, 40};
    /* At 0E wet at the surface only; at 1E wet on two levels; at 40E, 4400 km off, wet on the first. */
    static const float values[9] = {1, 2, 3, NAN, 12, NAN, NAN, NAN, NAN};
    const stericol_regrid_source source = {NULL,  NULL,     3,         1,      3,
                                           depth, latitude, longitude, values, STERICOL_REGRID_DEFAULT_REACH};
    stericol_regrid_field *field = make(&source);

    (void)state;
    assert_relative(ask(field, 5, 0, 1), 7, 1e-15);
    assert_relative(ask(field, 5, 0, 0), 6.5, 1e-15); /* half of 1 and half of the 12 next door */
    assert_relative(ask(field, 10, 0, 0), 12, 1e-15); /* a level itself needs no other */
    assert_relative(ask(field, 20, 0, 1), 12, 1e-15); /* nothing on the last level: the one above */
    assert_nan(ask(field, 30, 0, 1));
    assert_nan(ask(field, 500, 0, 1));
    assert_relative(ask(field, 5, 0, 40), 3, 1e-15); /* nothing within reach on the second level */
    assert_nan(ask(field, 10, 0, 40));
    assert_relative(ask(field, 0, 0, 0.5), 1.5, 1e-15);
    assert_relative(ask(field, 0, 1, 1), 2, 1e-15); /* beyond the only row */
    stericol_regrid_field_free(field);
}

/* Angle between two directions from their vectors, another formula than that under test. */
static double distance(double lat1, double lon1, double lat2, double lon2)
{
    const double a[3] = {cos(lat1 * radians) * cos(lon1 * radians), cos(lat1 * radians) * sin(lon1 * radians),
                         sin(lat1 * radians)};
    const double b[3] = {cos(lat2 * radians) * cos(lon2 * radians), cos(lat2 * radians) * sin(lon2 * radians),
                         sin(lat2 * radians)};
    const double c[3] = {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]};

    return earth_radius *
           atan2(sqrt(c[0] * c[0] + c[1] * c[1] + c[2] * c[2]), a[0] * b[0] + a[1] * b[1] + a[2] * b[2]);
}

/* One random field whose values are the cells' own numbers, held against a look at every cell. */
static void check_against_every_cell(uint64_t seed)
{
    enum { MOST = 40 * 150 };
    uint64_t random = seed;
    const size_t rows = 2 + (size_t)(draw(&random) * 38), columns = 3 + (size_t)(draw(&random) * 147);
    const bool cyclic = draw(&random) < 0.5;
    const double share = draw(&random) < 0.3 ? 0.0005 : 0.05 * draw(&random),
                 reach = draw(&random) < 0.3 ? 3e7 : 3e6 * draw(&random);
    const double first = -720 + 1440 * draw(&random),
                 spacing = (cyclic ? 360.0 : 100 + 200 * draw(&random)) / (double)columns;
    static double latitude[40], longitude[150];
    static float values[MOST];
    static const double depth[1] = {0};
    const stericol_regrid_source source = {NULL,  NULL,     1,         rows,   columns,
                                           depth, latitude, longitude, values, reach};

    for (size_t j = 0; j < rows; j++)
        latitude[j] = -90 + 180 * ((double)j + 0.5) / (double)rows;
    for (size_t i = 0; i < columns; i++)
        longitude[i] = remainder(first + spacing * (double)i, 360.0);
    for (size_t c = 0; c < rows * columns; c++)
        values[c] = draw(&random) < share ? (float)c : (float)NAN;
    stericol_regrid_field *field = make(&source);

    for (int n = 0; n < 300; n++) {
        const double lat = n == 0   ? 90
                           : n == 1 ? -90
                                    : -90 + 180 * draw(&random),
                     lon = -500 + 1000 * draw(&random);
        const double found = ask(field, 0, lat, lon);
        double best = INFINITY;
        bool corner_wet = false;

        for (size_t c = 0; c < rows * columns; c++) {
            const double dlat = fabs(lat - latitude[c / columns]),
                         dlon = fabs(remainder(lon - longitude[c % columns], 360));

            if (isnan(values[c]))
                continue;
            best = fmin(best, distance(lat, lon, latitude[c / columns], longitude[c % columns]));
            corner_wet = corner_wet || (dlat < 180.0 / (double)rows && dlon < spacing);
        }
        const bool in_rows = fabs(lat) <= latitude[rows - 1];
        const double east = remainder(lon - longitude[0], 360) < 0 ? remainder(lon - longitude[0], 360) + 360
                                                                   : remainder(lon - longitude[0], 360);

        /* Surrounded by centres, and one of the four is wet: its bilinear rule has a test of its own. */
        if (corner_wet && in_rows && (cyclic || east <= spacing * (double)(columns - 1))) {
            assert_true(!isnan(found));
            continue;
        }
        if (best > reach * (1 + 1e-9)) {
            if (!isnan(found))
                print_error("seed %llu, point %d\n", (unsigned long long)seed, n);
            assert_nan(found);
            continue;
        }
        if (best > reach * (1 - 1e-9))
            continue; /* on the edge of the reach rounding decides */
        if (isnan(found))
            print_error("seed %llu, point %d\n", (unsigned long long)seed, n);
        assert_true(!isnan(found));
        const size_t c = (size_t)found;

        /* The same distance, not the same cell: two may be as near.  1e-9 of the globe's radius: rounding of
         * the vectors. */
        if (!(distance(lat, lon, latitude[c / columns], longitude[c % columns]) <= best + 0.01))
            print_error("seed %llu, point %d\n", (unsigned long long)seed, n);
        assert_close(distance(lat, lon, latitude[c / columns], longitude[c % columns]), best, 0.01);
    }
    stericol_regrid_field_free(field);
}

static void the_nearest_wet_cell_is_found(void **state)
{
    (void)state;
    for (uint64_t seed = 1; seed <= 150; seed++)
        check_against_every_cell(seed * UINT64_C(0x9E3779B97F4A7C15));
}

/* The one wet cell is on the other side of the globe. */
static void a_reach_round_the_globe_reaches_the_antipode(void **state)
{
    static const double depth[1] = {0}, latitude[2] = {-20, 10}, longitude[4] = {0, 90, 180, 270};
    static const float values[8] = {NAN, NAN, NAN, NAN, NAN, NAN, 5, NAN};
    const stericol_regrid_source source = {NULL, NULL, 1, 2, 4, depth, latitude, longitude, values, 2.01e7};
    stericol_regrid_field *field = make(&source);

    (void)state;
    for (int n = -100; n <= 100; n++)
        assert_same_number(ask(field, 0, -10 + 1e-9 * n, 1e-9 * n), 5);
    stericol_regrid_field_free(field);
}

/* At a pole every cell of the last row is as near; over it a cell of the other side may be nearest. */
static void poles_are_crossed(void **state)
{
    static const double depth[1] = {0}, latitude[3] = {70, 80, 88}, longitude[4] = {0, 90, 180, 270};
    static const float values[12] = {1, 1, 1, 1, 1, 1, 1, 1, NAN, NAN, 5, NAN};
    const stericol_regrid_source source = {NULL,  NULL,     1,         3,      4,
                                           depth, latitude, longitude, values, STERICOL_REGRID_DEFAULT_REACH};
    stericol_regrid_field *field = make(&source);

    (void)state;
    assert_same_number(ask(field, 0, 90, 0), 5);
    assert_same_number(ask(field, 0, 89, 0), 5); /* 3 degrees over the pole, 9 to the south */
    assert_same_number(ask(field, 0, 89, 12.5), 5);
    stericol_regrid_field_free(field);
    {
        static const double to_pole[2] = {80, 90};
        static const float pole_values[8] = {1, 1, 1, 1, 3, 3, 3, 3};
        const stericol_regrid_source with_pole = {NULL,  NULL,    1,         2,           4,
                                                  depth, to_pole, longitude, pole_values, 0.0};

        field = make(&with_pole);
        assert_relative(ask(field, 0, 90, 217), 3, 1e-15);
        assert_relative(ask(field, 0, 85, 217), 2, 1e-15);
        stericol_regrid_field_free(field);
    }
}

static void the_source_is_copied(void **state)
{
    static const double depth[1] = {0};
    double latitude[2] = {0, 1}, longitude[2] = {0, 1};
    float values[4] = {1, 1, 1, 1};
    const stericol_regrid_source source = {NULL, NULL, 1, 2, 2, depth, latitude, longitude, values, 0.0};
    stericol_regrid_field *field = make(&source);

    (void)state;
    memset(latitude, 0, sizeof latitude);
    memset(longitude, 0, sizeof longitude);
    memset(values, 0, sizeof values);
    assert_same_number(ask(field, 0, 0.5, 0.5), 1);
    stericol_regrid_field_free(field);
    stericol_regrid_field_free(NULL);
}

static void grids_that_are_none_are_refused(void **state)
{
    static const double good[3] = {0, 1, 2}, equal[3] = {0, 1, 1}, zigzag[3] = {0, 2, 1},
                        hole[3] = {0, NAN, 2}, beyond[3] = {88, 90, 92}, round[3] = {0, 120, 60},
                        falling[3] = {2, 1, 0};
    static const float values[27] = {0};
    static const struct {
        stericol_regrid_source source;
        const char *message;
    } rows[] = {
        {{"b.nc", "salt", 0, 3, 3, good, good, good, values, 0},
         "b.nc: salt: the grid is empty; give a field"},
        {{"b.nc", "salt", 3, 0, 3, good, good, good, values, 0}, "the grid is empty"},
        {{"b.nc", "salt", 3, 3, 0, good, good, good, values, 0}, "the grid is empty"},
        {{"b.nc", "salt", 3, 3, 3, equal, good, good, values, 0}, "the levels do not run downward"},
        {{"b.nc", "salt", 3, 3, 3, falling, good, good, values, 0}, "the levels do not run downward"},
        {{"b.nc", "salt", 3, 3, 3, hole, good, good, values, 0}, "the levels do not run downward"},
        {{"b.nc", "salt", 3, 3, 3, good, equal, good, values, 0}, "the latitudes neither rise nor fall"},
        {{"b.nc", "salt", 3, 3, 3, good, zigzag, good, values, 0}, "the latitudes neither rise nor fall"},
        {{"b.nc", "salt", 3, 3, 3, good, hole, good, values, 0}, "a latitude lies outside"},
        {{"b.nc", "salt", 3, 3, 3, good, beyond, good, values, 0}, "a latitude lies outside"},
        {{"b.nc", "salt", 3, 3, 3, good, good, equal, values, 0}, "the longitudes neither rise nor fall"},
        {{"b.nc", "salt", 3, 3, 3, good, good, round, values, 0}, "the longitudes neither rise nor fall"},
        {{"b.nc", "salt", 3, 3, 3, good, good, hole, values, 0}, "a longitude is missing"},
    };

    (void)state;
    for (size_t r = 0; r < sizeof rows / sizeof *rows; r++) {
        stericol_context *context = stericol_context_new();
        stericol_regrid_field *field = (stericol_regrid_field *)context;

        assert_int_equal(stericol_regrid_field_new(context, &rows[r].source, &field), STERICOL_INPUT);
        assert_null(field);
        if (!strstr(stericol_context_message(context), rows[r].message))
            print_error("row %zu: %s\n", r, stericol_context_message(context));
        assert_non_null(strstr(stericol_context_message(context), rows[r].message));
        stericol_context_free(context);
    }
}

/* 2^17 cubed floats are 2^53 bytes, more than any machine gives; 2^22 * 2^22 * 2^20 does not fit 64 bits. */
static void sizes_beyond_memory_are_refused(void **state)
{
    static const struct {
        size_t levels, rows, columns;
    } sizes[] = {{(size_t)1 << 17, (size_t)1 << 17, (size_t)1 << 17},
                 {(size_t)1 << 22, (size_t)1 << 22, (size_t)1 << 20}};
    const size_t most = (size_t)1 << 22;
    double *rising = malloc(most * sizeof *rising);

    (void)state;
    assert_non_null(rising);
    for (size_t i = 0; i < most; i++)
        rising[i] = 80.0 * (double)i / (double)most;
    for (size_t s = 0; s < sizeof sizes / sizeof *sizes; s++) {
        static const float none[1] = {0};
        const stericol_regrid_source source = {
            NULL, NULL, sizes[s].levels, sizes[s].rows, sizes[s].columns, rising, rising, rising, none, 0.0};
        stericol_context *context = stericol_context_new();
        stericol_regrid_field *field = NULL;

        assert_int_equal(stericol_regrid_field_new(context, &source, &field), STERICOL_MEMORY);
        assert_null(field);
        assert_non_null(strstr(stericol_context_message(context), "the background field"));
        stericol_context_free(context);
    }
    free(rising);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(a_linear_function_is_reproduced),
        cmocka_unit_test(questions_without_sense_give_nan),
        cmocka_unit_test(a_grid_round_the_globe_has_no_seam),
        cmocka_unit_test(a_part_of_the_globe_is_not_closed),
        cmocka_unit_test(dry_corners_give_their_weight_away),
        cmocka_unit_test(levels_are_joined),
        cmocka_unit_test(the_nearest_wet_cell_is_found),
        cmocka_unit_test(a_reach_round_the_globe_reaches_the_antipode),
        cmocka_unit_test(poles_are_crossed),
        cmocka_unit_test(the_source_is_copied),
        cmocka_unit_test(grids_that_are_none_are_refused),
        cmocka_unit_test(sizes_beyond_memory_are_refused),
    };

    return cmocka_run_group_tests_name("regrid", tests, NULL, NULL);
}
