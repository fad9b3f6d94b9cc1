/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "water/constants.h"
#include "water/kernel.h"

/* ---- salinity
 * ------------------------------------------------------------------------------------------------ */

double stericol_reference_salinity(double practical_salinity)
{
    return practical_salinity * STERICOL_SALINITY_RATIO;
}

double stericol_absolute_salinity(double practical_salinity, double anomaly)
{
    return practical_salinity * STERICOL_SALINITY_RATIO + anomaly;
}

double stericol_practical_salinity(double absolute_salinity, double anomaly)
{
    return (absolute_salinity - anomaly) / STERICOL_SALINITY_RATIO;
}

void stericol_absolute_salinity_array(size_t count, const double *practical_salinity, const double *anomaly,
                                      double *absolute_salinity)
{
    if (anomaly != NULL)
        for (size_t i = 0; i < count; i++)
            absolute_salinity[i] = stericol_absolute_salinity(practical_salinity[i], anomaly[i]);
    else
        for (size_t i = 0; i < count; i++)
            absolute_salinity[i] = stericol_reference_salinity(practical_salinity[i]);
}

void stericol_practical_salinity_array(size_t count, const double *absolute_salinity, const double *anomaly,
                                       double *practical_salinity)
{
    if (anomaly != NULL)
        for (size_t i = 0; i < count; i++)
            practical_salinity[i] = stericol_practical_salinity(absolute_salinity[i], anomaly[i]);
    else
        for (size_t i = 0; i < count; i++)
            practical_salinity[i] = absolute_salinity[i] / STERICOL_SALINITY_RATIO;
}

/* ---- temperature scales
 * ---------------------------------------------------------------------------------------- */

double stericol_temperature_its90(double temperature_ipts68)
{
    return temperature_ipts68 / STERICOL_IPTS68_RATIO;
}

double stericol_temperature_ipts68(double temperature_its90)
{
    return temperature_its90 * STERICOL_IPTS68_RATIO;
}

void stericol_temperature_its90_array(size_t count, const double *temperature_ipts68,
                                      double *temperature_its90)
{
    for (size_t i = 0; i < count; i++)
        temperature_its90[i] = stericol_temperature_its90(temperature_ipts68[i]);
}

void stericol_temperature_ipts68_array(size_t count, const double *temperature_its90,
                                       double *temperature_ipts68)
{
    for (size_t i = 0; i < count; i++)
        temperature_ipts68[i] = stericol_temperature_ipts68(temperature_its90[i]);
}

/* ---- kinds of temperature: arrays
 * ------------------------------------------------------------------------------ */

void stericol_conservative_temperature_array(size_t count, const double *absolute_salinity,
                                             const double *potential_temperature,
                                             double *conservative_temperature)
{
    stericol_kernel_best()->conservative(count, absolute_salinity, potential_temperature,
                                         conservative_temperature);
}

void stericol_potential_temperature_of_conservative_array(size_t count, const double *absolute_salinity,
                                                          const double *conservative_temperature,
                                                          double *potential_temperature)
{
    stericol_kernel_best()->potential_of_conservative(count, absolute_salinity, conservative_temperature,
                                                      potential_temperature);
}

void stericol_potential_temperature_row(double pressure, size_t count, const double *absolute_salinity,
                                        const double *temperature, double *potential_temperature)
{
    stericol_kernel_best()->potential_row(pressure, count, absolute_salinity, temperature,
                                          potential_temperature);
}

void stericol_potential_temperature_points(const double *pressure, size_t count,
                                           const double *absolute_salinity, const double *temperature,
                                           double *potential_temperature)
{
    stericol_kernel_best()->potential_points(pressure, count, absolute_salinity, temperature,
                                             potential_temperature);
}

void stericol_in_situ_temperature_row(double pressure, size_t count, const double *absolute_salinity,
                                      const double *potential_temperature, double *temperature)
{
    stericol_kernel_best()->in_situ_row(pressure, count, absolute_salinity, potential_temperature,
                                        temperature);
}

