/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "program/run.h"

#include "support/testing.h"

#include <dirent.h>
#include <fcntl.h>
#include <poll.h>
#include <spawn.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

extern char **environ;

enum { MOST_WORDS = 64, MOST_VARIABLES = 512, STEP = 4096 };

/* A text that grows with what comes out of a pipe. */
typedef struct stream {
    int descriptor;
    char *text;
    size_t length;
} stream;

static void take_some(stream *s)
{
    ssize_t got;

    s->text = realloc(s->text, s->length + STEP + 1);
    assert_non_null(s->text);
    got = read(s->descriptor, s->text + s->length, STEP);
    assert_true(got >= 0);
    s->length += (size_t)got;
    s->text[s->length] = '\0';
    if (got == 0) {
        close(s->descriptor);
        s->descriptor = -1;
    }
}

/* Both pipes at once: a program that fills one while the other is awaited would hang. */
static void drain(stream streams[2])
{
    while (streams[0].descriptor >= 0 || streams[1].descriptor >= 0) {
        struct pollfd waiting[2] = {{streams[0].descriptor, POLLIN, 0}, {streams[1].descriptor, POLLIN, 0}};

        assert_true(poll(waiting, 2, -1) > 0);
        for (size_t i = 0; i < 2; i++)
            if (waiting[i].revents != 0)
                take_some(&streams[i]);
    }
}

/* The test's own environment and what is added; later entries win. */
static void join_environment(const char *const *added, char *joined[MOST_VARIABLES])
{
    size_t count = 0;

    for (size_t i = 0; environ[i] != NULL; i++) {
        const char *equals = strchr(environ[i], '=');
        bool replaced = false;

        for (size_t k = 0; added != NULL && added[k] != NULL && equals != NULL; k++)
            replaced = replaced || strncmp(environ[i], added[k], (size_t)(equals - environ[i]) + 1) == 0;
        if (!replaced && count + 1 < MOST_VARIABLES)
            joined[count++] = environ[i];
    }
    for (size_t k = 0; added != NULL && added[k] != NULL; k++) {
        assert_true(count + 1 < MOST_VARIABLES);
        joined[count] = strdup(added[k]);
        assert_non_null(joined[count++]);
    }
    joined[count] = NULL;
}

static void free_added(const char *const *added, char *joined[MOST_VARIABLES])
{
    size_t count = 0, more = 0;

    while (joined[count] != NULL)
        count++;
    while (added != NULL && added[more] != NULL)
        more++;
    for (size_t i = count - more; i < count; i++)
        free(joined[i]);
}

/* Starts the program in `folder` with its output on two pipes.  posix_spawn() has no portable way to change
   the folder, so that the test itself goes there and back: these tests have one thread. */
static pid_t start(const char *const *arguments, char **environment, const char *folder, int pipes[2][2])
{
    char *words[MOST_WORDS];
    posix_spawn_file_actions_t actions;
    size_t count = 0;
    int home = open(".", O_RDONLY | O_CLOEXEC), failure;
    pid_t child;

    for (; arguments[count] != NULL; count++) {
        assert_true(count + 1 < MOST_WORDS);
        words[count] = strdup(arguments[count]);
        assert_non_null(words[count]);
    }
    words[count] = NULL;
    assert_true(home >= 0);
    assert_int_equal(posix_spawn_file_actions_init(&actions), 0);
    assert_int_equal(posix_spawn_file_actions_addopen(&actions, 0, "/dev/null", O_RDONLY, 0), 0);
    for (int i = 0; i < 2; i++) {
        assert_int_equal(pipe(pipes[i]), 0);
        assert_true(fcntl(pipes[i][0], F_SETFD, FD_CLOEXEC) == 0);
        assert_int_equal(posix_spawn_file_actions_adddup2(&actions, pipes[i][1], i + 1), 0);
        assert_int_equal(posix_spawn_file_actions_addclose(&actions, pipes[i][1]), 0);
    }
    assert_true(folder == NULL || chdir(folder) == 0);
    failure = posix_spawn(&child, words[0], &actions, NULL, words, environment);
    assert_int_equal(fchdir(home), 0);
    close(home);
    posix_spawn_file_actions_destroy(&actions);
    for (int i = 0; i < 2; i++)
        close(pipes[i][1]);
    for (size_t i = 0; i < count; i++)
        free(words[i]);
    if (failure != 0)
        fail_msg("%s cannot be started (%s)", arguments[0], strerror(failure));
    return child;
}

