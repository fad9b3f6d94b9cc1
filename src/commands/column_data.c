/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The working for spreadsheets and programs: names as in the result file, SI units (pressure in dbar),
 * numbers that read back the same.
 */
#include "commands/column_inside.h"

#include <jansson.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

enum { MOST_CELLS = 24, NUMBER_ROOM = 32 };

/* One number of a row.  `level`: it belongs to a level, and is missing in sums. */
typedef struct cell {
    const char *name, *unit;
    bool level;
    double value;
} cell;

/* What a row is: its word, and the state of its layer or the flag of the column. */
typedef struct record {
    const char *row, *state;
    size_t count;
    cell cells[MOST_CELLS];
} record;

static void put(record *r, bool level, const char *name, const char *unit, double value)
{
    r->cells[r->count++] = (cell){name, unit, level, value};
}

/* ---- filling ---- */

static void put_water(record *r, const stericol_working *w, const stericol_working_row *row)
{
    const bool practical = w->levels->water.equation == STERICOL_EQUATION_EOS80;
    const char *const salinity[] = {"earlier_absolute_salinity", "later_absolute_salinity",
                                    "earlier_practical_salinity", "later_practical_salinity"};
    const char *const temperature[] = {"earlier_conservative_temperature", "later_conservative_temperature",
                                       "earlier_potential_temperature", "later_potential_temperature"};
    const char *const volume[] = {"earlier_specific_volume", "later_specific_volume"};
    const char *const salinity_unit = practical ? "1" : "g kg-1";

    for (size_t e = 0; e < 2 && !w->levels->single; e++) {
        put(r, true, salinity[(practical ? 2 : 0) + e], salinity_unit, row->salinity[e]);
        put(r, true, temperature[(practical ? 2 : 0) + e], "degree_Celsius", row->temperature[e]);
        put(r, true, volume[e], "m3 kg-1", row->volume[e]);
    }
    if (w->levels->single) {
        put(r, true, practical ? "practical_salinity" : "absolute_salinity", salinity_unit, row->salinity[1]);
        put(r, true, practical ? "potential_temperature" : "conservative_temperature", "degree_Celsius",
            row->temperature[1]);
        put(r, true, "specific_volume", "m3 kg-1", row->volume[1]);
        put(r, true, "standard_specific_volume", "m3 kg-1", row->volume[0]);
        put(r, true, "specific_volume_anomaly", "m3 kg-1", row->volume[1] - row->volume[0]);
    }
    put(r, true, "thermal_expansion", "K-1", row->expansion);
    put(r, true, "haline_contraction", practical ? "1" : "kg g-1", row->contraction);
}

static void put_sums(record *r, const stericol_working *w, const double *value)
{
    if (w->levels->single) {
        put(r, false, "geopotential_anomaly", "m2 s-2",
            stericol_working_geopotential(w, value[STERICOL_COLUMN_TOTAL]));
        put(r, false, "steric_height", "m", value[STERICOL_COLUMN_TOTAL]);
        put(r, false, "integrated_depth", "m", value[STERICOL_COLUMN_DEPTH]);
        return;
    }
    put(r, false, "steric_height_change", "m", value[STERICOL_COLUMN_TOTAL]);
    put(r, false, "thermosteric_height_change", "m", value[STERICOL_COLUMN_THERMOSTERIC]);
    put(r, false, "halosteric_height_change", "m", value[STERICOL_COLUMN_HALOSTERIC]);
    if (w->options->attribution != STERICOL_ATTRIBUTION_SYMMETRIC)
        put(r, false, "attribution_remainder", "m", value[STERICOL_COLUMN_REMAINDER]);
    put(r, false, "heat_content_change", "J m-2", value[STERICOL_COLUMN_HEAT]);
    put(r, false, "expansion_efficiency", "m3 J-1", value[STERICOL_COLUMN_EFFICIENCY]);
    put(r, false, "mean_thermal_expansion", "K-1", value[STERICOL_COLUMN_EXPANSION]);
    put(r, false, "integrated_depth", "m", value[STERICOL_COLUMN_DEPTH]);
}

/*
 * A level: its water, and the sums down to the next one.  `above` is the geopotential anomaly from the top
 * down to this row, `whole` that of all rows.
 */
static void fill_level(record *r, const stericol_working *w, size_t number, double above, double whole)
{
    static const char *const words[] = {"level", "limit", "carried"};
    const stericol_working_row *row = &w->rows[number];
    const bool inside = row->depth >= w->top && row->depth <= w->reached + 1e-6;

    *r = (record){.row = words[row->kind], .state = ""};
    put(r, false, "upper_depth", "m", row->depth);
    put(r, false, "lower_depth", "m", number + 1 < w->row_count ? w->rows[number + 1].depth : (double)NAN);
    put(r, true, "pressure", "dbar", row->pressure);
    put_water(r, w, row);
    put_sums(r, w, row->part);
    if (w->levels->single) {
        put(r, true, "geopotential_anomaly_above", "m2 s-2", inside ? above : (double)NAN);
        put(r, true, "geopotential_anomaly_below", "m2 s-2", inside ? whole - above : (double)NAN);
    }
}

/* A layer, or the whole column: the cells of a level, those of its water missing. */
static void fill_sum(record *r, const stericol_working *w, size_t layer)
{
    static const char *const words[] = {"incomplete", "complete", "below_sea_floor"};
    const stericol_working_sum *sum = &w->sums[layer];
    const bool whole = layer == w->layer_count;

    fill_level(r, w, 0, 0.0, 0.0);
    for (size_t i = 0; i < r->count; i++)
        r->cells[i].value = (double)NAN;
    r->row = whole ? "column" : "layer";
    r->state = whole ? stericol_column_flag_word(w->flag) : words[sum->state];
    r->cells[0].value = whole ? w->top : sum->upper;
    r->cells[1].value = whole || !isfinite(sum->lower) ? w->reached : sum->lower;
    const size_t tail = w->levels->single ? 2 : 0;
    record sums = {.count = 0};

    put_sums(&sums, w, sum->value);
    for (size_t i = 0; i < sums.count; i++)
        r->cells[r->count - tail - sums.count + i].value = sums.cells[i].value;
}

