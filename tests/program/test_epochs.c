/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Whole runs of the program over the times of an epoch, the ends of columns and the files that go beside the
 * data: invented seas whose answer is hand arithmetic under the linear law, v = (1/r) [1 + a (Theta - 10) - b
 * (SA
 * - 35)] with a = 2e-4 1/K, b = 7.5e-4 kg/g, r = 1027 kg/m3 (the defaults of --equation linear).
 */
#include "program/science.h"

#include "stericol/water.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const double EXPANSION = 2e-4;

/* Fractional change of volume from one temperature to another at 35 g/kg. */
static double fraction_of(double earlier, double later)
{
    return EXPANSION * (later - earlier) / (1.0 + EXPANSION * (0.5 * (earlier + later) - 10.0));
}

static const char *result_path(void)
{
    return in_folder("change.nc");
}

#define LINEAR_RUN "--equation", "linear", "--replace", "--output", result_path()

/* ---- times: a sea of two cells, 1000 m deep, one temperature a time ---- */

enum { MONTHS = 12, MOST_TIMES = 24 };

static const int month_days[MONTHS] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31}; /* noleap */

/* Times without `lost` (an index, or MOST_TIMES for none), their temperatures, the value of time `hole`
 * missing. */
typedef struct calendar {
    size_t count, hole;
    double middle[MOST_TIMES], bounds[2 * MOST_TIMES], warmth[MOST_TIMES];
} calendar;

/* A season that is not even: each month of its own. */
static double month_warmth(size_t month)
{
    return 14.0 + 5.0 * cos(2.0 * PI * ((double)month - 7.6) / 12.0) + 0.3 * (double)(month % 3);
}

static calendar make_calendar(size_t first_year, size_t years, size_t lost)
{
    calendar of = {.hole = MOST_TIMES};
    double day = 365.0 * (double)first_year;

    for (size_t m = 0; m < MONTHS * years; m++) {
        double next = day + month_days[m % MONTHS];

        if (m != lost) {
            of.middle[of.count] = 0.5 * (day + next);
            of.bounds[2 * of.count] = day;
            of.bounds[2 * of.count + 1] = next;
            of.warmth[of.count++] = month_warmth(m % MONTHS);
        }
        day = next;
    }
    return of;
}

static double of_calendar(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    const calendar *times = of->user;

    (void)k;
    (void)j;
    (void)i;
    if (t == times->hole)
        return (double)NAN;
    return quantity == SEA_TEMPERATURE ? times->warmth[t] : 35.0;
}

static const double two_columns[2] = {170, 190}, two_rows[2] = {10, 20};

static const char *write_calendar(const calendar *times, double bottom, const char *name)
{
    const double limits[2] = {0.0, bottom}, middle = 0.5 * bottom;
    sea of = sea_plain();
    sea_form form = form_plain();

    of.time = (sea_axis){times->count, times->middle, times->bounds};
    of.depth = (sea_axis){1, &middle, limits};
    of.latitude = (sea_axis){2, two_rows, NULL};
    of.longitude = (sea_axis){2, two_columns, NULL};
    of.value = of_calendar;
    of.user = times;
    return sea_write(&of, &form, name);
}

static double mean_steric(void)
{
    return region_value(result_path(), "region_mean_steric_height_change", "whole_domain");
}

/*
 * Two years, and two others of which one September is lacking, as a time or as values: months are averaged
 * first, so that nothing has changed.  A plain mean over 23 months would show -0.16 K over 1000 m, -3 cm.
 */
