/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What goes wrong around the program: full disks, closed channels, interruptions, odd names. */
#include "program/attempt.h"
#include "program/make_grid.h"

#include "support/testing.h"

#include <dirent.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

/* The usual values grow with the rows, and would leave what a sea can be. */
static double mild(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return small_grid_temperature(grid, t, k, j % 4, i % 4);
}

static double salt(const small_grid *grid, size_t t, size_t k, size_t j, size_t i)
{
    return small_grid_salinity(grid, t, k, j % 4, i % 4);
}

/* a.nc and b.nc in a folder of their own. */
static char *begin(size_t rows, size_t columns, size_t levels)
{
    char *folder = run_new_folder(TEST_BUILD_FOLDER, "faults");
    small_grid grid = small_grid_plain();
    double *latitude = malloc(rows * sizeof *latitude), *longitude = malloc(columns * sizeof *longitude);

    assert_true(latitude != NULL && longitude != NULL);
    for (size_t j = 0; j < rows; j++)
        latitude[j] = -60.0 + 120.0 * (double)j / (double)rows;
    for (size_t i = 0; i < columns; i++)
        longitude[i] = 300.0 * (double)i / (double)columns;
    grid.rows = rows;
    grid.columns = columns;
    grid.levels = levels;
    grid.latitude = latitude;
    grid.longitude = longitude;
    grid.temperature.value = mild;
    grid.salinity.value = salt;
    small_grid_write(&grid, folder, "a.nc");
    grid.warmer = 0.5;
    small_grid_write(&grid, folder, "b.nc");
    free(latitude);
    free(longitude);
    return folder;
}

static const char old_output[] = "not what the program writes";

/* ---- disks ---- */

/* `how` must fail with 4 and leave the folder as it was. */
static void expect_unwritten(attempt *how, const char *part, const char *what)
{
    char *before = folder_state(how->folder);
    run_result result = attempt_run(how);

    assert_true(refused_well(&result, 4, (const char *[]){part, NULL}, what));
    assert_true(folder_untouched(how->folder, before, what));
    run_free(&result);
    free(before);
}

/* A limit on the size of files fails every write beyond it, as a full disk does. */
static void test_file_size_limit(void **state)
{
    static const size_t limits[] = {1000, 30000, 60000}; /* the message itself goes to a file of the test */
    char *folder = begin(40, 60, 4);

    (void)state;
    run_write_file(folder, "out.nc", old_output);
    for (size_t i = 0; i < sizeof limits / sizeof limits[0]; i++) {
        attempt how = {.folder = folder, .most_file = limits[i]};

        attempt_add(&how, "change --earlier a.nc --later b.nc --quiet --output out.nc --replace");
        expect_unwritten(&how, "out.nc", "a limit on the size of files");
    }
    run_remove_folder(folder);
}

/* A disk of its own in a name space of its own, where the system lets us: 1 where it does not. */
static bool run_on_disk(const char *folder, const char *options, int code, const char *part)
{
    static const char script[] = "'mount -t tmpfs -o \"$1\" none disk 2>&1 || exit 97; shift; echo old > "
                                 "disk/out.nc; \"$@\"; code=$?; "
                                 "test \"$(ls -A disk)\" = out.nc || exit 98; test \"$(cat disk/out.nc)\" = "
                                 "old || exit 98; exit $code'";
    char line[2048];
    attempt how = {.folder = folder};
    run_result result;
    bool done;

    snprintf(line, sizeof line, "/usr/bin/unshare --user --map-root-user --mount /bin/sh -c %s sh %s %s",
             script, options,
             STERICOL_PROGRAM " change --earlier a.nc --later b.nc --quiet --output disk/out.nc --replace");
    attempt_add(&how, line);
    result = attempt_run(&how);
    done = result.exit_code != 97 && strstr(result.errors, "unshare") == NULL && result.exit_code != 99;
    if (done)
        assert_true(refused_well(&result, code, (const char *[]){"disk/out.nc", part, NULL}, options));
    run_free(&result);
    return done;
}

