/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Stored values into doubles: one loop a type, written once.  Included once for each instruction set by files
 * that define STERICOL_CF_LOOPS and STERICOL_CF_LOOPS_NAME; nothing is contracted, so that all give the same
 * bits.
 *
 * Everything is done in double, stored * scale + offset rounded twice, whatever the type, so that a value is
 * the same number however it is stored.  The tests come before the unpacking, on the stored values (CF 1.10,
 * section 2.5.1).  The loops have no branches, so that the compiler can vectorise them; the caller gives runs
 * that stay in the nearest cache, since each run is passed over several times.
 */
#include "cf/room.h"

#include <math.h>

extern const stericol_cf_loops STERICOL_CF_LOOPS;

#define UNPACK(NAME, TYPE, KIND)                                                                             \
    static void NAME(const stericol_cf_rules *rules, const TYPE *restrict raw, size_t count,                 \
                     double *restrict values)                                                                \
    {                                                                                                        \
        const TYPE low = (TYPE)rules->low.KIND, high = (TYPE)rules->high.KIND;                               \
        const double scale = rules->scale, offset = rules->offset;                                           \
        size_t i, f;                                                                                         \
                                                                                                             \
        for (i = 0; i < count; i++) {                                                                        \
            const TYPE x = raw[i];                                                                           \
            const double value = (double)x * scale + offset;                                                 \
            values[i] = ((x >= low) & (x <= high)) ? value : (double)NAN;                                    \
        }                                                                                                    \
        for (f = 0; f < rules->fills; f++) {                                                                 \
            const TYPE from = (TYPE)rules->fill_low[f].KIND, to = (TYPE)rules->fill_high[f].KIND;            \
            for (i = 0; i < count; i++)                                                                      \
                values[i] = ((raw[i] >= from) & (raw[i] <= to)) ? (double)NAN : values[i];                   \
        }                                                                                                    \
    }

UNPACK(unpack_int8, int8_t, whole)
UNPACK(unpack_uint8, uint8_t, natural)
UNPACK(unpack_int16, int16_t, whole)
UNPACK(unpack_uint16, uint16_t, natural)
UNPACK(unpack_int32, int32_t, whole)
UNPACK(unpack_uint32, uint32_t, natural)
UNPACK(unpack_int64, int64_t, whole)
UNPACK(unpack_uint64, uint64_t, natural)
UNPACK(unpack_float, float, real)
UNPACK(unpack_double, double, real)

static void unpack_by_type(const stericol_cf_rules *rules, const void *raw, size_t count, double *values)
{
    switch (rules->type) {
    case STERICOL_CF_INT8:
        unpack_int8(rules, raw, count, values);
        break;
    case STERICOL_CF_UINT8:
        unpack_uint8(rules, raw, count, values);
        break;
    case STERICOL_CF_INT16:
        unpack_int16(rules, raw, count, values);
        break;
    case STERICOL_CF_UINT16:
        unpack_uint16(rules, raw, count, values);
        break;
    case STERICOL_CF_INT32:
        unpack_int32(rules, raw, count, values);
        break;
    case STERICOL_CF_UINT32:
        unpack_uint32(rules, raw, count, values);
        break;
    case STERICOL_CF_INT64:
        unpack_int64(rules, raw, count, values);
        break;
    case STERICOL_CF_UINT64:
        unpack_uint64(rules, raw, count, values);
        break;
    case STERICOL_CF_FLOAT:
        unpack_float(rules, raw, count, values);
        break;
    case STERICOL_CF_DOUBLE:
        unpack_double(rules, raw, count, values);
        break;
    default:
        break; /* refused when the rules were made */
    }
}

/* Whole numbers of more than 53 bits that are not missing. */
static unsigned long long count_inexact(const stericol_cf_rules *rules, const void *raw, const double *values,
                                        size_t count)
{
    const int64_t most = (int64_t)1 << 53;
    unsigned long long inexact = 0;
    size_t i;

    if (rules->type == STERICOL_CF_INT64) {
        const int64_t *whole = raw;

        for (i = 0; i < count; i++)
            inexact += (whole[i] < -most || whole[i] > most) && !isnan(values[i]);
    } else if (rules->type == STERICOL_CF_UINT64) {
        const uint64_t *natural = raw;

        for (i = 0; i < count; i++)
            inexact += natural[i] > (uint64_t)most && !isnan(values[i]);
    }
    return inexact;
}

static unsigned long long drop_huge(double most, double *values, size_t count)
{
    double huge = 0.0; /* counts are kept in the width of the values: only then do the loops vectorise */
    size_t i;

#pragma omp simd reduction(+ : huge)
    for (i = 0; i < count; i++) {
        const double value = values[i];

        huge += fabs(value) > most ? 1.0 : 0.0;
        values[i] = fabs(value) > most ? (double)NAN : value;
    }
    return (unsigned long long)huge;
}

static void unpack(const stericol_cf_rules *rules, const void *raw, size_t count, double most, double *values,
                   stericol_cf_counts *counts)
{
    unpack_by_type(rules, raw, count, values);
    counts->inexact += count_inexact(rules, raw, values, count);
    counts->huge += drop_huge(most, values, count);
}

static void convert(const stericol_cf_conversion *conversion, double *values, size_t count,
                    stericol_cf_tally *tally)
{
    const double scale = conversion->scale, offset = conversion->offset;
    const double low = conversion->low, high = conversion->high;
    double missing = 0.0, below = 0.0, above = 0.0;
    size_t i;

#pragma omp simd reduction(+ : missing, below, above)
    for (i = 0; i < count; i++) {
        const double value = values[i] * scale + offset;
        const double raised = value < low ? -(double)INFINITY : value;

        missing += isnan(value) ? 1.0 : 0.0;
        below += (value < low) ? 1.0 : 0.0;
        above += (value > high) ? 1.0 : 0.0;
        values[i] = (value > high) ? (double)INFINITY : raised;
    }
    if (tally != NULL) {
        tally->values += count;
        tally->missing += (unsigned long long)missing;
        tally->below += (unsigned long long)below;
        tally->above += (unsigned long long)above;
    }
}

const stericol_cf_loops STERICOL_CF_LOOPS = {
    .name = STERICOL_CF_LOOPS_NAME, .unpack = unpack, .convert = convert};
