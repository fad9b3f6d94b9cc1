/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The rows.  Limits of numbers are there to catch a wrong unit, not to judge the sea. */
#include "job/options.h"

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

/* ---- headings ---- */

static const char epochs[] = "Epochs";
static const char field_heading[] = "Field and scenario";
static const char input_heading[] = "Input";
static const char reading[] = "Reading";
static const char salt[] = "Salinity from elsewhere";
static const char physics[] = "Equation and sharing out";
static const char vertical_heading[] = "Layers and the vertical";
static const char regions_heading[] = "Regions";
static const char companions[] = "What the files do not hold";
static const char results[] = "Results";
static const char running[] = "Running";

/* The greatest depth that a reach may have: more than any ocean's, m. */
#define DEEPEST 12000

/* ---- epochs ---- */

static const stericol_option earlier = {.name = "earlier",
                                        .metavar = "FILE",
                                        .kind = STERICOL_OPTION_PATHS,
                                        .repeatable = true,
                                        .group = epochs,
                                        .help = "The earlier epoch: a NetCDF file, a quoted pattern such as "
                                                "'sea_*.nc', or @list.txt with a path a line; "
                                                "the later epoch may name the same file"};
static const stericol_option later = {.name = "later",
                                      .metavar = "FILE",
                                      .kind = STERICOL_OPTION_PATHS,
                                      .repeatable = true,
                                      .group = epochs,
                                      .help = "The later epoch, given like the earlier one"};
static const stericol_option earlier_time = {
    .name = "earlier-time",
    .metavar = "FROM..TO",
    .kind = STERICOL_OPTION_WINDOW,
    .initial_words = "all times",
    .group = epochs,
    .help = "Times of the earlier epoch, ISO 8601 to any precision, both ends included: 2005-01..2009-12; "
            "one date alone is both ends"};
static const stericol_option later_time = {.name = "later-time",
                                           .metavar = "FROM..TO",
                                           .kind = STERICOL_OPTION_WINDOW,
                                           .initial_words = "all times",
                                           .group = epochs,
                                           .help = "Times of the later epoch"};
static const stericol_option earlier_step = {.name = "earlier-step",
                                             .metavar = "A..B",
                                             .kind = STERICOL_OPTION_STEPS,
                                             .group = epochs,
                                             .help = "Times of the earlier epoch by their number, the first "
                                                     "being 1, for files whose time axis means nothing: 3 "
                                                     "or 3..5"};
static const stericol_option later_step = {.name = "later-step",
                                           .metavar = "A..B",
                                           .kind = STERICOL_OPTION_STEPS,
                                           .group = epochs,
                                           .help = "Times of the later epoch by their number"};
static const stericol_option mean = {.name = "mean",
                                     .metavar = "state|integral",
                                     .kind = STERICOL_OPTION_CHOICE,
                                     .choices = "state|integral",
                                     .initial = "state",
                                     .group = epochs,
                                     .help = "How an epoch is averaged: its state first, or the integrals of "
                                             "its times (over a strong season 1 to 2 mm "
                                             "apart)"};
static const stericol_option least_times = {
    .name = "least-times",
    .metavar = "F",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = 1,
    .initial = "0.5",
    .group = epochs,
    .help = "Share of an epoch's times at which a level must have a value to count"};

/* ---- field and scenario ---- */

static const stericol_option field = {.name = "field",
                                      .metavar = "FILE",
                                      .kind = STERICOL_OPTION_PATHS,
                                      .repeatable = true,
                                      .group = field_heading,
                                      .help = "The field that is changed: a NetCDF file, a quoted pattern "
                                              "such as 'sea_*.nc', or @list.txt with a path a "
                                              "line"};
static const stericol_option field_time = {.name = "field-time",
                                           .metavar = "FROM..TO",
                                           .kind = STERICOL_OPTION_WINDOW,
                                           .initial_words = "all times",
                                           .group = field_heading,
                                           .help = "Times of the field, ISO 8601 to any precision, both ends "
                                                   "included: 2005-01..2009-12; one date alone is both ends"};
static const stericol_option field_step = {
    .name = "field-step",
    .metavar = "A..B",
    .kind = STERICOL_OPTION_STEPS,
    .group = field_heading,
    .help = "Times of the field by their number, the first being 1: 3 or 3..5"};
