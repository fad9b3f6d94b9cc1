/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/paths.h"

#include "base/checked.h"
#include "base/context.h"
#include "base/text.h"

#include <errno.h>
#include <glob.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

void stericol_paths_free(stericol_paths *paths)
{
    for (size_t i = 0; i < paths->count; i++)
        free(paths->path[i]);
    free(paths->path);
    *paths = (stericol_paths){0};
}

static bool is_there(const char *path)
{
    struct stat found;

    return lstat(path, &found) == 0;
}

static stericol_status add_path(stericol_context *context, const char *path, stericol_paths *paths)
{
    void *grown = paths->path;
    char *copy = stericol_copy_string(path);

    if (copy == NULL || !stericol_grow_array(&grown, paths->count + 1, sizeof *paths->path)) {
        free(copy);
        return stericol_fail_memory(context, 0, "the list of files");
    }
    paths->path = grown;
    paths->path[paths->count++] = copy;
    return STERICOL_OK;
}

static int by_bytes(const void *a, const void *b)
{
    const char *const *left = a, *const *right = b;

    return strcmp(*left, *right);
}

/* `where` is what messages name: the option, or the list that holds the pattern. */
static stericol_status add_matches(stericol_context *context, const char *where, const char *pattern,
                                   stericol_paths *paths)
{
    glob_t found;
    stericol_status status = STERICOL_OK;
    int outcome = glob(pattern, GLOB_NOSORT | GLOB_ERR, NULL, &found);

    if (outcome == GLOB_NOMATCH) {
        status = stericol_fail(context, STERICOL_INPUT, pattern, NULL, "check the folder and the pattern",
                               "no file matches this pattern of %s", where);
    } else if (outcome == GLOB_ABORTED) {
        status = stericol_fail(context, STERICOL_INPUT, pattern, NULL, "check its permissions",
                               "a folder of this pattern of %s cannot be read", where);
    } else if (outcome != 0) {
        status = stericol_fail_memory(context, 0, "the list of files");
    } else {
        qsort(found.gl_pathv, found.gl_pathc, sizeof *found.gl_pathv, by_bytes);
        for (size_t i = 0; status == STERICOL_OK && i < found.gl_pathc; i++)
            status = add_path(context, found.gl_pathv[i], paths);
    }
    globfree(&found);
    return status;
}

static bool is_pattern(const char *path)
{
    return strpbrk(path, "*?[") != NULL && strstr(path, "://") == NULL;
}

static stericol_status add_plain_or_matches(stericol_context *context, const char *where, const char *path,
                                            stericol_paths *paths)
{
    return !is_there(path) && is_pattern(path) ? add_matches(context, where, path, paths)
                                               : add_path(context, path, paths);
}

/* ---- lists ---- */

static char *trim(char *line)
{
    char *end;

    line += strspn(line, " \t\r\n");
    end = line + strlen(line);
    while (end > line && strchr(" \t\r\n", end[-1]) != NULL)
        end--;
    *end = '\0';
    return line;
}

/* Far more than a path can have; a device or a data file given by mistake stops here. */
#define LONGEST_LINE ((size_t)65536)

/* The next line without its end; false where the file is at its end, and where `*text` says that this is no
   text. */
static bool read_line(FILE *file, char *line, bool *text)
{
    size_t length = 0;
    int c = getc(file);

    if (c == EOF)
        return false;
    for (; c != EOF && c != '\n'; c = getc(file)) {
        if (c == '\0' || length + 1 >= LONGEST_LINE) {
            *text = false;
            return false;
        }
        line[length++] = (char)c;
    }
    line[length] = '\0';
    return true;
}

static stericol_status add_lines(stericol_context *context, const char *list, FILE *file,
                                 stericol_paths *paths)
{
    char *line = malloc(LONGEST_LINE);
    bool first = true, text = true;
    stericol_status status = STERICOL_OK;

    if (line == NULL)
        return stericol_fail_memory(context, LONGEST_LINE, "the list of files");
    errno = 0;
    while (status == STERICOL_OK && read_line(file, line, &text)) {
        char *path = line;

        if (first &&
            stericol_starts_with(path, "\xef\xbb\xbf")) /* a byte order mark, as some editors write */
            path += 3;
        first = false;
        path = trim(path);
        if (*path != '\0' && *path != '#')
            status = add_plain_or_matches(context, list, path, paths);
    }
    if (status == STERICOL_OK && !text)
        status = stericol_fail(context, STERICOL_INPUT, list, NULL, "give a text with a path a line",
                               "this is no list of files");
    if (status == STERICOL_OK && ferror(file))
        status = stericol_fail(context, STERICOL_INPUT, list, NULL, "give a text file with a path a line",
                               "the list of files cannot be read: %s", strerror(errno));
    free(line);
    return status;
}

static stericol_status add_list(stericol_context *context, const char *list, stericol_paths *paths)
{
    FILE *file = fopen(list, "r");
    size_t before = paths->count;
    stericol_status status;

    if (file == NULL)
        return stericol_fail(context, STERICOL_INPUT, list, NULL, "check its name and permissions",
                             "the list of files cannot be opened: %s", strerror(errno));
    status = add_lines(context, list, file, paths);
    fclose(file);
    if (status == STERICOL_OK && paths->count == before)
        status = stericol_fail(context, STERICOL_INPUT, list, NULL, "give a path a line",
                               "the list of files holds no path");
    return status;
}

stericol_status stericol_expand_paths(stericol_context *context, const char *option,
                                      const char *const *arguments, size_t count, stericol_paths *paths)
{
    stericol_text where = {0};
    stericol_status status = STERICOL_OK;

    *paths = (stericol_paths){0};
    stericol_text_format(&where, "--%s", option);
    for (size_t i = 0; status == STERICOL_OK && i < count; i++) {
        const char *argument = arguments[i];

        if (argument[0] == '@' && argument[1] != '\0' && !is_there(argument))
            status = add_list(context, argument + 1, paths);
        else
            status = add_plain_or_matches(context, stericol_text_string(&where), argument, paths);
    }
    stericol_text_free(&where);
    if (status != STERICOL_OK)
        stericol_paths_free(paths);
    return status;
}

stericol_status stericol_settings_paths(stericol_context *context, const stericol_settings *settings,
                                        const char *name, stericol_paths *paths)
{
    size_t count;
    const char *const *arguments = stericol_settings_list(settings, name, &count);

    return stericol_expand_paths(context, name, arguments, count, paths);
}
