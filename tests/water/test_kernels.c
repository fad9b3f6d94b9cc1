/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The array kernels: same bits on every path, in every place, for every length; missing values stay where
 * they are. */
#include "water/water_tests.h"

#include "support/testing.h"

#include "stericol/water.h"
#include "water/kernel.h"

#include <stdlib.h>
#include <string.h>

enum { POINTS = 211, OUTPUTS = 3 };

/* Points all over the ocean, from a fixed sequence. */
typedef struct sample {
    double s[POINTS], t[POINTS], p[POINTS];
} sample;

static void fill_sample(sample *x)
{
    uint32_t seed = 20240229u;

    for (int i = 0; i < POINTS; i++) {
        double draw[3];

        for (int k = 0; k < 3; k++) {
            /* Numerical Recipes' quick generator, from memory; any would do. */
            seed = seed * 1664525u + 1013904223u;
            draw[k] = (double)seed / 4294967296.0;
        }
        x->s[i] = 42.0 * draw[0];
        x->t[i] = -2.0 + 36.0 * draw[1];
        x->p[i] = 6000.0 * draw[2];
    }
}

/* Every kernel in one form: up to three outputs from `count` points, the row ones at 1500 dbar. */
typedef void every_kernel(const stericol_kernel *k, size_t count, const double *s, const double *t,
                          const double *p, double *const out[OUTPUTS]);

static void run_volume_row(const stericol_kernel *k, size_t n, const double *s, const double *t,
                           const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->volume_row(1500.0, n, s, t, out[0]);
}

static void run_volume_points(const stericol_kernel *k, size_t n, const double *s, const double *t,
                              const double *p, double *const out[OUTPUTS])
{
    k->volume_points(p, n, s, t, out[0]);
}

static void run_volume_row_derivatives(const stericol_kernel *k, size_t n, const double *s, const double *t,
                                       const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->volume_row_derivatives(1500.0, n, s, t, out[0], out[1], out[2]);
}

static void run_volume_points_derivatives(const stericol_kernel *k, size_t n, const double *s,
                                          const double *t, const double *p, double *const out[OUTPUTS])
{
    k->volume_points_derivatives(p, n, s, t, out[0], out[1], out[2]);
}

static void run_conservative(const stericol_kernel *k, size_t n, const double *s, const double *t,
                             const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->conservative(n, s, t, out[0]);
}

static void run_potential_of_conservative(const stericol_kernel *k, size_t n, const double *s,
                                          const double *t, const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->potential_of_conservative(n, s, t, out[0]);
}

static void run_potential_row(const stericol_kernel *k, size_t n, const double *s, const double *t,
                              const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->potential_row(1500.0, n, s, t, out[0]);
}

static void run_potential_points(const stericol_kernel *k, size_t n, const double *s, const double *t,
                                 const double *p, double *const out[OUTPUTS])
{
    k->potential_points(p, n, s, t, out[0]);
}

static void run_in_situ_row(const stericol_kernel *k, size_t n, const double *s, const double *t,
                            const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->in_situ_row(1500.0, n, s, t, out[0]);
}

static void run_in_situ_points(const stericol_kernel *k, size_t n, const double *s, const double *t,
                               const double *p, double *const out[OUTPUTS])
{
    k->in_situ_points(p, n, s, t, out[0]);
}

static void run_eos80_row(const stericol_kernel *k, size_t n, const double *s, const double *t,
                          const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->eos80_row(1500.0, n, s, t, out[0]);
}

static void run_eos80_points(const stericol_kernel *k, size_t n, const double *s, const double *t,
                             const double *p, double *const out[OUTPUTS])
{
    k->eos80_points(p, n, s, t, out[0]);
}

static void run_eos80_row_derivatives(const stericol_kernel *k, size_t n, const double *s, const double *t,
                                      const double *p, double *const out[OUTPUTS])
{
    (void)p;
    k->eos80_row_derivatives(1500.0, n, s, t, out[0], out[1], out[2]);
}

