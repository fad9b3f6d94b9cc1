/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "result/change.h"

#include "base/checked.h"
#include "base/text.h"
#include "cf/write.h"
#include "result/axes.h"
#include "result/names.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { WHOLE, BY_LAYER, KINDS };

struct stericol_result {
    stericol_cf_writer *writer;
    stericol_result_axes axes;
    size_t layers, regions;
    double (*layer_bounds)[2];
    size_t map[STERICOL_MAP_COUNT][KINDS]; /* variables; ABSENT where there is none */
    size_t region[STERICOL_REGION_QUANTITY_COUNT][KINDS];
    size_t flags, cell_area;
};

#define ABSENT ((size_t)-1)
#define GLOBAL ((size_t)STERICOL_CF_GLOBAL)

static const char summary[] = "Change of steric height and of heat content between two states of the ocean, "
                              "from temperature and salinity: maps "
                              "of each column, and totals of regions.";
static const char caution[] = "Steric change is only one part of the change of sea level: added or lost "
                              "water, moved water, gravity, vertical land motion, "
                              "tides and surges are not in here. No design, navigation or flood decision "
                              "should rest on it alone; local "
                              "codes and licensed practice decide.";

/* ---- what a layout holds ---- */

static bool holds(const stericol_change_layout *layout, unsigned needs)
{
    return (layout->has_salinity || (needs & STERICOL_NEEDS_SALINITY) == 0) &&
           (layout->has_remainder || (needs & STERICOL_NEEDS_REMAINDER) == 0) &&
           (layout->fill_coverage || (needs & STERICOL_NEEDS_FILLING) == 0);
}

bool stericol_change_holds_map(const stericol_change_layout *layout, stericol_map map)
{
    return holds(layout, stericol_map_entry(map)->needs);
}

bool stericol_change_holds_region(const stericol_change_layout *layout, stericol_region_quantity quantity)
{
    return layout->regions > 0 && holds(layout, stericol_region_entry(quantity)->needs);
}

/* ---- attributes ---- */

/* One attribute after another; the first failure stays and the rest is passed over. */
typedef struct labels {
    stericol_context *context;
    stericol_cf_writer *writer;
    size_t variable;
    stericol_status status;
} labels;

static void label(labels *to, const char *name, const char *text)
{
    if (to->status == STERICOL_OK && text != NULL)
        to->status = stericol_cf_write_text(to->context, to->writer, to->variable, name, text);
}

static void label_number(labels *to, const char *name, stericol_cf_type type, double number)
{
    if (to->status == STERICOL_OK)
        to->status = stericol_cf_write_numbers(to->context, to->writer, to->variable, name, type, 1, &number);
}

static void label_text(labels *to, const char *name, stericol_text *text)
{
    if (to->status == STERICOL_OK && text->failed)
        to->status = stericol_fail_memory(to->context, 0, "an attribute");
    label(to, name, stericol_text_string(text));
    stericol_text_free(text);
}

static void label_extent(labels *to, const stericol_result_axes *axes)
{
    label_number(to, "geospatial_lat_min", STERICOL_CF_DOUBLE, axes->south);
    label_number(to, "geospatial_lat_max", STERICOL_CF_DOUBLE, axes->north);
    label(to, "geospatial_lat_units", "degrees_north");
    label_number(to, "geospatial_lon_min", STERICOL_CF_DOUBLE, axes->west);
    label_number(to, "geospatial_lon_max", STERICOL_CF_DOUBLE, axes->east);
    label(to, "geospatial_lon_units", "degrees_east");
}

