/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From a solved fit to a record: one mean curve and its modes on common pieces. account.c adds statistics and
   provenance. */
#include "problem.h"
#include "subdivide.h"
#include "table_inner.h"

#include <string.h>

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while making a record");
}

/* A mode that is being put together, on the fit's own pieces. */
typedef struct draft {
    kel_mode_kind kind;
    const char *label;
    double *coefficients, *steps;
} draft;

typedef struct compiler {
    const kel__problem *p;
    const kel__solution *s;
    kel_arena *memory;
    kel_content content;
    double *mean, *mean_steps;
    draft *modes; size_t mode_count;
    const kel_table *lot; /* the table whose lot spread the record takes */
} compiler;

static double *
steps_of(compiler *c, const double *curve)
{
    double *steps = kel_arena_take(c->memory, c->p->transition_count, sizeof *steps);
    for (size_t k = 0; k < c->p->transition_count && steps != NULL; k++)
        if (c->s->layout.step_unknown[k] != SIZE_MAX)
            steps[k] = curve[c->s->layout.step_unknown[k]];
    return steps;
}

static const char *
join_text(kel_arena *memory, const char *a, const char *b)
{
    size_t n = strlen(a), m = strlen(b);
    char *out = kel_arena_take(memory, n + m + 1, 1);
    if (out != NULL) {
        memcpy(out, a, n);
        memcpy(out + n, b, m);
    }
    return out;
}

static const char *
shared_label(compiler *c, const kel__shared *shared)
{
    const kel_table *t = c->p->tables[shared->table];
    const char *text = "shared error";
    for (size_t i = t->shared_count; i-- > 0;)
        if ((shared->relative ? t->shared[i].relative : t->shared[i].absolute) > 0 && t->shared[i].text != NULL)
            text = t->shared[i].text;
    const char *head = join_text(c->memory, kel__last_component(t->name), shared->relative ? ", relative part: " : ", absolute part: ");
    return head != NULL ? join_text(c->memory, head, text) : NULL;
}

static kel_status
add_mode(compiler *c, kel_mode_kind kind, const char *label, double *coefficients, double *steps, kel_error *err)
{
    if (label == NULL || coefficients == NULL || steps == NULL)
        return no_memory(err);
    c->modes[c->mode_count++] = (draft){ kind, label, coefficients, steps };
    return KEL_OK;
}

/* Modes of the solution. Where the scatter is not known and no row states its u, the rows' part means nothing and is
   left out. */
static kel_status
add_solution_modes(compiler *c, kel_error *err)
{
    double *all;
    size_t scatter, curve = c->s->layout.curve;
    kel_status status = kel__modes(&all, &scatter, c->p, c->s, c->memory, err);
    bool meaningful = c->s->scatter_known || c->s->stated > 0;
    for (size_t i = 0; i < scatter && meaningful && status == KEL_OK; i++)
        status = add_mode(c, KEL_MODE_FIT, "scatter of the fit", all + i * curve, steps_of(c, all + i * curve), err);
    for (size_t j = 0; j < c->p->shared_count && status == KEL_OK; j++) {
        double *mode = all + (scatter + j) * curve;
        status = add_mode(c, KEL_MODE_SHARED, shared_label(c, &c->p->shared[j]), mode, steps_of(c, mode), err);
    }
    return status;
}

/* Equal but for the rounding of decimals to doubles; no range at all is -infinity or infinity on both sides. */
static bool
same_number(double a, double b)
{
    return a == b || fabs(a - b) <= 1e-12 * fmin(fabs(a), fabs(b));
}

/* Do two tables state one lot spread, in whatever words and order? Ranges of one table do not overlap, so that no
   clause finds two partners. */
static bool
same_lot(const kel_table *a, const kel_table *b)
{
    bool same = a->lot_count == b->lot_count;
    for (size_t i = 0; i < a->lot_count && same; i++) {
        const kel_stated *x = &a->lot[i];
        same = false;
        for (size_t k = 0; k < b->lot_count && !same; k++) {
            const kel_stated *y = &b->lot[k];
            same = same_number(x->relative, y->relative) && same_number(x->absolute, y->absolute) &&
                (x->absolute == 0 || x->dimension == y->dimension) &&
                same_number(x->lo, y->lo) && same_number(x->hi, y->hi);
        }
    }
    return same;
}

