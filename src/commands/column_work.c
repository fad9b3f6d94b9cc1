/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The sums by layer come from one sweep; what each interval between rows contributes comes from further
 * sweeps in which the intervals are the layers.  Both see the same samples, so that the parts add up.
 */
#include "commands/column_inside.h"

#include "base/checked.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>

enum {
    BATCH = 63,            /* intervals a sweep; it takes 64 layers */
    MOST_CLOSE_LAYERS = 62 /* that can matter to where a column ends */
};

/* Limits closer than this to a level need no row of their own, m. */
static const double one_depth = 1e-6;

typedef struct job {
    stericol_context *context;
    const stericol_working_levels *levels;
    const stericol_column_options *options;
    double sea_floor;
    size_t first, last; /* levels where the integration begins and ends: both states are there */
    stericol_working *working;
} job;

/* A limit rounds when it becomes a pressure; this much inside the data, m, it stays inside. */
static double hair(const job *j, double depth)
{
    return j->levels->coordinate == STERICOL_COORDINATE_PRESSURE ? 1e-12 * depth + 1e-9 : 0.0;
}

/* ---- sweeping ---- */

static bool is_sample(const stericol_working_levels *levels, size_t level)
{
    for (size_t e = 0; e < 2; e++)
        if (!isfinite(levels->salinity[e][level]) || !isfinite(levels->temperature[e][level]))
            return false;
    return true;
}

/* Sweeps the levels from..to (to excluded) by the layers given. */
static stericol_status sweep_levels(const job *j, const stericol_layer *layers, size_t layer_count,
                                    size_t from, size_t to, stericol_sweep **sweep)
{
    const stericol_working_levels *levels = j->levels;
    const double *place = levels->coordinate == STERICOL_COORDINATE_DEPTH ? levels->depth : levels->pressure;
    stericol_column_options options = *j->options;
    stericol_status status;

    options.layers = layers;
    options.layer_count = layer_count;
    options.coordinate = levels->coordinate;
    options.cast = true;
    if (!isnan(options.gap_reach))
        options.gap_reach += one_depth; /* a gap as wide as that is bridged, however its depths round */
    options.levels = to - from;
    status = stericol_sweep_new(j->context, &options, 1, 1, &levels->latitude,
                                isnan(j->sea_floor) ? NULL : &j->sea_floor, sweep);
    if (status != STERICOL_OK)
        return status;
    for (size_t i = from; i < to; i++) {
        const stericol_sweep_level_record record = {
            .position = place[i],
            .salinity = {&levels->salinity[0][i], &levels->salinity[1][i]},
            .temperature = {&levels->temperature[0][i], &levels->temperature[1][i]},
            .last = i + 1 == levels->count,
        };

        stericol_sweep_level(*sweep, &record, 0, 1);
    }
    status = stericol_sweep_finish(*sweep, 0, 1);
    if (status != STERICOL_OK) {
        stericol_sweep_free(*sweep);
        *sweep = NULL;
    }
    return status;
}

static void take_results(const stericol_sweep *sweep, size_t layer, double values[STERICOL_COLUMN_QUANTITIES])
{
    for (size_t q = 0; q < STERICOL_COLUMN_QUANTITIES; q++)
        values[q] = stericol_sweep_result(sweep, (stericol_column_quantity)q, layer)[0];
}

/* ---- the sums ---- */

static stericol_status sum_layers(job *j)
{
    stericol_working *w = j->working;
    const size_t layers = j->options->layer_count;
    stericol_sweep *sweep = NULL;
    stericol_status status = sweep_levels(j, j->options->layers, layers, 0, j->levels->count, &sweep);

    if (status != STERICOL_OK)
        return status;
    w->sums = stericol_new_array(layers + 1, sizeof *w->sums);
    if (w->sums == NULL) {
        stericol_sweep_free(sweep);
        return stericol_fail_memory(j->context, 0, "the sums");
    }
    w->layer_count = layers;
    w->flag = stericol_sweep_flags(sweep)[0];
    for (size_t k = 0; k <= layers; k++) {
        stericol_working_sum *sum = &w->sums[k];

        take_results(sweep, k < layers ? k : STERICOL_WHOLE_COLUMN, sum->value);
        if (k == layers)
            break;
        sum->upper = j->options->layers[k].upper;
        sum->lower = j->options->layers[k].lower;
        sum->state = (stericol_layer_state)stericol_sweep_layer_state(sweep, k)[0];
    }
    stericol_sweep_free(sweep);
    return STERICOL_OK;
}

