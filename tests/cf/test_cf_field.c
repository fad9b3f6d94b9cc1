/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Fields in every format, type, packing, order of dimensions and chunk shape: the same numbers come out.  The
 * values are quarters of small whole numbers, which every type here holds exactly, so that "the same" means
 * the same bits.
 */
#include "made_files.h"

#include "cf/field.h"

#ifdef __GLIBC__
#include <malloc.h>
#endif
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { MEMBERS = 2, TIMES = 3, LEVELS = 5, ROWS = 7, COLUMNS = 6, AXES = 5, ORDERS = 24 };
enum { MEMBER, TIME, LEVEL, ROW, COLUMN };
static const size_t lengths[AXES] = {MEMBERS, TIMES, LEVELS, ROWS, COLUMNS};
static const char *const axis_names[AXES] = {"member", "time", "level", "row", "column"};

/* How values are stored: stored = (value - offset) / scale, whole numbers -100..100 above `base`. */
typedef struct encoding {
    const char *name;
    nc_type type;
    double base; /* of the stored numbers: 0 for signed types */
    double scale, offset;
    double fill;   /* stored */
    bool is_small; /* CDF-1 and CDF-2 have it */
} encoding;

static const encoding encodings[] = {
    {"int8", NC_BYTE, 0.0, 0.25, 5.0, -128.0, true},
    {"uint8", NC_UBYTE, 100.0, 0.25, -20.0, 255.0, false},
    {"int16", NC_SHORT, 0.0, 0.25, 5.0, -32768.0, true},
    {"uint16", NC_USHORT, 100.0, 0.25, -20.0, 65535.0, false},
    {"int32", NC_INT, 0.0, 0.25, 5.0, -99999.0, true},
    {"uint32", NC_UINT, 100.0, 0.25, -20.0, 4294967295.0, false},
    {"int64", NC_INT64, 0.0, 0.25, 5.0, -1e15, false},
    {"uint64", NC_UINT64, 100.0, 0.25, -20.0, 1e15, false},
    {"float", NC_FLOAT, 0.0, 1.0, 0.0, (double)1e20F, true},
    {"packed float", NC_FLOAT, 0.0, 0.25, 5.0, -1e9, true},
    {"double", NC_DOUBLE, 0.0, 1.0, 0.0, 1e20, true},
    {"undeclared", NC_FLOAT, 0.0, 1.0, 0.0, 1e15, true}, /* no _FillValue */
};
enum { ENCODINGS = sizeof encodings / sizeof encodings[0], UNDECLARED = ENCODINGS - 1 };

/* A whole number -100..100 for each cell, NaN for about a seventh: a fixed mixture of the indices. */
static double quarter_of(const size_t *index)
{
    size_t mixed =
        ((((index[MEMBER] * 3 + index[TIME]) * 5 + index[LEVEL]) * 7 + index[ROW]) * 6 + index[COLUMN]) * 97 +
        31;

    return mixed % 7 == 3 ? (double)NAN : (double)(mixed % 201) - 100.0;
}

static double value_of(const size_t *index)
{
    return quarter_of(index) * 0.25 + 5.0;
}

static void set_quarters(const encoding *how, const int *order, double *stored)
{
    size_t index[AXES], cell, left;
    const size_t cells = (size_t)MEMBERS * TIMES * LEVELS * ROWS * COLUMNS;
    int i;

    for (cell = 0; cell < cells; cell++) {
        double quarter;

        for (left = cell, i = AXES - 1; i >= 0; left /= lengths[order[i]], i--)
            index[order[i]] = left % lengths[order[i]];
        quarter = quarter_of(index);
        if (isnan(quarter))
            stored[cell] = how->fill;
        else
            stored[cell] = how->scale < 1.0 ? quarter + how->base : quarter * 0.25 + 5.0;
    }
}

