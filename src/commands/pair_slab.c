/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/pair_inside.h"

#include "base/checked.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

static bool new_doubles(size_t room, double **array, bool wanted)
{
    *array = wanted ? stericol_new_doubles(room) : NULL;
    return !wanted || *array != NULL;
}

stericol_status stericol_pair_slab_new(stericol_pair_work *work, stericol_pair_slab *slab)
{
    const stericol_pair *pair = work->pair;
    bool own = work->grid->own_depths, whole = true;
    size_t count = 0;

    *slab = (stericol_pair_slab){.work = work};
    if (!stericol_multiply_sizes(work->plan.rows, work->grid->columns, &count) ||
        !stericol_multiply_sizes(count, work->plan.levels, &slab->room))
        return stericol_fail_memory(work->context, 0, "a slab of levels");
    for (size_t e = 0; e < 2; e++)
        whole = new_doubles(slab->room, &slab->temperature[e], true) &&
                new_doubles(slab->room, &slab->salinity[e], true) && whole;
    whole = new_doubles(slab->room, &slab->depth, own) && whole;
    whole = new_doubles(slab->room, &slab->upper, own) && whole;
    whole = new_doubles(slab->room, &slab->lower, own) && whole;
    for (size_t i = 0; i < 4; i++)
        whole = new_doubles(slab->room, &slab->averaged[i], pair->average_integrals) && whole;
    slab->tally = stericol_new_array(work->plan.levels, sizeof *slab->tally);
    slab->context = stericol_context_new();
    if (!whole || slab->tally == NULL || slab->context == NULL) {
        stericol_pair_slab_free(slab);
        return stericol_fail_memory(work->context, slab->room * sizeof(double), "a slab of levels");
    }
    return STERICOL_OK;
}

void stericol_pair_slab_free(stericol_pair_slab *slab)
{
    for (size_t e = 0; e < 2; e++) {
        free(slab->temperature[e]);
        free(slab->salinity[e]);
    }
    free(slab->depth);
    free(slab->upper);
    free(slab->lower);
    for (size_t i = 0; i < 4; i++)
        free(slab->averaged[i]);
    free(slab->tally);
    stericol_context_free(slab->context);
    *slab = (stericol_pair_slab){0};
}

static void add_tally(stericol_cf_tally *sum, const stericol_cf_tally *term)
{
    sum->values += term->values;
    sum->missing += term->missing;
    sum->below += term->below;
    sum->above += term->above;
}

void stericol_pair_slab_load(void *argument)
{
    stericol_pair_slab *slab = argument;
    stericol_pair_work *work = slab->work;
    const stericol_pair *pair = work->pair;

    slab->status = STERICOL_OK;
    for (size_t e = 0; e < work->epoch_count && slab->status == STERICOL_OK; e++) {
        bool reads_salinity = pair->epochs[e].salinity_source == STERICOL_SALINITY_FROM_FILE;

        memset(slab->tally, 0, slab->levels * sizeof *slab->tally);
        slab->status = stericol_epoch_load(slab->context, pair->epochs[e].epoch, slab->level0, slab->levels,
                                           slab->row0, slab->rows, slab->temperature[e],
                                           reads_salinity ? slab->salinity[e] : NULL, slab->tally);
        for (size_t k = 0; k < slab->levels; k++) {
            stericol_epoch_tally *sum = &work->tally[e][slab->level0 + k];

            add_tally(&sum->temperature, &slab->tally[k].temperature);
            add_tally(&sum->salinity, &slab->tally[k].salinity);
            sum->zeros += slab->tally[k].zeros;
        }
    }
    if (slab->status == STERICOL_OK && slab->depth != NULL)
        slab->status =
            stericol_epoch_load_depths(slab->context, pair->epochs[0].epoch, slab->level0, slab->levels,
                                       slab->row0, slab->rows, slab->depth, slab->upper, slab->lower);
}

double stericol_pair_position(const stericol_pair_work *work, size_t level)
{
    const stericol_grid *grid = work->grid;

    if (work->pair->column.vertical == STERICOL_VERTICAL_CELLS && grid->level_bounds != NULL)
        return 0.5 * (grid->level_bounds[2 * level] + grid->level_bounds[2 * level + 1]);
    return grid->level[level];
}

