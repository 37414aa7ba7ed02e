/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From a solution to a record: modes with their kinds and labels, the spread between lots inside its range and outside,
   steps, what is refused. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

enum { ROWS = 41 };

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

static const kel_table *tables[2];

/* Coefficients from 100 K to 500 K with a scatter of 1e-8/K. */
static void
plain(by_hand *h, const char *name)
{
    by_hand_start(h, name, 293.15, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_COEFFICIENT, 1e-9);
    for (int i = 0; i < ROWS; i++)
        by_hand_row(h, 0, 100 + 10 * i, 100 + 10 * i, alpha(100 + 10 * i) + 1e-8 * sin(37.0 * i * i), 0, 0);
}

static void
add_lot(by_hand *h, kel_stated *lot, size_t count, const char *text)
{
    h->table.lot = lot;
    h->table.lot_count = count;
    h->table.lot_text = text;
}

static kel_record *
fit(by_hand *h, int degree, double reference, int base)
{
    kel_record *record;
    kel_error err = { 0 };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.degrees = &degree;
    options.degree_count = 1;
    options.reference = reference;
    options.base = base;
    tables[0] = &h->table;
    ck_assert_msg(kel_fit(&record, NULL, tables, 1, &options, &err) == KEL_OK, "%s", err.message);
    return record;
}

static kel_answer
coefficient(const kel_record *r, double t)
{
    kel_answer a;
    ck_assert_int_ge(kel_record_coefficient(&a, r, t, NULL), 0);
    return a;
}

static kel_answer
integral(const kel_record *r, double from, double to)
{
    kel_answer a;
    ck_assert_int_ge(kel_record_integral(&a, r, from, to, NULL), 0);
    return a;
}

START_TEST(kinds_and_labels)
{
    by_hand h;
    plain(&h, "some/where/alloy.csv");
    by_hand_shared(&h, 0.02, 0, KEL_DIM_PER_KELVIN);
    by_hand_shared(&h, 0, 1e-7, KEL_DIM_PER_KELVIN);
    h.shared[0].text = "2 %";
    h.shared[1].text = "0.1 [1e-6/K]";
    kel_stated lot = { 0.01, 2e-8, KEL_DIM_PER_KELVIN, -INFINITY, INFINITY, NULL };
    add_lot(&h, &lot, 1, "1 % + 0.02 [1e-6/K]");
    kel_record *record = fit(&h, 3, NAN, -1);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->mode_count, 4 + 2 + 2);
    for (size_t i = 0; i < 4; i++) {
        ck_assert_int_eq(c->modes[i].kind, KEL_MODE_FIT);
        ck_assert_str_eq(c->modes[i].label, "scatter of the fit");
    }
    ck_assert_int_eq(c->modes[4].kind, KEL_MODE_SHARED);
    ck_assert_str_eq(c->modes[4].label, "alloy.csv, relative part: 2 %");
    ck_assert_int_eq(c->modes[5].kind, KEL_MODE_SHARED);
    ck_assert_str_eq(c->modes[5].label, "alloy.csv, absolute part: 0.1 [1e-6/K]");
    for (size_t i = 6; i < 8; i++) {
        ck_assert_int_eq(c->modes[i].kind, KEL_MODE_LOT);
        ck_assert_str_eq(c->modes[i].label, "lot spread 1 % + 0.02 [1e-6/K]");
    }
    ck_assert_str_eq(c->lot_spread, "1 % + 0.02 [1e-6/K]");
    ck_assert_int_eq(c->variance, KEL_VARIANCE_ESTIMATED);
    kel_record_free(record);
}
END_TEST

/* One lot clause, a temperature, and whether the clause holds there. Beyond the pieces, which reach from 100 K to 500
   K, the end pieces go on. */
static const struct { const char *label; double lo, hi, at; bool inside; } lots[] = {
    { "everywhere", -INFINITY, INFINITY, 300, true },
    { "everywhere, extrapolated", -INFINITY, INFINITY, 600, true },
    { "inside", 200, 300, 250, true },
    { "at its lower end", 200, 300, 200, true },
    { "below its lower end", 200, 300, 199.99999999999997, false },
    { "just below its upper end", 200, 300, 299.99999999999994, true },
    { "at its upper end, which the next piece owns", 200, 300, 300, false },
    { "from below the rows", 4, 300, 150, true },
    { "from below the rows, extrapolated", 4, 300, 50, true },
    { "from below the rows, warmer", 4, 300, 350, false },
    { "to the end of the rows", 300, 500, 500, true },
    { "beyond the rows, extrapolated", 300, 700, 600, true },
    { "open above", 300, INFINITY, 450, true },
    { "open above, colder", 300, INFINITY, 250, false },
    { "open below", -INFINITY, 300, 150, true },
    { "nowhere near the rows", 600, 700, 450, false },
    { "nowhere near the rows, below", 4, 90, 150, false },
    { "ends where the rows begin", 4, 100, 150, false },
};

