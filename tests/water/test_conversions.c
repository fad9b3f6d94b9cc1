/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Conversions there and back, and against their definitions. */
#include "water/water_tests.h"

#include "support/testing.h"

#include "stericol/water.h"

/* The ocean and its estuaries: salinity, temperature, pressure; hot water does not go deep. */
typedef void point_check(double s, double t, double p);

static void for_the_ocean(point_check *check)
{
    static const double salinities[] = {0.0, 0.5, 5.0, 15.0, 25.0, 30.0, 33.0, 35.16504, 37.0, 40.0, 42.0};
    static const double pressures[] = {0.0, 10.0, 200.0, 1000.0, 2000.0, 4000.0, 6000.0, 10000.0};

    for (size_t i = 0; i < sizeof salinities / sizeof *salinities; i++)
        for (size_t k = 0; k < sizeof pressures / sizeof *pressures; k++)
            for (double t = -2.0; t <= (pressures[k] > 2500.0 ? 15.0 : 36.0); t += 1.9)
                check(salinities[i], t, pressures[k]);
}

/*
 * Rounding: entropy reaches 500 J/(kg K) and one step of the last of its digits is worth 1e-13 * 300 K / cp
 * = 1e-14 K; enthalpy 150 kJ/kg, 3e-11 / cp = 1e-14 K; a sum of twenty terms loses one digit of them.
 */
#define TEMPERATURE_ROUNDING 5e-13

static void there_and_back(double s, double t, double p)
{
    const double theta = stericol_potential_temperature(s, t, p);
    const double conservative = stericol_conservative_temperature(s, theta);

    assert_close(stericol_in_situ_temperature(s, theta, p), t, TEMPERATURE_ROUNDING);
    assert_close(stericol_potential_temperature_of_conservative(s, conservative), theta,
                 TEMPERATURE_ROUNDING);
    assert_same_number(stericol_conservative_temperature_of_in_situ(s, t, p), conservative);
    assert_close(stericol_in_situ_temperature_of_conservative(s, conservative, p), t, TEMPERATURE_ROUNDING);
}

/* The definitions, with the Gibbs function as published, logarithms included. */
static void definitions_hold(double s, double t, double p)
{
    const double theta = stericol_potential_temperature(s, t, p);
    stericol_properties here, surface;

    stericol_seawater_properties(s, t, p, &here);
    stericol_seawater_properties(s, theta, 0.0, &surface);
    /* 1e-9 K, as promised, is 1e-9 * cp / T = 1.4e-8 J/(kg K); rounding leaves 1e-11. */
    assert_close(surface.entropy, here.entropy, 1e-11);
    /* The logarithms that are left out are worth 2e-12 J/kg, rounding 2e-10 J/kg. */
    assert_close(stericol_conservative_temperature(s, theta) * STERICOL_HEAT_CAPACITY, surface.enthalpy,
                 5e-10);
}

static void temperatures_go_there_and_back(void **state)
{
    (void)state;
    for_the_ocean(there_and_back);
}

static void temperatures_follow_their_definitions(void **state)
{
    (void)state;
    for_the_ocean(definitions_hold);
}

static void the_corners_of_the_gibbs_function_are_reached(void **state)
{
    (void)state;
    /* As far as the headers promise. */
    for (double s = 0.0; s <= 120.0; s += 30.0)
        for (double t = -6.0; t <= 40.0; t += 46.0)
            for (double p = 0.0; p <= 10000.0; p += 5000.0) {
                there_and_back(s, t, p);
                definitions_hold(s, t, p);
            }
}

static void eos80_there_and_back(double s, double t, double p)
{
    const double theta = stericol_eos80_potential_temperature(s, t, p, 0.0);

    /* What two steps of Newton leave of 1e-4 K, 1e-13 K of it, and rounding. */
    assert_close(stericol_eos80_in_situ_temperature(s, theta, p), t, TEMPERATURE_ROUNDING);
}

static void eos80_temperatures_go_there_and_back(void **state)
{
    (void)state;
    for_the_ocean(eos80_there_and_back);
}

