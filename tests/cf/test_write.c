/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Files written through cf/write.h, read back with NetCDF-C itself.  What the file must hold is given by the
 * calls themselves; fill values are those of netcdf.h, rules of missing values those of CF-1.10,
 * section 2.5.1.
 */
#include "support/testing.h"

#include "base/text.h"
#include "cf/staging.h"
#include "cf/write.h"

#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <float.h>
#include <netcdf.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <unistd.h>

/* ---- a folder of its own for every test ---- */

typedef struct stage {
    stericol_context *context;
    char *folder;
    char path[4096]; /* folder/out.nc */
} stage;

static int set_up(void **state)
{
    stage *made = calloc(1, sizeof *made);
    stericol_text folder = {0};

    stericol_text_format(&folder, "%s/write-XXXXXX", TEST_BUILD_FOLDER);
    made->folder = mkdtemp(stericol_text_take(&folder));
    assert_non_null(made->folder);
    snprintf(made->path, sizeof made->path, "%s/out.nc", made->folder);
    made->context = stericol_context_new();
    *state = made;
    return 0;
}

static size_t count_entries(const char *folder, bool remove_them)
{
    DIR *listing = opendir(folder);
    size_t count = 0;

    assert_non_null(listing);
    for (const struct dirent *entry = readdir(listing); entry != NULL; entry = readdir(listing)) {
        char path[4096];

        if (strcmp(entry->d_name, ".") == 0 || strcmp(entry->d_name, "..") == 0)
            continue;
        count++;
        if (remove_them) {
            snprintf(path, sizeof path, "%s/%s", folder, entry->d_name);
            if (unlink(path) != 0)
                rmdir(path);
        }
    }
    closedir(listing);
    return count;
}

static int tear_down(void **state)
{
    stage *made = *state;

    count_entries(made->folder, true);
    rmdir(made->folder);
    stericol_context_free(made->context);
    free(made->folder);
    free(made);
    return 0;
}

#define assert_ok(call, context)                                                                             \
    do {                                                                                                     \
        const stericol_status got_ = (call);                                                                 \
        if (got_ != STERICOL_OK)                                                                             \
            print_error("%s\n", stericol_context_message(context));                                          \
        assert_int_equal(got_, STERICOL_OK);                                                                 \
    } while (0)

static void assert_says(const stericol_context *context, const char *words)
{
    if (strstr(stericol_context_message(context), words) == NULL) {
        print_error("the message is \"%s\", without \"%s\"\n", stericol_context_message(context), words);
        fail();
    }
}

static void put_file(const char *path, const char *text)
{
    FILE *file = fopen(path, "w");

    assert_non_null(file);
    fputs(text, file);
    assert_int_equal(fclose(file), 0);
}

static void assert_file_is(const char *path, const char *text)
{
    char bytes[256] = {0};
    FILE *file = fopen(path, "r");

    assert_non_null(file);
    bytes[fread(bytes, 1, sizeof bytes - 1, file)] = '\0';
    fclose(file);
    assert_string_equal(bytes, text);
}

/* ---- content ---- */

enum { ROWS = 3, COLUMNS = 4, LAYERS = 2 };

static const double map_values[LAYERS][ROWS][COLUMNS] = {
    {{0.5, 1.5, -2.25, 0.0}, {1e-3, (double)NAN, (double)NAN, 4.0}, {1.0, 2.0, 3.0, -4.0}},
    {{(double)NAN, 1.0, 2.0, 3.0}, {4.0, 5.0, 6.0, 7.0}, {8.0, 9.0, 10.0, 11.0}},
};

