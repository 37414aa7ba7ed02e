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
   caller's arrays, each with room for `parameters` numbers, covariance for parameters^2; all but coefficient may be
   NULL. */
typedef struct kel_ls_result {
    double *coefficient, *standard_deviation, *covariance;
    double residual_standard_deviation, residual_sum_of_squares; /* weighted by 1/u^2 if u was given */
    double r_squared;          /* 1 - RSS/sum (y - mean)^2, NaN if all y are equal; without constant 1 - RSS/sum y^2 */
    double chi2;               /* NaN without u */
    size_t degrees_of_freedom;
    double condition;          /* of the Chebyshev design on the range of x, columns of equal length */
    bool refined;              /* by the rows in pairs; false: the factor alone answered. See below */
} kel_ls_result;

/* Fits y[i] at x[i], i < n, by a polynomial of `degree`, with or without the constant term. u: standard uncertainties,
   all > 0, or NULL; with u the covariance is not scaled by the residuals unless `scale` is true.

   KEL_OK. KEL_E_RANK: the x do not determine the coefficients, or n < parameters. KEL_E_ARGUMENT: non-finite data
   (index in err->line), degree below 0 (1 without constant) or above KEL_DEGREE_MAX, no place for results.
   KEL_E_RANGE: numbers beyond a double arise. KEL_E_NOMEM, KEL_E_CONVERGENCE. n = parameters: standard deviations are
   NaN without u.

   Accuracy. The data are taken as exact. Up to 64 MiB of rows, which is n (parameters + 1) <= 2^22, the rows are held
   in pairs of doubles and the solution is refined: coefficients, deviations and sums come out to some 1e-15 of
   themselves, whatever condition is up to 1e15; one beyond some 1e16 is refused (KEL_E_RANK). The limit is that of 30
   digits: a coefficient that changes of the values by 1e-30 of the largest one would move has no more digits than
   that leaves, and powers lose theirs where (1 + |middle|/half)^degree of the range is above 1e15. Beyond 64 MiB the
   triangular factor alone answers, in constant memory, to some 1e-16 times condition (a design worse than
   1e14/parameters is refused): pairs would cost both the memory and tens of times the time, and rows by the million
   leave a condition worth refining to few designs.

   Source: refinement of least squares with residuals in twice the precision, A. Bjorck, BIT 7 (1967) 257, in a basis in
   which the design is orthonormal to a few digits. Since 0.1. */
KEL_API kel_status kel_ls_polynomial(kel_ls_result *result, const double *x, const double *y, const double *u, size_t n,
                                     int degree, bool constant, bool scale, kel_error *err);

/* The same for data of more digits than a double holds: point i lies at x_hi[i] + x_lo[i] and has the value y_hi[i] +
   y_lo[i]. For a decimal number hi is the nearest double and lo the double nearest to the rest. x_lo or y_lo may be
   NULL: all 0. (Beyond 64 MiB of rows the low parts enter with the precision of a double.) Since 0.1. */
KEL_API kel_status kel_ls_polynomial_pairs(kel_ls_result *result, const double *x_hi, const double *x_lo,
                                           const double *y_hi, const double *y_lo, const double *u, size_t n,
                                           int degree, bool constant, bool scale, kel_error *err);

#ifdef __cplusplus
}
#endif
#endif
