/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * UDUNITS-2 only knows the mixed calendar, so the arithmetic of all calendars is here: a calendar is the
 * length of its months and the number of days before a year; everything else follows from the two.
 */
#include "cf/time.h"

#include "base/text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const double seconds_per_day = 86400.0;
/* Keep whole days and years exact in every step below. */
static const long long most_year = 1000000000;
static const double most_days = 3.6e11;
/* The first Gregorian day of the mixed calendar, 1582-10-15, in days since 2000-01-01 (Gregorian). */
static const long long first_gregorian_day = -152384;

static const struct {
    const char *name;
    stericol_cf_calendar calendar;
} calendars[] = {
    /* The first of each is the name given back. */
    {"standard", STERICOL_CF_CALENDAR_STANDARD},
    {"gregorian", STERICOL_CF_CALENDAR_STANDARD},
    {"proleptic_gregorian", STERICOL_CF_CALENDAR_PROLEPTIC},
    {"julian", STERICOL_CF_CALENDAR_JULIAN},
    {"noleap", STERICOL_CF_CALENDAR_NOLEAP},
    {"365_day", STERICOL_CF_CALENDAR_NOLEAP},
    {"no_leap", STERICOL_CF_CALENDAR_NOLEAP},
    {"all_leap", STERICOL_CF_CALENDAR_ALLLEAP},
    {"366_day", STERICOL_CF_CALENDAR_ALLLEAP},
    {"360_day", STERICOL_CF_CALENDAR_360},
    {"none", STERICOL_CF_CALENDAR_NONE},
};

bool stericol_cf_calendar_named(const char *name, stericol_cf_calendar *calendar)
{
    if (!name) {
        *calendar = STERICOL_CF_CALENDAR_STANDARD;
        return true;
    }
    for (size_t i = 0; i < sizeof calendars / sizeof *calendars; i++) {
        if (stericol_same_ignoring_case(name, calendars[i].name)) {
            *calendar = calendars[i].calendar;
            return true;
        }
    }
    return false;
}

const char *stericol_cf_calendar_name(stericol_cf_calendar calendar)
{
    for (size_t i = 0; i < sizeof calendars / sizeof *calendars; i++)
        if (calendars[i].calendar == calendar)
            return calendars[i].name;
    return "none";
}

/* Rounded down, whatever the sign. */
static long long floor_divide(long long a, long long b)
{
    return a / b - (a % b < 0);
}

/* The mixed calendar as it is in that year's months; the others are themselves. */
static stericol_cf_calendar calendar_in(stericol_cf_calendar calendar, long long year, int month, int day)
{
    if (calendar != STERICOL_CF_CALENDAR_STANDARD)
        return calendar;
    if (year != 1582)
        return year > 1582 ? STERICOL_CF_CALENDAR_PROLEPTIC : STERICOL_CF_CALENDAR_JULIAN;
    return month > 10 || (month == 10 && day >= 15) ? STERICOL_CF_CALENDAR_PROLEPTIC
                                                    : STERICOL_CF_CALENDAR_JULIAN;
}

static bool is_leap(stericol_cf_calendar calendar, long long year)
{
    switch (calendar) {
    case STERICOL_CF_CALENDAR_PROLEPTIC:
        return year % 4 == 0 && (year % 100 != 0 || year % 400 == 0);
    case STERICOL_CF_CALENDAR_JULIAN:
        return year % 4 == 0;
    case STERICOL_CF_CALENDAR_ALLLEAP:
        return true;
    default:
        return false;
    }
}

int stericol_cf_days_in_month(stericol_cf_calendar calendar, long long year, int month)
{
    static const int days[12] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};

    if (calendar == STERICOL_CF_CALENDAR_NONE || month < 1 || month > 12)
        return 0;
    if (calendar == STERICOL_CF_CALENDAR_360)
        return 30;
    if (calendar == STERICOL_CF_CALENDAR_STANDARD && year == 1582 && month == 10)
        return 21;
    return days[month - 1] + (month == 2 && is_leap(calendar_in(calendar, year, month, 1), year));
}

