/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Which stored values are missing and what the others mean.  The rules are those of CF 1.10, sections 2.5.1
 * and 8.1, and of the NetCDF User's Guide, appendix A ("Attribute Conventions"); the expected values follow
 * from them by hand.
 */
#include "made_files.h"

#include "cf/room.h"

#include <float.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

typedef struct given {
    const char *name;
    nc_type type;
    size_t count;
    const void *values; /* or the text */
} given;

#define TEXT(name, text)                                                                                     \
    {                                                                                                        \
        name, NC_CHAR, sizeof(text) - 1, text                                                                \
    }

/* The variable "v" of `count` stored values with those attributes (ended by a NULL name), in a CDF-5 file. */
static void make_variable(nc_type type, size_t count, const void *stored, const given *attributes)
{
    int file, dimension, variable;

    file = made_create(&made_formats[2], "values.nc");
    must(nc_def_dim(file, "x", count, &dimension));
    must(nc_def_var(file, "v", type, 1, &dimension, &variable));
    for (; attributes->name != NULL; attributes++)
        must(nc_put_att(file, variable, attributes->name, attributes->type, attributes->count,
                        attributes->values));
    must(nc_enddef(file));
    must(nc_put_var(file, variable, stored));
    must(nc_close(file));
}

/* Reads "v" whole, twice (notices come once), and compares. */
static void check_variable(size_t count, const double *expected, const char *notices)
{
    double *values = NULL;
    size_t total, i;
    watched seen;
    stericol_cf_file *file;
    stericol_text wanted = {0};
    const char *line;
    int turn;

    watch(&seen);
    file = open_well(&seen, made_path("values.nc"));
    for (turn = 0; turn < 2; turn++) {
        free(values);
        if (stericol_cf_read_all(seen.context, file, stericol_cf_variable_at(file, 0), count, &values,
                                 &total) != STERICOL_OK) {
            print_error("%s\n", stericol_context_message(seen.context));
            fail();
        }
    }
    assert_int_equal(total, count);
    for (i = 0; i < count; i++)
        assert_same_number(values[i], expected[i]);
    /* "warning TEXT\n" lines, where the file and variable are left out of what is expected. */
    for (line = notices; *line != '\0'; line = strchr(line, '\n') + 1) {
        const char *blank = strchr(line, ' ');

        stericol_text_add_bytes(&wanted, line, (size_t)(blank - line) + 1);
        stericol_text_format(&wanted, "%s: v: ", made_path("values.nc"));
        stericol_text_add_bytes(&wanted, blank + 1, (size_t)(strchr(line, '\n') - blank));
    }
    assert_string_equal(stericol_text_string(&seen.notices), stericol_text_string(&wanted));
    stericol_text_free(&wanted);
    free(values);
    stericol_cf_close(file);
    unwatch(&seen);
}

static void check_refused(const char *message)
{
    double *values;
    size_t total;
    watched seen;
    stericol_cf_file *file;
    stericol_text whole = {0};

    watch(&seen);
    file = open_well(&seen, made_path("values.nc"));
    assert_int_equal(
        stericol_cf_read_all(seen.context, file, stericol_cf_variable_at(file, 0), 1000, &values, &total),
        STERICOL_INPUT);
    assert_null(values);
    stericol_text_format(&whole, "%s: v: %s", made_path("values.nc"), message);
    assert_string_equal(stericol_context_message(seen.context), stericol_text_string(&whole));
    stericol_text_free(&whole);
    stericol_cf_close(file);
    unwatch(&seen);
}

static void packed_values_are_scaled_then_shifted(void **state)
{
    const short stored[4] = {-32768, 0, 1234, 32767};
    const double scale = 0.001, offset = 20.0;
    const float narrow = 0.25F;
    /* (-32768 is not the default fill, which is -32767) */
    const double expected[4] = {-32768 * 0.001 + 20.0, 20.0, 1234 * 0.001 + 20.0, 32767 * 0.001 + 20.0};
    const double quarters[4] = {-8192.0, 0.0, 308.5, 8191.75};

    (void)state;
    make_variable(
        NC_SHORT, 4, stored,
        (given[]){{"scale_factor", NC_DOUBLE, 1, &scale}, {"add_offset", NC_DOUBLE, 1, &offset}, {0}});
    check_variable(4, expected, "");
    make_variable(NC_SHORT, 4, stored, (given[]){{"scale_factor", NC_FLOAT, 1, &narrow}, {0}});
    check_variable(4, quarters, "");
    make_variable(NC_SHORT, 4, stored, (given[]){TEXT("scale_factor", "0.25"), {0}});
    check_variable(4, quarters, "");
}

