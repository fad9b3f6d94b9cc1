/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Making, freeing and asking a sweep. */
/* For madvise(), which POSIX has only without huge pages. */
#define _DEFAULT_SOURCE
#include "column/sweep.h"

#include "base/checked.h"
#include "base/context.h"

#include <assert.h>
#include <stdlib.h>
#include <string.h>
#include <sys/mman.h>

static bool is_spline(const stericol_column_options *options)
{
    return options->vertical == STERICOL_VERTICAL_STEFFEN || options->vertical == STERICOL_VERTICAL_AKIMA;
}

/* *bytes += a * b * size; false on overflow. */
static bool add_room(size_t *bytes, size_t a, size_t b, size_t size)
{
    size_t room;
    return stericol_multiply_sizes(a, b, &room) && stericol_multiply_sizes(room, size, &room) &&
           stericol_add_sizes(*bytes, room, bytes);
}

/*
 * Planes are walked side by side.  A distance near a multiple of 4 KiB would put all of them into the same
 * few sets of the first-level cache; nine lines more than a multiple spread them over all 64.
 */
static bool find_stride(size_t count, size_t *stride)
{
    enum { PAGE = 4096 / sizeof(double), SHIFT = 9 * 64 / sizeof(double) };
    *stride = count;
    if (count < PAGE)
        return true;
    return stericol_add_sizes(count, PAGE - 1 + SHIFT, stride) &&
           (*stride = count + (PAGE - count % PAGE) % PAGE + SHIFT) > 0;
}

static bool find_sizes(const stericol_column_options *options, const stericol_cuts *cuts, size_t count,
                       size_t row_length, bool with_sea_floor, stericol_sizes *sizes)
{
    const size_t rows = count / row_length;
    *sizes = (stericol_sizes){.bytes = sizeof(stericol_sweep)};
    sizes->carries = options->cast || (with_sea_floor && options->bottom_reach > 0.0);
    size_t state = cuts->segment_count * STERICOL_SUMS + STERICOL_PARTS + 3;
    if (sizes->carries)
        state += 4;
    sizes->result_planes = STERICOL_COLUMN_QUANTITIES * (cuts->layer_count + (cuts->layer_count > 1 ? 1 : 0));
    sizes->planes = state > sizes->result_planes ? state : sizes->result_planes;
    size_t *bytes = &sizes->bytes;
    bool counted = find_stride(count, &sizes->stride) &&
                   add_room(bytes, sizes->planes, sizes->stride, sizeof(double)) &&
                   add_room(bytes, with_sea_floor ? 2 : 1, count, sizeof(double)) &&
                   add_room(bytes, count, 1, sizeof(uint16_t) + sizeof(signed char) + cuts->layer_count) &&
                   add_room(bytes, rows, 1, sizeof(double));
    if (options->coordinate == STERICOL_COORDINATE_PRESSURE) {
        sizes->limits = cuts->limit_count * rows;
        counted = counted && add_room(bytes, cuts->limit_count + 2, rows, sizeof(double));
    }
    if (options->coordinate == STERICOL_COORDINATE_DEPTH && row_length == 1)
        counted = counted && add_room(bytes, rows, 1, sizeof(double));
    if (is_spline(options)) {
        size_t each;
        counted = counted && stericol_multiply_sizes(options->levels, 5, &each) &&
                  stericol_multiply_sizes(each, count, &sizes->samples) &&
                  add_room(bytes, sizes->samples, 1, sizeof(double)) &&
                  add_room(bytes, count, 1, sizeof(uint32_t));
    }
    return counted;
}

size_t stericol_sweep_bytes(const stericol_column_options *options, size_t count, size_t row_length,
                            bool with_sea_floor)
{
    stericol_cuts cuts;
    stericol_sizes sizes;
    const char *fault;
    assert(row_length > 0);
    if (!stericol_cut_depths(options, &cuts, &fault) ||
        !find_sizes(options, &cuts, count, row_length, with_sea_floor, &sizes))
        return SIZE_MAX;
    return sizes.bytes;
}

double stericol_metres(const stericol_sweep *sweep, double coordinate, size_t row)
{
    if (sweep->scale == NULL || !isfinite(coordinate) || fabs(coordinate) <= 0.0)
        return coordinate;
    return stericol_depth(coordinate, sweep->latitude[row]);
}

