/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Published expansions: the shift at the reference, steps at joins, and values of published curves. */
#include "unit.h"

#include <kelspan-fit.h>
#include <math.h>
#include <string.h>

#include "adopting.h"

/* A shift at the reference, a step with what was said of it, a join that only rounds; ranges of uncertainty. */
START_TEST(expansion)
{
    kel_adopt_report *report;
    kel_record *record = good_fixture("good-coefficients-expansion-three-pieces", &report);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(report->warning_count, 2);
    ck_assert_str_eq(report->warnings[0].code, "shifted");
    ck_assert_str_eq(report->warnings[0].text, "the published expansion is 2.6e-6 at its reference temperature "
                                               "293.15 K; it is shifted by -2.6e-6");
    ck_assert_str_eq(report->warnings[1].code, "step");
    ck_assert_str_eq(report->warnings[1].text, "the published pieces differ by 0.000239 at 773.15 K; taken as a step "
                                               "of the length there");
    ck_assert_uint_eq(report->warnings[1].line, 11);
    ck_assert_uint_eq(report->warnings[1].count, 1);
    ck_assert_uint_eq(c->transition_count, 1);
    ck_assert_ulp(c->transitions[0].at, 773.15, 0);
    ck_assert_int_eq(c->transitions[0].step, KEL_STEP_STATED);
    /* 0.0239 %; 500 degC is the double nearest 773.15, off by up to 5.7e-14 K, times the slope of 1.6e-5 1/K. */
    ck_assert_abs(c->mean.steps[0], 2.39e-4, 9.2e-19, "1");
    ck_assert_int_eq(c->continuity[0], -1);
    ck_assert_int_eq(c->continuity[1], -1);
    ck_assert_uint_eq(c->parameters, 6);
    /* The printed expansions, less the printed value at the reference: e(400.5 K), e(500 degC), e(600 degC), e(700
       degC). */
    ck_assert_abs(integral(record, 293.15, 400.5).value, 0.00135147209, 1e-17, "1");
    ck_assert_abs(integral(record, 293.15, 773.15).value, 0.007 - 2.6e-6, 1e-17, "1");
    ck_assert_abs(integral(record, 293.15, 873.15).value, 0.007 - 2.6e-6, 1e-17, "1");
    ck_assert_abs(integral(record, 293.15, 973.15).value, 0.0078 - 2.6e-6, 1e-17, "1");
    /* One error whose size is 1 % below 500 degC and 3 % above: fully correlated. The step at 500 degC belongs to the
       range that ends there. */
    ck_assert_uint_eq(c->mode_count, 1);
    ck_assert_str_eq(c->modes[0].label, "good-coefficients-expansion-three-pieces.csv relative 1 %, 3 %");
    ck_assert_lre(integral(record, 293.15, 973.15).u, 0.01 * (0.007 - 2.6e-6) + 0.03 * 0.0008, 13);
    kel_record_free(record);
    kel_adopt_report_free(report);
}
END_TEST

/* Carbon steel, EN 1993-1-2:2005, 3.4.1.1, (3.1a) to (3.1c): zero at 20 degC, a published fall of 8.4e-6 at 750 degC,
   continuous at 860 degC. */
START_TEST(published_steel)
{
    kel_adopt_report *report;
    kel_record *record = good(
        "# reference temperature: 20 degC\n# curve: expansion [1]\n# variable: T [degC]\nfrom [degC],to [degC],power "
        "0,power 1,power 2\n"
        "20,750,-2.416e-4,1.2e-5,0.4e-8\n750,860,1.1e-2,,\n860,1200,-6.2e-3,2e-5,\n", &report);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(report->warning_count, 1);
    ck_assert_str_eq(report->warnings[0].code, "step");
    ck_assert_uint_eq(c->transition_count, 1);
    /* 750 degC as a double is off by up to 1.14e-13 K, times the slope of 1.8e-5 1/K. */
    ck_assert_abs(c->mean.steps[0], -8.4e-6, 2.1e-18, "1");
    ck_assert_abs(integral(record, 293.15, 373.15).value, 0.0009984, 1e-17, "1");
    ck_assert_abs(integral(record, 293.15, 1073.15).value, 0.011, 1e-16, "1");
    ck_assert_abs(integral(record, 293.15, 1473.15).value, 0.0178, 1e-16, "1");
    ck_assert_int_eq(c->continuity[1], -1);
    kel_record_free(record);
    kel_adopt_report_free(report);
}
END_TEST

/* Aluminium 6061-T6, NIST cryogenic material properties: y = (L - L293)/L293 1e5 above 18 K, not quite zero at 293 K.
   alpha and y by exact fractions from the published coefficients. */
START_TEST(published_aluminium)
{
    kel_adopt_report *report;
    kel_record *record = good(
        "# reference temperature: 293 K\n# curve: expansion [1e-5]\n# variable: T [K]\nfrom [K],to [K],power 0,power "
        "1,power 2,power 3,power 4\n"
        "18,300,-4.1277E2,-3.0389E-1,8.7696E-3,-9.9821E-6,0\n", &report);
    static const struct { const char *label; double t, alpha, y; } rows[] = {
        { "18 K", 18, 2.1129988e-8, -0.004154568852072 },
        { "77 K", 77, 0.000008690767873, -0.003887317296593 },
        { "200.5 K", 200.5, 0.00002008870853425, -0.002016170571627625 },
        { "300 K", 300, 0.00002262703, 0.000158103 },
    };
    ck_assert_str_eq(report->warnings[0].code, "shifted");
    ck_assert_str_eq(report->warnings[0].text, "the published expansion is -3.56973e-7 at its reference temperature "
                                               "293 K; it is shifted by 3.56973e-7");
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        /* The largest terms: 5.3e-5 1/K and 7.9e-3. */
        ck_assert_abs_for(rows[i].label, coefficient(record, rows[i].t).value, rows[i].alpha, 1e-13 * 5.3e-5, "1/K");
        ck_assert_abs_for(rows[i].label, integral(record, 293, rows[i].t).value, rows[i].y + 3.56973497e-7,
                          1e-13 * 7.9e-3, "1");
    }
    kel_record_free(record);
    kel_adopt_report_free(report);
}
END_TEST

KEL_TCASE(curves, expansion, published_steel, published_aluminium)
KEL_TEST_MAIN("coefficients_steps", curves)
