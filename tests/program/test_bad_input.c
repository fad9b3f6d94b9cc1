/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What is given to the program and cannot be used.  Every case must end in the exit code of its kind with one
 * line that says what is wrong and what to do, leave nothing behind, and leave an old output as it was.
 */
#include "program/attempt.h"
#include "program/make_grid.h"

#include "support/testing.h"

#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum { PARTS = 4 };

static const char old_output[] = "not what the program writes";

/* One case: two files a.nc and b.nc that are accepted as they are, and what is done to them. */
typedef struct bad_case {
    const char *name;
    int code;
    const char *parts[PARTS];              /* of the message */
    void (*alter)(small_grid *grid);       /* both files */
    void (*alter_later)(small_grid *grid); /* b.nc alone, afterwards */
    void (*damage)(const char *folder);    /* once they are written */
    const char *options;                   /* more of them */
} bad_case;

/* A folder of its own in the build folder, removed by the caller. */
static char *begin(void)
{
    return run_new_folder(TEST_BUILD_FOLDER, "bad");
}

static void make_pair(const char *folder, void (*alter)(small_grid *), void (*alter_later)(small_grid *))
{
    small_grid grid = small_grid_plain();

    if (alter != NULL)
        alter(&grid);
    small_grid_write(&grid, folder, "a.nc");
    grid.warmer += 0.5;
    if (alter_later != NULL)
        alter_later(&grid);
    small_grid_write(&grid, folder, "b.nc");
}

/* `old`: an output is there and may be replaced. */
static bool run_case(const bad_case *one, bool old)
{
    attempt how = {0};
    char *folder = begin(), *before;
    run_result result;
    bool well;

    make_pair(folder, one->alter, one->alter_later);
    if (one->damage != NULL)
        one->damage(folder);
    if (old)
        run_write_file(folder, "out.nc", old_output);
    before = folder_state(folder);
    how.folder = folder;
    attempt_add(&how, "change --earlier a.nc --later b.nc --quiet --threads 2");
    if (one->options == NULL || strstr(one->options, "--output") == NULL)
        attempt_add(&how, old ? "--output out.nc --replace" : "--output out.nc");
    if (one->options != NULL)
        attempt_add(&how, one->options);
    result = attempt_run(&how);
    well = refused_well(&result, one->code, one->parts, one->name);
    well = folder_untouched(folder, before, one->name) && well;
    run_free(&result);
    free(before);
    run_remove_folder(folder);
    return well;
}

static void run_cases(const bad_case *cases, size_t count)
{
    size_t failed = 0;

    for (size_t i = 0; i < count; i++)
        failed += !run_case(&cases[i], i % 2 == 0);
    assert_int_equal(failed, 0);
}

#define RUN_CASES(cases) run_cases((cases), sizeof(cases) / sizeof((cases)[0]))

/* ---- files that are none, or not whole ---- */

static void join(char path[4096], const char *folder, const char *name)
{
    assert_true(snprintf(path, 4096, "%s/%s", folder, name) < 4096);
}

static void remove_earlier(const char *folder)
{
    char path[4096];

    join(path, folder, "a.nc");
    assert_int_equal(unlink(path), 0);
}

static void make_empty(const char *folder)
{
    run_write_file(folder, "a.nc", "");
}

static void make_text(const char *folder)
{
    run_write_file(folder, "a.nc", "depth temperature salinity\n0 10 35\n");
}

static void make_fifo(const char *folder)
{
    char path[4096];

    remove_earlier(folder);
    join(path, folder, "a.nc");
    assert_int_equal(mkfifo(path, 0600), 0);
}

static void cut(const char *folder, size_t per_cent)
{
    size_t count;
    unsigned char *bytes = read_bytes(folder, "a.nc", &count);

    write_bytes(folder, "a.nc", bytes, count * per_cent / 100);
    free(bytes);
}

static void cut_5(const char *folder)
{
    cut(folder, 5);
}

static void cut_75(const char *folder)
{
    cut(folder, 75);
}

static void cut_95(const char *folder)
{
    cut(folder, 95);
}

/* Only "CDF" is left of what the file was. */
static void cut_magic(const char *folder)
{
    size_t count;
    unsigned char *bytes = read_bytes(folder, "a.nc", &count);

    write_bytes(folder, "a.nc", bytes, 3);
    free(bytes);
}

