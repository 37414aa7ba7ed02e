/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Every quantity against its definition by lengths, and its gradient against finite differences, both in quadruple
   precision. */
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

static specimen s;
static const char *const names[] = { "coefficient", "mean", "expansion", "integral", "length ratio", "change" };

/* The curve that the long evaluation sees: the mean plus h times mode m. */
typedef struct varied { const kel_content *c; size_t m; __float128 h; } varied;

static __float128
alpha_of(varied v, double t)
{
    return long_value(v.c, &v.c->mean, t) + v.h * long_value(v.c, &v.c->modes[v.m].curve, t);
}

static __float128
integral_of(varied v, double from, double to)
{
    return long_integral(v.c, &v.c->mean, from, to) + v.h * long_integral(v.c, &v.c->modes[v.m].curve, from, to);
}

/* L(t)/L(R), by the meaning of alpha in the record's base. */
static __float128
length_of(varied v, double t)
{
    __float128 i = integral_of(v, v.c->reference_temperature, t);
    return v.c->base == KEL_BASE_REFERENCE ? 1 + i : expq(i);
}

/* Every answer from lengths alone, as answer.h defines it. */
static __float128
long_answer(varied v, const kel_query *q)
{
    __float128 from = length_of(v, q->from), to = length_of(v, q->to), r = length_of(v, q->reference);
    /* dL/dT over L(R) */
    __float128 slope = alpha_of(v, q->to) * (v.c->base == KEL_BASE_REFERENCE ? 1 : to);
    switch (q->quantity) {
    case KEL_COEFFICIENT: return slope / (q->base == KEL_BASE_REFERENCE ? r : to);
    case KEL_MEAN: return q->from == q->to ? slope / r : (to - from) / r / ((__float128)q->to - q->from);
    case KEL_EXPANSION: return to / r - 1;
    case KEL_INTEGRAL: return q->base == KEL_BASE_REFERENCE ? (to - from) / r : logq(to / from);
    case KEL_LENGTH_RATIO: return to / from;
    default: return (to - from) / length_of(v, q->at);
    }
}

static kel_query
some_query(uint64_t *state, const kel_content *c, kel_quantity quantity)
{
    kel_query q = { .quantity = quantity, .base = (int)random_below(state, 2) };
    double *const at[] = { &q.from, &q.to, &q.at, &q.reference };
    for (size_t i = 0; i < 4; i++)
        *at[i] = random_between(state, c->range.lo, c->range.hi);
    switch (random_below(state, 6)) {
    case 0: q.reference = c->reference_temperature; break;
    case 1: q.to = q.from; break;
    case 2: q.to = q.from + 1e-3; break;
    case 3: q.at = q.from, q.reference = q.to; break;
    case 4: q.from = c->reference_temperature; break;
    default: break;
    }
    return q;
}

static double
term_bound(const kel_content *c, const kel_curve *curve, const kel__term *t)
{
    return t->integral ? integral_bound(c, curve, t->from, t->to) : value_bound(c, curve, t->to);
}

/* Rounding of each functional passes through the answer with its derivative: the terms of the plan, checked below on
   their own. */
static double
answer_bound(const kel_content *c, const kel__plan *plan)
{
    double bound = 8.0 * DBL_EPSILON * fabs(plan->value);
    for (size_t i = 0; i < plan->term_count; i++) {
        const kel__term *term = &plan->terms[i];
        bound += 1.1 * fabs(term->weight) * term_bound(c, &c->mean, term);
    }
    return bound;
}

START_TEST(answers_follow_their_definition)
{
    uint64_t state = 10 + (uint64_t)_i;
    for (int round = 0; round < 1000; round++) {
        double size = round % 2 == 0 ? 2e-5 : 4e-4;
        kel_base base = (kel_base)(round / 2 % 2);
        specimen_make(&s, &state, 1 + random_below(&state, 4), random_below(&state, 12), 1, base, size);
        const kel_content *c = &s.record.content;
        kel_query q = some_query(&state, c, (kel_quantity)_i);
        kel__plan plan;
        ck_assert_int_eq(kel__plan_make(&plan, c, &q, NULL), KEL_OK);
        double bound = answer_bound(c, &plan);
        /* The mean and the logarithm over 1 mK are quotients and logarithms of nearly 1 in the long form: 1e-34/1e-3 is
           no matter. */
        __float128 want = long_answer((varied){ c, 0, 0 }, &q);
        ck_assert_abs_for(names[_i], (double)(plan.value - want), 0.0, bound, "1 or 1/K");
    }
}
END_TEST

/* [g(h) - g(-h)]/2h = g' + h^2/6 g''': with h = 1e-6 and a mode a hundredth of the curve the second term is 1e-16 of
   the first at most. The long answers are good to some 1e-33, which h makes 1e-27. */
