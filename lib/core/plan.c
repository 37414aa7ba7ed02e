/* SPDX-License-Identifier: Apache-2.0 */
/* Every quantity of kel_quantity from the record's curve, with its exact gradient.

   I(a, b) is the integral of the record's own alpha with the steps crossed, R the record's reference temperature, r the
   query's, lo and hi the lower and upper of from and to, d = to - from. All relative changes of length follow from I,
   never by a difference of two lengths:

   record in reference length, L(T)/L(R) = 1 + I(R, T); with D(p) = 1 + I(R, p)
     COEFFICIENT     alpha(to)/D(r)             (query in current length: alpha(to)/D(to))
     MEAN            I(from, to)/D(r)/d         (d = 0: alpha(to)/D(r))
     EXPANSION       I(r, to)/D(r)
     INTEGRAL        I(from, to)/D(r)           (current length: log1p[I(from, to)/D(from)])
     LENGTH_RATIO    1 + I(from, to)/D(from)
     CHANGE          I(from, to)/D(at)

   record in current length, L(T)/L(r) = exp I(r, T); with X(p, q) = exp I(p, q)
     COEFFICIENT     alpha(to) X(r, to)         (current length: alpha(to))
     MEAN            X(r, from) expm1 I(from, to)/d   (d = 0: alpha(to) X(r, to))
     EXPANSION       expm1 I(r, to)
     INTEGRAL        X(r, from) expm1 I(from, to)     (current length: I(from, to))
     LENGTH_RATIO    X(from, to)
     CHANGE          X(at, from) expm1 I(from, to)

   The mean coefficient is a change of length over the length at r, so that it is the same in both bases, in its limit
   too. Where `from` and `to` can be exchanged with a change of sign the work is done on lo and hi: the sign is then all
   that differs, to the last bit. With r = R D(r) is 1 and depends on nothing, and no term is made for it.

   A term is the derivative of the answer by one functional. Hence e(r) = 0 and its u = 0 exactly, as are ratio - 1 and
   its u from a temperature to itself: their functionals run over an empty interval. */
#include "curve.h"

#include <assert.h>
#include <math.h>

static void
add_value_term(kel__plan *plan, double t, double weight)
{
    plan->terms[plan->term_count++] = (kel__term){ .integral = false, .from = t, .to = t, .weight = weight };
}

static void
add_integral_term(kel__plan *plan, double from, double to, double weight)
{
    plan->terms[plan->term_count++] = (kel__term){ .integral = true, .from = from, .to = to, .weight = weight };
}

/* A record in reference length: everything but the logarithm is offset + F/D(p), with F one functional, f its value. */
static void
quotient(kel__plan *plan, const kel_content *c, const kel_query *q, double f, double p, double offset)
{
    const double R = c->reference_temperature;
    double d = p == R ? 1.0 : 1.0 + kel__curve_integral(c, &c->mean, R, p);
    plan->value = d > 0.0 ? offset + f / d : (double)NAN;
    if (q->quantity == KEL_COEFFICIENT || (q->quantity == KEL_MEAN && q->from == q->to))
        add_value_term(plan, q->to, 1.0 / d);
    else
        add_integral_term(plan, q->quantity == KEL_EXPANSION ? q->reference : q->from, q->to, 1.0 / d);
    /* A change always leans on `at`; where that is R the interval is empty and adds nothing to the gradient. */
    if (p != R || q->quantity == KEL_CHANGE)
        add_integral_term(plan, R, p, -f / d / d);
}

static void
from_reference_length(kel__plan *plan, const kel_content *c, const kel_query *q)
{
    const double r = q->reference, from = q->from, to = q->to;
    switch (q->quantity) {
    case KEL_COEFFICIENT:
        quotient(plan, c, q, kel__curve_value(c, &c->mean, to), q->base == KEL_BASE_CURRENT ? to : r, 0.0);
        break;
    case KEL_MEAN:
        if (from == to)
            quotient(plan, c, q, kel__curve_value(c, &c->mean, to), r, 0.0);
        else {
            /* The division comes last, by the width itself: 1/d would round once more. */
            quotient(plan, c, q, kel__curve_integral(c, &c->mean, from, to), r, 0.0);
            plan->value /= to - from;
            for (size_t i = 0; i < plan->term_count; i++)
                plan->terms[i].weight /= to - from;
        }
        break;
    case KEL_EXPANSION:
        quotient(plan, c, q, kel__curve_integral(c, &c->mean, r, to), r, 0.0);
        break;
    case KEL_INTEGRAL:
        if (q->base == KEL_BASE_CURRENT) {
            /* ln[D(hi)/D(lo)] with D(hi) = D(lo) + I. */
            const double R = c->reference_temperature, sign = to < from ? -1.0 : 1.0;
            const double lo = fmin(from, to), hi = fmax(from, to);
            double d = 1.0 + kel__curve_integral(c, &c->mean, R, lo);
            double y = kel__curve_integral(c, &c->mean, lo, hi) / d;
            plan->value = d > 0.0 && y > -1.0 ? sign * log1p(y) : (double)NAN;
            add_integral_term(plan, lo, hi, sign / (d * (1.0 + y)));
            add_integral_term(plan, R, lo, -sign * y / (d * (1.0 + y)));
        } else
            quotient(plan, c, q, kel__curve_integral(c, &c->mean, from, to), r, 0.0);
        break;
    case KEL_LENGTH_RATIO:
        quotient(plan, c, q, kel__curve_integral(c, &c->mean, from, to), from, 1.0);
        break;
    case KEL_CHANGE:
        quotient(plan, c, q, kel__curve_integral(c, &c->mean, from, to), q->at, 0.0);
        break;
    }
}

