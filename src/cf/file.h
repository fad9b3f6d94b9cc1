/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A NetCDF file as its header tells it: dimensions, variables, attributes as plain records; and the reading
 * of whole variables or parts of them as doubles.  Fields that are read level by level go through cf/field.h.
 *
 * NetCDF-C is not thread-safe: only one thread at a time may be inside this room.
 */
#ifndef STERICOL_CF_FILE_H
#define STERICOL_CF_FILE_H

#include "base/context.h"

#include <stdbool.h>
#include <stddef.h>

typedef enum stericol_cf_type {
    STERICOL_CF_INT8,
    STERICOL_CF_UINT8,
    STERICOL_CF_INT16,
    STERICOL_CF_UINT16,
    STERICOL_CF_INT32,
    STERICOL_CF_UINT32,
    STERICOL_CF_INT64,
    STERICOL_CF_UINT64,
    STERICOL_CF_FLOAT,
    STERICOL_CF_DOUBLE,
    STERICOL_CF_CHAR,
    STERICOL_CF_STRING,
    STERICOL_CF_OTHER /* compound, opaque, variable length, enum: never read */
} stericol_cf_type;

typedef struct stericol_cf_attribute {
    char *name;
    stericol_cf_type type;
    size_t count;    /* numbers, 0 for texts */
    char *text;      /* NULL for numbers; several strings are joined with blanks; trailing zeros cut off */
    double *numbers; /* NULL for texts */
} stericol_cf_attribute;

typedef struct stericol_cf_dimension {
    char *name;  /* without the group */
    char *group; /* "/" or "/a/b" */
    size_t length;
    bool unlimited;
} stericol_cf_dimension;

enum { STERICOL_CF_MOST_RANK = 16 }; /* a variable with more dimensions is refused when it is read */

typedef struct stericol_cf_variable {
    char *name;       /* "temp" at the root, "/group/temp" elsewhere: names it in messages and options */
    char *short_name; /* without the group */
    char *group;      /* "/" or "/a/b" */
    stericol_cf_type type;
    size_t rank;
    size_t dimension[STERICOL_CF_MOST_RANK]; /* indices into the file's dimensions; rank of them */
    bool chunked;
    size_t chunk[STERICOL_CF_MOST_RANK]; /* rank of them where chunked */
    bool compressed;
    size_t attribute_count;
    stericol_cf_attribute *attributes;
    int group_handle, handle; /* of NetCDF-C; for this room alone */
} stericol_cf_variable;

typedef struct stericol_cf_file stericol_cf_file;

/*
 * Opens `path` (a file; or file://...#mode=nczarr,... for a Zarr store; or the folder of a Zarr store) and
 * reads its whole header.  The first contact happens in a child process with limits on time and memory, so
 * that a damaged file that crashes, hangs or swells the NetCDF library is refused instead. STERICOL_INPUT
 * with a message when the file is absent, a folder that is no store, empty, not NetCDF, truncated or damaged;
 * STERICOL_MEMORY; STERICOL_INTERRUPTED when a signal ends the child.  *file is NULL on failure.
 */
stericol_status stericol_cf_open(stericol_context *context, const char *path, stericol_cf_file **file);
void stericol_cf_close(stericol_cf_file *file);

/* Size and time of change, as provenance wants them; read when the file was opened. */
typedef struct stericol_cf_identity {
    unsigned long long bytes; /* 0 for a Zarr store, which is a folder */
    long long changed;        /* seconds since 1970-01-01 UTC */
    const char *id;           /* global attribute id, tracking_id or uuid; NULL where there is none */
} stericol_cf_identity;

/*
 * Opens a file again that was open in this run: without a new child process where size and time of change are
 * those of `known` (NULL: as stericol_cf_open()).
 */
stericol_status stericol_cf_open_again(stericol_context *context, const char *path,
                                       const stericol_cf_identity *known, stericol_cf_file **file);

const char *stericol_cf_path(const stericol_cf_file *file);
/* "classic", "64-bit offset", "64-bit data", "NetCDF-4", "Zarr" */
const char *stericol_cf_format(const stericol_cf_file *file);

size_t stericol_cf_dimension_count(const stericol_cf_file *file);
const stericol_cf_dimension *stericol_cf_dimension_at(const stericol_cf_file *file, size_t index);
size_t stericol_cf_variable_count(const stericol_cf_file *file);
const stericol_cf_variable *stericol_cf_variable_at(const stericol_cf_file *file, size_t index);

/*
 * The variable that `name` means when it stands in an attribute of `near` (CF 1.10, section 2.7: its own
 * group, then the groups above; a path is taken as it is).  near == NULL: `name` as a user writes it: the
 * exact name, else the only variable of that short name anywhere.  NULL when there is none.
 */
const stericol_cf_variable *stericol_cf_find(const stericol_cf_file *file, const char *name,
                                             const stericol_cf_variable *near);

/* NULL when absent (or, for _text, when not a text). */
const stericol_cf_attribute *stericol_cf_attribute_of(const stericol_cf_variable *variable, const char *name);
const char *stericol_cf_text_of(const stericol_cf_variable *variable, const char *name);
const stericol_cf_attribute *stericol_cf_global(const stericol_cf_file *file, const char *name);
const char *stericol_cf_global_text(const stericol_cf_file *file, const char *name);

/* The product of the variable's dimension lengths (1 for a scalar); false on overflow. */
bool stericol_cf_value_count(const stericol_cf_file *file, const stericol_cf_variable *variable,
                             size_t *count);

/*
 * Reads start/count (rank of each; NULL, NULL: all of it) in the file's own order: unpacked by scale_factor
 * and add_offset, _Unsigned honoured, missing values NaN by the rules of cf/field.h; units as in the file.
 * STERICOL_INPUT when the variable is text or of a user type, when a part lies outside, or when reading
 * fails.
 */
stericol_status stericol_cf_read(stericol_context *context, stericol_cf_file *file,
                                 const stericol_cf_variable *variable, const size_t *start,
                                 const size_t *count, double *values);

/* As stericol_cf_read() for all of a variable of at most `most` values; *values is allocated (free()). */
stericol_status stericol_cf_read_all(stericol_context *context, stericol_cf_file *file,
                                     const stericol_cf_variable *variable, size_t most, double **values,
                                     size_t *count);

/* All texts of a char variable (last dimension = characters, blanks and zeros at the end cut) or string
 * variable. */
stericol_status stericol_cf_read_texts(stericol_context *context, stericol_cf_file *file,
                                       const stericol_cf_variable *variable, char ***texts, size_t *count);
void stericol_cf_free_texts(char **texts, size_t count);

/* Read when the file was opened; `id` lives as long as the file. */
stericol_cf_identity stericol_cf_identity_of(const stericol_cf_file *file);

#endif
