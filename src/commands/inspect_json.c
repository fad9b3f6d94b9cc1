/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/inspect_inside.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/*
 * Members are added with json_object_set_new(), which takes a NULL value (memory out, or a text that is not
 * UTF-8) for a failure; `failed` remembers it, so that it is looked at once.
 */
typedef struct making {
    json_t *object;
    bool failed;
} making;

static making begin(void)
{
    json_t *object = json_object();

    return (making){object, object == NULL};
}

static void put(making *made, const char *key, json_t *value)
{
    made->failed = json_object_set_new(made->object, key, value) != 0 || made->failed;
}

static json_t *finish(making *made)
{
    if (!made->failed)
        return made->object;
    json_decref(made->object);
    return NULL;
}

/* Texts of files as they are shown, escaped where they are not UTF-8; null for none. */
static json_t *words(const char *text)
{
    stericol_text printable = {0};
    json_t *made;

    if (text == NULL)
        return json_null();
    stericol_text_add_printable(&printable, text);
    made = printable.failed ? NULL : json_string(stericol_text_string(&printable));
    stericol_text_free(&printable);
    return made;
}

static json_t *number(double value)
{
    return isfinite(value) ? json_real(value) : json_null();
}

/* Jansson writes every number with the same count of digits: with all that any double may need. */
static void add_shortest(stericol_text *text, const char *token, size_t length)
{
    enum { SURE = 15, ENOUGH = 17, ROOM = 40 };
    char written[ROOM];
    double value;

    if (length >= ROOM || memchr(token, '.', length) == NULL) {
        stericol_text_add_bytes(text, token, length); /* a whole number, or one with few digits */
        return;
    }
    memcpy(written, token, length);
    written[length] = '\0';
    value = strtod(written, NULL);
    for (int digits = SURE; digits < ENOUGH; digits++) {
        char shorter[ROOM];
        double again;

        snprintf(shorter, sizeof shorter, "%.*g", digits, value);
        again = strtod(shorter, NULL);
        if (again >= value && again <= value) {
            stericol_text_add(text, shorter);
            /* It stays a number with a fraction, as it was. */
            if (strpbrk(shorter, ".e") == NULL)
                stericol_text_add(text, ".0");
            return;
        }
    }
    stericol_text_add_bytes(text, token, length);
}

void stericol_inspect_write_json(const json_t *document, stericol_text *text)
{
    char *written = document == NULL ? NULL : json_dumps(document, JSON_INDENT(2));
    bool quoted = false;

    text->failed = text->failed || written == NULL;
    for (const char *c = written; c != NULL && *c != '\0';) {
        size_t length = quoted ? 0 : strspn(c, "+-.0123456789eE");

        /* Outside texts only numbers begin so; "e" alone is part of true and false. */
        if (length > 0 && (*c == '-' || (*c >= '0' && *c <= '9'))) {
            add_shortest(text, c, length);
            c += length;
            continue;
        }
        if (quoted && *c == '\\') {
            stericol_text_add_bytes(text, c, 2);
            c += 2;
            continue;
        }
        quoted = *c == '"' ? !quoted : quoted;
        stericol_text_add_bytes(text, c++, 1);
    }
    free(written);
}

static json_t *whole(unsigned long long value)
{
    return json_integer((json_int_t)value);
}

static json_t *pair(double a, double b)
{
    return json_pack("[o, o]", number(a), number(b));
}

/* ---- the file ---- */

static json_t *dimensions_of(const stericol_cf_file *file)
{
    json_t *list = json_array();
    bool failed = false;

    for (size_t i = 0; i < stericol_cf_dimension_count(file); i++) {
        const stericol_cf_dimension *dimension = stericol_cf_dimension_at(file, i);
        making made = begin();

        put(&made, "name", words(dimension->name));
        put(&made, "length", whole(dimension->length));
        put(&made, "unlimited", json_boolean(dimension->unlimited));
        failed = json_array_append_new(list, finish(&made)) != 0 || failed;
    }
    if (!failed)
        return list;
    json_decref(list);
    return NULL;
}

