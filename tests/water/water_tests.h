/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The groups of the water room's tests; each returns the number of tests that failed. */
#ifndef STERICOL_TESTS_WATER_WATER_TESTS_H
#define STERICOL_TESTS_WATER_WATER_TESTS_H

int run_standard_tests(void);
int run_conversion_tests(void);
int run_slope_tests(void);
int run_kernel_tests(void);

#endif
