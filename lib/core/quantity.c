/* SPDX-License-Identifier: Apache-2.0 */
/* Numbers with units: the decimal text and the unit's factor make one double in one rounding. */
#include "core.h"

#include <math.h>
#include <string.h>

#include "decimal.h"

/* Names the value and the limit, which is -offset. */
static kel_status
refuse_cold(const kel_unit *unit, const char *bytes, size_t n, kel_error *err)
{
    char quote[KEL__QUOTE_SIZE], limit[KEL_NUMBER_SIZE];
    if (err == NULL)
        return KEL_E_RANGE;
    kel_number_format(limit, unit->offset_e2 == 0 ? 0.0 : -(double)unit->offset_e2 / 100.0);
    return kel_error_set(err, KEL_E_RANGE, 0, 1, "%s %s is below absolute zero, %s %s", kel__quote(quote, bytes, n),
                         unit->name, limit, unit->name);
}

kel_status
kel_unit_read(double *out, double *resolution, const kel_unit *unit, const char *bytes, size_t n, kel_error *err)
{
    kel__decimal d;
    kel__factor f = { unit->offset_e2, unit->numerator, unit->denominator, unit->exponent };
    size_t used = n == 0 ? 0 : kel__decimal_scan(&d, bytes, n);
    if (used != n || n == 0)
        return kel_number_read(out, bytes, n, err); /* which knows what to say */
    kel_status status = kel__decimal_round(out, &d, &f);
    if (status == KEL_OK && unit->dimension == KEL_DIM_TEMPERATURE && *out < 0.0) {
        *out = (double)NAN;
        return refuse_cold(unit, bytes, n, err);
    }
    if (status == KEL_OK && resolution != NULL) {
        kel__decimal last = { false, 1, 1, "1", d.exponent };
        f.offset_e2 = 0;
        status = kel__decimal_round(resolution, &last, &f);
    }
    if (status != KEL_OK) {
        char quote[KEL__QUOTE_SIZE];
        *out = (double)NAN;
        return kel_error_set(err, status, 0, 1, "%s %s is beyond the range of a double, 1.8e308",
                             err == NULL ? "" : kel__quote(quote, bytes, n), unit->name);
    }
    *out += 0.0; /* -0 becomes 0 */
    return KEL_OK;
}

static bool
is_blank(char c)
{
    return c == ' ' || c == '\t';
}

kel_status
kel_quantity_parse(double *out, kel_unit *unit, kel_dimension dimension, const char *text, kel_error *err)
{
    static const char *const examples[][2] = {
        [KEL_DIM_TEMPERATURE] = { "K", "degC" },
        [KEL_DIM_DIFFERENCE] = { "K", "degC" },
        [KEL_DIM_PER_KELVIN] = { "1e-6/K", "um/(m.K)" },
        [KEL_DIM_ONE] = { "ppm", "%" },
        [KEL_DIM_LENGTH] = { "mm", "in" },
    };
    char quote[KEL__QUOTE_SIZE];
    kel_unit u;
    kel__decimal d;
    *out = (double)NAN;
    size_t n = text == NULL ? 0 : strlen(text), start = 0;
    if (text == NULL || (int)dimension < 0 || (int)dimension > KEL_DIM_LENGTH)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "a quantity needs a text and a dimension");
    while (start < n && is_blank(text[start]))
        start++;
    while (n > start && is_blank(text[n - 1]))
        n--;
    size_t used = start == n ? 0 : kel__decimal_scan(&d, text + start, n - start);
    if (start == n)
        return kel_error_set(err, KEL_E_SYNTAX, 0, start + 1, "a number with its unit is missing, for example 20 %s",
                             examples[dimension][0]);
    if (used == 0)
        return kel_error_set(err, KEL_E_SYNTAX, 0, start + 1, "'%s' does not start with a number, as in 20 %s",
                             err == NULL ? "" : kel__quote(quote, text + start, n - start), examples[dimension][0]);
    size_t end = start + used, at = end;
    while (at < n && is_blank(text[at]))
        at++;
    if (at == n) {
        if (err != NULL)
            kel__quote(quote, text + start, used);
        return kel_error_set(err, KEL_E_UNIT, 0, end + 1, "%1$s needs a unit, for example %1$s %2$s or %1$s %3$s",
                             err == NULL ? "" : quote, examples[dimension][0], examples[dimension][1]);
    }
    kel_status status = kel_unit_parse(&u, dimension, text + at, n - at, err);
    if (status != KEL_OK) {
        if (err != NULL && err->column > 0)
            err->column += at;
        return status;
    }
    status = kel_unit_read(out, NULL, &u, text + start, used, err);
    if (status != KEL_OK) {
        if (err != NULL && err->column > 0)
            err->column += start;
        return status;
    }
    if (unit != NULL)
        *unit = u;
    return KEL_OK;
}
