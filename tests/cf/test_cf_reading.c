/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Opening, the header as records, finding by name, texts, whole variables; and what is refused before it is
 * opened. */
#include "made_files.h"

#include <fcntl.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

/* temp(time, depth, lat) with attributes of several types, and a character variable. */
static void make_plain(const made_format *format, const char *name)
{
    const double values[12] = {1.5, 2.5, 3.5, 4.5, 5.5, 6.5, 7.5, 8.5, 9.5, 10.5, 11.5, 12.5};
    const double depths[3] = {5.0, 15.0, 30.0};
    const size_t start[3] = {0, 0, 0}, count[3] = {2, 3, 2};
    const char names[8] = {'o', 'n', 'e', '\0', 't', 'w', 'o', ' '};
    const short range[2] = {-5, 40};
    int file = made_create(format, name), dimension[4], temp, depth, label, place[2];

    must(nc_def_dim(file, "time", format->zarr ? 2 : NC_UNLIMITED, &dimension[0]));
    must(nc_def_dim(file, "depth", 3, &dimension[1]));
    must(nc_def_dim(file, "lat", 2, &dimension[2]));
    must(nc_def_dim(file, "letters", 4, &dimension[3]));
    must(nc_def_var(file, "temp", NC_FLOAT, 3, dimension, &temp));
    must(nc_def_var(file, "depth", NC_DOUBLE, 1, &dimension[1], &depth));
    place[0] = dimension[2];
    place[1] = dimension[3];
    must(nc_def_var(file, "label", NC_CHAR, 2, place, &label));
    must(nc_put_att_text(file, temp, "units", 6, "degC\0\0"));
    must(nc_put_att_short(file, temp, "some_range", NC_SHORT, 2, range));
    must(nc_put_att_text(file, NC_GLOBAL, "tracking_id", 5, "abc-1"));
    must(nc_put_att_text(file, NC_GLOBAL, "title", 16, "The Sea of Velm."));
    must(nc_enddef(file));
    must(nc_put_vara_double(file, temp, start, count, values));
    must(nc_put_var_double(file, depth, depths));
    must(nc_put_var_text(file, label, names));
    must(nc_close(file));
}

