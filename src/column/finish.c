/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The end of a column: where and why it ends, which layers are complete, the results. */
#include "column/sweep.h"

#include <assert.h>
#include <string.h>

enum { BLOCK = 32 }; /* columns whose planes are fetched together */

/* design.md, section 2: below this share of what was turned over, warming and cooling cancel. */
static const double least_share_of_heat = 0.3;

/* A column when its last level is in.  Positions in the coordinate, and in metres where they say so. */
typedef struct ending {
    size_t column;
    size_t row;
    unsigned phase;
    bool started;
    bool at_floor; /* the data reach the sea floor */
    double top;
    double reached;
    double floor; /* INFINITY where unknown */
    double top_metres;
    double reached_metres;
    double sum[STERICOL_MOST_SEGMENTS][STERICOL_SUMS];
    stericol_layer_state state[STERICOL_MOST_LAYERS];
} ending;

/* Whether the floor is reached: by the bathymetry where it is known, else, on a grid, because values stop
   above the axis' last level in both epochs alike. */
static bool is_at_floor(const stericol_sweep *sweep, const ending *end)
{
    if ((end->phase & STERICOL_PHASE_FLOOR) != 0)
        return true;
    if (isfinite(end->floor))
        return sweep->options.cast && (end->phase & STERICOL_PHASE_ENDS_ABOVE_FLOOR) == 0 &&
               stericol_close_for_cast(stericol_metres(sweep, end->floor, end->row), end->reached_metres);
    const unsigned against = STERICOL_PHASE_ENDS_ABOVE_FLOOR | STERICOL_PHASE_AXIS_END;
    return !sweep->options.cast && (end->phase & against) == 0;
}

static void find_ending(const stericol_sweep *sweep, size_t column, ending *end)
{
    end->column = column;
    end->row = stericol_row_of(sweep, column);
    end->phase = sweep->phase[column];
    end->started = (end->phase & STERICOL_PHASE_STARTED) != 0;
    end->top = stericol_top(sweep)[column];
    end->reached = sweep->reached[column];
    end->floor = stericol_floor_of(sweep, column);
    end->top_metres = stericol_metres(sweep, end->top, end->row);
    end->reached_metres = stericol_metres(sweep, end->reached, end->row);
    end->at_floor = end->started && is_at_floor(sweep, end);
    for (size_t k = 0; k < sweep->cuts.segment_count; k++)
        for (size_t s = 0; s < STERICOL_SUMS; s++)
            end->sum[k][s] = stericol_sum_plane(sweep, k, s)[column];
}

static const double float_rounding = 1e-6;

static stericol_layer_state layer_state_of(const stericol_sweep *sweep, const ending *end,
                                           const stericol_layer_range *layer)
{
    if (!end->started)
        return STERICOL_LAYER_INCOMPLETE;
    const double upper = stericol_limit_of(sweep, layer->upper, end->row);
    const double lower = stericol_limit_of(sweep, layer->lower, end->row);
    const double bottom = end->at_floor ? end->reached : end->floor;
    if (upper >= bottom)
        return STERICOL_LAYER_BELOW_SEA_FLOOR;
    if (end->top > upper || !(end->reached > upper))
        return STERICOL_LAYER_INCOMPLETE;
    /* An open layer is complete wherever the data end; the flag says where that is. */
    /* A limit stored as float may fall short of the metre that is meant. */
    if (end->reached >= lower - float_rounding * lower || end->at_floor || !isfinite(lower))
        return STERICOL_LAYER_COMPLETE;
    return STERICOL_LAYER_INCOMPLETE;
}

static bool reaches_all(const stericol_sweep *sweep, const ending *end)
{
    for (size_t k = 0; k < sweep->cuts.layer_count; k++)
        if (end->state[k] != STERICOL_LAYER_COMPLETE ||
            !(end->reached >= stericol_limit_of(sweep, sweep->cuts.layer[k].lower, end->row)))
            return false;
    return true;
}

/* What is certain comes first; then the cause nearest to the end. */
static stericol_column_flag flag_of(const stericol_sweep *sweep, const ending *end)
{
    if (!end->started)
        return STERICOL_COLUMN_NO_DATA;
    if (reaches_all(sweep, end))
        return STERICOL_COLUMN_COMPLETE;
    if (end->at_floor)
        return STERICOL_COLUMN_SEA_FLOOR;
    if ((end->phase & STERICOL_PHASE_GAP) != 0)
        return STERICOL_COLUMN_GAP;
    if ((end->phase & STERICOL_PHASE_REJECTED) != 0)
        return STERICOL_COLUMN_OUTSIDE_RANGE;
    if ((end->phase & (STERICOL_PHASE_EARLIER_DEEPER | STERICOL_PHASE_LATER_DEEPER)) != 0)
        return STERICOL_COLUMN_UNEQUAL;
    return STERICOL_COLUMN_END_OF_DATA;
}

/* How much of upper..lower lies in top..reached. */
static double overlap(double upper, double lower, double top, double reached)
{
    const double lo = upper > top ? upper : top;
    const double hi = lower < reached ? lower : reached;
    return hi > lo ? hi - lo : 0.0;
}

