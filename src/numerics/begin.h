/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What this room does before it first calls GSL. */
#ifndef STERICOL_NUMERICS_BEGIN_H
#define STERICOL_NUMERICS_BEGIN_H

#include "stericol/status.h"

/*
 * Switches GSL's error handler off, once in the life of the process and safe from any thread: by default it
 * aborts the process, which a library must not do.  Every function of this room that calls GSL calls this
 * first.  A program that uses GSL itself must not count on the handler after that.
 */
void stericol_numerics_begin(void);

/* The status that stands for a return code of GSL: out of memory, or data that cannot be used. */
stericol_status stericol_numerics_status(int code);

#endif
