/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "input/table.h"

#include "base/checked.h"
#include "base/text.h"

#include <errno.h>
#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Behind an underscore stands a unit only if it is short. */
enum { MOST_UNIT = 64, MOST_FOLDED = 128, READING_STEP = 65536 };

typedef struct table_column {
    char *name; /* as written, without its unit */
    char *unit; /* from brackets; NULL for none */
} table_column;

typedef struct table_row {
    size_t start; /* of its bytes; they end with a zero */
    size_t line;  /* from 1 */
} table_row;

struct stericol_text_table {
    char *path;
    char *bytes; /* line ends are zeros */
    size_t length;
    char mark; /* '\t', ';', ',' or ' ' for blanks */
    table_column *columns;
    size_t column_count;
    table_row *rows;
    size_t row_count, row_room;
};

static stericol_status refuse_line(stericol_context *context, const stericol_text_table *table, size_t line,
                                   const char *remedy, const char *format, ...) STERICOL_PRINTF(5, 6);

static stericol_status refuse_line(stericol_context *context, const stericol_text_table *table, size_t line,
                                   const char *remedy, const char *format, ...)
{
    stericol_text what = {0};
    stericol_status status;
    char place[48];
    va_list arguments;

    va_start(arguments, format);
    stericol_text_format_list(&what, format, arguments);
    va_end(arguments);
    snprintf(place, sizeof place, "line %zu", line);
    status =
        stericol_fail(context, STERICOL_INPUT, table->path, place, remedy, "%s", stericol_text_string(&what));
    stericol_text_free(&what);
    return status;
}

static bool is_blank(char c)
{
    return c == ' ' || c == '\t';
}

/* Cuts blanks from both ends of the `*length` bytes at `text`. */
static const char *trim(const char *text, size_t *length)
{
    while (*length > 0 && is_blank(text[0])) {
        text++;
        --*length;
    }
    while (*length > 0 && is_blank(text[*length - 1]))
        --*length;
    return text;
}

/* ---- bytes and lines ---- */

static stericol_status check_bytes(stericol_context *context, const stericol_text_table *table)
{
    static const char remedy[] = "save the table as plain text (UTF-8 or ASCII), with the names of its "
                                 "columns in the first line";

    if (table->length >= 4 && (memcmp(table->bytes, "\x89HDF", 4) == 0 ||
                               (memcmp(table->bytes, "CDF", 3) == 0 && table->bytes[3] < ' ')))
        return stericol_fail(context, STERICOL_INPUT, table->path, NULL,
                             "export the column as a text table, or use the commands that read NetCDF",
                             "is a NetCDF file, not a text table");
    for (size_t i = 0; i < table->length; i++) {
        const unsigned char c = (unsigned char)table->bytes[i];

        if (c == 0 || (c < 0x20 && c != '\t' && c != '\n' && c != '\r') || c == 0x7F)
            return stericol_fail(context, STERICOL_INPUT, table->path, NULL, remedy,
                                 "is no text table: byte %zu is 0x%02X", i + 1, c);
    }
    return STERICOL_OK;
}

/* The line that begins at *at: ends it with a zero and moves *at behind it.  False at the end. */
static bool next_line(stericol_text_table *table, size_t *at, size_t *start)
{
    size_t i = *at;

    if (i >= table->length)
        return false;
    *start = i;
    while (i < table->length && table->bytes[i] != '\n' && table->bytes[i] != '\r')
        i++;
    *at = i + 1;
    if (i + 1 < table->length && table->bytes[i] == '\r' && table->bytes[i + 1] == '\n')
        *at = i + 2;
    table->bytes[i] = '\0'; /* one byte more than `length` was allocated */
    return true;
}

static bool says_nothing(const char *line)
{
    while (is_blank(*line))
        line++;
    return *line == '\0' || *line == '#';
}

/* ---- fields ---- */

/* What a field is; a quoted one comes without its quotes but with its doubled ones. */
typedef struct field {
    const char *start;
    size_t length;
    bool quoted;
} field;

