/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What must hold for every record, whatever its numbers: integrals against 33 digits down to 1 mK, additivity,
   antisymmetry, re-reference there and back, the two bases, and an expansion that is certain at its own reference.

   Records here are drawn at random with fixed seeds: 1 to 4 pieces of degree 0 to 60, steps, modes. Limits are the
   library's promise, (2n + 4) eps sum |c_k| times the width of an interval, n the degree. */
#include <float.h>
#include <math.h>
#include <stdint.h>

#include "../support/making.h"
#include "../support/quad.h"

enum { RECORDS = 12, PIECES = 4, ROOM = PIECES * 61, MODES = 3 };

/* xorshift64*, after S. Vigna: enough for picking numbers. */
static double
uniform(uint64_t *state)
{
    *state ^= *state >> 12;
    *state ^= *state << 25;
    *state ^= *state >> 27;
    return (double)((*state * UINT64_C(2685821657736338717)) >> 11) / 9007199254740992.0;
}

static double
between(uint64_t *state, double lo, double hi)
{
    return lo + (hi - lo) * uniform(state);
}

/* Record `index`: its size grows with the index, coefficients of 1e-5 1/K fall off towards high orders or do not. */
static kel_record *
random_record(int index, kel_base base, uint64_t *state)
{
    static double mean[ROOM], mode[MODES][ROOM], steps[MODES + 1][PIECES];
    kel_piece pieces[PIECES];
    kel_transition transitions[PIECES];
    kel_mode modes[MODES];
    int continuity[PIECES] = { -1, -1, -1, -1 };
    *state = UINT64_C(0x9E3779B97F4A7C15) * (uint64_t)(index + 1);
    kel_content c = { .form = "adopted", .base = base,
                      .pieces = pieces, .piece_count = (size_t)(index % 4) + 1, .transitions = transitions,
                      .continuity = continuity, .modes = modes, .mode_count = MODES, .variance = KEL_VARIANCE_STATED,
                      .scatter_known = true, .degrees_of_freedom = (double)NAN,
                      .residual_standard_deviation = (double)NAN, .chi2 = (double)NAN };
    double t = 4.0 + (double)index;
    for (size_t i = 0; i < c.piece_count; i++) {
        double next = t + between(state, 80.0, 400.0);
        size_t n = index == RECORDS - 1 ? 61 : 1 + (size_t)between(state, 0.0, 5.0 * index + 2.0);
        pieces[i] = (kel_piece){ .from = t, .to = next, .first = c.coefficient_count, .count = n > 61 ? 61 : n };
        for (size_t k = 0; k < pieces[i].count; k++) {
            double size = 1e-5 / (index % 3 == 0 ? 1.0 : 1.0 + (double)(k * k));
            mean[c.coefficient_count + k] = between(state, -size, size);
            for (size_t m = 0; m < MODES; m++)
                mode[m][c.coefficient_count + k] = between(state, -0.02 * size, 0.02 * size);
        }
        c.coefficient_count += pieces[i].count;
        if (i > 0) {
            transitions[c.transition_count++] = (kel_transition){ t, index % 2 ? KEL_STEP_FITTED : KEL_STEP_NONE };
            for (size_t m = 0; m <= MODES; m++)
                steps[m][c.transition_count - 1] = index % 2 ? between(state, -1e-4, 1e-4) : 0.0;
        }
        t = next;
    }
    c.continuity_count = c.piece_count - 1;
    c.range = (kel_interval){ pieces[0].from, t };
    c.reference_temperature = between(state, c.range.lo, c.range.hi);
    c.mean = (kel_curve){ mean, steps[MODES] };
    for (size_t m = 0; m < MODES; m++)
        modes[m] = (kel_mode){ (kel_mode_kind)m, "drawn", { mode[m], steps[m] } };
    kel_record *record;
    kel_error err = { 0 };
    made(kel_record_build(&record, &c, &err), &err, "record");
    return record;
}

