/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "input/room.h"

#include "base/checked.h"

#include <stdlib.h>
#include <string.h>

static bool was_said(const stericol_input_sayings *sayings, const char *text)
{
    for (size_t i = 0; i < sayings->count; i++)
        if (strcmp(sayings->texts[i], text) == 0)
            return true;
    return false;
}

static void keep(stericol_input_sayings *sayings, const char *text)
{
    void *texts = sayings->texts;
    char *copy = stericol_copy_string(text);
    if (!copy || !stericol_grow_array(&texts, sayings->count + 1, sizeof *sayings->texts)) {
        free(copy);
        sayings->failed = true;
        return;
    }
    sayings->texts = texts;
    sayings->texts[sayings->count++] = copy;
}

void stericol_input_say(const stericol_input_reader *reader, stericol_notice_level level,
                        const char *variable, const char *format, ...)
{
    stericol_text said = {0}, whole = {0};
    va_list arguments;
    va_start(arguments, format);
    stericol_text_format_list(&said, format, arguments);
    va_end(arguments);
    if (variable) {
        stericol_text_add_printable(&whole, variable);
        stericol_text_add(&whole, ": ");
    }
    stericol_text_add_printable(&whole, stericol_text_string(&said));
    const bool new_text = !reader->sayings || !was_said(reader->sayings, stericol_text_string(&whole));
    if (new_text)
        stericol_notice(reader->context, level, reader->file ? stericol_cf_path(reader->file) : NULL,
                        variable, "%s", stericol_text_string(&said));
    if (new_text && reader->sayings)
        keep(reader->sayings, stericol_text_string(&whole));
    if (reader->sayings && (said.failed || whole.failed))
        reader->sayings->failed = true;
    stericol_text_free(&said);
    stericol_text_free(&whole);
}

void stericol_input_sayings_free(stericol_input_sayings *sayings)
{
    for (size_t i = 0; i < sayings->count; i++)
        free(sayings->texts[i]);
    free(sayings->texts);
    *sayings = (stericol_input_sayings){0};
}

stericol_status stericol_input_refuse(const stericol_input_reader *reader, const char *variable,
                                      const char *remedy, const char *format, ...)
{
    stericol_text said = {0};
    va_list arguments;
    va_start(arguments, format);
    stericol_text_format_list(&said, format, arguments);
    va_end(arguments);
    stericol_fail(reader->context, STERICOL_INPUT, reader->file ? stericol_cf_path(reader->file) : NULL,
                  variable, remedy, "%s", stericol_text_string(&said));
    stericol_text_free(&said);
    return STERICOL_INPUT;
}