static json_t *variable_of(const stericol_inspection *inspection, const stericol_cf_variable *variable)
{
    making made = begin();
    json_t *dimensions = json_array(), *chunks = variable->chunked ? json_array() : json_null();

    for (size_t i = 0; i < variable->rank && i < STERICOL_CF_MOST_RANK; i++) {
        made.failed =
            json_array_append_new(
                dimensions,
                words(stericol_cf_dimension_at(inspection->file, variable->dimension[i])->name)) != 0 ||
            made.failed;
        if (variable->chunked)
            made.failed = json_array_append_new(chunks, whole(variable->chunk[i])) != 0 || made.failed;
    }
    put(&made, "name", words(variable->name));
    put(&made, "dimensions", dimensions);
    put(&made, "type", json_string(stericol_inspect_type_word(variable->type)));
    put(&made, "units", words(stericol_cf_text_of(variable, "units")));
    put(&made, "standard_name", words(stericol_cf_text_of(variable, "standard_name")));
    put(&made, "packed", json_boolean(stericol_inspect_is_packed(variable)));
    put(&made, "chunks", chunks);
    put(&made, "compressed", json_boolean(variable->compressed));
    put(&made, "role", words(stericol_inspect_role(inspection, variable)));
    return finish(&made);
}

static json_t *variables_of(const stericol_inspection *inspection)
{
    json_t *list = json_array();
    bool failed = false;

    for (size_t i = 0; i < stericol_cf_variable_count(inspection->file); i++)
        failed = json_array_append_new(
                     list, variable_of(inspection, stericol_cf_variable_at(inspection->file, i))) != 0 ||
                 failed;
    if (!failed)
        return list;
    json_decref(list);
    return NULL;
}

static void put_file(making *made, const stericol_inspection *inspection)
{
    const stericol_cf_file *file = inspection->file;

    put(made, "format", json_string(stericol_cf_format(file)));
    put(made, "bytes", whole(stericol_cf_identity_of(file).bytes));
    put(made, "conventions", words(stericol_cf_global_text(file, "Conventions")));
    put(made, "title", words(stericol_cf_global_text(file, "title")));
    put(made, "dimensions", dimensions_of(file));
    put(made, "variables", variables_of(inspection));
}

/* ---- how it would be read ---- */

static json_t *quantity_of(const stericol_inspection *inspection, stericol_inspect_quantity quantity)
{
    stericol_epoch_variable chosen;
    making made;

    if (!inspection->reads[quantity])
        return json_null();
    chosen = stericol_inspect_chosen(inspection, quantity);
    made = begin();
    put(&made, "file", words(chosen.file));
    put(&made, "name", words(chosen.name));
    put(&made, "units", words(chosen.unit));
    put(&made, "units_assumed", json_boolean(chosen.unit_assumed));
    put(&made, "units_read", json_string(stericol_inspect_unit_word(inspection, quantity)));
    put(&made, "standard_name", words(chosen.standard_name));
    put(&made, "recognised_by", words(chosen.reason));
    put(&made, "kind", json_string(stericol_inspect_kind_word(quantity, chosen.kind)));
    put(&made, "kind_assumed", json_boolean(chosen.kind_assumed));
    return finish(&made);
}

static json_t *vertical_of(const stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_axes *axes = &inspection->axes;
    bool cells = grid->level_bounds != NULL || grid->own_depths;
    making made = begin();

    put(&made, "name", words(grid->level_name));
    put(&made, "coordinate", json_string(stericol_inspect_coordinate_word(inspection)));
    put(&made, "units", words(axes->level_unit));
    put(&made, "units_read", json_string(grid->vertical == STERICOL_VERTICAL_PRESSURE ? "dbar" : "m"));
    put(&made, "positive", words(axes->level_positive));
    put(&made, "levels", whole(grid->levels));
    put(&made, "first", grid->own_depths ? json_null() : number(grid->level[0]));
    put(&made, "last", grid->own_depths ? json_null() : number(grid->level[grid->levels - 1]));
    put(&made, "bounds", json_boolean(grid->level_bounds != NULL));
    put(&made, "upward", json_boolean(axes->level_upward));
    put(&made, "vertical", json_string(cells ? "cells" : "linear"));
    return finish(&made);
}

