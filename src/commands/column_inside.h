/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The parts of `column`; nobody else includes this. */
#ifndef STERICOL_COMMANDS_COLUMN_INSIDE_H
#define STERICOL_COMMANDS_COLUMN_INSIDE_H

#include "commands/session.h"
#include "commands/states.h"

#include "stericol/column.h"

/* ---- column_table.c: one text table as states ---- */

/* Arrays are [count], in one allocation that begins at `depth`. */
typedef struct stericol_working_table {
    char *path; /* owned */
    stericol_state_rule rule;
    bool temperature_assumed, salinity_assumed; /* the table does not say the kind */
    char *temperature_name, *salinity_name;     /* of the columns, owned */
    stericol_coordinate coordinate;             /* that the table is written in */
    size_t count;
    double *depth;                  /* m, increasing; given, or from pressure */
    double *pressure;               /* dbar, increasing; given, or from depth */
    double *salinity, *temperature; /* in the equation's own kinds; NaN is missing */
} stericol_working_table;

/*
 * Reads the text table of option `label` and turns it into states.  STERICOL_INPUT with the line of what
 * cannot be used; STERICOL_MEMORY.  On failure *table is all zero.
 */
stericol_status stericol_working_table_read(stericol_session *session, const char *label,
                                            const stericol_water *water, double latitude,
                                            stericol_working_table *table);
void stericol_working_table_free(stericol_working_table *table);

/* ---- column_levels.c: the levels of two states ---- */

/* The first gap that is too wide to be bridged, m.  Where there is none, upper, lower and allowed are NaN. */
typedef struct stericol_working_gap {
    double upper, lower; /* the samples on both sides */
    double allowed;      /* that is bridged there */
    double bridging;     /* what --gap-reach must be to bridge all, in whole metres */
} stericol_working_gap;

/* Arrays are [count], in one allocation that begins at `depth`. */
typedef struct stericol_working_levels {
    bool single; /* one table: the earlier state is the standard ocean */
    stericol_water water;
    double latitude;
    stericol_coordinate coordinate; /* that is integrated over */
    size_t count;
    double *depth, *pressure;             /* m, dbar, increasing */
    double *salinity[2], *temperature[2]; /* earlier, later; NaN is missing */
    stericol_working_gap gap; /* in a table, within the depths that both have; else between common samples */
} stericol_working_levels;

/*
 * The levels of both tables: their own where they are the same, else all of both, each table's salinity and
 * temperature linear between its samples (not across a gap wider than `gap_reach`, NaN the default rule).
 * STERICOL_INPUT: kinds that do not go together; STERICOL_MEMORY.  *levels is all zero on failure.
 */
stericol_status stericol_working_levels_pair(stericol_session *session,
                                             const stericol_working_table tables[2], double latitude,
                                             double gap_reach, stericol_working_levels *levels);
/* The levels of one table against the standard ocean: 35.16504 g/kg and 0 degC conservative; with EOS-80
   S = 35 and 0 degC in situ.  Integrated over pressure. */
stericol_status stericol_working_levels_single(stericol_session *session, const stericol_working_table *table,
                                               double latitude, double gap_reach,
                                               stericol_working_levels *levels);
void stericol_working_levels_free(stericol_working_levels *levels);
/* The standard ocean at a pressure, in the equation's own kinds. */
void stericol_standard_ocean(const stericol_water *water, double pressure, double *salinity,
                             double *temperature);

/* ---- column_work.c: the working ---- */

typedef enum stericol_working_row_kind {
    STERICOL_ROW_LEVEL,
    STERICOL_ROW_LIMIT,  /* the limit of a layer: no water is known here */
    STERICOL_ROW_CARRIED /* the nearest level's water, carried to the surface or towards the sea floor */
} stericol_working_row_kind;

/* A level, a limit, or an end of the column; and what lies between it and the next row. */
typedef struct stericol_working_row {
    stericol_working_row_kind kind;
    double depth, pressure; /* m, dbar */
    double salinity[2], temperature[2];
    double volume[2];                        /* m3/kg; single: the first is the standard ocean's */
    double expansion;                        /* 1/K, at the mean of both states; single: at the table's */
    double contraction;                      /* kg/g (EOS-80: 1), likewise */
    double part[STERICOL_COLUMN_QUANTITIES]; /* NaN where nothing is integrated down to the next row */
} stericol_working_row;

typedef struct stericol_working_sum {
    double upper, lower;        /* m; lower INFINITY is the bottom */
    stericol_layer_state state; /* of a layer */
    double value[STERICOL_COLUMN_QUANTITIES];
} stericol_working_sum;

typedef struct stericol_working {
    const stericol_working_levels *levels;
    const stericol_column_options *options;
    size_t row_count;
    stericol_working_row *rows;
    size_t layer_count;
    stericol_working_sum *sums; /* [layer_count + 1], the last is the whole column */
    int flag;                   /* a stericol_column_flag */
    double top, reached;        /* m, where the integration begins and ends */
} stericol_working;

enum { STERICOL_WORKING_MOST_SPLINED = 5000 };

/*
 * Integrates the levels by the layers of `options` and from row to row; both live as long as the working.
 * sea_floor is m, NaN where unknown.
 * STERICOL_NOTHING: no level has both states, or no layer is complete; STERICOL_USAGE, STERICOL_MEMORY.
 * *working is all zero on failure.
 */
stericol_status stericol_working_make(stericol_context *context, const stericol_working_levels *levels,
                                      const stericol_column_options *options, double sea_floor,
                                      stericol_working *working);
void stericol_working_free(stericol_working *working);
/* The gap at which the column ends; NULL where it ends for another reason. */
const stericol_working_gap *stericol_working_ending_gap(const stericol_working *working);
/* A height of the standard ocean's anomaly (single) as geopotential, m2/s2. */
double stericol_working_geopotential(const stericol_working *working, double height);

/* ---- column_text.c, column_data.c ---- */

void stericol_working_text(const stericol_working *working, stericol_text *text);
void stericol_working_csv(const stericol_working *working, stericol_text *text);
/* STERICOL_MEMORY. */
stericol_status stericol_working_json(stericol_context *context, const stericol_working *working,
                                      stericol_text *text);
const char *stericol_working_equation_word(const stericol_working *working);

#endif
