/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The unknowns of a fit: how many there are and where they stand, rows of continuity, nodes that integrate every piece
   exactly. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

typedef struct set {
    by_hand hand;
    const kel_table *tables[1];
    kel_fit_options options;
    kel__problem p;
    kel__layout l;
    kel_arena *memory;
    kel_error err;
} set;

static const double joins[] = { 150, 400 };

/* Rows at 100 K and 500 K, joins as asked; two expansions let a step be fitted. */
static kel_status
make(set *s, const int *degrees, size_t join_count, const int *continuity, kel_step_kind below, kel_step_kind inside,
     kel_step_kind above)
{
    by_hand *h = &s->hand;
    by_hand_start(h, "hand", 293, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_EXPANSION, 1e-8);
    by_hand_row(h, 0, 293, 100, -1e-3, 0, 0);
    by_hand_row(h, 0, 293, 500, 1e-3, 0, 0);
    by_hand_transition(h, 600, above, 3e-5);
    by_hand_transition(h, 300, inside, 2e-5);
    by_hand_transition(h, 50, below, 1e-5);
    h->table.transition_count = inside == KEL_STEP_NONE && below == KEL_STEP_NONE ? 0 : 3;
    s->tables[0] = &h->table;
    s->options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s->options.joins = joins;
    s->options.join_count = join_count;
    s->options.continuity = continuity;
    s->options.continuity_count = continuity == NULL ? 0 : join_count;
    s->memory = kel_arena_new();
    s->err = (kel_error){ .line = 0 };
    kel_status status = kel__problem_make(&s->p, s->memory, s->tables, 1, &s->options, &s->err);
    return status < 0 ? status : kel__layout_make(&s->l, &s->p, s->memory, degrees, &s->err);
}

static const struct {
    const char *label;
    size_t joins;
    int degrees[4], continuity[2];
    kel_step_kind inside;
    size_t pieces, coefficients, steps, conditions;
} counts[] = {
    { "one piece", 0, { 4 }, { 0 }, KEL_STEP_NONE, 1, 5, 0, 0 },
    { "degree 0", 0, { 0 }, { 0 }, KEL_STEP_NONE, 1, 1, 0, 0 },
    { "two pieces", 1, { 3, 2 }, { KEL_CONTINUITY_VALUE }, KEL_STEP_NONE, 2, 7, 0, 1 },
    { "three pieces", 2, { 3, 2, 5 }, { KEL_CONTINUITY_SLOPE, KEL_CONTINUITY_CURVATURE }, KEL_STEP_NONE, 3, 13, 0, 5 },
    { "none and value", 2, { 1, 1, 1 }, { KEL_CONTINUITY_NONE, KEL_CONTINUITY_VALUE }, KEL_STEP_NONE, 3, 6, 0, 1 },
    { "a transition with a fitted step", 0, { 2, 3 }, { 0 }, KEL_STEP_FITTED, 2, 7, 1, 0 },
    { "a transition with a stated step", 1, { 2, 3, 4 }, { KEL_CONTINUITY_VALUE }, KEL_STEP_STATED, 3, 12, 0, 1 },
};

