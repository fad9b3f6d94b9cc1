/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "program/option_sea.h"

#include "support/testing.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* ---- the sea ---- */

static double gap(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return j == 1 && i == 1 && (k == 2 || k == 3) ? (double)NAN : small_grid_temperature(grid, t, k, j, i);
}

/* Absent at one time of four on the deepest level of one column. */
static double seldom(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return j == 1 && i == 1 && k == 5 && t % 4 == 3 ? (double)NAN : small_grid_temperature(grid, t, k, j, i);
}

void option_sea_pair(const small_grid *grid, const char *folder, const char *first, const char *second)
{
    small_grid later = *grid;

    later.warmer += 1.0;
    later.saltier -= 0.1;
    small_grid_write(grid, folder, first);
    small_grid_write(&later, folder, second);
}

static void write_companions(const small_grid *grid, const char *folder)
{
    static const struct {
        const char *file;
        small_grid_plane plane;
    } planes[] = {
        {"area.nc",
         {"area", false, NC_DOUBLE, 1e10, 1e9, {"standard_name", "cell_area", "units", "m2"}, 0, 0}},
        {"mask.nc", {"wet", false, NC_INT, 0, 1, {"standard_name", "sea_binary_mask"}, 0, 1}},
        {"floor.nc",
         {"floor",
          false,
          NC_DOUBLE,
          540,
          0,
          {"standard_name", "sea_floor_depth_below_geoid", "units", "m"},
          0,
          0}},
        {"thick.nc",
         {"thick", true, NC_DOUBLE, 50, 0, {"standard_name", "cell_thickness", "units", "m"}, 0, 0}},
        {"parts.nc", {"parts", false, NC_BYTE, 1, 0, {"flag_meanings", "inner_bight outer_bight"}, 2, 0}},
        {"anomaly.nc",
         {"anomaly",
          true,
          NC_DOUBLE,
          0.01,
          0.001,
          {"long_name", "anomaly of absolute salinity", "units", "g kg-1"},
          0,
          0}},
    };

    for (size_t i = 0; i < sizeof planes / sizeof planes[0]; i++)
        small_grid_write_plane(grid, &planes[i].plane, folder, planes[i].file);
    run_write_file(folder, "profile.txt", "depth warming freshening\n0 2 0.2\n1000 2 0.2\n");
}

void option_sea_write(const char *folder)
{
    small_grid plain = small_grid_plain(), grid = plain;

    option_sea_pair(&plain, folder, "a.nc", "b.nc");
    write_companions(&plain, folder);
    grid.depth_bounds = true;
    option_sea_pair(&grid, folder, "cells_a.nc", "cells_b.nc");
    grid = plain;
    grid.times = 12;
    grid.temperature.value = seldom;
    small_grid_write(&grid, folder, "series.nc");
    grid = plain;
    grid.temperature.value = gap;
    option_sea_pair(&grid, folder, "gap_a.nc", "gap_b.nc");
    grid = plain;
    grid.members = 3;
    small_grid_write(&grid, folder, "members.nc");
    grid = plain;
    grid.bare_plane = true;
    option_sea_pair(&grid, folder, "bare_a.nc", "bare_b.nc");
    grid = plain;
    grid.salinity.name = NULL;
    option_sea_pair(&grid, folder, "warm_a.nc", "warm_b.nc");
    grid = plain;
    grid.temperature.name = NULL;
    small_grid_write(&grid, folder, "salt.nc");
    grid = plain;
    grid.temperature =
        (small_grid_field){"tt", NULL, "degC", NC_FLOAT, 1.0, 0.0, -999.0, small_grid_temperature};
    grid.salinity = (small_grid_field){"ss", NULL, "1", NC_FLOAT, 1.0, 0.0, -999.0, small_grid_salinity};
    grid.changes[0] = (small_grid_change){.variable = "depth", .attribute = "units"};
    grid.changes[1] = (small_grid_change){.variable = "depth", .attribute = "standard_name", .text = NULL};
    option_sea_pair(&grid, folder, "named_a.nc", "named_b.nc");
    grid = plain;
    grid.salinity.standard_name = "sea_water_reference_salinity";
    option_sea_pair(&grid, folder, "reference_a.nc", "reference_b.nc");
}

