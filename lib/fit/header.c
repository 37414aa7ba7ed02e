/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Heads of columns. The unit is the last bracket, square or round, and may hold brackets itself; what stands before
   it is the quantity, and behind a colon the label of its series.

   A coefficient of thermal expansion is in one book the slope at T, in the next the mean from a reference, and
   standards themselves disagree (IEC 60050-561 means the mean, ISO 11359-2 has both). So the bare name is refused;
   with a word that settles it, it is taken. */
#include "header.h"

#include "blanks.h"

#include <math.h>
#include <string.h>

enum { SHOWN = 60 };

typedef struct quantity_word { const char *word; kel__quantity quantity; } quantity_word;

static const quantity_word words[] = {
    { "temperature", KEL__TEMPERATURE }, { "t", KEL__TEMPERATURE }, { "temp", KEL__TEMPERATURE },
        { "temp.", KEL__TEMPERATURE },
    { "from", KEL__FROM }, { "to", KEL__TO },
    { "interval", KEL__INTERVAL }, { "temperature interval", KEL__INTERVAL },
    { "expansion", KEL__EXPANSION }, { "linear expansion", KEL__EXPANSION }, { "thermal expansion", KEL__EXPANSION },
    { "linear thermal expansion", KEL__EXPANSION }, { "thermal strain", KEL__EXPANSION },
    { "dL/L0", KEL__EXPANSION }, { "dL/L", KEL__EXPANSION }, { "(L-L0)/L0", KEL__EXPANSION },
    { "\xCE\x94L/L0", KEL__EXPANSION }, { "\xCE\x94L/L", KEL__EXPANSION },          /* Greek capital delta */
    { "\xE2\x88\x86L/L0", KEL__EXPANSION }, { "\xE2\x88\x86L/L", KEL__EXPANSION },  /* increment sign */
    { "contraction", KEL__CONTRACTION }, { "linear contraction", KEL__CONTRACTION },
        { "thermal contraction", KEL__CONTRACTION },
    { "linear thermal contraction", KEL__CONTRACTION },
    { "uncertainty", KEL__UNCERTAINTY }, { "standard uncertainty", KEL__UNCERTAINTY }, { "u", KEL__UNCERTAINTY },
    { "source", KEL__SOURCE }, { "status", KEL__STATUS },
    { "reservations", KEL__RESERVATIONS }, /* of the tables of answers that kelspan writes */
};

/* Names of coefficients. Those that stand alone mean the instantaneous one; the others need a word that says which. */
static const struct { const char *word; bool alone; } nouns[] = {
    { "coefficient", true }, { "alpha", true }, { "\xCE\xB1", true },
    { "CTE", false }, { "coefficient of thermal expansion", false },
        { "coefficient of linear thermal expansion", false },
    { "coefficient of linear expansion", false }, { "coefficient of expansion", false },
        { "expansion coefficient", false },
    { "thermal expansion coefficient", false }, { "linear expansion coefficient", false },
    { "linear thermal expansion coefficient", false }, { "thermal expansivity", false }, { "expansivity", false },
};

static const quantity_word adjectives[] = {
    { "instantaneous", KEL__COEFFICIENT }, { "tangent", KEL__COEFFICIENT }, { "differential", KEL__COEFFICIENT },
    { "mean", KEL__MEAN }, { "average", KEL__MEAN }, { "secant", KEL__MEAN },
};

/* What kelspan writes for each quantity, its dimension, and an example with a unit. */
static const struct { const char *name, *example; kel_dimension dimension; } quantities[] = {
    [KEL__NOTHING] = { "", NULL, 0 },
    [KEL__TEMPERATURE] = { "temperature", "temperature [K] or temperature [degC]", KEL_DIM_TEMPERATURE },
    [KEL__FROM] = { "from", "from [K] or from [degC]", KEL_DIM_TEMPERATURE },
    [KEL__TO] = { "to", "to [K] or to [degC]", KEL_DIM_TEMPERATURE },
    [KEL__INTERVAL] = { "interval", "interval [K] or interval [degC]", KEL_DIM_TEMPERATURE },
    [KEL__COEFFICIENT] = { "coefficient", "coefficient [1e-6/K]", KEL_DIM_PER_KELVIN },
    [KEL__MEAN] = { "mean coefficient", "mean coefficient [1e-6/K]", KEL_DIM_PER_KELVIN },
    [KEL__EXPANSION] = { "expansion", "expansion [%] or expansion [1e-5]", KEL_DIM_ONE },
    [KEL__CONTRACTION] = { "contraction", "contraction [%] or contraction [1e-5]", KEL_DIM_ONE },
    [KEL__UNCERTAINTY] = { "uncertainty", "uncertainty [1e-6/K] or uncertainty [%]", 0 },
    [KEL__SOURCE] = { "source", NULL, 0 },
    [KEL__STATUS] = { "status", NULL, 0 },
    [KEL__RESERVATIONS] = { "reservations", NULL, 0 },
};

const char *
kel__quantity_name(kel__quantity quantity)
{
    return quantities[quantity].name;
}