static json_t *range_of(const double *values, size_t count)
{
    double low = NAN, high = NAN;

    for (size_t i = 0; i < count; i++) {
        low = fmin(low, values[i]);
        high = fmax(high, values[i]);
    }
    return pair(low, high);
}

static json_t *horizontal_of(const stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_axes *axes = &inspection->axes;
    size_t points = grid->rows * grid->columns;
    making made = begin();

    put(&made, "grid", json_string(grid->curvilinear ? "curvilinear" : "regular"));
    put(&made, "rows", whole(grid->rows));
    put(&made, "columns", whole(grid->columns));
    put(&made, "latitude_name", words(grid->latitude_name));
    put(&made, "longitude_name", words(grid->longitude_name));
    put(&made, "latitude", range_of(grid->latitude, grid->curvilinear ? points : grid->rows));
    put(&made, "longitude", range_of(grid->longitude, grid->curvilinear ? points : grid->columns));
    put(&made, "latitude_spacing", pair(axes->spacing[0][0], axes->spacing[0][1]));
    put(&made, "longitude_spacing", pair(axes->spacing[1][0], axes->spacing[1][1]));
    put(&made, "cyclic", json_boolean(axes->cyclic));
    put(&made, "bounds", json_boolean(grid->latitude_bounds != NULL && grid->longitude_bounds != NULL));
    put(&made, "cell_area", words(stericol_inspect_area_words(grid)));
    return finish(&made);
}

static json_t *times_of(const stericol_inspection *inspection)
{
    const stericol_epoch_member **members = stericol_inspect_members(inspection->epoch);
    size_t count = stericol_epoch_member_count(inspection->epoch), months[12];
    json_t *holes = json_array(), *by_month = json_array();
    making made = begin();

    made.failed = made.failed || members == NULL;
    for (size_t i = 0; members != NULL && i + 1 < count; i++)
        if (stericol_inspect_hole_after(members, i))
            made.failed = json_array_append_new(
                              holes, json_pack("[s, s]", members[i]->text, members[i + 1]->text)) != 0 ||
                          made.failed;
    stericol_epoch_months(inspection->epoch, months);
    for (size_t m = 0; m < 12; m++)
        made.failed = json_array_append_new(by_month, whole(months[m])) != 0 || made.failed;
    put(&made, "count", whole(count));
    put(&made, "description", words(stericol_epoch_description(inspection->epoch)));
    put(&made, "calendar", words(inspection->axes.calendar));
    put(&made, "first", words(stericol_epoch_first_date(inspection->epoch)));
    put(&made, "last", words(stericol_epoch_last_date(inspection->epoch)));
    put(&made, "step_days",
        number(members == NULL ? (double)NAN : stericol_inspect_time_step(members, count)));
    put(&made, "months", by_month);
    put(&made, "holes", holes);
    free(members);
    return finish(&made);
}

static json_t *reading_of(const stericol_inspection *inspection)
{
    making made;

    if (inspection->epoch == NULL)
        return json_null();
    made = begin();
    put(&made, "temperature", quantity_of(inspection, STERICOL_INSPECT_TEMPERATURE));
    put(&made, "salinity", quantity_of(inspection, STERICOL_INSPECT_SALINITY));
    put(&made, "vertical", vertical_of(inspection));
    put(&made, "horizontal", horizontal_of(inspection));
    put(&made, "times", times_of(inspection));
    return finish(&made);
}

/* ---- values ---- */