/* Tables may repeat a lot spread, but must not state different ones. */
static kel_status
find_lot(compiler *c, kel_error *err)
{
    for (size_t i = 0; i < c->p->table_count; i++) {
        const kel_table *t = c->p->tables[i];
        if (t->lot_count == 0)
            continue;
        if (c->lot != NULL && !same_lot(c->lot, t)) {
            kel_text text = KEL_TEXT_INIT;
            kel_text_printf(&text, "%s states the lot spread ", c->lot->name);
            kel__quote_into(&text, c->lot->lot_text, strlen(c->lot->lot_text));
            kel_text_printf(&text, " and %s ", t->name);
            kel__quote_into(&text, t->lot_text, strlen(t->lot_text));
            kel_text_add(&text, ": a record has one; settle it with --set 'lot spread: ...'");
            return kel__fail(err, KEL_E_DATA, 0, 0, &text);
        }
        if (c->lot == NULL)
            c->lot = t;
        for (size_t k = 0; k < t->lot_count; k++)
            if (t->lot[k].absolute > 0 && t->lot[k].dimension != KEL_DIM_PER_KELVIN) {
                kel_text text = KEL_TEXT_INIT;
                kel_text_printf(&text, "%s: lot spread ", t->name);
                kel__quote_into(&text, t->lot_text, strlen(t->lot_text));
                kel_text_add(&text, ": state it in percent or as a coefficient, for the expansion at the reference "
                                    "temperature is 0 without spread");
                return kel__fail(err, KEL_E_UNIT, 0, 0, &text);
            }
    }
    return KEL_OK;
}

/* Lot modes live on the cut pieces: percent of the curve, and a constant coefficient, inside their range. */
static kel_status
add_lot_modes(compiler *c, const kel_piece *pieces, size_t piece_count, size_t coefficients, kel_error *err)
{
    for (size_t k = 0; c->lot != NULL && k < c->lot->lot_count; k++) {
        const kel_stated *lot = &c->lot->lot[k];
        for (int part = 0; part < 2; part++) {
            double size = part == 0 ? lot->relative : lot->absolute;
            if (size == 0)
                continue;
            double *mode = kel_arena_take(c->memory, coefficients, sizeof *mode),
                   *steps = kel_arena_take(c->memory, c->p->transition_count, sizeof *steps);
            if (mode == NULL || steps == NULL)
                return no_memory(err);
            for (size_t i = 0; i < piece_count; i++) {
                /* End pieces stand for all that lies beyond them. */
                bool inside = (i == 0 || pieces[i].from >= lot->lo) &&
                              (i + 1 == piece_count || pieces[i].to <= lot->hi) && pieces[i].to > lot->lo &&
                              pieces[i].from < lot->hi;
                inside |= pieces[i].from == pieces[i].to && pieces[i].from >= lot->lo && pieces[i].to <= lot->hi;
                if (!inside)
                    continue;
                for (size_t j = 0; j < pieces[i].count && part == 0; j++)
                    mode[pieces[i].first + j] = size * c->mean[pieces[i].first + j];
                if (part == 1)
                    mode[pieces[i].first] = size;
            }
            for (size_t i = 0; i < c->p->transition_count && part == 0; i++)
                if (c->p->transitions[i].at >= lot->lo && c->p->transitions[i].at <= lot->hi)
                    steps[i] = size * c->mean_steps[i];
            kel_status status =
                add_mode(c, KEL_MODE_LOT, join_text(c->memory, "lot spread ", c->lot->lot_text), mode, steps, err);
            if (status < 0)
                return status;
        }
    }
    return KEL_OK;
}

