/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Units through UDUNITS-2, after a table of spellings met in real files.
 */
#ifndef STERICOL_CF_UNITS_H
#define STERICOL_CF_UNITS_H

#include "base/context.h"

#include <stdbool.h>

typedef struct stericol_cf_units stericol_cf_units;

/* The unit system; one for a run.  STERICOL_FAULT when UDUNITS-2 finds no database. */
stericol_status stericol_cf_units_new(stericol_context *context, stericol_cf_units **units);
void stericol_cf_units_free(stericol_cf_units *units);

/*
 * target = value * scale + offset, for a value in `unit` (any spelling) and a target unit as UDUNITS-2 spells it
 * ("degree_Celsius", "1", "g/kg", "m", "dbar", "degree_north" ...).  False when `unit` is not known or does not convert.
 * Salinity: "1", "PSU", "psu", "ppt", "PPT", "1e-3", "g/kg", "PSS-78" ... all count as parts per thousand when the target is
 * "1e-3"; practical salinity with unit "1" is taken as a value on the practical scale (scale 1), kg/kg as 1000.
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
    STERICOL_CF_QUANTITY_TIME /* "... since ..." */
} stericol_cf_quantity;

/* What a unit measures, after the same table of spellings. */
stericol_cf_quantity stericol_cf_units_quantity(const stericol_cf_units *units, const char *unit);

#endif