static void a_packing_that_cannot_be_undone_is_refused(void **state)
{
    const short stored[1] = {7};
    const double zero = 0.0, nan = NAN, infinite = INFINITY, two[2] = {1.0, 2.0};

    (void)state;
    make_variable(NC_SHORT, 1, stored, (given[]){{"scale_factor", NC_DOUBLE, 1, &zero}, {0}});
    check_refused("its scale_factor is 0, so that its values cannot be unpacked; correct the attribute");
    make_variable(NC_SHORT, 1, stored, (given[]){{"scale_factor", NC_DOUBLE, 1, &nan}, {0}});
    check_refused("its scale_factor is nan, so that its values cannot be unpacked; correct the attribute");
    make_variable(NC_SHORT, 1, stored, (given[]){{"add_offset", NC_DOUBLE, 1, &infinite}, {0}});
    check_refused("its add_offset is inf, so that its values cannot be unpacked; correct the attribute");
    make_variable(NC_SHORT, 1, stored, (given[]){{"add_offset", NC_DOUBLE, 2, two}, {0}});
    check_refused(
        "its add_offset is not one number, so that its values cannot be unpacked; correct the attribute");
    make_variable(NC_SHORT, 1, stored, (given[]){TEXT("scale_factor", "small"), {0}});
    check_refused(
        "its scale_factor is not one number, so that its values cannot be unpacked; correct the attribute");
    make_variable(NC_CHAR, 4, "abcd", (given[]){{0}});
    check_refused("holds text, not numbers; name a variable of numbers");
}

/* CF 1.10, section 2.5.1; the values of NC_FILL_* stand in netcdf.h. */
static void default_fills_are_missing_except_for_bytes(void **state)
{
    const signed char bytes[3] = {NC_FILL_BYTE, 1, 127};
    const unsigned char naturals[3] = {NC_FILL_UBYTE, 1, 127};
    const short shorts[3] = {NC_FILL_SHORT, 1, -32768};
    const unsigned short words[3] = {NC_FILL_USHORT, 1, 65534};
    const int ints[3] = {NC_FILL_INT, 1, -2147483647 - 1};
    const unsigned uints[3] = {NC_FILL_UINT, 1, 4294967294U};
    const long long longs[3] = {NC_FILL_INT64, 1, NC_FILL_INT64 / 1024 + 1};
    const unsigned long long ulongs[3] = {NC_FILL_UINT64, 1, 1ULL << 53};
    const float floats[3] = {NC_FILL_FLOAT, 1.0F, -2.5F};
    const double doubles[3] = {NC_FILL_DOUBLE, 1.0, -2.5};
    const given nothing[] = {{0}};

    (void)state;
    make_variable(NC_BYTE, 3, bytes, nothing);
    check_variable(3, (double[]){-127.0, 1.0, 127.0}, "");
    make_variable(NC_UBYTE, 3, naturals, nothing);
    check_variable(3, (double[]){255.0, 1.0, 127.0}, "");
    make_variable(NC_SHORT, 3, shorts, nothing);
    check_variable(3, (double[]){NAN, 1.0, -32768.0}, "");
    make_variable(NC_USHORT, 3, words, nothing);
    check_variable(3, (double[]){NAN, 1.0, 65534.0}, "");
    make_variable(NC_INT, 3, ints, nothing);
    check_variable(3, (double[]){NAN, 1.0, -2147483648.0}, "");
    make_variable(NC_UINT, 3, uints, nothing);
    check_variable(3, (double[]){NAN, 1.0, 4294967294.0}, "");
    make_variable(NC_INT64, 3, longs, nothing);
    check_variable(3, (double[]){NAN, 1.0, -9007199254740990.0}, "");
    make_variable(NC_UINT64, 3, ulongs, nothing);
    check_variable(3, (double[]){NAN, 1.0, 9007199254740992.0}, "");
    make_variable(NC_FLOAT, 3, floats, nothing);
    check_variable(3, (double[]){NAN, 1.0, -2.5}, "");
    make_variable(NC_DOUBLE, 3, doubles, nothing);
    check_variable(3, (double[]){NAN, 1.0, -2.5}, "");
}

