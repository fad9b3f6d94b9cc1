/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The body of the array kernels.  A file that includes this defines STERICOL_KERNEL (the table's name),
 * STERICOL_KERNEL_NAME (a text) and STERICOL_KERNEL_FUSED (1: explicit fused multiply-add).
 *
 * Same bits: every result is built from additions, products, fused multiply-adds, quotients and square roots
 * in an order that the source fixes, each correctly rounded in scalar and vector form alike, and the compiler
 * is told not to fuse anything on its own.  So neither the width of a vector nor the place in an array can
 * matter.  The row kernels reduce the coefficients at their pressure by the very operations that the point
 * kernels do for each point.
 */
#include "water/kernel.h"

#include "water/constants.h"
#include "water/eos80_body.h"
#include "water/gibbs_terms.h"
#include "water/volume_terms.h"

#include <math.h>

#if STERICOL_KERNEL_FUSED
#define FMA(a, b, c) __builtin_fma((a), (b), (c))
#else
/* A fused multiply-add in software would be fifty times slower than the product and the sum. */
#define FMA(a, b, c) ((a) * (b) + (c))
#endif

/* Every helper must vanish into the loops, or the loops would not become vectors. */
#define INLINE static inline __attribute__((always_inline))

/* a0 + x (a1 + x (a2 + ...)). */
#define H1(x, a0, a1) FMA(x, a1, a0)
#define H2(x, a0, a1, a2) FMA(x, H1(x, a1, a2), a0)
#define H3(x, a0, a1, a2, a3) FMA(x, H2(x, a1, a2, a3), a0)
#define H4(x, a0, a1, a2, a3, a4) FMA(x, H3(x, a1, a2, a3, a4), a0)
#define H5(x, a0, a1, a2, a3, a4, a5) FMA(x, H4(x, a1, a2, a3, a4, a5), a0)
#define H6(x, a0, a1, a2, a3, a4, a5, a6) FMA(x, H5(x, a1, a2, a3, a4, a5, a6), a0)

/* ---- the 75-term polynomial ------------------------------------------------------------------------------
 */

#define REFERENCE_TERM(m, c) [m] = (c),
#define VOLUME_TERM(i, j, k, c) [i][j][k] = (c),
static const double volume_reference[7] = {STERICOL_VOLUME_REFERENCE_TERMS(REFERENCE_TERM)};
static const double volume_terms[7][7][6] = {STERICOL_VOLUME_TERMS(VOLUME_TERM)};

/* The polynomial at one pressure: cIJ s^I t^J. */
typedef struct reduced_volume {
    double c00, c01, c02, c03, c04, c05, c06;
    double c10, c11, c12, c13, c14, c15;
    double c20, c21, c22, c23, c24;
    double c30, c31, c32, c33;
    double c40, c41, c42;
    double c50, c51;
    double c60;
} reduced_volume;

INLINE reduced_volume reduce_volume(double pressure)
{
    const double z = pressure * (1.0 / STERICOL_REDUCING_PRESSURE);
    reduced_volume r;

#define V(i, j, k) volume_terms[i][j][k]
#define Z0(i, j) V(i, j, 0)
#define Z1(i, j) H1(z, V(i, j, 0), V(i, j, 1))
#define Z2(i, j) H2(z, V(i, j, 0), V(i, j, 1), V(i, j, 2))
#define Z3(i, j) H3(z, V(i, j, 0), V(i, j, 1), V(i, j, 2), V(i, j, 3))
#define Z4(i, j) H4(z, V(i, j, 0), V(i, j, 1), V(i, j, 2), V(i, j, 3), V(i, j, 4))
#define Z5(i, j) H5(z, V(i, j, 0), V(i, j, 1), V(i, j, 2), V(i, j, 3), V(i, j, 4), V(i, j, 5))
    const double profile = z * H5(z, volume_reference[1], volume_reference[2], volume_reference[3],
                                  volume_reference[4], volume_reference[5], volume_reference[6]);

    r.c00 = profile + Z5(0, 0);
    r.c01 = Z4(0, 1);
    r.c02 = Z3(0, 2);
    r.c03 = Z2(0, 3);
    r.c04 = Z2(0, 4);
    r.c05 = Z1(0, 5);
    r.c06 = Z0(0, 6);
    r.c10 = Z4(1, 0);
    r.c11 = Z3(1, 1);
    r.c12 = Z2(1, 2);
    r.c13 = Z2(1, 3);
    r.c14 = Z1(1, 4);
    r.c15 = Z0(1, 5);
    r.c20 = Z3(2, 0);
    r.c21 = Z2(2, 1);
    r.c22 = Z2(2, 2);
    r.c23 = Z1(2, 3);
    r.c24 = Z0(2, 4);
    r.c30 = Z2(3, 0);
    r.c31 = Z2(3, 1);
    r.c32 = Z1(3, 2);
    r.c33 = Z0(3, 3);
    r.c40 = Z2(4, 0);
    r.c41 = Z1(4, 1);
    r.c42 = Z0(4, 2);
    r.c50 = Z1(5, 0);
    r.c51 = Z0(5, 1);
    r.c60 = Z0(6, 0);
#undef V
#undef Z0
#undef Z1
#undef Z2
#undef Z3
#undef Z4
#undef Z5
    return r;
}

INLINE double volume_root(double salinity)
{
    return sqrt(FMA(salinity, 1.0 / STERICOL_REDUCING_SALINITY,
                    STERICOL_POLYNOMIAL_SALINITY_OFFSET / STERICOL_REDUCING_SALINITY));
}

INLINE double volume_value(const reduced_volume *r, double s, double temperature)
{
    const double t = temperature * (1.0 / STERICOL_REDUCING_TEMPERATURE);
    const double p0 = H6(t, r->c00, r->c01, r->c02, r->c03, r->c04, r->c05, r->c06);
    const double p1 = H5(t, r->c10, r->c11, r->c12, r->c13, r->c14, r->c15);
    const double p2 = H4(t, r->c20, r->c21, r->c22, r->c23, r->c24);
    const double p3 = H3(t, r->c30, r->c31, r->c32, r->c33);
    const double p4 = H2(t, r->c40, r->c41, r->c42);
    const double p5 = H1(t, r->c50, r->c51);

    return H6(s, p0, p1, p2, p3, p4, p5, r->c60);
}

/* dv/dTheta. */
INLINE double volume_slope_temperature(const reduced_volume *r, double s, double temperature)
{
    const double t = temperature * (1.0 / STERICOL_REDUCING_TEMPERATURE);
    const double q0 = H5(t, r->c01, 2.0 * r->c02, 3.0 * r->c03, 4.0 * r->c04, 5.0 * r->c05, 6.0 * r->c06);
    const double q1 = H4(t, r->c11, 2.0 * r->c12, 3.0 * r->c13, 4.0 * r->c14, 5.0 * r->c15);
    const double q2 = H3(t, r->c21, 2.0 * r->c22, 3.0 * r->c23, 4.0 * r->c24);
    const double q3 = H2(t, r->c31, 2.0 * r->c32, 3.0 * r->c33);
    const double q4 = H1(t, r->c41, 2.0 * r->c42);

    return H5(s, q0, q1, q2, q3, q4, r->c51) * (1.0 / STERICOL_REDUCING_TEMPERATURE);
}

/* dv/dSA = (dv/ds) / (2 s Su). */
INLINE double volume_slope_salinity(const reduced_volume *r, double s, double temperature)
{
    const double t = temperature * (1.0 / STERICOL_REDUCING_TEMPERATURE);
    const double p1 = H5(t, r->c10, r->c11, r->c12, r->c13, r->c14, r->c15);
    const double p2 = H4(t, r->c20, r->c21, r->c22, r->c23, r->c24);
    const double p3 = H3(t, r->c30, r->c31, r->c32, r->c33);
    const double p4 = H2(t, r->c40, r->c41, r->c42);
    const double p5 = H1(t, r->c50, r->c51);

    return H5(s, p1, 2.0 * p2, 3.0 * p3, 4.0 * p4, 5.0 * p5, 6.0 * r->c60) *
           (0.5 / STERICOL_REDUCING_SALINITY) / s;
}

static void volume_row(double pressure, size_t count, const double *salinity, const double *temperature,
                       double *volume)
{
    const reduced_volume r = reduce_volume(pressure);

#pragma omp simd
    for (size_t i = 0; i < count; i++)
        volume[i] = volume_value(&r, volume_root(salinity[i]), temperature[i]);
}

static void volume_points(const double *pressure, size_t count, const double *salinity,
                          const double *temperature, double *volume)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const reduced_volume r = reduce_volume(pressure[i]);

        volume[i] = volume_value(&r, volume_root(salinity[i]), temperature[i]);
    }
}

