/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Answers as a caller gets them: uncertainty and its parts, covariance, errors, and the short forms. */
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

static specimen s;

static const kel_record *
some_record(uint64_t *state, size_t modes, kel_base base)
{
    specimen_make(&s, state, 1 + random_below(state, 3), random_below(state, 8), modes, base, 2e-5);
    return &s.record;
}

static kel_query
some_query(uint64_t *state, const kel_content *c)
{
    const double lo = c->range.lo, hi = c->range.hi;
    return (kel_query){ .quantity = (kel_quantity)random_below(state, 6), .from = random_between(state, lo, hi),
                        .to = random_between(state, lo, hi), .at = random_between(state, lo, hi),
                        .reference = random_between(state, lo, hi), .base = (int)random_below(state, 2) };
}

/* The covariance C = sum_k l_k l_k' of all coefficients and steps, and J C J' with the answers' derivatives by each of
   them: the direct formula, in quadruple precision, from unit curves in place of the modes. */
enum { PARAMETERS_MAX = 3 * 8 + 3 };
static specimen units;

static void
jacobian(double *j, const kel_content *c, const kel_query *q)
{
    size_t n = c->coefficient_count + c->transition_count;
    kel_content unit = *c;
    memset(&units, 0, sizeof units);
    for (size_t i = 0; i < n; i++) {
        if (i < c->coefficient_count)
            units.coefficients[i][i] = 1.0;
        else
            units.steps[i][i - c->coefficient_count] = 1.0;
        units.modes[i].curve = (kel_curve){ units.coefficients[i], units.steps[i] };
    }
    unit.modes = units.modes;
    unit.mode_count = n;
    kel_query resolved;
    kel__plan plan;
    ck_assert_int_eq(kel__query_resolve(&resolved, &unit, q, NULL), KEL_OK);
    ck_assert_int_eq(kel__plan_make(&plan, &unit, &resolved, NULL), KEL_OK);
    kel__plan_gradient(j, &plan, &unit, 0, n);
}

static double
parameter(const kel_content *c, size_t mode, size_t i)
{
    const kel_curve *curve = &c->modes[mode].curve;
    return i < c->coefficient_count ? curve->coefficients[i] : curve->steps[i - c->coefficient_count];
}

/* J_a C J_b' over the modes of a kind (-1: all), and the sum of its terms' sizes, which carries the rounding. */
static double
direct(double *size, const kel_content *c, const double *ja, const double *jb, int kind)
{
    size_t n = c->coefficient_count + c->transition_count;
    __float128 sum = 0, all = 0;
    for (size_t a = 0; a < n; a++)
        for (size_t b = 0; b < n; b++) {
            __float128 C = 0, absolute = 0;
            for (size_t m = 0; m < c->mode_count; m++)
                if (kind < 0 || (int)c->modes[m].kind == kind) {
                    __float128 product = (__float128)parameter(c, m, a) * parameter(c, m, b);
                    C += product;
                    absolute += fabsq(product);
                }
            sum += ja[a] * C * jb[b];
            all += fabsq(ja[a] * absolute * jb[b]);
        }
    *size = (double)all;
    return (double)sum;
}

START_TEST(modes_equal_the_direct_formula)
{
    uint64_t state = 1;
    for (int round = 0; round < 60; round++) {
        const kel_record *record = some_record(&state, round % 2 == 0 ? 5 : SPECIMEN_MODES, (kel_base)(round / 2 % 2));
        const kel_content *c = &record->content;
        kel_query a = some_query(&state, c), b = some_query(&state, c);
        kel_answer answer;
        double covariance, size, ja[PARAMETERS_MAX], jb[PARAMETERS_MAX];
        ck_assert_int_ge(kel_record_answer(&answer, record, &a, NULL), KEL_OK);
        ck_assert_int_ge(kel_record_covariance(&covariance, record, &a, &b, NULL), KEL_OK);
        jacobian(ja, c, &a);
        jacobian(jb, c, &b);
        const double parts[] = { answer.u_fit, answer.u_shared, answer.u_lot };
        double u2 = 0.0;
        /* Each factor of a term has the relative rounding of a row and its sum: (n + 4) eps with n below 27. */
        const double relative = 2.0 * (PARAMETERS_MAX + 4) * DBL_EPSILON;
        for (int kind = 0; kind < 3; kind++) {
            double want = direct(&size, c, ja, ja, kind);
            ck_assert_abs_for("u^2 of a part", parts[kind] * parts[kind], want, relative * size, "u^2");
            u2 += parts[kind] * parts[kind];
        }
        ck_assert_lre_for("u^2", answer.u * answer.u, u2, 15);
        double want = direct(&size, c, ja, jb, -1);
        ck_assert_abs_for("covariance", covariance, want, relative * size, "u^2");
    }
}
END_TEST

