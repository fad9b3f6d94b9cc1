/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Reading members, and their average: month by month, with a fixed number of running arrays.
 */
#include "input/room.h"

#include "base/checked.h"

#include <assert.h>
#include <float.h>
#include <math.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

/* A box of levels and rows, and the sizes that follow from it. */
typedef struct grid_box {
    size_t level0, levels, row0, rows;
    size_t plane, points; /* values in a level, in all */
} grid_box;

static stericol_status make_box(stericol_context *context, const stericol_epoch *epoch, size_t level0,
                                size_t levels, size_t row0, size_t rows, grid_box *box)
{
    assert(levels && rows && level0 < epoch->grid.levels && levels <= epoch->grid.levels - level0);
    assert(row0 < epoch->grid.rows && rows <= epoch->grid.rows - row0);
    *box = (struct grid_box){.level0 = level0, .levels = levels, .row0 = row0, .rows = rows};
    if (!stericol_multiply_sizes(rows, epoch->grid.columns, &box->plane) ||
        !stericol_multiply_sizes(box->plane, levels, &box->points))
        return stericol_fail_memory(context, 0, "a part of the grid");
    return STERICOL_OK;
}

static void reverse_levels(double *values, size_t levels, size_t plane)
{
    for (size_t i = 0; i < levels / 2; i++) {
        double *a = values + i * plane, *b = values + (levels - 1 - i) * plane;
        for (size_t j = 0; j < plane; j++) {
            const double kept = a[j];
            a[j] = b[j];
            b[j] = kept;
        }
    }
}

static void count_level(const double *values, size_t count, stericol_cf_tally *tally)
{
    *tally = (stericol_cf_tally){.values = count};
    for (size_t i = 0; i < count; i++) {
        tally->missing += isnan(values[i]) != 0;
        tally->below += values[i] < -DBL_MAX;
        tally->above += values[i] > DBL_MAX;
    }
}

static stericol_cf_tally *part_of(stericol_epoch_tally *tally, stericol_input_quantity quantity)
{
    return quantity == STERICOL_INPUT_TEMPERATURE ? &tally->temperature : &tally->salinity;
}

static void add_tally(stericol_cf_tally *sum, const stericol_cf_tally *part)
{
    sum->values += part->values;
    sum->missing += part->missing;
    sum->below += part->below;
    sum->above += part->above;
}

/* One quantity of one member, levels from the surface down, judged. */
static stericol_status read_member(stericol_context *context, stericol_epoch *epoch,
                                   const stericol_input_member *member, stericol_input_quantity quantity,
                                   const grid_box *box, double *values, stericol_epoch_tally *tally)
{
    const size_t source = member->source[quantity];
    const bool reversed = epoch->sources[source].variable[quantity].reversed;
    const size_t level0 = reversed ? epoch->grid.levels - box->level0 - box->levels : box->level0;
    stericol_cf_field *field;
    stericol_cf_tally whole = {0};
    stericol_status status = stericol_input_source_field(context, epoch, source, quantity, &field);
    if (status == STERICOL_OK)
        status = stericol_cf_field_read(context, field, member->step[quantity], level0, box->levels,
                                        box->row0, box->rows, values, &whole);
    if (status == STERICOL_OK && reversed)
        reverse_levels(values, box->levels, box->plane);
    for (size_t i = 0; i < box->levels && status == STERICOL_OK; i++) {
        const double *level = values + i * box->plane;
        const stericol_input_slab slab = {.member = (size_t)(member - epoch->members),
                                          .level = box->level0 + i,
                                          .row0 = box->row0,
                                          .rows = box->rows};
        stericol_cf_tally own = whole;
        if (box->levels > 1)
            count_level(level, box->plane, &own);
        if (tally)
            add_tally(part_of(&tally[i], quantity), &own);
        status = stericol_input_judge(context, epoch, quantity, &slab, level, &own);
    }
    return status;
}

/* ---- the average ---- */

enum { DOUBLE_ARRAYS = 6 };

void stericol_input_sums_free(stericol_input_sums *sums)
{
    free(sums->read);
    free(sums->total);
    free(sums->weight);
    free(sums->month);
    free(sums->month_weight);
    free(sums->valid);
    free(sums->rejected);
    *sums = (stericol_input_sums){0};
}

