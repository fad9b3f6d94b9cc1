/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Check values in text tables, one a line: quantity a b c value rule tolerance verdict. */
#ifndef STERICOL_TESTS_WATER_TABLE_H
#define STERICOL_TESTS_WATER_TABLE_H

#include <stdbool.h>
#include <stddef.h>

/* A quantity that tables speak of. */
typedef struct table_quantity {
    const char *name;
    double (*value)(double a, double b, double c);
} table_quantity;

/* Whether `actual` agrees with the printed number under the rule ("digits", "absolute", "relative"). */
bool table_agrees(double actual, const char *printed, const char *rule, double tolerance);

/*
 * Holds every row of the file against the quantities: rows marked "holds" must agree, rows marked "wrong"
 * must not. Fails the test otherwise, for a row that cannot be read, and unless the file has `holding` and
 * `wrong` rows.
 */
void check_table(const char *path, const table_quantity *quantities, size_t count, int holding, int wrong);

#endif
