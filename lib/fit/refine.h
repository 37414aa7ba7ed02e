/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Polynomial least squares inside: the data, the basis, the two ways to a solution. Not installed. */
#ifndef KELSPAN_REFINE_H
#define KELSPAN_REFINE_H

#include <kelspan.h>

#include "twofold.h"

/* The most that the rows of a refined problem may take, 16 bytes a number. */
enum { KEL__REFINED_BYTES = 64 << 20 };

/* What the caller gave. Values are multiplied by y_scale and weights are u_scale/u, powers of two that bring both near
   1, so that the low parts of pairs do not underflow. x_lo, y_lo, u may be NULL. */
typedef struct kel__ls_data {
    const double *x, *x_lo, *y, *y_lo, *u;
    size_t n;
    double y_scale, u_scale;
} kel__ls_data;

/* T_k(t), k < count, t = (x - middle)/half; without constant s x T_k(t) with s = x_scale, a power of two that brings
   s x near 1. middle and half are just doubles. */
typedef struct kel__ls_frame { size_t count; bool constant; double middle, half, x_scale; } kel__ls_frame;

/* With the design A (weighted rows of the basis) and n = count: A `inverse` has columns that are nearly orthonormal,
   `inner` is their own triangular factor, and A inverse z is nearest to the values. So c = inverse z, and the
   covariance of c is (for weights 1/u) M M' with M = inverse inner^-1. Both are upper triangles by columns; what they
   hold is meant exactly as it stands. */
typedef struct kel__ls_solved {
    double *inverse, *inner;
    kel__twofold *z;
    kel__twofold rss;       /* weighted, of the scaled values */
    kel__twofold total;     /* likewise, of the values about their mean; without constant of the values themselves */
    double condition;       /* of A with columns of length 1 */
    int rank;               /* less than n: nothing else is set but condition */
} kel__ls_solved;

static inline kel__twofold
kel__ls_x(const kel__ls_data *d, size_t i)
{
    return d->x_lo != NULL ? kel__two_sum(d->x[i], d->x_lo[i]) : kel__two(d->x[i]);
}

static inline kel__twofold
kel__ls_y(const kel__ls_data *d, size_t i)
{
    double hi = d->y_scale * d->y[i];
    return d->y_lo != NULL ? kel__two_sum(hi, d->y_scale * d->y_lo[i]) : kel__two(hi);
}

static inline kel__twofold
kel__ls_weight(const kel__ls_data *d, size_t i)
{
    return d->u != NULL ? kel__two_div(kel__two(d->u_scale), kel__two(d->u[i])) : kel__two(1);
}

/* Does the refined way fit its memory? */
bool kel__ls_fits(size_t n, size_t count);

/* out and triangle are upper triangles by columns, `stride` rows apart in triangle, n in out. */
void kel__triangle_inverse(double *out, const double *triangle, size_t stride, size_t n);

/* leastsquares.c has the plain way. KEL_E_NOMEM, KEL_E_RANGE, KEL_E_CONVERGENCE; a lack of rank is in *out. */
kel_status kel__ls_refine(kel__ls_solved *out, const kel__ls_frame *frame, const kel__ls_data *data, kel_arena *memory,
                          kel_error *err);

#endif
