/* SPDX-License-Identifier: GPL-3.0-or-later */
/* An inspection for people: plain ASCII, within 100 columns. */
#include "commands/inspect_inside.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { WIDTH = 100, LABEL = 14 };

/* ---- lines ---- */

/* Text that may come from a file: what is not printable ASCII is written as \xNN. */
static void add_plain(stericol_text *text, const char *string)
{
    stericol_text printable = {0};

    stericol_text_add_printable(&printable, string);
    for (const char *c = stericol_text_string(&printable); *c != '\0'; c++)
        if ((unsigned char)*c < 0x80)
            stericol_text_add_bytes(text, c, 1);
        else
            stericol_text_format(text, "\\x%02X", (unsigned)(unsigned char)*c);
    text->failed = text->failed || printable.failed;
    stericol_text_free(&printable);
}

/* `start` and then `string`, broken at blanks; the lines that follow are indented to the end of `start`. */
static void add_wrapped(stericol_text *text, const char *start, const char *string)
{
    stericol_text plain = {0};
    size_t indent = strlen(start), at = indent;
    const char *word;

    add_plain(&plain, string);
    word = stericol_text_string(&plain);
    stericol_text_add(text, start);
    while (*word != '\0') {
        size_t length = strcspn(word, " ");

        if (at > indent && at + 1 + length > WIDTH) {
            stericol_text_format(text, "\n%*s", (int)indent, "");
            at = indent;
        } else if (at > indent) {
            stericol_text_add(text, " ");
            at++;
        }
        stericol_text_add_bytes(text, word, length);
        at += length;
        word += length;
        word += strspn(word, " ");
    }
    stericol_text_add(text, "\n");
    text->failed = text->failed || plain.failed;
    stericol_text_free(&plain);
}

/* "  label         text" */
static void add_field(stericol_text *text, const char *label, const stericol_text *value)
{
    char start[LABEL + 3];

    snprintf(start, sizeof start, "  %-*s", LABEL, label);
    add_wrapped(text, start, stericol_text_string(value));
    text->failed = text->failed || value->failed;
}

static void add_heading(stericol_text *text, const char *heading)
{
    stericol_text_format(text, "\n%s\n", heading);
}

static void add_list(stericol_text *text, const char *heading, const stericol_inspect_lines *lines)
{
    if (lines->count == 0)
        return;
    add_heading(text, heading);
    for (size_t i = 0; i < lines->count; i++)
        add_wrapped(text, strcmp(lines->items[i].word, "warning") == 0 ? "  ! " : "  - ",
                    lines->items[i].text);
}

/* ---- the file ---- */

static void describe_variable(const stericol_inspection *inspection, const stericol_cf_variable *variable,
                              stericol_text *line)
{
    const char *unit = stericol_cf_text_of(variable, "units");
    const char *standard_name = stericol_cf_text_of(variable, "standard_name");

    add_plain(line, variable->name);
    stericol_text_add(line, "(");
    for (size_t i = 0; i < variable->rank && i < STERICOL_CF_MOST_RANK; i++) {
        stericol_text_add(line, i > 0 ? ", " : "");
        add_plain(line, stericol_cf_dimension_at(inspection->file, variable->dimension[i])->name);
    }
    stericol_text_format(line, ") %s", stericol_inspect_type_word(variable->type));
    if (unit != NULL) {
        stericol_text_add(line, " [");
        add_plain(line, unit);
        stericol_text_add(line, "]");
    }
    if (standard_name != NULL) {
        stericol_text_add(line, " ");
        add_plain(line, standard_name);
    }
    if (stericol_inspect_is_packed(variable))
        stericol_text_add(line, ", packed");
    for (size_t i = 0; variable->chunked && i < variable->rank && i < STERICOL_CF_MOST_RANK; i++)
        stericol_text_format(line, "%s%zu", i > 0 ? "x" : ", chunks ", variable->chunk[i]);
    if (variable->compressed)
        stericol_text_add(line, ", compressed");
}

