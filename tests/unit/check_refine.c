/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Refined polynomial least squares: arithmetic in pairs, the two ways against each other and against solutions known
   exactly, ill-conditioned designs up to where they are refused, scales, the limit of memory. */
#include "unit.h"
#include "problem.h"
#include "quad.h"
#include "refine.h"

#include <float.h>
#include <string.h>

enum { N = 60, MOST = 12 };

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

/* ---- pairs ---- */

/* What a compiler that takes sums for associative or contracts products would destroy. */
START_TEST(arithmetic_is_not_rearranged)
{
    volatile double one = 1, tiny = 0x1p-60, third = 1.0 / 3;
    kel__twofold s = kel__two_sum(one, tiny);
    ck_assert_double_eq(s.hi, 1);
    ck_assert_double_eq(s.lo, 0x1p-60);
    kel__twofold p = kel__two_mul(kel__two(third), kel__two(third));
    ck_assert((quad)p.hi + p.lo == (quad)third * third);
    ck_assert_double_ne(p.lo, 0);
}
END_TEST

/* Sums of products that cancel 25 digits: within (n u)^2 sum |a b| of the sum in 33 digits. */
START_TEST(gathered_sums)
{
    kel__twofold sum = { 0, 0 }, one = { 0, 0 };
    quad want = 0, want_one = 0;
    double absolute = 0;
    for (size_t i = 0; i < 2 * N; i++) {
        double size = i % 2 == 0 ? 1e12 : -1e12;
        kel__twofold a = kel__two_sum(size * (1 + error_of(i / 2)), 1e-6 * error_of(i));
        kel__twofold b = kel__two_sum(1 + 1e-13 * error_of(i), 1e-18 * error_of(2 * i));
        kel__two_gather(&sum, a, b);
        kel__two_gather_one(&one, a, b.hi);
        want += ((quad)a.hi + a.lo) * ((quad)b.hi + b.lo);
        want_one += ((quad)a.hi + a.lo) * b.hi;
        absolute += fabs(a.hi * b.hi);
    }
    double limit = 2 * N * DBL_EPSILON * N * DBL_EPSILON * absolute;
    sum = kel__two_gathered(sum);
    one = kel__two_gathered(one);
    ck_assert_double_lt(fabs((double)want), 1e-8 * absolute);
    ck_assert_abs((double)((quad)sum.hi + sum.lo - want), 0, limit, "1");
    ck_assert_abs((double)((quad)one.hi + one.lo - want_one), 0, limit, "1");
    ck_assert_double_le(fabs(sum.lo), DBL_EPSILON * fabs(sum.hi));
}
END_TEST

/* ---- the parts ---- */

