/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/publish_inside.h"

#include "base/checked.h"
#include "result/provenance.h"
#include "result/table.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

/* ---- warnings ---- */

static size_t whole_region(const stericol_publication *publication)
{
    return publication->region_count - 1; /* the whole domain, or the last that was asked for */
}

/* Where the data end, m: the lower limit of the last level, or its position; nominal where depths differ. */
static double deepest_of_data(const stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    bool cells = setup->pair.column.vertical == STERICOL_VERTICAL_CELLS && grid->level_bounds != NULL;
    double last = cells ? grid->level_bounds[2 * grid->levels - 1] : grid->level[grid->levels - 1];

    return grid->vertical == STERICOL_VERTICAL_PRESSURE ? stericol_depth(last, 45.0) : last;
}

static void warn_of_ends(stericol_session *session, const stericol_publication *publication)
{
    const stericol_pair_outcome *outcome = &publication->outcome;
    size_t data = 0;

    for (int flag = 0; flag < STERICOL_COLUMN_FLAGS; flag++)
        if (flag != STERICOL_COLUMN_NO_DATA)
            data += outcome->flags[flag];
    stericol_session_say(
        session,
        "%zu of %zu columns with data are used; they end: %zu complete, %zu at the sea floor, %zu with "
        "the data, %zu unequal, %zu at a gap, %zu outside limits",
        outcome->used, data, outcome->flags[STERICOL_COLUMN_COMPLETE],
        outcome->flags[STERICOL_COLUMN_SEA_FLOOR], outcome->flags[STERICOL_COLUMN_END_OF_DATA],
        outcome->flags[STERICOL_COLUMN_UNEQUAL], outcome->flags[STERICOL_COLUMN_GAP],
        outcome->flags[STERICOL_COLUMN_OUTSIDE_RANGE]);
    if (outcome->flags[STERICOL_COLUMN_END_OF_DATA] > 0)
        stericol_session_warn(session,
                              "%zu columns end with the data (deepest level %g m), not at the sea floor: "
                              "what lies below is not "
                              "in the result",
                              outcome->flags[STERICOL_COLUMN_END_OF_DATA],
                              deepest_of_data(publication->setup));
    if (outcome->flags[STERICOL_COLUMN_UNEQUAL] > 0)
        stericol_session_warn(
            session, "%zu columns reach deeper in one epoch than in the other: only the common depth counts",
            outcome->flags[STERICOL_COLUMN_UNEQUAL]);
    if (outcome->flags[STERICOL_COLUMN_GAP] > 0)
        stericol_session_warn(session, "%zu columns end at a gap wider than --gap-reach",
                              outcome->flags[STERICOL_COLUMN_GAP]);
}

static void warn_of_values(stericol_session *session, const stericol_publication *publication)
{
    const stericol_pair_outcome *outcome = &publication->outcome;

    if (outcome->rejected > 0.0)
        stericol_session_warn(
            session, "%.0f values lie outside -4..45 degC or a salinity of 0..45 and were taken as missing",
            outcome->rejected);
    if (outcome->outside_equation > 0)
        stericol_session_warn(
            session,
            "%zu values lie outside the range that the equation of state was made for; they were used",
            outcome->outside_equation);
    if (outcome->land_zero_levels > 0)
        stericol_session_warn(
            session,
            "on %zu levels a tenth of the cells or more hold T = 0 and S = 0: taken as land written as "
            "zeros",
            outcome->land_zero_levels);
    if (outcome->readings > 1)
        stericol_session_say(
            session, "some levels hold single zeros that are water: everything was read a second time");
}

/* For the log; only what the user can do something about is said aloud. */
static void tell_plan(stericol_session *session, const stericol_pair_plan *plan)
{
    stericol_log_write(session->log, STERICOL_LOG_INFO, "plan", "how the grid was cut",
                       (stericol_log_field[]){stericol_log_whole("tile_rows", (long long)plan->rows),
                                              stericol_log_whole("slab_levels", (long long)plan->levels),
                                              stericol_log_number("inflations", plan->inflations)},
                       3);
    if (plan->inflations > 1.0)
        stericol_session_say(
            session,
            "the memory allowed is less than the files' chunks want: chunks were inflated up to "
            "%.0f times; a larger --memory is faster",
            plan->inflations);
}

