/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Phrases. Every failure stands at the word that caused it, and says what could have stood there. */
#include "phrase.h"

#include "blanks.h"

#include <math.h>
#include <string.h>

enum { LONGEST_NUMBER = 400, SHOWN = 60 };

kel__phrase
kel__phrase_of(const char *text, size_t n, bool comma, size_t line, size_t column)
{
    return (kel__phrase){ text, text + n, text, line, column, comma };
}

static size_t
place(const kel__phrase *phrase, const char *p)
{
    return phrase->line == 0 ? 0 : phrase->column + (size_t)(p - phrase->start);
}

/* "expected X, found 'data'", the data made safe and cut. */
static kel_status
complain(kel_error *err, size_t line, size_t column, const char *expected, const char *found, size_t n)
{
    if (n == 0)
        return kel_error_set(err, KEL_E_SYNTAX, line, column, "expected %s, but the text ends", expected);
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, found, n > SHOWN ? SHOWN : n);
    kel_status status = quoted.failed ? kel_error_set(err, KEL_E_NOMEM, line, column, "out of memory for a message")
                                      : kel_error_set(err, KEL_E_SYNTAX, line, column, "expected %s, found '%s'",
                                                      expected, quoted.bytes);
    kel_text_free(&quoted);
    return status;
}

kel_status
kel__error_at(kel_error *err, const kel_error *inner, size_t line, size_t column)
{
    if (err != NULL) {
        *err = *inner;
        err->line = line;
        err->column = line == 0 ? 0 : inner->column == 0 ? column : column + inner->column - 1;
    }
    return inner->code;
}

void
kel__number_short(char *out, double x)
{
    kel_number_format_digits(out, x, 6);
    char *e = strchr(out, 'e'), *last = e == NULL ? out + strlen(out) : e;
    if (memchr(out, '.', (size_t)(last - out)) == NULL)
        return;
    char *keep = last;
    while (keep[-1] == '0')
        keep--;
    if (keep[-1] == '.')
        keep--;
    memmove(keep, last, strlen(last) + 1);
}

bool
kel__phrase_left(kel__phrase *phrase)
{
    size_t k;
    while (phrase->p < phrase->end && (k = kel__blank(phrase->p, phrase->end)) != 0)
        phrase->p += k;
    return phrase->p < phrase->end;
}

kel__word
kel__phrase_peek(kel__phrase *phrase)
{
    if (!kel__phrase_left(phrase))
        return (kel__word){ phrase->p, 0 };
    static const char apart[] = "+%=[(";
    const char *p = phrase->p + 1;
    if (strchr(apart, *phrase->p) == NULL)
        while (p < phrase->end && strchr(apart, *p) == NULL && kel__blank(p, phrase->end) == 0)
            p++;
    return (kel__word){ phrase->p, (size_t)(p - phrase->p) };
}

bool
kel__phrase_take(kel__phrase *phrase, const char *word)
{
    kel__word next = kel__phrase_peek(phrase);
    if (next.n == 0 || !kel__is_word(next.p, next.n, word))
        return false;
    phrase->p += next.n;
    return true;
}

kel_status
kel__phrase_expected(kel__phrase *phrase, const char *expected, kel_error *err)
{
    kel__word word = kel__phrase_peek(phrase);
    return complain(err, phrase->line, place(phrase, word.p), expected, word.p, word.n);
}

static bool
digit(const char *p, const char *end)
{
    return p < end && *p >= '0' && *p <= '9';
}

/* Bytes of the sign at p: + or - or the Unicode minus; 0 if there is none. */
static size_t
sign(const char *p, const char *end)
{
    if (p < end && (*p == '+' || *p == '-'))
        return 1;
    return end - p >= 3 && memcmp(p, "\xE2\x88\x92", 3) == 0 ? 3 : 0;
}

/* The end of what is meant as a number at p, or p. The number itself is judged by kel_number_read. */
static const char *
number_end(const char *p, const char *end)
{
    const char *q = p + sign(p, end);
    const char *digits = q;
    while (digit(q, end) || (q < end && (*q == '.' || *q == ',')))
        q++;
    if (q == digits)
        return p;
    if (q < end && (*q == 'e' || *q == 'E')) {
        const char *exponent = q + 1 + sign(q + 1, end);
        if (digit(exponent, end)) {
            q = exponent;
            while (digit(q, end))
                q++;
        }
    }
    return q;
}

