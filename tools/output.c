/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers for people. The value is rounded at the place where its expanded uncertainty U = 2u has its second
   significant digit, as is usual in certificates; further digits would promise what the data do not hold. */
#include "output.h"

#include "messages.h"
#include "options.h"

#include <string.h>

enum { MOST_DIGITS = 12, DIGITS_WITHOUT_U = 6 };

static void
set_unit(kel_unit *unit, kel_dimension dimension, const char *name)
{
    /* The names come from this file; a failure would be a mistake in it and shows as an empty unit. */
    if (kel_unit_parse(unit, dimension, name, strlen(name), NULL) < 0)
        *unit = (kel_unit){ .dimension = dimension, .numerator = 1, .denominator = 1 };
}

/* CSV is for machines: SI unless asked otherwise. */
int
units_begin(const job *j, units *out)
{
    set_unit(&out->temperature, KEL_DIM_TEMPERATURE, "K");
    set_unit(&out->coefficient, KEL_DIM_PER_KELVIN, j->csv ? "1/K" : "1e-6/K");
    set_unit(&out->length, KEL_DIM_LENGTH, "m");
    out->temperature_asked = option_given(j, OPT_TEMPERATURE_UNIT);
    out->coefficient_asked = option_given(j, OPT_COEFFICIENT_UNIT);
    out->length_asked = option_given(j, OPT_LENGTH_UNIT);
    int status = option_unit(j, OPT_TEMPERATURE_UNIT, KEL_DIM_TEMPERATURE, &out->temperature);
    if (status == EXIT_FINE)
        status = option_unit(j, OPT_COEFFICIENT_UNIT, KEL_DIM_PER_KELVIN, &out->coefficient);
    if (status == EXIT_FINE)
        status = option_unit(j, OPT_LENGTH_UNIT, KEL_DIM_LENGTH, &out->length);
    if (status == EXIT_FINE && out->temperature_asked && !j->csv)
        units_follow(out, NULL);
    return status;
}

/* Someone who asks in degF thinks in coefficients per degF. */
void
units_follow(units *u, const kel_unit *asked)
{
    if (asked != NULL && !u->temperature_asked)
        u->temperature = *asked;
    if (u->coefficient_asked)
        return;
    bool fahrenheit = strcmp(u->temperature.name, "degF") == 0 || strcmp(u->temperature.name, "degR") == 0;
    set_unit(&u->coefficient, KEL_DIM_PER_KELVIN, fahrenheit ? "1e-6/degF" : "1e-6/K");
}

/* A change is a thousandth of its length or less: in the unit of the length it would be all zeros. Units that are a
   power of ten of the metre are metric, the others go by the inch. */
kel_unit
change_unit(const units *u, double change)
{
    kel_unit unit = u->length;
    if (u->length_asked)
        return unit;
    bool metric = unit.numerator == 1 && unit.denominator == 1;
    if (metric && fabs(change) < 1e-3)
        set_unit(&unit, KEL_DIM_LENGTH, "um");
    else if (metric && fabs(change) < 1)
        set_unit(&unit, KEL_DIM_LENGTH, "mm");
    else if (!metric && fabs(change) < 0.00254)
        set_unit(&unit, KEL_DIM_LENGTH, "mil");
    else if (!metric && fabs(change) < 0.3048)
        set_unit(&unit, KEL_DIM_LENGTH, "in");
    return unit;
}

/* 10^n, exact for the n that matter here. */
static double
ten_to(int n)
{
    double p = 1;
    for (int i = 0; i < (n < 0 ? -n : n); i++)
        p *= 10;
    return n < 0 ? 1 / p : p;
}

/* Place of the first of `digits` significant digits' last one, as decimals; counts the carry of 9.96 to 10. */
static int
decimals_of(double x, int digits)
{
    int e = (int)floor(log10(fabs(x)));
    if (nearbyint(fabs(x) * ten_to(digits - 1 - e)) >= ten_to(digits))
        e++;
    return digits - 1 - e;
}

/* Where U is tiny the value would show digits that no double has: at most 12. */
int
decimals_for(double value, double U)
{
    int d = 0;
    bool known = isfinite(U) && U > 0;
    if (known)
        d = decimals_of(U, 2);
    else if (isfinite(value) && value != 0)
        d = decimals_of(value, DIGITS_WITHOUT_U);
    if (isfinite(value) && value != 0 && d > decimals_of(value, MOST_DIGITS))
        d = decimals_of(value, MOST_DIGITS);
    if (!known && d < 0)
        d = 0;
    return d > 30 ? 30 : d;
}

void
add_rounded(kel_text *out, double x, int decimals)
{
    char digits[KEL_NUMBER_FIXED_SIZE];
    if (isnan(x)) {
        kel_text_add(out, "not known");
        return;
    }
    if (decimals < 0)
        x = nearbyint(x * ten_to(decimals)) * ten_to(-decimals);
    kel_number_format_fixed(digits, x, decimals < 0 ? 0 : decimals);
    /* A zero has no sign here. */
    kel_text_add(out, digits[0] == '-' && strspn(digits + 1, "0.") == strlen(digits + 1) ? digits + 1 : digits);
}