/* Kept from call to call: fresh memory costs a page fault for every 4 KiB, as much as the average itself. */
static stericol_status make_room(stericol_context *context, size_t points, stericol_input_sums *sums)
{
    if (sums->points == points)
        return STERICOL_OK;
    stericol_input_sums_free(sums);
    sums->read = stericol_new_array(points, sizeof(double));
    sums->total = stericol_new_array(points, sizeof(double));
    sums->weight = stericol_new_array(points, sizeof(double));
    sums->month = stericol_new_array(points, sizeof(double));
    sums->month_weight = stericol_new_array(points, sizeof(double));
    sums->valid = stericol_new_array(points, sizeof(uint32_t));
    sums->rejected = stericol_new_array(points, sizeof(double));
    if (!sums->read || !sums->total || !sums->weight || !sums->month || !sums->month_weight || !sums->valid ||
        !sums->rejected) {
        stericol_input_sums_free(sums);
        return stericol_fail_memory(context, points * (DOUBLE_ARRAYS * sizeof(double) + sizeof(uint32_t)),
                                    "the average of the epoch");
    }
    sums->points = points;
    return STERICOL_OK;
}

static void sums_clear(stericol_input_sums *sums, size_t points)
{
    memset(sums->total, 0, points * sizeof(double));
    memset(sums->weight, 0, points * sizeof(double));
    memset(sums->month, 0, points * sizeof(double));
    memset(sums->month_weight, 0, points * sizeof(double));
    memset(sums->valid, 0, points * sizeof(uint32_t));
    memset(sums->rejected, 0, points * sizeof(double));
}

static void add_member(stericol_input_sums *sums, size_t points, double length)
{
    for (size_t i = 0; i < points; i++) {
        const double value = sums->read[i];
        if (isfinite(value)) {
            sums->month[i] += length * value;
            sums->month_weight[i] += length;
            sums->valid[i]++;
        } else if (!isnan(value)) {
            sums->rejected[i] = value;
        }
    }
}

static void close_month(stericol_input_sums *sums, size_t points, double weight)
{
    for (size_t i = 0; i < points; i++) {
        if (sums->month_weight[i] > 0.0) {
            sums->total[i] += weight * (sums->month[i] / sums->month_weight[i]);
            sums->weight[i] += weight;
        }
        sums->month[i] = sums->month_weight[i] = 0.0;
    }
}

static void finish(const stericol_input_sums *sums, size_t points, double fewest, double *values)
{
    for (size_t i = 0; i < points; i++) {
        if (sums->valid[i] > 0 && (double)sums->valid[i] >= fewest)
            values[i] = sums->total[i] / sums->weight[i];
        else
            values[i] = isinf(sums->rejected[i]) ? sums->rejected[i] : (double)NAN;
    }
}

static stericol_status average(stericol_context *context, stericol_epoch *epoch,
                               stericol_input_quantity quantity, const grid_box *box,
                               stericol_input_sums *sums, double *values, stericol_epoch_tally *tally)
{
    /* So that a half of an even number of members is enough whatever the rounding. */
    static const double slack = 1e-9;
    const double fewest = epoch->request.least_times * (double)epoch->member_count - slack;
    sums_clear(sums, box->points);
    for (size_t i = 0; i < epoch->member_count; i++) {
        const stericol_input_member *member = &epoch->members[i];
        const stericol_status status = read_member(context, epoch, member, quantity, box, sums->read, tally);
        if (status != STERICOL_OK)
            return status;
        add_member(sums, box->points, member->shown.length);
        if (i + 1 == epoch->member_count || member[1].shown.month != member->shown.month)
            close_month(sums, box->points, member->shown.month ? member->shown.month_weight : 1.0);
    }
    finish(sums, box->points, fewest, values);
    return STERICOL_OK;
}

static void blank_dry(const stericol_epoch *epoch, const grid_box *box, double *values)
{
    const unsigned char *dry = epoch->grid.dry;
    if (!dry || !values)
        return;
    dry += box->row0 * epoch->grid.columns;
    for (size_t level = 0; level < box->levels; level++)
        for (size_t i = 0; i < box->plane; i++)
            if (dry[i])
                values[level * box->plane + i] = NAN;
}

static bool is_zero(double value)
{
    return value <= 0.0 && value >= 0.0;
}

