/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * One level more.  A strip of columns goes through: places and states, which of them count, integrands, who
 * starts here and with what above, sums, what is remembered for the next level.
 */
#include "column/sweep.h"

#include <assert.h>
#include <float.h>
#include <string.h>

typedef struct strip {
    stericol_sweep *sweep;
    const stericol_sweep_level_record *record;
    size_t from;
    size_t count;
    bool cells;
    const double *scale;
    double scales[STERICOL_STRIP];
    double position[STERICOL_STRIP]; /* coordinate of the sample */
    double upper[STERICOL_STRIP];    /* limits of the cell; cells only */
    double lower[STERICOL_STRIP];
    double floor[STERICOL_STRIP];
    double part[STERICOL_PARTS][STERICOL_STRIP];
    double surface[STERICOL_PARTS][STERICOL_STRIP]; /* the same water at the surface */
    stericol_points points;
    double pressures[STERICOL_STRIP];
    unsigned char valid[2][STERICOL_STRIP]; /* each epoch alone */
    unsigned char rejected[STERICOL_STRIP];
    double use[STERICOL_STRIP];          /* 1 where the level counts, else 0 */
    unsigned char start[STERICOL_STRIP]; /* the column starts here */
    unsigned char carry[STERICOL_STRIP]; /* ... and is carried up to the surface */
    size_t used;
    size_t starting;
    size_t carried;
} strip;

static void spread(double *target, const double *values, double value, size_t from, size_t count)
{
    if (values != NULL)
        memcpy(target, values + from, count * sizeof *target);
    else
        for (size_t i = 0; i < count; i++)
            target[i] = value;
}

static void find_places(strip *s)
{
    const stericol_sweep_level_record *record = s->record;
    if (s->cells) {
        spread(s->upper, record->uppers, record->upper, s->from, s->count);
        spread(s->lower, record->lowers, record->lower, s->from, s->count);
        for (size_t i = 0; i < s->count; i++) {
            /* A cell without thickness is no cell. */
            const double middle = 0.5 * (s->upper[i] + s->lower[i]);
            s->position[i] = s->lower[i] > s->upper[i] ? middle : (double)NAN;
        }
    } else {
        spread(s->position, record->positions, record->position, s->from, s->count);
    }
    spread(s->floor, s->sweep->floor, (double)INFINITY, s->from, s->count);
}

static bool has_own_places(const strip *s)
{
    const stericol_sweep_level_record *record = s->record;
    return s->cells ? record->uppers != NULL || record->lowers != NULL : record->positions != NULL;
}

/* Which epochs have both values, and where one was rejected.  True when any column has both epochs. */
static bool find_valid(strip *s)
{
    unsigned any = 0;
    for (int epoch = 0; epoch < 2; epoch++) {
        const double *salinity = s->points.salinity[epoch];
        const double *temperature = s->points.temperature[epoch];
        for (size_t i = 0; i < s->count; i++)
            s->valid[epoch][i] =
                (unsigned char)((fabs(salinity[i]) <= DBL_MAX) & (fabs(temperature[i]) <= DBL_MAX) &
                                (fabs(s->position[i]) <= DBL_MAX));
        for (size_t i = 0; i < s->count; i++) {
            const unsigned char wild =
                (unsigned char)((fabs(salinity[i]) > DBL_MAX) | (fabs(temperature[i]) > DBL_MAX));
            s->rejected[i] = epoch == 0 ? wild : (unsigned char)(s->rejected[i] | wild);
        }
    }
    for (size_t i = 0; i < s->count; i++)
        any |= (unsigned)(s->valid[0][i] & s->valid[1][i]);
    return any != 0;
}

static void point_at_states(strip *s)
{
    const stericol_sweep_level_record *record = s->record;
    s->points.count = s->count;
    s->points.scale = s->scale;
    for (int epoch = 0; epoch < 2; epoch++) {
        s->points.salinity[epoch] = record->salinity[epoch] + s->from;
        s->points.temperature[epoch] = record->temperature[epoch] + s->from;
        if (record->averaged_volume[epoch] != NULL)
            s->points.averaged_volume[epoch] = record->averaged_volume[epoch] + s->from;
    }
    if (record->averaged_volume[0] != NULL) {
        s->points.averaged_thermosteric = record->averaged_thermosteric + s->from;
        s->points.averaged_halosteric = record->averaged_halosteric + s->from;
    }
}

/* What cannot be evaluated (an averaged volume that is missing, salinity below an equation's range) counts as
 * missing. */
