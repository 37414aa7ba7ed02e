/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rounding of the answers: ten thousand random curves, each with random intervals and references, against evaluation
   with 33 digits, within the bounds that kelspan/answer.h states; single answers and array calls. */
#include "kernel.h"
#include "../support/curves.h"
#include "../support/unit.h"

enum { CURVES = 10000, SHARES = 10, ELEMENTS = 17 };

static specimen s;

/* Long answers and their bounds by the header's words: B is the bound of a functional, and goes into the answer with
   the answer's derivative by it; 8 eps of the answer come on top. D is 1 + I(R, r), X exp I(r, from). */
typedef struct judged { __float128 want; double bound; } judged;

static judged
reference_length(const kel_content *c, const kel_query *q)
{
    const double R = c->reference_temperature, r = q->reference;
    const double from = q->quantity == KEL_EXPANSION ? r : q->from;
    const bool value = q->quantity == KEL_COEFFICIENT;
    __float128 D = 1 + long_integral(c, &c->mean, R, r);
    __float128 f = value ? long_value(c, &c->mean, q->to) : long_integral(c, &c->mean, from, q->to);
    double B = value ? value_bound(c, &c->mean, q->to) : integral_bound(c, &c->mean, from, q->to);
    __float128 width = q->quantity == KEL_MEAN ? (__float128)q->to - q->from : 1;
    double d = (double)D, bound = (B + fabs((double)(f / D)) * integral_bound(c, &c->mean, R, r)) / d;
    return (judged){ f / D / width, bound / fabs((double)width) };
}

static judged
current_length(const kel_content *c, const kel_query *q)
{
    const double r = q->reference;
    __float128 i, X;
    switch (q->quantity) {
    case KEL_COEFFICIENT:
        return (judged){ long_value(c, &c->mean, q->to), value_bound(c, &c->mean, q->to) };
    case KEL_EXPANSION:
        i = long_integral(c, &c->mean, r, q->to);
        return (judged){ expm1q(i), (double)expq(i) * integral_bound(c, &c->mean, r, q->to) };
    case KEL_INTEGRAL:
        return (judged){ long_integral(c, &c->mean, q->from, q->to), integral_bound(c, &c->mean, q->from, q->to) };
    default:
        i = long_integral(c, &c->mean, q->from, q->to);
        X = expq(long_integral(c, &c->mean, r, q->from));
        __float128 change = X * expm1q(i), width = (__float128)q->to - q->from;
        double bound = (double)(X * expq(i)) * integral_bound(c, &c->mean, q->from, q->to) +
                       fabs((double)change) * integral_bound(c, &c->mean, r, q->from);
        return (judged){ change / width, bound / fabs((double)width) };
    }
}

static double
some_inside(uint64_t *state, const kel_content *c)
{
    const kel_piece *p = &c->pieces[random_below(state, c->piece_count)];
    return random_below(state, 4) == 0 ? p->from : random_between(state, p->from, p->to);
}

static void
some_curve(uint64_t *state, kel_base base)
{
    /* Degrees up to 20, sizes from those of low-expansion alloys to polymers, at times only 1 mK between the ends. */
    double size = pow(10.0, random_between(state, -7.0, -3.7));
    specimen_make(&s, state, 1 + random_below(state, 4), random_below(state, 21), 0, base, size);
}

static const kel_quantity quantities[] = { KEL_COEFFICIENT, KEL_MEAN, KEL_EXPANSION, KEL_INTEGRAL };

START_TEST(single_answers)
{
    uint64_t state = 1000 + (uint64_t)_i;
    for (int round = 0; round < CURVES / SHARES; round++) {
        kel_base base = (kel_base)(round % 2);
        some_curve(&state, base);
        const kel_content *c = &s.record.content;
        kel_query q = { .from = some_inside(&state, c), .to = some_inside(&state, c), .base = (int)base };
        if (round % 5 == 0 || q.from == q.to)
            q.to = q.from + 1e-3 <= c->range.hi ? q.from + 1e-3 : q.from - 1e-3;
        q.at = q.from;
        q.reference = some_inside(&state, c);
        for (size_t k = 0; k < sizeof quantities / sizeof quantities[0]; k++) {
            kel_answer answer;
            q.quantity = quantities[k];
            judged j = base == KEL_BASE_REFERENCE ? reference_length(c, &q) : current_length(c, &q);
            ck_assert_int_ge(kel_record_answer(&answer, &s.record, &q, NULL), KEL_OK);
            double error = fabs((double)(answer.value - j.want));
            double bound = j.bound + 8.0 * DBL_EPSILON * fabs((double)j.want);
            KEL_REQUIRE(error <= bound, "curve %d, quantity %d, base %d: %.17g, off by %.3g, bound %.3g", round,
                        (int)q.quantity, (int)base, answer.value, error, bound);
        }
    }
}
END_TEST

