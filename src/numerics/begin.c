/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "numerics/begin.h"

#include <gsl/gsl_errno.h>
#include <pthread.h>

static void switch_handler_off(void)
{
    gsl_set_error_handler_off();
}

void stericol_numerics_begin(void)
{
    /* GSL keeps the handler in a global of its own; writing it more than once would be a race. */
    static pthread_once_t once = PTHREAD_ONCE_INIT;
    pthread_once(&once, switch_handler_off);
}

stericol_status stericol_numerics_status(int code)
{
    if (code == GSL_SUCCESS)
        return STERICOL_OK;
    return code == GSL_ENOMEM ? STERICOL_MEMORY : STERICOL_INPUT;
}
