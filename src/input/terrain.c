/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Terrain-following levels: depths computed from formula_terms (CF 1.10, appendix D).  z is positive up,
 * depth positive; what is given is the depth below the sea surface, eta - z, since that is the water above
 * the sample.
 */
#include "input/room.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

typedef enum formula { SIGMA, S, S_G1, S_G2, SIGMA_Z } formula;

static const struct {
    const char *standard_name;
    formula form;
} forms[] = {{"ocean_sigma_coordinate", SIGMA},
             {"ocean_s_coordinate", S},
             {"ocean_s_coordinate_g1", S_G1},
             {"ocean_s_coordinate_g2", S_G2},
             {"ocean_sigma_z_coordinate", SIGMA_Z}};

/* s (or sigma) and C (or zlev) of samples or of limits, from the surface down. */
typedef struct level_curve {
    size_t count;
    double *s, *stretch;
} level_curve;

struct stericol_input_terrain {
    formula form;
    size_t columns;
    level_curve samples, limits; /* limits.count 0: halfway between samples */
    double critical, a, b;
    double *depth, *surface; /* [rows][columns]; surface NULL: 0 */
};

void stericol_input_terrain_close(stericol_input_terrain *terrain)
{
    if (!terrain)
        return;
    free(terrain->samples.s);
    free(terrain->samples.stretch);
    free(terrain->limits.s);
    free(terrain->limits.stretch);
    free(terrain->depth);
    free(terrain->surface);
    free(terrain);
}

static const stericol_cf_variable *term(const stericol_input_reader *reader, const stericol_cf_variable *axis,
                                        const char *key)
{
    char *name = stericol_input_term(stericol_cf_text_of(axis, "formula_terms"), key);
    const stericol_cf_variable *found = name ? stericol_cf_find(reader->file, name, axis) : NULL;
    free(name);
    return found;
}

static stericol_status missing_term(const stericol_input_reader *reader, const stericol_cf_variable *axis,
                                    const char *key)
{
    return stericol_input_refuse(
        reader, axis->name, "put the missing part into the file, or give the cells with --thickness",
        "its formula_terms name no variable for \"%s\" in the file, so depths cannot be computed", key);
}

/* An omitted term is zero (CF 1.10, section 4.3.3). */
static stericol_status read_number(const stericol_input_reader *reader, const stericol_cf_variable *axis,
                                   const char *key, bool needed, double *value)
{
    const stericol_cf_variable *variable = term(reader, axis, key);
    double *values = NULL;
    size_t count = 0;
    *value = 0.0;
    if (!variable)
        return needed ? missing_term(reader, axis, key) : STERICOL_OK;
    const stericol_status status =
        stericol_cf_read_all(reader->context, reader->file, variable, 1, &values, &count);
    if (status == STERICOL_OK)
        *value = values[0];
    free(values);
    if (status == STERICOL_OK && isnan(*value))
        return stericol_input_refuse(reader, variable->name, "correct the value",
                                     "a missing value in a formula term");
    return status;
}

static stericol_status read_line(const stericol_input_reader *reader, const stericol_cf_variable *axis,
                                 const char *key, size_t count, bool reversed, double **values)
{
    const stericol_cf_variable *variable = term(reader, axis, key);
    size_t found = 0;
    if (!variable)
        return missing_term(reader, axis, key);
    stericol_status status =
        stericol_cf_read_all(reader->context, reader->file, variable, count, values, &found);
    if (status == STERICOL_OK && found != count)
        status = stericol_input_refuse(reader, variable->name, "correct the file",
                                       "%zu values where %zu levels need one each", found, count);
    for (size_t i = 0; reversed && status == STERICOL_OK && i < count / 2; i++) {
        const double kept = (*values)[i];
        (*values)[i] = (*values)[count - 1 - i];
        (*values)[count - 1 - i] = kept;
    }
    return status;
}

static stericol_status read_curve(const stericol_input_reader *reader, const stericol_cf_variable *axis,
                                  formula form, size_t count, bool reversed, level_curve *curve)
{
    const bool sigma = form == SIGMA || form == SIGMA_Z;
    stericol_status status = read_line(reader, axis, sigma ? "sigma" : "s", count, reversed, &curve->s);
    if (status == STERICOL_OK && (form == S_G1 || form == S_G2))
        status = read_line(reader, axis, "C", count, reversed, &curve->stretch);
    if (status == STERICOL_OK && form == SIGMA_Z)
        status = read_line(reader, axis, "zlev", count, reversed, &curve->stretch);
    curve->count = count;
    for (size_t i = 0; i < count && status == STERICOL_OK; i++)
        if (form != SIGMA_Z && (isnan(curve->s[i]) || (curve->stretch && isnan(curve->stretch[i]))))
            status = stericol_input_refuse(reader, axis->name, "correct the file",
                                           "a formula term of level %zu is missing", i + 1);
    return status;
}

