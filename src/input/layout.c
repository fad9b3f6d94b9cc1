/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Which dimension of a variable is time, level, row, column, and which variables hold their coordinates.
 */
#include "input/room.h"

#include <stdlib.h>
#include <string.h>

enum { MOST_NAMES = 64 }; /* names looked at in one attribute */

bool stericol_input_each_named(const stericol_cf_file *file, const stericol_cf_variable *near,
                               const char *attribute, stericol_input_visit *visit, void *user)
{
    const char *rest = stericol_cf_text_of(near, attribute);
    for (size_t i = 0; rest && i < MOST_NAMES; i++) {
        rest += strspn(rest, " \t\n\r,");
        const size_t length = strcspn(rest, " \t\n\r,");
        if (!length)
            break;
        char *name = stericol_copy_bytes(rest, length);
        const stericol_cf_variable *found = name ? stericol_cf_find(file, name, near) : NULL;
        free(name);
        if (found && visit(user, found))
            return true;
        rest += length;
    }
    return false;
}

char *stericol_input_term(const char *list, const char *key)
{
    const size_t length = strlen(key);
    for (const char *at = list; at && (at = strstr(at, key)); at += length) {
        const bool starts = at == list || strchr(" \t\n\r", at[-1]);
        const char *rest = at + length;
        rest += strspn(rest, " \t");
        if (!starts || *rest != ':')
            continue;
        rest++;
        rest += strspn(rest, " \t\n\r");
        const size_t name = strcspn(rest, " \t\n\r");
        return name ? stericol_copy_bytes(rest, name) : NULL;
    }
    return NULL;
}

/* ---- roles ---- */

static bool runs_along(const stericol_cf_variable *variable, size_t dimension)
{
    return variable->rank == 1 && variable->dimension[0] == dimension;
}

typedef struct role_search {
    const stericol_input_reader *reader;
    const stericol_cf_variable *of;
    size_t dimension;
    stericol_input_sign best;
    const stericol_cf_variable *coordinate;
    bool latitude, longitude; /* both met along this dimension */
} role_search;

/* Auxiliary coordinates: a length alone proves nothing (a layer thickness is one too). */
static bool consider(void *user, const stericol_cf_variable *found)
{
    role_search *look = user;
    if (found == look->of || !runs_along(found, look->dimension))
        return false;
    stericol_input_sign sign = stericol_input_axis_sign(look->reader->units, found);
    if (sign.strength == STERICOL_INPUT_BY_UNITS &&
        stericol_input_role_of_name(found->short_name) != STERICOL_INPUT_LEVEL)
        sign.strength = STERICOL_INPUT_BY_NOTHING;
    look->latitude = look->latitude || (sign.strength && sign.role == STERICOL_INPUT_LATITUDE);
    look->longitude = look->longitude || (sign.strength && sign.role == STERICOL_INPUT_LONGITUDE);
    if (sign.strength > look->best.strength) {
        look->best = sign;
        look->coordinate = found;
    }
    return false;
}

static void find_role(role_search *look)
{
    const stericol_cf_file *file = look->reader->file;
    const stericol_cf_dimension *dimension = stericol_cf_dimension_at(file, look->dimension);
    const stericol_cf_variable *own = stericol_cf_find(file, dimension->name, look->of);
    if (own && own != look->of && runs_along(own, look->dimension)) {
        look->best = stericol_input_axis_sign(look->reader->units, own);
        look->coordinate = own;
        look->latitude = look->best.role == STERICOL_INPUT_LATITUDE;
        look->longitude = look->best.role == STERICOL_INPUT_LONGITUDE;
    }
    stericol_input_each_named(file, look->of, "coordinates", consider, look);
    if (!look->best.strength || look->best.strength == STERICOL_INPUT_BY_NAME)
        for (size_t i = 0; i < stericol_cf_variable_count(file); i++)
            consider(look, stericol_cf_variable_at(file, i));
    if (!look->best.strength) {
        const stericol_input_role role = stericol_input_role_of_name(dimension->name);
        if (role != STERICOL_INPUT_NO_ROLE)
            look->best = (stericol_input_sign){role, STERICOL_INPUT_BY_NAME, "the name of its dimension"};
    }
}

