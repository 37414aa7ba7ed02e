/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Array calls: the single answers, to the bit where the record has no kernel and within the stated bound where it has
   one; whatever the length and the place in memory, with and without their optional outputs, in place, and with
   elements that fail. */
#include "curve.h"
#include "kernel.h"
#include "../support/curves.h"
#include "../support/unit.h"

enum { LENGTH = 600, QUANTITIES = KEL_LENGTH_RATIO + 1 };

static specimen s;
static kel_arena *memory;
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

/* With a degree that the kernels always take; without their help if not `fast`. */
static void
make(uint64_t *state, size_t pieces, size_t modes, kel_base base, bool fast)
{
    specimen_make(&s, state, pieces, 5, modes, base, 2e-5);
    s.gaps[0] = (kel_interval){ s.pieces[pieces / 2].from, s.pieces[pieces / 2].to };
    s.record.content.gaps = s.gaps;
    s.record.content.gap_count = 1;
    if (fast) {
        ck_assert_int_eq(kel__kernel_make(&s.record.kernel, &s.record.content, memory, NULL), KEL_OK);
        ck_assert_ptr_nonnull(s.record.kernel);
    }
    const kel_interval range = s.record.content.range;
    for (size_t i = 0; i < LENGTH; i++) {
        from[i] = random_between(state, range.lo, range.hi);
        to[i] = i % 7 == 0 ? from[i] : i % 11 == 0 ? from[i] + 1e-3
              : random_between(state, fmax(0.0, range.lo - 20.0), range.hi + 20.0);
    }
}

static const size_t lengths[] = { 0, 1, 2, 63, 64, 65, 127, 128, 129, 255, 256, 257, LENGTH };