static json_t *level_range(const stericol_inspect_range *range)
{
    making made = begin();

    put(&made, "values", whole(range->valid));
    put(&made, "minimum", number(range->low));
    put(&made, "mean_of_cells", number(range->mean));
    put(&made, "maximum", number(range->high));
    put(&made, "below", whole(range->below));
    put(&made, "above", whole(range->above));
    put(&made, "refused", json_boolean(range->refused));
    return finish(&made);
}

static json_t *level_of(const stericol_inspection *inspection, size_t k)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_level *level = &inspection->values.levels[k];
    making made = begin();

    put(&made, "level", whole(k + 1));
    put(&made, grid->vertical == STERICOL_VERTICAL_PRESSURE ? "pressure" : "depth",
        grid->own_depths ? json_null() : number(grid->level[k]));
    put(&made, "columns", whole(level->columns));
    put(&made, "below_freezing", whole(level->frozen));
    put(&made, "share", number((double)level->columns / (double)inspection->values.cells));
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
        put(&made, stericol_inspect_quantity_name((stericol_inspect_quantity)q),
            inspection->reads[q] ? level_range(&level->range[q]) : json_null());
    put(&made, "zeros", whole(level->zeros));
    put(&made, "land_as_zeros", json_boolean(level->land_as_zeros));
    put(&made, "ends", whole(level->ends));
    return finish(&made);
}

static json_t *values_of(const stericol_inspection *inspection)
{
    const stericol_inspect_values *values = &inspection->values;
    json_t *levels;
    size_t count;
    making made;

    if (inspection->epoch == NULL || values->levels == NULL)
        return json_null();
    made = begin();
    levels = json_array();
    count = stericol_epoch_grid(inspection->epoch)->levels;
    for (size_t k = 0; k < count; k++)
        made.failed = json_array_append_new(levels, level_of(inspection, k)) != 0 || made.failed;
    put(&made, "times", whole(values->members));
    put(&made, "time", values->members == 1 ? words(values->first) : json_null());
    put(&made, "cells", whole(values->cells));
    put(&made, "columns", whole(values->columns));
    put(&made, "surface_coverage", number((double)values->levels[0].columns / (double)values->cells));
    put(&made, "sea_floor", whole(values->columns - values->levels[count - 1].ends));
    put(&made, "end_of_data", whole(values->levels[count - 1].ends));
    put(&made, "columns_with_holes", whole(values->broken));
    put(&made, "columns_without_surface", whole(values->late));
    put(&made, "levels", levels);
    return finish(&made);
}

/* ---- all ---- */

static json_t *lines_of(const stericol_inspect_lines *lines, const char *key)
{
    json_t *list = json_array();
    bool failed = false;

    for (size_t i = 0; i < lines->count; i++) {
        making made = begin();

        put(&made, key, words(lines->items[i].word));
        put(&made, "text", words(lines->items[i].text));
        failed = json_array_append_new(list, finish(&made)) != 0 || failed;
    }
    if (!failed)
        return list;
    json_decref(list);
    return NULL;
}

static json_t *texts_of(const stericol_inspect_lines *lines)
{
    json_t *list = json_array();
    bool failed = false;

    for (size_t i = 0; i < lines->count; i++)
        failed = json_array_append_new(list, words(lines->items[i].text)) != 0 || failed;
    if (!failed)
        return list;
    json_decref(list);
    return NULL;
}

json_t *stericol_inspect_json(const stericol_inspection *inspection)
{
    making made = begin();

    if (inspection->path != NULL) {
        put(&made, "file", words(inspection->path));
        if (inspection->file != NULL)
            put_file(&made, inspection);
    }
    put(&made, "reading", reading_of(inspection));
    put(&made, "assumptions", lines_of(&inspection->assumptions, "level"));
    put(&made, "values", values_of(inspection));
    put(&made, "suspects", lines_of(&inspection->suspects, "what"));
    put(&made, "suggestions", lines_of(&inspection->suggestions, "option"));
    put(&made, "conditions", lines_of(&inspection->conditions, "what"));
    put(&made, "refused", texts_of(&inspection->refusals));
    return finish(&made);
}
