/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a value must look like, by the kind of its option; the same words serve messages and help. */
#include "job/room.h"
#include "job/values.h"

#include <limits.h>
#include <string.h>

/* "a, b or c". */
static void add_choices(stericol_text *text, const char *choices)
{
    size_t count = stericol_choice_count(choices);

    for (size_t i = 0; i < count; i++) {
        size_t length;
        const char *choice = stericol_choice_at(choices, i, &length);

        stericol_text_add(text, i == 0 ? "" : i + 1 < count ? ", " : " or ");
        stericol_text_add_bytes(text, choice, length);
    }
}

static void add_number(const stericol_option *option, stericol_text *text)
{
    if (option->choices != NULL) {
        add_choices(text, option->choices);
        stericol_text_add(text, ", or ");
    }
    stericol_text_add(text, option->kind == STERICOL_OPTION_WHOLE ? "a whole number" : "a number");
    if (option->low < option->high && option->above_low)
        stericol_text_format(text, " above %g, at most %g", option->low, option->high);
    else if (option->low < option->high)
        stericol_text_format(text, " from %g to %g", option->low, option->high);
    if (option->unit != NULL)
        stericol_text_format(text, " (%s)", option->unit);
}

void stericol_option_allowed(const stericol_option *option, stericol_text *text)
{
    switch (option->kind) {
    case STERICOL_OPTION_SWITCH:
        stericol_text_add(text, "yes or no");
        break;
    case STERICOL_OPTION_NUMBER:
    case STERICOL_OPTION_WHOLE:
        add_number(option, text);
        break;
    case STERICOL_OPTION_CHOICE:
        add_choices(text, option->choices);
        break;
    case STERICOL_OPTION_SIZE:
        stericol_text_add(text, "bytes, or a number with K, M, G or T (powers of 1024): 512M");
        break;
    case STERICOL_OPTION_TEXT:
    case STERICOL_OPTION_PATH:
    case STERICOL_OPTION_PATHS:
    case STERICOL_OPTION_WINDOW:
    case STERICOL_OPTION_STEPS:
    case STERICOL_OPTION_LAYERS:
    case STERICOL_OPTION_ASSIGNMENT:
    case STERICOL_OPTION_BOX:
        break;
    }
}

static bool number_fits(const stericol_option *option, const char *value)
{
    double number;
    long long whole;

    if (option->choices != NULL &&
        stericol_choice_index(option->choices, value) < stericol_choice_count(option->choices))
        return true;
    if (!stericol_parse_number(value, &number))
        return false;
    if (option->kind == STERICOL_OPTION_WHOLE && !stericol_parse_whole(value, LLONG_MIN, LLONG_MAX, &whole))
        return false;
    if (!(option->low < option->high))
        return true;
    return number <= option->high && (option->above_low ? number > option->low : number >= option->low);
}

const char *stericol_option_refusal(const stericol_option *option, const char *value, stericol_text *phrase)
{
    size_t first, second;
    double box[4];
    const char *to;
    bool fits = true;

    switch (option->kind) {
    case STERICOL_OPTION_TEXT:
    case STERICOL_OPTION_PATH:
    case STERICOL_OPTION_PATHS:
        return *value == '\0' ? "an empty value stands for nothing" : NULL;
    case STERICOL_OPTION_SIZE:
        return stericol_parse_size(value, &first);
    case STERICOL_OPTION_WINDOW:
        return stericol_parse_window(value, &first, &to);
    case STERICOL_OPTION_STEPS:
        return stericol_parse_steps(value, &first, &second);
    case STERICOL_OPTION_LAYERS:
        return stericol_parse_layers(value, NULL, NULL);
    case STERICOL_OPTION_ASSIGNMENT:
        return stericol_parse_assignment(value, &first, &second);
    case STERICOL_OPTION_BOX:
        return stericol_parse_box(value, &first, box);
    case STERICOL_OPTION_SWITCH:
        fits = strcmp(value, "yes") == 0 || strcmp(value, "no") == 0;
        break;
    case STERICOL_OPTION_NUMBER:
    case STERICOL_OPTION_WHOLE:
        fits = number_fits(option, value);
        break;
    case STERICOL_OPTION_CHOICE:
        fits = stericol_choice_index(option->choices, value) < stericol_choice_count(option->choices);
        break;
    }
    if (fits)
        return NULL;
    stericol_text_add(phrase, "give ");
    stericol_option_allowed(option, phrase);
    return stericol_text_string(phrase);
}
