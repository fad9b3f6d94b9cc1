/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The time axis of one variable of one file, as states.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Mean lengths over the leap rule of each calendar (400, 4, 1 years). */
double stericol_input_month_length(stericol_cf_calendar calendar, int month)
{
    static const double days[12] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    static const double gregorian_february = 28.2425, julian_february = 28.25;
    if (calendar == STERICOL_CF_CALENDAR_360)
        return 30.0;
    if (month != 2)
        return days[month - 1];
    switch (calendar) {
    case STERICOL_CF_CALENDAR_JULIAN:
        return julian_february;
    case STERICOL_CF_CALENDAR_NOLEAP:
        return 28.0;
    case STERICOL_CF_CALENDAR_ALLLEAP:
        return 29.0;
    case STERICOL_CF_CALENDAR_STANDARD:
    case STERICOL_CF_CALENDAR_PROLEPTIC:
    case STERICOL_CF_CALENDAR_360:
    case STERICOL_CF_CALENDAR_NONE:
        break;
    }
    return gregorian_february;
}

typedef struct time_axis {
    const stericol_cf_variable *variable;
    size_t count;
    double *values, *bounds; /* [count], [count][2] or NULL */
    bool climatology;        /* the bounds are of the kind "climatology" */
    stericol_cf_calendar calendar;
    stericol_cf_time_unit unit;
    int months; /* calendar months in a unit where it is a month or a year; else 0 */
} time_axis;

/* An axis in months or years counts calendar months, which is what its writers mean. */
static double day_of(const time_axis *axis, double value)
{
    if (!axis->months)
        return value * axis->unit.days_per_unit + axis->unit.origin;
    const double total = value * axis->months;
    const double whole = floor(total);
    stericol_cf_date date = stericol_cf_date_of(axis->calendar, axis->unit.origin);
    const long long months = date.year * 12 + date.month - 1 + (long long)whole;
    date.year = months >= 0 ? months / 12 : -((11 - months) / 12);
    date.month = (int)(months - date.year * 12) + 1;
    const int length = stericol_cf_days_in_month(axis->calendar, date.year, date.month);
    if (date.day > length)
        date.day = length;
    double day = 0.0;
    if (!stericol_cf_day_number(axis->calendar, &date, &day))
        return NAN;
    return day + (total - whole) * length;
}

/* [start, end) of the calendar month or year that holds `day`. */
static void calendar_span(stericol_cf_calendar calendar, double day, bool year, double *start, double *end)
{
    stericol_cf_date first = stericol_cf_date_of(calendar, day);
    first.day = 1;
    first.seconds = 0.0;
    if (year)
        first.month = 1;
    stericol_cf_date next = first;
    if (year || first.month == 12) {
        next.year++;
        next.month = 1;
    } else {
        next.month++;
    }
    if (!stericol_cf_day_number(calendar, &first, start) || !stericol_cf_day_number(calendar, &next, end))
        *start = *end = day;
}

static stericol_status read_bounds(const stericol_input_reader *reader, time_axis *axis)
{
    const char *name = stericol_cf_text_of(axis->variable, "climatology");
    axis->climatology = name != NULL;
    if (!name)
        name = stericol_cf_text_of(axis->variable, "bounds");
    if (!name)
        return STERICOL_OK;
    const stericol_cf_variable *found = stericol_cf_find(reader->file, name, axis->variable);
    size_t count = 0;
    if (!found || !stericol_cf_value_count(reader->file, found, &count) || count != 2 * axis->count) {
        stericol_input_say(reader, STERICOL_NOTE, axis->variable->name,
                           "its bounds \"%s\" are not in the file or of the wrong shape; left aside", name);
        return STERICOL_OK;
    }
    stericol_status status =
        stericol_cf_read_all(reader->context, reader->file, found, count, &axis->bounds, &count);
    for (size_t i = 0; axis->bounds && i < count; i++)
        if (isnan(axis->bounds[i]) || (i % 2 && axis->bounds[i] < axis->bounds[i - 1])) {
            stericol_input_say(reader, STERICOL_WARNING, axis->variable->name,
                               "its bounds are missing in part or in the wrong order; left aside");
            free(axis->bounds);
            axis->bounds = NULL;
        }
    return status;
}

