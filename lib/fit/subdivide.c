/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A polynomial of n coefficients on part of its piece: values at the n Chebyshev points of the part, turned into
   coefficients by the discrete orthogonality  c_j = (2/n) sum_k f(x_k) cos(j pi (k + 1/2)/n),  c_0 halved (Mason and
   Handscomb, Chebyshev Polynomials, 4.6). */
#include "subdivide.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static double
clenshaw(const double *c, size_t n, double x)
{
    double b1 = 0, b2 = 0;
    for (size_t j = n; j-- > 1;) {
        double b = c[j] + (2 * x * b1 - b2);
        b2 = b1;
        b1 = b;
    }
    return c[0] + (x * b1 - b2);
}

static int
ascending(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return (x > y) - (x < y);
}

kel_status
kel__subdivide(kel_piece **out, size_t *out_count, size_t **parent, const kel_piece *pieces, size_t count,
               const double *cuts, size_t cut_count, kel_arena *memory, kel_error *err)
{
    double *sorted = kel_arena_copy(memory, cuts, cut_count, sizeof *sorted);
    *out = kel_arena_take(memory, count + cut_count, sizeof **out);
    *parent = kel_arena_take(memory, count + cut_count, sizeof **parent);
    if (sorted == NULL || *out == NULL || *parent == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while cutting pieces");
    qsort(sorted, cut_count, sizeof *sorted, ascending);
    size_t n = 0, first = 0;
    for (size_t i = 0; i < count; i++) {
        double from = pieces[i].from;
        for (size_t k = 0; k <= cut_count; k++) {
            bool last = k == cut_count;
            double to = last ? pieces[i].to : sorted[k];
            if (!last && !(to > from && to < pieces[i].to))
                continue;
            (*parent)[n] = i;
            (*out)[n++] = (kel_piece){ from, to, first, pieces[i].count };
            first += pieces[i].count;
            from = to;
        }
    }
    *out_count = n;
    return KEL_OK;
}

void
kel__carry_over(double *out, const kel_piece *out_pieces, size_t out_count, const size_t *parent,
                const double *coefficients, const kel_piece *pieces)
{
    const double pi = 3.14159265358979323846;
    for (size_t i = 0; i < out_count; i++) {
        const kel_piece *part = &out_pieces[i], *whole = &pieces[parent[i]];
        const double *c = coefficients + whole->first;
        double *d = out + part->first, n = (double)part->count;
        if (part->from == whole->from && part->to == whole->to) {
            memcpy(d, c, part->count * sizeof *d);
            continue;
        }
        memset(d, 0, part->count * sizeof *d);
        for (size_t k = 0; k < part->count; k++) {
            double angle = pi * ((double)k + 0.5) / n, middle = (part->from + part->to) / 2,
                   half = (part->to - part->from) / 2;
            double t = middle + half * cos(angle),
                   x = ((t - whole->from) + (t - whole->to)) / (whole->to - whole->from);
            double value = clenshaw(c, whole->count, x);
            for (size_t j = 0; j < part->count; j++)
                d[j] += (j == 0 ? 1 : 2) / n * value * cos((double)j * angle);
        }
    }
}
