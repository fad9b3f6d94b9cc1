/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Splines through the samples of one column.
 *
 * steffen: M. Steffen, A simple method for monotonic interpolation in one dimension, Astron. Astrophys. 239
 * (1990) 443-450: no new extremes between samples. akima: H. Akima, A new method of interpolation and smooth
 * curve fitting based on local procedures, J. ACM 17 (1970) 589-602.
 */
#ifndef STERICOL_NUMERICS_SPLINE_H
#define STERICOL_NUMERICS_SPLINE_H

#include "stericol/status.h"

#include <stddef.h>

typedef enum stericol_spline_kind { STERICOL_SPLINE_STEFFEN, STERICOL_SPLINE_AKIMA } stericol_spline_kind;

typedef struct stericol_spline stericol_spline;

/* The fewest samples that a spline of this kind needs. */
size_t stericol_spline_least(stericol_spline_kind kind);

/*
 * Sets *spline to the spline through count samples; x and y are copied, free it with stericol_spline_free().
 *
 * STERICOL_INPUT: fewer samples than the kind needs, a value that is not finite, x that does not increase
 * strictly. STERICOL_MEMORY.  On failure *spline is NULL.
 */
stericol_status stericol_spline_new(stericol_spline_kind kind, size_t count, const double *x, const double *y,
                                    stericol_spline **spline);

/* Frees a spline; NULL is allowed. */
void stericol_spline_free(stericol_spline *spline);

/* The value at x; NaN outside the samples.  One thread uses a spline at a time (it remembers where it was).
 */
double stericol_spline_value(stericol_spline *spline, double x);

/* The integral from a to b, a <= b; NaN where that leaves the samples.  As above for threads. */
double stericol_spline_integral(stericol_spline *spline, double a, double b);

#endif