/* Days from 2000-01-01 of the calendar (Gregorian for the Julian one) to the first of that year; not for the
 * mixed one. */
static long long days_before_year(stericol_cf_calendar calendar, long long year)
{
    const long long whole = year - 2000, past = year - 1;

    switch (calendar) {
    case STERICOL_CF_CALENDAR_PROLEPTIC: /* 1999 years hold 484 leap days */
        return 365 * whole + floor_divide(past, 4) - floor_divide(past, 100) + floor_divide(past, 400) - 484;
    case STERICOL_CF_CALENDAR_JULIAN: /* 1999 years hold 499 leap days; the Julian year 2000 began 13 days
                                         later */
        return 365 * whole + floor_divide(past, 4) - 499 + 13;
    case STERICOL_CF_CALENDAR_ALLLEAP:
        return 366 * whole;
    case STERICOL_CF_CALENDAR_360:
        return 360 * whole;
    default:
        return 365 * whole;
    }
}

static bool whole_day_number(stericol_cf_calendar calendar, long long year, int month, int day,
                             long long *number)
{
    const stericol_cf_calendar here = calendar_in(calendar, year, month, day);
    long long days;

    if (calendar == STERICOL_CF_CALENDAR_NONE || year < -most_year || year > most_year || month < 1 ||
        month > 12 || day < 1 || day > stericol_cf_days_in_month(here, year, month))
        return false;
    if (calendar == STERICOL_CF_CALENDAR_STANDARD && year == 1582 && month == 10 && day > 4 && day < 15)
        return false; /* the days that were left out */
    days = days_before_year(here, year) + day - 1;
    for (int before = 1; before < month; before++)
        days += stericol_cf_days_in_month(here, year, before);
    *number = days;
    return true;
}

bool stericol_cf_day_number(stericol_cf_calendar calendar, const stericol_cf_date *date, double *days)
{
    long long whole;

    if (!(date->seconds >= 0.0 && date->seconds < seconds_per_day) ||
        !whole_day_number(calendar, date->year, date->month, date->day, &whole))
        return false;
    *days = (double)whole + date->seconds / seconds_per_day;
    return true;
}

stericol_cf_date stericol_cf_date_of(stericol_cf_calendar calendar, double days)
{
    stericol_cf_date date = {0, 0, 0, NAN};
    double whole = floor(days), milliseconds;
    long long day;

    if (calendar == STERICOL_CF_CALENDAR_NONE || !(fabs(days) <= most_days))
        return date;
    milliseconds = floor((days - whole) * seconds_per_day * 1000.0 + 0.5);
    if (milliseconds >= seconds_per_day * 1000.0) {
        milliseconds = 0.0;
        whole += 1.0;
    }
    day = (long long)whole;
    if (calendar == STERICOL_CF_CALENDAR_STANDARD)
        calendar = day >= first_gregorian_day ? STERICOL_CF_CALENDAR_PROLEPTIC : STERICOL_CF_CALENDAR_JULIAN;
    /* A first guess from the mean year; it is a year or two off at most. */
    date.year =
        2000 +
        (long long)floor(
            whole / ((double)(days_before_year(calendar, 2400) - days_before_year(calendar, 2000)) / 400));
    while (days_before_year(calendar, date.year) > day)
        date.year--;
    while (days_before_year(calendar, date.year + 1) <= day)
        date.year++;
    day -= days_before_year(calendar, date.year);
    for (date.month = 1; day >= stericol_cf_days_in_month(calendar, date.year, date.month); date.month++)
        day -= stericol_cf_days_in_month(calendar, date.year, date.month);
    date.day = (int)day + 1;
    date.seconds = milliseconds / 1000.0;
    return date;
}

/* A text being read: `at` moves on. */
typedef struct scanner {
    const char *at;
} scanner;

static bool is_digit(char c)
{
    return c >= '0' && c <= '9';
}

