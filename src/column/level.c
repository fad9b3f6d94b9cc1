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
    const stericol_loops *loops;
    const stericol_sweep_level_record *record;
    size_t from;
    size_t count;
    bool cells;
    double scales[STERICOL_STRIP];
    double position[STERICOL_STRIP]; /* coordinate of the sample */
    double upper[STERICOL_STRIP];    /* limits of the cell; cells only */
    double lower[STERICOL_STRIP];
    double part[STERICOL_PARTS][STERICOL_STRIP];
    double surface[STERICOL_PARTS][STERICOL_STRIP]; /* the same water at the surface */
    stericol_points points;
    double pressures[STERICOL_STRIP];
    /* 0 or NaN: each epoch has values in its own right; what was evaluated is finite. */
    double earlier[STERICOL_STRIP];
    double later[STERICOL_STRIP];
    double unsound[STERICOL_STRIP];
    double use[STERICOL_STRIP]; /* 1 where the level counts, else 0 */
    bool any_used;
    size_t starting; /* columns that start here, and their numbers in the strip */
    unsigned short start[STERICOL_STRIP];
    double carry[STERICOL_STRIP]; /* 1 where one of them is carried up to the surface; set when any is */
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
}

static bool has_own_places(const strip *s)
{
    const stericol_sweep_level_record *record = s->record;
    return s->cells ? record->uppers != NULL || record->lowers != NULL : record->positions != NULL;
}