static stericol_status read_plane(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                                  size_t step, const stericol_grid *grid, double **values)
{
    stericol_cf_field_axes axes = {.time = STERICOL_CF_NO_AXIS, .level = STERICOL_CF_NO_AXIS};
    stericol_cf_conversion conversion = {1.0, 0.0, -INFINITY, INFINITY};
    stericol_input_roles roles;
    stericol_cf_field *field = NULL;
    size_t times = 1;
    stericol_status status = stericol_input_plane_axes(reader, variable, grid, &axes.row, &axes.column);
    if (status != STERICOL_OK)
        return status;
    if (!stericol_cf_units_convert(reader->units, stericol_cf_text_of(variable, "units"), "m",
                                   &conversion.scale, &conversion.offset))
        stericol_input_say(reader, STERICOL_WARNING, variable->name, "no unit of length; taken in metres");
    stericol_input_find_roles(reader, variable, &roles);
    for (size_t i = 0; i < variable->rank; i++)
        if (roles.sign[i].role == STERICOL_INPUT_TIME) {
            axes.time = (int)i;
            times = stericol_cf_dimension_at(reader->file, variable->dimension[i])->length;
        }
    *values = stericol_new_doubles(grid->rows * grid->columns);
    if (!*values)
        return stericol_fail_memory(reader->context, grid->rows * grid->columns * sizeof(double),
                                    "the depths");
    status = stericol_cf_field_open(reader->context, reader->file, variable, &axes, &conversion, 0, &field);
    if (status == STERICOL_OK)
        status = stericol_cf_field_read(reader->context, field, step < times ? step : 0, 0, 1, 0, grid->rows,
                                        *values, NULL);
    stericol_cf_field_close(field);
    return status;
}

/* The axis of the cell limits: one more level, the same formula, the same sea floor. */
static const stericol_cf_variable *find_limits(const stericol_input_reader *reader,
                                               const stericol_cf_variable *axis, size_t count)
{
    const char *standard_name = stericol_cf_text_of(axis, "standard_name");
    const stericol_cf_variable *depth = term(reader, axis, "depth");
    for (size_t i = 0; i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *other = stericol_cf_variable_at(reader->file, i);
        const char *name = stericol_cf_text_of(other, "standard_name");
        if (other->rank == 1 && name && strcmp(name, standard_name) == 0 &&
            term(reader, other, "depth") == depth &&
            stericol_cf_dimension_at(reader->file, other->dimension[0])->length == count + 1)
            return other;
    }
    return NULL;
}

static stericol_status read_terms(const stericol_input_reader *reader, const stericol_cf_variable *axis,
                                  size_t step, const stericol_grid *grid, bool reversed,
                                  stericol_input_terrain *terrain)
{
    const stericol_cf_variable *depth = term(reader, axis, "depth"), *surface = term(reader, axis, "eta");
    const stericol_cf_variable *limits = find_limits(reader, axis, grid->levels);
    if (!depth)
        return missing_term(reader, axis, "depth");
    stericol_status status =
        read_curve(reader, axis, terrain->form, grid->levels, reversed, &terrain->samples);
    if (status == STERICOL_OK && limits)
        status = read_curve(reader, limits, terrain->form, grid->levels + 1, reversed, &terrain->limits);
    if (status == STERICOL_OK)
        status = read_plane(reader, depth, 0, grid, &terrain->depth);
    if (status == STERICOL_OK && surface)
        status = read_plane(reader, surface, step, grid, &terrain->surface);
    if (status == STERICOL_OK && terrain->form != SIGMA)
        status = read_number(reader, axis, "depth_c", true, &terrain->critical);
    if (status == STERICOL_OK && terrain->form == S)
        status = read_number(reader, axis, "a", true, &terrain->a);
    if (status == STERICOL_OK && terrain->form == S)
        status = read_number(reader, axis, "b", false, &terrain->b);
    if (status == STERICOL_OK)
        stericol_input_say(reader, STERICOL_NOTE, axis->name,
                           "terrain-following levels: depths below the sea surface from formula_terms; sea "
                           "surface %s; cells %s",
                           surface ? "of the first time chosen" : "taken as 0, there is none in the file",
                           limits ? "between the limits that the file gives" : "halfway between samples");
    return status;
}

