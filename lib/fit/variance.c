/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The independent uncertainty of each row: stated, or estimated from the residuals of its column.

   Stated:    u^2 = u0^2 + (r g)^2 + resolution^2/12, g the curve's value at the row; an absolute u0 alone is u as it
   stands, so that a table split in two, or printed in another unit, weighs what it did.
   Estimated: u_i^2 = s^2 w_i^2 + resolution^2/12 with w = 1 for a coefficient or an expansion and 1/|Tb - Ta| for a
   mean, whose error is that of the expansion. s >= 0 solves  sum r_i^2/u_i^2 = n - sum h_i  over the column's rows (r
   net residuals, h leverages, a fixed point over fits); s = 0 if the sum is already smaller there. With equal w it is
   the classic residual variance, floored at the rounding. Columns with less than 2 degrees of freedom n - sum h share
   one factor f of their resolutions (u_i = f resolution, times w_i/median w) from their pooled equation; below 1 pooled
   degree the scatter is not known, and rows count with their rounding alone. */
#include "problem.h"

#include <string.h>

/* Degrees of freedom at these limits are whole numbers off by rounding. Where a column's rule changes the weights so
   that the other rule would hold, there is no fixed point: from this iteration on a column that is pooled stays so, and
   a scatter that is not known. */
static const double ENOUGH = 2 - 1e-9, POOLED_ENOUGH = 1 - 1e-9;
enum { SETTLED = 6 };

kel_status
kel__solution_arrays(kel__solution *solution, const kel__problem *problem, kel_arena *memory, kel_error *err)
{
    double **all[] = { &solution->scatter, &solution->freedom, &solution->leverage, &solution->rss, &solution->unstated_rss,
                       &solution->unstated_floor };
    for (size_t i = 0; i < sizeof all / sizeof all[0]; i++)
        if ((*all[i] = kel_arena_take(memory, problem->column_count, sizeof(double))) == NULL)
            return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a fit");
    for (size_t c = 0; c < problem->column_count; c++)
        solution->scatter[c] = NAN;
    solution->factor = 1;
    return KEL_OK;
}

/* w_i over the column's median w. */
static double
relative_weight(const kel__problem *p, const kel__row *row)
{
    return p->columns[row->column].typical_width / row->width;
}

double
kel__row_u(const kel__problem *problem, const kel__solution *solution, const kel__row *row, double value)
{
    const kel_observation *o = row->seen;
    const kel__column *column = &problem->columns[row->column];
    if (o->u_stated) {
        bool alone = o->u_relative == 0 && o->u_absolute > 0;
        double relative = o->u_relative * value, rounding = alone ? 0 : column->least;
        return sqrt(o->u_absolute * o->u_absolute + relative * relative + rounding * rounding);
    }
    double s = solution->scatter[row->column];
    if (isnan(s))
        return solution->factor * column->least * relative_weight(problem, row);
    return hypot(s / row->width, column->least);
}

/* s of one column by its equation in v = s^2. The reciprocal of the sum S(v) is concave and rises (for equal w it is a
   line), so that Newton's steps on 1/S = 1/freedom from v = 0 approach from below, in a few steps however small the
   floor is. */
static double
solve_scatter(const kel__problem *p, size_t c, const double *residual, double freedom)
{
    double least2 = p->columns[c].least * p->columns[c].least, v = 0;
    for (int step = 0; step < 100; step++) {
        double sum = 0, slope = 0;
        for (size_t i = 0; i < p->row_count; i++) {
            const kel__row *row = &p->rows[i];
            if (row->column != c || row->seen->u_stated)
                continue;
            double w2 = 1 / (row->width * row->width), u2 = v * w2 + least2, r2 = residual[i] * residual[i];
            sum += r2 / u2;
            slope -= r2 * w2 / (u2 * u2);
        }
        if (sum <= freedom || slope == 0)
            break;
        double next = v - (sum - freedom) / slope * (sum / freedom);
        bool done = fabs(next - v) <= 4 * KEL__EPS * next;
        v = next;
        if (done)
            break;
    }
    return sqrt(v);
}

/* The shared factor of columns with few degrees of freedom. */
static void
pool_few(kel__solution *s, const kel__problem *p, const double *freedom, double *scaled)
{
    double sum = 0, pooled = 0;
    bool any = false;
    for (size_t c = 0; c < p->column_count; c++)
        if (p->columns[c].stated < p->columns[c].rows && isnan(s->scatter[c])) {
            sum += scaled[c];
            pooled += freedom[c];
            any = true;
        }
    s->scatter_known = !any || (pooled >= POOLED_ENOUGH && (s->scatter_known || s->iterations < SETTLED));
    s->factor = s->scatter_known && any ? fmax(1, sqrt(sum / pooled)) : 1;
}

