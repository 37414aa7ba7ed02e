/* SPDX-License-Identifier: Apache-2.0 */
/* The rules of a record's content, so that no code that uses a record has to look again. This file: how a breach is
   reported, and the curve with its pieces, transitions, modes, range and gaps. The data behind the curve:
   content_check_data.c.

   The same rules hold for content that a program gives and for a file; places are named as in the file. */
#include "content_check.h"
#include "record_parts.h"

#include <math.h>

void
kel__breach(kel__checker *checker, kel__place place, const char *what)
{
    if (checker->status != KEL_OK)
        return;
    if (place.list == NULL)
        checker->status = kel_error_set(checker->err, checker->code, 0, 0, "%s %s", place.key, what);
    else
        checker->status = kel_error_set(checker->err, checker->code, 0, 0, "%s[%zu].%s %s", place.list, place.index,
                                        place.key, what);
}

/* "gaps_K[0].lo = 300 must not lie below the end of the gap before, 310" */
static void
breach_limit(kel__checker *checker, kel__place place, double x, const char *must, double limit)
{
    char got[KEL_NUMBER_SIZE], other[KEL_NUMBER_SIZE];
    kel_error what;
    kel_number_format(got, x);
    kel_number_format(other, limit);
    kel_error_set(&what, KEL_OK, 0, 0, "= %s must %s, %s", got, must, other);
    kel__breach(checker, place, what.message);
}

void
kel__check_number(kel__checker *checker, kel__place place, double x, kel__rule rule)
{
    char got[KEL_NUMBER_SIZE];
    kel_error what;
    bool may_be_unknown = rule == KEL__FINITE_OR_NAN || rule == KEL__NOT_NEGATIVE_OR_NAN;
    bool may_be_negative = rule == KEL__FINITE || rule == KEL__FINITE_OR_NAN;
    if ((isnan(x) && may_be_unknown) || (isfinite(x) && (x >= 0.0 || may_be_negative)))
        return;
    kel_number_format(got, x);
    kel_error_set(&what, KEL_OK, 0, 0, "= %s %s", got,
                  isfinite(x) ? "must not be negative" : "must be a finite number");
    /* NaN is how null was read. */
    kel__breach(checker, place, isnan(x) ? "must be a finite number" : what.message);
}

void
kel__check_word(kel__checker *checker, kel__place place, const kel__words *list, int word)
{
    if (word < 0 || word >= list->count)
        kel__breach(checker, place, "is not a known word");
}

void
kel__check_there(kel__checker *checker, kel__place place, const void *pointer, size_t count)
{
    if (pointer == NULL && count != 0)
        kel__breach(checker, place, "is not there, though its count is not 0");
}

/* ---- pieces ---- */

_Static_assert(KEL_COEFFICIENTS_MAX == 128, "a message below names this limit");

/* Pieces adjoin, and share the coefficients out in order and without a rest. */
static void
check_pieces(kel__checker *checker, const kel_content *content)
{
    const kel__place all = { .key = "pieces" };
    kel__check_there(checker, all, content->pieces, content->piece_count);
    if (content->piece_count == 0)
        kel__breach(checker, all, "is empty");
    size_t taken = 0;
    for (size_t i = 0; i < content->piece_count && checker->status == KEL_OK; i++) {
        const kel_piece *p = &content->pieces[i];
        const kel__place from = { "pieces", i, "from_K" }, to = { "pieces", i, "to_K" };
        const kel__place coefficients = { "pieces", i, "chebyshev_per_K" };
        kel__check_number(checker, from, p->from, KEL__NOT_NEGATIVE);
        kel__check_number(checker, to, p->to, KEL__NOT_NEGATIVE);
        if (i > 0 && p->from != p[-1].to)
            breach_limit(checker, from, p->from, "equal the end of the piece before", p[-1].to);
        /* A table of one temperature gives a constant on a piece of no width. */
        bool one_point = content->piece_count == 1 && p->from == p->to;
        if (!(p->from < p->to) && !one_point)
            breach_limit(checker, to, p->to, "lie above from_K", p->from);
        if (p->count < 1 || p->count > KEL_COEFFICIENTS_MAX)
            kel__breach(checker, coefficients, "must hold 1 to 128 coefficients");
        if (one_point && p->count != 1)
            kel__breach(checker, coefficients, "must hold one coefficient on a piece of no width");
        if (p->first != taken || p->count > content->coefficient_count - taken)
            kel__breach(checker, coefficients, "does not follow the coefficients of the piece before");
        taken += p->count;
    }
    if (taken != content->coefficient_count)
        kel__breach(checker, all, "hold another number of coefficients than the curve");
}

static void
check_continuity(kel__checker *checker, const kel_content *content)
{
    const kel__place all = { .key = "continuity" };
    kel__check_there(checker, all, content->continuity, content->continuity_count);
    if (checker->status != KEL_OK)
        return;
    if (content->continuity_count != content->piece_count - 1)
        kel__breach(checker, all, "must have one word for each join between pieces");
    for (size_t i = 0; i < content->continuity_count; i++)
        kel__check_word(checker, all, &kel__continuities, content->continuity[i] + 1);
}

static bool
is_join(const kel_content *content, double t)
{
    for (size_t i = 1; i < content->piece_count; i++)
        if (content->pieces[i].from == t)
            return true;
    return false;
}

