/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/setup.h"

#include "base/checked.h"
#include "commands/profile.h"
#include "commands/setup_inside.h"
#include "job/values.h"

#include <assert.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static bool has_option(const stericol_settings *settings, const char *name)
{
    return stericol_command_option(stericol_settings_command(settings), name) != NULL;
}

static const char *text_or_null(const stericol_settings *settings, const char *name)
{
    return has_option(settings, name) ? stericol_settings_text(settings, name) : NULL;
}

/* The value of a choice as a text; NULL where the option is absent or not given. */
static bool chosen(const stericol_settings *settings, const char *name, const char *word)
{
    const char *value = text_or_null(settings, name);

    return value != NULL && strcmp(value, word) == 0;
}

stericol_water stericol_setup_water(const stericol_settings *settings)
{
    stericol_water water = STERICOL_WATER_DEFAULT;

    if (chosen(settings, "equation", "gibbs"))
        water.equation = STERICOL_EQUATION_GIBBS;
    else if (chosen(settings, "equation", "eos80"))
        water.equation = STERICOL_EQUATION_EOS80;
    else if (chosen(settings, "equation", "linear"))
        water.equation = STERICOL_EQUATION_LINEAR;
    if (water.equation == STERICOL_EQUATION_LINEAR) {
        water.expansion = stericol_settings_number(settings, "expansion");
        water.contraction = stericol_settings_number(settings, "contraction");
        water.density = stericol_settings_number(settings, "density");
    }
    return water;
}

static stericol_status read_layers(stericol_context *context, const char *text, stericol_layer **layers,
                                   size_t *count)
{
    stericol_depth_range *ranges;
    const char *wrong = stericol_parse_layers(text, &ranges, count);

    if (wrong != NULL)
        return stericol_fail(context, STERICOL_USAGE, NULL, "--layers", NULL, "'%s': %s", text, wrong);
    *layers = stericol_new_array(*count, sizeof **layers);
    if (*layers == NULL) {
        free(ranges);
        return stericol_fail_memory(context, 0, "the layers");
    }
    for (size_t i = 0; i < *count; i++)
        (*layers)[i] = (stericol_layer){ranges[i].upper, ranges[i].lower};
    free(ranges);
    return STERICOL_OK;
}

stericol_status stericol_setup_column(stericol_context *context, const stericol_settings *settings,
                                      const stericol_water *water, stericol_layer **layers,
                                      stericol_column_options *options)
{
    double density = stericol_settings_number(settings, "reference-density");
    double gap = stericol_settings_number(settings, "gap-reach");
    stericol_status status;

    *options = stericol_column_options_default();
    options->water = water;
    options->attribution = chosen(settings, "attribution", "earlier")  ? STERICOL_ATTRIBUTION_EARLIER
                           : chosen(settings, "attribution", "linear") ? STERICOL_ATTRIBUTION_LINEAR
                                                                       : STERICOL_ATTRIBUTION_SYMMETRIC;
    options->vertical = chosen(settings, "vertical", "cells")     ? STERICOL_VERTICAL_CELLS
                        : chosen(settings, "vertical", "steffen") ? STERICOL_VERTICAL_STEFFEN
                        : chosen(settings, "vertical", "akima")   ? STERICOL_VERTICAL_AKIMA
                                                                  : STERICOL_VERTICAL_LINEAR;
    options->reference_density = isnan(density) ? 0.0 : density; /* the word `local` is no number */
    options->surface_reach = stericol_settings_number(settings, "surface-reach");
    options->gap_reach = gap; /* NaN: the default rule */
    status = read_layers(context, stericol_settings_text(settings, "layers"), layers, &options->layer_count);
    options->layers = *layers;
    if (has_option(settings, "bottom-reach") && stericol_settings_is_set(settings, "bottom-reach"))
        options->bottom_reach = stericol_settings_number(settings, "bottom-reach");
    else if (text_or_null(settings, "bathymetry") != NULL)
        options->bottom_reach = STERICOL_SETUP_BOTTOM_REACH;
    return status;
}

static stericol_temperature_kind temperature_kind(const stericol_settings *settings)
{
    return chosen(settings, "temperature-kind", "in-situ")        ? STERICOL_TEMPERATURE_IN_SITU
           : chosen(settings, "temperature-kind", "potential")    ? STERICOL_TEMPERATURE_POTENTIAL
           : chosen(settings, "temperature-kind", "conservative") ? STERICOL_TEMPERATURE_CONSERVATIVE
                                                                  : STERICOL_TEMPERATURE_UNKNOWN;
}