static void test_full_disk(void **state)
{
    static const char *const sizes[] = {"size=8k", "size=64k", "size=128k", "size=300k"};
    char *folder = begin(40, 60, 4), path[4096];
    bool done = true;

    (void)state;
    snprintf(path, sizeof path, "%s/disk", folder);
    assert_int_equal(mkdir(path, 0700), 0);
    for (size_t i = 0; i < sizeof sizes / sizeof sizes[0] && done; i++)
        done = run_on_disk(folder, sizes[i], 4, "full");
    if (!done)
        print_message("no disk can be mounted here: the limit on the size of files stands in for it\n");
    assert_int_equal(remove(path), 0);
    run_remove_folder(folder);
}

/* ---- channels ---- */

static void test_standard_output_is_full(void **state)
{
    static const char *const lines[] = {
        "change --earlier a.nc --later b.nc --quiet",
        "change --earlier a.nc --later b.nc --quiet --output out.nc --replace",
        "change --earlier a.nc --later b.nc --quiet --table json",
        "scenario --field a.nc --warming 1 --quiet --table csv",
        "inspect a.nc --quiet",
        "--help",
        "change --help",
        "--version",
    };
    char *folder = begin(4, 5, 4);

    (void)state;
    run_write_file(folder, "out.nc", old_output);
    for (size_t i = 0; i < sizeof lines / sizeof lines[0]; i++) {
        attempt how = {.folder = folder, .output = "/dev/full"};

        attempt_add(&how, lines[i]);
        expect_unwritten(&how, "standard output", lines[i]);
    }
    run_remove_folder(folder);
}

/* A file that is opened must not take the place of a closed channel: messages would be written into it. */
static void test_closed_channels(void **state)
{
    static const struct {
        const char *closed;
        int code;
    } cases[] = {{"1>&-", 4}, {"2>&-", 0}, {"0<&-", 0}, {"0<&- 2>&-", 0}, {"0<&- 1>&- 2>&-", 4}};

    (void)state;
    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        char *folder = begin(4, 5, 4), line[1024], *bytes;
        attempt how = {.folder = folder};
        run_result result;
        size_t count;

        snprintf(line, sizeof line,
                 "/bin/sh -c 'exec %s change --earlier a.nc --later b.nc --output out.nc %s'",
                 STERICOL_PROGRAM, cases[i].closed);
        attempt_add(&how, line);
        result = attempt_run(&how);
        assert_exit(&result, cases[i].code);
        assert_int_equal(run_file_exists(folder, "out.nc"), cases[i].code == 0);
        if (cases[i].code == 0) { /* the mark of HDF5, at its start */
            bytes = (char *)read_bytes(folder, "out.nc", &count);
            assert_memory_equal(bytes, "\211HDF\r\n\032\n", 8);
            free(bytes);
        }
        run_free(&result);
        run_remove_folder(folder);
    }
}

/* ---- interruption ---- */

static bool has_begun(const char *folder)
{
    DIR *opened = opendir(folder);
    struct dirent *entry;
    bool found = false;

    assert_non_null(opened);
    while ((entry = readdir(opened)) != NULL)
        found = found || strncmp(entry->d_name, ".stericol-", 10) == 0;
    closedir(opened);
    return found;
}

static void test_interruption(void **state)
{
    static const int signals[] = {SIGINT, SIGTERM, SIGHUP};
    char *folder = begin(100, 120, 16);

    (void)state;
    run_write_file(folder, "out.nc", old_output);
    for (size_t i = 0; i < sizeof signals / sizeof signals[0]; i++) {
        attempt how = {.folder = folder, .signal = signals[i], .when = has_begun};
        char *before = folder_state(folder);
        run_result result;

        /* The slowest equation, so that there is work left when the signal comes. */
        attempt_add(&how,
                    "change --earlier a.nc --later b.nc --quiet --threads 1 --equation gibbs --attribution "
                    "symmetric --output out.nc --replace");
        result = attempt_run(&how);
        assert_exit(&result, 128 + signals[i]);
        assert_string_equal(result.errors, "stericol: interrupted\n");
        assert_true(folder_untouched(folder, before, "an interruption"));
        run_free(&result);
        free(before);
    }
    run_remove_folder(folder);
}

