/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "cf/room.h"

#include "base/checked.h"
#include "base/text.h"

#include <assert.h>
#include <netcdf.h>
#include <stdlib.h>
#include <string.h>

void stericol_cf_close(stericol_cf_file *file)
{
    size_t i;

    if (file == NULL)
        return;
    if (file->open)
        (void)nc_close(file->handle);
    for (i = 0; file->rules != NULL && i < file->variable_count; i++)
        free(file->rules[i]);
    free(file->rules);
    free(file->cache);
    stericol_cf_free_header(file);
    free(file->path);
    free(file);
}

/* What the guarded child does; the program then repeats it step by step. */
static int look(const char *target)
{
    stericol_cf_file file = {0};
    int status = nc_open(target, NC_NOWRITE, &file.handle);

    return status == NC_NOERR ? stericol_cf_read_header(&file) : status;
}

static const char *format_of(int handle, stericol_cf_storage storage)
{
    int format = NC_FORMAT_NETCDF4;

    if (storage == STERICOL_CF_STORAGE_ZARR)
        return "Zarr";
    (void)nc_inq_format(handle, &format);
    switch (format) {
    case NC_FORMAT_CLASSIC:
        return "classic";
    case NC_FORMAT_64BIT_OFFSET:
        return "64-bit offset";
    case NC_FORMAT_64BIT_DATA:
        return "64-bit data";
    default:
        return "NetCDF-4";
    }
}

/* A file that was looked at before and has not changed since is trusted. */
static bool is_known(const stericol_cf_location *location, const stericol_cf_identity *known)
{
    return known != NULL && known->bytes == location->bytes && known->changed == location->changed;
}

static stericol_status check_before_open(stericol_context *context, const char *path,
                                         const stericol_cf_location *location,
                                         const stericol_cf_identity *known)
{
    stericol_status status = STERICOL_OK;

    if (is_known(location, known))
        return STERICOL_OK;
    if (location->storage == STERICOL_CF_STORAGE_CLASSIC)
        status = stericol_cf_check_classic(context, path, location->local);
    else if (location->storage == STERICOL_CF_STORAGE_HDF5)
        status = stericol_cf_check_superblock(context, path, location);
    if (status == STERICOL_OK)
        status = stericol_cf_guard(context, path, location->target, look, &STERICOL_CF_GUARD_LIMITS);
    return status;
}

static stericol_status open_located(stericol_context *context, const stericol_cf_location *location,
                                    stericol_cf_file *file)
{
    int status = nc_open(location->target, NC_NOWRITE, &file->handle);

    file->open = status == NC_NOERR;
    if (status == NC_NOERR)
        status = stericol_cf_read_header(file);
    if (status == NC_ENOMEM)
        return stericol_fail_memory(context, 0, "a file's header");
    if (status != NC_NOERR) /* it was well in the child a moment ago */
        return stericol_fail(context, STERICOL_INPUT, file->path, NULL, "try again when nothing writes to it",
                             "changed while it was opened (%s)", nc_strerror(status));
    file->format = format_of(file->handle, location->storage);
    file->bytes = location->bytes;
    file->changed = location->changed;
    file->rules = stericol_new_array(file->variable_count, sizeof(void *));
    file->cache = stericol_new_array(file->variable_count, sizeof *file->cache);
    if (file->rules == NULL || file->cache == NULL)
        return stericol_fail_memory(context, 0, "a file's header");
    return STERICOL_OK;
}

stericol_status stericol_cf_open(stericol_context *context, const char *path, stericol_cf_file **file)
{
    return stericol_cf_open_again(context, path, NULL, file);
}

stericol_status stericol_cf_open_again(stericol_context *context, const char *path,
                                       const stericol_cf_identity *known, stericol_cf_file **file)
{
    stericol_cf_location location;
    stericol_cf_file *opened = NULL;
    stericol_status status;

    *file = NULL;
    status = stericol_cf_locate(context, path, &location);
    if (status != STERICOL_OK)
        return status;
    status = check_before_open(context, path, &location, known);
    if (status != STERICOL_OK)
        goto done;
    opened = calloc(1, sizeof *opened);
    if (opened != NULL)
        opened->path = stericol_copy_string(path);
    if (opened == NULL || opened->path == NULL)
        status = stericol_fail_memory(context, 0, "a file's header");
    else
        status = open_located(context, &location, opened);
done:
    stericol_cf_location_clear(&location);
    if (status == STERICOL_OK)
        *file = opened;
    else
        stericol_cf_close(opened);
    return status;
}

const char *stericol_cf_path(const stericol_cf_file *file)
{
    return file->path;
}

const char *stericol_cf_format(const stericol_cf_file *file)
{
    return file->format;
}

