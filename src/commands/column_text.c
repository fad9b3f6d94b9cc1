/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The working for people: two tables, level by level, then the sums.  Lines stay within 100 characters. */
#include "commands/column_inside.h"

#include <math.h>
#include <stdio.h>

enum { NUMBER_ROOM = 48 };

/* A column of a table: heading, unit, width, decimals. */
typedef struct heading {
    const char *name, *unit;
    int width, decimals;
} heading;

static void add_headings(stericol_text *text, const heading *headings, size_t count)
{
    for (size_t i = 0; i < count; i++)
        stericol_text_format(text, "%*s", headings[i].width, headings[i].name);
    stericol_text_add(text, "\n");
    for (size_t i = 0; i < count; i++)
        stericol_text_format(text, "%*s", headings[i].width, headings[i].unit);
    stericol_text_add(text, "\n");
}

/* Right-aligned; a missing value is blank, and one too wide for its column has an exponent. */
static void add_number(stericol_text *text, const heading *h, double value)
{
    char number[NUMBER_ROOM] = "";

    if (isfinite(value)) {
        snprintf(number, sizeof number, "%.*f", h->decimals, fabs(value) > 0.0 ? value : 0.0);
        if (snprintf(NULL, 0, "%s", number) >= h->width)
            snprintf(number, sizeof number, "%.2e", value);
    }
    stericol_text_format(text, "%*s", h->width, number);
}

static void add_numbers(stericol_text *text, const heading *headings, size_t count, const double *values)
{
    for (size_t i = 0; i < count; i++)
        add_number(text, &headings[i], values[i]);
}

/* Blanks at the end of a line help nobody. */
static void end_line(stericol_text *text)
{
    while (text->length > 0 && text->bytes[text->length - 1] == ' ')
        text->bytes[--text->length] = '\0';
    stericol_text_add(text, "\n");
}

static const char *salinity_word(const stericol_working *w, bool unit)
{
    bool practical = w->levels->water.equation == STERICOL_EQUATION_EOS80;

    return unit ? (practical ? "1" : "g/kg") : (practical ? "S" : "SA");
}

static const char *temperature_word(const stericol_working *w)
{
    return w->levels->water.equation == STERICOL_EQUATION_EOS80 ? "theta" : "Theta";
}

static const char *contraction_unit(const stericol_working *w)
{
    return w->levels->water.equation == STERICOL_EQUATION_EOS80 ? "1e-6" : "1e-6 kg/g";
}

/* ---- what was done ---- */

const char *stericol_working_equation_word(const stericol_working *w)
{
    switch (w->levels->water.equation) {
    case STERICOL_EQUATION_TEOS10:
        return "teos10";
    case STERICOL_EQUATION_GIBBS:
        return "gibbs";
    case STERICOL_EQUATION_EOS80:
        return "eos80";
    case STERICOL_EQUATION_LINEAR:
        break;
    }
    return "linear";
}

static void add_title(stericol_text *text, const stericol_working *w)
{
    static const char *const vertical[] = {"cells", "linear", "steffen", "akima"};
    static const char *const attribution[] = {"symmetric", "earlier", "linear"};

    stericol_text_format(text, "%s\nequation %s, latitude %g, integrated over %s, vertical %s",
                         w->levels->single ? "One column against the standard ocean"
                                           : "Change of one column, later less earlier",
                         stericol_working_equation_word(w), w->levels->latitude,
                         w->levels->coordinate == STERICOL_COORDINATE_PRESSURE ? "pressure" : "depth",
                         vertical[w->options->vertical]);
    if (!w->levels->single)
        stericol_text_format(text, ", attribution %s", attribution[w->options->attribution]);
    stericol_text_add(text, "\n");
    if (w->levels->single)
        stericol_text_format(text, "standard ocean: %s\n",
                             w->levels->water.equation == STERICOL_EQUATION_EOS80
                                 ? "S = 35, t = 0 degC in situ"
                                 : "SA = 35.16504 g/kg, Theta = 0 degC");
}

