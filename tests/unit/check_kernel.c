/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Every compilation of the kernels that runs here, against quadruple precision, within the bounds that answer.h states;
   their flags against those of single answers, to the bit. */
#include "kernel.h"
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

enum { N = 10 * KEL__KERNEL_GROUP };

static specimen s;
static kel_arena *memory;
static double from[N], to[N], value[N], u[N];
static unsigned char flags[N];

static const kel__kernel *
kernel_of(const kel_content *c)
{
    const kel__kernel *kernel;
    kel_error err = { 0 };
    ck_assert_int_eq(kel__kernel_make(&kernel, c, memory, &err), KEL_OK);
    ck_assert_int_eq(err.code, KEL_OK);
    return kernel;
}

static void
begin(void)
{
    memory = kel_arena_new();
    ck_assert_ptr_nonnull(memory);
}

static void
end(void)
{
    kel_arena_free(memory);
}

/* Temperatures that try the formulas: ends of pieces, beside them, near each other, and some outside. */
static double
some_temperature(uint64_t *state, const kel_content *c, double other)
{
    const kel_piece *p = &c->pieces[random_below(state, c->piece_count)];
    switch (random_below(state, 8)) {
    case 0: return p->from;
    case 1: return p->to;
    case 2: return nextafter(p->to, 0.0);
    case 3: return other + 1e-3;
    case 4: return p->to - (p->to - p->from) * pow(10.0, random_between(state, -12.0, 0.0));
    default: return random_between(state, p->from, p->to);
    }
}

static void
some_intervals(uint64_t *state, const kel_content *c)
{
    for (size_t i = 0; i < N; i++) {
        from[i] = some_temperature(state, c, c->range.lo);
        to[i] = some_temperature(state, c, from[i]);
        if (i % 16 == 3)
            to[i] = from[i];
    }
}

/* What sum |c_k| gives in the place of alpha: at T, and integrated. Outside the pieces each T_k has its size at the far
   end. Steps count with theirs. */
static double
size_between(const kel_piece *p, const double *c, double a, double b)
{
    double size[KEL_COEFFICIENTS_MAX];
    for (size_t j = 0; j < p->count; j++)
        size[j] = fabs(c[j]);
    __float128 x = fmaxq(1, fmaxq(fabsq(long_x(p, a)), fabsq(long_x(p, b))));
    return (double)long_series(size, p->count, x);
}

static double
size_of_value(const kel_content *c, const kel_curve *curve, double t)
{
    const kel_piece *p = long_piece(c, t);
    return size_between(p, curve->coefficients + p->first, t, t);
}

static double
size_of_integral(const kel_content *c, const kel_curve *curve, double a, double b)
{
    double lo = fmin(a, b), hi = fmax(a, b), sum = 0.0;
    for (size_t i = 0; i < c->piece_count; i++) {
        const kel_piece *p = &c->pieces[i];
        double l = i == 0 ? lo : fmax(lo, p->from), h = i + 1 == c->piece_count ? hi : fmin(hi, p->to);
        if (l < h)
            sum += (h - l) * size_between(p, curve->coefficients + p->first, l, h);
    }
    for (size_t i = 0; i < c->transition_count; i++)
        if (lo < c->transitions[i].at && c->transitions[i].at <= hi)
            sum += fabs(curve->steps[i]);
    return sum;
}

/* The functional of a task and its size. */
static __float128
functional(double *size, const kel_content *c, const kel_curve *curve, kel__task task, double a, double b)
{
    if (task == KEL__TASK_VALUE) {
        *size = size_of_value(c, curve, b);
        return long_value(c, curve, b);
    }
    double width = task == KEL__TASK_MEAN ? fabs(b - a) : 1.0;
    *size = size_of_integral(c, curve, a, b) / width;
    return long_integral(c, curve, a, b) / (task == KEL__TASK_MEAN ? (__float128)b - a : 1);
}

/* The codes that run on this processor (the last one always does), all tasks, all elements: values within `limit` of
   the sizes, u within 1e-10, and the values with u those without, to the bit. */
