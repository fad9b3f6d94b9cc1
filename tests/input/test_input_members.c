/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Which times make an epoch, and their average against arithmetic by hand. */
#include "made_sea.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Sums of a few dozen numbers below 100: some units in the last place. */
static const double rounding = 1e-12;

/* Middle of the calendar months from January 2004, a leap year. */
static const double *month_middles(void)
{
    static double middles[36];
    static const int days[12] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    double start = 0.0;
    for (int i = 0; i < 36; i++) {
        const int length = days[i % 12] + (i == 1);
        middles[i] = start + length / 2.0;
        start += length;
    }
    return middles;
}

/* 10 + the number of the month (0 for January), a degree more every year; the second column without September
   2004, the third without any September, the fourth with one value only, the fifth with a value too hot in
   half the times. */
static double seasonal(size_t t, size_t k, size_t j, size_t i)
{
    (void)k;
    (void)j;
    if (i == 1 && t == 8)
        return (double)NAN;
    if (i == 2 && t % 12 == 8)
        return (double)NAN;
    if (i == 3 && t != 5)
        return (double)NAN;
    if (i == 4 && t % 2 && k == 1)
        return 90.0;
    return 10.0 + (double)(t % 12) + (double)(t / 12);
}

static double salt(size_t t, size_t k, size_t j, size_t i)
{
    (void)k;
    (void)j;
    (void)i;
    return 30.0 + (double)(t % 12) / 8.0;
}

static sea two_years(const char *file)
{
    sea how = sea_plain(file);
    how.times = 24;
    how.time = month_middles();
    how.time_units = "days since 2004-01-01";
    how.temperature.value = seasonal;
    how.salinity.value = salt;
    return how;
}

/* Lengths of the months of 2004 and 2005; February as the mean of both. */
static const double lengths[12] = {31, 28.5, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};

static double by_hand(const double month[12], const bool there[12])
{
    double sum = 0.0, weight = 0.0;
    for (int i = 0; i < 12; i++) {
        if (!there[i])
            continue;
        sum += lengths[i] * month[i];
        weight += lengths[i];
    }
    return sum / weight;
}

static void test_lost_september(void **state)
{
    (void)state;
    const sea how = two_years("september.nc");
    double plane[SEA_POINTS], month[12];
    bool there[12];
    try one;
    try_begin(&one, sea_write(&how));
    one.request.least_times = 0.5;
    try_open(&one);
    assert_string_equal(stericol_epoch_description(one.epoch), "2004-01-01 to 2005-12-31, 24 monthly means");
    size_t count[12];
    stericol_epoch_months(one.epoch, count);
    for (int i = 0; i < 12; i++) {
        assert_int_equal(count[i], 2);
        month[i] = 10.0 + i + 0.5; /* mean of both years */
        there[i] = true;
    }
    /* The February of the leap year counts 29 days against 28. */
    month[1] = (29.0 * 11.0 + 28.0 * 12.0) / 57.0;
    try_load(&one, 0, plane, NULL);
    assert_close(plane[0], by_hand(month, there), rounding);
    /* One September lost: the other one stands for the month. */
    month[8] = 19.0;
    assert_close(plane[1], by_hand(month, there), rounding);
    /* Both lost: eleven months. */
    there[8] = false;
    assert_close(plane[2], by_hand(month, there), rounding);
    /* A plain mean of what is there would be another number: the test can fail. */
    assert_true(fabs(plane[1] - (24.0 * 16.0 - 18.0) / 23.0) > 1e-3);
    /* One of 24 is fewer than half. */
    assert_nan(plane[3]);
    try_end(&one);
}

/* Every other value of the fifth column is too hot at level 2: half the members are left. */
static void test_rejected(void **state)
{
    (void)state;
    const sea how = two_years("rejected.nc");
    double plane[SEA_POINTS];
    stericol_epoch_tally tally = {{0}, {0}, 0};
    for (int enough = 0; enough < 2; enough++) {
        try one;
        try_begin(&one, sea_write(&how));
        one.request.least_times = enough ? 0.5 : 0.6;
        try_open(&one);
        /* One row: 6 values, too few to condemn the level. */
        memset(&tally, 0, sizeof tally);
        assert_int_equal(stericol_epoch_load(one.seen.context, one.epoch, 1, 1, 2, 1, plane, NULL, &tally),
                         STERICOL_OK);
        if (enough)
            assert_true(isfinite(plane[4]));
        else
            assert_same_number(plane[4], (double)INFINITY);
        assert_int_equal(tally.temperature.values, 24 * SEA_COLUMNS);
        assert_int_equal(tally.temperature.above, 12);
        assert_int_equal(tally.temperature.missing, 1 + 2 + 23);
        try_end(&one);
    }
}