/* Trailing zeros go, but those of a whole number stay. */
void
add_digits(kel_text *out, double x, int digits)
{
    char bytes[KEL_NUMBER_FIXED_SIZE], *e;
    if (isnan(x)) {
        kel_text_add(out, "not known");
        return;
    }
    kel_number_format_digits(bytes, x, digits);
    size_t end = strlen(bytes);
    if (strchr(bytes, '.') != NULL) {
        e = strchr(bytes, 'e');
        size_t n = e != NULL ? (size_t)(e - bytes) : end;
        while (bytes[n - 1] == '0')
            n--;
        n -= bytes[n - 1] == '.';
        memmove(bytes + n, e != NULL ? e : bytes + end, e != NULL ? strlen(e) + 1 : 1);
    }
    kel_text_add(out, bytes);
}

/* At the decimals of its value, or by itself where it would vanish there. */
void
add_uncertainty(kel_text *out, double U, int decimals)
{
    char digits[KEL_NUMBER_FIXED_SIZE];
    if (isfinite(U) && U > 0 && decimals_of(U, 2) > decimals) {
        kel_number_format_digits(digits, U, 2); /* smaller than the value's last digit shown */
        kel_text_add(out, digits);
    } else if (U == 0) {
        kel_text_add(out, "0");
    } else {
        add_rounded(out, U, decimals);
    }
}

/* A tenth of a millikelvin is finer than any thermometer here. */
void
add_temperature_number(kel_text *out, const kel_unit *unit, double kelvin)
{
    char digits[KEL_NUMBER_FIXED_SIZE];
    size_t n = kel_number_format_fixed(digits, kel_unit_from_si(unit, kelvin), 4);
    if (memchr(digits, '.', n) != NULL && memchr(digits, 'e', n) == NULL) {
        while (digits[n - 1] == '0')
            n--;
        if (digits[n - 1] == '.')
            n--;
        digits[n] = '\0';
    }
    kel_text_add(out, strcmp(digits, "-0") == 0 ? "0" : digits);
}

void
add_temperature(kel_text *out, const kel_unit *unit, double kelvin)
{
    add_temperature_number(out, unit, kelvin);
    kel_text_printf(out, " %s", unit->name);
}

void
add_difference(kel_text *out, const kel_unit *unit, double kelvin)
{
    kel_unit degree = *unit;
    degree.offset_e2 = 0;
    add_temperature_number(out, &degree, kelvin);
    kel_text_printf(out, " %s", strcmp(unit->name, "degC") == 0 ? "K" : unit->name);
}

/* "16.2e-6/K" reads better than "16.2 1e-6/K" and is still what the parser of units takes. */
void
add_unit(kel_text *out, const char *name)
{
    if (strncmp(name, "1e", 2) == 0 || strncmp(name, "1/", 2) == 0)
        kel_text_add(out, name + 1);
    else if (strcmp(name, "1") != 0)
        kel_text_printf(out, " %s", name);
}

void
add_measured(kel_text *out, const kel_unit *unit, double value, double u)
{
    double x = kel_unit_from_si(unit, value), U = 2 * kel_unit_from_si(unit, u);
    int d = decimals_for(x, U);
    add_rounded(out, x, d);
    add_unit(out, unit->name);
    kel_text_add(out, "   U = ");
    add_uncertainty(out, U, d);
    if (!isnan(U)) {
        add_unit(out, unit->name);
        kel_text_add(out, " (k = 2)");
    }
}

/* What U does not cover is as important: unknown scatter is said. */
void
add_covers(kel_text *out, const kel_content *c)
{
    static const char *const names[] = { "scatter of the fit", "stated shared error", "lot spread" };
    const char *before = "";
    if (c->mode_count == 0) {
        kel_text_add(out, "nothing: the uncertainty is not known");
        return;
    }
    for (int kind = KEL_MODE_FIT; kind <= KEL_MODE_LOT; kind++) {
        bool found = false;
        for (size_t i = 0; i < c->mode_count; i++)
            found = found || (int)c->modes[i].kind == kind;
        if (found) {
            kel_text_add(out, before);
            kel_text_add(out, kind == KEL_MODE_SHARED && c->variance == KEL_VARIANCE_STATED
                         ? "the coefficients' stated uncertainty"
                                                                                              : names[kind]);
            before = ", ";
        }
    }
    if (!c->scatter_known && c->variance != KEL_VARIANCE_STATED)
        kel_text_add(out, "; the scatter is not known and not in it");
}

/* From 30 degrees of freedom on the factor is below 2.05, and k = 2 serves. */
bool
student_applies(const kel_content *c)
{
    return (c->variance == KEL_VARIANCE_ESTIMATED || c->variance == KEL_VARIANCE_MIXED) && c->scatter_known &&
           c->degrees_of_freedom > 0 && c->degrees_of_freedom < 30;
}

void
add_student(kel_text *out, const kel_content *c)
{
    if (!student_applies(c))
        return;
    kel_text_add(out, "for 95 % take k = ");
    add_rounded(out, student_factor(c->degrees_of_freedom), 2);
    kel_text_add(out, " on the scatter's part (Student, degrees of freedom ");
    add_digits(out, c->degrees_of_freedom, 3);
    kel_text_add(out, ")\n");
}
