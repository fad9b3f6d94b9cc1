/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * `column` as a user runs it.  The outside check is a worked station: R/V Endeavor, cruise 88, station 61,
 * Gulf Stream, 23 August 1982, in: JPOTS Editorial Panel (1991), Processing of Oceanographic Station Data,
 * UNESCO, Paris; reprinted in Stewart, R. H. (2008), Introduction to Physical Oceanography, tables 10.2
 * to 10.4.  The table prints no temperature and salinity that could be used here for its other station, 64.
 */
#include "program/run.h"
#include "support/testing.h"

#include <jansson.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/*
 * The columns of the printed tables: pressure (dbar), temperature (degC, IPTS-68), salinity, specific volume
 * anomaly (1e-8 m3/kg), geopotential anomaly down to the next level (m2/s2: the printed heading, 1e-5,
 * belongs to another unit, as 457.26e-8 m3/kg times 1e4 Pa shows), its sum from 2000 dbar (dynamic metres).
 * `repaired`: one of temperature and salinity was not legible and follows from the printed anomaly, which
 * then checks nothing.
 */
static const struct station_row {
    double pressure, temperature, salinity, anomaly, layer, dynamic_metres;
    bool repaired;
} station_61[] = {
    {0, 25.698, 35.221, 457.24, 0.046, 2.1872, false},
    {1, 25.698, 35.221, 457.28, 0.396, 2.1826, false},
    {10, 26.674, 36.106, 423.15, 0.423, 2.1430, true},
    {20, 26.678, 36.106, 423.66, 0.424, 2.1006, false},
    {30, 26.676, 36.107, 423.98, 0.752, 2.0583, false},
    {50, 24.528, 36.561, 328.48, 0.755, 1.9830, false},
    {75, 22.753, 36.614, 275.66, 0.644, 1.9075, false},
    {100, 21.427, 36.637, 239.15, 0.574, 1.8431, false},
    {125, 20.633, 36.627, 220.06, 0.522, 1.7857, false},
    {150, 19.522, 36.558, 197.62, 0.948, 1.7335, false},
    {200, 18.798, 36.555, 181.67, 0.894, 1.6387, false},
    {250, 18.431, 36.537, 175.77, 0.871, 1.5493, false},
    {300, 18.189, 36.526, 172.46, 1.704, 1.4623, false},
    {400, 17.726, 36.477, 168.30, 1.668, 1.2919, false},
    {500, 17.165, 36.381, 165.22, 1.588, 1.1252, false},
    {600, 15.592, 36.105, 152.33, 1.432, 0.9664, true},
    {700, 13.458, 35.766, 134.03, 1.242, 0.8232, true},
    {800, 11.109, 35.437, 114.36, 1.045, 0.6990, false},
    {900, 8.798, 35.178, 94.60, 0.808, 0.5945, false},
    {1000, 6.292, 35.044, 67.07, 0.619, 0.5137, false},
    {1100, 5.249, 35.004, 56.70, 0.546, 0.4518, false},
    {1200, 4.813, 34.995, 52.58, 0.517, 0.3972, false},
    {1300, 4.554, 34.986, 50.90, 0.504, 0.3454, false},
    {1400, 4.357, 34.977, 49.89, 0.497, 0.2950, false},
    {1500, 4.245, 34.975, 49.56, 1.232, 0.2453, false},
    {1750, 4.028, 34.973, 49.03, 1.221, 0.1221, false},
    {2000, 3.852, 34.975, 48.62, 2.389, 0.0000, false},
    {2500, 3.424, 34.968, 46.92, 2.297, -0.2389, false},
    {3000, 2.963, 34.946, 44.96, 2.170, -0.4686, false},
    {3500, 2.462, 34.920, 41.84, 2.097, -0.6856, false},
    {4000, 2.259, 34.904, 42.02, (double)NAN, -0.8952, false},
};
enum { LEVELS = sizeof station_61 / sizeof *station_61 };

/* ---- reading CSV ---- */

/* The start of field `field` of line `line`, both from 0; fails the test where there is none. */
static const char *field_of(const char *csv, size_t line, size_t field)
{
    for (; line > 0; line--) {
        csv = strchr(csv, '\n');
        assert_non_null(csv);
        csv++;
    }
    for (; field > 0; field--) {
        csv += strcspn(csv, ",\r\n");
        assert_true(*csv == ',');
        csv++;
    }
    return csv;
}

