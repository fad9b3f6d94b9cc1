/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What the files of this room share among themselves.  No other room includes this.
 *
 * From a file to an epoch: vocabulary.c knows names; choose.c picks the variables; layout.c says which
 * dimension is which; horizontal.c, vertical.c and times.c read the axes; members.c picks the times; load.c
 * reads and averages.
 */
#ifndef STERICOL_INPUT_ROOM_H
#define STERICOL_INPUT_ROOM_H

#include "input/epoch.h"
#include "input/field2d.h"

#include "base/text.h"

#include <stdint.h>

/* ---- say.c: decisions are said once and kept ---- */

typedef struct stericol_input_sayings {
    char **texts;
    size_t count;
    bool failed; /* memory ran out: the epoch cannot be opened */
} stericol_input_sayings;

/* What every step of reading needs. */
typedef struct stericol_input_reader {
    stericol_context *context;
    const stericol_cf_units *units;
    const stericol_epoch_request *request; /* NULL in field2d */
    stericol_input_sayings *sayings;       /* NULL: only notices */
    stericol_cf_file *file;
} stericol_input_reader;

/* Sends a notice and keeps "VARIABLE: text" as an assumption; a text said before (of another file) is not
 * repeated. */
void stericol_input_say(const stericol_input_reader *reader, stericol_notice_level level,
                        const char *variable, const char *format, ...) STERICOL_PRINTF(4, 5);
void stericol_input_sayings_free(stericol_input_sayings *sayings);
/* stericol_fail() with STERICOL_INPUT and the reader's file. */
stericol_status stericol_input_refuse(const stericol_input_reader *reader, const char *variable,
                                      const char *remedy, const char *format, ...) STERICOL_PRINTF(4, 5);

/* ---- vocabulary.c: names, and nothing but names ---- */

typedef enum stericol_input_role {
    STERICOL_INPUT_NO_ROLE,
    STERICOL_INPUT_TIME,
    STERICOL_INPUT_LEVEL,
    STERICOL_INPUT_LATITUDE,
    STERICOL_INPUT_LONGITUDE,
    STERICOL_INPUT_Y, /* rows of a grid that are not parallels */
    STERICOL_INPUT_X
} stericol_input_role;

/* How sure: the order of recognition. */
enum {
    STERICOL_INPUT_BY_NOTHING,
    STERICOL_INPUT_BY_NAME,
    STERICOL_INPUT_BY_UNITS,
    STERICOL_INPUT_BY_AXIS, /* axis, positive, _CoordinateAxisType, units that name a direction or a date */
    STERICOL_INPUT_BY_STANDARD_NAME
};

typedef struct stericol_input_sign {
    stericol_input_role role;
    int strength;
    const char *reason; /* static: "standard_name", "units" ... */
} stericol_input_sign;

/* What a coordinate variable stands for. */
stericol_input_sign stericol_input_axis_sign(const stericol_cf_units *units,
                                             const stericol_cf_variable *variable);
/* What a bare name (of a dimension, a variable) usually stands for. */
stericol_input_role stericol_input_role_of_name(const char *name);
/* Whether a vertical standard name is computed from formula_terms. */
bool stericol_input_is_parametric(const char *standard_name);

typedef enum stericol_input_quantity {
    STERICOL_INPUT_TEMPERATURE,
    STERICOL_INPUT_SALINITY,
    STERICOL_INPUT_QUANTITIES
} stericol_input_quantity;

/* "temperature", "salinity" */
extern const char *const stericol_input_quantity_name[STERICOL_INPUT_QUANTITIES];

typedef struct stericol_input_finding {
    int strength; /* 0: not this quantity */
    int kind;
    bool kind_assumed;
    const char *reason; /* static */
} stericol_input_finding;

/* Whether a variable is the quantity, by its names alone. */
stericol_input_finding stericol_input_recognise(stericol_input_quantity quantity,
                                                const stericol_cf_file *file,
                                                const stericol_cf_variable *variable);
/* Whether a variable holds numbers that are no statistic, flag or error of another. */
bool stericol_input_is_field(const stericol_cf_file *file, const stericol_cf_variable *variable);
/* What a variable that the user named says of its kind; strength 0 where it says nothing. */
stericol_input_finding stericol_input_kind_of(stericol_input_quantity quantity,
                                              const stericol_cf_variable *variable);
