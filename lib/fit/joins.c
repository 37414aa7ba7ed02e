/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Where the pieces of a fit meet: the tables' transitions as one list, the joins asked for, the side on which each row
   at a transition lies, and whether the rows can tell the steps that are to be fitted. */
#include "problem.h"
#include "number_text.h"
#include "table_inner.h"

#include <string.h>

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while preparing a fit");
}

/* One list for all tables: the material is one. A table that only names the place yields to one that knows the step. */
kel_status
kel__merge_transitions(kel__problem *problem, kel_error *err)
{
    kel__problem *p = problem;
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
            kel_declared_transition *same =
                j < p->transition_count && p->transitions[j].at == d->at ? &p->transitions[j] : NULL;
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
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0,
                             "%zu continuities for %zu joins: give one for all or one for each join",
                             o->continuity_count, o->join_count);
    size_t i = 0, k = 0;
    while (i < p->transition_count || k < o->join_count) {
        double t = i < p->transition_count ? p->transitions[i].at : (double)INFINITY;
        double j = k < o->join_count ? o->joins[k] : (double)INFINITY;
        if (t <= j) {
            i++;
            if (t <= p->hull.lo || t >= p->hull.hi)
                continue;
            k += t == j; /* the transition makes an equal join superfluous */
            p->joins[p->join_count] = t;
            p->continuity[p->join_count++] = KEL_CONTINUITY_NONE;
            continue;
        }
        if (!(j > p->hull.lo && j < p->hull.hi) || (k > 0 && j <= o->joins[k - 1])) {
            char name[KEL_NUMBER_SIZE], lo[KEL_NUMBER_SIZE], hi[KEL_NUMBER_SIZE];
            kel__temperature_name(name, j);
            kel__temperature_name(lo, p->hull.lo);
            kel__temperature_name(hi, p->hull.hi);
            return kel_error_set(
                err, KEL_E_DATA, 0, 0,
                "a join at %s K: joins must ascend and lie between %s K and %s K, where the observations are", name, lo,
                hi);
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

/* Of two rows of one column at a transition the one that adjoins the colder rows, in the table's order, lies below it.
   A row leans by one for each neighbour in its column that is colder, and against it for each that is warmer; `side`
   holds that until all are known. A column whose rows there all lean alike says nothing, and they stay above. */
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

kel_status
kel__lay_joins(kel__problem *problem, kel_error *err)
{
    kel_status status = collect_joins(problem, err);
    if (status == KEL_OK)
        status = set_sides(problem, err);
    return status < 0 ? status : check_steps(problem, err);
}