START_TEST(unknowns)
{
    set s;
    ck_assert_int_eq(make(&s, counts[_i].degrees, counts[_i].joins, counts[_i].continuity, KEL_STEP_NONE,
                          counts[_i].inside, KEL_STEP_STATED),
                     KEL_OK);
    const char *label = counts[_i].label;
    const kel__layout *l = &s.l;
    ck_assert_msg(l->piece_count == counts[_i].pieces && l->coefficients == counts[_i].coefficients &&
                      l->steps == counts[_i].steps && l->condition_count == counts[_i].conditions,
                  "%s: %zu pieces, %zu coefficients, %zu steps, %zu conditions", label, l->piece_count, l->coefficients,
                  l->steps, l->condition_count);
    ck_assert_uint_eq(l->curve, l->coefficients + l->steps);
    ck_assert_uint_eq(l->unknowns, l->curve);
    ck_assert_double_eq(l->pieces[0].from, 100);
    ck_assert_double_eq(l->pieces[l->piece_count - 1].to, 500);
    size_t first = 0;
    for (size_t i = 0; i < l->piece_count; i++) {
        if (i > 0)
            ck_assert_double_eq(l->pieces[i].from, l->pieces[i - 1].to);
        ck_assert_uint_eq(l->pieces[i].first, first);
        ck_assert_uint_eq(l->pieces[i].count, (size_t)counts[_i].degrees[i] + 1);
        first += l->pieces[i].count;
    }
    if (counts[_i].inside != KEL_STEP_NONE) { /* sorted: 50 K named only, 300 K, 600 K stated */
        ck_assert_uint_eq(s.p.transition_count, 3);
        ck_assert_double_eq(l->step_length[0], 0);
        ck_assert_double_eq(l->step_length[1], counts[_i].inside == KEL_STEP_STATED ? 2e-5 : 0);
        ck_assert_double_eq(l->step_length[2], 3e-5);
        ck_assert_uint_eq(l->step_unknown[0], SIZE_MAX);
        ck_assert_uint_eq(l->step_unknown[1], counts[_i].inside == KEL_STEP_FITTED ? l->coefficients : SIZE_MAX);
        ck_assert_uint_eq(l->step_unknown[2], SIZE_MAX);
    }
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(shared_errors_come_last)
{
    set s;
    const int degrees[] = { 2, 3 };
    ck_assert_int_eq(make(&s, degrees, 0, NULL, KEL_STEP_NONE, KEL_STEP_FITTED, KEL_STEP_NONE), KEL_OK);
    by_hand_shared(&s.hand, 0.01, 1e-6, KEL_DIM_ONE);
    ck_assert_int_eq(kel__problem_make(&s.p, s.memory, s.tables, 1, &s.options, NULL), KEL_OK);
    ck_assert_int_eq(kel__layout_make(&s.l, &s.p, s.memory, degrees, NULL), KEL_OK);
    ck_assert_uint_eq(s.l.curve, 8);
    ck_assert_uint_eq(s.l.unknowns, 10);
    kel_arena_free(s.memory);
}
END_TEST

/* T_n(1) = 1, T_n'(1) = n^2, T_n''(1) = n^2 (n^2 - 1)/3, at -1 with sign (-1)^(n + d); the right piece is 2.5 times as
   wide as the left. */
START_TEST(rows_of_continuity)
{
    set s;
    const int degrees[] = { 3, 4, 1 }, continuity[] = { KEL_CONTINUITY_NONE, KEL_CONTINUITY_CURVATURE };
    ck_assert_int_eq(make(&s, degrees, 2, continuity, KEL_STEP_NONE, KEL_STEP_NONE, KEL_STEP_NONE), KEL_OK);
    static const double left[3][5] = { { 1, 1, 1, 1, 1 }, { 0, 1, 4, 9, 16 }, { 0, 0, 4, 24, 80 } },
                        right[3][2] = { { -1, 1 }, { 0, -2.5 }, { 0, 0 } };
    ck_assert_uint_eq(s.l.condition_count, 3);
    for (size_t d = 0; d < 3; d++)
        for (size_t j = 0; j < 11; j++) {
            double want = j < 4 ? 0 : j < 9 ? left[d][j - 4] : right[d][j - 9];
            ck_assert_ulp(s.l.conditions[d * 11 + j], want, 2);
        }
    kel_arena_free(s.memory);
}
END_TEST

/* sum w_i x_i^m = 2/(m + 1) for even m, 0 for odd m, up to the highest degree of any piece. */
static const int degrees_for_nodes[] = { 0, 1, 2, 3, 4, 7, 10, 11, 31, 59, 60 };

START_TEST(nodes_are_exact)
{
    set s;
    const int n = degrees_for_nodes[_i], degrees[] = { 0, n };
    ck_assert_int_eq(make(&s, degrees, 1, NULL, KEL_STEP_NONE, KEL_STEP_NONE, KEL_STEP_NONE), KEL_OK);
    for (int m = 0; m <= n; m++) {
        double sum = 0;
        for (size_t i = 0; i < s.l.node_count; i++)
            sum += s.l.weights[i] * pow(s.l.nodes[i], m);
        ck_assert_abs(sum, m % 2 == 0 ? 2.0 / (m + 1) : 0, 8 * KEL__EPS, "1"); /* terms add up to at most 2 */
    }
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(one_temperature_carries_a_constant)
{
    set s;
    by_hand_start(&s.hand, "hand", NAN, KEL_BASE_REFERENCE);
    by_hand_column(&s.hand, KEL_KIND_COEFFICIENT, 1e-8);
    by_hand_row(&s.hand, 0, 300, 300, 1e-5, 0, 0);
    s.tables[0] = &s.hand.table;
    s.options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s.memory = kel_arena_new();
    ck_assert_int_eq(kel__problem_make(&s.p, s.memory, s.tables, 1, &s.options, NULL), KEL_OK);
    const int none = 0, one = 1;
    ck_assert_int_eq(kel__layout_make(&s.l, &s.p, s.memory, &none, NULL), KEL_OK);
    ck_assert_double_eq(s.l.pieces[0].from, 300);
    ck_assert_double_eq(s.l.pieces[0].to, 300);
    s.err = (kel_error){ .line = 0 };
    ck_assert_int_eq(kel__layout_make(&s.l, &s.p, s.memory, &one, &s.err), KEL_E_RANK);
    ck_assert_ptr_nonnull(strstr(s.err.message, "300 K"));
    kel_arena_free(s.memory);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, unknowns, 0, KEL_LENGTH(counts));
    tcase_add_loop_test(c, nodes_are_exact, 0, KEL_LENGTH(degrees_for_nodes));
    return c;
}

KEL_TCASE(single, shared_errors_come_last, rows_of_continuity, one_temperature_carries_a_constant)
KEL_TEST_MAIN("layout", loops, single)
