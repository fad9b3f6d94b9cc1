/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Which loops this processor can run: by its features, since a virtual machine's model is often unknown. */
#include "column/loops.h"

#include <string.h>

extern const stericol_loops stericol_loops_plain;

#if STERICOL_LOOPS_X86
extern const stericol_loops stericol_loops_avx2;
extern const stericol_loops stericol_loops_avx512;

static int has_avx2(void)
{
    return __builtin_cpu_supports("avx2");
}

static int has_avx512(void)
{
    return has_avx2() && __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq") &&
           __builtin_cpu_supports("avx512vl");
}
#endif

const stericol_loops *stericol_loops_best(void)
{
#if STERICOL_LOOPS_X86
    if (has_avx512())
        return &stericol_loops_avx512;
    if (has_avx2())
        return &stericol_loops_avx2;
#endif
    return &stericol_loops_plain;
}

const stericol_loops *stericol_loops_named(const char *name)
{
#if STERICOL_LOOPS_X86
    if (strcmp(name, "avx512") == 0)
        return has_avx512() ? &stericol_loops_avx512 : NULL;
    if (strcmp(name, "avx2") == 0)
        return has_avx2() ? &stericol_loops_avx2 : NULL;
#endif
    return strcmp(name, "plain") == 0 ? &stericol_loops_plain : NULL;
}
