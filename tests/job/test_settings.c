/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The command line, the settings file, and the rules between options. */
#include "support/testing.h"

#include "base/text.h"
#include "job/options.h"
#include "job/settings.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

enum { MOST_WORDS = 64 };

#define SETTINGS_FILE TEST_BUILD_FOLDER "/settings_under_test.txt"

static void write_settings(const char *bytes)
{
    FILE *file = fopen(SETTINGS_FILE, "w");

    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, strlen(bytes), file), strlen(bytes));
    assert_int_equal(fclose(file), 0);
}

/* Splits `line` at single blanks; "%S" stands for the settings file. */
static stericol_status parse_line(stericol_context *context, const char *line, stericol_request *request)
{
    char copy[1024], program[] = "stericol", file[] = SETTINGS_FILE, *words[MOST_WORDS] = {program};
    int count = 1;
    stericol_status status;

    snprintf(copy, sizeof copy, "%s", line);
    for (char *at = copy; *at != '\0'; count++) {
        char *end = at + strcspn(at, " ");

        assert_true(count < MOST_WORDS);
        words[count] = strncmp(at, "%S", 2) == 0 ? file : at;
        at = *end == '\0' ? end : end + 1;
        *end = '\0';
    }
    status = stericol_request_parse(context, count, words, request);
    return status;
}

static stericol_settings *accepted(const char *line)
{
    stericol_context *context = stericol_context_new();
    stericol_request request;

    if (parse_line(context, line, &request) != STERICOL_OK)
        fail_msg("'%s' was refused: %s", line, stericol_context_message(context));
    assert_int_equal(request.kind, STERICOL_REQUEST_RUN);
    assert_ptr_equal(request.command, stericol_settings_command(request.settings));
    stericol_context_free(context);
    return request.settings;
}

static void assert_refused_as(const char *line, stericol_status expected, const char *message)
{
    stericol_context *context = stericol_context_new();
    stericol_request request;
    stericol_status status = parse_line(context, line, &request);

    if (status != expected || strcmp(stericol_context_message(context), message) != 0)
        fail_msg("'%s' gave %d '%s',\nexpected '%s'", line, (int)status, stericol_context_message(context),
                 message);
    assert_null(request.settings);
    stericol_context_free(context);
}

static void assert_refused(const char *line, const char *message)
{
    assert_refused_as(line, STERICOL_USAGE, message);
}

/* ---- command line ---- */

static void a_command_line_is_read(void **state)
{
    stericol_settings *settings = accepted(
        "change --earlier a.nc --later=b.nc --earlier c.nc --layers 0..700,700..bottom --replace "
        "--output=x=y.nc "
        "--surface-reach -0 --threads 3 --memory 2K --reference-density 1025.5 --attribution linear");
    size_t count, line = 7;
    const char *const *list = stericol_settings_list(settings, "earlier", &count);

    (void)state;
    assert_int_equal(count, 2);
    assert_string_equal(list[0], "a.nc");
    assert_string_equal(list[1], "c.nc");
    assert_string_equal(stericol_settings_text(settings, "output"), "x=y.nc");
    assert_true(stericol_settings_on(settings, "replace"));
    assert_false(stericol_settings_on(settings, "quiet"));
    assert_same_number(stericol_settings_number(settings, "surface-reach"), 0);
    assert_same_number(stericol_settings_number(settings, "reference-density"), 1025.5);
    assert_int_equal(stericol_settings_whole(settings, "threads"), 3);
    assert_int_equal(stericol_settings_size(settings, "memory"), 2048);
    assert_int_equal(stericol_settings_choice(settings, "attribution"), 2);
    assert_int_equal(stericol_settings_origin(settings, "threads", &line), STERICOL_ORIGIN_COMMAND_LINE);
    assert_int_equal(line, 0);
    assert_true(stericol_settings_is_set(settings, "threads"));
    stericol_settings_free(settings);
    stericol_settings_free(NULL);
}