static const stericol_option warming = {.name = "warming",
                                        .metavar = "K",
                                        .kind = STERICOL_OPTION_NUMBER,
                                        .low = -20,
                                        .high = 20,
                                        .unit = "K",
                                        .group = field_heading,
                                        .help = "Warming of the whole column, in conservative temperature"};
static const stericol_option freshening = {
    .name = "freshening",
    .metavar = "G_PER_KG",
    .kind = STERICOL_OPTION_NUMBER,
    .low = -20,
    .high = 20,
    .unit = "g/kg",
    .group = field_heading,
    .help = "Freshening of the whole column: what absolute salinity loses"};
static const stericol_option profile = {.name = "profile",
                                        .metavar = "TABLE",
                                        .kind = STERICOL_OPTION_PATH,
                                        .group = field_heading,
                                        .help = "Text table with the columns depth (m), warming (K) and "
                                                "freshening (g/kg): linear between its rows, constant "
                                                "above the first and, down to the sea floor, below the last"};
static const stericol_option mean_of_field = {
    .name = "mean",
    .metavar = "state|integral",
    .kind = STERICOL_OPTION_CHOICE,
    .choices = "state|integral",
    .initial = "state",
    .group = field_heading,
    .help = "How the field's times are averaged: the state first, or the integrals of its times"};
static const stericol_option least_times_of_field = {
    .name = "least-times",
    .metavar = "F",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = 1,
    .initial = "0.5",
    .group = field_heading,
    .help = "Share of the field's times at which a level must have a value to count"};

/* ---- tables of one column ---- */

static const stericol_option earlier_table = {.name = "earlier",
                                              .metavar = "TABLE",
                                              .kind = STERICOL_OPTION_PATH,
                                              .group = input_heading,
                                              .help = "Text table of the earlier epoch, a level a line"};
static const stericol_option later_table = {.name = "later",
                                            .metavar = "TABLE",
                                            .kind = STERICOL_OPTION_PATH,
                                            .group = input_heading,
                                            .help = "Text table of the later epoch"};
static const stericol_option field_table = {.name = "field",
                                            .metavar = "TABLE",
                                            .kind = STERICOL_OPTION_PATH,
                                            .group = input_heading,
                                            .help = "Text table of a single epoch, in place of the two: its "
                                                    "levels, their densities and what they come from"};
static const stericol_option latitude = {.name = "latitude",
                                         .metavar = "DEGREES",
                                         .kind = STERICOL_OPTION_NUMBER,
                                         .low = -90,
                                         .high = 90,
                                         .unit = "degrees north",
                                         .initial = "45",
                                         .group = input_heading,
                                         .help = "Latitude of the column, for gravity"};
static const stericol_option sea_floor = {.name = "sea-floor",
                                          .metavar = "M",
                                          .kind = STERICOL_OPTION_NUMBER,
                                          .low = 0,
                                          .high = DEEPEST,
                                          .above_low = true,
                                          .unit = "m",
                                          .initial_words = "unknown",
                                          .group = input_heading,
                                          .help = "Depth of the sea floor at the column"};
static const stericol_option files = {
    .name = "file",
    .metavar = "FILE",
    .kind = STERICOL_OPTION_PATHS,
    .repeatable = true,
    .group = input_heading,
    .help =
        "What to look at: NetCDF files, quoted patterns such as 'sea_*.nc', or @list.txt with a path a line"};

static const stericol_option field_time_of_inspect = {
    .name = "field-time",
    .metavar = "FROM..TO",
    .kind = STERICOL_OPTION_WINDOW,
    .initial_words = "all times, of which the first alone is looked at closely",
    .group = input_heading,
    .help = "Times to look at, averaged as an epoch is, ISO 8601 to any precision, both ends included: "
            "2005-01..2009-12; one date alone is both ends"};
static const stericol_option field_step_of_inspect = {
    .name = "field-step",
    .metavar = "A..B",
    .kind = STERICOL_OPTION_STEPS,
    .group = input_heading,
    .help = "Times to look at by their number, the first being 1: 3 or 3..5"};

/* ---- reading ---- */

