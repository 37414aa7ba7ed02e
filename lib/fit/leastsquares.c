/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Polynomial least squares on plain arrays, by the triangular factor of the fits: Chebyshev rows in t = (x - c)/h on
   -1..1, weighted; then powers of x.

   Without constant term the basis is s x T_n(t), which spans x, x^2, ... and has no differences of large numbers where
   0 lies far from the x. Two ways lead to the solution (kel__ls_solved):

       refine.c    rows in pairs of doubles, refined to what a double can show; needs 16 bytes a number of the design
       plain, here R of [A | y] alone, in constant memory: T = R^-1, z = Q'y, loses about condition times 1e-16

   Behind them stands the same: V = P T with P the map from Chebyshev coefficients to powers; powers V z, covariance
   W W' with W = V U^-1 (U the inner factor, the unit matrix in the plain way). P and V are worked in pairs, for both
   sum large numbers to small ones; each result is rounded once. */
#include "problem.h"
#include "refine.h"

#include <string.h>

enum { BLOCK = 512 };

/* map[j * n + k]: coefficient of x^j in T_k; without constant of x^(j + 1) in s x T_k.
   T_(n+1) = 2 t T_n - T_(n-1) with t = (x - middle)/half, polynomial arithmetic on powers of x. */
static void
powers_map(kel__twofold *map, const kel__ls_frame *f)
{
    size_t n = f->count;
    memset(map, 0, n * n * sizeof *map);
    map[0] = kel__two(f->constant ? 1 : f->x_scale);
    for (size_t k = 1; k < n; k++)
        for (size_t j = 0; j <= k; j++) {
            kel__twofold value = kel__two_mul_one(map[j * n + k - 1], -f->middle);
            if (j > 0)
                value = kel__two_add(value, map[(j - 1) * n + k - 1]);
            value = kel__two_div(value, kel__two(k == 1 ? f->half : f->half / 2));
            map[j * n + k] = k == 1 ? value : kel__two_sub(value, map[j * n + k - 2]);
        }
}

/* ---- the plain way ---- */

static void
plain_row(double *row, const kel__ls_frame *f, const kel__ls_data *d, size_t i)
{
    double t = ((d->x[i] - f->middle) + (d->x_lo != NULL ? d->x_lo[i] : 0)) / f->half, before = 1, now = t;
    double first = f->constant ? 1 : f->x_scale * d->x[i];
    row[0] = first;
    for (size_t k = 1; k < f->count; k++) {
        row[k] = first * now;
        double next = 2 * t * now - before;
        before = now;
        now = next;
    }
}

/* Residuals are taken anew at each point: more accurate than the factor's last entry. Sums of sums, so that their error
   does not grow with n. */
static void
plain_sums(kel__ls_solved *s, const kel__ls_frame *f, const kel__ls_data *d, const double *c, double *row)
{
    double shift = f->constant ? kel__ls_y(d, 0).hi : 0;
    kel__twofold rss = { 0, 0 }, w_sum = { 0, 0 }, sum = { 0, 0 }, squares = { 0, 0 };
    for (size_t start = 0; start < d->n; start += BLOCK) {
        size_t end = d->n - start < BLOCK ? d->n : start + BLOCK;
        double part[4] = { 0, 0, 0, 0 };
        for (size_t i = start; i < end; i++) {
            double w = d->u != NULL ? d->u_scale / d->u[i] : 1;
            kel__twofold y = kel__ls_y(d, i);
            double residual = y.hi, v = w * ((y.hi - shift) + y.lo);
            plain_row(row, f, d, i);
            for (size_t k = 0; k < f->count; k++)
                residual -= c[k] * row[k];
            residual = w * (residual + y.lo);
            part[0] += residual * residual;
            part[1] += w * w;
            part[2] += w * v;
            part[3] += v * v;
        }
        rss = kel__two_add(rss, kel__two(part[0]));
        w_sum = kel__two_add(w_sum, kel__two(part[1]));
        sum = kel__two_add(sum, kel__two(part[2]));
        squares = kel__two_add(squares, kel__two(part[3]));
    }
    s->rss = rss;
    s->total = f->constant ? kel__two_sub(squares, kel__two_div(kel__two_mul(sum, sum), w_sum)) : squares;
}

