/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Progress, log and signals. */
#include "support/testing.h"

#include "base/text.h"
#include "job/log.h"
#include "job/progress.h"
#include "job/signals.h"

#include <jansson.h>
#include <pthread.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

/* ---- progress ---- */

#define BLANKS_5 "     "
#define BLANKS_55                                                                                            \
    BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5 BLANKS_5
#define BLANKS_70 BLANKS_55 BLANKS_5 BLANKS_5 BLANKS_5

struct screen {
    FILE *stream;
    char *bytes;
    size_t length;
    size_t seen; /* of the bytes, by the checks so far */
    double now;  /* s */
    stericol_progress *progress;
};

static double tell_time(void *user)
{
    const struct screen *screen = user;

    return screen->now;
}

static void open_screen(struct screen *screen, stericol_progress_mode mode, bool terminal, size_t width)
{
    stericol_progress_options options = {.mode = mode,
                                         .what = "change",
                                         .terminal = terminal,
                                         .width = width,
                                         .clock = tell_time,
                                         .user = screen};

    screen->now = 1000;
    screen->seen = 0;
    screen->stream = open_memstream(&screen->bytes, &screen->length);
    assert_non_null(screen->stream);
    options.stream = screen->stream;
    assert_int_equal(stericol_progress_new(NULL, &options, &screen->progress), STERICOL_OK);
}

/* What was written since the last call is `expected`. */
static void assert_written(struct screen *screen, const char *expected)
{
    fflush(screen->stream);
    assert_string_equal(screen->bytes + screen->seen, expected);
    screen->seen = screen->length;
}

static void update_at(struct screen *screen, double seconds, double done)
{
    screen->now = 1000 + seconds;
    stericol_progress_update(screen->progress, done, 200);
}

static void close_screen(struct screen *screen)
{
    stericol_progress_end(screen->progress);
    fclose(screen->stream);
    free(screen->bytes);
}

static void a_bar_is_drawn_and_taken_away(void **state)
{
    struct screen screen;

    (void)state;
    open_screen(&screen, STERICOL_PROGRESS_AUTO, true, 80);
    update_at(&screen, 0, 0);
    assert_written(&screen, "\rchange [........................................] 0 %");
    update_at(&screen, 0.05, 10); /* too soon */
    assert_written(&screen, "");
    update_at(&screen, 0.2, 10);
    assert_written(&screen, "\rchange [##......................................] 5 %");
    update_at(&screen, 4, 50); /* 4 s for a quarter: 12 s for the rest, in steps of 5 s */
    assert_written(&screen, "\rchange [##########..............................] 25 %, about 15 s left");
    update_at(&screen, 100, 199.9); /* 99.95 %: not rounded up to 100 */
    assert_written(&screen, "\rchange [#######################################.] 99 %, about 5 s left ");
    stericol_progress_hide(screen.progress);
    assert_written(&screen, "\r" BLANKS_70 "\r");
    stericol_progress_hide(screen.progress);
    assert_written(&screen, "");
    update_at(&screen, 100, 200); /* drawn again at once after it was hidden */
    assert_written(&screen, "\rchange [########################################] 100 %");
    stericol_progress_end(screen.progress);
    screen.progress = NULL;
    assert_written(&screen, "\r" BLANKS_55 "\r");
    close_screen(&screen);
}

/* The times follow from the rate so far: elapsed (1 - share) / share. */
static void the_time_left_is_honest(void **state)
{
    static const struct {
        double seconds, done;
        const char *state;
    } rows[] = {{1.9, 100, "50 %"},                         /* too early */
                {1000, 3, "1 %"},                           /* too little done */
                {2, 100, "50 %, about 5 s left"},           /* 2 s */
                {55, 100, "50 %, about 55 s left"},         /* 55 s */
                {56, 100, "50 %, about 1 min left"},        /* 56 s */
                {300, 100, "50 %, about 5 min left"},       /* 300 s */
                {301, 100, "50 %, about 6 min left"},       /* 301 s */
                {4000, 100, "50 %, about 1 h 10 min left"}, /* 66.7 min */
                {7200, 100, "50 %, about 2 h 00 min left"}, /* 120 min */
                {4e5, 100, "50 %, about 5 days left"}};     /* 4.6 days */

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        struct screen screen;
        const char *state_of_line;

        open_screen(&screen, STERICOL_PROGRESS_AUTO, true, 80);
        update_at(&screen, rows[i].seconds, rows[i].done);
        fflush(screen.stream);
        state_of_line = strchr(screen.bytes, ']');
        assert_non_null(state_of_line);
        assert_string_equal(state_of_line + 2, rows[i].state);
        close_screen(&screen);
    }
}

