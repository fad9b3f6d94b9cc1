/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * One invented sea, the Tarneth Sea, in every form in which files come, must give the same result: the same
 * bits where the stored values are the same.  And the same bits for any number of workers and any memory.
 */
#include "program/science.h"

#include <netcdf.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { TIMES = 6, LEVELS = 9, ROWS = 7, COLUMNS = 12 };

static const double times[TIMES] = {15.5, 45.0, 74.5, 105.0, 135.5, 166.0};
static const double time_bounds[2 * TIMES] = {0, 31, 31, 59, 59, 90, 90, 120, 120, 151, 151, 181};
static const double depths[LEVELS] = {5, 15, 30, 60, 120, 250, 500, 1000, 2000};
static const double depth_bounds[2 * LEVELS] = {0,   10,  10,  20,  20,  40,  40,   80,   80,
                                                160, 160, 340, 340, 660, 660, 1340, 1340, 2660};
static const double latitudes[ROWS] = {-30, -20, -10, 0, 10, 20, 30};
/* all round, from the date line's near: every branch cuts elsewhere */
static const double longitudes[COLUMNS] = {15, 45, 75, 105, 135, 165, 195, 225, 255, 285, 315, 345};

/*
 * Multiples of 1/8, so that float, double and packed short integers hold the same values.  Columns end at
 * different levels, some are land.
 */
static double tarneth(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    size_t wet = (3 * j + 5 * i) % (LEVELS + 3);

    (void)of;
    if (k >= wet)
        return (double)NAN;
    if (quantity == SEA_TEMPERATURE)
        return 22.0 - 2.125 * (double)k + 0.125 * (double)((7 * i + 3 * j + 11 * t) % 13) +
               (t >= 3 ? 0.75 - 0.125 * (double)((k + i) % 5) : 0.0);
    return 34.0 + 0.125 * (double)((5 * i + j + 2 * k + t) % 11) + (t >= 3 ? 0.125 * (double)(j % 3) : 0.0);
}

static sea tarneth_sea(void)
{
    sea of = sea_plain();

    of.time = (sea_axis){TIMES, times, time_bounds};
    of.depth = (sea_axis){LEVELS, depths, depth_bounds};
    of.latitude = (sea_axis){ROWS, latitudes, NULL};
    of.longitude = (sea_axis){COLUMNS, longitudes, NULL};
    of.value = tarneth;
    return of;
}

/* ---- comparing two results ---- */

enum { MOST_PLACES = 128 };

/* An open result, and the order of its rows and columns that makes latitude and longitude (modulo 360) rise.
 */
typedef struct result {
    int file;
    size_t rows, columns, row[MOST_PLACES], column[MOST_PLACES];
} result;

static void rising(int file, const char *axis, bool circle, size_t *order, size_t *count)
{
    field of = read_field_of(file, axis);

    *count = of.count;
    assert_true(of.count <= MOST_PLACES);
    for (size_t i = 0; i < of.count; i++) {
        if (circle)
            of.value[i] -= 360.0 * floor(of.value[i] / 360.0);
        order[i] = i;
    }
    for (size_t i = 1; i < of.count; i++)
        for (size_t k = i; k > 0 && of.value[order[k - 1]] > of.value[order[k]]; k--) {
            size_t other = order[k];

            order[k] = order[k - 1];
            order[k - 1] = other;
        }
    field_free(&of);
}

static result open_result(const char *path)
{
    result of;

    must(nc_open(path, NC_NOWRITE, &of.file));
    rising(of.file, "lat", false, of.row, &of.rows);
    rising(of.file, "lon", true, of.column, &of.columns);
    return of;
}

/* A variable; of a map the last two dimensions in rising order. */
static field read_turned(const result *of, int variable)
{
    char name[NC_MAX_NAME + 1];
    int rank, dimension[NC_MAX_VAR_DIMS], lon;
    field read;
    double *turned;

    must(nc_inq_var(of->file, variable, name, NULL, &rank, dimension, NULL));
    must(nc_inq_dimid(of->file, "lon", &lon));
    read = read_field_of(of->file, name);
    if (rank < 2 || dimension[rank - 1] != lon)
        return read;
    turned = malloc((read.count + 1) * sizeof(double));
    assert_non_null(turned);
    for (size_t n = 0; n < read.count; n++) {
        size_t plane = n / (of->rows * of->columns), j = n / of->columns % of->rows, i = n % of->columns;

        turned[n] = read.value[(plane * of->rows + of->row[j]) * of->columns + of->column[i]];
    }
    free(read.value);
    read.value = turned;
    return read;
}