static void run_eos80_points_derivatives(const stericol_kernel *k, size_t n, const double *s, const double *t,
                                         const double *p, double *const out[OUTPUTS])
{
    k->eos80_points_derivatives(p, n, s, t, out[0], out[1], out[2]);
}

static const struct {
    every_kernel *run;
    int outputs;
    bool uses_pressure;
} kernels[] = {
    {run_volume_row, 1, false},
    {run_volume_points, 1, true},
    {run_volume_row_derivatives, 3, false},
    {run_volume_points_derivatives, 3, true},
    {run_conservative, 1, false},
    {run_potential_of_conservative, 1, false},
    {run_potential_row, 1, false},
    {run_potential_points, 1, true},
    {run_in_situ_row, 1, false},
    {run_in_situ_points, 1, true},
    {run_eos80_row, 1, false},
    {run_eos80_points, 1, true},
    {run_eos80_row_derivatives, 3, false},
    {run_eos80_points_derivatives, 3, true},
};
enum { KERNELS = sizeof kernels / sizeof *kernels };

static const char *const paths[] = {"plain", "avx2", "avx512"};
enum { PATHS = sizeof paths / sizeof *paths };

static void the_fused_paths_give_the_same_bits(void **state)
{
    const stericol_kernel *const plain = stericol_kernel_named("plain");
    const stericol_kernel *const avx2 = stericol_kernel_named("avx2"), *const avx512 =
                                                                           stericol_kernel_named("avx512");
    sample x;
    static double a[OUTPUTS][POINTS], b[OUTPUTS][POINTS];

    (void)state;
    fill_sample(&x);
    assert_non_null(plain);
    for (int n = 0; n < KERNELS; n++) {
        kernels[n].run(plain, POINTS, x.s, x.t, x.p, (double *[]){a[0], a[1], a[2]});
        if (avx2 != NULL) {
            kernels[n].run(avx2, POINTS, x.s, x.t, x.p, (double *[]){b[0], b[1], b[2]});
            for (int o = 0; o < kernels[n].outputs; o++)
                for (int i = 0; i < POINTS; i++)
                    /* A few roundings of the largest term: 1e-14 of v, of 7e-7 and of some degrees; EOS-80
                     * fuses nothing. */
                    assert_close(b[o][i], a[o][i], n >= 10 ? 0.0 : n >= 4 ? 1e-12 : o == 0 ? 1e-17 : 1e-20);
        }
        if (avx512 != NULL) {
            kernels[n].run(avx512, POINTS, x.s, x.t, x.p, (double *[]){a[0], a[1], a[2]});
            for (int o = 0; o < kernels[n].outputs; o++)
                assert_memory_equal(a[o], b[o], sizeof a[o]);
        }
    }
}

static void neither_place_nor_length_matters(void **state)
{
    enum { LONGEST = 40, OFFSETS = 9 };
    const double guard = 12345.0;
    sample x;
    static double whole[OUTPUTS][POINTS], part[OUTPUTS][POINTS];

    (void)state;
    fill_sample(&x);
    for (int path = 0; path < PATHS; path++) {
        const stericol_kernel *const k = stericol_kernel_named(paths[path]);

        for (int n = 0; k != NULL && n < KERNELS; n++) {
            kernels[n].run(k, POINTS, x.s, x.t, x.p, (double *[]){whole[0], whole[1], whole[2]});
            for (size_t offset = 0; offset < OFFSETS; offset++)
                for (size_t length = 0; length <= LONGEST; length++) {
                    for (int o = 0; o < kernels[n].outputs; o++)
                        for (size_t i = 0; i < POINTS; i++)
                            part[o][i] = guard;
                    kernels[n].run(k, length, x.s + offset, x.t + offset, x.p + offset,
                                   (double *[]){part[0] + 1, part[1] + 1, part[2] + 1});
                    for (int o = 0; o < kernels[n].outputs; o++) {
                        assert_memory_equal(part[o] + 1, whole[o] + offset, length * sizeof(double));
                        assert_same_number(part[o][0], guard);
                        assert_same_number(part[o][length + 1], guard);
                    }
                }
        }
    }
}

