/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows to observations: each printed value of a fitted column with its interval, its uncertainty, and the reason if
   it is left out.

   Why a value is left out, the first that holds: by hand (--leave-out, or a status that says `left out: REASON`); the
   row's status; a reservation that the curve was not supported there; a mark at one of its temperatures, at the value
   or at its uncertainty. Statuses, reservations and marks leave no one out where the user included marked rows. */
#include "table_inner.h"

#include "blanks.h"

#include <math.h>
#include <string.h>

/* What a pass over the rows keeps. */
typedef struct pass {
    kel_table *t;
    bool include_marked;
    size_t marked, first_marked; /* cells with a mark, and the first row with one */
    size_t first_empty;
} pass;

/* What is known of a row before its values are looked at. */
typedef struct row {
    size_t number;
    kel__printed *cells;
    kel__row_temperatures t;
    const char *left_out;
} row;

static kel_status
temperature(double *out, const kel_table *t, size_t column, const kel__cell *cell, kel_error *err)
{
    const struct kel__table *in = t->inner;
    return cell->empty ? KEL_OK : kel__cell_number(out, NULL, cell, &in->columns[column].heading.unit,
                                                   in->metadata.decimal_comma, err);
}

kel_status
kel__row_temperatures_of(kel__row_temperatures *out, const kel_table *t, const kel__printed *cells, kel_error *err)
{
    const struct kel__table *in = t->inner;
    *out = (kel__row_temperatures){ NAN, NAN, NAN, 0 };
    kel__cell from, to;
    kel_status status = KEL_OK;
    if (in->temperature != KEL__NONE) {
        kel__cell at = kel__cell_at(cells, in->temperature);
        out->marks |= at.marks;
        status = temperature(&out->at, t, in->temperature, &at, err);
    }
    if (status != KEL_OK || (in->from == KEL__NONE && in->interval == KEL__NONE))
        return status;
    size_t first = in->from, second = in->to;
    if (in->from != KEL__NONE) {
        from = kel__cell_at(cells, first);
        to = kel__cell_at(cells, second);
    } else {
        kel__cell both = kel__cell_at(cells, first = second = in->interval);
        if (both.empty)
            return KEL_OK;
        if ((status = kel__cell_interval(&from, &to, &both, err)) != KEL_OK)
            return status;
    }
    out->marks |= from.marks | to.marks;
    if ((status = temperature(&out->from, t, first, &from, err)) != KEL_OK ||
        (status = temperature(&out->to, t, second, &to, err)) != KEL_OK)
        return status;
    if (from.empty != to.empty)
        return kel_error_set(err, KEL_E_DATA, from.line, from.empty ? from.column : to.column,
                             "an interval with one end only");
    if (out->from >= out->to) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "an interval from ");
        kel__temperature_into(&text, out->from);
        kel_text_add(&text, " to ");
        kel__temperature_into(&text, out->to);
        kel_text_add(&text, ": it must run from the lower to the higher temperature");
        return kel__fail(err, KEL_E_DATA, from.line, from.column, &text);
    }
    return KEL_OK;
}

/* The sentence for a set of marks, made when first met. */
static kel_status
mark_reason(const char **out, struct kel__table *in, unsigned marks, kel_error *err)
{
    if (in->mark_reasons[marks] == NULL) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "status mark: ");
        kel__marks_text(&text, marks);
        in->mark_reasons[marks] = text.failed ? NULL : kel_arena_string(in->memory, text.bytes);
        kel_text_free(&text);
    }
    *out = in->mark_reasons[marks];
    return *out == NULL ? kel__no_memory(err) : KEL_OK;
}

static void
count_mark(pass *p, const row *r)
{
    if (p->marked++ == 0)
        p->first_marked = r->number;
}