static double latitude_at(const stericol_grid *grid, size_t row, size_t column)
{
    return grid->curvilinear ? grid->latitude[row * grid->columns + column] : grid->latitude[row];
}

static double longitude_at(const stericol_grid *grid, size_t row, size_t column)
{
    return grid->curvilinear ? grid->longitude[row * grid->columns + column] : grid->longitude[column];
}

/* Depths and pressures of one piece: shared on a plain grid, else in the two buffers. */
static void place_piece(const stericol_pair_slab *slab, size_t level, size_t index,
                        stericol_pair_piece *piece, double *depths, double *pressures)
{
    const stericol_grid *grid = slab->work->grid;
    double position = stericol_pair_position(slab->work, piece->level);
    bool cells = slab->work->pair->column.vertical == STERICOL_VERTICAL_CELLS;

    if (!grid->own_depths && !grid->curvilinear) {
        double latitude = grid->latitude[piece->row];

        piece->depth =
            grid->vertical == STERICOL_VERTICAL_DEPTH ? position : stericol_depth(position, latitude);
        piece->pressure =
            grid->vertical == STERICOL_VERTICAL_DEPTH ? stericol_sea_pressure(position, latitude) : position;
        return;
    }
    for (size_t i = 0; i < piece->count; i++) {
        double latitude = latitude_at(grid, piece->row, piece->column + i);
        size_t at = level * slab->count + index + i;

        if (grid->own_depths)
            depths[i] = cells ? 0.5 * (slab->upper[at] + slab->lower[at]) : slab->depth[at];
        else
            depths[i] =
                grid->vertical == STERICOL_VERTICAL_DEPTH ? position : stericol_depth(position, latitude);
        if (grid->own_depths || grid->vertical == STERICOL_VERTICAL_DEPTH)
            pressures[i] = isfinite(depths[i]) ? stericol_sea_pressure(depths[i], latitude) : (double)NAN;
        else
            pressures[i] = position;
    }
    piece->depth = position;
    piece->depths = depths;
    piece->pressures = pressures;
}

void stericol_pair_pieces(const stericol_pair_slab *slab, size_t level, size_t from, size_t to,
                          stericol_pair_act *act, void *argument)
{
    double depths[STERICOL_PAIR_STRIP], pressures[STERICOL_PAIR_STRIP];
    size_t columns = slab->work->grid->columns;

    for (size_t index = from; index < to;) {
        size_t column = index % columns, count = columns - column;
        stericol_pair_piece piece = {
            .level = slab->level0 + level, .row = slab->row0 + index / columns, .column = column};

        if (count > STERICOL_PAIR_STRIP)
            count = STERICOL_PAIR_STRIP;
        if (count > to - index)
            count = to - index;
        piece.count = count;
        place_piece(slab, level, index, &piece, depths, pressures);
        act(argument, &piece, index);
        index += count;
    }
}

/* A background field's values at the points of a piece; NaN, without a search, where `needed` is missing. */
static void fill_from_field(const stericol_pair_work *work, const stericol_regrid_field *field,
                            const stericol_pair_piece *piece, const double *needed, double *values)
{
    double latitude[STERICOL_PAIR_STRIP], longitude[STERICOL_PAIR_STRIP];

    assert(piece->depths == NULL || !work->grid->own_depths); /* refused when the pair was made */
    for (size_t i = 0; i < piece->count; i++) {
        latitude[i] = isnan(needed[i]) ? (double)NAN : latitude_at(work->grid, piece->row, piece->column + i);
        longitude[i] = longitude_at(work->grid, piece->row, piece->column + i);
    }
    stericol_regrid_level(field, piece->depths == NULL ? piece->depth : piece->depths[0], piece->count,
                          latitude, longitude, values);
}

