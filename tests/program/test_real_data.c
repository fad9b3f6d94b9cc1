/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The whole program on open climatologies of the real ocean, against published figures and against one column
 * worked through here.
 *
 * STERICOL_TEST_DATA names the folder of the data (tests/run.sh fetches them and sets it):
 *   ocean_atlas_subset.nc     monthly temperature on every second degree, 12 steps, to 1000 m
 *   levitus_climatology.cdf   annual temperature and salinity on every degree, to 5000 m
 *   etopo20.cdf               relief of the Earth on 20 minutes
 */
#include "program/science.h"

#include "stericol/region.h"
#include "stericol/water.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Area and volume of the oceans, m2 and m3: Eakins and Sharman 2010 (ETOPO1), whose areas are good to 0.1 %
 * and volumes to 1 %. */
static const double ARCTIC = 15.558e12, ATLANTIC = 85.133e12, INDIAN = 70.560e12;
static const double PACIFIC = 161.760e12 + 6.963e12; /* with the South China Sea, a row of its own there */
static const double SOUTHERN = 21.960e12, ALL_OCEANS = 361.9e12, ALL_WATER = 1.335e18;

static const char *data_file(const char *name)
{
    static char buffers[4][2048];
    static size_t next;
    char *buffer = buffers[next++ % 4];
    const char *where = getenv("STERICOL_TEST_DATA");
    FILE *file;

    if (where == NULL || where[0] == '\0')
        fail_msg("STERICOL_TEST_DATA is not set: run sh tests/fetch_data.sh FOLDER, then set it to FOLDER");
    snprintf(buffer, sizeof buffers[0], "%s/%s", where, name);
    file = fopen(buffer, "rb");
    if (file == NULL)
        fail_msg(
            "%s cannot be read: run sh tests/fetch_data.sh FOLDER, then set STERICOL_TEST_DATA to FOLDER",
            buffer);
    fclose(file);
    return buffer;
}

static const char *season(void)
{
    return in_folder("season.nc");
}

static void run_season(const char *equation, const char *output)
{
    const char *monthly = data_file("ocean_atlas_subset.nc");

    run_well("change", "--earlier", monthly, "--later", monthly, "--earlier-step", "3", "--later-step", "9",
             "--background-salinity", data_file("levitus_climatology.cdf"), "--region", "north=-180,0,180,90",
             "--region", "south=-180,-90,180,0", "--region", "middle_north=-180,20,180,50", "--equation",
             equation, "--output", output, "--replace");
}

/* ---- March to September ---- */

/*
 * Steric seasonal cycle as published: amplitude 4-5 cm over 15..64 N with the maximum in September, 2-4 cm
 * over 15..64 S with the opposite phase (the abstract of a thesis on TOPEX/Poseidon heights and the steric
 * fields of Ishii et al. 2005); a mid-latitude amplitude near 5 cm also in Gill and Niiler 1973.  From trough
 * to crest is twice an amplitude; whole hemispheres have less, as the tropics hardly take part.  The bounds
 * are wide: they catch a wrong sign, a wrong hemisphere, a wrong month, a factor of two.
 */
static void test_season_of_both_hemispheres(void **state)
{
    const char *of = "region_mean_thermosteric_height_change";
    double north, south, middle;

    (void)state;
    run_season("teos10", season());
    north = region_value(season(), of, "north");
    south = region_value(season(), of, "south");
    middle = region_value(season(), of, "middle_north");
    print_message("March to September: north %.1f mm, south %.1f mm, 20-50 N %.1f mm\n", 1e3 * north,
                  1e3 * south, 1e3 * middle);
    assert_close(north, 0.04, 0.02);
    assert_close(south, -0.05, 0.02);
    assert_close(middle, 0.085, 0.025);
}

