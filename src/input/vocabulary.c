/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Standard names: CF standard name table, version 83.  Other names: variable names that are common in open
 * ocean data.
 */
#include "input/room.h"

#include <stdlib.h>
#include <string.h>

const char *const stericol_input_quantity_name[STERICOL_INPUT_QUANTITIES] = {"temperature", "salinity"};

typedef struct named_role {
    const char *name;
    stericol_input_role role;
} named_role;

/* A standard name that is not here gives no role, unless the variable has a usual name. */
static const named_role standard_roles[] = {
    {"time", STERICOL_INPUT_TIME},
    {"latitude", STERICOL_INPUT_LATITUDE},
    {"longitude", STERICOL_INPUT_LONGITUDE},
    {"grid_latitude", STERICOL_INPUT_Y},
    {"grid_longitude", STERICOL_INPUT_X},
    {"projection_y_coordinate", STERICOL_INPUT_Y},
    {"projection_x_coordinate", STERICOL_INPUT_X},
    {"depth", STERICOL_INPUT_LEVEL},
    {"depth_below_geoid", STERICOL_INPUT_LEVEL},
    {"depth_below_sea_surface", STERICOL_INPUT_LEVEL},
    {"altitude", STERICOL_INPUT_LEVEL},
    {"height", STERICOL_INPUT_LEVEL},
    {"height_above_geopotential_datum", STERICOL_INPUT_LEVEL},
    {"height_above_mean_sea_level", STERICOL_INPUT_LEVEL},
    {"height_above_reference_ellipsoid", STERICOL_INPUT_LEVEL},
    {"sea_water_pressure", STERICOL_INPUT_LEVEL},
    {"sea_water_pressure_due_to_sea_water", STERICOL_INPUT_LEVEL},
    {"model_level_number", STERICOL_INPUT_LEVEL},
    {"ocean_sigma_coordinate", STERICOL_INPUT_LEVEL},
    {"ocean_s_coordinate", STERICOL_INPUT_LEVEL},
    {"ocean_s_coordinate_g1", STERICOL_INPUT_LEVEL},
    {"ocean_s_coordinate_g2", STERICOL_INPUT_LEVEL},
    {"ocean_sigma_z_coordinate", STERICOL_INPUT_LEVEL},
    {"ocean_double_sigma_coordinate", STERICOL_INPUT_LEVEL},
};

static const named_role axis_letters[] = {{"T", STERICOL_INPUT_TIME},
                                          {"Z", STERICOL_INPUT_LEVEL},
                                          {"Y", STERICOL_INPUT_Y},
                                          {"X", STERICOL_INPUT_X}};

static const named_role coordinate_types[] = {
    {"Time", STERICOL_INPUT_TIME},    {"Lat", STERICOL_INPUT_LATITUDE},   {"Lon", STERICOL_INPUT_LONGITUDE},
    {"Height", STERICOL_INPUT_LEVEL}, {"Pressure", STERICOL_INPUT_LEVEL}, {"GeoZ", STERICOL_INPUT_LEVEL},
    {"GeoY", STERICOL_INPUT_Y},       {"GeoX", STERICOL_INPUT_X}};