/* A small file with one of everything; the third row of the second layer is never written. */
static stericol_status write_sample(stericol_context *context, const char *path, bool replace)
{
    const double flags[ROWS * COLUMNS] = {0, 1, 2, 3, (double)NAN, 5, 6, 0, 1, 2, 3, 127};
    const char *const names[2] = {"north", "s\xc3\xbc\x64"};
    const size_t zero[3] = {0}, first[3] = {1, ROWS, COLUMNS}, second[3] = {1, 0, 0},
                 part[3] = {1, 2, COLUMNS};
    const double number = 42.5;
    size_t dims[3], two, map, flag, name;
    stericol_cf_writer *writer = NULL;
    stericol_status status = stericol_cf_writer_new(context, path, replace, &writer);

    if (status == STERICOL_OK)
        status = stericol_cf_write_dimension(context, writer, "layer", LAYERS, &dims[0]);
    if (status == STERICOL_OK)
        status = stericol_cf_write_dimension(context, writer, "lat", ROWS, &dims[1]);
    if (status == STERICOL_OK)
        status = stericol_cf_write_dimension(context, writer, "lon", COLUMNS, &dims[2]);
    if (status == STERICOL_OK)
        status = stericol_cf_write_dimension(context, writer, "region", 2, &two);
    if (status == STERICOL_OK)
        status =
            stericol_cf_write_variable(context, writer, "map", STERICOL_CF_FLOAT, 3, dims, true, true, &map);
    if (status == STERICOL_OK)
        status = stericol_cf_write_variable(context, writer, "flag", STERICOL_CF_INT8, 2, dims + 1, true,
                                            true, &flag);
    if (status == STERICOL_OK)
        status = stericol_cf_write_variable(context, writer, "name", STERICOL_CF_STRING, 1, &two, false,
                                            false, &name);
    if (status == STERICOL_OK)
        status = stericol_cf_write_text(context, writer, map, "units", "m");
    if (status == STERICOL_OK)
        status = stericol_cf_write_text(context, writer, (size_t)STERICOL_CF_GLOBAL, "title", "first");
    if (status == STERICOL_OK)
        status =
            stericol_cf_write_text(context, writer, (size_t)STERICOL_CF_GLOBAL, "title", "the second stays");
    if (status == STERICOL_OK)
        status = stericol_cf_write_numbers(context, writer, (size_t)STERICOL_CF_GLOBAL, "number",
                                           STERICOL_CF_DOUBLE, 1, &number);
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, map, zero, first, &map_values[0][0][0]);
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, map, second, part, &map_values[1][0][0]);
    if (status == STERICOL_OK)
        status = stericol_cf_write_values(context, writer, flag, zero, first + 1, flags);
    if (status == STERICOL_OK)
        status = stericol_cf_write_strings(context, writer, name, 2, names);
    if (status == STERICOL_OK)
        status = stericol_cf_writer_commit(context, writer);
    stericol_cf_writer_free(writer);
    return status;
}

static void test_what_is_written_is_read_back(void **state)
{
    stage *on = *state;
    int file, map, flag, name, shuffle = 0, deflate = 0, level = 0, storage = 0;
    size_t length, chunk[3];
    float values[LAYERS * ROWS * COLUMNS], fill = 0;
    signed char flags[ROWS * COLUMNS], byte_fill = 0;
    char *names[2], text[32] = {0};
    double number = 0;
    nc_type type;

    assert_ok(write_sample(on->context, on->path, false), on->context);
    assert_int_equal(count_entries(on->folder, false), 1);
    assert_int_equal(nc_open(on->path, NC_NOWRITE, &file), NC_NOERR);
    assert_int_equal(nc_inq_varid(file, "map", &map), NC_NOERR);
    assert_int_equal(nc_inq_varid(file, "flag", &flag), NC_NOERR);
    assert_int_equal(nc_inq_varid(file, "name", &name), NC_NOERR);

    assert_int_equal(nc_get_var_float(file, map, values), NC_NOERR);
    for (size_t i = 0; i < LAYERS * ROWS * COLUMNS; i++) {
        const double wanted = i < (LAYERS * ROWS - 1) * COLUMNS ? (&map_values[0][0][0])[i] : (double)NAN;

        assert_same_number((double)values[i], isnan(wanted) ? (double)NC_FILL_FLOAT : (double)(float)wanted);
    }
    assert_int_equal(nc_get_att_float(file, map, "_FillValue", &fill), NC_NOERR);
    assert_same_number((double)fill, (double)NC_FILL_FLOAT);
    assert_int_equal(nc_inq_var_deflate(file, map, &shuffle, &deflate, &level), NC_NOERR);
    assert_true(shuffle == 1 && deflate == 1 && level == 1);
    assert_int_equal(nc_inq_var_chunking(file, map, &storage, chunk), NC_NOERR);
    assert_true(storage == NC_CHUNKED && chunk[0] == 1 && chunk[1] == ROWS && chunk[2] == COLUMNS);

    assert_int_equal(nc_get_var_schar(file, flag, flags), NC_NOERR);
    assert_int_equal(nc_get_att_schar(file, flag, "_FillValue", &byte_fill), NC_NOERR);
    assert_true(byte_fill == NC_FILL_BYTE && flags[4] == NC_FILL_BYTE && flags[3] == 3 && flags[11] == 127);

    assert_int_equal(nc_get_var_string(file, name, names), NC_NOERR);
    assert_string_equal(names[0], "north");
    assert_string_equal(names[1], "s\xc3\xbc\x64");
    nc_free_string(2, names);

    assert_int_equal(nc_inq_att(file, NC_GLOBAL, "title", &type, &length), NC_NOERR);
    assert_true(type == NC_CHAR && length == strlen("the second stays"));
    assert_int_equal(nc_get_att_text(file, NC_GLOBAL, "title", text), NC_NOERR);
    assert_string_equal(text, "the second stays");
    assert_int_equal(nc_get_att_double(file, NC_GLOBAL, "number", &number), NC_NOERR);
    assert_same_number(number, 42.5);
    assert_int_equal(nc_close(file), NC_NOERR);
}

