/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The option tables of the commands.  Parsing, the settings file, help, manual page and completion all read
 * these tables and nothing else: a new option is a row, a new command a table.
 */
#ifndef STERICOL_JOB_OPTIONS_H
#define STERICOL_JOB_OPTIONS_H

#include <stdbool.h>
#include <stddef.h>

/* What the value of an option is; the parser refuses what does not fit. */
typedef enum stericol_option_kind {
    STERICOL_OPTION_SWITCH,     /* no value on the command line; yes or no in a settings file */
    STERICOL_OPTION_TEXT,       /* any text but an empty one */
    STERICOL_OPTION_PATH,       /* one path, taken as it is */
    STERICOL_OPTION_PATHS,      /* a path, a glob or @list; see stericol_expand_paths() */
    STERICOL_OPTION_NUMBER,     /* low..high; or one of `choices` */
    STERICOL_OPTION_WHOLE,      /* low..high */
    STERICOL_OPTION_CHOICE,     /* one of `choices` */
    STERICOL_OPTION_SIZE,       /* 512M; see stericol_parse_size() */
    STERICOL_OPTION_WINDOW,     /* FROM..TO, both ends there; what the ends mean is read elsewhere */
    STERICOL_OPTION_STEPS,      /* A or A..B; see stericol_parse_steps() */
    STERICOL_OPTION_LAYERS,     /* see stericol_parse_layers() */
    STERICOL_OPTION_ASSIGNMENT, /* NAME=INDEX; see stericol_parse_assignment() */
    STERICOL_OPTION_BOX         /* NAME=W,S,E,N; see stericol_parse_box() */
} stericol_option_kind;

/* One option.  Rows are shared between commands where they mean the same. */
typedef struct stericol_option {
    const char *name;    /* without the dashes; for a positional argument the name in a settings file */
    const char *metavar; /* NULL for a switch; for a choice the choices */
    stericol_option_kind kind;
    bool repeatable;
    bool above_low;            /* NUMBER: low itself is not allowed */
    double low, high;          /* NUMBER, WHOLE; low == high: no limits */
    const char *unit;          /* of a number, NULL for none */
    const char *choices;       /* "a|b|c"; CHOICE, and the words that a NUMBER may be instead */
    const char *initial;       /* the value where none is given; NULL: none */
    const char *initial_words; /* for the help, where the default is no fixed value */
    const char *group;         /* heading in the help; the rows of a group stand together */
    const char *help;          /* one sentence, without its full stop */
} stericol_option;

/* What must hold between the options of a command.  A switch that is "no" counts as not given. */
typedef enum stericol_rule_kind {
    STERICOL_RULE_REQUIRED,    /* one of first, "a|b|c", must be given */
    STERICOL_RULE_EXCLUDES,    /* first and second are not given together */
    STERICOL_RULE_NEEDS,       /* first is only given together with second */
    STERICOL_RULE_NEEDS_VALUE, /* first is only given where second has the value `value` */
    STERICOL_RULE_NOT_VALUE    /* first is not given where second has the value `value` */
} stericol_rule_kind;

typedef struct stericol_rule {
    stericol_rule_kind kind;
    const char *first, *second, *value;
    const char *remedy; /* what to do, without a full stop */
} stericol_rule;

typedef struct stericol_example {
    const char *purpose; /* without a full stop */
    const char *line;    /* as typed */
} stericol_example;

typedef struct stericol_command {
    const char *name;
    const char *summary;     /* one line, without a full stop */
    const char *synopsis;    /* what follows the name in its usage line */
    const char *description; /* paragraphs, parted by an empty line */
    const stericol_option *const *options;
    size_t option_count;
    const stericol_option *positional; /* NULL: positional arguments are refused */
    const stericol_rule *rules;
    size_t rule_count;
    const stericol_example *examples;
    size_t example_count;
} stericol_command;

/* All commands that work, in the order of the help. */
const stericol_command *stericol_commands(size_t *count);
/* NULL where there is none of that name. */
const stericol_command *stericol_command_named(const char *name);
/* The option of that name, the positional one included; NULL where there is none. */
const stericol_option *stericol_command_option(const stericol_command *command, const char *name);

/* The spelling nearest to a mistyped one; NULL where none is near. */
const char *stericol_nearest_command(const char *name);
/* The positional argument's name is only among the candidates where `with_positional` is true. */
const char *stericol_nearest_option(const stericol_command *command, const char *name, bool with_positional);

/* Optimal string alignment distance: insertions, deletions, substitutions, swaps of neighbours. Texts longer
   than 63 bytes are far from everything: the largest size_t. */
size_t stericol_spelling_distance(const char *a, const char *b);

/* The number of choices in "a|b|c", and one of them: its start, its length in *length; index < count. */
size_t stericol_choice_count(const char *choices);
const char *stericol_choice_at(const char *choices, size_t index, size_t *length);
/* The index of `value` among the choices; the count of choices where it is none. */
size_t stericol_choice_index(const char *choices, const char *value);

#endif
