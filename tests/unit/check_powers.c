/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Powers of a piece against the recurrence of T_j(A + B t) on polynomials, in quadruple precision. */
#include "curve.h"
#include "../support/curves.h"
#include "../support/unit.h"

static specimen s;
static const size_t degrees[] = { 0, 1, 2, 3, 5, 10, 20, 40, 60 };
static __float128 table[KEL_COEFFICIENTS_MAX][KEL_COEFFICIENTS_MAX];

/* table[j][k]: the coefficient of t^k in T_j(A + B t). */
static void
fill_table(const kel_piece *p, double centre, double scale)
{
    __float128 width = (__float128)p->to - p->from;
    __float128 A = (2 * (__float128)centre - p->from - p->to) / width, B = 2 * (__float128)scale / width;
    memset(table, 0, sizeof table);
    table[0][0] = 1;
    for (size_t j = 1; j < p->count; j++)
        for (size_t k = 0; k <= j; k++) {
            __float128 x = A * table[j - 1][k] + (k > 0 ? B * table[j - 1][k - 1] : 0);
            table[j][k] = j == 1 ? x : 2 * x - table[j - 2][k];
        }
}

/* The sum for t^k and its largest term. */
static __float128
long_power(__float128 *largest, const double *c, size_t count, size_t k)
{
    __float128 sum = 0;
    *largest = 0;
    for (size_t j = k; j < count; j++) {
        __float128 term = c[j] * table[j][k];
        sum += term;
        *largest = fmaxq(*largest, fabsq(term));
    }
    return sum;
}

/* T in kelvin, degC and degF, the piece's own x, and a distant centre. */
static void
some_variable(double *centre, double *scale, uint64_t *state, const kel_piece *p)
{
    static const double fixed[][2] = {
        { 0.0, 1.0 }, { 273.15, 1.0 }, { 0.0, 1000.0 }, { 255.3722222222222, 0.5555555555555556 }, { 293.0, -100.0 },
    };
    size_t i = random_below(state, 7);
    *centre = i < 5 ? fixed[i][0] : i == 5 ? 0.5 * (p->from + p->to) : random_between(state, 0.0, 1000.0);
    *scale = i < 5 ? fixed[i][1] : i == 5 ? 0.5 * (p->to - p->from) : random_between(state, 0.1, 1000.0);
}

START_TEST(powers_within_the_stated_bound)
{
    uint64_t state = 1 + (uint64_t)_i;
    double power[KEL_COEFFICIENTS_MAX], u[KEL_COEFFICIENTS_MAX];
    for (int round = 0; round < 60; round++) {
        specimen_make(&s, &state, 1 + random_below(&state, 3), degrees[_i], 3, KEL_BASE_REFERENCE, 2e-5);
        const kel_content *c = &s.record.content;
        size_t piece = random_below(&state, c->piece_count);
        const kel_piece *p = &s.pieces[piece];
        double centre, scale;
        some_variable(&centre, &scale, &state, p);
        ck_assert_int_eq(kel_record_powers(power, u, &s.record, piece, centre, scale, NULL), KEL_OK);
        fill_table(p, centre, scale);
        for (size_t k = 0; k < p->count; k++) {
            __float128 largest, largest_of_modes = 0, u2 = 0;
            __float128 want = long_power(&largest, c->mean.coefficients + p->first, p->count, k);
            char label[96];
            snprintf(label, sizeof label, "degree %zu, power %zu, centre %g K, scale %g K", degrees[_i], k, centre,
                     scale);
            ck_assert_abs_for(label, (double)(power[k] - want), 0.0, 8.0 * DBL_EPSILON * (double)largest, "1/K");
            for (size_t m = 0; m < 3; m++) {
                const double *mode = c->modes[m].curve.coefficients + p->first;
                __float128 one = long_power(&largest, mode, p->count, k);
                u2 += one * one;
                largest_of_modes += largest;
            }
            double limit = 8.0 * DBL_EPSILON * (double)largest_of_modes;
            ck_assert_abs_for(label, (double)(u[k] - sqrtq(u2)), 0.0, limit, "1/K");
        }
    }
}
END_TEST