/* Why the axis gives no dates; NULL when it does. */
static const char *read_unit(const stericol_input_reader *reader, time_axis *axis)
{
    const char *calendar = stericol_cf_text_of(axis->variable, "calendar");
    const char *unit = stericol_cf_text_of(axis->variable, "units");
    const char *reason = NULL;
    if (!stericol_cf_calendar_named(calendar, &axis->calendar))
        return "its calendar is not known";
    if (axis->calendar == STERICOL_CF_CALENDAR_NONE)
        return "its calendar is \"none\"";
    if (!unit || !*unit)
        return "its time axis has no units";
    if (!stericol_cf_time_unit_read(unit, axis->calendar, &axis->unit, &reason))
        return reason ? reason : "its time unit cannot be read";
    if (stericol_starts_with(unit, "month") || stericol_starts_with(unit, "Month"))
        axis->months = 1;
    else if (stericol_starts_with(unit, "year") || stericol_starts_with(unit, "Year"))
        axis->months = 12;
    if (axis->unit.inexact)
        stericol_input_say(reader, STERICOL_NOTE, axis->variable->name,
                           "\"%s\": taken as calendar months and years", unit);
    return NULL;
}

static stericol_input_state *new_state(const stericol_input_reader *reader, stericol_input_states *states)
{
    if (states->count == states->room) {
        void *items = states->items;
        const size_t room = states->room ? 2 * states->room : 16;
        if (!stericol_grow_array(&items, room, sizeof *states->items)) {
            stericol_fail_memory(reader->context, 0, "the times");
            return NULL;
        }
        states->items = items;
        states->room = room;
    }
    stericol_input_state *state = &states->items[states->count++];
    *state = (stericol_input_state){0};
    return state;
}

static stericol_status add_undated(const stericol_input_reader *reader, size_t count, size_t source,
                                   const char *why, stericol_input_states *states)
{
    for (size_t i = 0; i < count; i++) {
        stericol_input_state *state = new_state(reader, states);
        if (!state)
            return STERICOL_MEMORY;
        state->source = source;
        state->step = i;
    }
    if (!states->undated)
        states->undated = why;
    return STERICOL_OK;
}

/* A month (or season) of many years: its span within the year is what is left when whole years are taken off.
 */
static void set_climatology(const time_axis *axis, size_t i, stericol_input_state *state)
{
    state->climatology = true;
    stericol_cf_date middle = stericol_cf_date_of(axis->calendar, day_of(axis, axis->values[i]));
    state->length = 0.0;
    if (axis->bounds) {
        const double start = day_of(axis, axis->bounds[2 * i]), end = day_of(axis, axis->bounds[2 * i + 1]);
        const stericol_cf_date from = stericol_cf_date_of(axis->calendar, start);
        stericol_cf_date to = stericol_cf_date_of(axis->calendar, end);
        double last;
        to.year = from.year;
        if (to.month == 2 && to.day == 29)
            to.day = 28;
        if (stericol_cf_day_number(axis->calendar, &to, &last) && last <= start) {
            to.year++;
            if (!stericol_cf_day_number(axis->calendar, &to, &last))
                last = start;
        }
        state->length = last - start;
        middle = stericol_cf_date_of(axis->calendar, start + state->length / 2.0);
    } else if (axis->count == 12) {
        state->length = stericol_input_month_length(axis->calendar, middle.month);
    }
    state->month = state->length > 0.0 && state->length < 32.0 ? middle.month : 0;
}