const char *stericol_input_kind_text(stericol_input_quantity quantity, int kind);

/* ---- layout.c: which dimension is which ---- */

typedef struct stericol_input_layout {
    stericol_cf_field_axes axes;
    size_t times, levels, rows, columns;      /* lengths; 1 where the axis is absent */
    const stericol_cf_variable *time, *level; /* coordinates; NULL where there are none */
    stericol_cf_file *position_file;          /* holds latitude and longitude: not owned */
    const stericol_cf_variable *latitude, *longitude;
    bool curvilinear; /* latitude and longitude on two dimensions */
    bool transposed;  /* those run (column, row) in their file */
} stericol_input_layout;

/* Roles and coordinate variables of all dimensions of `variable`; nothing is read. */
typedef struct stericol_input_roles {
    stericol_input_sign sign[STERICOL_CF_MOST_RANK];
    const stericol_cf_variable *coordinate[STERICOL_CF_MOST_RANK];
    bool unstructured; /* latitude and longitude along one and the same dimension */
} stericol_input_roles;
void stericol_input_find_roles(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                               stericol_input_roles *roles);

/*
 * The whole layout.  `positions`: the file of --coordinates, or NULL.  `with_level`: a variable without a
 * level dimension is refused; else one with a level dimension is taken at its first level.  A time dimension
 * is always recognised.
 */
stericol_status stericol_input_lay_out(const stericol_input_reader *reader,
                                       const stericol_cf_variable *variable, stericol_cf_file *positions,
                                       bool with_level, stericol_input_layout *layout);

/* Calls `visit` for every name in a blank-separated attribute that is a variable; stops when it gives true.
 */
typedef bool stericol_input_visit(void *user, const stericol_cf_variable *found);
bool stericol_input_each_named(const stericol_cf_file *file, const stericol_cf_variable *near,
                               const char *attribute, stericol_input_visit *visit, void *user);
/* Value of "KEY: NAME" in a blank-separated list (formula_terms, cell_measures); allocated, NULL when absent.
 */
char *stericol_input_term(const char *list, const char *key);

/* ---- choose.c ---- */

typedef struct stericol_input_variable {
    bool present;
    char *name, *unit, *standard_name, *reason;
    int kind;
    bool kind_assumed, unit_assumed;
    bool reversed; /* levels run from the bottom up in the file */
    stericol_cf_field_axes axes;
    stericol_cf_conversion conversion;
} stericol_input_variable;
void stericol_input_variable_clear(stericol_input_variable *variable);

/*
 * Picks the variable of one quantity in the reader's file; *found is NULL when there is none (no failure).
 * chosen: name, unit, standard_name, reason, kinds, conversion are set; the axes are not.
 */
stericol_status stericol_input_choose(const stericol_input_reader *reader, stericol_input_quantity quantity,
                                      stericol_input_variable *chosen, const stericol_cf_variable **found);
/* "a, b and c": what --temperature or --salinity could name. */
void stericol_input_list_candidates(const stericol_input_reader *reader, stericol_input_quantity quantity,
                                    stericol_text *text);

/* ---- seems.c: files that are something else ---- */

/*
 * Refuses a shape that no grid has: with `problem` and `remedy` as stericol_input_refuse(), or, where the
 * file holds floats or casts, with that.  Always STERICOL_INPUT.
 */
stericol_status stericol_input_refuse_shape(const stericol_input_reader *reader, const char *variable,
                                            const char *remedy, const char *problem);
/*
 * For a file in which no variable is the quantity: where it seems to hold casts, a sea floor, a mask or
 * areas and no field with levels, refuses it as that and gives true; else false, and nothing is said.
 */
bool stericol_input_refuse_other(const stericol_input_reader *reader, stericol_input_quantity quantity);

/* ---- horizontal.c, vertical.c, areas.c: the grid ---- */

stericol_status stericol_input_read_horizontal(const stericol_input_reader *reader,
                                               const stericol_input_layout *layout, stericol_grid *grid);
