/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "cf/write.h"
#include "cf/room.h"

#include "base/checked.h"
#include "base/text.h"
#include "cf/staging.h"

#include <netcdf.h>

#include <assert.h>
#include <errno.h>
#include <float.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

/* A chunk no larger than this is decoded fast by every reader and fits the default cache of NetCDF-C and
 * HDF5. */
#define MOST_CHUNK_BYTES ((size_t)4 << 20)
/* Chunks kept open at once: tiles of rows go out layer after layer, and a chunk half written should not be
 * packed twice. */
enum { MOST_OPEN_CHUNKS = 8, CACHE_SLOTS = 521, DEFLATE_LEVEL = 1 };

/* HDF5's own structures: what a new file and each dimension, variable or attribute may take, taken amply. */
enum { FILE_OVERHEAD = 1 << 20, OBJECT_OVERHEAD = 1 << 13 };

typedef struct written_variable {
    char *name;
    int handle;
    stericol_cf_type type;
    size_t rank;
    size_t length[STERICOL_CF_MOST_RANK];
    bool fill;
    bool touched;     /* something was written */
    size_t held_back; /* bytes that HDF5 may hold back of it: its chunk cache, or all of it */
} written_variable;

struct stericol_cf_writer {
    stericol_cf_staging staging;
    unsigned long long pending; /* bytes that HDF5 may still hold back: caches, headers */
    int handle;
    bool open;
    size_t dimension_count, variable_count;
    size_t *dimension_length;
    written_variable *variables;
};

/* ---- the number types ---- */

typedef struct number_type {
    nc_type netcdf;
    size_t size;
    double low, high; /* the largest range of whole numbers that is exact both in the type and in a double */
    double fill;      /* NaN: this room declares none, since a double cannot hold it */
} number_type;

/* Whole numbers are exact in a double up to 2^53. */
#define EXACT 9007199254740992.0

static number_type number_type_of(stericol_cf_type type)
{
    switch (type) {
    case STERICOL_CF_INT8:
        return (number_type){NC_BYTE, 1, -128.0, 127.0, NC_FILL_BYTE};
    case STERICOL_CF_UINT8:
        return (number_type){NC_UBYTE, 1, 0.0, 255.0, NC_FILL_UBYTE};
    case STERICOL_CF_INT16:
        return (number_type){NC_SHORT, 2, -32768.0, 32767.0, NC_FILL_SHORT};
    case STERICOL_CF_UINT16:
        return (number_type){NC_USHORT, 2, 0.0, 65535.0, NC_FILL_USHORT};
    case STERICOL_CF_INT32:
        return (number_type){NC_INT, 4, -2147483648.0, 2147483647.0, NC_FILL_INT};
    case STERICOL_CF_UINT32:
        return (number_type){NC_UINT, 4, 0.0, 4294967295.0, NC_FILL_UINT};
    case STERICOL_CF_FLOAT:
        return (number_type){NC_FLOAT, 4, -(double)FLT_MAX, (double)FLT_MAX, (double)NC_FILL_FLOAT};
    case STERICOL_CF_DOUBLE:
        return (number_type){NC_DOUBLE, 8, -DBL_MAX, DBL_MAX, NC_FILL_DOUBLE};
    case STERICOL_CF_INT64:
        return (number_type){NC_INT64, 8, -EXACT, EXACT, (double)NAN};
    case STERICOL_CF_UINT64:
        return (number_type){NC_UINT64, 8, 0.0, EXACT, (double)NAN};
    case STERICOL_CF_CHAR:
    case STERICOL_CF_STRING:
    case STERICOL_CF_OTHER:
        break;
    }
    return (number_type){NC_NAT, 0, 0.0, 0.0, (double)NAN};
}

static bool is_real(stericol_cf_type type)
{
    return type == STERICOL_CF_FLOAT || type == STERICOL_CF_DOUBLE;
}

/* Same bits as the fill value once stored. */
static bool is_fill(const number_type *numbers, double value)
{
    const double stored = numbers->netcdf == NC_FLOAT ? (double)(float)value : value;

    return stored >= numbers->fill && stored <= numbers->fill;
}