static double holes(size_t t, size_t k, size_t j, size_t i)
{
    (void)k;
    (void)j;
    return t < i ? (double)NAN : 10.0; /* column i lacks i of the members */
}

static void test_least_times(void **state)
{
    (void)state;
    static const struct {
        double least;
        size_t columns; /* with a value: 4 members, column i has 4 - i */
    } cases[] = {{0.5, 3}, {0.51, 2}, {0.75, 2}, {0.7500001, 1}, {1.0, 1}, {0.25, 4}, {0.0, 4}, {0.2, 4}};
    for (size_t n = 0; n < sizeof cases / sizeof *cases; n++) {
        sea how = two_years("least.nc");
        double plane[SEA_POINTS];
        try one;
        how.times = 4;
        how.temperature.value = holes;
        try_begin(&one, sea_write(&how));
        one.request.least_times = cases[n].least;
        try_open(&one);
        try_load(&one, 0, plane, NULL);
        for (size_t i = 0; i < SEA_COLUMNS; i++)
            if (i < cases[n].columns)
                assert_close(plane[i], 10.0, rounding);
            else
                assert_nan(plane[i]);
        try_end(&one);
    }
}

/* One member is not averaged: the very bits of the file, also of numbers that have no short form. */
static double odd(size_t t, size_t k, size_t j, size_t i)
{
    return 1.0 / (3.0 + (double)t + (double)k) + sqrt((double)(j + i + 2));
}

static void test_one_member(void **state)
{
    (void)state;
    sea how = two_years("one.nc");
    double plane[SEA_POINTS], alone[SEA_POINTS];
    try one;
    how.temperature.value = odd;
    try_begin(&one, sea_write(&how));
    one.request.first_step = one.request.last_step = 7;
    try_open(&one);
    assert_string_equal(stericol_epoch_description(one.epoch), "2004-07-01 to 2004-07-31, 1 monthly mean");
    try_load(&one, 2, plane, NULL);
    assert_int_equal(
        stericol_epoch_load_member(one.seen.context, one.epoch, 0, 2, 1, 0, SEA_ROWS, alone, NULL, NULL),
        STERICOL_OK);
    for (size_t p = 0; p < SEA_POINTS; p++) {
        assert_same_number(plane[p], odd(6, 2, p / SEA_COLUMNS, p % SEA_COLUMNS));
        assert_same_number(alone[p], plane[p]);
    }
    try_end(&one);
}

static void check_window(const sea *how, const char *window, const char *description, size_t members)
{
    try one;
    try_begin(&one, sea_write(how));
    one.request.time_window = window;
    try_open(&one);
    assert_string_equal(stericol_epoch_description(one.epoch), description);
    assert_int_equal(stericol_epoch_member_count(one.epoch), members);
    try_end(&one);
}

