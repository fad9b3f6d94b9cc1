/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "water/water_tests.h"

int main(void)
{
    const int failed = run_standard_tests() + run_conversion_tests() + run_slope_tests() + run_kernel_tests();

    return failed == 0 ? 0 : 1;
}
