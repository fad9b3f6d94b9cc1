/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What the files of this room share: the sweep's own record, the strip of columns that is worked on at a
 * time.
 *
 * The depths asked for are cut at every limit of every layer into segments; a layer is a run of segments, the
 * whole column is all of them.  Sums are kept per column and segment, so overlapping layers cost nothing
 * extra, and layers that do not overlap add up to the column.
 */
#ifndef STERICOL_COLUMN_SWEEP_H
#define STERICOL_COLUMN_SWEEP_H

#include "column/loops.h"
#include "stericol/column.h"
#include "stericol/water.h"

#include <math.h>
#include <stdint.h>

enum {
    STERICOL_STRIP =
        512, /* columns worked on at a time: some 30 arrays of 4 KiB stay in the second-level cache */
    STERICOL_MOST_LAYERS = 64,
    STERICOL_MOST_LIMITS = 2 * STERICOL_MOST_LAYERS + 1, /* and the reach of the surface */
    STERICOL_MOST_SEGMENTS = 2 * STERICOL_MOST_LAYERS - 1
};

typedef struct stericol_segment {
    size_t upper; /* numbers of limits */
    size_t lower;
} stericol_segment;

typedef struct stericol_layer_range {
    size_t first; /* segments first..last, last included */
    size_t last;
    size_t upper; /* numbers of limits */
    size_t lower;
} stericol_layer_range;

/* How a sweep's depths are cut. */
typedef struct stericol_cuts {
    size_t limit_count;
    double limit[STERICOL_MOST_LIMITS]; /* m, increasing */
    size_t segment_count;
    stericol_segment segment[STERICOL_MOST_SEGMENTS];
    size_t layer_count;
    stericol_layer_range layer[STERICOL_MOST_LAYERS];
    double deepest; /* m, the deepest lower limit */
} stericol_cuts;

/* How much room a sweep takes; counts of doubles unless said. */
typedef struct stericol_sizes {
    size_t stride; /* from plane to plane, >= count: see find_stride() */
    size_t planes; /* arrays [count] for the state, later for the results */
    size_t result_planes;
    bool carries;   /* the deepest states are kept to be carried down */
    size_t limits;  /* [limit][row], pressure only */
    size_t samples; /* splines only */
    size_t bytes;   /* all in all */
} stericol_sizes;

struct stericol_sweep {
    const stericol_loops *loops;
    stericol_water water;
    stericol_column_options options; /* its pointers are not used */
    stericol_cuts cuts;
    stericol_sizes sizes;
    size_t count;
    size_t row_length;
    size_t rows;
    double *gravity;  /* [rows], m/s2 at the surface; depth coordinate with rows of one column only */
    double *latitude; /* [rows] */
    double *scale;    /* [rows], 1e4/g, Pa per dbar over gravity; pressure coordinate only */
    double *limits;   /* [limit][rows], dbar; pressure coordinate only */
    double *reach;    /* [rows], the surface reach in dbar; pressure coordinate only */
    double *planes;   /* [plane][count]; the results take the place of the state when a column is finished */
    double *reached;  /* [count], coordinate down to which was integrated (samples: known when finished);
                             in the end the deepest depth used, m */
    double *floor;    /* [count], coordinate, INFINITY where unknown; NULL when not given */
    uint16_t *phase;  /* [count] */
    signed char *flags;    /* [count] */
    unsigned char *states; /* [layer][count] */
    double
        *samples; /* [count][5][levels]: positions, salinity and temperature of both epochs; splines only */
    uint32_t *sampled; /* [count], how many samples; splines only */
};

/* The planes of the state. */
static inline double *stericol_plane(const stericol_sweep *sweep, size_t plane)
{
    return sweep->planes + plane * sweep->sizes.stride;
}
static inline double *stericol_sum_plane(const stericol_sweep *sweep, size_t segment, size_t sum)
{
    return stericol_plane(sweep, segment * STERICOL_SUMS + sum);
}
/* Integrand at the last sample. */
static inline double *stericol_last_part(const stericol_sweep *sweep, size_t part)
{
    return stericol_plane(sweep, sweep->cuts.segment_count * STERICOL_SUMS + part);
}
/* Coordinate of the last sample (cells: middle of the last cell); -INFINITY before the first. */
static inline double *stericol_place(const stericol_sweep *sweep)
{
    return stericol_last_part(sweep, STERICOL_PARTS);
}
/* Coordinate where the integration began. */
static inline double *stericol_top(const stericol_sweep *sweep)
{
    return stericol_last_part(sweep, STERICOL_PARTS + 1);
}
/* How the column stands, STERICOL_STANDING_... */
static inline double *stericol_standing(const stericol_sweep *sweep)
{
    return stericol_last_part(sweep, STERICOL_PARTS + 2);
}
/* Last states: 0, 1 salinity and 2, 3 temperature of the earlier and later epoch; only when sizes.carries. */
static inline double *stericol_last_state(const stericol_sweep *sweep, size_t which)
{
    return stericol_last_part(sweep, STERICOL_PARTS + 3 + which);
}

