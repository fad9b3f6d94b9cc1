/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The formulas of EOS-80 as inline functions, for the single points in eos80.c and for the array kernels:
 * plain products and sums, never fused, so that every path gives the same bits.
 *
 * Source of all coefficients, unless another stands beside them: N. P. Fofonoff and R. C. Millard (1983),
 * Algorithms for computation of fundamental properties of seawater, UNESCO Technical Papers in Marine
 * Science 44.  Pressure enters these fits in bar, where nothing else is said.
 */
#ifndef STERICOL_WATER_EOS80_BODY_H
#define STERICOL_WATER_EOS80_BODY_H

#include "water/eos80.h"

#include <math.h>

/* Every helper must vanish into the loops, or the loops would not become vectors. */
#define EOS80_INLINE static inline __attribute__((always_inline))

#define EOS80_BAR_PER_DECIBAR 0.1

/* Horner's rule for a polynomial of `length` <= 6 coefficients, lowest first, and its derivative.  Written
   out: `length` is known to the compiler, and a loop would keep the callers from becoming vectors. */
EOS80_INLINE double eos80_polynomial(const double *c, int length, double t)
{
    double sum = c[length - 1];

    if (length > 5)
        sum = sum * t + c[4];
    if (length > 4)
        sum = sum * t + c[3];
    if (length > 3)
        sum = sum * t + c[2];
    if (length > 2)
        sum = sum * t + c[1];
    return sum * t + c[0];
}

EOS80_INLINE double eos80_polynomial_slope(const double *c, int length, double t)
{
    double sum = (length - 1) * c[length - 1];

    if (length > 5)
        sum = sum * t + 4.0 * c[4];
    if (length > 4)
        sum = sum * t + 3.0 * c[3];
    if (length > 3)
        sum = sum * t + 2.0 * c[2];
    if (length > 2)
        sum = sum * t + c[1];
    return sum;
}

#define EOS80_LENGTH(c) ((int)(sizeof(c) / sizeof *(c)))
#define EOS80_VALUE(c, t) eos80_polynomial((c), EOS80_LENGTH(c), (t))
#define EOS80_SLOPE(c, t) eos80_polynomial_slope((c), EOS80_LENGTH(c), (t))

/* Density at one atmosphere, kg/m3 (Millero and Poisson 1981): water, S, S^1.5, S^2. */
static const double eos80_density_water[] = {999.842594,  6.793952e-2,  -9.095290e-3,
                                             1.001685e-4, -1.120083e-6, 6.536332e-9};
static const double eos80_density_s[] = {8.24493e-1, -4.0899e-3, 7.6438e-5, -8.2467e-7, 5.3875e-9};
static const double eos80_density_s15[] = {-5.72466e-3, 1.0227e-4, -1.6546e-6};
#define EOS80_DENSITY_S2 4.8314e-4

/* Secant bulk modulus, bar (Millero et al. 1980): K0, then A and B in K = K0 + A p + B p^2. */
static const double eos80_modulus_water[] = {19652.21, 148.4206, -2.327105, 1.360477e-2, -5.155288e-5};
static const double eos80_modulus_s[] = {54.6746, -0.603459, 1.09987e-2, -6.1670e-5};
static const double eos80_modulus_s15[] = {7.944e-2, 1.6483e-2, -5.3009e-4};
static const double eos80_modulus_a_water[] = {3.239908, 1.43713e-3, 1.16092e-4, -5.77905e-7};
static const double eos80_modulus_a_s[] = {2.2838e-3, -1.0981e-5, -1.6078e-6};
#define EOS80_MODULUS_A_S15 1.91075e-4
static const double eos80_modulus_b_water[] = {8.50935e-5, -6.12293e-6, 5.2787e-8};
static const double eos80_modulus_b_s[] = {-9.9348e-7, 2.0816e-8, 9.1697e-10};

