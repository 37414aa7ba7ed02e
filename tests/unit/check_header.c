/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Heads of columns: every word that is taken, what is refused and where, and the heads that --column gives. */
#include "unit.h"

#include <math.h>
#include <string.h>

#include "../../lib/fit/header.h"

enum { LINE = 4, COLUMN = 20 };

static const struct {
    const char *head;
    kel__quantity quantity;
    const char *label, *unit;  /* "" for none; the unit as printed */
    double divisor;
} heads[] = {
    { "", KEL__NOTHING, "", "", 1 },
    { "  ", KEL__NOTHING, "", "", 1 },
    { "temperature [K]", KEL__TEMPERATURE, "", "K", 1 },
    { "Reservations", KEL__RESERVATIONS, "", "", 1 },
    { "Temperature[degF]", KEL__TEMPERATURE, "", "degF", 1 },
    { "T [K]", KEL__TEMPERATURE, "", "K", 1 },
    { "t (\xC2\xB0" "C)", KEL__TEMPERATURE, "", "\xC2\xB0" "C", 1 },
    { "Temp. (\xC2\xB0" "F)", KEL__TEMPERATURE, "", "\xC2\xB0" "F", 1 },
    { "temp [K]", KEL__TEMPERATURE, "", "K", 1 },
    { "from [degC]", KEL__FROM, "", "degC", 1 },
    { "TO [degC]", KEL__TO, "", "degC", 1 },
    { "interval [degC]", KEL__INTERVAL, "", "degC", 1 },
    { "temperature  interval [degC]", KEL__INTERVAL, "", "degC", 1 },
    { "coefficient [1e-6/K]", KEL__COEFFICIENT, "", "1e-6/K", 1 },
    { "alpha [ppm/K]", KEL__COEFFICIENT, "", "ppm/K", 1 },
    { "\xCE\xB1 [1e-6/K]", KEL__COEFFICIENT, "", "1e-6/K", 1 },
    { "instantaneous coefficient [1e-6/K]", KEL__COEFFICIENT, "", "1e-6/K", 1 },
    { "Instantaneous CTE [1e-6/degF]", KEL__COEFFICIENT, "", "1e-6/degF", 1 },
    { "tangent coefficient of thermal expansion [1/K]", KEL__COEFFICIENT, "", "1/K", 1 },
    { "differential alpha [1/K]", KEL__COEFFICIENT, "", "1/K", 1 },
    { "mean coefficient (um/(m.K))", KEL__MEAN, "", "um/(m.K)", 1 },
    { "mean alpha [ppm/K]", KEL__MEAN, "", "ppm/K", 1 },
    { "average coefficient [ppm/K]", KEL__MEAN, "", "ppm/K", 1 },
    { "secant coefficient [ppm/K]", KEL__MEAN, "", "ppm/K", 1 },
    { "mean CTE [ppm/K]", KEL__MEAN, "", "ppm/K", 1 },
    { "Mean Coefficient of Linear Thermal Expansion (\xC2\xB5in/(in\xC2\xB7\xC2\xB0" "F))", KEL__MEAN, "",
      "\xC2\xB5in/(in\xC2\xB7\xC2\xB0" "F)", 1 },
    { "expansion [%]", KEL__EXPANSION, "", "%", 1 },
    { "dL/L0 [1e-5]", KEL__EXPANSION, "", "1e-5", 1 },
    { "\xCE\x94L/L0 (%)", KEL__EXPANSION, "", "%", 1 },
    { "\xE2\x88\x86L/L [%]", KEL__EXPANSION, "", "%", 1 },
    { "(L-L0)/L0 [%]", KEL__EXPANSION, "", "%", 1 },
    { "thermal strain [microstrain]", KEL__EXPANSION, "", "microstrain", 1 },
    { "linear expansion [mm/m]", KEL__EXPANSION, "", "mm/m", 1 },
    { "expansion [in/100 ft]", KEL__EXPANSION, "", "in/100 ft", 1 },
    { "contraction [1e-5]", KEL__CONTRACTION, "", "1e-5", 1 },
    { "linear thermal contraction [%]", KEL__CONTRACTION, "", "%", 1 },
    { "coefficient: NT-40 annealed [1e-6/K]", KEL__COEFFICIENT, "NT-40 annealed", "1e-6/K", 1 },
    { "coefficient : a: (b) [c] [1e-6/K]", KEL__COEFFICIENT, "a: (b) [c]", "1e-6/K", 1 },
    { "coefficient: [1e-6/K]", KEL__COEFFICIENT, "", "1e-6/K", 1 },
    { "uncertainty [1e-6/K]", KEL__UNCERTAINTY, "", "1e-6/K", 1 },
    { "standard uncertainty [1e-5]", KEL__UNCERTAINTY, "", "1e-5", 1 },
    { "u [%]", KEL__UNCERTAINTY, "", "%", 1 },
    { "uncertainty k=2 [1e-6/K]", KEL__UNCERTAINTY, "", "1e-6/K", 2 },
    { "uncertainty (k = 2.5) [1e-6/K]", KEL__UNCERTAINTY, "", "1e-6/K", 2.5 },
    { "expanded uncertainty k=2: lot 3 [1e-6/K]", KEL__UNCERTAINTY, "lot 3", "1e-6/K", 2 },
    { "U k=3 [%]", KEL__UNCERTAINTY, "", "%", 3 },
    { "limits [1e-6/K]", KEL__UNCERTAINTY, "", "1e-6/K", 1.7320508075688772 },
    { "uncertainty limits [1e-6/K]", KEL__UNCERTAINTY, "", "1e-6/K", 1.7320508075688772 },
    { "Source", KEL__SOURCE, "", "", 1 },
    { " status ", KEL__STATUS, "", "", 1 },
};

