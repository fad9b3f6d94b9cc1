/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Random columns against a second integrator, written here from the definitions of design.md: one column, one
 * layer at a time, in long double, all samples at hand, no segments, no strips.  Then: the same bits however
 * columns are cut.
 */
#include "column/columns.h"
#include "column/sweep.h"

#include <pthread.h>
#include <stdint.h>
#include <string.h>

static const stericol_water polynomial = STERICOL_WATER_DEFAULT;
static const uint64_t seed = 20240611;

static double draw(uint64_t *stream, double low, double high)
{
    /* Knuth's multiplier (The Art of Computer Programming 2, 3.3.4); the upper bits are good enough. */
    *stream = *stream * 6364136223846793005u + 1442695040888963407u;
    return low + (high - low) * (double)(*stream >> 11) / 9007199254740992.0;
}

/* Smooth water with noise; some columns end early, some levels are lost in one epoch or both. */
static field random_field(uint64_t *stream, size_t count, size_t row_length, size_t levels, bool with_floor)
{
    field f = new_field(count, row_length, levels);
    double depth = draw(stream, 0.0, 15.0), limit = 0.0;
    for (size_t k = 0; k < levels; k++) {
        f.position[k] = depth;
        f.upper[k] = limit;
        f.lower[k] = limit + draw(stream, 5.0, 80.0);
        limit = f.lower[k];
        depth += draw(stream, 5.0, 80.0);
    }
    for (size_t row = 0; row < count / row_length; row++)
        f.latitude[row] = draw(stream, -80.0, 80.0);
    if (with_floor)
        f.floor = new_values(count);
    for (size_t c = 0; c < count; c++) {
        const size_t end = (size_t)draw(stream, 0.0, 1.6 * (double)levels);
        const bool holes = draw(stream, 0.0, 1.0) < 0.3;
        if (with_floor)
            f.floor[c] =
                draw(stream, 0.0, 1.0) < 0.2 ? MISSING : draw(stream, 20.0, 1.2 * f.position[levels - 1]);
        for (size_t k = 0; k < levels; k++) {
            const size_t at = k * count + c;
            const bool lost = k >= end || (holes && draw(stream, 0.0, 1.0) < 0.25);
            for (int e = 0; e < 2; e++) {
                f.temperature[e][at] = 2.0 + 18.0 * exp(-f.position[k] / 500.0) + draw(stream, -1.0, 1.0);
                f.salinity[e][at] = 35.0 + draw(stream, -0.5, 0.5);
                if (lost || draw(stream, 0.0, 1.0) < 0.005)
                    f.temperature[e][at] = MISSING;
            }
            if (lost && draw(stream, 0.0, 1.0) < 0.2)
                f.salinity[0][at] = REJECTED;
        }
    }
    return f;
}

/* ------------------------------------------------------------------------------------------------------------
 * The second integrator
 */

enum { TOTAL, THERMOSTERIC, HALOSTERIC, HEAT, EXPANSION, TURNOVER, SUMS };

typedef struct sample {
    double from, at, to; /* m: cell, sample; for samples from = at = to */
    double state[4];     /* s1, s2, t1, t2 */
    long double value[SUMS];
} sample;

typedef struct reference_column {
    double latitude;
    size_t count;
    sample sample[MOST_LEVELS + 2];
    double top, reached; /* what is covered */
    bool cells;
} reference_column;

static double volume(double s, double t, double p)
{
    double v;
    stericol_volume_points(&polynomial, &p, 1, &s, &t, &v);
    return v;
}

static void evaluate(double latitude, double depth, sample *x)
{
    const double p = stericol_sea_pressure(depth, latitude);
    const double *q = x->state;
    const long double v1 = volume(q[0], q[2], p), v2 = volume(q[1], q[3], p);
    const long double warmed = volume(q[0], q[3], p), salted = volume(q[1], q[2], p), mean = (v1 + v2) / 2;
    x->value[TOTAL] = (v2 - v1) / mean;
    x->value[THERMOSTERIC] = ((warmed - v1) + (v2 - salted)) / 2 / mean;
    x->value[HALOSTERIC] = ((salted - v1) + (v2 - warmed)) / 2 / mean;
    x->value[HEAT] = 3991.86795711963L * ((long double)q[3] - q[2]) / mean;
    x->value[TURNOVER] = x->value[HEAT] < 0 ? -x->value[HEAT] : x->value[HEAT];
    x->value[EXPANSION] = stericol_thermal_expansion(0.5 * (q[0] + q[1]), 0.5 * (q[2] + q[3]), p);
}