EOS80_INLINE stericol_sloped eos80_surface_density(double s, double t)
{
    const double root = sqrt(s), d1 = EOS80_VALUE(eos80_density_s, t),
                 d15 = EOS80_VALUE(eos80_density_s15, t);
    stericol_sloped d;

    d.value = EOS80_VALUE(eos80_density_water, t) + s * (d1 + root * d15 + s * EOS80_DENSITY_S2);
    d.by_temperature = EOS80_SLOPE(eos80_density_water, t) +
                       s * (EOS80_SLOPE(eos80_density_s, t) + root * EOS80_SLOPE(eos80_density_s15, t));
    d.by_salinity = d1 + 1.5 * root * d15 + 2.0 * s * EOS80_DENSITY_S2;
    return d;
}

EOS80_INLINE stericol_sloped eos80_bulk_modulus(double s, double t, double bar)
{
    const double root = sqrt(s), k1 = EOS80_VALUE(eos80_modulus_s, t),
                 k15 = EOS80_VALUE(eos80_modulus_s15, t);
    const double a1 = EOS80_VALUE(eos80_modulus_a_s, t), b1 = EOS80_VALUE(eos80_modulus_b_s, t);
    const double a = EOS80_VALUE(eos80_modulus_a_water, t) + s * (a1 + root * EOS80_MODULUS_A_S15);
    const double a_t = EOS80_SLOPE(eos80_modulus_a_water, t) + s * EOS80_SLOPE(eos80_modulus_a_s, t);
    const double b = EOS80_VALUE(eos80_modulus_b_water, t) + s * b1;
    const double b_t = EOS80_SLOPE(eos80_modulus_b_water, t) + s * EOS80_SLOPE(eos80_modulus_b_s, t);
    stericol_sloped k;

    k.value = EOS80_VALUE(eos80_modulus_water, t) + s * (k1 + root * k15) + bar * (a + bar * b);
    k.by_temperature = EOS80_SLOPE(eos80_modulus_water, t) +
                       s * (EOS80_SLOPE(eos80_modulus_s, t) + root * EOS80_SLOPE(eos80_modulus_s15, t)) +
                       bar * (a_t + bar * b_t);
    k.by_salinity = k1 + 1.5 * root * k15 + bar * (a1 + 1.5 * root * EOS80_MODULUS_A_S15 + bar * b1);
    return k;
}

EOS80_INLINE stericol_sloped eos80_volume_in_situ(double practical_salinity, double temperature,
                                                  double pressure)
{
    const double bar = pressure * EOS80_BAR_PER_DECIBAR;
    const stericol_sloped d = eos80_surface_density(practical_salinity, temperature);
    const stericol_sloped k = eos80_bulk_modulus(practical_salinity, temperature, bar);
    const double by_modulus = bar / (k.value * k.value * d.value);
    stericol_sloped v;

    v.value = (1.0 - bar / k.value) / d.value;
    v.by_temperature = by_modulus * k.by_temperature - v.value * d.by_temperature / d.value;
    v.by_salinity = by_modulus * k.by_salinity - v.value * d.by_salinity / d.value;
    return v;
}

/* Adiabatic lapse rate, K/dbar, pressure in dbar (Bryden 1973): 1, S - 35, p, p (S - 35), p^2. */
static const double eos80_lapse_water[] = {3.5803e-5, 8.5258e-6, -6.836e-8, 6.6228e-10};
static const double eos80_lapse_s[] = {1.8932e-6, -4.2393e-8};
static const double eos80_lapse_p[] = {1.8741e-8, -6.7795e-10, 8.733e-12, -5.4481e-14};
static const double eos80_lapse_ps[] = {-1.1351e-10, 2.7759e-12};
static const double eos80_lapse_pp[] = {-4.6206e-13, 1.8676e-14, -2.1687e-16};

EOS80_INLINE stericol_sloped eos80_lapse_rate(double s, double t, double p)
{
    const double ds = s - 35.0, g_s = EOS80_VALUE(eos80_lapse_s, t) + p * EOS80_VALUE(eos80_lapse_ps, t);
    stericol_sloped g;

    g.value = EOS80_VALUE(eos80_lapse_water, t) + ds * g_s +
              p * (EOS80_VALUE(eos80_lapse_p, t) + p * EOS80_VALUE(eos80_lapse_pp, t));
    g.by_temperature = EOS80_SLOPE(eos80_lapse_water, t) +
                       ds * (EOS80_SLOPE(eos80_lapse_s, t) + p * EOS80_SLOPE(eos80_lapse_ps, t)) +
                       p * (EOS80_SLOPE(eos80_lapse_p, t) + p * EOS80_SLOPE(eos80_lapse_pp, t));
    g.by_salinity = g_s;
    return g;
}

