/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * From the states of all files to the members of the epoch: order, intervals, choice, pairs, weights.
 */
#include "input/room.h"

#include "base/checked.h"

#include <assert.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Two stamps closer than this are one time [days]: a tenth of a second. */
static const double same_time = 1e-6;
/* The longest interval that belongs to one calendar month [days]. */
static const double most_month = 32.0;
/* How near a temperature and a salinity must be when neither has an interval [days]. */
static const double instant_reach = 1.0;

static double middle(const stericol_input_state *state)
{
    return 0.5 * (state->start + state->end);
}

static void date_text(stericol_cf_calendar calendar, double day, char *buffer)
{
    const stericol_cf_date date = stericol_cf_date_of(calendar, day);
    stericol_cf_date_write(&date, false, buffer);
}

static const char *month_name(int month)
{
    static const char *const names[12] = {"January",   "February", "March",    "April",
                                          "May",       "June",     "July",     "August",
                                          "September", "October",  "November", "December"};
    return names[month - 1];
}

/* "2005-01", "2005", "2005-01-16", "January of many years", "step 3". */
static void state_text(const stericol_input_states *states, const stericol_input_state *state, size_t order,
                       char text[64])
{
    if (!state->dated) {
        if (state->climatology && state->month)
            snprintf(text, 64, "%s of many years", month_name(state->month));
        else
            snprintf(text, 64, "step %zu", order + 1);
        return;
    }
    char date[STERICOL_CF_DATE_ROOM];
    const double length = state->end - state->start;
    date_text(states->calendar, middle(state), date);
    char *last = strrchr(date, '-');
    if (last && length > 27.5 && length < most_month)
        *last = '\0';
    if (length > 359.0 && length < 367.0) {
        *last = '\0';
        last = strrchr(date, '-');
        if (last && last != date)
            *last = '\0';
    }
    snprintf(text, 64, "%s", date);
}

/* ---- order ---- */

static int by_time(const void *a, const void *b)
{
    const stericol_input_state *first = a, *second = b;
    const double difference = middle(first) - middle(second);
    if (difference < 0.0 || difference > 0.0)
        return difference < 0.0 ? -1 : 1;
    if (first->source != second->source)
        return first->source < second->source ? -1 : 1;
    return (first->step > second->step) - (first->step < second->step);
}

static stericol_status sort_states(const stericol_input_reader *reader, const stericol_epoch *epoch,
                                   stericol_input_states *states)
{
    size_t dated = 0;
    for (size_t i = 0; i < states->count; i++)
        dated += states->items[i].dated;
    if (dated && dated < states->count) {
        size_t first = 0;
        while (states->items[first].dated)
            first++;
        stericol_fail(reader->context, STERICOL_INPUT, epoch->sources[states->items[first].source].path, NULL,
                      "give files that all have dates, or none",
                      "no dates here (%s), but in other files of the epoch", states->undated);
        return STERICOL_INPUT;
    }
    if (!dated)
        return STERICOL_OK;
    qsort(states->items, states->count, sizeof *states->items, by_time);
    for (size_t i = 1; i < states->count; i++) {
        const stericol_input_state *state = &states->items[i], *before = state - 1;
        char text[64];
        if (middle(state) - middle(before) > same_time)
            continue;
        state_text(states, state, i, text);
        stericol_fail(reader->context, STERICOL_INPUT, epoch->sources[state->source].path, NULL,
                      "give each time once", "the time %s stands also in %s", text,
                      state->source == before->source ? "another step of it"
                                                      : epoch->sources[before->source].path);
        return STERICOL_INPUT;
    }
    return STERICOL_OK;
}

/* ---- intervals between stamps ---- */

static int by_value(const void *a, const void *b)
{
    const double first = *(const double *)a, second = *(const double *)b;
    return (first > second) - (first < second);
}