static void test_the_same_calls_give_the_same_bytes(void **state)
{
    stage *on = *state;
    char other[4200];
    FILE *a, *b;
    int one, two;

    snprintf(other, sizeof other, "%s/other.nc", on->folder);
    assert_ok(write_sample(on->context, on->path, false), on->context);
    assert_ok(write_sample(on->context, other, false), on->context);
    a = fopen(on->path, "rb");
    b = fopen(other, "rb");
    assert_true(a != NULL && b != NULL);
    do {
        one = getc(a);
        two = getc(b);
        assert_int_equal(one, two);
    } while (one != EOF);
    fclose(a);
    fclose(b);
}

/* Chunks: whole last two dimensions up to 4 MiB. 2000 x 3000 floats are 24 MB: rows are cut so that 3000 k <=
 * 2^20 values. */
static void test_large_maps_are_cut_along_rows(void **state)
{
    stage *on = *state;
    stericol_cf_writer *writer = NULL;
    size_t dims[2], map, chunk[2];
    struct stat found;
    int file, storage;

    assert_ok(stericol_cf_writer_new(on->context, on->path, false, &writer), on->context);
    assert_ok(stericol_cf_write_dimension(on->context, writer, "y", 2000, &dims[0]), on->context);
    assert_ok(stericol_cf_write_dimension(on->context, writer, "x", 3000, &dims[1]), on->context);
    assert_ok(
        stericol_cf_write_variable(on->context, writer, "map", STERICOL_CF_FLOAT, 2, dims, true, true, &map),
        on->context);
    assert_ok(stericol_cf_writer_commit(on->context, writer), on->context);
    stericol_cf_writer_free(writer);
    assert_int_equal(nc_open(on->path, NC_NOWRITE, &file), NC_NOERR);
    assert_int_equal(nc_inq_var_chunking(file, 0, &storage, chunk), NC_NOERR);
    assert_int_equal(chunk[1], 3000);
    assert_int_equal(chunk[0], (4 << 20) / 4 / 3000);
    nc_close(file);
    /* What was reserved on disk and not needed is given back: megabytes, against blocks of at most some 64
     * KiB. */
    assert_int_equal(stat(on->path, &found), 0);
    assert_true((long long)found.st_blocks * 512 <= (long long)found.st_size + 65536);
}

static void test_long_texts_fit(void **state)
{
    enum { LENGTH = 300000 }; /* beyond the 64 KiB of a compact HDF5 attribute: thousands of inputs */
    stage *on = *state;
    stericol_cf_writer *writer = NULL;
    char *text = malloc(LENGTH + 1), *back = malloc(LENGTH);
    size_t length = 0;
    int file;

    memset(text, 'x', LENGTH);
    text[LENGTH] = '\0';
    assert_ok(stericol_cf_writer_new(on->context, on->path, false, &writer), on->context);
    assert_ok(stericol_cf_write_text(on->context, writer, (size_t)-1, "inputs", text), on->context);
    assert_ok(stericol_cf_write_text(on->context, writer, (size_t)-1, "empty", ""), on->context);
    assert_ok(stericol_cf_writer_commit(on->context, writer), on->context);
    stericol_cf_writer_free(writer);
    assert_int_equal(nc_open(on->path, NC_NOWRITE, &file), NC_NOERR);
    assert_int_equal(nc_inq_attlen(file, NC_GLOBAL, "inputs", &length), NC_NOERR);
    assert_int_equal(length, LENGTH);
    assert_int_equal(nc_get_att_text(file, NC_GLOBAL, "inputs", back), NC_NOERR);
    assert_memory_equal(text, back, LENGTH);
    assert_int_equal(nc_inq_attlen(file, NC_GLOBAL, "empty", &length), NC_NOERR);
    assert_int_equal(length, 0);
    nc_close(file);
    free(text);
    free(back);
}

