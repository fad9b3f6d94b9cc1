/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "program/science.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

enum { PATH_ROOM = 1024, BUFFERS = 16 };

static char folder[PATH_ROOM];
static run_result said; /* of the last run */

double ring_area(double south, double north)
{
    return 2.0 * PI * AUTHALIC_RADIUS * AUTHALIC_RADIUS * (sin(north * PI / 180.0) - sin(south * PI / 180.0));
}

/* ---- files ---- */

void work_in(const char *name)
{
    snprintf(folder, sizeof folder, "%s/%s", TEST_BUILD_FOLDER, name);
    if (mkdir(folder, 0777) != 0)
        assert_int_equal(errno, EEXIST);
}

const char *in_folder(const char *name)
{
    static char buffers[BUFFERS][2 * PATH_ROOM];
    static size_t next;
    char *buffer = buffers[next++ % BUFFERS];

    snprintf(buffer, sizeof buffers[0], "%s/%s", folder, name);
    return buffer;
}

void write_text(const char *name, const char *text)
{
    FILE *file = fopen(in_folder(name), "w");

    assert_non_null(file);
    assert_true(fputs(text, file) >= 0);
    assert_int_equal(fclose(file), 0);
}

/* ---- a run ---- */

void forget_said(void)
{
    run_free(&said);
}

const char *said_out(void)
{
    return said.output == NULL ? "" : said.output;
}

const char *said_error(void)
{
    return said.errors == NULL ? "" : said.errors;
}

void assert_runs(const char *file, int line, int code, const char *const *arguments)
{
    const char *words[64] = {STERICOL_PROGRAM};
    size_t count = 0;

    for (; arguments[count] != NULL; count++) {
        assert_true(count + 2 < sizeof words / sizeof words[0]);
        words[count + 1] = arguments[count];
    }
    forget_said();
    said = run_captured(words, NULL, NULL);
    if (said.exit_code != code)
        for (size_t i = 0; i < count; i++)
            print_error("%s ", arguments[i]);
    run_expect_code(&said, code, file, line);
}

/* ---- a result ---- */

static int find_variable(int file, const char *name)
{
    int variable;
    int status = nc_inq_varid(file, name, &variable);

    if (status != NC_NOERR)
        print_error("variable %s: %s\n", name, nc_strerror(status));
    must(status);
    return variable;
}

field read_field_of(int file, const char *name)
{
    int variable = find_variable(file, name), rank, dimension[NC_MAX_VAR_DIMS];
    field of = {1, NULL};
    double fill = NC_FILL_DOUBLE;

    must(nc_inq_var(file, variable, NULL, NULL, &rank, dimension, NULL));
    for (int i = 0; i < rank; i++) {
        size_t length;

        must(nc_inq_dimlen(file, dimension[i], &length));
        of.count *= length;
    }
    of.value = malloc((of.count + 1) * sizeof(double));
    assert_non_null(of.value);
    must(nc_get_var_double(file, variable, of.value));
    if (nc_get_att_double(file, variable, "_FillValue", &fill) == NC_NOERR)
        for (size_t i = 0; i < of.count; i++)
            if (of.value[i] >= fill && of.value[i] <= fill)
                of.value[i] = (double)NAN;
    return of;
}

field read_field(const char *path, const char *name)
{
    int file;
    field of;

    must(nc_open(path, NC_NOWRITE, &file));
    of = read_field_of(file, name);
    must(nc_close(file));
    return of;
}

void field_free(field *of)
{
    free(of->value);
    *of = (field){0, NULL};
}

bool holds(const char *path, const char *name)
{
    int file, variable;
    bool found;

    must(nc_open(path, NC_NOWRITE, &file));
    found = nc_inq_varid(file, name, &variable) == NC_NOERR;
    must(nc_close(file));
    return found;
}

const char *file_text(const char *path, const char *attribute)
{
    static char buffers[4][16384];
    static size_t next;
    char *buffer = buffers[next++ % 4];
    int file;
    size_t length;

    buffer[0] = '\0';
    must(nc_open(path, NC_NOWRITE, &file));
    if (nc_inq_attlen(file, NC_GLOBAL, attribute, &length) == NC_NOERR) {
        assert_true(length < sizeof buffers[0]);
        must(nc_get_att_text(file, NC_GLOBAL, attribute, buffer));
        buffer[length] = '\0';
    }
    must(nc_close(file));
    return buffer;
}

double file_number(const char *path, const char *attribute)
{
    double value;
    int file;

    must(nc_open(path, NC_NOWRITE, &file));
    must(nc_get_att_double(file, NC_GLOBAL, attribute, &value));
    must(nc_close(file));
    return value;
}

static size_t region_number(int file, const char *region)
{
    char *names[MOST_REGIONS] = {NULL};
    int dimension;
    size_t count, found = MOST_REGIONS;

    must(nc_inq_dimid(file, "region", &dimension));
    must(nc_inq_dimlen(file, dimension, &count));
    assert_true(count <= MOST_REGIONS);
    must(nc_get_var_string(file, find_variable(file, "region_name"), names));
    for (size_t r = 0; r < count; r++)
        if (strcmp(names[r], region) == 0)
            found = r;
    must(nc_free_string(count, names));
    if (found == MOST_REGIONS)
        print_error("there is no region %s\n", region);
    assert_true(found < MOST_REGIONS);
    return found;
}

double region_layer_value(const char *path, const char *name, const char *region, int layer)
{
    int file;
    size_t index;
    field of;
    double value;

    must(nc_open(path, NC_NOWRITE, &file));
    index = region_number(file, region);
    of = read_field_of(file, name);
    if (layer >= 0) {
        field all = read_field_of(file, "layer_bounds");

        index = index * (all.count / 2) + (size_t)layer;
        field_free(&all);
    }
    must(nc_close(file));
    assert_true(index < of.count);
    value = of.value[index];
    field_free(&of);
    return value;
}

double region_value(const char *path, const char *name, const char *region)
{
    return region_layer_value(path, name, region, -1);
}
