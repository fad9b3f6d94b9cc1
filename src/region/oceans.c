/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The limits of the oceans are polygons on the equirectangular chart (straight between the points in
 * longitude and latitude), painted one over the other on a sphere that is Pacific at the start; the last one
 * painted decides.  So every point has one answer, and a polygon need be exact only where nothing covers its
 * side.
 *
 * At sea the points follow International Hydrographic Organization, S-23, Limits of Oceans and Seas (3rd
 * ed. 1953; for the Southern Ocean and the extent of the Arctic Ocean the draft 4th ed. of 2002),
 * simplified to straight lines between the capes that it names.  On land they follow the watershed roughly,
 * from common geographic knowledge: no data lie there, only nearby coasts must fall on the right side.
 */
#include "region/oceans.h"

#include "base/checked.h"
#include "region/sphere.h"

#include <assert.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

typedef struct chart_point {
    double longitude, latitude; /* degrees east within +-181, degrees north within +-91 */
} chart_point;

/* Ends beyond the chart, so that no point lies on the outer side of a polygon that reaches to its rim. */
#define FAR_EAST 181.0
#define FAR_WEST -181.0
#define FAR_NORTH 91.0
#define FAR_SOUTH -91.0

static const chart_point indian[] = {
    /* Generous in the west and north: the Atlantic, painted later, holds the limit. */
    {0.0, FAR_SOUTH},
    {0.0, 0.0},
    {20.0, 25.0},
    {30.0, 38.0},
    {46.0, 38.0},
    {52.0, 34.0},
    {60.0, 33.0},
    {75.0, 33.0},
    {90.0, 29.0},
    {97.5, 27.0},
    /* Down the Malay peninsula */
    {98.4, 17.0},
    {98.9, 13.5},
    {99.3, 11.8},
    {98.95, 10.5},
    {99.1, 9.3},
    {99.6, 8.2},
    {100.2, 6.8},
    {101.3, 5.3},
    {102.3, 3.5},
    {103.35, 2.0},
    /* Strait of Malacca, south-eastern limit: Tanjong Piai - Karimun - Sumatra */
    {103.51, 1.27},
    {103.4, 1.05},
    {102.95, 0.65},
    {102.2, 0.0},
    /* Sumatra, and Sunda Strait at its narrows */
    {102.3, -2.3},
    {103.8, -4.0},
    {104.9, -5.1},
    {105.75, -5.83},
    {105.98, -5.92},
    /* Java, Bali, Lombok, Sumbawa */
    {106.4, -6.6},
    {107.5, -7.0},
    {110.0, -7.5},
    {112.0, -7.9},
    {114.0, -8.25},
    {114.45, -8.4},
    {115.1, -8.45},
    {116.3, -8.6},
    {117.5, -8.75},
    {118.9, -8.75},
    /* Sumba, Savu, Roti, Timor: the southern limit of the Savu Sea */
    {119.3, -9.65},
    {120.4, -10.05},
    {121.85, -10.5},
    {123.0, -10.75},
    {123.75, -10.2},
    {125.2, -9.2},
    {127.2, -8.4},
    /* Leti, Sermata, Babar, Selaru, Cape Don: the northern and eastern limits of the Timor Sea */
    {128.0, -8.2},
    {128.9, -8.2},
    {129.8, -7.95},
    {130.9, -8.3},
    {131.77, -11.32},
    /* Australia, then the meridian of South East Cape, Tasmania, 146 49' E */
    {133.0, -13.5},
    {136.0, -18.0},
    {141.0, -23.0},
    {146.0 + 49.0 / 60.0, -31.0},
    {146.0 + 49.0 / 60.0, FAR_SOUTH},
};

