/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Values of options, spelling, and the expansion of paths. */
#include "support/testing.h"

#include "base/text.h"
#include "job/options.h"
#include "job/paths.h"
#include "job/values.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

static void assert_phrase(const char *value, const char *actual, const char *expected)
{
    if (actual == NULL || expected == NULL ? actual != expected : strcmp(actual, expected) != 0)
        fail_msg("'%s' gave '%s', expected '%s'", value, actual == NULL ? "(taken)" : actual,
                 expected == NULL ? "(taken)" : expected);
}

/* ---- values ---- */

static void layers_are_read(void **state)
{
    stericol_depth_range *layers;
    size_t count;

    (void)state;
    assert_null(stericol_parse_layers("0..700, 700..2000.5 ,2000..bottom", &layers, &count));
    assert_int_equal(count, 3);
    assert_same_number(layers[0].upper, 0);
    assert_same_number(layers[0].lower, 700);
    assert_same_number(layers[1].upper, 700);
    assert_same_number(layers[1].lower, 2000.5);
    assert_same_number(layers[2].upper, 2000);
    assert_same_number(layers[2].lower, INFINITY);
    free(layers);
    /* Layers may overlap and leave holes (interface of the sweep). */
    assert_null(stericol_parse_layers("300..700,0..2000", &layers, &count));
    assert_int_equal(count, 2);
    free(layers);
}

static void bad_layers_are_refused(void **state)
{
    static const char form[] = "a layer is FROM..TO in metres, such as 0..700 or 2000..bottom";
    static const struct {
        const char *text, *phrase;
    } rows[] = {{"0..700", NULL},
                {"0..bottom", NULL},
                {"", form},
                {",", form},
                {"0..700,", form},
                {"700", form},
                {"0-700", form},
                {"0..", form},
                {"..700", form},
                {"0..floor", form},
                {"bottom..700", form},
                {"0..nan", form},
                {"0...700", NULL}, /* 0 .. .700: a depth of 0.7 m */
                {"0..700m", form},
                {"-10..700", "depths are not negative; they count down from the surface"},
                {"700..0", "a layer goes down: its second depth must be greater than its first"},
                {"700..700", "a layer goes down: its second depth must be greater than its first"},
                {"0..700,0..700.0", "a layer stands there twice"},
                {"5..bottom,0..5,5..bottom", "a layer stands there twice"}};
    stericol_text many = {0};

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
        assert_phrase(rows[i].text, stericol_parse_layers(rows[i].text, NULL, NULL), rows[i].phrase);
    for (int i = 0; i < STERICOL_LAYERS_MOST; i++)
        stericol_text_format(&many, "%s%d..%d", i == 0 ? "" : ",", i, i + 1);
    assert_null(stericol_parse_layers(stericol_text_string(&many), NULL, NULL));
    stericol_text_add(&many, ",5000..6000");
    assert_string_equal(stericol_parse_layers(stericol_text_string(&many), NULL, NULL),
                        "there are more than 1000 layers");
    stericol_text_free(&many);
}

static void steps_are_read(void **state)
{
    static const char form[] = "steps are counted from 1, such as 3 or 3..5";
    static const struct {
        const char *text, *phrase;
        size_t first, last;
    } rows[] = {{"3", NULL, 3, 3},
                {"3..5", NULL, 3, 5},
                {"7..7", NULL, 7, 7},
                {"0", form, 0, 0},
                {"3..", form, 0, 0},
                {"..3", form, 0, 0},
                {"", form, 0, 0},
                {"-1", form, 0, 0},
                {"1.5", form, 0, 0},
                {"3-5", form, 0, 0},
                {"1..2..3", form, 0, 0},
                {"5..3", "the last step comes before the first", 0, 0},
                {"99999999999999999999", form, 0, 0}};

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        size_t first = 0, last = 0;

        assert_phrase(rows[i].text, stericol_parse_steps(rows[i].text, &first, &last), rows[i].phrase);
        assert_int_equal(first, rows[i].first);
        assert_int_equal(last, rows[i].last);
    }
}

/* Factors: powers of 1024 (IEC 80000-13, table 5: kibi 2^10, mebi 2^20, gibi 2^30, tebi 2^40). */
static void sizes_are_read(void **state)
{
    static const char form[] = "a size is a number of bytes, or with K, M, G or T behind it: 512M";
    static const struct {
        const char *text, *phrase;
        size_t bytes;
    } rows[] = {{"512M", NULL, 536870912},
                {"2G", NULL, 2147483648},
                {"1.5GiB", NULL, 1610612736},
                {"1k", NULL, 1024},
                {"4KB", NULL, 4096},
                {"1T", NULL, 1099511627776},
                {"100", NULL, 100},
                {"100b", NULL, 100},
                {"0.5K", NULL, 512},
                {"", form, 0},
                {"M", form, 0},
                {"-1M", form, 0},
                {"1 M", form, 0},
                {"1X", form, 0},
                {"1MM", form, 0},
                {"1..5M", form, 0},
                {"1e3", form, 0},
                {"0", "it must be at least one byte", 0},
                {"0.0001K", "it must be at least one byte", 0},
                {"99999999999T", "it is more than this machine can count", 0}};

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        size_t bytes = 0;

        assert_phrase(rows[i].text, stericol_parse_size(rows[i].text, &bytes), rows[i].phrase);
        assert_int_equal(bytes, rows[i].bytes);
    }
}