/* The n-th order of four axes (level, row, column, time), the member axis put in at place n % 5. */
static void nth_order(unsigned n, int *order)
{
    int rest[4] = {LEVEL, ROW, COLUMN, TIME}, i, j;
    unsigned divisor = 6, left = n % ORDERS;

    for (i = 0; i < 4; i++) {
        const int pick = (int)(left / divisor);

        order[i] = rest[pick];
        for (j = pick; j < 3; j++)
            rest[j] = rest[j + 1];
        left %= divisor;
        divisor = divisor / (unsigned)(3 - i > 0 ? 3 - i : 1);
    }
    for (i = 4; i > (int)(n % AXES); i--)
        order[i] = order[i - 1];
    order[n % AXES] = MEMBER;
}

/* Chunk shapes by axis (member, time, level, row, column); 0: contiguous. */
static const size_t shapes[][AXES] = {
    {0, 0, 0, 0, 0}, {1, 1, 1, 7, 6}, {1, 1, 5, 2, 2}, {2, 2, 3, 4, 5}, {1, 1, 1, 1, 1}, {2, 3, 5, 7, 6},
};
enum { SHAPES = sizeof shapes / sizeof shapes[0], ONE_BY_ONE = 4 };

static void make_fields(const made_format *format, const encoding *how, const size_t *shape)
{
    const size_t cells = (size_t)MEMBERS * TIMES * LEVELS * ROWS * COLUMNS;
    double *stored = malloc(cells * sizeof *stored);
    int file = made_create(format, "fields.nc"), dimension[AXES], variable[ORDERS], order[AXES], place[AXES],
        i;
    unsigned n;

    assert_non_null(stored);
    for (i = 0; i < AXES; i++)
        must(nc_def_dim(file, axis_names[i], lengths[i], &dimension[i]));
    for (n = 0; n < ORDERS; n++) {
        char name[16];
        size_t chunk[AXES];

        (void)snprintf(name, sizeof name, "v%u", n);
        nth_order(n, order);
        for (i = 0; i < AXES; i++) {
            place[i] = dimension[order[i]];
            chunk[i] = shape[order[i]];
        }
        must(nc_def_var(file, name, how->type, AXES, place, &variable[n]));
        if (format->chunks && shape[0] > 0)
            must(nc_def_var_chunking(file, variable[n], NC_CHUNKED, chunk));
        if (format->chunks && !format->zarr && shape[0] > 0 && n % 2 == 0)
            must(nc_def_var_deflate(file, variable[n], 1, 1, 1));
        if (format->chunks && !format->zarr && shape[0] > 0 && n % 4 == 1)
            must(nc_def_var_fletcher32(file, variable[n], NC_FLETCHER32));
        if (how - encodings != UNDECLARED)
            must(nc_put_att_double(file, variable[n], "_FillValue", how->type, 1, &how->fill));
        if (how->scale < 1.0)
            must(nc_put_att_double(file, variable[n], "scale_factor", NC_DOUBLE, 1, &how->scale));
        if (how->scale < 1.0)
            must(nc_put_att_double(file, variable[n], "add_offset", NC_DOUBLE, 1, &how->offset));
    }
    must(nc_enddef(file));
    for (n = 0; n < ORDERS; n++) {
        nth_order(n, order);
        set_quarters(how, order, stored);
        must(nc_put_var_double(file, variable[n], stored));
    }
    must(nc_close(file));
    free(stored);
}

static stericol_cf_field_axes axes_of(const int *order, size_t member)
{
    stericol_cf_field_axes axes = {0};
    int i;

    for (i = 0; i < AXES; i++) {
        if (order[i] == MEMBER)
            axes.fixed[i] = member;
        else
            *(order[i] == TIME    ? &axes.time
              : order[i] == LEVEL ? &axes.level
              : order[i] == ROW   ? &axes.row
                                  : &axes.column) = i;
    }
    return axes;
}