/*
 * Takes the next field of a line; *rest moves behind it and its mark.  `more` is set where a mark followed,
 * so that another field must come.  False where a quote is not closed, or is followed by something else.
 */
static bool next_field(char mark, const char **rest, field *taken, bool *more)
{
    const char *c = *rest;

    *taken = (field){0};
    while (*c == ' ' || (mark != '\t' && *c == '\t'))
        c++;
    taken->start = c;
    if (*c == '"' && mark != ' ') {
        taken->quoted = true;
        taken->start = ++c;
        while (*c != '\0' && (*c != '"' || c[1] == '"'))
            c += *c == '"' ? 2 : 1;
        if (*c == '\0')
            return false;
        taken->length = (size_t)(c - taken->start);
        for (c++; *c == ' ' || (mark != '\t' && *c == '\t');)
            c++;
        if (*c != '\0' && *c != mark)
            return false;
    } else {
        while (*c != '\0' && (mark == ' ' ? !is_blank(*c) : *c != mark))
            c++;
        taken->length = (size_t)(c - taken->start);
        taken->start = trim(taken->start, &taken->length);
    }
    if (mark == ' ')
        while (is_blank(*c))
            c++;
    *more = *c != '\0';
    *rest = *more && mark != ' ' ? c + 1 : c;
    return true;
}

/* How many fields a line has; STERICOL_TEXT_TABLE_NONE where a quote is wrong. */
static size_t count_fields(char mark, const char *line)
{
    size_t count = 0;
    bool more = true;
    field taken;

    while (more) {
        if (!next_field(mark, &line, &taken, &more))
            return STERICOL_TEXT_TABLE_NONE;
        count++;
    }
    return count;
}

static field field_at(const stericol_text_table *table, size_t row, size_t column)
{
    const char *rest = table->bytes + table->rows[row].start;
    field taken = {0};
    bool more = true;

    for (size_t i = 0; i <= column && more; i++)
        next_field(table->mark, &rest, &taken, &more);
    return taken;
}

/* ---- the header ---- */

/* The first of tab, semicolon and comma that stands outside brackets and quotes; blanks where none does. */
static char find_mark(const char *header)
{
    static const char marks[] = "\t;,";
    bool found[sizeof marks - 1] = {false};
    bool quoted = false;
    int depth = 0;

    for (const char *c = header; *c != '\0'; c++) {
        const char *at = strchr(marks, *c);

        if (*c == '"')
            quoted = !quoted;
        else if (!quoted && (*c == '[' || *c == '('))
            depth++;
        else if (!quoted && (*c == ']' || *c == ')'))
            depth -= depth > 0 ? 1 : 0;
        else if (!quoted && depth == 0 && at != NULL)
            found[at - marks] = true;
    }
    for (size_t i = 0; i < sizeof marks - 1; i++)
        if (found[i])
            return marks[i];
    return ' ';
}

/* Where the bracket at `open` closes; the end of the text where it does not. */
static const char *closing(const char *open, const char *end)
{
    int depth = 0;

    for (const char *c = open; c < end; c++) {
        depth += *c == '[' || *c == '(' ? 1 : 0;
        depth -= *c == ']' || *c == ')' ? 1 : 0;
        if (depth == 0)
            return c;
    }
    return end;
}

/* Takes one name off the header, with its unit in brackets; the header's own rules, since a unit may hold
   marks and blanks. */
static field next_name(char mark, const char **rest, bool *more)
{
    const char *c = *rest;
    field taken;
    bool unquoted = true;

    while (*c == ' ' || (mark != '\t' && *c == '\t'))
        c++;
    if (*c == '"' && mark != ' ' && next_field(mark, rest, &taken, more))
        return taken;
    taken = (field){.start = c};
    for (const char *end = c + strlen(c); c < end && unquoted; c++) {
        if (*c == '[' || *c == '(') {
            c = closing(c, end);
            if (c == end)
                break;
        } else if (mark == ' ' ? is_blank(*c) : *c == mark) {
            const char *next = c;

            while (mark == ' ' && is_blank(*next))
                next++;
            if (mark != ' ' || (*next != '[' && *next != '('))
                break;
            c = next - 1; /* the brackets belong to this name */
        }
    }
    taken.length = (size_t)(c - taken.start);
    taken.start = trim(taken.start, &taken.length);
    while (mark == ' ' && is_blank(*c))
        c++;
    *more = *c != '\0';
    *rest = *more && mark != ' ' ? c + 1 : c;
    return taken;
}

