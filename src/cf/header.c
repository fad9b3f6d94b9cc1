/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The header as records.  The same walk runs in the guarded child and then in the program, so that whatever
 * the library trips over is met in the child first.
 */
#include "cf/room.h"

#include "base/checked.h"
#include "base/text.h"

#include <netcdf.h>
#include <netcdf_filter.h>
#include <stdlib.h>
#include <string.h>

/* Where the walk stands, with what it has taken in so far. */
typedef struct walk {
    stericol_cf_file *file;
    int *dimension_ids; /* of NetCDF-C, one a dimension */
    size_t dimension_room, variable_room;
    size_t attributes, attribute_bytes, groups;
} walk;

static stericol_cf_type type_of(nc_type type)
{
    switch (type) {
    case NC_BYTE:
        return STERICOL_CF_INT8;
    case NC_UBYTE:
        return STERICOL_CF_UINT8;
    case NC_SHORT:
        return STERICOL_CF_INT16;
    case NC_USHORT:
        return STERICOL_CF_UINT16;
    case NC_INT:
        return STERICOL_CF_INT32;
    case NC_UINT:
        return STERICOL_CF_UINT32;
    case NC_INT64:
        return STERICOL_CF_INT64;
    case NC_UINT64:
        return STERICOL_CF_UINT64;
    case NC_FLOAT:
        return STERICOL_CF_FLOAT;
    case NC_DOUBLE:
        return STERICOL_CF_DOUBLE;
    case NC_CHAR:
        return STERICOL_CF_CHAR;
    case NC_STRING:
        return STERICOL_CF_STRING;
    default:
        return STERICOL_CF_OTHER;
    }
}

/* Room for one more item; twice as much each time, so that growing stays cheap. */
static bool grow(void **array, size_t used, size_t *room, size_t size)
{
    size_t more = *room == 0 ? 16 : 2 * *room;

    if (used < *room)
        return true;
    if (!stericol_grow_array(array, more, size))
        return false;
    *room = more;
    return true;
}

static int read_characters(int group, int variable, stericol_cf_attribute *attribute, size_t length)
{
    int status;

    attribute->text = malloc(length + 1);
    if (attribute->text == NULL)
        return NC_ENOMEM;
    status = length == 0 ? NC_NOERR : nc_get_att_text(group, variable, attribute->name, attribute->text);
    while (length > 0 && attribute->text[length - 1] == '\0')
        length--;
    attribute->text[length] = '\0';
    return status;
}

static int read_strings(int group, int variable, stericol_cf_attribute *attribute, size_t length,
                        size_t *bytes)
{
    stericol_text joined = {0};
    char **strings;
    size_t i;
    int status;

    if (length > STERICOL_CF_MOST_ATTRIBUTE_BYTES / sizeof *strings)
        return STERICOL_CF_BEYOND;
    strings = stericol_new_array(length, sizeof *strings);
    if (strings == NULL)
        return NC_ENOMEM;
    status = length == 0 ? NC_NOERR : nc_get_att_string(group, variable, attribute->name, strings);
    if (status == NC_NOERR) {
        for (i = 0; i < length && joined.length <= STERICOL_CF_MOST_ATTRIBUTE_BYTES; i++) {
            stericol_text_add(&joined, i > 0 ? " " : "");
            stericol_text_add(&joined, strings[i] != NULL ? strings[i] : "");
        }
        (void)nc_free_string(length, strings);
        *bytes += joined.length;
        attribute->text = joined.length == 0 ? stericol_copy_string("") : stericol_text_take(&joined);
        if (attribute->text == NULL)
            status = NC_ENOMEM;
    }
    stericol_text_free(&joined);
    free(strings);
    return status;
}

static int read_numbers(int group, int variable, stericol_cf_attribute *attribute, size_t length)
{
    attribute->numbers = stericol_new_array(length, sizeof *attribute->numbers);
    if (attribute->numbers == NULL)
        return NC_ENOMEM;
    attribute->count = length;
    return length == 0 ? NC_NOERR : nc_get_att_double(group, variable, attribute->name, attribute->numbers);
}

