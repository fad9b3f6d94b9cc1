/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Opening an epoch: every file is looked at once, in the order given.
 */
#include "input/room.h"

#include "base/checked.h"

#include <assert.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

void stericol_epoch_close(stericol_epoch *epoch)
{
    if (!epoch)
        return;
    for (size_t i = 0; i < epoch->source_count; i++) {
        stericol_input_source_close(&epoch->sources[i]);
        free(epoch->sources[i].id);
        for (int j = 0; j < STERICOL_INPUT_QUANTITIES; j++)
            stericol_input_variable_clear(&epoch->sources[i].variable[j]);
    }
    free(epoch->sources);
    for (int i = 0; i < STERICOL_INPUT_QUANTITIES; i++) {
        free(epoch->states[i].items);
        stericol_input_judged_free(&epoch->judged[i]);
    }
    free(epoch->members);
    free(epoch->description);
    stericol_input_sums_free(&epoch->sums);
    stericol_input_thickness_close(epoch->thickness);
    stericol_input_terrain_close(epoch->terrain);
    stericol_input_grid_clear(&epoch->grid);
    stericol_input_sayings_free(&epoch->sayings);
    free(epoch);
}

static bool wanted(const stericol_epoch *epoch, stericol_input_quantity quantity)
{
    return quantity == STERICOL_INPUT_TEMPERATURE ? epoch->request.wants_temperature
                                                  : epoch->request.wants_salinity;
}

/* ---- the grid ---- */

static stericol_status read_grid(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                                 const stericol_input_layout *layout, stericol_grid *grid, bool *reversed)
{
    stericol_status status = stericol_input_read_horizontal(reader, layout, grid);
    if (status == STERICOL_OK)
        status = stericol_input_read_vertical(reader, variable, layout, grid, reversed);
    return status;
}

/* Takes the grid over when it is the first; else holds it against the first. */
static stericol_status agree_on_grid(const stericol_input_reader *reader, stericol_epoch *epoch,
                                     const stericol_cf_variable *variable,
                                     const stericol_input_layout *layout, bool *reversed)
{
    char differs[160];
    stericol_grid grid = {0};
    stericol_status status = read_grid(reader, variable, layout, &grid, reversed);
    if (status == STERICOL_OK && !epoch->grid.level) {
        status = stericol_input_read_cell_measures(reader, variable, layout, &grid);
        epoch->grid = grid;
        return status;
    }
    if (status == STERICOL_OK && !stericol_grid_same(&epoch->grid, &grid, differs, sizeof differs))
        status = stericol_input_refuse(reader, variable->name, "give files of one grid",
                                       "its grid is not that of %s: %s", epoch->sources[0].path, differs);
    stericol_input_grid_clear(&grid);
    return status;
}

/* ---- one file ---- */

/* Whether two variables of one file stand on the same axes in the same way. */
static bool same_axes(const stericol_input_layout *a, const stericol_input_layout *b)
{
    return a->latitude == b->latitude && a->longitude == b->longitude && a->level == b->level &&
           a->curvilinear == b->curvilinear && a->transposed == b->transposed && a->levels == b->levels &&
           a->rows == b->rows && a->columns == b->columns;
}

static stericol_status same_kind(const stericol_input_reader *reader, const stericol_epoch *epoch,
                                 size_t index, stericol_input_quantity quantity)
{
    const stericol_input_variable *chosen = &epoch->sources[index].variable[quantity];
    for (size_t i = 0; i < index; i++) {
        const stericol_input_variable *before = &epoch->sources[i].variable[quantity];
        if (!before->present)
            continue;
        if (before->kind == chosen->kind)
            return STERICOL_OK;
        return stericol_input_refuse(reader, chosen->name, "give files of one kind", "%s here, but %s in %s",
                                     stericol_input_kind_text(quantity, chosen->kind),
                                     stericol_input_kind_text(quantity, before->kind),
                                     epoch->sources[i].path);
    }
    return STERICOL_OK;
}