static stericol_salinity_kind salinity_kind(const stericol_settings *settings)
{
    return chosen(settings, "salinity-kind", "practical")   ? STERICOL_SALINITY_PRACTICAL
           : chosen(settings, "salinity-kind", "reference") ? STERICOL_SALINITY_REFERENCE
           : chosen(settings, "salinity-kind", "absolute")  ? STERICOL_SALINITY_ABSOLUTE
                                                            : STERICOL_SALINITY_UNKNOWN;
}

void stericol_setup_request(const stericol_settings *settings, const char *label, const stericol_paths *paths,
                            stericol_epoch_request *request)
{
    char name[64];
    size_t select_count = 0;

    *request = (stericol_epoch_request){
        .label = label, .least_times = 0.5, .wants_temperature = true, .wants_salinity = true};
    request->paths = (const char *const *)paths->path;
    request->path_count = paths->count;
    snprintf(name, sizeof name, "%s-time", label);
    request->time_window = text_or_null(settings, name);
    snprintf(name, sizeof name, "%s-step", label);
    if (text_or_null(settings, name) != NULL)
        stericol_parse_steps(stericol_settings_text(settings, name), &request->first_step,
                             &request->last_step);
    request->temperature = text_or_null(settings, "temperature");
    request->salinity = text_or_null(settings, "salinity");
    request->temperature_kind = temperature_kind(settings);
    request->salinity_kind = salinity_kind(settings);
    request->vertical_unit = text_or_null(settings, "vertical-unit");
    request->select =
        has_option(settings, "select") ? stericol_settings_list(settings, "select", &select_count) : NULL;
    request->select_count = select_count;
    request->coordinates_file = text_or_null(settings, "coordinates");
    request->cell_area_file = text_or_null(settings, "cell-area");
    request->thickness_file = text_or_null(settings, "thickness");
    request->mask_file = text_or_null(settings, "mask");
    if (has_option(settings, "least-times"))
        request->least_times = stericol_settings_number(settings, "least-times");
}

/* Opens one epoch; its salinity may come from elsewhere. */
static stericol_status open_epoch(stericol_session *session, stericol_setup *setup, size_t which,
                                  const char *label)
{
    stericol_epoch_request request;
    stericol_status status =
        stericol_settings_paths(session->context, session->settings, label, &setup->paths[which]);

    if (status != STERICOL_OK)
        return status;
    stericol_setup_request(session->settings, label, &setup->paths[which], &request);
    request.wants_salinity = text_or_null(session->settings, "background-salinity") == NULL &&
                             text_or_null(session->settings, "constant-salinity") == NULL;
    if (!request.wants_salinity)
        request.salinity = NULL;
    /* Decoders share a quarter of the memory: enough for a row of chunks of every field on real files. */
    request.cache_bytes = stericol_session_memory(session) / 8;
    return stericol_epoch_open(session->context, session->units, &request, &setup->epochs[which]);
}

static const char *kind_word(stericol_temperature_kind kind)
{
    return kind == STERICOL_TEMPERATURE_IN_SITU     ? "in situ"
           : kind == STERICOL_TEMPERATURE_POTENTIAL ? "potential"
                                                    : "conservative";
}

/* Two epochs of different kinds, one of them only assumed, would make centimetres out of nothing. */
static stericol_status check_kinds(stericol_session *session, const stericol_setup *setup)
{
    stericol_epoch_variable t[2], s[2];

    for (size_t e = 0; e < 2; e++) {
        t[e] = stericol_epoch_temperature(setup->epochs[e]);
        s[e] = stericol_epoch_salinity(setup->epochs[e]);
    }
    if (t[0].kind != t[1].kind && (t[0].kind_assumed || t[1].kind_assumed)) {
        size_t assumed = t[0].kind_assumed ? 0 : 1;

        return stericol_fail(session->context, STERICOL_INPUT, t[assumed].file, t[assumed].name,
                             "say which it is with --temperature-kind, or correct the file",
                             "would be taken as %s temperature, but the other epoch holds %s temperature",
                             kind_word((stericol_temperature_kind)t[assumed].kind),
                             kind_word((stericol_temperature_kind)t[1 - assumed].kind));
    }
    if (setup->has_salinity && s[0].kind != s[1].kind && (s[0].kind_assumed || s[1].kind_assumed)) {
        size_t assumed = s[0].kind_assumed ? 0 : 1;

        return stericol_fail(
            session->context, STERICOL_INPUT, s[assumed].file, s[assumed].name,
            "say which it is with --salinity-kind, or correct the file",
            "is of another kind of salinity than the other epoch, and its kind is only assumed");
    }
    return STERICOL_OK;
}