double stericol_coordinate_at(const stericol_sweep *sweep, double metres, size_t row)
{
    if (sweep->scale == NULL || !isfinite(metres))
        return metres;
    return stericol_sea_pressure(metres, sweep->latitude[row]);
}

size_t stericol_strip_length(const stericol_sweep *sweep, size_t from, size_t to)
{
    size_t length = to - from < STERICOL_STRIP ? to - from : STERICOL_STRIP;
    if (sweep->row_length > 1) {
        const size_t rest = sweep->row_length - from % sweep->row_length;
        length = rest < length ? rest : length;
    }
    return length;
}

/*
 * Room for the planes, all zero.  Large ones ask for huge pages: the planes are many and each is entered anew
 * with every strip, so that with small pages the translation of addresses and the first touch of each page
 * cost more than the sums themselves.
 */
static double *take_planes(const stericol_sizes *sizes)
{
    const size_t huge = (size_t)2 << 20;
    const size_t bytes = sizes->planes * sizes->stride * sizeof(double);
    if (bytes < 4 * huge)
        return stericol_new_array(sizes->planes * sizes->stride, sizeof(double));
    const size_t rounded = bytes / huge * huge + (bytes % huge > 0 ? huge : 0);
    void *planes = rounded < bytes ? NULL : aligned_alloc(huge, rounded);
    if (planes == NULL)
        return NULL;
#ifdef MADV_HUGEPAGE
    /* Only a wish: without huge pages it is slower, not wrong. */
    (void)madvise(planes, rounded, MADV_HUGEPAGE);
#endif
    return memset(planes, 0, bytes);
}

static bool take_room(stericol_sweep *sweep, bool with_sea_floor)
{
    const stericol_sizes *sizes = &sweep->sizes;
    const size_t count = sweep->count;
    const bool pressure = sweep->options.coordinate == STERICOL_COORDINATE_PRESSURE;
    sweep->planes = take_planes(sizes);
    sweep->reached = stericol_new_array(count, sizeof(double));
    sweep->phase = stericol_new_array(count, sizeof *sweep->phase);
    sweep->flags = stericol_new_array(count, sizeof *sweep->flags);
    sweep->states = stericol_new_array(count * sweep->cuts.layer_count, sizeof *sweep->states);
    sweep->latitude = stericol_new_array(sweep->rows, sizeof(double));
    bool taken = sweep->planes != NULL && sweep->reached != NULL && sweep->phase != NULL &&
                 sweep->flags != NULL && sweep->states != NULL && sweep->latitude != NULL;
    if (with_sea_floor) {
        sweep->floor = stericol_new_array(count, sizeof(double));
        taken = taken && sweep->floor != NULL;
    }
    if (!pressure && sweep->row_length == 1) {
        sweep->gravity = stericol_new_array(sweep->rows, sizeof(double));
        taken = taken && sweep->gravity != NULL;
    }
    if (pressure) {
        sweep->scale = stericol_new_array(sweep->rows, sizeof(double));
        sweep->reach = stericol_new_array(sweep->rows, sizeof(double));
        sweep->limits = stericol_new_array(sizes->limits, sizeof(double));
        taken = taken && sweep->scale != NULL && sweep->reach != NULL && sweep->limits != NULL;
    }
    if (sizes->samples > 0) {
        sweep->samples = stericol_new_array(sizes->samples, sizeof(double));
        sweep->sampled = stericol_new_array(count, sizeof *sweep->sampled);
        taken = taken && sweep->samples != NULL && sweep->sampled != NULL;
    }
    return taken;
}