static void point_at_states(strip *s)
{
    const stericol_sweep_level_record *record = s->record;
    s->points.count = s->count;
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

/* Whether something of the level was rejected: a value outside physical limits, or states that the equation
   of state cannot take.  An averaged volume that is not there is missing, not rejected. */
static bool was_rejected(const strip *s, size_t i, bool unsound)
{
    if (unsound && s->points.averaged_volume[0] == NULL)
        return true;
    for (int epoch = 0; epoch < 2; epoch++)
        if (fabs(s->points.salinity[epoch][i]) > DBL_MAX || fabs(s->points.temperature[epoch][i]) > DBL_MAX)
            return true;
    return false;
}

static void start_column(strip *s, size_t i)
{
    const double above = s->cells ? s->upper[i] : s->position[i];
    if (s->starting == 0)
        memset(s->carry, 0, sizeof s->carry);
    s->start[s->starting++] = (unsigned short)i;
    if (above > 0.0 && s->position[i] <= surface_reach(s->sweep, s->from + i)) {
        s->carry[i] = 1.0;
        s->carried++;
    }
}

/* Decides on one column; `both`: both epochs have values here.  Sets the phase; returns whether the level
 * counts. */
static bool judge_column(strip *s, size_t i, bool both, bool unsound)
{
    stericol_sweep *sweep = s->sweep;
    const size_t column = s->from + i;
    unsigned phase = sweep->phase[column];
    if ((phase & STERICOL_PHASE_STARTED) == 0) {
        if (!both || !(stericol_floor_of(sweep, column) > 0.0))
            return false;
        phase |= STERICOL_PHASE_STARTED;
        if (s->points.averaged_volume[0] != NULL)
            phase |= STERICOL_PHASE_AVERAGED;
        start_column(s, i);
    } else {
        if (both && (sweep->options.cast || (phase & STERICOL_PHASE_HOLE) != 0) &&
            !can_bridge(sweep, column, stericol_place(sweep)[column], s->position[i])) {
            sweep->phase[column] = (uint16_t)(phase | STERICOL_PHASE_GAP);
            return false;
        }
        if (!both) {
            if ((phase & STERICOL_PHASE_HOLE) == 0 && was_rejected(s, i, unsound))
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

/* Handles a column for which something changes. */
static void judge_event(strip *s, size_t i)
{
    uint16_t *phase = &s->sweep->phase[s->from + i];
    bool earlier = s->earlier[i] <= 0.0, later = s->later[i] <= 0.0, unsound = false;
    if (earlier && later && !(s->unsound[i] <= 0.0)) {
        unsound = true;
        earlier = later = false;
    }
    if (earlier || later) {
        *phase =
            (uint16_t)(*phase & ~(unsigned)(STERICOL_PHASE_EARLIER_DEEPER | STERICOL_PHASE_LATER_DEEPER));
        if (earlier != later)
            *phase =
                (uint16_t)(*phase | (earlier ? STERICOL_PHASE_EARLIER_DEEPER : STERICOL_PHASE_LATER_DEEPER));
    }
    s->use[i] = 0.0;
    if ((*phase & (STERICOL_PHASE_GAP | STERICOL_PHASE_FLOOR)) == 0 &&
        judge_column(s, i, earlier && later, unsound)) {
        s->use[i] = 1.0;
        s->any_used = true;
    }
}

static double standing_of(unsigned phase)
{
    const unsigned out = STERICOL_PHASE_GAP | STERICOL_PHASE_FLOOR | STERICOL_PHASE_HOLE;
    if ((phase & STERICOL_PHASE_STARTED) == 0 || (phase & out) != 0)
        return STERICOL_STANDING_OUT;
    return (phase & ~(unsigned)STERICOL_PHASE_AVERAGED) == STERICOL_PHASE_STARTED
               ? STERICOL_STANDING_UNDER_WAY
               : STERICOL_STANDING_SPECIAL;
}

/*
 * Settles for every column whether the level counts.  In nearly all nothing changes (see count_events in
 * loops.h), so most strips need no second look.  find_use() has marked the columns that go on; what is
 * decided here overrides it.
 */
static void judge(strip *s)
{
    const bool always = s->sweep->options.cast || s->record->last;
    double *standing = stericol_standing(s->sweep) + s->from;
    double steady;
    const double events =
        s->loops->count_events(s->count, standing, s->earlier, s->later, s->unsound, always, &steady);
    s->any_used = steady > 0.0;
    for (size_t i = 0; events > 0.0 && i < s->count; i++) {
        const bool one = s->earlier[i] <= 0.0, two = s->later[i] <= 0.0, sound = s->unsound[i] <= 0.0;
        const bool goes_on = one && two && sound && !always && standing[i] <= STERICOL_STANDING_UNDER_WAY;
        const bool stays_out = !one && !two && fabs(standing[i] - STERICOL_STANDING_OUT) <= 0.0;
        if (!goes_on && !stays_out) {
            judge_event(s, i);
            standing[i] = standing_of(s->sweep->phase[s->from + i]);
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

/* The piece ends at the sea floor where that is known: `cut` or, without one, `end` itself. */
static const double *cut_at_floor(const strip *s, const double *end, double *cut)
{
    if (s->sweep->floor == NULL)
        return end;
    const double *floor = s->sweep->floor + s->from;
    for (size_t i = 0; i < s->count; i++)
        cut[i] = end[i] < floor[i] ? end[i] : floor[i];
    return cut;
}

/* Samples: the integrand is linear from the last sample, or from the surface, to this one. */
static void add_link(strip *s)
{
    stericol_sweep *sweep = s->sweep;
    double above[STERICOL_STRIP], cut[STERICOL_STRIP], part[STERICOL_PARTS][STERICOL_STRIP];
    stericol_piece piece = {.use = s->use, .lower = s->position};
    piece.lo = piece.upper = stericol_place(sweep) + s->from;
    piece.hi = cut_at_floor(s, s->position, cut);
    for (size_t p = 0; p < STERICOL_PARTS; p++) {
        piece.upper_part[p] = stericol_last_part(sweep, p) + s->from;
        piece.lower_part[p] = s->part[p];
    }
    if (s->starting > 0) {
        memcpy(above, piece.upper, s->count * sizeof *above);
        for (size_t k = 0; k < s->starting; k++)
            above[s->start[k]] = s->carry[s->start[k]] > 0.0 ? 0.0 : s->position[s->start[k]];
        piece.lo = piece.upper = above;
    }
    for (size_t p = 0; s->carried > 0 && p < STERICOL_PARTS; p++) {
        memcpy(part[p], piece.upper_part[p], s->count * sizeof part[p][0]);
        s->loops->replace(s->count, s->carry, s->surface[p], part[p]);
        piece.upper_part[p] = part[p];
    }
    stericol_add_piece(sweep, s->from, s->count, &piece);
}

/* Where a constant integrand stands does not matter: both ends of the piece are the same. */
static void add_constant(strip *s, const double *use, const double *lo, const double *hi,
                         double part[STERICOL_PARTS][STERICOL_STRIP])
{
    stericol_piece piece = {.use = use, .lo = lo, .hi = hi, .upper = s->position, .lower = s->position};
    for (size_t p = 0; p < STERICOL_PARTS; p++)
        piece.upper_part[p] = piece.lower_part[p] = part[p];
    stericol_add_piece(s->sweep, s->from, s->count, &piece);
}

/* Cells: what is missing between the last cell and this one is linear between their middles. */
static void bridge(strip *s, const double *reached)
{
    stericol_sweep *sweep = s->sweep;
    double cut[STERICOL_STRIP];
    stericol_piece piece = {.use = s->use, .lo = reached, .lower = s->position};
    piece.upper = stericol_place(sweep) + s->from;
    piece.hi = cut_at_floor(s, s->upper, cut);
    for (size_t p = 0; p < STERICOL_PARTS; p++) {
        piece.upper_part[p] = stericol_last_part(sweep, p) + s->from;
        piece.lower_part[p] = s->part[p];
    }
    stericol_add_piece(sweep, s->from, s->count, &piece);
}

/* Cells: what is missing above the cell, then the cell. */
static void add_cells(strip *s)
{
    double reached[STERICOL_STRIP], top[STERICOL_STRIP], cut[STERICOL_STRIP];
    if (s->carried > 0) {
        static const double surface[STERICOL_STRIP] = {0};
        add_constant(s, s->carry, surface, cut_at_floor(s, s->upper, cut), s->surface);
    }
    memcpy(reached, s->sweep->reached + s->from, s->count * sizeof *reached);
    for (size_t k = 0; k < s->starting; k++)
        reached[s->start[k]] = s->upper[s->start[k]];
    bridge(s, reached);
    /* Limits in files are rounded: what two cells both claim belongs to the upper one. */
    for (size_t i = 0; i < s->count; i++)
        top[i] = s->upper[i] > reached[i] ? s->upper[i] : reached[i];
    add_constant(s, s->use, top, cut_at_floor(s, s->lower, cut), s->part);
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

/* Columns that have come to the sea floor are done. */
static void end_at_floor(strip *s, const double *end)
{
    const double *floor = s->sweep->floor + s->from;
    for (size_t i = 0; i < s->count; i++) {
        if (s->use[i] > 0.0 && end[i] >= floor[i]) {
            s->sweep->phase[s->from + i] |= STERICOL_PHASE_FLOOR;
            stericol_standing(s->sweep)[s->from + i] = STERICOL_STANDING_OUT;
        }
    }
}

/* What the next level needs. */
static void remember(strip *s)
{
    stericol_sweep *sweep = s->sweep;
    const stericol_loops *loops = s->loops;
    double *top = stericol_top(sweep) + s->from;
    for (size_t p = 0; p < STERICOL_PARTS; p++)
        loops->replace(s->count, s->use, s->part[p], stericol_last_part(sweep, p) + s->from);
    loops->replace(s->count, s->use, s->position, stericol_place(sweep) + s->from);
    for (size_t epoch = 0; sweep->sizes.carries && epoch < 2; epoch++) {
        loops->replace(s->count, s->use, s->points.salinity[epoch],
                       stericol_last_state(sweep, epoch) + s->from);
        loops->replace(s->count, s->use, s->points.temperature[epoch],
                       stericol_last_state(sweep, 2 + epoch) + s->from);
    }
    if (sweep->samples != NULL)
        keep_samples(s);
    for (size_t k = 0; k < s->starting; k++) {
        const size_t i = s->start[k];
        top[i] = s->carry[i] > 0.0 ? 0.0 : s->cells ? s->upper[i] : s->position[i];
    }
    if (s->cells) {
        double cut[STERICOL_STRIP];
        loops->replace(s->count, s->use, cut_at_floor(s, s->lower, cut), sweep->reached + s->from);
    }
    if (sweep->floor != NULL)
        end_at_floor(s, s->cells ? s->lower : s->position);
}

static void add_strip(strip *s)
{
    const double *parts[STERICOL_PARTS];
    for (size_t p = 0; p < STERICOL_PARTS; p++)
        parts[p] = s->part[p];
    point_at_states(s);
    find_places(s);
    s->points.scale = stericol_strip_scale(s->sweep, s->from, s->count, s->scales);
    if (s->loops->find_valid(s->count, s->points.salinity, s->points.temperature, s->position,
                             stericol_place(s->sweep) + s->from, s->earlier, s->later) > 0.0) {
        stericol_strip_pressures(s->sweep, s->from, s->position[0], has_own_places(s) ? s->position : NULL,
                                 &s->points, s->pressures);
        stericol_integrands(s->sweep, &s->points, s->part);
        s->loops->find_use(s->count, parts, s->earlier, s->later, s->unsound, s->use);
    } else {
        memset(s->unsound, 0, sizeof s->unsound);
    }
    judge(s);
    if (!s->any_used)
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
        s.loops = sweep->loops;
        s.record = record;
        s.from = from;
        s.count = stericol_strip_length(sweep, from, to);
        s.cells = sweep->options.vertical == STERICOL_VERTICAL_CELLS;
        s.points = (stericol_points){0};
        s.any_used = false;
        s.starting = s.carried = 0;
        add_strip(&s);
        from += s.count;
    }
}
