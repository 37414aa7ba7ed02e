/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The record's account of a fit: provenance, statistics by column, gaps, and the rows with what the curve says of them.
   */
#include "problem.h"
#include "support.h"

#include <string.h>

enum { MOST_ROWS = 5000, THINNED_ROWS = 1000 };

typedef struct account {
    const kel__problem *p;
    const kel__solution *s;
    kel_arena *memory;
    kel_content *content;
} account;

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while making a record");
}

const char *
kel__last_component(const char *name)
{
    const char *slash = strrchr(name, '/');
    return slash != NULL && slash[1] != '\0' ? slash + 1 : name;
}

static kel_status
lay_gaps(account *c, kel_error *err)
{
    const kel__problem *p = c->p;
    kel_interval *support = kel_arena_take(c->memory, p->row_count, sizeof *support);
    if (support == NULL)
        return no_memory(err);
    for (size_t i = 0; i < p->row_count; i++)
        support[i] = kel__support_of(p->rows[i].seen);
    return kel__support_gaps(&c->content->gaps, &c->content->gap_count, c->memory, support, p->row_count, p->range,
                             p->options->gap, err);
}

static kel_status
lay_sources(account *c, kel_error *err)
{
    kel_source *list = kel_arena_take(c->memory, c->p->table_count, sizeof *list);
    if (list == NULL)
        return no_memory(err);
    size_t at = 0;
    for (size_t i = 0; i < c->p->table_count; i++) {
        const kel_table *t = c->p->tables[i];
        size_t left_out = 0;
        for (size_t k = 0; k < t->observation_count; k++, at++)
            left_out += t->observations[k].left_out != NULL || c->p->left_out[at] != NULL;
        list[i] = (kel_source){ .name = kel__last_component(t->name),
                                .digest = t->digest,
                                .material = t->material,
                                .condition = t->condition,
                                .direction = t->direction,
                                .product_form = t->product_form,
                                .source = t->source,
                                .lineage = t->lineage,
                                .scale = t->scale,
                                .branch = t->branch,
                                .reference_temperature = t->reference_temperature,
                                .base = t->base,
                                .rows = t->rows,
                                .left_out = left_out,
                                .uncertainty = t->uncertainty,
                                .uncertainty_count = t->uncertainty_count,
                                .notes = t->notes,
                                .note_count = t->note_count };
    }
    c->content->sources = list;
    c->content->source_count = c->p->table_count;
    return KEL_OK;
}

static kel_status
lay_columns(account *c, kel_error *err)
{
    const kel__problem *p = c->p;
    const kel__solution *s = c->s;
    kel_fit_column *list = kel_arena_take(c->memory, p->column_count, sizeof *list);
    if (list == NULL)
        return no_memory(err);
    for (size_t i = 0; i < p->column_count; i++) {
        const kel__column *column = &p->columns[i];
        double freedom = (double)column->rows - s->leverage[i];
        bool stated = column->stated == column->rows;
        list[i] =
            (kel_fit_column){ .source = column->table,
                              .kind = column->kind,
                              .label = p->tables[column->table]->columns[column->local].label,
                              .observations = column->rows,
                              .degrees_of_freedom = freedom,
                              .residual_standard_deviation = freedom > 1e-9 ? sqrt(s->rss[i] / freedom) : (double)NAN,
                              .scatter = stated ? (double)NAN : s->scatter[i],
                              .resolution = column->resolution,
                              .variance = stated                                      ? KEL_VARIANCE_GIVEN
                                          : column->stated > 0                        ? KEL_VARIANCE_MIXED
                                          : s->scatter_known || !isnan(s->scatter[i]) ? KEL_VARIANCE_ESTIMATED
                                                                                      : KEL_VARIANCE_NONE };
    }
    c->content->columns = list;
    c->content->column_count = p->column_count;
    return KEL_OK;
}

