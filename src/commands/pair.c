/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/pair_inside.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

void stericol_pair_outcome_free(stericol_pair_outcome *outcome)
{
    free(outcome->region_area);
    free(outcome->sums);
    *outcome = (stericol_pair_outcome){0};
}

/* How many levels the layers need: up to the first sample at or beyond the deepest limit, everywhere. */
static size_t count_levels(const stericol_pair_work *work)
{
    const stericol_pair *pair = work->pair;
    const stericol_grid *grid = work->grid;
    double deepest = 0.0;

    for (size_t i = 0; i < pair->column.layer_count; i++)
        deepest = fmax(deepest, pair->column.layers[i].lower);
    if (!isfinite(deepest) || grid->own_depths)
        return grid->levels;
    if (grid->vertical == STERICOL_VERTICAL_PRESSURE)
        deepest = stericol_sea_pressure(deepest, 90.0); /* the largest pressure at that depth */
    for (size_t k = 0; k < grid->levels; k++)
        if (stericol_pair_position(work, k) >= deepest)
            return k + 1;
    return grid->levels;
}

static void work_free(stericol_pair_work *work)
{
    for (size_t e = 0; e < 2; e++) {
        free(work->zero_is_land[e]);
        free(work->tally[e]);
    }
    if (work->totals != NULL)
        for (size_t i = 0; i < work->executor->workers; i++)
            stericol_region_totals_free(work->totals[i]);
    free(work->totals);
    free(work->counters);
    free(work->row_buffers);
}

static stericol_status work_new(stericol_pair_work *work)
{
    size_t workers = work->executor->workers, levels = work->grid->levels;
    bool whole = true;

    for (size_t e = 0; e < 2; e++) {
        work->zero_is_land[e] = stericol_new_array(levels, 1);
        work->tally[e] = stericol_new_array(levels, sizeof *work->tally[e]);
        whole = work->zero_is_land[e] != NULL && work->tally[e] != NULL && whole;
        if (work->zero_is_land[e] != NULL)
            memset(work->zero_is_land[e], 1, levels);
    }
    work->counters = stericol_new_array(workers, sizeof *work->counters);
    work->totals = stericol_new_array(workers, sizeof(stericol_region_totals *));
    work->row_buffers = stericol_new_array(workers, 2 * work->grid->columns * sizeof(double));
    whole = whole && work->counters != NULL && work->totals != NULL && work->row_buffers != NULL;
    for (size_t i = 0; whole && i < workers; i++)
        whole = (work->totals[i] = stericol_region_totals_new(stericol_regions_count(work->pair->regions),
                                                              stericol_pair_sum_count(work->pair))) != NULL;
    if (!whole)
        return stericol_fail_memory(work->context, 0, "the region sums");
    work->level_count = count_levels(work);
    return STERICOL_OK;
}

typedef struct tile_task {
    stericol_pair_slab *slab;
    stericol_pair_tile *tile;
} tile_task;

static void convert_and_sweep(void *argument, size_t from, size_t to, size_t worker)
{
    tile_task *task = argument;

    stericol_pair_slab_convert(task->slab, task->tile, from, to, worker);
    stericol_pair_slab_sweep(task->slab, task->tile, from, to);
}

static void convert_only(void *argument, size_t from, size_t to, size_t worker)
{
    tile_task *task = argument;

    stericol_pair_slab_convert(task->slab, task->tile, from, to, worker);
}

static void sweep_only(void *argument, size_t from, size_t to, size_t worker)
{
    tile_task *task = argument;

    (void)worker;
    stericol_pair_slab_sweep(task->slab, task->tile, from, to);
}

/* Columns that a worker takes at once: enough for the calls to vanish, few enough for a level to stay in
 * cache. */
enum { GRAIN = 4 * STERICOL_PAIR_STRIP };

/* One slab, while the next is being read. */
static stericol_status handle_slab(stericol_pair_work *work, stericol_pair_slab *slab,
                                   stericol_pair_tile *tile)
{
    stericol_executor *executor = work->executor;
    tile_task task = {slab, tile};
    stericol_status status;

    if (!work->pair->average_integrals) {
        executor->run(executor, slab->count, GRAIN, convert_and_sweep, &task);
        return STERICOL_OK;
    }
    executor->run(executor, slab->count, GRAIN, convert_only, &task);
    status = stericol_pair_average_integrals(slab);
    if (status == STERICOL_OK)
        executor->run(executor, slab->count, GRAIN, sweep_only, &task);
    return status;
}

