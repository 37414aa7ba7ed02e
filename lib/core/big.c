/* SPDX-License-Identifier: Apache-2.0 */
/* Schoolbook arithmetic on words of 64 bits with 128-bit products. The quotients that are needed fit one word, so
   division is one estimate from the leading bits and at most two corrections (D. E. Knuth, The Art of Computer
   Programming 2, section 4.3.1, for one digit of base 2^62). */
#include "big.h"

#include <assert.h>
#include <string.h>

__extension__ typedef unsigned __int128 u128;

static void
trim(kel__big *a)
{
    while (a->n > 0 && a->word[a->n - 1] == 0)
        a->n--;
}

static void
push(kel__big *a, uint64_t w)
{
    if (w == 0)
        return;
    assert(a->n < KEL__BIG_WORDS);
    a->word[a->n++] = w;
}

void
kel__big_set(kel__big *a, uint64_t x)
{
    a->n = 0;
    push(a, x);
}

void
kel__big_multiply_add(kel__big *a, uint64_t m, uint64_t x)
{
    u128 carry = x;
    for (size_t i = 0; i < a->n; i++) {
        carry += (u128)a->word[i] * m;
        a->word[i] = (uint64_t)carry;
        carry >>= 64;
    }
    if (m == 0)
        trim(a);
    push(a, (uint64_t)carry);
}

void
kel__big_multiply_power10(kel__big *a, unsigned n)
{
    /* 5^27 is the largest power of five in a word; the twos are one shift at the end. */
    const uint64_t five27 = 7450580596923828125u;
    unsigned left = n;
    for (; left >= 27; left -= 27)
        kel__big_multiply_add(a, five27, 0);
    uint64_t five = 1;
    for (; left > 0; left--)
        five *= 5;
    kel__big_multiply_add(a, five, 0);
    kel__big_shift_left(a, n);
}

void
kel__big_shift_left(kel__big *a, size_t bits)
{
    size_t words = bits / 64;
    unsigned b = (unsigned)(bits % 64);
    if (a->n == 0)
        return;
    assert(a->n + words <= KEL__BIG_WORDS);
    if (words > 0) {
        memmove(a->word + words, a->word, a->n * sizeof a->word[0]);
        memset(a->word, 0, words * sizeof a->word[0]);
        a->n += words;
    }
    if (b == 0)
        return;
    uint64_t out = 0;
    for (size_t i = words; i < a->n; i++) {
        uint64_t w = a->word[i];
        a->word[i] = w << b | out;
        out = w >> (64 - b);
    }
    push(a, out);
}

void
kel__big_add(kel__big *a, const kel__big *b)
{
    assert(b->n <= KEL__BIG_WORDS);
    while (a->n < b->n)
        a->word[a->n++] = 0;
    u128 carry = 0;
    for (size_t i = 0; i < a->n; i++) {
        carry += (u128)a->word[i] + (i < b->n ? b->word[i] : 0);
        a->word[i] = (uint64_t)carry;
        carry >>= 64;
    }
    push(a, (uint64_t)carry);
}

void
kel__big_subtract(kel__big *a, const kel__big *b)
{
    uint64_t borrow = 0;
    for (size_t i = 0; i < a->n && (i < b->n || borrow != 0); i++) {
        u128 d = (u128)a->word[i] - (i < b->n ? b->word[i] : 0) - borrow;
        a->word[i] = (uint64_t)d;
        borrow = (uint64_t)(d >> 64) != 0;
    }
    assert(borrow == 0);
    trim(a);
}

int
kel__big_compare(const kel__big *a, const kel__big *b)
{
    if (a->n != b->n)
        return a->n < b->n ? -1 : 1;
    for (size_t i = a->n; i-- > 0;)
        if (a->word[i] != b->word[i])
            return a->word[i] < b->word[i] ? -1 : 1;
    return 0;
}

size_t
kel__big_bits(const kel__big *a)
{
    return a->n == 0 ? 0 : 64 * a->n - (size_t)__builtin_clzll(a->word[a->n - 1]);
}

/* floor(a/2^shift) where that has at most 128 bits. */
static u128
leading(const kel__big *a, size_t shift)
{
    size_t w = shift / 64;
    unsigned b = (unsigned)(shift % 64);
    uint64_t x[3];
    for (size_t i = 0; i < 3; i++)
        x[i] = w + i < a->n ? a->word[w + i] : 0;
    u128 low = (u128)x[1] << 64 | x[0];
    return b == 0 ? low : low >> b | (u128)x[2] << (128 - b);
}

/* a -= q b, where the result is not negative. */
static void
subtract_multiple(kel__big *a, const kel__big *b, uint64_t q)
{
    uint64_t carry = 0, borrow = 0;
    for (size_t i = 0; i < a->n && (i < b->n || carry != 0 || borrow != 0); i++) {
        u128 p = (u128)(i < b->n ? b->word[i] : 0) * q + carry;
        u128 d = (u128)a->word[i] - (uint64_t)p - borrow;
        a->word[i] = (uint64_t)d;
        borrow = (uint64_t)(d >> 64) != 0;
        carry = (uint64_t)(p >> 64);
    }
    assert(carry == 0 && borrow == 0);
    trim(a);
}

uint64_t
kel__big_divide(kel__big *a, const kel__big *b)
{
    assert(b->n > 0);
    /* With b cut to its leading 64 bits, B <= b/2^s < B + 1 and B >= 2^63, the estimate A/(B + 1) is low by less than
       a/b 2^-63 + 2 when rounded down: by at most 2 for quotients below 2^62. Without a cut it is exact. */
    size_t bits = kel__big_bits(b), shift = bits > 64 ? bits - 64 : 0;
    assert(kel__big_bits(a) < bits + 63);
    u128 d = leading(b, shift) + (shift > 0);
    uint64_t q = (uint64_t)(leading(a, shift) / d);
    subtract_multiple(a, b, q);
    for (; kel__big_compare(a, b) >= 0; q++)
        kel__big_subtract(a, b);
    return q;
}

uint64_t
kel__big_divide_word(kel__big *a, uint64_t d)
{
    u128 r = 0;
    for (size_t i = a->n; i-- > 0;) {
        r = r << 64 | a->word[i];
        a->word[i] = (uint64_t)(r / d);
        r %= d;
    }
    trim(a);
    return (uint64_t)r;
}

void
kel__big_shift_right_round(kel__big *a, size_t bits)
{
    if (bits == 0)
        return;
    size_t words = bits / 64, h = bits - 1;
    unsigned b = (unsigned)(bits % 64);
    bool half = h / 64 < a->n && (a->word[h / 64] >> (h % 64) & 1) != 0;
    bool more = false; /* anything below the half */
    for (size_t i = 0; i < a->n && i <= h / 64; i++) {
        uint64_t mask = i < h / 64 ? UINT64_MAX : ((uint64_t)1 << (h % 64)) - 1;
        more = more || (a->word[i] & mask) != 0;
    }
    size_t n = a->n > words ? a->n - words : 0;
    for (size_t i = 0; i < n; i++) {
        uint64_t high = i + 1 < n ? a->word[words + i + 1] : 0;
        a->word[i] = b == 0 ? a->word[words + i] : a->word[words + i] >> b | high << (64 - b);
    }
    a->n = n;
    trim(a);
    if (half && (more || (a->n > 0 && (a->word[0] & 1) != 0)))
        kel__big_multiply_add(a, 1, 1);
}
