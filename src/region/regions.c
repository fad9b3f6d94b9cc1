/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Sets of regions, and laying them over a grid. */
#include "base/checked.h"
#include "base/context.h"
#include "base/text.h"
#include "region/boxes.h"
#include "region/cover.h"
#include "region/oceans.h"
#include "region/sphere.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

typedef enum region_kind { WHOLE, NORTH, SOUTH, BOX, OCEAN, GIVEN } region_kind;

typedef struct member {
    char *name;
    region_kind kind;
    stericol_box box;     /* BOX */
    size_t class;         /* the class in `cover`, where there is one */
    size_t cover;         /* 1 + its index in the set; 0: none */
    double *row_share;    /* regular cells: NORTH, SOUTH, BOX */
    double *column_share; /* regular cells: BOX */
} member;

struct stericol_regions {
    member *region;
    size_t count;
    stericol_cover *cover; /* shared by the regions that exclude each other */
    size_t covers;
    const stericol_cells *cells; /* NULL until prepared */
};

stericol_regions *stericol_regions_new(void)
{
    return stericol_new_array(1, sizeof(stericol_regions));
}

/* Takes off the regions and covers that were added last, down to the counts given. */
static void cut_back(stericol_regions *set, size_t count, size_t covers)
{
    while (set->count > count) {
        member *last = &set->region[--set->count];

        free(last->name);
        free(last->row_share);
        free(last->column_share);
    }
    while (set->covers > covers)
        stericol_cover_free(&set->cover[--set->covers]);
}

void stericol_regions_free(stericol_regions *set)
{
    if (set == NULL)
        return;
    cut_back(set, 0, 0);
    free(set->region);
    free(set->cover);
    free(set);
}

size_t stericol_regions_count(const stericol_regions *set)
{
    return set->count;
}

const char *stericol_regions_name(const stericol_regions *set, size_t region)
{
    assert(region < set->count);
    return set->region[region].name;
}

/* Room for one more cover, empty; NULL when memory is out. */
static stericol_cover *new_cover(stericol_regions *set)
{
    void *covers = set->cover;
    bool grown = stericol_grow_array(&covers, set->covers + 1, sizeof *set->cover);

    set->cover = covers;
    if (!grown)
        return NULL;
    set->cover[set->covers] = (stericol_cover){0};
    return &set->cover[set->covers++];
}

static stericol_status add_region(stericol_context *context, stericol_regions *set, const char *name,
                                  region_kind kind, size_t cover, size_t class)
{
    void *regions = set->region;
    member *made;
    bool grown;

    assert(set->cells == NULL);
    if (name == NULL || name[0] == '\0')
        return stericol_fail(context, STERICOL_USAGE, NULL, "region", "give it a name",
                             "a region has no name");
    for (size_t i = 0; i < set->count; i++)
        if (strcmp(set->region[i].name, name) == 0)
            return stericol_fail(context, STERICOL_USAGE, NULL, "region", "give each region its own name",
                                 "the name '%s' is used twice", name);
    grown = stericol_grow_array(&regions, set->count + 1, sizeof *set->region);
    set->region = regions;
    if (!grown)
        return stericol_fail_memory(context, (set->count + 1) * sizeof *set->region, "regions");
    made = &set->region[set->count];
    *made = (member){.name = stericol_copy_string(name), .kind = kind, .cover = cover, .class = class};
    if (made->name == NULL)
        return stericol_fail_memory(context, strlen(name) + 1, "regions");
    set->count++;
    return STERICOL_OK;
}

stericol_status stericol_regions_add_whole(stericol_context *context, stericol_regions *set, const char *name)
{
    return add_region(context, set, name, WHOLE, 0, 0);
}

stericol_status stericol_regions_add_hemispheres(stericol_context *context, stericol_regions *set)
{
    size_t count = set->count;
    stericol_status status = add_region(context, set, "northern_hemisphere", NORTH, 0, 1);

    if (status == STERICOL_OK)
        status = add_region(context, set, "southern_hemisphere", SOUTH, 0, 0);
    if (status != STERICOL_OK)
        cut_back(set, count, set->covers);
    return status;
}

