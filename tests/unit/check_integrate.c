/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Integrals against quadruple precision, and their laws: additivity, antisymmetry, derivative, steps. */
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

static specimen s;
static const size_t degrees[] = { 0, 1, 2, 3, 4, 5, 7, 10, 13, 20, 31, 45, 60, KEL_COEFFICIENTS_MAX - 1 };

static double
some_inside(uint64_t *state, const kel_content *c)
{
    const kel_piece *p = &c->pieces[random_below(state, c->piece_count)];
    switch (random_below(state, 4)) {
    case 0: return p->from;
    case 1: return p->to;
    case 2: return p->to - (p->to - p->from) * pow(10.0, random_between(state, -12.0, 0.0));
    default: return random_between(state, p->from, p->to);
    }
}

START_TEST(integral_within_the_stated_bound)
{
    uint64_t state = 100 + (uint64_t)_i;
    for (int round = 0; round < 150; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, SPECIMEN_PIECES), degrees[_i], 0, KEL_BASE_REFERENCE, 2e-5);
        const kel_content *c = &s.record.content;
        for (int i = 0; i < 5; i++) {
            double from = some_inside(&state, c), to = some_inside(&state, c);
            double got = kel__curve_integral(c, &c->mean, from, to), bound = integral_bound(c, &c->mean, from, to);
            ck_assert_abs_for("integral", (double)(got - long_integral(c, &c->mean, from, to)), 0.0, bound, "1");
        }
    }
}
END_TEST

/* All of sum |c_k| in the highest term, over the whole piece, its parts and its ends. */
START_TEST(single_term_within_the_stated_bound)
{
    uint64_t state = 200 + (uint64_t)_i;
    specimen_make(&s, &state, 1, degrees[_i], 0, KEL_BASE_REFERENCE, 0.0);
    const kel_content *c = &s.record.content;
    s.coefficients[0][degrees[_i]] = 1.0;
    for (int i = 0; i < 1000; i++) {
        double from = some_inside(&state, c), to = some_inside(&state, c);
        double got = kel__curve_integral(c, &c->mean, from, to), bound = integral_bound(c, &c->mean, from, to);
        ck_assert_abs_for("integral of T_n", (double)(got - long_integral(c, &c->mean, from, to)), 0.0, bound, "K");
    }
}
END_TEST

/* 1 mK: within 1e-13 of the width times sum |c_k|, for the doubles given, up to degree 60. */
START_TEST(a_millikelvin)
{
    uint64_t state = 300 + (uint64_t)_i;
    for (int round = 0; round < 1000; round++) {
        specimen_make(&s, &state, 1, degrees[_i], 0, KEL_BASE_REFERENCE, 2e-5);
        const kel_content *c = &s.record.content;
        double from = fmin(some_inside(&state, c), s.pieces[0].to - 1e-3), to = from + 1e-3;
        double got = kel__curve_integral(c, &c->mean, from, to);
        double limit = 1e-13 * (to - from) * norm_of(&c->mean, s.pieces);
        ck_assert_abs_for("1 mK", (double)(got - long_integral(c, &c->mean, from, to)), 0.0, limit, "1");
    }
}
END_TEST

START_TEST(additive_and_antisymmetric)
{
    uint64_t state = 400 + (uint64_t)_i;
    for (int round = 0; round < 300; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, SPECIMEN_PIECES), degrees[_i], 0, KEL_BASE_REFERENCE, 2e-5);
        const kel_content *c = &s.record.content;
        double a = some_inside(&state, c), b = some_inside(&state, c), d = some_inside(&state, c);
        double ab = kel__curve_integral(c, &c->mean, a, b), ba = kel__curve_integral(c, &c->mean, b, a);
        double bd = kel__curve_integral(c, &c->mean, b, d), ad = kel__curve_integral(c, &c->mean, a, d);
        ck_assert(ab == -ba);
        /* Each of the three carries its own bound, and their sum is rounded. */
        double bound = integral_bound(c, &c->mean, a, b) + integral_bound(c, &c->mean, b, d) +
                       integral_bound(c, &c->mean, a, d) + DBL_EPSILON * fabs(ad);
        ck_assert_abs_for("I(a,b) + I(b,d) - I(a,d)", ab + bd - ad, 0.0, bound, "1");
        double same = kel__curve_integral(c, &c->mean, a, a);
        ck_assert(same == 0.0 && !signbit(same));
    }
}
END_TEST