static void add_variables(const stericol_inspection *inspection, stericol_text *text)
{
    stericol_text_add(text, "  variables: T temperature and S salinity as chosen, c coordinates\n");
    for (size_t i = 0; i < stericol_cf_variable_count(inspection->file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(inspection->file, i);
        const char *role = stericol_inspect_role(inspection, variable);
        stericol_text line = {0};
        const char *mark = role == NULL                       ? " "
                           : strcmp(role, "temperature") == 0 ? "T"
                           : strcmp(role, "salinity") == 0    ? "S"
                                                              : "c";

        stericol_text_format(&line, "    %s ", mark);
        describe_variable(inspection, variable, &line);
        /* One line each, whatever a file calls its variables. */
        if (line.length > WIDTH && !line.failed) {
            stericol_text_add_bytes(text, stericol_text_string(&line), WIDTH - 3);
            stericol_text_add(text, "...");
        } else {
            stericol_text_add(text, stericol_text_string(&line));
        }
        stericol_text_add(text, "\n");
        text->failed = text->failed || line.failed;
        stericol_text_free(&line);
    }
}

static void add_global(const stericol_inspection *inspection, const char *name, const char *label,
                       stericol_text *text)
{
    const char *value = stericol_cf_global_text(inspection->file, name);
    stericol_text words = {0};

    if (value == NULL || *value == '\0')
        return;
    stericol_text_add(&words, value);
    add_field(text, label, &words);
    stericol_text_free(&words);
}

static void add_file(const stericol_inspection *inspection, stericol_text *text)
{
    const stericol_cf_file *file = inspection->file;
    stericol_text words = {0};

    stericol_text_format(&words, "%s, %llu bytes", stericol_cf_format(file),
                         stericol_cf_identity_of(file).bytes);
    add_field(text, "format", &words);
    add_global(inspection, "Conventions", "conventions", text);
    add_global(inspection, "title", "title", text);
    stericol_text_clear(&words);
    for (size_t i = 0; i < stericol_cf_dimension_count(file); i++) {
        const stericol_cf_dimension *dimension = stericol_cf_dimension_at(file, i);

        stericol_text_format(&words, "%s%s %zu%s", i > 0 ? ", " : "", dimension->name, dimension->length,
                             dimension->unlimited ? " (unlimited)" : "");
    }
    add_field(text, "dimensions", &words);
    stericol_text_free(&words);
    add_variables(inspection, text);
}

/* ---- how it would be read ---- */

static void add_quantity(const stericol_inspection *inspection, stericol_inspect_quantity quantity,
                         stericol_text *text)
{
    const char *read = NULL;
    stericol_epoch_variable chosen;
    stericol_text words = {0};

    if (!inspection->reads[quantity]) {
        stericol_text_add(&words, "none");
    } else {
        chosen = stericol_inspect_chosen(inspection, quantity);
        read = stericol_inspect_unit_word(inspection, quantity);
        stericol_text_format(&words, "%s, %s by %s: %s (%s), ", chosen.name,
                             strcmp(chosen.reason, "named by the user") == 0 ? "chosen" : "recognised",
                             strcmp(chosen.reason, "named by the user") == 0 ? "name" : chosen.reason,
                             stericol_inspect_kind_word(quantity, chosen.kind),
                             chosen.kind_assumed                ? "assumed"
                             : inspection->kind_given[quantity] ? "as the option says"
                                                                : "as the file says");
        if (chosen.unit_assumed)
            stericol_text_format(&words, "no units, taken as %s", read);
        else
            stericol_text_format(&words, "units \"%s\" read as %s", chosen.unit, read);
        if (inspection->path == NULL)
            stericol_text_format(&words, ", first in %s", chosen.file);
    }
    add_field(text, stericol_inspect_quantity_name(quantity), &words);
    stericol_text_free(&words);
}

static void add_vertical(const stericol_inspection *inspection, stericol_text *text)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_axes *axes = &inspection->axes;
    const char *unit = grid->vertical == STERICOL_VERTICAL_PRESSURE ? "dbar" : "m";
    stericol_text words = {0};

    stericol_text_format(&words, "%s: %zu levels", grid->level_name, grid->levels);
    if (grid->own_depths)
        stericol_text_format(&words, ", depths of their own in every column, from %s",
                             axes->level_parametric ? "formula_terms" : "--thickness");
    else
        stericol_text_format(&words, " of %s, %.6g to %.6g %s", stericol_inspect_coordinate_word(inspection),
                             grid->level[0], grid->level[grid->levels - 1], unit);
    if (axes->level_unit != NULL)
        stericol_text_format(&words, ", units \"%s\"", axes->level_unit);
    else
        stericol_text_add(&words, ", no units");
    if (axes->level_positive != NULL)
        stericol_text_format(&words, ", positive %s", axes->level_positive);
    stericol_text_add(&words, axes->level_upward ? ", from the bottom up" : ", from the surface down");
    stericol_text_add(&words, grid->own_depths             ? "; --vertical auto means cells"
                              : grid->level_bounds != NULL ? ", with bounds; --vertical auto means cells"
                                                           : ", no bounds; --vertical auto means linear");
    add_field(text, "vertical", &words);
    stericol_text_free(&words);
}

