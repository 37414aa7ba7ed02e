/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Validity range, gaps and transitions: what an answer of each kind leans on. */
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

static specimen s;

/* Range 100 K to 300 K in two pieces, a gap 150 K to 170 K, a transition at 250 K. */
static const kel_record *
bench_record(kel_base base, double reference)
{
    uint64_t state = 1;
    specimen_make(&s, &state, 2, 2, 3, base, 1e-5);
    kel_content *c = &s.record.content;
    s.pieces[0].from = 100.0, s.pieces[0].to = s.pieces[1].from = s.transitions[0].at = 250.0, s.pieces[1].to = 300.0;
    c->transition_count = 1;
    c->range = (kel_interval){ 100.0, 300.0 };
    s.gaps[0] = (kel_interval){ 150.0, 170.0 };
    c->gaps = s.gaps;
    c->gap_count = 1;
    c->reference_temperature = reference;
    return &s.record;
}

START_TEST(points)
{
    const kel_record *record = bench_record(KEL_BASE_REFERENCE, 200.0);
    const struct { const char *label; double t; bool inside, in_gap; } rows[] = {
        { "0 K", 0.0, false, false },
        { "just below", nextafter(100.0, 0.0), false, false },
        { "lower bound", 100.0, true, false },
        { "lower end of the gap", 150.0, true, false },
        { "just in the gap", nextafter(150.0, 200.0), true, true },
        { "just still in the gap", nextafter(170.0, 0.0), true, true },
        { "upper end of the gap", 170.0, true, false },
        { "upper bound", 300.0, true, false },
        { "just above", nextafter(300.0, 400.0), false, false },
        { "infinity", HUGE_VAL, false, false },
        { "minus infinity", -HUGE_VAL, false, false },
        { "NaN", (double)NAN, false, false },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        ck_assert_msg(kel_record_inside(record, rows[i].t) == rows[i].inside, "%s: inside", rows[i].label);
        ck_assert_msg(kel_record_in_gap(record, rows[i].t) == rows[i].in_gap, "%s: in a gap", rows[i].label);
    }
    ck_assert(!kel_record_inside(NULL, 200.0) && !kel_record_in_gap(NULL, 160.0));
}
END_TEST