static void as_netcdf4(small_grid *grid)
{
    grid->mode = NC_NETCDF4;
    grid->deflate = 1;
}

static void as_netcdf4_plain(small_grid *grid)
{
    grid->mode = NC_NETCDF4;
}

/* The number of columns in the header of a classic file becomes two thousand million. */
static void lie_about_columns(const char *folder)
{
    static const unsigned char name[] = "longitude";
    size_t count;
    unsigned char *bytes = read_bytes(folder, "a.nc", &count);

    for (size_t i = 0; i + 16 < count; i++)
        if (memcmp(bytes + i, name, sizeof name - 1) == 0) { /* padded to 12 bytes, then the length */
            memcpy(bytes + i + 12, "\x77\x35\x94\x00", 4);
            break;
        }
    write_bytes(folder, "a.nc", bytes, count);
    free(bytes);
}

static void test_files_that_are_none(void **state)
{
    static const bad_case cases[] = {
        {"absent file", 3, {"a.nc"}, .damage = remove_earlier},
        {"empty file", 3, {"a.nc"}, .damage = make_empty},
        {"text file", 3, {"a.nc"}, .damage = make_text},
        {"folder", 3, {"/proc/self"}, .options = "--earlier /proc/self"},
        {"fifo", 3, {"a.nc"}, .damage = make_fifo},
        {"device", 3, {"/dev/zero"}, .options = "--earlier /dev/zero"},
        {"address", 3, {"http"}, .options = "--earlier http://127.0.0.1:1/sea.nc"},
        {"pattern without a file", 3, {"none_"}, .options = "--earlier none_*.nc"},
        {"list that is a device", 3, {"/dev/zero"}, .options = "--earlier @/dev/zero"},
        {"list that is a data file", 3, {"a.nc"}, .options = "--earlier @a.nc"},
        {"list that is absent", 3, {"none.txt"}, .options = "--earlier @none.txt"},
        {"classic cut to 3 bytes", 3, {"a.nc"}, .damage = cut_magic},
        {"classic cut at 5 %", 3, {"a.nc"}, .damage = cut_5},
        {"classic cut at 75 %", 3, {"a.nc"}, .damage = cut_75},
        {"classic cut at 95 %", 3, {"a.nc"}, .damage = cut_95},
        {"classic with a length that lies", 3, {"a.nc"}, .damage = lie_about_columns},
        {"NetCDF-4 cut at 5 %", 3, {"a.nc"}, .alter = as_netcdf4, .damage = cut_5},
        {"NetCDF-4 cut at 75 %", 3, {"a.nc"}, .alter = as_netcdf4, .damage = cut_75},
        {"NetCDF-4 cut at 95 %", 3, {"a.nc"}, .alter = as_netcdf4, .damage = cut_95},
        {"NetCDF-4 without chunks cut at 95 %", 3, {"a.nc"}, .alter = as_netcdf4_plain, .damage = cut_95},
    };

    (void)state;
    RUN_CASES(cases);
}

/* ---- headers ---- */

static void change(small_grid *grid, const char *variable, const char *attribute, const char *text)
{
    size_t i = 0;

    while (grid->changes[i].variable != NULL)
        i++;
    assert_true(i < SMALL_GRID_CHANGES);
    grid->changes[i] = (small_grid_change){.variable = variable, .attribute = attribute, .text = text};
}

static void change_numbers(small_grid *grid, const char *variable, const char *attribute, nc_type type,
                           size_t count, const double *numbers)
{
    change(grid, variable, attribute, NULL);
    for (size_t i = 0; i < SMALL_GRID_CHANGES && grid->changes[i].variable != NULL; i++)
        if (i + 1 == SMALL_GRID_CHANGES || grid->changes[i + 1].variable == NULL) {
            grid->changes[i].type = type;
            grid->changes[i].count = count;
            memcpy(grid->changes[i].numbers, numbers, count * sizeof *numbers);
        }
}

#define ALTER(name, body)                                                                                    \
    static void name(small_grid *grid)                                                                       \
    {                                                                                                        \
        body                                                                                                 \
    }

