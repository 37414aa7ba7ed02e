/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From tables to the rows of a fit: which rows take part, what the record refers to, what is known of each column.
   joins.c lays the pieces. Nothing is solved here. */
#include "problem.h"
#include "blanks.h"
#include "number_text.h"
#include "support.h"
#include "table_inner.h"

#include <stdlib.h>
#include <string.h>

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while preparing a fit");
}

/* "A has direction 'this' and B 'that': advice" */
static kel_status
contradiction(const char *a, const char *says, const char *one, const char *b, const char *other, const char *advice,
              kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_printf(&text, "%s %s ", a, says);
    kel__quote_into(&text, one, strlen(one));
    kel_text_printf(&text, " and %s ", b);
    kel__quote_into(&text, other, strlen(other));
    kel_text_printf(&text, ": %s", advice);
    return kel__fail(err, KEL_E_DATA, 0, 0, &text);
}

static kel_status
check_directions(const kel__problem *p, kel_error *err)
{
    const kel_table *first = NULL;
    for (size_t i = 0; i < p->table_count; i++) {
        const kel_table *t = p->tables[i];
        if (t->direction == NULL)
            continue;
        if (first != NULL && !kel__is_word(first->direction, strlen(first->direction), t->direction))
            return contradiction(first->name, "has direction", first->direction, t->name, t->direction,
                                 "one record holds one direction", err);
        if (first == NULL)
            first = t;
    }
    return KEL_OK;
}

/* The record refers to what was asked for, else to what the first table that says so refers to. */
static void
choose_reference(kel__problem *p)
{
    p->reference = p->options->reference;
    for (size_t i = 0; i < p->table_count && isnan(p->reference); i++)
        p->reference = p->tables[i]->reference_temperature;
    p->reference_defaulted = isnan(p->reference);
    if (p->reference_defaulted)
        p->reference = 293.15;
    p->base = p->options->base >= 0 ? (kel_base)p->options->base : p->tables[0]->base;
}

static bool
in_range(const kel_observation *o, kel_interval range)
{
    return (isnan(range.lo) || o->printed_lo >= range.lo) && (isnan(range.hi) || o->printed_hi <= range.hi);
}

static kel_status
collect_rows(kel__problem *p, kel_error *err)
{
    size_t all = 0, columns = 0;
    for (size_t i = 0; i < p->table_count; i++) {
        all += p->tables[i]->observation_count;
        columns += p->tables[i]->column_count;
    }
    p->rows = kel_arena_take(p->memory, all, sizeof *p->rows);
    p->left_out = kel_arena_take(p->memory, all, sizeof *p->left_out);
    p->columns = kel_arena_take(p->memory, columns, sizeof *p->columns);
    p->first_column = kel_arena_take(p->memory, p->table_count, sizeof *p->first_column);
    if (p->rows == NULL || p->left_out == NULL || p->columns == NULL || p->first_column == NULL)
        return no_memory(err);
    size_t at = 0;
    for (size_t i = 0; i < p->table_count; i++) {
        const kel_table *t = p->tables[i];
        p->first_column[i] = p->column_count;
        for (size_t c = 0; c < t->column_count; c++)
            p->columns[p->column_count++] = (kel__column){ .table = i, .local = c, .kind = t->columns[c].kind,
                .resolution = t->columns[c].resolution, .typical_width = 1 };
        for (size_t k = 0; k < t->observation_count; k++, at++) {
            const kel_observation *o = &t->observations[k];
            if (o->left_out != NULL)
                continue;
            if (!in_range(o, p->options->range)) {
                p->left_out[at] = "outside the range asked for";
                continue;
            }
            size_t column = p->first_column[i] + o->column;
            p->rows[p->row_count++] = (kel__row){ .seen = o, .table = (uint32_t)i, .column = (uint32_t)column,
                .width = o->kind == KEL_KIND_MEAN ? fabs(o->to - o->from) : 1 };
            p->columns[column].rows++;
            p->columns[column].stated += o->u_stated;
        }
    }
    if (p->row_count == 0)
        return kel_error_set(err, KEL_E_DATA, 0, 0, "%s: no row is left to fit", p->tables[0]->name);
    return KEL_OK;
}

static int
ascending(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return (x > y) - (x < y);
}

/* A mean printed at its own reference has no width: it takes that of the nearest other row of its column. */
static void
mend_width(kel__problem *p, kel__row *row)
{
    double nearest = INFINITY, width = 1;
    for (size_t i = 0; i < p->row_count; i++) {
        const kel__row *other = &p->rows[i];
        double distance = fabs(other->seen->to - row->seen->to);
        if (other->column == row->column && other->seen->from != other->seen->to && distance < nearest) {
            nearest = distance;
            width = fabs(other->seen->to - other->seen->from);
        }
    }
    row->width = width;
}