static const chart_point atlantic[] = {
    /* The meridian of Cape Agulhas, 20 E, then Africa's watershed */
    {20.0, FAR_SOUTH},
    {20.0, -34.0},
    {24.0, -30.0},
    {26.0, -20.0},
    {28.0, -8.0},
    {30.0, 0.0},
    {33.0, 4.0},
    {36.5, 10.0},
    {37.0, 14.0},
    {35.5, 18.0},
    {34.0, 22.0},
    {32.5, 26.5},
    {31.7, 29.5},
    /* Isthmus of Suez, the Levant, Anatolia, the Caucasus, Russia */
    {32.4, 30.5},
    {34.0, 30.6},
    {36.5, 31.3},
    {37.5, 36.5},
    {43.0, 39.0},
    {44.5, 42.0},
    {46.0, 48.0},
    {46.0, 63.0},
    /* Generous in the north: the Arctic holds the limit. */
    {46.0, 72.0},
    {-90.0, 72.0},
    {-110.0, 66.0},
    {-112.0, 50.0},
    /* The continental divide of North America */
    {-110.0, 44.0},
    {-107.0, 38.0},
    {-108.0, 32.0},
    {-106.0, 27.5},
    {-103.5, 23.0},
    {-101.5, 20.0},
    {-99.0, 18.6},
    {-97.0, 17.4},
    {-95.0, 16.8},
    {-93.6, 16.5},
    {-92.0, 15.4},
    {-90.8, 14.8},
    {-89.0, 14.3},
    {-87.0, 13.7},
    {-86.2, 12.7},
    {-85.6, 11.6},
    {-85.1, 10.9},
    {-84.2, 10.2},
    {-83.2, 9.3},
    {-82.2, 8.7},
    {-81.0, 8.5},
    {-80.3, 8.6},
    {-79.75, 9.1},
    {-79.2, 9.27},
    {-78.4, 9.15},
    {-77.75, 8.55},
    {-77.25, 7.9},
    /* The Andes */
    {-76.7, 7.0},
    {-76.3, 5.0},
    {-76.5, 2.5},
    {-78.0, 0.0},
    {-78.5, -3.0},
    {-78.0, -7.0},
    {-75.5, -11.5},
    {-71.0, -15.0},
    {-69.3, -18.0},
    {-67.5, -23.0},
    {-69.3, -29.0},
    {-70.0, -34.0},
    {-71.2, -40.0},
    {-71.7, -43.0},
    {-71.7, -48.0},
    {-71.9, -51.0},
    {-70.9, -52.3},
    {-70.5, -52.9},
    {-68.8, -54.3},
    /* The meridian of Cape Horn, 67 16' W */
    {-67.0 - 16.0 / 60.0, -55.4},
    {-67.0 - 16.0 / 60.0, FAR_SOUTH},
};

static const chart_point arctic[] = {
    {FAR_WEST, FAR_NORTH},
    {FAR_WEST, 66.9},
    {-180.0, 66.9},
    /* Chukotka, the narrows of Bering Strait (Cape Dezhnev - Cape Prince of Wales), Alaska */
    {-178.0, 66.75},
    {-176.0, 66.25},
    {-174.5, 66.05},
    {-172.0, 65.9},
    {-169.65, 66.08},
    {-168.12, 65.63},
    {-165.0, 65.6},
    {-161.0, 65.6},
    {-155.0, 66.8},
    {-141.0, 67.0},
    {-128.0, 65.5},
    {-115.0, 62.0},
    {-102.0, 56.5},
    /* South of Hudson Bay and James Bay, Labrador to Cape Chidley */
    {-95.0, 51.0},
    {-80.0, 50.0},
    {-74.0, 53.0},
    {-68.0, 56.5},
    {-65.2, 59.0},
    {-64.4, 60.37},
    /* Davis Strait, southern limit: 60 N, from Labrador to Greenland */
    {-64.3, 60.0},
    {-44.5, 60.0},
    /* Greenland to Cape Nansen, Denmark Strait to Straumnes, Iceland to Gerpir */
    {-44.0, 61.0},
    {-46.0, 65.0},
    {-38.0, 68.5},
    {-30.2, 68.25},
    {-23.1, 66.43},
    {-22.2, 66.2},
    {-21.9, 65.75},
    {-21.5, 65.2},
    {-20.0, 64.9},
    {-18.0, 64.9},
    {-13.5, 65.07},
    /* Fugloy, Muckle Flugga, 61 N to Norway */
    {-6.25, 62.33},
    {-0.9, 60.87},
    {-0.9, 61.0},
    {5.0, 61.0},
    /* Norway's watershed, Lapland, between the Baltic and the White Sea, Siberia, Chukotka */
    {8.0, 61.5},
    {12.0, 63.5},
    {15.5, 66.5},
    {20.0, 68.5},
    {28.0, 68.5},
    {30.0, 66.0},
    {32.0, 63.3},
    {36.0, 62.3},
    {46.0, 62.0},
    {62.0, 62.0},
    {75.0, 63.0},
    {120.0, 63.0},
    {140.0, 64.5},
    {160.0, 66.0},
    {177.0, 67.0},
    {180.0, 66.9},
    {FAR_EAST, 66.9},
    {FAR_EAST, FAR_NORTH},
};