/* The defaults that the interface fixes. */
static void defaults_are_given(void **state)
{
    stericol_settings *settings = accepted("change --earlier a.nc --later b.nc");
    size_t count;

    (void)state;
    assert_string_equal(stericol_settings_text(settings, "layers"), "0..bottom");
    assert_string_equal(stericol_settings_list(settings, "layers", &count)[0], "0..bottom");
    assert_int_equal(count, 1);
    assert_string_equal(stericol_settings_text(settings, "equation"), "teos10");
    assert_string_equal(stericol_settings_text(settings, "mean"), "state");
    assert_string_equal(stericol_settings_text(settings, "attribution"), "symmetric");
    assert_string_equal(stericol_settings_text(settings, "vertical"), "auto");
    assert_string_equal(stericol_settings_text(settings, "table"), "text");
    assert_string_equal(stericol_settings_text(settings, "progress"), "auto");
    assert_same_number(stericol_settings_number(settings, "least-times"), 0.5);
    assert_same_number(stericol_settings_number(settings, "surface-reach"), 20);
    assert_same_number(stericol_settings_number(settings, "ocean-area"), 3.625e14);
    assert_same_number(stericol_settings_number(settings, "expansion"), 2e-4);
    assert_same_number(stericol_settings_number(settings, "contraction"), 7.5e-4);
    assert_same_number(stericol_settings_number(settings, "density"), 1027);
    assert_nan(stericol_settings_number(settings, "reference-density"));
    assert_nan(stericol_settings_number(settings, "gap-reach"));
    assert_nan(stericol_settings_number(settings, "bottom-reach"));
    assert_int_equal(stericol_settings_choice(settings, "salinity-kind"), 3);
    assert_int_equal(stericol_settings_whole(settings, "threads"), 0);
    assert_int_equal(stericol_settings_size(settings, "memory"), 0);
    assert_null(stericol_settings_text(settings, "output"));
    assert_null(stericol_settings_list(settings, "region", &count));
    assert_int_equal(count, 0);
    assert_int_equal(stericol_settings_origin(settings, "layers", NULL), STERICOL_ORIGIN_DEFAULT);
    assert_int_equal(stericol_settings_origin(settings, "output", NULL), STERICOL_ORIGIN_NONE);
    assert_false(stericol_settings_is_set(settings, "layers"));
    stericol_settings_free(settings);
}

static void positional_arguments_are_taken_where_allowed(void **state)
{
    stericol_settings *settings = accepted("inspect a.nc --quiet b.nc -- --odd.nc -");
    size_t count;
    const char *const *list = stericol_settings_list(settings, "file", &count);

    (void)state;
    assert_int_equal(count, 4);
    assert_string_equal(list[1], "b.nc");
    assert_string_equal(list[2], "--odd.nc");
    assert_string_equal(list[3], "-");
    stericol_settings_free(settings);
    assert_refused("inspect", "inspect: FILE is missing; name the file to look at");
    assert_refused("inspect --file a.nc", "--file: inspect has no such option; see stericol inspect --help");
    assert_refused("change --earlier a.nc b.nc",
                   "b.nc: this argument belongs to no option; see stericol change --help; a "
                   "pattern for many files is quoted, or the option repeated");
}

static void help_and_version_are_asked_for(void **state)
{
    static const struct {
        const char *line;
        stericol_request_kind kind;
        const char *command;
    } rows[] = {{"--help", STERICOL_REQUEST_HELP, NULL},
                {"-h", STERICOL_REQUEST_HELP, NULL},
                {"--version", STERICOL_REQUEST_VERSION, NULL},
                {"change --help", STERICOL_REQUEST_HELP, "change"},
                {"change --wrong 5 --help", STERICOL_REQUEST_HELP, "change"},
                {"--help change", STERICOL_REQUEST_HELP, NULL}};
    stericol_context *context = stericol_context_new();

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        stericol_request request;

        assert_int_equal(parse_line(context, rows[i].line, &request), STERICOL_OK);
        assert_int_equal(request.kind, rows[i].kind);
        assert_null(request.settings);
        if (rows[i].command == NULL)
            assert_null(request.command);
        else
            assert_string_equal(request.command->name, rows[i].command);
    }
    stericol_context_free(context);
    assert_refused("", "no command is given; see stericol --help");
    assert_refused("chnage", "chnage: no such command; did you mean change?");
    assert_refused("report", "report: no such command; see stericol --help");
    assert_refused("chnage --help", "chnage: no such command; did you mean change?");
    assert_refused("--verbose", "--verbose: no such option before a command; see stericol --help");
    assert_refused("--version change", "change: nothing goes with --version; give --version alone");
}

