/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The integrands of design.md, section 2, at many points. */
#include "column/sweep.h"

#include <string.h>

/* Volumes of the two epochs and the differences that are put down to temperature and to salinity, m3/kg. */
typedef struct differences {
    double volume[2][STERICOL_STRIP];
    double thermosteric[STERICOL_STRIP];
    double halosteric[STERICOL_STRIP];
    /* At the mean state of both epochs. */
    double mid_salinity[STERICOL_STRIP];
    double mid_temperature[STERICOL_STRIP];
    double mid_volume[STERICOL_STRIP];
    double by_temperature[STERICOL_STRIP];
    double by_salinity[STERICOL_STRIP];
} differences;

static void volume_at(const stericol_sweep *sweep, const stericol_points *points, const double *salinity,
                      const double *temperature, double *volume)
{
    if (points->pressures != NULL)
        stericol_volume_points(&sweep->water, points->pressures, points->count, salinity, temperature,
                               volume);
    else
        stericol_volume_row(&sweep->water, points->pressure, points->count, salinity, temperature, volume);
}

static void evaluate_mid_state(const stericol_sweep *sweep, const stericol_points *points, differences *d)
{
    sweep->loops->average(points->count, points->salinity[0], points->salinity[1], d->mid_salinity);
    sweep->loops->average(points->count, points->temperature[0], points->temperature[1], d->mid_temperature);
    if (points->pressures != NULL)
        stericol_volume_points_derivatives(&sweep->water, points->pressures, points->count, d->mid_salinity,
                                           d->mid_temperature, d->mid_volume, d->by_temperature,
                                           d->by_salinity);
    else
        stericol_volume_row_derivatives(&sweep->water, points->pressure, points->count, d->mid_salinity,
                                        d->mid_temperature, d->mid_volume, d->by_temperature, d->by_salinity);
}

/* Two mixed states share the change out: later temperature with earlier salinity, and the other way round. */
static void attribute_by_states(const stericol_sweep *sweep, const stericol_points *points, differences *d)
{
    double warmed[STERICOL_STRIP], salted[STERICOL_STRIP];
    volume_at(sweep, points, points->salinity[0], points->temperature[1], warmed);
    volume_at(sweep, points, points->salinity[1], points->temperature[0], salted);
    const double *v1 = d->volume[0], *v2 = d->volume[1];
    if (sweep->options.attribution == STERICOL_ATTRIBUTION_EARLIER) {
        for (size_t i = 0; i < points->count; i++) {
            d->thermosteric[i] = warmed[i] - v1[i];
            d->halosteric[i] = salted[i] - v1[i];
        }
        return;
    }
    sweep->loops->mean_difference(points->count, warmed, v1, v2, salted, d->thermosteric);
    sweep->loops->mean_difference(points->count, salted, v1, v2, warmed, d->halosteric);
}

/* Expansion and contraction at the mid state; fractions, so they are put on the mean volume of both epochs.
 */
static void attribute_by_slopes(const stericol_points *points, differences *d)
{
    const double *s1 = points->salinity[0], *s2 = points->salinity[1];
    const double *t1 = points->temperature[0], *t2 = points->temperature[1];
    for (size_t i = 0; i < points->count; i++) {
        const double share = 0.5 * (d->volume[0][i] + d->volume[1][i]) / d->mid_volume[i];
        d->thermosteric[i] = d->by_temperature[i] * share * (t2[i] - t1[i]);
        d->halosteric[i] = d->by_salinity[i] * share * (s2[i] - s1[i]);
    }
}

static void find_differences(const stericol_sweep *sweep, const stericol_points *points, differences *d)
{
    evaluate_mid_state(sweep, points, d);
    if (points->averaged_volume[0] != NULL) {
        const size_t bytes = points->count * sizeof(double);
        memcpy(d->volume[0], points->averaged_volume[0], bytes);
        memcpy(d->volume[1], points->averaged_volume[1], bytes);
        memcpy(d->thermosteric, points->averaged_thermosteric, bytes);
        memcpy(d->halosteric, points->averaged_halosteric, bytes);
        return;
    }
    for (int epoch = 0; epoch < 2; epoch++)
        volume_at(sweep, points, points->salinity[epoch], points->temperature[epoch], d->volume[epoch]);
    if (sweep->options.attribution == STERICOL_ATTRIBUTION_LINEAR)
        attribute_by_slopes(points, d);
    else
        attribute_by_states(sweep, points, d);
}

/*
 * Mass of water per unit of the coordinate (kg/m3, or kg/m2 per dbar) and what a difference of volume is
 * multiplied with to become height.  Local: the same, since mass times change of specific volume is change of
 * height.  With a reference density the density change over that constant, (1/v1 - 1/v2)/rho0 = (v2 -
 * v1)/(rho0 v1 v2) per metre, and a metre is mass times mean volume: in pressure coordinates dz = (v1 + v2)/2
 * dp/g.
 */
