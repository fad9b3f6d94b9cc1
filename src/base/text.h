/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Texts that grow, and the strict reading of numbers. */
#ifndef STERICOL_BASE_TEXT_H
#define STERICOL_BASE_TEXT_H

#include "stericol/status.h"

#include <stdarg.h>
#include <stdbool.h>
#include <stddef.h>

/*
 * A text that grows; all zero is empty.  When memory is out the addition is dropped and `failed` is set, so
 * that a builder can add many parts and look once.
 */
typedef struct stericol_text {
    char *bytes;
    size_t length;
    size_t room;
    bool failed;
} stericol_text;

void stericol_text_free(stericol_text *text);
void stericol_text_clear(stericol_text *text);
/* Never NULL. */
const char *stericol_text_string(const stericol_text *text);
void stericol_text_add(stericol_text *text, const char *string);
void stericol_text_add_bytes(stericol_text *text, const char *bytes, size_t length);
/* Adds `string` with every byte that is not printable ASCII or part of valid UTF-8 written as \xNN. */
void stericol_text_add_printable(stericol_text *text, const char *string);
void stericol_text_format(stericol_text *text, const char *format, ...) STERICOL_PRINTF(2, 3);
void stericol_text_format_list(stericol_text *text, const char *format, va_list arguments);
/* Takes the bytes out (free them with free()); NULL when memory was out at any addition. */
char *stericol_text_take(stericol_text *text);

/* A copy of `string` (NULL stays NULL); NULL when memory is out. */
char *stericol_copy_string(const char *string);
/* A copy of the first `length` bytes of `string`, ended with a zero byte; NULL when memory is out. */
char *stericol_copy_bytes(const char *string, size_t length);

/*
 * Reads all of `string` as one finite number, independent of the locale: digits with a point, an optional
 * exponent, blanks around allowed.  False for an empty text, for rest after the number, for hexadecimal,
 * infinity and NaN, for a number too large for a double.
 */
bool stericol_parse_number(const char *string, double *value);
/* The same for a whole number within [low, high]. */
bool stericol_parse_whole(const char *string, long long low, long long high, long long *value);

/* ASCII only, whatever the locale. */
bool stericol_same_ignoring_case(const char *a, const char *b);
bool stericol_starts_with(const char *string, const char *start);
bool stericol_ends_with(const char *string, const char *end);

#endif
