/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The reduced problem: a small matrix that stands for all rows, conditions of continuity, rank, solution. All LAPACK
   calls are here.

   1. Columns are scaled to length 1: x = D y.
   2. The conditions C x = 0 are removed: QR with column pivoting of (C D)' gives its rank and an orthonormal basis N of
   the null space, so that
      x = Z z with Z = D N (Golub and Van Loan, Matrix Computations, 6.2.2, 5.5).
   3. [R Z | shared columns | right-hand side] is factored once more; the singular values of its curve part, columns
   scaled, decide rank and
      condition. A rank that is not full is an error that names the piece: nothing is ever dropped.
   Sizes and finiteness are checked before each call, for LAPACK prints on a bad argument. Workspace is our own: the
   LAPACKE functions that take it themselves print when memory runs out. */
#include "problem.h"
#include "number_text.h"

#include <assert.h>
#include <lapacke.h>
#include <string.h>

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in the reduced least-squares problem");
}

/* Workspace that serves every routine here: at least their minimum (5 (rows + columns) for dgesvd), and blocks of 32.
   */
typedef struct workspace { double *at; lapack_int size; } workspace;

static workspace
take_workspace(kel_arena *memory, size_t rows, size_t columns)
{
    size_t size = 64 * (rows + columns) + 64;
    return (workspace){ kel_arena_take(memory, size, sizeof(double)), (lapack_int)size };
}

static kel_status
lapack_failed(const char *routine, lapack_int info, kel_error *err)
{
    return kel_error_set(err, KEL_E_CONVERGENCE, 0, 0, "%s failed with %d on the reduced problem", routine, (int)info);
}

static double
norm(const double *a, size_t n)
{
    double largest = 0, sum = 0;
    for (size_t i = 0; i < n; i++)
        largest = fmax(largest, fabs(a[i]));
    for (size_t i = 0; i < n && largest > 0; i++)
        sum += (a[i] / largest) * (a[i] / largest);
    return largest * sqrt(sum);
}

static bool
all_finite(const double *a, size_t n)
{
    for (size_t i = 0; i < n; i++)
        if (!isfinite(a[i]))
            return false;
    return true;
}

/* Singular values of a (destroyed) with its columns scaled to length 1; vt, if not NULL, gets the right vectors by rows
   of a column-major matrix. */
static kel_status
singular_values(double *values, double *vt, double *a, size_t rows, size_t columns, kel_arena *memory, kel_error *err)
{
    for (size_t j = 0; j < columns; j++) {
        double length = norm(a + j * rows, rows);
        for (size_t i = 0; i < rows && length > 0; i++)
            a[j * rows + i] /= length;
    }
    workspace work = take_workspace(memory, rows, columns);
    if (work.at == NULL)
        return no_memory(err);
    lapack_int info = LAPACKE_dgesvd_work(LAPACK_COL_MAJOR, 'N', vt != NULL ? 'A' : 'N', (lapack_int)rows,
                                          (lapack_int)columns, a, (lapack_int)rows, values, NULL, 1, vt,
                                          vt != NULL ? (lapack_int)columns : 1, work.at, work.size);
    return info == 0 ? KEL_OK : lapack_failed("dgesvd", info, err);
}

static int
count_rank(const double *values, size_t columns, size_t rows)
{
    double limit = 16 * KEL__EPS * (double)(rows > columns ? rows : columns) * values[0];
    int rank = 0;
    while ((size_t)rank < columns && values[rank] > limit)
        rank++;
    return rank;
}

/* N: orthonormal basis of the null space of C D, curve x *free by columns. */
static kel_status
null_space(double **out, size_t *free_count, const kel__layout *l, const double *scale, kel_arena *memory,
           kel_error *err)
{
    size_t n = l->curve, m = l->condition_count, k = m < n ? m : n;
    double *q = kel_arena_take(memory, n * (n > m ? n : m), sizeof *q), *tau = kel_arena_take(memory, k, sizeof *tau);
    lapack_int *pivot = kel_arena_take(memory, m, sizeof *pivot);
    if (q == NULL || tau == NULL || pivot == NULL)
        return no_memory(err);
    *out = q;
    *free_count = n;
    if (m == 0) {
        for (size_t i = 0; i < n; i++)
            q[i * n + i] = 1;
        return KEL_OK;
    }
    for (size_t j = 0; j < m; j++) {
        double *column = q + j * n;
        for (size_t i = 0; i < l->coefficients; i++)
            column[i] = l->conditions[j * l->coefficients + i] * scale[i];
        double length = norm(column, n);
        for (size_t i = 0; i < n && length > 0; i++)
            column[i] /= length;
    }
    workspace work = take_workspace(memory, n, m);
    if (work.at == NULL)
        return no_memory(err);
    lapack_int info = LAPACKE_dgeqp3_work(LAPACK_COL_MAJOR, (lapack_int)n, (lapack_int)m, q, (lapack_int)n, pivot, tau,
                                          work.at, work.size);
    if (info != 0)
        return lapack_failed("dgeqp3", info, err);
    size_t rank = 0;
    while (rank < k && fabs(q[rank * n + rank]) > 16 * KEL__EPS * (double)n * fabs(q[0]) && q[0] != 0)
        rank++;
    info = LAPACKE_dorgqr_work(LAPACK_COL_MAJOR, (lapack_int)n, (lapack_int)n, (lapack_int)rank, q, (lapack_int)n, tau,
                               work.at, work.size);
    if (info != 0)
        return lapack_failed("dorgqr", info, err);
    *out = q + rank * n;
    *free_count = n - rank;
    return KEL_OK;
}