static bool may_bridge(double upper, double lower)
{
    const double rule = 50.0 + 0.225 * upper;
    return lower - upper <= (rule > 500.0 ? 500.0 : rule);
}

/* Collects what counts of a column and where it is covered.  False when nothing does. */
static bool collect(const stericol_column_options *options, const field *f, size_t column,
                    reference_column *r)
{
    bool hole = false;
    const double floor = f->floor == NULL || isnan(f->floor[column]) ? BOTTOM : f->floor[column];
    *r = (reference_column){.latitude = f->latitude[column / f->row_length]};
    r->cells = options->vertical == STERICOL_VERTICAL_CELLS;
    for (size_t k = 0; k < f->levels; k++) {
        const size_t i = k * f->count + column;
        const double q[4] = {f->salinity[0][i], f->salinity[1][i], f->temperature[0][i],
                             f->temperature[1][i]};
        sample *x = &r->sample[r->count];
        x->from = r->cells ? f->upper[k] : f->position[k];
        x->to = r->cells ? f->lower[k] : f->position[k];
        x->at = 0.5 * (x->from + x->to);
        if (!(isfinite(q[0]) && isfinite(q[1]) && isfinite(q[2]) && isfinite(q[3]))) {
            hole = true;
            continue;
        }
        if (r->count > 0 && (hole || options->cast) && !may_bridge(r->sample[r->count - 1].at, x->at))
            break;
        hole = false;
        memcpy(x->state, q, sizeof q);
        evaluate(r->latitude, x->at, x);
        r->count++;
    }
    if (r->count == 0)
        return false;
    r->top = r->sample[0].from;
    r->reached = r->sample[r->count - 1].to;
    if (r->sample[0].at <= options->surface_reach && r->top > 0.0) {
        /* The first water once more, above. */
        memmove(&r->sample[1], &r->sample[0], r->count * sizeof(sample));
        sample *x = &r->sample[0];
        r->count++;
        x->to = r->cells ? r->top : 0.0;
        x->from = 0.0;
        x->at = 0.5 * (x->from + x->to);
        evaluate(r->latitude, x->at, x);
        r->top = 0.0;
    }
    if (r->reached > floor)
        r->reached = floor;
    return true;
}

/* The integral of the line through (xa, fa) and (xb, fb) over what lies of lo..hi in upper..lower. */
static long double stretch(long double lo, long double hi, double upper, double lower, long double xa,
                           long double fa, long double xb, long double fb)
{
    lo = lo > upper ? lo : upper;
    hi = hi < lower ? hi : lower;
    if (!(hi > lo))
        return 0;
    const long double slope = xb > xa ? (fb - fa) / (xb - xa) : 0;
    const long double at_lo = fa + slope * (lo - xa), at_hi = fa + slope * (hi - xa);
    return (at_lo + at_hi) / 2 * (hi - lo);
}

static long double integrate(const reference_column *r, double upper, double lower, int quantity)
{
    long double sum = 0;
    lower = lower < r->reached ? lower : r->reached;
    for (size_t k = 0; k < r->count; k++) {
        const sample *x = &r->sample[k], *before = x - 1;
        if (k > 0 && (x->from > before->to))
            sum += stretch(before->to, x->from, upper, lower, before->at, before->value[quantity], x->at,
                           x->value[quantity]);
        if (r->cells)
            sum +=
                stretch(x->from, x->to, upper, lower, x->from, x->value[quantity], x->to, x->value[quantity]);
    }
    return sum;
}

static void compare_columns(const stericol_column_options *options, const field *f, size_t *complete)
{
    static const stericol_column_quantity quantity[] = {STERICOL_COLUMN_TOTAL, STERICOL_COLUMN_THERMOSTERIC,
                                                        STERICOL_COLUMN_HALOSTERIC, STERICOL_COLUMN_HEAT,
                                                        STERICOL_COLUMN_EXPANSION};
    stericol_sweep *sweep = sweep_field(options, f);
    for (size_t c = 0; c < f->count; c++) {
        reference_column r;
        const bool any = collect(options, f, c, &r);
        assert_true(any == (stericol_sweep_flags(sweep)[c] != STERICOL_COLUMN_NO_DATA));
        for (size_t layer = 0; layer < options->layer_count; layer++) {
            if (stericol_sweep_layer_state(sweep, layer)[c] != STERICOL_LAYER_COMPLETE)
                continue;
            (*complete)++;
            const double upper = options->layers[layer].upper, lower = options->layers[layer].lower;
            const double to = lower < r.reached ? lower : r.reached;
            assert_true(any && r.top <= upper && to > upper);
            for (int q = 0; q < 5; q++) {
                double expected = (double)integrate(&r, upper, lower, q);
                if (q == EXPANSION)
                    expected /= to - upper;
                /* Volumes to 2^-53 in double: 4e-16 a metre of height; heat likewise by 4e9 J/(m3 K) 1e-16.
                 */
                const double tolerance = q == HEAT ? 1e-3 : 2e-12;
                check_close(result_of(sweep, quantity[q], layer, c), expected, tolerance,
                            "a random column's sum", __FILE__, __LINE__);
            }
            assert_close(result_of(sweep, STERICOL_COLUMN_DEPTH, layer, c), to - upper, 1e-11); /* rounding */
        }
    }
    stericol_sweep_free(sweep);
}