START_TEST(kelvin_outside)
{
    const kel_record *record = bench_record(KEL_BASE_REFERENCE, 200.0);
    const struct { const char *label; double from, to, want; } rows[] = {
        { "inside", 100.0, 300.0, 0.0 },
        { "point inside", 200.0, 200.0, 0.0 },
        { "point outside", 400.0, 400.0, 0.0 },
        { "from 0 K", 0.0, 200.0, 100.0 },
        { "up and out", 200.0, 350.0, 50.0 },
        { "down and in", 350.0, 200.0, 50.0 },
        { "over both ends", 40.0, 310.0, 70.0 },
        { "all below", 20.0, 60.0, 40.0 },
        { "all above, downwards", 500.0, 400.0, 100.0 },
        { "just above", 200.0, nextafter(300.0, 400.0), nextafter(300.0, 400.0) - 300.0 },
        { "to infinity", 200.0, HUGE_VAL, HUGE_VAL },
        { "from NaN", (double)NAN, 200.0, (double)NAN },
        { "to NaN", 200.0, (double)NAN, (double)NAN },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
        ck_assert_ulp_for(rows[i].label, kel_record_outside(record, rows[i].from, rows[i].to), rows[i].want, 0);
    ck_assert(isnan(kel_record_outside(NULL, 100.0, 200.0)));
}
END_TEST

enum { REF = KEL_BASE_REFERENCE, CUR = KEL_BASE_CURRENT, OWN = -1 };
enum { E = KEL_FLAG_EXTRAPOLATED, G = KEL_FLAG_GAP, T = KEL_FLAG_TRANSITION };
#define RECORDS NAN /* the record's reference */

static const struct flag_row {
    const char *label;
    int record_base;
    double record_reference;
    kel_quantity quantity;
    double from, to, at, reference;
    int base;
    unsigned want;
} flag_rows[] = {
    { "coefficient inside", REF, 200, KEL_COEFFICIENT, 0, 120, 0, RECORDS, OWN, 0 },
    { "coefficient at the bound", REF, 200, KEL_COEFFICIENT, 0, 300, 0, RECORDS, OWN, 0 },
    { "coefficient just outside", REF, 200, KEL_COEFFICIENT, 0, 300.00000000000006, 0, RECORDS, OWN, E },
    { "coefficient at 0 K", REF, 200, KEL_COEFFICIENT, 0, 0, 0, RECORDS, OWN, E },
    { "coefficient in the gap", REF, 200, KEL_COEFFICIENT, 0, 160, 0, RECORDS, OWN, G },
    { "coefficient at the gap's end", REF, 200, KEL_COEFFICIENT, 0, 170, 0, RECORDS, OWN, 0 },
    { "coefficient at the transition", REF, 200, KEL_COEFFICIENT, 0, 250, 0, RECORDS, OWN, 0 },
    { "coefficient does not need the reference", REF, 400, KEL_COEFFICIENT, 0, 120, 0, RECORDS, OWN, 0 },
    { "coefficient in current length needs it", REF, 400, KEL_COEFFICIENT, 0, 120, 0, RECORDS, CUR, E },
    { "coefficient in current length, reference inside", REF, 200, KEL_COEFFICIENT, 0, 120, 0, RECORDS, CUR, 0 },
    { "coefficient with another reference", REF, 200, KEL_COEFFICIENT, 0, 120, 0, 220, OWN, 0 },
    { "coefficient with another reference outside", REF, 200, KEL_COEFFICIENT, 0, 120, 0, 320, OWN, E },
    { "coefficient with another reference, the record's outside", REF, 400, KEL_COEFFICIENT, 0, 120, 0, 220, OWN, E },
    { "coefficient, current record", CUR, 400, KEL_COEFFICIENT, 0, 120, 0, RECORDS, OWN, 0 },
    { "coefficient in reference length, current record", CUR, 400, KEL_COEFFICIENT, 0, 120, 0, RECORDS, REF, E },
    { "the same with the reference inside", CUR, 200, KEL_COEFFICIENT, 0, 120, 0, RECORDS, REF, 0 },
    { "the same with another reference inside", CUR, 400, KEL_COEFFICIENT, 0, 120, 0, 220, REF, 0 },

    { "mean inside", REF, 200, KEL_MEAN, 120, 220, 0, RECORDS, OWN, 0 },
    { "mean without the reference", REF, 400, KEL_MEAN, 120, 220, 0, RECORDS, OWN, 0 },
    { "mean from the reference", REF, 400, KEL_MEAN, 400, 220, 0, RECORDS, OWN, E | T },
    { "mean that ends outside", REF, 200, KEL_MEAN, 120, 99, 0, RECORDS, OWN, E },
    { "mean of no interval", REF, 400, KEL_MEAN, 120, 120, 0, RECORDS, OWN, 0 },
    { "mean of no interval in the gap", REF, 200, KEL_MEAN, 160, 160, 0, RECORDS, OWN, G },
    { "mean over a gap", REF, 200, KEL_MEAN, 120, 180, 0, RECORDS, OWN, 0 },
    { "mean from a gap", REF, 200, KEL_MEAN, 160, 180, 0, RECORDS, OWN, G },
    { "mean to a gap", REF, 200, KEL_MEAN, 180, 160, 0, RECORDS, OWN, G },
    { "mean with another reference", REF, 400, KEL_MEAN, 120, 220, 0, 230, OWN, E },
    { "mean in current length", CUR, 400, KEL_MEAN, 120, 220, 0, RECORDS, OWN, E },
    { "mean in current length, reference inside", CUR, 200, KEL_MEAN, 120, 220, 0, RECORDS, OWN, 0 },
    { "mean of no interval in current length", CUR, 400, KEL_MEAN, 120, 120, 0, RECORDS, OWN, E },

    { "expansion inside", REF, 200, KEL_EXPANSION, 0, 120, 0, RECORDS, OWN, 0 },
    { "expansion outside", REF, 200, KEL_EXPANSION, 0, 301, 0, RECORDS, OWN, E | T },
    { "expansion from a reference outside", REF, 400, KEL_EXPANSION, 0, 260, 0, RECORDS, OWN, E },
    { "expansion from another reference", REF, 400, KEL_EXPANSION, 0, 220, 0, 200, OWN, E },
    { "expansion from a reference in the gap", REF, 160, KEL_EXPANSION, 0, 220, 0, RECORDS, OWN, G },
    { "expansion over the transition", REF, 200, KEL_EXPANSION, 0, 250, 0, RECORDS, OWN, T },
    { "expansion from another reference over the transition", REF, 260, KEL_EXPANSION, 0, 270, 0, 240, OWN, T },
    { "expansion, current record, another reference", CUR, 400, KEL_EXPANSION, 0, 220, 0, 200, OWN, 0 },
    { "expansion, current record", CUR, 400, KEL_EXPANSION, 0, 260, 0, RECORDS, OWN, E },

    { "integral inside", REF, 400, KEL_INTEGRAL, 120, 220, 0, RECORDS, OWN, 0 },
    { "integral from 0 K", REF, 200, KEL_INTEGRAL, 0, 220, 0, RECORDS, OWN, E },
    { "integral to the transition", REF, 200, KEL_INTEGRAL, 200, 250, 0, RECORDS, OWN, T },
    { "integral down to the transition", REF, 200, KEL_INTEGRAL, 260, 250, 0, RECORDS, OWN, 0 },
    { "integral just below the transition", REF, 200, KEL_INTEGRAL, 200, 249.99999999999997, 0, RECORDS, OWN, 0 },
    { "integral down over the transition", REF, 200, KEL_INTEGRAL, 260, 249, 0, RECORDS, OWN, T },
    { "integral with all reservations", REF, 200, KEL_INTEGRAL, 160, 301, 0, RECORDS, OWN, E | G | T },
    { "integral in current length", REF, 400, KEL_INTEGRAL, 120, 220, 0, RECORDS, CUR, E },
    { "integral, current record", CUR, 400, KEL_INTEGRAL, 120, 220, 0, RECORDS, OWN, 0 },
    { "integral in reference length, current record", CUR, 400, KEL_INTEGRAL, 120, 220, 0, RECORDS, REF, E },
    { "the same with another reference", CUR, 400, KEL_INTEGRAL, 120, 220, 0, 200, REF, 0 },

    { "ratio inside", REF, 200, KEL_LENGTH_RATIO, 120, 220, 0, RECORDS, OWN, 0 },
    { "ratio needs the reference", REF, 400, KEL_LENGTH_RATIO, 120, 220, 0, RECORDS, OWN, E },
    { "ratio from the reference", REF, 120, KEL_LENGTH_RATIO, 120, 220, 0, RECORDS, OWN, 0 },
    { "ratio, current record", CUR, 400, KEL_LENGTH_RATIO, 120, 220, 0, RECORDS, OWN, 0 },
    { "ratio, current record, outside", CUR, 400, KEL_LENGTH_RATIO, 120, 90, 0, RECORDS, OWN, E },

    { "change inside", REF, 200, KEL_CHANGE, 120, 220, 120, RECORDS, OWN, 0 },
    { "change needs the reference", REF, 400, KEL_CHANGE, 120, 220, 120, RECORDS, OWN, E },
    { "change of a length at another place", REF, 200, KEL_CHANGE, 120, 220, 350, RECORDS, OWN, E },
    { "change of a length at a reference outside", REF, 400, KEL_CHANGE, 120, 220, 400, RECORDS, OWN, E },
    { "change, current record", CUR, 400, KEL_CHANGE, 120, 220, 120, RECORDS, OWN, 0 },
    { "change, current record, length at another place", CUR, 200, KEL_CHANGE, 120, 220, 350, RECORDS, OWN, E },
};

START_TEST(flags)
{
    const struct flag_row *row = &flag_rows[_i];
    const kel_record *record = bench_record((kel_base)row->record_base, row->record_reference);
    const kel_query query = { row->quantity, row->from, row->to, row->at, row->reference, row->base };
    kel_answer answer;
    kel_status status = kel_record_answer(&answer, record, &query, NULL);
    ck_assert_msg(answer.flags == row->want, "%s: flags %u, expected %u", row->label, answer.flags, row->want);
    kel_status worst = row->want & E ? KEL_W_EXTRAPOLATED : row->want & G ? KEL_W_GAP
                     : row->want & T ? KEL_W_TRANSITION : KEL_OK;
    ck_assert_msg(status == worst, "%s: status %d, expected %d", row->label, (int)status, (int)worst);
}
END_TEST

START_TEST(status_is_the_gravest)
{
    ck_assert_int_eq(kel__flags_status(0), KEL_OK);
    ck_assert_int_eq(kel__flags_status(KEL_FLAG_UNKNOWN_U), KEL_OK);
    ck_assert_int_eq(kel__flags_status(T | KEL_FLAG_UNKNOWN_U), KEL_W_TRANSITION);
    ck_assert_int_eq(kel__flags_status(T | G), KEL_W_GAP);
    ck_assert_int_eq(kel__flags_status(T | G | E), KEL_W_EXTRAPOLATED);
    ck_assert_int_eq(kel__flags_status(E), KEL_W_EXTRAPOLATED);
}
END_TEST

static TCase *
leaning(void)
{
    TCase *c = tcase_create("leaning");
    tcase_add_loop_test(c, flags, 0, KEL_LENGTH(flag_rows));
    return c;
}

KEL_TCASE(range, points, kelvin_outside, status_is_the_gravest)
KEL_TEST_MAIN("range", range, leaning)
