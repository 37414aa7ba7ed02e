/* SPDX-License-Identifier: Apache-2.0 */
/* The kernels, written once for vectors of any width. Each kernel_*.c defines the vector type and its operations and
   includes this:

     LANES                       doubles in a vec; a mask goes with it
     KERNEL                      the attribute that lets a function use the instructions
     v_load v_store v_set        from and to memory, one number in all lanes
     v_add v_sub v_mul v_div v_fma v_min v_max v_sqrt
     v_less v_at_most            comparisons, false for NaN
     m_and m_or m_bits           masks; bit l of m_bits is lane l
     v_pick(m, x)                x where m, else 0
     v_signed(x, a, b)           -x where b < a, else x
     put_bytes(p, word)          LANES bytes, the lowest first

   Method and error bound: kernel.c. */
#include "kernel.h"

#include <string.h>

enum { VECTORS = KEL__KERNEL_GROUP / LANES };

#if defined __clang__
#define ALWAYS KERNEL static inline __attribute__((always_inline))
#define UNROLLED _Pragma("unroll")
#elif defined __GNUC__
#define ALWAYS KERNEL static inline __attribute__((always_inline))
#define UNROLLED _Pragma("GCC unroll 16")
#else
#define ALWAYS KERNEL static inline
#define UNROLLED
#endif

/* Several vectors go side by side, so that the latency of a product is not waited for. */
#define SIDE_BY_SIDE UNROLLED for (size_t g = 0; g < VECTORS; g++)

/* ---- flags ---- */

/* Byte l becomes bit l, for up to four lanes. */
static inline unsigned
spread(unsigned bits)
{
    return ((bits & 15u) * 0x00204081u) & 0x01010101u;
}

/* Are x and y both in l..h? v_min and v_max give their second operand where one is NaN, so that a NaN in either comes
   through to a comparison. */
KERNEL static inline mask
within(vec x, vec y, vec l, vec h)
{
    return m_and(v_at_most(l, v_min(x, y)), v_at_most(v_max(y, x), h));
}

/* Bounds compare exactly, as in range.c. */
KERNEL static inline unsigned
flags_of_vector(const kel__kernel *k, kel__task task, vec x, vec y)
{
    const kel_content *c = k->content;
    const unsigned lanes = (1u << LANES) - 1u;
    mask inside = within(x, y, v_set(c->range.lo), v_set(c->range.hi));
    unsigned word = spread(~m_bits(inside) & lanes) * KEL_FLAG_EXTRAPOLATED;
    for (size_t i = 0; i < c->gap_count; i++) {
        vec l = v_set(c->gaps[i].lo), h = v_set(c->gaps[i].hi);
        mask in = m_or(m_and(v_less(l, x), v_less(x, h)), m_and(v_less(l, y), v_less(y, h)));
        word |= spread(m_bits(in)) * KEL_FLAG_GAP;
    }
    for (size_t i = 0; i < c->transition_count; i++) {
        vec at = v_set(c->transitions[i].at);
        mask crossed = m_and(v_less(v_min(x, y), at), v_at_most(at, v_max(x, y)));
        word |= spread(m_bits(crossed)) * KEL_FLAG_TRANSITION;
    }
    unsigned left = ~m_bits(within(x, y, v_set(0.0), v_set(KEL__KERNEL_LARGEST))) & lanes;
    if (task == KEL__TASK_MEAN)
        left |= m_bits(m_and(v_at_most(x, y), v_at_most(y, x)));
    return word | spread(left) * KEL__KERNEL_LEFT;
}

KERNEL static unsigned
flags(unsigned char *out, const kel__kernel *k, kel__task task, const double *from, const double *to, size_t n)
{
    const kel_content *c = k->content;
    const unsigned always = c->mode_count == 0 ? KEL_FLAG_UNKNOWN_U : 0u;
    /* Most groups lie inside the range, which holds no temperature that would have to be left: its pieces end at
       KEL__KERNEL_LARGEST at most. */
    const bool plain = c->gap_count == 0 && c->transition_count == 0;
    const vec l = v_set(c->range.lo), h = v_set(c->range.hi);
    unsigned all = always;
    for (size_t i = 0; i < n; i += KEL__KERNEL_GROUP) {
        if (plain) {
            mask in = v_at_most(l, h);
            SIDE_BY_SIDE {
                vec x = v_load(from + i + g * LANES), y = v_load(to + i + g * LANES);
                in = m_and(in, within(x, y, l, h));
                if (task == KEL__TASK_MEAN)
                    in = m_and(in, v_less(v_min(x, y), v_max(x, y)));
            }
            if (m_bits(in) == (1u << LANES) - 1u) {
                memset(out + i, (int)always, KEL__KERNEL_GROUP);
                continue;
            }
        }
        for (size_t g = 0; g < VECTORS; g++) {
            const size_t at = i + g * LANES;
            unsigned word = flags_of_vector(k, task, v_load(from + at), v_load(to + at)) | spread(~0u) * always;
            put_bytes(out + at, word);
            all |= LANES == 1 ? word & 255u : word | word >> 8 | word >> 16 | word >> 24;
        }
    }
    return all & 255u;
}