/* ---- values that do not fit ---- */

static void test_values_that_do_not_fit_are_refused(void **state)
{
    static const struct {
        stericol_cf_type type;
        bool fill;
        double value;
        const char *words; /* NULL: it fits */
    } cases[] = {
        {STERICOL_CF_FLOAT, true, 3.5e38, "beyond the range"},
        {STERICOL_CF_FLOAT, true, -3.5e38, "beyond the range"},
        {STERICOL_CF_FLOAT, true, (double)FLT_MAX, NULL},
        {STERICOL_CF_FLOAT, true, HUGE_VAL, "infinite"},
        {STERICOL_CF_FLOAT, true, (double)NC_FILL_FLOAT, "equals the fill value"},
        {STERICOL_CF_FLOAT, false, (double)NC_FILL_FLOAT, NULL},
        {STERICOL_CF_FLOAT, false, (double)NAN, NULL},
        {STERICOL_CF_DOUBLE, true, -HUGE_VAL, "infinite"},
        {STERICOL_CF_DOUBLE, true, 1e300, NULL},
        {STERICOL_CF_INT8, true, 128.0, "beyond the range"},
        {STERICOL_CF_INT8, true, -127.0, "equals the fill value"},
        {STERICOL_CF_INT8, false, -127.0, NULL},
        {STERICOL_CF_INT8, true, 1.5, "not a whole number"},
        {STERICOL_CF_INT8, false, (double)NAN, "missing where every value is needed"},
        {STERICOL_CF_UINT8, true, -1.0, "beyond the range"},
        {STERICOL_CF_UINT8, false, 255.0, NULL},
        {STERICOL_CF_INT32, true, 2147483648.0, "beyond the range"},
        {STERICOL_CF_INT64, false, 9007199254740992.0, NULL},
        {STERICOL_CF_INT64, false, 1e16, "beyond the range"},
    };
    stage *on = *state;

    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        const size_t zero = 0, one = 1;
        stericol_cf_writer *writer = NULL;
        stericol_status status;
        size_t dimension, variable;

        stericol_context_clear(on->context);
        assert_ok(stericol_cf_writer_new(on->context, on->path, true, &writer), on->context);
        assert_ok(stericol_cf_write_dimension(on->context, writer, "x", 1, &dimension), on->context);
        assert_ok(stericol_cf_write_variable(on->context, writer, "height", cases[i].type, 1, &dimension,
                                             true, cases[i].fill, &variable),
                  on->context);
        status = stericol_cf_write_values(on->context, writer, variable, &zero, &one, &cases[i].value);
        if (cases[i].words == NULL) {
            assert_ok(status, on->context);
            assert_ok(stericol_cf_writer_commit(on->context, writer), on->context);
        } else {
            assert_int_equal(status, STERICOL_OUTPUT);
            assert_says(on->context, "out.nc: height: ");
            assert_says(on->context, cases[i].words);
        }
        stericol_cf_writer_free(writer);
    }
}

static void test_attribute_numbers_that_do_not_fit_are_refused(void **state)
{
    stage *on = *state;
    const double numbers[2] = {1.0, 300.0}, missing = (double)NAN;
    stericol_cf_writer *writer = NULL;

    assert_ok(stericol_cf_writer_new(on->context, on->path, false, &writer), on->context);
    assert_ok(
        stericol_cf_write_numbers(on->context, writer, (size_t)-1, "nan", STERICOL_CF_DOUBLE, 1, &missing),
        on->context);
    assert_int_equal(
        stericol_cf_write_numbers(on->context, writer, (size_t)-1, "flags", STERICOL_CF_INT8, 2, numbers),
        STERICOL_OUTPUT);
    assert_says(on->context, "flags: the attribute's value 300 is beyond the range");
    stericol_cf_writer_free(writer);
}

