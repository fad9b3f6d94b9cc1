/* SPDX-License-Identifier: GPL-3.0-or-later */
/**
 * \file
 * The sweep: steric height change, heat content change and their kin for many water columns at once.
 *
 * The levels of two epochs are given from the surface down, one level at a time for as many columns as
 * wanted; the sweep keeps sums per column and never the levels themselves (splines excepted).  Use:
 *
 *     stericol_column_options options = stericol_column_options_default();
 *     options.water = water;                    then the choices and the layers
 *     stericol_sweep_new(context, &options, count, row_length, latitude, sea_floor, &sweep);
 *     for each level, from the surface down:    stericol_sweep_level(sweep, &record, 0, count);
 *     stericol_sweep_finish(sweep, 0, count);
 *     stericol_sweep_result(sweep, STERICOL_COLUMN_TOTAL, STERICOL_WHOLE_COLUMN);
 *     stericol_sweep_free(sweep);
 *
 * Conventions.  1 and 2 are the earlier and the later epoch; arrays of two hold {earlier, later}.  Depth is
 * in metres and sea pressure in dbar, both positive down.  NaN is the missing value.  A column is summed in
 * depth order by whoever handles its range: the result has the same bits however 0..count is cut.
 *
 * Speed.  Where several levels are at hand, take some thousand columns through all of them before the next
 * columns: the sums then stay in the cache, and a level costs half as much.
 */
#ifndef STERICOL_COLUMN_H
#define STERICOL_COLUMN_H

#include "stericol/status.h"

#include <stdbool.h>
#include <stddef.h>

