/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/column_inside.h"

#include "base/checked.h"
#include "input/table.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Physical limits of design.md, section 4, and the deepest water there is, with room. */
static const double least_temperature = -4.0, most_temperature = 45.0, most_salinity = 45.0;
static const double deepest = 12000.0; /* m or dbar */
/* Levels closer than this cannot be told apart once depth has become pressure. */
static const double least_spacing = 1e-5; /* m or dbar */

/* Names that columns go by; common practice, no source.  The longest are CF standard names. */
static const char *const depth_names[] = {"depth", "z", "dep", "depth_below_surface", NULL};
static const char *const pressure_names[] = {
    "pressure", "p", "pres", "press", "prs", "prdm", "sea_pressure", "sea_water_pressure", NULL};
static const char *const conservative_names[] = {"ct", "conservative_temperature",
                                                 "sea_water_conservative_temperature", "\xCE\x98", NULL};
static const char *const potential_names[] = {
    "theta",  "potential_temperature",           "pot_temp", "ptemp", "potemp",
    "thetao", "sea_water_potential_temperature", "\xCE\xB8", NULL};
static const char *const in_situ_names[] = {"in_situ_temperature", "insitu_temperature", "t_in_situ",
                                            "temperature_in_situ", NULL};
static const char *const bare_temperature_names[] = {"temperature", "temp", "t", "sea_water_temperature",
                                                     NULL};
static const char *const absolute_names[] = {"sa", "absolute_salinity", "sea_water_absolute_salinity", NULL};
static const char *const reference_names[] = {"sr", "reference_salinity", "sea_water_reference_salinity",
                                              NULL};
static const char *const practical_names[] = {"sp", "practical_salinity", "psal",
                                              "sea_water_practical_salinity", NULL};
static const char *const bare_salinity_names[] = {"salinity", "sal", "s", "salt", "sea_water_salinity", NULL};

typedef struct kind_names {
    int kind;
    bool assumed; /* the name does not say the kind */
    const char *const *names;
} kind_names;

/* One quantity: what its columns may be called. */
typedef struct quantity_names {
    const char *word, *option, *examples;
    const char *unit; /* as UDUNITS-2 spells it */
    kind_names kinds[4];
} quantity_names;

static const quantity_names temperature_quantity = {
    "temperature",
    "--temperature-kind",
    "temperature (in situ), theta or potential_temperature, ct or conservative_temperature",
    "degree_Celsius",
    {{STERICOL_TEMPERATURE_CONSERVATIVE, false, conservative_names},
     {STERICOL_TEMPERATURE_POTENTIAL, false, potential_names},
     {STERICOL_TEMPERATURE_IN_SITU, false, in_situ_names},
     {STERICOL_TEMPERATURE_IN_SITU, true, bare_temperature_names}}};
static const quantity_names salinity_quantity = {
    "salinity",
    "--salinity-kind",
    "salinity or practical_salinity, reference_salinity, sa or absolute_salinity",
    "g/kg",
    {{STERICOL_SALINITY_ABSOLUTE, false, absolute_names},
     {STERICOL_SALINITY_REFERENCE, false, reference_names},
     {STERICOL_SALINITY_PRACTICAL, false, practical_names},
     {STERICOL_SALINITY_PRACTICAL, true, bare_salinity_names}}};

/* What is needed throughout. */
typedef struct reading {
    stericol_context *context;
    const stericol_cf_units *units;
    const stericol_text_table *text;
    const char *vertical_unit; /* --vertical-unit, or NULL */
    double latitude;
} reading;

typedef struct choice {
    size_t column;
    int kind;
    bool assumed;
} choice;

/* ---- which columns ---- */

/* The kind of a column; false where it is none of this quantity. */
static bool recognise(const reading *r, const quantity_names *quantity, size_t column, choice *found)
{
    for (size_t k = 0; k < sizeof quantity->kinds / sizeof *quantity->kinds; k++)
        if (stericol_text_table_is(r->text, r->units, column, quantity->kinds[k].names)) {
            *found = (choice){column, quantity->kinds[k].kind, quantity->kinds[k].assumed};
            return true;
        }
    return false;
}

