/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The world's oceans: which one a place belongs to, and that they fill the sphere. */
#include "region/grids.h"

/*
 * Places and their oceans: common geographic knowledge, no source; limits between oceans after IHO S-23 as
 * stericol_ocean_at() states them.
 */
static const struct {
    const char *place;
    double latitude, longitude;
    stericol_ocean ocean;
} places[] = {
    {"off Acapulco", 16.5, -100.0, STERICOL_OCEAN_PACIFIC},
    {"off Veracruz", 19.3, -95.8, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of Tehuantepec", 15.8, -95.0, STERICOL_OCEAN_PACIFIC},
    {"Bay of Campeche", 18.7, -94.0, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of California, head", 31.2, -114.4, STERICOL_OCEAN_PACIFIC},
    {"Gulf of Honduras", 16.2, -88.3, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of Fonseca", 13.2, -87.7, STERICOL_OCEAN_PACIFIC},
    {"off Bluefields", 12.0, -83.4, STERICOL_OCEAN_ATLANTIC},
    {"off Puntarenas", 9.8, -84.9, STERICOL_OCEAN_PACIFIC},
    {"off Limon", 10.1, -82.9, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of Panama", 8.6, -79.3, STERICOL_OCEAN_PACIFIC},
    {"off Colon", 9.5, -79.9, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of San Miguel", 8.3, -78.2, STERICOL_OCEAN_PACIFIC},
    {"Gulf of Uraba", 8.4, -76.9, STERICOL_OCEAN_ATLANTIC},
    {"off Buenaventura", 3.8, -77.4, STERICOL_OCEAN_PACIFIC},
    {"off Cartagena", 10.5, -75.7, STERICOL_OCEAN_ATLANTIC},
    {"off Valparaiso", -33.0, -71.9, STERICOL_OCEAN_PACIFIC},
    {"Gulf of Corcovado", -43.0, -72.9, STERICOL_OCEAN_PACIFIC},
    {"Golfo San Jorge", -46.0, -66.8, STERICOL_OCEAN_ATLANTIC},
    {"Bahia Grande", -51.0, -68.5, STERICOL_OCEAN_ATLANTIC},
    {"Drake Passage, west of Cape Horn", -57.0, -69.0, STERICOL_OCEAN_PACIFIC},
    {"Drake Passage, east of Cape Horn", -57.0, -65.0, STERICOL_OCEAN_ATLANTIC},
    {"Caribbean Sea", 15.0, -72.0, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of Mexico", 26.0, -92.0, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of St Lawrence", 48.0, -62.0, STERICOL_OCEAN_ATLANTIC},
    {"estuary of the St Lawrence", 48.7, -68.5, STERICOL_OCEAN_ATLANTIC},
    {"Long Island Sound", 41.1, -72.8, STERICOL_OCEAN_ATLANTIC},
    {"Puget Sound", 47.6, -122.4, STERICOL_OCEAN_PACIFIC},
    {"Gulf of Alaska", 58.0, -148.0, STERICOL_OCEAN_PACIFIC},
    {"Lynn Canal", 59.0, -135.2, STERICOL_OCEAN_PACIFIC},
    {"Norton Sound", 64.0, -163.0, STERICOL_OCEAN_PACIFIC},
    {"Kotzebue Sound", 66.5, -163.0, STERICOL_OCEAN_ARCTIC},
    {"Bering Strait, south", 65.0, -169.0, STERICOL_OCEAN_PACIFIC},
    {"Bering Strait, north", 66.5, -169.0, STERICOL_OCEAN_ARCTIC},
    {"Gulf of Anadyr", 64.5, 179.0, STERICOL_OCEAN_PACIFIC},
    {"Chukchi Sea at the date line", 69.0, 180.0, STERICOL_OCEAN_ARCTIC},
    {"Beaufort Sea", 71.0, -140.0, STERICOL_OCEAN_ARCTIC},
    {"Coronation Gulf", 68.0, -112.0, STERICOL_OCEAN_ARCTIC},
    {"Hudson Bay", 59.0, -85.0, STERICOL_OCEAN_ARCTIC},
    {"James Bay", 52.0, -80.3, STERICOL_OCEAN_ARCTIC},
    {"Ungava Bay", 59.5, -67.0, STERICOL_OCEAN_ARCTIC},
    {"Baffin Bay", 73.0, -65.0, STERICOL_OCEAN_ARCTIC},
    {"Labrador Sea", 57.0, -55.0, STERICOL_OCEAN_ATLANTIC},
    {"Irminger Sea", 62.0, -35.0, STERICOL_OCEAN_ATLANTIC},
    {"Faxa Bay", 64.4, -22.5, STERICOL_OCEAN_ATLANTIC},
    {"Hunafloi, Iceland", 65.8, -20.8, STERICOL_OCEAN_ARCTIC},
    {"Isafjardardjup, Iceland", 66.05, -22.8, STERICOL_OCEAN_ATLANTIC},
    {"Kolyuchin Bay", 66.8, -174.5, STERICOL_OCEAN_ARCTIC},
    {"Mechigmen Bay", 65.5, -172.2, STERICOL_OCEAN_PACIFIC},
    {"Kresta Bay", 66.0, -179.2, STERICOL_OCEAN_PACIFIC},
    {"Greenland Sea", 75.0, -5.0, STERICOL_OCEAN_ARCTIC},
    {"Norwegian Sea", 66.0, 2.0, STERICOL_OCEAN_ARCTIC},
    {"Trondheimsfjord", 63.5, 10.0, STERICOL_OCEAN_ARCTIC},
    {"White Sea", 65.5, 38.0, STERICOL_OCEAN_ARCTIC},
    {"Kara Sea", 75.0, 70.0, STERICOL_OCEAN_ARCTIC},
    {"the North Pole", 90.0, 0.0, STERICOL_OCEAN_ARCTIC},
    {"North Sea", 56.0, 3.0, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of Bothnia, north", 65.3, 23.5, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of Finland", 60.0, 28.0, STERICOL_OCEAN_ATLANTIC},
    {"Black Sea, east", 42.0, 41.0, STERICOL_OCEAN_ATLANTIC},
    {"Sea of Azov", 46.0, 37.0, STERICOL_OCEAN_ATLANTIC},
    {"Levantine Sea", 33.0, 34.5, STERICOL_OCEAN_ATLANTIC},
    {"off Port Said", 31.6, 32.4, STERICOL_OCEAN_ATLANTIC},
    {"Gulf of Suez", 29.3, 32.7, STERICOL_OCEAN_INDIAN},
    {"Gulf of Aqaba", 29.0, 34.75, STERICOL_OCEAN_INDIAN},
    {"Red Sea, north", 26.5, 34.8, STERICOL_OCEAN_INDIAN},
    {"Red Sea, off Suakin", 19.0, 37.8, STERICOL_OCEAN_INDIAN},
    {"Persian Gulf, head", 29.5, 49.0, STERICOL_OCEAN_INDIAN},
    {"Caspian Sea, south", 38.0, 51.0, STERICOL_OCEAN_NONE},
    {"Caspian Sea, north", 45.5, 49.5, STERICOL_OCEAN_NONE},
    {"Aral Sea", 45.0, 59.5, STERICOL_OCEAN_NONE},
    {"Lake Superior", 47.5, -88.0, STERICOL_OCEAN_NONE},
    {"Lake Ontario", 43.6, -78.0, STERICOL_OCEAN_NONE},
    {"Lake Victoria", -1.0, 33.0, STERICOL_OCEAN_NONE},
    {"Gulf of Guinea", 3.0, 5.0, STERICOL_OCEAN_ATLANTIC},
    {"west of Cape Agulhas", -35.5, 19.5, STERICOL_OCEAN_ATLANTIC},
    {"east of Cape Agulhas", -35.5, 20.5, STERICOL_OCEAN_INDIAN},
    {"Mozambique Channel", -18.0, 40.0, STERICOL_OCEAN_INDIAN},
    {"Arabian Sea", 15.0, 65.0, STERICOL_OCEAN_INDIAN},
    {"Gulf of Kutch", 22.7, 69.5, STERICOL_OCEAN_INDIAN},
    {"Bay of Bengal", 15.0, 88.0, STERICOL_OCEAN_INDIAN},
    {"Gulf of Martaban", 16.0, 96.5, STERICOL_OCEAN_INDIAN},
    {"Andaman Sea off Phuket", 8.0, 98.0, STERICOL_OCEAN_INDIAN},
    {"Strait of Malacca", 4.0, 99.8, STERICOL_OCEAN_INDIAN},
    {"Strait of Malacca, narrows", 2.2, 101.9, STERICOL_OCEAN_INDIAN},
    {"off Singapore, east", 1.3, 104.4, STERICOL_OCEAN_PACIFIC},
    {"Gulf of Thailand", 10.0, 101.0, STERICOL_OCEAN_PACIFIC},
    {"Bight of Bangkok", 13.0, 100.4, STERICOL_OCEAN_PACIFIC},
    {"South China Sea", 14.0, 115.0, STERICOL_OCEAN_PACIFIC},
    {"Karimata Strait", -2.0, 108.8, STERICOL_OCEAN_PACIFIC},
    {"Java Sea", -5.0, 110.0, STERICOL_OCEAN_PACIFIC},
    {"off Jakarta", -5.7, 106.8, STERICOL_OCEAN_PACIFIC},
    {"off Cilacap, south of Java", -8.3, 109.0, STERICOL_OCEAN_INDIAN},
    {"off Padang", -1.2, 100.0, STERICOL_OCEAN_INDIAN},
    {"Flores Sea", -7.7, 120.0, STERICOL_OCEAN_PACIFIC},
    {"Banda Sea", -5.5, 127.0, STERICOL_OCEAN_PACIFIC},
    {"Timor Sea", -11.0, 127.0, STERICOL_OCEAN_INDIAN},
    {"Arafura Sea", -9.5, 135.0, STERICOL_OCEAN_PACIFIC},
    {"Gulf of Carpentaria", -14.0, 139.0, STERICOL_OCEAN_PACIFIC},
    {"Torres Strait", -10.0, 142.5, STERICOL_OCEAN_PACIFIC},
    {"off Broome", -18.0, 121.5, STERICOL_OCEAN_INDIAN},
    {"Great Australian Bight", -34.0, 130.0, STERICOL_OCEAN_INDIAN},
    {"Spencer Gulf", -33.5, 137.5, STERICOL_OCEAN_INDIAN},
    {"west of Tasmania", -43.0, 144.5, STERICOL_OCEAN_INDIAN},
    {"east of Tasmania", -43.0, 149.0, STERICOL_OCEAN_PACIFIC},
    {"off Sydney", -34.0, 152.0, STERICOL_OCEAN_PACIFIC},
    {"Coral Sea", -15.0, 150.0, STERICOL_OCEAN_PACIFIC},
    {"Sea of Japan", 40.0, 135.0, STERICOL_OCEAN_PACIFIC},
    {"Sea of Okhotsk", 55.0, 150.0, STERICOL_OCEAN_PACIFIC},
    {"Gulf of Shelikhov", 60.5, 158.0, STERICOL_OCEAN_PACIFIC},
    {"Bohai Sea", 38.8, 119.5, STERICOL_OCEAN_PACIFIC},
    {"mid Pacific at the date line", 0.0, 180.0, STERICOL_OCEAN_PACIFIC},
    {"Weddell Sea", -70.0, -45.0, STERICOL_OCEAN_SOUTHERN},
    {"Ross Sea at the date line", -75.0, -180.0, STERICOL_OCEAN_SOUTHERN},
    {"north of 60 S", -59.9, 100.0, STERICOL_OCEAN_INDIAN},
    {"south of 60 S", -60.1, 100.0, STERICOL_OCEAN_SOUTHERN},
    {"a latitude that is missing", (double)NAN, 0.0, STERICOL_OCEAN_NONE},
    {"a longitude that is missing", 0.0, (double)NAN, STERICOL_OCEAN_NONE},
};

static void places_fall_into_their_ocean(void **state)
{
    static const double turns[] = {0.0, 360.0, -360.0, 720.0};
    size_t wrong = 0;

    (void)state;
    for (size_t i = 0; i < sizeof places / sizeof places[0]; i++)
        for (size_t k = 0; k < sizeof turns / sizeof turns[0]; k++) {
            stericol_ocean ocean = stericol_ocean_at(places[i].latitude, places[i].longitude + turns[k]);

            if (ocean != places[i].ocean) {
                print_error("%s (turned by %g) lies in ocean %d, not %d\n", places[i].place, turns[k],
                            (int)ocean, (int)places[i].ocean);
                wrong++;
            }
        }
    assert_int_equal(wrong, 0);
}

static stericol_regions *oceans_on(const stericol_cells *cells)
{
    stericol_regions *set = stericol_regions_new();

    assert_non_null(set);
    assert_int_equal(stericol_regions_add_oceans(NULL, set), STERICOL_OK);
    assert_int_equal(stericol_regions_prepare(NULL, set, cells), STERICOL_OK);
    return set;
}

/*
 * Tiny cells about random points: wholly in the ocean of the point, except the few that a limit cuts; the
 * shares never add to more than 1, and to 1 exactly where all corners have an ocean.
 */
static void shares_add_to_one(const stericol_cells *cells)
{
    stericol_regions *set = oceans_on(cells);
    double *fraction = malloc(5 * cells->columns * sizeof *fraction);

    for (size_t row = 0; row < cells->rows; row++) {
        for (size_t ocean = 0; ocean < 5; ocean++)
            stericol_regions_row(set, ocean, row, fraction + ocean * cells->columns);
        for (size_t column = 0; column < cells->columns; column++) {
            double sum = 0.0, latitude, longitude;
            stericol_ocean here;

            for (size_t ocean = 0; ocean < 5; ocean++) {
                double share = fraction[ocean * cells->columns + column];

                assert_true(share >= 0.0 && share <= 1.0);
                sum += share;
            }
            if (cells->kind == STERICOL_CELLS_REGULAR) {
                latitude = cells->latitude[row];
                longitude = cells->longitude[column];
            } else {
                latitude = cells->latitude[row * cells->columns + column];
                longitude = cells->longitude[row * cells->columns + column];
            }
            here = stericol_ocean_at(latitude, longitude);
            assert_true(sum <= 1.0);
            /* Far from the lakes and the Caspian no part of a cell is without an ocean. */
            if (latitude < -20.0 || fabs(longitude) > 150.0)
                assert_same_number(sum, 1.0);
            if (here != STERICOL_OCEAN_NONE)
                assert_true(fraction[((size_t)here - 1) * cells->columns + column] > 0.0);
        }
    }
    free(fraction);
    stericol_regions_free(set);
}

static void shares_add_to_one_on_regular_cells(void **state)
{
    test_grid grid = regular_grid(36, 72, -90.0, 90.0, -180.0, 180.0);

    (void)state;
    shares_add_to_one(&grid.cells);
    free(grid.memory);
}

static void shares_add_to_one_on_curvilinear_cells(void **state)
{
    test_grid grid = lattice_grid(36, 72, -90.0, 90.0, -180.0, 180.0);

    (void)state;
    shares_add_to_one(&grid.cells);
    free(grid.memory);
}

/* 1-degree cells on either branch, rising or falling, hold the same shares to the bit. */
static void branches_give_the_same_bits(void **state)
{
    enum { ROWS = 90, COLUMNS = 180 };
    test_grid east = regular_grid(ROWS, COLUMNS, -90.0, 90.0, 0.0, 360.0);
    test_grid west = regular_grid(ROWS, COLUMNS, -90.0, 90.0, -180.0, 180.0);
    stericol_regions *a = oceans_on(&east.cells), *b = oceans_on(&west.cells);
    double left[COLUMNS], right[COLUMNS];

    (void)state;
    for (size_t ocean = 0; ocean < 5; ocean++)
        for (size_t row = 0; row < ROWS; row++) {
            stericol_regions_row(a, ocean, row, left);
            stericol_regions_row(b, ocean, row, right);
            for (size_t i = 0; i < COLUMNS; i++)
                assert_same_number(left[i], right[(i + COLUMNS / 2) % COLUMNS]);
        }
    stericol_regions_free(a);
    stericol_regions_free(b);
    free(east.memory);
    free(west.memory);
}

/* How many of the shares of a cell differ from those of the point in its middle. */
static size_t differing_shares(const stericol_regions *set, size_t cell, stericol_ocean here)
{
    size_t differing = 0;

    for (size_t ocean = 1; ocean <= 5; ocean++) {
        double fraction, expected = ocean == (size_t)here ? 1.0 : 0.0;

        stericol_regions_row(set, ocean - 1, cell, &fraction);
        if (fabs(fraction - expected) > 0.0)
            differing++;
    }
    return differing;
}

/* Both ways of covering, and the answer for a point, must agree: cells of 0.001 degrees about random points.
 */
static void cells_agree_with_points(void **state)
{
    enum { CELLS = 1000 };
    static const double side[4][2] = {{-5e-4, -5e-4}, {-5e-4, 5e-4}, {5e-4, 5e-4}, {5e-4, -5e-4}};
    const uint64_t seed = 20260718;
    double latitude[CELLS], longitude[CELLS], corner_latitude[4 * CELLS], corner_longitude[4 * CELLS];
    stericol_cells polygons = {.kind = STERICOL_CELLS_POLYGONS,
                               .rows = CELLS,
                               .columns = 1,
                               .corners = 4,
                               .latitude = latitude,
                               .longitude = longitude,
                               .corner_latitude = corner_latitude,
                               .corner_longitude = corner_longitude};
    stericol_regions *set;
    uint64_t random = seed;
    size_t differing = 0;

    (void)state;
    for (size_t i = 0; i < CELLS; i++) {
        test_grid regular;

        latitude[i] = asin(random_within(&random, -0.9999, 0.9999)) * 180.0 / PI;
        longitude[i] = random_within(&random, -180.0, 180.0);
        for (size_t k = 0; k < 4; k++) {
            corner_latitude[4 * i + k] = latitude[i] + side[k][0];
            corner_longitude[4 * i + k] = longitude[i] + side[k][1];
        }
        regular = regular_grid(1, 1, latitude[i] - 5e-4, latitude[i] + 5e-4, longitude[i] - 5e-4,
                               longitude[i] + 5e-4);
        set = oceans_on(&regular.cells);
        differing += differing_shares(set, 0, stericol_ocean_at(latitude[i], longitude[i]));
        stericol_regions_free(set);
        free(regular.memory);
    }
    set = oceans_on(&polygons);
    for (size_t i = 0; i < CELLS; i++)
        differing += differing_shares(set, i, stericol_ocean_at(latitude[i], longitude[i]));
    stericol_regions_free(set);
    /* The limits are about 1.5e5 km long, the cells 0.1 km wide: 3e-5 of the cells are cut, two shares each.
     */
    if (differing > 4)
        print_error("seed %llu\n", (unsigned long long)seed);
    assert_true(differing <= 4);
}

/* 60 S cuts a row from 61 S to 59 S: exactly, apart from the rounding of the share to 2^-40. */
static void a_limit_cuts_a_row(void **state)
{
    test_grid regular = regular_grid(1, 4, -61.0, -59.0, 0.0, 360.0);
    stericol_regions *set = oceans_on(&regular.cells);
    double fraction[4];
    double exact =
        (sin(61.0 * PI / 180.0) - sin(60.0 * PI / 180.0)) / (sin(61.0 * PI / 180.0) - sin(59.0 * PI / 180.0));

    (void)state;
    stericol_regions_row(set, 4, 0, fraction);
    for (size_t i = 0; i < 4; i++)
        assert_close(fraction[i], exact, 1e-12);
    stericol_regions_free(set);
    free(regular.memory);
}

/* 20 E cuts a column from 18 E to 22 E in halves: exactly, apart from the rounding of the share to 2^-40. */
static void a_meridian_cuts_a_column(void **state)
{
    test_grid regular = regular_grid(1, 1, -50.0, -45.0, 18.0, 22.0);
    test_grid lattice = lattice_grid(1, 1, -50.0, -45.0, 18.0, 22.0);
    stericol_regions *a = oceans_on(&regular.cells), *b = oceans_on(&lattice.cells);
    double atlantic, indian;

    (void)state;
    assert_string_equal(stericol_regions_name(a, 1), "atlantic_ocean");
    assert_string_equal(stericol_regions_name(a, 2), "indian_ocean");
    stericol_regions_row(a, 1, 0, &atlantic);
    stericol_regions_row(a, 2, 0, &indian);
    assert_close(atlantic, 0.5, 1e-12);
    assert_close(indian, 0.5, 1e-12);
    /* 64 samples in four triangles lie evenly on both sides. */
    stericol_regions_row(b, 1, 0, &atlantic);
    stericol_regions_row(b, 2, 0, &indian);
    assert_close(atlantic, 0.5, 0.05);
    assert_same_number(atlantic + indian, 1.0);
    stericol_regions_free(a);
    stericol_regions_free(b);
    free(regular.memory);
    free(lattice.memory);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(places_fall_into_their_ocean),
        cmocka_unit_test(shares_add_to_one_on_regular_cells),
        cmocka_unit_test(shares_add_to_one_on_curvilinear_cells),
        cmocka_unit_test(branches_give_the_same_bits),
        cmocka_unit_test(cells_agree_with_points),
        cmocka_unit_test(a_limit_cuts_a_row),
        cmocka_unit_test(a_meridian_cuts_a_column),
    };

    return cmocka_run_group_tests_name("region_oceans", tests, NULL, NULL);
}