static const named_role common_roles[] = {
    {"time", STERICOL_INPUT_TIME},
    {"t", STERICOL_INPUT_TIME},
    {"time_counter", STERICOL_INPUT_TIME},
    {"ocean_time", STERICOL_INPUT_TIME},
    {"month", STERICOL_INPUT_TIME},
    {"year", STERICOL_INPUT_TIME},
    {"latitude", STERICOL_INPUT_LATITUDE},
    {"lat", STERICOL_INPUT_LATITUDE},
    {"nav_lat", STERICOL_INPUT_LATITUDE},
    {"lats", STERICOL_INPUT_LATITUDE},
    {"lat_rho", STERICOL_INPUT_LATITUDE},
    {"tlat", STERICOL_INPUT_LATITUDE},
    {"geolat", STERICOL_INPUT_LATITUDE},
    {"geolat_t", STERICOL_INPUT_LATITUDE},
    {"longitude", STERICOL_INPUT_LONGITUDE},
    {"lon", STERICOL_INPUT_LONGITUDE},
    {"nav_lon", STERICOL_INPUT_LONGITUDE},
    {"lons", STERICOL_INPUT_LONGITUDE},
    {"lon_rho", STERICOL_INPUT_LONGITUDE},
    {"tlong", STERICOL_INPUT_LONGITUDE},
    {"geolon", STERICOL_INPUT_LONGITUDE},
    {"geolon_t", STERICOL_INPUT_LONGITUDE},
    {"depth", STERICOL_INPUT_LEVEL},
    {"deptht", STERICOL_INPUT_LEVEL},
    {"lev", STERICOL_INPUT_LEVEL},
    {"level", STERICOL_INPUT_LEVEL},
    {"levels", STERICOL_INPUT_LEVEL},
    {"olevel", STERICOL_INPUT_LEVEL},
    {"z", STERICOL_INPUT_LEVEL},
    {"k", STERICOL_INPUT_LEVEL},
    {"z_t", STERICOL_INPUT_LEVEL},
    {"z_l", STERICOL_INPUT_LEVEL},
    {"st_ocean", STERICOL_INPUT_LEVEL},
    {"s_rho", STERICOL_INPUT_LEVEL},
    {"pressure", STERICOL_INPUT_LEVEL},
    {"pres", STERICOL_INPUT_LEVEL},
    {"depth_std", STERICOL_INPUT_LEVEL},
    {"nlev", STERICOL_INPUT_LEVEL},
    {"y", STERICOL_INPUT_Y},
    {"j", STERICOL_INPUT_Y},
    {"nlat", STERICOL_INPUT_Y},
    {"nj", STERICOL_INPUT_Y},
    {"eta_rho", STERICOL_INPUT_Y},
    {"yh", STERICOL_INPUT_Y},
    {"yt_ocean", STERICOL_INPUT_Y},
    {"yc", STERICOL_INPUT_Y},
    {"x", STERICOL_INPUT_X},
    {"i", STERICOL_INPUT_X},
    {"nlon", STERICOL_INPUT_X},
    {"ni", STERICOL_INPUT_X},
    {"xi_rho", STERICOL_INPUT_X},
    {"xh", STERICOL_INPUT_X},
    {"xt_ocean", STERICOL_INPUT_X},
    {"xc", STERICOL_INPUT_X},
};

static stericol_input_role role_in(const named_role *list, size_t count, const char *name)
{
    for (size_t i = 0; i < count; i++)
        if (stericol_same_ignoring_case(list[i].name, name))
            return list[i].role;
    return STERICOL_INPUT_NO_ROLE;
}

#define COUNT(list) (sizeof(list) / sizeof *(list))

stericol_input_role stericol_input_role_of_name(const char *name)
{
    return role_in(common_roles, COUNT(common_roles), name);
}

bool stericol_input_is_parametric(const char *standard_name)
{
    return standard_name && stericol_starts_with(standard_name, "ocean_") &&
           role_in(standard_roles, COUNT(standard_roles), standard_name) == STERICOL_INPUT_LEVEL;
}

static stericol_input_sign sign(stericol_input_role role, int strength, const char *reason)
{
    if (role == STERICOL_INPUT_NO_ROLE)
        return (stericol_input_sign){STERICOL_INPUT_NO_ROLE, STERICOL_INPUT_BY_NOTHING, "nothing"};
    return (stericol_input_sign){role, strength, reason};
}

/* Metres along the horizontal, in a file that does not say so. */
static bool looks_horizontal(const char *name)
{
    const stericol_input_role role = stericol_input_role_of_name(name);
    return role == STERICOL_INPUT_X || role == STERICOL_INPUT_Y || stericol_starts_with(name, "x") ||
           stericol_starts_with(name, "y") || stericol_same_ignoring_case(name, "easting") ||
           stericol_same_ignoring_case(name, "northing");
}

