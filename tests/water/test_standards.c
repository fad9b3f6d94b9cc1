/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Published numbers, row by row; the sources stand in the tables. */
#include "water/water_tests.h"

#include "support/testing.h"
#include "water/table.h"

#include "stericol/water.h"
#include "water/eos80.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))

/* ---- liquid water
 * -------------------------------------------------------------------------------------------- */

#define WATER_MEMBER(name, member)                                                                           \
    static double name(double unused, double t, double p)                                                    \
    {                                                                                                        \
        stericol_gibbs g;                                                                                    \
        (void)unused;                                                                                        \
        stericol_gibbs_water(t, p, &g);                                                                      \
        return g.member;                                                                                     \
    }
WATER_MEMBER(water_g, g)
WATER_MEMBER(water_g_t, g_t)
WATER_MEMBER(water_g_p, g_p)
WATER_MEMBER(water_g_tt, g_tt)
WATER_MEMBER(water_g_tp, g_tp)
WATER_MEMBER(water_g_pp, g_pp)

/* Through the whole of seawater at salinity zero, which must be pure water. */
#define WATER_PROPERTY(name, member)                                                                         \
    static double name(double unused, double t, double p)                                                    \
    {                                                                                                        \
        stericol_properties properties;                                                                      \
        (void)unused;                                                                                        \
        stericol_seawater_properties(0.0, t, p, &properties);                                                \
        return properties.member;                                                                            \
    }
WATER_PROPERTY(water_enthalpy, enthalpy)
WATER_PROPERTY(water_helmholtz, helmholtz_energy)
WATER_PROPERTY(water_internal_energy, internal_energy)
WATER_PROPERTY(water_entropy, entropy)
WATER_PROPERTY(water_density, density)
WATER_PROPERTY(water_heat_capacity, heat_capacity)
WATER_PROPERTY(water_sound_speed, sound_speed)

static void liquid_water_agrees_with_its_standard(void **state)
{
    static const table_quantity quantities[] = {
        {"water_g", water_g},
        {"water_g_t", water_g_t},
        {"water_g_p", water_g_p},
        {"water_g_tt", water_g_tt},
        {"water_g_tp", water_g_tp},
        {"water_g_pp", water_g_pp},
        {"water_enthalpy", water_enthalpy},
        {"water_helmholtz", water_helmholtz},
        {"water_internal_energy", water_internal_energy},
        {"water_entropy", water_entropy},
        {"water_density", water_density},
        {"water_heat_capacity", water_heat_capacity},
        {"water_sound_speed", water_sound_speed},
    };

    (void)state;
    check_table("gibbs_water.txt", quantities, COUNT(quantities), 39, 3);
}

/* ---- the saline part
 * ------------------------------------------------------------------------------------------ */

#define SALINE_MEMBER(name, member, factor)                                                                  \
    static double name(double s, double t, double p)                                                         \
    {                                                                                                        \
        stericol_gibbs g;                                                                                    \
        stericol_gibbs_saline(s, t, p, &g);                                                                  \
        return g.member * (factor);                                                                          \
    }
SALINE_MEMBER(saline_g, g, 1.0)
/* The standard has salinity in kg/kg. */
SALINE_MEMBER(saline_g_s, g_s, 1000.0)
SALINE_MEMBER(saline_g_sp, g_sp, 1000.0)
SALINE_MEMBER(saline_g_t, g_t, 1.0)
SALINE_MEMBER(saline_g_p, g_p, 1.0)
SALINE_MEMBER(saline_g_tt, g_tt, 1.0)
SALINE_MEMBER(saline_g_tp, g_tp, 1.0)
SALINE_MEMBER(saline_g_pp, g_pp, 1.0)

static void the_saline_part_agrees_with_its_standard(void **state)
{
    static const table_quantity quantities[] = {
        {"saline_g", saline_g},       {"saline_g_s", saline_g_s},   {"saline_g_sp", saline_g_sp},
        {"saline_g_t", saline_g_t},   {"saline_g_p", saline_g_p},   {"saline_g_tt", saline_g_tt},
        {"saline_g_tp", saline_g_tp}, {"saline_g_pp", saline_g_pp},
    };

    (void)state;
    check_table("gibbs_saline.txt", quantities, COUNT(quantities), 24, 2);
}