/* Parts "depth [m]" into name and unit.  False when memory is out. */
static bool take_name(table_column *column, field given)
{
    const char *end = given.start + given.length, *open = given.start;
    size_t name_length, unit_length = 0;

    while (open < end && *open != '[' && *open != '(')
        open++;
    name_length = (size_t)(open - given.start);
    if (open < end && closing(open, end) == end - 1) {
        const char *unit = open + 1;

        unit_length = (size_t)(end - 1 - unit);
        unit = trim(unit, &unit_length);
        if (unit_length > 0 && (column->unit = stericol_copy_bytes(unit, unit_length)) == NULL)
            return false;
    } else {
        name_length = given.length;
    }
    given.start = trim(given.start, &name_length);
    column->name = stericol_copy_bytes(given.start, name_length);
    return column->name != NULL;
}

/* Lower case, blanks and hyphens as underscores; cut off at the end of the room. */
static void fold(const char *name, char folded[MOST_FOLDED])
{
    size_t i = 0;

    for (; name[i] != '\0' && i + 1 < MOST_FOLDED; i++) {
        folded[i] = name[i] >= 'A' && name[i] <= 'Z' ? (char)(name[i] - 'A' + 'a') : name[i];
        if (is_blank(name[i]) || name[i] == '-')
            folded[i] = '_';
    }
    folded[i] = '\0';
}

static stericol_status check_names(stericol_context *context, const stericol_text_table *table, size_t line)
{
    static const char remedy[] = "begin the table with a line of names such as 'depth temperature salinity'";
    char folded[MOST_FOLDED], other[MOST_FOLDED];
    double number;

    for (size_t i = 0; i < table->column_count; i++) {
        const char *name = table->columns[i].name;

        if (name[0] == '\0')
            return refuse_line(context, table, line,
                               "give every column a name, and end no line with a mark between columns",
                               "the name of column %zu is empty", i + 1);
        if (stericol_parse_number(name, &number))
            return refuse_line(context, table, line, remedy,
                               "is the header, but has the number '%s' in place of a name", name);
        fold(name, folded);
        for (size_t j = 0; j < i; j++) {
            fold(table->columns[j].name, other);
            if (strcmp(folded, other) == 0)
                return refuse_line(context, table, line, "rename one of them, or take it out",
                                   "the name '%s' is there twice", name);
        }
    }
    return STERICOL_OK;
}

static stericol_status read_header(stericol_context *context, stericol_text_table *table, const char *header,
                                   size_t line)
{
    const char *rest = header;
    bool more = true;

    table->mark = find_mark(header);
    if (table->mark == ' ')
        while (is_blank(*rest))
            rest++;
    table->columns = stericol_new_array(STERICOL_TEXT_TABLE_MOST_COLUMNS, sizeof *table->columns);
    if (table->columns == NULL)
        return stericol_fail_memory(context, 0, "a text table");
    while (more) {
        if (table->column_count == STERICOL_TEXT_TABLE_MOST_COLUMNS)
            return refuse_line(context, table, line, "keep the columns that are needed",
                               "has more than %d columns", STERICOL_TEXT_TABLE_MOST_COLUMNS);
        table->column_count++;
        if (!take_name(&table->columns[table->column_count - 1], next_name(table->mark, &rest, &more)))
            return stericol_fail_memory(context, 0, "a text table");
    }
    return check_names(context, table, line);
}

/* ---- rows ---- */

static const char *mark_words(char mark)
{
    return mark == '\t'  ? "parted by tabs"
           : mark == ';' ? "parted by semicolons"
           : mark == ',' ? "parted by commas"
                         : "parted by blanks";
}