static void add_legend(stericol_text *text, const stericol_working *w)
{
    bool carried = false, limits = false;

    for (size_t i = 0; i < w->row_count; i++) {
        carried = carried || w->rows[i].kind == STERICOL_ROW_CARRIED;
        limits = limits || w->rows[i].kind == STERICOL_ROW_LIMIT;
    }
    if (carried)
        stericol_text_add(text, "* the nearest level's water, carried to this depth\n");
    if (limits)
        stericol_text_add(text, "- a limit of a layer, or the sea floor, between two levels\n");
}

static const char *row_mark(const stericol_working_row *row)
{
    return row->kind == STERICOL_ROW_CARRIED ? "*" : row->kind == STERICOL_ROW_LIMIT ? "-" : " ";
}

/* ---- a change ---- */

static void add_change_levels(stericol_text *text, const stericol_working *w)
{
    const heading place[] = {{"depth", "m", 9, 2}, {"pressure", "dbar", 9, 2}};
    const heading water[] = {{salinity_word(w, false), salinity_word(w, true), 9, 4},
                             {temperature_word(w), "degC", 9, 4},
                             {"v", "1e-6 m3/kg", 12, 5},
                             {salinity_word(w, false), salinity_word(w, true), 9, 4},
                             {temperature_word(w), "degC", 9, 4},
                             {"v", "1e-6 m3/kg", 12, 5},
                             {"alpha", "1e-6/K", 9, 3},
                             {"beta", contraction_unit(w), 10, 3}};
    const heading all[] = {place[0], place[1], {"", "", 1, 0}, water[0], water[1], water[2],
                           water[3], water[4], water[5],       water[6], water[7]};

    stericol_text_format(text, "\n%19s%30s%30s%19s\n", "", "earlier", "later", "mean state");
    add_headings(text, all, sizeof all / sizeof *all);
    for (size_t i = 0; i < w->row_count; i++) {
        const stericol_working_row *row = &w->rows[i];

        add_numbers(text, place, 2, (double[]){row->depth, row->pressure});
        stericol_text_add(text, row_mark(row));
        add_numbers(text, water, 8,
                    (double[]){row->salinity[0], row->temperature[0], 1e6 * row->volume[0], row->salinity[1],
                               row->temperature[1], 1e6 * row->volume[1], 1e6 * row->expansion,
                               1e6 * row->contraction});
        end_line(text);
    }
}

static void add_change_parts(stericol_text *text, const stericol_working *w)
{
    static const heading headings[] = {{"from", "m", 9, 2},         {"to", "m", 10, 2},
                                       {"steric", "mm", 12, 4},     {"thermosteric", "mm", 14, 4},
                                       {"halosteric", "mm", 12, 4}, {"heat", "MJ/m2", 14, 4},
                                       {"remainder", "mm", 12, 4}};
    const size_t count =
        sizeof headings / sizeof *headings - (w->options->attribution == STERICOL_ATTRIBUTION_SYMMETRIC);

    stericol_text_add(text, "\nPart of each interval in the change\n");
    add_headings(text, headings, count);
    for (size_t i = 0; i + 1 < w->row_count; i++) {
        const double *part = w->rows[i].part;

        add_numbers(text, headings, count,
                    (double[]){w->rows[i].depth, w->rows[i + 1].depth, 1e3 * part[STERICOL_COLUMN_TOTAL],
                               1e3 * part[STERICOL_COLUMN_THERMOSTERIC],
                               1e3 * part[STERICOL_COLUMN_HALOSTERIC], 1e-6 * part[STERICOL_COLUMN_HEAT],
                               1e3 * part[STERICOL_COLUMN_REMAINDER]});
        end_line(text);
    }
}

/* "0..700", "2000..bottom", or "all". */
static void add_layer(stericol_text *text, const stericol_working *w, size_t layer)
{
    char word[NUMBER_ROOM] = "all";

    if (layer < w->layer_count && isfinite(w->sums[layer].lower))
        snprintf(word, sizeof word, "%g..%g", w->sums[layer].upper, w->sums[layer].lower);
    else if (layer < w->layer_count)
        snprintf(word, sizeof word, "%g..bottom", w->sums[layer].upper);
    stericol_text_format(text, "%14s", word);
}