static const stericol_option temperature = {
    .name = "temperature",
    .metavar = "NAME",
    .kind = STERICOL_OPTION_TEXT,
    .initial_words = "recognised",
    .group = reading,
    .help = "Name of the temperature variable, where recognition fails or errs"};
static const stericol_option salinity = {
    .name = "salinity",
    .metavar = "NAME",
    .kind = STERICOL_OPTION_TEXT,
    .initial_words = "recognised",
    .group = reading,
    .help = "Name of the salinity variable, where recognition fails or errs"};
static const stericol_option temperature_kind = {.name = "temperature-kind",
                                                 .metavar = "in-situ|potential|conservative",
                                                 .kind = STERICOL_OPTION_CHOICE,
                                                 .choices = "in-situ|potential|conservative",
                                                 .initial_words = "as the file says",
                                                 .group = reading,
                                                 .help =
                                                     "Which temperature it is; overrides what the file says"};
static const stericol_option salinity_kind = {.name = "salinity-kind",
                                              .metavar = "practical|reference|absolute",
                                              .kind = STERICOL_OPTION_CHOICE,
                                              .choices = "practical|reference|absolute",
                                              .initial_words = "as the file says",
                                              .group = reading,
                                              .help = "Which salinity it is; overrides what the file says"};
/* A text table says nothing of kinds, so that there the defaults are fixed by the command. */
static const stericol_option temperature_scale = {
    .name = "temperature-scale",
    .metavar = "its90|ipts68",
    .kind = STERICOL_OPTION_CHOICE,
    .choices = "its90|ipts68",
    .initial = "its90",
    .group = reading,
    .help = "Temperature scale of the values; data from before 1990 may be on ipts68"};
static const stericol_option vertical_unit = {.name = "vertical-unit",
                                              .metavar = "m|dbar",
                                              .kind = STERICOL_OPTION_CHOICE,
                                              .choices = "m|dbar",
                                              .initial_words = "as the file says",
                                              .group = reading,
                                              .help =
                                                  "Unit of the vertical coordinate, where the file has none"};
static const stericol_option select_member = {.name = "select",
                                              .metavar = "NAME=INDEX",
                                              .kind = STERICOL_OPTION_ASSIGNMENT,
                                              .repeatable = true,
                                              .group = reading,
                                              .help = "The member to take of a dimension beyond time, depth "
                                                      "and the two horizontal ones, the first being 1"};

static const stericol_option background_salinity = {
    .name = "background-salinity",
    .metavar = "FILE",
    .kind = STERICOL_OPTION_PATH,
    .group = salt,
    .help = "Salinity field for files with none; then only the thermosteric part and heat are written"};
static const stericol_option constant_salinity = {
    .name = "constant-salinity",
    .metavar = "VALUE",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = 45,
    .group = salt,
    .help =
        "One salinity for files with none, practical unless --salinity-kind says otherwise; then only the "
        "thermosteric part and heat are written"};
static const stericol_option salinity_anomaly = {
    .name = "salinity-anomaly",
    .metavar = "FILE",
    .kind = STERICOL_OPTION_PATH,
    .group = salt,
    .help = "Absolute salinity anomaly field (g/kg), added to reference salinity"};

static const stericol_option cell_area = {.name = "cell-area",
                                          .metavar = "FILE",
                                          .kind = STERICOL_OPTION_PATH,
                                          .group = companions,
                                          .help = "File with the areas of the cells"};
static const stericol_option thickness = {
    .name = "thickness",
    .metavar = "FILE",
    .kind = STERICOL_OPTION_PATH,
    .group = companions,
    .help = "File with the thickness of every cell, for partial cells at the sea floor"};
static const stericol_option mask = {.name = "mask",
                                     .metavar = "FILE",
                                     .kind = STERICOL_OPTION_PATH,
                                     .group = companions,
                                     .help = "File with the mask of sea (1) and land (0)"};
static const stericol_option coordinates = {
    .name = "coordinates",
    .metavar = "FILE",
    .kind = STERICOL_OPTION_PATH,
    .group = companions,
    .help = "File with the latitudes and longitudes of the cells, and their bounds"};
static const stericol_option bathymetry = {
    .name = "bathymetry",
    .metavar = "FILE",
    .kind = STERICOL_OPTION_PATH,
    .group = companions,
    .help = "File with the depth of the sea floor, on this grid or a finer one"};

