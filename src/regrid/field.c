/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "regrid/field.h"

#include "base/checked.h"

#include <assert.h>
#include <math.h>
#include <stdbool.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

static const double earth_radius = 6371007.181; /* m, authalic; H. Moritz, Geodetic Reference System 1980 */
static const double radians = 0.017453292519943295;
/* Spacings of longitudes that were stored as float differ by less than this share of themselves. */
static const double spacing_tolerance = 0.01;

enum { WORD = 64 };

/* Inside, latitude and longitude ascend; longitudes run on from the first, within 360 degrees. */
struct stericol_regrid_field {
    size_t levels, rows, columns;
    bool cyclic;
    double *depth;
    double *latitude;  /* degrees */
    double *cosine;    /* of the latitude */
    double *longitude; /* degrees */
    float *values;     /* [level][row][column] */
    /* One bit a cell, each row beginning with a word of its own; a search for the next wet cell skips 64 dry
     * ones at a time. */
    uint64_t *wet;
    size_t words;       /* a row */
    double reach_bound; /* of haversine() */
};

static size_t lowest_bit(uint64_t word)
{
    return (size_t)__builtin_ctzll(word);
}

static size_t highest_bit(uint64_t word)
{
    return (size_t)(WORD - 1 - __builtin_clzll(word));
}

/* The difference b - a in degrees, within -180 <= d <= 180. */
static double turn(double a, double b)
{
    return remainder(b - a, 360.0);
}

/* How far `to` lies east of `from`, 0 <= d < 360 degrees. */
static double eastward(double from, double to)
{
    const double d = fmod(to - from, 360.0);

    if (d >= 0.0)
        return d;
    return d + 360.0 < 360.0 ? d + 360.0 : 0.0;
}

static stericol_status refuse(stericol_context *context, const stericol_regrid_source *source,
                              const char *what)
{
    return stericol_fail(context, STERICOL_INPUT, source->file, source->variable,
                         "give a field on a regular grid of latitude and longitude", "%s", what);
}

static stericol_status check_source(stericol_context *context, const stericol_regrid_source *source)
{
    const size_t rows = source->rows, columns = source->columns;
    double direction;

    if (source->levels == 0 || rows == 0 || columns == 0)
        return refuse(context, source, "the grid is empty");
    for (size_t k = 0; k < source->levels; k++)
        if (!isfinite(source->depth[k]) || (k > 0 && !(source->depth[k] > source->depth[k - 1])))
            return refuse(context, source, "the levels do not run downward, each deeper than the last");
    direction = rows > 1 && source->latitude[1] < source->latitude[0] ? -1.0 : 1.0;
    for (size_t j = 0; j < rows; j++) {
        if (!(fabs(source->latitude[j]) <= 90.0))
            return refuse(context, source, "a latitude lies outside -90 to 90 degrees");
        if (j > 0 && !((source->latitude[j] - source->latitude[j - 1]) * direction > 0.0))
            return refuse(context, source, "the latitudes neither rise nor fall throughout");
    }
    direction = columns > 1 && turn(source->longitude[0], source->longitude[1]) < 0.0 ? -1.0 : 1.0;
    for (size_t i = 0; i < columns; i++) {
        if (!isfinite(source->longitude[i]))
            return refuse(context, source, "a longitude is missing");
        if (i > 0 && !(turn(source->longitude[i - 1], source->longitude[i]) * direction > 0.0))
            return refuse(context, source, "the longitudes neither rise nor fall throughout");
    }
    return STERICOL_OK;
}

/* Longitudes running on upwards, in the order of the field; how many are left when repeated ones are dropped;
 * cyclic or not. */
