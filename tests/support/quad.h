/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Reference arithmetic for tests in 113 bits (33 digits): decimals, exp, integrals, a record's curve and small normal
   equations.

   Everything here goes another way than the library does: antiderivatives and their differences, Taylor series, normal
   equations. In 33 digits the loss that such ways have (6 digits for an interval of 1 mK in 1000 K, the square of the
   condition number in normal equations) still leaves far more than a double holds. */
#ifndef KEL_TEST_QUAD_H
#define KEL_TEST_QUAD_H

#include <assert.h>
#include <ctype.h>
#include <stddef.h>
#include <stdlib.h>

#include <kelspan.h>

typedef __float128 quad;

enum { QUAD_ORDER_MAX = 16 };

static inline quad
quad_abs(quad x)
{
    return x < 0 ? -x : x;
}

/* Newton's step doubles the digits of a double's root: two are enough, the third makes sure. */
static inline quad
quad_sqrt(quad x)
{
    if (!(x > 0))
        return 0;
    quad y = (quad)__builtin_sqrt((double)x);
    for (int i = 0; i < 3; i++)
        y = (y + x / y) / 2;
    return y;
}

/* Halved until below 1/256, 16 terms of the series (the next is below 1e-54), squared back. */
static inline quad
quad_exp(quad x)
{
    int halvings = 0;
    for (; quad_abs(x) > (quad)1 / 256; halvings++)
        x /= 2;
    quad term = 1, sum = 1;
    for (int k = 1; k <= 16; k++) {
        term *= x / k;
        sum += term;
    }
    for (; halvings > 0; halvings--)
        sum *= sum;
    return sum;
}

/* A plain decimal: sign, digits with a point, exponent. */
static inline quad
quad_read(const char *text)
{
    bool negative = *text == '-', point = false;
    long behind = 0;
    quad m = 0, unit = 1;
    for (text += *text == '-' || *text == '+'; isdigit((unsigned char)*text) || *text == '.'; text++) {
        if (*text == '.')
            point = true;
        else {
            m = 10 * m + (*text - '0');
            behind += point;
        }
    }
    long e = *text == 'e' || *text == 'E' ? strtol(text + 1, NULL, 10) : 0;
    e -= behind;
    for (long i = labs(e); i > 0; i--)
        unit *= 10;
    m = e < 0 ? m / unit : m * unit;
    return negative ? -m : m;
}

/* sum c_k x^k */
static inline quad
quad_horner(const quad *c, size_t n, quad x)
{
    quad y = 0;
    while (n > 0)
        y = y * x + c[--n];
    return y;
}

/* T_k(x) by the recurrence */
static inline quad
quad_chebyshev(size_t k, quad x)
{
    quad a = 1, b = x;
    if (k == 0)
        return a;
    for (size_t j = 1; j < k; j++) {
        quad next = 2 * x * b - a;
        a = b;
        b = next;
    }
    return b;
}

/* Antiderivative of T_k: x, x^2/2, then T_{k+1}/(2(k+1)) - T_{k-1}/(2(k-1)) */
static inline quad
quad_chebyshev_integral(size_t k, quad x)
{
    if (k == 0)
        return x;
    if (k == 1)
        return x * x / 2;
    return quad_chebyshev(k + 1, x) / (quad)(2 * (k + 1)) - quad_chebyshev(k - 1, x) / (quad)(2 * (k - 1));
}

static inline quad
quad_piece_x(const kel_piece *p, quad t)
{
    return p->from == p->to ? (quad)0 : (2 * t - (quad)p->from - (quad)p->to) / ((quad)p->to - (quad)p->from);
}

/* A record's curve (mean or mode) at T; T outside the pieces continues the nearest one. */
static inline quad
quad_curve(const kel_content *c, const kel_curve *curve, quad t)
{
    size_t i = 0;
    while (i + 1 < c->piece_count && t >= (quad)c->pieces[i].to)
        i++;
    const kel_piece *p = &c->pieces[i];
    quad y = 0;
    for (size_t k = 0; k < p->count; k++)
        y += (quad)curve->coefficients[p->first + k] * quad_chebyshev(k, quad_piece_x(p, t));
    return y;
}

/* Its integral from a to b, steps crossed included: a step at Tt counts when lo < Tt <= hi. */
static inline quad
quad_curve_integral(const kel_content *c, const kel_curve *curve, quad a, quad b)
{
    if (b < a)
        return -quad_curve_integral(c, curve, b, a);
    quad sum = 0;
    for (size_t i = 0; i < c->piece_count; i++) {
        const kel_piece *p = &c->pieces[i];
        quad lo = i > 0 && (quad)p->from > a ? (quad)p->from : a;
        quad hi = i + 1 < c->piece_count && (quad)p->to < b ? (quad)p->to : b;
        if (lo >= hi || (i > 0 && hi <= (quad)p->from) || (i + 1 < c->piece_count && lo >= (quad)p->to))
            continue;
        /* A piece of no width (a record of one temperature) is a constant. */
        quad half = p->from == p->to ? 1 : ((quad)p->to - (quad)p->from) / 2;
        for (size_t k = 0; k < p->count; k++) {
            quad x1 = p->from == p->to ? hi : quad_piece_x(p, hi), x0 = p->from == p->to ? lo : quad_piece_x(p, lo);
            sum += half * (quad)curve->coefficients[p->first + k]
                * (quad_chebyshev_integral(k, x1) - quad_chebyshev_integral(k, x0));
        }
    }
    for (size_t i = 0; i < c->transition_count; i++)
        if (a < (quad)c->transitions[i].at && (quad)c->transitions[i].at <= b)
            sum += (quad)curve->steps[i];
    return sum;
}

/* Inverse of the symmetric positive definite m (n by n, rows in line), in place, by Gauss-Jordan without pivoting. */
static inline void
quad_invert(quad *m, size_t n)
{
    for (size_t k = 0; k < n; k++) {
        quad pivot = m[k * n + k];
        assert(pivot > 0);
        m[k * n + k] = 1;
        for (size_t j = 0; j < n; j++)
            m[k * n + j] /= pivot;
        for (size_t i = 0; i < n; i++) {
            if (i == k)
                continue;
            quad f = m[i * n + k];
            m[i * n + k] = 0;
            for (size_t j = 0; j < n; j++)
                m[i * n + j] -= f * m[k * n + j];
        }
    }
}

#endif
