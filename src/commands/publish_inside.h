/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The parts of publishing; nobody else includes this. */
#ifndef STERICOL_COMMANDS_PUBLISH_INSIDE_H
#define STERICOL_COMMANDS_PUBLISH_INSIDE_H

#include "commands/publish.h"

typedef struct stericol_publication {
    const stericol_setup *setup;
    stericol_result *result; /* NULL without --output */
    stericol_change_layout layout;
    stericol_pair_outcome outcome;
    size_t region_count;
    size_t *chosen; /* [region_count] indices into the setup's regions */
    const char **region_names;
    double (*layer_bounds)[2]; /* [layers] */
    char created[STERICOL_SESSION_TIME_ROOM];
} stericol_publication;

/* publish.c: a quantity of a region, in its SI unit; NaN where nothing was summed. */
double stericol_publish_value(const stericol_pair_outcome *outcome, double ocean_area,
                              stericol_region_quantity quantity, size_t region, size_t layer);
/* publish_words.c: what the user must know beside the numbers; provenance attributes; the table. */
void stericol_publish_warnings(stericol_session *session, const stericol_publication *publication);
stericol_status stericol_publish_provenance(stericol_session *session, stericol_publication *publication);
stericol_status stericol_publish_table(stericol_session *session, const stericol_publication *publication);

#endif
