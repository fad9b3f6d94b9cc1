/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/words.h"

#include "job/room.h"

#include <string.h>

const char *const stericol_cautions[] = {"Steric change is only one part of sea-level change. Water added "
                                         "from ice and land, currents and winds, the motion "
                                         "of the land, gravity and tides are not in it.",
                                         "Take no design, navigation or flood decision from these numbers "
                                         "alone. Local codes, the responsible authorities and "
                                         "licensed practice decide.",
                                         "The halosteric part of a global mean is not sea level, and mostly "
                                         "shows drift of salinity sensors; it is given, and "
                                         "never added silently."};
const size_t stericol_caution_count = sizeof stericol_cautions / sizeof stericol_cautions[0];

const char *const stericol_manners[] = {"Values follow a blank or an equals sign: --layers 0..700 or "
                                        "--layers=0..700. A repeatable option is given once for "
                                        "every value. -- ends the options.",
                                        "Paths of data may be patterns with *, ? and [ ] (quote them), or "
                                        "@list.txt: a path a line, # begins a comment line. "
                                        "A file that exists under exactly that name is taken as it is.",
                                        "A settings file has lines 'name = value' with the names of the long "
                                        "options; an option that may be repeated stands "
                                        "on a line for every value, a switch takes yes or no. Values that "
                                        "begin or end with a blank, or hold a blank before "
                                        "#, stand in quotes. The command line wins, and replaces all values "
                                        "of an option; --name=no turns a switch off.",
                                        "Results go to standard output, notices, progress and errors to "
                                        "standard error. A run that fails leaves no output "
                                        "file, and an existing one untouched."};
const size_t stericol_manner_count = sizeof stericol_manners / sizeof stericol_manners[0];

void stericol_words_exit_code(size_t index, stericol_text *code, const char **meaning)
{
#define EXIT_ROW(code, value, text) {(value), (text)},
    static const struct {
        int code;
        const char *text;
    } rows[] = {STERICOL_STATUS_LIST(EXIT_ROW)};
#undef EXIT_ROW

    stericol_text_format(code, "%d", rows[index].code);
    if (rows[index].code == STERICOL_INTERRUPTED)
        stericol_text_add(code, " + signal");
    *meaning = rows[index].text;
}

size_t stericol_words_exit_codes(void)
{
#define ONE(code, value, text) +1
    return 0 STERICOL_STATUS_LIST(ONE);
#undef ONE
}

void stericol_words_option(stericol_text *text, const stericol_command *command,
                           const stericol_option *option)
{
    if (option == command->positional) {
        stericol_text_format(text, "%s%s", option->metavar, option->repeatable ? "..." : "");
        return;
    }
    stericol_text_format(text, "--%s", option->name);
    if (option->metavar != NULL)
        stericol_text_format(text, " %s", option->metavar);
}

void stericol_words_help(stericol_text *text, const stericol_option *option)
{
    stericol_text allowed = {0};

    stericol_text_format(text, "%s.", option->help);
    /* The choices of a choice are its metavar already. */
    if (option->kind != STERICOL_OPTION_CHOICE && option->kind != STERICOL_OPTION_SWITCH)
        stericol_option_allowed(option, &allowed);
    if (allowed.length != 0)
        stericol_text_format(text, " Allowed: %s.", stericol_text_string(&allowed));
    if (option->repeatable)
        stericol_text_add(text, " May be repeated.");
    if (option->initial != NULL)
        stericol_text_format(text, " Default: %s.", option->initial);
    else if (option->initial_words != NULL)
        stericol_text_format(text, " Default: %s.", option->initial_words);
    text->failed = text->failed || allowed.failed;
    stericol_text_free(&allowed);
}

size_t stericol_words_rows(const stericol_command *command)
{
    return command->option_count + (command->positional != NULL);
}

const stericol_option *stericol_words_row(const stericol_command *command, size_t index)
{
    if (command->positional == NULL)
        return command->options[index];
    return index == 0 ? command->positional : command->options[index - 1];
}

bool stericol_words_group_begins(const stericol_command *command, size_t index)
{
    return index == 0 || strcmp(stericol_words_row(command, index)->group,
                                stericol_words_row(command, index - 1)->group) != 0;
}
