/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What should make the user look twice, and what to give to `change`. */
#include "commands/inspect_inside.h"

#include "stericol/column.h"

#include <float.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

/* A level needs this many values before a share of them means something; as in the judgement of reading. */
enum { FEWEST = 20 };
/* Share of a level that holds one and the same extreme value. */
static const double REPEATED_SHARE = 0.1;
/* No sea is that fresh as a whole; a fraction of 1 or a mass fraction called practical is. */
static const double FRACTION_MOST = 1.1;

/* "5 m", "level 3" */
enum { PLACE_ROOM = 48 };

static void name_place(const stericol_inspection *inspection, size_t level, char place[PLACE_ROOM])
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);

    if (grid->own_depths)
        snprintf(place, PLACE_ROOM, "level %zu", level + 1);
    else
        snprintf(place, PLACE_ROOM, "%.6g %s", grid->level[level],
                 grid->vertical == STERICOL_VERTICAL_PRESSURE ? "dbar" : "m");
}

/* ---- suspects ---- */

static void doubt_limits(stericol_inspection *inspection, stericol_inspect_quantity quantity)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const char *limits = quantity == STERICOL_INSPECT_TEMPERATURE ? "-4..45 degC" : "0..45";
    unsigned long long below = 0, above = 0;
    size_t levels = 0;

    for (size_t k = 0; k < grid->levels; k++) {
        const stericol_inspect_range *range = &inspection->values.levels[k].range[quantity];

        below += range->below;
        above += range->above;
        levels += range->below + range->above > 0;
    }
    if (levels > 0)
        stericol_inspect_add_line(
            &inspection->suspects, "outside_limits",
            "%s: %llu values below and %llu above %s, on %zu of %zu levels; they count as "
            "missing",
            stericol_inspect_chosen(inspection, quantity).name, below, above, limits, levels, grid->levels);
}

static const char *ending(size_t count)
{
    return count == 1 ? "" : "s";
}

static void doubt_constants(stericol_inspection *inspection, stericol_inspect_quantity quantity)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    size_t constant = 0, first = 0;
    char place[PLACE_ROOM];

    for (size_t k = 0; k < grid->levels; k++) {
        const stericol_inspect_range *range = &inspection->values.levels[k].range[quantity];

        if (range->valid >= FEWEST && !(range->high > range->low))
            first = constant++ == 0 ? k : first;
    }
    if (constant == 0)
        return;
    name_place(inspection, first, place);
    stericol_inspect_add_line(&inspection->suspects, "constant_level",
                              "%s: one and the same value, %.9g, all over %zu level%s%s%s",
                              stericol_inspect_chosen(inspection, quantity).name,
                              inspection->values.levels[first].range[quantity].low, constant,
                              ending(constant), constant == 1 ? ", at " : ", the first at ", place);
}

/* The least difference that the file's numbers can have near `value`, degC or the unit of salinity. */
static double step_near(const stericol_session *session, const stericol_inspection *inspection,
                        stericol_inspect_quantity quantity, double value)
{
    static const char *const units[STERICOL_INSPECT_QUANTITIES] = {"degree_Celsius", "1e-3"};
    stericol_epoch_variable chosen = stericol_inspect_chosen(inspection, quantity);
    const stericol_cf_variable *variable =
        inspection->file == NULL ? NULL : stericol_cf_find(inspection->file, chosen.name, NULL);
    const stericol_cf_attribute *factor =
        variable == NULL ? NULL : stericol_cf_attribute_of(variable, "scale_factor");
    double scale = 1.0, offset = 0.0, step;

    if (chosen.unit == NULL ||
        !stericol_cf_units_convert(session->units, chosen.unit, units[quantity], &scale, &offset)) {
        scale = 1.0;
        offset = 0.0;
    }
    /* Doubles too: mostly they were floats before. */
    step = (double)FLT_EPSILON * fabs(value - offset);
    if (factor != NULL && factor->numbers != NULL && factor->count > 0)
        step = fmax(step, fabs(scale * factor->numbers[0]));
    return step;
}

/*
 * Whether `count` values at one end of a range are more alike than rounding makes them: many, and apart from
 * the next one by far more than the numbers' own step, and by more than the rounding that a field of so
 * narrow a range may have seen.  Deep water is so uniform that rounding alone makes its values alike.
 */
static bool is_cut_off(const stericol_inspect_range *range, unsigned long long count, double gap, double step)
{
    static const double steps = 10.0, coarse = 0.1, narrow = 50.0;
    enum { MANY = 30 };

    return count >= MANY && (double)count > REPEATED_SHARE * (double)range->valid && gap > steps * step &&
           (gap > coarse || range->high - range->low > narrow * gap);
}

