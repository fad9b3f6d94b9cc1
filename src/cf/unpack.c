/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Which of the unpacking loops this processor can run: by its features, since a virtual machine's model is
 * often unknown. */
#include "cf/room.h"

#include <string.h>

extern const stericol_cf_loops stericol_cf_loops_plain;

#if STERICOL_CF_LOOPS_X86
extern const stericol_cf_loops stericol_cf_loops_avx2;
extern const stericol_cf_loops stericol_cf_loops_avx512;

static bool has_avx2(void)
{
    return __builtin_cpu_supports("avx2");
}

static bool has_avx512(void)
{
    return has_avx2() && __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq") &&
           __builtin_cpu_supports("avx512vl") && __builtin_cpu_supports("avx512bw");
}
#endif

const stericol_cf_loops *stericol_cf_loops_named(const char *name)
{
#if STERICOL_CF_LOOPS_X86
    if (name == NULL ? has_avx512() : strcmp(name, "avx512") == 0)
        return has_avx512() ? &stericol_cf_loops_avx512 : NULL;
    if (name == NULL ? has_avx2() : strcmp(name, "avx2") == 0)
        return has_avx2() ? &stericol_cf_loops_avx2 : NULL;
#endif
    return name == NULL || strcmp(name, "plain") == 0 ? &stericol_cf_loops_plain : NULL;
}

void stericol_cf_unpack(const stericol_cf_rules *rules, const void *raw, size_t count, double most,
                        double *values, stericol_cf_counts *counts)
{
    stericol_cf_loops_named(NULL)->unpack(rules, raw, count, most, values, counts);
}
