/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "program/inspect_sea.h"

#include "support/testing.h"

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

static const float FILL = 1e20F;

static char *folder;

int inspect_make_folder(void **state)
{
    (void)state;
    folder = run_new_folder(TEST_BUILD_FOLDER, "inspect");
    return folder == NULL;
}

int inspect_remove_folder(void **state)
{
    (void)state;
    run_remove_folder(folder);
    return 0;
}

const char *inspect_folder(void)
{
    return folder;
}

const char *inspect_path(const char *name)
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

static void make_levels(const made *sea, const inspect_recipe *how, int dimension)
{
    static const double depth[LEVELS] = {5, 20, 100}, height[LEVELS] = {-100, -20, -5},
                        pressure[LEVELS] = {5, 20, 500};
    static const double bounds[LEVELS][2] = {{0, 10}, {10, 50}, {50, 150}};
    int variable, both[2] = {dimension, 0}, limits;

    must(nc_def_var(sea->file, "depth", NC_DOUBLE, 1, &dimension, &variable));
    if (!how->level_without_unit)
        put_text(sea->file, variable, "units", how->pressures ? "dbar" : "m");
    put_text(sea->file, variable, "positive", how->heights ? "up" : "down");
    must(nc_put_var_double(sea->file, variable, how->heights ? height : how->pressures ? pressure : depth));
    if (!how->level_bounds)
        return;
    put_text(sea->file, variable, "bounds", "depth_limits");
    must(nc_def_dim(sea->file, "two", 2, &both[1]));
    must(nc_def_var(sea->file, "depth_limits", NC_DOUBLE, 2, both, &limits));
    must(nc_put_var_double(sea->file, limits, &bounds[0][0]));
}

/* Middles of months of 2031, with their bounds. */
static void make_times(const made *sea, const inspect_recipe *how, int dimension)
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

static float value_at(const inspect_recipe *how, bool temperature, size_t slice, size_t k, size_t i, size_t j)
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
    if (temperature && how->shrunk > 0.0)
        value = how->clip + how->shrunk * (value - how->clip);
    if (temperature && how->cold < 0.0 && i == 4 && j == 3)
        value = how->cold;
    if (!temperature && how->salinity > 0.0)
        value = how->salinity;
    if (temperature && how->constant > 0.0 && level == 1)
        value = how->constant;
    if (how->packed)
        return (float)((value - (temperature ? 10.0 : 35.0)) * 32.0);
    return (float)value;
}

static void make_field(const made *sea, const inspect_recipe *how, const char *name,
                       const char *standard_name, const char *unit, bool temperature)
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

const char *inspect_make(const char *name, const inspect_recipe *how)
{
    const char *path = inspect_path(name);
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

run_result inspect_run(const char *arguments)
{
    char line[LINE_ROOM + sizeof "inspect "];

    snprintf(line, sizeof line, "inspect %s", arguments);
    return run_line(line, NULL);
}

/* Runs with --table json, expects the exit code and gives the document back. */
json_t *inspect_document(const char *path, const char *options, int code)
{
    char line[LINE_ROOM];
    json_error_t error;
    json_t *read;
    run_result result;

    snprintf(line, sizeof line, "%s %s --table json", path, options);
    result = inspect_run(line);
    assert_exit(&result, code);
    read = json_loads(result.output, JSON_REJECT_DUPLICATES, &error);
    if (read == NULL)
        fail_msg("not JSON, line %d: %s\n%s", error.line, error.text, result.output);
    run_free(&result);
    return read;
}

/* The member that a path like "files.0.values.levels.2.ends" leads to; fails the test where there is none. */
const json_t *inspect_at(const json_t *from, const char *path)
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

double inspect_number(const json_t *from, const char *path)
{
    const json_t *found = inspect_at(from, path);

    if (!json_is_number(found))
        fail_msg("%s is no number", path);
    return json_number_value(found);
}

const char *inspect_text_at(const json_t *from, const char *path)
{
    const json_t *found = inspect_at(from, path);

    if (!json_is_string(found))
        fail_msg("%s is no text", path);
    return json_string_value(found);
}

bool inspect_true(const json_t *from, const char *path)
{
    const json_t *found = inspect_at(from, path);

    if (!json_is_boolean(found))
        fail_msg("%s is not true or false", path);
    return json_is_true(found);
}

const json_t *inspect_listed(const json_t *list, const char *key, const char *word)
{
    for (size_t i = 0; i < json_array_size(list); i++) {
        const char *value = json_string_value(json_object_get(json_array_get(list, i), key));

        if (value != NULL && strcmp(value, word) == 0)
            return json_array_get(list, i);
    }
    return NULL;
}

bool inspect_lists(const json_t *list, const char *key, const char *word)
{
    return inspect_listed(list, key, word) != NULL;
}

/* Values, least, mean and greatest of a quantity on a level. */
static void assert_range(const json_t *whole, size_t level, const char *quantity, const double expected[4])
{
    static const char *const keys[4] = {"values", "minimum", "mean_of_cells", "maximum"};
    char path[128];

    for (size_t i = 0; i < 4; i++) {
        snprintf(path, sizeof path, "files.0.values.levels.%zu.%s.%s", level, quantity, keys[i]);
        assert_same_number(inspect_number(whole, path), expected[i]);
    }
}

/* Nine columns of sea; level 2 (from 0) lacks the first row: row mean 4 instead of 3.5, column mean 4. */
void inspect_expect_plain(const json_t *whole, double added)
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
    assert_same_number(inspect_number(whole, "files.0.values.cells"), 80);
    assert_same_number(inspect_number(whole, "files.0.values.columns"), 72);
    assert_same_number(inspect_number(whole, "files.0.values.surface_coverage"), 0.9);
    assert_same_number(inspect_number(whole, "files.0.values.levels.0.ends"), 0);
    assert_same_number(inspect_number(whole, "files.0.values.levels.1.ends"), 9);
    assert_same_number(inspect_number(whole, "files.0.values.levels.2.ends"), 63);
    assert_same_number(inspect_number(whole, "files.0.values.sea_floor"), 9);
    assert_same_number(inspect_number(whole, "files.0.values.end_of_data"), 63);
}

void inspect_expect_refusal(const json_t *whole, const char *part)
{
    assert_same_number(inspect_number(whole, "refused"), 1);
    assert_holds(inspect_text_at(whole, "files.0.refused.0"), part);
}