ALTER(no_times, grid->has_time = true; grid->unlimited = true;)
ALTER(no_temperature, grid->temperature.name = NULL;)
ALTER(no_salinity, grid->salinity.name = NULL;)
ALTER(odd_unit, grid->temperature.units = "furlong";)
ALTER(unit_with_escapes, grid->temperature.units = "deg\033[31mC\n";)
ALTER(salinity_in_metres, grid->salinity.units = "m";)
ALTER(number_as_unit, change(grid, "temperature", "units", NULL);
      change_numbers(grid, "temperature", "units", NC_INT, 1, (double[]){3});)
ALTER(no_vertical_unit, change(grid, "depth", "units", NULL);)
ALTER(depth_in_kelvin, change(grid, "depth", "units", "K");)
ALTER(odd_positive, change(grid, "depth", "positive", "sideways");)
ALTER(absent_bounds, change(grid, "depth", "bounds", "no_such_limits");)
ALTER(text_scale, change(grid, "temperature", "scale_factor", "two");)
ALTER(zero_scale, change_numbers(grid, "temperature", "scale_factor", NC_DOUBLE, 1, (double[]){0});)
ALTER(nan_scale, change_numbers(grid, "temperature", "scale_factor", NC_DOUBLE, 1, (double[]){NAN});)
ALTER(two_scales, change_numbers(grid, "temperature", "scale_factor", NC_DOUBLE, 2, (double[]){1, 2});)
ALTER(characters, grid->temperature.type = NC_CHAR; grid->temperature.fill = NAN;
      grid->temperature.value = small_grid_nothing;)
ALTER(two_temperatures, grid->salinity.standard_name = "sea_water_conservative_temperature";
      grid->salinity.units = "degC";)
ALTER(one_name_for_both, change(grid, "salinity", "standard_name", "sea_water_practical_salinity");
      change(grid, "salinity", "units", "K");)
ALTER(unknown_calendar, grid->times = 2; change(grid, "time", "calendar", "of_the_kolva");)
ALTER(unknown_time_unit, grid->times = 2; grid->time_units = "days since yesterday";)
ALTER(no_time_unit, grid->times = 2; grid->time_units = NULL;)

ALTER(title_with_escapes, change(grid, "", "title", "A sea\033]0;owned\007 of\nletters\x01");
      change(grid, "", "id", "sea\033[2J"); change(grid, "temperature", "long_name", "warmth\033[31m");)
ALTER(text_as_missing_value, change(grid, "temperature", "missing_value", "-999.");)
ALTER(many_missing_values,
      change_numbers(grid, "temperature", "missing_value", NC_DOUBLE, 3, (double[]){-999, 1e20, NAN});)
ALTER(text_as_range, change(grid, "temperature", "valid_range", "-2 to 40");)

static void test_headers(void **state)
{
    static const bad_case cases[] = {
        {"no times", 3, {"a.nc", "time"}, .alter = no_times},
        {"no temperature", 3, {"a.nc", "--temperature"}, .alter = no_temperature},
        {"no salinity", 3, {"a.nc", "--salinity"}, .alter = no_salinity},
        {"a unit that is none", 3, {"a.nc", "temperature", "furlong"}, .alter = odd_unit},
        {"a unit with escapes", 3, {"a.nc", "temperature", "\\x1B"}, .alter = unit_with_escapes},
        {"salinity in metres", 3, {"a.nc", "salinity"}, .alter = salinity_in_metres},
        {"a number as unit", 3, {"a.nc", "temperature", "units"}, .alter = number_as_unit},
        {"vertical without unit", 3, {"a.nc", "depth", "--vertical-unit"}, .alter = no_vertical_unit},
        {"vertical in kelvin", 3, {"a.nc", "depth"}, .alter = depth_in_kelvin},
        {"a text as scale", 3, {"a.nc", "temperature", "scale_factor"}, .alter = text_scale},
        {"a scale of 0", 3, {"a.nc", "temperature", "scale_factor"}, .alter = zero_scale},
        {"a scale of NaN", 3, {"a.nc", "temperature", "scale_factor"}, .alter = nan_scale},
        {"two scales", 3, {"a.nc", "temperature", "scale_factor"}, .alter = two_scales},
        {"characters as temperature", 3, {"a.nc", "temperature"}, .alter = characters},
        {"two temperatures, no salinity", 3, {"a.nc", "--salinity"}, .alter = two_temperatures},
        {"salinity in kelvin", 3, {"a.nc", "salinity"}, .alter = one_name_for_both},
        {"unknown calendar",
         3,
         {"a.nc", "time", "calendar"},
         .alter = unknown_calendar,
         .options = "--earlier-time 2001..2002"},
        {"unknown unit of time",
         3,
         {"a.nc", "time"},
         .alter = unknown_time_unit,
         .options = "--earlier-time 2001..2002"},
        {"no unit of time",
         3,
         {"a.nc", "time"},
         .alter = no_time_unit,
         .options = "--earlier-time 2001..2002"},
        {"a name that is absent", 3, {"a.nc", "warmth", "temperature"}, .options = "--temperature warmth"},
        {"a name that is an axis", 3, {"a.nc", "depth"}, .options = "--temperature depth"},
        {"the name of the other", 3, {"a.nc"}, .options = "--temperature salinity"},
        {"a member of nothing", 3, {"member"}, .options = "--select member=3"},
    };

    (void)state;
    RUN_CASES(cases);
}

