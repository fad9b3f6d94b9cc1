/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * From the attributes of a variable to the rules by which its stored values are read: packing, sign, fills
 * and limits (CF 1.10, sections 2.5.1 and 8.1; NetCDF User's Guide, appendix A, "Attribute Conventions").
 */
#include "cf/room.h"

#include "cf/limits.h"

#include "base/checked.h"
#include "base/text.h"

#include <float.h>
#include <math.h>
#include <netcdf.h>
#include <stdlib.h>
#include <string.h>

bool stericol_cf_is_number(stericol_cf_type type)
{
    return type <= STERICOL_CF_DOUBLE;
}

size_t stericol_cf_size_of(stericol_cf_type type)
{
    static const unsigned char sizes[] = {1, 1, 2, 2, 4, 4, 8, 8, 4, 8};

    return stericol_cf_is_number(type) ? sizes[type] : 1;
}

stericol_cf_sort stericol_cf_sort_of(stericol_cf_type type)
{
    switch (type) {
    case STERICOL_CF_FLOAT:
    case STERICOL_CF_DOUBLE:
        return STERICOL_CF_REAL;
    case STERICOL_CF_UINT8:
    case STERICOL_CF_UINT16:
    case STERICOL_CF_UINT32:
    case STERICOL_CF_UINT64:
        return STERICOL_CF_NATURAL;
    default:
        return STERICOL_CF_WHOLE;
    }
}

void stericol_cf_range_of(stericol_cf_type type, stericol_cf_stored *low, stericol_cf_stored *high)
{
    const unsigned bits = (unsigned)(8 * stericol_cf_size_of(type));

    switch (stericol_cf_sort_of(type)) {
    case STERICOL_CF_REAL:
        high->real = type == STERICOL_CF_FLOAT ? (double)FLT_MAX : DBL_MAX;
        low->real = -high->real;
        break;
    case STERICOL_CF_NATURAL:
        low->natural = 0;
        high->natural = UINT64_MAX >> (64 - bits);
        break;
    case STERICOL_CF_WHOLE:
        high->whole = (int64_t)(UINT64_MAX >> (65 - bits));
        low->whole = -high->whole - 1;
        break;
    }
}

/* A whole or natural number as a stored value of `type`; false when it does not fit. */
static bool fit_integer(stericol_cf_type type, const stericol_cf_number *number, stericol_cf_stored *stored)
{
    stericol_cf_stored low, high;

    stericol_cf_range_of(type, &low, &high);
    if (stericol_cf_sort_of(type) == STERICOL_CF_NATURAL) {
        if (number->sort == STERICOL_CF_WHOLE && number->value.whole < 0)
            return false;
        stored->natural =
            number->sort == STERICOL_CF_WHOLE ? (uint64_t)number->value.whole : number->value.natural;
        return stored->natural <= high.natural;
    }
    if (number->sort == STERICOL_CF_NATURAL && number->value.natural > (uint64_t)INT64_MAX)
        return false;
    stored->whole = number->sort == STERICOL_CF_WHOLE ? number->value.whole : (int64_t)number->value.natural;
    return stored->whole >= low.whole && stored->whole <= high.whole;
}

/* The same bytes read with the other sign. */
static void change_sign(stericol_cf_type to, stericol_cf_stored *stored)
{
    const unsigned bits = (unsigned)(8 * stericol_cf_size_of(to));
    const uint64_t mask = UINT64_MAX >> (64 - bits);

    if (stericol_cf_sort_of(to) == STERICOL_CF_NATURAL)
        stored->natural = (uint64_t)stored->whole & mask;
    else if (stored->natural > mask >> 1)
        stored->whole = (int64_t)(stored->natural - mask / 2 - 1) - (int64_t)(mask / 2) - 1;
    else
        stored->whole = (int64_t)stored->natural;
}

bool stericol_cf_fit_number(stericol_cf_type type, stericol_cf_type declared,
                            const stericol_cf_number *number, stericol_cf_stored *stored)
{
    stericol_cf_number whole = *number;

    if (stericol_cf_sort_of(type) == STERICOL_CF_REAL) {
        stored->real = number->sort == STERICOL_CF_REAL    ? number->value.real
                       : number->sort == STERICOL_CF_WHOLE ? (double)number->value.whole
                                                           : (double)number->value.natural;
        if (type == STERICOL_CF_FLOAT)
            stored->real =
                fabs(stored->real) <= (double)FLT_MAX ? (double)(float)stored->real : (double)INFINITY;
        return isfinite(stored->real);
    }
    if (number->sort == STERICOL_CF_REAL) {
        /* Beyond 2^63 nothing fits but the upper half of uint64, which no one writes as a real number. */
        if (!(fabs(number->value.real) < 0x1p63) || number->value.real != trunc(number->value.real))
            return false;
        whole.sort = STERICOL_CF_WHOLE;
        whole.value.whole = (int64_t)number->value.real;
    }
    if (fit_integer(type, &whole, stored))
        return true;
    if (type == declared || !fit_integer(declared, &whole, stored))
        return false;
    change_sign(type, stored);
    return true;
}

/* Numbers in a text, "-999" or "-999, -99"; SIZE_MAX when anything else stands there. */
static size_t parse_numbers(const char *text, stericol_cf_number *numbers, size_t most)
{
    size_t count = 0;

    for (;;) {
        char word[64];
        size_t length;

        text += strspn(text, " ,\t\r\n");
        length = strcspn(text, " ,\t\r\n");
        if (length == 0)
            return count > 0 ? count : SIZE_MAX;
        if (length >= sizeof word || count == most)
            return SIZE_MAX;
        memcpy(word, text, length);
        word[length] = '\0';
        numbers[count].sort = STERICOL_CF_REAL;
        if (!stericol_parse_number(word, &numbers[count++].value.real))
            return SIZE_MAX;
        text += length;
    }
}

/* 64-bit attributes once more, exactly: a double loses the last bits of their fills. */
static void read_exactly(const stericol_cf_variable *variable, const stericol_cf_attribute *attribute,
                         stericol_cf_number *numbers, size_t count)
{
    const bool natural = attribute->type == STERICOL_CF_UINT64;
    long long *whole = stericol_new_array(attribute->count, sizeof *whole);
    unsigned long long *naturals = stericol_new_array(attribute->count, sizeof *naturals);
    int status = NC_ENOMEM;
    size_t i;

    if (whole != NULL && naturals != NULL)
        status =
            natural
                ? nc_get_att_ulonglong(variable->group_handle, variable->handle, attribute->name, naturals)
                : nc_get_att_longlong(variable->group_handle, variable->handle, attribute->name, whole);
    for (i = 0; i < count && status == NC_NOERR; i++) {
        numbers[i].sort = natural ? STERICOL_CF_NATURAL : STERICOL_CF_WHOLE;
        if (natural)
            numbers[i].value.natural = naturals[i];
        else
            numbers[i].value.whole = whole[i];
    }
    free(whole);
    free(naturals);
}

size_t stericol_cf_numbers_of(const stericol_cf_variable *variable, const stericol_cf_attribute *attribute,
                              stericol_cf_number *numbers, size_t most)
{
    const size_t count = attribute->count < most ? attribute->count : most;
    size_t i;

    if (attribute->text != NULL)
        return parse_numbers(attribute->text, numbers, most);
    if (attribute->numbers == NULL)
        return SIZE_MAX;
    for (i = 0; i < count; i++) {
        numbers[i].sort = STERICOL_CF_REAL;
        numbers[i].value.real = attribute->numbers[i];
    }
    if (attribute->type == STERICOL_CF_INT64 || attribute->type == STERICOL_CF_UINT64)
        read_exactly(variable, attribute, numbers, count);
    return count;
}

/* scale_factor or add_offset; `value` keeps its default when the attribute is absent. */
static stericol_status read_packing(stericol_context *context, const stericol_cf_file *file,
                                    const stericol_cf_variable *variable, const char *name, double *value)
{
    const stericol_cf_attribute *attribute = stericol_cf_attribute_of(variable, name);
    stericol_cf_number number;
    size_t count;

    if (attribute == NULL)
        return STERICOL_OK;
    count = attribute->text == NULL && attribute->count != 1
                ? 0
                : stericol_cf_numbers_of(variable, attribute, &number, 1);
    if (count != 1)
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name, "correct the attribute",
                             "its %s is not one number, so that its values cannot be unpacked", name);
    *value = attribute->text != NULL ? number.value.real : attribute->numbers[0];
    if (!isfinite(*value) || (*value == 0.0 && strcmp(name, "scale_factor") == 0))
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name, "correct the attribute",
                             "its %s is %g, so that its values cannot be unpacked", name, *value);
    return STERICOL_OK;
}