static void wrong_options_are_refused(void **state)
{
    (void)state;
    assert_refused("change --tempreture x",
                   "--tempreture: change has no such option; did you mean --temperature?");
    assert_refused("change --zzzzz", "--zzzzz: change has no such option; see stericol change --help");
    assert_refused("change --zzzzz=5", "--zzzzz: change has no such option; see stericol change --help");
    assert_refused("change -layers 0..700", "-layers: change has no such option; did you mean --layers?");
    assert_refused("change -x", "-x: change has no such option; see stericol change --help");
    assert_refused("change --table csv --table json", "--table: it is given more than once; give it once");
    assert_refused("change --quiet --quiet", "--quiet: it is given more than once; give it once");
    assert_refused("change --table", "--table: its value is missing; give --table text|csv|json");
    assert_refused("change --earlier --later b.nc", "--earlier: its value is missing; give --earlier FILE");
}

static void wrong_values_are_refused(void **state)
{
    (void)state;
    assert_refused("change --earlier=", "--earlier: '' cannot be used; an empty value stands for nothing");
    assert_refused("change --temperature=",
                   "--temperature: '' cannot be used; an empty value stands for nothing");
    assert_refused("change --table html", "--table: 'html' cannot be used; give text, csv or json");
    assert_refused("change --vertical-unit ft", "--vertical-unit: 'ft' cannot be used; give m or dbar");
    assert_refused("change --least-times 1.5",
                   "--least-times: '1.5' cannot be used; give a number from 0 to 1");
    assert_refused("change --least-times nan",
                   "--least-times: 'nan' cannot be used; give a number from 0 to 1");
    assert_refused("change --gap-reach 0",
                   "--gap-reach: '0' cannot be used; give a number above 0, at most 12000 (m)");
    assert_refused("change --reference-density global",
                   "--reference-density: 'global' cannot be used; give local, or a "
                   "number from 900 to 1200 (kg/m3)");
    assert_refused("change --reference-density 1.025",
                   "--reference-density: '1.025' cannot be used; give local, or a "
                   "number from 900 to 1200 (kg/m3)");
    assert_refused("change --threads 0", "--threads: '0' cannot be used; give a whole number from 1 to 1024");
    assert_refused("change --threads 2.0",
                   "--threads: '2.0' cannot be used; give a whole number from 1 to 1024");
    assert_refused("change --memory 5X",
                   "--memory: '5X' cannot be used; a size is a number of bytes, or with K, M, G or "
                   "T behind it: 512M");
    assert_refused("change --replace=maybe", "--replace: 'maybe' cannot be used; give yes or no");
    assert_refused("change --layers 700..0",
                   "--layers: '700..0' cannot be used; a layer goes down: its second depth must "
                   "be greater than its first");
    assert_refused("change --later-step 0",
                   "--later-step: '0' cannot be used; steps are counted from 1, such as 3 or 3..5");
    assert_refused("change --later-time 2005..",
                   "--later-time: '2005..' cannot be used; a window is FROM..TO in ISO 8601, "
                   "such as 2005-01..2009-12");
    assert_refused("change --select member",
                   "--select: 'member' cannot be used; it is NAME=INDEX, the index counted from "
                   "1, such as member=3");
    assert_refused("change --region A=1,2",
                   "--region: 'A=1,2' cannot be used; a box is NAME=WEST,SOUTH,EAST,NORTH in "
                   "degrees, such as Inner_Bight=-20,40,-5,55");
    assert_refused("column --latitude 91",
                   "--latitude: '91' cannot be used; give a number from -90 to 90 (degrees north)");
}

