/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What the files of this room share among themselves.  No other room includes this.
 */
#ifndef STERICOL_CF_ROOM_H
#define STERICOL_CF_ROOM_H

#include "cf/field.h"
#include "cf/file.h"

#include <stdint.h>
#include <sys/types.h>

/*
 * How much chunks that were read or written in whole are given up before others (H5Pset_cache, rdcc_w0).
 * With 1 the library looks at no others: chunks that a read touched in part are then never given up, and the
 * cache grows past its limit with every time of a series.  0.75 is the library's own default.
 */
#define STERICOL_CF_PREEMPTION 0.75F

/* ---- location.c: what a path leads to, before any library touches it ---- */

typedef enum stericol_cf_storage {
    STERICOL_CF_STORAGE_CLASSIC, /* CDF-1, CDF-2, CDF-5 */
    STERICOL_CF_STORAGE_HDF5,
    STERICOL_CF_STORAGE_ZARR
} stericol_cf_storage;

typedef struct stericol_cf_location {
    stericol_cf_storage storage;
    char *target; /* what nc_open() is given */
    char *local;  /* the file or folder on disk */
    unsigned long long bytes;
    long long changed;
    unsigned long long superblock; /* where the HDF5 signature stands */
} stericol_cf_location;

/*
 * Finds out what `path` is from its name, its place on disk and its first bytes.  STERICOL_INPUT with the
 * reason for anything that cannot be NetCDF or Zarr; STERICOL_MEMORY.  On failure nothing is held.
 */
stericol_status stericol_cf_locate(stericol_context *context, const char *path,
                                   stericol_cf_location *location);
void stericol_cf_location_clear(stericol_cf_location *location);

/* ---- classic.c, superblock.c: how long the file must be ---- */

/*
 * Reads the header of a classic file by the published grammar ("NetCDF Classic Format Specification", NetCDF
 * User's Guide, appendix B) and refuses the file when the header contradicts itself, lies beyond the limits,
 * or needs more bytes than there are.
 */
stericol_status stericol_cf_check_classic(stericol_context *context, const char *path, const char *local);
/* The same for the end-of-file address of an HDF5 superblock (HDF5 File Format Specification 3.0, section
 * II.A). */
stericol_status stericol_cf_check_superblock(stericol_context *context, const char *path,
                                             const stericol_cf_location *location);

/* ---- guard.c: the first contact ---- */

typedef struct stericol_cf_guard_limits {
    unsigned seconds;           /* wall clock */
    unsigned processor_seconds; /* of the child */
    size_t memory;              /* bytes beyond what the process has when it starts */
} stericol_cf_guard_limits;

/* Two minutes for slow disks; no honest header needs the rest. */
#define STERICOL_CF_GUARD_LIMITS                                                                             \
    (stericol_cf_guard_limits)                                                                               \
    {                                                                                                        \
        .seconds = 120, .processor_seconds = 20, .memory = (size_t)2 << 30                                   \
    }

/* Runs in the child; gives a NetCDF status. */
typedef int stericol_cf_guarded(const char *target);

/*
 * Runs `look(target)` in a child process under `limits` and refuses `path` when it fails, crashes, runs out
 * of time or of memory.  Nothing that the child does is seen by the caller.
 */
stericol_status stericol_cf_guard(stericol_context *context, const char *path, const char *target,
                                  stericol_cf_guarded *look, const stericol_cf_guard_limits *limits);

/* ---- header.c: dimensions, variables and attributes as records ---- */

/* What a header may hold; more is taken for damage. */
enum {
    STERICOL_CF_MOST_DIMENSIONS = 100000,
    STERICOL_CF_MOST_VARIABLES = 100000,
    STERICOL_CF_MOST_ATTRIBUTES = 1000000,
    STERICOL_CF_MOST_GROUPS = 10000,
    STERICOL_CF_DEEPEST_GROUP = 64
};
#define STERICOL_CF_MOST_ATTRIBUTE_BYTES ((size_t)16 << 20) /* of one attribute */
#define STERICOL_CF_MOST_HEADER_BYTES ((size_t)256 << 20)   /* of all attributes */

struct stericol_cf_rules;

struct stericol_cf_file {
    char *path;
    const char *format;
    int handle;
    bool open;
    size_t dimension_count, variable_count, global_count;
    stericol_cf_dimension *dimensions;
    stericol_cf_variable *variables;
    stericol_cf_attribute *globals;
    struct stericol_cf_rules **rules; /* one a variable, made when it is first read */
    size_t *cache;                    /* one a variable: bytes of chunk cache asked for */
    unsigned long long bytes;
    long long changed;
};

/* Beside the statuses of NetCDF (zero, negative, or errno): a header beyond the limits above. */
enum { STERICOL_CF_BEYOND = 100001 };
/* Reads the whole header below `file->handle`; a NetCDF status or STERICOL_CF_BEYOND. */
int stericol_cf_read_header(stericol_cf_file *file);
void stericol_cf_free_header(stericol_cf_file *file);