static void check_plain(const made_format *format, const char *path)
{
    watched seen;
    stericol_cf_file *file;
    const stericol_cf_variable *temp, *depth;
    const stericol_cf_attribute *attribute;
    double *values, part[2];
    const size_t start[3] = {1, 1, 0}, count[3] = {1, 1, 2};
    size_t total, i;
    char **texts;

    watch(&seen);
    file = open_well(&seen, path);
    assert_string_equal(stericol_cf_path(file), path);
    assert_string_equal(stericol_cf_format(file), format->name);
    assert_int_equal(stericol_cf_dimension_count(file), 4);
    assert_string_equal(stericol_cf_dimension_at(file, 0)->name, "time");
    assert_string_equal(stericol_cf_dimension_at(file, 0)->group, "/");
    assert_int_equal(stericol_cf_dimension_at(file, 0)->length, 2);
    assert_int_equal(stericol_cf_dimension_at(file, 0)->unlimited, !format->zarr);
    assert_int_equal(stericol_cf_dimension_at(file, 1)->unlimited, false);
    assert_int_equal(stericol_cf_variable_count(file), 3);
    temp = stericol_cf_variable_at(file, 0);
    assert_string_equal(temp->name, "temp");
    assert_string_equal(temp->short_name, "temp");
    assert_string_equal(temp->group, "/");
    assert_int_equal(temp->type, STERICOL_CF_FLOAT);
    assert_int_equal(temp->rank, 3);
    for (i = 0; i < 3; i++)
        assert_int_equal(temp->dimension[i], i);
    assert_int_equal(temp->compressed, false);
    assert_string_equal(stericol_cf_text_of(temp, "units"), "degC");
    assert_null(stericol_cf_text_of(temp, "some_range"));
    assert_null(stericol_cf_text_of(temp, "absent"));
    attribute = stericol_cf_attribute_of(temp, "some_range");
    assert_non_null(attribute);
    assert_int_equal(attribute->type, STERICOL_CF_INT16);
    assert_int_equal(attribute->count, 2);
    assert_same_number(attribute->numbers[0], -5.0);
    assert_same_number(attribute->numbers[1], 40.0);
    assert_string_equal(stericol_cf_global_text(file, "title"), "The Sea of Velm.");
    assert_null(stericol_cf_global(file, "nothing"));
    assert_string_equal(stericol_cf_identity_of(file).id, "abc-1");
    assert_int_equal(stericol_cf_identity_of(file).bytes > 0, !format->zarr);
    assert_true(stericol_cf_identity_of(file).changed > 1000000000);

    assert_int_equal(stericol_cf_read_all(seen.context, file, temp, 12, &values, &total), STERICOL_OK);
    assert_int_equal(total, 12);
    for (i = 0; i < 12; i++)
        assert_same_number(values[i], 1.5 + (double)i);
    free(values);
    assert_int_equal(stericol_cf_read(seen.context, file, temp, start, count, part), STERICOL_OK);
    assert_same_number(part[0], 9.5);
    assert_same_number(part[1], 10.5);
    depth = stericol_cf_find(file, "depth", temp);
    assert_non_null(depth);
    assert_int_equal(stericol_cf_read_all(seen.context, file, depth, 100, &values, &total), STERICOL_OK);
    assert_same_number(values[2], 30.0);
    free(values);
    assert_int_equal(
        stericol_cf_read_texts(seen.context, file, stericol_cf_find(file, "label", NULL), &texts, &total),
        STERICOL_OK);
    assert_int_equal(total, 2);
    assert_string_equal(texts[0], "one");
    assert_string_equal(texts[1], "two");
    stericol_cf_free_texts(texts, total);
    stericol_cf_free_texts(NULL, 0);
    assert_string_equal(stericol_text_string(&seen.notices), "");
    stericol_cf_close(file);
    stericol_cf_close(NULL);
    unwatch(&seen);
}

static void every_format_gives_the_same_records(void **state)
{
    size_t i;

    (void)state;
    for (i = 0; i < MADE_FORMATS; i++) {
        make_plain(&made_formats[i], "plain.nc");
        check_plain(&made_formats[i], made_path("plain.nc"));
    }
}

static void a_store_is_opened_by_its_url_too(void **state)
{
    char url[2048];

    (void)state;
    made_remove_folder(made_path("a store"));
    make_plain(&made_formats[4], "a store");
    (void)snprintf(url, sizeof url, "file://%s#mode=nczarr,file", made_path("a store"));
    check_plain(&made_formats[4], url);
    check_plain(&made_formats[4], made_path("a store"));
}

/* A store without NetCDF's additions, written by hand after the Zarr storage specification, version 2. */
static void a_plain_zarr_store_is_read(void **state)
{
    static const char array[] =
        "{\"zarr_format\": 2, \"shape\": [3], \"chunks\": [2], \"dtype\": \"<i2\", "
        "\"compressor\": null, \"fill_value\": -5, \"order\": \"C\", \"filters\": null}";
    static const char attributes[] = "{\"_ARRAY_DIMENSIONS\": [\"depth\"], \"units\": \"m\"}";
    const unsigned char first[4] = {1, 0, 0x2c, 1}; /* 1, 300; the second chunk is absent: fill */
    double values[3];
    const stericol_cf_variable *depth;
    stericol_cf_file *file;
    watched seen;

    (void)state;
    made_remove_folder(made_path("plain zarr"));
    assert_int_equal(mkdir(made_path("plain zarr"), 0700), 0);
    assert_int_equal(mkdir(made_path("plain zarr/depth"), 0700), 0);
    made_bytes("plain zarr/.zgroup", "{\"zarr_format\": 2}", 18);
    made_bytes("plain zarr/depth/.zarray", array, sizeof array - 1);
    made_bytes("plain zarr/depth/.zattrs", attributes, sizeof attributes - 1);
    made_bytes("plain zarr/depth/0", first, sizeof first);
    watch(&seen);
    file = open_well(&seen, made_path("plain zarr"));
    depth = stericol_cf_find(file, "depth", NULL);
    assert_non_null(depth);
    assert_int_equal(depth->type, STERICOL_CF_INT16);
    assert_string_equal(stericol_cf_text_of(depth, "units"), "m");
    assert_int_equal(depth->chunked, true);
    assert_int_equal(depth->chunk[0], 2);
    assert_string_equal(stericol_cf_dimension_at(file, depth->dimension[0])->name, "depth");
    assert_int_equal(stericol_cf_read(seen.context, file, depth, NULL, NULL, values), STERICOL_OK);
    assert_same_number(values[0], 1.0);
    assert_same_number(values[1], 300.0);
    assert_nan(values[2]);
    assert_non_null(strstr(stericol_text_string(&seen.notices),
                           "plain zarr: depth: the fill_value of its Zarr array is taken as missing\n"));
    stericol_cf_close(file);
    unwatch(&seen);
}