/* Salinity from elsewhere: what cannot be known is absent. */
static void test_season_holds_no_halosteric_part(void **state)
{
    (void)state;
    assert_false(holds(season(), "steric_height_change"));
    assert_false(holds(season(), "halosteric_height_change"));
    assert_false(holds(season(), "region_mean_steric_height_change"));
    assert_true(holds(season(), "thermosteric_height_change"));
    assert_true(strstr(file_text(season(), "assumptions"), "the kind is assumed") != NULL);
}

/*
 * From memory: the polynomial's expansion is off by 3e-8 1/K (rms over the waters it was fitted to).  Over
 * the 3000 K m of the largest change here, 46 cm where a front has moved, that is 0.1 mm; it is asked of
 * every column up to a change of 33 cm, and 3e-4 of the change beyond.
 */
static void test_season_by_the_gibbs_function(void **state)
{
    field one, other;
    double largest = 0.0;
    size_t both = 0;

    (void)state;
    run_season("gibbs", in_folder("season_gibbs.nc"));
    one = read_field(season(), "thermosteric_height_change");
    other = read_field(in_folder("season_gibbs.nc"), "thermosteric_height_change");
    assert_int_equal(one.count, 90 * 180);
    assert_int_equal(other.count, one.count);
    for (size_t i = 0; i < one.count; i++) {
        assert_true(isnan(one.value[i]) == isnan(other.value[i]));
        if (isnan(one.value[i]))
            continue;
        both++;
        assert_close(one.value[i], other.value[i], fmax(1e-4, 3e-4 * fabs(one.value[i])));
        largest = fmax(largest, fabs(one.value[i] - other.value[i]));
    }
    print_message("polynomial and Gibbs function: %.4f mm apart at most, %zu cells\n", 1e3 * largest, both);
    assert_true(both > 10000);
    assert_true(largest > 0.0); /* else it was the same equation twice */
    field_free(&one);
    field_free(&other);
}

/* ---- one column, worked through ---- */

enum { LEVELS = 19, BACKGROUND_LEVELS = 20 };

static size_t index_of(int file, const char *axis, double wanted)
{
    int variable, dimension;
    size_t count;
    double value;

    must(nc_inq_varid(file, axis, &variable));
    must(nc_inq_vardimid(file, variable, &dimension));
    must(nc_inq_dimlen(file, dimension, &count));
    for (size_t i = 0; i < count; i++) {
        must(nc_get_var1_double(file, variable, &i, &value));
        if (fabs(value - wanted) < 1e-6)
            return i;
    }
    fail_msg("%s has no %g", axis, wanted);
    return 0;
}

/* Levels of one column as the file has them; step counts from 1, 0 where there are no times. */
static void read_column(const char *path, const char *name, const char *const axes[3], size_t step,
                        double latitude, double longitude, size_t levels, double *depth, double *value)
{
    int file, variable, level;
    size_t start[4] = {0, 0, 0, 0}, count[4] = {1, levels, 1, 1}, skip = step > 0 ? 0 : 1;

    must(nc_open(path, NC_NOWRITE, &file));
    start[0] = step > 0 ? step - 1 : 0;
    start[2] = index_of(file, axes[1], latitude);
    start[3] = index_of(file, axes[2], longitude);
    must(nc_inq_varid(file, axes[0], &level));
    must(nc_get_var_double(file, level, depth));
    must(nc_inq_varid(file, name, &variable));
    must(nc_get_vara_double(file, variable, start + skip, count + skip, value));
    must(nc_close(file));
}

static double between(size_t count, const double *x, const double *y, double at)
{
    size_t i = 1;

    while (i + 1 < count && x[i] < at)
        i++;
    return y[i - 1] + (y[i] - y[i - 1]) * (at - x[i - 1]) / (x[i] - x[i - 1]);
}

/*
 * Thermosteric height and heat of the column by the definitions: the background's salinity linear in depth
 * times 35.16504/35, in-situ to conservative temperature, pressure of the depth, the change of volume over
 * its mean, trapezoids.
 */
