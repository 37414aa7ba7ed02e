/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From tables to the rows of a fit: which rows take part, what the record refers to, where pieces join, on which side of a
   transition each row lies. Nothing is solved here. */
#include "problem.h"
#include "number_text.h"
#include "support.h"
#include "table_inner.h"

#include <stdlib.h>
#include <string.h>
#include <strings.h>

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
        if (first != NULL && strcasecmp(first->direction, t->direction) != 0)
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
    const kel__row *mended = NULL; /* means from a reference are printed at that one temperature: found once, it serves all */
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

/* One list for all tables: the material is one. A table that only names the place yields to one that knows the step. */
static kel_status
merge_transitions(kel__problem *p, kel_error *err)
{
    size_t all = 0;
    for (size_t i = 0; i < p->table_count; i++)
        all += p->tables[i]->transition_count;
    p->transitions = kel_arena_take(p->memory, all, sizeof *p->transitions);
    p->transition_reference = kel_arena_take(p->memory, all, sizeof *p->transition_reference);
    if (p->transitions == NULL || p->transition_reference == NULL)
        return no_memory(err);
    for (size_t i = 0; i < p->table_count; i++)
        for (size_t k = 0; k < p->tables[i]->transition_count; k++) {
            const kel_declared_transition *d = &p->tables[i]->transitions[k];
            size_t j = 0;
            while (j < p->transition_count && p->transitions[j].at < d->at)
                j++;
            kel_declared_transition *same = j < p->transition_count && p->transitions[j].at == d->at ? &p->transitions[j] : NULL;
            if (same != NULL && same->step != KEL_STEP_NONE && d->step != KEL_STEP_NONE &&
                (same->step != d->step || same->length != d->length)) {
                kel_text text = KEL_TEXT_INIT;
                kel_text_add(&text, "the tables state two different steps for the transition at ");
                kel__temperature_into(&text, d->at);
                kel_text_add(&text, ": ");
                kel__quote_into(&text, same->text, strlen(same->text));
                kel_text_add(&text, " and ");
                kel__quote_into(&text, d->text, strlen(d->text));
                return kel__fail(err, KEL_E_DATA, 0, 0, &text);
            }
            if (same == NULL) {
                memmove(&p->transitions[j + 1], &p->transitions[j], (p->transition_count - j) * sizeof *p->transitions);
                memmove(&p->transition_reference[j + 1], &p->transition_reference[j],
                        (p->transition_count - j) * sizeof *p->transition_reference);
                p->transition_count++;
            }
            if (same == NULL || same->step == KEL_STEP_NONE) {
                p->transitions[j] = *d;
                p->transition_reference[j] = kel__table_reference(p, i);
            }
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

/* Joins: transitions inside the hull, without continuity, and those asked for. */
static kel_status
collect_joins(kel__problem *p, kel_error *err)
{
    const kel_fit_options *o = p->options;
    size_t most = p->transition_count + o->join_count;
    p->joins = kel_arena_take(p->memory, most, sizeof *p->joins);
    p->continuity = kel_arena_take(p->memory, most, sizeof *p->continuity);
    if (p->joins == NULL || p->continuity == NULL)
        return no_memory(err);
    if (o->continuity_count > 1 && o->continuity_count != o->join_count)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "%zu continuities for %zu joins: give one for all or one for each join",
                             o->continuity_count, o->join_count);
    size_t i = 0, k = 0;
    while (i < p->transition_count || k < o->join_count) {
        double t = i < p->transition_count ? p->transitions[i].at : (double)INFINITY;
        double j = k < o->join_count ? o->joins[k] : (double)INFINITY;
        if (t <= j) { /* a transition, which makes an equal join superfluous */
            i++;
            k += t == j;
            if (t <= p->hull.lo || t >= p->hull.hi)
                continue;
            p->joins[p->join_count] = t;
            p->continuity[p->join_count++] = KEL_CONTINUITY_NONE;
            continue;
        }
        if (!(j > p->hull.lo && j < p->hull.hi) || (k > 0 && j <= o->joins[k - 1])) {
            char name[KEL_NUMBER_SIZE], lo[KEL_NUMBER_SIZE], hi[KEL_NUMBER_SIZE];
            kel__temperature_name(name, j);
            kel__temperature_name(lo, p->hull.lo);
            kel__temperature_name(hi, p->hull.hi);
            return kel_error_set(err, KEL_E_DATA, 0, 0,
                                 "a join at %s K: joins must ascend and lie between %s K and %s K, where the observations are", name, lo, hi);
        }
        p->joins[p->join_count] = j;
        p->continuity[p->join_count++] = o->continuity_count == 0 ? KEL_CONTINUITY_VALUE
                                         : o->continuity[o->continuity_count == 1 ? 0 : k];
        k++;
    }
    return KEL_OK;
}

/* What a column shows at one transition: the row before the present one, and the extremes of its rows' leaning. */
typedef struct neighbours { kel__row *last; size_t rows; int most, least; } neighbours;

/* Of two rows of one column at a transition the one that adjoins the colder rows, in the table's order, lies below it. A row leans by one
   for each neighbour in its column that is colder, and against it for each that is warmer; `side` holds that until all are known. A column whose
   rows there all lean alike says nothing, and they stay above. */
static void
set_sides_at(kel__problem *p, double at, neighbours *columns)
{
    for (size_t c = 0; c < p->column_count; c++)
        columns[c] = (neighbours){ .last = NULL };
    for (size_t i = 0; i < p->row_count; i++) {
        kel__row *row = &p->rows[i], *last = columns[row->column].last;
        columns[row->column].last = row;
        if (last == NULL || (last->seen->to == at) == (row->seen->to == at))
            continue;
        kel__row *there = row->seen->to == at ? row : last, *beside = there == row ? last : row;
        there->side = (int8_t)(there->side + (beside->seen->to < at ? 1 : -1));
    }
    for (size_t i = 0; i < p->row_count; i++) {
        const kel__row *row = &p->rows[i];
        neighbours *n = &columns[row->column];
        if (row->seen->to != at)
            continue;
        n->most = n->rows == 0 || row->side > n->most ? row->side : n->most;
        n->least = n->rows == 0 || row->side < n->least ? row->side : n->least;
        n->rows++;
    }
    for (size_t i = 0; i < p->row_count; i++) {
        kel__row *row = &p->rows[i];
        const neighbours *n = &columns[row->column];
        if (row->seen->to != at)
            continue;
        bool two_sides = n->most > n->least && n->most >= 0 && n->least <= 0;
        bool below = row->side > 0 || (row->side == 0 && n->most == 0);
        row->side = !two_sides ? 0 : below ? -1 : 1;
    }
}

static kel_status
set_sides(kel__problem *p, kel_error *err)
{
    neighbours *columns = kel_arena_take(p->memory, p->column_count, sizeof *columns);
    if (columns == NULL)
        return no_memory(err);
    for (size_t i = 0; i < p->transition_count; i++)
        set_sides_at(p, p->transitions[i].at, columns);
    return KEL_OK;
}

/* A step is fitted from the rows whose interval crosses it; without one there is nothing to fit it from. */
static kel_status
check_steps(const kel__problem *p, kel_error *err)
{
    for (size_t k = 0; k < p->transition_count; k++) {
        double at = p->transitions[k].at;
        bool crossed = p->transitions[k].step != KEL_STEP_FITTED;
        for (size_t i = 0; i < p->row_count && !crossed; i++) {
            const kel__row *row = &p->rows[i];
            crossed = row->seen->kind != KEL_KIND_COEFFICIENT && row->seen->from != row->seen->to &&
                      kel__above(row->seen->from, 0, at) != kel__above(row->seen->to, row->side, at);
        }
        if (!crossed) {
            kel_text text = KEL_TEXT_INIT;
            kel_text_add(&text, "transition at ");
            kel__temperature_into(&text, at);
            kel_text_add(&text, " (");
            kel__quote_into(&text, p->transitions[k].text, strlen(p->transitions[k].text));
            kel_text_add(&text, "): no row crosses it, so its step cannot be fitted");
            return kel__fail(err, KEL_E_DATA, 0, 0, &text);
        }
    }
    return KEL_OK;
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
        (status = collect_shared(problem, err)) < 0 || (status = merge_transitions(problem, err)) < 0)
        return status;
    find_hull(problem);
    if ((status = collect_joins(problem, err)) < 0 || (status = set_sides(problem, err)) < 0 || (status = check_steps(problem, err)) < 0)
        return status;
    classify(problem);
    return KEL_OK;
}