/* An error with the head, or a part of it, in its message; format has one %s for it. */
static kel_status
complain(kel_error *err, kel_status code, size_t line, size_t column, kel__word data, const char *before,
         const char *behind)
{
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, data.p, data.n > SHOWN ? SHOWN : data.n);
    const char *shown = quoted.bytes == NULL ? "" : quoted.bytes;
    kel_status status = quoted.failed
        ? kel_error_set(err, KEL_E_NOMEM, line, column, "out of memory for a message")
        : kel_error_set(err, code, line, line == 0 ? 0 : column, "%s'%s'%s", before, shown, behind);
    kel_text_free(&quoted);
    return status;
}

/* Splits off the last bracket. False if the head ends in none. */
static bool
take_bracket(kel__word *unit, kel__word *rest)
{
    const char *p = rest->p, *end = p + rest->n;
    if (rest->n == 0 || (end[-1] != ']' && end[-1] != ')'))
        return false;
    char close = end[-1], open = close == ']' ? '[' : '(';
    int depth = 0;
    for (const char *q = end; q-- > p;) {
        depth += (*q == close) - (*q == open);
        if (depth == 0) {
            *unit = (kel__word){ q + 1, (size_t)(end - q) - 2 };
            rest->n = (size_t)(q - p);
            kel__trim(&unit->p, &unit->n);
            kel__trim(&rest->p, &rest->n);
            return true;
        }
    }
    return false;
}

/* The text between round brackets, or the text itself. */
static kel__word
without_round(kel__word w)
{
    kel__trim(&w.p, &w.n);
    if (w.n >= 2 && w.p[0] == '(' && w.p[w.n - 1] == ')') {
        w.p++;
        w.n -= 2;
        kel__trim(&w.p, &w.n);
    }
    return w;
}

static bool
is_k(kel__word w)
{
    return w.n >= 2 && (w.p[0] == 'k' || w.p[0] == 'K') && memchr(w.p, '=', w.n) != NULL;
}

/* `k=2` behind an uncertainty, bare or in round brackets: *number is what stands behind the sign. */
static bool
take_factor(kel__word *number, kel__word *name)
{
    const char *p = name->p, *end = p + name->n;
    for (const char *q = p + 1; q < end; q++) {
        if (q[-1] != ' ' && q[-1] != '\t' && *q != '(')
            continue;
        kel__word w = without_round((kel__word){ q, (size_t)(end - q) });
        if (!is_k(w))
            continue;
        const char *sign = memchr(w.p, '=', w.n);
        kel__word between = { w.p + 1, (size_t)(sign - w.p) - 1 };
        kel__trim(&between.p, &between.n);
        if (between.n != 0)
            continue;
        *number = (kel__word){ sign + 1, w.n - (size_t)(sign - w.p) - 1 };
        kel__trim(&number->p, &number->n);
        name->n = (size_t)(q - p);
        kel__trim(&name->p, &name->n);
        return true;
    }
    return false;
}

/* An uncertainty that is not the plain word: `uncertainty k=2`, `limits`. Leaves quantity alone if it is none of
   these. */
static kel_status
parse_uncertainty(kel__heading *out, kel__word name, size_t line, size_t column, kel_error *err)
{
    out->divisor = 1;
    if (kel__is_word(name.p, name.n, "limits") || kel__is_word(name.p, name.n, "uncertainty limits")) {
        out->quantity = KEL__UNCERTAINTY;
        out->limits = true;
        out->divisor = sqrt(3.0);
        return KEL_OK;
    }
    kel__word base = name;
    bool has = take_factor(&out->factor, &base), expanded = kel__is_word(base.p, base.n, "expanded uncertainty");
    if (expanded && !has)
        return complain(err, KEL_E_SYNTAX, line, column, name, "",
                        " does not say by which factor: write for example `uncertainty k=2`");
    if (!has || (!expanded && !kel__is_word(base.p, base.n, "uncertainty") && !kel__is_word(base.p, base.n, "u")))
        return KEL_OK;
    out->quantity = KEL__UNCERTAINTY;
    if (kel_number_read(&out->divisor, out->factor.p, out->factor.n, NULL) != KEL_OK || !(out->divisor > 0))
        return complain(err, KEL_E_SYNTAX, line, column, name, "the coverage factor in ",
                        " must be a number above zero, as in k=2");
    return KEL_OK;
}

static kel_status
parse_coefficient(kel__heading *out, kel__word name, size_t line, size_t column, kel_error *err)
{
    kel__word noun = name;
    for (size_t i = 0; i < sizeof adjectives / sizeof adjectives[0]; i++) {
        size_t n = strlen(adjectives[i].word);
        if (name.n > n && kel__is_word(name.p, n, adjectives[i].word) && kel__blank(name.p + n, name.p + name.n) != 0) {
            out->quantity = adjectives[i].quantity;
            noun = (kel__word){ name.p + n, name.n - n };
        }
    }
    for (size_t i = 0; i < sizeof nouns / sizeof nouns[0]; i++) {
        if (!kel__is_word(noun.p, noun.n, nouns[i].word))
            continue;
        if (out->quantity == KEL__NOTHING && !nouns[i].alone)
            return complain(err, KEL_E_SYNTAX, line, column, name, "",
                            " can mean two things: write `coefficient` for the instantaneous one "
                            "(the slope at T) or `mean coefficient` for the mean between two temperatures");
        if (out->quantity == KEL__NOTHING)
            out->quantity = KEL__COEFFICIENT;
        return KEL_OK;
    }
    out->quantity = KEL__NOTHING;
    return KEL_OK;
}

