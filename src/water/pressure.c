/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "water/constants.h"
#include "water/volume_terms.h"

#include <math.h>

/* IOC Manuals and Guides 56 (2010), eq. D.3. */
#define GRAVITY_EQUATOR 9.780327
#define GRAVITY_SINE_2 5.2792e-3
#define GRAVITY_SINE_4 2.32e-5
#define GRAVITY_DEPTH 2.26e-7

enum { PRESSURE_POWERS = 7 };

/* v(35.16504, 0, p) = sum column[k] z^k, z = p / 1e4 dbar. */
typedef struct standard_column {
    double volume[PRESSURE_POWERS];
} standard_column;

static standard_column make_standard_column(void)
{
#define TERM(i, j, k, c) {i, j, k, c},
#define REFERENCE(m, c) [m] = (c),
    static const struct {
        int i, j, k;
        double c;
    } terms[] = {STERICOL_VOLUME_TERMS(TERM)};
    standard_column column = {{STERICOL_VOLUME_REFERENCE_TERMS(REFERENCE)}};
#undef TERM
#undef REFERENCE
    const double s =
        sqrt((STERICOL_STANDARD_SALINITY + STERICOL_POLYNOMIAL_SALINITY_OFFSET) / STERICOL_REDUCING_SALINITY);
    double power[PRESSURE_POWERS] = {1.0};

    for (int i = 1; i < PRESSURE_POWERS; i++)
        power[i] = power[i - 1] * s;
    for (size_t n = 0; n < sizeof terms / sizeof *terms; n++)
        if (terms[n].j == 0)
            column.volume[terms[n].k] += terms[n].c * power[terms[n].i];
    return column;
}

static double standard_volume(const standard_column *column, double z)
{
    double sum = column->volume[PRESSURE_POWERS - 1];

    for (int k = PRESSURE_POWERS - 2; k >= 0; k--)
        sum = sum * z + column->volume[k];
    return sum;
}

/* The integral of v over pressure from 0, J/kg; z = p / 1e4 dbar, and 1e4 dbar are 1e8 Pa. */
static double standard_work(const standard_column *column, double z)
{
    double sum = column->volume[PRESSURE_POWERS - 1] / PRESSURE_POWERS;

    for (int k = PRESSURE_POWERS - 2; k >= 0; k--)
        sum = sum * z + column->volume[k] / (k + 1);
    return sum * z * STERICOL_REDUCING_PRESSURE_PASCALS;
}

static double surface_gravity(double latitude)
{
    const double sine = sin(latitude * STERICOL_RADIANS_PER_DEGREE), s = sine * sine;

    return GRAVITY_EQUATOR * (1.0 + s * (GRAVITY_SINE_2 + s * GRAVITY_SINE_4));
}

double stericol_gravity(double latitude, double depth)
{
    return surface_gravity(latitude) * (1.0 + GRAVITY_DEPTH * depth);
}

/*
 * Newton from the incompressible guess, which is 2.4 % off at 10000 dbar: the error goes e -> 2.2e-6 e^2 /
 * dbar (half of the compressibility), from 250 dbar to 0.14, 5e-8 and below rounding; the fourth step is for
 * depths that no ocean has.
 */
static double pressure_at(const standard_column *column, double gravity, double depth)
{
    const double work = gravity * depth * (1.0 + 0.5 * GRAVITY_DEPTH * depth);
    double z = work / (column->volume[0] * STERICOL_REDUCING_PRESSURE_PASCALS);

    for (int step = 0; step < 4; step++)
        z -= (standard_work(column, z) - work) /
             (standard_volume(column, z) * STERICOL_REDUCING_PRESSURE_PASCALS);
    return z * STERICOL_REDUCING_PRESSURE;
}

/* The root of g (z + G/2 z^2) = work, in the form that does not cancel for small depths. */
static double depth_at(const standard_column *column, double gravity, double pressure)
{
    const double q = standard_work(column, pressure / STERICOL_REDUCING_PRESSURE) / gravity;

    return 2.0 * q / (1.0 + sqrt(1.0 + 2.0 * GRAVITY_DEPTH * q));
}

double stericol_sea_pressure(double depth, double latitude)
{
    const standard_column column = make_standard_column();

    return pressure_at(&column, surface_gravity(latitude), depth);
}

double stericol_depth(double pressure, double latitude)
{
    const standard_column column = make_standard_column();

    return depth_at(&column, surface_gravity(latitude), pressure);
}

void stericol_sea_pressure_array(double latitude, size_t count, const double *depth, double *pressure)
{
    const standard_column column = make_standard_column();
    const double gravity = surface_gravity(latitude);

    for (size_t i = 0; i < count; i++)
        pressure[i] = pressure_at(&column, gravity, depth[i]);
}

void stericol_depth_array(double latitude, size_t count, const double *pressure, double *depth)
{
    const standard_column column = make_standard_column();
    const double gravity = surface_gravity(latitude);

    for (size_t i = 0; i < count; i++)
        depth[i] = depth_at(&column, gravity, pressure[i]);
}

void stericol_sea_pressure_points(const double *latitude, size_t count, const double *depth, double *pressure)
{
    const standard_column column = make_standard_column();

    for (size_t i = 0; i < count; i++)
        pressure[i] = pressure_at(&column, surface_gravity(latitude[i]), depth[i]);
}

void stericol_depth_points(const double *latitude, size_t count, const double *pressure, double *depth)
{
    const standard_column column = make_standard_column();

    for (size_t i = 0; i < count; i++)
        depth[i] = depth_at(&column, surface_gravity(latitude[i]), pressure[i]);
}