/* ---- physics ---- */

static const stericol_option equation = {
    .name = "equation",
    .metavar = "teos10|gibbs|eos80|linear",
    .kind = STERICOL_OPTION_CHOICE,
    .choices = "teos10|gibbs|eos80|linear",
    .initial = "teos10",
    .group = physics,
    .help =
        "Equation of state: the 75-term polynomial of TEOS-10, its full Gibbs function, EOS-80, or constant "
        "coefficients"};
static const stericol_option expansion = {.name = "expansion",
                                          .metavar = "VALUE",
                                          .kind = STERICOL_OPTION_NUMBER,
                                          .low = -0.001,
                                          .high = 0.01,
                                          .unit = "1/K",
                                          .initial = "2e-4",
                                          .group = physics,
                                          .help = "Thermal expansion of the linear equation"};
static const stericol_option contraction = {.name = "contraction",
                                            .metavar = "VALUE",
                                            .kind = STERICOL_OPTION_NUMBER,
                                            .low = 0,
                                            .high = 0.01,
                                            .unit = "kg/g",
                                            .initial = "7.5e-4",
                                            .group = physics,
                                            .help = "Haline contraction of the linear equation"};
static const stericol_option density = {.name = "density",
                                        .metavar = "VALUE",
                                        .kind = STERICOL_OPTION_NUMBER,
                                        .low = 900,
                                        .high = 1200,
                                        .unit = "kg/m3",
                                        .initial = "1027",
                                        .group = physics,
                                        .help = "Density of the linear equation at 10 degC and 35 g/kg"};
static const stericol_option reference_density = {
    .name = "reference-density",
    .metavar = "local|VALUE",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 900,
    .high = 1200,
    .unit = "kg/m3",
    .choices = "local",
    .initial = "local",
    .group = physics,
    .help = "local: the fractional change of volume; a value: the change of density over that constant "
            "(about 1 % apart)"};
static const stericol_option attribution = {
    .name = "attribution",
    .metavar = "symmetric|earlier|linear",
    .kind = STERICOL_OPTION_CHOICE,
    .choices = "symmetric|earlier|linear",
    .initial = "symmetric",
    .group = physics,
    .help = "How the change is shared out between heat and salt: symmetric closes exactly; one-sided from "
            "the earlier "
            "state, and linear at the mid state, leave a remainder that is written"};

/* ---- vertical ---- */

static const stericol_option layers = {
    .name = "layers",
    .metavar = "A..B,...",
    .kind = STERICOL_OPTION_LAYERS,
    .initial = "0..bottom",
    .group = vertical_heading,
    .help = "Depth ranges in metres, parted by commas: 0..700,700..2000,2000..bottom"};
static const stericol_option vertical = {.name = "vertical",
                                         .metavar = "auto|cells|linear|steffen|akima",
                                         .kind = STERICOL_OPTION_CHOICE,
                                         .choices = "auto|cells|linear|steffen|akima",
                                         .initial = "auto",
                                         .group = vertical_heading,
                                         .help = "What lies between values: cells takes them as means over "
                                                 "the file's own vertical cells, linear as samples, "
                                                 "steffen and akima draw splines through samples; auto is "
                                                 "cells where the file has bounds, else linear"};
static const stericol_option surface_reach = {
    .name = "surface-reach",
    .metavar = "M",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = DEEPEST,
    .unit = "m",
    .initial = "20",
    .group = vertical_heading,
    .help = "How deep the top sample may lie to be carried up to the surface"};
static const stericol_option gap_reach = {
    .name = "gap-reach",
    .metavar = "M",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = DEEPEST,
    .above_low = true,
    .unit = "m",
    .initial_words = "50 + 0.225 times the depth, at most 500",
    .group = vertical_heading,
    .help = "How wide a gap between values is bridged; a wider one ends the column"};
static const stericol_option bottom_reach = {
    .name = "bottom-reach",
    .metavar = "M",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = DEEPEST,
    .unit = "m",
    .initial_words = "500 with --bathymetry",
    .group = vertical_heading,
    .help = "How far below the deepest sample the sea floor may lie for the sample to be carried down to it; "
            "above a floor further down the column ends with the data"};