/* Values at the end of a level's range that are all the same: often a fill that is not declared. */
static void doubt_repeats(const stericol_session *session, stericol_inspection *inspection,
                          stericol_inspect_quantity quantity)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_range *shown = NULL;
    size_t repeated = 0;
    bool low = false;
    char place[PLACE_ROOM];

    for (size_t k = 0; k < grid->levels; k++) {
        const stericol_inspect_range *range = &inspection->values.levels[k].range[quantity];
        bool least = is_cut_off(range, range->at_low, range->next_low - range->low,
                                step_near(session, inspection, quantity, range->low));

        if (!least && !is_cut_off(range, range->at_high, range->high - range->next_high,
                                  step_near(session, inspection, quantity, range->high)))
            continue;
        if (repeated++ > 0)
            continue;
        shown = range;
        low = least;
        name_place(inspection, k, place);
    }
    if (shown == NULL)
        return;
    stericol_inspect_add_line(&inspection->suspects, "repeated_extreme",
                              "%s: on %zu level%s more than a tenth of the values are exactly the level's %s "
                              "(%.9g in %llu of %llu at %s): cut off, or a fill value that is not declared",
                              stericol_inspect_chosen(inspection, quantity).name, repeated, ending(repeated),
                              low ? "least" : "greatest", low ? shown->low : shown->high,
                              low ? shown->at_low : shown->at_high, shown->valid, place);
}

static void doubt_frozen(stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_inspect_level *coldest = NULL;
    unsigned long long frozen = 0;
    size_t levels = 0;
    char place[PLACE_ROOM];

    for (size_t k = 0; k < grid->levels; k++) {
        const stericol_inspect_level *level = &inspection->values.levels[k];

        frozen += level->frozen;
        levels += level->frozen > 0;
        if (level->frozen > 0 && (coldest == NULL || level->coldest < coldest->coldest)) {
            coldest = level;
            name_place(inspection, k, place);
        }
    }
    if (coldest != NULL)
        stericol_inspect_add_line(
            &inspection->suspects, "below_freezing",
            "%s: %llu value%s more than 0.5 K below the freezing point of sea water%s, on %zu of %zu levels, "
            "the coldest %.6g degC at %s: no liquid water; they count as water all the same",
            stericol_inspect_chosen(inspection, STERICOL_INSPECT_TEMPERATURE).name, frozen,
            ending((size_t)frozen),
            inspection->reads[STERICOL_INSPECT_SALINITY] ? " of their salinity" : " of salinity 35", levels,
            grid->levels, coldest->coldest, place);
}

static void doubt_zeros(stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    unsigned long long water = 0;
    size_t land = 0;
    const char *what = inspection->reads[STERICOL_INSPECT_SALINITY] ? "temperature and salinity 0" : "0 degC";

    for (size_t k = 0; k < grid->levels; k++) {
        const stericol_inspect_level *level = &inspection->values.levels[k];

        land += level->land_as_zeros;
        water += level->land_as_zeros ? 0 : level->zeros;
    }
    if (land > 0)
        stericol_inspect_add_line(
            &inspection->suspects, "land_as_zeros",
            "on %zu of %zu levels a tenth of the cells or more hold exactly %s: taken as "
            "land written as zeros",
            land, grid->levels, what);
    if (water > 0)
        stericol_inspect_add_line(
            &inspection->suspects, "zeros",
            "%llu points hold exactly %s, on levels where they are fewer than a tenth of "
            "the cells: they count as water",
            water, what);
}

static void doubt_fraction(stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    double most = -INFINITY;

    for (size_t k = 0; k < grid->levels; k++)
        most = fmax(most, inspection->values.levels[k].range[STERICOL_INSPECT_SALINITY].high);
    if (most > 0.0 && most <= FRACTION_MOST)
        stericol_inspect_add_line(
            &inspection->suspects, "fresh",
            "%s: no salinity above %.6g: perhaps a fraction, or of another unit than it says",
            stericol_inspect_chosen(inspection, STERICOL_INSPECT_SALINITY).name, most);
}

static void doubt_columns(stericol_inspection *inspection)
{
    const stericol_inspect_values *values = &inspection->values;

    if (values->broken > 0)
        stericol_inspect_add_line(&inspection->suspects, "holes",
                                  "%llu of %llu columns have missing levels between levels that are there",
                                  values->broken, values->columns);
    if (values->late > 0)
        stericol_inspect_add_line(&inspection->suspects, "no_surface",
                                  "%llu of %llu columns have nothing on the uppermost level", values->late,
                                  values->columns);
}

/* ---- suggestions ---- */

static void suggest_kinds(stericol_inspection *inspection)
{
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++) {
        stericol_inspect_quantity quantity = (stericol_inspect_quantity)q;
        const char *name = stericol_inspect_quantity_name(quantity), *choices, *option;
        stericol_epoch_variable chosen;

        if (!inspection->reads[q])
            continue;
        chosen = stericol_inspect_chosen(inspection, quantity);
        if (!chosen.kind_assumed)
            continue;
        option = q == STERICOL_INSPECT_TEMPERATURE ? "--temperature-kind" : "--salinity-kind";
        choices = q == STERICOL_INSPECT_TEMPERATURE ? "in-situ|potential|conservative"
                                                    : "practical|reference|absolute";
        stericol_inspect_add_line(
            &inspection->suggestions, option,
            "%s %s, if you know better: %s is taken as %s because nothing certain is said", option, choices,
            name, stericol_inspect_kind_word(quantity, chosen.kind));
    }
}