/* "0..700", "2000..bottom" */
enum { LAYER_ROOM = 64 };

static void name_layer(const stericol_layer *layer, char name[LAYER_ROOM])
{
    if (isfinite(layer->lower))
        snprintf(name, LAYER_ROOM, "%.10g..%.10g", layer->upper, layer->lower);
    else
        snprintf(name, LAYER_ROOM, "%.10g..bottom", layer->upper);
}

/* A layer that no column fills: the others stand, and its row is blank. */
static void tell_empty_layers(stericol_session *session, const stericol_publication *publication)
{
    size_t layers = publication->outcome.layers;

    for (size_t layer = 0; layer < layers; layer++) {
        bool filled = false;
        char name[LAYER_ROOM];

        for (size_t r = 0; r < publication->region_count && !filled; r++)
            filled =
                publication->outcome.sums[publication->chosen[r] * (layers + 1) + layer].covered_area > 0.0;
        name_layer(&publication->setup->layers[layer], name);
        if (!filled)
            stericol_session_warn(
                session, "the layer %s is complete in no column of any region: nothing is given for it",
                name);
    }
}

void stericol_publish_warnings(stericol_session *session, const stericol_publication *publication)
{
    const stericol_pair_outcome *outcome = &publication->outcome;
    size_t layers = outcome->layers;
    bool differ = false;

    tell_plan(session, &outcome->plan);
    warn_of_values(session, publication);
    warn_of_ends(session, publication);
    for (size_t r = 0; r < publication->region_count; r++) {
        const stericol_pair_sums *sums = &outcome->sums[publication->chosen[r] * (layers + 1)];

        for (size_t layer = 0; layers > 1 && layer < layers; layer++)
            differ = differ || fabs(sums[layer].covered_area - sums[layers].covered_area) >
                                   1e-12 * sums[layer].covered_area;
        if (sums[layers].incomplete > 0 && r == whole_region(publication))
            stericol_session_warn(session,
                                  "%s: %zu columns have data but are left out: a layer of theirs is "
                                  "incomplete, or a lone sample "
                                  "leaves nothing to integrate",
                                  publication->region_names[r], sums[layers].incomplete);
    }
    tell_empty_layers(session, publication);
    if (differ)
        stericol_session_warn(
            session,
            "the layers do not cover the same columns: each layer's mean is over its own covered area, and "
            "layer means do not add up to the column's");
    if (publication->layout.fill_coverage &&
        strcmp(stericol_settings_text(session->settings, "table"), "text") == 0)
        stericol_session_say(
            session, "the sums scaled up by --fill-coverage stand in the result file and in --table csv "
                     "or json, not in this table");
    if (!publication->setup->has_salinity)
        stericol_session_warn(
            session,
            "salinity comes from elsewhere and is the same in both states: total and halosteric change are "
            "not known and not written");
}

/* ---- provenance ---- */

static void add_line(stericol_text *text, const char *role, const char *path,
                     const stericol_cf_identity *identity)
{
    stericol_input_record record = {path, identity->bytes, identity->changed, identity->id};

    stericol_text_format(text, "%s%s: ", text->length == 0 ? "" : "\n", role);
    stericol_result_inputs_text(text, &record, 1);
}

static void add_inputs(stericol_text *text, const char *role, const stericol_epoch *epoch)
{
    for (size_t i = 0; epoch != NULL && i < stericol_epoch_file_count(epoch); i++) {
        stericol_cf_identity identity;
        const char *path = stericol_epoch_file(epoch, i, &identity);

        add_line(text, role, path, &identity);
    }
}

/* A file that is not NetCDF: it has no id. */
static void add_text_input(stericol_text *text, const char *role, const char *path)
{
    stericol_cf_identity identity = {0};
    struct stat about;

    if (stat(path, &about) == 0) {
        identity.bytes = (unsigned long long)about.st_size;
        identity.changed = (long long)about.st_mtime;
    }
    add_line(text, role, path, &identity);
}