static stericol_status check_grids(stericol_session *session, const stericol_setup *setup)
{
    char difference[256];

    if (stericol_grid_same(stericol_epoch_grid(setup->epochs[0]), stericol_epoch_grid(setup->epochs[1]),
                           difference, sizeof difference))
        return STERICOL_OK;
    return stericol_fail(session->context, STERICOL_INPUT, stericol_epoch_temperature(setup->epochs[1]).file,
                         NULL, "put both epochs on one grid first",
                         "the grids of the two epochs do not match: %s", difference);
}

/* Both epochs the same times of the same files: the change would be nothing, surely by mistake. */
static stericol_status check_distinct(stericol_session *session, const stericol_setup *setup)
{
    size_t count = stericol_epoch_member_count(setup->epochs[0]);

    if (count != stericol_epoch_member_count(setup->epochs[1]))
        return STERICOL_OK;
    for (size_t m = 0; m < count; m++) {
        const stericol_epoch_member *a = stericol_epoch_member_at(setup->epochs[0], m);
        const stericol_epoch_member *b = stericol_epoch_member_at(setup->epochs[1], m);

        if (strcmp(a->temperature_file, b->temperature_file) != 0 || strcmp(a->text, b->text) != 0)
            return STERICOL_OK;
        if (a->salinity_file != NULL && b->salinity_file != NULL &&
            strcmp(a->salinity_file, b->salinity_file) != 0)
            return STERICOL_OK;
    }
    return stericol_fail(
        session->context, STERICOL_USAGE, NULL, NULL,
        "choose them with --earlier-time and --later-time, or --earlier-step and --later-step",
        "both epochs are the same times of the same files");
}

/* The calendar months that make up the two epochs, where they differ. */
static void warn_of_months(stericol_session *session, const stericol_setup *setup)
{
    static const char *const names[12] = {"January",   "February", "March",    "April",
                                          "May",       "June",     "July",     "August",
                                          "September", "October",  "November", "December"};
    size_t count[2][12];
    stericol_text unequal = {0};

    for (size_t e = 0; e < 2; e++)
        stericol_epoch_months(setup->epochs[e], count[e]);
    for (size_t m = 0; m < 12; m++)
        if ((count[0][m] > 0) != (count[1][m] > 0))
            stericol_text_format(&unequal, "%s%s (%s epoch only)", unequal.length > 0 ? ", " : "", names[m],
                                 count[0][m] > 0 ? "earlier" : "later");
    if (unequal.length > 0)
        stericol_session_warn(
            session,
            "the epochs are made of different calendar months, so that the season enters the change: %s",
            stericol_text_string(&unequal));
    stericol_text_free(&unequal);
}

static bool deepest_layer(const stericol_setup *setup, double *upper)
{
    *upper = 0.0;
    for (size_t i = 0; i < setup->pair.column.layer_count; i++)
        *upper = fmax(*upper, setup->layers[i].upper);
    return setup->pair.column.layer_count > 0;
}

/* A layer that begins below the last level can never hold anything. */
static stericol_status check_layers(stericol_session *session, const stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    double last =
        grid->level_bounds != NULL ? grid->level_bounds[2 * grid->levels - 1] : grid->level[grid->levels - 1];
    double upper;

    if (grid->own_depths || !deepest_layer(setup, &upper))
        return STERICOL_OK;
    if (grid->vertical == STERICOL_VERTICAL_PRESSURE)
        last =
            stericol_depth(last, 0.0); /* the deepest that a pressure lies anywhere: gravity is least there */
    if (upper < last)
        return STERICOL_OK;
    return stericol_fail(session->context, STERICOL_USAGE, stericol_epoch_temperature(setup->epochs[0]).file,
                         "--layers", "leave that layer out",
                         "a layer begins at %g m, and the file ends at %g m", upper, last);
}

