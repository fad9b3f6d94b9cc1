/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Whether the values of a level can be what they are called.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { FEWEST = 20 }; /* values that a level must have before a share of them means something */

typedef struct value_range {
    double low, high;
    size_t count;
} value_range;

/* What the level really holds: read again without limits, in the unit after conversion. */
static stericol_status range_of(stericol_context *context, stericol_epoch *epoch,
                                stericol_input_quantity quantity, const stericol_input_slab *slab,
                                value_range *range)
{
    const stericol_input_variable *chosen = &epoch->sources[slab->source].variable[quantity];
    stericol_cf_conversion conversion = chosen->conversion;
    const size_t count = slab->rows * epoch->grid.columns;
    double *values = stericol_new_doubles(count);
    stericol_cf_field *field = NULL;
    stericol_cf_file *file;
    stericol_status status = stericol_input_source_file(context, epoch, slab->source, &file);
    conversion.low = -INFINITY;
    conversion.high = INFINITY;
    range->low = INFINITY;
    range->high = -INFINITY;
    if (!values)
        status = stericol_fail_memory(context, count * sizeof *values, "a level");
    if (status == STERICOL_OK)
        status = stericol_cf_field_open(context, file, stericol_cf_find(file, chosen->name, NULL),
                                        &chosen->axes, &conversion, 0, &field);
    const size_t level = chosen->reversed ? epoch->grid.levels - 1 - slab->level : slab->level;
    if (status == STERICOL_OK)
        status = stericol_cf_field_read(context, field, slab->step, level, 1, slab->row0, slab->rows, values,
                                        NULL);
    for (size_t i = 0; i < count && status == STERICOL_OK; i++) {
        if (isnan(values[i]))
            continue;
        range->low = fmin(range->low, values[i]);
        range->high = fmax(range->high, values[i]);
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

static stericol_status refuse(stericol_context *context, stericol_epoch *epoch,
                              stericol_input_quantity quantity, const stericol_input_slab *slab,
                              size_t outside, size_t count)
{
    const stericol_input_source *source = &epoch->sources[slab->source];
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
        outside, count, where, slab->when, what_they_are(quantity, epoch->request.salinity_anomaly), unit,
        met.low, met.high);
}

/* Whether nine tenths of the values that are not 0 are too small for any sea: kg/kg called practical or g/kg.
 */
static bool is_fraction(const double *values, size_t count)
{
    size_t large = 0, small = 0;
    for (size_t i = 0; i < count; i++) {
        if (values[i] > 0.05 && ++large * 10 > count)
            return false;
        small += values[i] > 0.001 && values[i] <= 0.05;
    }
    return small >= FEWEST && large * 10 <= small;
}

stericol_status stericol_input_judge(stericol_context *context, stericol_epoch *epoch,
                                     stericol_input_quantity quantity, const stericol_input_slab *slab,
                                     const double *values, size_t count, const stericol_cf_tally *tally)
{
    const unsigned long long outside = tally->below + tally->above, there = tally->values - tally->missing;
    const bool assumed = epoch->sources[slab->source].variable[quantity].unit_assumed;
    if (outside && (assumed || (there >= FEWEST && outside * 10 > there)))
        return refuse(context, epoch, quantity, slab, (size_t)outside, (size_t)there);
    if (quantity == STERICOL_INPUT_SALINITY && !epoch->request.salinity_anomaly && is_fraction(values, count))
        return refuse(context, epoch, quantity, slab, (size_t)there, (size_t)there);
    return STERICOL_OK;
}