static void test_a_lost_september_changes_nothing(void **state)
{
    calendar whole = make_calendar(0, 2, MOST_TIMES), lost = make_calendar(10, 2, 20);
    calendar hole = make_calendar(20, 2, MOST_TIMES);
    const char *earlier = write_calendar(&whole, 1000.0, "whole.nc"), *later;
    double plain = 0.0, naive = 0.0;

    (void)state;
    for (size_t t = 0; t < whole.count; t++)
        plain += whole.warmth[t] / (double)whole.count;
    for (size_t t = 0; t < lost.count; t++)
        naive += lost.warmth[t] / (double)lost.count;
    assert_true(fabs(fraction_of(plain, naive) * 1000.0) > 0.02); /* the check would see it */
    hole.hole = 8;
    later = write_calendar(&lost, 1000.0, "lost.nc");
    for (int form = 0; form < 2; form++) {
        run_well("change", "--earlier", earlier, "--later", later, LINEAR_RUN);
        /* rounding of temperatures near 14, 2e-15 K, over 1000 m */
        assert_close(mean_steric(), 0.0, 1e-12);
        later = write_calendar(&hole, 1000.0, "hole.nc");
    }
}

/* A September that is lost altogether is told, and the months are written in the result. */
static void test_unequal_months_are_told(void **state)
{
    calendar whole = make_calendar(0, 1, MOST_TIMES), lost = make_calendar(10, 1, 8);
    const char *earlier = write_calendar(&whole, 1000.0, "whole.nc");
    const char *later = write_calendar(&lost, 1000.0, "lost.nc");

    (void)state;
    run_well("change", "--earlier", earlier, "--later", later, LINEAR_RUN);
    assert_said("warning: the epochs are made of different calendar months, so that the season enters the "
                "change: September (earlier epoch only)");
    assert_string_equal(file_text(result_path(), "earlier_times_per_calendar_month"),
                        "1 1 1 1 1 1 1 1 1 1 1 1");
    assert_string_equal(file_text(result_path(), "later_times_per_calendar_month"),
                        "1 1 1 1 1 1 1 1 0 1 1 1");
    assert_true(fabs(mean_steric()) > 0.01);
}

/* Both ends of a window count, to whatever precision they are written; months weigh by their days. */
static void test_windows_include_both_ends(void **state)
{
    calendar times = make_calendar(0, 2, MOST_TIMES);
    const char *path = write_calendar(&times, 1000.0, "windows.nc");
    double spring = (28.0 * month_warmth(1) + 31.0 * month_warmth(2) + 30.0 * month_warmth(3)) / 89.0;
    double summer = (30.0 * month_warmth(5) + 31.0 * month_warmth(6)) / 61.0;
    static const char *const windows[][2] = {{"2000-02..2000-04", "2001-06..2001-07"},
                                             {"2000-02-01..2000-04-30", "2001-06-10..2001-07-20"}};

    (void)state;
    for (size_t w = 0; w < 2; w++) {
        run_well("change", "--earlier", path, "--later", path, "--earlier-time", windows[w][0],
                 "--later-time", windows[w][1], LINEAR_RUN);
        /* two volumes that differ by 1e-3 of themselves */
        assert_relative(mean_steric(), fraction_of(spring, summer) * 1000.0, 1e-12);
    }
    run_well("change", "--earlier", path, "--later", path, "--earlier-time", "2000", "--later-time",
             "2001-06..2001-07", LINEAR_RUN);
    assert_string_equal(file_text(result_path(), "earlier_times_per_calendar_month"),
                        "1 1 1 1 1 1 1 1 1 1 1 1");
    assert_string_equal(file_text(result_path(), "time_coverage_start"), "2000-01-01");
    run_to(1, "change", "--earlier", path, "--later", path, "--earlier-time", "1990", "--later-time", "2001",
           LINEAR_RUN);
}

/* Half of the times are enough by default, and a greater share can be asked for. */
static void test_least_times(void **state)
{
    calendar one = make_calendar(0, 1, MOST_TIMES), other = make_calendar(5, 1, MOST_TIMES);
    const char *earlier, *later = write_calendar(&other, 1000.0, "all_months.nc");

    (void)state;
    one.hole = 3;
    earlier = write_calendar(&one, 1000.0, "eleven_months.nc");
    run_well("change", "--earlier", earlier, "--later", later, LINEAR_RUN);
    run_to(1, "change", "--earlier", earlier, "--later", later, "--least-times", "0.95", LINEAR_RUN);
}

