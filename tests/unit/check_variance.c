/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The scatter of rows without stated u: its defining equation holds at the solution, for one and for several columns. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

typedef struct set { by_hand hand; const kel_table *tables[1]; kel_fit_options options; kel__problem p; kel__solution s; kel_arena *memory; } set;

static double
noise(int i)
{
    return sin(12.9898 * i * i + 78.233);
}

static void
solve(set *s, const int *degrees)
{
    s->tables[0] = &s->hand.table;
    s->options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s->memory = kel_arena_new();
    kel_error err = { 0 };
    ck_assert_msg(kel__problem_make(&s->p, s->memory, s->tables, 1, &s->options, &err) == KEL_OK, "%s", err.message);
    ck_assert_msg(kel__solve(&s->s, &s->p, s->memory, degrees, &err) == KEL_OK, "%s", err.message);
}

/* sum r_i^2/u_i^2 = n - sum h_i over the unstated rows of a column. */
static void
assert_equation(const char *label, const set *s, size_t column)
{
    double sum = 0, freedom = 0, work[64];
    for (size_t i = 0; i < s->p.row_count; i++) {
        if (s->p.rows[i].column != column || s->p.rows[i].seen->u_stated)
            continue;
        kel__row_result r = kel__row_evaluate(&s->p, &s->s, &s->p.rows[i], true, work);
        sum += r.residual * r.residual / (r.u * r.u);
        freedom += 1 - r.leverage;
    }
    ck_assert_abs_for(label, sum / freedom, 1, 1e-9, "1");
}

