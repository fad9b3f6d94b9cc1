/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The equations of state behind one interface. */
#include "water/constants.h"
#include "water/gibbs.h"
#include "water/kernel.h"

#include <assert.h>
#include <math.h>

/*
 * The pressures of a call: one for all (step 0) or one a point (step 1), so that the slower equations need
 * one loop for both.
 */
typedef struct pressures {
    const double *first;
    size_t step;
} pressures;

/* Points that the Gibbs function takes at a time: its temperatures stay on the stack. */
enum { BLOCK = 128 };

/* Potential and in situ temperature of a block of points with conservative temperature. */
static void block_temperatures(pressures p, size_t start, size_t count, const double *salinity,
                               const double *conservative, double *potential, double *in_situ)
{
    const stericol_kernel *const kernel = stericol_kernel_best();

    kernel->potential_of_conservative(count, salinity + start, conservative + start, potential);
    if (p.step == 0)
        kernel->in_situ_row(*p.first, count, salinity + start, potential, in_situ);
    else
        kernel->in_situ_points(p.first + start, count, salinity + start, potential, in_situ);
}

static void gibbs_volume(pressures p, size_t count, const double *salinity, const double *temperature,
                         double *volume, double *volume_temperature, double *volume_salinity)
{
    double potential[BLOCK], in_situ[BLOCK];

    for (size_t start = 0; start < count; start += BLOCK) {
        const size_t length = count - start < BLOCK ? count - start : BLOCK;

        block_temperatures(p, start, length, salinity, temperature, potential, in_situ);
        for (size_t n = 0; n < length; n++) {
            const size_t i = start + n;
            const double pressure = p.first[i * p.step];

            if (volume_temperature == NULL)
                volume[i] = stericol_gibbs_volume(salinity[i], in_situ[n], pressure);
            else
                stericol_gibbs_volume_slopes(salinity[i], in_situ[n], potential[n], pressure, &volume[i],
                                             &volume_temperature[i], &volume_salinity[i]);
        }
    }
}

static void eos80_volume(pressures p, size_t count, const double *salinity, const double *temperature,
                         double *volume, double *volume_temperature, double *volume_salinity)
{
    const stericol_kernel *const kernel = stericol_kernel_best();

    if (volume_temperature == NULL && p.step == 0)
        kernel->eos80_row(*p.first, count, salinity, temperature, volume);
    else if (volume_temperature == NULL)
        kernel->eos80_points(p.first, count, salinity, temperature, volume);
    else if (p.step == 0)
        kernel->eos80_row_derivatives(*p.first, count, salinity, temperature, volume, volume_temperature,
                                      volume_salinity);
    else
        kernel->eos80_points_derivatives(p.first, count, salinity, temperature, volume, volume_temperature,
                                         volume_salinity);
}

/* The temperature and the salinity at which the linear equation has its density. */
#define LINEAR_TEMPERATURE 10.0
#define LINEAR_SALINITY 35.0

static void linear_volume(const stericol_water *water, pressures p, size_t count, const double *salinity,
                          const double *temperature, double *volume, double *volume_temperature,
                          double *volume_salinity)
{
    const double reference = 1.0 / water->density;

    for (size_t i = 0; i < count; i++) {
        /* Pressure has no influence, but a missing one makes the point missing: its difference with itself.
         */
        const double nothing = (p.first[i * p.step] - p.first[i * p.step]) * 0.0;
        const double s = salinity[i], t = temperature[i];
        const double missing = nothing + (s + t) * 0.0;

        volume[i] = reference * (1.0 + water->expansion * (t - LINEAR_TEMPERATURE) -
                                 water->contraction * (s - LINEAR_SALINITY)) +
                    nothing;
        if (volume_temperature != NULL) {
            volume_temperature[i] = reference * water->expansion + missing;
            volume_salinity[i] = -reference * water->contraction + missing;
        }
    }
}

/* The equations other than the polynomial. */
static void other_volume(const stericol_water *water, pressures p, size_t count, const double *salinity,
                         const double *temperature, double *volume, double *volume_temperature,
                         double *volume_salinity)
{
    switch (water->equation) {
    case STERICOL_EQUATION_GIBBS:
        gibbs_volume(p, count, salinity, temperature, volume, volume_temperature, volume_salinity);
        break;
    case STERICOL_EQUATION_EOS80:
        eos80_volume(p, count, salinity, temperature, volume, volume_temperature, volume_salinity);
        break;
    case STERICOL_EQUATION_LINEAR:
        linear_volume(water, p, count, salinity, temperature, volume, volume_temperature, volume_salinity);
        break;
    case STERICOL_EQUATION_TEOS10:
    default:
        assert(false && "an equation of state that is none");
    }
}

