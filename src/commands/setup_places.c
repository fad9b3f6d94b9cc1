/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/setup_inside.h"

#include "base/checked.h"
#include "base/text.h"
#include "input/field2d.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* A grid of one row or column has no neighbours to take a width from. */
static const double LONE_WIDTH = 1.0; /* degrees */

static double *lone_bounds(double centre)
{
    double *bounds = stericol_new_doubles(2);

    if (bounds != NULL) {
        bounds[0] = centre - 0.5 * LONE_WIDTH;
        bounds[1] = centre + 0.5 * LONE_WIDTH;
    }
    return bounds;
}

static stericol_status make_bounds(stericol_session *session, const stericol_grid *grid, bool latitude,
                                   double **bounds)
{
    size_t count = latitude ? grid->rows : grid->columns;
    const double *centre = latitude ? grid->latitude : grid->longitude;

    if (count == 1) {
        *bounds = lone_bounds(centre[0]);
        if (*bounds != NULL && latitude) {
            (*bounds)[0] = fmax((*bounds)[0], -90.0);
            (*bounds)[1] = fmin((*bounds)[1], 90.0);
        }
        stericol_session_warn(session,
                              "the grid has one %s and no bounds: its cells are taken as %g degree wide",
                              latitude ? "row" : "column", LONE_WIDTH);
        return *bounds == NULL ? stericol_fail_memory(session->context, 0, "the bounds of cells")
                               : STERICOL_OK;
    }
    *bounds = stericol_new_doubles(2 * count);
    if (*bounds == NULL)
        return stericol_fail_memory(session->context, 0, "the bounds of cells");
    return latitude ? stericol_latitude_bounds(session->context, count, centre, *bounds)
                    : stericol_longitude_bounds(session->context, count, centre, *bounds);
}

static stericol_status make_corners(stericol_session *session, stericol_setup *setup,
                                    const stericol_grid *grid)
{
    size_t corners = (grid->rows + 1) * (grid->columns + 1);

    setup->latitude_bounds = stericol_new_doubles(corners);
    setup->longitude_bounds = stericol_new_doubles(corners);
    if (setup->latitude_bounds == NULL || setup->longitude_bounds == NULL)
        return stericol_fail_memory(session->context, 0, "the corners of cells");
    setup->cells.kind = STERICOL_CELLS_LATTICE;
    setup->cells.corner_latitude = setup->latitude_bounds;
    setup->cells.corner_longitude = setup->longitude_bounds;
    return stericol_cell_corners(session->context, grid->rows, grid->columns, grid->latitude, grid->longitude,
                                 setup->latitude_bounds, setup->longitude_bounds);
}

static stericol_status make_cells(stericol_session *session, stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    bool has_bounds = grid->latitude_bounds != NULL && grid->longitude_bounds != NULL;
    stericol_status status = STERICOL_OK;

    setup->cells = (stericol_cells){.rows = grid->rows,
                                    .columns = grid->columns,
                                    .latitude = grid->latitude,
                                    .longitude = grid->longitude};
    setup->bounds_made = !has_bounds;
    if (grid->curvilinear && has_bounds) {
        setup->cells.kind = STERICOL_CELLS_POLYGONS;
        setup->cells.corners = grid->corners;
        setup->cells.corner_latitude = grid->latitude_bounds;
        setup->cells.corner_longitude = grid->longitude_bounds;
    } else if (grid->curvilinear) {
        status = make_corners(session, setup, grid);
    } else {
        setup->cells.kind = STERICOL_CELLS_REGULAR;
        if (grid->latitude_bounds == NULL)
            status = make_bounds(session, grid, true, &setup->latitude_bounds);
        if (status == STERICOL_OK && grid->longitude_bounds == NULL)
            status = make_bounds(session, grid, false, &setup->longitude_bounds);
        setup->cells.latitude_bounds =
            grid->latitude_bounds != NULL ? grid->latitude_bounds : setup->latitude_bounds;
        setup->cells.longitude_bounds =
            grid->longitude_bounds != NULL ? grid->longitude_bounds : setup->longitude_bounds;
    }
    return status;
}

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
        status =
            stericol_cell_areas(session->context, &setup->cells, radius, 0, grid->rows, setup->cell_area);
        setup->cell_area_source = setup->bounds_made
                                      ? "sphere, limits of the cells half way between their centres"
                                      : "sphere, limits of the cells as the file gives them";
    }
    if (status == STERICOL_OK)
        status = stericol_repeated_cells(session->context, &setup->cells, repeated, &setup->repeated);
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

stericol_status stericol_setup_places(stericol_session *session, stericol_setup *setup)
{
    const stericol_grid *grid = stericol_epoch_grid(setup->epochs[0]);
    const char *bathymetry = stericol_settings_text(session->settings, "bathymetry");
    stericol_status status = STERICOL_OK;

    if (bathymetry != NULL)
        status =
            stericol_input_bathymetry(session->context, session->units, bathymetry, grid, &setup->sea_floor);
    if (status == STERICOL_OK)
        status = make_cells(session, setup);
    if (status == STERICOL_OK)
        status = measure_cells(session, setup);
    if (status == STERICOL_OK)
        status = add_regions(session, setup);
    if (status == STERICOL_OK)
        status = stericol_regions_prepare(session->context, setup->regions, &setup->cells);
    setup->pair.sea_floor = setup->sea_floor;
    setup->pair.regions = setup->regions;
    setup->pair.cell_area = setup->cell_area;
    setup->pair.area_from_floor = setup->sea_floor != NULL;
    setup->pair.area_from_mask = setup->sea_floor == NULL && grid->dry != NULL;
    return status;
}
