/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Part of a variable, read in pieces in the file's order, unpacked, and put where the caller wants it.
 */
#include "cf/room.h"

#include "base/checked.h"

#include <math.h>
#include <netcdf.h>
#include <stdlib.h>

/* Stored bytes a piece: little enough to stay in the second cache until they are unpacked. */
#define PIECE_BYTES ((size_t)2 << 20)
/* Doubles unpacked at once: 32 KiB, within the nearest cache. */
enum { TILE = 4096, LONGEST_RUN = 512 };

/*
 * Beyond this, what no attribute declares is taken for a fill (1e20, 9.96921e36, -1e34 are met).  The lower
 * one holds for temperatures and salinities, known by their physical limits; sums in joules reach 1e25,
 * volumes 1e18.
 */
#define MOST_IN_THE_SEA 1e10
#define MOST_ANYWHERE 1e30

stericol_status stericol_cf_fail_reading(stericol_context *context, const stericol_cf_file *file,
                                         const stericol_cf_variable *variable, int status)
{
    if (status == NC_ENOMEM)
        return stericol_fail_memory(context, 0, variable->name);
    if (status == NC_EFILTER || status == NC_ENOFILTER)
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name,
                             "install the filter, or write the file again with deflate",
                             "is compressed by a filter that the NetCDF library has not (%s)",
                             nc_strerror(status));
    return stericol_fail(context, STERICOL_INPUT, file->path, variable->name, "copy the file again",
                         "its values cannot be read (%s)", nc_strerror(status));
}

stericol_status stericol_cf_read_stored(stericol_context *context, const stericol_cf_file *file,
                                        const stericol_cf_variable *variable, const size_t *start,
                                        const size_t *count, void *stored)
{
    int status = nc_get_vara(variable->group_handle, variable->handle, start, count, stored);

    return status == NC_NOERR ? STERICOL_OK : stericol_cf_fail_reading(context, file, variable, status);
}

/* A dimension of a piece: its extent, and what a step is worth on both sides. */
typedef struct side {
    size_t count, raw, values;
} side;

/* What is the same for all of a piece. */
typedef struct place {
    const stericol_cf_loops *loops;
    const stericol_cf_rules *rules;
    const stericol_cf_conversion *conversion;
    stericol_cf_tally *tally;
    stericol_cf_counts *counts;
    double most;
} place;

static void unpack_run(const place *at, const char *raw, size_t count, double *values)
{
    size_t from, part;

    for (from = 0; from < count; from += part) {
        part = count - from < LONGEST_RUN ? count - from : LONGEST_RUN;
        at->loops->unpack(at->rules, raw + from * at->rules->size, part, at->most, values + from, at->counts);
        if (at->conversion != NULL)
            at->loops->convert(at->conversion, values + from, part, at->tally);
    }
}

/*
 * `along` is the dimension that runs fastest in the file, `across` the one that runs fastest in the values
 * (across.values is 1): unpacked a tile at a time, then written in runs.
 */
static void place_across(const place *at, const char *raw, side along, side across, double *values)
{
    double tile[TILE];
    const size_t run = along.count < LONGEST_RUN ? along.count : LONGEST_RUN;
    const size_t width = TILE / run / 8 * 8; /* whole cache lines */
    size_t c0, f0, c, f, runs, length;

    for (c0 = 0; c0 < across.count; c0 += runs) {
        runs = across.count - c0 < width ? across.count - c0 : width;
        for (f0 = 0; f0 < along.count; f0 += length) {
            length = along.count - f0 < run ? along.count - f0 : run;
            if (across.raw == length) /* the runs lie end to end */
                unpack_run(at, raw + c0 * across.raw * at->rules->size, runs * length, tile);
            else
                for (c = 0; c < runs; c++)
                    unpack_run(at, raw + ((c0 + c) * across.raw + f0) * at->rules->size, length,
                               tile + c * length);
            for (f = 0; f < length; f++) {
                double *line = values + (f0 + f) * along.values + c0;

                for (c = 0; c < runs; c++)
                    line[c] = tile[c * length + f];
            }
        }
    }
}

/* The piece's dimensions, outermost first, without those of one step, neighbours joined where both sides
 * allow. */
static size_t simplify(const stericol_cf_blocks *piece, const size_t *stride, side *sides)
{
    size_t used = 0, raw = 1, i;
    side backwards[STERICOL_CF_MOST_RANK];

    for (i = piece->rank; i-- > 0; raw *= piece->count[i]) {
        if (piece->count[i] == 1)
            continue;
        if (used > 0 && stride[i] == backwards[used - 1].values * backwards[used - 1].count)
            backwards[used - 1].count *= piece->count[i];
        else
            backwards[used++] = (side){piece->count[i], raw, stride[i]};
    }
    if (used == 0)
        backwards[used++] = (side){1, 1, 1};
    for (i = 0; i < used; i++)
        sides[i] = backwards[used - 1 - i];
    return used;
}