void stericol_volume_row(const stericol_water *water, double pressure, size_t count, const double *salinity,
                         const double *temperature, double *volume)
{
    if (water->equation == STERICOL_EQUATION_TEOS10)
        stericol_kernel_best()->volume_row(pressure, count, salinity, temperature, volume);
    else
        other_volume(water, (pressures){&pressure, 0}, count, salinity, temperature, volume, NULL, NULL);
}

void stericol_volume_points(const stericol_water *water, const double *pressure, size_t count,
                            const double *salinity, const double *temperature, double *volume)
{
    if (water->equation == STERICOL_EQUATION_TEOS10)
        stericol_kernel_best()->volume_points(pressure, count, salinity, temperature, volume);
    else
        other_volume(water, (pressures){pressure, 1}, count, salinity, temperature, volume, NULL, NULL);
}

void stericol_volume_row_derivatives(const stericol_water *water, double pressure, size_t count,
                                     const double *salinity, const double *temperature, double *volume,
                                     double *volume_temperature, double *volume_salinity)
{
    if (water->equation == STERICOL_EQUATION_TEOS10)
        stericol_kernel_best()->volume_row_derivatives(pressure, count, salinity, temperature, volume,
                                                       volume_temperature, volume_salinity);
    else
        other_volume(water, (pressures){&pressure, 0}, count, salinity, temperature, volume,
                     volume_temperature, volume_salinity);
}

void stericol_volume_points_derivatives(const stericol_water *water, const double *pressure, size_t count,
                                        const double *salinity, const double *temperature, double *volume,
                                        double *volume_temperature, double *volume_salinity)
{
    if (water->equation == STERICOL_EQUATION_TEOS10)
        stericol_kernel_best()->volume_points_derivatives(pressure, count, salinity, temperature, volume,
                                                          volume_temperature, volume_salinity);
    else
        other_volume(water, (pressures){pressure, 1}, count, salinity, temperature, volume,
                     volume_temperature, volume_salinity);
}

bool stericol_in_valid_range(const stericol_water *water, double salinity, double temperature,
                             double pressure)
{
    static const struct {
        double coldest, warmest, deepest;
    } range[] = {
        [STERICOL_EQUATION_TEOS10] = {-3.0, 40.0, 8000.0},
        [STERICOL_EQUATION_GIBBS] = {-6.0, 40.0, 10000.0},
        [STERICOL_EQUATION_EOS80] = {-2.0, 40.0, 10000.0},
        [STERICOL_EQUATION_LINEAR] = {-3.0, 40.0, 8000.0},
    };
    const double saltiest = 42.0;

    /* Written so that a NaN fails. */
    return salinity >= 0.0 && salinity <= saltiest && temperature >= range[water->equation].coldest &&
           temperature <= range[water->equation].warmest && pressure >= 0.0 &&
           pressure <= range[water->equation].deepest;
}

stericol_volume_and_slopes stericol_specific_volume_and_slopes(double absolute_salinity,
                                                               double conservative_temperature,
                                                               double pressure)
{
    double v, v_t, v_s;

    stericol_kernel_best()->volume_row_derivatives(pressure, 1, &absolute_salinity, &conservative_temperature,
                                                   &v, &v_t, &v_s);
    return (stericol_volume_and_slopes){v, v_t / v, -v_s / v};
}

double stericol_specific_volume(double absolute_salinity, double conservative_temperature, double pressure)
{
    double v;

    stericol_kernel_best()->volume_row(pressure, 1, &absolute_salinity, &conservative_temperature, &v);
    return v;
}

double stericol_thermal_expansion(double absolute_salinity, double conservative_temperature, double pressure)
{
    return stericol_specific_volume_and_slopes(absolute_salinity, conservative_temperature, pressure)
        .thermal_expansion;
}

double stericol_haline_contraction(double absolute_salinity, double conservative_temperature, double pressure)
{
    return stericol_specific_volume_and_slopes(absolute_salinity, conservative_temperature, pressure)
        .haline_contraction;
}
