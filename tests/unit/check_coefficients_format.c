/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Coefficient files written: the text, and the curve that comes back from it. */
#include "unit.h"

#include <float.h>
#include <kelspan-fit.h>
#include <math.h>
#include <string.h>

static kel_record *
record_of(const char *text)
{
    kel_memory memory = { text, strlen(text), 0 };
    kel_record *record;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel_coefficients_read(&record, NULL, kel_input_memory(&memory), "alloy.csv", NULL, 0, &err);
    ck_assert_msg(status == KEL_OK, "%zu:%zu %s in\n%s", err.line, err.column, err.message, text);
    return record;
}

static kel_text
written(const kel_record *record, const char *temperature, const char *value)
{
    kel_unit t, v;
    kel_text out = KEL_TEXT_INIT;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_int_eq(kel_unit_parse(&t, KEL_DIM_TEMPERATURE, temperature, strlen(temperature), NULL), KEL_OK);
    ck_assert_int_eq(kel_unit_parse(&v, KEL_DIM_PER_KELVIN, value, strlen(value), NULL), KEL_OK);
    kel_status status = kel_coefficients_format(&out, record, &t, &v, &err);
    ck_assert_msg(status == KEL_OK, "%s", err.message);
    return out;
}

static const char full[] =
    "# material: QV-2 (invented)\n"
    "# condition: annealed\n"
    "# direction: axial\n"
    "# product form: rod\n"
    "# source: bench book 4\n"
    "# lineage: bench B\n"
    "# scale: IPTS-68\n"
    "# branch: cooling\n"
    "# reference temperature: 293.15 K\n"
    "# base: reference length\n"
    "# curve: coefficient [1e-6/K]\n"
    "# variable: T [K]\n"
    "# uncertainty: 2 % + 0.1 [1e-6/K] k=2 from 4 K to 300 K\n"
    "# uncertainty: 3 % from 300 K to 500 K limits\n"
    "# lot spread: 1 % from 4 K to 300 K\n"
    "# lot spread: 2 % from 300 K to 500 K\n"
    "# transition: 300 K step -0.0000125\n"
    "# transition: 450 K\n"
    "# transition: 600 K step 1e-6\n"
    "# note: first\n"
    "# note: second, with a comma\n"
    "from [K],to [K],power 0,power 1,power 2\n"
    "77,300,8,0.03125,-0.0000152587890625\n"
    "300,450,12.5,,\n"
    "450,500,14,0.0078125,\n";

/* In its own units everything comes back as it stood. The coefficients are some that survive being Chebyshev
   coefficients in 1/K, which are doubles; others come back one unit of the 17th digit off. */
START_TEST(same_text)
{
    kel_record *record = record_of(full);
    kel_text out = written(record, "K", "1e-6/K");
    ck_assert_str_eq(out.bytes, full);
    kel_text_free(&out);
    kel_record_free(record);
}
END_TEST

/* Every unit: written, read, and compared at points of every piece; then the modes. */
static const struct { const char *temperature, *value, *variable, *curve; } units[] = {
    { "K", "1/K", "# variable: T [K]\n", "# curve: coefficient [1/K]\n" },
    { "degC", "1e-6/K", "# variable: T [degC]\n", "# curve: coefficient [1e-6/K]\n" },
    { "degF", "uin/in/degF", "# variable: T [degF]\n", "# curve: coefficient [uin/(in.degF)]\n" },
    { "degR", "%/K", "# variable: T [degR]\n", "# curve: coefficient [%/K]\n" },
};

START_TEST(every_unit)
{
    kel_record *record = record_of(full);
    kel_text out = written(record, units[_i].temperature, units[_i].value);
    ck_assert_ptr_nonnull(strstr(out.bytes, units[_i].variable));
    ck_assert_msg(strstr(out.bytes, units[_i].curve) != NULL, "%s", out.bytes);
    kel_record *back = record_of(out.bytes);
    const kel_content *a = kel_record_content(record), *b = kel_record_content(back);
    ck_assert_uint_eq(a->piece_count, b->piece_count);
    ck_assert_uint_eq(a->transition_count, b->transition_count);
    for (size_t i = 0; i < a->piece_count; i++) {
        ck_assert_ulp(b->pieces[i].from, a->pieces[i].from, 0);
        ck_assert_ulp(b->pieces[i].to, a->pieces[i].to, 0);
        ck_assert_uint_eq(b->pieces[i].count, a->pieces[i].count);
    }
    for (size_t i = 0; i < a->transition_count; i++)
        ck_assert_ulp(b->mean.steps[i], a->mean.steps[i], 0);
    for (double t = 77; t <= 500; t += 9.4) {
        kel_answer x, y;
        ck_assert_int_eq(kel_record_coefficient(&x, record, t, NULL), kel_record_coefficient(&y, back, t, NULL));
        /* Three coefficients of terms up to 1.7e-5 1/K, two roundings each, and those of both evaluations. */
        ck_assert_abs_for(units[_i].temperature, y.value, x.value, 16 * DBL_EPSILON * 3 * 1.7e-5, "1/K");
        ck_assert_lre_for(units[_i].temperature, y.u_shared, x.u_shared, 13);
        ck_assert_lre_for(units[_i].temperature, y.u_lot, x.u_lot, 13);
    }
    kel_text_free(&out);
    kel_record_free(back);
    kel_record_free(record);
}
END_TEST