/* The number of the column with that name; fails the test where there is none. */
static size_t column_of(const char *csv, const char *name)
{
    for (size_t i = 0;; i++) {
        const char *start = field_of(csv, 0, i);

        if (strcspn(start, ",\r\n") == strlen(name) && strncmp(start, name, strlen(name)) == 0)
            return i;
    }
}

/* A number of a data row, from 0; NaN where the field is empty. */
static double number_at(const char *csv, size_t row, const char *name)
{
    const char *start = field_of(csv, row + 1, column_of(csv, name));
    char *end;
    double value;

    if (*start == ',' || *start == '\r')
        return (double)NAN;
    value = strtod(start, &end);
    assert_true(*end == ',' || *end == '\r');
    return value;
}

static bool text_at_is(const char *csv, size_t row, size_t column, const char *text)
{
    const char *start = field_of(csv, row + 1, column);

    return strcspn(start, ",\r\n") == strlen(text) && strncmp(start, text, strlen(text)) == 0;
}

static size_t row_count(const char *csv)
{
    size_t count = 0;

    for (; (csv = strchr(csv, '\n')) != NULL; csv++)
        count++;
    return count - 1;
}

/* ---- folders and files ---- */

static int make_folder(void **state)
{
    *state = run_new_folder(TEST_BUILD_FOLDER, "column");
    return *state == NULL ? -1 : 0;
}

static int remove_folder(void **state)
{
    run_remove_folder(*state);
    return 0;
}

static void write_station(const char *folder)
{
    char text[LEVELS * 40 + 80];
    size_t length = (size_t)snprintf(text, sizeof text,
                                     "# Endeavor 88, station 61\npressure [dbar] temperature "
                                     "[degC] practical_salinity\n");

    for (size_t i = 0; i < LEVELS; i++)
        length += (size_t)snprintf(text + length, sizeof text - length, "%.0f %.3f %.3f\n",
                                   station_61[i].pressure, station_61[i].temperature, station_61[i].salinity);
    run_write_file(folder, "station_61.txt", text);
}

/* Runs, expects success and gives standard output; the caller frees. */
static char *output_of(const char *folder, const char *line)
{
    run_result result = run_line(line, folder);

    assert_exit(&result, 0);
    free(result.errors);
    return result.output;
}

/* ---- the worked station ---- */

static void test_station(void **state)
{
    char *csv;
    double above_2000;

    write_station(*state);
    csv = output_of(*state,
                    "column --field station_61.txt --equation eos80 --temperature-scale ipts68 --table csv");
    assert_int_equal(row_count(csv), LEVELS + 2); /* a layer and the column */
    above_2000 = number_at(csv, 26, "geopotential_anomaly_below [m2 s-2]");
    assert_close(number_at(csv, 26, "pressure [dbar]"), 2000.0, 0.0);
    for (size_t i = 0; i < LEVELS; i++) {
        const struct station_row *row = &station_61[i];

        assert_close(number_at(csv, i, "pressure [dbar]"), row->pressure, 0.0);
        /* Half a digit of t (0.0005 K times 3e-7 m3/(kg K)), of S (0.0005 times 7.3e-7 m3/kg) and of the
         * anomaly. */
        if (!row->repaired)
            assert_close(1e8 * number_at(csv, i, "specific_volume_anomaly [m3 kg-1]"), row->anomaly, 0.06);
        /* Printed to 0.001; thick layers sum what the same half digits do over 5e6 Pa. */
        if (i + 1 < LEVELS)
            assert_close(number_at(csv, i, "geopotential_anomaly [m2 s-2]"), row->layer,
                         station_61[i + 1].pressure - row->pressure > 250.0 ? 0.0020 : 0.0006);
        /* Printed to 0.0001 dynamic metres; half digits do not add up over the column. */
        assert_close(0.1 * (number_at(csv, i, "geopotential_anomaly_below [m2 s-2]") - above_2000),
                     row->dynamic_metres, 0.0003);
    }
    free(csv);
}

/* The whole column from the printed anomalies and layers, by hand: 30.8237 m2/s2 by the trapezoid of the
   anomalies; the sum of the printed layers agrees within their half digits (30 times 0.0005). */