/* What is only odd is left aside, and said. */
static void test_odd_headers(void **state)
{
    static const struct {
        void (*alter)(small_grid *grid);
        const char *said;
    } cases[] = {
        {odd_positive, "a.nc: depth: positive is \"sideways\""},
        {absent_bounds, "a.nc: depth: its limits are not in the file"},
        {unknown_calendar, "a.nc: time: no dates: its calendar is not known"},
        {title_with_escapes, ""},
        {text_as_missing_value, ""},
        {many_missing_values, ""},
        {text_as_range, ""},
    };

    (void)state;
    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        char *folder = begin();
        attempt how = {.folder = folder};
        run_result result;

        make_pair(folder, cases[i].alter, NULL);
        attempt_add(&how, "change --earlier a.nc --later b.nc --output out.nc");
        result = attempt_run(&how);
        assert_true(no_report(&result, cases[i].said));
        assert_exit(&result, 0);
        assert_holds(result.errors, cases[i].said);
        assert_null(strchr(result.errors, '\033'));
        assert_null(strchr(result.output, '\033'));
        run_free(&result);
        run_remove_folder(folder);
    }
}

/* ---- axes and values ---- */

static const double beyond_the_pole[] = {86, 88, 90, 92}, rows_to_and_fro[] = {1, 3, 2, 4},
                    nan_row[] = {1, NAN, 3, 4}, same_columns[] = {10, 12, 12, 14, 16},
                    columns_to_and_fro[] = {10, 14, 12, 16, 18},
                    levels_to_and_fro[] = {5, 50, 40, 60, 70, 80}, nan_level[] = {5, 50, 100, NAN, 200, 300},
                    other_levels[] = {5, 105, 205, 305, 405, 600},
                    infinite_level[] = {5, 50, 100, 200, 300, INFINITY},
                    deep_levels[] = {5, 50, 100, 200, 300, 5e6}, other_rows[] = {-50, -48, -46, -44.5},
                    nan_time[] = {15, NAN}, same_times[] = {15, 15};

ALTER(latitude_beyond, grid->latitude = beyond_the_pole;)
ALTER(latitude_unsorted, grid->latitude = rows_to_and_fro;)
ALTER(latitude_nan, grid->latitude = nan_row;)
ALTER(longitude_twice, grid->longitude = same_columns;)
ALTER(longitude_unsorted, grid->longitude = columns_to_and_fro;)
ALTER(depth_unsorted, grid->depth = levels_to_and_fro;)
ALTER(depth_nan, grid->depth = nan_level;)
ALTER(depth_infinite, grid->depth = infinite_level;)
ALTER(depth_of_5000_km, grid->depth = deep_levels;)
ALTER(time_nan, grid->times = 2; grid->time = nan_time;)
ALTER(time_twice, grid->times = 2; grid->time = same_times;)
ALTER(kelvin_called_celsius, grid->warmer = 273.15;)
ALTER(celsius_called_kelvin, grid->temperature.units = "K";)
ALTER(fahrenheit_called_celsius, grid->warmer = 60;)
ALTER(salinity_thousandfold, grid->saltier = 34500;)
ALTER(all_missing, grid->temperature.value = small_grid_missing;)
ALTER(all_nan, grid->temperature.value = small_grid_missing; grid->temperature.fill = NAN;)
ALTER(salt_missing, grid->salinity.value = small_grid_missing;)
ALTER(another_column, grid->columns++;)
ALTER(another_level, grid->levels++;)
ALTER(rows_elsewhere, grid->latitude = other_rows;)
ALTER(levels_elsewhere, grid->depth = other_levels;)
ALTER(two_times, grid->times = 2;)

