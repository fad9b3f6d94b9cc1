/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Prints what the kernels cost, in nanoseconds a point: the best of many runs over arrays of 8192 points. */
#include "stericol/water.h"
#include "water/kernel.h"

#include <stdio.h>
#include <time.h>

enum { POINTS = 8192, RUNS = 200 };

static double s[POINTS], t[POINTS], p[POINTS], a[POINTS], b[POINTS], c[POINTS];

static double now(void)
{
    struct timespec time;

    clock_gettime(CLOCK_MONOTONIC, &time);
    return (double)time.tv_sec * 1e9 + (double)time.tv_nsec;
}

#define MEASURE(name, runs, call)                                                                            \
    do {                                                                                                     \
        double best = 1e300;                                                                                 \
        for (int run = 0; run < (runs); run++) {                                                             \
            const double start = now();                                                                      \
            call;                                                                                            \
            const double took = now() - start;                                                               \
            best = took < best ? took : best;                                                                \
        }                                                                                                    \
        printf("  %-34s %8.2f ns\n", (name), best / POINTS);                                                 \
    } while (0)

static void measure_path(const stericol_kernel *k)
{
    printf("%s\n", k->name);
    MEASURE("volume, row", RUNS, k->volume_row(1500.0, POINTS, s, t, a));
    MEASURE("volume and slopes, row", RUNS, k->volume_row_derivatives(1500.0, POINTS, s, t, a, b, c));
    MEASURE("volume, points", RUNS, k->volume_points(p, POINTS, s, t, a));
    MEASURE("volume and slopes, points", RUNS, k->volume_points_derivatives(p, POINTS, s, t, a, b, c));
    MEASURE("conservative of potential", RUNS, k->conservative(POINTS, s, t, a));
    MEASURE("potential of conservative", RUNS, k->potential_of_conservative(POINTS, s, t, a));
    MEASURE("potential of in situ, row", RUNS, k->potential_row(1500.0, POINTS, s, t, a));
    MEASURE("potential of in situ, points", RUNS, k->potential_points(p, POINTS, s, t, a));
    MEASURE("in situ of potential, row", RUNS, k->in_situ_row(1500.0, POINTS, s, t, a));
    MEASURE("in situ of potential, points", RUNS, k->in_situ_points(p, POINTS, s, t, a));
}

int main(void)
{
    static const char *const paths[] = {"plain", "avx2", "avx512"};
    const stericol_water gibbs = {STERICOL_EQUATION_GIBBS, 0.0, 0.0, 0.0};
    const stericol_water eos80 = {STERICOL_EQUATION_EOS80, 0.0, 0.0, 0.0};

    for (int i = 0; i < POINTS; i++) {
        s[i] = 33.0 + 4.0 * (i % 97) / 97.0;
        t[i] = -1.0 + 26.0 * (i % 89) / 89.0;
        p[i] = 1500.0 + i % 7;
    }
    for (size_t n = 0; n < sizeof paths / sizeof *paths; n++)
        if (stericol_kernel_named(paths[n]) != NULL)
            measure_path(stericol_kernel_named(paths[n]));
    printf("one path only\n");
    MEASURE("gibbs, volume, row", 10, stericol_volume_row(&gibbs, 1500.0, POINTS, s, t, a));
    MEASURE("gibbs, volume and slopes, row", 10,
            stericol_volume_row_derivatives(&gibbs, 1500.0, POINTS, s, t, a, b, c));
    MEASURE("eos80, volume, row", 10, stericol_volume_row(&eos80, 1500.0, POINTS, s, t, a));
    MEASURE("eos80, volume and slopes, row", 10,
            stericol_volume_row_derivatives(&eos80, 1500.0, POINTS, s, t, a, b, c));
    MEASURE("pressure of depth", 10, stericol_sea_pressure_array(30.0, POINTS, p, a));
    return 0;
}