static void volume_row_derivatives(double pressure, size_t count, const double *salinity,
                                   const double *temperature, double *volume, double *volume_temperature,
                                   double *volume_salinity)
{
    const reduced_volume r = reduce_volume(pressure);

#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const double s = volume_root(salinity[i]), t = temperature[i];
        const double v = volume_value(&r, s, t), v_t = volume_slope_temperature(&r, s, t);
        const double v_s = volume_slope_salinity(&r, s, t);

        volume[i] = v;
        volume_temperature[i] = v_t;
        volume_salinity[i] = v_s;
    }
}

static void volume_points_derivatives(const double *pressure, size_t count, const double *salinity,
                                      const double *temperature, double *volume, double *volume_temperature,
                                      double *volume_salinity)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const reduced_volume r = reduce_volume(pressure[i]);
        const double s = volume_root(salinity[i]), t = temperature[i];
        const double v = volume_value(&r, s, t), v_t = volume_slope_temperature(&r, s, t);
        const double v_s = volume_slope_salinity(&r, s, t);

        volume[i] = v;
        volume_temperature[i] = v_t;
        volume_salinity[i] = v_s;
    }
}

/* ---- temperatures by the Gibbs function
 * -------------------------------------------------------------------- */

#define WATER_TERM(j, k, c) [j][k] = (c),
#define SALINE_TERM(i, j, k, c) [i][j][k] = (c),
static const double water_terms[8][7] = {STERICOL_GIBBS_WATER_TERMS(WATER_TERM)};
static const double saline_terms[8][8][6] = {STERICOL_GIBBS_SALINE_TERMS(SALINE_TERM)};

