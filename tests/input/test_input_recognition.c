/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What is taken for temperature and salinity, of which kind, and what is said of it. */
#include "made_sea.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

typedef struct kind_case {
    const char *name, *standard_name, *long_name, *units;
    int kind;
    bool assumed;
    const char *reason;
    const char *said; /* an assumption behind "NAME: ", or NULL */
} kind_case;

#define BARE_TEMPERATURE                                                                                     \
    "the file does not say which kind of temperature this is; taken as in situ temperature "                 \
    "(--temperature-kind "                                                                                   \
    "says otherwise)"
#define BARE_SALINITY                                                                                        \
    "the file does not say which kind of salinity this is; taken as practical salinity (--salinity-kind "    \
    "says "                                                                                                  \
    "otherwise)"

/* Standard names: CF standard name table, version 83.  Names: common practice, no source. */
static const kind_case temperatures[] = {
    {"a", "sea_water_temperature", NULL, "degC", STERICOL_TEMPERATURE_IN_SITU, false, "standard_name", NULL},
    {"a", "sea_water_potential_temperature", NULL, "degC", STERICOL_TEMPERATURE_POTENTIAL, false,
     "standard_name", NULL},
    {"a", "sea_water_conservative_temperature", NULL, "degC", STERICOL_TEMPERATURE_CONSERVATIVE, false,
     "standard_name", NULL},
    {"thetao", NULL, NULL, "degC", STERICOL_TEMPERATURE_POTENTIAL, true, "its name",
     "recognised as temperature by its name, for want of a standard_name"},
    {"bigthetao", NULL, NULL, "degC", STERICOL_TEMPERATURE_CONSERVATIVE, true, "its name", NULL},
    {"votemper", NULL, "Temperature", "degrees_C", STERICOL_TEMPERATURE_IN_SITU, true, "its name",
     BARE_TEMPERATURE},
    {"TEMP", NULL, NULL, "Celsius", STERICOL_TEMPERATURE_IN_SITU, true, "its name", BARE_TEMPERATURE},
    {"t_an", NULL, NULL, "degC", STERICOL_TEMPERATURE_IN_SITU, true, "its name", BARE_TEMPERATURE},
    {"temp", NULL, "time-averaged potential temperature", "Celsius", STERICOL_TEMPERATURE_POTENTIAL, false,
     "long_name", "recognised as temperature by long_name, for want of a standard_name"},
    {"temp", NULL, "Conservative Temperature", "degC", STERICOL_TEMPERATURE_CONSERVATIVE, false, "long_name",
     NULL},
    {"q17", NULL, "Sea water potential temperature", "degC", STERICOL_TEMPERATURE_POTENTIAL, false,
     "long_name", NULL},
    {"temp", "sea_water_temperature", "Potential temperature", "degC", STERICOL_TEMPERATURE_IN_SITU, false,
     "standard_name",
     "standard_name says in situ temperature but long_name \"Potential temperature\" does not; the "
     "standard_name is "
     "believed (--temperature-kind says otherwise)"},
    {"temp", NULL, NULL, NULL, STERICOL_TEMPERATURE_IN_SITU, true, "its name",
     "no units; taken as degrees Celsius as long as every value allows it"},
};

static const kind_case salinities[] = {
    {"a", "sea_water_practical_salinity", NULL, "1", STERICOL_SALINITY_PRACTICAL, false, "standard_name",
     NULL},
    {"a", "sea_water_salinity", NULL, "1e-3", STERICOL_SALINITY_PRACTICAL, true, "standard_name",
     BARE_SALINITY},
    {"a", "sea_water_salinity", NULL, "g kg-1", STERICOL_SALINITY_PRACTICAL, true, "standard_name",
     "sea_water_salinity in \"g kg-1\" can be practical or absolute salinity; taken as practical salinity "
     "(--salinity-kind says otherwise)"},
    {"a", "sea_water_absolute_salinity", NULL, "g/kg", STERICOL_SALINITY_ABSOLUTE, false, "standard_name",
     NULL},
    {"a", "sea_water_reference_salinity", NULL, "g kg-1", STERICOL_SALINITY_REFERENCE, false, "standard_name",
     NULL},
    {"a", "sea_water_preformed_salinity", NULL, "g kg-1", STERICOL_SALINITY_REFERENCE, true, "standard_name",
     "preformed salinity is taken as reference salinity"},
    {"so", NULL, NULL, "0.001", STERICOL_SALINITY_PRACTICAL, true, "its name", BARE_SALINITY},
    {"SALT", NULL, NULL, "PSU", STERICOL_SALINITY_PRACTICAL, true, "its name", BARE_SALINITY},
    {"vosaline", NULL, "Practical Salinity", "psu", STERICOL_SALINITY_PRACTICAL, false, "long_name", NULL},
    {"so", NULL, "Absolute Salinity", "g/kg", STERICOL_SALINITY_ABSOLUTE, false, "long_name", NULL},
    {"salt", NULL, NULL, NULL, STERICOL_SALINITY_PRACTICAL, true, "its name",
     "no units; taken as practical salinity as long as every value allows it"},
};

