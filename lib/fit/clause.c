/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The clause of a stated uncertainty:

       size [option]...    size:   A %  |  B [UNIT]  |  A % + B [UNIT]          (two parts add in quadrature)
                           option: k=NUMBER | limits | from T to T | shared | independent

   The result is standard (k = 1): an expanded uncertainty is divided by its k, limits are the half-width of a
   rectangle and divided by sqrt 3 (JCGM 100:2008, 4.3.7). Options may stand in any order behind the size, each once. */
#include "clause.h"

#include <math.h>
#include <string.h>

#include "phrase.h"

enum { HAS_FACTOR = 1, HAS_RANGE = 2, HAS_SORT = 4 };

static kel_status
fail_at(const kel__phrase *phrase, const char *p, kel_status code, const char *message, kel_error *err)
{
    size_t column = phrase->line == 0 ? 0 : phrase->column + (size_t)(p - phrase->start);
    return kel_error_set(err, code, phrase->line, column, "%s", message);
}

/* A number above zero; `begin` is where it stood. */
static kel_status
positive(double *out, const char **begin, kel__phrase *phrase, const kel_unit *unit, const char *what, kel_error *err)
{
    kel__phrase_left(phrase);
    *begin = phrase->p;
    kel_status status = kel__phrase_number(out, phrase, unit, what, err);
    if (status == KEL_OK && !(*out > 0))
        status = fail_at(phrase, *begin, KEL_E_RANGE, "an uncertainty and its factor k must be above zero", err);
    return status;
}

/* B [UNIT] with phrase at B. The number is read again once its unit is known, so that both are rounded together. */
static kel_status
absolute_part(kel__clause *out, kel__phrase *phrase, kel_error *err)
{
    kel__phrase ahead = *phrase;
    const char *begin;
    double size;
    kel__word name;
    kel_unit unit;
    kel_error inner;
    kel_status status = positive(&size, &begin, &ahead, NULL, "a number with its unit in brackets", err);
    if (status != KEL_OK)
        return status;
    if (!kel__phrase_left(&ahead) || (*ahead.p != '[' && *ahead.p != '('))
        return kel__phrase_expected(&ahead, "% or a unit in brackets, for example 2 % or 0.1 [1e-6/K]", err);
    if ((status = kel__phrase_bracket(&name, &ahead, err)) != KEL_OK)
        return status;
    if (kel_unit_parse_any(&unit, name.p, name.n, &inner) != KEL_OK)
        return kel__error_at(err, &inner, phrase->line, phrase->column + (size_t)(name.p - phrase->start));
    if (unit.dimension != KEL_DIM_PER_KELVIN && unit.dimension != KEL_DIM_ONE)
        return fail_at(phrase, name.p, KEL_E_UNIT, "an uncertainty is in a unit of coefficients (1e-6/K) or of "
                                                   "expansion (1e-5, %)", err);
    if ((status = kel__phrase_number(&out->absolute, phrase, &unit, "a number", err)) != KEL_OK)
        return status;
    out->dimension = unit.dimension;
    *phrase = ahead;
    return KEL_OK;
}

static kel_status
size_of(kel__clause *out, kel__phrase *phrase, kel_error *err)
{
    static const char expected[] = "an uncertainty: A %, B [UNIT] or A % + B [UNIT]";
    kel__phrase ahead = *phrase;
    const char *begin;
    double percentage;
    kel_status status = positive(&percentage, &begin, &ahead, NULL, expected, err);
    if (status != KEL_OK)
        return status;
    if (!kel__phrase_take(&ahead, "%"))
        return absolute_part(out, phrase, err);
    kel_unit percent;
    if ((status = kel_unit_parse(&percent, KEL_DIM_ONE, "%", 1, err)) != KEL_OK ||
        (status = kel__phrase_number(&out->relative, phrase, &percent, expected, err)) != KEL_OK)
        return status;
    *phrase = ahead;
    return kel__phrase_take(phrase, "+") ? absolute_part(out, phrase, err) : KEL_OK;
}

static kel_status
range_of(kel__clause *out, kel__phrase *phrase, kel_error *err)
{
    kel__phrase_left(phrase);
    const char *begin = phrase->p;
    kel_status status = kel__phrase_temperature(&out->lo, phrase, err);
    if (status != KEL_OK)
        return status;
    if (!kel__phrase_take(phrase, "to"))
        return kel__phrase_expected(phrase, "'to' and the upper temperature", err);
    if ((status = kel__phrase_temperature(&out->hi, phrase, err)) != KEL_OK)
        return status;
    if (!(out->lo < out->hi))
        return fail_at(phrase, begin, KEL_E_DATA, "the range must run from the lower to the higher temperature", err);
    return KEL_OK;
}