static void test_station_whole(void **state)
{
    double anomalies = 0.0, layers = 0.0, whole;
    char *csv;

    for (size_t i = 0; i + 1 < LEVELS; i++) {
        anomalies += 0.5e-8 * (station_61[i].anomaly + station_61[i + 1].anomaly) * 1e4 *
                     (station_61[i + 1].pressure - station_61[i].pressure);
        layers += station_61[i].layer;
    }
    write_station(*state);
    csv = output_of(*state,
                    "column --field station_61.txt --equation eos80 --temperature-scale ipts68 --table csv "
                    "--latitude 36.67");
    whole = number_at(csv, LEVELS + 1, "geopotential_anomaly [m2 s-2]");
    /* Half digits of t and S, 0.05e-8 m3/kg of either sign at each level, count for 5e6 Pa at the four
       deepest: 0.05e-8 * 5e6 * sqrt(4) = 0.005; the others add little. */
    assert_close(whole, anomalies, 0.006);
    assert_close(whole, layers, 0.015);
    /* Steric height is geopotential over gravity; g at 36.67 N by the formula of GRS 80: 9.780327 (1
       + 5.2792e-3 s + 2.32e-5 s2), s = sin2. */
    const double s = pow(sin(36.67 * acos(-1.0) / 180.0), 2.0);
    const double gravity = 9.780327 * (1.0 + 5.2792e-3 * s + 2.32e-5 * s * s);

    assert_relative(number_at(csv, LEVELS + 1, "steric_height [m]"), whole / gravity, 1e-12);
    free(csv);
}

/* The same as text: the numbers of the layer from 200 to 250 dbar as printed, and lines that fit a page. */
static void test_station_text(void **state)
{
    char *text;

    write_station(*state);
    text = output_of(*state, "column --field station_61.txt --equation eos80 --temperature-scale ipts68");
    assert_holds(text, "standard ocean: S = 35, t = 0 degC in situ\n");
    assert_holds(text, "   200.00    250.00        0.893");
    assert_holds(text, "the column ends: end_of_data\n");
    for (const char *line = text; *line != '\0'; line += strcspn(line, "\n") + 1)
        assert_true(strcspn(line, "\n") <= 100);
    free(text);
}

/*
 * TEOS-10 against its own standard ocean: 21.7814 m2/s2 from 0 to 2000 dbar by the full Gibbs function,
 * computed outside this project from the tables of IAPWS SR7-09 and R13-08 (t90 = t68/1.00024, reference
 * salinity); the last digit is its tolerance.  The polynomial: v within a relative 7e-7 of the Gibbs function
 * here, in the difference of two volumes at most 2 * 7e-7 * 9.7e-4 m3/kg over 2e7 Pa = 0.027 m2/s2.
 */
static void test_station_teos10(void **state)
{
    static const struct {
        const char *equation;
        double tolerance;
    } cases[] = {{"gibbs", 0.0001}, {"teos10", 0.027}};

    write_station(*state);
    for (size_t i = 0; i < 2; i++) {
        char line[160];
        char *csv;

        snprintf(line, sizeof line,
                 "column --field station_61.txt --temperature-scale ipts68 --table csv --equation %s",
                 cases[i].equation);
        csv = output_of(*state, line);
        assert_close(number_at(csv, 26, "geopotential_anomaly_above [m2 s-2]"), 21.7814, cases[i].tolerance);
        free(csv);
    }
}

/* ---- forms ---- */

static void check_same(const json_t *object, const char *key, const char *csv, size_t row, const char *name)
{
    const json_t *value = json_object_get(object, key);
    const double expected = number_at(csv, row, name);

    assert_non_null(value);
    if (isnan(expected))
        assert_true(json_is_null(value));
    else
        assert_same_number(json_number_value(value), expected);
}

