/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What a path leads to.  Everything that can be told without the NetCDF library is told here, because its own
 * messages name neither the fault nor the remedy, and because some paths (pipes, URLs) would make it wait.
 */
#define _XOPEN_SOURCE 700 /* realpath() */
#include "cf/room.h"

#include "base/text.h"

#include <errno.h>
#include <fcntl.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

static const char hdf5_signature[8] = {'\211', 'H', 'D', 'F', '\r', '\n', '\032', '\n'};

void stericol_cf_location_clear(stericol_cf_location *location)
{
    free(location->target);
    free(location->local);
    *location = (stericol_cf_location){0};
}

static bool exists(const char *folder, const char *name)
{
    stericol_text path = {0};
    struct stat found;
    bool there;

    stericol_text_format(&path, "%s/%s", folder, name);
    there = !path.failed && stat(stericol_text_string(&path), &found) == 0;
    stericol_text_free(&path);
    return there;
}

/* Whether the store carries NetCDF's own additions; without them it is read as plain Zarr. */
static bool is_netcdf_store(const char *folder)
{
    char head[4096];
    stericol_text path = {0};
    size_t length = 0;
    FILE *file;

    if (exists(folder, ".nczarr") || exists(folder, ".nczgroup"))
        return true;
    stericol_text_format(&path, "%s/.zgroup", folder);
    file = path.failed ? NULL : fopen(stericol_text_string(&path), "rb");
    stericol_text_free(&path);
    if (file != NULL) {
        length = fread(head, 1, sizeof head - 1, file);
        fclose(file);
    }
    head[length] = '\0';
    return strstr(head, "_NCZARR") != NULL || strstr(head, "_nczarr") != NULL;
}

/* "file:///absolute/path#mode=..." of a local path. */
static char *store_url(const char *local, const char *mode)
{
    stericol_text url = {0};
    char *whole = realpath(local, NULL);

    if (whole != NULL)
        stericol_text_format(&url, "file://%s#mode=%s", whole, mode);
    else
        url.failed = true;
    free(whole);
    return stericol_text_take(&url);
}

static stericol_status locate_folder(stericol_context *context, const char *path,
                                     stericol_cf_location *location)
{
    const char *folder = location->local;

    if (exists(folder, "zarr.json"))
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "write it as Zarr version 2 or as NetCDF",
                             "is a Zarr store of version 3, which the NetCDF library does not read");
    if (!exists(folder, ".zgroup") && !exists(folder, ".zarray") && !exists(folder, ".nczarr"))
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "give a file",
                             "is a folder and holds no Zarr store");
    location->storage = STERICOL_CF_STORAGE_ZARR;
    location->bytes = 0;
    if (location->target == NULL)
        location->target = store_url(folder, is_netcdf_store(folder) ? "nczarr,file" : "zarr,file");
    if (location->target == NULL)
        return stericol_fail_memory(context, 0, "the name of a file");
    return STERICOL_OK;
}

/* A short word for what the first bytes show, and what to do; NULL when they show nothing known. */
static const char *guess_content(const unsigned char *head, size_t length, const char **remedy)
{
    static const struct {
        const char *start;
        size_t length;
        const char *what, *remedy;
    } known[] = {
        {"\037\213", 2, "is compressed with gzip", "unpack it first (gunzip)"},
        {"BZh", 3, "is compressed with bzip2", "unpack it first (bunzip2)"},
        {"\375\067zXZ", 5, "is compressed with xz", "unpack it first (unxz)"},
        {"\050\265\057\375", 4, "is compressed with Zstandard", "unpack it first (unzstd)"},
        {"PK\003\004", 4, "is a ZIP archive",
         "unpack it; or, for a Zarr store in a ZIP, give file://PATH#mode=nczarr,zip"},
        {"GRIB", 4, "is a GRIB file", "convert it to NetCDF first"},
        {"\016\003\023\001", 4, "is an HDF4 file", "convert it to NetCDF first"},
        {"<!DOCTYPE", 9, "is a web page", "fetch the file again: the server sent a page instead"},
        {"<!doctype", 9, "is a web page", "fetch the file again: the server sent a page instead"},
        {"<html", 5, "is a web page", "fetch the file again: the server sent a page instead"},
        {"CDF", 3, "is NetCDF of an unknown version", "convert it to NetCDF-4 or CDF-5 first"},
    };
    size_t i, plain = 0;

    for (i = 0; i < sizeof known / sizeof known[0]; i++) {
        if (length >= known[i].length && memcmp(head, known[i].start, known[i].length) == 0) {
            *remedy = known[i].remedy;
            return known[i].what;
        }
    }
    for (i = 0; i < length; i++)
        plain += head[i] >= 32 || (head[i] >= 9 && head[i] <= 13);
    if (plain < length)
        return NULL;
    *remedy = "give a NetCDF or Zarr file";
    return "is a text file, not NetCDF";
}

static bool is_classic(const unsigned char *head, size_t length)
{
    return length >= 4 && memcmp(head, "CDF", 3) == 0 && (head[3] == 1 || head[3] == 2 || head[3] == 5);
}

/* HDF5 File Format Specification 3.0, II.A: the signature stands at 0, 512, 1024, 2048 and so on. */
static bool find_hdf5(int handle, unsigned long long bytes, unsigned long long *place)
{
    unsigned long long at;
    char found[sizeof hdf5_signature];

    for (at = 0; at + sizeof found <= bytes; at = at == 0 ? 512 : 2 * at) {
        if (pread(handle, found, sizeof found, (off_t)at) != (ssize_t)sizeof found)
            return false;
        if (memcmp(found, hdf5_signature, sizeof found) == 0) {
            *place = at;
            return true;
        }
    }
    return false;
}