/* `auto`: cell means where the vertical axis has bounds, else samples. */
static stericol_status settle_vertical(stericol_session *session, stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    bool has_cells = grid->level_bounds != NULL || grid->own_depths;
    const char *asked = stericol_settings_text(session->settings, "vertical");

    if (strcmp(asked, "auto") == 0)
        stericol_notice(
            session->context, STERICOL_NOTE, stericol_epoch_temperature(setup->epochs[0]).file,
            grid->level_name,
            has_cells ? "--vertical auto: values are taken as means over the vertical cells"
                      : "--vertical auto: values are taken as samples, for want of bounds, the integrand "
                        "linear between them");
    if (strcmp(asked, "auto") == 0)
        setup->pair.column.vertical = has_cells ? STERICOL_VERTICAL_CELLS : STERICOL_VERTICAL_LINEAR;
    if (setup->pair.column.vertical == STERICOL_VERTICAL_CELLS && !has_cells)
        return stericol_fail(session->context, STERICOL_INPUT,
                             stericol_epoch_temperature(setup->epochs[0]).file, grid->level_name,
                             "take --vertical linear, or add bounds to the vertical axis",
                             "has no bounds, which --vertical cells needs");
    setup->pair.column.coordinate = grid->vertical == STERICOL_VERTICAL_PRESSURE
                                        ? STERICOL_COORDINATE_PRESSURE
                                        : STERICOL_COORDINATE_DEPTH;
    if (setup->pair.column.vertical == STERICOL_VERTICAL_STEFFEN ||
        setup->pair.column.vertical == STERICOL_VERTICAL_AKIMA) {
        if (setup->pair.average_integrals)
            return stericol_fail(
                session->context, STERICOL_USAGE, NULL, "--mean",
                "take --mean state, or --vertical linear or cells",
                "integral cannot be combined with a spline: splines need the averaged state");
        setup->pair.column.levels = grid->levels;
    }
    return STERICOL_OK;
}

static void settle_rules(stericol_session *session, stericol_setup *setup, size_t epochs)
{
    for (size_t e = 0; e < epochs; e++) {
        stericol_pair_epoch *source = &setup->pair.epochs[e];
        stericol_epoch_variable salinity = setup->background != NULL
                                               ? stericol_epoch_salinity(setup->background)
                                           : setup->has_salinity ? stericol_epoch_salinity(setup->epochs[e])
                                                                 : (stericol_epoch_variable){0};

        source->epoch = setup->epochs[e];
        source->rule.water = setup->water;
        source->rule.ipts68 = chosen(session->settings, "temperature-scale", "ipts68");
        source->rule.temperature =
            (stericol_temperature_kind)stericol_epoch_temperature(setup->epochs[e]).kind;
        source->rule.salinity = (stericol_salinity_kind)salinity.kind;
        source->salinity_source = setup->has_salinity         ? STERICOL_SALINITY_FROM_FILE
                                  : setup->background != NULL ? STERICOL_SALINITY_FROM_BACKGROUND
                                                              : STERICOL_SALINITY_CONSTANT;
        if (source->salinity_source == STERICOL_SALINITY_CONSTANT) {
            source->rule.salinity = salinity_kind(session->settings);
            if (source->rule.salinity == STERICOL_SALINITY_UNKNOWN)
                source->rule.salinity = STERICOL_SALINITY_PRACTICAL;
        }
        if (e == 0 && source->salinity_source == STERICOL_SALINITY_CONSTANT)
            stericol_notice(session->context, STERICOL_NOTE, NULL, NULL,
                            "salinity is %g everywhere (--constant-salinity), taken as %s",
                            setup->pair.constant_salinity,
                            stericol_state_salinity_words(&source->rule, setup->anomaly_field != NULL));
        if (setup->anomaly_field != NULL && source->rule.salinity == STERICOL_SALINITY_ABSOLUTE &&
            setup->water.equation != STERICOL_EQUATION_EOS80)
            stericol_session_warn(session,
                                  "the salinity is absolute already: --salinity-anomaly is not used");
    }
}

/* The last row of a table holds for all that lies below it: said, since that is most of the sea. */
static void warn_of_profile(stericol_session *session, const stericol_setup *setup, const char *path,
                            double end)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    double last = grid->level[grid->levels - 1];

    if (grid->vertical == STERICOL_VERTICAL_PRESSURE)
        last = stericol_depth(last, 0.0);
    if (end < last)
        stericol_session_warn(
            session, "%s: the table ends at %g m and the field at %g m: its last row is used for all below",
            path, end, last);
}

