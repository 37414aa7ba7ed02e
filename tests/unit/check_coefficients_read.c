/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Coefficient files: published values come out in all their digits, shifts and steps are made and said, uncertainty
   becomes modes, and every refusal stands at its place. Over coefficients_header.c, coefficients_steps.c,
   coefficients_curve.c, coefficients_modes.c too. */
#include "unit.h"

#include <kelspan-fit.h>
#include <math.h>
#include <string.h>

static kel_status
read_text(kel_record **record, kel_adopt_report **report, const char *text, const char *const *settings, size_t n,
          kel_error *err)
{
    kel_memory memory = { text, strlen(text), 0 };
    return kel_coefficients_read(record, report, kel_input_memory(&memory), "there/alloy.csv", settings, n, err);
}

static long
read_file(void *context, char *buffer, size_t size)
{
    return (long)fread(buffer, 1, size, context);
}

static kel_status
read_fixture(kel_record **record, kel_adopt_report **report, const char *name, kel_error *err)
{
    char relative[256];
    snprintf(relative, sizeof relative, "tests/data/%s.csv", name);
    FILE *f = fopen(kel_test_file(relative), "rb");
    ck_assert_msg(f != NULL, "%s is missing", relative);
    kel_status status = kel_coefficients_read(record, report, (kel_input){ read_file, f }, relative, NULL, 0, err);
    fclose(f);
    return status;
}

static kel_record *
good(const char *text, kel_adopt_report **report)
{
    kel_record *record;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = read_text(&record, report, text, NULL, 0, &err);
    ck_assert_msg(status == KEL_OK, "%zu:%zu %s", err.line, err.column, err.message);
    return record;
}

static kel_record *
good_fixture(const char *name, kel_adopt_report **report)
{
    kel_record *record;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = read_fixture(&record, report, name, &err);
    ck_assert_msg(status == KEL_OK, "%s: %zu:%zu %s", name, err.line, err.column, err.message);
    return record;
}

static kel_answer
coefficient(const kel_record *record, double t)
{
    kel_answer a;
    ck_assert_int_ge(kel_record_coefficient(&a, record, t, NULL), KEL_OK);
    return a;
}

static kel_answer
integral(const kel_record *record, double from, double to)
{
    kel_answer a;
    ck_assert_int_ge(kel_record_integral(&a, record, from, to, NULL), KEL_OK);
    return a;
}

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

#define HEAD "# curve: coefficient [1e-6/K]\n# variable: T [K]\n"

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

static const struct { const char *label, *uncertainty; double u; } sizes[] = {
    { "percent", "2 %", 0.02 * 12e-6 }, { "absolute", "0.3 [1e-6/K]", 0.3e-6 }, { "limits", "3 % limits",
                                                                                  0.03 / 1.7320508075688772 * 12e-6 },
    { "expanded", "1 [ppm/K] k=2", 0.5e-6 }, { "both", "3 % + 0.48 [1e-6/K] k=2", 0.3e-6 },
        { "shared in so many words", "2 % shared", 0.02 * 12e-6 },
    { "a range beyond the pieces", "2 % from 0 K to 1000 K", 0.02 * 12e-6 },
};

START_TEST(uncertainty)
{
    char text[512];
    snprintf(text, sizeof text, HEAD "# uncertainty: %s\nfrom [K],to [K],power 0\n100,300,12\n", sizes[_i].uncertainty);
    kel_record *record = good(text, NULL);
    ck_assert_lre_for(sizes[_i].label, coefficient(record, 200).u, sizes[_i].u, 14);
    /* Shared by the whole curve: the integral's grows with the width. */
    ck_assert_lre_for(sizes[_i].label, integral(record, 150, 250).u, 100 * sizes[_i].u, 14);
    ck_assert_uint_eq(kel_record_content(record)->piece_count, 1);
    kel_record_free(record);
}
END_TEST