/* Writes the results of the segments first..last to the planes from `plane` on. */
static void write_results(stericol_sweep *sweep, const ending *end, size_t first, size_t last, size_t plane)
{
    double sum[STERICOL_SUMS] = {0}, metres = 0.0, extent = 0.0;
    for (size_t k = first; k <= last; k++) {
        const stericol_segment *segment = &sweep->cuts.segment[k];
        for (size_t s = 0; s < STERICOL_SUMS; s++)
            sum[s] += end->sum[k][s];
        metres += overlap(sweep->cuts.limit[segment->upper], sweep->cuts.limit[segment->lower],
                          end->top_metres, end->reached_metres);
        extent += overlap(stericol_limit_of(sweep, segment->upper, end->row),
                          stericol_limit_of(sweep, segment->lower, end->row), end->top, end->reached);
    }
    double result[STERICOL_COLUMN_QUANTITIES];
    const double heat = sum[STERICOL_PART_HEAT];
    const bool symmetric = sweep->options.attribution == STERICOL_ATTRIBUTION_SYMMETRIC;
    const bool meaningful =
        fabs(heat) >= least_share_of_heat * sum[STERICOL_SUM_TURNOVER] && fabs(heat) > 0.0;
    result[STERICOL_COLUMN_TOTAL] = sum[STERICOL_PART_TOTAL];
    result[STERICOL_COLUMN_THERMOSTERIC] = sum[STERICOL_PART_THERMOSTERIC];
    result[STERICOL_COLUMN_HALOSTERIC] = sum[STERICOL_PART_HALOSTERIC];
    result[STERICOL_COLUMN_REMAINDER] =
        symmetric
            ? 0.0
            : sum[STERICOL_PART_TOTAL] - sum[STERICOL_PART_THERMOSTERIC] - sum[STERICOL_PART_HALOSTERIC];
    result[STERICOL_COLUMN_HEAT] = heat;
    result[STERICOL_COLUMN_EFFICIENCY] = meaningful ? sum[STERICOL_PART_THERMOSTERIC] / heat : (double)NAN;
    result[STERICOL_COLUMN_EXPANSION] = extent > 0.0 ? sum[STERICOL_PART_EXPANSION] / extent : (double)NAN;
    result[STERICOL_COLUMN_DEPTH] = metres;
    result[STERICOL_COLUMN_HEAT_MAGNITUDE] = sum[STERICOL_SUM_TURNOVER];
    for (size_t q = 0; q < STERICOL_COLUMN_QUANTITIES; q++)
        stericol_plane(sweep, plane + q)[end->column] = result[q];
}

static void write_missing(stericol_sweep *sweep, size_t column, size_t plane)
{
    for (size_t q = 0; q < STERICOL_COLUMN_QUANTITIES; q++)
        stericol_plane(sweep, plane + q)[column] = (double)NAN;
}

/* The results take the place of the state: everything of the column is read before anything is written. */
static void finish_column(stericol_sweep *sweep, size_t column, ending *end)
{
    const stericol_cuts *cuts = &sweep->cuts;
    find_ending(sweep, column, end);
    size_t complete = 0, incomplete = 0;
    double deepest = 0.0;
    for (size_t k = 0; k < cuts->layer_count; k++) {
        end->state[k] = layer_state_of(sweep, end, &cuts->layer[k]);
        sweep->states[k * sweep->count + column] = (unsigned char)end->state[k];
        if (end->state[k] == STERICOL_LAYER_INCOMPLETE)
            incomplete++;
        if (end->state[k] == STERICOL_LAYER_COMPLETE) {
            const double lower = cuts->limit[cuts->layer[k].lower];
            const double used = lower < end->reached_metres ? lower : end->reached_metres;
            deepest = used > deepest ? used : deepest;
            complete++;
        }
    }
    sweep->flags[column] = (signed char)flag_of(sweep, end);
    sweep->reached[column] = complete > 0 ? deepest : (double)NAN;
    for (size_t k = 0; k < cuts->layer_count; k++) {
        const size_t plane = k * STERICOL_COLUMN_QUANTITIES;
        if (end->state[k] == STERICOL_LAYER_COMPLETE)
            write_results(sweep, end, cuts->layer[k].first, cuts->layer[k].last, plane);
        else
            write_missing(sweep, column, plane);
    }
    if (cuts->layer_count == 1)
        return;
    const size_t plane = cuts->layer_count * STERICOL_COLUMN_QUANTITIES;
    if (complete > 0 && incomplete == 0)
        write_results(sweep, end, 0, cuts->segment_count - 1, plane);
    else
        write_missing(sweep, column, plane);
}

/* A column of samples reaches its last sample, or the sea floor above that; for cells it is known. */
static void find_reached(stericol_sweep *sweep, size_t from, size_t count)
{
    const double *place = stericol_place(sweep);
    for (size_t i = from; i < from + count && sweep->options.vertical != STERICOL_VERTICAL_CELLS; i++) {
        const double floor = stericol_floor_of(sweep, i);
        sweep->reached[i] = place[i] < floor ? place[i] : floor;
    }
}

/*
 * Asks for the lines of all planes that a block of columns will need: there are more planes than streams that
 * the hardware follows, and column after column would wait for each.
 */
static void fetch_block(const stericol_sweep *sweep, size_t from, size_t to)
{
    enum { LINE = 64 / sizeof(double) };
    for (size_t plane = 0; plane < sweep->sizes.planes; plane++)
        for (size_t column = from; column < to; column += LINE)
            __builtin_prefetch(&stericol_plane(sweep, plane)[column], 1);
}

stericol_status stericol_sweep_finish(stericol_sweep *sweep, size_t from, size_t to)
{
    assert(from <= to && to <= sweep->count);
    while (from < to) {
        const size_t count = stericol_strip_length(sweep, from, to);
        ending end;
        find_reached(sweep, from, count);
        stericol_carry_down(sweep, from, count);
        for (size_t column = from; column < from + count; column++) {
            if ((column - from) % BLOCK == 0)
                fetch_block(sweep, column, column + BLOCK < from + count ? column + BLOCK : from + count);
            if (sweep->samples != NULL) {
                const stericol_status status = stericol_integrate_profile(sweep, column);
                if (status != STERICOL_OK)
                    return status;
            }
            finish_column(sweep, column, &end);
        }
        from += count;
    }
    return STERICOL_OK;
}
