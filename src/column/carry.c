/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The deepest sample is carried down: to a sea floor within reach, and for casts to limits that are close. */
#include "column/sweep.h"

#include <string.h>

/* design.md, section 2: a cast is complete within max(20 m, 2 %) of a limit or of the sea floor. */
static const double cast_metres = 20.0, cast_share = 0.02;

bool stericol_close_for_cast(double limit, double reached)
{
    const double share = cast_share * limit;
    return limit - reached <= (share > cast_metres ? share : cast_metres);
}

/* Where a column is carried to, in the coordinate; where it ends already when it is not carried. */
static double target_of(const stericol_sweep *sweep, size_t column)
{
    const double end = sweep->reached[column];
    const unsigned phase = sweep->phase[column];
    if ((phase & STERICOL_PHASE_STARTED) == 0 || (phase & STERICOL_PHASE_FLOOR) != 0)
        return end;
    const size_t row = stericol_row_of(sweep, column);
    const double floor = stericol_floor_of(sweep, column);
    const double reached = stericol_metres(sweep, end, row);
    double target = end;
    /* As at the surface: all the way or not at all, so that no water is made up above a floor far below; and
       not at all where the end is known not to be the floor. */
    const bool open = (phase & STERICOL_PHASE_ENDS_ABOVE_FLOOR) != 0;
    if (isfinite(floor) && !open &&
        stericol_metres(sweep, floor, row) - reached <= sweep->options.bottom_reach)
        target = floor > end ? floor : end;
    for (size_t k = 0; sweep->options.cast && k < sweep->cuts.layer_count; k++) {
        const size_t limit = sweep->cuts.layer[k].lower;
        const double metres = sweep->cuts.limit[limit];
        if (metres > reached && isfinite(metres) && stericol_close_for_cast(metres, reached)) {
            const double coordinate = stericol_limit_of(sweep, limit, row);
            const double cut = coordinate < floor ? coordinate : open ? end : floor;
            target = cut > target ? cut : target;
        }
    }
    return target;
}

/* The integrand of the deepest water at `at`; what was given as an average is carried unchanged. */
static void evaluate_at(const stericol_sweep *sweep, size_t from, size_t count, const double *at,
                        double part[STERICOL_PARTS][STERICOL_STRIP])
{
    double scales[STERICOL_STRIP], pressures[STERICOL_STRIP];
    stericol_points points = {.count = count};
    points.scale = stericol_strip_scale(sweep, from, count, scales);
    for (size_t epoch = 0; epoch < 2; epoch++) {
        points.salinity[epoch] = stericol_last_state(sweep, epoch) + from;
        points.temperature[epoch] = stericol_last_state(sweep, 2 + epoch) + from;
    }
    stericol_strip_pressures(sweep, from, 0.0, at, &points, pressures);
    stericol_integrands(sweep, &points, part);
    for (size_t p = 0; p < STERICOL_PARTS; p++) {
        const double *last = stericol_last_part(sweep, p) + from;
        for (size_t i = 0; i < count; i++)
            part[p][i] = (sweep->phase[from + i] & STERICOL_PHASE_AVERAGED) != 0 ? last[i] : part[p][i];
    }
}

void stericol_carry_down(stericol_sweep *sweep, size_t from, size_t count)
{
    if (!sweep->sizes.carries)
        return;
    const bool cells = sweep->options.vertical == STERICOL_VERTICAL_CELLS;
    double target[STERICOL_STRIP], at[STERICOL_STRIP], use[STERICOL_STRIP];
    double part[STERICOL_PARTS][STERICOL_STRIP];
    double *reached = sweep->reached + from;
    stericol_piece piece;
    bool any = false;
    for (size_t i = 0; i < count; i++) {
        target[i] = target_of(sweep, from + i);
        any = any || target[i] > reached[i];
        use[i] = target[i] > reached[i] ? 1.0 : 0.0;
        at[i] = cells ? 0.5 * (reached[i] + target[i]) : target[i];
    }
    if (!any)
        return;
    evaluate_at(sweep, from, count, at, part);
    piece.use = use;
    piece.lo = piece.upper = reached;
    piece.hi = piece.lower = target;
    for (size_t p = 0; p < STERICOL_PARTS; p++) {
        piece.upper_part[p] = cells ? part[p] : stericol_last_part(sweep, p) + from;
        piece.lower_part[p] = part[p];
    }
    stericol_add_piece(sweep, from, count, &piece);
    for (size_t i = 0; i < count; i++) {
        if (target[i] > reached[i] && target[i] >= stericol_floor_of(sweep, from + i))
            sweep->phase[from + i] = (uint16_t)(sweep->phase[from + i] | STERICOL_PHASE_FLOOR);
        reached[i] = target[i];
    }
}
