/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Invented curves for tests of the evaluator, and the same functionals in quadruple precision.

   A `specimen` holds a record that is put together by hand, without kel_record_build. Its long values rest on nothing
   of the library: powers of quadruple arithmetic (113 bits) in the plain recurrence and in antiderivatives, whose
   cancellation costs at most 6 + 4 of 34 digits here. */
#ifndef KEL_TEST_CURVES_H
#define KEL_TEST_CURVES_H

#include <float.h>
#include <math.h>
#include <quadmath.h>
#include <stdint.h>
#include <string.h>

#include "core.h"

enum { SPECIMEN_PIECES = 6, SPECIMEN_MODES = 70, SPECIMEN_COUNT = SPECIMEN_PIECES * KEL_COEFFICIENTS_MAX };

typedef struct specimen {
    kel_record record;
    kel_piece pieces[SPECIMEN_PIECES];
    kel_transition transitions[SPECIMEN_PIECES + 1];
    kel_interval gaps[1];
    kel_mode modes[SPECIMEN_MODES];
    double coefficients[SPECIMEN_MODES + 1][SPECIMEN_COUNT], steps[SPECIMEN_MODES + 1][SPECIMEN_PIECES + 1];
} specimen;

/* Steele, Lea and Flood's SplitMix64: the next of 2^64 numbers that follow from *state. */
static inline uint64_t
random_bits(uint64_t *state)
{
    uint64_t z = *state += 0x9E3779B97F4A7C15u;
    z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9u;
    z = (z ^ (z >> 27)) * 0x94D049BB133111EBu;
    return z ^ (z >> 31);
}

/* Uniform in lo..hi. */
static inline double
random_between(uint64_t *state, double lo, double hi)
{
    return lo + (hi - lo) * ((double)(random_bits(state) >> 11) * 0x1p-53);
}

static inline size_t
random_below(uint64_t *state, size_t n)
{
    return (size_t)(random_bits(state) % n);
}

/* Pieces of the degree given between 4 K and some 1000 K, with a step at every join and one outside; alpha of the order
   of `size`. */
static inline void
specimen_make(specimen *s, uint64_t *state, size_t pieces, size_t degree, size_t modes, kel_base base, double size)
{
    memset(s, 0, sizeof *s);
    kel_content *c = &s->record.content;
    double at = random_between(state, 4.0, 300.0);
    for (size_t i = 0; i < pieces; i++) {
        double next = at + random_between(state, 20.0, 300.0);
        s->pieces[i] = (kel_piece){ at, next, i * (degree + 1), degree + 1 };
        s->transitions[i] = (kel_transition){ next, KEL_STEP_STATED };
        at = next;
    }
    s->transitions[pieces - 1].at = at + 50.0;
    for (size_t m = 0; m <= modes; m++) {
        /* The mean curve is m = 0. Coefficients fall off at random, as those of fits do. */
        double scale = m == 0 ? size : 0.01 * size, fall = random_between(state, 0.3, 1.0);
        for (size_t i = 0; i < pieces; i++) {
            double power = scale;
            for (size_t j = 0; j <= degree; j++, power *= fall)
                s->coefficients[m][s->pieces[i].first + j] = power * random_between(state, -1.0, 1.0);
            s->steps[m][i] = 10.0 * scale * random_between(state, -1.0, 1.0);
        }
        if (m > 0) {
            s->modes[m - 1].kind = (kel_mode_kind)((m - 1) % 3);
            s->modes[m - 1].curve = (kel_curve){ s->coefficients[m], s->steps[m] };
        }
    }
    c->base = base;
    c->pieces = s->pieces;
    c->piece_count = pieces;
    c->transitions = s->transitions;
    c->transition_count = pieces;
    c->coefficient_count = pieces * (degree + 1);
    c->mean = (kel_curve){ s->coefficients[0], s->steps[0] };
    c->modes = s->modes;
    c->mode_count = modes;
    c->range = (kel_interval){ s->pieces[0].from, s->pieces[pieces - 1].to };
    c->reference_temperature = random_between(state, c->range.lo, c->range.hi);
}

