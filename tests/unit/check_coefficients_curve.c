/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Adopted curves: cuts at transitions and ends of ranges, continuity at joins. */
#include "unit.h"

#include <kelspan-fit.h>
#include <math.h>
#include <string.h>

#include "adopting.h"

/* Declared transitions and ends of ranges cut pieces; the curve stays what it was. */
START_TEST(cuts)
{
    static const char rows[] = "from [K],to [K],power 0,power 1,power 2\n100,300,2,0.05,-1e-5\n";
    kel_record *plain = good(HEAD "from [K],to [K],power 0,power 1,power 2\n100,300,2,0.05,-1e-5\n", NULL);
    char text[512];
    snprintf(text, sizeof text, HEAD "# transition: 150 K\n# transition: 200 K step -1e-5\n# transition: 350 K\n# "
                                     "uncertainty: 5 %% from 120 K to "
             "200 K\n# uncertainty: 2 %% from 200 K to 400 K\n%s", rows);
    kel_adopt_report *report;
    kel_record *cut = good(text, &report);
    const kel_content *c = kel_record_content(cut);
    ck_assert_uint_eq(c->piece_count, 4);
    ck_assert_uint_eq(c->transition_count, 3);
    static const double joins[] = { 120, 150, 200 };
    static const int continuity[] = { 2, -1, -1 };
    for (size_t i = 0; i < 3; i++) {
        ck_assert_ulp(c->pieces[i + 1].from, joins[i], 0);
        ck_assert_int_eq(c->continuity[i], continuity[i]);
    }
    for (double t = 100; t <= 300; t += 12.5)
        ck_assert_abs(coefficient(cut, t).value, coefficient(plain, t).value, 1e-13 * 17e-6, "1/K");
    ck_assert_lre(integral(cut, 110, 290).value, integral(plain, 110, 290).value - 1e-5, 13);
    ck_assert_lre(coefficient(cut, 160).u, 0.05 * coefficient(plain, 160).value, 13);
    ck_assert_lre(coefficient(cut, 250).u, 0.02 * coefficient(plain, 250).value, 13);
    ck_assert_double_eq(coefficient(cut, 110).u, 0);
    ck_assert_uint_eq(report->warning_count, 1);
    ck_assert_str_eq(report->warnings[0].code, "uncertainty-range");
    ck_assert_str_eq(report->warnings[0].text, "no uncertainty is stated from 100 K to 120 K: u counts nothing for "
                                               "this stretch");
    kel_adopt_report_free(report);
    kel_record_free(plain);
    kel_record_free(cut);
}
END_TEST

/* How far alpha agrees at an undeclared join of two polynomials: 10 + 0.1 x at x = T - 100 against others of the same
   value there. */
static const struct { const char *above; int want; } joins[] = {
    { "11,0,0", -1 }, { "10,0.2,0", 0 }, { "10,0.1,1e-3", 1 }, { "10,0.1,0", 2 }, { "10.0000000000001,0.1,0", -1 },
};

START_TEST(continuity)
{
    char text[512];
    snprintf(text, sizeof text, HEAD "# centre: 100\nfrom [K],to [K],power 0,power 1,power "
                                     "2\n50,100,10,0.1,0\n100,150,%s\n", joins[_i].above);
    kel_record *record = good(text, NULL);
    ck_assert_msg(kel_record_content(record)->continuity[0] == joins[_i].want, "%s: %d", joins[_i].above,
                  kel_record_content(record)->continuity[0]);
    kel_record_free(record);
}
END_TEST

static TCase *
loops(void)
{
    TCase *tcase = tcase_create("joins");
    tcase_add_loop_test(tcase, continuity, 0, KEL_LENGTH(joins));
    return tcase;
}

KEL_TCASE(pieces, cuts)
KEL_TEST_MAIN("coefficients_curve", loops, pieces)
