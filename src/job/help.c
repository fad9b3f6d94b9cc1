/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/help.h"

#include "job/words.h"

#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

enum { OPTION_INDENT = 2, TEXT_INDENT = 30, EXAMPLE_INDENT = 6 };

static void add_blanks(stericol_text *text, size_t count)
{
    while (count-- > 0)
        stericol_text_add(text, " ");
}

/* How much stays on one line: a word; in a command line an option with its value, so that neither is lost
 * sight of. */
static size_t unit_length(const char *words, bool command_line)
{
    size_t length = strcspn(words, " ");

    while (command_line && words[length] == ' ' && !stericol_starts_with(words + length, " --"))
        length += 1 + strcspn(words + length + 1, " ");
    return length;
}

/*
 * Adds `words` broken at blanks, every line after the first indented by `indent`; the first begins at
 * `column`.  What ends a broken line before its line end is `continued` ("" or " \").  A word too long for a
 * line is left whole.
 */
static void add_wrapped(stericol_text *text, size_t column, size_t indent, const char *words,
                        const char *continued)
{
    size_t width = STERICOL_HELP_WIDTH - strlen(continued);
    bool at_start = true;

    while (*(words += strspn(words, " ")) != '\0') {
        size_t length = unit_length(words, *continued != '\0');

        if (!at_start && column + 1 + length > width) {
            stericol_text_format(text, "%s\n", continued);
            add_blanks(text, indent);
            column = indent;
            at_start = true;
        }
        if (!at_start)
            stericol_text_add(text, " ");
        stericol_text_add_bytes(text, words, length);
        column += length + !at_start;
        at_start = false;
        words += length;
    }
    stericol_text_add(text, "\n");
}

/* Paragraphs parted by an empty line, each followed by one. */
static void add_paragraphs(stericol_text *text, const char *paragraphs)
{
    while (*paragraphs != '\0') {
        const char *end = strstr(paragraphs, "\n\n");
        char *one = end == NULL ? stericol_copy_string(paragraphs)
                                : stericol_copy_bytes(paragraphs, (size_t)(end - paragraphs));

        if (one == NULL) {
            text->failed = true;
            return;
        }
        add_wrapped(text, 0, 0, one, "");
        stericol_text_add(text, "\n");
        free(one);
        paragraphs = end == NULL ? "" : end + 2;
    }
}

/* "  left       right ...", the right part on a line of its own where the left is too long. */
static void add_row(stericol_text *text, const char *left, size_t indent, const char *right)
{
    size_t column = OPTION_INDENT + strlen(left);

    add_blanks(text, OPTION_INDENT);
    stericol_text_add(text, left);
    if (column + 2 > indent) {
        stericol_text_add(text, "\n");
        column = 0;
    }
    add_blanks(text, indent - column);
    add_wrapped(text, indent, indent, right, "");
}

static void add_option(stericol_text *text, const stericol_command *command, const stericol_option *option)
{
    stericol_text left = {0}, right = {0};

    stericol_words_option(&left, command, option);
    stericol_words_help(&right, option);
    add_row(text, stericol_text_string(&left), TEXT_INDENT, stericol_text_string(&right));
    text->failed = text->failed || left.failed || right.failed;
    stericol_text_free(&left);
    stericol_text_free(&right);
}

static void add_examples(stericol_text *text, const stericol_command *command)
{
    stericol_text_add(text, "\nExamples:\n");
    for (size_t i = 0; i < command->example_count; i++) {
        add_blanks(text, OPTION_INDENT);
        stericol_text_format(text, "%s:\n", command->examples[i].purpose);
        add_blanks(text, OPTION_INDENT * 2);
        add_wrapped(text, OPTION_INDENT * 2, EXAMPLE_INDENT, command->examples[i].line, " \\");
    }
}

static void add_cautions(stericol_text *text)
{
    stericol_text_add(text, "\nCaution:\n");
    for (size_t i = 0; i < stericol_caution_count; i++) {
        add_blanks(text, OPTION_INDENT);
        add_wrapped(text, OPTION_INDENT, OPTION_INDENT, stericol_cautions[i], "");
    }
}

void stericol_help_command(stericol_text *text, const stericol_command *command)
{
    stericol_text usage = {0};

    stericol_text_format(&usage, "stericol %s %s", command->name, command->synopsis);
    stericol_text_add(text, "Usage: ");
    add_wrapped(text, strlen("Usage: "), strlen("Usage: "), stericol_text_string(&usage), "");
    text->failed = text->failed || usage.failed;
    stericol_text_free(&usage);
    stericol_text_add(text, "\n");
    add_paragraphs(text, command->description);
    for (size_t i = 0; i < stericol_words_rows(command); i++) {
        const stericol_option *option = stericol_words_row(command, i);

        if (stericol_words_group_begins(command, i))
            stericol_text_format(text, "%s%s:\n", i == 0 ? "" : "\n", option->group);
        add_option(text, command, option);
    }
    add_row(text, "--help", TEXT_INDENT, "This help.");
    add_examples(text, command);
    add_cautions(text);
    stericol_text_add(text,
                      "\nstericol --help says how options, patterns and settings files are written, and\n"
                      "what the exit codes mean.\n");
}

static void add_exit_codes(stericol_text *text)
{
    stericol_text_add(text, "\nExit codes:\n");
    for (size_t i = 0; i < stericol_words_exit_codes(); i++) {
        stericol_text code = {0};
        const char *meaning;

        stericol_words_exit_code(i, &code, &meaning);
        add_row(text, stericol_text_string(&code), 18, meaning);
        text->failed = text->failed || code.failed;
        stericol_text_free(&code);
    }
}

void stericol_help_program(stericol_text *text)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    stericol_text_add(text, "Usage: stericol COMMAND [OPTIONS]\n"
                            "       stericol COMMAND --help\n"
                            "       stericol --help | --version\n\n");
    stericol_text_format(text, "stericol %s. ", stericol_version());
    add_wrapped(text, strlen("stericol . ") + strlen(stericol_version()), 0,
                "Steric height and heat content change of the sea from gridded temperature and salinity.",
                "");
    stericol_text_add(text, "\nCommands:\n");
    for (size_t i = 0; i < count; i++)
        add_row(text, commands[i].name, 13, commands[i].summary);
    stericol_text_add(text, "\nFirst steps:\n");
    for (size_t i = 0; i < count && i < 2; i++) {
        add_blanks(text, OPTION_INDENT);
        add_wrapped(text, OPTION_INDENT, EXAMPLE_INDENT, commands[i].examples[0].line, " \\");
    }
    stericol_text_add(text, "\nHow things are written:\n");
    for (size_t i = 0; i < stericol_manner_count; i++) {
        add_blanks(text, OPTION_INDENT);
        add_wrapped(text, OPTION_INDENT, OPTION_INDENT, stericol_manners[i], "");
    }
    add_cautions(text);
    add_exit_codes(text);
}