static void work_column(double latitude, double longitude, double *height, double *heat)
{
    static const char *const monthly_axes[3] = {"ZAXLEVIT19", "YAX_SUBSET", "XAX_SUBSET"};
    static const char *const annual_axes[3] = {"ZAXLEVITR", "YAXLEVITR", "XAXLEVITR"};
    double z[LEVELS], t[2][LEVELS], deep[BACKGROUND_LEVELS], s[BACKGROUND_LEVELS];
    double part[LEVELS], gain[LEVELS];

    for (size_t e = 0; e < 2; e++)
        read_column(data_file("ocean_atlas_subset.nc"), "TEMP", monthly_axes, e == 0 ? 3 : 9, latitude,
                    longitude, LEVELS, z, t[e]);
    read_column(data_file("levitus_climatology.cdf"), "SALT", annual_axes, 0, latitude, longitude,
                BACKGROUND_LEVELS, deep, s);
    for (size_t k = 0; k < LEVELS; k++) {
        double salt = between(BACKGROUND_LEVELS, deep, s, z[k]) * 35.16504 / 35.0;
        double pressure = stericol_sea_pressure(z[k], latitude), warmth[2], volume[2], mean;

        assert_true(fabs(t[0][k]) < 40.0 && fabs(t[1][k]) < 40.0 && salt > 30.0 && salt < 40.0);
        for (size_t e = 0; e < 2; e++) {
            warmth[e] = stericol_conservative_temperature_of_in_situ(salt, t[e][k], pressure);
            volume[e] = stericol_specific_volume(salt, warmth[e], pressure);
        }
        mean = 0.5 * (volume[0] + volume[1]);
        part[k] = (volume[1] - volume[0]) / mean;
        gain[k] = 3991.86795711963 * (warmth[1] - warmth[0]) / mean;
    }
    *height = *heat = 0.0;
    for (size_t k = 1; k < LEVELS; k++) {
        *height += 0.5 * (part[k] + part[k - 1]) * (z[k] - z[k - 1]);
        *heat += 0.5 * (gain[k] + gain[k - 1]) * (z[k] - z[k - 1]);
    }
}

/* One place in each of the North Pacific, the South Indian and the North Atlantic Ocean and on the equator.
 */
enum { PLACES = 4 };
static const double places[PLACES][2] = {{30.5, 200.5}, {-29.5, 80.5}, {40.5, 320.5}, {0.5, 250.5}};

static size_t place_of(const char *path, double latitude, double longitude)
{
    field rows = read_field(path, "lat"), columns = read_field(path, "lon");
    size_t row = 0, column = 0, place;

    while (row + 1 < rows.count && fabs(rows.value[row] - latitude) > 1e-6)
        row++;
    while (column + 1 < columns.count && fabs(columns.value[column] - longitude) > 1e-6)
        column++;
    assert_close(rows.value[row], latitude, 1e-6);
    assert_close(columns.value[column], longitude, 1e-6);
    place = row * columns.count + column;
    field_free(&rows);
    field_free(&columns);
    return place;
}

/* The cell centres are nodes of the background too, so that its horizontal interpolation has nothing to do.
 */
static void test_columns_worked_by_hand(void **state)
{
    field map = read_field(season(), "thermosteric_height_change");
    field heat_map = read_field(season(), "heat_content_change");

    (void)state;
    for (size_t p = 0; p < PLACES; p++) {
        double height, heat;
        size_t place = place_of(season(), places[p][0], places[p][1]);

        work_column(places[p][0], places[p][1], &height, &heat);
        /* the map holds floats: 4e-9 m of 6 cm; the background is kept as float: 2e-6 g/kg, 1e-8 of expansion
         */
        assert_close(map.value[place], height, 2e-8);
        assert_relative(heat_map.value[place], heat, 1e-6);
    }
    field_free(&map);
    field_free(&heat_map);
}

/* ---- the relief ---- */

enum { RELIEF_ROWS = 540, RELIEF_COLUMNS = 1080 };

