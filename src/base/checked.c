/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "base/checked.h"

#include <stdint.h>
#include <stdlib.h>

bool stericol_multiply_sizes(size_t a, size_t b, size_t *product)
{
    if (a != 0 && b > SIZE_MAX / a)
        return false;
    *product = a * b;
    return true;
}

bool stericol_add_sizes(size_t a, size_t b, size_t *sum)
{
    if (b > SIZE_MAX - a)
        return false;
    *sum = a + b;
    return true;
}

void *stericol_new_array(size_t count, size_t size)
{
    size_t bytes;

    if (!stericol_multiply_sizes(count, size, &bytes))
        return NULL;
    return calloc(bytes == 0 ? 1 : bytes, 1);
}

double *stericol_new_doubles(size_t count)
{
    enum { ALIGNMENT = 64 };
    size_t bytes;

    if (!stericol_multiply_sizes(count, sizeof(double), &bytes) || bytes > SIZE_MAX / 2)
        return NULL;
    bytes = (bytes / ALIGNMENT + 1) * ALIGNMENT; /* aligned_alloc wants whole multiples */
    return aligned_alloc(ALIGNMENT, bytes);
}

bool stericol_grow_array(void **array, size_t count, size_t size)
{
    size_t bytes;
    void *larger;

    if (!stericol_multiply_sizes(count == 0 ? 1 : count, size, &bytes))
        return false;
    larger = realloc(*array, bytes);
    if (larger == NULL)
        return false;
    *array = larger;
    return true;
}