static stericol_status label_file(stericol_context *context, stericol_result *result,
                                  const stericol_change_layout *layout)
{
    labels to = {context, result->writer, GLOBAL, STERICOL_OK};
    stericol_text history = {0}, source = {0};

    label(&to, "Conventions", "CF-1.10, ACDD-1.3");
    label(&to, "title",
          layout->title != NULL ? layout->title : "Steric height and heat content change between two epochs");
    label(&to, "summary", summary);
    label(&to, "keywords",
          "steric height, thermosteric height, halosteric height, ocean heat content, sea level, thermal "
          "expansion");
    label(&to, "standard_name_vocabulary", "CF Standard Name Table v83");
    label(&to, "cdm_data_type", "Grid");
    stericol_text_format(&source, "computed by stericol %s from the files in the attribute inputs",
                         stericol_version());
    label_text(&to, "source", &source);
    label(&to, "product_version", stericol_version());
    stericol_text_format(&history, "%s%s%s (stericol %s)", layout->created != NULL ? layout->created : "",
                         layout->created != NULL ? ": " : "",
                         layout->command_line != NULL ? layout->command_line : "made through the library",
                         stericol_version());
    label_text(&to, "history", &history);
    label(&to, "date_created", layout->created);
    label(&to, "earlier_epoch", layout->earlier_epoch);
    label(&to, "later_epoch", layout->later_epoch);
    label(&to, "time_coverage_start", layout->coverage_start);
    label(&to, "time_coverage_end", layout->coverage_end);
    label_extent(&to, &result->axes);
    label(&to, "comment", caution);
    if (layout->ocean_area > 0.0)
        label_number(&to, "ocean_area", STERICOL_CF_DOUBLE, layout->ocean_area);
    return to.status;
}

/* ---- variables ---- */

/* Defines one variable and gives it what its entry says; `prefix` and `whose` tell its variants apart. */
typedef struct form {
    const char *prefix, *whose;
    stericol_cf_type type;
    size_t rank;
    size_t dimension[3];
    bool compressed;
    const char *coordinates;
    bool on_map;
} form;

static stericol_status define(stericol_context *context, stericol_result *result,
                              const stericol_result_entry *entry, const form *shape, size_t *variable)
{
    labels to = {context, result->writer, 0, STERICOL_OK};
    stericol_text name = {0}, meaning = {0};

    stericol_text_format(&name, "%s%s", shape->prefix, entry->name);
    if (name.failed) {
        stericol_text_free(&name);
        return stericol_fail_memory(context, 0, "a name");
    }
    to.status = stericol_cf_write_variable(context, result->writer, stericol_text_string(&name), shape->type,
                                           shape->rank, shape->dimension, shape->compressed, true, variable);
    stericol_text_free(&name);
    if (to.status != STERICOL_OK)
        return to.status;
    to.variable = *variable;
    stericol_text_format(&meaning, "%s%s", entry->meaning, shape->whose);
    label_text(&to, "long_name", &meaning);
    label(&to, "standard_name", entry->standard_name);
    label(&to, "units", entry->unit);
    label(&to, "cell_methods", entry->cell_methods);
    label(&to, "coordinates", shape->coordinates);
    if (shape->on_map) {
        label(&to, "cell_measures", "area: cell_area");
        label(&to, "ancillary_variables", "column_flag");
    }
    if (entry->not_negative)
        label_number(&to, "valid_min", shape->type, 0.0);
    label(&to, "comment", entry->comment);
    return to.status;
}

/* "a b", without what is NULL; NULL when nothing is left. */
static const char *join(stericol_text *text, const char *a, const char *b)
{
    stericol_text_clear(text);
    if (a != NULL)
        stericol_text_add(text, a);
    if (a != NULL && b != NULL)
        stericol_text_add(text, " ");
    if (b != NULL)
        stericol_text_add(text, b);
    return a == NULL && b == NULL ? NULL : stericol_text_string(text);
}

