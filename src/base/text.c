/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "base/text.h"

#include "base/checked.h"

#include <ctype.h>
#include <errno.h>
#include <locale.h>
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

void stericol_text_free(stericol_text *text)
{
    free(text->bytes);
    *text = (stericol_text){0};
}

void stericol_text_clear(stericol_text *text)
{
    text->length = 0;
    text->failed = false;
    if (text->bytes != NULL)
        text->bytes[0] = '\0';
}

const char *stericol_text_string(const stericol_text *text)
{
    return text->bytes == NULL ? "" : text->bytes;
}

/* Room for `more` bytes and the closing zero. */
static bool make_room(stericol_text *text, size_t more)
{
    size_t needed, room = text->room == 0 ? 64 : text->room;
    void *bytes = text->bytes;

    if (!stericol_add_sizes(text->length, more, &needed) || needed >= SIZE_MAX / 2) {
        text->failed = true;
        return false;
    }
    needed++;
    if (needed <= text->room)
        return true;
    while (room < needed)
        room *= 2;
    if (!stericol_grow_array(&bytes, room, 1)) {
        text->failed = true;
        return false;
    }
    text->bytes = bytes;
    text->room = room;
    return true;
}

void stericol_text_add_bytes(stericol_text *text, const char *bytes, size_t length)
{
    if (!make_room(text, length))
        return;
    if (length != 0)
        memcpy(text->bytes + text->length, bytes, length);
    text->length += length;
    text->bytes[text->length] = '\0';
}

void stericol_text_add(stericol_text *text, const char *string)
{
    stericol_text_add_bytes(text, string, strlen(string));
}

/* The length of the well-formed UTF-8 sequence at `s` (RFC 3629, section 4), control characters excluded; 0 if none. */
static size_t printable_length(const unsigned char *s)
{
    size_t length;

    if (s[0] >= 0x20 && s[0] < 0x7f)
        return 1;
    if (s[0] >= 0xc2 && s[0] <= 0xdf)
        length = 2;
    else if (s[0] >= 0xe0 && s[0] <= 0xef)
        length = 3;
    else if (s[0] >= 0xf0 && s[0] <= 0xf4)
        length = 4;
    else
        return 0;
    for (size_t i = 1; i < length; i++)
        if ((s[i] & 0xc0) != 0x80)
            return 0;
    if ((s[0] == 0xc2 && s[1] < 0xa0) || (s[0] == 0xe0 && s[1] < 0xa0) || (s[0] == 0xed && s[1] > 0x9f) ||
        (s[0] == 0xf0 && s[1] < 0x90) || (s[0] == 0xf4 && s[1] > 0x8f))
        return 0;
    /* Bidirectional controls (U+202A..202E, U+2066..2069) could make a message read as something else. */
    if (s[0] == 0xe2 && ((s[1] == 0x80 && s[2] >= 0xaa && s[2] <= 0xae) ||
                         (s[1] == 0x81 && s[2] >= 0xa6 && s[2] <= 0xa9)))
        return 0;
    return length;
}

void stericol_text_add_printable(stericol_text *text, const char *string)
{
    const unsigned char *s = (const unsigned char *)string;

    while (*s != '\0') {
        size_t length = printable_length(s);

        if (length != 0) {
            stericol_text_add_bytes(text, (const char *)s, length);
            s += length;
        } else {
            stericol_text_format(text, "\\x%02X", *s);
            s++;
        }
    }
}

void stericol_text_format_list(stericol_text *text, const char *format, va_list arguments)
{
    va_list again;
    int length;

    va_copy(again, arguments);
    length = vsnprintf(NULL, 0, format, again);
    va_end(again);
    if (length < 0) {
        text->failed = true;
        return;
    }
    if (!make_room(text, (size_t)length))
        return;
    vsnprintf(text->bytes + text->length, (size_t)length + 1, format, arguments);
    text->length += (size_t)length;
}