static const stericol_option bottom_reach_of_column = {
    .name = "bottom-reach",
    .metavar = "M",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = DEEPEST,
    .unit = "m",
    .initial_words = "500 with --sea-floor",
    .group = vertical_heading,
    .help = "How far below the deepest sample the sea floor may lie for the sample to be carried down to it; "
            "above a floor further down the column ends with the data"};

/* ---- regions ---- */

static const stericol_option region = {.name = "region",
                                       .metavar = "NAME=W,S,E,N",
                                       .kind = STERICOL_OPTION_BOX,
                                       .repeatable = true,
                                       .initial_words =
                                           "the world's oceans, both hemispheres and the whole domain",
                                       .group = regions_heading,
                                       .help = "A box to sum over, in degrees east and north; -180,S,180,N "
                                               "is the whole circle, and west may be greater than "
                                               "east across the date line"};
static const stericol_option regions = {.name = "regions",
                                        .metavar = "FILE",
                                        .kind = STERICOL_OPTION_PATH,
                                        .group = regions_heading,
                                        .help = "Regions of any shape: a NetCDF mask on the grid of the data "
                                                "with flag_values and flag_meanings (the only "
                                                "form that is read now)"};
static const stericol_option ocean_area = {
    .name = "ocean-area",
    .metavar = "M2",
    .kind = STERICOL_OPTION_NUMBER,
    .low = 0,
    .high = 5.2e14,
    .above_low = true,
    .unit = "m2",
    .initial = "3.625e14",
    .group = regions_heading,
    .help = "Area of the world's oceans, over which a volume change is spread for the sea-level equivalent"};
static const stericol_option fill_coverage = {
    .name = "fill-coverage",
    .kind = STERICOL_OPTION_SWITCH,
    .group = regions_heading,
    .help = "Also write sums scaled up from the area that has data to the region's whole sea area: into the "
            "result file, and with --table csv and json"};

/* ---- results and running ---- */

static const stericol_option output = {.name = "output",
                                       .metavar = "FILE",
                                       .kind = STERICOL_OPTION_PATH,
                                       .initial_words = "none; totals are printed only",
                                       .group = results,
                                       .help = "NetCDF file for maps and totals, whole or not at all"};
static const stericol_option replace = {
    .name = "replace",
    .kind = STERICOL_OPTION_SWITCH,
    .group = results,
    .help = "Replace an output file that exists; without it the run is refused"};
static const stericol_option table = {.name = "table",
                                      .metavar = "text|csv|json",
                                      .kind = STERICOL_OPTION_CHOICE,
                                      .choices = "text|csv|json",
                                      .initial = "text",
                                      .group = results,
                                      .help = "How the region totals appear on standard output"};
static const stericol_option table_of_column = {.name = "table",
                                                .metavar = "text|csv|json",
                                                .kind = STERICOL_OPTION_CHOICE,
                                                .choices = "text|csv|json",
                                                .initial = "text",
                                                .group = results,
                                                .help = "How the working appears on standard output"};
static const stericol_option table_of_inspect = {
    .name = "table",
    .metavar = "text|csv|json",
    .kind = STERICOL_OPTION_CHOICE,
    .choices = "text|csv|json",
    .initial = "text",
    .group = results,
    .help = "How what was found appears on standard output; csv holds the table of levels alone"};
static const stericol_option threads = {.name = "threads",
                                        .metavar = "N",
                                        .kind = STERICOL_OPTION_WHOLE,
                                        .low = 1,
                                        .high = 1024,
                                        .initial_words = "the cores there are",
                                        .group = running,
                                        .help = "Workers; the result is the same for any number"};
static const stericol_option memory = {.name = "memory",
                                       .metavar = "SIZE",
                                       .kind = STERICOL_OPTION_SIZE,
                                       .initial_words = "half of what is free",
                                       .group = running,
                                       .help = "The most memory to use"};
static const stericol_option settings = {.name = "settings",
                                         .metavar = "FILE",
                                         .kind = STERICOL_OPTION_PATH,
                                         .group = running,
                                         .help = "Text file of settings, 'name = value' a line with the "
                                                 "names of the long options; switches take yes or no, "
                                                 "# begins a comment, and the command line wins"};
