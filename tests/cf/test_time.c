/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "support/testing.h"

#include "cf/time.h"

#include <string.h>

/* Day numbers are doubles of at most 2.5e6 days: a rounding is worth 2.3e-10 days, 0.02 ms. */
static const double day_tolerance = 1e-9;
/* Dates are rounded to the millisecond. */
static const double second_tolerance = 1e-3;

static double days_of(stericol_cf_calendar calendar, long long year, int month, int day, double seconds)
{
    const stericol_cf_date date = {year, month, day, seconds};
    double days = NAN;

    if (!stericol_cf_day_number(calendar, &date, &days)) {
        print_error("no day number for %lld-%d-%d\n", year, month, day);
        fail();
    }
    return days;
}

static bool exists(stericol_cf_calendar calendar, long long year, int month, int day, double seconds)
{
    const stericol_cf_date date = {year, month, day, seconds};
    double days = -7.0;
    const bool found = stericol_cf_day_number(calendar, &date, &days);

    if (!found)
        assert_same_number(days, -7.0);
    return found;
}

/* J. Meeus, Astronomical Algorithms, ch. 7 (from memory: the worked examples and the table of Julian days).
 */
static void julian_days_agree_with_the_handbook(void **state)
{
    static const struct {
        long long year;
        int month;
        double day, julian_day;
    } rows[] = {
        {2000, 1, 1.5, 2451545.0},    {1999, 1, 1.0, 2451179.5},   {1987, 1, 27.0, 2446822.5},
        {1987, 6, 19.5, 2446966.0},   {1988, 1, 27.0, 2447187.5},  {1988, 6, 19.5, 2447332.0},
        {1900, 1, 1.0, 2415020.5},    {1600, 1, 1.0, 2305447.5},   {1600, 12, 31.0, 2305812.5},
        {1957, 10, 4.81, 2436116.31}, {837, 4, 10.3, 2026871.8},   {333, 1, 27.5, 1842713.0},
        {-123, 12, 31.0, 1676496.5},  {-122, 1, 1.0, 1676497.5},   {-1000, 7, 12.5, 1356001.0},
        {-1000, 2, 29.0, 1355866.5},  {-1001, 8, 17.9, 1355671.4}, {-4712, 1, 1.5, 0.0},
        {1582, 10, 4.0, 2299159.5},   {1582, 10, 15.0, 2299160.5},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        const double seconds = (rows[i].day - floor(rows[i].day)) * 86400.0;
        const double days =
            days_of(STERICOL_CF_CALENDAR_STANDARD, rows[i].year, rows[i].month, (int)rows[i].day, seconds);
        /* The fixed instant is 2000-01-01T00, Julian day 2451544.5. */
        const stericol_cf_date date =
            stericol_cf_date_of(STERICOL_CF_CALENDAR_STANDARD, rows[i].julian_day - 2451544.5);

        assert_close(days, rows[i].julian_day - 2451544.5, day_tolerance);
        assert_int_equal(date.year, rows[i].year);
        assert_int_equal(date.month, rows[i].month);
        assert_int_equal(date.day, (int)rows[i].day);
        assert_close(date.seconds, seconds, second_tolerance);
    }
}

static void dates_agree_with_another_library(void **state)
{
    static const struct {
        stericol_cf_calendar calendar;
        const char *unit;
        double value;
        long long year;
        int month, day, hour, minute;
        double second;
    } rows[] = {
#include "calendar_dates.h"
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        stericol_cf_time_unit unit;
        const char *reason;
        const double seconds = rows[i].hour * 3600 + rows[i].minute * 60 + rows[i].second;

        assert_true(stericol_cf_time_unit_read(rows[i].unit, rows[i].calendar, &unit, &reason));
        assert_null(reason);
        const double days = rows[i].value * unit.days_per_unit + unit.origin;
        const stericol_cf_date date = stericol_cf_date_of(rows[i].calendar, days);

        if (date.year != rows[i].year || date.month != rows[i].month || date.day != rows[i].day)
            print_error("row %zu: %s %g gave %lld-%d-%d\n", i, rows[i].unit, rows[i].value, date.year,
                        date.month, date.day);
        assert_int_equal(date.year, rows[i].year);
        assert_int_equal(date.month, rows[i].month);
        assert_int_equal(date.day, rows[i].day);
        assert_close(date.seconds, seconds, second_tolerance);
        assert_close(days_of(rows[i].calendar, rows[i].year, rows[i].month, rows[i].day, seconds), days,
                     day_tolerance * 10);
    }
}