static void check_kind(const kind_case *this, bool temperature)
{
    sea how = sea_plain("kind.nc");
    sea_variable *variable = temperature ? &how.temperature : &how.salinity;
    char text[400];
    double plane[SEA_POINTS];
    try one;
    variable->name = this->name;
    variable->standard_name = this->standard_name;
    variable->long_name = this->long_name;
    variable->units = this->units;
    try_begin(&one, sea_write(&how));
    try_open(&one);
    const stericol_epoch_variable chosen =
        temperature ? stericol_epoch_temperature(one.epoch) : stericol_epoch_salinity(one.epoch);
    assert_string_equal(chosen.name, this->name);
    assert_int_equal(chosen.kind, this->kind);
    assert_int_equal(chosen.kind_assumed, this->assumed);
    assert_int_equal(chosen.unit_assumed, this->units == NULL);
    assert_string_equal(chosen.reason, this->reason);
    if (this->said) {
        (void)snprintf(text, sizeof text, "%s: %s", this->name, this->said);
        assert_assumed(&one, text);
        assert_noticed(&one, text);
    } else if (this->standard_name) {
        (void)snprintf(text, sizeof text, "%s: ", this->name);
        assert_not_noticed(&one, text);
    }
    try_load(&one, 0, temperature ? plane : NULL, temperature ? NULL : plane);
    try_end(&one);
}

static void test_kinds(void **state)
{
    (void)state;
    for (size_t i = 0; i < sizeof temperatures / sizeof *temperatures; i++)
        check_kind(&temperatures[i], true);
    for (size_t i = 0; i < sizeof salinities / sizeof *salinities; i++)
        check_kind(&salinities[i], false);
}

static void test_kind_by_option(void **state)
{
    (void)state;
    sea how = sea_plain("option.nc");
    try one;
    how.temperature.name = "temp";
    how.temperature.standard_name = NULL;
    try_begin(&one, sea_write(&how));
    one.request.temperature_kind = STERICOL_TEMPERATURE_CONSERVATIVE;
    one.request.salinity_kind = STERICOL_SALINITY_ABSOLUTE;
    try_open(&one);
    assert_int_equal(stericol_epoch_temperature(one.epoch).kind, STERICOL_TEMPERATURE_CONSERVATIVE);
    assert_false(stericol_epoch_temperature(one.epoch).kind_assumed);
    assert_int_equal(stericol_epoch_salinity(one.epoch).kind, STERICOL_SALINITY_ABSOLUTE);
    assert_assumed(
        &one,
        "temp: taken as conservative temperature as --temperature-kind says, not as in situ temperature");
    assert_assumed(&one,
                   "sal: taken as absolute salinity as --salinity-kind says, not as practical salinity");
    try_end(&one);
}

/* Adds a copy of theta's header under another name, with values of its own. */
static void add_variable(const char *path, const char *name, const char *standard_name, size_t rank)
{
    static const char *const dimensions[4] = {"time", "depth", "lat", "lon"};
    const int file = sea_change(path);
    int dimension[4], variable;
    for (size_t i = 0; i < rank; i++)
        must(nc_inq_dimid(file, dimensions[i + 4 - rank], &dimension[i]));
    must(nc_def_var(file, name, NC_DOUBLE, (int)rank, dimension, &variable));
    if (standard_name)
        must(nc_put_att_text(file, variable, "standard_name", strlen(standard_name), standard_name));
    must(nc_put_att_text(file, variable, "units", 4, "degC"));
    sea_changed(file);
}

static void test_two_candidates(void **state)
{
    (void)state;
    sea how = sea_plain("two.nc");
    try one;
    const char *path = sea_write(&how);
    add_variable(path, "other", "sea_water_conservative_temperature", 4);
    try_begin(&one, path);
    one.request.temperature = "other";
    try_open(&one);
    assert_string_equal(stericol_epoch_temperature(one.epoch).name, "other");
    assert_string_equal(stericol_epoch_temperature(one.epoch).reason, "named by the user");
    assert_int_equal(stericol_epoch_temperature(one.epoch).kind, STERICOL_TEMPERATURE_CONSERVATIVE);
    try_end(&one);
    /* "theta" is a usual name, so it is the better candidate; of two unusual names neither is. */
    try_begin(&one, path);
    try_open(&one);
    assert_string_equal(stericol_epoch_temperature(one.epoch).name, "theta");
    try_end(&one);
    add_variable(path, "third", "sea_water_temperature", 4);
    const int file = sea_change(path);
    int theta;
    must(nc_inq_varid(file, "theta", &theta));
    must(nc_rename_var(file, theta, "first"));
    sea_changed(file);
    try_begin(&one, path);
    assert_open_fails(
        &one, STERICOL_INPUT,
        "3 variables could be the temperature (first, other, third); name one with --temperature");
    /* The kind asked for may decide. */
    try_begin(&one, path);
    one.request.temperature_kind = STERICOL_TEMPERATURE_CONSERVATIVE;
    try_open(&one);
    assert_string_equal(stericol_epoch_temperature(one.epoch).name, "other");
    try_end(&one);
}

