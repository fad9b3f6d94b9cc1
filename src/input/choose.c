/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Which variable is the temperature, which the salinity, and in what unit.
 */
#include "input/room.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Plausible sea water, after conversion (degC; practical or g/kg). */
static const double lowest[STERICOL_INPUT_QUANTITIES] = {-4.0, 0.0};
static const double highest[STERICOL_INPUT_QUANTITIES] = {45.0, 45.0};
static const char *const targets[STERICOL_INPUT_QUANTITIES] = {"degree_Celsius", "1e-3"};

/* Anomalies of absolute salinity reach 0.09 g/kg in the Baltic and 0.03 in the open sea (McDougall et al.
 * 2012). */
static const double most_anomaly = 1.0;

void stericol_input_variable_clear(stericol_input_variable *variable)
{
    free(variable->name);
    free(variable->unit);
    free(variable->standard_name);
    free(variable->reason);
    *variable = (stericol_input_variable){0};
}

static bool has_level(const stericol_input_reader *reader, const stericol_cf_variable *variable)
{
    stericol_input_roles roles;
    if (variable->rank > STERICOL_CF_MOST_RANK)
        return false;
    stericol_input_find_roles(reader, variable, &roles);
    for (size_t i = 0; i < variable->rank; i++)
        if (roles.sign[i].role == STERICOL_INPUT_LEVEL)
            return true;
    return false;
}

static void add_name(stericol_text *text, const stericol_cf_variable *variable)
{
    if (text->length)
        stericol_text_add(text, ", ");
    stericol_text_add_printable(text, variable->name);
}

void stericol_input_list_candidates(const stericol_input_reader *reader, stericol_input_quantity quantity,
                                    stericol_text *text)
{
    enum { MOST = 12 };
    const size_t count = stericol_cf_variable_count(reader->file);
    size_t listed = 0;
    /* What looks right first; else anything with three dimensions; else anything at all. */
    for (int round = 0; round < 3 && !listed; round++) {
        for (size_t i = 0; i < count && listed < MOST; i++) {
            const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
            const bool wanted = round == 0
                                    ? stericol_input_recognise(quantity, reader->file, variable).strength > 0
                                    : variable->rank >= (round == 1 ? 3u : 1u);
            if (wanted) {
                add_name(text, variable);
                listed++;
            }
        }
    }
    if (!listed)
        stericol_text_add(text, "nothing");
    else if (listed == MOST)
        stericol_text_add(text, ", ...");
}

static int wanted_kind(const stericol_input_reader *reader, stericol_input_quantity quantity)
{
    return quantity == STERICOL_INPUT_TEMPERATURE ? (int)reader->request->temperature_kind
                                                  : (int)reader->request->salinity_kind;
}

static const char *wanted_name(const stericol_input_reader *reader, stericol_input_quantity quantity)
{
    return quantity == STERICOL_INPUT_TEMPERATURE ? reader->request->temperature : reader->request->salinity;
}

/* The best candidates; `count` of them with the same strength, `first` the first; `flat` one without levels.
 */
typedef struct candidates {
    const stericol_cf_variable *first, *flat;
    stericol_input_finding finding;
    size_t count;
    stericol_text names;
} candidates;

static void rank(const stericol_input_reader *reader, stericol_input_quantity quantity, int kind,
                 candidates *ranking)
{
    for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
        const stericol_input_finding finding = stericol_input_recognise(quantity, reader->file, variable);
        if (!finding.strength || finding.strength < ranking->finding.strength ||
            (kind && finding.kind != kind))
            continue;
        if (!has_level(reader, variable)) {
            if (!ranking->flat)
                ranking->flat = variable;
            continue;
        }
        if (finding.strength > ranking->finding.strength) {
            ranking->count = 0;
            ranking->finding = finding;
            ranking->first = variable;
            stericol_text_clear(&ranking->names);
        }
        ranking->count++;
        add_name(&ranking->names, variable);
    }
}

