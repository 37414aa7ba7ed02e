/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Array calls: bit for bit the single answers, whatever the length, with and without their optional outputs. */
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

enum { LENGTH = 200 };

static specimen s;
static double from[LENGTH], to[LENGTH], value[LENGTH], u[LENGTH];
static unsigned char flags[LENGTH];

/* The five calls behind one face. Quantities of one temperature take `to`. */
static kel_status
call(int quantity, double *v, double *uncertainty, unsigned char *f, const kel_record *r, const double *a,
     const double *b, size_t n, kel_error *err)
{
    switch (quantity) {
    case KEL_COEFFICIENT: return kel_record_coefficient_n(v, uncertainty, f, r, b, n, err);
    case KEL_MEAN: return kel_record_mean_n(v, uncertainty, f, r, a, b, n, err);
    case KEL_EXPANSION: return kel_record_expansion_n(v, uncertainty, f, r, b, n, err);
    case KEL_INTEGRAL: return kel_record_integral_n(v, uncertainty, f, r, a, b, n, err);
    default: return kel_record_length_ratio_n(v, uncertainty, f, r, a, b, n, err);
    }
}

static kel_status
single(kel_answer *answer, int quantity, const kel_record *r, double a, double b, kel_error *err)
{
    const kel_query q = { (kel_quantity)quantity, a, b, a, NAN, -1 };
    return kel_record_answer(answer, r, &q, err);
}

static bool
same(double a, double b)
{
    return memcmp(&a, &b, sizeof a) == 0 || (isnan(a) && isnan(b));
}

static void
make(uint64_t *state, size_t modes, kel_base base)
{
    specimen_make(&s, state, 3, 7, modes, base, 2e-5);
    s.gaps[0] = (kel_interval){ s.pieces[1].from, s.pieces[1].to };
    s.record.content.gaps = s.gaps;
    s.record.content.gap_count = 1;
    const kel_interval range = s.record.content.range;
    for (size_t i = 0; i < LENGTH; i++) {
        from[i] = random_between(state, range.lo, range.hi);
        to[i] = i % 7 == 0 ? from[i] : random_between(state, fmax(0.0, range.lo - 20.0), range.hi + 20.0);
    }
}

static const size_t lengths[] = { 0, 1, 2, 63, 64, 65, 127, 128, 129, LENGTH };

START_TEST(same_bits_as_single_answers)
{
    uint64_t state = 1 + (uint64_t)_i;
    for (int round = 0; round < 4 * KEL_LENGTH(lengths); round++) {
        size_t n = lengths[round / 4];
        make(&state, round % 2 == 0 ? 70 : 0, (kel_base)(round / 2 % 2));
        kel_status worst = KEL_OK;
        for (size_t i = 0; i < LENGTH; i++)
            value[i] = u[i] = 9.0, flags[i] = 99;
        kel_status status = call(_i, value, u, flags, &s.record, from, to, n, NULL);
        for (size_t i = 0; i < n; i++) {
            kel_answer answer;
            kel_status one = single(&answer, _i, &s.record, from[i], to[i], NULL);
            worst = one > worst ? one : worst;
            ck_assert_msg(same(value[i], answer.value), "quantity %d, element %zu: %.17g and %.17g", _i, i, value[i],
                          answer.value);
            ck_assert_msg(same(u[i], answer.u), "quantity %d, element %zu: u %.17g and %.17g", _i, i, u[i], answer.u);
            ck_assert_uint_eq(flags[i], answer.flags);
        }
        ck_assert_int_eq(status, worst);
        for (size_t i = n; i < LENGTH; i++)
            ck_assert(value[i] == 9.0 && u[i] == 9.0 && flags[i] == 99);
    }
}
END_TEST