/* Where the integration begins and ends: a layer from the surface, and one from the first sample, tell. */
static stericol_status find_extent(job *j)
{
    const double first = j->levels->depth[j->first];
    stericol_layer layers[MOST_CLOSE_LAYERS + 2];
    stericol_working *w = j->working;
    size_t count = 0;
    stericol_sweep *sweep = NULL;
    stericol_status status;

    layers[count++] = (stericol_layer){0.0, (double)INFINITY};
    layers[count++] = (stericol_layer){first + hair(j, first), (double)INFINITY};
    for (size_t k = 0; k < j->options->layer_count && count < MOST_CLOSE_LAYERS + 2; k++)
        if (isfinite(j->options->layers[k].lower))
            layers[count++] = j->options->layers[k];
    status = sweep_levels(j, layers, count, 0, j->levels->count, &sweep);
    if (status != STERICOL_OK)
        return status;
    w->top = stericol_sweep_layer_state(sweep, 0)[0] == STERICOL_LAYER_COMPLETE ? 0.0 : first;
    w->reached = stericol_sweep_deepest(sweep);
    stericol_sweep_free(sweep);
    if (isnan(w->reached)) /* a single sample that is carried nowhere */
        w->reached = w->top;
    return STERICOL_OK;
}

const stericol_working_gap *stericol_working_ending_gap(const stericol_working *w)
{
    const stericol_working_gap *gap = &w->levels->gap;

    if (w->flag != STERICOL_COLUMN_GAP && w->flag != STERICOL_COLUMN_UNEQUAL)
        return NULL;
    return gap->upper <= w->reached + one_depth && gap->lower > w->reached ? gap : NULL;
}

static stericol_status refuse_gap(const job *j)
{
    const stericol_working_gap *gap = &j->levels->gap;
    stericol_text remedy = {0};
    stericol_status status;

    stericol_text_format(&remedy, "use --gap-reach %.0f, which bridges all", gap->bridging);
    status = stericol_fail(j->context, STERICOL_NOTHING, NULL, NULL, stericol_text_string(&remedy),
                           "no layer is complete: samples at %g and %g m are %g m apart, and %g m is allowed "
                           "there",
                           gap->upper, gap->lower, gap->lower - gap->upper, gap->allowed);
    stericol_text_free(&remedy);
    return status;
}

static stericol_status check_layers(const job *j)
{
    const stericol_working *w = j->working;
    bool above = w->top > 0.0; /* every layer begins above the data */

    for (size_t k = 0; k < w->layer_count; k++) {
        if (w->sums[k].state == STERICOL_LAYER_COMPLETE)
            return STERICOL_OK;
        above = above && w->sums[k].upper < w->top;
    }
    if (!above && stericol_working_ending_gap(w) != NULL)
        return refuse_gap(j);
    return stericol_fail(j->context, STERICOL_NOTHING, NULL, NULL,
                         above ? "ask for other --layers, or carry the top level further with --surface-reach"
                               : "ask for other --layers",
                         "no layer lies wholly within the usable data, %g..%g m (%s)", w->top, w->reached,
                         stericol_column_flag_word(w->flag));
}

/* ---- the rows ---- */

static int by_depth(const void *a, const void *b)
{
    const stericol_working_row *one = a, *other = b;

    return one->depth < other->depth ? -1 : one->depth > other->depth;
}

static stericol_working_row *new_row(stericol_working *w, stericol_working_row_kind kind, double depth,
                                     double pressure)
{
    stericol_working_row *row = &w->rows[w->row_count++];

    *row = (stericol_working_row){.kind = kind, .depth = depth, .pressure = pressure};
    for (size_t e = 0; e < 2; e++)
        row->salinity[e] = row->temperature[e] = row->volume[e] = (double)NAN;
    row->expansion = row->contraction = (double)NAN;
    for (size_t q = 0; q < STERICOL_COLUMN_QUANTITIES; q++)
        row->part[q] = (double)NAN;
    return row;
}