/* A row is nothing but points with one pressure: the same bits. */
static void rows_and_points_are_the_same(void **state)
{
    static const int pairs[][2] = {{0, 1}, {2, 3}, {6, 7}, {8, 9}, {10, 11}, {12, 13}};
    sample x;
    static double row[OUTPUTS][POINTS], points[OUTPUTS][POINTS];

    (void)state;
    fill_sample(&x);
    for (int i = 0; i < POINTS; i++)
        x.p[i] = 1500.0;
    for (int path = 0; path < PATHS; path++) {
        const stericol_kernel *const k = stericol_kernel_named(paths[path]);

        for (size_t n = 0; k != NULL && n < sizeof pairs / sizeof *pairs; n++) {
            kernels[pairs[n][0]].run(k, POINTS, x.s, x.t, x.p, (double *[]){row[0], row[1], row[2]});
            kernels[pairs[n][1]].run(k, POINTS, x.s, x.t, x.p, (double *[]){points[0], points[1], points[2]});
            for (int o = 0; o < kernels[pairs[n][0]].outputs; o++)
                assert_memory_equal(row[o], points[o], sizeof row[o]);
        }
    }
}

/* Element i misses its salinity, temperature or pressure by turns of five; the others must not notice. */
static void a_missing_value_stays_alone(void **state)
{
    const double nan = (double)NAN;
    sample x, y;
    static double full[OUTPUTS][POINTS], holed[OUTPUTS][POINTS];

    (void)state;
    fill_sample(&x);
    y = x;
    for (int i = 0; i < POINTS; i++) {
        y.s[i] = i % 5 == 0 ? nan : x.s[i];
        y.t[i] = i % 5 == 1 ? nan : x.t[i];
        y.p[i] = i % 5 == 2 ? nan : x.p[i];
    }
    for (int path = 0; path < PATHS; path++) {
        const stericol_kernel *const k = stericol_kernel_named(paths[path]);

        for (int n = 0; k != NULL && n < KERNELS; n++) {
            kernels[n].run(k, POINTS, x.s, x.t, x.p, (double *[]){full[0], full[1], full[2]});
            kernels[n].run(k, POINTS, y.s, y.t, y.p, (double *[]){holed[0], holed[1], holed[2]});
            for (int o = 0; o < kernels[n].outputs; o++)
                for (int i = 0; i < POINTS; i++) {
                    const bool missing = i % 5 < 2 || (i % 5 == 2 && kernels[n].uses_pressure);

                    assert_same_number(holed[o][i], missing ? nan : full[o][i]);
                    assert_int_equal(isnan(holed[o][i]) != 0, missing);
                }
        }
    }
}

static const stericol_water waters[] = {
    STERICOL_WATER_DEFAULT,
    {STERICOL_EQUATION_GIBBS, 0.0, 0.0, 0.0},
    {STERICOL_EQUATION_EOS80, 0.0, 0.0, 0.0},
    {STERICOL_EQUATION_LINEAR, 1.7e-4, 7.6e-4, 1026.0},
};
enum { WATERS = sizeof waters / sizeof *waters };

