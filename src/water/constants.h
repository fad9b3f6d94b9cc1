/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Constants that stay inside the room; those of general use stand in stericol/water.h. */
#ifndef STERICOL_WATER_CONSTANTS_H
#define STERICOL_WATER_CONSTANTS_H

#include "stericol/water.h"

/* Reducing salinity of IAPWS R13-08 (and of the polynomial), g/kg: 40 * 35.16504/35. */
#define STERICOL_REDUCING_SALINITY (40.0 * 35.16504 / 35.0)
/* Reducing temperature, K. */
#define STERICOL_REDUCING_TEMPERATURE 40.0
/* Reducing pressure of IAPWS R13-08 and of the polynomial: 1e8 Pa, in dbar. */
#define STERICOL_REDUCING_PRESSURE 1e4
/* The same in Pa. */
#define STERICOL_REDUCING_PRESSURE_PASCALS 1e8
/* Added to salinity under the root of the polynomial, g/kg (Roquet et al. 2015). */
#define STERICOL_POLYNOMIAL_SALINITY_OFFSET 24.0
/* t68/t90 (Saunders 1990). */
#define STERICOL_IPTS68_RATIO 1.00024
#define STERICOL_RADIANS_PER_DEGREE (3.14159265358979323846 / 180.0)

#endif
