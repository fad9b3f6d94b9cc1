/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Columns that follow splines.  With linear water and the same salinity in both epochs the integrand is
 * a (Theta2 - Theta1) over a mean volume that is constant when the states lie evenly about 10 degC, and the
 * spline of a difference is the spline itself where both epochs mirror each other: GSL's own integral is the
 * answer.
 */
#include "column/columns.h"

#include <gsl/gsl_spline.h>
#include <string.h>

enum { LEVELS = 9 };
static const double position[LEVELS] = {0, 12, 30, 75, 160, 290, 480, 700, 1000};
static const double warming[LEVELS] = {1.0, 1.4, 0.9, 0.2, 0.35, -0.1, 0.05, 0.0, 0.1};
static const stericol_water linear_water = {STERICOL_EQUATION_LINEAR, 2e-4, 7.5e-4, 1027.0};
static const stericol_vertical kinds[] = {STERICOL_VERTICAL_STEFFEN, STERICOL_VERTICAL_AKIMA};

static stericol_column_options spline_options(stericol_vertical vertical)
{
    stericol_column_options options = stericol_column_options_default();
    options.water = &linear_water;
    options.vertical = vertical;
    options.levels = LEVELS;
    options.cast = true;
    options.gap_reach = 1000.0;
    return options;
}

static field mirrored_column(size_t levels)
{
    field f = new_field(1, 1, levels);
    for (size_t k = 0; k < levels; k++) {
        f.position[k] = position[k];
        f.temperature[0][k] = 10.0 - 0.5 * warming[k];
        f.temperature[1][k] = 10.0 + 0.5 * warming[k];
    }
    return f;
}

/* Through the samples first..last. */
static double integral_by_gsl(stericol_vertical vertical, size_t first, size_t last, double from, double to)
{
    const gsl_interp_type *type = vertical == STERICOL_VERTICAL_AKIMA ? gsl_interp_akima : gsl_interp_steffen;
    gsl_spline *spline = gsl_spline_alloc(type, last + 1 - first);
    assert_non_null(spline);
    gsl_spline_init(spline, position + first, warming + first, last + 1 - first);
    const double integral = gsl_spline_eval_integ(spline, from, to, NULL);
    gsl_spline_free(spline);
    return integral;
}

static void splines_match_their_own_integral(void **state)
{
    (void)state;
    const stericol_layer layers[] = {{0, 100}, {100, 650}, {650, BOTTOM}};
    for (int k = 0; k < 2; k++) {
        field f = mirrored_column(LEVELS);
        stericol_column_options options = spline_options(kinds[k]);
        options.layers = layers;
        options.layer_count = 3;
        stericol_sweep *sweep = sweep_field(&options, &f);
        double sum = 0.0;
        for (size_t layer = 0; layer < 3; layer++) {
            const double to = layer == 2 ? 1000.0 : layers[layer].lower;
            const double found = result_of(sweep, STERICOL_COLUMN_TOTAL, layer, 0);
            /* The promise is 1e-6 m; five Gauss points are exact for a cubic, and the mean volume does not
             * vary. */
            assert_close(found, 2e-4 * integral_by_gsl(kinds[k], 0, 8, layers[layer].upper, to), 1e-12);
            assert_close(result_of(sweep, STERICOL_COLUMN_THERMOSTERIC, layer, 0), found, 1e-12);
            assert_close(result_of(sweep, STERICOL_COLUMN_EXPANSION, layer, 0), 2e-4, 1e-16); /* rounding */
            sum += found;
        }
        assert_same_number(result_of(sweep, STERICOL_COLUMN_TOTAL, STERICOL_WHOLE_COLUMN, 0), sum);
        assert_same_number(result_of(sweep, STERICOL_COLUMN_DEPTH, STERICOL_WHOLE_COLUMN, 0), 1000.0);
        stericol_sweep_free(sweep);
        free_field(&f);
    }
}

