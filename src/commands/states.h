/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * From what a file holds to what the equation of state takes: absolute salinity and conservative temperature,
 * or practical salinity and potential temperature on IPTS-68 for EOS-80.
 */
#ifndef STERICOL_COMMANDS_STATES_H
#define STERICOL_COMMANDS_STATES_H

#include "input/epoch.h"
#include "stericol/water.h"

#include <stdbool.h>
#include <stddef.h>

/* The kinds of one epoch; none UNKNOWN. */
typedef struct stericol_state_rule {
    stericol_water water;
    stericol_temperature_kind temperature;
    stericol_salinity_kind salinity;
    bool ipts68; /* the temperatures given are on IPTS-68, else ITS-90 */
} stericol_state_rule;

/*
 * Converts `count` points in place.
 *
 * pressures  [count] sea pressure of each point, dbar; NULL: `pressure` for all
 * anomaly    [count] absolute salinity less reference salinity, g/kg; NULL is zero; not used where the
 * salinity given is absolute and the equation takes absolute NaN stays NaN.  An infinite temperature or
 * salinity (rejected) stays infinite in both.
 */
void stericol_state_convert(const stericol_state_rule *rule, double pressure, const double *pressures,
                            size_t count, const double *anomaly, double *salinity, double *temperature);

/* One phrase for provenance: what is done to temperature and salinity. */
const char *stericol_state_temperature_words(const stericol_state_rule *rule);
const char *stericol_state_salinity_words(const stericol_state_rule *rule, bool with_anomaly);

#endif
