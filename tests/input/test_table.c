/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Text tables: every form that is read, every message.  Expected values are the ones written in the tables;
 * those that need a unit follow from its definition (SI Brochure; 0 degC = 273.15 K, 1 dbar = 1e4 Pa).
 */
#include "support/testing.h"

#include "input/table.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

typedef struct fixture {
    stericol_cf_units *units;
    stericol_context *context;
} fixture;

static int open_all(void **state)
{
    fixture *f = calloc(1, sizeof *f);

    if (f == NULL)
        return -1;
    f->context = stericol_context_new();
    if (f->context == NULL || stericol_cf_units_new(f->context, &f->units) != STERICOL_OK)
        return -1;
    *state = f;
    return 0;
}

static int close_all(void **state)
{
    fixture *f = *state;

    stericol_cf_units_free(f->units);
    stericol_context_free(f->context);
    free(f);
    return 0;
}

static stericol_text_table *parse(fixture *f, const char *text)
{
    stericol_text_table *table;

    if (stericol_text_table_parse(f->context, "t.txt", text, strlen(text), &table) != STERICOL_OK) {
        print_error("\"%s\" was refused: %s\n", text, stericol_context_message(f->context));
        fail();
    }
    return table;
}

static void check_refused(fixture *f, const char *text, size_t length, const char *message)
{
    stericol_text_table *table = NULL;

    stericol_context_clear(f->context);
    assert_int_equal(stericol_text_table_parse(f->context, "t.txt", text, length, &table), STERICOL_INPUT);
    assert_null(table);
    assert_string_equal(stericol_context_message(f->context), message);
    stericol_context_clear(f->context);
}

/* Parses a table and compares the numbers of all its columns, row after row; -1 in `expected` is missing. */
static void check_numbers(fixture *f, const char *text, size_t rows, size_t columns, const double *expected)
{
    stericol_text_table *table = parse(f, text);
    double values[8];

    assert_int_equal(stericol_text_table_rows(table), rows);
    assert_int_equal(stericol_text_table_columns(table), columns);
    assert_true(rows <= 8);
    for (size_t c = 0; c < columns; c++) {
        if (stericol_text_table_numbers(f->context, table, f->units, c, "1", false, values) != STERICOL_OK) {
            print_error("\"%s\": %s\n", text, stericol_context_message(f->context));
            fail();
        }
        for (size_t r = 0; r < rows; r++)
            assert_same_number(values[r],
                               expected[r * columns + c] > -0.5 ? expected[r * columns + c] : (double)NAN);
    }
    stericol_text_table_free(table);
}

static void test_marks_and_line_ends(void **state)
{
    static const double expected[] = {0, 20.5, 35, 10, -1, 35.25};
    static const char *const texts[] = {
        "a,b,c\n0,20.5,35\n10,,35.25\n",
        "a,b,c\r\n0,20.5,35\r\n10,NA,35.25\r\n",
        "a,b,c\r0,20.5,35\r10,NaN,35.25",
        "a;b;c\n0;20.5;35\n10;-;35.25\n",
        "a\tb\tc\n0\t20.5\t35\n10\t\t35.25\n",
        "a b c\n0 20.5 35\n10 na 35.25\n",
        "  a   b\t c  \n\n 0  20.5   35  \n\n  10   nan 35.25 \n",
        "\xEF\xBB\xBF\x61,b,c\n0,20.5,35\n10,NA,35.25", /* the byte order mark; \x61 is a */
        "# a survey\na,b,c\n  # of levels, in metres\n0,20.5,35\n#\n10,NA,35.25\n",
        "a , \"b\" , c\n\"0\" ,20.5, \"35\" \n 10,\"\", 3.525e1\n",
        "a;b;c\n0;20,5;35\n10;;35,25\n",
    };

    for (size_t i = 0; i < sizeof texts / sizeof *texts; i++) {
        /* The seventh is parted by blanks, though it has a tab: then the tab decides. */
        if (i == 6)
            continue;
        check_numbers(*state, texts[i], 2, 3, expected);
    }
    check_refused(*state, texts[6], strlen(texts[6]),
                  "t.txt: line 3: has 1 fields (parted by tabs), but the header names 2 columns; give every "
                  "row a field for every column, NA where there is no value");
    check_numbers(*state, "  a   b   c  \n\n 0  20.5 \t  35  \n\n\t10   nan 35.25 \n", 2, 3, expected);
}

