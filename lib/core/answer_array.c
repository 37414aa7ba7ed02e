/* SPDX-License-Identifier: Apache-2.0 */
/* Answers for arrays.

   Where the record's curve and the quantity allow, blocks go through the vector kernels (kernel.c), within the bound
   that answer.h states. Everything else goes the way of single answers and has the same bits: the array is cut into
   blocks, and each goes through values, flags and uncertainties in loops of their own. What one element needs from an
   earlier loop (its plan) lies on the stack, so that nothing is allocated, and a call without u or flags leaves those
   loops out.

   Only input temperatures make an element fail, or a curve that gives it no length: its outputs are then NaN and the
   call goes on. An output may lie where an input lies. */
#include "curve.h"
#include "kernel.h"

#include <limits.h>
#include <math.h>
#include <string.h>

enum { BLOCK = 64, KERNEL_BLOCK = 16 * KEL__KERNEL_GROUP };

/* What one call runs over. `from` and `to` are the same array for quantities of one temperature. `place` is what the
   caller counts before the first element. */
typedef struct batch {
    const kel_content *content;
    kel_quantity quantity;
    double *value, *u;
    unsigned char *flags;
    const double *from, *to;
    size_t place;
} batch;

/* The first failure and the gravest reservation so far. */
typedef struct outcome {
    kel_status error, reservation;
} outcome;

/* ---- the scalar way ---- */

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
                err->line = call->place + start + i + 1;
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

static void
one_by_one(outcome *so_far, const batch *call, size_t n, kel_error *err)
{
    kel__plan plans[BLOCK];
    kel_query queries[BLOCK];
    bool failed[BLOCK];
    for (size_t start = 0; start < n; start += BLOCK) {
        size_t count = n - start < BLOCK ? n - start : BLOCK;
        kel_status status = block_values(plans, queries, failed, call, start, count,
                                         so_far->error == KEL_OK ? err : NULL);
        if (so_far->error == KEL_OK)
            so_far->error = status;
        status = block_flags(plans, queries, failed, call, start, count);
        if (status > so_far->reservation)
            so_far->reservation = status;
        if (call->u != NULL)
            block_uncertainties(plans, failed, call, start, count);
    }
}

/* ---- by the kernels ---- */

/* What follows on the integral I of a record in current length: its u is multiplied by the derivative. */
typedef enum change { AS_IT_IS, EXPM1, EXP } change;

typedef struct route {
    kel__task task;
    change change;
} route;

/* False where a quantity leans on more than one functional of the curve. */
static bool
find_route(route *out, const kel_record *record, kel_quantity quantity)
{
    const bool current = record->content.base == KEL_BASE_CURRENT;
    *out = (route){ KEL__TASK_INTEGRAL, AS_IT_IS };
    switch (quantity) {
    case KEL_COEFFICIENT:
        out->task = KEL__TASK_VALUE;
        return true;
    case KEL_MEAN:
        out->task = KEL__TASK_MEAN;
        return !current;
    case KEL_EXPANSION:
        out->change = current ? EXPM1 : AS_IT_IS;
        return true;
    case KEL_INTEGRAL:
        return true;
    default:
        out->change = EXP;
        return current && quantity == KEL_LENGTH_RATIO;
    }
}

/* Elements beyond the range of a double are marked as left. */
static unsigned
change_values(unsigned char *flags, const batch *call, change how, size_t n)
{
    unsigned left = 0;
    for (size_t i = 0; i < n; i++) {
        const double e = exp(call->value[i]);
        call->value[i] = how == EXP ? e : expm1(call->value[i]);
        if (call->u != NULL)
            call->u[i] *= e;
        if (!isfinite(call->value[i]) || (how == EXP && call->value[i] <= 0.0)) {
            flags[i] |= KEL__KERNEL_LEFT;
            left = KEL__KERNEL_LEFT;
        }
    }
    return left;
}