START_TEST(covariance_is_symmetric_and_holds_u)
{
    uint64_t state = 2;
    for (int round = 0; round < 300; round++) {
        const kel_record *record = some_record(&state, 1 + random_below(&state, SPECIMEN_MODES), (kel_base)(round % 2));
        kel_query a = some_query(&state, &record->content), b = some_query(&state, &record->content);
        double ab, ba, aa;
        kel_answer answer;
        kel_status status = kel_record_covariance(&ab, record, &a, &b, NULL);
        ck_assert_int_eq(kel_record_covariance(&ba, record, &b, &a, NULL), status);
        ck_assert(ab == ba);
        status = kel_record_covariance(&aa, record, &a, &a, NULL);
        ck_assert_int_eq(kel_record_answer(&answer, record, &a, NULL), status);
        ck_assert_lre_for("cov(a, a) = u^2", aa, answer.u * answer.u, 14);
    }
}
END_TEST

START_TEST(short_forms_are_the_records_own)
{
    uint64_t state = 3;
    for (int round = 0; round < 200; round++) {
        const kel_record *record = some_record(&state, 4, (kel_base)(round % 2));
        const kel_content *c = &record->content;
        const double a = random_between(&state, c->range.lo, c->range.hi);
        const double b = random_between(&state, c->range.lo - 4.0, c->range.hi + 40.0);
        kel_answer got[5], want;
        kel_status status[5] = {
            kel_record_coefficient(&got[0], record, b, NULL), kel_record_mean(&got[1], record, a, b, NULL),
            kel_record_expansion(&got[2], record, b, NULL), kel_record_integral(&got[3], record, a, b, NULL),
            kel_record_length_ratio(&got[4], record, a, b, NULL),
        };
        for (int i = 0; i < 5; i++) {
            const kel_query q = { (kel_quantity)i, a, b, a, c->reference_temperature, (int)c->base };
            ck_assert_int_eq(kel_record_answer(&want, record, &q, NULL), status[i]);
            ck_assert(got[i].value == want.value && got[i].u == want.u && got[i].flags == want.flags);
            ck_assert(got[i].u_fit == want.u_fit && got[i].u_shared == want.u_shared && got[i].u_lot == want.u_lot);
        }
    }
}
END_TEST

/* u(e(Tref)) = 0, u(ratio) = 0 from a temperature to itself; the mean's limit is the coefficient, or that times 1 + e.
   */
START_TEST(limits)
{
    uint64_t state = 4;
    for (int round = 0; round < 200; round++) {
        const kel_record *record = some_record(&state, 4, (kel_base)(round % 2));
        const kel_content *c = &record->content;
        double t = random_between(&state, c->range.lo, c->range.hi);
        kel_answer answer, alpha, e;
        ck_assert_int_eq(kel_record_expansion(&answer, record, c->reference_temperature, NULL), KEL_OK);
        ck_assert(answer.value == 0.0 && answer.u == 0.0);
        ck_assert_int_eq(kel_record_length_ratio(&answer, record, t, t, NULL), KEL_OK);
        ck_assert(answer.value == 1.0 && answer.u == 0.0);
        ck_assert_int_eq(kel_record_mean(&answer, record, t, t, NULL), KEL_OK);
        kel_record_coefficient(&alpha, record, t, NULL);
        kel_record_expansion(&e, record, t, NULL);
        if (c->base == KEL_BASE_REFERENCE)
            ck_assert(answer.value == alpha.value && answer.u == alpha.u);
        else
            ck_assert_ulp_for("alpha (1 + e)", answer.value, alpha.value * (1.0 + e.value), 4);
    }
}
END_TEST

