/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Whether the values of a level can be what they are called.
 */
#include "input/room.h"

#include "base/checked.h"

#include <float.h>
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { FEWEST = 20 }; /* values that a level must have before a share of them means something */

typedef struct value_range {
    double low, high;
    size_t outside, count;
} value_range;

static void add_values(const double *values, size_t count, const stericol_cf_conversion *limits,
                       value_range *range)
{
    for (size_t i = 0; i < count; i++) {
        if (isnan(values[i]))
            continue;
        range->low = fmin(range->low, values[i]);
        range->high = fmax(range->high, values[i]);
        range->outside += values[i] < limits->low || values[i] > limits->high;
        range->count++;
    }
}

/* What the whole level really holds: read again with no limits but those of doubles, in the unit after
 * conversion, in bands as high as the slab. */
static stericol_status range_of(stericol_context *context, stericol_epoch *epoch,
                                stericol_input_quantity quantity, const stericol_input_slab *slab,
                                value_range *range)
{
    const stericol_input_member *member = &epoch->members[slab->member];
    const stericol_input_variable *chosen = &epoch->sources[member->source[quantity]].variable[quantity];
    const size_t columns = epoch->grid.columns, rows = epoch->grid.rows;
    const size_t level = chosen->reversed ? epoch->grid.levels - 1 - slab->level : slab->level;
    stericol_cf_conversion conversion = chosen->conversion;
    double *values = stericol_new_doubles(slab->rows * columns);
    stericol_cf_field *field = NULL;
    stericol_cf_file *file;
    stericol_status status = stericol_input_source_file(context, epoch, member->source[quantity], &file);
    conversion.low = -DBL_MAX;
    conversion.high = DBL_MAX;
    *range = (value_range){.low = INFINITY, .high = -INFINITY};
    if (!values)
        status = stericol_fail_memory(context, slab->rows * columns * sizeof *values, "a level");
    if (status == STERICOL_OK)
        status = stericol_cf_field_open(context, file, stericol_cf_find(file, chosen->name, NULL),
                                        &chosen->axes, &conversion, epoch->request.cache_bytes, &field);
    for (size_t row0 = 0; row0 < rows && status == STERICOL_OK; row0 += slab->rows) {
        const size_t band = slab->rows < rows - row0 ? slab->rows : rows - row0;
        status = stericol_cf_field_read(context, field, member->step[quantity], level, 1, row0, band, values,
                                        NULL);
        if (status == STERICOL_OK)
            add_values(values, band * columns, &chosen->conversion, range);
    }
    stericol_cf_field_close(field);
    free(values);
    return status;
}

static bool within(const value_range *range, double low, double high)
{
    return range->low >= low && range->high <= high;
}

/* The likely cause, and what can be done. */
static const char *cause(stericol_input_quantity quantity, bool anomaly, const value_range *range)
{
    if (fabs(range->high - range->low) <= 0.0)
        return "one value only: perhaps a fill value that the file does not declare; declare it as "
               "_FillValue";
    if (anomaly)
        return "give a file of absolute salinity anomalies in g/kg";
    if (quantity == STERICOL_INPUT_TEMPERATURE) {
        if (within(range, 250.0, 320.0))
            return "these look like kelvin; correct the units attribute";
        if (within(range, -280.0, -225.0))
            return "these look like degrees Celsius called kelvin; correct the units attribute";
        if (within(range, 25.0, 110.0))
            return "these look like degrees Fahrenheit; correct the units attribute";
        return "correct the units or the packing of the variable, or name another with --temperature";
    }
    if (within(range, 1000.0, 50000.0))
        return "these look a thousand times too large; correct the units attribute";
    if (within(range, 0.0, 0.05))
        return "these look like a mass fraction (kg/kg); correct the units attribute";
    return "correct the units or the packing of the variable, or name another with --salinity";
}

static const char *what_they_are(stericol_input_quantity quantity, bool anomaly)
{
    if (quantity == STERICOL_INPUT_TEMPERATURE)
        return "sea temperatures";
    return anomaly ? "salinity anomalies" : "salinities";
}

/* `whole`: every value of the level is meant, not only those outside. */
static stericol_status refuse(stericol_context *context, stericol_epoch *epoch,
                              stericol_input_quantity quantity, const stericol_input_slab *slab, bool whole)
{
    const stericol_input_member *member = &epoch->members[slab->member];
    const stericol_input_source *source = &epoch->sources[member->source[quantity]];
    const stericol_input_variable *chosen = &source->variable[quantity];
    value_range met;
    char where[96], unit[96];
    const stericol_status status = range_of(context, epoch, quantity, slab, &met);
    if (status != STERICOL_OK)
        return status;
    if (epoch->grid.own_depths)
        snprintf(where, sizeof where, "level %zu", slab->level + 1);
    else
        snprintf(where, sizeof where, "%.6g %s", epoch->grid.level[slab->level],
                 epoch->grid.vertical == STERICOL_VERTICAL_DEPTH ? "m" : "dbar");
    if (chosen->unit_assumed)
        snprintf(unit, sizeof unit, "without units");
    else
        snprintf(unit, sizeof unit, "with the unit \"%.60s\"", chosen->unit);
    return stericol_fail(
        context, STERICOL_INPUT, source->path, chosen->name,
        cause(quantity, epoch->request.salinity_anomaly, &met),
        "%zu of %zu values at %s (%s) cannot be %s %s: they range from %.6g to %.6g after conversion",
        whole ? met.count : met.outside, met.count, where, member->shown.text,
        what_they_are(quantity, epoch->request.salinity_anomaly), unit, met.low, met.high);
}