/* A row with the water of a level, there or carried elsewhere. */
static void add_water(const job *j, stericol_working_row_kind kind, double depth, double pressure,
                      size_t level)
{
    stericol_working_row *row = new_row(j->working, kind, depth, pressure);

    for (size_t e = 0; e < 2; e++) {
        row->salinity[e] = j->levels->salinity[e][level];
        row->temperature[e] = j->levels->temperature[e][level];
    }
    if (j->levels->single)
        stericol_standard_ocean(&j->levels->water, pressure, &row->salinity[0], &row->temperature[0]);
}

static void add_limits(const job *j, double limit)
{
    stericol_working *w = j->working;

    if (!(limit > w->top + one_depth && limit < w->reached - one_depth))
        return;
    for (size_t i = 0; i < w->row_count; i++)
        if (fabs(w->rows[i].depth - limit) <= one_depth)
            return;
    new_row(w, STERICOL_ROW_LIMIT, limit, stericol_sea_pressure(limit, j->levels->latitude));
}

/* v, expansion and contraction of a row whose water is known. */
static void evaluate(const job *j, stericol_working_row *row)
{
    const stericol_water *water = &j->levels->water;
    double salinity = row->salinity[1], temperature = row->temperature[1], volume, by_temperature,
           by_salinity;

    for (size_t e = 0; e < 2; e++)
        stericol_volume_points(water, &row->pressure, 1, &row->salinity[e], &row->temperature[e],
                               &row->volume[e]);
    if (!j->levels->single) {
        salinity = 0.5 * (row->salinity[0] + salinity);
        temperature = 0.5 * (row->temperature[0] + temperature);
    }
    stericol_volume_points_derivatives(water, &row->pressure, 1, &salinity, &temperature, &volume,
                                       &by_temperature, &by_salinity);
    row->expansion = by_temperature / volume;
    row->contraction = -by_salinity / volume;
}

/* The row at which the integration ends, where that is no level. */
static void add_end(const job *j)
{
    const stericol_working_levels *levels = j->levels;
    const double reached = j->working->reached, pressure = stericol_sea_pressure(reached, levels->latitude);
    size_t above = j->first;

    for (size_t i = j->first; i < levels->count; i++) {
        if (fabs(levels->depth[i] - reached) <= one_depth)
            return;
        if (levels->depth[i] < reached && is_sample(levels, i))
            above = i;
    }
    if (above < j->last && fabs(reached - j->sea_floor) <= one_depth)
        new_row(j->working, STERICOL_ROW_LIMIT, reached, pressure); /* the floor, between two samples */
    else
        add_water(j, STERICOL_ROW_CARRIED, reached, pressure, above);
}

static stericol_status make_rows(job *j)
{
    const stericol_working_levels *levels = j->levels;
    stericol_working *w = j->working;

    w->rows = stericol_new_array(levels->count + 2 * j->options->layer_count + 2, sizeof *w->rows);
    if (w->rows == NULL)
        return stericol_fail_memory(j->context, 0, "the working");
    const bool carried = w->top < levels->depth[j->first];

    if (carried)
        add_water(j, STERICOL_ROW_CARRIED, 0.0, 0.0, j->first);
    for (size_t i = 0; i < levels->count; i++)
        if (!carried || levels->depth[i] > one_depth) /* a level that one table alone has at the surface */
            add_water(j, STERICOL_ROW_LEVEL, levels->depth[i], levels->pressure[i], i);
    add_end(j);
    for (size_t k = 0; k < j->options->layer_count; k++) {
        add_limits(j, j->options->layers[k].upper);
        add_limits(j, j->options->layers[k].lower);
    }
    qsort(w->rows, w->row_count, sizeof *w->rows, by_depth);
    for (size_t i = 0; i < w->row_count; i++)
        if (w->rows[i].kind != STERICOL_ROW_LIMIT)
            evaluate(j, &w->rows[i]);
    return STERICOL_OK;
}

/* ---- the parts ---- */

/* The levels that intervals between `upper` and `lower` need, with a sample more at either end, so that the
   sweep meets the intervals inside its data.  Splines need all. */