START_TEST(unknown_uncertainty)
{
    uint64_t state = 5;
    const kel_record *record = some_record(&state, 0, KEL_BASE_REFERENCE);
    kel_answer answer;
    kel_error err = { 0 };
    ck_assert_int_eq(kel_record_coefficient(&answer, record, record->content.range.lo, &err), KEL_OK);
    ck_assert_uint_eq(answer.flags, KEL_FLAG_UNKNOWN_U);
    ck_assert(isfinite(answer.value) && isnan(answer.u));
    ck_assert(isnan(answer.u_fit) && isnan(answer.u_shared) && isnan(answer.u_lot));
    ck_assert_int_eq(err.code, KEL_OK);
    const kel_query q = { KEL_COEFFICIENT, 0.0, record->content.range.lo, 0.0, NAN, -1 };
    double covariance = 1.0;
    ck_assert_int_eq(kel_record_covariance(&covariance, record, &q, &q, &err), KEL_E_DATA);
    ck_assert(isnan(covariance) && err.code == KEL_E_DATA);
}
END_TEST

#define ANY NAN /* a field that the quantity does not use */

static const struct bad_row {
    const char *label;
    kel_query query;
    kel_status want;
    const char *message;
} bad_rows[] = {
    { "T NaN", { KEL_COEFFICIENT, ANY, NAN, ANY, NAN, -1 }, KEL_E_ARGUMENT, "T = nan K" },
    { "T infinite", { KEL_COEFFICIENT, ANY, HUGE_VAL, ANY, NAN, -1 }, KEL_E_ARGUMENT, "T = inf K" },
    { "T minus infinite", { KEL_EXPANSION, ANY, -HUGE_VAL, ANY, NAN, -1 }, KEL_E_ARGUMENT, "T = -inf K" },
    { "T below 0 K", { KEL_EXPANSION, ANY, -0.5, ANY, NAN, -1 }, KEL_E_RANGE, "T = -0.5 K is below 0 K" },
    { "T just below 0 K", { KEL_COEFFICIENT, ANY, -5e-324, ANY, NAN, -1 }, KEL_E_RANGE, "is below 0 K" },
    { "from NaN", { KEL_MEAN, NAN, 300, ANY, NAN, -1 }, KEL_E_ARGUMENT, "from = nan K" },
    { "from below 0 K", { KEL_INTEGRAL, -1, 300, ANY, NAN, -1 }, KEL_E_RANGE, "from = -1 K" },
    { "to infinite", { KEL_LENGTH_RATIO, 300, HUGE_VAL, ANY, NAN, -1 }, KEL_E_ARGUMENT, "to = inf K" },
    { "at NaN", { KEL_CHANGE, 300, 310, NAN, NAN, -1 }, KEL_E_ARGUMENT, "at = nan K" },
    { "at below 0 K", { KEL_CHANGE, 300, 310, -2, NAN, -1 }, KEL_E_RANGE, "at = -2 K" },
    { "reference infinite", { KEL_MEAN, 300, 310, ANY, HUGE_VAL, -1 }, KEL_E_ARGUMENT, "reference = inf K" },
    { "reference below 0 K", { KEL_MEAN, 300, 310, ANY, -3, -1 }, KEL_E_RANGE, "reference = -3 K" },
    { "unknown base", { KEL_MEAN, 300, 310, ANY, NAN, 2 }, KEL_E_ARGUMENT, "base 2" },
    { "unknown base below", { KEL_MEAN, 300, 310, ANY, NAN, -2 }, KEL_E_ARGUMENT, "base -2" },
    { "unknown quantity", { (kel_quantity)6, 300, 310, ANY, NAN, -1 }, KEL_E_ARGUMENT, "quantity 6" },
    { "beyond a double", { KEL_INTEGRAL, 300, 1e300, ANY, NAN, -1 }, KEL_E_RANGE, "1e300" },
    { "0 K", { KEL_COEFFICIENT, ANY, 0, ANY, NAN, -1 }, KEL_W_EXTRAPOLATED, NULL },
    { "minus 0 K", { KEL_COEFFICIENT, ANY, -0.0, ANY, NAN, -1 }, KEL_W_EXTRAPOLATED, NULL },
    { "0 K to 0 K", { KEL_CHANGE, 0, 0, 0, 0, KEL_BASE_CURRENT }, KEL_W_EXTRAPOLATED, NULL },
};

