/* SPDX-License-Identifier: GPL-3.0-or-later */
/**
 * \file
 * Status codes, and the context in which a failure leaves its explanation.
 *
 * Every public function that can fail returns a stericol_status.  Details for people (which file, which
 * variable, what is wrong, what to do) go into a stericol_context that the caller owns; the library never
 * prints, never exits and keeps no state between calls.
 */
#ifndef STERICOL_STATUS_H
#define STERICOL_STATUS_H

#include <stddef.h>

#if defined(__GNUC__)
#define STERICOL_API __attribute__((visibility("default")))
#define STERICOL_PRINTF(text, first) __attribute__((format(printf, text, first)))
#else
#define STERICOL_API
#define STERICOL_PRINTF(text, first)
#endif

#ifdef __cplusplus
extern "C" {
#endif

/** The one list of codes and their texts: code, value, text.  The program's exit codes follow from it. */
#define STERICOL_STATUS_LIST(X)                                                                              \
    X(STERICOL_OK, 0, "done")                                                                                \
    X(STERICOL_NOTHING, 1, "nothing could be computed")                                                      \
    X(STERICOL_USAGE, 2, "the request is wrong or contradicts itself")                                       \
    X(STERICOL_INPUT, 3, "an input cannot be used")                                                          \
    X(STERICOL_OUTPUT, 4, "the output cannot be written")                                                    \
    X(STERICOL_MEMORY, 5, "out of memory, or over the memory allowed")                                       \
    X(STERICOL_FAULT, 70, "a fault of the program")                                                          \
    X(STERICOL_INTERRUPTED, 128, "interrupted")

#define STERICOL_STATUS_ENUM(code, value, text) code = (value),
typedef enum stericol_status { STERICOL_STATUS_LIST(STERICOL_STATUS_ENUM) } stericol_status;
#undef STERICOL_STATUS_ENUM

/** The text of a code, in English; "unknown status" for a value that is none.  Never NULL. */
STERICOL_API const char *stericol_status_text(stericol_status status);

/** The version of the library, "major.minor.patch". */
STERICOL_API const char *stericol_version(void);

/** How much a notice matters. */
typedef enum stericol_notice_level {
    STERICOL_NOTE,   /**< an assumption made or a decision taken */
    STERICOL_WARNING /**< the result may not be what was wanted */
} stericol_notice_level;

/** Receives notices; `text` is one line without its line end and lives only during the call. */
typedef void stericol_notice_function(void *user, stericol_notice_level level, const char *text);

/**
 * Where failures and notices are left.  One thread uses a context at a time; a worker that needs one gets
 * its own.
 */
typedef struct stericol_context stericol_context;

/** A new, empty context; NULL when memory is out.  Free it with stericol_context_free(). */
STERICOL_API stericol_context *stericol_context_new(void);

/** Frees a context; NULL is allowed. */
STERICOL_API void stericol_context_free(stericol_context *context);

/** Sends notices to `function`; NULL (the start) drops them. */
STERICOL_API void stericol_context_on_notice(stericol_context *context, stericol_notice_function *function,
                                             void *user);

/** The first failure's message, one line "FILE: VARIABLE: what is wrong; what to do"; "" when there is none. */
STERICOL_API const char *stericol_context_message(const stericol_context *context);

/** The first failure's status; STERICOL_OK when there is none. */
STERICOL_API stericol_status stericol_context_status(const stericol_context *context);

/** Forgets the failure, so that the context can be used again. */
STERICOL_API void stericol_context_clear(stericol_context *context);

#ifdef __cplusplus
}
#endif

#endif