/* A fit's scatter cannot go along: a note says so, and what is read back claims no uncertainty. */
START_TEST(scatter_stays_behind)
{
    static const double c[] = { 12e-6, 1e-6 }, scatter[] = { 1e-8, 0 }, lot[] = { 12e-8, 1e-8 };
    static const kel_piece piece = { 100, 300, 0, 2 };
    static const kel_mode modes[] = {
        { KEL_MODE_FIT, "scatter", { scatter, NULL } }, { KEL_MODE_LOT, "lot spread 1 %", { lot, NULL } },
    };
    static const kel_source sources[] = {
        { .name = "a.csv", .material = "QV-5", .scale = "ITS-90", .reference_temperature = NAN },
        { .name = "b.csv", .material = "QV-5b", .scale = "IPTS-68", .source = "line one\nline two",
          .reference_temperature = NAN },
        { .name = "c.csv", .material = "QV-5", .reference_temperature = NAN },
    };
    kel_content content = {
        .form = "polynomial", .base = KEL_BASE_CURRENT, .reference_temperature = 293.15, .reference_defaulted = true,
            .range = { 100, 300 },
        .pieces = &piece, .piece_count = 1, .coefficient_count = 2, .mean = { c, NULL }, .modes = modes,
            .mode_count = 2,
        .variance = KEL_VARIANCE_ESTIMATED, .scatter_known = true, .parameters = 2, .degrees_of_freedom = NAN,
        .residual_standard_deviation = NAN, .chi2 = NAN, .sources = sources, .source_count = 3, .lot_spread = "1,0 %",
    };
    kel_record *record;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel_record_build(&record, &content, &err) == KEL_OK, "%s", err.message);
    kel_text out = written(record, "K", "1e-6/K");
    ck_assert_str_eq(out.bytes,
        "# material: QV-5; QV-5b\n"
        "# source: line one\\x0Aline two\n"
        "# base: current length\n"
        "# curve: coefficient [1e-6/K]\n"
        "# variable: T [K]\n"
        "# lot spread: 1.0 %\n"
        "# note: the record knows an uncertainty (scatter of the fit, errors shared by rows) that this file cannot "
        "carry\n"
        "from [K],to [K],power 0,power 1\n"
        "100,300,10,0.01\n");
    kel_record *back = record_of(out.bytes);
    const kel_content *b = kel_record_content(back);
    ck_assert_int_eq(b->variance, KEL_VARIANCE_NONE);
    ck_assert(b->reference_defaulted && b->base == KEL_BASE_CURRENT);
    kel_text_free(&out);
    kel_record_free(back);
    kel_record_free(record);
}
END_TEST

START_TEST(one_temperature)
{
    static const char text[] = "# base: reference length\n# curve: coefficient [1e-6/K]\n# variable: T [K]\nfrom "
                               "[K],to [K],power 0\n293.15,293.15,12\n";
    kel_record *record = record_of(text);
    kel_text out = written(record, "K", "1e-6/K");
    ck_assert_str_eq(out.bytes, text);
    kel_text_free(&out);
    kel_record_free(record);
}
END_TEST

START_TEST(arguments)
{
    kel_record *record = record_of("# curve: coefficient [1e-6/K]\n# variable: T [K]\nfrom [K],to [K],power "
                                   "0\n100,200,12\n");
    kel_text out = KEL_TEXT_INIT;
    kel_unit k, per;
    ck_assert_int_eq(kel_unit_parse(&k, KEL_DIM_TEMPERATURE, "K", 1, NULL), KEL_OK);
    ck_assert_int_eq(kel_unit_parse(&per, KEL_DIM_PER_KELVIN, "1/K", 3, NULL), KEL_OK);
    ck_assert_int_eq(kel_coefficients_format(NULL, record, &k, &per, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_coefficients_format(&out, NULL, &k, &per, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_coefficients_format(&out, record, NULL, &per, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_coefficients_format(&out, record, &k, NULL, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_coefficients_format(&out, record, &per, &per, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_coefficients_format(&out, record, &k, &k, NULL), KEL_E_ARGUMENT);
    ck_assert_uint_eq(out.size, 0);
    kel_record_free(record);
}
END_TEST

static TCase *
loops(void)
{
    TCase *tcase = tcase_create("units");
    tcase_add_loop_test(tcase, every_unit, 0, KEL_LENGTH(units));
    return tcase;
}

KEL_TCASE(texts, same_text, scatter_stays_behind, one_temperature, arguments)
KEL_TEST_MAIN("coefficients_format", loops, texts)