static int read_attribute(walk *at, int group, int variable, int number, stericol_cf_attribute *attribute)
{
    char name[NC_MAX_NAME + 1] = "";
    nc_type type;
    size_t length;
    int status = nc_inq_attname(group, variable, number, name);

    if (status == NC_NOERR)
        status = nc_inq_att(group, variable, name, &type, &length);
    if (status != NC_NOERR)
        return status;
    attribute->type = type_of(type);
    attribute->name = stericol_copy_string(name);
    if (attribute->name == NULL)
        return NC_ENOMEM;
    if (length > STERICOL_CF_MOST_ATTRIBUTE_BYTES / sizeof(double))
        return length > STERICOL_CF_MOST_ATTRIBUTE_BYTES || attribute->type != STERICOL_CF_CHAR
                   ? STERICOL_CF_BEYOND
                   : read_characters(group, variable, attribute, length);
    at->attribute_bytes += strlen(name) + length * sizeof(double);
    if (attribute->type == STERICOL_CF_CHAR)
        status = read_characters(group, variable, attribute, length);
    else if (attribute->type == STERICOL_CF_STRING)
        status = read_strings(group, variable, attribute, length, &at->attribute_bytes);
    else if (attribute->type != STERICOL_CF_OTHER)
        status = read_numbers(group, variable, attribute, length);
    return status == NC_NOERR && at->attribute_bytes > STERICOL_CF_MOST_HEADER_BYTES ? STERICOL_CF_BEYOND
                                                                                     : status;
}

static int read_attributes(walk *at, int group, int variable, int count, stericol_cf_attribute **attributes,
                           size_t *attribute_count)
{
    int i, status = NC_NOERR;

    if (count < 0 || (size_t)count > STERICOL_CF_MOST_ATTRIBUTES - at->attributes)
        return STERICOL_CF_BEYOND;
    at->attributes += (size_t)count;
    *attributes = stericol_new_array((size_t)count, sizeof **attributes);
    if (*attributes == NULL)
        return NC_ENOMEM;
    for (i = 0; i < count && status == NC_NOERR; i++) {
        *attribute_count = (size_t)i + 1;
        status = read_attribute(at, group, variable, i, &(*attributes)[i]);
    }
    return status;
}

static int read_dimension(walk *at, int group, const char *group_name, int id, bool unlimited)
{
    stericol_cf_file *file = at->file;
    char name[NC_MAX_NAME + 1] = "";
    stericol_cf_dimension *dimension;
    size_t ids_room = at->dimension_room;
    void *ids = at->dimension_ids, *records = file->dimensions;
    int status;

    if (file->dimension_count >= STERICOL_CF_MOST_DIMENSIONS)
        return STERICOL_CF_BEYOND;
    if (!grow(&ids, file->dimension_count, &ids_room, sizeof *at->dimension_ids))
        return NC_ENOMEM;
    at->dimension_ids = ids;
    if (!grow(&records, file->dimension_count, &at->dimension_room, sizeof *file->dimensions))
        return NC_ENOMEM;
    file->dimensions = records;
    dimension = &file->dimensions[file->dimension_count];
    *dimension = (stericol_cf_dimension){.unlimited = unlimited};
    at->dimension_ids[file->dimension_count] = id;
    file->dimension_count++;
    status = nc_inq_dim(group, id, name, &dimension->length);
    dimension->name = stericol_copy_string(name);
    dimension->group = stericol_copy_string(group_name);
    if (dimension->name == NULL || dimension->group == NULL)
        return NC_ENOMEM;
    return status;
}

static int read_dimensions(walk *at, int group, const char *group_name)
{
    int *ids = NULL, *unlimited = NULL, count = 0, unlimited_count = 0, i, j;
    int status = nc_inq_dimids(group, &count, NULL, 0);

    if (status == NC_NOERR)
        status = nc_inq_unlimdims(group, &unlimited_count, NULL);
    if (status != NC_NOERR)
        return status;
    if (count < 0 || count > STERICOL_CF_MOST_DIMENSIONS || unlimited_count < 0 ||
        unlimited_count > STERICOL_CF_MOST_DIMENSIONS)
        return STERICOL_CF_BEYOND;
    ids = stericol_new_array((size_t)count, sizeof *ids);
    unlimited = stericol_new_array((size_t)unlimited_count, sizeof *unlimited);
    if (ids == NULL || unlimited == NULL)
        status = NC_ENOMEM;
    if (status == NC_NOERR)
        status = nc_inq_dimids(group, NULL, ids, 0);
    if (status == NC_NOERR)
        status = nc_inq_unlimdims(group, NULL, unlimited);
    for (i = 0; i < count && status == NC_NOERR; i++) {
        bool endless = false;

        for (j = 0; j < unlimited_count; j++)
            endless = endless || unlimited[j] == ids[i];
        status = read_dimension(at, group, group_name, ids[i], endless);
    }
    free(ids);
    free(unlimited);
    return status;
}

