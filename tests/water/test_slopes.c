/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Derivatives against differences, the polynomial against the Gibbs function, the edges of both. */
#include "water/water_tests.h"

#include "support/testing.h"

#include "stericol/water.h"

#include <float.h>

static const stericol_water waters[] = {
    STERICOL_WATER_DEFAULT,
    {STERICOL_EQUATION_GIBBS, 0.0, 0.0, 0.0},
    {STERICOL_EQUATION_EOS80, 0.0, 0.0, 0.0},
    {STERICOL_EQUATION_LINEAR, 1.7e-4, 7.6e-4, 1026.0},
};
enum { WATERS = sizeof waters / sizeof *waters };

static double volume(const stericol_water *water, double s, double t, double p)
{
    double v;

    stericol_volume_row(water, p, 1, &s, &t, &v);
    return v;
}

/* The central difference of sixth order; f holds v at -3h..3h. */
static double difference(const double *f, double h)
{
    return ((f[6] - f[0]) - 9.0 * (f[5] - f[1]) + 45.0 * (f[4] - f[2])) / (60.0 * h);
}

static void slopes_are_those_of_the_volume(void **state)
{
    const double h = 0.2;

    (void)state;
    for (int w = 0; w < WATERS; w++)
        for (double s = 5.0; s <= 41.0; s += 6.0)
            for (double t = -1.0; t <= 30.0; t += 3.1)
                for (double p = 0.0; p <= 6000.0; p += 1500.0) {
                    double along_t[7], along_s[7], v, v_t, v_s;

                    for (int i = 0; i < 7; i++) {
                        along_t[i] = volume(&waters[w], s, t + (i - 3) * h, p);
                        along_s[i] = volume(&waters[w], s + (i - 3) * h, t, p);
                    }
                    stericol_volume_row_derivatives(&waters[w], p, 1, &s, &t, &v, &v_t, &v_s);
                    assert_same_number(v, along_t[3]);
                    /*
                     * Slopes are 1e-7 and -7e-7.  The rounding of v, some 1e-18, over h, gives 5e-18, and
                     * what EOS-80 leaves of its inner temperature 1e-15; the next term of the difference,
                     * h^6/140 times the seventh derivative, is less, except by salinity near 5, where terms
                     * in S^1.5 leave 5e-14.
                     */
                    assert_close(v_t, difference(along_t, h), 3e-15);
                    assert_close(v_s, difference(along_s, h), s < 10.0 ? 1e-13 : 3e-15);
                }
}

/* Each derivative of the Gibbs function by a difference of the one below it. */
static void gibbs_derivatives_are_those_of_the_function(void **state)
{
    const double h = 0.1, hp = 20.0;

    (void)state;
    for (double s = 5.0; s <= 41.0; s += 9.0)
        for (double t = -1.0; t <= 31.0; t += 8.0)
            for (double p = 0.0; p <= 8000.0; p += 2000.0) {
                stericol_gibbs g, by_s[7], by_t[7], by_p[7];
                double f[7];

                stericol_gibbs_function(s, t, p, &g);
                for (int i = 0; i < 7; i++) {
                    stericol_gibbs_function(s + (i - 3) * h, t, p, &by_s[i]);
                    stericol_gibbs_function(s, t + (i - 3) * h, p, &by_t[i]);
                    stericol_gibbs_function(s, t, p + (i - 3) * hp, &by_p[i]);
                }
/* The tolerances are the rounding of the member differenced (its size times 1e-15) over the step, times ten.
 */
#define CHECK(member, step_of, differenced, step, tolerance)                                                 \
    do {                                                                                                     \
        for (int i = 0; i < 7; i++)                                                                          \
            f[i] = step_of[i].differenced;                                                                   \
        assert_close(g.member, difference(f, step), tolerance);                                              \
    } while (0)
                CHECK(g_s, by_s, g, h, 1e-8);
                CHECK(g_t, by_t, g, h, 1e-8);
                CHECK(g_p, by_p, g, hp * 1e4, 1e-14);
                CHECK(g_st, by_t, g_s, h, 1e-10);
                CHECK(g_st, by_s, g_t, h, 1e-8);
                CHECK(g_sp, by_p, g_s, hp * 1e4, 1e-16);
                CHECK(g_tt, by_t, g_t, h, 1e-10);
                CHECK(g_tp, by_p, g_t, hp * 1e4, 1e-16);
                CHECK(g_pp, by_p, g_p, hp * 1e4, 1e-22);
#undef CHECK
            }
}

