/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "cf/units.h"

#include "base/text.h"

#include <math.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>
#include <udunits2.h>

/* Longer texts are no units; the bound keeps the parser of UDUNITS-2 away from hostile ones. */
enum { UNIT_ROOM = 128 };

struct stericol_cf_units {
    ut_system *system;
};

/*
 * Spellings met in real files, folded (see fold()) and separated by '|', with the spelling of UDUNITS-2 that
 * they stand for.  Needed where UDUNITS-2 knows no such word (PSU, METERS), reads another unit ("ppt" is
 * 1e-12, "C" coulomb, "c" the speed of light, "db" decibarn, "mb" millibarn), or cannot tell north from east.
 * CF 1.10, sections 4.1 and 4.2, for the spellings of latitude and longitude; the rest is common practice, no
 * source.
 */
static const struct {
    const char *spellings;
    const char *stands_for;
    stericol_cf_quantity quantity;
} known[] = {
    {"psu|p.s.u.|p.s.u|pss|pss-78|pss78|pss 78|pss-1978|pss 1978|practical salinity unit|practical salinity "
     "units|"
     "practical salinity|practical salinity scale|practical salinity scale 1978|ppt|p.p.t.|pptd|ppth|parts "
     "per thousand|"
     "part per thousand|parts/thousand|part/thousand|per mil|permil|per mill|per "
     "mille|permille|promille|o/oo|0/00|0/oo|1e-3|"
     "1e-03|1.e-3|1.0e-3|1.0e-03|.001|0.001|1/1000|10-3|10^-3|10**-3|10e-4|g/kg|g kg-1|g kg^-1|g "
     "kg**-1|g.kg-1|g*kg-1|"
     "gr/kg|gram/kg|grams/kg|gram per kilogram|grams per kilogram|g per kg|gm/kg|grams kg-1|gram kg-1",
     "1e-3", STERICOL_CF_QUANTITY_SALINITY},
    {"kg/kg|kg kg-1|kg kg^-1|kg kg**-1|kg.kg-1|kg*kg-1|kg per kg|kilogram per kilogram|g/g|g g-1|g g^-1|g "
     "g**-1",
     "kg/kg", STERICOL_CF_QUANTITY_SALINITY},
    {"%|percent|per cent|parts per hundred|part per hundred", "1e-2", STERICOL_CF_QUANTITY_SALINITY},
    {"1|1.|1.0|none|unitless|dimensionless|non-dimensional|nondimensional|no units|-|--", "1",
     STERICOL_CF_QUANTITY_SALINITY},
    {"c|degc|deg c|deg.c|deg. c|deg. c.|deg-c|degs c|degsc|degreec|degree c|degreesc|degrees "
     "c|degree-c|degrees-c|oc|o c|"
     "celsius|celcius|centigrade|deg celsius|deg celcius|deg centigrade|deg. celsius|degcelsius|degree "
     "celsius|"
     "degree celcius|degree centigrade|degrees celsius|degrees celcius|degrees "
     "centigrade|degreescelsius|degreecelsius|"
     "celsius degree|celsius degrees|degree(c)|degrees(c)|degree (c)|degrees (c)|deg (c)|deg(c)",
     "degree_Celsius", STERICOL_CF_QUANTITY_TEMPERATURE},
    {"k|kelvin|kelvins|deg k|degk|degree k|degrees k|degreek|degreesk|deg kelvin|degree kelvin|degrees "
     "kelvin|"
     "degreekelvin|degreeskelvin|deg. k|(k)",
     "kelvin", STERICOL_CF_QUANTITY_TEMPERATURE},
    {"f|degf|deg f|degree f|degrees f|fahrenheit|degree fahrenheit|degrees fahrenheit|deg fahrenheit",
     "degree_Fahrenheit", STERICOL_CF_QUANTITY_TEMPERATURE},
    {"m|m.|meter|meters|metre|metres|mtr|mtrs|meter(s)|metre(s)|meters below sea level|metres below sea "
     "level|"
     "meters below sea surface|metres below sea surface",
     "m", STERICOL_CF_QUANTITY_LENGTH},
    {"km|kilometer|kilometers|kilometre|kilometres", "km", STERICOL_CF_QUANTITY_LENGTH},
    {"cm|centimeter|centimeters|centimetre|centimetres", "cm", STERICOL_CF_QUANTITY_LENGTH},
    {"ft|foot|feet", "ft", STERICOL_CF_QUANTITY_LENGTH},
    {"fathom|fathoms", "fathom", STERICOL_CF_QUANTITY_LENGTH},
    {"db|dbs|dbar|dbars|d bar|d-bar|decibar|decibars|deci bar|deci bars|deci-bar|deci-bars|dbar.|decibar(s)",
     "dbar", STERICOL_CF_QUANTITY_PRESSURE},
    {"bar|bars", "bar", STERICOL_CF_QUANTITY_PRESSURE},
    {"mb|mbar|mbars|millibar|millibars|hpa|hectopascal|hectopascals", "hPa", STERICOL_CF_QUANTITY_PRESSURE},
    {"pa|pascal|pascals", "Pa", STERICOL_CF_QUANTITY_PRESSURE},
    {"kpa|kilopascal|kilopascals", "kPa", STERICOL_CF_QUANTITY_PRESSURE},
    {"degrees north|degree north|degrees n|degree n|degreesn|degreen|degreesnorth|degreenorth|deg north|deg "
     "n|degn|"
     "degnorth|degs n|degs north|degrees-north|degree-north|degrees latitude|degree latitude|north|degree "
     "lat|degrees lat",
     "degree_north", STERICOL_CF_QUANTITY_LATITUDE},
    {"degrees south|degree south|degrees s|degree s|degreess|deg s|degsouth|deg south", "-1 degree_north",
     STERICOL_CF_QUANTITY_LATITUDE},
    {"degrees east|degree east|degrees e|degree e|degreese|degreee|degreeseast|degreeeast|deg east|deg "
     "e|dege|degeast|"
     "degs e|degs east|degrees-east|degree-east|degrees longitude|degree longitude|east|degree lon|degrees "
     "lon|degree long|"
     "degrees long",
     "degree_east", STERICOL_CF_QUANTITY_LONGITUDE},
    {"degrees west|degree west|degrees w|degree w|degreesw|degreew|degw|deg w|degwest|deg west",
     "-1 degree_east", STERICOL_CF_QUANTITY_LONGITUDE},
};

