/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the numbers of a coefficient file mean: its lines `curve`, `variable`, `centre` and `scale`, and its header. */
#include <math.h>
#include <string.h>

#include "phrase.h"
#include "published.h"

static kel_status
missing(const kel__published *out, const char *what, kel_error *err)
{
    return kel_error_set(err, KEL_E_DATA, out->header_line, 1, "a coefficient file needs a line '# %s' before its "
                                                               "pieces", what);
}

/* NAME [UNIT] behind words that were read. */
static kel_status
unit_behind(kel_unit *unit, kel_dimension dimension, kel__phrase *phrase, kel_error *err)
{
    kel__word name;
    kel_error inner;
    if (!kel__phrase_left(phrase))
        return kel_error_set(err, KEL_E_UNIT, phrase->line, phrase->column,
                             "a unit in brackets is missing, for example %s",
                             dimension == KEL_DIM_TEMPERATURE ? "[K]" : dimension == KEL_DIM_ONE ? "[1e-5]"
                                 : "[1e-6/K]");
    kel_status status = kel__phrase_bracket(&name, phrase, err);
    if (status != KEL_OK)
        return status;
    if (kel_unit_parse(unit, dimension, name.p, name.n, &inner) != KEL_OK)
        return kel__error_at(err, &inner, phrase->line, phrase->column + (size_t)(name.p - phrase->start));
    return kel__phrase_left(phrase) ? kel__phrase_expected(phrase, "nothing behind the unit", err) : KEL_OK;
}

static kel__phrase
phrase_of(const kel__entry *entry)
{
    return kel__phrase_of(entry->value, strlen(entry->value), false, entry->line, entry->column);
}

kel_status
kel__published_kind(kel__published *out, kel_error *err)
{
    if (out->metadata.curve == NULL)
        return missing(out, "curve: coefficient [1e-6/K]' or '# curve: expansion [1e-5]", err);
    kel__phrase phrase = phrase_of(out->metadata.curve);
    out->kind = KEL_KIND_COEFFICIENT;
    if (kel__phrase_take(&phrase, "expansion"))
        out->kind = KEL_KIND_EXPANSION;
    else if (!kel__phrase_take(&phrase, "coefficient"))
        return kel__phrase_expected(&phrase, "coefficient [UNIT] or expansion [UNIT]", err);
    return unit_behind(&out->unit, out->kind == KEL_KIND_EXPANSION ? KEL_DIM_ONE : KEL_DIM_PER_KELVIN, &phrase, err);
}

/* x = (t - centre)/scale in the variable's unit, brought to kelvin. */
kel_status
kel__published_variable(kel__published *out, kel_error *err)
{
    const kel__metadata *m = &out->metadata;
    kel__twofold centre = kel__two(0), scale = kel__two(1);
    kel_unit unit;
    if (m->variable == NULL)
        return missing(out, "variable: T [K]", err);
    kel__phrase phrase = phrase_of(m->variable);
    if (!kel__phrase_take(&phrase, "T") && !kel__phrase_take(&phrase, "temperature"))
        return kel__phrase_expected(&phrase, "T [UNIT] with a unit of temperature", err);
    kel_status status = unit_behind(&unit, KEL_DIM_TEMPERATURE, &phrase, err);
    const kel__entry *c = m->centre, *s = m->variable_scale;
    if (status == KEL_OK && c != NULL)
        status = kel__two_read(&centre, NULL, c->value, strlen(c->value), m->decimal_comma, c->line, c->column, err);
    if (status == KEL_OK && s != NULL) {
        status = kel__two_read(&scale, NULL, s->value, strlen(s->value), m->decimal_comma, s->line, s->column, err);
        if (status == KEL_OK && !(scale.hi > 0))
            status = kel_error_set(err, KEL_E_RANGE, s->line, s->line == 0 ? 0 : s->column,
                                   "the variable's scale must be above zero");
    }
    out->variable = (kel__variable){ kel__two_in_unit(centre, &unit), kel__two_mul(scale, kel__two_unit(&unit)) };
    return status;
}

static kel_status
header_power(kel__layout *layout, size_t column, kel__phrase *phrase, const kel_cell *cell, size_t line, kel_error *err)
{
    double power;
    kel_status status = kel__phrase_number(&power, phrase, NULL, "the power's number, as in 'power 0'", err);
    if (status != KEL_OK)
        return status;
    if (kel__phrase_left(phrase))
        return kel__phrase_expected(phrase, "nothing behind the power's number (the unit stands in `curve`)", err);
    if (!(power >= 0 && power <= KEL__LARGEST_POWER) || power != floor(power))
        return kel_error_set(err, KEL_E_DATA, line, cell->column, "a power is a whole number from 0 to %d",
                             KEL__LARGEST_POWER);
    size_t k = (size_t)power;
    if (layout->power[k] != SIZE_MAX)
        return kel_error_set(err, KEL_E_DATA, line, cell->column, "a second column 'power %zu'", k);
    layout->power[k] = column;
    layout->powers = k + 1 > layout->powers ? k + 1 : layout->powers;
    return KEL_OK;
}

static kel_status
header_bound(size_t *column, kel_unit *unit, size_t i, kel__phrase *phrase, const kel_cell *cell, size_t line,
             kel_error *err)
{
    if (*column != SIZE_MAX)
        return kel_error_set(err, KEL_E_DATA, line, cell->column, "a second column of the same name");
    *column = i;
    return unit_behind(unit, KEL_DIM_TEMPERATURE, phrase, err);
}

kel_status
kel__published_header(kel__layout *layout, const kel__sheet_row *header, kel_error *err)
{
    layout->from = layout->to = SIZE_MAX;
    layout->powers = 0;
    for (size_t k = 0; k <= KEL__LARGEST_POWER; k++)
        layout->power[k] = SIZE_MAX;
    for (size_t i = 0; i < header->count; i++) {
        const kel_cell *cell = &header->cells[i];
        kel__phrase phrase = kel__phrase_of(cell->bytes, cell->size, false, header->line, cell->column);
        kel_status status;
        if (kel__phrase_take(&phrase, "from"))
            status = header_bound(&layout->from, &layout->from_unit, i, &phrase, cell, header->line, err);
        else if (kel__phrase_take(&phrase, "to"))
            status = header_bound(&layout->to, &layout->to_unit, i, &phrase, cell, header->line, err);
        else if (kel__phrase_take(&phrase, "power"))
            status = header_power(layout, i, &phrase, cell, header->line, err);
        else
            status = kel__phrase_expected(&phrase, "a header cell 'from [K]', 'to [K]' or 'power 0'", err);
        if (status != KEL_OK)
            return status;
    }
    if (layout->from == SIZE_MAX || layout->to == SIZE_MAX)
        return kel_error_set(err, KEL_E_DATA, header->line, 1, "the header needs the columns 'from [K]' and 'to [K]'");
    for (size_t k = 0; k < layout->powers || k == 0; k++)
        if (layout->power[k] == SIZE_MAX)
            return kel_error_set(err, KEL_E_DATA, header->line, 1, "the header lacks 'power %zu' (a power that is "
                                                                   "not used is a column of 0)", k);
    return KEL_OK;
}
