/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * `stericol inspect` on small files of an invented sea.  Every number expected follows by hand from the
 * formulas below, whose terms are multiples of 1/32, so that floats hold them exactly and sums of them are
 * exact too.
 */
#include "program/run.h"
#include "support/testing.h"

#include <jansson.h>
#include <netcdf.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define must(call)                                                                                           \
    do {                                                                                                     \
        int must_status_ = (call);                                                                           \
        if (must_status_ != NC_NOERR) {                                                                      \
            print_error("%s: %s\n", #call, nc_strerror(must_status_));                                       \
            _fail(__FILE__, __LINE__);                                                                       \
        }                                                                                                    \
    } while (0)

/* ---- the files ---- */

enum { LEVELS = 3, ROWS = 8, COLUMNS = 10, CELLS = ROWS * COLUMNS, POINTS = LEVELS * CELLS, MOST_TIMES = 4 };

static const float FILL = 1e20F;

/* What a file differs in from the plain one; all zero is the plain one. */
typedef struct recipe {
    const char *temperature_unit; /* NULL: degC */
    const char *second_temperature,
        *no_name; /* another variable of that name; temperature without a standard name */
    bool no_temperature, no_salinity;
    bool packed;                                    /* int16, a quarter of a unit in a step */
    bool level_bounds, level_without_unit, heights; /* heights: negative, from the bottom up */
    bool zeros;                                     /* land is 0 instead of missing */
    bool chunked;                                   /* a chunk holds two levels of three rows */
    double added;                                   /* to every temperature */
    double constant;                                /* not 0: every temperature of the second level */
    double clip;                                    /* not 0: no temperature is below it */
    bool hole;                                      /* one column lacks the second level */
    size_t members; /* not 0: a dimension "member" in front, the temperature rising by 1 in each */
    size_t times;   /* 0: no time dimension; else monthly, months[] of 2031 */
    int months[MOST_TIMES];
    size_t rows; /* 0: ROWS */
    const char *title;
} recipe;

static char *folder;

static const char *path_of(const char *name)
{
    static char buffers[8][1024];
    static size_t next;
    char *buffer = buffers[next++ % 8];

    snprintf(buffer, sizeof buffers[0], "%s/%s", folder, name);
    return buffer;
}

/* The last column is land; the first row ends above the deepest level. */
static bool is_sea(size_t k, size_t i, size_t j)
{
    return j < COLUMNS - 1 && (i > 0 || k < LEVELS - 1);
}

static double temperature_at(size_t k, size_t i, size_t j)
{
    return 20.0 - 5.0 * (double)k + 0.5 * (double)i + 0.25 * (double)j;
}

static double salinity_at(size_t k, size_t i, size_t j)
{
    return 35.0 + 0.25 * (double)k + 0.125 * (double)i + 0.03125 * (double)j;
}

static void put_text(int file, int variable, const char *name, const char *text)
{
    if (text != NULL)
        must(nc_put_att_text(file, variable, name, strlen(text), text));
}

typedef struct made {
    int file, dimension[5], rank; /* member, time, level, row, column: those that there are */
    size_t shape[5];
} made;

static void make_axis(const made *sea, int dimension, const char *name, const char *unit, size_t count,
                      double first, double step)
{
    int variable;
    double values[16];

    for (size_t i = 0; i < count; i++)
        values[i] = first + step * (double)i;
    must(nc_def_var(sea->file, name, NC_DOUBLE, 1, &dimension, &variable));
    put_text(sea->file, variable, "units", unit);
    must(nc_put_var_double(sea->file, variable, values));
}

static void make_levels(const made *sea, const recipe *how, int dimension)
{
    static const double depth[LEVELS] = {5, 20, 100}, height[LEVELS] = {-100, -20, -5};
    static const double bounds[LEVELS][2] = {{0, 10}, {10, 50}, {50, 150}};
    int variable, both[2] = {dimension, 0}, limits;

    must(nc_def_var(sea->file, "depth", NC_DOUBLE, 1, &dimension, &variable));
    if (!how->level_without_unit)
        put_text(sea->file, variable, "units", "m");
    put_text(sea->file, variable, "positive", how->heights ? "up" : "down");
    must(nc_put_var_double(sea->file, variable, how->heights ? height : depth));
    if (!how->level_bounds)
        return;
    put_text(sea->file, variable, "bounds", "depth_limits");
    must(nc_def_dim(sea->file, "two", 2, &both[1]));
    must(nc_def_var(sea->file, "depth_limits", NC_DOUBLE, 2, both, &limits));
    must(nc_put_var_double(sea->file, limits, &bounds[0][0]));
}

/* Middles of months of 2031, with their bounds. */
static void make_times(const made *sea, const recipe *how, int dimension)
{
    static const double first_day[13] = {0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334, 365};
    double middle[MOST_TIMES], bounds[MOST_TIMES][2];
    int variable, both[2] = {dimension, 0}, limits;

    for (size_t t = 0; t < how->times; t++) {
        bounds[t][0] = first_day[how->months[t] - 1];
        bounds[t][1] = first_day[how->months[t]];
        middle[t] = 0.5 * (bounds[t][0] + bounds[t][1]);
    }
    must(nc_def_var(sea->file, "time", NC_DOUBLE, 1, &dimension, &variable));
    put_text(sea->file, variable, "units", "days since 2031-01-01");
    put_text(sea->file, variable, "calendar", "noleap");
    put_text(sea->file, variable, "bounds", "time_limits");
    must(nc_put_var_double(sea->file, variable, middle));
    must(nc_def_dim(sea->file, "ends", 2, &both[1]));
    must(nc_def_var(sea->file, "time_limits", NC_DOUBLE, 2, both, &limits));
    must(nc_put_var_double(sea->file, limits, &bounds[0][0]));
}

static float value_at(const recipe *how, bool temperature, size_t slice, size_t k, size_t i, size_t j)
{
    size_t level = how->heights ? LEVELS - 1 - k : k;
    double value =
        temperature ? temperature_at(level, i, j) + how->added + (double)slice : salinity_at(level, i, j);

    if (!is_sea(level, i, j))
        return how->zeros ? 0.0F : FILL;
    if (how->hole && level == 1 && i == 4 && j == 3)
        return FILL;
    if (temperature && how->clip > 0.0 && value < how->clip)
        value = how->clip;
    if (temperature && how->constant > 0.0 && level == 1)
        value = how->constant;
    if (how->packed)
        return (float)((value - (temperature ? 10.0 : 35.0)) * 32.0);
    return (float)value;
}

static void make_field(const made *sea, const recipe *how, const char *name, const char *standard_name,
                       const char *unit, bool temperature)
{
    static const size_t chunk[5] = {1, 1, 2, 3, COLUMNS};
    int variable;
    size_t slices = sea->rank == 3 ? 1 : sea->shape[0] * (sea->rank == 5 ? sea->shape[1] : 1);
    size_t rows = sea->shape[sea->rank - 2];
    const float packed_fill = -32000.0F;
    double step = 1.0 / 32.0, offset = temperature ? 10.0 : 35.0;
    float *values = calloc(slices * POINTS, sizeof *values);

    assert_non_null(values);
    for (size_t s = 0; s < slices; s++)
        for (size_t k = 0; k < LEVELS; k++)
            for (size_t i = 0; i < rows; i++)
                for (size_t j = 0; j < COLUMNS; j++) {
                    float value = value_at(how, temperature, s, k, i, j);

                    values[((s * LEVELS + k) * rows + i) * COLUMNS + j] =
                        how->packed && value >= FILL ? packed_fill : value;
                }
    must(
        nc_def_var(sea->file, name, how->packed ? NC_SHORT : NC_FLOAT, sea->rank, sea->dimension, &variable));
    if (how->chunked)
        must(nc_def_var_chunking(sea->file, variable, NC_CHUNKED, chunk + 5 - sea->rank));
    put_text(sea->file, variable, "standard_name", standard_name);
    put_text(sea->file, variable, "units", unit);
    if (how->packed) {
        must(nc_put_att_double(sea->file, variable, "scale_factor", NC_DOUBLE, 1, &step));
        must(nc_put_att_double(sea->file, variable, "add_offset", NC_DOUBLE, 1, &offset));
    }
    must(nc_put_att_float(sea->file, variable, "_FillValue", how->packed ? NC_SHORT : NC_FLOAT, 1,
                          how->packed ? &packed_fill : &FILL));
    must(nc_put_var_float(sea->file, variable, values));
    free(values);
}

static const char *make(const char *name, const recipe *how)
{
    const char *path = path_of(name);
    const char *standard_name = how->no_name != NULL ? NULL : "sea_water_potential_temperature";
    made sea = {.rank = 0};
    int time = -1, level, row, column;

    must(nc_create(path, NC_NETCDF4 | NC_CLOBBER, &sea.file));
    put_text(sea.file, NC_GLOBAL, "Conventions", "CF-1.10");
    put_text(sea.file, NC_GLOBAL, "title", how->title);
    if (how->members > 0) {
        must(nc_def_dim(sea.file, "member", how->members, &sea.dimension[sea.rank]));
        sea.shape[sea.rank++] = how->members;
    }
    if (how->times > 0) {
        must(nc_def_dim(sea.file, "time", how->times, &time));
        sea.dimension[sea.rank] = time;
        sea.shape[sea.rank++] = how->times;
    }
    must(nc_def_dim(sea.file, "depth", LEVELS, &level));
    must(nc_def_dim(sea.file, "lat", how->rows > 0 ? how->rows : ROWS, &row));
    must(nc_def_dim(sea.file, "lon", COLUMNS, &column));
    for (int d = 0; d < 3; d++) {
        sea.dimension[sea.rank] = d == 0 ? level : d == 1 ? row : column;
        sea.shape[sea.rank++] = d == 0 ? LEVELS : d == 1 ? (how->rows > 0 ? how->rows : ROWS) : COLUMNS;
    }
    make_axis(&sea, row, "lat", "degrees_north", sea.shape[sea.rank - 2], -30.0, 2.0);
    make_axis(&sea, column, "lon", "degrees_east", COLUMNS, 170.0, 3.0);
    make_levels(&sea, how, level);
    if (how->times > 0)
        make_times(&sea, how, time);
    if (!how->no_temperature)
        make_field(&sea, how, how->no_name != NULL ? how->no_name : "warmth", standard_name,
                   how->temperature_unit != NULL ? how->temperature_unit : "degC", true);
    if (how->second_temperature != NULL)
        make_field(&sea, how, how->second_temperature, standard_name, "degC", true);
    if (!how->no_salinity)
        make_field(&sea, how, "saltiness", "sea_water_practical_salinity", "1", false);
    must(nc_close(sea.file));
    return path;
}

/* ---- running, and reading what was said ---- */

enum { LINE_ROOM = 4096 };

static run_result inspect(const char *arguments)
{
    char line[LINE_ROOM];

    snprintf(line, sizeof line, "inspect %s", arguments);
    return run_line(line, NULL);
}

/* Runs with --table json, expects the exit code and gives the document back. */
static json_t *document(const char *path, const char *options, int code)
{
    char line[LINE_ROOM];
    json_error_t error;
    json_t *read;
    run_result result;

    snprintf(line, sizeof line, "%s %s --table json", path, options);
    result = inspect(line);
    assert_exit(&result, code);
    read = json_loads(result.output, JSON_REJECT_DUPLICATES, &error);
    if (read == NULL)
        fail_msg("not JSON, line %d: %s\n%s", error.line, error.text, result.output);
    run_free(&result);
    return read;
}

/* The member that a path like "files.0.values.levels.2.ends" leads to; fails the test where there is none. */
static const json_t *at(const json_t *from, const char *path)
{
    const json_t *here = from;
    char copy[256];

    snprintf(copy, sizeof copy, "%s", path);
    for (char *rest = copy, *key = copy; key != NULL && here != NULL; key = rest) {
        rest = strchr(key, '.');
        if (rest != NULL)
            *rest++ = '\0';
        here = json_is_array(here) ? json_array_get(here, (size_t)strtoul(key, NULL, 10))
                                   : json_object_get(here, key);
    }
    if (here == NULL)
        fail_msg("no member %s", path);
    return here;
}

static double number_at(const json_t *from, const char *path)
{
    const json_t *found = at(from, path);

    if (!json_is_number(found))
        fail_msg("%s is no number", path);
    return json_number_value(found);
}

static const char *text_at(const json_t *from, const char *path)
{
    const json_t *found = at(from, path);

    if (!json_is_string(found))
        fail_msg("%s is no text", path);
    return json_string_value(found);
}

static bool true_at(const json_t *from, const char *path)
{
    const json_t *found = at(from, path);

    if (!json_is_boolean(found))
        fail_msg("%s is not true or false", path);
    return json_is_true(found);
}

/* Whether a list of objects has one whose `key` is `word`. */
static bool lists(const json_t *list, const char *key, const char *word)
{
    for (size_t i = 0; i < json_array_size(list); i++) {
        const char *value = json_string_value(json_object_get(json_array_get(list, i), key));

        if (value != NULL && strcmp(value, word) == 0)
            return true;
    }
    return false;
}

/* Values, least, mean and greatest of a quantity on a level. */
static void assert_range(const json_t *whole, size_t level, const char *quantity, const double expected[4])
{
    static const char *const keys[4] = {"values", "minimum", "mean", "maximum"};
    char path[128];

    for (size_t i = 0; i < 4; i++) {
        snprintf(path, sizeof path, "files.0.values.levels.%zu.%s.%s", level, quantity, keys[i]);
        assert_same_number(number_at(whole, path), expected[i]);
    }
}

/* Nine columns of sea; level 2 (from 0) lacks the first row: row mean 4 instead of 3.5, column mean 4. */
static void assert_plain_values(const json_t *whole, double added)
{
    const double temperature[LEVELS][4] = {{72, 20 + added, 20 + 1.75 + 1 + added, 25.5 + added},
                                           {72, 15 + added, 15 + 1.75 + 1 + added, 20.5 + added},
                                           {63, 10.5 + added, 10 + 2 + 1 + added, 15.5 + added}};
    const double salinity[LEVELS][4] = {{72, 35, 35 + 0.4375 + 0.125, 35 + 0.875 + 0.25},
                                        {72, 35.25, 35.25 + 0.4375 + 0.125, 35.25 + 0.875 + 0.25},
                                        {63, 35.625, 35.5 + 0.5 + 0.125, 35.5 + 0.875 + 0.25}};

    for (size_t k = 0; k < LEVELS; k++) {
        assert_range(whole, k, "temperature", temperature[k]);
        assert_range(whole, k, "salinity", salinity[k]);
    }
    assert_same_number(number_at(whole, "files.0.values.cells"), 80);
    assert_same_number(number_at(whole, "files.0.values.columns"), 72);
    assert_same_number(number_at(whole, "files.0.values.surface_coverage"), 0.9);
    assert_same_number(number_at(whole, "files.0.values.levels.0.ends"), 0);
    assert_same_number(number_at(whole, "files.0.values.levels.1.ends"), 9);
    assert_same_number(number_at(whole, "files.0.values.levels.2.ends"), 63);
    assert_same_number(number_at(whole, "files.0.values.sea_floor"), 9);
    assert_same_number(number_at(whole, "files.0.values.end_of_data"), 63);
}

static void assert_refused_once(const json_t *whole, const char *part)
{
    assert_same_number(number_at(whole, "refused"), 1);
    assert_holds(text_at(whole, "files.0.refused.0"), part);
}

/* ---- a file that is as it should be ---- */

static void a_good_file_is_described(void **state)
{
    const recipe how = {.level_bounds = true, .title = "The Velmar Sea"};
    json_t *whole = document(make("good.nc", &how), "", 0);

    (void)state;
    assert_plain_values(whole, 0.0);
    assert_same_number(number_at(whole, "refused"), 0);
    assert_true(json_is_null(at(whole, "set")));
    assert_string_equal(text_at(whole, "files.0.format"), "NetCDF-4");
    assert_string_equal(text_at(whole, "files.0.conventions"), "CF-1.10");
    assert_string_equal(text_at(whole, "files.0.title"), "The Velmar Sea");
    assert_string_equal(text_at(whole, "files.0.dimensions.0.name"), "depth");
    assert_same_number(number_at(whole, "files.0.dimensions.0.length"), LEVELS);
    assert_true(lists(at(whole, "files.0.variables"), "role", "temperature"));
    assert_true(lists(at(whole, "files.0.variables"), "role", "coordinate"));
    assert_string_equal(text_at(whole, "files.0.reading.temperature.name"), "warmth");
    assert_string_equal(text_at(whole, "files.0.reading.temperature.kind"), "potential");
    assert_false(true_at(whole, "files.0.reading.temperature.kind_assumed"));
    assert_string_equal(text_at(whole, "files.0.reading.temperature.recognised_by"), "standard_name");
    assert_string_equal(text_at(whole, "files.0.reading.salinity.kind"), "practical");
    assert_string_equal(text_at(whole, "files.0.reading.vertical.coordinate"), "depth");
    assert_string_equal(text_at(whole, "files.0.reading.vertical.vertical"), "cells");
    assert_string_equal(text_at(whole, "files.0.reading.vertical.positive"), "down");
    assert_same_number(number_at(whole, "files.0.reading.vertical.last"), 100);
    assert_false(true_at(whole, "files.0.reading.vertical.upward"));
    assert_string_equal(text_at(whole, "files.0.reading.horizontal.grid"), "regular");
    assert_same_number(number_at(whole, "files.0.reading.horizontal.latitude.1"), -16);
    assert_same_number(number_at(whole, "files.0.reading.horizontal.longitude_spacing.0"), 3);
    assert_false(true_at(whole, "files.0.reading.horizontal.cyclic"));
    assert_same_number((double)json_array_size(at(whole, "files.0.suspects")), 0);
    json_decref(whole);
}

static void the_text_is_narrow_and_plain(void **state)
{
    const recipe how = {.title = "Salt \xC3\xA9 and \x1B[31mred", .times = 2, .months = {1, 2}};
    run_result result = inspect(make("plain.nc", &how));
    size_t width = 0;

    (void)state;
    assert_exit(&result, 0);
    assert_string_equal(result.errors, "");
    assert_holds(result.output, "Salt \\xC3\\xA9 and \\x1B[31mred");
    assert_holds(result.output,
                 "T warmth(time, depth, lat, lon) float [degC] sea_water_potential_temperature");
    assert_holds(result.output,
                 "temperature   warmth, recognised by standard_name: potential (as the file says)");
    assert_holds(result.output, "--vertical auto means linear");
    assert_holds(result.output,
                 "Values of 2031-01, the first of 2 times (others: --field-time, --field-step)");
    assert_holds(result.output, "\n       5.00   90.0   20.000  22.750  25.500 ");
    assert_holds(result.output,
                 "72 of 80 cells hold a column (90.0 % at the surface): 9 end above the deepest level");
    assert_holds(result.output, "Nothing would be refused.");
    assert_holds(result.output,
                 "--earlier-time FROM..TO and --later-time FROM..TO within 2031-01-01..2031-02-28");
    for (const char *c = result.output; *c != '\0'; c++) {
        assert_true(*c == '\n' || (*c >= ' ' && *c <= '~'));
        width = *c == '\n' ? 0 : width + 1;
        assert_true(width <= 100);
    }
    run_free(&result);
}

static void packed_values_are_unpacked(void **state)
{
    const recipe how = {.packed = true};
    json_t *whole = document(make("packed.nc", &how), "", 0);
    const json_t *variables = at(whole, "files.0.variables");

    (void)state;
    assert_plain_values(whole, 0.0);
    for (size_t i = 0; i < json_array_size(variables); i++) {
        const json_t *variable = json_array_get(variables, i);

        if (strcmp(text_at(variable, "name"), "warmth") == 0) {
            assert_string_equal(text_at(variable, "type"), "int16");
            assert_true(true_at(variable, "packed"));
        }
    }
    json_decref(whole);
}

/* However little memory there is, and however the file is cut into chunks. */
static void bands_and_chunks_change_nothing(void **state)
{
    const recipe how = {.chunked = true, .level_bounds = true, .title = "The Velmar Sea"};
    const char *path = make("chunks.nc", &how);
    json_t *whole = document(path, "", 0), *narrow = document(path, "--memory 2K", 0);

    (void)state;
    assert_plain_values(whole, 0.0);
    assert_true(json_equal(whole, narrow));
    assert_true(lists(at(whole, "files.0.variables"), "type", "float"));
    json_decref(whole);
    json_decref(narrow);
}

static void heights_are_turned_over(void **state)
{
    const recipe how = {.heights = true};
    json_t *whole = document(make("heights.nc", &how), "", 0);

    (void)state;
    assert_plain_values(whole, 0.0);
    assert_true(true_at(whole, "files.0.reading.vertical.upward"));
    assert_same_number(number_at(whole, "files.0.reading.vertical.first"), 5);
    json_decref(whole);
}

/* ---- times ---- */

static void times_are_described_and_averaged(void **state)
{
    const recipe how = {.times = 4, .months = {1, 2, 3, 6}};
    const char *path = make("times.nc", &how);
    json_t *whole = document(path, "", 0), *window, *steps;

    (void)state;
    assert_plain_values(whole, 0.0); /* the first alone */
    assert_same_number(number_at(whole, "files.0.values.times"), 1);
    assert_string_equal(text_at(whole, "files.0.values.time"), "2031-01");
    assert_same_number(number_at(whole, "files.0.reading.times.count"), 4);
    assert_string_equal(text_at(whole, "files.0.reading.times.calendar"), "noleap");
    assert_string_equal(text_at(whole, "files.0.reading.times.last"), "2031-06-30");
    assert_same_number(number_at(whole, "files.0.reading.times.months.5"), 1);
    assert_same_number(number_at(whole, "files.0.reading.times.months.3"), 0);
    assert_same_number((double)json_array_size(at(whole, "files.0.reading.times.holes")), 1);
    assert_string_equal(text_at(whole, "files.0.reading.times.holes.0.0"), "2031-03");
    assert_string_equal(text_at(whole, "files.0.reading.times.holes.0.1"), "2031-06");
    assert_true(lists(at(whole, "files.0.suggestions"), "option", "--earlier-time"));
    /* January (31 days) and March (31 days) with February (28) between: (0*31 + 1*28 + 2*31)/90 = 1 above
     * January. */
    window = document(path, "--field-time 2031-01..2031-03", 0);
    assert_same_number(number_at(window, "files.0.values.times"), 3);
    /* The mean of 72 values that are rounded once each: a few parts in 1e15 of 20. */
    assert_close(number_at(window, "files.0.values.levels.0.temperature.mean"), 23.75, 1e-13);
    steps = document(path, "--field-step 2", 0);
    assert_plain_values(steps, 1.0);
    json_decref(whole);
    json_decref(window);
    json_decref(steps);
}

static void windows_can_be_empty_or_wrong(void **state)
{
    const recipe how = {.times = 2, .months = {1, 2}};
    const char *path = make("windows.nc", &how);
    char line[LINE_ROOM];
    json_t *whole = document(path, "--field-time 2040..2041", 3);
    run_result result;

    (void)state;
    assert_refused_once(whole, "no time lies in --field-time 2040..2041");
    json_decref(whole);
    snprintf(line, sizeof line, "%s --field-time 2031-13..2032", path);
    result = inspect(line);
    assert_exit(&result, 2);
    run_free(&result);
    snprintf(line, sizeof line, "%s --field-time 2031..2032 --field-step 1", path);
    result = inspect(line);
    assert_exit(&result, 2);
    run_free(&result);
}

/* ---- what a file lacks, or leaves open ---- */

static void salinity_may_be_absent(void **state)
{
    const recipe how = {.no_salinity = true};
    json_t *whole = document(make("no_salinity.nc", &how), "", 0);

    (void)state;
    assert_true(json_is_null(at(whole, "files.0.reading.salinity")));
    assert_true(json_is_null(at(whole, "files.0.values.levels.0.salinity")));
    assert_true(lists(at(whole, "files.0.suggestions"), "option", "--background-salinity"));
    assert_same_number(number_at(whole, "files.0.values.levels.2.columns"), 63);
    json_decref(whole);
}

static void two_temperatures_are_a_question(void **state)
{
    const recipe how = {.second_temperature = "warmth_too"};
    const char *path = make("two.nc", &how);
    json_t *whole = document(path, "", 3);

    (void)state;
    assert_refused_once(
        whole, "2 variables could be the temperature (warmth, warmth_too); name one with --temperature");
    /* Salinity alone is still described. */
    assert_true(json_is_null(at(whole, "files.0.reading.temperature")));
    assert_string_equal(text_at(whole, "files.0.reading.salinity.name"), "saltiness");
    assert_same_number(number_at(whole, "files.0.values.levels.0.salinity.minimum"), 35);
    json_decref(whole);
    whole = document(path, "--temperature warmth_too", 0);
    assert_plain_values(whole, 0.0);
    json_decref(whole);
}

static void levels_need_a_unit(void **state)
{
    const recipe how = {.level_without_unit = true};
    const char *path = make("levels.nc", &how);
    json_t *whole = document(path, "", 3);

    (void)state;
    assert_refused_once(whole, "depth: the vertical axis has no units (values 5 to 100); say what the levels "
                               "are with --vertical-unit m or --vertical-unit dbar");
    assert_true(json_is_null(at(whole, "files.0.reading")));
    assert_same_number((double)json_array_size(at(whole, "files.0.dimensions")), 3);
    json_decref(whole);
    whole = document(path, "--vertical-unit dbar", 0);
    assert_string_equal(text_at(whole, "files.0.reading.vertical.coordinate"), "pressure");
    assert_same_number(number_at(whole, "files.0.values.levels.2.pressure"), 100);
    assert_true(lists(at(whole, "files.0.assumptions"), "level", "warning"));
    json_decref(whole);
}

static void more_dimensions_need_a_choice(void **state)
{
    const recipe how = {.members = 3};
    const char *path = make("members.nc", &how);
    json_t *whole = document(path, "", 3);

    (void)state;
    assert_holds(text_at(whole, "files.0.refused.0"), "pick one with --select member=INDEX");
    json_decref(whole);
    whole = document(path, "--select member=3", 0);
    assert_plain_values(whole, 2.0);
    json_decref(whole);
}

static void a_kind_that_is_assumed_can_be_said(void **state)
{
    const recipe how = {.no_name = "temp"};
    const char *path = make("kind.nc", &how);
    json_t *whole = document(path, "", 0);

    (void)state;
    assert_string_equal(text_at(whole, "files.0.reading.temperature.kind"), "in-situ");
    assert_true(true_at(whole, "files.0.reading.temperature.kind_assumed"));
    assert_true(lists(at(whole, "files.0.suggestions"), "option", "--temperature-kind"));
    assert_true(lists(at(whole, "files.0.assumptions"), "level", "note"));
    json_decref(whole);
    whole = document(path, "--temperature-kind potential", 0);
    assert_string_equal(text_at(whole, "files.0.reading.temperature.kind"), "potential");
    assert_false(lists(at(whole, "files.0.suggestions"), "option", "--temperature-kind"));
    json_decref(whole);
}

/* ---- values that cannot be right ---- */

static void kelvin_called_celsius_is_refused(void **state)
{
    const recipe how = {.added = 273.0};
    json_t *whole = document(make("kelvin.nc", &how), "", 3);

    (void)state;
    assert_refused_once(whole, "these look like kelvin; correct the units attribute");
    assert_holds(text_at(whole, "files.0.refused.0"), "72 of 72 values at 5 m");
    assert_holds(text_at(whole, "files.0.refused.0"), "range from 293 to 298.5");
    assert_true(true_at(whole, "files.0.values.levels.0.temperature.refused"));
    assert_same_number(number_at(whole, "files.0.values.levels.0.temperature.values"), 0);
    /* The rest is shown all the same. */
    assert_false(true_at(whole, "files.0.values.levels.0.salinity.refused"));
    assert_same_number(number_at(whole, "files.0.values.levels.0.salinity.maximum"), 36.125);
    json_decref(whole);
}

static void kelvin_called_kelvin_is_converted(void **state)
{
    const recipe how = {.added = 273.0, .temperature_unit = "K"};
    json_t *whole = document(make("real_kelvin.nc", &how), "", 0);

    (void)state;
    /* 293 K; 0 degC is 273.15 K by definition.  One subtraction of numbers near 293. */
    assert_close(number_at(whole, "files.0.values.levels.0.temperature.minimum"), 19.85, 1e-12);
    json_decref(whole);
}

static void land_written_as_zeros_is_recognised(void **state)
{
    const recipe how = {.zeros = true};
    json_t *whole = document(make("zeros.nc", &how), "", 0);

    (void)state;
    assert_plain_values(whole, 0.0); /* zeros on 8, 8 and 17 of 80 cells: a tenth or more */
    assert_same_number(number_at(whole, "files.0.values.levels.0.zeros"), 8);
    assert_same_number(number_at(whole, "files.0.values.levels.2.zeros"), 17);
    assert_true(true_at(whole, "files.0.values.levels.0.land_as_zeros"));
    assert_true(lists(at(whole, "files.0.suspects"), "what", "land_as_zeros"));
    json_decref(whole);
}

static void a_constant_level_is_suspect(void **state)
{
    const recipe how = {.constant = 12.5};
    json_t *whole = document(make("constant.nc", &how), "", 0);

    (void)state;
    assert_true(lists(at(whole, "files.0.suspects"), "what", "constant_level"));
    assert_same_number(number_at(whole, "files.0.values.levels.1.temperature.mean"), 12.5);
    assert_same_number(number_at(whole, "files.0.values.levels.1.zeros"), 0);
    json_decref(whole);
}

/* On the first level 20 + i/2 + j/4 is at most 21 in 5 + 3 + 1 of 72 cells of sea. */
static void values_cut_off_are_suspect(void **state)
{
    const recipe how = {.clip = 21.0};
    json_t *whole = document(make("clip.nc", &how), "", 0);
    const json_t *suspects = at(whole, "files.0.suspects");

    (void)state;
    assert_true(lists(suspects, "what", "repeated_extreme"));
    for (size_t i = 0; i < json_array_size(suspects); i++)
        if (strcmp(text_at(json_array_get(suspects, i), "what"), "repeated_extreme") == 0)
            assert_holds(text_at(json_array_get(suspects, i), "text"),
                         "exactly the level's least (21 in 9 of 72 at 5 m)");
    json_decref(whole);
}

static void a_hole_in_a_column_is_suspect(void **state)
{
    const recipe how = {.hole = true};
    json_t *whole = document(make("hole.nc", &how), "", 0);

    (void)state;
    assert_true(lists(at(whole, "files.0.suspects"), "what", "holes"));
    assert_same_number(number_at(whole, "files.0.values.columns_with_holes"), 1);
    assert_same_number(number_at(whole, "files.0.values.levels.1.columns"), 71);
    json_decref(whole);
}

/* ---- files that cannot be opened, and several at once ---- */

static void what_cannot_be_opened_stops_nothing(void **state)
{
    const recipe how = {.level_bounds = false};
    const char *good = make("beside.nc", &how);
    char line[LINE_ROOM];
    unsigned char bytes[600];
    size_t count;
    FILE *file = fopen(good, "rb");
    run_result result;

    (void)state;
    assert_non_null(file);
    count = fread(bytes, 1, sizeof bytes, file);
    fclose(file);
    file = fopen(path_of("cut.nc"), "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, count, file), count);
    fclose(file);
    run_write_file(folder, "words.txt", "depth temperature salinity\n0 10 35\n");
    snprintf(line, sizeof line, "%s %s %s %s", path_of("cut.nc"), path_of("words.txt"), path_of("absent.nc"),
             good);
    result = inspect(line);
    assert_exit(&result, 3);
    assert_holds(result.errors, "cut.nc: ");
    assert_holds(result.errors, "words.txt: is a text file, not NetCDF");
    assert_holds(result.errors, "absent.nc: ");
    assert_holds(result.output, "would be refused: ");
    assert_holds(result.output, "beside.nc\n====");
    assert_holds(result.output, "Nothing would be refused.");
    assert_holds(result.output, "All 4 files as one set");
    run_free(&result);
}

static void temperature_and_salinity_may_lie_in_two_files(void **state)
{
    const recipe warm = {.no_salinity = true, .times = 2, .months = {1, 2}};
    const recipe salt = {.no_temperature = true, .times = 2, .months = {1, 2}};
    const char *first = make("warm.nc", &warm), *second = make("salt.nc", &salt);
    char line[LINE_ROOM];
    json_t *whole;

    (void)state;
    snprintf(line, sizeof line, "%s %s", first, second);
    whole = document(line, "", 0);
    assert_same_number((double)json_array_size(at(whole, "files")), 2);
    assert_string_equal(text_at(whole, "set.reading.temperature.name"), "warmth");
    assert_string_equal(text_at(whole, "set.reading.salinity.name"), "saltiness");
    assert_same_number(number_at(whole, "set.reading.times.count"), 2);
    assert_same_number(number_at(whole, "set.values.levels.2.salinity.mean"), 36.125);
    json_decref(whole);
    /* A file of salinity alone is nothing. */
    whole = document(second, "", 3);
    assert_refused_once(whole, "no variable was recognised as temperature");
    json_decref(whole);
}

static void files_of_two_grids_are_no_set(void **state)
{
    const recipe one = {.times = 1, .months = {1}}, other = {.times = 1, .months = {2}, .rows = 7};
    const char *first = make("one.nc", &one), *second = make("other.nc", &other);
    char line[LINE_ROOM];
    json_t *whole;

    (void)state;
    snprintf(line, sizeof line, "%s %s", first, second);
    whole = document(line, "", 3);
    assert_same_number(number_at(whole, "refused"), 1);
    assert_same_number((double)json_array_size(at(whole, "files.0.refused")), 0);
    assert_same_number((double)json_array_size(at(whole, "set.refused")), 1);
    assert_holds(text_at(whole, "set.refused.0"), "its grid is not that of");
    json_decref(whole);
}

/* RFC 4180: lines end with CR LF, and every line has as many fields. */
static void the_table_of_levels_can_be_csv(void **state)
{
    const recipe how = {.title = "The Velmar Sea"};
    char line[LINE_ROOM];
    size_t lines = 0, fields = 0;
    run_result result;

    (void)state;
    snprintf(line, sizeof line, "%s --table csv", make("levels_table.nc", &how));
    result = inspect(line);
    assert_exit(&result, 0);
    assert_holds(result.output, "file,time,level,position,position_units,columns,cells,temperature_minimum,");
    assert_holds(result.output, ",1,5,m,72,80,20,22.75,25.5,0,0,35,35.5625,36.125,0,0,0,0\r\n");
    assert_holds(result.output, ",3,100,m,63,80,10.5,13,15.5,0,0,35.625,36.125,36.625,0,0,0,63\r\n");
    for (const char *c = result.output; *c != '\0'; c++) {
        fields += *c == ',';
        if (*c != '\n')
            continue;
        assert_int_equal(c[-1], '\r');
        assert_int_equal(fields, 18);
        fields = 0;
        lines++;
    }
    assert_int_equal(lines, 1 + LEVELS);
    run_free(&result);
}

static int make_folder(void **state)
{
    (void)state;
    folder = run_new_folder(TEST_BUILD_FOLDER, "inspect");
    return folder == NULL;
}

static int remove_folder(void **state)
{
    (void)state;
    run_remove_folder(folder);
    return 0;
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(a_good_file_is_described),
        cmocka_unit_test(the_text_is_narrow_and_plain),
        cmocka_unit_test(packed_values_are_unpacked),
        cmocka_unit_test(bands_and_chunks_change_nothing),
        cmocka_unit_test(heights_are_turned_over),
        cmocka_unit_test(times_are_described_and_averaged),
        cmocka_unit_test(windows_can_be_empty_or_wrong),
        cmocka_unit_test(salinity_may_be_absent),
        cmocka_unit_test(two_temperatures_are_a_question),
        cmocka_unit_test(levels_need_a_unit),
        cmocka_unit_test(more_dimensions_need_a_choice),
        cmocka_unit_test(a_kind_that_is_assumed_can_be_said),
        cmocka_unit_test(kelvin_called_celsius_is_refused),
        cmocka_unit_test(kelvin_called_kelvin_is_converted),
        cmocka_unit_test(land_written_as_zeros_is_recognised),
        cmocka_unit_test(a_constant_level_is_suspect),
        cmocka_unit_test(values_cut_off_are_suspect),
        cmocka_unit_test(a_hole_in_a_column_is_suspect),
        cmocka_unit_test(what_cannot_be_opened_stops_nothing),
        cmocka_unit_test(temperature_and_salinity_may_lie_in_two_files),
        cmocka_unit_test(files_of_two_grids_are_no_set),
        cmocka_unit_test(the_table_of_levels_can_be_csv),
    };

    return cmocka_run_group_tests(tests, make_folder, remove_folder);
}