static void aim_slab(stericol_pair_slab *slab, const stericol_pair_tile *tile, size_t level0)
{
    size_t left = slab->work->level_count - level0;

    slab->row0 = tile->row0;
    slab->rows = tile->rows;
    slab->count = tile->count;
    slab->level0 = level0;
    slab->levels = left < slab->work->plan.levels ? left : slab->work->plan.levels;
}

/* What went wrong in the reading thread's own context, told in the run's. */
static stericol_status pass_on(stericol_pair_work *work, stericol_pair_slab *slab)
{
    if (slab->status == STERICOL_OK)
        return STERICOL_OK;
    return stericol_fail_again(work->context, slab->context);
}

static stericol_status report_progress(stericol_pair_work *work, const stericol_pair_tile *tile,
                                       size_t levels)
{
    double whole = (double)work->grid->rows * (double)work->level_count;
    double done = (double)tile->row0 * (double)work->level_count + (double)tile->rows * (double)levels;

    if (work->tick == NULL || work->tick(work->user, done, whole))
        return STERICOL_OK;
    return stericol_fail(work->context, STERICOL_INTERRUPTED, NULL, NULL, NULL, "interrupted");
}

/*
 * Every slab of a tile.  With averaged integrals the members are read in the foreground, and nothing may be
 * in the reading room in the background meanwhile.
 */
static stericol_status run_slabs(stericol_pair_work *work, stericol_pair_slab slabs[2],
                                 stericol_pair_tile *tile)
{
    stericol_executor *executor = work->executor;
    bool ahead = !work->pair->average_integrals;
    size_t current = 0;
    stericol_status status;

    aim_slab(&slabs[0], tile, 0);
    stericol_pair_slab_load(&slabs[0]);
    status = pass_on(work, &slabs[0]);
    while (status == STERICOL_OK) {
        stericol_pair_slab *slab = &slabs[current], *next = &slabs[1 - current];
        size_t done = slab->level0 + slab->levels;
        bool more = done < work->level_count;

        if (more)
            aim_slab(next, tile, done);
        if (more && ahead)
            executor->start(executor, stericol_pair_slab_load, next);
        status = handle_slab(work, slab, tile);
        if (more && ahead)
            executor->wait(executor);
        if (status == STERICOL_OK && more && !ahead)
            stericol_pair_slab_load(next);
        if (status == STERICOL_OK && more)
            status = pass_on(work, next);
        if (status == STERICOL_OK)
            status = report_progress(work, tile, done);
        if (!more)
            break;
        current = 1 - current;
    }
    return status;
}

typedef struct finish_task {
    stericol_pair_tile *tile;
    stericol_status *status; /* [workers] */
} finish_task;

static void finish_range(void *argument, size_t from, size_t to, size_t worker)
{
    finish_task *task = argument;
    stericol_status status = stericol_sweep_finish(task->tile->sweep, from, to);

    if (status != STERICOL_OK)
        task->status[worker] = status;
}

static stericol_status finish_tile(stericol_pair_work *work, stericol_pair_tile *tile)
{
    size_t workers = work->executor->workers;
    finish_task task = {tile, stericol_new_array(workers, sizeof(stericol_status))};
    stericol_status status = STERICOL_OK;

    if (task.status == NULL)
        return stericol_fail_memory(work->context, 0, "the end of a tile");
    work->executor->run(work->executor, tile->count, GRAIN, finish_range, &task);
    for (size_t i = 0; i < workers; i++)
        if (task.status[i] != STERICOL_OK)
            status = stericol_fail_memory(work->context, 0, "the splines of a tile");
    free(task.status);
    return status;
}

/* The maps of the result in terms of the sweep's quantities. */
static const struct {
    stericol_map map;
    stericol_column_quantity quantity;
} maps[] = {{STERICOL_MAP_STERIC, STERICOL_COLUMN_TOTAL},
            {STERICOL_MAP_THERMOSTERIC, STERICOL_COLUMN_THERMOSTERIC},
            {STERICOL_MAP_HALOSTERIC, STERICOL_COLUMN_HALOSTERIC},
            {STERICOL_MAP_REMAINDER, STERICOL_COLUMN_REMAINDER},
            {STERICOL_MAP_HEAT, STERICOL_COLUMN_HEAT},
            {STERICOL_MAP_EFFICIENCY, STERICOL_COLUMN_EFFICIENCY},
            {STERICOL_MAP_EXPANSION, STERICOL_COLUMN_EXPANSION},
            {STERICOL_MAP_DEPTH, STERICOL_COLUMN_DEPTH}};

typedef struct write_task {
    stericol_pair_work *work;
    const stericol_pair_tile *tile;
    stericol_context *context;
    stericol_status status;
} write_task;