/* The piece that the weakest direction of the parameters moves most. */
static kel_status
report_rank(const kel__solution *s, const double *direction, kel_error *err)
{
    const kel__layout *l = &s->layout;
    size_t worst = 0;
    double most = -1;
    for (size_t i = 0; i < l->piece_count; i++)
        for (size_t j = 0; j < l->pieces[i].count; j++) {
            double move = 0;
            for (size_t k = 0; k < s->parameters; k++)
                move += s->basis[k * l->curve + l->pieces[i].first + j] * direction[k];
            if (fabs(move) > most) {
                most = fabs(move);
                worst = i;
            }
        }
    char from[KEL_NUMBER_SIZE], to[KEL_NUMBER_SIZE];
    kel__temperature_name(from, l->pieces[worst].from);
    kel__temperature_name(to, l->pieces[worst].to);
    return kel_error_set(
        err, KEL_E_RANK, 0, 0,
        "the rows determine only %d of %zu parameters: between %s K and %s K they do not carry degree %zu", s->rank,
        s->parameters, from, to, l->pieces[worst].count - 1);
}

static kel_status
decide_rank(kel__solution *s, const double *m, size_t height, kel_arena *memory, kel_error *err)
{
    size_t k = s->parameters, small = height < k ? height : k;
    double *a = kel_arena_copy(memory, m, height * k, sizeof *a);
    double *values = kel_arena_take(memory, k + 1, sizeof *values), *vt = kel_arena_take(memory, k * k, sizeof *vt);
    double *direction = kel_arena_take(memory, k, sizeof *direction),
           *lengths = kel_arena_take(memory, k, sizeof *lengths);
    if (a == NULL || values == NULL || vt == NULL || direction == NULL || lengths == NULL)
        return no_memory(err);
    for (size_t j = 0; j < k; j++)
        lengths[j] = norm(m + j * height, height);
    kel_status status = singular_values(values, vt, a, height, k, memory, err);
    if (status < 0)
        return status;
    s->rank = count_rank(values, small, height);
    s->condition = values[small - 1] > 0 ? values[0] / values[small - 1] : (double)INFINITY;
    if ((size_t)s->rank == k)
        return KEL_OK;
    for (size_t j = 0; j < k; j++)
        direction[j] = vt[j * k + k - 1] / (lengths[j] > 0 ? lengths[j] : 1);
    return report_rank(s, direction, err);
}

static kel_status
check_pieces(kel__solution *s, const double *r, size_t height, kel_arena *memory, kel_error *err)
{
    const kel__layout *l = &s->layout;
    s->every_piece = true;
    for (size_t i = 0; i < l->piece_count && l->piece_count > 1; i++) {
        size_t count = l->pieces[i].count;
        double *a = kel_arena_copy(memory, r + l->pieces[i].first * height, height * count, sizeof *a);
        double *values = kel_arena_take(memory, count + 1, sizeof *values);
        if (a == NULL || values == NULL)
            return no_memory(err);
        kel_status status = singular_values(values, NULL, a, height, count, memory, err);
        if (status < 0)
            return status;
        s->every_piece &= height >= count && (size_t)count_rank(values, count, height) == count;
    }
    return KEL_OK;
}

/* M = [R D N | shared columns | right-hand side], height x (parameters + shared + 1). */
static void
project(double *m, const kel__solution *s, const double *r, size_t height)
{
    const kel__layout *l = &s->layout;
    for (size_t k = 0; k < s->parameters; k++)
        for (size_t j = 0; j < l->curve; j++) {
            double z = s->basis[k * l->curve + j];
            for (size_t i = 0; i < height && z != 0; i++)
                m[k * height + i] += z * r[j * height + i];
        }
    memcpy(m + s->parameters * height, r + l->curve * height, (l->unknowns + 1 - l->curve) * height * sizeof *m);
}

static void
back_substitute(kel__solution *s, const double *m, size_t height)
{
    const kel__layout *l = &s->layout;
    size_t n = s->parameters + l->unknowns - l->curve;
    double *z = s->triangle + n * n; /* room for one more column */
    memcpy(z, m + n * height, n * sizeof *z);
    kel__solve_upper(z, s->triangle, n, n);
    for (size_t k = 0; k < s->parameters; k++)
        for (size_t j = 0; j < l->curve; j++)
            s->x[j] += s->basis[k * l->curve + j] * z[k];
    memcpy(s->x + l->curve, z + s->parameters, (l->unknowns - l->curve) * sizeof *z);
}

