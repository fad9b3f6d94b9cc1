/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The parts of `inspect`; nobody else includes this.
 *
 * An inspection is what was found out about one file, or about several as one set: inspect_open.c reads
 * headers and axes, inspect_values.c the values, inspect_doubts.c judges both; inspect_text.c, inspect_json.c
 * and inspect_csv.c show it.
 */
#ifndef STERICOL_COMMANDS_INSPECT_INSIDE_H
#define STERICOL_COMMANDS_INSPECT_INSIDE_H

#include "commands/session.h"

#include "cf/file.h"
#include "input/epoch.h"
#include "job/paths.h"

#include <jansson.h>

#include <stdbool.h>
#include <stddef.h>

/* ---- lines that are found one by one ---- */

typedef struct stericol_inspect_line {
    const char *word; /* static, the same in every release: for programs */
    char *text;
} stericol_inspect_line;

typedef struct stericol_inspect_lines {
    stericol_inspect_line *items;
    size_t count;
    bool failed; /* memory was out at an addition */
} stericol_inspect_lines;

/* A text that is there already is not added again. */
void stericol_inspect_add_line(stericol_inspect_lines *lines, const char *word, const char *format, ...)
    STERICOL_PRINTF(3, 4);

/* ---- values ---- */

typedef enum stericol_inspect_quantity {
    STERICOL_INSPECT_TEMPERATURE,
    STERICOL_INSPECT_SALINITY,
    STERICOL_INSPECT_QUANTITIES
} stericol_inspect_quantity;

/* "temperature", "salinity" */
const char *stericol_inspect_quantity_name(stericol_inspect_quantity quantity);

/* One quantity on one level, after conversion: degC; practical or g/kg.  Land written as zeros is missing. */
typedef struct stericol_inspect_range {
    unsigned long long valid;
    unsigned long long below, above;    /* rejected, outside -4..45 degC or a salinity of 0..45 */
    double low, mean, high;             /* NaN where nothing is valid */
    unsigned long long at_low, at_high; /* how many hold exactly the least, the greatest value */
    double next_low, next_high;         /* the least but one, the greatest but one; NaN where there is none */
    bool refused;                       /* the level cannot be read, or cannot be what it is called */
} stericol_inspect_range;

typedef struct stericol_inspect_level {
    stericol_inspect_range range[STERICOL_INSPECT_QUANTITIES];
    unsigned long long columns; /* with a value of every quantity that is there */
    unsigned long long zeros;   /* where every quantity is 0 */
    unsigned long long ends;    /* columns whose deepest level this is */
    unsigned long long frozen;  /* temperatures that no sea water has without being ice */
    double coldest;             /* of these; NaN where there is none */
    bool land_as_zeros;         /* a tenth of the cells or more are zeros: land */
} stericol_inspect_level;

typedef struct stericol_inspect_values {
    stericol_inspect_level *levels; /* [levels of the grid]; NULL where no values were looked at */
    unsigned long long cells;       /* of the horizontal grid */
    unsigned long long columns;     /* with a level at least */
    unsigned long long broken;      /* with a missing level between two that are there */
    unsigned long long late;        /* without the uppermost level */
    size_t members;                 /* looked at */
    const char *first;              /* the member looked at where it is one; owned by the epoch */
} stericol_inspect_values;

/* ---- an inspection ---- */

/* What only the file itself tells of the axes; texts are the file's. */
typedef struct stericol_inspect_axes {
    const char *level_unit, *level_positive; /* NULL where the file says nothing */
    bool level_parametric;                   /* terrain-following: depths from formula_terms */
    bool level_upward;                       /* the file's levels run from the bottom up */
    const char *calendar;                    /* NULL: none named, or no time axis */
    bool cyclic;                             /* longitudes go all round */
    double spacing[2][2];                    /* least and greatest step, degrees: latitude, longitude; NaN */
} stericol_inspect_axes;

