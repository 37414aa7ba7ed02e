/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Coefficient files: published values come out in all their digits, and everything stated is in the record. */
#include "unit.h"

#include <kelspan-fit.h>
#include <math.h>
#include <string.h>

#include "adopting.h"

/* alpha worked out from the files' digits in exact fractions, at the double nearest T. largest: the largest term of
   the polynomial as published, 1/K; the limit is 1e-13 of it. */
static const struct { const char *file; double t, want, largest; } values[] = {
    { "good-coefficients-two-pieces", 77, 0.00000543095227, 8.5e-6 },
    { "good-coefficients-two-pieces", 293.15, 0.00001469020435536624959105, 3.2e-5 },
    { "good-coefficients-two-pieces", 450.25, 0.00001642845722171875, 5.0e-5 },
    { "good-coefficients-two-pieces", 599.5, 0.00001872687522625, 8.7e-5 },
    { "good-coefficients-two-pieces", 600, 0.00001741, 1.5e-5 },
    { "good-coefficients-two-pieces", 725.125, 0.0000179230125, 1.5e-5 },
    { "good-coefficients-two-pieces", 900, 0.00001864, 1.5e-5 },
    { "good-coefficients-scaled-fahrenheit", 293.15, 0.00001493906219999999947282, 1.7e-5 },
    { "good-coefficients-scaled-fahrenheit", 350.5, 0.00001619202086712, 1.7e-5 },
    { "good-coefficients-scaled-fahrenheit", 373.15, 0.00001664459819999999955769, 1.7e-5 },
    { "good-coefficients-expansion-three-pieces", 293.15, 0.00001215999999999999981810, 1.2e-5 },
    { "good-coefficients-expansion-three-pieces", 400.5, 0.0000130188, 1.2e-5 },
    { "good-coefficients-expansion-three-pieces", 773, 0.0000159988, 1.2e-5 },
    { "good-coefficients-expansion-three-pieces", 800, 0, 1.2e-5 },
    { "good-coefficients-expansion-three-pieces", 1000, 1.6e-5, 1.6e-5 },
};

START_TEST(published_values)
{
    kel_record *record = good_fixture(values[_i].file, NULL);
    ck_assert_abs_for(values[_i].file, coefficient(record, values[_i].t).value, values[_i].want,
                      1e-13 * values[_i].largest, "1/K");
    kel_record_free(record);
}
END_TEST

START_TEST(content)
{
    kel_adopt_report *report;
    kel_record *record = good_fixture("good-coefficients-two-pieces", &report);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(report->warning_count, 0);
    ck_assert_str_eq(c->form, "adopted");
    ck_assert_int_eq(c->base, KEL_BASE_REFERENCE);
    ck_assert_ulp(c->reference_temperature, 293.15, 0);
    ck_assert(!c->reference_defaulted && c->observations == 0 && isnan(c->degrees_of_freedom) && isnan(c->chi2));
    ck_assert_uint_eq(c->parameters, 6);
    ck_assert_uint_eq(c->piece_count, 2);
    ck_assert_ulp(c->range.lo, 77, 0);
    ck_assert_ulp(c->range.hi, 900, 0);
    ck_assert_int_eq(c->continuity[0], -1);
    ck_assert_int_eq(c->variance, KEL_VARIANCE_STATED);
    ck_assert_uint_eq(c->mode_count, 3);
    ck_assert_str_eq(c->modes[0].label, "good-coefficients-two-pieces.csv relative 1 %");
    ck_assert_int_eq(c->modes[1].kind, KEL_MODE_SHARED);
    ck_assert_int_eq(c->modes[2].kind, KEL_MODE_LOT);
    ck_assert_str_eq(c->lot_spread, "1 %");
    ck_assert_uint_eq(c->source_count, 1);
    const kel_source *s = c->sources;
    ck_assert_str_eq(s->name, "good-coefficients-two-pieces.csv");
    ck_assert_str_eq(s->material, "QV-2 (invented)");
    ck_assert_str_eq(s->direction, "axial");
    ck_assert_str_eq(s->source, "bench book 4, page 31");
    ck_assert_uint_eq(strlen(s->digest), 64);
    ck_assert_uint_eq(s->rows, 2);
    ck_assert_str_eq(s->uncertainty[0], "2 % + 0.1 [1e-6/K] k=2");
    ck_assert_str_eq(s->notes[0], "not for use above 900 K");
    /* u: 1 % and 0.05e-6 1/K shared, 1 % lot, in quadrature. */
    kel_answer a = coefficient(record, 600);
    ck_assert_lre(a.u_shared, hypot(0.01 * 17.41e-6, 0.05e-6), 13);
    ck_assert_lre(a.u_lot, 0.01 * 17.41e-6, 13);
    ck_assert_int_eq(kel_record_coefficient(&a, record, 901, NULL), KEL_W_EXTRAPOLATED);
    kel_record_free(record);
    kel_adopt_report_free(report);
    kel_adopt_report_free(NULL);
}
END_TEST