static stericol_status refuse_choice(const reading *r, const quantity_names *quantity, const choice *first,
                                     const choice *second)
{
    const char *const path = stericol_text_table_path(r->text);
    stericol_text remedy = {0};
    stericol_status status;

    if (first == NULL) {
        stericol_text_format(&remedy, "name it %s", quantity->examples);
        status = stericol_fail(r->context, STERICOL_INPUT, path, NULL, stericol_text_string(&remedy),
                               "has no column of %s", quantity->word);
    } else {
        stericol_text_format(&remedy, "say which kind to take with %s, or take one out", quantity->option);
        status = stericol_fail(r->context, STERICOL_INPUT, path, NULL, stericol_text_string(&remedy),
                               "has two columns of %s, '%s' and '%s'", quantity->word,
                               stericol_text_table_name(r->text, first->column),
                               stericol_text_table_name(r->text, second->column));
    }
    stericol_text_free(&remedy);
    return status;
}

/*
 * The column of a quantity.  `asked` is the kind that an option names, 0 for none: it picks among several
 * columns, and overrides what the name of a single one says.
 */
static stericol_status choose_column(const reading *r, const quantity_names *quantity, int asked,
                                     choice *chosen)
{
    choice found[2] = {{0}}, fitting = {0}, one;
    size_t count = 0, fits = 0;

    for (size_t c = 0; c < stericol_text_table_columns(r->text); c++) {
        if (!recognise(r, quantity, c, &one))
            continue;
        if (count < 2)
            found[count] = one;
        count++;
        if (asked != 0 && one.kind == asked) {
            fitting = one;
            fits++;
        }
    }
    if (count == 0)
        return refuse_choice(r, quantity, NULL, NULL);
    if (count > 1 && fits != 1)
        return refuse_choice(r, quantity, &found[0], &found[1]);
    *chosen = count == 1 ? found[0] : fitting;
    if (asked != 0) {
        chosen->kind = asked;
        chosen->assumed = false;
    }
    return STERICOL_OK;
}

/* A salinity in g/kg that does not say its kind has two answers. */
static stericol_status check_salinity(const reading *r, const choice *chosen)
{
    const char *unit = stericol_text_table_unit(r->text, r->units, chosen->column);

    if (!chosen->assumed || unit == NULL || strstr(unit, "kg") == NULL)
        return STERICOL_OK;
    return stericol_fail(r->context, STERICOL_INPUT, stericol_text_table_path(r->text),
                         stericol_text_table_name(r->text, chosen->column),
                         "say which with --salinity-kind, or name it absolute_salinity or "
                         "reference_salinity",
                         "is in %s, so it may be absolute or reference salinity", unit);
}

/* The column of depth or pressure, and which of them it is. */
static stericol_status choose_vertical(const reading *r, size_t *column, stericol_coordinate *coordinate)
{
    const char *const path = stericol_text_table_path(r->text);
    const size_t depth = stericol_text_table_find(r->text, r->units, 0, depth_names);
    const size_t pressure = stericol_text_table_find(r->text, r->units, 0, pressure_names);
    const bool asked_depth = r->vertical_unit != NULL && strcmp(r->vertical_unit, "m") == 0;
    const bool both = depth != STERICOL_TEXT_TABLE_NONE && pressure != STERICOL_TEXT_TABLE_NONE;
    const char *unit;
    stericol_cf_quantity quantity;

    if (depth == STERICOL_TEXT_TABLE_NONE && pressure == STERICOL_TEXT_TABLE_NONE)
        return stericol_fail(r->context, STERICOL_INPUT, path, NULL, "name it depth or pressure",
                             "has no column of depth or pressure");
    *column =
        both ? (asked_depth ? depth : pressure) : (depth != STERICOL_TEXT_TABLE_NONE ? depth : pressure);
    if (both && r->vertical_unit == NULL)
        stericol_notice(r->context, STERICOL_NOTE, path, NULL,
                        "has depth and pressure: pressure is taken (--vertical-unit m takes depth)");
    unit = stericol_text_table_unit(r->text, r->units, *column);
    quantity = stericol_cf_units_quantity(r->units, unit);
    if (quantity == STERICOL_CF_QUANTITY_LENGTH || quantity == STERICOL_CF_QUANTITY_PRESSURE)
        *coordinate = quantity == STERICOL_CF_QUANTITY_LENGTH ? STERICOL_COORDINATE_DEPTH
                                                              : STERICOL_COORDINATE_PRESSURE;
    else if (r->vertical_unit != NULL)
        *coordinate = asked_depth ? STERICOL_COORDINATE_DEPTH : STERICOL_COORDINATE_PRESSURE;
    else
        *coordinate = *column == depth ? STERICOL_COORDINATE_DEPTH : STERICOL_COORDINATE_PRESSURE;
    if (r->vertical_unit != NULL && asked_depth != (*coordinate == STERICOL_COORDINATE_DEPTH))
        return stericol_fail(r->context, STERICOL_INPUT, path, stericol_text_table_name(r->text, *column),
                             "leave --vertical-unit out, or correct the header",
                             "is in %s by its header, but --vertical-unit says %s", unit, r->vertical_unit);
    return STERICOL_OK;
}