/* (2n + 4) eps sum |c_k|, the largest over the pieces: in 1/K */
static double
promise(const kel_record *record)
{
    const kel_content *c = kel_record_content(record);
    double most = 0.0;
    for (size_t i = 0; i < c->piece_count; i++) {
        double sum = 0.0;
        for (size_t k = 0; k < c->pieces[i].count; k++)
            sum += fabs(c->mean.coefficients[c->pieces[i].first + k]);
        most = fmax(most, (2.0 * (double)(c->pieces[i].count - 1) + 4.0) * DBL_EPSILON * sum);
    }
    return most;
}

static double
step_size(const kel_record *record)
{
    const kel_content *c = kel_record_content(record);
    double sum = 0.0;
    for (size_t i = 0; i < c->transition_count; i++)
        sum += fabs(c->mean.steps[i]);
    return sum;
}

/* Values and integrals of every width, for the doubles given. 1 mK: 1e-13 of width times sum |c_k| as well. */
START_TEST(against_33_digits)
{
    static const double widths[] = { 1e-3, 1e-2, 0.1, 1.0, 10.0, 70.0, 1e9 };
    uint64_t state;
    kel_record *record = random_record(_i, KEL_BASE_REFERENCE, &state);
    const kel_content *c = kel_record_content(record);
    const double limit = promise(record), lo = c->range.lo, hi = c->range.hi;
    double worst = 0.0, worst_mk = 0.0;
    for (int i = 0; i < 400; i++) {
        double t = i == 0 ? lo : i == 1 ? hi : between(&state, lo, hi);
        quad want = quad_curve(c, &c->mean, (quad)t);
        ck_assert_abs_for("coefficient", ask(record, KEL_COEFFICIENT, t, t).value, (double)want, limit, "1/K");
        double width = widths[i % KEL_LENGTH(widths)];
        /* every fourth interval hangs on a piece's end, where a polynomial turns fastest */
        double from = i % 4 != 0 ? t : c->pieces[i / 4 % (int)c->piece_count].from, to = fmin(hi, from + width);
        if (to <= from)
            continue;
        double off = fabs((double)((quad)ask(record, KEL_INTEGRAL, from, to).value
                                   - quad_curve_integral(c, &c->mean, (quad)from, (quad)to)));
        /* a step that is crossed is itself only good to eps, and so is the sum with it */
        double steps = 8.0 * DBL_EPSILON * step_size(record) + limit * (hi - lo);
        char label[96];
        snprintf(label, sizeof label, "record %d, integral from %.17g K to %.17g K", _i, from, to);
        bool crossed = false;
        for (size_t k = 0; k < c->transition_count; k++)
            crossed |= from < c->transitions[k].at && c->transitions[k].at <= to;
        ck_assert_abs_for(label, off, 0.0, limit * (to - from) + (crossed ? steps : 0.0), "1");
        if (!crossed)
            worst = fmax(worst, off / (limit * (to - from)));
        if (width == 1e-3 && !crossed) {
            double sum = 0.0; /* of the piece that the interval lies in */
            size_t p = 0;
            while (p + 1 < c->piece_count && c->pieces[p].to <= from)
                p++;
            if (to > c->pieces[p].to)
                continue;
            for (size_t k = 0; k < c->pieces[p].count; k++)
                sum += fabs(c->mean.coefficients[c->pieces[p].first + k]);
            ck_assert_abs_for(label, off, 0.0, 1e-13 * (to - from) * sum, "1");
            worst_mk = fmax(worst_mk, off / ((to - from) * sum));
        }
    }
    printf("record %2d: %zu pieces, worst integral %.2f of the promise, 1 mK within %.1e of width * sum |c_k|\n", _i,
           c->piece_count, worst, worst_mk);
    kel_record_free(record);
}
END_TEST

