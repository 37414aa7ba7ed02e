/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Polynomials in twice the precision: decimal text beyond a double's digits, units, change of basis, derivative.
   Numbers for messages too. */
#include "unit.h"

#include <math.h>
#include <string.h>

#include "../../lib/fit/phrase.h"
#include "../../lib/fit/polynomial.h"

/* text = hi + lo; lo from the digits that the nearest double lacks, by exact fractions. */
static const struct { const char *text, *unit; double hi, lo; } reads[] = {
    { "0.1", NULL, 0.1, -5.55111512312578301e-18 },
    { "-0.1", NULL, -0.1, 5.55111512312578301e-18 },
    { "\xE2\x88\x92" "1e-1", NULL, -0.1, 5.55111512312578301e-18 },
    { "9007199254740993", NULL, 9007199254740992, 1 },
    { "1e23", NULL, 1e23, 8388608 },
    { "3", "1e-6/K", 3e-6, -7.60025722912338627e-23 },
    { "1", "1/degF", 1.8, -4.44089209850062641e-17 },
    { "20", "degC", 293.15, 2.27373675443232072e-14 },
    { "0", "degF", 255.37222222222223, -1.20002773150594698e-14 },
    { "00000000000000000000000000000000000000000000000000.5", NULL, 0.5, 0 },
    { "0", NULL, 0, 0 },
};

START_TEST(all_digits)
{
    kel_unit unit;
    kel__twofold x;
    kel_error err = { KEL_OK, 0, 0, "" };
    const char *text = reads[_i].text, *name = reads[_i].unit;
    if (name != NULL)
        ck_assert_int_eq(kel_unit_parse_any(&unit, name, strlen(name), &err), KEL_OK);
    kel_status status = kel__two_read(&x, name == NULL ? NULL : &unit, text, strlen(text), false, 1, 1, &err);
    ck_assert_msg(status == KEL_OK, "%s", err.message);
    ck_assert_ulp_for(text, x.hi, reads[_i].hi, 0);
    /* 2^-100 of the number is what five operations may lose. */
    ck_assert_abs_for(text, x.lo, reads[_i].lo, ldexp(fabs(x.hi), -100), "1");
}
END_TEST

/* (1 + x)^4 with x = (T - 273)/5 on 263 K to 283 K, where x = 2y: (1 + 2y)^4 = 16 y^4 + 32 y^3 + 24 y^2 + 8 y + 1 =
   19 + 32 T1 + 20 T2 + 8 T3 + 2 T4 by hand, since y^2 = (1 + T2)/2, y^3 = (3 T1 + T3)/4 and y^4 = (3 + 4 T2 + T4)/8.
   With x = (T - 273)/10 its derivative is 4 (1 + x)^3/10. */
START_TEST(basis_and_derivative)
{
    static const double binomial[] = { 1, 4, 6, 4, 1 }, want[] = { 19, 32, 20, 8, 2 }, slope[] = { 0.4, 1.2, 1.2, 0.4 };
    kel__twofold c[5], work[10];
    kel__variable x = { kel__two(273.0), kel__two(5) };
    double got[5];
    for (int k = 0; k < 5; k++)
        c[k] = kel__two(binomial[k]);
    kel__poly_chebyshev(got, c, 5, &x, 263, 283, work);
    for (int k = 0; k < 5; k++)
        ck_assert_ulp(got[k], want[k], 0);
    ck_assert_ulp(kel__poly_value(c, 5, kel__poly_variable(&x, 278)).hi, 16, 0);
    ck_assert_ulp(kel__poly_largest(c, 5, kel__two(2)), 32, 0);
    x.scale = kel__two(10);
    ck_assert_uint_eq(kel__poly_derivative(c, 5, &x), 4);
    for (int k = 0; k < 4; k++)
        ck_assert_ulp(c[k].hi, slope[k], 0);
    ck_assert_uint_eq(kel__poly_derivative(c, 1, &x), 1);
    ck_assert_ulp(c[0].hi, 0, 0);
}
END_TEST

static const struct { double x; const char *want; } shorts[] = {
    { 2, "2" }, { 100, "100" }, { 0.5, "0.5" }, { 1.0 / 3, "0.333333" }, { -2.6e-6, "-2.6e-6" }, { 2e-7, "2e-7" },
    { 0, "0" }, { 1e30, "1e30" }, { 123456.7, "123457" },
};

START_TEST(short_numbers)
{
    char out[KEL_NUMBER_SIZE];
    kel__number_short(out, shorts[_i].x);
    ck_assert_str_eq(out, shorts[_i].want);
}
END_TEST

static TCase *
tables(void)
{
    TCase *tcase = tcase_create("tables");
    tcase_add_loop_test(tcase, all_digits, 0, KEL_LENGTH(reads));
    tcase_add_loop_test(tcase, short_numbers, 0, KEL_LENGTH(shorts));
    return tcase;
}

KEL_TCASE(algebra, basis_and_derivative)
KEL_TEST_MAIN("polynomial", tables, algebra)