static kel_status
parse_quantity(kel__heading *out, kel__word name, size_t line, size_t column, kel_error *err)
{
    for (size_t i = 0; i < sizeof words / sizeof words[0]; i++)
        if (kel__is_word(name.p, name.n, words[i].word))
            out->quantity = words[i].quantity;
    kel_status status = KEL_OK;
    if (out->quantity == KEL__NOTHING)
        status = parse_uncertainty(out, name, line, column, err);
    if (status == KEL_OK && out->quantity == KEL__NOTHING)
        status = parse_coefficient(out, name, line, column, err);
    if (status == KEL_OK && out->quantity == KEL__NOTHING)
        status = complain(err, KEL_E_SYNTAX, line, column, name, "",
                          " is no quantity of a table: temperature, from, to, interval, coefficient, "
                          "mean coefficient, expansion, contraction, uncertainty, source, status or "
                          "reservations");
    return status;
}

static kel_status
parse_unit(kel__heading *out, bool has, size_t line, size_t column, const char *head, kel_error *err)
{
    kel__quantity q = out->quantity;
    kel__word text = out->unit_text;
    if (quantities[q].example == NULL)
        return !has ? KEL_OK : complain(err, KEL_E_UNIT, line, column, text, "a column of words has no unit, found ",
                                        "");
    if (text.n == 0)
        return kel_error_set(err, KEL_E_UNIT, line, line == 0 ? 0 : column,
                             "the column '%s' has no unit: write for example %s",
                             quantities[q].name, quantities[q].example);
    kel_error inner;
    kel_status status = q == KEL__UNCERTAINTY ? kel_unit_parse_any(&out->unit, text.p, text.n, &inner)
                                              : kel_unit_parse(&out->unit, quantities[q].dimension, text.p, text.n,
                                                               &inner);
    return status == KEL_OK ? KEL_OK : kel__error_at(err, &inner, line, column + (size_t)(text.p - head));
}

kel_status
kel__heading_parse(kel__heading *out, const char *head, size_t n, size_t line, size_t column, kel_error *err)
{
    *out = (kel__heading){ .quantity = KEL__NOTHING, .divisor = 1 };
    kel__word name = { head, n };
    kel__trim(&name.p, &name.n);
    if (name.n == 0)
        return KEL_OK;
    column += (size_t)(name.p - head);
    head = name.p;
    bool has = take_bracket(&out->unit_text, &name);
    const char *colon = memchr(name.p, ':', name.n);
    if (colon != NULL) {
        out->label = (kel__word){ colon + 1, name.n - (size_t)(colon - name.p) - 1 };
        name.n = (size_t)(colon - name.p);
        kel__trim(&out->label.p, &out->label.n);
    }
    kel_status status = parse_quantity(out, name, line, column, err);
    if (status == KEL_OK && out->label.n != 0 && !kel__is_value(out->quantity) && out->quantity != KEL__UNCERTAINTY)
        status = complain(err, KEL_E_SYNTAX, line, column, out->label,
                          "only columns of values and uncertainties carry the label of a series, found ",
                          "");
    return status == KEL_OK ? parse_unit(out, has, line, column, head, err) : status;
}

kel_status
kel__heading_option(kel__heading *out, kel__word *name, const char *text, kel_error *err)
{
    /* The sign that ends the quantity follows a bracket; columns of words have none. */
    const char *sign = NULL;
    for (const char *p = text; *p != '\0' && sign == NULL; p++) {
        kel__word before = { text, (size_t)(p - text) };
        kel__trim(&before.p, &before.n);
        if (*p == '=' && before.n > 0 && (before.p[before.n - 1] == ']' || before.p[before.n - 1] == ')'))
            sign = p;
    }
    if (sign == NULL)
        sign = strchr(text, '=');
    *name = (kel__word){ NULL, 0 };
    if (sign != NULL)
        *name = (kel__word){ sign + 1, strlen(sign + 1) };
    if (sign != NULL)
        kel__trim(&name->p, &name->n);
    if (name->n == 0)
        return complain(err, KEL_E_ARGUMENT, 0, 0, (kel__word){ text, strlen(text) }, "column ",
                        ": write 'QUANTITY [UNIT]=NAME-OR-NUMBER', for example 'temperature [K]=T' or 'coefficient "
                        "[1e-6/K]=2'");
    kel_status status = kel__heading_parse(out, text, (size_t)(sign - text), 0, 0, err);
    if (status == KEL_OK && out->quantity == KEL__NOTHING)
        status = complain(err, KEL_E_ARGUMENT, 0, 0, (kel__word){ text, strlen(text) }, "column ",
                          " names no quantity");
    return status;
}