/* k = h * lapse rate at (t, p), with its derivatives by the starting temperature and by salinity. */
EOS80_INLINE stericol_sloped eos80_stage(double s, const stericol_sloped *t, double p, double h)
{
    const stericol_sloped g = eos80_lapse_rate(s, t->value, p);

    return (stericol_sloped){h * g.value, h * g.by_temperature * t->by_temperature,
                             h * (g.by_salinity + g.by_temperature * t->by_salinity)};
}

/* a += weight * b. */
EOS80_INLINE void eos80_add(stericol_sloped *a, double weight, const stericol_sloped *b)
{
    a->value += weight * b->value;
    a->by_temperature += weight * b->by_temperature;
    a->by_salinity += weight * b->by_salinity;
}

/* weight * a + other * b. */
EOS80_INLINE stericol_sloped eos80_combine(double weight, const stericol_sloped *a, double other,
                                           const stericol_sloped *b)
{
    stericol_sloped sum = {0};

    eos80_add(&sum, weight, a);
    eos80_add(&sum, other, b);
    return sum;
}

/*
 * The temperature after an adiabatic move from p to `target`: one step of Gill's form of the fourth-order
 * Runge-Kutta method, with the constants as UNESCO 44 prints them (1 - sqrt(1/2) and so on, to nine digits).
 * The derivatives are those of the step itself.
 */
EOS80_INLINE stericol_sloped eos80_move_adiabatically(double s, double temperature, double p, double target)
{
    const double h = target - p, middle = p + 0.5 * h;
    stericol_sloped t = {temperature, 1.0, 0.0}, k, q, change;

    k = eos80_stage(s, &t, p, h);
    eos80_add(&t, 0.5, &k);
    q = k;
    k = eos80_stage(s, &t, middle, h);
    change = eos80_combine(0.29289322, &k, -0.29289322, &q);
    eos80_add(&t, 1.0, &change);
    q = eos80_combine(0.58578644, &k, 0.121320344, &q);
    k = eos80_stage(s, &t, middle, h);
    change = eos80_combine(1.707106781, &k, -1.707106781, &q);
    eos80_add(&t, 1.0, &change);
    q = eos80_combine(3.414213562, &k, -4.121320344, &q);
    k = eos80_stage(s, &t, target, h);
    change = eos80_combine(1.0 / 6.0, &k, -1.0 / 3.0, &q);
    eos80_add(&t, 1.0, &change);
    return t;
}

/*
 * In situ temperature of a potential temperature and its derivatives.  The step downwards is off by what the
 * method's own error is (1e-4 K at most); two steps of Newton on the step upwards make it the exact inverse.
 */
EOS80_INLINE stericol_sloped eos80_in_situ(double s, double potential, double p)
{
    double t = eos80_move_adiabatically(s, potential, 0.0, p).value;
    stericol_sloped up;

    up = eos80_move_adiabatically(s, t, p, 0.0);
    t -= (up.value - potential) / up.by_temperature;
    up = eos80_move_adiabatically(s, t, p, 0.0);
    t -= (up.value - potential) / up.by_temperature;
    return (stericol_sloped){t, 1.0 / up.by_temperature, -up.by_salinity / up.by_temperature};
}

EOS80_INLINE stericol_sloped eos80_volume_potential(double practical_salinity, double potential_temperature,
                                                    double pressure)
{
    const stericol_sloped t = eos80_in_situ(practical_salinity, potential_temperature, pressure);
    stericol_sloped v = eos80_volume_in_situ(practical_salinity, t.value, pressure);

    v.by_salinity += v.by_temperature * t.by_salinity;
    v.by_temperature *= t.by_temperature;
    return v;
}

#endif
