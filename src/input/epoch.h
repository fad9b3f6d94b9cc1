/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * An epoch: one or many gridded files, the times chosen from them, read level by level as one averaged state.
 */
#ifndef STERICOL_INPUT_EPOCH_H
#define STERICOL_INPUT_EPOCH_H

#include "cf/field.h"
#include "cf/time.h"
#include "input/grid.h"

typedef enum stericol_temperature_kind {
    STERICOL_TEMPERATURE_UNKNOWN,
    STERICOL_TEMPERATURE_IN_SITU,
    STERICOL_TEMPERATURE_POTENTIAL,
    STERICOL_TEMPERATURE_CONSERVATIVE
} stericol_temperature_kind;

typedef enum stericol_salinity_kind {
    STERICOL_SALINITY_UNKNOWN,
    STERICOL_SALINITY_PRACTICAL,
    STERICOL_SALINITY_REFERENCE, /* g/kg; preformed salinity counts as this, with a warning */
    STERICOL_SALINITY_ABSOLUTE   /* g/kg */
} stericol_salinity_kind;

/* What is asked of an epoch; NULL and 0 mean "decide from the file".  Texts live as long as the epoch. */
typedef struct stericol_epoch_request {
    const char *label; /* "earlier", "later", "field": for messages, and for the option names in them */
    const char *const *paths; /* globs and lists already expanded */
    size_t path_count;
    const char *time_window;                    /* "FROM..TO", or NULL */
    size_t first_step, last_step;               /* 1-based over all files in time order; 0, 0: none given */
    const char *temperature, *salinity;         /* names, or NULL */
    stericol_temperature_kind temperature_kind; /* UNKNOWN: as the file says */
    stericol_salinity_kind salinity_kind;
    const char *vertical_unit; /* "m", "dbar" or NULL */
    const char *const *select; /* "NAME=INDEX", 1-based */
    size_t select_count;
    const char *coordinates_file, *cell_area_file, *thickness_file, *mask_file; /* or NULL */
    double least_times;     /* share of the members that a level needs */
    bool wants_temperature; /* false for a background salinity */
    bool wants_salinity;    /* false: the file need not have one (and none is read) */
    bool salinity_optional; /* a missing salinity is no error: stericol_epoch_has_salinity() tells */
    /*
     * What is read in the place of salinity is an anomaly of absolute salinity in g/kg, within -1..1:
     * `salinity`, or the only field with levels in the file.  wants_temperature must be false.
     */
    bool salinity_anomaly;
    size_t cache_bytes; /* for the decoder, in all */
} stericol_epoch_request;

typedef struct stericol_epoch stericol_epoch;

/*
 * Opens every file, chooses variables, axes, members, and checks that all files agree on one grid.  Every
 * decision and assumption goes out as a notice, once, and is kept (stericol_epoch_assumption()).
 *
 * Variables: standard_name, else a usual name or a long_name that names the kind; more than one equally good
 * is refused.  Axes: standard_name, then units that name a direction or a date, _CoordinateAxisType, axis,
 * positive, units of length or pressure, then usual names.  Intervals of times: bounds; without them the
 * calendar month (year) that holds the stamp where stamps are monthly (yearly), else halfway to the
 * neighbours.  A window takes the times whose middle lies in it.  Temperature and salinity of separate files
 * are paired by time, within half an interval (without intervals: one day), or by order where neither has
 * dates.  time_window and first_step exclude each other.
 *
 * STERICOL_INPUT: what cannot be used; STERICOL_NOTHING: a window or steps without data; STERICOL_USAGE: a
 * window that cannot be read; STERICOL_MEMORY.  *epoch is NULL on failure.
 *
 * Files are looked at one after another; at most 64 stay open, the others are opened again when they are
 * read, and refused if they were changed meanwhile.
 */
stericol_status stericol_epoch_open(stericol_context *context, const stericol_cf_units *units,
                                    const stericol_epoch_request *request, stericol_epoch **epoch);
void stericol_epoch_close(stericol_epoch *epoch);

const stericol_grid *stericol_epoch_grid(const stericol_epoch *epoch);
bool stericol_epoch_has_salinity(const stericol_epoch *epoch);

/* How a variable was chosen and read: for inspect, messages and provenance. */
typedef struct stericol_epoch_variable {
    const char *file, *name;
    const char *unit;          /* as written in the file; NULL for none */
    const char *standard_name; /* NULL for none */
    const char *reason;        /* how it was recognised, one phrase */
    int kind;                  /* stericol_temperature_kind or stericol_salinity_kind */
    bool kind_assumed;         /* the file does not say it */
    bool unit_assumed;
} stericol_epoch_variable;
stericol_epoch_variable stericol_epoch_temperature(const stericol_epoch *epoch);
stericol_epoch_variable stericol_epoch_salinity(const stericol_epoch *epoch);

