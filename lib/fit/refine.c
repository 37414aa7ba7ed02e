/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Refined polynomial least squares: coefficients to the last digit of a double where plain ones lose the condition.

   1. Rows of the basis in pairs of doubles (31 digits): the design A, exact for what follows. Their leading parts go
      through the triangular factor of all fits: A ~ Q R with an error of eps |A|.
   2. T = R^-1, in doubles, and B = A T in pairs. T is not taken for the inverse of anything: its numbers, as they
      stand, define a new basis of the same polynomials, and in that basis the design is B. Its columns are orthonormal
      to within c eps condition(A): the condition that the doubles could not carry is now in T, where it does no harm,
      and B is as good as orthonormal as long as condition(A) stays below some 1e15.
   3. min |B z - y| by refinement: r = y - B z and B'r in pairs, then z += (B'B)^-1 B'r with the Cholesky factor U of
      B'B in doubles, which for such a B has no more error than a QR. Each step gains the 15 digits of one double; two
      are usual. This is refinement of the augmented system [I B; B' 0] [r; z] = [y; 0] (A. Bjorck, BIT 7 (1967) 257)
      with r kept as what z leaves of y, so that the first block holds at every step.
   4. Coefficients are T z, taken in pairs; covariances T U^-1 U^-T T', where only U has errors, of its few eps.

   Refining with A itself and its Q gains only -log10(eps condition(A)) digits a step, and leaves the covariance to R,
   which at condition 1e13 holds three digits. Corrected seminormal equations do not converge there at all.

   B is what the memory goes to. Rank is decided by B: the sine of the angle between a column and those before it is 1
   if R stands for A, and rounding noise if A lacks rank; it has to be above 1/2. */
#include "problem.h"
#include "refine.h"

#include <string.h>

enum { STEPS_MAX = 6, GRAM_ROWS = 512 };

/* One problem at work; p = frame->count. */
typedef struct work {
    size_t n, p;
    kel__twofold *b;        /* n rows of p: A, then B */
    kel__twofold *r;        /* n: weighted residuals */
    kel__twofold *z;        /* p */
    double *t, *u;          /* T and U, by columns */
} work;

bool
kel__ls_fits(size_t n, size_t count)
{
    return n <= (size_t)KEL__REFINED_BYTES / sizeof(kel__twofold) / (count + 1);
}

void
kel__triangle_inverse(double *out, const double *triangle, size_t stride, size_t n)
{
    for (size_t k = 0; k < n; k++) {
        double *column = out + k * n;
        memset(column, 0, n * sizeof *column);
        column[k] = 1;
        kel__solve_upper(column, triangle, stride, k + 1);
    }
}

static void
basis_row(kel__twofold *row, const kel__ls_frame *f, kel__twofold x, kel__twofold weight)
{
    kel__twofold t = kel__two_div(kel__two_sub(x, kel__two(f->middle)), kel__two(f->half));
    kel__twofold twice = { 2 * t.hi, 2 * t.lo };
    kel__twofold scaled = { f->x_scale * x.hi, f->x_scale * x.lo };
    row[0] = f->constant ? weight : kel__two_mul(scaled, weight);
    if (f->count > 1)
        row[1] = kel__two_mul(row[0], t);
    for (size_t k = 2; k < f->count; k++)
        row[k] = kel__two_sub(kel__two_mul(twice, row[k - 1]), row[k - 2]);
}

/* A, the weighted values in r, and R of the leading parts (p x p, in the arena). */
static kel_status
build(double **triangle, const work *w, const kel__ls_frame *f, const kel__ls_data *d, kel_arena *memory,
      kel_error *err)
{
    kel__factor factor;
    double *row = kel_arena_take(memory, w->p, sizeof *row);
    kel_status status = kel__factor_new(&factor, memory, w->p, err);
    if (status < 0 || row == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a polynomial fit");
    for (size_t i = 0; i < w->n; i++) {
        kel__twofold weight = kel__ls_weight(d, i), *a = w->b + i * w->p;
        basis_row(a, f, kel__ls_x(d, i), weight);
        w->r[i] = kel__two_mul(kel__ls_y(d, i), weight);
        for (size_t k = 0; k < w->p; k++)
            row[k] = a[k].hi;
        kel__factor_add(&factor, row, 1);
    }
    kel__factor_flush(&factor);
    *triangle = factor.r;
    return KEL_OK;
}

/* B = A T in place: column k of a row needs only those before it. */
static void
change_basis(const work *w)
{
    for (size_t i = 0; i < w->n; i++) {
        kel__twofold *row = w->b + i * w->p;
        for (size_t k = w->p; k-- > 0;) {
            kel__twofold sum = { 0, 0 };
            for (size_t j = 0; j <= k; j++)
                kel__two_gather_one(&sum, row[j], w->t[k * w->p + j]);
            row[k] = kel__two_gathered(sum);
        }
    }
}

/* Upper triangle of B'B, by columns, in u. Sums of sums: the error does not grow with n. */
static void
gram(const work *w, double *part, double *row)
{
    size_t p = w->p;
    memset(w->u, 0, p * p * sizeof *w->u);
    for (size_t start = 0; start < w->n; start += GRAM_ROWS) {
        size_t end = w->n - start < GRAM_ROWS ? w->n : start + GRAM_ROWS;
        memset(part, 0, p * p * sizeof *part);
        for (size_t i = start; i < end; i++) {
            for (size_t k = 0; k < p; k++)
                row[k] = w->b[i * p + k].hi;
            for (size_t k = 0; k < p; k++)
                for (size_t j = 0; j <= k; j++)
                    part[k * p + j] += row[j] * row[k];
        }
        for (size_t k = 0; k < p * p; k++)
            w->u[k] += part[k];
    }
}

/* U'U = B'B in place. False: B lacks rank, so R did not stand for A. */
static bool
cholesky(const work *w)
{
    size_t p = w->p;
    for (size_t k = 0; k < p; k++) {
        double *column = w->u + k * p, length = column[k];
        for (size_t j = 0; j < k; j++) {
            for (size_t l = 0; l < j; l++)
                column[j] -= w->u[j * p + l] * column[l];
            column[j] /= w->u[j * p + j];
            column[k] -= column[j] * column[j];
        }
        if (!(column[k] > length / 4) || !isfinite(column[k]))
            return false;
        column[k] = sqrt(column[k]);
    }
    return true;
}

static double
largest(const kel__twofold *a, size_t n)
{
    double most = 0;
    for (size_t i = 0; i < n; i++)
        most = fmax(most, fabs(a[i].hi));
    return most;
}

/* The first step starts from z = 0 and finds 15 digits at most, for which plain sums do. A step that changes z by less
   than 2^-48 of it leaves an error of a few eps times that: all that pairs hold. Where z all but vanishes beside the
   values, the noise of the pairs is the limit. */
static void
refine(const work *w, kel__twofold *g, double *dz)
{
    size_t p = w->p;
    double noise = ldexp(largest(w->r, w->n), -100);
    for (int step = 0; step < STEPS_MAX; step++) {
        memset(g, 0, p * sizeof *g);
        for (size_t i = 0; i < w->n; i++)
            for (size_t k = 0; k < p; k++)
                if (step == 0)
                    g[k].hi += w->b[i * p + k].hi * w->r[i].hi;
                else
                    kel__two_gather(&g[k], w->b[i * p + k], w->r[i]);
        for (size_t k = 0; k < p; k++)
            dz[k] = g[k].hi + g[k].lo;
        kel__solve_transposed(dz, w->u, p);
        kel__solve_upper(dz, w->u, p, p);
        for (size_t i = 0; i < w->n; i++) {
            kel__twofold sum = w->r[i];
            for (size_t k = 0; k < p; k++)
                kel__two_gather_one(&sum, w->b[i * p + k], -dz[k]);
            w->r[i] = kel__two_gathered(sum);
        }
        double change = 0;
        for (size_t k = 0; k < p; k++) {
            w->z[k] = kel__two_add(w->z[k], kel__two(dz[k]));
            change = fmax(change, fabs(dz[k]));
        }
        if (change <= ldexp(largest(w->z, p), -48) || change <= noise)
            break;
    }
}

/* Residual sum of squares, and that of the values about their mean. Those are taken from the first one, so that equal
   values give 0. */
static void
sums(kel__ls_solved *out, const work *w, const kel__ls_frame *f, const kel__ls_data *d)
{
    kel__twofold rss = { 0, 0 }, w_sum = { 0, 0 }, sum = { 0, 0 }, squares = { 0, 0 };
    kel__twofold shift = f->constant ? kel__ls_y(d, 0) : kel__two(0);
    for (size_t i = 0; i < w->n; i++) {
        kel__twofold weight = kel__ls_weight(d, i), v = kel__two_mul(weight, kel__two_sub(kel__ls_y(d, i), shift));
        kel__two_gather(&rss, w->r[i], w->r[i]);
        kel__two_gather(&w_sum, weight, weight);
        kel__two_gather(&sum, weight, v);
        kel__two_gather(&squares, v, v);
    }
    out->rss = kel__two_gathered(rss);
    sum = kel__two_gathered(sum);
    squares = kel__two_gathered(squares);
    out->total = f->constant ? kel__two_sub(squares, kel__two_div(kel__two_mul(sum, sum), kel__two_gathered(w_sum)))
                             : squares;
}

static kel_status
take(work *w, kel_arena *memory, kel_error *err)
{
    w->b = kel_arena_take(memory, w->n * w->p, sizeof *w->b);
    w->r = kel_arena_take(memory, w->n, sizeof *w->r);
    w->z = kel_arena_take(memory, w->p, sizeof *w->z);
    w->t = kel_arena_take(memory, w->p * w->p, sizeof *w->t);
    w->u = kel_arena_take(memory, w->p * w->p, sizeof *w->u);
    if (w->b == NULL || w->r == NULL || w->z == NULL || w->t == NULL || w->u == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the %zu rows of a polynomial fit", w->n);
    return KEL_OK;
}

kel_status
kel__ls_refine(kel__ls_solved *out, const kel__ls_frame *frame, const kel__ls_data *data, kel_arena *memory,
               kel_error *err)
{
    size_t p = frame->count;
    work w = { .n = data->n, .p = p };
    double *triangle = NULL, *part = kel_arena_take(memory, p * p, sizeof *part);
    double *row = kel_arena_take(memory, p, sizeof *row);
    kel__twofold *g = kel_arena_take(memory, p, sizeof *g);
    if (part == NULL || row == NULL || g == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a polynomial fit");
    kel_status status = take(&w, memory, err);
    if (status < 0 || (status = build(&triangle, &w, frame, data, memory, err)) < 0
        || (status = kel__condition(&out->condition, &out->rank, triangle, p, p, memory, err)) < 0)
        return status;
    if (isfinite(out->condition)) {
        kel__triangle_inverse(w.t, triangle, p, p);
        change_basis(&w);
        gram(&w, part, row);
        if (cholesky(&w))
            out->rank = (int)p;
        else if ((size_t)out->rank == p)
            out->rank--;
    }
    if ((size_t)out->rank < p)
        return KEL_OK;
    refine(&w, g, row);
    out->inverse = w.t;
    out->inner = w.u;
    out->z = w.z;
    sums(out, &w, frame, data);
    return KEL_OK;
}
