/* SPDX-License-Identifier: Apache-2.0 */
/* Value of a piecewise Chebyshev curve at a temperature.

   A linear functional of a piece is a row of numbers, one for each Chebyshev polynomial; the curve's value is the row
   times its coefficients. One row serves the mean curve and all modes, which is why no Clenshaw sum runs over the
   coefficients here.

   The row of values is T_j(x), x = (2T - from - to)/(to - from). Near an end of the piece T_j changes by j^2 dx, and
   neither the rounding of x nor the growth of errors in T_(j+1) = 2 x T_j - T_(j-1) is harmless there. Both are cured
   by counting from the nearer end: with s = 1 - |x|, which is exact to a few units in the last place, and the
   differences D_j = T_j - T_(j-1),

       D_(j+1) = D_j - 2 s T_j,   T_(j+1) = T_j + D_(j+1),   T_j(-x) = (-1)^j T_j(x)

   (C. Reinsch's form of the recurrence, given for the backward sum by J. Oliver, J. Inst. Maths Applics 20 (1977) 379).
   The error of T_j grows like j instead of j^2. First-order bound for a value, over all x: (2n + 4) eps sum |c_k|, n
   the degree.

   Outside the pieces x leaves [-1, 1], s is negative, and the end piece's polynomial continues by the same recurrence.
   */
#include "curve.h"

#include <assert.h>
#include <math.h>

size_t
kel__piece_find(const kel_content *content, double t)
{
    /* Invariant: piece `lo` begins at or below t, or is the first; piece `hi` begins above t, or is none. */
    size_t lo = 0, hi = content->piece_count;
    while (hi - lo > 1) {
        size_t middle = lo + (hi - lo) / 2;
        if (content->pieces[middle].from <= t)
            lo = middle;
        else
            hi = middle;
    }
    return lo;
}

void
kel__row_value(double *row, const kel_piece *piece, double t)
{
    double width = piece->to - piece->from, s = 1.0, sign = 1.0;
    /* A piece of no width is the constant at x = 0. */
    if (width > 0.0) {
        double right = 2.0 * (piece->to - t) / width, left = 2.0 * (t - piece->from) / width;
        sign = right <= left ? 1.0 : -1.0;
        s = right <= left ? right : left;
    }
    row[0] = 1.0;
    double value = 1.0 - s, difference = -s;
    for (size_t j = 1; j < piece->count; j++) {
        row[j] = j % 2 == 1 ? sign * value : value;
        difference -= 2.0 * s * value;
        value += difference;
    }
}

double
kel__row_apply(const double *row, const double *c, size_t count)
{
    double sum = c[0] * row[0];
    for (size_t j = 1; j < count; j++)
        sum += c[j] * row[j];
    return sum;
}

void
kel__modes_value(double *sum, const kel_content *content, const kel_mode *modes, size_t n, double t, double weight)
{
    double row[KEL_COEFFICIENTS_MAX];
    const kel_piece *piece = &content->pieces[kel__piece_find(content, t)];
    assert(isfinite(t) && piece->count >= 1 && piece->count <= KEL_COEFFICIENTS_MAX);
    kel__row_value(row, piece, t);
    for (size_t k = 0; k < n; k++)
        sum[k] += weight * kel__row_apply(row, modes[k].curve.coefficients + piece->first, piece->count);
}

double
kel__curve_value(const kel_content *content, const kel_curve *curve, double t)
{
    const kel_mode one = { .curve = *curve };
    double sum = 0.0;
    kel__modes_value(&sum, content, &one, 1, t, 1.0);
    return sum;
}
