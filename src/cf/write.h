/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Writing a NetCDF-4 file that appears whole or not at all: it is made under a temporary name in the same
 * folder, synced, and renamed by commit.  Without commit nothing is left and an existing file stays as it
 * was.
 *
 * The same calls in the same order give the same bytes: nothing here writes the time or a random number.
 * After a failure only stericol_cf_writer_free() makes sense.
 */
#ifndef STERICOL_CF_WRITE_H
#define STERICOL_CF_WRITE_H

#include "cf/file.h"

typedef struct stericol_cf_writer stericol_cf_writer;

/*
 * STERICOL_USAGE when `path` exists and !replace; STERICOL_OUTPUT when its folder is absent, not writable, or
 * `path` is a folder, a device, a link that leads nowhere, or write-protected.  The temporary's name is
 * unpredictable and created exclusively.  A new file gets the permissions that the umask leaves, a replaced
 * one keeps its own.  A symbolic link stays and the file that it points to is replaced.
 */
stericol_status stericol_cf_writer_new(stericol_context *context, const char *path, bool replace,
                                       stericol_cf_writer **writer);
/* Removes what was not committed; NULL allowed. */
void stericol_cf_writer_free(stericol_cf_writer *writer);
/* Removes the temporary file using only calls that a signal handler may make; false when there is none. */
bool stericol_cf_writer_remove_temporary(const stericol_cf_writer *writer);

/* `length` is at least 1. */
stericol_status stericol_cf_write_dimension(stericol_context *context, stericol_cf_writer *writer,
                                            const char *name, size_t length, size_t *dimension);
/*
 * `fill`: whether a _FillValue (the type's default of NetCDF) is declared; missing values are given as NaN.
 * `compressed`: shuffle + deflate 1 (chunks: whole last two dimensions up to 4 MiB, 1 along others).
 * dimension[rank] as given by stericol_cf_write_dimension().  Types: numbers and STERICOL_CF_STRING (never
 * compressed, no fill).
 */
stericol_status stericol_cf_write_variable(stericol_context *context, stericol_cf_writer *writer,
                                           const char *name, stericol_cf_type type, size_t rank,
                                           const size_t *dimension, bool compressed, bool fill,
                                           size_t *variable);
enum { STERICOL_CF_GLOBAL = -1 };
/* `variable` as given by stericol_cf_write_variable(), or (size_t)-1 for the file's own attributes.  A second
   attribute of a name replaces the first. */
stericol_status stericol_cf_write_text(stericol_context *context, stericol_cf_writer *writer, size_t variable,
                                       const char *name, const char *text);
/* As below for values that do not fit; `count` is at least 1. */
stericol_status stericol_cf_write_numbers(stericol_context *context, stericol_cf_writer *writer,
                                          size_t variable, const char *name, stericol_cf_type type,
                                          size_t count, const double *numbers);
/*
 * NaN becomes the fill value (in a float or double variable without one it stays NaN); a value that does not
 * fit the type is STERICOL_OUTPUT: infinite, beyond float, not whole or out of range for integers, NaN
 * without a fill value for integers, or equal to the fill value.
 */
stericol_status stericol_cf_write_values(stericol_context *context, stericol_cf_writer *writer,
                                         size_t variable, const size_t *start, const size_t *count,
                                         const double *values);
/* All of a string variable: `count` is its length. */
stericol_status stericol_cf_write_strings(stericol_context *context, stericol_cf_writer *writer,
                                          size_t variable, size_t count, const char *const *strings);
/* Closes, syncs, renames.  STERICOL_OUTPUT (disk full too) leaves nothing. */
stericol_status stericol_cf_writer_commit(stericol_context *context, stericol_cf_writer *writer);

/* Whether both paths lead to the same existing file, through links too: an output must not be one of the
 * inputs. */
bool stericol_cf_same_file(const char *path_a, const char *path_b);

#endif
