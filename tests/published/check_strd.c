/* SPDX-License-Identifier: GPL-3.0-or-later */
/* NIST StRD, linear least squares: certified coefficients, standard deviations, residual deviation, R^2 and residual
   sum of squares through the solver that makes every fit.

   How many digits can be asked for follows from the set, not from what came out. A backward stable solution in the
   Chebyshev basis A (n by p, A = QR) on the range of x is the exact one of data disturbed by D = K u (|b| + |A| |c|),
   with u = eps/2 and K = n; the coefficient of x^k is row m of the map from Chebyshev to powers, so (first order; A.
   Bjorck, Numerical Methods for Least Squares Problems, 1996, theorem 1.4.6)

       |dB| <= |m R^-1| (D + K u |A| |r| |R^-1|) + u sum |m_j c_j|
       |d sd|/sd <= K u |A| |R^-1| + u sum |m_j| |(R^-1)_j| / |m R^-1| + |d s|/s,      |d s| <= D/sqrt(nu)

   All of that is computed here in 33 digits by normal equations, which also holds the transcription of the data against
   the certified coefficients. 14 digits are the most that 15 certified ones can show.

   Data, certified values and sources: strd_*.csv. */
#include <ctype.h>
#include <float.h>
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

enum { POINTS = 82, TERMS = 11 };
static const double U = DBL_EPSILON / 2.0, SHOWN = 14.0;

static const struct { const char *name; int degree; bool constant; } sets[] = {
    { "Norris", 1, true }, { "Pontius", 2, true }, { "NoInt1", 1, false }, { "Filip", 10, true },
    { "Wampler1", 5, true }, { "Wampler2", 5, true }, { "Wampler4", 5, true },
};

typedef struct problem {
    size_t n, p, skip;              /* rows, parameters, 1 without constant */
    quad x[POINTS], y[POINTS];
    quad a[POINTS][TERMS];
    quad map[TERMS][TERMS];         /* map[k][j]: coefficient of x^(k + skip) in basis function j */
    quad inverse[TERMS * TERMS];    /* (A'A)^-1 */
    quad c[TERMS];                  /* solution in the Chebyshev basis */
    quad rss, tss;
    double norm_a, norm_b, norm_c, norm_r, norm_inverse; /* Frobenius and 2-norms; inverse: of R^-1 */
    double condition;               /* Frobenius condition number of A with columns of unit length */
} problem;

static void
read_data(problem *q, const char *name)
{
    char path[64];
    int at = snprintf(path, sizeof path, "tests/published/strd_");
    for (const char *s = name; *s != '\0'; s++)
        path[at++] = (char)tolower((unsigned char)*s);
    snprintf(path + at, sizeof path - (size_t)at, ".csv");
    figures *f = figures_read(path);
    q->n = f->rows;
    ck_assert_uint_le(q->n, POINTS);
    for (size_t i = 0; i < q->n; i++) {
        q->x[i] = quad_read(figures_text(f, i, "x"));
        q->y[i] = quad_read(figures_text(f, i, "y"));
    }
    figures_free(f);
}

/* Basis T_j(t), t = (x - middle)/half; without constant T_j(t) - T_j(t at x = 0), which spans x, x^2, ... */
static void
build(problem *q)
{
    quad lo = q->x[0], hi = q->x[0];
    for (size_t i = 1; i < q->n; i++) {
        lo = q->x[i] < lo ? q->x[i] : lo;
        hi = q->x[i] > hi ? q->x[i] : hi;
    }
    quad middle = (lo + hi) / 2, half = (hi - lo) / 2;
    for (size_t i = 0; i < q->n; i++)
        for (size_t j = 0; j < q->p; j++)
            q->a[i][j] = quad_chebyshev(j + q->skip, (q->x[i] - middle) / half)
                - (q->skip ? quad_chebyshev(j + q->skip, -middle / half) : 0);
    /* Powers of x in T_j by its recurrence; x^0 drops out without constant. */
    quad t[TERMS + 1][TERMS + 1] = { { 1 } };
    for (size_t j = 1; j < q->p + q->skip; j++)
        for (size_t k = 0; k <= j; k++) {
            quad value = ((k > 0 ? t[j - 1][k - 1] : 0) - middle * t[j - 1][k]) / half;
            t[j][k] = j == 1 ? value : 2 * value - t[j - 2][k];
        }
    for (size_t k = 0; k < q->p; k++)
        for (size_t j = 0; j < q->p; j++)
            q->map[k][j] = t[j + q->skip][k + q->skip];
}

static void
solve(problem *q)
{
    quad right[TERMS] = { 0 }, sum_y = 0, sum_a = 0, sum_b = 0, sum_c = 0, trace = 0, scaled = 0, squares[TERMS];
    for (size_t j = 0; j < q->p; j++)
        for (size_t k = 0; k < q->p; k++) {
            quad g = 0;
            for (size_t i = 0; i < q->n; i++)
                g += q->a[i][j] * q->a[i][k];
            q->inverse[j * q->p + k] = g;
            if (j == k)
                sum_a += squares[j] = g;
        }
    for (size_t i = 0; i < q->n; i++) {
        sum_y += q->y[i];
        sum_b += q->y[i] * q->y[i];
        for (size_t j = 0; j < q->p; j++)
            right[j] += q->a[i][j] * q->y[i];
    }
    quad_invert(q->inverse, q->p);
    for (size_t j = 0; j < q->p; j++) {
        q->c[j] = 0;
        for (size_t k = 0; k < q->p; k++)
            q->c[j] += q->inverse[j * q->p + k] * right[k];
        sum_c += q->c[j] * q->c[j];
        trace += q->inverse[j * q->p + j];
        scaled += squares[j] * q->inverse[j * q->p + j];
    }
    q->rss = 0;
    for (size_t i = 0; i < q->n; i++) {
        quad r = q->y[i];
        for (size_t j = 0; j < q->p; j++)
            r -= q->a[i][j] * q->c[j];
        q->rss += r * r;
    }
    q->tss = q->skip ? sum_b : sum_b - sum_y * sum_y / (quad)q->n;
    q->norm_a = (double)quad_sqrt(sum_a);
    q->norm_b = (double)quad_sqrt(sum_b);
    q->norm_c = (double)quad_sqrt(sum_c);
    q->norm_r = (double)quad_sqrt(q->rss);
    q->norm_inverse = (double)quad_sqrt(trace);
    q->condition = (double)quad_sqrt((quad)q->p * scaled);
}

