/* SPDX-License-Identifier: Apache-2.0 */
/* The double nearest to a ratio of two integers: the quotient to 55 or 56 bits, the remainder as one more bit that says
   "and something". */
#include "decimal.h"

#include <math.h>

double
kel__bits_round(uint64_t m, int e, bool more)
{
    int bits = 64 - __builtin_clzll(m), drop = bits - 53;
    if (e + drop < -1074)
        drop = -1074 - e;
    if (drop > 57)
        return 0.0;
    uint64_t half = (uint64_t)1 << (drop - 1), rest = m & (2 * half - 1), r = m >> drop;
    if (rest > half || (rest == half && (more || (r & 1) != 0)))
        r++;
    return ldexp((double)r, e + drop);
}

double
kel__ratio_round(kel__big *a, kel__big *b, bool negative, int bias)
{
    if (a->n == 0)
        return negative ? -0.0 : 0.0;
    /* 2^(d-1) < a/b < 2^(d+1), so the scaled quotient below has 55 or 56 bits. */
    int d = (int)kel__big_bits(a) - (int)kel__big_bits(b), s = 55 - d;
    if (d > 1030)
        return negative ? -HUGE_VAL : HUGE_VAL;
    if (d < -1080)
        return negative ? -0.0 : 0.0;
    if (s > 0)
        kel__big_shift_left(a, (size_t)s);
    else
        kel__big_shift_left(b, (size_t)-s);
    uint64_t q = kel__big_divide(a, b);
    bool more = a->n > 0;
    if (!more && bias != 0) {
        q -= bias < 0;
        more = true;
    }
    double x = kel__bits_round(q, -s, more);
    return negative ? -x : x;
}
