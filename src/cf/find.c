/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Variables and attributes by their names. */
#include "cf/room.h"

#include "base/text.h"

#include <stdlib.h>
#include <string.h>

static const stericol_cf_attribute *find_attribute(const stericol_cf_attribute *attributes, size_t count,
                                                   const char *name)
{
    size_t i;

    for (i = 0; i < count; i++) {
        if (strcmp(attributes[i].name, name) == 0)
            return &attributes[i];
    }
    return NULL;
}

const stericol_cf_attribute *stericol_cf_attribute_of(const stericol_cf_variable *variable, const char *name)
{
    return find_attribute(variable->attributes, variable->attribute_count, name);
}

const char *stericol_cf_text_of(const stericol_cf_variable *variable, const char *name)
{
    const stericol_cf_attribute *attribute = stericol_cf_attribute_of(variable, name);

    return attribute != NULL ? attribute->text : NULL;
}

const stericol_cf_attribute *stericol_cf_global(const stericol_cf_file *file, const char *name)
{
    return find_attribute(file->globals, file->global_count, name);
}

const char *stericol_cf_global_text(const stericol_cf_file *file, const char *name)
{
    const stericol_cf_attribute *attribute = stericol_cf_global(file, name);

    return attribute != NULL ? attribute->text : NULL;
}

/* `full` as in the name field: no leading slash at the root. */
static const stericol_cf_variable *find_full(const stericol_cf_file *file, const char *full)
{
    size_t i;

    if (full[0] == '/' && strchr(full + 1, '/') == NULL)
        full++;
    for (i = 0; i < file->variable_count; i++) {
        if (strcmp(file->variables[i].name, full) == 0)
            return &file->variables[i];
    }
    return NULL;
}

static const stericol_cf_variable *find_only(const stericol_cf_file *file, const char *short_name)
{
    const stericol_cf_variable *found = NULL;
    size_t i;

    for (i = 0; i < file->variable_count; i++) {
        if (strcmp(file->variables[i].short_name, short_name) != 0)
            continue;
        if (found != NULL)
            return NULL;
        found = &file->variables[i];
    }
    return found;
}

/* Cuts the last group off; false at the root. */
static bool go_up(char *group)
{
    char *last = strrchr(group, '/');

    if (group[0] == '\0')
        return false;
    *last = '\0';
    return true;
}

static const stericol_cf_variable *find_in(const stericol_cf_file *file, const char *group, const char *name)
{
    stericol_text full = {0};
    const stericol_cf_variable *found;

    stericol_text_format(&full, "%s/%s", group, name);
    found = full.failed ? NULL : find_full(file, stericol_text_string(&full));
    stericol_text_free(&full);
    return found;
}

const stericol_cf_variable *stericol_cf_find(const stericol_cf_file *file, const char *name,
                                             const stericol_cf_variable *near)
{
    const stericol_cf_variable *found = NULL;
    char *group;

    if (name[0] == '/')
        return find_full(file, name);
    if (near == NULL) {
        found = find_full(file, name);
        return found != NULL ? found : find_only(file, name);
    }
    /* "" is the root here, so that the groups above are the starts of the text. */
    group = stericol_copy_string(strcmp(near->group, "/") == 0 ? "" : near->group);
    if (group == NULL)
        return NULL;
    if (strchr(name, '/') != NULL) {
        while (stericol_starts_with(name, "../") && go_up(group))
            name += strlen("../");
        found = find_in(file, group, stericol_starts_with(name, "./") ? name + 2 : name);
    } else {
        do
            found = find_in(file, group, name);
        while (found == NULL && go_up(group));
    }
    free(group);
    return found;
}