/* T_2(x) = 2 x^2 - 1 and T_3(x) = 4 x^3 - 3 x on 100 K to 300 K, x = (T - 200 K)/(100 K): exact in that variable. */
START_TEST(known_polynomials)
{
    uint64_t state = 2;
    specimen_make(&s, &state, 1, 3, 0, KEL_BASE_REFERENCE, 1.0);
    s.pieces[0].from = 100.0, s.pieces[0].to = 300.0;
    const double c[4] = { 1.0, 2.0, 3.0, 5.0 }, want[4] = { 1.0 - 3.0, 2.0 - 15.0, 6.0, 20.0 };
    memcpy(s.coefficients[0], c, sizeof c);
    double power[4], u[4];
    ck_assert_int_eq(kel_record_powers(power, u, &s.record, 0, 200.0, 100.0, NULL), KEL_OK);
    for (size_t k = 0; k < 4; k++) {
        ck_assert_ulp(power[k], want[k], 0);
        ck_assert(isnan(u[k]));
    }
    /* The same in T: x = T/100 - 2, so p = -2 - 13 x + 6 x^2 + 20 x^3. */
    const double in_kelvin[4] = { -2.0 + 26.0 + 24.0 - 160.0, (-13.0 - 24.0 + 240.0) / 100.0, (6.0 - 120.0) / 1e4,
                                  20.0 / 1e6 };
    ck_assert_int_eq(kel_record_powers(power, NULL, &s.record, 0, 0.0, 1.0, NULL), KEL_OK);
    for (size_t k = 0; k < 4; k++)
        ck_assert_ulp(power[k], in_kelvin[k], 1);
}
END_TEST

START_TEST(one_temperature_is_a_constant)
{
    uint64_t state = 3;
    specimen_make(&s, &state, 1, 0, 1, KEL_BASE_REFERENCE, 1e-5);
    s.pieces[0].from = s.pieces[0].to = 293.15;
    double power, u;
    ck_assert_int_eq(kel_record_powers(&power, &u, &s.record, 0, 0.0, 1.0, NULL), KEL_OK);
    ck_assert_ulp(power, s.coefficients[0][0], 0);
    ck_assert_ulp(u, fabs(s.coefficients[1][0]), 0);
}
END_TEST

START_TEST(wrong_arguments)
{
    uint64_t state = 4;
    specimen_make(&s, &state, 2, 60, 1, KEL_BASE_REFERENCE, 1e-5);
    static const struct { const char *label; size_t piece; double centre, scale; kel_status want; } rows[] = {
        { "last piece", 1, 0.0, 1.0, KEL_OK },
        { "piece behind the last", 2, 0.0, 1.0, KEL_E_ARGUMENT },
        { "centre NaN", 0, (double)NAN, 1.0, KEL_E_ARGUMENT },
        { "centre infinite", 0, HUGE_VAL, 1.0, KEL_E_ARGUMENT },
        { "scale NaN", 0, 0.0, (double)NAN, KEL_E_ARGUMENT },
        { "scale infinite", 0, 0.0, -HUGE_VAL, KEL_E_ARGUMENT },
        { "scale 0", 0, 0.0, 0.0, KEL_E_ARGUMENT },
        { "powers beyond a double", 0, 1e9, 1.0, KEL_E_RANGE },
        { "powers beyond a double by scale", 0, 0.0, 1e9, KEL_E_RANGE },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        double power[61], u[61];
        kel_error err = { 0 };
        kel_status got = kel_record_powers(power, u, &s.record, rows[i].piece, rows[i].centre, rows[i].scale, &err);
        ck_assert_msg(got == rows[i].want, "%s: status %d", rows[i].label, (int)got);
        ck_assert_int_eq(err.code, rows[i].want);
        if (got == KEL_E_RANGE)
            for (size_t k = 0; k < 61; k++)
                ck_assert_msg(isnan(power[k]) && isnan(u[k]), "%s: output", rows[i].label);
    }
    double power[61];
    ck_assert_int_eq(kel_record_powers(NULL, NULL, &s.record, 0, 0.0, 1.0, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_powers(power, NULL, NULL, 0, 0.0, 1.0, NULL), KEL_E_ARGUMENT);
}
END_TEST

static TCase *
accuracy(void)
{
    TCase *c = tcase_create("accuracy");
    tcase_add_loop_test(c, powers_within_the_stated_bound, 0, KEL_LENGTH(degrees));
    return c;
}

KEL_TCASE(cases_by_hand, known_polynomials, one_temperature_is_a_constant, wrong_arguments)
KEL_TEST_MAIN("powers", accuracy, cases_by_hand)