static void a_declared_fill_replaces_the_default(void **state)
{
    const short stored[3] = {-32767, -32768, 5}, fill = -32768;
    const signed char bytes[3] = {-1, 0, 1}, minus_one = -1;

    (void)state;
    make_variable(NC_SHORT, 3, stored, (given[]){{"_FillValue", NC_SHORT, 1, &fill}, {0}});
    check_variable(3, (double[]){-32767.0, NAN, 5.0}, "");
    make_variable(NC_BYTE, 3, bytes, (given[]){{"_FillValue", NC_BYTE, 1, &minus_one}, {0}});
    check_variable(3, (double[]){NAN, 0.0, 1.0}, "");
}

static void missing_values_may_be_many_and_of_another_type(void **state)
{
    const float floats[5] = {1e20F, -999.0F, -99.99F, NAN, 3.0F};
    const double many[4] = {1e20, -999.0, -99.99, NAN}, beyond = 1e300;
    const double doubles[4] = {1e20, (double)1e20F, 99999.0, 7.0};
    const float narrow[2] = {1e20F, 99999.0F};
    const short shorts[3] = {-999, 0, 1};
    const float real = -999.0F, half = -999.5F;
    const int large = 100000;

    (void)state;
    /* Compared after the cast to the type of the variable: 1e20 and -99.99 are not floats. */
    make_variable(NC_FLOAT, 5, floats, (given[]){{"missing_value", NC_DOUBLE, 4, many}, {0}});
    check_variable(5, (double[]){NAN, NAN, NAN, NAN, 3.0}, "");
    /* Declared in float for doubles: 1e20 is meant, too. */
    make_variable(NC_DOUBLE, 4, doubles, (given[]){{"missing_value", NC_FLOAT, 2, narrow}, {0}});
    check_variable(4, (double[]){NAN, NAN, NAN, 7.0}, "");
    make_variable(NC_SHORT, 3, shorts, (given[]){{"missing_value", NC_FLOAT, 1, &real}, {0}});
    check_variable(3, (double[]){NAN, 0.0, 1.0}, "");
    make_variable(NC_SHORT, 3, shorts, (given[]){{"missing_value", NC_FLOAT, 1, &half}, {0}});
    check_variable(3, (double[]){-999.0, 0.0, 1.0},
                   "warning its missing_value does not fit the type of its values and is ignored\n");
    make_variable(NC_SHORT, 3, shorts, (given[]){{"missing_value", NC_INT, 1, &large}, {0}});
    check_variable(3, (double[]){-999.0, 0.0, 1.0},
                   "warning its missing_value does not fit the type of its values and is ignored\n");
    make_variable(NC_FLOAT, 5, floats, (given[]){{"missing_value", NC_DOUBLE, 1, &beyond}, {0}});
    check_variable(5, (double[]){(double)1e20F, -999.0, (double)-99.99F, NAN, 3.0},
                   "warning its missing_value does not fit the type of its values and is ignored\n");
}

static void missing_values_may_be_written_as_text(void **state)
{
    const float stored[3] = {-999.0F, -99.0F, 3.0F};

    (void)state;
    make_variable(NC_FLOAT, 3, stored, (given[]){TEXT("missing_value", "-999"), {0}});
    check_variable(3, (double[]){NAN, -99.0, 3.0},
                   "note its missing_value is a text and is read as a number\n");
    make_variable(NC_FLOAT, 3, stored, (given[]){TEXT("missing_value", "-999.0, -99"), {0}});
    check_variable(3, (double[]){NAN, NAN, 3.0},
                   "note its missing_value is a text and is read as a number\n");
    make_variable(NC_FLOAT, 3, stored, (given[]){TEXT("missing_value", "land"), {0}});
    check_variable(3, (double[]){-999.0, -99.0, 3.0},
                   "warning its missing_value is no number and is ignored\n");
}

