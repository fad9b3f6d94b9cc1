/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A file that is made under another name in the same folder and takes its own name only when it is whole.
 * Plain POSIX; what is inside the file does not matter here.
 */
#ifndef STERICOL_CF_STAGING_H
#define STERICOL_CF_STAGING_H

#include "base/context.h"

#include <signal.h>
#include <stdbool.h>

typedef struct stericol_cf_staging {
    char *path;              /* as the user gave it, for messages */
    char *target;            /* absolute, symbolic links followed */
    char *folder;            /* of the target, absolute */
    char *temporary;         /* absolute, in the same folder */
    int handle;              /* open on the temporary file; -1 when closed */
    unsigned long long held; /* bytes reserved for it on disk */
    bool replace;
    volatile sig_atomic_t present; /* whether the temporary file is there; read by a signal handler */
} stericol_cf_staging;

/*
 * Judges `path` and makes an empty temporary file beside it, with the permissions that the umask leaves.
 *
 * A symbolic link is followed once, here: the file that it points to is replaced and the link stays.
 * STERICOL_USAGE when `path` exists and !replace.  STERICOL_OUTPUT when it is empty, a folder, a device or
 * pipe, a link that leads nowhere, write-protected, its name too long, its folder absent or not writable.
 * STERICOL_MEMORY.  Call stericol_cf_staging_clear() afterwards in every case.
 */
stericol_status stericol_cf_staging_begin(stericol_context *context, const char *path, bool replace,
                                          stericol_cf_staging *staging);

/* As stericol_cf_reserve() for the temporary file; STERICOL_OUTPUT for `variable` (NULL: the whole file) when
 * there is no room. */
stericol_status stericol_cf_staging_reserve(stericol_context *context, stericol_cf_staging *staging,
                                            const char *variable, unsigned long long more);

/*
 * Syncs the temporary file, gives it the mode of the file that it replaces, and renames it; then syncs the
 * folder. Without `replace` a file that has appeared meanwhile is not overwritten (STERICOL_USAGE).  On
 * failure the temporary file is removed and an existing file is as it was.
 */
stericol_status stericol_cf_staging_commit(stericol_context *context, stericol_cf_staging *staging);

/* Removes the temporary file if it is still there, and releases everything. */
void stericol_cf_staging_clear(stericol_cf_staging *staging);

/* Fails with STERICOL_OUTPUT for `variable` (NULL: the whole file), saying what the operating system's
   `error` (0: not known) means for this file; a full disk is recognised even where `error` does not tell. */
stericol_status stericol_cf_staging_fail(stericol_context *context, const stericol_cf_staging *staging,
                                         int error, const char *variable, const char *what);

/*
 * Makes sure that the file open on `handle` can grow by `more` bytes: reserves them where the file system
 * can, else looks whether they are free.  *held is what is reserved so far (0 at the start).  0, or ENOSPC,
 * EDQUOT, EFBIG.
 *
 * Why: HDF5 1.10 does not survive a failed write.  H5Fclose() then leaves a file half closed, and the process
 * crashes when it ends.  So a full disk must be met here, before HDF5 meets it.
 */
int stericol_cf_reserve(int handle, unsigned long long *held, unsigned long long more);

#endif
