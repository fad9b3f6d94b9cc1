/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "support/testing.h"

#include "cf/units.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

static int open_units(void **state)
{
    stericol_cf_units *units;

    if (stericol_cf_units_new(NULL, &units) != STERICOL_OK)
        return -1;
    *state = units;
    return 0;
}

static int close_units(void **state)
{
    stericol_cf_units_free(*state);
    return 0;
}

static void check_conversion(const stericol_cf_units *units, const char *unit, const char *target,
                             double scale, double offset)
{
    double found_scale = NAN, found_offset = NAN;

    if (!stericol_cf_units_convert(units, unit, target, &found_scale, &found_offset)) {
        print_error("\"%s\" was not converted to \"%s\"\n", unit, target);
        fail();
    }
    if (!(fabs(found_scale - scale) <= 4e-15 * fabs(scale)))
        print_error("\"%s\" to \"%s\":\n", unit, target);
    assert_relative(found_scale, scale, 4e-15); /* a few roundings */
    assert_close(found_offset, offset, 1e-12);  /* a few roundings of 459.67 */
}

static void check_refused(const stericol_cf_units *units, const char *unit, const char *target)
{
    double scale = -1, offset = -2;

    if (stericol_cf_units_convert(units, unit, target, &scale, &offset)) {
        print_error("\"%s\" was converted to \"%s\"\n", unit ? unit : "NULL", target);
        fail();
    }
    assert_same_number(scale, -1);
    assert_same_number(offset, -2);
}

/* Spellings met in real files: common practice, no source. */
static const char *const per_thousand[] = {"PSU",
                                           "psu",
                                           "PPT",
                                           "ppt",
                                           "p.s.u.",
                                           "pss",
                                           "PSS-78",
                                           "PSS78",
                                           "1e-3",
                                           "1E-3",
                                           "1.e-3",
                                           "0.001",
                                           ".001",
                                           "g/kg",
                                           "g kg-1",
                                           "G/KG",
                                           "g kg^-1",
                                           "g kg\xE2\x81\xBB\xC2\xB9",
                                           "g.kg-1",
                                           "psu (PSS-78)",
                                           "PSU (practical salinity)",
                                           "1e-3 (PSS-78)",
                                           "1 (PSS-78)",
                                           "[psu]",
                                           "practical_salinity_unit",
                                           "Practical Salinity Units",
                                           "parts per thousand",
                                           "parts_per_thousand",
                                           "o/oo",
                                           "\xE2\x80\xB0",
                                           "per mil",
                                           "10^-3",
                                           "1",
                                           "1.0",
                                           "unitless",
                                           " psu ",
                                           "mg/g",
                                           "1/1000",
                                           "g per kg"};
static const char *const celsius[] = {"DEG C",
                                      "deg C",
                                      "Degree_C",
                                      "degC",
                                      "degrees C",
                                      "deg C (ITS-90)",
                                      "deg C, ITS-90",
                                      "degC IPTS-68",
                                      "degree_Celsius",
                                      "Celsius",
                                      "celsius",
                                      "CELSIUS",
                                      "\xC2\xB0\x43",
                                      "\xC2\xB0 C",
                                      "\xC2\xBA\x43",
                                      "\xB0\x43",
                                      "\xC3\x82\xC2\xB0\x43",
                                      "\xE2\x84\x83",
                                      "C",
                                      "c",
                                      "degree_C",
                                      "degrees_C",
                                      "degrees_Celsius",
                                      "Degrees Celsius",
                                      "deg_C",
                                      "DegC",
                                      "Deg. C",
                                      "oC",
                                      "degree_Centigrade",
                                      "[deg C]",
                                      "degrees (C)",
                                      "degree Celcius"};
static const char *const kelvin[] = {"K",      "k",       "kelvin",        "Kelvin",
                                     "KELVIN", "Kelvins", "degree_Kelvin", "degrees_Kelvin",
                                     "deg K",  "degK",    "deg_K",         "K (ITS-90)"};
static const char *const metres[] = {"m",     "M",     "METERS", "meters", "meter",
                                     "Meter", "metre", "metres", "Metres", "[m]"};
static const char *const decibars[] = {"dbar", "decibar", "decibars", "Decibars", "DECIBAR",
                                       "db",   "dbars",   "DBAR",     "dBar",     "deci-bars"};
static const char *const north[] = {"degrees_north", "degree_north", "degrees_N",     "degree_N",
                                    "degreeN",       "degreesN",     "Degrees North", "degrees_NORTH",
                                    "deg N",         "\xC2\xB0N"};
static const char *const east[] = {"degrees_east", "degree_east", "degrees_E",    "degree_E",
                                   "degreeE",      "degreesE",    "Degrees East", "degrees_EAST",
                                   "deg E",        "\xC2\xB0\x45"};

#define EACH(list, index) (size_t index = 0; index < sizeof(list) / sizeof *(list); index++)

