/* SPDX-License-Identifier: GPL-3.0-or-later */
/* EOS-80 with its derivatives. */
#ifndef STERICOL_WATER_EOS80_H
#define STERICOL_WATER_EOS80_H

/* A value with its derivatives by temperature and by practical salinity. */
typedef struct stericol_sloped {
    double value, by_temperature, by_salinity;
} stericol_sloped;

/* Specific volume, m3/kg, by in situ temperature (IPTS-68). */
stericol_sloped stericol_eos80_volume_in_situ(double practical_salinity, double temperature, double pressure);

#endif