/* The times that make the epoch, in the order in which they are averaged (by calendar month, then time). */
typedef struct stericol_epoch_member {
    const char *temperature_file, *salinity_file; /* NULL where not read */
    bool dated;
    double start, end;   /* day numbers of its interval; equal where only an instant is known */
    double length;       /* days; the weight within its calendar month (1 where unknown) */
    int month;           /* 1..12, 0 where members are annual or coarser, or not dated */
    double month_weight; /* length in days of that calendar month within the epoch (0 where month is 0) */
    char text[64];       /* e.g. "2005-01" or "step 3" */
} stericol_epoch_member;
size_t stericol_epoch_member_count(const stericol_epoch *epoch);
const stericol_epoch_member *stericol_epoch_member_at(const stericol_epoch *epoch, size_t index);
/* "2005-01-01 to 2009-12-31, 60 monthly means", one line; owned by the epoch. */
const char *stericol_epoch_description(const stericol_epoch *epoch);
/* The first and last instant as "YYYY-MM-DD", NULL where not dated; owned by the epoch. */
const char *stericol_epoch_first_date(const stericol_epoch *epoch);
const char *stericol_epoch_last_date(const stericol_epoch *epoch);
/* How many members fall in each calendar month: count[0] for January. */
void stericol_epoch_months(const stericol_epoch *epoch, size_t count[12]);

size_t stericol_epoch_assumption_count(const stericol_epoch *epoch);
const char *stericol_epoch_assumption(const stericol_epoch *epoch, size_t index);
/* Every file read, for provenance. */
size_t stericol_epoch_file_count(const stericol_epoch *epoch);
const char *stericol_epoch_file(const stericol_epoch *epoch, size_t index, stericol_cf_identity *identity);

/* Multiples of levels and rows that decode nothing twice (see stericol_cf_field_stride), over all variables.
 */
void stericol_epoch_stride(const stericol_epoch *epoch, size_t *levels, size_t *rows);
/* Memory in use for `levels` levels of `rows` rows besides the caller's own buffers. */
size_t stericol_epoch_bytes(const stericol_epoch *epoch, size_t levels, size_t rows);

/* What was met on one level, added up over calls. */
typedef struct stericol_epoch_tally {
    stericol_cf_tally temperature, salinity;
    unsigned long long
        zeros; /* points of the averaged state with T = 0 and S = 0 exactly (T = 0 where no S is read) */
} stericol_epoch_tally;

/*
 * Averaged state of `levels` levels from level0 (grid order: surface down) and `rows` rows from row0:
 * temperature[level][row][column] in degC, salinity likewise in the units of its kind (practical 1, or g/kg),
 * NaN missing,
 * +-INFINITY rejected (outside -4..45 degC, 0..45).  Dry cells (mask) are NaN.  Either pointer may be NULL.
 * tally: [levels], or NULL.
 * Averaging (docs, "Epochs"): within each calendar month by the members' lengths, then over the months
 * present by the months' lengths; a value needs least_times of the members.  A rejected value is left out
 * like a missing one; where too few are left, the result is its infinity.  An epoch of one member is not
 * averaged: the very bits of the file.
 *
 * STERICOL_INPUT: a read error; or, judged for each member and level as far as this call reads it, values
 * that cannot be what they are called: more than a tenth of at least 20 outside the limits, any outside where
 * the unit was assumed, salinities all below 0.05.  The message has the range met and the likely cause.
 * STERICOL_MEMORY.  On failure the outputs hold nothing of use.
 */
stericol_status stericol_epoch_load(stericol_context *context, stericol_epoch *epoch, size_t level0,
                                    size_t levels, size_t row0, size_t rows, double *temperature,
                                    double *salinity, stericol_epoch_tally *tally);

/* One member alone, not averaged; the same shapes. */
stericol_status stericol_epoch_load_member(stericol_context *context, stericol_epoch *epoch, size_t member,
                                           size_t level0, size_t levels, size_t row0, size_t rows,
                                           double *temperature, double *salinity,
                                           stericol_epoch_tally *tally);

/*
 * Where own_depths: depth of the sample and upper and lower limit of its cell, m positive down,
 * [level][row][column]; NaN where there is no cell.  upper and lower may be NULL.
 */
stericol_status stericol_epoch_load_depths(stericol_context *context, stericol_epoch *epoch, size_t level0,
                                           size_t levels, size_t row0, size_t rows, double *depth,
                                           double *upper, double *lower);

/*
 * Terrain-following grids: the depth of the sea floor below the surface that formula_terms give, m,
 * [rows][columns]; <= 0 or NaN on land.  False, and nothing written, on other grids.
 */
bool stericol_epoch_sea_floor(const stericol_epoch *epoch, double *floor);

#endif