static void test_json(void **state)
{
    static const char *const keys[][2] = {
        {"upper_depth", "upper_depth [m]"},
        {"lower_depth", "lower_depth [m]"},
        {"pressure", "pressure [dbar]"},
        {"practical_salinity", "practical_salinity [1]"},
        {"potential_temperature", "potential_temperature [degree_Celsius]"},
        {"specific_volume", "specific_volume [m3 kg-1]"},
        {"specific_volume_anomaly", "specific_volume_anomaly [m3 kg-1]"},
        {"thermal_expansion", "thermal_expansion [K-1]"},
        {"haline_contraction", "haline_contraction [1]"},
        {"geopotential_anomaly", "geopotential_anomaly [m2 s-2]"},
        {"steric_height", "steric_height [m]"},
        {"geopotential_anomaly_above", "geopotential_anomaly_above [m2 s-2]"},
        {"geopotential_anomaly_below", "geopotential_anomaly_below [m2 s-2]"},
    };
    char *csv, *text;
    json_t *whole, *levels;

    write_station(*state);
    csv = output_of(*state, "column --field station_61.txt --equation eos80 --table csv");
    text = output_of(*state, "column --field station_61.txt --equation eos80 --table json");
    whole = json_loads(text, 0, NULL);
    assert_non_null(whole);
    levels = json_object_get(whole, "levels");
    assert_int_equal(json_array_size(levels), LEVELS);
    for (size_t i = 0; i < LEVELS; i++)
        for (size_t k = 0; k < sizeof keys / sizeof *keys; k++)
            check_same(json_array_get(levels, i), keys[k][0], csv, i, keys[k][1]);
    assert_int_equal(json_array_size(json_object_get(whole, "layers")), 1);
    check_same(json_object_get(whole, "column"), "steric_height", csv, LEVELS + 1, "steric_height [m]");
    assert_string_equal(json_string_value(json_object_get(whole, "equation")), "eos80");
    assert_string_equal(json_string_value(json_object_get(whole, "coordinate")), "pressure");
    assert_string_equal(json_string_value(json_object_get(json_object_get(whole, "column"), "state")),
                        "end_of_data");
    assert_string_equal(json_string_value(json_object_get(json_object_get(whole, "units"), "steric_height")),
                        "m");
    json_decref(whole);
    free(text);
    free(csv);
}

/* ---- a change ---- */

/* cp0 of IOC Manuals and Guides 56 (2010); gravity at the equator, GRS 80. */
static const double heat_capacity = 3991.86795711963, gravity = 9.780327;

#define LINEAR                                                                                               \
    "--equation linear --expansion 2e-4 --contraction 8e-4 --density 1000 --latitude 0 --gap-reach 200 "     \
    "--table csv"

/*
 * By hand: v = 1e-3 [1 + 2e-4 (Theta - 10) - 8e-4 (SA - 35)].  At 0, 100, 200 dbar the later table is 2, 1, 0
 * K warmer and -0.1, 0, 0.1 g/kg saltier: dv = 4.8e-7, 2e-7, -0.8e-7 m3/kg, of which heat 4e-7, 2e-7, 0. Over
 * 1e6 Pa each: 0.34 and 0.06 m2/s2, of which heat 0.3 and 0.1.
 */
static void test_change_by_hand(void **state)
{
    static const double total[] = {0.34, 0.06}, thermosteric[] = {0.3, 0.1}, warming[] = {1.5, 0.5};
    char *csv;

    run_write_file(*state, "a.csv", "pressure,ct,sa\n0,20,35\n100,15,35\n200,10,35\n");
    run_write_file(*state, "b.csv", "pressure,ct,sa\n0,22,34.9\n100,16,35\n200,10,35.1\n");
    csv = output_of(*state, "column --earlier a.csv --later b.csv " LINEAR);
    assert_int_equal(row_count(csv), 5);
    for (size_t i = 0; i < 2; i++) {
        /* Rounding: some 1e-15 of volumes 1e4 times larger than their difference. */
        assert_close(number_at(csv, i, "steric_height_change [m]"), total[i] / gravity, 1e-12);
        assert_close(number_at(csv, i, "thermosteric_height_change [m]"), thermosteric[i] / gravity, 1e-12);
        assert_close(number_at(csv, i, "halosteric_height_change [m]"),
                     (total[i] - thermosteric[i]) / gravity, 1e-12);
        assert_relative(number_at(csv, i, "heat_content_change [J m-2]"),
                        heat_capacity / gravity * 1e6 * warming[i], 1e-11);
    }
    assert_nan(number_at(csv, 2, "steric_height_change [m]"));
    for (size_t row = 3; row < 5; row++) {
        assert_close(number_at(csv, row, "steric_height_change [m]"), 0.4 / gravity, 1e-12);
        assert_relative(number_at(csv, row, "expansion_efficiency [m3 J-1]"), 0.4 / (heat_capacity * 2e6),
                        1e-11);
    }
    assert_true(text_at_is(csv, 3, 0, "layer") && text_at_is(csv, 3, 1, "complete"));
    assert_true(text_at_is(csv, 4, 0, "column") && text_at_is(csv, 4, 1, "end_of_data"));
    /* v at 0 dbar: 1e-3 (1 + 2e-3), and a over it at the mid state 21 degC, 34.95 g/kg. */
    assert_relative(number_at(csv, 0, "earlier_specific_volume [m3 kg-1]"), 1.002e-3, 1e-15);
    assert_relative(number_at(csv, 0, "thermal_expansion [K-1]"), 2e-4 / (1.0 + 2.2e-3 + 4e-5), 1e-14);
    assert_relative(number_at(csv, 0, "haline_contraction [kg g-1]"), 8e-4 / (1.0 + 2.2e-3 + 4e-5), 1e-14);
    free(csv);
}

