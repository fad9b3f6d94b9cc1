/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/column_inside.h"
#include "commands/commands.h"
#include "commands/setup.h"

#include "cf/write.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Options that mean nothing here, or for one table alone. */
static stericol_status check_options(stericol_session *session, bool single)
{
    const stericol_settings *settings = session->settings;

    if (!single && stericol_cf_same_file(stericol_settings_text(settings, "earlier"),
                                         stericol_settings_text(settings, "later")))
        return stericol_fail(session->context, STERICOL_USAGE, NULL, NULL,
                             "name another for one of them, or give one alone with --field",
                             "both epochs are the same table");
    if (strcmp(stericol_settings_text(settings, "vertical"), "cells") == 0)
        return stericol_fail(session->context, STERICOL_USAGE, NULL, "--vertical",
                             "take linear, steffen or akima",
                             "cells needs the limits of cells, and a text table has samples");
    if (single && strcmp(stericol_settings_text(settings, "reference-density"), "local") != 0)
        return stericol_fail(session->context, STERICOL_USAGE, NULL, "--reference-density",
                             "leave it out, or give --earlier and --later",
                             "has no meaning for one table, whose height is geopotential over gravity");
    if (single && strcmp(stericol_settings_text(settings, "attribution"), "symmetric") != 0)
        return stericol_fail(session->context, STERICOL_USAGE, NULL, "--attribution",
                             "leave it out, or give --earlier and --later",
                             "has no meaning for one table: there is no change to share out");
    return STERICOL_OK;
}

static stericol_status read_levels(stericol_session *session, bool single, const stericol_water *water,
                                   double latitude, double gap_reach, stericol_working_levels *levels)
{
    static const char *const labels[2] = {"earlier", "later"};
    stericol_working_table tables[2] = {{0}};
    stericol_status status = STERICOL_OK;

    if (single) {
        status = stericol_working_table_read(session, "field", water, latitude, &tables[0]);
        if (status == STERICOL_OK)
            status = stericol_working_levels_single(session, &tables[0], latitude, gap_reach, levels);
    } else {
        for (size_t e = 0; e < 2 && status == STERICOL_OK; e++)
            status = stericol_working_table_read(session, labels[e], water, latitude, &tables[e]);
        if (status == STERICOL_OK)
            status = stericol_working_levels_pair(session, tables, latitude, gap_reach, levels);
    }
    for (size_t e = 0; e < 2; e++)
        stericol_working_table_free(&tables[e]);
    return status;
}

static void warn_of_end(stericol_session *session, const stericol_working *working, double sea_floor)
{
    const stericol_working_gap *gap = stericol_working_ending_gap(working);

    /* Small tables are often coarser than the rule that serves casts: the numbers say what to give. */
    if (gap != NULL)
        stericol_session_warn(session,
                              "the column ends at %g m: samples at %g and %g m are %g m apart, and %g m is "
                              "allowed there; --gap-reach %.0f bridges all",
                              working->reached, gap->upper, gap->lower, gap->lower - gap->upper, gap->allowed,
                              gap->bridging);
    else if (working->flag == STERICOL_COLUMN_UNEQUAL)
        stericol_session_warn(
            session, "one table reaches deeper than the other: only the common depth, to %g m, counts",
            working->reached);
    else if (working->flag == STERICOL_COLUMN_END_OF_DATA && !isnan(sea_floor))
        stericol_session_warn(session,
                              "the column ends at %g m: the sea floor is %g m further down, and "
                              "--bottom-reach bridges %g m",
                              working->reached, sea_floor - working->reached, working->options->bottom_reach);
}

static void warn(stericol_session *session, const stericol_working *working, double sea_floor)
{
    const stericol_working_levels *levels = working->levels;
    size_t outside = 0;

    for (size_t i = 0; i < working->row_count; i++)
        for (size_t e = levels->single ? 1 : 0; e < 2; e++)
            outside += !isnan(working->rows[i].volume[e]) &&
                       !stericol_in_valid_range(&levels->water, working->rows[i].salinity[e],
                                                working->rows[i].temperature[e], working->rows[i].pressure);
    if (outside > 0)
        stericol_session_warn(
            session,
            "%zu values lie outside the range that the equation of state was made for; they were used",
            outside);
    warn_of_end(session, working, sea_floor);
    if (working->top > 0.0)
        stericol_session_warn(session,
                              "the column begins at %g m, deeper than --surface-reach: what lies above "
                              "is not in the sums",
                              working->top);
    if (isnan(working->sums[working->layer_count].value[STERICOL_COLUMN_TOTAL]))
        stericol_session_warn(session, "a layer is incomplete, so that there is no sum of the whole column");
}

static stericol_status print_working(stericol_session *session, const stericol_working *working)
{
    const char *const form = stericol_settings_text(session->settings, "table");
    stericol_text text = {0};
    stericol_status status = STERICOL_OK;

    if (strcmp(form, "json") == 0)
        status = stericol_working_json(session->context, working, &text);
    else if (strcmp(form, "csv") == 0)
        stericol_working_csv(working, &text);
    else
        stericol_working_text(working, &text);
    if (status == STERICOL_OK && text.failed)
        status = stericol_fail_memory(session->context, 0, "the working");
    if (status == STERICOL_OK)
        status = stericol_session_print(session, stericol_text_string(&text));
    stericol_text_free(&text);
    return status;
}

static stericol_status check_splines(stericol_session *session, const stericol_working_levels *levels,
                                     const stericol_column_options *options)
{
    if (options->vertical == STERICOL_VERTICAL_LINEAR || levels->count <= STERICOL_WORKING_MOST_SPLINED)
        return STERICOL_OK;
    return stericol_fail(session->context, STERICOL_USAGE, NULL, "--vertical",
                         "take linear, which does the same with levels this close, or thin the tables",
                         "a spline is drawn through at most %d levels here, and there are %zu",
                         STERICOL_WORKING_MOST_SPLINED, levels->count);
}

stericol_status stericol_command_column(stericol_session *session)
{
    const stericol_settings *settings = session->settings;
    const bool single = stericol_settings_is_set(settings, "field");
    const stericol_water water = stericol_setup_water(settings);
    const double latitude = stericol_settings_number(settings, "latitude");
    const double sea_floor = stericol_settings_number(settings, "sea-floor");
    stericol_column_options options;
    stericol_working_levels levels = {0};
    stericol_working working = {0};
    stericol_layer *layers = NULL;
    stericol_status status = check_options(session, single);

    if (status == STERICOL_OK)
        status = stericol_setup_column(session->context, settings, &water, &layers, &options);
    if (status == STERICOL_OK) {
        if (!isnan(sea_floor) && !stericol_settings_is_set(settings, "bottom-reach"))
            options.bottom_reach = STERICOL_SETUP_BOTTOM_REACH;
        status = read_levels(session, single, &water, latitude, options.gap_reach, &levels);
    }
    if (status == STERICOL_OK)
        status = check_splines(session, &levels, &options);
    if (status == STERICOL_OK)
        status = stericol_working_make(session->context, &levels, &options, sea_floor, &working);
    if (status == STERICOL_OK) {
        warn(session, &working, sea_floor);
        status = print_working(session, &working);
    }
    stericol_working_free(&working);
    stericol_working_levels_free(&levels);
    free(layers);
    return status;
}
