/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Small files of an invented sea for `stericol inspect`, and what it says of them.  Every number expected
 * follows by hand from the formulas in inspect_sea.c, whose terms are multiples of 1/32, so that floats hold
 * them exactly and sums of them are exact too.
 */
#ifndef STERICOL_TESTS_INSPECT_SEA_H
#define STERICOL_TESTS_INSPECT_SEA_H

#include "program/run.h"

#include <jansson.h>

#include <stdbool.h>
#include <stddef.h>

enum { LEVELS = 3, ROWS = 8, COLUMNS = 10, CELLS = ROWS * COLUMNS, POINTS = LEVELS * CELLS, MOST_TIMES = 4 };

/* What a file differs in from the plain one; all zero is the plain one. */
typedef struct inspect_recipe {
    const char *temperature_unit; /* NULL: degC */
    const char *second_temperature,
        *no_name; /* another variable of that name; temperature without a standard name */
    bool no_temperature, no_salinity;
    bool packed;                                    /* int16, a quarter of a unit in a step */
    bool level_bounds, level_without_unit, heights; /* heights: negative, from the bottom up */
    bool zeros;                                     /* land is 0 instead of missing */
    bool chunked;                                   /* a chunk holds two levels of three rows */
    double added;                                   /* to every temperature */
    double constant;                                /* not 0: every temperature of the second level */
    double clip;                                    /* not 0: no temperature is below it */
    double shrunk;                                  /* not 0: what lies above `clip` comes so much closer */
    double cold;                                    /* not 0: the temperature of one column */
    double salinity;                                /* not 0: every salinity */
    bool pressures;                                 /* levels at 5, 20 and 500 dbar */
    bool hole;                                      /* one column lacks the second level */
    size_t members; /* not 0: a dimension "member" in front, the temperature rising by 1 in each */
    size_t times;   /* 0: no time dimension; else monthly, months[] of 2031 */
    int months[MOST_TIMES];
    size_t rows; /* 0: ROWS */
    const char *title;
} inspect_recipe;

/* Both as cmocka takes them: a folder for the files, and its end. */
int inspect_make_folder(void **state);
int inspect_remove_folder(void **state);
/* The folder, and a path in it (eight are kept). */
const char *inspect_folder(void);
const char *inspect_path(const char *name);
/* Writes a file and gives its path. */
const char *inspect_make(const char *name, const inspect_recipe *how);

/* Runs `inspect` with these arguments. */
run_result inspect_run(const char *arguments);
/* The same with --table json: expects the exit code and gives the document. */
json_t *inspect_document(const char *path, const char *options, int code);
/* The member that a path like "files.0.values.levels.2.ends" leads to; fails the test where there is none. */
const json_t *inspect_at(const json_t *from, const char *path);
double inspect_number(const json_t *from, const char *path);
const char *inspect_text_at(const json_t *from, const char *path);
bool inspect_true(const json_t *from, const char *path);
/* The member of a list of objects whose `key` is `word`; NULL where there is none. */
const json_t *inspect_listed(const json_t *list, const char *key, const char *word);
bool inspect_lists(const json_t *list, const char *key, const char *word);

/* The values of the plain sea, `added` to every temperature. */
void inspect_expect_plain(const json_t *whole, double added);
/* One refusal, which holds `part`. */
void inspect_expect_refusal(const json_t *whole, const char *part);

#endif
