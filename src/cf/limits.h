/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers of attributes against the type of the stored values; the valid limits.  For rules.c and limits.c
 * alone. */
#ifndef STERICOL_CF_LIMITS_H
#define STERICOL_CF_LIMITS_H

#include "cf/room.h"

typedef enum stericol_cf_sort { STERICOL_CF_WHOLE, STERICOL_CF_NATURAL, STERICOL_CF_REAL } stericol_cf_sort;

/* A number of an attribute, exact. */
typedef struct stericol_cf_number {
    stericol_cf_sort sort;
    stericol_cf_stored value;
} stericol_cf_number;

stericol_cf_sort stericol_cf_sort_of(stericol_cf_type type);
/* The least and largest finite value of a type. */
void stericol_cf_range_of(stericol_cf_type type, stericol_cf_stored *low, stericol_cf_stored *high);

/*
 * `number` as a stored value of `type`, rounded to float where that is the type.  `declared` is the
 * variable's own type: a number that only fits that (-1 for bytes read as unsigned) is read with the other
 * sign.  False when it does not fit.
 */
bool stericol_cf_fit_number(stericol_cf_type type, stericol_cf_type declared,
                            const stericol_cf_number *number, stericol_cf_stored *stored);

/* The numbers of an attribute, at most `most`; a text is parsed; SIZE_MAX when it holds no numbers. */
size_t stericol_cf_numbers_of(const stericol_cf_variable *variable, const stericol_cf_attribute *attribute,
                              stericol_cf_number *numbers, size_t most);

/* Sets rules->low and ->high from valid_min, valid_max, valid_range; the rest of `rules` is complete. */
stericol_status stericol_cf_set_limits(stericol_context *context, const stericol_cf_file *file,
                                       const stericol_cf_variable *variable, stericol_cf_rules *rules);

#endif
