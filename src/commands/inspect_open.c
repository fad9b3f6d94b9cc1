/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/inspect_inside.h"

#include "base/checked.h"
#include "commands/setup.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* ---- lines ---- */

void stericol_inspect_add_line(stericol_inspect_lines *lines, const char *word, const char *format, ...)
{
    stericol_text text = {0};
    void *items = lines->items;
    char *taken;
    va_list arguments;

    va_start(arguments, format);
    stericol_text_format_list(&text, format, arguments);
    va_end(arguments);
    for (size_t i = 0; i < lines->count; i++)
        if (strcmp(lines->items[i].text, stericol_text_string(&text)) == 0) {
            stericol_text_free(&text);
            return;
        }
    taken = stericol_text_take(&text);
    if (taken == NULL || !stericol_grow_array(&items, lines->count + 1, sizeof *lines->items)) {
        free(taken);
        lines->failed = true;
        return;
    }
    lines->items = items;
    lines->items[lines->count++] = (stericol_inspect_line){word, taken};
}

static void free_lines(stericol_inspect_lines *lines)
{
    for (size_t i = 0; i < lines->count; i++)
        free(lines->items[i].text);
    free(lines->items);
}

void stericol_inspect_free(stericol_inspection *inspection)
{
    stericol_epoch_close(inspection->epoch);
    stericol_cf_close(inspection->file);
    free(inspection->values.levels);
    free_lines(&inspection->assumptions);
    free_lines(&inspection->suspects);
    free_lines(&inspection->suggestions);
    free_lines(&inspection->refusals);
    free_lines(&inspection->conditions);
    *inspection = (stericol_inspection){0};
}

stericol_status stericol_inspect_refuse(stericol_session *session, stericol_inspection *inspection,
                                        stericol_status status)
{
    if (status != STERICOL_INPUT && status != STERICOL_NOTHING)
        return status;
    stericol_inspect_add_line(&inspection->refusals, "refused", "%s",
                              stericol_context_message(session->context));
    stericol_context_clear(session->context);
    return STERICOL_OK;
}

void stericol_inspect_take_notices(stericol_session *session, stericol_inspection *inspection)
{
    static const char warning[] = "warning: ";
    const char *line = stericol_text_string(&session->notices);
    stericol_text start = {0};

    if (inspection->path != NULL) {
        stericol_text_add_printable(&start, inspection->path);
        stericol_text_add(&start, ": ");
    }
    while (*line != '\0') {
        size_t length = strcspn(line, "\n");
        bool warns = stericol_starts_with(line, warning);
        const char *text = warns ? line + strlen(warning) : line;

        if (start.length > 0 && stericol_starts_with(text, stericol_text_string(&start)))
            text += start.length;
        stericol_inspect_add_line(&inspection->assumptions, warns ? "warning" : "note", "%.*s",
                                  (int)(line + length - text), text);
        line += length + (line[length] == '\n');
    }
    inspection->assumptions.failed =
        inspection->assumptions.failed || session->notices.failed || start.failed;
    stericol_text_clear(&session->notices);
    stericol_text_free(&start);
}

/* ---- what a file may hold ---- */

static bool holds_word(const char *text, const char *word)
{
    size_t length = strlen(word);

    for (; text != NULL && *text != '\0'; text++) {
        size_t i = 0;

        while (i < length && (text[i] | 0x20) == word[i])
            i++;
        if (i == length)
            return true;
    }
    return false;
}

/* Whether anything in the file looks as if it were meant as the quantity, however far it is from being
 * usable. */
