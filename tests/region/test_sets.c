/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Boxes, hemispheres, masks, sums. */
#include "region/grids.h"

static const double R = STERICOL_AUTHALIC_RADIUS;

static void boxes_are_read(void **state)
{
    stericol_box box;

    (void)state;
    assert_int_equal(stericol_box_parse(NULL, "Quiet_Sea-2.a=170,-10.5,-160,2e1", &box), STERICOL_OK);
    assert_string_equal(box.name, "Quiet_Sea-2.a");
    assert_same_number(box.west, 170.0);
    assert_same_number(box.south, -10.5);
    assert_same_number(box.east, -160.0);
    assert_same_number(box.north, 20.0);
    assert_int_equal(stericol_box_parse(NULL, "all=-180,-90,180,90", &box), STERICOL_OK);
}

static void bad_boxes_are_refused(void **state)
{
    static const struct {
        const char *text, *message;
    } rows[] = {
        {"Quiet", "region: 'Quiet' has no '='; write NAME=W,S,E,N in degrees"},
        {"=0,0,1,1", "region: '=0,0,1,1' has a name of 0 characters; give a name of 1 to 63 characters"},
        {"a b=0,0,1,1", "region: the name in 'a b=0,0,1,1' has a character that is not allowed; use letters, "
                        "digits, '_', '-' and '.'"},
        {"q=0,0,1", "region: 'q=0,0,1' does not have four limits; write NAME=W,S,E,N in degrees"},
        {"q=0,0,1,1,1", "region: 'q=0,0,1,1,1' does not have four limits; write NAME=W,S,E,N in degrees"},
        {"q=", "region: 'q=' does not have four limits; write NAME=W,S,E,N in degrees"},
        {"q=0,x,1,1",
         "region: the southern limit in 'q=0,x,1,1' is not a number; write NAME=W,S,E,N in degrees"},
        {"q=0,0,,1",
         "region: the eastern limit in 'q=0,0,,1' is not a number; write NAME=W,S,E,N in degrees"},
        {"q=nan,0,1,1",
         "region: the western limit in 'q=nan,0,1,1' is not a number; write NAME=W,S,E,N in degrees"},
        {"q=0,0,1,inf",
         "region: the northern limit in 'q=0,0,1,inf' is not a number; write NAME=W,S,E,N in degrees"},
        {"q=0,0,1,91",
         "region: 'q=0,0,1,91' has a latitude of 91; give latitudes within -90..90, in the order W,S,E,N"},
        {"q=-400,0,1,1", "region: 'q=-400,0,1,1' has a longitude of -400; give longitudes within -360..360"},
        {"q=0,10,1,10",
         "region: the southern limit of 'q=0,10,1,10' (10) is not south of the northern one (10); give "
         "them in the order W,S,E,N"},
        {"q=0,10,1,-10",
         "region: the southern limit of 'q=0,10,1,-10' (10) is not south of the northern one (-10); "
         "give them in the order W,S,E,N"},
        {"q=5,0,5,1",
         "region: the western and eastern limits of 'q=5,0,5,1' are the same meridian; for the whole "
         "circle give longitudes 360 apart, such as -180 and 180"},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        stericol_context *context = stericol_context_new();
        stericol_box box = {"untouched", 1.0, 2.0, 3.0, 4.0};

        assert_int_equal(stericol_box_parse(context, rows[i].text, &box), STERICOL_USAGE);
        assert_string_equal(stericol_context_message(context), rows[i].message);
        assert_string_equal(box.name, "untouched");
        stericol_context_free(context);
    }
}

/* A set of boxes laid over a grid. */
static stericol_regions *boxes_on(const stericol_cells *cells, size_t count, const char *const *texts)
{
    stericol_regions *set = stericol_regions_new();
    stericol_box box;

    assert_non_null(set);
    for (size_t i = 0; i < count; i++) {
        assert_int_equal(stericol_box_parse(NULL, texts[i], &box), STERICOL_OK);
        assert_int_equal(stericol_regions_add_box(NULL, set, &box), STERICOL_OK);
    }
    assert_int_equal(stericol_regions_prepare(NULL, set, cells), STERICOL_OK);
    return set;
}

/* By hand: cells of 10 by 30 degrees from the equator; the box takes half of the first column (5 of 10), all
   of the second, and up to 10 N of the first row: sin 10 / sin 30. */