static void random_columns_match(void **state)
{
    (void)state;
    const stericol_layer layers[] = {{0, 150}, {150, 700}, {40, 400}, {700, BOTTOM}, {0, BOTTOM}};
    uint64_t stream = seed;
    size_t complete = 0;
    print_message("seed %llu\n", (unsigned long long)seed);
    for (int turn = 0; turn < 12; turn++) {
        const size_t row_length = turn % 3 == 0 ? 1 : turn % 3 == 1 ? 20 : 60;
        field f = random_field(&stream, 60, row_length, 24, turn >= 6);
        stericol_column_options options = stericol_column_options_default();
        options.water = &polynomial;
        options.layers = layers;
        options.layer_count = 5;
        options.vertical = turn % 2 == 0 ? STERICOL_VERTICAL_LINEAR : STERICOL_VERTICAL_CELLS;
        compare_columns(&options, &f, &complete);
        free_field(&f);
    }
    assert_true(complete > 500); /* the cases say something */
}

/* ------------------------------------------------------------------------------------------------------------
 * The same bits
 */

static bool same_bits(const stericol_sweep *a, const stericol_sweep *b, size_t layers)
{
    const size_t bytes = stericol_sweep_count(a) * sizeof(double);
    for (size_t layer = 0; layer <= layers; layer++)
        for (int q = 0; q < STERICOL_COLUMN_QUANTITIES; q++) {
            const size_t which = layer == layers ? STERICOL_WHOLE_COLUMN : layer;
            if (memcmp(stericol_sweep_result(a, (stericol_column_quantity)q, which),
                       stericol_sweep_result(b, (stericol_column_quantity)q, which), bytes) != 0)
                return false;
        }
    return memcmp(stericol_sweep_flags(a), stericol_sweep_flags(b), stericol_sweep_count(a)) == 0;
}

static const stericol_vertical verticals[] = {STERICOL_VERTICAL_CELLS, STERICOL_VERTICAL_LINEAR,
                                              STERICOL_VERTICAL_STEFFEN, STERICOL_VERTICAL_AKIMA};

static void ranges_do_not_change_a_bit(void **state)
{
    (void)state;
    const stericol_layer layers[] = {{0, 300}, {300, BOTTOM}};
    uint64_t stream = seed + 1;
    for (size_t turn = 0; turn < 8; turn++) {
        const size_t row_length = turn < 4 ? 1 : 390;
        field f = random_field(&stream, 780, row_length, 12, turn % 2 == 0);
        stericol_column_options options = stericol_column_options_default();
        options.water = &polynomial;
        options.layers = layers;
        options.layer_count = 2;
        options.levels = 12;
        options.bottom_reach = 50.0;
        options.vertical = verticals[turn % 4];
        options.coordinate =
            turn == 1 || turn == 4 || turn == 6 ? STERICOL_COORDINATE_PRESSURE : STERICOL_COORDINATE_DEPTH;
        stericol_sweep *whole = sweep_field(&options, &f);
        const size_t ranges[] = {1, 7, 389, 391, 513};
        for (size_t k = 0; k < 5; k++) {
            stericol_sweep *cut = sweep_in_ranges(&options, &f, ranges[k]);
            assert_true(same_bits(whole, cut, 2));
            stericol_sweep_free(cut);
        }
        stericol_sweep_free(whole);
        free_field(&f);
    }
}

