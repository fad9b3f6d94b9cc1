/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Reading a settings file. */
#include "base/checked.h"
#include "base/context.h"
#include "job/room.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Many times what a file of settings with thousands of paths needs; a device or a data file given by mistake
   stops here. */
#define LARGEST_FILE ((size_t)16 << 20)

static stericol_status read_whole(stericol_context *context, const char *path, stericol_text *text)
{
    FILE *file = fopen(path, "r");
    char part[4096];
    size_t length;
    stericol_status status = STERICOL_OK;

    if (file == NULL)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "check its name and permissions",
                             "the settings file cannot be opened: %s", strerror(errno));
    errno = 0;
    while ((length = fread(part, 1, sizeof part, file)) > 0 && text->length <= LARGEST_FILE)
        stericol_text_add_bytes(text, part, length);
    if (ferror(file))
        status = stericol_fail(context, STERICOL_INPUT, path, NULL, "give a text of 'name = value' lines",
                               "the settings file cannot be read: %s", strerror(errno));
    else if (text->failed)
        status = stericol_fail_memory(context, 0, "the settings file");
    else if (text->length > LARGEST_FILE || strlen(stericol_text_string(text)) != text->length)
        status = stericol_fail(context, STERICOL_USAGE, path, NULL, "give a text of 'name = value' lines",
                               "this is no settings file");
    fclose(file);
    return status;
}

/* ---- one line ---- */

static char *trim(char *text)
{
    char *end;

    text += strspn(text, " \t\r");
    end = text + strlen(text);
    while (end > text && strchr(" \t\r", end[-1]) != NULL)
        end--;
    *end = '\0';
    return text;
}

static int hexadecimal(char c)
{
    static const char digits[] = "0123456789abcdef0123456789ABCDEF";
    const char *at = c == '\0' ? NULL : strchr(digits, c);

    return at == NULL ? -1 : (int)((at - digits) % 16);
}

/* Whether nothing but blanks and a comment follows. */
static bool is_rest(const char *text)
{
    text += strspn(text, " \t\r");
    return *text == '\0' || *text == '#';
}

/* Undoes quotes in place; false where they do not close, something follows, or an escape is none. */
static bool unquote(char *value)
{
    char quote = value[0], *from = value + 1, *to = value;

    for (; *from != quote; from++) {
        if (*from == '\0')
            return false;
        if (quote == '\'' || *from != '\\') {
            *to++ = *from;
        } else if (from[1] == '\\' || from[1] == '"') {
            *to++ = *++from;
        } else if (from[1] == 'x' && hexadecimal(from[2]) >= 0 && hexadecimal(from[3]) >= 0 &&
                   (from[2] != '0' || from[3] != '0')) {
            *to++ = (char)(unsigned char)(hexadecimal(from[2]) * 16 + hexadecimal(from[3]));
            from += 3;
        } else {
            return false;
        }
    }
    if (!is_rest(from + 1))
        return false;
    *to = '\0';
    return true;
}

/* A # begins a comment at the start or behind a blank; inside a word (file.nc#mode=...) it belongs to the
 * value. */
static void cut_comment(char *value)
{
    for (size_t i = 0; value[i] != '\0'; i++)
        if (value[i] == '#' && (i == 0 || value[i - 1] == ' ' || value[i - 1] == '\t')) {
            value[i] = '\0';
            return;
        }
}

static stericol_status refuse_name(stericol_context *context, const stericol_settings *settings,
                                   const char *line, const char *name)
{
    const char *nearest = stericol_nearest_option(settings->command, name, true);
    stericol_text remedy = {0};
    stericol_status status;

    if (nearest != NULL)
        stericol_text_format(&remedy, "did you mean %s?", nearest);
    else
        stericol_text_format(&remedy, "see stericol %s --help", settings->command->name);
    status = stericol_fail(context, STERICOL_USAGE, settings->file, line, stericol_text_string(&remedy),
                           "%s has no setting '%s'", settings->command->name, name);
    stericol_text_free(&remedy);
    return status;
}

/* `seen`: the line on which the name stood before, 0 for none. */
static stericol_status take_setting(stericol_context *context, const stericol_settings *settings,
                                    const char *line, size_t number, stericol_entry *entry, size_t *seen,
                                    const char *value)
{
    const stericol_option *option = entry->option;
    stericol_text phrase = {0};
    const char *refusal;
    stericol_status status = STERICOL_OK;

    if (strcmp(option->name, "settings") == 0)
        return stericol_fail(context, STERICOL_USAGE, settings->file, line, "put its lines in here",
                             "a settings file cannot name another one");
    if (*seen != 0 && !option->repeatable)
        return stericol_fail(context, STERICOL_USAGE, settings->file, line, "keep one of them",
                             "'%s' stands on line %zu already", option->name, *seen);
    *seen = number;
    refusal = stericol_option_refusal(option, value, &phrase);
    if (refusal != NULL)
        status = stericol_fail(context, STERICOL_USAGE, settings->file, line, refusal,
                               "%s: '%s' cannot be used", option->name, value);
    else if (entry->origin != STERICOL_ORIGIN_COMMAND_LINE)
        status = stericol_entry_add(context, entry, value, STERICOL_ORIGIN_SETTINGS, number);
    stericol_text_free(&phrase);
    return status;
}

static stericol_status take_line(stericol_context *context, stericol_settings *settings, size_t number,
                                 char *text, size_t *seen)
{
    char line[32], *equals, *name, *value;

    snprintf(line, sizeof line, "line %zu", number);
    text = trim(text);
    if (*text == '\0' || *text == '#')
        return STERICOL_OK;
    equals = strchr(text, '=');
    if (equals == NULL)
        return stericol_fail(context, STERICOL_USAGE, settings->file, line,
                             "a switch is written 'name = yes'", "it is not of the form 'name = value'");
    *equals = '\0';
    name = trim(text);
    value = trim(equals + 1);
    if (*value == '"' || *value == '\'') {
        if (!unquote(value))
            return stericol_fail(context, STERICOL_USAGE, settings->file, line,
                                 "close them, and write \\\\ and \\\" for \\ and \" within",
                                 "the quotes of '%s' are wrong", name);
    } else {
        cut_comment(value);
        value = trim(value);
    }
    for (size_t i = 0; i < settings->entry_count; i++)
        if (strcmp(settings->entries[i].option->name, name) == 0)
            return take_setting(context, settings, line, number, &settings->entries[i], &seen[i], value);
    return refuse_name(context, settings, line, name);
}

stericol_status stericol_settings_read_file(stericol_context *context, stericol_settings *settings)
{
    stericol_text text = {0};
    size_t *seen = stericol_new_array(settings->entry_count, sizeof *seen);
    stericol_status status;
    char *line;

    if (seen == NULL)
        return stericol_fail_memory(context, 0, "the settings file");
    status = read_whole(context, settings->file, &text);
    line = text.bytes;
    if (line != NULL &&
        stericol_starts_with(line, "\xef\xbb\xbf")) /* a byte order mark, as some editors write */
        line += 3;
    for (size_t number = 1; status == STERICOL_OK && line != NULL; number++) {
        char *end = strchr(line, '\n');

        if (end != NULL)
            *end = '\0';
        status = take_line(context, settings, number, line, seen);
        line = end == NULL ? NULL : end + 1;
    }
    stericol_text_free(&text);
    free(seen);
    return status;
}
