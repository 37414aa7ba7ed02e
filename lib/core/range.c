/* SPDX-License-Identifier: Apache-2.0 */
/* What an answer leans on: validity range, gaps, transitions. Bounds compare exactly.

   An answer leans on every temperature at which one of its terms begins or ends. The terms are those of the exact
   gradient, so that the reference counts where and only where the answer depends on it: a length ratio in a
   reference-length record is I(from, to)/[1 + I(R, from)] and leans on R, the same ratio in a current-length record is
   exp I(from, to) and does not. */
#include "curve.h"

#include <math.h>

static bool
inside(const kel_content *content, double t)
{
    return content->range.lo <= t && t <= content->range.hi;
}

static bool
in_gap(const kel_content *content, double t)
{
    for (size_t i = 0; i < content->gap_count; i++)
        if (content->gaps[i].lo < t && t < content->gaps[i].hi)
            return true;
    return false;
}

static bool
crosses_transition(const kel_content *content, double from, double to)
{
    double lo = fmin(from, to), hi = fmax(from, to);
    for (size_t i = 0; i < content->transition_count; i++)
        if (lo < content->transitions[i].at && content->transitions[i].at <= hi)
            return true;
    return false;
}

unsigned
kel__plan_flags(const kel__plan *plan, const kel_content *content, const kel_query *query)
{
    unsigned flags = 0;
    for (size_t i = 0; i < plan->term_count; i++) {
        const kel__term *term = &plan->terms[i];
        if (!inside(content, term->to) || (term->integral && !inside(content, term->from)))
            flags |= KEL_FLAG_EXTRAPOLATED;
    }
    /* Gaps and transitions are a matter of the interval that was asked for, not of all that the answer leans on. An
       expansion is the interval from its reference. */
    double from = query->quantity == KEL_EXPANSION ? query->reference : query->from;
    if (in_gap(content, query->to) || (query->quantity != KEL_COEFFICIENT && in_gap(content, from)))
        flags |= KEL_FLAG_GAP;
    if (query->quantity != KEL_COEFFICIENT && crosses_transition(content, from, query->to))
        flags |= KEL_FLAG_TRANSITION;
    return flags;
}

kel_status
kel__flags_status(unsigned flags)
{
    if ((flags & KEL_FLAG_EXTRAPOLATED) != 0)
        return KEL_W_EXTRAPOLATED;
    if ((flags & KEL_FLAG_GAP) != 0)
        return KEL_W_GAP;
    return (flags & KEL_FLAG_TRANSITION) != 0 ? KEL_W_TRANSITION : KEL_OK;
}

double
kel_record_outside(const kel_record *record, double from, double to)
{
    if (record == NULL || isnan(from) || isnan(to))
        return NAN;
    const kel_interval range = record->content.range;
    double lo = fmin(from, to), hi = fmax(from, to);
    double below = lo < range.lo ? fmin(hi, range.lo) - lo : 0.0;
    double above = hi > range.hi ? hi - fmax(lo, range.hi) : 0.0;
    return below + above;
}

bool
kel_record_inside(const kel_record *record, double t)
{
    return record != NULL && inside(&record->content, t);
}

bool
kel_record_in_gap(const kel_record *record, double t)
{
    return record != NULL && in_gap(&record->content, t);
}