static void a_path_below_here_needs_no_slash(void **state)
{
    (void)state;
    make_plain(&made_formats[0], "http:");
    assert_int_equal(chdir(TEST_BUILD_FOLDER), 0);
    check_plain(&made_formats[0], "http:");
    (void)remove(made_path("http:"));
}

static void put_number(int group, const char *name, double value)
{
    int variable;

    must(nc_def_var(group, name, NC_DOUBLE, 0, NULL, &variable));
    must(nc_put_var_double(group, variable, &value));
}

static double scalar_of(watched *seen, stericol_cf_file *file, const char *name,
                        const stericol_cf_variable *near)
{
    const stericol_cf_variable *variable = stericol_cf_find(file, name, near);
    double value;

    if (variable == NULL)
        return -1.0;
    assert_int_equal(stericol_cf_read(seen->context, file, variable, NULL, NULL, &value), STERICOL_OK);
    return value;
}

/* Scope by CF 1.10, section 2.7: own group, then those above; paths absolute or relative. */
static void groups_are_searched_upwards(void **state)
{
    int root = made_create(&made_formats[3], "groups.nc"), outer, inner, other, dimension, variable;
    stericol_cf_file *file;
    const stericol_cf_variable *near;
    watched seen;

    (void)state;
    must(nc_def_dim(root, "x", 3, &dimension));
    put_number(root, "a", 1.0);
    put_number(root, "b", 2.0);
    must(nc_def_grp(root, "outer", &outer));
    put_number(outer, "b", 3.0);
    must(nc_def_grp(outer, "inner", &inner));
    put_number(inner, "c", 4.0);
    must(nc_def_dim(inner, "x", 5, &dimension));
    must(nc_def_var(inner, "field", NC_FLOAT, 1, &dimension, &variable));
    must(nc_def_grp(root, "other", &other));
    put_number(other, "c", 5.0);
    put_number(other, "only", 6.0);
    must(nc_close(root));

    watch(&seen);
    file = open_well(&seen, made_path("groups.nc"));
    near = stericol_cf_find(file, "/outer/inner/field", NULL);
    assert_non_null(near);
    assert_string_equal(near->name, "/outer/inner/field");
    assert_string_equal(near->short_name, "field");
    assert_string_equal(near->group, "/outer/inner");
    assert_string_equal(stericol_cf_dimension_at(file, near->dimension[0])->group, "/outer/inner");
    assert_int_equal(stericol_cf_dimension_at(file, near->dimension[0])->length, 5);
    assert_same_number(scalar_of(&seen, file, "a", near), 1.0);
    assert_same_number(scalar_of(&seen, file, "b", near), 3.0);
    assert_same_number(scalar_of(&seen, file, "c", near), 4.0);
    assert_same_number(scalar_of(&seen, file, "only", near), -1.0);
    assert_same_number(scalar_of(&seen, file, "/other/c", near), 5.0);
    assert_same_number(scalar_of(&seen, file, "../../other/only", near), 6.0);
    assert_same_number(scalar_of(&seen, file, "../b", near), 3.0);
    assert_same_number(scalar_of(&seen, file, "./c", near), 4.0);
    assert_same_number(scalar_of(&seen, file, "/b", NULL), 2.0);
    assert_same_number(scalar_of(&seen, file, "b", NULL), 2.0);    /* the exact name first */
    assert_same_number(scalar_of(&seen, file, "only", NULL), 6.0); /* one of that name */
    assert_same_number(scalar_of(&seen, file, "c", NULL), -1.0);   /* two of that name */
    assert_same_number(scalar_of(&seen, file, "/other/c", NULL), 5.0);
    stericol_cf_close(file);
    unwatch(&seen);
}

