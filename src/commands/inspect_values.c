/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The look at the values: slabs of levels from the surface down, each in bands of rows, so that a level is
 * known as a whole before the next begins, and nothing is decoded twice.
 */
#include "commands/inspect_inside.h"

#include "base/checked.h"
#include "base/exact_sum.h"

#include <math.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

/* Land written as zeros: design, Robust reading; the same share as in `change`. */
static const double LAND_SHARE = 0.1;
/* Part of the memory allowed that the buffers of values may take; decoders have another. */
enum { MEMORY_PART = 4 };

/* What a point of the slab at hand is to its column. */
enum { ABSENT, PRESENT, ZERO };

typedef struct looking {
    stericol_session *session;
    stericol_inspection *inspection;
    const stericol_grid *grid;
    size_t member;                               /* the one to read, where the epoch is not averaged */
    bool told[STERICOL_INSPECT_QUANTITIES];      /* a reason why values are refused was given */
    bool averaged;                               /* all members together */
    size_t levels, rows;                         /* of a slab, of a band */
    size_t cells;                                /* of the horizontal grid */
    double *values[STERICOL_INSPECT_QUANTITIES]; /* [levels][rows][columns]; NULL where not read */
    stericol_exact_sum *sums;    /* [levels of the slab][quantities] of valid values, zeros taken as values */
    stericol_epoch_tally *tally; /* [levels of the slab] */
    unsigned char *points;       /* [levels of the slab][cells] */
    uint32_t *last;              /* [cells] the deepest level so far, from 1; 0 for none */
    unsigned char *broken;       /* [cells] */
} looking;

static void looking_free(looking *look)
{
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
        free(look->values[q]);
    free(look->sums);
    free(look->tally);
    free(look->points);
    free(look->last);
    free(look->broken);
}

/* ---- the plan ---- */

static bool fits(const looking *look, size_t levels, size_t rows, size_t budget)
{
    size_t points, bytes, more = 0, marks;

    if (!stericol_multiply_sizes(levels, rows, &points) ||
        !stericol_multiply_sizes(points, look->grid->columns * STERICOL_INSPECT_QUANTITIES * sizeof(double),
                                 &bytes) ||
        !stericol_multiply_sizes(levels, look->cells, &marks) || !stericol_add_sizes(bytes, marks, &bytes))
        return false;
    if (look->averaged)
        more = stericol_epoch_bytes(look->inspection->epoch, levels, rows);
    return stericol_add_sizes(bytes, more, &bytes) && bytes <= budget;
}

static size_t smaller(size_t a, size_t b)
{
    return a < b ? a : b;
}

/* Bands as wide as fit; where not even one multiple of the file's own pieces fits, less, which decodes twice.
 */
static void plan(looking *look, size_t budget)
{
    size_t stride;

    stericol_epoch_stride(look->inspection->epoch, &look->levels, &stride);
    look->levels = smaller(look->levels, look->grid->levels);
    stride = smaller(stride, look->grid->rows);
    if (!fits(look, look->levels, stride, budget))
        look->levels = 1;
    look->rows = stride;
    while (look->rows > 1 && !fits(look, look->levels, look->rows, budget))
        look->rows /= 2;
    while (look->rows < look->grid->rows && fits(look, look->levels, look->rows + stride, budget))
        look->rows = smaller(look->rows + stride, look->grid->rows);
}

static stericol_status looking_new(looking *look)
{
    size_t points, marks;
    bool whole = stericol_multiply_sizes(look->levels * look->rows, look->grid->columns, &points) &&
                 stericol_multiply_sizes(look->levels, look->cells, &marks);

    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES && whole; q++)
        if (look->inspection->reads[q]) {
            look->values[q] = stericol_new_doubles(points);
            whole = look->values[q] != NULL;
        }
    if (whole) {
        look->sums = stericol_new_array(look->levels * STERICOL_INSPECT_QUANTITIES, sizeof *look->sums);
        look->tally = stericol_new_array(look->levels, sizeof *look->tally);
        look->points = stericol_new_array(marks, 1);
        look->last = stericol_new_array(look->cells, sizeof *look->last);
        look->broken = stericol_new_array(look->cells, 1);
        whole = look->sums != NULL && look->tally != NULL && look->points != NULL && look->last != NULL &&
                look->broken != NULL;
    }
    return whole ? STERICOL_OK
                 : stericol_fail_memory(look->session->context, 0, "the values of a few levels");
}

/* ---- reading ---- */

