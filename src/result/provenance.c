/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "result/provenance.h"

#include <time.h>

bool stericol_result_instant_text(long long seconds, char *buffer)
{
    const time_t instant = (time_t)seconds;
    struct tm parts;

    buffer[0] = '\0';
    return (long long)instant == seconds && gmtime_r(&instant, &parts) != NULL &&
           strftime(buffer, STERICOL_INSTANT_ROOM, "%Y-%m-%dT%H:%M:%SZ", &parts) > 0;
}

void stericol_result_inputs_text(stericol_text *text, const stericol_input_record *inputs, size_t count)
{
    for (size_t i = 0; i < count; i++) {
        char instant[STERICOL_INSTANT_ROOM];

        if (i > 0)
            stericol_text_add(text, "\n");
        stericol_text_add_printable(text, inputs[i].path);
        stericol_text_format(text, ", %llu bytes", inputs[i].bytes);
        if (stericol_result_instant_text(inputs[i].changed, instant))
            stericol_text_format(text, ", changed %s", instant);
        if (inputs[i].id != NULL) {
            stericol_text_add(text, ", id ");
            stericol_text_add_printable(text, inputs[i].id);
        }
    }
}