static void fill_arrays(stericol_sweep *sweep, const double *latitude, const double *sea_floor)
{
    double *place = stericol_place(sweep);
    double *standing = stericol_standing(sweep);
    for (size_t i = 0; i < sweep->count; i++) {
        place[i] = -(double)INFINITY;
        standing[i] = STERICOL_STANDING_OUT;
    }
    memcpy(sweep->latitude, latitude, sweep->rows * sizeof *latitude);
    for (size_t row = 0; sweep->gravity != NULL && row < sweep->rows; row++)
        sweep->gravity[row] = stericol_gravity(latitude[row], 0.0);
    for (size_t row = 0; sweep->scale != NULL && row < sweep->rows; row++) {
        sweep->scale[row] = STERICOL_PASCALS_PER_DECIBAR / stericol_gravity(latitude[row], 0.0);
        sweep->reach[row] = stericol_coordinate_at(sweep, sweep->options.surface_reach, row);
        for (size_t k = 0; k < sweep->cuts.limit_count; k++)
            sweep->limits[k * sweep->rows + row] = stericol_coordinate_at(sweep, sweep->cuts.limit[k], row);
    }
    for (size_t i = 0; sea_floor != NULL && i < sweep->count; i++) {
        if (isnan(sea_floor[i]))
            sweep->floor[i] = (double)INFINITY;
        else if (sea_floor[i] <= 0.0)
            sweep->floor[i] = 0.0; /* land: such a column never starts */
        else
            sweep->floor[i] = stericol_coordinate_at(sweep, sea_floor[i], stericol_row_of(sweep, i));
    }
}

stericol_status stericol_sweep_new(stericol_context *context, const stericol_column_options *options,
                                   size_t count, size_t row_length, const double *latitude,
                                   const double *sea_floor, stericol_sweep **sweep)
{
    assert(options->water != NULL && count > 0 && row_length > 0 && count % row_length == 0);
    *sweep = NULL;
    stericol_cuts cuts;
    stericol_sizes sizes;
    const char *fault;
    if (!stericol_cut_depths(options, &cuts, &fault))
        return stericol_fail(context, STERICOL_USAGE, NULL, NULL, NULL, "%s", fault);
    if (!find_sizes(options, &cuts, count, row_length, sea_floor != NULL, &sizes))
        return stericol_fail_memory(context, SIZE_MAX, "the sums of the columns");
    stericol_sweep *made = stericol_new_array(1, sizeof *made);
    if (made == NULL)
        return stericol_fail_memory(context, sizeof *made, "the sums of the columns");
    made->loops = stericol_loops_best();
    made->water = *options->water;
    made->options = *options;
    made->options.water = NULL;
    made->options.layers = NULL;
    made->cuts = cuts;
    made->sizes = sizes;
    made->count = count;
    made->row_length = row_length;
    made->rows = count / row_length;
    if (!take_room(made, sea_floor != NULL)) {
        stericol_sweep_free(made);
        return stericol_fail_memory(context, sizes.bytes, "the sums of the columns");
    }
    fill_arrays(made, latitude, sea_floor);
    *sweep = made;
    return STERICOL_OK;
}

void stericol_sweep_free(stericol_sweep *sweep)
{
    if (sweep == NULL)
        return;
    free(sweep->latitude);
    free(sweep->gravity);
    free(sweep->scale);
    free(sweep->limits);
    free(sweep->reach);
    free(sweep->planes);
    free(sweep->reached);
    free(sweep->floor);
    free(sweep->phase);
    free(sweep->flags);
    free(sweep->states);
    free(sweep->samples);
    free(sweep->sampled);
    free(sweep);
}

size_t stericol_sweep_count(const stericol_sweep *sweep)
{
    return sweep->count;
}

size_t stericol_sweep_layer_count(const stericol_sweep *sweep)
{
    return sweep->cuts.layer_count;
}

const double *stericol_sweep_result(const stericol_sweep *sweep, stericol_column_quantity quantity,
                                    size_t layer)
{
    const size_t layers = sweep->cuts.layer_count;
    assert(layer == STERICOL_WHOLE_COLUMN || layer < layers);
    assert(quantity < STERICOL_COLUMN_QUANTITIES);
    /* One layer is the whole column: the same numbers, kept once. */
    const size_t place = layers == 1 ? 0 : layer == STERICOL_WHOLE_COLUMN ? layers : layer;
    return stericol_plane(sweep, place * STERICOL_COLUMN_QUANTITIES + quantity);
}

const signed char *stericol_sweep_flags(const stericol_sweep *sweep)
{
    return sweep->flags;
}

const unsigned char *stericol_sweep_layer_state(const stericol_sweep *sweep, size_t layer)
{
    assert(layer < sweep->cuts.layer_count);
    return sweep->states + layer * sweep->count;
}

double stericol_sweep_deepest(const stericol_sweep *sweep)
{
    double deepest = (double)NAN;
    for (size_t i = 0; i < sweep->count; i++)
        if (!(sweep->reached[i] <= deepest) && !isnan(sweep->reached[i]))
            deepest = sweep->reached[i];
    return deepest;
}