static void one_file_is_opened_twice(void **state)
{
    stericol_cf_file *first, *second;
    size_t i;
    double values[12];
    watched seen;

    (void)state;
    watch(&seen);
    for (i = 0; i < MADE_FORMATS; i++) {
        make_plain(&made_formats[i], "twice.nc");
        first = open_well(&seen, made_path("twice.nc"));
        second = open_well(&seen, made_path("twice.nc"));
        stericol_cf_close(first);
        assert_int_equal(stericol_cf_read(seen.context, second, stericol_cf_find(second, "temp", NULL), NULL,
                                          NULL, values),
                         STERICOL_OK);
        assert_same_number(values[11], 12.5);
        stericol_cf_close(second);
    }
    unwatch(&seen);
}

static void strings_and_odd_types(void **state)
{
    const char *const labels[3] = {"first ", "", "third"}, *const words[2] = {"two", "words"};
    int root = made_create(&made_formats[3], "strings.nc"), dimension, variable, kind;
    nc_type pair;
    stericol_cf_file *file;
    const stericol_cf_variable *odd;
    char **texts;
    size_t count;
    double value;
    watched seen;

    (void)state;
    must(nc_def_dim(root, "x", 3, &dimension));
    must(nc_def_var(root, "label", NC_STRING, 1, &dimension, &variable));
    must(nc_put_att_string(root, variable, "words", 2, (const char **)(uintptr_t)words));
    must(nc_put_var_string(root, variable, (const char **)(uintptr_t)labels));
    must(nc_def_compound(root, 8, "pair", &pair));
    must(nc_insert_compound(root, pair, "first", 0, NC_INT));
    must(nc_insert_compound(root, pair, "second", 4, NC_INT));
    must(nc_def_var(root, "odd", pair, 0, NULL, &kind));
    must(nc_put_att_string(root, NC_GLOBAL, "uuid", 1, (const char **)(uintptr_t)words));
    must(nc_close(root));

    watch(&seen);
    file = open_well(&seen, made_path("strings.nc"));
    odd = stericol_cf_find(file, "label", NULL);
    assert_string_equal(stericol_cf_text_of(odd, "words"), "two words");
    assert_string_equal(stericol_cf_identity_of(file).id, "two");
    assert_int_equal(stericol_cf_read_texts(seen.context, file, odd, &texts, &count), STERICOL_OK);
    assert_int_equal(count, 3);
    assert_string_equal(texts[0], "first");
    assert_string_equal(texts[1], "");
    assert_string_equal(texts[2], "third");
    stericol_cf_free_texts(texts, count);
    assert_int_equal(stericol_cf_read(seen.context, file, odd, NULL, NULL, &value), STERICOL_INPUT);
    assert_non_null(strstr(stericol_context_message(seen.context),
                           "strings.nc: label: holds text, not numbers; name a variable of numbers"));
    stericol_context_clear(seen.context);
    odd = stericol_cf_find(file, "odd", NULL);
    assert_int_equal(odd->type, STERICOL_CF_OTHER);
    assert_int_equal(stericol_cf_read(seen.context, file, odd, NULL, NULL, &value), STERICOL_INPUT);
    assert_non_null(strstr(stericol_context_message(seen.context),
                           "strings.nc: odd: holds values of a user-defined type, not numbers"));
    stericol_context_clear(seen.context);
    assert_int_equal(stericol_cf_read_texts(seen.context, file, odd, &texts, &count), STERICOL_INPUT);
    assert_null(texts);
    assert_non_null(
        strstr(stericol_context_message(seen.context), "odd: holds no texts; name a text variable"));
    stericol_cf_close(file);
    unwatch(&seen);
}