/* Pieces, mean curve and modes; cut where the lot spread changes. */
static kel_status
lay_curves(compiler *c, kel_error *err)
{
    const kel__layout *l = &c->s->layout;
    kel_arena *m = c->memory;
    size_t lots = c->lot != NULL ? c->lot->lot_count : 0, cut_count = 0, count, *parent;
    double *cuts = kel_arena_take(m, 2 * lots, sizeof *cuts);
    for (size_t k = 0; k < lots && cuts != NULL; k++) {
        if (isfinite(c->lot->lot[k].lo))
            cuts[cut_count++] = c->lot->lot[k].lo;
        if (isfinite(c->lot->lot[k].hi))
            cuts[cut_count++] = c->lot->lot[k].hi;
    }
    kel_piece *pieces;
    if (cuts == NULL)
        return no_memory(err);
    kel_status status = kel__subdivide(&pieces, &count, &parent, l->pieces, l->piece_count, cuts, cut_count, m, err);
    if (status < 0)
        return status;
    size_t coefficients = pieces[count - 1].first + pieces[count - 1].count;
    int *continuity = kel_arena_take(m, count - 1, sizeof *continuity);
    double *mean = kel_arena_take(m, coefficients, sizeof *mean);
    if (continuity == NULL || mean == NULL)
        return no_memory(err);
    for (size_t i = 0; i + 1 < count; i++)
        continuity[i] = parent[i] == parent[i + 1] ? KEL_CONTINUITY_CURVATURE : c->p->continuity[parent[i]];
    kel__carry_over(mean, pieces, count, parent, c->mean, l->pieces);
    c->mean = mean;
    for (size_t i = 0; i < c->mode_count; i++) {
        double *mode = kel_arena_take(m, coefficients, sizeof *mode);
        if (mode == NULL)
            return no_memory(err);
        kel__carry_over(mode, pieces, count, parent, c->modes[i].coefficients, l->pieces);
        c->modes[i].coefficients = mode;
    }
    if ((status = add_lot_modes(c, pieces, count, coefficients, err)) < 0)
        return status;
    kel_mode *modes = kel_arena_take(m, c->mode_count, sizeof *modes);
    if (modes == NULL)
        return no_memory(err);
    for (size_t i = 0; i < c->mode_count; i++)
        modes[i] = (kel_mode){ c->modes[i].kind, c->modes[i].label, { c->modes[i].coefficients, c->modes[i].steps } };
    kel_content *content = &c->content;
    content->pieces = pieces;
    content->piece_count = count;
    content->coefficient_count = coefficients;
    content->continuity = continuity;
    content->continuity_count = count - 1;
    content->mean = (kel_curve){ c->mean, c->mean_steps };
    content->modes = modes;
    content->mode_count = c->mode_count;
    return KEL_OK;
}

static kel_status
lay_transitions(compiler *c, kel_error *err)
{
    const kel__problem *p = c->p;
    kel_transition *list = kel_arena_take(c->memory, p->transition_count, sizeof *list);
    c->mean_steps = steps_of(c, c->s->x);
    if (list == NULL || c->mean_steps == NULL)
        return no_memory(err);
    for (size_t k = 0; k < p->transition_count; k++) {
        list[k] = (kel_transition){ p->transitions[k].at, p->transitions[k].step };
        if (p->transitions[k].step == KEL_STEP_STATED)
            c->mean_steps[k] = c->s->layout.step_length[k];
    }
    c->content.transitions = list;
    c->content.transition_count = p->transition_count;
    return KEL_OK;
}

kel_status
kel__compile(kel_record **out, const kel__problem *problem, const kel__solution *solution, kel_arena *memory,
             kel_error *err)
{
    *out = NULL;
    compiler c = { .p = problem, .s = solution, .memory = memory, .mean = solution->x };
    kel_status status = find_lot(&c, err);
    size_t lots = c.lot != NULL ? c.lot->lot_count : 0;
    c.modes = kel_arena_take(memory, solution->parameters + problem->shared_count + 2 * lots, sizeof *c.modes);
    if (status == KEL_OK && c.modes == NULL)
        status = no_memory(err);
    kel_status (*const steps[])(compiler *, kel_error *) = { lay_transitions, add_solution_modes, lay_curves };
    for (size_t i = 0; i < sizeof steps / sizeof steps[0] && status == KEL_OK; i++)
        status = steps[i](&c, err);
    if (status < 0)
        return status;
    c.content.lot_spread = c.lot != NULL ? c.lot->lot_text : NULL;
    status = kel__account(&c.content, problem, solution, memory, err);
    return status < 0 ? status : kel_record_build(out, &c.content, err);
}