static void describe_range(stericol_text *words, const char *name, const double *values, size_t count,
                           const double spacing[2], bool line)
{
    double low = NAN, high = NAN;
    char least[32], most[32];

    for (size_t i = 0; i < count; i++) {
        low = fmin(low, values[i]);
        high = fmax(high, values[i]);
    }
    if (line) {
        low = values[0];
        high = values[count - 1];
    }
    stericol_text_format(words, "; %s %.6g", name, low);
    if (count > 1)
        stericol_text_format(words, " to %.6g", high);
    if (!isfinite(spacing[0]))
        return;
    snprintf(least, sizeof least, "%.4g", spacing[0]);
    snprintf(most, sizeof most, "%.4g", spacing[1]);
    stericol_text_format(words, " by %s", least);
    if (strcmp(least, most) != 0)
        stericol_text_format(words, " to %s", most);
}

static void add_horizontal(const stericol_inspection *inspection, stericol_text *text)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_axes *axes = &inspection->axes;
    bool bounds = grid->latitude_bounds != NULL && grid->longitude_bounds != NULL;
    size_t points = grid->rows * grid->columns;
    stericol_text words = {0};

    stericol_text_format(&words, "%s, rows %zu, columns %zu", grid->curvilinear ? "curvilinear" : "regular",
                         grid->rows, grid->columns);
    describe_range(&words, "latitude", grid->latitude, grid->curvilinear ? points : grid->rows,
                   axes->spacing[0], !grid->curvilinear);
    describe_range(&words, "longitude", grid->longitude, grid->curvilinear ? points : grid->columns,
                   axes->spacing[1], !grid->curvilinear);
    stericol_text_format(&words, "%s; %s; cell areas: %s", axes->cyclic ? ", all round" : "",
                         bounds ? "with bounds" : "no bounds", stericol_inspect_area_words(grid));
    add_field(text, "horizontal", &words);
    stericol_text_free(&words);
}