static double upper_half(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return k < 3 ? small_grid_temperature(grid, t, k, j, i) : (double)NAN;
}

static double lower_half(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return k < 3 ? (double)NAN : small_grid_temperature(grid, t, k, j, i);
}

static double infinite(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    (void)grid, (void)t, (void)k, (void)j, (void)i;
    return INFINITY;
}

ALTER(only_above, grid->temperature.value = upper_half;)
ALTER(only_below, grid->temperature.value = lower_half;)
ALTER(all_infinite, grid->temperature.value = infinite;)

static void test_axes_and_values(void **state)
{
    static const bad_case cases[] = {
        {"latitude beyond the pole", 3, {"a.nc", "latitude"}, .alter = latitude_beyond},
        {"latitudes to and fro", 3, {"a.nc", "latitude"}, .alter = latitude_unsorted},
        {"a latitude of NaN", 3, {"a.nc", "latitude"}, .alter = latitude_nan},
        {"a longitude twice", 3, {"a.nc", "longitude"}, .alter = longitude_twice},
        {"longitudes to and fro", 3, {"a.nc", "longitude"}, .alter = longitude_unsorted},
        {"depths to and fro", 3, {"a.nc", "depth"}, .alter = depth_unsorted},
        {"a depth of NaN", 3, {"a.nc", "depth"}, .alter = depth_nan},
        {"an infinite depth", 3, {"a.nc", "depth"}, .alter = depth_infinite},
        {"a depth of 5000 km", 3, {"a.nc", "depth"}, .alter = depth_of_5000_km},
        {"a time of NaN", 3, {"a.nc", "time"}, .alter = time_nan},
        {"a time twice", 3, {"a.nc", "time"}, .alter = time_twice},
        {"kelvin called Celsius", 3, {"a.nc", "temperature"}, .alter = kelvin_called_celsius},
        {"Celsius called kelvin", 3, {"a.nc", "temperature"}, .alter = celsius_called_kelvin},
        {"Fahrenheit called Celsius", 3, {"a.nc", "temperature"}, .alter = fahrenheit_called_celsius},
        {"salinity a thousandfold", 3, {"a.nc", "salinity"}, .alter = salinity_thousandfold},
        {"infinite values", 1, {"a.nc", "temperature"}, .alter = all_infinite},
        {"all missing", 1, {"a.nc", "temperature"}, .alter = all_missing},
        {"all NaN", 1, {"a.nc", "temperature"}, .alter = all_nan},
        {"all missing in the later epoch", 1, {"b.nc", "temperature"}, .alter_later = all_missing},
        {"all salinity missing", 1, {"a.nc", "salinity"}, .alter = salt_missing},
        {"no common depth",
         1,
         {"b.nc", "temperature", "both"},
         .alter = only_above,
         .alter_later = only_below},
        {"a window without data",
         1,
         {"a.nc", "time"},
         .alter = two_times,
         .options = "--earlier-time 1990..1991"},
        {"a step that is not there", 1, {"a.nc"}, .alter = two_times, .options = "--earlier-step 7"},
        {"another number of columns", 3, {"b.nc"}, .alter_later = another_column},
        {"another number of levels", 3, {"b.nc"}, .alter_later = another_level},
        {"other rows", 3, {"b.nc"}, .alter_later = rows_elsewhere},
        {"other levels", 3, {"b.nc"}, .alter_later = levels_elsewhere},
        {"layer below the last level", 2, {"--layers", "a.nc"}, .options = "--layers 0..100,600..700"},
        {"not enough memory", 5, {"--memory"}, .options = "--memory 1K"},
        {"cells without bounds", 3, {"a.nc", "depth"}, .options = "--vertical cells"},
    };

    (void)state;
    RUN_CASES(cases);
}

/* ---- files beside the two ---- */

static void write_profile(const char *folder)
{
    run_write_file(folder, "p.txt", "depth warming freshening\n0 1 0\n100 one 0\n");
}