static void
compare_codes(const kel__kernel *kernel, double limit)
{
    static __float128 want[N], want_u[N];
    static double size[N], size_u[N], bare[N];
    const kel_content *c = kernel->content;
    for (int task = KEL__TASK_INTEGRAL; task <= KEL__TASK_VALUE; task++) {
        for (size_t i = 0; i < N; i++) {
            want[i] = functional(&size[i], c, &c->mean, (kel__task)task, from[i], to[i]);
            __float128 squares = 0;
            size_u[i] = 0.0;
            for (size_t m = 0; m < c->mode_count; m++) {
                double one;
                __float128 f = functional(&one, c, &c->modes[m].curve, (kel__task)task, from[i], to[i]);
                squares += f * f;
                size_u[i] = hypot(size_u[i], one);
            }
            want_u[i] = sqrtq(squares);
        }
        for (size_t k = 0; kel__kernel_codes[k] != NULL; k++) {
            const kel__kernel_code *code = kel__kernel_codes[k];
            if (!code->runs())
                continue;
            code->values(bare, NULL, kernel, (kel__task)task, from, to, N);
            code->values(value, u, kernel, (kel__task)task, from, to, N);
            for (size_t i = 0; i < N; i++) {
                if (task == KEL__TASK_MEAN && from[i] == to[i])
                    continue;
                double error = (double)(value[i] - want[i]), error_u = (double)(u[i] - want_u[i]);
                KEL_REQUIRE(fabs(error) <= limit * size[i], "%s, task %d, %.17g to %.17g: off by %.3g of %.3g",
                            code->name, task, from[i], to[i], error, size[i]);
                KEL_REQUIRE(fabs(error_u) <= 1e-10 * size_u[i], "%s, task %d, %.17g to %.17g: u off by %.3g of %.3g",
                            code->name, task, from[i], to[i], error_u, size_u[i]);
                KEL_REQUIRE(memcmp(&bare[i], &value[i], sizeof value[i]) == 0, "%s, task %d: %.17g without u, %.17g "
                            "with", code->name, task, bare[i], value[i]);
            }
        }
    }
}

/* ---- accuracy ---- */

START_TEST(within_the_stated_bound)
{
    uint64_t state = 100 + (uint64_t)_i;
    int made = 0;
    for (int round = 0; round < 40; round++) {
        size_t modes = round % 4 == 0 ? 3 : 0;
        specimen_make(&s, &state, 1 + random_below(&state, 4), (size_t)_i, modes, KEL_BASE_REFERENCE, 2e-5);
        /* Coefficients that fall off as those of fits do, so that higher degrees take part. */
        for (size_t j = 0; j < s.record.content.coefficient_count; j++)
            s.coefficients[0][j] *= pow(0.3, (double)(j % ((size_t)_i + 1)));
        const kel__kernel *kernel = kernel_of(&s.record.content);
        if (kernel == NULL)
            continue;
        made++;
        some_intervals(&state, &s.record.content);
        compare_codes(kernel, 1e-13);
    }
    ck_assert_msg(made == 40 || (_i > 5 && made >= 20), "degree %d: %d curves of 40", _i, made);
}
END_TEST

/* One term alone is the worst that sum |c_k| allows; up to degree 5 it is answered. */
START_TEST(single_term)
{
    uint64_t state = 200 + (uint64_t)_i;
    specimen_make(&s, &state, 1, (size_t)_i, 0, KEL_BASE_REFERENCE, 0.0);
    s.coefficients[0][_i] = 1.0;
    const kel__kernel *kernel = kernel_of(&s.record.content);
    ck_assert_msg((kernel != NULL) == (_i <= 5), "degree %d", _i);
    for (int round = 0; kernel != NULL && round < 100; round++) {
        some_intervals(&state, &s.record.content);
        compare_codes(kernel, 1e-13);
    }
}
END_TEST

/* The modes' bound, which the mean curve has outside the pieces: here the highest degree alone. */
START_TEST(modes_of_any_degree)
{
    uint64_t state = 300 + (uint64_t)_i;
    specimen_make(&s, &state, 1, (size_t)_i, 1, KEL_BASE_REFERENCE, 0.0);
    s.coefficients[0][0] = 1.0;
    s.coefficients[1][_i] = 1.0;
    const kel__kernel *kernel = kernel_of(&s.record.content);
    ck_assert_ptr_nonnull(kernel);
    for (int round = 0; round < 50; round++) {
        some_intervals(&state, &s.record.content);
        compare_codes(kernel, 1e-13);
    }
}
END_TEST