static void too_many_missing_values_are_told(void **state)
{
    double many[40];
    const float stored[3] = {0.0F, 31.0F, 32.0F};
    size_t i;

    (void)state;
    for (i = 0; i < 40; i++)
        many[i] = (double)i;
    /* The default fill takes one of the 32 places. */
    make_variable(NC_FLOAT, 3, stored, (given[]){{"missing_value", NC_DOUBLE, 40, many}, {0}});
    check_variable(3, (double[]){NAN, 31.0, 32.0},
                   "warning has more than 32 missing values; the rest is ignored\n");
}

static void what_is_not_finite_is_missing(void **state)
{
    const float floats[3] = {INFINITY, -INFINITY, NAN};
    const double doubles[3] = {INFINITY, -INFINITY, NAN}, nan = NAN;

    (void)state;
    make_variable(NC_FLOAT, 3, floats, (given[]){{0}});
    check_variable(3, (double[]){NAN, NAN, NAN}, "");
    make_variable(NC_DOUBLE, 3, doubles, (given[]){{"_FillValue", NC_DOUBLE, 1, &nan}, {0}});
    check_variable(3, (double[]){NAN, NAN, NAN}, "");
}

static void undeclared_fills_are_told_once(void **state)
{
    const double stored[4] = {1e34, -9.99e33, 3.6e24, 1.0};
    const float floats[2] = {1e35F, 2.0F};

    (void)state;
    make_variable(NC_DOUBLE, 4, stored, (given[]){{0}});
    check_variable(
        4, (double[]){NAN, NAN, 3.6e24, 1.0},
        "warning values beyond 1e+30, which no attribute declares as missing, are taken as missing\n");
    make_variable(NC_FLOAT, 2, floats, (given[]){{0}});
    check_variable(
        2, (double[]){NAN, 2.0},
        "warning values beyond 1e+30, which no attribute declares as missing, are taken as missing\n");
}

static void valid_limits_are_packed(void **state)
{
    const short stored[5] = {-2001, -2000, 0, 4000, 4001}, range[2] = {-2000, 4000}, low = -2000, high = 4000;
    const int wide[2] = {-100000, 4000};
    const double scale = 0.01, up = 5.0;
    const double all[5] = {-2001 * 0.01 + 5.0, -2000 * 0.01 + 5.0, 5.0, 4000 * 0.01 + 5.0, 4001 * 0.01 + 5.0};
    const given packing[2] = {{"scale_factor", NC_DOUBLE, 1, &scale}, {"add_offset", NC_DOUBLE, 1, &up}};

    (void)state;
    make_variable(NC_SHORT, 5, stored,
                  (given[]){packing[0], packing[1], {"valid_range", NC_SHORT, 2, range}, {0}});
    check_variable(5, (double[]){NAN, all[1], all[2], all[3], NAN}, "");
    make_variable(NC_SHORT, 5, stored,
                  (given[]){packing[0], packing[1], {"valid_min", NC_SHORT, 1, &low}, {0}});
    check_variable(5, (double[]){NAN, all[1], all[2], all[3], all[4]}, "");
    make_variable(NC_SHORT, 5, stored,
                  (given[]){packing[0], packing[1], {"valid_max", NC_SHORT, 1, &high}, {0}});
    check_variable(5, (double[]){all[0], all[1], all[2], all[3], NAN}, "");
    /* Not packed: limits of a wider type just do not bite. */
    make_variable(NC_SHORT, 5, stored, (given[]){{"valid_range", NC_INT, 2, wide}, {0}});
    check_variable(5, (double[]){-2001.0, -2000.0, 0.0, 4000.0, NAN}, "");
}

