/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The one place where sums grow. */
#include "column/sweep.h"

/* The part of a piece that lies in a segment, in each column: its width, and its middle as a share of the way
   from `upper` to `lower`. */
typedef struct cut {
    double width[STERICOL_STRIP];
    double share[STERICOL_STRIP];
} cut;

/* Limits of a segment for each column of the strip. */
static const double *limits_of(const stericol_sweep *sweep, size_t limit, size_t from, size_t count,
                               double buffer[STERICOL_STRIP])
{
    if (sweep->limits != NULL && sweep->row_length == 1)
        return sweep->limits + limit * sweep->rows + from;
    const double value = stericol_limit_of(sweep, limit, stericol_row_of(sweep, from));
    for (size_t i = 0; i < count; i++)
        buffer[i] = value;
    return buffer;
}

/* False when the segment holds nothing of the piece in any column. */
static bool cut_piece(const stericol_piece *piece, size_t count, const double *above, const double *below,
                      cut *c)
{
    double widest = 0.0;
#pragma omp simd reduction(max : widest)
    for (size_t i = 0; i < count; i++) {
        const double lo = piece->lo[i] > above[i] ? piece->lo[i] : above[i];
        const double hi = piece->hi[i] < below[i] ? piece->hi[i] : below[i];
        const double width = hi > lo ? hi - lo : 0.0;
        const double span = piece->lower[i] - piece->upper[i];
        const double share = (0.5 * (lo + hi) - piece->upper[i]) / span;
        c->width[i] = width;
        c->share[i] = span > 0.0 ? share : 0.0;
        widest = width > widest ? width : widest;
    }
    return widest > 0.0;
}

/* Middle times width is the exact integral of what is linear.  Columns that take no part may hold NaN: a
   select keeps it out, a product with zero would not. */
static void add_part(const cut *c, size_t count, const double *upper, const double *lower, double *sum)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const double middle = upper[i] + c->share[i] * (lower[i] - upper[i]);
        const double term = c->width[i] * middle;
        sum[i] += c->width[i] > 0.0 ? term : 0.0;
    }
}

/* The absolute value is taken at the samples and is linear between them, as everything else. */
static void add_turnover(const cut *c, size_t count, const double *upper, const double *lower, double *sum)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const double first = fabs(upper[i]);
        const double middle = first + c->share[i] * (fabs(lower[i]) - first);
        const double term = c->width[i] * middle;
        sum[i] += c->width[i] > 0.0 ? term : 0.0;
    }
}

void stericol_add_piece(stericol_sweep *sweep, size_t from, size_t count, const stericol_piece *piece)
{
    double above[STERICOL_STRIP], below[STERICOL_STRIP];
    cut c;
    for (size_t k = 0; k < sweep->cuts.segment_count; k++) {
        const stericol_segment *segment = &sweep->cuts.segment[k];
        if (!cut_piece(piece, count, limits_of(sweep, segment->upper, from, count, above),
                       limits_of(sweep, segment->lower, from, count, below), &c))
            continue;
        for (size_t p = 0; p < STERICOL_PARTS; p++)
            add_part(&c, count, piece->upper_part[p], piece->lower_part[p],
                     stericol_sum_plane(sweep, k, p) + from);
        add_turnover(&c, count, piece->upper_part[STERICOL_PART_HEAT], piece->lower_part[STERICOL_PART_HEAT],
                     stericol_sum_plane(sweep, k, STERICOL_SUM_TURNOVER) + from);
    }
}