START_TEST(same_bits_as_single_answers)
{
    uint64_t state = 1 + (uint64_t)_i;
    for (int round = 0; round < 4 * KEL_LENGTH(lengths); round++) {
        size_t n = lengths[round / 4];
        make(&state, 3, round % 2 == 0 ? 70 : 0, (kel_base)(round / 2 % 2), false);
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
    const int quantity = _i % QUANTITIES;
    double bare[LENGTH], with_u[LENGTH];
    unsigned char with_flags[LENGTH];
    make(&state, 3, 5, (kel_base)(_i / QUANTITIES % 2), _i >= 2 * QUANTITIES);
    kel_status status = call(quantity, value, u, flags, &s.record, from, to, LENGTH, NULL);
    ck_assert_int_eq(call(quantity, bare, NULL, NULL, &s.record, from, to, LENGTH, NULL), status);
    ck_assert_mem_eq(bare, value, sizeof value);
    ck_assert_int_eq(call(quantity, bare, with_u, NULL, &s.record, from, to, LENGTH, NULL), status);
    ck_assert_mem_eq(with_u, u, sizeof u);
    ck_assert_int_eq(call(quantity, bare, NULL, with_flags, &s.record, from, to, LENGTH, NULL), status);
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
    static const size_t places[] = { 0, 63, 64, 255, 256, LENGTH - 1 };
    uint64_t state = 30 + (uint64_t)_i;
    const int quantity = _i % QUANTITIES;
    for (size_t r = 0; r < sizeof rows / sizeof rows[0]; r++)
        for (size_t p = 0; p < sizeof places / sizeof places[0]; p++) {
            make(&state, 3, 2, KEL_BASE_REFERENCE, _i >= QUANTITIES);
            to[places[p]] = rows[r].t;
            /* A later failure of another sort must not displace the first. */
            if (places[p] + 1 < LENGTH)
                to[LENGTH - 1] = rows[r].want == KEL_E_RANGE ? (double)NAN : -2.0;
            kel_error err = { 0 };
            kel_status status = call(quantity, value, u, flags, &s.record, from, to, LENGTH, &err);
            ck_assert_msg(status == rows[r].want, "%s: status %d", rows[r].label, (int)status);
            ck_assert_int_eq(err.code, rows[r].want);
            ck_assert_uint_eq(err.line, places[p] + 1);
            ck_assert_msg(strstr(err.message, rows[r].message) != NULL, "%s: %s", rows[r].label, err.message);
            for (size_t i = 0; i < LENGTH; i++) {
                bool failed = i == places[p] || i == LENGTH - 1;
                ck_assert(isnan(value[i]) == failed && isnan(u[i]) == failed);
                ck_assert_msg((flags[i] == KEL_FLAG_UNKNOWN_U) == failed, "%s: flags of element %zu", rows[r].label, i);
            }
            ck_assert_int_eq(call(quantity, value, NULL, NULL, &s.record, from, to, LENGTH, NULL), rows[r].want);
        }
}
END_TEST

START_TEST(missing_arrays)
{
    uint64_t state = 40;
    make(&state, 3, 2, KEL_BASE_REFERENCE, false);
    ck_assert_int_eq(call(_i, value, u, flags, NULL, from, to, LENGTH, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(call(_i, NULL, u, flags, &s.record, from, to, LENGTH, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(call(_i, value, u, flags, &s.record, from, NULL, LENGTH, NULL), KEL_E_ARGUMENT);
    if (_i != KEL_COEFFICIENT && _i != KEL_EXPANSION)
        ck_assert_int_eq(call(_i, value, u, flags, &s.record, NULL, to, LENGTH, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(call(_i, NULL, NULL, NULL, &s.record, NULL, NULL, 0, NULL), KEL_OK);
}
END_TEST

/* What the header allows between an array call and a single one: 1e-13 of the size for the kernel, its own bound for
   the other, and the rounding of an exponential; u within 1e-10 of the modes' sizes. Outside the pieces all have
   1e-10. */
static double
size_of(const kel_curve *curve, int quantity, double a, double b)
{
    const kel_content *c = &s.record.content;
    const bool value_at = quantity == KEL_COEFFICIENT;
    double lo = value_at ? b : fmin(a, b), hi = value_at ? b : fmax(a, b), sum = 0.0;
    for (size_t i = 0; i < c->piece_count; i++) {
        const kel_piece *p = &c->pieces[i];
        double l = i == 0 ? lo : fmax(lo, p->from), h = i + 1 == c->piece_count ? hi : fmin(hi, p->to), size[6];
        for (size_t j = 0; j < p->count; j++)
            size[j] = fabs(curve->coefficients[p->first + j]);
        __float128 x = fmaxq(1, fmaxq(fabsq(long_x(p, l)), fabsq(long_x(p, h))));
        if (value_at && p == long_piece(c, b))
            return (double)long_series(size, p->count, x);
        if (l < h)
            sum += (h - l) * (double)long_series(size, p->count, x);
    }
    for (size_t i = 0; i < c->transition_count; i++)
        if (lo < c->transitions[i].at && c->transitions[i].at <= hi)
            sum += fabs(curve->steps[i]);
    return quantity == KEL_MEAN && a != b ? sum / (hi - lo) : sum;
}

START_TEST(kernel_agrees_with_single_answers)
{
    uint64_t state = 50 + (uint64_t)_i;
    const int quantity = _i % QUANTITIES;
    const kel_base base = (kel_base)(_i / QUANTITIES);
    for (int round = 0; round < 30; round++) {
        make(&state, 1 + (size_t)round % 4, round % 3 == 0 ? 0 : 6, base, true);
        const kel_content *c = &s.record.content;
        kel_status worst = KEL_OK, status = call(quantity, value, u, flags, &s.record, from, to, LENGTH, NULL);
        for (size_t i = 0; i < LENGTH; i++) {
            kel_answer want;
            kel_status one = single(&want, quantity, &s.record, from[i], to[i], NULL);
            worst = one > worst ? one : worst;
            const double a = quantity == KEL_EXPANSION ? c->reference_temperature : from[i];
            const bool inside = fmin(a, to[i]) >= c->range.lo && fmax(a, to[i]) <= c->range.hi;
            /* 4e-15: 14 eps of degree 5 and a few more. */
            double length = base == KEL_BASE_CURRENT && quantity != KEL_COEFFICIENT ? 2.0 : 1.0, size_u = 0.0;
            double limit = (inside ? 1.04e-13 : 1e-10) * size_of(&c->mean, quantity, a, to[i]) * length +
                           8.0 * DBL_EPSILON * fabs(want.value);
            for (size_t m = 0; m < c->mode_count; m++)
                size_u = hypot(size_u, size_of(&c->modes[m].curve, quantity, a, to[i]));
            KEL_REQUIRE(fabs(value[i] - want.value) <= limit, "quantity %d, %.17g to %.17g: %.17g, singly %.17g",
                        quantity, a, to[i], value[i], want.value);
            if (c->mode_count == 0)
                ck_assert(isnan(u[i]));
            else
                KEL_REQUIRE(fabs(u[i] - want.u) <= 1e-10 * size_u * length, "quantity %d, %.17g to %.17g: u %.17g, "
                            "singly %.17g", quantity, a, to[i], u[i], want.u);
            KEL_REQUIRE(flags[i] == want.flags, "quantity %d, %.17g to %.17g: flags %u, singly %u", quantity, a, to[i],
                        (unsigned)flags[i], want.flags);
        }
        ck_assert_int_eq(status, worst);
    }
}
END_TEST

/* An element's answer depends neither on its neighbours nor on where it lies; nothing behind the end is written. */
START_TEST(any_length_and_place)
{
    uint64_t state = 60 + (uint64_t)_i;
    const int quantity = _i % QUANTITIES;
    double all[LENGTH], all_u[LENGTH];
    unsigned char all_flags[LENGTH];
    make(&state, 2, 3, (kel_base)(_i / QUANTITIES), true);
    call(quantity, all, all_u, all_flags, &s.record, from, to, LENGTH, NULL);
    for (size_t start = 0; start < 9; start++)
        for (size_t n = 0; n <= 40; n++) {
            for (size_t i = 0; i < LENGTH; i++)
                value[i] = u[i] = 9.0, flags[i] = 99;
            call(quantity, value + 1, u + 3, flags + 5, &s.record, from + start, to + start, n, NULL);
            for (size_t i = 0; i < n; i++)
                KEL_REQUIRE(same(value[i + 1], all[start + i]) && same(u[i + 3], all_u[start + i]) &&
                            flags[i + 5] == all_flags[start + i], "quantity %d, start %zu, n %zu, element %zu",
                            quantity, start, n, i);
            ck_assert(value[0] == 9.0 && value[n + 1] == 9.0 && u[2] == 9.0 && u[n + 3] == 9.0 && flags[4] == 99 &&
                      flags[n + 5] == 99);
        }
}
END_TEST

/* Outputs over inputs, with elements that fail and others that the kernels leave among them. */
START_TEST(in_place)
{
    uint64_t state = 70 + (uint64_t)_i;
    const int quantity = _i % QUANTITIES;
    double a[LENGTH], b[LENGTH];
    unsigned char f[LENGTH];
    make(&state, 2, 3, (kel_base)(_i / QUANTITIES % 2), _i / QUANTITIES / 2 == 0);
    to[5] = to[300] = (double)NAN;
    from[17] = to[17] = -3.0;
    to[LENGTH - 1] = HUGE_VAL;
    kel_error err = { 0 }, want = { 0 };
    kel_status status = call(quantity, value, u, flags, &s.record, from, to, LENGTH, &want);
    for (int way = 0; way < 2; way++) {
        memcpy(a, from, sizeof a);
        memcpy(b, to, sizeof b);
        kel_status got = way == 0 ? call(quantity, a, b, f, &s.record, a, b, LENGTH, &err)
                                  : call(quantity, b, a, f, &s.record, a, b, LENGTH, &err);
        ck_assert_int_eq(got, status);
        ck_assert_uint_eq(err.line, want.line);
        ck_assert_str_eq(err.message, want.message);
        for (size_t i = 0; i < LENGTH; i++)
            KEL_REQUIRE(same(way == 0 ? a[i] : b[i], value[i]) && same(way == 0 ? b[i] : a[i], u[i]) &&
                        f[i] == flags[i], "quantity %d, way %d, element %zu", quantity, way, i);
    }
}
END_TEST

/* Above the kernels' limit, and where a length is beyond a double: the single answers, or their errors. */
START_TEST(elements_that_kernels_leave)
{
    uint64_t state = 80 + (uint64_t)_i;
    const int quantity = _i % QUANTITIES;
    make(&state, 1, 2, (kel_base)(_i / QUANTITIES), true);
    static const double odd[] = { 999999.0, 1e6, 1000001.0, 1e9, 1e12, 1e60, 1e300 };
    for (size_t i = 0; i < sizeof odd / sizeof odd[0]; i++)
        to[40 * i] = odd[i];
    kel_error err = { 0 };
    kel_status status = call(quantity, value, u, flags, &s.record, from, to, LENGTH, &err);
    size_t first = 0;
    for (size_t i = LENGTH; i-- > 0;) {
        kel_answer answer;
        kel_error one = { 0 };
        if (single(&answer, quantity, &s.record, from[i], to[i], &one) >= KEL_OK) {
            ck_assert(isfinite(value[i]) && isfinite(u[i]) == isfinite(answer.u) && flags[i] == answer.flags);
            ck_assert(to[i] <= 1e6 || (same(value[i], answer.value) && same(u[i], answer.u)));
            continue;
        }
        ck_assert(isnan(value[i]) && isnan(u[i]) && flags[i] == KEL_FLAG_UNKNOWN_U);
        first = i + 1;
    }
    ck_assert_uint_eq(err.line, first);
    ck_assert((status < KEL_OK) == (first > 0));
}
END_TEST

static TCase *
arrays(void)
{
    TCase *c = tcase_create("arrays");
    tcase_add_checked_fixture(c, begin, end);
    tcase_add_loop_test(c, same_bits_as_single_answers, KEL_COEFFICIENT, QUANTITIES);
    tcase_add_loop_test(c, kernel_agrees_with_single_answers, 0, 2 * QUANTITIES);
    tcase_add_loop_test(c, any_length_and_place, 0, 2 * QUANTITIES);
    tcase_add_loop_test(c, in_place, 0, 4 * QUANTITIES);
    tcase_add_loop_test(c, optional_outputs, 0, 4 * QUANTITIES);
    tcase_add_loop_test(c, a_failing_element, 0, 2 * QUANTITIES);
    tcase_add_loop_test(c, elements_that_kernels_leave, 0, 2 * QUANTITIES);
    tcase_add_loop_test(c, missing_arrays, KEL_COEFFICIENT, QUANTITIES);
    return c;
}

KEL_TEST_MAIN("answer_array", arrays)