/* The type with the sign turned round; the type itself for floats. */
static stericol_cf_type other_sign(stericol_cf_type type)
{
    if (stericol_cf_sort_of(type) == STERICOL_CF_REAL)
        return type;
    return stericol_cf_sort_of(type) == STERICOL_CF_NATURAL ? (stericol_cf_type)(type - 1)
                                                            : (stericol_cf_type)(type + 1);
}

/* Limits of a wider type that fit only the unsigned reading of bytes or shorts say how these are meant. */
static bool limits_are_unsigned(const stericol_cf_variable *variable)
{
    const stericol_cf_attribute *range = stericol_cf_attribute_of(variable, "valid_range");
    const stericol_cf_attribute *most = stericol_cf_attribute_of(variable, "valid_max");
    const double signed_most = variable->type == STERICOL_CF_INT8 ? 127.0 : 32767.0;
    double high;

    if (variable->type != STERICOL_CF_INT8 && variable->type != STERICOL_CF_INT16)
        return false;
    if (stericol_cf_attribute_of(variable, "scale_factor") != NULL ||
        stericol_cf_attribute_of(variable, "add_offset") != NULL)
        return false; /* then they may be in unpacked units */
    if (range != NULL && range->numbers != NULL && range->count == 2 && range->numbers[0] >= 0.0)
        high = range->numbers[1];
    else if (range == NULL && most != NULL && most->numbers != NULL && most->count == 1)
        high = most->numbers[0];
    else
        return false;
    return high > signed_most && high <= 2.0 * signed_most + 1.0;
}