START_TEST(lot_inside_its_range)
{
    by_hand h;
    plain(&h, "lot");
    kel_record *without = fit(&h, 3, NAN, -1);
    kel_stated lot = { 0.01, 3e-7, KEL_DIM_PER_KELVIN, lots[_i].lo, lots[_i].hi, NULL };
    add_lot(&h, &lot, 1, "1 % + 0.3 [1e-6/K]");
    kel_record *record = fit(&h, 3, NAN, -1);
    kel_answer a = coefficient(record, lots[_i].at), b = coefficient(without, lots[_i].at);
    double want = lots[_i].inside ? hypot(0.01 * b.value, 3e-7) : 0;
    ck_assert_abs_for(lots[_i].label, a.u_lot, want, 1e-13 * 1e-5, "1/K");
    ck_assert_abs_for(lots[_i].label, a.value, b.value, 1e-13 * 1e-5, "1/K"); /* cutting pieces leaves the curve */
    ck_assert_abs_for(lots[_i].label, a.u_fit / b.u_fit, 1, 1e-10, "of u");
    ck_assert_double_eq(b.u_lot, 0);
    /* 120 K to 480 K: what the clause covers of it. */
    double lo = fmax(120, lots[_i].lo), hi = fmin(480, lots[_i].hi);
    double part = lo < hi ? integral(without, lo, hi).value : 0, width = fmax(hi - lo, 0);
    ck_assert_abs_for(lots[_i].label, integral(record, 120, 480).u_lot, hypot(0.01 * part, 3e-7 * width), 1e-13 * 1e-2,
                      "1");
    kel_record_free(record);
    kel_record_free(without);
}
END_TEST

/* Two clauses are independent of each other. */
START_TEST(lots_of_two_ranges)
{
    by_hand h;
    plain(&h, "lot");
    kel_stated lot[] = { { 0.01, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL },
                         { 0.03, 0, KEL_DIM_PER_KELVIN, 250, 500, NULL } };
    add_lot(&h, lot, 2, "1 % from 100 K to 250 K; 3 % from 250 K to 500 K");
    kel_record *record = fit(&h, 3, NAN, -1);
    ck_assert_uint_eq(kel_record_content(record)->piece_count, 2);
    ck_assert_int_eq(kel_record_content(record)->continuity[0], KEL_CONTINUITY_CURVATURE); /* one polynomial, cut */
    ck_assert_lre(coefficient(record, 200).u_lot, 0.01 * coefficient(record, 200).value, 12);
    ck_assert_lre(coefficient(record, 250).u_lot, 0.03 * coefficient(record, 250).value, 12);
    double below = integral(record, 150, 250).value, above = integral(record, 250, 450).value;
    ck_assert_lre(integral(record, 150, 450).u_lot, hypot(0.01 * below, 0.03 * above), 12);
    kel_record_free(record);
}
END_TEST

/* A lot that expands one per cent more steps one per cent more. */
START_TEST(lot_of_a_step)
{
    by_hand h;
    plain(&h, "lot");
    by_hand_transition(&h, 305, KEL_STEP_STATED, 1e-4);
    kel_stated lot = { 0.01, 0, KEL_DIM_PER_KELVIN, -INFINITY, INFINITY, NULL };
    add_lot(&h, &lot, 1, "1 %");
    kel_record *record = fit(&h, 2, NAN, -1);
    kel_answer a = integral(record, 300, 310), b = integral(record, 300, nextafter(305, 0));
    ck_assert_lre(a.u_lot, 0.01 * a.value, 12);
    ck_assert_lre(b.u_lot, 0.01 * b.value, 12);
    ck_assert_double_gt(a.value - b.value, 1e-4);
    lot.hi = 250; /* not the step */
    kel_record_free(record);
    record = fit(&h, 2, NAN, -1);
    ck_assert_double_eq(integral(record, 300, 310).u_lot, 0);
    kel_record_free(record);
}
END_TEST