static stericol_status median_gap(const stericol_input_reader *reader, const stericol_input_states *states,
                                  double *gap)
{
    const size_t count = states->count - 1;
    double *gaps = stericol_new_array(count, sizeof *gaps);
    if (!gaps)
        return stericol_fail_memory(reader->context, count * sizeof *gaps, "the times");
    for (size_t i = 0; i < count; i++)
        gaps[i] = states->items[i + 1].at - states->items[i].at;
    qsort(gaps, count, sizeof *gaps, by_value);
    *gap = gaps[count / 2];
    free(gaps);
    return STERICOL_OK;
}

/* The calendar month or year that holds the stamp. */
static void span_of(stericol_cf_calendar calendar, double at, bool year, double *start, double *end)
{
    stericol_cf_date date = stericol_cf_date_of(calendar, at);
    date.day = 1;
    date.seconds = 0.0;
    if (year)
        date.month = 1;
    if (!stericol_cf_day_number(calendar, &date, start))
        *start = at;
    if (year || date.month == 12) {
        date.month = 1;
        date.year++;
    } else {
        date.month++;
    }
    if (!stericol_cf_day_number(calendar, &date, end))
        *end = at;
}

/* Whether every stamp has a calendar month (year) of its own. */
static bool own_spans(const stericol_input_states *states, bool year)
{
    for (size_t i = 1; i < states->count; i++) {
        double start, end;
        span_of(states->calendar, states->items[i - 1].at, year, &start, &end);
        if (states->items[i].at < end)
            return false;
    }
    return true;
}

static stericol_status set_intervals(const stericol_input_reader *reader, stericol_input_states *states)
{
    bool missing = false;
    double gap = 0.0;
    for (size_t i = 0; i < states->count; i++)
        missing = missing || (states->items[i].dated && !states->items[i].bounded);
    if (!missing || states->count < 2)
        return STERICOL_OK;
    const stericol_status status = median_gap(reader, states, &gap);
    if (status != STERICOL_OK)
        return status;
    const bool monthly = gap > 27.5 && gap < 31.5 && own_spans(states, false);
    const bool yearly = gap > 359.0 && gap < 367.0 && own_spans(states, true);
    for (size_t i = 0; i < states->count; i++) {
        stericol_input_state *state = &states->items[i];
        if (state->bounded)
            continue;
        if (monthly || yearly) {
            span_of(states->calendar, state->at, yearly, &state->start, &state->end);
            continue;
        }
        const double before = i > 0 ? state->at - state[-1].at : gap;
        const double after = i + 1 < states->count ? state[1].at - state->at : gap;
        /* A hole in the series does not make its neighbours longer. */
        state->start = state->at - 0.5 * fmin(before, gap);
        state->end = state->at + 0.5 * fmin(after, gap);
    }
    stericol_input_say(reader, STERICOL_NOTE, NULL, "no time bounds: each time stands for %s",
                       monthly  ? "the calendar month that holds it"
                       : yearly ? "the calendar year that holds it"
                                : "the interval halfway to its neighbours");
    return STERICOL_OK;
}

/* ---- choice ---- */

static stericol_status nothing_chosen(const stericol_input_reader *reader, const stericol_epoch *epoch,
                                      const stericol_input_states *states)
{
    char first[STERICOL_CF_DATE_ROOM], last[STERICOL_CF_DATE_ROOM];
    date_text(states->calendar, states->items[0].start, first);
    date_text(states->calendar,
              states->items[states->count - 1].end > states->items[states->count - 1].start
                  ? states->items[states->count - 1].end - same_time
                  : states->items[states->count - 1].end,
              last);
    return stericol_fail(reader->context, STERICOL_NOTHING, epoch->sources[states->items[0].source].path,
                         NULL, "choose a window that holds data",
                         "no time lies in --%s-time %s; there are %zu from %s to %s", epoch->label,
                         epoch->request.time_window, states->count, first, last);
}

