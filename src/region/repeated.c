/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Cells that a grid holds twice: cyclic columns and the fold at the pole. */
#include "base/checked.h"
#include "base/context.h"
#include "region/sphere.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Two centres are one when they lie closer than this part of the spacing: float axes leave 1e-6 of it. */
static const double SAME_PART = 1e-4;
/* How many rows and columns at the rim of a curvilinear grid may repeat others. */
enum { RIM_ROWS = 3, RIM_COLUMNS = 2 };

typedef struct candidate {
    double key;                 /* what is sorted by */
    double reach;               /* nearer than this is the same place */
    stericol_direction towards; /* curvilinear only */
    size_t index;
} candidate;

static int compare_candidates(const void *a, const void *b)
{
    const candidate *left = a, *right = b;

    if (left->key < right->key || left->key > right->key)
        return left->key < right->key ? -1 : 1;
    return left->index < right->index ? -1 : left->index > right->index;
}

/* Columns whose longitude equals an earlier one: mark[columns]. */
static void mark_columns(const stericol_cells *cells, candidate *list, unsigned char *mark)
{
    size_t count = 0;
    double span = 0.0, reach;

    for (size_t i = 0; i + 1 < cells->columns; i++) {
        double step = fabs(remainder(cells->longitude[i + 1] - cells->longitude[i], 360.0));

        if (isfinite(step))
            span += step;
    }
    reach = cells->columns > 1 ? SAME_PART * span / (double)(cells->columns - 1) : 0.0;
    for (size_t i = 0; i < cells->columns; i++) {
        double longitude = stericol_reduced_longitude(cells->longitude[i]);

        if (isnan(longitude))
            continue;
        if (longitude > 180.0 - reach)
            longitude -= 360.0; /* so that both sides of the date line stand together */
        list[count++] = (candidate){.key = longitude, .index = i};
    }
    qsort(list, count, sizeof *list, compare_candidates);
    for (size_t from = 0, to; from < count; from = to) {
        size_t first = list[from].index;

        for (to = from + 1; to < count && list[to].key - list[to - 1].key <= reach; to++)
            first = list[to].index < first ? list[to].index : first;
        for (size_t i = from; i < to; i++)
            mark[list[i].index] = list[i].index != first;
    }
}

/* Distance on the unit sphere to the neighbour in the row, 0 where there is none. */
static double spacing(const stericol_cells *cells, size_t row, size_t column)
{
    size_t at = row * cells->columns + column;
    size_t beside = column + 1 < cells->columns ? at + 1 : at - 1;
    stericol_direction apart;
    double length;

    if (cells->columns < 2)
        return 0.0;
    apart = stericol_direction_difference(
        stericol_direction_of(cells->latitude[at], cells->longitude[at]),
        stericol_direction_of(cells->latitude[beside], cells->longitude[beside]));
    length = sqrt(stericol_direction_dot(apart, apart));
    return isfinite(length) ? length : 0.0;
}

static bool on_rim(size_t at, size_t count, size_t rim)
{
    return at < rim || at + rim >= count;
}

/* The rim's centres with a sorting key in which no usual grid has long runs of equal values. */
static size_t gather_rim(const stericol_cells *cells, candidate *list)
{
    size_t count = 0;

    for (size_t row = 0; row < cells->rows; row++) {
        bool whole = on_rim(row, cells->rows, RIM_ROWS);

        for (size_t column = 0; column < cells->columns; column++) {
            size_t at = row * cells->columns + column;
            stericol_direction d;

            if (!whole && !on_rim(column, cells->columns, RIM_COLUMNS))
                continue;
            if (!isfinite(cells->latitude[at]) || !isfinite(cells->longitude[at]))
                continue;
            d = stericol_direction_of(cells->latitude[at], cells->longitude[at]);
            list[count++] = (candidate){.key = 0.36 * d.x + 0.48 * d.y + 0.8 * d.z,
                                        .reach = SAME_PART * spacing(cells, row, column),
                                        .towards = d,
                                        .index = at};
        }
    }
    return count;
}

static void mark_rim(candidate *list, size_t count, unsigned char *mark)
{
    double most = 0.0;

    for (size_t i = 0; i < count; i++)
        most = fmax(most, list[i].reach);
    qsort(list, count, sizeof *list, compare_candidates);
    for (size_t i = 0; i < count; i++)
        for (size_t k = i + 1; k < count && list[k].key - list[i].key < most; k++) {
            stericol_direction apart = stericol_direction_difference(list[i].towards, list[k].towards);
            double reach = fmin(list[i].reach, list[k].reach);

            if (stericol_direction_dot(apart, apart) < reach * reach)
                mark[list[i].index > list[k].index ? list[i].index : list[k].index] = 1;
        }
}

stericol_status stericol_repeated_cells(stericol_context *context, const stericol_cells *cells,
                                        unsigned char *repeated, size_t *count)
{
    size_t rows = cells->rows, columns = cells->columns, most, marked = 0;
    candidate *list;

    memset(repeated, 0, rows * columns);
    if (count != NULL)
        *count = 0;
    most = cells->kind == STERICOL_CELLS_REGULAR ? columns : 2 * RIM_ROWS * columns + 2 * RIM_COLUMNS * rows;
    list = stericol_new_array(most, sizeof *list);
    if (list == NULL)
        return stericol_fail_memory(context, most * sizeof *list, "the search for repeated cells");
    if (cells->kind == STERICOL_CELLS_REGULAR) {
        if (rows > 0)
            mark_columns(cells, list, repeated);
        for (size_t row = 1; row < rows; row++)
            memcpy(repeated + row * columns, repeated, columns);
    } else {
        mark_rim(list, gather_rim(cells, list), repeated);
    }
    free(list);
    for (size_t i = 0; i < rows * columns; i++)
        marked += repeated[i];
    if (count != NULL)
        *count = marked;
    return STERICOL_OK;
}
