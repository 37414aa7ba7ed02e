/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows that repeat a temperature, and rows out of order: seldom wrong, always worth a look. Two rows at a declared
   transition are what the grammar asks for and pass. Intervals nest and overlap, so their order says nothing. Rows
   that are left out do not count. */
#include "table_inner.h"

#include <stdlib.h>

typedef struct place { double lo, hi; size_t line; } place;

static int
by_temperature(const void *a, const void *b)
{
    const place *p = a, *q = b;
    int order = (p->lo > q->lo) - (p->lo < q->lo);
    if (order == 0)
        order = (p->hi > q->hi) - (p->hi < q->hi);
    return order != 0 ? order : (p->line > q->line) - (p->line < q->line);
}

static bool
at_transition(const kel_table *t, double at)
{
    for (size_t i = 0; i < t->transition_count; i++)
        if (t->transitions[i].at == at)
            return true;
    return false;
}

/* The next kept observation of a column behind index i - 1; NULL at the end. */
static const kel_observation *
next_kept(const kel_table *t, size_t column, size_t *i)
{
    while (*i < t->observation_count) {
        const kel_observation *o = &t->observations[(*i)++];
        if (o->column == column && o->left_out == NULL)
            return o;
    }
    return NULL;
}

/* up, down: rows above and below the one before; the first of each. */
typedef struct trend { size_t up, down, equal, first_up, first_down, rows; bool intervals; } trend;

static trend
trend_of(const kel_table *t, size_t column)
{
    trend d = { .rows = 0 };
    size_t i = 0;
    const kel_observation *before = NULL, *o;
    for (; (o = next_kept(t, column, &i)) != NULL; before = o, d.rows++) {
        d.intervals = d.intervals || o->printed_lo != o->printed_hi;
        if (before == NULL)
            continue;
        if (o->printed_hi > before->printed_hi)
            d.first_up = d.up++ == 0 ? o->line : d.first_up;
        else if (o->printed_hi < before->printed_hi)
            d.first_down = d.down++ == 0 ? o->line : d.first_down;
        else
            d.equal++;
    }
    return d;
}

static kel_status
warn_repeated(kel_table *t, size_t column, size_t rows, kel_error *err)
{
    place *list = malloc(rows * sizeof *list);
    if (list == NULL)
        return kel__no_memory(err);
    size_t n = 0, i = 0, repeated = 0, first = 0;
    double at = 0;
    for (const kel_observation *o; (o = next_kept(t, column, &i)) != NULL;)
        list[n++] = (place){ o->printed_lo, o->printed_hi, o->line };
    qsort(list, n, sizeof *list, by_temperature);
    for (size_t k = 1; k < n; k++) {
        if (list[k].lo != list[k - 1].lo || list[k].hi != list[k - 1].hi ||
            (list[k].lo == list[k].hi && at_transition(t, list[k].lo)))
            continue;
        if (repeated++ == 0 || list[k].line < first) {
            first = list[k].line;
            at = list[k].hi;
        }
    }
    free(list);
    if (repeated == 0)
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "rows repeat a temperature, the first one ");
    kel__temperature_into(&text, at);
    kel_text_add(&text, "; a jump is declared by `transition:`");
    return kel__warn(t, "repeated", &text, first, repeated, err);
}

kel_status
kel__table_order(kel_table *t, kel_error *err)
{
    size_t before = t->warning_count;
    for (size_t c = 0; c < t->column_count && t->warning_count == before; c++) {
        trend d = trend_of(t, c);
        bool ordered = d.up == 0 || d.down == 0;
        /* Columns share their temperatures, so one of them says it. Strict order repeats nothing: the long tables of
           instruments are spared the sorting. */
        kel_status status = d.rows < 2 || (ordered && d.equal == 0 && !d.intervals) ? KEL_OK
            : warn_repeated(t, c, d.rows, err);
        if (status == KEL_OK && !ordered && !d.intervals) {
            kel_text text = KEL_TEXT_INIT;
            kel_text_add(&text, "temperatures are neither ascending nor descending");
            bool up = d.up < d.down;
            status = kel__warn(t, "unsorted", &text, up ? d.first_up : d.first_down, up ? d.up : d.down, err);
        }
        if (status != KEL_OK)
            return status;
    }
    return KEL_OK;
}