void stericol_input_find_roles(const stericol_input_reader *reader, const stericol_cf_variable *variable,
                               stericol_input_roles *roles)
{
    *roles = (stericol_input_roles){0};
    for (size_t i = 0; i < variable->rank; i++) {
        role_search look = {.reader = reader, .of = variable, .dimension = variable->dimension[i]};
        find_role(&look);
        roles->sign[i] = look.best;
        roles->coordinate[i] = look.coordinate;
        if (look.latitude && look.longitude &&
            stericol_cf_dimension_at(reader->file, variable->dimension[i])->length > 1)
            roles->unstructured = true;
        /* One dimension a role: the surer sign keeps it, the first of equals. */
        for (size_t j = 0; j < i; j++) {
            if (roles->sign[j].role != roles->sign[i].role)
                continue;
            const size_t loser = roles->sign[i].strength > roles->sign[j].strength ? j : i;
            roles->sign[loser] = (stericol_input_sign){0};
            roles->coordinate[loser] = NULL;
        }
    }
}

static int dimension_with(const stericol_input_roles *roles, size_t rank, stericol_input_role role)
{
    for (size_t i = 0; i < rank; i++)
        if (roles->sign[i].role == role)
            return (int)i;
    return STERICOL_CF_NO_AXIS;
}

/* ---- positions ---- */

typedef struct plane_search {
    const stericol_input_reader *reader;
    stericol_cf_file *file; /* of the positions */
    const stericol_cf_variable *of;
    const stericol_input_roles *roles;
    bool by_length; /* another file: its dimensions are matched by name, then by length */
    stericol_input_role role;
    const stericol_cf_variable *found;
    int row, column; /* dimensions of `of` that the found one's first and second are */
    int strength;
} plane_search;

static bool may_be_horizontal(const plane_search *look, size_t i)
{
    const stericol_input_role role = look->roles->sign[i].role;
    return role != STERICOL_INPUT_TIME && role != STERICOL_INPUT_LEVEL;
}

/* Which dimension of `of` is dimension `index` of the positions' file? */
static int same_dimension(const plane_search *look, size_t index, int not_this)
{
    const stericol_cf_dimension *wanted = stericol_cf_dimension_at(look->file, index);
    for (int by_name = 1; by_name >= 0; by_name--) {
        for (size_t i = 0; i < look->of->rank; i++) {
            const stericol_cf_dimension *own =
                stericol_cf_dimension_at(look->reader->file, look->of->dimension[i]);
            if ((int)i == not_this || !may_be_horizontal(look, i) || own->length != wanted->length)
                continue;
            if (look->by_length ? !by_name || strcmp(own->name, wanted->name) == 0
                                : look->of->dimension[i] == index)
                return (int)i;
        }
    }
    return STERICOL_CF_NO_AXIS;
}

static bool consider_plane(void *user, const stericol_cf_variable *found)
{
    plane_search *look = user;
    if (found->rank != 2)
        return false;
    const stericol_input_sign sign = stericol_input_axis_sign(look->reader->units, found);
    if (sign.role != look->role || sign.strength <= look->strength)
        return false;
    const int first = same_dimension(look, found->dimension[0], STERICOL_CF_NO_AXIS);
    const int second = same_dimension(look, found->dimension[1], first);
    if (first == STERICOL_CF_NO_AXIS || second == STERICOL_CF_NO_AXIS)
        return false;
    look->found = found;
    look->row = first;
    look->column = second;
    look->strength = sign.strength;
    return false;
}