static void take_longitudes(const stericol_regrid_source *source, bool reversed, stericol_regrid_field *field)
{
    const size_t columns = source->columns;
    double widest = 0.0, running;

    running = source->longitude[reversed ? columns - 1 : 0];
    field->longitude[0] = running;
    field->columns = 1;
    for (size_t i = 1; i < columns; i++) {
        const size_t at = reversed ? columns - 1 - i : i, before = reversed ? at + 1 : at - 1;
        const double step = turn(source->longitude[before], source->longitude[at]);

        /* Kept exact where the source does not change its branch. */
        running = fabs(source->longitude[at] - source->longitude[before] - step) <= 0.0 &&
                          fabs(running - source->longitude[before]) <= 0.0
                      ? source->longitude[at]
                      : running + step;
        if (running - field->longitude[0] > 360.0 - spacing_tolerance * step)
            break;
        widest = step > widest ? step : widest;
        field->longitude[field->columns++] = running;
    }
    field->cyclic = columns > 1 && field->longitude[0] + 360.0 - field->longitude[field->columns - 1] <=
                                       widest * (1.0 + spacing_tolerance);
}

static void take_values(const stericol_regrid_source *source, bool reversed_rows, bool reversed_columns,
                        stericol_regrid_field *field)
{
    for (size_t k = 0; k < field->levels; k++) {
        for (size_t j = 0; j < field->rows; j++) {
            const size_t row = reversed_rows ? field->rows - 1 - j : j;
            const float *from = source->values + (k * field->rows + row) * source->columns;
            float *to = field->values + (k * field->rows + j) * field->columns;
            uint64_t *wet = field->wet + (k * field->rows + j) * field->words;

            for (size_t i = 0; i < field->columns; i++) {
                to[i] = from[reversed_columns ? source->columns - 1 - i : i];
                if (isfinite(to[i]))
                    wet[i / WORD] |= (uint64_t)1 << (i % WORD);
            }
        }
    }
}

/* Everything that the sizes of the source allow for; false when memory is out. */
static bool make_room(const stericol_regrid_source *source, stericol_regrid_field *field, size_t *cells)
{
    size_t planes, words;

    field->words = (source->columns - 1) / WORD + 1;
    *cells = SIZE_MAX;
    if (!stericol_multiply_sizes(source->levels, source->rows, &planes) ||
        !stericol_multiply_sizes(planes, source->columns, cells) ||
        !stericol_multiply_sizes(planes, field->words, &words))
        return false;
    field->depth = stericol_new_array(source->levels, sizeof *field->depth);
    field->latitude = stericol_new_array(source->rows, sizeof *field->latitude);
    field->cosine = stericol_new_array(source->rows, sizeof *field->cosine);
    field->longitude = stericol_new_array(source->columns, sizeof *field->longitude);
    field->values = stericol_new_array(*cells, sizeof *field->values);
    field->wet = stericol_new_array(words, sizeof *field->wet);
    return field->depth && field->latitude && field->cosine && field->longitude && field->values &&
           field->wet;
}

/* sin^2 of half the angle at the centre of the earth: grows with the distance and is exact for small ones. */
static double reach_as_haversine(double reach)
{
    const double half = reach / earth_radius / 2.0;

    /* Half-way round the globe reaches everything, the antipode too, whose 1 may round up. */
    return half >= 1.5707963267948966 ? 1.5 : sin(half) * sin(half);
}

stericol_status stericol_regrid_field_new(stericol_context *context, const stericol_regrid_source *source,
                                          stericol_regrid_field **field)
{
    stericol_regrid_field *made = NULL;
    stericol_status status;
    size_t cells = 0;

    assert(source && field && source->reach >= 0.0);
    assert(source->depth && source->latitude && source->longitude && source->values);
    *field = NULL;
    status = check_source(context, source);
    if (status != STERICOL_OK)
        return status;
    made = calloc(1, sizeof *made);
    if (!made || !make_room(source, made, &cells)) {
        stericol_regrid_field_free(made);
        return stericol_fail_memory(context, cells <= SIZE_MAX / sizeof(float) ? cells * sizeof(float) : 0,
                                    "the background field");
    }
    const bool reversed_rows = source->rows > 1 && source->latitude[1] < source->latitude[0];
    const bool reversed_columns =
        source->columns > 1 && turn(source->longitude[0], source->longitude[1]) < 0.0;

    made->levels = source->levels;
    made->rows = source->rows;
    made->reach_bound = reach_as_haversine(source->reach);
    memcpy(made->depth, source->depth, made->levels * sizeof *made->depth);
    for (size_t j = 0; j < made->rows; j++) {
        made->latitude[j] = source->latitude[reversed_rows ? made->rows - 1 - j : j];
        made->cosine[j] = cos(made->latitude[j] * radians);
    }
    take_longitudes(source, reversed_columns, made);
    take_values(source, reversed_rows, reversed_columns, made);
    *field = made;
    return STERICOL_OK;
}

