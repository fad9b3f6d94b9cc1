/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Units through UDUNITS-2, after a table of spellings met in real files.
 */
#ifndef STERICOL_CF_UNITS_H
#define STERICOL_CF_UNITS_H

#include "base/context.h"

#include <stdbool.h>

typedef struct stericol_cf_units stericol_cf_units;

/* The unit system; one for a run.  STERICOL_FAULT when UDUNITS-2 finds no database, STERICOL_MEMORY; *units
 * is NULL then. */
stericol_status stericol_cf_units_new(stericol_context *context, stericol_cf_units **units);
void stericol_cf_units_free(stericol_cf_units *units);

/*
 * target = value * scale + offset, for a value in `unit` (any spelling) and a target unit as UDUNITS-2 spells
 * it
 * ("degree_Celsius", "1", "g/kg", "m", "dbar", "degree_north" ...).  False, and *scale and *offset untouched,
 * when `unit` is NULL, blank (it says nothing; the caller judges by the values), longer than 127 bytes, not
 * known, or does not convert by a scale and an offset (a reciprocal, a logarithm, a dimensionless number into
 * an angle, a latitude into a longitude). The case of letters, underscores, brackets around the whole and the
 * name of a scale behind ("deg C (ITS-90)") do not matter to the table; what the table has not goes to
 * UDUNITS-2 as it is.  "C" is Celsius and "K" kelvin, never coulomb. Salinity: "1", "PSU", "psu", "ppt",
 * "PPT", "1e-3", "g/kg", "PSS-78" ... all count as parts per thousand when the target is "1e-3" (or "g/kg",
 * the same size); practical salinity with unit "1" is taken as a value on the practical scale (scale 1),
 * kg/kg as 1000,
 * "%" and "parts per hundred" as 10.  A mass fraction whose unit is the bare "1" cannot be told from a
 * practical salinity by its unit: it too gets scale 1, and the caller's judgement of the values has to find
 * it out.
 */
bool stericol_cf_units_convert(const stericol_cf_units *units, const char *unit, const char *target,
                               double *scale, double *offset);

typedef enum stericol_cf_quantity {
    STERICOL_CF_QUANTITY_UNKNOWN,
    STERICOL_CF_QUANTITY_TEMPERATURE,
    STERICOL_CF_QUANTITY_SALINITY, /* parts per thousand and dimensionless numbers */
    STERICOL_CF_QUANTITY_LENGTH,
    STERICOL_CF_QUANTITY_PRESSURE,
    STERICOL_CF_QUANTITY_LATITUDE,
    STERICOL_CF_QUANTITY_LONGITUDE,
    STERICOL_CF_QUANTITY_TIME /* "... since ...", and "... as %..." which cf/time.h refuses with a reason */
} stericol_cf_quantity;

/*
 * What a unit measures, after the same table of spellings; UNKNOWN for NULL, blank and unknown texts, and for
 * angles that name no direction ("degrees", "radian").
 */
stericol_cf_quantity stericol_cf_units_quantity(const stericol_cf_units *units, const char *unit);

#endif