/* ---- rules.c: which stored values count, and what they mean ---- */

enum { STERICOL_CF_MOST_FILLS = 32 };

/* A stored value in the widest type of its kind. */
typedef union stericol_cf_stored {
    int64_t whole;
    uint64_t natural;
    double real;
} stericol_cf_stored;

typedef struct stericol_cf_rules {
    stericol_cf_type
        type;    /* how the stored bytes are read: the variable's type, or its other sign (_Unsigned) */
    size_t size; /* bytes a value */
    double scale, offset;
    stericol_cf_stored low, high; /* stored values outside are missing; both are finite */
    size_t fills;
    stericol_cf_stored fill_low[STERICOL_CF_MOST_FILLS],
        fill_high[STERICOL_CF_MOST_FILLS]; /* closed ranges */
    bool huge_noticed, inexact_noticed;
} stericol_cf_rules;

/* Whether a type holds numbers that this room reads. */
bool stericol_cf_is_number(stericol_cf_type type);
size_t stericol_cf_size_of(stericol_cf_type type);

/*
 * The rules of a variable, made from its attributes when it is first read (notices are given then) and kept
 * with the file.  STERICOL_INPUT for text, user types, too many dimensions, or a packing that cannot be
 * undone.
 */
stericol_status stericol_cf_rules_of(stericol_context *context, stericol_cf_file *file,
                                     const stericol_cf_variable *variable, stericol_cf_rules **rules);

/* ---- unpack.c: stored values into doubles ---- */

typedef struct stericol_cf_counts {
    unsigned long long huge;    /* beyond the limit for undeclared fills */
    unsigned long long inexact; /* whole numbers that a double cannot hold */
} stericol_cf_counts;

typedef struct stericol_cf_loops {
    const char *name;
    /* values[i] = the unpacked raw[i], NaN where missing by the rules or |unpacked| > most; adds to counts.
     */
    void (*unpack)(const stericol_cf_rules *rules, const void *raw, size_t count, double most, double *values,
                   stericol_cf_counts *counts);
    /* Applies `conversion` in place and adds to `tally` (NULL: not wanted). */
    void (*convert)(const stericol_cf_conversion *conversion, double *values, size_t count,
                    stericol_cf_tally *tally);
} stericol_cf_loops;

/* "plain", "avx2", "avx512": NULL when this processor has not got it; NULL: the fastest it has.  All give the
 * same bits. */
const stericol_cf_loops *stericol_cf_loops_named(const char *name);
/* By the fastest loops. */
void stericol_cf_unpack(const stericol_cf_rules *rules, const void *raw, size_t count, double most,
                        double *values, stericol_cf_counts *counts);

/* ---- blocks.c: a part of a variable in pieces that fit the memory and never cut a chunk ---- */

typedef struct stericol_cf_blocks {
    size_t rank;
    size_t from[STERICOL_CF_MOST_RANK], to[STERICOL_CF_MOST_RANK]; /* the part asked for */
    size_t unit[STERICOL_CF_MOST_RANK]; /* a piece's ends lie on multiples of these */
    size_t step[STERICOL_CF_MOST_RANK]; /* a piece's most extent: multiples of unit */
    size_t start[STERICOL_CF_MOST_RANK], count[STERICOL_CF_MOST_RANK]; /* the piece at hand */
    bool done;
} stericol_cf_blocks;

/* Starts at the first piece; `room` is how many values a piece should hold (more where one chunk needs it).
 */
void stericol_cf_blocks_begin(stericol_cf_blocks *blocks, const stericol_cf_variable *variable,
                              const size_t *start, const size_t *count, size_t room);
void stericol_cf_blocks_next(stericol_cf_blocks *blocks);

/* ---- gather.c: read, unpack, put where it belongs ---- */

typedef struct stericol_cf_buffer {
    void *bytes;
    size_t room;
} stericol_cf_buffer;

typedef struct stericol_cf_gather {
    const size_t *start, *count; /* rank of each: the part to read; every count > 0 */
    const size_t *stride;        /* rank of them: where a step along a dimension leads in `values` */
    const stericol_cf_conversion *conversion; /* NULL: none */
    double *values;
    stericol_cf_tally *tally; /* NULL: not wanted */
    stericol_cf_buffer *buffer;
} stericol_cf_gather;

stericol_status stericol_cf_gather_values(stericol_context *context, stericol_cf_file *file,
                                          const stericol_cf_variable *variable, stericol_cf_rules *rules,
                                          const stericol_cf_gather *gather);
/* Turns a NetCDF status met while reading values into a failure. */
stericol_status stericol_cf_fail_reading(stericol_context *context, const stericol_cf_file *file,
                                         const stericol_cf_variable *variable, int status);
/* Stored values as they are, in the variable's own type; also the only place that calls nc_get_vara(). */
stericol_status stericol_cf_read_stored(stericol_context *context, const stericol_cf_file *file,
                                        const stericol_cf_variable *variable, const size_t *start,
                                        const size_t *count, void *stored);

#endif
