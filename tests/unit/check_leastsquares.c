/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The generic polynomial fit: polynomials given exactly, coefficients and covariance against normal equations in 33
   digits, refusals; the limit of memory, and the plain way beyond it against the refined one. */
#include "unit.h"
#include "problem.h"
#include "quad.h"
#include "refine.h"

#include <float.h>
#include <string.h>

enum { N = 40, MOST = 11 };

/* A fixed sequence in -1..1 with little structure. */
static double
error_of(size_t i)
{
    return 2 * fmod((double)(i + 1) * 0.6180339887498949, 1.0) - 1;
}

static void
fitted(kel_status status, const kel_error *err, const char *label)
{
    ck_assert_msg(status == KEL_OK, "%s: %s", label, err->message);
}

/* Points lo..hi of y = sum_j c_j x^j with small integers c, whose values are whole numbers below 2^53: exact data. */
static const struct {
    const char *label;
    double lo, step;
    size_t n;
    int degree;
    bool constant;
    double c[MOST];
} exact[] = {
    { "constant", 3, 1, 5, 0, true, { 7 } },
    { "line", -10, 1, 21, 1, true, { 3, -2 } },
    { "line through the origin", 60, 1, 11, 1, false, { 4 } },
    { "line through the origin, two points", 1, 5, 2, 1, false, { -3 } },
    { "cubic", -20, 1, 41, 3, true, { 1, -1, 2, 5 } },
    { "cubic without constant, far from 0", 100, 1, 12, 3, false, { 9, -4, 3 } },
    { "quintic", 0, 1, 21, 5, true, { 1, 1, 1, 1, 1, 1 } },
    { "quintic through its own points only", -3, 1, 6, 5, true, { 6, 5, -4, 3, -2, 1 } },
    { "quadratic without constant, both signs", -8, 2, 9, 2, false, { 11, 13 } },
};

/* The solver's backward error is of order eps |y|; on coefficient j it shows magnified by what turns Chebyshev
   coefficients on lo..hi into powers: at most (1 + |middle|/half)^n 2^n/half^j. 32 covers the count of operations for
   these sizes. */
START_TEST(exact_polynomials)
{
    double x[N + 1], y[N + 1], coefficient[MOST], largest = 0;
    size_t n = exact[_i].n, k = (size_t)exact[_i].degree + exact[_i].constant;
    for (size_t i = 0; i < n; i++) {
        x[i] = exact[_i].lo + exact[_i].step * (double)i;
        y[i] = 0;
        for (size_t j = k; j-- > 0;)
            y[i] = y[i] * x[i] + exact[_i].c[j];
        if (!exact[_i].constant)
            y[i] *= x[i];
        largest = fmax(largest, fabs(y[i]));
    }
    kel_ls_result r = { .coefficient = coefficient };
    kel_error err = { 0 };
    ck_assert_msg(kel_ls_polynomial(&r, x, y, NULL, n, exact[_i].degree, exact[_i].constant, false, &err) == KEL_OK,
                  "%s: %s", exact[_i].label, err.message);
    double middle = (x[0] + x[n - 1]) / 2, half = (x[n - 1] - x[0]) / 2;
    if (k == 1)
        half = fmax(half, 1);
    for (size_t j = 0; j < k; j++) {
        double magnified =
            pow(2 * (1 + fabs(middle) / half), exact[_i].degree) / pow(half, (double)j + !exact[_i].constant);
        ck_assert_abs_for(exact[_i].label, coefficient[j], exact[_i].c[j],
                          32 * DBL_EPSILON * largest * fmax(magnified, 1e-3), "1");
    }
    ck_assert_uint_eq(r.degrees_of_freedom, n - k);
    ck_assert(isnan(r.chi2));
    ck_assert_double_ge(r.condition, 1);
    if (n == k)
        ck_assert(isnan(r.residual_standard_deviation));
    else
        ck_assert_abs_for(exact[_i].label, r.residual_standard_deviation, 0, 64 * DBL_EPSILON * largest, "1");
}
END_TEST