static void a_narrow_screen_is_kept_to(void **state)
{
    static const struct {
        size_t width;
        const char *line;
    } rows[] = {{1, "\r5"},
                {5, "\r50 %"},
                {12, "\rchange 50 %"},
                {22, "\rchange 50 %"},
                {23, "\rchange [####....] 50 %"}};

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        struct screen screen;

        open_screen(&screen, STERICOL_PROGRESS_ALWAYS, true, rows[i].width);
        update_at(&screen, 0, 100);
        assert_written(&screen, rows[i].line);
        close_screen(&screen);
    }
}

static void lines_are_written_where_there_is_no_terminal(void **state)
{
    struct screen screen;

    (void)state;
    open_screen(&screen, STERICOL_PROGRESS_ALWAYS, false, 80);
    update_at(&screen, 0, 0);
    update_at(&screen, 1, 19);
    assert_written(&screen, "");
    update_at(&screen, 1, 20);
    assert_written(&screen, "change 10 %\n");
    update_at(&screen, 2, 39);
    assert_written(&screen, "");
    update_at(&screen, 10, 100); /* 10 s for a half */
    assert_written(&screen, "change 50 %, about 10 s left\n");
    stericol_progress_hide(screen.progress);
    update_at(&screen, 20, 200);
    update_at(&screen, 20, 200);
    assert_written(&screen, "change 100 %\n");
    close_screen(&screen);
}

static void nothing_is_written_where_nothing_was_asked_for(void **state)
{
    static const struct {
        stericol_progress_mode mode;
        bool terminal;
    } rows[] = {
        {STERICOL_PROGRESS_AUTO, false}, {STERICOL_PROGRESS_NEVER, true}, {STERICOL_PROGRESS_NEVER, false}};
    stericol_progress_options options;

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        struct screen screen;

        open_screen(&screen, rows[i].mode, rows[i].terminal, 80);
        update_at(&screen, 1, 100);
        assert_written(&screen, "");
        close_screen(&screen);
    }
    stericol_progress_update(NULL, 1, 2);
    stericol_progress_hide(NULL);
    stericol_progress_end(NULL);
    options = stericol_progress_options_for(tmpfile(), STERICOL_PROGRESS_AUTO, "change");
    assert_false(options.terminal);
    fclose(options.stream);
}

static void senseless_counts_are_not_drawn(void **state)
{
    struct screen screen;

    (void)state;
    open_screen(&screen, STERICOL_PROGRESS_AUTO, true, 24);
    stericol_progress_update(screen.progress, 1, 0);
    stericol_progress_update(screen.progress, (double)NAN, 10);
    stericol_progress_update(screen.progress, 1, (double)INFINITY);
    stericol_progress_update(screen.progress, 1, (double)NAN);
    assert_written(&screen, "");
    update_at(&screen, 0.5, 100);
    assert_written(&screen, "\rchange [####.....] 50 %");
    update_at(&screen, 1, 50);
    assert_written(&screen, "");
    update_at(&screen, 1.5, 400); /* more than the whole */
    assert_written(&screen, "\rchange [########] 100 %");
    close_screen(&screen);
}

/* ---- log ---- */

#define LOG_FILE TEST_BUILD_FOLDER "/log_under_test.jsonl"

static json_t *read_line(FILE *file)
{
    char line[1024];
    json_t *object;

    assert_non_null(fgets(line, sizeof line, file));
    object = json_loads(line, JSON_REJECT_DUPLICATES, NULL);
    if (!json_is_object(object))
        fail_msg("no object: %s", line);
    return object;
}

static void assert_member(json_t *object, const char *name, const char *value)
{
    const char *text = json_string_value(json_object_get(object, name));

    if (text == NULL || strcmp(text, value) != 0)
        fail_msg("%s is '%s', expected '%s'", name, text == NULL ? "(no text)" : text, value);
}