void stericol_pair_convert_piece(const stericol_pair_work *work, size_t epoch,
                                 const stericol_pair_piece *piece, double *salinity, double *temperature)
{
    const stericol_pair *pair = work->pair;
    const stericol_pair_epoch *source = &pair->epochs[epoch];
    double anomaly[STERICOL_PAIR_STRIP];

    if (source->salinity_source == STERICOL_SALINITY_FROM_BACKGROUND) {
        fill_from_field(work, pair->background_salinity, piece, temperature, salinity);
    } else if (source->salinity_source == STERICOL_SALINITY_CONSTANT) {
        for (size_t i = 0; i < piece->count; i++)
            salinity[i] = pair->constant_salinity;
    } else if (work->zero_is_land[epoch][piece->level]) {
        for (size_t i = 0; i < piece->count; i++)
            if (fabs(temperature[i]) + fabs(salinity[i]) <= 0.0)
                temperature[i] = salinity[i] = NAN;
    }
    if (pair->salinity_anomaly != NULL) {
        fill_from_field(work, pair->salinity_anomaly, piece, temperature, anomaly);
        for (size_t i = 0; i < piece->count; i++)
            if (isnan(anomaly[i])) /* beyond the reach of the anomaly field there is none to add */
                anomaly[i] = 0.0;
    }
    stericol_state_convert(&source->rule, piece->pressure, piece->pressures, piece->count,
                           pair->salinity_anomaly == NULL ? NULL : anomaly, salinity, temperature);
}

/* The scenario's warming and freshening at a depth: linear between the nodes, constant beyond. */
static void scenario_at(const stericol_scenario_profile *profile, double depth, double *warming,
                        double *freshening)
{
    size_t i = 0;
    double share;

    while (i < profile->count && profile->depth[i] < depth)
        i++;
    if (i == 0 || i == profile->count) {
        i = i == 0 ? 0 : profile->count - 1;
        *warming = profile->warming[i];
        *freshening = profile->freshening[i];
        return;
    }
    share = (depth - profile->depth[i - 1]) / (profile->depth[i] - profile->depth[i - 1]);
    *warming = profile->warming[i - 1] + share * (profile->warming[i] - profile->warming[i - 1]);
    *freshening = profile->freshening[i - 1] + share * (profile->freshening[i] - profile->freshening[i - 1]);
}

size_t stericol_pair_change_piece(const stericol_pair_work *work, const stericol_pair_piece *piece,
                                  const double *salinity, const double *temperature, double *changed_salinity,
                                  double *changed_temperature)
{
    double warming = 0.0, freshening = 0.0;
    size_t rejected = 0;

    scenario_at(&work->pair->scenario, piece->depth, &warming, &freshening);
    for (size_t i = 0; i < piece->count; i++) {
        if (piece->depths != NULL)
            scenario_at(&work->pair->scenario, piece->depths[i], &warming, &freshening);
        changed_temperature[i] = temperature[i] + warming;
        changed_salinity[i] = salinity[i] - freshening;
        /* Fresher than fresh water, or hotter than any sea: rejected, as it would be in a file. */
        if (changed_salinity[i] < STERICOL_PAIR_LEAST_SALINITY ||
            changed_salinity[i] > STERICOL_PAIR_MOST_SALINITY ||
            changed_temperature[i] < STERICOL_PAIR_LEAST_TEMPERATURE ||
            changed_temperature[i] > STERICOL_PAIR_MOST_TEMPERATURE) {
            rejected += isfinite(temperature[i]) && isfinite(salinity[i]) ? 1 : 0;
            changed_salinity[i] = changed_temperature[i] = INFINITY;
        }
    }
    return rejected;
}

/* The smallest and largest of some values; a NaN loses every comparison and is passed over. */
typedef struct extremes {
    double low, high;
} extremes;

static extremes extremes_of(const double *values, size_t count)
{
    double low = INFINITY, high = -INFINITY;

    for (size_t i = 0; i < count; i++) {
        low = values[i] < low ? values[i] : low;
        high = values[i] > high ? values[i] : high;
    }
    return (extremes){low, high};
}

/*
 * How many points of a piece lie outside the equation's own range.  The range is a box, so the points are
 * looked at one by one only where their extremes lie outside.
 */