static double part_geopotential(const stericol_working *w, size_t row)
{
    const double part = w->rows[row].part[STERICOL_COLUMN_TOTAL];

    return isfinite(part) ? stericol_working_geopotential(w, part) : 0.0;
}

static double whole_geopotential(const stericol_working *w)
{
    double whole = 0.0;

    for (size_t i = 0; i < w->row_count; i++)
        whole += part_geopotential(w, i);
    return whole;
}

/* ---- CSV ---- */

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

static void add_record(stericol_text *text, const record *r)
{
    stericol_text_format(text, "%s,%s", r->row, r->state);
    for (size_t i = 0; i < r->count; i++) {
        char number[NUMBER_ROOM] = "";

        if (isfinite(r->cells[i].value))
            shortest(r->cells[i].value, number);
        stericol_text_format(text, ",%s", number);
    }
    stericol_text_add(text, "\r\n");
}

void stericol_working_csv(const stericol_working *w, stericol_text *text)
{
    const double whole = whole_geopotential(w);
    double above = 0.0;
    record r;

    fill_level(&r, w, 0, 0.0, 0.0);
    stericol_text_add(text, "row,state");
    for (size_t i = 0; i < r.count; i++)
        stericol_text_format(text, ",%s [%s]", r.cells[i].name, r.cells[i].unit);
    stericol_text_add(text, "\r\n");
    for (size_t i = 0; i < w->row_count && !text->failed; i++) {
        fill_level(&r, w, i, above, whole);
        add_record(text, &r);
        above += part_geopotential(w, i);
    }
    for (size_t k = 0; k <= w->layer_count; k++) {
        fill_sum(&r, w, k);
        add_record(text, &r);
    }
}

/* ---- JSON ---- */

static json_t *number_or_null(double value)
{
    return isfinite(value) ? json_real(value) : json_null();
}

/* NULL where memory is out. */
static json_t *json_record(const record *r, bool with_levels)
{
    json_t *made = json_object();
    bool failed = json_object_set_new(made, "row", json_string(r->row)) != 0;

    if (r->state[0] != '\0')
        failed = json_object_set_new(made, "state", json_string(r->state)) != 0 || failed;
    for (size_t i = 0; i < r->count; i++)
        if (with_levels || !r->cells[i].level)
            failed =
                json_object_set_new(made, r->cells[i].name, number_or_null(r->cells[i].value)) != 0 || failed;
    if (!failed)
        return made;
    json_decref(made);
    return NULL;
}

static json_t *json_units(const record *r)
{
    json_t *made = json_object();
    bool failed = made == NULL;

    for (size_t i = 0; i < r->count; i++)
        failed = json_object_set_new(made, r->cells[i].name, json_string(r->cells[i].unit)) != 0 || failed;
    if (!failed)
        return made;
    json_decref(made);
    return NULL;
}

static json_t *json_levels(const stericol_working *w)
{
    const double whole = whole_geopotential(w);
    json_t *list = json_array();
    bool failed = list == NULL;
    double above = 0.0;
    record r;

    for (size_t i = 0; i < w->row_count && !failed; i++) {
        fill_level(&r, w, i, above, whole);
        failed = json_array_append_new(list, json_record(&r, true)) != 0;
        above += part_geopotential(w, i);
    }
    if (!failed)
        return list;
    json_decref(list);
    return NULL;
}

static json_t *json_sums(const stericol_working *w, json_t **column)
{
    json_t *list = json_array();
    bool failed = list == NULL;
    record r;

    for (size_t k = 0; k < w->layer_count && !failed; k++) {
        fill_sum(&r, w, k);
        failed = json_array_append_new(list, json_record(&r, false)) != 0;
    }
    fill_sum(&r, w, w->layer_count);
    *column = json_record(&r, false);
    if (!failed)
        return list;
    json_decref(list);
    return NULL;
}

stericol_status stericol_working_json(stericol_context *context, const stericol_working *w,
                                      stericol_text *text)
{
    json_t *whole = json_object(), *column, *sums = json_sums(w, &column);
    bool failed = whole == NULL;
    char *written;
    record r;

    fill_level(&r, w, 0, 0.0, 0.0);
    failed =
        json_object_set_new(whole, "equation", json_string(stericol_working_equation_word(w))) != 0 || failed;
    failed = json_object_set_new(whole, "latitude", json_real(w->levels->latitude)) != 0 || failed;
    failed =
        json_object_set_new(
            whole, "coordinate",
            json_string(w->levels->coordinate == STERICOL_COORDINATE_PRESSURE ? "pressure" : "depth")) != 0 ||
        failed;
    failed = json_object_set_new(whole, "units", json_units(&r)) != 0 || failed;
    failed = json_object_set_new(whole, "levels", json_levels(w)) != 0 || failed;
    failed = json_object_set_new(whole, "layers", sums) != 0 || failed;
    failed = json_object_set_new(whole, "column", column) != 0 || failed;
    written = failed ? NULL : json_dumps(whole, JSON_INDENT(2));
    json_decref(whole);
    if (written == NULL)
        return stericol_fail_memory(context, 0, "the working");
    stericol_text_add(text, written);
    stericol_text_add(text, "\n");
    free(written);
    return STERICOL_OK;
}