static stericol_status define_maps(stericol_context *context, stericol_result *result,
                                   const stericol_change_layout *layout)
{
    const stericol_result_axes *axes = &result->axes;
    const char *positions = axes->curvilinear ? "lat lon" : NULL;
    stericol_text whole = {0}, by_layer = {0};
    const form shapes[KINDS] = {
        {"",
         "",
         STERICOL_CF_FLOAT,
         2,
         {axes->row, axes->column},
         true,
         join(&whole, positions, axes->contiguous ? "column_depth" : NULL),
         true},
        {"layer_",
         ", by layer",
         STERICOL_CF_FLOAT,
         3,
         {axes->layer, axes->row, axes->column},
         true,
         join(&by_layer, positions, "layer_depth"),
         true},
    };
    stericol_status status = STERICOL_OK;

    if (whole.failed || by_layer.failed)
        status = stericol_fail_memory(context, 0, "a name");
    for (int kind = WHOLE; kind < (layout->layers > 1 ? KINDS : BY_LAYER); kind++)
        for (int map = 0; map < STERICOL_MAP_COUNT && status == STERICOL_OK; map++)
            if (stericol_change_holds_map(layout, (stericol_map)map))
                status = define(context, result, stericol_map_entry((stericol_map)map), &shapes[kind],
                                &result->map[map][kind]);
    stericol_text_free(&whole);
    stericol_text_free(&by_layer);
    return status;
}

static stericol_status define_flags(stericol_context *context, stericol_result *result)
{
    const stericol_result_axes *axes = &result->axes;
    const char *positions = axes->curvilinear ? "lat lon" : NULL;
    static const stericol_result_entry flag = {
        "column_flag", "1", "how far the column reaches and why it ends", "status_flag", NULL, NULL, 0,
        false};
    static const stericol_result_entry area = {
        "cell_area", "m2", "area of the grid cell", "cell_area", NULL, NULL, 0, true};
    form shape = {"", "", STERICOL_CF_INT8, 2, {axes->row, axes->column}, true, positions, false};
    double values[STERICOL_RESULT_FLAGS];
    stericol_status status = define(context, result, &flag, &shape, &result->flags);

    for (int i = 0; i < STERICOL_RESULT_FLAGS; i++)
        values[i] = i;
    if (status == STERICOL_OK)
        status = stericol_cf_write_numbers(context, result->writer, result->flags, "flag_values",
                                           STERICOL_CF_INT8, STERICOL_RESULT_FLAGS, values);
    if (status == STERICOL_OK)
        status = stericol_cf_write_text(context, result->writer, result->flags, "flag_meanings",
                                        stericol_result_flag_meanings);
    shape.type = STERICOL_CF_FLOAT;
    if (status == STERICOL_OK)
        status = define(context, result, &area, &shape, &result->cell_area);
    return status;
}

static stericol_status define_region_names(stericol_context *context, stericol_result *result,
                                           size_t dimension, const char *const *names)
{
    labels to = {context, result->writer, 0, STERICOL_OK};

    to.status = stericol_cf_write_variable(context, result->writer, "region_name", STERICOL_CF_STRING, 1,
                                           &dimension, false, false, &to.variable);
    label(&to, "long_name", "name of the region");
    label(&to, "standard_name", "region");
    if (to.status == STERICOL_OK)
        to.status = stericol_cf_write_strings(context, result->writer, to.variable, result->regions, names);
    return to.status;
}

static stericol_status define_quantities(stericol_context *context, stericol_result *result,
                                         const stericol_change_layout *layout, size_t dimension)
{
    const form area = {.prefix = "region_",
                       .whose = ", by region",
                       .type = STERICOL_CF_DOUBLE,
                       .rank = 1,
                       .dimension = {dimension},
                       .coordinates = "region_name"};
    form whole = area, by_layer = area;
    stericol_status status = STERICOL_OK;

    if (result->axes.contiguous)
        whole.coordinates = "region_name column_depth";
    by_layer.prefix = "region_layer_";
    by_layer.whose = ", by region and layer";
    by_layer.rank = 2;
    by_layer.dimension[1] = result->axes.layer;
    by_layer.coordinates = "region_name layer_depth";
    for (int kind = WHOLE; kind < (layout->layers > 1 ? KINDS : BY_LAYER); kind++)
        for (int i = 0; i < STERICOL_REGION_QUANTITY_COUNT && status == STERICOL_OK; i++) {
            const stericol_region_quantity quantity = (stericol_region_quantity)i;
            const bool surface = quantity == STERICOL_REGION_AREA; /* it has no depth */

            if (!stericol_change_holds_region(layout, quantity) || (surface && kind == BY_LAYER))
                continue;
            status = define(context, result, stericol_region_entry(quantity),
                            surface         ? &area
                            : kind == WHOLE ? &whole
                                            : &by_layer,
                            &result->region[i][kind]);
        }
    return status;
}

