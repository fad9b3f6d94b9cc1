/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The files of an epoch: thousands may be named, a few are open.
 */
#include "input/room.h"

#include <stdlib.h>
#include <string.h>

void stericol_input_source_close(stericol_input_source *source)
{
    for (int i = 0; i < STERICOL_INPUT_QUANTITIES; i++) {
        stericol_cf_field_close(source->field[i]);
        source->field[i] = NULL;
    }
    stericol_cf_close(source->file);
    source->file = NULL;
}

static void close_oldest(stericol_epoch *epoch)
{
    stericol_input_source *oldest = NULL;
    size_t open = 0;
    for (size_t i = 0; i < epoch->source_count; i++) {
        stericol_input_source *source = &epoch->sources[i];
        if (!source->file)
            continue;
        open++;
        if (!oldest || source->last_used < oldest->last_used)
            oldest = source;
    }
    if (open >= STERICOL_INPUT_MOST_OPEN)
        stericol_input_source_close(oldest);
}

stericol_status stericol_input_source_file(stericol_context *context, stericol_epoch *epoch, size_t index,
                                           stericol_cf_file **file)
{
    stericol_input_source *source = &epoch->sources[index];
    source->last_used = ++epoch->clock;
    *file = source->file;
    if (source->file)
        return STERICOL_OK;
    close_oldest(epoch);
    const stericol_cf_identity before = {.bytes = source->bytes, .changed = source->changed};
    const stericol_status status =
        stericol_cf_open_again(context, source->path, source->changed ? &before : NULL, &source->file);
    if (status != STERICOL_OK)
        return status;
    const stericol_cf_identity identity = stericol_cf_identity_of(source->file);
    if (source->changed && (identity.bytes != source->bytes || identity.changed != source->changed)) {
        stericol_input_source_close(source);
        return stericol_fail(context, STERICOL_INPUT, source->path, NULL, "start again",
                             "the file was changed while it was in use");
    }
    source->bytes = identity.bytes;
    source->changed = identity.changed;
    *file = source->file;
    return STERICOL_OK;
}

stericol_status stericol_input_source_field(stericol_context *context, stericol_epoch *epoch, size_t index,
                                            stericol_input_quantity quantity, stericol_cf_field **field)
{
    stericol_input_source *source = &epoch->sources[index];
    const stericol_input_variable *chosen = &source->variable[quantity];
    stericol_cf_file *file;
    stericol_status status = stericol_input_source_file(context, epoch, index, &file);
    if (status == STERICOL_OK && !source->field[quantity]) {
        const size_t open =
            epoch->source_count < STERICOL_INPUT_MOST_OPEN ? epoch->source_count : STERICOL_INPUT_MOST_OPEN;
        const stericol_cf_variable *variable = stericol_cf_find(file, chosen->name, NULL);
        if (!variable)
            return stericol_fail(context, STERICOL_INPUT, source->path, chosen->name, "start again",
                                 "the variable is no longer in the file");
        const size_t share = epoch->request.cache_bytes / (STERICOL_INPUT_QUANTITIES * open);
        /* 0 would mean the decoder's own default. */
        status = stericol_cf_field_open(context, file, variable, &chosen->axes, &chosen->conversion,
                                        epoch->request.cache_bytes && !share ? 1 : share,
                                        &source->field[quantity]);
    }
    *field = status == STERICOL_OK ? source->field[quantity] : NULL;
    return status;
}