/* ---- a level that comes in parts is judged as a whole ---- */

/* What was seen of one level of one member.  The rows seen are first..end - 1, each counted once. */
struct stericol_input_standing {
    size_t first, end;
    size_t there, outside;
    size_t large, small; /* salinities that are no fraction, and those that can be nothing else */
};

void stericol_input_judged_free(stericol_input_judged *judged)
{
    free(judged->standings);
    *judged = (stericol_input_judged){0};
}

size_t stericol_input_judged_bytes(const stericol_epoch *epoch, size_t rows)
{
    size_t count, bytes;
    if (rows >= epoch->grid.rows)
        return 0;
    if (!stericol_multiply_sizes(epoch->member_count, epoch->grid.levels, &count) ||
        !stericol_multiply_sizes(count, STERICOL_INPUT_QUANTITIES * sizeof(stericol_input_standing), &bytes))
        return SIZE_MAX;
    return bytes;
}

/* The record of the slab's level; NULL when memory runs out. */
static stericol_input_standing *standing_of(stericol_epoch *epoch, stericol_input_quantity quantity,
                                            const stericol_input_slab *slab)
{
    stericol_input_judged *judged = &epoch->judged[quantity];
    size_t count;
    if (!judged->standings && stericol_multiply_sizes(epoch->member_count, epoch->grid.levels, &count))
        judged->standings = calloc(count, sizeof *judged->standings);
    return judged->standings ? &judged->standings[slab->member * epoch->grid.levels + slab->level] : NULL;
}

/*
 * Counts what can tell a fraction (kg/kg called practical or g/kg): nine tenths of the values that are not 0
 * are then too small for any sea.  Stops once the values that are no fraction are too many for the level.
 */
static void count_fractions(const double *values, size_t count, size_t cells,
                            stericol_input_standing *standing)
{
    for (size_t i = 0; i < count && standing->large <= cells / 10; i++) {
        standing->large += values[i] > 0.05;
        standing->small += values[i] > 0.001 && values[i] <= 0.05;
    }
}

/* Adds the rows row0..row0 + rows - 1 of the slab; `tally`: of just these, or NULL. */
static void count_rows(const stericol_epoch *epoch, bool fractions, const stericol_input_slab *slab,
                       size_t row0, size_t rows, const double *values, const stericol_cf_tally *tally,
                       stericol_input_standing *standing)
{
    const size_t columns = epoch->grid.columns, count = rows * columns;
    const double *from = values + (row0 - slab->row0) * columns;
    if (tally) {
        standing->there += (size_t)(tally->values - tally->missing);
        standing->outside += (size_t)(tally->below + tally->above);
    }
    for (size_t i = 0; !tally && i < count; i++) {
        standing->there += isnan(from[i]) == 0;
        standing->outside += isinf(from[i]) != 0;
    }
    if (fractions)
        count_fractions(from, count, epoch->grid.rows * columns, standing);
}

/*
 * Adds the rows that are new.  Whoever reads a level a second time, or in bands that overlap, changes
 * nothing; a band that does not touch what was seen begins anew.
 */
static void add_slab(const stericol_epoch *epoch, bool fractions, const stericol_input_slab *slab,
                     const double *values, const stericol_cf_tally *tally, stericol_input_standing *standing)
{
    const size_t end = slab->row0 + slab->rows;
    if (slab->row0 > standing->end || end < standing->first || standing->end == standing->first) {
        *standing = (stericol_input_standing){.first = slab->row0, .end = end};
        count_rows(epoch, fractions, slab, slab->row0, slab->rows, values, tally, standing);
        return;
    }
    if (slab->row0 < standing->first) {
        const size_t rows = standing->first - slab->row0;
        count_rows(epoch, fractions, slab, slab->row0, rows, values, rows == slab->rows ? tally : NULL,
                   standing);
        standing->first = slab->row0;
    }
    if (end > standing->end) {
        const size_t rows = end - standing->end;
        count_rows(epoch, fractions, slab, standing->end, rows, values, rows == slab->rows ? tally : NULL,
                   standing);
        standing->end = end;
    }
}

stericol_status stericol_input_judge(stericol_context *context, stericol_epoch *epoch,
                                     stericol_input_quantity quantity, const stericol_input_slab *slab,
                                     const double *values, const stericol_cf_tally *tally)
{
    const size_t source = epoch->members[slab->member].source[quantity];
    const bool assumed = epoch->sources[source].variable[quantity].unit_assumed;
    const bool fractions = quantity == STERICOL_INPUT_SALINITY && !epoch->request.salinity_anomaly;
    stericol_input_standing whole = {0}, *standing = &whole;
    if (slab->rows < epoch->grid.rows)
        standing = standing_of(epoch, quantity, slab);
    if (!standing)
        return stericol_fail_memory(context, stericol_input_judged_bytes(epoch, 0),
                                    "what was seen of the levels");
    add_slab(epoch, fractions, slab, values, tally, standing);
    /* The values still to come could all be sound: only what holds even then is certain, so that the verdict
       is the same however the level is cut. */
    const size_t to_come = (epoch->grid.rows - (standing->end - standing->first)) * epoch->grid.columns;
    if (standing->outside && assumed)
        return refuse(context, epoch, quantity, slab, false);
    if (standing->there >= FEWEST && standing->outside > (standing->there + to_come) / 10)
        return refuse(context, epoch, quantity, slab, false);
    if (fractions && standing->small >= FEWEST && standing->large + to_come <= standing->small / 10)
        return refuse(context, epoch, quantity, slab, true);
    return STERICOL_OK;
}
