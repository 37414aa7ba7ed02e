/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The grammar of stated uncertainties and of transitions: what each says, and where a wrong one goes wrong. */
#include "unit.h"

#include <math.h>
#include <string.h>

#include "../../lib/fit/clause.h"

enum { LINE = 7, COLUMN = 16 };

static const struct {
    const char *text;
    double relative, absolute;
    kel_dimension dimension;
    bool independent;
    double lo, hi;
} clauses[] = {
    { "2 %", 0.02, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "2%", 0.02, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "0.1 [1e-6/K]", 0, 1e-7, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "0.1[ppm/K]", 0, 1e-7, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "0.1 (um/(m.K))", 0, 1e-7, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "0.5 [uin/in/degF]", 0, 0.9e-6, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "2 [1e-5]", 0, 2e-5, KEL_DIM_ONE, false, -INFINITY, INFINITY },
    { "0.01 [%]", 0, 1e-4, KEL_DIM_ONE, false, -INFINITY, INFINITY },
    { "2 % + 0.1 [1e-6/K]", 0.02, 1e-7, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "2%+0.1[1e-6/K]", 0.02, 1e-7, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "3 % k=2", 0.015, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "3 % k = 3", 0.01, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "3 % K=1.5", 0.02, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "3 % limits", 0.03 / 1.7320508075688772, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "2 % from 4 K to 77 K", 0.02, 0, KEL_DIM_PER_KELVIN, false, 4, 77 },
    { "2 % from 4K to 77K", 0.02, 0, KEL_DIM_PER_KELVIN, false, 4, 77 },
    { "2 % from -40 degF to 20\xC2\xB0" "C", 0.02, 0, KEL_DIM_PER_KELVIN, false, 233.15, 293.15 },
    { "2 % from \xE2\x88\x92" "40 degC to 20 deg C", 0.02, 0, KEL_DIM_PER_KELVIN, false, 233.15, 293.15 },
    { "2 % independent", 0.02, 0, KEL_DIM_PER_KELVIN, true, -INFINITY, INFINITY },
    { "2 % Shared", 0.02, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
    { "4 % + 0.2 [1e-6/K] independent from 0 K to 10 K k=2", 0.02, 1e-7, KEL_DIM_PER_KELVIN, true, 0, 10 },
    { "4 %  k=2  from 4 K to 10 K\tindependent", 0.02, 0, KEL_DIM_PER_KELVIN, true, 4, 10 },
    { "1e-1 %", 0.001, 0, KEL_DIM_PER_KELVIN, false, -INFINITY, INFINITY },
};

static kel_status
parse(kel__clause *out, const char *text, bool lot, bool comma, kel_error *err)
{
    kel__entry entry = { "uncertainty", text, LINE, COLUMN };
    return kel__clause_parse(out, &entry, lot, comma, err);
}

START_TEST(understood)
{
    const char *text = clauses[_i].text;
    kel__clause c;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(parse(&c, text, false, false, &err) == KEL_OK, "%s: %s", text, err.message);
    /* One rounding of the decimal text, one of the division by k or sqrt 3. */
    ck_assert_ulp_for(text, c.relative, clauses[_i].relative, 1);
    ck_assert_ulp_for(text, c.absolute, clauses[_i].absolute, 1);
    ck_assert_int_eq(c.dimension, clauses[_i].dimension);
    ck_assert_int_eq(c.independent, clauses[_i].independent);
    ck_assert_ulp_for(text, c.lo, clauses[_i].lo, 0);
    ck_assert_ulp_for(text, c.hi, clauses[_i].hi, 0);
    ck_assert_ptr_eq(c.text, text);
    ck_assert_uint_eq(c.line, LINE);
}
END_TEST

/* column counts within the text, from 1. */
static const struct { const char *text; size_t column; kel_status status; const char *message; } refused[] = {
    { "", 1, KEL_E_SYNTAX, "expected an uncertainty: A %, B [UNIT] or A % + B [UNIT], but the text ends" },
    { "about 2 %", 1, KEL_E_SYNTAX, "found 'about'" },
    { "2", 2, KEL_E_SYNTAX, "expected % or a unit in brackets" },
    { "2 percent", 3, KEL_E_SYNTAX, "found 'percent'" },
    { "2 ppm/K", 3, KEL_E_SYNTAX, "found 'ppm/K'" },
    { "nan %", 1, KEL_E_SYNTAX, "found 'nan'" },
    { "0x2 %", 1, KEL_E_RANGE, "must be above zero" },
    { "1x2 %", 2, KEL_E_SYNTAX, "found 'x2'" },
    { "1e400 %", 1, KEL_E_RANGE, "" },
    { "0 %", 1, KEL_E_RANGE, "must be above zero" },
    { "-2 %", 1, KEL_E_RANGE, "must be above zero" },
    { "2 % + 0 [1e-6/K]", 7, KEL_E_RANGE, "must be above zero" },
    { "2,5 %", 2, KEL_E_SYNTAX, "a decimal comma must be declared" },
    { "2 % +", 6, KEL_E_SYNTAX, "expected a number with its unit in brackets, but the text ends" },
    { "2 % + 1 %", 9, KEL_E_SYNTAX, "found '%'" },
    { "0.1 [1e-6/K] + 2 %", 14, KEL_E_SYNTAX, "expected k=2, limits, from T to T, shared or independent, found '+'" },
    { "0.1 [1e-6/K", 5, KEL_E_SYNTAX, "the bracket round the unit is not closed" },
    { "0.1 [furlong]", 6, KEL_E_UNIT, "" },
    { "0.1 []", 6, KEL_E_UNIT, "" },
    { "0.1 [K]", 6, KEL_E_UNIT, "an uncertainty is in a unit of coefficients" },
    { "0.1 [mm]", 6, KEL_E_UNIT, "an uncertainty is in a unit of coefficients" },
    { "2 % k", 6, KEL_E_SYNTAX, "expected '=' as in k=2" },
    { "2 % k=", 7, KEL_E_SYNTAX, "expected the coverage factor" },
    { "2 % k=0", 7, KEL_E_RANGE, "must be above zero" },
    { "2 % k=2 k=2", 9, KEL_E_SYNTAX, "a second word of the same sort" },
    { "2 % limits k=2", 12, KEL_E_SYNTAX, "a second word of the same sort" },
    { "2 % shared independent", 12, KEL_E_SYNTAX, "a second word of the same sort" },
    { "2 % from 4 K to 9 K from 10 K to 11 K", 21, KEL_E_SYNTAX, "a second word of the same sort" },
    { "2 % from 20 degC", 17, KEL_E_SYNTAX, "expected 'to' and the upper temperature, but the text ends" },
    { "2 % from 20 degC up 30 degC", 18, KEL_E_SYNTAX, "expected 'to'" },
    { "2 % from 20 to 30 degC", 13, KEL_E_UNIT, "" },
    { "2 % from 20 degC to 30", 21, KEL_E_UNIT, "the temperature 30 needs a unit" },
    { "2 % from RT to 30 degC", 10, KEL_E_SYNTAX, "room temperature is no number" },
    { "2 % from -300 degC to 30 degC", 10, KEL_E_RANGE, "" },
    { "2 % from 30 degC to 20 degC", 10, KEL_E_DATA, "from the lower to the higher" },
    { "2 % from 20 degC to 68 degF", 10, KEL_E_DATA, "from the lower to the higher" },
    { "2 % below 20 K", 5, KEL_E_SYNTAX, "found 'below'" },
};

START_TEST(refuses)
{
    kel__clause c;
    kel_error err = { KEL_OK, 0, 0, "" };
    const char *text = refused[_i].text;
    kel_status status = parse(&c, text, false, false, &err);
    ck_assert_msg(status == refused[_i].status && err.line == LINE && err.column == COLUMN + refused[_i].column - 1 &&
                  strstr(err.message, refused[_i].message) != NULL && err.message[0] != '\0',
                  "'%s': got %d at %zu:%zu (%s)", text, status, err.line, err.column - COLUMN + 1, err.message);
}
END_TEST

START_TEST(lot_is_of_no_sort)
{
    kel__clause c;
    kel_error err;
    ck_assert_int_eq(parse(&c, "1 % k=2", true, false, &err), KEL_OK);
    ck_assert_ulp(c.relative, 0.005, 1);
    ck_assert_int_eq(parse(&c, "1 % shared", true, false, &err), KEL_E_SYNTAX);
    ck_assert_uint_eq(err.column, COLUMN + 4);
    ck_assert_int_eq(parse(&c, "1 % independent", true, false, &err), KEL_E_SYNTAX);
}
END_TEST

START_TEST(decimal_comma)
{
    kel__clause c;
    kel_error err;
    ck_assert_int_eq(parse(&c, "2,5 % + 0,1 [1e-6/K] k=2,5 from 19,5 degC to 20,5 degC", false, true, &err), KEL_OK);
    ck_assert_ulp(c.relative, 0.01, 1);
    ck_assert_ulp(c.absolute, 0.04e-6, 1);
    ck_assert_ulp(c.lo, 292.65, 0);
    ck_assert_ulp(c.hi, 293.65, 0);
    ck_assert_int_eq(parse(&c, "2.5 %", false, true, &err), KEL_E_SYNTAX);
    ck_assert_uint_eq(err.column, COLUMN + 1);
}
END_TEST

/* A value from a setting has no place. */
START_TEST(no_place)
{
    kel__clause c;
    kel_error err;
    kel__entry entry = { "uncertainty", "2 % from 20 to 30 degC", 0, 0 };
    ck_assert_int_eq(kel__clause_parse(&c, &entry, false, false, &err), KEL_E_UNIT);
    ck_assert_uint_eq(err.line, 0);
    ck_assert_uint_eq(err.column, 0);
}
END_TEST

static const struct { const char *text; double at; kel_step_kind step; double length; } transitions[] = {
    { "912 degC", 1185.15, KEL_STEP_NONE, 0 },
    { "77K", 77, KEL_STEP_NONE, 0 },
    { "912 degC step", 1185.15, KEL_STEP_FITTED, 0 },
    { "912 degC step -8.4e-6", 1185.15, KEL_STEP_STATED, -8.4e-6 },
    { "912 degC STEP \xE2\x88\x92" "0.0084 [1e-3]", 1185.15, KEL_STEP_STATED, -8.4e-6 },
    { "912 degC step 0", 1185.15, KEL_STEP_STATED, 0 },
    { "0 K step 0.5", 0, KEL_STEP_STATED, 0.5 },
};

START_TEST(transition)
{
    kel__entry entry = { "transition", transitions[_i].text, LINE, COLUMN };
    kel_declared_transition t;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel__transition_parse(&t, &entry, false, &err) == KEL_OK, "%s: %s", entry.value, err.message);
    ck_assert_ulp_for(entry.value, t.at, transitions[_i].at, 0);
    ck_assert_int_eq(t.step, transitions[_i].step);
    ck_assert_ulp_for(entry.value, t.length, transitions[_i].length, 0);
    ck_assert_ptr_eq(t.text, entry.value);
}
END_TEST