static bool find_planes(plane_search *look, bool everywhere, stericol_input_layout *layout)
{
    int at[2][2];
    const stericol_cf_variable *found[2];
    for (int i = 0; i < 2; i++) {
        look->role = i == 0 ? STERICOL_INPUT_LATITUDE : STERICOL_INPUT_LONGITUDE;
        look->found = NULL;
        look->strength = 0;
        if (!look->by_length)
            stericol_input_each_named(look->file, look->of, "coordinates", consider_plane, look);
        if (!look->found && everywhere)
            for (size_t j = 0; j < stericol_cf_variable_count(look->file); j++)
                consider_plane(look, stericol_cf_variable_at(look->file, j));
        found[i] = look->found;
        at[i][0] = look->row;
        at[i][1] = look->column;
    }
    if (!found[0] || !found[1] || at[0][0] != at[1][0] || at[0][1] != at[1][1])
        return false;
    layout->latitude = found[0];
    layout->longitude = found[1];
    layout->position_file = look->file;
    layout->curvilinear = true;
    /* Rows run along y where the file tells x from y; else in the order of the positions. */
    const stericol_input_role first = look->roles->sign[at[0][0]].role;
    const stericol_input_role second = look->roles->sign[at[0][1]].role;
    layout->transposed = (first == STERICOL_INPUT_X || first == STERICOL_INPUT_LONGITUDE) ||
                         (second == STERICOL_INPUT_Y || second == STERICOL_INPUT_LATITUDE);
    layout->axes.row = layout->transposed ? at[0][1] : at[0][0];
    layout->axes.column = layout->transposed ? at[0][0] : at[0][1];
    return true;
}

/* A scalar coordinate, or one along dimensions of length one only. */
typedef struct scalar_search {
    const stericol_input_reader *reader;
    stericol_input_role role;
    const stericol_cf_variable *found;
    int strength;
} scalar_search;

static bool consider_scalar(void *user, const stericol_cf_variable *found)
{
    scalar_search *look = user;
    size_t count;
    if (!stericol_cf_value_count(look->reader->file, found, &count) || count != 1)
        return false;
    const stericol_input_sign sign = stericol_input_axis_sign(look->reader->units, found);
    if (sign.role == look->role && sign.strength > look->strength) {
        look->found = found;
        look->strength = sign.strength;
    }
    return false;
}

static const stericol_cf_variable *find_scalar(const stericol_input_reader *reader,
                                               const stericol_cf_variable *variable, stericol_input_role role)
{
    scalar_search look = {.reader = reader, .role = role};
    stericol_input_each_named(reader->file, variable, "coordinates", consider_scalar, &look);
    for (size_t i = 0; !look.found && i < stericol_cf_variable_count(reader->file); i++) {
        const stericol_cf_variable *other = stericol_cf_variable_at(reader->file, i);
        const char *standard_name = stericol_cf_text_of(other, "standard_name");
        /* Many a scalar holds a date or an angle; without a name for it, it is not that of the field. */
        if (other != variable && (standard_name || stericol_input_role_of_name(other->short_name) == role))
            consider_scalar(&look, other);
    }
    return look.found;
}

/* Positions of a rectilinear grid in the file of --coordinates, or along X and Y that are parallels and
 * meridians. */
static const stericol_cf_variable *line_in(const stericol_input_reader *reader, stericol_cf_file *file,
                                           stericol_input_role role, size_t *length)
{
    const stericol_cf_variable *found = NULL;
    int strength = 0;
    for (size_t i = 0; i < stericol_cf_variable_count(file); i++) {
        const stericol_cf_variable *variable = stericol_cf_variable_at(file, i);
        if (variable->rank != 1)
            continue;
        const stericol_input_sign sign = stericol_input_axis_sign(reader->units, variable);
        if (sign.role == role && sign.strength > strength) {
            found = variable;
            strength = sign.strength;
            *length = stericol_cf_dimension_at(file, variable->dimension[0])->length;
        }
    }
    return found;
}

