/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Files that are cut, damaged, or lie about themselves: refused with a reason or read, never a crash, a hang
 * or a memory that swells.
 */
#include "made_files.h"

#include "cf/room.h"

#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

enum { STEPS = 20, SIDE = 30 };

/*
 * Two record variables (or one of shorts, which then is not padded) and a fixed one.  The fixed one, 3
 * shorts, comes first; ncsize, if given, receives the size of the file.
 */
static void make_sized(const made_format *format, const char *name, bool one_record_variable, bool compressed)
{
    int file = made_create(format, name), dimension[3], fixed, packed, plain = -1;
    const short three[3] = {1, 2, 3};
    size_t start[3] = {0, 0, 0}, count[3] = {STEPS, SIDE, SIDE + 1};
    short *shorts = calloc(STEPS * SIDE * (SIDE + 1), sizeof *shorts);
    size_t i;

    assert_non_null(shorts);
    for (i = 0; i < STEPS * SIDE * (SIDE + 1); i++)
        shorts[i] = (short)(i % 997);
    must(nc_def_dim(file, "time", format->zarr ? STEPS : NC_UNLIMITED, &dimension[0]));
    must(nc_def_dim(file, "y", SIDE, &dimension[1]));
    must(nc_def_dim(file, "x", SIDE + 1, &dimension[2]));
    must(nc_def_dim(file, "three", 3, &fixed));
    must(nc_def_var(file, "fixed", NC_SHORT, 1, &fixed, &fixed));
    must(nc_def_var(file, "packed", NC_SHORT, 3, dimension, &packed));
    if (compressed)
        must(nc_def_var_deflate(file, packed, 1, 1, 2));
    if (!one_record_variable)
        must(nc_def_var(file, "plain", NC_FLOAT, 1, dimension, &plain));
    must(nc_put_att_text(file, packed, "units", 9, "degrees C"));
    must(nc_enddef(file));
    must(nc_put_var_short(file, fixed, three));
    must(nc_put_vara_short(file, packed, start, count, shorts));
    if (plain >= 0)
        must(nc_put_vara_short(file, plain, start, count, shorts));
    must(nc_close(file));
    free(shorts);
}

/* Writes the first `length` bytes of a file over it. */
static void cut(const char *name, size_t length)
{
    size_t whole;
    unsigned char *bytes = made_read(made_path(name), &whole);

    assert_true(length <= whole);
    made_bytes(name, bytes, length);
    free(bytes);
}

static size_t size_of(const char *name)
{
    size_t whole;

    free(made_read(made_path(name), &whole));
    return whole;
}

static void cut_classic_files_are_measured(void **state)
{
    size_t f, one;

    (void)state;
    for (f = 0; f < 3; f++) {
        for (one = 0; one < 2; one++) {
            size_t whole, i, bare;
            watched seen;

            make_sized(&made_formats[f], "cut.nc", one == 1, false);
            whole = size_of("cut.nc");
            watch(&seen);
            stericol_cf_close(open_well(&seen, made_path("cut.nc")));
            unwatch(&seen);
            /* The very last value counts; what only pads does not (20 records of 930 shorts end on a multiple
             * of 4). */
            bare = whole;
            for (i = 0; i < 4; i++) {
                const size_t lengths[4] = {whole - 1, whole * 95 / 100, whole * 75 / 100, whole * 5 / 100};
                char message[200];

                make_sized(&made_formats[f], "cut.nc", one == 1, false);
                cut("cut.nc", lengths[i]);
                (void)snprintf(message, sizeof message,
                               "is cut short: it holds %zu bytes where its header needs %zu; copy it again",
                               lengths[i], bare);
                assert_refused(made_path("cut.nc"), message);
            }
            make_sized(&made_formats[f], "cut.nc", one == 1, false);
            cut("cut.nc", 50);
            assert_refused(made_path("cut.nc"), "is damaged: it ends within its header; copy it again");
        }
    }
}

/* NetCDF User's Guide, appendix B: one record variable of 3 bytes a record is not padded; with a second one
 * it is. */