static const stericol_option progress = {.name = "progress",
                                         .metavar = "auto|always|never",
                                         .kind = STERICOL_OPTION_CHOICE,
                                         .choices = "auto|always|never",
                                         .initial = "auto",
                                         .group = running,
                                         .help = "Progress on standard error: auto draws a bar on a terminal "
                                                 "only, always also writes lines elsewhere"};
static const stericol_option quiet = {.name = "quiet",
                                      .kind = STERICOL_OPTION_SWITCH,
                                      .group = running,
                                      .help = "No notices and no progress; errors are still told"};
static const stericol_option log_file = {.name = "log",
                                         .metavar = "FILE",
                                         .kind = STERICOL_OPTION_PATH,
                                         .group = running,
                                         .help = "Add a log of one JSON object a line to this file"};

/* ---- rules ---- */

static const char choose_one[] = "give only one of them";
static const char linear_only[] = "add --equation linear, or leave it out";

#define LINEAR_RULES                                                                                         \
    {STERICOL_RULE_NEEDS_VALUE, "expansion", "equation", "linear", linear_only},                             \
        {STERICOL_RULE_NEEDS_VALUE, "contraction", "equation", "linear", linear_only},                       \
    {                                                                                                        \
        STERICOL_RULE_NEEDS_VALUE, "density", "equation", "linear", linear_only                              \
    }
#define SALINITY_RULES                                                                                       \
    {STERICOL_RULE_EXCLUDES, "background-salinity", "constant-salinity", NULL, choose_one},                  \
    {                                                                                                        \
        STERICOL_RULE_EXCLUDES, "salinity", "constant-salinity", NULL,                                       \
            "name the variable, or give one value for all"                                                   \
    }
#define RUNNING_RULES                                                                                        \
    {                                                                                                        \
        STERICOL_RULE_NOT_VALUE, "quiet", "progress", "always", "leave one of them out"                      \
    }
#define OUTPUT_RULE                                                                                          \
    {                                                                                                        \
        STERICOL_RULE_NEEDS, "replace", "output", NULL, "name the file to write with --output"               \
    }

/* ---- change ---- */

static const stericol_option *const change_options[] = {&earlier,
                                                        &later,
                                                        &earlier_time,
                                                        &later_time,
                                                        &earlier_step,
                                                        &later_step,
                                                        &mean,
                                                        &least_times,
                                                        &temperature,
                                                        &salinity,
                                                        &temperature_kind,
                                                        &salinity_kind,
                                                        &temperature_scale,
                                                        &vertical_unit,
                                                        &select_member,
                                                        &background_salinity,
                                                        &constant_salinity,
                                                        &salinity_anomaly,
                                                        &cell_area,
                                                        &thickness,
                                                        &mask,
                                                        &coordinates,
                                                        &bathymetry,
                                                        &layers,
                                                        &vertical,
                                                        &surface_reach,
                                                        &gap_reach,
                                                        &bottom_reach,
                                                        &equation,
                                                        &expansion,
                                                        &contraction,
                                                        &density,
                                                        &reference_density,
                                                        &attribution,
                                                        &region,
                                                        &regions,
                                                        &ocean_area,
                                                        &fill_coverage,
                                                        &output,
                                                        &replace,
                                                        &table,
                                                        &threads,
                                                        &memory,
                                                        &settings,
                                                        &progress,
                                                        &quiet,
                                                        &log_file};
static const stericol_rule change_rules[] = {
    {STERICOL_RULE_REQUIRED, "earlier", NULL, NULL, "name the file of the earlier epoch"},
    {STERICOL_RULE_REQUIRED, "later", NULL, NULL, "name the file of the later epoch"},
    {STERICOL_RULE_EXCLUDES, "earlier-time", "earlier-step", NULL, choose_one},
    {STERICOL_RULE_EXCLUDES, "later-time", "later-step", NULL, choose_one},
    SALINITY_RULES,
    LINEAR_RULES,
    OUTPUT_RULE,
    RUNNING_RULES};
static const stericol_example change_examples[] = {
    {"Two files, maps and totals into one result",
     "stericol change --earlier velmar_1990s.nc --later velmar_2010s.nc "
     "--output change.nc"},
    {"Two windows of one series, three layers, one region",
     "stericol change --earlier velmar.nc --later velmar.nc --earlier-time 1995..1999 --later-time "
     "2015..2019 "
     "--layers 0..700,700..2000,2000..bottom --region Western_Basin=-169,30,-157,44.25 --output change.nc"}};

