/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Settings: the store, its getters, and the text that it is written back as.  Reading is in parse.c and
   settings_file.c. */
#include "job/settings.h"

#include "base/checked.h"
#include "base/context.h"
#include "job/room.h"
#include "job/values.h"

#include <assert.h>
#include <limits.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

/* ---- entries ---- */

static stericol_entry *find_entry(const stericol_settings *settings, const char *name)
{
    for (size_t i = 0; i < settings->entry_count; i++)
        if (strcmp(settings->entries[i].option->name, name) == 0)
            return &settings->entries[i];
    return NULL;
}

stericol_entry *stericol_entry_named(const stericol_settings *settings, const char *name)
{
    stericol_entry *entry = find_entry(settings, name);

    assert(entry != NULL);
    return entry;
}

stericol_status stericol_entry_add(stericol_context *context, stericol_entry *entry, const char *value,
                                   stericol_origin origin, size_t line)
{
    void *values = entry->values;
    char *copy = stericol_copy_string(value);

    if (copy == NULL || !stericol_grow_array(&values, entry->count + 1, sizeof *entry->values)) {
        free(copy);
        return stericol_fail_memory(context, 0, "the settings");
    }
    entry->values = values;
    entry->values[entry->count++] = copy;
    if (entry->count == 1) {
        entry->origin = origin;
        entry->line = line;
    }
    return STERICOL_OK;
}

void stericol_entry_clear(stericol_entry *entry)
{
    for (size_t i = 0; i < entry->count; i++)
        free(entry->values[i]);
    free(entry->values);
    *entry = (stericol_entry){.option = entry->option};
}

bool stericol_entry_is_given(const stericol_entry *entry)
{
    if (entry->option->kind == STERICOL_OPTION_SWITCH)
        return entry->count != 0 && strcmp(entry->values[0], "yes") == 0;
    return entry->count != 0;
}

const char *stericol_entry_text(const stericol_entry *entry)
{
    return entry->count != 0 ? entry->values[0] : entry->option->initial;
}

void stericol_settings_free(stericol_settings *settings)
{
    if (settings == NULL)
        return;
    for (size_t i = 0; i < settings->entry_count; i++)
        stericol_entry_clear(&settings->entries[i]);
    free(settings->entries);
    free(settings->file);
    free(settings);
}

/* ---- getters ---- */

const stericol_command *stericol_settings_command(const stericol_settings *settings)
{
    return settings->command;
}

bool stericol_settings_is_set(const stericol_settings *settings, const char *name)
{
    return stericol_entry_is_given(stericol_entry_named(settings, name));
}

stericol_origin stericol_settings_origin(const stericol_settings *settings, const char *name, size_t *line)
{
    const stericol_entry *entry = stericol_entry_named(settings, name);

    if (line != NULL)
        *line = entry->line;
    if (entry->count != 0)
        return entry->origin;
    return entry->option->initial != NULL ? STERICOL_ORIGIN_DEFAULT : STERICOL_ORIGIN_NONE;
}

const char *stericol_settings_text(const stericol_settings *settings, const char *name)
{
    return stericol_entry_text(stericol_entry_named(settings, name));
}

double stericol_settings_number(const stericol_settings *settings, const char *name)
{
    const stericol_entry *entry = stericol_entry_named(settings, name);
    const char *text = stericol_entry_text(entry);
    double value;

    assert(entry->option->kind == STERICOL_OPTION_NUMBER);
    return text != NULL && stericol_parse_number(text, &value) ? value : (double)NAN;
}

long long stericol_settings_whole(const stericol_settings *settings, const char *name)
{
    const stericol_entry *entry = stericol_entry_named(settings, name);
    const char *text = stericol_entry_text(entry);
    long long value;

    assert(entry->option->kind == STERICOL_OPTION_WHOLE);
    return text != NULL && stericol_parse_whole(text, LLONG_MIN, LLONG_MAX, &value) ? value : 0;
}

size_t stericol_settings_size(const stericol_settings *settings, const char *name)
{
    const stericol_entry *entry = stericol_entry_named(settings, name);
    const char *text = stericol_entry_text(entry);
    size_t bytes;

    assert(entry->option->kind == STERICOL_OPTION_SIZE);
    return text != NULL && stericol_parse_size(text, &bytes) == NULL ? bytes : 0;
}

bool stericol_settings_on(const stericol_settings *settings, const char *name)
{
    const stericol_entry *entry = stericol_entry_named(settings, name);

    assert(entry->option->kind == STERICOL_OPTION_SWITCH);
    return stericol_entry_is_given(entry);
}

size_t stericol_settings_choice(const stericol_settings *settings, const char *name)
{
    const stericol_entry *entry = stericol_entry_named(settings, name);
    const char *text = stericol_entry_text(entry);

    assert(entry->option->kind == STERICOL_OPTION_CHOICE);
    return text == NULL ? stericol_choice_count(entry->option->choices)
                        : stericol_choice_index(entry->option->choices, text);
}

const char *const *stericol_settings_list(const stericol_settings *settings, const char *name, size_t *count)
{
    const stericol_entry *entry = stericol_entry_named(settings, name);

    *count = entry->count;
    if (entry->count != 0)
        return (const char *const *)entry->values;
    if (entry->option->initial == NULL)
        return NULL;
    *count = 1;
    return &entry->option->initial;
}

/* ---- writing ---- */

/* What a line of a settings file would not give back as it is. */
static bool needs_quotes(const char *value)
{
    size_t length = strlen(value);
    stericol_text printable = {0};
    bool needs;

    if (length == 0 || strchr(" \t\"'#", value[0]) != NULL || strchr(" \t", value[length - 1]) != NULL)
        return true;
    stericol_text_add_printable(&printable, value);
    needs = strcmp(stericol_text_string(&printable), value) != 0 || strstr(value, " #") != NULL;
    stericol_text_free(&printable);
    return needs;
}

static void write_value(stericol_text *text, const char *value)
{
    stericol_text escaped = {0};

    if (!needs_quotes(value)) {
        stericol_text_add(text, value);
        return;
    }
    for (const char *c = value; *c != '\0'; c++) {
        if (*c == '"' || *c == '\\')
            stericol_text_add(&escaped, "\\");
        stericol_text_add_bytes(&escaped, c, 1);
    }
    stericol_text_add(text, "\"");
    stericol_text_add_printable(text, stericol_text_string(&escaped));
    stericol_text_add(text, "\"");
    text->failed = text->failed || escaped.failed;
    stericol_text_free(&escaped);
}

static void write_line(stericol_text *text, const char *name, const char *value)
{
    stericol_text_format(text, "%s = ", name);
    write_value(text, value);
    stericol_text_add(text, "\n");
}

void stericol_settings_write(const stericol_settings *settings, stericol_text *text)
{
    stericol_text_format(text, "# stericol %s %s\n", stericol_version(), settings->command->name);
    for (size_t i = 0; i < settings->entry_count; i++) {
        const stericol_entry *entry = &settings->entries[i];
        const stericol_option *option = entry->option;

        if (strcmp(option->name, "settings") == 0)
            continue;
        for (size_t j = 0; j < entry->count; j++)
            write_line(text, option->name, entry->values[j]);
        if (entry->count != 0 || !stericol_option_plays_part(settings, option))
            continue;
        if (option->kind == STERICOL_OPTION_SWITCH)
            write_line(text, option->name, "no");
        else if (option->initial != NULL)
            write_line(text, option->name, option->initial);
    }
}