static stericol_status make_scenario(stericol_session *session, stericol_setup *setup)
{
    const char *path = text_or_null(session->settings, "profile");
    double warming = stericol_settings_number(session->settings, "warming");
    double freshening = stericol_settings_number(session->settings, "freshening");
    size_t count = 1;

    if (path != NULL) {
        stericol_status status =
            stericol_profile_read(session->context, session->units, path, &setup->profile, &count);

        if (status != STERICOL_OK)
            return status;
        warn_of_profile(session, setup, path, setup->profile[count - 1]);
    } else {
        setup->profile = stericol_new_array(3, sizeof(double));
        if (setup->profile == NULL)
            return stericol_fail_memory(session->context, 0, "the scenario");
        setup->profile[1] = isnan(warming) ? 0.0 : warming;
        setup->profile[2] = isnan(freshening) ? 0.0 : freshening;
    }
    setup->pair.scenario = (stericol_scenario_profile){count, setup->profile, setup->profile + count,
                                                       setup->profile + 2 * count};
    return STERICOL_OK;
}

static stericol_status open_epochs(stericol_session *session, stericol_pair_kind kind, stericol_setup *setup)
{
    static const char *const labels[2] = {"earlier", "later"};
    stericol_status status;

    if (kind == STERICOL_PAIR_SCENARIO)
        return open_epoch(session, setup, 0, "field");
    for (size_t e = 0; e < 2; e++) {
        status = open_epoch(session, setup, e, labels[e]);
        if (status != STERICOL_OK)
            return status;
    }
    status = check_distinct(session, setup);
    if (status == STERICOL_OK)
        status = check_grids(session, setup);
    if (status == STERICOL_OK)
        status = check_kinds(session, setup);
    if (status == STERICOL_OK)
        warn_of_months(session, setup);
    return status;
}

stericol_status stericol_setup_make(stericol_session *session, stericol_pair_kind kind, stericol_setup *setup)
{
    const stericol_settings *settings = session->settings;
    size_t epochs = kind == STERICOL_PAIR_SCENARIO ? 1 : 2;
    stericol_status status;

    *setup = (stericol_setup){.pair = {.kind = kind}};
    setup->water = stericol_setup_water(settings);
    status =
        stericol_setup_column(session->context, settings, &setup->water, &setup->layers, &setup->pair.column);
    setup->has_salinity = text_or_null(settings, "background-salinity") == NULL &&
                          text_or_null(settings, "constant-salinity") == NULL;
    setup->pair.average_integrals = chosen(settings, "mean", "integral");
    setup->pair.least_times =
        has_option(settings, "least-times") ? stericol_settings_number(settings, "least-times") : 0.5;
    if (!setup->has_salinity)
        setup->pair.constant_salinity = stericol_settings_number(settings, "constant-salinity");
    if (status == STERICOL_OK)
        status = open_epochs(session, kind, setup);
    if (status == STERICOL_OK && kind == STERICOL_PAIR_SCENARIO)
        status = make_scenario(session, setup);
    if (status == STERICOL_OK)
        status = settle_vertical(session, setup);
    if (status == STERICOL_OK)
        status = check_layers(session, setup);
    if (status == STERICOL_OK)
        status = stericol_setup_backgrounds(session, setup);
    if (status == STERICOL_OK)
        settle_rules(session, setup, epochs);
    if (status == STERICOL_OK)
        status = stericol_setup_places(session, setup);
    setup->pair.memory = stericol_session_memory(session);
    return status;
}

void stericol_setup_free(stericol_setup *setup)
{
    for (size_t e = 0; e < 2; e++) {
        stericol_epoch_close(setup->epochs[e]);
        stericol_paths_free(&setup->paths[e]);
    }
    stericol_epoch_close(setup->background);
    stericol_paths_free(&setup->background_paths);
    stericol_paths_free(&setup->anomaly_paths);
    stericol_epoch_close(setup->anomaly);
    stericol_regrid_field_free(setup->background_field);
    stericol_regrid_field_free(setup->anomaly_field);
    stericol_regions_free(setup->regions);
    free(setup->layers);
    free(setup->sea_floor);
    stericol_grid_cells_free(&setup->cells);
    free(setup->cell_area);
    free(setup->profile);
    *setup = (stericol_setup){0};
}
