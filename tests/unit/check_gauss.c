/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The constants of the Gauss-Legendre rules against Newton's method in quadruple precision. */
#include <math.h>
#include <quadmath.h>
#include <string.h>

#include "curve.h"
#include "../support/unit.h"

/* P_n(g) and P_n'(g) */
static void
legendre(__float128 *p, __float128 *derivative, size_t n, __float128 g)
{
    __float128 before = 1, now = g;
    for (size_t k = 2; k <= n; k++) {
        __float128 m = (__float128)k, next = ((2 * m - 1) * g * now - (m - 1) * before) / m;
        before = now;
        now = next;
    }
    *p = now;
    *derivative = (__float128)n * (g * now - before) / (g * g - 1);
}

/* Every constant is the double nearest to the exact number. A quadruple decides that unless it lies within 1e-30 of a
   tie: none does. */
static void
check_constants(const kel__gauss_rule *rule)
{
    size_t n = rule->nodes;
    for (size_t i = 0; i < (n + 1) / 2; i++) {
        __float128 g = cosq(M_PIq * ((__float128)i + 0.75Q) / ((__float128)n + 0.5Q)), p, d;
        for (int step = 0; step < 8; step++) {
            legendre(&p, &d, n, g);
            g -= p / d;
        }
        if (2 * i + 1 == n)
            g = 0;
        legendre(&p, &d, n, g);
        char label[64];
        snprintf(label, sizeof label, "rule of %zu, node %zu", n, i);
        ck_assert_ulp_for(label, rule->half[i][0], (double)(1 - g), 0);
        ck_assert_ulp_for(label, rule->half[i][1], (double)(1 / ((1 - g * g) * d * d)), 0);
    }
}

/* The rule's means of T_j are 1/(1 - j^2) for even j and 0 for odd ones. */
static void
check_exactness(const kel__gauss_rule *rule)
{
    for (size_t j = 0; j < 2 * rule->nodes; j++) {
        __float128 sum = 0;
        for (size_t i = 0; i < rule->nodes; i++) {
            bool mirrored = i >= (rule->nodes + 1) / 2;
            const double *node = rule->half[mirrored ? rule->nodes - 1 - i : i];
            __float128 g = mirrored ? node[0] - (__float128)1 : 1 - (__float128)node[0];
            sum += node[1] * cosq((__float128)j * acosq(g));
        }
        __float128 want = j % 2 == 1 ? 0 : 1 / (1 - (__float128)j * (__float128)j);
        char label[64];
        snprintf(label, sizeof label, "rule of %zu, mean of T_%zu", rule->nodes, j);
        /* Node and weight carry half an ulp each: sum w |j sin(j acos g)/sin(acos g)| u q <= 2 j u, and u for the
           weights. */
        ck_assert_abs_for(label, (double)(sum - want), 0.0, (double)(2 * j + 1) * 0x1p-53, "1");
    }
}

START_TEST(every_rule)
{
    const kel__gauss_rule *before = NULL;
    size_t rules = 0;
    for (size_t count = 1; count <= KEL_COEFFICIENTS_MAX; count++) {
        const kel__gauss_rule *rule = kel__gauss(count);
        if (rule == before)
            continue;
        check_constants(rule);
        check_exactness(rule);
        before = rule;
        rules++;
    }
    ck_assert_uint_eq(rules, 16);
}
END_TEST

START_TEST(enough_nodes_and_few_more)
{
    for (size_t count = 1; count <= KEL_COEFFICIENTS_MAX; count++) {
        size_t n = kel__gauss(count)->nodes, needed = (count + 1) / 2;
        ck_assert_uint_ge(n, needed);
        ck_assert_uint_le(n, KEL__NODES_MAX);
        ck_assert_uint_le(n, needed <= 8 ? needed : needed + needed / 2);
    }
}
END_TEST

KEL_TCASE(rules, every_rule, enough_nodes_and_few_more)
KEL_TEST_MAIN("gauss", rules)