typedef struct stericol_inspection {
    const char *path; /* NULL: the files of `paths` as one set */
    const stericol_paths *paths;
    stericol_cf_file *file; /* of a set that of its temperature; NULL where it cannot be opened */
    stericol_epoch *epoch;  /* NULL where not even a part can be read as an epoch */
    bool reads[STERICOL_INSPECT_QUANTITIES];      /* what the epoch holds */
    bool kind_given[STERICOL_INSPECT_QUANTITIES]; /* by an option */
    bool salinity_alone;                          /* a file of salinity among files of a set */
    stericol_inspect_axes axes;
    stericol_inspect_values values;
    stericol_inspect_lines assumptions, suspects, suggestions, refusals;
    stericol_inspect_lines conditions; /* what is refused only as long as an option is not given */
} stericol_inspection;

void stericol_inspect_free(stericol_inspection *inspection);

/*
 * Takes a failure that is about the input out of the session's context into the refusals and returns
 * STERICOL_OK, so that the inspection goes on; any other (memory, interruption ...) stays and is returned.
 */
stericol_status stericol_inspect_refuse(stericol_session *session, stericol_inspection *inspection,
                                        stericol_status status);
/* Takes the notices that the session has kept since into the assumptions. */
void stericol_inspect_take_notices(stericol_session *session, stericol_inspection *inspection);

/*
 * Opens file `index` of `paths`, or with index == paths->count all as one set, as `change` would; what is
 * wrong becomes refusals.  Of a file of which only temperature or salinity can be read that is kept.  Fails
 * only with what is not the input's fault.  `paths` must live as long as the inspection.
 */
stericol_status stericol_inspect_open(stericol_session *session, const stericol_paths *paths, size_t index,
                                      stericol_inspection *inspection);

/* What `change` would find wrong with the horizontal cells of the epoch, as refusals. */
stericol_status stericol_inspect_cells(stericol_session *session, stericol_inspection *inspection);

/* Reads the values of the epoch, level after level; `done` of `whole` inspections were done before. */
stericol_status stericol_inspect_look(stericol_session *session, stericol_inspection *inspection, size_t done,
                                      size_t whole);

/* Adds suspects, suggestions, and refusals that come of the values. */
stericol_status stericol_inspect_judge(stericol_session *session, stericol_inspection *inspection);

/* Members in the order of time; free() the array.  NULL when memory is out. */
const stericol_epoch_member **stericol_inspect_members(const stericol_epoch *epoch);
/* Days from the start of a member to that of the next, the median; NaN where there are no dates. */
double stericol_inspect_time_step(const stericol_epoch_member *const *members, size_t count);
/* Whether there is a hole in the dates between members[i] and members[i + 1]. */
bool stericol_inspect_hole_after(const stericol_epoch_member *const *members, size_t i);

/* ---- words that all forms share; static ---- */

const char *stericol_inspect_type_word(stericol_cf_type type);
/* As the options take them: "in-situ", "practical". */
const char *stericol_inspect_kind_word(stericol_inspect_quantity quantity, int kind);
const char *stericol_inspect_unit_word(const stericol_inspection *inspection,
                                       stericol_inspect_quantity quantity);
stericol_epoch_variable stericol_inspect_chosen(const stericol_inspection *inspection,
                                                stericol_inspect_quantity quantity);
/* "temperature", "salinity", "coordinate" or NULL. */
const char *stericol_inspect_role(const stericol_inspection *inspection,
                                  const stericol_cf_variable *variable);
bool stericol_inspect_is_packed(const stericol_cf_variable *variable);
/* Where the cells' areas come from. */
const char *stericol_inspect_area_words(const stericol_grid *grid);
const char *stericol_inspect_coordinate_word(const stericol_inspection *inspection);

/* ---- forms ---- */

/* Each adds to `text` and leaves it to the caller to look for text->failed. */
void stericol_inspect_text(const stericol_inspection *inspection, stericol_text *text);
void stericol_inspect_csv_heading(stericol_text *text);
void stericol_inspect_csv(const stericol_inspection *inspection, stericol_text *text);
/* A new object; NULL when memory is out. */
json_t *stericol_inspect_json(const stericol_inspection *inspection);
/* Adds a document, numbers with the fewest digits that read back the same; on failure text->failed is set. */
void stericol_inspect_write_json(const json_t *document, stericol_text *text);

#endif