static const chart_point southern[] = {
    {FAR_WEST, FAR_SOUTH}, {FAR_WEST, -60.0}, {FAR_EAST, -60.0}, {FAR_EAST, FAR_SOUTH}};

/* Waters that belong to no ocean */
static const chart_point inner_asia[] = {/* Caspian, Aral, Balkhash, Baikal */
                                         {44.0, 36.0}, {44.0, 47.0},  {47.0, 49.5},
                                         {58.0, 58.0}, {110.0, 58.0}, {110.0, 36.0}};
static const chart_point inner_america[] = {/* the Great Lakes, Winnipeg, Great Slave, Great Bear */
                                            {-75.6, 41.2},  {-75.6, 47.0},  {-84.0, 49.8},  {-93.0, 49.8},
                                            {-98.0, 56.0},  {-104.0, 63.0}, {-112.0, 65.8}, {-118.0, 67.0},
                                            {-126.0, 67.0}, {-120.0, 60.0}, {-112.0, 52.0}, {-112.0, 41.2}};
static const chart_point inner_africa[] = {/* Victoria, Tanganyika, Malawi, Turkana */
                                           {26.0, -15.0},
                                           {26.0, 5.0},
                                           {37.0, 5.0},
                                           {37.0, -15.0}};

typedef struct painted {
    stericol_ocean ocean;
    size_t count;
    const chart_point *point;
} painted;

#define PAINTED(ocean, points)                                                                               \
    {                                                                                                        \
        (ocean), sizeof(points) / sizeof((points)[0]), (points)                                              \
    }

/* From the bottom to the top. */
static const painted layers[] = {
    PAINTED(STERICOL_OCEAN_INDIAN, indian),      PAINTED(STERICOL_OCEAN_ATLANTIC, atlantic),
    PAINTED(STERICOL_OCEAN_ARCTIC, arctic),      PAINTED(STERICOL_OCEAN_NONE, inner_asia),
    PAINTED(STERICOL_OCEAN_NONE, inner_america), PAINTED(STERICOL_OCEAN_NONE, inner_africa),
    PAINTED(STERICOL_OCEAN_SOUTHERN, southern),
};
enum { LAYERS = sizeof layers / sizeof layers[0] };

const char *stericol_ocean_name(size_t ocean)
{
    static const char *const names[STERICOL_OCEANS] = {
        "", "arctic_ocean", "atlantic_ocean", "indian_ocean", "pacific_ocean", "southern_ocean"};

    assert(ocean >= 1 && ocean < STERICOL_OCEANS);
    return names[ocean];
}

/*
 * Whether side i of a layer crosses a parallel, and where.  An end on the parallel counts as south of it, so
 * that each meeting of two sides counts once.
 */
