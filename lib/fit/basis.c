/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows of functionals over the curve's unknowns: the value of alpha at a temperature, and its integral between two.

   On a piece alpha = sum_n c_n T_n(x), x = (2T - from - to)/(to - from). The integral over the part [a, b] of a piece
   is taken by Gauss-Legendre nodes on [a, b] itself, exact for the degree: sum of w_i T_n(x_i) (b - a)/2. No
   antiderivatives are subtracted, so that a row over 1 mK is as exact as one over 1000 K. */
#include "problem.h"

enum { NODES = (KEL_DEGREE_MAX + 1) / 2 + 1 };

size_t
kel__piece_at(const kel__layout *layout, double t, int side)
{
    size_t lo = 0, hi = layout->piece_count - 1;
    while (lo < hi) {
        size_t middle = (lo + hi) / 2;
        if (kel__above(t, side, layout->pieces[middle].to))
            lo = middle + 1;
        else
            hi = middle;
    }
    return lo;
}

/* row[n] += factor T_n(x) for the piece's coefficients. */
static void
add_chebyshev(double *row, size_t count, double x, double factor)
{
    double before = 1, now = x;
    row[0] += factor;
    for (size_t n = 1; n < count; n++) {
        row[n] += factor * now;
        double next = 2 * x * now - before;
        before = now;
        now = next;
    }
}

static double
local(const kel_piece *piece, double t)
{
    return piece->from == piece->to ? 0 : ((t - piece->from) + (t - piece->to)) / (piece->to - piece->from);
}

void
kel__add_value(double *row, const kel__layout *layout, double t, int side, double factor)
{
    const kel_piece *piece = &layout->pieces[kel__piece_at(layout, t, side)];
    add_chebyshev(row + piece->first, piece->count, local(piece, t), factor);
}

/* a <= b. All nodes climb the recurrence side by side: their sums do not wait for each other. */
static void
add_part(double *row, const kel__layout *l, const kel_piece *piece, double a, double b, double factor)
{
    double half = (b - a) / 2, *c = row + piece->first, x[NODES], before[NODES], now[NODES];
    c[0] += factor * (b - a);
    if (piece->count == 1)
        return;
    for (size_t i = 0; i < l->node_count; i++) {
        x[i] = local(piece, a + half * (1 + l->nodes[i]));
        before[i] = 1;
        now[i] = x[i];
    }
    for (size_t n = 1; n < piece->count; n++) {
        double sum = 0;
        for (size_t i = 0; i < l->node_count; i++) {
            double next = 2 * x[i] * now[i] - before[i];
            sum += l->weights[i] * now[i];
            before[i] = now[i];
            now[i] = next;
        }
        c[n] += factor * half * sum;
    }
}

double
kel__add_integral(double *row, const kel__layout *layout, const kel__problem *problem, double a, int side_a, double b,
                  int side_b, double factor)
{
    double lo = fmin(a, b), hi = fmax(a, b), sign = b >= a ? factor : -factor, stated = 0;
    size_t last = layout->piece_count - 1;
    for (size_t i = 0; i <= last; i++) {
        const kel_piece *piece = &layout->pieces[i];
        double from = i == 0 ? lo : fmax(lo, piece->from), to = i == last ? hi : fmin(hi, piece->to);
        if (from < to)
            add_part(row, layout, piece, from, to, sign);
    }
    for (size_t k = 0; k < problem->transition_count; k++) {
        double at = problem->transitions[k].at;
        double crossed = factor * ((int)kel__above(b, side_b, at) - (int)kel__above(a, side_a, at));
        if (layout->step_unknown[k] != SIZE_MAX)
            row[layout->step_unknown[k]] += crossed;
        else
            stated += crossed * layout->step_length[k];
    }
    return stated;
}