static void parts_outside_are_refused(void **state)
{
    const size_t start[3] = {0, 2, 0}, count[3] = {1, 2, 1}, none[3] = {0, 0, 0};
    stericol_cf_file *file;
    const stericol_cf_variable *temp;
    double value = -7.0, *all;
    size_t total;
    watched seen;

    (void)state;
    make_plain(&made_formats[0], "parts.nc");
    watch(&seen);
    file = open_well(&seen, made_path("parts.nc"));
    temp = stericol_cf_find(file, "temp", NULL);
    assert_int_equal(stericol_cf_read(seen.context, file, temp, start, count, &value), STERICOL_INPUT);
    assert_non_null(strstr(stericol_context_message(seen.context),
                           "parts.nc: temp: a part outside the variable is asked for"));
    stericol_context_clear(seen.context);
    assert_int_equal(stericol_cf_read(seen.context, file, temp, start, none, &value), STERICOL_OK);
    assert_same_number(value, -7.0);
    assert_int_equal(stericol_cf_read_all(seen.context, file, temp, 11, &all, &total), STERICOL_INPUT);
    assert_null(all);
    assert_non_null(strstr(stericol_context_message(seen.context),
                           "parts.nc: temp: holds more than the 11 values that can be used here"));
    stericol_cf_close(file);
    unwatch(&seen);
}

static void what_is_no_file_is_refused(void **state)
{
    (void)state;
    assert_refused(made_path("absent.nc"), "there is no such file; check the name");
    assert_refused(TEST_BUILD_FOLDER, "is a folder and holds no Zarr store; give a file");
    (void)remove(made_path("pipe"));
    assert_int_equal(mkfifo(made_path("pipe"), 0600), 0);
    assert_refused(made_path("pipe"), "is a pipe, not a file; give a file or a Zarr folder");
    (void)remove(made_path("pipe"));
    assert_refused("/dev/null", "is a device, not a file; give a file or a Zarr folder");
    made_bytes("empty.nc", "", 0);
    assert_refused(made_path("empty.nc"), "is empty; copy it again");
    made_bytes("locked.nc", "CDF\001", 4);
    assert_int_equal(chmod(made_path("locked.nc"), 0), 0);
    if (geteuid() != 0) /* the superuser may read everything: then the header is short */
        assert_refused(made_path("locked.nc"), "cannot be opened (Permission denied); check its permissions");
    else
        assert_refused(made_path("locked.nc"), "is damaged: it ends within its header; copy it again");
    (void)remove(made_path("locked.nc"));
}

static void what_is_not_netcdf_is_named(void **state)
{
    static const struct {
        const char *bytes;
        size_t count;
        const char *message;
    } cases[] = {
        {"depth temp\n0 12.5\n", 18, "is a text file, not NetCDF; give a NetCDF or Zarr file"},
        {"CDL", 3, "is a text file, not NetCDF; give a NetCDF or Zarr file"},
        {"<!DOCTYPE html><p>No", 20, "is a web page; fetch the file again: the server sent a page instead"},
        {"\037\213\010\000abcd", 8, "is compressed with gzip; unpack it first (gunzip)"},
        {"GRIB\000\000\000\002", 8, "is a GRIB file; convert it to NetCDF first"},
        {"PK\003\004abcd", 8,
         "is a ZIP archive; unpack it; or, for a Zarr store in a ZIP, give file://PATH#mode=nczarr,zip"},
        {"CDF\007\000\000\000\000", 8,
         "is NetCDF of an unknown version; convert it to NetCDF-4 or CDF-5 first"},
        {"\001\002\003\004\005", 5, "is not NetCDF; give a NetCDF or Zarr file"},
        {"\211HDF\r\n\032\n", 8,
         "is cut short: it ends within its first block, after 8 bytes; copy it again"},
    };
    size_t i;

    (void)state;
    for (i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        made_bytes("other.nc", cases[i].bytes, cases[i].count);
        assert_refused(made_path("other.nc"), cases[i].message);
    }
}