/*
 * A strong season about the same mean: the state has not changed, the water's mean volume has, as v curves
 * upwards in temperature: half its curvature (1e-5 1/K2) times the variance (12.5 K2) over 30 m, near 2 mm.
 * Expected from v of each month, weighted by days (the polynomial; its own tests hold it to the standard).
 */
static void test_integrals_over_a_strong_season(void **state)
{
    calendar season = make_calendar(0, 1, MOST_TIMES), level = make_calendar(1, 1, MOST_TIMES);
    const char *earlier, *later;
    double mean = 0.0, volume[2] = {0.0, 0.0}, pressure = stericol_sea_pressure(15.0, 15.0), state_change;

    (void)state;
    for (size_t m = 0; m < MONTHS; m++)
        mean += month_warmth(m) * month_days[m] / 365.0;
    for (size_t m = 0; m < MONTHS; m++) {
        level.warmth[m] = mean;
        volume[0] += stericol_specific_volume(35.0, mean, pressure) * month_days[m] / 365.0;
        volume[1] += stericol_specific_volume(35.0, month_warmth(m), pressure) * month_days[m] / 365.0;
    }
    earlier = write_calendar(&level, 30.0, "level.nc");
    later = write_calendar(&season, 30.0, "seasonal.nc");
    run_well("change", "--earlier", earlier, "--later", later, "--replace", "--output", result_path());
    state_change = mean_steric();
    assert_close(state_change, 0.0, 1e-12);
    run_well("change", "--earlier", earlier, "--later", later, "--mean", "integral", "--replace", "--output",
             result_path());
    print_message("integral less state: %.2f mm\n", 1e3 * (mean_steric() - state_change));
    assert_true(mean_steric() > 1e-3 && mean_steric() < 2e-3);
    /* the pressure of 10 and 20 N against 15 N is 1e-6 of the whole apart; curvature hardly knows it */
    assert_relative(mean_steric(), 30.0 * (volume[1] - volume[0]) / (0.5 * (volume[0] + volume[1])), 1e-6);
}

/* ---- ends of columns: a row of seas, each with its own depths ---- */

enum { SEAS = 6, LEVELS = 6 };
enum { COMPLETE, SEA_FLOOR, END_OF_DATA, UNEQUAL, GAP, NO_DATA }; /* flag_values, docs/definitions.md */

static const double depths[LEVELS] = {10, 100, 200, 500, 800, 1000};
static const double columns_of_6[SEAS] = {5, 15, 25, 35, 45, 55}, rows_of_2[2] = {-5, 5};
static const double EARLIER = 12.0, LATER = 12.5;

/* present[epoch][column]: a letter a level, '.' missing. */
typedef struct presence {
    const char *present[2][SEAS];
} presence;

static double where_present(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    const presence *known = of->user;

    (void)j;
    if (known->present[t][i][k] == '.')
        return (double)NAN;
    return quantity == SEA_SALINITY ? 35.0 : t == 0 ? EARLIER : LATER;
}

static sea sea_of_presence(const presence *known)
{
    static const double time[2] = {15.5, 380.5}, bounds[4] = {0, 31, 365, 396};
    sea of = sea_plain();

    of.time = (sea_axis){2, time, bounds};
    of.depth = (sea_axis){LEVELS, depths, NULL};
    of.latitude = (sea_axis){2, rows_of_2, NULL};
    of.longitude = (sea_axis){SEAS, columns_of_6, NULL};
    of.value = where_present;
    of.user = known;
    return of;
}