/* Files that options name and no epoch holds. */
static stericol_status add_other_inputs(stericol_session *session, stericol_text *text)
{
    static const char *const options[] = {"bathymetry", "mask",        "cell-area", "thickness",
                                          "regions",    "coordinates", "profile"};

    for (size_t o = 0; o < sizeof options / sizeof options[0]; o++) {
        size_t count;
        const char *const *paths;

        if (stericol_command_option(stericol_settings_command(session->settings), options[o]) == NULL)
            continue;
        paths = stericol_settings_list(session->settings, options[o], &count);
        for (size_t i = 0; i < count; i++) {
            stericol_cf_file *file;
            stericol_cf_identity identity;
            stericol_status status;

            if (strcmp(options[o], "profile") == 0) {
                add_text_input(text, options[o], paths[i]);
                continue;
            }
            status = stericol_cf_open(session->context, paths[i], &file);
            if (status != STERICOL_OK)
                return status;
            identity = stericol_cf_identity_of(file);
            add_line(text, options[o], paths[i], &identity);
            stericol_cf_close(file);
        }
    }
    return STERICOL_OK;
}

static void describe_equation(stericol_text *text, const stericol_setup *setup)
{
    const stericol_water *water = &setup->water;

    switch (water->equation) {
    case STERICOL_EQUATION_TEOS10:
        stericol_text_add(text, "TEOS-10, 75-term polynomial for specific volume (Roquet et al. 2015)");
        break;
    case STERICOL_EQUATION_GIBBS:
        stericol_text_add(text, "TEOS-10, full Gibbs function (IAPWS R13-08 and SR7-09)");
        break;
    case STERICOL_EQUATION_EOS80:
        stericol_text_add(
            text, "EOS-80 (UNESCO Technical Papers in Marine Science 36 and 44), potential temperature on "
                  "IPTS-68, practical salinity");
        break;
    case STERICOL_EQUATION_LINEAR:
        stericol_text_format(
            text,
            "linear: v = (1/%.17g kg m-3) [1 + %.17g K-1 (Theta - 10 degC) - %.17g kg g-1 (SA - 35 g kg-1)]",
            water->density, water->expansion, water->contraction);
        break;
    }
}

static void describe_method(stericol_text *text, const stericol_setup *setup)
{
    const stericol_column_options *column = &setup->pair.column;
    static const char *const vertical[] = {"means over the file's vertical cells",
                                           "samples, integrand linear between them",
                                           "samples, Steffen's monotone spline of salinity and temperature",
                                           "samples, Akima's spline of salinity and temperature"};
    static const char *const attribution[] = {
        "symmetric: mean of the two one-sided differences, closes exactly",
        "one-sided from the earlier state", "linear: expansion and contraction at the mid state"};

    if (column->reference_density > 0.0)
        stericol_text_format(text, "height: change of density over the constant %.17g kg m-3; ",
                             column->reference_density);
    else
        stericol_text_add(
            text, "height: change of specific volume over its mean of both states, summed over the column; ");
    stericol_text_format(text, "coordinate: %s; vertical: %s; attribution: %s; averaging: %s",
                         column->coordinate == STERICOL_COORDINATE_PRESSURE ? "pressure" : "depth",
                         vertical[column->vertical], attribution[column->attribution],
                         setup->pair.average_integrals ? "integrals of the members" : "state");
    stericol_text_format(text, "; first sample carried up from at most %.17g m", column->surface_reach);
    if (isnan(column->gap_reach))
        stericol_text_add(text, "; gaps bridged up to 50 m + 0.225 z, at least 50 m, at most 500 m");
    else
        stericol_text_format(text, "; gaps bridged up to %.17g m", column->gap_reach);
    if (setup->pair.sea_floor != NULL)
        stericol_text_format(text, "; deepest sample carried down to a sea floor at most %.17g m below it",
                             column->bottom_reach);
    else
        stericol_text_add(text, "; nothing carried down");
}

