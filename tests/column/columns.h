/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Made columns for the tests.
 *
 * Most use the linear equation with states placed evenly about 10 degC and 35 g/kg: a warming d is 10 - d/2
 * and 10 + d/2, so that the mean volume is 1/rho0, the integrand a d, the heat cp0 rho0 d per metre. Expected
 * numbers are then sums done by hand.
 */
#ifndef STERICOL_TESTS_COLUMNS_H
#define STERICOL_TESTS_COLUMNS_H

#include "stericol/column.h"
#include "stericol/water.h"
#include "support/testing.h"

#include <stdlib.h>

#define MISSING ((double)NAN)
#define REJECTED ((double)INFINITY)
#define BOTTOM ((double)INFINITY)

enum { MOST_LEVELS = 64 };

/* Levels of many columns; value (level, column) stands at level * count + column. */
typedef struct field {
    size_t count;
    size_t row_length;
    size_t levels;
    double position[MOST_LEVELS];
    double upper[MOST_LEVELS];
    double lower[MOST_LEVELS];
    double
        *positions; /* per column, or NULL; for cells they are the middles and uppers, lowers must be given */
    double *uppers;
    double *lowers;
    double *salinity[2];
    double *temperature[2];
    double *averaged[4]; /* two volumes, thermosteric, halosteric; or NULL */
    double *latitude;    /* [count / row_length] */
    double *floor;       /* [count] or NULL */
    bool not_last;       /* the axis goes on below the levels given */
} field;

static inline double *new_values(size_t count)
{
    double *values = calloc(count, sizeof *values);
    assert_non_null(values);
    return values;
}

/* Room for a field at latitude 45 with 35 g/kg and 10 degC everywhere. */
static inline field new_field(size_t count, size_t row_length, size_t levels)
{
    field f = {.count = count, .row_length = row_length, .levels = levels};
    assert_true(levels <= MOST_LEVELS);
    for (int epoch = 0; epoch < 2; epoch++) {
        f.salinity[epoch] = new_values(levels * count);
        f.temperature[epoch] = new_values(levels * count);
        for (size_t i = 0; i < levels * count; i++) {
            f.salinity[epoch][i] = 35.0;
            f.temperature[epoch][i] = 10.0;
        }
    }
    f.latitude = new_values(count / row_length);
    for (size_t i = 0; i < count / row_length; i++)
        f.latitude[i] = 45.0;
    return f;
}

static inline void free_field(field *f)
{
    for (int k = 0; k < 2; k++) {
        free(f->salinity[k]);
        free(f->temperature[k]);
    }
    for (int k = 0; k < 4; k++)
        free(f->averaged[k]);
    free(f->positions);
    free(f->uppers);
    free(f->lowers);
    free(f->latitude);
    free(f->floor);
}

static inline stericol_sweep_level_record record_of(const field *f, size_t level)
{
    const size_t at = level * f->count;
    stericol_sweep_level_record record = {
        .position = f->position[level], .upper = f->upper[level], .lower = f->lower[level]};
    record.positions = f->positions == NULL ? NULL : f->positions + at;
    record.uppers = f->uppers == NULL ? NULL : f->uppers + at;
    record.lowers = f->lowers == NULL ? NULL : f->lowers + at;
    for (int k = 0; k < 2; k++) {
        record.salinity[k] = f->salinity[k] + at;
        record.temperature[k] = f->temperature[k] + at;
        record.averaged_volume[k] = f->averaged[k] == NULL ? NULL : f->averaged[k] + at;
    }
    record.averaged_thermosteric = f->averaged[2] == NULL ? NULL : f->averaged[2] + at;
    record.averaged_halosteric = f->averaged[3] == NULL ? NULL : f->averaged[3] + at;
    record.last = level + 1 == f->levels && !f->not_last;
    return record;
}

/* Sweeps the whole field in ranges of `range` columns. */
static inline stericol_sweep *sweep_in_ranges(const stericol_column_options *options, const field *f,
                                              size_t range)
{
    stericol_sweep *sweep;
    stericol_context *context = stericol_context_new();
    const stericol_status status =
        stericol_sweep_new(context, options, f->count, f->row_length, f->latitude, f->floor, &sweep);
    if (status != STERICOL_OK)
        print_error("%s\n", stericol_context_message(context));
    assert_int_equal(status, STERICOL_OK);
    stericol_context_free(context);
    for (size_t from = 0; from < f->count; from += range) {
        const size_t to = from + range < f->count ? from + range : f->count;
        for (size_t level = 0; level < f->levels; level++) {
            const stericol_sweep_level_record record = record_of(f, level);
            stericol_sweep_level(sweep, &record, from, to);
        }
        assert_int_equal(stericol_sweep_finish(sweep, from, to), STERICOL_OK);
    }
    return sweep;
}

static inline stericol_sweep *sweep_field(const stericol_column_options *options, const field *f)
{
    return sweep_in_ranges(options, f, f->count);
}

static inline double result_of(const stericol_sweep *sweep, stericol_column_quantity quantity, size_t layer,
                               size_t column)
{
    return stericol_sweep_result(sweep, quantity, layer)[column];
}

#endif