/* The relief in m, and the limits of its cells; the column that repeats the first is left out. */
typedef struct relief {
    double height[RELIEF_ROWS][RELIEF_COLUMNS];
    double latitude[RELIEF_ROWS], longitude[RELIEF_COLUMNS];
    double latitude_bounds[2 * RELIEF_ROWS], longitude_bounds[2 * RELIEF_COLUMNS];
} relief;

static void read_relief(relief *of)
{
    const double half = 1.0 / 6.0; /* of 20 minutes, degrees */
    int file, variable;

    must(nc_open(data_file("etopo20.cdf"), NC_NOWRITE, &file));
    must(nc_inq_varid(file, "ROSE", &variable));
    must(nc_get_vara_double(file, variable, (size_t[]){0, 0}, (size_t[]){RELIEF_ROWS, RELIEF_COLUMNS},
                            &of->height[0][0]));
    must(nc_inq_varid(file, "ETOPO20Y", &variable));
    must(nc_get_var_double(file, variable, of->latitude));
    must(nc_inq_varid(file, "ETOPO20X1_1081", &variable));
    must(nc_get_vara_double(file, variable, (size_t[]){0}, (size_t[]){RELIEF_COLUMNS}, of->longitude));
    must(nc_close(file));
    for (size_t j = 0; j < RELIEF_ROWS; j++) {
        of->latitude_bounds[2 * j] = fmax(-90.0, of->latitude[j] - half);
        of->latitude_bounds[2 * j + 1] = fmin(90.0, of->latitude[j] + half);
    }
    for (size_t i = 0; i < RELIEF_COLUMNS; i++) {
        of->longitude_bounds[2 * i] = of->longitude[i] - half;
        of->longitude_bounds[2 * i + 1] = of->longitude[i] + half;
    }
}

static relief earth;

/* The share of the sea's water that lies above a depth. */
static double share_above(const relief *of, double limit)
{
    double above = 0.0, all = 0.0;

    for (size_t j = 0; j < RELIEF_ROWS; j++) {
        double ring = ring_area(of->latitude_bounds[2 * j], of->latitude_bounds[2 * j + 1]);

        for (size_t i = 0; i < RELIEF_COLUMNS; i++) {
            double depth = fmax(0.0, -of->height[j][i]);

            all += ring * depth;
            above += ring * fmin(depth, limit);
        }
    }
    return above / all;
}

/* ---- the annual climatology ---- */

static const char *warmed(void)
{
    return in_folder("warmed.nc");
}

/* Areas of the sea in the data.  The last degree below the pole is 0.01 % of the whole and makes no odds. */
static void test_areas_of_the_oceans(void **state)
{
    const struct {
        const char *region;
        double published, tolerance;
    } rows[] = {
        /* the climatology has 1.1 % less sea than was published: no narrow arms, no coast cells */
        {"whole_domain", ALL_OCEANS, 0.03},
        {"atlantic_ocean", ATLANTIC, 0.05},
        {"indian_ocean", INDIAN, 0.05},
        {"pacific_ocean", PACIFIC, 0.05},
        /* Here it lacks most: the water under the ice shelves, the channels of the archipelagos, the coast
         * cells of 1 degree.  Measured -6.9 % and -7.4 %; on the relief below both are within 5.1 %. */
        {"arctic_ocean", ARCTIC, 0.08},
        {"southern_ocean", SOUTHERN, 0.08},
    };

    (void)state;
    run_well("scenario", "--field", data_file("levitus_climatology.cdf"), "--warming", "0.2", "--output",
             warmed(), "--replace");
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        double area = region_value(warmed(), "region_area", rows[i].region);

        print_message("%-16s %7.2f million km2, published %7.2f (%+.1f %%)\n", rows[i].region, area / 1e12,
                      rows[i].published / 1e12, 100.0 * (area / rows[i].published - 1.0));
        assert_relative(area, rows[i].published, rows[i].tolerance);
    }
    /* The basins share the whole out, and so do the hemispheres; the sums are exact, each rounded once. */
    assert_relative(region_value(warmed(), "region_area", "arctic_ocean") +
                        region_value(warmed(), "region_area", "atlantic_ocean") +
                        region_value(warmed(), "region_area", "indian_ocean") +
                        region_value(warmed(), "region_area", "pacific_ocean") +
                        region_value(warmed(), "region_area", "southern_ocean"),
                    region_value(warmed(), "region_area", "whole_domain"), 1e-12);
    assert_relative(region_value(warmed(), "region_area", "northern_hemisphere") +
                        region_value(warmed(), "region_area", "southern_hemisphere"),
                    region_value(warmed(), "region_area", "whole_domain"), 1e-12);
}

