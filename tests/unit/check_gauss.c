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
        __float128 next = ((__float128)(2 * k - 1) * g * now - (__float128)(k - 1) * before) / (__float128)k;
        before = now;
        now = next;
    }
    *p = now;
    *derivative = (__float128)n * (g * now - before) / (g * g - 1);
}

/* Every constant is the double nearest to the exact number. A quadruple decides that unless it lies within 1e-30 of a tie: none does. */
START_TEST(constants_are_rounded_once)
{
    const kel__gauss_rule *rule = kel__gauss((size_t)_i + 1);
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
END_TEST

START_TEST(rule_is_exact_for_its_degree_and_not_wasteful)
{
    size_t count = (size_t)_i + 1;
    const kel__gauss_rule *rule = kel__gauss(count);
    ck_assert_uint_ge(2 * rule->nodes, count);
    ck_assert_uint_le(rule->nodes, KEL__NODES_MAX);
    /* Nothing above the half of count is taken where few nodes are: a line needs one. */
    ck_assert_uint_le(rule->nodes, count <= 16 ? (count + 1) / 2 : count);
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
        /* Node and weight carry half an ulp each: sum w |j sin(j acos g)/sin(acos g)| u q <= 2 j u, and u for the weights. */
        ck_assert_abs_for(label, (double)(sum - want), 0.0, (double)(2 * j + 1) * 0x1p-53, "1");
    }
}
END_TEST

static TCase *
rules(void)
{
    TCase *c = tcase_create("rules");
    tcase_add_loop_test(c, constants_are_rounded_once, 0, KEL_COEFFICIENTS_MAX);
    tcase_add_loop_test(c, rule_is_exact_for_its_degree_and_not_wasteful, 0, KEL_COEFFICIENTS_MAX);
    return c;
}

KEL_TEST_MAIN("gauss", rules)