/* ---- seawater by conservative temperature
 * ----------------------------------------------------------------------- */

static stericol_properties seawater(double s, double conservative, double p)
{
    stericol_properties properties;

    stericol_seawater_properties(s, stericol_in_situ_temperature_of_conservative(s, conservative, p), p,
                                 &properties);
    return properties;
}

static double gibbs_density(double s, double conservative, double p)
{
    return seawater(s, conservative, p).density;
}

static double gibbs_expansion(double s, double conservative, double p)
{
    return seawater(s, conservative, p).thermal_expansion;
}

static double gibbs_contraction(double s, double conservative, double p)
{
    return seawater(s, conservative, p).haline_contraction;
}

static double gibbs_heat_capacity(double s, double conservative, double p)
{
    return seawater(s, conservative, p).heat_capacity;
}

static double gibbs_volume(double s, double conservative, double p)
{
    const stericol_water water = {STERICOL_EQUATION_GIBBS, 0.0, 0.0, 0.0};
    double v;

    stericol_volume_row(&water, p, 1, &s, &conservative, &v);
    return v;
}

static double gibbs_in_situ(double s, double conservative, double p)
{
    return stericol_in_situ_temperature_of_conservative(s, conservative, p);
}

static double gibbs_potential(double s, double conservative, double unused)
{
    (void)unused;
    return stericol_potential_temperature_of_conservative(s, conservative);
}

static double conservative(double s, double potential, double unused)
{
    (void)unused;
    return stericol_conservative_temperature(s, potential);
}

static double surface_enthalpy(double s, double t, double unused)
{
    stericol_properties properties;

    (void)unused;
    stericol_seawater_properties(s, t, 0.0, &properties);
    return properties.enthalpy;
}

static double gibbs_potential_density(double practical, double potential, double p)
{
    const double s = stericol_reference_salinity(practical);
    stericol_properties properties;

    stericol_seawater_properties(s, stericol_in_situ_temperature(s, potential, p), p, &properties);
    return properties.density;
}

static void seawater_agrees_with_another_program(void **state)
{
    static const table_quantity quantities[] = {
        {"gibbs_volume", gibbs_volume},
        {"gibbs_density", gibbs_density},
        {"gibbs_expansion", gibbs_expansion},
        {"gibbs_contraction", gibbs_contraction},
        {"gibbs_heat_capacity", gibbs_heat_capacity},
        {"gibbs_in_situ", gibbs_in_situ},
        {"gibbs_potential", gibbs_potential},
        {"gibbs_potential_density", gibbs_potential_density},
        {"conservative", conservative},
        {"surface_enthalpy", surface_enthalpy},
    };

    (void)state;
    check_table("gibbs_computed.txt", quantities, COUNT(quantities), 123, 4);
}

/* ---- the polynomial
 * ---------------------------------------------------------------------------------------------- */

static void the_polynomial_agrees_with_its_paper(void **state)
{
    static const table_quantity quantities[] = {
        {"polynomial_volume", stericol_specific_volume},
        {"polynomial_expansion", stericol_thermal_expansion},
        {"polynomial_contraction", stericol_haline_contraction},
    };

    (void)state;
    check_table("polynomial.txt", quantities, COUNT(quantities), 3, 2);
}

/* ---- EOS-80
 * ------------------------------------------------------------------------------------------------------- */

static double gamma_anomaly(double s, double t, double p)
{
    return stericol_eos80_density(s, t, p) - 1000.0;
}

static double eos80_potential(double s, double t, double p)
{
    return stericol_eos80_potential_temperature(s, t, p, 0.0);
}

static double eos80_depth(double latitude, double unused, double p)
{
    (void)unused;
    return stericol_eos80_depth(p, latitude);
}

static double potential_density(double s, double potential, double p)
{
    return stericol_eos80_density(s, stericol_eos80_in_situ_temperature(s, potential, p), p);
}

