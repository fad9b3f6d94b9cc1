/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The end-of-file address in an HDF5 superblock (HDF5 File Format Specification 3.0, section II.A, layouts of
 * versions 0 to 3).  The library refuses a cut file too, but its message does not say that it was cut.
 */
#include "cf/room.h"

#include <fcntl.h>
#include <string.h>
#include <unistd.h>

static unsigned long long little_endian(const unsigned char *bytes, size_t count)
{
    unsigned long long value = 0;

    while (count-- > 0)
        value = value << 8 | bytes[count];
    return value;
}

/* Where the end-of-file address stands behind the signature and how wide it is; false where this is unknown.
 */
static bool end_address_place(const unsigned char *block, size_t *place, size_t *width)
{
    unsigned version = block[8];

    if (version <= 1) {
        *width = block[13];
        *place = (version == 0 ? 24 : 28) + 2 * *width;
    } else if (version <= 3) {
        *width = block[9];
        *place = 12 + 2 * *width;
    } else {
        return false;
    }
    return *width == 2 || *width == 4 || *width == 8;
}

stericol_status stericol_cf_check_superblock(stericol_context *context, const char *path,
                                             const stericol_cf_location *location)
{
    unsigned char block[64] = {0};
    size_t place, width;
    unsigned long long end;
    ssize_t length;
    int handle = open(location->local, O_RDONLY | O_NONBLOCK | O_CLOEXEC);

    if (handle < 0)
        return STERICOL_OK; /* the next to open it says so */
    length = pread(handle, block, sizeof block, (off_t)location->superblock);
    close(handle);
    if (length < (ssize_t)sizeof block)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "copy it again",
                             "is cut short: it ends within its first block, after %llu bytes",
                             location->bytes);
    if (!end_address_place(block, &place, &width))
        return STERICOL_OK; /* a version that the library may know */
    end = little_endian(block + place, width);
    if (end > location->bytes)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "copy it again",
                             "is cut short: it holds %llu bytes where its header needs %llu", location->bytes,
                             end);
    return STERICOL_OK;
}