/* Different levels: at 50 dbar the earlier table is 9 degC, half-way between 10 and 8, the later one 12:
   differences 0, 3, 0 K over 50 dbar each are 150 K dbar. */
static void test_different_levels(void **state)
{
    run_result result;

    run_write_file(*state, "a.csv", "pressure,ct,sa\n0,10,35\n100,8,35\n");
    run_write_file(*state, "b.csv", "pressure,ct,sa\n0,10,35\n50,12,35\n100,8,35\n150,7,35\n");
    result = run_line("column --earlier a.csv --later b.csv " LINEAR, *state);
    assert_exit(&result, 0);
    assert_holds(result.errors,
                 "stericol: note: the tables have different levels: all levels of both are used, each "
                 "table's salinity and temperature (absolute, conservative) linear between its own, "
                 "within its own range\n");
    assert_holds(result.errors,
                 "stericol: warning: one table reaches deeper than the other: only the common depth, "
                 "to 99.");
    assert_int_equal(row_count(result.output), 6);
    assert_close(number_at(result.output, 1, "earlier_conservative_temperature [degree_Celsius]"), 9.0,
                 1e-13);
    assert_relative(number_at(result.output, 5, "heat_content_change [J m-2]"),
                    heat_capacity / gravity * 1.5e6, 1e-11);
    assert_nan(number_at(result.output, 3, "earlier_conservative_temperature [degree_Celsius]"));
    assert_true(text_at_is(result.output, 5, 1, "unequal"));
    run_free(&result);
}

/* The rule of --gap-reach at 95 m: 50 + 0.225 * 95 = 71.375 m, less than the 105 m to the next level. */
static void test_gap(void **state)
{
    run_result result;

    run_write_file(*state, "a.txt", "depth ct sa\n0 20 35\n40 18 35\n95 15 35\n150 14 NA\n200 12 35\n");
    result = run_line("column --field a.txt", *state);
    assert_exit(&result, 0);
    assert_holds(result.errors,
                 "stericol: warning: the column ends at 95 m: samples at 95 and 200 m are 105 m apart, and "
                 "71.375 m is allowed there; --gap-reach 105 bridges all\n");
    assert_holds(result.output, "from 0.00 m to 95.00 m; the column ends: gap\n");
    run_free(&result);
    result = run_line("column --field a.txt --gap-reach 105 --quiet", *state);
    assert_exit(&result, 0);
    assert_string_equal(result.errors, "");
    assert_holds(result.output, "from 0.00 m to 200.00 m; the column ends: end_of_data\n");
    run_free(&result);
}

/* A small table is coarser than the rule allows: 50 m at 0 m, 50 + 0.225 * 100 = 72.5 m at 100 m.  What the
   message advises bridges all, of one table and of two whose levels differ. */
