/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "base/context.h"

#include "base/text.h"

#include <stdarg.h>
#include <stdbool.h>
#include <stdlib.h>

struct stericol_context {
    stericol_status status;
    stericol_text message;
    stericol_notice_function *on_notice;
    void *user;
};

const char *stericol_status_text(stericol_status status)
{
#define CASE(code, value, text)                                                                              \
    case code:                                                                                               \
        return text;
    switch (status) {
        STERICOL_STATUS_LIST(CASE)
    }
#undef CASE
    return "unknown status";
}

const char *stericol_version(void)
{
    return STERICOL_VERSION;
}

stericol_context *stericol_context_new(void)
{
    return calloc(1, sizeof(stericol_context));
}

void stericol_context_free(stericol_context *context)
{
    if (context == NULL)
        return;
    stericol_text_free(&context->message);
    free(context);
}

void stericol_context_on_notice(stericol_context *context, stericol_notice_function *function, void *user)
{
    context->on_notice = function;
    context->user = user;
}

const char *stericol_context_message(const stericol_context *context)
{
    return stericol_text_string(&context->message);
}

stericol_status stericol_context_status(const stericol_context *context)
{
    return context->status;
}

void stericol_context_clear(stericol_context *context)
{
    context->status = STERICOL_OK;
    stericol_text_clear(&context->message);
}

/* "FILE: VARIABLE: what; remedy", each part printable.  A text that could not grow stays cut, never wrong. */
static void compose(stericol_text *line, const char *file, const char *variable, const char *remedy,
                    const char *format, va_list arguments)
{
    stericol_text what = {0};

    if (file != NULL) {
        stericol_text_add_printable(line, file);
        stericol_text_add(line, ": ");
    }
    if (variable != NULL) {
        stericol_text_add_printable(line, variable);
        stericol_text_add(line, ": ");
    }
    stericol_text_format_list(&what, format, arguments);
    stericol_text_add_printable(line, stericol_text_string(&what));
    stericol_text_free(&what);
    if (remedy != NULL) {
        stericol_text_add(line, "; ");
        stericol_text_add_printable(line, remedy);
    }
}

stericol_status stericol_fail(stericol_context *context, stericol_status status, const char *file,
                              const char *variable, const char *remedy, const char *format, ...)
{
    va_list arguments;

    if (context == NULL || context->status != STERICOL_OK)
        return status;
    context->status = status;
    va_start(arguments, format);
    compose(&context->message, file, variable, remedy, format, arguments);
    va_end(arguments);
    return status;
}

stericol_status stericol_fail_memory(stericol_context *context, size_t bytes, const char *what)
{
    if (bytes == 0)
        return stericol_fail(context, STERICOL_MEMORY, NULL, NULL, "give a smaller --memory or a smaller grid",
                             "no memory left for %s", what);
    return stericol_fail(context, STERICOL_MEMORY, NULL, NULL, "give a smaller --memory or a smaller grid",
                         "no memory left for %s (%zu bytes)", what, bytes);
}

stericol_status stericol_fail_again(stericol_context *context, const stericol_context *other)
{
    if (context != NULL && context->status == STERICOL_OK) {
        context->status = other->status;
        stericol_text_add(&context->message, stericol_text_string(&other->message));
    }
    return other->status;
}

void stericol_notice(stericol_context *context, stericol_notice_level level, const char *file,
                     const char *variable, const char *format, ...)
{
    stericol_text line = {0};
    va_list arguments;

    if (context == NULL || context->on_notice == NULL)
        return;
    va_start(arguments, format);
    compose(&line, file, variable, NULL, format, arguments);
    va_end(arguments);
    context->on_notice(context->user, level, stericol_text_string(&line));
    stericol_text_free(&line);
}
