/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * How long a classic file must be, from its own header.  NetCDF-C reads beyond the end of a cut classic file
 * without an error, so the length is checked here.
 *
 * Grammar: NetCDF User's Guide, appendix B, "The NetCDF Classic Format Specification" (CDF-1, CDF-2) and its
 * 64-bit data variant (CDF-5).  Nothing that the header says is believed before it is checked: no size is
 * used for memory, and every item takes bytes of a file that has an end.
 */
#include "cf/room.h"

#include "base/checked.h"

#include <fcntl.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum { TAG_DIMENSION = 10, TAG_VARIABLE = 11, TAG_ATTRIBUTE = 12, MOST_RANK = 1024, MOST_NAME = 4096 };

typedef struct header {
    int handle;
    unsigned version; /* 1, 2, 5 */
    uint64_t bytes;   /* of the file */
    uint64_t place;   /* of the next byte to read */
    unsigned char block[8192];
    uint64_t block_place;
    size_t block_length;
    const char *wrong; /* the first thing found wrong; NULL while all is well */

    size_t dimensions;
    uint64_t *length; /* of each dimension; 0 = the record dimension */
    uint64_t records;
    bool records_unknown;

    uint64_t fixed_end;   /* where the data of the fixed variables end */
    uint64_t record_size; /* of all record variables, each padded */
    uint64_t record_end;  /* where the data of the last record variable end in a record */
    uint64_t bare_record; /* of the last record variable, without padding */
    size_t record_variables;
} header;

static void wrong(header *head, const char *what)
{
    if (head->wrong == NULL)
        head->wrong = what;
}

static bool fill_block(header *head)
{
    ssize_t length = pread(head->handle, head->block, sizeof head->block, (off_t)head->place);

    head->block_place = head->place;
    head->block_length = length > 0 ? (size_t)length : 0;
    return length > 0;
}

/* The next `count` bytes (1, 2, 4, 8) as a big-endian number; 0 after the end, which is wrong. */
static uint64_t number(header *head, size_t count)
{
    uint64_t value = 0;

    for (; count > 0 && head->wrong == NULL; count--) {
        if (head->place < head->block_place || head->place - head->block_place >= head->block_length) {
            if (!fill_block(head)) {
                wrong(head, "it ends within its header");
                return 0;
            }
        }
        value = value << 8 | head->block[head->place - head->block_place];
        head->place++;
    }
    return value;
}

static void skip(header *head, uint64_t count)
{
    if (count > head->bytes - head->place)
        wrong(head, "it ends within its header");
    else
        head->place += count;
}

/* A count or a length: four bytes, eight in CDF-5. */
static uint64_t natural(header *head)
{
    uint64_t value = number(head, head->version == 5 ? 8 : 4);

    if (value >> (head->version == 5 ? 63 : 31) != 0)
        wrong(head, "its header holds a negative length");
    return value;
}

static uint64_t padded(uint64_t count)
{
    return (count + 3) / 4 * 4;
}

static void name(header *head)
{
    uint64_t length = natural(head);

    if (length == 0 || length > MOST_NAME)
        wrong(head, "its header holds a name of impossible length");
    else
        skip(head, padded(length));
}

/* Bytes a value; 0 for a type that the format has not. */
static unsigned type_size(header *head)
{
    static const unsigned char sizes[] = {0, 1, 1, 2, 4, 4, 8, 1, 2, 4, 8, 8};
    uint64_t type = number(head, 4);

    if (type == 0 || type > (head->version == 5 ? 11 : 6)) {
        wrong(head, "its header holds an unknown type");
        return 1;
    }
    return sizes[type];
}

/* The head of a list: how many items follow. */
static size_t list(header *head, unsigned tag, size_t most)
{
    uint64_t found = number(head, 4), count = natural(head);

    if (found == 0 && count == 0)
        return 0;
    if (found != tag) {
        wrong(head, "its header is not in order");
        return 0;
    }
    if (count > most) {
        wrong(head, "its header announces more items than a file can hold");
        return 0;
    }
    return (size_t)count;
}

static void read_attributes(header *head)
{
    size_t count = list(head, TAG_ATTRIBUTE, STERICOL_CF_MOST_ATTRIBUTES), i;

    for (i = 0; i < count && head->wrong == NULL; i++) {
        uint64_t size, values;

        name(head);
        size = type_size(head);
        values = natural(head);
        if (values > STERICOL_CF_MOST_ATTRIBUTE_BYTES / size)
            wrong(head, "its header holds an attribute of impossible length");
        else
            skip(head, padded(values * size));
    }
}

static void read_dimensions(header *head)
{
    size_t count = list(head, TAG_DIMENSION, STERICOL_CF_MOST_DIMENSIONS), i, unlimited = 0;

    head->length = stericol_new_array(count, sizeof *head->length);
    if (head->length == NULL) {
        wrong(head, "no memory is left for its header");
        return;
    }
    for (i = 0; i < count && head->wrong == NULL; i++) {
        name(head);
        head->length[i] = natural(head);
        unlimited += head->length[i] == 0;
    }
    head->dimensions = i;
    if (unlimited > 1)
        wrong(head, "its header has more than one record dimension");
}

