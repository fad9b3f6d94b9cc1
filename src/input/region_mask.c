/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Masks of regions: flag_values and flag_meanings (CF 1.10, section 3.5).
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { MOST_FLAGS = 255 };

void stericol_input_mask_free(stericol_input_mask *mask)
{
    for (size_t i = 0; i < mask->count; i++)
        free(mask->names[i]);
    free(mask->names);
    free(mask->index);
    *mask = (stericol_input_mask){0};
}

static bool is_no_region(const char *name)
{
    static const char *const names[] = {"none",      "land",    "unset",  "land_or_coast",
                                        "no_region", "outside", "missing"};
    for (size_t i = 0; i < sizeof names / sizeof *names; i++)
        if (stericol_same_ignoring_case(name, names[i]))
            return true;
    return false;
}

static const stericol_cf_variable *find_variable(const stericol_input_reader *reader, size_t *count)
{
    const stericol_cf_variable *found = NULL;
    *count = 0;
    for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
        const char *standard_name = stericol_cf_text_of(variable, "standard_name");
        if (!stericol_cf_attribute_of(variable, "flag_values") ||
            !stericol_cf_text_of(variable, "flag_meanings") || variable->rank < 2)
            continue;
        if (standard_name && strcmp(standard_name, "region") == 0) {
            *count = 1;
            return variable;
        }
        found = variable;
        ++*count;
    }
    return found;
}

/* Values as numbers, from an attribute of numbers or, as some files have it, a text of numbers. */
static size_t read_flags(const stericol_cf_variable *variable, double flags[MOST_FLAGS])
{
    const stericol_cf_attribute *values = stericol_cf_attribute_of(variable, "flag_values");
    size_t count = 0;
    if (!values->text) {
        for (size_t i = 0; i < values->count && count < MOST_FLAGS; i++)
            flags[count++] = values->numbers[i];
        return values->count > MOST_FLAGS ? 0 : count;
    }
    const char *rest = values->text;
    while (count < MOST_FLAGS) {
        rest += strspn(rest, " \t,");
        const size_t length = strcspn(rest, " \t,b");
        if (!length)
            break;
        char *word = stericol_copy_bytes(rest, length);
        const bool number = word && stericol_parse_number(word, &flags[count]);
        free(word);
        if (!number)
            return 0;
        count++;
        rest += length + strspn(rest + length, "b");
    }
    return count;
}

static stericol_status read_names(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                                  size_t flags, unsigned char code[MOST_FLAGS], stericol_input_mask *mask)
{
    const char *rest = stericol_cf_text_of(variable, "flag_meanings");
    size_t count = 0;
    mask->names = stericol_new_array(flags, sizeof *mask->names);
    if (!mask->names)
        return stericol_fail_memory(reader->context, 0, "the names of the regions");
    for (; count < flags; count++) {
        rest += strspn(rest, " \t\n\r");
        const size_t length = strcspn(rest, " \t\n\r");
        if (!length)
            break;
        char *name = stericol_copy_bytes(rest, length);
        rest += length;
        if (!name)
            return stericol_fail_memory(reader->context, 0, "the names of the regions");
        code[count] = 0;
        if (is_no_region(name)) {
            free(name);
            continue;
        }
        for (size_t i = 0; i < mask->count; i++)
            if (strcmp(mask->names[i], name) == 0)
                code[count] = (unsigned char)(i + 1); /* two flags of one name are one region */
        if (code[count]) {
            free(name);
            continue;
        }
        mask->names[mask->count++] = name;
        code[count] = (unsigned char)mask->count;
    }
    rest += strspn(rest, " \t\n\r");
    if (count < flags || *rest)
        return stericol_input_refuse(reader, variable->name, "give one meaning for each flag",
                                     "flag_values has %zu entries, flag_meanings has another number", flags);
    return STERICOL_OK;
}

static stericol_status fill(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                            const stericol_grid *grid, const double *flags, const unsigned char *code,
                            size_t count, stericol_input_mask *mask)
{
    const size_t points = grid->rows * grid->columns;
    double *values = stericol_new_doubles(points);
    int row, column;
    stericol_status status = STERICOL_OK;
    mask->index = stericol_new_array(points, 1);
    if (!values || !mask->index)
        status = stericol_fail_memory(reader->context, points * sizeof *values, "the mask");
    if (status == STERICOL_OK)
        status = stericol_input_plane_axes(reader, variable, grid, &row, &column);
    if (status == STERICOL_OK)
        status = stericol_input_check_positions(reader, variable, grid);
    if (status == STERICOL_OK)
        status = stericol_input_read_plane(reader->context, reader->file, variable, row, column, values);
    for (size_t i = 0; i < points && status == STERICOL_OK; i++) {
        size_t flag = 0;
        if (isnan(values[i]))
            continue;
        while (flag < count && !(fabs(flags[flag] - values[i]) < 0.5))
            flag++;
        if (flag < count)
            mask->index[i] = code[flag];
        else if (fabs(values[i]) > 0.5)
            status = stericol_input_refuse(reader, variable->name,
                                           "add the value to flag_values and flag_meanings",
                                           "the value %.6g is none of its flag_values", values[i]);
    }
    free(values);
    return status;
}

/* Positions are compared, so units are needed for that alone. */
static stericol_status read(const stericol_input_reader *reader, const stericol_grid *grid,
                            stericol_input_mask *mask)
{
    double flags[MOST_FLAGS];
    unsigned char code[MOST_FLAGS];
    size_t candidates;
    const stericol_cf_variable *variable = find_variable(reader, &candidates);
    if (candidates != 1)
        return stericol_input_refuse(
            reader, NULL, "give a file with one mask, or with standard_name region at the one that counts",
            "%zu variables with flag_values and flag_meanings where one is needed", candidates);
    const size_t count = read_flags(variable, flags);
    if (!count)
        return stericol_input_refuse(reader, variable->name, "correct the attribute",
                                     "flag_values holds no numbers, or more than %d", MOST_FLAGS);
    stericol_status status = read_names(reader, variable, count, code, mask);
    if (status == STERICOL_OK)
        status = fill(reader, variable, grid, flags, code, count, mask);
    return status;
}

stericol_status stericol_input_mask_read(stericol_context *context, const char *path,
                                         const stericol_grid *grid, stericol_input_mask *mask)
{
    stericol_cf_units *units = NULL;
    stericol_input_reader reader = {.context = context};
    *mask = (stericol_input_mask){0};
    stericol_status status = stericol_cf_units_new(context, &units);
    reader.units = units;
    if (status == STERICOL_OK)
        status = stericol_cf_open(context, path, &reader.file);
    if (status == STERICOL_OK)
        status = read(&reader, grid, mask);
    stericol_cf_close(reader.file);
    stericol_cf_units_free(units);
    if (status != STERICOL_OK)
        stericol_input_mask_free(mask);
    return status;
}
