/* SPDX-License-Identifier: GPL-3.0-or-later */
/* NIST StRD, linear least squares: certified coefficients, standard deviations, residual deviation, R^2 and residual
   sum of squares through the polynomial fits, from data read as doubles and from decimal text as pairs of doubles.

   Digits asked for, of the 15 that are certified:

                   coefficients   deviations   R^2     what limits them
       doubles     13             13.5         14      the rounding of the data to doubles
       text        14             14           14      the rounding of the certificates: half a unit of the 15th digit

   and in place of a certified 0 at most 1e-14. The residual sum goes with the square of the deviation: a third of a
   digit less from doubles. The transcription of the data is held by the digits from text.

   Stress sets beyond NIST's, condition above 1e13, have exact solutions (stress_exact.py) and data that doubles hold
   exactly: 14 digits of everything either way.

   Data, certified values and sources: strd_*.csv, stress_*.csv. `make truth` prints the digits. */
#include <math.h>

#include "../support/making.h"
#include "../support/sets.h"

static const struct { const char *folder_and_prefix, *name, *certified; } sets[] = {
    { "tests/published/strd_", "norris", "tests/published/strd_linear_certified.csv" },
    { "tests/published/strd_", "pontius", "tests/published/strd_linear_certified.csv" },
    { "tests/published/strd_", "noint1", "tests/published/strd_linear_certified.csv" },
    { "tests/published/strd_", "filip", "tests/published/strd_linear_certified.csv" },
    { "tests/published/strd_", "wampler1", "tests/published/strd_linear_certified.csv" },
    { "tests/published/strd_", "wampler2", "tests/published/strd_linear_certified.csv" },
    { "tests/published/strd_", "wampler4", "tests/published/strd_linear_certified.csv" },
    { "tests/published/stress_", "plain", "tests/published/stress_certified.csv" },
    { "tests/published/stress_", "weighted", "tests/published/stress_certified.csv" },
};
static const double ZERO = 1e-14;

typedef struct asked { double coefficient, deviation, sum, r2; } asked;
static const asked from_doubles = { 13.0, 13.5, 13.2, 14.0 }, from_text = { 14.0, 14.0, 14.0, 14.0 };

static void
hold(const char *set, const char *entry, const char *item, double got, quad want, double digits)
{
    char label[64];
    snprintf(label, sizeof label, "%s from %s, %s", set, entry, item);
    if (want == 0)
        ck_assert_abs_for(label, got, 0, ZERO, "1");
    else
        ck_assert_msg(set_digits(got, want) >= digits, "%s: got %.17g, certified %.17g: %.2f digits, %g are asked for",
                      label, got, (double)want, set_digits(got, want), digits);
}

static void
hold_all(const char *name, const char *entry, const ls_certificates *certified, const ls_set *s, const kel_ls_result *r,
         asked a)
{
    size_t p = (size_t)s->degree + s->constant, skip = s->constant ? 0 : 1;
    const struct { const char *item; double got, digits; } whole[] = {
        { "residual_sd", r->residual_standard_deviation, a.deviation },
        { "residual_ss", r->residual_sum_of_squares, a.sum },
        { "R2", r->r_squared, a.r2 },
    };
    for (size_t k = 0; k < p; k++) {
        char item[16];
        snprintf(item, sizeof item, "B%zu", k + skip);
        const ls_certificate *c = certificate_find(certified, name, item);
        ck_assert_msg(c != NULL && c->has_sd, "%s: no certificate of %s", name, item);
        hold(name, entry, item, r->coefficient[k], c->value, a.coefficient);
        hold(name, entry, item, r->standard_deviation[k], c->sd, a.deviation);
        double variance = r->standard_deviation[k] * r->standard_deviation[k];
        ck_assert_lre_for("variance", r->covariance[k * p + k], variance, 15);
    }
    for (size_t k = 0; k < sizeof whole / sizeof whole[0]; k++) {
        const ls_certificate *c = certificate_find(certified, name, whole[k].item);
        ck_assert_msg(c != NULL, "%s: no certificate of %s", name, whole[k].item);
        hold(name, entry, whole[k].item, whole[k].got, c->value, whole[k].digits);
    }
}

START_TEST(certified)
{
    const char *name = sets[_i].name;
    char path[128], why[SET_WHY];
    ls_set s;
    ls_certificates c;
    snprintf(path, sizeof path, "%s%s.csv", sets[_i].folder_and_prefix, name);
    ck_assert_msg(set_read(&s, why, kel_test_file(path)), "%s: %s", path, why);
    ck_assert_msg(certificates_read(&c, why, kel_test_file(sets[_i].certified)), "%s: %s", sets[_i].certified, why);

    double b[SET_TERMS], sd[SET_TERMS];
    static double covariance[SET_TERMS * SET_TERMS];
    kel_ls_result r = { .coefficient = b, .standard_deviation = sd, .covariance = covariance };
    kel_error err = { 0 };
    bool exact = strncmp(sets[_i].certified, "tests/published/stress", 22) == 0;
    made(kel_ls_polynomial(&r, s.x, s.y, s.u, s.n, s.degree, s.constant, false, &err), &err, name);
    ck_assert_uint_eq(r.degrees_of_freedom, s.n - (size_t)s.degree - s.constant);
    ck_assert(r.refined);
    hold_all(name, "doubles", &c, &s, &r, exact ? from_text : from_doubles);
    made(kel_ls_polynomial_pairs(&r, s.x, s.x_lo, s.y, s.y_lo, s.u, s.n, s.degree, s.constant, false, &err), &err,
         name);
    hold_all(name, "text", &c, &s, &r, from_text);
    if (exact)
        ck_assert_double_gt(r.condition, 1e13);
    set_free(&s);
    certificates_free(&c);
}
END_TEST

/* The order of the rows is no part of the data: the same digits, backwards. */
START_TEST(backwards)
{
    char why[SET_WHY];
    ls_set s;
    ls_certificates c;
    ck_assert_msg(set_read(&s, why, kel_test_file("tests/published/strd_filip.csv")), "%s", why);
    ck_assert_msg(certificates_read(&c, why, kel_test_file("tests/published/strd_linear_certified.csv")), "%s", why);
    double *const columns[] = { s.x, s.x_lo, s.y, s.y_lo };
    for (size_t k = 0; k < 4; k++)
        for (size_t i = 0; i < s.n / 2; i++) {
            double v = columns[k][i];
            columns[k][i] = columns[k][s.n - 1 - i];
            columns[k][s.n - 1 - i] = v;
        }
    double b[SET_TERMS], sd[SET_TERMS], covariance[SET_TERMS * SET_TERMS];
    kel_ls_result r = { .coefficient = b, .standard_deviation = sd, .covariance = covariance };
    kel_error err = { 0 };
    made(kel_ls_polynomial_pairs(&r, s.x, s.x_lo, s.y, s.y_lo, NULL, s.n, s.degree, true, false, &err), &err, "filip");
    hold_all("filip", "text, backwards", &c, &s, &r, from_text);
    set_free(&s);
    certificates_free(&c);
}
END_TEST

static TCase *
strd(void)
{
    TCase *c = tcase_create("strd");
    tcase_add_loop_test(c, certified, 0, KEL_LENGTH(sets));
    tcase_add_test(c, backwards);
    return c;
}

KEL_TEST_MAIN("strd", strd)