static stericol_status load(looking *look, stericol_inspect_quantity quantity, size_t level0, size_t levels,
                            size_t row0, size_t rows, double *values)
{
    double *temperature = quantity == STERICOL_INSPECT_TEMPERATURE ? values : NULL;
    double *salinity = quantity == STERICOL_INSPECT_SALINITY ? values : NULL;
    stericol_context *context = look->session->context;
    stericol_epoch *epoch = look->inspection->epoch;

    memset(look->tally, 0, levels * sizeof *look->tally);
    return look->averaged ? stericol_epoch_load(context, epoch, level0, levels, row0, rows, temperature,
                                                salinity, look->tally)
                          : stericol_epoch_load_member(context, epoch, look->member, level0, levels, row0,
                                                       rows, temperature, salinity, look->tally);
}

static void take_tally(looking *look, stericol_inspect_quantity quantity, size_t level0, size_t levels)
{
    for (size_t k = 0; k < levels; k++) {
        stericol_inspect_range *range = &look->inspection->values.levels[level0 + k].range[quantity];
        const stericol_cf_tally *tally =
            quantity == STERICOL_INSPECT_TEMPERATURE ? &look->tally[k].temperature : &look->tally[k].salinity;

        range->below += tally->below;
        range->above += tally->above;
    }
}

/* One reason for each quantity is enough: what is wrong on one level is mostly wrong on the others. */
static stericol_status set_aside(looking *look, stericol_inspect_quantity quantity, stericol_status status)
{
    if (look->told[quantity] && (status == STERICOL_INPUT || status == STERICOL_NOTHING)) {
        stericol_context_clear(look->session->context);
        return STERICOL_OK;
    }
    look->told[quantity] = true;
    return stericol_inspect_refuse(look->session, look->inspection, status);
}

/*
 * One quantity of a band.  Where a slab is refused, its levels are read one by one, and those that are
 * refused again count as missing, so that the others are still shown.
 */
static stericol_status read_band(looking *look, stericol_inspect_quantity quantity, size_t level0,
                                 size_t levels, size_t row0, size_t rows, double *values)
{
    size_t plane = rows * look->grid->columns;
    stericol_status status = load(look, quantity, level0, levels, row0, rows, values);

    if (status == STERICOL_OK) {
        take_tally(look, quantity, level0, levels);
        return STERICOL_OK;
    }
    status = set_aside(look, quantity, status);
    if (levels == 1) {
        look->inspection->values.levels[level0].range[quantity].refused = true;
        for (size_t i = 0; i < plane; i++)
            values[i] = NAN;
        return status;
    }
    for (size_t k = 0; k < levels && status == STERICOL_OK; k++)
        status = read_band(look, quantity, level0 + k, 1, row0, rows, values + k * plane);
    return status;
}

/* ---- counting ---- */

static bool is_zero(double value)
{
    return value <= 0.0 && value >= 0.0;
}

/* Every valid value of a row but those of points that may be land written as zeros. */
static void count_row(const double *values, const unsigned char *points, size_t count,
                      stericol_inspect_range *range, stericol_exact_sum *sum)
{
    double total = 0.0;

    for (size_t i = 0; i < count; i++) {
        double value = values[i];

        if (!isfinite(value) || points[i] == ZERO)
            continue;
        range->valid++;
        total += value;
        if (!(value >= range->low)) {
            range->next_low = range->low;
            range->low = value;
            range->at_low = 0;
        } else if (value > range->low && !(value >= range->next_low)) {
            range->next_low = value;
        }
        if (!(value <= range->high)) {
            range->next_high = range->high;
            range->high = value;
            range->at_high = 0;
        } else if (value < range->high && !(value <= range->next_high)) {
            range->next_high = value;
        }
        range->at_low += value <= range->low;
        range->at_high += value >= range->high;
    }
    stericol_exact_sum_add(sum, total);
}

/*
 * Freezing point of sea water, degC, at practical salinity and pressure in dbar: UNESCO technical papers in
 * marine science 44 (1983), after Millero (1978); made for salinities of 4 to 40 and up to 500 dbar.
 */
static double freezing_point(double salinity, double pressure)
{
    return -0.0575 * salinity + 1.710523e-3 * salinity * sqrt(salinity) - 2.154996e-4 * salinity * salinity -
           7.53e-4 * pressure;
}

/* The pressure that lowers the freezing point of a level: to 1 % that of its depth in m. */
static double pressure_of_level(const stericol_grid *grid, size_t level)
{
    /* Where columns have depths of their own, that below the thickest ice shelves, but at the surface. */
    static const double deepest_ice = 2000.0; /* common practice, no source */

    if (grid->own_depths)
        return level == 0 ? 0.0 : deepest_ice;
    return fmax(0.0, grid->level[level]);
}

