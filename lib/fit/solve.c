/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One fit for given degrees. Rows weighted by 1/u go through a triangular factor to the reduced problem. Where weights
   or rows depend on the answer (percentages, several columns, shared errors, other references, current length) this is
   repeated from the last answer until nothing changes: a Gauss-Newton step with right-hand side  y - g(x) + J x  in
   place of y. */
#include "problem.h"

#include <string.h>

enum { MOST_ITERATIONS = 400 };

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a fit");
}

/* Row for the factor at the solution's present x: [gradient | shared sizes | right-hand side]; returns 1/u. The very
   first time there is no curve yet, and the printed value stands for the curve's. */
static double
linear_row(double *row, double *work, const kel__problem *p, const kel__solution *s, const kel__row *r, bool first)
{
    const kel__layout *l = &s->layout;
    kel__model model = kel__model_row(row, work, p, l, r, s->x);
    double value = first ? r->seen->value : model.value;
    for (size_t j = 0; j < p->shared_count; j++)
        row[l->curve + j] = kel__shared_size(p, j, r, value);
    row[l->unknowns] = r->seen->value - model.constant;
    return 1 / kel__row_u(p, s, r, value);
}

static void
add_prior_rows(kel__factor *factor, double *row, const kel__problem *p, const kel__layout *l)
{
    for (size_t j = 0; j < p->shared_count; j++) {
        memset(row, 0, (l->unknowns + 1) * sizeof *row);
        row[l->curve + j] = 1;
        kel__factor_add(factor, row, 1);
    }
}

kel_status
kel__factor_all(kel__factor *factor, kel__layout *layout, const kel__problem *problem, kel_arena *memory,
                const int *degrees, kel_error *err)
{
    kel_status status = kel__layout_make(layout, problem, memory, degrees, err);
    if (status < 0 || (status = kel__factor_new(factor, memory, layout->unknowns + 1, err)) < 0)
        return status;
    double *row = kel_arena_take(memory, 2 * (layout->unknowns + 1), sizeof *row),
           *zero = kel_arena_take(memory, layout->unknowns, sizeof *zero);
    if (row == NULL || zero == NULL)
        return no_memory(err);
    const kel__solution none = { .factor = 1 }; /* stated absolute u do not look at it */
    for (size_t i = 0; i < problem->row_count; i++) {
        kel__model model = kel__model_row(row, row + layout->unknowns + 1, problem, layout, &problem->rows[i], zero);
        row[layout->unknowns] = problem->rows[i].seen->value - model.constant;
        kel__factor_add(factor, row, problem->uniform ? 1 : 1 / kel__row_u(problem, &none, &problem->rows[i], 0));
    }
    kel__factor_flush(factor);
    return KEL_OK;
}

kel_status
kel__solve_from(kel__solution *solution, const kel__problem *problem, kel_arena *memory, const kel__factor *factor,
                const kel__layout *full, const int *degrees, kel_error *err)
{
    *solution = (kel__solution){ .iterations = 1 };
    kel__layout *l = &solution->layout;
    kel_status status = kel__layout_make(l, problem, memory, degrees, err);
    if (status < 0 || (status = kel__solution_arrays(solution, problem, memory, err)) < 0)
        return status;
    size_t height = factor->columns;
    double *r = kel_arena_take(memory, height * (l->unknowns + 1), sizeof *r);
    if (r == NULL)
        return no_memory(err);
    for (size_t i = 0; i < l->piece_count; i++)
        memcpy(r + l->pieces[i].first * height, factor->r + full->pieces[i].first * height,
               l->pieces[i].count * height * sizeof *r);
    memcpy(r + l->coefficients * height, factor->r + full->coefficients * height,
           (l->unknowns + 1 - l->coefficients) * height * sizeof *r);
    if ((status = kel__reduce(solution, memory, r, height, err)) < 0)
        return status;
    if (!problem->uniform) {
        double change;
        return kel__estimate_scatter(&change, solution, problem, false, memory, err);
    }
    solution->rss[0] = solution->residual * solution->residual;
    kel__uniform_scatter(solution, problem);
    double u = kel__row_u(problem, solution, &problem->rows[0], 0);
    size_t n = solution->parameters;
    for (size_t i = 0; i < n * n; i++)
        solution->triangle[i] /= u;
    return KEL_OK;
}