static bool times(uint64_t *product, uint64_t factor)
{
    if (factor != 0 && *product > (uint64_t)INT64_MAX / factor)
        return false;
    *product *= factor;
    return true;
}

/* The shape of one variable: its values (in one record, for a record variable). */
static uint64_t read_shape(header *head, bool *in_records)
{
    uint64_t rank = natural(head), values = 1, i;

    *in_records = false;
    if (rank > MOST_RANK) {
        wrong(head, "its header holds a variable with too many dimensions");
        return 0;
    }
    for (i = 0; i < rank && head->wrong == NULL; i++) {
        uint64_t dimension = natural(head);

        if (head->wrong != NULL)
            return 0;
        if (dimension >= head->dimensions)
            wrong(head, "its header names a dimension that is not there");
        else if (head->length[dimension] == 0 && i > 0)
            wrong(head, "its header has a record dimension that is not the first");
        else if (head->length[dimension] == 0)
            *in_records = true;
        else if (!times(&values, head->length[dimension]))
            wrong(head, "its header declares more values than can exist");
    }
    return values;
}

/* Takes in one variable of `size` bytes (a record's worth) that begins at `begin`. */
static void place_variable(header *head, uint64_t begin, uint64_t size, bool in_records)
{
    if (begin > (uint64_t)INT64_MAX / 2 || size > (uint64_t)INT64_MAX / 4) {
        wrong(head, "its header declares more values than can exist");
    } else if (!in_records) {
        if (size > 0 && begin + size > head->fixed_end)
            head->fixed_end = begin + size;
    } else {
        if (begin + size > head->record_end) {
            head->record_end = begin + size;
            head->bare_record = size;
        }
        if (head->record_size > (uint64_t)INT64_MAX / 4)
            wrong(head, "its header declares more values than can exist");
        head->record_size += padded(size);
        head->record_variables++;
    }
}

static void read_variables(header *head)
{
    size_t count = list(head, TAG_VARIABLE, STERICOL_CF_MOST_VARIABLES), i;
    uint64_t least_begin = UINT64_MAX;

    for (i = 0; i < count && head->wrong == NULL; i++) {
        uint64_t values, begin, size;
        bool in_records;

        name(head);
        values = read_shape(head, &in_records);
        read_attributes(head);
        size = type_size(head);
        (void)natural(head); /* vsize: redundant, and wrong by design for large variables */
        begin = number(head, head->version == 1 ? 4 : 8);
        if (head->wrong != NULL)
            return;
        if (!times(&values, size))
            wrong(head, "its header declares more values than can exist");
        else
            place_variable(head, begin, values, in_records);
        least_begin = begin < least_begin ? begin : least_begin;
    }
    if (count > 0 && least_begin < head->place)
        wrong(head, "its data begin within its header");
}

/* Bytes that the file must have for all that it declares; UINT64_MAX on overflow. */
static uint64_t needed(const header *head)
{
    uint64_t size = head->record_size, steps = head->records;

    if (head->record_variables == 0 || head->records == 0 || head->records_unknown)
        return head->fixed_end > head->place ? head->fixed_end : head->place;
    if (head->record_variables == 1) /* the one record variable is not padded */
        size = head->bare_record;
    if (!times(&size, steps - 1) || size > UINT64_MAX / 2)
        return UINT64_MAX;
    size += head->record_end;
    return size > head->fixed_end ? size : head->fixed_end;
}

static void read_classic_header(header *head)
{
    uint64_t records;

    head->place = 3;
    head->version = (unsigned)number(head, 1);
    records = number(head, head->version == 5 ? 8 : 4);
    /* All bits set: written as a stream, the number of records follows from the size. */
    head->records_unknown = records == (head->version == 5 ? UINT64_MAX : UINT32_MAX);
    head->records = records;
    read_dimensions(head);
    if (head->wrong == NULL)
        read_attributes(head);
    if (head->wrong == NULL)
        read_variables(head);
}

stericol_status stericol_cf_check_classic(stericol_context *context, const char *path, const char *local)
{
    struct stat found;
    stericol_status status = STERICOL_OK;
    header *head = calloc(1, sizeof *head);

    if (head == NULL)
        return stericol_fail_memory(context, sizeof *head, "a file's header");
    head->handle = open(local, O_RDONLY | O_NONBLOCK | O_CLOEXEC);
    if (head->handle < 0 || fstat(head->handle, &found) != 0) {
        status =
            stericol_fail(context, STERICOL_INPUT, path, NULL, "check its permissions", "cannot be opened");
        goto done;
    }
    head->bytes = (uint64_t)found.st_size;
    read_classic_header(head);
    if (head->wrong != NULL)
        status = stericol_fail(context, STERICOL_INPUT, path, NULL, "copy it again", "is damaged: %s",
                               head->wrong);
    else if (needed(head) > head->bytes)
        status = stericol_fail(context, STERICOL_INPUT, path, NULL, "copy it again",
                               "is cut short: it holds %llu bytes where its header needs %llu",
                               (unsigned long long)head->bytes, (unsigned long long)needed(head));
done:
    if (head->handle >= 0)
        close(head->handle);
    free(head->length);
    free(head);
    return status;
}
