/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A gridded variable, read in slabs of levels and rows whatever the order and packing in the file.
 *
 * This is the one narrow place where values are decoded.  Anything faster than NetCDF-C's own reading goes
 * behind it and must give the same bits.
 *
 * Missing values, judged on the stored values as CF 1.10 section 2.5.1 says: _FillValue, missing_value (one
 * or many, of any type of number, or a text that holds numbers), the type's default fill where no _FillValue
 * is declared (NC_FILL_*; not for bytes), NaN and infinities, and values outside
 * valid_min/valid_max/valid_range (in packed units; limits that only make sense in unpacked units are
 * recognised, used so, and noticed).  valid_* of a wrong type or empty are ignored with a notice.  Besides,
 * fills that no attribute declares: |unpacked| > 1e10 where the conversion has a finite limit (temperature,
 * salinity), > 1e30 elsewhere (joules of a whole ocean are 1e25); noticed.
 *
 * unpacked = stored * scale_factor + add_offset, in double, each operation rounded, whatever the types: the
 * same number comes out however a value is stored.  Bytes and the like are read with the other sign where
 * _Unsigned says so, or where valid limits of a wider type only fit that.  Whole numbers beyond 2^53 are
 * rounded, and noticed. Every notice is given once for a variable of an open file.
 */
#ifndef STERICOL_CF_FIELD_H
#define STERICOL_CF_FIELD_H

#include "cf/file.h"

typedef struct stericol_cf_field stericol_cf_field;

enum { STERICOL_CF_NO_AXIS = -1 };

typedef struct stericol_cf_field_axes {
    int time, level, row, column;        /* positions in the variable's dimensions, or STERICOL_CF_NO_AXIS */
    size_t fixed[STERICOL_CF_MOST_RANK]; /* 0-based index taken along every other dimension */
} stericol_cf_field_axes;

/* What was met while reading; counts add up over calls. */
typedef struct stericol_cf_tally {
    unsigned long long values;  /* read */
    unsigned long long missing; /* by the rules above */
    unsigned long long below;   /* below `low` after conversion: given as -INFINITY */
    unsigned long long above;   /* above `high`: given as +INFINITY */
} stericol_cf_tally;

/*
 * value = unpacked * scale + offset; then below `low` gives -INFINITY, above `high` +INFINITY (rejected, so
 * told apart from NaN = missing); -INFINITY/INFINITY as low/high switches that off.
 */
typedef struct stericol_cf_conversion {
    double scale, offset, low, high;
} stericol_cf_conversion;

/*
 * `cache_bytes`: the most memory that the decoder may keep for this field (0: 128 MiB).  Nothing is kept
 * while reads are made in the stride given below; others keep the chunks that one read touches, up to that
 * limit. `variable` and `file` must outlive the field.  STERICOL_INPUT for a variable that holds no numbers
 * or cannot be unpacked (scale_factor 0 or NaN); STERICOL_USAGE for a fixed index beyond its dimension;
 * STERICOL_MEMORY. *field is NULL on failure.
 */
stericol_status stericol_cf_field_open(stericol_context *context, stericol_cf_file *file,
                                       const stericol_cf_variable *variable,
                                       const stericol_cf_field_axes *axes,
                                       const stericol_cf_conversion *conversion, size_t cache_bytes,
                                       stericol_cf_field **field);
void stericol_cf_field_close(stericol_cf_field *field);

/*
 * How many levels and rows one read should be a multiple of, so that nothing is decoded twice (from the
 * chunks; a file that stores levels fastest wants all of its levels; 1, 1 where it does not matter).
 */
void stericol_cf_field_stride(const stericol_cf_field *field, size_t *levels, size_t *rows);

/*
 * values[level][row][column] for `levels` levels from level0 and `rows` rows from row0 (file indices along
 * those axes; an absent axis has length 1), all columns.  What was met is added to *tally (NULL: not wanted).
 * STERICOL_INPUT on a read error, naming file and variable (*values may then be set in part);
 * STERICOL_MEMORY.
 */
stericol_status stericol_cf_field_read(stericol_context *context, stericol_cf_field *field, size_t time,
                                       size_t level0, size_t levels, size_t row0, size_t rows, double *values,
                                       stericol_cf_tally *tally);

#endif
