/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Columns whose salinity and temperature follow splines.  The integrand is evaluated on a fine axis that both
 * epochs share: Gauss-Legendre points in equal parts of every stretch between samples and limits, the parts
 * halved until the heights stand still.  Above the first and below the last sample the states are carried
 * unchanged.
 */
#include "column/sweep.h"

#include "numerics/spline.h"

#include <string.h>

/* Half the nodes and the weights of the five-point Gauss-Legendre rule on -1..1 (Abramowitz and Stegun 1964,
   table 25.4). */
enum { NODES = 5, MOST_PARTS = 64 };
static const double node[NODES] = {-0.9061798459386640, -0.5384693101056831, 0.0, 0.5384693101056831,
                                   0.9061798459386640};
static const double weight[NODES] = {0.2369268850561891, 0.4786286704993665, 0.5688888888888889,
                                     0.4786286704993665, 0.2369268850561891};
/* Refined until one halving changes no height by more than this, m; the promise is 1e-6 m. */
static const double fine_enough = 1e-8;

typedef struct splined {
    stericol_sweep *sweep;
    size_t column;
    size_t row;
    size_t count;              /* samples */
    const double *place;       /* [count] */
    stericol_spline *state[4]; /* salinity, salinity, temperature, temperature */
    double top;
    double reached;
} splined;

typedef double segment_sums[STERICOL_SUMS];

/* Values at the points of one batch. */
typedef struct batch {
    size_t count;
    double at[STERICOL_STRIP];
    double width[STERICOL_STRIP]; /* weight of the point in the coordinate */
} batch;

static void add_batch(const splined *profile, const batch *b, segment_sums sum)
{
    const stericol_sweep *sweep = profile->sweep;
    double values[4][STERICOL_STRIP], pressures[STERICOL_STRIP], scales[STERICOL_STRIP];
    double part[STERICOL_PARTS][STERICOL_STRIP];
    const double first = profile->place[0], last = profile->place[profile->count - 1];
    for (size_t i = 0; i < b->count; i++) {
        const double inside = b->at[i] < first ? first : b->at[i] > last ? last : b->at[i];
        for (size_t k = 0; k < 4; k++)
            values[k][i] = stericol_spline_value(profile->state[k], inside);
        if (sweep->scale != NULL)
            scales[i] = sweep->scale[profile->row];
    }
    if (sweep->scale == NULL)
        stericol_sea_pressure_array(sweep->latitude[profile->row], b->count, b->at, pressures);
    const stericol_points points = {
        .count = b->count,
        .pressures = sweep->scale == NULL ? pressures : b->at,
        .salinity = {values[0], values[1]},
        .temperature = {values[2], values[3]},
        .scale = sweep->scale == NULL ? NULL : scales,
    };
    stericol_integrands(sweep, &points, part);
    for (size_t i = 0; i < b->count; i++) {
        for (size_t p = 0; p < STERICOL_PARTS; p++)
            sum[p] += b->width[i] * part[p][i];
        sum[STERICOL_SUM_TURNOVER] += b->width[i] * fabs(part[STERICOL_PART_HEAT][i]);
    }
}

/* Adds the points of lo..hi, in `parts` equal parts, to the batch; empties it into `sum` when it is full. */
static void add_stretch(const splined *profile, batch *b, double lo, double hi, size_t parts,
                        segment_sums sum)
{
    const double half = 0.5 * (hi - lo) / (double)parts;
    for (size_t part = 0; part < parts; part++) {
        if (b->count + NODES > STERICOL_STRIP) {
            add_batch(profile, b, sum);
            b->count = 0;
        }
        const double middle = lo + half * (double)(2 * part + 1);
        for (size_t n = 0; n < NODES; n++) {
            b->at[b->count] = middle + half * node[n];
            b->width[b->count++] = half * weight[n];
        }
    }
}

/* The sums from lo to hi, cut at every sample between. */
static void integrate_segment(const splined *profile, double lo, double hi, size_t parts, segment_sums sum)
{
    batch b;
    b.count = 0;
    for (size_t s = 0; s < STERICOL_SUMS; s++)
        sum[s] = 0.0;
    for (size_t i = 0; i < profile->count && lo < hi; i++) {
        const double place = profile->place[i] < hi ? profile->place[i] : hi;
        if (place > lo) {
            add_stretch(profile, &b, lo, place, parts, sum);
            lo = place;
        }
    }
    if (lo < hi)
        add_stretch(profile, &b, lo, hi, parts, sum);
    if (b.count > 0)
        add_batch(profile, &b, sum);
}

static bool stands_still(const segment_sums coarse, const segment_sums fine)
{
    for (size_t p = STERICOL_PART_TOTAL; p <= STERICOL_PART_HALOSTERIC; p++)
        if (fabs(fine[p] - coarse[p]) > fine_enough)
            return false;
    return true;
}

static void integrate_all(const splined *profile)
{
    const stericol_sweep *sweep = profile->sweep;
    for (size_t k = 0; k < sweep->cuts.segment_count; k++) {
        const stericol_segment *segment = &sweep->cuts.segment[k];
        const double upper = stericol_limit_of(sweep, segment->upper, profile->row);
        const double lower = stericol_limit_of(sweep, segment->lower, profile->row);
        const double lo = upper > profile->top ? upper : profile->top;
        const double hi = lower < profile->reached ? lower : profile->reached;
        segment_sums coarse, fine;
        integrate_segment(profile, lo, hi, 1, fine);
        for (size_t parts = 2; parts <= MOST_PARTS; parts *= 2) {
            memcpy(coarse, fine, sizeof coarse);
            integrate_segment(profile, lo, hi, parts, fine);
            if (stands_still(coarse, fine))
                break;
        }
        for (size_t s = 0; s < STERICOL_SUMS; s++)
            stericol_sum_plane(sweep, k, s)[profile->column] = fine[s];
    }
}

stericol_status stericol_integrate_profile(stericol_sweep *sweep, size_t column)
{
    const stericol_spline_kind kind =
        sweep->options.vertical == STERICOL_VERTICAL_AKIMA ? STERICOL_SPLINE_AKIMA : STERICOL_SPLINE_STEFFEN;
    const size_t levels = sweep->options.levels;
    const double *sample = sweep->samples + column * 5 * levels;
    splined profile = {.sweep = sweep, .column = column, .row = stericol_row_of(sweep, column)};
    profile.count = sweep->sampled[column];
    profile.place = sample;
    profile.top = stericol_top(sweep)[column];
    profile.reached = sweep->reached[column];
    if (profile.count < stericol_spline_least(kind))
        return STERICOL_OK;
    stericol_status status = STERICOL_OK;
    for (size_t k = 0; k < 4 && status == STERICOL_OK; k++)
        status =
            stericol_spline_new(kind, profile.count, sample, sample + (1 + k) * levels, &profile.state[k]);
    if (status == STERICOL_OK)
        integrate_all(&profile);
    for (size_t k = 0; k < 4; k++)
        stericol_spline_free(profile.state[k]);
    return status;
}
