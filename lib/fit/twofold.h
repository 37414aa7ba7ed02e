/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers of twice the precision: an unevaluated sum hi + lo of two doubles with |lo| <= ulp(hi)/2, some 31 digits.
   Sums and products by the error-free transformations of Dekker, Numer. Math. 18 (1971) 224 and Knuth (two_sum); each
   operation below is right to a few 2^-104. They rest on round-to-nearest and on products that the compiler does not
   contract. Not installed. */
#ifndef KELSPAN_TWOFOLD_H
#define KELSPAN_TWOFOLD_H

#include <math.h>

#if defined __FAST_MATH__
#error "kelspan needs IEEE arithmetic: do not compile with -ffast-math"
#endif

typedef struct kel__twofold { double hi, lo; } kel__twofold;

static inline kel__twofold
kel__two(double x)
{
    return (kel__twofold){ x, 0 };
}

/* |a| >= |b| or a = 0. */
static inline kel__twofold
kel__two_quick(double a, double b)
{
    double s = a + b;
    return (kel__twofold){ s, b - (s - a) };
}

static inline kel__twofold
kel__two_sum(double a, double b)
{
    double s = a + b, v = s - a;
    return (kel__twofold){ s, (a - (s - v)) + (b - v) };
}

static inline kel__twofold
kel__two_add(kel__twofold a, kel__twofold b)
{
    kel__twofold s = kel__two_sum(a.hi, b.hi), t = kel__two_sum(a.lo, b.lo);
    s = kel__two_quick(s.hi, s.lo + t.hi);
    return kel__two_quick(s.hi, s.lo + t.lo);
}

static inline kel__twofold
kel__two_negative(kel__twofold a)
{
    return (kel__twofold){ -a.hi, -a.lo };
}

static inline kel__twofold
kel__two_sub(kel__twofold a, kel__twofold b)
{
    return kel__two_add(a, kel__two_negative(b));
}

static inline kel__twofold
kel__two_mul(kel__twofold a, kel__twofold b)
{
    double p = a.hi * b.hi;
    return kel__two_quick(p, fma(a.hi, b.hi, -p) + (a.hi * b.lo + a.lo * b.hi));
}

/* The same with a double: cheaper. */
static inline kel__twofold
kel__two_mul_one(kel__twofold a, double b)
{
    double p = a.hi * b;
    return kel__two_quick(p, fma(a.hi, b, -p) + a.lo * b);
}

/* sum + a b for sums of products: the high parts are added without error and all that falls off gathers in sum->lo, so
   that n terms come out as if summed in twice the precision, within (n u)^2 sum |a b| with u = 2^-53 (T. Ogita,
   S. Rump, S. Oishi, SIAM J. Sci. Comput. 26 (2005) 1955, Dot2). lo may grow beyond ulp(hi): kel__two_gathered ends
   the sum. */
static inline void
kel__two_gather(kel__twofold *sum, kel__twofold a, kel__twofold b)
{
    double p = a.hi * b.hi;
    kel__twofold s = kel__two_sum(sum->hi, p);
    sum->hi = s.hi;
    sum->lo += s.lo + (fma(a.hi, b.hi, -p) + (a.hi * b.lo + a.lo * b.hi));
}

static inline void
kel__two_gather_one(kel__twofold *sum, kel__twofold a, double b)
{
    double p = a.hi * b;
    kel__twofold s = kel__two_sum(sum->hi, p);
    sum->hi = s.hi;
    sum->lo += s.lo + (fma(a.hi, b, -p) + a.lo * b);
}

static inline kel__twofold
kel__two_gathered(kel__twofold sum)
{
    return kel__two_sum(sum.hi, sum.lo);
}

/* Long division, three partial quotients. */
static inline kel__twofold
kel__two_div(kel__twofold a, kel__twofold b)
{
    double q = a.hi / b.hi;
    kel__twofold r = kel__two_sub(a, kel__two_mul(kel__two(q), b));
    double q2 = r.hi / b.hi;
    r = kel__two_sub(r, kel__two_mul(kel__two(q2), b));
    return kel__two_add(kel__two_quick(q, q2), kel__two(r.hi / b.hi));
}

#endif
