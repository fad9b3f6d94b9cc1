/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/values.h"

#include "base/checked.h"
#include "base/text.h"

#include <limits.h>
#include <math.h>
#include <stdbool.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

enum { LONGEST_PART = 63 };

/* Copies `length` bytes for the number parsers, which take whole strings; false where they are too many. */
static bool copy_part(char part[LONGEST_PART + 1], const char *text, size_t length)
{
    if (length > LONGEST_PART)
        return false;
    memcpy(part, text, length);
    part[length] = '\0';
    return true;
}

static bool part_number(const char *text, size_t length, double *value)
{
    char part[LONGEST_PART + 1];

    return copy_part(part, text, length) && stericol_parse_number(part, value);
}

/* Counted from 1. */
static bool part_index(const char *text, size_t length, size_t *index)
{
    char part[LONGEST_PART + 1];
    long long value;

    if (!copy_part(part, text, length) || !stericol_parse_whole(part, 1, LLONG_MAX, &value))
        return false;
#if LLONG_MAX > SIZE_MAX
    if ((unsigned long long)value > SIZE_MAX)
        return false;
#endif
    *index = (size_t)value;
    return true;
}

/* ---- layers ---- */

static const char a_layer[] = "a layer is FROM..TO in metres, such as 0..700 or 2000..bottom";

static bool is_bottom(const char *text, size_t length)
{
    char part[LONGEST_PART + 1];

    if (!copy_part(part, text, length))
        return false;
    for (; length > 0 && (part[length - 1] == ' ' || part[length - 1] == '\t'); length--)
        part[length - 1] = '\0';
    return strcmp(part + strspn(part, " \t"), "bottom") == 0;
}

static const char *parse_range(const char *text, size_t length, stericol_depth_range *range)
{
    const char *dots = NULL;
    size_t after;

    for (size_t i = 0; i + 1 < length && dots == NULL; i++)
        if (text[i] == '.' && text[i + 1] == '.')
            dots = text + i;
    if (dots == NULL || !part_number(text, (size_t)(dots - text), &range->upper))
        return a_layer;
    after = length - (size_t)(dots + 2 - text);
    if (is_bottom(dots + 2, after))
        range->lower = INFINITY;
    else if (!part_number(dots + 2, after, &range->lower))
        return a_layer;
    if (range->upper < 0)
        return "depths are not negative; they count down from the surface";
    if (!(range->lower > range->upper))
        return "a layer goes down: its second depth must be greater than its first";
    return NULL;
}

static bool is_known(const stericol_depth_range *ranges, size_t count, stericol_depth_range range)
{
    for (size_t i = 0; i < count; i++)
        if (!(ranges[i].upper < range.upper) && !(ranges[i].upper > range.upper) &&
            !(ranges[i].lower < range.lower) && !(ranges[i].lower > range.lower))
            return true;
    return false;
}

const char *stericol_parse_layers(const char *text, stericol_depth_range **layers, size_t *count)
{
    stericol_depth_range *ranges;
    const char *wrong = NULL;
    size_t found = 0, most = 1;

    for (const char *c = text; *c != '\0'; c++)
        most += *c == ',';
    if (most > STERICOL_LAYERS_MOST)
        return "there are more than 1000 layers";
    ranges = stericol_new_array(most, sizeof *ranges);
    if (ranges == NULL) {
        if (layers != NULL) {
            *layers = NULL;
            *count = 0;
        }
        return "no memory is left to read it";
    }
    for (const char *at = text; wrong == NULL; at++) {
        size_t length = strcspn(at, ",");

        wrong = parse_range(at, length, &ranges[found]);
        if (wrong == NULL && is_known(ranges, found, ranges[found]))
            wrong = "a layer stands there twice";
        found++;
        at += length;
        if (*at == '\0')
            break;
    }
    if (wrong != NULL || layers == NULL) {
        free(ranges);
        return wrong;
    }
    *layers = ranges;
    *count = found;
    return NULL;
}