static stericol_status look_for(const stericol_input_reader *reader, stericol_epoch *epoch, size_t index,
                                stericol_input_quantity quantity, stericol_cf_file *positions,
                                stericol_input_layout layouts[STERICOL_INPUT_QUANTITIES])
{
    stericol_input_variable *chosen = &epoch->sources[index].variable[quantity];
    const stericol_input_variable *other = &epoch->sources[index].variable[STERICOL_INPUT_TEMPERATURE];
    stericol_input_layout *layout = &layouts[quantity];
    const stericol_cf_variable *found;
    stericol_status status = stericol_input_choose(reader, quantity, chosen, &found);
    if (status != STERICOL_OK || !found)
        return status;
    status = same_kind(reader, epoch, index, quantity);
    if (status == STERICOL_OK)
        status = stericol_input_lay_out(reader, found, positions, true, layout);
    if (status != STERICOL_OK)
        return status;
    chosen->axes = layout->axes;
    if (quantity != STERICOL_INPUT_TEMPERATURE && other->present &&
        same_axes(layout, &layouts[STERICOL_INPUT_TEMPERATURE]))
        chosen->reversed = other->reversed;
    else
        status = agree_on_grid(reader, epoch, found, layout, &chosen->reversed);
    if (status == STERICOL_OK)
        status = stericol_input_read_times(reader, found->name, layout, index, &epoch->states[quantity]);
    return status;
}

/* "no temperature (--temperature NAME); there are: a, b, c" */
static stericol_status absent(const stericol_input_reader *reader, const stericol_epoch *epoch,
                              stericol_input_quantity quantity)
{
    const bool temperature = quantity == STERICOL_INPUT_TEMPERATURE;
    const char *name = temperature ? epoch->request.temperature : epoch->request.salinity;
    stericol_text list = {0};
    if (!name && stericol_input_refuse_other(reader, quantity))
        return STERICOL_INPUT;
    stericol_input_list_candidates(reader, quantity, &list);
    if (name)
        stericol_input_refuse(
            reader, name, temperature ? "name another with --temperature" : "name another with --salinity",
            "no such variable; there are %s", stericol_text_string(&list));
    else
        stericol_input_refuse(
            reader, NULL,
            temperature ? "name it with --temperature"
                        : "name it with --salinity, or give --background-salinity or --constant-salinity",
            "no variable was recognised as %s; there are %s", temperature ? "temperature" : "salinity",
            stericol_text_string(&list));
    stericol_text_free(&list);
    return STERICOL_INPUT;
}

static stericol_status read_source(stericol_input_reader *reader, stericol_epoch *epoch, size_t index,
                                   stericol_cf_file *positions)
{
    stericol_input_source *source = &epoch->sources[index];
    stericol_input_layout layouts[STERICOL_INPUT_QUANTITIES];
    bool any = false;
    source->path = epoch->request.paths[index];
    stericol_status status = stericol_input_source_file(reader->context, epoch, index, &reader->file);
    if (status != STERICOL_OK)
        return status;
    const stericol_cf_identity identity = stericol_cf_identity_of(reader->file);
    source->id = stericol_copy_string(identity.id);
    for (int i = 0; i < STERICOL_INPUT_QUANTITIES && status == STERICOL_OK; i++) {
        if (wanted(epoch, (stericol_input_quantity)i))
            status = look_for(reader, epoch, index, (stericol_input_quantity)i, positions, layouts);
        any = any || source->variable[i].present;
    }
    if (status == STERICOL_OK && !any)
        return absent(reader, epoch,
                      wanted(epoch, STERICOL_INPUT_TEMPERATURE) ? STERICOL_INPUT_TEMPERATURE
                                                                : STERICOL_INPUT_SALINITY);
    return status;
}

static stericol_status check_select(const stericol_input_reader *reader, const stericol_epoch *epoch)
{
    for (size_t i = 0; i < epoch->request.select_count; i++) {
        const char *text = epoch->request.select[i];
        const char *equals = strchr(text, '=');
        bool known = false;
        for (size_t j = 0; equals && j < stericol_cf_dimension_count(reader->file); j++) {
            const char *name = stericol_cf_dimension_at(reader->file, j)->name;
            known =
                known || (strlen(name) == (size_t)(equals - text) && strncmp(name, text, strlen(name)) == 0);
        }
        if (!known)
            return stericol_input_refuse(reader, NULL, "name one of the file's dimensions",
                                         "--select %s names no dimension of this file", text);
    }
    return STERICOL_OK;
}

