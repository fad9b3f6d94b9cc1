/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * EOS-80.  Source of all coefficients, unless another stands beside them: N. P. Fofonoff and R. C. Millard
 * (1983), Algorithms for computation of fundamental properties of seawater, UNESCO Technical Papers in Marine
 * Science 44. Pressure enters these fits in bar, where nothing else is said.
 */
#include "water/eos80.h"

#include "water/constants.h"

#include <math.h>

#define BAR_PER_DECIBAR 0.1

/* Horner's rule for a polynomial of `length` coefficients, lowest first, and its derivative. */
static double polynomial(const double *c, int length, double t)
{
    double sum = c[length - 1];

    for (int n = length - 2; n >= 0; n--)
        sum = sum * t + c[n];
    return sum;
}

static double polynomial_slope(const double *c, int length, double t)
{
    double sum = (length - 1) * c[length - 1];

    for (int n = length - 2; n >= 1; n--)
        sum = sum * t + n * c[n];
    return sum;
}

#define LENGTH(c) ((int)(sizeof(c) / sizeof *(c)))
#define VALUE(c, t) polynomial((c), LENGTH(c), (t))
#define SLOPE(c, t) polynomial_slope((c), LENGTH(c), (t))

/* Density at one atmosphere, kg/m3 (Millero and Poisson 1981): water, S, S^1.5, S^2. */
static const double density_water[] = {999.842594,  6.793952e-2,  -9.095290e-3,
                                       1.001685e-4, -1.120083e-6, 6.536332e-9};
static const double density_s[] = {8.24493e-1, -4.0899e-3, 7.6438e-5, -8.2467e-7, 5.3875e-9};
static const double density_s15[] = {-5.72466e-3, 1.0227e-4, -1.6546e-6};
#define DENSITY_S2 4.8314e-4

/* Secant bulk modulus, bar (Millero et al. 1980): K0, then A and B in K = K0 + A p + B p^2. */
static const double modulus_water[] = {19652.21, 148.4206, -2.327105, 1.360477e-2, -5.155288e-5};
static const double modulus_s[] = {54.6746, -0.603459, 1.09987e-2, -6.1670e-5};
static const double modulus_s15[] = {7.944e-2, 1.6483e-2, -5.3009e-4};
static const double modulus_a_water[] = {3.239908, 1.43713e-3, 1.16092e-4, -5.77905e-7};
static const double modulus_a_s[] = {2.2838e-3, -1.0981e-5, -1.6078e-6};
#define MODULUS_A_S15 1.91075e-4
static const double modulus_b_water[] = {8.50935e-5, -6.12293e-6, 5.2787e-8};
static const double modulus_b_s[] = {-9.9348e-7, 2.0816e-8, 9.1697e-10};

static stericol_sloped surface_density(double s, double t)
{
    const double root = sqrt(s), d1 = VALUE(density_s, t), d15 = VALUE(density_s15, t);
    stericol_sloped d;

    d.value = VALUE(density_water, t) + s * (d1 + root * d15 + s * DENSITY_S2);
    d.by_temperature = SLOPE(density_water, t) + s * (SLOPE(density_s, t) + root * SLOPE(density_s15, t));
    d.by_salinity = d1 + 1.5 * root * d15 + 2.0 * s * DENSITY_S2;
    return d;
}

static stericol_sloped bulk_modulus(double s, double t, double bar)
{
    const double root = sqrt(s), k1 = VALUE(modulus_s, t), k15 = VALUE(modulus_s15, t);
    const double a1 = VALUE(modulus_a_s, t), b1 = VALUE(modulus_b_s, t);
    const double a = VALUE(modulus_a_water, t) + s * (a1 + root * MODULUS_A_S15);
    const double a_t = SLOPE(modulus_a_water, t) + s * SLOPE(modulus_a_s, t);
    const double b = VALUE(modulus_b_water, t) + s * b1;
    const double b_t = SLOPE(modulus_b_water, t) + s * SLOPE(modulus_b_s, t);
    stericol_sloped k;

    k.value = VALUE(modulus_water, t) + s * (k1 + root * k15) + bar * (a + bar * b);
    k.by_temperature = SLOPE(modulus_water, t) + s * (SLOPE(modulus_s, t) + root * SLOPE(modulus_s15, t)) +
                       bar * (a_t + bar * b_t);
    k.by_salinity = k1 + 1.5 * root * k15 + bar * (a1 + 1.5 * root * MODULUS_A_S15 + bar * b1);
    return k;
}

