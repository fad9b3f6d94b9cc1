/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Help, manual page and completion say what the tables say. */
#include "support/testing.h"

#include "base/text.h"
#include "job/help.h"
#include "job/options.h"
#include "job/settings.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

/* The headings, options and examples of every command are sane: what the compiler cannot see in the tables.
 */
static void the_tables_are_sound(void **state)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    (void)state;
    assert_int_equal(count, 4);
    for (size_t i = 0; i < count; i++) {
        const stericol_command *command = &commands[i];

        assert_true(command->example_count >= 1);
        for (size_t j = 0; j < command->option_count; j++) {
            const stericol_option *option = command->options[j];
            bool group_before = false;

            assert_ptr_equal(stericol_command_option(command, option->name), option); /* no name twice */
            assert_int_equal(option->metavar == NULL, option->kind == STERICOL_OPTION_SWITCH);
            if (option->kind == STERICOL_OPTION_CHOICE)
                assert_string_equal(option->metavar, option->choices);
            assert_true(strlen(option->help) > 10 && option->help[strlen(option->help) - 1] != '.');
            for (size_t k = 0; k + 1 < j; k++)
                group_before = group_before || option->group == command->options[k]->group;
            if (group_before && option->group != command->options[j - 1]->group)
                fail_msg("%s: the group of --%s is torn apart", command->name, option->name);
        }
        for (size_t j = 0; j < command->rule_count; j++) {
            const stericol_rule *rule = &command->rules[j];

            assert_non_null(rule->remedy);
            if (rule->kind != STERICOL_RULE_REQUIRED) {
                assert_non_null(stericol_command_option(command, rule->first));
                assert_non_null(stericol_command_option(command, rule->second));
            }
        }
    }
}

/* Splits the example at blanks (none has quotes) and parses it. */
static void examples_can_be_typed(void **state)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    (void)state;
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < commands[i].example_count; j++) {
            char line[512], *words[64], *rest = NULL;
            int found = 0;
            stericol_context *context = stericol_context_new();
            stericol_request request;

            snprintf(line, sizeof line, "%s", commands[i].examples[j].line);
            for (char *word = strtok_r(line, " ", &rest); word != NULL; word = strtok_r(NULL, " ", &rest))
                words[found++] = word;
            assert_string_equal(words[0], "stericol");
            if (stericol_request_parse(context, found, words, &request) != STERICOL_OK)
                fail_msg("%s: %s", commands[i].examples[j].line, stericol_context_message(context));
            assert_ptr_equal(request.command, &commands[i]);
            stericol_settings_free(request.settings);
            stericol_context_free(context);
        }
}

static void assert_lines_fit(const char *text)
{
    while (*text != '\0') {
        size_t length = strcspn(text, "\n");

        if (length > STERICOL_HELP_WIDTH)
            fail_msg("%zu columns: '%.*s'", length, (int)length, text);
        if (length > 0 && text[length - 1] == ' ')
            fail_msg("a blank ends '%.*s'", (int)length, text);
        assert_int_equal(text[length], '\n');
        text += length + 1;
    }
}

static void assert_holds(const char *text, const char *part)
{
    if (strstr(text, part) == NULL)
        fail_msg("'%s' is missing in:\n%s", part, text);
}

/* With every run of blanks, line ends and continuations made one blank, so that wrapping does not matter. */
static char *unwrapped(const char *text)
{
    stericol_text made = {0};

    while (*text != '\0') {
        size_t blanks = strspn(text, " \n");

        if (blanks > 0) {
            stericol_text_add(&made, " ");
            text += blanks;
            if (stericol_starts_with(text, "\\\n"))
                text += 2 + strspn(text + 2, " ");
        } else {
            stericol_text_add_bytes(&made, text++, 1);
        }
    }
    return stericol_text_take(&made);
}

