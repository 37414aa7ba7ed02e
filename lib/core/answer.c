/* SPDX-License-Identifier: Apache-2.0 */
/* Single answers: a query is checked, planned (plan.c), flagged (range.c) and given its uncertainty.

   With g_k the derivative of the answer along mode k, u^2 = sum_k g_k^2, and the covariance of two answers is sum_k g_k
   h_k. This is the law of propagation of uncertainty, J C J' with C = sum_k l_k l_k' (JCGM 100:2008, 5.2.2), without C
   being formed. The modes are taken in blocks that fit the stack, however many there are. */
#include "curve.h"

#include <math.h>

enum { MODES_AT_ONCE = 64 };

static kel_status
check_temperature(const char *name, double t, kel_error *err)
{
    char text[KEL_NUMBER_SIZE];
    if (isfinite(t) && t >= 0.0)
        return KEL_OK;
    kel_number_format(text, t);
    if (!isfinite(t))
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "%s = %s K is not a finite temperature", name, text);
    return kel_error_set(err, KEL_E_RANGE, 0, 0, "%s = %s K is below 0 K", name, text);
}

kel_status
kel__query_resolve(kel_query *out, const kel_content *content, const kel_query *query, kel_error *err)
{
    const bool needs_from = query->quantity != KEL_COEFFICIENT && query->quantity != KEL_EXPANSION;
    *out = *query;
    if (query->quantity < KEL_COEFFICIENT || query->quantity > KEL_CHANGE)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "unknown quantity %d", (int)query->quantity);
    if (query->base < -1 || query->base > KEL_BASE_CURRENT)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "unknown base %d", query->base);
    if (query->base == -1)
        out->base = (int)content->base;
    if (isnan(query->reference))
        out->reference = content->reference_temperature;

    kel_status status = check_temperature("reference", out->reference, err);
    if (status == KEL_OK && needs_from)
        status = check_temperature("from", query->from, err);
    if (status == KEL_OK)
        status = check_temperature(needs_from ? "to" : "T", query->to, err);
    if (status == KEL_OK && query->quantity == KEL_CHANGE)
        status = check_temperature("at", query->at, err);
    return status;
}

void
kel__plan_uncertainty(kel_answer *answer, const kel__plan *plan, const kel_content *content)
{
    double gradient[MODES_AT_ONCE], squares[3] = { 0.0, 0.0, 0.0 };
    if (content->mode_count == 0) {
        answer->u = answer->u_fit = answer->u_shared = answer->u_lot = NAN;
        answer->flags |= KEL_FLAG_UNKNOWN_U;
        return;
    }
    for (size_t first = 0; first < content->mode_count; first += MODES_AT_ONCE) {
        size_t left = content->mode_count - first, n = left < MODES_AT_ONCE ? left : MODES_AT_ONCE;
        kel__plan_gradient(gradient, plan, content, first, n);
        for (size_t k = 0; k < n; k++)
            squares[content->modes[first + k].kind] += gradient[k] * gradient[k];
    }
    answer->u_fit = sqrt(squares[KEL_MODE_FIT]);
    answer->u_shared = sqrt(squares[KEL_MODE_SHARED]);
    answer->u_lot = sqrt(squares[KEL_MODE_LOT]);
    answer->u = sqrt(squares[KEL_MODE_FIT] + squares[KEL_MODE_SHARED] + squares[KEL_MODE_LOT]);
}

/* Checks and plans. On failure the plan's value is NaN. */
static kel_status
prepare(kel__plan *plan, kel_query *resolved, const kel_record *record, const kel_query *query, kel_error *err)
{
    plan->value = NAN;
    if (record == NULL || query == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no %s was given", record == NULL ? "record" : "query");
    kel_status status = kel__query_resolve(resolved, &record->content, query, err);
    return status == KEL_OK ? kel__plan_make(plan, &record->content, resolved, err) : status;
}

kel_status
kel_record_answer(kel_answer *out, const kel_record *record, const kel_query *query, kel_error *err)
{
    kel__plan plan;
    kel_query resolved;
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "there is no place for the answer");
    *out = (kel_answer){ NAN, NAN, NAN, NAN, NAN, KEL_FLAG_UNKNOWN_U };
    kel_status status = prepare(&plan, &resolved, record, query, err);
    if (status != KEL_OK)
        return status;
    out->value = plan.value;
    out->flags = kel__plan_flags(&plan, &record->content, &resolved);
    kel__plan_uncertainty(out, &plan, &record->content);
    return kel__flags_status(out->flags);
}

/* In the record's own reference and base. */
static kel_status
answer_own(kel_answer *out, const kel_record *record, kel_quantity quantity, double from, double to, kel_error *err)
{
    const kel_query query = { .quantity = quantity, .from = from, .to = to, .at = from, .reference = NAN, .base = -1 };
    return kel_record_answer(out, record, &query, err);
}

kel_status
kel_record_coefficient(kel_answer *out, const kel_record *record, double t, kel_error *err)
{
    return answer_own(out, record, KEL_COEFFICIENT, t, t, err);
}

kel_status
kel_record_mean(kel_answer *out, const kel_record *record, double from, double to, kel_error *err)
{
    return answer_own(out, record, KEL_MEAN, from, to, err);
}

kel_status
kel_record_expansion(kel_answer *out, const kel_record *record, double t, kel_error *err)
{
    return answer_own(out, record, KEL_EXPANSION, t, t, err);
}

kel_status
kel_record_integral(kel_answer *out, const kel_record *record, double from, double to, kel_error *err)
{
    return answer_own(out, record, KEL_INTEGRAL, from, to, err);
}

kel_status
kel_record_length_ratio(kel_answer *out, const kel_record *record, double from, double to, kel_error *err)
{
    return answer_own(out, record, KEL_LENGTH_RATIO, from, to, err);
}

kel_status
kel_record_covariance(double *out, const kel_record *record, const kel_query *a, const kel_query *b, kel_error *err)
{
    kel__plan plans[2];
    kel_query resolved[2];
    double g[MODES_AT_ONCE], h[MODES_AT_ONCE], sum = 0.0;
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "there is no place for the covariance");
    *out = NAN;
    kel_status status = prepare(&plans[0], &resolved[0], record, a, err);
    if (status == KEL_OK)
        status = prepare(&plans[1], &resolved[1], record, b, err);
    if (status != KEL_OK)
        return status;
    const kel_content *content = &record->content;
    if (content->mode_count == 0)
        return kel_error_set(err, KEL_E_DATA, 0, 0,
                             "the record holds no uncertainty, so that its answers have no known covariance");
    for (size_t first = 0; first < content->mode_count; first += MODES_AT_ONCE) {
        size_t left = content->mode_count - first, n = left < MODES_AT_ONCE ? left : MODES_AT_ONCE;
        kel__plan_gradient(g, &plans[0], content, first, n);
        kel__plan_gradient(h, &plans[1], content, first, n);
        for (size_t k = 0; k < n; k++)
            sum += g[k] * h[k];
    }
    *out = sum;
    return kel__flags_status(kel__plan_flags(&plans[0], content, &resolved[0]) |
                             kel__plan_flags(&plans[1], content, &resolved[1]));
}