/* Every instruction set that this processor has gives the same bits. */
static void instruction_sets_do_not_change_a_bit(void **state)
{
    (void)state;
    const char *const names[] = {"avx2", "avx512"};
    uint64_t stream = seed + 3;
    assert_null(stericol_loops_named("none"));
    for (size_t turn = 0; turn < 4; turn++) {
        field f = random_field(&stream, 777, 777, 16, true);
        stericol_column_options options = stericol_column_options_default();
        options.water = &polynomial;
        options.vertical = verticals[turn];
        options.levels = 16;
        options.bottom_reach = 40.0;
        stericol_sweep *expected = NULL;
        for (size_t k = 0; k < 3; k++) {
            const stericol_loops *loops = stericol_loops_named(k == 0 ? "plain" : names[k - 1]);
            if (loops == NULL)
                continue;
            stericol_sweep *sweep;
            assert_int_equal(stericol_sweep_new(NULL, &options, 777, 777, f.latitude, f.floor, &sweep),
                             STERICOL_OK);
            sweep->loops = loops;
            for (size_t level = 0; level < f.levels; level++) {
                const stericol_sweep_level_record record = record_of(&f, level);
                stericol_sweep_level(sweep, &record, 0, 777);
            }
            assert_int_equal(stericol_sweep_finish(sweep, 0, 777), STERICOL_OK);
            if (expected == NULL) {
                expected = sweep;
                continue;
            }
            assert_true(same_bits(expected, sweep, 1));
            stericol_sweep_free(sweep);
        }
        assert_non_null(expected);
        stericol_sweep_free(expected);
        free_field(&f);
    }
}

/* Columns with latitudes of their own: the shortcut to their pressures against Newton's method for each. */
static void pressures_of_single_columns_are_right(void **state)
{
    (void)state;
    enum { COUNT = 181 };
    double latitude[COUNT], buffer[STERICOL_STRIP];
    for (int i = 0; i < COUNT; i++)
        latitude[i] = (double)(i - 90);
    stericol_column_options options = stericol_column_options_default();
    options.water = &polynomial;
    stericol_sweep *sweep;
    assert_int_equal(stericol_sweep_new(NULL, &options, COUNT, 1, latitude, NULL, &sweep), STERICOL_OK);
    for (double depth = 0.0; depth <= 11000.0; depth += 100.0) {
        stericol_points points = {.count = COUNT};
        stericol_strip_pressures(sweep, 0, depth, NULL, &points, buffer);
        assert_ptr_equal(points.pressures, buffer);
        /* The fourth derivative of p by g is below 1e4 dbar/(m/s2)^4 and g differs by 0.05 at most: 1e-9 dbar
           left, and twelve digits of 11000 dbar. */
        for (size_t i = 0; i < COUNT; i++)
            assert_close(buffer[i], stericol_sea_pressure(depth, latitude[i]), 1e-8);
    }
    stericol_sweep_free(sweep);
}

typedef struct share {
    stericol_sweep *sweep;
    const field *f;
    size_t from, to;
} share;

static void *sweep_share(void *argument)
{
    const share *s = argument;
    for (size_t level = 0; level < s->f->levels; level++) {
        const stericol_sweep_level_record record = record_of(s->f, level);
        stericol_sweep_level(s->sweep, &record, s->from, s->to);
    }
    return stericol_sweep_finish(s->sweep, s->from, s->to) == STERICOL_OK ? argument : NULL;
}

static void threads_do_not_change_a_bit(void **state)
{
    (void)state;
    uint64_t stream = seed + 2;
    for (size_t turn = 0; turn < 4; turn++) {
        field f = random_field(&stream, 900, 300, 16, true);
        stericol_column_options options = stericol_column_options_default();
        options.water = &polynomial;
        options.vertical = verticals[turn];
        options.levels = 16;
        stericol_sweep *alone = sweep_field(&options, &f), *shared;
        assert_int_equal(stericol_sweep_new(NULL, &options, 900, 300, f.latitude, f.floor, &shared),
                         STERICOL_OK);
        share shares[2] = {{shared, &f, 0, 451}, {shared, &f, 451, 900}};
        pthread_t threads[2];
        for (int k = 0; k < 2; k++)
            assert_int_equal(pthread_create(&threads[k], NULL, sweep_share, &shares[k]), 0);
        for (int k = 0; k < 2; k++) {
            void *done = NULL;
            assert_int_equal(pthread_join(threads[k], &done), 0);
            assert_non_null(done);
        }
        assert_true(same_bits(alone, shared, 1));
        stericol_sweep_free(alone);
        stericol_sweep_free(shared);
        free_field(&f);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(random_columns_match),
        cmocka_unit_test(ranges_do_not_change_a_bit),
        cmocka_unit_test(instruction_sets_do_not_change_a_bit),
        cmocka_unit_test(pressures_of_single_columns_are_right),
        cmocka_unit_test(threads_do_not_change_a_bit),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