static stericol_cf_type type_as_read(stericol_context *context, const stericol_cf_file *file,
                                     const stericol_cf_variable *variable)
{
    const char *word = stericol_cf_text_of(variable, "_Unsigned");
    const bool natural = stericol_cf_sort_of(variable->type) == STERICOL_CF_NATURAL;

    if (stericol_cf_sort_of(variable->type) == STERICOL_CF_REAL)
        return variable->type;
    if (word != NULL && stericol_same_ignoring_case(word, natural ? "false" : "true"))
        return other_sign(variable->type);
    if (word == NULL && limits_are_unsigned(variable)) {
        stericol_notice(context, STERICOL_NOTE, file->path, variable->name,
                        "its valid limits only fit unsigned numbers; read as unsigned");
        return other_sign(variable->type);
    }
    return variable->type;
}

/* One more range of missing values; false when there is no place for it. */
static bool add_fill(stericol_cf_rules *rules, stericol_cf_stored low, stericol_cf_stored high)
{
    if (rules->fills == STERICOL_CF_MOST_FILLS)
        return false;
    rules->fill_low[rules->fills] = low;
    rules->fill_high[rules->fills] = high;
    rules->fills++;
    return true;
}

static void add_fills(stericol_context *context, const stericol_cf_file *file,
                      const stericol_cf_variable *variable, const char *name, stericol_cf_rules *rules)
{
    const stericol_cf_attribute *attribute = stericol_cf_attribute_of(variable, name);
    stericol_cf_number numbers[STERICOL_CF_MOST_FILLS];
    size_t count, i;

    if (attribute == NULL)
        return;
    count = stericol_cf_numbers_of(variable, attribute, numbers, STERICOL_CF_MOST_FILLS);
    if (count == SIZE_MAX) {
        stericol_notice(context, STERICOL_WARNING, file->path, variable->name,
                        "its %s is no number and is ignored", name);
        return;
    }
    if (attribute->text != NULL)
        stericol_notice(context, STERICOL_NOTE, file->path, variable->name,
                        "its %s is a text and is read as a number", name);
    for (i = 0; i < count; i++) {
        stericol_cf_stored low, high;

        if (numbers[i].sort == STERICOL_CF_REAL && !isfinite(numbers[i].value.real))
            continue; /* values that are not finite are always missing */
        if (!stericol_cf_fit_number(rules->type, variable->type, &numbers[i], &low)) {
            stericol_notice(context, STERICOL_WARNING, file->path, variable->name,
                            "its %s does not fit the type of its values and is ignored", name);
            continue;
        }
        high = low;
        if (rules->type == STERICOL_CF_DOUBLE && attribute->type == STERICOL_CF_FLOAT) {
            /* Declared in float: any double that rounds to it is meant (half a last place of a float). */
            low.real -= fabs(low.real) * 0x1p-24;
            high.real += fabs(high.real) * 0x1p-24;
        }
        if (!add_fill(rules, low, high)) {
            stericol_notice(context, STERICOL_WARNING, file->path, variable->name,
                            "has more than %d missing values; the rest is ignored",
                            (int)STERICOL_CF_MOST_FILLS);
            return;
        }
    }
}

