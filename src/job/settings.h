/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The settings of one run: every option of its command with its value and where that came from.
 *
 * Asking for a name that the command has no option of, or by a getter of another kind, is a caller's mistake
 * (assert).
 */
#ifndef STERICOL_JOB_SETTINGS_H
#define STERICOL_JOB_SETTINGS_H

#include "base/text.h"
#include "job/options.h"
#include "stericol/status.h"

#include <stdbool.h>
#include <stddef.h>

typedef enum stericol_origin {
    STERICOL_ORIGIN_NONE, /* no value */
    STERICOL_ORIGIN_DEFAULT,
    STERICOL_ORIGIN_SETTINGS, /* the settings file */
    STERICOL_ORIGIN_COMMAND_LINE
} stericol_origin;

typedef struct stericol_settings stericol_settings;

/* What the command line asks for. */
typedef enum stericol_request_kind {
    STERICOL_REQUEST_RUN,
    STERICOL_REQUEST_HELP, /* of `command`, or of the program where that is NULL */
    STERICOL_REQUEST_VERSION
} stericol_request_kind;

typedef struct stericol_request {
    stericol_request_kind kind;
    const stericol_command *command;
    stericol_settings *settings; /* RUN only; the receiver frees it */
} stericol_request;

/*
 * Reads a whole command line, argv[0] being the program, and the settings file that it names.  --help
 * anywhere (before a "--") asks for help, whatever else is wrong.
 *
 * STERICOL_USAGE: no or unknown command and all that stericol_settings_parse() refuses; STERICOL_INPUT: a
 * settings file that cannot be read.  On failure *request is all zero.
 */
stericol_status stericol_request_parse(stericol_context *context, int argc, char *const argv[],
                                       stericol_request *request);

/*
 * Reads the arguments after the command's name: --name value, --name=value, positional ones; "--" ends the
 * options. Values are checked by kind; the rules of the command are checked when all is read.
 *
 * STERICOL_USAGE: an option unknown, repeated, without value or with a bad one; positional arguments that the
 * command does not take; a rule broken; a bad line in the settings file.  STERICOL_INPUT: a settings file
 * that cannot be read. STERICOL_MEMORY.  On failure *settings is NULL.
 */
stericol_status stericol_settings_parse(stericol_context *context, const stericol_command *command,
                                        size_t count, char *const arguments[], stericol_settings **settings);
/* NULL is allowed. */
void stericol_settings_free(stericol_settings *settings);

const stericol_command *stericol_settings_command(const stericol_settings *settings);
/* Given on the command line or in the settings file (a switch: and on). */
bool stericol_settings_is_set(const stericol_settings *settings, const char *name);
/* *line: of the settings file, 0 otherwise; may be NULL. */
stericol_origin stericol_settings_origin(const stericol_settings *settings, const char *name, size_t *line);

/* The value or the default as text; of a repeatable one the first; NULL where there is none.  Any kind. */
const char *stericol_settings_text(const stericol_settings *settings, const char *name);
/* NUMBER.  NaN where there is no value, or where it is one of the words that the option allows. */
double stericol_settings_number(const stericol_settings *settings, const char *name);
/* WHOLE; 0 where there is no value. */
long long stericol_settings_whole(const stericol_settings *settings, const char *name);
/* SIZE, bytes; 0 where there is no value. */
size_t stericol_settings_size(const stericol_settings *settings, const char *name);
/* SWITCH. */
bool stericol_settings_on(const stericol_settings *settings, const char *name);
/* CHOICE: its position among the option's choices, from 0; the count of choices where there is no value. */
size_t stericol_settings_choice(const stericol_settings *settings, const char *name);
/* All values of an option of any kind in the order given, owned by the settings; NULL and 0 where there are
 * none. */
const char *const *stericol_settings_list(const stericol_settings *settings, const char *name, size_t *count);

/*
 * The effective settings as the text of a settings file: values given and defaults, one `name = value` a
 * line, the order of the table; --settings itself, and defaults that play no part (what a rule ties to
 * another choice), are left out.  Reading the text back gives the same values.
 */
void stericol_settings_write(const stericol_settings *settings, stericol_text *text);

#endif
