/* SPDX-License-Identifier: Apache-2.0 */
/* Doubles as text: shortest digits, a number of significant digits, a number of decimals. No locale takes part. The
   last two round the exact binary value once, ties to even, with integers (big.h). */
#include "core.h"

#include <assert.h>
#include <math.h>
#include <string.h>

#include "big.h"
#include "shortest.h"

static const char pairs[] =
    "00010203040506070809101112131415161718192021222324252627282930313233343536373839404142434445464748"
    "4950515253545556575859606162636465666768697071727374757677787980818283848586878889909192939495969798"
    "99";

/* Writes d so that it ends before `end`; returns where it starts. */
static char *
put_back(char *end, uint64_t d)
{
    while (d >= 100000000) {
        uint32_t low = (uint32_t)(d % 100000000);
        d /= 100000000;
        for (int i = 0; i < 4; i++, low /= 100)
            memcpy(end -= 2, pairs + (size_t)2 * (low % 100), 2);
    }
    uint32_t v = (uint32_t)d;
    for (; v >= 100; v /= 100)
        memcpy(end -= 2, pairs + (size_t)2 * (v % 100), 2);
    if (v >= 10)
        memcpy(end -= 2, pairs + (size_t)2 * v, 2);
    else
        *--end = (char)('0' + v);
    return end;
}

/* NaN, infinities. Returns 0 for finite x. */
static size_t
put_special(char *out, double x)
{
    if (isfinite(x))
        return 0;
    strcpy(out, isnan(x) ? "nan" : x > 0.0 ? "inf" : "-inf");
    return strlen(out);
}

/* digits 10^exponent, `first`..`last` being the exponents of ten of the leading digit for which plain notation is
   used. */
static size_t
lay_out(char *out, bool negative, uint64_t digits, int exponent, int first, int last)
{
    char buffer[24], *end = buffer + sizeof buffer, *start = put_back(end, digits), *p = out;
    int n = (int)(end - start), lead = n - 1 + exponent;
    if (negative)
        *p++ = '-';
    if (lead < first || lead > last) {
        *p++ = *start;
        if (n > 1) {
            *p++ = '.';
            memcpy(p, start + 1, (size_t)(n - 1));
            p += n - 1;
        }
        *p++ = 'e';
        if (lead < 0)
            *p++ = '-';
        start = put_back(end, (uint64_t)(lead < 0 ? -lead : lead));
        memcpy(p, start, (size_t)(end - start));
        p += end - start;
    } else if (lead < 0) {
        memcpy(p, "0.0000000000", 12);
        p += 1 - lead;
        memcpy(p, start, (size_t)n);
        p += n;
    } else {
        int whole = lead + 1 < n ? lead + 1 : n;
        memcpy(p, start, (size_t)whole);
        p += whole;
        for (int i = n; i <= lead; i++)
            *p++ = '0';
        if (whole < n) {
            *p++ = '.';
            memcpy(p, start + whole, (size_t)(n - whole));
            p += n - whole;
        }
    }
    *p = '\0';
    return (size_t)(p - out);
}

size_t
kel_number_format(char *out, double x)
{
    if (x == 0.0) {
        strcpy(out, signbit(x) ? "-0" : "0");
        return strlen(out);
    }
    size_t n = put_special(out, x);
    if (n > 0)
        return n;
    int exponent;
    uint64_t digits = kel__shortest(&exponent, fabs(x));
    return lay_out(out, signbit(x), digits, exponent, -5, 16);
}

/* |x| = c 2^e */
static uint64_t
take_apart(int *e, double x)
{
    uint64_t c = (uint64_t)ldexp(frexp(fabs(x), e), 53);
    *e -= 53;
    return c;
}

/* floor(|x| 10^j), and how the rest compares with a half. */
static uint64_t
scaled(int *rest, double x, int j)
{
    kel__big a, b;
    int e;
    kel__big_set(&a, take_apart(&e, x));
    kel__big_set(&b, 1);
    kel__big_shift_left(e > 0 ? &a : &b, (size_t)(e > 0 ? e : -e));
    kel__big_multiply_power10(j > 0 ? &a : &b, (unsigned)(j > 0 ? j : -j));
    uint64_t n = kel__big_divide(&a, &b);
    kel__big_shift_left(&a, 1);
    *rest = kel__big_compare(&a, &b);
    return n;
}

size_t
kel_number_format_digits(char *out, double x, int digits)
{
    assert(digits >= 1 && digits <= 17);
    if (x == 0.0) {
        strcpy(out, "0");
        return 1;
    }
    size_t length = put_special(out, x);
    if (length > 0)
        return length;
    uint64_t limit = 1;
    for (int i = 0; i < digits; i++)
        limit *= 10;
    /* 2^(e-1) <= |x|, so lead is floor(log10 |x|) or one less. */
    int e, rest;
    frexp(x, &e);
    int lead = ((e - 1) * 1262611) >> 22;
    uint64_t n = scaled(&rest, x, digits - 1 - lead);
    if (n >= limit) {
        lead++;
        n = scaled(&rest, x, digits - 1 - lead);
    }
    n += rest > 0 || (rest == 0 && (n & 1) != 0);
    if (n == limit) {
        n /= 10;
        lead++;
    }
    return lay_out(out, signbit(x), n, lead - digits + 1, -4, digits > 6 ? digits - 1 : 5);
}

size_t
kel_number_format_fixed(char *out, double x, int decimals)
{
    assert(decimals >= 0 && decimals <= 30);
    size_t length = put_special(out, x);
    if (length > 0)
        return length;
    if (fabs(x) >= 1e22)
        return kel_number_format_digits(out, x, 17);
    kel__big a;
    int e;
    kel__big_set(&a, x == 0.0 ? 0 : take_apart(&e, x));
    if (x != 0.0) {
        kel__big_multiply_power10(&a, (unsigned)decimals);
        if (e > 0)
            kel__big_shift_left(&a, (size_t)e);
        else
            kel__big_shift_right_round(&a, (size_t)-e);
    }
    bool negative = signbit(x) && a.n > 0; /* no "-0.00" */
    /* The integer |x| 10^decimals in its decimal digits, from the right, at least one more than decimals. */
    char buffer[64], *end = buffer + sizeof buffer, *p = end;
    while (a.n > 0 || p == end || end - p <= decimals) {
        uint64_t low = kel__big_divide_word(&a, 1000000000000000000u);
        for (int i = 0; i < 18 && (a.n > 0 || low > 0 || p == end || end - p <= decimals); i++, low /= 10)
            *--p = (char)('0' + low % 10);
    }
    char *q = out;
    if (negative)
        *q++ = '-';
    size_t whole = (size_t)(end - p) - (size_t)decimals;
    memcpy(q, p, whole);
    q += whole;
    if (decimals > 0) {
        *q++ = '.';
        memcpy(q, p + whole, (size_t)decimals);
        q += decimals;
    }
    *q = '\0';
    return (size_t)(q - out);
}
