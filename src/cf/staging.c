/* SPDX-License-Identifier: GPL-3.0-or-later */
#define _XOPEN_SOURCE 700 /* realpath() is in the XSI part of POSIX */

#include "cf/staging.h"

#include "base/text.h"
#include "cf/write.h"

#include <errno.h>
#include <fcntl.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <sys/statvfs.h>
#include <time.h>
#include <unistd.h>

enum { TRIES = 32 };
/* Below this much room (bytes) a failed write is taken for a full disk: HDF5 writes in pieces of up to a
 * chunk. */
#define FULL_BELOW ((unsigned long long)1 << 16)

static void describe(int error, char *buffer, size_t room)
{
    if (strerror_r(error, buffer, room) != 0)
        buffer[0] = '\0';
}

stericol_status stericol_cf_staging_fail(stericol_context *context, const stericol_cf_staging *staging,
                                         int error, const char *variable, const char *what)
{
    struct statvfs room;
    char words[128];

    if (error == EDQUOT)
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, variable,
                             "make room or write somewhere else", "%s: the quota is used up", what);
    if (error == EFBIG)
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, variable,
                             "raise the limit on file sizes or write somewhere else",
                             "%s: the file grows beyond the largest size allowed", what);
    if (error == ENOSPC || (error == 0 && statvfs(staging->folder, &room) == 0 && room.f_frsize > 0 &&
                            room.f_bavail < FULL_BELOW / room.f_frsize + 1))
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, variable,
                             "make room or write somewhere else", "%s: the disk is full", what);
    if (error == 0)
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, variable, "write somewhere else", "%s",
                             what);
    describe(error, words, sizeof words);
    return stericol_fail(context, STERICOL_OUTPUT, staging->path, variable, "write somewhere else", "%s: %s",
                         what, words);
}

/* Why the folder of the output cannot be used. */
static stericol_status refuse_folder(stericol_context *context, const stericol_cf_staging *staging,
                                     const char *folder, int error)
{
    switch (error) {
    case ENOMEM:
        return stericol_fail_memory(context, 0, "a path");
    case ENOENT:
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, NULL, "make the folder first",
                             "there is no folder %s", folder);
    case ENOTDIR:
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, NULL, "give another name",
                             "%s is not a folder", folder);
    default:
        return stericol_cf_staging_fail(context, staging, error, NULL, "its folder cannot be reached");
    }
}

/* Folder and target as absolute paths: an absolute path can neither be taken for a URL nor move with the
 * working folder. */
static stericol_status place(stericol_context *context, stericol_cf_staging *staging)
{
    const char *path = staging->path, *slash = strrchr(path, '/');
    stericol_status status = STERICOL_OK;
    stericol_text target = {0};
    struct stat found;
    char *folder;

    folder = slash == NULL   ? stericol_copy_string(".")
             : slash == path ? stericol_copy_string("/")
                             : stericol_copy_bytes(path, (size_t)(slash - path));
    if (folder == NULL)
        return stericol_fail_memory(context, 0, "a path");
    staging->folder = realpath(folder, NULL);
    if (staging->folder == NULL || stat(staging->folder, &found) != 0)
        status = refuse_folder(context, staging, folder, errno);
    else if (!S_ISDIR(found.st_mode))
        status = refuse_folder(context, staging, folder, ENOTDIR);
    free(folder);
    if (status != STERICOL_OK)
        return status;
    stericol_text_format(&target, "%s/%s", strcmp(staging->folder, "/") == 0 ? "" : staging->folder,
                         slash == NULL ? path : slash + 1);
    staging->target = stericol_text_take(&target);
    return staging->target == NULL ? stericol_fail_memory(context, 0, "a path") : STERICOL_OK;
}

/* The same for a symbolic link: what it leads to. */
static stericol_status follow(stericol_context *context, stericol_cf_staging *staging)
{
    const char *slash;

    staging->target = realpath(staging->path, NULL);
    if (staging->target == NULL) {
        if (errno == ENOMEM)
            return stericol_fail_memory(context, 0, "a path");
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, NULL,
                             "remove the link or give another name", "is a symbolic link that leads nowhere");
    }
    slash = strrchr(staging->target, '/');
    staging->folder = slash == staging->target
                          ? stericol_copy_string("/")
                          : stericol_copy_bytes(staging->target, (size_t)(slash - staging->target));
    return staging->folder == NULL ? stericol_fail_memory(context, 0, "a path") : STERICOL_OK;
}