/* What two tables say of their lots, beside "1 % from 100 K to 250 K; 3 % from 250 K to 500 K". */
static const struct { const char *label; size_t count; kel_stated lot[2]; bool same; } other_lots[] = {
    { "k = 3", 2, { { 0.03 / 3, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL },
                    { 0.09 / 3, 0, KEL_DIM_PER_KELVIN, 250, 500, NULL } }, true },
    { "the other way round", 2, { { 0.03, 0, KEL_DIM_PER_KELVIN, 250, 500, NULL },
                                  { 0.01, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL } }, true },
    { "no dimension without an absolute part", 2, { { 0.01, 0, KEL_DIM_ONE, 100, 250, NULL },
                                                    { 0.03, 0, KEL_DIM_ONE, 250, 500, NULL } }, true },
    { "another size", 2, { { 0.01, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL },
                           { 0.03001, 0, KEL_DIM_PER_KELVIN, 250, 500, NULL } }, false },
    { "another range", 2, { { 0.01, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL },
                            { 0.03, 0, KEL_DIM_PER_KELVIN, 250, INFINITY, NULL } }, false },
    { "an absolute part too", 2, { { 0.01, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL },
                                   { 0.03, 1e-8, KEL_DIM_PER_KELVIN, 250, 500, NULL } }, false },
    { "a part of it", 1, { { 0.01, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL } }, false },
};

START_TEST(lots_of_two_tables)
{
    by_hand a, b;
    plain(&a, "a.csv");
    plain(&b, "b.csv");
    kel_stated one[] = { { 0.01, 0, KEL_DIM_PER_KELVIN, 100, 250, NULL },
                         { 0.03, 0, KEL_DIM_PER_KELVIN, 250, 500, NULL } };
    kel_stated other[] = { other_lots[_i].lot[0], other_lots[_i].lot[1] };
    add_lot(&a, one, 2, "1 % from 100 K to 250 K; 3 % from 250 K to 500 K");
    add_lot(&b, other, other_lots[_i].count, other_lots[_i].label);
    tables[0] = &a.table;
    tables[1] = &b.table;
    kel_record *record;
    kel_error err = { 0 };
    kel_status status = kel_fit(&record, NULL, tables, 2, NULL, &err);
    ck_assert_msg(status == (other_lots[_i].same ? KEL_OK : KEL_E_DATA), "%s: %s", other_lots[_i].label, err.message);
    kel_record_free(record);
}
END_TEST

START_TEST(lots_that_are_refused)
{
    by_hand a, b;
    plain(&a, "a.csv");
    plain(&b, "b.csv");
    kel_stated one = { 0.01, 0, KEL_DIM_PER_KELVIN, -INFINITY, INFINITY, NULL }, two = one;
    add_lot(&a, &one, 1, "1 %");
    add_lot(&b, &two, 1, "1 %");
    tables[0] = &a.table;
    tables[1] = &b.table;
    kel_record *record;
    kel_error err = { 0 };
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 2, NULL, &err), KEL_OK); /* said twice */
    ck_assert_str_eq(kel_record_content(record)->lot_spread, "1 %");
    kel_record_free(record);
    two.relative = 0.02;
    b.table.lot_text = "2 %";
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 2, NULL, &err), KEL_E_DATA);
    ck_assert_ptr_null(record);
    ck_assert_ptr_nonnull(strstr(err.message, "a.csv states the lot spread '1 %' and b.csv '2 %'"));
    b.table.lot_count = 0;
    one = (kel_stated){ 0, 1e-5, KEL_DIM_ONE, -INFINITY, INFINITY, NULL };
    a.table.lot_text = "1 [1e-5]";
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 2, NULL, &err), KEL_E_UNIT);
    ck_assert_ptr_nonnull(strstr(err.message, "1 [1e-5]"));
    one.dimension = KEL_DIM_PER_KELVIN;
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 2, NULL, &err), KEL_OK);
    kel_record_free(record);
}
END_TEST

/* Two rows, a line: no scatter shows. With nothing stated u is unknown; with a shared error u holds that alone. */
START_TEST(unknown_scatter)
{
    by_hand h;
    for (int shared = 0; shared < 2; shared++) {
        by_hand_start(&h, "two", 293.15, KEL_BASE_REFERENCE);
        by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
        by_hand_row(&h, 0, 200, 200, 1e-5, 0, 0);
        by_hand_row(&h, 0, 400, 400, 1.4e-5, 0, 0);
        if (shared)
            by_hand_shared(&h, 0.03, 0, KEL_DIM_PER_KELVIN);
        kel_record *record = fit(&h, 1, NAN, -1);
        const kel_content *c = kel_record_content(record);
        ck_assert_uint_eq(c->mode_count, (size_t)shared);
        ck_assert(!c->scatter_known);
        ck_assert_int_eq(c->variance, KEL_VARIANCE_NONE);
        kel_answer a = coefficient(record, 300);
        ck_assert_abs(a.value, 1.2e-5, 1e-19, "1/K");
        if (shared) {
            ck_assert_int_eq(c->modes[0].kind, KEL_MODE_SHARED);
            ck_assert_lre(a.u, 0.03 * 1.2e-5,
                          9); /* the prior less what the rows take from it: their curve follows the error wholly */
            ck_assert_double_eq(a.u_fit, 0);
        } else {
            ck_assert(isnan(a.u));
        }
        kel_record_free(record);
    }
}
END_TEST