/* Real water on a much finer axis, joined linearly: the promised 1e-6 m. */
static void fine_axis_is_fine_enough(void **state)
{
    (void)state;
    const stericol_water polynomial = STERICOL_WATER_DEFAULT;
    for (int k = 0; k < 2; k++) {
        field f = mirrored_column(LEVELS);
        stericol_column_options options = spline_options(kinds[k]);
        options.water = &polynomial;
        stericol_sweep *sweep = sweep_field(&options, &f);
        const double found = result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 0);
        stericol_sweep_free(sweep);
        gsl_spline *spline[2];
        for (int e = 0; e < 2; e++) {
            spline[e] = gsl_spline_alloc(k == 1 ? gsl_interp_akima : gsl_interp_steffen, LEVELS);
            gsl_spline_init(spline[e], position, f.temperature[e], LEVELS);
        }
        /* The middle rule with 100000 steps of 1 cm: error h2/24 of a second derivative below 1e-6/m2 over
         * 1000 m. */
        double sum = 0.0;
        for (int i = 0; i < 100000; i++) {
            const double z = 0.01 * (i + 0.5), p = stericol_sea_pressure(z, 45.0);
            const double v1 = stericol_specific_volume(35.0, gsl_spline_eval(spline[0], z, NULL), p);
            const double v2 = stericol_specific_volume(35.0, gsl_spline_eval(spline[1], z, NULL), p);
            sum += 0.01 * 2.0 * (v2 - v1) / (v1 + v2);
        }
        assert_close(found, sum, 1e-8); /* a hundredth of what is promised */
        gsl_spline_free(spline[0]);
        gsl_spline_free(spline[1]);
        free_field(&f);
    }
}

static double total_of(const stericol_column_options *options, const field *f, int flag)
{
    stericol_sweep *sweep = sweep_field(options, f);
    const double total = result_of(sweep, STERICOL_COLUMN_TOTAL, 0, 0);
    assert_int_equal(stericol_sweep_flags(sweep)[0], flag);
    stericol_sweep_free(sweep);
    return total;
}

/* Too few samples for the spline: as `linear`. */
static void few_samples_are_joined_linearly(void **state)
{
    (void)state;
    const size_t least[] = {3, 5}; /* Steffen 1990; Akima 1970 */
    for (int k = 0; k < 2; k++) {
        for (size_t levels = 1; levels <= LEVELS; levels++) {
            field f = mirrored_column(levels);
            stericol_column_options options = spline_options(kinds[k]);
            const double found = total_of(&options, &f, STERICOL_COLUMN_END_OF_DATA);
            options.vertical = STERICOL_VERTICAL_LINEAR;
            const double linear = total_of(&options, &f, STERICOL_COLUMN_END_OF_DATA);
            if (levels < least[k])
                assert_same_number(found, linear);
            else
                assert_true(fabs(found - linear) > 1e-6);
            free_field(&f);
        }
    }
}

/* The rules about ends are those of `linear`; the splines go through what is left, states are carried
 * unchanged. */
static void ends_follow_the_same_rules(void **state)
{
    (void)state;
    for (int k = 0; k < 2; k++) {
        stericol_column_options options = spline_options(kinds[k]);
        field f = mirrored_column(LEVELS);
        f.floor = new_values(1);
        f.floor[0] = 650.0; /* cut: of what lies below only the next sample is used */
        double found = total_of(&options, &f, STERICOL_COLUMN_SEA_FLOOR);
        assert_close(found, 2e-4 * integral_by_gsl(kinds[k], 0, 7, 0.0, 650.0), 1e-12);
        f.floor[0] = 1030.0; /* carried: 30 m of 0.1 K */
        options.bottom_reach = 30.0;
        found = total_of(&options, &f, STERICOL_COLUMN_SEA_FLOOR);
        assert_close(found, 2e-4 * (integral_by_gsl(kinds[k], 0, 8, 0.0, 1000.0) + 3.0), 1e-12);
        /* 700 to 1000 m is a gap: the splines go through eight samples. */
        f.floor[0] = MISSING;
        options.gap_reach = 250.0;
        found = total_of(&options, &f, STERICOL_COLUMN_GAP);
        assert_close(found, 2e-4 * integral_by_gsl(kinds[k], 0, 7, 0.0, 700.0), 1e-12);
        free_field(&f);
        /* The first sample at 12 m, carried to the surface. */
        f = mirrored_column(LEVELS);
        f.temperature[1][0] = MISSING;
        options.gap_reach = 1000.0;
        found = total_of(&options, &f, STERICOL_COLUMN_END_OF_DATA);
        assert_close(found, 2e-4 * (integral_by_gsl(kinds[k], 1, 8, 12.0, 1000.0) + 12.0 * 1.4), 1e-12);
        free_field(&f);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(splines_match_their_own_integral),
        cmocka_unit_test(fine_axis_is_fine_enough),
        cmocka_unit_test(few_samples_are_joined_linearly),
        cmocka_unit_test(ends_follow_the_same_rules),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