stericol_sloped stericol_eos80_volume_in_situ(double practical_salinity, double temperature, double pressure)
{
    const double bar = pressure * BAR_PER_DECIBAR;
    const stericol_sloped d = surface_density(practical_salinity, temperature);
    const stericol_sloped k = bulk_modulus(practical_salinity, temperature, bar);
    const double by_modulus = bar / (k.value * k.value * d.value);
    stericol_sloped v;

    v.value = (1.0 - bar / k.value) / d.value;
    v.by_temperature = by_modulus * k.by_temperature - v.value * d.by_temperature / d.value;
    v.by_salinity = by_modulus * k.by_salinity - v.value * d.by_salinity / d.value;
    return v;
}

double stericol_eos80_density(double practical_salinity, double temperature, double pressure)
{
    return 1.0 / stericol_eos80_volume_in_situ(practical_salinity, temperature, pressure).value;
}

double stericol_eos80_bulk_modulus(double practical_salinity, double temperature, double pressure)
{
    return bulk_modulus(practical_salinity, temperature, pressure * BAR_PER_DECIBAR).value;
}

double stericol_eos80_volume_anomaly(double practical_salinity, double temperature, double pressure)
{
    return stericol_eos80_volume_in_situ(practical_salinity, temperature, pressure).value -
           stericol_eos80_volume_in_situ(35.0, 0.0, pressure).value;
}

/* Heat capacity, J/(kg K) (Millero, Perron and Desnoyers 1973): at one atmosphere, S and S^1.5. */
static const double capacity_water[] = {4217.4, -3.720283, 0.1412855, -2.654387e-3, 2.093236e-5};
static const double capacity_s[] = {-7.643575, 0.1072763, -1.38385e-3};
static const double capacity_s15[] = {0.1770383, -4.07718e-3, 5.148e-5};
/* Its change with p, p^2, p^3: water, S, S^1.5. */
static const double capacity_p_water[] = {-0.49592, 1.45747e-2, -3.13885e-4, 2.0357e-6, 1.7168e-8};
static const double capacity_pp_water[] = {2.4931e-4, -1.08645e-5, 2.87533e-7, -4.0027e-9, 2.2956e-11};
static const double capacity_ppp_water[] = {-5.422e-8, 2.6380e-9, -6.5637e-11, 6.136e-13};
static const double capacity_p_s[] = {4.9247e-3, -1.28315e-4, 9.802e-7, 2.5941e-8, -2.9179e-10};
static const double capacity_p_s15[] = {-1.2331e-4, -1.517e-6, 3.122e-8};
static const double capacity_pp_s[] = {-2.9558e-6, 1.17054e-7, -2.3905e-9, 1.8448e-11};
#define CAPACITY_PP_S15 9.971e-8
static const double capacity_ppp_s[] = {5.540e-10, -1.7682e-11, 3.513e-13};
#define CAPACITY_PPP_S15_T (-1.4300e-12)

double stericol_eos80_heat_capacity(double practical_salinity, double temperature, double pressure)
{
    const double s = practical_salinity, t = temperature, bar = pressure * BAR_PER_DECIBAR, root = sqrt(s);
    const double surface =
        VALUE(capacity_water, t) + s * (VALUE(capacity_s, t) + root * VALUE(capacity_s15, t));
    const double p1 =
        VALUE(capacity_p_water, t) + s * (VALUE(capacity_p_s, t) + root * VALUE(capacity_p_s15, t));
    const double p2 = VALUE(capacity_pp_water, t) + s * (VALUE(capacity_pp_s, t) + root * CAPACITY_PP_S15);
    const double p3 =
        VALUE(capacity_ppp_water, t) + s * (VALUE(capacity_ppp_s, t) + root * t * CAPACITY_PPP_S15_T);

    return surface + bar * (p1 + bar * (p2 + bar * p3));
}