/* NULL, or why `value` cannot be stored; NaN is the caller's to judge. */
static const char *misfit(const number_type *numbers, bool real, bool fill, double value)
{
    if (isinf(value))
        return "is infinite";
    if (value < numbers->low || value > numbers->high)
        return "is beyond the range of its type";
    if (!real && (floor(value) < value || floor(value) > value))
        return "is not a whole number";
    if (fill && is_fill(numbers, value))
        return "equals the fill value";
    return NULL;
}

/* ---- failures ---- */

/* A NetCDF status as ours; `error` is errno after the call, 0 when the call left it alone. */
static stericol_status translate(stericol_context *context, const stericol_cf_writer *writer, int code,
                                 int error, const char *variable)
{
    stericol_text what = {0};
    stericol_status status;

    if (code == NC_ENOMEM)
        return stericol_fail_memory(context, 0, "the output");
    if (code == NC_EBADNAME || code == NC_ENAMEINUSE || code == NC_EMAXNAME)
        return stericol_fail(context, STERICOL_FAULT, writer->staging.path, variable, "please report this",
                             "is no name that NetCDF takes here (%s)", nc_strerror(code));
    /* HDF5 tries many things and NetCDF-C guesses: of errno only these say why a write failed. */
    if (error != ENOSPC && error != EDQUOT && error != EFBIG && error != EIO)
        error = code > 0 ? code : 0;
    stericol_text_add(&what, "cannot be written");
    if (error == 0)
        stericol_text_format(&what, " (%s)", nc_strerror(code));
    status =
        stericol_cf_staging_fail(context, &writer->staging, error, variable, stericol_text_string(&what));
    stericol_text_free(&what);
    return status;
}

/* Room for `more` bytes that HDF5 will hold back until the end at the latest. */
static stericol_status reserve(stericol_context *context, stericol_cf_writer *writer, const char *variable,
                               unsigned long long more)
{
    const stericol_status status =
        stericol_cf_staging_reserve(context, &writer->staging, variable, writer->pending + more);

    if (status == STERICOL_OK)
        writer->pending += more;
    return status;
}

/* ---- the file ---- */

stericol_status stericol_cf_writer_new(stericol_context *context, const char *path, bool replace,
                                       stericol_cf_writer **writer)
{
    stericol_cf_writer *made = calloc(1, sizeof *made);
    stericol_status status;
    int code;

    *writer = NULL;
    if (made == NULL)
        return stericol_fail_memory(context, sizeof *made, "the output");
    status = stericol_cf_staging_begin(context, path, replace, &made->staging);
    if (status == STERICOL_OK)
        status = reserve(context, made, NULL, FILE_OVERHEAD);
    if (status != STERICOL_OK)
        goto failed;
    errno = 0;
    code = nc_create(made->staging.temporary, NC_NETCDF4 | NC_CLOBBER, &made->handle);
    if (code != NC_NOERR) {
        status = translate(context, made, code, errno, NULL);
        goto failed;
    }
    made->open = true;
    *writer = made;
    return STERICOL_OK;

failed:
    stericol_cf_writer_free(made);
    return status;
}

void stericol_cf_writer_free(stericol_cf_writer *writer)
{
    if (writer == NULL)
        return;
    /* Closing writes what is still held, which nobody wants, and cannot be avoided; it may fail on a full
     * disk. */
    if (writer->open)
        nc_close(writer->handle);
    stericol_cf_staging_clear(&writer->staging);
    for (size_t i = 0; i < writer->variable_count; i++)
        free(writer->variables[i].name);
    free(writer->variables);
    free(writer->dimension_length);
    free(writer);
}

bool stericol_cf_writer_remove_temporary(const stericol_cf_writer *writer)
{
    return writer != NULL && writer->staging.present && unlink(writer->staging.temporary) == 0;
}

