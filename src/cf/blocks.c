/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A part of a variable in pieces.  Pieces end where chunks end, so that no chunk is decoded twice, and are as
 * large as the room allows.
 */
#include "cf/room.h"

#include "base/checked.h"

#include <stdint.h>

static size_t least(size_t a, size_t b)
{
    return a < b ? a : b;
}

/* From blocks->start[i], the extent up to the next end of a piece. */
static void set_count(stericol_cf_blocks *blocks, size_t i)
{
    const size_t start = blocks->start[i], unit = blocks->unit[i], left = blocks->to[i] - start;
    const size_t full = blocks->step[i] - start % unit; /* step >= unit > start % unit */

    blocks->count[i] = least(full, left);
}

/* The product, or the largest size where that overflows. */
static size_t saturated(size_t a, size_t b)
{
    size_t product = SIZE_MAX;

    (void)stericol_multiply_sizes(a, b, &product);
    return product;
}

void stericol_cf_blocks_begin(stericol_cf_blocks *blocks, const stericol_cf_variable *variable,
                              const size_t *start, const size_t *count, size_t room)
{
    size_t outer = 1, i, j, units = 0;

    *blocks = (stericol_cf_blocks){.rank = variable->rank};
    for (i = 0; i < variable->rank; i++) {
        blocks->from[i] = blocks->start[i] = start[i];
        blocks->to[i] = start[i] + count[i];
        blocks->unit[i] = variable->chunked ? variable->chunk[i] : 1;
        blocks->step[i] = (count[i] / blocks->unit[i] + 2) * blocks->unit[i];
    }
    /* Outer dimensions are cut first, so that what is read lies together in the file. */
    for (i = 0; i < variable->rank && units == 0; i++) {
        const size_t unit = blocks->unit[i];
        size_t one = saturated(outer, least(unit, count[i])); /* values in the least piece along i */

        for (j = i + 1; j < variable->rank; j++)
            one = saturated(one, count[j]);
        units = room / one;
        if (saturated(units > 0 ? units : 1, unit) < count[i])
            blocks->step[i] = (units > 0 ? units : 1) * unit;
        outer = saturated(outer, least(unit, count[i]));
    }
    for (i = 0; i < variable->rank; i++)
        set_count(blocks, i);
}

void stericol_cf_blocks_next(stericol_cf_blocks *blocks)
{
    size_t i = blocks->rank;

    while (i-- > 0) {
        blocks->start[i] += blocks->count[i];
        if (blocks->start[i] < blocks->to[i]) {
            set_count(blocks, i);
            return;
        }
        blocks->start[i] = blocks->from[i];
        set_count(blocks, i);
    }
    blocks->done = true;
}