START_TEST(additive_and_antisymmetric)
{
    uint64_t state;
    kel_record *record = random_record(_i, _i % 2 ? KEL_BASE_CURRENT : KEL_BASE_REFERENCE, &state);
    const kel_interval r = kel_record_content(record)->range;
    for (int i = 0; i < 100; i++) {
        double a = between(&state, r.lo, r.hi), b = between(&state, r.lo, r.hi), m = between(&state, r.lo, r.hi);
        kel_answer ab = ask(record, KEL_INTEGRAL, a, b), am = ask(record, KEL_INTEGRAL, a, m),
                   mb = ask(record, KEL_INTEGRAL, m, b);
        double limit =
            promise(record) * (fabs(b - a) + fabs(m - a) + fabs(b - m)) + 8.0 * DBL_EPSILON * step_size(record);
        ck_assert_abs(am.value + mb.value, ab.value, limit, "1");
        ck_assert_ulp(ask(record, KEL_INTEGRAL, b, a).value, -ab.value, 0);
        ck_assert_ulp(ask(record, KEL_INTEGRAL, b, a).u, ab.u, 0);
        ck_assert_ulp(ask(record, KEL_INTEGRAL, a, a).value, 0.0, 0);
        ck_assert_ulp(ask(record, KEL_INTEGRAL, a, a).u, 0.0, 0);
        /* u^2(a, b) = u^2(a, m) + u^2(m, b) + 2 cov */
        kel_query qam = { KEL_INTEGRAL, a, m, a, (double)NAN, -1 }, qmb = { KEL_INTEGRAL, m, b, m, (double)NAN, -1 };
        double cov, scale = am.u * am.u + mb.u * mb.u;
        kel_error err = { 0 };
        kel_status status = kel_record_covariance(&cov, record, &qam, &qmb, &err);
        ck_assert_msg(status >= 0, "%s", err.message);
        ck_assert_abs(am.u * am.u + mb.u * mb.u + 2.0 * cov, ab.u * ab.u, 1e-12 * scale, "1");
        /* length ratios multiply, and the way back is the reciprocal */
        double ratio = ask(record, KEL_LENGTH_RATIO, a, b).value;
        ck_assert_abs(ask(record, KEL_LENGTH_RATIO, a, m).value * ask(record, KEL_LENGTH_RATIO, m, b).value, ratio,
                      limit * 1.1 + 8.0 * DBL_EPSILON, "1");
        ck_assert_abs(ask(record, KEL_LENGTH_RATIO, b, a).value * ratio, 1.0, limit * 1.1 + 8.0 * DBL_EPSILON, "1");
        /* a mean over nothing is the coefficient there, in the record's reference and base 1 + e times it for current
           length */
        double alpha = ask(record, KEL_COEFFICIENT, a, a).value;
        double grown =
            kel_record_content(record)->base == KEL_BASE_CURRENT ? 1.0 + ask(record, KEL_EXPANSION, a, a).value : 1.0;
        ck_assert_abs(ask(record, KEL_MEAN, a, a).value, alpha * grown, 8.0 * DBL_EPSILON * fabs(alpha), "1/K");
    }
    kel_record_free(record);
}
END_TEST

static kel_answer
ask_in(const kel_record *record, kel_quantity quantity, double from, double to, double reference, int base)
{
    kel_query query = { quantity, from, to, from, reference, base };
    kel_answer a;
    kel_error err = { 0 };
    kel_status status = kel_record_answer(&a, record, &query, &err);
    ck_assert_msg(status == KEL_OK || status == KEL_W_TRANSITION, "%s",
                  status < 0 ? err.message : kel_status_text(status));
    return a;
}

/* e' = [e(T) - e(r')]/[1 + e(r')], and from e' back by the same formula with e'(r); the same for the coefficient, and
   both for either base of the record. The lengths of a part do not know of any reference. */