/* The row's status in words, where it has one that says more than that all is well. */
static kel_status
status_reason(row *r, pass *p, kel_error *err)
{
    static const char *const fine[] = { "ok", "measured", "recommended" };
    static const char by_hand[] = "left out:";
    struct kel__table *in = p->t->inner;
    kel__cell c = kel__cell_at(r->cells, in->status);
    for (size_t i = 0; i < sizeof fine / sizeof fine[0]; i++)
        if (kel__is_word(c.p, c.n, fine[i]))
            return KEL_OK;
    if (c.empty)
        return KEL_OK;
    size_t n = sizeof by_hand - 1;
    bool hand = c.n > n && kel__is_word(c.p, n, by_hand);
    if (!hand)
        count_mark(p, r);
    if (!hand && p->include_marked)
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, hand ? "" : "status: ");
    kel_text_add_bytes(&text, hand ? c.p + n : c.p, hand ? c.n - n : c.n);
    const char *begin = text.bytes == NULL ? "" : text.bytes;
    size_t size = text.size;
    kel__trim(&begin, &size);
    r->left_out = text.failed ? NULL : kel_arena_bytes(in->memory, begin, size);
    kel_text_free(&text);
    return r->left_out == NULL ? kel__no_memory(err) : KEL_OK;
}

/* Reservations of an answer, `extrapolated+gap`. Where the curve was not supported by data its value is none either;
   the others, and words of other sorts, are kept and do no harm. */
static void
reservation_reason(row *r, pass *p)
{
    kel__cell c = kel__cell_at(r->cells, p->t->inner->reservations);
    bool extrapolated = false, gap = false;
    for (const char *end = c.p + c.n, *q = c.p; !c.empty && q < end;) {
        const char *plus = memchr(q, '+', (size_t)(end - q));
        size_t n = (size_t)((plus == NULL ? end : plus) - q);
        extrapolated |= kel__is_word(q, n, "extrapolated");
        gap |= kel__is_word(q, n, "gap");
        q += n + (plus != NULL);
    }
    if (!extrapolated && !gap)
        return;
    count_mark(p, r);
    if (!p->include_marked)
        r->left_out = !gap ? "reservation: extrapolated"
            : extrapolated ? "reservations: extrapolated, gap" : "reservation: gap";
}

static kel_status
start_row(row *r, pass *p, const kel__cursor *cursor, kel_error *err)
{
    const struct kel__table *in = p->t->inner;
    *r = (row){ .number = cursor->number, .cells = cursor->cells };
    r->left_out = kel__left_out_by_hand(p->t, r->number);
    kel_status status = KEL_OK;
    if (r->left_out == NULL && in->status != KEL__NONE)
        status = status_reason(r, p, err);
    if (status == KEL_OK && r->left_out == NULL && in->reservations != KEL__NONE)
        reservation_reason(r, p);
    if (status == KEL_OK)
        status = kel__row_temperatures_of(&r->t, p->t, r->cells, err);
    if (status == KEL_OK && r->t.marks != 0)
        count_mark(p, r);
    return status;
}

/* The intervals that kinds are about. False if the row lacks the temperature. */
static bool
set_temperatures(kel_observation *o, const kel_table *t, const row *r)
{
    bool interval = o->kind == KEL_KIND_MEAN && (t->inner->from != KEL__NONE || t->inner->interval != KEL__NONE);
    o->to = interval ? r->t.to : r->t.at;
    o->from = interval ? r->t.from : o->kind == KEL_KIND_COEFFICIENT ? r->t.at : t->reference_temperature;
    o->printed_lo = interval ? r->t.from : r->t.at;
    o->printed_hi = o->to;
    return !isnan(o->to);
}

static kel_status
observe(pass *p, const row *r, kel__file_column *c, double value, unsigned marks, size_t column, kel_error *err)
{
    kel_table *t = p->t;
    kel_observation *o = &t->inner->observed[t->observation_count];
    unsigned u_marks = 0;
    *o = (kel_observation){ .kind = t->columns[c->slot].kind, .value = value, .column = c->slot, .line = r->number,
                            .left_out = r->left_out };
    if (c->heading.quantity == KEL__CONTRACTION)
        o->value = 0 - value; /* and never -0 */
    if (!set_temperatures(o, t, r))
        return kel_error_set(err, KEL_E_DATA, r->cells[column].line, r->cells[column].column,
                             "a value in a row without a temperature");
    kel_status status = kel__row_uncertainty(o, t, c, r->cells, &u_marks, err);
    if (u_marks != 0)
        count_mark(p, r);
    marks |= u_marks | r->t.marks;
    if (status == KEL_OK && marks != 0 && o->left_out == NULL && !p->include_marked)
        status = mark_reason(&o->left_out, t->inner, marks, err);
    t->observation_count++;
    return status;
}