/* Largest change of an unknown against the largest of its group: coefficients, steps, shared errors. */
static double
relative_change(const kel__layout *l, const double *now, const double *before)
{
    size_t ends[] = { 0, l->coefficients, l->curve, l->unknowns };
    double worst = 0;
    for (int g = 0; g < 3; g++) {
        double change = 0, size = g == 2 ? 1 : 0;
        for (size_t i = ends[g]; i < ends[g + 1]; i++) {
            change = fmax(change, fabs(now[i] - before[i]));
            size = fmax(size, fabs(now[i]));
        }
        if (change > 0)
            worst = fmax(worst, change / size);
    }
    return worst;
}

static kel_status
iterate(kel__solution *s, const kel__problem *p, kel_arena *memory, kel_error *err)
{
    const kel__layout *l = &s->layout;
    kel__factor factor;
    double *row = kel_arena_take(memory, l->unknowns + 1, sizeof *row),
           *work = kel_arena_take(memory, l->unknowns + 1, sizeof *work);
    double *before = kel_arena_take(memory, l->unknowns, sizeof *before);
    s->x = kel_arena_take(memory, l->unknowns, sizeof *s->x);
    if (row == NULL || work == NULL || before == NULL || s->x == NULL)
        return no_memory(err);
    kel_status status = kel__factor_new(&factor, memory, l->unknowns + 1, err);
    if (status < 0)
        return status;
    double last = INFINITY;
    for (s->iterations = 1; s->iterations <= MOST_ITERATIONS; s->iterations++) {
        kel_arena *scratch = kel_arena_new();
        if (scratch == NULL)
            return no_memory(err);
        kel__factor_clear(&factor);
        kel__model_steps(&s->layout, p, s->x, work);
        for (size_t i = 0; i < p->row_count; i++) {
            double weight = linear_row(row, work, p, s, &p->rows[i], s->iterations == 1);
            kel__factor_add(&factor, row, weight);
        }
        add_prior_rows(&factor, row, p, l);
        kel__factor_flush(&factor);
        memcpy(before, s->x, l->unknowns * sizeof *before);
        double *x = s->x, change;
        status = kel__reduce(s, scratch, factor.r, factor.columns, err);
        if (status == KEL_OK) {
            memcpy(x, s->x, l->unknowns * sizeof *x);
            s->x = x;
            status = kel__estimate_scatter(&change, s, p, true, scratch, err);
        }
        if (status == KEL_OK) {
            change = fmax(change, relative_change(l, x, before));
            /* Rounding may keep the last digits moving: where steps no longer shrink, 1e-10 is the end. */
            bool still =
                change <= 1e-13 || (s->iterations > 5 && change <= 1e-10 && change >= last) || (p->linear && p->fixed);
            last = change;
            if (still || s->iterations == MOST_ITERATIONS) {
                s->basis = kel_arena_copy(memory, s->basis, l->curve * s->parameters, sizeof *s->basis);
                size_t n = s->parameters + p->shared_count;
                s->triangle = kel_arena_copy(memory, s->triangle, n * n, sizeof *s->triangle);
                status = s->basis == NULL || s->triangle == NULL ? no_memory(err) : KEL_OK;
                kel_arena_free(scratch);
                if (status == KEL_OK && !still && change > 1e-7)
                    return kel_error_set(err, KEL_E_CONVERGENCE, 0, 0, "the fit did not converge in %d iterations", MOST_ITERATIONS);
                return status;
            }
        }
        kel_arena_free(scratch);
        if (status < 0)
            return status;
    }
    return KEL_OK;
}

kel_status
kel__solve(kel__solution *solution, const kel__problem *problem, kel_arena *memory, const int *degrees, kel_error *err)
{
    if (problem->uniform && problem->linear) {
        kel__factor factor;
        kel__layout full;
        kel_status status = kel__factor_all(&factor, &full, problem, memory, degrees, err);
        return status < 0 ? status : kel__solve_from(solution, problem, memory, &factor, &full, degrees, err);
    }
    *solution = (kel__solution){ 0 };
    kel_status status = kel__layout_make(&solution->layout, problem, memory, degrees, err);
    if (status == KEL_OK)
        status = kel__solution_arrays(solution, problem, memory, err);
    return status < 0 ? status : iterate(solution, problem, memory, err);
}