START_TEST(defaults)
{
    kel_record *record = good_fixture("good-coefficients-scaled-fahrenheit", NULL);
    const kel_content *c = kel_record_content(record);
    ck_assert(c->reference_defaulted && c->variance == KEL_VARIANCE_NONE && c->mode_count == 0 && !c->scatter_known);
    ck_assert_ulp(c->reference_temperature, 293.15, 0);
    ck_assert_ulp(c->range.lo, 293.15, 0);
    ck_assert_ulp(c->range.hi, 473.15, 0);
    ck_assert(isnan(coefficient(record, 300).u));
    kel_record_free(record);
}
END_TEST

START_TEST(settings)
{
    static const char text[] = "from [K],to [K],power 0\n100,300,12\n";
    static const char *const set[] = { "curve: coefficient [ppm/K]", "variable: T [K]", "base: current length",
                                       "reference temperature: 70 degF" };
    kel_record *record;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(read_text(&record, NULL, text, set, 4, &err) == KEL_OK, "%s", err.message);
    const kel_content *c = kel_record_content(record);
    ck_assert_int_eq(c->base, KEL_BASE_CURRENT);
    ck_assert_ulp(c->reference_temperature, (70 + 459.67) / 1.8, 1);
    ck_assert_str_eq(c->sources[0].name, "alloy.csv");
    kel_record_free(record);
    kel_adopt_report *report;
    ck_assert_int_eq(read_text(&record, &report, text, set, 1, &err), KEL_E_DATA);
    ck_assert(record == NULL && report == NULL);
    ck_assert_int_eq(kel_coefficients_read(NULL, NULL, (kel_input){ NULL, NULL }, "x", NULL, 0, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_coefficients_read(&record, NULL, (kel_input){ NULL, NULL }, "x", NULL, 0, NULL),
                     KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_coefficients_read(&record, NULL, (kel_input){ read_file, NULL }, NULL, NULL, 0, NULL),
                     KEL_E_ARGUMENT);
}
END_TEST

/* What a record of one temperature is written as. */
START_TEST(one_temperature)
{
    kel_record *record = good(HEAD "# uncertainty: 1 %\nfrom [K],to [K],power 0\n293.15,293.15,12\n", NULL);
    kel_answer a = coefficient(record, 293.15);
    ck_assert_lre(a.value, 12e-6, 15);
    ck_assert_lre(a.u, 0.12e-6, 14);
    kel_record_free(record);
}
END_TEST

/* More digits than a double holds do count: at x = 1 the terms cancel to 1e-17 of their size. */
START_TEST(all_digits)
{
    kel_record *record = good("# curve: coefficient [1e-6/K]\n# variable: T [K]\n# scale: 256\nfrom [K],to [K],power "
                              "0,power 1,power 2\n"
                              "128,384,123.456789012345678901234567,-246.913578024691357802469133,"
                              "123.456789012345678901234567\n", NULL);
    /* 2e-25 of 1e-6 at T = 256, where the curve is 123 (x - 1)^2 + 1e-24 x. */
    ck_assert_abs(coefficient(record, 256).value, 1e-30, 1e-13 * 123e-6 * 1e-3, "1/K");
    const kel_content *c = kel_record_content(record);
    ck_assert_lre(c->mean.coefficients[0], 123.456789012345678901234567e-6 / 8, 15);
    ck_assert_abs(c->mean.coefficients[1], 0, 1e-25, "1/K");
    kel_record_free(record);
}
END_TEST

static TCase *
tables(void)
{
    TCase *tcase = tcase_create("tables");
    tcase_add_loop_test(tcase, published_values, 0, KEL_LENGTH(values));
    return tcase;
}

KEL_TCASE(files, content, defaults, settings, one_temperature, all_digits)
KEL_TEST_MAIN("coefficients_read", tables, files)
