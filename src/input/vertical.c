/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Levels: depth in metres or sea pressure in decibar, from the surface down.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* The air's share of absolute pressure: one standard atmosphere, 101325 Pa, in dbar. */
static const double standard_atmosphere = 10.1325;
/* The deepest sounding is 10.9 km, where the pressure is 1.1e4 dbar. */
static const double deepest = 12000.0;
/* Levels kept as float, and bounds made from them, may differ by this much [m, dbar]. */
static const double level_tolerance = 1e-3;

typedef struct level_axis {
    const stericol_cf_variable *variable;
    size_t count;
    double *values;
    double *bounds; /* [count][2], or NULL */
    double scale, offset;
    stericol_vertical_axis kind;
} level_axis;

/* The unit that the option gives, where the file's says nothing. */
static stericol_status unit_by_option(const stericol_input_reader *reader, const char *unit, level_axis *axis)
{
    const char *given = reader->request->vertical_unit;
    if (!given) {
        if (unit && *unit)
            return stericol_input_refuse(
                reader, axis->variable->name,
                "say what the levels are with --vertical-unit m or --vertical-unit dbar",
                "the unit \"%s\" is neither a length nor a pressure", unit);
        return stericol_input_refuse(reader, axis->variable->name,
                                     "say what the levels are with --vertical-unit m or --vertical-unit dbar",
                                     "the vertical axis has no units (values %.6g to %.6g)", axis->values[0],
                                     axis->values[axis->count - 1]);
    }
    axis->kind = strcmp(given, "dbar") == 0 ? STERICOL_VERTICAL_PRESSURE : STERICOL_VERTICAL_DEPTH;
    stericol_input_say(reader, STERICOL_WARNING, axis->variable->name,
                       "levels taken in %s as --vertical-unit says", given);
    return STERICOL_OK;
}

static stericol_status find_unit(const stericol_input_reader *reader, level_axis *axis)
{
    const char *unit = stericol_cf_text_of(axis->variable, "units");
    const char *given = reader->request->vertical_unit;
    const stericol_cf_quantity quantity = stericol_cf_units_quantity(reader->units, unit);
    axis->scale = 1.0;
    axis->offset = 0.0;
    if (quantity != STERICOL_CF_QUANTITY_LENGTH && quantity != STERICOL_CF_QUANTITY_PRESSURE)
        return unit_by_option(reader, unit, axis);
    axis->kind =
        quantity == STERICOL_CF_QUANTITY_LENGTH ? STERICOL_VERTICAL_DEPTH : STERICOL_VERTICAL_PRESSURE;
    const char *target = axis->kind == STERICOL_VERTICAL_DEPTH ? "m" : "dbar";
    if (!stericol_cf_units_convert(reader->units, unit, target, &axis->scale, &axis->offset))
        return stericol_input_refuse(reader, axis->variable->name, "correct the units attribute",
                                     "the unit \"%s\" does not convert to %s", unit, target);
    if (given && strcmp(given, target) != 0)
        stericol_input_say(reader, STERICOL_WARNING, axis->variable->name,
                           "the file's own unit \"%s\" is used; --vertical-unit %s is left aside", unit,
                           given);
    return STERICOL_OK;
}

/* +1 where the values grow downward, -1 where upward, 0 where that cannot be known. */
static int direction(const stericol_input_reader *reader, const level_axis *axis)
{
    const char *positive = stericol_cf_text_of(axis->variable, "positive");
    const char *standard_name = stericol_cf_text_of(axis->variable, "standard_name");
    bool up = false, down = false;
    for (size_t i = 0; i < axis->count; i++) {
        up = up || axis->values[i] < -level_tolerance;
        down = down || axis->values[i] > level_tolerance;
    }
    if (positive && stericol_same_ignoring_case(positive, "down"))
        return 1;
    if (positive && stericol_same_ignoring_case(positive, "up"))
        return -1;
    if (positive)
        stericol_input_say(reader, STERICOL_WARNING, axis->variable->name,
                           "positive is \"%s\", neither up nor down, and is left aside", positive);
    if (axis->kind == STERICOL_VERTICAL_PRESSURE)
        return 1;
    if (standard_name && stericol_starts_with(standard_name, "depth"))
        return 1;
    if (standard_name &&
        (stericol_starts_with(standard_name, "height") || strcmp(standard_name, "altitude") == 0))
        return -1;
    if (up && down)
        return 0;
    if (up)
        stericol_input_say(reader, STERICOL_NOTE, axis->variable->name,
                           "negative values without a positive attribute are taken as heights, positive up");
    return up ? -1 : 1;
}

static void turn(level_axis *axis, double factor, double offset)
{
    for (size_t i = 0; i < axis->count; i++)
        axis->values[i] = axis->values[i] * factor + offset;
    for (size_t i = 0; axis->bounds && i < 2 * axis->count; i++)
        axis->bounds[i] = axis->bounds[i] * factor + offset;
}

/* sea_water_pressure counts the air by its definition; a file whose top lies below one atmosphere cannot mean
 * it. */