/* [*from, *to) of the sorted states. */
static stericol_status choose(const stericol_input_reader *reader, const stericol_epoch *epoch,
                              const stericol_input_states *states, size_t *from, size_t *to)
{
    const stericol_epoch_request *request = &epoch->request;
    const char *path = epoch->sources[states->items[0].source].path;
    *from = 0;
    *to = states->count;
    assert(!(request->time_window && request->first_step));
    if (request->first_step) {
        if (request->last_step > states->count || request->first_step > request->last_step)
            return stericol_fail(reader->context, STERICOL_NOTHING, path, NULL, "choose steps within them",
                                 "--%s-step %zu..%zu is outside the %zu steps that there are", epoch->label,
                                 request->first_step, request->last_step, states->count);
        *from = request->first_step - 1;
        *to = request->last_step;
        return STERICOL_OK;
    }
    if (!request->time_window)
        return STERICOL_OK;
    if (!states->items[0].dated) {
        char remedy[64];
        snprintf(remedy, sizeof remedy, "choose by --%s-step", epoch->label);
        return stericol_fail(reader->context, STERICOL_INPUT, path, NULL, remedy,
                             "--%s-time cannot choose here: %s", epoch->label,
                             states->undated ? states->undated : "there are no dates");
    }
    double first, last;
    const char *reason = NULL;
    if (!stericol_cf_window_read(request->time_window, states->calendar, &first, &last, &reason))
        return stericol_fail(reader->context, STERICOL_USAGE, NULL, NULL,
                             "write FROM..TO, for example 2005-01..2009-12", "--%s-time %s: %s", epoch->label,
                             request->time_window, reason ? reason : "not a window");
    while (*from < *to && middle(&states->items[*from]) < first)
        ++*from;
    while (*to > *from && middle(&states->items[*to - 1]) >= last)
        --*to;
    return *from < *to ? STERICOL_OK : nothing_chosen(reader, epoch, states);
}

/* ---- temperature and salinity of one time ---- */

/* The state nearest to `day`. */
static size_t nearest(const stericol_input_states *states, double day)
{
    size_t low = 0, high = states->count;
    while (low < high) {
        const size_t half = low + (high - low) / 2;
        if (middle(&states->items[half]) < day)
            low = half + 1;
        else
            high = half;
    }
    if (low == states->count ||
        (low > 0 && day - middle(&states->items[low - 1]) < middle(&states->items[low]) - day))
        return low - 1;
    return low;
}

static bool partner_of(const stericol_input_states *ours, size_t i, const stericol_input_states *theirs,
                       size_t *at)
{
    const stericol_input_state *state = &ours->items[i];
    if (!state->dated) {
        *at = i;
        return ours->count == theirs->count;
    }
    *at = nearest(theirs, middle(state));
    const stericol_input_state *other = &theirs->items[*at];
    double reach = 0.5 * fmax(state->end - state->start, other->end - other->start);
    if (!(reach > 0.0))
        reach = instant_reach;
    return fabs(middle(other) - middle(state)) < reach;
}

static stericol_status no_partner(const stericol_input_reader *reader, const stericol_epoch *epoch,
                                  stericol_input_quantity has, size_t i)
{
    const stericol_input_states *states = &epoch->states[has];
    const stericol_input_quantity other =
        has == STERICOL_INPUT_TEMPERATURE ? STERICOL_INPUT_SALINITY : STERICOL_INPUT_TEMPERATURE;
    char text[64], remedy[80];
    state_text(states, &states->items[i], i, text);
    snprintf(remedy, sizeof remedy, "give both for the same times, or narrow --%s-time", epoch->label);
    return stericol_fail(reader->context, STERICOL_INPUT, epoch->sources[states->items[i].source].path, NULL,
                         remedy, "%s at %s has no %s to go with it", stericol_input_quantity_name[has], text,
                         stericol_input_quantity_name[other]);
}

static void set_part(stericol_epoch *epoch, stericol_input_member *member, stericol_input_quantity quantity,
                     const stericol_input_state *state)
{
    const char *path = epoch->sources[state->source].path;
    member->source[quantity] = state->source;
    member->step[quantity] = state->step;
    if (quantity == STERICOL_INPUT_TEMPERATURE)
        member->shown.temperature_file = path;
    else
        member->shown.salinity_file = path;
}

