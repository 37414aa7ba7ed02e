/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table written out in the product's own layout: comma-separated, decimal points, one row a temperature, heads as
   `quantity: label [unit]`.

   What the source printed stays: units, digits, marks, empty cells, metadata. Changed are only the things that the
   layout has one form for: an interval becomes `from` and `to`, a contraction an expansion of the other sign (a bound
   `<` turns round with it), a transposed table is turned, a decimal comma becomes a point. Columns that were passed
   over and other series are not the table that was understood and do not appear. A row left out by hand says so in
   `status`, which is how it stays left out when the file is read again. The result is a fixed point: it is written
   from the same text that it would be read back to. */
#include "table_inner.h"

#include "blanks.h"

#include <string.h>

static const char by_hand[] = "left out:";

typedef struct writing {
    kel_text *out;
    const kel_table *t;
    kel_text cell;             /* the cell at hand */
    bool any;                  /* the line has a cell already */
} writing;

/* No text of the user may end a line. */
static void
put_in_line(kel_text *out, const char *p, size_t n)
{
    for (size_t i = 0; i < n; i++)
        kel_text_add_bytes(out, p[i] == '\n' || p[i] == '\r' ? " " : p + i, 1);
}

/* Ends the cell at hand. Quoted where a reader would take it apart, or for a comment. */
static void
put_cell(writing *w)
{
    const char *p = w->cell.bytes == NULL ? "" : w->cell.bytes;
    size_t n = w->cell.size;
    kel_text_add(w->out, w->any ? "," : "");
    if (n == 0 || (memchr(p, ',', n) == NULL && memchr(p, '"', n) == NULL && !(p[0] == '#' && !w->any))) {
        put_in_line(w->out, p, n);
    } else {
        kel_text_add(w->out, "\"");
        for (size_t i = 0; i < n; i++) {
            put_in_line(w->out, p + i, 1);
            if (p[i] == '"')
                kel_text_add(w->out, "\"");
        }
        kel_text_add(w->out, "\"");
    }
    w->any = true;
    kel_text_clear(&w->cell);
}

/* Values of these keys hold numbers, and no comma but a decimal one. */
static bool
holds_numbers(const char *key)
{
    static const char *const keys[] = { "reference temperature", "uncertainty", "lot spread", "transition" };
    for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++)
        if (kel__is_word(key, strlen(key), keys[i]))
            return true;
    return false;
}

static void
put_metadata(writing *w)
{
    const kel__metadata *m = &w->t->inner->metadata;
    for (size_t i = 0; i < m->entry_count; i++) {
        const kel__entry *e = &m->entries[i];
        if (kel__is_word(e->key, strlen(e->key), "decimal"))
            continue;
        kel_text_add(w->out, "# ");
        kel_text_add(w->out, e->key);
        kel_text_add(w->out, ": ");
        if (m->decimal_comma && holds_numbers(e->key))
            kel__put_points(w->out, e->value, strlen(e->value), true);
        else
            put_in_line(w->out, e->value, strlen(e->value));
        kel_text_add(w->out, "\n");
    }
}

/* Puts the unit of a head. A bracket inside it that would end it early is avoided by the unit's own name. */
static void
put_unit(kel_text *out, const kel__heading *h)
{
    bool plain = memchr(h->unit_text.p, '[', h->unit_text.n) == NULL &&
        memchr(h->unit_text.p, ']', h->unit_text.n) == NULL;
    kel_text_add(out, " [");
    if (plain)
        kel_text_add_bytes(out, h->unit_text.p, h->unit_text.n);
    else
        kel_text_add(out, h->unit.name);
    kel_text_add(out, "]");
}

static void
put_head(writing *w, const kel__heading *h, kel__quantity q)
{
    kel_text_add(&w->cell, h->limits ? "limits" : kel__quantity_name(q == KEL__CONTRACTION ? KEL__EXPANSION : q));
    if (h->factor.n > 0) {
        kel_text_add(&w->cell, " k=");
        kel_text_add_bytes(&w->cell, h->factor.p, h->factor.n);
    }
    if (h->label.n > 0) {
        kel_text_add(&w->cell, ": ");
        kel_text_add_bytes(&w->cell, h->label.p, h->label.n);
    }
    if (h->unit_text.n > 0)
        put_unit(&w->cell, h);
    put_cell(w);
}

/* Does the table need a column for rows left out by hand that the file has not? */
static bool
adds_status(const kel_table *t)
{
    return t->inner->leave_out_count > 0 && t->inner->status == KEL__NONE;
}