/* ---- values ---- */

/* Row 0 of a piece: the width of its share of the interval, or whether it owns the temperature; row j the sum of a^i
   b^(j - i) over i = 0..j. */
KERNEL static inline void
piece_rows(vec (*row)[VECTORS], const kel__kernel_piece *p, bool clamped, bool value, const vec *lo, const vec *hi)
{
    const vec from = v_set(p->from), to = v_set(p->to), centre = v_set(p->centre);
    vec a[VECTORS], b[VECTORS], power[VECTORS];
    SIDE_BY_SIDE {
        a[g] = lo[g], b[g] = hi[g];
        if (value)
            row[0][g] = v_pick(m_and(v_at_most(from, b[g]), v_less(b[g], to)), v_set(1.0));
        if (clamped) {
            a[g] = v_max(v_min(a[g], to), from);
            b[g] = v_max(v_min(b[g], to), from);
        }
        if (!value)
            row[0][g] = v_sub(b[g], a[g]);
        a[g] = v_sub(a[g], centre);
        b[g] = v_sub(b[g], centre);
    }
    if (p->count == 1)
        return;
    SIDE_BY_SIDE {
        row[1][g] = v_add(a[g], b[g]);
        power[g] = v_mul(b[g], b[g]);
    }
    for (size_t j = 2; j < p->count; j++)
        SIDE_BY_SIDE {
            row[j][g] = v_fma(a[g], row[j - 1][g], power[g]);
            power[g] = v_mul(power[g], b[g]);
        }
}

/* The mean curve alone: one piece's share of the integral, or its value where it owns the temperature, without rows in
   memory. `count` is p->count. */
ALWAYS vec
share(const kel__kernel_piece *p, size_t count, const double *q, bool clamped, bool value, vec lo, vec hi)
{
    const vec from = v_set(p->from), to = v_set(p->to), centre = v_set(p->centre);
    vec a = lo, b = hi, sum = v_set(q[0]), weight = v_set(1.0);
    if (value && clamped)
        weight = v_pick(m_and(v_at_most(from, b), v_less(b, to)), weight);
    if (clamped) {
        a = v_max(v_min(a, to), from);
        b = v_max(v_min(b, to), from);
    }
    if (!value)
        weight = v_sub(b, a);
    a = v_sub(a, centre);
    b = v_sub(b, centre);
    if (count > 1) {
        vec row = v_add(a, b), power = v_mul(b, b);
        sum = v_fma(v_set(q[1]), row, sum);
        UNROLLED
        for (size_t j = 2; j < count; j++) {
            row = v_fma(a, row, power);
            power = v_mul(power, b);
            sum = v_fma(v_set(q[j]), row, sum);
        }
    }
    return v_mul(weight, sum);
}

/* One curve's functional from the rows. The operations of mean_curve in the same order, so that a value has the same
   bits whether u is asked for or not. */
KERNEL static inline void
apply(vec *total, const kel__kernel *k, size_t curve, vec (*row)[VECTORS])
{
    const double *numbers = k->numbers + curve * k->stride;
    const kel_content *c = k->content;
    SIDE_BY_SIDE
        total[g] = v_set(0.0);
    for (size_t i = 0; i < c->piece_count; i++) {
        const kel__kernel_piece *p = &k->pieces[i];
        const double *q = numbers + p->first;
        vec sum[VECTORS];
        SIDE_BY_SIDE
            sum[g] = v_set(q[0]);
        for (size_t j = 1; j < p->count; j++) {
            const vec x = v_set(q[j]);
            SIDE_BY_SIDE
                sum[g] = v_fma(x, row[p->first + j][g], sum[g]);
        }
        SIDE_BY_SIDE
            total[g] = v_add(total[g], v_mul(row[p->first][g], sum[g]));
    }
    for (size_t i = c->coefficient_count; i < k->stride; i++)
        SIDE_BY_SIDE
            total[g] = v_add(total[g], v_mul(v_set(numbers[i]), row[i][g]));
}

/* One piece without transitions: the mean is that of the polynomial, without a division by the width. */
static inline bool
is_simple(const kel__kernel *k)
{
    return k->content->piece_count == 1 && k->content->transition_count == 0;
}

/* Such a curve, compiled once for each `count` of the usual degrees. */
ALWAYS void
one_piece(double *value, const kel__kernel *k, kel__task task, const double *from, const double *to, size_t n,
          size_t count)
{
    const kel__kernel_piece *p = k->pieces;
    double q[KEL__KERNEL_COUNT];
    for (size_t j = 0; j < count; j++)
        q[j] = k->numbers[j];
    for (size_t i = 0; i < n; i += LANES) {
        vec y = v_load(to + i), x = task == KEL__TASK_VALUE ? y : v_load(from + i);
        vec lo = v_min(x, y), hi = v_max(x, y), total = share(p, count, q, false, task != KEL__TASK_INTEGRAL, lo, hi);
        total = v_add(v_set(0.0), total); /* no -0 */
        v_store(value + i, task == KEL__TASK_INTEGRAL ? v_signed(total, x, y) : total);
    }
}