static void suggest_times(stericol_inspection *inspection)
{
    size_t count = stericol_epoch_member_count(inspection->epoch);
    const char *first = stericol_epoch_first_date(inspection->epoch);

    if (count < 2)
        return;
    if (first != NULL)
        stericol_inspect_add_line(
            &inspection->suggestions, "--earlier-time",
            "--earlier-time FROM..TO and --later-time FROM..TO within %s..%s: else all %zu "
            "times make one epoch",
            first, stericol_epoch_last_date(inspection->epoch), count);
    else
        stericol_inspect_add_line(
            &inspection->suggestions, "--earlier-step",
            "--earlier-step A..B and --later-step A..B within 1..%zu: else all make one epoch", count);
}

static void suggest_vertical(stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);
    const stericol_column_options usual = stericol_column_options_default();
    double top = grid->level_bounds != NULL ? grid->level_bounds[0] : grid->level[0];
    unsigned long long bottom = inspection->values.levels[grid->levels - 1].ends;

    if (grid->own_depths)
        return;
    if (top > 0.0 && grid->level[0] > usual.surface_reach)
        stericol_inspect_add_line(
            &inspection->suggestions, "--surface-reach",
            "--surface-reach M of at least %.6g: the uppermost level lies deeper than the "
            "%g m to which it is carried up",
            grid->level[0], usual.surface_reach);
    if (bottom > 0)
        stericol_inspect_add_line(
            &inspection->suggestions, "--bathymetry",
            "--bathymetry FILE, if there is one: what lies below the deepest level, which %llu of %llu "
            "columns reach, is unknown",
            bottom, inspection->values.columns);
}

static void suggest_salinity(stericol_inspection *inspection)
{
    if (inspection->reads[STERICOL_INSPECT_TEMPERATURE] && !inspection->reads[STERICOL_INSPECT_SALINITY] &&
        inspection->refusals.count == 0) {
        bool alone = inspection->path != NULL && inspection->paths->count > 1;

        stericol_inspect_add_line(
            &inspection->conditions, "no_salinity",
            "would be refused%s without --background-salinity or --constant-salinity: no salinity in %s",
            alone ? " by itself" : "", inspection->path != NULL ? "this file" : "these files");
        stericol_inspect_add_line(
            &inspection->suggestions, "--background-salinity",
            "a file with salinity beside it; or --background-salinity FILE or --constant-salinity VALUE, "
            "which give the thermosteric part and heat alone");
    }
    if (inspection->salinity_alone)
        stericol_inspect_add_line(&inspection->suggestions, "temperature",
                                  "a file with temperature beside it: this one holds salinity alone");
}

static void suggest_areas(stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);

    if (grid->curvilinear && grid->cell_area == NULL && grid->latitude_bounds == NULL)
        stericol_inspect_add_line(
            &inspection->suggestions, "--cell-area",
            "--cell-area FILE, if there is one: a curvilinear grid without limits of its cells");
}

/* Refused where all that would be used was looked at; else other times may hold something. */
static stericol_status judge_emptiness(stericol_session *session, stericol_inspection *inspection)
{
    stericol_inspect_quantity main = inspection->reads[STERICOL_INSPECT_TEMPERATURE]
                                         ? STERICOL_INSPECT_TEMPERATURE
                                         : STERICOL_INSPECT_SALINITY;
    stericol_epoch_variable chosen = stericol_inspect_chosen(inspection, main);

    if (inspection->values.columns > 0 || inspection->refusals.count > 0)
        return STERICOL_OK;
    if (inspection->values.members < stericol_epoch_member_count(inspection->epoch)) {
        stericol_inspect_add_line(&inspection->suspects, "empty", "no column has a value at any level of %s",
                                  inspection->values.first);
        return STERICOL_OK;
    }
    return stericol_inspect_refuse(session, inspection,
                                   stericol_fail(session->context, STERICOL_NOTHING, chosen.file, chosen.name,
                                                 "give a file that holds data",
                                                 "no column has a value at any level"));
}

stericol_status stericol_inspect_judge(stericol_session *session, stericol_inspection *inspection)
{
    if (inspection->epoch == NULL || inspection->values.levels == NULL)
        return STERICOL_OK;
    for (int q = 0; q < STERICOL_INSPECT_QUANTITIES; q++)
        if (inspection->reads[q]) {
            doubt_limits(inspection, (stericol_inspect_quantity)q);
            doubt_constants(inspection, (stericol_inspect_quantity)q);
            doubt_repeats(session, inspection, (stericol_inspect_quantity)q);
        }
    if (inspection->reads[STERICOL_INSPECT_TEMPERATURE])
        doubt_frozen(inspection);
    doubt_zeros(inspection);
    if (inspection->reads[STERICOL_INSPECT_SALINITY])
        doubt_fraction(inspection);
    doubt_columns(inspection);
    suggest_salinity(inspection);
    suggest_kinds(inspection);
    suggest_times(inspection);
    suggest_vertical(inspection);
    suggest_areas(inspection);
    return judge_emptiness(session, inspection);
}