stericol_status stericol_regions_add_box(stericol_context *context, stericol_regions *set,
                                         const stericol_box *box)
{
    stericol_status status = stericol_box_check(context, box, NULL);

    if (status == STERICOL_OK)
        status = add_region(context, set, box->name, BOX, 0, 1);
    if (status == STERICOL_OK)
        set->region[set->count - 1].box = *box;
    return status;
}

stericol_status stericol_regions_add_oceans(stericol_context *context, stericol_regions *set)
{
    size_t count = set->count;

    for (size_t ocean = 1; ocean < STERICOL_OCEANS; ocean++) {
        stericol_status status = add_region(context, set, stericol_ocean_name(ocean), OCEAN, 0, ocean);

        if (status != STERICOL_OK) {
            cut_back(set, count, set->covers);
            return status;
        }
    }
    return STERICOL_OK;
}

stericol_status stericol_regions_add_usual(stericol_context *context, stericol_regions *set,
                                           const char *whole_name)
{
    size_t count = set->count;
    stericol_status status = stericol_regions_add_oceans(context, set);

    if (status == STERICOL_OK)
        status = stericol_regions_add_hemispheres(context, set);
    if (status == STERICOL_OK)
        status = stericol_regions_add_whole(context, set, whole_name);
    if (status != STERICOL_OK)
        cut_back(set, count, set->covers);
    return status;
}

static stericol_status fill_mask(stericol_context *context, stericol_cover *cover, size_t rows,
                                 size_t columns, const char *name, const float *fraction)
{
    for (size_t row = 0; row < rows; row++)
        for (size_t column = 0; column < columns; column++) {
            double inside = (double)fraction[row * columns + column], share[2];

            if (inside < 0.0 || inside > 1.0)
                return stericol_fail(
                    context, STERICOL_INPUT, NULL, name, "give the covered share of each cell",
                    "row %zu, column %zu is %.9g, which is not within 0..1", row + 1, column + 1, inside);
            share[1] = isnan(inside) ? 0.0 : inside;
            share[0] = 1.0 - share[1];
            if (!stericol_cover_put(cover, row, column, share))
                return stericol_fail_memory(context, 0, "the mask of a region");
        }
    return STERICOL_OK;
}

stericol_status stericol_regions_add_mask(stericol_context *context, stericol_regions *set, const char *name,
                                          size_t rows, size_t columns, const float *fraction)
{
    size_t count = set->count, covers = set->covers;
    stericol_cover *cover;
    stericol_status status = add_region(context, set, name, GIVEN, covers + 1, 1);

    if (status != STERICOL_OK)
        return status;
    cover = new_cover(set);
    if (cover == NULL || !stericol_cover_start(cover, rows, columns, 2))
        status = stericol_fail_memory(context, 0, "the mask of a region");
    else
        status = fill_mask(context, cover, rows, columns, name, fraction);
    if (status != STERICOL_OK)
        cut_back(set, count, covers);
    return status;
}

stericol_status stericol_regions_add_labels(stericol_context *context, stericol_regions *set, size_t count,
                                            const char *const *names, size_t rows, size_t columns,
                                            const unsigned char *label)
{
    size_t regions = set->count, covers = set->covers;
    stericol_cover *cover;
    stericol_status status = STERICOL_OK;

    assert(count >= 1 && count <= STERICOL_MOST_LABELS);
    for (size_t i = 0; i < count && status == STERICOL_OK; i++)
        status = add_region(context, set, names[i], GIVEN, covers + 1, i + 1);
    if (status != STERICOL_OK)
        goto fail;
    cover = new_cover(set);
    if (cover == NULL || !stericol_cover_start(cover, rows, columns, count + 1)) {
        status = stericol_fail_memory(context, 0, "the mask of regions");
        goto fail;
    }
    for (size_t i = 0; i < rows * columns; i++) {
        if (label[i] > count) {
            status = stericol_fail(context, STERICOL_INPUT, NULL, names[0], "name every value of the mask",
                                   "row %zu, column %zu has label %u, but there are %zu regions",
                                   i / columns + 1, i % columns + 1, (unsigned)label[i], count);
            goto fail;
        }
        stericol_cover_put_whole(cover, i / columns, i % columns, label[i]);
    }
    return STERICOL_OK;
fail:
    cut_back(set, regions, covers);
    return status;
}