/* The record of a dimension by its NetCDF id; ids mostly equal positions, so the search starts there. */
static bool find_dimension(const walk *at, int id, size_t *index)
{
    const size_t count = at->file->dimension_count;
    size_t i;

    if (id >= 0 && (size_t)id < count && at->dimension_ids[id] == id) {
        *index = (size_t)id;
        return true;
    }
    for (i = 0; i < count; i++) {
        if (at->dimension_ids[i] == id) {
            *index = i;
            return true;
        }
    }
    return false;
}

static int read_shape(walk *at, stericol_cf_variable *variable, int rank)
{
    int ids[NC_MAX_VAR_DIMS], i, status;
    uint64_t values = stericol_cf_size_of(variable->type);

    if (rank < 0 || rank > NC_MAX_VAR_DIMS)
        return STERICOL_CF_BEYOND;
    variable->rank = (size_t)rank;
    status = nc_inq_vardimid(variable->group_handle, variable->handle, ids);
    for (i = 0; i < rank && status == NC_NOERR; i++) {
        size_t index, length;

        if (!find_dimension(at, ids[i], &index))
            return NC_EBADDIM;
        if (i < STERICOL_CF_MOST_RANK)
            variable->dimension[i] = index;
        length = at->file->dimensions[index].length;
        if (length > 0 && values > (uint64_t)INT64_MAX / length)
            return NC_EVARSIZE; /* more bytes than any disk has: the header lies */
        values *= length > 0 ? length : 1;
    }
    return status;
}

static int read_layout(stericol_cf_variable *variable)
{
    size_t chunk[NC_MAX_VAR_DIMS] = {0}, filters = 0, i;
    int storage = NC_CONTIGUOUS;

    if (variable->rank == 0 || variable->rank > STERICOL_CF_MOST_RANK)
        return NC_NOERR;
    if (nc_inq_var_chunking(variable->group_handle, variable->handle, &storage, chunk) != NC_NOERR)
        return NC_NOERR; /* classic files have no chunks */
    variable->chunked = storage == NC_CHUNKED;
    for (i = 0; variable->chunked && i < variable->rank; i++) {
        if (chunk[i] == 0)
            return NC_EBADCHUNK;
        variable->chunk[i] = chunk[i];
    }
    if (nc_inq_var_filter_ids(variable->group_handle, variable->handle, &filters, NULL) == NC_NOERR)
        variable->compressed = filters > 0;
    return NC_NOERR;
}

static int read_variable(walk *at, int group, const char *group_name, int id)
{
    stericol_cf_file *file = at->file;
    char name[NC_MAX_NAME + 1] = "";
    stericol_text full = {0};
    stericol_cf_variable *variable;
    void *records = file->variables;
    nc_type type = NC_NAT;
    int rank = 0, attributes = 0, status;

    if (file->variable_count >= STERICOL_CF_MOST_VARIABLES)
        return STERICOL_CF_BEYOND;
    if (!grow(&records, file->variable_count, &at->variable_room, sizeof *file->variables))
        return NC_ENOMEM;
    file->variables = records;
    variable = &file->variables[file->variable_count++];
    *variable = (stericol_cf_variable){.group_handle = group, .handle = id};
    status = nc_inq_var(group, id, name, &type, &rank, NULL, &attributes);
    if (status != NC_NOERR)
        return status;
    if (strcmp(group_name, "/") != 0)
        stericol_text_format(&full, "%s/", group_name);
    stericol_text_add(&full, name);
    variable->type = type_of(type);
    variable->short_name = stericol_copy_string(name);
    variable->group = stericol_copy_string(group_name);
    variable->name = stericol_text_take(&full);
    if (variable->short_name == NULL || variable->group == NULL || variable->name == NULL)
        return NC_ENOMEM;
    status = read_shape(at, variable, rank);
    if (status == NC_NOERR)
        status = read_layout(variable);
    if (status == NC_NOERR)
        status =
            read_attributes(at, group, id, attributes, &variable->attributes, &variable->attribute_count);
    return status;
}

