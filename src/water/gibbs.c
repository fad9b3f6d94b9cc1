/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "water/gibbs.h"

#include "water/constants.h"
#include "water/gibbs_terms.h"

#include <math.h>
#include <stddef.h>

typedef struct water_term {
    int j, k;
    double c;
} water_term;

typedef struct saline_term {
    int i, j, k;
    double c;
} saline_term;

#define WATER_TERM(j, k, c) {j, k, c},
#define SALINE_TERM(i, j, k, c) {i, j, k, c},
#define LOGARITHM_TERM(j, c) [j] = (c),
static const water_term water_terms[] = {STERICOL_GIBBS_WATER_TERMS(WATER_TERM)};
static const saline_term saline_terms[] = {STERICOL_GIBBS_SALINE_TERMS(SALINE_TERM)};
/* Of x^2 ln x: y^0 and y^1, at any pressure. */
static const double logarithm_terms[2] = {STERICOL_GIBBS_LOGARITHM_TERMS(LOGARITHM_TERM)};

enum { POWERS = 8 };

/* u^n and its first two derivatives by u, for n < POWERS. */
typedef struct powers {
    double value[POWERS], first[POWERS], second[POWERS];
} powers;

static void fill_powers(double u, powers *p)
{
    p->value[0] = 1.0;
    p->first[0] = 0.0;
    p->second[0] = 0.0;
    for (int n = 1; n < POWERS; n++) {
        p->value[n] = p->value[n - 1] * u;
        p->first[n] = n * p->value[n - 1];
        p->second[n] = n * p->first[n - 1];
    }
}

/* From derivatives by y and z to those by K and Pa. */
static void scale(stericol_gibbs *g)
{
    const double by_t = 1.0 / STERICOL_REDUCING_TEMPERATURE, by_p = 1.0 / STERICOL_REDUCING_PRESSURE_PASCALS;

    g->g_t *= by_t;
    g->g_p *= by_p;
    g->g_st *= by_t;
    g->g_sp *= by_p;
    g->g_tt *= by_t * by_t;
    g->g_tp *= by_t * by_p;
    g->g_pp *= by_p * by_p;
}

void stericol_gibbs_water(double temperature, double pressure, stericol_gibbs *gibbs)
{
    powers y, z;
    stericol_gibbs g = {0};

    fill_powers(temperature / STERICOL_REDUCING_TEMPERATURE, &y);
    fill_powers(pressure / STERICOL_REDUCING_PRESSURE, &z);
    for (size_t n = sizeof water_terms / sizeof *water_terms; n-- > 0;) {
        const int j = water_terms[n].j, k = water_terms[n].k;
        const double c = water_terms[n].c;

        g.g += c * y.value[j] * z.value[k];
        g.g_t += c * y.first[j] * z.value[k];
        g.g_p += c * y.value[j] * z.first[k];
        g.g_tt += c * y.second[j] * z.value[k];
        g.g_tp += c * y.first[j] * z.first[k];
        g.g_pp += c * y.value[j] * z.second[k];
    }
    scale(&g);
    *gibbs = g;
}

/* The saline part without its terms in x^2 ln x. */
static void saline_without_logarithm(double salinity, double temperature, double pressure,
                                     stericol_gibbs *gibbs)
{
    powers x, y, z;
    stericol_gibbs g = {0};

    fill_powers(sqrt(salinity / STERICOL_REDUCING_SALINITY), &x);
    fill_powers(temperature / STERICOL_REDUCING_TEMPERATURE, &y);
    fill_powers(pressure / STERICOL_REDUCING_PRESSURE, &z);
    for (size_t n = sizeof saline_terms / sizeof *saline_terms; n-- > 0;) {
        const int i = saline_terms[n].i, j = saline_terms[n].j, k = saline_terms[n].k;
        const double c = saline_terms[n].c, cx = c * x.value[i];
        /* d x^i / dSA = i x^(i-2) / (2 Su): no division by x, so that salinity zero needs no care. */
        const double cs = c * i * x.value[i - 2] / (2.0 * STERICOL_REDUCING_SALINITY);

        g.g += cx * y.value[j] * z.value[k];
        g.g_s += cs * y.value[j] * z.value[k];
        g.g_t += cx * y.first[j] * z.value[k];
        g.g_p += cx * y.value[j] * z.first[k];
        g.g_st += cs * y.first[j] * z.value[k];
        g.g_sp += cs * y.value[j] * z.first[k];
        g.g_tt += cx * y.second[j] * z.value[k];
        g.g_tp += cx * y.first[j] * z.first[k];
        g.g_pp += cx * y.value[j] * z.second[k];
    }
    scale(&g);
    *gibbs = g;
}