static void scales_and_salinities_convert(void **state)
{
    (void)state;
    /* 1.00024 (Saunders 1990) */
    assert_close(stericol_temperature_its90(10.0024), 10.0, 1e-14);
    assert_close(stericol_temperature_ipts68(10.0), 10.0024, 1e-14);
    /* 35.16504 (Millero et al. 2008) */
    assert_close(stericol_reference_salinity(35.0), 35.16504, 1e-14);
    assert_close(stericol_absolute_salinity(35.0, 0.02), 35.18504, 1e-14);
    assert_close(stericol_practical_salinity(35.18504, 0.02), 35.0, 2e-14);
    assert_close(stericol_practical_salinity(35.16504, 0.0), 35.0, 2e-14);
    for (double x = -3.0; x <= 42.0; x += 0.37) {
        assert_close(stericol_temperature_its90(stericol_temperature_ipts68(x)), x, 1e-14);
        assert_close(stericol_practical_salinity(stericol_absolute_salinity(x, 0.017), 0.017), x, 2e-14);
    }
}

enum { POINTS = 37 };

static void arrays_convert_as_points_do(void **state)
{
    double practical[POINTS], anomaly[POINTS], s[POINTS], t[POINTS], p[POINTS], out[POINTS], back[POINTS];

    (void)state;
    for (int i = 0; i < POINTS; i++) {
        practical[i] = i * 42.0 / POINTS;
        anomaly[i] = i * 1e-3;
        t[i] = -2.0 + i;
        p[i] = 37.0 * i;
    }
    stericol_absolute_salinity_array(POINTS, practical, NULL, s);
    for (int i = 0; i < POINTS; i++)
        assert_same_number(s[i], stericol_reference_salinity(practical[i]));
    stericol_practical_salinity_array(POINTS, s, NULL, back);
    for (int i = 0; i < POINTS; i++)
        assert_same_number(back[i], stericol_practical_salinity(s[i], 0.0));
    stericol_absolute_salinity_array(POINTS, practical, anomaly, s);
    stericol_practical_salinity_array(POINTS, s, anomaly, back);
    for (int i = 0; i < POINTS; i++) {
        assert_same_number(s[i], stericol_absolute_salinity(practical[i], anomaly[i]));
        assert_same_number(back[i], stericol_practical_salinity(s[i], anomaly[i]));
    }
    stericol_temperature_its90_array(POINTS, t, out);
    stericol_temperature_ipts68_array(POINTS, out, back);
    for (int i = 0; i < POINTS; i++) {
        assert_same_number(out[i], stericol_temperature_its90(t[i]));
        assert_same_number(back[i], stericol_temperature_ipts68(out[i]));
    }

    stericol_conservative_temperature_array(POINTS, s, t, out);
    stericol_potential_temperature_of_conservative_array(POINTS, s, t, back);
    for (int i = 0; i < POINTS; i++) {
        assert_same_number(out[i], stericol_conservative_temperature(s[i], t[i]));
        assert_same_number(back[i], stericol_potential_temperature_of_conservative(s[i], t[i]));
    }

/* One pressure, and a pressure for each point. */
#define CHECK_BOTH(function)                                                                                 \
    do {                                                                                                     \
        function##_row(1234.5, POINTS, s, t, out);                                                           \
        function##_points(p, POINTS, s, t, back);                                                            \
        for (int i = 0; i < POINTS; i++) {                                                                   \
            assert_same_number(out[i], function(s[i], t[i], 1234.5));                                        \
            assert_same_number(back[i], function(s[i], t[i], p[i]));                                         \
        }                                                                                                    \
    } while (0)
    CHECK_BOTH(stericol_potential_temperature);
    CHECK_BOTH(stericol_in_situ_temperature);
    CHECK_BOTH(stericol_conservative_temperature_of_in_situ);
    CHECK_BOTH(stericol_in_situ_temperature_of_conservative);
    CHECK_BOTH(stericol_eos80_in_situ_temperature);

    stericol_eos80_potential_temperature_row(1234.5, POINTS, s, t, out);
    stericol_eos80_potential_temperature_points(p, POINTS, s, t, back);
    for (int i = 0; i < POINTS; i++) {
        assert_same_number(out[i], stericol_eos80_potential_temperature(s[i], t[i], 1234.5, 0.0));
        assert_same_number(back[i], stericol_eos80_potential_temperature(s[i], t[i], p[i], 0.0));
    }
    stericol_eos80_heat_capacity_row(1234.5, POINTS, s, t, out);
    for (int i = 0; i < POINTS; i++)
        assert_same_number(out[i], stericol_eos80_heat_capacity(s[i], t[i], 1234.5));
}

