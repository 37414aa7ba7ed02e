/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows of functionals and the conditions of continuity, against the polynomials written out. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

typedef struct set { by_hand hand; const kel_table *tables[1]; kel_fit_options options; kel__problem p; kel__layout l; kel_arena *memory; } set;

static const double join[] = { 80, 200 };
static const int smooth[] = { KEL_CONTINUITY_CURVATURE, KEL_CONTINUITY_VALUE };

static void
make(set *s, const int *degrees)
{
    by_hand_start(&s->hand, "hand", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&s->hand, KEL_KIND_COEFFICIENT, 1e-8);
    by_hand_row(&s->hand, 0, 4, 4, 0, 0, 0);
    by_hand_row(&s->hand, 0, 300, 300, 1e-5, 0, 0);
    s->tables[0] = &s->hand.table;
    s->options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s->options.joins = join;
    s->options.join_count = 2;
    s->options.continuity = smooth;
    s->options.continuity_count = 2;
    s->memory = kel_arena_new();
    ck_assert_int_eq(kel__problem_make(&s->p, s->memory, s->tables, 1, &s->options, NULL), KEL_OK);
    ck_assert_int_eq(kel__layout_make(&s->l, &s->p, s->memory, degrees, NULL), KEL_OK);
}

/* T_n by its cosine, and the integral of T_n over x: x, x^2/2, [T_(n+1)/(n+1) - T_(n-1)/(n-1)]/2. */
static long double
chebyshev(int n, long double x)
{
    return x > 1 || x < -1 ? coshl(n * acoshl(fabsl(x))) * (x < 0 && n % 2 ? -1 : 1) : cosl(n * acosl(x));
}

static long double
antiderivative(int n, long double x)
{
    return n == 0 ? x : n == 1 ? x * x / 2 : (chebyshev(n + 1, x) / (n + 1) - chebyshev(n - 1, x) / (n - 1)) / 2;
}

static const double temperatures[] = { 4, 4.5, 42, 79.999, 80, 80.001, 150, 200, 250, 299, 300, 310 };

START_TEST(value_rows)
{
    set s;
    const int degrees[] = { 5, 8, 2 };
    make(&s, degrees);
    double t = temperatures[_i], row[32] = { 0 };
    kel__add_value(row, &s.l, t, 0, 2);
    size_t own = t < 80 ? 0 : t < 200 ? 1 : 2;
    ck_assert_uint_eq(kel__piece_at(&s.l, t, 0), own);
    for (size_t i = 0; i < 3; i++)
        for (size_t j = 0; j < s.l.pieces[i].count; j++) {
            const kel_piece *p = &s.l.pieces[i];
            long double x = (2 * (long double)t - p->from - p->to) / (p->to - p->from);
            double want = i == own ? (double)(2 * chebyshev((int)j, x)) : 0;
            ck_assert_abs(row[p->first + j], want, 1e-13, "1");
        }
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(below_a_join)
{
    set s;
    const int degrees[] = { 1, 1, 1 };
    make(&s, degrees);
    ck_assert_uint_eq(kel__piece_at(&s.l, 80, -1), 0);
    ck_assert_uint_eq(kel__piece_at(&s.l, 80, 1), 1);
    ck_assert_uint_eq(kel__piece_at(&s.l, 200, -1), 1);
    ck_assert_uint_eq(kel__piece_at(&s.l, 300, 0), 2);
    ck_assert_uint_eq(kel__piece_at(&s.l, 1000, 0), 2);
    ck_assert_uint_eq(kel__piece_at(&s.l, 0, 0), 0);
    kel_arena_free(s.memory);
}
END_TEST

static const struct { double a, b; } intervals[] = {
    { 4, 300 }, { 300, 4 }, { 10, 20 }, { 79, 81 }, { 80, 200 }, { 150, 150.001 }, { 293.15, 77 }, { 250, 320 }, { 1, 3 },
};

START_TEST(integral_rows)
{
    set s;
    const int degrees[] = { 5, 8, 3 };
    make(&s, degrees);
    double a = intervals[_i].a, b = intervals[_i].b, row[32] = { 0 }, back[32] = { 0 };
    ck_assert_double_eq(kel__add_integral(row, &s.l, &s.p, a, 0, b, 0, 1), 0);
    kel__add_integral(back, &s.l, &s.p, b, 0, a, 0, 1);
    double lo = fmin(a, b), hi = fmax(a, b);
    for (size_t i = 0; i < 3; i++)
        for (size_t j = 0; j < s.l.pieces[i].count; j++) {
            const kel_piece *p = &s.l.pieces[i];
            long double from = i == 0 ? lo : fmax(lo, p->from), to = i == 2 ? hi : fmin(hi, p->to), width = p->to - p->from;
            long double want = 0;
            if (from < to)
                want = (antiderivative((int)j, (2 * to - p->from - p->to) / width) - antiderivative((int)j, (2 * from - p->from - p->to) / width)) *
                       width / 2 * (b < a ? -1 : 1);
            /* The antiderivatives' own difference carries eps of 1 over the width. */
            ck_assert_abs(row[p->first + j], (double)want, 1e-14 * fmax(hi - lo, 0.1), "K");
            ck_assert_double_eq(row[p->first + j], -back[p->first + j]);
        }
    kel_arena_free(s.memory);
}
END_TEST

/* Conditions vanish on a curve that is smooth by nature: one cubic, written in each piece's own basis. */
START_TEST(conditions_hold_for_one_polynomial)
{
    set s;
    const int degrees[] = { 3, 3, 3 };
    make(&s, degrees);
    ck_assert_uint_eq(s.l.condition_count, 4);
    double c[12];
    for (size_t i = 0; i < 3; i++) {
        const kel_piece *p = &s.l.pieces[i];
        double m = (p->from + p->to) / 2 - 150, h = (p->to - p->from) / 2;
        /* t^3 - 2000 t with t = m + h x, and x^3 = (T3 + 3 T1)/4, x^2 = (T2 + 1)/2 */
        double a0 = m * m * m - 2000 * m, a1 = (3 * m * m - 2000) * h, a2 = 3 * m * h * h, a3 = h * h * h;
        c[p->first] = a0 + a2 / 2;
        c[p->first + 1] = a1 + 3 * a3 / 4;
        c[p->first + 2] = a2 / 2;
        c[p->first + 3] = a3 / 4;
    }
    for (size_t k = 0; k < 4; k++) {
        double sum = 0, size = 0;
        for (size_t j = 0; j < 12; j++) {
            sum += s.l.conditions[k * 12 + j] * c[j];
            size += fabs(s.l.conditions[k * 12 + j] * c[j]);
        }
        ck_assert_double_gt(size, 1);
        ck_assert_abs(sum / size, 0, 16 * KEL__EPS, "of the terms");
    }
    kel_arena_free(s.memory);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, value_rows, 0, KEL_LENGTH(temperatures));
    tcase_add_loop_test(c, integral_rows, 0, KEL_LENGTH(intervals));
    return c;
}

KEL_TCASE(single, below_a_join, conditions_hold_for_one_polynomial)
KEL_TEST_MAIN("basis", loops, single)