START_TEST(gradients_are_exact)
{
    uint64_t state = 20 + (uint64_t)_i;
    for (int round = 0; round < 500; round++) {
        kel_base base = (kel_base)(round % 2);
        specimen_make(&s, &state, 1 + random_below(&state, 4), random_below(&state, 12), 3, base, 2e-4);
        const kel_content *c = &s.record.content;
        kel_query q = some_query(&state, c, (kel_quantity)_i);
        kel__plan plan;
        double gradient[3];
        ck_assert_int_eq(kel__plan_make(&plan, c, &q, NULL), KEL_OK);
        kel__plan_gradient(gradient, &plan, c, 0, 3);
        for (size_t m = 0; m < 3; m++) {
            const __float128 h = 1e-6Q;
            __float128 more = long_answer((varied){ c, m, h }, &q), less = long_answer((varied){ c, m, -h }, &q);
            __float128 want = (more - less) / (2 * h);
            double bound = 1e-27;
            for (size_t i = 0; i < plan.term_count; i++) {
                const kel__term *t = &plan.terms[i];
                const kel_curve *mode = &c->modes[m].curve;
                __float128 f = t->integral ? long_integral(c, mode, t->from, t->to) : long_value(c, mode, t->to);
                double size = fabs(t->weight * (double)f);
                bound += 1.1 * fabs(t->weight) * term_bound(c, mode, t);
                /* A weight holds a length or two, 1 + I with |I| < 0.5 here, each within (2 11 + 4) eps 0.5 of its
                   value, and is rounded. */
                bound += 2.0 * (26.0 * 0.5 + 4.0) * DBL_EPSILON * size;
            }
            ck_assert_abs_for(names[_i], (double)(gradient[m] - want), 0.0, bound, "1 or 1/K");
        }
    }
}
END_TEST

/* e(r) = 0, ratio = 1, change and integral 0 over no interval, all exactly and with no derivative. */
START_TEST(nothing_is_exactly_nothing)
{
    uint64_t state = 30 + (uint64_t)_i;
    for (int round = 0; round < 200; round++) {
        specimen_make(&s, &state, 3, 6, 3, (kel_base)(round % 2), 1e-4);
        const kel_content *c = &s.record.content;
        kel_query q = some_query(&state, c, (kel_quantity)_i);
        q.from = q.to;
        if (q.quantity == KEL_EXPANSION)
            q.reference = q.to;
        kel__plan plan;
        double gradient[3];
        ck_assert_int_eq(kel__plan_make(&plan, c, &q, NULL), KEL_OK);
        kel__plan_gradient(gradient, &plan, c, 0, 3);
        ck_assert_msg(plan.value == (q.quantity == KEL_LENGTH_RATIO ? 1.0 : 0.0), "%s: %.17g", names[_i], plan.value);
        for (size_t m = 0; m < 3; m++)
            ck_assert_msg(gradient[m] == 0.0, "%s: derivative %.17g", names[_i], gradient[m]);
    }
}
END_TEST

/* e' = [e - e(r')]/[1 + e(r')] there, and back again. */
START_TEST(rereference_there_and_back)
{
    uint64_t state = 40;
    for (int round = 0; round < 1000; round++) {
        specimen_make(&s, &state, 3, 6, 0, (kel_base)(round % 2), 1e-4);
        const kel_content *c = &s.record.content;
        kel__plan there, back, own;
        double r = random_between(&state, c->range.lo, c->range.hi);
        double t = random_between(&state, c->range.lo, c->range.hi);
        const double R = c->reference_temperature;
        kel_query q = { KEL_EXPANSION, 0.0, t, 0.0, r, (int)c->base };
        ck_assert_int_eq(kel__plan_make(&there, c, &q, NULL), KEL_OK);
        q.to = R;
        ck_assert_int_eq(kel__plan_make(&back, c, &q, NULL), KEL_OK);
        q.to = t, q.reference = R;
        ck_assert_int_eq(kel__plan_make(&own, c, &q, NULL), KEL_OK);
        double bound = 4.0 * DBL_EPSILON * fabs(own.value) + 1.2 * (integral_bound(c, &c->mean, R, t) +
                       integral_bound(c, &c->mean, r, t) + 2.0 * integral_bound(c, &c->mean, r, R));
        ck_assert_abs_for("e", (there.value - back.value) / (1.0 + back.value), own.value, bound, "1");
    }
}
END_TEST

