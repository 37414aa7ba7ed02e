/* SPDX-License-Identifier: Apache-2.0 */
/* Decimal text to double in one rounding, with the unit's factor inside that rounding.

   The value is N P/Q 10^k with integers N, P, Q. Three ways, each exact up to its single rounding:
     1. N P 10^j and Q 10^j both below 2^53 (or one of them a power of ten up to 10^22): one IEEE operation on exact
        doubles (W. D. Clinger, How to read floating point numbers accurately, PLDI 1990, section 3);
     2. A/B with A below 2^128, B below 2^73, powers of ten as powers of five and a shift: one integer division, whose
        quotient has at least 55 bits and whose remainder says which side of a tie the value lies on;
     3. integers of bounded size on the stack (big.h).
   Limits: 3 keeps KEL__DECIMAL_KEPT digits. A longer number lies strictly between two neighbouring numbers of that many
   digits; where both round to one double that is the answer. */
#include "decimal.h"

#include <assert.h>
#include <math.h>

__extension__ typedef unsigned __int128 u128;

enum {
    HEAD_DIGITS = 19, /* of kel__decimal */
    /* 10^400 times any factor overflows, 10^-400 times any factor is far below half of the least double. */
    LEAD_LIMIT = 400
};

static const double exact_power[] = {
    1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,  1e8,  1e9,  1e10, 1e11,
    1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22,
};
static const uint64_t power10[] = {
    1, 10, 100, 1000, 10000, 100000, 1000000, 10000000, 100000000, 1000000000, 10000000000u, 100000000000u,
    1000000000000u, 10000000000000u, 100000000000000u, 1000000000000000u, 10000000000000000u, 100000000000000000u,
    1000000000000000000u,
};
enum { EXACT_POWERS = 23, POWERS = 19 };

static const uint64_t TWO53 = (uint64_t)1 << 53;

/* ---- way 3: big integers ---- */

/* a = the first `digits` significant digits of d. */
static void
gather(kel__big *a, const kel__decimal *d, size_t digits)
{
    const char *p = d->first;
    kel__big_set(a, 0);
    uint64_t chunk = 0;
    unsigned in_chunk = 0;
    for (size_t i = 0; i < digits; p++) {
        if (*p == '.')
            continue;
        chunk = 10 * chunk + (uint64_t)(*p - '0');
        i++;
        if (++in_chunk == 18 || i == digits) {
            kel__big_multiply_add(a, power10[in_chunk], chunk);
            chunk = 0;
            in_chunk = 0;
        }
    }
}

/* The way with big integers: `digits` digits of d, plus `extra` in the last of them, real value above (bias 1) or below
   it. */
static double
round_big(const kel__decimal *d, size_t digits, unsigned extra, int bias, const kel__factor *f)
{
    kel__big a, b;
    gather(&a, d, digits);
    if (extra != 0)
        kel__big_multiply_add(&a, 1, extra);
    int64_t e = d->exponent + (int64_t)(d->count - digits);
    bool negative = d->negative;
    if (f->offset_e2 != 0) {
        bool offset_negative = f->offset_e2 < 0;
        int64_t common = e < -2 ? e : -2;
        kel__big_multiply_power10(&a, (unsigned)(e - common));
        kel__big_set(&b, (uint64_t)(offset_negative ? -f->offset_e2 : f->offset_e2));
        kel__big_multiply_power10(&b, (unsigned)(-2 - common));
        if (negative == offset_negative)
            kel__big_add(&a, &b);
        else if (kel__big_compare(&a, &b) > 0)
            kel__big_subtract(&a, &b);
        else {
            kel__big_subtract(&b, &a);
            a = b;
            negative = offset_negative;
            bias = -bias; /* the number's magnitude now counts against the sum's */
        }
        e = common;
    }
    e += f->exponent;
    kel__big_multiply_add(&a, (uint64_t)f->numerator, 0);
    kel__big_set(&b, (uint64_t)f->denominator);
    kel__big_multiply_power10(e > 0 ? &a : &b, (unsigned)(e > 0 ? e : -e));
    return kel__ratio_round(&a, &b, negative && a.n > 0, bias);
}

static double
round_long(const kel__decimal *d, const kel__factor *f)
{
    int64_t lead = d->count == 0 ? -LEAD_LIMIT - 1 : d->exponent + (int64_t)d->count; /* |number| < 10^lead */
    if (lead > LEAD_LIMIT)
        return d->negative ? -HUGE_VAL : HUGE_VAL;
    if (lead < -LEAD_LIMIT) {
        /* Nothing but its sign is left of the number. */
        kel__decimal none = { d->negative, 0, 0, d->first, 0 };
        int sign = d->count == 0 ? 0 : 1;
        return f->offset_e2 == 0 ? (d->negative ? -0.0 : 0.0) : round_big(&none, 0, 0, sign, f);
    }
    if (d->count <= KEL__DECIMAL_KEPT)
        return round_big(d, d->count, 0, 0, f);
    double low = round_big(d, KEL__DECIMAL_KEPT, 0, 1, f), high = round_big(d, KEL__DECIMAL_KEPT, 1, -1, f);
    return low == high ? low : (double)NAN;
}