START_TEST(errors_and_edges)
{
    const struct bad_row *row = &bad_rows[_i];
    uint64_t state = 6;
    specimen_make(&s, &state, 1, 6, 2, KEL_BASE_REFERENCE, 1e-5);
    kel_answer answer = { 1, 1, 1, 1, 1, 0 };
    kel_error err = { 0 };
    kel_status got = kel_record_answer(&answer, &s.record, &row->query, &err);
    ck_assert_msg(got == row->want, "%s: status %d", row->label, (int)got);
    double covariance = 1.0;
    const kel_query good = { KEL_COEFFICIENT, ANY, 300, ANY, NAN, -1 };
    if (got >= KEL_OK) {
        ck_assert_msg(isfinite(answer.value) && isfinite(answer.u) && err.code == KEL_OK, "%s", row->label);
        return;
    }
    ck_assert_msg(isnan(answer.value) && isnan(answer.u) && isnan(answer.u_fit) && isnan(answer.u_shared) &&
                  isnan(answer.u_lot) && answer.flags == KEL_FLAG_UNKNOWN_U, "%s: output", row->label);
    ck_assert_int_eq(err.code, row->want);
    ck_assert_msg(strstr(err.message, row->message) != NULL, "%s: %s", row->label, err.message);
    ck_assert_int_eq(kel_record_covariance(&covariance, &s.record, &good, &row->query, NULL), row->want);
    ck_assert(isnan(covariance));
    covariance = 1.0;
    ck_assert_int_eq(kel_record_covariance(&covariance, &s.record, &row->query, &good, NULL), row->want);
    ck_assert(isnan(covariance));
}
END_TEST

START_TEST(missing_objects)
{
    uint64_t state = 7;
    const kel_record *record = some_record(&state, 2, KEL_BASE_REFERENCE);
    const kel_query q = { KEL_COEFFICIENT, ANY, 300, ANY, NAN, -1 };
    kel_answer answer = { 1, 1, 1, 1, 1, 0 };
    double covariance = 1.0;
    ck_assert_int_eq(kel_record_answer(NULL, record, &q, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_answer(&answer, NULL, &q, NULL), KEL_E_ARGUMENT);
    ck_assert(isnan(answer.value) && isnan(answer.u));
    ck_assert_int_eq(kel_record_answer(&answer, record, NULL, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_coefficient(&answer, NULL, 300.0, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_covariance(NULL, record, &q, &q, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_covariance(&covariance, NULL, &q, &q, NULL), KEL_E_ARGUMENT);
    ck_assert(isnan(covariance));
    ck_assert_int_eq(kel_record_covariance(&covariance, record, &q, NULL, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_covariance(&covariance, record, NULL, &q, NULL), KEL_E_ARGUMENT);
}
END_TEST

static TCase *
errors(void)
{
    TCase *c = tcase_create("errors");
    tcase_add_loop_test(c, errors_and_edges, 0, KEL_LENGTH(bad_rows));
    tcase_add_test(c, missing_objects);
    return c;
}

KEL_TCASE(answers, modes_equal_the_direct_formula, covariance_is_symmetric_and_holds_u, short_forms_are_the_records_own,
          limits, unknown_uncertainty)
KEL_TEST_MAIN("answer", answers, errors)