/* Said behind a unit to name a scale, which the unit does not depend on. */
static const char *const scale_notes[] = {
    "its-90", "its 90", "its90",   "ipts-68", "ipts 68",           "ipts68",
    "its-68", "pss-78", "pss 78",  "pss78",   "pss-1978",          "pss1978",
    "pss",    "eos-80", "teos-10", "teos10",  "practical salinity"};

/* Bytes that stand for others in fold(): degree signs (also in Latin-1, and UTF-8 read as Latin-1 and written
 * again). */
static const struct {
    const char *bytes, *stands_for;
} signs[] = {
    {"\xC3\x82\xC2\xB0", "deg"},
    {"\xC2\xB0", "deg"},
    {"\xC2\xBA", "deg"},
    {"\xCB\x9A", "deg"},
    {"\xB0", "deg"},
    {"\xE2\x84\x83", "degc"},
    {"\xE2\x80\xB0", "permille"},
    {"\xC2\xA0", " "},
    {"\xE2\x88\x92", "-"},
    {"\xE2\x81\xBB\xC2\xB9", "-1"},
};

static bool is_blank(char c)
{
    return c == ' ' || (c >= '\t' && c <= '\r');
}

static void cut_blanks(char *text)
{
    size_t length = strlen(text), start = 0;

    while (length > 0 && (is_blank(text[length - 1]) || text[length - 1] == ','))
        length--;
    while (start < length && is_blank(text[start]))
        start++;
    memmove(text, text + start, length - start);
    text[length - start] = '\0';
}

/* "[psu]" and "(psu)" are "psu". */
static void cut_brackets(char *text)
{
    const size_t length = strlen(text);

    if (length > 2 &&
        ((text[0] == '[' && text[length - 1] == ']') || (text[0] == '(' && text[length - 1] == ')')) &&
        strpbrk(text + 1, "[(") == NULL) {
        memmove(text, text + 1, length - 2);
        text[length - 2] = '\0';
        cut_blanks(text);
    }
}

static bool same_ignoring_case(const char *text, size_t length, const char *other)
{
    char copy[UNIT_ROOM];

    if (length >= sizeof copy)
        return false;
    memcpy(copy, text, length);
    copy[length] = '\0';
    return stericol_same_ignoring_case(copy, other);
}

