/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * valid_min, valid_max, valid_range.  They stand in packed units (CF 1.10, section 2.5.1), but many files
 * have them in unpacked ones.  Taken as packed, such limits would drop nearly everything, so they are
 * recognised:
 *   - by their type: of the type of the unpacked values and wider than the stored one (NetCDF User's Guide,
 *     appendix A, valid_range: then they refer to the unpacked data);
 *   - by not fitting the stored type;
 *   - by the values: limits that drop nine tenths of a sample as packed and keep nine tenths as unpacked.
 */
#include "cf/limits.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>

typedef struct limit {
    const stericol_cf_attribute *attribute; /* NULL: not given */
    stericol_cf_number number;
} limit;

enum { SAMPLES = 8, SAMPLE_SIDE = 256 };

static double real_of(const stericol_cf_number *number)
{
    switch (number->sort) {
    case STERICOL_CF_WHOLE:
        return (double)number->value.whole;
    case STERICOL_CF_NATURAL:
        return (double)number->value.natural;
    default:
        return number->value.real;
    }
}

static void ignore(stericol_context *context, const stericol_cf_file *file,
                   const stericol_cf_variable *variable, const char *name, const char *why)
{
    stericol_notice(context, STERICOL_WARNING, file->path, variable->name, "its %s %s and is ignored", name,
                    why);
}

/* `count` numbers of the attribute `name`; false (with a notice unless absent) when they are not usable. */
static bool read_limits(stericol_context *context, const stericol_cf_file *file,
                        const stericol_cf_variable *variable, const char *name, limit *limits, size_t count)
{
    const stericol_cf_attribute *attribute = stericol_cf_attribute_of(variable, name);
    stericol_cf_number numbers[2];
    size_t i;

    if (attribute == NULL)
        return false;
    if (attribute->numbers == NULL) {
        ignore(context, file, variable, name, "is no number");
        return false;
    }
    if (attribute->count != count || stericol_cf_numbers_of(variable, attribute, numbers, count) != count) {
        ignore(context, file, variable, name, count == 1 ? "is not one number" : "is not a pair of numbers");
        return false;
    }
    for (i = 0; i < count; i++) {
        if (isnan(real_of(&numbers[i]))) {
            ignore(context, file, variable, name, "is NaN");
            return false;
        }
    }
    for (i = 0; i < count; i++)
        limits[i] = (limit){attribute, numbers[i]};
    return true;
}

/* A stored bound clamped into the range of the type. */
static stericol_cf_stored clamp(const stericol_cf_rules *rules, stericol_cf_type declared,
                                const stericol_cf_number *number)
{
    stericol_cf_stored low, high, stored;

    if (stericol_cf_fit_number(rules->type, declared, number, &stored))
        return stored;
    stericol_cf_range_of(rules->type, &low, &high);
    return real_of(number) < 0.0 ? low : high;
}

/* A real bound on an integer type is first moved inwards to the next whole number. */
static stericol_cf_number inward(const stericol_cf_rules *rules, const stericol_cf_number *number,
                                 bool is_low)
{
    stericol_cf_number moved = *number;

    if (moved.sort == STERICOL_CF_REAL && stericol_cf_sort_of(rules->type) != STERICOL_CF_REAL)
        moved.value.real = is_low ? ceil(moved.value.real) : floor(moved.value.real);
    return moved;
}

static void set_packed(const limit *low, const limit *high, stericol_cf_type declared,
                       stericol_cf_rules *rules)
{
    stericol_cf_number number;

    if (low->attribute != NULL) {
        number = inward(rules, &low->number, true);
        rules->low = clamp(rules, declared, &number);
    }
    if (high->attribute != NULL) {
        number = inward(rules, &high->number, false);
        rules->high = clamp(rules, declared, &number);
    }
}

/* An unpacked limit in stored units, moved outwards by its own rounding so that a value on the limit stays.
 */
static stericol_cf_number unpacked_bound(const limit *given, const stericol_cf_rules *rules, bool is_low)
{
    const double value = real_of(&given->number);
    const double rounding = given->attribute->type == STERICOL_CF_FLOAT ? 0x1p-24 : 0x1p-51;
    const double stored = (value - rules->offset) / rules->scale;
    const double slack = 1e-6 + (fabs(value) + fabs(rules->offset)) * rounding / fabs(rules->scale);
    stericol_cf_number number = {.sort = STERICOL_CF_REAL};

    number.value.real = is_low ? stored - slack : stored + slack;
    return inward(rules, &number, is_low);
}

static void set_unpacked(const limit *low, const limit *high, stericol_cf_rules *rules)
{
    /* A negative scale turns the order round. */
    const limit *least = rules->scale > 0.0 ? low : high, *most = rules->scale > 0.0 ? high : low;
    stericol_cf_number number;

    if (least->attribute != NULL) {
        number = unpacked_bound(least, rules, true);
        rules->low = clamp(rules, rules->type, &number);
    }
    if (most->attribute != NULL) {
        number = unpacked_bound(most, rules, false);
        rules->high = clamp(rules, rules->type, &number);
    }
}

static bool is_wider(const limit *given, const stericol_cf_rules *rules)
{
    return given->attribute != NULL && stericol_cf_sort_of(given->attribute->type) == STERICOL_CF_REAL &&
           stericol_cf_sort_of(rules->type) != STERICOL_CF_REAL;
}

static bool does_not_fit(const limit *given, const stericol_cf_rules *rules, stericol_cf_type declared)
{
    stericol_cf_stored stored;

    return given->attribute != NULL &&
           !stericol_cf_fit_number(rules->type, declared, &given->number, &stored);
}

