/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Text variables: characters (the last dimension runs along a text) and strings. */
#include "cf/room.h"

#include "base/checked.h"
#include "base/text.h"

#include <netcdf.h>
#include <stdlib.h>
#include <string.h>

/* Names of casts, regions, members: more than this is no list of names. */
#define MOST_TEXT_BYTES ((size_t)256 << 20)

void stericol_cf_free_texts(char **texts, size_t count)
{
    size_t i;

    for (i = 0; texts != NULL && i < count; i++)
        free(texts[i]);
    free(texts);
}

/* A copy without the blanks and zeros at its end. */
static char *trimmed(const char *bytes, size_t length)
{
    const char *zero = memchr(bytes, '\0', length);

    if (zero != NULL)
        length = (size_t)(zero - bytes);
    while (length > 0 && bytes[length - 1] == ' ')
        length--;
    return stericol_copy_bytes(bytes, length);
}

static int read_characters(const stericol_cf_variable *variable, size_t length, char **texts, size_t count)
{
    char *bytes = stericol_new_array(count, length);
    size_t i;
    int status = NC_ENOMEM;

    if (bytes != NULL)
        status = nc_get_var_text(variable->group_handle, variable->handle, bytes);
    for (i = 0; i < count && status == NC_NOERR; i++) {
        texts[i] = trimmed(bytes + i * length, length);
        if (texts[i] == NULL)
            status = NC_ENOMEM;
    }
    free(bytes);
    return status;
}

static int read_strings(const stericol_cf_variable *variable, char **texts, size_t count)
{
    char **strings = stericol_new_array(count, sizeof *strings);
    size_t i;
    int status = NC_ENOMEM;

    if (strings == NULL)
        return status;
    status = nc_get_var_string(variable->group_handle, variable->handle, strings);
    if (status != NC_NOERR) {
        free(strings);
        return status;
    }
    for (i = 0; i < count && status == NC_NOERR; i++) {
        const char *string = strings[i] != NULL ? strings[i] : "";

        texts[i] = trimmed(string, strlen(string));
        if (texts[i] == NULL)
            status = NC_ENOMEM;
    }
    (void)nc_free_string(count, strings);
    free(strings);
    return status;
}

stericol_status stericol_cf_read_texts(stericol_context *context, stericol_cf_file *file,
                                       const stericol_cf_variable *variable, char ***texts, size_t *count)
{
    size_t total, length = 1;
    int status = NC_NOERR;

    *texts = NULL;
    *count = 0;
    if (variable->type != STERICOL_CF_CHAR && variable->type != STERICOL_CF_STRING)
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name, "name a text variable",
                             "holds no texts");
    if (!stericol_cf_value_count(file, variable, &total) || total > MOST_TEXT_BYTES / sizeof(char *))
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name,
                             "check that it is the variable meant", "holds too many texts");
    if (variable->type == STERICOL_CF_CHAR && variable->rank > 0) {
        length = file->dimensions[variable->dimension[variable->rank - 1]].length;
        total = length > 0 ? total / length : 0;
    }
    *texts = stericol_new_array(total, sizeof **texts);
    if (*texts == NULL)
        return stericol_fail_memory(context, total * sizeof **texts, variable->name);
    *count = total;
    if (total > 0)
        status = variable->type == STERICOL_CF_CHAR ? read_characters(variable, length, *texts, total)
                                                    : read_strings(variable, *texts, total);
    if (status == NC_NOERR)
        return STERICOL_OK;
    stericol_cf_free_texts(*texts, *count);
    *texts = NULL;
    *count = 0;
    return stericol_cf_fail_reading(context, file, variable, status);
}
