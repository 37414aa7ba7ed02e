/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Polynomial least squares on plain arrays: no physics, any x. The same solver as the fits. */
#ifndef KELSPAN_LEASTSQUARES_H
#define KELSPAN_LEASTSQUARES_H

#include <stdbool.h>
#include <kelspan/status.h>

#ifdef __cplusplus
extern "C" {
#endif

/* Results in powers of x: y = sum_k coefficient[k] x^k, k from 0 (or from 1 without constant; then index 0 is x^1). The
   caller's arrays, each with room for `parameters` numbers, covariance (may be NULL) for parameters^2. */
typedef struct kel_ls_result {
    double *coefficient, *standard_deviation, *covariance;
    double residual_standard_deviation, residual_sum_of_squares; /* weighted by 1/u^2 if u was given */
    double r_squared;          /* 1 - RSS/sum (y - mean)^2; without constant 1 - RSS/sum y^2 */
    double chi2;               /* NaN without u */
    size_t degrees_of_freedom;
    double condition;          /* of the scaled problem */
} kel_ls_result;

/* Fits y[i] at x[i], i < n, by a polynomial of `degree`, with or without the constant term. u: standard uncertainties,
   all > 0, or NULL; with u the covariance is not scaled by the residuals unless `scale` is true. KEL_E_RANK: the x do
   not determine the coefficients, or n < parameters. n = parameters: standard deviations are NaN without u.
   KEL_E_ARGUMENT: non-finite data (index in err->line). Since 0.1. */
KEL_API kel_status kel_ls_polynomial(kel_ls_result *result, const double *x, const double *y, const double *u, size_t n,
                                     int degree, bool constant, bool scale, kel_error *err);

#ifdef __cplusplus
}
#endif
#endif
