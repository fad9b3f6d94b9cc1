/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The progress bar.  One thread uses it. */
#ifndef STERICOL_JOB_PROGRESS_H
#define STERICOL_JOB_PROGRESS_H

#include "stericol/status.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdio.h>

/* In the order of the choices of --progress. */
typedef enum stericol_progress_mode {
    STERICOL_PROGRESS_AUTO,   /* a bar on a terminal, nothing elsewhere */
    STERICOL_PROGRESS_ALWAYS, /* a bar on a terminal, else a line every 10 % */
    STERICOL_PROGRESS_NEVER
} stericol_progress_mode;

typedef struct stericol_progress_options {
    FILE *stream; /* borrowed */
    stericol_progress_mode mode;
    const char *what;            /* what is going on, one or two words; copied */
    bool terminal;               /* of the stream; see stericol_progress_options_for() */
    size_t width;                /* columns of the terminal; 0: ask before each drawing */
    double (*clock)(void *user); /* s, never backwards; NULL: the system's */
    void *user;
} stericol_progress_options;

typedef struct stericol_progress stericol_progress;

/* Options for a stream, with `terminal` as isatty(3) and TERM (not "dumb") have it. */
stericol_progress_options stericol_progress_options_for(FILE *stream, stericol_progress_mode mode,
                                                        const char *what);

/* STERICOL_MEMORY; then *progress is NULL.  Every function below takes NULL and does nothing. */
stericol_status stericol_progress_new(stericol_context *context, const stericol_progress_options *options,
                                      stericol_progress **progress);
/*
 * `done` of `whole` units of work are done; draws at most ten times a second.  The time left is shown once 2
 * s have gone and 2 % are done.  A count that goes back, is no number or has no whole is not drawn.
 */
void stericol_progress_update(stericol_progress *progress, double done, double whole);
/* Takes the bar away, so that a message can be printed; the next update draws it again. */
void stericol_progress_hide(stericol_progress *progress);
/* Takes the bar away and frees. */
void stericol_progress_end(stericol_progress *progress);

#endif