static void write_maps(void *argument)
{
    write_task *task = argument;
    const stericol_pair_work *work = task->work;
    const stericol_pair_tile *tile = task->tile;
    size_t layers = work->pair->column.layer_count;

    task->status = stericol_result_flags(task->context, work->result, tile->row0, tile->rows,
                                         stericol_sweep_flags(tile->sweep));
    for (size_t m = 0; m < sizeof maps / sizeof maps[0]; m++) {
        if (!stericol_change_holds_map(work->layout, maps[m].map))
            continue;
        for (size_t layer = 0; layer <= (layers > 1 ? layers : 0); layer++) {
            size_t which = layer == (layers > 1 ? layers : 0) ? STERICOL_WHOLE_COLUMN : layer;

            if (task->status == STERICOL_OK)
                task->status = stericol_result_map(
                    task->context, work->result, maps[m].map, which, tile->row0, tile->rows,
                    stericol_sweep_result(tile->sweep, maps[m].quantity, which));
        }
    }
}

/* The maps go out while the workers add up the regions: nothing is being read meanwhile. */
static stericol_status hand_out_tile(stericol_pair_work *work, const stericol_pair_tile *tile)
{
    write_task task = {work, tile, stericol_context_new(), STERICOL_OK};
    stericol_status status = STERICOL_OK;

    if (task.context == NULL)
        return stericol_fail_memory(work->context, 0, "writing a tile");
    if (work->result != NULL)
        work->executor->start(work->executor, write_maps, &task);
    stericol_pair_sum_tile(work, tile);
    if (work->result != NULL)
        work->executor->wait(work->executor);
    if (task.status != STERICOL_OK)
        status = stericol_fail_again(work->context, task.context);
    stericol_context_free(task.context);
    return status;
}

static void count_flags(const stericol_pair_work *work, const stericol_pair_tile *tile,
                        stericol_pair_outcome *outcome)
{
    const signed char *flags = stericol_sweep_flags(tile->sweep);
    const double *total = stericol_sweep_result(tile->sweep, STERICOL_COLUMN_TOTAL, STERICOL_WHOLE_COLUMN);
    const double *area = work->pair->cell_area + tile->row0 * work->grid->columns;
    double deepest = stericol_sweep_deepest(tile->sweep);

    for (size_t i = 0; i < tile->count; i++) {
        if (flags[i] >= 0 && flags[i] < STERICOL_COLUMN_FLAGS && area[i] > 0.0)
            outcome->flags[flags[i]]++;
        if (isfinite(total[i]) && area[i] > 0.0)
            outcome->used++;
        for (size_t k = 0; k < work->pair->column.layer_count && area[i] > 0.0; k++)
            if (stericol_sweep_layer_state(tile->sweep, k)[i] == STERICOL_LAYER_COMPLETE)
                outcome->layer_columns++;
    }
    if (isfinite(deepest))
        outcome->deepest = fmax(outcome->deepest, deepest);
}

static stericol_status run_tile(stericol_pair_work *work, stericol_pair_slab slabs[2], size_t row0,
                                stericol_pair_outcome *outcome)
{
    const stericol_grid *grid = work->grid;
    size_t left = grid->rows - row0, columns = grid->columns;
    stericol_pair_tile tile = {.row0 = row0, .rows = left < work->plan.rows ? left : work->plan.rows};
    const double *latitude = grid->latitude + (grid->curvilinear ? row0 * columns : row0);
    const double *floor = work->pair->sea_floor == NULL ? NULL : work->pair->sea_floor + row0 * columns;
    stericol_status status;

    tile.count = tile.rows * columns;
    tile.wet = stericol_new_array(tile.count, 1);
    if (tile.wet == NULL)
        return stericol_fail_memory(work->context, tile.count, "a tile");
    status = stericol_sweep_new(work->context, &work->pair->column, tile.count,
                                grid->curvilinear ? 1 : columns, latitude, floor, &tile.sweep);
    if (status == STERICOL_OK)
        status = run_slabs(work, slabs, &tile);
    if (status == STERICOL_OK)
        status = finish_tile(work, &tile);
    if (status == STERICOL_OK) {
        count_flags(work, &tile, outcome);
        status = hand_out_tile(work, &tile);
    }
    stericol_sweep_free(tile.sweep);
    free(tile.wet);
    return status;
}