static kel_status
plain(kel__ls_solved *s, const kel__ls_frame *f, const kel__ls_data *d, kel_arena *memory, kel_error *err)
{
    size_t p = f->count;
    kel__factor factor;
    double *row = kel_arena_take(memory, p + 1, sizeof *row), *c = kel_arena_take(memory, p, sizeof *c);
    s->inverse = kel_arena_take(memory, p * p, sizeof *s->inverse);
    s->inner = kel_arena_take(memory, p * p, sizeof *s->inner);
    s->z = kel_arena_take(memory, p, sizeof *s->z);
    kel_status status = kel__factor_new(&factor, memory, p + 1, err);
    if (status < 0 || row == NULL || c == NULL || s->inverse == NULL || s->inner == NULL || s->z == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a polynomial fit");
    for (size_t i = 0; i < d->n; i++) {
        plain_row(row, f, d, i);
        row[p] = kel__ls_y(d, i).hi;
        kel__factor_add(&factor, row, d->u != NULL ? d->u_scale / d->u[i] : 1);
    }
    kel__factor_flush(&factor);
    status = kel__condition(&s->condition, &s->rank, factor.r, p + 1, p, memory, err);
    if (status < 0 || (size_t)s->rank < p)
        return status;
    kel__triangle_inverse(s->inverse, factor.r, p + 1, p);
    memcpy(c, factor.r + p * (p + 1), p * sizeof *c);
    for (size_t k = 0; k < p; k++) {
        s->inner[k * p + k] = 1;
        s->z[k] = kel__two(c[k]);
    }
    kel__solve_upper(c, factor.r, p + 1, p);
    plain_sums(s, f, d, c, row);
    return KEL_OK;
}

/* ---- data in, results out ---- */

static kel_status
check_data(const kel__ls_data *d, int degree, bool constant, kel_error *err)
{
    if (d->x == NULL || d->y == NULL || degree < (constant ? 0 : 1) || degree > KEL_DEGREE_MAX)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "polynomial fit: x, y and a degree from %d to %d are needed",
                             constant ? 0 : 1, KEL_DEGREE_MAX);
    for (size_t i = 0; i < d->n; i++)
        if (!isfinite(d->x[i]) || !isfinite(d->y[i]) || (d->x_lo != NULL && !isfinite(d->x_lo[i]))
            || (d->y_lo != NULL && !isfinite(d->y_lo[i])) || (d->u != NULL && !(d->u[i] > 0 && isfinite(d->u[i]))))
            return kel_error_set(err, KEL_E_ARGUMENT, i, 0,
                                 "polynomial fit: point %zu is not finite or has an uncertainty that is not positive",
                                 i);
    size_t parameters = (size_t)degree + constant;
    if (d->n < parameters)
        return kel_error_set(err, KEL_E_RANK, 0, 0, "polynomial fit: %zu points for %zu coefficients", d->n,
                             parameters);
    return KEL_OK;
}

/* 2^-e with x = m 2^e, 1 <= m < 2; kept so far from the ends of the range that it can be divided by. */
static double
scale_of(double x)
{
    return x > 0 ? ldexp(1, (int)fmax(-1000, fmin(1000, -ilogb(x)))) : 1;
}

static kel__ls_frame
prepare(kel__ls_data *d, size_t parameters, bool constant)
{
    double lo = d->x[0], hi = d->x[0], y = 0, u = (double)INFINITY;
    for (size_t i = 0; i < d->n; i++) {
        lo = fmin(lo, d->x[i]);
        hi = fmax(hi, d->x[i]);
        y = fmax(y, fabs(d->y[i]));
        u = d->u != NULL ? fmin(u, d->u[i]) : 1;
    }
    d->y_scale = scale_of(y);
    d->u_scale = 1 / scale_of(u);
    double middle = lo + (hi - lo) / 2, half = hi > lo ? (hi - lo) / 2 : 1;
    return (kel__ls_frame){ parameters, constant, middle, half, scale_of(fmax(-lo, hi)) };
}

/* Length of a, also where its square is beyond a double. */
static double
length(const double *a, size_t n)
{
    double most = 0, sum = 0;
    for (size_t i = 0; i < n; i++)
        most = fmax(most, fabs(a[i]));
    double scale = scale_of(most);
    for (size_t i = 0; i < n; i++)
        sum += (scale * a[i]) * (scale * a[i]);
    return sqrt(sum) / scale;
}