static void skip_blanks(scanner *text)
{
    while (*text->at == ' ' || (*text->at >= '\t' && *text->at <= '\r'))
        text->at++;
}

static bool skip_sign(scanner *text, char sign)
{
    if (*text->at != sign)
        return false;
    text->at++;
    return true;
}

/* `least` to `most` (at most 9) digits; anything else leaves the place where it was. */
static bool scan_digits(scanner *text, size_t least, size_t most, long long *value)
{
    size_t count = 0;
    long long sum = 0;

    while (is_digit(text->at[count])) {
        if (count == most)
            return false;
        sum = sum * 10 + (text->at[count] - '0');
        count++;
    }
    if (count < least)
        return false;
    text->at += count;
    *value = sum;
    return true;
}

static size_t digits_ahead(const scanner *text)
{
    return strspn(text->at, "0123456789");
}

/* How far a date was written. */
typedef enum precision { TO_YEAR, TO_MONTH, TO_DAY, TO_HOUR, TO_MINUTE, TO_SECOND } precision;

/* Wall time as written; the fraction of a second keeps its number of digits. */
typedef struct wall_time {
    long long year, month, day, hour, minute, second;
    double fraction, fraction_unit; /* of a second; unit 1 where there is no fraction */
    precision written;
} wall_time;

/* [+-]YEAR[-MONTH[-DAY]], or YYYYMMDD. */
static bool scan_date(scanner *text, size_t year_digits, wall_time *moment)
{
    const bool negative = *text->at == '-';

    moment->month = moment->day = 1;
    moment->written = TO_YEAR;
    if (negative || *text->at == '+')
        text->at++;
    if (digits_ahead(text) == 8) {
        if (!scan_digits(text, 8, 8, &moment->year))
            return false;
        moment->day = moment->year % 100;
        moment->month = moment->year / 100 % 100;
        moment->year /= 10000;
        moment->written = TO_DAY;
    } else {
        if (!scan_digits(text, year_digits, 7, &moment->year))
            return false;
        if (skip_sign(text, '-')) {
            if (!scan_digits(text, 1, 2, &moment->month))
                return false;
            moment->written = TO_MONTH;
            if (skip_sign(text, '-')) {
                if (!scan_digits(text, 1, 2, &moment->day))
                    return false;
                moment->written = TO_DAY;
            }
        }
    }
    if (negative)
        moment->year = -moment->year;
    return true;
}

static bool scan_fraction(scanner *text, wall_time *moment)
{
    if (*text->at != '.' && *text->at != ',')
        return true;
    text->at++;
    while (is_digit(*text->at)) {
        moment->fraction_unit /= 10;
        moment->fraction += (*text->at - '0') * moment->fraction_unit;
        text->at++;
    }
    return moment->fraction < 1.0;
}

/* HOUR[:MINUTE[:SECOND[.FRACTION]]]; 24:00:00 is the end of a day. */
static bool scan_clock(scanner *text, wall_time *moment)
{
    if (!scan_digits(text, 1, 2, &moment->hour))
        return false;
    moment->written = TO_HOUR;
    if (skip_sign(text, ':')) {
        if (!scan_digits(text, 1, 2, &moment->minute))
            return false;
        moment->written = TO_MINUTE;
        if (skip_sign(text, ':')) {
            if (!scan_digits(text, 1, 2, &moment->second) || !scan_fraction(text, moment))
                return false;
            moment->written = TO_SECOND;
        }
    }
    return moment->minute < 60 && moment->second < 60 &&
           (moment->hour < 24 ||
            (moment->hour == 24 && moment->minute == 0 && moment->second == 0 && moment->fraction <= 0.0));
}

/* Whether a word is among `names`, lower case and separated by '|'. */
static bool is_one_of(const char *word, size_t length, const char *names)
{
    char copy[32];

    if (length == 0 || length >= sizeof copy)
        return false;
    for (size_t i = 0; i < length; i++)
        copy[i] = word[i] >= 'A' && word[i] <= 'Z' ? (char)(word[i] - 'A' + 'a') : word[i];
    for (const char *at = names; at; at = strchr(at, '|')) {
        at += *at == '|';
        if (strncmp(at, copy, length) == 0 && (at[length] == '|' || at[length] == '\0'))
            return true;
    }
    return false;
}