static size_t length_of(const stericol_input_reader *reader, const stericol_cf_variable *variable, int axis)
{
    return axis == STERICOL_CF_NO_AXIS
               ? 1
               : stericol_cf_dimension_at(reader->file, variable->dimension[axis])->length;
}

static stericol_status positions_elsewhere(const stericol_input_reader *reader,
                                           const stericol_cf_variable *variable,
                                           const stericol_input_roles *roles, stericol_cf_file *positions,
                                           stericol_input_layout *layout)
{
    plane_search look = {
        .reader = reader, .file = positions, .of = variable, .roles = roles, .by_length = true};
    if (find_planes(&look, true, layout))
        return STERICOL_OK;
    size_t length[2] = {0, 0};
    const stericol_cf_variable *latitude = line_in(reader, positions, STERICOL_INPUT_LATITUDE, &length[0]);
    const stericol_cf_variable *longitude = line_in(reader, positions, STERICOL_INPUT_LONGITUDE, &length[1]);
    int at[2] = {STERICOL_CF_NO_AXIS, STERICOL_CF_NO_AXIS};
    /* Rows first: the first dimension of that length that is neither time nor level. */
    for (int which = 0; latitude && longitude && which < 2; which++)
        for (size_t i = 0; i < variable->rank && at[which] == STERICOL_CF_NO_AXIS; i++)
            if ((int)i != at[0] && may_be_horizontal(&look, i) &&
                length_of(reader, variable, (int)i) == length[which])
                at[which] = (int)i;
    if (at[0] == STERICOL_CF_NO_AXIS || at[1] == STERICOL_CF_NO_AXIS) {
        stericol_fail(reader->context, STERICOL_INPUT, stericol_cf_path(positions), NULL,
                      "give the coordinates file of this very grid",
                      "no latitude and longitude of the shape that %s has in %s", variable->name,
                      stericol_cf_path(reader->file));
        return STERICOL_INPUT;
    }
    layout->latitude = latitude;
    layout->longitude = longitude;
    layout->position_file = positions;
    layout->axes.row = at[0];
    layout->axes.column = at[1];
    return STERICOL_OK;
}

/* Latitude and longitude along one dimension each, or as scalars. */
static stericol_status positions_along(const stericol_input_reader *reader,
                                       const stericol_cf_variable *variable,
                                       const stericol_input_roles *roles, stericol_input_layout *layout)
{
    static const stericol_input_role wanted[2][2] = {{STERICOL_INPUT_LATITUDE, STERICOL_INPUT_Y},
                                                     {STERICOL_INPUT_LONGITUDE, STERICOL_INPUT_X}};
    static const char *const names[2] = {"latitude", "longitude"};
    const stericol_cf_variable *found[2] = {NULL, NULL};
    int at[2];
    for (int i = 0; i < 2; i++) {
        at[i] = dimension_with(roles, variable->rank, wanted[i][0]);
        if (at[i] != STERICOL_CF_NO_AXIS) {
            found[i] = roles->coordinate[at[i]];
            continue;
        }
        at[i] = dimension_with(roles, variable->rank, wanted[i][1]);
        const stericol_cf_variable *line = at[i] == STERICOL_CF_NO_AXIS ? NULL : roles->coordinate[at[i]];
        /* An axis X or Y whose unit is no length and that is no index may well be a longitude or latitude. */
        if (line && roles->sign[at[i]].strength == STERICOL_INPUT_BY_AXIS &&
            stericol_cf_units_quantity(reader->units, stericol_cf_text_of(line, "units")) !=
                STERICOL_CF_QUANTITY_LENGTH) {
            found[i] = line;
            stericol_input_say(reader, STERICOL_NOTE, line->name, "taken as %s because of its axis attribute",
                               names[i]);
        } else if (length_of(reader, variable, at[i]) == 1) {
            found[i] = find_scalar(reader, variable, wanted[i][0]);
        }
    }
    for (int i = 0; i < 2; i++)
        if (!found[i])
            return stericol_input_refuse_shape(
                reader, variable->name, "give the file that holds them with --coordinates",
                i == 0 ? "no latitude was found for it" : "no longitude was found for it");
    layout->latitude = found[0];
    layout->longitude = found[1];
    layout->position_file = reader->file;
    layout->axes.row = at[0];
    layout->axes.column = at[1];
    return STERICOL_OK;
}