static void drop_unsound(strip *s)
{
    for (size_t i = 0; i < s->count; i++) {
        double worst = 0.0;
        for (size_t p = 0; p < STERICOL_PARTS; p++)
            worst += fabs(s->part[p][i]);
        const unsigned char sound = (unsigned char)(worst <= DBL_MAX);
        const unsigned char both = (unsigned char)(s->valid[0][i] & s->valid[1][i]);
        if (s->points.averaged_volume[0] == NULL)
            s->rejected[i] = (unsigned char)(s->rejected[i] | (both & (sound ^ 1u)));
        s->valid[0][i] = (unsigned char)(s->valid[0][i] & (sound | (both ^ 1u)));
        s->valid[1][i] = (unsigned char)(s->valid[1][i] & (sound | (both ^ 1u)));
    }
}

/* Whether the water between two samples may be bridged.  Both are the samples' coordinates. */
static bool can_bridge(const stericol_sweep *sweep, size_t column, double upper, double lower)
{
    const size_t row = stericol_row_of(sweep, column);
    const double depth = stericol_metres(sweep, upper, row);
    double reach = sweep->options.gap_reach;
    if (isnan(reach)) {
        reach = 50.0 + 0.225 * depth;
        reach = reach < 50.0 ? 50.0 : reach > 500.0 ? 500.0 : reach;
    }
    return stericol_metres(sweep, lower, row) - depth <= reach;
}

/* The reach of the surface in the coordinate. */
static double surface_reach(const stericol_sweep *sweep, size_t column)
{
    return sweep->reach == NULL ? sweep->options.surface_reach : sweep->reach[stericol_row_of(sweep, column)];
}

/* Decides on one column; `both`: both epochs have values here.  Returns whether the level counts. */
static bool judge_column(strip *s, size_t i, bool both)
{
    stericol_sweep *sweep = s->sweep;
    const size_t column = s->from + i;
    unsigned phase = sweep->phase[column];
    if ((phase & STERICOL_PHASE_STARTED) == 0) {
        if (!both || !(s->floor[i] > 0.0))
            return false;
        phase |= STERICOL_PHASE_STARTED;
        s->start[i] = 1;
        s->starting++;
        const double above = s->cells ? s->upper[i] : s->position[i];
        if (above > 0.0 && s->position[i] <= surface_reach(sweep, column)) {
            s->carry[i] = 1;
            s->carried++;
        }
        if (s->record->averaged_volume[0] != NULL)
            phase |= STERICOL_PHASE_AVERAGED;
    } else {
        const double place = stericol_place(sweep)[column];
        both = both && s->position[i] > place;
        if (both && (sweep->options.cast || (phase & STERICOL_PHASE_HOLE) != 0) &&
            !can_bridge(sweep, column, place, s->position[i])) {
            sweep->phase[column] = (uint16_t)(phase | STERICOL_PHASE_GAP);
            return false;
        }
        if (!both) {
            if ((phase & STERICOL_PHASE_HOLE) == 0 && s->rejected[i] != 0)
                phase |= STERICOL_PHASE_REJECTED;
            sweep->phase[column] = (uint16_t)(phase | STERICOL_PHASE_HOLE);
            return false;
        }
    }
    phase &= ~(unsigned)(STERICOL_PHASE_HOLE | STERICOL_PHASE_REJECTED);
    if (s->record->last)
        phase |= STERICOL_PHASE_AXIS_END;
    sweep->phase[column] = (uint16_t)phase;
    return true;
}

/* Settles for every column of the strip whether the level counts, and how it stands with the column's end. */
static void judge(strip *s)
{
    uint16_t *phases = s->sweep->phase + s->from;
    memset(s->start, 0, sizeof s->start);
    memset(s->carry, 0, sizeof s->carry);
    for (size_t i = 0; i < s->count; i++) {
        const bool earlier = s->valid[0][i] != 0, later = s->valid[1][i] != 0;
        s->use[i] = 0.0;
        if (earlier || later) {
            unsigned phase =
                phases[i] & ~(unsigned)(STERICOL_PHASE_EARLIER_DEEPER | STERICOL_PHASE_LATER_DEEPER);
            if (earlier != later)
                phase |= earlier ? STERICOL_PHASE_EARLIER_DEEPER : STERICOL_PHASE_LATER_DEEPER;
            phases[i] = (uint16_t)phase;
        }
        if ((phases[i] & (STERICOL_PHASE_GAP | STERICOL_PHASE_FLOOR)) != 0)
            continue;
        if (judge_column(s, i, earlier && later)) {
            s->use[i] = 1.0;
            s->used++;
        }
    }
}

