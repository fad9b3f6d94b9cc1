/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The command line. */
#include "base/checked.h"
#include "base/context.h"
#include "job/room.h"

#include <stdlib.h>
#include <string.h>

static stericol_settings *new_settings(const stericol_command *command)
{
    stericol_settings *settings = calloc(1, sizeof *settings);
    size_t count = command->option_count + (command->positional != NULL);

    if (settings == NULL)
        return NULL;
    settings->command = command;
    settings->entries = stericol_new_array(count, sizeof *settings->entries);
    if (settings->entries == NULL) {
        free(settings);
        return NULL;
    }
    for (size_t i = 0; i < count; i++)
        settings->entries[i].option = i < command->option_count ? command->options[i] : command->positional;
    settings->entry_count = count;
    return settings;
}

static stericol_status refuse_unknown(stericol_context *context, const stericol_command *command,
                                      const char *spelled, const char *name)
{
    const char *nearest = stericol_nearest_option(command, name, false);
    stericol_text remedy = {0};
    stericol_status status;

    if (nearest != NULL)
        stericol_text_format(&remedy, "did you mean --%s?", nearest);
    else
        stericol_text_format(&remedy, "see stericol %s --help", command->name);
    status = stericol_fail(context, STERICOL_USAGE, NULL, spelled, stericol_text_string(&remedy),
                           "%s has no such option", command->name);
    stericol_text_free(&remedy);
    return status;
}

static stericol_status refuse_missing_value(stericol_context *context, const stericol_option *option,
                                            const char *spelled)
{
    stericol_text remedy = {0};
    stericol_status status;

    stericol_text_format(&remedy, "give %s %s", spelled, option->metavar);
    status = stericol_fail(context, STERICOL_USAGE, NULL, spelled, stericol_text_string(&remedy),
                           "its value is missing");
    stericol_text_free(&remedy);
    return status;
}

/* Checks a value and keeps it; `spelled` names the option in messages. */
static stericol_status take_value(stericol_context *context, stericol_entry *entry, const char *spelled,
                                  const char *value)
{
    stericol_text phrase = {0};
    const char *refusal;
    stericol_status status;

    if (entry->count != 0 && !entry->option->repeatable)
        return stericol_fail(context, STERICOL_USAGE, NULL, spelled, "give it once",
                             "it is given more than once");
    refusal = stericol_option_refusal(entry->option, value, &phrase);
    if (refusal != NULL)
        status = stericol_fail(context, STERICOL_USAGE, NULL, spelled, refusal, "'%s' cannot be used", value);
    else
        status = stericol_entry_add(context, entry, value, STERICOL_ORIGIN_COMMAND_LINE, 0);
    stericol_text_free(&phrase);
    return status;
}

/* An argument "--name" or "--name=value" at arguments[*at]; *at moves on to the last argument that it took.
 */
static stericol_status take_option(stericol_context *context, stericol_settings *settings, size_t count,
                                   char *const arguments[], size_t *at)
{
    const char *argument = arguments[*at], *equals = strchr(argument, '='), *value = NULL;
    char *spelled =
        stericol_copy_bytes(argument, equals == NULL ? strlen(argument) : (size_t)(equals - argument));
    const stericol_option *option;
    stericol_status status = STERICOL_OK;

    if (spelled == NULL)
        return stericol_fail_memory(context, 0, "the command line");
    option = strncmp(spelled, "--", 2) != 0 ? NULL : stericol_command_option(settings->command, spelled + 2);
    if (option == NULL || option == settings->command->positional) {
        status = refuse_unknown(context, settings->command, spelled, spelled + strspn(spelled, "-"));
        goto end;
    }
    if (equals != NULL)
        value = equals + 1;
    else if (option->kind == STERICOL_OPTION_SWITCH)
        value = "yes";
    else if (*at + 1 < count && !stericol_starts_with(arguments[*at + 1], "--"))
        value = arguments[++*at];
    if (value == NULL)
        status = refuse_missing_value(context, option, spelled);
    else
        status = take_value(context, stericol_entry_named(settings, option->name), spelled, value);
end:
    free(spelled);
    return status;
}