/* ---- the other dimensions ---- */

/* The 0-based index that --select gives for a dimension; false when it gives none. */
static bool selected(const stericol_input_reader *reader, const char *name, size_t length, size_t *index,
                     stericol_status *status)
{
    const size_t named = strlen(name);
    for (size_t i = 0; reader->request && i < reader->request->select_count; i++) {
        const char *text = reader->request->select[i];
        long long value = 0;
        if (strncmp(text, name, named) != 0 || text[named] != '=')
            continue;
        if (!stericol_parse_whole(text + named + 1, 1, (long long)length, &value)) {
            *status = stericol_fail(reader->context, STERICOL_INPUT, stericol_cf_path(reader->file), name,
                                    "give an index within it",
                                    "--select %s is not a whole number from 1 to %zu", text, length);
            return false;
        }
        *index = (size_t)value - 1;
        return true;
    }
    return false;
}

/* --select is for other dimensions; times and the rest have options of their own. */
static stericol_status refuse_select(const stericol_input_reader *reader,
                                     const stericol_cf_variable *variable, const stericol_cf_field_axes *axes)
{
    const struct {
        int axis;
        const char *remedy;
    } taken[] = {{axes->time, "choose times by window or step"},
                 {axes->level, "choose depths with --layers"},
                 {axes->row, "choose a region"},
                 {axes->column, "choose a region"}};
    for (size_t i = 0; i < sizeof taken / sizeof *taken; i++) {
        stericol_status status = STERICOL_OK;
        size_t index;
        if (taken[i].axis == STERICOL_CF_NO_AXIS)
            continue;
        const stericol_cf_dimension *dimension =
            stericol_cf_dimension_at(reader->file, variable->dimension[taken[i].axis]);
        if (selected(reader, dimension->name, dimension->length, &index, &status))
            return stericol_input_refuse(reader, variable->name, taken[i].remedy,
                                         "--select cannot pick from its dimension %s", dimension->name);
        if (status != STERICOL_OK)
            return status;
    }
    return STERICOL_OK;
}

static stericol_status settle_others(const stericol_input_reader *reader,
                                     const stericol_cf_variable *variable, stericol_input_layout *layout,
                                     bool with_level)
{
    for (size_t i = 0; i < variable->rank; i++) {
        const stericol_cf_dimension *dimension =
            stericol_cf_dimension_at(reader->file, variable->dimension[i]);
        stericol_status status = STERICOL_OK;
        const int at = (int)i;
        if (at == layout->axes.time || at == layout->axes.level || at == layout->axes.row ||
            at == layout->axes.column)
            continue;
        if (dimension->length == 0)
            return stericol_input_refuse(reader, variable->name, "give a file that holds data",
                                         "its dimension %s has length 0", dimension->name);
        if (selected(reader, dimension->name, dimension->length, &layout->axes.fixed[i], &status)) {
            stericol_input_say(reader, STERICOL_NOTE, variable->name, "index %zu of %zu of its dimension %s",
                               layout->axes.fixed[i] + 1, dimension->length, dimension->name);
        } else if (status == STERICOL_OK && dimension->length > 1 && with_level) {
            stericol_text remedy = {0};
            stericol_text_format(&remedy, "pick one with --select %s=INDEX", dimension->name);
            status =
                stericol_input_refuse(reader, variable->name, stericol_text_string(&remedy),
                                      "its dimension %s of length %zu is neither time, depth nor horizontal",
                                      dimension->name, dimension->length);
            stericol_text_free(&remedy);
        }
        if (status != STERICOL_OK)
            return status;
    }
    return STERICOL_OK;
}