static void assignments_and_boxes_are_read(void **state)
{
    static const char *const bad[] = {"member", "=3", "member=", "member=0", "member=1.5", "member=x"};
    static const char form[] =
        "a box is NAME=WEST,SOUTH,EAST,NORTH in degrees, such as Inner_Bight=-20,40,-5,55";
    static const char latitudes[] = "south must be less than north, and both lie within -90 to 90";
    static const struct {
        const char *text, *phrase;
    } boxes[] = {{"A=170,-10,-170,10", NULL},
                 {"A=1,2,3", form},
                 {"A=1,2,3,4,5", form},
                 {"A=1,2,3,x", form},
                 {"1,2,3,4", form},
                 {"=1,2,3,4", form},
                 {"A=0,10,20,10", latitudes},
                 {"A=0,-91,20,10", latitudes},
                 {"A=0,0,20,90.5", latitudes},
                 {"A=0,0,361,10", "west and east lie within -360 to 360"},
                 {"A=5,0,5,10", "west and east are the same; the whole circle is -180,SOUTH,180,NORTH"}};
    size_t length, index;
    double box[4];

    (void)state;
    assert_null(stericol_parse_assignment("a=b=12", &length, &index));
    assert_int_equal(length, 3);
    assert_int_equal(index, 12);
    for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++)
        assert_phrase(bad[i], stericol_parse_assignment(bad[i], &length, &index),
                      "it is NAME=INDEX, the index counted from 1, such as member=3");
    assert_null(stericol_parse_box("Old Sea=-20.5,40,-5,55", &length, box));
    assert_int_equal(length, strlen("Old Sea"));
    assert_same_number(box[0], -20.5);
    assert_same_number(box[1], 40);
    assert_same_number(box[2], -5);
    assert_same_number(box[3], 55);
    for (size_t i = 0; i < sizeof boxes / sizeof boxes[0]; i++)
        assert_phrase(boxes[i].text, stericol_parse_box(boxes[i].text, &length, box), boxes[i].phrase);
}

static void windows_are_read(void **state)
{
    static const char *const bad[] = {"..2005", "2005..", "2005...2006", "1..2..3", ""};
    size_t length;
    const char *to;

    (void)state;
    assert_null(stericol_parse_window("2005-01..2009-12", &length, &to));
    assert_int_equal(length, 7);
    assert_string_equal(to, "2009-12");
    assert_null(stericol_parse_window("2005-03", &length, &to)); /* one date is both ends */
    assert_int_equal(length, 7);
    assert_string_equal(to, "2005-03");
    for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++)
        assert_phrase(bad[i], stericol_parse_window(bad[i], &length, &to),
                      "a window is FROM..TO in ISO 8601, such as 2005-01..2009-12");
}

/* ---- spelling ---- */

static void spellings_are_compared(void **state)
{
    const stericol_command *change = stericol_command_named("change");
    char longest[65];

    (void)state;
    assert_int_equal(stericol_spelling_distance("", ""), 0);
    assert_int_equal(stericol_spelling_distance("abc", ""), 3);
    /* from memory: the textbook pair of the edit distance, three edits */
    assert_int_equal(stericol_spelling_distance("kitten", "sitting"), 3);
    assert_int_equal(stericol_spelling_distance("lyaers", "layers"), 1);
    /* from memory: where optimal string alignment and the unrestricted distance (2) differ */
    assert_int_equal(stericol_spelling_distance("ca", "abc"), 3);
    memset(longest, 'a', 64);
    longest[64] = '\0';
    assert_true(stericol_spelling_distance(longest, "a") == SIZE_MAX);
    assert_int_equal(stericol_spelling_distance(longest + 1, ""), 63);
    assert_string_equal(stericol_nearest_option(change, "tempreture", false), "temperature");
    assert_string_equal(stericol_nearest_option(change, "lyaers", false), "layers");
    assert_string_equal(stericol_nearest_option(change, "atrib", false) == NULL ? "none" : "some", "none");
    assert_string_equal(stericol_nearest_option(change, "attrib", false), "attribution");
    assert_null(stericol_nearest_option(change, "zzzzzz", false));
    assert_null(stericol_nearest_option(change, "", false));
    assert_null(stericol_nearest_option(stericol_command_named("inspect"), "fille", false));
    assert_string_equal(stericol_nearest_option(stericol_command_named("inspect"), "fille", true), "file");
    assert_string_equal(stericol_nearest_command("chnage"), "change");
    assert_null(stericol_nearest_command("report"));
}

/* ---- paths ---- */

static void write_file(const char *path, const char *bytes)
{
    FILE *file = fopen(path, "w");

    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, strlen(bytes), file), strlen(bytes));
    assert_int_equal(fclose(file), 0);
}