static const struct {
    const char *label;
    int degree;
    bool constant, u, scale;
    double lo, hi, decades; /* of x; over which u varies */
} random_sets[] = {
    { "plain", 3, true, false, false, -2, 5, 1 },
    { "scale without u changes nothing", 3, true, false, true, -2, 5, 1 },
    { "with u", 4, true, true, false, 0, 10, 1 },
    { "with u, scaled", 4, true, true, true, 0, 10, 1 },
    { "no constant", 3, false, false, false, 1, 4, 1 },
    { "no constant, with u", 2, false, true, false, -3, 4, 1 },
    { "no constant, with u, scaled, far from 0", 2, false, true, true, 50, 60, 1 },
    { "constant alone, with u", 0, true, true, false, 0, 1, 1 },
    { "degree 7", 7, true, true, false, -1, 1, 1 },
    { "u over five decades", 3, true, true, false, -2, 5, 5 },
    { "degree 10, far from 0, u over three decades", 10, true, true, false, -9, -3, 3 },
};

START_TEST(normal_equations)
{
    static double x[N], y[N], u[N], coefficient[MOST], deviation[MOST], covariance[MOST * MOST];
    int skip = random_sets[_i].constant ? 0 : 1;
    size_t k = (size_t)(random_sets[_i].degree + 1 - skip);
    static quad m[MOST * MOST], rhs[MOST], want[MOST], powers[N][MOST];
    quad sum_w = 0, sum = 0, rss = 0, total = 0;
    memset(m, 0, sizeof m);
    memset(rhs, 0, sizeof rhs);
    for (size_t i = 0; i < N; i++) {
        x[i] = random_sets[_i].lo + (random_sets[_i].hi - random_sets[_i].lo) * (double)i / (N - 1);
        y[i] = 2 + sin(x[i]) + 0.1 * error_of(i);
        u[i] = random_sets[_i].u ? pow(10, random_sets[_i].decades / 2 * error_of(3 * i + 1)) : 1;
        quad w = 1 / ((quad)u[i] * u[i]), p = skip == 0 ? 1 : (quad)x[i];
        for (size_t j = 0; j < k; j++, p *= x[i])
            powers[i][j] = p;
        for (size_t j = 0; j < k; j++) {
            rhs[j] += w * powers[i][j] * y[i];
            for (size_t l = 0; l < k; l++)
                m[j * k + l] += w * powers[i][j] * powers[i][l];
        }
        sum_w += w;
        sum += w * y[i];
    }
    quad_invert(m, k);
    for (size_t j = 0; j < k; j++) {
        want[j] = 0;
        for (size_t l = 0; l < k; l++)
            want[j] += m[j * k + l] * rhs[l];
    }
    for (size_t i = 0; i < N; i++) {
        quad w = 1 / ((quad)u[i] * u[i]), r = y[i], d = skip == 0 ? y[i] - sum / sum_w : y[i];
        for (size_t j = 0; j < k; j++)
            r -= want[j] * powers[i][j];
        rss += w * r * r;
        total += w * d * d;
    }
    quad variance = rss / (quad)(N - k), factor = random_sets[_i].u && !random_sets[_i].scale ? 1 : variance;

    kel_ls_result r = { .coefficient = coefficient, .standard_deviation = deviation, .covariance = covariance };
    const char *label = random_sets[_i].label;
    ck_assert_int_eq(kel_ls_polynomial(&r, x, y, random_sets[_i].u ? u : NULL, N, random_sets[_i].degree,
                                       random_sets[_i].constant, random_sets[_i].scale, NULL),
                     KEL_OK);
    /* A few eps, n terms and one rounding of each result. */
    for (size_t j = 0; j < k; j++) {
        double s = (double)quad_sqrt(m[j * k + j] * factor);
        ck_assert_lre_for(label, coefficient[j], (double)want[j], 14.5);
        ck_assert_lre_for(label, deviation[j], s, 14.5);
        for (size_t l = 0; l < k; l++) {
            double scale = (double)quad_sqrt(m[j * k + j] * m[l * k + l] * factor * factor);
            ck_assert_abs_for(label, (covariance[j * k + l] - (double)(m[j * k + l] * factor)) / scale, 0, 5e-15,
                              "of the standard deviations' product");
        }
    }
    ck_assert_lre_for(label, r.residual_sum_of_squares, (double)rss, 15);
    ck_assert_lre_for(label, r.residual_standard_deviation, (double)quad_sqrt(variance), 15);
    ck_assert_abs_for(label, r.r_squared, (double)(1 - rss / total), DBL_EPSILON, "1");
    if (random_sets[_i].u)
        ck_assert_double_eq(r.chi2, r.residual_sum_of_squares);
    else
        ck_assert(isnan(r.chi2));
}
END_TEST

