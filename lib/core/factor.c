/* SPDX-License-Identifier: Apache-2.0 */
/* Doubles through the exact affine factor of a unit, forth and back, rounded once: 255.3722222222222 K gives the degF
   nearest to it, without the cancellation that -459.67 would cause in double arithmetic. A double is m 2^e exactly, so
   the result is a ratio of integers. */
#include "decimal.h"

#include <math.h>
#include <stdlib.h>

enum { EXACT_POWERS = 23 };
static const double exact_power[EXACT_POWERS] = { 1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12,
                                                  1e13, 1e14, 1e15,
                                                  1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22 };

/* a/b = |x| */
static void
take_apart(kel__big *a, kel__big *b, double x)
{
    int e;
    uint64_t m = (uint64_t)ldexp(frexp(fabs(x), &e), 53);
    e -= 53;
    kel__big_set(a, m);
    kel__big_set(b, 1);
    kel__big_shift_left(e > 0 ? a : b, (size_t)(e > 0 ? e : -e));
}

/* a = +-a +- b, where `negative` is a's sign and becomes the sum's. */
static void
add_signed(kel__big *a, bool *negative, kel__big *b, bool b_negative)
{
    if (*negative == b_negative)
        kel__big_add(a, b);
    else if (kel__big_compare(a, b) >= 0)
        kel__big_subtract(a, b);
    else {
        kel__big_subtract(b, a);
        *a = *b;
        *negative = b_negative;
    }
}

/* (x p/q 10^k) + offset/100 for before = false, (x + offset/100) p/q 10^k for before = true. */
static double
affine(double x, int64_t offset_e2, bool before, int64_t p, int64_t q, int k)
{
    kel__big a, b, o;
    bool negative = signbit(x);
    take_apart(&a, &b, x);
    for (int pass = 0; pass < 2; pass++) {
        if ((pass == 0) != before) {
            kel__big_multiply_add(&a, (uint64_t)p, 0);
            kel__big_multiply_add(&b, (uint64_t)q, 0);
            kel__big_multiply_power10(k > 0 ? &a : &b, (unsigned)(k > 0 ? k : -k));
        } else if (offset_e2 != 0) {
            o = b;
            kel__big_multiply_add(&o, (uint64_t)(offset_e2 < 0 ? -offset_e2 : offset_e2), 0);
            kel__big_multiply_add(&a, 100, 0);
            kel__big_multiply_add(&b, 100, 0);
            add_signed(&a, &negative, &o, offset_e2 < 0);
        }
    }
    return kel__ratio_round(&a, &b, negative && a.n > 0, 0);
}

double
kel__factor_apply(const kel__factor *f, double x)
{
    if (!isfinite(x) || (f->offset_e2 == 0 && f->numerator == f->denominator && f->exponent == 0))
        return x;
    if (f->offset_e2 == 0 && f->numerator == 1 && f->denominator == 1 && abs(f->exponent) < EXACT_POWERS)
        return f->exponent > 0 ? x * exact_power[f->exponent] : x / exact_power[-f->exponent];
    return affine(x, f->offset_e2, true, f->numerator, f->denominator, f->exponent);
}

double
kel__factor_invert(const kel__factor *f, double x)
{
    if (!isfinite(x) || (f->offset_e2 == 0 && f->numerator == f->denominator && f->exponent == 0))
        return x;
    if (f->offset_e2 == 0 && f->numerator == 1 && f->denominator == 1 && abs(f->exponent) < EXACT_POWERS)
        return f->exponent > 0 ? x / exact_power[f->exponent] : x * exact_power[-f->exponent];
    return affine(x, -f->offset_e2, false, f->denominator, f->numerator, -f->exponent);
}