static size_t classify_box(const void *what, double latitude, double longitude)
{
    return stericol_box_holds(what, latitude, longitude) ? 1 : 0;
}

static size_t classify_hemisphere(const void *what, double latitude, double longitude)
{
    (void)what;
    (void)longitude;
    return latitude >= 0.0 ? 1 : 0;
}

/* Boxes and hemispheres on regular cells: numbers by row and column. */
static bool prepare_shares(member *one, const stericol_cells *cells)
{
    one->row_share = stericol_new_array(cells->rows, sizeof *one->row_share);
    if (one->row_share == NULL)
        return false;
    if (one->kind != BOX) {
        stericol_hemisphere_shares(cells, one->kind == NORTH, one->row_share);
        return true;
    }
    one->column_share = stericol_new_array(cells->columns, sizeof *one->column_share);
    if (one->column_share == NULL)
        return false;
    stericol_box_shares(&one->box, cells, one->row_share, one->column_share);
    return true;
}

/* One cover for all oceans, one for both hemispheres, one for each box. */
static bool prepare_region(stericol_regions *set, size_t index, const stericol_cells *cells)
{
    member *one = &set->region[index];
    stericol_cover *cover;

    if (one->kind == WHOLE || one->kind == GIVEN)
        return true;
    if (cells->kind == STERICOL_CELLS_REGULAR && one->kind != OCEAN)
        return prepare_shares(one, cells);
    for (size_t i = 0; i < index; i++) {
        region_kind other = set->region[i].kind;

        if ((one->kind == OCEAN && other == OCEAN) || (one->kind == SOUTH && other == NORTH)) {
            one->cover = set->region[i].cover;
            return true;
        }
    }
    cover = new_cover(set);
    if (cover == NULL)
        return false;
    one->cover = set->covers;
    if (one->kind == OCEAN)
        return stericol_oceans_cover(cover, cells);
    return stericol_cover_sample(cover, cells, 2, one->kind == BOX ? classify_box : classify_hemisphere,
                                 one->kind == BOX ? &one->box : NULL);
}

stericol_status stericol_regions_prepare(stericol_context *context, stericol_regions *set,
                                         const stericol_cells *cells)
{
    stericol_status status;

    assert(set->cells == NULL);
    status = stericol_check_cells(context, cells);
    if (status != STERICOL_OK)
        return status;
    for (size_t i = 0; i < set->count; i++) {
        const member *one = &set->region[i];

        if (one->kind == GIVEN) {
            const stericol_cover *mask = &set->cover[one->cover - 1];

            if (mask->rows != cells->rows || mask->columns != cells->columns)
                return stericol_fail(context, STERICOL_INPUT, NULL, one->name,
                                     "give a mask on the grid of the data",
                                     "the mask has %zu by %zu cells, the grid %zu by %zu", mask->rows,
                                     mask->columns, cells->rows, cells->columns);
        }
    }
    for (size_t i = 0; i < set->count; i++)
        if (!prepare_region(set, i, cells))
            return stericol_fail_memory(context, 0, "regions on the grid");
    set->cells = cells;
    return STERICOL_OK;
}

void stericol_regions_row(const stericol_regions *set, size_t region_index, size_t row, double *fraction)
{
    const member *one;
    size_t columns;

    assert(set->cells != NULL && region_index < set->count && row < set->cells->rows);
    one = &set->region[region_index];
    columns = set->cells->columns;
    if (one->cover != 0) {
        stericol_cover_row(&set->cover[one->cover - 1], one->class, row, fraction);
        return;
    }
    for (size_t i = 0; i < columns; i++) {
        double share = one->row_share != NULL ? one->row_share[row] : 1.0;

        fraction[i] = one->column_share != NULL ? share * one->column_share[i] : share;
    }
}