static void the_covered_fraction(void **state)
{
    static const char *const text[] = {"q=5,0,20,10"};
    test_grid grid = regular_grid(2, 3, 0.0, 60.0, 0.0, 30.0);
    stericol_regions *set = boxes_on(&grid.cells, 1, text);
    double fraction[3], part = sin(10.0 * PI / 180.0) / 0.5;

    (void)state;
    stericol_regions_row(set, 0, 0, fraction);
    assert_relative(fraction[0], 0.5 * part, 1e-15);
    assert_relative(fraction[1], part, 1e-15);
    assert_same_number(fraction[2], 0.0);
    stericol_regions_row(set, 0, 1, fraction);
    for (size_t i = 0; i < 3; i++)
        assert_same_number(fraction[i], 0.0);
    stericol_regions_free(set);
    free(grid.memory);
}

/* A cell that holds both ends of a box which leaves a gap within it: 360 - 4 of 360 degrees. */
static void both_ends_in_one_cell(void **state)
{
    static const char *const text[] = {"q=12,-90,8,90"};
    test_grid grid = regular_grid(1, 1, -90.0, 90.0, 0.0, 360.0);
    stericol_regions *set = boxes_on(&grid.cells, 1, text);
    double fraction;

    (void)state;
    stericol_regions_row(set, 0, 0, &fraction);
    assert_relative(fraction, 356.0 / 360.0, 1e-15);
    stericol_regions_free(set);
    free(grid.memory);
}

/* On both branches of the grid; 7-degree columns do not meet the limits of the boxes. */
static void a_box_across_the_date_line_is_the_sum_of_two(void **state)
{
    static const char *const texts[] = {"both=165,-33,-171,41", "west=165,-33,180,41",
                                        "east=-180,-33,-171,41", "same=165,-33,189,41"};
    static const double starts[] = {0.0, -180.0};

    (void)state;
    for (size_t k = 0; k < 2; k++) {
        test_grid grid = regular_grid(36, 52, -90.0, 90.0, starts[k], starts[k] + 364.0 - 4.0);
        stericol_regions *set = boxes_on(&grid.cells, 4, texts);
        double fraction[4][52], sum = 0.0, *area = areas_of(&grid.cells, R);

        for (size_t row = 0; row < 36; row++) {
            for (size_t i = 0; i < 4; i++)
                stericol_regions_row(set, i, row, fraction[i]);
            for (size_t i = 0; i < 52; i++) {
                assert_close(fraction[0][i], fraction[1][i] + fraction[2][i], 1e-15);
                assert_same_number(fraction[0][i], fraction[3][i]);
                sum += fraction[0][i] * area[row * 52 + i];
            }
        }
        /* R^2 dlon (sin 41 + sin 33) */
        assert_relative(sum, R * R * 24.0 * PI / 180.0 * (sin(41.0 * PI / 180.0) + sin(33.0 * PI / 180.0)),
                        1e-13);
        stericol_regions_free(set);
        free(area);
        free(grid.memory);
    }
}

static void the_whole_circle(void **state)
{
    static const char *const texts[] = {"a=-180,-90,180,90", "b=0,-90,360,90", "c=-200,-90,200,90"};
    test_grid grid = regular_grid(3, 7, -90.0, 90.0, 20.0, 380.0);
    test_grid lattice = lattice_grid(3, 7, -90.0, 90.0, 20.0, 380.0);
    const stericol_cells *kinds[2] = {&grid.cells, &lattice.cells};

    (void)state;
    for (size_t k = 0; k < 2; k++) {
        stericol_regions *set = boxes_on(kinds[k], 3, texts);
        double fraction[7];

        for (size_t i = 0; i < 3; i++)
            for (size_t row = 0; row < 3; row++) {
                stericol_regions_row(set, i, row, fraction);
                for (size_t column = 0; column < 7; column++)
                    assert_same_number(fraction[column], 1.0);
            }
        stericol_regions_free(set);
    }
    free(grid.memory);
    free(lattice.memory);
}

