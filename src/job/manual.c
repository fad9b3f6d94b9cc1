/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The manual page in the man(7) macros, and the completion script. */
#include "job/help.h"
#include "job/words.h"

#include <stdbool.h>
#include <string.h>

/* ---- manual page ---- */

/* Adds text so that the formatter prints it as it is; a line of output must not begin with a control
 * character. */
static void add_escaped(stericol_text *text, const char *words)
{
    if (*words == '.' || *words == '\'')
        stericol_text_add(text, "\\&");
    for (; *words != '\0'; words++)
        switch (*words) {
        case '\\':
            stericol_text_add(text, "\\(rs");
            break;
        case '-':
            stericol_text_add(text, "\\-");
            break;
        case '\'':
            stericol_text_add(text, "\\(aq");
            break;
        case '"':
            stericol_text_add(text, "\\(dq");
            break;
        case '`':
            stericol_text_add(text, "\\(ga");
            break;
        case '^':
            stericol_text_add(text, "\\(ha");
            break;
        case '~':
            stericol_text_add(text, "\\(ti");
            break;
        default:
            stericol_text_add_bytes(text, words, 1);
        }
}

static void add_line(stericol_text *text, const char *words)
{
    add_escaped(text, words);
    stericol_text_add(text, "\n");
}

/* Paragraphs parted by an empty line. */
static void add_man_paragraphs(stericol_text *text, const char *paragraphs)
{
    while (*paragraphs != '\0') {
        const char *end = strstr(paragraphs, "\n\n");
        stericol_text one = {0};

        stericol_text_add_bytes(&one, paragraphs,
                                end == NULL ? strlen(paragraphs) : (size_t)(end - paragraphs));
        stericol_text_add(text, ".PP\n");
        add_line(text, stericol_text_string(&one));
        text->failed = text->failed || one.failed;
        stericol_text_free(&one);
        paragraphs = end == NULL ? "" : end + 2;
    }
}

/* "--name" in bold, its value in italics, the help below. */
static void add_man_option(stericol_text *text, const stericol_command *command,
                           const stericol_option *option)
{
    stericol_text help = {0};

    stericol_text_add(text, ".TP\n");
    if (option != command->positional) {
        stericol_text_add(text, "\\fB\\-\\-");
        add_escaped(text, option->name);
        stericol_text_add(text, option->metavar != NULL ? "\\fR " : "\\fR");
    }
    if (option->metavar != NULL) {
        stericol_text_add(text, "\\fI");
        add_escaped(text, option->metavar);
        stericol_text_add(text, "\\fR");
    }
    stericol_text_add(text, "\n");
    stericol_words_help(&help, option);
    add_line(text, stericol_text_string(&help));
    text->failed = text->failed || help.failed;
    stericol_text_free(&help);
}

static void add_man_examples(stericol_text *text, const stericol_command *command)
{
    for (size_t i = 0; i < command->example_count; i++) {
        stericol_text_add(text, ".PP\n");
        add_escaped(text, command->examples[i].purpose);
        stericol_text_add(text, ":\n.RS 4\n.PP\n.nh\n.na\n");
        add_line(text, command->examples[i].line);
        stericol_text_add(text, ".ad\n.hy\n.RE\n");
    }
}

static void add_man_command(stericol_text *text, const stericol_command *command)
{
    stericol_text_format(text, ".SH \"THE COMMAND ");
    for (const char *c = command->name; *c != '\0'; c++) {
        char upper = (char)(*c >= 'a' && *c <= 'z' ? *c - 'a' + 'A' : *c);

        stericol_text_add_bytes(text, &upper, 1);
    }
    stericol_text_add(text, "\"\n\\fBstericol\\fR ");
    add_escaped(text, command->name);
    stericol_text_add(text, " ");
    add_line(text, command->synopsis);
    add_man_paragraphs(text, command->description);
    for (size_t i = 0; i < stericol_words_rows(command); i++) {
        const stericol_option *option = stericol_words_row(command, i);

        if (stericol_words_group_begins(command, i)) {
            stericol_text_add(text, ".SS \"");
            add_escaped(text, option->group);
            stericol_text_add(text, "\"\n");
        }
        add_man_option(text, command, option);
    }
    stericol_text_add(text, ".SS \"Examples\"\n");
    add_man_examples(text, command);
}

static void add_man_list(stericol_text *text, const char *heading, const char *const *paragraphs,
                         size_t count)
{
    stericol_text_format(text, ".SH \"%s\"\n", heading);
    for (size_t i = 0; i < count; i++)
        add_man_paragraphs(text, paragraphs[i]);
}

