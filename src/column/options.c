/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What is asked of a sweep: defaults, words, and the cutting of depths by layers. */
#include "column/sweep.h"

#include <math.h>

stericol_column_options stericol_column_options_default(void)
{
    static const stericol_layer whole = {0.0, (double)INFINITY};
    return (stericol_column_options){
        .attribution = STERICOL_ATTRIBUTION_SYMMETRIC,
        .vertical = STERICOL_VERTICAL_LINEAR,
        .coordinate = STERICOL_COORDINATE_DEPTH,
        .surface_reach = 20.0,
        .gap_reach = (double)NAN,
        .layers = &whole,
        .layer_count = 1,
    };
}

const char *stericol_column_flag_word(int flag)
{
    static const char *const words[] = {
#define STERICOL_COLUMN_FLAG_WORD(code, value, word) [value] = (word),
        STERICOL_COLUMN_FLAG_LIST(STERICOL_COLUMN_FLAG_WORD)
#undef STERICOL_COLUMN_FLAG_WORD
    };
    return flag < 0 || flag >= STERICOL_COLUMN_FLAGS ? "unknown" : words[flag];
}

static const char *fault_of(const stericol_column_options *options)
{
    if (options->layer_count == 0)
        return "no layer is asked for";
    if (options->layer_count > STERICOL_MOST_LAYERS)
        return "more than 64 layers are asked for";
    for (size_t i = 0; i < options->layer_count; i++) {
        const stericol_layer *layer = &options->layers[i];
        if (!(layer->upper >= 0.0) || !isfinite(layer->upper) || !(layer->lower > layer->upper))
            return "a layer does not lie below the surface with its lower limit below its upper one";
    }
    if (!(options->surface_reach >= 0.0) || !(options->bottom_reach >= 0.0) || options->gap_reach < 0.0)
        return "a reach is negative";
    if (!(options->reference_density >= 0.0) || !isfinite(options->reference_density))
        return "the reference density is not a positive number";
    if ((options->vertical == STERICOL_VERTICAL_STEFFEN || options->vertical == STERICOL_VERTICAL_AKIMA) &&
        options->levels == 0)
        return "splines are asked for without the number of levels";
    return NULL;
}

/* Puts a limit in its place among those there already. */
static void add_limit(stericol_cuts *cuts, double limit)
{
    size_t at = 0;
    while (at < cuts->limit_count && cuts->limit[at] < limit)
        at++;
    if (at < cuts->limit_count && cuts->limit[at] <= limit)
        return;
    for (size_t i = cuts->limit_count; i > at; i--)
        cuts->limit[i] = cuts->limit[i - 1];
    cuts->limit[at] = limit;
    cuts->limit_count++;
}

static size_t number_of(const stericol_cuts *cuts, double limit)
{
    size_t at = 0;
    while (cuts->limit[at] < limit)
        at++;
    return at;
}

static bool is_asked_for(const stericol_cuts *cuts, size_t upper)
{
    for (size_t i = 0; i < cuts->layer_count; i++)
        if (cuts->layer[i].upper <= upper && upper < cuts->layer[i].lower)
            return true;
    return false;
}

bool stericol_cut_depths(const stericol_column_options *options, stericol_cuts *cuts, const char **fault)
{
    *cuts = (stericol_cuts){0};
    *fault = fault_of(options);
    if (*fault != NULL)
        return false;
    for (size_t i = 0; i < options->layer_count; i++) {
        add_limit(cuts, options->layers[i].upper);
        add_limit(cuts, options->layers[i].lower);
        if (options->layers[i].lower > cuts->deepest)
            cuts->deepest = options->layers[i].lower;
    }
    cuts->layer_count = options->layer_count;
    for (size_t i = 0; i < cuts->layer_count; i++) {
        cuts->layer[i].upper = number_of(cuts, options->layers[i].upper);
        cuts->layer[i].lower = number_of(cuts, options->layers[i].lower);
    }
    for (size_t limit = 0; limit + 1 < cuts->limit_count; limit++)
        if (is_asked_for(cuts, limit))
            cuts->segment[cuts->segment_count++] = (stericol_segment){limit, limit + 1};
    for (size_t i = 0; i < cuts->layer_count; i++) {
        stericol_layer_range *layer = &cuts->layer[i];
        while (cuts->segment[layer->first].upper != layer->upper)
            layer->first++;
        layer->last = layer->first;
        while (cuts->segment[layer->last].lower != layer->lower)
            layer->last++;
    }
    return true;
}
