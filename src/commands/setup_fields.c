/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/setup_inside.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>

/* Levels of a pressure axis become depths at this latitude; a quarter of a per cent at most elsewhere. */
static const double MIDDLE_LATITUDE = 45.0;

/* All of an epoch's salinity in one array of floats, level by level. */
static stericol_status load_whole(stericol_session *session, stericol_epoch *epoch, float *values)
{
    const stericol_grid *grid = stericol_epoch_grid(epoch);
    size_t plane = grid->rows * grid->columns;
    double *level = stericol_new_doubles(plane);
    stericol_status status = STERICOL_OK;

    if (level == NULL)
        return stericol_fail_memory(session->context, plane * sizeof(double), "a background field");
    for (size_t k = 0; k < grid->levels && status == STERICOL_OK; k++) {
        status = stericol_epoch_load(session->context, epoch, k, 1, 0, grid->rows, NULL, level, NULL);
        if (status == STERICOL_OK)
            for (size_t i = 0; i < plane; i++)
                values[k * plane + i] = (float)level[i];
    }
    free(level);
    return status;
}

static stericol_status make_field(stericol_session *session, stericol_epoch *epoch,
                                  stericol_regrid_field **field)
{
    const stericol_grid *grid = stericol_epoch_grid(epoch);
    stericol_epoch_variable variable = stericol_epoch_salinity(epoch);
    stericol_regrid_source source = {.file = variable.file,
                                     .variable = variable.name,
                                     .levels = grid->levels,
                                     .rows = grid->rows,
                                     .columns = grid->columns,
                                     .depth = grid->level,
                                     .latitude = grid->latitude,
                                     .longitude = grid->longitude,
                                     .reach = STERICOL_REGRID_DEFAULT_REACH};
    size_t plane, count, bytes = 0;
    double *depth = NULL;
    float *values = NULL;
    stericol_status status;

    if (grid->curvilinear || grid->own_depths)
        return stericol_fail(
            session->context, STERICOL_INPUT, variable.file, variable.name,
            "put it on a plain latitude-longitude grid with levels of one depth first",
            "is on a curvilinear or terrain-following grid, which a background cannot be read from");
    if (!stericol_multiply_sizes(grid->rows, grid->columns, &plane) ||
        !stericol_multiply_sizes(plane, grid->levels, &count) ||
        !stericol_multiply_sizes(count, sizeof(float), &bytes) ||
        bytes > stericol_session_memory(session) / 2)
        return stericol_fail(session->context, STERICOL_MEMORY, variable.file, variable.name,
                             "give a larger --memory, or a background on a coarser grid",
                             "takes %zu MiB as a background, more than half of the memory allowed",
                             bytes / 1048576);
    depth = stericol_new_doubles(grid->levels);
    values = stericol_new_array(count, sizeof(float));
    if (depth == NULL || values == NULL) {
        status = stericol_fail_memory(session->context, bytes, "a background field");
        goto done;
    }
    for (size_t k = 0; k < grid->levels; k++)
        depth[k] = grid->vertical == STERICOL_VERTICAL_PRESSURE
                       ? stericol_depth(grid->level[k], MIDDLE_LATITUDE)
                       : grid->level[k];
    source.depth = depth;
    source.values = values;
    status = load_whole(session, epoch, values);
    if (status == STERICOL_OK)
        status = stericol_regrid_field_new(session->context, &source, field);
    if (status == STERICOL_OK)
        stericol_notice(
            session->context, STERICOL_NOTE, variable.file, variable.name,
            "put onto the grid of the data: bilinear over wet neighbours, nearest wet cell within %.0f km "
            "beyond, linear in depth",
            STERICOL_REGRID_DEFAULT_REACH / 1000.0);
done:
    free(depth);
    free(values);
    return status;
}

static stericol_status open_field(stericol_session *session, const char *option, bool anomaly,
                                  stericol_paths *paths, stericol_epoch **epoch,
                                  stericol_regrid_field **field)
{
    stericol_epoch_request request;
    stericol_status status = stericol_settings_paths(session->context, session->settings, option, paths);

    if (status != STERICOL_OK)
        return status;
    stericol_setup_request(session->settings, option, paths, &request);
    request.wants_temperature = false;
    request.temperature = NULL;
    request.salinity_anomaly = anomaly;
    if (anomaly)
        request.salinity = NULL;
    request.mask_file = request.cell_area_file = request.thickness_file = NULL;
    request.cache_bytes = stericol_session_memory(session) / 16;
    status = stericol_epoch_open(session->context, session->units, &request, epoch);
    if (status == STERICOL_OK)
        status = make_field(session, *epoch, field);
    return status;
}

stericol_status stericol_setup_backgrounds(stericol_session *session, stericol_setup *setup)
{
    const stericol_settings *settings = session->settings;
    stericol_status status = STERICOL_OK;
    bool wants_background = stericol_settings_is_set(settings, "background-salinity");
    bool wants_anomaly = stericol_settings_is_set(settings, "salinity-anomaly");

    if ((wants_background || wants_anomaly) && stericol_epoch_grid(setup->epochs[0])->own_depths)
        return stericol_fail(
            session->context, STERICOL_INPUT, stericol_epoch_temperature(setup->epochs[0]).file, NULL,
            "give files with their own salinity, or on levels of one depth",
            "has depths that differ from column to column, which a background field cannot follow");
    if (wants_background) {
        status = open_field(session, "background-salinity", false, &setup->background_paths,
                            &setup->background, &setup->background_field);
        setup->pair.background_salinity = setup->background_field;
    }
    if (status == STERICOL_OK && wants_anomaly) {
        status = open_field(session, "salinity-anomaly", true, &setup->anomaly_paths, &setup->anomaly,
                            &setup->anomaly_field);
        setup->pair.salinity_anomaly = setup->anomaly_field;
    }
    return status;
}
