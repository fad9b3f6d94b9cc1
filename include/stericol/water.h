/* SPDX-License-Identifier: GPL-3.0-or-later */
/**
 * \file
 * Equations of state of seawater, conversions between the kinds of salinity and temperature, pressure and
 * depth.
 *
 * All functions are pure: no state, no failure, safe in any thread.  NaN is the only missing value: NaN in
 * any input gives NaN in the outputs of that element, and nothing else changes.  Inputs outside the range of
 * an equation are evaluated as they stand, never clamped; stericol_in_valid_range() reports on them.
 *
 * Units, unless a function says otherwise: absolute and reference salinity g/kg, practical salinity 1
 * (PSS-78), temperature degrees Celsius on ITS-90, sea pressure (absolute pressure less 101325 Pa) dbar,
 * specific volume m3/kg, depth m below the surface, latitude degrees.
 *
 * Arrays: `count` elements, one element a point.  An output may be the same array as an input, element for
 * element, but must not overlap one otherwise.  An element's result depends neither on its place in the array
 * nor on `count`.  On processors with fused multiply-add (see stericol_instruction_set()) the results are the
 * same bits whatever the width of the vectors; without, they may differ in the last bits.
 */
#ifndef STERICOL_WATER_H
#define STERICOL_WATER_H

#include "stericol/status.h"

#include <stdbool.h>
#include <stddef.h>