stericol_status stericol_cf_writer_commit(stericol_context *context, stericol_cf_writer *writer)
{
    int code;

    assert(writer->open);
    errno = 0;
    code = nc_close(writer->handle);
    if (code != NC_NOERR) {
        const int error = errno;

        writer->open = false;
        return translate(context, writer, code, error, NULL);
    }
    writer->open = false;
    return stericol_cf_staging_commit(context, &writer->staging);
}

/* ---- definitions ---- */

stericol_status stericol_cf_write_dimension(stericol_context *context, stericol_cf_writer *writer,
                                            const char *name, size_t length, size_t *dimension)
{
    const size_t index = writer->dimension_count;
    void *lengths = writer->dimension_length;
    int handle, code;

    stericol_status status;

    assert(length > 0);
    status = reserve(context, writer, name, OBJECT_OVERHEAD);
    if (status != STERICOL_OK)
        return status;
    if (!stericol_grow_array(&lengths, index + 1, sizeof *writer->dimension_length))
        return stericol_fail_memory(context, 0, "the output's dimensions");
    writer->dimension_length = lengths;
    errno = 0;
    code = nc_def_dim(writer->handle, name, length, &handle);
    if (code != NC_NOERR)
        return translate(context, writer, code, errno, name);
    assert(handle >= 0 && (size_t)handle == index); /* NetCDF-C counts dimensions from 0 in a new file */
    writer->dimension_length[index] = length;
    writer->dimension_count++;
    *dimension = index;
    return STERICOL_OK;
}

/* Whole maps, cut along rows where they are larger than MOST_CHUNK_BYTES; 1 along what comes before the map.
 */
static void choose_chunks(const written_variable *variable, size_t size, size_t *chunk, size_t *chunk_bytes)
{
    size_t most = MOST_CHUNK_BYTES / size;

    *chunk_bytes = size;
    for (size_t i = variable->rank; i-- > 0;) {
        chunk[i] = 1;
        if (i + 2 >= variable->rank) {
            chunk[i] = variable->length[i] < most ? variable->length[i] : most;
            most /= chunk[i];
            if (most == 0)
                most = 1;
        }
        *chunk_bytes *= chunk[i];
    }
}

static int compress(int file, written_variable *variable, size_t size)
{
    size_t chunk[STERICOL_CF_MOST_RANK], chunk_bytes, open = 1;
    int code;

    choose_chunks(variable, size, chunk, &chunk_bytes);
    for (size_t i = 0; i + 2 < variable->rank && open < MOST_OPEN_CHUNKS; i++)
        open *= variable->length[i] < MOST_OPEN_CHUNKS ? variable->length[i] : MOST_OPEN_CHUNKS;
    if (open > MOST_OPEN_CHUNKS)
        open = MOST_OPEN_CHUNKS;
    variable->held_back = open * chunk_bytes;
    code = nc_def_var_chunking(file, variable->handle, NC_CHUNKED, chunk);
    if (code == NC_NOERR)
        code = nc_def_var_deflate(file, variable->handle, 1, 1, DEFLATE_LEVEL);
    if (code == NC_NOERR)
        code = nc_set_var_chunk_cache(file, variable->handle, open * chunk_bytes, CACHE_SLOTS,
                                      STERICOL_CF_PREEMPTION);
    return code;
}

