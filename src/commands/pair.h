/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The pipeline that `change` and `scenario` share: two states of one grid go through the sweep, tile by tile
 * and slab by slab, into maps and region sums.
 *
 * A tile is a band of whole rows; a slab some levels of a tile.  While the workers handle one slab the next
 * is read in the background.  Nothing here depends on how tiles, slabs and workers cut the grid: a column is
 * summed in depth order by one worker at a time, and region sums are exact.
 */
#ifndef STERICOL_COMMANDS_PAIR_H
#define STERICOL_COMMANDS_PAIR_H

#include "commands/states.h"

#include "base/executor.h"
#include "input/epoch.h"
#include "regrid/field.h"
#include "result/change.h"
#include "stericol/column.h"
#include "stericol/region.h"

#include <stdbool.h>
#include <stddef.h>

/* How the second state comes about. */
typedef enum stericol_pair_kind {
    STERICOL_PAIR_TWO_EPOCHS,
    STERICOL_PAIR_SCENARIO /* the first state, warmed and freshened */
} stericol_pair_kind;

/* Where the salinity of a state comes from. */
typedef enum stericol_salinity_source {
    STERICOL_SALINITY_FROM_FILE,
    STERICOL_SALINITY_FROM_BACKGROUND, /* another file's field, put onto this grid */
    STERICOL_SALINITY_CONSTANT
} stericol_salinity_source;

/* One epoch and how its values become states. */
typedef struct stericol_pair_epoch {
    stericol_epoch *epoch;
    stericol_state_rule rule;
    stericol_salinity_source salinity_source;
} stericol_pair_epoch;

/* A change that depends on depth alone: linear between the nodes, constant beyond them. */
typedef struct stericol_scenario_profile {
    size_t count;             /* at least 1 */
    const double *depth;      /* m, ascending */
    const double *warming;    /* K, added to conservative temperature (potential for eos80) */
    const double *freshening; /* g/kg, taken from absolute salinity (practical for eos80) */
} stericol_scenario_profile;

typedef struct stericol_pair {
    stericol_pair_kind kind;
    stericol_pair_epoch epochs[2];                    /* scenario: the first alone */
    const stericol_regrid_field *background_salinity; /* or NULL */
    double constant_salinity;                         /* in the kind of the rule */
    const stericol_regrid_field *salinity_anomaly;    /* g/kg, or NULL */
    stericol_scenario_profile scenario;
    bool average_integrals; /* --mean integral */
    double least_times;     /* for average_integrals */
    stericol_column_options column;
    const double *sea_floor;   /* [rows][columns], m, or NULL */
    stericol_regions *regions; /* prepared */
    const double *cell_area;   /* [rows][columns], m2; 0 where a cell counts elsewhere */
    bool area_from_floor;      /* region_area from sea_floor > 0 */
    bool area_from_mask;       /* region_area from the cells that the mask leaves */
    size_t memory;             /* bytes for tiles and slabs */
} stericol_pair;

/* Region sums after a run, [layer or whole column]; index layers means the whole column. */
typedef struct stericol_pair_sums {
    double total, thermosteric, halosteric, heat, heat_magnitude; /* m3, m3, m3, J, J */
    double covered_area;                                          /* m2 */
    size_t incomplete;                                            /* columns with data that were left out */
} stericol_pair_sums;

/* How the grid was cut; the result does not depend on it. */
typedef struct stericol_pair_plan {
    size_t rows;       /* of a tile */
    size_t levels;     /* of a slab */
    double inflations; /* how often a chunk is inflated at most; 1 unless the memory is short */
} stericol_pair_plan;

typedef struct stericol_pair_outcome {
    stericol_pair_plan plan;
    size_t regions, layers;
    double *region_area;                 /* [regions] m2 */
    stericol_pair_sums *sums;            /* [regions][layers + 1] */
    size_t flags[STERICOL_COLUMN_FLAGS]; /* columns of each flag */
    size_t used;                         /* columns with a result over all layers */
    size_t layer_columns;                /* complete layers, counted over all columns */
    double deepest;                      /* m */
    size_t readings;         /* times every value was read: 1, or 2 when zeros had to be looked at again */
    size_t land_zero_levels; /* levels on which land was written as zeros */
    double rejected;         /* values outside physical limits */
    size_t outside_equation; /* values outside the equation's own valid range */
} stericol_pair_outcome;
void stericol_pair_outcome_free(stericol_pair_outcome *outcome);

/* Called now and then by the thread that started the run; false ends it with STERICOL_INTERRUPTED. */
typedef bool stericol_pair_tick(void *user, double done, double whole);

/*
 * Runs the pipeline and hands every map that `layout` holds to `result` (both NULL: maps are not written).
 * STERICOL_NOTHING: no column could be used; the statuses of reading and writing.  *outcome is all zero on
 * failure.
 */
stericol_status stericol_pair_run(stericol_context *context, stericol_executor *executor,
                                  const stericol_pair *pair, stericol_result *result,
                                  const stericol_change_layout *layout, stericol_pair_tick *tick, void *user,
                                  stericol_pair_outcome *outcome);

#endif