static bool is_place(const char *name)
{
    static const char *const places[] = {"lat", "lon", "lat_bounds", "lon_bounds", "region_name"};

    for (size_t i = 0; i < sizeof places / sizeof places[0]; i++)
        if (strcmp(name, places[i]) == 0)
            return true;
    return false;
}

/* Numbers apart by no more than `tolerance` of the greatest of the variable. */
static void assert_same_numbers(const field *a, const field *b, double tolerance, const char *name,
                                const char *what)
{
    double greatest = 0.0;

    assert_int_equal(a->count, b->count);
    for (size_t i = 0; i < a->count; i++)
        if (isfinite(a->value[i]))
            greatest = fmax(greatest, fabs(a->value[i]));
    for (size_t i = 0; i < a->count; i++)
        if (!(isnan(a->value[i]) && isnan(b->value[i])) &&
            !(fabs(a->value[i] - b->value[i]) <= tolerance * greatest))
            fail_msg("%s: %s[%zu] is %.17g, should be %.17g", what, name, i, b->value[i], a->value[i]);
}

/* Two results with the same variables and, where tolerance is 0, the same bits. */
static void assert_same_result(const char *one, const char *other, double tolerance, const char *what)
{
    result a = open_result(one), b = open_result(other);
    int count, count_b, compared = 0;

    must(nc_inq_nvars(a.file, &count));
    must(nc_inq_nvars(b.file, &count_b));
    assert_int_equal(count, count_b);
    for (int n = 0; n < count; n++) {
        char name[NC_MAX_NAME + 1];
        int variable;
        field of_a, of_b;

        must(nc_inq_varname(a.file, n, name));
        must(nc_inq_varid(b.file, name, &variable));
        if (is_place(name))
            continue;
        of_a = read_turned(&a, n);
        of_b = read_turned(&b, variable);
        assert_same_numbers(&of_a, &of_b, tolerance, name, what);
        compared++;
        field_free(&of_a);
        field_free(&of_b);
    }
    must(nc_close(a.file));
    must(nc_close(b.file));
    assert_true(compared > 30);
}

#define CHANGE_OPTIONS                                                                                       \
    "--earlier-step", "1..3", "--later-step", "4..6", "--layers", "0..200,200..bottom", "--attribution",     \
        "earlier", "--replace", "--quiet"

static const char *plain(void)
{
    return in_folder("plain_change.nc");
}

static void assert_like_plain(const char *path, double tolerance, const char *what)
{
    run_well("change", "--earlier", path, "--later", path, "--output", in_folder("change.nc"),
             CHANGE_OPTIONS);
    assert_same_result(plain(), in_folder("change.nc"), tolerance, what);
}

/* ---- forms ---- */

/* The plain form itself, and that the comparison can fail: a sea that differs by 1/8 K in one cell. */
static double tarneth_disturbed(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    return tarneth(of, quantity, t, k, j, i) +
           (quantity == SEA_TEMPERATURE && t == 4 && k == 2 && j == 3 && i == 7 ? 0.125 : 0.0);
}

static void test_plain_form_and_a_disturbed_one(void **state)
{
    sea of = tarneth_sea();
    sea_form form = form_plain();
    field a, b;
    size_t differ = 0;
    const char *path = sea_write(&of, &form, "plain.nc");

    (void)state;
    run_well("change", "--earlier", path, "--later", path, "--output", plain(), CHANGE_OPTIONS);
    of.value = tarneth_disturbed;
    path = sea_write(&of, &form, "disturbed.nc");
    run_well("change", "--earlier", path, "--later", path, "--output", in_folder("change.nc"),
             CHANGE_OPTIONS);
    a = read_field(plain(), "thermosteric_height_change");
    b = read_field(in_folder("change.nc"), "thermosteric_height_change");
    for (size_t i = 0; i < a.count; i++)
        differ += !(isnan(a.value[i]) && isnan(b.value[i])) && fabs(a.value[i] - b.value[i]) > 0.0;
    assert_int_equal(differ, 1);
    field_free(&a);
    field_free(&b);
}

typedef struct named_form {
    const char *name, *file;
    sea_form form;
} named_form;

#define FORM .type = NC_DOUBLE, .scale = 1.0, .order = "tzyx", .west_limit = -1e9

