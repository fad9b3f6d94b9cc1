/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "cf/room.h"

#include "base/checked.h"

#include <assert.h>
#include <netcdf.h>
#include <stdlib.h>

struct stericol_cf_field {
    stericol_cf_file *file;
    const stericol_cf_variable *variable;
    stericol_cf_field_axes axes;
    stericol_cf_conversion conversion;
    stericol_cf_rules *rules; /* the file's */
    size_t times, levels, rows, columns;
    size_t most_cache;         /* bytes */
    stericol_cf_buffer buffer; /* kept from read to read */
};

static size_t length_along(const stericol_cf_file *file, const stericol_cf_variable *variable, int axis)
{
    if (axis == STERICOL_CF_NO_AXIS)
        return 1;
    assert(axis >= 0 && (size_t)axis < variable->rank);
    return file->dimensions[variable->dimension[axis]].length;
}

static size_t chunk_along(const stericol_cf_variable *variable, int axis)
{
    return axis == STERICOL_CF_NO_AXIS ? 1 : variable->chunk[axis];
}

static bool is_axis(const stericol_cf_field_axes *axes, size_t dimension)
{
    const int at = (int)dimension;

    return at == axes->time || at == axes->level || at == axes->row || at == axes->column;
}

/* Bytes of chunk cache where the caller sets no limit: a whole level of blocks of a quarter-degree grid. */
#define MOST_CACHE ((size_t)128 << 20)

/* Sets the cache of the variable to `bytes` unless it has as much: two windows of one variable share it. */
static void set_cache(stericol_cf_field *field, size_t bytes)
{
    size_t *set = &field->file->cache[field->variable - field->file->variables]; /* bytes + 1; 0: never set */

    if (bytes < *set)
        return;
    *set = bytes + 1;
    /* A prime number of slots (HDF5 reference manual, H5Pset_cache): ten a chunk up to a thousand chunks. */
    (void)nc_set_var_chunk_cache(field->variable->group_handle, field->variable->handle, bytes,
                                 bytes == 0 ? 521 : 10007, STERICOL_CF_PREEMPTION);
}

/* Extent in the file of the chunks that from..to touches; *whole is cleared when a chunk is touched in part.
 */
static size_t touched(size_t chunk, size_t from, size_t to, size_t length, bool *whole)
{
    if (from % chunk != 0 || (to % chunk != 0 && to != length))
        *whole = false;
    return ((to - 1) / chunk - from / chunk + 1) * chunk;
}

/*
 * Reads that touch whole chunks decode each once and need no cache.  Others find their chunks again in the
 * next read if all that this one touches is kept (without that they cost 15 to 25 times as much).  The
 * library's own default, 16 MiB for every variable that is read, is too much for the first kind and too
 * little for the second.
 */
static void fit_cache(stericol_cf_field *field, const size_t *start, const size_t *count)
{
    const stericol_cf_variable *variable = field->variable;
    size_t bytes = field->rules->size, i;
    bool whole = true;

    if (!variable->chunked)
        return;
    for (i = 0; i < variable->rank; i++) {
        const size_t length = field->file->dimensions[variable->dimension[i]].length;

        if (!stericol_multiply_sizes(
                bytes, touched(variable->chunk[i], start[i], start[i] + count[i], length, &whole), &bytes))
            bytes = field->most_cache;
    }
    if (whole)
        bytes = 0;
    set_cache(field, bytes < field->most_cache ? bytes : field->most_cache);
}

