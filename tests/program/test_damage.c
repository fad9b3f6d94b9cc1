/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Files damaged at random and headers that lie: whatever is in a file, the program neither crashes nor hangs
 * nor takes more memory than there is.
 */
#include "program/attempt.h"
#include "program/make_grid.h"

#include "support/testing.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/wait.h>
#include <unistd.h>

enum { ROUNDS = 100, MOST_BYTES = 8 };

static const unsigned long long seed = 20310504ULL;

/* xorshift64* (Vigna 2016, ACM Transactions on Mathematical Software 42, 30). */
static unsigned long long draw(unsigned long long *state)
{
    *state ^= *state >> 12;
    *state ^= *state << 25;
    *state ^= *state >> 27;
    return *state * 2685821657736338717ULL;
}

/* Some bytes of the first `reach` get another value; every fourth time a run of bytes is set to one value. */
static void damage(unsigned char *bytes, size_t reach, unsigned long long *state)
{
    const size_t count = 1 + draw(state) % MOST_BYTES;
    const bool run = draw(state) % 4 == 0;
    const size_t start = draw(state) % (reach - MOST_BYTES);
    const unsigned char same = draw(state) % 2 == 0 ? 0xFF : 0x7F;

    for (size_t i = 0; i < count; i++) {
        const size_t at = run ? start + i : draw(state) % reach;

        bytes[at] = run ? same : (unsigned char)(draw(state) % 256);
    }
}

static bool one_round(const char *folder, const unsigned char *whole, size_t count, size_t reach,
                      size_t round, unsigned long long *state)
{
    unsigned char *bytes = malloc(count);
    attempt how = {.folder = folder, .most_memory = attempt_sanitized() ? 0 : (size_t)1 << 30};
    run_result result;
    char what[80];
    bool well;

    assert_non_null(bytes);
    memcpy(bytes, whole, count);
    damage(bytes, reach, state);
    write_bytes(folder, "damaged.nc", bytes, count);
    free(bytes);
    attempt_add(&how, round % 5 == 3
                          ? "inspect damaged.nc --quiet"
                          : "change --earlier damaged.nc --later b.nc --quiet --threads 1 --memory 64M");
    result = attempt_run(&how);
    snprintf(what, sizeof what, "round %zu of seed %llu", round, seed);
    well = no_report(&result, what);
    if (result.exit_code > 5 ||
        (result.exit_code != 0 && strchr(result.errors, 10) != result.errors + strlen(result.errors) - 1)) {
        print_error("%s: exit code %d, standard error:\n%s\n", what, result.exit_code, result.errors);
        well = false;
    }
    run_free(&result);
    return well;
}

/* Every second round, in a folder of its own. */
static size_t run_rounds(const small_grid *grid, size_t share, size_t first)
{
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "damage");
    small_grid warmer = *grid;
    unsigned char *whole;
    size_t count, failed = 0;

    warmer.warmer = 0.5;
    small_grid_write(grid, folder, "a.nc");
    small_grid_write(&warmer, folder, "b.nc");
    whole = read_bytes(folder, "a.nc", &count);
    for (size_t round = first; round < ROUNDS; round += 2) {
        unsigned long long state = seed + 1000003 * round;

        failed += !one_round(folder, whole, count, count * share / 100, round, &state);
    }
    free(whole);
    run_remove_folder(folder);
    return failed;
}

/* `share`: per cent of the file that is damaged, from its start.  Two at a time, to be done sooner. */
static void damage_files(int mode, int deflate, size_t share)
{
    small_grid grid = small_grid_plain();
    pid_t other;
    int status;

    grid.mode = mode;
    grid.deflate = deflate;
    fflush(NULL);
    other = fork();
    assert_true(other >= 0);
    if (other == 0)
        _exit(run_rounds(&grid, share, 1) != 0);
    assert_int_equal(run_rounds(&grid, share, 0), 0);
    assert_true(waitpid(other, &status, 0) == other);
    assert_true(WIFEXITED(status) && WEXITSTATUS(status) == 0);
}