static void records_of_odd_size_are_measured(void **state)
{
    size_t variables;

    (void)state;
    for (variables = 1; variables <= 2; variables++) {
        const size_t start[2] = {0, 0}, count[2] = {5, 3};
        const signed char bytes[15] = {1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14, 15};
        int file = made_create(&made_formats[0], "odd.nc"), dimension[2], variable, i;
        size_t whole, needed;
        char message[200];
        watched seen;
        double values[15];
        stericol_cf_file *opened;

        must(nc_def_dim(file, "time", NC_UNLIMITED, &dimension[0]));
        must(nc_def_dim(file, "x", 3, &dimension[1]));
        for (i = 0; i < (int)variables; i++)
            must(nc_def_var(file, i == 0 ? "a" : "b", NC_BYTE, 2, dimension, &variable));
        must(nc_enddef(file));
        for (i = 0; i < (int)variables; i++)
            must(nc_put_vara_schar(file, i, start, count, bytes));
        must(nc_close(file));
        whole = size_of("odd.nc");
        /* 5 records of 3 bytes; or of 2 x 4 bytes, of which the last is padding. */
        needed = variables == 1 ? whole - (whole % 4 == 0 ? 1 : 0) : whole - 1;
        cut("odd.nc", needed);
        watch(&seen);
        opened = open_well(&seen, made_path("odd.nc"));
        assert_int_equal(stericol_cf_read(seen.context, opened,
                                          stericol_cf_variable_at(opened, variables - 1), NULL, NULL, values),
                         STERICOL_OK);
        assert_same_number(values[14], 15.0);
        stericol_cf_close(opened);
        unwatch(&seen);
        cut("odd.nc", needed - 1);
        (void)snprintf(message, sizeof message,
                       "is cut short: it holds %zu bytes where its header needs %zu; copy it again",
                       needed - 1, needed);
        assert_refused(made_path("odd.nc"), message);
    }
}

static void cut_netcdf4_files_are_measured(void **state)
{
    size_t i;

    (void)state;
    for (i = 0; i < 4; i++) {
        size_t whole, length;
        char message[200];

        make_sized(&made_formats[3], "cut4.nc", false, true);
        whole = size_of("cut4.nc");
        length = i == 0 ? whole - 1 : i == 1 ? whole * 95 / 100 : i == 2 ? whole * 75 / 100 : whole * 5 / 100;
        cut("cut4.nc", length);
        (void)snprintf(message, sizeof message,
                       "is cut short: it holds %zu bytes where its header needs %zu; copy it again", length,
                       whole);
        assert_refused(made_path("cut4.nc"), message);
    }
}

/* A CDF-1 header by hand, and the lies that can stand in it.  Layout: NetCDF User's Guide, appendix B. */
typedef struct lie {
    const char *what;
    size_t place; /* of a four-byte number */
    unsigned value;
    const char *message;
} lie;

static const unsigned char small_header[] = {
    'C', 'D', 'F', 1,  0,   0, 0, 0,                                         /*  0 magic, records */
    0,   0,   0,   10, 0,   0, 0, 1,                                         /*  8 dimensions: 1 */
    0,   0,   0,   1,  'x', 0, 0, 0, 0, 0, 0, 2,                             /* 16 "x", 2 */
    0,   0,   0,   0,  0,   0, 0, 0,                                         /* 28 no global attributes */
    0,   0,   0,   11, 0,   0, 0, 1,                                         /* 36 variables: 1 */
    0,   0,   0,   1,  'v', 0, 0, 0, 0, 0, 0, 1,   0, 0, 0, 0,               /* 44 "v", rank 1, dimension 0 */
    0,   0,   0,   12, 0,   0, 0, 1,                                         /* 60 attributes: 1 */
    0,   0,   0,   1,  'a', 0, 0, 0, 0, 0, 0, 2,   0, 0, 0, 1, 'z', 0, 0, 0, /* 68 "a", text, 1 */
    0,   0,   0,   4,  0,   0, 0, 8, 0, 0, 0, 100,                           /* 88 int, 8 bytes, at 100 */
    0,   0,   0,   7,  0,   0, 0, 9,                                         /* 100 the values */
};

