/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Writing a NetCDF-4 file that appears whole or not at all: it is made under a temporary name in the same folder, synced,
 * and renamed by commit.  Without commit nothing is left and an existing file stays as it was.
 */
#ifndef STERICOL_CF_WRITE_H
#define STERICOL_CF_WRITE_H

#include "cf/file.h"

typedef struct stericol_cf_writer stericol_cf_writer;

/*
 * STERICOL_USAGE when `path` exists and !replace; STERICOL_OUTPUT when its folder is absent, not writable, or `path`
 * is a folder.  The temporary's name is unpredictable and created exclusively.
 */
stericol_status stericol_cf_writer_new(stericol_context *context, const char *path, bool replace,
                                       stericol_cf_writer **writer);
/* Removes what was not committed; NULL allowed. */
void stericol_cf_writer_free(stericol_cf_writer *writer);
/* Removes the temporary file using only calls that a signal handler may make; false when there is none. */
bool stericol_cf_writer_remove_temporary(const stericol_cf_writer *writer);

stericol_status stericol_cf_write_dimension(stericol_context *context, stericol_cf_writer *writer,
                                            const char *name, size_t length, size_t *dimension);
/*
 * `fill`: whether a _FillValue (the type's default of NetCDF) is declared; missing values are given as NaN.
 * `compressed`: shuffle + deflate 1 (chunks: whole last two dimensions up to 4 MiB, 1 along others).
 * dimension[rank] as given by stericol_cf_write_dimension().
 */
stericol_status stericol_cf_write_variable(stericol_context *context, stericol_cf_writer *writer,
                                           const char *name, stericol_cf_type type, size_t rank,
                                           const size_t *dimension, bool compressed, bool fill,
                                           size_t *variable);
enum { STERICOL_CF_GLOBAL = -1 };
/* `variable` as given by stericol_cf_write_variable(), or (size_t)-1 for the file's own attributes. */
stericol_status stericol_cf_write_text(stericol_context *context, stericol_cf_writer *writer, size_t variable,
                                       const char *name, const char *text);
stericol_status stericol_cf_write_numbers(stericol_context *context, stericol_cf_writer *writer, size_t variable,
                                          const char *name, stericol_cf_type type, size_t count,
                                          const double *numbers);
/* NaN becomes the fill value; a value that does not fit the type is STERICOL_OUTPUT (a finite double beyond float too). */
stericol_status stericol_cf_write_values(stericol_context *context, stericol_cf_writer *writer, size_t variable,
                                         const size_t *start, const size_t *count, const double *values);
stericol_status stericol_cf_write_strings(stericol_context *context, stericol_cf_writer *writer,
                                          size_t variable, size_t count, const char *const *strings);
/* Closes, syncs, renames.  STERICOL_OUTPUT (disk full too) leaves nothing. */
stericol_status stericol_cf_writer_commit(stericol_context *context, stericol_cf_writer *writer);

#endif