static void valid_limits_in_unpacked_units_are_recognised(void **state)
{
    const char *told = "warning its valid limits only make sense in unpacked units and are used so\n";
    const short stored[5] = {-7001, -7000, 0, 15000, 15001}, same[2] = {-2, 42}, none = -1;
    const double scale = 0.002, offset = 12.0, range[2] = {-2.0, 42.0};
    const float narrow[2] = {-2.0F, 42.0F};
    const int wide[2] = {-2, 40000};
    const signed char bytes[3] = {-100, 0, 100};
    const double down = -0.002;
    const double all[5] = {-7001 * 0.002 + 12.0, -7000 * 0.002 + 12.0, 12.0, 15000 * 0.002 + 12.0,
                           15001 * 0.002 + 12.0};
    const given packing[2] = {{"scale_factor", NC_DOUBLE, 1, &scale}, {"add_offset", NC_DOUBLE, 1, &offset}};

    (void)state;
    /* By type (User's Guide, appendix A). */
    make_variable(NC_SHORT, 5, stored,
                  (given[]){packing[0], packing[1], {"valid_range", NC_DOUBLE, 2, range}, {0}});
    check_variable(5, (double[]){NAN, all[1], all[2], all[3], NAN}, told);
    make_variable(NC_SHORT, 5, stored,
                  (given[]){packing[0], packing[1], {"valid_range", NC_FLOAT, 2, narrow}, {0}});
    check_variable(5, (double[]){NAN, all[1], all[2], all[3], NAN}, told);
    /* By not fitting the stored type. */
    make_variable(NC_SHORT, 5, stored,
                  (given[]){packing[0], packing[1], {"valid_range", NC_INT, 2, wide}, {0}});
    check_variable(5, (double[]){NAN, all[1], all[2], all[3], all[4]}, told);
    /* By the values: as packed nothing but 0 would be left. */
    {
        short many[100];
        double expected[100];
        size_t i;

        for (i = 0; i < 100; i++) {
            many[i] = (short)(-7000 + 200 * (int)i);
            expected[i] = many[i] * 0.002 + 12.0;
        }
        many[99] = 16000;
        expected[99] = NAN;
        make_variable(NC_SHORT, 100, many,
                      (given[]){packing[0], packing[1], {"valid_range", NC_SHORT, 2, same}, {0}});
        check_variable(100, expected, told);
        /* One-sided: all values are below 42 both ways; what CF says stands. */
        make_variable(NC_SHORT, 100, many,
                      (given[]){packing[0], packing[1], {"valid_max", NC_SHORT, 1, &none}, {0}});
        for (i = 0; i < 100; i++)
            expected[i] = many[i] <= -1 ? many[i] * 0.002 + 12.0 : (double)NAN;
        check_variable(100, expected, "");
    }
    /* A negative scale turns the limits round: 12 + 0.2 and 12 - 0.2. */
    make_variable(NC_BYTE, 3, bytes,
                  (given[]){{"scale_factor", NC_DOUBLE, 1, &down},
                            {"add_offset", NC_DOUBLE, 1, &offset},
                            {"valid_max", NC_DOUBLE, 1, &offset},
                            {0}});
    check_variable(3, (double[]){NAN, 12.0, 100 * -0.002 + 12.0}, told);
}

static void limits_that_cannot_be_used_are_ignored(void **state)
{
    const float stored[2] = {-1.0F, 1.0F};
    const double backwards[2] = {5.0, -5.0}, one = 0.0, nan = NAN, three[3] = {0.0, 1.0, 2.0};

    (void)state;
    make_variable(NC_FLOAT, 2, stored, (given[]){TEXT("valid_min", "0"), {0}});
    check_variable(2, (double[]){-1.0, 1.0}, "warning its valid_min is no number and is ignored\n");
    make_variable(NC_FLOAT, 2, stored, (given[]){{"valid_range", NC_DOUBLE, 1, &one}, {0}});
    check_variable(2, (double[]){-1.0, 1.0},
                   "warning its valid_range is not a pair of numbers and is ignored\n");
    make_variable(NC_FLOAT, 2, stored, (given[]){{"valid_min", NC_DOUBLE, 3, three}, {0}});
    check_variable(2, (double[]){-1.0, 1.0}, "warning its valid_min is not one number and is ignored\n");
    make_variable(NC_FLOAT, 2, stored, (given[]){{"valid_max", NC_DOUBLE, 1, &nan}, {0}});
    check_variable(2, (double[]){-1.0, 1.0}, "warning its valid_max is NaN and is ignored\n");
    make_variable(NC_FLOAT, 2, stored, (given[]){{"valid_range", NC_DOUBLE, 2, backwards}, {0}});
    check_variable(2, (double[]){-1.0, 1.0}, "warning its valid limits leave no value and are ignored\n");
}