/* The same window whether months are stamped at their first, middle or last day; years and days likewise. */
static void test_window_edges(void **state)
{
    (void)state;
    sea how = two_years("edges.nc");
    double stamps[24], days[40], years[4];
    const double *middles = month_middles();
    for (int kind = 0; kind < 3; kind++) {
        double start = 0.0;
        for (int i = 0; i < 24; i++) {
            const double length = 2.0 * (middles[i] - start);
            stamps[i] = kind == 0 ? start : kind == 1 ? middles[i] : start + length - 1.0;
            start += length;
        }
        how.time = stamps;
        check_window(&how, "2004-03..2005-02", "2004-03-01 to 2005-02-28, 12 monthly means", 12);
        check_window(&how, "2004-02", "2004-02-01 to 2004-02-29, 1 monthly mean", 1);
        check_window(&how, "2005", "2005-01-01 to 2005-12-31, 12 monthly means", 12);
        check_window(&how, "1990..2030", "2004-01-01 to 2005-12-31, 24 monthly means", 24);
        /* The middle of a month decides: that of January 2004 is the 16th at noon. */
        check_window(&how, "2004-01-17..2004-02", "2004-02-01 to 2004-02-29, 1 monthly mean", 1);
        check_window(&how, "2004-01-16..2004-02", "2004-01-01 to 2004-02-29, 2 monthly means", 2);
    }
    for (int i = 0; i < 40; i++)
        days[i] = i + 0.5;
    how.time = days;
    how.times = 40;
    check_window(&how, "2004-01", "2004-01-01 to 2004-01-31, 31 daily means", 31);
    check_window(&how, "2004-02-01..2004-02-03", "2004-02-01 to 2004-02-03, 3 daily means", 3);
    /* Stamps at midnight: the stamp at the very end belongs to the next day. */
    for (int i = 0; i < 40; i++)
        days[i] = i;
    check_window(&how, "2004-01-05..2004-01-06", "2004-01-04 to 2004-01-06, 2 daily means", 2);
    for (int i = 0; i < 4; i++)
        years[i] = 366.0 * (i > 0) + 365.0 * (i > 0 ? i - 1 : 0) + 182.5;
    how.time = years;
    how.times = 4;
    check_window(&how, "2005..2006", "2005-01-01 to 2006-12-31, 2 annual means", 2);
}

/* Annual means: a leap year weighs 366 days; the last of them is absent at some points. */
static double by_year(size_t t, size_t k, size_t j, size_t i)
{
    (void)k;
    (void)j;
    return i == 1 && t == 2 ? (double)NAN : 10.0 + 3.0 * (double)t * (double)t;
}

static void test_annual(void **state)
{
    (void)state;
    static const double stamps[3] = {183.0, 548.5, 913.5}; /* 2004, 2005, 2006 */
    sea how = two_years("annual.nc");
    double plane[SEA_POINTS];
    size_t count[12];
    try one;
    how.temperature.value = by_year;
    how.time = stamps;
    how.times = 3;
    try_begin(&one, sea_write(&how));
    try_open(&one);
    assert_string_equal(stericol_epoch_description(one.epoch), "2004-01-01 to 2006-12-31, 3 annual means");
    assert_string_equal(stericol_epoch_member_at(one.epoch, 0)->text, "2004");
    assert_int_equal(stericol_epoch_member_at(one.epoch, 0)->month, 0);
    assert_close(stericol_epoch_member_at(one.epoch, 0)->length, 366.0, 0.0);
    stericol_epoch_months(one.epoch, count);
    for (int i = 0; i < 12; i++)
        assert_int_equal(count[i], 0);
    try_load(&one, 0, plane, NULL);
    assert_close(plane[0], (366.0 * 10.0 + 365.0 * 13.0 + 365.0 * 22.0) / 1096.0, rounding);
    assert_close(plane[1], (366.0 * 10.0 + 365.0 * 13.0) / 731.0, rounding);
    try_end(&one);
}

/* Bounds win over the stamps: pentads of unequal length, two in January and one in February. */
static void test_bounds(void **state)
{
    (void)state;
    static const double stamps[3] = {0.0, 0.5, 40.0}, bounds[6] = {0.0, 10.0, 10.0, 31.0, 31.0, 51.0};
    sea how = two_years("bounds.nc");
    double plane[SEA_POINTS];
    try one;
    how.temperature.value = by_year;
    how.time = stamps;
    how.times = 3;
    how.time_bounds = bounds;
    try_begin(&one, sea_write(&how));
    try_open(&one);
    assert_int_equal(stericol_epoch_member_count(one.epoch), 3);
    const stericol_epoch_member *member = stericol_epoch_member_at(one.epoch, 1);
    assert_int_equal(member->month, 1);
    assert_close(member->length, 21.0, 1e-9);
    assert_close(member->month_weight, 31.0, 0.0);
    assert_close(stericol_epoch_member_at(one.epoch, 2)->month_weight, 29.0, 0.0);
    try_load(&one, 0, plane, NULL);
    const double january = (10.0 * 10.0 + 21.0 * 13.0) / 31.0;
    assert_close(plane[0], (31.0 * january + 29.0 * 22.0) / 60.0, rounding);
    assert_close(plane[1], january, rounding);
    assert_int_equal(stericol_epoch_assumption_count(one.epoch), 0);
    try_end(&one);
}

