/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/column_inside.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Levels closer than this are one: no instrument tells them apart, and conversions round. */
static const double one_level = 1e-6; /* m or dbar */

/* ---- kinds ---- */

/* Two epochs of different kinds, one of them only assumed, would make centimetres out of nothing. */
static stericol_status check_kinds(stericol_session *session, const stericol_working_table tables[2])
{
    for (size_t e = 0; e < 2; e++) {
        const stericol_working_table *one = &tables[e], *other = &tables[1 - e];

        if (one->temperature_assumed && one->rule.temperature != other->rule.temperature)
            return stericol_fail(session->context, STERICOL_INPUT, one->path, one->temperature_name,
                                 "name it by its kind (ct, theta, in_situ_temperature)",
                                 "would be taken as temperature in situ, but the other table has '%s'",
                                 other->temperature_name);
        if (one->salinity_assumed && one->rule.salinity != other->rule.salinity)
            return stericol_fail(session->context, STERICOL_INPUT, one->path, one->salinity_name,
                                 "name it by its kind (practical_salinity, reference_salinity, "
                                 "absolute_salinity)",
                                 "would be taken as practical salinity, but the other table has '%s'",
                                 other->salinity_name);
    }
    return STERICOL_OK;
}

/* ---- room ---- */

static stericol_status new_levels(stericol_session *session, const stericol_working_table *table,
                                  double latitude, size_t room, stericol_working_levels *levels)
{
    double *all = stericol_new_array(6 * room, sizeof *all);

    if (all == NULL)
        return stericol_fail_memory(session->context, 0, "the levels");
    *levels = (stericol_working_levels){
        .water = table->rule.water,
        .latitude = latitude,
        .coordinate = table->coordinate,
        .depth = all,
        .pressure = all + room,
        .salinity = {all + 2 * room, all + 3 * room},
        .temperature = {all + 4 * room, all + 5 * room},
    };
    return STERICOL_OK;
}

void stericol_working_levels_free(stericol_working_levels *levels)
{
    free(levels->depth);
    *levels = (stericol_working_levels){0};
}

/* ---- two tables ---- */

/* Where a table's rows lie in a coordinate. */
static const double *positions(const stericol_working_table *table, stericol_coordinate coordinate)
{
    return coordinate == STERICOL_COORDINATE_DEPTH ? table->depth : table->pressure;
}

static bool same_levels(const stericol_working_table tables[2])
{
    const stericol_coordinate coordinate = tables[0].coordinate;
    const double *a = positions(&tables[0], coordinate), *b = positions(&tables[1], coordinate);

    if (tables[0].count != tables[1].count)
        return false;
    for (size_t i = 0; i < tables[0].count; i++)
        if (!(fabs(a[i] - b[i]) <= one_level))
            return false;
    return true;
}

static bool is_valid(const stericol_working_table *table, size_t row)
{
    return isfinite(table->salinity[row]) && isfinite(table->temperature[row]);
}

/* The state of a table at a position: its own row's, or linear between the samples around it. */
typedef struct follower {
    const stericol_working_table *table;
    const double *position;
    double gap_reach;
    size_t next; /* the first row at or below the place asked for last */
} follower;

/* How wide a gap is bridged below a sample at `depth`, all m: `asked`, or where that is NaN the default rule
   of --gap-reach. */
static double bridged_at(double asked, double depth)
{
    return isnan(asked) ? fmin(fmax(50.0 + 0.225 * depth, 50.0), 500.0) : asked;
}

static bool is_bridged(const follower *f, size_t upper, size_t lower)
{
    const double depth = f->table->depth[upper];

    return f->table->depth[lower] - depth <= bridged_at(f->gap_reach, depth) + one_level;
}

static void state_at(follower *f, double place, double *salinity, double *temperature)
{
    const stericol_working_table *t = f->table;
    size_t upper, lower;
    double share;

    *salinity = *temperature = (double)NAN;
    while (f->next < t->count && f->position[f->next] < place - one_level)
        f->next++;
    if (f->next < t->count && f->position[f->next] <= place + one_level) {
        *salinity = t->salinity[f->next];
        *temperature = t->temperature[f->next];
        return;
    }
    for (lower = f->next; lower < t->count && !is_valid(t, lower);)
        lower++;
    for (upper = f->next; upper > 0 && !is_valid(t, upper - 1);)
        upper--;
    if (lower == t->count || upper == 0 || !is_bridged(f, upper - 1, lower))
        return;
    upper--;
    share = (place - f->position[upper]) / (f->position[lower] - f->position[upper]);
    *salinity = t->salinity[upper] + share * (t->salinity[lower] - t->salinity[upper]);
    *temperature = t->temperature[upper] + share * (t->temperature[lower] - t->temperature[upper]);
}

/* All levels of both tables, from the surface down. */
static void merge_levels(const stericol_working_table tables[2], stericol_working_levels *levels)
{
    const double *place[2] = {positions(&tables[0], levels->coordinate),
                              positions(&tables[1], levels->coordinate)};
    size_t at[2] = {0, 0};

    while (at[0] < tables[0].count || at[1] < tables[1].count) {
        size_t e = 0;

        if (at[0] == tables[0].count ||
            (at[1] < tables[1].count && place[1][at[1]] < place[0][at[0]] - one_level))
            e = 1;
        levels->depth[levels->count] = tables[e].depth[at[e]];
        levels->pressure[levels->count] = tables[e].pressure[at[e]];
        if (e == 0 && at[1] < tables[1].count && place[1][at[1]] <= place[0][at[0]] + one_level)
            at[1]++;
        at[e]++;
        levels->count++;
    }
}

/* ---- gaps ---- */

static const stericol_working_gap no_gap = {(double)NAN, (double)NAN, (double)NAN, 0.0};