static void set_dates(const time_axis *axis, size_t i, stericol_input_state *state)
{
    state->dated = true;
    state->at = state->start = state->end = day_of(axis, axis->values[i]);
    if (axis->bounds) {
        state->start = day_of(axis, axis->bounds[2 * i]);
        state->end = day_of(axis, axis->bounds[2 * i + 1]);
        state->bounded = state->end > state->start;
    } else if (axis->months && axis->count > 1) {
        const bool year = axis->count > 1 && (axis->values[1] - axis->values[0]) * axis->months > 11.5;
        calendar_span(axis->calendar, state->at, year, &state->start, &state->end);
        state->bounded = state->end > state->start;
    }
}

/* All stamps within the first two years of a year-0 axis: a climatology, whatever it calls itself. */
static bool is_year_zero(const time_axis *axis)
{
    bool early = axis->unit.year_zero;
    for (size_t i = 0; i < axis->count && early; i++)
        early = stericol_cf_date_of(axis->calendar, day_of(axis, axis->values[i])).year <= 1;
    return early;
}

static stericol_status add_dated(const stericol_input_reader *reader, const char *variable, time_axis *axis,
                                 size_t source, stericol_input_states *states)
{
    const bool climatology = axis->climatology || is_year_zero(axis);
    if (states->has_calendar && states->calendar != axis->calendar)
        return stericol_input_refuse(reader, axis->variable->name, "give files of one calendar",
                                     "its calendar \"%s\" is not \"%s\" as in the files before it",
                                     stericol_cf_calendar_name(axis->calendar),
                                     stericol_cf_calendar_name(states->calendar));
    states->has_calendar = true;
    states->calendar = axis->calendar;
    if (climatology) {
        states->undated = "its time axis is a climatology";
        stericol_input_say(reader, STERICOL_NOTE, variable,
                           "its time axis is a climatology: steps can be chosen, dates cannot");
    }
    for (size_t i = 0; i < axis->count; i++) {
        stericol_input_state *state = new_state(reader, states);
        if (!state)
            return STERICOL_MEMORY;
        state->source = source;
        state->step = i;
        if (climatology)
            set_climatology(axis, i, state);
        else
            set_dates(axis, i, state);
        if (!climatology && !isfinite(state->at))
            return stericol_input_refuse(reader, axis->variable->name, "correct the axis",
                                         "time %zu of %zu is no date", i + 1, axis->count);
    }
    return STERICOL_OK;
}

stericol_status stericol_input_read_times(const stericol_input_reader *reader, const char *variable,
                                          const stericol_input_layout *layout, size_t source,
                                          stericol_input_states *states)
{
    time_axis axis = {.variable = layout->time, .count = layout->times};
    size_t count = 0;
    if (!layout->time) {
        if (layout->axes.time != STERICOL_CF_NO_AXIS)
            stericol_input_say(reader, STERICOL_NOTE, variable,
                               "its time dimension has no coordinate; taken by step");
        return add_undated(reader, layout->times, source,
                           layout->axes.time != STERICOL_CF_NO_AXIS ? "its time dimension has no coordinate"
                                                                    : "it has no time axis",
                           states);
    }
    const char *why = read_unit(reader, &axis);
    if (why) {
        stericol_input_say(reader, STERICOL_WARNING, layout->time->name, "no dates: %s; taken by step", why);
        return add_undated(reader, layout->times, source, why, states);
    }
    stericol_status status = stericol_cf_read_all(reader->context, reader->file, layout->time, layout->times,
                                                  &axis.values, &count);
    if (status == STERICOL_OK && count != layout->times)
        status = stericol_input_refuse(reader, layout->time->name, "correct the axis",
                                       "%zu times where %zu are needed", count, layout->times);
    for (size_t i = 0; i < axis.count && status == STERICOL_OK; i++)
        if (isnan(axis.values[i]))
            status = stericol_input_refuse(reader, layout->time->name, "correct the axis",
                                           "time %zu of %zu is missing", i + 1, axis.count);
    if (status == STERICOL_OK)
        status = read_bounds(reader, &axis);
    if (status == STERICOL_OK)
        status = add_dated(reader, variable, &axis, source, states);
    free(axis.values);
    free(axis.bounds);
    return status;
}