static stericol_status add_row(stericol_context *context, stericol_text_table *table, size_t start,
                               size_t line)
{
    const size_t fields = count_fields(table->mark, table->bytes + start);

    if (fields == STERICOL_TEXT_TABLE_NONE)
        return refuse_line(context, table, line, "close it on its line, before the mark between fields",
                           "has a double quote that is not closed");
    if (fields != table->column_count)
        return refuse_line(context, table, line,
                           table->mark == ','
                               ? "give every row a field for every column; where numbers have decimal "
                                 "commas, part the columns by semicolons"
                               : "give every row a field for every column, NA where there is no value",
                           "has %zu fields (%s), but the header names %zu columns", fields,
                           mark_words(table->mark), table->column_count);
    if (table->row_count == STERICOL_TEXT_TABLE_MOST_ROWS)
        return refuse_line(context, table, line, "thin it out, or cut it", "the table has more than %d rows",
                           STERICOL_TEXT_TABLE_MOST_ROWS);
    if (table->row_count == table->row_room) {
        const size_t room = table->row_room == 0 ? 256 : 2 * table->row_room;

        if (!stericol_grow_array((void **)&table->rows, room, sizeof *table->rows))
            return stericol_fail_memory(context, 0, "a text table");
        table->row_room = room;
    }
    table->rows[table->row_count++] = (table_row){start, line};
    return STERICOL_OK;
}

static stericol_status read_lines(stericol_context *context, stericol_text_table *table)
{
    size_t at = table->length >= 3 && memcmp(table->bytes, "\xEF\xBB\xBF", 3) == 0 ? 3 : 0;
    size_t start, line = 0;
    bool headed = false;

    while (next_line(table, &at, &start)) {
        stericol_status status;

        line++;
        if (says_nothing(table->bytes + start))
            continue;
        status = headed ? add_row(context, table, start, line)
                        : read_header(context, table, table->bytes + start, line);
        if (status != STERICOL_OK)
            return status;
        headed = true;
    }
    if (!headed)
        return stericol_fail(context, STERICOL_INPUT, table->path, NULL,
                             "begin the table with a line of names such as 'depth temperature salinity'",
                             "is empty");
    if (table->row_count == 0)
        return stericol_fail(context, STERICOL_INPUT, table->path, NULL,
                             "add a line for every level below the header", "has a header, but no rows");
    return STERICOL_OK;
}

/* ---- reading ---- */

/* Takes over `bytes`, of which one more than `length` is allocated. */
static stericol_status make_table(stericol_context *context, const char *path, char *bytes, size_t length,
                                  stericol_text_table **table)
{
    stericol_text_table *made = calloc(1, sizeof *made);
    stericol_status status;

    if (made == NULL || (made->path = stericol_copy_string(path)) == NULL) {
        free(made);
        free(bytes);
        return stericol_fail_memory(context, 0, "a text table");
    }
    made->bytes = bytes;
    made->length = length;
    status = check_bytes(context, made);
    if (status == STERICOL_OK)
        status = read_lines(context, made);
    if (status == STERICOL_OK) {
        *table = made;
        return STERICOL_OK;
    }
    stericol_text_table_free(made);
    return status;
}

static stericol_status refuse_size(stericol_context *context, const char *path)
{
    return stericol_fail(context, STERICOL_INPUT, path, NULL, "thin it out, or cut it",
                         "is larger than a text table may be (%d MiB)",
                         STERICOL_TEXT_TABLE_MOST_BYTES / (1024 * 1024));
}

/* Not the file's size but what comes counts: it may be a pipe. */
static stericol_status read_bytes(stericol_context *context, const char *path, FILE *file, char **bytes,
                                  size_t *length)
{
    size_t room = 0, filled = 0, got = 1;

    while (got > 0) {
        if (filled > STERICOL_TEXT_TABLE_MOST_BYTES)
            return refuse_size(context, path);
        if (room < filled + READING_STEP) {
            room = 2 * room + READING_STEP;
            if (!stericol_grow_array((void **)bytes, room + 1, 1))
                return stericol_fail_memory(context, room, "a text table");
        }
        got = fread(*bytes + filled, 1, room - filled, file);
        filled += got;
    }
    if (ferror(file))
        return stericol_fail(context, STERICOL_INPUT, path, NULL, NULL, "cannot be read (%s)",
                             strerror(errno));
    *length = filled;
    return STERICOL_OK;
}

