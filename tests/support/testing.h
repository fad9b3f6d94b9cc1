/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What every test includes instead of cmocka.h.  cmocka compares floats as float and lets NaN pass, so its
 * float macros are not used here: these fail on NaN and print what was compared.
 */
#ifndef STERICOL_TESTS_TESTING_H
#define STERICOL_TESTS_TESTING_H

#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>

#include <math.h>
#include <stdbool.h>

/* |actual - expected| <= tolerance. */
static inline void check_close(double actual, double expected, double tolerance, const char *what, const char *file,
                               int line)
{
    if (!(fabs(actual - expected) <= tolerance)) {
        print_error("%s is %.17g, expected %.17g within %.3g (off by %.3g)\n", what, actual, expected, tolerance,
                    actual - expected);
        _fail(file, line);
    }
}

/* |actual - expected| <= tolerance |expected|. */
static inline void check_relative(double actual, double expected, double tolerance, const char *what,
                                  const char *file, int line)
{
    if (!(fabs(actual - expected) <= tolerance * fabs(expected))) {
        print_error("%s is %.17g, expected %.17g within a relative %.3g (off by %.3g)\n", what, actual, expected,
                    tolerance, (actual - expected) / expected);
        _fail(file, line);
    }
}

static inline void check_nan(double actual, const char *what, const char *file, int line)
{
    if (!isnan(actual)) {
        print_error("%s is %.17g, expected NaN\n", what, actual);
        _fail(file, line);
    }
}

#define assert_close(actual, expected, tolerance)                                                            \
    check_close((actual), (expected), (tolerance), #actual, __FILE__, __LINE__)
#define assert_relative(actual, expected, tolerance)                                                         \
    check_relative((actual), (expected), (tolerance), #actual, __FILE__, __LINE__)
#define assert_nan(actual) check_nan((actual), #actual, __FILE__, __LINE__)
/* The same value; two NaN are the same, 0 and -0 too. */
#define assert_same_number(actual, expected)                                                                 \
    do {                                                                                                     \
        double same_a_ = (actual), same_b_ = (expected);                                                     \
        if (!(same_a_ <= same_b_ && same_a_ >= same_b_) && !(isnan(same_a_) && isnan(same_b_)))              \
            check_close(same_a_, same_b_, 0.0, #actual, __FILE__, __LINE__);                                 \
    } while (0)

#endif