static void
put_heads(writing *w)
{
    const struct kel__table *in = w->t->inner;
    w->any = false;
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        const kel__heading *h = &in->columns[i].heading;
        if (!in->columns[i].used)
            continue;
        if (h->quantity == KEL__INTERVAL) {
            put_head(w, h, KEL__FROM);
            put_head(w, h, KEL__TO);
        } else {
            put_head(w, h, h->quantity);
        }
    }
    if (adds_status(w->t)) {
        kel_text_add(&w->cell, kel__quantity_name(KEL__STATUS));
        put_cell(w);
    }
    kel_text_add(w->out, "\n");
}

/* An interval's ends as two cells; marks stand at both. */
static kel_status
put_interval(writing *w, const kel__cell *both, kel_error *err)
{
    kel__cell ends[2];
    if (both->empty) {
        put_cell(w);
        put_cell(w);
        return KEL_OK;
    }
    kel_status status = kel__cell_interval(&ends[0], &ends[1], both, err);
    for (size_t i = 0; i < 2 && status == KEL_OK; i++) {
        kel_text_add_bytes(&w->cell, both->p, (size_t)(both->core - both->p));
        kel__put_points(&w->cell, ends[i].core, ends[i].core_n, w->t->inner->metadata.decimal_comma);
        const char *behind = both->core + both->core_n;
        kel_text_add_bytes(&w->cell, behind, both->n - (size_t)(behind - both->p));
        put_cell(w);
    }
    return status;
}

static const char *
reason_by_hand(const kel_table *t, size_t row)
{
    for (size_t i = 0; i < t->inner->leave_out_count; i++)
        if (t->inner->leave_out[i].row == row)
            return t->inner->leave_out[i].reason;
    return NULL;
}

/* The row's own status (p NULL: the file has none), behind what was decided by hand. */
static void
put_status(writing *w, size_t row, const kel__cell *own)
{
    const char *reason = reason_by_hand(w->t, row);
    bool text = own != NULL && own->n > 0;
    if (reason != NULL) {
        kel_text_add(&w->cell, by_hand);
        kel_text_add(&w->cell, " ");
        kel_text_add(&w->cell, reason);
        kel_text_add(&w->cell, text ? "; " : "");
    }
    if (text)
        kel_text_add_bytes(&w->cell, own->p, own->n);
    put_cell(w);
}

/* Rows that hold something in columns alone that are not written would come out as blank lines, which a reader passes
   over. */
static bool
is_blank(const struct kel__table *in, const kel__cursor *cursor)
{
    for (size_t i = 0; i < in->sheet.raw.width; i++)
        if (in->columns[i].used && cursor->cells[i].size > 0)
            return false;
    return true;
}

static kel_status
put_row(writing *w, const kel__cursor *cursor, kel_error *err)
{
    const struct kel__table *in = w->t->inner;
    kel_status status = KEL_OK;
    w->any = false;
    for (size_t i = 0; i < in->sheet.raw.width && status == KEL_OK; i++) {
        kel__quantity q = in->columns[i].heading.quantity;
        kel__cell cell = kel__cell_at(cursor->cells, i);
        if (!in->columns[i].used)
            continue;
        if (q == KEL__INTERVAL) {
            status = put_interval(w, &cell, err);
        } else if (q == KEL__STATUS) {
            put_status(w, cursor->number, &cell);
        } else if (q == KEL__SOURCE || q == KEL__RESERVATIONS) {
            kel_text_add_bytes(&w->cell, cell.p, cell.n);
            put_cell(w);
        } else {
            kel__put_cell(&w->cell, &cell, q == KEL__CONTRACTION, in->metadata.decimal_comma);
            put_cell(w);
        }
    }
    if (adds_status(w->t))
        put_status(w, cursor->number, NULL);
    kel_text_add(w->out, "\n");
    return status;
}

kel_status
kel_table_format(kel_text *out, const kel_table *table, kel_error *err)
{
    if (out == NULL || table == NULL || !table->inner->printed)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "only a table that was read from a file has a printed form");
    writing w = { .out = out, .t = table, .cell = KEL_TEXT_INIT };
    kel__cursor cursor;
    put_metadata(&w);
    put_heads(&w);
    kel_status status = kel__raw_start(&cursor, &table->inner->sheet.raw, err);
    while (status == KEL_OK && kel__raw_next(&cursor))
        if (!is_blank(table->inner, &cursor))
            status = put_row(&w, &cursor, err);
    kel__raw_stop(&cursor);
    bool failed = out->failed || w.cell.failed;
    kel_text_free(&w.cell);
    return status == KEL_OK && failed ? kel__no_memory(err) : status;
}
