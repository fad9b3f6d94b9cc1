/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Small files made by NetCDF-C itself, for the tests of reading: what was put in is known, so what comes out
 * can be held to it. */
#ifndef STERICOL_TESTS_MADE_FILES_H
#define STERICOL_TESTS_MADE_FILES_H

#include "support/testing.h"

#include "base/context.h"
#include "base/text.h"
#include "cf/file.h"

#include <netcdf.h>

/* Fails the test unless a NetCDF call succeeds. */
#define must(call)                                                                                           \
    do {                                                                                                     \
        int must_status_ = (call);                                                                           \
        if (must_status_ != NC_NOERR) {                                                                      \
            print_error("%s: %s\n", #call, nc_strerror(must_status_));                                       \
            _fail(__FILE__, __LINE__);                                                                       \
        }                                                                                                    \
    } while (0)

/* A format and how a file of it is made. */
typedef struct made_format {
    const char *name; /* as stericol_cf_format() has it */
    int mode;         /* for nc_create() */
    bool all_types;   /* unsigned and 64-bit too */
    bool chunks;
    bool zarr;
} made_format;

enum { MADE_FORMATS = 5 };
extern const made_format made_formats[MADE_FORMATS];

/* "BUILD_FOLDER/name", one of a few buffers in turn. */
const char *made_path(const char *name);
/* Creates a file (or store) of that format under made_path(name), an old one removed; its NetCDF handle. */
int made_create(const made_format *format, const char *name);
/* A file of these bytes. */
void made_bytes(const char *name, const void *bytes, size_t count);
/* The bytes of a file; free(). */
unsigned char *made_read(const char *path, size_t *count);
void made_remove_folder(const char *path);

/* A context that keeps its notices, one a line. */
typedef struct watched {
    stericol_context *context;
    stericol_text notices;
} watched;
void watch(watched *seen);
void unwatch(watched *seen);

/* Opens or fails the test, with the message. */
stericol_cf_file *open_well(watched *seen, const char *path);
/* Asserts that `path` is refused with STERICOL_INPUT and exactly this message behind "PATH: ". */
void assert_refused(const char *path, const char *message);

/* A generator with its own state (Numerical Recipes' quick 64-bit form): the same numbers everywhere. */
typedef struct draws {
    unsigned long long state;
} draws;
unsigned draw(draws *from, unsigned below);

#endif
