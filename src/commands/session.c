/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/session.h"

#include "job/memory.h"
#include "job/signals.h"

#include <errno.h>
#include <stdio.h>
#include <string.h>
#include <time.h>

static bool has_option(const stericol_session *session, const char *name)
{
    return stericol_command_option(stericol_settings_command(session->settings), name) != NULL;
}

/* Whether `lines` holds this very line. */
static bool holds_line(const stericol_text *lines, const char *line)
{
    const char *all = stericol_text_string(lines);
    size_t length = strlen(line);

    for (const char *at = strstr(all, line); at != NULL; at = strstr(at + 1, line))
        if ((at == all || at[-1] == '\n' || (at - all >= 9 && strncmp(at - 9, "warning: ", 9) == 0)) &&
            at[length] == '\n')
            return true;
    return false;
}

/* Every notice is kept for provenance, logged and printed; once, though both epochs may give cause for it. */
static void take_notice(void *user, stericol_notice_level level, const char *text)
{
    stericol_session *session = user;
    bool warning = level == STERICOL_WARNING;

    if (holds_line(&session->assumptions, text))
        return;
    stericol_text_format(&session->assumptions, "%s%s\n", warning ? "warning: " : "", text);
    stericol_log_write(session->log, warning ? STERICOL_LOG_WARNING : STERICOL_LOG_INFO,
                       warning ? "warning" : "note", text, NULL, 0);
    if (session->keeps_notices) {
        stericol_text_format(&session->notices, "%s%s\n", warning ? "warning: " : "", text);
        return;
    }
    if (session->quiet)
        return;
    stericol_progress_hide(session->progress);
    fprintf(stderr, "stericol: %s: %s\n", warning ? "warning" : "note", text);
}

static stericol_status open_log(stericol_session *session)
{
    const char *path = has_option(session, "log") ? stericol_settings_text(session->settings, "log") : NULL;
    stericol_status status;

    if (path == NULL)
        return STERICOL_OK;
    status = stericol_log_open(session->context, path, &session->log);
    stericol_log_write(session->log, STERICOL_LOG_INFO, "start", session->command_line,
                       (stericol_log_field[]){stericol_log_text("version", stericol_version())}, 1);
    return status;
}

static stericol_status open_progress(stericol_session *session)
{
    stericol_progress_options options;

    if (session->quiet || !has_option(session, "progress"))
        return STERICOL_OK;
    options = stericol_progress_options_for(
        stderr, (stericol_progress_mode)stericol_settings_choice(session->settings, "progress"),
        stericol_settings_command(session->settings)->name);
    return stericol_progress_new(session->context, &options, &session->progress);
}

stericol_status stericol_session_start_workers(stericol_session *session)
{
    size_t threads = 0;
    stericol_status status;

    if (session->workers != NULL)
        return STERICOL_OK;
    if (stericol_settings_is_set(session->settings, "threads"))
        threads = (size_t)stericol_settings_whole(session->settings, "threads");
    status = stericol_workers_new(session->context, threads, &session->workers);
    if (status == STERICOL_OK)
        session->executor = stericol_workers_executor(session->workers);
    return status;
}

stericol_status stericol_session_open(stericol_session *session, const stericol_settings *settings,
                                      const char *command_line)
{
    stericol_status status;

    *session = (stericol_session){
        .settings = settings, .command_line = command_line, .executor = &stericol_serial_executor};
    session->context = stericol_context_new();
    if (session->context == NULL)
        return STERICOL_MEMORY;
    session->quiet = has_option(session, "quiet") && stericol_settings_on(settings, "quiet");
    stericol_context_on_notice(session->context, take_notice, session);
    status = stericol_signals_begin(session->context);
    if (status == STERICOL_OK)
        status = open_log(session);
    if (status == STERICOL_OK)
        status = stericol_cf_units_new(session->context, &session->units);
    if (status == STERICOL_OK)
        status = open_progress(session);
    return status;
}