/* All values of the series are read, those that are not fitted too: they must be numbers. */
static kel_status
take_value(pass *p, const row *r, size_t i, kel_error *err)
{
    kel_table *t = p->t;
    kel__file_column *c = &t->inner->columns[i];
    kel__cell cell = kel__cell_at(r->cells, i);
    double value, resolution;
    if (cell.empty) {
        p->first_empty = t->empty_cells++ == 0 ? r->number : p->first_empty;
        return KEL_OK;
    }
    if (cell.marks != 0)
        count_mark(p, r);
    kel_status status = kel__cell_number(&value, &resolution, &cell, &c->heading.unit,
                                         t->inner->metadata.decimal_comma, err);
    if (status != KEL_OK)
        return status;
    if (c->resolution == 0 || resolution < c->resolution)
        c->resolution = resolution;
    return c->slot == KEL__NONE ? KEL_OK : observe(p, r, c, value, cell.marks, i, err);
}

static kel_status
take_row(pass *p, const row *r, kel_error *err)
{
    struct kel__table *in = p->t->inner;
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        const kel__file_column *c = &in->columns[i];
        if (c->heading.quantity == KEL__NOTHING && !in->foreign && r->cells[i].size > 0)
            return kel_error_set(err, KEL_E_SYNTAX, r->cells[i].line, r->cells[i].column, "a cell below an empty head");
        if (!c->used || !kel__is_value(c->heading.quantity))
            continue;
        kel_status status = take_value(p, r, i, err);
        if (status != KEL_OK)
            return status;
    }
    return KEL_OK;
}

static kel_status
warn_about_cells(pass *p, kel_error *err)
{
    kel_status status = KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    if (p->t->empty_cells > 0) {
        kel_text_add(&text, "cells without a value");
        status = kel__warn(p->t, "empty", &text, p->first_empty, p->t->empty_cells, err);
    }
    if (p->marked == 0 || status != KEL_OK)
        return status;
    kel_text_add(&text, p->include_marked ? "values with a status mark are included"
                                          : "values with a status mark are left out (--include-marked takes them)");
    return kel__warn(p->t, "marked", &text, p->first_marked, p->marked, err);
}

static kel_status
finish(pass *p, kel_error *err)
{
    kel_table *t = p->t;
    struct kel__table *in = t->inner;
    for (size_t i = 0; i < in->leave_out_count; i++)
        if (!in->leave_out[i].met)
            return kel_error_set(err, KEL_E_DATA, t->transposed ? 0 : in->leave_out[i].row, t->transposed ? 0 : 1,
                                 "no row of data on %s %zu, so it cannot be left out",
                                 t->transposed ? "column" : "line", in->leave_out[i].row);
    if (t->observation_count == 0)
        return kel_error_set(err, KEL_E_DATA, in->sheet.head_line, in->sheet.head_line == 0 ? 0 : 1,
                             "no value in any row");
    for (size_t i = 0; i < in->sheet.raw.width; i++)
        if (in->columns[i].slot != KEL__NONE)
            in->fitted[in->columns[i].slot].resolution = in->columns[i].resolution;
    t->observations = in->observed;
    t->rows = in->sheet.raw.rows;
    t->marked_cells = p->marked;
    return warn_about_cells(p, err);
}

kel_status
kel__table_observe(kel_table *t, bool include_marked, kel_error *err)
{
    struct kel__table *in = t->inner;
    pass p = { .t = t, .include_marked = include_marked };
    in->observed = kel_arena_take(in->memory, in->sheet.raw.rows * t->column_count, sizeof *in->observed);
    if (in->observed == NULL)
        return kel__no_memory(err);
    kel__cursor cursor;
    kel_status status = kel__raw_start(&cursor, &in->sheet.raw, err);
    while (status == KEL_OK && kel__raw_next(&cursor)) {
        row r;
        status = start_row(&r, &p, &cursor, err);
        if (status == KEL_OK)
            status = take_row(&p, &r, err);
    }
    kel__raw_stop(&cursor);
    return status == KEL_OK ? finish(&p, err) : status;
}
