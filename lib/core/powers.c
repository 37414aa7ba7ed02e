/* SPDX-License-Identifier: Apache-2.0 */
/* A piece's Chebyshev series as powers of t = (T - centre)/scale.

   With x = A + B t, A = (2 centre - from - to)/(to - from), B = 2 scale/(to - from), Clenshaw's sum is run on
   polynomials in t instead of numbers:

       b_j(t) = c_j + 2 (A + B t) b_(j+1)(t) - b_(j+2)(t),   p(t) = c_0 + (A + B t) b_1(t) - b_2(t)

   The powers of a piece far from t = 0 are huge and cancel, so that all of it is done in double-double: a number is hi
   + lo, with the exact error of each sum (D. E. Knuth, TAOCP 2, 4.2.2, theorem B) and of each product (by fma). That
   carries 106 bits; the last step rounds each coefficient once. Each is within 8 eps of the largest |c_j times the
   coefficient of t^k in T_j(A + B t)|. How well such powers give the value back in double precision is another matter:
   with large |A| badly, which is why a record holds Chebyshev series. */
#include "curve.h"

#include <math.h>

typedef struct pair { double hi, lo; } pair;

/* a + b exactly, for any a and b. */
static pair
two_sum(double a, double b)
{
    double s = a + b, t = s - a;
    return (pair){ s, (a - (s - t)) + (b - t) };
}

/* The same for |a| >= |b|, which brings a pair back to its normal form. */
static pair
normal(double a, double b)
{
    double s = a + b;
    return (pair){ s, b - (s - a) };
}

static pair
add(pair a, pair b)
{
    pair s = two_sum(a.hi, b.hi), t = two_sum(a.lo, b.lo);
    s = normal(s.hi, s.lo + t.hi);
    return normal(s.hi, s.lo + t.lo);
}

static pair
negative(pair a)
{
    return (pair){ -a.hi, -a.lo };
}

static pair
multiply(pair a, pair b)
{
    double p = a.hi * b.hi, e = fma(a.hi, b.hi, -p);
    return normal(p, e + (a.hi * b.lo + a.lo * b.hi));
}

/* Long division: three quotients, each of the remainder that the ones before leave. */
static pair
divide(pair a, pair b)
{
    double q1 = a.hi / b.hi;
    pair r = add(a, negative(multiply((pair){ q1, 0.0 }, b)));
    double q2 = r.hi / b.hi;
    r = add(r, negative(multiply((pair){ q2, 0.0 }, b)));
    return add(normal(q1, q2), (pair){ r.hi / b.hi, 0.0 });
}

static pair
twice(pair a)
{
    return (pair){ 2.0 * a.hi, 2.0 * a.lo };
}

/* out(t) = c + (A + B t) b(t) - d(t); b has n coefficients, d at most as many and zeros behind them, out n + 1. */
static void
step(pair *out, double c, pair A, pair B, const pair *b, const pair *d, size_t n)
{
    for (size_t k = 0; k <= n; k++) {
        pair sum = negative(d[k]);
        if (k < n)
            sum = add(sum, multiply(A, b[k]));
        if (k > 0)
            sum = add(sum, multiply(B, b[k - 1]));
        out[k] = k == 0 ? add(sum, (pair){ c, 0.0 }) : sum;
    }
}

/* power[k], k < count, from the Chebyshev coefficients c. */
static void
powers_of(double *power, const double *c, size_t count, pair A, pair B)
{
    const pair zero = { 0.0, 0.0 };
    /* Three polynomials take turns as b_(j), b_(j+1) and b_(j+2); the two places more stay zero. */
    pair room[3][KEL_COEFFICIENTS_MAX + 2];
    for (size_t i = 0; i < 3; i++)
        for (size_t k = 0; k < KEL_COEFFICIENTS_MAX + 2; k++)
            room[i][k] = zero;
    pair *next = room[0], *after = room[1], *now = room[2];
    size_t n = 0;
    for (size_t j = count - 1; j > 0; j--) {
        step(now, c[j], twice(A), twice(B), next, after, n);
        n++;
        pair *spare = after;
        after = next;
        next = now;
        now = spare;
    }
    step(now, c[0], A, B, next, after, n);
    for (size_t k = 0; k < count; k++)
        power[k] = now[k].hi;
}

void
kel__piece_powers(double *power, const kel_piece *p, const double *c, double centre, double scale)
{
    pair A = { 0.0, 0.0 }, B = { 0.0, 0.0 };
    if (p->from < p->to) {
        /* 2 centre - from - to as two differences, each exact, and exact factors of 2. */
        pair width = two_sum(p->to, -p->from);
        A = divide(add(two_sum(centre, -p->from), two_sum(centre, -p->to)), width);
        B = divide((pair){ 2.0 * scale, 0.0 }, width);
    }
    powers_of(power, c, p->count, A, B);
}

kel_status
kel_record_powers(double *coefficient, double *u, const kel_record *record, size_t piece, double centre, double scale,
                  kel_error *err)
{
    double one[KEL_COEFFICIENTS_MAX];
    if (coefficient == NULL || record == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "%s",
                             record == NULL ? "no record was given" : "there is no place for the powers");
    const kel_content *content = &record->content;
    if (piece >= content->piece_count)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "there is no piece %zu: the record has %zu", piece,
                             content->piece_count);
    if (!isfinite(centre) || !isfinite(scale) || scale == 0.0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "centre and scale must be finite, and scale not 0");

    const kel_piece *p = &content->pieces[piece];
    kel__piece_powers(coefficient, p, content->mean.coefficients + p->first, centre, scale);
    bool finite = true;
    for (size_t k = 0; k < p->count; k++) {
        finite = finite && isfinite(coefficient[k]);
        if (u != NULL)
            u[k] = content->mode_count == 0 ? (double)NAN : 0.0;
    }
    for (size_t m = 0; u != NULL && m < content->mode_count; m++) {
        kel__piece_powers(one, p, content->modes[m].curve.coefficients + p->first, centre, scale);
        for (size_t k = 0; k < p->count; k++)
            u[k] = hypot(u[k], one[k]);
    }
    for (size_t k = 0; u != NULL && content->mode_count != 0 && k < p->count; k++)
        finite = finite && isfinite(u[k]);
    if (finite)
        return KEL_OK;
    for (size_t k = 0; k < p->count; k++) {
        coefficient[k] = NAN;
        if (u != NULL)
            u[k] = NAN;
    }
    return kel_error_set(err, KEL_E_RANGE, 0, 0,
                         "the powers of piece %zu are beyond the range of a double: choose another centre and scale",
                         piece);
}