static double
digits(double got, double want)
{
    double d = fabs(got - want);
    return d == 0.0 ? 17.0 : fmin(17.0, -log10(want == 0.0 ? d : d / fabs(want)));
}

/* `error`: the bound, absolute. A certified zero is held to the bound itself. */
static void
hold(const char *set, const char *item, double got, double want, double error)
{
    char label[64];
    snprintf(label, sizeof label, "%s %s", set, item);
    if (want == 0.0) {
        printf("%-20s %24.16e  certified 0, off by at most %.1e\n", label, got, error);
        ck_assert_abs_for(label, got, 0.0, error, "1");
        return;
    }
    double asked = fmin(SHOWN, -log10(error / fabs(want)));
    printf("%-20s %24.16e  %5.2f digits (%.2f asked)\n", label, got, digits(got, want), asked);
    ck_assert_lre_for(label, got, want, asked);
}

START_TEST(certified)
{
    const char *set = sets[_i].name;
    static problem q;
    q = (problem){ .skip = sets[_i].constant ? 0 : 1 };
    q.p = (size_t)sets[_i].degree + 1 - q.skip;
    read_data(&q, set);
    build(&q);
    solve(&q);

    double x[POINTS], y[POINTS], b[TERMS], sd[TERMS], covariance[TERMS * TERMS];
    for (size_t i = 0; i < q.n; i++) {
        x[i] = (double)q.x[i];
        y[i] = (double)q.y[i];
    }
    kel_ls_result fit = { .coefficient = b, .standard_deviation = sd, .covariance = covariance };
    kel_error err = { 0 };
    made(kel_ls_polynomial(&fit, x, y, NULL, q.n, sets[_i].degree, sets[_i].constant, false, &err), &err, set);
    ck_assert_uint_eq(fit.degrees_of_freedom, q.n - q.p);
    /* p times the 2-norm condition bounds the Frobenius one, which bounds the 2-norm one. */
    printf("%-20s condition %.3g (Frobenius %.3g)\n", set, fit.condition, q.condition);
    ck_assert_double_le(fit.condition, q.condition * (1.0 + 1e-9));
    ck_assert_double_ge(fit.condition, q.condition / (double)q.p * (1.0 - 1e-9));

    figures *f = figures_read("tests/published/strd_certified.csv");
    double K = (double)q.n, nu = (double)(q.n - q.p), D = K * U * (q.norm_b + q.norm_a * q.norm_c);
    double error_s = D / sqrt(nu), s = q.norm_r / sqrt(nu);
    for (size_t k = 0; k < q.p; k++) {
        char item[16];
        snprintf(item, sizeof item, "B%zu", k + q.skip);
        size_t row = figures_row(f, "dataset", set, "item", item);
        quad length = 0, exact = 0;
        double rounding = 0.0, rounding_sd = 0.0;
        for (size_t j = 0; j < q.p; j++) {
            for (size_t l = 0; l < q.p; l++)
                length += q.map[k][j] * q.inverse[j * q.p + l] * q.map[k][l];
            exact += q.map[k][j] * q.c[j];
            rounding += U * fabs((double)(q.map[k][j] * q.c[j]));
            rounding_sd += U * fabs((double)q.map[k][j]) * (double)quad_sqrt(q.inverse[j * q.p + j]);
        }
        double lever = (double)quad_sqrt(length); /* |m R^-1| */
        double want = figures_number(f, row, "certified"), want_sd = figures_number(f, row, "certified_sd");
        ck_assert_lre_for("certified against 33 digits", (double)exact, want, SHOWN);
        hold(set, item, b[k], want, lever * (D + K * U * q.norm_a * q.norm_r * q.norm_inverse) + rounding);
        snprintf(item, sizeof item, "sd(B%zu)", k + q.skip);
        hold(set, item, sd[k], want_sd,
             s * (lever * K * U * q.norm_a * q.norm_inverse + rounding_sd) + lever * error_s);
        ck_assert_lre_for("variance", covariance[k * q.p + k], sd[k] * sd[k], 15.0);
    }
    size_t row = figures_row(f, "dataset", set, "item", "residual_sd");
    hold(set, "s", fit.residual_standard_deviation, figures_number(f, row, "certified"), error_s);
    row = figures_row(f, "dataset", set, "item", "residual_ss");
    double error_rss = 2.0 * q.norm_r * D + D * D;
    hold(set, "RSS", fit.residual_sum_of_squares, figures_number(f, row, "certified"), error_rss);
    row = figures_row(f, "dataset", set, "item", "R2");
    hold(set, "R2", fit.r_squared, figures_number(f, row, "certified"), error_rss / (double)q.tss + 4.0 * DBL_EPSILON);
    figures_free(f);
}
END_TEST

static TCase *
strd(void)
{
    TCase *c = tcase_create("strd");
    tcase_add_loop_test(c, certified, 0, KEL_LENGTH(sets));
    return c;
}

KEL_TEST_MAIN("strd", strd)