static void test_companions(void **state)
{
    static const bad_case cases[] = {
        {"regions that are none", 3, {"a.nc"}, .options = "--regions a.nc"},
        {"regions that are absent", 3, {"none.nc"}, .options = "--regions none.nc"},
        {"regions in a text", 3, {"p.txt"}, .options = "--regions p.txt", .damage = write_profile},
        {"bathymetry that is none", 3, {"a.nc"}, .options = "--bathymetry a.nc"},
        {"bathymetry that is absent", 3, {"none.nc"}, .options = "--bathymetry none.nc"},
        {"mask that is none", 3, {"a.nc"}, .options = "--mask a.nc"},
        {"mask that is absent", 3, {"none.nc"}, .options = "--mask none.nc"},
        {"cell areas that are none", 3, {"a.nc"}, .options = "--cell-area a.nc"},
        {"thickness that is none", 3, {"a.nc"}, .options = "--thickness a.nc"},
        {"coordinates that are absent", 3, {"none.nc"}, .options = "--coordinates none.nc"},
        {"background that is absent", 3, {"none.nc"}, .options = "--background-salinity none.nc"},
        {"background that is a text",
         3,
         {"p.txt"},
         .options = "--background-salinity p.txt",
         .damage = write_profile},
        {"anomaly that is salinity", 3, {"a.nc"}, .options = "--salinity-anomaly a.nc"},
    };

    (void)state;
    RUN_CASES(cases);
}

/* ---- outputs ---- */

static void link_output(const char *folder)
{
    char from[4096], to[4096];

    join(from, folder, "a.nc");
    join(to, folder, "linked.nc");
    assert_int_equal(link(from, to), 0);
}

static void symlink_output(const char *folder)
{
    char to[4096];

    join(to, folder, "pointing.nc");
    assert_int_equal(symlink("b.nc", to), 0);
}

static void write_old(const char *folder)
{
    run_write_file(folder, "old.nc", old_output);
}

static void test_outputs(void **state)
{
    static const bad_case cases[] = {
        {"a folder that is absent", 4, {"none/out.nc"}, .options = "--output none/out.nc"},
        {"a file as folder", 4, {"a.nc/out.nc"}, .options = "--output a.nc/out.nc"},
        {"a folder that nobody may write to", 4, {"/proc/out.nc"}, .options = "--output /proc/out.nc"},
        {"a folder as output", 4, {"/proc"}, .options = "--output /proc --replace"},
        {"an old output", 2, {"old.nc", "--replace"}, .options = "--output old.nc", .damage = write_old},
        {"the earlier input", 2, {"a.nc", "--output"}, .options = "--output a.nc --replace"},
        {"the later input", 2, {"b.nc", "--output"}, .options = "--output b.nc --replace"},
        {"a link to an input",
         2,
         {"linked.nc"},
         .options = "--output linked.nc --replace",
         .damage = link_output},
        {"a symbolic link to an input",
         2,
         {"pointing.nc"},
         .options = "--output pointing.nc --replace",
         .damage = symlink_output},
        {"a device", 4, {"/dev/null"}, .options = "--output /dev/null --replace"},
        {"a log that cannot be opened", 4, {"none/log"}, .options = "--log none/log"},
    };

    (void)state;
    RUN_CASES(cases);
}

static void test_same_epochs_twice(void **state)
{
    attempt how = {0};
    char *folder = begin(), *before;
    run_result result;

    (void)state;
    make_pair(folder, two_times, NULL);
    before = folder_state(folder);
    how.folder = folder;
    attempt_add(&how, "change --earlier a.nc --later a.nc --quiet --output out.nc");
    result = attempt_run(&how);
    assert_true(refused_well(&result, 2, (const char *[]){"--earlier-time", NULL}, "the same epochs twice"));
    assert_true(folder_untouched(folder, before, "the same epochs twice"));
    run_free(&result);
    free(before);
    run_remove_folder(folder);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_files_that_are_none), cmocka_unit_test(test_headers),
        cmocka_unit_test(test_odd_headers),         cmocka_unit_test(test_axes_and_values),
        cmocka_unit_test(test_companions),          cmocka_unit_test(test_outputs),
        cmocka_unit_test(test_same_epochs_twice),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