/* What NetCDF itself puts where nothing was written; bytes have no such value (CF 1.10, section 2.5.1). */
static void add_default_fill(const stericol_cf_variable *variable, stericol_cf_rules *rules)
{
    stericol_cf_number number = {.sort = STERICOL_CF_WHOLE};
    stericol_cf_stored stored;

    switch (variable->type) {
    case STERICOL_CF_INT16:
        number.value.whole = NC_FILL_SHORT;
        break;
    case STERICOL_CF_UINT16:
        number.value.whole = NC_FILL_USHORT;
        break;
    case STERICOL_CF_INT32:
        number.value.whole = NC_FILL_INT;
        break;
    case STERICOL_CF_UINT32:
        number.value.whole = (int64_t)NC_FILL_UINT;
        break;
    case STERICOL_CF_INT64:
        number.value.whole = NC_FILL_INT64;
        break;
    case STERICOL_CF_UINT64:
        number.sort = STERICOL_CF_NATURAL;
        number.value.natural = NC_FILL_UINT64;
        break;
    case STERICOL_CF_FLOAT:
    case STERICOL_CF_DOUBLE:
        number.sort = STERICOL_CF_REAL;
        number.value.real = NC_FILL_DOUBLE;
        break;
    default:
        return;
    }
    if (stericol_cf_fit_number(rules->type, variable->type, &number, &stored))
        (void)add_fill(rules, stored, stored);
}

/* A stored value of `type` at `bytes` as a number. */
static stericol_cf_number number_at(stericol_cf_type type, const void *bytes)
{
    stericol_cf_number number = {.sort = stericol_cf_sort_of(type)};

#define READ_AS(TYPE, KIND)                                                                                  \
    do {                                                                                                     \
        TYPE stored_;                                                                                        \
        memcpy(&stored_, bytes, sizeof stored_);                                                             \
        number.value.KIND = stored_;                                                                         \
    } while (0)
    switch (type) {
    case STERICOL_CF_INT8:
        READ_AS(int8_t, whole);
        break;
    case STERICOL_CF_UINT8:
        READ_AS(uint8_t, natural);
        break;
    case STERICOL_CF_INT16:
        READ_AS(int16_t, whole);
        break;
    case STERICOL_CF_UINT16:
        READ_AS(uint16_t, natural);
        break;
    case STERICOL_CF_INT32:
        READ_AS(int32_t, whole);
        break;
    case STERICOL_CF_UINT32:
        READ_AS(uint32_t, natural);
        break;
    case STERICOL_CF_INT64:
        READ_AS(int64_t, whole);
        break;
    case STERICOL_CF_UINT64:
        READ_AS(uint64_t, natural);
        break;
    case STERICOL_CF_FLOAT: {
        float stored;

        memcpy(&stored, bytes, sizeof stored);
        number.value.real = (double)stored;
        break;
    }
    default:
        READ_AS(double, real);
        break;
    }
#undef READ_AS
    return number;
}

/*
 * A Zarr array has its fill_value in its own header, and writers that know no NetCDF leave it at that.  Zero
 * is left out: it is what some of them put there unasked, and a zero is a longitude or a temperature like any
 * other.
 */