/* A record in current length: X(p, lo) expm1 I(lo, hi), the change of length between `from` and `to` over the length at
   p. */
static void
change_over(kel__plan *plan, const kel_content *c, const kel_query *q, double p, double width)
{
    const double lo = fmin(q->from, q->to), hi = fmax(q->from, q->to), sign = q->to < q->from ? -1.0 : 1.0;
    double x = exp(kel__curve_integral(c, &c->mean, p, lo)), i = kel__curve_integral(c, &c->mean, lo, hi);
    plan->value = sign * (x * expm1(i)) / width;
    add_integral_term(plan, lo, hi, sign * x * exp(i) / width);
    add_integral_term(plan, p, lo, plan->value);
}

static void
coefficient_over(kel__plan *plan, const kel_content *c, const kel_query *q)
{
    double x = exp(kel__curve_integral(c, &c->mean, q->reference, q->to));
    plan->value = kel__curve_value(c, &c->mean, q->to) * x;
    add_value_term(plan, q->to, x);
    add_integral_term(plan, q->reference, q->to, plan->value);
}

static void
from_current_length(kel__plan *plan, const kel_content *c, const kel_query *q)
{
    double i;
    switch (q->quantity) {
    case KEL_COEFFICIENT:
        if (q->base == KEL_BASE_CURRENT) {
            plan->value = kel__curve_value(c, &c->mean, q->to);
            add_value_term(plan, q->to, 1.0);
        } else
            coefficient_over(plan, c, q);
        break;
    case KEL_MEAN:
        if (q->from == q->to)
            coefficient_over(plan, c, q);
        else
            change_over(plan, c, q, q->reference, q->to - q->from);
        break;
    case KEL_EXPANSION:
        i = kel__curve_integral(c, &c->mean, q->reference, q->to);
        plan->value = expm1(i);
        add_integral_term(plan, q->reference, q->to, exp(i));
        break;
    case KEL_INTEGRAL:
        if (q->base == KEL_BASE_CURRENT) {
            plan->value = kel__curve_integral(c, &c->mean, q->from, q->to);
            add_integral_term(plan, q->from, q->to, 1.0);
        } else
            change_over(plan, c, q, q->reference, 1.0);
        break;
    case KEL_LENGTH_RATIO:
        plan->value = exp(kel__curve_integral(c, &c->mean, q->from, q->to));
        add_integral_term(plan, q->from, q->to, plan->value);
        break;
    case KEL_CHANGE:
        change_over(plan, c, q, q->at, 1.0);
        break;
    }
}

void
kel__plan_gradient(double *gradient, const kel__plan *plan, const kel_content *content, size_t first, size_t n)
{
    assert(first + n <= content->mode_count);
    for (size_t k = 0; k < n; k++)
        gradient[k] = 0.0;
    for (size_t i = 0; i < plan->term_count; i++) {
        const kel__term *term = &plan->terms[i];
        if (term->integral)
            kel__modes_integral(gradient, content, content->modes + first, n, term->from, term->to, term->weight);
        else
            kel__modes_value(gradient, content, content->modes + first, n, term->to, term->weight);
    }
}

kel_status
kel__plan_make(kel__plan *plan, const kel_content *content, const kel_query *query, kel_error *err)
{
    plan->value = NAN;
    plan->term_count = 0;
    if (content->base == KEL_BASE_REFERENCE)
        from_reference_length(plan, content, query);
    else
        from_current_length(plan, content, query);
    if (isfinite(plan->value) && (query->quantity != KEL_LENGTH_RATIO || plan->value > 0.0))
        return KEL_OK;
    plan->value = NAN;
    char to[KEL_NUMBER_SIZE];
    kel_number_format(to, query->to);
    return kel_error_set(err, KEL_E_RANGE, 0, 0,
                         "at T = %s K the continued curve gives a length that is not positive and finite", to);
}