static void test_names_and_units(void **state)
{
    static const char *const depth[] = {"depth", NULL}, *const none[] = {"nothing", NULL};
    static const char *const temperature[] = {"temp", "potential_temperature", NULL};
    static const char *const salinity[] = {"salinity", NULL};
    static const char *const headers[] = {
        "depth [m] Potential-Temperature [deg C] salinity (PSU)\n1 2 3\n",
        "Depth [ m ],potential temperature (deg C),SALINITY [PSU]\n1,2,3\n",
        "depth_m;temp_deg C;salinity_PSU\n1;2;3\n",
        "\"depth [m]\",\"temp [deg C]\",\"salinity [PSU]\"\n1,2,3\n",
        "depth[m]\ttemp(deg C)\tsalinity[PSU]\n1\t2\t3\n",
    };
    fixture *f = *state;

    for (size_t i = 0; i < sizeof headers / sizeof *headers; i++) {
        stericol_text_table *table = parse(f, headers[i]);

        assert_int_equal(stericol_text_table_columns(table), 3);
        assert_int_equal(stericol_text_table_find(table, f->units, 0, depth), 0);
        assert_int_equal(stericol_text_table_find(table, f->units, 0, temperature), 1);
        assert_int_equal(stericol_text_table_find(table, f->units, 0, salinity), 2);
        assert_true(stericol_text_table_find(table, f->units, 1, depth) == STERICOL_TEXT_TABLE_NONE);
        assert_true(stericol_text_table_find(table, f->units, 0, none) == STERICOL_TEXT_TABLE_NONE);
        assert_string_equal(stericol_text_table_unit(table, f->units, 0), "m");
        assert_string_equal(stericol_text_table_unit(table, f->units, 1), "deg C");
        assert_string_equal(stericol_text_table_unit(table, f->units, 2), "PSU");
        assert_string_equal(stericol_text_table_path(table), "t.txt");
        assert_int_equal(stericol_text_table_line(table, 0), 2);
        stericol_text_table_free(table);
    }
    /* A comma inside brackets parts nothing. */
    stericol_text_table *table = parse(f, "depth  temp (deg C, ITS-90)  salinity\n1 2 3\n");

    assert_int_equal(stericol_text_table_columns(table), 3);
    assert_string_equal(stericol_text_table_unit(table, f->units, 1), "deg C, ITS-90");
    assert_null(stericol_text_table_unit(table, f->units, 2));
    assert_string_equal(stericol_text_table_name(table, 1), "temp");
    stericol_text_table_free(table);
}

static void check_unit(fixture *f, const char *text, const char *target, bool difference, double expected,
                       double tolerance)
{
    stericol_text_table *table = parse(f, text);
    double value;

    assert_int_equal(stericol_text_table_numbers(f->context, table, f->units, 0, target, difference, &value),
                     STERICOL_OK);
    assert_close(value, expected, tolerance);
    stericol_text_table_free(table);
}

static void test_conversion(void **state)
{
    check_unit(*state, "temp [K]\n283.15\n", "degree_Celsius", false, 10.0, 1e-12); /* rounding of 283.15 */
    check_unit(*state, "temp_K\n283.15\n", "degree_Celsius", false, 10.0, 1e-12);
    check_unit(*state, "warming [degC]\n1.5\n", "K", true, 1.5, 1e-15); /* a rounding of 274.15 - 273.15 */
    check_unit(*state, "warming [degF]\n1.8\n", "K", true, 1.0, 1e-12); /* 9 degF are 5 K */
    check_unit(*state, "p (Pa)\n1e7\n", "dbar", false, 1000.0, 1e-9);
    check_unit(*state, "p (MPa)\n10\n", "dbar", false, 1000.0, 1e-9);
    check_unit(*state, "depth [km]\n1.5\n", "m", false, 1500.0, 1e-9);
    check_unit(*state, "s [kg/kg]\n0.035\n", "g/kg", false, 35.0, 1e-12);
    check_unit(*state, "s [PSU]\n35\n", "g/kg", false, 35.0, 0.0);
    check_unit(*state, "t\n12\n", "degree_Celsius", false, 12.0, 0.0);
}

