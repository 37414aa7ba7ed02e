/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One fit for given degrees: against normal equations in 33 digits, from a common factor as directly, the conditions
   that an iterated solution must meet, and what must not change it. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"
#include "quad.h"

enum { MOST = 24, ROWS = 60 };

typedef struct set {
    by_hand hand[2];
    const kel_table *tables[2];
    kel_fit_options options;
    kel__problem p;
    kel__solution s;
    kel_arena *memory;
} set;

/* A fixed sequence in -1..1 with little structure. */
static double
error_of(int i)
{
    return 2 * fmod((i + 1) * 0.6180339887498949, 1.0) - 1;
}

static double
alpha(double t)
{
    double x = (t - 300) / 200;
    return 1e-5 * (1.2 + 0.4 * x - 0.1 * x * x + 0.05 * x * x * x);
}

static double
expansion(double from, double to)
{
    double m = (from + to) / 2, d = (to - from) / 2 / sqrt(3);
    return (to - from) / 2 * (alpha(m - d) + alpha(m + d));
}

static void
solve(set *s, size_t tables, const int *degrees)
{
    kel_error err = { 0 };
    for (size_t i = 0; i < tables; i++)
        s->tables[i] = &s->hand[i].table;
    s->memory = kel_arena_new();
    ck_assert_msg(kel__problem_make(&s->p, s->memory, s->tables, tables, &s->options, &err) == KEL_OK, "%s",
                  err.message);
    ck_assert_msg(kel__solve(&s->s, &s->p, s->memory, degrees, &err) == KEL_OK, "%s", err.message);
}

/* Coefficients, means over intervals and expansions with stated absolute u, all unequal. */
static void
mixed_kinds(by_hand *h)
{
    by_hand_start(h, "mixed", 250, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_COEFFICIENT, 0);
    by_hand_column(h, KEL_KIND_MEAN, 0);
    by_hand_column(h, KEL_KIND_EXPANSION, 0);
    for (int i = 0; i < ROWS / 3; i++) {
        double t = 101 + 20 * i, b = t + 15 + i, u = 1e-8 * (2 + error_of(7 * i));
        by_hand_row(h, 0, t, t, alpha(t) + u * error_of(i), u, 0);
        by_hand_row(h, 1, t, b, expansion(t, b) / (b - t) + u * error_of(i + 100), 2 * u, 0);
        by_hand_row(h, 2, 250, t, expansion(250, t) + 100 * u * error_of(i + 200), 100 * u, 0);
    }
}

/* One piece: the row's functional from antiderivatives in 33 digits. */
static quad
functional(const kel_piece *piece, const kel_observation *o, size_t n)
{
    if (o->from == o->to)
        return quad_chebyshev(n, quad_piece_x(piece, o->to));
    quad half = ((quad)piece->to - piece->from) / 2;
    quad whole = half * (quad_chebyshev_integral(n, quad_piece_x(piece, o->to)) -
                         quad_chebyshev_integral(n, quad_piece_x(piece, o->from)));
    return o->kind == KEL_KIND_MEAN ? whole / ((quad)o->to - o->from) : whole;
}

static const int degrees_tried[] = { 0, 1, 3, 6, 10 };

