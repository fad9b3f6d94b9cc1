/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/log.h"

#include "base/context.h"
#include "base/text.h"

#include <assert.h>
#include <errno.h>
#include <fcntl.h>
#include <jansson.h>
#include <math.h>
#include <pthread.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>
#include <unistd.h>

struct stericol_log {
    char *path;
    int file;
    pthread_mutex_t lock; /* a line is written whole; guards `error` */
    int error;            /* errno of the first write that failed, 0 for none */
};

stericol_log_field stericol_log_text(const char *name, const char *text)
{
    return (stericol_log_field){.name = name, .kind = STERICOL_LOG_TEXT, .text = text};
}

stericol_log_field stericol_log_number(const char *name, double number)
{
    return (stericol_log_field){.name = name, .kind = STERICOL_LOG_NUMBER, .number = number};
}

stericol_log_field stericol_log_whole(const char *name, long long whole)
{
    return (stericol_log_field){.name = name, .kind = STERICOL_LOG_WHOLE, .whole = whole};
}

stericol_status stericol_log_open(stericol_context *context, const char *path, stericol_log **log)
{
    stericol_log *made = calloc(1, sizeof *made);

    *log = NULL;
    if (made == NULL || (made->path = stericol_copy_string(path)) == NULL) {
        free(made);
        return stericol_fail_memory(context, 0, "the log");
    }
    made->file = open(path, O_WRONLY | O_CREAT | O_APPEND | O_CLOEXEC, 0666);
    if (made->file < 0) {
        stericol_status status =
            stericol_fail(context, STERICOL_OUTPUT, path, NULL, "give another file to --log",
                          "the log cannot be opened: %s", strerror(errno));

        free(made->path);
        free(made);
        return status;
    }
    pthread_mutex_init(&made->lock, NULL);
    *log = made;
    return STERICOL_OK;
}

/* ---- a line ---- */

/* Escaped as in messages, which also makes it valid UTF-8; NULL when memory is out. */
static json_t *new_string(const char *string)
{
    stericol_text text = {0};
    json_t *made;

    if (string == NULL)
        return json_null();
    stericol_text_add_printable(&text, string);
    made = text.failed ? NULL : json_string(stericol_text_string(&text));
    stericol_text_free(&text);
    return made;
}

static json_t *new_time(void)
{
    struct timespec now;
    struct tm parts;
    char seconds[32], text[48];

    clock_gettime(CLOCK_REALTIME, &now);
    if (gmtime_r(&now.tv_sec, &parts) == NULL)
        return json_null();
    strftime(seconds, sizeof seconds, "%Y-%m-%dT%H:%M:%S", &parts);
    snprintf(text, sizeof text, "%s.%03ldZ", seconds, now.tv_nsec / 1000000);
    return json_string(text);
}

static json_t *new_value(const stericol_log_field *field)
{
    switch (field->kind) {
    case STERICOL_LOG_TEXT:
        return new_string(field->text);
    case STERICOL_LOG_NUMBER:
        return isfinite(field->number) ? json_real(field->number) : json_null();
    case STERICOL_LOG_WHOLE:
        return json_integer(field->whole);
    }
    return json_null();
}

/* One line with its end, to be freed; NULL when memory is out. */
static char *new_line(const char *level, const char *event, const char *message,
                      const stericol_log_field *fields, size_t count)
{
    json_t *object = json_object();
    char *line;
    bool failed = object == NULL;

    /* Each of these takes its value over, NULL included, which it reports. */
    failed = failed || json_object_set_new(object, "time", new_time()) != 0;
    failed = failed || json_object_set_new(object, "level", json_string(level)) != 0;
    failed = failed || json_object_set_new(object, "event", new_string(event)) != 0;
    failed = failed || json_object_set_new(object, "message", new_string(message)) != 0;
    for (size_t i = 0; !failed && i < count; i++) {
        assert(json_object_get(object, fields[i].name) == NULL);
        failed = json_object_set_new(object, fields[i].name, new_value(&fields[i])) != 0;
    }
    line = failed ? NULL : json_dumps(object, JSON_COMPACT);
    json_decref(object);
    return line;
}

static int write_all(int file, const char *bytes, size_t length)
{
    while (length > 0) {
        ssize_t written = write(file, bytes, length);

        if (written < 0 && errno == EINTR)
            continue;
        if (written < 0)
            return errno;
        bytes += written;
        length -= (size_t)written;
    }
    return 0;
}

void stericol_log_write(stericol_log *log, stericol_log_level level, const char *event, const char *message,
                        const stericol_log_field *fields, size_t count)
{
    static const char *const levels[] = {
        [STERICOL_LOG_INFO] = "info", [STERICOL_LOG_WARNING] = "warning", [STERICOL_LOG_ERROR] = "error"};
    stericol_text text = {0};
    char *line;
    int error;

    if (log == NULL)
        return;
    line = new_line(levels[level], event, message, fields, count);
    if (line != NULL)
        stericol_text_format(&text, "%s\n", line);
    free(line);
    pthread_mutex_lock(&log->lock);
    error =
        line == NULL || text.failed ? ENOMEM : write_all(log->file, stericol_text_string(&text), text.length);
    if (log->error == 0)
        log->error = error;
    pthread_mutex_unlock(&log->lock);
    stericol_text_free(&text);
}

stericol_status stericol_log_close(stericol_context *context, stericol_log *log)
{
    stericol_status status = STERICOL_OK;

    if (log == NULL)
        return STERICOL_OK;
    if (close(log->file) != 0 && log->error == 0)
        log->error = errno;
    if (log->error != 0)
        status = stericol_fail(context, STERICOL_OUTPUT, log->path, NULL,
                               "make room for it, or give another file to --log",
                               "the log could not be written: %s", strerror(log->error));
    pthread_mutex_destroy(&log->lock);
    free(log->path);
    free(log);
    return status;
}