#ifdef __cplusplus
extern "C" {
#endif

/* ------------------------------------------------------------------------------------------------------------
 * Constants
 */

/** Reference salinity of the standard ocean, g/kg (practical salinity 35; Millero et al. 2008). */
#define STERICOL_STANDARD_SALINITY 35.16504
/** Reference salinity per unit of practical salinity, g/kg (Millero et al. 2008). */
#define STERICOL_SALINITY_RATIO (35.16504 / 35.0)
/** The heat capacity that defines conservative temperature, J/(kg K), exact (IOC Manuals and Guides 56,
 * 2010). */
#define STERICOL_HEAT_CAPACITY 3991.86795711963
/** 0 degC in kelvin. */
#define STERICOL_CELSIUS_ZERO 273.15
/** The standard atmosphere, Pa: absolute pressure where sea pressure is zero. */
#define STERICOL_STANDARD_ATMOSPHERE 101325.0
/** Pascals in a decibar. */
#define STERICOL_PASCALS_PER_DECIBAR 1e4

/* ------------------------------------------------------------------------------------------------------------
 * Equations of state on arrays
 */

/** The equations of state.  Each takes its own kinds of salinity and temperature. */
typedef enum stericol_equation {
    /** The 75-term polynomial (Roquet et al. 2015): absolute salinity, conservative temperature. */
    STERICOL_EQUATION_TEOS10,
    /** The full Gibbs function (IAPWS SR7-09 and R13-08): absolute salinity, conservative temperature. */
    STERICOL_EQUATION_GIBBS,
    /** EOS-80 (UNESCO 1981): practical salinity, potential temperature (reference 0 dbar, IPTS-68). */
    STERICOL_EQUATION_EOS80,
    /** Constant coefficients: absolute salinity, conservative temperature. */
    STERICOL_EQUATION_LINEAR
} stericol_equation;

/** An equation of state; the three numbers are read for STERICOL_EQUATION_LINEAR only. */
typedef struct stericol_water {
    stericol_equation equation;
    double expansion;   /**< thermal expansion a, 1/K */
    double contraction; /**< haline contraction b, kg/g */
    double density;     /**< rho_0 at 35 g/kg and 10 degC, kg/m3 */
} stericol_water;

/** Initialiser: the polynomial, and the usual round numbers for the linear equation. */
#define STERICOL_WATER_DEFAULT                                                                               \
    {                                                                                                        \
        STERICOL_EQUATION_TEOS10, 2e-4, 7.5e-4, 1027.0                                                       \
    }

/**
 * Specific volume of `count` points at one pressure.
 *
 * The polynomial is first reduced to its 28 terms in salinity and temperature at that pressure, so that a row
 * costs less than half of the same points with pressures of their own, and gives the same bits.
 * Linear: v = (1/rho_0) [1 + a (Theta - 10) - b (SA - 35)].
 * Salinity below -24 g/kg (polynomial) or below 0 (Gibbs function, EOS-80) gives NaN.
 *
 * \param water        the equation of state
 * \param pressure     sea pressure, dbar
 * \param salinity     [count] in the equation's own kind
 * \param temperature  [count] in the equation's own kind
 * \param volume       [count] out, m3/kg
 */
STERICOL_API void stericol_volume_row(const stericol_water *water, double pressure, size_t count,
                                      const double *salinity, const double *temperature, double *volume);

/** The same where every point has a pressure of its own: pressure[count]. */
STERICOL_API void stericol_volume_points(const stericol_water *water, const double *pressure, size_t count,
                                         const double *salinity, const double *temperature, double *volume);

/**
 * Specific volume and its first derivatives at one pressure.
 *
 * The derivatives are analytic, each at constant pressure and at constant value of the other variable, both
 * in the equation's own kinds: thermal expansion is volume_temperature / volume, haline contraction
 * -volume_salinity / volume.  At salinity zero EOS-80 and the Gibbs function give their limits from above.
 *
 * \param volume_temperature  [count] out, m3/(kg K)
 * \param volume_salinity     [count] out, m3/kg per g/kg (EOS-80: per unit of practical salinity)
 */
STERICOL_API void stericol_volume_row_derivatives(const stericol_water *water, double pressure, size_t count,
                                                  const double *salinity, const double *temperature,
                                                  double *volume, double *volume_temperature,
                                                  double *volume_salinity);

/** The same where every point has a pressure of its own: pressure[count]. */
STERICOL_API void stericol_volume_points_derivatives(const stericol_water *water, const double *pressure,
                                                     size_t count, const double *salinity,
                                                     const double *temperature, double *volume,
                                                     double *volume_temperature, double *volume_salinity);

/**
 * Whether a point lies where the equation is meant to be used.  It only reports; nothing is changed or
 * refused.
 *
 * - EOS-80: 0..42, -2..40 degC, 0..10000 dbar (UNESCO Technical Papers in Marine Science 38, 1981).
 * - Gibbs function: 0..42 g/kg, -6..40 degC, 0..10000 dbar (the standard range of IAPWS R13-08 in round
 *   numbers, from memory).
 * - Polynomial and linear: 0..42 g/kg, -3..40 degC, 0..8000 dbar: a box of our own about the waters that the
 *   polynomial was fitted to.  For its corners see stericol_specific_volume().
 *
 * \return false outside, and for any NaN.
 */
STERICOL_API bool stericol_in_valid_range(const stericol_water *water, double salinity, double temperature,
                                          double pressure);

/**
 * The path that this processor takes through the array functions: "avx512", "avx2" (both with fused
 * multiply-add, the same bits) or "plain".  Never NULL.
 */
STERICOL_API const char *stericol_instruction_set(void);

/* ------------------------------------------------------------------------------------------------------------
 * The 75-term polynomial, point by point
 */

/** v and its first derivatives in relative form. */
typedef struct stericol_volume_and_slopes {
    double volume;             /**< m3/kg */
    double thermal_expansion;  /**< (1/v) dv/dTheta, 1/K */
    double haline_contraction; /**< -(1/v) dv/dSA, kg/g */
} stericol_volume_and_slopes;

/**
 * Specific volume by the 75-term polynomial, m3/kg (Roquet et al. 2015, Ocean Modelling 90, 29-43).
 *
 * Largest relative error against the full Gibbs function, as measured by this project's tests:
 *   7e-7    30..40 g/kg, -2..33 degC to 500 dbar; 33..37 g/kg, -1..25 degC to 1500 dbar;
 *           30..40 g/kg, -2..15 degC to 8000 dbar
 *   1.5e-6  0..42 g/kg, -2..35 degC to 500 dbar
 *   1.2e-4  0..42 g/kg, -3..40 degC to 8000 dbar: all of stericol_in_valid_range(); worst in hot water under
 * great pressure, which no ocean holds
 *
 * \param absolute_salinity         g/kg; below -24 gives NaN
 * \param conservative_temperature  degC
 * \param pressure                  dbar
 */
STERICOL_API double stericol_specific_volume(double absolute_salinity, double conservative_temperature,
                                             double pressure);

/** (1/v) dv/dTheta at constant absolute salinity and pressure, 1/K. */
STERICOL_API double stericol_thermal_expansion(double absolute_salinity, double conservative_temperature,
                                               double pressure);

/** -(1/v) dv/dSA at constant conservative temperature and pressure, kg/g. */
STERICOL_API double stericol_haline_contraction(double absolute_salinity, double conservative_temperature,
                                                double pressure);

/** All three at once. */
STERICOL_API stericol_volume_and_slopes stericol_specific_volume_and_slopes(double absolute_salinity,
                                                                            double conservative_temperature,
                                                                            double pressure);

/* ------------------------------------------------------------------------------------------------------------
 * The Gibbs function
 */

/**
 * The Gibbs function g(SA, t, p) and its derivatives; S stands for absolute salinity in g/kg, T for
 * temperature in K, P for pressure in Pa.
 */
typedef struct stericol_gibbs {
    double g;    /**< J/kg */
    double g_s;  /**< J/g */
    double g_t;  /**< J/(kg K) */
    double g_p;  /**< m3/kg */
    double g_st; /**< J/(g K) */
    double g_sp; /**< m3/g */
    double g_tt; /**< J/(kg K2) */
    double g_tp; /**< m3/(kg K) */
    double g_pp; /**< m3/(kg Pa) */
} stericol_gibbs;

/**
 * The Gibbs function of liquid water (IAPWS SR7-09, table 2).
 *
 * \param temperature  in situ, degC
 * \param pressure     dbar
 * \param gibbs        out; the derivatives by salinity are zero
 */
STERICOL_API void stericol_gibbs_water(double temperature, double pressure, stericol_gibbs *gibbs);

/**
 * The saline part of the Gibbs function of seawater (IAPWS R13-08, table 2), arguments as above.
 *
 * At salinity zero every member is zero but three: g_s and g_st are -infinity, which is their limit, and g_sp
 * has a finite value.  A negative salinity gives NaN.
 */
STERICOL_API void stericol_gibbs_saline(double absolute_salinity, double temperature, double pressure,
                                        stericol_gibbs *gibbs);

/** The Gibbs function of seawater: the sum of the two parts. */
STERICOL_API void stericol_gibbs_function(double absolute_salinity, double temperature, double pressure,
                                          stericol_gibbs *gibbs);

/** What follows from the Gibbs function at one point. */
typedef struct stericol_properties {
    double volume;             /**< specific volume, m3/kg */
    double density;            /**< kg/m3 */
    double heat_capacity;      /**< at constant pressure, J/(kg K) */
    double entropy;            /**< J/(kg K) */
    double enthalpy;           /**< J/kg */
    double internal_energy;    /**< J/kg */
    double helmholtz_energy;   /**< J/kg */
    double sound_speed;        /**< m/s */
    double thermal_expansion;  /**< by conservative temperature, 1/K */
    double haline_contraction; /**< at constant conservative temperature, kg/g */
} stericol_properties;

/**
 * All properties of seawater by the full Gibbs function (IOC Manuals and Guides 56, 2010: sections 2.6
 * to 2.20).
 *
 * thermal_expansion   = -(g_TP/g_P) cp0 / [(T0 + theta) g_TT]                      (eq. 2.18.3)
 * haline_contraction  = -g_SP/g_P + g_TP [g_ST - g_S(SA, theta, 0)/(T0 + theta)] / (g_P g_TT)   (eq. 2.19.3)
 * The logarithms in the last one cancel; it is evaluated without them and finite at salinity zero.
 *
 * \param temperature  in situ, degC
 */
STERICOL_API void stericol_seawater_properties(double absolute_salinity, double temperature, double pressure,
                                               stericol_properties *properties);

/* ------------------------------------------------------------------------------------------------------------
 * EOS-80: practical salinity, temperatures on IPTS-68
 */

/**
 * Density at one atmosphere and secant bulk modulus (Millero and Poisson 1981, Deep-Sea Research 28A,
 * 625-629; Millero, Chen, Bradshaw and Schleicher 1980, Deep-Sea Research 27A, 255-264; UNESCO Technical
 * Papers in Marine Science 36, 1981), kg/m3.
 *
 * \param temperature  in situ, degC on IPTS-68
 */
STERICOL_API double stericol_eos80_density(double practical_salinity, double temperature, double pressure);

/** The secant bulk modulus of the same equation, bar. */
STERICOL_API double stericol_eos80_bulk_modulus(double practical_salinity, double temperature,
                                                double pressure);

/** Specific volume anomaly: v(S, t, p) - v(35, 0, p), m3/kg. */
STERICOL_API double stericol_eos80_volume_anomaly(double practical_salinity, double temperature,
                                                  double pressure);

/** Heat capacity at constant pressure, J/(kg K) (UNESCO 44, Fofonoff and Millard 1983, section 5). */
STERICOL_API double stericol_eos80_heat_capacity(double practical_salinity, double temperature,
                                                 double pressure);

/** The same on arrays at one pressure. */
STERICOL_API void stericol_eos80_heat_capacity_row(double pressure, size_t count,
                                                   const double *practical_salinity,
                                                   const double *temperature, double *heat_capacity);

/** Adiabatic lapse rate, K/dbar (Bryden 1973, Deep-Sea Research 20, 401-408; UNESCO 44, section 6). */
STERICOL_API double stericol_eos80_lapse_rate(double practical_salinity, double temperature, double pressure);

/**
 * Potential temperature, degC: the lapse rate integrated to the reference pressure in one step of the
 * fourth-order Runge-Kutta method of Gill (UNESCO 44, section 7).
 */
STERICOL_API double stericol_eos80_potential_temperature(double practical_salinity, double temperature,
                                                         double pressure, double reference_pressure);

/**
 * In situ temperature, degC: the t whose potential temperature (reference 0 dbar) by the function above is
 * `potential_temperature`.
 */
STERICOL_API double stericol_eos80_in_situ_temperature(double practical_salinity,
                                                       double potential_temperature, double pressure);

/** The same on arrays at one pressure. */
STERICOL_API void stericol_eos80_potential_temperature_row(double pressure, size_t count,
                                                           const double *practical_salinity,
                                                           const double *temperature,
                                                           double *potential_temperature);
STERICOL_API void stericol_eos80_in_situ_temperature_row(double pressure, size_t count,
                                                         const double *practical_salinity,
                                                         const double *potential_temperature,
                                                         double *temperature);

/** The same on arrays, pressure[count]. */
STERICOL_API void stericol_eos80_potential_temperature_points(const double *pressure, size_t count,
                                                              const double *practical_salinity,
                                                              const double *temperature,
                                                              double *potential_temperature);
STERICOL_API void stericol_eos80_in_situ_temperature_points(const double *pressure, size_t count,
                                                            const double *practical_salinity,
                                                            const double *potential_temperature,
                                                            double *temperature);

/** (1/v) dv/dtheta at constant practical salinity and pressure, 1/K; temperature is potential. */
STERICOL_API double stericol_eos80_thermal_expansion(double practical_salinity, double potential_temperature,
                                                     double pressure);

/** -(1/v) dv/dS at constant potential temperature and pressure, per unit of practical salinity. */
STERICOL_API double stericol_eos80_haline_contraction(double practical_salinity, double potential_temperature,
                                                      double pressure);

/** Depth of a pressure, m (UNESCO 44, section 4: standard ocean, S = 35 and t = 0 degC). */
STERICOL_API double stericol_eos80_depth(double pressure, double latitude);

/* ------------------------------------------------------------------------------------------------------------
 * Salinity: practical, reference, absolute
 */

/** Reference salinity = practical salinity * 35.16504/35, g/kg (Millero et al. 2008; meant for 2..42). */
STERICOL_API double stericol_reference_salinity(double practical_salinity);

/** Absolute salinity = reference salinity + anomaly, g/kg. */
STERICOL_API double stericol_absolute_salinity(double practical_salinity, double anomaly);

/** Practical salinity = (absolute salinity - anomaly) * 35/35.16504. */
STERICOL_API double stericol_practical_salinity(double absolute_salinity, double anomaly);

/** The same on arrays; `anomaly` may be NULL, which stands for zero everywhere. */
STERICOL_API void stericol_absolute_salinity_array(size_t count, const double *practical_salinity,
                                                   const double *anomaly, double *absolute_salinity);
STERICOL_API void stericol_practical_salinity_array(size_t count, const double *absolute_salinity,
                                                    const double *anomaly, double *practical_salinity);

/* ------------------------------------------------------------------------------------------------------------
 * Temperature: in situ, potential (reference 0 dbar), conservative; by the full Gibbs function
 *
 * Potential and in situ temperature have the same entropy; the terms in x^2 ln x are the same on both sides
 * and drop out.  Conservative temperature is potential enthalpy / cp0, where they cancel to 2e-12 J/kg and
 * are left out.  What is left are polynomials, solved by three steps of Newton's method: exact to rounding
 * (1e-12 K) for 0..120 g/kg, -6..40 degC, to 10000 dbar.  Negative salinity gives NaN.
 */

/** Potential temperature of a point at `pressure`, degC. */
STERICOL_API double stericol_potential_temperature(double absolute_salinity, double temperature,
                                                   double pressure);

/** In situ temperature at `pressure` of water with this potential temperature, degC. */
STERICOL_API double stericol_in_situ_temperature(double absolute_salinity, double potential_temperature,
                                                 double pressure);

/** Conservative temperature of water with this potential temperature, degC. */
STERICOL_API double stericol_conservative_temperature(double absolute_salinity, double potential_temperature);

/** Conservative temperature of a point at `pressure` with this in situ temperature, degC. */
STERICOL_API double stericol_conservative_temperature_of_in_situ(double absolute_salinity, double temperature,
                                                                 double pressure);

/** Potential temperature of water with this conservative temperature, degC. */
STERICOL_API double stericol_potential_temperature_of_conservative(double absolute_salinity,
                                                                   double conservative_temperature);

/** In situ temperature at `pressure` of water with this conservative temperature, degC. */
STERICOL_API double stericol_in_situ_temperature_of_conservative(double absolute_salinity,
                                                                 double conservative_temperature,
                                                                 double pressure);

/** The same on arrays; what depends on pressure comes at one pressure (`_row`) or at pressure[count]
 * (`_points`). */
STERICOL_API void stericol_conservative_temperature_array(size_t count, const double *absolute_salinity,
                                                          const double *potential_temperature,
                                                          double *conservative_temperature);
STERICOL_API void stericol_potential_temperature_of_conservative_array(size_t count,
                                                                       const double *absolute_salinity,
                                                                       const double *conservative_temperature,
                                                                       double *potential_temperature);
STERICOL_API void stericol_potential_temperature_row(double pressure, size_t count,
                                                     const double *absolute_salinity,
                                                     const double *temperature,
                                                     double *potential_temperature);
STERICOL_API void stericol_potential_temperature_points(const double *pressure, size_t count,
                                                        const double *absolute_salinity,
                                                        const double *temperature,
                                                        double *potential_temperature);
STERICOL_API void stericol_in_situ_temperature_row(double pressure, size_t count,
                                                   const double *absolute_salinity,
                                                   const double *potential_temperature, double *temperature);
STERICOL_API void stericol_in_situ_temperature_points(const double *pressure, size_t count,
                                                      const double *absolute_salinity,
                                                      const double *potential_temperature,
                                                      double *temperature);
/* In these four the output must not be the salinity array. */
STERICOL_API void stericol_conservative_temperature_of_in_situ_row(double pressure, size_t count,
                                                                   const double *absolute_salinity,
                                                                   const double *temperature,
                                                                   double *conservative_temperature);
STERICOL_API void stericol_conservative_temperature_of_in_situ_points(const double *pressure, size_t count,
                                                                      const double *absolute_salinity,
                                                                      const double *temperature,
                                                                      double *conservative_temperature);
STERICOL_API void stericol_in_situ_temperature_of_conservative_row(double pressure, size_t count,
                                                                   const double *absolute_salinity,
                                                                   const double *conservative_temperature,
                                                                   double *temperature);
STERICOL_API void stericol_in_situ_temperature_of_conservative_points(const double *pressure, size_t count,
                                                                      const double *absolute_salinity,
                                                                      const double *conservative_temperature,
                                                                      double *temperature);

/** Temperature on ITS-90 of one on IPTS-68, degC: t90 = t68/1.00024 (Saunders 1990, WOCE Newsletter 10). */
STERICOL_API double stericol_temperature_its90(double temperature_ipts68);

/** Temperature on IPTS-68 of one on ITS-90, degC: t68 = 1.00024 t90. */
STERICOL_API double stericol_temperature_ipts68(double temperature_its90);

/** The same on arrays. */
STERICOL_API void stericol_temperature_its90_array(size_t count, const double *temperature_ipts68,
                                                   double *temperature_its90);
STERICOL_API void stericol_temperature_ipts68_array(size_t count, const double *temperature_its90,
                                                    double *temperature_ipts68);

/* ------------------------------------------------------------------------------------------------------------
 * Gravity, pressure, depth
 */

/**
 * Gravity at a depth, m/s2: 9.780327 (1 + 5.2792e-3 s + 2.32e-5 s^2) (1 + 2.26e-7 z), s = sin^2(latitude)
 * (IOC Manuals and Guides 56, 2010, eq. D.3, with z counted downwards).
 *
 * \param latitude  degrees, -90..90
 * \param depth     m below the surface
 */
STERICOL_API double stericol_gravity(double latitude, double depth);

/**
 * Sea pressure at a depth of the standard ocean, dbar: the p for which the integral of v(35.16504, 0, p')
 * over pressure from 0 to p, times 1e4 Pa/dbar, is g(latitude, 0) (z + 1.13e-7 z^2), by Newton's method on
 * the polynomial's own primitive.  Meant for 0..11000 m.
 */
STERICOL_API double stericol_sea_pressure(double depth, double latitude);

/** The depth of a sea pressure, m: the exact inverse of the function above. */
STERICOL_API double stericol_depth(double pressure, double latitude);

/** The same for `count` depths or pressures at one latitude. */
STERICOL_API void stericol_sea_pressure_array(double latitude, size_t count, const double *depth,
                                              double *pressure);
STERICOL_API void stericol_depth_array(double latitude, size_t count, const double *pressure, double *depth);

/** The same where every point has a latitude of its own: latitude[count]. */
STERICOL_API void stericol_sea_pressure_points(const double *latitude, size_t count, const double *depth,
                                               double *pressure);
STERICOL_API void stericol_depth_points(const double *latitude, size_t count, const double *pressure,
                                        double *depth);

#ifdef __cplusplus
}
#endif

#endif