static void lies_of_a_header_are_found(void **state)
{
    static const lie lies[] = {
        {"dimensions", 12, 0x7fffffff,
         "is damaged: its header announces more items than a file can hold; copy it again"},
        {"a negative count", 12, 0xffffffff, "is damaged: its header holds a negative length; copy it again"},
        {"the tag of the dimensions", 8, 77, "is damaged: its header is not in order; copy it again"},
        {"the length of a name", 16, 0x7ffffff0,
         "is damaged: its header holds a name of impossible length; copy it again"},
        {"no name", 16, 0, "is damaged: its header holds a name of impossible length; copy it again"},
        {"the length of a dimension", 24, 0x7fffffff,
         "is cut short: it holds 108 bytes where its header needs 8589934688; copy it again"},
        {"variables", 40, 0x10000000,
         "is damaged: its header announces more items than a file can hold; copy it again"},
        {"the rank", 52, 2000,
         "is damaged: its header holds a variable with too many dimensions; copy it again"},
        {"the dimension", 56, 1, "is damaged: its header names a dimension that is not there; copy it again"},
        {"attributes", 64, 0x00ffffff,
         "is damaged: its header announces more items than a file can hold; copy it again"},
        {"the length of an attribute", 80, 0x7fffffff,
         "is damaged: its header holds an attribute of impossible length; copy it again"},
        {"the attribute longer than the file", 80, 5000,
         "is damaged: it ends within its header; copy it again"},
        {"the type", 88, 99, "is damaged: its header holds an unknown type; copy it again"},
        {"where the values are", 96, 50, "is damaged: its data begin within its header; copy it again"},
        {"where the values are, too far", 96, 104,
         "is cut short: it holds 108 bytes where its header needs 112; copy it again"},
    };
    unsigned char bytes[sizeof small_header];
    double values[2];
    stericol_cf_file *file;
    watched seen;
    size_t i;

    (void)state;
    made_bytes("small.nc", small_header, sizeof small_header);
    watch(&seen);
    file = open_well(&seen, made_path("small.nc"));
    assert_string_equal(stericol_cf_text_of(stericol_cf_variable_at(file, 0), "a"), "z");
    assert_int_equal(
        stericol_cf_read(seen.context, file, stericol_cf_variable_at(file, 0), NULL, NULL, values),
        STERICOL_OK);
    assert_same_number(values[0], 7.0);
    assert_same_number(values[1], 9.0);
    stericol_cf_close(file);
    unwatch(&seen);
    for (i = 0; i < sizeof lies / sizeof lies[0]; i++) {
        memcpy(bytes, small_header, sizeof bytes);
        bytes[lies[i].place] = (unsigned char)(lies[i].value >> 24);
        bytes[lies[i].place + 1] = (unsigned char)(lies[i].value >> 16);
        bytes[lies[i].place + 2] = (unsigned char)(lies[i].value >> 8);
        bytes[lies[i].place + 3] = (unsigned char)lies[i].value;
        made_bytes("small.nc", bytes, sizeof bytes);
        assert_refused(made_path("small.nc"), lies[i].message);
    }
    /* A header that ends anywhere is found to end. */
    for (i = 4; i < 100; i++) {
        made_bytes("small.nc", small_header, i);
        assert_refused(made_path("small.nc"), "is damaged: it ends within its header; copy it again");
    }
}

/* CDF-5 with four dimensions of 2^62: the product does not fit any number. */
static void sizes_that_overflow_are_found(void **state)
{
    static const unsigned char start[] = {'C', 'D', 'F', 5,  0, 0, 0,    0, 0,   0, 0, 0, 0, 0, 0,
                                          10,  0,   0,   0,  0, 0, 0,    0, 1,   0, 0, 0, 0, 0, 0,
                                          0,   1,   'x', 0,  0, 0, 0x40, 0, 0,   0, 0, 0, 0, 0, 0,
                                          0,   0,   0,   0,  0, 0, 0,    0, 0,   0, 0,    /* no attributes */
                                          0,   0,   0,   11, 0, 0, 0,    0, 0,   0, 0, 1, /* one variable */
                                          0,   0,   0,   0,  0, 0, 0,    1, 'v', 0, 0, 0, /* its name */
                                          0,   0,   0,   0,  0, 0, 0,    4}; /* rank 4, all the same */
    unsigned char bytes[sizeof start + 100] = {0};

    (void)state;
    memcpy(bytes, start, sizeof start);
    made_bytes("overflow.nc", bytes, sizeof bytes);
    assert_refused(made_path("overflow.nc"),
                   "is damaged: its header declares more values than can exist; copy it again");
}

static int crash(const char *target)
{
    (void)target;
    (void)raise(SIGSEGV);
    return 0;
}