/* The starting columns' water at the surface (cells: in the middle between the surface and the first cell).
 */
static void find_surface(strip *s)
{
    if (s->points.averaged_volume[0] != NULL) {
        memcpy(s->surface, s->part, sizeof s->surface);
        return;
    }
    stericol_points points = s->points;
    double middle[STERICOL_STRIP], pressures[STERICOL_STRIP];
    if (!s->cells) {
        points.pressure = 0.0;
        points.pressures = NULL;
    } else {
        for (size_t i = 0; i < s->count; i++)
            middle[i] = 0.5 * s->upper[i];
        stericol_strip_pressures(s->sweep, s->from, middle[0], has_own_places(s) ? middle : NULL, &points,
                                 pressures);
    }
    stericol_integrands(s->sweep, &points, s->surface);
}

static double lesser(double a, double b)
{
    return a < b ? a : b;
}

/* Samples: the integrand is linear from the last sample, or from the surface, to this one. */
static void add_link(strip *s)
{
    stericol_sweep *sweep = s->sweep;
    const double *place = stericol_place(sweep) + s->from;
    double above[STERICOL_STRIP], part[STERICOL_PARTS][STERICOL_STRIP];
    stericol_piece piece;
    for (size_t i = 0; i < s->count; i++) {
        const double first = s->carry[i] != 0 ? 0.0 : s->position[i];
        above[i] = s->start[i] != 0 ? first : place[i];
        piece.lo[i] = s->use[i] > 0.0 ? above[i] : 0.0;
        piece.hi[i] = s->use[i] > 0.0 ? lesser(s->position[i], s->floor[i]) : 0.0;
    }
    piece.upper = above;
    piece.lower = s->position;
    for (size_t p = 0; p < STERICOL_PARTS; p++) {
        const double *last = stericol_last_part(sweep, p) + s->from;
        for (size_t i = 0; s->carried > 0 && i < s->count; i++)
            part[p][i] = s->carry[i] != 0 ? s->surface[p][i] : last[i];
        piece.upper_part[p] = s->carried > 0 ? part[p] : last;
        piece.lower_part[p] = s->part[p];
    }
    stericol_add_piece(sweep, s->from, s->count, &piece);
}

/* Where a constant integrand stands does not matter: both ends of `piece` are the same. */
static void add_constant(strip *s, stericol_piece *piece, double part[STERICOL_PARTS][STERICOL_STRIP])
{
    piece->upper = piece->lower = s->position;
    for (size_t p = 0; p < STERICOL_PARTS; p++)
        piece->upper_part[p] = piece->lower_part[p] = part[p];
    stericol_add_piece(s->sweep, s->from, s->count, piece);
}

/* Cells: what is missing above the cell, then the cell. */
static void add_cells(strip *s)
{
    stericol_sweep *sweep = s->sweep;
    const double *reached = sweep->reached + s->from;
    stericol_piece piece;
    bool bridging = false;
    if (s->carried > 0) {
        for (size_t i = 0; i < s->count; i++) {
            piece.lo[i] = 0.0;
            piece.hi[i] = s->carry[i] != 0 ? lesser(s->upper[i], s->floor[i]) : 0.0;
        }
        add_constant(s, &piece, s->surface);
    }
    for (size_t i = 0; i < s->count; i++) {
        const bool bridge = s->use[i] > 0.0 && s->start[i] == 0 && s->upper[i] > reached[i];
        bridging = bridging || bridge;
        piece.lo[i] = bridge ? reached[i] : 0.0;
        piece.hi[i] = bridge ? lesser(s->upper[i], s->floor[i]) : 0.0;
    }
    if (bridging) {
        piece.upper = stericol_place(sweep) + s->from;
        piece.lower = s->position;
        for (size_t p = 0; p < STERICOL_PARTS; p++) {
            piece.upper_part[p] = stericol_last_part(sweep, p) + s->from;
            piece.lower_part[p] = s->part[p];
        }
        stericol_add_piece(sweep, s->from, s->count, &piece);
    }
    for (size_t i = 0; i < s->count; i++) {
        /* Limits in files are rounded: what two cells both claim belongs to the upper one. */
        const bool overlap = s->start[i] == 0 && reached[i] > s->upper[i];
        piece.lo[i] = s->use[i] > 0.0 ? (overlap ? reached[i] : s->upper[i]) : 0.0;
        piece.hi[i] = s->use[i] > 0.0 ? lesser(s->lower[i], s->floor[i]) : 0.0;
    }
    add_constant(s, &piece, s->part);
}