static void test_coarse_tables(void **state)
{
    static const struct {
        const char *epochs, *ends, *advice, *bridged;
    } cases[] = {
        {"--field a.txt",
         "samples at 0 and 100 m are 100 m apart, and 50 m is allowed there; use --gap-reach 400, which "
         "bridges all\n",
         "--gap-reach 400", "from 0.00 m to 700.00 m; the column ends: end_of_data\n"},
        {"--earlier a.txt --later b.txt",
         "samples at 0 and 100 m are 100 m apart, and 50 m is allowed there; use --gap-reach 400, which "
         "bridges all\n",
         "--gap-reach 400", "from 0.00 m to 600.00 m; the column ends: unequal\n"},
        /* The earlier table has no spacing above 50 m where both have data. */
        {"--earlier d.txt --later b.txt",
         "samples at 0 and 150 m are 150 m apart, and 50 m is allowed there; use --gap-reach 150, which "
         "bridges all\n",
         "--gap-reach 150", "from 0.00 m to 90.00 m; the column ends: unequal\n"},
        /* No common sample at all. */
        {"--earlier e.txt --later b.txt",
         "samples at 0 and 150 m are 150 m apart, and 50 m is allowed there; use --gap-reach 150, which "
         "bridges all\n",
         "--gap-reach 150 --surface-reach 40", "from 0.00 m to 80.00 m; the column ends: unequal\n"},
    };

    run_write_file(*state, "a.txt", "depth ct sa\n0 20 35\n100 15 35\n300 10 35\n700 6 35\n");
    run_write_file(*state, "b.txt", "depth ct sa\n0 21 35\n150 15 35\n400 10 35\n600 7 35\n");
    run_write_file(*state, "d.txt", "depth ct sa\n0 20 35\n45 16 35\n90 15 35\n");
    run_write_file(*state, "e.txt", "depth ct sa\n40 20 35\n80 15 35\n");
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        char line[160];
        run_result result;

        snprintf(line, sizeof line, "column %s", cases[i].epochs);
        result = run_line(line, *state);
        assert_exit(&result, 1);
        assert_holds(result.errors, "stericol: no layer is complete: ");
        assert_holds(result.errors, cases[i].ends);
        run_free(&result);
        snprintf(line, sizeof line, "column %s %s", cases[i].epochs, cases[i].advice);
        result = run_line(line, *state);
        assert_exit(&result, 0);
        assert_holds(result.output, cases[i].bridged);
        run_free(&result);
    }
}

/* A sea floor within --bottom-reach (500 m) is reached, one below it is not: no water is made up. */
static void test_sea_floor(void **state)
{
    run_result result;

    run_write_file(*state, "a.txt", "depth ct sa\n0 20 35\n40 18 35\n95 15 35\n");
    result = run_line("column --field a.txt --sea-floor 595", *state);
    assert_exit(&result, 0);
    assert_null(strstr(result.errors, "warning"));
    assert_holds(result.output, "from 0.00 m to 595.00 m; the column ends: sea_floor\n");
    run_free(&result);
    result = run_line("column --field a.txt --sea-floor 596", *state);
    assert_exit(&result, 0);
    assert_holds(result.errors, "stericol: warning: the column ends at 95 m: the sea floor is 501 m further "
                                "down, and --bottom-reach bridges 500 m\n");
    assert_holds(result.output, "from 0.00 m to 95.00 m; the column ends: end_of_data\n");
    run_free(&result);
}

/* A table as warm or cold as one likes: `rows` levels `step` m apart. */
static void write_table(const char *folder, const char *name, size_t rows, double step, double warming)
{
    const size_t room = rows * 64 + 64;
    char *text = malloc(room);
    size_t length;

    assert_non_null(text);
    length = (size_t)snprintf(text, room, "depth_m;theta;salinity [PSU]\n");
    for (size_t i = 0; i < rows; i++) {
        const double depth = 3.0 + step * (double)i;

        length += (size_t)snprintf(text + length, room - length, "%.2f;%.4f;%.4f\n", depth,
                                   4.0 + (16.0 + warming) * exp(-depth / 400.0),
                                   35.0 - exp(-depth / 150.0) / (1.0 + warming));
    }
    run_write_file(folder, name, text);
    free(text);
}

static void check_parts(const char *csv, const char *name)
{
    const size_t rows = row_count(csv);
    size_t layers = 0;
    double whole = 0.0;

    for (size_t k = 0; k < rows; k++) {
        double sum = 0.0, upper, lower;

        if (!text_at_is(csv, k, 0, "layer"))
            continue;
        upper = number_at(csv, k, "upper_depth [m]");
        lower = number_at(csv, k, "lower_depth [m]");
        for (size_t i = 0; i < k && !text_at_is(csv, i, 0, "layer"); i++)
            if (number_at(csv, i, "upper_depth [m]") >= upper - 1e-6 &&
                number_at(csv, i, "lower_depth [m]") <= lower + 1e-6)
                sum += number_at(csv, i, name);
        /* Rounding of some hundred terms; the ends of pressures given in metres are off by 1e-9 m. */
        assert_relative(sum, number_at(csv, k, name), 1e-10);
        whole += sum;
        layers++;
    }
    assert_int_equal(layers, 3);
    assert_true(text_at_is(csv, rows - 1, 0, "column"));
    assert_relative(whole, number_at(csv, rows - 1, name), 1e-10);
}