static void count_zeros(const grid_box *box, const double *temperature, const double *salinity,
                        stericol_epoch_tally *tally)
{
    for (size_t level = 0; tally && temperature && level < box->levels; level++)
        for (size_t i = 0; i < box->plane; i++) {
            const size_t at = level * box->plane + i;
            tally[level].zeros += is_zero(temperature[at]) && (!salinity || is_zero(salinity[at]));
        }
}

static stericol_status load(stericol_context *context, stericol_epoch *epoch,
                            const stericol_input_member *one, const grid_box *box, double *temperature,
                            double *salinity, stericol_epoch_tally *tally)
{
    double *const values[STERICOL_INPUT_QUANTITIES] = {temperature, salinity};
    stericol_status status = one ? STERICOL_OK : make_room(context, box->points, &epoch->sums);
    for (int i = 0; i < STERICOL_INPUT_QUANTITIES && status == STERICOL_OK; i++) {
        const stericol_input_quantity quantity = (stericol_input_quantity)i;
        if (!values[i])
            continue;
        assert(epoch->states[i].count);
        status = one ? read_member(context, epoch, one, quantity, box, values[i], tally)
                     : average(context, epoch, quantity, box, &epoch->sums, values[i], tally);
        blank_dry(epoch, box, values[i]);
    }
    if (status == STERICOL_OK)
        count_zeros(box, temperature, salinity, tally);
    return status;
}

stericol_status stericol_epoch_load(stericol_context *context, stericol_epoch *epoch, size_t level0,
                                    size_t levels, size_t row0, size_t rows, double *temperature,
                                    double *salinity, stericol_epoch_tally *tally)
{
    grid_box box;
    const stericol_status status = make_box(context, epoch, level0, levels, row0, rows, &box);
    if (status != STERICOL_OK)
        return status;
    const stericol_input_member *one = epoch->member_count == 1 ? epoch->members : NULL;
    return load(context, epoch, one, &box, temperature, salinity, tally);
}

stericol_status stericol_epoch_load_member(stericol_context *context, stericol_epoch *epoch, size_t member,
                                           size_t level0, size_t levels, size_t row0, size_t rows,
                                           double *temperature, double *salinity, stericol_epoch_tally *tally)
{
    grid_box box;
    assert(member < epoch->member_count);
    const stericol_status status = make_box(context, epoch, level0, levels, row0, rows, &box);
    if (status != STERICOL_OK)
        return status;
    return load(context, epoch, &epoch->members[member], &box, temperature, salinity, tally);
}

stericol_status stericol_epoch_load_depths(stericol_context *context, stericol_epoch *epoch, size_t level0,
                                           size_t levels, size_t row0, size_t rows, double *depth,
                                           double *upper, double *lower)
{
    grid_box box;
    const stericol_status status = make_box(context, epoch, level0, levels, row0, rows, &box);
    assert(epoch->grid.own_depths);
    if (status != STERICOL_OK)
        return status;
    if (epoch->thickness)
        return stericol_input_thickness_load(context, epoch->thickness, level0, levels, row0, rows, depth,
                                             upper, lower);
    return stericol_input_terrain_load(context, epoch->terrain, level0, levels, row0, rows, depth, upper,
                                       lower);
}

bool stericol_epoch_sea_floor(const stericol_epoch *epoch, double *floor)
{
    if (!epoch->terrain)
        return false;
    stericol_input_terrain_floor(epoch->terrain, epoch->grid.rows * epoch->grid.columns, floor);
    return true;
}

size_t stericol_epoch_bytes(const stericol_epoch *epoch, size_t levels, size_t rows)
{
    size_t points = 0, bytes = 0, kept = 0;
    if (!stericol_add_sizes(epoch->request.cache_bytes, stericol_input_judged_bytes(epoch, rows), &kept))
        return SIZE_MAX;
    if (epoch->member_count == 1)
        return kept;
    if (!stericol_multiply_sizes(levels, rows, &points) ||
        !stericol_multiply_sizes(points, epoch->grid.columns, &points) ||
        !stericol_multiply_sizes(points, DOUBLE_ARRAYS * sizeof(double) + sizeof(uint32_t), &bytes) ||
        !stericol_add_sizes(bytes, kept, &bytes))
        return SIZE_MAX;
    return bytes;
}