/* One layer is the whole column. */
static size_t sum_count(const stericol_working *w)
{
    return w->layer_count > 1 ? w->layer_count + 1 : 1;
}

/* A sum that is missing says why; true where it did. */
static bool add_missing(stericol_text *text, const stericol_working *w, size_t layer)
{
    if (isfinite(w->sums[layer].value[STERICOL_COLUMN_TOTAL]))
        return false;
    if (layer == w->layer_count)
        stericol_text_add(text, "  missing, since a layer is incomplete\n");
    else
        stericol_text_add(text, w->sums[layer].state == STERICOL_LAYER_BELOW_SEA_FLOOR
                                    ? "  below the sea floor\n"
                                    : "  incomplete: the data do not reach its limits\n");
    return true;
}

static void add_change_sums(stericol_text *text, const stericol_working *w)
{
    static const heading headings[] = {{"depth", "m", 9, 2},       {"steric", "mm", 11, 4},
                                       {"thermost.", "mm", 11, 4}, {"halost.", "mm", 11, 4},
                                       {"heat", "MJ/m2", 13, 3},   {"efficiency", "1e-12 m3/J", 11, 3},
                                       {"alpha", "1e-6/K", 9, 3},  {"remainder", "mm", 11, 4}};
    const size_t count =
        sizeof headings / sizeof *headings - (w->options->attribution == STERICOL_ATTRIBUTION_SYMMETRIC);

    stericol_text_add(text, "\nSums\n         layer");
    for (size_t i = 0; i < count; i++)
        stericol_text_format(text, "%*s", headings[i].width, headings[i].name);
    stericol_text_format(text, "\n%14s", "m");
    for (size_t i = 0; i < count; i++)
        stericol_text_format(text, "%*s", headings[i].width, headings[i].unit);
    stericol_text_add(text, "\n");
    for (size_t k = 0; k < sum_count(w); k++) {
        const double *sum = w->sums[k].value;

        add_layer(text, w, k);
        if (add_missing(text, w, k))
            continue;
        add_numbers(text, headings, count,
                    (double[]){sum[STERICOL_COLUMN_DEPTH], 1e3 * sum[STERICOL_COLUMN_TOTAL],
                               1e3 * sum[STERICOL_COLUMN_THERMOSTERIC], 1e3 * sum[STERICOL_COLUMN_HALOSTERIC],
                               1e-6 * sum[STERICOL_COLUMN_HEAT], 1e12 * sum[STERICOL_COLUMN_EFFICIENCY],
                               1e6 * sum[STERICOL_COLUMN_EXPANSION], 1e3 * sum[STERICOL_COLUMN_REMAINDER]});
        end_line(text);
    }
}

/* ---- one table ---- */

static void add_single_levels(stericol_text *text, const stericol_working *w)
{
    const heading place[] = {{"depth", "m", 9, 2}, {"pressure", "dbar", 9, 2}};
    const heading water[] = {{salinity_word(w, false), salinity_word(w, true), 9, 4},
                             {temperature_word(w), "degC", 9, 4},
                             {"v", "1e-6 m3/kg", 12, 5},
                             {"v standard", "1e-6 m3/kg", 12, 5},
                             {"anomaly", "1e-8 m3/kg", 12, 4},
                             {"alpha", "1e-6/K", 9, 3},
                             {"beta", contraction_unit(w), 10, 3}};
    const heading all[] = {place[0], place[1], {"", "", 1, 0}, water[0], water[1],
                           water[2], water[3], water[4],       water[5], water[6]};

    stericol_text_add(text, "\n");
    add_headings(text, all, sizeof all / sizeof *all);
    for (size_t i = 0; i < w->row_count; i++) {
        const stericol_working_row *row = &w->rows[i];

        add_numbers(text, place, 2, (double[]){row->depth, row->pressure});
        stericol_text_add(text, row_mark(row));
        add_numbers(text, water, 7,
                    (double[]){row->salinity[1], row->temperature[1], 1e6 * row->volume[1],
                               1e6 * row->volume[0], 1e8 * (row->volume[1] - row->volume[0]),
                               1e6 * row->expansion, 1e6 * row->contraction});
        end_line(text);
    }
}