/* Z, UTC, GMT, or [+-]H[H][[:]MM]; *seconds is what local time is ahead of UTC. */
static bool scan_zone(scanner *text, double *seconds)
{
    const size_t word = strcspn(text->at, " \t\r\n\f\v");
    long long hour, minute = 0;
    bool west;

    *seconds = 0.0;
    if (is_one_of(text->at, word, "z|utc|gmt|ut")) {
        text->at += word;
        return true;
    }
    if (stericol_starts_with(text->at, "UTC") || stericol_starts_with(text->at, "GMT"))
        text->at += 3;
    west = *text->at == '-';
    if (west || *text->at == '+')
        text->at++;
    if (digits_ahead(text) > 2) {
        if (!scan_digits(text, 3, 4, &hour))
            return false;
        minute = hour % 100;
        hour /= 100;
    } else if (!scan_digits(text, 1, 2, &hour) ||
               (skip_sign(text, ':') && !scan_digits(text, 1, 2, &minute))) {
        return false;
    }
    if (hour > 14 || minute > 59)
        return false;
    *seconds = (west ? -1.0 : 1.0) * (double)(hour * 3600 + minute * 60);
    return true;
}

/* Days of the start of a moment; false for a day that the calendar has not. */
static bool moment_days(stericol_cf_calendar calendar, const wall_time *moment, double *days)
{
    const stericol_cf_date date = {moment->year, (int)moment->month, (int)moment->day, 0.0};

    if (!stericol_cf_day_number(calendar, &date, days))
        return false;
    *days += ((double)(moment->hour * 3600 + moment->minute * 60 + moment->second) + moment->fraction) /
             seconds_per_day;
    return true;
}

/* Lengths in days: SI and CF 1.10 section 4.4; year and month as UDUNITS-2 defines them. */
static const struct {
    const char *names; /* separated by '|' */
    double days;
    enum { EXACT, YEAR, MONTH } kind;
} time_units[] = {
    {"second|seconds|sec|secs|s", 1.0 / 86400.0, EXACT},
    {"minute|minutes|min|mins", 1.0 / 1440.0, EXACT},
    {"hour|hours|hr|hrs|h", 1.0 / 24.0, EXACT},
    {"day|days|d", 1.0, EXACT},
    {"week|weeks", 7.0, EXACT},
    {"millisecond|milliseconds|millisec|millisecs|msec|msecs|ms", 1.0 / 86400e3, EXACT},
    {"microsecond|microseconds|microsec|microsecs", 1.0 / 86400e6, EXACT},
    {"nanosecond|nanoseconds|nanosec|nanosecs", 1.0 / 86400e9, EXACT},
    {"month|months|mon|mons", 365.242198781 / 12.0, MONTH},
    {"year|years|yr|yrs|tropical_year|tropical_years", 365.242198781, YEAR},
    {"common_year|common_years", 365.0, EXACT},
};

/* The length of one unit; on calendars whose years are all alike a year is a whole number of days. */
static bool unit_length(const char *word, size_t length, stericol_cf_calendar calendar,
                        stericol_cf_time_unit *unit)
{
    for (size_t i = 0; i < sizeof time_units / sizeof *time_units; i++) {
        if (!is_one_of(word, length, time_units[i].names))
            continue;
        unit->days_per_unit = time_units[i].days;
        if (time_units[i].kind == EXACT)
            return true;
        if (calendar == STERICOL_CF_CALENDAR_360 || calendar == STERICOL_CF_CALENDAR_NOLEAP ||
            calendar == STERICOL_CF_CALENDAR_ALLLEAP)
            unit->days_per_unit = (double)(days_before_year(calendar, 1) - days_before_year(calendar, 0)) /
                                  (time_units[i].kind == MONTH ? 12.0 : 1.0);
        unit->inexact = fabs(unit->days_per_unit - floor(unit->days_per_unit)) > 0.0;
        return true;
    }
    return false;
}