/* Reads one slab and compares every value; the tally must agree. */
static void check_slab(watched *seen, stericol_cf_field *field, size_t member, size_t time, size_t level0,
                       size_t levels, size_t row0, size_t rows)
{
    static const double before = -12345.0;
    double values[LEVELS * ROWS * COLUMNS + 1];
    size_t index[AXES] = {member, time, 0, 0, 0}, l, r, c, missing = 0;
    const size_t cells = levels * rows * COLUMNS;
    stericol_cf_tally tally = {.values = 1, .missing = 2, .below = 3, .above = 4};

    values[cells] = before;
    assert_int_equal(
        stericol_cf_field_read(seen->context, field, time, level0, levels, row0, rows, values, &tally),
        STERICOL_OK);
    for (l = 0; l < levels; l++) {
        for (r = 0; r < rows; r++) {
            for (c = 0; c < COLUMNS; c++) {
                index[LEVEL] = level0 + l;
                index[ROW] = row0 + r;
                index[COLUMN] = c;
                assert_same_number(values[(l * rows + r) * COLUMNS + c], value_of(index));
                missing += isnan(value_of(index)) ? 1 : 0;
            }
        }
    }
    assert_same_number(values[cells], before);
    assert_int_equal(tally.values, 1 + cells);
    assert_int_equal(tally.missing, 2 + missing);
    assert_int_equal(tally.below, 3);
    assert_int_equal(tally.above, 4);
}

static void check_fields(const made_format *format, const encoding *how, const size_t *shape, draws *from)
{
    const stericol_cf_conversion same = {1.0, 0.0, -1000.0, 1000.0};
    watched seen;
    stericol_cf_file *file;
    unsigned n;

    watch(&seen);
    file = open_well(&seen, made_path("fields.nc"));
    assert_string_equal(stericol_cf_format(file), format->name);
    for (n = 0; n < ORDERS; n++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(file, n);
        const size_t member = n % MEMBERS, cache = n % 3 == 0 ? 0 : 1000;
        stericol_cf_field *field;
        stericol_cf_field_axes axes;
        int order[AXES];
        size_t level, levels, rows, turn;

        nth_order(n, order);
        axes = axes_of(order, member);
        assert_int_equal(stericol_cf_field_open(seen.context, file, variable, &axes, &same, cache, &field),
                         STERICOL_OK);
        stericol_cf_field_stride(field, &levels, &rows);
        assert_true(levels >= 1 && levels <= LEVELS && rows >= 1 && rows <= ROWS);
        if (format->chunks && shape[0] > 0) {
            assert_true(variable->chunked);
            assert_int_equal(levels, shape[LEVEL]);
            assert_int_equal(rows, shape[ROW]);
            assert_int_equal(variable->compressed, !format->zarr && (n % 2 == 0 || n % 4 == 1));
        }
        check_slab(&seen, field, member, 0, 0, LEVELS, 0, ROWS);
        for (level = n % 2; level < LEVELS; level += 2)
            check_slab(&seen, field, member, 1, level, 1, 0, ROWS);
        for (turn = 0; turn < 3; turn++) {
            const unsigned level0 = draw(from, LEVELS), row0 = draw(from, ROWS);

            check_slab(&seen, field, member, draw(from, TIMES), level0, draw(from, LEVELS - level0 + 1), row0,
                       draw(from, ROWS - row0 + 1));
        }
        stericol_cf_field_close(field);
    }
    if (how - encodings != UNDECLARED)
        assert_string_equal(stericol_text_string(&seen.notices), "");
    else
        assert_non_null(strstr(stericol_text_string(&seen.notices),
                               "fields.nc: v0: values beyond 1e+10, which no attribute declares as missing, "
                               "are taken as missing\n"));
    stericol_cf_close(file);
    unwatch(&seen);
}

static void every_storage_gives_the_same_values(void **state)
{
    draws from = {.state = 20260301};
    size_t f, e, s;

    (void)state;
    for (f = 0; f < MADE_FORMATS; f++) {
        for (e = 0; e < ENCODINGS; e++) {
            if (!made_formats[f].all_types && !encodings[e].is_small)
                continue;
            for (s = 0; s < (made_formats[f].chunks ? (size_t)SHAPES : 1); s++) {
                /* Every type meets a chunk shape, every shape meets a packed and a plain type. */
                const bool thorough = encodings[e].type == NC_SHORT || encodings[e].type == NC_FLOAT;

                if (made_formats[f].zarr &&
                    (e % 2 == 1 || s == 0 || s == ONE_BY_ONE || s != 1 + e % (SHAPES - 1)))
                    continue; /* a file a chunk: some types in a few shapes do */
                if (s == ONE_BY_ONE && encodings[e].type != NC_SHORT)
                    continue;
                if (s > 1 && !thorough && s != 1 + e % (SHAPES - 1))
                    continue;
                make_fields(&made_formats[f], &encodings[e], shapes[s]);
                check_fields(&made_formats[f], &encodings[e], shapes[s], &from);
            }
        }
    }
    made_remove_folder(made_path("fields.nc"));
}

