/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The loops over the columns of a strip that are worth vectors.  loops_body.h is compiled once for each
 * instruction set.  No path fuses a product with a sum, so that all give the same bits.
 *
 * Arrays have `count` elements, <= STERICOL_STRIP, and do not overlap.  "0 or NaN" arrays are masks that can
 * be added: the sum is 0 where all are.
 */
#ifndef STERICOL_COLUMN_LOOPS_H
#define STERICOL_COLUMN_LOOPS_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* What is integrated over the coordinate. */
enum {
    STERICOL_PART_TOTAL,
    STERICOL_PART_THERMOSTERIC,
    STERICOL_PART_HALOSTERIC,
    STERICOL_PART_HEAT,
    STERICOL_PART_EXPANSION,
    STERICOL_PARTS
};
/* Sums are the integrals of the parts, and of the absolute value of the heat part. */
enum { STERICOL_SUM_TURNOVER = STERICOL_PARTS, STERICOL_SUMS };

/* What is remembered of a column from level to level; bits of `phase`. */
enum {
    STERICOL_PHASE_STARTED = 1,
    STERICOL_PHASE_GAP = 2,       /* ended by a gap */
    STERICOL_PHASE_FLOOR = 4,     /* ended at the sea floor that was given */
    STERICOL_PHASE_HOLE = 8,      /* no common values since the last sample */
    STERICOL_PHASE_REJECTED = 16, /* the level right below the last sample was rejected */
    STERICOL_PHASE_AXIS_END = 32, /* the last sample is the axis' last level */
    STERICOL_PHASE_EARLIER_DEEPER = 64,
    STERICOL_PHASE_LATER_DEEPER = 128,
    STERICOL_PHASE_AVERAGED = 256, /* integrands were given, not evaluated */
    /* Any of these: the common water goes on, or may go on, below the end, so that the end is no sea floor.
     */
    STERICOL_PHASE_ENDS_ABOVE_FLOOR = STERICOL_PHASE_GAP | STERICOL_PHASE_REJECTED |
                                      STERICOL_PHASE_EARLIER_DEEPER | STERICOL_PHASE_LATER_DEEPER
};

/* How a column stands before a level; the phase in short. */
#define STERICOL_STANDING_UNDER_WAY 0.0 /* started, and nothing else to say */
#define STERICOL_STANDING_OUT 1.0       /* not started, ended, or in a hole */
#define STERICOL_STANDING_SPECIAL 2.0   /* anything else */

/*
 * A piece of coordinate in each column of a strip: lo..hi (nothing where hi <= lo or use is 0) of the
 * integrand that is linear through (upper, upper_part) and (lower, lower_part).
 */
typedef struct stericol_piece {
    const double *use; /* 1 or 0 */
    const double *lo;
    const double *hi;
    const double *upper;
    const double *lower;
    const double *upper_part[STERICOL_PARTS];
    const double *lower_part[STERICOL_PARTS];
} stericol_piece;

/* What the parts are made of; see integrand.c. */
typedef struct stericol_part_sources {
    const double *volume[2];
    const double *thermosteric; /* m3/kg */
    const double *halosteric;
    const double *temperature[2];
    const double *capacity; /* J/(kg K); NULL: the constant of conservative temperature */
    const double *by_temperature;
    const double *mid_volume;
    const double *mass;   /* kg per unit of the coordinate */
    const double *height; /* what makes height of a difference of volume */
} stericol_part_sources;

typedef struct stericol_loops {
    const char *name;
    /*
     * earlier, later: 0 where the salinity and temperature of the epoch and the position are finite and the
     * position lies below `place`, else NaN.  Returns in how many columns both are 0.
     */
    double (*find_valid)(size_t count, const double *const salinity[2], const double *const temperature[2],
                         const double *position, const double *place, double *earlier, double *later);
    /* unsound: 0 where all parts are finite, else NaN; use: 1 where it and both masks are 0, else 0. */
    void (*find_use)(size_t count, const double *const part[STERICOL_PARTS], const double *earlier,
                     const double *later, double *unsound, double *use);
    /*
     * In how many columns something changes with this level, given how they stand: not where one that is
     * under way has one more sample (*steady counts those; none when `always`), nor where one that is out has
     * one more level without values.
     */
    double (*count_events)(size_t count, const double *standing, const double *earlier, const double *later,
                           const double *unsound, bool always, double *steady);
    /* mean = (a + b)/2 */
    void (*average)(size_t count, const double *a, const double *b, double *mean);
    /* mass = 2/(a + b) */
    void (*inverse_average)(size_t count, const double *a, const double *b, double *mass);
    /* change = ((a - b) + (c - d))/2 */
    void (*mean_difference)(size_t count, const double *a, const double *b, const double *c, const double *d,
                            double *change);
    void (*find_parts)(size_t count, const stericol_part_sources *sources,
                       double *const part[STERICOL_PARTS]);
    /* The lowest lo and highest hi where the piece is used; *lowest > *highest when it is nowhere. */
    void (*find_extent)(size_t count, const stericol_piece *piece, double *lowest, double *highest);
    /*
     * What of the piece lies between `above` and `below`: its width, 0 for none, and its middle as a share of
     * the way from `upper` to `lower` (exactly 1/2 when that way is the piece).
     */
    void (*cut)(size_t count, const stericol_piece *piece, const double *above, const double *below,
                double *width, double *share);
    /* Adds the integrals over a cut to the sums.  Middle times width is the exact integral of what is linear.
     */
    void (*add)(size_t count, const stericol_piece *piece, const double *width, const double *share,
                double *const sum[STERICOL_SUMS]);
    /* target = values where use is 1 */
    void (*replace)(size_t count, const double *use, const double *values, double *target);
} stericol_loops;

/* The fastest path that this processor has. */
const stericol_loops *stericol_loops_best(void);

/* The path of that name ("avx512", "avx2", "plain"), for tests; NULL where this processor or build lacks it.
 */
const stericol_loops *stericol_loops_named(const char *name);

#endif