/* ---- inspect ---- */

static const stericol_option *const inspect_options[] = {&field_time_of_inspect,
                                                         &field_step_of_inspect,
                                                         &temperature,
                                                         &salinity,
                                                         &temperature_kind,
                                                         &salinity_kind,
                                                         &temperature_scale,
                                                         &vertical_unit,
                                                         &select_member,
                                                         &cell_area,
                                                         &thickness,
                                                         &mask,
                                                         &coordinates,
                                                         &table_of_inspect,
                                                         &memory,
                                                         &settings,
                                                         &progress,
                                                         &quiet,
                                                         &log_file};
static const stericol_rule inspect_rules[] = {
    {STERICOL_RULE_REQUIRED, "file", NULL, NULL, "name the file to look at"},
    {STERICOL_RULE_EXCLUDES, "field-time", "field-step", NULL, choose_one},
    RUNNING_RULES};
static const stericol_example inspect_examples[] = {
    {"What a file holds and how it would be read", "stericol inspect velmar_1990s.nc"},
    {"The same with a choice made",
     "stericol inspect velmar_run.nc --select member=3 --salinity-kind practical"}};

/* ---- column ---- */

static const stericol_option *const column_options[] = {&earlier_table,
                                                        &later_table,
                                                        &field_table,
                                                        &latitude,
                                                        &sea_floor,
                                                        &temperature_kind,
                                                        &salinity_kind,
                                                        &temperature_scale,
                                                        &vertical_unit,
                                                        &layers,
                                                        &vertical,
                                                        &surface_reach,
                                                        &gap_reach,
                                                        &bottom_reach_of_column,
                                                        &equation,
                                                        &expansion,
                                                        &contraction,
                                                        &density,
                                                        &reference_density,
                                                        &attribution,
                                                        &table_of_column,
                                                        &settings,
                                                        &quiet,
                                                        &log_file};
static const stericol_rule column_rules[] = {
    {STERICOL_RULE_REQUIRED, "earlier|field", NULL, NULL, "give --earlier and --later, or --field alone"},
    {STERICOL_RULE_EXCLUDES, "field", "earlier", NULL, "give --earlier and --later, or --field alone"},
    {STERICOL_RULE_EXCLUDES, "field", "later", NULL, "give --earlier and --later, or --field alone"},
    {STERICOL_RULE_NEEDS, "earlier", "later", NULL, "name the table of the later epoch"},
    {STERICOL_RULE_NEEDS, "later", "earlier", NULL, "name the table of the earlier epoch"},
    {STERICOL_RULE_NEEDS, "bottom-reach", "sea-floor", NULL,
     "give the depth of the sea floor, or leave it out"},
    LINEAR_RULES};
static const stericol_example column_examples[] = {
    {"The working of a change, level by level",
     "stericol column --earlier station_1998.txt --later station_2018.txt --latitude 38.4"},
    {"One table alone, as numbers for another program",
     "stericol column --field station_1998.txt --table csv"}};

/* ---- scenario ---- */

static const stericol_option *const scenario_options[] = {&field,
                                                          &field_time,
                                                          &field_step,
                                                          &warming,
                                                          &freshening,
                                                          &profile,
                                                          &mean_of_field,
                                                          &least_times_of_field,
                                                          &temperature,
                                                          &salinity,
                                                          &temperature_kind,
                                                          &salinity_kind,
                                                          &temperature_scale,
                                                          &vertical_unit,
                                                          &select_member,
                                                          &background_salinity,
                                                          &constant_salinity,
                                                          &salinity_anomaly,
                                                          &cell_area,
                                                          &thickness,
                                                          &mask,
                                                          &coordinates,
                                                          &bathymetry,
                                                          &layers,
                                                          &vertical,
                                                          &surface_reach,
                                                          &gap_reach,
                                                          &bottom_reach,
                                                          &equation,
                                                          &expansion,
                                                          &contraction,
                                                          &density,
                                                          &reference_density,
                                                          &attribution,
                                                          &region,
                                                          &regions,
                                                          &ocean_area,
                                                          &fill_coverage,
                                                          &output,
                                                          &replace,
                                                          &table,
                                                          &threads,
                                                          &memory,
                                                          &settings,
                                                          &progress,
                                                          &quiet,
                                                          &log_file};