START_TEST(inverse_of_a_triangle)
{
    enum { STRIDE = 5, SIZE = 4 };
    double r[STRIDE * SIZE] = { 0 }, t[SIZE * SIZE];
    for (size_t j = 0; j < SIZE; j++)
        for (size_t i = 0; i <= j; i++)
            r[j * STRIDE + i] = i == j ? 2 : error_of(j * SIZE + i);
    kel__triangle_inverse(t, r, STRIDE, SIZE);
    for (size_t j = 0; j < SIZE; j++)
        for (size_t i = 0; i < SIZE; i++) {
            double sum = 0;
            for (size_t k = 0; k < SIZE; k++)
                sum += (k >= i ? r[k * STRIDE + i] : 0) * t[j * SIZE + k];
            ck_assert_abs(sum, i == j, 8 * DBL_EPSILON, "1");
        }
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

/* ---- solutions known exactly ---- */

/* y = sum of x^k, k <= degree, in pairs (whole numbers and binary fractions of at most 106 bits), x in a cluster of
   `inner` points 1 + i 2^-bits and four far away: the narrower the cluster the worse the condition. */
static const struct { const char *label; int degree, bits; bool constant; kel_status status; double least, most; } clusters[] = {
    { "spread out", 9, 4, true, KEL_OK, 1e9, 1e12 },
    { "narrow", 9, 5, true, KEL_OK, 1e11, 1e13 },
    { "narrow, no constant", 9, 5, false, KEL_OK, 1e9, 1e13 },
    { "as bad as is promised", 7, 8, true, KEL_OK, 1e11, 1e13 },
    { "worse than doubles carry", 9, 8, true, KEL_E_RANK, 0, 0 },
    { "hopeless", 11, 6, true, KEL_E_RANK, 0, 0 },
};

START_TEST(exact_polynomials_in_clusters)
{
    double x[24], y[24], y_lo[24], b[MOST + 1], sd[MOST + 1];
    const double outer[] = { 120, 171, 240, 255 };
    const char *label = clusters[_i].label;
    size_t p = (size_t)clusters[_i].degree + clusters[_i].constant;
    for (size_t i = 0; i < 24; i++) {
        x[i] = i < 20 ? 1 + ldexp((double)i, -clusters[_i].bits) : outer[i - 20];
        quad v = 0;
        for (int k = clusters[_i].degree; k >= 0; k--)
            v = v * x[i] + (k > 0 || clusters[_i].constant ? 1 : 0);
        y[i] = (double)v;
        y_lo[i] = (double)(v - y[i]);
        ck_assert((quad)y[i] + y_lo[i] == v);
    }
    kel_ls_result r = { .coefficient = b, .standard_deviation = sd };
    kel_error err = { 0 };
    kel_status status = kel_ls_polynomial_pairs(&r, x, NULL, y, y_lo, NULL, 24, clusters[_i].degree, clusters[_i].constant,
                                                false, &err);
    ck_assert_msg(status == clusters[_i].status, "%s: status %d, condition %g", label, status, r.condition);
    for (size_t k = 0; k < p && status == KEL_OK; k++)
        ck_assert_lre_for(label, b[k], 1, 14);
    if (status == KEL_OK)
        ck_assert_msg(r.condition >= clusters[_i].least && r.condition <= clusters[_i].most, "%s: condition %g", label,
                      r.condition);
}
END_TEST

/* d is orthogonal to all polynomials of degree 5 on 0..20 (R. Wampler, J. Am. Statist. Assoc. 65 (1970) 549): however
   large its factor, the coefficients stay 1 and the residual is factor d. Their standard deviations are up to 2e13. */
START_TEST(residuals_far_above_the_curve)
{
    const double d[] = { 759, -2048, 2048, -2048, 2523, -2048, 2048, -2048, 1838, -2048, 2048 };
    for (double factor = 1; factor <= 1e10; factor *= 1e5) {
        double x[21], y[21], b[6];
        quad rss = 0;
        for (size_t i = 0; i < 21; i++) {
            double v = 0, residual = factor * d[i <= 10 ? i : 20 - i];
            x[i] = (double)i;
            for (int k = 5; k >= 0; k--)
                v = v * x[i] + 1;
            y[i] = v + residual;
            rss += (quad)residual * residual;
        }
        kel_ls_result r = { .coefficient = b };
        kel_error err = { 0 };
        fitted(kel_ls_polynomial(&r, x, y, NULL, 21, 5, true, false, &err), &err, "alternating");
        for (size_t k = 0; k < 6; k++)
            ck_assert_lre_for("coefficient", b[k], 1, 14);
        ck_assert_lre_for("residual sum", r.residual_sum_of_squares, (double)rss, 15);
    }
}
END_TEST

/* A third and a tenth, which no double holds: pairs carry them to 31 digits, whatever way they are cut in two. */
START_TEST(pairs_carry_what_doubles_cannot)
{
    double x[N], x_lo[N], y[N], y_lo[N], b[2], plain[2];
    for (size_t i = 0; i < N; i++) {
        quad a = (quad)i / 3, v = (quad)7 / 10 + a / 10;
        x[i] = (double)a;
        x_lo[i] = (double)(a - x[i]);
        y[i] = i % 2 == 0 ? (double)v : (double)(v / 3);
        y_lo[i] = (double)(v - y[i]); /* for odd i larger than y */
    }
    kel_ls_result r = { .coefficient = b }, p = { .coefficient = plain };
    kel_error err = { 0 };
    fitted(kel_ls_polynomial_pairs(&r, x, x_lo, y, y_lo, NULL, N, 1, true, false, &err), &err, "pairs");
    ck_assert_ulp(b[0], 0.7, 1);
    ck_assert_ulp(b[1], 0.1, 1);
    ck_assert_double_lt(r.residual_standard_deviation, 1e-29);
    /* The values of odd points lost half their bits in the second cut, as a sum of doubles they are off by an ulp. */
    for (size_t i = 0; i < N; i++)
        y[i] += y_lo[i];
    fitted(kel_ls_polynomial_pairs(&p, x, NULL, y, NULL, NULL, N, 1, true, false, &err), &err, "doubles");
    ck_assert_double_gt(p.residual_standard_deviation, 1e-18);
    ck_assert_double_lt(p.residual_standard_deviation, 4 * DBL_EPSILON);
    x_lo[3] = NAN;
    ck_assert_int_eq(kel_ls_polynomial_pairs(&r, x, x_lo, y, NULL, NULL, N, 1, true, false, &err), KEL_E_ARGUMENT);
    ck_assert_uint_eq(err.line, 3);
    y_lo[5] = INFINITY;
    ck_assert_int_eq(kel_ls_polynomial_pairs(&r, x, NULL, y, y_lo, NULL, N, 1, true, false, &err), KEL_E_ARGUMENT);
    ck_assert_uint_eq(err.line, 5);
}
END_TEST

/* Normal equations in 33 digits in the same basis, which at these conditions leave more than doubles show. */
static const struct { const char *label; int degree; bool constant, u; double lo, hi; } random_sets[] = {
    { "line", 1, true, false, 3, 4 },
    { "cubic, weights over five decades", 3, true, true, -2, 5 },
    { "no constant, far from 0", 4, false, false, 50, 60 },
    { "no constant, weights, both signs", 5, false, true, -3, 4 },
    { "degree 10, weights", 10, true, true, -9, -3 },
};

START_TEST(normal_equations)
{
    static double x[N], y[N], u[N], b[MOST], sd[MOST], covariance[MOST * MOST];
    static quad m[MOST * MOST], rhs[MOST], power[N][MOST], want[MOST];
    size_t skip = random_sets[_i].constant ? 0 : 1, p = (size_t)random_sets[_i].degree + 1 - skip;
    const char *label = random_sets[_i].label;
    memset(m, 0, sizeof m);
    memset(rhs, 0, sizeof rhs);
    for (size_t i = 0; i < N; i++) {
        x[i] = random_sets[_i].lo + (random_sets[_i].hi - random_sets[_i].lo) * (double)i / (N - 1);
        y[i] = 2 + sin(x[i]) + 0.1 * error_of(i);
        u[i] = random_sets[_i].u ? exp(5.8 * error_of(3 * i + 1)) : 1;
        quad v = 1;
        for (size_t k = 0; k < p + skip; k++, v *= x[i])
            if (k >= skip)
                power[i][k - skip] = v / u[i];
        for (size_t k = 0; k < p; k++) {
            rhs[k] += power[i][k] * y[i] / u[i];
            for (size_t l = 0; l < p; l++)
                m[k * p + l] += power[i][k] * power[i][l];
        }
    }
    quad_invert(m, p);
    for (size_t k = 0; k < p; k++) {
        want[k] = 0;
        for (size_t l = 0; l < p; l++)
            want[k] += m[k * p + l] * rhs[l];
    }
    kel_ls_result r = { .coefficient = b, .standard_deviation = sd, .covariance = covariance };
    kel_error err = { 0 };
    fitted(kel_ls_polynomial(&r, x, y, u, N, random_sets[_i].degree, !skip, false, &err), &err, label);
    quad rss = 0;
    for (size_t i = 0; i < N; i++) {
        quad d = (quad)y[i] / u[i];
        for (size_t k = 0; k < p; k++)
            d -= power[i][k] * want[k];
        rss += d * d;
    }
    ck_assert_lre_for(label, r.chi2, (double)rss, 14.5);
    ck_assert_lre_for(label, r.residual_standard_deviation, (double)quad_sqrt(rss / (quad)(N - p)), 14.5);
    for (size_t k = 0; k < p; k++) {
        ck_assert_lre_for(label, b[k], (double)want[k], 14);
        ck_assert_lre_for(label, sd[k], (double)quad_sqrt(m[k * p + k]), 14.5);
        for (size_t l = 0; l < p; l++)
            ck_assert_abs_for(label, covariance[k * p + l] / (sd[k] * sd[l]),
                              (double)(m[k * p + l] / quad_sqrt(m[k * p + k] * m[l * p + l])), 1e-14, "1");
    }
}
END_TEST

/* ---- rank ---- */

/* `distinct` different x, over and over: degree distinct - 1 is carried, the next is not, whatever rounding leaves of it. */
START_TEST(as_many_terms_as_different_points)
{
    double x[N], y[N], b[MOST];
    size_t distinct = (size_t)_i;
    for (size_t i = 0; i < N; i++) {
        x[i] = 0.1 + (double)(i % distinct) * 0.7;
        y[i] = error_of(i);
    }
    kel_ls_result r = { .coefficient = b };
    kel_error err = { 0 };
    fitted(kel_ls_polynomial(&r, x, y, NULL, N, (int)distinct - 1, true, false, &err), &err, "enough");
    ck_assert_int_eq(kel_ls_polynomial(&r, x, y, NULL, N, (int)distinct, true, false, &err), KEL_E_RANK);
    char says[64];
    snprintf(says, sizeof says, "only %zu of %zu coefficients", distinct, distinct + 1);
    ck_assert_msg(strstr(err.message, says) != NULL, "%s", err.message);
    fitted(kel_ls_polynomial(&r, x, y, NULL, N, (int)distinct, false, false, &err), &err, "enough, no constant");
    ck_assert_int_eq(kel_ls_polynomial(&r, x, y, NULL, N, (int)distinct + 1, false, false, &err), KEL_E_RANK);
}
END_TEST

/* ---- scales ---- */

/* Powers of two on values and uncertainties go through to the last bit, also where squares leave the range. */
static const struct { const char *label; int value, uncertainty; } scales[] = {
    { "values 2^-1000", -1000, 0 }, { "values 2^900", 900, 0 }, { "uncertainties 2^-700", 0, -700 },
    { "uncertainties 2^700", 0, 700 }, { "both", -600, -620 },
};

START_TEST(scales_go_through)
{
    double x[N], y[N], u[N], b[4], sd[4], scaled_y[N], scaled_u[N], scaled_b[4], scaled_sd[4];
    int v = scales[_i].value, w = scales[_i].uncertainty;
    for (size_t i = 0; i < N; i++) {
        x[i] = 300 + (double)i;
        y[i] = 1.5 + error_of(i) + 0.01 * (double)i;
        u[i] = 0.5 + 0.4 * error_of(5 * i);
        scaled_y[i] = ldexp(y[i], v);
        scaled_u[i] = ldexp(u[i], w);
    }
    for (int with_u = 0; with_u <= 1; with_u++)
        for (int scale = 0; scale <= with_u; scale++) {
            kel_ls_result r = { .coefficient = b, .standard_deviation = sd };
            kel_ls_result s = { .coefficient = scaled_b, .standard_deviation = scaled_sd };
            kel_error err = { 0 };
            fitted(kel_ls_polynomial(&r, x, y, with_u ? u : NULL, N, 3, true, scale, &err), &err, "as it is");
            fitted(kel_ls_polynomial(&s, x, scaled_y, with_u ? scaled_u : NULL, N, 3, true, scale, &err), &err,
                   scales[_i].label);
            for (size_t k = 0; k < 4; k++) {
                ck_assert_ulp_for(scales[_i].label, scaled_b[k], ldexp(b[k], v), 0);
                ck_assert_ulp_for(scales[_i].label, scaled_sd[k], ldexp(sd[k], with_u && !scale ? w : v), 0);
            }
            ck_assert_ulp_for(scales[_i].label, s.r_squared, r.r_squared, 0);
            ck_assert_ulp_for(scales[_i].label, s.residual_standard_deviation,
                              ldexp(r.residual_standard_deviation, with_u ? v - w : v), 0);
        }
}
END_TEST

START_TEST(equal_values)
{
    double x[N], y[N], b[2], sd[2];
    for (size_t i = 0; i < N; i++) {
        x[i] = (double)i;
        y[i] = 0.1;
    }
    kel_ls_result r = { .coefficient = b, .standard_deviation = sd };
    kel_error err = { 0 };
    fitted(kel_ls_polynomial(&r, x, y, NULL, N, 1, true, false, &err), &err, "equal");
    ck_assert_double_eq(b[0], 0.1);
    ck_assert_abs(b[1], 0, 1e-30, "1");
    ck_assert_abs(sd[0], 0, 1e-30, "1");
    ck_assert(isnan(r.r_squared));
    memset(y, 0, sizeof y);
    fitted(kel_ls_polynomial(&r, x, y, NULL, N, 1, false, false, &err), &err, "zero");
    ck_assert_double_eq(b[0], 0);
    ck_assert_double_eq(sd[0], 0);
    ck_assert(isnan(r.r_squared));
}
END_TEST

/* ---- the limit of memory ---- */

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
    kel__ls_frame f = { p, true, 0, 1 };
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
    tcase_add_loop_test(c, exact_polynomials_in_clusters, 0, KEL_LENGTH(clusters));
    tcase_add_loop_test(c, normal_equations, 0, KEL_LENGTH(random_sets));
    tcase_add_loop_test(c, as_many_terms_as_different_points, 1, 8);
    tcase_add_loop_test(c, scales_go_through, 0, KEL_LENGTH(scales));
    return c;
}

KEL_TCASE(single, arithmetic_is_not_rearranged, gathered_sums, inverse_of_a_triangle, condition_in_closed_form,
          residuals_far_above_the_curve, pairs_carry_what_doubles_cannot, equal_values, limit, plain_against_refined)
KEL_TEST_MAIN("refine", loops, single)