/* Errors, counts and flags carry the standard name too. */
static void test_statistics_are_not_chosen(void **state)
{
    (void)state;
    sea how = sea_plain("statistics.nc");
    try one;
    how.temperature.name = "a";
    const char *path = sea_write(&how);
    add_variable(path, "b_se", "sea_water_potential_temperature", 4);
    add_variable(path, "c", "sea_water_potential_temperature standard_error", 4);
    add_variable(path, "d", "sea_water_potential_temperature number_of_observations", 4);
    add_variable(path, "e", "sea_water_potential_temperature", 4);
    add_variable(path, "f", "sea_water_potential_temperature", 4);
    add_variable(path, "g", "sea_water_potential_temperature",
                 3); /* fewer dimensions, but levels: see below */
    add_variable(path, "h", "sea_water_potential_temperature", 2); /* a surface field */
    sea_attribute(path, "e", "cell_methods", "time: standard_deviation");
    sea_attribute(path, "a", "ancillary_variables", "c f");
    sea_attribute(path, "g", "flag_meanings", "good bad");
    try_begin(&one, path);
    try_open(&one);
    assert_string_equal(stericol_epoch_temperature(one.epoch).name, "a");
    try_end(&one);
}

/* The standard name beats a usual name, and a variable that says it is something else is never taken. */
static void test_standard_name_wins(void **state)
{
    (void)state;
    sea how = sea_plain("wins.nc");
    try one;
    how.temperature.name = "t";
    const char *path = sea_write(&how);
    add_variable(path, "temp", NULL, 4);
    add_variable(path, "temperature", "air_temperature", 4);
    try_begin(&one, path);
    try_open(&one);
    assert_string_equal(stericol_epoch_temperature(one.epoch).name, "t");
    try_end(&one);
}

static void test_absent(void **state)
{
    (void)state;
    sea how = sea_plain("absent.nc");
    try one;
    how.temperature.name = "warmth";
    how.temperature.standard_name = NULL;
    how.salinity.name = "saltiness";
    how.salinity.standard_name = NULL;
    const char *path = sea_write(&how);
    try_begin(&one, path);
    assert_open_fails(
        &one, STERICOL_INPUT,
        "no variable was recognised as temperature; there are warmth, saltiness; name it with --temperature");
    try_begin(&one, path);
    one.request.temperature = "warmth";
    assert_open_fails(
        &one, STERICOL_INPUT,
        "no variable was recognised as salinity; there are warmth, saltiness; name it with --salinity, or "
        "give --background-salinity or --constant-salinity");
    try_begin(&one, path);
    one.request.temperature = "warmth";
    one.request.salinity_optional = true;
    try_open(&one);
    assert_false(stericol_epoch_has_salinity(one.epoch));
    assert_null(stericol_epoch_salinity(one.epoch).name);
    assert_int_equal(stericol_epoch_temperature(one.epoch).kind, STERICOL_TEMPERATURE_IN_SITU);
    assert_true(stericol_epoch_temperature(one.epoch).kind_assumed);
    try_end(&one);
    try_begin(&one, path);
    one.request.temperature = "warm";
    one.request.salinity = "saltiness";
    assert_open_fails(&one, STERICOL_INPUT,
                      "warm: no such variable; there are warmth, saltiness; name another with --temperature");
    /* Salinity alone, as a background. */
    try_begin(&one, path);
    one.request.wants_temperature = false;
    one.request.salinity = "saltiness";
    try_open(&one);
    double plane[SEA_POINTS];
    try_load(&one, 0, NULL, plane);
    assert_null(stericol_epoch_member_at(one.epoch, 0)->temperature_file);
    try_end(&one);
    how = sea_plain("empty.nc");
    how.temperature.name = how.salinity.name = NULL;
    try_begin(&one, sea_write(&how));
    assert_open_fails(
        &one, STERICOL_INPUT,
        "no variable was recognised as temperature; there are time, depth, lat, lon; name it with "
        "--temperature");
}

