/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Help, manual page and completion, all from the option tables.  A text's `failed` tells of memory that ran
 * out. */
#ifndef STERICOL_JOB_HELP_H
#define STERICOL_JOB_HELP_H

#include "base/text.h"
#include "job/options.h"

enum { STERICOL_HELP_WIDTH = 80 };

/* Adds the help of one command: lines of at most STERICOL_HELP_WIDTH columns. */
void stericol_help_command(stericol_text *text, const stericol_command *command);
/* Adds the help of the program: commands, cautions, exit codes. */
void stericol_help_program(stericol_text *text);
/* Adds the manual page stericol(1), written in the man(7) macros. */
void stericol_manual_page(stericol_text *text);
/* Adds a completion script for bash. */
void stericol_completion_script(stericol_text *text);

#endif