static stericol_status define_regions(stericol_context *context, stericol_result *result,
                                      const stericol_change_layout *layout)
{
    size_t dimension = 0;
    stericol_status status;

    if (layout->regions == 0)
        return STERICOL_OK;
    status = stericol_cf_write_dimension(context, result->writer, "region", layout->regions, &dimension);
    if (status == STERICOL_OK)
        status = define_region_names(context, result, dimension, layout->region_names);
    if (status == STERICOL_OK)
        status = define_quantities(context, result, layout, dimension);
    if (status == STERICOL_OK && layout->region_area_source != NULL)
        status = stericol_cf_write_text(context, result->writer, result->region[STERICOL_REGION_AREA][WHOLE],
                                        "comment", layout->region_area_source);
    if (status == STERICOL_OK && layout->layers > 1)
        status = stericol_cf_write_text(context, result->writer,
                                        result->region[STERICOL_REGION_COVERED_AREA][BY_LAYER], "comment",
                                        "columns in which the layer is complete or lies wholly below the sea "
                                        "floor; divisor of the layer's means");
    return status;
}

/* ---- the file's life ---- */

static void clear_variables(stericol_result *result)
{
    for (int kind = WHOLE; kind < KINDS; kind++) {
        for (int i = 0; i < STERICOL_MAP_COUNT; i++)
            result->map[i][kind] = ABSENT;
        for (int i = 0; i < STERICOL_REGION_QUANTITY_COUNT; i++)
            result->region[i][kind] = ABSENT;
    }
}

stericol_status stericol_result_new(stericol_context *context, const char *path, bool replace,
                                    const stericol_change_layout *layout, stericol_result **result)
{
    stericol_result *made = calloc(1, sizeof *made);
    stericol_status status;

    assert(layout->rows > 0 && layout->columns > 0 && layout->layers > 0);
    *result = NULL;
    if (made == NULL)
        return stericol_fail_memory(context, sizeof *made, "the result");
    clear_variables(made);
    made->layers = layout->layers;
    made->regions = layout->regions;
    made->layer_bounds = stericol_new_array(layout->layers, sizeof *made->layer_bounds);
    if (made->layer_bounds == NULL) {
        status = stericol_fail_memory(context, 0, "the result");
        goto done;
    }
    memcpy(made->layer_bounds, layout->layer_bounds, layout->layers * sizeof *made->layer_bounds);
    status = stericol_cf_writer_new(context, path, replace, &made->writer);
    if (status == STERICOL_OK)
        status = stericol_result_axes_write(context, made->writer, layout, &made->axes);
    if (status == STERICOL_OK)
        status = label_file(context, made, layout);
    if (status == STERICOL_OK)
        status = define_maps(context, made, layout);
    if (status == STERICOL_OK)
        status = define_flags(context, made);
    if (status == STERICOL_OK && layout->cell_area_source != NULL)
        status = stericol_cf_write_text(context, made->writer, made->cell_area, "comment",
                                        layout->cell_area_source);
    if (status == STERICOL_OK)
        status = define_regions(context, made, layout);

done:
    if (status != STERICOL_OK) {
        stericol_result_free(made);
        return status;
    }
    *result = made;
    return STERICOL_OK;
}

void stericol_result_free(stericol_result *result)
{
    if (result == NULL)
        return;
    stericol_cf_writer_free(result->writer);
    free(result->layer_bounds);
    free(result);
}

bool stericol_result_remove_temporary(const stericol_result *result)
{
    return result != NULL && stericol_cf_writer_remove_temporary(result->writer);
}

/* ---- values ---- */

