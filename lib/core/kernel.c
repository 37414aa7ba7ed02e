/* SPDX-License-Identifier: Apache-2.0 */
/* Which curves the kernels answer, in which form, and how accurately.

   Method. On a piece with polynomial sum_j p_j x^j, x = T - c, c the middle of the piece as a double, the integral
   over A..B is, with a = A - c, b = B - c,

       (B - A) sum_j q_j S_j,   q_j = p_j/(j + 1),   S_j = b^j + a b^(j-1) + ... + a^j = b^j + a S_(j-1)

   because (b^(j+1) - a^(j+1))/(b - a) = S_j. Nothing is subtracted, so that the width's relative accuracy is kept down
   to the shortest interval, and with a = b the sum is the value. The rows S_j serve the mean curve and all modes.
   Several pieces: A and B are clamped to each piece, and the shares are added; a piece without a share adds 0.

   Error bound, u = 2^-53, |x| <= X on the piece. a and b are rounded once: relative u each. With E_j u X^j the error
   of S_j (|S_j| <= (j + 1) X^j): b^j has 2j - 1; a S_(j-1) has j for a, j for the product and E_(j-1); the sum j + 1.
   So E_1 = 4, E_j = E_(j-1) + 5j, which is at most 5/2 j (j + 1). q_j carries 2 (one of p_j, worked out in twice the
   precision, one of the quotient), its product 1, and then it goes through n - j + 1 additions. Together

       |error of the mean over the interval| <= u sum_j |p_j| X^j (3/2 j + n + 5) + u (3 + N) sum |c_k|

   n the degree, c_k the Chebyshev coefficients, whose sum bounds the mean; 3 for the width, its product and the
   division of a mean coefficient; N additions of pieces and steps. (Fused products only take roundings away.) A curve
   is answered by the kernels where this is at most 1e-13 sum |c_k| on each of its pieces; a hundredth is kept for
   second-order terms. The worst, T_n alone, has 0.7e-13 at n = 5, so that up to there all are, but few of degree 10.

   Modes are not asked: their bound is that of T_12, sum_j |p_j| X^j (...) u = 0.65e-10, and a standard uncertainty
   needs no more. Outside the pieces sum_j |p_j| |x|^j for T_n is |T_n(i y)|, y = |x|/X, which grows more slowly than
   T_n(y): the bound of T_12 holds there too, for the terms' sizes at the far end. */
#include "kernel.h"
#include "curve.h"

#include <float.h>
#include <math.h>

static const double largest_error = 1e-13, second_order = 1.01;

/* Far from overflow: the sum of squares of modes at KEL__KERNEL_LARGEST is below the square of this times their
   number. */
static const double largest_size = 1e100;

const kel__kernel_code *const kel__kernel_codes[] = {
#if defined __x86_64__ && defined __GNUC__
    &kel__kernel_avx2,
    &kel__kernel_sse2,
#endif
    &kel__kernel_plain,
    NULL,
};

/* Cheap properties. Pieces of a normal width, for which no power of x overflows or vanishes. */
static bool
fits(const kel_content *content)
{
    if (content->coefficient_count > KEL__KERNEL_NUMBERS ||
        content->transition_count > KEL__KERNEL_NUMBERS - content->coefficient_count)
        return false;
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel_piece *p = &content->pieces[i];
        if (p->count > KEL__KERNEL_COUNT || p->to > KEL__KERNEL_LARGEST || (p->count > 1 && p->to - p->from < 1e-3))
            return false;
    }
    return true;
}

static double
middle(const kel_piece *p)
{
    return p->from + 0.5 * (p->to - p->from);
}

/* The bound above over sum |c_k|. */
static double
relative_error(const double *power, const double *c, const kel_piece *p, size_t additions)
{
    const double X = fmax(middle(p) - p->from, p->to - middle(p)), n = (double)(p->count - 1);
    double sum = 0.0, size = 0.0, x = 1.0;
    for (size_t j = 0; j < p->count; j++, x *= X) {
        sum += fabs(power[j]) * x * (1.5 * (double)j + n + 5.0);
        size += fabs(c[j]);
    }
    sum += (3.0 + (double)additions) * size;
    return size > 0.0 ? second_order * 0.5 * DBL_EPSILON * sum / size : 0.0;
}

/* A curve's numbers. False where one is too large, or the mean curve's error. */
static bool
curve_numbers(double *numbers, const kel_content *content, const kel_curve *curve, bool accurate)
{
    const size_t additions = content->piece_count + content->transition_count;
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel_piece *p = &content->pieces[i];
        const double *c = curve->coefficients + p->first;
        double power[KEL_COEFFICIENTS_MAX], size = 0.0, x = 2.0 * KEL__KERNEL_LARGEST;
        kel__piece_powers(power, p, c, middle(p), 1.0);
        for (size_t j = 0; j < p->count; j++, x *= KEL__KERNEL_LARGEST) {
            numbers[p->first + j] = power[j] / (double)(j + 1);
            size += fabs(power[j]) * x;
        }
        /* Negated, so that a NaN is too large. */
        if (!(size <= largest_size) || (accurate && !(relative_error(power, c, p, additions) <= largest_error)))
            return false;
    }
    for (size_t i = 0; i < content->transition_count; i++) {
        numbers[content->coefficient_count + i] = curve->steps[i];
        if (!(fabs(curve->steps[i]) <= largest_size))
            return false;
    }
    return true;
}

static void
make_pieces(kel__kernel_piece *pieces, const kel_content *content)
{
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel_piece *p = &content->pieces[i];
        pieces[i] = (kel__kernel_piece){ i == 0 ? -HUGE_VAL : p->from, i + 1 == content->piece_count ? HUGE_VAL : p->to,
                                         middle(p), p->first, p->count };
    }
}

kel_status
kel__kernel_make(const kel__kernel **out, const kel_content *content, kel_arena *memory, kel_error *err)
{
    *out = NULL;
    if (!fits(content))
        return KEL_OK;
    const size_t stride = content->coefficient_count + content->transition_count, curves = 1 + content->mode_count;
    kel__kernel *kernel = kel_arena_take(memory, 1, sizeof *kernel);
    kel__kernel_piece *pieces = kel_arena_take(memory, content->piece_count, sizeof *pieces);
    double *numbers = kel_arena_take(memory, curves, stride * sizeof *numbers);
    if (kernel == NULL || pieces == NULL || numbers == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a record");
    for (size_t k = 0; k < curves; k++) {
        const kel_curve *curve = k == 0 ? &content->mean : &content->modes[k - 1].curve;
        if (!curve_numbers(numbers + k * stride, content, curve, k == 0))
            return KEL_OK;
    }
    make_pieces(pieces, content);
    const kel__kernel_code *const *code = kel__kernel_codes;
    while (!(*code)->runs())
        code++;
    *kernel = (kel__kernel){ *code, content, pieces, numbers, stride, curves };
    *out = kernel;
    return KEL_OK;
}