/* Looks at the spacings of the rows at which all `series` have values and which reach into from..to, m. */
static void look_for_gaps(const double *depth, const double *const *series, size_t series_count, size_t count,
                          double from, double to, double gap_reach, stericol_working_gap *gap)
{
    double above = (double)NAN;

    for (size_t i = 0; i < count; i++) {
        const double width = depth[i] - above;
        bool valid = true;

        for (size_t s = 0; s < series_count; s++)
            valid = valid && isfinite(series[s][i]);
        if (!valid)
            continue;
        if (!isnan(above) && depth[i] > from && above < to) {
            gap->bridging = fmax(gap->bridging, ceil(width - one_level));
            if (width > bridged_at(gap_reach, above) + one_level && !(gap->upper <= above)) {
                gap->upper = above;
                gap->lower = depth[i];
                gap->allowed = bridged_at(gap_reach, above);
            }
        }
        above = depth[i];
    }
}

/* Gaps of the tables themselves come first: between common samples they look wider than they are. */
static void find_gap_of_pair(const stericol_working_table tables[2], double gap_reach,
                             stericol_working_levels *levels)
{
    const double *const all[] = {levels->salinity[0], levels->temperature[0], levels->salinity[1],
                                 levels->temperature[1]};
    double from = 0.0, to = (double)INFINITY;

    for (size_t e = 0; e < 2; e++) {
        size_t first = 0, last = tables[e].count;

        while (first < last && !is_valid(&tables[e], first))
            first++;
        while (last > first && !is_valid(&tables[e], last - 1))
            last--;
        if (first < last) {
            from = fmax(from, tables[e].depth[first]);
            to = fmin(to, tables[e].depth[last - 1]);
        }
    }
    levels->gap = no_gap;
    for (size_t e = 0; e < 2; e++) {
        const double *const own[] = {tables[e].salinity, tables[e].temperature};

        look_for_gaps(tables[e].depth, own, 2, tables[e].count, from, to, gap_reach, &levels->gap);
    }
    if (isnan(levels->gap.upper))
        look_for_gaps(levels->depth, all, 4, levels->count, 0.0, (double)INFINITY, gap_reach, &levels->gap);
}

/* ---- */

stericol_status stericol_working_levels_pair(stericol_session *session,
                                             const stericol_working_table tables[2], double latitude,
                                             double gap_reach, stericol_working_levels *levels)
{
    const bool same = same_levels(tables);
    stericol_status status = check_kinds(session, tables);

    *levels = (stericol_working_levels){0};
    if (status == STERICOL_OK)
        status = new_levels(session, &tables[0], latitude, tables[0].count + tables[1].count, levels);
    if (status != STERICOL_OK)
        return status;
    merge_levels(tables, levels);
    for (size_t e = 0; e < 2; e++) {
        follower f = {.table = &tables[e],
                      .position = positions(&tables[e], levels->coordinate),
                      .gap_reach = gap_reach};
        const double *place =
            levels->coordinate == STERICOL_COORDINATE_DEPTH ? levels->depth : levels->pressure;

        for (size_t i = 0; i < levels->count; i++)
            state_at(&f, place[i], &levels->salinity[e][i], &levels->temperature[e][i]);
    }
    find_gap_of_pair(tables, gap_reach, levels);
    if (tables[0].coordinate != tables[1].coordinate)
        stericol_notice(session->context, STERICOL_NOTE, tables[1].path, NULL,
                        "is written in %s and converted to the other table's %s",
                        tables[1].coordinate == STERICOL_COORDINATE_DEPTH ? "depth" : "pressure",
                        tables[0].coordinate == STERICOL_COORDINATE_DEPTH ? "depth" : "pressure");
    if (!same)
        stericol_notice(session->context, STERICOL_NOTE, NULL, NULL,
                        "the tables have different levels: all levels of both are used, each table's "
                        "salinity and temperature (%s) linear between its own, within its own range",
                        levels->water.equation == STERICOL_EQUATION_EOS80 ? "practical, potential"
                                                                          : "absolute, conservative");
    return STERICOL_OK;
}

/* ---- one table ---- */

void stericol_standard_ocean(const stericol_water *water, double pressure, double *salinity,
                             double *temperature)
{
    if (water->equation == STERICOL_EQUATION_EOS80) {
        *salinity = 35.0;
        *temperature = stericol_eos80_potential_temperature(35.0, 0.0, pressure, 0.0);
    } else {
        *salinity = STERICOL_STANDARD_SALINITY;
        *temperature = 0.0;
    }
}

stericol_status stericol_working_levels_single(stericol_session *session, const stericol_working_table *table,
                                               double latitude, double gap_reach,
                                               stericol_working_levels *levels)
{
    const double *const own[] = {table->salinity, table->temperature};
    const size_t bytes = table->count * sizeof *levels->depth;
    stericol_status status = new_levels(session, table, latitude, table->count, levels);

    if (status != STERICOL_OK)
        return status;
    levels->single = true;
    levels->coordinate = STERICOL_COORDINATE_PRESSURE;
    levels->count = table->count;
    memcpy(levels->depth, table->depth, bytes);
    memcpy(levels->pressure, table->pressure, bytes);
    memcpy(levels->salinity[1], table->salinity, bytes);
    memcpy(levels->temperature[1], table->temperature, bytes);
    for (size_t i = 0; i < table->count; i++)
        stericol_standard_ocean(&levels->water, levels->pressure[i], &levels->salinity[0][i],
                                &levels->temperature[0][i]);
    levels->gap = no_gap;
    look_for_gaps(table->depth, own, 2, table->count, 0.0, (double)INFINITY, gap_reach, &levels->gap);
    return STERICOL_OK;
}