static void take_air_off(const stericol_input_reader *reader, level_axis *axis)
{
    const char *standard_name = stericol_cf_text_of(axis->variable, "standard_name");
    double least = INFINITY;
    if (!standard_name || strcmp(standard_name, "sea_water_pressure") != 0)
        return;
    for (size_t i = 0; i < axis->count; i++)
        least = axis->values[i] < least ? axis->values[i] : least;
    if (least < standard_atmosphere - level_tolerance) {
        stericol_input_say(reader, STERICOL_WARNING, axis->variable->name,
                           "called sea_water_pressure, which counts the air, but begins at %.6g dbar; taken "
                           "as pressure due to sea water",
                           least);
        return;
    }
    turn(axis, 1.0, -standard_atmosphere);
    stericol_input_say(reader, STERICOL_NOTE, axis->variable->name,
                       "sea_water_pressure counts the air; 10.1325 dbar are taken off");
}

static stericol_status check_levels(const stericol_input_reader *reader, level_axis *axis, bool *reversed)
{
    const char *unit = axis->kind == STERICOL_VERTICAL_DEPTH ? "m" : "dbar";
    *reversed = axis->count > 1 && axis->values[1] < axis->values[0];
    for (size_t i = 0; i < axis->count; i++) {
        const double value = axis->values[i];
        if (i > 0 && !(*reversed ? value < axis->values[i - 1] : value > axis->values[i - 1]))
            return stericol_input_refuse(reader, axis->variable->name, "correct the axis",
                                         "level %zu (%.6g %s) breaks the order of the axis", i + 1, value,
                                         unit);
        if (value < -level_tolerance)
            return stericol_input_refuse(reader, axis->variable->name,
                                         "correct its positive attribute or its values",
                                         "level %zu lies %.6g %s above the sea surface", i + 1, -value, unit);
        if (value > deepest)
            return stericol_input_refuse(reader, axis->variable->name,
                                         "correct its units attribute or its values",
                                         "level %zu at %.6g %s lies deeper than any sea", i + 1, value, unit);
    }
    return STERICOL_OK;
}

/* ---- limits of the cells ---- */

static stericol_status limits_left_aside(const stericol_input_reader *reader, level_axis *axis,
                                         const char *why)
{
    free(axis->bounds);
    axis->bounds = NULL;
    stericol_input_say(reader, STERICOL_WARNING, axis->variable->name,
                       "%s; they are left aside and the levels count as samples", why);
    return STERICOL_OK;
}

static stericol_status read_limits(const stericol_input_reader *reader, level_axis *axis)
{
    const char *name = stericol_cf_text_of(axis->variable, "bounds");
    const bool edges = !name && stericol_cf_text_of(axis->variable, "edges");
    if (edges)
        name = stericol_cf_text_of(axis->variable, "edges");
    if (!name)
        return STERICOL_OK;
    const stericol_cf_variable *found = stericol_cf_find(reader->file, name, axis->variable);
    const size_t wanted = edges ? axis->count + 1 : 2 * axis->count;
    size_t count = 0;
    double *values = NULL;
    if (!found)
        return limits_left_aside(reader, axis, "its limits are not in the file");
    if (!stericol_cf_value_count(reader->file, found, &count) || count != wanted ||
        found->rank != (edges ? 1u : 2u))
        return limits_left_aside(reader, axis, "its limits have the wrong shape");
    stericol_status status =
        stericol_cf_read_all(reader->context, reader->file, found, wanted, &values, &count);
    if (status != STERICOL_OK)
        return status;
    if (edges) {
        double *pairs = stericol_new_array(2 * axis->count, sizeof *pairs);
        for (size_t i = 0; pairs && i < axis->count; i++) {
            pairs[2 * i] = values[i];
            pairs[2 * i + 1] = values[i + 1];
        }
        free(values);
        values = pairs;
    }
    if (!values)
        return stericol_fail_memory(reader->context, 0, "the levels");
    axis->bounds = values;
    for (size_t i = 0; i < 2 * axis->count; i++)
        if (isnan(values[i]))
            return limits_left_aside(reader, axis, "its limits are missing in part");
    return STERICOL_OK;
}

/* Upper limit first; enclosing their level; beginning at or below the surface. */
static stericol_status check_limits(const stericol_input_reader *reader, level_axis *axis)
{
    bool lifted = false;
    for (size_t i = 0; axis->bounds && i < axis->count; i++) {
        double *limit = axis->bounds + 2 * i;
        if (limit[0] > limit[1]) {
            const double upper = limit[1];
            limit[1] = limit[0];
            limit[0] = upper;
        }
        if (limit[0] > axis->values[i] + level_tolerance || limit[1] < axis->values[i] - level_tolerance ||
            !(limit[1] > limit[0]))
            return limits_left_aside(reader, axis, "its limits do not enclose its levels");
        if (i > 0 && limit[0] < limit[-1] - level_tolerance)
            return limits_left_aside(reader, axis, "its limits overlap");
        if (limit[0] < 0.0) {
            lifted = lifted || limit[0] < -level_tolerance;
            limit[0] = 0.0;
        }
    }
    if (lifted)
        stericol_input_say(reader, STERICOL_NOTE, axis->variable->name,
                           "the uppermost cell reaches above the sea surface; it is cut there");
    return STERICOL_OK;
}

