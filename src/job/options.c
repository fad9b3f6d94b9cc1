/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/options.h"

#include <stdint.h>
#include <string.h>

const stericol_command *stericol_command_named(const char *name)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    for (size_t i = 0; i < count; i++)
        if (strcmp(commands[i].name, name) == 0)
            return &commands[i];
    return NULL;
}

const stericol_option *stericol_command_option(const stericol_command *command, const char *name)
{
    for (size_t i = 0; i < command->option_count; i++)
        if (strcmp(command->options[i]->name, name) == 0)
            return command->options[i];
    if (command->positional != NULL && strcmp(command->positional->name, name) == 0)
        return command->positional;
    return NULL;
}

/* ---- spelling ---- */

enum { LONGEST_SPELLING = 63 };

static size_t least(size_t a, size_t b)
{
    return a < b ? a : b;
}

/* Rows of the dynamic programme; see R. Lowrance and R. A. Wagner (1975), J. ACM 22, 177-183, restricted to
   swaps of neighbours that are not edited again. */
size_t stericol_spelling_distance(const char *a, const char *b)
{
    size_t rows[3][LONGEST_SPELLING + 1];
    size_t a_length = strlen(a), b_length = strlen(b);

    if (a_length > LONGEST_SPELLING || b_length > LONGEST_SPELLING)
        return SIZE_MAX;
    for (size_t j = 0; j <= b_length; j++)
        rows[0][j] = j;
    for (size_t i = 1; i <= a_length; i++) {
        size_t *row = rows[i % 3];
        const size_t *above = rows[(i + 2) % 3], *two_above = rows[(i + 1) % 3];

        row[0] = i;
        for (size_t j = 1; j <= b_length; j++) {
            row[j] = least(above[j] + 1, row[j - 1] + 1);
            row[j] = least(row[j], above[j - 1] + (a[i - 1] != b[j - 1]));
            if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1])
                row[j] = least(row[j], two_above[j - 2] + 1);
        }
    }
    return rows[a_length % 3][b_length];
}

typedef struct best {
    const char *name;
    size_t distance;
} best;

/* A beginning of at least three letters is as near as one slip. */
static void consider(best *so_far, const char *typed, const char *candidate)
{
    size_t length = strlen(typed), distance = stericol_spelling_distance(typed, candidate);

    if (length >= 3 && strncmp(typed, candidate, length) == 0)
        distance = least(distance, 1);
    if (distance < so_far->distance)
        *so_far = (best){candidate, distance};
}

/* More slips than a third of what was typed is another word. */
static const char *near_enough(const best *found, const char *typed)
{
    size_t allowed = strlen(typed) / 3;

    return found->distance <= (allowed < 1 ? 1 : allowed) ? found->name : NULL;
}

const char *stericol_nearest_command(const char *name)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);
    best found = {NULL, SIZE_MAX};

    for (size_t i = 0; i < count; i++)
        consider(&found, name, commands[i].name);
    return near_enough(&found, name);
}

const char *stericol_nearest_option(const stericol_command *command, const char *name, bool with_positional)
{
    best found = {NULL, SIZE_MAX};

    for (size_t i = 0; i < command->option_count; i++)
        consider(&found, name, command->options[i]->name);
    if (with_positional && command->positional != NULL)
        consider(&found, name, command->positional->name);
    return near_enough(&found, name);
}

/* ---- choices ---- */

size_t stericol_choice_count(const char *choices)
{
    size_t count = 1;

    for (; *choices != '\0'; choices++)
        count += *choices == '|';
    return count;
}

const char *stericol_choice_at(const char *choices, size_t index, size_t *length)
{
    for (; index > 0; index--)
        choices = strchr(choices, '|') + 1;
    *length = strcspn(choices, "|");
    return choices;
}

size_t stericol_choice_index(const char *choices, const char *value)
{
    size_t count = stericol_choice_count(choices);

    for (size_t i = 0; i < count; i++) {
        size_t length;
        const char *choice = stericol_choice_at(choices, i, &length);

        if (strlen(value) == length && memcmp(choice, value, length) == 0)
            return i;
    }
    return count;
}
