/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The unknowns of a fit: pieces with their Chebyshev coefficients, fitted steps, shared errors; and what continuity
   asks of them.

   Continuity of the d-th derivative of alpha at a join, with h the half-widths of the pieces left and right of it:
       sum_n cl_n T_n^(d)(1)/hl^d - sum_n cr_n T_n^(d)(-1)/hr^d = 0,
       T_n^(d)(1) = prod_{k<d} (n^2 - k^2)/(2k + 1),   T_n^(d)(-1) = (-1)^(n+d) T_n^(d)(1)
   (Abramowitz and Stegun 22.2, 22.5). The row is scaled by hl^d, so that its numbers stay near 1. */
#include "problem.h"
#include "number_text.h"

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while laying out a fit");
}

static kel_status
lay_pieces(kel__layout *l, const kel__problem *p, kel_arena *memory, const int *degrees, kel_error *err)
{
    l->piece_count = p->join_count + 1;
    l->pieces = kel_arena_take(memory, l->piece_count, sizeof *l->pieces);
    if (l->pieces == NULL)
        return no_memory(err);
    for (size_t i = 0; i < l->piece_count; i++) {
        kel_piece *piece = &l->pieces[i];
        piece->from = i == 0 ? p->hull.lo : p->joins[i - 1];
        piece->to = i == p->join_count ? p->hull.hi : p->joins[i];
        if (piece->from == piece->to && degrees[i] > 0) {
            char t[KEL_NUMBER_SIZE];
            kel__temperature_name(t, piece->from);
            return kel_error_set(err, KEL_E_RANK, 0, 0,
                                 "all rows are at one temperature, %s K: they carry degree 0, not %d", t, degrees[i]);
        }
        piece->first = l->coefficients;
        piece->count = (size_t)degrees[i] + 1;
        l->coefficients += piece->count;
    }
    return KEL_OK;
}

static kel_status
lay_steps(kel__layout *l, const kel__problem *p, kel_arena *memory, kel_error *err)
{
    l->step_length = kel_arena_take(memory, p->transition_count, sizeof *l->step_length);
    l->step_unknown = kel_arena_take(memory, p->transition_count, sizeof *l->step_unknown);
    if (l->step_length == NULL || l->step_unknown == NULL)
        return no_memory(err);
    for (size_t i = 0; i < p->transition_count; i++) {
        bool fitted = p->transitions[i].step == KEL_STEP_FITTED;
        l->step_unknown[i] = fitted ? l->coefficients + l->steps++ : SIZE_MAX;
        l->step_length[i] = p->transitions[i].step == KEL_STEP_STATED ? p->transitions[i].length : 0;
    }
    l->curve = l->coefficients + l->steps;
    l->unknowns = l->curve + p->shared_count;
    return KEL_OK;
}

static double
derivative_at_one(size_t n, int d)
{
    double x = (double)n, value = 1;
    for (int k = 0; k < d; k++)
        value *= (x * x - k * k) / (2 * k + 1);
    return value;
}

static kel_status
lay_conditions(kel__layout *l, const kel__problem *p, kel_arena *memory, kel_error *err)
{
    for (size_t j = 0; j < p->join_count; j++)
        l->condition_count += (size_t)(p->continuity[j] + 1);
    l->conditions = kel_arena_take(memory, l->condition_count * l->coefficients, sizeof *l->conditions);
    if (l->conditions == NULL)
        return no_memory(err);
    double *row = l->conditions;
    for (size_t j = 0; j < p->join_count; j++)
        for (int d = 0; d <= p->continuity[j]; d++, row += l->coefficients) {
            const kel_piece *left = &l->pieces[j], *right = &l->pieces[j + 1];
            double ratio = pow((left->to - left->from) / (right->to - right->from), d);
            for (size_t n = 0; n < left->count; n++)
                row[left->first + n] = derivative_at_one(n, d);
            for (size_t n = 0; n < right->count; n++)
                row[right->first + n] = ((n + (size_t)d) % 2 == 0 ? -ratio : ratio) * derivative_at_one(n, d);
        }
    return KEL_OK;
}

/* Zeros of the Legendre polynomial P_n, from the lowest, by Newton's method on its recurrence, and the weights
   2/((1 - x^2) P_n'(x)^2) (Abramowitz and Stegun 25.4.29). The start is good enough for a few steps to reach the last
   bit; worked in long double, so that a double is rounded once. No library's table: one that has to be allocated is a
   failure more. */
static void
legendre(double *nodes, double *weights, size_t n)
{
    const long double pi = 3.14159265358979323846264338327950288L;
    for (size_t i = 0; i < (n + 1) / 2; i++) {
        long double x = 2 * i + 1 == n ? 0.0L : cosl(pi * ((long double)i + 0.75L) / ((long double)n + 0.5L));
        long double slope = 0;
        for (int step = 0; step < 8; step++) {
            long double before = 1, p = x;
            for (size_t k = 2; k <= n; k++) {
                long double next = ((long double)(2 * k - 1) * x * p - (long double)(k - 1) * before) / (long double)k;
                before = p;
                p = next;
            }
            slope = (long double)n * (x * p - before) / (x * x - 1);
            if (2 * i + 1 != n)
                x -= p / slope;
        }
        nodes[i] = (double)-x;
        nodes[n - 1 - i] = (double)x;
        weights[i] = weights[n - 1 - i] = (double)(2 / ((1 - x * x) * slope * slope));
    }
}

/* n nodes integrate degree 2n - 1 exactly. */
static kel_status
lay_nodes(kel__layout *l, kel_arena *memory, kel_error *err)
{
    size_t longest = 0;
    for (size_t i = 0; i < l->piece_count; i++)
        longest = l->pieces[i].count > longest ? l->pieces[i].count : longest;
    l->node_count = longest / 2 + 1;
    l->nodes = kel_arena_take(memory, l->node_count, sizeof *l->nodes);
    l->weights = kel_arena_take(memory, l->node_count, sizeof *l->weights);
    if (l->nodes == NULL || l->weights == NULL)
        return no_memory(err);
    legendre(l->nodes, l->weights, l->node_count);
    return KEL_OK;
}

kel_status
kel__layout_make(kel__layout *layout, const kel__problem *problem, kel_arena *memory, const int *degrees,
                 kel_error *err)
{
    *layout = (kel__layout){ 0 };
    kel_status status = lay_pieces(layout, problem, memory, degrees, err);
    if (status == KEL_OK)
        status = lay_steps(layout, problem, memory, err);
    if (status == KEL_OK)
        status = lay_conditions(layout, problem, memory, err);
    if (status == KEL_OK)
        status = lay_nodes(layout, memory, err);
    return status;
}