/*
 * The part of the Gibbs function without logarithm, but for y^0, at one pressure: wJ y^J for water, aIJ x^I
 * y^J for salt.  y^0 never enters entropy.
 */
typedef struct reduced_gibbs {
    double w1, w2, w3, w4, w5, w6, w7;
    double a21, a22, a23, a24, a25, a26;
    double a31, a32, a33, a34;
    double a41, a42, a43, a44, a45;
    double a51, a61;
} reduced_gibbs;

INLINE reduced_gibbs reduce_gibbs(double pressure)
{
    const double z = pressure * (1.0 / STERICOL_REDUCING_PRESSURE);
    reduced_gibbs r;

#define W(j, k) water_terms[j][k]
#define S(i, j, k) saline_terms[i][j][k]
    r.w1 = H5(z, W(1, 0), W(1, 1), W(1, 2), W(1, 3), W(1, 4), W(1, 5));
    r.w2 = H5(z, W(2, 0), W(2, 1), W(2, 2), W(2, 3), W(2, 4), W(2, 5));
    r.w3 = H5(z, W(3, 0), W(3, 1), W(3, 2), W(3, 3), W(3, 4), W(3, 5));
    r.w4 = H4(z, W(4, 0), W(4, 1), W(4, 2), W(4, 3), W(4, 4));
    r.w5 = H4(z, W(5, 0), W(5, 1), W(5, 2), W(5, 3), W(5, 4));
    r.w6 = H3(z, W(6, 0), W(6, 1), W(6, 2), W(6, 3));
    r.w7 = H1(z, W(7, 0), W(7, 1));
    r.a21 = H5(z, S(2, 1, 0), S(2, 1, 1), S(2, 1, 2), S(2, 1, 3), S(2, 1, 4), S(2, 1, 5));
    r.a22 = H5(z, S(2, 2, 0), S(2, 2, 1), S(2, 2, 2), S(2, 2, 3), S(2, 2, 4), S(2, 2, 5));
    r.a23 = H4(z, S(2, 3, 0), S(2, 3, 1), S(2, 3, 2), S(2, 3, 3), S(2, 3, 4));
    r.a24 = H3(z, S(2, 4, 0), S(2, 4, 1), S(2, 4, 2), S(2, 4, 3));
    r.a25 = S(2, 5, 0);
    r.a26 = S(2, 6, 0);
    r.a31 = H3(z, S(3, 1, 0), S(3, 1, 1), S(3, 1, 2), S(3, 1, 3));
    r.a32 = H3(z, S(3, 2, 0), S(3, 2, 1), S(3, 2, 2), S(3, 2, 3));
    r.a33 = H1(z, S(3, 3, 0), S(3, 3, 1));
    r.a34 = H1(z, S(3, 4, 0), S(3, 4, 1));
    r.a41 = H1(z, S(4, 1, 0), S(4, 1, 1));
    r.a42 = S(4, 2, 0);
    r.a43 = S(4, 3, 0);
    r.a44 = S(4, 4, 0);
    r.a45 = S(4, 5, 0);
    r.a51 = S(5, 1, 0);
    r.a61 = S(6, 1, 0);
    return r;
}