void stericol_eos80_heat_capacity_row(double pressure, size_t count, const double *practical_salinity,
                                      const double *temperature, double *heat_capacity)
{
    for (size_t i = 0; i < count; i++)
        heat_capacity[i] = stericol_eos80_heat_capacity(practical_salinity[i], temperature[i], pressure);
}

/* Adiabatic lapse rate, K/dbar, pressure in dbar (Bryden 1973): 1, S - 35, p, p (S - 35), p^2. */
static const double lapse_water[] = {3.5803e-5, 8.5258e-6, -6.836e-8, 6.6228e-10};
static const double lapse_s[] = {1.8932e-6, -4.2393e-8};
static const double lapse_p[] = {1.8741e-8, -6.7795e-10, 8.733e-12, -5.4481e-14};
static const double lapse_ps[] = {-1.1351e-10, 2.7759e-12};
static const double lapse_pp[] = {-4.6206e-13, 1.8676e-14, -2.1687e-16};

static stericol_sloped lapse_rate(double s, double t, double p)
{
    const double ds = s - 35.0, g_s = VALUE(lapse_s, t) + p * VALUE(lapse_ps, t);
    stericol_sloped g;

    g.value = VALUE(lapse_water, t) + ds * g_s + p * (VALUE(lapse_p, t) + p * VALUE(lapse_pp, t));
    g.by_temperature = SLOPE(lapse_water, t) + ds * (SLOPE(lapse_s, t) + p * SLOPE(lapse_ps, t)) +
                       p * (SLOPE(lapse_p, t) + p * SLOPE(lapse_pp, t));
    g.by_salinity = g_s;
    return g;
}

double stericol_eos80_lapse_rate(double practical_salinity, double temperature, double pressure)
{
    return lapse_rate(practical_salinity, temperature, pressure).value;
}

/* k = h * lapse rate at (t, p), with its derivatives by the starting temperature and by salinity. */
static stericol_sloped stage(double s, const stericol_sloped *t, double p, double h)
{
    const stericol_sloped g = lapse_rate(s, t->value, p);

    return (stericol_sloped){h * g.value, h * g.by_temperature * t->by_temperature,
                             h * (g.by_salinity + g.by_temperature * t->by_salinity)};
}

/* a += weight * b. */
static void add(stericol_sloped *a, double weight, const stericol_sloped *b)
{
    a->value += weight * b->value;
    a->by_temperature += weight * b->by_temperature;
    a->by_salinity += weight * b->by_salinity;
}

/* weight * a + other * b. */
static stericol_sloped combine(double weight, const stericol_sloped *a, double other,
                               const stericol_sloped *b)
{
    stericol_sloped sum = {0};

    add(&sum, weight, a);
    add(&sum, other, b);
    return sum;
}

/*
 * The temperature after an adiabatic move from p to `target`: one step of Gill's form of the fourth-order
 * Runge-Kutta method, with the constants as UNESCO 44 prints them (1 - sqrt(1/2) and so on, to nine digits).
 * The derivatives are those of the step itself.
 */
static stericol_sloped move_adiabatically(double s, double temperature, double p, double target)
{
    const double h = target - p, middle = p + 0.5 * h;
    stericol_sloped t = {temperature, 1.0, 0.0}, k, q, change;

    k = stage(s, &t, p, h);
    add(&t, 0.5, &k);
    q = k;
    k = stage(s, &t, middle, h);
    change = combine(0.29289322, &k, -0.29289322, &q);
    add(&t, 1.0, &change);
    q = combine(0.58578644, &k, 0.121320344, &q);
    k = stage(s, &t, middle, h);
    change = combine(1.707106781, &k, -1.707106781, &q);
    add(&t, 1.0, &change);
    q = combine(3.414213562, &k, -4.121320344, &q);
    k = stage(s, &t, target, h);
    change = combine(1.0 / 6.0, &k, -1.0 / 3.0, &q);
    add(&t, 1.0, &change);
    return t;
}