/* As many points as parameters: the curve goes through them; what its coefficients are worth only u can say. */
START_TEST(no_degrees_of_freedom)
{
    const double x[] = { 1, 2, 4 }, y[] = { 1, 3, 2 }, u[] = { 0.1, 0.1, 0.2 };
    double c[3], s[3];
    kel_ls_result r = { .coefficient = c, .standard_deviation = s };
    ck_assert_int_eq(kel_ls_polynomial(&r, x, y, NULL, 3, 2, true, false, NULL), KEL_OK);
    ck_assert_uint_eq(r.degrees_of_freedom, 0);
    for (int j = 0; j < 3; j++)
        ck_assert(isnan(s[j]));
    for (int i = 0; i < 3; i++)
        ck_assert_abs(c[0] + x[i] * (c[1] + x[i] * c[2]), y[i], 64 * DBL_EPSILON, "1");
    ck_assert_int_eq(kel_ls_polynomial(&r, x, y, u, 3, 2, true, false, NULL), KEL_OK);
    /* Interpolation: c_2 = sum y_i/prod (x_i - x_j), so u^2 = sum (u_i/prod)^2, prod = 3, -2, 6. */
    ck_assert_lre(s[2], sqrt(0.01 / 9 + 0.01 / 4 + 0.04 / 36), 13);
    ck_assert_int_eq(kel_ls_polynomial(&r, x, y, u, 3, 2, true, true, NULL), KEL_OK);
    ck_assert(isnan(s[2]));
}
END_TEST

static const double one_to_four[] = { 1, 2, 3, 4 }, same[] = { 5, 5, 5, 5 }, zeros[] = { 0, 0, 0, 0 },
                    nan_third[] = { 1, 2, NAN, 4 }, infinite_last[] = { 1, 2, 3, INFINITY },
                    zero_second[] = { 1, 0, 1, 1 }, negative_first[] = { -1, 1, 1, 1 },
                    huge[] = { -1e308, 1e308, 0, 1 };
