/* SPDX-License-Identifier: GPL-3.0-or-later */
/* JCGM 100:2008, annex H.3: calibration of a thermometer by a straight line b(t) = y1 + y2 (t - 20 degC), with standard
   deviations, correlation and the uncertainty of a predicted correction. Through the plain-array solver in x = t - 20
   degC.

   Published figures (rounded) and recomputed ones (12 digits) with their source: gum_h3.csv. The readings are decimals,
   and t - 20 in doubles is off by 4e-15 at most, which in y1 is 1e-17: far below the 12th digit. */
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

enum { N = 11 };

START_TEST(line)
{
    figures *f = figures_read("tests/published/gum_h3.csv");
    ck_assert_uint_eq(f->rows, N);
    double x[N], b[N];
    for (size_t i = 0; i < N; i++) {
        x[i] = (double)(quad_read(figures_text(f, i, "t_C")) - 20);
        b[i] = figures_number(f, i, "b_C");
    }
    figures_free(f);
    double y[2], s[2], v[4];
    kel_ls_result fit = { .coefficient = y, .standard_deviation = s, .covariance = v };
    kel_error err = { 0 };
    made(kel_ls_polynomial(&fit, x, b, NULL, N, 1, true, false, &err), &err, "line");
    double r = v[1] / (s[0] * s[1]), b30 = y[0] + 10.0 * y[1], u30 = sqrt(v[0] + 20.0 * v[1] + 100.0 * v[3]);
    printf("GUM H.3: y1 = %.12g, s = %.12g; y2 = %.12g, s = %.12g; r = %.12g; s = %.12g; b(30) = %.12g, u = %.12g\n",
           y[0], s[0], y[1], s[1], r, fit.residual_standard_deviation, b30, u30);
    const struct { const char *name; double got; const char *published, *recomputed; } rows[] = {
        { "y1", y[0], "-0.1712", "-0.171203790131" },
        { "s(y1)", s[0], "0.0029", "0.00287759783516" },
        { "y2", y[1], "0.00218", "0.00218269773989" },
        { "s(y2)", s[1], "0.00067", "0.000667938773228" },
        { "r(y1, y2)", r, "-0.930", "-0.930429603093" },
        { "s", fit.residual_standard_deviation, "0.0035", "0.00349756396351" },
        { "b(30 degC)", b30, "-0.1494", "-0.149376812732" },
        { "u(b(30 degC))", u30, "0.0041", "0.00413859575285" },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        ck_assert_published_for(rows[i].name, rows[i].got, rows[i].published);
        ck_assert_published_for(rows[i].name, rows[i].got, rows[i].recomputed);
    }
    ck_assert_uint_eq(fit.degrees_of_freedom, 9);
    ck_assert(isnan(fit.chi2));
    ck_assert_ulp(v[1], v[2], 0);
    ck_assert_lre(v[0], s[0] * s[0], 15.0);
    ck_assert_lre(v[3], s[1] * s[1], 15.0);
    ck_assert_lre(fit.residual_sum_of_squares, 9.0 * fit.residual_standard_deviation * fit.residual_standard_deviation,
                  15.0);
}
END_TEST

/* With a stated u the covariance is what u gives; scaled by the residuals it is the one above. Both follow from the
   unweighted result by a factor: u/s or 1. */
START_TEST(line_with_u)
{
    figures *f = figures_read("tests/published/gum_h3.csv");
    double x[N], b[N], u[N], y[2], s[2];
    for (size_t i = 0; i < N; i++) {
        x[i] = (double)(quad_read(figures_text(f, i, "t_C")) - 20);
        b[i] = figures_number(f, i, "b_C");
        u[i] = 0.007;
    }
    figures_free(f);
    kel_ls_result fit = { .coefficient = y, .standard_deviation = s };
    kel_error err = { 0 };
    made(kel_ls_polynomial(&fit, x, b, u, N, 1, true, false, &err), &err, "stated u");
    const double factor = 0.007 / 0.00349756396351; /* 12 digits */
    ck_assert_published(y[0], "-0.171203790131");
    ck_assert_lre(s[0], 0.00287759783516 * factor, 11.0);
    ck_assert_lre(s[1], 0.000667938773228 * factor, 11.0);
    ck_assert_lre(fit.chi2, 9.0 / (factor * factor), 11.0);
    made(kel_ls_polynomial(&fit, x, b, u, N, 1, true, true, &err), &err, "scaled");
    ck_assert_published(s[0], "0.00287759783516");
    ck_assert_published(s[1], "0.000667938773228");
}
END_TEST

KEL_TCASE(gum_h3, line, line_with_u)
KEL_TEST_MAIN("gum_h3", gum_h3)