/* Asserts how far each column was integrated (m; 0: not at all), its height, and why it ends. */
static void assert_columns(const double depth[SEAS], const int flag[SEAS])
{
    field integrated = read_field(result_path(), "integrated_depth");
    field height = read_field(result_path(), "steric_height_change");
    field flags = read_field(result_path(), "column_flag");

    assert_int_equal(integrated.count, 2 * SEAS);
    for (size_t n = 0; n < 2 * SEAS; n++) {
        size_t i = n % SEAS;

        if (depth[i] > 0.0) {
            assert_relative(integrated.value[n], depth[i], 6e-8); /* a float */
            assert_relative(height.value[n], fraction_of(EARLIER, LATER) * depth[i], 1.2e-7);
        } else {
            assert_nan(integrated.value[n]);
            assert_nan(height.value[n]);
        }
        if ((int)flags.value[n] != flag[i])
            fail_msg("column %zu has flag %d, should have %d", i, (int)flags.value[n], flag[i]);
    }
    field_free(&integrated);
    field_free(&height);
    field_free(&flags);
}

#define STEPS "--earlier-step", "1", "--later-step", "2"

/*
 * By the rules of the vertical: values that stop above the last level in both epochs end at the sea floor;
 * with the last level, with the data; in one epoch alone, unequal.  A missing level between 500 and 1000 m is
 * a gap of 500 m where 50 + 0.225 x 500 = 162.5 m are allowed; one between 100 and 500 m is 400 m for 72.5 m.
 */
static void test_ends_of_columns(void **state)
{
    static const presence known = {{{"xxxxxx", "xxxx..", "xxxxxx", "xxxx.x", "......", "xx.xxx"},
                                    {"xxxxxx", "xxxx..", "xxx...", "xxxx.x", "xxxxxx", "xxxxxx"}}};
    sea of = sea_of_presence(&known);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "ends.nc");

    (void)state;
    run_well("change", "--earlier", path, "--later", path, STEPS, LINEAR_RUN);
    assert_columns((const double[SEAS]){1000, 500, 200, 500, 0, 100},
                   (const int[SEAS]){END_OF_DATA, SEA_FLOOR, UNEQUAL, GAP, NO_DATA, GAP});
    run_well("change", "--earlier", path, "--later", path, STEPS, "--gap-reach", "450", LINEAR_RUN);
    assert_columns((const double[SEAS]){1000, 500, 200, 500, 0, 1000},
                   (const int[SEAS]){END_OF_DATA, SEA_FLOOR, UNEQUAL, GAP, NO_DATA, END_OF_DATA});
    /* a limit in metres: what does not reach it is incomplete, what ends at the floor above it is not; levels
     * are looked at down to the first one that lies at the limit or below it */
    run_well("change", "--earlier", path, "--later", path, STEPS, "--layers", "0..900", LINEAR_RUN);
    assert_columns((const double[SEAS]){900, 500, 0, 0, 0, 0},
                   (const int[SEAS]){COMPLETE, SEA_FLOOR, UNEQUAL, GAP, NO_DATA, GAP});
}

/*
 * The sea floor is told.  Column by column: 200 m below the last sample (carried down to it), 450 m below it,
 * 700 m below it (carried as far as the reach goes, which is not the floor), above the last sample (cut
 * there), land, exactly at a sample.
 */