static void contradictions_are_refused(void **state)
{
    static const char base[] = "change --earlier a.nc --later b.nc";
    static const struct {
        const char *more, *message;
    } rows[] = {
        {"--earlier-time 1..2 --earlier-step 3",
         "--earlier-time: it cannot go together with --earlier-step; give only one of them"},
        {"--later-time 1..2 --later-step 3",
         "--later-time: it cannot go together with --later-step; give only one of them"},
        {"--background-salinity s.nc --constant-salinity 35",
         "--background-salinity: it cannot go together with --constant-salinity; give only one of them"},
        {"--salinity s --constant-salinity 35",
         "--salinity: it cannot go together with --constant-salinity; name the "
         "variable, or give one value for all"},
        {"--expansion 1e-4",
         "--expansion: it only has a meaning with --equation linear; add --equation linear, or leave "
         "it out"},
        {"--equation eos80 --density 1030",
         "--density: it only has a meaning with --equation linear; add --equation linear, or leave it out"},
        {"--replace",
         "--replace: it only has a meaning together with --output; name the file to write with --output"},
        {"--quiet --progress always",
         "--quiet: it cannot go together with --progress always; leave one of them out"},
        {"--region A=0,0,1,1 --region B=0,0,1,1 --region A=2,2,3,3",
         "--region: the name 'A' is given twice; give every name once"},
        {"--select x=1 --select x=2", "--select: the name 'x' is given twice; give every name once"}};

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        char line[512];

        snprintf(line, sizeof line, "%s %s", base, rows[i].more);
        assert_refused(line, rows[i].message);
    }
    stericol_settings_free(
        accepted("change --earlier a --later b --replace=no --quiet=no --progress always"));
    stericol_settings_free(
        accepted("change --earlier a --later b --select x=1 --select xx=1 --equation linear --density "
                 "1030"));
    assert_refused("change --later b.nc", "change: --earlier is missing; name the file of the earlier epoch");
    assert_refused("change --earlier b.nc", "change: --later is missing; name the file of the later epoch");
    assert_refused("scenario --warming 1", "scenario: --field is missing; name the file of the field");
    assert_refused(
        "scenario --field a",
        "scenario: --warming or --freshening or --profile is missing; say how the field is changed");
    assert_refused(
        "scenario --field a --profile p --warming 1",
        "--profile: it cannot go together with --warming; put the warming into the table, or leave the table "
        "out");
    assert_refused("scenario --field a --freshening 1 --constant-salinity 35",
                   "--freshening: it cannot go together with --constant-salinity; a field without its own "
                   "salinity has no "
                   "halosteric part");
    assert_refused("column",
                   "column: --earlier or --field is missing; give --earlier and --later, or --field alone");
    assert_refused("column --earlier a",
                   "--earlier: it only has a meaning together with --later; name the table of the "
                   "later epoch");
    assert_refused(
        "column --field a --earlier b --later c",
        "--field: it cannot go together with --earlier; give --earlier and --later, or --field alone");
    assert_refused("column --field a --bottom-reach 5", "--bottom-reach: it only has a meaning together with "
                                                        "--sea-floor; give the depth of the sea floor, or "
                                                        "leave it out");
}

/* ---- settings file ---- */