static void choose_levels(const job *j, double upper, double lower, size_t *from, size_t *to)
{
    const stericol_working_levels *levels = j->levels;
    size_t more = 2;

    *from = 0;
    *to = levels->count;
    if (j->options->vertical != STERICOL_VERTICAL_LINEAR)
        return;
    for (size_t i = 0; i < levels->count && levels->depth[i] <= upper; i++)
        *from = i;
    for (size_t i = *from + 1; i > 0 && more > 0; i--) {
        *from = i - 1;
        more -= is_sample(levels, i - 1);
    }
    more = 2;
    for (size_t i = *from; i < levels->count && more > 0; i++) {
        *to = i + 1;
        more -= levels->depth[i] >= lower && is_sample(levels, i);
    }
}

/* The parts of the rows first..first + count - 1, each down to the next row. */
static stericol_status fill_batch(const job *j, size_t first, size_t count)
{
    stericol_working_row *rows = j->working->rows + first;
    stericol_layer layers[BATCH];
    stericol_sweep *sweep = NULL;
    size_t from, to;
    stericol_status status;

    assert(count <= BATCH);
    for (size_t i = 0; i < count; i++)
        layers[i] = (stericol_layer){rows[i].depth, rows[i + 1].depth};
    if (rows[0].depth > 0.0)
        layers[0].upper += hair(j, layers[0].upper);
    layers[count - 1].lower -= hair(j, layers[count - 1].lower);
    choose_levels(j, rows[0].depth, rows[count].depth, &from, &to);
    status = sweep_levels(j, layers, count, from, to, &sweep);
    if (status != STERICOL_OK)
        return status;
    for (size_t i = 0; i < count; i++) {
        take_results(sweep, i, rows[i].part);
        if (isfinite(rows[i].part[STERICOL_COLUMN_DEPTH]))
            rows[i].part[STERICOL_COLUMN_DEPTH] = rows[i + 1].depth - rows[i].depth;
    }
    stericol_sweep_free(sweep);
    return STERICOL_OK;
}

static stericol_status fill_parts(const job *j)
{
    const stericol_working *w = j->working;
    size_t first = 0, end = w->row_count - 1;

    while (first < end && w->rows[first].depth < w->top)
        first++;
    while (end > first && w->rows[end].depth > w->reached + one_depth)
        end--;
    while (first < end) {
        const size_t count = end - first < BATCH ? end - first : BATCH;
        const stericol_status status = fill_batch(j, first, count);

        if (status != STERICOL_OK)
            return status;
        first += count;
    }
    return STERICOL_OK;
}

/* ---- */

static bool find_samples(job *j)
{
    size_t found = 0;

    for (size_t i = 0; i < j->levels->count; i++)
        if (is_sample(j->levels, i)) {
            if (found++ == 0)
                j->first = i;
            j->last = i;
        }
    return found > 0;
}

stericol_status stericol_working_make(stericol_context *context, const stericol_working_levels *levels,
                                      const stericol_column_options *options, double sea_floor,
                                      stericol_working *working)
{
    job j = {
        .context = context, .levels = levels, .options = options, .sea_floor = sea_floor, .working = working};
    stericol_status status;

    *working = (stericol_working){.levels = levels, .options = options};
    if (!find_samples(&j))
        return isfinite(levels->gap.upper)
                   ? refuse_gap(&j)
                   : stericol_fail(context, STERICOL_NOTHING, NULL, NULL,
                                   "check what the tables hold, and where they say NA",
                                   levels->single ? "no level has both temperature and salinity"
                                                  : "no level has temperature and salinity in both tables");
    status = sum_layers(&j);
    if (status == STERICOL_OK)
        status = find_extent(&j);
    if (status == STERICOL_OK)
        status = check_layers(&j);
    if (status == STERICOL_OK)
        status = make_rows(&j);
    if (status == STERICOL_OK)
        status = fill_parts(&j);
    if (status != STERICOL_OK)
        stericol_working_free(working);
    return status;
}

void stericol_working_free(stericol_working *working)
{
    free(working->rows);
    free(working->sums);
    *working = (stericol_working){0};
}

double stericol_working_geopotential(const stericol_working *working, double height)
{
    return height * stericol_gravity(working->levels->latitude, 0.0);
}
