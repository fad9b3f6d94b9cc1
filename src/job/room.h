/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the files of this room share and nobody else sees. */
#ifndef STERICOL_JOB_ROOM_H
#define STERICOL_JOB_ROOM_H

#include "job/settings.h"

#include <stdbool.h>
#include <stddef.h>

/* ---- settings ---- */

typedef struct stericol_entry {
    const stericol_option *option;
    char **values; /* owned */
    size_t count;
    stericol_origin origin; /* of the values; NONE where there are none */
    size_t line;            /* of the first in the settings file, 0 otherwise */
} stericol_entry;

struct stericol_settings {
    const stericol_command *command;
    stericol_entry *entries; /* one an option in table order, the positional one last */
    size_t entry_count;
    char *file; /* the settings file; NULL for none */
};

/* Never NULL for a name of the command's table. */
stericol_entry *stericol_entry_named(const stericol_settings *settings, const char *name);
/* Copies and adds a value; STERICOL_MEMORY. */
stericol_status stericol_entry_add(stericol_context *context, stericol_entry *entry, const char *value,
                                   stericol_origin origin, size_t line);
void stericol_entry_clear(stericol_entry *entry);
/* Given, a switch: and on. */
bool stericol_entry_is_given(const stericol_entry *entry);
/* Value or default; NULL for neither. */
const char *stericol_entry_text(const stericol_entry *entry);

/*
 * Reads settings->file and adds what it says to the entries that the command line does not have.
 * STERICOL_INPUT, STERICOL_USAGE, STERICOL_MEMORY.
 */
stericol_status stericol_settings_read_file(stericol_context *context, stericol_settings *settings);

/*
 * Holds the settings against the rules.  Where a value of the settings file and one of the command line
 * contradict, that of the file is dropped with a note: the command line wins.  STERICOL_USAGE: a rule is
 * broken.
 */
stericol_status stericol_settings_check(stericol_context *context, stericol_settings *settings);
/* False where a rule ties the option to something that is not so: then its default plays no part. */
bool stericol_option_plays_part(const stericol_settings *settings, const stericol_option *option);

/* NULL when `value` fits the option, else what is wrong, owned by `phrase` or static. */
const char *stericol_option_refusal(const stericol_option *option, const char *value, stericol_text *phrase);
/* "a number from 0 to 1 (m)": what the option takes, for help and messages; adds nothing for free text. */
void stericol_option_allowed(const stericol_option *option, stericol_text *text);

/* ---- what the system says ---- */

/* The first line of ROOT/PATH, without its end; false where it cannot be read. */
bool stericol_system_line(const char *root, const char *path, char *line, size_t room);
/* The number behind `key` (with its colon, if any) in a file of "key number" lines. */
bool stericol_system_value(const char *root, const char *path, const char *key, unsigned long long *value);

/*
 * Calls `visit` for the folder of this process's control group of the controller and for every folder above
 * it up to the mount point: `version` 2 or 1, `folder` as the system knows it (without `root`).
 */
typedef void stericol_group_visit(void *user, const char *root, int version, const char *folder);
void stericol_visit_groups(const char *root, const char *controller, stericol_group_visit *visit, void *user);

/* As stericol_free_memory() with the limit of the address space given, SIZE_MAX for none. */
size_t stericol_free_memory_within(const char *root, size_t address_space);

#endif