kel_status
kel__number_text(double *out, const kel_unit *unit, const char *text, size_t n, bool comma, size_t line,
                 size_t column, kel_error *err)
{
    kel_error inner;
    char copy[LONGEST_NUMBER];
    size_t at = line == 0 ? 0 : column;
    *out = NAN;
    if (n > sizeof copy)
        return kel_error_set(err, KEL_E_SYNTAX, line, at, "a number of %zu characters; %d are the limit", n,
                             LONGEST_NUMBER);
    const char *found = n == 0 ? NULL : memchr(text, comma ? '.' : ',', n);
    if (found != NULL)
        return kel_error_set(err, KEL_E_SYNTAX, line, at == 0 ? 0 : at + (size_t)(found - text),
                             comma ? "a point in a number where the file declares `decimal: comma`"
                                   : "a comma in a number; a decimal comma must be declared by `decimal: comma`");
    if (n > 0)
        memcpy(copy, text, n);
    if (comma && n > 0 && (found = memchr(text, ',', n)) != NULL)
        copy[found - text] = '.';
    kel_status status = unit == NULL ? kel_number_read(out, copy, n, &inner)
                                     : kel_unit_read(out, NULL, unit, copy, n, &inner);
    return status == KEL_OK ? status : kel__error_at(err, &inner, line, column);
}

kel_status
kel__phrase_number(double *out, kel__phrase *phrase, const kel_unit *unit, const char *what, kel_error *err)
{
    *out = NAN;
    if (!kel__phrase_left(phrase))
        return kel__phrase_expected(phrase, what, err);
    const char *begin = phrase->p, *stop = number_end(begin, phrase->end);
    if (stop == begin)
        return kel__phrase_expected(phrase, what, err);
    phrase->p = stop;
    return kel__number_text(out, unit, begin, (size_t)(stop - begin), phrase->comma, phrase->line,
                            place(phrase, begin), err);
}

/* The unit may hold brackets of its own, "um/(m.K)". */
kel_status
kel__phrase_bracket(kel__word *unit, kel__phrase *phrase, kel_error *err)
{
    *unit = (kel__word){ phrase->p, 0 };
    bool left = kel__phrase_left(phrase);
    if (!left || (*phrase->p != '[' && *phrase->p != '('))
        return kel__phrase_expected(phrase, "a unit in brackets", err);
    char open = *phrase->p, close = open == '[' ? ']' : ')';
    int depth = 0;
    for (const char *p = phrase->p; p < phrase->end; p++) {
        depth += *p == open;
        depth -= *p == close;
        if (depth == 0) {
            *unit = (kel__word){ phrase->p + 1, (size_t)(p - phrase->p) - 1 };
            kel__trim(&unit->p, &unit->n);
            phrase->p = p + 1;
            return KEL_OK;
        }
    }
    return kel_error_set(err, KEL_E_SYNTAX, phrase->line, place(phrase, phrase->p),
                         "the bracket round the unit is not closed");
}

/* The unit behind a temperature's number: one word; or two where the first is "deg". */
static kel__word
temperature_unit(kel__phrase *phrase)
{
    kel__phrase_left(phrase);
    const char *begin = phrase->p;
    for (int words = 0; words < 2 && kel__phrase_left(phrase); words++) {
        if (words == 1 && !kel__is_word(begin, (size_t)(phrase->p - begin), "deg"))
            break;
        while (phrase->p < phrase->end && kel__blank(phrase->p, phrase->end) == 0)
            phrase->p++;
    }
    kel__word unit = { begin, (size_t)(phrase->p - begin) };
    kel__trim(&unit.p, &unit.n);
    return unit;
}

kel_status
kel__phrase_temperature(double *out, kel__phrase *phrase, kel_error *err)
{
    *out = NAN;
    kel__word word = kel__phrase_peek(phrase);
    if (kel__is_word(word.p, word.n, "RT") || kel__is_word(word.p, word.n, "room") ||
        kel__is_word(word.p, word.n, "ambient"))
        return kel_error_set(err, KEL_E_SYNTAX, phrase->line, place(phrase, word.p),
                             "room temperature is no number: write what the source means by it, for example 20 degC "
                             "or 293.15 K");
    const char *begin = word.p, *stop = word.n == 0 ? begin : number_end(begin, phrase->end);
    if (stop == begin)
        return kel__phrase_expected(phrase, "a temperature with its unit, for example 293.15 K or 20 degC", err);
    phrase->p = stop;
    kel__word name = temperature_unit(phrase);
    if (name.n == 0)
        return kel_error_set(err, KEL_E_UNIT, phrase->line, place(phrase, begin),
                             "the temperature %.*s needs a unit, for example 293 K or 20 degC", (int)(stop - begin),
                             begin);
    kel_unit unit;
    kel_error inner;
    if (kel_unit_parse(&unit, KEL_DIM_TEMPERATURE, name.p, name.n, &inner) != KEL_OK)
        return kel__error_at(err, &inner, phrase->line, place(phrase, name.p));
    return kel__number_text(out, &unit, begin, (size_t)(stop - begin), phrase->comma, phrase->line,
                            place(phrase, begin), err);
}