static void a_settings_file_is_read(void **state)
{
    stericol_settings *settings;
    size_t count, line;
    const char *const *list;

    (void)state;
    write_settings("\xef\xbb\xbf# the run of May\r\n"
                   "earlier = a.nc\r\n"
                   "  earlier=\"b c.nc\" # two\n"
                   "later = file:///x#mode=nczarr\n"
                   "\n"
                   "layers = 0..700 # upper\n"
                   "output = 'it''\n"
                   "replace = no\n");
    assert_refused("change --settings %S", SETTINGS_FILE
                   ": line 7: the quotes of 'output' are wrong; close them, and write \\\\ and \\\" for \\ "
                   "and \" within");
    write_settings("\xef\xbb\xbf# the run of May\r\n"
                   "earlier = a.nc\r\n"
                   "  earlier=\"b c.nc\" # two\n"
                   "later = file:///x#mode=nczarr\n"
                   "\n"
                   "layers = 0..700 # upper\n"
                   "output = 'it \\ \"is\" # so '\n"
                   "log = \"a\\x0A\\\\\\\"b\"\n"
                   "replace = no\n"
                   "quiet = yes");
    settings = accepted("change --settings %S");
    list = stericol_settings_list(settings, "earlier", &count);
    assert_int_equal(count, 2);
    assert_string_equal(list[0], "a.nc");
    assert_string_equal(list[1], "b c.nc");
    assert_string_equal(stericol_settings_text(settings, "later"), "file:///x#mode=nczarr");
    assert_string_equal(stericol_settings_text(settings, "layers"), "0..700");
    assert_string_equal(stericol_settings_text(settings, "output"), "it \\ \"is\" # so ");
    assert_string_equal(stericol_settings_text(settings, "log"), "a\n\\\"b");
    assert_false(stericol_settings_on(settings, "replace"));
    assert_false(stericol_settings_is_set(settings, "replace"));
    assert_true(stericol_settings_on(settings, "quiet"));
    assert_int_equal(stericol_settings_origin(settings, "layers", &line), STERICOL_ORIGIN_SETTINGS);
    assert_int_equal(line, 6);
    stericol_settings_free(settings);
}

static void the_command_line_wins(void **state)
{
    stericol_settings *settings;
    size_t count;
    const char *const *list;

    (void)state;
    write_settings("earlier = a.nc\nearlier = b.nc\nlater = c.nc\ntable = csv\nquiet = yes\n");
    settings = accepted("change --earlier z.nc --settings %S --quiet=no --table json");
    list = stericol_settings_list(settings, "earlier", &count);
    assert_int_equal(count, 1);
    assert_string_equal(list[0], "z.nc");
    assert_string_equal(stericol_settings_text(settings, "table"), "json");
    assert_string_equal(stericol_settings_text(settings, "later"), "c.nc");
    assert_false(stericol_settings_on(settings, "quiet"));
    stericol_settings_free(settings);
}

static void keep_notice(void *user, stericol_notice_level level, const char *text)
{
    stericol_text_format(user, "%d %s|", (int)level, text);
}

static void settings_give_way_to_what_contradicts_them(void **state)
{
    stericol_context *context = stericol_context_new();
    stericol_text seen = {0};
    stericol_request request;

    (void)state;
    stericol_context_on_notice(context, keep_notice, &seen);
    write_settings("earlier = a\nlater = b\nearlier-time = 1..2\nequation = linear\ndensity = 1030\n");
    assert_int_equal(parse_line(context, "change --settings %S --earlier-step 3 --equation teos10", &request),
                     STERICOL_OK);
    assert_false(stericol_settings_is_set(request.settings, "earlier-time"));
    assert_false(stericol_settings_is_set(request.settings, "density"));
    assert_true(stericol_settings_is_set(request.settings, "earlier-step"));
    assert_string_equal(stericol_text_string(&seen),
                        "0 " SETTINGS_FILE
                        ": earlier-time: the setting of line 3 gives way to --earlier-step on the "
                        "command line|0 " SETTINGS_FILE
                        ": density: the setting of line 5 gives way to --equation on the command line|");
    stericol_settings_free(request.settings);
    stericol_text_free(&seen);
    stericol_context_free(context);
    /* Within one file nothing gives way. */
    write_settings("earlier = a\nlater = b\nearlier-time = 1..2\nearlier-step = 1\n");
    assert_refused("change --settings %S",
                   "--earlier-time: it cannot go together with --earlier-step; give only one of them");
    /* Nor does the command line. */
    write_settings("earlier = a\nlater = b\nequation = gibbs\n");
    assert_refused(
        "change --settings %S --density 1030",
        "--density: it only has a meaning with --equation linear; add --equation linear, or leave it out");
}