/* ---- way 2: 128 bits ---- */

/* a 5^n, false if that does not fit. */
static bool
times_power5(u128 *a, unsigned n)
{
    static const uint64_t five[] = {
        1, 5, 25, 125, 625, 3125, 15625, 78125, 390625, 1953125, 9765625, 48828125, 244140625, 1220703125, 6103515625u,
        30517578125u, 152587890625u, 762939453125u, 3814697265625u, 19073486328125u, 95367431640625u, 476837158203125u,
        2384185791015625u, 11920928955078125u, 59604644775390625u, 298023223876953125u, 1490116119384765625u,
        7450580596923828125u,
    };
    return n < sizeof five / sizeof five[0] && !__builtin_mul_overflow(*a, (u128)five[n], a);
}

/* Way 2: n p/q 10^e. False where the integers do not fit. */
static bool
round_128(double *out, uint64_t n, const kel__factor *f, int64_t e)
{
    if (e < -60 || e > 27)
        return false;
    u128 a = n, b = (u128)f->denominator;
    if (__builtin_mul_overflow(a, (u128)f->numerator, &a) || !times_power5(e > 0 ? &a : &b, (unsigned)(e > 0 ? e : -e)))
        return false;
    if (b >> 73 != 0)
        return false;
    uint64_t high = (uint64_t)(a >> 64);
    int shift = high != 0 ? __builtin_clzll(high) : 64 + __builtin_clzll((uint64_t)a);
    a <<= shift;
    u128 q = a / b;
    bool more = q * b != a;
    /* At least 2^127/2^73: 55 bits, and possibly 128. */
    int e2 = (int)e - shift;
    high = (uint64_t)(q >> 64);
    int bits = high != 0 ? 128 - __builtin_clzll(high) : 64 - __builtin_clzll((uint64_t)q);
    int cut = bits - 56;
    if (cut > 0) {
        more = more || (q & (((u128)1 << cut) - 1)) != 0;
        q >>= cut;
        e2 += cut;
    }
    *out = kel__bits_round((uint64_t)q, e2, more);
    return true;
}

/* ---- way 1: exact doubles ---- */

/* N in N 10^e = M 10^exponent + offset/100. False where it does not fit 62 bits. */
static bool
add_offset(uint64_t *n, bool *negative, int64_t *e, const kel__decimal *d, int64_t offset_e2)
{
    int64_t common = d->exponent < -2 ? d->exponent : -2;
    if (d->exponent - common >= POWERS || -2 - common >= POWERS || d->head >> 62 != 0)
        return false;
    int64_t m = (int64_t)d->head, o = offset_e2;
    if (__builtin_mul_overflow(m, (int64_t)power10[d->exponent - common], &m) ||
        __builtin_mul_overflow(o, (int64_t)power10[-2 - common], &o) ||
        __builtin_add_overflow(d->negative ? -m : m, o, &m))
        return false;
    *negative = m < 0;
    *n = (uint64_t)(m < 0 ? -m : m);
    *e = common;
    return *n >> 62 == 0;
}

static bool
round_short(double *out, const kel__decimal *d, const kel__factor *f)
{
    uint64_t n = d->head, num;
    bool negative = d->negative;
    int64_t e = d->exponent;
    if (d->count > HEAD_DIGITS || e > 10000 || e < -10000)
        return false;
    if (f->offset_e2 != 0 && !add_offset(&n, &negative, &e, d, f->offset_e2))
        return false;
    e += f->exponent;
    double x;
    if (n == 0)
        x = 0.0;
    else if (!__builtin_mul_overflow(n, (uint64_t)f->numerator, &num) && num <= TWO53 && e > -EXACT_POWERS &&
             e < EXACT_POWERS &&
             (f->denominator == 1 || (e <= 0 && e > -POWERS && (uint64_t)f->denominator <= TWO53 / power10[-e]))) {
        /* Way 1: both operands are exact, the operation rounds once. */
        if (e >= 0)
            x = (double)num * exact_power[e] / (double)f->denominator;
        else
            x = (double)num / ((double)f->denominator * exact_power[-e]);
    } else if (!round_128(&x, n, f, e))
        return false;
    *out = negative ? -x : x;
    return true;
}

kel_status
kel__decimal_round(double *out, const kel__decimal *d, const kel__factor *factor)
{
    assert(factor->numerator > 0 && factor->denominator > 0 && factor->exponent >= -40 && factor->exponent <= 40);
    if (!round_short(out, d, factor))
        *out = round_long(d, factor);
    return isfinite(*out) ? KEL_OK : KEL_E_RANGE;
}