static void add_store_fill(stericol_context *context, const stericol_cf_file *file,
                           const stericol_cf_variable *variable, stericol_cf_rules *rules)
{
    static const signed char byte_fill = NC_FILL_BYTE;
    static const unsigned char natural_fill = NC_FILL_UBYTE;
    unsigned char bytes[8] = {0};
    stericol_cf_number number;
    stericol_cf_stored stored;
    int absent = 0;

    if (strcmp(file->format, "Zarr") != 0 ||
        nc_inq_var_fill(variable->group_handle, variable->handle, &absent, bytes) != NC_NOERR || absent != 0)
        return;
    if ((variable->type == STERICOL_CF_INT8 && memcmp(bytes, &byte_fill, 1) == 0) ||
        (variable->type == STERICOL_CF_UINT8 && memcmp(bytes, &natural_fill, 1) == 0))
        return; /* NetCDF's own, which means nothing for bytes */
    number = number_at(variable->type, bytes);
    if ((number.sort == STERICOL_CF_REAL && !(fabs(number.value.real) > 0.0)) ||
        (number.sort != STERICOL_CF_REAL && number.value.natural == 0) ||
        !stericol_cf_fit_number(rules->type, variable->type, &number, &stored))
        return;
    if (rules->fills > 0 && memcmp(&rules->fill_low[0], &stored, sizeof stored) == 0)
        return; /* the default */
    if (number.sort == STERICOL_CF_REAL && fabs(number.value.real / NC_FILL_DOUBLE - 1.0) < 1e-5)
        return; /* the default, as short decimals in the store's header */
    if (add_fill(rules, stored, stored))
        stericol_notice(context, STERICOL_NOTE, file->path, variable->name,
                        "the fill_value of its Zarr array is taken as missing");
}

static stericol_status make_rules(stericol_context *context, const stericol_cf_file *file,
                                  const stericol_cf_variable *variable, stericol_cf_rules *rules)
{
    stericol_status status;

    rules->type = type_as_read(context, file, variable);
    rules->size = stericol_cf_size_of(rules->type);
    rules->scale = 1.0;
    rules->offset = 0.0;
    stericol_cf_range_of(rules->type, &rules->low, &rules->high);
    status = read_packing(context, file, variable, "scale_factor", &rules->scale);
    if (status == STERICOL_OK)
        status = read_packing(context, file, variable, "add_offset", &rules->offset);
    if (status != STERICOL_OK)
        return status;
    if (stericol_cf_attribute_of(variable, "_FillValue") == NULL) {
        add_default_fill(variable, rules);
        add_store_fill(context, file, variable, rules);
    }
    add_fills(context, file, variable, "_FillValue", rules);
    add_fills(context, file, variable, "missing_value", rules);
    return stericol_cf_set_limits(context, file, variable, rules);
}

stericol_status stericol_cf_rules_of(stericol_context *context, stericol_cf_file *file,
                                     const stericol_cf_variable *variable, stericol_cf_rules **rules)
{
    stericol_cf_rules **kept = &file->rules[variable - file->variables];
    stericol_cf_rules *made;
    stericol_status status;

    *rules = *kept;
    if (*kept != NULL)
        return STERICOL_OK;
    if (!stericol_cf_is_number(variable->type))
        return stericol_fail(
            context, STERICOL_INPUT, file->path, variable->name, "name a variable of numbers",
            variable->type == STERICOL_CF_OTHER ? "holds values of a user-defined type, not numbers"
                                                : "holds text, not numbers");
    if (variable->rank > STERICOL_CF_MOST_RANK)
        return stericol_fail(context, STERICOL_INPUT, file->path, variable->name, "name another variable",
                             "has %zu dimensions, more than %d", variable->rank, (int)STERICOL_CF_MOST_RANK);
    made = calloc(1, sizeof *made);
    if (made == NULL)
        return stericol_fail_memory(context, sizeof *made, variable->name);
    status = make_rules(context, file, variable, made);
    if (status != STERICOL_OK) {
        free(made);
        return status;
    }
    *rules = *kept = made;
    return STERICOL_OK;
}