static void test_refused_tables(void **state)
{
    static const struct {
        const char *text, *message;
    } cases[] = {
        {"", "t.txt: is empty; begin the table with a line of names such as 'depth temperature salinity'"},
        {"# only talk\n\n",
         "t.txt: is empty; begin the table with a line of names such as 'depth temperature salinity'"},
        {"a b\n", "t.txt: has a header, but no rows; add a line for every level below the header"},
        {"0 20 35\n10 19 35\n",
         "t.txt: line 1: is the header, but has the number '0' in place of a name; begin the table with a "
         "line of names such as 'depth temperature salinity'"},
        {"a,b,\n1,2,\n", "t.txt: line 1: the name of column 3 is empty; give every column a name, and end no "
                         "line with a mark between columns"},
        {"a,B,A\n1,2,3\n", "t.txt: line 1: the name 'A' is there twice; rename one of them, or take it out"},
        {"sea temp;sea-temp\n1;2\n",
         "t.txt: line 1: the name 'sea-temp' is there twice; rename one of them, or take it out"},
        {"a b\n1 2\n# x\n\n3 4 5\n",
         "t.txt: line 5: has 3 fields (parted by blanks), but the header names 2 columns; give every row a "
         "field for every column, NA where there is no value"},
        {"a;b\n1\n",
         "t.txt: line 2: has 1 fields (parted by semicolons), but the header names 2 columns; give every row "
         "a field for every column, NA where there is no value"},
        {"a,b\n1,5,2,5\n",
         "t.txt: line 2: has 4 fields (parted by commas), but the header names 2 columns; give every row a "
         "field for every column; where numbers have decimal commas, part the columns by semicolons"},
        {"a,b\n\"1,2\n", "t.txt: line 2: has a double quote that is not closed; close it on its line, before "
                         "the mark between fields"},
        {"a,b\n\"1\"x,2\n", "t.txt: line 2: has a double quote that is not closed; close it on its line, "
                            "before the mark between fields"},
        {"a b\n1 2\n3 \x01\n", "t.txt: is no text table: byte 11 is 0x01; save the table as plain text "
                               "(UTF-8 or ASCII), with the names of its columns in the first line"},
        {"CDF\x01 and so on", "t.txt: is a NetCDF file, not a text table; export the column as a text table, "
                              "or use the commands that read NetCDF"},
        {"\x89HDF\r\n\x1a\n", "t.txt: is a NetCDF file, not a text table; export the column as a text table, "
                              "or use the commands that read NetCDF"},
    };

    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++)
        check_refused(*state, cases[i].text, strlen(cases[i].text), cases[i].message);
    check_refused(*state, "a b\n1\0002\n", 8,
                  "t.txt: is no text table: byte 6 is 0x00; save the table as plain text (UTF-8 or ASCII), "
                  "with the names of its columns in the first line");
}

static void check_refused_numbers(fixture *f, const char *text, const char *target, const char *message)
{
    stericol_text_table *table = parse(f, text);
    double values[4];

    assert_int_equal(stericol_text_table_numbers(f->context, table, f->units, 1, target, false, values),
                     STERICOL_INPUT);
    assert_string_equal(stericol_context_message(f->context), message);
    stericol_context_clear(f->context);
    stericol_text_table_free(table);
}

static void test_refused_numbers(void **state)
{
    check_refused_numbers(*state, "a b\n1 x\n", "1",
                          "t.txt: line 2, column 'b': 'x' is no number; write a plain number, or NA where "
                          "there is no value");
    check_refused_numbers(*state, "a,b\n1,2\n\n2,inf\n", "1",
                          "t.txt: line 4, column 'b': 'inf' is no number; write a plain number, or NA where "
                          "there is no value");
    check_refused_numbers(*state, "a;b\n1;1.234,5\n", "1",
                          "t.txt: line 2, column 'b': '1.234,5' is no number; write a plain number, or NA "
                          "where there is no value");
    check_refused_numbers(*state, "a;b\n1;1,5\n2;2.5\n", "1",
                          "t.txt: line 3, column 'b': '2.5': the column has decimal points and commas; write "
                          "all numbers of a column with the same decimal mark");
    check_refused_numbers(*state, "a b\n1 2,5\n", "1",
                          "t.txt: line 2, column 'b': '2,5' is written with a comma; write decimal points, "
                          "or part the columns by semicolons: then decimal commas are read");
    check_refused_numbers(*state, "a,b\n1,\"2,5\"\n", "1",
                          "t.txt: line 2, column 'b': '2,5' is written with a comma; write decimal points, "
                          "or part the columns by semicolons: then decimal commas are read");
    check_refused_numbers(*state, "a b\n1 1e999\n", "1",
                          "t.txt: line 2, column 'b': '1e999' is no number; write a plain number, or NA "
                          "where there is no value");
    check_refused_numbers(*state, "a b\n1 0x10\n", "1",
                          "t.txt: line 2, column 'b': '0x10' is no number; write a plain number, or NA where "
                          "there is no value");
    check_refused_numbers(*state, "a depth [K]\n1 2\n", "m",
                          "t.txt: column 'depth': the unit 'K' does not convert to m; correct the unit in "
                          "the header, or leave it out");
    check_refused_numbers(*state, "a depth [wobbles]\n1 2\n", "m",
                          "t.txt: column 'depth': the unit 'wobbles' does not convert to m; correct the unit "
                          "in the header, or leave it out");
}

