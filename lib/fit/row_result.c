/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a solution says of one row: the curve's value, the shared errors' part, what is left, and the row's leverage
       h = |R^-T (Z' g, S)/u|^2,   g the row's gradient, S its shared sizes (diagonal of the hat matrix of the augmented
       problem). */
#include "problem.h"

kel__row_result
kel__row_evaluate(const kel__problem *problem, const kel__solution *solution, const kel__row *row, bool with_leverage,
                  double *work)
{
    const kel__layout *l = &solution->layout;
    double *gradient = work, *spare = work + l->unknowns, *z = spare;
    kel__model model = kel__model_row(gradient, spare, problem, l, row, solution->x);
    kel__row_result r = { .fitted = model.value, .u = kel__row_u(problem, solution, row, model.value) };
    for (size_t j = 0; j < problem->shared_count; j++)
        r.shared_term += solution->x[l->curve + j] * kel__shared_size(problem, j, row, model.value);
    r.residual = row->seen->value - r.fitted - r.shared_term;
    if (!with_leverage)
        return r;
    size_t k = solution->parameters, n = k + problem->shared_count;
    for (size_t i = 0; i < k; i++) {
        z[i] = 0;
        for (size_t j = 0; j < l->curve; j++)
            z[i] += solution->basis[i * l->curve + j] * gradient[j];
        z[i] /= r.u;
    }
    for (size_t j = 0; j < problem->shared_count; j++)
        z[k + j] = kel__shared_size(problem, j, row, model.value) / r.u;
    kel__solve_transposed(z, solution->triangle, n);
    for (size_t i = 0; i < n; i++)
        r.leverage += z[i] * z[i];
    return r;
}
