/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the parts of the pair pipeline share.  Nobody else includes this. */
#ifndef STERICOL_COMMANDS_PAIR_INSIDE_H
#define STERICOL_COMMANDS_PAIR_INSIDE_H

#include "commands/pair.h"

/* Counters that each worker keeps for itself and that are added up at the end; a line of cache apart. */
typedef struct stericol_pair_counters {
    size_t outside_equation;
    size_t rejected; /* by a scenario */
    char apart[112];
} stericol_pair_counters;

/* Physical limits of a scenario's changed state, as those of values read (input/): degC, g/kg. */
#define STERICOL_PAIR_LEAST_TEMPERATURE (-4.0)
#define STERICOL_PAIR_MOST_TEMPERATURE 45.0
#define STERICOL_PAIR_LEAST_SALINITY 0.0
#define STERICOL_PAIR_MOST_SALINITY 45.0

/* One run over the whole grid. */
typedef struct stericol_pair_work {
    stericol_context *context;
    stericol_executor *executor;
    const stericol_pair *pair;
    const stericol_grid *grid;
    stericol_result *result;
    const stericol_change_layout *layout;
    stericol_pair_tick *tick;
    void *user;
    stericol_pair_plan plan;
    size_t epoch_count;               /* that are read: 1 for a scenario */
    unsigned char *zero_is_land[2];   /* [levels] of each epoch: T = S = 0 means land there */
    stericol_epoch_tally *tally[2];   /* [levels] of each epoch */
    stericol_pair_counters *counters; /* [workers] */
    size_t level_count;               /* levels that any layer needs */
    stericol_region_totals **totals;  /* [workers] */
    double *row_buffers;              /* [workers][2][columns] */
} stericol_pair_work;

/* Some levels of a tile, as read and then as states. */
typedef struct stericol_pair_slab {
    stericol_pair_work *work;
    size_t row0, rows, count; /* count = rows * columns */
    size_t level0, levels;
    size_t room; /* values that each array can hold */
    double *temperature[2], *salinity[2];
    double *depth, *upper, *lower; /* where the grid has own depths, else NULL */
    double *averaged[4]; /* volume 1, volume 2, thermosteric, halosteric; NULL without average_integrals */
    stericol_epoch_tally *tally; /* [levels] scratch */
    stericol_context *context;   /* of the thread that reads */
    stericol_status status;
} stericol_pair_slab;

/* One band of rows. */
typedef struct stericol_pair_tile {
    size_t row0, rows, count;
    stericol_sweep *sweep;
    unsigned char *wet; /* [count]: any temperature on the first level in either epoch */
} stericol_pair_tile;

enum {
    STERICOL_PAIR_SUM_TOTAL,
    STERICOL_PAIR_SUM_THERMOSTERIC,
    STERICOL_PAIR_SUM_HALOSTERIC,
    STERICOL_PAIR_SUM_HEAT,
    STERICOL_PAIR_SUM_HEAT_MAGNITUDE,
    STERICOL_PAIR_SUM_AREA,
    STERICOL_PAIR_SUM_INCOMPLETE,
    STERICOL_PAIR_SUMS
};

/* pair_plan.c */
stericol_status stericol_pair_plan_make(stericol_pair_work *work, stericol_pair_plan *plan);

/* pair_slab.c */
stericol_status stericol_pair_slab_new(stericol_pair_work *work, stericol_pair_slab *slab);
void stericol_pair_slab_free(stericol_pair_slab *slab);
/* Reads what level0, levels, row0 and rows say; the outcome is slab->status and slab->context. */
void stericol_pair_slab_load(void *slab);
/* Turns the columns from..to of every level into states. */
void stericol_pair_slab_convert(stericol_pair_slab *slab, stericol_pair_tile *tile, size_t from, size_t to,
                                size_t worker);
/* Hands them to the sweep. */
void stericol_pair_slab_sweep(const stericol_pair_slab *slab, const stericol_pair_tile *tile, size_t from,
                              size_t to);
/* Depth (m) and sea pressure (dbar) at which level `level` of the grid is evaluated, at a latitude. */
double stericol_pair_position(const stericol_pair_work *work, size_t level);

/* Converts one plane of points col0.. of grid row `row` in place; `index` of them within the plane. */
typedef struct stericol_pair_piece {
    size_t level;  /* of the grid */
    size_t row;    /* of the grid */
    size_t column; /* first */
    size_t count;
    double pressure;         /* where shared */
    const double *pressures; /* [count] where not, else NULL */
    double depth;            /* nominal or shared depth, m */
    const double *depths;    /* [count] where not shared, else NULL */
} stericol_pair_piece;
void stericol_pair_convert_piece(const stericol_pair_work *work, size_t epoch,
                                 const stericol_pair_piece *piece, double *salinity, double *temperature);
/*
 * The scenario's state from the field's: converted temperature and salinity, [count]; what the scenario makes
 * impossible becomes infinite.  The changed arrays may be the given ones.  Returns how many it made
 * impossible.
 */
size_t stericol_pair_change_piece(const stericol_pair_work *work, const stericol_pair_piece *piece,
                                  const double *salinity, const double *temperature, double *changed_salinity,
                                  double *changed_temperature);
enum { STERICOL_PAIR_STRIP = 512 };
/* Calls `act` for the pieces that make up the columns from..to of one level of a slab. */
typedef void stericol_pair_act(void *argument, const stericol_pair_piece *piece, size_t index);
void stericol_pair_pieces(const stericol_pair_slab *slab, size_t level, size_t from, size_t to,
                          stericol_pair_act *act, void *argument);

/* pair_integral.c: fills slab->averaged from every member, after the conversion of the averaged states. */
stericol_status stericol_pair_average_integrals(stericol_pair_slab *slab);

/* pair_sums.c: adds the rows of a finished tile to work->totals. */
void stericol_pair_sum_tile(stericol_pair_work *work, const stericol_pair_tile *tile);
/* The number of the sum that area counts in, region_area. */
size_t stericol_pair_sum_count(const stericol_pair *pair);

#endif