size_t stericol_cf_dimension_count(const stericol_cf_file *file)
{
    return file->dimension_count;
}

const stericol_cf_dimension *stericol_cf_dimension_at(const stericol_cf_file *file, size_t index)
{
    assert(index < file->dimension_count);
    return &file->dimensions[index];
}

size_t stericol_cf_variable_count(const stericol_cf_file *file)
{
    return file->variable_count;
}

const stericol_cf_variable *stericol_cf_variable_at(const stericol_cf_file *file, size_t index)
{
    assert(index < file->variable_count);
    return &file->variables[index];
}

bool stericol_cf_value_count(const stericol_cf_file *file, const stericol_cf_variable *variable,
                             size_t *count)
{
    size_t product = 1, i;

    if (variable->rank > STERICOL_CF_MOST_RANK)
        return false;
    for (i = 0; i < variable->rank; i++) {
        if (!stericol_multiply_sizes(product, file->dimensions[variable->dimension[i]].length, &product))
            return false;
    }
    *count = product;
    return true;
}

stericol_cf_identity stericol_cf_identity_of(const stericol_cf_file *file)
{
    static const char *const names[] = {"id", "tracking_id", "uuid"};
    stericol_cf_identity identity = {.bytes = file->bytes, .changed = file->changed};
    size_t i;

    for (i = 0; i < sizeof names / sizeof names[0] && identity.id == NULL; i++) {
        identity.id = stericol_cf_global_text(file, names[i]);
        if (identity.id != NULL && identity.id[0] == '\0')
            identity.id = NULL;
    }
    return identity;
}

/* Whether start/count lie inside; fills both in for the whole variable where they are NULL. */
static bool part_of(const stericol_cf_file *file, const stericol_cf_variable *variable, const size_t *start,
                    const size_t *count, size_t *from, size_t *extent, size_t *total)
{
    size_t i;

    *total = 1;
    for (i = 0; i < variable->rank; i++) {
        const size_t length = file->dimensions[variable->dimension[i]].length;

        from[i] = start != NULL ? start[i] : 0;
        if (from[i] > length)
            return false;
        extent[i] = count != NULL ? count[i] : length - from[i];
        if (extent[i] > length - from[i] || !stericol_multiply_sizes(*total, extent[i], total))
            return false;
    }
    return true;
}

stericol_status stericol_cf_read(stericol_context *context, stericol_cf_file *file,
                                 const stericol_cf_variable *variable, const size_t *start,
                                 const size_t *count, double *values)
{
    size_t from[STERICOL_CF_MOST_RANK], extent[STERICOL_CF_MOST_RANK], stride[STERICOL_CF_MOST_RANK];
    size_t total, i, product = 1;
    stericol_cf_buffer buffer = {0};
    stericol_cf_gather gather = {
        .start = from, .count = extent, .stride = stride, .values = values, .buffer = &buffer};
    stericol_cf_rules *rules;
    stericol_status status = stericol_cf_rules_of(context, file, variable, &rules);

    if (status != STERICOL_OK)
        return status;
    if (!part_of(file, variable, start, count, from, extent, &total))
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name,
                             "ask for a part that is there", "a part outside the variable is asked for");
    if (total == 0)
        return STERICOL_OK;
    for (i = variable->rank; i-- > 0; product *= extent[i])
        stride[i] = product;
    status = stericol_cf_gather_values(context, file, variable, rules, &gather);
    free(buffer.bytes);
    return status;
}

/* What is read at once describes a grid: a header that claims more than these lies, or the file is beyond
 * this program. */
static const size_t MOST_ON_LINE = (size_t)1 << 24, MOST_AT_ONCE = (size_t)1 << 29;

stericol_status stericol_cf_read_all(stericol_context *context, stericol_cf_file *file,
                                     const stericol_cf_variable *variable, size_t most, double **values,
                                     size_t *count)
{
    stericol_status status;
    size_t total;

    *values = NULL;
    *count = 0;
    if (!stericol_cf_value_count(file, variable, &total) || total > most)
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name,
                             "check that it is the variable meant",
                             "holds more than the %zu values that can be used here", most);
    if (total > (variable->rank == 1 ? MOST_ON_LINE : MOST_AT_ONCE))
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name,
                             "check that the header tells the truth about its lengths",
                             "claims %zu values, more than any grid has", total);
    *values = stericol_new_doubles(total);
    if (*values == NULL)
        return stericol_fail_memory(context, total * sizeof(double), variable->name);
    status = stericol_cf_read(context, file, variable, NULL, NULL, *values);
    if (status != STERICOL_OK) {
        free(*values);
        *values = NULL;
        return status;
    }
    *count = total;
    return STERICOL_OK;
}