/* The largest relative difference of the polynomial's volume from the Gibbs function's over a box. */
static double largest_difference(double s0, double s1, double t0, double t1, double p0, double p1)
{
    double largest = 0.0;

    for (int i = 0; i <= 12; i++)
        for (int j = 0; j <= 26; j++)
            for (int k = 0; k <= 10; k++) {
                const double s = s0 + (s1 - s0) * i / 12.0, t = t0 + (t1 - t0) * j / 26.0;
                const double p = p0 + (p1 - p0) * k / 10.0;
                const double exact = volume(&waters[1], s, t, p);

                largest = fmax(largest, fabs(stericol_specific_volume(s, t, p) / exact - 1.0));
            }
    return largest;
}

/* The bounds are those that stericol/water.h states. */
static void the_polynomial_follows_the_gibbs_function(void **state)
{
    static const struct {
        double s0, s1, t0, t1, p0, p1, bound;
    } boxes[] = {
        {33.0, 37.0, -1.0, 25.0, 0.0, 1500.0, 7e-7}, {33.0, 37.0, -1.0, 6.0, 0.0, 5000.0, 7e-7},
        {30.0, 40.0, -2.0, 33.0, 0.0, 500.0, 7e-7},  {0.0, 42.0, -2.0, 35.0, 0.0, 500.0, 1.5e-6},
        {30.0, 40.0, -2.0, 15.0, 0.0, 8000.0, 7e-7}, {0.0, 42.0, -3.0, 40.0, 0.0, 8000.0, 1.2e-4},
    };

    (void)state;
    for (size_t n = 0; n < sizeof boxes / sizeof *boxes; n++) {
        const double largest =
            largest_difference(boxes[n].s0, boxes[n].s1, boxes[n].t0, boxes[n].t1, boxes[n].p0, boxes[n].p1);

        print_message("polynomial, %g..%g g/kg, %g..%g degC, %g..%g dbar: within %.2e\n", boxes[n].s0,
                      boxes[n].s1, boxes[n].t0, boxes[n].t1, boxes[n].p0, boxes[n].p1, largest);
        assert_true(largest <= boxes[n].bound);
    }
}

static void fresh_water_needs_no_care(void **state)
{
    const double zero = 0.0;
    stericol_gibbs g;
    stericol_properties p, near;

    (void)state;
    for (double t = 0.0; t <= 30.0; t += 10.0) {
        double v, v_t, v_s, w;

        stericol_gibbs_saline(0.0, t, 500.0, &g);
        assert_same_number(g.g, 0.0);
        assert_same_number(g.g_t, 0.0);
        assert_same_number(g.g_p, 0.0);
        assert_same_number(g.g_tt, 0.0);
        assert_same_number(g.g_tp, 0.0);
        assert_same_number(g.g_pp, 0.0);
        assert_same_number(g.g_s, -(double)INFINITY);
        assert_same_number(g.g_st, -(double)INFINITY);
        assert_true(isfinite(g.g_sp));
        stericol_seawater_properties(0.0, t, 500.0, &p);
        stericol_seawater_properties(1e-9, t, 500.0, &near);
        /* The terms in S^1.5 leave 1e-3 sqrt(1e-9/40) of the contraction. */
        assert_relative(p.haline_contraction, near.haline_contraction, 2e-5);
        assert_relative(p.thermal_expansion, near.thermal_expansion, 1e-6);
        assert_true(isfinite(p.sound_speed) && isfinite(p.entropy) && isfinite(p.enthalpy));
        for (int k = 0; k < WATERS; k++) {
            stericol_volume_row_derivatives(&waters[k], 500.0, 1, &zero, &t, &v, &v_t, &v_s);
            stericol_volume_row(&waters[k], 500.0, 1, &zero, &t, &w);
            assert_same_number(v, w);
            assert_true(isfinite(v) && isfinite(v_t) && isfinite(v_s));
        }
    }
}

static void what_lies_outside_is_not_clamped(void **state)
{
    static const double odd[] = {-1e300,     -1e20, -100.0,           -24.5,
                                 -1e-9,      0.0,   1e-300,           99.0,
                                 1e20,       1e300, (double)INFINITY, -(double)INFINITY,
                                 (double)NAN};
    enum { ODD = sizeof odd / sizeof *odd };

    (void)state;
    assert_nan(volume(&waters[0], -24.1, 10.0, 0.0));
    assert_nan(volume(&waters[1], -0.1, 10.0, 0.0));
    assert_nan(volume(&waters[2], -0.1, 10.0, 0.0));
    assert_true(isfinite(volume(&waters[0], -23.9, 10.0, 0.0)));
    assert_true(isfinite(volume(&waters[3], -100.0, 10.0, 0.0)));
    assert_nan(stericol_conservative_temperature(-0.1, 10.0));
    assert_nan(stericol_potential_temperature(-0.1, 10.0, 100.0));
    /* Nothing to expect but that nothing breaks: the sanitizers watch. */
    for (int i = 0; i < ODD; i++)
        for (int j = 0; j < ODD; j++)
            for (int k = 0; k < ODD; k++) {
                double v, v_t, v_s;
                stericol_properties p;

                for (int w = 0; w < WATERS; w++)
                    stericol_volume_points_derivatives(&waters[w], &odd[k], 1, &odd[i], &odd[j], &v, &v_t,
                                                       &v_s);
                stericol_seawater_properties(odd[i], odd[j], odd[k], &p);
                v = stericol_in_situ_temperature_of_conservative(odd[i], odd[j], odd[k]);
                v = stericol_eos80_heat_capacity(odd[i], odd[j], odd[k]);
                v = stericol_sea_pressure(odd[i], odd[j]);
                v = stericol_depth(odd[i], odd[j]);
                (void)v;
            }
}

