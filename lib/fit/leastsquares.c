/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Polynomial least squares on plain arrays, by the solver of the fits: Chebyshev rows in t = (x - c)/h on -1..1, a triangular factor, the reduced
   problem; then powers of x by the linear map from Chebyshev coefficients to powers, worked in twice the precision of a double.

   Without constant term the basis is x T_n(t), which spans x, x^2, ... and has no differences of large numbers where 0 lies far from the x. The
   covariance of the powers is P (R'R)^-1 P' with P the same map. What is lost for badly conditioned sets is what one rounding of R costs: about condition times 1e-16. */
#include "problem.h"

#include <string.h>

typedef struct pair { double hi, lo; } pair; /* hi + lo, |lo| <= ulp(hi)/2 */

static pair
two_sum(double a, double b)
{
    double s = a + b, z = s - a;
    return (pair){ s, (a - (s - z)) + (b - z) };
}

static pair
pair_add(pair a, pair b)
{
    pair s = two_sum(a.hi, b.hi);
    s.lo += a.lo + b.lo;
    return two_sum(s.hi, s.lo);
}

static pair
pair_times(pair a, double b)
{
    double p = a.hi * b;
    pair r = { p, fma(a.hi, b, -p) + a.lo * b };
    return two_sum(r.hi, r.lo);
}

static pair
pair_over(pair a, double b)
{
    double q = a.hi / b, rest = fma(-q, b, a.hi) + a.lo;
    return two_sum(q, rest / b);
}

typedef struct frame { size_t n; bool constant; double middle, half; } frame; /* n: unknowns */

/* row[k], k < n: basis function k at x. */
static void
basis_row(double *row, const frame *f, double x)
{
    double t = (x - f->middle) / f->half, before = 1, now = t, first = f->constant ? 1 : x;
    row[0] = first;
    for (size_t n = 1; n < f->n; n++) {
        row[n] = first * now;
        double next = 2 * t * now - before;
        before = now;
        now = next;
    }
}

/* map[j * n + k]: coefficient of x^j in T_k, as pairs; without constant all powers are one higher.
   T_(n+1) = 2 t T_n - T_(n-1) with t = (x - middle)/half, polynomial arithmetic on powers of x. */
static kel_status
powers_map(pair **out, const frame *f, kel_arena *memory, kel_error *err)
{
    size_t m = f->n;
    pair *t = kel_arena_take(memory, m * (m + 1), sizeof *t), *map = kel_arena_take(memory, f->n * f->n, sizeof *map);
    if (t == NULL || map == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a polynomial fit");
    t[0].hi = 1;
    for (size_t n = 1; n < m; n++) {
        const pair *p = t + (n - 1) * m;
        double twice = n == 1 ? 1 : 2;
        for (size_t j = 0; j <= n; j++) {
            pair shifted = j > 0 ? p[j - 1] : (pair){ 0, 0 };
            pair value = pair_over(pair_times(pair_add(shifted, pair_times(p[j], -f->middle)), twice), f->half);
            if (n > 1) {
                pair old = t[(n - 2) * m + j];
                value = pair_add(value, (pair){ -old.hi, -old.lo });
            }
            t[n * m + j] = value;
        }
    }
    for (size_t k = 0; k < f->n; k++)
        for (size_t j = 0; j < f->n; j++)
            map[j * f->n + k] = t[k * m + j];
    *out = map;
    return KEL_OK;
}

static kel_status
check_data(const double *x, const double *y, const double *u, size_t n, int degree, bool constant, kel_error *err)
{
    if (x == NULL || y == NULL || degree < (constant ? 0 : 1) || degree > KEL_DEGREE_MAX)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "polynomial fit: x, y and a degree from %d to %d are needed", constant ? 0 : 1, KEL_DEGREE_MAX);
    for (size_t i = 0; i < n; i++)
        if (!isfinite(x[i]) || !isfinite(y[i]) || (u != NULL && !(u[i] > 0 && isfinite(u[i]))))
            return kel_error_set(err, KEL_E_ARGUMENT, i, 0, "polynomial fit: point %zu is not finite or has an uncertainty that is not positive", i);
    size_t parameters = (size_t)degree + constant;
    if (n < parameters)
        return kel_error_set(err, KEL_E_RANK, 0, 0, "polynomial fit: %zu points for %zu coefficients", n, parameters);
    return KEL_OK;
}

static frame
map_to_unit(const double *x, size_t n, size_t parameters, bool constant)
{
    double lo = x[0], hi = x[0];
    for (size_t i = 1; i < n; i++) {
        lo = fmin(lo, x[i]);
        hi = fmax(hi, x[i]);
    }
    return (frame){ parameters, constant, lo + (hi - lo) / 2, hi > lo ? (hi - lo) / 2 : 1 };
}

/* The solved problem in the basis: kel__reduce sees one piece and no conditions. */
static kel_status
solve(kel__solution *s, const frame *f, const double *x, const double *y, const double *u, size_t n, kel_arena *memory, kel_error *err)
{
    kel_piece *piece = kel_arena_take(memory, 1, sizeof *piece);
    double *row = kel_arena_take(memory, f->n + 1, sizeof *row);
    kel__factor factor;
    kel_status status = kel__factor_new(&factor, memory, f->n + 1, err);
    if (status < 0 || piece == NULL || row == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a polynomial fit");
    for (size_t i = 0; i < n; i++) {
        basis_row(row, f, x[i]);
        row[f->n] = y[i];
        kel__factor_add(&factor, row, u != NULL ? 1 / u[i] : 1);
    }
    kel__factor_flush(&factor);
    *piece = (kel_piece){ f->middle - f->half, f->middle + f->half, 0, f->n };
    *s = (kel__solution){ .layout = { .pieces = piece, .piece_count = 1, .coefficients = f->n, .curve = f->n, .unknowns = f->n } };
    status = kel__reduce(s, memory, factor.r, factor.columns, err);
    if (status == KEL_E_RANK)
        return kel_error_set(err, KEL_E_RANK, 0, 0, "polynomial fit: the x determine only %d of %zu coefficients", s->rank, f->n);
    return status;
}

/* Residuals are taken anew at each point: more accurate than the factor's last entry. */
static void
residuals(kel_ls_result *r, const kel__solution *s, const frame *f, const double *x, const double *y, const double *u, size_t n, double *row)
{
    double rss = 0, sum = 0, sum_w = 0, total = 0;
    for (size_t i = 0; i < n; i++) {
        double w = u != NULL ? 1 / (u[i] * u[i]) : 1;
        sum += w * y[i];
        sum_w += w;
    }
    double mean = f->constant ? sum / sum_w : 0;
    for (size_t i = 0; i < n; i++) {
        double w = u != NULL ? 1 / (u[i] * u[i]) : 1, d = y[i];
        basis_row(row, f, x[i]);
        for (size_t k = 0; k < f->n; k++)
            d -= s->x[k] * row[k];
        rss += w * d * d;
        total += w * (y[i] - mean) * (y[i] - mean);
    }
    r->degrees_of_freedom = n - f->n;
    r->residual_sum_of_squares = rss;
    r->residual_standard_deviation = r->degrees_of_freedom > 0 ? sqrt(rss / (double)r->degrees_of_freedom) : (double)NAN;
    r->r_squared = 1 - rss / total;
    r->chi2 = u != NULL ? rss : (double)NAN;
    r->condition = s->condition;
}

/* factor[j * n + i]: row j of P Z R^-1, whose products of rows are covariances. */
static void
spread(kel_ls_result *r, const kel__solution *s, const frame *f, const pair *map, double scale, double *factor)
{
    size_t n = f->n;
    for (size_t j = 0; j < n; j++) {
        double *row = factor + j * n;
        for (size_t k = 0; k < n; k++) {
            pair sum = { 0, 0 };
            for (size_t i = 0; i < n; i++)
                sum = pair_add(sum, pair_times(map[j * n + i], s->basis[k * n + i]));
            row[k] = sum.hi;
        }
        kel__solve_transposed(row, s->triangle, n);
    }
    for (size_t j = 0; j < n; j++)
        for (size_t l = 0; l < n; l++) {
            double c = 0;
            for (size_t k = 0; k < n; k++)
                c += factor[j * n + k] * factor[l * n + k];
            c *= scale * scale;
            if (r->covariance != NULL)
                r->covariance[j * n + l] = c;
            if (j == l && r->standard_deviation != NULL)
                r->standard_deviation[j] = sqrt(c);
        }
}

kel_status
kel_ls_polynomial(kel_ls_result *result, const double *x, const double *y, const double *u, size_t n, int degree, bool constant, bool scale, kel_error *err)
{
    kel_status status = check_data(x, y, u, n, degree, constant, err);
    if (status < 0)
        return status;
    if (result == NULL || result->coefficient == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "polynomial fit: no place for the coefficients");
    kel_arena *memory = kel_arena_new();
    frame f = map_to_unit(x, n, (size_t)degree + constant, constant);
    kel__solution s;
    pair *map = NULL;
    double *work = memory != NULL ? kel_arena_take(memory, f.n * (f.n + 1), sizeof *work) : NULL;
    if (work == NULL)
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a polynomial fit");
    else if ((status = powers_map(&map, &f, memory, err)) == KEL_OK && (status = solve(&s, &f, x, y, u, n, memory, err)) == KEL_OK) {
        residuals(result, &s, &f, x, y, u, n, work);
        for (size_t j = 0; j < f.n; j++) {
            pair sum = { 0, 0 };
            for (size_t k = 0; k < f.n; k++)
                sum = pair_add(sum, pair_times(map[j * f.n + k], s.x[k]));
            result->coefficient[j] = sum.hi;
        }
        spread(result, &s, &f, map, u == NULL || scale ? result->residual_standard_deviation : 1, work);
    }
    kel_arena_free(memory);
    return status;
}
