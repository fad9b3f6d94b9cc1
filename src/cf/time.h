/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Time axes on every CF calendar (CF 1.10, section 4.4), ISO 8601 windows, and the calendar month of a
 * member.
 */
#ifndef STERICOL_CF_TIME_H
#define STERICOL_CF_TIME_H

#include "base/context.h"

#include <stdbool.h>
#include <stddef.h>

typedef enum stericol_cf_calendar {
    STERICOL_CF_CALENDAR_STANDARD,  /* mixed Julian/Gregorian, switch on 1582-10-15; "gregorian" too */
    STERICOL_CF_CALENDAR_PROLEPTIC, /* proleptic_gregorian */
    STERICOL_CF_CALENDAR_JULIAN,
    STERICOL_CF_CALENDAR_NOLEAP,  /* noleap, 365_day */
    STERICOL_CF_CALENDAR_ALLLEAP, /* all_leap, 366_day */
    STERICOL_CF_CALENDAR_360,     /* 360_day */
    STERICOL_CF_CALENDAR_NONE     /* "none": no dates; steps only */
} stericol_cf_calendar;

/* "standard" when NULL, the case of letters does not matter; false (*calendar untouched) for a name that is
 * no CF calendar. */
bool stericol_cf_calendar_named(const char *name, stericol_cf_calendar *calendar);
const char *stericol_cf_calendar_name(stericol_cf_calendar calendar);

typedef struct stericol_cf_date {
    long long year; /* astronomical: 0 is allowed */
    int month, day; /* 1..12, 1..31 */
    double seconds; /* of the day, 0 <= seconds < 86400 */
} stericol_cf_date;

/*
 * Days since a fixed instant of that calendar (2000-01-01, for the Julian calendar the Gregorian one); only
 * differences and comparisons mean anything.  False (*days untouched) for a date that the calendar has not
 * (1582-10-05 to 14 on the standard one), seconds outside 0 <= s < 86400 (NaN too), |year| > 1e9, and for the
 * calendar "none".
 */
bool stericol_cf_day_number(stericol_cf_calendar calendar, const stericol_cf_date *date, double *days);
/*
 * The date of a day number, its seconds rounded to the millisecond (a day number near year 0 only resolves
 * 0.01 ms, and steps of 1/24 day are not exact, so that midnight would else become a second before it).  NaN,
 * |days| > 3.6e11 and the calendar "none" give year, month and day 0 and seconds NaN: look at `month` before
 * it is used as an index.
 */
stericol_cf_date stericol_cf_date_of(stericol_cf_calendar calendar, double days);
/* 28..31; 21 for October 1582 on the standard calendar; 0 for a month outside 1..12 and for the calendar
 * "none". */
int stericol_cf_days_in_month(stericol_cf_calendar calendar, long long year, int month);

/*
 * Reads "UNIT since DATE [TIME] [ZONE]"; then day number = value * days_per_unit + origin.  Units: seconds ..
 * days, weeks exact; months and years by UDUNITS' lengths (365.242198781/12 days) with *inexact set, except
 * on 360_day, noleap, all_leap where a year is whole (a month there is a twelfth of it: 30, or 30.4167
 * and 30.5 with *inexact set).  Beware: months by these lengths drift against the calendar's: "months since
 * 2000-01-01" with 1 gives 2000-01-31T10:29, still January. A factor before the unit ("6 hours since ...")
 * counts.  Year 0 and dates before 1582 as the calendar has them; "days since 0000-01-01" and the like are
 * accepted, year_zero is then set (climatological axes are taken by step; but long axes of real dates that
 * start in year 0 occur too, the values tell); so is 0000-00-00 for 0000-01-01.  Negative years on the
 * standard and julian calendars are historical (-1 is the year before 1, so -4713-01-01T12 is Julian day 0;
 * CF 1.9 and later), astronomical on the others; year 0 is astronomical on all. ZONE: Z, UTC, GMT, or hours
 * (and minutes) that local time is ahead.  False (*result untouched) with *reason (static text) when it
 * cannot be read; *reason is NULL on success.
 */
typedef struct stericol_cf_time_unit {
    double days_per_unit, origin;
    bool inexact, year_zero;
} stericol_cf_time_unit;
bool stericol_cf_time_unit_read(const char *unit, stericol_cf_calendar calendar,
                                stericol_cf_time_unit *result, const char **reason);

/*
 * An ISO 8601 window "FROM..TO" (or one date alone), each to any precision: 2005, 2005-01, 2005-01-15,
 * 2005-01-15T12, ...T12:30,
 * ...T12:30:00, optional Z; years may carry a sign.  Both ends are included: *from is the start of FROM, *to
 * the end of TO (the instant at which its last unit of precision ends).  Years are astronomical and have four
 * digits at least.  False (*from, *to untouched) with a reason when it cannot be read, when a date does not
 * exist in the calendar, or when TO ends before FROM starts; *reason is NULL on success.
 */
bool stericol_cf_window_read(const char *window, stericol_cf_calendar calendar, double *from, double *to,
                             const char **reason);

/* "2005-01-16" or "2005-01-16T12:00:00Z" (milliseconds where there are any; "no date" for month or day 0);
 * buffer of STERICOL_CF_DATE_ROOM bytes. */
enum { STERICOL_CF_DATE_ROOM = 64 };
void stericol_cf_date_write(const stericol_cf_date *date, bool with_time, char *buffer);

#endif