/* 0.1 and 40.1 as floats lie on either side of the doubles: the limit is rounded as the values were. */
static void limits_are_compared_in_the_type_of_the_values(void **state)
{
    const float stored[3] = {0.1F, 40.1F, 41.0F};
    const double range[2] = {0.1, 40.1}, high = 0.1;

    (void)state;
    make_variable(NC_FLOAT, 3, stored, (given[]){{"valid_range", NC_DOUBLE, 2, range}, {0}});
    check_variable(3, (double[]){(double)0.1F, (double)40.1F, NAN}, "");
    make_variable(NC_FLOAT, 3, stored, (given[]){{"valid_max", NC_DOUBLE, 1, &high}, {0}});
    check_variable(3, (double[]){(double)0.1F, NAN, NAN}, "");
}

static void bytes_may_be_unsigned(void **state)
{
    const signed char stored[4] = {-1, -2, 0, 100}, fill = -1, low = 0;
    const short range[2] = {0, 254};
    const unsigned char naturals[3] = {255, 128, 127};
    const short words[3] = {-1, 5, NC_FILL_SHORT};
    const int tall[2] = {0, 65534};

    (void)state;
    make_variable(NC_BYTE, 4, stored,
                  (given[]){TEXT("_Unsigned", "true"),
                            {"_FillValue", NC_BYTE, 1, &fill},
                            {"valid_min", NC_BYTE, 1, &low},
                            {0}});
    check_variable(4, (double[]){NAN, 254.0, 0.0, 100.0}, "");
    make_variable(NC_UBYTE, 3, naturals, (given[]){TEXT("_Unsigned", "false"), {0}});
    check_variable(3, (double[]){-1.0, -128.0, 127.0}, "");
    /* User's Guide, appendix A: valid_range of 0, 255 says that bytes are unsigned. */
    make_variable(NC_BYTE, 4, stored, (given[]){{"valid_range", NC_SHORT, 2, range}, {0}});
    check_variable(4, (double[]){NAN, 254.0, 0.0, 100.0},
                   "note its valid limits only fit unsigned numbers; read as unsigned\n");
    make_variable(NC_SHORT, 3, words, (given[]){{"valid_range", NC_INT, 2, tall}, {0}});
    check_variable(3, (double[]){NAN, 5.0, NAN},
                   "note its valid limits only fit unsigned numbers; read as unsigned\n");
}

static void large_whole_numbers_are_told(void **state)
{
    const long long signed_values[3] = {9007199254740993LL, -9007199254740992LL, 9223372036854775807LL};
    const long long fill = 9223372036854775807LL;
    const unsigned long long values[2] = {18446744073709551615ULL, 9007199254740992ULL},
                             most = 18446744073709551615ULL;

    (void)state;
    /* The fill is exact: its neighbours, which are the same double, would not be missing. */
    make_variable(NC_INT64, 3, signed_values, (given[]){{"_FillValue", NC_INT64, 1, &fill}, {0}});
    check_variable(3, (double[]){9007199254740992.0, -9007199254740992.0, NAN},
                   "warning whole numbers beyond 2^53 are rounded to the nearest double\n");
    make_variable(NC_UINT64, 2, values, (given[]){{"_FillValue", NC_UINT64, 1, &most}, {0}});
    check_variable(2, (double[]){NAN, 9007199254740992.0}, "");
}

/* All types, with limits, fills and values on every edge; each instruction set against the plain loops, bit
 * by bit. */