static void help_names_everything(void **state)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    (void)state;
    for (size_t i = 0; i < count; i++) {
        stericol_text text = {0};
        char *flat;

        stericol_help_command(&text, &commands[i]);
        assert_false(text.failed);
        assert_lines_fit(stericol_text_string(&text));
        flat = unwrapped(stericol_text_string(&text));
        for (size_t j = 0; j < commands[i].option_count; j++) {
            const stericol_option *option = commands[i].options[j];
            stericol_text part = {0};

            stericol_text_format(&part, " --%s%s%s %s.", option->name, option->metavar == NULL ? "" : " ",
                                 option->metavar == NULL ? "" : option->metavar, option->help);
            assert_holds(flat, stericol_text_string(&part));
            stericol_text_clear(&part);
            stericol_text_format(&part, "%s: ", option->group);
            assert_holds(flat, stericol_text_string(&part));
            stericol_text_free(&part);
        }
        for (size_t j = 0; j < commands[i].example_count; j++)
            assert_holds(flat, commands[i].examples[j].line);
        assert_holds(flat, "only one part of sea-level change");
        assert_holds(flat, "no design, navigation or flood decision from these numbers alone");
        assert_holds(flat, "Local codes, the responsible authorities and licensed practice decide");
        free(flat);
        stericol_text_free(&text);
    }
}

static void help_tells_limits_and_defaults(void **state)
{
    stericol_text text = {0};
    char *flat;

    (void)state;
    stericol_help_command(&text, stericol_command_named("change"));
    flat = unwrapped(stericol_text_string(&text));
    assert_holds(
        flat,
        "Allowed: a number above 0, at most 12000 (m). Default: 50 + 0.225 times the depth, at most 500.");
    assert_holds(flat, "Allowed: local, or a number from 900 to 1200 (kg/m3). Default: local.");
    assert_holds(flat,
                 "--layers A..B,... Depth ranges in metres, parted by commas: 0..700,700..2000,2000..bottom. "
                 "Default: 0..bottom.");
    assert_holds(flat,
                 "May be repeated. Default: the world's oceans, both hemispheres and the whole domain.");
    free(flat);
    stericol_text_free(&text);
    stericol_help_command(&text, stericol_command_named("column"));
    flat = unwrapped(stericol_text_string(&text));
    assert_holds(flat, "Allowed: a number from -90 to 90 (degrees north). Default: 45.");
    free(flat);
    stericol_text_free(&text);
    stericol_help_command(&text, stericol_command_named("inspect"));
    assert_holds(stericol_text_string(&text), "Usage: stericol inspect FILE... [OPTIONS]\n");
    assert_holds(stericol_text_string(&text), "  FILE...                     What to look at");
    stericol_text_free(&text);
}

static void program_help_names_commands_and_exit_codes(void **state)
{
    /* Codes and meanings: the program's interface. */
    static const char *const parts[] = {
        " inspect say what a file holds",  " change steric height and heat", " scenario what a prescribed",
        " column one column from a small", " 0 done 1 nothing could be",     " 2 the request is wrong",
        " 3 an input cannot be used",      " 4 the output cannot be",        " 5 out of memory",
        " 70 a fault of the program",      " 128 + signal interrupted ",     "flood decision"};
    stericol_text text = {0};
    char *flat;

    (void)state;
    stericol_help_program(&text);
    assert_false(text.failed);
    assert_lines_fit(stericol_text_string(&text));
    flat = unwrapped(stericol_text_string(&text));
    for (size_t i = 0; i < sizeof parts / sizeof parts[0]; i++)
        assert_holds(flat, parts[i]);
    /* A command is named when it works, not before. */
    assert_null(strstr(flat, "trend"));
    free(flat);
    stericol_text_free(&text);
}

/* ---- manual page and completion ---- */

static void add_troff(stericol_text *text, const char *name)
{
    stericol_text_add(text, "\\fB\\-\\-");
    for (; *name != '\0'; name++)
        stericol_text_add_bytes(text, *name == '-' ? "\\-" : name, *name == '-' ? 2 : 1);
    stericol_text_add(text, "\\fR");
}

static void the_manual_page_names_everything(void **state)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);
    stericol_text text = {0};
    const char *page, *at;

    (void)state;
    stericol_manual_page(&text);
    assert_false(text.failed);
    page = stericol_text_string(&text);
    assert_true(stericol_starts_with(page, ".TH STERICOL 1 "));
    at = page;
    for (size_t i = 0; i < count; i++) {
        stericol_text heading = {0};

        stericol_text_format(&heading, "\n\\fBstericol\\fR %s ", commands[i].name);
        at = strstr(i == 0 ? strstr(page, ".SH \"THE COMMAND") : at, stericol_text_string(&heading));
        assert_non_null(at);
        for (size_t j = 0; j < commands[i].option_count; j++) {
            stericol_text part = {0};
            const char *found;

            add_troff(&part, commands[i].options[j]->name);
            found = strstr(at, stericol_text_string(&part));
            if (found == NULL)
                fail_msg("%s: --%s is missing", commands[i].name, commands[i].options[j]->name);
            at = found;
            stericol_text_free(&part);
        }
        stericol_text_free(&heading);
    }
    assert_holds(page, ".TP\n128 + signal\ninterrupted\n");
    assert_holds(page, "\\(aqsea_*.nc\\(aq");
    stericol_text_free(&text);
}