/* Keeps the samples of a column for the splines. */
static void keep_samples(strip *s)
{
    stericol_sweep *sweep = s->sweep;
    const size_t levels = sweep->options.levels;
    for (size_t i = 0; i < s->count; i++) {
        if (!(s->use[i] > 0.0))
            continue;
        const size_t column = s->from + i;
        const size_t number = sweep->sampled[column];
        assert(number < levels);
        double *sample = sweep->samples + column * 5 * levels + number;
        sample[0] = s->position[i];
        for (size_t epoch = 0; epoch < 2; epoch++) {
            sample[(1 + epoch) * levels] = s->points.salinity[epoch][i];
            sample[(3 + epoch) * levels] = s->points.temperature[epoch][i];
        }
        sweep->sampled[column]++;
    }
}

static void choose(double *target, const double *use, const double *values, size_t count)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++)
        target[i] = use[i] > 0.0 ? values[i] : target[i];
}

/* What the next level needs. */
static void remember(strip *s)
{
    stericol_sweep *sweep = s->sweep;
    double *top = stericol_top(sweep) + s->from;
    const double *end = s->cells ? s->lower : s->position;
    for (size_t p = 0; p < STERICOL_PARTS; p++)
        choose(stericol_last_part(sweep, p) + s->from, s->use, s->part[p], s->count);
    choose(stericol_place(sweep) + s->from, s->use, s->position, s->count);
    for (size_t epoch = 0; sweep->sizes.carries && epoch < 2; epoch++) {
        choose(stericol_last_state(sweep, epoch) + s->from, s->use, s->points.salinity[epoch], s->count);
        choose(stericol_last_state(sweep, 2 + epoch) + s->from, s->use, s->points.temperature[epoch],
               s->count);
    }
    if (sweep->samples != NULL)
        keep_samples(s);
    for (size_t i = 0; s->starting > 0 && i < s->count; i++)
        if (s->start[i] != 0)
            top[i] = s->carry[i] != 0 ? 0.0 : s->cells ? s->upper[i] : s->position[i];
    double *reached = sweep->reached + s->from;
    uint16_t *phase = sweep->phase + s->from;
    for (size_t i = 0; i < s->count; i++) {
        const bool used = s->use[i] > 0.0, at_floor = end[i] >= s->floor[i];
        const double down_to = at_floor ? s->floor[i] : end[i];
        reached[i] = used && (s->start[i] != 0 || down_to > reached[i]) ? down_to : reached[i];
        phase[i] = (uint16_t)(phase[i] | (used && at_floor ? STERICOL_PHASE_FLOOR : 0));
    }
}

static void add_strip(strip *s)
{
    point_at_states(s);
    find_places(s);
    s->scale = s->points.scale = stericol_strip_scale(s->sweep, s->from, s->count, s->scales);
    if (find_valid(s)) {
        stericol_strip_pressures(s->sweep, s->from, s->position[0], has_own_places(s) ? s->position : NULL,
                                 &s->points, s->pressures);
        stericol_integrands(s->sweep, &s->points, s->part);
        drop_unsound(s);
    }
    judge(s);
    if (s->used == 0)
        return;
    if (s->carried > 0)
        find_surface(s);
    if (s->cells)
        add_cells(s);
    else
        add_link(s);
    remember(s);
}

void stericol_sweep_level(stericol_sweep *sweep, const stericol_sweep_level_record *record, size_t from,
                          size_t to)
{
    assert(from <= to && to <= sweep->count);
    assert(record->salinity[0] != NULL && record->salinity[1] != NULL);
    assert(record->temperature[0] != NULL && record->temperature[1] != NULL);
    assert((record->averaged_volume[0] == NULL) == (record->averaged_volume[1] == NULL));
    assert(record->averaged_volume[0] == NULL ||
           (record->averaged_thermosteric != NULL && record->averaged_halosteric != NULL));
    assert(record->averaged_volume[0] == NULL || sweep->samples == NULL);
    while (from < to) {
        strip s;
        s.sweep = sweep;
        s.record = record;
        s.from = from;
        s.count = stericol_strip_length(sweep, from, to);
        s.cells = sweep->options.vertical == STERICOL_VERTICAL_CELLS;
        s.points = (stericol_points){0};
        s.used = s.starting = s.carried = 0;
        add_strip(&s);
        from += s.count;
    }
}