/* sum |c_k| in the place of alpha, of the piece or over the interval with the steps. */
static double
size_of(const kel_content *c, kel_quantity quantity, double from, double to)
{
    if (quantity == KEL_COEFFICIENT)
        return norm_of(&c->mean, long_piece(c, to));
    double lo = fmin(from, to), hi = fmax(from, to), sum = 0.0;
    for (size_t i = 0; i < c->piece_count; i++) {
        double a = fmax(lo, c->pieces[i].from), b = fmin(hi, c->pieces[i].to);
        sum += a < b ? (b - a) * norm_of(&c->mean, &c->pieces[i]) : 0.0;
    }
    for (size_t i = 0; i < c->transition_count; i++)
        sum += lo < c->transitions[i].at && c->transitions[i].at <= hi ? fabs(c->mean.steps[i]) : 0.0;
    return quantity == KEL_MEAN ? sum / (hi - lo) : sum;
}

START_TEST(array_calls)
{
    uint64_t state = 2000 + (uint64_t)_i;
    int by_kernel = 0;
    for (int round = 0; round < CURVES / SHARES; round++) {
        kel_arena *memory = kel_arena_new();
        double from[ELEMENTS], to[ELEMENTS], value[ELEMENTS];
        /* Mean coefficients of a current-length record lean on the reference too and go the single way. */
        some_curve(&state, round % 4 == 3 ? KEL_BASE_CURRENT : KEL_BASE_REFERENCE);
        kel_content *c = &s.record.content;
        const double R = c->reference_temperature;
        ck_assert_ptr_nonnull(memory);
        ck_assert_int_eq(kel__kernel_make(&s.record.kernel, c, memory, NULL), KEL_OK);
        by_kernel += s.record.kernel != NULL;
        for (size_t i = 0; i < ELEMENTS; i++) {
            from[i] = some_inside(&state, c);
            to[i] = some_inside(&state, c);
            if (i % 4 == 0 || from[i] == to[i])
                to[i] = from[i] + 1e-3 <= c->range.hi ? from[i] + 1e-3 : from[i] - 1e-3;
        }
        for (size_t k = 0; k < sizeof quantities / sizeof quantities[0]; k++) {
            const kel_quantity quantity = quantities[k];
            kel_status status =
                quantity == KEL_COEFFICIENT ? kel_record_coefficient_n(value, NULL, NULL, &s.record, to, ELEMENTS, NULL)
                : quantity == KEL_MEAN ? kel_record_mean_n(value, NULL, NULL, &s.record, from, to, ELEMENTS, NULL)
                : quantity == KEL_EXPANSION ? kel_record_expansion_n(value, NULL, NULL, &s.record, to, ELEMENTS, NULL)
                : kel_record_integral_n(value, NULL, NULL, &s.record, from, to, ELEMENTS, NULL);
            ck_assert_int_ge(status, KEL_OK);
            for (size_t i = 0; i < ELEMENTS; i++) {
                const kel_query q = { quantity, from[i], to[i], from[i], R, (int)c->base };
                judged j = c->base == KEL_BASE_REFERENCE ? reference_length(c, &q) : current_length(c, &q);
                double e = fabs((double)j.want), error = fabs((double)(value[i] - j.want));
                double bound = j.bound + 8.0 * DBL_EPSILON * e;
                if (s.record.kernel != NULL && (c->base == KEL_BASE_REFERENCE || quantity != KEL_MEAN)) {
                    bound = 1e-13 * size_of(c, quantity, quantity == KEL_EXPANSION ? R : from[i], to[i]);
                    /* Times L(T)/L(R), whose exponential is rounded. */
                    if (c->base == KEL_BASE_CURRENT && quantity == KEL_EXPANSION)
                        bound = bound * (double)(1 + j.want) + 8.0 * DBL_EPSILON * e;
                }
                KEL_REQUIRE(error <= bound, "curve %d, quantity %d, element %zu: %.17g, off by %.3g, bound %.3g", round,
                            (int)quantity, i, value[i], error, bound);
            }
        }
        kel_arena_free(memory);
    }
    /* Both ways have had their share. */
    ck_assert_int_gt(by_kernel, CURVES / SHARES / 4);
    ck_assert_int_lt(by_kernel, CURVES / SHARES * 3 / 4);
}
END_TEST

static TCase *
rounding(void)
{
    TCase *c = tcase_create("rounding");
    tcase_add_loop_test(c, single_answers, 0, SHARES);
    tcase_add_loop_test(c, array_calls, 0, SHARES / 5);
    return c;
}

KEL_TEST_MAIN("rounding", rounding)