void stericol_regrid_field_free(stericol_regrid_field *field)
{
    if (!field)
        return;
    free(field->depth);
    free(field->latitude);
    free(field->cosine);
    free(field->longitude);
    free(field->values);
    free(field->wet);
    free(field);
}

/* The last of `count` ascending numbers that is not above x; 0 when all are. */
static size_t last_not_above(const double *ascending, size_t count, double x)
{
    size_t low = 0, high = count;

    while (high - low > 1) {
        const size_t middle = low + (high - low) / 2;

        if (ascending[middle] <= x)
            low = middle;
        else
            high = middle;
    }
    return low;
}

/* Where a point lies among the cell centres, the same on every level. */
typedef struct place {
    double latitude, longitude; /* degrees; longitude within 360 degrees east of the first column */
    double cosine;
    size_t row, column; /* the last ones not beyond the point */
    size_t next_row, next_column;
    double north, east; /* share of the next ones */
    bool inside;        /* surrounded by centres */
} place;

static place find_place(const stericol_regrid_field *field, double latitude, double longitude)
{
    const size_t rows = field->rows, columns = field->columns;
    place at = {.latitude = latitude, .cosine = cos(latitude * radians)};
    double width;

    at.longitude = field->longitude[0] + eastward(field->longitude[0], longitude);
    at.row = last_not_above(field->latitude, rows, latitude);
    at.column = last_not_above(field->longitude, columns, at.longitude);
    at.inside = latitude >= field->latitude[0] && latitude <= field->latitude[rows - 1] &&
                (field->cyclic || at.longitude <= field->longitude[columns - 1]);
    if (!at.inside)
        return at;
    at.next_row = at.row + 1 < rows ? at.row + 1 : at.row;
    if (at.next_row != at.row)
        at.north =
            (latitude - field->latitude[at.row]) / (field->latitude[at.next_row] - field->latitude[at.row]);
    if (at.column + 1 < columns) {
        at.next_column = at.column + 1;
        width = field->longitude[at.next_column] - field->longitude[at.column];
    } else {
        at.next_column = field->cyclic ? 0 : at.column;
        width = field->longitude[0] + 360.0 - field->longitude[at.column];
    }
    if (at.next_column != at.column)
        at.east = (at.longitude - field->longitude[at.column]) / width;
    return at;
}

/* NaN when no corner is wet with a weight above zero. */
static double bilinear(const stericol_regrid_field *field, const float *level, const place *at)
{
    const double weight[4] = {(1.0 - at->north) * (1.0 - at->east), (1.0 - at->north) * at->east,
                              at->north * (1.0 - at->east), at->north * at->east};
    const float corner[4] = {level[at->row * field->columns + at->column],
                             level[at->row * field->columns + at->next_column],
                             level[at->next_row * field->columns + at->column],
                             level[at->next_row * field->columns + at->next_column]};
    double sum = 0.0, total = 0.0;

    for (size_t c = 0; c < 4; c++) {
        if (isfinite(corner[c])) {
            sum += weight[c] * (double)corner[c];
            total += weight[c];
        }
    }
    return total > 0.0 ? sum / total : (double)NAN;
}

/* The first set bit at or after `from`, the last one at or before it; SIZE_MAX when there is none. */
static size_t wet_after(const uint64_t *row, size_t words, size_t from)
{
    size_t w = from / WORD;

    if (w >= words)
        return SIZE_MAX;
    for (uint64_t word = row[w] & (UINT64_MAX << (from % WORD));; word = row[w]) {
        if (word)
            return w * WORD + lowest_bit(word);
        if (++w == words)
            return SIZE_MAX;
    }
}

