/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The independent standard uncertainty of a row:

       u^2 = u_column^2 + u_metadata^2,     each with an absolute part and a part relative to the curve's value.

   `uncertainty [%]` beside coefficients is relative; beside expansions it is absolute, an expansion in per cent. The
   metadata's clause is the one whose range holds the row's temperature (of an interval its upper end); where two
   ranges meet, the colder one. */
#include "table_inner.h"

#include <math.h>
#include <string.h>

static kel_dimension
dimension_of(kel_kind kind)
{
    return kind == KEL_KIND_EXPANSION ? KEL_DIM_ONE : KEL_DIM_PER_KELVIN;
}

static const kel__clause *
clause_at(const kel__metadata *m, double t)
{
    const kel__clause *best = NULL;
    for (size_t i = 0; i < m->uncertainty_count; i++) {
        const kel__clause *c = &m->uncertainty[i];
        if (c->independent && t >= c->lo && t <= c->hi && (best == NULL || c->lo < best->lo))
            best = c;
    }
    return best;
}

static kel_status
from_column(kel_observation *o, const kel_table *t, const kel__file_column *u, kel__cell cell, kel_error *err)
{
    double printed;
    kel_status status = kel__cell_number(&printed, NULL, &cell, &u->heading.unit, t->inner->metadata.decimal_comma,
                                         err);
    if (status != KEL_OK)
        return status;
    /* Tables that are written out from a curve state 0 with the zero at the reference, which is no observation. */
    if (printed == 0 && o->kind == KEL_KIND_EXPANSION && o->from == o->to)
        return KEL_OK;
    if (!(printed > 0)) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "an uncertainty of ");
        kel__quote_into(&text, cell.p, cell.n);
        kel_text_add(&text, ": it must be above zero; an empty cell says that none is stated");
        return kel__fail(err, KEL_E_RANGE, cell.line, cell.column, &text);
    }
    *(u->relative ? &o->u_relative : &o->u_absolute) = printed / u->heading.divisor;
    o->u_stated = true;
    return KEL_OK;
}

kel_status
kel__row_uncertainty(kel_observation *o, const kel_table *t, const kel__file_column *c, const kel__printed *cells,
                     unsigned *marks,
                     kel_error *err)
{
    const struct kel__table *in = t->inner;
    if (c->uncertainty != KEL__NONE) {
        kel__cell cell = kel__cell_at(cells, c->uncertainty);
        *marks |= cell.marks;
        kel_status status = cell.empty ? KEL_OK : from_column(o, t, &in->columns[c->uncertainty], cell, err);
        if (status != KEL_OK)
            return status;
    }
    const kel__clause *clause = clause_at(&in->metadata, o->to);
    if (clause == NULL)
        return KEL_OK;
    if (clause->relative > 0)
        o->u_relative = hypot(o->u_relative, clause->relative);
    bool absolute = clause->absolute > 0 && clause->dimension == dimension_of(o->kind);
    if (absolute)
        o->u_absolute = hypot(o->u_absolute, clause->absolute);
    o->u_stated = o->u_stated || clause->relative > 0 || absolute;
    return KEL_OK;
}

kel_status
kel__clause_dimensions(const kel_table *t, kel_error *err)
{
    const kel__metadata *m = &t->inner->metadata;
    for (size_t i = 0; i < m->uncertainty_count; i++) {
        const kel__clause *c = &m->uncertainty[i];
        bool met = c->absolute == 0;
        for (size_t k = 0; k < t->column_count; k++)
            met = met || dimension_of(t->columns[k].kind) == c->dimension;
        if (met)
            continue;
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "`uncertainty: ");
        kel_text_quote(&text, c->text, strlen(c->text));
        kel_text_printf(&text, "` is in a unit of %s, but what is fitted is of kind %s",
                        c->dimension == KEL_DIM_ONE ? "expansion" : "coefficients", kel_kind_name(t->columns[0].kind));
        return kel__fail(err, KEL_E_UNIT, c->line, c->line == 0 ? 0 : c->column, &text);
    }
    return KEL_OK;
}