/* groff is told to warn of everything; its own output goes nowhere. */
static void the_manual_page_formats_without_a_warning(void **state)
{
    static const char page[] = TEST_BUILD_FOLDER "/stericol_under_test.1";
    static const char warnings[] = TEST_BUILD_FOLDER "/warnings_under_test.txt";
    stericol_text text = {0};
    FILE *file = fopen(page, "w");
    char line[256] = "";

    (void)state;
    assert_non_null(file);
    stericol_manual_page(&text);
    assert_int_equal(fwrite(stericol_text_string(&text), 1, text.length, file), text.length);
    assert_int_equal(fclose(file), 0);
    stericol_text_free(&text);
    assert_int_equal(system("groff -man -Tutf8 -ww '" TEST_BUILD_FOLDER "/stericol_under_test.1' 2>&1 "
                            ">'" TEST_BUILD_FOLDER "/formatted_under_test.txt' | cat >'" TEST_BUILD_FOLDER
                            "/warnings_under_test.txt'; test -s '" TEST_BUILD_FOLDER
                            "/formatted_under_test.txt'"),
                     0);
    file = fopen(warnings, "r");
    assert_non_null(file);
    if (fgets(line, sizeof line, file) != NULL)
        fail_msg("groff warns: %s", line);
    fclose(file);
    unlink(page);
    unlink(warnings);
    unlink(TEST_BUILD_FOLDER "/formatted_under_test.txt");
}

/* Runs the script in bash and asks for what follows a line. */
static void assert_completes(const char *words, const char *expected)
{
    static const char script[] = TEST_BUILD_FOLDER "/completion_under_test.sh";
    stericol_text text = {0};
    char command[512], line[4096] = "";
    FILE *file = fopen(script, "w");

    assert_non_null(file);
    stericol_completion_script(&text);
    assert_false(text.failed);
    stericol_text_format(&text,
                         "COMP_WORDS=(%s)\nCOMP_CWORD=$((${#COMP_WORDS[@]} - 1))\n_stericol\n"
                         "echo \"${COMPREPLY[*]}\"\n",
                         words);
    assert_int_equal(fwrite(stericol_text_string(&text), 1, text.length, file), text.length);
    assert_int_equal(fclose(file), 0);
    stericol_text_free(&text);
    snprintf(command, sizeof command, "bash '%s'", script);
    file = popen(command, "r");
    assert_non_null(file);
    assert_non_null(fgets(line, sizeof line, file));
    assert_int_equal(pclose(file), 0);
    line[strcspn(line, "\n")] = '\0';
    assert_string_equal(line, expected);
    unlink(script);
}

static void completion_follows_the_tables(void **state)
{
    (void)state;
    assert_completes("stericol ''", "inspect change scenario column --help --version");
    assert_completes("stericol ch", "change");
    assert_completes("stericol change --att", "--attribution");
    assert_completes("stericol change --attribution ''", "symmetric earlier linear");
    assert_completes("stericol column --earlier-", "");
    assert_completes("stericol change --surface-reach 5", "");
}

int main(void)
{
    const struct CMUnitTest tests[] = {cmocka_unit_test(the_tables_are_sound),
                                       cmocka_unit_test(examples_can_be_typed),
                                       cmocka_unit_test(help_names_everything),
                                       cmocka_unit_test(help_tells_limits_and_defaults),
                                       cmocka_unit_test(program_help_names_commands_and_exit_codes),
                                       cmocka_unit_test(the_manual_page_names_everything),
                                       cmocka_unit_test(the_manual_page_formats_without_a_warning),
                                       cmocka_unit_test(completion_follows_the_tables)};

    return cmocka_run_group_tests(tests, NULL, NULL);
}