/* ---- results ---- */

double result_sum(const char *folder, const char *result, const char *name)
{
    int file, variable, rank, dimensions[NC_MAX_VAR_DIMS];
    size_t count = 1;
    double *values, sum = 0.0;
    char path[4096];

    snprintf(path, sizeof path, "%s/%s", folder, result);
    assert_int_equal(nc_open(path, NC_NOWRITE, &file), NC_NOERR);
    if (nc_inq_varid(file, name, &variable) != NC_NOERR) {
        nc_close(file);
        return NAN;
    }
    assert_int_equal(nc_inq_var(file, variable, NULL, NULL, &rank, dimensions, NULL), NC_NOERR);
    for (int d = 0; d < rank; d++) {
        size_t length;

        assert_int_equal(nc_inq_dimlen(file, dimensions[d], &length), NC_NOERR);
        count *= length;
    }
    values = malloc(count * sizeof *values);
    assert_non_null(values);
    assert_int_equal(nc_get_var_double(file, variable, values), NC_NOERR);
    for (size_t i = 0; i < count; i++)
        if (isfinite(values[i]) && fabs(values[i]) < 9e36) /* the default fill value is 9.97e36 */
            sum += values[i];
    free(values);
    nc_close(file);
    return sum;
}

char *result_text(const char *folder, const char *name)
{
    char path[4096], *text;
    size_t length;
    int file;

    snprintf(path, sizeof path, "%s/out.nc", folder);
    assert_int_equal(nc_open(path, NC_NOWRITE, &file), NC_NOERR);
    assert_int_equal(nc_inq_attlen(file, NC_GLOBAL, name, &length), NC_NOERR);
    text = calloc(1, length + 1);
    assert_non_null(text);
    assert_int_equal(nc_get_att_text(file, NC_GLOBAL, name, text), NC_NOERR);
    nc_close(file);
    return text;
}

run_result run_into(const char *folder, const char *output, const char *options)
{
    attempt how = {.folder = folder};
    run_result result;

    attempt_add(&how, options);
    attempt_add(&how, "--threads 2 --replace --output");
    attempt_add(&how, output);
    result = attempt_run(&how);
    if (result.exit_code != 0 || !no_report(&result, options)) {
        print_error("%s: exit code %d, standard error:\n%s\n", options, result.exit_code, result.errors);
        run_free(&result);
    }
    return result;
}

void expect_same_maps(const char *folder, const char *a, const char *b)
{
    static const char *const names[] = {"steric_height_change",
                                        "thermosteric_height_change",
                                        "halosteric_height_change",
                                        "heat_content_change",
                                        "integrated_depth",
                                        "region_heat_content_change",
                                        "column_flag",
                                        "cell_area"};

    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
        const char *files[] = {a, b};
        void *values[2];
        size_t bytes = 0;

        for (int f = 0; f < 2; f++) {
            int file, variable, rank, dimensions[NC_MAX_VAR_DIMS];
            nc_type type;
            size_t size, length;
            char path[4096];

            snprintf(path, sizeof path, "%s/%s", folder, files[f]);
            assert_int_equal(nc_open(path, NC_NOWRITE, &file), NC_NOERR);
            assert_int_equal(nc_inq_varid(file, names[i], &variable), NC_NOERR);
            assert_int_equal(nc_inq_var(file, variable, NULL, &type, &rank, dimensions, NULL), NC_NOERR);
            assert_int_equal(nc_inq_type(file, type, NULL, &size), NC_NOERR);
            for (int d = 0; d < rank; d++) {
                assert_int_equal(nc_inq_dimlen(file, dimensions[d], &length), NC_NOERR);
                size *= length;
            }
            assert_true(f == 0 || size == bytes);
            bytes = size;
            values[f] = calloc(1, bytes);
            assert_non_null(values[f]);
            assert_int_equal(nc_get_var(file, variable, values[f]), NC_NOERR);
            nc_close(file);
        }
        if (memcmp(values[0], values[1], bytes) != 0)
            fail_msg("%s and %s differ in %s", a, b, names[i]);
        free(values[0]);
        free(values[1]);
    }
}