static void log_lines_are_objects(void **state)
{
    const stericol_log_field fields[] = {
        stericol_log_text("file", "gr\xc3\xbc\xc3\x9f\xff\"\n"), stericol_log_text("nothing", NULL),
        stericol_log_number("share", 0.1), stericol_log_number("lost", (double)NAN),
        stericol_log_whole("bytes", -7)};
    stericol_log *log;
    json_t *object;
    FILE *file;
    struct tm parts = {0};
    const char *time_text;
    int milliseconds, used = 0;

    (void)state;
    unlink(LOG_FILE);
    assert_int_equal(stericol_log_open(NULL, LOG_FILE, &log), STERICOL_OK);
    stericol_log_write(log, STERICOL_LOG_INFO, "begin", "it begins", NULL, 0);
    stericol_log_write(log, STERICOL_LOG_ERROR, "end", "a\nb", fields, sizeof fields / sizeof fields[0]);
    assert_int_equal(stericol_log_close(NULL, log), STERICOL_OK);
    assert_int_equal(stericol_log_open(NULL, LOG_FILE, &log), STERICOL_OK); /* a second run adds to it */
    stericol_log_write(log, STERICOL_LOG_WARNING, "again", "once more", NULL, 0);
    assert_int_equal(stericol_log_close(NULL, log), STERICOL_OK);
    file = fopen(LOG_FILE, "r");
    assert_non_null(file);
    object = read_line(file);
    assert_member(object, "level", "info");
    assert_member(object, "event", "begin");
    assert_member(object, "message", "it begins");
    /* ISO 8601-1:2019, 5.4.2.1: extended format, Z for UTC. */
    time_text = json_string_value(json_object_get(object, "time"));
    assert_non_null(time_text);
    assert_int_equal(sscanf(time_text, "%4d-%2d-%2dT%2d:%2d:%2d.%3dZ%n", &parts.tm_year, &parts.tm_mon,
                            &parts.tm_mday, &parts.tm_hour, &parts.tm_min, &parts.tm_sec, &milliseconds,
                            &used),
                     7);
    assert_int_equal(used, strlen("2005-01-01T00:00:00.000Z"));
    assert_int_equal(strlen(time_text), used);
    json_decref(object);
    object = read_line(file);
    assert_member(object, "level", "error");
    assert_member(object, "message", "a\\x0Ab");
    assert_member(object, "file", "gr\xc3\xbc\xc3\x9f\\xFF\"\\x0A");
    assert_true(json_is_null(json_object_get(object, "nothing")));
    assert_true(json_is_null(json_object_get(object, "lost")));
    assert_same_number(json_real_value(json_object_get(object, "share")), 0.1);
    assert_int_equal(json_integer_value(json_object_get(object, "bytes")), -7);
    json_decref(object);
    object = read_line(file);
    assert_member(object, "level", "warning");
    json_decref(object);
    assert_int_equal(fgetc(file), EOF);
    fclose(file);
    unlink(LOG_FILE);
}

static void a_log_that_cannot_be_written_is_told(void **state)
{
    stericol_context *context = stericol_context_new();
    stericol_log *log;

    (void)state;
    assert_int_equal(stericol_log_open(context, TEST_BUILD_FOLDER "/absent/log", &log), STERICOL_OUTPUT);
    assert_null(log);
    assert_string_equal(
        stericol_context_message(context), TEST_BUILD_FOLDER
        "/absent/log: the log cannot be opened: No such file or directory; give another file to --log");
    stericol_context_clear(context);
    /* A device that is always full (null(4)). */
    assert_int_equal(stericol_log_open(context, "/dev/full", &log), STERICOL_OK);
    stericol_log_write(log, STERICOL_LOG_INFO, "begin", "lost", NULL, 0);
    stericol_log_write(log, STERICOL_LOG_INFO, "end", "lost too", NULL, 0);
    assert_int_equal(stericol_log_close(context, log), STERICOL_OUTPUT);
    assert_string_equal(stericol_context_message(context),
                        "/dev/full: the log could not be written: No space left on device; make room for it, "
                        "or give another file to "
                        "--log");
    stericol_context_free(context);
    stericol_log_write(NULL, STERICOL_LOG_INFO, "no", "log", NULL, 0);
    assert_int_equal(stericol_log_close(NULL, NULL), STERICOL_OK);
}