/* ---- their values ---- */

static stericol_status read_vertical(const reading *r, size_t column, stericol_coordinate coordinate,
                                     double *values)
{
    const bool is_depth = coordinate == STERICOL_COORDINATE_DEPTH;
    const char *const unit = is_depth ? "m" : "dbar";
    stericol_status status =
        stericol_text_table_numbers(r->context, r->text, r->units, column, unit, false, values);

    for (size_t i = 0; i < stericol_text_table_rows(r->text) && status == STERICOL_OK; i++) {
        if (isnan(values[i]))
            status = stericol_text_table_refuse(r->context, r->text, i, column,
                                                "give it, or take the row out", "there is no value");
        else if (values[i] < 0.0)
            status =
                stericol_text_table_refuse(r->context, r->text, i, column,
                                           is_depth ? "write depths as positive numbers, 0 at the surface"
                                                    : "write sea pressures, 0 at the surface",
                                           "%g %s lies above the surface", values[i], unit);
        else if (values[i] > deepest)
            status = stericol_text_table_refuse(r->context, r->text, i, column,
                                                "check the unit, and name it in the header",
                                                "%g %s is deeper than any sea", values[i], unit);
        else if (i > 0 && !(values[i] - values[i - 1] >= least_spacing))
            status = stericol_text_table_refuse(
                r->context, r->text, i, column, "order the rows from the surface down, each level once",
                "%g %s does not lie below the row before (%g %s)", values[i], unit, values[i - 1], unit);
    }
    return status;
}

static stericol_status read_values(const reading *r, size_t column, bool is_temperature, double *values)
{
    const double low = is_temperature ? least_temperature : 0.0;
    const double high = is_temperature ? most_temperature : most_salinity;
    const char *const unit = is_temperature ? temperature_quantity.unit : salinity_quantity.unit;
    stericol_status status =
        stericol_text_table_numbers(r->context, r->text, r->units, column, unit, false, values);

    for (size_t i = 0; i < stericol_text_table_rows(r->text) && status == STERICOL_OK; i++)
        if (values[i] < low || values[i] > high)
            status = stericol_text_table_refuse(
                r->context, r->text, i, column,
                is_temperature && values[i] > 250.0 && values[i] < 320.0
                    ? "if it is kelvin, name the unit in the header: temperature [K]"
                    : "check the column and its unit; write NA where there is no value",
                "%g%s is not within %g..%g", values[i], is_temperature ? " degC" : "", low, high);
    return status;
}

/* Depth and pressure of every row, whichever was given. */
static void complete_vertical(const reading *r, stericol_working_table *table)
{
    if (table->coordinate == STERICOL_COORDINATE_DEPTH)
        stericol_sea_pressure_array(r->latitude, table->count, table->depth, table->pressure);
    else
        stericol_depth_array(r->latitude, table->count, table->pressure, table->depth);
}