static void eos80_agrees_with_its_standard(void **state)
{
    static const table_quantity quantities[] = {
        {"density", stericol_eos80_density},
        {"bulk_modulus", stericol_eos80_bulk_modulus},
        {"anomaly", stericol_eos80_volume_anomaly},
        {"gamma", gamma_anomaly},
        {"heat_capacity", stericol_eos80_heat_capacity},
        {"lapse_rate", stericol_eos80_lapse_rate},
        {"potential", eos80_potential},
        {"depth", eos80_depth},
        {"potential_density", potential_density},
    };

    (void)state;
    check_table("eos80.txt", quantities, COUNT(quantities), 84, 4);
}

static double expansion_in_situ(double s, double t, double p)
{
    const stericol_sloped v = stericol_eos80_volume_in_situ(s, t, p);

    return v.by_temperature / v.value;
}

static double contraction_in_situ(double s, double t, double p)
{
    const stericol_sloped v = stericol_eos80_volume_in_situ(s, t, p);

    return -v.by_salinity / v.value;
}

static void eos80_slopes_agree_with_handbooks(void **state)
{
    static const table_quantity quantities[] = {
        {"expansion_in_situ", expansion_in_situ},
        {"contraction_in_situ", contraction_in_situ},
    };

    (void)state;
    check_table("eos80_slopes.txt", quantities, COUNT(quantities), 170, 2);
}

/* ---- gravity and pressure
 * ------------------------------------------------------------------------------------------ */

static double gravity(double latitude, double depth, double unused)
{
    (void)unused;
    return stericol_gravity(latitude, depth);
}

static double depth_of_pressure(double latitude, double pressure, double unused)
{
    (void)unused;
    return stericol_depth(pressure, latitude);
}

static double pressure_of_depth(double latitude, double depth, double unused)
{
    (void)unused;
    return stericol_sea_pressure(depth, latitude);
}

static void gravity_and_pressure_agree_with_their_sources(void **state)
{
    static const table_quantity quantities[] = {
        {"gravity", gravity},
        {"depth_of_pressure", depth_of_pressure},
        {"pressure_of_depth", pressure_of_depth},
    };

    (void)state;
    check_table("pressure.txt", quantities, COUNT(quantities), 13, 2);
}

/* The tables are worth nothing if the comparison lets a wrong number through. */
static void the_comparison_rejects_what_is_wrong(void **state)
{
    (void)state;
    assert_true(table_agrees(1.0005, "1.000", "digits", 0.5));
    assert_false(table_agrees(1.00051, "1.000", "digits", 0.5));
    assert_false(table_agrees(-1.0, "1.000", "digits", 0.5));
    assert_true(table_agrees(1.0004e-3, "0.1000e-2", "digits", 0.5));
    assert_false(table_agrees(1.0006e-3, "0.1000e-2", "digits", 0.5));
    assert_true(table_agrees(2.0, "2.1", "absolute", 0.11));
    assert_false(table_agrees(2.0, "2.1", "absolute", 0.09));
    assert_true(table_agrees(2.0, "2.1", "relative", 0.05));
    assert_false(table_agrees(2.0, "2.1", "relative", 0.04));
    assert_false(table_agrees((double)NAN, "2.1", "relative", 1e9));
    assert_false(table_agrees((double)NAN, "2.1", "absolute", 1e9));
    assert_false(table_agrees((double)NAN, "2.1", "digits", 1e9));
}

int run_standard_tests(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(the_comparison_rejects_what_is_wrong),
        cmocka_unit_test(liquid_water_agrees_with_its_standard),
        cmocka_unit_test(the_saline_part_agrees_with_its_standard),
        cmocka_unit_test(seawater_agrees_with_another_program),
        cmocka_unit_test(the_polynomial_agrees_with_its_paper),
        cmocka_unit_test(eos80_agrees_with_its_standard),
        cmocka_unit_test(eos80_slopes_agree_with_handbooks),
        cmocka_unit_test(gravity_and_pressure_agree_with_their_sources),
    };

    return cmocka_run_group_tests_name("standards", tests, NULL, NULL);
}