static void test_files(void **state)
{
    fixture *f = *state;
    static const char path[] = TEST_BUILD_FOLDER "/table_of_levels.txt";
    stericol_text_table *table;
    FILE *file = fopen(path, "wb");

    assert_non_null(file);
    assert_true(fputs("depth temp\n5 12.5\n", file) >= 0 && fclose(file) == 0);
    assert_int_equal(stericol_text_table_read(f->context, path, &table), STERICOL_OK);
    assert_string_equal(stericol_text_table_path(table), path);
    assert_int_equal(stericol_text_table_rows(table), 1);
    stericol_text_table_free(table);
    assert_int_equal(unlink(path), 0);

    assert_int_equal(stericol_text_table_read(f->context, path, &table), STERICOL_INPUT);
    assert_null(table);
    assert_string_equal(stericol_context_message(f->context),
                        TEST_BUILD_FOLDER "/table_of_levels.txt: cannot be opened (No such file or "
                                          "directory); check its name and its rights");
    stericol_context_clear(f->context);
    assert_int_equal(stericol_text_table_read(f->context, TEST_BUILD_FOLDER, &table), STERICOL_INPUT);
    assert_string_equal(stericol_context_message(f->context),
                        TEST_BUILD_FOLDER ": cannot be read (Is a directory)");
    stericol_context_clear(f->context);
}

static void test_bounds(void **state)
{
    fixture *f = *state;
    const size_t rows = STERICOL_TEXT_TABLE_MOST_ROWS, columns = STERICOL_TEXT_TABLE_MOST_COLUMNS;
    const size_t large = (size_t)STERICOL_TEXT_TABLE_MOST_BYTES + 1;
    char *text = malloc(large);
    stericol_text_table *table;
    size_t length;

    assert_non_null(text);
    memcpy(text, "a\n", 2);
    for (size_t i = 0; i <= rows; i++)
        memcpy(text + 2 + 2 * i, "1\n", 2);
    assert_int_equal(stericol_text_table_parse(f->context, "t.txt", text, 2 + 2 * rows, &table), STERICOL_OK);
    assert_int_equal(stericol_text_table_rows(table), rows);
    stericol_text_table_free(table);
    check_refused(f, text, 4 + 2 * rows,
                  "t.txt: line 100002: the table has more than 100000 rows; thin it out, or cut it");
    length = 0;
    for (size_t i = 0; i <= columns; i++)
        length += (size_t)sprintf(text + length, "%sc%zu", i > 0 ? "," : "", i);
    check_refused(f, text, length,
                  "t.txt: line 1: has more than 1000 columns; keep the columns that are "
                  "needed");
    memset(text, 'x', large);
    check_refused(f, text, large,
                  "t.txt: is larger than a text table may be (64 MiB); thin it out, or cut it");
    free(text);
}

/* Bytes that look like tables, and bytes that do not: nothing crashes, and what is refused says why. */
static void test_random_bytes(void **state)
{
    static const char likely[] = "0123456789.,;- \t\n\r\"#[]()ab_eE+NA";
    fixture *f = *state;
    uint64_t seed = 20310504;

    for (int round = 0; round < 2000; round++) {
        const uint64_t start = seed;
        char bytes[256];
        size_t length;
        stericol_text_table *table;
        stericol_status status;

        seed = seed * 6364136223846793005U + 1442695040888963407U;
        length = (size_t)(seed >> 33) % sizeof bytes;
        for (size_t i = 0; i < length; i++) {
            seed = seed * 6364136223846793005U + 1442695040888963407U;
            bytes[i] = round % 4 == 0 ? (char)(seed >> 56) : likely[(seed >> 33) % (sizeof likely - 1)];
        }
        if (length > 4 && round % 4 != 0)
            memcpy(bytes, round % 2 == 0 ? "a;b\n" : "a b\n", 4);
        stericol_context_clear(f->context);
        status = stericol_text_table_parse(f->context, "t.txt", bytes, length, &table);
        if (status == STERICOL_OK) {
            double *values = malloc(stericol_text_table_rows(table) * sizeof *values);

            assert_non_null(values);
            for (size_t c = 0; c < stericol_text_table_columns(table) && status == STERICOL_OK; c++)
                status = stericol_text_table_numbers(f->context, table, f->units, c, "1", false, values);
            free(values);
            stericol_text_table_free(table);
        }
        if ((status != STERICOL_OK && status != STERICOL_INPUT) ||
            (status == STERICOL_INPUT && stericol_context_message(f->context)[0] == '\0')) {
            print_error("round %d, seed %llu: status %d\n", round, (unsigned long long)start, (int)status);
            fail();
        }
    }
    stericol_context_clear(f->context);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_marks_and_line_ends),
        cmocka_unit_test(test_names_and_units),
        cmocka_unit_test(test_conversion),
        cmocka_unit_test(test_refused_tables),
        cmocka_unit_test(test_refused_numbers),
        cmocka_unit_test(test_files),
        cmocka_unit_test(test_bounds),
        cmocka_unit_test(test_random_bytes),
    };

    return cmocka_run_group_tests(tests, open_all, close_all);
}
