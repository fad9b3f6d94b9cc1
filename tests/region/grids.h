/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Small grids for the tests of this room. */
#ifndef STERICOL_TESTS_REGION_GRIDS_H
#define STERICOL_TESTS_REGION_GRIDS_H

#include "stericol/region.h"
#include "support/testing.h"

#include <stdlib.h>
#include <string.h>

static const double PI = 3.14159265358979323846;

/* A regular grid that owns its arrays. */
typedef struct test_grid {
    stericol_cells cells;
    double *memory;
} test_grid;

static inline double *take(double **memory, size_t count)
{
    double *taken = *memory;

    *memory += count;
    return taken;
}

/* rows x columns cells from south to north and from west eastwards, each of the same angle. */
static inline test_grid regular_grid(size_t rows, size_t columns, double south, double north, double west,
                                     double east)
{
    test_grid grid = {{0}, malloc(3 * (rows + columns) * sizeof(double))};
    double *memory = grid.memory, *latitude, *longitude, *rows_at, *columns_at;

    assert_non_null(memory);
    latitude = take(&memory, rows);
    longitude = take(&memory, columns);
    rows_at = take(&memory, 2 * rows);
    columns_at = take(&memory, 2 * columns);
    for (size_t i = 0; i < rows; i++) {
        rows_at[2 * i] = south + (north - south) * (double)i / (double)rows;
        rows_at[2 * i + 1] = south + (north - south) * (double)(i + 1) / (double)rows;
        latitude[i] = 0.5 * (rows_at[2 * i] + rows_at[2 * i + 1]);
    }
    for (size_t i = 0; i < columns; i++) {
        columns_at[2 * i] = west + (east - west) * (double)i / (double)columns;
        columns_at[2 * i + 1] = west + (east - west) * (double)(i + 1) / (double)columns;
        longitude[i] = 0.5 * (columns_at[2 * i] + columns_at[2 * i + 1]);
    }
    grid.cells = (stericol_cells){.kind = STERICOL_CELLS_REGULAR,
                                  .rows = rows,
                                  .columns = columns,
                                  .latitude = latitude,
                                  .longitude = longitude,
                                  .latitude_bounds = rows_at,
                                  .longitude_bounds = columns_at};
    return grid;
}

/* The same cells as a lattice of corners joined by great circles. */
static inline test_grid lattice_grid(size_t rows, size_t columns, double south, double north, double west,
                                     double east)
{
    size_t cells = rows * columns, corners = (rows + 1) * (columns + 1);
    test_grid grid = {{0}, malloc(2 * (cells + corners) * sizeof(double))};
    double *memory = grid.memory, *latitude, *longitude, *corner_latitude, *corner_longitude;

    assert_non_null(memory);
    latitude = take(&memory, cells);
    longitude = take(&memory, cells);
    corner_latitude = take(&memory, corners);
    corner_longitude = take(&memory, corners);
    for (size_t row = 0; row <= rows; row++)
        for (size_t column = 0; column <= columns; column++) {
            double dy = (north - south) / (double)rows, dx = (east - west) / (double)columns;

            if (row < rows && column < columns) {
                latitude[row * columns + column] = south + dy * ((double)row + 0.5);
                longitude[row * columns + column] = west + dx * ((double)column + 0.5);
            }
            corner_latitude[row * (columns + 1) + column] = south + dy * (double)row;
            corner_longitude[row * (columns + 1) + column] = west + dx * (double)column;
        }
    grid.cells = (stericol_cells){.kind = STERICOL_CELLS_LATTICE,
                                  .rows = rows,
                                  .columns = columns,
                                  .latitude = latitude,
                                  .longitude = longitude,
                                  .corner_latitude = corner_latitude,
                                  .corner_longitude = corner_longitude};
    return grid;
}

static inline double *areas_of(const stericol_cells *cells, double radius)
{
    double *area = malloc(cells->rows * cells->columns * sizeof *area);

    assert_non_null(area);
    assert_int_equal(stericol_cell_areas(NULL, cells, radius, 0, cells->rows, area), STERICOL_OK);
    return area;
}

/* A generator whose seed is printed where a check fails (L'Ecuyer 1999, 64-bit multiplier of table 4). */
static inline double random_within(uint64_t *state, double low, double high)
{
    *state = *state * UINT64_C(3935559000370003845) + UINT64_C(2691343689449507681);
    return low + (high - low) * (double)(*state >> 11) * 0x1p-53;
}

#endif