/*
 * IPCC AR6 gives 0.121 m/YJ for the observed warming of 1995-2014, models 0.09 to 0.127 (Kuhlbrodt and
 * Gregory 2012 and a list of single models).  A uniform warming must lie lower than the observed one: it puts
 * as much heat into the cold deep ocean, where expansion is half of the surface's, as into the warm upper
 * one, where the observed heat sits.  It is a bound of sanity; many wrong programs pass it too.
 */
static void test_efficiency_of_uniform_warming(void **state)
{
    double efficiency = region_value(warmed(), "region_expansion_efficiency", "whole_domain");
    double heat = region_value(warmed(), "region_heat_content_change", "whole_domain");
    double rise = region_value(warmed(), "region_sea_level_equivalent", "whole_domain");

    (void)state;
    print_message("0.2 K everywhere: %.3f YJ, %.1f mm, %.4f m/YJ\n", heat / 1e24, 1e3 * rise, efficiency);
    assert_true(efficiency > 0.09 && efficiency < 0.13);
    assert_relative(efficiency, rise / (heat / 1e24), 1e-14); /* its definition, two divisions */
    assert_relative(
        rise, region_value(warmed(), "region_thermosteric_volume_change", "whole_domain") / 3.625e14, 1e-14);
}

/*
 * The water that was integrated over, against the published volume of the sea down to 5000 m, where the data
 * end (the share of the sea above 5000 m is the relief's).  2.5 %: 1.1 % that the data's sea is short in
 * area, 1 % that the published volume is good to, and cells that end in steps of up to 1000 m.  Heat: 0.2 K
 * times cp0 times that volume times a mean density of 1035..1042 kg/m3 (common practice, no source).
 */
static void test_volume_and_heat_of_uniform_warming(void **state)
{
    field depth = read_field(warmed(), "integrated_depth"), area = read_field(warmed(), "cell_area");
    double volume = 0.0, heat = region_value(warmed(), "region_heat_content_change", "whole_domain");
    double expected;

    (void)state;
    read_relief(&earth);
    expected = ALL_WATER * share_above(&earth, 5000.0);
    assert_int_equal(depth.count, area.count);
    for (size_t i = 0; i < depth.count; i++)
        if (!isnan(depth.value[i]))
            volume += depth.value[i] * area.value[i];
    field_free(&depth);
    field_free(&area);
    print_message("integrated: %.4g m3; published, above 5000 m: %.4g (%+.1f %%)\n", volume, expected,
                  100.0 * (volume / expected - 1.0));
    assert_relative(volume, expected, 0.025);
    assert_relative(heat / (0.2 * 3991.86795711963 * volume), 1038.5, 3.5 / 1038.5);
}

/* Every fifth column of the annual climatology, for what is slow. */
enum { DEEP = BACKGROUND_LEVELS, ALL_ROWS = 180, ALL_COLUMNS = 360, EVERY = 5 };
enum { FEW_ROWS = ALL_ROWS / EVERY, FEW_COLUMNS = ALL_COLUMNS / EVERY };

typedef struct climatology {
    float value[SEA_QUANTITIES][DEEP][ALL_ROWS][ALL_COLUMNS];
} climatology;

static double every_fifth(const sea *of, sea_quantity quantity, size_t t, size_t k, size_t j, size_t i)
{
    const climatology *all = of->user;
    double value = (double)all->value[quantity][k][EVERY * j][EVERY * i];

    (void)t;
    return value < -1e9 ? (double)NAN : value; /* missing_value of the file is -1e10 */
}

