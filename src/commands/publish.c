/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/publish.h"

#include "base/checked.h"
#include "cf/write.h"
#include "commands/publish_inside.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Joules in a yottajoule. */
static const double YOTTA = 1e24;
/* Below this share of |heat| warming and cooling cancel, and a ratio to the heat means nothing; common
 * practice, no source. */
static const double LEAST_SHARE = 0.3;

static const stericol_pair_sums *sums_of(const stericol_pair_outcome *outcome, size_t region, size_t layer)
{
    return &outcome->sums[region * (outcome->layers + 1) +
                          (layer == STERICOL_WHOLE_COLUMN ? outcome->layers : layer)];
}

double stericol_publish_value(const stericol_pair_outcome *outcome, double ocean_area,
                              stericol_region_quantity quantity, size_t region, size_t layer)
{
    const stericol_pair_sums *sums = sums_of(outcome, region, layer);
    bool covered = sums->covered_area > 0.0;
    double scale = covered ? outcome->region_area[region] / sums->covered_area : (double)NAN;
    double any = covered ? 1.0 : (double)NAN; /* nothing was summed: missing, not zero */

    switch (quantity) {
    case STERICOL_REGION_AREA:
        return outcome->region_area[region];
    case STERICOL_REGION_COVERED_AREA:
        return sums->covered_area;
    case STERICOL_REGION_MEAN_STERIC:
        return covered ? sums->total / sums->covered_area : (double)NAN;
    case STERICOL_REGION_MEAN_THERMOSTERIC:
        return covered ? sums->thermosteric / sums->covered_area : (double)NAN;
    case STERICOL_REGION_MEAN_HALOSTERIC:
        return covered ? sums->halosteric / sums->covered_area : (double)NAN;
    case STERICOL_REGION_VOLUME_STERIC:
        return any * sums->total;
    case STERICOL_REGION_VOLUME_THERMOSTERIC:
        return any * sums->thermosteric;
    case STERICOL_REGION_VOLUME_HALOSTERIC:
        return any * sums->halosteric;
    case STERICOL_REGION_HEAT:
        return any * sums->heat;
    case STERICOL_REGION_SEA_LEVEL:
        return any * sums->thermosteric / ocean_area;
    case STERICOL_REGION_EFFICIENCY:
        if (!(fabs(sums->heat) >= LEAST_SHARE * sums->heat_magnitude) || !(sums->heat_magnitude > 0.0))
            return NAN;
        return any * (sums->thermosteric / ocean_area) / (sums->heat / YOTTA);
    case STERICOL_REGION_FILLED_STERIC:
        return scale * sums->total;
    case STERICOL_REGION_FILLED_THERMOSTERIC:
        return scale * sums->thermosteric;
    case STERICOL_REGION_FILLED_HALOSTERIC:
        return scale * sums->halosteric;
    case STERICOL_REGION_FILLED_HEAT:
        return scale * sums->heat;
    case STERICOL_REGION_FILLED_SEA_LEVEL:
        return scale * sums->thermosteric / ocean_area;
    case STERICOL_REGION_QUANTITY_COUNT:
        break;
    }
    return NAN;
}

/*
 * The regions that are told: all, but of the usual ones only those that the grid touches.  chosen: [regions]
 * indices. A region that was asked for and lies off the grid is warned of.
 */
static stericol_status choose_regions(stericol_session *session, const stericol_setup *setup, size_t *chosen,
                                      size_t *count)
{
    size_t columns = setup->cells.cells.columns;
    double *fraction = stericol_new_doubles(columns);

    if (fraction == NULL)
        return stericol_fail_memory(session->context, 0, "the regions");
    *count = 0;
    for (size_t r = 0; r < stericol_regions_count(setup->regions); r++) {
        bool touched = false;

        for (size_t row = 0; row < setup->cells.cells.rows && !touched; row++) {
            stericol_regions_row(setup->regions, r, row, fraction);
            for (size_t i = 0; i < columns && !touched; i++)
                touched = fraction[i] > 0.0 && setup->cell_area[row * columns + i] > 0.0;
        }
        if (!touched && !setup->usual_regions)
            stericol_session_warn(session, "the region %s lies wholly off the grid",
                                  stericol_regions_name(setup->regions, r));
        if (touched || !setup->usual_regions)
            chosen[(*count)++] = r;
    }
    free(fraction);
    return STERICOL_OK;
}