/* Cuts the name of a scale from the end: "deg C (ITS-90)", "degC, ITS-90", "1 (PSS-78)". */
static void cut_scale_note(char *text)
{
    size_t length = strlen(text);
    const char closing = length > 0 ? text[length - 1] : '\0';
    const bool bracketed = closing == ')' || closing == ']';

    for (size_t i = 0; i < sizeof scale_notes / sizeof *scale_notes; i++) {
        const size_t note = strlen(scale_notes[i]) + (bracketed ? 1 : 0);

        if (length < note + 2)
            continue;
        const char before = text[length - note - 1];

        if ((bracketed ? before != '(' && before != '[' : !is_blank(before)) ||
            !same_ignoring_case(text + length - note, strlen(scale_notes[i]), scale_notes[i]))
            continue;
        text[length - note - 1] = '\0';
        cut_blanks(text);
        return;
    }
}

/* The unit without what does not belong to it; false when nothing is left or it is too long to be one. */
static bool clean(const char *unit, char *text)
{
    if (!unit || strlen(unit) >= UNIT_ROOM)
        return false;
    memcpy(text, unit, strlen(unit) + 1);
    cut_blanks(text);
    cut_brackets(text);
    cut_scale_note(text);
    return text[0] != '\0';
}

/* Lower case, blanks and underscores as one blank, signs in words; cut off at the end of the room. */
static void fold(const char *text, char *folded, size_t room)
{
    size_t length = 0;

    while (*text && length + 1 < room) {
        const char *put = NULL;

        for (size_t i = 0; i < sizeof signs / sizeof *signs && !put; i++) {
            if (stericol_starts_with(text, signs[i].bytes)) {
                put = signs[i].stands_for;
                text += strlen(signs[i].bytes);
            }
        }
        if (put) {
            while (*put && length + 1 < room)
                folded[length++] = *put++;
        } else if (is_blank(*text) || *text == '_') {
            if (length > 0 && folded[length - 1] != ' ')
                folded[length++] = ' ';
            text++;
        } else {
            folded[length++] = *text >= 'A' && *text <= 'Z' ? (char)(*text - 'A' + 'a') : *text;
            text++;
        }
    }
    folded[length] = '\0';
    cut_blanks(folded);
}

static bool is_one_of(const char *folded, const char *spellings)
{
    const size_t length = strlen(folded);

    for (const char *at = spellings; at; at = strchr(at, '|')) {
        at += *at == '|';
        if (strncmp(at, folded, length) == 0 && (at[length] == '|' || at[length] == '\0'))
            return true;
    }
    return false;
}

/* The row of the table, or SIZE_MAX. */
static size_t find_known(const char *text)
{
    char folded[UNIT_ROOM * 2];

    fold(text, folded, sizeof folded);
    if (folded[0] == '\0' || strchr(folded, '|'))
        return SIZE_MAX;
    for (size_t i = 0; i < sizeof known / sizeof *known; i++)
        if (is_one_of(folded, known[i].spellings))
            return i;
    return SIZE_MAX;
}

/* NULL when UDUNITS-2 does not know it, which it then says to nobody. */
static ut_unit *parse(const stericol_cf_units *units, const char *text)
{
    ut_error_message_handler said = ut_set_error_message_handler(ut_ignore);
    ut_unit *unit = ut_parse(units->system, text, UT_UTF8);

    ut_set_error_message_handler(said);
    return unit;
}

/* Angles are dimensionless to UDUNITS-2, but no number that a salinity could be. */
static bool is_angle(const ut_unit *unit)
{
    char text[UNIT_ROOM * 2];
    const int length = ut_format(unit, text, sizeof text - 1, UT_ASCII | UT_DEFINITION);

    if (length < 0 || (size_t)length >= sizeof text)
        return false;
    text[length] = '\0';
    return ut_is_dimensionless(unit) && strstr(text, "rad") != NULL;
}

/* False where there is no conversion, or one that is not a scale and an offset (reciprocals and logarithms).
 */
static bool linear_conversion(ut_unit *from, ut_unit *to, double *scale, double *offset)
{
    /* A long base, so that an offset as large as 273.15 does not blur the scale; a power of two divides
     * exactly. */
    const double base = 1048576.0;
    bool linear = false;
    ut_error_message_handler said = ut_set_error_message_handler(ut_ignore);
    cv_converter *converter = is_angle(from) == is_angle(to) ? ut_get_converter(from, to) : NULL;

    if (converter) {
        const double at_zero = cv_convert_double(converter, 0.0);
        const double slope = (cv_convert_double(converter, base) - at_zero) / base;
        const double halfway = cv_convert_double(converter, base / 2) - at_zero;

        linear = isfinite(at_zero) && isfinite(slope) && fabs(slope) > 0.0 &&
                 fabs(halfway - slope * base / 2) <= 1e-9 * fabs(slope) * base;
        if (linear) {
            *scale = slope;
            *offset = at_zero;
        }
        cv_free(converter);
    }
    ut_set_error_message_handler(said);
    return linear;
}

