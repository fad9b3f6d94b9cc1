/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Path arguments: @list files and globs become plain paths. */
#ifndef STERICOL_JOB_PATHS_H
#define STERICOL_JOB_PATHS_H

#include "job/settings.h"
#include "stericol/status.h"

#include <stddef.h>

typedef struct stericol_paths {
    char **path;
    size_t count;
} stericol_paths;

void stericol_paths_free(stericol_paths *paths);

/*
 * Expands path arguments in their order.
 *
 * A path that exists is taken as it is, whatever characters it holds.  Else "@list.txt" stands for the paths
 * of a text file, one a line: blanks around them and a carriage return are trimmed, empty lines and lines
 * that start with # are skipped, each path may be a glob but not another list; relative paths are relative to
 * the working folder.  Else a path with *, ? or [ is a glob (glob(3)), matches in the byte order of their
 * names.  Else, and for URLs, the path is passed on as it is: whoever opens it says what is wrong.
 *
 * STERICOL_INPUT: a list that cannot be read or holds no path, a glob without a match, a folder that a glob
 * cannot read; STERICOL_MEMORY.  On failure *paths is empty.  `option` names the option in messages.
 */
stericol_status stericol_expand_paths(stericol_context *context, const char *option,
                                      const char *const *arguments, size_t count, stericol_paths *paths);

/* The same for an option of the settings. */
stericol_status stericol_settings_paths(stericol_context *context, const stericol_settings *settings,
                                        const char *name, stericol_paths *paths);

#endif
