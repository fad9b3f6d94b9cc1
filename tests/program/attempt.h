/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Runs of the program under limits, interrupted, or on a full disk, and what must hold when they fail. */
#ifndef STERICOL_TESTS_ATTEMPT_H
#define STERICOL_TESTS_ATTEMPT_H

#include "program/run.h"

enum { ATTEMPT_MOST_WORDS = 64, ATTEMPT_MOST_LINES = 8 };

/* Zero is "as usual" everywhere. */
typedef struct attempt {
    const char *words[ATTEMPT_MOST_WORDS]; /* behind the program's name, ended by NULL */
    const char *folder;                    /* where it runs */
    const char *output;                    /* a file that standard output goes to; then result.output is "" */
    size_t most_memory, most_file;         /* bytes: address space, size of a file */
    int signal;                            /* sent once `when` holds; `again`: whenever it does */
    bool again;
    bool (*when)(const char *folder);
    char *lines[ATTEMPT_MOST_LINES]; /* of attempt_add() */
} attempt;

/* Runs it and forgets its words; a run that takes more than two minutes is killed and fails the test. */
run_result attempt_run(attempt *how);
/* Words parted by blanks behind those that are there; '...' keeps blanks inside a word. */
void attempt_add(attempt *how, const char *line);

/* Every name in a folder, sorted, with size and a checksum: the same text for the same folder. */
char *folder_state(const char *folder);
/* True where the run ended with `code` and said one single line, "stericol: ... ; ...", that holds each of
   `parts` (ended by NULL) and nothing else; else says what is wrong.  Meant for runs with --quiet. */
bool refused_well(const run_result *result, int code, const char *const *parts, const char *what);
/* False, and said, where a sanitizer reported something. */
bool no_report(const run_result *result, const char *what);
/* The same folder as `before`, a folder_state(); else says what is wrong. */
bool folder_untouched(const char *folder, const char *before, const char *what);

/* A file's bytes; free(). */
unsigned char *read_bytes(const char *folder, const char *name, size_t *count);
void write_bytes(const char *folder, const char *name, const unsigned char *bytes, size_t count);

/* true where the build has the address sanitizer, which needs address space without limit. */
bool attempt_sanitized(void);

#endif
