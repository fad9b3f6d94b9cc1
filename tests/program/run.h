/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Runs the built program as a user would, and tells what it printed and how it ended.  STERICOL_PROGRAM is
 * the path of the binary, a compile definition of the test.
 */
#ifndef STERICOL_TESTS_RUN_H
#define STERICOL_TESTS_RUN_H

#include <stdbool.h>
#include <stddef.h>

/* What a run left; both texts end with a zero byte. */
typedef struct run_result {
    int exit_code; /* 128 + signal where a signal ended it */
    char *output;  /* standard output */
    char *errors;  /* standard error */
} run_result;

/*
 * Runs `arguments` (ended by NULL, the first is the program: STERICOL_PROGRAM), standard input empty, and
 * waits for the end.  `environment`, "NAME=value" ended by NULL, is added to the test's own; may be NULL.
 * `folder` is where it runs; NULL: where the test does.  Fails the test where nothing could be started.
 */
run_result run_captured(const char *const *arguments, const char *const *environment, const char *folder);
/* The same for one line: words parted by blanks follow the program's path; '...' keeps blanks inside a word.
 */
run_result run_line(const char *line, const char *folder);
void run_free(run_result *result);

/* Fails, with both texts printed, unless the exit code is `code`. */
void run_expect_code(const run_result *result, int code, const char *file, int line);
#define assert_exit(result, code) run_expect_code((result), (code), __FILE__, __LINE__)
/* Fails, with the text printed, unless `text` holds `part`. */
void run_expect_part(const char *text, const char *part, const char *file, int line);
#define assert_holds(text, part) run_expect_part((text), (part), __FILE__, __LINE__)

/* A new empty folder below `base` (TEST_BUILD_FOLDER), whose name begins with `name`; free the path with
 * free(). */
char *run_new_folder(const char *base, const char *name);
/* Removes a folder with the files in it (it has no folders) and frees `path`. */
void run_remove_folder(char *path);
/* Writes a text file into a folder. */
void run_write_file(const char *folder, const char *name, const char *text);
/* Whether a file is there. */
bool run_file_exists(const char *folder, const char *name);

#endif