static void test_classic_headers(void **state)
{
    (void)state;
    damage_files(0, 0, 45); /* what comes behind is data */
}

static void test_netcdf4(void **state)
{
    (void)state;
    damage_files(NC_NETCDF4, 1, 100); /* its headers stand everywhere */
}

/* A NetCDF-4 file of a few kilobytes that claims any size, since what was never written takes no room. */
static void write_claim(const char *folder, const char *name, const size_t lengths[4])
{
    static const char *const names[] = {"time", "depth", "latitude", "longitude"};
    static const char *const units[] = {"days since 2001-01-01", "m", "degrees_north", "degrees_east"};
    int file, axes[4], variable, code = NC_NOERR;
    const size_t chunk[4] = {1, 1, 10, 10};
    char path[4096];

    snprintf(path, sizeof path, "%s/%s", folder, name);
    code |= nc_create(path, NC_NETCDF4 | NC_CLOBBER, &file);
    for (int i = 0; i < 4; i++) {
        const size_t part = lengths[i] < 1000 ? lengths[i] : 1000;

        code |= nc_def_dim(file, names[i], lengths[i], &axes[i]);
        code |= nc_def_var(file, names[i], NC_DOUBLE, 1, &axes[i], &variable);
        code |= nc_def_var_chunking(file, variable, NC_CHUNKED, &part);
        code |= nc_put_att_text(file, variable, "units", strlen(units[i]), units[i]);
        if (i == 1)
            code |= nc_put_att_text(file, variable, "positive", 4, "down");
    }
    code |= nc_def_var(file, "temperature", NC_FLOAT, 4, axes, &variable);
    code |= nc_def_var_chunking(file, variable, NC_CHUNKED, chunk);
    code |= nc_put_att_text(file, variable, "standard_name", 34, "sea_water_conservative_temperature");
    code |= nc_put_att_text(file, variable, "units", 4, "degC");
    code |= nc_enddef(file);
    for (int i = 0; i < 4; i++) {
        int axis;

        code |= nc_inq_varid(file, names[i], &axis);
        for (size_t at = 0; lengths[i] <= 20000 && at < lengths[i]; at++) {
            const double value = (i == 2 ? -80.0 : 1.0) + 100.0 * (double)at / (double)lengths[i];

            code |= nc_put_var1_double(file, axis, &at, &value);
        }
    }
    code |= nc_close(file);
    assert_int_equal(code, NC_NOERR);
}

/* Refused soon, and without asking for the memory: where there is no sanitizer, within one gibibyte. */
static void test_claims_of_size(void **state)
{
    static const struct {
        size_t lengths[4];
        int code;
        const char *part;
    } cases[] = {
        {{(size_t)1 << 33, 4, 10, 10}, 3, "time"}, {{2, (size_t)1 << 36, 10, 10}, 3, "depth"},
        {{2, 4, 2000000000, 10}, 3, "latitude"},   {{2, 4, 10, (size_t)1 << 40}, 3, "longitude"},
        {{2, 4, 20000, 20000}, 5, "--memory"},
    };
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "claims");

    (void)state;
    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        attempt how = {.folder = folder, .most_memory = attempt_sanitized() ? 0 : (size_t)1 << 30};
        run_result result;

        write_claim(folder, "a.nc", cases[i].lengths);
        attempt_add(&how, "change --earlier a.nc --later a.nc --earlier-step 1 --later-step 2 --quiet "
                          "--constant-salinity 35 --memory 256M --threads 1");
        result = attempt_run(&how);
        assert_true(refused_well(&result, cases[i].code, (const char *[]){"a.nc", cases[i].part, NULL},
                                 cases[i].part));
        run_free(&result);
        attempt_add(&how, "inspect a.nc --quiet --memory 256M");
        result = attempt_run(&how);
        assert_true(no_report(&result, "inspect"));
        assert_exit(&result, cases[i].code);
        run_free(&result);
    }
    run_remove_folder(folder);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_classic_headers),
        cmocka_unit_test(test_netcdf4),
        cmocka_unit_test(test_claims_of_size),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
