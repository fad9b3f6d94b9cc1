/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The depth table of a scenario; expected values are the ones written in the tables. */
#include "support/testing.h"

#include "commands/profile.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

static const char path[] = TEST_BUILD_FOLDER "/depth_table.txt";

static stericol_cf_units *units;
static stericol_context *context;

static int open_all(void **state)
{
    (void)state;
    context = stericol_context_new();
    return context != NULL ? (int)stericol_cf_units_new(context, &units) : -1;
}

static int close_all(void **state)
{
    (void)state;
    stericol_cf_units_free(units);
    stericol_context_free(context);
    return 0;
}

static stericol_status read_text(const char *text, double **values, size_t *count)
{
    FILE *file = fopen(path, "wb");
    stericol_status status;

    assert_non_null(file);
    assert_true(fputs(text, file) >= 0 && fclose(file) == 0);
    stericol_context_clear(context);
    status = stericol_profile_read(context, units, path, values, count);
    assert_int_equal(unlink(path), 0);
    return status;
}

static void check_read(const char *text, size_t rows, const double *expected)
{
    double *values;
    size_t count;

    assert_int_equal(read_text(text, &values, &count), STERICOL_OK);
    assert_int_equal(count, rows);
    for (size_t i = 0; i < 3 * rows; i++)
        assert_close(values[i], expected[i], 1e-12); /* rounding of unit conversions */
    free(values);
}

static void test_read(void **state)
{
    (void)state;
    check_read("depth warming freshening\n0 1.5 0.2\n700 0 -0.1\n", 2, (double[]){0, 700, 1.5, 0, 0.2, -0.1});
    check_read("freshening,depth\n0.2,50\n", 1, (double[]){50, 0, 0.2});
    check_read("depth [km];warming [degC]\n0,5;1,25\n2;-0,5\n", 2, (double[]){500, 2000, 1.25, -0.5, 0, 0});
    check_read("warming [degF] depth_m\n1.8 10\n", 1, (double[]){10, 1, 0}); /* 9 degF are 5 K */
}

static void test_refused(void **state)
{
    static const struct {
        const char *text, *message;
    } cases[] = {
        {"warming\n1\n", "depth: there is no such column; add the depth of every row, in metres"},
        {"depth\n1\n", "has neither a column warming nor one freshening; add one of them or both"},
        {"depth warming freshning\n1 1 1\n", "freshning: is no column of a depth table; name the columns "
                                             "depth, warming, freshening, and take others "
                                             "out"},
        {"depth warming\n10 1\n10 1\n",
         "line 3, column 'depth': 10 m does not lie below the row before (10 m); "
         "order the rows from the surface down, each depth once"},
        {"depth warming\n-1 1\n",
         "line 2, column 'depth': -1 m is not within 0..12000; check its unit and its sign"},
        {"depth warming\n0 283\n",
         "line 2, column 'warming': 283 K is not within -20..20; check its unit and its sign"},
        {"depth freshening\n0 0.1\n5 NA\n",
         "line 3, column 'freshening': there is no value; give a value, or take the row out"},
        {"depth [K] warming\n0 1\n",
         "column 'depth': the unit 'K' does not convert to m; correct the unit in the "
         "header, or leave it out"},
        {"depth warming\n", "has a header, but no rows; add a line for every level below the header"},
    };

    (void)state;
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        char message[512];
        double *values;
        size_t count;

        assert_int_equal(read_text(cases[i].text, &values, &count), STERICOL_INPUT);
        assert_null(values);
        assert_int_equal(count, 0);
        snprintf(message, sizeof message, "%s: %s", path, cases[i].message);
        assert_string_equal(stericol_context_message(context), message);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_read), cmocka_unit_test(test_refused)};

    return cmocka_run_group_tests(tests, open_all, close_all);
}