/* All observations in the tables' order with what the curve says of them; above MOST_ROWS an even selection. */
static kel_status
lay_rows(account *c, kel_error *err)
{
    const kel__problem *p = c->p;
    size_t all = 0, at = 0, fitted = 0, kept = 0;
    for (size_t i = 0; i < p->table_count; i++)
        all += p->tables[i]->observation_count;
    c->content->thinned = all > MOST_ROWS;
    size_t every = c->content->thinned ? (all + THINNED_ROWS - 1) / THINNED_ROWS : 1;
    kel_fitted *list = kel_arena_take(c->memory, all / every + 1, sizeof *list);
    double *work = kel_arena_take(c->memory, 3 * c->s->layout.unknowns, sizeof *work);
    if (list == NULL || work == NULL)
        return no_memory(err);
    for (size_t i = 0; i < p->table_count; i++)
        for (size_t k = 0; k < p->tables[i]->observation_count; k++, at++) {
            const kel_observation *o = &p->tables[i]->observations[k];
            const char *reason = o->left_out != NULL ? o->left_out : p->left_out[at];
            kel__row row = { .seen = o, .table = (uint32_t)i, .column = (uint32_t)(p->first_column[i] + o->column),
                .width = o->kind == KEL_KIND_MEAN && o->to != o->from ? fabs(o->to - o->from) : 1 };
            if (reason == NULL)
                row = p->rows[fitted++];
            if (at % every != 0)
                continue;
            kel__row_result r = kel__row_evaluate(p, c->s, &row, false, work);
            bool known = o->u_stated || (reason == NULL && (c->s->scatter_known || !isnan(c->s->scatter[row.column])));
            list[kept++] = (kel_fitted){ .source = i,
                                         .column = row.column,
                                         .line = o->line,
                                         .kind = o->kind,
                                         .from = o->from,
                                         .to = o->to,
                                         .observed = o->value,
                                         .fitted = r.fitted,
                                         .residual = r.residual,
                                         .shared_term = r.shared_term,
                                         .u = known ? r.u : (double)NAN,
                                         .side = row.side,
                                         .left_out = reason };
        }
    c->content->rows = list;
    c->content->row_count = kept;
    return KEL_OK;
}

static void
lay_statistics(account *c)
{
    const kel__problem *p = c->p;
    const kel__solution *s = c->s;
    kel_content *content = c->content;
    double freedom = (double)p->row_count - (double)s->parameters, rss = 0;
    bool one_kind = true;
    for (size_t i = 0; i < p->column_count; i++) {
        rss += s->rss[i];
        one_kind &= p->columns[i].kind == p->columns[0].kind;
    }
    content->form = p->join_count > 0 ? "piecewise" : "polynomial";
    content->base = p->base;
    content->reference_temperature = p->reference;
    content->reference_defaulted = p->reference_defaulted;
    content->range = p->range;
    size_t stated = 0;
    for (size_t i = 0; i < p->column_count; i++)
        stated += p->columns[i].stated;
    content->variance = stated == p->row_count ? KEL_VARIANCE_GIVEN : stated > 0 ? KEL_VARIANCE_MIXED
                        : s->scatter_known ? KEL_VARIANCE_ESTIMATED : KEL_VARIANCE_NONE;
    content->scatter_known = stated == p->row_count || s->scatter_known;
    content->observations = p->row_count;
    content->parameters = s->parameters;
    content->degrees_of_freedom = freedom;
    content->residual_standard_deviation = one_kind && freedom > 0 ? sqrt(rss / freedom) : (double)NAN;
    content->chi2 = s->chi2;
}

kel_status
kel__account(kel_content *content, const kel__problem *problem, const kel__solution *solution, kel_arena *memory,
             kel_error *err)
{
    account a = { problem, solution, memory, content };
    kel_status (*const parts[])(account *, kel_error *) = { lay_gaps, lay_sources, lay_columns, lay_rows };
    for (size_t i = 0; i < sizeof parts / sizeof parts[0]; i++) {
        kel_status status = parts[i](&a, err);
        if (status < 0)
            return status;
    }
    lay_statistics(&a);
    return KEL_OK;
}