static void pressure_and_depth_go_there_and_back(void **state)
{
    double depths[40], latitudes[40], pressures[40], back[40];

    (void)state;
    for (double latitude = -90.0; latitude <= 90.0; latitude += 22.5)
        for (double depth = 0.0; depth <= 11000.0; depth += 137.0) {
            const double p = stericol_sea_pressure(depth, latitude);

            assert_close(stericol_depth(p, latitude), depth, 1e-11); /* rounding at 11000 m: 2e-12 */
            assert_same_number(stericol_sea_pressure(depth, -latitude), p);
        }
    assert_same_number(stericol_sea_pressure(0.0, 10.0), 0.0);
    assert_same_number(stericol_depth(0.0, 10.0), 0.0);
    assert_nan(stericol_sea_pressure((double)NAN, 0.0));
    assert_nan(stericol_sea_pressure(1.0, (double)NAN));
    assert_nan(stericol_depth((double)NAN, 0.0));

    for (int i = 0; i < 40; i++) {
        depths[i] = 100.0 * i;
        latitudes[i] = -80.0 + 4.0 * i;
    }
    stericol_sea_pressure_array(40.0, 40, depths, pressures);
    stericol_depth_array(40.0, 40, pressures, back);
    for (int i = 0; i < 40; i++) {
        assert_same_number(pressures[i], stericol_sea_pressure(depths[i], 40.0));
        assert_same_number(back[i], stericol_depth(pressures[i], 40.0));
    }
    stericol_sea_pressure_points(latitudes, 40, depths, pressures);
    stericol_depth_points(latitudes, 40, pressures, back);
    for (int i = 0; i < 40; i++) {
        assert_same_number(pressures[i], stericol_sea_pressure(depths[i], latitudes[i]));
        assert_same_number(back[i], stericol_depth(pressures[i], latitudes[i]));
    }
}

/* The definition by another road: Simpson's rule over the specific volume, and over gravity. */
static void pressure_follows_its_definition(void **state)
{
    (void)state;
    for (double depth = 500.0; depth <= 10500.0; depth += 2000.0) {
        const double latitude = 45.0, p = stericol_sea_pressure(depth, latitude);
        double work = 0.0, potential;

        for (int i = 0; i <= 200; i++) {
            const double weight = i == 0 || i == 200 ? 1.0 : i % 2 == 1 ? 4.0 : 2.0;

            work += weight * stericol_specific_volume(STERICOL_STANDARD_SALINITY, 0.0, p * i / 200.0);
        }
        work *= p / 600.0 * 1e4;
        /* Gravity is linear in depth, so that its mean is that of the middle. */
        potential = depth * stericol_gravity(latitude, 0.5 * depth);
        /* Simpson's error is below 1e-13 here; what remains is the rounding of 200 terms. */
        assert_relative(work, potential, 1e-13);
    }
}

int run_conversion_tests(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(temperatures_go_there_and_back),
        cmocka_unit_test(temperatures_follow_their_definitions),
        cmocka_unit_test(the_corners_of_the_gibbs_function_are_reached),
        cmocka_unit_test(eos80_temperatures_go_there_and_back),
        cmocka_unit_test(scales_and_salinities_convert),
        cmocka_unit_test(arrays_convert_as_points_do),
        cmocka_unit_test(pressure_and_depth_go_there_and_back),
        cmocka_unit_test(pressure_follows_its_definition),
    };

    return cmocka_run_group_tests_name("conversions", tests, NULL, NULL);
}
