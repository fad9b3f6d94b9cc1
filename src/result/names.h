/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Names, units and meanings of what a result of `change` holds: the one place where they stand.
 */
#ifndef STERICOL_RESULT_NAMES_H
#define STERICOL_RESULT_NAMES_H

#include "result/change.h"

/* What must be known for an entry to be written; bits. */
enum { STERICOL_NEEDS_SALINITY = 1, STERICOL_NEEDS_REMAINDER = 2, STERICOL_NEEDS_FILLING = 4 };

typedef struct stericol_result_entry {
    const char *name;          /* after "", "layer_", "region_", "region_layer_" */
    const char *unit;          /* as UDUNITS-2 reads it */
    const char *meaning;       /* start of long_name */
    const char *standard_name; /* NULL where CF has none that fits */
    const char *cell_methods;  /* NULL: none */
    const char *comment;       /* NULL: none */
    unsigned needs;
    bool not_negative; /* valid_min = 0 */
} stericol_result_entry;

const stericol_result_entry *stericol_map_entry(stericol_map map);
const stericol_result_entry *stericol_region_entry(stericol_region_quantity quantity);

/* Flag words, separated by blanks, in the order of their values 0 .. STERICOL_RESULT_FLAGS - 1. */
enum { STERICOL_RESULT_FLAGS = 7 };
extern const char stericol_result_flag_meanings[];

#endif