static stericol_input_sign sign_of_units(const stericol_cf_units *units, const stericol_cf_variable *variable)
{
    switch (stericol_cf_units_quantity(units, stericol_cf_text_of(variable, "units"))) {
    case STERICOL_CF_QUANTITY_LATITUDE:
        return sign(STERICOL_INPUT_LATITUDE, STERICOL_INPUT_BY_AXIS, "units");
    case STERICOL_CF_QUANTITY_LONGITUDE:
        return sign(STERICOL_INPUT_LONGITUDE, STERICOL_INPUT_BY_AXIS, "units");
    case STERICOL_CF_QUANTITY_TIME:
        return sign(STERICOL_INPUT_TIME, STERICOL_INPUT_BY_AXIS, "units");
    case STERICOL_CF_QUANTITY_PRESSURE:
        return sign(STERICOL_INPUT_LEVEL, STERICOL_INPUT_BY_UNITS, "units");
    case STERICOL_CF_QUANTITY_LENGTH:
        return looks_horizontal(variable->short_name)
                   ? sign(STERICOL_INPUT_NO_ROLE, 0, "")
                   : sign(STERICOL_INPUT_LEVEL, STERICOL_INPUT_BY_UNITS, "units");
    case STERICOL_CF_QUANTITY_UNKNOWN:
    case STERICOL_CF_QUANTITY_TEMPERATURE:
    case STERICOL_CF_QUANTITY_SALINITY:
        break;
    }
    return sign(STERICOL_INPUT_NO_ROLE, 0, "");
}

stericol_input_sign stericol_input_axis_sign(const stericol_cf_units *units,
                                             const stericol_cf_variable *variable)
{
    const char *standard_name = stericol_cf_text_of(variable, "standard_name");
    if (standard_name && *standard_name) {
        const stericol_input_role standard = role_in(standard_roles, COUNT(standard_roles), standard_name);
        /* Some other quantity, unless its own name says that the standard name is a slip. */
        if (standard != STERICOL_INPUT_NO_ROLE ||
            stericol_input_role_of_name(variable->short_name) == STERICOL_INPUT_NO_ROLE)
            return sign(standard, STERICOL_INPUT_BY_STANDARD_NAME, "standard_name");
    }
    const stericol_input_sign by_units = sign_of_units(units, variable);
    if (by_units.strength == STERICOL_INPUT_BY_AXIS)
        return by_units;
    const char *type = stericol_cf_text_of(variable, "_CoordinateAxisType");
    stericol_input_role role = type ? role_in(coordinate_types, COUNT(coordinate_types), type) : 0;
    if (role != STERICOL_INPUT_NO_ROLE)
        return sign(role, STERICOL_INPUT_BY_AXIS, "_CoordinateAxisType");
    const char *letter = stericol_cf_text_of(variable, "axis");
    if (!letter)
        letter = stericol_cf_text_of(variable, "cartesian_axis");
    role = letter ? role_in(axis_letters, COUNT(axis_letters), letter) : STERICOL_INPUT_NO_ROLE;
    const stericol_input_role named = stericol_input_role_of_name(variable->short_name);
    /* axis Y says nothing of parallels; the name may. */
    if ((role == STERICOL_INPUT_Y && named == STERICOL_INPUT_LATITUDE) ||
        (role == STERICOL_INPUT_X && named == STERICOL_INPUT_LONGITUDE))
        role = named;
    if (role != STERICOL_INPUT_NO_ROLE)
        return sign(role, STERICOL_INPUT_BY_AXIS, "axis");
    if (stericol_cf_text_of(variable, "positive"))
        return sign(STERICOL_INPUT_LEVEL, STERICOL_INPUT_BY_AXIS, "positive");
    if (by_units.role != STERICOL_INPUT_NO_ROLE)
        return by_units;
    return sign(named, STERICOL_INPUT_BY_NAME, "its name");
}

/* ---- temperature and salinity ---- */

typedef struct named_kind {
    const char *name;
    int kind;
    bool assumed;
} named_kind;

static const named_kind standard_kinds[][8] = {
    {{"sea_water_temperature", STERICOL_TEMPERATURE_IN_SITU, false},
     {"sea_water_potential_temperature", STERICOL_TEMPERATURE_POTENTIAL, false},
     {"sea_water_conservative_temperature", STERICOL_TEMPERATURE_CONSERVATIVE, false}},
    /* The generic name says nothing of the scale, so its kind counts as assumed. */
    {{"sea_water_practical_salinity", STERICOL_SALINITY_PRACTICAL, false},
     {"sea_water_salinity", STERICOL_SALINITY_PRACTICAL, true},
     {"sea_water_absolute_salinity", STERICOL_SALINITY_ABSOLUTE, false},
     {"sea_water_reference_salinity", STERICOL_SALINITY_REFERENCE, false},
     {"sea_water_preformed_salinity", STERICOL_SALINITY_REFERENCE, true},
     {"sea_water_knudsen_salinity", STERICOL_SALINITY_PRACTICAL, true},
     {"sea_water_cox_salinity", STERICOL_SALINITY_PRACTICAL, true}},
};