void stericol_in_situ_temperature_points(const double *pressure, size_t count,
                                         const double *absolute_salinity, const double *potential_temperature,
                                         double *temperature)
{
    stericol_kernel_best()->in_situ_points(pressure, count, absolute_salinity, potential_temperature,
                                           temperature);
}

/* The output holds the potential temperature on the way. */
void stericol_conservative_temperature_of_in_situ_row(double pressure, size_t count,
                                                      const double *absolute_salinity,
                                                      const double *temperature,
                                                      double *conservative_temperature)
{
    const stericol_kernel *const kernel = stericol_kernel_best();

    kernel->potential_row(pressure, count, absolute_salinity, temperature, conservative_temperature);
    kernel->conservative(count, absolute_salinity, conservative_temperature, conservative_temperature);
}

void stericol_conservative_temperature_of_in_situ_points(const double *pressure, size_t count,
                                                         const double *absolute_salinity,
                                                         const double *temperature,
                                                         double *conservative_temperature)
{
    const stericol_kernel *const kernel = stericol_kernel_best();

    kernel->potential_points(pressure, count, absolute_salinity, temperature, conservative_temperature);
    kernel->conservative(count, absolute_salinity, conservative_temperature, conservative_temperature);
}

void stericol_in_situ_temperature_of_conservative_row(double pressure, size_t count,
                                                      const double *absolute_salinity,
                                                      const double *conservative_temperature,
                                                      double *temperature)
{
    const stericol_kernel *const kernel = stericol_kernel_best();

    kernel->potential_of_conservative(count, absolute_salinity, conservative_temperature, temperature);
    kernel->in_situ_row(pressure, count, absolute_salinity, temperature, temperature);
}

void stericol_in_situ_temperature_of_conservative_points(const double *pressure, size_t count,
                                                         const double *absolute_salinity,
                                                         const double *conservative_temperature,
                                                         double *temperature)
{
    const stericol_kernel *const kernel = stericol_kernel_best();

    kernel->potential_of_conservative(count, absolute_salinity, conservative_temperature, temperature);
    kernel->in_situ_points(pressure, count, absolute_salinity, temperature, temperature);
}

/* ---- kinds of temperature: one point
 * --------------------------------------------------------------------------- */

double stericol_potential_temperature(double absolute_salinity, double temperature, double pressure)
{
    double potential;

    stericol_potential_temperature_row(pressure, 1, &absolute_salinity, &temperature, &potential);
    return potential;
}

double stericol_in_situ_temperature(double absolute_salinity, double potential_temperature, double pressure)
{
    double temperature;

    stericol_in_situ_temperature_row(pressure, 1, &absolute_salinity, &potential_temperature, &temperature);
    return temperature;
}

double stericol_conservative_temperature(double absolute_salinity, double potential_temperature)
{
    double conservative;

    stericol_conservative_temperature_array(1, &absolute_salinity, &potential_temperature, &conservative);
    return conservative;
}

double stericol_conservative_temperature_of_in_situ(double absolute_salinity, double temperature,
                                                    double pressure)
{
    double conservative;

    stericol_conservative_temperature_of_in_situ_row(pressure, 1, &absolute_salinity, &temperature,
                                                     &conservative);
    return conservative;
}

double stericol_potential_temperature_of_conservative(double absolute_salinity,
                                                      double conservative_temperature)
{
    double potential;

    stericol_potential_temperature_of_conservative_array(1, &absolute_salinity, &conservative_temperature,
                                                         &potential);
    return potential;
}

double stericol_in_situ_temperature_of_conservative(double absolute_salinity, double conservative_temperature,
                                                    double pressure)
{
    double temperature;

    stericol_in_situ_temperature_of_conservative_row(pressure, 1, &absolute_salinity,
                                                     &conservative_temperature, &temperature);
    return temperature;
}