/* The kinds of layout without chunks, and what they want to be read in. */
static void contiguous_files_tell_their_stride(void **state)
{
    static const struct {
        int order[3];
        size_t levels, rows;
    } cases[] = {
        {{LEVEL, ROW, COLUMN}, 1, 1}, {{ROW, COLUMN, LEVEL}, LEVELS, 1}, {{COLUMN, ROW, LEVEL}, LEVELS, 1},
        {{LEVEL, COLUMN, ROW}, 1, 1}, {{ROW, LEVEL, COLUMN}, LEVELS, 1}, {{COLUMN, LEVEL, ROW}, LEVELS, 1},
    };
    const stericol_cf_conversion same = {1.0, 0.0, (double)-INFINITY, (double)INFINITY};
    size_t n, levels, rows;
    int i;

    (void)state;
    for (n = 0; n < sizeof cases / sizeof cases[0]; n++) {
        int file = made_create(&made_formats[0], "stride.nc"), dimension[3], variable;
        stericol_cf_field_axes axes = {.time = STERICOL_CF_NO_AXIS};
        stericol_cf_field *field;
        stericol_cf_file *opened;
        watched seen;

        for (i = 0; i < 3; i++)
            must(nc_def_dim(file, axis_names[cases[n].order[i]], lengths[cases[n].order[i]], &dimension[i]));
        must(nc_def_var(file, "v", NC_FLOAT, 3, dimension, &variable));
        must(nc_close(file));
        for (i = 0; i < 3; i++)
            *(cases[n].order[i] == LEVEL ? &axes.level
              : cases[n].order[i] == ROW ? &axes.row
                                         : &axes.column) = i;
        watch(&seen);
        opened = open_well(&seen, made_path("stride.nc"));
        assert_int_equal(stericol_cf_field_open(seen.context, opened, stericol_cf_variable_at(opened, 0),
                                                &axes, &same, 0, &field),
                         STERICOL_OK);
        stericol_cf_field_stride(field, &levels, &rows);
        assert_int_equal(levels, cases[n].levels);
        assert_int_equal(rows, cases[n].rows);
        stericol_cf_field_close(field);
        stericol_cf_close(opened);
        unwatch(&seen);
    }
}