/* Month lengths of every calendar (CF 1.10, section 4.4.1). */
static void test_calendars(void **state)
{
    (void)state;
    static const struct {
        const char *calendar;
        double days[3]; /* January to March 2004 */
    } calendars[] = {
        {"noleap", {31, 28, 31}},   {"365_day", {31, 28, 31}},   {"all_leap", {31, 29, 31}},
        {"366_day", {31, 29, 31}},  {"360_day", {30, 30, 30}},   {"julian", {31, 29, 31}},
        {"standard", {31, 29, 31}}, {"gregorian", {31, 29, 31}}, {"proleptic_gregorian", {31, 29, 31}}};
    for (size_t n = 0; n < sizeof calendars / sizeof *calendars; n++) {
        sea how = two_years("calendar.nc");
        const double *days = calendars[n].days;
        const double stamps[3] = {days[0] / 2.0, days[0] + days[1] / 2.0, days[0] + days[1] + days[2] / 2.0};
        double plane[SEA_POINTS];
        try one;
        how.calendar = calendars[n].calendar;
        how.temperature.value = by_year;
        how.time = stamps;
        how.times = 3;
        try_begin(&one, sea_write(&how));
        one.request.time_window = "2004-01..2004-03";
        try_open(&one);
        for (size_t i = 0; i < 3; i++) {
            assert_close(stericol_epoch_member_at(one.epoch, i)->length, days[i], 1e-9);
            assert_close(stericol_epoch_member_at(one.epoch, i)->month_weight, days[i], 0.0);
        }
        try_load(&one, 0, plane, NULL);
        assert_close(plane[0],
                     (days[0] * 10.0 + days[1] * 13.0 + days[2] * 22.0) / (days[0] + days[1] + days[2]),
                     rounding);
        try_end(&one);
    }
}

