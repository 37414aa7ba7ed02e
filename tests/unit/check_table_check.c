/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Physics against misread tables: what is refused with its evidence, what is warned about and what silences it. Also
   over table_cross.c and table_order.c. Each limit is met at, just inside and just outside. */
#include "tables.h"

#include <math.h>

/* code NULL: no warning at all but those about kinds and cells. */
static const struct {
    const char *label, *text, *code;
    size_t line, count;
    const char *part;
} warnings[] = {
    /* sign */
    { "expansion as it should be",
      "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-270\n293,0\n400,150\n", NULL, 0, 0, "" },
    { "printed as contraction",
      "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,270\n200,150\n293,0\n400,-150\n", "sign", 3, 3,
      "expansion has the sign of a contraction in 3 of 3 rows" },
    { "one wrong sign", "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-270\n200,150\n293,0\n400,150\n",
      "sign", 4, 1,
      "wrong sign for its temperature in 1 of 3 rows" },
    { "contraction as it should be",
      "# reference temperature: 293 K\nT [K],contraction [1e-5]\n100,270\n293,0\n400,-150\n", NULL, 0, 0, "" },
    { "expansion printed as contraction",
      "# reference temperature: 293 K\nT [K],contraction [1e-5]\n100,-270\n293,0\n400,150\n", "sign", 3, 2,
      "the sign of a contraction" },
    { "within a printed digit", "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-270\n292,1\n400,150\n",
      NULL, 0, 0, "" },
    { "just beyond it", "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-270.0\n292,0.2\n400,150\n",
      "sign", 4, 1, "in 1 of 3" },
    { "within 3 u",
      "# reference temperature: 293 K\n# uncertainty: 0.1 [1e-5] independent\nT [K],expansion "
      "[1e-5]\n100,-270.00\n292,0.30\n400,150\n", NULL,
      0, 0, "" },
    { "beyond 3 u",
      "# reference temperature: 293 K\n# uncertainty: 0.1 [1e-5] independent\nT [K],expansion "
      "[1e-5]\n100,-270.00\n292,0.31\n400,150\n",
      "sign", 5, 1, "" },
    { "coefficients below zero", "T [K],alpha [1e-6/K]\n20,-0.5\n40,-0.1\n60,0.4\n", "sign", 2, 1,
      "coefficient below zero in 1 of 2 rows" },
    { "said to be so", "# contracts on heating: yes\nT [K],alpha [1e-6/K]\n20,-0.5\n40,-0.3\n60,0.4\n", NULL, 0, 0,
      "" },
    { "left-out rows do not count", "T [K],alpha [1e-6/K]\n20,(-0.5)\n40,0.3\n60,0.4\n", "marked", 2, 1, "" },
    /* order */
    { "ascending", "T [K],alpha [1e-6/K]\n20,1\n40,2\n60,3\n", NULL, 0, 0, "" },
    { "descending", "T [K],alpha [1e-6/K]\n60,3\n40,2\n20,1\n", NULL, 0, 0, "" },
    { "unsorted", "T [K],alpha [1e-6/K]\n20,1\n60,3\n40,2\n80,4\n", "unsorted", 4, 1,
      "neither ascending nor descending" },
    { "unsorted the other way", "T [K],alpha [1e-6/K]\n80,4\n40,2\n60,3\n20,1\n", "unsorted", 4, 1, "" },
    { "repeated", "T [K],alpha [1e-6/K]\n20,1\n40,2\n40,2\n60,3\n60,4\n", "repeated", 4, 2, "the first one 40 K" },
    { "repeated out of order", "T [degC],alpha [1e-6/K]\n20,1\n40,2\n20,1\n", "repeated", 4, 1,
      "the first one 293.15 K" },
    { "repeated at a transition", "# transition: 40 K\nT [K],alpha [1e-6/K]\n20,1\n40,2\n40,5\n60,6\n", NULL, 0, 0,
      "" },
    { "repeated, one of them left out", "T [K],alpha [1e-6/K]\n20,1\n40,2\n40,(2)\n60,3\n", "marked", 4, 1, "" },
    { "nested intervals", "interval [degC],mean alpha [1e-6/K]\n20-100,1\n20-200,2\n-50-20,1\n0-100,1\n", NULL, 0, 0,
      "" },
    { "an interval twice", "interval [degC],mean alpha [1e-6/K]\n20-100,1\n20-200,2\n20-100,1\n", "repeated", 4, 1,
      "373.15 K" },
    /* kinds side by side: e(T) = 1e-5 (T - 293) + 5e-9 (T - 293)^2, alpha = 1e-5 + 1e-8 (T - 293) */
    { "kinds that agree", "# reference temperature: 293 K\nT [K],expansion [1e-6],mean alpha [1e-6/K],alpha [1e-6/K]\n"
      "93,-1800,9.00,8.00\n193,-950,9.50,9.00\n293,0,10.00,10.00\n393,1050,10.50,11.00\n", NULL, 0, 0, "" },
    { "a mean off by two digits", "# reference temperature: 293 K\nT [K],expansion [1e-6],mean alpha [1e-6/K]\n"
      "93,-1800,9.00\n193,-950,9.52\n293,0,10.00\n393,1050,10.50\n", NULL, 0, 0, "" }, /* 2 < 1 + 0.01 100 */
    { "a mean off by more", "# reference temperature: 293 K\nT [K],expansion [1e-6],mean alpha [1e-6/K]\n"
      "93,-1800,9.00\n193,-950,9.53\n293,0,10.00\n393,1050,10.50\n", "cross-check", 4, 1,
          "at 193 K -0.00095 against -0.000953" },
    { "mean and coefficient exchanged",
      "# reference temperature: 293 K\nT [K],expansion [1e-6],mean alpha [1e-6/K],alpha [1e-6/K]\n"
      "93,-1800,8.00,9.00\n193,-950,9.00,9.50\n293,0,10.00,10.00\n393,1050,11.00,10.50\n", "cross-check", 3, 3,
          "expansion and mean coefficient" },
    { "a coefficient per degF", "# reference temperature: 293 K\nT [K],expansion [1e-6],alpha [1e-6/K]\n"
      "93,-1800,4.44\n193,-950,5.00\n293,0,5.56\n393,1050,6.11\n", "cross-check", 4, 3,
          "the slope of the expansion and coefficient" },
    { "means against coefficients", "# reference temperature: 293 K\nT [K],mean alpha [1e-6/K],alpha [1e-6/K]\n"
      "93,9.00,9.00\n193,9.50,9.50\n293,10.00,10.00\n393,10.50,10.50\n493,11.00,11.00\n", "cross-check", 4, 2,
          "the slope of the means and coefficient" },
    { "a marked value takes no part", "# reference temperature: 293 K\nT [K],expansion [1e-6],mean alpha [1e-6/K]\n"
      "93,-1800,9.00\n193,-950,(12.00)\n293,0,10.00\n393,1050,10.50\n", "marked", 4, 1, "" },
    { "after a shift",
      "# reference temperature: 293 K\n# shift to reference: yes\nT [K],expansion [1e-6],mean alpha [1e-6/K]\n"
      "93,-1810,9.00\n193,-960,9.50\n293,-10,10.00\n393,1040,10.50\n", "shifted", 6, 4,
          "shifted by 0.00001, to be zero at the reference temperature 293 K" },
    { "across a transition",
      "# reference temperature: 293 K\n# transition: 343 K step\nT [K],expansion [1e-6],alpha [1e-6/K]\n"
      "93,-1800,8.00\n193,-950,9.00\n293,0,10.00\n393,3050,11.00\n", NULL, 0, 0, "" },
    { "current length", "# reference temperature: 0 K\n# base: current length\nT [K],expansion [1e-6],alpha [1e-6/K]\n"
      "0,0,40.00\n1000,40811,40.00\n2000,83287,40.00\n", NULL, 0, 0, "" }, /* expm1(4e-5 T) */
    { "reference length for the same", "# reference temperature: 0 K\nT [K],expansion [1e-6],alpha [1e-6/K]\n"
      "0,0,40.00\n1000,40811,40.00\n2000,83287,40.00\n", "cross-check", 4, 2, "the slope of the expansion" },
    /* shift */
    { "nothing to shift by",
      "# reference temperature: 293 K\n# shift to reference: yes\nT [K],expansion [1e-5]\n100,-270\n400,150\n",
          "not-shifted", 0, 1, "" },
    { "a shift of zero",
      "# reference temperature: 293 K\n# shift to reference: yes\nT [K],expansion [1e-5]\n100,-270\n293,0\n400,150\n",
          NULL, 0, 0, "" },
};