static const char *write_every_fifth(const char *name)
{
    static climatology all;
    static double latitude[ALL_ROWS], longitude[ALL_COLUMNS], depth[DEEP], edges[DEEP + 1], bounds[2 * DEEP];
    const struct {
        const char *variable;
        double *values;
    } axes[] = {
        {"YAXLEVITR", latitude}, {"XAXLEVITR", longitude}, {"ZAXLEVITR", depth}, {"ZAXLEVITRedges", edges}};
    sea of = sea_plain();
    sea_form form = form_plain();
    int file, variable;

    must(nc_open(data_file("levitus_climatology.cdf"), NC_NOWRITE, &file));
    for (int q = 0; q < SEA_QUANTITIES; q++) {
        must(nc_inq_varid(file, q == SEA_TEMPERATURE ? "TEMP" : "SALT", &variable));
        must(nc_get_var_float(file, variable, &all.value[q][0][0][0]));
    }
    for (size_t a = 0; a < sizeof axes / sizeof axes[0]; a++) {
        must(nc_inq_varid(file, axes[a].variable, &variable));
        must(nc_get_var_double(file, variable, axes[a].values));
    }
    must(nc_close(file));
    for (size_t k = 0; k < 2 * DEEP; k++)
        bounds[k] = edges[(k + 1) / 2];
    for (size_t j = 0; j < FEW_ROWS; j++)
        latitude[j] = latitude[EVERY * j];
    for (size_t i = 0; i < FEW_COLUMNS; i++)
        longitude[i] = longitude[EVERY * i];
    of.depth = (sea_axis){DEEP, depth, bounds};
    of.latitude = (sea_axis){FEW_ROWS, latitude, NULL};
    of.longitude = (sea_axis){FEW_COLUMNS, longitude, NULL};
    of.temperature_name = "sea_water_temperature";
    of.salinity_name = "sea_water_practical_salinity";
    of.salinity_units = "1";
    of.value = every_fifth;
    of.user = &all;
    return sea_write(&of, &form, name);
}

/*
 * A realistic change: 1 K at the surface falling to 0.02 K at the bottom, and a freshening alike; 400 K m in
 * all.  By the 3e-8 1/K above the laws should differ by 0.012 mm (rms) where all of it adds up: 0.02 mm in
 * columns of four oceans, 0.03 mm everywhere.
 */
static void test_steric_change_by_both_laws(void **state)
{
    static const char *const laws[2] = {"teos10", "gibbs"};
    const char *field_path;
    field map[2];
    double largest = 0.0, change = 0.0;

    (void)state;
    write_text("by_depth.txt",
               "depth warming freshening\n0 1 0.05\n100 0.6 0.03\n300 0.25 0.01\n700 0.1 0.004\n"
               "2000 0.03 0\n5000 0.02 0\n");
    field_path = write_every_fifth("every_fifth.nc");
    for (size_t e = 0; e < 2; e++) {
        const char *output = in_folder(e == 0 ? "law_polynomial.nc" : "law_gibbs.nc");

        run_well("scenario", "--field", field_path, "--profile", in_folder("by_depth.txt"), "--equation",
                 laws[e], "--output", output, "--replace");
        assert_non_null(strstr(file_text(output, "inputs"), "profile: ")); /* the table is an input too */
        map[e] = read_field(output, "steric_height_change");
    }
    assert_int_equal(map[0].count, map[1].count);
    for (size_t i = 0; i < map[0].count; i++) {
        assert_true(isnan(map[0].value[i]) == isnan(map[1].value[i]));
        if (isnan(map[0].value[i]))
            continue;
        largest = fmax(largest, fabs(map[0].value[i] - map[1].value[i]));
        change = fmax(change, fabs(map[0].value[i]));
    }
    print_message("largest change %.1f mm, laws at most %.4f mm apart\n", 1e3 * change, 1e3 * largest);
    assert_true(largest > 0.0);
    assert_true(largest < 3e-5);
    for (size_t p = 0; p < PLACES; p++) {
        size_t place = place_of(in_folder("law_gibbs.nc"), places[p][0], places[p][1]);

        assert_close(map[0].value[place], map[1].value[place], 2e-5);
    }
    field_free(&map[0]);
    field_free(&map[1]);
}