static inline const kel_piece *
long_piece(const kel_content *c, double t)
{
    size_t i = 0;
    while (i + 1 < c->piece_count && c->pieces[i + 1].from <= t)
        i++;
    return &c->pieces[i];
}

static inline __float128
long_x(const kel_piece *p, double t)
{
    __float128 from = p->from, to = p->to;
    return p->from < p->to ? (2 * (__float128)t - from - to) / (to - from) : 0;
}

/* sum_j c_j T_j(x) */
static inline __float128
long_series(const double *c, size_t count, __float128 x)
{
    __float128 before = 1, now = x, sum = c[0];
    for (size_t j = 1; j < count; j++) {
        sum += c[j] * now;
        __float128 next = 2 * x * now - before;
        before = now;
        now = next;
    }
    return sum;
}

/* The antiderivative in x: T_0 gives x, T_1 gives x^2/2, T_j gives [T_(j+1)/(j + 1) - T_(j-1)/(j - 1)]/2. */
static inline __float128
long_antiderivative(const double *c, size_t count, __float128 x)
{
    __float128 before = 1, now = x, sum = c[0] * x;
    for (size_t j = 1; j < count; j++) {
        __float128 next = 2 * x * now - before;
        sum += j == 1 ? c[1] * x * x / 2 : c[j] * (next / (__float128)(j + 1) - before / (__float128)(j - 1)) / 2;
        before = now;
        now = next;
    }
    return sum;
}

static inline __float128
long_value(const kel_content *c, const kel_curve *curve, double t)
{
    const kel_piece *p = long_piece(c, t);
    return long_series(curve->coefficients + p->first, p->count, long_x(p, t));
}

static inline __float128
long_integral(const kel_content *c, const kel_curve *curve, double from, double to)
{
    double lo = fmin(from, to), hi = fmax(from, to);
    __float128 sum = 0;
    for (size_t i = 0; i < c->piece_count; i++) {
        const kel_piece *p = &c->pieces[i];
        double a = i == 0 ? lo : fmax(lo, p->from), b = i + 1 == c->piece_count ? hi : fmin(hi, p->to);
        if (!(a < b))
            continue;
        const double *k = curve->coefficients + p->first;
        if (p->from < p->to)
            sum += ((__float128)p->to - p->from) / 2 *
                   (long_antiderivative(k, p->count, long_x(p, b)) - long_antiderivative(k, p->count, long_x(p, a)));
        else
            sum += k[0] * ((__float128)b - a);
    }
    for (size_t i = 0; i < c->transition_count; i++)
        if (lo < c->transitions[i].at && c->transitions[i].at <= hi)
            sum += curve->steps[i];
    return to < from ? -sum : sum;
}

/* sum |c_k| of a piece. */
static inline double
norm_of(const kel_curve *curve, const kel_piece *p)
{
    double sum = 0.0;
    for (size_t j = 0; j < p->count; j++)
        sum += fabs(curve->coefficients[p->first + j]);
    return sum;
}

/* The bounds that answer.h states, for temperatures inside the pieces; a step counts with its rounding. */
static inline double
value_bound(const kel_content *c, const kel_curve *curve, double t)
{
    const kel_piece *p = long_piece(c, t);
    return (2.0 * (double)(p->count - 1) + 4.0) * DBL_EPSILON * norm_of(curve, p);
}

static inline double
integral_bound(const kel_content *c, const kel_curve *curve, double from, double to)
{
    double lo = fmin(from, to), hi = fmax(from, to), sum = 0.0;
    for (size_t i = 0; i < c->piece_count; i++) {
        const kel_piece *p = &c->pieces[i];
        double a = fmax(lo, p->from), b = fmin(hi, p->to);
        if (a < b)
            sum += (2.0 * (double)(p->count - 1) + 4.0) * DBL_EPSILON * norm_of(curve, p) * (b - a);
    }
    for (size_t i = 0; i < c->transition_count; i++)
        if (lo < c->transitions[i].at && c->transitions[i].at <= hi)
            sum += 2.0 * DBL_EPSILON * fabs(curve->steps[i]);
    return sum;
}

#endif