stericol_status stericol_input_read_vertical(const stericol_input_reader *reader,
                                             const stericol_cf_variable *variable,
                                             const stericol_input_layout *layout, stericol_grid *grid,
                                             bool *reversed);
/* cell_measures of `variable`, where the file holds it. */
stericol_status stericol_input_read_cell_measures(const stericol_input_reader *reader,
                                                  const stericol_cf_variable *variable,
                                                  const stericol_input_layout *layout, stericol_grid *grid);
stericol_status stericol_input_read_cell_area_file(const stericol_input_reader *reader, const char *path,
                                                   stericol_grid *grid);
stericol_status stericol_input_read_land_mask(const stericol_input_reader *reader, const char *path,
                                              stericol_grid *grid);
/* Empties a grid. */
void stericol_input_grid_clear(stericol_grid *grid);

/*
 * Reads a two-dimensional part of `variable`: all rows and columns (first of every other dimension) as
 * [rows][columns], whatever their order; `row` and `column` are positions in its dimensions
 * (STERICOL_CF_NO_AXIS: length 1).  values holds rows * columns.
 */
stericol_status stericol_input_read_plane(stericol_context *context, stericol_cf_file *file,
                                          const stericol_cf_variable *variable, int row, int column,
                                          double *values);
/* Finds rows and columns of a plane that must have the grid's shape: by roles, else by the lengths of its
 * last two dimensions. */
stericol_status stericol_input_plane_axes(const stericol_input_reader *reader,
                                          const stericol_cf_variable *variable, const stericol_grid *grid,
                                          int *row, int *column);
/* Whether the positions that go with `variable` (where its file has any) are the grid's; a failure says where
 * not. */
stericol_status stericol_input_check_positions(const stericol_input_reader *reader,
                                               const stericol_cf_variable *variable,
                                               const stericol_grid *grid);

/* ---- times.c ---- */

typedef struct stericol_input_state {
    size_t source, step; /* file and index along its time axis */
    bool dated;          /* at, start, end are day numbers */
    bool bounded;        /* start and end come from the file, or from the unit of the axis */
    bool climatology;    /* a month or season of many years: month and length mean something, dates do not */
    double at, start, end;
    double length; /* climatology: days within the year */
    int month;     /* climatology: 1..12, or 0 */
} stericol_input_state;

typedef struct stericol_input_states {
    stericol_input_state *items;
    size_t count, room;
    bool has_calendar;
    stericol_cf_calendar calendar;
    const char *undated; /* why there are no dates: static, NULL where there are */
} stericol_input_states;

/* Adds the states of one variable of the reader's file, which is the epoch's file number `source`. */
stericol_status stericol_input_read_times(const stericol_input_reader *reader, const char *variable,
                                          const stericol_input_layout *layout, size_t source,
                                          stericol_input_states *states);
/* Mean length of a calendar month over many years, days. */
double stericol_input_month_length(stericol_cf_calendar calendar, int month);

/* ---- sources.c: the files, a few of them open at a time ---- */

typedef struct stericol_input_source {
    const char *path; /* the request's */
    unsigned long long bytes;
    long long changed;
    char *id;
    stericol_input_variable variable[STERICOL_INPUT_QUANTITIES];
    stericol_cf_file *file; /* NULL while closed */
    stericol_cf_field *field[STERICOL_INPUT_QUANTITIES];
    unsigned long long last_used;
} stericol_input_source;

enum { STERICOL_INPUT_MOST_OPEN = 64 };

/* The file of `source`, opened again when it had been closed; the least used one is closed for it. */
stericol_status stericol_input_source_file(stericol_context *context, stericol_epoch *epoch, size_t source,
                                           stericol_cf_file **file);
stericol_status stericol_input_source_field(stericol_context *context, stericol_epoch *epoch, size_t source,
                                            stericol_input_quantity quantity, stericol_cf_field **field);
void stericol_input_source_close(stericol_input_source *source);

/* ---- members.c ---- */

typedef struct stericol_input_member {
    stericol_epoch_member shown;
    size_t source[STERICOL_INPUT_QUANTITIES], step[STERICOL_INPUT_QUANTITIES];
    size_t order; /* in time */
} stericol_input_member;

/* Sorts, chooses, matches and weighs the members of the epoch (its states are there). */
stericol_status stericol_input_choose_members(const stericol_input_reader *reader, stericol_epoch *epoch);

