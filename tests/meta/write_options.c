/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Prints the part of docs/options.md that lists the options, from the tables that the program parses by. */
#include "job/options.h"

#include <stdbool.h>
#include <stdio.h>
#include <string.h>

/* A bar would end the cell of a table. */
static void print_cell(const char *text)
{
    for (; *text != '\0'; text++) {
        if (*text == '|')
            putchar('\\');
        putchar(*text);
    }
}

static void print_default(const stericol_option *option)
{
    if (option->initial != NULL) {
        printf("`%s`", option->initial);
        if (option->unit != NULL)
            printf(" %s", option->unit);
    } else if (option->initial_words != NULL) {
        print_cell(option->initial_words);
    } else if (option->kind == STERICOL_OPTION_SWITCH) {
        printf("no");
    } else {
        printf("none");
    }
}

static void print_option(const stericol_option *option, bool positional)
{
    printf("| `%s%s", positional ? "" : "--", positional ? option->metavar : option->name);
    if (!positional && option->metavar != NULL) {
        putchar(' ');
        print_cell(option->metavar);
    }
    printf("`%s | ", option->repeatable ? ", repeatable" : "");
    print_cell(option->help);
    if (option->kind == STERICOL_OPTION_NUMBER && option->high > option->low)
        printf("; %s %g to %g%s%s", option->above_low ? "above" : "from", option->low, option->high,
               option->unit != NULL ? " " : "", option->unit != NULL ? option->unit : "");
    printf(" | ");
    print_default(option);
    puts(" |");
}

static void print_rule(const stericol_rule *rule, const stericol_command *command)
{
    char names[128];

    switch (rule->kind) {
    case STERICOL_RULE_REQUIRED:
        snprintf(names, sizeof names, "%s", rule->first);
        fputs("- needed: ", stdout);
        for (char *name = strtok(names, "|"); name != NULL; name = strtok(NULL, "|"))
            if (command->positional != NULL && strcmp(command->positional->name, name) == 0)
                printf("`%s`", command->positional->metavar);
            else
                printf("%s`--%s`", name == names ? "" : " or ", name);
        puts("");
        return;
    case STERICOL_RULE_EXCLUDES:
        printf("- `--%s` excludes `--%s`\n", rule->first, rule->second);
        return;
    case STERICOL_RULE_NEEDS:
        printf("- `--%s` needs `--%s`\n", rule->first, rule->second);
        return;
    case STERICOL_RULE_NEEDS_VALUE:
        printf("- `--%s` needs `--%s %s`\n", rule->first, rule->second, rule->value);
        return;
    case STERICOL_RULE_NOT_VALUE:
        printf("- `--%s` excludes `--%s %s`\n", rule->first, rule->second, rule->value);
        return;
    }
}

static void print_command(const stericol_command *command)
{
    const char *group = "";

    printf("\n## `%s`\n\n`stericol %s %s`\n", command->name, command->name, command->synopsis);
    if (command->positional != NULL) {
        puts("\n| argument | meaning | default |\n|---|---|---|");
        print_option(command->positional, true);
    }
    for (size_t i = 0; i < command->option_count; i++) {
        const stericol_option *option = command->options[i];

        if (strcmp(group, option->group) != 0)
            printf("\n| %s | meaning | default |\n|---|---|---|\n", option->group);
        group = option->group;
        print_option(option, false);
    }
    puts("");
    for (size_t i = 0; i < command->rule_count; i++)
        print_rule(&command->rules[i], command);
}

int main(void)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    for (size_t i = 0; i < count; i++)
        print_command(&commands[i]);
    return fflush(stdout) == 0 ? 0 : 1;
}