static size_t count_outside(const stericol_water *water, const stericol_pair_piece *piece,
                            const double *salinity, const double *temperature)
{
    extremes s = extremes_of(salinity, piece->count), t = extremes_of(temperature, piece->count);
    extremes p = piece->pressures == NULL ? (extremes){piece->pressure, piece->pressure}
                                          : extremes_of(piece->pressures, piece->count);
    size_t outside = 0;

    if (s.low > s.high || t.low > t.high)
        return 0;
    if (stericol_in_valid_range(water, s.low, t.low, p.low) &&
        stericol_in_valid_range(water, s.high, t.high, p.high))
        return 0;
    for (size_t i = 0; i < piece->count; i++)
        if (isfinite(salinity[i]) && isfinite(temperature[i]) &&
            !stericol_in_valid_range(water, salinity[i], temperature[i],
                                     piece->pressures == NULL ? piece->pressure : piece->pressures[i]))
            outside++;
    return outside;
}

typedef struct conversion {
    stericol_pair_slab *slab;
    stericol_pair_tile *tile;
    size_t level, worker;
} conversion;

/* Any temperature on the first level is water, but for land written as zeros. */
static void mark_wet(const stericol_pair_work *work, size_t epoch, size_t count, const double *salinity,
                     const double *temperature, unsigned char *wet)
{
    bool zeros = work->pair->epochs[epoch].salinity_source == STERICOL_SALINITY_FROM_FILE &&
                 work->zero_is_land[epoch][0];

    for (size_t i = 0; i < count; i++)
        if (isfinite(temperature[i]) && !(zeros && fabs(temperature[i]) + fabs(salinity[i]) <= 0.0))
            wet[i] = 1;
}

static void convert_piece_of_slab(void *argument, const stericol_pair_piece *piece, size_t index)
{
    conversion *task = argument;
    stericol_pair_slab *slab = task->slab;
    const stericol_pair_work *work = slab->work;
    size_t at = task->level * slab->count + index;

    if (piece->level == 0)
        for (size_t e = 0; e < work->epoch_count; e++)
            mark_wet(work, e, piece->count, slab->salinity[e] + at, slab->temperature[e] + at,
                     task->tile->wet + index);
    for (size_t e = 0; e < work->epoch_count; e++)
        stericol_pair_convert_piece(work, e, piece, slab->salinity[e] + at, slab->temperature[e] + at);
    if (work->pair->kind == STERICOL_PAIR_SCENARIO)
        work->counters[task->worker].rejected +=
            stericol_pair_change_piece(work, piece, slab->salinity[0] + at, slab->temperature[0] + at,
                                       slab->salinity[1] + at, slab->temperature[1] + at);
    for (size_t e = 0; e < 2; e++)
        work->counters[task->worker].outside_equation +=
            count_outside(work->pair->column.water, piece, slab->salinity[e] + at, slab->temperature[e] + at);
}

void stericol_pair_slab_convert(stericol_pair_slab *slab, stericol_pair_tile *tile, size_t from, size_t to,
                                size_t worker)
{
    for (size_t k = 0; k < slab->levels; k++)
        stericol_pair_pieces(slab, k, from, to, convert_piece_of_slab, &(conversion){slab, tile, k, worker});
}

void stericol_pair_slab_sweep(const stericol_pair_slab *slab, const stericol_pair_tile *tile, size_t from,
                              size_t to)
{
    const stericol_pair_work *work = slab->work;
    const stericol_grid *grid = work->grid;

    for (size_t k = 0; k < slab->levels; k++) {
        size_t level = slab->level0 + k, at = k * slab->count;
        stericol_sweep_level_record record = {
            .position = grid->level[level],
            .salinity = {slab->salinity[0] + at, slab->salinity[1] + at},
            .temperature = {slab->temperature[0] + at, slab->temperature[1] + at},
            .last = level + 1 == grid->levels,
        };

        if (grid->own_depths) {
            record.positions = slab->depth + at;
            record.uppers = slab->upper + at;
            record.lowers = slab->lower + at;
        } else if (grid->level_bounds != NULL) {
            record.upper = grid->level_bounds[2 * level];
            record.lower = grid->level_bounds[2 * level + 1];
        }
        if (slab->averaged[0] != NULL) {
            record.averaged_volume[0] = slab->averaged[0] + at;
            record.averaged_volume[1] = slab->averaged[1] + at;
            record.averaged_thermosteric = slab->averaged[2] + at;
            record.averaged_halosteric = slab->averaged[3] + at;
        }
        stericol_sweep_level(tile->sweep, &record, from, to);
    }
}