/* ---- whole or not at all ---- */

static void test_nothing_is_left_without_commit(void **state)
{
    stage *on = *state;
    stericol_cf_writer *writer = NULL;

    put_file(on->path, "old");
    assert_ok(stericol_cf_writer_new(on->context, on->path, true, &writer), on->context);
    assert_int_equal(count_entries(on->folder, false), 2);
    assert_file_is(on->path, "old");
    stericol_cf_writer_free(writer);
    assert_int_equal(count_entries(on->folder, false), 1);
    assert_file_is(on->path, "old");
    stericol_cf_writer_free(NULL);
}

static void test_a_signal_handler_can_clean_up(void **state)
{
    stage *on = *state;
    stericol_cf_writer *writer = NULL;

    assert_false(stericol_cf_writer_remove_temporary(NULL));
    assert_ok(stericol_cf_writer_new(on->context, on->path, false, &writer), on->context);
    assert_int_equal(count_entries(on->folder, false), 1);
    assert_true(stericol_cf_writer_remove_temporary(writer));
    assert_int_equal(count_entries(on->folder, false), 0);
    assert_false(stericol_cf_writer_remove_temporary(writer));
    /* Committing what is gone is a failure, not a file out of nowhere. */
    assert_int_equal(stericol_cf_writer_commit(on->context, writer), STERICOL_OUTPUT);
    assert_says(on->context, "removed or changed");
    stericol_cf_writer_free(writer);
    assert_int_equal(count_entries(on->folder, false), 0);
}

static void test_a_file_that_appears_meanwhile_is_kept(void **state)
{
    stage *on = *state;
    stericol_cf_writer *writer = NULL;

    assert_ok(stericol_cf_writer_new(on->context, on->path, false, &writer), on->context);
    put_file(on->path, "someone else's");
    assert_int_equal(stericol_cf_writer_commit(on->context, writer), STERICOL_USAGE);
    assert_says(on->context, "made by someone else meanwhile");
    stericol_cf_writer_free(writer);
    assert_file_is(on->path, "someone else's");
    assert_int_equal(count_entries(on->folder, false), 1);
}

static mode_t mode_of(const char *path)
{
    struct stat found;

    assert_int_equal(stat(path, &found), 0);
    return found.st_mode & 0777;
}

static void test_permissions(void **state)
{
    stage *on = *state;
    const mode_t before = umask(027);

    assert_ok(write_sample(on->context, on->path, false), on->context);
    assert_int_equal(mode_of(on->path), 0640);
    assert_int_equal(chmod(on->path, 0604), 0);
    assert_ok(write_sample(on->context, on->path, true), on->context);
    assert_int_equal(mode_of(on->path), 0604);
    umask(before);
}

static void test_links(void **state)
{
    stage *on = *state;
    char link_path[4200];
    struct stat found;

    snprintf(link_path, sizeof link_path, "%s/link.nc", on->folder);
    assert_int_equal(symlink("out.nc", link_path), 0);
    assert_int_equal(write_sample(on->context, link_path, true), STERICOL_OUTPUT);
    assert_says(on->context, "link that leads nowhere");
    stericol_context_clear(on->context);
    put_file(on->path, "old");
    assert_int_equal(write_sample(on->context, link_path, false), STERICOL_USAGE);
    stericol_context_clear(on->context);
    assert_true(stericol_cf_same_file(link_path, on->path));
    assert_ok(write_sample(on->context, link_path, true), on->context);
    assert_true(lstat(link_path, &found) == 0 && S_ISLNK(found.st_mode));
    assert_true(lstat(on->path, &found) == 0 && S_ISREG(found.st_mode) && found.st_size > 100);
    assert_int_equal(count_entries(on->folder, false), 2);
}

static void test_same_file(void **state)
{
    stage *on = *state;
    char other[4200];

    put_file(on->path, "a");
    snprintf(other, sizeof other, "%s/../%s/out.nc", on->folder, strrchr(on->folder, '/') + 1);
    assert_true(stericol_cf_same_file(on->path, other));
    snprintf(other, sizeof other, "%s/hard.nc", on->folder);
    assert_false(stericol_cf_same_file(on->path, other));
    assert_int_equal(link(on->path, other), 0);
    assert_true(stericol_cf_same_file(on->path, other));
    assert_int_equal(unlink(other), 0);
    put_file(other, "a");
    assert_false(stericol_cf_same_file(on->path, other));
}