static bool crossing(const painted *layer, size_t i, double latitude, double *longitude)
{
    const chart_point *a = &layer->point[i], *b = &layer->point[i + 1 < layer->count ? i + 1 : 0];

    if ((a->latitude > latitude) == (b->latitude > latitude))
        return false;
    *longitude =
        a->longitude + (latitude - a->latitude) / (b->latitude - a->latitude) * (b->longitude - a->longitude);
    return true;
}

static bool holds(const painted *layer, double latitude, double longitude)
{
    bool inside = false;
    double at;

    for (size_t i = 0; i < layer->count; i++)
        if (crossing(layer, i, latitude, &at) && at <= longitude)
            inside = !inside;
    return inside;
}

stericol_ocean stericol_ocean_at(double latitude, double longitude)
{
    double reduced = stericol_reduced_longitude(longitude);

    if (!isfinite(latitude) || !isfinite(reduced))
        return STERICOL_OCEAN_NONE;
    for (size_t i = LAYERS; i-- > 0;)
        if (holds(&layers[i], latitude, reduced))
            return layers[i].ocean;
    return STERICOL_OCEAN_PACIFIC;
}

/* ---- curvilinear cells: squares of one degree that no limit enters answer at once ---- */

enum { SQUARE_ROWS = 180, SQUARE_COLUMNS = 360, SQUARE_CUT = 255 };

static size_t whole_within(double value, size_t count)
{
    return value <= 0.0 ? 0 : value >= (double)count ? count - 1 : (size_t)value;
}

/* Marks every square that a side may enter; a margin of a hundredth of a degree covers rounding. */
static void mark_side(chart_point a, chart_point b, unsigned char *square)
{
    static const double MARGIN = 0.01;
    double low = fmin(a.latitude, b.latitude) - MARGIN, high = fmax(a.latitude, b.latitude) + MARGIN;
    double west = fmin(a.longitude, b.longitude) - MARGIN, east = fmax(a.longitude, b.longitude) + MARGIN;
    double slope =
        fabs(b.latitude - a.latitude) > 0.0 ? (b.longitude - a.longitude) / (b.latitude - a.latitude) : 0.0;
    size_t first = whole_within(low + 90.0, SQUARE_ROWS), last = whole_within(high + 90.0, SQUARE_ROWS);

    for (size_t row = first; row <= last; row++) {
        double from = west, to = east;

        /* Steep sides: only the part of the side within this row of squares. */
        if (fabs(b.latitude - a.latitude) > 0.0) {
            double y0 = (double)row - 90.0 - MARGIN, y1 = (double)row - 89.0 + MARGIN;
            double x0 = a.longitude + (y0 - a.latitude) * slope, x1 = a.longitude + (y1 - a.latitude) * slope;

            from = fmax(west, fmin(x0, x1) - MARGIN);
            to = fmin(east, fmax(x0, x1) + MARGIN);
        }
        for (size_t column = whole_within(from + 180.0, SQUARE_COLUMNS);
             from <= to && column <= whole_within(to + 180.0, SQUARE_COLUMNS); column++)
            square[row * SQUARE_COLUMNS + column] = SQUARE_CUT;
    }
}

static void fill_squares(unsigned char *square)
{
    memset(square, 0, SQUARE_ROWS * SQUARE_COLUMNS);
    for (size_t i = 0; i < LAYERS; i++)
        for (size_t k = 0; k < layers[i].count; k++)
            mark_side(layers[i].point[k], layers[i].point[k + 1 < layers[i].count ? k + 1 : 0], square);
    for (size_t row = 0; row < SQUARE_ROWS; row++)
        for (size_t column = 0; column < SQUARE_COLUMNS; column++)
            if (square[row * SQUARE_COLUMNS + column] != SQUARE_CUT)
                square[row * SQUARE_COLUMNS + column] =
                    (unsigned char)stericol_ocean_at((double)row - 89.5, (double)column - 179.5);
}