/* One line each: what is assumed beyond what the files say. */
static void describe_assumptions(stericol_text *text, const stericol_session *session,
                                 const stericol_setup *setup)
{
    static const char *const labels[2] = {"earlier", "later"};

    for (size_t e = 0; e < 2 && setup->epochs[e] != NULL; e++) {
        const char *label = setup->pair.kind == STERICOL_PAIR_SCENARIO ? "field" : labels[e];
        const stericol_state_rule *rule = &setup->pair.epochs[e].rule;
        stericol_epoch_variable t = stericol_epoch_temperature(setup->epochs[e]);

        stericol_text_format(text, "%s: %s%s\n", label, stericol_state_temperature_words(rule),
                             t.kind_assumed ? " (the kind is assumed)" : "");
        stericol_text_format(text, "%s: %s\n", label,
                             stericol_state_salinity_words(rule, setup->anomaly_field != NULL));
    }
    if (setup->pair.epochs[0].salinity_source == STERICOL_SALINITY_CONSTANT)
        stericol_text_format(text, "salinity %.17g everywhere\n", setup->pair.constant_salinity);
    stericol_text_add(text, stericol_text_string(&session->assumptions));
}

static void describe_months(stericol_text *text, const stericol_epoch *epoch)
{
    size_t count[12];

    stericol_epoch_months(epoch, count);
    for (size_t m = 0; m < 12; m++)
        stericol_text_format(text, "%s%zu", m == 0 ? "" : " ", count[m]);
}

/* "depth m: warming K, freshening g kg-1", a row a line. */
static void describe_scenario(stericol_text *text, const stericol_setup *setup)
{
    const stericol_scenario_profile *profile = &setup->pair.scenario;

    for (size_t i = 0; i < profile->count; i++)
        stericol_text_format(text, "%s%.17g m: warming %.17g K, freshening %.17g g kg-1", i == 0 ? "" : "\n",
                             profile->depth[i], profile->warming[i], profile->freshening[i]);
}

typedef struct attribute {
    const char *name;
    stericol_text text;
} attribute;

static stericol_status put(stericol_session *session, stericol_publication *publication, attribute *given)
{
    stericol_status status = STERICOL_OK;

    if (given->text.failed)
        status = stericol_fail_memory(session->context, 0, "provenance");
    else
        status = stericol_result_attribute(session->context, publication->result, given->name,
                                           stericol_text_string(&given->text));
    stericol_text_free(&given->text);
    return status;
}

static stericol_status put_constants(stericol_session *session, stericol_publication *publication)
{
    const struct {
        const char *name;
        double value;
    } constants[] = {
        {"specific_heat_capacity_j_per_kg_k", STERICOL_HEAT_CAPACITY},
        {"deepest_level_used_m", publication->outcome.deepest},
        {"columns_used", (double)publication->outcome.used},
        {"values_outside_physical_limits", publication->outcome.rejected},
        {"values_outside_equation_range", (double)publication->outcome.outside_equation},
    };
    stericol_status status = STERICOL_OK;

    for (size_t i = 0; i < sizeof constants / sizeof constants[0] && status == STERICOL_OK; i++)
        status = stericol_result_attribute_number(session->context, publication->result, constants[i].name,
                                                  constants[i].value);
    return status;
}

