/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From tables to rows: what takes part, range and hull, reference and base, joins, sides at transitions, steps, widths,
   shared errors. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

enum { TABLES = 3 };

typedef struct set {
    by_hand hand[TABLES];
    const kel_table *tables[TABLES];
    kel_fit_options options;
    kel__problem p;
    kel_arena *memory;
    kel_error err;
} set;

static void
start(set *s, size_t tables)
{
    static const char *const names[] = { "first.csv", "second.csv", "third.csv" };
    s->options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s->memory = kel_arena_new();
    s->err = (kel_error){ .line = 0 };
    for (size_t i = 0; i < tables; i++) {
        by_hand_start(&s->hand[i], names[i], NAN, KEL_BASE_REFERENCE);
        s->tables[i] = &s->hand[i].table;
    }
}

static kel_status
make(set *s, size_t tables)
{
    return kel__problem_make(&s->p, s->memory, s->tables, tables, &s->options, &s->err);
}

static void
make_well(set *s, size_t tables)
{
    ck_assert_msg(make(s, tables) == KEL_OK, "%s", s->err.message);
}

static void
coefficients(set *s, size_t table, const double *t, size_t n)
{
    by_hand_column(&s->hand[table], KEL_KIND_COEFFICIENT, 1e-8);
    for (size_t i = 0; i < n; i++)
        by_hand_row(&s->hand[table], s->hand[table].table.column_count - 1, t[i], t[i], 1e-5, 0, 0);
}

/* Rows at 100, 200, ... 500 K and bounds. Bounds compare exactly. */
static const struct { const char *label; double lo, hi; size_t rows; double range_lo, range_hi; } ranges[] = {
    { "none", NAN, NAN, 5, 100, 500 },
    { "lower at a row", 200, NAN, 4, 200, 500 },
    { "lower just above a row", 200.00000000000003, NAN, 3, 300, 500 },
    { "lower just below a row", 199.99999999999997, NAN, 4, 200, 500 },
    { "upper at a row", NAN, 400, 4, 100, 400 },
    { "upper just below a row", NAN, 399.99999999999994, 3, 100, 300 },
    { "both between rows", 150, 350, 2, 200, 300 },
    { "both at one row", 300, 300, 1, 300, 300 },
    { "wider than the rows", 0, 1000, 5, 100, 500 },
};

START_TEST(range_keeps_rows)
{
    static const double t[] = { 100, 200, 300, 400, 500 };
    set s;
    start(&s, 1);
    coefficients(&s, 0, t, 5);
    s.options.range = (kel_interval){ ranges[_i].lo, ranges[_i].hi };
    make_well(&s, 1);
    ck_assert_msg(s.p.row_count == ranges[_i].rows, "%s: %zu rows", ranges[_i].label, s.p.row_count);
    ck_assert_uint_eq(s.p.columns[0].rows, ranges[_i].rows);
    size_t out = 0;
    for (size_t i = 0; i < 5; i++)
        out += s.p.left_out[i] != NULL;
    ck_assert_uint_eq(out, 5 - ranges[_i].rows);
    ck_assert_double_eq(s.p.range.lo, ranges[_i].range_lo);
    ck_assert_double_eq(s.p.range.hi, ranges[_i].range_hi);
    kel_arena_free(s.memory);
}
END_TEST

/* An expansion leans on its reference: the pieces must cover it, the validity range is clipped to what was asked
   for. */
