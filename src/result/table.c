/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "result/table.h"

#include "base/checked.h"
#include "result/names.h"

#include <jansson.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { NUMBER_ROOM = 32 };

void stericol_table_row_clear(stericol_table_row *row)
{
    for (size_t i = 0; i < STERICOL_REGION_QUANTITY_COUNT; i++)
        row->values[i] = (double)NAN;
}

static stericol_status finish(stericol_context *context, const stericol_text *text)
{
    return text->failed ? stericol_fail_memory(context, 0, "the table of regions") : STERICOL_OK;
}

/* ---- for people ---- */

/* Columns of numbers; `name` stands over `unit`. */
typedef enum column {
    COVERED,
    STERIC,
    THERMOSTERIC,
    HALOSTERIC,
    VOLUME,
    HEAT,
    SEA_LEVEL,
    EFFICIENCY,
    COLUMNS
} column;

static const struct {
    const char *name, *unit;
    stericol_region_quantity quantity;
    double scale; /* shown = value * scale */
    bool powers;  /* as 1.234e+12 */
} heads[COLUMNS] = {
    [COVERED] = {"covered", "%", STERICOL_REGION_COVERED_AREA, 100.0, false},
    [STERIC] = {"steric", "mm", STERICOL_REGION_MEAN_STERIC, 1e3, false},
    [THERMOSTERIC] = {"thermo-", "mm", STERICOL_REGION_MEAN_THERMOSTERIC, 1e3, false},
    [HALOSTERIC] = {"halo-", "mm", STERICOL_REGION_MEAN_HALOSTERIC, 1e3, false},
    [VOLUME] = {"volume", "m3", STERICOL_REGION_VOLUME_STERIC, 1.0, true},
    [HEAT] = {"heat", "ZJ", STERICOL_REGION_HEAT, 1e-21, false},
    [SEA_LEVEL] = {"equiv.", "mm", STERICOL_REGION_SEA_LEVEL, 1e3, false},
    [EFFICIENCY] = {"ratio", "m/YJ", STERICOL_REGION_EFFICIENCY, 1.0, false},
};

/* Gaps of two blanks, or of one where a line would be longer than MOST_LINE; a test holds the widest table
 * against that. */
enum { MOST_LINE = 100, MOST_NAME = 20, MOST_DECIMALS = 6, DIGITS = 4 };

typedef struct table_plan {
    bool layers, shown[COLUMNS];
    int decimals[COLUMNS];
    size_t name_width, layer_width, width[COLUMNS], gap;
} table_plan;

static double shown_value(const stericol_table_row *row, column which)
{
    double value = row->values[heads[which].quantity];

    if (which == COVERED)
        value /= row->values[STERICOL_REGION_AREA];
    /* Without salinity there is no total: the volume is that of heat alone. */
    if (which == VOLUME && isnan(value))
        value = row->values[STERICOL_REGION_VOLUME_THERMOSTERIC];
    return value * heads[which].scale;
}

/* Characters as a terminal counts them, near enough: bytes that start a character of UTF-8. */
static size_t width_of(const char *text)
{
    size_t width = 0;

    for (; *text != '\0'; text++)
        width += ((unsigned char)*text & 0xC0U) != 0x80U;
    return width;
}

/* Blank when missing; a value of which the column's decimals would leave less than two digits keeps those. */
static void show_number(const table_plan *plan, column which, double value, char text[NUMBER_ROOM])
{
    const int decimals = plan->decimals[which];

    if (!isfinite(value))
        text[0] = '\0';
    else if (heads[which].powers)
        snprintf(text, NUMBER_ROOM, "%.3e", value);
    else if (fabs(value) > 0.0 && fabs(value) < pow(10.0, 1 - decimals))
        snprintf(text, NUMBER_ROOM, "%.2g", value);
    else if (fabs(value) >= 1e7)
        snprintf(text, NUMBER_ROOM, "%.2e", value);
    else
        snprintf(text, NUMBER_ROOM, "%.*f", decimals, fabs(value) > 0.0 ? value : 0.0);
}

/* The largest value of a column gets DIGITS digits; the points of a column stand below each other. */
static int decimals_for(double largest)
{
    const double before = largest > 0.0 ? floor(log10(largest)) + 1.0 : 1.0;

    return (int)fmax(0.0, fmin(MOST_DECIMALS, DIGITS - before));
}

static size_t larger(size_t a, size_t b)
{
    return a > b ? a : b;
}

