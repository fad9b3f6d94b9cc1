/* SPDX-License-Identifier: GPL-3.0-or-later */
/* EOS-80, point by point; source as in eos80_body.h. */
#include "water/eos80_body.h"

#include "water/constants.h"

stericol_sloped stericol_eos80_volume_in_situ(double practical_salinity, double temperature, double pressure)
{
    return eos80_volume_in_situ(practical_salinity, temperature, pressure);
}

double stericol_eos80_density(double practical_salinity, double temperature, double pressure)
{
    return 1.0 / stericol_eos80_volume_in_situ(practical_salinity, temperature, pressure).value;
}

double stericol_eos80_bulk_modulus(double practical_salinity, double temperature, double pressure)
{
    return eos80_bulk_modulus(practical_salinity, temperature, pressure * EOS80_BAR_PER_DECIBAR).value;
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
    const double s = practical_salinity, t = temperature, bar = pressure * EOS80_BAR_PER_DECIBAR,
                 root = sqrt(s);
    const double surface = EOS80_VALUE(capacity_water, t) +
                           s * (EOS80_VALUE(capacity_s, t) + root * EOS80_VALUE(capacity_s15, t));
    const double p1 = EOS80_VALUE(capacity_p_water, t) +
                      s * (EOS80_VALUE(capacity_p_s, t) + root * EOS80_VALUE(capacity_p_s15, t));
    const double p2 =
        EOS80_VALUE(capacity_pp_water, t) + s * (EOS80_VALUE(capacity_pp_s, t) + root * CAPACITY_PP_S15);
    const double p3 = EOS80_VALUE(capacity_ppp_water, t) +
                      s * (EOS80_VALUE(capacity_ppp_s, t) + root * t * CAPACITY_PPP_S15_T);

    return surface + bar * (p1 + bar * (p2 + bar * p3));
}

void stericol_eos80_heat_capacity_row(double pressure, size_t count, const double *practical_salinity,
                                      const double *temperature, double *heat_capacity)
{
    for (size_t i = 0; i < count; i++)
        heat_capacity[i] = stericol_eos80_heat_capacity(practical_salinity[i], temperature[i], pressure);
}

double stericol_eos80_lapse_rate(double practical_salinity, double temperature, double pressure)
{
    return eos80_lapse_rate(practical_salinity, temperature, pressure).value;
}

double stericol_eos80_potential_temperature(double practical_salinity, double temperature, double pressure,
                                            double reference_pressure)
{
    return eos80_move_adiabatically(practical_salinity, temperature, pressure, reference_pressure).value;
}

double stericol_eos80_in_situ_temperature(double practical_salinity, double potential_temperature,
                                          double pressure)
{
    return eos80_in_situ(practical_salinity, potential_temperature, pressure).value;
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
        temperature[i] = eos80_in_situ(practical_salinity[i], potential_temperature[i], pressure).value;
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
        temperature[i] = eos80_in_situ(practical_salinity[i], potential_temperature[i], pressure[i]).value;
}

double stericol_eos80_thermal_expansion(double practical_salinity, double potential_temperature,
                                        double pressure)
{
    const stericol_sloped v = eos80_volume_potential(practical_salinity, potential_temperature, pressure);

    return v.by_temperature / v.value;
}

double stericol_eos80_haline_contraction(double practical_salinity, double potential_temperature,
                                         double pressure)
{
    const stericol_sloped v = eos80_volume_potential(practical_salinity, potential_temperature, pressure);

    return -v.by_salinity / v.value;
}

double stericol_eos80_depth(double pressure, double latitude)
{
    static const double geopotential[] = {0.0, 9.72659, -2.2512e-5, 2.279e-10, -1.82e-15};
    const double sine = sin(latitude * STERICOL_RADIANS_PER_DEGREE), x = sine * sine;
    /* UNESCO 44 has its own gravity, with half of its change down to the depth. */
    const double gravity = 9.780318 * (1.0 + (5.2788e-3 + 2.36e-5 * x) * x) + 1.092e-6 * pressure;

    return EOS80_VALUE(geopotential, pressure) / gravity;
}