/* V = P T row by row, its sums with z, then W (n x n, by rows) and its products. The covariance goes with size^2. */
static void
powers(kel_ls_result *r, const kel__ls_solved *s, size_t n, const kel__twofold *map, double size, double y_scale,
       double *w)
{
    for (size_t j = 0; j < n; j++) {
        kel__twofold power = { 0, 0 };
        double *row = w + j * n;
        for (size_t k = 0; k < n; k++) {
            kel__twofold v = { 0, 0 };
            for (size_t i = j; i <= k; i++)
                kel__two_gather_one(&v, map[j * n + i], s->inverse[k * n + i]);
            v = kel__two_gathered(v);
            kel__two_gather(&power, v, s->z[k]);
            row[k] = v.hi;
        }
        r->coefficient[j] = (power.hi + power.lo) / y_scale;
        kel__solve_transposed(row, s->inner, n);
        if (r->standard_deviation != NULL)
            r->standard_deviation[j] = size * length(row, n);
    }
    for (size_t j = 0; j < n && r->covariance != NULL; j++)
        for (size_t l = 0; l <= j; l++) {
            double c = 0;
            for (size_t k = 0; k < n; k++)
                c += (size * w[j * n + k]) * (size * w[l * n + k]);
            r->covariance[j * n + l] = r->covariance[l * n + j] = c;
        }
}

static void
statistics(kel_ls_result *r, const kel__ls_solved *s, const kel__ls_data *d, size_t parameters)
{
    double unit = d->y_scale * d->u_scale, rss = s->rss.hi;
    r->degrees_of_freedom = d->n - parameters;
    r->residual_sum_of_squares = rss / unit / unit;
    r->residual_standard_deviation =
        r->degrees_of_freedom > 0 ? sqrt(rss / (double)r->degrees_of_freedom) / unit : (double)NAN;
    r->r_squared = s->total.hi > 0 ? kel__two_sub(kel__two(1), kel__two_div(s->rss, s->total)).hi : (double)NAN;
    r->chi2 = d->u != NULL ? r->residual_sum_of_squares : (double)NAN;
    r->condition = s->condition;
}

kel_status
kel_ls_polynomial_pairs(kel_ls_result *result, const double *x, const double *x_lo, const double *y, const double *y_lo,
                        const double *u, size_t n, int degree, bool constant, bool scale, kel_error *err)
{
    kel__ls_data d = { .x = x, .x_lo = x_lo, .y = y, .y_lo = y_lo, .u = u, .n = n };
    kel_status status = check_data(&d, degree, constant, err);
    if (status < 0)
        return status;
    if (result == NULL || result->coefficient == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "polynomial fit: no place for the coefficients");
    size_t p = (size_t)degree + constant;
    kel__ls_frame f = prepare(&d, p, constant);
    kel__ls_solved s = { .rank = 0 };
    kel_arena *memory = kel_arena_new();
    kel__twofold *map = memory != NULL ? kel_arena_take(memory, p * p, sizeof *map) : NULL;
    double *w = memory != NULL ? kel_arena_take(memory, p * p, sizeof *w) : NULL;
    bool refined = kel__ls_fits(n, p);
    if (map == NULL || w == NULL)
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a polynomial fit");
    else
        status = refined ? kel__ls_refine(&s, &f, &d, memory, err) : plain(&s, &f, &d, memory, err);
    if (status == KEL_OK && (size_t)s.rank < p)
        status = kel_error_set(err, KEL_E_RANK, 0, 0, "polynomial fit: the x determine only %d of %zu coefficients",
                               s.rank, p);
    if (status == KEL_OK) {
        powers_map(map, &f);
        statistics(result, &s, &d, p);
        result->refined = refined;
        bool scaled = u == NULL || scale;
        powers(result, &s, p, map, d.u_scale * (scaled ? result->residual_standard_deviation : 1), d.y_scale, w);
    }
    kel_arena_free(memory);
    return status;
}

kel_status
kel_ls_polynomial(kel_ls_result *result, const double *x, const double *y, const double *u, size_t n, int degree,
                  bool constant, bool scale, kel_error *err)
{
    return kel_ls_polynomial_pairs(result, x, NULL, y, NULL, u, n, degree, constant, scale, err);
}