static int abort_loudly(const char *target)
{
    fprintf(stderr, "this must not be seen: %s\n", target);
    abort();
}

static int loop(const char *target)
{
    volatile unsigned turns = 0;

    (void)target;
    for (;;)
        turns++;
    return 0;
}

static int wait_for_ever(const char *target)
{
    (void)target;
    for (;;)
        (void)pause();
    return 0;
}

static int swell(const char *target)
{
    size_t taken;

    (void)target;
    for (taken = 0; taken < (size_t)4 << 30; taken += (size_t)16 << 20) {
        char *more = malloc((size_t)16 << 20);

        if (more == NULL)
            return NC_ENOMEM;
        more[taken % 4096] = 1;
        ((volatile char *)more)[0] = 1;
    }
    return 0;
}

static int end_early(const char *target)
{
    (void)target;
    _exit(0);
}

static int well(const char *target)
{
    return strcmp(target, "target") == 0 ? NC_NOERR : NC_EINVAL;
}

static int not_netcdf(const char *target)
{
    (void)target;
    return NC_ENOTNC;
}

static int beyond(const char *target)
{
    (void)target;
    return STERICOL_CF_BEYOND;
}

static void the_guard_outlives_every_end_of_the_child(void **state)
{
    static const struct {
        const char *what;
        stericol_cf_guarded *look;
        stericol_status status;
        const char *message;
    } cases[] = {
        {"well", well, STERICOL_OK, ""},
        {"crash", crash, STERICOL_INPUT, "the NetCDF library fails on its header"},
        {"abort", abort_loudly, STERICOL_INPUT, "the NetCDF library fails on its header"},
        {"silent end", end_early, STERICOL_INPUT, "the NetCDF library fails on its header"},
        {"loop", loop, STERICOL_INPUT, "reading its header does not come to an end"},
        {"wait", wait_for_ever, STERICOL_INPUT, "reading its header does not come to an end"},
        {"swell", swell, STERICOL_INPUT, "its header asks for more memory than any header needs"},
        {"error", not_netcdf, STERICOL_INPUT, "its header cannot be read (NetCDF: Unknown file format)"},
        {"beyond", beyond, STERICOL_INPUT, "its header holds more than any header needs"},
    };
    const stericol_cf_guard_limits limits = {
        .seconds = 3, .processor_seconds = 1, .memory = (size_t)300 << 20};
    size_t i;

    (void)state;
    for (i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        char message[300] = "";
        const time_t before = time(NULL);
        watched seen;

        watch(&seen);
        if (cases[i].status != STERICOL_OK)
            (void)snprintf(
                message, sizeof message,
                "f.nc: is damaged or not NetCDF: %s; copy it again, or see what `ncdump -h` says of it",
                cases[i].message);
        print_message("guard: %s\n", cases[i].what);
        assert_int_equal(stericol_cf_guard(seen.context, "f.nc", "target", cases[i].look, &limits),
                         cases[i].status);
        assert_string_equal(stericol_context_message(seen.context), message);
        assert_true(time(NULL) - before < 30);
        assert_int_equal(waitpid(-1, NULL, WNOHANG), -1); /* no child is left */
        unwatch(&seen);
    }
}