static const named_form forms[] = {
    {"64-bit offset", "f01.nc", {FORM, .mode = NC_64BIT_OFFSET}},
    {"CDF-5", "f02.nc", {FORM, .mode = NC_64BIT_DATA}},
    {"NetCDF-4, contiguous", "f03.nc", {FORM, .mode = NC_NETCDF4}},
    {"NetCDF-4, classic model", "f04.nc", {FORM, .mode = NC_NETCDF4 | NC_CLASSIC_MODEL}},
    {"slices, deflated", "f05.nc", {FORM, .mode = NC_NETCDF4, .chunk = {1, 1, 99, 99}, .deflate = 4}},
    {"blocks, deflated", "f06.nc", {FORM, .mode = NC_NETCDF4, .chunk = {1, 4, 3, 5}, .deflate = 1}},
    {"columns, deflated", "f07.nc", {FORM, .mode = NC_NETCDF4, .chunk = {6, 9, 1, 1}, .deflate = 1}},
    {"the library's chunks, deflated", "f08.nc", {FORM, .mode = NC_NETCDF4, .deflate = 2}},
    {"blocks, not packed", "f09.nc", {FORM, .mode = NC_NETCDF4, .chunk = {2, 2, 4, 4}}},
    {"in a group", "f10.nc", {FORM, .mode = NC_NETCDF4, .group = "sea"}},
    {"Zarr", "f11.zarr", {FORM, .mode = NC_NETCDF4, .zarr = "file"}},
    {"Zarr, chunked", "f12.zarr", {FORM, .mode = NC_NETCDF4, .zarr = "file", .chunk = {1, 4, 3, 5}}},
    {"from the bottom up", "f13.nc", {FORM, .levels_up = true}},
    {"from the north down", "f14.nc", {FORM, .rows_down = true}},
    {"both, in blocks",
     "f15.nc",
     {FORM, .mode = NC_NETCDF4, .levels_up = true, .rows_down = true, .chunk = {1, 4, 3, 5}, .deflate = 1}},
    {"depth fastest", "f20.nc", {.type = NC_DOUBLE, .scale = 1.0, .west_limit = -1e9, .order = "tyxz"}},
    {"depth fastest, deflated",
     "f21.nc",
     {.type = NC_FLOAT, .scale = 1.0, .west_limit = -1e9, .order = "yxtz", .mode = NC_NETCDF4, .deflate = 1}},
    {"all dimensions back to front",
     "f22.nc",
     {.type = NC_DOUBLE, .scale = 1.0, .west_limit = -1e9, .order = "xyzt"}},
    {"time fastest, deflated",
     "f23.nc",
     {.type = NC_FLOAT, .scale = 1.0, .west_limit = -1e9, .order = "zyxt", .mode = NC_NETCDF4, .deflate = 1}},
    {"rows and columns turned",
     "f24.nc",
     {.type = NC_DOUBLE, .scale = 1.0, .west_limit = -1e9, .order = "tzxy"}},
    {"-180..180", "f30.nc", {.type = NC_DOUBLE, .scale = 1.0, .west_limit = -180, .order = "tzyx"}},
    {"0..360", "f31.nc", {.type = NC_DOUBLE, .scale = 1.0, .west_limit = 0, .order = "tzyx"}},
    {"from 100 east", "f32.nc", {.type = NC_DOUBLE, .scale = 1.0, .west_limit = 100, .order = "tzyx"}},
    {"float", "f40.nc", {.type = NC_FLOAT, .scale = 1.0, .west_limit = -1e9, .order = "tzyx"}},
    {"float, slices, deflated",
     "f41.nc",
     {.type = NC_FLOAT,
      .scale = 1.0,
      .west_limit = -1e9,
      .order = "tzyx",
      .mode = NC_NETCDF4,
      .chunk = {1, 1, 99, 99},
      .deflate = 5}},
    {"packed short",
     "f42.nc",
     {.type = NC_SHORT, .scale = 0.125, .offset = 16, .west_limit = -1e9, .order = "tzyx"}},
    {"packed short, blocks, deflated",
     "f43.nc",
     {.type = NC_SHORT,
      .scale = 0.125,
      .offset = 16,
      .west_limit = -180,
      .order = "tzyx",
      .mode = NC_NETCDF4,
      .chunk = {1, 4, 3, 5},
      .deflate = 4,
      .rows_down = true,
      .levels_up = true}},
};

/* The stored values are the same numbers in all of these, so that not a bit may differ. */
static void test_every_form(void **state)
{
    sea of = tarneth_sea();

    (void)state;
    for (size_t f = 0; f < sizeof forms / sizeof forms[0]; f++)
        assert_like_plain(sea_write(&of, &forms[f].form, forms[f].file), 0.0, forms[f].name);
}