static void
assert_word(const char *label, kel__word got, const char *want)
{
    ck_assert_msg(got.n == strlen(want) && (got.n == 0 || memcmp(got.p, want, got.n) == 0),
                  "%s: got '%.*s', expected '%s'", label,
                  (int)got.n, got.n == 0 ? "" : got.p, want);
}

START_TEST(understood)
{
    const char *head = heads[_i].head;
    kel__heading h;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel__heading_parse(&h, head, strlen(head), LINE, COLUMN, &err) == KEL_OK, "%s: %s", head,
                  err.message);
    ck_assert_msg(h.quantity == heads[_i].quantity, "%s: quantity %d", head, (int)h.quantity);
    assert_word(head, h.label, heads[_i].label);
    assert_word(head, h.unit_text, heads[_i].unit);
    ck_assert_ulp_for(head, h.divisor, heads[_i].divisor, 0);
    ck_assert_msg(h.limits == (strstr(head, "limits") != NULL), "%s", head);
}
END_TEST

static const struct {
    const char *head;
    kel_status code;
    size_t at;                 /* byte of the head, from 0 */
    const char *message;
} refused[] = {
    { "CTE [1e-6/K]", KEL_E_SYNTAX, 0,
      "`coefficient` for the instantaneous one (the slope at T) or `mean coefficient`" },
    { " cte [1e-6/K]", KEL_E_SYNTAX, 1, "'cte' can mean two things" },
    { "thermal expansion coefficient [1e-6/K]", KEL_E_SYNTAX, 0, "can mean two things" },
    { "coefficient", KEL_E_UNIT, 0, "has no unit: write for example coefficient [1e-6/K]" },
    { "mean CTE", KEL_E_UNIT, 0, "mean coefficient [1e-6/K]" },
    { "temperature", KEL_E_UNIT, 0, "temperature [K] or temperature [degC]" },
    { "expansion []", KEL_E_UNIT, 0, "expansion [%] or expansion [1e-5]" },
    { "uncertainty", KEL_E_UNIT, 0, "uncertainty [1e-6/K]" },
    { "temperature [%]", KEL_E_UNIT, 13, "expected a temperature" },
    { "coefficient [ parsec ]", KEL_E_UNIT, 14, "parsec" },
    { "coefficient [1e-6/Q]", KEL_E_UNIT, 18, "1e-6/Q" },
    { "coefficient 1e-6/K]", KEL_E_SYNTAX, 0, "is no quantity" },
    { "meancoefficient [1/K]", KEL_E_SYNTAX, 0, "is no quantity" },
    { "mean [1/K]", KEL_E_SYNTAX, 0, "is no quantity" },
    { "mean expansion [%]", KEL_E_SYNTAX, 0, "is no quantity" },
    { "density [1]", KEL_E_SYNTAX, 0, "'density' is no quantity of a table" },
    { "den\x01sity", KEL_E_SYNTAX, 0, "den\\x01sity" },
    { "expanded uncertainty [%]", KEL_E_SYNTAX, 0, "by which factor" },
    { "uncertainty k=two [%]", KEL_E_SYNTAX, 0, "must be a number above zero" },
    { "uncertainty k=0 [%]", KEL_E_SYNTAX, 0, "must be a number above zero" },
    { "uncertainty k=-2 [%]", KEL_E_SYNTAX, 0, "must be a number above zero" },
    { "uncertainty k=2,5 [%]", KEL_E_SYNTAX, 0, "must be a number above zero" },
    { "uncertainty k=nan [%]", KEL_E_SYNTAX, 0, "must be a number above zero" },
    { "standard uncertainty k=2 [%]", KEL_E_SYNTAX, 0, "is no quantity" },
    { "coefficient k=2 [%]", KEL_E_SYNTAX, 0, "is no quantity" },
    { "source [K]", KEL_E_UNIT, 0, "a column of words has no unit, found 'K'" },
    { "status: a", KEL_E_SYNTAX, 0, "carry the label of a series, found 'a'" },
    { "temperature: a [K]", KEL_E_SYNTAX, 0, "carry the label of a series" },
};