static bool convert_texts(const stericol_cf_units *units, const char *unit, const char *target, double *scale,
                          double *offset)
{
    ut_unit *from = parse(units, unit), *to = parse(units, target);
    const bool done = from && to && linear_conversion(from, to, scale, offset);

    ut_free(from);
    ut_free(to);
    return done;
}

stericol_status stericol_cf_units_new(stericol_context *context, stericol_cf_units **units)
{
    ut_error_message_handler said = ut_set_error_message_handler(ut_ignore);
    stericol_status status = STERICOL_OK;

    *units = calloc(1, sizeof **units);
    if (!*units) {
        status = stericol_fail_memory(context, sizeof **units, "the unit system");
    } else {
        (*units)->system = ut_read_xml(NULL);
        if (!(*units)->system) {
            free(*units);
            *units = NULL;
            status =
                stericol_fail(context, STERICOL_FAULT, NULL, NULL,
                              "install the data of UDUNITS-2, or let UDUNITS2_XML_PATH name its udunits2.xml",
                              "UDUNITS-2 finds no database of units");
        }
    }
    ut_set_error_message_handler(said);
    return status;
}

void stericol_cf_units_free(stericol_cf_units *units)
{
    if (!units)
        return;
    ut_free_system(units->system);
    free(units);
}

bool stericol_cf_units_convert(const stericol_cf_units *units, const char *unit, const char *target,
                               double *scale, double *offset)
{
    char text[UNIT_ROOM];
    double factor, shift;

    if (!clean(unit, text))
        return false;
    const size_t row = find_known(text), target_row = find_known(target);
    const char *from = row != SIZE_MAX ? known[row].stands_for : text;
    const char *to = target_row != SIZE_MAX ? known[target_row].stands_for : target;
    const stericol_cf_quantity is = row != SIZE_MAX ? known[row].quantity : STERICOL_CF_QUANTITY_UNKNOWN;
    const stericol_cf_quantity wanted =
        target_row != SIZE_MAX ? known[target_row].quantity : STERICOL_CF_QUANTITY_UNKNOWN;

    if ((is == STERICOL_CF_QUANTITY_LATITUDE && wanted == STERICOL_CF_QUANTITY_LONGITUDE) ||
        (is == STERICOL_CF_QUANTITY_LONGITUDE && wanted == STERICOL_CF_QUANTITY_LATITUDE))
        return false;
    if (strcmp(to, "1e-3") == 0 && strcmp(from, "1") == 0)
        from = "1e-3"; /* a number of the practical scale, see the header */
    if (!convert_texts(units, from, to, &factor, &shift))
        return false;
    *scale = factor;
    *offset = shift;
    return true;
}

/* "days since ...", and "day as %Y%m%d.%f", so that the reading of the time axis can say what it does not
 * read. */
static bool refers_to_calendar(const char *text)
{
    char folded[UNIT_ROOM * 2];

    fold(text, folded, sizeof folded);
    return strstr(folded, " since ") != NULL || strstr(folded, " as %") != NULL;
}

stericol_cf_quantity stericol_cf_units_quantity(const stericol_cf_units *units, const char *unit)
{
    static const struct {
        const char *reference;
        stericol_cf_quantity quantity;
    } kinds[] = {{"kelvin", STERICOL_CF_QUANTITY_TEMPERATURE},
                 {"m", STERICOL_CF_QUANTITY_LENGTH},
                 {"Pa", STERICOL_CF_QUANTITY_PRESSURE},
                 {"1", STERICOL_CF_QUANTITY_SALINITY}};
    char text[UNIT_ROOM];
    double scale, offset;

    if (!clean(unit, text))
        return STERICOL_CF_QUANTITY_UNKNOWN;
    const size_t row = find_known(text);

    if (row != SIZE_MAX)
        return known[row].quantity;
    if (refers_to_calendar(text))
        return STERICOL_CF_QUANTITY_TIME;
    for (size_t i = 0; i < sizeof kinds / sizeof *kinds; i++)
        if (convert_texts(units, text, kinds[i].reference, &scale, &offset))
            return kinds[i].quantity;
    return STERICOL_CF_QUANTITY_UNKNOWN;
}