static void spellings_of_real_files_are_known(void **state)
{
    for
        EACH(per_thousand, i)
        {
            check_conversion(*state, per_thousand[i], "1e-3", 1.0, 0.0);
            check_conversion(*state, per_thousand[i], "g/kg", 1.0, 0.0);
            assert_int_equal(stericol_cf_units_quantity(*state, per_thousand[i]),
                             STERICOL_CF_QUANTITY_SALINITY);
        }
    for
        EACH(celsius, i)
        {
            check_conversion(*state, celsius[i], "degree_Celsius", 1.0, 0.0);
            check_conversion(*state, celsius[i], "kelvin", 1.0,
                             273.15); /* definition of the degree Celsius, SI brochure 9th ed. */
            assert_int_equal(stericol_cf_units_quantity(*state, celsius[i]),
                             STERICOL_CF_QUANTITY_TEMPERATURE);
        }
    for
        EACH(kelvin, i)
        {
            check_conversion(*state, kelvin[i], "degree_Celsius", 1.0, -273.15);
            assert_int_equal(stericol_cf_units_quantity(*state, kelvin[i]), STERICOL_CF_QUANTITY_TEMPERATURE);
        }
    for
        EACH(metres, i)
        {
            check_conversion(*state, metres[i], "m", 1.0, 0.0);
            assert_int_equal(stericol_cf_units_quantity(*state, metres[i]), STERICOL_CF_QUANTITY_LENGTH);
        }
    for
        EACH(decibars, i)
        {
            check_conversion(*state, decibars[i], "dbar", 1.0, 0.0);
            assert_int_equal(stericol_cf_units_quantity(*state, decibars[i]), STERICOL_CF_QUANTITY_PRESSURE);
        }
    for
        EACH(north, i)
        {
            check_conversion(*state, north[i], "degree_north", 1.0, 0.0);
            check_refused(*state, north[i], "degree_east");
            assert_int_equal(stericol_cf_units_quantity(*state, north[i]), STERICOL_CF_QUANTITY_LATITUDE);
        }
    for
        EACH(east, i)
        {
            check_conversion(*state, east[i], "degree_east", 1.0, 0.0);
            check_refused(*state, east[i], "degree_north");
            assert_int_equal(stericol_cf_units_quantity(*state, east[i]), STERICOL_CF_QUANTITY_LONGITUDE);
        }
}

/* Factors by the SI brochure, 9th ed.; the foot, 0.3048 m, and the fathom by the US survey foot are
 * UDUNITS-2's. */
static void units_are_scaled(void **state)
{
    check_conversion(*state, "kg/kg", "1e-3", 1000.0, 0.0);
    check_conversion(*state, "kg kg-1", "1e-3", 1000.0, 0.0);
    check_conversion(*state, "%", "1e-3", 10.0, 0.0);
    check_conversion(*state, "parts per hundred", "1e-3", 10.0, 0.0);
    check_conversion(*state, "psu", "1", 0.001, 0.0);
    check_conversion(*state, "mg/kg", "1e-3", 1e-3, 0.0);
    check_conversion(*state, "mol/mol", "1e-3", 1000.0, 0.0);
    check_conversion(*state, "1", "1", 1.0, 0.0);
    check_conversion(*state, "degF", "degree_Celsius", 5.0 / 9.0, -160.0 / 9.0);
    check_conversion(*state, "km", "m", 1000.0, 0.0);
    check_conversion(*state, "cm", "m", 0.01, 0.0);
    check_conversion(*state, "feet", "m", 0.3048, 0.0);
    check_conversion(*state, "Pa", "dbar", 1e-4, 0.0);
    check_conversion(*state, "hPa", "dbar", 0.01, 0.0);
    check_conversion(*state, "mb", "dbar", 0.01, 0.0);
    check_conversion(*state, "kPa", "dbar", 0.1, 0.0);
    check_conversion(*state, "MPa", "dbar", 100.0, 0.0);
    check_conversion(*state, "mPa", "dbar", 1e-7, 0.0); /* the case matters beyond the table */
    check_conversion(*state, "bar", "dbar", 10.0, 0.0);
    check_conversion(*state, "degrees_south", "degree_north", -1.0, 0.0);
    check_conversion(*state, "degrees_west", "degree_east", -1.0, 0.0);
    check_conversion(*state, "radian", "degree_north", 57.29577951308232, 0.0); /* 180/pi */
    check_conversion(*state, "degrees", "degree_east", 1.0, 0.0);
    check_conversion(*state, "J m-2", "J m-2", 1.0, 0.0);
}

static void what_does_not_convert_is_refused(void **state)
{
    char longer[300];

    memset(longer, 'm', sizeof longer - 1);
    longer[sizeof longer - 1] = '\0';
    check_refused(*state, NULL, "m");
    check_refused(*state, "", "1");
    check_refused(*state, "  ", "1e-3");
    check_refused(*state, longer, "m");
    check_refused(*state, "sponges", "m");
    check_refused(*state, "|", "m");
    check_refused(*state, "psu|ppt", "1e-3");
    check_refused(*state, "m(((((", "m");
    check_refused(*state, "m", "dbar");
    check_refused(*state, "K", "m");
    check_refused(*state, "1/m", "m");        /* a reciprocal is no scale */
    check_refused(*state, "lg(re 1 m)", "m"); /* nor is a logarithm */
    check_refused(*state, "degrees", "1e-3"); /* an angle is no salinity */
    check_refused(*state, "degree_north", "1");
    check_refused(*state, "1", "degree_north"); /* nor a salinity an angle */
    check_refused(*state, "coulomb", "degree_Celsius");
    check_refused(*state, "m", "no such target");
}

