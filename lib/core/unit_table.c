/* SPDX-License-Identifier: Apache-2.0 */
/* Names of units and all their spellings, with exact factors. The inch is 0.0254 m and the foot 12 inches by definition
   (1959), the degree Fahrenheit 5/9 K with 0 K at -459.67 degF (exact: 32 degF is 273.15 K), the degree Celsius offset
   by 273.15 K. */
#include "unit_table.h"

#include <string.h>

enum {
    K, MK, DEGC, DEGF, DEGR,
    KM, M, CM, MM, UM, NM, IN, FT, MIL, UIN,
    ONE, PERCENT, PERMILLE, PPM, PPB, MICROSTRAIN
};

static const kel__symbol symbols[] = {
    [K] = { "K", 0, 1, 1, 1, 0, 0 },
    [MK] = { "MK", 0, 1, 1, 1, 6, 0 },
    [DEGC] = { "degC", 0, 1, 1, 1, 0, 27315 },
    [DEGF] = { "degF", 0, 1, 5, 9, 0, 45967 },
    [DEGR] = { "degR", 0, 1, 5, 9, 0, 0 },
    [KM] = { "km", 1, 0, 1, 1, 3, 0 },
    [M] = { "m", 1, 0, 1, 1, 0, 0 },
    [CM] = { "cm", 1, 0, 1, 1, -2, 0 },
    [MM] = { "mm", 1, 0, 1, 1, -3, 0 },
    [UM] = { "um", 1, 0, 1, 1, -6, 0 },
    [NM] = { "nm", 1, 0, 1, 1, -9, 0 },
    [IN] = { "in", 1, 0, 254, 1, -4, 0 },
    [FT] = { "ft", 1, 0, 3048, 1, -4, 0 },
    [MIL] = { "mil", 1, 0, 254, 1, -7, 0 },
    [UIN] = { "uin", 1, 0, 254, 1, -10, 0 },
    [ONE] = { "strain", 0, 0, 1, 1, 0, 0 },
    [PERCENT] = { "%", 0, 0, 1, 1, -2, 0 },
    [PERMILLE] = { "permille", 0, 0, 1, 1, -3, 0 },
    [PPM] = { "ppm", 0, 0, 1, 1, -6, 0 },
    [PPB] = { "ppb", 0, 0, 1, 1, -9, 0 },
    [MICROSTRAIN] = { "microstrain", 0, 0, 1, 1, -6, 0 },
};

#define MICRO "\xC2\xB5"    /* U+00B5 micro sign */
#define MU "\xCE\xBC"       /* U+03BC Greek small mu */
#define EPSILON "\xCE\xB5"  /* U+03B5 */

/* Spellings. Where no other unit differs from it by case alone, a name may be written in any case; "mK" is not "MK", so
   short ones may not. */
static const struct spelling { const char *text; int symbol; bool any_case; } spellings[] = {
    { "K", K, false }, { "\xE2\x84\xAA", K, false }, { "kelvin", K, true }, { "kelvins", K, true }, { "MK", MK, false },
    { "C", DEGC, false }, { "\xE2\x84\x83", DEGC, false }, { "Celsius", DEGC, true }, { "centigrade", DEGC, true },
    { "F", DEGF, false }, { "\xE2\x84\x89", DEGF, false }, { "Fahrenheit", DEGF, true },
    { "R", DEGR, false }, { "Rankine", DEGR, true },
    { "km", KM, false },
    { "m", M, false }, { "metre", M, true }, { "metres", M, true }, { "meter", M, true }, { "meters", M, true },
    { "cm", CM, false },
    { "mm", MM, false }, { "millimetre", MM, true }, { "millimetres", MM, true }, { "millimeter", MM, true },
    { "millimeters", MM, true },
    { "um", UM, false }, { MICRO "m", UM, false }, { MU "m", UM, false }, { "micron", UM, true },
    { "microns", UM, true },
    { "micrometre", UM, true }, { "micrometres", UM, true }, { "micrometer", UM, true }, { "micrometers", UM, true },
    { "nm", NM, false },
    { "in", IN, true }, { "inch", IN, true }, { "inches", IN, true },
    { "ft", FT, true }, { "foot", FT, true }, { "feet", FT, true },
    { "mil", MIL, true }, { "mils", MIL, true },
    { "uin", UIN, true }, { MICRO "in", UIN, true }, { MU "in", UIN, true }, { "microinch", UIN, true },
    { "microinches", UIN, true },
    { "strain", ONE, true },
    { "%", PERCENT, false }, { "percent", PERCENT, true },
    { "\xE2\x80\xB0", PERMILLE, false }, { "permille", PERMILLE, true },
    { "ppm", PPM, true }, { "ppb", PPB, true },
    { "microstrain", MICROSTRAIN, true }, { "ustrain", MICROSTRAIN, true }, { MICRO "strain", MICROSTRAIN, true },
    { MU "strain", MICROSTRAIN, true }, { MICRO EPSILON, MICROSTRAIN, false }, { MU EPSILON, MICROSTRAIN, false },
};

