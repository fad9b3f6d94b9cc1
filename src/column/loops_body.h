/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The body of loops.h.  A file that includes this defines STERICOL_LOOPS (the table's name) and
 * STERICOL_LOOPS_NAME (a text), and is compiled without contraction.
 *
 * Columns that take no part may hold NaN: a select keeps it out, a product with zero would not.
 */
#include "column/loops.h"

#include "stericol/water.h"

#include <math.h>

#define INLINE static inline __attribute__((always_inline))

static double find_valid(size_t count, const double *const salinity[2], const double *const temperature[2],
                         const double *position, const double *place, double *earlier, double *later)
{
    const double *s1 = salinity[0], *s2 = salinity[1], *t1 = temperature[0], *t2 = temperature[1];
    double both = 0.0;
#pragma omp simd reduction(+ : both)
    for (size_t i = 0; i < count; i++) {
        /* x - x is 0 for what is finite and NaN for the rest. */
        const double at = position[i];
        const double here = at > place[i] ? at - at : (double)NAN;
        const double first = (s1[i] - s1[i]) + (t1[i] - t1[i]) + here;
        const double second = (s2[i] - s2[i]) + (t2[i] - t2[i]) + here;
        earlier[i] = first;
        later[i] = second;
        both += first + second <= 0.0 ? 1.0 : 0.0;
    }
    return both;
}

static void find_use(size_t count, const double *const part[STERICOL_PARTS], const double *earlier,
                     const double *later, double *unsound, double *use)
{
    const double *p0 = part[0], *p1 = part[1], *p2 = part[2], *p3 = part[3], *p4 = part[4];
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const double wild =
            (p0[i] - p0[i]) + (p1[i] - p1[i]) + (p2[i] - p2[i]) + (p3[i] - p3[i]) + (p4[i] - p4[i]);
        unsound[i] = wild;
        use[i] = wild + earlier[i] + later[i] <= 0.0 ? 1.0 : 0.0;
    }
}

static double count_events(size_t count, const double *standing, const double *earlier, const double *later,
                           const double *unsound, bool always, double *steady)
{
    const double welcome = always ? 0.0 : 1.0;
    double quiet = 0.0, going = 0.0;
#pragma omp simd reduction(+ : quiet, going)
    for (size_t i = 0; i < count; i++) {
        const double one = earlier[i], two = later[i], state = standing[i], wild = unsound[i];
        const double under_way = state <= STERICOL_STANDING_UNDER_WAY ? welcome : 0.0;
        const double out = fabs(state - STERICOL_STANDING_OUT) <= 0.0 ? 1.0 : 0.0;
        const double goes_on = one + two + wild <= 0.0 ? under_way : 0.0;
        const double without_first = one <= 0.0 ? 0.0 : out;
        const double stays_out = two <= 0.0 ? 0.0 : without_first;
        quiet += goes_on + stays_out;
        going += goes_on;
    }
    *steady = going;
    return (double)count - quiet;
}

static void average(size_t count, const double *a, const double *b, double *mean)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++)
        mean[i] = 0.5 * (a[i] + b[i]);
}

static void inverse_average(size_t count, const double *a, const double *b, double *mass)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++)
        mass[i] = 1.0 / (0.5 * (a[i] + b[i]));
}

static void mean_difference(size_t count, const double *a, const double *b, const double *c, const double *d,
                            double *change)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++)
        change[i] = 0.5 * ((a[i] - b[i]) + (c[i] - d[i]));
}

static void find_parts(size_t count, const stericol_part_sources *sources, double *const part[STERICOL_PARTS])
{
    const double *v1 = sources->volume[0], *v2 = sources->volume[1];
    const double *t1 = sources->temperature[0], *t2 = sources->temperature[1];
    const double *warmed = sources->thermosteric, *salted = sources->halosteric;
    const double *slope = sources->by_temperature, *middle = sources->mid_volume;
    const double *mass = sources->mass, *height = sources->height, *capacity = sources->capacity;
    double *total = part[STERICOL_PART_TOTAL], *thermosteric = part[STERICOL_PART_THERMOSTERIC];
    double *halosteric = part[STERICOL_PART_HALOSTERIC], *heat = part[STERICOL_PART_HEAT];
    double *expansion = part[STERICOL_PART_EXPANSION];
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        total[i] = (v2[i] - v1[i]) * height[i];
        thermosteric[i] = warmed[i] * height[i];
        halosteric[i] = salted[i] * height[i];
        heat[i] = STERICOL_HEAT_CAPACITY * (t2[i] - t1[i]) * mass[i];
        expansion[i] = slope[i] / middle[i];
    }
    if (capacity == NULL)
        return;
#pragma omp simd
    for (size_t i = 0; i < count; i++)
        heat[i] = capacity[i] * (t2[i] - t1[i]) * mass[i];
}

enum { LANES = 8 };

