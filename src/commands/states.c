/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/states.h"

#include <math.h>

/* Points handled at once: the rejected ones are remembered in a buffer on the stack. */
enum { STRIP = 512 };

static bool wants_absolute(const stericol_state_rule *rule)
{
    return rule->water.equation != STERICOL_EQUATION_EOS80;
}

/* The salinity that the temperature conversions and the equation need: absolute, or practical for EOS-80. */
static void convert_salinity(const stericol_state_rule *rule, size_t count, const double *anomaly,
                             double *salinity)
{
    if (rule->salinity == STERICOL_SALINITY_PRACTICAL) {
        if (wants_absolute(rule))
            stericol_absolute_salinity_array(count, salinity, anomaly, salinity);
        return;
    }
    if (!wants_absolute(rule)) {
        stericol_practical_salinity_array(
            count, salinity, rule->salinity == STERICOL_SALINITY_ABSOLUTE ? anomaly : NULL, salinity);
        return;
    }
    if (rule->salinity == STERICOL_SALINITY_REFERENCE && anomaly != NULL)
        for (size_t i = 0; i < count; i++)
            salinity[i] += anomaly[i];
}

/* To conservative temperature, by the absolute salinity that salinity already is. */
static void convert_to_conservative(const stericol_state_rule *rule, double pressure, const double *pressures,
                                    size_t count, const double *salinity, double *temperature)
{
    if (rule->ipts68)
        stericol_temperature_its90_array(count, temperature, temperature);
    if (rule->temperature == STERICOL_TEMPERATURE_POTENTIAL)
        stericol_conservative_temperature_array(count, salinity, temperature, temperature);
    else if (rule->temperature == STERICOL_TEMPERATURE_IN_SITU && pressures != NULL)
        stericol_conservative_temperature_of_in_situ_points(pressures, count, salinity, temperature,
                                                            temperature);
    else if (rule->temperature == STERICOL_TEMPERATURE_IN_SITU)
        stericol_conservative_temperature_of_in_situ_row(pressure, count, salinity, temperature, temperature);
}

/* To potential temperature on IPTS-68, by the practical salinity that salinity already is. */
static void convert_to_eos80(const stericol_state_rule *rule, double pressure, const double *pressures,
                             size_t count, const double *anomaly, const double *salinity, double *temperature)
{
    if (rule->temperature == STERICOL_TEMPERATURE_CONSERVATIVE) {
        double absolute[STRIP];

        if (rule->ipts68)
            stericol_temperature_its90_array(count, temperature, temperature);
        stericol_absolute_salinity_array(count, salinity, anomaly, absolute);
        stericol_potential_temperature_of_conservative_array(count, absolute, temperature, temperature);
        stericol_temperature_ipts68_array(count, temperature, temperature);
        return;
    }
    if (!rule->ipts68)
        stericol_temperature_ipts68_array(count, temperature, temperature);
    if (rule->temperature == STERICOL_TEMPERATURE_IN_SITU && pressures != NULL)
        stericol_eos80_potential_temperature_points(pressures, count, salinity, temperature, temperature);
    else if (rule->temperature == STERICOL_TEMPERATURE_IN_SITU)
        stericol_eos80_potential_temperature_row(pressure, count, salinity, temperature, temperature);
}

static void convert_strip(const stericol_state_rule *rule, double pressure, const double *pressures,
                          size_t count, const double *anomaly, double *salinity, double *temperature)
{
    unsigned char rejected[STRIP];
    bool any_rejected = false, any_valid = false;

    for (size_t i = 0; i < count; i++) {
        rejected[i] = isinf(salinity[i]) || isinf(temperature[i]);
        any_rejected = any_rejected || rejected[i];
        any_valid = any_valid || (isfinite(salinity[i]) && isfinite(temperature[i]));
    }
    if (any_valid) {
        convert_salinity(rule, count, anomaly, salinity);
        if (wants_absolute(rule))
            convert_to_conservative(rule, pressure, pressures, count, salinity, temperature);
        else
            convert_to_eos80(rule, pressure, pressures, count, anomaly, salinity, temperature);
    }
    if (any_rejected)
        for (size_t i = 0; i < count; i++)
            if (rejected[i])
                salinity[i] = temperature[i] = INFINITY;
}

void stericol_state_convert(const stericol_state_rule *rule, double pressure, const double *pressures,
                            size_t count, const double *anomaly, double *salinity, double *temperature)
{
    for (size_t done = 0; done < count; done += STRIP) {
        size_t strip = count - done < STRIP ? count - done : STRIP;

        convert_strip(rule, pressure, pressures == NULL ? NULL : pressures + done, strip,
                      anomaly == NULL ? NULL : anomaly + done, salinity + done, temperature + done);
    }
}

const char *stericol_state_temperature_words(const stericol_state_rule *rule)
{
    bool eos80 = rule->water.equation == STERICOL_EQUATION_EOS80;

    switch (rule->temperature) {
    case STERICOL_TEMPERATURE_IN_SITU:
        return eos80 ? "in-situ temperature, turned into potential temperature by the adiabatic lapse rate "
                       "of UNESCO 44"
                     : "in-situ temperature, turned into conservative temperature by entropy and potential "
                       "enthalpy "
                       "(full Gibbs function)";
    case STERICOL_TEMPERATURE_POTENTIAL:
        return eos80 ? "potential temperature, used as it is"
                     : "potential temperature, turned into conservative temperature by potential enthalpy";
    case STERICOL_TEMPERATURE_CONSERVATIVE:
        return eos80 ? "conservative temperature, turned into potential temperature by potential enthalpy"
                     : "conservative temperature, used as it is";
    case STERICOL_TEMPERATURE_UNKNOWN:
        break;
    }
    return "temperature of unknown kind";
}

const char *stericol_state_salinity_words(const stericol_state_rule *rule, bool with_anomaly)
{
    bool eos80 = rule->water.equation == STERICOL_EQUATION_EOS80;

    switch (rule->salinity) {
    case STERICOL_SALINITY_PRACTICAL:
        if (eos80)
            return "practical salinity, used as it is";
        return with_anomaly
                   ? "practical salinity times 35.16504/35, plus the anomaly field"
                   : "practical salinity times 35.16504/35; the absolute salinity anomaly is taken as zero";
    case STERICOL_SALINITY_REFERENCE:
        if (eos80)
            return "reference salinity, turned into practical salinity";
        return with_anomaly ? "reference salinity plus the anomaly field"
                            : "reference salinity; the absolute salinity anomaly is taken as zero";
    case STERICOL_SALINITY_ABSOLUTE:
        if (eos80)
            return with_anomaly
                       ? "absolute salinity less the anomaly field, turned into practical salinity"
                       : "absolute salinity, turned into practical salinity; the anomaly is taken as zero";
        return "absolute salinity, used as it is";
    case STERICOL_SALINITY_UNKNOWN:
        break;
    }
    return "salinity of unknown kind";
}