/* The public functions, every equation: four forms, element by element, with missing values. */
static void every_equation_keeps_the_rules_of_arrays(void **state)
{
    const double nan = (double)NAN;
    sample x;
    static double v[POINTS], w[POINTS], u[POINTS], v_t[POINTS], v_s[POINTS], w_t[POINTS], w_s[POINTS];

    (void)state;
    fill_sample(&x);
    for (int i = 0; i < POINTS; i++)
        *(i % 5 == 0 ? &x.s[i] : i % 5 == 1 ? &x.t[i] : &v[i]) = nan;
    for (int k = 0; k < WATERS; k++) {
        stericol_volume_row(&waters[k], 1500.0, POINTS, x.s, x.t, v);
        stericol_volume_row_derivatives(&waters[k], 1500.0, POINTS, x.s, x.t, w, v_t, v_s);
        assert_memory_equal(v, w, sizeof v);
        for (int i = 0; i < POINTS; i++) {
            double one, one_t, one_s;
            const double p = 1500.0;

            stericol_volume_points_derivatives(&waters[k], &p, 1, &x.s[i], &x.t[i], &one, &one_t, &one_s);
            assert_same_number(v[i], one);
            assert_same_number(v_t[i], one_t);
            assert_same_number(v_s[i], one_s);
            assert_int_equal(isnan(v[i]) && isnan(v_t[i]) && isnan(v_s[i]), i % 5 < 2);
            assert_int_equal(isnan(v[i]) || isnan(v_t[i]) || isnan(v_s[i]), i % 5 < 2);
        }
        x.p[7] = nan;
        stericol_volume_points(&waters[k], x.p, POINTS, x.s, x.t, v);
        stericol_volume_points_derivatives(&waters[k], x.p, POINTS, x.s, x.t, w, w_t, w_s);
        for (int i = 0; i < POINTS; i++) {
            stericol_volume_row(&waters[k], x.p[i], 1, &x.s[i], &x.t[i], &u[i]);
            assert_same_number(v[i], u[i]);
            assert_same_number(w[i], u[i]);
        }
        assert_nan(v[7]);
        assert_nan(w_t[7]);
        assert_nan(w_s[7]);
        /* In place. */
        memcpy(v_s, x.s, sizeof v_s);
        memcpy(v_t, x.t, sizeof v_t);
        memcpy(u, x.p, sizeof u);
        stericol_volume_points_derivatives(&waters[k], u, POINTS, v_s, v_t, u, v_t, v_s);
        for (int i = 0; i < POINTS; i++) {
            assert_same_number(u[i], w[i]);
            assert_same_number(v_t[i], w_t[i]);
            assert_same_number(v_s[i], w_s[i]);
        }
    }
}

static void one_point_is_an_array_of_one(void **state)
{
    const stericol_water water = STERICOL_WATER_DEFAULT;
    sample x;
    static double v[POINTS], v_t[POINTS], v_s[POINTS];

    (void)state;
    fill_sample(&x);
    stericol_volume_points_derivatives(&water, x.p, POINTS, x.s, x.t, v, v_t, v_s);
    for (int i = 0; i < POINTS; i++) {
        const stericol_volume_and_slopes a = stericol_specific_volume_and_slopes(x.s[i], x.t[i], x.p[i]);

        assert_same_number(a.volume, v[i]);
        assert_same_number(a.thermal_expansion, v_t[i] / v[i]);
        assert_same_number(a.haline_contraction, -v_s[i] / v[i]);
        assert_same_number(stericol_specific_volume(x.s[i], x.t[i], x.p[i]), v[i]);
        assert_same_number(stericol_thermal_expansion(x.s[i], x.t[i], x.p[i]), a.thermal_expansion);
        assert_same_number(stericol_haline_contraction(x.s[i], x.t[i], x.p[i]), a.haline_contraction);
    }
}

static void the_path_has_a_name(void **state)
{
    (void)state;
    assert_string_equal(stericol_instruction_set(), stericol_kernel_best()->name);
    assert_ptr_equal(stericol_kernel_named(stericol_instruction_set()), stericol_kernel_best());
    for (int path = 0; path < PATHS; path++)
        if (stericol_kernel_named(paths[path]) != NULL)
            assert_string_equal(stericol_kernel_named(paths[path])->name, paths[path]);
    assert_null(stericol_kernel_named("none"));
}

int run_kernel_tests(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(the_fused_paths_give_the_same_bits),
        cmocka_unit_test(neither_place_nor_length_matters),
        cmocka_unit_test(rows_and_points_are_the_same),
        cmocka_unit_test(a_missing_value_stays_alone),
        cmocka_unit_test(every_equation_keeps_the_rules_of_arrays),
        cmocka_unit_test(one_point_is_an_array_of_one),
        cmocka_unit_test(the_path_has_a_name),
    };

    return cmocka_run_group_tests_name("kernels", tests, NULL, NULL);
}