INLINE void widen_extent(size_t lanes, const double *use, const double *lo, const double *hi,
                         double least[LANES], double most[LANES])
{
#pragma omp simd
    for (size_t lane = 0; lane < lanes; lane++) {
        const double first = lo[lane], last = hi[lane];
        const double width = use[lane] > 0.0 ? last - first : 0.0;
        const double from = width > 0.0 ? first : (double)INFINITY;
        const double to = width > 0.0 ? last : -(double)INFINITY;
        least[lane] = from < least[lane] ? from : least[lane];
        most[lane] = to > most[lane] ? to : most[lane];
    }
}

/* In lanes of its own making: not every compiler dares to reorder a least or greatest of numbers that may be
 * NaN. */
static void find_extent(size_t count, const stericol_piece *piece, double *lowest, double *highest)
{
    const double *use = piece->use, *lo = piece->lo, *hi = piece->hi;
    double least[LANES], most[LANES];
    size_t i = 0;
    for (size_t lane = 0; lane < LANES; lane++) {
        least[lane] = (double)INFINITY;
        most[lane] = -(double)INFINITY;
    }
    for (; i + LANES <= count; i += LANES)
        widen_extent(LANES, use + i, lo + i, hi + i, least, most);
    widen_extent(count - i, use + i, lo + i, hi + i, least, most);
    *lowest = (double)INFINITY;
    *highest = -(double)INFINITY;
    for (size_t lane = 0; lane < LANES; lane++) {
        *lowest = least[lane] < *lowest ? least[lane] : *lowest;
        *highest = most[lane] > *highest ? most[lane] : *highest;
    }
}

static void cut(size_t count, const stericol_piece *piece, const double *above, const double *below,
                double *width, double *share)
{
    const double *use = piece->use, *from = piece->lo, *to = piece->hi;
    const double *upper = piece->upper, *lower = piece->lower;
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        /* Everything is loaded before it is chosen from, or the compiler would branch on the loads. */
        const double first = from[i], last = to[i], from_here = above[i], to_there = below[i];
        const double start = upper[i], end = lower[i], used = use[i];
        const double lo = first > from_here ? first : from_here;
        const double hi = last < to_there ? last : to_there;
        const double span = end - start;
        const double way = (0.5 * (lo + hi) - start) / span;
        const double some = span > 0.0 ? way : 0.0;
        const double wide = hi > lo ? hi - lo : 0.0;
        const double outside = lo <= start ? hi : -(double)INFINITY;
        width[i] = used > 0.0 ? wide : 0.0;
        share[i] = outside >= end ? 0.5 : some;
    }
}

INLINE double term_of(double width, double share, double upper, double lower)
{
    const double term = width * (upper + share * (lower - upper));
    return width > 0.0 ? term : 0.0;
}

static void add(size_t count, const stericol_piece *piece, const double *width, const double *share,
                double *const sum[STERICOL_SUMS])
{
    const double *u0 = piece->upper_part[0], *u1 = piece->upper_part[1], *u2 = piece->upper_part[2];
    const double *u3 = piece->upper_part[3], *u4 = piece->upper_part[4];
    const double *l0 = piece->lower_part[0], *l1 = piece->lower_part[1], *l2 = piece->lower_part[2];
    const double *l3 = piece->lower_part[3], *l4 = piece->lower_part[4];
    double *s0 = sum[0], *s1 = sum[1], *s2 = sum[2], *s3 = sum[3], *s4 = sum[4], *s5 = sum[5];
    _Static_assert(STERICOL_PART_HEAT == 3 && STERICOL_SUM_TURNOVER == 5, "the turnover is made of part 3");
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const double w = width[i], x = share[i];
        s0[i] += term_of(w, x, u0[i], l0[i]);
        s1[i] += term_of(w, x, u1[i], l1[i]);
        s2[i] += term_of(w, x, u2[i], l2[i]);
        s3[i] += term_of(w, x, u3[i], l3[i]);
        s4[i] += term_of(w, x, u4[i], l4[i]);
        /* The absolute value is taken at the samples and is linear between them, as everything else. */
        s5[i] += term_of(w, x, fabs(u3[i]), fabs(l3[i]));
    }
}

static void replace(size_t count, const double *use, const double *values, double *target)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const double before = target[i], after = values[i];
        target[i] = use[i] > 0.0 ? after : before;
    }
}

extern const stericol_loops STERICOL_LOOPS;
const stericol_loops STERICOL_LOOPS = {
    .name = STERICOL_LOOPS_NAME,
    .find_valid = find_valid,
    .find_use = find_use,
    .count_events = count_events,
    .average = average,
    .inverse_average = inverse_average,
    .mean_difference = mean_difference,
    .find_parts = find_parts,
    .find_extent = find_extent,
    .cut = cut,
    .add = add,
    .replace = replace,
};