/* *factor: by which the size is divided. */
static kel_status
option(kel__clause *out, double *factor, unsigned *has, bool lot, kel__phrase *phrase, kel_error *err)
{
    const char *word = kel__phrase_peek(phrase).p, *begin;
    unsigned had = *has;
    kel_status status = KEL_OK;
    if (kel__phrase_take(phrase, "k")) {
        if (!kel__phrase_take(phrase, "="))
            return kel__phrase_expected(phrase, "'=' as in k=2", err);
        status = positive(factor, &begin, phrase, NULL, "the coverage factor, for example k=2", err);
        *has |= HAS_FACTOR;
    } else if (kel__phrase_take(phrase, "limits")) {
        *factor = sqrt(3.0);
        *has |= HAS_FACTOR;
    } else if (kel__phrase_take(phrase, "from")) {
        status = range_of(out, phrase, err);
        *has |= HAS_RANGE;
    } else if (kel__phrase_take(phrase, "shared") || kel__phrase_take(phrase, "independent")) {
        if (lot)
            return fail_at(phrase, word, KEL_E_SYNTAX, "a lot spread is neither shared nor independent: leave the "
                                                       "word out", err);
        out->independent = *word == 'i' || *word == 'I';
        *has |= HAS_SORT;
    } else {
        return kel__phrase_expected(phrase, lot ? "k=2, limits, or from T to T"
                                    : "k=2, limits, from T to T, shared or independent", err);
    }
    if (status == KEL_OK && *has == had)
        status = fail_at(phrase, word, KEL_E_SYNTAX, "a second word of the same sort (one of k=2 and limits, one of "
                         "shared and independent, one range)", err);
    return status;
}

kel_status
kel__clause_parse(kel__clause *out, const kel__entry *entry, bool lot, bool comma, kel_error *err)
{
    *out = (kel__clause){ .lo = -INFINITY, .hi = INFINITY, .text = entry->value, .line = entry->line,
                          .column = entry->column,
                          .dimension = KEL_DIM_PER_KELVIN };
    kel__phrase phrase = kel__phrase_of(entry->value, strlen(entry->value), comma, entry->line, entry->column);
    double factor = 1;
    unsigned has = 0;
    kel_status status = size_of(out, &phrase, err);
    while (status == KEL_OK && kel__phrase_left(&phrase))
        status = option(out, &factor, &has, lot, &phrase, err);
    out->relative /= factor;
    out->absolute /= factor;
    return status;
}

kel_status
kel__transition_parse(kel_declared_transition *out, const kel__entry *entry, bool comma, kel_error *err)
{
    *out = (kel_declared_transition){ .step = KEL_STEP_NONE, .text = entry->value };
    kel__phrase phrase = kel__phrase_of(entry->value, strlen(entry->value), comma, entry->line, entry->column), before;
    kel_status status = kel__phrase_temperature(&out->at, &phrase, err);
    if (status != KEL_OK || !kel__phrase_left(&phrase))
        return status;
    if (!kel__phrase_take(&phrase, "step"))
        return kel__phrase_expected(&phrase, "nothing or 'step' behind the temperature", err);
    out->step = KEL_STEP_FITTED;
    if (!kel__phrase_left(&phrase))
        return KEL_OK;
    out->step = KEL_STEP_STATED;
    before = phrase;
    const char *begin = phrase.p;
    if ((status = kel__phrase_number(&out->length, &phrase, NULL, "the step of the length, L/L0, for example -8.4e-6",
                                     err)) != KEL_OK)
        return status;
    if (kel__phrase_left(&phrase)) {
        kel__word name;
        kel_unit unit;
        kel_error inner;
        if ((status = kel__phrase_bracket(&name, &phrase, err)) != KEL_OK)
            return status;
        if (kel_unit_parse(&unit, KEL_DIM_ONE, name.p, name.n, &inner) != KEL_OK)
            return kel__error_at(err, &inner, entry->line, entry->column + (size_t)(name.p - phrase.start));
        if (kel__phrase_left(&phrase))
            return kel__phrase_expected(&phrase, "nothing behind the step", err);
        if ((status = kel__phrase_number(&out->length, &before, &unit, "a number", err)) != KEL_OK)
            return status;
    }
    if (!(fabs(out->length) < 1))
        return fail_at(&phrase, begin, KEL_E_RANGE, "a step of the length must be below the length itself", err);
    return KEL_OK;
}