/* ---- paths that cannot be written ---- */

static void refuse(stage *on, const char *path, bool replace, stericol_status wanted, const char *words)
{
    stericol_cf_writer *writer = NULL;

    stericol_context_clear(on->context);
    assert_int_equal(stericol_cf_writer_new(on->context, path, replace, &writer), wanted);
    assert_null(writer);
    assert_says(on->context, words);
}

static void test_paths_that_cannot_be_written(void **state)
{
    stage *on = *state;
    char path[8192], name[400];

    put_file(on->path, "old");
    refuse(on, on->path, false, STERICOL_USAGE, "out.nc: exists already; give another name or --replace");
    refuse(on, on->folder, true, STERICOL_OUTPUT, "is a folder");
    refuse(on, "", true, STERICOL_OUTPUT, "empty name");
    snprintf(path, sizeof path, "%s/new/", on->folder);
    refuse(on, path, true, STERICOL_OUTPUT, "is the name of a folder");
    snprintf(path, sizeof path, "%s/absent/out.nc", on->folder);
    refuse(on, path, true, STERICOL_OUTPUT, "there is no folder");
    snprintf(path, sizeof path, "%s/below.nc", on->path);
    refuse(on, path, true, STERICOL_OUTPUT, "is not a folder");
    refuse(on, "/dev/full", true, STERICOL_OUTPUT, "/dev/full: is a device");
    refuse(on, "/proc/stericol.nc", true, STERICOL_OUTPUT, "no file can be made in its folder");
    memset(name, 'n', sizeof name - 1);
    name[sizeof name - 1] = '\0';
    snprintf(path, sizeof path, "%s/%s", on->folder, name);
    refuse(on, path, true, STERICOL_OUTPUT, "File name too long");
    snprintf(path, sizeof path, "%s/a\\b", on->folder);
    assert_int_equal(mkdir(path, 0777), 0);
    snprintf(path, sizeof path, "%s/a\\b/out.nc", on->folder);
    refuse(on, path, true, STERICOL_OUTPUT, "backslash");
    assert_file_is(on->path, "old");
    assert_int_equal(count_entries(on->folder, false), 2);
}

/* Names that NetCDF-C could take for something else: a URL, a fragment, a pattern, an option, blanks. */
static void test_odd_names_are_only_names(void **state)
{
    static const char *const names[] = {"http:",    "a#mode=nczarr,file", " lead", "%41.nc",        "-o.nc",
                                        "s3:__.nc", "a b\tc.nc",          "*.nc",  "back\\slash.nc"};
    stage *on = *state;
    char path[8192];
    struct stat found;

    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
        snprintf(path, sizeof path, "%s/%s", on->folder, names[i]);
        assert_ok(write_sample(on->context, path, false), on->context);
        assert_true(stat(path, &found) == 0 && S_ISREG(found.st_mode));
    }
    assert_int_equal(count_entries(on->folder, false), sizeof names / sizeof names[0]);
}

/* ---- no room ---- */

/* Writes maps of noise, which do not shrink, until it fails. */
static stericol_status write_noise(stage *on)
{
    enum { SIDE = 600, MAPS = 6 };
    stericol_cf_writer *writer = NULL;
    double *noise = calloc((size_t)SIDE * SIDE, sizeof *noise);
    const size_t count[3] = {1, SIDE, SIDE};
    size_t dims[3], map = 0, start[3] = {0};
    unsigned long long bits = 88172645463325252ULL; /* xorshift64: Marsaglia 2003, J. Stat. Softw. 8(14) */
    stericol_status status;

    for (size_t i = 0; i < (size_t)SIDE * SIDE; i++) {
        bits ^= bits << 13;
        bits ^= bits >> 7;
        bits ^= bits << 17;
        noise[i] = (double)(bits >> 11);
    }
    status = stericol_cf_writer_new(on->context, on->path, true, &writer);
    for (int i = 0; i < 3 && status == STERICOL_OK; i++)
        status = stericol_cf_write_dimension(on->context, writer,
                                             i == 0   ? "m"
                                             : i == 1 ? "y"
                                                      : "x",
                                             i == 0 ? MAPS : SIDE, &dims[i]);
    if (status == STERICOL_OK)
        status = stericol_cf_write_variable(on->context, writer, "noise", STERICOL_CF_DOUBLE, 3, dims, true,
                                            true, &map);
    for (start[0] = 0; start[0] < MAPS && status == STERICOL_OK; start[0]++)
        status = stericol_cf_write_values(on->context, writer, map, start, count, noise);
    if (status == STERICOL_OK)
        status = stericol_cf_writer_commit(on->context, writer);
    stericol_cf_writer_free(writer);
    free(noise);
    return status;
}