/* Numbers for no region at all would be a page of blanks. */
static stericol_status check_regions(stericol_session *session, const stericol_publication *publication)
{
    for (size_t r = 0; r < publication->region_count; r++)
        for (size_t layer = 0; layer < publication->outcome.layers; layer++)
            if (sums_of(&publication->outcome, publication->chosen[r], layer)->covered_area > 0.0)
                return STERICOL_OK;
    return stericol_fail(session->context, STERICOL_NOTHING, NULL, NULL,
                         "give regions that hold data; inspect shows where the grid lies",
                         "no region holds a column that could be used");
}

static stericol_status write_regions(stericol_session *session, stericol_publication *publication)
{
    const stericol_change_layout *layout = &publication->layout;
    const stericol_pair_outcome *outcome = &publication->outcome;
    double *values = stericol_new_doubles(publication->region_count);
    stericol_status status = STERICOL_OK;

    if (values == NULL)
        return stericol_fail_memory(session->context, 0, "the region totals");
    for (size_t q = 0; q < STERICOL_REGION_QUANTITY_COUNT; q++) {
        stericol_region_quantity quantity = (stericol_region_quantity)q;
        size_t layers = layout->layers > 1 && quantity != STERICOL_REGION_AREA ? layout->layers : 0;

        if (!stericol_change_holds_region(layout, quantity))
            continue;
        for (size_t layer = 0; layer <= layers && status == STERICOL_OK; layer++) {
            size_t which = layer == layers ? STERICOL_WHOLE_COLUMN : layer;

            for (size_t r = 0; r < publication->region_count; r++)
                values[r] = stericol_publish_value(outcome, layout->ocean_area, quantity,
                                                   publication->chosen[r], which);
            status = stericol_result_region(session->context, publication->result, quantity, which, values);
        }
    }
    free(values);
    return status;
}

static stericol_status write_areas(stericol_session *session, const stericol_setup *setup,
                                   stericol_result *result)
{
    return stericol_result_cell_area(session->context, result, 0, setup->cells.cells.rows, setup->cell_area);
}

/* Whether a path of an option, as given, is that file; a list stands behind an @. */
static bool is_same(const char *given, const char *output)
{
    return stericol_cf_same_file(given, output) ||
           (given[0] == '@' && stericol_cf_same_file(given + 1, output));
}

/* An output that is one of the inputs would be replaced by what was made from it. */
static stericol_status check_output(stericol_session *session, const stericol_setup *setup,
                                    const char *output)
{
    const stericol_epoch *epochs[] = {setup->epochs[0], setup->epochs[1], setup->background, setup->anomaly};
    const stericol_command *command = stericol_settings_command(session->settings);
    const char *same = NULL;

    for (size_t e = 0; e < sizeof epochs / sizeof epochs[0]; e++)
        for (size_t i = 0; epochs[e] != NULL && i < stericol_epoch_file_count(epochs[e]); i++)
            if (stericol_cf_same_file(output, stericol_epoch_file(epochs[e], i, NULL)))
                same = "the data";
    for (size_t o = 0; o < command->option_count; o++) {
        const stericol_option *option = command->options[o];
        size_t count;
        const char *const *paths;

        if ((option->kind != STERICOL_OPTION_PATH && option->kind != STERICOL_OPTION_PATHS) ||
            strcmp(option->name, "output") == 0)
            continue;
        paths = stericol_settings_list(session->settings, option->name, &count);
        for (size_t i = 0; i < count; i++)
            if (is_same(paths[i], output))
                same = option->name;
    }
    if (same == NULL)
        return STERICOL_OK;
    return stericol_fail(session->context, STERICOL_USAGE, output, "--output", "give another name",
                         "is a file that the run uses already (%s)", same);
}