/* Cells on the equator, split evenly or not, add to 1 exactly; the sums over the sphere are the whole's. */
static void north_and_south_are_the_whole(void **state)
{
    static const double tops[] = {90.0, 77.3, 64.1};

    (void)state;
    for (size_t k = 0; k < 3; k++)
        for (size_t kind = 0; kind < 2; kind++) {
            test_grid grid = kind == 0 ? regular_grid(5, 4, -90.0, tops[k], 0.0, 360.0)
                                       : lattice_grid(5, 4, -90.0, tops[k], 0.0, 360.0);
            stericol_regions *set = stericol_regions_new();
            stericol_region_totals *totals = stericol_region_totals_new(3, 1);
            double north[4], south[4], whole[4], *area = areas_of(&grid.cells, R);

            assert_int_equal(stericol_regions_add_hemispheres(NULL, set), STERICOL_OK);
            assert_int_equal(stericol_regions_add_whole(NULL, set, "global_ocean"), STERICOL_OK);
            assert_int_equal(stericol_regions_prepare(NULL, set, &grid.cells), STERICOL_OK);
            for (size_t row = 0; row < 5; row++) {
                stericol_regions_row(set, 0, row, north);
                stericol_regions_row(set, 1, row, south);
                stericol_regions_row(set, 2, row, whole);
                for (size_t i = 0; i < 4; i++) {
                    assert_same_number(whole[i], 1.0);
                    assert_same_number(north[i] + south[i], 1.0);
                }
                stericol_region_totals_add_row(totals, 0, 0, 4, north, area + 4 * row);
                stericol_region_totals_add_row(totals, 1, 0, 4, south, area + 4 * row);
                stericol_region_totals_add_row(totals, 2, 0, 4, whole, area + 4 * row);
            }
            assert_relative(stericol_region_totals_value(totals, 0, 0) +
                                stericol_region_totals_value(totals, 1, 0),
                            stericol_region_totals_value(totals, 2, 0), 1e-15);
            if (kind == 0) /* the zone from the equator to the top: 2 pi R^2 sin(top) */
                assert_relative(stericol_region_totals_value(totals, 0, 0),
                                2.0 * PI * R * R * sin(tops[k] * PI / 180.0), 1e-14);
            stericol_region_totals_free(totals);
            stericol_regions_free(set);
            free(area);
            free(grid.memory);
        }
}

/* By hand: from 10 S to 30 N, sin 30 = 1/2: the north has (1/2) / (1/2 + sin 10). */
static void a_cell_across_the_equator(void **state)
{
    test_grid grid = regular_grid(1, 1, -10.0, 30.0, 0.0, 1.0);
    stericol_regions *set = stericol_regions_new();
    double fraction;

    (void)state;
    assert_int_equal(stericol_regions_add_hemispheres(NULL, set), STERICOL_OK);
    assert_int_equal(stericol_regions_prepare(NULL, set, &grid.cells), STERICOL_OK);
    assert_string_equal(stericol_regions_name(set, 0), "northern_hemisphere");
    stericol_regions_row(set, 0, 0, &fraction);
    assert_relative(fraction, 0.5 / (0.5 + sin(10.0 * PI / 180.0)), 1e-15);
    stericol_regions_free(set);
    free(grid.memory);
}

/* The samples of a cell stand for its area: 64 of them are right within about one in their square root. */
static void boxes_on_curvilinear_cells(void **state)
{
    static const char *const texts[] = {"q=173,12,-178,33"};
    test_grid lattice = lattice_grid(9, 18, -90.0, 90.0, -180.0, 180.0);
    test_grid regular = regular_grid(9, 18, -90.0, 90.0, -180.0, 180.0);
    stericol_regions *a = boxes_on(&lattice.cells, 1, texts), *b = boxes_on(&regular.cells, 1, texts);
    double sampled[18], exact[18];

    (void)state;
    for (size_t row = 0; row < 9; row++) {
        stericol_regions_row(a, 0, row, sampled);
        stericol_regions_row(b, 0, row, exact);
        for (size_t i = 0; i < 18; i++)
            assert_close(sampled[i], exact[i], 0.125);
    }
    /* Some cell is cut in both, or nothing was compared. */
    stericol_regions_row(a, 0, 5, sampled);
    assert_true(sampled[17] > 0.1 && sampled[17] < 0.9);
    stericol_regions_free(a);
    stericol_regions_free(b);
    free(lattice.memory);
    free(regular.memory);
}