/* The limit on file sizes fails in the same places as a full disk, and needs no disk to fill.  Limits from
   "not even the header" to "some of the maps" (2.4 MB of noise a map; 53 bits in 64). */
static void test_running_out_of_room_leaves_nothing(void **state)
{
    static const rlim_t limits[] = {0, 100, 5000, 1000000, 6000000, 12000000};
    stage *on = *state;
    struct rlimit before, limit;
    struct sigaction ignore = {.sa_handler = SIG_IGN}, was;

    put_file(on->path, "old");
    assert_int_equal(getrlimit(RLIMIT_FSIZE, &before), 0);
    assert_int_equal(sigaction(SIGXFSZ, &ignore, &was), 0);
    for (size_t i = 0; i < sizeof limits / sizeof limits[0]; i++) {
        stericol_status status;

        stericol_context_clear(on->context);
        limit = before;
        limit.rlim_cur = limits[i];
        assert_int_equal(setrlimit(RLIMIT_FSIZE, &limit), 0);
        status = write_noise(on);
        assert_int_equal(setrlimit(RLIMIT_FSIZE, &before), 0);
        assert_int_equal(status, STERICOL_OUTPUT);
        assert_says(on->context, "out.nc: ");
        assert_says(on->context, "the file grows beyond the largest size allowed");
        assert_file_is(on->path, "old");
        assert_int_equal(count_entries(on->folder, false), 1);
    }
    assert_int_equal(sigaction(SIGXFSZ, &was, NULL), 0);
}

static void test_reasons_are_told(void **state)
{
    stage *on = *state;
    stericol_cf_staging staging;

    assert_ok(stericol_cf_staging_begin(on->context, on->path, false, &staging), on->context);
    assert_int_equal(stericol_cf_staging_fail(on->context, &staging, ENOSPC, "height", "cannot be written"),
                     STERICOL_OUTPUT);
    assert_says(on->context,
                "out.nc: height: cannot be written: the disk is full; make room or write somewhere else");
    stericol_context_clear(on->context);
    stericol_cf_staging_fail(on->context, &staging, EDQUOT, NULL, "cannot be written");
    assert_says(on->context, "out.nc: cannot be written: the quota is used up; ");
    stericol_context_clear(on->context);
    stericol_cf_staging_fail(on->context, &staging, EFBIG, NULL, "cannot be written");
    assert_says(on->context, "beyond the largest size allowed; ");
    stericol_context_clear(on->context);
    stericol_cf_staging_fail(on->context, &staging, EIO, NULL, "cannot be written");
    assert_says(on->context, "cannot be written: Input/output error; ");
    stericol_cf_staging_clear(&staging);
    assert_int_equal(count_entries(on->folder, false), 0);
}

#define ON_STAGE(test) cmocka_unit_test_setup_teardown(test, set_up, tear_down)

int main(void)
{
    const struct CMUnitTest tests[] = {
        ON_STAGE(test_what_is_written_is_read_back),
        ON_STAGE(test_the_same_calls_give_the_same_bytes),
        ON_STAGE(test_large_maps_are_cut_along_rows),
        ON_STAGE(test_long_texts_fit),
        ON_STAGE(test_values_that_do_not_fit_are_refused),
        ON_STAGE(test_attribute_numbers_that_do_not_fit_are_refused),
        ON_STAGE(test_nothing_is_left_without_commit),
        ON_STAGE(test_a_signal_handler_can_clean_up),
        ON_STAGE(test_a_file_that_appears_meanwhile_is_kept),
        ON_STAGE(test_permissions),
        ON_STAGE(test_links),
        ON_STAGE(test_same_file),
        ON_STAGE(test_paths_that_cannot_be_written),
        ON_STAGE(test_odd_names_are_only_names),
        ON_STAGE(test_running_out_of_room_leaves_nothing),
        ON_STAGE(test_reasons_are_told),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
