/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Texts that help and manual page share. */
#ifndef STERICOL_JOB_WORDS_H
#define STERICOL_JOB_WORDS_H

#include "base/text.h"
#include "job/options.h"

#include <stdbool.h>
#include <stddef.h>

/* "earlier FILE" with its dashes, or the metavar of a positional argument. */
void stericol_words_option(stericol_text *text, const stericol_command *command,
                           const stericol_option *option);
/* The sentence of help, then what is allowed, repetition and default, each where there is something to say.
 */
void stericol_words_help(stericol_text *text, const stericol_option *option);

/* The positional argument (if any), then the options of the table; index < stericol_words_rows(). */
size_t stericol_words_rows(const stericol_command *command);
const stericol_option *stericol_words_row(const stericol_command *command, size_t index);
/* True where row `index` begins a group. */
bool stericol_words_group_begins(const stericol_command *command, size_t index);

/* Paragraphs of caution, and of what all commands have in common. */
extern const char *const stericol_cautions[];
extern const size_t stericol_caution_count;
extern const char *const stericol_manners[];
extern const size_t stericol_manner_count;

/* Exit codes in ascending order: index < stericol_words_exit_codes(). */
size_t stericol_words_exit_codes(void);
void stericol_words_exit_code(size_t index, stericol_text *code, const char **meaning);

#endif