START_TEST(one_column_is_the_classic_variance)
{
    set s;
    by_hand_start(&s.hand, "one", NAN, KEL_BASE_REFERENCE);
    by_hand_column(&s.hand, KEL_KIND_COEFFICIENT, 1e-9);
    for (int i = 0; i < 30; i++)
        by_hand_row(&s.hand, 0, 100 + 10 * i, 100 + 10 * i, 1e-5 + 1e-8 * i + 1e-7 * noise(i), 0, 0);
    const int degree = 1;
    solve(&s, &degree);
    assert_equation("one column", &s, 0);
    double work[64], u = kel__row_u(&s.p, &s.s, &s.p.rows[0], 0);
    ck_assert_abs(u / sqrt(s.s.rss[0] / 28), 1, 1e-13, "1");
    ck_assert_abs(s.s.leverage[0], 2, 1e-12, "1");
    kel__row_result r = kel__row_evaluate(&s.p, &s.s, &s.p.rows[3], true, work);
    ck_assert_double_eq(r.shared_term, 0);
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(rounding_is_the_floor)
{
    set s;
    by_hand_start(&s.hand, "floor", NAN, KEL_BASE_REFERENCE);
    by_hand_column(&s.hand, KEL_KIND_COEFFICIENT, 1e-6);
    for (int i = 0; i < 30; i++)
        by_hand_row(&s.hand, 0, 100 + 10 * i, 100 + 10 * i, 1e-5 + 1e-8 * i, 0, 0);
    const int degree = 1;
    solve(&s, &degree);
    ck_assert_double_eq(s.s.scatter[0], 0);
    ck_assert_abs(kel__row_u(&s.p, &s.s, &s.p.rows[0], 0), 1e-6 / sqrt(12), 1e-21, "1/K");
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(means_weigh_by_their_interval)
{
    set s;
    by_hand_start(&s.hand, "means", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&s.hand, KEL_KIND_MEAN, 1e-9);
    for (int i = 0; i < 30; i++) {
        double t = 300 + 20 * i, width = t - 293.15;
        by_hand_row(&s.hand, 0, 293.15, t, 1e-5 + 1e-9 * width + 3e-6 * noise(i) / width, 0, 0);
    }
    const int degree = 1;
    solve(&s, &degree);
    ck_assert(!s.p.uniform);
    assert_equation("means", &s, 0);
    double near = kel__row_u(&s.p, &s.s, &s.p.rows[0], 0), far = kel__row_u(&s.p, &s.s, &s.p.rows[29], 0);
    ck_assert_double_gt(near, 50 * far);
    ck_assert_double_gt(s.s.scatter[0], 1e-6);
    ck_assert_double_lt(s.s.scatter[0], 4e-6);
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(every_column_has_its_own)
{
    set s;
    by_hand_start(&s.hand, "columns", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&s.hand, KEL_KIND_COEFFICIENT, 1e-9);
    by_hand_column(&s.hand, KEL_KIND_EXPANSION, 1e-9);
    by_hand_column(&s.hand, KEL_KIND_MEAN, 1e-9);
    for (int i = 0; i < 25; i++) {
        double t = 310 + 20 * i, w = t - 293.15, e = 1e-5 * w + 5e-9 * w * w;
        by_hand_row(&s.hand, 0, t, t, 1e-5 + 1e-8 * w + 2e-8 * noise(i), 0, 0);
        by_hand_row(&s.hand, 1, 293.15, t, e + 1e-6 * noise(i + 100), 0, 0);
        by_hand_row(&s.hand, 2, 293.15, t, e / w + 2e-5 * noise(i + 200) / w, 0, 0);
    }
    const int degree = 2;
    solve(&s, &degree);
    for (size_t c = 0; c < 3; c++)
        assert_equation("of three", &s, c);
    ck_assert_double_gt(s.s.scatter[2], 5 * s.s.scatter[1]);
    double sum = 0;
    for (size_t c = 0; c < 3; c++)
        sum += s.s.leverage[c];
    ck_assert_abs(sum, 3, 1e-9, "1");
    kel_arena_free(s.memory);
}
END_TEST

/* A column of two rows beside a long one: it takes u = f resolution with the pooled f, here from itself. */
START_TEST(few_rows_pool)
{
    set s;
    by_hand_start(&s.hand, "few", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&s.hand, KEL_KIND_COEFFICIENT, 1e-9);
    by_hand_column(&s.hand, KEL_KIND_EXPANSION, 1e-7);
    for (int i = 0; i < 25; i++)
        by_hand_row(&s.hand, 0, 300 + 10 * i, 300 + 10 * i, 1e-5 + 1e-9 * i + 1e-8 * noise(i), 0, 0);
    by_hand_row(&s.hand, 1, 293.15, 400, 1.0746e-3, 0, 0);
    by_hand_row(&s.hand, 1, 293.15, 500, 2.1009e-3, 0, 0);
    const int degree = 1;
    solve(&s, &degree);
    ck_assert(isnan(s.s.scatter[1]));
    ck_assert(s.s.scatter_known);
    assert_equation("long column", &s, 0);
    if (s.s.factor > 1) /* at the floor the sum is smaller */
        assert_equation("pooled", &s, 1);
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(stated_rows)
{
    set s;
    by_hand_start(&s.hand, "stated", NAN, KEL_BASE_REFERENCE);
    by_hand_column(&s.hand, KEL_KIND_COEFFICIENT, 1.2e-7);
    for (int i = 0; i < 20; i++)
        by_hand_row(&s.hand, 0, 100 + 10 * i, 100 + 10 * i, 1e-5 + 1e-8 * i + 1e-7 * noise(i), 1e-7, 0.02);
    const int degree = 1;
    solve(&s, &degree);
    double work[64], chi2 = 0;
    for (size_t i = 0; i < 20; i++) {
        kel__row_result r = kel__row_evaluate(&s.p, &s.s, &s.p.rows[i], false, work);
        double want = sqrt(1e-14 + 0.0004 * r.fitted * r.fitted + 1.2e-7 * 1.2e-7 / 12);
        ck_assert_abs(r.u / want, 1, 1e-14, "1");
        chi2 += r.residual * r.residual / (r.u * r.u);
    }
    ck_assert_abs(s.s.chi2 / chi2, 1, 1e-12, "1");
    ck_assert_uint_eq(s.s.stated, 20);
    kel_arena_free(s.memory);
}
END_TEST

KEL_TCASE(all, one_column_is_the_classic_variance, rounding_is_the_floor, means_weigh_by_their_interval, every_column_has_its_own, few_rows_pool,
          stated_rows)
KEL_TEST_MAIN("variance", all)