static void find_weights(const stericol_sweep *sweep, const stericol_points *points, const differences *d,
                         double *mass, double *height)
{
    const double *v1 = d->volume[0], *v2 = d->volume[1];
    const double density = sweep->options.reference_density;
    if (points->scale != NULL)
        memcpy(mass, points->scale, points->count * sizeof *mass);
    else
        sweep->loops->inverse_average(points->count, v1, v2, mass);
    for (size_t i = 0; density > 0.0 && i < points->count; i++)
        height[i] = mass[i] * (0.5 * (v1[i] + v2[i])) / (density * v1[i] * v2[i]);
}

void stericol_integrands(const stericol_sweep *sweep, const stericol_points *points,
                         double part[STERICOL_PARTS][STERICOL_STRIP])
{
    differences d;
    double mass[STERICOL_STRIP], height[STERICOL_STRIP], capacity[STERICOL_STRIP];
    double *parts[STERICOL_PARTS];
    for (size_t p = 0; p < STERICOL_PARTS; p++)
        parts[p] = part[p];
    find_differences(sweep, points, &d);
    find_weights(sweep, points, &d, mass, height);
    stericol_part_sources sources = {
        .volume = {d.volume[0], d.volume[1]},
        .thermosteric = d.thermosteric,
        .halosteric = d.halosteric,
        .temperature = {points->temperature[0], points->temperature[1]},
        .by_temperature = d.by_temperature,
        .mid_volume = d.mid_volume,
        .mass = mass,
        .height = sweep->options.reference_density > 0.0 ? height : mass,
    };
    if (sweep->water.equation == STERICOL_EQUATION_EOS80) {
        /* Heat capacity at the surface belongs to potential temperature; UNESCO 44 (1983), section 5. */
        stericol_eos80_heat_capacity_row(0.0, points->count, d.mid_salinity, d.mid_temperature, capacity);
        sources.capacity = capacity;
    }
    sweep->loops->find_parts(points->count, &sources, parts);
}

const double *stericol_strip_scale(const stericol_sweep *sweep, size_t from, size_t count,
                                   double buffer[STERICOL_STRIP])
{
    if (sweep->scale == NULL)
        return NULL;
    if (sweep->row_length == 1)
        return sweep->scale + from;
    const double scale = sweep->scale[stericol_row_of(sweep, from)];
    for (size_t i = 0; i < count; i++)
        buffer[i] = scale;
    return buffer;
}

/*
 * Pressures at one depth where every column has its own latitude.  Pressure depends on latitude through
 * gravity alone, which varies by half a percent: the cubic through the pressures at four latitudes, in terms
 * of gravity, is exact to 1e-9 dbar down to 11000 m, for a fiftieth of the cost of solving for each column.
 */
static void pressures_at_depth(const stericol_sweep *sweep, size_t from, size_t count, double depth,
                               double pressure[STERICOL_STRIP])
{
    static const double latitude[4] = {0.0, 30.0, 60.0, 90.0};
    double gravity[4], slope[4];
    for (size_t k = 0; k < 4; k++) {
        gravity[k] = stericol_gravity(latitude[k], 0.0);
        slope[k] = stericol_sea_pressure(depth, latitude[k]);
    }
    /* Newton's divided differences. */
    for (size_t order = 1; order < 4; order++)
        for (size_t k = 3; k >= order; k--)
            slope[k] = (slope[k] - slope[k - 1]) / (gravity[k] - gravity[k - order]);
    for (size_t i = 0; i < count; i++) {
        const double g = sweep->gravity[from + i];
        const double inner = slope[2] + (g - gravity[2]) * slope[3];
        pressure[i] = slope[0] + (g - gravity[0]) * (slope[1] + (g - gravity[1]) * inner);
    }
}

void stericol_strip_pressures(const stericol_sweep *sweep, size_t from, double coordinate,
                              const double *coordinates, stericol_points *points,
                              double buffer[STERICOL_STRIP])
{
    const size_t row = stericol_row_of(sweep, from);
    const bool one_row = sweep->row_length > 1;
    points->pressures = NULL;
    if (sweep->options.coordinate == STERICOL_COORDINATE_PRESSURE) {
        points->pressure = coordinate;
        points->pressures = coordinates;
    } else if (coordinates == NULL && one_row) {
        points->pressure = stericol_sea_pressure(coordinate, sweep->latitude[row]);
    } else {
        /* Which path is taken depends on the sweep and the record alone, never on how columns are cut. */
        if (one_row)
            stericol_sea_pressure_array(sweep->latitude[row], points->count, coordinates, buffer);
        else if (coordinates == NULL)
            pressures_at_depth(sweep, from, points->count, coordinate, buffer);
        else
            stericol_sea_pressure_points(sweep->latitude + from, points->count, coordinates, buffer);
        points->pressures = buffer;
    }
}
