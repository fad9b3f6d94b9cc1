/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The array kernels.  kernel_body.h is compiled once for each instruction set; every path does the same
 * operations in the same order, with fused multiply-add where the processor has it.  NULL arrays and the like
 * are the business of the functions in front of them.
 */
#ifndef STERICOL_WATER_KERNEL_H
#define STERICOL_WATER_KERNEL_H

#include <stddef.h>

/*
 * One path.  Units as in stericol/water.h; arrays have `count` elements; an output may be an input, element
 * for element.
 */
typedef struct stericol_kernel {
    const char *name;

    /* The 75-term polynomial: absolute salinity, conservative temperature -> v [, dv/dTheta, dv/dSA]. */
    void (*volume_row)(double pressure, size_t count, const double *salinity, const double *temperature,
                       double *volume);
    void (*volume_points)(const double *pressure, size_t count, const double *salinity,
                          const double *temperature, double *volume);
    void (*volume_row_derivatives)(double pressure, size_t count, const double *salinity,
                                   const double *temperature, double *volume, double *volume_temperature,
                                   double *volume_salinity);
    void (*volume_points_derivatives)(const double *pressure, size_t count, const double *salinity,
                                      const double *temperature, double *volume, double *volume_temperature,
                                      double *volume_salinity);

    /* Potential -> conservative temperature and back. */
    void (*conservative)(size_t count, const double *salinity, const double *potential, double *conservative);
    void (*potential_of_conservative)(size_t count, const double *salinity, const double *conservative,
                                      double *potential);
    /* In situ -> potential temperature and back. */
    void (*potential_row)(double pressure, size_t count, const double *salinity, const double *temperature,
                          double *potential);
    void (*potential_points)(const double *pressure, size_t count, const double *salinity,
                             const double *temperature, double *potential);
    void (*in_situ_row)(double pressure, size_t count, const double *salinity, const double *potential,
                        double *temperature);
    void (*in_situ_points)(const double *pressure, size_t count, const double *salinity,
                           const double *potential, double *temperature);

    /* EOS-80: practical salinity, potential temperature -> v [, dv/dtheta, dv/dS].  Without fused operations,
       so that these are the same bits on every path. */
    void (*eos80_row)(double pressure, size_t count, const double *salinity, const double *temperature,
                      double *volume);
    void (*eos80_points)(const double *pressure, size_t count, const double *salinity,
                         const double *temperature, double *volume);
    void (*eos80_row_derivatives)(double pressure, size_t count, const double *salinity,
                                  const double *temperature, double *volume, double *volume_temperature,
                                  double *volume_salinity);
    void (*eos80_points_derivatives)(const double *pressure, size_t count, const double *salinity,
                                     const double *temperature, double *volume, double *volume_temperature,
                                     double *volume_salinity);
} stericol_kernel;

/* The fastest path that this processor has.  Looked up anew in every call: nothing is kept, nothing can race.
 */
const stericol_kernel *stericol_kernel_best(void);

/* The path of that name ("avx512", "avx2", "plain"), for tests; NULL where this processor or build lacks it.
 */
const stericol_kernel *stericol_kernel_named(const char *name);

#endif