static void values_outside_the_limits_are_told_apart(void **state)
{
    const float stored[8] = {271.15F, 273.15F, 400.0F, 100.0F, 1e20F, NAN, 1e11F, 300.0F};
    /* Kelvin to Celsius with limits -4..45; 1e11 is an undeclared fill, not a hot sea. */
    const stericol_cf_conversion celsius = {1.0, -273.15, -4.0, 45.0},
                                 open = {1.0, 0.0, (double)-INFINITY, (double)INFINITY};
    const float fill = 1e20F;
    const stericol_cf_field_axes axes = {
        STERICOL_CF_NO_AXIS, STERICOL_CF_NO_AXIS, STERICOL_CF_NO_AXIS, 0, {0}};
    int handle = made_create(&made_formats[0], "limits.nc"), dimension, variable;
    double values[8];
    stericol_cf_tally tally = {0};
    stericol_cf_field *field;
    stericol_cf_file *file;
    watched seen;

    (void)state;
    must(nc_def_dim(handle, "x", 8, &dimension));
    must(nc_def_var(handle, "t", NC_FLOAT, 1, &dimension, &variable));
    must(nc_put_att_float(handle, variable, "_FillValue", NC_FLOAT, 1, &fill));
    must(nc_enddef(handle));
    must(nc_put_var_float(handle, variable, stored));
    must(nc_close(handle));

    watch(&seen);
    file = open_well(&seen, made_path("limits.nc"));
    assert_int_equal(stericol_cf_field_open(seen.context, file, stericol_cf_variable_at(file, 0), &axes,
                                            &celsius, 0, &field),
                     STERICOL_OK);
    assert_int_equal(stericol_cf_field_read(seen.context, field, 0, 0, 1, 0, 1, values, &tally), STERICOL_OK);
    assert_close(values[0], -2.0, 2e-5); /* 271.15 as a float is off by 1e-5 */
    assert_close(values[1], 0.0, 2e-5);
    assert_same_number(values[2], (double)INFINITY);
    assert_same_number(values[3], -(double)INFINITY);
    assert_nan(values[4]);
    assert_nan(values[5]);
    assert_nan(values[6]);
    assert_close(values[7], 26.85, 2e-5);
    assert_int_equal(tally.values, 8);
    assert_int_equal(tally.missing, 3);
    assert_int_equal(tally.below, 1);
    assert_int_equal(tally.above, 1);
    assert_non_null(strstr(
        stericol_text_string(&seen.notices),
        "limits.nc: t: values beyond 1e+10, which no attribute declares as missing, are taken as missing\n"));
    stericol_cf_field_close(field);
    stericol_text_clear(&seen.notices);
    /* Without limits (heat content in J m-2) large values are values; and the notice does not come again. */
    assert_int_equal(
        stericol_cf_field_open(seen.context, file, stericol_cf_variable_at(file, 0), &axes, &open, 0, &field),
        STERICOL_OK);
    assert_int_equal(stericol_cf_field_read(seen.context, field, 0, 0, 1, 0, 1, values, NULL), STERICOL_OK);
    assert_same_number(values[6], (double)1e11F);
    assert_string_equal(stericol_text_string(&seen.notices), "");
    stericol_cf_field_close(field);
    stericol_cf_field_close(NULL);
    stericol_cf_close(file);
    unwatch(&seen);
}

static void a_member_that_is_not_there_is_refused(void **state)
{
    const stericol_cf_field_axes axes = {
        STERICOL_CF_NO_AXIS, STERICOL_CF_NO_AXIS, STERICOL_CF_NO_AXIS, 1, {3}};
    const stericol_cf_conversion same = {1.0, 0.0, -1.0, 1.0};
    int handle = made_create(&made_formats[0], "member.nc"), dimension[2], variable;
    stericol_cf_field *field;
    stericol_cf_file *file;
    watched seen;

    (void)state;
    must(nc_def_dim(handle, "member", 3, &dimension[0]));
    must(nc_def_dim(handle, "x", 2, &dimension[1]));
    must(nc_def_var(handle, "t", NC_FLOAT, 2, dimension, &variable));
    must(nc_close(handle));
    watch(&seen);
    file = open_well(&seen, made_path("member.nc"));
    assert_int_equal(
        stericol_cf_field_open(seen.context, file, stericol_cf_variable_at(file, 0), &axes, &same, 0, &field),
        STERICOL_USAGE);
    assert_null(field);
    assert_non_null(strstr(
        stericol_context_message(seen.context),
        "member.nc: t: its dimension member has 3 entries, so that there is no entry 4; choose another"));
    stericol_cf_close(file);
    unwatch(&seen);
}

static void text_is_no_field(void **state)
{
    const stericol_cf_field_axes axes = {
        STERICOL_CF_NO_AXIS, STERICOL_CF_NO_AXIS, STERICOL_CF_NO_AXIS, 0, {0}};
    const stericol_cf_conversion same = {1.0, 0.0, -1.0, 1.0};
    int handle = made_create(&made_formats[0], "text.nc"), dimension, variable;
    stericol_cf_field *field;
    stericol_cf_file *file;
    watched seen;

    (void)state;
    must(nc_def_dim(handle, "x", 8, &dimension));
    must(nc_def_var(handle, "t", NC_CHAR, 1, &dimension, &variable));
    must(nc_close(handle));
    watch(&seen);
    file = open_well(&seen, made_path("text.nc"));
    assert_int_equal(
        stericol_cf_field_open(seen.context, file, stericol_cf_variable_at(file, 0), &axes, &same, 0, &field),
        STERICOL_INPUT);
    assert_null(field);
    assert_non_null(strstr(stericol_context_message(seen.context), "text.nc: t: holds text, not numbers"));
    stericol_cf_close(file);
    unwatch(&seen);
}