static void quantities_are_told(void **state)
{
    static const struct {
        const char *unit;
        stericol_cf_quantity quantity;
    } rows[] = {
        {"mdegC", STERICOL_CF_QUANTITY_TEMPERATURE},
        {"degF", STERICOL_CF_QUANTITY_TEMPERATURE},
        {"nautical_mile", STERICOL_CF_QUANTITY_LENGTH},
        {"MPa", STERICOL_CF_QUANTITY_PRESSURE},
        {"atm", STERICOL_CF_QUANTITY_PRESSURE},
        {"kg/kg", STERICOL_CF_QUANTITY_SALINITY},
        {"degrees_south", STERICOL_CF_QUANTITY_LATITUDE},
        {"degrees_west", STERICOL_CF_QUANTITY_LONGITUDE},
        {"days since 1950-01-01 00:00:00 +0:00", STERICOL_CF_QUANTITY_TIME},
        {"Hours Since 1800-1-1", STERICOL_CF_QUANTITY_TIME},
        {"day as %Y%m%d.%f", STERICOL_CF_QUANTITY_TIME},
        {"days", STERICOL_CF_QUANTITY_UNKNOWN},
        {"degrees", STERICOL_CF_QUANTITY_UNKNOWN},
        {"radian", STERICOL_CF_QUANTITY_UNKNOWN},
        {"1/m", STERICOL_CF_QUANTITY_UNKNOWN},
        {"K/m", STERICOL_CF_QUANTITY_UNKNOWN},
        {"m s-1", STERICOL_CF_QUANTITY_UNKNOWN},
        {"kg m-3", STERICOL_CF_QUANTITY_UNKNOWN},
        {"level", STERICOL_CF_QUANTITY_UNKNOWN},
        {"coulomb", STERICOL_CF_QUANTITY_UNKNOWN},
        {"", STERICOL_CF_QUANTITY_UNKNOWN},
        {NULL, STERICOL_CF_QUANTITY_UNKNOWN},
    };

    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        const stericol_cf_quantity found = stericol_cf_units_quantity(*state, rows[i].unit);

        if (found != rows[i].quantity)
            print_error("\"%s\" is told as %d\n", rows[i].unit ? rows[i].unit : "NULL", (int)found);
        assert_int_equal(found, rows[i].quantity);
    }
}

/* UDUNITS-2 talks on standard error by default; nothing of ours may. */
static void nothing_is_said_on_standard_error(void **state)
{
    const int kept = dup(STDERR_FILENO);
    FILE *heard = tmpfile();
    double scale, offset;
    long length;

    assert_non_null(heard);
    assert_true(kept >= 0 && dup2(fileno(heard), STDERR_FILENO) >= 0);
    (void)stericol_cf_units_convert(*state, "sponges", "m", &scale, &offset);
    (void)stericol_cf_units_convert(*state, "m", "dbar", &scale, &offset);
    (void)stericol_cf_units_convert(*state, "m((", "no such target", &scale, &offset);
    (void)stericol_cf_units_quantity(*state, "1/sponge");
    (void)fflush(stderr);
    assert_true(dup2(kept, STDERR_FILENO) >= 0);
    length = lseek(fileno(heard), 0, SEEK_END) >= 0 ? (long)lseek(fileno(heard), 0, SEEK_CUR) : -1;
    (void)close(kept);
    (void)fclose(heard);
    assert_int_equal(length, 0);
}

static void a_missing_database_is_a_fault(void **state)
{
    stericol_context *context = stericol_context_new();
    stericol_cf_units *units = NULL;

    (void)state;
    assert_int_equal(setenv("UDUNITS2_XML_PATH", "/no/such/folder/udunits2.xml", 1), 0);
    assert_int_equal(stericol_cf_units_new(context, &units), STERICOL_FAULT);
    assert_int_equal(unsetenv("UDUNITS2_XML_PATH"), 0);
    assert_null(units);
    assert_non_null(
        strstr(stericol_context_message(context), "UDUNITS-2 finds no database of units; install the data"));
    stericol_context_free(context);
    stericol_cf_units_free(NULL);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(spellings_of_real_files_are_known), cmocka_unit_test(units_are_scaled),
        cmocka_unit_test(what_does_not_convert_is_refused),  cmocka_unit_test(quantities_are_told),
        cmocka_unit_test(nothing_is_said_on_standard_error), cmocka_unit_test(a_missing_database_is_a_fault),
    };

    return cmocka_run_group_tests_name("cf_units", tests, open_units, close_units);
}