START_TEST(lot_only)
{
    kel_record *record = good(HEAD "# lot spread: 1 % from 50 K to 200 K\n# lot spread: 0.2 [1e-6/K] from 200 K to "
                                   "300 K\nfrom [K],to [K],power 0\n100,300,12\n", NULL);
    const kel_content *c = kel_record_content(record);
    ck_assert_int_eq(c->variance, KEL_VARIANCE_NONE);
    ck_assert_uint_eq(c->mode_count, 2);
    ck_assert_str_eq(c->lot_spread, "1 % from 50 K to 200 K; 0.2 [1e-6/K] from 200 K to 300 K");
    ck_assert_str_eq(c->modes[1].label, "lot spread absolute 2e-7 1/K");
    ck_assert_lre(coefficient(record, 150).u_lot, 0.12e-6, 14);
    ck_assert_lre(coefficient(record, 250).u_lot, 0.2e-6, 14);
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
                              "128,384,123.456789012345678901234567,-246.913578024691357802469133,123.456789012345678901234567\n", NULL);
    /* 2e-25 of 1e-6 at T = 256, where the curve is 123 (x - 1)^2 + 1e-24 x. */
    ck_assert_abs(coefficient(record, 256).value, 1e-30, 1e-13 * 123e-6 * 1e-3, "1/K");
    const kel_content *c = kel_record_content(record);
    ck_assert_lre(c->mean.coefficients[0], 123.456789012345678901234567e-6 / 8, 15);
    ck_assert_abs(c->mean.coefficients[1], 0, 1e-25, "1/K");
    kel_record_free(record);
}
END_TEST

static const struct { const char *name; size_t line, column; kel_status status; const char *message; } refused[] = {
    { "below-absolute-zero", 5, 1, KEL_E_RANGE, "below absolute zero" },
    { "centre-no-number", 4, 11, KEL_E_SYNTAX, "'room'" },
    { "comments-only", 1, 1, KEL_E_SYNTAX, "no header" },
    { "curve-of-means", 2, 10, KEL_E_SYNTAX, "found 'mean'" },
    { "curve-tail", 2, 31, KEL_E_SYNTAX, "found 'axial'" },
    { "curve-unit-open", 2, 22, KEL_E_SYNTAX, "the bracket round the unit is not closed" },
    { "curve-without-unit", 2, 10, KEL_E_UNIT, "a unit in brackets is missing, for example [1e-6/K]" },
    { "curve-wrong-dimension", 2, 23, KEL_E_UNIT, "'1e-5' is a pure number" },
    { "decimal-comma-unasked", 5, 10, KEL_E_SYNTAX, "a decimal comma must be declared" },
    { "empty", 1, 1, KEL_E_SYNTAX, "no header" },
    { "expansion-of-current-length", 3, 10, KEL_E_DATA, "the base `current length` belongs to coefficients" },
    { "expansion-without-reference", 2, 10, KEL_E_DATA, "needs a line '# reference temperature: ...'" },
    { "gap", 6, 1, KEL_E_DATA, "a gap between the piece of line 5, which ends at 300 K, and this one from 310 K" },
    { "header-from-twice", 4, 10, KEL_E_DATA, "a second column of the same name" },
    { "header-from-without-unit", 4, 1, KEL_E_UNIT, "a unit in brackets is missing, for example [K]" },
    { "header-no-to", 4, 1, KEL_E_DATA, "'from [K]' and 'to [K]'" },
    { "header-only", 4, 1, KEL_E_DATA, "no piece under the header" },
    { "header-power-fraction", 4, 25, KEL_E_DATA, "a whole number from 0 to 127" },
    { "header-power-missing", 4, 1, KEL_E_DATA, "lacks 'power 1'" },
    { "header-power-too-high", 4, 25, KEL_E_DATA, "a whole number from 0 to 127" },
    { "header-power-twice", 4, 25, KEL_E_DATA, "a second column 'power 0'" },
    { "header-power-with-unit", 4, 25, KEL_E_SYNTAX, "found '['" },
    { "header-unknown-column", 4, 25, KEL_E_SYNTAX, "found 'slope'" },
    { "hexadecimal", 5, 9, KEL_E_SYNTAX, "'0x12'" },
    { "lot-elsewhere", 4, 15, KEL_E_DATA, "lies outside the pieces" },
    { "lot-of-expansion", 4, 15, KEL_E_UNIT, "stated in 1/K" },
    { "missing-bound", 5, 4, KEL_E_SYNTAX, "where the piece starts or ends is missing" },
    { "missing-coefficient", 5, 8, KEL_E_SYNTAX, "the coefficient of power 0 is missing" },
    { "nan", 5, 8, KEL_E_SYNTAX, "'nan'" },
    { "no-curve", 3, 1, KEL_E_DATA, "'# curve: coefficient [1e-6/K]'" },
    { "no-variable", 3, 1, KEL_E_DATA, "'# variable: T [K]'" },
    { "nul", 5, 13, KEL_E_SYNTAX, "a NUL byte" },
    { "number-too-large", 5, 8, KEL_E_RANGE, "beyond the range of a double" },
    { "open-quote", 5, 8, KEL_E_SYNTAX, "the quote is not closed" },
    { "overlap", 5, 1, KEL_E_DATA, "an overlap between the piece of line 6, which ends at 300 K, and this one from "
                                   "290 K" },
    { "piece-backwards", 5, 1, KEL_E_DATA, "from the lower to the higher temperature" },
    { "piece-of-no-width", 5, 1, KEL_E_DATA, "from the lower to the higher temperature" },
    { "ragged-long", 5, 19, KEL_E_SYNTAX, "5 cells in a row under a header of 4" },
    { "ragged-short", 6, 9, KEL_E_SYNTAX, "3 cells in a row under a header of 4" },
    { "scale-zero", 4, 10, KEL_E_RANGE, "must be above zero" },
    { "step-contradicts", 5, 15, KEL_E_DATA, "which steps by 1e-5 there" },
    { "step-not-published", 5, 15, KEL_E_DATA, "where the published expansion has none" },
    { "step-stated-not-published", 5, 15, KEL_E_DATA, "where the published expansion has none" },
    { "step-to-be-fitted", 4, 15, KEL_E_DATA, "state its size" },
    { "text-in-number", 5, 18, KEL_E_SYNTAX, "'0.004*'" },
    { "two-materials", 2, 13, KEL_E_DATA, "`material` on line 2 contradicts the one on line 1" },
    { "uncertainty-elsewhere", 4, 16, KEL_E_DATA, "lies outside the pieces" },
    { "uncertainty-independent", 4, 16, KEL_E_DATA, "leave the word `independent` out" },
    { "uncertainty-of-expansion", 4, 16, KEL_E_UNIT, "stated in 1/K" },
    { "unit-misread", 5, 1, KEL_E_DATA, "the coefficient would be 12.808 1/K at 77 K, beyond 0.001 1/K: check the "
                                        "unit [1/K] of `curve`" },
    { "variable-of-length", 3, 16, KEL_E_UNIT, "'mm' is a length" },
    { "variable-unknown", 3, 13, KEL_E_SYNTAX, "found 'x'" },
};

