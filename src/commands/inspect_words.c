/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Words and small questions that every form of an inspection shares. */
#include "commands/inspect_inside.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

const char *stericol_inspect_quantity_name(stericol_inspect_quantity quantity)
{
    return quantity == STERICOL_INSPECT_TEMPERATURE ? "temperature" : "salinity";
}

const char *stericol_inspect_type_word(stericol_cf_type type)
{
    static const char *const words[] = {
        [STERICOL_CF_INT8] = "int8",      [STERICOL_CF_UINT8] = "uint8",   [STERICOL_CF_INT16] = "int16",
        [STERICOL_CF_UINT16] = "uint16",  [STERICOL_CF_INT32] = "int32",   [STERICOL_CF_UINT32] = "uint32",
        [STERICOL_CF_INT64] = "int64",    [STERICOL_CF_UINT64] = "uint64", [STERICOL_CF_FLOAT] = "float",
        [STERICOL_CF_DOUBLE] = "double",  [STERICOL_CF_CHAR] = "char",     [STERICOL_CF_STRING] = "string",
        [STERICOL_CF_OTHER] = "user type"};

    return words[type];
}

const char *stericol_inspect_kind_word(stericol_inspect_quantity quantity, int kind)
{
    static const char *const words[STERICOL_INSPECT_QUANTITIES][4] = {
        {[STERICOL_TEMPERATURE_UNKNOWN] = "unknown",
         [STERICOL_TEMPERATURE_IN_SITU] = "in-situ",
         [STERICOL_TEMPERATURE_POTENTIAL] = "potential",
         [STERICOL_TEMPERATURE_CONSERVATIVE] = "conservative"},
        {[STERICOL_SALINITY_UNKNOWN] = "unknown",
         [STERICOL_SALINITY_PRACTICAL] = "practical",
         [STERICOL_SALINITY_REFERENCE] = "reference",
         [STERICOL_SALINITY_ABSOLUTE] = "absolute"}};

    return kind >= 0 && kind < 4 ? words[quantity][kind] : "unknown";
}

stericol_epoch_variable stericol_inspect_chosen(const stericol_inspection *inspection,
                                                stericol_inspect_quantity quantity)
{
    return quantity == STERICOL_INSPECT_TEMPERATURE ? stericol_epoch_temperature(inspection->epoch)
                                                    : stericol_epoch_salinity(inspection->epoch);
}

const char *stericol_inspect_unit_word(const stericol_inspection *inspection,
                                       stericol_inspect_quantity quantity)
{
    if (quantity == STERICOL_INSPECT_TEMPERATURE)
        return "degC";
    return stericol_inspect_chosen(inspection, quantity).kind == STERICOL_SALINITY_PRACTICAL ? "1" : "g/kg";
}

const char *stericol_inspect_role(const stericol_inspection *inspection, const stericol_cf_variable *variable)
{
    for (int q = 0; inspection->epoch != NULL && q < STERICOL_INSPECT_QUANTITIES; q++) {
        stericol_inspect_quantity quantity = (stericol_inspect_quantity)q;

        if (inspection->reads[q] &&
            strcmp(stericol_inspect_chosen(inspection, quantity).name, variable->name) == 0)
            return stericol_inspect_quantity_name(quantity);
    }
    /* CF 1.10, section 1.3: a coordinate variable has one dimension, of its own name. */
    if (variable->rank == 1 &&
        strcmp(stericol_cf_dimension_at(inspection->file, variable->dimension[0])->name,
               variable->short_name) == 0)
        return "coordinate";
    return NULL;
}

bool stericol_inspect_is_packed(const stericol_cf_variable *variable)
{
    return stericol_cf_attribute_of(variable, "scale_factor") != NULL ||
           stericol_cf_attribute_of(variable, "add_offset") != NULL;
}

const char *stericol_inspect_area_words(const stericol_grid *grid)
{
    if (grid->cell_area != NULL)
        return grid->cell_area_source;
    return grid->latitude_bounds != NULL && grid->longitude_bounds != NULL
               ? "computed on a sphere from the file's own cell limits"
               : "computed on a sphere from limits half way between the positions";
}

const char *stericol_inspect_coordinate_word(const stericol_inspection *inspection)
{
    const stericol_grid *grid = stericol_epoch_grid(inspection->epoch);

    if (grid->own_depths)
        return inspection->axes.level_parametric ? "terrain_following" : "thickness";
    return grid->vertical == STERICOL_VERTICAL_PRESSURE ? "pressure" : "depth";
}

/* ---- times ---- */

static int by_start(const void *a, const void *b)
{
    const stericol_epoch_member *first = *(const stericol_epoch_member *const *)a;
    const stericol_epoch_member *second = *(const stericol_epoch_member *const *)b;

    return (first->start > second->start) - (first->start < second->start);
}

const stericol_epoch_member **stericol_inspect_members(const stericol_epoch *epoch)
{
    size_t count = stericol_epoch_member_count(epoch);
    const stericol_epoch_member **members = stericol_new_array(count, sizeof *members);

    for (size_t i = 0; members != NULL && i < count; i++)
        members[i] = stericol_epoch_member_at(epoch, i);
    if (members != NULL && count > 1 && members[0]->dated)
        qsort(members, count, sizeof *members, by_start);
    return members;
}

static int by_value(const void *a, const void *b)
{
    double first = *(const double *)a, second = *(const double *)b;

    return (first > second) - (first < second);
}

double stericol_inspect_time_step(const stericol_epoch_member *const *members, size_t count)
{
    double *steps, step = NAN;

    if (count < 2 || !members[0]->dated)
        return NAN;
    steps = stericol_new_doubles(count - 1);
    for (size_t i = 0; steps != NULL && i + 1 < count; i++)
        steps[i] = members[i + 1]->start - members[i]->start;
    if (steps != NULL) {
        qsort(steps, count - 1, sizeof *steps, by_value);
        step = steps[(count - 1) / 2];
    }
    free(steps);
    return step;
}

bool stericol_inspect_hole_after(const stericol_epoch_member *const *members, size_t i)
{
    double end = members[i]->end,
           length = fmax(end - members[i]->start, members[i + 1]->end - members[i + 1]->start);

    /* Intervals that meet leave at most rounding; half a member is a member that is not there. */
    return members[i]->dated && length > 0.0 && members[i + 1]->start - end > 0.5 * length;
}