run_result run_captured(const char *const *arguments, const char *const *environment, const char *folder)
{
    char *joined[MOST_VARIABLES];
    int pipes[2][2], status;
    stream streams[2] = {{0}};
    pid_t child;

    join_environment(environment, joined);
    child = start(arguments, joined, folder, pipes);
    free_added(environment, joined);
    for (size_t i = 0; i < 2; i++)
        streams[i].descriptor = pipes[i][0];
    drain(streams);
    assert_true(waitpid(child, &status, 0) == child);
    return (run_result){.exit_code = WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status),
                        .output = streams[0].text,
                        .errors = streams[1].text};
}

run_result run_line(const char *line, const char *folder)
{
    const char *words[MOST_WORDS] = {STERICOL_PROGRAM};
    size_t count = 1;
    char *copy = strdup(line), *c = copy;
    run_result result;

    assert_non_null(copy);
    while (*c != '\0') {
        char end = ' ';

        while (*c == ' ')
            c++;
        if (*c == '\0')
            break;
        if (*c == '\'') {
            end = '\'';
            c++;
        }
        assert_true(count + 1 < MOST_WORDS);
        words[count++] = c;
        while (*c != '\0' && *c != end)
            c++;
        if (*c != '\0')
            *c++ = '\0';
    }
    words[count] = NULL;
    result = run_captured(words, NULL, folder);
    free(copy);
    return result;
}

void run_free(run_result *result)
{
    free(result->output);
    free(result->errors);
    *result = (run_result){0};
}

void run_expect_code(const run_result *result, int code, const char *file, int line)
{
    if (result->exit_code == code)
        return;
    print_error("exit code %d, expected %d\nstandard output:\n%s\nstandard error:\n%s\n", result->exit_code,
                code, result->output, result->errors);
    _fail(file, line);
}

void run_expect_part(const char *text, const char *part, const char *file, int line)
{
    if (strstr(text, part) != NULL)
        return;
    print_error("\"%s\" is not in:\n%s\n", part, text);
    _fail(file, line);
}

char *run_new_folder(const char *base, const char *name)
{
    const size_t room = strlen(base) + strlen(name) + 16;
    char *path = malloc(room);

    assert_non_null(path);
    snprintf(path, room, "%s/%s.XXXXXX", base, name);
    assert_non_null(mkdtemp(path));
    return path;
}

static void join_path(char *path, size_t room, const char *folder, const char *name)
{
    assert_true((size_t)snprintf(path, room, "%s/%s", folder, name) < room);
}

void run_remove_folder(char *path)
{
    DIR *folder = opendir(path);
    struct dirent *entry;
    char file[4096];

    assert_non_null(folder);
    while ((entry = readdir(folder)) != NULL) {
        if (strcmp(entry->d_name, ".") == 0 || strcmp(entry->d_name, "..") == 0)
            continue;
        join_path(file, sizeof file, path, entry->d_name);
        assert_int_equal(unlink(file), 0);
    }
    closedir(folder);
    assert_int_equal(rmdir(path), 0);
    free(path);
}

void run_write_file(const char *folder, const char *name, const char *text)
{
    char path[4096];
    FILE *file;

    join_path(path, sizeof path, folder, name);
    file = fopen(path, "wb");
    assert_non_null(file);
    assert_true(fputs(text, file) >= 0);
    assert_int_equal(fclose(file), 0);
}

bool run_file_exists(const char *folder, const char *name)
{
    struct stat about;
    char path[4096];

    join_path(path, sizeof path, folder, name);
    return stat(path, &about) == 0;
}