static void test_sea_floor_and_bottom_reach(void **state)
{
    static const presence known = {{{"xxxxxx", "xxxx..", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxx."},
                                    {"xxxxxx", "xxxx..", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxx."}}};
    static const double floors[SEAS] = {1200, 950, 1700, 650, -20, 800};
    double plane[2 * SEAS];
    sea of = sea_of_presence(&known);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "floor_data.nc"), *floor;

    (void)state;
    for (size_t n = 0; n < 2 * SEAS; n++)
        plane[n] = floors[n % SEAS];
    floor = sea_write_plane(
        &of, "floor.nc", "floor", NC_DOUBLE, plane,
        (const char *const[]){"standard_name", "sea_floor_depth_below_mean_sea_level", "units", "m", NULL});
    run_well("change", "--earlier", path, "--later", path, STEPS, "--bathymetry", floor, LINEAR_RUN);
    assert_columns((const double[SEAS]){1200, 950, 1000, 650, 1000, 800},
                   (const int[SEAS]){SEA_FLOOR, SEA_FLOOR, END_OF_DATA, SEA_FLOOR, END_OF_DATA, SEA_FLOOR});
    /* the cell that the sea floor's file has as land holds water all the same; else more than all were
     * covered */
    for (int v = 0; v < 2; v++)
        assert_relative(
            region_value(result_path(), v == 0 ? "region_area" : "region_covered_area", "whole_domain"),
            ring_area(-10, 10) * 60.0 / 360.0, 1e-12);
    run_well("change", "--earlier", path, "--later", path, STEPS, "--bathymetry", floor, "--bottom-reach",
             "0", LINEAR_RUN);
    assert_columns(
        (const double[SEAS]){1000, 500, 1000, 650, 1000, 800},
        (const int[SEAS]){END_OF_DATA, END_OF_DATA, END_OF_DATA, SEA_FLOOR, END_OF_DATA, SEA_FLOOR});
    run_well("change", "--earlier", path, "--later", path, STEPS, "--bathymetry", floor, "--bottom-reach",
             "750", LINEAR_RUN);
    assert_columns((const double[SEAS]){1200, 950, 1700, 650, 1000, 800},
                   (const int[SEAS]){SEA_FLOOR, SEA_FLOOR, SEA_FLOOR, SEA_FLOOR, END_OF_DATA, SEA_FLOOR});
}

/* ---- files beside the data ---- */

static const presence everywhere = {{{"xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx"},
                                     {"xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx"}}};

static void test_mask_of_land(void **state)
{
    sea of = sea_of_presence(&everywhere);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "mask_data.nc"), *mask;
    double wet[2 * SEAS];

    (void)state;
    for (size_t n = 0; n < 2 * SEAS; n++)
        wet[n] = n % SEAS == 1 || n % SEAS == 4 ? 0.0 : 1.0;
    mask = sea_write_plane(&of, "mask.nc", "wet", NC_INT, wet,
                           (const char *const[]){"standard_name", "sea_binary_mask", "units", "1", NULL});
    run_well("change", "--earlier", path, "--later", path, STEPS, "--mask", mask, LINEAR_RUN);
    assert_columns((const double[SEAS]){1000, 0, 1000, 1000, 0, 1000},
                   (const int[SEAS]){END_OF_DATA, NO_DATA, END_OF_DATA, END_OF_DATA, NO_DATA, END_OF_DATA});
    assert_relative(region_value(result_path(), "region_area", "whole_domain"),
                    ring_area(-10, 10) * 40.0 / 360.0, 1e-12);
    assert_non_null(strstr(file_text(result_path(), "inputs"), "mask.nc")); /* an input as any other */
}

static void test_cell_areas_of_a_file(void **state)
{
    sea of = sea_of_presence(&everywhere);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "area_data.nc"), *areas;
    double area[2 * SEAS], sum = 0.0;

    (void)state;
    for (size_t n = 0; n < 2 * SEAS; n++)
        sum += area[n] = 1e9 * (double)(n + 1);
    areas = sea_write_plane(&of, "areas.nc", "areacello", NC_DOUBLE, area,
                            (const char *const[]){"standard_name", "cell_area", "units", "m2", NULL});
    run_well("change", "--earlier", path, "--later", path, STEPS, "--cell-area", areas, LINEAR_RUN);
    assert_relative(region_value(result_path(), "region_area", "whole_domain"), sum, 1e-14);
    assert_relative(region_value(result_path(), "region_steric_volume_change", "whole_domain"),
                    sum * fraction_of(EARLIER, LATER) * 1000.0, 4e-12); /* two volumes 1e-4 apart */
    assert_non_null(strstr(file_text(result_path(), "inputs"), "areas.nc"));
}

/* Cells of each column's own thickness: full ones, then a part of one at the sea floor. */
static double thickness_of(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    static const double full[LEVELS] = {20, 100, 150, 300, 300, 200};

    (void)of;
    (void)quantity;
    (void)t;
    (void)j;
    return k < 3 ? full[k] : k == 3 ? 50.0 * (double)(i + 1) : (double)NAN;
}

static void test_thickness_of_cells(void **state)
{
    static const presence known = {{{"xxxx..", "xxxx..", "xxxx..", "xxxx..", "xxxx..", "xxxx.."},
                                    {"xxxx..", "xxxx..", "xxxx..", "xxxx..", "xxxx..", "xxxx.."}}};
    sea of = sea_of_presence(&known), cells = of;
    sea_form form = form_plain(), only = form_plain();
    const char *path = sea_write(&of, &form, "thickness_data.nc"), *thickness;
    double expected[SEAS];
    const int flags[SEAS] = {SEA_FLOOR, SEA_FLOOR, SEA_FLOOR, SEA_FLOOR, SEA_FLOOR, SEA_FLOOR};

    (void)state;
    cells.time.count = 0;
    cells.value = thickness_of;
    cells.salinity_name = "cell_thickness";
    cells.salinity_units = "m";
    only.only[SEA_SALINITY] = true;
    thickness = sea_write(&cells, &only, "thickness.nc");
    for (size_t i = 0; i < SEAS; i++)
        expected[i] = 20.0 + 100.0 + 150.0 + 50.0 * (double)(i + 1);
    run_well("change", "--earlier", path, "--later", path, STEPS, "--thickness", thickness, LINEAR_RUN);
    assert_columns(expected, flags);
    assert_non_null(strstr(file_text(result_path(), "inputs"), "thickness.nc"));
}

/* One of six equal columns is incomplete in the layer: sums over five, filled sums 6/5 of them. */
static void test_filled_coverage(void **state)
{
    static const presence known = {{{"xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx", "xxxxxx"},
                                    {"xxxxxx", "xxxxxx", "xxx...", "xxxxxx", "xxxxxx", "xxxxxx"}}};
    sea of = sea_of_presence(&known);
    sea_form form = form_plain();
    const char *path = sea_write(&of, &form, "filled_data.nc");
    double area = ring_area(-10, 10) * 60.0 / 360.0, height = fraction_of(EARLIER, LATER) * 700.0;

    (void)state;
    run_well("change", "--earlier", path, "--later", path, STEPS, "--layers", "0..700", "--fill-coverage",
             LINEAR_RUN);
    assert_relative(region_value(result_path(), "region_area", "whole_domain"), area, 1e-12);
    assert_relative(region_value(result_path(), "region_covered_area", "whole_domain"), area * 5.0 / 6.0,
                    1e-12);
    /* 4e-12: two volumes that differ by 1e-4 of themselves */
    assert_relative(region_value(result_path(), "region_mean_steric_height_change", "whole_domain"), height,
                    4e-12);
    assert_relative(region_value(result_path(), "region_steric_volume_change", "whole_domain"),
                    height * area * 5.0 / 6.0, 4e-12);
    assert_relative(region_value(result_path(), "region_filled_steric_volume_change", "whole_domain"),
                    height * area, 4e-12);
    assert_relative(region_value(result_path(), "region_filled_sea_level_equivalent", "whole_domain"),
                    height * area / 3.625e14, 4e-12);
}

static int begin(void **state)
{
    (void)state;
    work_in("epochs");
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
        cmocka_unit_test(test_a_lost_september_changes_nothing),
        cmocka_unit_test(test_unequal_months_are_told),
        cmocka_unit_test(test_windows_include_both_ends),
        cmocka_unit_test(test_least_times),
        cmocka_unit_test(test_integrals_over_a_strong_season),
        cmocka_unit_test(test_ends_of_columns),
        cmocka_unit_test(test_sea_floor_and_bottom_reach),
        cmocka_unit_test(test_mask_of_land),
        cmocka_unit_test(test_cell_areas_of_a_file),
        cmocka_unit_test(test_thickness_of_cells),
        cmocka_unit_test(test_filled_coverage),
    };

    return cmocka_run_group_tests(tests, begin, end);
}