START_TEST(warned)
{
    static const char *const codes[] = { "sign", "unsorted", "repeated", "cross-check", "shifted", "not-shifted" };
    const char *label = warnings[_i].label;
    kel_table *t = kel_test_table(warnings[_i].text, NULL);
    for (size_t i = 0; i < sizeof codes / sizeof codes[0]; i++) {
        const kel_warning *w = kel_test_warning(t, codes[i]);
        bool wanted = warnings[_i].code != NULL && strcmp(codes[i], warnings[_i].code) == 0;
        ck_assert_msg((w != NULL) == wanted || (w != NULL && warnings[_i].code != NULL &&
                                                strcmp(warnings[_i].code, "repeated") == 0 &&
                      strcmp(codes[i], "unsorted") == 0), "%s: %s: %s", label, codes[i], w == NULL ? "no warning"
                          : w->text);
    }
    if (warnings[_i].code != NULL) {
        const kel_warning *w = kel_test_warning(t, warnings[_i].code);
        ck_assert_msg(w != NULL, "%s", label);
        ck_assert_msg(strstr(w->text, warnings[_i].part) != NULL, "%s: %s", label, w->text);
        ck_assert_msg(w->line == warnings[_i].line && w->count == warnings[_i].count, "%s: line %zu, %zu times",
                      label, w->line, w->count);
    }
    kel_table_free(t);
}
END_TEST