/* ---- the others ---- */

const char *stericol_parse_steps(const char *text, size_t *first, size_t *last)
{
    static const char wrong[] = "steps are counted from 1, such as 3 or 3..5";
    const char *dots = strstr(text, "..");
    size_t from, to;

    if (!part_index(text, dots == NULL ? strlen(text) : (size_t)(dots - text), &from))
        return wrong;
    to = from;
    if (dots != NULL && !part_index(dots + 2, strlen(dots + 2), &to))
        return wrong;
    if (to < from)
        return "the last step comes before the first";
    *first = from;
    *last = to;
    return NULL;
}

const char *stericol_parse_size(const char *text, size_t *bytes)
{
    static const char wrong[] = "a size is a number of bytes, or with K, M, G or T behind it: 512M";
    static const char letters[] = "kmgt";
    size_t length = strspn(text, "0123456789.");
    const char *unit = text + length;
    double value, factor = 1;

    if (length == 0 || !part_number(text, length, &value))
        return wrong;
    for (size_t i = 0; letters[i] != '\0'; i++) {
        const char spelled[][4] = {{letters[i]}, {letters[i], 'b'}, {letters[i], 'i', 'b'}};

        for (size_t j = 0; j < sizeof spelled / sizeof spelled[0]; j++)
            if (stericol_same_ignoring_case(unit, spelled[j]))
                factor = ldexp(1, 10 * ((int)i + 1));
    }
    if (factor < 2 && *unit != '\0' && !stericol_same_ignoring_case(unit, "b"))
        return wrong;
    value = floor(value * factor);
    if (value < 1)
        return "it must be at least one byte";
    if (value >= (double)SIZE_MAX)
        return "it is more than this machine can count";
    *bytes = (size_t)value;
    return NULL;
}

const char *stericol_parse_assignment(const char *text, size_t *name_length, size_t *index)
{
    const char *equals = strrchr(text, '=');
    size_t value;

    if (equals == NULL || equals == text || !part_index(equals + 1, strlen(equals + 1), &value))
        return "it is NAME=INDEX, the index counted from 1, such as member=3";
    *name_length = (size_t)(equals - text);
    *index = value;
    return NULL;
}

const char *stericol_parse_box(const char *text, size_t *name_length, double box[4])
{
    static const char wrong[] =
        "a box is NAME=WEST,SOUTH,EAST,NORTH in degrees, such as Inner_Bight=-20,40,-5,55";
    const char *equals = strrchr(text, '=');
    double side[4];

    if (equals == NULL || equals == text)
        return wrong;
    for (size_t i = 0, at = 1; i < 4; i++) {
        size_t length = strcspn(equals + at, ",");

        if (!part_number(equals + at, length, &side[i]) || (equals[at + length] == ',') != (i < 3))
            return wrong;
        at += length + 1;
    }
    if (!(side[1] < side[3]) || side[1] < -90 || side[3] > 90)
        return "south must be less than north, and both lie within -90 to 90";
    if (fabs(side[0]) > 360 || fabs(side[2]) > 360)
        return "west and east lie within -360 to 360";
    if (!(side[0] < side[2]) && !(side[0] > side[2]))
        return "west and east are the same; the whole circle is -180,SOUTH,180,NORTH";
    *name_length = (size_t)(equals - text);
    memcpy(box, side, sizeof side);
    return NULL;
}

const char *stericol_parse_window(const char *text, size_t *from_length, const char **to)
{
    const char *dots = strstr(text, "..");

    if (dots == NULL && text[0] != '\0') { /* one date stands for both ends */
        *from_length = strlen(text);
        *to = text;
        return NULL;
    }
    if (dots == NULL || dots == text || dots[2] == '\0' || dots[2] == '.' || strstr(dots + 2, "..") != NULL)
        return "a window is FROM..TO in ISO 8601, such as 2005-01..2009-12";
    *from_length = (size_t)(dots - text);
    *to = dots + 2;
    return NULL;
}