/* What stands there already must be a plain file that may be replaced. */
static stericol_status judge_existing(stericol_context *context, const stericol_cf_staging *staging)
{
    struct stat there;

    if (stat(staging->target, &there) != 0) {
        if (errno == ENOENT)
            return STERICOL_OK;
        return stericol_cf_staging_fail(context, staging, errno, NULL, "cannot be written");
    }
    if (S_ISDIR(there.st_mode))
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, NULL, "give the name of a file",
                             "is a folder");
    if (!S_ISREG(there.st_mode))
        return stericol_fail(context, STERICOL_OUTPUT, staging->path, NULL, "give the name of a file",
                             "is a device, pipe or socket: NetCDF needs a plain file");
    if (!staging->replace)
        return stericol_fail(context, STERICOL_USAGE, staging->path, NULL, "give another name or --replace",
                             "exists already");
    if (access(staging->target, W_OK) != 0)
        return stericol_cf_staging_fail(context, staging, errno, NULL, "may not be replaced");
    return STERICOL_OK;
}

static stericol_status judge(stericol_context *context, stericol_cf_staging *staging)
{
    const char *path = staging->path;
    stericol_status status;
    struct stat link;

    if (path[0] == '\0')
        return stericol_fail(context, STERICOL_OUTPUT, "the output", NULL, "give the name of a file",
                             "has an empty name");
    if (stericol_ends_with(path, "/"))
        return stericol_fail(context, STERICOL_OUTPUT, path, NULL, "give the name of a file",
                             "is the name of a folder");
    if (lstat(path, &link) == 0 && S_ISLNK(link.st_mode))
        status = follow(context, staging);
    else
        status = place(context, staging);
    if (status != STERICOL_OK)
        return status;
    /* NetCDF-C 4.9 takes a backslash for a separator, or drops it. */
    if (strchr(staging->folder, '\\') != NULL)
        return stericol_fail(context, STERICOL_OUTPUT, path, NULL, "write somewhere else",
                             "the NetCDF library cannot write below a folder with a backslash in its name");
    return judge_existing(context, staging);
}

/* 64 bits that nobody can guess; where the system has none to give, bits that are at least seldom the same.
 */
static uint64_t draw_bits(const void *somewhere)
{
    const int handle = open("/dev/urandom", O_RDONLY | O_CLOEXEC);
    uint64_t bits = 0;
    struct timespec now;

    if (handle >= 0) {
        const ssize_t got = read(handle, &bits, sizeof bits);

        close(handle);
        if (got == (ssize_t)sizeof bits)
            return bits;
    }
    clock_gettime(CLOCK_REALTIME, &now);
    bits = (uint64_t)now.tv_sec * 1000000007u + (uint64_t)now.tv_nsec;
    return (bits * 6364136223846793005u + (uint64_t)getpid()) ^ (uint64_t)(uintptr_t)somewhere;
}

stericol_status stericol_cf_staging_begin(stericol_context *context, const char *path, bool replace,
                                          stericol_cf_staging *staging)
{
    stericol_status status;

    memset(staging, 0, sizeof *staging);
    staging->handle = -1;
    staging->replace = replace;
    staging->path = stericol_copy_string(path);
    if (staging->path == NULL)
        return stericol_fail_memory(context, 0, "a path");
    status = judge(context, staging);
    if (status != STERICOL_OK)
        return status;
    for (int tried = 0; tried < TRIES; tried++) {
        stericol_text name = {0};

        free(staging->temporary);
        stericol_text_format(&name, "%s/.stericol-%016llx.part",
                             strcmp(staging->folder, "/") == 0 ? "" : staging->folder,
                             (unsigned long long)draw_bits(staging));
        staging->temporary = stericol_text_take(&name);
        if (staging->temporary == NULL)
            return stericol_fail_memory(context, 0, "a path");
        staging->handle = open(staging->temporary, O_RDWR | O_CREAT | O_EXCL | O_CLOEXEC,
                               S_IRUSR | S_IWUSR | S_IRGRP | S_IWGRP | S_IROTH | S_IWOTH);
        if (staging->handle >= 0) {
            staging->present = 1;
            return STERICOL_OK;
        }
        if (errno != EEXIST)
            break;
    }
    return stericol_cf_staging_fail(context, staging, errno, NULL, "no file can be made in its folder");
}

