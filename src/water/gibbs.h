/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The Gibbs function as an equation of state in absolute salinity and conservative temperature. */
#ifndef STERICOL_WATER_GIBBS_H
#define STERICOL_WATER_GIBBS_H

/* Specific volume, m3/kg, of water with this in situ temperature. */
double stericol_gibbs_volume(double absolute_salinity, double temperature, double pressure);

/*
 * v, dv/dTheta and dv/dSA (units of stericol_volume_row_derivatives()) of water whose in situ temperature at
 * `pressure` is `temperature` and whose potential temperature is `potential_temperature`.  Finite at salinity
 * zero.
 */
void stericol_gibbs_volume_slopes(double absolute_salinity, double temperature, double potential_temperature,
                                  double pressure, double *volume, double *volume_temperature,
                                  double *volume_salinity);

#endif
