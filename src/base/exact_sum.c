/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "base/exact_sum.h"

#include <math.h>
#include <string.h>

/*
 * A finite double is m 2^(e - 1074) with 0 <= m < 2^53 and 0 <= e <= 2045, so its bits fall into at most three
 * neighbouring digits of 32 bits.  64 digits cover 2^-1074 .. 2^974, 66 reach past 2^1024; the two above take
 * the carries of as many additions as a program can make.
 *
 * Each digit is added to with less than 2^32 in magnitude and may lie within +-2^62 before it must be passed
 * on, which leaves room for 2^30 additions.
 */
enum { DIGIT_BITS = 32 };
static const uint32_t MOST_PENDING = UINT32_C(1) << 29;

void stericol_exact_sum_clear(stericol_exact_sum *sum)
{
    memset(sum, 0, sizeof *sum);
}

/* Leaves every digit but the top one within 0 .. 2^32 - 1; the sign ends in the top digit. */
static void pass_carries(stericol_exact_sum *sum)
{
    int64_t carry = 0;

    for (size_t i = 0; i + 1 < STERICOL_EXACT_SUM_DIGITS; i++) {
        int64_t digit = sum->digit[i] + carry;
        int64_t low = (int64_t)((uint64_t)digit & UINT64_C(0xffffffff));

        carry = (digit - low) / (INT64_C(1) << DIGIT_BITS); /* exact: the low part was taken off */
        sum->digit[i] = low;
    }
    sum->digit[STERICOL_EXACT_SUM_DIGITS - 1] += carry;
    sum->pending = 0;
}

void stericol_exact_sum_add(stericol_exact_sum *sum, double term)
{
    uint64_t bits, significand;
    uint32_t exponent, shift;
    size_t first;
    int64_t part[3];

    memcpy(&bits, &term, sizeof bits);
    exponent = (uint32_t)((bits >> 52) & 0x7ff);
    significand = bits & ((UINT64_C(1) << 52) - 1);
    if (exponent == 0x7ff) {
        sum->not_finite = true;
        return;
    }
    if (exponent != 0) {
        significand |= UINT64_C(1) << 52;
        exponent--;
    }
    first = exponent / DIGIT_BITS;
    shift = exponent % DIGIT_BITS;
    part[0] = (int64_t)((significand << shift) & UINT64_C(0xffffffff));
    part[1] = (int64_t)((significand >> (DIGIT_BITS - shift)) & UINT64_C(0xffffffff));
    part[2] = shift == 0 ? 0 : (int64_t)(significand >> (2 * DIGIT_BITS - shift));
    for (size_t i = 0; i < 3; i++)
        sum->digit[first + i] += (bits >> 63) != 0 ? -part[i] : part[i];
    if (++sum->pending >= MOST_PENDING)
        pass_carries(sum);
}

void stericol_exact_sum_add_product(stericol_exact_sum *sum, double a, double b)
{
    double product = a * b;

    stericol_exact_sum_add(sum, product);
    if (isfinite(product)) {
        double rest = fma(a, b, -product);

        if (fabs(rest) > 0.0)
            stericol_exact_sum_add(sum, rest);
    }
}

void stericol_exact_sum_merge(stericol_exact_sum *sum, const stericol_exact_sum *other)
{
    stericol_exact_sum tidy = *other;

    pass_carries(&tidy);
    pass_carries(sum);
    for (size_t i = 0; i < STERICOL_EXACT_SUM_DIGITS; i++)
        sum->digit[i] += tidy.digit[i];
    sum->pending = 1;
    sum->not_finite = sum->not_finite || tidy.not_finite;
}

/* sum = -sum, for a sum whose carries were passed on. */
static void negate(stericol_exact_sum *sum)
{
    for (size_t i = 0; i < STERICOL_EXACT_SUM_DIGITS; i++)
        sum->digit[i] = -sum->digit[i];
    pass_carries(sum);
}

double stericol_exact_sum_value(const stericol_exact_sum *sum)
{
    stericol_exact_sum tidy = *sum;
    bool negative;
    size_t top;
    uint64_t head;
    int head_bits = 0, dropped;
    bool sticky = false;
    double magnitude;

    if (sum->not_finite)
        return NAN;
    pass_carries(&tidy);
    negative = tidy.digit[STERICOL_EXACT_SUM_DIGITS - 1] < 0;
    if (negative)
        negate(&tidy);
    for (top = STERICOL_EXACT_SUM_DIGITS; top > 0 && tidy.digit[top - 1] == 0; top--)
        ;
    if (top == 0)
        return 0.0;
    /* The leading 64 bits, and whether anything but zero lies below them. */
    head = (uint64_t)tidy.digit[top - 1];
    while (head_bits < 64 && (head >> head_bits) != 0)
        head_bits++;
    dropped = (int)(top - 1) * DIGIT_BITS; /* weight of head's last bit, as a power of two above 2^-1074 */
    for (size_t i = top - 1; i-- > 0;) {
        uint64_t digit = (uint64_t)tidy.digit[i];
        int room = 64 - head_bits;
        int take = room > DIGIT_BITS ? DIGIT_BITS : room;

        if (take > 0) {
            head = (head << take) | (digit >> (DIGIT_BITS - take));
            head_bits += take;
            dropped -= take;
        }
        if (take < DIGIT_BITS && (digit & ((UINT64_C(1) << (DIGIT_BITS - take)) - 1)) != 0)
            sticky = true;
    }
    /* 64 leading bits with a sticky last bit round to 53 as the whole number would.  Where fewer than 64 bits
       remain there is nothing below them, and subnormal results are exact. */
    if (sticky)
        head |= 1;
    magnitude = ldexp((double)head, dropped - 1074);
    return negative ? -magnitude : magnitude;
}