double stericol_eos80_potential_temperature(double practical_salinity, double temperature, double pressure,
                                            double reference_pressure)
{
    return move_adiabatically(practical_salinity, temperature, pressure, reference_pressure).value;
}

/*
 * In situ temperature of a potential temperature and its derivatives.  The step downwards is off by what the
 * method's own error is (1e-4 K at most); two steps of Newton on the step upwards make it the exact inverse.
 */
static stericol_sloped in_situ(double s, double potential, double p)
{
    double t = move_adiabatically(s, potential, 0.0, p).value;
    stericol_sloped up;

    for (int n = 0; n < 2; n++) {
        up = move_adiabatically(s, t, p, 0.0);
        t -= (up.value - potential) / up.by_temperature;
    }
    return (stericol_sloped){t, 1.0 / up.by_temperature, -up.by_salinity / up.by_temperature};
}

double stericol_eos80_in_situ_temperature(double practical_salinity, double potential_temperature,
                                          double pressure)
{
    return in_situ(practical_salinity, potential_temperature, pressure).value;
}

void stericol_eos80_potential_temperature_row(double pressure, size_t count, const double *practical_salinity,
                                              const double *temperature, double *potential_temperature)
{
    for (size_t i = 0; i < count; i++)
        potential_temperature[i] =
            stericol_eos80_potential_temperature(practical_salinity[i], temperature[i], pressure, 0.0);
}

void stericol_eos80_in_situ_temperature_row(double pressure, size_t count, const double *practical_salinity,
                                            const double *potential_temperature, double *temperature)
{
    for (size_t i = 0; i < count; i++)
        temperature[i] = in_situ(practical_salinity[i], potential_temperature[i], pressure).value;
}

void stericol_eos80_potential_temperature_points(const double *pressure, size_t count,
                                                 const double *practical_salinity, const double *temperature,
                                                 double *potential_temperature)
{
    for (size_t i = 0; i < count; i++)
        potential_temperature[i] =
            stericol_eos80_potential_temperature(practical_salinity[i], temperature[i], pressure[i], 0.0);
}

void stericol_eos80_in_situ_temperature_points(const double *pressure, size_t count,
                                               const double *practical_salinity,
                                               const double *potential_temperature, double *temperature)
{
    for (size_t i = 0; i < count; i++)
        temperature[i] = in_situ(practical_salinity[i], potential_temperature[i], pressure[i]).value;
}

stericol_sloped stericol_eos80_volume_potential(double practical_salinity, double potential_temperature,
                                                double pressure)
{
    const stericol_sloped t = in_situ(practical_salinity, potential_temperature, pressure);
    stericol_sloped v = stericol_eos80_volume_in_situ(practical_salinity, t.value, pressure);

    v.by_salinity += v.by_temperature * t.by_salinity;
    v.by_temperature *= t.by_temperature;
    return v;
}

double stericol_eos80_thermal_expansion(double practical_salinity, double potential_temperature,
                                        double pressure)
{
    const stericol_sloped v =
        stericol_eos80_volume_potential(practical_salinity, potential_temperature, pressure);

    return v.by_temperature / v.value;
}

double stericol_eos80_haline_contraction(double practical_salinity, double potential_temperature,
                                         double pressure)
{
    const stericol_sloped v =
        stericol_eos80_volume_potential(practical_salinity, potential_temperature, pressure);

    return -v.by_salinity / v.value;
}

double stericol_eos80_depth(double pressure, double latitude)
{
    static const double geopotential[] = {0.0, 9.72659, -2.2512e-5, 2.279e-10, -1.82e-15};
    const double sine = sin(latitude * (3.14159265358979323846 / 180.0)), x = sine * sine;
    /* UNESCO 44 has its own gravity, with half of its change down to the depth. */
    const double gravity = 9.780318 * (1.0 + (5.2788e-3 + 2.36e-5 * x) * x) + 1.092e-6 * pressure;

    return VALUE(geopotential, pressure) / gravity;
}