START_TEST(normal_equations)
{
    set s;
    const int degree = degrees_tried[_i];
    mixed_kinds(&s.hand[0]);
    s.options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    solve(&s, 1, &degree);
    ck_assert_int_eq(s.s.iterations, 1);
    size_t k = (size_t)degree + 1;
    static quad m[121], rhs[11], row[11];
    memset(m, 0, sizeof m);
    memset(rhs, 0, sizeof rhs);
    for (size_t i = 0; i < s.p.row_count; i++) {
        const kel_observation *o = s.p.rows[i].seen;
        for (size_t j = 0; j < k; j++)
            row[j] = functional(&s.s.layout.pieces[0], o, j) / o->u_absolute;
        for (size_t j = 0; j < k; j++) {
            rhs[j] += row[j] * o->value / o->u_absolute;
            for (size_t l = 0; l < k; l++)
                m[j * k + l] += row[j] * row[l];
        }
    }
    quad_invert(m, k);
    quad want[11], chi2 = 0;
    for (size_t j = 0; j < k; j++) {
        want[j] = 0;
        for (size_t l = 0; l < k; l++)
            want[j] += m[j * k + l] * rhs[l];
    }
    for (size_t i = 0; i < s.p.row_count; i++) {
        const kel_observation *o = s.p.rows[i].seen;
        quad r = o->value;
        for (size_t j = 0; j < k; j++)
            r -= want[j] * functional(&s.s.layout.pieces[0], o, j);
        chi2 += r / o->u_absolute * (r / o->u_absolute);
    }
    for (size_t j = 0; j < k; j++) /* condition below 1e3 */
        ck_assert_abs(s.s.x[j] / (double)want[0], (double)(want[j] / want[0]), 1e-13, "of the first coefficient");
    ck_assert_lre(s.s.chi2, (double)chi2, 10);
    /* Covariance: Z R^-1 R^-T Z'; its diagonal shows in the leverages' sum and here in one functional, alpha at 300
       K. */
    double g[16] = { 0 }, z[16] = { 0 }, u2 = 0;
    quad v2 = 0, v[11];
    kel__add_value(g, &s.s.layout, 300, 0, 1);
    for (size_t i = 0; i < k; i++)
        for (size_t j = 0; j < k; j++)
            z[i] += s.s.basis[i * k + j] * g[j];
    kel__solve_transposed(z, s.s.triangle, k);
    for (size_t j = 0; j < k; j++) {
        u2 += z[j] * z[j];
        v[j] = quad_chebyshev(j, quad_piece_x(&s.s.layout.pieces[0], 300));
    }
    for (size_t i = 0; i < k; i++)
        for (size_t j = 0; j < k; j++)
            v2 += v[i] * m[i * k + j] * v[j];
    ck_assert_lre(u2, (double)v2, 11);
    double leverages = 0;
    for (size_t c = 0; c < 3; c++)
        leverages += s.s.leverage[c];
    ck_assert_abs(leverages, (double)k, 1e-11, "1");
    kel_arena_free(s.memory);
}
END_TEST

/* Uniform rows, and rows with stated absolute u: the factor of degree 10 serves all lower degrees. */
static const struct { const char *label; double u; double join; int continuity; } factored[] = {
    { "uniform", 0, 0, 0 },
    { "uniform, two pieces", 0, 250, KEL_CONTINUITY_SLOPE },
    { "stated", 1e-8, 0, 0 },
    { "stated, two pieces", 1e-8, 330, KEL_CONTINUITY_VALUE },
};

START_TEST(one_factor_for_all_degrees)
{
    set s;
    by_hand *h = &s.hand[0];
    by_hand_start(h, "factor", NAN, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_COEFFICIENT, 1e-9);
    for (int i = 0; i < ROWS; i++) {
        double t = 100 + 6.5 * i;
        by_hand_row(h, 0, t, t, alpha(t) + 1e-8 * error_of(i), factored[_i].u * (1.5 + error_of(5 * i)), 0);
    }
    s.options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s.options.joins = &factored[_i].join;
    s.options.join_count = factored[_i].join > 0;
    s.options.continuity = &factored[_i].continuity;
    s.options.continuity_count = 1;
    s.tables[0] = &h->table;
    s.memory = kel_arena_new();
    ck_assert_int_eq(kel__problem_make(&s.p, s.memory, s.tables, 1, &s.options, NULL), KEL_OK);
    kel__factor factor;
    kel__layout full;
    const int highest[] = { 10, 10 };
    ck_assert_int_eq(kel__factor_all(&factor, &full, &s.p, s.memory, highest, NULL), KEL_OK);
    for (int d = 0; d <= 10; d++) {
        const int degrees[] = { d, d };
        kel__solution a, b;
        const char *label = factored[_i].label;
        ck_assert_int_eq(kel__solve_from(&a, &s.p, s.memory, &factor, &full, degrees, NULL), KEL_OK);
        ck_assert_int_eq(kel__solve(&b, &s.p, s.memory, degrees, NULL), KEL_OK);
        ck_assert_uint_eq(a.parameters, b.parameters);
        ck_assert(a.every_piece == b.every_piece && a.rank == b.rank);
        for (size_t j = 0; j < a.layout.curve; j++)
            ck_assert_abs_for(label, a.x[j], b.x[j], 1e-13 * 1.2e-5, "1/K");
        ck_assert_lre_for(label, a.rss[0], b.rss[0], 9); /* eps |y|^2 beside the sum of squares */
        ck_assert_lre_for(label, a.condition, b.condition, 10);
        if (factored[_i].u > 0) {
            ck_assert_lre_for(label, a.chi2, b.chi2, 9);
            ck_assert_lre_for(label, a.relative_rss, b.relative_rss, 9);
            ck_assert_lre_for(label, a.relative_floor, b.relative_floor, 12);
            ck_assert_uint_eq(a.stated, ROWS);
        } else {
            ck_assert_lre_for(label, a.scatter[0], b.scatter[0], 8);
            ck_assert_double_eq(a.leverage[0], b.leverage[0]);
        }
    }
    kel_arena_free(s.memory);
}
END_TEST

