/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

/* Coordinates are often kept as float: 180 degrees to 1.5e-5, 6000 m to 5e-4. */
static const double degrees_tolerance = 1e-4;
static const double level_tolerance = 1e-3, level_relative = 1e-6;

void stericol_input_grid_clear(stericol_grid *grid)
{
    free(grid->latitude);
    free(grid->longitude);
    free(grid->latitude_bounds);
    free(grid->longitude_bounds);
    free(grid->cell_area);
    free(grid->cell_area_source);
    free(grid->dry);
    free(grid->level);
    free(grid->level_bounds);
    free(grid->latitude_name);
    free(grid->longitude_name);
    free(grid->level_name);
    *grid = (stericol_grid){0};
}

/* True when a[i] and b[i] agree; `turn` 360 for longitudes on different branches, 0 else. */
static bool same_numbers(const double *a, const double *b, size_t count, double turn, double absolute,
                         double relative, size_t *where)
{
    for (size_t i = 0; i < count; i++) {
        double off = a[i] - b[i];
        if (turn > 0.0)
            off = remainder(off, turn);
        if (!(fabs(off) <= absolute + relative * fabs(a[i]))) {
            *where = i;
            return false;
        }
    }
    return true;
}

bool stericol_grid_same(const stericol_grid *a, const stericol_grid *b, char *text, size_t room)
{
    size_t i = 0;
    if (a->rows != b->rows || a->columns != b->columns || a->levels != b->levels) {
        snprintf(text, room, "%zu x %zu x %zu against %zu x %zu x %zu levels, rows, columns", a->levels,
                 a->rows, a->columns, b->levels, b->rows, b->columns);
        return false;
    }
    if (a->curvilinear != b->curvilinear) {
        snprintf(text, room, "one has positions on rows and columns, the other on every point");
        return false;
    }
    if (a->vertical != b->vertical) {
        snprintf(text, room, "one has levels of depth, the other of pressure");
        return false;
    }
    if (a->own_depths != b->own_depths) {
        snprintf(text, room,
                 "in one the levels lie at depths of their own in every column, in the other not");
        return false;
    }
    const size_t latitudes = a->curvilinear ? a->rows * a->columns : a->rows;
    const size_t longitudes = a->curvilinear ? latitudes : a->columns;
    const struct {
        const char *name;
        const double *a, *b;
        size_t count;
        double turn, absolute, relative;
    } parts[] = {{"latitude", a->latitude, b->latitude, latitudes, 0.0, degrees_tolerance, 0.0},
                 {"longitude", a->longitude, b->longitude, longitudes, 360.0, degrees_tolerance, 0.0},
                 {"level", a->level, b->level, a->levels, 0.0, level_tolerance, level_relative}};
    for (size_t part = 0; part < sizeof parts / sizeof *parts; part++) {
        if (same_numbers(parts[part].a, parts[part].b, parts[part].count, parts[part].turn,
                         parts[part].absolute, parts[part].relative, &i))
            continue;
        if (a->curvilinear && part < 2)
            snprintf(text, room, "%s differs in row %zu, column %zu: %.9g against %.9g", parts[part].name,
                     i / a->columns + 1, i % a->columns + 1, parts[part].a[i], parts[part].b[i]);
        else
            snprintf(text, room, "%s number %zu differs: %.9g against %.9g", parts[part].name, i + 1,
                     parts[part].a[i], parts[part].b[i]);
        return false;
    }
    if (a->level_bounds && b->level_bounds &&
        !same_numbers(a->level_bounds, b->level_bounds, 2 * a->levels, 0.0, level_tolerance, level_relative,
                      &i)) {
        snprintf(text, room, "the limits of level %zu differ: %.9g against %.9g", i / 2 + 1,
                 a->level_bounds[i], b->level_bounds[i]);
        return false;
    }
    return true;
}