#ifdef __cplusplus
extern "C" {
#endif

/** The equation of state with its constants; see stericol/water.h. */
typedef struct stericol_water stericol_water;

/** How the change of volume is shared out between heat and salt. */
typedef enum stericol_attribution {
    STERICOL_ATTRIBUTION_SYMMETRIC, /**< mean of both one-sided differences; closes exactly */
    STERICOL_ATTRIBUTION_EARLIER,   /**< one-sided from the earlier state; the remainder is given */
    STERICOL_ATTRIBUTION_LINEAR     /**< expansion and contraction at the mid state; the remainder is given */
} stericol_attribution;

/** What the values of a level stand for, and what lies between them. */
typedef enum stericol_vertical {
    STERICOL_VERTICAL_CELLS,   /**< means over cells with limits */
    STERICOL_VERTICAL_LINEAR,  /**< samples; the integrand is linear between them */
    STERICOL_VERTICAL_STEFFEN, /**< samples; salinity and temperature follow Steffen's monotone spline */
    STERICOL_VERTICAL_AKIMA    /**< samples; salinity and temperature follow Akima's spline */
} stericol_vertical;

/** What positions and limits of levels are measured in.  Layers, reaches and sea floor are always metres. */
typedef enum stericol_coordinate {
    STERICOL_COORDINATE_DEPTH,   /**< m */
    STERICOL_COORDINATE_PRESSURE /**< sea pressure, dbar */
} stericol_coordinate;

/** Where and why a column ends: code, value, the word of the result file's flag_meanings. */
#define STERICOL_COLUMN_FLAG_LIST(X)                                                                         \
    X(STERICOL_COLUMN_COMPLETE, 0, "complete")                                                               \
    X(STERICOL_COLUMN_SEA_FLOOR, 1, "sea_floor")                                                             \
    X(STERICOL_COLUMN_END_OF_DATA, 2, "end_of_data")                                                         \
    X(STERICOL_COLUMN_UNEQUAL, 3, "unequal")                                                                 \
    X(STERICOL_COLUMN_GAP, 4, "gap")                                                                         \
    X(STERICOL_COLUMN_NO_DATA, 5, "no_data")                                                                 \
    X(STERICOL_COLUMN_OUTSIDE_RANGE, 6, "outside_range")

#define STERICOL_COLUMN_FLAG_ENUM(code, value, word) code = (value),
typedef enum stericol_column_flag {
    STERICOL_COLUMN_FLAG_LIST(STERICOL_COLUMN_FLAG_ENUM) STERICOL_COLUMN_FLAGS /**< how many there are */
} stericol_column_flag;
#undef STERICOL_COLUMN_FLAG_ENUM

/** The word of a flag; "unknown" for a value that is none.  Never NULL. */
STERICOL_API const char *stericol_column_flag_word(int flag);

/** What is known about one layer in one column. */
typedef enum stericol_layer_state {
    STERICOL_LAYER_INCOMPLETE,     /**< left out: its results are NaN, and so are the whole column's */
    STERICOL_LAYER_COMPLETE,       /**< data reach its lower limit, the sea floor or (open layer) their end */
    STERICOL_LAYER_BELOW_SEA_FLOOR /**< NaN in the layer's results, zero in the column's */
} stericol_layer_state;

/** What can be asked of a finished column. */
typedef enum stericol_column_quantity {
    STERICOL_COLUMN_TOTAL,          /**< steric height change, m */
    STERICOL_COLUMN_THERMOSTERIC,   /**< its part from temperature, m */
    STERICOL_COLUMN_HALOSTERIC,     /**< its part from salinity, m */
    STERICOL_COLUMN_REMAINDER,      /**< total - thermosteric - halosteric, m; 0 when symmetric */
    STERICOL_COLUMN_HEAT,           /**< heat content change, J/m2 */
    STERICOL_COLUMN_EFFICIENCY,     /**< thermosteric / heat, m3/J; NaN where warming and cooling cancel */
    STERICOL_COLUMN_EXPANSION,      /**< mean thermal expansion at the mid state, 1/K */
    STERICOL_COLUMN_DEPTH,          /**< thickness integrated, m */
    STERICOL_COLUMN_HEAT_MAGNITUDE, /**< heat gained plus heat lost, J/m2: below 0.3 of it a ratio to the heat
                                       means nothing */
    STERICOL_COLUMN_QUANTITIES      /**< how many there are */
} stericol_column_quantity;

/** The layer number that stands for all layers together, each depth counted once. */
#define STERICOL_WHOLE_COLUMN ((size_t)-1)

/** A depth range; upper >= 0, lower > upper.  lower = INFINITY is the bottom, wherever the column ends. */
typedef struct stericol_layer {
    double upper; /**< m */
    double lower; /**< m */
} stericol_layer;

/** What is done; start from stericol_column_options_default(). */
typedef struct stericol_column_options {
    const stericol_water *water;      /**< copied; no default */
    stericol_attribution attribution; /**< default symmetric */
    stericol_vertical vertical;       /**< default linear */
    stericol_coordinate coordinate;   /**< default depth */
    double reference_density;         /**< kg/m3; 0 (default) is local: the fractional change of volume */
    double surface_reach; /**< m, default 20: how deep the first sample may lie to be carried up to 0 */
    double gap_reach;     /**< m; NAN (default): clamp(50 + 0.225 z, 50, 500), z the upper sample's depth */
    double bottom_reach;  /**< m, default 0: how far below the deepest sample a known floor may lie to be
                             carried to */
    /**
     * Default false: a grid, where only missing levels between valid ones make a gap and where a column that
     * stops above the axis' last level ends at the sea floor.  true: casts, where the spacing of any two
     * samples is judged, only `sea_floor` can say that the floor is reached, and a last sample within max(20
     * m, 2 %) of a layer's limit (or of the floor) completes it.
     */
    bool cast;
    /** Only for the splines, which keep the samples: the most levels that will be given.  0 otherwise. */
    size_t levels;
    const stericol_layer *layers; /**< default one, 0..bottom; copied by stericol_sweep_new() */
    size_t layer_count;           /**< layers may overlap and leave holes between them */
} stericol_column_options;

/** The defaults named above. */
STERICOL_API stericol_column_options stericol_column_options_default(void);

/** One level of both epochs.  Every pointer is NULL or an array [count], indexed by column; zero-initialise.
 */
typedef struct stericol_sweep_level_record {
    double position; /**< of the sample; cells ignore it and take the middle of the limits */
    double upper;    /**< limits of the cell; cells only */
    double lower;
    /** Per column instead of shared (terrain-following levels, partial cells, casts); NaN: no level there. */
    const double *positions;
    const double *uppers;
    const double *lowers;
    /**
     * The states in the equation's own kinds.  NaN is missing; an infinity (either sign) is a value rejected
     * as outside physical limits: missing as well, but remembered for the flag.
     */
    const double *salinity[2];
    const double *temperature[2];
    bool last; /**< the axis has no deeper level */
    /**
     * All four or none (then the volumes come from the states): mean specific volumes of the epochs and the
     * attributed differences, m3/kg, for integrals averaged over an epoch's times.  The states then still
     * serve heat and expansion.  Not with splines.  Either all levels have them or none.
     */
    const double *averaged_volume[2];
    const double *averaged_thermosteric;
    const double *averaged_halosteric;
} stericol_sweep_level_record;

/** Sums of many columns between two calls of stericol_sweep_level(). */
typedef struct stericol_sweep stericol_sweep;

/**
 * Begins a sweep over `count` columns.
 *
 * row_length      runs of so many consecutive columns share one latitude; count is a multiple of it
 * latitude        [count / row_length], degrees north
 * sea_floor       [count], m, NaN where unknown, <= 0 where land; NULL: unknown everywhere.  Copied.
 *
 * STERICOL_USAGE: options that contradict themselves (a layer with lower <= upper, no layer, a negative
 * reach, splines without `levels`).  STERICOL_MEMORY.  On failure *sweep is NULL.
 */
STERICOL_API stericol_status stericol_sweep_new(stericol_context *context,
                                                const stericol_column_options *options, size_t count,
                                                size_t row_length, const double *latitude,
                                                const double *sea_floor, stericol_sweep **sweep);

/** Frees a sweep; NULL is allowed. */
STERICOL_API void stericol_sweep_free(stericol_sweep *sweep);

/**
 * The memory in bytes that stericol_sweep_new() would take, `with_sea_floor` when sea_floor will be given;
 * the largest size_t when that cannot be counted.
 */
STERICOL_API size_t stericol_sweep_bytes(const stericol_column_options *options, size_t count,
                                         size_t row_length, bool with_sea_floor);

/**
 * Adds one level to the columns from..to (to excluded).  Levels come from the surface down, the same number
 * of calls for every column; different column ranges may be handled by different threads at the same time,
 * each range at its own level.  Positions must increase with every level where the column has values; where
 * they do not, the level counts as missing.
 *
 * Levels that lie wholly below the deepest layer's lower limit need not be given, but the first sample beyond
 * the limit must be (samples are linked by their integrand).
 */
STERICOL_API void stericol_sweep_level(stericol_sweep *sweep, const stericol_sweep_level_record *record,
                                       size_t from, size_t to);

/**
 * Ends the columns from..to: carries the deepest sample down, decides flags and layer states, fills results.
 * Ranges as above; each column once, after its last level.
 *
 * STERICOL_MEMORY (splines only): the columns not yet done have no valid results.
 */
STERICOL_API stericol_status stericol_sweep_finish(stericol_sweep *sweep, size_t from, size_t to);

/** How many columns were asked for, and how many layers. */
STERICOL_API size_t stericol_sweep_count(const stericol_sweep *sweep);
STERICOL_API size_t stericol_sweep_layer_count(const stericol_sweep *sweep);

/**
 * Results of finished columns: [count], NaN where missing, owned by the sweep.  `layer` is a layer's number
 * or STERICOL_WHOLE_COLUMN.  A layer is NaN unless it is complete; the whole column is NaN unless every layer
 * is complete or below the sea floor, and at least one is complete.
 */
STERICOL_API const double *stericol_sweep_result(const stericol_sweep *sweep,
                                                 stericol_column_quantity quantity, size_t layer);

/** The stericol_column_flag of each finished column, [count]. */
STERICOL_API const signed char *stericol_sweep_flags(const stericol_sweep *sweep);

/** The stericol_layer_state of each finished column, [count]. */
STERICOL_API const unsigned char *stericol_sweep_layer_state(const stericol_sweep *sweep, size_t layer);

/** The deepest depth that entered any result of the finished columns, m; NaN when there is none. */
STERICOL_API double stericol_sweep_deepest(const stericol_sweep *sweep);

#ifdef __cplusplus
}
#endif

#endif
