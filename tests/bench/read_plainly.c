/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The yardstick: reads every value of temperature and salinity with one NetCDF-C loop, a block of chunks at a
 * time, and does nothing with them.
 *
 *   read_plainly FILE
 */
#include <netcdf.h>

#include <stdio.h>
#include <stdlib.h>

static void check(int status, const char *what)
{
    if (status != NC_NOERR) {
        fprintf(stderr, "read_plainly: %s: %s\n", what, nc_strerror(status));
        exit(1);
    }
}

/* Slabs of whole chunks along the first two dimensions, all of the others: no chunk is read twice. */
static void read_field(int file, const char *name)
{
    int variable, dimension[4], storage;
    size_t length[4], chunk[4], values;
    nc_type type;
    size_t size;
    void *buffer;

    check(nc_inq_varid(file, name, &variable), name);
    check(nc_inq_var(file, variable, NULL, &type, NULL, dimension, NULL), name);
    check(nc_inq_type(file, type, NULL, &size), name);
    for (int d = 0; d < 4; d++)
        check(nc_inq_dimlen(file, dimension[d], &length[d]), name);
    if (nc_inq_var_chunking(file, variable, &storage, chunk) != NC_NOERR || storage != NC_CHUNKED)
        chunk[0] = chunk[1] = 1;
    values = chunk[0] * chunk[1] * length[2] * length[3];
    buffer = malloc(values * size);
    for (size_t a = 0; a < length[0]; a += chunk[0])
        for (size_t b = 0; b < length[1]; b += chunk[1]) {
            size_t start[4] = {a, b, 0, 0};
            size_t count[4] = {length[0] - a < chunk[0] ? length[0] - a : chunk[0],
                               length[1] - b < chunk[1] ? length[1] - b : chunk[1], length[2], length[3]};

            check(nc_get_vara(file, variable, start, count, buffer), name);
        }
    free(buffer);
}

int main(int argc, char **argv)
{
    int file;

    if (argc != 2) {
        fputs("usage: read_plainly FILE\n", stderr);
        return 2;
    }
    check(nc_open(argv[1], NC_NOWRITE, &file), argv[1]);
    read_field(file, "temperature");
    read_field(file, "salinity");
    check(nc_close(file), argv[1]);
    return 0;
}