/* Limits so narrow, or so one-sided, that a look at the values is worth its time. */
static bool are_suspect(const limit *low, const limit *high, const stericol_cf_rules *rules)
{
    stericol_cf_stored least, most;
    double width;

    if (low->attribute == NULL || high->attribute == NULL)
        return true;
    stericol_cf_range_of(rules->type, &least, &most);
    switch (stericol_cf_sort_of(rules->type)) {
    case STERICOL_CF_WHOLE:
        width = (double)most.whole - (double)least.whole;
        break;
    case STERICOL_CF_NATURAL:
        width = (double)most.natural;
        break;
    default:
        return true;
    }
    return real_of(&high->number) - real_of(&low->number) < 0.02 * width;
}

/* Adds how many of the stored values are not missing by `rules`. */
static void count_present(const stericol_cf_rules *rules, const void *stored, size_t count, double *values,
                          size_t *present)
{
    stericol_cf_counts counts = {0};
    size_t i;

    stericol_cf_unpack(rules, stored, count, (double)INFINITY, values, &counts);
    for (i = 0; i < count; i++)
        *present += isnan(values[i]) ? 0 : 1;
}

/* One of SAMPLES windows spread over the outer dimensions, in the middle of the inner two. */
static size_t place_sample(const stericol_cf_file *file, const stericol_cf_variable *variable, size_t sample,
                           size_t *start, size_t *count)
{
    size_t total = 1, i;

    for (i = 0; i < variable->rank; i++) {
        const size_t length = file->dimensions[variable->dimension[i]].length;

        if (i + 2 >= variable->rank) {
            count[i] = length < SAMPLE_SIDE ? length : SAMPLE_SIDE;
            start[i] = (length - count[i]) / 2;
        } else {
            count[i] = length > 0;
            start[i] = (size_t)((double)length * (2.0 * (double)sample + 1.0) / (2.0 * SAMPLES));
        }
        total *= count[i];
    }
    return total;
}

/* Whether the values say that the limits are in unpacked units. */
static bool values_disagree(const stericol_cf_file *file, const stericol_cf_variable *variable,
                            const stericol_cf_rules *open, const stericol_cf_rules *packed,
                            const stericol_cf_rules *unpacked)
{
    const size_t most = (size_t)SAMPLE_SIDE * SAMPLE_SIDE;
    size_t start[STERICOL_CF_MOST_RANK], count[STERICOL_CF_MOST_RANK];
    size_t all = 0, as_packed = 0, as_unpacked = 0, sample;
    void *stored = stericol_new_array(most, open->size);
    double *values = stericol_new_doubles(most);

    for (sample = 0; sample < SAMPLES && stored != NULL && values != NULL; sample++) {
        const size_t total = place_sample(file, variable, sample, start, count);

        /* No context: a read error is for the reading proper to tell. */
        if (total == 0 || stericol_cf_read_stored(NULL, file, variable, start, count, stored) != STERICOL_OK)
            break;
        count_present(open, stored, total, values, &all);
        count_present(packed, stored, total, values, &as_packed);
        count_present(unpacked, stored, total, values, &as_unpacked);
    }
    free(stored);
    free(values);
    return all > 0 && (double)as_packed < 0.1 * (double)all && (double)as_unpacked > 0.9 * (double)all;
}

static bool is_empty(const stericol_cf_rules *rules)
{
    switch (stericol_cf_sort_of(rules->type)) {
    case STERICOL_CF_WHOLE:
        return rules->low.whole > rules->high.whole;
    case STERICOL_CF_NATURAL:
        return rules->low.natural > rules->high.natural;
    default:
        return rules->low.real > rules->high.real;
    }
}

stericol_status stericol_cf_set_limits(stericol_context *context, const stericol_cf_file *file,
                                       const stericol_cf_variable *variable, stericol_cf_rules *rules)
{
    const bool is_packed = rules->scale != 1.0 || rules->offset != 0.0;
    const stericol_cf_rules open = *rules;
    stericol_cf_rules packed = open, unpacked = open;
    limit limits[2] = {{0}, {0}};
    bool in_unpacked_units = false;

    if (!read_limits(context, file, variable, "valid_range", limits, 2)) {
        (void)read_limits(context, file, variable, "valid_min", &limits[0], 1);
        (void)read_limits(context, file, variable, "valid_max", &limits[1], 1);
    }
    if (limits[0].attribute == NULL && limits[1].attribute == NULL)
        return STERICOL_OK;
    set_packed(&limits[0], &limits[1], variable->type, &packed);
    if (is_packed) {
        set_unpacked(&limits[0], &limits[1], &unpacked);
        in_unpacked_units = is_wider(&limits[0], rules) || is_wider(&limits[1], rules) ||
                            does_not_fit(&limits[0], rules, variable->type) ||
                            does_not_fit(&limits[1], rules, variable->type) ||
                            (are_suspect(&limits[0], &limits[1], rules) &&
                             values_disagree(file, variable, &open, &packed, &unpacked));
    }
    if (in_unpacked_units)
        stericol_notice(context, STERICOL_WARNING, file->path, variable->name,
                        "its valid limits only make sense in unpacked units and are used so");
    *rules = in_unpacked_units ? unpacked : packed;
    if (is_empty(rules)) {
        *rules = open;
        stericol_notice(context, STERICOL_WARNING, file->path, variable->name,
                        "its valid limits leave no value and are ignored");
    }
    return STERICOL_OK;
}
