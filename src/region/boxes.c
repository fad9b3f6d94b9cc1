/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "region/boxes.h"

#include "base/context.h"
#include "base/text.h"
#include "region/sphere.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const char FORM[] = "write NAME=W,S,E,N in degrees";

static bool name_byte(char byte)
{
    return (byte >= 'a' && byte <= 'z') || (byte >= 'A' && byte <= 'Z') || (byte >= '0' && byte <= '9') ||
           byte == '_' || byte == '-' || byte == '.';
}

stericol_status stericol_box_check(stericol_context *context, const stericol_box *box, const char *text)
{
    const char *shown = text != NULL ? text : box->name;

    if (!(isfinite(box->west) && isfinite(box->south) && isfinite(box->east) && isfinite(box->north)))
        return stericol_fail(context, STERICOL_USAGE, NULL, "region", FORM,
                             "'%s' has a limit that is no number", shown);
    if (fabs(box->west) > 360.0 || fabs(box->east) > 360.0)
        return stericol_fail(context, STERICOL_USAGE, NULL, "region", "give longitudes within -360..360",
                             "'%s' has a longitude of %.9g", shown,
                             fabs(box->west) > 360.0 ? box->west : box->east);
    if (fabs(box->south) > 90.0 || fabs(box->north) > 90.0)
        return stericol_fail(
            context, STERICOL_USAGE, NULL, "region", "give latitudes within -90..90, in the order W,S,E,N",
            "'%s' has a latitude of %.9g", shown, fabs(box->south) > 90.0 ? box->south : box->north);
    if (!(box->south < box->north))
        return stericol_fail(context, STERICOL_USAGE, NULL, "region", "give them in the order W,S,E,N",
                             "the southern limit of '%s' (%.9g) is not south of the northern one (%.9g)",
                             shown, box->south, box->north);
    if (!(stericol_box_width(box) > 0.0))
        return stericol_fail(context, STERICOL_USAGE, NULL, "region",
                             "for the whole circle give longitudes 360 apart, such as -180 and 180",
                             "the western and eastern limits of '%s' are the same meridian", shown);
    return STERICOL_OK;
}

stericol_status stericol_box_parse(stericol_context *context, const char *text, stericol_box *box)
{
    static const char *const PLACES[4] = {"western", "southern", "eastern", "northern"};
    stericol_box made = {{0}, 0.0, 0.0, 0.0, 0.0};
    double *const limits[4] = {&made.west, &made.south, &made.east, &made.north};
    const char *equals = strchr(text, '='), *from;
    size_t length;
    stericol_status status;

    if (equals == NULL)
        return stericol_fail(context, STERICOL_USAGE, NULL, "region", FORM, "'%s' has no '='", text);
    length = (size_t)(equals - text);
    if (length == 0 || length >= sizeof made.name)
        return stericol_fail(context, STERICOL_USAGE, NULL, "region", "give a name of 1 to 63 characters",
                             "'%s' has a name of %zu characters", text, length);
    for (size_t i = 0; i < length; i++)
        if (!name_byte(text[i]))
            return stericol_fail(context, STERICOL_USAGE, NULL, "region",
                                 "use letters, digits, '_', '-' and '.'",
                                 "the name in '%s' has a character that is not allowed", text);
    memcpy(made.name, text, length);
    from = equals + 1;
    for (size_t i = 0; i < 4; i++) {
        const char *comma = strchr(from, ',');
        char number[64];

        if ((comma == NULL) != (i == 3))
            return stericol_fail(context, STERICOL_USAGE, NULL, "region", FORM,
                                 "'%s' does not have four limits", text);
        length = comma != NULL ? (size_t)(comma - from) : strlen(from);
        if (length < sizeof number) {
            memcpy(number, from, length);
            number[length] = '\0';
        }
        if (length >= sizeof number || !stericol_parse_number(number, limits[i]))
            return stericol_fail(context, STERICOL_USAGE, NULL, "region", FORM,
                                 "the %s limit in '%s' is not a number", PLACES[i], text);
        from = comma != NULL ? comma + 1 : from;
    }
    status = stericol_box_check(context, &made, text);
    if (status == STERICOL_OK)
        *box = made;
    return status;
}

/* 0 <= ahead < 360, how far east of one meridian another lies. */
static double ahead_of(double from, double to)
{
    double ahead = stericol_reduced_longitude(stericol_snapped_longitude(to) - from);

    return ahead < 0.0 ? ahead + 360.0 : ahead;
}

double stericol_box_width(const stericol_box *box)
{
    double west = stericol_snapped_longitude(box->west);

    if (fabs(stericol_snapped_longitude(box->east) - west) >= 360.0)
        return 360.0;
    return ahead_of(west, box->east);
}

bool stericol_box_holds(const stericol_box *box, double latitude, double longitude)
{
    /* The pole belongs to a box that reaches it. */
    if (!(latitude >= box->south && (latitude < box->north || box->north >= 90.0)))
        return false;
    return ahead_of(stericol_snapped_longitude(box->west), longitude) < stericol_box_width(box);
}

static double overlap(double a, double b, double from, double to)
{
    return fmax(0.0, fmin(b, to) - fmax(a, from));
}

/* The share of a row between two parallels. */
static double row_share_between(const stericol_cells *cells, size_t row, double low, double high)
{
    double south, north, from, to;

    stericol_row_span(cells, row, &south, &north);
    from = fmax(south, low);
    to = fmin(north, high);
    if (!(to > from))
        return 0.0;
    return stericol_sine_difference(from, to) / stericol_sine_difference(south, north);
}

void stericol_box_shares(const stericol_box *box, const stericol_cells *cells, double *row_share,
                         double *column_share)
{
    double span = stericol_box_width(box), start = stericol_snapped_longitude(box->west);

    for (size_t row = 0; row < cells->rows; row++)
        row_share[row] = row_share_between(cells, row, box->south, box->north);
    for (size_t column = 0; column < cells->columns; column++) {
        double west, width, first, covered;

        stericol_column_span(cells, column, &west, &width);
        /* The box seen from the cell's western side: it starts `first` degrees ahead, and once more behind.
         */
        first = ahead_of(west, start);
        covered = overlap(0.0, width, first, first + span) +
                  overlap(0.0, width, first - 360.0, first - 360.0 + span);
        column_share[column] = span >= 360.0 ? 1.0 : covered / width;
    }
}

void stericol_hemisphere_shares(const stericol_cells *cells, bool north, double *row_share)
{
    for (size_t row = 0; row < cells->rows; row++) {
        double above = row_share_between(cells, row, 0.0, 90.0);

        /* 1 - x is exact for 0.5 <= x <= 1 (Sterbenz), so that the two shares of a row add to 1. */
        if (above < 0.5)
            above = 1.0 - row_share_between(cells, row, -90.0, 0.0);
        row_share[row] = north ? above : 1.0 - above;
    }
}