stericol_status stericol_text_table_read(stericol_context *context, const char *path,
                                         stericol_text_table **table)
{
    FILE *file = fopen(path, "rb");
    char *bytes = NULL;
    size_t length = 0;
    stericol_status status;

    *table = NULL;
    if (file == NULL)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "check its name and its rights",
                             "cannot be opened (%s)", strerror(errno));
    status = read_bytes(context, path, file, &bytes, &length);
    fclose(file);
    if (status != STERICOL_OK) {
        free(bytes);
        return status;
    }
    return make_table(context, path, bytes, length, table);
}

stericol_status stericol_text_table_parse(stericol_context *context, const char *name, const char *bytes,
                                          size_t length, stericol_text_table **table)
{
    char *copy;

    *table = NULL;
    if (length > STERICOL_TEXT_TABLE_MOST_BYTES)
        return refuse_size(context, name);
    copy = malloc(length + 1);
    if (copy == NULL)
        return stericol_fail_memory(context, length, "a text table");
    if (length > 0)
        memcpy(copy, bytes, length);
    return make_table(context, name, copy, length, table);
}

void stericol_text_table_free(stericol_text_table *table)
{
    if (table == NULL)
        return;
    for (size_t i = 0; table->columns != NULL && i < table->column_count; i++) {
        free(table->columns[i].name);
        free(table->columns[i].unit);
    }
    free(table->columns);
    free(table->rows);
    free(table->bytes);
    free(table->path);
    free(table);
}

/* ---- what it holds ---- */

const char *stericol_text_table_path(const stericol_text_table *table)
{
    return table->path;
}

size_t stericol_text_table_rows(const stericol_text_table *table)
{
    return table->row_count;
}

size_t stericol_text_table_columns(const stericol_text_table *table)
{
    return table->column_count;
}

size_t stericol_text_table_line(const stericol_text_table *table, size_t row)
{
    return table->rows[row].line;
}

const char *stericol_text_table_name(const stericol_text_table *table, size_t column)
{
    return table->columns[column].name;
}

/* "depth_m": what follows the last underscore, where that is a unit; else NULL. */
static const char *suffix_unit(const stericol_cf_units *units, const char *name)
{
    const char *suffix = strrchr(name, '_');

    if (suffix == NULL || suffix == name || strlen(suffix) > MOST_UNIT)
        return NULL;
    return stericol_cf_units_quantity(units, suffix + 1) != STERICOL_CF_QUANTITY_UNKNOWN ? suffix + 1 : NULL;
}

const char *stericol_text_table_unit(const stericol_text_table *table, const stericol_cf_units *units,
                                     size_t column)
{
    const table_column *given = &table->columns[column];

    return given->unit != NULL ? given->unit : suffix_unit(units, given->name);
}

static bool is_among(const char *folded, const char *const *names)
{
    for (; *names != NULL; names++)
        if (strcmp(folded, *names) == 0)
            return true;
    return false;
}

bool stericol_text_table_is(const stericol_text_table *table, const stericol_cf_units *units, size_t column,
                            const char *const *names)
{
    const table_column *given = &table->columns[column];
    const char *suffix;
    char folded[MOST_FOLDED];

    fold(given->name, folded);
    if (is_among(folded, names))
        return true;
    suffix = given->unit == NULL ? suffix_unit(units, given->name) : NULL;
    if (suffix == NULL || strlen(given->name) + 1 > MOST_FOLDED)
        return false;
    folded[suffix - given->name - 1] = '\0';
    return is_among(folded, names);
}

size_t stericol_text_table_find(const stericol_text_table *table, const stericol_cf_units *units, size_t from,
                                const char *const *names)
{
    for (size_t i = from; i < table->column_count; i++)
        if (stericol_text_table_is(table, units, i, names))
            return i;
    return STERICOL_TEXT_TABLE_NONE;
}