static void
check_transitions(kel__checker *checker, const kel_content *content)
{
    kel__check_there(checker, (kel__place){ .key = "transitions" }, content->transitions, content->transition_count);
    for (size_t i = 0; i < content->transition_count && checker->status == KEL_OK; i++) {
        const kel_transition *t = &content->transitions[i];
        const kel__place at = { "transitions", i, "at_K" };
        kel__check_number(checker, at, t->at, KEL__NOT_NEGATIVE);
        kel__check_word(checker, (kel__place){ "transitions", i, "step" }, &kel__step_kinds, (int)t->step);
        if (i > 0 && !(t[-1].at < t->at))
            breach_limit(checker, at, t->at, "lie above the transition before", t[-1].at);
        if (content->pieces[0].from < t->at && t->at < content->pieces[content->piece_count - 1].to &&
            !is_join(content, t->at))
            kel__breach(checker, at, "lies inside a piece, but a transition must be a join");
    }
}

/* ---- curves ---- */

/* The numbers of one curve; the two places are where its coefficients and steps are found in the file. */
static void
check_curve(kel__checker *checker, const kel_content *content, const kel_curve *curve, kel__place coefficients,
            kel__place steps)
{
    kel__check_there(checker, coefficients, curve->coefficients, content->coefficient_count);
    kel__check_there(checker, steps, curve->steps, content->transition_count);
    if (checker->status != KEL_OK)
        return;
    for (size_t j = 0; j < content->coefficient_count; j++)
        kel__check_number(checker, coefficients, curve->coefficients[j], KEL__FINITE);
    for (size_t i = 0; i < content->transition_count; i++) {
        kel__check_number(checker, steps, curve->steps[i], KEL__FINITE);
        if (content->transitions[i].step == KEL_STEP_NONE && curve->steps[i] != 0.0)
            kel__breach(checker, steps, "holds a step at a transition that has none");
    }
}

static void
check_curves(kel__checker *checker, const kel_content *content)
{
    if (checker->status != KEL_OK)
        return;
    check_curve(checker, content, &content->mean, (kel__place){ .key = "chebyshev_per_K" },
                (kel__place){ .key = "length_step" });
    kel__check_there(checker, (kel__place){ .key = "modes" }, content->modes, content->mode_count);
    for (size_t k = 0; k < content->mode_count && checker->status == KEL_OK; k++) {
        const kel_mode *mode = &content->modes[k];
        kel__check_word(checker, (kel__place){ "modes", k, "kind" }, &kel__mode_kinds, (int)mode->kind);
        if (mode->label == NULL || mode->label[0] == '\0')
            kel__breach(checker, (kel__place){ "modes", k, "label" }, "is empty");
        check_curve(checker, content, &mode->curve, (kel__place){ "modes", k, "chebyshev_per_K" },
                    (kel__place){ "modes", k, "length_steps" });
    }
}

/* ---- range ---- */

static void
check_range(kel__checker *checker, const kel_content *content)
{
    const kel__place place = { .key = "range_K" };
    const kel_interval range = content->range;
    if (checker->status != KEL_OK)
        return;
    kel__check_number(checker, place, range.lo, KEL__NOT_NEGATIVE);
    kel__check_number(checker, place, range.hi, KEL__NOT_NEGATIVE);
    if (range.hi < range.lo)
        breach_limit(checker, place, range.hi, "not end below its begin", range.lo);
    /* Outside the pieces there is nothing but the end piece's polynomial going on. */
    const kel_piece *first = &content->pieces[0], *last = &content->pieces[content->piece_count - 1];
    if (range.lo < first->from)
        breach_limit(checker, place, range.lo, "not begin below the first piece", first->from);
    if (range.hi > last->to)
        breach_limit(checker, place, range.hi, "not end above the last piece", last->to);
    const kel__place gaps = { .key = "gaps_K" };
    kel__check_there(checker, gaps, content->gaps, content->gap_count);
    for (size_t i = 0; i < content->gap_count && checker->status == KEL_OK; i++) {
        const kel_interval gap = content->gaps[i];
        if (!(gap.lo < gap.hi) || !(gap.lo >= range.lo) || !(gap.hi <= range.hi))
            kel__breach(checker, gaps, "holds a gap that is empty or leaves the validity range");
        if (i > 0 && !(content->gaps[i - 1].hi <= gap.lo))
            kel__breach(checker, gaps, "holds gaps that overlap or are out of order");
    }
}

kel_status
kel__content_check(const kel_content *content, kel_status code, kel_error *err)
{
    kel__checker checker = { code, err, KEL_OK };
    const kel__place form = { .key = "form" };
    if (content->form == NULL || kel__word_place(&kel__forms, content->form) < 0)
        kel__breach(&checker, form, "is none of 'polynomial', 'piecewise', 'adopted'");
    kel__check_word(&checker, (kel__place){ .key = "base" }, &kel__bases, (int)content->base);
    kel__check_number(&checker, (kel__place){ .key = "reference_temperature_K" }, content->reference_temperature,
                      KEL__NOT_NEGATIVE);
    check_pieces(&checker, content);
    check_continuity(&checker, content);
    check_transitions(&checker, content);
    check_curves(&checker, content);
    check_range(&checker, content);
    kel__check_data(&checker, content);
    return checker.status;
}