static void reverse(double *values, size_t count, size_t inner)
{
    for (size_t i = 0; values && i < count / 2; i++)
        for (size_t j = 0; j < inner; j++) {
            const double kept = values[i * inner + j];
            values[i * inner + j] = values[(count - 1 - i) * inner + j];
            values[(count - 1 - i) * inner + j] = kept;
        }
}

/* ---- levels whose depth the axis does not tell ---- */

/* Sigma and s run from -1 at the floor to 0 at the surface (CF 1.10, appendix D); nominal values are their
 * distance from the surface. */
static stericol_status take_parametric(const stericol_input_reader *reader, level_axis *axis,
                                       stericol_grid *grid, bool *reversed)
{
    for (size_t i = 1; i < axis->count; i++)
        if (!((axis->values[1] > axis->values[0]) == (axis->values[i] > axis->values[i - 1])))
            return stericol_input_refuse(reader, axis->variable->name, "correct the axis",
                                         "level %zu breaks the order of the axis", i + 1);
    *reversed = axis->count > 1 && axis->values[1] > axis->values[0];
    turn(axis, -1.0, 0.0);
    if (*reversed)
        reverse(axis->values, axis->count, 1);
    grid->own_depths = true;
    grid->vertical = STERICOL_VERTICAL_DEPTH;
    return STERICOL_OK;
}

/* With --thickness the axis only has to order the levels; without units they are numbered. */
static stericol_status take_numbers(const stericol_input_reader *reader, level_axis *axis,
                                    stericol_grid *grid)
{
    for (size_t i = 0; i < axis->count; i++)
        axis->values[i] = (double)(i + 1);
    grid->vertical = STERICOL_VERTICAL_DEPTH;
    stericol_input_say(
        reader, STERICOL_NOTE, axis->variable->name,
        "no depth on the axis; the first level is taken as the uppermost, depths come from --thickness");
    return STERICOL_OK;
}

static stericol_status take_plain(const stericol_input_reader *reader, level_axis *axis, stericol_grid *grid,
                                  bool *reversed)
{
    stericol_status status = find_unit(reader, axis);
    if (status == STERICOL_OK)
        status = read_limits(reader, axis);
    if (status != STERICOL_OK)
        return status;
    turn(axis, axis->scale, axis->offset);
    const int sense = direction(reader, axis);
    if (!sense)
        return stericol_input_refuse(reader, axis->variable->name, "add a positive attribute",
                                     "values on both sides of 0 and no positive attribute");
    if (sense < 0)
        turn(axis, -1.0, 0.0);
    if (axis->kind == STERICOL_VERTICAL_PRESSURE)
        take_air_off(reader, axis);
    status = check_levels(reader, axis, reversed);
    if (status != STERICOL_OK)
        return status;
    if (*reversed) {
        reverse(axis->values, axis->count, 1);
        reverse(axis->bounds, axis->count, 2);
    }
    grid->vertical = axis->kind;
    return check_limits(reader, axis);
}

stericol_status stericol_input_read_vertical(const stericol_input_reader *reader,
                                             const stericol_cf_variable *variable,
                                             const stericol_input_layout *layout, stericol_grid *grid,
                                             bool *reversed)
{
    level_axis axis = {.variable = layout->level, .count = layout->levels};
    size_t count;
    *reversed = false;
    if (!layout->level)
        return stericol_input_refuse(reader, variable->name, "add a coordinate variable with units",
                                     "its vertical dimension has no coordinate");
    stericol_status status = stericol_cf_read_all(reader->context, reader->file, layout->level,
                                                  layout->levels, &axis.values, &count);
    if (status != STERICOL_OK)
        return status;
    for (size_t i = 0; i < axis.count && status == STERICOL_OK; i++)
        if (isnan(axis.values[i]))
            status = stericol_input_refuse(reader, axis.variable->name, "correct the axis",
                                           "level %zu of %zu is missing", i + 1, axis.count);
    if (status == STERICOL_OK) {
        const stericol_cf_quantity quantity =
            stericol_cf_units_quantity(reader->units, stericol_cf_text_of(axis.variable, "units"));
        const bool measured =
            quantity == STERICOL_CF_QUANTITY_LENGTH || quantity == STERICOL_CF_QUANTITY_PRESSURE;
        const bool thickness = reader->request->thickness_file != NULL;
        if ((stericol_cf_text_of(axis.variable, "formula_terms") ||
             stericol_input_is_parametric(stericol_cf_text_of(axis.variable, "standard_name"))))
            status = take_parametric(reader, &axis, grid, reversed);
        else if (thickness && !measured && !reader->request->vertical_unit)
            status = take_numbers(reader, &axis, grid);
        else
            status = take_plain(reader, &axis, grid, reversed);
        grid->own_depths = grid->own_depths || thickness;
    }
    grid->levels = axis.count;
    grid->level = axis.values;
    grid->level_bounds = axis.bounds;
    if (status == STERICOL_OK)
        grid->level_name = stericol_copy_string(layout->level->name);
    return status;
}