static void place_piece(const place *at, const stericol_cf_blocks *piece, const size_t *stride,
                        const char *raw, double *values)
{
    side sides[STERICOL_CF_MOST_RANK];
    size_t step[STERICOL_CF_MOST_RANK] = {0};
    const size_t rank = simplify(piece, stride, sides), last = rank - 1;
    size_t across = last, i;
    const char *from = raw;
    double *to = values;

    for (i = 0; i < last && sides[last].values != 1; i++) {
        if (sides[i].values == 1)
            across = i;
    }
    for (;;) {
        if (across != last)
            place_across(at, from, sides[last], sides[across], to);
        else if (sides[last].values == 1)
            unpack_run(at, from, sides[last].count, to);
        else
            place_across(at, from, sides[last], (side){1, sides[last].count, 1}, to);
        for (i = last; i-- > 0;) {
            if (i == across)
                continue;
            from += sides[i].raw * at->rules->size;
            to += sides[i].values;
            if (++step[i] < sides[i].count)
                break;
            from -= sides[i].count * sides[i].raw * at->rules->size;
            to -= sides[i].count * sides[i].values;
            step[i] = 0;
        }
        if (i == (size_t)-1)
            return;
    }
}

static void notice_counts(stericol_context *context, const stericol_cf_file *file,
                          const stericol_cf_variable *variable, stericol_cf_rules *rules, double most,
                          const stericol_cf_counts *counts)
{
    if (counts->huge > 0 && !rules->huge_noticed) {
        rules->huge_noticed = true;
        stericol_notice(context, STERICOL_WARNING, file->path, variable->name,
                        "values beyond %g, which no attribute declares as missing, are taken as missing",
                        most);
    }
    if (counts->inexact > 0 && !rules->inexact_noticed) {
        rules->inexact_noticed = true;
        stericol_notice(context, STERICOL_WARNING, file->path, variable->name,
                        "whole numbers beyond 2^53 are rounded to the nearest double");
    }
}

static bool make_room(stericol_cf_buffer *buffer, size_t bytes)
{
    if (bytes <= buffer->room)
        return true;
    free(buffer->bytes);
    buffer->bytes = malloc(bytes);
    buffer->room = buffer->bytes != NULL ? bytes : 0;
    return buffer->bytes != NULL;
}

static stericol_status gather_piece(stericol_context *context, const stericol_cf_file *file,
                                    const stericol_cf_variable *variable, const stericol_cf_gather *gather,
                                    const stericol_cf_blocks *piece, const place *at)
{
    size_t bytes = at->rules->size, offset = 0, i;
    stericol_status status;

    for (i = 0; i < piece->rank; i++) {
        if (!stericol_multiply_sizes(bytes, piece->count[i], &bytes))
            return stericol_fail_memory(context, 0, variable->name);
        offset += (piece->start[i] - gather->start[i]) * gather->stride[i];
    }
    if (!make_room(gather->buffer, bytes))
        return stericol_fail_memory(context, bytes, variable->name);
    status =
        stericol_cf_read_stored(context, file, variable, piece->start, piece->count, gather->buffer->bytes);
    if (status == STERICOL_OK)
        place_piece(at, piece, gather->stride, gather->buffer->bytes, gather->values + offset);
    return status;
}

stericol_status stericol_cf_gather_values(stericol_context *context, stericol_cf_file *file,
                                          const stericol_cf_variable *variable, stericol_cf_rules *rules,
                                          const stericol_cf_gather *gather)
{
    const stericol_cf_conversion *conversion = gather->conversion;
    const bool limited = conversion != NULL && (isfinite(conversion->low) || isfinite(conversion->high));
    stericol_cf_counts counts = {0};
    stericol_cf_blocks pieces;
    place at = {.loops = stericol_cf_loops_named(NULL),
                .rules = rules,
                .conversion = conversion,
                .tally = gather->tally,
                .counts = &counts,
                .most = limited ? MOST_IN_THE_SEA : MOST_ANYWHERE};
    stericol_status status = STERICOL_OK;

    stericol_cf_blocks_begin(&pieces, variable, gather->start, gather->count, PIECE_BYTES / rules->size);
    for (; !pieces.done && status == STERICOL_OK; stericol_cf_blocks_next(&pieces))
        status = gather_piece(context, file, variable, gather, &pieces, &at);
    notice_counts(context, file, variable, rules, at.most, &counts);
    return status;
}