static stericol_status read_sources(stericol_input_reader *reader, stericol_epoch *epoch)
{
    stericol_cf_file *positions = NULL;
    stericol_status status = STERICOL_OK;
    if (epoch->request.coordinates_file)
        status = stericol_cf_open(reader->context, epoch->request.coordinates_file, &positions);
    for (size_t i = 0; i < epoch->source_count && status == STERICOL_OK; i++)
        status = read_source(reader, epoch, i, positions);
    stericol_cf_close(positions);
    if (status == STERICOL_OK)
        status = stericol_input_source_file(reader->context, epoch, 0, &reader->file);
    if (status == STERICOL_OK)
        status = check_select(reader, epoch);
    if (status != STERICOL_OK)
        return status;
    if (epoch->request.wants_temperature && !epoch->states[STERICOL_INPUT_TEMPERATURE].count)
        return absent(reader, epoch, STERICOL_INPUT_TEMPERATURE);
    if (epoch->request.wants_salinity && !epoch->states[STERICOL_INPUT_SALINITY].count) {
        if (!epoch->request.salinity_optional)
            return absent(reader, epoch, STERICOL_INPUT_SALINITY);
        stericol_input_say(reader, STERICOL_NOTE, NULL, "no salinity in these files");
    }
    return STERICOL_OK;
}

/* ---- what other files add ---- */

static stericol_status open_terrain(const stericol_input_reader *reader, stericol_epoch *epoch,
                                    stericol_input_quantity main)
{
    const stericol_input_member *first = &epoch->members[0];
    for (size_t i = 1; i < epoch->member_count; i++)
        if (epoch->members[i].order < first->order)
            first = &epoch->members[i];
    stericol_input_reader there = *reader;
    stericol_input_layout layout;
    const stericol_input_variable *chosen = &epoch->sources[first->source[main]].variable[main];
    stericol_status status =
        stericol_input_source_file(reader->context, epoch, first->source[main], &there.file);
    if (status != STERICOL_OK)
        return status;
    const stericol_cf_variable *variable = stericol_cf_find(there.file, chosen->name, NULL);
    stericol_cf_file *positions = NULL;
    if (epoch->request.coordinates_file)
        status = stericol_cf_open(reader->context, epoch->request.coordinates_file, &positions);
    if (status == STERICOL_OK)
        status = stericol_input_lay_out(&there, variable, positions, true, &layout);
    if (status == STERICOL_OK)
        status = stericol_input_terrain_open(&there, variable, &layout, first->step[main], &epoch->grid,
                                             chosen->reversed, &epoch->terrain);
    stericol_cf_close(positions);
    return status;
}

static stericol_status add_other_files(const stericol_input_reader *reader, stericol_epoch *epoch)
{
    const stericol_epoch_request *request = &epoch->request;
    const stericol_input_quantity main = epoch->states[STERICOL_INPUT_TEMPERATURE].count
                                             ? STERICOL_INPUT_TEMPERATURE
                                             : STERICOL_INPUT_SALINITY;
    stericol_status status = STERICOL_OK;
    if (request->cell_area_file)
        status = stericol_input_read_cell_area_file(reader, request->cell_area_file, &epoch->grid);
    if (status == STERICOL_OK && request->mask_file)
        status = stericol_input_read_land_mask(reader, request->mask_file, &epoch->grid);
    if (status == STERICOL_OK && request->thickness_file)
        status = stericol_input_thickness_open(
            reader, request->thickness_file, &epoch->grid,
            epoch->sources[epoch->members[0].source[main]].variable[main].reversed, &epoch->thickness);
    else if (status == STERICOL_OK && epoch->grid.own_depths)
        status = open_terrain(reader, epoch, main);
    return status;
}

/* ---- chunks ---- */

static size_t common_multiple(size_t a, size_t b, size_t most)
{
    size_t x = a, y = b, product;
    while (y) {
        const size_t rest = x % y;
        x = y;
        y = rest;
    }
    if (!stericol_multiply_sizes(a / x, b, &product) || product > most)
        return most;
    return product;
}

static stericol_status find_stride(stericol_context *context, stericol_epoch *epoch)
{
    epoch->stride_levels = epoch->stride_rows = 1;
    for (int i = 0; i < STERICOL_INPUT_QUANTITIES; i++) {
        stericol_cf_field *field;
        size_t levels, rows;
        if (!epoch->states[i].count)
            continue;
        const stericol_status status = stericol_input_source_field(
            context, epoch, epoch->members[0].source[i], (stericol_input_quantity)i, &field);
        if (status != STERICOL_OK)
            return status;
        stericol_cf_field_stride(field, &levels, &rows);
        epoch->stride_levels = common_multiple(epoch->stride_levels, levels ? levels : 1, epoch->grid.levels);
        epoch->stride_rows = common_multiple(epoch->stride_rows, rows ? rows : 1, epoch->grid.rows);
    }
    return STERICOL_OK;
}

void stericol_epoch_stride(const stericol_epoch *epoch, size_t *levels, size_t *rows)
{
    *levels = epoch->stride_levels;
    *rows = epoch->stride_rows;
}