START_TEST(rereference)
{
    uint64_t state;
    kel_record *record = random_record(_i, _i % 2 ? KEL_BASE_CURRENT : KEL_BASE_REFERENCE, &state);
    const kel_content *c = kel_record_content(record);
    const double r = c->reference_temperature;
    const int ref = KEL_BASE_REFERENCE;
    for (int i = 0; i < 60; i++) {
        double t = between(&state, c->range.lo, c->range.hi), r2 = between(&state, c->range.lo, c->range.hi);
        double limit =
            8.0 * promise(record) * (c->range.hi - c->range.lo) + 16.0 * DBL_EPSILON * (step_size(record) + 1e-3);
        double there = ask_in(record, KEL_EXPANSION, t, t, r2, ref).value,
               at_r = ask_in(record, KEL_EXPANSION, r, r, r2, ref).value;
        ck_assert_abs((there - at_r) / (1.0 + at_r), ask_in(record, KEL_EXPANSION, t, t, r, ref).value, limit, "1");
        double slope = ask_in(record, KEL_COEFFICIENT, t, t, r2, ref).value;
        ck_assert_abs(slope / (1.0 + at_r), ask_in(record, KEL_COEFFICIENT, t, t, r, ref).value,
                      (limit + 8.0 * DBL_EPSILON) * fabs(slope), "1/K");
        kel_answer own = ask_in(record, KEL_EXPANSION, r2, r2, r2, ref);
        ck_assert_ulp(own.value, 0.0, 0);
        ck_assert_ulp(own.u, 0.0, 0);
        ck_assert_ulp(own.u_fit, 0.0, 0);
        kel_answer change = ask_in(record, KEL_CHANGE, r2, t, (double)NAN, -1),
                   changed = ask_in(record, KEL_CHANGE, r2, t, t, -1);
        ck_assert_abs(changed.value, change.value, limit, "1");
        ck_assert_abs(changed.u, change.u, 1e-12 * change.u + limit, "1");
    }
    ck_assert_ulp(ask_in(record, KEL_EXPANSION, c->range.lo, c->range.lo, c->range.lo, ref).u, 0.0, 0);
    kel_record_free(record);
}
END_TEST

/* One record asked in the other base: the expansion is the same length change, the coefficient differs by 1 + e. */
START_TEST(bases)
{
    uint64_t state;
    kel_record *record = random_record(_i, _i % 2 ? KEL_BASE_CURRENT : KEL_BASE_REFERENCE, &state);
    const kel_content *c = kel_record_content(record);
    for (int i = 0; i < 60; i++) {
        double t = between(&state, c->range.lo, c->range.hi), limit = promise(record) * (c->range.hi - c->range.lo);
        kel_answer e1 = ask_in(record, KEL_EXPANSION, t, t, (double)NAN, KEL_BASE_REFERENCE);
        kel_answer e2 = ask_in(record, KEL_EXPANSION, t, t, (double)NAN, KEL_BASE_CURRENT);
        ck_assert_abs(e1.value, e2.value, limit, "1");
        double a1 = ask_in(record, KEL_COEFFICIENT, t, t, (double)NAN, KEL_BASE_REFERENCE).value;
        double a2 = ask_in(record, KEL_COEFFICIENT, t, t, (double)NAN, KEL_BASE_CURRENT).value;
        ck_assert_abs(a1, a2 * (1.0 + e1.value), 8.0 * DBL_EPSILON * fabs(a1) + limit * fabs(a1), "1/K");
    }
    kel_record_free(record);
}
END_TEST

static TCase *
drawn(void)
{
    TCase *c = tcase_create("drawn");
    tcase_add_loop_test(c, against_33_digits, 0, RECORDS);
    tcase_add_loop_test(c, additive_and_antisymmetric, 0, RECORDS);
    tcase_add_loop_test(c, rereference, 0, RECORDS);
    tcase_add_loop_test(c, bases, 0, RECORDS);
    return c;
}

KEL_TEST_MAIN("properties", drawn)
