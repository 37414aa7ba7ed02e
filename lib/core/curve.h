/* SPDX-License-Identifier: Apache-2.0 */
/* Functionals of a curve, and how an answer is made of them. Shared inside libkelspan, not installed.

   Everything here takes content that kel_record_build has checked: sorted pieces that adjoin, 1 to KEL_COEFFICIENTS_MAX
   finite coefficients each, one coefficient where from = to. Temperatures are finite. Nothing allocates. */
#ifndef KELSPAN_CURVE_H
#define KELSPAN_CURVE_H

#include "core.h"

/* A rule on an interval of length 1: `half` lists the nodes of its right half from the end inwards, each with its
   distance from that end in half-widths (1 - g for the node g of [-1, 1]) and its weight (half of the usual one, so
   that they sum to 1). The rest mirrors it. */
typedef struct kel__gauss_rule {
    size_t nodes;
    const double (*half)[2];
} kel__gauss_rule;

enum { KEL__NODES_MAX = 64 };

/* The smallest rule kept that is exact for polynomials with `count` <= KEL_COEFFICIENTS_MAX coefficients. */
const kel__gauss_rule *kel__gauss(size_t count);

/* The piece that owns t: [from, to), the last one [from, to]; the nearer end piece outside. */
size_t kel__piece_find(const kel_content *content, double t);

/* row[j] = T_j(x(t)), and row[j] = mean of T_j(x) over a <= T <= b, a < b, for j < piece->count. */
void kel__row_value(double *row, const kel_piece *piece, double t);
void kel__row_average(double *row, const kel_piece *piece, double a, double b);

/* sum_j row[j] c[j], lowest j first. */
double kel__row_apply(const double *row, const double *c, size_t count);

/* alpha(t) of a curve, and its integral with the steps crossed: in reference-length base e(to) - e(from), else ln
   L(to)/L(from). */
double kel__curve_value(const kel_content *content, const kel_curve *curve, double t);
double kel__curve_integral(const kel_content *content, const kel_curve *curve, double from, double to);

/* The same for n modes at once: sum[k] += weight * functional of modes[k]. */
void kel__modes_value(double *sum, const kel_content *content, const kel_mode *modes, size_t n, double t,
                      double weight);
void kel__modes_integral(double *sum, const kel_content *content, const kel_mode *modes, size_t n, double from,
                         double to, double weight);

/* power[k], k < p->count, of a piece with Chebyshev coefficients c: c_0 T_0 + c_1 T_1 + ... = sum_k power[k] t^k, t = (T -
   centre)/scale. Not finite where they are beyond the range of a double. */
void kel__piece_powers(double *power, const kel_piece *p, const double *c, double centre, double scale);

/* weight times alpha(to), or times the integral from..to. */
typedef struct kel__term {
    bool integral;
    double from, to, weight;
} kel__term;

/* An answer and its exact gradient: its derivative along a curve m is the sum of the terms' functionals of m. */
typedef struct kel__plan {
    double value;
    kel__term terms[2];
    size_t term_count;
} kel__plan;

/* Works out a query whose reference and base are filled in and whose temperatures are finite and >= 0 K. KEL_E_RANGE
   (plan->value is then NaN) where the answer is beyond the range of a double or a length by which it divides is not
   positive. */
kel_status kel__plan_make(kel__plan *plan, const kel_content *content, const kel_query *query, kel_error *err);

/* Derivatives of the answer along the modes first..first + n - 1. */
void kel__plan_gradient(double *gradient, const kel__plan *plan, const kel_content *content, size_t first, size_t n);

/* KEL_FLAG_EXTRAPOLATED, _GAP and _TRANSITION of an answer. */
unsigned kel__plan_flags(const kel__plan *plan, const kel_content *content, const kel_query *query);

/* The gravest reservation that the flags hold. */
kel_status kel__flags_status(unsigned flags);

/* Fills in the record's reference and base, and checks. KEL_E_ARGUMENT, KEL_E_RANGE as kel_record_answer. */
kel_status kel__query_resolve(kel_query *out, const kel_content *content, const kel_query *query, kel_error *err);

/* u and its parts from the modes; NaN and KEL_FLAG_UNKNOWN_U where there are none. */
void kel__plan_uncertainty(kel_answer *answer, const kel__plan *plan, const kel_content *content);

#endif