static void describe_layout(stericol_session *session, const stericol_setup *setup, const char *title,
                            stericol_publication *publication)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    const stericol_epoch *later = setup->epochs[1];
    const char *first = stericol_epoch_first_date(setup->epochs[0]);
    const char *last = stericol_epoch_last_date(later != NULL ? later : setup->epochs[0]);
    bool curvilinear_bounds = grid->curvilinear && grid->latitude_bounds != NULL;
    bool dated_backwards = later != NULL && first != NULL && stericol_epoch_first_date(later) != NULL &&
                           strcmp(stericol_epoch_first_date(later), first) < 0;

    stericol_session_time(publication->created);
    publication->layout = (stericol_change_layout){
        .rows = grid->rows,
        .columns = grid->columns,
        .curvilinear = grid->curvilinear,
        .latitude = grid->latitude,
        .longitude = grid->longitude,
        .latitude_bounds = grid->curvilinear ? (curvilinear_bounds ? grid->latitude_bounds : NULL)
                                             : setup->cells.cells.latitude_bounds,
        .longitude_bounds = grid->curvilinear ? (curvilinear_bounds ? grid->longitude_bounds : NULL)
                                              : setup->cells.cells.longitude_bounds,
        .corners = grid->corners,
        .layers = setup->pair.column.layer_count,
        .layer_bounds = (const double(*)[2])publication->layer_bounds,
        .regions = publication->region_count,
        .region_names = publication->region_names,
        .has_salinity = setup->has_salinity,
        .has_remainder =
            setup->has_salinity && setup->pair.column.attribution != STERICOL_ATTRIBUTION_SYMMETRIC,
        .fill_coverage = stericol_settings_on(session->settings, "fill-coverage"),
        .ocean_area = stericol_settings_number(session->settings, "ocean-area"),
        .title = title,
        .created = publication->created,
        .command_line = session->command_line,
        .earlier_epoch = stericol_epoch_description(setup->epochs[0]),
        .later_epoch =
            later != NULL ? stericol_epoch_description(later) : "the same field, changed as prescribed",
        .coverage_start = dated_backwards ? stericol_epoch_first_date(later) : first,
        .coverage_end = dated_backwards ? stericol_epoch_last_date(setup->epochs[0]) : last,
        .cell_area_source = setup->cell_area_source,
        .region_area_source =
            setup->pair.area_from_floor
                ? "cells with a sea floor in --bathymetry, or with a value on the first level"
            : setup->pair.area_from_mask ? "cells that --mask leaves"
                                         : "cells with a value on the first level in either epoch",
    };
}

static stericol_status prepare(stericol_session *session, const stericol_setup *setup, const char *title,
                               stericol_publication *publication)
{
    size_t regions = stericol_regions_count(setup->regions), layers = setup->pair.column.layer_count;
    stericol_status status;

    publication->chosen = stericol_new_array(regions, sizeof(size_t));
    publication->region_names = stericol_new_array(regions, sizeof(const char *));
    publication->layer_bounds = stericol_new_array(layers, sizeof *publication->layer_bounds);
    if (publication->chosen == NULL || publication->region_names == NULL || publication->layer_bounds == NULL)
        return stericol_fail_memory(session->context, 0, "the result");
    status = choose_regions(session, setup, publication->chosen, &publication->region_count);
    for (size_t r = 0; r < publication->region_count; r++)
        publication->region_names[r] = stericol_regions_name(setup->regions, publication->chosen[r]);
    for (size_t i = 0; i < layers; i++) {
        publication->layer_bounds[i][0] = setup->layers[i].upper;
        publication->layer_bounds[i][1] = setup->layers[i].lower;
    }
    describe_layout(session, setup, title, publication);
    return status;
}

static void release(stericol_publication *publication)
{
    stericol_result_free(publication->result);
    stericol_pair_outcome_free(&publication->outcome);
    free(publication->chosen);
    free(publication->region_names);
    free(publication->layer_bounds);
}

stericol_status stericol_publish(stericol_session *session, const stericol_setup *setup, const char *title)
{
    const char *output = stericol_settings_text(session->settings, "output");
    stericol_publication publication = {.setup = setup};
    stericol_status status = prepare(session, setup, title, &publication);

    if (status == STERICOL_OK && output != NULL)
        status = check_output(session, setup, output);
    if (status == STERICOL_OK && output != NULL)
        status =
            stericol_result_new(session->context, output, stericol_settings_on(session->settings, "replace"),
                                &publication.layout, &publication.result);
    if (status == STERICOL_OK)
        status = stericol_session_start_workers(session);
    if (status == STERICOL_OK)
        status = stericol_pair_run(session->context, session->executor, &setup->pair, publication.result,
                                   &publication.layout, stericol_session_tick, session, &publication.outcome);
    if (status == STERICOL_OK)
        status = check_regions(session, &publication);
    if (status == STERICOL_OK)
        stericol_publish_warnings(session, &publication);
    if (status == STERICOL_OK && output != NULL) {
        status = write_areas(session, setup, publication.result);
        if (status == STERICOL_OK)
            status = write_regions(session, &publication);
        if (status == STERICOL_OK)
            status = stericol_publish_provenance(session, &publication);
    }
    /* The table first: a run whose table cannot be printed fails, and then leaves no output. */
    if (status == STERICOL_OK)
        status = stericol_publish_table(session, &publication);
    if (status == STERICOL_OK && output != NULL)
        status = stericol_result_commit(session->context, publication.result, publication.outcome.deepest);
    if (status == STERICOL_OK && output != NULL)
        stericol_session_say(session, "wrote %s", output);
    release(&publication);
    return status;
}