/* Which calendar months there are, where they are not equally often there. */
static void describe_months(const stericol_epoch *epoch, stericol_text *words)
{
    static const char *const names[12] = {"Jan", "Feb", "Mar", "Apr", "May", "Jun",
                                          "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
    size_t count[12], least, most;

    stericol_epoch_months(epoch, count);
    least = most = count[0];
    for (size_t m = 1; m < 12; m++) {
        least = count[m] < least ? count[m] : least;
        most = count[m] > most ? count[m] : most;
    }
    if (least == most)
        return;
    stericol_text_add(words, "; months:");
    for (size_t m = 0; m < 12; m++)
        if (count[m] > 0)
            stericol_text_format(words, " %s %zu", names[m], count[m]);
}

static void add_times(const stericol_inspection *inspection, stericol_text *text)
{
    enum { MOST_HOLES = 5 };
    const stericol_epoch_member **members = stericol_inspect_members(inspection->epoch);
    size_t count = stericol_epoch_member_count(inspection->epoch), holes = 0;
    double step = NAN;
    stericol_text words = {0};

    stericol_text_add(&words, stericol_epoch_description(inspection->epoch));
    if (inspection->axes.calendar != NULL)
        stericol_text_format(&words, "; calendar %s", inspection->axes.calendar);
    if (members != NULL)
        step = stericol_inspect_time_step(members, count);
    if (isfinite(step))
        stericol_text_format(&words, "; mostly %.6g days apart", step);
    if (count > 1)
        describe_months(inspection->epoch, &words);
    for (size_t i = 0; members != NULL && i + 1 < count; i++)
        if (stericol_inspect_hole_after(members, i) && holes++ < MOST_HOLES)
            stericol_text_format(&words, "; nothing between %s and %s", members[i]->text,
                                 members[i + 1]->text);
    if (holes > MOST_HOLES)
        stericol_text_format(&words, "; %zu more holes", holes - MOST_HOLES);
    add_field(text, "times", &words);
    text->failed = text->failed || members == NULL;
    free(members);
    stericol_text_free(&words);
}

static void add_reading(const stericol_inspection *inspection, stericol_text *text)
{
    add_heading(text, inspection->refusals.count == 0 || inspection->salinity_alone
                          ? "How it would be read"
                          : "What of it could be read");
    add_quantity(inspection, STERICOL_INSPECT_TEMPERATURE, text);
    add_quantity(inspection, STERICOL_INSPECT_SALINITY, text);
    add_vertical(inspection, text);
    add_horizontal(inspection, text);
    add_times(inspection, text);
}

/* ---- values ---- */

static void add_range(const stericol_inspect_range *range, stericol_text *text)
{
    if (range->refused)
        stericol_text_format(text, "%26s", "refused");
    else if (range->valid == 0)
        stericol_text_format(text, "%26s", "none");
    else
        stericol_text_format(text, "  %7.3f %7.3f %7.3f ", range->low, range->mean, range->high);
}

static void add_level(const stericol_inspection *inspection, size_t k, stericol_text *text)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_values *values = &inspection->values;
    const stericol_inspect_level *level = &values->levels[k];
    unsigned long long below = 0, above = 0;

    if (grid->own_depths)
        stericol_text_format(text, "  %9zu", k + 1);
    else
        stericol_text_format(text, "  %9.2f", grid->level[k]);
    stericol_text_format(text, " %6.1f", 100.0 * (double)level->columns / (double)values->cells);
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
        if (inspection->reads[q]) {
            add_range(&level->range[q], text);
            below += level->range[q].below;
            above += level->range[q].above;
        }
    stericol_text_format(text, " %6llu %6llu %6llu%s %7llu\n", below, above, level->zeros,
                         level->land_as_zeros ? "L" : " ", level->ends);
}

static void add_table_heading(const stericol_inspection *inspection, stericol_text *text)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    bool pressure = grid->vertical == STERICOL_VERTICAL_PRESSURE;

    stericol_text_add(text, "                  ");
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
        if (inspection->reads[q]) {
            char heading[40];

            snprintf(heading, sizeof heading, "%s [%s]",
                     stericol_inspect_quantity_name((stericol_inspect_quantity)q),
                     stericol_inspect_unit_word(inspection, (stericol_inspect_quantity)q));
            stericol_text_format(text, "  %-24s", heading);
        }
    stericol_text_add(text, "   rejected\n");
    stericol_text_format(text, "  %9s  cells",
                         grid->own_depths ? "level"
                         : pressure       ? "p [dbar]"
                                          : "depth [m]");
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
        if (inspection->reads[q])
            stericol_text_format(text, "  %7s %7s %7s ", "least", "mean", "most");
    stericol_text_add(text, "  below  above  zeros    ends\n");
    stericol_text_format(text, "%18s", "[%]");
    for (int q = 0, before = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
        if (inspection->reads[q]) {
            stericol_text_format(text, "%*s%17s", before, "", "of cells");
            before = 9;
        }
    stericol_text_add(text, "\n");
}