void stericol_manual_page(stericol_text *text)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    stericol_text_format(text, ".TH STERICOL 1 \"\" \"stericol %s\" \"User Commands\"\n", stericol_version());
    stericol_text_add(
        text, ".SH NAME\nstericol \\- steric height and heat content change from ocean temperature and "
              "salinity\n.SH SYNOPSIS\n");
    for (size_t i = 0; i < count; i++) {
        stericol_text_add(text, ".PP\n\\fBstericol\\fR ");
        add_escaped(text, commands[i].name);
        stericol_text_add(text, " ");
        add_line(text, commands[i].synopsis);
    }
    stericol_text_add(text, ".PP\n\\fBstericol\\fR [\\fICOMMAND\\fR] \\fB\\-\\-help\\fR\n"
                            ".PP\n\\fBstericol\\fR \\fB\\-\\-version\\fR\n.SH DESCRIPTION\n");
    for (size_t i = 0; i < count; i++) {
        stericol_text_format(text, ".TP\n\\fB%s\\fR\n", commands[i].name);
        add_escaped(text, commands[i].summary);
        stericol_text_add(text, ".\n");
    }
    for (size_t i = 0; i < count; i++)
        add_man_command(text, &commands[i]);
    add_man_list(text, "HOW THINGS ARE WRITTEN", stericol_manners, stericol_manner_count);
    stericol_text_add(text, ".SH \"EXIT STATUS\"\n");
    for (size_t i = 0; i < stericol_words_exit_codes(); i++) {
        stericol_text code = {0};
        const char *meaning;

        stericol_words_exit_code(i, &code, &meaning);
        stericol_text_format(text, ".TP\n%s\n", stericol_text_string(&code));
        add_line(text, meaning);
        text->failed = text->failed || code.failed;
        stericol_text_free(&code);
    }
    add_man_list(text, "CAUTION", stericol_cautions, stericol_caution_count);
}

/* ---- completion ---- */

/* "a|b|c" as "a b c". */
static void add_words(stericol_text *text, const char *choices)
{
    for (; *choices != '\0'; choices++)
        stericol_text_add_bytes(text, *choices == '|' ? " " : choices, 1);
}

static bool takes_path(const stericol_option *option)
{
    return option->kind == STERICOL_OPTION_PATH || option->kind == STERICOL_OPTION_PATHS;
}

/* What may follow each option of a command, by the word before the cursor. */
static void add_values(stericol_text *text, const stericol_command *command)
{
    stericol_text_add(text, "        case $before in\n");
    for (size_t i = 0; i < command->option_count; i++) {
        const stericol_option *option = command->options[i];

        if (option->kind == STERICOL_OPTION_SWITCH)
            continue;
        stericol_text_format(text, "        --%s) ", option->name);
        if (takes_path(option)) {
            stericol_text_add(text, "COMPREPLY=($(compgen -f -- \"$word\"))");
        } else if (option->choices != NULL) {
            stericol_text_add(text, "COMPREPLY=($(compgen -W '");
            add_words(text, option->choices);
            stericol_text_add(text, "' -- \"$word\"))");
        } else {
            stericol_text_add(text, "COMPREPLY=()");
        }
        stericol_text_add(text, "; return ;;\n");
    }
    stericol_text_add(text, "        esac\n");
}

static void add_completion(stericol_text *text, const stericol_command *command)
{
    stericol_text_format(text, "    %s)\n", command->name);
    add_values(text, command);
    if (command->positional != NULL)
        stericol_text_add(
            text, "        [[ $word == -* ]] || { COMPREPLY=($(compgen -f -- \"$word\")); return; }\n");
    stericol_text_add(text, "        COMPREPLY=($(compgen -W '");
    for (size_t i = 0; i < command->option_count; i++)
        stericol_text_format(text, "--%s ", command->options[i]->name);
    stericol_text_add(text, "--help' -- \"$word\")) ;;\n");
}

void stericol_completion_script(stericol_text *text)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    stericol_text_add(text, "# Completion of stericol for bash; source this file.\n_stericol()\n{\n"
                            "    local word=${COMP_WORDS[COMP_CWORD]} before=${COMP_WORDS[COMP_CWORD-1]}\n"
                            "    COMPREPLY=()\n"
                            "    if [ \"$COMP_CWORD\" -eq 1 ]; then\n        COMPREPLY=($(compgen -W '");
    for (size_t i = 0; i < count; i++)
        stericol_text_format(text, "%s ", commands[i].name);
    stericol_text_add(text, "--help --version' -- \"$word\"))\n        return\n    fi\n"
                            "    case ${COMP_WORDS[1]} in\n");
    for (size_t i = 0; i < count; i++)
        add_completion(text, &commands[i]);
    stericol_text_add(text, "    esac\n}\ncomplete -o filenames -F _stericol stericol\n");
}