stericol_status stericol_cf_staging_reserve(stericol_context *context, stericol_cf_staging *staging,
                                            const char *variable, unsigned long long more)
{
    enum { MEGA = 1000000 };
    stericol_text what = {0};
    stericol_status status;
    int error;

    if (!staging->present) /* a signal handler took it */
        return STERICOL_OK;
    error = stericol_cf_reserve(staging->handle, &staging->held, more);
    if (error == 0)
        return STERICOL_OK;
    stericol_text_format(&what, "cannot be written, up to %llu MB more may be needed", more / MEGA + 1);
    status = stericol_cf_staging_fail(context, staging, error, variable, stericol_text_string(&what));
    stericol_text_free(&what);
    return status;
}

static void remove_temporary(stericol_cf_staging *staging)
{
    if (staging->handle >= 0)
        close(staging->handle);
    staging->handle = -1;
    if (staging->present)
        unlink(staging->temporary);
    staging->present = 0;
}

/* The library wrote by name into the very file that was made here, and wrote something. */
static bool is_ours(const stericol_cf_staging *staging, off_t *size)
{
    struct stat named, held;

    if (stat(staging->temporary, &named) != 0 || fstat(staging->handle, &held) != 0)
        return false;
    *size = held.st_size;
    return named.st_dev == held.st_dev && named.st_ino == held.st_ino && held.st_size > 0;
}

/* link() fails where the name is taken, rename() would overwrite; some file systems know no hard links. */
static int take_free_name(const stericol_cf_staging *staging)
{
    struct stat there;

    if (link(staging->temporary, staging->target) == 0) {
        unlink(staging->temporary);
        return 0;
    }
    if (errno == EEXIST)
        return EEXIST;
    if (lstat(staging->target, &there) == 0)
        return EEXIST;
    return rename(staging->temporary, staging->target) == 0 ? 0 : errno;
}

static void sync_folder(stericol_context *context, const stericol_cf_staging *staging)
{
    const int handle = open(staging->folder, O_RDONLY | O_DIRECTORY | O_CLOEXEC);

    if (handle < 0)
        return; /* a folder that may be written but not read */
    if (fsync(handle) != 0 && errno == EIO)
        stericol_notice(context, STERICOL_WARNING, staging->path, NULL,
                        "is written, but its folder could not be synced: a loss of power may still undo it");
    close(handle);
}

stericol_status stericol_cf_staging_commit(stericol_context *context, stericol_cf_staging *staging)
{
    struct stat old;
    off_t size = 0;
    int error;

    if (!is_ours(staging, &size)) {
        remove_temporary(staging);
        return stericol_cf_staging_fail(context, staging, 0, NULL,
                                        "the temporary file was removed or changed by someone else");
    }
    error = 0;
    if (staging->replace && stat(staging->target, &old) == 0 &&
        fchmod(staging->handle, old.st_mode & (S_IRWXU | S_IRWXG | S_IRWXO)) != 0)
        error = errno;
    /* Gives back what was reserved beyond the end. */
    if (error == 0 && ftruncate(staging->handle, size) != 0)
        error = errno;
    if (error == 0 && fsync(staging->handle) != 0)
        error = errno;
    if (close(staging->handle) != 0 && error == 0)
        error = errno;
    staging->handle = -1;
    if (error == 0) {
        if (!staging->replace)
            error = take_free_name(staging);
        else if (rename(staging->temporary, staging->target) != 0)
            error = errno;
    }
    if (error != 0) {
        remove_temporary(staging);
        if (error == EEXIST)
            return stericol_fail(context, STERICOL_USAGE, staging->path, NULL,
                                 "give another name or --replace", "was made by someone else meanwhile");
        return stericol_cf_staging_fail(context, staging, error, NULL, "could not be finished");
    }
    staging->present = 0;
    sync_folder(context, staging);
    return STERICOL_OK;
}

void stericol_cf_staging_clear(stericol_cf_staging *staging)
{
    remove_temporary(staging);
    free(staging->path);
    free(staging->target);
    free(staging->folder);
    free(staging->temporary);
    memset(staging, 0, sizeof *staging);
    staging->handle = -1;
}

bool stericol_cf_same_file(const char *path_a, const char *path_b)
{
    struct stat a, b;

    return stat(path_a, &a) == 0 && stat(path_b, &b) == 0 && a.st_dev == b.st_dev && a.st_ino == b.st_ino;
}
