/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Standard names: CF Standard Name Table, version 83.  The ..._change_in_mean_sea_level names are those for
 * differences, since their zero is arbitrary; the ..._in_sea_surface_height names are defined from 0 degC and
 * S = 35.  There is no name for the heat content of conservative temperature: long_name alone.  cell_methods
 * stand in the order in which they were applied (CF-1.10, section 7.3).
 */
#include "result/names.h"

#include <assert.h>

#define STERIC "steric_change_in_mean_sea_level"
#define THERMOSTERIC "thermosteric_change_in_mean_sea_level"
#define HALOSTERIC "halosteric_change_in_mean_sea_level"
#define MEAN_OF_COVERED "volume change divided by the covered area"
#define NEVER_SCALED "sum over the columns used, not scaled up to the region's whole area"
#define SCALED_UP "the sum over the columns used, times the region's area over its covered area"
#define HEAT_COMMENT                                                                                         \
    "heat gained by the water of the column; independent of the zero of the temperature scale"

static const stericol_result_entry maps[STERICOL_MAP_COUNT] = {
    [STERICOL_MAP_STERIC] = {"steric_height_change", "m", "steric height change", STERIC, "depth: sum", NULL,
                             STERICOL_NEEDS_SALINITY, false},
    [STERICOL_MAP_THERMOSTERIC] = {"thermosteric_height_change", "m",
                                   "steric height change due to temperature", THERMOSTERIC, "depth: sum",
                                   NULL, 0, false},
    [STERICOL_MAP_HALOSTERIC] = {"halosteric_height_change", "m", "steric height change due to salinity",
                                 HALOSTERIC, "depth: sum", NULL, STERICOL_NEEDS_SALINITY, false},
    [STERICOL_MAP_REMAINDER] = {"attribution_remainder", "m",
                                "steric height change that the attribution leaves over", NULL, "depth: sum",
                                "total minus thermosteric minus halosteric",
                                STERICOL_NEEDS_SALINITY | STERICOL_NEEDS_REMAINDER, false},
    [STERICOL_MAP_HEAT] = {"heat_content_change", "J m-2", "heat content change per area", NULL, "depth: sum",
                           HEAT_COMMENT, 0, false},
    [STERICOL_MAP_EFFICIENCY] =
        {"expansion_efficiency", "m3 J-1", "thermosteric height change over heat content change", NULL, NULL,
         "missing where warming and cooling nearly cancel and the ratio means nothing", 0, false},
    [STERICOL_MAP_EXPANSION] = {"mean_thermal_expansion", "K-1",
                                "thermal expansion coefficient at the mean of both epochs", NULL,
                                "depth: mean", NULL, 0, false},
    [STERICOL_MAP_DEPTH] = {"integrated_depth", "m", "depth range that was integrated over", NULL,
                            "depth: sum", NULL, 0, true},
};

static const stericol_result_entry regions[STERICOL_REGION_QUANTITY_COUNT] = {
    [STERICOL_REGION_AREA] = {"area", "m2", "sea area", NULL, "area: sum", NULL, 0, true},
    [STERICOL_REGION_COVERED_AREA] = {"covered_area", "m2", "area of the columns used", NULL, "area: sum",
                                      NULL, 0, true},
    [STERICOL_REGION_MEAN_STERIC] = {"mean_steric_height_change", "m", "mean steric height change", STERIC,
                                     "depth: sum area: mean where sea", MEAN_OF_COVERED,
                                     STERICOL_NEEDS_SALINITY, false},
    [STERICOL_REGION_MEAN_THERMOSTERIC] = {"mean_thermosteric_height_change", "m",
                                           "mean steric height change due to temperature", THERMOSTERIC,
                                           "depth: sum area: mean where sea", MEAN_OF_COVERED, 0, false},
    [STERICOL_REGION_MEAN_HALOSTERIC] =
        {"mean_halosteric_height_change", "m", "mean steric height change due to salinity", HALOSTERIC,
         "depth: sum area: mean where sea",
         MEAN_OF_COVERED
         "; of a global mean this is no sea level, since salt is neither made nor lost, and it mostly "
         "shows drift of sensors",
         STERICOL_NEEDS_SALINITY, false},
    [STERICOL_REGION_VOLUME_STERIC] = {"steric_volume_change", "m3", "steric volume change", NULL,
                                       "depth: sum area: sum", NEVER_SCALED, STERICOL_NEEDS_SALINITY, false},
    [STERICOL_REGION_VOLUME_THERMOSTERIC] = {"thermosteric_volume_change", "m3",
                                             "steric volume change due to temperature", NULL,
                                             "depth: sum area: sum", NEVER_SCALED, 0, false},
    [STERICOL_REGION_VOLUME_HALOSTERIC] = {"halosteric_volume_change", "m3",
                                           "steric volume change due to salinity", NULL,
                                           "depth: sum area: sum", NEVER_SCALED, STERICOL_NEEDS_SALINITY,
                                           false},
    [STERICOL_REGION_HEAT] = {"heat_content_change", "J", "heat content change", NULL, "depth: sum area: sum",
                              NEVER_SCALED, 0, false},
    [STERICOL_REGION_SEA_LEVEL] = {"sea_level_equivalent", "m",
                                   "global mean sea level equivalent of the thermosteric volume change", NULL,
                                   NULL,
                                   "thermosteric volume change over the area of the world's ocean "
                                   "(attribute ocean_area)",
                                   0, false},
    [STERICOL_REGION_EFFICIENCY] =
        {"expansion_efficiency", "m YJ-1", "sea level equivalent over heat content change", NULL, NULL,
         "missing where warming and cooling nearly cancel and the ratio means nothing", 0, false},
    [STERICOL_REGION_FILLED_STERIC] = {"filled_steric_volume_change", "m3",
                                       "steric volume change scaled up to the whole sea area", NULL, NULL,
                                       SCALED_UP, STERICOL_NEEDS_SALINITY | STERICOL_NEEDS_FILLING, false},
    [STERICOL_REGION_FILLED_THERMOSTERIC] =
        {"filled_thermosteric_volume_change", "m3",
         "steric volume change due to temperature scaled up to the whole sea area", NULL, NULL, SCALED_UP,
         STERICOL_NEEDS_FILLING, false},
    [STERICOL_REGION_FILLED_HALOSTERIC] =
        {"filled_halosteric_volume_change", "m3",
         "steric volume change due to salinity scaled up to the whole sea area", NULL, NULL, SCALED_UP,
         STERICOL_NEEDS_SALINITY | STERICOL_NEEDS_FILLING, false},
    [STERICOL_REGION_FILLED_HEAT] = {"filled_heat_content_change", "J",
                                     "heat content change scaled up to the whole sea area", NULL, NULL,
                                     SCALED_UP, STERICOL_NEEDS_FILLING, false},
    [STERICOL_REGION_FILLED_SEA_LEVEL] =
        {"filled_sea_level_equivalent", "m",
         "sea level equivalent of the thermosteric volume change scaled up to the "
         "whole sea area",
         NULL, NULL, SCALED_UP, STERICOL_NEEDS_FILLING, false},
};

const char stericol_result_flag_meanings[] =
    "complete sea_floor end_of_data unequal gap no_data outside_range";

const stericol_result_entry *stericol_map_entry(stericol_map map)
{
    assert((unsigned)map < STERICOL_MAP_COUNT);
    return &maps[map];
}

const stericol_result_entry *stericol_region_entry(stericol_region_quantity quantity)
{
    assert((unsigned)quantity < STERICOL_REGION_QUANTITY_COUNT);
    return &regions[quantity];
}
