/* SPDX-License-Identifier: GPL-3.0-or-later */
#define _XOPEN_SOURCE 700 /* nftw() */
#include "made_files.h"

#include <ftw.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

const made_format made_formats[MADE_FORMATS] = {
    {"classic", 0, false, false, false},
    {"64-bit offset", NC_64BIT_OFFSET, false, false, false},
    {"64-bit data", NC_64BIT_DATA, true, false, false},
    {"NetCDF-4", NC_NETCDF4, true, true, false},
    {"Zarr", NC_NETCDF4, true, true, true},
};

const char *made_path(const char *name)
{
    static char buffers[4][1024];
    static unsigned turn;
    char *path = buffers[turn++ % 4];

    assert_true(snprintf(path, sizeof buffers[0], "%s/%s", TEST_BUILD_FOLDER, name) < (int)sizeof buffers[0]);
    return path;
}

static int remove_entry(const char *path, const struct stat *found, int kind, struct FTW *place)
{
    (void)found;
    (void)kind;
    (void)place;
    return remove(path);
}

void made_remove_folder(const char *path)
{
    (void)nftw(path, remove_entry, 16, FTW_DEPTH | FTW_PHYS);
}

int made_create(const made_format *format, const char *name)
{
    const char *path = made_path(name);
    char url[2048];
    int handle;

    made_remove_folder(path);
    (void)snprintf(url, sizeof url, "file://%s#mode=nczarr,file", path);
    must(nc_create(format->zarr ? url : path, format->mode | NC_CLOBBER, &handle));
    return handle;
}

void made_bytes(const char *name, const void *bytes, size_t count)
{
    FILE *file = fopen(made_path(name), "wb");

    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, count, file), count);
    assert_int_equal(fclose(file), 0);
}

unsigned char *made_read(const char *path, size_t *count)
{
    FILE *file = fopen(path, "rb");
    unsigned char *bytes;
    long length;

    assert_non_null(file);
    assert_int_equal(fseek(file, 0, SEEK_END), 0);
    length = ftell(file);
    rewind(file);
    bytes = malloc((size_t)length + 1);
    assert_non_null(bytes);
    assert_int_equal(fread(bytes, 1, (size_t)length, file), length);
    fclose(file);
    *count = (size_t)length;
    return bytes;
}

static void keep_notice(void *user, stericol_notice_level level, const char *text)
{
    stericol_text_format(user, "%s %s\n", level == STERICOL_WARNING ? "warning" : "note", text);
}

void watch(watched *seen)
{
    *seen = (watched){.context = stericol_context_new()};
    assert_non_null(seen->context);
    stericol_context_on_notice(seen->context, keep_notice, &seen->notices);
}

void unwatch(watched *seen)
{
    stericol_context_free(seen->context);
    stericol_text_free(&seen->notices);
}

stericol_cf_file *open_well(watched *seen, const char *path)
{
    stericol_cf_file *file = NULL;

    if (stericol_cf_open(seen->context, path, &file) != STERICOL_OK) {
        print_error("%s\n", stericol_context_message(seen->context));
        fail();
    }
    assert_non_null(file);
    return file;
}

void assert_refused(const char *path, const char *message)
{
    stericol_cf_file *file = NULL;
    stericol_text whole = {0};
    watched seen;

    watch(&seen);
    stericol_text_format(&whole, "%s: %s", path, message);
    assert_int_equal(stericol_cf_open(seen.context, path, &file), STERICOL_INPUT);
    assert_null(file);
    assert_string_equal(stericol_context_message(seen.context), stericol_text_string(&whole));
    stericol_text_free(&whole);
    unwatch(&seen);
}

unsigned draw(draws *from, unsigned below)
{
    from->state = from->state * 6364136223846793005ULL + 1442695040888963407ULL;
    return (unsigned)(from->state >> 33) % below;
}