stericol_status stericol_cf_field_open(stericol_context *context, stericol_cf_file *file,
                                       const stericol_cf_variable *variable,
                                       const stericol_cf_field_axes *axes,
                                       const stericol_cf_conversion *conversion, size_t cache_bytes,
                                       stericol_cf_field **field)
{
    stericol_cf_field *opened;
    stericol_cf_rules *rules;
    stericol_status status;
    size_t i;

    *field = NULL;
    status = stericol_cf_rules_of(context, file, variable, &rules);
    if (status != STERICOL_OK)
        return status;
    for (i = 0; i < variable->rank; i++) {
        const stericol_cf_dimension *dimension = &file->dimensions[variable->dimension[i]];

        if (!is_axis(axes, i) && axes->fixed[i] >= dimension->length)
            return stericol_fail(context, STERICOL_USAGE, file->path, variable->name, "choose another",
                                 "its dimension %s has %zu entries, so that there is no entry %zu",
                                 dimension->name, dimension->length, axes->fixed[i] + 1);
    }
    opened = calloc(1, sizeof *opened);
    if (opened == NULL)
        return stericol_fail_memory(context, sizeof *opened, variable->name);
    opened->file = file;
    opened->variable = variable;
    opened->axes = *axes;
    opened->conversion = *conversion;
    opened->rules = rules;
    opened->times = length_along(file, variable, axes->time);
    opened->levels = length_along(file, variable, axes->level);
    opened->rows = length_along(file, variable, axes->row);
    opened->columns = length_along(file, variable, axes->column);
    opened->most_cache = cache_bytes > 0 ? cache_bytes : MOST_CACHE;
    *field = opened;
    return STERICOL_OK;
}

void stericol_cf_field_close(stericol_cf_field *field)
{
    if (field == NULL)
        return;
    free(field->buffer.bytes);
    free(field);
}

static size_t at_least_one(size_t length)
{
    return length > 0 ? length : 1;
}

static bool runs_inside(int axis, int other)
{
    return axis != STERICOL_CF_NO_AXIS && other != STERICOL_CF_NO_AXIS && axis > other;
}

void stericol_cf_field_stride(const stericol_cf_field *field, size_t *levels, size_t *rows)
{
    const stericol_cf_field_axes *axes = &field->axes;

    *levels = *rows = 1;
    if (field->variable->chunked) {
        *levels = chunk_along(field->variable, axes->level);
        *rows = chunk_along(field->variable, axes->row);
        if (*levels > field->levels)
            *levels = at_least_one(field->levels);
        if (*rows > field->rows)
            *rows = at_least_one(field->rows);
        return;
    }
    if (runs_inside(axes->level, axes->row) || runs_inside(axes->level, axes->column))
        *levels = at_least_one(field->levels);
}

stericol_status stericol_cf_field_read(stericol_context *context, stericol_cf_field *field, size_t time,
                                       size_t level0, size_t levels, size_t row0, size_t rows, double *values,
                                       stericol_cf_tally *tally)
{
    const stericol_cf_field_axes *axes = &field->axes;
    size_t start[STERICOL_CF_MOST_RANK], count[STERICOL_CF_MOST_RANK], stride[STERICOL_CF_MOST_RANK], i;
    const stericol_cf_gather gather = {.start = start,
                                       .count = count,
                                       .stride = stride,
                                       .conversion = &field->conversion,
                                       .values = values,
                                       .tally = tally,
                                       .buffer = &field->buffer};

    assert(time < field->times && level0 <= field->levels && levels <= field->levels - level0);
    assert(row0 <= field->rows && rows <= field->rows - row0);
    if (levels == 0 || rows == 0 || field->columns == 0)
        return STERICOL_OK;
    for (i = 0; i < field->variable->rank; i++) {
        start[i] = axes->fixed[i];
        count[i] = 1;
        stride[i] = 0;
    }
    if (axes->time != STERICOL_CF_NO_AXIS)
        start[axes->time] = time;
    if (axes->level != STERICOL_CF_NO_AXIS) {
        start[axes->level] = level0;
        count[axes->level] = levels;
        stride[axes->level] = rows * field->columns;
    }
    if (axes->row != STERICOL_CF_NO_AXIS) {
        start[axes->row] = row0;
        count[axes->row] = rows;
        stride[axes->row] = field->columns;
    }
    if (axes->column != STERICOL_CF_NO_AXIS) {
        start[axes->column] = 0;
        count[axes->column] = field->columns;
        stride[axes->column] = 1;
    }
    fit_cache(field, start, count);
    return stericol_cf_gather_values(context, field->file, field->variable, field->rules, &gather);
}