/* The mean over t - h..t + h is alpha(t) + h^2/6 alpha''; |alpha''| <= (2/w)^2 n^2 (n^2 - 1)/3 sum |c_k| (A. A.
   Markov). */
START_TEST(derivative_is_the_coefficient)
{
    uint64_t state = 500 + (uint64_t)_i;
    const double n = (double)degrees[_i];
    for (int round = 0; round < 300; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, 3), degrees[_i], 0, KEL_BASE_REFERENCE, 2e-5);
        const kel_content *c = &s.record.content;
        const kel_piece *p = &s.pieces[random_below(&state, c->piece_count)];
        double h = 1e-6, t = random_between(&state, p->from + 2.0 * h, p->to - 2.0 * h), a = t - h, b = t + h;
        double curvature = 4.0 / pow(p->to - p->from, 2.0) * n * n * fabs(n * n - 1.0) / 3.0 * norm_of(&c->mean, p);
        /* a and b are rounded, so that their middle misses t by half an ulp; |alpha'| <= (2/w) n^2 sum |c_k|. */
        double slope = 2.0 / (p->to - p->from) * n * n * norm_of(&c->mean, p);
        double limit = 2.0 * value_bound(c, &c->mean, t) + h * h / 6.0 * curvature + DBL_EPSILON * t * slope;
        double mean = kel__curve_integral(c, &c->mean, a, b) / (b - a);
        ck_assert_abs_for("mean over 2 uK", mean - kel__curve_value(c, &c->mean, t), 0.0, limit, "1/K");
    }
}
END_TEST

/* A step at Tt is crossed by lo..hi when lo < Tt <= hi, in either direction. alpha is 0 here. */
START_TEST(steps_belong_to_their_temperature)
{
    uint64_t state = 6;
    specimen_make(&s, &state, 2, 1, 0, KEL_BASE_REFERENCE, 0.0);
    const kel_content *c = &s.record.content;
    const double at = s.transitions[0].at, outside = s.transitions[1].at;
    const double below = nextafter(at, 0.0), above = nextafter(at, 1e9);
    s.steps[0][0] = -8e-6;
    s.steps[0][1] = 1e-3;
    const struct { const char *label; double from, to, want; } rows[] = {
        { "ends just below", c->range.lo, below, 0.0 },
        { "ends at the step", c->range.lo, at, -8e-6 },
        { "ends just above", c->range.lo, above, -8e-6 },
        { "begins just below", below, c->range.hi, -8e-6 },
        { "begins at the step", at, c->range.hi, 0.0 },
        { "downwards over it", above, below, 8e-6 },
        { "downwards from it", at, below, 8e-6 },
        { "downwards to it", above, at, 0.0 },
        { "at it", at, at, 0.0 },
        { "over a step outside the pieces", c->range.hi, outside, 1e-3 },
        { "over both", 0.0, outside + 1.0, -8e-6 + 1e-3 },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
        ck_assert_ulp_for(rows[i].label, kel__curve_integral(c, &c->mean, rows[i].from, rows[i].to), rows[i].want, 0);
}
END_TEST

/* Across an end of the pieces and beyond it, down to 0 K; each term has the size that it has at the far end. */
START_TEST(polynomial_continues_outside)
{
    uint64_t state = 700 + (uint64_t)_i;
    for (int round = 0; round < 300; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, 3), degrees[_i], 0, KEL_BASE_REFERENCE, 2e-5);
        kel_content *c = &s.record.content;
        c->transition_count = 0;
        bool above = round % 2 == 0;
        double edge = above ? c->range.hi : c->range.lo, far = above ? edge + random_between(&state, 0.0, 50.0) : 0.0;
        double from = round % 3 == 0 ? 0.5 * (edge + far) : above ? edge - 10.0 : edge + 10.0;
        const kel_piece *p = long_piece(c, far);
        double size[KEL_COEFFICIENTS_MAX];
        for (size_t j = 0; j < p->count; j++)
            size[j] = fabs(s.coefficients[0][p->first + j]);
        double largest = (double)long_series(size, p->count, fabsq(long_x(p, far)));
        double bound = (2.0 * (double)degrees[_i] + 4.0) * DBL_EPSILON * largest * fabs(far - from);
        double got = kel__curve_integral(c, &c->mean, from, far);
        ck_assert_abs_for("integral outside", (double)(got - long_integral(c, &c->mean, from, far)), 0.0, bound, "1");
    }
}
END_TEST