static void bad_settings_are_refused(void **state)
{
    static const struct {
        const char *text, *message;
    } rows[] = {
        {"tempreture = x\n", "line 1: change has no setting 'tempreture'; did you mean temperature?"},
        {"\n= x\n", "line 2: change has no setting ''; see stericol change --help"},
        {"help = yes\n", "line 1: change has no setting 'help'; see stericol change --help"},
        {"table = csv\n# x\ntable = csv\n", "line 3: 'table' stands on line 1 already; keep one of them"},
        {"table = html\n", "line 1: table: 'html' cannot be used; give text, csv or json"},
        {"table =\n", "line 1: table: '' cannot be used; give text, csv or json"},
        {"replace\n", "line 1: it is not of the form 'name = value'; a switch is written 'name = yes'"},
        {"replace = true\n", "line 1: replace: 'true' cannot be used; give yes or no"},
        {"settings = x\n", "line 1: a settings file cannot name another one; put its lines in here"},
        {"output = \"a\n",
         "line 1: the quotes of 'output' are wrong; close them, and write \\\\ and \\\" for \\ and \" "
         "within"},
        {"output = \"a\" b\n",
         "line 1: the quotes of 'output' are wrong; close them, and write \\\\ and \\\" for \\ and "
         "\" within"},
        {"output = \"a\\n\"\n",
         "line 1: the quotes of 'output' are wrong; close them, and write \\\\ and \\\" for \\ and "
         "\" within"},
        {"output = \"a\\x00\"\n",
         "line 1: the quotes of 'output' are wrong; close them, and write \\\\ and \\\" for \\ "
         "and \" within"}};

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        char message[1024];

        write_settings(rows[i].text);
        snprintf(message, sizeof message, "%s: %s", SETTINGS_FILE, rows[i].message);
        assert_refused("change --earlier a --later b --settings %S", message);
        /* A line that the command line overrides is checked all the same. */
        assert_refused("change --earlier a --later b --table json --output x --settings %S", message);
    }
    assert_refused_as("change --settings " TEST_BUILD_FOLDER "/absent.txt", STERICOL_INPUT,
                      TEST_BUILD_FOLDER "/absent.txt: the settings file cannot be opened: No such file or "
                                        "directory; check its name and permissions");
    assert_refused_as(
        "change --settings " TEST_BUILD_FOLDER, STERICOL_INPUT,
        TEST_BUILD_FOLDER
        ": the settings file cannot be read: Is a directory; give a text of 'name = value' lines");
    assert_refused("change --settings /dev/zero",
                   "/dev/zero: this is no settings file; give a text of 'name = value' "
                   "lines");
}

/* ---- round trip ---- */

/* A value that fits the option and is not its default; `turn` varies texts through what is hard to write
 * down. */
