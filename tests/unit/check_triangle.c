/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The growing triangular factor: R'R = A'A whatever the number of rows and however they fall into blocks. */
#include "unit.h"
#include "problem.h"

#include <string.h>

enum { COLUMNS = 7, MOST_ROWS = 3000 };

static double
pseudo(unsigned *state)
{
    *state = *state * 1664525u + 1013904223u;
    return (double)(*state >> 8) / (1 << 24) - 0.5;
}

static void
make_rows(double *a, size_t n, double scale)
{
    unsigned state = 20261201;
    for (size_t i = 0; i < n * COLUMNS; i++)
        a[i] = scale * pseudo(&state);
}

static const struct { size_t rows; double scale; } sizes[] = {
    { 1, 1 }, { 6, 1 }, { 7, 1 }, { 511, 1 }, { 512, 1 }, { 513, 1 }, { 1024, 1e-8 }, { 3000, 1e6 },
};

/* |R'R - A'A| <= c n eps |a||b| with c of order 1 for Householder updates (Golub and Van Loan 5.2.1); 8 is allowed. */
START_TEST(products_agree)
{
    static double a[MOST_ROWS * COLUMNS];
    size_t n = sizes[_i].rows;
    make_rows(a, n, sizes[_i].scale);
    kel_arena *memory = kel_arena_new();
    kel__factor f;
    ck_assert_int_eq(kel__factor_new(&f, memory, COLUMNS, NULL), KEL_OK);
    for (size_t i = 0; i < n; i++)
        kel__factor_add(&f, a + i * COLUMNS, 1);
    kel__factor_flush(&f);
    for (size_t j = 0; j < COLUMNS; j++)
        for (size_t k = 0; k < COLUMNS; k++) {
            long double want = 0, got = 0, size_j = 0, size_k = 0;
            for (size_t i = 0; i < n; i++) {
                want += (long double)a[i * COLUMNS + j] * a[i * COLUMNS + k];
                size_j += (long double)a[i * COLUMNS + j] * a[i * COLUMNS + j];
                size_k += (long double)a[i * COLUMNS + k] * a[i * COLUMNS + k];
            }
            for (size_t i = 0; i <= (j < k ? j : k); i++)
                got += (long double)f.r[j * COLUMNS + i] * f.r[k * COLUMNS + i];
            double limit = 8 * COLUMNS * KEL__EPS * (double)sqrtl(size_j * size_k) * (1 + (double)n / 512);
            ck_assert_abs((double)got, (double)want, limit, "product");
        }
    kel_arena_free(memory);
}
END_TEST

START_TEST(weights_scale_rows)
{
    double row[COLUMNS] = { 1, 2, 3, 4, 5, 6, 7 };
    kel_arena *memory = kel_arena_new();
    kel__factor f;
    ck_assert_int_eq(kel__factor_new(&f, memory, COLUMNS, NULL), KEL_OK);
    kel__factor_add(&f, row, 3);
    kel__factor_flush(&f);
    ck_assert_double_eq(fabs(f.r[0]), 3);
    ck_assert_double_eq(fabs(f.r[6 * COLUMNS]), 21);
    kel__factor_clear(&f);
    for (size_t i = 0; i < COLUMNS * COLUMNS; i++)
        ck_assert_double_eq(f.r[i], 0);
    kel_arena_free(memory);
}
END_TEST

static TCase *
by_size(void)
{
    TCase *c = tcase_create("sizes");
    tcase_add_loop_test(c, products_agree, 0, KEL_LENGTH(sizes));
    return c;
}

KEL_TCASE(single, weights_scale_rows)
KEL_TEST_MAIN("triangle", by_size, single)