/* More than one piece of 2 MiB, in both directions, whole and across chunk edges. */
static void large_slabs_are_read_in_pieces(void **state)
{
    enum { DEEP = 40, TALL = 200, WIDE = 150 };
    static const int orders[2][3] = {{LEVEL, ROW, COLUMN}, {ROW, COLUMN, LEVEL}};
    const stericol_cf_conversion same = {1.0, 0.0, (double)-INFINITY, (double)INFINITY};
    const size_t extent[AXES] = {1, 1, DEEP, TALL, WIDE}, cells = (size_t)DEEP * TALL * WIDE;
    float *stored = malloc(cells * sizeof *stored);
    double *values = malloc(cells * sizeof *values);
    size_t n, i, l, r, c;

    (void)state;
    assert_non_null(stored);
    assert_non_null(values);
    for (n = 0; n < 6; n++) {
        const int *order = orders[n % 2];
        const size_t chunk[2][3] = {{7, 64, 64}, {64, 64, 7}};
        const bool chunked = n >= 2;
        int handle = made_create(&made_formats[3], "large.nc"), dimension[3], variable;
        stericol_cf_field_axes axes = {.time = STERICOL_CF_NO_AXIS};
        stericol_cf_tally tally = {0};
        stericol_cf_field *field;
        stericol_cf_file *file;
        watched seen;

        for (i = 0; i < 3; i++) {
            must(nc_def_dim(handle, axis_names[order[i]], extent[order[i]], &dimension[i]));
            *(order[i] == LEVEL ? &axes.level : order[i] == ROW ? &axes.row : &axes.column) = (int)i;
        }
        must(nc_def_var(handle, "v", NC_FLOAT, 3, dimension, &variable));
        if (chunked)
            must(nc_def_var_chunking(handle, variable, NC_CHUNKED, chunk[n % 2]));
        for (i = 0; i < cells; i++)
            stored[i] = (float)i;
        must(nc_put_var_float(handle, variable, stored));
        must(nc_close(handle));
        watch(&seen);
        file = open_well(&seen, made_path("large.nc"));
        assert_int_equal(stericol_cf_field_open(seen.context, file, stericol_cf_variable_at(file, 0), &axes,
                                                &same, 0, &field),
                         STERICOL_OK);
        assert_int_equal(
            stericol_cf_field_read(seen.context, field, 0, 1, DEEP - 1, 3, TALL - 3, values, &tally),
            STERICOL_OK);
        for (i = 0, l = 1; l < DEEP; l++) {
            for (r = 3; r < TALL; r++) {
                for (c = 0; c < WIDE; c++, i++) {
                    const size_t at = n % 2 == 0 ? (l * TALL + r) * WIDE + c : (r * WIDE + c) * DEEP + l;

                    assert_same_number(values[i], (double)at);
                }
            }
        }
        assert_int_equal(tally.values, i);
        stericol_cf_field_close(field);
        stericol_cf_close(file);
        unwatch(&seen);
    }
    free(stored);
    free(values);
}

#if defined(__has_feature)
#if __has_feature(address_sanitizer) || __has_feature(thread_sanitizer)
#define OWN_HEAP 0
#endif
#elif defined(__SANITIZE_ADDRESS__) || defined(__SANITIZE_THREAD__)
#define OWN_HEAP 0
#endif
#ifndef OWN_HEAP
#ifdef __GLIBC__
#define OWN_HEAP 1
#else
#define OWN_HEAP 0
#endif
#endif