stericol_status stericol_input_terrain_open(const stericol_input_reader *reader,
                                            const stericol_cf_variable *variable,
                                            const stericol_input_layout *layout, size_t step,
                                            const stericol_grid *grid, bool reversed,
                                            stericol_input_terrain **terrain)
{
    const char *standard_name = stericol_cf_text_of(layout->level, "standard_name");
    size_t known = sizeof forms / sizeof *forms;
    *terrain = NULL;
    (void)variable;
    for (size_t i = 0; standard_name && i < sizeof forms / sizeof *forms; i++)
        if (strcmp(standard_name, forms[i].standard_name) == 0)
            known = i;
    if (known == sizeof forms / sizeof *forms)
        return stericol_input_refuse(
            reader, layout->level->name,
            "give the cells with --thickness, or put the field on levels of depth first",
            "terrain-following levels of a kind that is not read (%s)",
            standard_name ? standard_name : "no standard_name");
    if (!stericol_cf_text_of(layout->level, "formula_terms"))
        return stericol_input_refuse(
            reader, layout->level->name,
            "give the cells with --thickness, or put the field on levels of depth first",
            "terrain-following levels without formula_terms");
    stericol_input_terrain *made = stericol_new_array(1, sizeof *made);
    if (!made)
        return stericol_fail_memory(reader->context, sizeof *made, "the depths");
    made->form = forms[known].form;
    made->columns = grid->columns;
    const stericol_status status = read_terms(reader, layout->level, step, grid, reversed, made);
    if (status != STERICOL_OK) {
        stericol_input_terrain_close(made);
        return status;
    }
    *terrain = made;
    return STERICOL_OK;
}

/* Height z of a level, positive up (the formulas of appendix D, in its order). */
static double height(const stericol_input_terrain *terrain, const level_curve *curve, size_t k, double depth,
                     double eta)
{
    const double s = curve->s[k], hc = terrain->critical;
    double c;
    switch (terrain->form) {
    case SIGMA:
        return eta + s * (depth + eta);
    case S:
        c = (1.0 - terrain->b) * sinh(terrain->a * s) / sinh(terrain->a) +
            terrain->b * (tanh(terrain->a * (s + 0.5)) / (2.0 * tanh(0.5 * terrain->a)) - 0.5);
        return eta * (1.0 + s) + hc * s + (depth - hc) * c;
    case S_G1:
        c = hc * s + (depth - hc) * curve->stretch[k];
        return c + eta * (1.0 + c / depth);
    case S_G2:
        c = (hc * s + depth * curve->stretch[k]) / (hc + depth);
        return eta + (eta + depth) * c;
    case SIGMA_Z:
        if (!isnan(s))
            return eta + s * (fmin(hc, depth) + eta);
        return -curve->stretch[k] > depth ? (double)NAN : curve->stretch[k];
    }
    return NAN;
}

stericol_status stericol_input_terrain_load(stericol_context *context, const stericol_input_terrain *terrain,
                                            size_t level0, size_t levels, size_t row0, size_t rows,
                                            double *depth, double *upper, double *lower)
{
    const size_t plane = rows * terrain->columns, last = terrain->samples.count - 1;
    (void)context;
    for (size_t level = level0; level < level0 + levels; level++) {
        for (size_t i = 0; i < plane; i++) {
            const size_t point = row0 * terrain->columns + i, at = (level - level0) * plane + i;
            const double floor = terrain->depth[point],
                         eta = terrain->surface ? terrain->surface[point] : 0.0;
            const double here = eta - height(terrain, &terrain->samples, level, floor, eta);
            double above, below;
            if (terrain->limits.count) {
                above = eta - height(terrain, &terrain->limits, level, floor, eta);
                below = eta - height(terrain, &terrain->limits, level + 1, floor, eta);
            } else {
                above = level ? 0.5 * (here + eta - height(terrain, &terrain->samples, level - 1, floor, eta))
                              : 0.0;
                below = level < last
                            ? 0.5 * (here + eta - height(terrain, &terrain->samples, level + 1, floor, eta))
                            : floor + eta;
                if (isnan(below))
                    below = floor + eta; /* the last sigma_z level above the floor */
            }
            const bool cell = floor > 0.0 && below > above && isfinite(here);
            depth[at] = cell ? here : (double)NAN;
            if (upper)
                upper[at] = cell ? above : (double)NAN;
            if (lower)
                lower[at] = cell ? below : (double)NAN;
        }
    }
    return STERICOL_OK;
}

void stericol_input_terrain_floor(const stericol_input_terrain *terrain, size_t points, double *floor)
{
    for (size_t i = 0; i < points; i++)
        floor[i] = terrain->depth[i] + (terrain->surface ? terrain->surface[i] : 0.0);
}