static const struct {
    const char *label, *text;
    kel_status code;
    size_t line, column;
    const char *part;
} limits[] = {
    /* zero at the reference: one printed digit, or 3 stated u */
    { "one digit", "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-271.3\n293,0.1\n", KEL_OK, 0, 0, "" },
    { "one digit below", "# reference temperature: 293 K\nT [K],expansion [%]\n100,-0.2713\n293,-0.0001\n", KEL_OK,
      0, 0, "" },
    { "two digits", "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-271.3\n293,0.2\n", KEL_E_DATA, 4, 5,
      "an expansion of 2e-6 at its own reference temperature 293 K, where it is zero by definition (one printed "
      "digit is 1e-6)" },
    { "the finest digit of the column counts",
      "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-271.3\n293,1\n", KEL_E_DATA, 4, 5,
      "`shift to reference: yes`" },
    { "3 u", "# reference temperature: 293 K\nT [K],expansion [1e-5],u [1e-5]\n100,-271.3,0.1\n293,0.3,0.1\n",
      KEL_OK, 0, 0, "" },
    { "just above 3 u",
      "# reference temperature: 293 K\nT [K],expansion [1e-5],u [1e-5]\n100,-271.3,0.1\n293,0.4,0.1\n", KEL_E_DATA,
          4, 5, "3 u are 3e-6" },
    { "no u at the reference, where there is none",
      "# reference temperature: 293 K\nT [K],expansion [1e-5],u [1e-5]\n100,-271.3,0.1\n293,0,0\n", KEL_OK, 0, 0, "" },
    { "in other units and by a factor", "# reference temperature: 293.15 K\nT [degC],expansion [%],u k=2 [%]\n"
      "-173,-0.2713,0.001\n20,0.0000,0e0\n", KEL_OK, 0, 0, "" },
    { "it widens nothing",
      "# reference temperature: 293 K\nT [K],expansion [1e-5],u [1e-5]\n100,-271.3,0.1\n293,0.2,0\n", KEL_E_DATA, 4, 5,
      "one printed digit is 1e-6)" },
    { "no u beside it", "# reference temperature: 293 K\nT [K],expansion [1e-5],u [1e-5]\n292,-1.3,0.0\n293,0,0\n",
      KEL_E_RANGE, 3, 10, "an uncertainty of '0.0': it must be above zero" },
    { "below zero", "# reference temperature: 293 K\nT [K],expansion [1e-5],u [1e-5]\n292,-1.3,1\n293,0,-1\n",
      KEL_E_RANGE, 4, 7, "an uncertainty of '-1'" },
    { "no u of a mean at its reference",
      "# reference temperature: 293 K\nT [K],mean alpha [1e-6/K],u [1e-6/K]\n292,13,1\n293,13,0\n",
      KEL_E_RANGE, 4, 8, "an uncertainty of '0'" },
    { "3 u of shared and own parts",
      "# reference temperature: 293 K\n# uncertainty: 4 [1e-6]\nT [K],expansion [1e-5],u "
      "[1e-6]\n100,-271.3,3\n293,1.5,3\n",
      KEL_OK, 0, 0, "" },
    { "a relative u says nothing about zero",
      "# reference temperature: 293 K\n# uncertainty: 50 % independent\nT [K],expansion [1e-5]\n100,-271.3\n293,0.2\n",
      KEL_E_DATA, 5, 5, "" },
    { "a marked row is not checked", "# reference temperature: 293 K\nT [K],expansion [1e-5]\n100,-271.3\n293,(5.0)\n",
      KEL_OK, 0, 0, "" },
    { "the same temperature in another unit",
      "# reference temperature: 20 degC\nT [degF],expansion [1e-5]\n-100,-171.3\n68,5.0\n", KEL_E_DATA, 4, 4,
          "293.15 K" },
    { "shifted",
      "# reference temperature: 293 K\n# shift to reference: yes\nT [K],expansion [1e-5]\n100,-271.3\n293,5.0\n",
          KEL_OK, 0, 0, "" },
    { "two values at the reference",
      "# reference temperature: 293 K\n# shift to reference: yes\nT [K],expansion "
      "[1e-5]\n100,-271.3\n293,5.0\n293,6.0\n",
      KEL_E_DATA, 6, 5, "an expansion of 0.00001" },
    /* size */
    { "the largest coefficient", "T [K],alpha [1e-6/K]\n100,1000\n", KEL_OK, 0, 0, "" },
    { "above it", "T [K],alpha [1e-6/K]\n50,1\n100,1000.01\n", KEL_E_DATA, 3, 5,
      "coefficient 0.00100001 1/K at 100 K: solids stay below 0.001 1/K; is the unit right ([1e-6/K])" },
    { "below zero", "T [K],alpha [1e-6/K]\n100,-1001\n", KEL_E_DATA, 2, 5, "coefficient -0.001001 1/K" },
    { "a marked value is not checked", "T [K],alpha [1e-6/K]\n50,1\n100,(2000)\n", KEL_OK, 0, 0, "" },
    /* One printed digit is taken off an expansion. */
    { "the largest expansion", "# reference temperature: 293 K\nT [K],expansion [1e-3]\n193,-101\n", KEL_OK, 0, 0, "" },
    { "above that", "# reference temperature: 293 K\nT [K],expansion [1e-3]\n193,-101.1\n", KEL_E_DATA, 3, 5,
      "expansion -0.1011 at 193 K is 0.00101 1/K in the mean from 293 K" },
    { "rounding close to the reference", "# reference temperature: 293 K\nT [K],expansion [%]\n292.99,0.01\n",
      KEL_OK, 0, 0, "" },
    { "percent taken for a number", "# reference temperature: 293 K\nT [K],expansion [1]\n77,-0.39\n", KEL_E_DATA, 3,
      4, "is the unit right ([1])" },
};

