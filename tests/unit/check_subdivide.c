/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Cut pieces carry the same polynomials. */
#include "unit.h"
#include "subdivide.h"

#include <math.h>

static double
value(const kel_piece *p, const double *c, double t)
{
    double x = p->from == p->to ? 0 : (2 * t - p->from - p->to) / (p->to - p->from), before = 1, now = x, sum = c[p->first];
    for (size_t j = 1; j < p->count; j++) {
        sum += c[p->first + j] * now;
        double next = 2 * x * now - before;
        before = now;
        now = next;
    }
    return sum;
}

START_TEST(same_polynomials)
{
    const kel_piece pieces[] = { { 4, 77, 0, 4 }, { 77, 300, 4, 7 } };
    const double c[11] = { 1, -0.5, 0.25, 0.125, 2, 0.3, -0.2, 0.7, -0.1, 0.05, 0.01 };
    const double cuts[] = { 200, 4, 50, 77, 10, 400, 200 };
    kel_arena *memory = kel_arena_new();
    kel_piece *parts;
    size_t count, *parent;
    ck_assert_int_eq(kel__subdivide(&parts, &count, &parent, pieces, 2, cuts, 7, memory, NULL), KEL_OK);
    ck_assert_uint_eq(count, 5);
    const double ends[] = { 4, 10, 50, 77, 200, 300 };
    double d[64];
    kel__carry_over(d, parts, count, parent, c, pieces);
    for (size_t i = 0; i < count; i++) {
        ck_assert_double_eq(parts[i].from, ends[i]);
        ck_assert_double_eq(parts[i].to, ends[i + 1]);
        ck_assert_uint_eq(parent[i], i < 3 ? 0 : 1);
        for (int k = 0; k <= 20; k++) {
            double t = parts[i].from + (parts[i].to - parts[i].from) * k / 20;
            ck_assert_abs(value(&parts[i], d, t), value(&pieces[parent[i]], c, t), 1e-14, "of a sum of coefficients near 4");
        }
    }
    kel_arena_free(memory);
}
END_TEST

START_TEST(nothing_to_cut)
{
    const kel_piece one = { 293, 293, 0, 1 };
    const double c[1] = { 1.5 };
    kel_arena *memory = kel_arena_new();
    kel_piece *parts;
    size_t count, *parent;
    double d[1];
    ck_assert_int_eq(kel__subdivide(&parts, &count, &parent, &one, 1, NULL, 0, memory, NULL), KEL_OK);
    ck_assert_uint_eq(count, 1);
    kel__carry_over(d, parts, count, parent, c, &one);
    ck_assert_double_eq(d[0], 1.5);
    kel_arena_free(memory);
}
END_TEST

KEL_TCASE(basics, same_polynomials, nothing_to_cut)
KEL_TEST_MAIN("subdivide", basics)
