/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What one printed value says about the curve: model value g(x) and gradient, for every combination of the record's
   base and reference R with the table's base and reference r. I(a, b) is the integral of the record's alpha with the
   steps crossed, a(T) its value.

   Record in `reference length`, q = 1/(1 + I(R, r)):
       coefficient, reference length    a(T) q               expansion    I(r, T) q
       coefficient, current length      a(T)/(1 + I(R, T))   mean         I(Ta, Tb) q/(Tb - Ta), at Ta = Tb: a(T) q
   Record in `current length`, where ln(L2/L1) = I:
       coefficient, current length      a(T)                 expansion    expm1 I(r, T)
       coefficient, reference length    a(T) exp I(r, T)     mean         exp I(r, Ta) expm1 I(Ta, Tb)/(Tb - Ta), at Ta
       = Tb: a(T) exp I(r, T)
   Where R = r and the bases agree these are linear; the others are solved by Gauss-Newton steps with the exact
   gradient, each of which gains the square of the expansion or better. */
#include "problem.h"

#include <string.h>

double
kel__table_reference(const kel__problem *problem, size_t table)
{
    double r = problem->tables[table]->reference_temperature;
    return isnan(r) ? problem->reference : r;
}

static double
dot(const double *a, const double *x, size_t n)
{
    double sum = 0;
    for (size_t i = 0; i < n; i++)
        sum += a[i] * x[i];
    return sum;
}

/* gradient = p gradient + q other */
static void
combine(double *gradient, double p, const double *other, double q, size_t n)
{
    for (size_t i = 0; i < n; i++)
        gradient[i] = p * gradient[i] + q * other[i];
}

/* The row's own functional, with the printed interval's width divided out; returns the stated steps' part. */
static double
own_functional(double *row, const kel__problem *p, const kel__layout *l, const kel__row *r)
{
    const kel_observation *o = r->seen;
    double width = o->to - o->from;
    if (o->kind == KEL_KIND_EXPANSION)
        return kel__add_integral(row, l, p, o->from, 0, o->to, r->side, 1);
    if (o->kind == KEL_KIND_MEAN && width != 0)
        return kel__add_integral(row, l, p, o->from, 0, o->to, r->side, 1 / width);
    kel__add_value(row, l, o->to, r->side, 1);
    return 0;
}

/* value = f/(1 + e) with e = I(R, t): gradient in place. */
static double
over_length(double *gradient, double *work, const kel__problem *p, const kel__layout *l, double f, double t, int side,
            const double *x)
{
    memset(work, 0, l->curve * sizeof *work);
    double e = kel__add_integral(work, l, p, p->reference, 0, t, side, 1);
    e += dot(work, x, l->curve);
    combine(gradient, 1 / (1 + e), work, -f / ((1 + e) * (1 + e)), l->curve);
    return f / (1 + e);
}

static double
reference_length_record(double *gradient, double *work, const kel__problem *p, const kel__layout *l,
                        const kel__row *row, double f, const double *x)
{
    const kel_observation *o = row->seen;
    if (o->kind == KEL_KIND_COEFFICIENT && p->tables[row->table]->base == KEL_BASE_CURRENT)
        return over_length(gradient, work, p, l, f, o->to, row->side, x);
    double r = o->kind == KEL_KIND_EXPANSION ? o->from : kel__table_reference(p, row->table);
    return over_length(gradient, work, p, l, f, r, 0, x);
}

static double
current_length_record(double *gradient, double *work, const kel__problem *p, const kel__layout *l, const kel__row *row,
                      double f, const double *x)
{
    const kel_observation *o = row->seen;
    size_t n = l->curve;
    if (o->kind == KEL_KIND_EXPANSION) {
        combine(gradient, exp(f), gradient, 0, n);
        return expm1(f);
    }
    double r = kel__table_reference(p, row->table), width = o->to - o->from;
    bool over_interval = o->kind == KEL_KIND_MEAN && width != 0;
    memset(work, 0, n * sizeof *work);
    double before =
        kel__add_integral(work, l, p, r, 0, over_interval ? o->from : o->to, over_interval ? 0 : row->side, 1);
    before += dot(work, x, n);
    if (!over_interval) {
        combine(gradient, exp(before), work, f * exp(before), n);
        return f * exp(before);
    }
    double inside = f * width, value = exp(before) * expm1(inside) / width;
    combine(gradient, exp(before + inside), work, value, n);
    return value;
}

kel__model
kel__model_row(double *gradient, double *work, const kel__problem *problem, const kel__layout *layout,
               const kel__row *row, const double *x)
{
    memset(gradient, 0, layout->curve * sizeof *gradient);
    double stated = own_functional(gradient, problem, layout, row);
    double f = stated + dot(gradient, x, layout->curve);
    const kel_observation *o = row->seen;
    bool current = problem->tables[row->table]->base == KEL_BASE_CURRENT;
    double r = o->kind == KEL_KIND_EXPANSION ? o->from : kel__table_reference(problem, row->table);
    bool linear = problem->base == KEL_BASE_CURRENT
                      ? o->kind == KEL_KIND_COEFFICIENT && current
                      : r == problem->reference && !(o->kind == KEL_KIND_COEFFICIENT && current);
    if (linear)
        return (kel__model){ f, stated, true };
    double value = problem->base == KEL_BASE_CURRENT
                       ? current_length_record(gradient, work, problem, layout, row, f, x)
                       : reference_length_record(gradient, work, problem, layout, row, f, x);
    return (kel__model){ value, value - dot(gradient, x, layout->curve), false };
}

void
kel__model_steps(kel__layout *layout, const kel__problem *problem, const double *x, double *work)
{
    for (size_t k = 0; k < problem->transition_count; k++) {
        const kel_declared_transition *d = &problem->transitions[k];
        double r = problem->transition_reference[k];
        bool current = problem->base == KEL_BASE_CURRENT;
        if (d->step != KEL_STEP_STATED || (!current && r == problem->reference))
            continue;
        memset(work, 0, layout->curve * sizeof *work);
        double i = current ? kel__add_integral(work, layout, problem, r, 0, d->at, -1, 1)
                           : kel__add_integral(work, layout, problem, problem->reference, 0, r, 0, 1);
        i += dot(work, x, layout->curve);
        layout->step_length[k] = current ? log1p(d->length / exp(i)) : d->length * (1 + i);
    }
}

double
kel__shared_size(const kel__problem *problem, size_t index, const kel__row *row, double value)
{
    const kel__shared *shared = &problem->shared[index];
    if (shared->table != row->table)
        return 0;
    const kel_table *t = problem->tables[row->table];
    const kel_stated *here = NULL; /* where two ranges meet, the colder one */
    for (size_t i = 0; i < t->shared_count; i++) {
        const kel_stated *s = &t->shared[i];
        bool has_part =
            shared->relative
                ? s->relative > 0
                : s->absolute > 0 &&
                      s->dimension == (row->seen->kind == KEL_KIND_EXPANSION ? KEL_DIM_ONE : KEL_DIM_PER_KELVIN);
        if (has_part && row->seen->to >= s->lo && row->seen->to <= s->hi && (here == NULL || s->lo < here->lo))
            here = s;
    }
    return here == NULL ? 0 : shared->relative ? here->relative * value : here->absolute;
}