/* Temperatures so far below freezing that neither the kind of temperature nor that of salinity explains it.
 */
static void count_frozen(const looking *look, size_t level, size_t from, size_t count)
{
    static const double margin = 0.5, usual_salinity = 35.0;
    const double *temperature = look->values[STERICOL_INSPECT_TEMPERATURE];
    const double *salinity = look->values[STERICOL_INSPECT_SALINITY];
    stericol_inspect_level *found = &look->inspection->values.levels[level];
    double pressure = pressure_of_level(look->grid, level);

    for (size_t i = from; temperature != NULL && i < from + count; i++) {
        bool salt = salinity != NULL && isfinite(salinity[i]);

        if (!isfinite(temperature[i]) ||
            temperature[i] >= freezing_point(salt ? salinity[i] : usual_salinity, pressure) - margin)
            continue;
        found->frozen++;
        if (!(temperature[i] >= found->coldest))
            found->coldest = temperature[i];
    }
}

static void mark_row(const looking *look, size_t from, size_t count, unsigned char *points)
{
    for (size_t i = 0; i < count; i++) {
        bool all = true, zero = true;

        for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
            if (look->values[q] != NULL) {
                double value = look->values[q][from + i];

                all = all && isfinite(value);
                zero = zero && is_zero(value);
            }
        points[i] = !all ? ABSENT : zero ? ZERO : PRESENT;
    }
}

static stericol_status take_band(looking *look, size_t level0, size_t levels, size_t row0, size_t rows)
{
    size_t columns = look->grid->columns;
    stericol_status status = STERICOL_OK;

    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES && status == STERICOL_OK; q++)
        if (look->values[q] != NULL)
            status =
                read_band(look, (stericol_inspect_quantity)q, level0, levels, row0, rows, look->values[q]);
    for (size_t k = 0; k < levels && status == STERICOL_OK; k++)
        for (size_t row = 0; row < rows; row++) {
            size_t from = (k * rows + row) * columns;
            unsigned char *points = look->points + k * look->cells + (row0 + row) * columns;

            mark_row(look, from, columns, points);
            count_frozen(look, level0 + k, from, columns);
            for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
                if (look->values[q] != NULL)
                    count_row(look->values[q] + from, points, columns,
                              &look->inspection->values.levels[level0 + k].range[q],
                              &look->sums[k * STERICOL_INSPECT_QUANTITIES + (size_t)q]);
        }
    return status;
}

/* Zeros that are water after all. */
static void add_zeros(stericol_inspect_range *range, unsigned long long zeros)
{
    range->valid += zeros;
    if (!(range->low <= 0.0)) {
        range->next_low = range->low;
        range->low = 0.0;
        range->at_low = 0;
    } else if (!(range->next_low <= 0.0)) {
        range->next_low = 0.0;
    }
    if (!(range->high >= 0.0)) {
        range->next_high = range->high;
        range->high = 0.0;
        range->at_high = 0;
    } else if (!(range->next_high >= 0.0)) {
        range->next_high = 0.0;
    }
    range->at_low += range->low >= 0.0 ? zeros : 0;
    range->at_high += range->high <= 0.0 ? zeros : 0;
}

/* The level is known as a whole: what its zeros are, and which columns go on. */
static void settle_level(looking *look, size_t level, size_t k)
{
    stericol_inspect_values *values = &look->inspection->values;
    stericol_inspect_level *found = &values->levels[level];
    const unsigned char *points = look->points + k * look->cells;

    for (size_t i = 0; i < look->cells; i++)
        found->zeros += points[i] == ZERO;
    found->land_as_zeros = found->zeros > 0 && (double)found->zeros >= LAND_SHARE * (double)look->cells;
    for (size_t i = 0; i < look->cells; i++) {
        if (points[i] == ABSENT || (points[i] == ZERO && found->land_as_zeros))
            continue;
        found->columns++;
        if (look->last[i] == 0)
            values->late += level > 0;
        else if (look->last[i] < level)
            look->broken[i] = 1;
        look->last[i] = (uint32_t)(level + 1);
    }
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++) {
        stericol_inspect_range *range = &found->range[q];

        if (!found->land_as_zeros && found->zeros > 0)
            add_zeros(range, found->zeros);
        if (range->valid > 0)
            range->mean = stericol_exact_sum_value(&look->sums[k * STERICOL_INSPECT_QUANTITIES + (size_t)q]) /
                          (double)range->valid;
    }
}

