/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What a file seems to be that holds no gridded temperature or salinity, so that its refusal leads somewhere.
 */
#include "input/room.h"

#include <string.h>

/* Why the file seems to hold single casts; NULL where it does not. */
static const char *sign_of_casts(const stericol_cf_file *file)
{
    /* CF 1.10, table 9.1: a gridded file has no featureType. */
    static const char *const features[] = {"profile",    "trajectoryProfile", "timeSeriesProfile",
                                           "trajectory", "timeSeries",        "point"};
    static const char *const signs[] = {"featureType profile",           "featureType trajectoryProfile",
                                        "featureType timeSeriesProfile", "featureType trajectory",
                                        "featureType timeSeries",        "featureType point"};
    const char *feature = stericol_cf_global_text(file, "featureType");
    bool profiles = false, levels = false;
    for (size_t i = 0; feature && i < sizeof features / sizeof *features; i++)
        if (stericol_same_ignoring_case(feature, features[i]))
            return signs[i];
    /* The float-profile format (Argo user's manual) has these two. */
    for (size_t i = 0; i < stericol_cf_dimension_count(file); i++) {
        const char *name = stericol_cf_dimension_at(file, i)->name;
        profiles = profiles || strcmp(name, "N_PROF") == 0;
        levels = levels || strcmp(name, "N_LEVELS") == 0;
    }
    return profiles && levels ? "dimensions N_PROF and N_LEVELS" : NULL;
}

stericol_status stericol_input_refuse_shape(const stericol_input_reader *reader, const char *variable,
                                            const char *remedy, const char *problem)
{
    const char *sign = sign_of_casts(reader->file);
    if (sign)
        return stericol_input_refuse(reader, NULL, "give gridded fields",
                                     "holds floats or casts (%s), which this version does not read", sign);
    return stericol_input_refuse(reader, variable, remedy, "%s", problem);
}

static bool is_one_of(const char *const *names, const char *name)
{
    for (size_t i = 0; name && names[i]; i++)
        if (stericol_same_ignoring_case(names[i], name))
            return true;
    return false;
}

static bool has_field(const stericol_input_reader *reader)
{
    for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
        stericol_input_roles roles;
        if (variable->rank < 3 || variable->rank > STERICOL_CF_MOST_RANK ||
            !stericol_input_is_field(reader->file, variable))
            continue;
        stericol_input_find_roles(reader, variable, &roles);
        for (size_t d = 0; d < variable->rank; d++)
            if (roles.sign[d].role == STERICOL_INPUT_LEVEL)
                return true;
    }
    return false;
}

/* The option that takes a file with `variable` in it, as far as its attributes and name tell; else NULL. */
static const char *option_for(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                              const char **what)
{
    static const char *const heights[] = {"altitude", "surface_altitude", "bedrock_altitude", NULL};
    static const char *const masks[] = {"land_binary_mask", "sea_binary_mask", "land_area_fraction",
                                        "sea_area_fraction", NULL};
    static const char *const usual_masks[] = {"mask",     "land_mask",  "landmask", "tmask", "mask_rho",
                                              "sea_mask", "ocean_mask", "sftlf",    "sftof", NULL};
    static const char *const usual_floors[] = {"bathymetry", "bathy",     "deptho",    "topo",
                                               "topography", "elevation", "sea_floor", NULL};
    const char *standard_name = stericol_cf_text_of(variable, "standard_name");
    const bool named = standard_name && *standard_name;
    const bool length = stericol_cf_units_quantity(reader->units, stericol_cf_text_of(variable, "units")) ==
                        STERICOL_CF_QUANTITY_LENGTH;
    if (variable->rank < 2)
        return NULL;
    *what = "the depth of the sea floor";
    if (named ? strstr(standard_name, "sea_floor_depth") || is_one_of(heights, standard_name)
              : length && is_one_of(usual_floors, variable->short_name))
        return "--bathymetry";
    *what = "a mask of land and sea";
    if (named ? is_one_of(masks, standard_name) : is_one_of(usual_masks, variable->short_name))
        return "--mask";
    *what = "a mask of regions";
    if (stericol_cf_attribute_of(variable, "flag_values") && stericol_cf_text_of(variable, "flag_meanings"))
        return "--regions";
    *what = "the areas of cells";
    return named && strcmp(standard_name, "cell_area") == 0 ? "--cell-area" : NULL;
}

bool stericol_input_refuse_other(const stericol_input_reader *reader, stericol_input_quantity quantity)
{
    const char *name = stericol_input_quantity_name[quantity];
    if (sign_of_casts(reader->file)) {
        stericol_input_refuse_shape(reader, NULL, "", "");
        return true;
    }
    if (has_field(reader))
        return false;
    for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(reader->file, i);
        const char *what, *option = option_for(reader, variable, &what);
        stericol_text remedy = {0};
        if (!option)
            continue;
        stericol_text_format(&remedy, "give it with %s, beside a file of %s", option, name);
        stericol_input_refuse(reader, variable->name, stericol_text_string(&remedy),
                              "no %s in this file, which seems to hold %s", name, what);
        stericol_text_free(&remedy);
        return true;
    }
    return false;
}