KERNEL static void
any_pieces(double *value, const kel__kernel *k, kel__task task, const double *from, const double *to, size_t n)
{
    const kel_content *c = k->content;
    const bool coefficient = task == KEL__TASK_VALUE, average = coefficient || (task == KEL__TASK_MEAN && is_simple(k));
    for (size_t i = 0; i < n; i += LANES) {
        vec y = v_load(to + i), x = coefficient ? y : v_load(from + i), lo = v_min(x, y), hi = v_max(x, y);
        vec total = v_set(0.0);
        for (size_t j = 0; j < c->piece_count; j++) {
            const kel__kernel_piece *p = &k->pieces[j];
            total = v_add(total, share(p, p->count, k->numbers + p->first, true, average, lo, hi));
        }
        for (size_t t = 0; t < c->transition_count; t++) {
            const vec at = v_set(c->transitions[t].at), step = v_set(k->numbers[c->coefficient_count + t]);
            total = v_add(total, v_pick(m_and(v_less(lo, at), v_at_most(at, hi)), step));
        }
        if (task == KEL__TASK_MEAN && !average)
            total = v_div(total, v_sub(hi, lo));
        else if (task == KEL__TASK_INTEGRAL)
            total = v_signed(total, x, y);
        v_store(value + i, total);
    }
}

KERNEL static void
mean_curve(double *value, const kel__kernel *k, kel__task task, const double *from, const double *to, size_t n)
{
    switch (is_simple(k) ? k->pieces[0].count : 0) {
    case 2: one_piece(value, k, task, from, to, n, 2); break;
    case 3: one_piece(value, k, task, from, to, n, 3); break;
    case 4: one_piece(value, k, task, from, to, n, 4); break;
    case 5: one_piece(value, k, task, from, to, n, 5); break;
    case 6: one_piece(value, k, task, from, to, n, 6); break;
    case 7: one_piece(value, k, task, from, to, n, 7); break;
    case 8: one_piece(value, k, task, from, to, n, 8); break;
    case 9: one_piece(value, k, task, from, to, n, 9); break;
    default: any_pieces(value, k, task, from, to, n);
    }
}

KERNEL static void
values(double *value, double *u, const kel__kernel *k, kel__task task, const double *from, const double *to, size_t n)
{
    const kel_content *c = k->content;
    const bool average = task == KEL__TASK_VALUE || (task == KEL__TASK_MEAN && is_simple(k));
    if (u == NULL) {
        mean_curve(value, k, task, from, to, n);
        return;
    }
    vec row[KEL__KERNEL_NUMBERS][VECTORS];
    for (size_t i = 0; i < n; i += KEL__KERNEL_GROUP) {
        vec x[VECTORS], y[VECTORS], lo[VECTORS], hi[VECTORS], total[VECTORS], squares[VECTORS];
        SIDE_BY_SIDE {
            y[g] = v_load(to + i + g * LANES);
            x[g] = task == KEL__TASK_VALUE ? y[g] : v_load(from + i + g * LANES);
            lo[g] = v_min(x[g], y[g]);
            hi[g] = v_max(x[g], y[g]);
            squares[g] = v_set(0.0);
        }
        for (size_t p = 0; p < c->piece_count; p++)
            piece_rows(row + k->pieces[p].first, &k->pieces[p], c->piece_count > 1, average, lo, hi);
        for (size_t t = 0; t < c->transition_count; t++) {
            const vec at = v_set(c->transitions[t].at);
            SIDE_BY_SIDE
                row[c->coefficient_count + t][g] = v_pick(m_and(v_less(lo[g], at), v_at_most(at, hi[g])), v_set(1.0));
        }
        for (size_t m = 0; m < k->curve_count; m++) {
            apply(total, k, m, row);
            if (m > 0)
                SIDE_BY_SIDE
                    squares[g] = v_fma(total[g], total[g], squares[g]);
            else
                SIDE_BY_SIDE {
                    if (task == KEL__TASK_MEAN && !average)
                        total[g] = v_div(total[g], v_sub(hi[g], lo[g]));
                    else if (task == KEL__TASK_INTEGRAL)
                        total[g] = v_signed(total[g], x[g], y[g]);
                    v_store(value + i + g * LANES, total[g]);
                }
        }
        if (u != NULL)
            SIDE_BY_SIDE {
                vec root = v_sqrt(squares[g]);
                if (task == KEL__TASK_MEAN && !average)
                    root = v_div(root, v_sub(hi[g], lo[g]));
                v_store(u + i + g * LANES, root);
            }
    }
}