static stericol_status pick_by_itself(const stericol_input_reader *reader, stericol_input_quantity quantity,
                                      const stericol_cf_variable **found, stericol_input_finding *finding)
{
    const char *what = stericol_input_quantity_name[quantity];
    stericol_status status = STERICOL_OK;
    candidates best = {0};
    rank(reader, quantity, STERICOL_TEMPERATURE_UNKNOWN, &best);
    if (best.count > 1 && wanted_kind(reader, quantity)) {
        candidates narrowed = {0};
        rank(reader, quantity, wanted_kind(reader, quantity), &narrowed);
        if (narrowed.count == 1) {
            stericol_text_free(&best.names);
            best = narrowed;
        } else {
            stericol_text_free(&narrowed.names);
        }
    }
    if (best.count > 1) {
        stericol_text remedy = {0};
        stericol_text_format(&remedy, "name one with --%s", what);
        status = stericol_input_refuse(reader, NULL, stericol_text_string(&remedy),
                                       "%zu variables could be the %s (%s)", best.count, what,
                                       stericol_text_string(&best.names));
        stericol_text_free(&remedy);
    } else if (!best.count && best.flat) {
        status = stericol_input_refuse_shape(reader, best.flat->name, "give a file with levels",
                                             "has no vertical dimension, so it holds no columns");
    }
    *found = status == STERICOL_OK ? best.first : NULL;
    *finding = best.finding;
    stericol_text_free(&best.names);
    return status;
}

/* The only variable with levels that could be a field: an anomaly has no name of its own. */
static stericol_status pick_only_field(const stericol_input_reader *reader,
                                       const stericol_cf_variable **found, stericol_input_finding *finding)
{
    candidates all = {0};
    stericol_status status = STERICOL_OK;
    for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
        if (variable->rank < 3 || !stericol_input_is_field(reader->file, variable) ||
            !has_level(reader, variable))
            continue;
        all.first = variable;
        all.count++;
        add_name(&all.names, variable);
    }
    if (all.count > 1)
        status = stericol_input_refuse(reader, NULL, "give a file that holds the anomaly alone",
                                       "%zu variables could be the salinity anomaly (%s)", all.count,
                                       stericol_text_string(&all.names));
    *found = status == STERICOL_OK ? all.first : NULL;
    *finding = (stericol_input_finding){8, STERICOL_SALINITY_ABSOLUTE, false, "the only field of the file"};
    stericol_text_free(&all.names);
    return status;
}

/* The unit: given, missing, or wrong. */
static stericol_status read_unit(const stericol_input_reader *reader, stericol_input_quantity quantity,
                                 const stericol_cf_variable *variable, stericol_input_variable *chosen)
{
    const char *unit = chosen->unit;
    stericol_cf_conversion *conversion = &chosen->conversion;
    *conversion = (stericol_cf_conversion){1.0, 0.0, lowest[quantity], highest[quantity]};
    if (reader->request->salinity_anomaly) {
        conversion->low = -most_anomaly;
        conversion->high = most_anomaly;
    }
    if (!unit && stericol_cf_attribute_of(variable, "units"))
        return stericol_input_refuse(reader, variable->name, "correct the units attribute, or remove it",
                                     "the units attribute is no text");
    if (!unit || !unit[strspn(unit, " \t")]) {
        chosen->unit_assumed = true;
        stericol_input_say(reader, STERICOL_WARNING, variable->name,
                           "no units; taken as %s as long as every value allows it",
                           quantity == STERICOL_INPUT_TEMPERATURE        ? "degrees Celsius"
                           : chosen->kind == STERICOL_SALINITY_PRACTICAL ? "practical salinity"
                                                                         : "g/kg");
        return STERICOL_OK;
    }
    const stericol_cf_quantity measures = stericol_cf_units_quantity(reader->units, unit);
    const stericol_cf_quantity wanted = quantity == STERICOL_INPUT_TEMPERATURE
                                            ? STERICOL_CF_QUANTITY_TEMPERATURE
                                            : STERICOL_CF_QUANTITY_SALINITY;
    if (measures == STERICOL_CF_QUANTITY_UNKNOWN)
        return stericol_input_refuse(reader, variable->name, "correct the units attribute, or remove it",
                                     "the unit \"%s\" is not known", unit);
    if (measures != wanted || !stericol_cf_units_convert(reader->units, unit, targets[quantity],
                                                         &conversion->scale, &conversion->offset))
        return stericol_input_refuse(
            reader, variable->name, "correct the units attribute, or name another variable",
            "the unit \"%s\" is not one of %s", unit, stericol_input_quantity_name[quantity]);
    return STERICOL_OK;
}

static bool means_grams(const char *unit)
{
    return unit && (strstr(unit, "kg") || strstr(unit, "KG"));
}

