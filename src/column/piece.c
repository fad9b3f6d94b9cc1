/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The one place where sums grow. */
#include "column/sweep.h"

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

void stericol_add_piece(stericol_sweep *sweep, size_t from, size_t count, const stericol_piece *piece)
{
    const stericol_loops *loops = sweep->loops;
    double above[STERICOL_STRIP], below[STERICOL_STRIP], width[STERICOL_STRIP], share[STERICOL_STRIP];
    double *sum[STERICOL_SUMS], lowest, highest;
    const bool own_limits = sweep->limits != NULL && sweep->row_length == 1;
    const size_t row = stericol_row_of(sweep, from);
    loops->find_extent(count, piece, &lowest, &highest);
    for (size_t k = 0; k < sweep->cuts.segment_count && lowest < highest; k++) {
        const stericol_segment *segment = &sweep->cuts.segment[k];
        /* Nothing of the strip lies in this segment: nothing would be added. */
        if (!own_limits && (lowest >= stericol_limit_of(sweep, segment->lower, row) ||
                            highest <= stericol_limit_of(sweep, segment->upper, row)))
            continue;
        loops->cut(count, piece, limits_of(sweep, segment->upper, from, count, above),
                   limits_of(sweep, segment->lower, from, count, below), width, share);
        for (size_t s = 0; s < STERICOL_SUMS; s++)
            sum[s] = stericol_sum_plane(sweep, k, s) + from;
        loops->add(count, piece, width, share, sum);
    }
}