static stericol_status write_rows(stericol_context *context, stericol_result *result, size_t variable,
                                  size_t layer, size_t row0, size_t rows, const double *values)
{
    const size_t start[3] = {layer, row0, 0}, count[3] = {1, rows, result->axes.columns};
    const size_t skip = layer == STERICOL_WHOLE_COLUMN ? 1 : 0;

    assert(variable != ABSENT && row0 <= result->axes.rows && rows <= result->axes.rows - row0);
    return stericol_cf_write_values(context, result->writer, variable, start + skip, count + skip, values);
}

stericol_status stericol_result_map(stericol_context *context, stericol_result *result, stericol_map map,
                                    size_t layer, size_t row0, size_t rows, const double *values)
{
    assert((unsigned)map < STERICOL_MAP_COUNT && (layer == STERICOL_WHOLE_COLUMN || layer < result->layers));
    return write_rows(context, result, result->map[map][layer == STERICOL_WHOLE_COLUMN ? WHOLE : BY_LAYER],
                      layer, row0, rows, values);
}

stericol_status stericol_result_cell_area(stericol_context *context, stericol_result *result, size_t row0,
                                          size_t rows, const double *values)
{
    return write_rows(context, result, result->cell_area, STERICOL_WHOLE_COLUMN, row0, rows, values);
}

stericol_status stericol_result_flags(stericol_context *context, stericol_result *result, size_t row0,
                                      size_t rows, const signed char *flags)
{
    const size_t count = rows * result->axes.columns; /* fits: the caller holds that many bytes */
    double *values = stericol_new_doubles(count);
    stericol_status status;

    if (values == NULL)
        return stericol_fail_memory(context, 0, "the column flags");
    for (size_t i = 0; i < count; i++) {
        assert(flags[i] < STERICOL_RESULT_FLAGS);
        values[i] = flags[i] < 0 ? (double)NAN : flags[i];
    }
    status = write_rows(context, result, result->flags, STERICOL_WHOLE_COLUMN, row0, rows, values);
    free(values);
    return status;
}

stericol_status stericol_result_region(stericol_context *context, stericol_result *result,
                                       stericol_region_quantity quantity, size_t layer, const double *values)
{
    const int kind = layer == STERICOL_WHOLE_COLUMN ? WHOLE : BY_LAYER;
    const size_t start[2] = {0, layer}, count[2] = {result->regions, 1};

    assert((unsigned)quantity < STERICOL_REGION_QUANTITY_COUNT);
    assert((kind == WHOLE || layer < result->layers) && result->region[quantity][kind] != ABSENT);
    return stericol_cf_write_values(context, result->writer, result->region[quantity][kind], start, count,
                                    values);
}

stericol_status stericol_result_attribute(stericol_context *context, stericol_result *result,
                                          const char *name, const char *text)
{
    return stericol_cf_write_text(context, result->writer, GLOBAL, name, text);
}

stericol_status stericol_result_attribute_number(stericol_context *context, stericol_result *result,
                                                 const char *name, double value)
{
    return stericol_cf_write_numbers(context, result->writer, GLOBAL, name, STERICOL_CF_DOUBLE, 1, &value);
}

stericol_status stericol_result_commit(stericol_context *context, stericol_result *result, double deepest)
{
    labels to = {context, result->writer, GLOBAL, STERICOL_OK};
    double top = HUGE_VAL, bottom = 0.0;

    assert(isfinite(deepest));
    for (size_t i = 0; i < result->layers; i++) {
        double *bounds = result->layer_bounds[i];

        if (isinf(bounds[1]))
            bounds[1] = deepest;
        top = fmin(top, bounds[0]);
        bottom = fmax(bottom, bounds[1]);
    }
    to.status = stericol_result_axes_write_depths(context, result->writer, &result->axes, result->layers,
                                                  (const double(*)[2])result->layer_bounds);
    label_number(&to, "geospatial_vertical_min", STERICOL_CF_DOUBLE, top);
    label_number(&to, "geospatial_vertical_max", STERICOL_CF_DOUBLE, bottom);
    label(&to, "geospatial_vertical_units", "m");
    label(&to, "geospatial_vertical_positive", "down");
    return to.status != STERICOL_OK ? to.status : stericol_cf_writer_commit(context, result->writer);
}