/* Says how the kind came about, and settles what the user has said. */
static void settle_kind(const stericol_input_reader *reader, stericol_input_quantity quantity,
                        const stericol_cf_variable *variable, stericol_input_variable *chosen)
{
    const int asked = wanted_kind(reader, quantity);
    const char *what = stericol_input_quantity_name[quantity];
    const char *option = quantity == STERICOL_INPUT_TEMPERATURE ? "--temperature-kind" : "--salinity-kind";
    if (asked) {
        if (chosen->kind != asked)
            stericol_input_say(reader, STERICOL_NOTE, variable->name, "taken as %s as %s says, not as %s",
                               stericol_input_kind_text(quantity, asked), option,
                               stericol_input_kind_text(quantity, chosen->kind));
        chosen->kind = asked;
        chosen->kind_assumed = false;
        return;
    }
    const char *kind = stericol_input_kind_text(quantity, chosen->kind);
    const char *standard_name = chosen->standard_name;
    if (standard_name && strcmp(standard_name, "sea_water_preformed_salinity") == 0)
        stericol_input_say(reader, STERICOL_WARNING, variable->name,
                           "preformed salinity is taken as reference salinity");
    else if (standard_name && strcmp(standard_name, "sea_water_salinity") == 0 && means_grams(chosen->unit))
        stericol_input_say(reader, STERICOL_WARNING, variable->name,
                           "sea_water_salinity in \"%s\" can be practical or absolute salinity; taken as "
                           "practical salinity (%s says otherwise)",
                           chosen->unit, option);
    else if (chosen->kind_assumed)
        stericol_input_say(reader, STERICOL_NOTE, variable->name,
                           "the file does not say which kind of %s this is; taken as %s (%s says otherwise)",
                           what, kind, option);
    /* A long name that says otherwise is no better evidence than a standard name, but worth a look. */
    const stericol_cf_variable *same = variable;
    const char *long_name = stericol_cf_text_of(same, "long_name");
    if (quantity == STERICOL_INPUT_TEMPERATURE && chosen->kind == STERICOL_TEMPERATURE_IN_SITU && long_name &&
        (strstr(long_name, "otential") || strstr(long_name, "onservative")))
        stericol_input_say(reader, STERICOL_WARNING, variable->name,
                           "standard_name says in situ temperature but long_name \"%s\" does not; the "
                           "standard_name is believed (%s says otherwise)",
                           long_name, option);
}

static stericol_status fill(const stericol_input_reader *reader, stericol_input_quantity quantity,
                            const stericol_cf_variable *variable, const stericol_input_finding *finding,
                            bool by_user, stericol_input_variable *chosen)
{
    const char *unit = stericol_cf_text_of(variable, "units");
    const char *standard_name = stericol_cf_text_of(variable, "standard_name");
    chosen->name = stericol_copy_string(variable->name);
    chosen->unit = stericol_copy_string(unit);
    chosen->standard_name = stericol_copy_string(standard_name);
    chosen->reason = stericol_copy_string(by_user ? "named by the user" : finding->reason);
    if (!chosen->name || !chosen->reason || (unit && !chosen->unit) ||
        (standard_name && !chosen->standard_name))
        return stericol_fail_memory(reader->context, 0, "the names of the variables");
    chosen->kind = finding->kind;
    chosen->kind_assumed = finding->kind_assumed;
    if (!finding->strength) {
        chosen->kind = quantity == STERICOL_INPUT_TEMPERATURE ? (int)STERICOL_TEMPERATURE_IN_SITU
                                                              : (int)STERICOL_SALINITY_PRACTICAL;
        chosen->kind_assumed = true;
    }
    if (!by_user && finding->strength < 8)
        stericol_input_say(reader, STERICOL_NOTE, variable->name,
                           "recognised as %s by %s, for want of a standard_name",
                           stericol_input_quantity_name[quantity], finding->reason);
    if (reader->request->salinity_anomaly) { /* it is what it was asked for as */
        chosen->kind = STERICOL_SALINITY_ABSOLUTE;
        chosen->kind_assumed = false;
    } else {
        settle_kind(reader, quantity, variable, chosen);
    }
    const stericol_status status = read_unit(reader, quantity, variable, chosen);
    chosen->present = status == STERICOL_OK;
    return status;
}

stericol_status stericol_input_choose(const stericol_input_reader *reader, stericol_input_quantity quantity,
                                      stericol_input_variable *chosen, const stericol_cf_variable **found)
{
    const char *name = wanted_name(reader, quantity);
    stericol_input_finding finding = {0};
    stericol_status status = STERICOL_OK;
    *chosen = (stericol_input_variable){0};
    if (name) {
        *found = stericol_cf_find(reader->file, name, NULL);
        if (*found)
            finding = stericol_input_kind_of(quantity, *found);
    } else if (reader->request->salinity_anomaly) {
        status = pick_only_field(reader, found, &finding);
    } else {
        status = pick_by_itself(reader, quantity, found, &finding);
    }
    if (status == STERICOL_OK && *found)
        status = fill(reader, quantity, *found, &finding, name != NULL, chosen);
    if (status != STERICOL_OK) {
        stericol_input_variable_clear(chosen);
        *found = NULL;
    }
    return status;
}