static const named_kind phrases[][6] = {
    {{"conservative temperature", STERICOL_TEMPERATURE_CONSERVATIVE, false},
     {"potential temperature", STERICOL_TEMPERATURE_POTENTIAL, false},
     {"in situ temperature", STERICOL_TEMPERATURE_IN_SITU, false},
     {"in-situ temperature", STERICOL_TEMPERATURE_IN_SITU, false}},
    {{"absolute salinity", STERICOL_SALINITY_ABSOLUTE, false},
     {"reference salinity", STERICOL_SALINITY_REFERENCE, false},
     {"preformed salinity", STERICOL_SALINITY_REFERENCE, true},
     {"practical salinity", STERICOL_SALINITY_PRACTICAL, false}},
};

static const named_kind common_kinds[][24] = {
    {{"thetao", STERICOL_TEMPERATURE_POTENTIAL, true},
     {"bigthetao", STERICOL_TEMPERATURE_CONSERVATIVE, true},
     {"theta", STERICOL_TEMPERATURE_POTENTIAL, true},
     {"ptemp", STERICOL_TEMPERATURE_POTENTIAL, true},
     {"potemp", STERICOL_TEMPERATURE_POTENTIAL, true},
     {"pottmp", STERICOL_TEMPERATURE_POTENTIAL, true},
     {"pot_temp", STERICOL_TEMPERATURE_POTENTIAL, true},
     {"potential_temperature", STERICOL_TEMPERATURE_POTENTIAL, true},
     {"conservative_temperature", STERICOL_TEMPERATURE_CONSERVATIVE, true},
     {"temperature", STERICOL_TEMPERATURE_IN_SITU, true},
     {"temp", STERICOL_TEMPERATURE_IN_SITU, true},
     {"t_an", STERICOL_TEMPERATURE_IN_SITU, true},
     {"votemper", STERICOL_TEMPERATURE_IN_SITU, true},
     {"toce", STERICOL_TEMPERATURE_IN_SITU, true},
     {"water_temp", STERICOL_TEMPERATURE_IN_SITU, true},
     {"sea_water_temperature", STERICOL_TEMPERATURE_IN_SITU, true}},
    {{"so", STERICOL_SALINITY_PRACTICAL, true},
     {"salinity", STERICOL_SALINITY_PRACTICAL, true},
     {"salt", STERICOL_SALINITY_PRACTICAL, true},
     {"sal", STERICOL_SALINITY_PRACTICAL, true},
     {"psal", STERICOL_SALINITY_PRACTICAL, true},
     {"s_an", STERICOL_SALINITY_PRACTICAL, true},
     {"vosaline", STERICOL_SALINITY_PRACTICAL, true},
     {"soce", STERICOL_SALINITY_PRACTICAL, true},
     {"practical_salinity", STERICOL_SALINITY_PRACTICAL, true},
     {"absolute_salinity", STERICOL_SALINITY_ABSOLUTE, true},
     {"reference_salinity", STERICOL_SALINITY_REFERENCE, true},
     {"sea_water_salinity", STERICOL_SALINITY_PRACTICAL, true}},
};

static const named_kind *kind_in(const named_kind *list, size_t count, const char *name)
{
    for (size_t i = 0; name && i < count && list[i].name; i++)
        if (stericol_same_ignoring_case(list[i].name, name))
            return &list[i];
    return NULL;
}

static const named_kind *phrase_in(const named_kind *list, size_t count, const char *text)
{
    char lower[256];
    size_t length = 0;
    for (; text && text[length] && length + 1 < sizeof lower; length++)
        lower[length] = (char)(text[length] >= 'A' && text[length] <= 'Z' ? text[length] - 'A' + 'a'
                               : text[length] == '_'                      ? ' '
                                                                          : text[length]);
    lower[length] = '\0';
    for (size_t i = 0; i < count && list[i].name; i++)
        if (strstr(lower, list[i].name))
            return &list[i];
    return NULL;
}