static stericol_status look_at_levels(looking *look, size_t done, size_t whole)
{
    size_t levels = look->grid->levels;

    for (size_t level0 = 0; level0 < levels; level0 += look->levels) {
        size_t slab = smaller(look->levels, levels - level0);

        memset(look->sums, 0, slab * STERICOL_INSPECT_QUANTITIES * sizeof *look->sums);
        for (size_t row0 = 0; row0 < look->grid->rows; row0 += look->rows) {
            size_t band = smaller(look->rows, look->grid->rows - row0);
            double share =
                ((double)level0 + (double)slab * (double)row0 / (double)look->grid->rows) / (double)levels;
            stericol_status status;

            if (!stericol_session_tick(look->session, (double)done + share, (double)whole))
                return stericol_fail(look->session->context, STERICOL_INTERRUPTED, NULL, NULL, NULL,
                                     "interrupted");
            status = take_band(look, level0, slab, row0, band);
            if (status != STERICOL_OK)
                return status;
        }
        for (size_t k = 0; k < slab; k++)
            settle_level(look, level0 + k, k);
    }
    return STERICOL_OK;
}

static void count_columns(looking *look)
{
    stericol_inspect_values *values = &look->inspection->values;

    for (size_t i = 0; i < look->cells; i++) {
        if (look->last[i] == 0)
            continue;
        values->columns++;
        values->broken += look->broken[i];
        values->levels[look->last[i] - 1].ends++;
    }
}

/* The earliest member, by its place in the epoch. */
static size_t first_member(const stericol_epoch *epoch)
{
    size_t first = 0;

    for (size_t i = 1; i < stericol_epoch_member_count(epoch); i++)
        if (stericol_epoch_member_at(epoch, i)->start < stericol_epoch_member_at(epoch, first)->start)
            first = i;
    return first;
}

static stericol_inspect_level *new_levels(size_t count)
{
    stericol_inspect_level *levels = stericol_new_array(count, sizeof *levels);

    for (size_t i = 0; levels != NULL && i < count; i++)
        for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
            levels[i].range[q].low = levels[i].range[q].next_low = levels[i].range[q].mean =
                levels[i].range[q].next_high = levels[i].range[q].high = NAN;
    for (size_t i = 0; levels != NULL && i < count; i++)
        levels[i].coldest = NAN;
    return levels;
}

/* What is kept of every cell of the grid must fit, however narrow the bands are. */
static stericol_status check_room(const looking *look)
{
    double bytes = (double)look->cells * (sizeof *look->last + sizeof *look->broken + sizeof *look->points);
    double memory = (double)stericol_session_memory(look->session);

    if (bytes <= memory)
        return STERICOL_OK;
    return stericol_fail(
        look->session->context, STERICOL_MEMORY, stericol_epoch_file(look->inspection->epoch, 0, NULL), NULL,
        "give a larger --memory", "a grid of %zu by %zu cells takes %.0f MiB, and --memory allows %.0f MiB",
        look->grid->rows, look->grid->columns, ceil(bytes / 1048576.0), memory / 1048576.0);
}

stericol_status stericol_inspect_look(stericol_session *session, stericol_inspection *inspection, size_t done,
                                      size_t whole)
{
    looking look = {.session = session, .inspection = inspection};
    stericol_inspect_values *values = &inspection->values;
    stericol_status status;

    if (inspection->epoch == NULL)
        return STERICOL_OK;
    look.grid = stericol_epoch_grid(inspection->epoch);
    look.cells = look.grid->rows * look.grid->columns;
    look.averaged = stericol_settings_is_set(session->settings, "field-time") ||
                    stericol_settings_is_set(session->settings, "field-step");
    look.member = first_member(inspection->epoch);
    status = check_room(&look);
    if (status != STERICOL_OK)
        return status;
    plan(&look, stericol_session_memory(session) / MEMORY_PART);
    status = looking_new(&look);
    values->levels = new_levels(look.grid->levels);
    if (values->levels == NULL && status == STERICOL_OK)
        status = stericol_fail_memory(session->context, 0, "the levels");
    values->cells = look.cells;
    values->members = look.averaged ? stericol_epoch_member_count(inspection->epoch) : 1;
    values->first = stericol_epoch_member_at(inspection->epoch, look.member)->text;
    if (status == STERICOL_OK)
        status = look_at_levels(&look, done, whole);
    if (status == STERICOL_OK)
        count_columns(&look);
    looking_free(&look);
    stericol_inspect_take_notices(session, inspection);
    return status;
}
