/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The benchmark: `change` on a quarter-degree pair against reading the same values plainly, in one run, for
 * the layouts and types that files come in.  It makes its data on the spot and asserts nothing.
 *
 *   bench STERICOL MAKE_PAIR READ_PLAINLY FOLDER [REPEATS]
 */
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

enum { MOST_REPEATS = 25 };

typedef struct measure {
    double seconds; /* median */
    double peak;    /* MiB, largest */
} measure;

static double now(void)
{
    struct timespec t;

    clock_gettime(CLOCK_MONOTONIC, &t);
    return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

static int by_size(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;

    return (x > y) - (x < y);
}

/* Runs a command once, quietly; its peak memory in MiB; the program ends when the command fails. */
static double run_once(char *const argv[], double *seconds)
{
    double start = now();
    struct rusage usage;
    int status;
    pid_t child;

    fflush(stdout); /* or the child would print what is waiting as well */
    child = fork();

    if (child == 0) {
        if (freopen("/dev/null", "w", stdout) == NULL)
            _exit(126);
        execv(argv[0], argv);
        _exit(127);
    }
    if (child < 0 || wait4(child, &status, 0, &usage) < 0 || !WIFEXITED(status) || WEXITSTATUS(status) != 0) {
        fprintf(stderr, "bench: %s failed\n", argv[0]);
        exit(1);
    }
    *seconds = now() - start;
    return (double)usage.ru_maxrss / 1024.0;
}

static measure run(char *const argv[], int repeats)
{
    double seconds[MOST_REPEATS];
    measure result = {0};

    for (int i = 0; i < repeats; i++) {
        double peak = run_once(argv, &seconds[i]);

        if (peak > result.peak)
            result.peak = peak;
    }
    qsort(seconds, (size_t)repeats, sizeof seconds[0], by_size);
    result.seconds = seconds[repeats / 2];
    return result;
}

static void make(const char *maker, char *file, const char *layout, const char *type)
{
    struct stat found;
    double seconds;

    if (stat(file, &found) == 0)
        return;
    run_once((char *[]){(char *)maker, file, (char *)layout, (char *)type, NULL}, &seconds);
}

int main(int argc, char **argv)
{
    static const char *const cases[][2] = {
        {"slices", "float"},  {"blocks", "float"}, {"default", "float"}, {"depth-fastest", "float"},
        {"classic", "float"}, {"slices", "short"}, {"blocks", "short"}};
    int repeats = argc > 5 ? atoi(argv[5]) : 3;
    char output[4096];

    if (argc < 5 || repeats < 1 || repeats > MOST_REPEATS) {
        fputs("usage: bench STERICOL MAKE_PAIR READ_PLAINLY FOLDER [REPEATS]\n", stderr);
        return 2;
    }
    snprintf(output, sizeof output, "%s/result.nc", argv[4]);
    printf("change on 720 x 1440 x 50, two states of temperature and salinity; medians of %d\n", repeats);
    printf("%-14s %-6s %9s %9s %7s %9s %7s %9s %9s\n", "layout", "type", "plain s", "1 thread", "ratio",
           "2 threads", "ratio", "plain MiB", "peak MiB");
    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        char file[4096];
        measure plain, ours[2];

        snprintf(file, sizeof file, "%s/%s_%s.nc", argv[4], cases[i][0], cases[i][1]);
        make(argv[2], file, cases[i][0], cases[i][1]);
        plain = run((char *[]){argv[3], file, NULL}, repeats);
        for (int t = 0; t < 2; t++)
            ours[t] = run((char *[]){argv[1], "change", "--earlier", file, "--later", file, "--earlier-step",
                                     "1", "--later-step", "2", "--threads", t == 0 ? "1" : "2", "--output",
                                     output, "--replace", "--quiet", NULL},
                          repeats);
        printf("%-14s %-6s %9.2f %9.2f %7.2f %9.2f %7.2f %9.0f %9.0f\n", cases[i][0], cases[i][1],
               plain.seconds, ours[0].seconds, ours[0].seconds / plain.seconds, ours[1].seconds,
               ours[1].seconds / plain.seconds, plain.peak, ours[1].peak);
        fflush(stdout);
    }
    unlink(output);
    return 0;
}
