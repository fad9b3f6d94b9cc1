/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/setup_inside.h"

#include "base/checked.h"
#include "base/text.h"
#include "input/field2d.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static stericol_status measure_cells(stericol_session *session, stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    size_t count = grid->rows * grid->columns;
    double radius = grid->radius > 0.0 ? grid->radius : STERICOL_AUTHALIC_RADIUS;
    unsigned char *repeated = stericol_new_array(count, 1);
    stericol_status status = STERICOL_OK;

    setup->cell_area = stericol_new_doubles(count);
    if (repeated == NULL || setup->cell_area == NULL) {
        status = stericol_fail_memory(session->context, 0, "the areas of cells");
        goto done;
    }
    if (grid->cell_area != NULL) {
        memcpy(setup->cell_area, grid->cell_area, count * sizeof(double));
        setup->cell_area_source = grid->cell_area_source;
    } else {
        status = stericol_cell_areas(session->context, &setup->cells.cells, radius, 0, grid->rows,
                                     setup->cell_area);
        setup->cell_area_source = setup->cells.made
                                      ? "sphere, limits of the cells half way between their centres"
                                      : "sphere, limits of the cells as the file gives them";
    }
    if (status == STERICOL_OK)
        status = stericol_repeated_cells(session->context, &setup->cells.cells, repeated, &setup->repeated);
    for (size_t i = 0; i < count; i++)
        if (repeated[i] || !isfinite(setup->cell_area[i]))
            setup->cell_area[i] = 0.0;
    if (status == STERICOL_OK && setup->repeated > 0)
        stericol_notice(session->context, STERICOL_NOTE, stericol_epoch_temperature(setup->epochs[0]).file,
                        NULL, "%zu cells repeat others (cyclic columns or a fold) and count once",
                        setup->repeated);
done:
    free(repeated);
    return status;
}

static stericol_status add_mask(stericol_session *session, stericol_setup *setup, const char *path)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    stericol_input_mask mask = {0};
    stericol_status status;

    if (stericol_ends_with(path, ".geojson") || stericol_ends_with(path, ".json"))
        return stericol_fail(session->context, STERICOL_INPUT, path, "--regions",
                             "give a NetCDF mask with flag_values and flag_meanings, or boxes by --region",
                             "holds polygons, which this version does not read");
    status = stericol_input_mask_read(session->context, path, grid, &mask);
    if (status == STERICOL_OK)
        status = stericol_regions_add_labels(session->context, setup->regions, mask.count,
                                             (const char *const *)mask.names, grid->rows, grid->columns,
                                             mask.index);
    stericol_input_mask_free(&mask);
    return status;
}

static stericol_status add_regions(stericol_session *session, stericol_setup *setup)
{
    size_t boxes, masks;
    const char *const *box = stericol_settings_list(session->settings, "region", &boxes);
    const char *const *mask = stericol_settings_list(session->settings, "regions", &masks);
    stericol_status status = STERICOL_OK;

    setup->regions = stericol_regions_new();
    if (setup->regions == NULL)
        return stericol_fail_memory(session->context, 0, "the regions");
    setup->usual_regions = boxes == 0 && masks == 0;
    if (setup->usual_regions)
        return stericol_regions_add_usual(session->context, setup->regions, "whole_domain");
    for (size_t i = 0; i < boxes && status == STERICOL_OK; i++) {
        stericol_box parsed;

        status = stericol_box_parse(session->context, box[i], &parsed);
        if (status == STERICOL_OK)
            status = stericol_regions_add_box(session->context, setup->regions, &parsed);
    }
    for (size_t i = 0; i < masks && status == STERICOL_OK; i++)
        status = add_mask(session, setup, mask[i]);
    return status;
}

/* Terrain-following levels end at the sea floor, which the file itself tells. */
static stericol_status take_own_floor(stericol_session *session, stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);

    if (!grid->own_depths)
        return STERICOL_OK;
    setup->sea_floor = stericol_new_doubles(grid->rows * grid->columns);
    if (setup->sea_floor == NULL)
        return stericol_fail_memory(session->context, 0, "the sea floor");
    if (!stericol_epoch_sea_floor(setup->epochs[0], setup->sea_floor)) {
        free(setup->sea_floor);
        setup->sea_floor = NULL;
    } else if (!stericol_settings_is_set(session->settings, "bottom-reach")) {
        setup->pair.column.bottom_reach = STERICOL_SETUP_BOTTOM_REACH;
    }
    return STERICOL_OK;
}

/* Some planes of the whole grid are held throughout: refused here where they cannot be. */
static stericol_status check_room(stericol_session *session, const stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    double cell = sizeof(double) + 1.0; /* its area, and whether it repeats another */
    double bytes, memory = (double)stericol_session_memory(session);

    if (grid->curvilinear)
        cell += 4.0 * sizeof(double); /* position and corner */
    if (stericol_settings_text(session->settings, "bathymetry") != NULL)
        cell += sizeof(double);
    bytes = cell * (double)grid->rows * (double)grid->columns;
    if (bytes <= memory)
        return STERICOL_OK;
    return stericol_fail(session->context, STERICOL_MEMORY, stericol_epoch_temperature(setup->epochs[0]).file,
                         NULL, "give a larger --memory",
                         "the areas of %zu by %zu cells take %.0f MiB, and --memory allows %.0f MiB",
                         grid->rows, grid->columns, ceil(bytes / 1048576.0), memory / 1048576.0);
}

stericol_status stericol_setup_places(stericol_session *session, stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    const char *bathymetry = stericol_settings_text(session->settings, "bathymetry");
    stericol_status status = check_room(session, setup);

    if (status != STERICOL_OK)
        return status;
    if (bathymetry == NULL)
        status = take_own_floor(session, setup);
    else
        status =
            stericol_input_bathymetry(session->context, session->units, bathymetry, grid, &setup->sea_floor);
    if (status == STERICOL_OK)
        status = stericol_grid_cells_make(session, grid, &setup->cells);
    if (status == STERICOL_OK)
        status = measure_cells(session, setup);
    if (status == STERICOL_OK)
        status = add_regions(session, setup);
    if (status == STERICOL_OK)
        status = stericol_regions_prepare(session->context, setup->regions, &setup->cells.cells);
    setup->pair.sea_floor = setup->sea_floor;
    setup->pair.regions = setup->regions;
    setup->pair.cell_area = setup->cell_area;
    setup->pair.area_from_floor = bathymetry != NULL;
    setup->pair.area_from_mask = bathymetry == NULL && grid->dry != NULL;
    return status;
}
