/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "numerics/spline.h"

#include "base/checked.h"
#include "numerics/begin.h"

#include <gsl/gsl_errno.h>
#include <gsl/gsl_spline.h>
#include <math.h>
#include <stdbool.h>
#include <stdlib.h>

struct stericol_spline {
    gsl_spline *curve;
    gsl_interp_accel *place;
};

static const gsl_interp_type *type_of(stericol_spline_kind kind)
{
    return kind == STERICOL_SPLINE_AKIMA ? gsl_interp_akima : gsl_interp_steffen;
}

size_t stericol_spline_least(stericol_spline_kind kind)
{
    return gsl_interp_type_min_size(type_of(kind));
}

/* GSL would report success with NaN for some of these. */
static bool can_be_joined(size_t count, const double *x, const double *y)
{
    for (size_t i = 0; i < count; i++) {
        if (!isfinite(x[i]) || !isfinite(y[i]))
            return false;
        if (i > 0 && !(x[i] > x[i - 1]))
            return false;
    }
    return true;
}

stericol_status stericol_spline_new(stericol_spline_kind kind, size_t count, const double *x, const double *y,
                                    stericol_spline **spline)
{
    *spline = NULL;
    stericol_numerics_begin();
    if (count < stericol_spline_least(kind) || !can_be_joined(count, x, y))
        return STERICOL_INPUT;
    stericol_status status = STERICOL_MEMORY;
    stericol_spline *made = stericol_new_array(1, sizeof *made);
    if (made == NULL)
        return STERICOL_MEMORY;
    made->curve = gsl_spline_alloc(type_of(kind), count);
    made->place = gsl_interp_accel_alloc();
    if (made->curve == NULL || made->place == NULL)
        goto failed;
    status = stericol_numerics_status(gsl_spline_init(made->curve, x, y, count));
    if (status != STERICOL_OK)
        goto failed;
    *spline = made;
    return STERICOL_OK;
failed:
    stericol_spline_free(made);
    return status;
}

void stericol_spline_free(stericol_spline *spline)
{
    if (spline == NULL)
        return;
    if (spline->curve != NULL)
        gsl_spline_free(spline->curve);
    if (spline->place != NULL)
        gsl_interp_accel_free(spline->place);
    free(spline);
}

double stericol_spline_value(stericol_spline *spline, double x)
{
    double value = (double)NAN;
    if (gsl_spline_eval_e(spline->curve, x, spline->place, &value) != GSL_SUCCESS)
        return (double)NAN;
    return value;
}

double stericol_spline_integral(stericol_spline *spline, double a, double b)
{
    double value = (double)NAN;
    if (gsl_spline_eval_integ_e(spline->curve, a, b, spline->place, &value) != GSL_SUCCESS)
        return (double)NAN;
    return value;
}