static bool may_hold(const stericol_session *session, const stericol_cf_file *file,
                     stericol_inspect_quantity quantity, const char *named)
{
    static const char *const words[STERICOL_INSPECT_QUANTITIES][2] = {{"temp", "theta"}, {"sal", "sal"}};

    if (named != NULL)
        return stericol_cf_find(file, named, NULL) != NULL;
    for (size_t i = 0; i < stericol_cf_variable_count(file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(file, i);
        const char *unit = stericol_cf_text_of(variable, "units");

        if (variable->rank < 2 || variable->type == STERICOL_CF_CHAR || variable->type == STERICOL_CF_STRING)
            continue;
        if (quantity == STERICOL_INSPECT_TEMPERATURE &&
            stericol_cf_units_quantity(session->units, unit) == STERICOL_CF_QUANTITY_TEMPERATURE)
            return true;
        for (size_t w = 0; w < 2; w++)
            if (holds_word(variable->short_name, words[quantity][w]) ||
                holds_word(stericol_cf_text_of(variable, "standard_name"), words[quantity][w]) ||
                holds_word(stericol_cf_text_of(variable, "long_name"), words[quantity][w]))
                return true;
    }
    return false;
}

/* ---- the epoch ---- */

static stericol_status try_epoch(stericol_session *session, stericol_inspection *inspection,
                                 stericol_epoch_request request, bool temperature, bool salinity)
{
    stericol_status status;

    request.wants_temperature = temperature;
    request.wants_salinity = salinity;
    if (!temperature)
        request.temperature = NULL;
    if (!salinity)
        request.salinity = NULL;
    status = stericol_epoch_open(session->context, session->units, &request, &inspection->epoch);
    if (status == STERICOL_OK) {
        inspection->reads[STERICOL_INSPECT_TEMPERATURE] = temperature;
        inspection->reads[STERICOL_INSPECT_SALINITY] =
            salinity && stericol_epoch_has_salinity(inspection->epoch);
    }
    return status;
}

/* Both together as `change` would; where that is refused each alone, for what can still be said. */
static stericol_status open_epoch(stericol_session *session, stericol_inspection *inspection,
                                  const stericol_epoch_request *request)
{
    bool of_set = inspection->path != NULL && inspection->paths->count > 1;
    bool temperature =
        inspection->path == NULL ||
        may_hold(session, inspection->file, STERICOL_INSPECT_TEMPERATURE, request->temperature);
    bool salinity = inspection->path != NULL &&
                    may_hold(session, inspection->file, STERICOL_INSPECT_SALINITY, request->salinity);
    stericol_status status;

    inspection->salinity_alone = of_set && !temperature && salinity;
    if (!inspection->salinity_alone) {
        status = stericol_inspect_refuse(session, inspection,
                                         try_epoch(session, inspection, *request, true, true));
        if (status != STERICOL_OK || inspection->epoch != NULL)
            return status;
        if (temperature) {
            status = stericol_inspect_refuse(session, inspection,
                                             try_epoch(session, inspection, *request, true, false));
            if (status != STERICOL_OK || inspection->epoch != NULL)
                return status;
        }
    }
    if (!salinity)
        return STERICOL_OK;
    return stericol_inspect_refuse(session, inspection,
                                   try_epoch(session, inspection, *request, false, true));
}

/* ---- axes ---- */

static void measure_spacing(const double *values, size_t count, double spacing[2])
{
    spacing[0] = spacing[1] = NAN;
    for (size_t i = 1; i < count; i++) {
        spacing[0] = fmin(spacing[0], fabs(values[i] - values[i - 1]));
        spacing[1] = fmax(spacing[1], fabs(values[i] - values[i - 1]));
    }
}

/* The calendar of the time axis that goes with `variable`. */
static const char *find_calendar(const stericol_session *session, const stericol_cf_file *file,
                                 const stericol_cf_variable *variable)
{
    for (size_t i = 0; i < stericol_cf_variable_count(file); i++) {
        const stericol_cf_variable *other = stericol_cf_variable_at(file, i);
        bool along = other->rank == 0;

        for (size_t d = 0; other->rank == 1 && d < variable->rank && d < STERICOL_CF_MOST_RANK; d++)
            along = along || variable->dimension[d] == other->dimension[0];
        if (along && stericol_cf_units_quantity(session->units, stericol_cf_text_of(other, "units")) ==
                         STERICOL_CF_QUANTITY_TIME)
            return stericol_cf_text_of(other, "calendar");
    }
    return NULL;
}

static stericol_status read_level_axis(stericol_session *session, stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_cf_variable *level = stericol_cf_find(inspection->file, grid->level_name, NULL);
    stericol_inspect_axes *axes = &inspection->axes;
    double *values = NULL;
    size_t count = 0;
    stericol_status status;

    if (level == NULL)
        return STERICOL_OK;
    axes->level_unit = stericol_cf_text_of(level, "units");
    axes->level_positive = stericol_cf_text_of(level, "positive");
    status = stericol_cf_read_all(session->context, inspection->file, level, grid->levels, &values, &count);
    /* Depths, pressures, negative heights and sigma are all nearest to 0 at the surface. */
    axes->level_upward = status == STERICOL_OK && count > 1 && fabs(values[0]) > fabs(values[count - 1]);
    free(values);
    return stericol_inspect_refuse(session, inspection, status);
}

static stericol_status read_axes(stericol_session *session, stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    stericol_epoch_variable chosen = stericol_inspect_chosen(
        inspection, inspection->reads[STERICOL_INSPECT_TEMPERATURE] ? STERICOL_INSPECT_TEMPERATURE
                                                                    : STERICOL_INSPECT_SALINITY);
    const stericol_cf_variable *variable;
    stericol_inspect_axes *axes = &inspection->axes;
    double span;

    if (inspection->file == NULL) {
        stericol_status status = stericol_cf_open(session->context, chosen.file, &inspection->file);

        if (status != STERICOL_OK)
            return stericol_inspect_refuse(session, inspection, status);
    }
    variable = stericol_cf_find(inspection->file, chosen.name, NULL);
    if (variable != NULL)
        axes->calendar = find_calendar(session, inspection->file, variable);
    axes->level_parametric =
        grid->own_depths && stericol_settings_text(session->settings, "thickness") == NULL;
    measure_spacing(grid->latitude, grid->curvilinear ? 0 : grid->rows, axes->spacing[0]);
    measure_spacing(grid->longitude, grid->curvilinear ? 0 : grid->columns, axes->spacing[1]);
    if (!grid->curvilinear && grid->columns > 2) {
        /* All round where the gap that is left is no wider than a step and a half. */
        span = fabs(grid->longitude[grid->columns - 1] - grid->longitude[0]);
        axes->cyclic = 360.0 - span <= 1.5 * span / (double)(grid->columns - 1);
    }
    return read_level_axis(session, inspection);
}

stericol_status stericol_inspect_open(stericol_session *session, const stericol_paths *paths, size_t index,
                                      stericol_inspection *inspection)
{
    bool whole = index == paths->count;
    stericol_paths part = {paths->path + (whole ? 0 : index), whole ? paths->count : 1};
    stericol_epoch_request request;
    stericol_status status = STERICOL_OK;

    *inspection = (stericol_inspection){.path = whole ? NULL : paths->path[index], .paths = paths};
    if (!whole) {
        status = stericol_cf_open(session->context, inspection->path, &inspection->file);
        if (status != STERICOL_OK)
            return stericol_inspect_refuse(session, inspection, status);
    }
    stericol_setup_request(session->settings, "field", &part, &request);
    inspection->kind_given[STERICOL_INSPECT_TEMPERATURE] =
        request.temperature_kind != STERICOL_TEMPERATURE_UNKNOWN;
    inspection->kind_given[STERICOL_INSPECT_SALINITY] = request.salinity_kind != STERICOL_SALINITY_UNKNOWN;
    /* A file without salinity can be used beside one that has it; one that lacks the variable named cannot.
     */
    request.salinity_optional = request.salinity == NULL || (!whole && paths->count > 1);
    request.cache_bytes = stericol_session_memory(session) / 8;
    status = open_epoch(session, inspection, &request);
    if (status == STERICOL_OK && inspection->epoch != NULL)
        status = read_axes(session, inspection);
    if (status == STERICOL_OK && inspection->epoch != NULL)
        status = stericol_inspect_cells(session, inspection);
    stericol_inspect_take_notices(session, inspection);
    return status;
}