static bool once_waiting(const char *folder)
{
    static int calls;

    (void)folder;
    return ++calls % 1000 == 0; /* about milliseconds: long enough to come to the pipe */
}

/* Nobody writes to the pipe: the program waits, as for any pipe, and can be interrupted; by the second signal
   at the latest, where the first came before it waited. */
static void test_interruption_while_waiting(void **state)
{
    char *folder = begin(4, 5, 4), path[4096];
    attempt how = {.folder = folder, .signal = SIGINT, .again = true, .when = once_waiting};
    run_result result;

    (void)state;
    snprintf(path, sizeof path, "%s/pipe", folder);
    assert_int_equal(mkfifo(path, 0600), 0);
    attempt_add(&how, "scenario --field a.nc --quiet --output out.nc --profile pipe");
    result = attempt_run(&how);
    assert_exit(&result, 128 + SIGINT);
    assert_string_equal(result.errors, "stericol: interrupted\n");
    assert_false(run_file_exists(folder, "out.nc"));
    run_free(&result);
    run_remove_folder(folder);
}

/* ---- names ---- */

static void test_odd_names(void **state)
{
    static const char *const names[] = {
        "with blanks .nc", "quo\"te.nc",     "new\nline.nc", "\033[31mred.nc", "s\303\274\303\237.nc",
        "bad\377.nc",      "-dash.nc",       "%s%n.nc",      "[x]*.nc",        "#hash.nc",
        "a=b.nc",          "back\\slash.nc",
    };

    (void)state;
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
        char *folder = begin(4, 5, 4), from[4096], to[4096], output[64];
        attempt how = {.folder = folder};
        run_result result;

        snprintf(from, sizeof from, "%s/b.nc", folder);
        snprintf(to, sizeof to, "%s/%s", folder, names[i]);
        assert_int_equal(rename(from, to), 0);
        snprintf(output, sizeof output, "out %s", names[i]);
        attempt_add(&how, "change --earlier a.nc --log log.txt --output");
        how.words[6] = output;
        how.words[7] = "--later";
        how.words[8] = names[i];
        result = attempt_run(&how);
        assert_true(no_report(&result, names[i]));
        assert_exit(&result, 0);
        assert_true(run_file_exists(folder, output));
        for (const char *c = result.errors; *c != '\0'; c++)
            assert_true((unsigned char)*c >= ' ' || *c == '\n');
        run_free(&result);
        run_remove_folder(folder);
    }
}

/* The same names where there is no such file. */
static void test_odd_names_of_nothing(void **state)
{
    static const char *const names[] = {"with blanks .nc",     "new\nline.nc", "\033[31mred.nc",
                                        "bad\377.nc",          "%s%n.nc",      "[x]*.nc",
                                        "s\303\274\303\237.nc"};
    static const char *const shown[] = {"with blanks .nc",     "new\\x0Aline.nc", "\\x1B[31mred.nc",
                                        "bad\\xFF.nc",         "%s%n.nc",         "[x]*.nc",
                                        "s\303\274\303\237.nc"};
    char *folder = begin(4, 5, 4);

    (void)state;
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
        attempt how = {.folder = folder};
        char *before = folder_state(folder);
        run_result result;

        attempt_add(&how, "change --earlier a.nc --quiet --output out.nc --later");
        how.words[7] = names[i];
        result = attempt_run(&how);
        assert_true(refused_well(&result, 3, (const char *[]){shown[i], NULL}, shown[i]));
        assert_true(folder_untouched(folder, before, shown[i]));
        run_free(&result);
        free(before);
    }
    run_remove_folder(folder);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_file_size_limit),
        cmocka_unit_test(test_full_disk),
        cmocka_unit_test(test_standard_output_is_full),
        cmocka_unit_test(test_closed_channels),
        cmocka_unit_test(test_interruption),
        cmocka_unit_test(test_interruption_while_waiting),
        cmocka_unit_test(test_odd_names),
        cmocka_unit_test(test_odd_names_of_nothing),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