/* What follows a degree sign or word. */
static const struct spelling degrees[] = {
    { "C", DEGC, true }, { "F", DEGF, true }, { "R", DEGR, true }, { "K", K, true },
    { "Celsius", DEGC, true }, { "centigrade", DEGC, true }, { "Fahrenheit", DEGF, true }, { "Rankine", DEGR, true },
    { "Kelvin", K, true },
};

/* U+00B0, and two signs that are typed in its place: U+00BA (ordinal), U+02DA (ring above). */
static const char *const degree_signs[] = { "\xC2\xB0", "\xC2\xBA", "\xCB\x9A" };
static const char *const degree_words[] = { "degrees", "degree", "degs", "deg.", "deg" };

#define LENGTH(array) (sizeof(array) / sizeof(array)[0])

static bool
is_letter(char c)
{
    return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z');
}

static char
lower(char c)
{
    return c >= 'A' && c <= 'Z' ? (char)(c - 'A' + 'a') : c;
}

/* Length of text if the n bytes start with it, else 0. */
static size_t
starts_with(const char *bytes, size_t n, const char *text, bool any_case)
{
    size_t i = 0;
    for (; text[i] != '\0'; i++)
        if (i == n || (bytes[i] != text[i] && !(any_case && lower(bytes[i]) == lower(text[i]))))
            return 0;
    return i;
}

/* May a name end here? Not in the middle of a word; a Greek or micro letter would go on with one too. */
static bool
ends_word(const char *bytes, size_t n, size_t at)
{
    if (at == n || !is_letter(bytes[at - 1]))
        return true;
    return !is_letter(bytes[at]) && bytes[at] != '_' && !starts_with(bytes + at, n - at, MICRO, false) &&
           (unsigned char)bytes[at] != 0xCE && (unsigned char)bytes[at] != 0xCF;
}

static const kel__symbol *
longest(size_t *used, const struct spelling *list, size_t count, const char *bytes, size_t n)
{
    const kel__symbol *found = NULL;
    *used = 0;
    for (size_t i = 0; i < count; i++) {
        size_t length = starts_with(bytes, n, list[i].text, list[i].any_case);
        if (length > *used && ends_word(bytes, n, length)) {
            *used = length;
            found = &symbols[list[i].symbol];
        }
    }
    return found;
}

static size_t
degree_sign(const char *bytes, size_t n)
{
    for (size_t i = 0; i < LENGTH(degree_signs); i++) {
        size_t length = starts_with(bytes, n, degree_signs[i], false);
        if (length > 0)
            return length;
    }
    return 0;
}

bool
kel__degree_sign(const char *bytes, size_t n)
{
    return degree_sign(bytes, n) > 0 || starts_with(bytes, n, "\xE2\x84\x83", false) > 0 ||
           starts_with(bytes, n, "\xE2\x84\x89", false) > 0;
}

const kel__symbol *
kel__symbol_match(size_t *used, const char *bytes, size_t n)
{
    size_t prefix = degree_sign(bytes, n);
    for (size_t i = 0; i < LENGTH(degree_words) && prefix == 0; i++)
        prefix = starts_with(bytes, n, degree_words[i], true);
    if (prefix == 0)
        return longest(used, spellings, LENGTH(spellings), bytes, n);
    while (prefix < n && bytes[prefix] == ' ')
        prefix++;
    const kel__symbol *found = longest(used, degrees, LENGTH(degrees), bytes + prefix, n - prefix);
    *used = found == NULL ? 0 : *used + prefix;
    return found;
}