/* Every day over several centuries: each calendar's days follow one another without gap, and there and back
 * is the same. */
static void days_follow_one_another(void **state)
{
    static const double from[] = {-153000.0, -800.0, -900000.0};

    (void)state;
    for (int calendar = STERICOL_CF_CALENDAR_STANDARD; calendar < STERICOL_CF_CALENDAR_NONE; calendar++) {
        for (size_t f = 0; f < sizeof from / sizeof *from; f++) {
            stericol_cf_date last = stericol_cf_date_of((stericol_cf_calendar)calendar, from[f] - 1);

            for (double days = from[f]; days < from[f] + 1600; days++) {
                const stericol_cf_date date = stericol_cf_date_of((stericol_cf_calendar)calendar, days);
                const bool next_day =
                    date.day == last.day + 1 && date.month == last.month && date.year == last.year;
                const bool next_month =
                    date.day == 1 && date.month == last.month + 1 && date.year == last.year;
                const bool next_year =
                    date.day == 1 && date.month == 1 && last.month == 12 && date.year == last.year + 1;
                const bool leap_of_1582 = calendar == STERICOL_CF_CALENDAR_STANDARD && date.day == 15 &&
                                          last.day == 4 && date.month == 10 && date.year == 1582;

                assert_true(next_day || next_month || next_year || leap_of_1582);
                assert_same_number(
                    days_of((stericol_cf_calendar)calendar, date.year, date.month, date.day, 0.0), days);
                last = date;
            }
        }
    }
}

/* CF 1.10, section 4.4.1 defines which days a calendar has. */
static void calendars_have_their_days(void **state)
{
    (void)state;
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 1582, 10, 5, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 1582, 10, 14, 0));
    assert_true(exists(STERICOL_CF_CALENDAR_PROLEPTIC, 1582, 10, 5, 0));
    assert_true(exists(STERICOL_CF_CALENDAR_STANDARD, 1500, 2, 29, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_PROLEPTIC, 1500, 2, 29, 0));
    assert_true(exists(STERICOL_CF_CALENDAR_JULIAN, 1900, 2, 29, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 1900, 2, 29, 0));
    assert_true(exists(STERICOL_CF_CALENDAR_STANDARD, 2000, 2, 29, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_NOLEAP, 2000, 2, 29, 0));
    assert_true(exists(STERICOL_CF_CALENDAR_ALLLEAP, 2001, 2, 29, 0));
    assert_true(exists(STERICOL_CF_CALENDAR_360, 2001, 2, 30, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_360, 2001, 1, 31, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_NONE, 2001, 1, 1, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 2001, 13, 1, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 2001, 0, 1, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 2001, 1, 0, 0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 2001, 1, 1, 86400.0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 2001, 1, 1, -1.0));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 2001, 1, 1, NAN));
    assert_false(exists(STERICOL_CF_CALENDAR_STANDARD, 2000000000, 1, 1, 0));
    assert_int_equal(stericol_cf_days_in_month(STERICOL_CF_CALENDAR_STANDARD, 1582, 10), 21);
    assert_int_equal(stericol_cf_days_in_month(STERICOL_CF_CALENDAR_STANDARD, 2004, 2), 29);
    assert_int_equal(stericol_cf_days_in_month(STERICOL_CF_CALENDAR_NOLEAP, 2004, 2), 28);
    assert_int_equal(stericol_cf_days_in_month(STERICOL_CF_CALENDAR_360, 2004, 2), 30);
    assert_int_equal(stericol_cf_days_in_month(STERICOL_CF_CALENDAR_NONE, 2004, 2), 0);
    assert_int_equal(stericol_cf_days_in_month(STERICOL_CF_CALENDAR_STANDARD, 2004, 13), 0);
}