static void every_instruction_set_gives_the_same_bits(void **state)
{
    enum { COUNT = 531 };
    static const char *const names[] = {"avx2", "avx512"};
    const stericol_cf_conversion conversion = {1.0 / 3.0, -0.1, -300.0, 250.0};
    _Alignas(8) unsigned char raw[COUNT * 8];
    double plain[COUNT], other[COUNT];
    draws from = {.state = 4711};
    stericol_cf_type type;
    size_t n, i, compared = 0;

    (void)state;
    for (type = STERICOL_CF_INT8; type <= STERICOL_CF_DOUBLE; type = (stericol_cf_type)(type + 1)) {
        stericol_cf_rules rules = {
            .type = type, .size = stericol_cf_size_of(type), .scale = 0.1, .offset = 7.7, .fills = 2};
        const bool is_real = type >= STERICOL_CF_FLOAT, is_natural = !is_real && type % 2 == 1;

        for (i = 0; i < sizeof raw; i++)
            raw[i] = (unsigned char)draw(&from, 256);
        if (is_real) {
            rules.low.real = -1e30;
            rules.high.real = 1e30;
            rules.fill_low[0].real = -1.0;
            rules.fill_high[0].real = 1.0;
        } else if (is_natural) {
            rules.low.natural = 3;
            rules.high.natural = 250;
            rules.fill_low[0].natural = rules.fill_high[0].natural = 77;
        } else {
            rules.low.whole = -100;
            rules.high.whole = 120;
            rules.fill_low[0].whole = rules.fill_high[0].whole = 77;
        }
        rules.fill_low[1] = rules.fill_high[1] = rules.low;
        for (n = 0; n < sizeof names / sizeof names[0]; n++) {
            const stericol_cf_loops *fast = stericol_cf_loops_named(names[n]),
                                    *slow = stericol_cf_loops_named("plain");
            stericol_cf_counts fast_counts = {0}, slow_counts = {0};
            stericol_cf_tally fast_tally = {0}, slow_tally = {0};

            if (fast == NULL)
                continue; /* nothing to compare on this processor */
            assert_string_equal(fast->name, names[n]);
            slow->unpack(&rules, raw, COUNT, 20.0, plain, &slow_counts);
            fast->unpack(&rules, raw, COUNT, 20.0, other, &fast_counts);
            for (i = 0; i < COUNT; i++)
                assert_true(isnan(plain[i]) ? isnan(other[i])
                                            : memcmp(&plain[i], &other[i], sizeof plain[i]) == 0);
            assert_int_equal(fast_counts.huge, slow_counts.huge);
            assert_int_equal(fast_counts.inexact, slow_counts.inexact);
            slow->convert(&conversion, plain, COUNT, &slow_tally);
            fast->convert(&conversion, other, COUNT, &fast_tally);
            for (i = 0; i < COUNT; i++)
                assert_true(isnan(plain[i]) ? isnan(other[i])
                                            : memcmp(&plain[i], &other[i], sizeof plain[i]) == 0);
            assert_memory_equal(&fast_tally, &slow_tally, sizeof fast_tally);
            compared++;
        }
    }
    print_message("%zu pairs compared\n", compared);
    assert_null(stericol_cf_loops_named("none"));
    assert_non_null(stericol_cf_loops_named(NULL));
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(packed_values_are_scaled_then_shifted),
        cmocka_unit_test(a_packing_that_cannot_be_undone_is_refused),
        cmocka_unit_test(default_fills_are_missing_except_for_bytes),
        cmocka_unit_test(a_declared_fill_replaces_the_default),
        cmocka_unit_test(missing_values_may_be_many_and_of_another_type),
        cmocka_unit_test(missing_values_may_be_written_as_text),
        cmocka_unit_test(too_many_missing_values_are_told),
        cmocka_unit_test(what_is_not_finite_is_missing),
        cmocka_unit_test(undeclared_fills_are_told_once),
        cmocka_unit_test(valid_limits_are_packed),
        cmocka_unit_test(valid_limits_in_unpacked_units_are_recognised),
        cmocka_unit_test(limits_that_cannot_be_used_are_ignored),
        cmocka_unit_test(limits_are_compared_in_the_type_of_the_values),
        cmocka_unit_test(bytes_may_be_unsigned),
        cmocka_unit_test(large_whole_numbers_are_told),
        cmocka_unit_test(every_instruction_set_gives_the_same_bits),
    };

    return cmocka_run_group_tests_name("stored values", tests, NULL, NULL);
}
