/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "water/table.h"

#include "support/testing.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* What one unit of the last digit of a printed number is worth: 1e-9 for 0.100015695e-2 would be 1e-11. */
static double unit_of_last_digit(const char *printed)
{
    const char *const point = strchr(printed, '.');
    const char *const exponent = strpbrk(printed, "eE");
    const char *const end = exponent != NULL ? exponent : printed + strlen(printed);
    int power = exponent != NULL ? atoi(exponent + 1) : 0;

    if (point != NULL)
        power -= (int)(end - point - 1);
    return pow(10.0, power);
}

bool table_agrees(double actual, const char *printed, const char *rule, double tolerance)
{
    const double expected = strtod(printed, NULL);

    if (strcmp(rule, "digits") == 0)
        /* One part in a million more, for the rounding of the printed number itself to binary. */
        return fabs(actual - expected) <= tolerance * unit_of_last_digit(printed) * (1.0 + 1e-6);
    if (strcmp(rule, "relative") == 0)
        return fabs(actual - expected) <= tolerance * fabs(expected);
    if (strcmp(rule, "absolute") == 0)
        return fabs(actual - expected) <= tolerance;
    fail_msg("there is no rule \"%s\"", rule);
    return false;
}

/* Returns 1 for a row that holds and 0 for one that is rejected as it should be; fails the test otherwise. */
static int check_row(const char *path, int line, const char *text, const table_quantity *quantities,
                     size_t count)
{
    char name[64], printed[64], rule[16], verdict[16];
    double a, b, c, tolerance;

    if (sscanf(text, "%63s %lf %lf %lf %63s %15s %lf %15s", name, &a, &b, &c, printed, rule, &tolerance,
               verdict) != 8)
        fail_msg("%s:%d: not a row", path, line);
    for (size_t n = 0; n < count; n++) {
        if (strcmp(quantities[n].name, name) != 0)
            continue;
        const double actual = quantities[n].value(a, b, c);
        const bool agrees = table_agrees(actual, printed, rule, tolerance);
        const bool holds = strcmp(verdict, "holds") == 0;

        if (!holds && strcmp(verdict, "wrong") != 0)
            fail_msg("%s:%d: no verdict", path, line);
        if (agrees != holds)
            fail_msg("%s:%d: %s(%g, %g, %g) is %.12g, printed %s, within %s %g, should be: %s", path, line,
                     name, a, b, c, actual, printed, rule, tolerance, verdict);
        return holds;
    }
    fail_msg("%s:%d: no quantity \"%s\"", path, line, name);
    return 0;
}

void check_table(const char *path, const table_quantity *quantities, size_t count, int holding, int wrong)
{
    char full[1024], text[256];
    int line = 0, held = 0, rejected = 0;
    FILE *file;

    snprintf(full, sizeof full, "%s/%s", TEST_SOURCE_FOLDER, path);
    file = fopen(full, "r");
    assert_non_null(file);
    while (fgets(text, sizeof text, file) != NULL) {
        line++;
        if (text[0] == '#' || text[0] == '\n')
            continue;
        if (check_row(path, line, text, quantities, count))
            held++;
        else
            rejected++;
    }
    fclose(file);
    assert_int_equal(held, holding);
    assert_int_equal(rejected, wrong);
}
