/* SPDX-License-Identifier: Apache-2.0 */
/* Units: from the factors that the grammar found to one exact rational factor, a dimension and a name that reads back
   as the same unit. */
#include "core.h"

#include <assert.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

#include "decimal.h"
#include "unit_table.h"

enum { DIMENSIONS = KEL_DIM_LENGTH + 1 };

static const struct { const char *is, *example; } dimensions[DIMENSIONS] = {
    [KEL_DIM_TEMPERATURE] = { "a temperature", "K or degC" },
    [KEL_DIM_DIFFERENCE] = { "a temperature difference", "K or degC" },
    [KEL_DIM_PER_KELVIN] = { "a coefficient", "1e-6/K" },
    [KEL_DIM_ONE] = { "a pure number", "1e-6 or %" },
    [KEL_DIM_LENGTH] = { "a length", "mm" },
};

static int64_t
gcd(int64_t a, int64_t b)
{
    while (b != 0) {
        int64_t r = a % b;
        a = b;
        b = r;
    }
    return a;
}

/* u times p/q 10^e, kept in lowest terms, no 2 or 5 left in the denominator where the power of ten can take it. False
   on overflow. */
static bool
scale(kel_unit *u, int64_t p, int64_t q, int e)
{
    int64_t n, d;
    if (__builtin_mul_overflow(u->numerator, p, &n) || __builtin_mul_overflow(u->denominator, q, &d))
        return false;
    int64_t g = gcd(n, d);
    n /= g;
    d /= g;
    u->exponent += e;
    for (; d % 5 == 0; d /= 5, u->exponent--)
        if (__builtin_mul_overflow(n, 2, &n))
            return false;
    for (; d % 2 == 0; d /= 2, u->exponent--)
        if (__builtin_mul_overflow(n, 5, &n))
            return false;
    for (; n % 10 == 0; n /= 10)
        u->exponent++;
    u->numerator = n;
    u->denominator = d;
    return n <= INT32_MAX && d <= INT32_MAX && u->exponent >= -40 && u->exponent <= 40;
}

/* Names with the given sign, joined by points. */
static size_t
put_names(char *out, size_t size, const kel__product *product, int sign)
{
    size_t used = 0;
    for (size_t i = 0; i < product->count; i++)
        if (product->factor[i].sign == sign && used < size)
            used +=
                (size_t)snprintf(out + used, size - used, "%s%s", used > 0 ? "." : "", product->factor[i].symbol->name);
    return used;
}

/* "1e-6/K", "um/(m.K)", "in/100 ft". False where it does not fit. */
static bool
put_name(char *name, size_t size, const kel__product *product, int above, int below)
{
    char up[80] = "", down[80] = "", number[16] = "", under[48] = "";
    size_t ups = put_names(up, sizeof up, product, 1), downs = put_names(down, sizeof down, product, -1);
    if (downs == 0) { /* 1/1000 is 1e-3 */
        above -= below;
        below = 0;
    }
    if (above != 0)
        snprintf(number, sizeof number, "1e%d%s", above, ups > 0 ? " " : "");
    else if (ups == 0)
        strcpy(number, "1");
    for (int i = 0; i < below; i++)
        under[i + 1] = '0';
    if (below > 0) {
        under[0] = '1';
        under[below + 1] = ' ';
    }
    bool bracket = strchr(down, '.') != NULL;
    int n = snprintf(name, size, "%s%s%s%s%s%s%s", number, up, downs > 0 ? "/" : "", bracket ? "(" : "", under, down,
                     bracket ? ")" : "");
    return ups < sizeof up && downs < sizeof down && n < (int)size;
}

/* The message for a unit that is understood and yet refused: by its dimension, or for its power of ten. */
static kel_status
refuse_dimension(kel_error *err, size_t column, const char *quote, int length, int temperature, int expected)
{
    int is = length == 1 && temperature == 0 ? KEL_DIM_LENGTH : length == 0 && temperature == 1 ? KEL_DIM_TEMPERATURE
           : length == 0 && temperature == -1 ? KEL_DIM_PER_KELVIN : length == 0 && temperature == 0 ? KEL_DIM_ONE : -1;
    if (expected < 0 && is < 0)
        return kel_error_set(err, KEL_E_UNIT, 0, column, "'%s' is no temperature, coefficient, pure number or length",
                             quote);
    if (expected < 0 || is == expected || (is == KEL_DIM_TEMPERATURE && expected == KEL_DIM_DIFFERENCE))
        return kel_error_set(err, KEL_E_UNIT, 0, column, "'%s' is no plain unit of temperature such as K or degC",
                             quote);
    return kel_error_set(err, KEL_E_UNIT, 0, column, "'%s' is %s, expected %s such as %s", quote,
                         is < 0 ? "of another dimension" : dimensions[is].is, dimensions[expected].is,
                         dimensions[expected].example);
}