static const struct { const char *text; size_t column; kel_status status; const char *message;
                      } refused_transitions[] = {
    { "", 1, KEL_E_SYNTAX, "expected a temperature with its unit" },
    { "near 912 degC", 1, KEL_E_SYNTAX, "found 'near'" },
    { "912", 1, KEL_E_UNIT, "the temperature 912 needs a unit" },
    { "912 degC jump", 10, KEL_E_SYNTAX, "expected nothing or 'step' behind the temperature, found 'jump'" },
    { "912 degC step small", 15, KEL_E_SYNTAX, "found 'small'" },
    { "912 degC step 1e-6 [K]", 21, KEL_E_UNIT, "" },
    { "912 degC step 1e-6 per length", 20, KEL_E_SYNTAX, "expected a unit in brackets, found 'per'" },
    { "912 degC step 1e-6 [1] more", 24, KEL_E_SYNTAX, "expected nothing behind the step, found 'more'" },
    { "912 degC step 1", 15, KEL_E_RANGE, "must be below the length itself" },
    { "912 degC step -100 [%]", 15, KEL_E_RANGE, "must be below the length itself" },
};

START_TEST(refuses_transition)
{
    kel__entry entry = { "transition", refused_transitions[_i].text, LINE, COLUMN };
    kel_declared_transition t;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel__transition_parse(&t, &entry, false, &err);
    ck_assert_msg(status == refused_transitions[_i].status &&
                  err.column == COLUMN + refused_transitions[_i].column - 1 &&
                  strstr(err.message, refused_transitions[_i].message) != NULL,
                  "'%s': got %d at %zu (%s)", entry.value, status, err.column - COLUMN + 1, err.message);
}
END_TEST

static TCase *
tables(void)
{
    TCase *tcase = tcase_create("tables");
    tcase_add_loop_test(tcase, understood, 0, KEL_LENGTH(clauses));
    tcase_add_loop_test(tcase, refuses, 0, KEL_LENGTH(refused));
    tcase_add_loop_test(tcase, transition, 0, KEL_LENGTH(transitions));
    tcase_add_loop_test(tcase, refuses_transition, 0, KEL_LENGTH(refused_transitions));
    return tcase;
}

KEL_TCASE(rules, lot_is_of_no_sort, decimal_comma, no_place)
KEL_TEST_MAIN("clause", tables, rules)