/* [FACTOR] UNIT since; leaves the scanner at the date. */
static const char *scan_unit(scanner *text, stericol_cf_calendar calendar, stericol_cf_time_unit *unit)
{
    double factor = 1.0;
    size_t length;

    skip_blanks(text);
    length = strspn(text->at, "0123456789.");
    if (length > 0) {
        char number[32];

        if (length >= sizeof number)
            return "the unit of time cannot be read";
        memcpy(number, text->at, length);
        number[length] = '\0';
        if (!stericol_parse_number(number, &factor) || !(factor > 0.0))
            return "the unit of time cannot be read";
        text->at += length;
        skip_blanks(text);
    }
    length = strcspn(text->at, " \t\r\n\f\v");
    if (!unit_length(text->at, length, calendar, unit))
        return "the unit of time is not known";
    unit->days_per_unit *= factor;
    text->at += length;
    skip_blanks(text);
    length = strcspn(text->at, " \t\r\n\f\v");
    if (length == 2 && is_one_of(text->at, length, "as"))
        return "dates written as numbers are not read; give the time by steps, or rewrite it as \"days since "
               "DATE\"";
    if (!is_one_of(text->at, length, "since"))
        return "the unit of time has no \"since DATE\"";
    text->at += length;
    skip_blanks(text);
    return NULL;
}

/* DATE [TIME] [ZONE] to the end of the text. */
static bool scan_reference(scanner *text, wall_time *reference, double *zone)
{
    bool clock = false;

    *zone = 0.0;
    if (!scan_date(text, 1, reference))
        return false;
    if (*text->at == 'T' || *text->at == 't') {
        text->at++;
        clock = true;
    } else {
        skip_blanks(text);
        clock = is_digit(*text->at);
    }
    if (clock && !scan_clock(text, reference))
        return false;
    skip_blanks(text);
    if (*text->at == '\0')
        return true;
    if (!scan_zone(text, zone))
        return false;
    skip_blanks(text);
    return *text->at == '\0';
}

bool stericol_cf_time_unit_read(const char *unit, stericol_cf_calendar calendar,
                                stericol_cf_time_unit *result, const char **reason)
{
    stericol_cf_time_unit read = {1.0, 0.0, false, false};
    wall_time reference = {.fraction_unit = 1.0};
    scanner text = {unit};
    double zone;

    if (calendar == STERICOL_CF_CALENDAR_NONE) {
        *reason = "the calendar is \"none\": its values are no dates";
        return false;
    }
    if (!unit) {
        *reason = "the time axis has no unit";
        return false;
    }
    *reason = scan_unit(&text, calendar, &read);
    if (*reason)
        return false;
    if (!scan_reference(&text, &reference, &zone)) {
        *reason = "the reference date cannot be read";
        return false;
    }
    read.year_zero = reference.year == 0;
    if (read.year_zero && reference.month == 0 && reference.day == 0)
        reference.month = reference.day = 1;
    if (reference.year < 0 &&
        (calendar == STERICOL_CF_CALENDAR_STANDARD || calendar == STERICOL_CF_CALENDAR_JULIAN))
        reference.year++; /* no year zero between -1 and 1 */
    if (!moment_days(calendar, &reference, &read.origin)) {
        *reason = "the reference date does not exist in the calendar";
        return false;
    }
    read.origin -= zone / seconds_per_day;
    *result = read;
    return true;
}

/* The instant at which the last unit written ends. */
static double moment_end(stericol_cf_calendar calendar, const wall_time *start, double start_days)
{
    wall_time next = *start;
    double days = start_days;

    switch (start->written) {
    case TO_YEAR:
        next.year++;
        break;
    case TO_MONTH:
        next.year += next.month == 12;
        next.month = next.month == 12 ? 1 : next.month + 1;
        break;
    case TO_DAY:
        return start_days + 1.0;
    case TO_HOUR:
        return start_days + 1.0 / 24.0;
    case TO_MINUTE:
        return start_days + 1.0 / 1440.0;
    case TO_SECOND:
        return start_days + start->fraction_unit / seconds_per_day;
    }
    (void)moment_days(calendar, &next, &days); /* the first of a month exists in every calendar */
    return days;
}

