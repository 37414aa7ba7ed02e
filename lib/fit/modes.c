/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Modes of a fit: vectors whose outer products add up to the covariance of the curve's unknowns, split into what they
   stand for.

   With R = [R_cc R_cs; 0 R_ss] of the weighted problem (c: curve, s: shared errors, prior rows included) and C =
   (R'R)^-1, the linear estimator H of the curve gives
       shared error j:          H F_j  = R_cc^-1 R_cs C_ss e_j
       rows' own errors:        H V H' = R_cc^-1 [1 + R_cs (C_ss - C_ss^2) R_cs'] R_cc^-T
   and the two add up to C_cc. C_ss = U diag(d) U' with 0 < d <= 1, for each prior row has size 1, so that the bracket
   is G G' with G = [1, R_cs U sqrt(d - d^2)]: formed without a difference of large numbers. G = L Q leaves as many
   modes as there are parameters. */
#include "problem.h"

#include <string.h>

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the modes of a fit");
}

/* C_ss = R_ss^-1 R_ss^-T, q x q. */
static void
shared_covariance(double *c, double *inverse, const double *triangle, size_t k, size_t q)
{
    size_t n = k + q;
    for (size_t j = 0; j < q; j++) {
        inverse[j * q + j] = 1;
        kel__solve_upper(inverse + j * q, triangle + k * n + k, n, q);
    }
    for (size_t i = 0; i < q; i++)
        for (size_t j = 0; j < q; j++)
            for (size_t l = 0; l < q; l++)
                c[j * q + i] += inverse[l * q + i] * inverse[l * q + j];
}

/* out(k) = R_cs v */
static void
times_shared(double *out, const double *triangle, size_t k, size_t q, const double *v)
{
    size_t n = k + q;
    memset(out, 0, k * sizeof *out);
    for (size_t j = 0; j < q; j++)
        for (size_t i = 0; i < k; i++)
            out[i] += triangle[(k + j) * n + i] * v[j];
}

/* Curve vector Z R_cc^-1 g; g is destroyed. */
static void
to_curve(double *mode, double *g, const kel__solution *s, size_t n)
{
    kel__solve_upper(g, s->triangle, n, s->parameters);
    for (size_t l = 0; l < s->parameters; l++)
        for (size_t i = 0; i < s->layout.curve; i++)
            mode[i] += s->basis[l * s->layout.curve + i] * g[l];
}

kel_status
kel__modes(double **out, size_t *scatter_count, const kel__problem *problem, const kel__solution *solution,
           kel_arena *memory, kel_error *err)
{
    const kel__solution *s = solution;
    size_t k = s->parameters, q = problem->shared_count, n = k + q, curve = s->layout.curve;
    double *modes = kel_arena_take(memory, (k + q) * curve, sizeof *modes),
           *g = kel_arena_take(memory, k * n, sizeof *g);
    double *c = kel_arena_take(memory, q * q, sizeof *c), *vectors = kel_arena_take(memory, q * q, sizeof *vectors);
    double *values = kel_arena_take(memory, q, sizeof *values), *lower = kel_arena_take(memory, k * k, sizeof *lower);
    double *column = kel_arena_take(memory, k, sizeof *column);
    if (modes == NULL || g == NULL || c == NULL || vectors == NULL || values == NULL || lower == NULL || column == NULL)
        return no_memory(err);
    *out = modes;
    *scatter_count = k;

    for (size_t i = 0; i < k; i++)
        g[i * k + i] = 1;
    if (q > 0) {
        shared_covariance(c, vectors, s->triangle, k, q);
        memcpy(vectors, c, q * q * sizeof *c);
        kel_status status = kel__eigen(values, vectors, q, memory, err);
        if (status < 0)
            return status;
        for (size_t j = 0; j < q; j++) {
            double d = fmin(fmax(values[j], 0), 1);
            times_shared(g + (k + j) * k, s->triangle, k, q, vectors + j * q);
            for (size_t i = 0; i < k; i++)
                g[(k + j) * k + i] *= sqrt(d * (1 - d));
        }
    }
    kel_status status = kel__lower_factor(lower, g, k, n, memory, err);
    if (status < 0)
        return status;
    for (size_t j = 0; j < k; j++)
        to_curve(modes + j * curve, lower + j * k, s, n);
    for (size_t j = 0; j < q; j++) {
        times_shared(column, s->triangle, k, q, c + j * q);
        to_curve(modes + (k + j) * curve, column, s, n);
    }
    return KEL_OK;
}