void
kel__uniform_scatter(kel__solution *solution, const kel__problem *problem)
{
    const kel__column *column = &problem->columns[0];
    double freedom = (double)problem->row_count - (double)solution->parameters, least2 = column->least * column->least;
    double width = problem->rows[0].width;
    solution->leverage[0] = (double)solution->parameters;
    solution->unstated_rss[0] = solution->rss[0];
    solution->unstated_floor[0] = (double)problem->row_count * least2;
    solution->chi2 = NAN;
    solution->freedom[0] = freedom;
    solution->scatter_known = freedom >= 1;
    solution->scatter[0] = freedom >= 2 ? width * sqrt(fmax(0, solution->rss[0] / freedom - least2)) : (double)NAN;
    solution->factor = freedom >= 1 ? fmax(1, sqrt(solution->rss[0] / freedom / least2)) : 1;
}

/* Everything that is summed over rows at the present solution. */
typedef struct sums {
    double *residual, *freedom, *scaled;
    double log_u;
} sums;

static void
add_row(kel__solution *s, const kel__problem *p, sums *t, size_t i, const kel__row_result *r)
{
    const kel__row *row = &p->rows[i];
    const kel__column *column = &p->columns[row->column];
    double r2 = r->residual * r->residual, u2 = r->u * r->u, weight = relative_weight(p, row),
           least2 = column->least * column->least;
    t->residual[i] = r->residual;
    s->rss[row->column] += r2;
    s->leverage[row->column] += r->leverage;
    if (row->seen->u_stated) {
        s->stated++;
        s->stated_leverage += r->leverage;
        s->chi2 += r2 / u2;
        s->relative_floor += least2 / u2;
        t->log_u += log(r->u);
        return;
    }
    t->freedom[row->column] += 1 - r->leverage;
    t->scaled[row->column] += r2 / (least2 * weight * weight);
    s->unstated_rss[row->column] += r2 / (weight * weight);
    s->unstated_floor[row->column] += least2 / (weight * weight);
}

static void
clear(kel__solution *s, const kel__problem *p)
{
    for (size_t c = 0; c < p->column_count; c++)
        s->rss[c] = s->leverage[c] = s->unstated_rss[c] = s->unstated_floor[c] = 0;
    s->stated = 0;
    s->stated_leverage = s->chi2 = s->relative_floor = 0;
}

kel_status
kel__estimate_scatter(double *change, kel__solution *solution, const kel__problem *problem, bool leverages,
                      kel_arena *memory, kel_error *err)
{
    kel__solution *s = solution;
    const kel__problem *p = problem;
    sums t = { kel_arena_take(memory, p->row_count, sizeof(double)),
               kel_arena_take(memory, p->column_count, sizeof(double)),
               kel_arena_take(memory, p->column_count, sizeof(double)), 0 };
    double *work = kel_arena_take(memory, 3 * s->layout.unknowns, sizeof *work);
    if (t.residual == NULL || t.freedom == NULL || t.scaled == NULL || work == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a fit of %zu rows", p->row_count);
    clear(s, p);
    /* The leverages of all rows add up to the parameters: where nothing else is asked of them, that is enough. */
    bool one_sum = p->column_count == 1 && p->shared_count == 0 && p->columns[0].stated % p->columns[0].rows == 0;
    for (size_t i = 0; i < p->row_count; i++) {
        kel__row_result r = kel__row_evaluate(p, s, &p->rows[i], leverages && !one_sum, work);
        add_row(s, p, &t, i, &r);
    }
    if (one_sum) {
        s->leverage[0] = (double)s->parameters;
        s->stated_leverage = s->stated > 0 ? s->leverage[0] : 0;
        t.freedom[0] = (double)p->row_count - s->leverage[0];
    }
    double typical2 = s->stated > 0 ? exp(2 * t.log_u / (double)s->stated) : 1;
    s->relative_rss = s->chi2 * typical2;
    s->relative_floor *= typical2;
    for (size_t j = s->layout.curve; j < s->layout.unknowns; j++)
        s->chi2 += s->x[j] * s->x[j];
    if (s->stated == 0)
        s->chi2 = NAN;

    /* What rounding of residuals can do to a scatter is no change: where rows fit as well as doubles can, it would
       never end. */
    *change = 0;
    double factor = s->factor, noise = 0;
    for (size_t c = 0; c < p->column_count; c++) {
        const kel__column *column = &p->columns[c];
        double before = s->scatter[c], now = NAN;
        if (t.freedom[c] >= ENOUGH && column->stated < column->rows && !(isnan(before) && s->iterations >= SETTLED))
            now = solve_scatter(p, c, t.residual, t.freedom[c]);
        double small = 1e-3 * column->least * column->typical_width,
               moved = fabs(now - before) - column->rounding * column->typical_width;
        if (!(isnan(before) && isnan(now)))
            *change = fmax(*change, isnan(before) || isnan(now) ? 1 : fmax(moved, 0) / fmax(now, small));
        else if (column->stated < column->rows)
            noise = fmax(noise, column->rounding / column->least);
        s->scatter[c] = now;
    }
    memcpy(s->freedom, t.freedom, p->column_count * sizeof *s->freedom);
    pool_few(s, p, t.freedom, t.scaled);
    *change = fmax(*change, fmax(fabs(s->factor - factor) - noise, 0) / factor);
    return KEL_OK;
}