START_TEST(one_temperature_is_a_constant)
{
    uint64_t state = 8;
    specimen_make(&s, &state, 1, 0, 0, KEL_BASE_REFERENCE, 1e-5);
    kel_content *c = &s.record.content;
    c->transition_count = 0;
    s.pieces[0].from = s.pieces[0].to = 293.0;
    s.coefficients[0][0] = 0x1p-16;
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 293.0, 293.0), 0.0, 0);
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 293.0, 393.0), 100.0 * 0x1p-16, 0);
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 0.0, 293.0), 293.0 * 0x1p-16, 0);
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 300.0, 200.0), -100.0 * 0x1p-16, 0);
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 400.0, 500.0), 100.0 * 0x1p-16, 0);
}
END_TEST

/* Two pieces that carry one polynomial of degree 1 give what one piece gives: exact here. */
START_TEST(a_join_changes_nothing)
{
    uint64_t state = 9;
    specimen_make(&s, &state, 2, 1, 0, KEL_BASE_REFERENCE, 1e-5);
    kel_content *c = &s.record.content;
    c->transition_count = 0;
    s.pieces[0].from = 100.0, s.pieces[0].to = s.pieces[1].from = 200.0, s.pieces[1].to = 400.0;
    /* alpha = T * 2^-20 */
    const double k[4] = { 150 * 0x1p-20, 50 * 0x1p-20, 300 * 0x1p-20, 100 * 0x1p-20 };
    memcpy(s.coefficients[0], k, sizeof k);
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 100.0, 400.0), (400.0 * 400.0 - 100.0 * 100.0) / 2.0 * 0x1p-20, 0);
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 0.0, 500.0), 500.0 * 500.0 / 2.0 * 0x1p-20, 2);
    ck_assert_ulp(kel__curve_integral(c, &c->mean, 300.0, 100.0), (100.0 * 100.0 - 300.0 * 300.0) / 2.0 * 0x1p-20, 2);
}
END_TEST

START_TEST(modes_follow_the_mean)
{
    uint64_t state = 10;
    specimen_make(&s, &state, 4, 7, SPECIMEN_MODES, KEL_BASE_REFERENCE, 1e-5);
    const kel_content *c = &s.record.content;
    double sum[SPECIMEN_MODES] = { 0.0 }, from = c->range.lo + 3.0, to = c->range.hi - 5.0;
    kel__modes_integral(sum, c, c->modes, SPECIMEN_MODES, from, to, 4.0);
    for (size_t k = 0; k < SPECIMEN_MODES; k++)
        ck_assert_ulp(sum[k], 4.0 * kel__curve_integral(c, &c->modes[k].curve, from, to), 0);
    kel__modes_integral(sum, c, c->modes, SPECIMEN_MODES, from, from, 4.0);
    ck_assert_ulp(sum[0], 4.0 * kel__curve_integral(c, &c->modes[0].curve, from, to), 0);
}
END_TEST

static TCase *
accuracy(void)
{
    TCase *c = tcase_create("accuracy");
    tcase_add_loop_test(c, integral_within_the_stated_bound, 0, KEL_LENGTH(degrees));
    tcase_add_loop_test(c, single_term_within_the_stated_bound, 0, KEL_LENGTH(degrees));
    tcase_add_loop_test(c, a_millikelvin, 0, KEL_LENGTH(degrees) - 1);
    tcase_add_loop_test(c, additive_and_antisymmetric, 0, KEL_LENGTH(degrees));
    tcase_add_loop_test(c, derivative_is_the_coefficient, 0, KEL_LENGTH(degrees) - 1);
    tcase_add_loop_test(c, polynomial_continues_outside, 0, KEL_LENGTH(degrees));
    return c;
}

KEL_TCASE(laws, steps_belong_to_their_temperature, one_temperature_is_a_constant, a_join_changes_nothing,
          modes_follow_the_mean)
KEL_TEST_MAIN("integrate", accuracy, laws)