static stericol_status judge_content(stericol_context *context, const char *path, int handle,
                                     stericol_cf_location *location)
{
    unsigned char head[512];
    const char *what, *remedy = "give a NetCDF or Zarr file";
    ssize_t length = pread(handle, head, sizeof head, 0);

    if (length < 0)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "copy it again", "cannot be read (%s)",
                             strerror(errno));
    if (is_classic(head, (size_t)length)) {
        location->storage = STERICOL_CF_STORAGE_CLASSIC;
        return STERICOL_OK;
    }
    if (find_hdf5(handle, location->bytes, &location->superblock)) {
        location->storage = STERICOL_CF_STORAGE_HDF5;
        return STERICOL_OK;
    }
    what = guess_content(head, (size_t)length, &remedy);
    return stericol_fail(context, STERICOL_INPUT, path, NULL, remedy, "%s",
                         what != NULL ? what : "is not NetCDF");
}

static stericol_status locate_file(stericol_context *context, const char *path,
                                   stericol_cf_location *location)
{
    /* The flag keeps a pipe that takes the file's place from making us wait. */
    int handle = open(location->local, O_RDONLY | O_NONBLOCK | O_CLOEXEC);
    stericol_text target = {0};
    stericol_status status;

    if (handle < 0)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "check its permissions",
                             "cannot be opened (%s)", strerror(errno));
    status = judge_content(context, path, handle, location);
    close(handle);
    if (status != STERICOL_OK)
        return status;
    /* A path that starts with "/" or "./" is never taken for a URL, whatever stands in it. */
    stericol_text_format(&target, "%s%s", location->local[0] == '/' ? "" : "./", location->local);
    location->target = stericol_text_take(&target);
    if (location->target == NULL)
        return stericol_fail_memory(context, 0, "the name of a file");
    return STERICOL_OK;
}

static stericol_status locate_local(stericol_context *context, const char *path,
                                    stericol_cf_location *location)
{
    struct stat found;

    if (stat(location->local, &found) != 0) {
        if (errno == ENOENT || errno == ENOTDIR)
            return stericol_fail(context, STERICOL_INPUT, path, NULL, "check the name",
                                 "there is no such file");
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "check its permissions",
                             "cannot be opened (%s)", strerror(errno));
    }
    location->bytes = (unsigned long long)found.st_size;
    location->changed = (long long)found.st_mtime;
    if (S_ISDIR(found.st_mode))
        return locate_folder(context, path, location);
    if (!S_ISREG(found.st_mode))
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "give a file or a Zarr folder",
                             "is %s, not a file",
                             S_ISFIFO(found.st_mode)   ? "a pipe"
                             : S_ISSOCK(found.st_mode) ? "a socket"
                                                       : "a device");
    if (found.st_size == 0)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "copy it again", "is empty");
    if (location->target != NULL) { /* a store in one file, named by its URL */
        location->storage = STERICOL_CF_STORAGE_ZARR;
        return STERICOL_OK;
    }
    return locate_file(context, path, location);
}

/* "mode=nczarr,file" and the like: the words that name a local Zarr store, and nothing else. */
static bool is_store_mode(const char *fragment)
{
    static const char *const allowed[] = {"nczarr", "zarr", "xarray", "noxarray", "file", "zip"};
    bool store = false;

    if (!stericol_starts_with(fragment, "mode="))
        return false;
    for (fragment += strlen("mode="); *fragment != '\0';) {
        size_t length = strcspn(fragment, ","), i;

        for (i = 0; i < sizeof allowed / sizeof allowed[0]; i++) {
            if (strlen(allowed[i]) == length && strncmp(fragment, allowed[i], length) == 0)
                break;
        }
        if (i == sizeof allowed / sizeof allowed[0])
            return false;
        store = store || i < 3;
        fragment += length;
        fragment += *fragment == ',';
    }
    return store;
}

static stericol_status locate_url(stericol_context *context, const char *path, stericol_cf_location *location)
{
    const char *place = path + strlen("file://");
    const char *fragment = stericol_starts_with(path, "file://") ? strchr(place, '#') : NULL;

    if (fragment == NULL || fragment == place || !is_store_mode(fragment + 1))
        return stericol_fail(
            context, STERICOL_INPUT, path, NULL,
            "fetch the file and give its path; a local Zarr store is file://PATH#mode=nczarr,file",
            "is a URL that is not read");
    location->local = stericol_copy_bytes(place, (size_t)(fragment - place));
    if (location->local == NULL)
        return stericol_fail_memory(context, 0, "the name of a file");
    location->target = store_url(location->local, fragment + strlen("#mode="));
    if (location->target == NULL && errno != ENOMEM)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "check the name", "there is no such file");
    if (location->target == NULL)
        return stericol_fail_memory(context, 0, "the name of a file");
    return locate_local(context, path, location);
}

stericol_status stericol_cf_locate(stericol_context *context, const char *path,
                                   stericol_cf_location *location)
{
    stericol_status status;

    *location = (stericol_cf_location){0};
    if (strstr(path, "://") != NULL && access(path, F_OK) != 0) {
        status = locate_url(context, path, location);
    } else {
        location->local = stericol_copy_string(path);
        status = location->local == NULL ? stericol_fail_memory(context, 0, "the name of a file")
                                         : locate_local(context, path, location);
    }
    if (status != STERICOL_OK)
        stericol_cf_location_clear(location);
    return status;
}