static stericol_status pair(const stericol_input_reader *reader, stericol_epoch *epoch, size_t from,
                            size_t to)
{
    const stericol_input_states *ours = &epoch->states[STERICOL_INPUT_TEMPERATURE];
    const stericol_input_states *theirs = &epoch->states[STERICOL_INPUT_SALINITY];
    if (ours->items[0].dated != theirs->items[0].dated && (ours->count > 1 || theirs->count > 1))
        return stericol_fail(reader->context, STERICOL_INPUT, epoch->sources[theirs->items[0].source].path,
                             NULL, "give files that both have dates",
                             "salinity and temperature cannot be matched: only one of them has dates");
    if (ours->items[0].dated != theirs->items[0].dated)
        stericol_input_say(reader, STERICOL_WARNING, NULL,
                           "only one of temperature and salinity has a date; the two are taken together");
    size_t last = SIZE_MAX;
    for (size_t i = from; i < to; i++) {
        size_t at = 0;
        if (ours->items[0].dated == theirs->items[0].dated &&
            (!partner_of(ours, i, theirs, &at) || at == last))
            return no_partner(reader, epoch, STERICOL_INPUT_TEMPERATURE, i);
        last = at;
        set_part(epoch, &epoch->members[i - from], STERICOL_INPUT_SALINITY, &theirs->items[at]);
    }
    if (epoch->request.first_step || !theirs->items[0].dated || !ours->items[0].dated)
        return STERICOL_OK;
    /* A salinity in the window that nothing goes with is a hole in the temperature. */
    size_t first, end;
    if (choose(reader, epoch, theirs, &first, &end) != STERICOL_OK)
        return stericol_context_status(reader->context);
    for (size_t i = first; i < end; i++) {
        size_t at;
        if (!partner_of(theirs, i, ours, &at))
            return no_partner(reader, epoch, STERICOL_INPUT_SALINITY, i);
    }
    return STERICOL_OK;
}

/* ---- weights ---- */

static void describe_member(const stericol_input_states *states, const stericol_input_state *state,
                            size_t order, stericol_epoch_member *shown)
{
    shown->dated = state->dated;
    shown->start = state->start;
    shown->end = state->end;
    shown->length = state->dated ? state->end - state->start : state->length;
    shown->month = state->month;
    if (state->dated && shown->length < most_month)
        shown->month = stericol_cf_date_of(states->calendar, middle(state)).month;
    if (!(shown->length > 0.0))
        shown->length = 1.0;
    state_text(states, state, order, shown->text);
}

/* Mean length of the calendar month over the years in which it is there. */
static double month_weight(const stericol_epoch *epoch, const stericol_input_states *states, int month)
{
    double sum = 0.0;
    size_t years = 0;
    long long last = 0;
    for (size_t i = 0; i < epoch->member_count; i++) {
        const stericol_epoch_member *shown = &epoch->members[i].shown;
        if (shown->month != month)
            continue;
        if (!shown->dated)
            return stericol_input_month_length(states->calendar, month);
        const long long year = stericol_cf_date_of(states->calendar, 0.5 * (shown->start + shown->end)).year;
        if (years && year == last)
            continue;
        last = year;
        years++;
        sum += stericol_cf_days_in_month(states->calendar, year, month);
    }
    return years ? sum / (double)years : 0.0;
}

static int by_month(const void *a, const void *b)
{
    const stericol_input_member *first = a, *second = b;
    if (first->shown.month != second->shown.month)
        return first->shown.month < second->shown.month ? -1 : 1;
    return (first->order > second->order) - (first->order < second->order);
}

static void weigh(stericol_epoch *epoch, const stericol_input_states *states)
{
    bool coarse = false;
    double weight[13] = {0.0};
    for (size_t i = 0; i < epoch->member_count; i++)
        coarse = coarse || epoch->members[i].shown.month == 0;
    for (int month = 1; month <= 12 && !coarse; month++)
        weight[month] = month_weight(epoch, states, month);
    for (size_t i = 0; i < epoch->member_count; i++) {
        stericol_epoch_member *shown = &epoch->members[i].shown;
        if (coarse)
            shown->month = 0;
        shown->month_weight = weight[shown->month];
    }
    qsort(epoch->members, epoch->member_count, sizeof *epoch->members, by_month);
}

