/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The depth table of a scenario. */
#ifndef STERICOL_COMMANDS_PROFILE_H
#define STERICOL_COMMANDS_PROFILE_H

#include "base/context.h"
#include "cf/units.h"

#include <stddef.h>

/*
 * Reads the text table of --profile (input/table.h): the columns depth (m), warming (K) and freshening
 * (g/kg), or in units that the header names; one of the last two may be absent and is 0 then.  Depths are
 * 0 or more and increase from row to row; no value may be missing.
 *
 * values  depth[count], warming[count], freshening[count], one after the other in one allocation; free with
 *         free()
 *
 * STERICOL_INPUT: what the table cannot be used for, with its line; STERICOL_MEMORY.  On failure *values is
 * NULL and *count 0.
 */
stericol_status stericol_profile_read(stericol_context *context, const stericol_cf_units *units,
                                      const char *path, double **values, size_t *count);

#endif