/* Iterated cases. At a solution x, with J the gradients, F the shared columns, r the net residuals and u taken there:
       Z' J' r/u^2 = 0,      F' r/u^2 = the shared errors themselves (their prior rows). */
static const struct {
    const char *label;
    kel_kind kind;
    double reference, record_reference, u_absolute, u_relative, shared_relative, shared_absolute;
    kel_base table, record;
    kel_step_kind step;
} iterated[] = {
    { "relative u", KEL_KIND_COEFFICIENT, 293, 293, 0, 0.01, 0, 0, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE,
      KEL_STEP_NONE },
    { "relative and absolute u", KEL_KIND_EXPANSION, 293, 293, 1e-6, 0.02, 0, 0, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE,
      KEL_STEP_NONE },
    { "shared relative", KEL_KIND_COEFFICIENT, 293, 293, 1e-8, 0, 0.03, 0, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE,
      KEL_STEP_NONE },
    { "shared, both parts, and relative u", KEL_KIND_MEAN, 293, 293, 0, 0.01, 0.03, 1e-7, KEL_BASE_REFERENCE,
      KEL_BASE_REFERENCE, KEL_STEP_NONE },
    { "nothing stated, means", KEL_KIND_MEAN, 293, 293, 0, 0, 0, 0, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE,
      KEL_STEP_NONE },
    { "other reference", KEL_KIND_EXPANSION, 480, 100, 1e-6, 0, 0, 0, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE,
      KEL_STEP_NONE },
    { "other reference, coefficients", KEL_KIND_COEFFICIENT, 480, 100, 1e-8, 0, 0, 0, KEL_BASE_REFERENCE,
      KEL_BASE_REFERENCE, KEL_STEP_NONE },
    { "current length from expansions", KEL_KIND_EXPANSION, 293, 293, 1e-6, 0, 0, 0, KEL_BASE_REFERENCE,
      KEL_BASE_CURRENT, KEL_STEP_NONE },
    { "current length from means, shared", KEL_KIND_MEAN, 293, 200, 1e-8, 0, 0.02, 0, KEL_BASE_REFERENCE,
      KEL_BASE_CURRENT, KEL_STEP_NONE },
    { "reference length from current length", KEL_KIND_COEFFICIENT, 293, 293, 1e-8, 0, 0, 0, KEL_BASE_CURRENT,
      KEL_BASE_REFERENCE, KEL_STEP_NONE },
    { "fitted step, other reference", KEL_KIND_EXPANSION, 480, 100, 1e-6, 0, 0, 0, KEL_BASE_REFERENCE,
      KEL_BASE_REFERENCE, KEL_STEP_FITTED },
    { "stated step, current length, shared", KEL_KIND_EXPANSION, 480, 100, 1e-6, 0, 0.01, 0, KEL_BASE_REFERENCE,
      KEL_BASE_CURRENT, KEL_STEP_STATED },
};