START_TEST(outside_the_pieces)
{
    uint64_t state = 400 + (uint64_t)_i;
    for (int round = 0; round < 40; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, 3), (size_t)_i, 0, KEL_BASE_REFERENCE, 2e-5);
        for (size_t j = 0; j < s.record.content.coefficient_count; j++)
            s.coefficients[0][j] *= pow(0.1, (double)(j % ((size_t)_i + 1)));
        const kel__kernel *kernel = kernel_of(&s.record.content);
        ck_assert_ptr_nonnull(kernel);
        for (size_t i = 0; i < N; i++) {
            from[i] = random_between(&state, 0.0, 2000.0);
            to[i] = i % 5 == 0 ? 0.0 : random_between(&state, 0.0, 2000.0);
        }
        compare_codes(kernel, 1e-10);
    }
}
END_TEST

/* From a temperature to itself 0, without a sign; backwards the same with the other sign. */
START_TEST(exact_relations)
{
    uint64_t state = 500;
    specimen_make(&s, &state, _i == 0 ? 1 : 3, 5, 2, KEL_BASE_REFERENCE, 2e-5);
    s.record.content.transition_count = _i == 0 ? 0 : 3;
    s.coefficients[0][0] = -1e-3; /* alpha is negative */
    for (size_t i = 0; kel__kernel_codes[i] != NULL; i++) {
        double back[N], back_u[N];
        kel__kernel one = *kernel_of(&s.record.content);
        one.code = kel__kernel_codes[i];
        if (!one.code->runs())
            continue;
        some_intervals(&state, &s.record.content);
        one.code->values(value, u, &one, KEL__TASK_INTEGRAL, from, to, N);
        one.code->values(back, back_u, &one, KEL__TASK_INTEGRAL, to, from, N);
        for (size_t j = 0; j < N; j++) {
            ck_assert(value[j] == -back[j] && u[j] == back_u[j]);
            if (from[j] == to[j])
                ck_assert(value[j] == 0.0 && !signbit(value[j]) && u[j] == 0.0);
        }
    }
}
END_TEST

/* ---- flags ---- */

static unsigned
flags_one_by_one(const kel_content *c, kel__task task, double a, double b)
{
    static const kel_quantity quantities[] = { KEL_INTEGRAL, KEL_MEAN, KEL_COEFFICIENT };
    const kel_query q = { quantities[task], a, b, a, c->reference_temperature, (int)c->base };
    kel__plan plan;
    kel__plan_make(&plan, c, &q, NULL);
    return kel__plan_flags(&plan, c, &q) | (c->mode_count == 0 ? KEL_FLAG_UNKNOWN_U : 0u);
}

/* Bounds of range, gap and transitions: beside, at and behind each. Those that are left: below 0 K, above the limit, no
   temperature, and the mean over nothing. */
START_TEST(flags_are_those_of_single_answers)
{
    uint64_t state = 600 + (uint64_t)_i;
    static const double odd[] = { 0.0, -0.0, -1.0, -5e-324, (double)NAN, HUGE_VAL, -HUGE_VAL, 1e6, 1.0000001e6, 1e300 };
    for (int round = 0; round < 200; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, 3), 2, round % 2 == 0 ? 2 : 0, KEL_BASE_REFERENCE, 1e-5);
        kel_content *c = &s.record.content;
        if (round % 3 == 0)
            c->transition_count = 0;
        if (round % 4 == 0) {
            double a = random_between(&state, c->range.lo, c->range.hi), b = random_between(&state, a, c->range.hi);
            s.gaps[0] = (kel_interval){ a, b };
            c->gaps = s.gaps;
            c->gap_count = 1;
        }
        const double bounds[] = { c->range.lo, c->range.hi, s.gaps[0].lo, s.gaps[0].hi, s.transitions[0].at };
        kel__kernel one = *kernel_of(c);
        for (size_t i = 0; i < N; i++) {
            double t[2];
            for (int k = 0; k < 2; k++) {
                double bound = bounds[random_below(&state, 5)];
                size_t kind = random_below(&state, round % 5 == 0 ? 6 : 5);
                t[k] = kind == 0 ? bound : kind == 1 ? nextafter(bound, 0.0) : kind == 2 ? nextafter(bound, 1e9)
                     : kind == 5 ? odd[random_below(&state, sizeof odd / sizeof odd[0])]
                     : random_between(&state, c->range.lo, c->range.hi);
            }
            from[i] = _i == KEL__TASK_VALUE ? t[1] : t[0];
            to[i] = i % 9 == 0 ? from[i] : t[1];
        }
        for (size_t i = 0; kel__kernel_codes[i] != NULL; i++) {
            one.code = kel__kernel_codes[i];
            if (!one.code->runs())
                continue;
            unsigned all = one.code->flags(flags, &one, (kel__task)_i, from, to, N), want = 0;
            for (size_t j = 0; j < N; j++) {
                bool good = from[j] >= 0.0 && to[j] >= 0.0 && from[j] <= 1e6 && to[j] <= 1e6;
                bool left = !good || (_i == KEL__TASK_MEAN && from[j] == to[j]);
                KEL_REQUIRE(((flags[j] & KEL__KERNEL_LEFT) != 0) == left, "%s: %.17g to %.17g left", one.code->name,
                            from[j], to[j]);
                want |= flags[j];
                if (good)
                    KEL_REQUIRE((flags[j] & ~(unsigned)KEL__KERNEL_LEFT) ==
                                flags_one_by_one(c, (kel__task)_i, from[j], to[j]), "%s: flags of %.17g to %.17g",
                                one.code->name, from[j], to[j]);
            }
            ck_assert_uint_eq(all, want);
        }
    }
}
END_TEST