static size_t classify(const void *what, double latitude, double longitude)
{
    const unsigned char *square = what;
    double reduced = stericol_reduced_longitude(longitude);
    unsigned char ocean = square[whole_within(latitude + 90.0, SQUARE_ROWS) * SQUARE_COLUMNS +
                                 whole_within(reduced + 180.0, SQUARE_COLUMNS)];

    return ocean != SQUARE_CUT ? ocean : (size_t)stericol_ocean_at(latitude, reduced);
}

/* ---- regular cells: what a parallel runs through ---- */

enum { STRIPS = 16, MOST_PIECES = 96, MOST_GAPS = STRIPS * MOST_PIECES };

/* Pieces of a parallel from -180 to 180: piece i runs from west[i] to west[i + 1]. */
typedef struct parallel {
    size_t count;
    double west[MOST_PIECES + 1];
    stericol_ocean ocean[MOST_PIECES];
} parallel;

/* A row of cells: its parallels, and the gaps between the meridians where any of them changes ocean. */
typedef struct row_pieces {
    size_t strips;         /* at most STRIPS */
    double weight[STRIPS]; /* of each strip in the area of the row; they add to 1 */
    parallel strip[STRIPS];
    size_t gaps;
    double west[MOST_GAPS + 1];
    unsigned char ocean[MOST_GAPS]; /* the ocean of all strips in the gap, SQUARE_CUT where they differ */
} row_pieces;

static int compare_doubles(const void *a, const void *b)
{
    double left = *(const double *)a, right = *(const double *)b;

    return left < right ? -1 : left > right;
}

static void cut_parallel(double latitude, parallel *cut)
{
    double at[MOST_PIECES], here;
    size_t count = 0;

    at[count++] = -180.0;
    for (size_t i = 0; i < LAYERS; i++)
        for (size_t k = 0; k < layers[i].count; k++)
            if (crossing(&layers[i], k, latitude, &here) && here > -180.0 && here < 180.0 &&
                count < MOST_PIECES)
                at[count++] = here;
    qsort(at, count, sizeof *at, compare_doubles);
    cut->count = 0;
    for (size_t i = 0; i < count; i++) {
        double end = i + 1 < count ? at[i + 1] : 180.0;
        stericol_ocean ocean = stericol_ocean_at(latitude, 0.5 * (at[i] + end));

        if (!(end > at[i]) || (cut->count > 0 && cut->ocean[cut->count - 1] == ocean))
            continue;
        cut->west[cut->count] = at[i];
        cut->ocean[cut->count++] = ocean;
    }
    cut->west[cut->count] = 180.0;
}

/* The last of the rising numbers west[0 .. count - 1] that is no larger than `value`; west[0] is. */
static size_t piece_of(const double *west, size_t count, double value)
{
    size_t low = 0, high = count;

    while (high - low > 1) {
        size_t middle = (low + high) / 2;

        if (west[middle] <= value)
            low = middle;
        else
            high = middle;
    }
    return low;
}

/*
 * Chooses the strips of a row: of equal area, except that the parallels which are limits themselves (60 S,
 * and 60 N and 61 N in the Atlantic) are borders of strips, so that what they cut is exact.
 */
static void choose_strips(double south, double north, row_pieces *row, double *latitude)
{
    static const double LIMITS[] = {-60.0, 60.0, 61.0};
    double border[5];
    size_t bands = 0, each;

    border[0] = south;
    for (size_t i = 0; i < sizeof LIMITS / sizeof LIMITS[0]; i++)
        if (LIMITS[i] > south && LIMITS[i] < north)
            border[++bands] = LIMITS[i];
    border[++bands] = north;
    each = STRIPS / bands;
    row->strips = bands * each;
    for (size_t i = 0; i < row->strips; i++) {
        double low = border[i / each], high = border[i / each + 1];
        double from = sin(low * STERICOL_RADIANS), to = sin(high * STERICOL_RADIANS);

        latitude[i] = asin(from + ((double)(i % each) + 0.5) / (double)each * (to - from)) / STERICOL_RADIANS;
        row->weight[i] =
            stericol_sine_difference(low, high) / stericol_sine_difference(south, north) / (double)each;
    }
}

