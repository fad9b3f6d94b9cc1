/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Tables of region totals and lines of provenance.  The region rows are invented; what is expected follows
 * from them by the unit prefixes (1 m = 1000 mm, 1 ZJ = 1e21 J) and by RFC 4180 (commas, quotes, CRLF) and
 * RFC 8259 (JSON).
 */
#include "support/testing.h"

#include "result/names.h"
#include "result/provenance.h"
#include "result/table.h"

#include <jansson.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static stericol_table_row row_of(const char *region, const char *layer, double size)
{
    stericol_table_row row = {.region = region, .layer = layer};

    stericol_table_row_clear(&row);
    row.values[STERICOL_REGION_AREA] = 2e12;
    row.values[STERICOL_REGION_COVERED_AREA] = 1.75e12;
    row.values[STERICOL_REGION_MEAN_STERIC] = 0.01234567 * size;
    row.values[STERICOL_REGION_MEAN_THERMOSTERIC] = 0.015 * size;
    row.values[STERICOL_REGION_MEAN_HALOSTERIC] = -0.00265433 * size;
    row.values[STERICOL_REGION_VOLUME_STERIC] = 2.16049225e10 * size;
    row.values[STERICOL_REGION_VOLUME_THERMOSTERIC] = 2.625e10 * size;
    row.values[STERICOL_REGION_VOLUME_HALOSTERIC] = -4.6450775e9 * size;
    row.values[STERICOL_REGION_HEAT] = 1.5e20 * size;
    row.values[STERICOL_REGION_SEA_LEVEL] = 7.2413793e-5 * size;
    row.values[STERICOL_REGION_EFFICIENCY] = 0.4827586;
    return row;
}

static void assert_adds(stericol_status (*table)(stericol_context *, const stericol_table_row *, size_t,
                                                 stericol_text *),
                        const stericol_table_row *rows, size_t count, stericol_text *text)
{
    assert_int_equal(table(NULL, rows, count, text), STERICOL_OK);
    assert_false(text->failed);
}

static void test_text_shows_units_and_blanks(void **state)
{
    stericol_table_row rows[3] = {row_of("Miradel Basin", NULL, 1.0), row_of("Miradel Basin", "0..700", 0.5),
                                  row_of("Outer \xc3\x85land", "700..2000", 1e-4)};
    stericol_text text = {0};

    (void)state;
    rows[1].values[STERICOL_REGION_EFFICIENCY] = (double)NAN;
    assert_adds(stericol_table_text, rows, 3, &text);
    assert_string_equal(
        stericol_text_string(&text),
        "region             layer  covered  steric  thermo-     halo-     volume     heat   equiv.   ratio\n"
        "                       m        %      mm       mm        mm         m3       ZJ       mm    m/YJ\n"
        "Miradel Basin        all     87.5   12.35    15.00    -2.654  2.160e+10   0.1500  0.07241  0.4828\n"
        "Miradel Basin     0..700     87.5    6.17     7.50    -1.327  1.080e+10   0.0750  0.03621\n"
        "Outer \xc3\x85land    700..2000     87.5  0.0012   0.0015  -0.00027  2.160e+06  1.5e-05  7.2e-06  "
        "0.4828\n");
    stericol_text_free(&text);
}

static void test_text_leaves_out_what_nobody_knows(void **state)
{
    stericol_table_row row = row_of("sea", NULL, 1.0);
    stericol_text text = {0};

    (void)state;
    row.values[STERICOL_REGION_MEAN_STERIC] = row.values[STERICOL_REGION_MEAN_HALOSTERIC] = (double)NAN;
    row.values[STERICOL_REGION_VOLUME_STERIC] = row.values[STERICOL_REGION_VOLUME_HALOSTERIC] = (double)NAN;
    row.values[STERICOL_REGION_EFFICIENCY] = (double)NAN;
    row.values[STERICOL_REGION_HEAT] = -0.0;
    assert_adds(stericol_table_text, &row, 1, &text);
    assert_string_equal(stericol_text_string(&text), "region  covered  thermo-     volume   heat   equiv.\n"
                                                     "              %       mm         m3     ZJ       mm\n"
                                                     "sea        87.5    15.00  2.625e+10  0.000  0.07241\n");
    stericol_text_free(&text);
}

/* Names of any length and content leave the columns where they are. */
static void test_text_stays_within_its_width(void **state)
{
    stericol_table_row rows[3] = {row_of("a twenty letter name", "2000..bottom", -800.0),
                                  row_of("a name that is longer than the column of names", NULL, -1.0),
                                  row_of("bell\a", NULL, 1e-9)};
    const char *line;
    stericol_text text = {0};
    size_t lines = 0;

    (void)state;
    assert_adds(stericol_table_text, rows, 3, &text);
    line = stericol_text_string(&text);
    assert_non_null(strstr(line, "\na name that is longer than the column of names\n "));
    assert_non_null(strstr(line, "bell\\x07 "));
    for (; *line != '\0'; line = strchr(line, '\n') + 1, lines++) {
        const size_t length = strcspn(line, "\n");

        assert_true(length <= 100);
        assert_true(length == 0 || line[length - 1] != ' ');
    }
    assert_int_equal(lines, 6);
    stericol_text_free(&text);
}

