/* SPDX-License-Identifier: Apache-2.0 */
/* Integral of a piecewise Chebyshev curve over an interval, with the steps that it crosses.

   Each piece is integrated over its share a..b of the interval as (b - a) times the mean of the polynomial there, and
   the mean is taken directly, by a Gauss-Legendre rule that is exact for the piece's degree. No antiderivatives are
   subtracted, so that an interval of 1 mK is as accurate as one of 1000 K: within (2n + 4) eps (b - a) sum |c_k|, n the
   degree. As for values, a row is made first, the means of the T_j, and serves the mean curve and all modes. (A Taylor
   series about the midpoint needs fewer operations, but over an interval that fills its piece its terms grow to n^2k
   and cancel.)

   The nodes are formed as distances from the piece's ends: with half-width h = (b - a)/(to - from) and node g, the
   distance from the right end is 2 (to - b)/(to - from) + h (1 - g), a sum of positive numbers, and so is that from the
   left end. The smaller of the two enters the recurrence of curve.c, and the sign of odd T_j follows from which end it
   was. Where an interval leaves the pieces it is cut at their end, so that this holds on either side. */
#include "curve.h"

#include <assert.h>
#include <math.h>

void
kel__row_average(double *row, const kel_piece *piece, double a, double b)
{
    row[0] = 1.0;
    if (piece->count == 1)
        return;
    const kel__gauss_rule *rule = kel__gauss(piece->count);
    const size_t n = rule->nodes;
    double width = piece->to - piece->from, h = (b - a) / width;
    double right = 2.0 * (piece->to - b) / width, left = 2.0 * (a - piece->from) / width;
    /* even[i] is the weight of node i for even j, odd[i] that for odd j. */
    double even[KEL__NODES_MAX], odd[KEL__NODES_MAX];
    double s[KEL__NODES_MAX], value[KEL__NODES_MAX], difference[KEL__NODES_MAX];
    for (size_t i = 0; i < n; i++) {
        bool mirrored = i >= (n + 1) / 2;
        const double *node = rule->half[mirrored ? n - 1 - i : i];
        double q = mirrored ? 2.0 - node[0] : node[0];
        double from_right = right + h * q, from_left = left + h * (2.0 - q);
        bool nearer_right = from_right <= from_left;
        s[i] = nearer_right ? from_right : from_left;
        even[i] = node[1];
        odd[i] = nearer_right ? node[1] : -node[1];
        value[i] = 1.0 - s[i];
        difference[i] = -s[i];
    }
    for (size_t j = 1; j < piece->count; j++) {
        const double *weight = j % 2 == 1 ? odd : even;
        double sum = 0.0;
        for (size_t i = 0; i < n; i++)
            sum += weight[i] * value[i];
        row[j] = sum;
        for (size_t i = 0; i < n; i++) {
            difference[i] -= 2.0 * s[i] * value[i];
            value[i] += difference[i];
        }
    }
}

/* Adds the integrals over a..b of one piece's polynomial, which may go on outside the piece. */
static void
add_share(double *sum, const kel_piece *piece, const kel_mode *modes, size_t n, double a, double b, double weight)
{
    double row[KEL_COEFFICIENTS_MAX];
    if (!(a < b))
        return;
    assert(piece->count >= 1 && piece->count <= KEL_COEFFICIENTS_MAX && (piece->count == 1 || piece->from < piece->to));
    kel__row_average(row, piece, a, b);
    for (size_t k = 0; k < n; k++)
        sum[k] += weight * ((b - a) * kel__row_apply(row, modes[k].curve.coefficients + piece->first, piece->count));
}

/* The interval is always walked upwards, so that from..to and to..from differ in nothing but the sign. */
void
kel__modes_integral(double *sum, const kel_content *content, const kel_mode *modes, size_t n, double from, double to,
                    double weight)
{
    assert(isfinite(from) && isfinite(to) && content->piece_count > 0);
    const double lo = fmin(from, to), hi = fmax(from, to);
    const kel_piece *first = &content->pieces[0], *last = &content->pieces[content->piece_count - 1];
    if (to < from)
        weight = -weight;

    add_share(sum, first, modes, n, lo, fmin(hi, first->from), weight);
    for (size_t i = kel__piece_find(content, lo); i < content->piece_count && content->pieces[i].from < hi; i++) {
        const kel_piece *piece = &content->pieces[i];
        add_share(sum, piece, modes, n, fmax(lo, piece->from), fmin(hi, piece->to), weight);
    }
    add_share(sum, last, modes, n, fmax(lo, last->to), hi, weight);

    for (size_t i = 0; i < content->transition_count; i++)
        if (lo < content->transitions[i].at && content->transitions[i].at <= hi)
            for (size_t k = 0; k < n; k++)
                sum[k] += weight * modes[k].curve.steps[i];
}

double
kel__curve_integral(const kel_content *content, const kel_curve *curve, double from, double to)
{
    const kel_mode one = { .curve = *curve };
    double sum = 0.0;
    kel__modes_integral(&sum, content, &one, 1, from, to, 1.0);
    return sum;
}