START_TEST(range_clips_the_hull)
{
    set s;
    start(&s, 1);
    s.hand[0].table.reference_temperature = 293.15;
    by_hand_column(&s.hand[0], KEL_KIND_EXPANSION, 1e-8);
    for (int t = 100; t <= 250; t += 50)
        by_hand_row(&s.hand[0], 0, 293.15, t, -1e-5 * (293.15 - t), 0, 0);
    make_well(&s, 1);
    ck_assert_double_eq(s.p.hull.lo, 100);
    ck_assert_double_eq(s.p.hull.hi, 293.15);
    ck_assert_double_eq(s.p.range.hi, 293.15);
    s.options.range = (kel_interval){ 120, 260 };
    make_well(&s, 1);
    ck_assert_uint_eq(s.p.row_count, 3);
    ck_assert_double_eq(s.p.hull.lo, 150);
    ck_assert_double_eq(s.p.hull.hi, 293.15);
    ck_assert_double_eq(s.p.range.lo, 150);
    ck_assert_double_eq(s.p.range.hi, 260);
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(rows_left_out_by_the_reader)
{
    static const double t[] = { 100, 200, 300 };
    set s;
    start(&s, 1);
    coefficients(&s, 0, t, 3);
    s.hand[0].rows[1].left_out = "marked";
    make_well(&s, 1);
    ck_assert_uint_eq(s.p.row_count, 2);
    ck_assert_ptr_eq(s.p.rows[1].seen, &s.hand[0].rows[2]);
    ck_assert_ptr_null(s.p.left_out[1]); /* it has its reason already */
    s.hand[0].rows[0].left_out = s.hand[0].rows[2].left_out = "marked";
    ck_assert_int_eq(make(&s, 1), KEL_E_DATA);
    ck_assert_ptr_nonnull(strstr(s.err.message, "first.csv: no row is left"));
    kel_arena_free(s.memory);
}
END_TEST

static const struct { const char *label; double tables[2]; double asked, want; bool defaulted; } references[] = {
    { "nobody says", { NAN, NAN }, NAN, 293.15, true },
    { "the first", { 300, 350 }, NAN, 300, false },
    { "the second, for the first has none", { NAN, 350 }, NAN, 350, false },
    { "asked for", { 300, 350 }, 77, 77, false },
    { "293.15 K said", { 293.15, NAN }, NAN, 293.15, false },
};

START_TEST(reference)
{
    static const double t[] = { 100, 200, 300 };
    set s;
    start(&s, 2);
    for (size_t i = 0; i < 2; i++) {
        s.hand[i].table.reference_temperature = references[_i].tables[i];
        coefficients(&s, i, t, 3);
    }
    s.options.reference = references[_i].asked;
    make_well(&s, 2);
    ck_assert_msg(s.p.reference == references[_i].want && s.p.reference_defaulted == references[_i].defaulted,
                  "%s: %g K", references[_i].label, s.p.reference);
    for (size_t i = 0; i < 2; i++) /* a table that says nothing refers to what the record does */
        ck_assert_double_eq(kel__table_reference(&s.p, i),
                            isnan(references[_i].tables[i]) ? references[_i].want : references[_i].tables[i]);
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(base)
{
    static const double t[] = { 100, 200 };
    set s;
    start(&s, 2);
    coefficients(&s, 0, t, 2);
    coefficients(&s, 1, t, 2);
    s.hand[1].table.base = KEL_BASE_CURRENT;
    make_well(&s, 2);
    ck_assert_int_eq(s.p.base, KEL_BASE_REFERENCE);
    ck_assert(!s.p.linear);
    s.options.base = KEL_BASE_CURRENT;
    make_well(&s, 2);
    ck_assert_int_eq(s.p.base, KEL_BASE_CURRENT);
    s.options.base = -1;
    s.hand[0].table.base = KEL_BASE_CURRENT;
    make_well(&s, 2);
    ck_assert_int_eq(s.p.base, KEL_BASE_CURRENT);
    ck_assert(s.p.linear);
    kel_arena_free(s.memory);
}
END_TEST

/* Orders of coefficient rows round a transition at 300 K, with the side of each row that is to come out. */
static const struct { const char *label; size_t n; double t[9]; int side[9]; } orders[] = {
    { "ascending", 6, { 100, 200, 300, 300, 400, 500 }, { 0, 0, -1, 1, 0, 0 } },
    { "descending", 6, { 500, 400, 300, 300, 200, 100 }, { 0, 0, 1, -1, 0, 0 } },
    { "apart, colder first", 6, { 100, 300, 200, 400, 300, 500 }, { 0, -1, 0, 0, 1, 0 } },
    { "apart, warmer first", 6, { 400, 300, 500, 200, 300, 100 }, { 0, 1, 0, 0, -1, 0 } },
    { "one row", 5, { 100, 200, 300, 400, 500 }, { 0 } },
    { "at the end, ascending", 4, { 100, 200, 300, 300 }, { 0, 0, -1, 1 } },
    { "at the end, descending", 4, { 500, 400, 300, 300 }, { 0, 0, 1, -1 } },
    { "at the start, ascending", 4, { 300, 300, 400, 500 }, { -1, 1, 0, 0 } },
    { "at the start, descending", 4, { 300, 300, 200, 100 }, { 1, -1, 0, 0 } },
    { "two passes, each with both sides", 8, { 200, 300, 300, 400, 200, 300, 300, 400 }, { 0, -1, 1, 0, 0, -1, 1, 0 } },
    { "there and back", 8, { 200, 300, 300, 400, 400, 300, 300, 200 }, { 0, -1, 1, 0, 0, 1, -1, 0 } },
    { "two passes through one row each", 8, { 100, 200, 300, 400, 100, 200, 300, 400 }, { 0 } },
    { "three rows", 5, { 200, 300, 300, 300, 400 }, { 0, -1, 1, 1, 0 } },
    { "three rows, descending", 5, { 400, 300, 300, 300, 200 }, { 0, 1, 1, -1, 0 } },
    { "nothing else", 2, { 300, 300 }, { 0 } },
};

START_TEST(sides)
{
    set s;
    start(&s, 1);
    coefficients(&s, 0, orders[_i].t, orders[_i].n);
    by_hand_transition(&s.hand[0], 300, KEL_STEP_NONE, 0);
    make_well(&s, 1);
    for (size_t i = 0; i < orders[_i].n; i++)
        ck_assert_msg(s.p.rows[i].side == orders[_i].side[i], "%s: row %zu at %g K has side %d", orders[_i].label,
                      i + 1, orders[_i].t[i], s.p.rows[i].side);
    kel_arena_free(s.memory);
}
END_TEST

/* Rows of another column between them do not matter; the other column's single row stays above. */
START_TEST(sides_by_column)
{
    static const double t[] = { 200, 300, 300, 400 };
    set s;
    start(&s, 1);
    s.hand[0].table.reference_temperature = 250;
    by_hand_column(&s.hand[0], KEL_KIND_COEFFICIENT, 1e-8);
    by_hand_column(&s.hand[0], KEL_KIND_EXPANSION, 1e-8);
    for (int i = 0; i < 4; i++) {
        by_hand_row(&s.hand[0], 0, t[i], t[i], 1e-5, 0, 0);
        if (i != 1)
            by_hand_row(&s.hand[0], 1, 250, t[i], 1e-5 * (t[i] - 250), 0, 0);
    }
    by_hand_transition(&s.hand[0], 300, KEL_STEP_FITTED, 0);
    make_well(&s, 1);
    static const int want[] = { 0, 0, -1, 1, 0, 0, 0 };
    ck_assert_uint_eq(s.p.row_count, 7);
    for (size_t i = 0; i < 7; i++)
        ck_assert_int_eq(s.p.rows[i].side, want[i]);
    kel_arena_free(s.memory);
}
END_TEST

/* Rows at 100 K to 500 K, a transition at 300 K, one at the hull's lower end and one outside. */
static const struct {
    const char *label;
    size_t count, continuity_count;
    double joins[3];
    int continuity[3];
    kel_status status;
    size_t all;
    double at[4];
    int smooth[4];
} joins[] = {
    { "none asked for", 0, 0, { 0 }, { 0 }, KEL_OK, 1, { 300 }, { -1 } },
    { "one below", 1, 0, { 200 }, { 0 }, KEL_OK, 2, { 200, 300 }, { 0, -1 } },
    { "round it, one continuity", 2, 1, { 200, 400 }, { 2 }, KEL_OK, 3, { 200, 300, 400 }, { 2, -1, 2 } },
    { "round it, two continuities", 2, 2, { 200, 400 }, { 1, 2 }, KEL_OK, 3, { 200, 300, 400 }, { 1, -1, 2 } },
    { "equal to it", 1, 1, { 300 }, { 2 }, KEL_OK, 1, { 300 }, { -1 } },
    { "equal to it, others keep their continuity", 3, 3, { 200, 300, 400 }, { 0, 1, 2 },
      KEL_OK, 3, { 200, 300, 400 }, { 0, -1, 2 } },
    { "just inside the hull", 2, 0, { 100.00000000000001, 499.99999999999994 }, { 0 },
      KEL_OK, 3, { 100.00000000000001, 300, 499.99999999999994 }, { 0, -1, 0 } },
    { "at the hull's upper end", 1, 0, { 500 }, { 0 }, KEL_E_DATA, 0, { 0 }, { 0 } },
    { "outside", 1, 0, { 501 }, { 0 }, KEL_E_DATA, 0, { 0 }, { 0 } },
    { "below", 1, 0, { 50 }, { 0 }, KEL_E_DATA, 0, { 0 }, { 0 } },
    { "descending", 2, 0, { 400, 200 }, { 0 }, KEL_E_DATA, 0, { 0 }, { 0 } },
    { "twice", 2, 0, { 200, 200 }, { 0 }, KEL_E_DATA, 0, { 0 }, { 0 } },
    { "twice at the transition", 2, 0, { 300, 300 }, { 0 }, KEL_E_DATA, 0, { 0 }, { 0 } },
    { "two continuities for three joins", 3, 2, { 200, 250, 400 }, { 0, 1 }, KEL_E_ARGUMENT, 0, { 0 }, { 0 } },
};

START_TEST(where_pieces_meet)
{
    static const double t[] = { 100, 200, 300, 400, 500 };
    set s;
    start(&s, 1);
    coefficients(&s, 0, t, 5);
    by_hand_transition(&s.hand[0], 700, KEL_STEP_NONE, 0);
    by_hand_transition(&s.hand[0], 300, KEL_STEP_NONE, 0);
    by_hand_transition(&s.hand[0], 100, KEL_STEP_NONE, 0);
    s.options.joins = joins[_i].joins;
    s.options.join_count = joins[_i].count;
    s.options.continuity = joins[_i].continuity;
    s.options.continuity_count = joins[_i].continuity_count;
    kel_status status = make(&s, 1);
    ck_assert_msg(status == joins[_i].status, "%s: %d %s", joins[_i].label, status, s.err.message);
    if (status == KEL_OK) {
        ck_assert_msg(s.p.join_count == joins[_i].all, "%s: %zu joins", joins[_i].label, s.p.join_count);
        for (size_t i = 0; i < joins[_i].all; i++) {
            ck_assert_double_eq(s.p.joins[i], joins[_i].at[i]);
            ck_assert_msg(s.p.continuity[i] == joins[_i].smooth[i], "%s: continuity %d at join %zu", joins[_i].label,
                          s.p.continuity[i], i);
        }
        ck_assert_uint_eq(s.p.transition_count, 3); /* those that make no piece are kept, in order */
        ck_assert_double_eq(s.p.transitions[0].at, 100);
        ck_assert_double_eq(s.p.transitions[2].at, 700);
    } else if (status == KEL_E_DATA) {
        ck_assert_ptr_nonnull(strstr(s.err.message, "100 K and 500 K"));
    }
    kel_arena_free(s.memory);
}
END_TEST

/* What two tables say of the transition at 300 K, and what of it stays. */
static const struct {
    const char *label;
    kel_step_kind a, b;
    double length_a, length_b;
    kel_status status;
    kel_step_kind step;
    double length, reference;
} merged[] = {
    { "both only name it", KEL_STEP_NONE, KEL_STEP_NONE, 0, 0, KEL_OK, KEL_STEP_NONE, 0, 0 },
    { "the second knows the length", KEL_STEP_NONE, KEL_STEP_STATED, 0, 1e-4, KEL_OK, KEL_STEP_STATED, 1e-4, 350 },
    { "the first knows the length", KEL_STEP_STATED, KEL_STEP_NONE, 1e-4, 0, KEL_OK, KEL_STEP_STATED, 1e-4, 293 },
    { "both agree", KEL_STEP_STATED, KEL_STEP_STATED, 1e-4, 1e-4, KEL_OK, KEL_STEP_STATED, 1e-4, 293 },
    { "two lengths", KEL_STEP_STATED, KEL_STEP_STATED, 1e-4, 2e-4, KEL_E_DATA, 0, 0, 0 },
    { "fitted and stated", KEL_STEP_FITTED, KEL_STEP_STATED, 0, 1e-4, KEL_E_DATA, 0, 0, 0 },
    { "both fitted", KEL_STEP_FITTED, KEL_STEP_FITTED, 0, 0, KEL_OK, KEL_STEP_FITTED, 0, 0 },
};

START_TEST(transitions_of_two_tables)
{
    set s;
    start(&s, 2);
    for (size_t i = 0; i < 2; i++) {
        s.hand[i].table.reference_temperature = i == 0 ? 293 : 350;
        by_hand_column(&s.hand[i], KEL_KIND_EXPANSION, 1e-8);
        by_hand_row(&s.hand[i], 0, i == 0 ? 293 : 350, 200, -1e-3, 0, 0);
        by_hand_row(&s.hand[i], 0, i == 0 ? 293 : 350, 400, 1e-3, 0, 0);
    }
    by_hand_transition(&s.hand[0], 300, merged[_i].a, merged[_i].length_a);
    by_hand_transition(&s.hand[1], 380, KEL_STEP_NONE, 0);
    by_hand_transition(&s.hand[1], 300, merged[_i].b, merged[_i].length_b);
    s.hand[0].transitions[0].text = "one way";
    s.hand[1].transitions[1].text = "another way";
    kel_status status = make(&s, 2);
    ck_assert_msg(status == merged[_i].status, "%s: %s", merged[_i].label, s.err.message);
    if (status < 0) {
        ck_assert_ptr_nonnull(strstr(s.err.message, "300 K"));
        ck_assert_ptr_nonnull(strstr(s.err.message, "one way"));
        ck_assert_ptr_nonnull(strstr(s.err.message, "another way"));
    } else {
        ck_assert_uint_eq(s.p.transition_count, 2);
        ck_assert_double_eq(s.p.transitions[0].at, 300);
        ck_assert_int_eq(s.p.transitions[0].step, merged[_i].step);
        ck_assert_double_eq(s.p.transitions[0].length, merged[_i].length);
        if (merged[_i].step == KEL_STEP_STATED) /* a length is of the table that states it */
            ck_assert_double_eq(s.p.transition_reference[0], merged[_i].reference);
    }
    kel_arena_free(s.memory);
}
END_TEST

/* One row from..to of a kind: does it cross a step at 300 K, lo < T <= hi? Rows that cross nothing keep the hull
   wide. */
static const struct { const char *label; kel_kind kind; double from, to; bool crosses; } crossings[] = {
    { "expansion over it", KEL_KIND_EXPANSION, 250, 350, true },
    { "expansion downward over it", KEL_KIND_EXPANSION, 350, 250, true },
    { "expansion up to it", KEL_KIND_EXPANSION, 250, 300, true },
    { "expansion just up to it", KEL_KIND_EXPANSION, 250, 299.99999999999994, false },
    { "expansion from it", KEL_KIND_EXPANSION, 300, 350, false },
    { "expansion from it downward", KEL_KIND_EXPANSION, 300, 250, true },
    { "mean over it", KEL_KIND_MEAN, 250, 350, true },
    { "mean downward onto it", KEL_KIND_MEAN, 350, 300, false },
    { "mean at its own reference", KEL_KIND_MEAN, 300, 300, false },
    { "coefficient at it", KEL_KIND_COEFFICIENT, 300, 300, false },
};

START_TEST(a_fitted_step_needs_a_row_that_crosses)
{
    static const double t[] = { 100, 200, 400, 500 };
    set s;
    start(&s, 1);
    s.hand[0].table.reference_temperature = crossings[_i].from;
    coefficients(&s, 0, t, 4);
    by_hand_column(&s.hand[0], crossings[_i].kind, 1e-8);
    by_hand_row(&s.hand[0], 1, crossings[_i].from, crossings[_i].to, 1e-5, 0, 0);
    by_hand_transition(&s.hand[0], 300, KEL_STEP_FITTED, 0);
    kel_status status = make(&s, 1);
    ck_assert_msg(status == (crossings[_i].crosses ? KEL_OK : KEL_E_DATA), "%s: %d", crossings[_i].label, status);
    if (status < 0)
        ck_assert_ptr_nonnull(strstr(s.err.message, "transition at 300 K ('by hand'): no row crosses it"));
    kel_arena_free(s.memory);
}
END_TEST

/* A mean at its own reference weighs as its nearest neighbour in its own column. */
START_TEST(width_of_a_mean_at_its_reference)
{
    set s;
    start(&s, 2);
    for (size_t i = 0; i < 2; i++)
        s.hand[i].table.reference_temperature = 293;
    by_hand_column(&s.hand[0], KEL_KIND_MEAN, 1e-8);
    by_hand_column(&s.hand[0], KEL_KIND_COEFFICIENT, 1e-8);
    by_hand_column(&s.hand[0], KEL_KIND_MEAN, 1e-8);
    static const double t[] = { 193, 293, 323, 393, 293 };
    for (int i = 0; i < 5; i++)
        by_hand_row(&s.hand[0], 0, 293, t[i], 1e-5, 0, 0);
    by_hand_row(&s.hand[0], 1, 294, 294, 1e-5, 0, 0);
    by_hand_row(&s.hand[0], 2, 293, 293, 1e-5, 0, 0); /* alone in its column */
    by_hand_column(&s.hand[1], KEL_KIND_MEAN, 1e-8);
    by_hand_row(&s.hand[1], 0, 293, 295, 1e-5, 0, 0);
    make_well(&s, 2);
    static const double want[] = { 100, 30, 30, 100, 30, 1, 1, 2 };
    for (size_t i = 0; i < 8; i++)
        ck_assert_double_eq(s.p.rows[i].width, want[i]);
    static const double typical[] = { 30, 1, 1, 2 }; /* median of 30, 30, 30, 100, 100 */
    for (size_t i = 0; i < 4; i++)
        ck_assert_double_eq(s.p.columns[i].typical_width, typical[i]);
    ck_assert(!s.p.uniform);
    kel_arena_free(s.memory);
}
END_TEST

/* least: resolution/sqrt 12, where that is below what the doubles themselves resolve, 4 eps of the largest value. */
START_TEST(least_uncertainty)
{
    static const double resolutions[] = { 1e-7, 1e-21, 0, 0 },
                        want[] = { 1e-7 / 3.4641016151377544, 4 * KEL__EPS * 1.5e-5, 4 * KEL__EPS * 1.5e-5 };
    set s;
    start(&s, 1);
    for (size_t c = 0; c < 4; c++) {
        by_hand_column(&s.hand[0], KEL_KIND_COEFFICIENT, resolutions[c]);
        by_hand_row(&s.hand[0], c, 100, 100, c == 3 ? 0 : 1e-5, 0, 0);
        by_hand_row(&s.hand[0], c, 200, 200, c == 3 ? 0 : -1.5e-5, 0, 0);
    }
    make_well(&s, 1);
    for (size_t c = 0; c < 3; c++)
        ck_assert_ulp(s.p.columns[c].least, want[c], 1);
    ck_assert_double_gt(s.p.columns[3].least, 0); /* zeros only: still a size to divide by */
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(shared_errors)
{
    static const double t[] = { 100, 200 };
    set s;
    start(&s, 3);
    for (size_t i = 0; i < 3; i++)
        coefficients(&s, i, t, 2);
    by_hand_shared(&s.hand[0], 0.01, 0, KEL_DIM_PER_KELVIN);
    by_hand_shared(&s.hand[0], 0.02, 0, KEL_DIM_PER_KELVIN); /* of another range: the same parameter */
    by_hand_shared(&s.hand[2], 0.02, 1e-7, KEL_DIM_PER_KELVIN);
    s.hand[0].shared[0].hi = s.hand[0].shared[1].lo = 150;
    make_well(&s, 3);
    ck_assert_uint_eq(s.p.shared_count, 3);
    static const struct { size_t table; bool relative; } want[] = { { 0, true }, { 2, true }, { 2, false } };
    for (size_t i = 0; i < 3; i++) {
        ck_assert_uint_eq(s.p.shared[i].table, want[i].table);
        ck_assert(s.p.shared[i].relative == want[i].relative);
    }
    ck_assert_double_eq(kel__shared_size(&s.p, 0, &s.p.rows[0], 1e-5), 0.01 * 1e-5);
    ck_assert_double_eq(kel__shared_size(&s.p, 0, &s.p.rows[1], -1e-5), -0.02 * 1e-5);
    ck_assert_double_eq(kel__shared_size(&s.p, 0, &s.p.rows[2], 1e-5), 0);
    ck_assert_double_eq(kel__shared_size(&s.p, 2, &s.p.rows[4], 1e-5), 1e-7);
    kel_observation meeting = s.hand[0].rows[0];
    meeting.to = 150; /* where two ranges meet, the colder one */
    kel__row row = s.p.rows[0];
    row.seen = &meeting;
    ck_assert_double_eq(kel__shared_size(&s.p, 0, &row, 1e-5), 0.01 * 1e-5);
    meeting.kind = KEL_KIND_EXPANSION; /* an absolute part per kelvin says nothing of an expansion */
    row.table = 2;
    ck_assert_double_eq(kel__shared_size(&s.p, 2, &row, 1e-5), 0);
    kel_arena_free(s.memory);
}
END_TEST

/* Which way the solver may take. */
static const struct { const char *label; int change; bool uniform, linear, fixed; } classes[] = {
    { "plain", 0, true, true, false },
    { "stated, absolute", 1, false, true, true },
    { "stated, relative", 2, false, true, false },
    { "one row stated", 3, false, true, false },
    { "shared error", 4, false, true, false },
    { "stated and shared", 5, false, true, false },
    { "expansions beside them", 6, false, true, false },
    { "other reference", 7, true, false, false },
    { "current length", 8, true, false, false },
    { "stated step referred elsewhere", 9, true, false, false },
};

START_TEST(classes_of_problems)
{
    static const double t[] = { 100, 200, 300, 400 };
    set s;
    start(&s, 1);
    int change = classes[_i].change;
    by_hand *h = &s.hand[0];
    h->table.reference_temperature = 293;
    coefficients(&s, 0, t, 4);
    for (int i = 0; i < 4; i++) {
        h->rows[i].u_absolute = change == 1 || change == 5 || (change == 3 && i == 2) ? 1e-8 : 0;
        h->rows[i].u_relative = change == 2 ? 0.01 : 0;
        h->rows[i].u_stated = h->rows[i].u_absolute > 0 || h->rows[i].u_relative > 0;
    }
    if (change == 4 || change == 5)
        by_hand_shared(h, 0.01, 0, KEL_DIM_PER_KELVIN);
    if (change == 6) {
        by_hand_column(h, KEL_KIND_EXPANSION, 1e-8);
        by_hand_row(h, 1, 293, 400, 1e-3, 0, 0);
    }
    if (change == 7 || change == 9)
        s.options.reference = 300;
    if (change == 8)
        s.options.base = KEL_BASE_CURRENT;
    if (change == 9)
        by_hand_transition(h, 250, KEL_STEP_STATED, 1e-4);
    make_well(&s, 1);
    ck_assert_msg(s.p.uniform == classes[_i].uniform && s.p.linear == classes[_i].linear &&
                      s.p.fixed == classes[_i].fixed,
                  "%s: uniform %d linear %d fixed %d", classes[_i].label, s.p.uniform, s.p.linear, s.p.fixed);
    kel_arena_free(s.memory);
}
END_TEST

START_TEST(directions)
{
    static const double t[] = { 100, 200 };
    set s;
    start(&s, 3);
    for (size_t i = 0; i < 3; i++)
        coefficients(&s, i, t, 2);
    s.hand[0].table.direction = "along";
    s.hand[2].table.direction = "ALONG"; /* the second says nothing */
    make_well(&s, 3);
    s.hand[0].table.direction = "A axis";
    s.hand[2].table.direction = "a \t axis";
    make_well(&s, 3);
    s.hand[2].table.direction = "aaxis";
    ck_assert_int_eq(make(&s, 3), KEL_E_DATA);
    ck_assert_ptr_nonnull(strstr(s.err.message, "first.csv"));
    ck_assert_ptr_nonnull(strstr(s.err.message, "third.csv"));
    kel_arena_free(s.memory);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, range_keeps_rows, 0, KEL_LENGTH(ranges));
    tcase_add_loop_test(c, reference, 0, KEL_LENGTH(references));
    tcase_add_loop_test(c, sides, 0, KEL_LENGTH(orders));
    tcase_add_loop_test(c, where_pieces_meet, 0, KEL_LENGTH(joins));
    tcase_add_loop_test(c, transitions_of_two_tables, 0, KEL_LENGTH(merged));
    tcase_add_loop_test(c, a_fitted_step_needs_a_row_that_crosses, 0, KEL_LENGTH(crossings));
    tcase_add_loop_test(c, classes_of_problems, 0, KEL_LENGTH(classes));
    return c;
}

KEL_TCASE(single, range_clips_the_hull, rows_left_out_by_the_reader, base, sides_by_column,
          width_of_a_mean_at_its_reference, least_uncertainty, shared_errors, directions)
KEL_TEST_MAIN("observe", loops, single)