START_TEST(refused)
{
    const char *label = limits[_i].label;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel_test_read_text(&t, limits[_i].text, NULL, &err);
    ck_assert_msg(status == limits[_i].code, "%s: %s", label, err.message);
    if (status != KEL_OK) {
        ck_assert_msg(err.line == limits[_i].line && err.column == limits[_i].column, "%s: %zu:%zu %s", label,
                      err.line, err.column, err.message);
        ck_assert_msg(strstr(err.message, limits[_i].part) != NULL, "%s: %s", label, err.message);
    }
    kel_table_free(t);
}
END_TEST

/* The shift moves every expansion by the value at the reference and nothing else. */
START_TEST(shift)
{
    kel_table *t = kel_test_table("# reference temperature: 293 K\n# shift to reference: yes\nT [K],contraction "
                                  "[1e-5]\n100,271.3\n293,0.4\n300,(-12.0)\n", NULL);
    ck_assert_ulp(t->shift, -0.4e-5, 0);
    ck_assert_ulp(t->observations[0].value, -271.3e-5 + 0.4e-5, 1);
    ck_assert_ulp(t->observations[1].value, 0, 0);
    ck_assert_str_eq(t->observations[1].left_out, "zero at the reference temperature");
    ck_assert_ulp(t->observations[2].value, 12.0e-5 + 0.4e-5, 1);
    ck_assert_uint_eq(t->rows_left_out, 2);
    kel_table_free(t);
}
END_TEST

/* A value at the reference that is not quite zero is named, and its row still takes part in the cross-check. */
START_TEST(taken_as_zero)
{
    kel_table *t = kel_test_table("# reference temperature: 293 K\n"
                                  "T [K],contraction [1e-5],u [1e-5],mean alpha [1e-6/K]\n"
                                  "193,95.0,0.1,9.50\n293,0.3,0.1,10.00\n293,0,0.1,\n393,-105.0,0.1,10.50\n", NULL);
    ck_assert_ptr_null(t->observations[0].left_out);
    ck_assert_str_eq(t->observations[1].left_out, "at the reference temperature: -3e-6 taken as zero");
    ck_assert_str_eq(t->observations[2].left_out, "zero at the reference temperature");
    ck_assert_ptr_null(t->observations[3].left_out);
    const kel_warning *w = kel_test_warning(t, "cross-check");
    ck_assert_ptr_nonnull(w);
    ck_assert_uint_eq(w->line, 4);
    ck_assert_uint_eq(w->count, 1);
    kel_table_free(t);
}
END_TEST

KEL_TCASE(singles, shift, taken_as_zero)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, warned, 0, KEL_LENGTH(warnings));
    tcase_add_loop_test(c, refused, 0, KEL_LENGTH(limits));
    return c;
}

KEL_TEST_MAIN("table_check", singles, loops)