/* Statistics of a quantity are not the quantity. */
static bool is_statistic(const stericol_cf_variable *variable)
{
    static const char *const ends[] = {"_se",    "_sd",   "_std",  "_stdev",       "_err",   "_error",
                                       "_var",   "_qc",   "_flag", "_flags",       "_nobs",  "_dd",
                                       "_count", "_bnds", "_mask", "_uncertainty", "_bounds"};
    for (size_t i = 0; i < COUNT(ends); i++)
        if (stericol_ends_with(variable->short_name, ends[i]))
            return true;
    const char *standard_name = stericol_cf_text_of(variable, "standard_name");
    if (standard_name && strchr(standard_name, ' '))
        return true;
    static const char *const methods[] = {"standard_deviation", "variance", "range",   "sum_of_squares",
                                          "root_mean_square",   "anomaly",  "maximum", "minimum"};
    const char *cell_methods = stericol_cf_text_of(variable, "cell_methods");
    for (size_t i = 0; cell_methods && i < COUNT(methods); i++)
        if (strstr(cell_methods, methods[i]))
            return true;
    return stericol_cf_attribute_of(variable, "flag_values") ||
           stericol_cf_attribute_of(variable, "flag_meanings") ||
           stericol_cf_attribute_of(variable, "flag_masks");
}

static bool is_it(void *user, const stericol_cf_variable *found)
{
    return found == user;
}

static bool is_ancillary(const stericol_cf_file *file, const stericol_cf_variable *variable)
{
    for (size_t i = 0; i < stericol_cf_variable_count(file); i++)
        if (stericol_input_each_named(file, stericol_cf_variable_at(file, i), "ancillary_variables", is_it,
                                      (void *)(uintptr_t)variable))
            return true;
    return false;
}

bool stericol_input_is_field(const stericol_cf_file *file, const stericol_cf_variable *variable)
{
    return variable->type != STERICOL_CF_CHAR && variable->type != STERICOL_CF_STRING &&
           variable->type != STERICOL_CF_OTHER && !is_statistic(variable) && !is_ancillary(file, variable);
}

stericol_input_finding stericol_input_kind_of(stericol_input_quantity quantity,
                                              const stericol_cf_variable *variable)
{
    const named_kind *standard = kind_in(standard_kinds[quantity], COUNT(standard_kinds[0]),
                                         stericol_cf_text_of(variable, "standard_name"));
    if (standard)
        return (stericol_input_finding){8, standard->kind, standard->assumed, "standard_name"};
    const named_kind *phrase =
        phrase_in(phrases[quantity], COUNT(phrases[0]), stericol_cf_text_of(variable, "long_name"));
    const named_kind *common = kind_in(common_kinds[quantity], COUNT(common_kinds[0]), variable->short_name);
    if (phrase)
        return (stericol_input_finding){common ? 3 : 1, phrase->kind, phrase->assumed, "long_name"};
    if (common)
        return (stericol_input_finding){2, common->kind, common->assumed, "its name"};
    return (stericol_input_finding){0};
}

stericol_input_finding stericol_input_recognise(stericol_input_quantity quantity,
                                                const stericol_cf_file *file,
                                                const stericol_cf_variable *variable)
{
    stericol_input_finding finding = stericol_input_kind_of(quantity, variable);
    if (!finding.strength || !stericol_input_is_field(file, variable))
        return (stericol_input_finding){0};
    const char *standard_name = stericol_cf_text_of(variable, "standard_name");
    if (standard_name && *standard_name && finding.strength < 8)
        return (stericol_input_finding){0}; /* it says that it is something else */
    /* Of several with the same standard name the one with a usual name is the field itself. */
    if (finding.strength == 8 &&
        kind_in(common_kinds[quantity], COUNT(common_kinds[0]), variable->short_name))
        finding.strength = 9;
    return finding;
}

const char *stericol_input_kind_text(stericol_input_quantity quantity, int kind)
{
    static const char *const texts[][4] = {
        {"unknown", "in situ temperature", "potential temperature", "conservative temperature"},
        {"unknown", "practical salinity", "reference salinity", "absolute salinity"}};
    return kind >= 0 && kind < 4 ? texts[quantity][kind] : "unknown";
}