/* ---- the oceans on the relief ---- */

/* Sea area of a region: cells below zero, each by its share in the region. */
static double sea_area(const relief *of, const stericol_regions *regions, size_t region)
{
    double fraction[RELIEF_COLUMNS], sum = 0.0;

    for (size_t j = 0; j < RELIEF_ROWS; j++) {
        double area = ring_area(of->latitude_bounds[2 * j], of->latitude_bounds[2 * j + 1]) / RELIEF_COLUMNS;

        stericol_regions_row(regions, region, j, fraction);
        for (size_t i = 0; i < RELIEF_COLUMNS; i++)
            if (of->height[j][i] < 0.0)
                sum += fraction[i] * area;
    }
    return sum;
}

/*
 * The limits of the oceans on a finer sea: cells of 20 minutes whose relief lies below zero.  5.1 %: the
 * published basins follow limits drawn in detail, ours are simplified, and a coast on 20 minutes is coarse;
 * most of it (measured: Southern -5.0 %, the others within 1.4 %) is ice shelves, which are land in the
 * relief.  2 % for the whole, which has no inner limits.
 */
static void test_oceans_on_the_relief(void **state)
{
    static const char *const names[] = {"arctic_ocean",  "atlantic_ocean", "indian_ocean",
                                        "pacific_ocean", "southern_ocean", "all"};
    const double published[] = {ARCTIC, ATLANTIC, INDIAN, PACIFIC, SOUTHERN, ALL_OCEANS};
    stericol_context *context = stericol_context_new();
    stericol_regions *regions = stericol_regions_new();
    stericol_cells cells = {.kind = STERICOL_CELLS_REGULAR,
                            .rows = RELIEF_ROWS,
                            .columns = RELIEF_COLUMNS,
                            .latitude = earth.latitude,
                            .longitude = earth.longitude,
                            .latitude_bounds = earth.latitude_bounds,
                            .longitude_bounds = earth.longitude_bounds};

    (void)state;
    read_relief(&earth);
    assert_int_equal(stericol_regions_add_oceans(context, regions), STERICOL_OK);
    assert_int_equal(stericol_regions_add_whole(context, regions, "all"), STERICOL_OK);
    assert_int_equal(stericol_regions_prepare(context, regions, &cells), STERICOL_OK);
    assert_int_equal(stericol_regions_count(regions), sizeof names / sizeof names[0]);
    for (size_t r = 0; r < stericol_regions_count(regions); r++) {
        double area = sea_area(&earth, regions, r);

        assert_string_equal(stericol_regions_name(regions, r), names[r]);
        print_message("relief: %-16s %+.1f %%\n", names[r], 100.0 * (area / published[r] - 1.0));
        assert_relative(area, published[r], r < 5 ? 0.051 : 0.02);
    }
    stericol_regions_free(regions);
    stericol_context_free(context);
}

static int begin(void **state)
{
    (void)state;
    work_in("real_data");
    return 0;
}

static int end(void **state)
{
    (void)state;
    forget_said();
    return 0;
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_season_of_both_hemispheres),
        cmocka_unit_test(test_season_holds_no_halosteric_part),
        cmocka_unit_test(test_season_by_the_gibbs_function),
        cmocka_unit_test(test_columns_worked_by_hand),
        cmocka_unit_test(test_areas_of_the_oceans),
        cmocka_unit_test(test_efficiency_of_uniform_warming),
        cmocka_unit_test(test_volume_and_heat_of_uniform_warming),
        cmocka_unit_test(test_steric_change_by_both_laws),
        cmocka_unit_test(test_oceans_on_the_relief),
    };

    return cmocka_run_group_tests(tests, begin, end);
}