static stericol_status take_positional(stericol_context *context, stericol_settings *settings,
                                       const char *argument)
{
    const stericol_option *positional = settings->command->positional;
    stericol_text remedy = {0};
    stericol_status status;

    if (positional != NULL)
        return take_value(context, stericol_entry_named(settings, positional->name), positional->metavar,
                          argument);
    stericol_text_format(&remedy,
                         "see stericol %s --help; a pattern for many files is quoted, or the option repeated",
                         settings->command->name);
    status = stericol_fail(context, STERICOL_USAGE, NULL, argument, stericol_text_string(&remedy),
                           "this argument belongs to no option");
    stericol_text_free(&remedy);
    return status;
}

stericol_status stericol_settings_parse(stericol_context *context, const stericol_command *command,
                                        size_t count, char *const arguments[], stericol_settings **settings)
{
    stericol_settings *made = new_settings(command);
    stericol_status status = STERICOL_OK;
    bool options = true;

    *settings = NULL;
    if (made == NULL)
        return stericol_fail_memory(context, 0, "the settings");
    for (size_t i = 0; status == STERICOL_OK && i < count; i++) {
        const char *argument = arguments[i];

        if (options && strcmp(argument, "--") == 0)
            options = false;
        else if (options && argument[0] == '-' && argument[1] != '\0')
            status = take_option(context, made, count, arguments, &i);
        else
            status = take_positional(context, made, argument);
    }
    if (status == STERICOL_OK && stericol_command_option(command, "settings") != NULL &&
        stericol_settings_is_set(made, "settings")) {
        made->file = stericol_copy_string(stericol_settings_text(made, "settings"));
        status = made->file == NULL ? stericol_fail_memory(context, 0, "the settings")
                                    : stericol_settings_read_file(context, made);
    }
    if (status == STERICOL_OK)
        status = stericol_settings_check(context, made);
    if (status == STERICOL_OK)
        *settings = made;
    else
        stericol_settings_free(made);
    return status;
}

/* ---- the whole line ---- */

static bool asks_for(const char *name, size_t count, char *const arguments[])
{
    for (size_t i = 0; i < count && strcmp(arguments[i], "--") != 0; i++)
        if (strcmp(arguments[i], name) == 0)
            return true;
    return false;
}

static stericol_status refuse_command(stericol_context *context, const char *name)
{
    const char *nearest = stericol_nearest_command(name);
    stericol_text remedy = {0};
    stericol_status status;

    if (nearest != NULL)
        stericol_text_format(&remedy, "did you mean %s?", nearest);
    else
        stericol_text_add(&remedy, "see stericol --help");
    status = stericol_fail(context, STERICOL_USAGE, NULL, name, stericol_text_string(&remedy),
                           name[0] == '-' ? "no such option before a command" : "no such command");
    stericol_text_free(&remedy);
    return status;
}

stericol_status stericol_request_parse(stericol_context *context, int argc, char *const argv[],
                                       stericol_request *request)
{
    size_t count = argc > 1 ? (size_t)argc - 1 : 0;
    char *const *arguments = argv + 1;
    const stericol_command *command;
    stericol_status status;

    *request = (stericol_request){0};
    if (count == 0)
        return stericol_fail(context, STERICOL_USAGE, NULL, NULL, "see stericol --help",
                             "no command is given");
    command = stericol_command_named(arguments[0]);
    if (asks_for("--help", count, arguments) || asks_for("-h", count, arguments)) {
        if (command == NULL && arguments[0][0] != '-')
            return refuse_command(context, arguments[0]);
        *request = (stericol_request){.kind = STERICOL_REQUEST_HELP, .command = command};
        return STERICOL_OK;
    }
    if (strcmp(arguments[0], "--version") == 0) {
        if (count > 1)
            return stericol_fail(context, STERICOL_USAGE, NULL, arguments[1], "give --version alone",
                                 "nothing goes with --version");
        request->kind = STERICOL_REQUEST_VERSION;
        return STERICOL_OK;
    }
    if (command == NULL)
        return refuse_command(context, arguments[0]);
    status = stericol_settings_parse(context, command, count - 1, arguments + 1, &request->settings);
    if (status == STERICOL_OK)
        request->command = command;
    return status;
}
