/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From the settings of `change` or `scenario` to a pair pipeline that is ready to run. */
#ifndef STERICOL_COMMANDS_SETUP_H
#define STERICOL_COMMANDS_SETUP_H

#include "commands/cells.h"
#include "commands/pair.h"
#include "commands/session.h"

#include "job/paths.h"

/* How far the deepest sample is carried towards a known sea floor, m, where --bottom-reach is not given. */
#define STERICOL_SETUP_BOTTOM_REACH 500.0

/* Everything that a pair borrows, and what provenance tells of it. */
typedef struct stericol_setup {
    stericol_water water;
    stericol_layer *layers;
    stericol_paths paths[2], background_paths, anomaly_paths;
    stericol_epoch *epochs[2];  /* scenario: the first alone */
    stericol_epoch *background; /* --background-salinity, else NULL */
    stericol_epoch *anomaly;    /* --salinity-anomaly, else NULL */
    stericol_regrid_field *background_field, *anomaly_field;
    double *sea_floor;
    stericol_grid_cells cells;
    double *cell_area; /* [rows][columns], 0 where a cell is met twice */
    const char *cell_area_source;
    size_t repeated;
    stericol_regions *regions;
    bool usual_regions;
    bool has_salinity;
    double *profile; /* scenario: depth, warming, freshening, one after the other */
    stericol_pair pair;
} stericol_setup;

/* The equation with its constants, from --equation and the options of the linear one. */
stericol_water stericol_setup_water(const stericol_settings *settings);
/* Attribution, vertical (without auto), reaches, reference density, layers (allocated in *layers). */
stericol_status stericol_setup_column(stericol_context *context, const stericol_settings *settings,
                                      const stericol_water *water, stericol_layer **layers,
                                      stericol_column_options *options);

/*
 * Opens epochs and what goes with them, checks that they fit together and prepares the regions.  `kind`
 * decides which options are read.  On failure stericol_setup_free() is still to be called.
 */
stericol_status stericol_setup_make(stericol_session *session, stericol_pair_kind kind,
                                    stericol_setup *setup);
void stericol_setup_free(stericol_setup *setup);

/* Fills an epoch request from the reading options that the command has; `label` is the options' prefix. */
void stericol_setup_request(const stericol_settings *settings, const char *label, const stericol_paths *paths,
                            stericol_epoch_request *request);

#endif