static void add_single_parts(stericol_text *text, const stericol_working *w)
{
    static const heading headings[] = {{"from", "dbar", 9, 2},
                                       {"to", "dbar", 10, 2},
                                       {"of the layer", "m2/s2", 15, 5},
                                       {"from the top", "m2/s2", 15, 5},
                                       {"above deepest", "dyn m", 15, 5},
                                       {"steric height", "mm", 16, 4}};
    double whole = 0.0, above = 0.0;

    for (size_t i = 0; i < w->row_count; i++)
        if (isfinite(w->rows[i].part[STERICOL_COLUMN_TOTAL]))
            whole += stericol_working_geopotential(w, w->rows[i].part[STERICOL_COLUMN_TOTAL]);
    stericol_text_add(text, "\nGeopotential anomaly of each interval; its sum from the top to the interval's "
                            "lower end; dynamic\nheight of the interval's upper end above the deepest level "
                            "(1 dynamic metre is 10 m2/s2); steric\nheight of the interval\n");
    add_headings(text, headings, sizeof headings / sizeof *headings);
    for (size_t i = 0; i + 1 < w->row_count; i++) {
        const double height = w->rows[i].part[STERICOL_COLUMN_TOTAL];
        const double layer = stericol_working_geopotential(w, height), below = whole - above;

        if (isfinite(layer))
            above += layer;
        add_numbers(text, headings, sizeof headings / sizeof *headings,
                    (double[]){w->rows[i].pressure, w->rows[i + 1].pressure, layer,
                               isfinite(layer) ? above : (double)NAN,
                               isfinite(layer) ? 0.1 * below : (double)NAN, 1e3 * height});
        end_line(text);
    }
}

static void add_single_sums(stericol_text *text, const stericol_working *w)
{
    static const heading headings[] = {{"depth", "m", 10, 2},
                                       {"geopotential", "m2/s2", 15, 5},
                                       {"dynamic height", "dyn m", 16, 5},
                                       {"steric height", "mm", 16, 4}};
    const size_t count = sizeof headings / sizeof *headings;

    stericol_text_add(text, "\nSums\n         layer");
    for (size_t i = 0; i < count; i++)
        stericol_text_format(text, "%*s", headings[i].width, headings[i].name);
    stericol_text_format(text, "\n%14s", "m");
    for (size_t i = 0; i < count; i++)
        stericol_text_format(text, "%*s", headings[i].width, headings[i].unit);
    stericol_text_add(text, "\n");
    for (size_t k = 0; k < sum_count(w); k++) {
        const double height = w->sums[k].value[STERICOL_COLUMN_TOTAL];
        const double geopotential = stericol_working_geopotential(w, height);

        add_layer(text, w, k);
        if (add_missing(text, w, k))
            continue;
        add_numbers(text, headings, count,
                    (double[]){w->sums[k].value[STERICOL_COLUMN_DEPTH], geopotential, 0.1 * geopotential,
                               1e3 * height});
        end_line(text);
    }
}

void stericol_working_text(const stericol_working *w, stericol_text *text)
{
    add_title(text, w);
    if (w->levels->single)
        add_single_levels(text, w);
    else
        add_change_levels(text, w);
    add_legend(text, w);
    if (w->levels->single) {
        add_single_parts(text, w);
        add_single_sums(text, w);
    } else {
        add_change_parts(text, w);
        add_change_sums(text, w);
    }
    stericol_text_format(text, "\nfrom %.2f m to %.2f m; the column ends: %s\n", w->top, w->reached,
                         stericol_column_flag_word(w->flag));
}
