/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Sizes that come from files are multiplied here or nowhere. */
#ifndef STERICOL_BASE_CHECKED_H
#define STERICOL_BASE_CHECKED_H

#include <stdbool.h>
#include <stddef.h>

/* *product = a * b; false (and *product untouched) when that overflows. */
bool stericol_multiply_sizes(size_t a, size_t b, size_t *product);
/* *sum = a + b; false (and *sum untouched) when that overflows. */
bool stericol_add_sizes(size_t a, size_t b, size_t *sum);

/*
 * Room for `count` items of `size` bytes, zeroed; NULL when the product overflows or memory is out.
 * count == 0 gives a pointer that may be freed.
 */
void *stericol_new_array(size_t count, size_t size);
/* Room for `count` doubles aligned to 64 bytes, not set; free with free(). */
double *stericol_new_doubles(size_t count);
/* Grows *array (count items of `size` bytes each) to `count` items; the new part is not set.  False leaves it. */
bool stericol_grow_array(void **array, size_t count, size_t size);

#endif