/* The parts printed add up to the sums printed, with limits between levels, more levels than one sweep takes,
   ends that are carried, and for every way between the levels. */
static void test_parts_add_up(void **state)
{
    static const char *const options[] = {
        "--vertical linear",
        "--vertical steffen",
        "--vertical akima",
        "--equation eos80 --attribution earlier",
        "--equation gibbs --sea-floor 1510 --attribution linear",
    };
    static const char *const names[] = {"steric_height_change [m]", "thermosteric_height_change [m]",
                                        "halosteric_height_change [m]", "heat_content_change [J m-2]",
                                        "integrated_depth [m]"};

    write_table(*state, "a.csv", 150, 9.9, 0.0);
    write_table(*state, "b.csv", 151, 9.9, 0.4);
    for (size_t i = 0; i < sizeof options / sizeof *options; i++) {
        char line[256];
        char *csv;

        snprintf(
            line, sizeof line,
            "column --earlier a.csv --later b.csv --table csv --layers 0..100,100..703.5,703.5..bottom %s",
            options[i]);
        csv = output_of(*state, line);
        for (size_t k = 0; k < sizeof names / sizeof *names; k++)
            check_parts(csv, names[k]);
        free(csv);
    }
    char *csv =
        output_of(*state, "column --field a.csv --table csv --layers 0..100,100..703.5,703.5..bottom");

    check_parts(csv, "geopotential_anomaly [m2 s-2]");
    free(csv);
}

/* ---- what is refused ---- */

static void check_refused(const char *folder, const char *table, const char *options, int code,
                          const char *message)
{
    char line[256];
    run_result result;

    if (table != NULL)
        run_write_file(folder, "t.txt", table);
    snprintf(line, sizeof line, "column %s", options);
    result = run_line(line, folder);
    assert_exit(&result, code);
    assert_string_equal(result.output, "");
    assert_string_equal(result.errors, message);
    run_free(&result);
}

#define FIELD "--field t.txt --quiet"