/* Least u of each column and the median width of its means. */
static kel_status
measure_columns(kel__problem *p, kel_error *err)
{
    /* means from a reference are printed at that one temperature: found once, it serves all */
    const kel__row *mended = NULL;
    bool means = false;
    for (size_t i = 0; i < p->row_count; i++) {
        kel__row *row = &p->rows[i];
        means |= row->seen->kind == KEL_KIND_MEAN;
        if (row->width != 0)
            continue;
        if (mended != NULL && mended->column == row->column && mended->seen->to == row->seen->to)
            row->width = mended->width;
        else
            mend_width(p, row);
        mended = row;
    }
    double *widths = kel_arena_take(p->memory, means ? p->row_count : 0, sizeof *widths);
    if (widths == NULL)
        return no_memory(err);
    for (size_t c = 0; c < p->column_count; c++) {
        double largest = 0;
        size_t n = 0;
        for (size_t i = 0; i < p->row_count; i++)
            if (p->rows[i].column == c) {
                largest = fmax(largest, fabs(p->rows[i].seen->value));
                if (p->columns[c].kind == KEL_KIND_MEAN && !p->rows[i].seen->u_stated)
                    widths[n++] = p->rows[i].width;
            }
        p->columns[c].rounding = 4 * KEL__EPS * largest;
        p->columns[c].least = fmax(p->columns[c].resolution / sqrt(12), p->columns[c].rounding);
        if (p->columns[c].least == 0)
            p->columns[c].least = 4 * KEL__EPS * 1e-9; /* a column of zeros: any size serves */
        if (n > 0) {
            qsort(widths, n, sizeof *widths, ascending);
            p->columns[c].typical_width = widths[n / 2];
        }
    }
    return KEL_OK;
}

static kel_status
collect_shared(kel__problem *p, kel_error *err)
{
    p->shared = kel_arena_take(p->memory, 2 * p->table_count, sizeof *p->shared);
    if (p->shared == NULL)
        return no_memory(err);
    for (size_t i = 0; i < p->table_count; i++) {
        bool relative = false, absolute = false;
        for (size_t k = 0; k < p->tables[i]->shared_count; k++) {
            relative |= p->tables[i]->shared[k].relative > 0;
            absolute |= p->tables[i]->shared[k].absolute > 0;
        }
        if (relative)
            p->shared[p->shared_count++] = (kel__shared){ i, true };
        if (absolute)
            p->shared[p->shared_count++] = (kel__shared){ i, false };
    }
    return KEL_OK;
}

static void
find_hull(kel__problem *p)
{
    p->hull = kel__support_of(p->rows[0].seen);
    for (size_t i = 1; i < p->row_count; i++) {
        const kel_interval both[] = { p->hull, kel__support_of(p->rows[i].seen) };
        p->hull = kel__support_hull(both, 2);
    }
    p->range = p->hull;
    if (p->options->range.lo > p->hull.lo)
        p->range.lo = fmin(p->options->range.lo, p->hull.hi);
    if (p->options->range.hi < p->hull.hi)
        p->range.hi = fmax(p->options->range.hi, p->range.lo);
}

static bool
is_linear(const kel__problem *p, const kel__row *row)
{
    bool current = p->tables[row->table]->base == KEL_BASE_CURRENT;
    bool same_reference = kel__table_reference(p, row->table) == p->reference;
    if (p->base == KEL_BASE_CURRENT)
        return row->seen->kind == KEL_KIND_COEFFICIENT && current;
    return same_reference && (row->seen->kind != KEL_KIND_COEFFICIENT || !current);
}

static void
classify(kel__problem *p)
{
    p->uniform = p->column_count == 1 && p->shared_count == 0;
    p->fixed = p->shared_count == 0;
    p->linear = true;
    for (size_t k = 0; k < p->transition_count; k++)
        p->linear &= p->transitions[k].step != KEL_STEP_STATED ||
                     (p->base == KEL_BASE_REFERENCE && p->transition_reference[k] == p->reference);
    for (size_t i = 0; i < p->row_count; i++) {
        const kel_observation *o = p->rows[i].seen;
        p->linear &= is_linear(p, &p->rows[i]);
        p->uniform &= !o->u_stated && p->rows[i].width == p->rows[0].width;
        p->fixed &= o->u_stated && o->u_relative == 0;
    }
}

kel_status
kel__problem_make(kel__problem *problem, kel_arena *memory, const kel_table *const *tables, size_t table_count,
                  const kel_fit_options *options, kel_error *err)
{
    *problem = (kel__problem){ .memory = memory, .tables = tables, .table_count = table_count, .options = options };
    kel_status status = check_directions(problem, err);
    if (status < 0)
        return status;
    choose_reference(problem);
    if ((status = collect_rows(problem, err)) < 0 || (status = measure_columns(problem, err)) < 0 ||
        (status = collect_shared(problem, err)) < 0 || (status = kel__merge_transitions(problem, err)) < 0)
        return status;
    find_hull(problem);
    if ((status = kel__lay_joins(problem, err)) < 0)
        return status;
    classify(problem);
    return KEL_OK;
}