/* ---- numbers ---- */

stericol_status stericol_text_table_refuse(stericol_context *context, const stericol_text_table *table,
                                           size_t row, size_t column, const char *remedy, const char *format,
                                           ...)
{
    stericol_text what = {0}, place = {0};
    stericol_status status;
    va_list arguments;

    va_start(arguments, format);
    stericol_text_format_list(&what, format, arguments);
    va_end(arguments);
    stericol_text_format(&place, "line %zu, column '%s'", table->rows[row].line, table->columns[column].name);
    status = stericol_fail(context, STERICOL_INPUT, table->path, stericol_text_string(&place), remedy, "%s",
                           stericol_text_string(&what));
    stericol_text_free(&place);
    stericol_text_free(&what);
    return status;
}

static bool is_missing(const char *word)
{
    return word[0] == '\0' || strcmp(word, "-") == 0 || stericol_same_ignoring_case(word, "na") ||
           stericol_same_ignoring_case(word, "nan");
}

/* A number longer than this is none. */
enum { MOST_NUMBER = 64 };

/* Digits around one comma and no point: a decimal comma.  Turns it into a point. */
static bool has_decimal_comma(char word[MOST_NUMBER])
{
    char *comma = strchr(word, ',');

    if (comma == NULL || strchr(comma + 1, ',') != NULL || strchr(word, '.') != NULL)
        return false;
    *comma = '.';
    return true;
}

/* How the decimal marks of a column were written so far. */
typedef struct decimals {
    bool points, commas;
} decimals;

static stericol_status read_number(stericol_context *context, const stericol_text_table *table, size_t row,
                                   size_t column, decimals *seen, double *value)
{
    const field given = field_at(table, row, column);
    const int shown = given.length < MOST_NUMBER ? (int)given.length : MOST_NUMBER - 1;
    char word[MOST_NUMBER], written[MOST_NUMBER];
    bool comma = false;

    snprintf(word, sizeof word, "%.*s", shown, given.start);
    memcpy(written, word, sizeof word);
    *value = (double)NAN;
    if (is_missing(word))
        return STERICOL_OK;
    if (strchr(word, '.') != NULL)
        seen->points = true;
    comma = has_decimal_comma(word);
    if (given.length >= MOST_NUMBER || !stericol_parse_number(word, value))
        return stericol_text_table_refuse(context, table, row, column,
                                          "write a plain number, or NA where there is no value",
                                          "'%s' is no number", written);
    if (comma && table->mark != ';')
        return stericol_text_table_refuse(
            context, table, row, column,
            "write decimal points, or part the columns by semicolons: then decimal commas are read",
            "'%s' is written with a comma", written);
    seen->commas = seen->commas || comma;
    if (seen->points && seen->commas)
        return stericol_text_table_refuse(context, table, row, column,
                                          "write all numbers of a column with the same decimal mark",
                                          "'%s': the column has decimal points and commas", written);
    return STERICOL_OK;
}

stericol_status stericol_text_table_numbers(stericol_context *context, const stericol_text_table *table,
                                            const stericol_cf_units *units, size_t column, const char *target,
                                            bool difference, double *values)
{
    const char *unit = stericol_text_table_unit(table, units, column);
    double scale = 1.0, offset = 0.0;
    decimals seen = {false, false};

    if (unit != NULL && !stericol_cf_units_convert(units, unit, target, &scale, &offset)) {
        stericol_text place = {0};
        stericol_status status;

        stericol_text_format(&place, "column '%s'", table->columns[column].name);
        status = stericol_fail(context, STERICOL_INPUT, table->path, stericol_text_string(&place),
                               "correct the unit in the header, or leave it out",
                               "the unit '%s' does not convert to %s", unit, target);
        stericol_text_free(&place);
        return status;
    }
    for (size_t row = 0; row < table->row_count; row++) {
        stericol_status status = read_number(context, table, row, column, &seen, &values[row]);

        if (status != STERICOL_OK)
            return status;
        values[row] = difference ? scale * values[row] : scale * values[row] + offset;
    }
    return STERICOL_OK;
}