/* ---- words ---- */

static const char *cadence(const stericol_epoch *epoch)
{
    double least = INFINITY, most = 0.0;
    for (size_t i = 0; i < epoch->member_count; i++) {
        const double length = epoch->members[i].shown.end - epoch->members[i].shown.start;
        least = fmin(least, length);
        most = fmax(most, length);
    }
    if (least > 27.5 && most < most_month)
        return "monthly mean";
    if (least > 359.0 && most < 367.0)
        return "annual mean";
    return least > 0.9 && most < 1.1 ? "daily mean" : "time";
}

static stericol_status describe(const stericol_input_reader *reader, stericol_epoch *epoch,
                                const stericol_input_states *states)
{
    stericol_text text = {0};
    const char *many = epoch->member_count == 1 ? "" : "s";
    double first = INFINITY, last = -INFINITY;
    for (size_t i = 0; i < epoch->member_count; i++) {
        first = fmin(first, epoch->members[i].shown.start);
        last = fmax(last, epoch->members[i].shown.end > epoch->members[i].shown.start
                              ? epoch->members[i].shown.end - same_time
                              : epoch->members[i].shown.end);
    }
    epoch->has_dates = epoch->members[0].shown.dated;
    if (epoch->has_dates) {
        date_text(states->calendar, first, epoch->first_date);
        date_text(states->calendar, last, epoch->last_date);
        if (strcmp(epoch->first_date, epoch->last_date) == 0)
            stericol_text_format(&text, "%s, ", epoch->first_date);
        else
            stericol_text_format(&text, "%s to %s, ", epoch->first_date, epoch->last_date);
        stericol_text_format(&text, "%zu %s%s", epoch->member_count, cadence(epoch), many);
    } else if (states->items[0].climatology) {
        stericol_text_format(&text, "climatology, %zu step%s", epoch->member_count, many);
    } else if (states->count == 1) {
        stericol_text_add(&text, "one state without a date");
    } else {
        stericol_text_format(&text, "%zu step%s of %zu without dates", epoch->member_count, many,
                             states->count);
    }
    epoch->description = stericol_text_take(&text);
    return epoch->description ? STERICOL_OK : stericol_fail_memory(reader->context, 0, "a description");
}

stericol_status stericol_input_choose_members(const stericol_input_reader *reader, stericol_epoch *epoch)
{
    stericol_status status = STERICOL_OK;
    const stericol_input_quantity main = epoch->states[STERICOL_INPUT_TEMPERATURE].count
                                             ? STERICOL_INPUT_TEMPERATURE
                                             : STERICOL_INPUT_SALINITY;
    stericol_input_states *states = &epoch->states[main];
    size_t from = 0, to = 0;
    for (int i = 0; i < STERICOL_INPUT_QUANTITIES && status == STERICOL_OK; i++) {
        if (epoch->states[i].count)
            status = sort_states(reader, epoch, &epoch->states[i]);
        if (status == STERICOL_OK)
            status = set_intervals(reader, &epoch->states[i]);
    }
    if (status == STERICOL_OK)
        status = choose(reader, epoch, states, &from, &to);
    if (status != STERICOL_OK)
        return status;
    epoch->member_count = to - from;
    epoch->members = stericol_new_array(epoch->member_count, sizeof *epoch->members);
    if (!epoch->members)
        return stericol_fail_memory(reader->context, 0, "the members of the epoch");
    for (size_t i = from; i < to; i++) {
        stericol_input_member *member = &epoch->members[i - from];
        member->order = i;
        set_part(epoch, member, main, &states->items[i]);
        describe_member(states, &states->items[i], i, &member->shown);
    }
    if (main == STERICOL_INPUT_TEMPERATURE && epoch->states[STERICOL_INPUT_SALINITY].count)
        status = pair(reader, epoch, from, to);
    if (status != STERICOL_OK)
        return status;
    weigh(epoch, states);
    return describe(reader, epoch, states);
}
