/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "program/attempt.h"

#include "support/testing.h"

#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

enum { MOST_SECONDS = 120, MOST_FILES = 64, STATE_ROOM = 16384 };

/* ---- bytes ---- */

static void join(char path[4096], const char *folder, const char *name)
{
    assert_true(snprintf(path, 4096, "%s/%s", folder, name) < 4096);
}

unsigned char *read_bytes(const char *folder, const char *name, size_t *count)
{
    unsigned char *bytes;
    char path[4096];
    FILE *file;
    long end;

    join(path, folder, name);
    file = fopen(path, "rb");
    assert_non_null(file);
    assert_int_equal(fseek(file, 0, SEEK_END), 0);
    end = ftell(file);
    assert_true(end >= 0);
    rewind(file);
    *count = (size_t)end;
    bytes = malloc(*count + 1);
    assert_non_null(bytes);
    assert_int_equal(fread(bytes, 1, *count, file), *count);
    bytes[*count] = '\0';
    fclose(file);
    return bytes;
}

void write_bytes(const char *folder, const char *name, const unsigned char *bytes, size_t count)
{
    char path[4096];
    FILE *file;

    join(path, folder, name);
    file = fopen(path, "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, count, file), count);
    assert_int_equal(fclose(file), 0);
}

/* ---- folders ---- */

static int by_name(const void *a, const void *b)
{
    return strcmp(*(char *const *)a, *(char *const *)b);
}

/* Fowler, Noll, Vo: FNV-1a with 64 bits. */
static unsigned long long checksum(const char *folder, const char *name)
{
    unsigned long long sum = 14695981039346656037ULL;
    size_t count;
    unsigned char *bytes = read_bytes(folder, name, &count);

    for (size_t i = 0; i < count; i++)
        sum = (sum ^ bytes[i]) * 1099511628211ULL;
    free(bytes);
    return sum;
}

char *folder_state(const char *folder)
{
    char *names[MOST_FILES], *state = calloc(1, STATE_ROOM), path[4096];
    size_t count = 0, length = 0;
    DIR *opened = opendir(folder);
    struct dirent *entry;
    struct stat about;

    assert_non_null(opened);
    assert_non_null(state);
    while ((entry = readdir(opened)) != NULL) {
        if (strcmp(entry->d_name, ".") == 0 || strcmp(entry->d_name, "..") == 0)
            continue;
        assert_true(count < MOST_FILES);
        names[count] = strdup(entry->d_name);
        assert_non_null(names[count++]);
    }
    closedir(opened);
    qsort(names, count, sizeof names[0], by_name);
    for (size_t i = 0; i < count; i++) {
        join(path, folder, names[i]);
        assert_int_equal(stat(path, &about), 0);
        length += (size_t)snprintf(state + length, STATE_ROOM - length, "%s %lld %llx\n", names[i],
                                   (long long)about.st_size,
                                   S_ISREG(about.st_mode) ? checksum(folder, names[i]) : 0);
        assert_true(length < STATE_ROOM);
        free(names[i]);
    }
    return state;
}

/* ---- runs ---- */

void attempt_add(attempt *how, const char *line)
{
    size_t count = 0, lines = 0;
    char *c = strdup(line);

    assert_non_null(c);
    while (how->lines[lines] != NULL)
        lines++;
    assert_true(lines + 1 < ATTEMPT_MOST_LINES);
    how->lines[lines] = c;
    while (how->words[count] != NULL)
        count++;
    while (*(c += strspn(c, " ")) != '\0') {
        const char end = *c == '\'' ? '\'' : ' ';

        c += end == '\'';
        assert_true(count + 2 < ATTEMPT_MOST_WORDS);
        how->words[count++] = c;
        while (*c != '\0' && *c != end)
            c++;
        if (*c != '\0')
            *c++ = '\0';
    }
}

static void limit(int what, size_t most)
{
    const struct rlimit limits = {most, most};

    if (most != 0 && setrlimit(what, &limits) != 0)
        _exit(99);
}

/* In the child: only what may stand between fork() and exec(). */
static void become(const attempt *how, int output, int errors)
{
    char *words[ATTEMPT_MOST_WORDS + 1] = {NULL};
    int input = open("/dev/null", O_RDONLY);

    for (size_t i = 0; how->words[i] != NULL; i++)
        words[i + 1] = (char *)(uintptr_t)how->words[i];
    words[0] = (char *)(uintptr_t)STERICOL_PROGRAM;
    if (how->words[0] != NULL && how->words[0][0] == '/') /* another program that starts ours */
        memmove(words, words + 1, (ATTEMPT_MOST_WORDS) * sizeof words[0]);
    if (dup2(input, 0) < 0 || dup2(output, 1) < 0 || dup2(errors, 2) < 0)
        _exit(99);
    if (how->folder != NULL && chdir(how->folder) != 0)
        _exit(99);
    setpgid(0, 0);
    limit(RLIMIT_AS, how->most_memory);
    limit(RLIMIT_FSIZE, how->most_file);
    execv(words[0], words);
    _exit(99);
}

static char *whole(FILE *file)
{
    char *text;
    long end;

    assert_int_equal(fseek(file, 0, SEEK_END), 0);
    end = ftell(file);
    rewind(file);
    text = calloc(1, (size_t)end + 1);
    assert_non_null(text);
    assert_int_equal(fread(text, 1, (size_t)end, file), (size_t)end);
    fclose(file);
    return text;
}

/* Waits in steps of a millisecond, so that a hang can be ended and a signal sent in time. */
static int await(const attempt *how, pid_t child)
{
    const struct timespec step = {0, 1000000};
    const time_t end = time(NULL) + MOST_SECONDS;
    bool sent = how->signal == 0;
    int status;

    for (;;) {
        const pid_t ended = waitpid(child, &status, WNOHANG);

        if (ended == child)
            return status;
        assert_int_equal(ended, 0);
        if (!sent && how->when(how->folder)) {
            assert_int_equal(kill(child, how->signal), 0);
            sent = !how->again;
        }
        if (time(NULL) > end) {
            kill(-child, SIGKILL);
            waitpid(child, &status, 0);
            fail_msg("the program hangs: %s %s", how->words[0], how->words[1]);
        }
        nanosleep(&step, NULL);
    }
}

run_result attempt_run(attempt *how)
{
    FILE *output = how->output != NULL ? fopen(how->output, "w") : tmpfile(), *errors = tmpfile();
    pid_t child;
    int status;
    run_result result;

    assert_non_null(output);
    assert_non_null(errors);
    fflush(NULL);
    child = fork();
    assert_true(child >= 0);
    if (child == 0)
        become(how, fileno(output), fileno(errors));
    status = await(how, child);
    result.exit_code = WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
    result.errors = whole(errors);
    if (how->output == NULL) {
        result.output = whole(output);
    } else {
        fclose(output);
        result.output = calloc(1, 1);
    }
    for (size_t i = 0; how->lines[i] != NULL; i++)
        free(how->lines[i]);
    memset(how->lines, 0, sizeof how->lines);
    memset(how->words, 0, sizeof how->words);
    return result;
}

/* ---- what must hold ---- */

static void show(const run_result *result, const char *what, const char *wrong)
{
    print_error("%s: %s\nexit code %d, standard error:\n%s\n", what, wrong, result->exit_code,
                result->errors);
}

bool no_report(const run_result *result, const char *what)
{
    if (strstr(result->errors, "Sanitizer") == NULL && strstr(result->errors, "runtime error:") == NULL)
        return true;
    show(result, what, "a sanitizer speaks");
    return false;
}

bool refused_well(const run_result *result, int code, const char *const *parts, const char *what)
{
    const char *text = result->errors, *end = strchr(text, '\n');
    const char *wrong = NULL;

    if (!no_report(result, what))
        return false;
    if (result->exit_code != code)
        wrong = "another exit code";
    else if (end == NULL || end[1] != '\0')
        wrong = "not one line";
    else if (strncmp(text, "stericol: ", 10) != 0 || strstr(text, "; ") == NULL)
        wrong = "the message is not of the form 'stericol: what is wrong; what to do'";
    else if (result->output[0] != '\0')
        wrong = "something stands on standard output";
    for (size_t i = 0; text[i] != '\0' && text[i] != '\n'; i++)
        if ((unsigned char)text[i] < ' ' || text[i] == 127)
            wrong = "a control character stands in the message";
    for (size_t i = 0; wrong == NULL && parts[i] != NULL; i++)
        if (strstr(text, parts[i]) == NULL)
            wrong = parts[i];
    if (wrong == NULL)
        return true;
    show(result, what, wrong);
    print_error("expected exit code %d\n\n", code);
    return false;
}

bool folder_untouched(const char *folder, const char *before, const char *what)
{
    char *now = folder_state(folder);
    const bool same = strcmp(now, before) == 0;

    if (!same)
        print_error("%s: the folder has changed; before:\n%sand now:\n%s\n", what, before, now);
    free(now);
    return same;
}

bool attempt_sanitized(void)
{
#ifdef __SANITIZE_ADDRESS__
    return true;
#elif defined __has_feature
#if __has_feature(address_sanitizer)
    return true;
#else
    return false;
#endif
#else
    return false;
#endif
}