stericol_status stericol_cf_write_variable(stericol_context *context, stericol_cf_writer *writer,
                                           const char *name, stericol_cf_type type, size_t rank,
                                           const size_t *dimension, bool compressed, bool fill,
                                           size_t *variable)
{
    const number_type numbers = number_type_of(type);
    void *variables = writer->variables;
    int handles[STERICOL_CF_MOST_RANK], code;
    stericol_status status;
    written_variable *added;

    assert(rank <= STERICOL_CF_MOST_RANK && (numbers.netcdf != NC_NAT || type == STERICOL_CF_STRING));
    assert(!fill || !isnan(numbers.fill) || type == STERICOL_CF_STRING);
    status = reserve(context, writer, name, OBJECT_OVERHEAD);
    if (status != STERICOL_OK)
        return status;
    if (!stericol_grow_array(&variables, writer->variable_count + 1, sizeof *added))
        return stericol_fail_memory(context, 0, "the output's variables");
    writer->variables = variables;
    added = &writer->variables[writer->variable_count];
    *added = (written_variable){
        .type = type, .rank = rank, .fill = fill && type != STERICOL_CF_STRING, .held_back = numbers.size};
    for (size_t i = 0; i < rank; i++) {
        assert(dimension[i] < writer->dimension_count);
        added->length[i] = writer->dimension_length[dimension[i]];
        handles[i] = (int)dimension[i];
        if (!stericol_multiply_sizes(added->held_back, added->length[i], &added->held_back))
            return stericol_fail_memory(context, 0, name);
    }
    errno = 0;
    code = nc_def_var(writer->handle, name, type == STERICOL_CF_STRING ? NC_STRING : numbers.netcdf,
                      (int)rank, handles, &added->handle);
    if (code == NC_NOERR && added->fill)
        code = nc_put_att_double(writer->handle, added->handle, _FillValue, numbers.netcdf, 1, &numbers.fill);
    if (code == NC_NOERR && compressed && rank > 0 && type != STERICOL_CF_STRING)
        code = compress(writer->handle, added, numbers.size);
    if (code != NC_NOERR)
        return translate(context, writer, code, errno, name);
    added->name = stericol_copy_string(name);
    if (added->name == NULL)
        return stericol_fail_memory(context, 0, "the output's variables");
    *variable = writer->variable_count++;
    return STERICOL_OK;
}

/* ---- attributes ---- */

static int owner_of(const stericol_cf_writer *writer, size_t variable)
{
    if (variable == (size_t)STERICOL_CF_GLOBAL)
        return NC_GLOBAL;
    assert(variable < writer->variable_count);
    return writer->variables[variable].handle;
}

stericol_status stericol_cf_write_text(stericol_context *context, stericol_cf_writer *writer, size_t variable,
                                       const char *name, const char *text)
{
    stericol_status status = reserve(context, writer, name, OBJECT_OVERHEAD + strlen(text));
    int code;

    if (status != STERICOL_OK)
        return status;
    errno = 0;
    code = nc_put_att_text(writer->handle, owner_of(writer, variable), name, strlen(text), text);
    return code == NC_NOERR ? STERICOL_OK : translate(context, writer, code, errno, name);
}

stericol_status stericol_cf_write_numbers(stericol_context *context, stericol_cf_writer *writer,
                                          size_t variable, const char *name, stericol_cf_type type,
                                          size_t count, const double *numbers)
{
    const number_type kind = number_type_of(type);
    stericol_status status;
    int code;

    assert(kind.netcdf != NC_NAT && count > 0);
    for (size_t i = 0; i < count; i++) {
        const char *reason = isnan(numbers[i]) ? (is_real(type) ? NULL : "is missing")
                                               : misfit(&kind, is_real(type), false, numbers[i]);

        if (reason != NULL)
            return stericol_fail(context, STERICOL_OUTPUT, writer->staging.path, name, NULL,
                                 "the attribute's value %.9g %s", numbers[i], reason);
    }
    status = reserve(context, writer, name, OBJECT_OVERHEAD + count * kind.size);
    if (status != STERICOL_OK)
        return status;
    errno = 0;
    code = nc_put_att_double(writer->handle, owner_of(writer, variable), name, kind.netcdf, count, numbers);
    return code == NC_NOERR ? STERICOL_OK : translate(context, writer, code, errno, name);
}

/* ---- values ---- */

/* The values as they are handed to NetCDF-C: float for float variables, else double; NULL when memory is out
   or
   (*reason set) when value *at does not fit. */