static void reset(stericol_pair_work *work, stericol_pair_outcome *outcome)
{
    for (size_t e = 0; e < 2; e++)
        memset(work->tally[e], 0, work->grid->levels * sizeof *work->tally[e]);
    for (size_t i = 0; i < work->executor->workers; i++) {
        stericol_region_totals_clear(work->totals[i]);
        work->counters[i].outside_equation = work->counters[i].rejected = 0;
    }
    memset(outcome->flags, 0, sizeof outcome->flags);
    outcome->used = outcome->layer_columns = 0;
    outcome->deepest = 0.0;
    outcome->readings++;
}

static stericol_status run_grid(stericol_pair_work *work, stericol_pair_slab slabs[2],
                                stericol_pair_outcome *outcome)
{
    stericol_status status = STERICOL_OK;

    reset(work, outcome);
    for (size_t row0 = 0; row0 < work->grid->rows && status == STERICOL_OK; row0 += work->plan.rows)
        status = run_tile(work, slabs, row0, outcome);
    return status;
}

/*
 * Land written as zeros: T = S = 0 counts as land on a level where a tenth of the cells or more have it, and
 * as water elsewhere.  The first reading supposes land everywhere; true when a level was supposed wrongly.
 */
static bool judge_zeros(stericol_pair_work *work, stericol_pair_outcome *outcome)
{
    double cells = (double)work->grid->rows * (double)work->grid->columns;
    bool wrong = false;

    outcome->land_zero_levels = 0;
    for (size_t e = 0; e < work->epoch_count; e++) {
        if (work->pair->epochs[e].salinity_source != STERICOL_SALINITY_FROM_FILE)
            continue;
        for (size_t k = 0; k < work->level_count; k++) {
            double zeros = (double)work->tally[e][k].zeros;

            if (zeros >= 0.1 * cells)
                outcome->land_zero_levels++;
            else if (zeros > 0.0 && work->zero_is_land[e][k]) {
                work->zero_is_land[e][k] = 0;
                wrong = true;
            }
        }
    }
    return wrong;
}

/*
 * Without a salinity beside it T = 0 alone cannot tell land from water at 0 degC; but a tenth of a level at
 * exactly that is land, and would count as water without change.
 */
static stericol_status refuse_lone_zeros(stericol_pair_work *work)
{
    double cells = (double)work->grid->rows * (double)work->grid->columns;

    for (size_t e = 0; e < work->epoch_count; e++) {
        stericol_epoch_variable variable = stericol_epoch_temperature(work->pair->epochs[e].epoch);

        if (work->pair->epochs[e].salinity_source == STERICOL_SALINITY_FROM_FILE || work->grid->dry != NULL)
            continue;
        for (size_t k = 0; k < work->level_count; k++)
            if ((double)work->tally[e][k].zeros >= 0.1 * cells)
                return stericol_fail(
                    work->context, STERICOL_INPUT, variable.file, variable.name,
                    "give the land with --mask, or write it as missing values",
                    "is exactly 0 in %llu of %.0f cells at level %zu: land written as zeros, it seems",
                    work->tally[e][k].zeros, cells, k + 1);
    }
    return STERICOL_OK;
}

static stericol_status gather(stericol_pair_work *work, stericol_pair_outcome *outcome)
{
    const stericol_pair *pair = work->pair;
    size_t layers = pair->column.layer_count, regions = stericol_regions_count(pair->regions);
    stericol_region_totals *totals = work->totals[0];

    outcome->regions = regions;
    outcome->layers = layers;
    outcome->region_area = stericol_new_array(regions, sizeof(double));
    outcome->sums = stericol_new_array(regions * (layers + 1), sizeof *outcome->sums);
    if (outcome->region_area == NULL || outcome->sums == NULL)
        return stericol_fail_memory(work->context, 0, "the region sums");
    for (size_t i = 1; i < work->executor->workers; i++)
        stericol_region_totals_merge(totals, work->totals[i]);
    for (size_t r = 0; r < regions; r++) {
        outcome->region_area[r] = stericol_region_totals_value(totals, r, stericol_pair_sum_count(pair) - 1);
        for (size_t layer = 0; layer <= layers; layer++) {
            size_t first = (layers == 1 ? 1 : layer) * STERICOL_PAIR_SUMS; /* see sum_rows() */

            outcome->sums[r * (layers + 1) + layer] = (stericol_pair_sums){
                .total = stericol_region_totals_value(totals, r, first + STERICOL_PAIR_SUM_TOTAL),
                .thermosteric =
                    stericol_region_totals_value(totals, r, first + STERICOL_PAIR_SUM_THERMOSTERIC),
                .halosteric = stericol_region_totals_value(totals, r, first + STERICOL_PAIR_SUM_HALOSTERIC),
                .heat = stericol_region_totals_value(totals, r, first + STERICOL_PAIR_SUM_HEAT),
                .heat_magnitude =
                    stericol_region_totals_value(totals, r, first + STERICOL_PAIR_SUM_HEAT_MAGNITUDE),
                .covered_area = stericol_region_totals_value(totals, r, first + STERICOL_PAIR_SUM_AREA),
                .incomplete =
                    (size_t)stericol_region_totals_value(totals, r, first + STERICOL_PAIR_SUM_INCOMPLETE),
            };
        }
    }
    for (size_t i = 0; i < work->executor->workers; i++)
        outcome->outside_equation += work->counters[i].outside_equation;
    outcome->rejected = 0.0;
    for (size_t i = 0; i < work->executor->workers; i++)
        outcome->rejected += (double)work->counters[i].rejected;
    for (size_t e = 0; e < work->epoch_count; e++)
        for (size_t k = 0; k < work->level_count; k++) {
            const stericol_epoch_tally *tally = &work->tally[e][k];

            outcome->rejected += (double)(tally->temperature.below + tally->temperature.above +
                                          tally->salinity.below + tally->salinity.above);
        }
    return STERICOL_OK;
}

