/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From a published polynomial to a record. alpha is what is printed, or the derivative of a printed expansion. A printed expansion that is
   not zero at its reference is thereby shifted; where its pieces do not meet, by more than the rounding of their own terms (8 eps of the
   largest), the length steps there. Declared transitions and the ends of ranges of uncertainty cut pieces in two: the same polynomial on
   each part. */
#include <float.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "published.h"

/* |alpha| of solids stays below 1e-3 1/K, by a factor of ten for most. More is a unit misread. */
static const double largest_coefficient = 1e-3, negligible = 8 * DBL_EPSILON;

/* What is made, in arrays of the arena. */
typedef struct draft {
    kel_transition *transitions; double *steps; size_t transition_count;
    kel_piece *pieces; const kel__published_piece **origins; size_t piece_count;
    double *coefficients; size_t coefficient_count;
} draft;

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for coefficients");
}

/* Adds " NUMBER unit", six digits. */
static void
add_quantity(kel_text *text, double x, int digits, const char *unit)
{
    char number[KEL_NUMBER_SIZE];
    kel_number_format_digits(number, x, digits);
    kel_text_add(text, number);
    kel_text_add(text, unit);
}

static void
add_temperature(kel_text *text, double t)
{
    kel_text_number(text, t);
    kel_text_add(text, " K");
}

static kel_status
note_shift(kel__adopt_warnings *warnings, const kel__published *p, double reference, kel_error *err)
{
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
    add_quantity(&text, e, 6, " at its reference temperature ");
    add_temperature(&text, reference);
    kel_text_add(&text, "; it is shifted by ");
    add_quantity(&text, -e, 6, "");
    kel_status status = kel__adopt_warn(warnings, p->arena, "shifted", piece->line, &text, err);
    kel_text_free(&text);
    return status;
}

static size_t
find_transition(const draft *d, double at)
{
    size_t i = 0;
    while (i < d->transition_count && d->transitions[i].at != at)
        i++;
    return i;
}

/* The published jump at a join of an expansion curve: a step, if it is more than rounding. */
static kel_status
take_jump(draft *d, kel__adopt_warnings *warnings, const kel__published *p, size_t join, kel_error *err)
{
    const kel__published_piece *below = &p->pieces[join - 1], *above = &p->pieces[join];
    kel__twofold x = kel__poly_variable(&p->variable, above->from);
    double jump = kel__two_sub(kel__poly_value(above->c, above->count, x), kel__poly_value(below->c, below->count, x)).hi;
    double largest = fmax(kel__poly_largest(above->c, above->count, x), kel__poly_largest(below->c, below->count, x));
    if (fabs(jump) <= negligible * largest)
        return KEL_OK;
    size_t i = find_transition(d, above->from);
    bool declared = i < d->transition_count;
    if (declared && d->transitions[i].step == KEL_STEP_STATED && !(fabs(d->steps[i] - jump) <= negligible * largest)) {
        char stated[KEL_NUMBER_SIZE], found[KEL_NUMBER_SIZE];
        kel_number_format(stated, d->steps[i]);
        kel_number_format_digits(found, jump, 6);
        return kel_error_set(err, KEL_E_DATA, above->line, above->column, "a step of %s is declared where the published expansion steps by %s",
                             stated, found);
    }
    d->transitions[i] = (kel_transition){ above->from, KEL_STEP_STATED };
    d->steps[i] = jump;
    d->transition_count += !declared;
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "the published pieces differ by ");
    add_quantity(&text, jump, 6, " at ");
    add_temperature(&text, above->from);
    kel_text_add(&text, "; taken as a step of the length there");
    kel_status status = kel__adopt_warn(warnings, p->arena, "step", above->line, &text, err);
    kel_text_free(&text);
    return status;
}

/* An expansion has its steps itself: a declared one that it does not show is a contradiction, as is one to be fitted without rows. */
static kel_status
check_steps(const draft *d, const kel__published *p, kel_error *err)
{
    for (size_t i = 0; i < d->transition_count; i++) {
        bool join = false;
        for (size_t k = 1; k < p->piece_count; k++)
            join = join || p->pieces[k].from == d->transitions[i].at;
        char at[KEL_NUMBER_SIZE];
        kel_number_format(at, d->transitions[i].at);
        if (d->transitions[i].step == KEL_STEP_FITTED)
            return kel_error_set(err, KEL_E_DATA, p->header_line, 1, "the step of the transition at %s K cannot be fitted: %s", at,
                                 p->kind == KEL_KIND_EXPANSION ? "the published expansion has none there" : "coefficients need its size");
        if (p->kind == KEL_KIND_EXPANSION && d->transitions[i].step == KEL_STEP_STATED && !join)
            return kel_error_set(err, KEL_E_DATA, p->header_line, 1, "a step is declared at %s K, where the published expansion has none", at);
    }
    return KEL_OK;
}

static int
by_number(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return (x > y) - (x < y);
}