/* Twelve months of no year, in the ways that files write it. */
static void test_climatologies(void **state)
{
    (void)state;
    static double months[12], days[12], bounds[24];
    /* Mean month lengths of the Gregorian calendar: 97 leap years in 400. */
    static const double mean[12] = {31, 28.2425, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    static const int length[12] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    double start = 0.0, sum = 0.0, weight = 0.0;
    for (int i = 0; i < 12; i++) {
        months[i] = i + 0.5;
        days[i] = start + length[i] / 2.0;
        bounds[2 * i] = start;
        /* ... to the end of that month 29 years later (7 leap days to January and February 2034, 8 later on)
         */
        bounds[2 * i + 1] = start + length[i] + 29 * 365 + 7;
        start += length[i];
        sum += mean[i] * (10.0 + i);
        weight += mean[i];
    }
    for (int kind = 0; kind < 3; kind++) {
        sea how = two_years("climatology.nc");
        double plane[SEA_POINTS];
        try one;
        how.times = 12;
        how.time = kind == 0 ? months : days;
        how.time_units = kind == 0   ? "months since 0000-01-01"
                         : kind == 1 ? "days since 0001-01-01"
                                     : "days since 2005-01-01";
        if (kind == 1)
            how.time_units = "days since 0000-01-01";
        if (kind == 2) {
            how.time_bounds = bounds;
            how.bounds_attribute = "climatology";
        }
        try_begin(&one, sea_write(&how));
        try_open(&one);
        assert_string_equal(stericol_epoch_description(one.epoch), "climatology, 12 steps");
        assert_assumed(&one, "theta: its time axis is a climatology: steps can be chosen, dates cannot");
        const stericol_epoch_member *member = stericol_epoch_member_at(one.epoch, 8);
        assert_int_equal(member->month, 9);
        assert_false(member->dated);
        assert_string_equal(member->text, "September of many years");
        assert_null(stericol_epoch_first_date(one.epoch));
        try_load(&one, 0, plane, NULL);
        assert_close(plane[0], sum / weight, rounding);
        try_end(&one);
        try_begin(&one, made_path("climatology.nc"));
        one.request.first_step = 3;
        one.request.last_step = 5;
        try_open(&one);
        assert_int_equal(stericol_epoch_member_count(one.epoch), 3);
        assert_int_equal(stericol_epoch_member_at(one.epoch, 0)->month, 3);
        try_end(&one);
        try_begin(&one, made_path("climatology.nc"));
        one.request.time_window = "2005";
        assert_open_fails(
            &one, STERICOL_INPUT,
            "--earlier-time cannot choose here: its time axis is a climatology; choose by --earlier-step");
    }
}

/* Months since a real year are calendar months. */
static void test_months_since(void **state)
{
    (void)state;
    static const double months[3] = {1.0, 2.0, 3.0};
    sea how = two_years("months.nc");
    try one;
    how.times = 3;
    how.time = months;
    how.time_units = "months since 2003-12-01";
    try_begin(&one, sea_write(&how));
    one.request.time_window = "2004-02";
    try_open(&one);
    assert_string_equal(stericol_epoch_description(one.epoch), "2004-02-01 to 2004-02-29, 1 monthly mean");
    assert_assumed(&one, "time: \"months since 2003-12-01\": taken as calendar months and years");
    try_end(&one);
}

static void test_undated(void **state)
{
    (void)state;
    static const struct {
        const char *units, *calendar, *why;
    } cases[] = {{NULL, NULL, "its time axis has no units"},
                 {"days since 2004-01-01", "none", "its calendar is \"none\""},
                 {"days since 2004-01-01", "lunar", "its calendar is not known"}};
    for (size_t n = 0; n < sizeof cases / sizeof *cases; n++) {
        sea how = two_years("undated.nc");
        char text[160];
        double plane[SEA_POINTS];
        try one;
        how.times = 4;
        how.time_units = cases[n].units;
        how.calendar = cases[n].calendar;
        try_begin(&one, sea_write(&how));
        one.request.first_step = 2;
        one.request.last_step = 3;
        try_open(&one);
        assert_string_equal(stericol_epoch_description(one.epoch), "2 steps of 4 without dates");
        (void)snprintf(text, sizeof text, "time: no dates: %s; taken by step", cases[n].why);
        assert_assumed(&one, text);
        assert_string_equal(stericol_epoch_member_at(one.epoch, 0)->text, "step 2");
        assert_close(stericol_epoch_member_at(one.epoch, 0)->length, 1.0, 0.0);
        try_load(&one, 0, plane, NULL);
        assert_close(plane[0], 0.5 * (11.0 + 12.0), rounding);
        try_end(&one);
        try_begin(&one, made_path("undated.nc"));
        one.request.time_window = "2004";
        (void)snprintf(text, sizeof text, "--earlier-time cannot choose here: %s; choose by --earlier-step",
                       cases[n].why);
        assert_open_fails(&one, STERICOL_INPUT, text);
    }
}

/* Members stand in the order in which they are averaged: by calendar month, then time. */
static void test_member_order(void **state)
{
    (void)state;
    const sea how = two_years("ordered.nc");
    try one;
    try_begin(&one, sea_write(&how));
    try_open(&one);
    for (size_t i = 0; i < 24; i++) {
        char text[16];
        (void)snprintf(text, sizeof text, "%s-%02zu", i % 2 ? "2005" : "2004", i / 2 + 1);
        assert_string_equal(stericol_epoch_member_at(one.epoch, i)->text, text);
    }
    try_end(&one);
}

static void test_refused_choices(void **state)
{
    (void)state;
    const sea how = two_years("choices.nc");
    try one;
    const char *path = sea_write(&how);
    try_begin(&one, path);
    one.request.time_window = "1990..1999";
    assert_open_fails(
        &one, STERICOL_NOTHING,
        "no time lies in --earlier-time 1990..1999; there are 24 from 2004-01-01 to 2005-12-31; choose a "
        "window that holds data");
    try_begin(&one, path);
    one.request.first_step = 20;
    one.request.last_step = 25;
    assert_open_fails(
        &one, STERICOL_NOTHING,
        "--earlier-step 20..25 is outside the 24 steps that there are; choose steps within them");
    try_begin(&one, path);
    one.request.time_window = "spring";
    assert_int_equal(stericol_epoch_open(one.seen.context, one.units, &one.request, &one.epoch),
                     STERICOL_USAGE);
    assert_true(strncmp(stericol_context_message(one.seen.context), "--earlier-time spring: ", 23) == 0);
    try_end(&one);
}

/* The same month in two files; a salinity without its temperature, and the other way round. */
static void test_unmatched(void **state)
{
    (void)state;
    sea how = two_years("first.nc"), other = two_years("second.nc");
    stericol_text text = {0};
    try one;
    how.times = 3;
    other.times = 3;
    other.first = 2;
    other.time = month_middles() + 2; /* March again */
    try_begin(&one, sea_write(&how));
    try_add(&one, sea_write(&other));
    stericol_text_format(&text, "the time 2004-03 stands also in %s; give each time once", one.paths[0]);
    /* The intervals are not known yet when the stamps are compared. */
    stericol_text_clear(&text);
    stericol_text_format(&text, "the time 2004-03-16 stands also in %s; give each time once", one.paths[0]);
    assert_open_fails_at(&one, STERICOL_INPUT, made_path("second.nc"), stericol_text_string(&text));
    stericol_text_free(&text);

    how.salinity.name = NULL;
    other.temperature.name = NULL;
    try_begin(&one, sea_write(&how));
    try_add(&one, sea_write(&other));
    assert_open_fails(
        &one, STERICOL_INPUT,
        "temperature at 2004-01 has no salinity to go with it; give both for the same times, or narrow "
        "--earlier-time");
    try_begin(&one, made_path("first.nc"));
    try_add(&one, made_path("second.nc"));
    one.request.time_window = "2004-03..2004-05";
    assert_open_fails_at(
        &one, STERICOL_INPUT, made_path("second.nc"),
        "salinity at 2004-04 has no temperature to go with it; give both for the same times, or "
        "narrow --earlier-time");
    /* Where they overlap all is well. */
    try_begin(&one, made_path("first.nc"));
    try_add(&one, made_path("second.nc"));
    one.request.time_window = "2004-03";
    try_open(&one);
    assert_int_equal(stericol_epoch_member_count(one.epoch), 1);
    try_end(&one);
}

static void test_mixed_dates(void **state)
{
    (void)state;
    sea how = two_years("first.nc"), other = two_years("second.nc");
    try one;
    how.times = 2;
    other.times = 2;
    other.time_units = NULL;
    try_begin(&one, sea_write(&how));
    try_add(&one, sea_write(&other));
    assert_open_fails_at(
        &one, STERICOL_INPUT, made_path("second.nc"),
        "no dates here (its time axis has no units), but in other files of the epoch; give files that "
        "all have dates, or none");
    other.time_units = "days since 2004-01-01";
    other.calendar = "noleap";
    try_begin(&one, sea_write(&how));
    try_add(&one, sea_write(&other));
    assert_open_fails_at(
        &one, STERICOL_INPUT, made_path("second.nc"),
        "time: its calendar \"noleap\" is not \"standard\" as in the files before it; give files of "
        "one calendar");
    how.time_units = other.time_units = NULL;
    other.calendar = NULL;
    how.salinity.name = other.temperature.name = NULL;
    other.times = 3;
    try_begin(&one, sea_write(&how));
    try_add(&one, sea_write(&other));
    assert_open_fails(
        &one, STERICOL_INPUT,
        "temperature at step 1 has no salinity to go with it; give both for the same times, or narrow "
        "--earlier-time");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_lost_september),  cmocka_unit_test(test_rejected),
        cmocka_unit_test(test_least_times),     cmocka_unit_test(test_one_member),
        cmocka_unit_test(test_window_edges),    cmocka_unit_test(test_annual),
        cmocka_unit_test(test_bounds),          cmocka_unit_test(test_calendars),
        cmocka_unit_test(test_climatologies),   cmocka_unit_test(test_months_since),
        cmocka_unit_test(test_undated),         cmocka_unit_test(test_member_order),
        cmocka_unit_test(test_refused_choices), cmocka_unit_test(test_unmatched),
        cmocka_unit_test(test_mixed_dates),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