static void urls_are_refused(void **state)
{
    static const char *const urls[] = {
        "http://example.org/temp.nc",
        "https://example.org/store#mode=nczarr,s3",
        "s3://bucket/store#mode=zarr",
        "file:///tmp/store",
        "file:///tmp/store#mode=bytes",
        "file:///tmp/store#mode=nczarr,s3",
        "file:///tmp/store#mode=",
        "file:///tmp/store#mode=file",
        "file:///tmp/store#mode=nczarr,file&aws.profile=x",
        "file://#mode=nczarr,file",
    };
    size_t i;

    (void)state;
    for (i = 0; i < sizeof urls / sizeof urls[0]; i++)
        assert_refused(urls[i],
                       "is a URL that is not read; fetch the file and give its path; a local Zarr store is "
                       "file://PATH#mode=nczarr,file");
    assert_refused("file:///nowhere/at/all#mode=nczarr,file", "there is no such file; check the name");
    made_remove_folder(made_path("version 3"));
    assert_int_equal(mkdir(made_path("version 3"), 0700), 0);
    made_bytes("version 3/zarr.json", "{}", 2);
    assert_refused(made_path("version 3"),
                   "is a Zarr store of version 3, which the NetCDF library does not read; write "
                   "it as Zarr version 2 or as NetCDF");
}

static int interrupts;

static void count_interrupt(int number)
{
    (void)number;
    interrupts++;
}

/* The guard must hold whatever the program does with its signals, and leave them as they were. */
static void signals_of_the_program_stay(void **state)
{
    struct sigaction mine = {.sa_handler = count_interrupt}, found;
    watched seen;
    stericol_cf_file *file;

    (void)state;
    make_plain(&made_formats[3], "signals.nc");
    watch(&seen);
    assert_int_equal(sigaction(SIGINT, &mine, NULL), 0);
    assert_ptr_not_equal(signal(SIGCHLD, SIG_IGN), SIG_ERR); /* children vanish unseen */
    file = open_well(&seen, made_path("signals.nc"));
    stericol_cf_close(file);
    assert_refused(made_path("absent.nc"), "there is no such file; check the name");
    assert_int_equal(sigaction(SIGINT, NULL, &found), 0);
    assert_ptr_equal(found.sa_handler, count_interrupt);
    assert_int_equal(raise(SIGINT), 0);
    assert_int_equal(interrupts, 1);
    (void)signal(SIGCHLD, SIG_DFL);
    (void)signal(SIGINT, SIG_DFL);
    unwatch(&seen);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(every_format_gives_the_same_records),
        cmocka_unit_test(a_store_is_opened_by_its_url_too),
        cmocka_unit_test(a_plain_zarr_store_is_read),
        cmocka_unit_test(a_path_below_here_needs_no_slash),
        cmocka_unit_test(groups_are_searched_upwards),
        cmocka_unit_test(one_file_is_opened_twice),
        cmocka_unit_test(strings_and_odd_types),
        cmocka_unit_test(parts_outside_are_refused),
        cmocka_unit_test(what_is_no_file_is_refused),
        cmocka_unit_test(what_is_not_netcdf_is_named),
        cmocka_unit_test(urls_are_refused),
        cmocka_unit_test(signals_of_the_program_stay),
    };

    return cmocka_run_group_tests_name("opening and headers", tests, NULL, NULL);
}