static void test_csv_follows_rfc_4180(void **state)
{
    stericol_table_row rows[2] = {row_of("Miradel, \"deep\"\nbasin", "0..700", 1.0),
                                  row_of("plain", NULL, 0.1)};
    stericol_text text = {0};
    const char *second;
    char *end;

    (void)state;
    rows[1].values[STERICOL_REGION_AREA] = 0.1;
    rows[1].values[STERICOL_REGION_COVERED_AREA] = 1.0 / 3.0;
    assert_adds(stericol_table_csv, rows, 2, &text);
    assert_true(stericol_starts_with(stericol_text_string(&text),
                                     "region_name,layer [m],region_area [m2],region_covered_area "
                                     "[m2],region_mean_steric_height_change [m],"));
    assert_non_null(strstr(stericol_text_string(&text), ",region_heat_content_change [J],"
                                                        "region_sea_level_equivalent [m],"
                                                        "region_expansion_efficiency [m YJ-1],"));
    assert_non_null(
        strstr(stericol_text_string(&text),
               "\r\n\"Miradel, \"\"deep\"\"\nbasin\",0..700,2000000000000,1750000000000,0.01234567,"));
    second = strstr(stericol_text_string(&text), "\r\nplain,,0.1,");
    assert_non_null(second);
    /* 17 significant digits are enough for any double: IEEE 754-2019, section 5.12.2. */
    assert_same_number(strtod(second + strlen("\r\nplain,,0.1,"), &end), 1.0 / 3.0);
    assert_true(*end == ',');
    assert_true(
        stericol_ends_with(stericol_text_string(&text), ",,,,,\r\n")); /* the scaled sums are not known */
    stericol_text_free(&text);
}

static void test_json_is_read_back(void **state)
{
    const stericol_table_row rows[2] = {row_of("Miradel \"deep\" \xff", "0..700", 1.0),
                                        row_of("plain", NULL, 0.1)};
    stericol_text text = {0};
    json_t *whole, *list, *first, *second;
    json_error_t error;

    (void)state;
    assert_adds(stericol_table_json, rows, 2, &text);
    whole = json_loads(stericol_text_string(&text), 0, &error);
    assert_non_null(whole);
    list = json_object_get(whole, "regions");
    assert_int_equal(json_array_size(list), 2);
    first = json_array_get(list, 0);
    second = json_array_get(list, 1);
    assert_string_equal(json_string_value(json_object_get(first, "region_name")), "Miradel \"deep\" \\xFF");
    assert_string_equal(json_string_value(json_object_get(first, "layer")), "0..700");
    assert_true(json_is_null(json_object_get(second, "layer")));
    assert_true(json_is_null(json_object_get(second, "region_filled_heat_content_change")));
    for (int i = 0; i < STERICOL_REGION_QUANTITY_COUNT; i++) {
        const stericol_result_entry *entry = stericol_region_entry((stericol_region_quantity)i);
        char key[80];

        snprintf(key, sizeof key, "region_%s", entry->name);
        assert_string_equal(json_string_value(json_object_get(json_object_get(whole, "units"), key)),
                            entry->unit);
        if (!isnan(rows[1].values[i]))
            assert_same_number(json_real_value(json_object_get(second, key)), rows[1].values[i]);
    }
    json_decref(whole);
    stericol_text_free(&text);
}

static void test_empty_tables(void **state)
{
    stericol_text text = {0};

    (void)state;
    assert_adds(stericol_table_text, NULL, 0, &text);
    assert_string_equal(stericol_text_string(&text), "region\n\n");
    stericol_text_clear(&text);
    assert_adds(stericol_table_json, NULL, 0, &text);
    assert_non_null(strstr(stericol_text_string(&text), "\"regions\": []"));
    stericol_text_free(&text);
}

/* Instants: 0 is 1970-01-01 (POSIX.1-2017, 4.16); 1e9 is 2001-09-09T01:46:40Z, 2^31 - 1 is
   2038-01-19T03:14:07Z: common practice, no source (`date -u -d @N` gives the same). */
static void test_provenance(void **state)
{
    const stericol_input_record inputs[3] = {{"a.nc", 12, 1000000000, NULL},
                                             {"dir/b\n.nc", 5000000000ULL, 2147483647, "miradel-7"},
                                             {"c.nc", 0, 0x7fffffffffffffffLL, NULL}};
    stericol_text text = {0};
    char instant[STERICOL_INSTANT_ROOM];

    (void)state;
    stericol_result_inputs_text(&text, inputs, 3);
    assert_string_equal(stericol_text_string(&text),
                        "a.nc, 12 bytes, changed 2001-09-09T01:46:40Z\n"
                        "dir/b\\x0A.nc, 5000000000 bytes, changed 2038-01-19T03:14:07Z, id miradel-7\n"
                        "c.nc, 0 bytes");
    stericol_text_free(&text);
    assert_true(stericol_result_instant_text(0, instant));
    assert_string_equal(instant, "1970-01-01T00:00:00Z");
    assert_false(stericol_result_instant_text(0x7fffffffffffffffLL, instant));
    assert_string_equal(instant, "");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_text_shows_units_and_blanks),
        cmocka_unit_test(test_text_leaves_out_what_nobody_knows),
        cmocka_unit_test(test_text_stays_within_its_width),
        cmocka_unit_test(test_csv_follows_rfc_4180),
        cmocka_unit_test(test_json_is_read_back),
        cmocka_unit_test(test_empty_tables),
        cmocka_unit_test(test_provenance),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