static void impossible_days_have_no_date(void **state)
{
    static const double days[] = {NAN, INFINITY, -INFINITY, 1e300, -4e11};

    (void)state;
    for (size_t i = 0; i < sizeof days / sizeof *days; i++) {
        const stericol_cf_date date = stericol_cf_date_of(STERICOL_CF_CALENDAR_STANDARD, days[i]);

        assert_int_equal(date.month, 0);
        assert_int_equal(date.day, 0);
        assert_nan(date.seconds);
    }
    assert_int_equal(stericol_cf_date_of(STERICOL_CF_CALENDAR_NONE, 0.0).month, 0);
    assert_int_equal(stericol_cf_date_of(STERICOL_CF_CALENDAR_STANDARD, 3.5e11).month > 0, 1);
}

/* 24 steps of 1/24 day do not add up in binary; midnight must not become a second before it. */
static void hours_do_not_slip_below_midnight(void **state)
{
    stericol_cf_time_unit unit;
    const char *reason;

    (void)state;
    assert_true(stericol_cf_time_unit_read("hours since 1800-1-1 00:00:0.0", STERICOL_CF_CALENDAR_STANDARD,
                                           &unit, &reason));
    for (int day = 0; day < 100000; day++) {
        const stericol_cf_date date =
            stericol_cf_date_of(STERICOL_CF_CALENDAR_STANDARD, 24.0 * day * unit.days_per_unit + unit.origin);

        assert_same_number(date.seconds, 0.0);
    }
}

static void calendar_names(void **state)
{
    static const struct {
        const char *name;
        stericol_cf_calendar calendar;
        const char *given_back;
    } rows[] = {
        /* CF 1.10, section 4.4.1 */
        {NULL, STERICOL_CF_CALENDAR_STANDARD, "standard"},
        {"standard", STERICOL_CF_CALENDAR_STANDARD, "standard"},
        {"gregorian", STERICOL_CF_CALENDAR_STANDARD, "standard"},
        {"Gregorian", STERICOL_CF_CALENDAR_STANDARD, "standard"},
        {"proleptic_gregorian", STERICOL_CF_CALENDAR_PROLEPTIC, "proleptic_gregorian"},
        {"julian", STERICOL_CF_CALENDAR_JULIAN, "julian"},
        {"noleap", STERICOL_CF_CALENDAR_NOLEAP, "noleap"},
        {"365_day", STERICOL_CF_CALENDAR_NOLEAP, "noleap"},
        {"all_leap", STERICOL_CF_CALENDAR_ALLLEAP, "all_leap"},
        {"366_day", STERICOL_CF_CALENDAR_ALLLEAP, "all_leap"},
        {"360_day", STERICOL_CF_CALENDAR_360, "360_day"},
        {"none", STERICOL_CF_CALENDAR_NONE, "none"},
    };
    stericol_cf_calendar calendar = STERICOL_CF_CALENDAR_360;

    (void)state;
    assert_false(stericol_cf_calendar_named("lunar", &calendar));
    assert_false(stericol_cf_calendar_named("", &calendar));
    assert_int_equal(calendar, STERICOL_CF_CALENDAR_360);
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        assert_true(stericol_cf_calendar_named(rows[i].name, &calendar));
        assert_int_equal(calendar, rows[i].calendar);
        assert_string_equal(stericol_cf_calendar_name(calendar), rows[i].given_back);
    }
}

