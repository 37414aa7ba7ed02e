/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The stated uncertainty of published coefficients as modes. A percentage is one error common to the whole curve, its
   size stated by range: m(T) = r(T) alpha(T), and r times the steps; an absolute part is m(T) = s(T), a constant by
   range. Each is a single mode, because ranges state the size of one error, not several errors. Lot spread likewise,
   marked as such. Where no range reaches, a mode is zero: that stretch has nothing stated, and it is said. */
#include <math.h>
#include <string.h>

#include "phrase.h"
#include "published.h"

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for coefficients");
}

size_t
kel__published_bounds(double *at, const kel__published *published)
{
    const kel__metadata *m = &published->metadata;
    double lo = published->pieces[0].from, hi = published->pieces[published->piece_count - 1].to;
    size_t n = 0;
    for (size_t i = 0; i < m->uncertainty_count + m->lot_count; i++) {
        const kel__clause *c = i < m->uncertainty_count ? &m->uncertainty[i] : &m->lot[i - m->uncertainty_count];
        if (c->lo > lo && c->lo < hi)
            at[n++] = c->lo;
        if (c->hi > lo && c->hi < hi)
            at[n++] = c->hi;
    }
    return n;
}

static kel_status
check_clause(const kel__clause *c, kel_error *err)
{
    size_t column = c->line == 0 ? 0 : c->column;
    if (c->independent)
        return kel_error_set(err, KEL_E_DATA, c->line, column, "coefficients have no rows that could err "
                                                               "independently: leave the word "
                             "`independent` out, the error is shared by the whole curve");
    if (c->absolute > 0 && c->dimension != KEL_DIM_PER_KELVIN)
        return kel_error_set(err, KEL_E_UNIT, c->line, column, "an absolute uncertainty of coefficients is stated in "
                                                               "1/K, for example "
                             "0.1 [1e-6/K], not in a unit of expansion");
    return KEL_OK;
}

static double
size_of(const kel__clause *c, bool relative)
{
    return relative ? c->relative : c->absolute;
}

/* The size stated at t. A range holds lo < t <= hi, as a step belongs to an interval that ends at it. */
static double
size_at(const kel__clause *clauses, size_t count, bool relative, double t)
{
    for (size_t i = 0; i < count; i++)
        if (t > clauses[i].lo && t <= clauses[i].hi)
            return size_of(&clauses[i], relative);
    return 0;
}

/* "alloy.csv relative 2 %", "lot spread absolute 1e-07 1/K"; sizes of several ranges with commas. */
static const char *
label_of(const kel__published *p, const kel__clause *clauses, size_t count, bool relative, bool lot)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, lot ? "lot spread" : p->name);
    kel_text_add(&text, relative ? " relative " : " absolute ");
    bool any = false;
    for (size_t i = 0; i < count; i++) {
        double size = size_of(&clauses[i], relative);
        if (!(size > 0))
            continue;
        char number[KEL_NUMBER_SIZE];
        kel__number_short(number, relative ? 100 * size : size);
        kel_text_add(&text, any ? ", " : "");
        kel_text_add(&text, number);
        kel_text_add(&text, relative ? " %" : " 1/K");
        any = true;
    }
    const char *label = text.failed ? NULL : kel_arena_string(p->arena, text.bytes);
    kel_text_free(&text);
    return label;
}

static kel_status
add_mode(kel_mode *modes, size_t *n, const kel_content *content, const kel__published *p, const kel__clause *clauses,
         size_t count,
         bool relative, bool lot, kel_error *err)
{
    bool any = false;
    for (size_t i = 0; i < count; i++)
        any = any || size_of(&clauses[i], relative) > 0;
    if (!any)
        return KEL_OK;
    any = false;               /* from here on: does it reach a piece? */
    double *c = kel_arena_take(p->arena, content->coefficient_count, sizeof *c);
    double *steps = kel_arena_take(p->arena, content->transition_count, sizeof *steps);
    const char *label = label_of(p, clauses, count, relative, lot);
    if (c == NULL || steps == NULL || label == NULL)
        return no_memory(err);
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel_piece *piece = &content->pieces[i];
        double size = size_at(clauses, count, relative, piece->from + (piece->to - piece->from) / 2);
        any = any || size > 0;
        if (relative)
            for (size_t j = piece->first; j < piece->first + piece->count; j++)
                c[j] = size * content->mean.coefficients[j];
        else
            c[piece->first] = size;
    }
    if (relative)
        for (size_t i = 0; i < content->transition_count; i++)
            steps[i] = size_at(clauses, count, true, content->transitions[i].at) * content->mean.steps[i];
    if (any)
        modes[(*n)++] = (kel_mode){ lot ? KEL_MODE_LOT : KEL_MODE_SHARED, label, { c, steps } };
    return KEL_OK;
}

static kel_status
unreached(const kel__clause *c, kel_error *err)
{
    return kel_error_set(err, KEL_E_DATA, c->line, c->line == 0 ? 0 : c->column,
                         "the range of this uncertainty lies outside the pieces");
}

/* A piece for whose temperatures nothing is stated while other pieces have something. */
static kel_status
note_unstated(kel__adopt_warnings *warnings, const kel_content *content, const kel__published *p, kel_error *err)
{
    const kel__metadata *m = &p->metadata;
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel_piece *piece = &content->pieces[i];
        double middle = piece->from + (piece->to - piece->from) / 2;
        if (size_at(m->uncertainty, m->uncertainty_count, true, middle) > 0 ||
            size_at(m->uncertainty, m->uncertainty_count, false, middle) > 0)
            continue;
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "no uncertainty is stated from ");
        kel_text_number(&text, piece->from);
        kel_text_add(&text, " K to ");
        kel_text_number(&text, piece->to);
        kel_text_add(&text, " K: u counts nothing for this stretch");
        kel_status status = kel__adopt_warn(warnings, p->arena, "uncertainty-range", m->uncertainty[0].line, &text,
                                            err);
        kel_text_free(&text);
        if (status != KEL_OK)
            return status;
    }
    return KEL_OK;
}

kel_status
kel__published_modes(kel_content *content, kel__adopt_warnings *warnings, const kel__published *published,
                     kel_error *err)
{
    const kel__metadata *m = &published->metadata;
    kel_mode *modes = kel_arena_take(published->arena, 4, sizeof *modes);
    size_t n = 0;
    kel_status status = modes == NULL ? no_memory(err) : KEL_OK;
    for (size_t i = 0; i < m->uncertainty_count && status == KEL_OK; i++)
        status = check_clause(&m->uncertainty[i], err);
    for (size_t i = 0; i < m->lot_count && status == KEL_OK; i++)
        status = check_clause(&m->lot[i], err);
    for (int relative = 1; relative >= 0 && status == KEL_OK; relative--)
        status = add_mode(modes, &n, content, published, m->uncertainty, m->uncertainty_count, relative, false, err);
    size_t shared = n;
    bool stated = shared > 0;
    if (status == KEL_OK && m->uncertainty_count > 0 && !stated)
        status = unreached(&m->uncertainty[0], err);
    if (status == KEL_OK && stated)
        status = note_unstated(warnings, content, published, err);
    for (int relative = 1; relative >= 0 && status == KEL_OK; relative--)
        status = add_mode(modes, &n, content, published, m->lot, m->lot_count, relative, true, err);
    if (status == KEL_OK && m->lot_count > 0 && n == shared)
        status = unreached(&m->lot[0], err);
    content->modes = modes;
    content->mode_count = n;
    content->variance = stated ? KEL_VARIANCE_STATED : KEL_VARIANCE_NONE;
    content->scatter_known = stated;
    return status;
}