static const char *sample(const stericol_option *option, size_t turn)
{
    static const char *const texts[] = {
        "plain", " blanks ",           "a #b", "#a",     "a#b=c", "quo\"te\\", "'x'", "new\nline", "\xff\x01",
        "\\x41", "gr\xc3\xbc\xc3\x9f", "a\t",  "\"x\" #"};
    size_t length;
    static char last_choice[64];

    switch (option->kind) {
    case STERICOL_OPTION_SWITCH:
        return "yes";
    case STERICOL_OPTION_TEXT:
    case STERICOL_OPTION_PATH:
    case STERICOL_OPTION_PATHS:
        return texts[turn % (sizeof texts / sizeof texts[0])];
    case STERICOL_OPTION_NUMBER:
        snprintf(last_choice, sizeof last_choice, "%.6g", option->high);
        return last_choice;
    case STERICOL_OPTION_WHOLE:
        return "2";
    case STERICOL_OPTION_CHOICE:
        snprintf(last_choice, sizeof last_choice, "%s",
                 stericol_choice_at(option->choices, stericol_choice_count(option->choices) - 1, &length));
        return last_choice;
    case STERICOL_OPTION_SIZE:
        return "3M";
    case STERICOL_OPTION_WINDOW:
        return "2005..2006";
    case STERICOL_OPTION_STEPS:
        return "2..3";
    case STERICOL_OPTION_LAYERS:
        return "0..10,5..bottom";
    case STERICOL_OPTION_ASSIGNMENT:
        return "a b=2";
    case STERICOL_OPTION_BOX:
        return "A #1=0,1,2,3";
    }
    return "";
}

/* Arguments are kept as --name=value texts. */
typedef struct argument_list {
    char *word[MOST_WORDS];
    size_t count;
} argument_list;

static void add_argument(argument_list *list, const char *name, const char *value)
{
    stericol_text text = {0};

    assert_true(list->count < MOST_WORDS);
    stericol_text_format(&text, "--%s=%s", name, value);
    list->word[list->count++] = stericol_text_take(&text);
}

static stericol_settings *parse_arguments(const stericol_command *command, argument_list *list)
{
    stericol_context *context = stericol_context_new();
    stericol_settings *settings;

    if (stericol_settings_parse(context, command, list->count, list->word, &settings) != STERICOL_OK)
        fail_msg("%s: %s", list->word[0], stericol_context_message(context));
    stericol_context_free(context);
    return settings;
}

static void free_arguments(argument_list *list)
{
    for (size_t i = 0; i < list->count; i++)
        free(list->word[i]);
    list->count = 0;
}

static bool excludes(const stericol_command *command, const char *a, const char *b)
{
    for (size_t i = 0; i < command->rule_count; i++) {
        const stericol_rule *rule = &command->rules[i];

        if (rule->kind == STERICOL_RULE_EXCLUDES &&
            ((strcmp(rule->first, a) == 0 && strcmp(rule->second, b) == 0) ||
             (strcmp(rule->first, b) == 0 && strcmp(rule->second, a) == 0)))
            return true;
    }
    return false;
}

/* What must be there, unless `name` is among it or will not have it; then what `name` itself needs. */
static void add_company(argument_list *list, const stericol_command *command, const char *name)
{
    static const char *const usual[] = {"earlier", "later", "field", "warming"};

    for (size_t i = 0; i < sizeof usual / sizeof usual[0]; i++) {
        bool column_field = strcmp(command->name, "column") == 0 && strcmp(usual[i], "field") == 0;

        if (!column_field && strcmp(usual[i], name) != 0 &&
            stericol_command_option(command, usual[i]) != NULL && !excludes(command, name, usual[i]))
            add_argument(list, usual[i], "1");
    }
    for (size_t i = 0; i < command->rule_count; i++) {
        const stericol_rule *rule = &command->rules[i];
        bool mine = rule->kind != STERICOL_RULE_REQUIRED && strcmp(rule->first, name) == 0;

        if (mine && rule->kind == STERICOL_RULE_NEEDS_VALUE)
            add_argument(list, rule->second, rule->value);
        else if (mine && rule->kind == STERICOL_RULE_NEEDS && strcmp(rule->second, "later") != 0 &&
                 strcmp(rule->second, "earlier") != 0)
            add_argument(list, rule->second, "1");
    }
}

static void assert_same_settings(const stericol_settings *a, const stericol_settings *b)
{
    const stericol_command *command = stericol_settings_command(a);

    for (size_t i = 0; i < command->option_count; i++) {
        const char *name = command->options[i]->name;
        size_t count, other_count;
        const char *const *list = stericol_settings_list(a, name, &count);
        const char *const *other = stericol_settings_list(b, name, &other_count);

        if (strcmp(name, "settings") == 0)
            continue;
        if (command->options[i]->kind == STERICOL_OPTION_SWITCH) {
            assert_int_equal(stericol_settings_on(a, name), stericol_settings_on(b, name));
            continue;
        }
        assert_int_equal(count, other_count);
        for (size_t j = 0; j < count; j++)
            assert_string_equal(list[j], other[j]);
    }
}