static void plan_column(const stericol_table_row *rows, size_t count, column which, table_plan *plan)
{
    double largest = 0.0;

    plan->width[which] = larger(strlen(heads[which].name), strlen(heads[which].unit));
    for (size_t i = 0; i < count; i++) {
        const double value = shown_value(&rows[i], which);

        plan->shown[which] = plan->shown[which] || isfinite(value);
        if (isfinite(value))
            largest = fmax(largest, fabs(value));
    }
    plan->decimals[which] = which == COVERED ? 1 : decimals_for(largest);
    for (size_t i = 0; i < count; i++) {
        char number[NUMBER_ROOM];

        show_number(plan, which, shown_value(&rows[i], which), number);
        plan->width[which] = larger(plan->width[which], strlen(number));
    }
}

static void plan_gap(table_plan *plan)
{
    size_t line = plan->name_width + (plan->layers ? 2 + plan->layer_width : 0);

    for (column which = 0; which < COLUMNS; which++)
        if (plan->shown[which])
            line += 2 + plan->width[which];
    plan->gap = line <= MOST_LINE ? 2 : 1;
}

static void add_blanks(stericol_text *text, size_t count)
{
    while (count-- > 0)
        stericol_text_add(text, " ");
}

static void add_left(stericol_text *text, const char *cell, size_t width)
{
    stericol_text_add(text, cell);
    add_blanks(text, width > width_of(cell) ? width - width_of(cell) : 0);
}

static void add_right(stericol_text *text, const char *cell, size_t gap, size_t width)
{
    add_blanks(text, gap + (width > width_of(cell) ? width - width_of(cell) : 0));
    stericol_text_add(text, cell);
}

/* Blanks at the end of a line help nobody. */
static void end_line(stericol_text *text)
{
    while (text->length > 0 && text->bytes[text->length - 1] == ' ')
        text->bytes[--text->length] = '\0';
    stericol_text_add(text, "\n");
}

static void add_heading(stericol_text *text, const table_plan *plan, bool units)
{
    add_left(text, units ? "" : "region", plan->name_width);
    if (plan->layers)
        add_right(text, units ? "m" : "layer", plan->gap, plan->layer_width);
    for (column which = 0; which < COLUMNS; which++)
        if (plan->shown[which])
            add_right(text, units ? heads[which].unit : heads[which].name, plan->gap, plan->width[which]);
    end_line(text);
}

/* A name too long for its column has a line to itself. */
static void add_row(stericol_text *text, const table_plan *plan, const stericol_table_row *row,
                    const char *name)
{
    if (width_of(name) > plan->name_width) {
        stericol_text_add(text, name);
        stericol_text_add(text, "\n");
        name = "";
    }
    add_left(text, name, plan->name_width);
    if (plan->layers)
        add_right(text, row->layer == NULL ? "all" : row->layer, plan->gap, plan->layer_width);
    for (column which = 0; which < COLUMNS; which++) {
        char number[NUMBER_ROOM];

        if (!plan->shown[which])
            continue;
        show_number(plan, which, shown_value(row, which), number);
        add_right(text, number, plan->gap, plan->width[which]);
    }
    end_line(text);
}

stericol_status stericol_table_text(stericol_context *context, const stericol_table_row *rows, size_t count,
                                    stericol_text *text)
{
    table_plan plan = {.name_width = strlen("region"), .layer_width = strlen("layer")};
    stericol_text name = {0};

    for (size_t i = 0; i < count; i++) {
        stericol_text_clear(&name);
        stericol_text_add_printable(&name, rows[i].region);
        if (width_of(stericol_text_string(&name)) <= MOST_NAME)
            plan.name_width = larger(plan.name_width, width_of(stericol_text_string(&name)));
        if (rows[i].layer != NULL) {
            plan.layers = true;
            plan.layer_width = larger(plan.layer_width, width_of(rows[i].layer));
        }
    }
    for (column which = 0; which < COLUMNS; which++)
        plan_column(rows, count, which, &plan);
    plan_gap(&plan);
    add_heading(text, &plan, false);
    add_heading(text, &plan, true);
    for (size_t i = 0; i < count && !text->failed; i++) {
        stericol_text_clear(&name);
        stericol_text_add_printable(&name, rows[i].region);
        add_row(text, &plan, &rows[i], stericol_text_string(&name));
    }
    text->failed = text->failed || name.failed;
    stericol_text_free(&name);
    return finish(context, text);
}

/* ---- for spreadsheets ---- */

