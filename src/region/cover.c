/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "region/cover.h"

#include "base/checked.h"
#include "region/sphere.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

bool stericol_cover_start(stericol_cover *cover, size_t rows, size_t columns, size_t classes)
{
    size_t cells, ends;

    *cover = (stericol_cover){.rows = rows, .columns = columns, .classes = classes};
    if (!stericol_multiply_sizes(rows, columns, &cells) || !stericol_add_sizes(rows, 1, &ends) ||
        columns > UINT32_MAX)
        return false;
    cover->cell = stericol_new_array(cells, 1);
    cover->row_start = stericol_new_array(ends, sizeof *cover->row_start);
    if (cover->cell != NULL && cover->row_start != NULL)
        return true;
    stericol_cover_free(cover);
    return false;
}

void stericol_cover_free(stericol_cover *cover)
{
    free(cover->cell);
    free(cover->row_start);
    free(cover->column);
    free(cover->share);
    *cover = (stericol_cover){0};
}

static bool make_room(stericol_cover *cover)
{
    size_t room = cover->room < 64 ? 64 : 2 * cover->room;
    void *column = cover->column, *share = cover->share;
    bool grown;

    if (cover->shared < cover->room)
        return true;
    grown = stericol_grow_array(&column, room, sizeof *cover->column);
    cover->column = column;
    if (!grown)
        return false;
    grown = stericol_grow_array(&share, room, cover->classes * sizeof *cover->share);
    cover->share = share;
    if (!grown)
        return false;
    cover->room = room;
    return true;
}

bool stericol_cover_put(stericol_cover *cover, size_t row, size_t column, const double *share)
{
    static const double STEPS = 1099511627776.0; /* 2^40 */
    double rounded[STERICOL_COVER_MOST_CLASSES], rest = 1.0;
    size_t largest = 0;

    assert(cover->classes <= STERICOL_COVER_MOST_CLASSES && row < cover->rows && column < cover->columns);
    for (size_t i = 1; i < cover->classes; i++)
        if (share[i] > share[largest])
            largest = i;
    for (size_t i = 0; i < cover->classes; i++) {
        rounded[i] = nearbyint(share[i] * STEPS) / STEPS;
        if (i != largest)
            rest -= rounded[i];
    }
    rounded[largest] = rest;
    if (rest >= 1.0) {
        stericol_cover_put_whole(cover, row, column, largest);
        return true;
    }
    if (!make_room(cover))
        return false;
    cover->cell[row * cover->columns + column] = STERICOL_COVER_SHARED;
    cover->column[cover->shared] = (uint32_t)column;
    memcpy(cover->share + cover->shared * cover->classes, rounded, cover->classes * sizeof *rounded);
    cover->shared++;
    cover->row_start[row + 1] = cover->shared;
    return true;
}

void stericol_cover_put_whole(stericol_cover *cover, size_t row, size_t column, size_t class)
{
    assert(class < STERICOL_COVER_SHARED && row < cover->rows && column < cover->columns);
    cover->cell[row * cover->columns + column] = (unsigned char)class;
    cover->row_start[row + 1] = cover->shared;
}

void stericol_cover_row(const stericol_cover *cover, size_t class, size_t row, double *fraction)
{
    const unsigned char *cell = cover->cell + row * cover->columns;

    for (size_t i = 0; i < cover->columns; i++)
        fraction[i] = cell[i] == class ? 1.0 : 0.0;
    for (size_t i = cover->row_start[row]; i < cover->row_start[row + 1]; i++)
        fraction[cover->column[i]] = cover->share[i * cover->classes + class];
}

/* Each triangle between the centre and a side is cut into CUTS^2 alike ones; their middles are the samples.
 */
enum { CUTS = 4 };

typedef struct sampled_cell {
    size_t corners;
    double latitude[STERICOL_MOST_CORNERS], longitude[STERICOL_MOST_CORNERS];
    stericol_direction corner[STERICOL_MOST_CORNERS];
    stericol_direction centre;
} sampled_cell;