/* A fresh folder becomes the working folder. */
static int enter_folder(void **state)
{
    char folder[] = TEST_BUILD_FOLDER "/paths_XXXXXX";

    (void)state;
    if (mkdtemp(folder) == NULL || chdir(folder) != 0)
        return -1;
    write_file("b.nc", "");
    write_file("a.nc", "");
    write_file("B.nc", "");
    write_file("sea[1].nc", "");
    write_file("sea1.nc", "");
    write_file("@odd.txt", "");
    return 0;
}

static int leave_folder(void **state)
{
    char folder[4096];
    static const char *const names[] = {"b.nc",    "a.nc",     "B.nc",    "sea[1].nc",
                                        "sea1.nc", "@odd.txt", "list.txt"};

    (void)state;
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        unlink(names[i]);
    if (getcwd(folder, sizeof folder) == NULL || chdir(TEST_BUILD_FOLDER) != 0)
        return -1;
    return rmdir(folder);
}

/* `expected`: paths, each followed by a blank; or the message of a failure. */
static void assert_expansion(const char *argument, stericol_status status, const char *expected)
{
    stericol_context *context = stericol_context_new();
    stericol_paths paths;
    stericol_text seen = {0};

    assert_int_equal(stericol_expand_paths(context, "earlier", &argument, 1, &paths), status);
    for (size_t i = 0; i < paths.count; i++)
        stericol_text_format(&seen, "%s ", paths.path[i]);
    if (status != STERICOL_OK) {
        assert_int_equal(paths.count, 0);
        stericol_text_add(&seen, stericol_context_message(context));
    }
    assert_string_equal(stericol_text_string(&seen), expected);
    stericol_text_free(&seen);
    stericol_paths_free(&paths);
    stericol_context_free(context);
}

static void patterns_are_expanded(void **state)
{
    (void)state;
    assert_expansion("a.nc", STERICOL_OK, "a.nc ");
    assert_expansion("absent.nc", STERICOL_OK, "absent.nc ");
    assert_expansion("?.nc", STERICOL_OK, "B.nc a.nc b.nc ");
    assert_expansion("[ab].nc", STERICOL_OK, "a.nc b.nc ");
    assert_expansion("sea*.nc", STERICOL_OK, "sea1.nc sea[1].nc ");
    assert_expansion("sea[1].nc", STERICOL_OK, "sea[1].nc ");
    assert_expansion("*/x.nc", STERICOL_INPUT,
                     "*/x.nc: no file matches this pattern of --earlier; check the folder and the pattern");
    assert_expansion("z*.nc", STERICOL_INPUT,
                     "z*.nc: no file matches this pattern of --earlier; check the folder and the pattern");
    assert_expansion("file:///x?y#mode=nczarr", STERICOL_OK, "file:///x?y#mode=nczarr ");
}

static void lists_are_expanded(void **state)
{
    (void)state;
    write_file("list.txt", "\xef\xbb\xbf# the sea\r\n  a.nc \r\n\r\n\tsea*.nc\n@odd.txt\nlast one.nc");
    assert_expansion("@list.txt", STERICOL_OK, "a.nc sea1.nc sea[1].nc @odd.txt last one.nc ");
    assert_expansion("@odd.txt", STERICOL_OK, "@odd.txt ");
    assert_expansion("@", STERICOL_OK, "@ ");
    write_file("list.txt", "a.nc\nz*.nc\n");
    assert_expansion("@list.txt", STERICOL_INPUT,
                     "z*.nc: no file matches this pattern of list.txt; check the folder and the pattern");
    write_file("list.txt", "# nothing\n\n");
    assert_expansion("@list.txt", STERICOL_INPUT,
                     "list.txt: the list of files holds no path; give a path a line");
    assert_expansion(
        "@absent.txt", STERICOL_INPUT,
        "absent.txt: the list of files cannot be opened: No such file or directory; check its name and "
        "permissions");
    assert_expansion(
        "@.", STERICOL_INPUT,
        ".: the list of files cannot be read: Is a directory; give a text file with a path a line");
}

static void binary_lists_are_refused(void **state)
{
    FILE *file = fopen("list.txt", "w");

    (void)state;
    assert_non_null(file);
    assert_int_equal(fwrite("a\0b\n", 1, 4, file), 4);
    assert_int_equal(fclose(file), 0);
    assert_expansion("@list.txt", STERICOL_INPUT,
                     "list.txt: this is no list of files; give a text with a path a line");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(layers_are_read),
        cmocka_unit_test(bad_layers_are_refused),
        cmocka_unit_test(steps_are_read),
        cmocka_unit_test(sizes_are_read),
        cmocka_unit_test(assignments_and_boxes_are_read),
        cmocka_unit_test(windows_are_read),
        cmocka_unit_test(spellings_are_compared),
        cmocka_unit_test_setup_teardown(patterns_are_expanded, enter_folder, leave_folder),
        cmocka_unit_test_setup_teardown(lists_are_expanded, enter_folder, leave_folder),
        cmocka_unit_test_setup_teardown(binary_lists_are_refused, enter_folder, leave_folder)};

    return cmocka_run_group_tests(tests, NULL, NULL);
}