static size_t wet_before(const uint64_t *row, size_t from)
{
    size_t w = from / WORD;

    for (uint64_t word = row[w] & (UINT64_MAX >> (WORD - 1 - from % WORD));; word = row[w]) {
        if (word)
            return w * WORD + highest_bit(word);
        if (w-- == 0)
            return SIZE_MAX;
    }
}

typedef struct nearest {
    double haversine; /* of the best so far, or of the reach */
    size_t row, column;
    bool found;
} nearest;

static double half_sine_squared(double degrees)
{
    const double s = sin(degrees * radians / 2.0);

    return s * s;
}

static void consider(const stericol_regrid_field *field, const place *at, size_t row, size_t column,
                     double apart, nearest *best)
{
    const double h = apart + at->cosine * field->cosine[row] *
                                 half_sine_squared(turn(at->longitude, field->longitude[column]));

    if (h < best->haversine) {
        best->haversine = h;
        best->row = row;
        best->column = column;
        best->found = true;
    }
}

/*
 * Along one row the distance grows with the difference of longitude, so only the first wet cell to the west
 * and the first to the east can be nearest.  A row does not end where the grid begins, cyclic or not: both
 * ways are tried round the circle.
 */
static void search_row(const stericol_regrid_field *field, const uint64_t *wet, const place *at, size_t row,
                       double apart, nearest *best)
{
    const uint64_t *bits = wet + row * field->words;
    size_t west = wet_before(bits, at->column), east = wet_after(bits, field->words, at->column + 1);

    if (west == SIZE_MAX && east == SIZE_MAX)
        return;
    if (west == SIZE_MAX)
        west = wet_before(bits, field->columns - 1);
    if (east == SIZE_MAX)
        east = wet_after(bits, field->words, 0);
    consider(field, at, row, west, apart, best);
    consider(field, at, row, east, apart, best);
}

/* Rows outward from the point, until the next one is farther away than the best cell found. */
static double nearest_wet(const stericol_regrid_field *field, size_t k, const place *at)
{
    const uint64_t *wet = field->wet + k * field->rows * field->words;
    nearest best = {.haversine = field->reach_bound};
    size_t below = at->row + 1, above = at->row + 1; /* rows 0..below-1 and above.. are left */

    for (;;) {
        const double down = below > 0 ? half_sine_squared(at->latitude - field->latitude[below - 1]) : 2.0;
        const double up =
            above < field->rows ? half_sine_squared(at->latitude - field->latitude[above]) : 2.0;

        if ((down < up ? down : up) > best.haversine)
            break;
        if (down <= up)
            search_row(field, wet, at, --below, down, &best);
        else
            search_row(field, wet, at, above++, up, &best);
    }
    return best.found ? (double)field->values[(k * field->rows + best.row) * field->columns + best.column]
                      : (double)NAN;
}

static double value_on_level(const stericol_regrid_field *field, size_t k, const place *at)
{
    if (at->inside) {
        const double value = bilinear(field, field->values + k * field->rows * field->columns, at);

        if (!isnan(value))
            return value;
    }
    return nearest_wet(field, k, at);
}

void stericol_regrid_level(const stericol_regrid_field *field, double depth, size_t count,
                           const double *latitude, const double *longitude, double *out)
{
    size_t upper, lower;
    double share;

    assert(field && (count == 0 || (latitude && longitude && out)));
    upper = last_not_above(field->depth, field->levels, depth);
    lower = depth > field->depth[upper] && upper + 1 < field->levels ? upper + 1 : upper;
    share =
        lower != upper ? (depth - field->depth[upper]) / (field->depth[lower] - field->depth[upper]) : 0.0;
    for (size_t i = 0; i < count; i++) {
        if (!isfinite(depth) || !isfinite(longitude[i]) || !(fabs(latitude[i]) <= 90.0)) {
            out[i] = (double)NAN;
            continue;
        }
        const place at = find_place(field, latitude[i], longitude[i]);
        double value = value_on_level(field, upper, &at);

        if (lower != upper) {
            const double deeper = value_on_level(field, lower, &at);

            if (isnan(value))
                value = deeper;
            else if (!isnan(deeper))
                value += share * (deeper - value);
        }
        out[i] = value;
    }
}