/* ---- which curves ---- */

START_TEST(curves_that_are_left)
{
    uint64_t state = 7;
    static const struct { const char *label; size_t pieces, degree; bool want; } rows[] = {
        { "degree 12", 1, 12, true },
        { "degree 13", 1, 13, false },
        { "as many numbers as fit", 6, 12, true }, /* 78 and 6 steps */
        { "more than fit", 6, 15, false },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        specimen_make(&s, &state, rows[i].pieces, rows[i].degree, 0, KEL_BASE_REFERENCE, 1e-5);
        for (size_t p = 0; p < rows[i].pieces; p++)
            for (size_t j = 1; j <= rows[i].degree; j++)
                s.coefficients[0][s.pieces[p].first + j] = pow(0.1, (double)j) * s.coefficients[0][s.pieces[p].first];
        ck_assert_msg((kernel_of(&s.record.content) != NULL) == rows[i].want, "%s", rows[i].label);
    }
    specimen_make(&s, &state, 1, 1, 1, KEL_BASE_REFERENCE, 1e-5);
    s.record.content.transition_count = 0;
    static const struct { const char *label; double from, to, c1, mode, step; bool want; } odd[] = {
        { "usual", 4, 300, 1e-6, 1e-8, 0, true },
        { "narrow", 300, 300.0005, 1e-6, 1e-8, 0, false },
        { "too hot", 300, 1.1e6, 1e-6, 1e-8, 0, false },
        { "huge coefficient", 4, 300, 1e200, 1e-8, 0, false },
        { "huge mode", 4, 300, 1e-6, 1e200, 0, false },
        { "huge step", 4, 300, 1e-6, 1e-8, 1e200, false },
        { "nothing but zeros", 4, 300, 0, 0, 0, true },
    };
    for (size_t i = 0; i < sizeof odd / sizeof odd[0]; i++) {
        s.pieces[0].from = odd[i].from, s.pieces[0].to = odd[i].to;
        s.record.content.range = (kel_interval){ odd[i].from, odd[i].to };
        s.coefficients[0][0] = s.coefficients[0][1] = odd[i].c1;
        s.coefficients[1][1] = odd[i].mode;
        s.record.content.transition_count = odd[i].step != 0.0;
        s.steps[0][0] = odd[i].step;
        ck_assert_msg((kernel_of(&s.record.content) != NULL) == odd[i].want, "%s", odd[i].label);
    }
    /* One temperature: a constant on a piece of no width. */
    specimen_make(&s, &state, 1, 0, 0, KEL_BASE_REFERENCE, 1e-5);
    s.pieces[0].from = s.pieces[0].to = 293.0;
    s.record.content.transition_count = 0;
    ck_assert_ptr_nonnull(kernel_of(&s.record.content));
}
END_TEST

static TCase *
accuracy(void)
{
    TCase *c = tcase_create("accuracy");
    tcase_add_checked_fixture(c, begin, end);
    tcase_add_loop_test(c, within_the_stated_bound, 0, KEL__KERNEL_COUNT);
    tcase_add_loop_test(c, single_term, 0, KEL__KERNEL_COUNT);
    tcase_add_loop_test(c, modes_of_any_degree, 0, KEL__KERNEL_COUNT);
    tcase_add_loop_test(c, outside_the_pieces, 0, KEL__KERNEL_COUNT);
    tcase_add_loop_test(c, exact_relations, 0, 2);
    tcase_add_loop_test(c, flags_are_those_of_single_answers, KEL__TASK_INTEGRAL, KEL__TASK_VALUE + 1);
    tcase_add_test(c, curves_that_are_left);
    return c;
}

KEL_TEST_MAIN("kernel", accuracy)
