/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Contradictions between options. */
#include "base/context.h"
#include "job/room.h"

#include <stdlib.h>
#include <string.h>

/* As the user wrote it: "--name", or the metavar of a positional argument. */
static void add_spelled(stericol_text *text, const stericol_option *option, const stericol_command *command)
{
    if (option == command->positional)
        stericol_text_add(text, option->metavar);
    else
        stericol_text_format(text, "--%s", option->name);
}

/* The value that the rule speaks of is that of `second`. */
static bool has_value(const stericol_settings *settings, const stericol_rule *rule)
{
    const char *text = stericol_entry_text(stericol_entry_named(settings, rule->second));

    return text != NULL && strcmp(text, rule->value) == 0;
}

/* True where what the rule wants of `second` is so; REQUIRED has no second. */
static bool second_agrees(const stericol_settings *settings, const stericol_rule *rule)
{
    switch (rule->kind) {
    case STERICOL_RULE_REQUIRED:
        return true;
    case STERICOL_RULE_EXCLUDES:
        return !stericol_entry_is_given(stericol_entry_named(settings, rule->second));
    case STERICOL_RULE_NEEDS:
        return stericol_entry_is_given(stericol_entry_named(settings, rule->second));
    case STERICOL_RULE_NEEDS_VALUE:
        return has_value(settings, rule);
    case STERICOL_RULE_NOT_VALUE:
        return !has_value(settings, rule);
    }
    return true;
}

bool stericol_option_plays_part(const stericol_settings *settings, const stericol_option *option)
{
    for (size_t i = 0; i < settings->command->rule_count; i++) {
        const stericol_rule *rule = &settings->command->rules[i];

        if (rule->kind != STERICOL_RULE_REQUIRED && strcmp(rule->first, option->name) == 0 &&
            !second_agrees(settings, rule))
            return false;
    }
    return true;
}

/* "cannot go together with --x" and its kin. */
static void add_complaint(stericol_text *text, const stericol_settings *settings, const stericol_rule *rule)
{
    static const char *const words[] = {[STERICOL_RULE_REQUIRED] = "",
                                        [STERICOL_RULE_EXCLUDES] = "cannot go together with ",
                                        [STERICOL_RULE_NEEDS] = "only has a meaning together with ",
                                        [STERICOL_RULE_NEEDS_VALUE] = "only has a meaning with ",
                                        [STERICOL_RULE_NOT_VALUE] = "cannot go together with "};

    stericol_text_add(text, words[rule->kind]);
    add_spelled(text, stericol_entry_named(settings, rule->second)->option, settings->command);
    if (rule->value != NULL)
        stericol_text_format(text, " %s", rule->value);
}

/* Where a broken rule is one between file and command line, the file's part is dropped; true when it was. */
static bool give_way(stericol_context *context, stericol_settings *settings, const stericol_rule *rule)
{
    stericol_entry *first = stericol_entry_named(settings, rule->first);
    stericol_entry *second = stericol_entry_named(settings, rule->second);
    bool both_ways = rule->kind == STERICOL_RULE_EXCLUDES || rule->kind == STERICOL_RULE_NOT_VALUE;
    stericol_entry *loser = NULL, *winner = NULL;

    if (first->origin == STERICOL_ORIGIN_SETTINGS && second->origin == STERICOL_ORIGIN_COMMAND_LINE) {
        loser = first;
        winner = second;
    } else if (both_ways && second->origin == STERICOL_ORIGIN_SETTINGS &&
               first->origin == STERICOL_ORIGIN_COMMAND_LINE) {
        loser = second;
        winner = first;
    }
    if (loser == NULL)
        return false;
    stericol_notice(context, STERICOL_NOTE, settings->file, loser->option->name,
                    "the setting of line %zu gives way to --%s on the command line", loser->line,
                    winner->option->name);
    stericol_entry_clear(loser);
    return true;
}

static stericol_status check_pair(stericol_context *context, stericol_settings *settings,
                                  const stericol_rule *rule)
{
    const stericol_entry *first = stericol_entry_named(settings, rule->first);
    stericol_text name = {0}, what = {0};
    stericol_status status;

    if (!stericol_entry_is_given(first) || second_agrees(settings, rule) || give_way(context, settings, rule))
        return STERICOL_OK;
    add_spelled(&name, first->option, settings->command);
    add_complaint(&what, settings, rule);
    status = stericol_fail(context, STERICOL_USAGE, NULL, stericol_text_string(&name), rule->remedy, "it %s",
                           stericol_text_string(&what));
    stericol_text_free(&name);
    stericol_text_free(&what);
    return status;
}

/* rule->first is "a|b|c": one of them. */
static stericol_status check_required(stericol_context *context, stericol_settings *settings,
                                      const stericol_rule *rule)
{
    size_t count = stericol_choice_count(rule->first);
    stericol_text names = {0};
    stericol_status status = STERICOL_OK;
    bool given = false;

    for (size_t i = 0; i < settings->entry_count; i++) {
        const stericol_entry *entry = &settings->entries[i];
        size_t at = stericol_choice_index(rule->first, entry->option->name);

        if (at == count)
            continue;
        given = given || stericol_entry_is_given(entry);
        if (names.length != 0)
            stericol_text_add(&names, " or ");
        add_spelled(&names, entry->option, settings->command);
    }
    if (!given)
        status = stericol_fail(context, STERICOL_USAGE, NULL, settings->command->name, rule->remedy,
                               "%s is missing", stericol_text_string(&names));
    stericol_text_free(&names);
    return status;
}

/* True where both values begin with the same NAME=, the last "=" being meant. */
static bool same_name(const char *a, const char *b)
{
    size_t length = (size_t)(strrchr(a, '=') - a);

    return strrchr(b, '=') == b + length && memcmp(a, b, length) == 0;
}

static stericol_status refuse_name_again(stericol_context *context, const stericol_entry *entry,
                                         const char *value)
{
    stericol_text name = {0};
    stericol_status status;

    stericol_text_format(&name, "--%s", entry->option->name);
    status = stericol_fail(context, STERICOL_USAGE, NULL, stericol_text_string(&name), "give every name once",
                           "the name '%.*s' is given twice", (int)(strrchr(value, '=') - value), value);
    stericol_text_free(&name);
    return status;
}

/* A name stands for one thing only. */
static stericol_status check_names(stericol_context *context, const stericol_entry *entry)
{
    if (entry->option->kind != STERICOL_OPTION_ASSIGNMENT && entry->option->kind != STERICOL_OPTION_BOX)
        return STERICOL_OK;
    for (size_t i = 1; i < entry->count; i++)
        for (size_t j = 0; j < i; j++)
            if (same_name(entry->values[i], entry->values[j]))
                return refuse_name_again(context, entry, entry->values[i]);
    return STERICOL_OK;
}

stericol_status stericol_settings_check(stericol_context *context, stericol_settings *settings)
{
    const stericol_command *command = settings->command;
    stericol_status status = STERICOL_OK;

    /* Pairs first: what gives way may leave something missing. */
    for (size_t i = 0; status == STERICOL_OK && i < command->rule_count; i++)
        if (command->rules[i].kind != STERICOL_RULE_REQUIRED)
            status = check_pair(context, settings, &command->rules[i]);
    for (size_t i = 0; status == STERICOL_OK && i < command->rule_count; i++)
        if (command->rules[i].kind == STERICOL_RULE_REQUIRED)
            status = check_required(context, settings, &command->rules[i]);
    for (size_t i = 0; status == STERICOL_OK && i < settings->entry_count; i++)
        status = check_names(context, &settings->entries[i]);
    return status;
}
