/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Exact sums of several quantities over several regions. */
#include "base/checked.h"
#include "base/exact_sum.h"
#include "stericol/region.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>

struct stericol_region_totals {
    size_t regions;
    size_t quantities;
    stericol_exact_sum *sum; /* [regions][quantities] */
};

stericol_region_totals *stericol_region_totals_new(size_t regions, size_t quantities)
{
    size_t count;
    stericol_region_totals *totals;

    if (!stericol_multiply_sizes(regions, quantities, &count))
        return NULL;
    totals = stericol_new_array(1, sizeof *totals);
    if (totals == NULL)
        return NULL;
    totals->regions = regions;
    totals->quantities = quantities;
    totals->sum = stericol_new_array(count, sizeof *totals->sum);
    if (totals->sum == NULL) {
        free(totals);
        return NULL;
    }
    return totals;
}

void stericol_region_totals_free(stericol_region_totals *totals)
{
    if (totals == NULL)
        return;
    free(totals->sum);
    free(totals);
}

void stericol_region_totals_clear(stericol_region_totals *totals)
{
    for (size_t i = 0; i < totals->regions * totals->quantities; i++)
        stericol_exact_sum_clear(&totals->sum[i]);
}

static stericol_exact_sum *sum_of(const stericol_region_totals *totals, size_t region, size_t quantity)
{
    assert(region < totals->regions && quantity < totals->quantities);
    return &totals->sum[region * totals->quantities + quantity];
}

void stericol_region_totals_add(stericol_region_totals *totals, size_t region, size_t quantity, double weight,
                                double value)
{
    stericol_exact_sum_add_product(sum_of(totals, region, quantity), weight, value);
}

void stericol_region_totals_add_row(stericol_region_totals *totals, size_t region, size_t quantity,
                                    size_t columns, const double *weight, const double *value)
{
    stericol_exact_sum *sum = sum_of(totals, region, quantity);

    for (size_t i = 0; i < columns; i++)
        if (!isnan(value[i]) && fabs(weight[i]) > 0.0)
            stericol_exact_sum_add_product(sum, weight[i], value[i]);
}

void stericol_region_totals_merge(stericol_region_totals *totals, const stericol_region_totals *other)
{
    assert(totals->regions == other->regions && totals->quantities == other->quantities);
    for (size_t i = 0; i < totals->regions * totals->quantities; i++)
        stericol_exact_sum_merge(&totals->sum[i], &other->sum[i]);
}

double stericol_region_totals_value(const stericol_region_totals *totals, size_t region, size_t quantity)
{
    return stericol_exact_sum_value(sum_of(totals, region, quantity));
}