static void the_valid_range_is_reported(void **state)
{
    (void)state;
    for (int w = 0; w < WATERS; w++) {
        assert_true(stericol_in_valid_range(&waters[w], 35.0, 10.0, 1000.0));
        assert_true(stericol_in_valid_range(&waters[w], 0.0, -2.0, 0.0));
        assert_true(stericol_in_valid_range(&waters[w], 42.0, 40.0, 8000.0));
        assert_false(stericol_in_valid_range(&waters[w], 42.1, 10.0, 1000.0));
        assert_false(stericol_in_valid_range(&waters[w], -0.1, 10.0, 1000.0));
        assert_false(stericol_in_valid_range(&waters[w], 35.0, -6.1, 1000.0));
        assert_false(stericol_in_valid_range(&waters[w], 35.0, 40.1, 1000.0));
        assert_false(stericol_in_valid_range(&waters[w], 35.0, 10.0, -0.1));
        assert_false(stericol_in_valid_range(&waters[w], 35.0, 10.0, 10001.0));
        assert_false(stericol_in_valid_range(&waters[w], (double)NAN, 10.0, 0.0));
        assert_false(stericol_in_valid_range(&waters[w], 35.0, (double)NAN, 0.0));
        assert_false(stericol_in_valid_range(&waters[w], 35.0, 10.0, (double)NAN));
    }
    assert_false(stericol_in_valid_range(&waters[0], 35.0, 10.0, 9000.0));
    assert_false(stericol_in_valid_range(&waters[2], 35.0, -2.1, 0.0));
    assert_true(stericol_in_valid_range(&waters[1], 35.0, -5.9, 9000.0));
}

static void the_linear_equation_is_what_it_says(void **state)
{
    const stericol_water usual = STERICOL_WATER_DEFAULT;
    const stericol_water water = {STERICOL_EQUATION_LINEAR, usual.expansion, usual.contraction,
                                  usual.density};

    (void)state;
    /* v = (1/1027) [1 + 2e-4 (20 - 10) - 7.5e-4 (36 - 35)] = 1.00125/1027, by hand */
    assert_relative(volume(&water, 36.0, 20.0, 3000.0), 1.00125 / 1027.0, 4.0 * DBL_EPSILON);
    assert_relative(volume(&water, 35.0, 10.0, 0.0), 1.0 / 1027.0, 2.0 * DBL_EPSILON);
}

static void eos80_slopes_are_in_its_own_kinds(void **state)
{
    const double s = 35.0, theta = 8.0, p = 3000.0, h = 1e-3;
    const double v = volume(&waters[2], s, theta, p);

    (void)state;
    /* A plain central difference: h^2 and the rounding 1e-16/h leave 1e-12. */
    assert_close(stericol_eos80_thermal_expansion(s, theta, p),
                 (volume(&waters[2], s, theta + h, p) - volume(&waters[2], s, theta - h, p)) / (2.0 * h * v),
                 1e-11);
    assert_close(stericol_eos80_haline_contraction(s, theta, p),
                 -(volume(&waters[2], s + h, theta, p) - volume(&waters[2], s - h, theta, p)) / (2.0 * h * v),
                 1e-11);
    /* At the surface the two kinds of temperature are one. */
    assert_relative(1.0 / volume(&waters[2], s, theta, 0.0), stericol_eos80_density(s, theta, 0.0),
                    4.0 * DBL_EPSILON);
}

int run_slope_tests(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(slopes_are_those_of_the_volume),
        cmocka_unit_test(gibbs_derivatives_are_those_of_the_function),
        cmocka_unit_test(the_polynomial_follows_the_gibbs_function),
        cmocka_unit_test(fresh_water_needs_no_care),
        cmocka_unit_test(what_lies_outside_is_not_clamped),
        cmocka_unit_test(the_valid_range_is_reported),
        cmocka_unit_test(the_linear_equation_is_what_it_says),
        cmocka_unit_test(eos80_slopes_are_in_its_own_kinds),
    };

    return cmocka_run_group_tests_name("slopes and ranges", tests, NULL, NULL);
}
