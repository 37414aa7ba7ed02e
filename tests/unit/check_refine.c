/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Refined polynomial least squares: solutions known exactly, ill-conditioned designs up to where they are refused,
   scales. */
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

/* ---- solutions known exactly ---- */

/* y = sum of (x/256)^k, k <= degree, in pairs; x in a cluster of 20 points 1 + i 2^-bits and four far away: the
   narrower the cluster the worse the condition. */
static const struct {
    const char *label;
    int degree, bits;
    bool constant;
    kel_status status;
    double least, most; /* condition */
} clusters[] = {
    { "spread out", 9, 4, true, KEL_OK, 1e9, 1e12 },
    { "narrow", 9, 5, true, KEL_OK, 1e11, 1e14 },
    { "narrow, no constant", 9, 5, false, KEL_OK, 1e9, 1e13 },
    { "degree 7, very narrow", 7, 12, true, KEL_OK, 1e13, 1e14 },
    { "as bad as is promised", 9, 6, true, KEL_OK, 1e14, 1e15 },
    { "worse than doubles carry", 9, 8, true, KEL_E_RANK, 0, 0 },
    { "hopeless", 11, 6, true, KEL_E_RANK, 0, 0 },
};

/* 14 digits, or what 2^-100 of the largest value makes of a coefficient: for u = 1 that times its standard
   uncertainty. */
START_TEST(exact_polynomials_in_clusters)
{
    double x[24], y[24], y_lo[24], u[24], b[MOST + 1], sd[MOST + 1], most = 0;
    const double outer[] = { 120, 171, 240, 255 };
    const char *label = clusters[_i].label;
    size_t skip = clusters[_i].constant ? 0 : 1, p = (size_t)clusters[_i].degree + 1 - skip;
    for (size_t i = 0; i < 24; i++) {
        x[i] = i < 20 ? 1 + ldexp((double)i, -clusters[_i].bits) : outer[i - 20];
        quad v = 0;
        for (size_t k = p + skip; k-- > 0;)
            v = v * x[i] / 256 + (k >= skip ? 1 : 0);
        y[i] = (double)v;
        y_lo[i] = (double)(v - y[i]);
        u[i] = 1;
        most = fmax(most, fabs(y[i]));
    }
    kel_ls_result r = { .coefficient = b, .standard_deviation = sd };
    kel_error err = { 0 };
    kel_status status = kel_ls_polynomial_pairs(&r, x, NULL, y, y_lo, u, 24, clusters[_i].degree, clusters[_i].constant,
                                                false, &err);
    ck_assert_msg(status == clusters[_i].status, "%s: status %d, condition %g", label, status, r.condition);
    for (size_t k = 0; k < p && status == KEL_OK; k++) {
        double want = ldexp(1, -8 * (int)(k + skip));
        ck_assert_abs_for(label, b[k], want, fmax(1e-14 * want, 0x1p-100 * most * sd[k]), "1");
    }
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

/* A third and a tenth, which no double holds: pairs carry them to 31 digits, whichever part stands first. */
START_TEST(pairs_carry_what_doubles_cannot)
{
    double x[N], x_lo[N], y[N], y_lo[N], b[2], plain[2];
    for (size_t i = 0; i < N; i++) {
        quad a = (quad)i / 3, v = (quad)7 / 10 + a / 10;
        double *first = i % 2 == 0 ? y : y_lo, *second = i % 2 == 0 ? y_lo : y;
        x[i] = (double)a;
        x_lo[i] = (double)(a - x[i]);
        first[i] = (double)v;
        second[i] = (double)(v - first[i]);
    }
    kel_ls_result r = { .coefficient = b }, p = { .coefficient = plain };
    kel_error err = { 0 };
    fitted(kel_ls_polynomial_pairs(&r, x, x_lo, y, y_lo, NULL, N, 1, true, false, &err), &err, "pairs");
    ck_assert_ulp(b[0], 0.7, 1);
    ck_assert_ulp(b[1], 0.1, 1);
    ck_assert_double_lt(r.residual_standard_deviation, 1e-29);
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

/* ---- rank ---- */

/* `distinct` different x, over and over: degree distinct - 1 is carried, the next is not, whatever rounding leaves of
   it. */
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

/* The same for x, with and without constant; powers of x then scale by powers. */
START_TEST(abscissas_scale)
{
    double x[N], y[N], b[3], sd[3], scaled_x[N], scaled_b[3], scaled_sd[3];
    for (int e = -400; e <= 400; e += 200)
        for (int constant = 0; constant <= 1; constant++) {
            for (size_t i = 0; i < N; i++) {
                x[i] = 3 + 0.1 * (double)i;
                scaled_x[i] = ldexp(x[i], e);
                y[i] = 1 + error_of(i);
            }
            kel_ls_result r = { .coefficient = b, .standard_deviation = sd };
            kel_ls_result s = { .coefficient = scaled_b, .standard_deviation = scaled_sd };
            kel_error err = { 0 };
            fitted(kel_ls_polynomial(&r, x, y, NULL, N, 2, constant, false, &err), &err, "as it is");
            fitted(kel_ls_polynomial(&s, scaled_x, y, NULL, N, 2, constant, false, &err), &err, "scaled");
            for (int k = 0; k < 2 + constant; k++) {
                ck_assert_ulp_for("coefficient", scaled_b[k], ldexp(b[k], -e * (k + 1 - constant)), 0);
                ck_assert_ulp_for("deviation", scaled_sd[k], ldexp(sd[k], -e * (k + 1 - constant)), 0);
            }
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

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, exact_polynomials_in_clusters, 0, KEL_LENGTH(clusters));
    tcase_add_loop_test(c, as_many_terms_as_different_points, 1, 8);
    tcase_add_loop_test(c, scales_go_through, 0, KEL_LENGTH(scales));
    return c;
}

KEL_TCASE(single, inverse_of_a_triangle, residuals_far_above_the_curve, pairs_carry_what_doubles_cannot,
          abscissas_scale, equal_values)
KEL_TEST_MAIN("refine", loops, single)
