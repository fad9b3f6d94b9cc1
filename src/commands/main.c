/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/commands.h"

#include "job/help.h"
#include "job/signals.h"

#include <errno.h>
#include <fcntl.h>
#include <locale.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

/* What runs each command of the option tables. */
static const struct {
    const char *name;
    stericol_command_function *run;
} functions[] = {
    {"change", stericol_command_change},
    {"inspect", stericol_command_inspect},
    {"column", stericol_command_column},
    {"scenario", stericol_command_scenario},
};

static stericol_command_function *function_of(const stericol_command *command)
{
    for (size_t i = 0; i < sizeof functions / sizeof functions[0]; i++)
        if (strcmp(functions[i].name, command->name) == 0)
            return functions[i].run;
    return NULL;
}

/* Prints a text that was built, for --help and --version. */
static stericol_status print_text(stericol_text *text)
{
    stericol_status status = STERICOL_OK;

    if (text->failed) {
        fputs("stericol: no memory left for the text\n", stderr);
        status = STERICOL_MEMORY;
    } else if (fputs(stericol_text_string(text), stdout) < 0 || fflush(stdout) != 0) {
        fprintf(stderr,
                "stericol: standard output: cannot be written (%s); make room, or send it somewhere else\n",
                strerror(errno));
        status = STERICOL_OUTPUT;
    }
    stericol_text_free(text);
    return status;
}

static stericol_status print_help(const stericol_command *command)
{
    stericol_text text = {0};

    if (command == NULL)
        stericol_help_program(&text);
    else
        stericol_help_command(&text, command);
    return print_text(&text);
}

static stericol_status print_version(void)
{
    stericol_text text = {0};

    stericol_text_format(&text, "stericol %s\nGPL-3.0-or-later; comes with no warranty.\n",
                         stericol_version());
    return print_text(&text);
}

/* The command as it was typed, for provenance: arguments with blanks or quotes are quoted for a POSIX shell.
 */
static void describe_command_line(stericol_text *text, int argc, char *const argv[])
{
    stericol_text_add(text, "stericol");
    for (int i = 1; i < argc; i++) {
        bool plain =
            argv[i][0] != '\0' && strspn(argv[i], "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz"
                                                  "0123456789-_=+.,:/@%") == strlen(argv[i]);

        stericol_text_add(text, " ");
        if (plain) {
            stericol_text_add(text, argv[i]);
            continue;
        }
        stericol_text_add(text, "'");
        for (const char *c = argv[i]; *c != '\0'; c++)
            if (*c == '\'')
                stericol_text_add(text, "'\\''");
            else
                stericol_text_add_bytes(text, c, 1);
        stericol_text_add(text, "'");
    }
}

static stericol_status run_command(const stericol_request *request, int argc, char *const argv[])
{
    stericol_text command_line = {0};
    stericol_session session;
    stericol_status status;

    describe_command_line(&command_line, argc, argv);
    status = stericol_session_open(&session, request->settings, stericol_text_string(&command_line));
    if (status == STERICOL_OK)
        status = function_of(request->command)(&session);
    status = stericol_session_close(&session, status);
    stericol_text_free(&command_line);
    return status;
}

/*
 * A file opened while standard output or error is closed would take its number, and be written over by
 * messages.  Opened for reading, so that writing still fails.
 */
static void occupy_standard_files(void)
{
    for (int file = open("/dev/null", O_RDONLY); file >= 0; file = open("/dev/null", O_RDONLY))
        if (file > STDERR_FILENO) {
            close(file);
            return;
        }
}

int main(int argc, char **argv)
{
    stericol_context *context = stericol_context_new();
    stericol_request request = {0};
    stericol_status status;

    occupy_standard_files();
    setlocale(LC_CTYPE, "");
    if (context == NULL) {
        fputs("stericol: no memory left to begin with\n", stderr);
        return STERICOL_MEMORY;
    }
    status = stericol_request_parse(context, argc, argv, &request);
    if (status != STERICOL_OK)
        fprintf(stderr, "stericol: %s\n", stericol_context_message(context));
    else if (request.kind == STERICOL_REQUEST_HELP)
        status = print_help(request.command);
    else if (request.kind == STERICOL_REQUEST_VERSION)
        status = print_version();
    else
        status = run_command(&request, argc, argv);
    stericol_settings_free(request.settings);
    stericol_context_free(context);
    if (status == STERICOL_INTERRUPTED)
        stericol_signals_raise_again();
    if (status == STERICOL_OUTPUT) {
        /* After a write that failed HDF5 (seen with 1.10) can crash in what it does at exit. */
        fflush(NULL);
        _exit(STERICOL_OUTPUT);
    }
    return (int)status;
}