kel_status
kel__reduce(kel__solution *solution, kel_arena *memory, const double *r, size_t height, kel_error *err)
{
    kel__solution *s = solution;
    const kel__layout *l = &s->layout;
    if (!all_finite(r, height * (l->unknowns + 1)))
        return kel_error_set(err, KEL_E_RANGE, 0, 0, "numbers beyond the range of a double arise in the fit");
    double *scale = kel_arena_take(memory, l->curve, sizeof *scale);
    if (scale == NULL)
        return no_memory(err);
    for (size_t j = 0; j < l->curve; j++) {
        double length = norm(r + j * height, height);
        scale[j] = length > 0 ? 1 / length : 1;
    }
    kel_status status = null_space(&s->basis, &s->parameters, l, scale, memory, err);
    if (status < 0 || (status = check_pieces(s, r, height, memory, err)) < 0)
        return status;
    for (size_t k = 0; k < s->parameters; k++)
        for (size_t j = 0; j < l->curve; j++)
            s->basis[k * l->curve + j] *= scale[j];

    size_t n = s->parameters + l->unknowns - l->curve;
    assert(height > n);
    double *m = kel_arena_take(memory, height * (n + 1), sizeof *m), *tau = kel_arena_take(memory, n + 1, sizeof *tau);
    s->triangle = kel_arena_take(memory, n * (n + 1), sizeof *s->triangle);
    s->x = kel_arena_take(memory, l->unknowns, sizeof *s->x);
    if (m == NULL || tau == NULL || s->triangle == NULL || s->x == NULL)
        return no_memory(err);
    project(m, s, r, height);
    if ((status = decide_rank(s, m, height, memory, err)) < 0)
        return status;
    workspace work = take_workspace(memory, height, n + 1);
    if (work.at == NULL)
        return no_memory(err);
    lapack_int info = LAPACKE_dgeqrf_work(LAPACK_COL_MAJOR, (lapack_int)height, (lapack_int)(n + 1), m,
                                          (lapack_int)height, tau, work.at, work.size);
    if (info != 0)
        return lapack_failed("dgeqrf", info, err);
    for (size_t j = 0; j < n; j++)
        memcpy(s->triangle + j * n, m + j * height, (j + 1) * sizeof *m);
    s->residual = fabs(m[n * height + n]);
    back_substitute(s, m, height);
    return KEL_OK;
}

kel_status
kel__condition(double *condition, int *rank, const double *triangle, size_t stride, size_t n, kel_arena *memory,
               kel_error *err)
{
    double *a = kel_arena_take(memory, n * n, sizeof *a), *values = kel_arena_take(memory, n, sizeof *values);
    if (a == NULL || values == NULL)
        return no_memory(err);
    for (size_t j = 0; j < n; j++)
        memcpy(a + j * n, triangle + j * stride, (j + 1) * sizeof *a);
    if (!all_finite(a, n * n))
        return kel_error_set(err, KEL_E_RANGE, 0, 0, "numbers beyond the range of a double arise in the fit");
    kel_status status = singular_values(values, NULL, a, n, n, memory, err);
    if (status < 0)
        return status;
    *rank = count_rank(values, n, n);
    *condition = values[n - 1] > 0 ? values[0] / values[n - 1] : (double)INFINITY;
    return KEL_OK;
}

void
kel__solve_transposed(double *b, const double *triangle, size_t n)
{
    for (size_t i = 0; i < n; i++) {
        for (size_t j = 0; j < i; j++)
            b[i] -= triangle[i * n + j] * b[j];
        b[i] /= triangle[i * n + i];
    }
}

void
kel__solve_upper(double *b, const double *triangle, size_t stride, size_t n)
{
    for (size_t i = n; i-- > 0;) {
        b[i] /= triangle[i * stride + i];
        for (size_t j = 0; j < i; j++)
            b[j] -= triangle[i * stride + j] * b[i];
    }
}

kel_status
kel__eigen(double *values, double *symmetric, size_t n, kel_arena *memory, kel_error *err)
{
    workspace work = take_workspace(memory, n, n);
    if (work.at == NULL)
        return no_memory(err);
    lapack_int info = LAPACKE_dsyev_work(LAPACK_COL_MAJOR, 'V', 'U', (lapack_int)n, symmetric, (lapack_int)n, values,
                                         work.at, work.size);
    return info == 0 ? KEL_OK : lapack_failed("dsyev", info, err);
}

kel_status
kel__lower_factor(double *out, double *a, size_t rows, size_t columns, kel_arena *memory, kel_error *err)
{
    double *tau = kel_arena_take(memory, rows, sizeof *tau);
    workspace work = take_workspace(memory, rows, columns);
    if (tau == NULL || work.at == NULL)
        return no_memory(err);
    lapack_int info = LAPACKE_dgelqf_work(LAPACK_COL_MAJOR, (lapack_int)rows, (lapack_int)columns, a, (lapack_int)rows,
                                          tau, work.at, work.size);
    if (info != 0)
        return lapack_failed("dgelqf", info, err);
    for (size_t j = 0; j < rows; j++)
        for (size_t i = 0; i < rows; i++)
            out[j * rows + i] = i >= j ? a[j * rows + i] : 0;
    return KEL_OK;
}