static int read_variables(walk *at, int group, const char *group_name)
{
    int count = 0, i, *ids, status = nc_inq_varids(group, &count, NULL);

    if (status != NC_NOERR)
        return status;
    if (count < 0 || count > STERICOL_CF_MOST_VARIABLES)
        return STERICOL_CF_BEYOND;
    ids = stericol_new_array((size_t)count, sizeof *ids);
    if (ids == NULL)
        return NC_ENOMEM;
    status = nc_inq_varids(group, NULL, ids);
    for (i = 0; i < count && status == NC_NOERR; i++)
        status = read_variable(at, group, group_name, ids[i]);
    free(ids);
    return status;
}

static int read_group(walk *at, int group, const char *group_name, int depth);

/* One group below `group_name`. */
static int read_child(walk *at, int group, const char *group_name, int depth)
{
    char name[NC_MAX_NAME + 1] = "";
    stericol_text full = {0};
    int status = nc_inq_grpname(group, name);

    stericol_text_format(&full, "%s/%s", strcmp(group_name, "/") == 0 ? "" : group_name, name);
    if (status == NC_NOERR && full.failed)
        status = NC_ENOMEM;
    if (status == NC_NOERR)
        status = read_group(at, group, stericol_text_string(&full), depth + 1);
    stericol_text_free(&full);
    return status;
}

static int read_group(walk *at, int group, const char *group_name, int depth)
{
    int count = 0, i, *children = NULL, status;

    if (depth > STERICOL_CF_DEEPEST_GROUP || ++at->groups > STERICOL_CF_MOST_GROUPS)
        return STERICOL_CF_BEYOND;
    status = read_dimensions(at, group, group_name);
    if (status == NC_NOERR)
        status = read_variables(at, group, group_name);
    if (status == NC_NOERR)
        status = nc_inq_grps(group, &count, NULL);
    if (status != NC_NOERR || count == 0)
        return status;
    if (count < 0 || count > STERICOL_CF_MOST_GROUPS)
        return STERICOL_CF_BEYOND;
    children = stericol_new_array((size_t)count, sizeof *children);
    if (children == NULL)
        return NC_ENOMEM;
    status = nc_inq_grps(group, NULL, children);
    for (i = 0; i < count && status == NC_NOERR; i++)
        status = read_child(at, children[i], group_name, depth);
    free(children);
    return status;
}

int stericol_cf_read_header(stericol_cf_file *file)
{
    walk at = {.file = file};
    int globals = 0, status = nc_inq_natts(file->handle, &globals);

    if (status == NC_NOERR)
        status = read_attributes(&at, file->handle, NC_GLOBAL, globals, &file->globals, &file->global_count);
    if (status == NC_NOERR)
        status = read_group(&at, file->handle, "/", 0);
    free(at.dimension_ids);
    return status;
}

static void free_attributes(stericol_cf_attribute *attributes, size_t count)
{
    size_t i;

    for (i = 0; i < count; i++) {
        free(attributes[i].name);
        free(attributes[i].text);
        free(attributes[i].numbers);
    }
    free(attributes);
}

void stericol_cf_free_header(stericol_cf_file *file)
{
    size_t i;

    for (i = 0; i < file->dimension_count; i++) {
        free(file->dimensions[i].name);
        free(file->dimensions[i].group);
    }
    for (i = 0; i < file->variable_count; i++) {
        free(file->variables[i].name);
        free(file->variables[i].short_name);
        free(file->variables[i].group);
        free_attributes(file->variables[i].attributes, file->variables[i].attribute_count);
    }
    free(file->dimensions);
    free(file->variables);
    free_attributes(file->globals, file->global_count);
    file->dimensions = NULL;
    file->variables = NULL;
    file->globals = NULL;
    file->dimension_count = file->variable_count = file->global_count = 0;
}