static const stericol_rule scenario_rules[] = {
    {STERICOL_RULE_REQUIRED, "field", NULL, NULL, "name the file of the field"},
    {STERICOL_RULE_REQUIRED, "warming|freshening|profile", NULL, NULL, "say how the field is changed"},
    {STERICOL_RULE_EXCLUDES, "field-time", "field-step", NULL, choose_one},
    {STERICOL_RULE_EXCLUDES, "profile", "warming", NULL,
     "put the warming into the table, or leave the table out"},
    {STERICOL_RULE_EXCLUDES, "profile", "freshening", NULL,
     "put the freshening into the table, or leave the table out"},
    {STERICOL_RULE_EXCLUDES, "freshening", "background-salinity", NULL,
     "a field without its own salinity has no halosteric part"},
    {STERICOL_RULE_EXCLUDES, "freshening", "constant-salinity", NULL,
     "a field without its own salinity has no halosteric part"},
    SALINITY_RULES,
    LINEAR_RULES,
    OUTPUT_RULE,
    RUNNING_RULES};
static const stericol_example scenario_examples[] = {
    {"One kelvin everywhere", "stericol scenario --field velmar_2010s.nc --warming 1 --output warmer.nc"},
    {"Warming and freshening by depth",
     "stericol scenario --field velmar_2010s.nc --profile warming_by_depth.txt --output scenario.nc"}};

/* ---- the commands ---- */

static const stericol_command commands[] = {
    {.name = "inspect",
     .summary = "say what a file holds and how it would be read",
     .synopsis = "FILE... [OPTIONS]",
     .description = "Looks at NetCDF files without computing anything: the variables chosen and why, kinds "
                    "and units, the vertical "
                    "coordinate, times, coverage, suspect values, and what would be refused and why. Run it "
                    "first on data that you "
                    "do not know.",
     .options = inspect_options,
     .option_count = COUNT(inspect_options),
     .positional = &files,
     .rules = inspect_rules,
     .rule_count = COUNT(inspect_rules),
     .examples = inspect_examples,
     .example_count = COUNT(inspect_examples)},
    {.name = "change",
     .summary = "steric height and heat content change between two epochs",
     .synopsis = "--earlier FILE --later FILE [OPTIONS]",
     .description = "Turns the temperature and salinity of two epochs into steric, thermosteric and "
                    "halosteric height change and "
                    "heat content change: maps in a NetCDF file, totals of regions on standard output.\n\n"
                    "Both epochs must be on one grid. What a file does not say is assumed aloud, or asked "
                    "for by an error that names "
                    "the option to give.",
     .options = change_options,
     .option_count = COUNT(change_options),
     .rules = change_rules,
     .rule_count = COUNT(change_rules),
     .examples = change_examples,
     .example_count = COUNT(change_examples)},
    {.name = "scenario",
     .summary = "what a prescribed warming and freshening does to a real field",
     .synopsis = "--field FILE (--warming K | --freshening G_PER_KG | --profile TABLE) [OPTIONS]",
     .description = "Adds a warming to the conservative temperature of a field and takes a freshening from "
                    "its absolute salinity (with "
                    "eos80: potential temperature and practical salinity), one number for the whole column "
                    "or a profile by depth, and "
                    "writes the same quantities as change.",
     .options = scenario_options,
     .option_count = COUNT(scenario_options),
     .rules = scenario_rules,
     .rule_count = COUNT(scenario_rules),
     .examples = scenario_examples,
     .example_count = COUNT(scenario_examples)},
    {.name = "column",
     .summary = "one column from a small text table: the working, level by level",
     .synopsis = "(--earlier TABLE --later TABLE | --field TABLE) [OPTIONS]",
     .description = "Works through a single column with every step shown: for checking by hand, for "
                    "teaching, for one station.",
     .options = column_options,
     .option_count = COUNT(column_options),
     .rules = column_rules,
     .rule_count = COUNT(column_rules),
     .examples = column_examples,
     .example_count = COUNT(column_examples)},
};

const stericol_command *stericol_commands(size_t *count)
{
    *count = COUNT(commands);
    return commands;
}