START_TEST(optional_outputs)
{
    uint64_t state = 20 + (uint64_t)_i;
    double bare[LENGTH], with_u[LENGTH];
    unsigned char with_flags[LENGTH];
    make(&state, 5, KEL_BASE_CURRENT);
    kel_status status = call(_i, value, u, flags, &s.record, from, to, LENGTH, NULL);
    ck_assert_int_eq(call(_i, bare, NULL, NULL, &s.record, from, to, LENGTH, NULL), status);
    ck_assert_mem_eq(bare, value, sizeof value);
    ck_assert_int_eq(call(_i, bare, with_u, NULL, &s.record, from, to, LENGTH, NULL), status);
    ck_assert_mem_eq(with_u, u, sizeof u);
    ck_assert_int_eq(call(_i, bare, NULL, with_flags, &s.record, from, to, LENGTH, NULL), status);
    ck_assert_mem_eq(with_flags, flags, sizeof flags);
}
END_TEST

/* The failing element's place counts from 1; the first one is told, all are NaN, and the others stand. */
START_TEST(a_failing_element)
{
    static const struct { const char *label; double t; kel_status want; const char *message; } rows[] = {
        { "NaN", (double)NAN, KEL_E_ARGUMENT, "nan K" },
        { "infinity", HUGE_VAL, KEL_E_ARGUMENT, "inf K" },
        { "below 0 K", -1.0, KEL_E_RANGE, "-1 K" },
        { "beyond a double", 1e300, KEL_E_RANGE, "1e300" },
    };
    static const size_t places[] = { 0, 63, 64, LENGTH - 1 };
    uint64_t state = 30 + (uint64_t)_i;
    for (size_t r = 0; r < sizeof rows / sizeof rows[0]; r++)
        for (size_t p = 0; p < sizeof places / sizeof places[0]; p++) {
            make(&state, 2, KEL_BASE_REFERENCE);
            to[places[p]] = rows[r].t;
            /* A later failure of another sort must not displace the first. */
            if (places[p] + 1 < LENGTH)
                to[LENGTH - 1] = rows[r].want == KEL_E_RANGE ? (double)NAN : -2.0;
            kel_error err = { 0 };
            kel_status status = call(_i, value, u, flags, &s.record, from, to, LENGTH, &err);
            ck_assert_msg(status == rows[r].want, "%s: status %d", rows[r].label, (int)status);
            ck_assert_int_eq(err.code, rows[r].want);
            ck_assert_uint_eq(err.line, places[p] + 1);
            ck_assert_msg(strstr(err.message, rows[r].message) != NULL, "%s: %s", rows[r].label, err.message);
            for (size_t i = 0; i < LENGTH; i++) {
                bool failed = i == places[p] || i == LENGTH - 1;
                ck_assert(isnan(value[i]) == failed && isnan(u[i]) == failed);
                ck_assert_msg((flags[i] == KEL_FLAG_UNKNOWN_U) == failed, "%s: flags of element %zu", rows[r].label, i);
            }
            ck_assert_int_eq(call(_i, value, NULL, NULL, &s.record, from, to, LENGTH, NULL), rows[r].want);
        }
}
END_TEST

START_TEST(missing_arrays)
{
    uint64_t state = 40;
    make(&state, 2, KEL_BASE_REFERENCE);
    ck_assert_int_eq(call(_i, value, u, flags, NULL, from, to, LENGTH, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(call(_i, NULL, u, flags, &s.record, from, to, LENGTH, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(call(_i, value, u, flags, &s.record, from, NULL, LENGTH, NULL), KEL_E_ARGUMENT);
    if (_i != KEL_COEFFICIENT && _i != KEL_EXPANSION)
        ck_assert_int_eq(call(_i, value, u, flags, &s.record, NULL, to, LENGTH, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(call(_i, NULL, NULL, NULL, &s.record, NULL, NULL, 0, NULL), KEL_OK);
}
END_TEST

static TCase *
arrays(void)
{
    TCase *c = tcase_create("arrays");
    tcase_add_loop_test(c, same_bits_as_single_answers, KEL_COEFFICIENT, KEL_LENGTH_RATIO + 1);
    tcase_add_loop_test(c, optional_outputs, KEL_COEFFICIENT, KEL_LENGTH_RATIO + 1);
    tcase_add_loop_test(c, a_failing_element, KEL_COEFFICIENT, KEL_LENGTH_RATIO + 1);
    tcase_add_loop_test(c, missing_arrays, KEL_COEFFICIENT, KEL_LENGTH_RATIO + 1);
    return c;
}

KEL_TEST_MAIN("answer_array", arrays)