/* The polynomial in y that is left at one pressure and salinity. */
typedef struct gibbs_powers {
    double g0, g1, g2, g3, g4, g5, g6, g7;
} gibbs_powers;

INLINE double gibbs_root(double salinity)
{
    return sqrt(salinity * (1.0 / STERICOL_REDUCING_SALINITY));
}

INLINE gibbs_powers powers_at_salinity(const reduced_gibbs *r, double x)
{
    const double x2 = x * x;
    gibbs_powers g;

    g.g0 = 0.0;
    g.g1 = FMA(x2, H4(x, r->a21, r->a31, r->a41, r->a51, r->a61), r->w1);
    g.g2 = FMA(x2, H2(x, r->a22, r->a32, r->a42), r->w2);
    g.g3 = FMA(x2, H2(x, r->a23, r->a33, r->a43), r->w3);
    g.g4 = FMA(x2, H2(x, r->a24, r->a34, r->a44), r->w4);
    g.g5 = FMA(x2, FMA(x2, r->a45, r->a25), r->w5);
    g.g6 = FMA(x2, r->a26, r->w6);
    g.g7 = r->w7; /* no salt in this one */
    return g;
}

/* As above at the surface, with the power y^0 that enthalpy needs. */
INLINE gibbs_powers powers_at_surface(double x)
{
    const reduced_gibbs r = reduce_gibbs(0.0);
    gibbs_powers g = powers_at_salinity(&r, x);

    g.g0 = FMA(x * x, H5(x, S(2, 0, 0), S(3, 0, 0), S(4, 0, 0), S(5, 0, 0), S(6, 0, 0), S(7, 0, 0)), W(0, 0));
    return g;
}
#undef W
#undef S

/* dg/dy = -40 K * entropy, and d2g/dy2, both without the logarithm. */
INLINE double slope(const gibbs_powers *g, double y)
{
    return H6(y, g->g1, 2.0 * g->g2, 3.0 * g->g3, 4.0 * g->g4, 5.0 * g->g5, 6.0 * g->g6, 7.0 * g->g7);
}