stericol_status stericol_publish_provenance(stericol_session *session, stericol_publication *publication)
{
    const stericol_setup *setup = publication->setup;
    enum {
        INPUTS,
        SETTINGS,
        SCENARIO,
        ASSUMPTIONS,
        EQUATION,
        METHOD,
        MONTHS_EARLIER,
        MONTHS_LATER,
        INSTRUCTIONS,
        COUNT
    };
    attribute attributes[COUNT] = {{"inputs", {0}},
                                   {"settings", {0}},
                                   {"scenario", {0}},
                                   {"assumptions", {0}},
                                   {"equation_of_state", {0}},
                                   {"method", {0}},
                                   {"earlier_times_per_calendar_month", {0}},
                                   {"later_times_per_calendar_month", {0}},
                                   {"instruction_set", {0}}};
    bool scenario = setup->pair.kind == STERICOL_PAIR_SCENARIO;
    stericol_status status;

    add_inputs(&attributes[INPUTS].text, scenario ? "field" : "earlier", setup->epochs[0]);
    add_inputs(&attributes[INPUTS].text, "later", setup->epochs[1]);
    add_inputs(&attributes[INPUTS].text, "background salinity", setup->background);
    add_inputs(&attributes[INPUTS].text, "salinity anomaly", setup->anomaly);
    stericol_settings_write(session->settings, &attributes[SETTINGS].text);
    describe_assumptions(&attributes[ASSUMPTIONS].text, session, setup);
    describe_equation(&attributes[EQUATION].text, setup);
    if (scenario)
        describe_scenario(&attributes[SCENARIO].text, setup);
    describe_method(&attributes[METHOD].text, setup);
    describe_months(&attributes[MONTHS_EARLIER].text, setup->epochs[0]);
    if (!scenario)
        describe_months(&attributes[MONTHS_LATER].text, setup->epochs[1]);
    stericol_text_add(&attributes[INSTRUCTIONS].text, stericol_instruction_set());
    status = add_other_inputs(session, &attributes[INPUTS].text);
    if (status == STERICOL_OK)
        status = put_constants(session, publication);
    for (size_t i = 0; i < COUNT; i++) {
        if (status == STERICOL_OK && attributes[i].text.length > 0)
            status = put(session, publication, &attributes[i]);
        stericol_text_free(&attributes[i].text);
    }
    return status;
}

/* ---- the table ---- */

static void fill_row(const stericol_publication *publication, size_t region, size_t layer,
                     stericol_table_row *row)
{
    double ocean_area = publication->layout.ocean_area;

    stericol_table_row_clear(row);
    row->region = publication->region_names[region];
    for (size_t q = 0; q < STERICOL_REGION_QUANTITY_COUNT; q++) {
        stericol_region_quantity quantity = (stericol_region_quantity)q;

        if (stericol_change_holds_region(&publication->layout, quantity))
            row->values[q] = stericol_publish_value(&publication->outcome, ocean_area, quantity,
                                                    publication->chosen[region], layer);
    }
}

static stericol_status print_rows(stericol_session *session, const stericol_table_row *rows, size_t count)
{
    const char *form = stericol_settings_text(session->settings, "table");
    stericol_text text = {0};
    stericol_status status;

    if (strcmp(form, "csv") == 0)
        status = stericol_table_csv(session->context, rows, count, &text);
    else if (strcmp(form, "json") == 0)
        status = stericol_table_json(session->context, rows, count, &text);
    else
        status = stericol_table_text(session->context, rows, count, &text);
    if (status == STERICOL_OK)
        status = stericol_session_print(session, stericol_text_string(&text));
    stericol_text_free(&text);
    return status;
}

static bool is_default(const stericol_setup *setup)
{
    return setup->pair.column.layer_count == 1 && setup->layers[0].upper <= 0.0 &&
           !isfinite(setup->layers[0].lower);
}

stericol_status stericol_publish_table(stericol_session *session, const stericol_publication *publication)
{
    size_t layers = publication->layout.layers, parts = layers > 1 ? layers + 1 : 1, count = 0;
    stericol_table_row *rows = stericol_new_array(publication->region_count * parts, sizeof *rows);
    char(*names)[LAYER_ROOM] = stericol_new_array(layers, sizeof *names);
    stericol_status status;

    if (rows == NULL || names == NULL) {
        status = stericol_fail_memory(session->context, 0, "the table");
        goto done;
    }
    for (size_t i = 0; i < layers; i++)
        name_layer(&publication->setup->layers[i], names[i]);
    for (size_t r = 0; r < publication->region_count; r++)
        for (size_t part = 0; part < parts; part++) {
            bool whole = part + 1 == parts;

            fill_row(publication, r, whole ? STERICOL_WHOLE_COLUMN : part, &rows[count]);
            /* The default, the whole column, needs no name. */
            rows[count++].layer = !whole                                           ? names[part]
                                  : layers == 1 && !is_default(publication->setup) ? names[0]
                                                                                   : NULL;
        }
    status = print_rows(session, rows, count);
done:
    free(names);
    free(rows);
    return status;
}