static void add_columns(const stericol_inspection *inspection, stericol_text *text)
{
    const stericol_inspect_values *values = &inspection->values;
    size_t last = stericol_epoch_grid(inspection->epoch)->levels - 1;
    unsigned long long reach = values->levels[last].ends;
    stericol_text words = {0};

    stericol_text_format(
        &words,
        "%llu of %llu cells hold a column (%.1f %% at the surface): %llu end above the deepest "
        "level (sea_floor), %llu reach it (end_of_data)",
        values->columns, values->cells, 100.0 * (double)values->levels[0].columns / (double)values->cells,
        values->columns - reach, reach);
    add_wrapped(text, "  ", stericol_text_string(&words));
    text->failed = text->failed || words.failed;
    stericol_text_free(&words);
}

static void add_values(const stericol_inspection *inspection, stericol_text *text)
{
    const stericol_inspect_values *values = &inspection->values;
    size_t count = stericol_epoch_member_count(inspection->epoch);
    stericol_text words = {0};

    if (values->members > 1)
        stericol_text_format(&words, "Values, averaged over %s",
                             stericol_epoch_description(inspection->epoch));
    else if (count > 1)
        stericol_text_format(&words,
                             "Values of %s, the first of %zu times (others: --field-time, --field-step)",
                             values->first, count);
    else
        stericol_text_format(&words, "Values (%s)", values->first);
    add_heading(text, stericol_text_string(&words));
    text->failed = text->failed || words.failed;
    stericol_text_free(&words);
    add_table_heading(inspection, text);
    for (size_t k = 0; k < stericol_epoch_grid(inspection->epoch)->levels; k++)
        add_level(inspection, k, text);
    add_columns(inspection, text);
}

/* ---- all ---- */

static void add_refusals(const stericol_inspection *inspection, stericol_text *text)
{
    if (inspection->refusals.count == 0) {
        if (inspection->conditions.count == 0 && !inspection->salinity_alone)
            add_heading(text, "Nothing would be refused.");
        add_list(text, "Refused on a condition", &inspection->conditions);
        return;
    }
    add_heading(text, "Refused");
    for (size_t i = 0; i < inspection->refusals.count; i++) {
        stericol_text words = {0};

        stericol_text_format(&words, "would be refused: %s", inspection->refusals.items[i].text);
        add_wrapped(text, "  - ", stericol_text_string(&words));
        text->failed = text->failed || words.failed;
        stericol_text_free(&words);
    }
}

static void add_title(const stericol_inspection *inspection, stericol_text *text)
{
    stericol_text title = {0};

    if (inspection->path != NULL)
        add_plain(&title, inspection->path);
    else
        stericol_text_format(&title, "All %zu files as one set", inspection->paths->count);
    stericol_text_format(text, "%s\n", stericol_text_string(&title));
    for (size_t i = 0; i < title.length && i < WIDTH; i++)
        stericol_text_add(text, "=");
    stericol_text_add(text, "\n");
    text->failed = text->failed || title.failed;
    stericol_text_free(&title);
}

void stericol_inspect_text(const stericol_inspection *inspection, stericol_text *text)
{
    add_title(inspection, text);
    if (inspection->path != NULL && inspection->file != NULL)
        add_file(inspection, text);
    if (inspection->epoch != NULL)
        add_reading(inspection, text);
    add_list(text, "Assumptions", &inspection->assumptions);
    if (inspection->epoch != NULL && inspection->values.levels != NULL)
        add_values(inspection, text);
    add_list(text, "Suspect", &inspection->suspects);
    add_refusals(inspection, text);
    add_list(text, "For change", &inspection->suggestions);
    stericol_text_add(text, "\n");
}