INLINE double curvature(const gibbs_powers *g, double y)
{
    return H5(y, 2.0 * g->g2, 6.0 * g->g3, 12.0 * g->g4, 20.0 * g->g5, 30.0 * g->g6, 42.0 * g->g7);
}

/*
 * What an adiabatic move changes y by, upwards from z: 1.1 K + 0.05 t at 10000 dbar, within 1 K for 0..42
 * g/kg and -6..40 degC.  Only where Newton's method starts.
 */
#define MOVE_CONSTANT 0.0275
#define MOVE_SLOPE 0.05

/*
 * The y where slope() is `target`.  Newton's error goes e -> e^2 / (2 T): from 1 K at 10000 dbar to 2e-3,
 * 6e-9 and 6e-20 K, so three steps are enough everywhere and no test for convergence is needed.
 */
INLINE double y_of_slope(const gibbs_powers *g, double target, double start)
{
    double y = start;

    y = y - (slope(g, y) - target) / curvature(g, y);
    y = y - (slope(g, y) - target) / curvature(g, y);
    y = y - (slope(g, y) - target) / curvature(g, y);
    return y;
}

/* T0 / 40 K: the y of absolute zero, with the sign turned. */
#define ZERO_Y (STERICOL_CELSIUS_ZERO / STERICOL_REDUCING_TEMPERATURE)

/* Enthalpy at the surface: g - (y + T0/40) dg/dy. */
INLINE double enthalpy(const gibbs_powers *g, double y)
{
    const double value = H6(y, g->g0, g->g1, g->g2, g->g3, g->g4, g->g5, g->g6);
    const double y2 = y * y, y4 = y2 * y2;

    return FMA(-(y + ZERO_Y), slope(g, y), FMA(y4 * y2, y * g->g7, value));
}

static void conservative(size_t count, const double *salinity, const double *potential, double *out)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const gibbs_powers g = powers_at_surface(gibbs_root(salinity[i]));

        out[i] = enthalpy(&g, potential[i] * (1.0 / STERICOL_REDUCING_TEMPERATURE)) / STERICOL_HEAT_CAPACITY;
    }
}

/*
 * Newton on enthalpy; its slope is -(y + T0/40) d2g/dy2.  The error goes e -> 4e-4 e^2 / K at most (heat
 * capacity of fresh water near 0 degC): from 2 K (fresh water at 40 degC) to 2e-3, 2e-9 and below rounding.
 */
static void potential_of_conservative(size_t count, const double *salinity,
                                      const double *conservative_temperature, double *out)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const gibbs_powers g = powers_at_surface(gibbs_root(salinity[i]));
        const double target = conservative_temperature[i] * STERICOL_HEAT_CAPACITY;
        double y = conservative_temperature[i] * (1.0 / STERICOL_REDUCING_TEMPERATURE);

        y = y + (enthalpy(&g, y) - target) / ((y + ZERO_Y) * curvature(&g, y));
        y = y + (enthalpy(&g, y) - target) / ((y + ZERO_Y) * curvature(&g, y));
        y = y + (enthalpy(&g, y) - target) / ((y + ZERO_Y) * curvature(&g, y));
        out[i] = y * STERICOL_REDUCING_TEMPERATURE;
    }
}

/*
 * The temperature in `to` with the entropy that `temperature` has in `here`; `pressure` is how far up that
 * is, dbar, negative for down.
 */
INLINE double same_entropy(const reduced_gibbs *here, const reduced_gibbs *to, double pressure,
                           double salinity, double temperature)
{
    const double x = gibbs_root(salinity), y = temperature * (1.0 / STERICOL_REDUCING_TEMPERATURE);
    const gibbs_powers a = powers_at_salinity(here, x), b = powers_at_salinity(to, x);
    const double z = pressure * (1.0 / STERICOL_REDUCING_PRESSURE);
    const double start = FMA(-z, FMA(MOVE_SLOPE, y, MOVE_CONSTANT), y);

    return y_of_slope(&b, slope(&a, y), start) * STERICOL_REDUCING_TEMPERATURE;
}