static stericol_status fill_table(const reading *r, size_t vertical, const choice *temperature,
                                  const choice *salinity, stericol_working_table *table)
{
    double *all;
    stericol_status status;

    table->count = stericol_text_table_rows(r->text);
    all = stericol_new_array(4 * table->count, sizeof *all);
    table->path = stericol_copy_string(stericol_text_table_path(r->text));
    table->temperature_name = stericol_copy_string(stericol_text_table_name(r->text, temperature->column));
    table->salinity_name = stericol_copy_string(stericol_text_table_name(r->text, salinity->column));
    table->depth = all;
    if (all == NULL || table->path == NULL || table->temperature_name == NULL || table->salinity_name == NULL)
        return stericol_fail_memory(r->context, 0, "a text table");
    table->pressure = all + table->count;
    table->salinity = all + 2 * table->count;
    table->temperature = all + 3 * table->count;
    status = read_vertical(r, vertical, table->coordinate,
                           table->coordinate == STERICOL_COORDINATE_DEPTH ? table->depth : table->pressure);
    if (status == STERICOL_OK)
        status = read_values(r, temperature->column, true, table->temperature);
    if (status == STERICOL_OK)
        status = read_values(r, salinity->column, false, table->salinity);
    if (status == STERICOL_OK) {
        complete_vertical(r, table);
        stericol_state_convert(&table->rule, 0.0, table->pressure, table->count, NULL, table->salinity,
                               table->temperature);
    }
    return status;
}

static void tell(const reading *r, const stericol_working_table *table)
{
    stericol_notice(r->context, STERICOL_NOTE, table->path, table->temperature_name, "%s%s%s",
                    stericol_state_temperature_words(&table->rule),
                    table->rule.ipts68 ? ", given on IPTS-68" : "",
                    table->temperature_assumed ? " (the kind is assumed; see --temperature-kind)" : "");
    stericol_notice(r->context, STERICOL_NOTE, table->path, table->salinity_name, "%s%s",
                    stericol_state_salinity_words(&table->rule, false),
                    table->salinity_assumed ? " (the kind is assumed; see --salinity-kind)" : "");
}

/* The position of a choice among its words, plus one, which is the kind's enumerator; 0 where none is given.
 */
static int asked_kind(const stericol_session *session, const char *option)
{
    return stericol_settings_is_set(session->settings, option)
               ? (int)stericol_settings_choice(session->settings, option) + 1
               : 0;
}

stericol_status stericol_working_table_read(stericol_session *session, const char *label,
                                            const stericol_water *water, double latitude,
                                            stericol_working_table *table)
{
    const char *const scale = stericol_settings_text(session->settings, "temperature-scale");
    reading r = {.context = session->context,
                 .units = session->units,
                 .vertical_unit = stericol_settings_text(session->settings, "vertical-unit"),
                 .latitude = latitude};
    choice temperature, salinity;
    stericol_text_table *text;
    size_t vertical = 0;
    stericol_status status =
        stericol_text_table_read(session->context, stericol_settings_text(session->settings, label), &text);

    *table = (stericol_working_table){0};
    r.text = text;
    if (status == STERICOL_OK)
        status = choose_vertical(&r, &vertical, &table->coordinate);
    if (status == STERICOL_OK)
        status =
            choose_column(&r, &temperature_quantity, asked_kind(session, "temperature-kind"), &temperature);
    if (status == STERICOL_OK)
        status = choose_column(&r, &salinity_quantity, asked_kind(session, "salinity-kind"), &salinity);
    if (status == STERICOL_OK)
        status = check_salinity(&r, &salinity);
    if (status == STERICOL_OK) {
        table->rule = (stericol_state_rule){.water = *water,
                                            .temperature = (stericol_temperature_kind)temperature.kind,
                                            .salinity = (stericol_salinity_kind)salinity.kind,
                                            .ipts68 = strcmp(scale, "ipts68") == 0};
        table->temperature_assumed = temperature.assumed;
        table->salinity_assumed = salinity.assumed;
        status = fill_table(&r, vertical, &temperature, &salinity, table);
    }
    if (status == STERICOL_OK)
        tell(&r, table);
    else
        stericol_working_table_free(table);
    stericol_text_table_free(text);
    return status;
}

void stericol_working_table_free(stericol_working_table *table)
{
    free(table->path);
    free(table->temperature_name);
    free(table->salinity_name);
    free(table->depth);
    *table = (stericol_working_table){0};
}