static inline size_t stericol_row_of(const stericol_sweep *sweep, size_t column)
{
    return sweep->row_length == 1 ? column : column / sweep->row_length;
}
static inline double stericol_floor_of(const stericol_sweep *sweep, size_t column)
{
    return sweep->floor == NULL ? (double)INFINITY : sweep->floor[column];
}
/* A limit in the coordinate. */
static inline double stericol_limit_of(const stericol_sweep *sweep, size_t limit, size_t row)
{
    return sweep->limits == NULL ? sweep->cuts.limit[limit] : sweep->limits[limit * sweep->rows + row];
}
/* Between the coordinate and metres. */
double stericol_metres(const stericol_sweep *sweep, double coordinate, size_t row);
double stericol_coordinate_at(const stericol_sweep *sweep, double metres, size_t row);

/* How many columns from `from` on can be handled as one strip: within a row and within STERICOL_STRIP. */
size_t stericol_strip_length(const stericol_sweep *sweep, size_t from, size_t to);

/* Cuts depths by the layers; false when the options contradict themselves (*fault says how). */
bool stericol_cut_depths(const stericol_column_options *options, stericol_cuts *cuts, const char **fault);

/* Values of a strip or of points of one column, to be evaluated. */
typedef struct stericol_points {
    size_t count;    /* <= STERICOL_STRIP */
    double pressure; /* dbar, of all, when pressures is NULL */
    const double *pressures;
    const double *salinity[2];
    const double *temperature[2];
    const double *scale;              /* [count], see stericol_sweep.scale; NULL with depth coordinates */
    const double *averaged_volume[2]; /* all four or NULL, see stericol_sweep_level_record */
    const double *averaged_thermosteric;
    const double *averaged_halosteric;
} stericol_points;

/*
 * The integrands over the coordinate at some points, design.md section 2: fractions (depth) or metres per
 * dbar (pressure); heat in J/m3 or J/m2 per dbar; expansion in 1/K, in either coordinate.  NaN where a state
 * is NaN.
 */
void stericol_integrands(const stericol_sweep *sweep, const stericol_points *points,
                         double part[STERICOL_PARTS][STERICOL_STRIP]);

/* The factor of pressure coordinates for a strip: NULL with depth, else [count] in `buffer` or the sweep's
 * own. */
const double *stericol_strip_scale(const stericol_sweep *sweep, size_t from, size_t count,
                                   double buffer[STERICOL_STRIP]);

/*
 * Sets points->pressure or points->pressures (in `buffer`) for points of the columns from, from + 1 ... at
 * coordinates[count], or all at `coordinate` when coordinates is NULL.
 */
void stericol_strip_pressures(const stericol_sweep *sweep, size_t from, double coordinate,
                              const double *coordinates, stericol_points *points,
                              double buffer[STERICOL_STRIP]);

/* Adds a piece to the sums of the columns from, from + 1, ...; limits of layers cut it exactly. */
void stericol_add_piece(stericol_sweep *sweep, size_t from, size_t count, const stericol_piece *piece);

/*
 * Carries the deepest samples of a strip down: towards the sea floor by up to the bottom reach and, for
 * casts, to the limits of layers that are close.  Moves `reached`, adds to the sums.
 */
void stericol_carry_down(stericol_sweep *sweep, size_t from, size_t count);

/* How close is close enough for a cast: max(20 m, 2 %) of the limit, both in metres. */
bool stericol_close_for_cast(double limit, double reached);

/*
 * Replaces the sums of a column by those of splines through its samples.  Leaves them (linear between
 * samples) where there are fewer samples than the spline needs.  STERICOL_MEMORY leaves them too.
 */
stericol_status stericol_integrate_profile(stericol_sweep *sweep, size_t column);

#endif