/* expected: a kel_dimension, or -1 for any. */
static kel_status
parse(kel_unit *out, int expected, const char *bytes, size_t n, kel_error *err)
{
    static const kel_unit one = { KEL_DIM_ONE, 0, 1, 1, 0, "1" };
    kel__product product;
    char quote[KEL__QUOTE_SIZE] = "";
    size_t at, start = 0;
    *out = one;
    while (n > 0 && (bytes[n - 1] == ' ' || bytes[n - 1] == '\t'))
        n--;
    while (start < n && (bytes[start] == ' ' || bytes[start] == '\t'))
        start++;
    if (start == n) {
        int d = expected < 0 ? KEL_DIM_PER_KELVIN : expected;
        return kel_error_set(err, KEL_E_UNIT, 0, start + 1, "a unit is missing, for example %s", dimensions[d].example);
    }
    bool whole = kel__unit_grammar(&product, &at, bytes, n);
    if (err != NULL)
        kel__quote(quote, bytes + start, n - start);
    if (!whole && at >= n)
        return kel_error_set(err, KEL_E_UNIT, 0, n + 1, "'%s' is not a whole unit: something is missing at its end",
                             quote);
    if (!whole) {
        char rest[KEL__QUOTE_SIZE];
        return kel_error_set(err, KEL_E_UNIT, 0, at + 1, "'%s' is not a known unit: '%s' at byte %zu is not understood",
                             quote, err == NULL ? "" : kel__quote(rest, bytes + at, n - at), at + 1);
    }

    int length = 0, temperature = 0;
    bool fits = scale(out, 1, 1, product.above - product.below);
    for (size_t i = 0; i < product.count; i++) {
        const kel__symbol *s = product.factor[i].symbol;
        int sign = product.factor[i].sign;
        length += sign * s->length;
        temperature += sign * s->temperature;
        fits = fits && (sign > 0 ? scale(out, s->numerator, s->denominator, s->exponent)
                                 : scale(out, s->denominator, s->numerator, -s->exponent));
    }
    if (product.above > 0) {
        char name[80] = "";
        put_name(name, sizeof name, &product, -product.above, product.below);
        return kel_error_set(err, KEL_E_UNIT, 0, start + 1,
                             "'%s' can be read in two ways: for printed numbers times 1e-%d write %s", quote,
                             product.above, name);
    }
    if (!fits || !put_name(out->name, sizeof out->name, &product, product.above, product.below))
        return kel_error_set(err, KEL_E_UNIT, 0, start + 1, "'%s' has more factors than a unit can have", quote);

    bool point = length == 0 && temperature == 1 && product.bare_name && out->exponent == 0;
    if (point && (expected < 0 || expected == KEL_DIM_TEMPERATURE || expected == KEL_DIM_DIFFERENCE)) {
        out->dimension = expected < 0 ? KEL_DIM_TEMPERATURE : (kel_dimension)expected;
        if (out->dimension == KEL_DIM_TEMPERATURE)
            out->offset_e2 = product.factor[0].symbol->offset_e2;
        return KEL_OK;
    }
    if (length == 0 && temperature == -1 && (expected < 0 || expected == KEL_DIM_PER_KELVIN))
        out->dimension = KEL_DIM_PER_KELVIN;
    else if (length == 0 && temperature == 0 && (expected < 0 || expected == KEL_DIM_ONE))
        out->dimension = KEL_DIM_ONE;
    else if (length == 1 && temperature == 0 && (expected < 0 || expected == KEL_DIM_LENGTH))
        out->dimension = KEL_DIM_LENGTH;
    else
        return refuse_dimension(err, start + 1, quote, length, temperature, expected);
    return KEL_OK;
}

kel_status
kel_unit_parse(kel_unit *out, kel_dimension dimension, const char *bytes, size_t n, kel_error *err)
{
    if ((int)dimension < 0 || (int)dimension >= DIMENSIONS)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no dimension has the number %d", (int)dimension);
    return parse(out, (int)dimension, bytes, n, err);
}

kel_status
kel_unit_parse_any(kel_unit *out, const char *bytes, size_t n, kel_error *err)
{
    return parse(out, -1, bytes, n, err);
}

double
kel_unit_to_si(const kel_unit *unit, double value)
{
    kel__factor f = { unit->offset_e2, unit->numerator, unit->denominator, unit->exponent };
    return kel__factor_apply(&f, value);
}

double
kel_unit_from_si(const kel_unit *unit, double si)
{
    kel__factor f = { unit->offset_e2, unit->numerator, unit->denominator, unit->exponent };
    return kel__factor_invert(&f, si);
}
