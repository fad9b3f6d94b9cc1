/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "water/kernel.h"

#include "stericol/water.h"

#include <string.h>

extern const stericol_kernel stericol_kernel_plain;

#if STERICOL_KERNEL_X86
extern const stericol_kernel stericol_kernel_avx2;
extern const stericol_kernel stericol_kernel_avx512;

/* By feature, never by processor model: a virtual machine's model is often unknown, its features are not. */
static int has_avx2(void)
{
    return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
}

static int has_avx512(void)
{
    return has_avx2() && __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq") &&
           __builtin_cpu_supports("avx512vl");
}
#endif

const stericol_kernel *stericol_kernel_best(void)
{
#if STERICOL_KERNEL_X86
    if (has_avx512())
        return &stericol_kernel_avx512;
    if (has_avx2())
        return &stericol_kernel_avx2;
#endif
    return &stericol_kernel_plain;
}

const stericol_kernel *stericol_kernel_named(const char *name)
{
#if STERICOL_KERNEL_X86
    if (strcmp(name, "avx512") == 0)
        return has_avx512() ? &stericol_kernel_avx512 : NULL;
    if (strcmp(name, "avx2") == 0)
        return has_avx2() ? &stericol_kernel_avx2 : NULL;
#endif
    return strcmp(name, "plain") == 0 ? &stericol_kernel_plain : NULL;
}

const char *stericol_instruction_set(void)
{
    return stericol_kernel_best()->name;
}
