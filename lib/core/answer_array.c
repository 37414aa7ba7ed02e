/* SPDX-License-Identifier: Apache-2.0 */
/* Answers for arrays, the same to the last bit as one by one.

   The array is cut into blocks, and each block goes through values, flags and uncertainties in loops of their own. What
   one element needs from an earlier loop (its plan) lies on the stack, so that nothing is allocated, and a call without
   u or flags leaves those loops out. Only input temperatures make an element fail, or a curve that gives it no length:
   its outputs are then NaN and the call goes on. */
#include "curve.h"

#include <limits.h>
#include <math.h>

enum { BLOCK = 64 };

/* What one call runs over. `from` and `to` are the same array for quantities of one temperature. */
typedef struct batch {
    const kel_content *content;
    kel_quantity quantity;
    double *value, *u;
    unsigned char *flags;
    const double *from, *to;
} batch;

/* Elements start..start + n - 1. failed[i]: element start + i has no answer. Returns the first failure, with its place
   in err. */
static kel_status
block_values(kel__plan *plans, kel_query *queries, bool *failed, const batch *call, size_t start, size_t n,
             kel_error *err)
{
    kel_status first = KEL_OK;
    for (size_t i = 0; i < n; i++) {
        const double from = call->from[start + i], to = call->to[start + i];
        const kel_query query = { .quantity = call->quantity, .from = from, .to = to, .at = from,
                                  .reference = NAN, .base = -1 };
        kel_error *place = first == KEL_OK ? err : NULL;
        kel_status status = kel__query_resolve(&queries[i], call->content, &query, place);
        if (status == KEL_OK)
            status = kel__plan_make(&plans[i], call->content, &queries[i], place);
        failed[i] = status != KEL_OK;
        call->value[start + i] = failed[i] ? (double)NAN : plans[i].value;
        if (failed[i] && first == KEL_OK) {
            first = status;
            if (err != NULL)
                err->line = start + i + 1;
        }
    }
    return first;
}

/* Returns the gravest reservation in the block. */
static kel_status
block_flags(const kel__plan *plans, const kel_query *queries, const bool *failed, const batch *call, size_t start,
            size_t n)
{
    unsigned all = 0;
    for (size_t i = 0; i < n; i++) {
        unsigned flags = failed[i] || call->content->mode_count == 0 ? (unsigned)KEL_FLAG_UNKNOWN_U : 0u;
        if (!failed[i])
            flags |= kel__plan_flags(&plans[i], call->content, &queries[i]);
        if (call->flags != NULL)
            call->flags[start + i] = (unsigned char)(flags & UCHAR_MAX);
        all |= flags;
    }
    return kel__flags_status(all);
}

static void
block_uncertainties(const kel__plan *plans, const bool *failed, const batch *call, size_t start, size_t n)
{
    for (size_t i = 0; i < n; i++) {
        kel_answer answer = { .u = NAN };
        if (!failed[i])
            kel__plan_uncertainty(&answer, &plans[i], call->content);
        call->u[start + i] = answer.u;
    }
}

static kel_status
answer_array(kel_quantity quantity, double *value, double *u, unsigned char *flags, const kel_record *record,
             const double *from, const double *to, size_t n, kel_error *err)
{
    if (record == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no record was given");
    if (n > 0 && (value == NULL || from == NULL || to == NULL))
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "an array of the call is missing");

    const batch call = { &record->content, quantity, value, u, flags, from, to };
    kel__plan plans[BLOCK];
    kel_query queries[BLOCK];
    bool failed[BLOCK];
    kel_status error = KEL_OK, reservation = KEL_OK;
    for (size_t start = 0; start < n; start += BLOCK) {
        size_t count = n - start < BLOCK ? n - start : BLOCK;
        kel_status status = block_values(plans, queries, failed, &call, start, count, error == KEL_OK ? err : NULL);
        if (error == KEL_OK)
            error = status;
        status = block_flags(plans, queries, failed, &call, start, count);
        if (status > reservation)
            reservation = status;
        if (u != NULL)
            block_uncertainties(plans, failed, &call, start, count);
    }
    return error != KEL_OK ? error : reservation;
}

kel_status
kel_record_coefficient_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                         const double *t, size_t n, kel_error *err)
{
    return answer_array(KEL_COEFFICIENT, value, u, flags, record, t, t, n, err);
}

kel_status
kel_record_mean_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                  const double *from, const double *to, size_t n, kel_error *err)
{
    return answer_array(KEL_MEAN, value, u, flags, record, from, to, n, err);
}

kel_status
kel_record_expansion_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                       const double *t, size_t n, kel_error *err)
{
    return answer_array(KEL_EXPANSION, value, u, flags, record, t, t, n, err);
}

kel_status
kel_record_integral_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                      const double *from, const double *to, size_t n, kel_error *err)
{
    return answer_array(KEL_INTEGRAL, value, u, flags, record, from, to, n, err);
}

kel_status
kel_record_length_ratio_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                          const double *from, const double *to, size_t n, kel_error *err)
{
    return answer_array(KEL_LENGTH_RATIO, value, u, flags, record, from, to, n, err);
}