/*
 * Kelvins: 273.15 is no sum of powers of two, so that a temperature is off by 3e-14 K.  The maps round to
 * float (6e-8, so that one step of 1.2e-7 may show), totals hold changes of 0.1 K or more to 1e-12.
 */
static void test_kelvin(void **state)
{
    sea of = tarneth_sea();
    sea_form form = form_plain();

    (void)state;
    form.kelvin = true;
    assert_like_plain(sea_write(&of, &form, "kelvin.nc"), 1.2e-7, "kelvin");
    for (int r = 0; r < 2; r++) {
        const char *name = r == 0 ? "region_heat_content_change" : "region_steric_volume_change";

        assert_relative(region_value(in_folder("change.nc"), name, "whole_domain"),
                        region_value(plain(), name, "whole_domain"), 1e-12);
    }
}

static void test_temperature_and_salinity_in_two_files(void **state)
{
    sea of = tarneth_sea();
    sea_form form = form_plain();
    const char *warm, *salt;

    (void)state;
    form.only[SEA_TEMPERATURE] = true;
    warm = sea_write(&of, &form, "only_temperature.nc");
    form.only[SEA_TEMPERATURE] = false;
    form.only[SEA_SALINITY] = true;
    salt = sea_write(&of, &form, "only_salinity.nc");
    run_well("change", "--earlier", warm, "--earlier", salt, "--later", salt, "--later", warm, "--output",
             in_folder("change.nc"), CHANGE_OPTIONS);
    assert_same_result(plain(), in_folder("change.nc"), 0.0, "two files");
}

/* A file a month, named so that the alphabet has another order than time has. */
static void write_months(const char *stem)
{
    static const char letters[] = "fbdaec";
    sea of = tarneth_sea();
    sea_form form = form_plain();

    for (size_t t = 0; t < TIMES; t++) {
        char name[64];

        snprintf(name, sizeof name, "%s_%c.nc", stem, letters[t]);
        form.first_time = t;
        form.time_count = 1;
        sea_write(&of, &form, name);
    }
}

static void test_many_files_by_pattern(void **state)
{
    (void)state;
    write_months("month");
    assert_like_plain(in_folder("month_*.nc"), 0.0, "a pattern");
}

static void test_many_files_by_list(void **state)
{
    char list[4096] = "# the months of the Tarneth Sea\n", argument[2048];

    (void)state;
    write_months("listed");
    for (const char *c = "abcdef"; *c != '\0'; c++) {
        char name[64];

        snprintf(name, sizeof name, "listed_%c.nc", *c);
        strncat(list, in_folder(name), sizeof list - strlen(list) - 1);
        strncat(list, "\n", sizeof list - strlen(list) - 1);
    }
    write_text("months.txt", list);
    snprintf(argument, sizeof argument, "@%s", in_folder("months.txt"));
    assert_like_plain(argument, 0.0, "a list");
}

/* Each epoch from files of its own: no steps are needed. */
static void test_epochs_in_files_of_their_own(void **state)
{
    sea of = tarneth_sea();
    sea_form form = form_plain();
    const char *earlier, *later;

    (void)state;
    form.time_count = 3;
    earlier = sea_write(&of, &form, "earlier.nc");
    form.first_time = 3;
    later = sea_write(&of, &form, "later.nc");
    run_well("change", "--earlier", earlier, "--later", later, "--layers", "0..200,200..bottom",
             "--attribution", "earlier", "--replace", "--output", in_folder("change.nc"));
    assert_same_result(plain(), in_folder("change.nc"), 0.0, "files of their own");
}

/* ---- workers and memory ---- */

enum { BIG_LEVELS = 12, BIG_ROWS = 48, BIG_COLUMNS = 96 };

/* Smooth and of many digits, so that an order of summation would show. */
static double wide_sea(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    double x = (double)i / BIG_COLUMNS, y = (double)j / BIG_ROWS, z = of->depth.centre[k];

    if ((i * 7 + j * 5) % 31 < 4 || z > 6000.0 * (1.0 - y * x))
        return (double)NAN;
    if (quantity == SEA_TEMPERATURE)
        return 2.0 + 20.0 * exp(-z / 600.0) * cos(y - 0.4) + 0.3 * sin(9.0 * x + (double)t) +
               (t > 0 ? 0.4 * exp(-z / 300.0) * cos(7.0 * x * y) : 0.0);
    return 34.5 + 0.8 * exp(-z / 400.0) * sin(4.0 * y + x) + (t > 0 ? 0.05 * sin(5.0 * x) : 0.0);
}