/* The shortest decimal that reads back as the same double. */
static void shortest(double value, char text[NUMBER_ROOM])
{
    for (int digits = 15; digits <= 17; digits++) {
        snprintf(text, NUMBER_ROOM, "%.*g", digits, value);
        const double back = strtod(text, NULL);

        if (back >= value && back <= value)
            return;
    }
}

static void add_field(stericol_text *text, const char *field)
{
    if (strpbrk(field, ",\"\r\n") == NULL) {
        stericol_text_add(text, field);
        return;
    }
    stericol_text_add(text, "\"");
    for (; *field != '\0'; field++) {
        if (*field == '"')
            stericol_text_add(text, "\"");
        stericol_text_add_bytes(text, field, 1);
    }
    stericol_text_add(text, "\"");
}

stericol_status stericol_table_csv(stericol_context *context, const stericol_table_row *rows, size_t count,
                                   stericol_text *text)
{
    stericol_text_add(text, "region_name,layer [m]");
    for (int i = 0; i < STERICOL_REGION_QUANTITY_COUNT; i++) {
        const stericol_result_entry *entry = stericol_region_entry((stericol_region_quantity)i);

        stericol_text_format(text, ",region_%s [%s]", entry->name, entry->unit);
    }
    stericol_text_add(text, "\r\n");
    for (size_t row = 0; row < count && !text->failed; row++) {
        add_field(text, rows[row].region);
        stericol_text_add(text, ",");
        add_field(text, rows[row].layer == NULL ? "" : rows[row].layer);
        for (int i = 0; i < STERICOL_REGION_QUANTITY_COUNT; i++) {
            char number[NUMBER_ROOM] = "";

            if (isfinite(rows[row].values[i]))
                shortest(rows[row].values[i], number);
            stericol_text_add(text, ",");
            stericol_text_add(text, number);
        }
        stericol_text_add(text, "\r\n");
    }
    return finish(context, text);
}

/* ---- for programs ---- */

/* Jansson takes no text that is not UTF-8. */
static json_t *json_words(const char *words)
{
    stericol_text printable = {0};
    json_t *made = json_string(words);

    if (made != NULL)
        return made;
    stericol_text_add_printable(&printable, words);
    made = printable.failed ? NULL : json_string(stericol_text_string(&printable));
    stericol_text_free(&printable);
    return made;
}

static json_t *json_row(const stericol_table_row *row)
{
    json_t *made = json_object();
    bool failed = json_object_set_new(made, "region_name", json_words(row->region)) != 0;

    failed =
        json_object_set_new(made, "layer", row->layer == NULL ? json_null() : json_words(row->layer)) != 0 ||
        failed;
    for (int i = 0; i < STERICOL_REGION_QUANTITY_COUNT; i++) {
        const double value = row->values[i];
        char key[64];

        snprintf(key, sizeof key, "region_%s", stericol_region_entry((stericol_region_quantity)i)->name);
        failed =
            json_object_set_new(made, key, isfinite(value) ? json_real(value) : json_null()) != 0 || failed;
    }
    if (!failed)
        return made;
    json_decref(made);
    return NULL;
}

static json_t *json_units(void)
{
    json_t *made = json_object();
    bool failed = json_object_set_new(made, "layer", json_string("m")) != 0;

    for (int i = 0; i < STERICOL_REGION_QUANTITY_COUNT; i++) {
        const stericol_result_entry *entry = stericol_region_entry((stericol_region_quantity)i);
        char key[64];

        snprintf(key, sizeof key, "region_%s", entry->name);
        failed = json_object_set_new(made, key, json_string(entry->unit)) != 0 || failed;
    }
    if (!failed)
        return made;
    json_decref(made);
    return NULL;
}

stericol_status stericol_table_json(stericol_context *context, const stericol_table_row *rows, size_t count,
                                    stericol_text *text)
{
    json_t *whole = json_object(), *list = json_array();
    bool failed = json_object_set_new(whole, "units", json_units()) != 0;
    char *written;

    for (size_t i = 0; i < count && !failed; i++)
        failed = json_array_append_new(list, json_row(&rows[i])) != 0;
    failed = json_object_set_new(whole, "regions", list) != 0 || failed;
    written = failed ? NULL : json_dumps(whole, JSON_INDENT(2));
    json_decref(whole);
    if (written == NULL)
        return stericol_fail_memory(context, 0, "the table of regions");
    stericol_text_add(text, written);
    stericol_text_add(text, "\n");
    free(written);
    return finish(context, text);
}
