/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Splines: what both methods must reproduce by their own definitions (Steffen 1990, Akima 1970), and data
 * that no spline can take.
 */
#include "numerics/spline.h"
#include "support/testing.h"

static const stericol_spline_kind both[] = {STERICOL_SPLINE_STEFFEN, STERICOL_SPLINE_AKIMA};

/* Both methods give a straight line through samples on a line, wherever the samples stand. */
static void lines_are_kept(void **state)
{
    (void)state;
    const double x[] = {0, 3, 4, 10, 31, 33};
    double y[6];
    for (int i = 0; i < 6; i++)
        y[i] = 2.0 - 0.5 * x[i];
    for (int k = 0; k < 2; k++) {
        stericol_spline *spline;
        assert_int_equal(stericol_spline_new(both[k], 6, x, y, &spline), STERICOL_OK);
        for (double at = 0.0; at <= 33.0; at += 0.5)
            assert_close(stericol_spline_value(spline, at), 2.0 - 0.5 * at,
                         1e-13); /* rounding of values near 15 */
        /* 2(b-a) - (b2-a2)/4 by hand: a = 1, b = 32. */
        assert_close(stericol_spline_integral(spline, 1.0, 32.0), 62.0 - 1023.0 / 4.0, 1e-11); /* rounding */
        stericol_spline_free(spline);
    }
}

/* Steffen's spline makes no extremes of its own (his paper's point); a step stays within its two values. */
static void steffen_does_not_overshoot(void **state)
{
    (void)state;
    const double x[] = {0, 1, 2, 3, 4, 5};
    const double y[] = {0, 0, 0, 1, 1, 1};
    stericol_spline *spline;
    assert_int_equal(stericol_spline_new(STERICOL_SPLINE_STEFFEN, 6, x, y, &spline), STERICOL_OK);
    double before = 0.0;
    for (double at = 0.0; at <= 5.0; at += 1.0 / 64.0) {
        const double value = stericol_spline_value(spline, at);
        assert_true(value >= before - 1e-15 && value <= 1.0 + 1e-15); /* one rounding */
        before = value;
    }
    /* The slopes at 2 and 3 are zero there, so the cubic is 3t2 - 2t3: 5/32 at t = 1/4. */
    assert_close(stericol_spline_value(spline, 2.25), 5.0 / 32.0, 1e-15);
    stericol_spline_free(spline);
}

static void outside_is_missing(void **state)
{
    (void)state;
    const double x[] = {1, 2, 3, 4, 5};
    const double y[] = {1, 4, 9, 16, 25};
    for (int k = 0; k < 2; k++) {
        stericol_spline *spline;
        assert_int_equal(stericol_spline_new(both[k], 5, x, y, &spline), STERICOL_OK);
        assert_nan(stericol_spline_value(spline, 0.999));
        assert_nan(stericol_spline_value(spline, 5.001));
        assert_nan(stericol_spline_integral(spline, 0.5, 2.0));
        assert_same_number(stericol_spline_value(spline, 5.0), 25.0);
        stericol_spline_free(spline);
    }
}

static void useless_samples_are_refused(void **state)
{
    (void)state;
    const double y[] = {1, 2, 3, 4, 5};
    const double rows[][5] = {
        {1, 2, 2, 3, 4}, {1, 2, 1.5, 3, 4}, {5, 4, 3, 2, 1}, {1, 2, NAN, 4, 5}, {1, 2, 3, 4, INFINITY}};
    const double with_gap[] = {1, 2, NAN, 4, 5};
    stericol_spline *spline;
    for (int k = 0; k < 2; k++) {
        for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
            assert_int_equal(stericol_spline_new(both[k], 5, rows[i], y, &spline), STERICOL_INPUT);
            assert_null(spline);
        }
        assert_int_equal(stericol_spline_new(both[k], 5, y, with_gap, &spline), STERICOL_INPUT);
        assert_int_equal(stericol_spline_new(both[k], stericol_spline_least(both[k]) - 1, y, y, &spline),
                         STERICOL_INPUT);
        assert_null(spline);
        assert_int_equal(stericol_spline_new(both[k], stericol_spline_least(both[k]), y, y, &spline),
                         STERICOL_OK);
        stericol_spline_free(spline);
    }
    stericol_spline_free(NULL);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(lines_are_kept),
        cmocka_unit_test(steffen_does_not_overshoot),
        cmocka_unit_test(outside_is_missing),
        cmocka_unit_test(useless_samples_are_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