static const char *write_wide_sea(const char *name, const sea_form *form)
{
    static double latitude[BIG_ROWS], longitude[BIG_COLUMNS], depth[BIG_LEVELS], time[2] = {0.5, 366.0 + 0.5};
    sea of = sea_plain();

    for (size_t j = 0; j < BIG_ROWS; j++)
        latitude[j] = -70.5 + 3.0 * (double)j;
    for (size_t i = 0; i < BIG_COLUMNS; i++)
        longitude[i] = 1.875 + 3.75 * (double)i;
    for (size_t k = 0; k < BIG_LEVELS; k++)
        depth[k] = 4.0 + 37.0 * (double)(k * k);
    of.time = (sea_axis){2, time, NULL};
    of.depth = (sea_axis){BIG_LEVELS, depth, NULL};
    of.latitude = (sea_axis){BIG_ROWS, latitude, NULL};
    of.longitude = (sea_axis){BIG_COLUMNS, longitude, NULL};
    of.value = wide_sea;
    return sea_write(&of, form, name);
}

/* How the grid was cut, in the words of the log. */
static void copy_cut(char cut[128])
{
    char line[1024];
    FILE *log = fopen(in_folder("wide.log"), "r");

    cut[0] = '\0';
    assert_non_null(log);
    while (fgets(line, sizeof line, log) != NULL) {
        const char *found = strstr(line, "\"tile_rows\"");

        if (found != NULL)
            snprintf(cut, 128, "%.*s", (int)strcspn(found, "}"), found);
    }
    fclose(log);
    assert_string_not_equal(cut, "");
}

static void run_wide(const char *path, const char *workers, const char *memory, const char *output)
{
    remove(in_folder("wide.log"));
    run_well("change", "--earlier", path, "--later", path, "--earlier-step", "1", "--later-step", "2",
             "--layers", "0..300,300..bottom", "--threads", workers, "--memory", memory, "--output",
             in_folder(output), "--replace", "--attribution", "linear", "--quiet", "--log",
             in_folder("wide.log"));
}

static void assert_same_wide(const char *what)
{
    assert_same_result(in_folder("wide_reference.nc"), in_folder("wide.nc"), 0.0, what);
}

static void test_same_bits_for_workers_and_memory(void **state)
{
    static const char *const workers[] = {"2", "3", "7"};
    sea_form slices = form_plain(), blocks = form_plain(), classic = form_plain();
    const char *paths[3];
    char wide[128], narrow[128];

    (void)state;
    slices.mode = blocks.mode = NC_NETCDF4;
    slices.deflate = blocks.deflate = 1;
    memcpy(slices.chunk, (size_t[4]){1, 1, BIG_ROWS, BIG_COLUMNS}, sizeof slices.chunk);
    memcpy(blocks.chunk, (size_t[4]){1, 5, 10, 17}, sizeof blocks.chunk);
    paths[0] = write_wide_sea("wide_classic.nc", &classic);
    paths[1] = write_wide_sea("wide_slices.nc", &slices);
    paths[2] = write_wide_sea("wide_blocks.nc", &blocks);
    run_wide(paths[0], "1", "2G", "wide_reference.nc");
    copy_cut(wide);
    for (size_t w = 0; w < sizeof workers / sizeof workers[0]; w++) {
        run_wide(paths[w], workers[w], "2G", "wide.nc");
        assert_same_wide(workers[w]);
        run_wide(paths[(w + 1) % 3], workers[w], "1M", "wide.nc");
        copy_cut(narrow);
        assert_string_not_equal(wide, narrow); /* else the check would be of nothing */
        assert_null(strstr(narrow, "\"tile_rows\":48"));
        assert_same_wide(narrow);
    }
}

static int begin(void **state)
{
    (void)state;
    work_in("encodings");
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
        cmocka_unit_test(test_plain_form_and_a_disturbed_one),
        cmocka_unit_test(test_every_form),
        cmocka_unit_test(test_kelvin),
        cmocka_unit_test(test_temperature_and_salinity_in_two_files),
        cmocka_unit_test(test_many_files_by_pattern),
        cmocka_unit_test(test_many_files_by_list),
        cmocka_unit_test(test_epochs_in_files_of_their_own),
        cmocka_unit_test(test_same_bits_for_workers_and_memory),
    };

    return cmocka_run_group_tests(tests, begin, end);
}