/* Bytes in use from the C library's heap; 0 where another heap stands in for it. */
static size_t heap_in_use(void)
{
#if OWN_HEAP
    const struct mallinfo2 now = mallinfo2();
    return now.uordblks + now.hblkhd;
#else
    return 0;
#endif
}

/*
 * Slabs of one level against blocks of four, time after time: what is kept stays within the limit.  A cache
 * that gives up only chunks read in whole grows by one time's chunks, 480 KiB, with every time.
 */
static void the_cache_does_not_grow_with_the_times(void **state)
{
    enum { MANY = 24, FEW = 2, DEEP = 6, TALL = 100, WIDE = 100, CACHE = 1 << 20 };
    static const char *const names[4] = {"time", "level", "row", "column"};
    const size_t along[4] = {MANY, DEEP, TALL, WIDE}, chunk[4] = {1, 4, 30, 30};
    const stericol_cf_field_axes axes = {.time = 0, .level = 1, .row = 2, .column = 3};
    const made_format format = {"", NC_NETCDF4, true, true, false};
    const size_t cells = (size_t)MANY * DEEP * TALL * WIDE;
    double *values = malloc(cells * sizeof *values);
    int handle = made_create(&format, "times.nc"), dimension[4], variable, i;
    stericol_cf_field *field;
    size_t after_few = 0, bytes, slots, t, l, n;
    float preemption = 0.0F;
    const stericol_cf_conversion same = {1.0, 0.0, (double)-INFINITY, (double)INFINITY};
    watched seen;

    (void)state;
    assert_non_null(values);
    for (n = 0; n < cells; n++)
        values[n] = (double)n;
    for (i = 0; i < 4; i++)
        must(nc_def_dim(handle, names[i], along[i], &dimension[i]));
    must(nc_def_var(handle, "v", NC_DOUBLE, 4, dimension, &variable));
    must(nc_def_var_chunking(handle, variable, NC_CHUNKED, chunk));
    must(nc_put_var_double(handle, variable, values));
    must(nc_close(handle));
    watch(&seen);
    stericol_cf_file *file = open_well(&seen, made_path("times.nc"));
    const stericol_cf_variable *found = stericol_cf_find(file, "v", NULL);
    assert_int_equal(stericol_cf_field_open(seen.context, file, found, &axes, &same, CACHE, &field),
                     STERICOL_OK);
    for (t = 0; t < MANY; t++) {
        /* The last levels' chunks are cut by the end of the axis, the first ones are left half read. */
        for (l = 1; l < DEEP - 1; l++) {
            assert_int_equal(stericol_cf_field_read(seen.context, field, t, l, 1, 0, TALL - 5, values, NULL),
                             STERICOL_OK);
            assert_same_number(values[0], (double)((t * DEEP + l) * TALL * WIDE));
        }
        if (t + 1 == FEW)
            after_few = heap_in_use();
    }
    const size_t after_many = heap_in_use();
    if (after_many > after_few + 2 * CACHE)
        print_error("%zu bytes after %d times, %zu after %d\n", after_few, FEW, after_many, MANY);
    assert_true(after_many <= after_few + 2 * CACHE);
    /* 1 is what makes chunks that were read in part stay for ever (H5Pset_cache). */
    must(nc_get_var_chunk_cache(found->group_handle, found->handle, &bytes, &slots, &preemption));
    assert_true(bytes <= CACHE);
    assert_true(preemption > 0.0F && preemption < 1.0F);
    stericol_cf_field_close(field);
    stericol_cf_close(file);
    unwatch(&seen);
    free(values);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(every_storage_gives_the_same_values),
        cmocka_unit_test(contiguous_files_tell_their_stride),
        cmocka_unit_test(values_outside_the_limits_are_told_apart),
        cmocka_unit_test(a_member_that_is_not_there_is_refused),
        cmocka_unit_test(text_is_no_field),
        cmocka_unit_test(large_slabs_are_read_in_pieces),
        cmocka_unit_test(the_cache_does_not_grow_with_the_times),
    };

    return cmocka_run_group_tests_name("fields", tests, NULL, NULL);
}