void stericol_text_format(stericol_text *text, const char *format, ...)
{
    va_list arguments;

    va_start(arguments, format);
    stericol_text_format_list(text, format, arguments);
    va_end(arguments);
}

char *stericol_text_take(stericol_text *text)
{
    char *bytes;

    if (text->failed) {
        stericol_text_free(text);
        return NULL;
    }
    bytes = text->bytes != NULL ? text->bytes : stericol_copy_string("");
    *text = (stericol_text){0};
    return bytes;
}

char *stericol_copy_bytes(const char *string, size_t length)
{
    char *copy = length == SIZE_MAX ? NULL : malloc(length + 1);

    if (copy == NULL)
        return NULL;
    if (length != 0)
        memcpy(copy, string, length);
    copy[length] = '\0';
    return copy;
}

char *stericol_copy_string(const char *string)
{
    return string == NULL ? NULL : stericol_copy_bytes(string, strlen(string));
}

static bool is_blank(char c)
{
    return c == ' ' || c == '\t' || c == '\n' || c == '\r';
}

/* Checks the spelling, so that what strtod() is given means the same in every locale that writes a point. */
static bool is_spelled_as_number(const char *s, size_t length)
{
    size_t i = 0, digits = 0;

    if (i < length && (s[i] == '+' || s[i] == '-'))
        i++;
    for (; i < length && isdigit((unsigned char)s[i]); i++)
        digits++;
    if (i < length && s[i] == '.')
        for (i++; i < length && isdigit((unsigned char)s[i]); i++)
            digits++;
    if (digits == 0)
        return false;
    if (i < length && (s[i] == 'e' || s[i] == 'E')) {
        size_t exponent_digits = 0;

        i++;
        if (i < length && (s[i] == '+' || s[i] == '-'))
            i++;
        for (; i < length && isdigit((unsigned char)s[i]); i++)
            exponent_digits++;
        if (exponent_digits == 0)
            return false;
    }
    return i == length;
}

/* A decimal number longer than this is no number that a person or a program writes. */
enum { LONGEST_NUMBER = 400 };

bool stericol_parse_number(const char *string, double *value)
{
    char digits[LONGEST_NUMBER + 1];
    const char *end;
    const char *point = localeconv()->decimal_point;
    double number;
    size_t length;

    while (is_blank(*string))
        string++;
    end = string + strlen(string);
    while (end > string && is_blank(end[-1]))
        end--;
    length = (size_t)(end - string);
    if (length > LONGEST_NUMBER || !is_spelled_as_number(string, length))
        return false;
    memcpy(digits, string, length);
    digits[length] = '\0';
    if (point[0] != '.' && point[0] != '\0' && point[1] == '\0') {
        char *dot = strchr(digits, '.');

        if (dot != NULL)
            *dot = point[0];
    }
    number = strtod(digits, NULL);
    if (!isfinite(number))
        return false;
    *value = number;
    return true;
}

bool stericol_parse_whole(const char *string, long long low, long long high, long long *value)
{
    char *end;
    long long number;

    while (is_blank(*string))
        string++;
    if (!isdigit((unsigned char)*string) && !((*string == '-' || *string == '+') && isdigit((unsigned char)string[1])))
        return false;
    errno = 0;
    number = strtoll(string, &end, 10);
    while (is_blank(*end))
        end++;
    if (errno != 0 || *end != '\0' || number < low || number > high)
        return false;
    *value = number;
    return true;
}

static int lower(int c)
{
    return c >= 'A' && c <= 'Z' ? c - 'A' + 'a' : c;
}

bool stericol_same_ignoring_case(const char *a, const char *b)
{
    while (*a != '\0' && lower((unsigned char)*a) == lower((unsigned char)*b)) {
        a++;
        b++;
    }
    return *a == *b;
}

bool stericol_starts_with(const char *string, const char *start)
{
    return strncmp(string, start, strlen(start)) == 0;
}

bool stericol_ends_with(const char *string, const char *end)
{
    size_t length = strlen(string), tail = strlen(end);

    return length >= tail && strcmp(string + length - tail, end) == 0;
}