START_TEST(refusals)
{
    const char *head = refused[_i].head;
    kel__heading h;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel__heading_parse(&h, head, strlen(head), LINE, COLUMN, &err) == refused[_i].code, "%s: %s", head,
                  err.message);
    ck_assert_msg(err.line == LINE && err.column == COLUMN + refused[_i].at, "%s: at %zu:%zu, %s", head, err.line,
                  err.column, err.message);
    ck_assert_msg(strstr(err.message, refused[_i].message) != NULL, "%s: %s", head, err.message);
    ck_assert_int_eq(kel__heading_parse(&h, head, strlen(head), LINE, COLUMN, NULL), refused[_i].code);
}
END_TEST

static const struct { const char *text; kel__quantity quantity; const char *name; } options[] = {
    { "temperature [K]=T", KEL__TEMPERATURE, "T" },
    { "temperature [K] = Temp (K) ", KEL__TEMPERATURE, "Temp (K)" },
    { "coefficient [1e-6/K]=2", KEL__COEFFICIENT, "2" },
    { "mean coefficient (1e-6/K)=a=b", KEL__MEAN, "a=b" },
    { "uncertainty k=2 [%]=U (k=2)", KEL__UNCERTAINTY, "U (k=2)" },
    { "source=Ref.", KEL__SOURCE, "Ref." },
};

START_TEST(named)
{
    kel__heading h;
    kel__word name;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel__heading_option(&h, &name, options[_i].text, &err) == KEL_OK, "%s: %s", options[_i].text,
                  err.message);
    ck_assert_int_eq(h.quantity, options[_i].quantity);
    assert_word(options[_i].text, name, options[_i].name);
}
END_TEST

static const struct { const char *text; kel_status code; const char *message; } wrong[] = {
    { "temperature [K]", KEL_E_ARGUMENT, "write 'QUANTITY [UNIT]=NAME-OR-NUMBER'" },
    { "temperature [K]=", KEL_E_ARGUMENT, "write 'QUANTITY [UNIT]=NAME-OR-NUMBER'" },
    { "=2", KEL_E_ARGUMENT, "names no quantity" },
    { "", KEL_E_ARGUMENT, "write 'QUANTITY" },
    { "temperature=2", KEL_E_UNIT, "has no unit" },
    { "CTE [1/K]=2", KEL_E_SYNTAX, "two things" },
    { "speed [m/s]=2", KEL_E_SYNTAX, "no quantity" },
};

START_TEST(wrongly_named)
{
    kel__heading h;
    kel__word name;
    kel_error err = { KEL_OK, 9, 9, "" };
    ck_assert_msg(kel__heading_option(&h, &name, wrong[_i].text, &err) == wrong[_i].code, "%s: %s", wrong[_i].text,
                  err.message);
    ck_assert_msg(strstr(err.message, wrong[_i].message) != NULL, "%s: %s", wrong[_i].text, err.message);
    ck_assert_uint_eq(err.line, 0);
    ck_assert_uint_eq(err.column, 0);
}
END_TEST

/* What kelspan writes for a quantity is read back as that quantity. */
START_TEST(names)
{
    static const char *const units[] = { [KEL__TEMPERATURE] = "K", [KEL__FROM] = "K", [KEL__TO] = "K",
                                         [KEL__INTERVAL] = "K",
        [KEL__COEFFICIENT] = "1/K", [KEL__MEAN] = "1/K", [KEL__EXPANSION] = "1", [KEL__CONTRACTION] = "1",
            [KEL__UNCERTAINTY] = "1",
        [KEL__SOURCE] = NULL, [KEL__STATUS] = NULL };
    kel__quantity q = (kel__quantity)_i;
    char head[80];
    kel__heading h;
    snprintf(head, sizeof head, units[q] == NULL ? "%s" : "%s [%s]", kel__quantity_name(q), units[q]);
    ck_assert_int_eq(kel__heading_parse(&h, head, strlen(head), LINE, COLUMN, NULL), KEL_OK);
    ck_assert_int_eq(h.quantity, q);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, understood, 0, KEL_LENGTH(heads));
    tcase_add_loop_test(c, refusals, 0, KEL_LENGTH(refused));
    tcase_add_loop_test(c, named, 0, KEL_LENGTH(options));
    tcase_add_loop_test(c, wrongly_named, 0, KEL_LENGTH(wrong));
    tcase_add_loop_test(c, names, KEL__TEMPERATURE, KEL__STATUS + 1);
    return c;
}

KEL_TEST_MAIN("header", loops)