static void assert_round_trip(const stericol_command *command, argument_list *list)
{
    stericol_settings *settings = parse_arguments(command, list), *again;
    argument_list by_file = {{0}, 0};
    stericol_text text = {0}, text_again = {0};

    stericol_settings_write(settings, &text);
    write_settings(stericol_text_string(&text));
    add_argument(&by_file, "settings", SETTINGS_FILE);
    again = parse_arguments(command, &by_file);
    assert_same_settings(settings, again);
    stericol_settings_write(again, &text_again);
    assert_string_equal(stericol_text_string(&text), stericol_text_string(&text_again));
    free_arguments(&by_file);
    stericol_text_free(&text);
    stericol_text_free(&text_again);
    stericol_settings_free(settings);
    stericol_settings_free(again);
}

static void every_option_survives_writing_and_reading(void **state)
{
    size_t count;
    const stericol_command *commands = stericol_commands(&count);

    (void)state;
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < commands[i].option_count; j++)
            for (size_t turn = 0; turn < 13; turn++) {
                const stericol_option *option = commands[i].options[j];
                argument_list list = {{0}, 0};

                if (strcmp(option->name, "settings") == 0)
                    break;
                add_argument(&list, option->name, sample(option, turn));
                if (option->repeatable && option->kind == STERICOL_OPTION_PATHS)
                    add_argument(&list, option->name, "second");
                add_company(&list, &commands[i], option->name);
                if (commands[i].positional != NULL)
                    list.word[list.count++] = stericol_copy_string("a file");
                assert_round_trip(&commands[i], &list);
                free_arguments(&list);
            }
}

static void settings_are_written_whole(void **state)
{
    stericol_settings *settings = accepted("column --field t.txt --quiet");
    stericol_text text = {0};

    (void)state;
    stericol_settings_write(settings, &text);
    /* Regression text: the order of the table; no default of the linear equation, which plays no part. */
    assert_string_equal(stericol_text_string(&text), "# stericol " STERICOL_VERSION " column\n"
                                                     "field = t.txt\n"
                                                     "latitude = 45\n"
                                                     "temperature-scale = its90\n"
                                                     "layers = 0..bottom\n"
                                                     "vertical = auto\n"
                                                     "surface-reach = 20\n"
                                                     "equation = teos10\n"
                                                     "reference-density = local\n"
                                                     "attribution = symmetric\n"
                                                     "table = text\n"
                                                     "quiet = yes\n");
    stericol_text_free(&text);
    stericol_settings_free(settings);
}

int main(void)
{
    const struct CMUnitTest tests[] = {cmocka_unit_test(a_command_line_is_read),
                                       cmocka_unit_test(defaults_are_given),
                                       cmocka_unit_test(positional_arguments_are_taken_where_allowed),
                                       cmocka_unit_test(help_and_version_are_asked_for),
                                       cmocka_unit_test(wrong_options_are_refused),
                                       cmocka_unit_test(wrong_values_are_refused),
                                       cmocka_unit_test(contradictions_are_refused),
                                       cmocka_unit_test(a_settings_file_is_read),
                                       cmocka_unit_test(the_command_line_wins),
                                       cmocka_unit_test(settings_give_way_to_what_contradicts_them),
                                       cmocka_unit_test(bad_settings_are_refused),
                                       cmocka_unit_test(every_option_survives_writing_and_reading),
                                       cmocka_unit_test(settings_are_written_whole)};
    int failures = cmocka_run_group_tests(tests, NULL, NULL);

    unlink(SETTINGS_FILE);
    return failures;
}