static const struct refusal {
    const char *table, *options;
    int code;
    const char *message;
} refusals[] = {
    {NULL, "--field none.txt", 3,
     "stericol: none.txt: cannot be opened (No such file or directory); check its name and its rights\n"},
    {"depth temp\n0 1\n", FIELD, 3,
     "stericol: t.txt: has no column of salinity; name it salinity or practical_salinity, "
     "reference_salinity, sa "
     "or absolute_salinity\n"},
    {"depth sal\n0 35\n", FIELD, 3,
     "stericol: t.txt: has no column of temperature; name it temperature (in situ), theta or "
     "potential_temperature, ct or conservative_temperature\n"},
    {"level temp sal\n0 1 35\n", FIELD, 3,
     "stericol: t.txt: has no column of depth or pressure; name it depth or pressure\n"},
    {"depth temp theta sal\n0 1 1 35\n", FIELD, 3,
     "stericol: t.txt: has two columns of temperature, 'temp' and 'theta'; say which kind to take with "
     "--temperature-kind, or take one out\n"},
    {"depth,temp,salinity [g/kg]\n0,1,35\n", FIELD, 3,
     "stericol: t.txt: salinity: is in g/kg, so it may be absolute or reference salinity; say which with "
     "--salinity-kind, or name it absolute_salinity or reference_salinity\n"},
    {"depth temp sal\n0 1 35\n10 1 35\n10 1 35\n", FIELD, 3,
     "stericol: t.txt: line 4, column 'depth': 10 m does not lie below the row before (10 m); order the "
     "rows from "
     "the surface down, each level once\n"},
    {"p temp sal\n100 1 35\n10 1 35\n", FIELD, 3,
     "stericol: t.txt: line 3, column 'p': 10 dbar does not lie below the row before (100 dbar); order "
     "the rows "
     "from the surface down, each level once\n"},
    {"z temp sal\n-10 1 35\n", FIELD, 3,
     "stericol: t.txt: line 2, column 'z': -10 m lies above the surface; write depths as positive "
     "numbers, 0 at "
     "the surface\n"},
    {"depth temp sal\nNA 1 35\n", FIELD, 3,
     "stericol: t.txt: line 2, column 'depth': there is no value; give it, or take the row out\n"},
    {"depth temp sal\n20000 1 35\n", FIELD, 3,
     "stericol: t.txt: line 2, column 'depth': 20000 m is deeper than any sea; check the unit, and name "
     "it in the "
     "header\n"},
    {"depth temp sal\n0 290 35\n", FIELD, 3,
     "stericol: t.txt: line 2, column 'temp': 290 degC is not within -4..45; if it is kelvin, name the "
     "unit in "
     "the header: temperature [K]\n"},
    {"depth temp sal\n0 10 35\n# bottle\n10 9 -999\n", FIELD, 3,
     "stericol: t.txt: line 4, column 'sal': -999 is not within 0..45; check the column and its unit; "
     "write NA "
     "where there is no value\n"},
    {"depth [m] temp sal\n0 10 35\n", "--field t.txt --quiet --vertical-unit dbar", 3,
     "stericol: t.txt: depth: is in m by its header, but --vertical-unit says dbar; leave "
     "--vertical-unit out, or "
     "correct the header\n"},
    {"depth temp sal\n0 NA 35\n10 9 NA\n", FIELD, 1,
     "stericol: no level has both temperature and salinity; check what the tables hold, and where they "
     "say NA\n"},
    {"depth temp sal\n0 10 35\n900 3 35\n", FIELD, 1,
     "stericol: no layer is complete: samples at 0 and 900 m are 900 m apart, and 50 m is allowed there; use "
     "--gap-reach 900, which bridges all\n"},
    {"depth temp sal\n0 10 35\n10 9 35\n", "--field t.txt --quiet --layers 0..700", 1,
     "stericol: no layer lies wholly within the usable data, 0..10 m (end_of_data); ask for other "
     "--layers\n"},
    {"depth temp sal\n30 10 35\n40 9 35\n900 3 35\n", FIELD, 1,
     "stericol: no layer lies wholly within the usable data, 30..40 m (gap); ask for other --layers, or "
     "carry the top level further with --surface-reach\n"},
    {"depth temp sal\n0 10 35\n10 9 35\n", "--field t.txt --vertical cells", 2,
     "stericol: --vertical: cells needs the limits of cells, and a text table has samples; take linear, "
     "steffen "
     "or akima\n"},
    {NULL, "--field t.txt --attribution earlier", 2,
     "stericol: --attribution: has no meaning for one table: there is no change to share out; leave it "
     "out, or "
     "give --earlier and --later\n"},
    {NULL, "--field t.txt --reference-density 1027", 2,
     "stericol: --reference-density: has no meaning for one table, whose height is geopotential over "
     "gravity; "
     "leave it out, or give --earlier and --later\n"},
    {NULL, "--earlier t.txt --later ./t.txt", 2,
     "stericol: both epochs are the same table; name another for one of them, or give one alone with "
     "--field\n"},
};

static void test_refused(void **state)
{
    for (size_t i = 0; i < sizeof refusals / sizeof *refusals; i++)
        check_refused(*state, refusals[i].table, refusals[i].options, refusals[i].code, refusals[i].message);
    /* Kinds that differ, one of them only assumed. */
    run_write_file(*state, "u.txt", "depth theta sal\n0 10 35\n10 9 35\n");
    check_refused(
        *state, "depth temp sal\n0 10 35\n10 9 35\n", "--earlier t.txt --later u.txt --quiet", 3,
        "stericol: t.txt: temp: would be taken as temperature in situ, but the other table has 'theta'; name "
        "it by its kind (ct, theta, in_situ_temperature)\n");
    /* No level in common. */
    run_write_file(*state, "u.txt", "depth temp sal\n20 10 35\n30 9 35\n");
    check_refused(
        *state, NULL, "--earlier t.txt --later u.txt --quiet", 1,
        "stericol: no level has temperature and salinity in both tables; check what the tables hold, and "
        "where they say NA\n");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test_setup_teardown(test_station, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_station_whole, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_station_text, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_station_teos10, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_json, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_change_by_hand, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_different_levels, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_gap, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_coarse_tables, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_sea_floor, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_parts_add_up, make_folder, remove_folder),
        cmocka_unit_test_setup_teardown(test_refused, make_folder, remove_folder),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
