/* SPDX-License-Identifier: Apache-2.0 */
/* Shortest decimal digits of a double.

   Method: R. Giulietti, The Schubfach way to render doubles (2020). x = c 2^q is the only double between the midpoints
   to its neighbours, (4c - 2) 2^(q-2) and (4c + 2) 2^(q-2) (the lower one 4c - 1 where c is the least of its binade).
   Take the largest k for which 10^k does not exceed the width of that interval: it then holds at least one and at most
   ten multiples of 10^k, and at most one of 10^(k+1). So the answer is that multiple of 10^(k+1), or the nearer of the
   two multiples of 10^k around x. Scaled by 10^-k, c and both midpoints are needed only to a quarter of a unit, with
   the last bit telling whether anything follows ("rounding to odd"); the paper proves (section 9.9) that 126 bits of
   10^-k are enough. The table has 128. */
#include "shortest.h"

#include <stdbool.h>
#include <string.h>

#include "power_table.h"

__extension__ typedef unsigned __int128 u128;

/* The logarithms as integer products: checked for every exponent by make-power-table.py. */
static inline int
floor_log10_pow2(int q)
{
    return (q * 1262611) >> 22;
}

static inline int
floor_log10_three_quarters_pow2(int q)
{
    return (q * 1262611 - 524031) >> 22;
}

static inline int
floor_log2_pow10(int k)
{
    return (k * 1741647) >> 19;
}

/* floor(g c/2^128), its last bit set if anything was cut off. g is rounded up, hence the 1: it may stand for
   nothing. */
static inline uint64_t
round_to_odd(const uint64_t g[2], uint64_t c)
{
    u128 low = (u128)g[1] * c, high = (u128)g[0] * c + (uint64_t)(low >> 64);
    return (uint64_t)(high >> 64) | ((uint64_t)high > 1);
}

static inline uint64_t
drop_zeros(int *exponent, uint64_t d)
{
    int e = *exponent;
    if (d % 10 == 0) {
        if (d % 100000000 == 0) {
            d /= 100000000;
            e += 8;
        }
        for (; d % 100 == 0; d /= 100)
            e += 2;
        if (d % 10 == 0) {
            d /= 10;
            e++;
        }
    }
    *exponent = e;
    return d;
}

uint64_t
kel__shortest(int *exponent, double x)
{
    uint64_t bits;
    memcpy(&bits, &x, sizeof bits);
    uint64_t fraction = bits & (((uint64_t)1 << 52) - 1);
    int biased = (int)(bits >> 52);
    uint64_t c = biased == 0 ? fraction : fraction | (uint64_t)1 << 52;
    int q = (biased == 0 ? 1 : biased) - 1075;

    /* Integers below 2^53 are their own shortest digits. */
    if (q <= 0 && q > -53 && (c & (((uint64_t)1 << -q) - 1)) == 0) {
        *exponent = 0;
        return drop_zeros(exponent, c >> -q);
    }

    bool regular = fraction != 0 || biased <= 1, even = (c & 1) == 0;
    int k = regular ? floor_log10_pow2(q) : floor_log10_three_quarters_pow2(q);
    int h = q + floor_log2_pow10(-k) + 1;
    const uint64_t *g = kel__power_table[-k - KEL__POWER_FIRST];
    uint64_t lower = round_to_odd(g, (4 * c - (regular ? 2 : 1)) << h);
    uint64_t middle = round_to_odd(g, 4 * c << h);
    uint64_t upper = round_to_odd(g, (4 * c + 2) << h);
    /* Ties go to even when the number is read, so the midpoints belong to x only for even c. */
    lower += !even;
    upper -= !even;

    uint64_t s = middle / 4;
    *exponent = k;
    if (s >= 10) {
        uint64_t t = s / 10;
        bool below = lower <= 40 * t, above = 40 * t + 40 <= upper;
        if (below != above) {
            *exponent = k + 1;
            return drop_zeros(exponent, t + above);
        }
    }
    bool below = lower <= 4 * s, above = 4 * s + 4 <= upper;
    bool up = above;
    if (below == above) {
        uint64_t half = 4 * s + 2;
        up = middle > half || (middle == half && (s & 1) != 0);
    }
    return drop_zeros(exponent, s + up);
}