/* n <= KERNEL_BLOCK elements, a multiple of KEL__KERNEL_GROUP of which those from `used` on only fill up. */
static void
kernel_block(outcome *so_far, const kel__kernel *kernel, const route *way, const batch *call, size_t n, size_t used,
             kel_error *err)
{
    unsigned char own[KERNEL_BLOCK], *flags = call->flags != NULL ? call->flags : own;
    double from[KERNEL_BLOCK], to[KERNEL_BLOCK];
    const bool known = kernel->curve_count > 1;
    unsigned all = kernel->code->flags(flags, kernel, way->task, call->from, call->to, n);
    kel_status status = kel__flags_status(all);
    if (status > so_far->reservation)
        so_far->reservation = status;
    /* Elements that are left are worked on after the outputs are written, which may lie where the inputs lie. */
    if ((all & KEL__KERNEL_LEFT) != 0 || way->change != AS_IT_IS) {
        memcpy(from, call->from, n * sizeof *from);
        memcpy(to, call->to, n * sizeof *to);
    }
    kernel->code->values(call->value, known ? call->u : NULL, kernel, way->task, call->from, call->to, n);
    for (size_t i = 0; !known && call->u != NULL && i < n; i++)
        call->u[i] = (double)NAN;
    if (way->change != AS_IT_IS)
        all |= change_values(flags, call, way->change, n);
    if ((all & KEL__KERNEL_LEFT) == 0)
        return;
    for (size_t i = 0; i < used; i++) {
        if ((flags[i] & KEL__KERNEL_LEFT) == 0)
            continue;
        const batch one = { call->content, call->quantity, call->value + i, call->u == NULL ? NULL : call->u + i,
                            flags + i, from + i, to + i, call->place + i };
        one_by_one(so_far, &one, 1, err);
    }
}

/* The last elements, fewer than a group, in arrays that are filled up with the last one. */
static void
kernel_tail(outcome *so_far, const kel__kernel *kernel, const route *way, const batch *call, size_t n, kel_error *err)
{
    double value[KEL__KERNEL_GROUP], u[KEL__KERNEL_GROUP], from[KEL__KERNEL_GROUP], to[KEL__KERNEL_GROUP];
    unsigned char flags[KEL__KERNEL_GROUP];
    const batch padded = { call->content, call->quantity, value, call->u == NULL ? NULL : u, flags, from, to,
                           call->place };
    for (size_t i = 0; i < KEL__KERNEL_GROUP; i++) {
        from[i] = call->from[i < n ? i : n - 1];
        to[i] = call->to[i < n ? i : n - 1];
    }
    kernel_block(so_far, kernel, way, &padded, KEL__KERNEL_GROUP, n, err);
    memcpy(call->value, value, n * sizeof *value);
    if (call->u != NULL)
        memcpy(call->u, u, n * sizeof *u);
    if (call->flags != NULL)
        memcpy(call->flags, flags, n);
}

static void
by_kernel(outcome *so_far, const kel__kernel *kernel, const route *way, const batch *call, size_t n, kel_error *err)
{
    /* An expansion is the integral from the reference temperature. */
    double reference[KERNEL_BLOCK];
    const bool expansion = call->quantity == KEL_EXPANSION;
    for (size_t i = 0; expansion && i < KERNEL_BLOCK; i++)
        reference[i] = call->content->reference_temperature;
    batch part = *call;
    size_t count;
    for (size_t start = 0; start < n; start += count) {
        count = n - start < KERNEL_BLOCK ? n - start : KERNEL_BLOCK;
        /* The last block without the elements that fill no group, if it holds others. */
        if (count > KEL__KERNEL_GROUP)
            count -= count % KEL__KERNEL_GROUP;
        part.from = expansion ? reference : call->from + start;
        part.to = call->to + start;
        part.value = call->value + start;
        part.u = call->u == NULL ? NULL : call->u + start;
        part.flags = call->flags == NULL ? NULL : call->flags + start;
        part.place = start;
        if (count % KEL__KERNEL_GROUP == 0)
            kernel_block(so_far, kernel, way, &part, count, count, err);
        else
            kernel_tail(so_far, kernel, way, &part, count, err);
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

    const batch call = { &record->content, quantity, value, u, flags, from, to, 0 };
    outcome result = { KEL_OK, KEL_OK };
    route way;
    if (record->kernel != NULL && find_route(&way, record, quantity))
        by_kernel(&result, record->kernel, &way, &call, n, err);
    else
        one_by_one(&result, &call, n, err);
    return result.error != KEL_OK ? result.error : result.reservation;
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
