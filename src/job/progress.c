/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/progress.h"

#include "base/context.h"
#include "base/text.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>
#include <sys/ioctl.h>
#include <time.h>
#include <unistd.h>

/* Chosen: smooth to the eye, and nothing that a slow terminal line feels. */
#define BETWEEN_DRAWINGS 0.1 /* s */
/* A rate measured on less is guesswork. */
#define EARLIEST_ESTIMATE 2.0 /* s */
#define LEAST_SHARE 0.02

enum { WIDTH_UNKNOWN = 80, WIDEST_BAR = 40, NARROWEST_BAR = 8 };

struct stericol_progress {
    stericol_progress_options options;
    char *what;
    double began, drawn; /* s by the clock; drawn is NaN before the first drawing */
    double share;        /* of the last update */
    size_t columns;      /* on the screen now; 0: no bar */
    int tenths;          /* of lines: the last that was written, -1 for none */
};

static double system_seconds(void *user)
{
    struct timespec now;

    (void)user;
    clock_gettime(CLOCK_MONOTONIC, &now);
    return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

stericol_progress_options stericol_progress_options_for(FILE *stream, stericol_progress_mode mode,
                                                        const char *what)
{
    const char *term = getenv("TERM");
    int number = fileno(stream);

    return (stericol_progress_options){.stream = stream,
                                       .mode = mode,
                                       .what = what,
                                       .terminal = number >= 0 && isatty(number) == 1 && term != NULL &&
                                                   strcmp(term, "dumb") != 0};
}

stericol_status stericol_progress_new(stericol_context *context, const stericol_progress_options *options,
                                      stericol_progress **progress)
{
    stericol_progress *made = calloc(1, sizeof *made);

    *progress = NULL;
    if (made == NULL)
        return stericol_fail_memory(context, sizeof *made, "the progress bar");
    made->options = *options;
    made->what = stericol_copy_string(options->what);
    if (made->what == NULL) {
        free(made);
        return stericol_fail_memory(context, 0, "the progress bar");
    }
    if (made->options.clock == NULL)
        made->options.clock = system_seconds;
    made->began = made->options.clock(made->options.user);
    made->drawn = (double)NAN;
    made->tenths = -1;
    *progress = made;
    return STERICOL_OK;
}

/* ---- what is said ---- */

/* Coarse, as the rate is: steps of 5 s, of minutes, of ten minutes. */
static void add_time_left(stericol_text *text, double seconds)
{
    if (seconds <= 55)
        stericol_text_format(text, ", about %.0f s left", 5 * fmax(1, ceil(seconds / 5)));
    else if (seconds <= 3540)
        stericol_text_format(text, ", about %.0f min left", ceil(seconds / 60));
    else if (seconds <= 360000)
        stericol_text_format(text, ", about %.0f h %02.0f min left", floor(ceil(seconds / 600) / 6),
                             10 * fmod(ceil(seconds / 600), 6));
    else
        stericol_text_format(text, ", about %.0f days left", ceil(seconds / 86400));
}

/* "42 %, about 20 s left".  Rounded down, so that 100 means done. */
static void add_state(stericol_text *text, const stericol_progress *progress, double now)
{
    double elapsed = now - progress->began;

    stericol_text_format(text, "%.0f %%", floor(100 * progress->share));
    if (progress->share < 1 && progress->share >= LEAST_SHARE && elapsed >= EARLIEST_ESTIMATE)
        add_time_left(text, elapsed * (1 - progress->share) / progress->share);
}

static size_t screen_width(const stericol_progress *progress)
{
    struct winsize size;

    if (progress->options.width != 0)
        return progress->options.width;
    if (ioctl(fileno(progress->options.stream), TIOCGWINSZ, &size) == 0 && size.ws_col != 0)
        return size.ws_col;
    return WIDTH_UNKNOWN;
}

static void add_bar(stericol_text *text, size_t cells, double share)
{
    size_t full = (size_t)floor(share * (double)cells);

    stericol_text_add(text, "[");
    for (size_t i = 0; i < cells; i++)
        stericol_text_add(text, i < full ? "#" : ".");
    stericol_text_add(text, "] ");
}

/* "what [####....] 42 %, about 20 s left", without the bar and then without the word where the screen is
 * narrow. */
static void compose(stericol_text *line, const stericol_progress *progress, double now, size_t width)
{
    stericol_text state = {0};
    size_t taken;

    add_state(&state, progress, now);
    taken = strlen(progress->what) + 1 + state.length;
    if (taken <= width) {
        stericol_text_format(line, "%s ", progress->what);
        if (width - taken >= NARROWEST_BAR + 3)
            add_bar(line, width - taken - 3 < WIDEST_BAR ? width - taken - 3 : WIDEST_BAR, progress->share);
    }
    stericol_text_add_bytes(line, stericol_text_string(&state), state.length < width ? state.length : width);
    stericol_text_free(&state);
}

/* ---- drawing ---- */

/* Progress that cannot be shown is no reason to stop: the outcome of writing is not looked at. */
static void put(const stericol_progress *progress, const stericol_text *text)
{
    size_t written = fwrite(stericol_text_string(text), 1, text->length, progress->options.stream);

    (void)written;
    fflush(progress->options.stream);
}

static void draw(stericol_progress *progress, double now)
{
    stericol_text line = {0};
    size_t width = screen_width(progress), columns;

    stericol_text_add(&line, "\r");
    compose(&line, progress, now,
            width > 1 ? width - 1 : 1); /* the last column would wrap on some terminals */
    columns = line.length - 1;
    for (size_t i = columns; i < progress->columns && i + 1 < width; i++)
        stericol_text_add(&line, " ");
    put(progress, &line);
    progress->columns = columns;
    stericol_text_free(&line);
}

static void write_line(stericol_progress *progress, double now)
{
    stericol_text line = {0};
    int tenths = (int)floor(10 * progress->share);

    if (tenths <= progress->tenths || tenths == 0)
        return;
    progress->tenths = tenths;
    stericol_text_format(&line, "%s ", progress->what);
    add_state(&line, progress, now);
    stericol_text_add(&line, "\n");
    put(progress, &line);
    stericol_text_free(&line);
}

void stericol_progress_update(stericol_progress *progress, double done, double whole)
{
    double now;

    if (progress == NULL || progress->options.mode == STERICOL_PROGRESS_NEVER || !(whole > 0) ||
        !isfinite(whole) || !(done / whole >= progress->share))
        return;
    progress->share = fmin(done / whole, 1);
    now = progress->options.clock(progress->options.user);
    if (!progress->options.terminal) {
        if (progress->options.mode == STERICOL_PROGRESS_ALWAYS)
            write_line(progress, now);
        return;
    }
    if (progress->columns != 0 && progress->share < 1 && now - progress->drawn < BETWEEN_DRAWINGS)
        return;
    progress->drawn = now;
    draw(progress, now);
}

void stericol_progress_hide(stericol_progress *progress)
{
    stericol_text line = {0};

    if (progress == NULL || progress->columns == 0)
        return;
    stericol_text_add(&line, "\r");
    for (size_t i = 0; i < progress->columns; i++)
        stericol_text_add(&line, " ");
    stericol_text_add(&line, "\r");
    put(progress, &line);
    stericol_text_free(&line);
    progress->columns = 0;
}

void stericol_progress_end(stericol_progress *progress)
{
    if (progress == NULL)
        return;
    stericol_progress_hide(progress);
    free(progress->what);
    free(progress);
}
