/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/commands.h"
#include "commands/inspect_inside.h"

#include <stdlib.h>
#include <string.h>

/* What has been shown so far. */
typedef struct showing {
    const char *form;                /* text, csv or json */
    json_t *files, *set;             /* json only */
    stericol_inspect_lines refusals; /* the first of every inspection that has any */
    size_t refused;                  /* inspections with any */
} showing;

static void keep_refusals(showing *shown, const stericol_inspection *inspection)
{
    if (inspection->refusals.count > 0)
        stericol_inspect_add_line(&shown->refusals, "refused", "%s", inspection->refusals.items[0].text);
    shown->refused += inspection->refusals.count > 0;
}

/* Text and csv go out at once; json is one document and waits. */
static stericol_status show(stericol_session *session, const stericol_inspection *inspection, showing *shown)
{
    stericol_text text = {0};
    stericol_status status = STERICOL_OK;

    if (strcmp(shown->form, "json") == 0) {
        json_t *object = stericol_inspect_json(inspection);

        if (inspection->path == NULL)
            shown->set = object;
        else if (json_array_append_new(shown->files, object) != 0)
            object = NULL;
        return object == NULL ? stericol_fail_memory(session->context, 0, "the inspection") : STERICOL_OK;
    }
    if (strcmp(shown->form, "csv") == 0)
        stericol_inspect_csv(inspection, &text);
    else
        stericol_inspect_text(inspection, &text);
    status = text.failed ? stericol_fail_memory(session->context, 0, "the inspection")
                         : stericol_session_print(session, stericol_text_string(&text));
    stericol_text_free(&text);
    return status;
}

static stericol_status inspect(stericol_session *session, const stericol_paths *paths, size_t index,
                               showing *shown)
{
    size_t whole = paths->count > 1 ? paths->count + 1 : 1;
    stericol_inspection inspection = {0};
    stericol_status status = stericol_inspect_open(session, paths, index, &inspection);

    if (status == STERICOL_OK)
        status = stericol_inspect_look(session, &inspection, index, whole);
    if (status == STERICOL_OK)
        status = stericol_inspect_judge(session, &inspection);
    if (status == STERICOL_OK &&
        (inspection.assumptions.failed || inspection.suspects.failed || inspection.suggestions.failed ||
         inspection.refusals.failed || inspection.conditions.failed))
        status = stericol_fail_memory(session->context, 0, "the inspection");
    if (status == STERICOL_OK)
        status = show(session, &inspection, shown);
    keep_refusals(shown, &inspection);
    stericol_inspect_free(&inspection);
    return status;
}

static stericol_status print_json(stericol_session *session, showing *shown)
{
    json_t *whole = json_pack("{s:O, s:O?, s:I}", "files", shown->files, "set", shown->set, "refused",
                              (json_int_t)shown->refused);
    stericol_text text = {0};
    stericol_status status;

    stericol_inspect_write_json(whole, &text);
    stericol_text_add(&text, "\n");
    json_decref(whole);
    status = text.failed ? stericol_fail_memory(session->context, 0, "the inspection")
                         : stericol_session_print(session, stericol_text_string(&text));
    stericol_text_free(&text);
    return status;
}

/* One refusal of every file is told on standard error, all are in their place on the page; the last one stays
 * in the context and is told when the session ends. */
static stericol_status tell_refusals(stericol_session *session, const stericol_inspect_lines *refusals)
{
    for (size_t i = 0; i < refusals->count; i++) {
        stericol_fail(session->context, STERICOL_INPUT, NULL, NULL, NULL, "%s", refusals->items[i].text);
        if (i + 1 < refusals->count) {
            stericol_session_print_failure(session);
            stericol_context_clear(session->context);
        }
    }
    return refusals->count > 0 ? STERICOL_INPUT : STERICOL_OK;
}

stericol_status stericol_command_inspect(stericol_session *session)
{
    showing shown = {.form = stericol_settings_text(session->settings, "table")};
    stericol_paths paths = {0};
    stericol_text heading = {0};
    stericol_status status = stericol_settings_paths(session->context, session->settings, "file", &paths);
    size_t whole = paths.count > 1 ? paths.count + 1 : paths.count;

    session->keeps_notices = true;
    shown.files = json_array();
    if (status == STERICOL_OK && strcmp(shown.form, "csv") == 0) {
        stericol_inspect_csv_heading(&heading);
        status = stericol_session_print(session, stericol_text_string(&heading));
    }
    for (size_t i = 0; i < whole && status == STERICOL_OK; i++)
        status = inspect(session, &paths, i, &shown);
    if (status == STERICOL_OK && strcmp(shown.form, "json") == 0)
        status = print_json(session, &shown);
    if (status == STERICOL_OK && shown.refusals.failed)
        status = stericol_fail_memory(session->context, 0, "the refusals");
    if (status == STERICOL_OK)
        status = tell_refusals(session, &shown.refusals);
    for (size_t i = 0; i < shown.refusals.count; i++)
        free(shown.refusals.items[i].text);
    free(shown.refusals.items);
    json_decref(shown.files);
    json_decref(shown.set);
    stericol_text_free(&heading);
    stericol_paths_free(&paths);
    return status;
}