static const struct {
    const char *label;
    const double *x, *y, *u;
    size_t n;
    int degree;
    bool constant;
    kel_status status;
    size_t index;
} refusals[] = {
    { "x not a number", nan_third, one_to_four, NULL, 4, 1, true, KEL_E_ARGUMENT, 2 },
    { "y infinite", one_to_four, infinite_last, NULL, 4, 1, true, KEL_E_ARGUMENT, 3 },
    { "u zero", one_to_four, one_to_four, zero_second, 4, 1, true, KEL_E_ARGUMENT, 1 },
    { "u negative", one_to_four, one_to_four, negative_first, 4, 1, true, KEL_E_ARGUMENT, 0 },
    { "u infinite", one_to_four, one_to_four, infinite_last, 4, 1, true, KEL_E_ARGUMENT, 3 },
    { "no x", NULL, one_to_four, NULL, 4, 1, true, KEL_E_ARGUMENT, 0 },
    { "no y", one_to_four, NULL, NULL, 4, 1, true, KEL_E_ARGUMENT, 0 },
    { "degree below 0", one_to_four, one_to_four, NULL, 4, -1, true, KEL_E_ARGUMENT, 0 },
    { "degree 0 without constant", one_to_four, one_to_four, NULL, 4, 0, false, KEL_E_ARGUMENT, 0 },
    { "degree beyond the limit", one_to_four, one_to_four, NULL, 4, KEL_DEGREE_MAX + 1, true, KEL_E_ARGUMENT, 0 },
    { "fewer points than coefficients", one_to_four, one_to_four, NULL, 4, 4, true, KEL_E_RANK, 0 },
    { "just enough points", one_to_four, one_to_four, NULL, 4, 4, false, KEL_OK, 0 },
    { "no points", one_to_four, one_to_four, NULL, 0, 0, true, KEL_E_RANK, 0 },
    { "one x for a line", same, one_to_four, NULL, 4, 1, true, KEL_E_RANK, 0 },
    { "one x for a line through the origin", same, one_to_four, NULL, 4, 1, false, KEL_OK, 0 },
    { "only 0 for a line through the origin", zeros, one_to_four, NULL, 4, 1, false, KEL_E_RANK, 0 },
    { "one x for a constant", same, one_to_four, NULL, 4, 0, true, KEL_OK, 0 },
    { "a width beyond doubles", huge, one_to_four, NULL, 4, 1, true, KEL_E_RANGE, 0 },
};

START_TEST(refuses)
{
    double c[KEL_DEGREE_MAX + 2];
    kel_ls_result r = { .coefficient = c };
    kel_error err = { .line = 0 };
    kel_status status = kel_ls_polynomial(&r, refusals[_i].x, refusals[_i].y, refusals[_i].u, refusals[_i].n,
                                          refusals[_i].degree, refusals[_i].constant, false, &err);
    ck_assert_msg(status == refusals[_i].status, "%s: status %d (%s)", refusals[_i].label, status, err.message);
    ck_assert_msg(err.line == refusals[_i].index, "%s: index %zu", refusals[_i].label, err.line);
}
END_TEST

