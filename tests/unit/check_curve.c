/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Values of curves against quadruple precision, ownership of joins, continuation outside. */
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

static specimen s;
static const size_t degrees[] = { 0, 1, 2, 3, 5, 10, 20, 40, 60, KEL_COEFFICIENTS_MAX - 1 };

/* Where rounding of T hurts most: at, beside and between the ends of pieces. */
static double
some_temperature(uint64_t *state, const kel_content *c)
{
    const kel_piece *p = &c->pieces[random_below(state, c->piece_count)];
    double width = p->to - p->from;
    switch (random_below(state, 6)) {
    case 0: return p->from;
    case 1: return nextafter(p->to, 0.0);
    case 2: return p->from + width * pow(10.0, random_between(state, -12.0, 0.0));
    case 3: return p->to - width * pow(10.0, random_between(state, -12.0, 0.0));
    case 4: return 0.5 * (p->from + p->to) + width * random_between(state, -1e-3, 1e-3);
    default: return random_between(state, p->from, p->to);
    }
}

START_TEST(value_within_the_stated_bound)
{
    uint64_t state = 1000 + (uint64_t)_i;
    for (int round = 0; round < 300; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, SPECIMEN_PIECES), degrees[_i], 0, KEL_BASE_REFERENCE, 2e-5);
        const kel_content *c = &s.record.content;
        for (int i = 0; i < 10; i++) {
            double t = some_temperature(&state, c), bound = value_bound(c, &c->mean, t);
            double got = kel__curve_value(c, &c->mean, t);
            ck_assert_abs_for("alpha", (double)(got - long_value(c, &c->mean, t)), 0.0, bound, "1/K");
        }
    }
}
END_TEST

/* The worst that sum |c_k| allows: all of it in the highest term. */
START_TEST(single_term_within_the_stated_bound)
{
    uint64_t state = 2000 + (uint64_t)_i;
    specimen_make(&s, &state, 1, degrees[_i], 0, KEL_BASE_REFERENCE, 0.0);
    const kel_content *c = &s.record.content;
    s.coefficients[0][degrees[_i]] = 1.0;
    for (int i = 0; i < 5000; i++) {
        double t = some_temperature(&state, c), got = kel__curve_value(c, &c->mean, t);
        ck_assert_abs_for("T_n", (double)(got - long_value(c, &c->mean, t)), 0.0, value_bound(c, &c->mean, t), "1");
    }
}
END_TEST

/* A piece with from <= T < to; the last one owns its end; outside, the nearer end piece. */
START_TEST(joins_belong_to_the_right)
{
    uint64_t state = 3;
    for (size_t pieces = 1; pieces <= SPECIMEN_PIECES; pieces++) {
        specimen_make(&s, &state, pieces, 2, 0, KEL_BASE_REFERENCE, 1e-5);
        const kel_content *c = &s.record.content;
        for (size_t i = 0; i < pieces; i++) {
            ck_assert_uint_eq(kel__piece_find(c, s.pieces[i].from), i);
            ck_assert_uint_eq(kel__piece_find(c, nextafter(s.pieces[i].from, 0.0)), i == 0 ? 0 : i - 1);
            ck_assert_uint_eq(kel__piece_find(c, nextafter(s.pieces[i].to, 0.0)), i);
            ck_assert_uint_eq(kel__piece_find(c, s.pieces[i].to), i + 1 == pieces ? i : i + 1);
        }
        ck_assert_uint_eq(kel__piece_find(c, 0.0), 0);
        ck_assert_uint_eq(kel__piece_find(c, 1e9), pieces - 1);
    }
}
END_TEST

/* At an end x is -1 or 1 exactly: the value is the plain sum of the coefficients, with signs on the left. */
START_TEST(ends_are_exact)
{
    uint64_t state = 4;
    specimen_make(&s, &state, 1, 60, 0, KEL_BASE_REFERENCE, 1.0);
    const kel_content *c = &s.record.content;
    double right = 0.0, left = 0.0;
    for (size_t j = 0; j <= 60; j++) {
        right += s.coefficients[0][j];
        left += j % 2 == 1 ? -s.coefficients[0][j] : s.coefficients[0][j];
    }
    ck_assert_ulp(kel__curve_value(c, &c->mean, s.pieces[0].to), right, 0);
    ck_assert_ulp(kel__curve_value(c, &c->mean, s.pieces[0].from), left, 0);
}
END_TEST

/* Outside, |x| > 1, each term counts with the size that it has there. */
START_TEST(polynomial_continues_outside)
{
    uint64_t state = 5000 + (uint64_t)_i;
    for (int round = 0; round < 500; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, 3), degrees[_i], 0, KEL_BASE_REFERENCE, 1e-5);
        const kel_content *c = &s.record.content;
        double above = c->range.hi + random_between(&state, 0.0, 100.0);
        double below = random_between(&state, 0.0, c->range.lo);
        double t = round % 2 == 0 ? above : below, got = kel__curve_value(c, &c->mean, t);
        const kel_piece *p = long_piece(c, t);
        double size[KEL_COEFFICIENTS_MAX];
        for (size_t j = 0; j < p->count; j++)
            size[j] = fabs(s.coefficients[0][p->first + j]);
        double largest = (double)long_series(size, p->count, fabsq(long_x(p, t)));
        double bound = (2.0 * (double)degrees[_i] + 4.0) * DBL_EPSILON * largest;
        ck_assert_abs_for("alpha outside", (double)(got - long_value(c, &c->mean, t)), 0.0, bound, "1/K");
    }
}
END_TEST

START_TEST(one_temperature_is_a_constant)
{
    uint64_t state = 6;
    specimen_make(&s, &state, 1, 0, 0, KEL_BASE_REFERENCE, 1e-5);
    s.pieces[0].from = s.pieces[0].to = 293.15;
    s.coefficients[0][0] = 1.7e-5;
    const kel_content *c = &s.record.content;
    static const double at[] = { 0.0, 77.0, 293.15, 1000.0 };
    for (size_t i = 0; i < sizeof at / sizeof at[0]; i++)
        ck_assert_ulp(kel__curve_value(c, &c->mean, at[i]), 1.7e-5, 0);
}
END_TEST

/* Modes are evaluated as the mean curve is, and added with their weight. */
START_TEST(modes_follow_the_mean)
{
    uint64_t state = 7;
    specimen_make(&s, &state, 4, 7, SPECIMEN_MODES, KEL_BASE_REFERENCE, 1e-5);
    const kel_content *c = &s.record.content;
    double sum[SPECIMEN_MODES];
    for (size_t k = 0; k < SPECIMEN_MODES; k++)
        sum[k] = (double)k;
    double t = some_temperature(&state, c);
    kel__modes_value(sum, c, c->modes, SPECIMEN_MODES, t, 3.0);
    for (size_t k = 0; k < SPECIMEN_MODES; k++)
        ck_assert_ulp(sum[k], (double)k + 3.0 * kel__curve_value(c, &c->modes[k].curve, t), 0);
}
END_TEST

static TCase *
accuracy(void)
{
    TCase *c = tcase_create("accuracy");
    tcase_add_loop_test(c, value_within_the_stated_bound, 0, KEL_LENGTH(degrees));
    tcase_add_loop_test(c, single_term_within_the_stated_bound, 0, KEL_LENGTH(degrees));
    tcase_add_loop_test(c, polynomial_continues_outside, 0, KEL_LENGTH(degrees));
    return c;
}

KEL_TCASE(pieces, joins_belong_to_the_right, ends_are_exact, one_temperature_is_a_constant, modes_follow_the_mean)
KEL_TEST_MAIN("curve", accuracy, pieces)
