/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Shift and steps of published coefficients. A printed expansion that is not zero at its reference is shifted, by
   taking its derivative; where its pieces do not meet, by more than the rounding of their own terms (8 eps of the
   largest), the length steps. Both are said. */
#include <float.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "phrase.h"
#include "published.h"

static const double negligible = 8 * DBL_EPSILON;

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for coefficients");
}

/* Where a declared transition stands in the file. */
static kel__entry
place_of(const kel__published *p, const kel_declared_transition *transition)
{
    for (size_t i = 0; i < p->metadata.entry_count; i++)
        if (p->metadata.entries[i].value == transition->text)
            return p->metadata.entries[i];
    return (kel__entry){ .line = 0 };
}

static void
add_digits(kel_text *text, double x)
{
    char number[KEL_NUMBER_SIZE];
    kel__number_short(number, x);
    kel_text_add(text, number);
}

static kel_status
note_shift(kel__adopt_warnings *warnings, const kel__published *p, kel_error *err)
{
    double reference = p->metadata.reference_temperature;
    size_t i = 0;
    while (i + 1 < p->piece_count && reference >= p->pieces[i + 1].from)
        i++;
    const kel__published_piece *piece = &p->pieces[i];
    kel__twofold x = kel__poly_variable(&p->variable, reference);
    double e = kel__poly_value(piece->c, piece->count, x).hi;
    if (fabs(e) <= negligible * kel__poly_largest(piece->c, piece->count, x))
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "the published expansion is ");
    add_digits(&text, e);
    kel_text_add(&text, " at its reference temperature ");
    kel_text_number(&text, reference);
    kel_text_add(&text, " K; it is shifted by ");
    add_digits(&text, -e);
    kel_status status = kel__adopt_warn(warnings, p->arena, "shifted", piece->line, &text, err);
    kel_text_free(&text);
    return status;
}

static kel_status
note_step(kel__adopt_warnings *warnings, const kel__published *p, double jump, const kel__published_piece *above,
          kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "the published pieces differ by ");
    add_digits(&text, jump);
    kel_text_add(&text, " at ");
    kel_text_number(&text, above->from);
    kel_text_add(&text, " K; taken as a step of the length there");
    kel_status status = kel__adopt_warn(warnings, p->arena, "step", above->line, &text, err);
    kel_text_free(&text);
    return status;
}

/* The published jump of an expansion curve where piece `join` starts. list has room for one more. */
static kel_status
take_jump(kel_declared_transition *list, size_t *count, kel__adopt_warnings *warnings, const kel__published *p,
          size_t join, kel_error *err)
{
    const kel__published_piece *below = &p->pieces[join - 1], *above = &p->pieces[join];
    kel__twofold x = kel__poly_variable(&p->variable, above->from);
    kel__twofold difference = kel__two_sub(kel__poly_value(above->c, above->count, x),
                                           kel__poly_value(below->c, below->count, x));
    double jump = difference.hi, rounding = negligible * fmax(kel__poly_largest(above->c, above->count, x),
                                                              kel__poly_largest(below->c, below->count, x));
    size_t i = 0;
    while (i < *count && list[i].at != above->from)
        i++;
    if (i < *count && list[i].step == KEL_STEP_STATED && !(fabs(list[i].length - jump) <= rounding)) {
        kel__entry entry = place_of(p, &list[i]);
        char number[KEL_NUMBER_SIZE];
        kel__number_short(number, jump);
        return kel_error_set(err, KEL_E_DATA, entry.line, entry.line == 0 ? 0 : entry.column,
                             "the declared step contradicts the published expansion, which steps by %s there", number);
    }
    if (fabs(jump) <= rounding)
        return KEL_OK;
    list[i] = (kel_declared_transition){ above->from, KEL_STEP_STATED, jump, i < *count ? list[i].text : NULL };
    *count += i == *count;
    return note_step(warnings, p, jump, above, err);
}

/* An expansion has its steps itself: a declared one that it does not show contradicts it. A step to be fitted needs
   rows. */
static kel_status
check_declared(const kel_declared_transition *t, const kel__published *p, kel_error *err)
{
    bool join = false, expansion = p->kind == KEL_KIND_EXPANSION;
    for (size_t k = 1; k < p->piece_count; k++)
        join = join || p->pieces[k].from == t->at;
    kel__entry entry = place_of(p, t);
    size_t column = entry.line == 0 ? 0 : entry.column;
    char at[KEL_NUMBER_SIZE];
    kel_number_format(at, t->at);
    if (t->step == KEL_STEP_FITTED && !expansion)
        return kel_error_set(err, KEL_E_DATA, entry.line, column, "the step at %s K cannot be fitted to "
                                                                  "coefficients: state its size, "
                             "as in 'step -8.4e-6'", at);
    if (t->step == KEL_STEP_FITTED || (t->step == KEL_STEP_STATED && expansion && !join))
        return kel_error_set(err, KEL_E_DATA, entry.line, column, "a step is declared at %s K, where the published "
                                                                  "expansion has none", at);
    return KEL_OK;
}

static int
by_temperature(const void *a, const void *b)
{
    const kel_declared_transition *p = a, *q = b;
    return (p->at > q->at) - (p->at < q->at);
}

kel_status
kel__published_steps(kel_declared_transition **out, size_t *count, kel__adopt_warnings *warnings,
                     const kel__published *published,
                     kel_error *err)
{
    const kel__metadata *m = &published->metadata;
    kel_declared_transition *list = kel_arena_take(published->arena, m->transition_count + published->piece_count,
                                                   sizeof *list);
    *out = list;
    *count = m->transition_count;
    if (list == NULL)
        return no_memory(err);
    for (size_t i = 0; i < m->transition_count; i++)
        list[i] = m->transitions[i];
    kel_status status = KEL_OK;
    if (published->kind == KEL_KIND_EXPANSION) {
        status = note_shift(warnings, published, err);
        for (size_t join = 1; join < published->piece_count && status == KEL_OK; join++)
            status = take_jump(list, count, warnings, published, join, err);
    }
    for (size_t i = 0; i < *count && status == KEL_OK; i++)
        status = check_declared(&list[i], published, err);
    qsort(list, *count, sizeof *list, by_temperature);
    return status;
}