/* Cells with a missing corner go by their centre; without a centre they belong nowhere. */
static void curvilinear_cells_with_missing_corners(void **state)
{
    static const char *const texts[] = {"q=0,0,20,20"};
    double latitude[2] = {10.0, (double)NAN}, longitude[2] = {10.0, (double)NAN};
    double corner_latitude[6] = {5.0, (double)NAN, 5.0, 15.0, 15.0, 15.0},
           corner_longitude[6] = {5.0, 15.0, 19.0, 5.0, 15.0, 19.0};
    stericol_cells cells = {.kind = STERICOL_CELLS_POLYGONS,
                            .rows = 1,
                            .columns = 2,
                            .corners = 3,
                            .latitude = latitude,
                            .longitude = longitude,
                            .corner_latitude = corner_latitude,
                            .corner_longitude = corner_longitude};
    stericol_regions *set = boxes_on(&cells, 1, texts);
    double fraction[2];

    (void)state;
    stericol_regions_row(set, 0, 0, fraction);
    assert_same_number(fraction[0], 1.0);
    assert_same_number(fraction[1], 0.0);
    stericol_regions_free(set);
}

static void masks(void **state)
{
    const float fraction[6] = {0.0F, 1.0F, 0.25F, NAN, 0.75F, 1.0F};
    const float bad[6] = {0.0F, 1.0F, 0.25F, 0.5F, 1.5F, 1.0F};
    const unsigned char label[6] = {0, 1, 2, 2, 1, 0}, bad_label[6] = {0, 1, 2, 3, 1, 0};
    static const char *const names[2] = {"Fog_Bank", "Calm"};
    test_grid grid = regular_grid(2, 3, 0.0, 20.0, 0.0, 30.0);
    stericol_regions *set = stericol_regions_new();
    stericol_context *context = stericol_context_new();
    double row[3];

    (void)state;
    assert_int_equal(stericol_regions_add_mask(context, set, "Shoal", 2, 3, fraction), STERICOL_OK);
    assert_int_equal(stericol_regions_add_mask(context, set, "bad", 2, 3, bad), STERICOL_INPUT);
    assert_string_equal(
        stericol_context_message(context),
        "bad: row 2, column 2 is 1.5, which is not within 0..1; give the covered share of each cell");
    stericol_context_clear(context);
    assert_int_equal(stericol_regions_add_labels(context, set, 2, names, 2, 3, bad_label), STERICOL_INPUT);
    assert_string_equal(
        stericol_context_message(context),
        "Fog_Bank: row 2, column 1 has label 3, but there are 2 regions; name every value of the mask");
    stericol_context_clear(context);
    assert_int_equal(stericol_regions_count(set), 1);
    assert_int_equal(stericol_regions_add_labels(context, set, 2, names, 2, 3, label), STERICOL_OK);
    assert_int_equal(stericol_regions_count(set), 3);
    assert_int_equal(stericol_regions_prepare(context, set, &grid.cells), STERICOL_OK);
    stericol_regions_row(set, 0, 0, row);
    assert_same_number(row[0], 0.0);
    assert_same_number(row[1], 1.0);
    assert_same_number(row[2], 0.25);
    stericol_regions_row(set, 0, 1, row);
    assert_same_number(row[0], 0.0);
    assert_same_number(row[1], 0.75);
    assert_same_number(row[2], 1.0);
    assert_string_equal(stericol_regions_name(set, 2), "Calm");
    stericol_regions_row(set, 2, 0, row);
    assert_same_number(row[2], 1.0);
    assert_same_number(row[1], 0.0);
    stericol_regions_row(set, 2, 1, row);
    assert_same_number(row[0], 1.0);
    stericol_regions_free(set);
    stericol_context_free(context);
    free(grid.memory);
}

static void masks_must_fit_the_grid(void **state)
{
    const float fraction[6] = {0.0F};
    test_grid grid = regular_grid(3, 2, 0.0, 20.0, 0.0, 30.0);
    stericol_regions *set = stericol_regions_new();
    stericol_context *context = stericol_context_new();

    (void)state;
    assert_int_equal(stericol_regions_add_mask(context, set, "Shoal", 2, 3, fraction), STERICOL_OK);
    assert_int_equal(stericol_regions_prepare(context, set, &grid.cells), STERICOL_INPUT);
    assert_string_equal(
        stericol_context_message(context),
        "Shoal: the mask has 2 by 3 cells, the grid 3 by 2; give a mask on the grid of the data");
    stericol_regions_free(set);
    stericol_context_free(context);
    free(grid.memory);
}