/* Everything that can be asked of a file that was opened in spite of its damage. */
static void use_whole(stericol_cf_file *file)
{
    size_t i, count;
    double *values;
    char **texts;

    for (i = 0; i < stericol_cf_variable_count(file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(file, i);
        watched seen;

        watch(&seen);
        if (stericol_cf_read_all(seen.context, file, variable, 100000, &values, &count) == STERICOL_OK)
            free(values);
        if (stericol_cf_value_count(file, variable, &count) && count < 100000 &&
            stericol_cf_read_texts(seen.context, file, variable, &texts, &count) == STERICOL_OK)
            stericol_cf_free_texts(texts, count);
        unwatch(&seen);
    }
}

/* One damaged file: refused with a reason, or opened and read.  The path is left in place when something goes
 * wrong. */
static bool try_file(const char *path)
{
    stericol_cf_file *file = NULL;
    watched seen;
    stericol_status status;

    watch(&seen);
    status = stericol_cf_open(seen.context, path, &file);
    if (status == STERICOL_OK) {
        use_whole(file);
        stericol_cf_close(file);
    } else {
        assert_int_equal(status, STERICOL_INPUT);
        assert_null(file);
        assert_true(strlen(stericol_context_message(seen.context)) > strlen(path) + 10);
        assert_null(strchr(stericol_context_message(seen.context), '\n'));
    }
    unwatch(&seen);
    return status == STERICOL_OK;
}

enum { DAMAGED = 200 };

static void damage(draws *from, unsigned char *bytes, size_t header)
{
    static const unsigned char nasty[] = {0, 1, 0x7f, 0x80, 0xff, 0xfe};
    unsigned turns = 1 + draw(from, 6), i;

    for (i = 0; i < turns; i++) {
        const size_t place = draw(from, (unsigned)header);

        if (draw(from, 2) == 0)
            bytes[place] = nasty[draw(from, sizeof nasty)];
        else
            bytes[place] ^= (unsigned char)(1U << draw(from, 8));
    }
}

static void check_memory(void)
{
    struct rusage used;

    assert_int_equal(getrusage(RUSAGE_SELF, &used), 0);
    assert_true(used.ru_maxrss < 1500L * 1024); /* KiB; a sanitizer's own share is most of it */
}

static void damaged_headers_are_survived(void **state)
{
    size_t f, n, whole, header, opened, step;

    (void)state;
    for (f = 0; f < 4; f++) {
        draws from = {.state = 1000 + f};
        unsigned char *bytes, *spoilt;

        make_sized(&made_formats[f], "whole.nc", false, f == 3);
        bytes = made_read(made_path("whole.nc"), &whole);
        spoilt = malloc(whole);
        assert_non_null(spoilt);
        header = f == 3 ? whole : 400;
        for (n = 0, opened = 0; n < DAMAGED; n++) {
            memcpy(spoilt, bytes, whole);
            damage(&from, spoilt, f == 3 && n % 2 == 0 ? 8192 : header);
            if (n % 10 == 0)
                for (step = 0; step < 16; step++)
                    spoilt[4 + draw(&from, 300)] = (unsigned char)draw(&from, 256);
            made_bytes("spoilt.nc", spoilt, whole);
            opened += try_file(made_path("spoilt.nc"));
        }
        print_message("%s: %zu of %d damaged files opened (seed %zu)\n", made_formats[f].name, opened,
                      (int)DAMAGED, 1000 + f);
        assert_true(opened < DAMAGED);
        free(bytes);
        free(spoilt);
    }
    check_memory();
}

static void damaged_stores_are_survived(void **state)
{
    static const char *const parts[] = {".zgroup", ".zattrs", "packed/.zarray", "packed/.zattrs",
                                        "plain/.zarray"};
    draws from = {.state = 2000};
    size_t n, opened = 0, length;
    char name[64];

    (void)state;
    made_remove_folder(made_path("store"));
    make_sized(&made_formats[4], "store", false, false);
    for (n = 0; n < DAMAGED; n++) {
        unsigned char *bytes, *spoilt;

        (void)snprintf(name, sizeof name, "store/%s", parts[n % (sizeof parts / sizeof parts[0])]);
        bytes = made_read(made_path(name), &length);
        spoilt = malloc(length + 1);
        assert_non_null(spoilt);
        memcpy(spoilt, bytes, length);
        if (length > 0)
            damage(&from, spoilt, length);
        made_bytes(name, spoilt, n % 7 == 0 ? length / 2 : length);
        opened += try_file(made_path("store"));
        made_bytes(name, bytes, length);
        free(bytes);
        free(spoilt);
    }
    print_message("Zarr: %zu of %d damaged stores opened (seed 2000)\n", opened, (int)DAMAGED);
    assert_true(try_file(made_path("store")));
    check_memory();
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(cut_classic_files_are_measured),
        cmocka_unit_test(records_of_odd_size_are_measured),
        cmocka_unit_test(cut_netcdf4_files_are_measured),
        cmocka_unit_test(lies_of_a_header_are_found),
        cmocka_unit_test(sizes_that_overflow_are_found),
        cmocka_unit_test(the_guard_outlives_every_end_of_the_child),
        cmocka_unit_test(damaged_headers_are_survived),
        cmocka_unit_test(damaged_stores_are_survived),
    };

    return cmocka_run_group_tests_name("damaged files", tests, NULL, NULL);
}