void stericol_gibbs_saline(double absolute_salinity, double temperature, double pressure,
                           stericol_gibbs *gibbs)
{
    const double x2 = absolute_salinity / STERICOL_REDUCING_SALINITY,
                 y = temperature / STERICOL_REDUCING_TEMPERATURE;
    /* ln x = ln(x^2) / 2; x^2 ln x is 0 at x = 0, its derivative by SA, (ln x + 1/2) / Su, is -infinity. */
    const double logarithm = x2 > 0.0 ? 0.5 * log(x2) : log(x2);
    const double value = x2 > 0.0 || isnan(logarithm) ? x2 * logarithm : 0.0;
    const double by_salinity = (logarithm + 0.5) / STERICOL_REDUCING_SALINITY;
    const double weight = logarithm_terms[0] + logarithm_terms[1] * y;
    const double weight_t = logarithm_terms[1] / STERICOL_REDUCING_TEMPERATURE;

    saline_without_logarithm(absolute_salinity, temperature, pressure, gibbs);
    gibbs->g += weight * value;
    gibbs->g_s += weight * by_salinity;
    gibbs->g_t += weight_t * value;
    gibbs->g_st += weight_t * by_salinity;
}

static void add_parts(const stericol_gibbs *a, stericol_gibbs *sum)
{
    sum->g += a->g;
    sum->g_s += a->g_s;
    sum->g_t += a->g_t;
    sum->g_p += a->g_p;
    sum->g_st += a->g_st;
    sum->g_sp += a->g_sp;
    sum->g_tt += a->g_tt;
    sum->g_tp += a->g_tp;
    sum->g_pp += a->g_pp;
}

void stericol_gibbs_function(double absolute_salinity, double temperature, double pressure,
                             stericol_gibbs *gibbs)
{
    stericol_gibbs water;

    stericol_gibbs_saline(absolute_salinity, temperature, pressure, gibbs);
    stericol_gibbs_water(temperature, pressure, &water);
    add_parts(&water, gibbs);
}

double stericol_gibbs_volume(double absolute_salinity, double temperature, double pressure)
{
    double water = 0.0, saline = 0.0;
    powers x, y, z;

    fill_powers(sqrt(absolute_salinity / STERICOL_REDUCING_SALINITY), &x);
    fill_powers(temperature / STERICOL_REDUCING_TEMPERATURE, &y);
    fill_powers(pressure / STERICOL_REDUCING_PRESSURE, &z);
    for (size_t n = sizeof water_terms / sizeof *water_terms; n-- > 0;)
        water += water_terms[n].c * y.value[water_terms[n].j] * z.first[water_terms[n].k];
    for (size_t n = sizeof saline_terms / sizeof *saline_terms; n-- > 0;) {
        const saline_term *const s = &saline_terms[n];

        saline += s->c * x.value[s->i] * y.value[s->j] * z.first[s->k];
    }
    /* Summed and scaled as in stericol_gibbs_function(), so that both give the same bits. */
    return saline * (1.0 / STERICOL_REDUCING_PRESSURE_PASCALS) +
           water * (1.0 / STERICOL_REDUCING_PRESSURE_PASCALS);
}

void stericol_gibbs_volume_slopes(double absolute_salinity, double temperature, double potential_temperature,
                                  double pressure, double *volume, double *volume_temperature,
                                  double *volume_salinity)
{
    const double absolute = STERICOL_CELSIUS_ZERO + potential_temperature;
    stericol_gibbs here, surface, water;

    /*
     * Without the logarithms: they enter dv/dSA as g_S(theta, 0)/(T0 + theta) - g_ST, where they cancel,
     * since the two coefficients stand in the ratio T0/40 K (to 2e-12 J/kg), and enter nothing else here.
     */
    saline_without_logarithm(absolute_salinity, temperature, pressure, &here);
    stericol_gibbs_water(temperature, pressure, &water);
    add_parts(&water, &here);
    saline_without_logarithm(absolute_salinity, potential_temperature, 0.0, &surface);
    *volume = here.g_p;
    *volume_temperature = -here.g_tp * STERICOL_HEAT_CAPACITY / (absolute * here.g_tt);
    *volume_salinity = here.g_sp + here.g_tp * (surface.g_s / absolute - here.g_st) / here.g_tt;
}

void stericol_seawater_properties(double absolute_salinity, double temperature, double pressure,
                                  stericol_properties *properties)
{
    const double absolute = STERICOL_CELSIUS_ZERO + temperature;
    const double pascals = STERICOL_STANDARD_ATMOSPHERE + STERICOL_PASCALS_PER_DECIBAR * pressure;
    const double potential = stericol_potential_temperature(absolute_salinity, temperature, pressure);
    double v, v_t, v_s;
    stericol_gibbs g;

    stericol_gibbs_function(absolute_salinity, temperature, pressure, &g);
    stericol_gibbs_volume_slopes(absolute_salinity, temperature, potential, pressure, &v, &v_t, &v_s);
    properties->volume = g.g_p;
    properties->density = 1.0 / g.g_p;
    properties->heat_capacity = -absolute * g.g_tt;
    properties->entropy = -g.g_t;
    properties->enthalpy = g.g - absolute * g.g_t;
    properties->internal_energy = g.g - absolute * g.g_t - pascals * g.g_p;
    properties->helmholtz_energy = g.g - pascals * g.g_p;
    properties->sound_speed = g.g_p * sqrt(g.g_tt / (g.g_tp * g.g_tp - g.g_tt * g.g_pp));
    properties->thermal_expansion = v_t / v;
    properties->haline_contraction = -v_s / v;
}