static void names_are_used_once(void **state)
{
    stericol_regions *set = stericol_regions_new();
    stericol_context *context = stericol_context_new();
    const stericol_box box = {"southern_hemisphere", 0.0, 0.0, 1.0, 1.0};

    (void)state;
    assert_int_equal(stericol_regions_add_box(context, set, &box), STERICOL_OK);
    assert_int_equal(stericol_regions_add_usual(context, set, "global_ocean"), STERICOL_USAGE);
    assert_string_equal(
        stericol_context_message(context),
        "region: the name 'southern_hemisphere' is used twice; give each region its own name");
    assert_int_equal(stericol_regions_count(set), 1);
    stericol_context_clear(context);
    assert_int_equal(stericol_regions_add_whole(context, set, ""), STERICOL_USAGE);
    assert_string_equal(stericol_context_message(context), "region: a region has no name; give it a name");
    stericol_regions_free(set);
    set = stericol_regions_new();
    assert_int_equal(stericol_regions_add_usual(context, set, "global_ocean"), STERICOL_OK);
    assert_int_equal(stericol_regions_count(set), 8);
    stericol_regions_free(set);
    stericol_regions_free(NULL);
    stericol_context_free(context);
}

/* 1e16 + 1 - 1e16 is 1 when nothing is rounded, in whatever order and parts; 0.1 * 3 keeps its rounding
 * error. */
static void sums_do_not_depend_on_the_order(void **state)
{
    static const double weight[5] = {1e16, 1.0, -1e16, 0.1, 0.1}, value[5] = {1.0, 1.0, 1.0, 3.0, -3.0};
    stericol_region_totals *one = stericol_region_totals_new(2, 3), *other = stericol_region_totals_new(2, 3);

    (void)state;
    for (size_t i = 0; i < 5; i++) {
        stericol_region_totals_add(one, 1, 2, weight[i], value[i]);
        stericol_region_totals_add(i % 2 == 0 ? one : other, 0, 1, weight[4 - i], value[4 - i]);
    }
    stericol_region_totals_merge(one, other);
    assert_same_number(stericol_region_totals_value(one, 1, 2), 1.0);
    assert_same_number(stericol_region_totals_value(one, 0, 1), 1.0);
    assert_same_number(stericol_region_totals_value(one, 0, 0), 0.0);
    stericol_region_totals_add(one, 1, 2, 1.0, (double)NAN);
    assert_nan(stericol_region_totals_value(one, 1, 2));
    stericol_region_totals_clear(one);
    assert_same_number(stericol_region_totals_value(one, 1, 2), 0.0);
    stericol_region_totals_free(one);
    stericol_region_totals_free(other);
    stericol_region_totals_free(NULL);
}

static void rows_pass_over_missing_values(void **state)
{
    const double weight[4] = {2.0, 0.0, 5.0, 1.0}, value[4] = {3.0, (double)INFINITY, (double)NAN, 4.0};
    stericol_region_totals *totals = stericol_region_totals_new(1, 1);

    (void)state;
    stericol_region_totals_add_row(totals, 0, 0, 4, weight, value);
    assert_same_number(stericol_region_totals_value(totals, 0, 0), 10.0);
    stericol_region_totals_free(totals);
    assert_null(stericol_region_totals_new(SIZE_MAX, 2));
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(boxes_are_read),
        cmocka_unit_test(bad_boxes_are_refused),
        cmocka_unit_test(the_covered_fraction),
        cmocka_unit_test(both_ends_in_one_cell),
        cmocka_unit_test(a_box_across_the_date_line_is_the_sum_of_two),
        cmocka_unit_test(the_whole_circle),
        cmocka_unit_test(north_and_south_are_the_whole),
        cmocka_unit_test(a_cell_across_the_equator),
        cmocka_unit_test(boxes_on_curvilinear_cells),
        cmocka_unit_test(curvilinear_cells_with_missing_corners),
        cmocka_unit_test(masks),
        cmocka_unit_test(masks_must_fit_the_grid),
        cmocka_unit_test(names_are_used_once),
        cmocka_unit_test(sums_do_not_depend_on_the_order),
        cmocka_unit_test(rows_pass_over_missing_values),
    };

    return cmocka_run_group_tests_name("region_sets", tests, NULL, NULL);
}