static void *write_many(void *log)
{
    for (int i = 0; i < 200; i++)
        stericol_log_write(log, STERICOL_LOG_INFO, "many",
                           "a message of some length, so that lines could mix", NULL, 0);
    return NULL;
}

static void threads_may_share_a_log(void **state)
{
    pthread_t other;
    stericol_log *log;
    FILE *file;

    (void)state;
    unlink(LOG_FILE);
    assert_int_equal(stericol_log_open(NULL, LOG_FILE, &log), STERICOL_OK);
    assert_int_equal(pthread_create(&other, NULL, write_many, log), 0);
    write_many(log);
    pthread_join(other, NULL);
    assert_int_equal(stericol_log_close(NULL, log), STERICOL_OK);
    file = fopen(LOG_FILE, "r");
    assert_non_null(file);
    for (int i = 0; i < 400; i++)
        json_decref(read_line(file));
    assert_int_equal(fgetc(file), EOF);
    fclose(file);
    unlink(LOG_FILE);
}

/* ---- signals ---- */

/* What a child does; its exit code where no signal ends it. */
typedef int child_function(void);

static int run_child(child_function *child)
{
    pid_t process;
    int outcome = 0;

    fflush(NULL);
    process = fork();
    assert_true(process >= 0);
    if (process == 0)
        _exit(child());
    assert_int_equal(waitpid(process, &outcome, 0), process);
    return outcome;
}

static int is_interrupted(void)
{
    if (stericol_signals_begin(NULL) != STERICOL_OK || stericol_interrupted() ||
        stericol_interrupting_signal() != 0)
        return 1;
    stericol_signals_raise_again(); /* nothing to raise */
    raise(SIGTERM);
    if (!stericol_interrupted())
        return 2;
    raise(SIGINT); /* the second waits for the tidying up as well */
    if (stericol_interrupting_signal() != SIGTERM)
        return 3;
    stericol_signals_raise_again();
    return 4;
}

static int is_interrupted_thrice(void)
{
    if (stericol_signals_begin(NULL) != STERICOL_OK)
        return 1;
    raise(SIGINT);
    raise(SIGINT);
    raise(SIGINT);
    return 2;
}

static int ignores_what_was_ignored(void)
{
    signal(SIGINT, SIG_IGN);
    if (stericol_signals_begin(NULL) != STERICOL_OK)
        return 1;
    raise(SIGINT);
    return stericol_interrupted() ? 2 : 0;
}

static int outlives_a_closed_pipe(void)
{
    int ends[2];

    if (stericol_signals_begin(NULL) != STERICOL_OK || pipe(ends) != 0)
        return 1;
    close(ends[0]);
    return write(ends[1], "x", 1) == -1 && !stericol_interrupted() ? 0 : 2;
}

static void signals_interrupt_and_end_as_they_should(void **state)
{
    int outcome = run_child(is_interrupted);

    (void)state;
    assert_true(WIFSIGNALED(outcome));
    assert_int_equal(WTERMSIG(outcome), SIGTERM);
    outcome = run_child(is_interrupted_thrice);
    assert_true(WIFSIGNALED(outcome));
    assert_int_equal(WTERMSIG(outcome), SIGINT);
    outcome = run_child(ignores_what_was_ignored);
    assert_true(WIFEXITED(outcome));
    assert_int_equal(WEXITSTATUS(outcome), 0);
    outcome = run_child(outlives_a_closed_pipe);
    assert_true(WIFEXITED(outcome));
    assert_int_equal(WEXITSTATUS(outcome), 0);
}

int main(void)
{
    const struct CMUnitTest tests[] = {cmocka_unit_test(a_bar_is_drawn_and_taken_away),
                                       cmocka_unit_test(the_time_left_is_honest),
                                       cmocka_unit_test(a_narrow_screen_is_kept_to),
                                       cmocka_unit_test(lines_are_written_where_there_is_no_terminal),
                                       cmocka_unit_test(nothing_is_written_where_nothing_was_asked_for),
                                       cmocka_unit_test(senseless_counts_are_not_drawn),
                                       cmocka_unit_test(log_lines_are_objects),
                                       cmocka_unit_test(a_log_that_cannot_be_written_is_told),
                                       cmocka_unit_test(threads_may_share_a_log),
                                       cmocka_unit_test(signals_interrupt_and_end_as_they_should)};

    return cmocka_run_group_tests(tests, NULL, NULL);
}