/* Forth and back differ by the sign alone. */
START_TEST(antisymmetric_to_the_last_bit)
{
    static const kel_quantity quantities[] = { KEL_INTEGRAL, KEL_CHANGE };
    uint64_t state = 50;
    for (int round = 0; round < 1000; round++) {
        specimen_make(&s, &state, 3, 6, 0, (kel_base)(round % 2), 1e-4);
        const kel_content *c = &s.record.content;
        kel_query q = some_query(&state, c, quantities[round / 2 % 2]), back = q;
        kel__plan a, b;
        back.from = q.to, back.to = q.from;
        ck_assert_int_eq(kel__plan_make(&a, c, &q, NULL), KEL_OK);
        ck_assert_int_eq(kel__plan_make(&b, c, &back, NULL), KEL_OK);
        ck_assert_msg(a.value == -b.value, "%s: %.17g and %.17g", names[q.quantity], a.value, b.value);
        q.quantity = back.quantity = KEL_MEAN;
        ck_assert_int_eq(kel__plan_make(&a, c, &q, NULL), KEL_OK);
        ck_assert_int_eq(kel__plan_make(&b, c, &back, NULL), KEL_OK);
        ck_assert_msg(a.value == b.value, "mean: %.17g and %.17g", a.value, b.value);
    }
}
END_TEST

/* alpha = -1e-2/K from 100 K to 200 K: at 200 K, referred to 100 K, no length is left. */
START_TEST(lengths_that_cannot_be)
{
    uint64_t state = 60;
    const double below = nextafter(200.0, 0.0);
    const struct { const char *label; kel_base base; kel_query query; kel_status want; } rows[] = {
        { "ratio just above no length", 0, { KEL_LENGTH_RATIO, 100, below, 0, 100, 0 }, KEL_OK },
        { "ratio to no length", 0, { KEL_LENGTH_RATIO, 100, 200, 0, 100, 0 }, KEL_E_RANGE },
        { "ratio to less than no length", 0, { KEL_LENGTH_RATIO, 100, 210, 0, 100, 0 }, KEL_E_RANGE },
        { "ratio from no length", 0, { KEL_LENGTH_RATIO, 200, 100, 0, 100, 0 }, KEL_E_RANGE },
        { "ratio between negative lengths", 0, { KEL_LENGTH_RATIO, 220, 210, 0, 100, 0 }, KEL_E_RANGE },
        { "expansion from no length", 0, { KEL_EXPANSION, 0, 150, 0, 200, 0 }, KEL_E_RANGE },
        { "expansion from negative length", 0, { KEL_EXPANSION, 0, 150, 0, 210, 0 }, KEL_E_RANGE },
        { "coefficient in current length", 0, { KEL_COEFFICIENT, 0, 200, 0, 100, 1 }, KEL_E_RANGE },
        { "coefficient in reference length", 0, { KEL_COEFFICIENT, 0, 200, 0, 100, 0 }, KEL_OK },
        { "logarithm up to no length", 0, { KEL_INTEGRAL, 100, 200, 0, 100, 1 }, KEL_E_RANGE },
        { "logarithm down from no length", 0, { KEL_INTEGRAL, 200, 100, 0, 100, 1 }, KEL_E_RANGE },
        { "change of no length", 0, { KEL_CHANGE, 100, 150, 200, 100, 0 }, KEL_E_RANGE },
        { "ratio in current length", 1, { KEL_LENGTH_RATIO, 100, 210, 0, 100, 0 }, KEL_OK },
        { "ratio beyond a double", 1, { KEL_LENGTH_RATIO, 1e6, 100, 0, 100, 0 }, KEL_E_RANGE },
        { "ratio below a double", 1, { KEL_LENGTH_RATIO, 100, 1e6, 0, 100, 0 }, KEL_E_RANGE },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        specimen_make(&s, &state, 1, 0, 1, rows[i].base, 1e-2);
        kel_content *c = &s.record.content;
        c->transition_count = 0;
        c->reference_temperature = 100.0;
        s.pieces[0].from = 100.0, s.pieces[0].to = 200.0;
        s.coefficients[0][0] = -1e-2;
        kel__plan plan;
        kel_error err = { 0 };
        kel_status got = kel__plan_make(&plan, c, &rows[i].query, &err);
        ck_assert_msg(got == rows[i].want, "%s: status %d", rows[i].label, (int)got);
        ck_assert_msg(got == KEL_OK ? isfinite(plan.value) : isnan(plan.value), "%s: %.17g", rows[i].label, plan.value);
        ck_assert_int_eq(err.code, rows[i].want);
        ck_assert((err.message[0] != '\0') == (got != KEL_OK));
    }
}
END_TEST

static TCase *
quantities(void)
{
    TCase *c = tcase_create("quantities");
    tcase_add_loop_test(c, answers_follow_their_definition, KEL_COEFFICIENT, KEL_CHANGE + 1);
    tcase_add_loop_test(c, gradients_are_exact, KEL_COEFFICIENT, KEL_CHANGE + 1);
    tcase_add_loop_test(c, nothing_is_exactly_nothing, KEL_EXPANSION, KEL_CHANGE + 1);
    return c;
}

KEL_TCASE(relations, rereference_there_and_back, antisymmetric_to_the_last_bit, lengths_that_cannot_be)
KEL_TEST_MAIN("plan", quantities, relations)