/* ---- thickness.c, terrain.c: depths of their own ---- */

typedef struct stericol_input_thickness stericol_input_thickness;
stericol_status stericol_input_thickness_open(const stericol_input_reader *reader, const char *path,
                                              const stericol_grid *grid, bool reversed,
                                              stericol_input_thickness **thickness);
void stericol_input_thickness_close(stericol_input_thickness *thickness);
stericol_status stericol_input_thickness_load(stericol_context *context, stericol_input_thickness *thickness,
                                              size_t level0, size_t levels, size_t row0, size_t rows,
                                              double *depth, double *upper, double *lower);

typedef struct stericol_input_terrain stericol_input_terrain;
/* `step`: index along the time axis of the free surface. */
stericol_status stericol_input_terrain_open(const stericol_input_reader *reader,
                                            const stericol_cf_variable *variable,
                                            const stericol_input_layout *layout, size_t step,
                                            const stericol_grid *grid, bool reversed,
                                            stericol_input_terrain **terrain);
void stericol_input_terrain_close(stericol_input_terrain *terrain);
stericol_status stericol_input_terrain_load(stericol_context *context, const stericol_input_terrain *terrain,
                                            size_t level0, size_t levels, size_t row0, size_t rows,
                                            double *depth, double *upper, double *lower);

/* Depth of the sea floor below the surface, m, [rows][columns]. */
void stericol_input_terrain_floor(const stericol_input_terrain *terrain, size_t points, double *floor);

/* ---- judge.c: can the values be what they are called? ---- */

/* What was seen so far of the levels that come in parts: [member][level], made with the first part. */
typedef struct stericol_input_standing stericol_input_standing;
typedef struct stericol_input_judged {
    stericol_input_standing *standings;
} stericol_input_judged;
void stericol_input_judged_free(stericol_input_judged *judged);
/* Memory for that when levels come in bands of `rows` rows; SIZE_MAX when that is too large for size_t. */
size_t stericol_input_judged_bytes(const stericol_epoch *epoch, size_t rows);

/* Rows row0.. of one level (of the grid) of one member. */
typedef struct stericol_input_slab {
    size_t member, level, row0, rows;
} stericol_input_slab;
/*
 * values[rows][columns] as read (NaN missing, +-INFINITY rejected), and what was met in them.  A level is
 * judged as a whole, however it is cut into bands of rows: STERICOL_INPUT, as soon as that is certain, when
 * more than a tenth of at least 20 values lie outside, or when a salinity can only be a fraction; at once
 * when a unit was assumed and any lies outside.  Rows that come again count once.  STERICOL_MEMORY.
 */
stericol_status stericol_input_judge(stericol_context *context, stericol_epoch *epoch,
                                     stericol_input_quantity quantity, const stericol_input_slab *slab,
                                     const double *values, const stericol_cf_tally *tally);

/* ---- load.c: the running arrays of an average ---- */

typedef struct stericol_input_sums {
    size_t points;
    double *read;                 /* the member at hand */
    double *total, *weight;       /* over the months done */
    double *month, *month_weight; /* of the month at hand */
    uint32_t *valid;              /* members that have a value */
    double *rejected;             /* +-INFINITY where any was rejected, else 0 */
} stericol_input_sums;
void stericol_input_sums_free(stericol_input_sums *sums);

/* ---- epoch.c ---- */

struct stericol_epoch {
    stericol_epoch_request request; /* its texts belong to the caller */
    char label[32];
    stericol_grid grid;
    stericol_input_source *sources;
    size_t source_count;
    size_t stride_levels, stride_rows;
    unsigned long long clock;
    stericol_input_states states[STERICOL_INPUT_QUANTITIES];
    stericol_input_member *members;
    size_t member_count;
    stericol_input_sayings sayings;
    stericol_input_thickness *thickness;
    stericol_input_terrain *terrain;
    stericol_input_sums sums;
    stericol_input_judged judged[STERICOL_INPUT_QUANTITIES];
    char *description;
    bool has_dates;
    char first_date[STERICOL_CF_DATE_ROOM], last_date[STERICOL_CF_DATE_ROOM];
};

#endif