START_TEST(needs_a_place_for_the_coefficients)
{
    kel_ls_result r = { .coefficient = NULL };
    ck_assert_int_eq(kel_ls_polynomial(&r, one_to_four, one_to_four, NULL, 4, 1, true, false, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_ls_polynomial(NULL, one_to_four, one_to_four, NULL, 4, 1, true, false, NULL), KEL_E_ARGUMENT);
}
END_TEST

/* Two columns of length 1 at the angle c: singular values sqrt(1 +- |c|). */
START_TEST(condition_in_closed_form)
{
    const double x[] = { 0, 1, 4 }, y[] = { 1, 0, 2 };
    double b[2], t = -0.5;
    kel_ls_result r = { .coefficient = b };
    kel_error err = { 0 };
    fitted(kel_ls_polynomial(&r, x, y, NULL, 3, 1, true, false, &err), &err, "line");
    double c = fabs(-1 + t + 1) / sqrt(3 * (1 + t * t + 1));
    ck_assert_lre(r.condition, sqrt((1 + c) / (1 - c)), 14.5);
}
END_TEST

/* n (parameters + 1) <= 2^22 is refined, one point more is not; both ways give the mean. */
START_TEST(limit)
{
    size_t most = (size_t)1 << 21;
    double *x = calloc(most + 1, sizeof *x), *y = calloc(most + 1, sizeof *y), b;
    ck_assert(x != NULL && y != NULL);
    for (size_t i = 0; i <= most; i++)
        y[i] = i % 2 == 0 ? 3 : 1;
    kel_ls_result r = { .coefficient = &b };
    kel_error err = { 0 };
    for (size_t n = most - 2; n <= most + 1; n++) {
        fitted(kel_ls_polynomial(&r, x, y, NULL, n, 0, true, false, &err), &err, "mean");
        ck_assert_msg(r.refined == (n <= most), "%zu points", n);
        ck_assert_lre_for("mean", b, 2 + (n % 2 == 1 ? 1 / (double)n : 0), r.refined ? 15.5 : 13);
        ck_assert_lre_for("residual sum", r.residual_sum_of_squares, (double)n - (n % 2 == 1 ? 1 / (double)n : 0), 14);
    }
    free(x);
    free(y);
}
END_TEST

/* Beyond the limit (degree 5 from 599,187 points) the factor alone answers; the pairs of a refined solution of the same
   points, which the inner function gives without looking at memory, say what it is worth: eps times condition, n rows
   summed in blocks. Coefficients are compared in their standard deviations. */
START_TEST(plain_against_refined)
{
    size_t n = 600000, p = 6;
    double *x = calloc(n, sizeof *x), *y = calloc(n, sizeof *y), *u = calloc(n, sizeof *u), b[6], sd[6];
    ck_assert(x != NULL && y != NULL && u != NULL);
    for (size_t i = 0; i < n; i++) {
        x[i] = 2 * (double)i / (double)(n - 1) - 1;
        y[i] = exp(x[i]) + 1e-3 * error_of(i);
        u[i] = 1 + 0.5 * error_of(7 * i);
    }
    kel_ls_result r = { .coefficient = b, .standard_deviation = sd };
    kel_error err = { 0 };
    fitted(kel_ls_polynomial(&r, x, y, u, n, 5, true, false, &err), &err, "plain");
    ck_assert(!r.refined);
    ck_assert(!kel__ls_fits(n, p));
    ck_assert(kel__ls_fits(599186, p) && !kel__ls_fits(599187, p));
    kel_arena *memory = kel_arena_new();
    kel__ls_data d = { .x = x, .y = y, .u = u, .n = n, .y_scale = 1, .u_scale = 1 };
    kel__ls_frame f = { p, true, 0, 1, 1 };
    kel__ls_solved s = { .rank = 0 };
    fitted(kel__ls_refine(&s, &f, &d, memory, &err), &err, "refined");
    ck_assert_int_eq(s.rank, (int)p);
    ck_assert_lre(r.condition, s.condition, 12);
    ck_assert_lre(r.chi2, s.rss.hi, 12);
    /* Powers of T_0..T_5: rows of the map from Chebyshev coefficients. */
    const double map[6][6] = { { 1, 0, -1, 0, 1, 0 },  { 0, 1, 0, -3, 0, 5 }, { 0, 0, 2, 0, -8, 0 },
                               { 0, 0, 0, 4, 0, -20 }, { 0, 0, 0, 0, 8, 0 },  { 0, 0, 0, 0, 0, 16 } };
    for (size_t j = 0; j < p; j++) {
        quad sum = 0;
        for (size_t k = 0; k < p; k++)
            for (size_t i = j; i <= k; i++)
                sum += (quad)map[j][i] * s.inverse[k * p + i] * ((quad)s.z[k].hi + s.z[k].lo);
        ck_assert_abs_for("coefficient", (b[j] - (double)sum) / sd[j], 0, 1e-9, "standard deviations");
        ck_assert_lre_for("coefficient", b[j], (double)sum, 11);
    }
    kel_arena_free(memory);
    free(x);
    free(y);
    free(u);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, exact_polynomials, 0, KEL_LENGTH(exact));
    tcase_add_loop_test(c, normal_equations, 0, KEL_LENGTH(random_sets));
    tcase_add_loop_test(c, refuses, 0, KEL_LENGTH(refusals));
    return c;
}

KEL_TCASE(single, no_degrees_of_freedom, needs_a_place_for_the_coefficients, condition_in_closed_form, limit,
          plain_against_refined)
KEL_TEST_MAIN("leastsquares", loops, single)