static void units_of_time_are_read(void **state)
{
    static const double month =
        365.242198781 / 12.0; /* UDUNITS-2's own definition of a year, over 12 (CF 1.10, section 4.4) */
    static const struct {
        const char *unit;
        stericol_cf_calendar calendar;
        double days_per_unit;
        long long year;
        int month, day;
        double seconds;
        bool inexact, year_zero;
    } rows[] = {
        {"days since 1950-01-01 00:00:00 +0:00", STERICOL_CF_CALENDAR_STANDARD, 1, 1950, 1, 1, 0, false,
         false},
        {"hours since 1800-1-1 00:00:0.0", STERICOL_CF_CALENDAR_STANDARD, 1. / 24, 1800, 1, 1, 0, false,
         false},
        {"seconds since 1970-01-01T00:00:00Z", STERICOL_CF_CALENDAR_PROLEPTIC, 1. / 86400, 1970, 1, 1, 0,
         false, false},
        /* The example of CF 1.10, section 4.4: six hours west of Greenwich. */
        {"seconds since 1992-10-8 15:15:42.5 -6:00", STERICOL_CF_CALENDAR_STANDARD, 1. / 86400, 1992, 10, 8,
         76542.5, false, false},
        {"seconds since 1992-10-8T15:15:42.5-0600", STERICOL_CF_CALENDAR_STANDARD, 1. / 86400, 1992, 10, 8,
         76542.5, false, false},
        {"Days Since 2000-1-1 3:00 +05:30", STERICOL_CF_CALENDAR_STANDARD, 1, 1999, 12, 31, 77400, false,
         false},
        {"days since 2000-1-1 12", STERICOL_CF_CALENDAR_STANDARD, 1, 2000, 1, 1, 43200, false, false},
        {"days since 2000-1-1 24:00:00", STERICOL_CF_CALENDAR_STANDARD, 1, 2000, 1, 2, 0, false, false},
        {"days since 2000-01-01 00:00:00 UTC", STERICOL_CF_CALENDAR_STANDARD, 1, 2000, 1, 1, 0, false, false},
        {"days since 2000-01-01 00:00:00 0:00 ", STERICOL_CF_CALENDAR_STANDARD, 1, 2000, 1, 1, 0, false,
         false},
        {"days since 2000-01-01 00:00:00.000000", STERICOL_CF_CALENDAR_STANDARD, 1, 2000, 1, 1, 0, false,
         false},
        {"days since 20000115", STERICOL_CF_CALENDAR_STANDARD, 1, 2000, 1, 15, 0, false, false},
        {" d  since  2000-01 ", STERICOL_CF_CALENDAR_STANDARD, 1, 2000, 1, 1, 0, false, false},
        {"6 hours since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, 0.25, 2000, 1, 1, 0, false, false},
        {"0.5 days since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, 0.5, 2000, 1, 1, 0, false, false},
        {"weeks since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, 7, 2000, 1, 1, 0, false, false},
        {"minutes since 1-1-1 00:00:00", STERICOL_CF_CALENDAR_STANDARD, 1. / 1440, 1, 1, 1, 0, false, false},
        {"msec since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, 1. / 86400e3, 2000, 1, 1, 0, false, false},
        {"months since 0000-01-01", STERICOL_CF_CALENDAR_STANDARD, month, 0, 1, 1, 0, true, true},
        {"months since 2000-01-01", STERICOL_CF_CALENDAR_360, 30, 2000, 1, 1, 0, false, false},
        {"months since 2000-01-01", STERICOL_CF_CALENDAR_NOLEAP, 365. / 12, 2000, 1, 1, 0, true, false},
        {"years since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, 365.242198781, 2000, 1, 1, 0, true, false},
        {"years since 2000-01-01", STERICOL_CF_CALENDAR_NOLEAP, 365, 2000, 1, 1, 0, false, false},
        {"years since 2000-01-01", STERICOL_CF_CALENDAR_ALLLEAP, 366, 2000, 1, 1, 0, false, false},
        {"common_years since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, 365, 2000, 1, 1, 0, false, false},
        {"days since 0000-00-00 00:00:00", STERICOL_CF_CALENDAR_NOLEAP, 1, 0, 1, 1, 0, false, true},
        /* CF 1.9, section 4.4: no year zero on the standard calendar, so this is the year -4712 of
           astronomers. */
        {"days since -4713-1-1", STERICOL_CF_CALENDAR_STANDARD, 1, -4712, 1, 1, 0, false, false},
        {"days since -4713-11-24", STERICOL_CF_CALENDAR_PROLEPTIC, 1, -4713, 11, 24, 0, false, false},
        {"days since 2001-02-30", STERICOL_CF_CALENDAR_360, 1, 2001, 2, 30, 0, false, false},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        stericol_cf_time_unit unit;
        const char *reason = "";

        if (!stericol_cf_time_unit_read(rows[i].unit, rows[i].calendar, &unit, &reason)) {
            print_error("\"%s\": %s\n", rows[i].unit, reason);
            fail();
        }
        assert_relative(unit.days_per_unit, rows[i].days_per_unit, 1e-15); /* one or two roundings */
        assert_close(unit.origin,
                     days_of(rows[i].calendar, rows[i].year, rows[i].month, rows[i].day, rows[i].seconds),
                     day_tolerance);
        assert_int_equal(unit.inexact, rows[i].inexact);
        assert_int_equal(unit.year_zero, rows[i].year_zero);
    }
}

static void units_of_time_are_refused_with_a_reason(void **state)
{
    static const struct {
        const char *unit;
        stericol_cf_calendar calendar;
        const char *reason;
    } rows[] = {
        {NULL, STERICOL_CF_CALENDAR_STANDARD, "the time axis has no unit"},
        {"", STERICOL_CF_CALENDAR_STANDARD, "not known"},
        {"days", STERICOL_CF_CALENDAR_STANDARD, "no \"since DATE\""},
        {"day as %Y%m%d.%f", STERICOL_CF_CALENDAR_STANDARD, "dates written as numbers are not read"},
        {"fortnights since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, "the unit of time is not known"},
        {"moons since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, "the unit of time is not known"},
        {"0 days since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, "cannot be read"},
        {"1.2.3 days since 2000-01-01", STERICOL_CF_CALENDAR_STANDARD, "cannot be read"},
        {"days since", STERICOL_CF_CALENDAR_STANDARD, "the reference date cannot be read"},
        {"days since yesterday", STERICOL_CF_CALENDAR_STANDARD, "the reference date cannot be read"},
        {"days since 01-01-1950", STERICOL_CF_CALENDAR_STANDARD, "the reference date cannot be read"},
        {"days since 1950/01/01", STERICOL_CF_CALENDAR_STANDARD, "the reference date cannot be read"},
        {"days since 1950-01-01T", STERICOL_CF_CALENDAR_STANDARD, "the reference date cannot be read"},
        {"days since 1950-01-01 25:00:00", STERICOL_CF_CALENDAR_STANDARD,
         "the reference date cannot be read"},
        {"days since 1950-01-01 00:60:00", STERICOL_CF_CALENDAR_STANDARD,
         "the reference date cannot be read"},
        {"days since 1950-01-01 00:00:00 +99", STERICOL_CF_CALENDAR_STANDARD,
         "the reference date cannot be read"},
        {"days since 1950-01-01 00:00:00 Z again", STERICOL_CF_CALENDAR_STANDARD,
         "the reference date cannot be read"},
        {"days since 99999999999999999999-01-01", STERICOL_CF_CALENDAR_STANDARD,
         "the reference date cannot be read"},
        {"days since 2001-02-29", STERICOL_CF_CALENDAR_STANDARD, "does not exist in the calendar"},
        {"days since 1582-10-10", STERICOL_CF_CALENDAR_STANDARD, "does not exist in the calendar"},
        {"days since 2000-02-29", STERICOL_CF_CALENDAR_NOLEAP, "does not exist in the calendar"},
        {"days since 2000-00-00", STERICOL_CF_CALENDAR_STANDARD, "does not exist in the calendar"},
        {"days since 2000-01-01", STERICOL_CF_CALENDAR_NONE, "the calendar is \"none\""},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        stericol_cf_time_unit unit = {-1, -1, false, false};
        const char *reason = NULL;

        if (stericol_cf_time_unit_read(rows[i].unit, rows[i].calendar, &unit, &reason) ||
            !strstr(reason, rows[i].reason)) {
            print_error("\"%s\": %s\n", rows[i].unit ? rows[i].unit : "NULL", reason ? reason : "was read");
            fail();
        }
        assert_same_number(unit.days_per_unit, -1);
    }
}

/* ISO 8601-1:2019, 4.3 and 5.2: a date of reduced precision stands for the whole year, month, day, hour. */
static void windows_include_both_ends(void **state)
{
    static const struct {
        const char *window;
        stericol_cf_calendar calendar;
        stericol_cf_date from, to; /* `to` is the first instant after it */
    } rows[] = {
        {"2005-01..2009-12", STERICOL_CF_CALENDAR_STANDARD, {2005, 1, 1, 0}, {2010, 1, 1, 0}},
        {"2005", STERICOL_CF_CALENDAR_STANDARD, {2005, 1, 1, 0}, {2006, 1, 1, 0}},
        {"2005..2005", STERICOL_CF_CALENDAR_NOLEAP, {2005, 1, 1, 0}, {2006, 1, 1, 0}},
        {"2004-02", STERICOL_CF_CALENDAR_STANDARD, {2004, 2, 1, 0}, {2004, 3, 1, 0}},
        {"2004-02-29", STERICOL_CF_CALENDAR_STANDARD, {2004, 2, 29, 0}, {2004, 3, 1, 0}},
        {"20040229", STERICOL_CF_CALENDAR_STANDARD, {2004, 2, 29, 0}, {2004, 3, 1, 0}},
        {"2004-02-30", STERICOL_CF_CALENDAR_360, {2004, 2, 30, 0}, {2004, 3, 1, 0}},
        {"2005-01-15T12", STERICOL_CF_CALENDAR_STANDARD, {2005, 1, 15, 43200}, {2005, 1, 15, 46800}},
        {"2005-01-15T12Z..2005-01-15T12:30Z",
         STERICOL_CF_CALENDAR_STANDARD,
         {2005, 1, 15, 43200},
         {2005, 1, 15, 45060}},
        {"2005-01-15T12:30:00..2005-12-31T23:59:59",
         STERICOL_CF_CALENDAR_STANDARD,
         {2005, 1, 15, 45000},
         {2006, 1, 1, 0}},
        {"2005-01-15T12:30:00.5",
         STERICOL_CF_CALENDAR_STANDARD,
         {2005, 1, 15, 45000.5},
         {2005, 1, 15, 45000.6}},
        {" 2005-06 .. 2005 ", STERICOL_CF_CALENDAR_STANDARD, {2005, 6, 1, 0}, {2006, 1, 1, 0}},
        {"1582-10", STERICOL_CF_CALENDAR_STANDARD, {1582, 10, 1, 0}, {1582, 11, 1, 0}},
        {"1582-10-04", STERICOL_CF_CALENDAR_STANDARD, {1582, 10, 4, 0}, {1582, 10, 15, 0}},
        {"-0001..+0000", STERICOL_CF_CALENDAR_PROLEPTIC, {-1, 1, 1, 0}, {1, 1, 1, 0}},
        {"2005-12-31", STERICOL_CF_CALENDAR_STANDARD, {2005, 12, 31, 0}, {2006, 1, 1, 0}},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        double from = NAN, to = NAN;
        const char *reason = "";

        if (!stericol_cf_window_read(rows[i].window, rows[i].calendar, &from, &to, &reason)) {
            print_error("\"%s\": %s\n", rows[i].window, reason);
            fail();
        }
        assert_null(reason);
        assert_close(from,
                     days_of(rows[i].calendar, rows[i].from.year, rows[i].from.month, rows[i].from.day,
                             rows[i].from.seconds),
                     day_tolerance);
        assert_close(
            to,
            days_of(rows[i].calendar, rows[i].to.year, rows[i].to.month, rows[i].to.day, rows[i].to.seconds),
            day_tolerance);
    }
}

static void windows_are_refused_with_a_reason(void **state)
{
    static const struct {
        const char *window;
        stericol_cf_calendar calendar;
        const char *reason;
    } rows[] = {
        {"", STERICOL_CF_CALENDAR_STANDARD, "not of the form 2005"},
        {"..", STERICOL_CF_CALENDAR_STANDARD, "not of the form 2005"},
        {"2005..", STERICOL_CF_CALENDAR_STANDARD, "not of the form 2005"},
        {"05", STERICOL_CF_CALENDAR_STANDARD, "not of the form 2005"},
        {"2005-015", STERICOL_CF_CALENDAR_STANDARD, "not of the form 2005"},
        {"2005-W03", STERICOL_CF_CALENDAR_STANDARD, "not of the form 2005"},
        {"2005-01T12", STERICOL_CF_CALENDAR_STANDARD, "a time is not of the form"},
        {"2005-01-01T25", STERICOL_CF_CALENDAR_STANDARD, "a time is not of the form"},
        {"2005-01-01 12:00", STERICOL_CF_CALENDAR_STANDARD, "more behind a date"},
        {"2005..2006..2007", STERICOL_CF_CALENDAR_STANDARD, "more behind a date"},
        {"2005-02-29", STERICOL_CF_CALENDAR_STANDARD, "does not exist in the calendar"},
        {"2005-13", STERICOL_CF_CALENDAR_STANDARD, "does not exist in the calendar"},
        {"2005..2005-12-31", STERICOL_CF_CALENDAR_360, "does not exist in the calendar"},
        {"2006..2005", STERICOL_CF_CALENDAR_STANDARD, "ends before it begins"},
        {"2005-01-15..2005-01-14", STERICOL_CF_CALENDAR_STANDARD, "ends before it begins"},
        {"2005", STERICOL_CF_CALENDAR_NONE, "it has no dates"},
        {"2005-01-15T12:30:00.5555555555555555555555555555555555555555555555555555555555",
         STERICOL_CF_CALENDAR_STANDARD, "too long"},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        double from = -1, to = -1;
        const char *reason = NULL;

        if (stericol_cf_window_read(rows[i].window, rows[i].calendar, &from, &to, &reason) ||
            !strstr(reason, rows[i].reason)) {
            print_error("\"%s\": %s\n", rows[i].window, reason ? reason : "was read");
            fail();
        }
        assert_same_number(from, -1);
        assert_same_number(to, -1);
    }
}

static void dates_are_written(void **state)
{
    static const struct {
        stericol_cf_date date;
        bool with_time;
        const char *text;
    } rows[] = {
        {{2005, 1, 16, 43200}, false, "2005-01-16"},
        {{2005, 1, 16, 43200}, true, "2005-01-16T12:00:00Z"},
        {{2005, 1, 16, 86399.9999}, true, "2005-01-16T23:59:59.999Z"},
        {{2005, 1, 16, 61.25}, true, "2005-01-16T00:01:01.250Z"},
        {{-44, 3, 15, 0}, false, "-0044-03-15"},
        {{0, 1, 1, 0}, false, "0000-01-01"},
        {{12345, 1, 1, 0}, true, "12345-01-01T00:00:00Z"},
        {{0, 0, 0, NAN}, true, "no date"},
    };

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        char buffer[STERICOL_CF_DATE_ROOM];

        stericol_cf_date_write(&rows[i].date, rows[i].with_time, buffer);
        assert_string_equal(buffer, rows[i].text);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(julian_days_agree_with_the_handbook),
        cmocka_unit_test(dates_agree_with_another_library),
        cmocka_unit_test(days_follow_one_another),
        cmocka_unit_test(calendars_have_their_days),
        cmocka_unit_test(impossible_days_have_no_date),
        cmocka_unit_test(hours_do_not_slip_below_midnight),
        cmocka_unit_test(calendar_names),
        cmocka_unit_test(units_of_time_are_read),
        cmocka_unit_test(units_of_time_are_refused_with_a_reason),
        cmocka_unit_test(windows_include_both_ends),
        cmocka_unit_test(windows_are_refused_with_a_reason),
        cmocka_unit_test(dates_are_written),
    };

    return cmocka_run_group_tests_name("cf_time", tests, NULL, NULL);
}