static stericol_status no_levels(const stericol_input_reader *reader, const stericol_cf_variable *variable)
{
    stericol_text problem = {0};
    stericol_text_add(&problem, "no vertical dimension among its dimensions (");
    for (size_t i = 0; i < variable->rank; i++)
        stericol_text_format(&problem, "%s%s", i ? ", " : "",
                             stericol_cf_dimension_at(reader->file, variable->dimension[i])->name);
    stericol_text_add(&problem, variable->rank ? ")" : "none)");
    const stericol_status status = stericol_input_refuse_shape(
        reader, variable->name, "give a file with levels", stericol_text_string(&problem));
    stericol_text_free(&problem);
    return status;
}

stericol_status stericol_input_lay_out(const stericol_input_reader *reader,
                                       const stericol_cf_variable *variable, stericol_cf_file *positions,
                                       bool with_level, stericol_input_layout *layout)
{
    stericol_input_roles roles;
    stericol_status status;
    *layout = (stericol_input_layout){0};
    if (variable->rank > STERICOL_CF_MOST_RANK)
        return stericol_input_refuse(reader, variable->name, "give a field of fewer dimensions",
                                     "%zu dimensions are too many", variable->rank);
    stericol_input_find_roles(reader, variable, &roles);
    layout->axes.time = dimension_with(&roles, variable->rank, STERICOL_INPUT_TIME);
    layout->axes.level = dimension_with(&roles, variable->rank, STERICOL_INPUT_LEVEL);
    layout->axes.row = layout->axes.column = STERICOL_CF_NO_AXIS;
    if (with_level && layout->axes.level == STERICOL_CF_NO_AXIS)
        return no_levels(reader, variable);
    if (layout->axes.level != STERICOL_CF_NO_AXIS)
        layout->level = roles.coordinate[layout->axes.level];
    layout->time = layout->axes.time != STERICOL_CF_NO_AXIS
                       ? roles.coordinate[layout->axes.time]
                       : find_scalar(reader, variable, STERICOL_INPUT_TIME);
    if (roles.unstructured)
        return stericol_input_refuse_shape(
            reader, variable->name, "put the field on a grid of rows and columns first",
            "latitude and longitude run along one dimension: an unstructured grid");
    plane_search look = {.reader = reader, .file = reader->file, .of = variable, .roles = &roles};
    const bool lines =
        dimension_with(&roles, variable->rank, STERICOL_INPUT_LATITUDE) != STERICOL_CF_NO_AXIS &&
        dimension_with(&roles, variable->rank, STERICOL_INPUT_LONGITUDE) != STERICOL_CF_NO_AXIS;
    if (positions)
        status = positions_elsewhere(reader, variable, &roles, positions, layout);
    else if (find_planes(&look, !lines, layout))
        status = STERICOL_OK;
    else
        status = positions_along(reader, variable, &roles, layout);
    if (status != STERICOL_OK)
        return status;
    layout->times = length_of(reader, variable, layout->axes.time);
    layout->levels = length_of(reader, variable, layout->axes.level);
    layout->rows = length_of(reader, variable, layout->axes.row);
    layout->columns = length_of(reader, variable, layout->axes.column);
    if (!layout->times)
        return stericol_input_refuse(reader, variable->name, "give a file that holds data",
                                     "its time dimension has length 0");
    if (!layout->levels || !layout->rows || !layout->columns)
        return stericol_input_refuse(reader, variable->name, "give a file that holds data",
                                     "one of its dimensions has length 0");
    status = refuse_select(reader, variable, &layout->axes);
    return status == STERICOL_OK ? settle_others(reader, variable, layout, with_level) : status;
}