/* Adds the parts of the triangle a, b, c to share[]. */
static void sample_triangle(stericol_direction a, stericol_direction b, stericol_direction c,
                            stericol_classifier *classify, const void *what, double *share)
{
    double part = fabs(stericol_triangle_angle(a, b, c)) / (CUTS * CUTS);

    for (int i = 0; i < CUTS; i++)
        for (int k = 0; k < 2 * i + 1; k++) {
            /* Row i of the cut triangle, counted from a, holds i + 1 upright and i inverted parts. */
            double down = i + ((k & 1) == 0 ? 2.0 : 1.0) / 3.0;
            double along = (k & 1) == 0 ? k / 2 + 1.0 / 3.0 : k / 2 + 2.0 / 3.0;
            double wb = (down - along) / CUTS, wc = along / CUTS, latitude, longitude;
            stericol_direction point = stericol_direction_sum(
                stericol_direction_scaled(a, 1.0 - wb - wc),
                stericol_direction_sum(stericol_direction_scaled(b, wb), stericol_direction_scaled(c, wc)));

            stericol_point_of(point, &latitude, &longitude);
            share[classify(what, latitude, longitude)] += part;
        }
}

static bool put_sampled(stericol_cover *cover, size_t row, size_t column, sampled_cell *cell,
                        stericol_classifier *classify, const void *what)
{
    double share[STERICOL_COVER_MOST_CLASSES] = {0}, whole = 0.0;

    for (size_t i = 0; i < cell->corners; i++)
        cell->corner[i] = stericol_direction_of(cell->latitude[i], cell->longitude[i]);
    for (size_t i = 0; i < cell->corners; i++)
        sample_triangle(cell->centre, cell->corner[i], cell->corner[(i + 1) % cell->corners], classify, what,
                        share);
    for (size_t i = 0; i < cover->classes; i++)
        whole += share[i];
    for (size_t i = 0; i < cover->classes && whole > 0.0; i++)
        share[i] /= whole;
    return stericol_cover_put(cover, row, column, share);
}

/* The centre of a cell, or the middle of its corners where the grid has no centres. */
static void centre_of(const stericol_cells *cells, size_t at, const sampled_cell *cell, double *latitude,
                      double *longitude)
{
    stericol_direction sum = {0.0, 0.0, 0.0};

    if (cells->latitude != NULL && cells->longitude != NULL) {
        *latitude = cells->latitude[at];
        *longitude = cells->longitude[at];
        return;
    }
    for (size_t i = 0; i < cell->corners; i++)
        sum = stericol_direction_sum(sum, stericol_direction_of(cell->latitude[i], cell->longitude[i]));
    stericol_point_of(sum, latitude, longitude);
}

static bool sample_cell(stericol_cover *cover, const stericol_cells *cells, size_t row, size_t column,
                        stericol_classifier *classify, const void *what)
{
    sampled_cell cell;
    double latitude, longitude;
    size_t class = 0;
    bool cut = false;

    cell.corners = stericol_corners_of_cell(cells, row, column, cell.latitude, cell.longitude);
    centre_of(cells, row * cells->columns + column, &cell, &latitude, &longitude);
    if (isfinite(latitude) && isfinite(longitude)) {
        class = classify(what, latitude, longitude);
        for (size_t i = 0; i < cell.corners; i++) {
            if (!isfinite(cell.latitude[i]) || !isfinite(cell.longitude[i])) {
                cut = false;
                break;
            }
            cut = cut || classify(what, cell.latitude[i], cell.longitude[i]) != class;
        }
    }
    if (cut) {
        cell.centre = stericol_direction_of(latitude, longitude);
        return put_sampled(cover, row, column, &cell, classify, what);
    }
    stericol_cover_put_whole(cover, row, column, class);
    return true;
}

bool stericol_cover_sample(stericol_cover *cover, const stericol_cells *cells, size_t classes,
                           stericol_classifier *classify, const void *what)
{
    if (!stericol_cover_start(cover, cells->rows, cells->columns, classes))
        return false;
    for (size_t row = 0; row < cells->rows; row++)
        for (size_t column = 0; column < cells->columns; column++)
            if (!sample_cell(cover, cells, row, column, classify, what)) {
                stericol_cover_free(cover);
                return false;
            }
    return true;
}