static void potential_row(double pressure, size_t count, const double *salinity, const double *temperature,
                          double *out)
{
    const reduced_gibbs here = reduce_gibbs(pressure), surface = reduce_gibbs(0.0);

#pragma omp simd
    for (size_t i = 0; i < count; i++)
        out[i] = same_entropy(&here, &surface, pressure, salinity[i], temperature[i]);
}

static void potential_points(const double *pressure, size_t count, const double *salinity,
                             const double *temperature, double *out)
{
    const reduced_gibbs surface = reduce_gibbs(0.0);

#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const reduced_gibbs here = reduce_gibbs(pressure[i]);

        out[i] = same_entropy(&here, &surface, pressure[i], salinity[i], temperature[i]);
    }
}

static void in_situ_row(double pressure, size_t count, const double *salinity, const double *potential,
                        double *out)
{
    const reduced_gibbs here = reduce_gibbs(pressure), surface = reduce_gibbs(0.0);

#pragma omp simd
    for (size_t i = 0; i < count; i++)
        out[i] = same_entropy(&surface, &here, -pressure, salinity[i], potential[i]);
}

static void in_situ_points(const double *pressure, size_t count, const double *salinity,
                           const double *potential, double *out)
{
    const reduced_gibbs surface = reduce_gibbs(0.0);

#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const reduced_gibbs here = reduce_gibbs(pressure[i]);

        out[i] = same_entropy(&surface, &here, -pressure[i], salinity[i], potential[i]);
    }
}

/* ---- EOS-80
 * ------------------------------------------------------------------------------------------------ */

static void eos80_row(double pressure, size_t count, const double *salinity, const double *temperature,
                      double *volume)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++)
        volume[i] = eos80_volume_potential(salinity[i], temperature[i], pressure).value;
}

static void eos80_row_derivatives(double pressure, size_t count, const double *salinity,
                                  const double *temperature, double *volume, double *volume_temperature,
                                  double *volume_salinity)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const stericol_sloped v = eos80_volume_potential(salinity[i], temperature[i], pressure);

        volume[i] = v.value;
        volume_temperature[i] = v.by_temperature;
        volume_salinity[i] = v.by_salinity;
    }
}

static void eos80_points(const double *pressure, size_t count, const double *salinity,
                         const double *temperature, double *volume)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++)
        volume[i] = eos80_volume_potential(salinity[i], temperature[i], pressure[i]).value;
}

static void eos80_points_derivatives(const double *pressure, size_t count, const double *salinity,
                                     const double *temperature, double *volume, double *volume_temperature,
                                     double *volume_salinity)
{
#pragma omp simd
    for (size_t i = 0; i < count; i++) {
        const stericol_sloped v = eos80_volume_potential(salinity[i], temperature[i], pressure[i]);

        volume[i] = v.value;
        volume_temperature[i] = v.by_temperature;
        volume_salinity[i] = v.by_salinity;
    }
}

extern const stericol_kernel STERICOL_KERNEL;
const stericol_kernel STERICOL_KERNEL = {
    .name = STERICOL_KERNEL_NAME,
    .volume_row = volume_row,
    .volume_points = volume_points,
    .volume_row_derivatives = volume_row_derivatives,
    .volume_points_derivatives = volume_points_derivatives,
    .conservative = conservative,
    .potential_of_conservative = potential_of_conservative,
    .potential_row = potential_row,
    .potential_points = potential_points,
    .in_situ_row = in_situ_row,
    .in_situ_points = in_situ_points,
    .eos80_row = eos80_row,
    .eos80_points = eos80_points,
    .eos80_row_derivatives = eos80_row_derivatives,
    .eos80_points_derivatives = eos80_points_derivatives,
};
