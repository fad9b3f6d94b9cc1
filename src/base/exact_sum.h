/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Exact sums of doubles: the result is the correctly rounded sum, the same bits in whatever order and in
 * however many parts the terms were added.
 *
 * Method: a fixed-point accumulator of 32-bit digits held in 64-bit words, wide enough for every double, so
 * that no addition ever rounds (Kulisch's long accumulator; see U. Kulisch, Computer Arithmetic and Validity,
 * 2nd ed. 2013, ch. 8).  The one rounding is in stericol_exact_sum_value().
 */
#ifndef STERICOL_BASE_EXACT_SUM_H
#define STERICOL_BASE_EXACT_SUM_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum { STERICOL_EXACT_SUM_DIGITS = 68 };

typedef struct stericol_exact_sum {
    int64_t digit[STERICOL_EXACT_SUM_DIGITS]; /* weight 2^(32 i - 1074) */
    uint32_t pending;                         /* additions since the carries were last passed on */
    bool not_finite;                          /* a NaN or an infinity was added */
} stericol_exact_sum;

/* All zero is the empty sum. */
void stericol_exact_sum_clear(stericol_exact_sum *sum);
void stericol_exact_sum_add(stericol_exact_sum *sum, double term);
/* Adds a*b without rounding the product: two exact terms from a fused multiply-add. */
void stericol_exact_sum_add_product(stericol_exact_sum *sum, double a, double b);
/* sum += other. */
void stericol_exact_sum_merge(stericol_exact_sum *sum, const stericol_exact_sum *other);
/* The sum rounded once to the nearest double (ties to even); NaN when a term was not finite, +-infinity on
   overflow. */
double stericol_exact_sum_value(const stericol_exact_sum *sum);

#endif