/* What fails after an interruption fails because of it. */
static const char *failure_of(const stericol_session *session)
{
    const char *message = stericol_context_message(session->context);

    if (stericol_interrupted())
        return "interrupted";
    return message[0] != '\0' ? message : stericol_status_text(stericol_context_status(session->context));
}

stericol_status stericol_session_close(stericol_session *session, stericol_status status)
{
    stericol_status closing;

    stericol_progress_end(session->progress);
    session->progress = NULL;
    if (session->context == NULL) {
        fputs("stericol: no memory left to begin with\n", stderr);
        return status;
    }
    if (status != STERICOL_OK && stericol_interrupted())
        status = STERICOL_INTERRUPTED;
    if (status != STERICOL_OK) {
        stericol_log_write(session->log, STERICOL_LOG_ERROR, "end", failure_of(session),
                           (stericol_log_field[]){stericol_log_whole("exit_code", status)}, 1);
        stericol_session_print_failure(session);
    } else {
        stericol_log_write(session->log, STERICOL_LOG_INFO, "end", "done",
                           (stericol_log_field[]){stericol_log_whole("exit_code", 0)}, 1);
    }
    closing = stericol_log_close(session->context, session->log);
    if (status == STERICOL_OK && closing != STERICOL_OK) {
        status = closing;
        stericol_session_print_failure(session);
    }
    stericol_workers_free(session->workers);
    stericol_cf_units_free(session->units);
    stericol_text_free(&session->notices);
    stericol_text_free(&session->assumptions);
    stericol_context_free(session->context);
    return status;
}

void stericol_session_print_failure(const stericol_session *session)
{
    stericol_progress_hide(session->progress);
    fprintf(stderr, "stericol: %s\n", failure_of(session));
}

stericol_status stericol_session_print(stericol_session *session, const char *text)
{
    stericol_progress_hide(session->progress);
    if (fputs(text, stdout) < 0 || fflush(stdout) != 0)
        return stericol_fail(session->context, STERICOL_OUTPUT, "standard output", NULL,
                             "make room, or send it somewhere else", "cannot be written (%s)",
                             strerror(errno));
    return STERICOL_OK;
}

static void say_list(stericol_session *session, bool warning, const char *format, va_list arguments)
{
    stericol_text line = {0}, raw = {0};

    stericol_text_format_list(&raw, format, arguments);
    stericol_text_add_printable(&line, stericol_text_string(&raw));
    stericol_text_free(&raw);
    if (warning)
        stericol_text_format(&session->assumptions, "warning: %s\n", stericol_text_string(&line));
    stericol_log_write(session->log, warning ? STERICOL_LOG_WARNING : STERICOL_LOG_INFO,
                       warning ? "warning" : "summary", stericol_text_string(&line), NULL, 0);
    if (!session->quiet) {
        stericol_progress_hide(session->progress);
        fprintf(stderr, "stericol: %s: %s\n", warning ? "warning" : "note", stericol_text_string(&line));
    }
    stericol_text_free(&line);
}

void stericol_session_say(stericol_session *session, const char *format, ...)
{
    va_list arguments;

    va_start(arguments, format);
    say_list(session, false, format, arguments);
    va_end(arguments);
}

void stericol_session_warn(stericol_session *session, const char *format, ...)
{
    va_list arguments;

    va_start(arguments, format);
    say_list(session, true, format, arguments);
    va_end(arguments);
}

bool stericol_session_tick(void *user, double done, double whole)
{
    stericol_session *session = user;

    stericol_progress_update(session->progress, done, whole);
    return !stericol_interrupted();
}

size_t stericol_session_memory(const stericol_session *session)
{
    size_t given = has_option(session, "memory") ? stericol_settings_size(session->settings, "memory") : 0;

    return given != 0 ? given : stericol_default_memory();
}

void stericol_session_time(char text[STERICOL_SESSION_TIME_ROOM])
{
    time_t now = time(NULL);
    struct tm parts;

    if (gmtime_r(&now, &parts) == NULL ||
        strftime(text, STERICOL_SESSION_TIME_ROOM, "%Y-%m-%dT%H:%M:%SZ", &parts) == 0)
        strcpy(text, "1970-01-01T00:00:00Z");
}