START_TEST(iterated_solutions_are_stationary)
{
    set s;
    by_hand *h = &s.hand[0];
    kel_kind kind = iterated[_i].kind;
    double r = iterated[_i].reference, step = iterated[_i].step == KEL_STEP_NONE ? 0 : 1e-4;
    const char *label = iterated[_i].label;
    by_hand_start(h, "iterated", r, iterated[_i].table);
    by_hand_column(h, kind, kind == KEL_KIND_EXPANSION ? 1e-7 : 1e-9);
    if (step != 0)
        by_hand_transition(h, 310, iterated[_i].step, step);
    for (int i = 0; i < ROWS; i++) {
        double t = 103 + 6.5 * i, e = expansion(r, t) + step * ((t >= 310) - (r >= 310)),
               scale = 1 + 0.01 * error_of(i);
        double value = kind == KEL_KIND_COEFFICIENT ? alpha(t) : kind == KEL_KIND_MEAN ? e / (t - r) : e;
        by_hand_row(h, 0, kind == KEL_KIND_COEFFICIENT ? t : r, t, value * scale, iterated[_i].u_absolute,
                    iterated[_i].u_relative);
    }
    if (iterated[_i].shared_relative > 0 || iterated[_i].shared_absolute > 0)
        by_hand_shared(h, iterated[_i].shared_relative, iterated[_i].shared_absolute, KEL_DIM_PER_KELVIN);
    s.options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s.options.reference = iterated[_i].record_reference;
    s.options.base = iterated[_i].record;
    const int degrees[] = { 3, 2 };
    solve(&s, 1, degrees);
    ck_assert_msg(s.s.iterations >= 2 && s.s.iterations <= 12, "%s: %d iterations", label, s.s.iterations);

    size_t n = s.s.layout.curve, k = s.s.parameters, q = s.p.shared_count;
    double sums[MOST] = { 0 }, sizes[MOST] = { 0 }, gradient[MOST], work[3 * MOST];
    for (size_t i = 0; i < s.p.row_count; i++) {
        kel__row_result e = kel__row_evaluate(&s.p, &s.s, &s.p.rows[i], false, work);
        kel__model_row(gradient, work, &s.p, &s.s.layout, &s.p.rows[i], s.s.x);
        double shared = 0;
        for (size_t j = 0; j < q; j++)
            shared += s.s.x[n + j] * kel__shared_size(&s.p, j, &s.p.rows[i], e.fitted);
        ck_assert_abs_for(label, e.shared_term, shared, 4 * KEL__EPS * fabs(shared), "SI");
        ck_assert_double_eq(e.residual, s.p.rows[i].seen->value - e.fitted - e.shared_term);
        for (size_t j = 0; j < k + q; j++) {
            double g = 0;
            for (size_t l = 0; j < k && l < n; l++)
                g += s.s.basis[j * n + l] * gradient[l];
            if (j >= k)
                g = kel__shared_size(&s.p, j - k, &s.p.rows[i], e.fitted);
            sums[j] += g * e.residual / (e.u * e.u);
            sizes[j] += fabs(g * e.residual / (e.u * e.u));
        }
    }
    for (size_t j = 0; j < k + q; j++) {
        double prior = j < k ? 0 : s.s.x[n + j - k];
        ck_assert_abs_for(label, (sums[j] - prior) / sizes[j], 0, 1e-9, "of the sum of sizes");
    }
    kel_arena_free(s.memory);
}
END_TEST

/* Largest difference of two curves, of the largest coefficient: x of both sets on the same pieces. */
static double
distance(const set *a, const set *b)
{
    double worst = 0, size = 0;
    ck_assert_uint_eq(a->s.layout.curve, b->s.layout.curve);
    for (size_t j = 0; j < a->s.layout.coefficients; j++) {
        worst = fmax(worst, fabs(a->s.x[j] - b->s.x[j]));
        size = fmax(size, fabs(a->s.x[j]));
    }
    return worst / size;
}

static const struct {
    const char *label;
    double u, relative;
} invariant[] = { { "absolute u", 1e-8, 0 }, { "relative u", 0, 0.02 }, { "both", 1e-8, 0.02 } };