/* A length L/L(r) stated for the step, whatever base and reference the record has: between just below the transition
   and at it the part grows by that, in units of its length at the table's reference. */
static const struct { const char *label; int base; double table, record; } stated[] = {
    { "reference length", KEL_BASE_REFERENCE, 250, 250 },
    { "reference length, other reference", KEL_BASE_REFERENCE, 250, 480 },
    { "current length", KEL_BASE_CURRENT, 250, 250 },
    { "current length, other reference", KEL_BASE_CURRENT, 250, 480 },
    { "table referred above the transition", KEL_BASE_REFERENCE, 400, 120 },
    { "table referred above the transition, current length", KEL_BASE_CURRENT, 400, 120 },
};

START_TEST(stated_steps)
{
    by_hand h;
    const double at = 330, length = -2e-3, r = stated[_i].table, below = nextafter(at, 0);
    by_hand_start(&h, "step", r, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_EXPANSION, 0);
    by_hand_transition(&h, at, KEL_STEP_STATED, length);
    for (int i = 0; i < ROWS; i++) {
        double t = 105 + 10 * i, crossed = length * ((t >= at) - (r >= at));
        by_hand_row(&h, 0, r, t, expansion(r, t) + crossed, 0, 0);
    }
    /* The other side of the reference-length world, exp I, is no polynomial: degree 8 follows it to 1e-13. */
    kel_record *record = fit(&h, 8, stated[_i].record, stated[_i].base);
    const kel_content *c = kel_record_content(record);
    ck_assert_int_eq(c->transitions[0].step, KEL_STEP_STATED);
    ck_assert_uint_eq(c->piece_count, 2);
    kel_answer a, b;
    kel_query q = { KEL_EXPANSION, 0, at, 0, r, KEL_BASE_REFERENCE };
    ck_assert_int_ge(kel_record_answer(&a, record, &q, NULL), 0);
    q.to = below;
    ck_assert_int_ge(kel_record_answer(&b, record, &q, NULL), 0);
    ck_assert_abs_for(stated[_i].label, a.value - b.value, length, 2e-15,
                      "L(r)"); /* rounding of both, and alpha over one ulp of T */
    ck_assert_abs_for(stated[_i].label, b.value, expansion(r, at) - (r >= at ? length : 0), 1e-12, "1");
    kel_record_free(record);
}
END_TEST

/* A fitted step carries its own uncertainty and is carried by the modes. */
START_TEST(fitted_step)
{
    by_hand h;
    by_hand_start(&h, "step", 250, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_EXPANSION, 1e-9);
    by_hand_transition(&h, 330, KEL_STEP_FITTED, 0);
    for (int i = 0; i < ROWS; i++) {
        double t = 105 + 10 * i;
        by_hand_row(&h, 0, 250, t, expansion(250, t) + (t >= 330 ? 1e-4 : 0) + 1e-6 * sin(37.0 * i * i), 0, 0);
    }
    kel_record *record = fit(&h, 2, NAN, -1);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->parameters, 7);
    ck_assert_uint_eq(c->mode_count, 7);
    double square = 0;
    for (size_t i = 0; i < c->mode_count; i++)
        square += c->modes[i].curve.steps[0] * c->modes[i].curve.steps[0];
    ck_assert_double_gt(square, 0);
    ck_assert_double_lt(fabs(c->mean.steps[0] - 1e-4), 4 * sqrt(square));
    kel_answer a = integral(record, nextafter(330, 0), 330);
    ck_assert_abs(a.value, c->mean.steps[0], 1e-17, "1");
    ck_assert_lre(a.u, sqrt(square), 9);
    kel_record_free(record);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, lot_inside_its_range, 0, KEL_LENGTH(lots));
    tcase_add_loop_test(c, lots_of_two_tables, 0, KEL_LENGTH(other_lots));
    tcase_add_loop_test(c, stated_steps, 0, KEL_LENGTH(stated));
    return c;
}

KEL_TCASE(single, kinds_and_labels, lots_of_two_ranges, lot_of_a_step, lots_that_are_refused, unknown_scatter,
          fitted_step)
KEL_TEST_MAIN("compile", loops, single)