/* No column was used: because a field holds nothing at all, or else because nothing fits together. */
static stericol_status refuse_nothing(const stericol_pair_work *work)
{
    stericol_epoch_variable last = {0};

    for (size_t e = 0; e < work->epoch_count; e++) {
        const stericol_pair_epoch *source = &work->pair->epochs[e];
        bool has_salinity = source->salinity_source == STERICOL_SALINITY_FROM_FILE;
        unsigned long long held[2] = {0, 0};

        last = stericol_epoch_temperature(source->epoch);
        for (size_t k = 0; k < work->level_count; k++) {
            const stericol_epoch_tally *tally = &work->tally[e][k];

            held[0] += tally->temperature.values - tally->temperature.missing;
            held[1] += tally->salinity.values - tally->salinity.missing;
        }
        for (int field = 0; field < (has_salinity ? 2 : 1); field++) {
            stericol_epoch_variable empty = field == 0 ? last : stericol_epoch_salinity(source->epoch);

            if (held[field] == 0)
                return stericol_fail(work->context, STERICOL_NOTHING, empty.file, empty.name,
                                     "choose other times, other layers or another file",
                                     "every value is missing");
        }
    }
    return stericol_fail(
        work->context, STERICOL_NOTHING, last.file, last.name,
        "compare what the files hold with stericol inspect, and look at the layers, times and reaches",
        work->epoch_count > 1 ? "no column could be used: none holds both epochs over a whole layer"
                              : "no column could be used: none holds, over a whole layer, water that the "
                                "scenario leaves possible");
}

stericol_status stericol_pair_run(stericol_context *context, stericol_executor *executor,
                                  const stericol_pair *pair, stericol_result *result,
                                  const stericol_change_layout *layout, stericol_pair_tick *tick, void *user,
                                  stericol_pair_outcome *outcome)
{
    stericol_pair_work work = {.context = context,
                               .executor = executor,
                               .pair = pair,
                               .result = result,
                               .layout = layout,
                               .tick = tick,
                               .user = user};
    stericol_pair_slab slabs[2] = {{.work = NULL}, {.work = NULL}};
    stericol_status status;

    *outcome = (stericol_pair_outcome){0};
    work.grid = stericol_epoch_grid(pair->epochs[0].epoch);
    work.epoch_count = pair->kind == STERICOL_PAIR_SCENARIO ? 1 : 2;
    status = work_new(&work);
    if (status == STERICOL_OK)
        status = stericol_pair_plan_make(&work, &work.plan);
    outcome->plan = work.plan;
    for (size_t i = 0; i < 2 && status == STERICOL_OK; i++)
        status = stericol_pair_slab_new(&work, &slabs[i]);
    if (status == STERICOL_OK)
        status = run_grid(&work, slabs, outcome);
    if (status == STERICOL_OK)
        status = refuse_lone_zeros(&work);
    if (status == STERICOL_OK && judge_zeros(&work, outcome)) {
        status = run_grid(&work, slabs, outcome);
        judge_zeros(&work, outcome);
    }
    if (status == STERICOL_OK)
        status = gather(&work, outcome);
    if (status == STERICOL_OK && outcome->layer_columns == 0)
        status = refuse_nothing(&work);
    for (size_t i = 0; i < 2; i++)
        stericol_pair_slab_free(&slabs[i]);
    work_free(&work);
    if (status != STERICOL_OK)
        stericol_pair_outcome_free(outcome);
    return status;
}