/* One end of a window, the whole of `word`. */
static const char *read_moment(const char *word, stericol_cf_calendar calendar, double *start, double *end)
{
    wall_time moment = {.fraction_unit = 1.0};
    scanner text = {word};

    skip_blanks(&text);
    if (!scan_date(&text, 4, &moment))
        return "a date is not of the form 2005, 2005-01 or 2005-01-15";
    if (*text.at == 'T' || *text.at == 't') {
        text.at++;
        if (moment.written != TO_DAY || !scan_clock(&text, &moment))
            return "a time is not of the form 2005-01-15T12, T12:30 or T12:30:00";
        if (*text.at == 'Z' || *text.at == 'z')
            text.at++;
    }
    skip_blanks(&text);
    if (*text.at != '\0')
        return "there is more behind a date than can be read";
    if (!moment_days(calendar, &moment, start))
        return "a date does not exist in the calendar of the file";
    *end = moment_end(calendar, &moment, *start);
    return NULL;
}

bool stericol_cf_window_read(const char *window, stericol_cf_calendar calendar, double *from, double *to,
                             const char **reason)
{
    char first[STERICOL_CF_DATE_ROOM];
    const char *dots = strstr(window, "..");
    const size_t length = dots ? (size_t)(dots - window) : strlen(window);
    double from_start, from_end, to_start, to_end;

    if (calendar == STERICOL_CF_CALENDAR_NONE) {
        *reason = "the calendar is \"none\": it has no dates";
        return false;
    }
    if (length >= sizeof first) {
        *reason = "the window is too long";
        return false;
    }
    memcpy(first, window, length);
    first[length] = '\0';
    *reason = read_moment(first, calendar, &from_start, &from_end);
    if (*reason)
        return false;
    to_end = from_end;
    if (dots) {
        *reason = read_moment(dots + 2, calendar, &to_start, &to_end);
        if (*reason)
            return false;
        if (to_end <= from_start) {
            *reason = "the window ends before it begins";
            return false;
        }
    }
    *from = from_start;
    *to = to_end;
    return true;
}

void stericol_cf_date_write(const stericol_cf_date *date, bool with_time, char *buffer)
{
    const char *sign = date->year < 0 ? "-" : "";
    const unsigned long long year =
        date->year < 0 ? 0ULL - (unsigned long long)date->year : (unsigned long long)date->year;
    long long milliseconds = 0;

    if (date->month < 1 || date->month > 99 || date->day < 1 || date->day > 99) {
        (void)snprintf(buffer, STERICOL_CF_DATE_ROOM, "no date");
        return;
    }
    if (!with_time) {
        (void)snprintf(buffer, STERICOL_CF_DATE_ROOM, "%s%04llu-%02d-%02d", sign, year, date->month,
                       date->day);
        return;
    }
    if (date->seconds >= 0.0 && date->seconds < seconds_per_day)
        milliseconds = (long long)(date->seconds * 1000.0 + 0.5);
    if (milliseconds >= 86400000)
        milliseconds = 86399999; /* a time is never rounded into the next day */
    const int length = snprintf(buffer, STERICOL_CF_DATE_ROOM, "%s%04llu-%02d-%02dT%02lld:%02lld:%02lld",
                                sign, year, date->month, date->day, milliseconds / 3600000,
                                milliseconds / 60000 % 60, milliseconds / 1000 % 60);
    if (length > 0 && length < STERICOL_CF_DATE_ROOM - 8) {
        if (milliseconds % 1000 != 0)
            (void)snprintf(buffer + length, 8, ".%03lldZ", milliseconds % 1000);
        else
            (void)snprintf(buffer + length, 8, "Z");
    }
}