/* Cuts a row of cells into strips, and each at the limits of the oceans. */
static void cut_row(double south, double north, row_pieces *row)
{
    double latitude[STRIPS];
    size_t count = 0;

    choose_strips(south, north, row, latitude);
    for (size_t i = 0; i < row->strips; i++) {
        cut_parallel(latitude[i], &row->strip[i]);
        memcpy(row->west + count, row->strip[i].west, row->strip[i].count * sizeof *row->west);
        count += row->strip[i].count;
    }
    qsort(row->west, count, sizeof *row->west, compare_doubles);
    row->west[count] = 180.0;
    row->gaps = count;
    for (size_t i = 0; i < count; i++) {
        double middle = 0.5 * (row->west[i] + row->west[i + 1]);

        for (size_t k = 0; k < row->strips; k++) {
            const parallel *cut = &row->strip[k];
            stericol_ocean ocean = cut->ocean[piece_of(cut->west, cut->count, middle)];

            if (k == 0)
                row->ocean[i] = (unsigned char)ocean;
            else if (row->ocean[i] != (unsigned char)ocean)
                row->ocean[i] = SQUARE_CUT;
        }
    }
}

/* Adds to share[] what part of a cell lies in each piece. */
static void share_out(const parallel *cut, double weight, double west, double width, double *share)
{
    double left = width, part = weight / width;
    size_t at = piece_of(cut->west, cut->count, west);

    while (left > 0.0) {
        double piece = fmin(left, cut->west[at + 1] - west);

        share[cut->ocean[at]] += piece * part;
        left -= piece;
        west = cut->west[++at];
        if (at == cut->count) {
            at = 0;
            west = -180.0;
        }
    }
}

static bool cover_cell(stericol_cover *cover, const row_pieces *pieces, size_t row, size_t column,
                       double west, double width)
{
    double share[STERICOL_OCEANS] = {0};
    size_t gap = piece_of(pieces->west, pieces->gaps, west);

    if (pieces->ocean[gap] != SQUARE_CUT && west + width <= pieces->west[gap + 1]) {
        stericol_cover_put_whole(cover, row, column, pieces->ocean[gap]);
        return true;
    }
    for (size_t i = 0; i < pieces->strips; i++)
        share_out(&pieces->strip[i], pieces->weight[i], west, width, share);
    return stericol_cover_put(cover, row, column, share);
}

static bool cover_regular(stericol_cover *cover, const stericol_cells *cells)
{
    double *span = stericol_new_array(cells->columns, 2 * sizeof *span);
    row_pieces *pieces = stericol_new_array(1, sizeof *pieces);
    bool good = span != NULL && pieces != NULL;

    for (size_t column = 0; good && column < cells->columns; column++)
        stericol_column_span(cells, column, &span[2 * column], &span[2 * column + 1]);
    for (size_t row = 0; good && row < cells->rows; row++) {
        double south, north;

        stericol_row_span(cells, row, &south, &north);
        cut_row(south, north, pieces);
        for (size_t column = 0; good && column < cells->columns; column++)
            good = cover_cell(cover, pieces, row, column, span[2 * column], span[2 * column + 1]);
    }
    free(span);
    free(pieces);
    return good;
}

bool stericol_oceans_cover(stericol_cover *cover, const stericol_cells *cells)
{
    unsigned char *square;
    bool good;

    if (cells->kind == STERICOL_CELLS_REGULAR) {
        good = stericol_cover_start(cover, cells->rows, cells->columns, STERICOL_OCEANS) &&
               cover_regular(cover, cells);
        if (!good)
            stericol_cover_free(cover);
        return good;
    }
    square = stericol_new_array(SQUARE_ROWS, SQUARE_COLUMNS);
    if (square == NULL)
        return false;
    fill_squares(square);
    good = stericol_cover_sample(cover, cells, STERICOL_OCEANS, classify, square);
    free(square);
    return good;
}