static void *prepare(const written_variable *variable, const double *values, size_t count, size_t *at,
                     const char **reason)
{
    const number_type numbers = number_type_of(variable->type);
    const bool real = is_real(variable->type), narrow = variable->type == STERICOL_CF_FLOAT;
    void *stored = stericol_new_array(count, narrow ? sizeof(float) : sizeof(double));
    float *floats = stored;
    double *doubles = stored;

    if (stored == NULL)
        return NULL;
    for (size_t i = 0; i < count; i++) {
        double value = values[i];

        if (isnan(value)) {
            *reason = real || variable->fill ? NULL : "is missing where every value is needed";
            value = variable->fill ? numbers.fill : value;
        } else {
            *reason = misfit(&numbers, real, variable->fill, value);
        }
        if (*reason != NULL) {
            *at = i;
            free(stored);
            return NULL;
        }
        if (narrow)
            floats[i] = (float)value;
        else
            doubles[i] = value;
    }
    return stored;
}

/* Room for `count` values, beyond what HDF5 may still hold back of this variable and all others. */
static stericol_status reserve_values(stericol_context *context, stericol_cf_writer *writer,
                                      written_variable *variable, size_t count)
{
    const unsigned long long bytes = count * number_type_of(variable->type).size + OBJECT_OVERHEAD;
    stericol_status status = STERICOL_OK;

    if (!variable->touched)
        status = reserve(context, writer, variable->name, variable->held_back);
    variable->touched = variable->touched || status == STERICOL_OK;
    if (status == STERICOL_OK)
        status =
            stericol_cf_staging_reserve(context, &writer->staging, variable->name, writer->pending + bytes);
    return status;
}

stericol_status stericol_cf_write_values(stericol_context *context, stericol_cf_writer *writer,
                                         size_t variable, const size_t *start, const size_t *count,
                                         const double *values)
{
    written_variable *target = &writer->variables[variable];
    const char *reason = NULL;
    stericol_status status;
    size_t total = 1, at = 0;
    void *stored;
    int code;

    assert(variable < writer->variable_count && target->type != STERICOL_CF_STRING);
    for (size_t i = 0; i < target->rank; i++) {
        assert(start[i] <= target->length[i] && count[i] <= target->length[i] - start[i]);
        if (!stericol_multiply_sizes(total, count[i], &total))
            return stericol_fail_memory(context, 0, target->name);
    }
    if (total == 0)
        return STERICOL_OK;
    stored = prepare(target, values, total, &at, &reason);
    if (stored == NULL && reason != NULL)
        return stericol_fail(context, STERICOL_OUTPUT, writer->staging.path, target->name,
                             "look at the inputs for values that cannot be real", "the value %.9g %s",
                             values[at], reason);
    if (stored == NULL)
        return stericol_fail_memory(context, 0, target->name);
    status = reserve_values(context, writer, target, total);
    if (status != STERICOL_OK) {
        free(stored);
        return status;
    }
    errno = 0;
    if (target->type == STERICOL_CF_FLOAT)
        code = nc_put_vara_float(writer->handle, target->handle, start, count, stored);
    else
        code = nc_put_vara_double(writer->handle, target->handle, start, count, stored);
    free(stored);
    return code == NC_NOERR ? STERICOL_OK : translate(context, writer, code, errno, target->name);
}

stericol_status stericol_cf_write_strings(stericol_context *context, stericol_cf_writer *writer,
                                          size_t variable, size_t count, const char *const *strings)
{
    const written_variable *target = &writer->variables[variable];
    unsigned long long bytes = 0;
    stericol_status status;
    const char **list;
    int code;

    assert(variable < writer->variable_count && target->type == STERICOL_CF_STRING);
    assert(target->rank == 1 && target->length[0] == count);
    for (size_t i = 0; i < count; i++)
        bytes += strlen(strings[i]) + 2 * OBJECT_OVERHEAD / 64; /* heap entry and reference, taken amply */
    status = reserve(context, writer, target->name, bytes);
    if (status != STERICOL_OK)
        return status;
    list = stericol_new_array(count, sizeof *list); /* NetCDF-C wants pointers that it could write to */
    if (list == NULL)
        return stericol_fail_memory(context, 0, target->name);
    memcpy(list, strings, count * sizeof *list);
    errno = 0;
    code = nc_put_var_string(writer->handle, target->handle, list);
    free(list);
    return code == NC_NOERR ? STERICOL_OK : translate(context, writer, code, errno, target->name);
}
