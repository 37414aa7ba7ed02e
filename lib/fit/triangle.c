/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A triangular factor that takes rows as they come: memory does not grow with their number.

   Householder reflections of [R; block] (Golub and Van Loan, Matrix Computations, 5.1 and 5.2.3): for column j the
   vector is (1, b_j/(R_jj - beta)) with beta = -sign(R_jj) |(R_jj, b_j)|; R above stays triangular, the block is
   annihilated. Sums run over four partial sums, which both halves their rounding error and lets the compiler use vector
   registers. */
#include "problem.h"

#include <string.h>

enum { BLOCK = 512 };

kel_status
kel__factor_new(kel__factor *factor, kel_arena *memory, size_t columns, kel_error *err)
{
    *factor = (kel__factor){ .columns = columns };
    factor->r = kel_arena_take(memory, columns * columns, sizeof *factor->r);
    factor->block = kel_arena_take(memory, columns * BLOCK, sizeof *factor->block);
    if (factor->r == NULL || factor->block == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a factor of %zu columns", columns);
    return KEL_OK;
}

void
kel__factor_clear(kel__factor *factor)
{
    memset(factor->r, 0, factor->columns * factor->columns * sizeof *factor->r);
    factor->filled = 0;
}

static double
dot(const double *a, const double *b, size_t n)
{
    double s[4] = { 0, 0, 0, 0 };
    size_t i = 0;
    for (; i + 4 <= n; i += 4)
        for (size_t k = 0; k < 4; k++)
            s[k] += a[i + k] * b[i + k];
    for (; i < n; i++)
        s[0] += a[i] * b[i];
    return (s[0] + s[1]) + (s[2] + s[3]);
}

void
kel__factor_flush(kel__factor *factor)
{
    size_t p = factor->columns, n = factor->filled;
    for (size_t j = 0; j < p && n > 0; j++) {
        double *b = factor->block + j * BLOCK, *diagonal = &factor->r[j * p + j];
        double square = dot(b, b, n);
        if (square == 0)
            continue;
        double beta = -copysign(sqrt(*diagonal * *diagonal + square), *diagonal);
        double scale = 1 / (*diagonal - beta), tau = (beta - *diagonal) / beta;
        for (size_t i = 0; i < n; i++)
            b[i] *= scale;
        *diagonal = beta;
        for (size_t l = j + 1; l < p; l++) {
            double *c = factor->block + l * BLOCK, *above = &factor->r[l * p + j];
            double s = tau * (*above + dot(b, c, n));
            *above -= s;
            for (size_t i = 0; i < n; i++)
                c[i] -= s * b[i];
        }
    }
    factor->filled = 0;
}

void
kel__factor_add(kel__factor *factor, const double *row, double weight)
{
    double *at = factor->block + factor->filled;
    for (size_t j = 0; j < factor->columns; j++)
        at[j * BLOCK] = weight * row[j];
    if (++factor->filled == BLOCK)
        kel__factor_flush(factor);
}
