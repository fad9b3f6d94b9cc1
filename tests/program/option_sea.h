/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The files that the tests of options run on, and what they read from results. */
#ifndef STERICOL_TESTS_OPTION_SEA_H
#define STERICOL_TESTS_OPTION_SEA_H

#include "program/attempt.h"
#include "program/make_grid.h"

/*
 * All files that a case may name: a.nc and b.nc, the later 1 K warmer and 0.1 g/kg fresher; the same with
 * cells, with a gap, without positions, without salinity, without standard names, with reference salinity; a
 * series of 12 months; companions of the grid.
 */
void option_sea_write(const char *folder);
/* `grid` as the earlier epoch, and 1 K warmer and 0.1 g/kg fresher as the later one. */
void option_sea_pair(const small_grid *grid, const char *folder, const char *first, const char *second);

/* The options in one line, with two threads, into `output`; where that fails it is said, and result.errors is
 * NULL. */
run_result run_into(const char *folder, const char *output, const char *options);
/* Sum of all values that are not missing; NaN where there is no such variable. */
double result_sum(const char *folder, const char *result, const char *name);
/* A global attribute of out.nc; free(). */
char *result_text(const char *folder, const char *name);
/* Fails unless maps, flags, areas and heat totals are the same bytes. */
void expect_same_maps(const char *folder, const char *a, const char *b);

/* Ways to begin a line. */
#define PLAIN "change --earlier a.nc --later b.nc "
#define SERIES "change --earlier series.nc --later series.nc "
#define WARMED "scenario --field a.nc --warming 1 "

#endif
