/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Modes against the direct formulas: c = H y of the augmented system, worked with normal equations in twice the precision;
   scatter part H V H', one vector H F_j for each shared error. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

#include <quadmath.h>

enum { ROWS = 24, MOST = 12 };
typedef __float128 quad;

static const struct { const char *label; double relative, absolute; int degree; double join; } cases[] = {
    { "nothing shared", 0, 0, 3, 0 },
    { "relative, in the span of the curve", 0.02, 0, 3, 0 },
    { "absolute", 0, 2e-7, 2, 0 },
    { "both", 0.03, 1e-7, 4, 0 },
    { "large against the scatter", 0.5, 0, 2, 0 },
    { "two pieces", 0.02, 1e-7, 2, 150 },
};

static double
truth(double t)
{
    return 1e-5 + 3e-8 * (t - 150) - 4e-11 * (t - 150) * (t - 150);
}

static void
make_table(by_hand *h, int i)
{
    by_hand_start(h, "hand", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_COEFFICIENT, 0);
    for (int k = 0; k < ROWS; k++) {
        double t = 20 + 12.5 * k;
        by_hand_row(h, 0, t, t, truth(t) + 3e-8 * ((k * 7) % 5 - 2), 2e-8 + 1e-9 * k, 0);
    }
    if (cases[i].relative > 0)
        by_hand_shared(h, cases[i].relative, 0, KEL_DIM_PER_KELVIN);
    if (cases[i].absolute > 0)
        by_hand_shared(h, 0, cases[i].absolute, KEL_DIM_PER_KELVIN);
}

/* Solves a x = b, a destroyed, by elimination with pivoting; n x n by rows. */
static void
eliminate(quad *a, quad *b, size_t n, size_t columns)
{
    for (size_t i = 0; i < n; i++) {
        size_t p = i;
        for (size_t k = i + 1; k < n; k++)
            if (fabsq(a[k * n + i]) > fabsq(a[p * n + i]))
                p = k;
        for (size_t j = 0; j < n; j++) {
            quad t = a[i * n + j];
            a[i * n + j] = a[p * n + j];
            a[p * n + j] = t;
        }
        for (size_t j = 0; j < columns; j++) {
            quad t = b[i * columns + j];
            b[i * columns + j] = b[p * columns + j];
            b[p * columns + j] = t;
        }
        for (size_t k = 0; k < n; k++) {
            quad f = k == i ? 0 : a[k * n + i] / a[i * n + i];
            for (size_t j = 0; j < n && f != 0; j++)
                a[k * n + j] -= f * a[i * n + j];
            for (size_t j = 0; j < columns && f != 0; j++)
                b[k * columns + j] -= f * b[i * columns + j];
        }
    }
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < columns; j++)
            b[i * columns + j] /= a[i * n + i];
}

START_TEST(modes_match_direct_formulas)
{
    by_hand hand;
    make_table(&hand, _i);
    const kel_table *tables[] = { &hand.table };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    const int degrees[] = { cases[_i].degree, cases[_i].degree }, none = KEL_CONTINUITY_NONE;
    options.joins = &cases[_i].join;
    options.join_count = cases[_i].join > 0;
    options.continuity = &none;
    options.continuity_count = 1;
    kel_arena *memory = kel_arena_new();
    kel__problem p;
    kel__solution s;
    ck_assert_int_eq(kel__problem_make(&p, memory, tables, 1, &options, NULL), KEL_OK);
    ck_assert_int_eq(kel__solve(&s, &p, memory, degrees, NULL), KEL_OK);
    double *modes;
    size_t scatter;
    ck_assert_int_eq(kel__modes(&modes, &scatter, &p, &s, memory, NULL), KEL_OK);

    /* Weighted augmented system in quad. */
    size_t q = p.shared_count, k = s.layout.curve, n = k + q;
    static quad a[(ROWS + 4) * MOST], normal[MOST * MOST], h[MOST * (ROWS + 4)];
    memset(a, 0, sizeof a);
    for (size_t i = 0; i < ROWS; i++) {
        double row[MOST] = { 0 }, value = 0;
        kel__add_value(row, &s.layout, p.rows[i].seen->to, 0, 1);
        for (size_t j = 0; j < k; j++)
            value += row[j] * s.x[j];
        for (size_t j = 0; j < k; j++)
            a[i * n + j] = row[j] / (quad)p.rows[i].seen->u_absolute;
        for (size_t j = 0; j < q; j++)
            a[i * n + k + j] = kel__shared_size(&p, j, &p.rows[i], value) / (quad)p.rows[i].seen->u_absolute;
    }
    for (size_t j = 0; j < q; j++)
        a[(ROWS + j) * n + k + j] = 1;
    size_t height = ROWS + q;
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++) {
            normal[i * n + j] = 0;
            for (size_t r = 0; r < height; r++)
                normal[i * n + j] += a[r * n + i] * a[r * n + j];
        }
    for (size_t i = 0; i < n; i++)
        for (size_t r = 0; r < ROWS; r++)
            h[i * ROWS + r] = a[r * n + i];
    eliminate(normal, h, n, ROWS); /* rows of h: unknowns; columns: response to each weighted row */

    for (size_t i = 0; i < k; i++)
        for (size_t j = 0; j < k; j++) {
            quad want = 0, got = 0, size_i = 0, size_j = 0;
            for (size_t r = 0; r < ROWS; r++) {
                want += h[i * ROWS + r] * h[j * ROWS + r];
                size_i += h[i * ROWS + r] * h[i * ROWS + r];
                size_j += h[j * ROWS + r] * h[j * ROWS + r];
            }
            for (size_t m = 0; m < scatter; m++)
                got += (quad)modes[m * k + i] * modes[m * k + j];
            double scale = (double)sqrtq(size_i * size_j);
            ck_assert_abs_for(cases[_i].label, (double)got / scale, (double)want / scale, 1e-9, "of the standard deviations");
        }
    for (size_t m = 0; m < q; m++) {
        double largest = 0;
        for (size_t i = 0; i < k; i++)
            largest = fmax(largest, fabs(modes[(scatter + m) * k + i]));
        for (size_t i = 0; i < k; i++) {
            quad want = 0;
            for (size_t r = 0; r < ROWS; r++)
                want += h[i * ROWS + r] * a[r * n + k + m];
            ck_assert_abs_for(cases[_i].label, modes[(scatter + m) * k + i] / largest, (double)want / largest, 1e-9, "of the largest coefficient");
        }
    }
    kel_arena_free(memory);
}
END_TEST

static TCase *
kinds(void)
{
    TCase *c = tcase_create("kinds");
    tcase_add_loop_test(c, modes_match_direct_formulas, 0, KEL_LENGTH(cases));
    return c;
}

KEL_TEST_MAIN("modes", kinds)
