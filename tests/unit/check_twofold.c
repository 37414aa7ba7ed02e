/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Sums of products in pairs of doubles; and that the arithmetic they rest on is left alone by the compiler. */
#include "unit.h"
#include "quad.h"
#include "twofold.h"

#include <float.h>

enum { N = 60 };

/* A fixed sequence in -1..1 with little structure. */
static double
error_of(size_t i)
{
    return 2 * fmod((double)(i + 1) * 0.6180339887498949, 1.0) - 1;
}

/* What a compiler that takes sums for associative or contracts products would destroy. */
START_TEST(arithmetic_is_not_rearranged)
{
    volatile double one = 1, tiny = 0x1p-60, third = 1.0 / 3;
    kel__twofold s = kel__two_sum(one, tiny);
    ck_assert_double_eq(s.hi, 1);
    ck_assert_double_eq(s.lo, 0x1p-60);
    kel__twofold p = kel__two_mul(kel__two(third), kel__two(third));
    ck_assert((quad)p.hi + p.lo == (quad)third * third);
    ck_assert_double_ne(p.lo, 0);
}
END_TEST

/* Sums of products that cancel 25 digits: within (n u)^2 sum |a b| of the sum in 33 digits. */
START_TEST(gathered_sums)
{
    kel__twofold sum = { 0, 0 }, one = { 0, 0 };
    quad want = 0, want_one = 0;
    double absolute = 0;
    for (size_t i = 0; i < 2 * N; i++) {
        double size = i % 2 == 0 ? 1e12 : -1e12;
        kel__twofold a = kel__two_sum(size * (1 + error_of(i / 2)), 1e-6 * error_of(i));
        kel__twofold b = kel__two_sum(1 + 1e-13 * error_of(i), 1e-18 * error_of(2 * i));
        kel__two_gather(&sum, a, b);
        kel__two_gather_one(&one, a, b.hi);
        want += ((quad)a.hi + a.lo) * ((quad)b.hi + b.lo);
        want_one += ((quad)a.hi + a.lo) * b.hi;
        absolute += fabs(a.hi * b.hi);
    }
    double limit = 2 * N * DBL_EPSILON * N * DBL_EPSILON * absolute;
    sum = kel__two_gathered(sum);
    one = kel__two_gathered(one);
    ck_assert_double_lt(fabs((double)want), 1e-8 * absolute);
    ck_assert_abs((double)((quad)sum.hi + sum.lo - want), 0, limit, "1");
    ck_assert_abs((double)((quad)one.hi + one.lo - want_one), 0, limit, "1");
    ck_assert_double_le(fabs(sum.lo), DBL_EPSILON * fabs(sum.hi));
}
END_TEST

KEL_TCASE(pairs, arithmetic_is_not_rearranged, gathered_sums)
KEL_TEST_MAIN("twofold", pairs)