START_TEST(refuses)
{
    kel_record *record;
    kel_adopt_report *report;
    kel_error err = { KEL_OK, 0, 0, "" };
    char name[128];
    snprintf(name, sizeof name, "bad-coefficients-%s", refused[_i].name);
    kel_status status = read_fixture(&record, &report, name, &err);
    ck_assert_msg(status == refused[_i].status && err.code == status && err.line == refused[_i].line &&
                  err.column == refused[_i].column &&
                  strstr(err.message, refused[_i].message) != NULL && strchr(err.message, '\n') == NULL &&
                      record == NULL && report == NULL,
                  "%s: got %d at %zu:%zu (%s)", refused[_i].name, status, err.line, err.column, err.message);
}
END_TEST

static TCase *
tables(void)
{
    TCase *tcase = tcase_create("tables");
    tcase_add_loop_test(tcase, published_values, 0, KEL_LENGTH(values));
    tcase_add_loop_test(tcase, continuity, 0, KEL_LENGTH(joins));
    tcase_add_loop_test(tcase, uncertainty, 0, KEL_LENGTH(sizes));
    tcase_add_loop_test(tcase, refuses, 0, KEL_LENGTH(refused));
    return tcase;
}

KEL_TCASE(files, content, defaults, expansion, published_steel, published_aluminium, cuts, lot_only, settings,
          one_temperature, all_digits)
KEL_TEST_MAIN("coefficients_read", tables, files)