stericol_status stericol_epoch_open(stericol_context *context, const stericol_cf_units *units,
                                    const stericol_epoch_request *request, stericol_epoch **epoch)
{
    assert(request->path_count && (request->wants_temperature || request->wants_salinity));
    *epoch = NULL;
    stericol_epoch *made = stericol_new_array(1, sizeof *made);
    if (!made)
        return stericol_fail_memory(context, sizeof *made, "an epoch");
    made->request = *request;
    snprintf(made->label, sizeof made->label, "%s", request->label ? request->label : "field");
    made->sources = stericol_new_array(request->path_count, sizeof *made->sources);
    made->source_count = made->sources ? request->path_count : 0;
    stericol_input_reader reader = {context, units, &made->request, &made->sayings, NULL};
    stericol_status status =
        made->sources ? STERICOL_OK : stericol_fail_memory(context, 0, "the list of files");
    if (status == STERICOL_OK)
        status = read_sources(&reader, made);
    reader.file = NULL; /* what follows is about all files */
    if (status == STERICOL_OK)
        status = stericol_input_choose_members(&reader, made);
    if (status == STERICOL_OK)
        status = add_other_files(&reader, made);
    if (status == STERICOL_OK)
        status = find_stride(context, made);
    if (status == STERICOL_OK && made->sayings.failed)
        status = stericol_fail_memory(context, 0, "the assumptions");
    if (status != STERICOL_OK) {
        stericol_epoch_close(made);
        return status;
    }
    *epoch = made;
    return STERICOL_OK;
}

/* ---- what can be asked ---- */

const stericol_grid *stericol_epoch_grid(const stericol_epoch *epoch)
{
    return &epoch->grid;
}

bool stericol_epoch_has_salinity(const stericol_epoch *epoch)
{
    return epoch->states[STERICOL_INPUT_SALINITY].count > 0;
}

static stericol_epoch_variable shown(const stericol_epoch *epoch, stericol_input_quantity quantity)
{
    for (size_t i = 0; i < epoch->source_count; i++) {
        const stericol_input_variable *chosen = &epoch->sources[i].variable[quantity];
        if (chosen->present)
            return (stericol_epoch_variable){epoch->sources[i].path, chosen->name,        chosen->unit,
                                             chosen->standard_name,  chosen->reason,      chosen->kind,
                                             chosen->kind_assumed,   chosen->unit_assumed};
    }
    return (stericol_epoch_variable){0};
}

stericol_epoch_variable stericol_epoch_temperature(const stericol_epoch *epoch)
{
    return shown(epoch, STERICOL_INPUT_TEMPERATURE);
}

stericol_epoch_variable stericol_epoch_salinity(const stericol_epoch *epoch)
{
    return shown(epoch, STERICOL_INPUT_SALINITY);
}

size_t stericol_epoch_member_count(const stericol_epoch *epoch)
{
    return epoch->member_count;
}

const stericol_epoch_member *stericol_epoch_member_at(const stericol_epoch *epoch, size_t index)
{
    assert(index < epoch->member_count);
    return &epoch->members[index].shown;
}

const char *stericol_epoch_description(const stericol_epoch *epoch)
{
    return epoch->description;
}

const char *stericol_epoch_first_date(const stericol_epoch *epoch)
{
    return epoch->has_dates ? epoch->first_date : NULL;
}

const char *stericol_epoch_last_date(const stericol_epoch *epoch)
{
    return epoch->has_dates ? epoch->last_date : NULL;
}

void stericol_epoch_months(const stericol_epoch *epoch, size_t count[12])
{
    memset(count, 0, 12 * sizeof *count);
    for (size_t i = 0; i < epoch->member_count; i++)
        if (epoch->members[i].shown.month)
            count[epoch->members[i].shown.month - 1]++;
}

size_t stericol_epoch_assumption_count(const stericol_epoch *epoch)
{
    return epoch->sayings.count;
}

const char *stericol_epoch_assumption(const stericol_epoch *epoch, size_t index)
{
    assert(index < epoch->sayings.count);
    return epoch->sayings.texts[index];
}

size_t stericol_epoch_file_count(const stericol_epoch *epoch)
{
    return epoch->source_count;
}

const char *stericol_epoch_file(const stericol_epoch *epoch, size_t index, stericol_cf_identity *identity)
{
    assert(index < epoch->source_count);
    const stericol_input_source *source = &epoch->sources[index];
    if (identity)
        *identity = (stericol_cf_identity){source->bytes, source->changed, source->id};
    return source->path;
}