/* Axes known by axis, positive, _CoordinateAxisType, units or names only. */
static void test_axes(void **state)
{
    (void)state;
    for (int kind = 0; kind < 5; kind++) {
        sea how = sea_plain("axes.nc");
        double plane[SEA_POINTS];
        try one;
        how.mode = 0; /* NetCDF-C 4.9.0 crashes when it renames dimensions of a NetCDF-4 file */
        how.plain_axes = kind != 1;
        how.depth_standard_name = NULL;
        const char *path = sea_write(&how);
        const int file = sea_change(path);
        int handle[4];
        static const char *const old[4] = {"time", "depth", "lat", "lon"};
        static const char *const new[5][4] = {{"time", "depth", "lat", "lon"},
                                              {"when", "far", "up", "right"},
                                              {"aa", "bb", "cc", "dd"},
                                              {"aa", "bb", "latitude", "longitude"},
                                              {"aa", "bb", "cc", "dd"}};
        for (int i = 0; i < 4; i++) {
            must(nc_inq_varid(file, old[i], &handle[i]));
            if (strcmp(old[i], new[kind][i]) != 0) {
                must(nc_rename_dim(file, handle[i], new[kind][i]));
                must(nc_rename_var(file, handle[i], new[kind][i]));
            }
        }
        if (kind == 2 || kind == 3) {
            must(nc_put_att_text(file, handle[1], "positive", 4, "down"));
            must(nc_put_att_text(file, handle[2], "axis", 1, "Y"));
            must(nc_put_att_text(file, handle[3], "axis", 1, "X"));
        } else if (kind == 4) {
            must(nc_put_att_text(file, handle[2], "_CoordinateAxisType", 3, "Lat"));
            must(nc_put_att_text(file, handle[3], "_CoordinateAxisType", 3, "Lon"));
        }
        sea_changed(file);
        try_begin(&one, path);
        try_open(&one);
        if (kind == 2)
            assert_assumed(&one, "cc: taken as latitude because of its axis attribute");
        if (kind == 0)
            assert_assumed(&one, "lon: no units; taken as longitude in degrees");
        assert_string_equal(stericol_epoch_grid(one.epoch)->level_name, new[kind][1]);
        assert_string_equal(stericol_epoch_grid(one.epoch)->latitude_name, new[kind][2]);
        try_load(&one, 3, plane, NULL);
        try_end(&one);
    }
}

static double anomaly(size_t t, size_t k, size_t j, size_t i)
{
    (void)t;
    (void)j;
    return 0.005 * (double)k - 0.001 * (double)i;
}

/* An anomaly of salinity has no name of its own and may be negative. */
static void test_salinity_anomaly(void **state)
{
    (void)state;
    sea how = sea_plain("anomaly.nc");
    double plane[SEA_POINTS];
    try one;
    how.order = "zyx";
    how.temperature.name = NULL;
    how.salinity = (sea_variable){"dsa", NULL, NULL, "g kg-1", 1.0, 0.0, anomaly};
    try_begin(&one, sea_write(&how));
    one.request.wants_temperature = false;
    one.request.salinity_anomaly = true;
    try_open(&one);
    assert_string_equal(stericol_epoch_salinity(one.epoch).name, "dsa");
    assert_string_equal(stericol_epoch_salinity(one.epoch).reason, "the only field of the file");
    try_load(&one, 1, NULL, plane);
    assert_same_number(plane[5], anomaly(0, 1, 0, 5));
    try_end(&one);
    /* Whole salinities are no anomalies. */
    how.salinity.value = sea_salinity;
    try_begin(&one, sea_write(&how));
    one.request.wants_temperature = false;
    one.request.salinity_anomaly = true;
    try_open(&one);
    assert_int_equal(stericol_epoch_load(one.seen.context, one.epoch, 0, 1, 0, SEA_ROWS, NULL, plane, NULL),
                     STERICOL_INPUT);
    stericol_text text = {0};
    stericol_text_format(
        &text,
        "%s: dsa: 30 of 30 values at 5 m (step 1) cannot be salinity anomalies with the unit \"g "
        "kg-1\": they range from 33.375 to 34.5 after conversion; give a file of absolute salinity "
        "anomalies in g/kg",
        one.paths[0]);
    assert_string_equal(stericol_context_message(one.seen.context), stericol_text_string(&text));
    stericol_text_free(&text);
    try_end(&one);
    how = sea_plain("anomaly.nc");
    try_begin(&one, sea_write(&how));
    one.request.wants_temperature = false;
    one.request.salinity_anomaly = true;
    assert_open_fails(
        &one, STERICOL_INPUT,
        "2 variables could be the salinity anomaly (theta, sal); give a file that holds the anomaly alone");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_kinds),
        cmocka_unit_test(test_kind_by_option),
        cmocka_unit_test(test_two_candidates),
        cmocka_unit_test(test_statistics_are_not_chosen),
        cmocka_unit_test(test_standard_name_wins),
        cmocka_unit_test(test_absent),
        cmocka_unit_test(test_axes),
        cmocka_unit_test(test_salinity_anomaly),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