START_TEST(order_of_rows_and_tables)
{
    set whole, turned, split;
    by_hand *h = &whole.hand[0];
    by_hand_start(h, "whole", 293, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_MEAN, 1e-9);
    for (int i = 0; i < ROWS; i++) {
        double t = 103 + 6.5 * i;
        by_hand_row(h, 0, 293, t, expansion(293, t) / (t - 293) * (1 + 0.01 * error_of(i)),
                    invariant[_i].u * (2 + error_of(3 * i)), invariant[_i].relative);
    }
    by_hand_transition(h, 320, KEL_STEP_NONE, 0);
    whole.options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    turned = split = whole;
    for (int i = 0; i < ROWS; i++) /* 7 and 60 have no common factor: a thorough mixture */
        turned.hand[0].rows[i] = h->rows[7 * i % ROWS];
    split.hand[1] = split.hand[0];
    split.hand[0].table.observation_count = 23;
    split.hand[1].table.observation_count = ROWS - 23;
    for (int j = 0; j < 2; j++) {
        split.hand[j].table.columns = split.hand[j].columns;
        split.hand[j].table.transitions = split.hand[j].transitions;
        split.hand[j].table.observations = split.hand[j].rows + (j == 0 ? 0 : 23);
    }
    turned.hand[0].table.observations = turned.hand[0].rows;
    const int degrees[] = { 2, 3 };
    solve(&whole, 1, degrees);
    solve(&turned, 1, degrees);
    solve(&split, 2, degrees);
    ck_assert_abs_for(invariant[_i].label, distance(&whole, &turned), 0, 1e-12,
                      "of the largest coefficient, rows mixed");
    ck_assert_abs_for(invariant[_i].label, distance(&whole, &split), 0, 1e-12,
                      "of the largest coefficient, table split");
    ck_assert_lre_for(invariant[_i].label, split.s.chi2, whole.s.chi2, 11);
    kel_arena_free(whole.memory);
    kel_arena_free(turned.memory);
    kel_arena_free(split.memory);
}
END_TEST

/* A row of value 0 with a stated percentage weighs what its rounding says, or with no rounding what a double resolves:
   never infinitely. */
START_TEST(percentage_of_nothing)
{
    set s;
    by_hand *h = &s.hand[0];
    by_hand_start(h, "zero", NAN, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_COEFFICIENT, 0);
    for (int i = 0; i < 20; i++)
        by_hand_row(h, 0, 100 + 10 * i, 100 + 10 * i, 1e-8 * (i - 10), 0, 0.01);
    s.options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    const int degree = 1;
    solve(&s, 1, &degree);
    double work[8];
    kel__row_result r = kel__row_evaluate(&s.p, &s.s, &s.p.rows[10], true, work);
    ck_assert_double_gt(r.u, 0);
    ck_assert_abs(r.fitted, 0, 1e-22, "1/K");
    ck_assert_abs(kel__row_evaluate(&s.p, &s.s, &s.p.rows[0], true, work).fitted, -1e-7, 1e-21, "1/K");
    kel_arena_free(s.memory);
}
END_TEST

/* Six means with five parameters but a shared error: their degrees of freedom lie at the limit between two rules of
   weighing, either of which leads back to the other. It must end all the same. */
START_TEST(ends_at_a_limit_of_the_rules)
{
    set s;
    by_hand *h = &s.hand[0];
    by_hand_start(h, "limit", 293, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_MEAN, 1e-8);
    for (int i = 0; i < 6; i++) {
        double t = 320 + 30 * i;
        by_hand_row(h, 0, 293, t, 1e-8 * round(1e8 * (expansion(293, t) / (t - 293) + 2e-7 * error_of(i))), 0, 0);
    }
    by_hand_shared(h, 0.03, 0, KEL_DIM_PER_KELVIN);
    s.options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    for (int d = 0; d < 6; d++) {
        solve(&s, 1, &d);
        ck_assert_int_lt(s.s.iterations, 100);
        kel_arena_free(s.memory);
    }
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, normal_equations, 0, KEL_LENGTH(degrees_tried));
    tcase_add_loop_test(c, one_factor_for_all_degrees, 0, KEL_LENGTH(factored));
    tcase_add_loop_test(c, iterated_solutions_are_stationary, 0, KEL_LENGTH(iterated));
    tcase_add_loop_test(c, order_of_rows_and_tables, 0, KEL_LENGTH(invariant));
    return c;
}

KEL_TCASE(single, percentage_of_nothing, ends_at_a_limit_of_the_rules)
KEL_TEST_MAIN("solve", loops, single)
