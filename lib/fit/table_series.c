/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Which columns belong together, and which of them are fitted.

   Labels make series; a table is read as one of them. An uncertainty belongs to the nearest value column on its left.
   The kinds of one series are one measurement printed in several ways, so one is fitted, in this order: expansion
   (what an instrument measures), mean, coefficient. */
#include "table_inner.h"

#include "blanks.h"

#include <math.h>
#include <string.h>

static bool
is_series(const kel__file_column *c, const char *label, size_t n)
{
    return kel__is_value(c->heading.quantity) && kel__same_words(c->heading.label.p, c->heading.label.n, label, n);
}

static bool
labelled(const kel__file_column *c)
{
    return kel__is_value(c->heading.quantity) && c->heading.label.n > 0;
}

static kel_status
at_head(kel_error *err, kel_status code, const kel__file_column *c, const char *before, const char *behind)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, before);
    kel__quote_into(&text, c->head.bytes, c->head.size);
    kel_text_add(&text, behind);
    return kel__fail(err, code, c->head.line, c->head.line == 0 ? 0 : c->head.column, &text);
}

/* Each label once, in order; no more than a message has room for. */
static void
list_labels(kel_text *text, const struct kel__table *in)
{
    size_t n = 0;
    for (size_t i = 0; i < in->sheet.raw.width && text->size < sizeof((kel_error *)0)->message; i++) {
        const kel__file_column *c = &in->columns[i];
        bool first = labelled(c);
        for (size_t j = 0; j < i && first; j++)
            first = !is_series(&in->columns[j], c->heading.label.p, c->heading.label.n);
        if (!first)
            continue;
        kel_text_add(text, n++ == 0 ? " " : ", ");
        kel__quote_into(text, c->heading.label.p, c->heading.label.n);
    }
}

/* The first column of the series that is read; NULL after an error. */
static kel_status
choose_series(const kel__file_column **out, const kel_table *t, const char *wanted, kel_error *err)
{
    const struct kel__table *in = t->inner;
    const kel__file_column *first = NULL, *other = NULL, *bare = NULL, *match = NULL;
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        const kel__file_column *c = &in->columns[i];
        if (!kel__is_value(c->heading.quantity))
            continue;
        if (!labelled(c))
            bare = bare == NULL ? c : bare;
        else if (first == NULL)
            first = c;
        else if (other == NULL && !is_series(c, first->heading.label.p, first->heading.label.n))
            other = c;
        if (wanted != NULL && labelled(c) && match == NULL && is_series(c, wanted, strlen(wanted)))
            match = c;
    }
    *out = wanted != NULL ? match : first != NULL ? first : bare;
    if (first != NULL && bare != NULL)
        return at_head(err, KEL_E_DATA, bare, "the column ", " has no label beside columns that have one");
    if (wanted != NULL && match == NULL) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "no series ");
        kel__quote_into(&text, wanted, strlen(wanted));
        kel_text_add(&text, first == NULL ? ": the columns have no labels" : ": there are");
        list_labels(&text, in);
        return kel__fail(err, KEL_E_ARGUMENT, 0, 0, &text);
    }
    if (wanted == NULL && other != NULL) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "several series:");
        list_labels(&text, in);
        kel_text_add(&text, "; choose one with --series LABEL");
        return kel__fail(err, KEL_E_DATA, other->head.line, other->head.column, &text);
    }
    return KEL_OK;
}

static kel_status
join_uncertainty(struct kel__table *in, size_t i, kel_error *err)
{
    kel__file_column *c = &in->columns[i];
    size_t j = i;
    while (j > 0 && !kel__is_value(in->columns[j - 1].heading.quantity))
        j--;
    if (j == 0)
        return at_head(err, KEL_E_DATA, c, "the column ",
                       " has no column of values on its left that it could belong to");
    kel__file_column *value = &in->columns[j - 1];
    const kel__word *label = &c->heading.label;
    if (label->n > 0 && !is_series(value, label->p, label->n))
        return at_head(err, KEL_E_DATA, c, "the column ", " has another label than the column of values on its left");
    if (value->uncertainty != KEL__NONE)
        return at_head(err, KEL_E_DATA, c, "the column ", " is a second uncertainty of the same column of values");
    c->owner = j - 1;
    value->uncertainty = i;
    kel_dimension dimension = value->heading.unit.dimension;
    c->relative = dimension == KEL_DIM_PER_KELVIN && strcmp(c->heading.unit.name, "%") == 0;
    if (!c->relative && c->heading.unit.dimension != dimension)
        return at_head(err, KEL_E_UNIT, c, "the uncertainty ", dimension == KEL_DIM_PER_KELVIN
                       ? " stands beside a coefficient: its unit is one of coefficients such as 1e-6/K, or % of the "
                         "value"
                       : " stands beside an expansion: its unit is one of expansion such as 1e-5 or %");
    return KEL_OK;
}

/* Marks the series' columns and joins uncertainties, those of other series too, so that a wrong one does not pass. */
static kel_status
mark_series(kel_table *t, const kel__file_column *chosen, kel_error *err)
{
    struct kel__table *in = t->inner;
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        kel__file_column *c = &in->columns[i];
        if (kel__is_value(c->heading.quantity))
            c->used = is_series(c, chosen->heading.label.p, chosen->heading.label.n);
        if (c->heading.quantity != KEL__UNCERTAINTY)
            continue;
        kel_status status = join_uncertainty(in, i, err);
        if (status != KEL_OK)
            return status;
        c->used = in->columns[c->owner].used;
    }
    return KEL_OK;
}

static kel_status
check_kind(const kel_table *t, const bool present[3], kel_kind_choice choice, kel_error *err)
{
    if (choice < 0 || choice == KEL_CHOOSE_ALL || present[choice])
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_printf(&text, "no column of kind %s: there is", kel_kind_name((kel_kind)choice));
    for (size_t k = 0, n = 0; k < 3; k++)
        if (present[k])
            kel_text_printf(&text, "%s %s", n++ == 0 ? "" : " and", kel_kind_name((kel_kind)k));
    size_t line = t->inner->sheet.head_line;
    return kel__fail(err, KEL_E_DATA, line, line == 0 ? 0 : 1, &text);
}

/* With several kinds side by side people should know which one decides. */
static kel_status
warn_kinds(kel_table *t, const bool present[3], const bool fitted[3], kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    size_t n = 0;
    for (size_t k = 3; k-- > 0;)
        if (fitted[k])
            kel_text_printf(&text, "%s is fitted", kel_kind_name((kel_kind)k));
    for (size_t k = 3; k-- > 0;)
        if (present[k] && !fitted[k])
            kel_text_printf(&text, "%s %s", n++ == 0 ? ";" : " and", kel_kind_name((kel_kind)k));
    kel_text_add(&text, n == 1 ? " beside it is only checked against it (--kind chooses)"
                               : " beside it are only checked against it (--kind chooses)");
    return kel__warn(t, "kind", &text, t->inner->sheet.head_line, n, err);
}

static kel_status
add_column(kel_table *t, kel_column *column, kel__file_column *c, kel_error *err)
{
    struct kel__table *in = t->inner;
    kel__quantity q = c->heading.quantity;
    bool intervals = q == KEL__MEAN && (in->interval != KEL__NONE || in->from != KEL__NONE);
    if (isnan(t->reference_temperature) && q != KEL__COEFFICIENT && !intervals)
        return at_head(err, KEL_E_DATA, c, "the column ",
                       " needs the temperature it is counted from: write `# reference temperature: 20 degC`, or "
                       "whatever the source says");
    *column = (kel_column){ .kind = kel__kind_of(q), .contraction = q == KEL__CONTRACTION };
    column->unit = kel_arena_bytes(in->memory, c->heading.unit_text.p, c->heading.unit_text.n);
    const kel__word *label = &c->heading.label;
    if (label->n > 0)
        column->label = kel_arena_bytes(in->memory, label->p, label->n);
    if (column->unit == NULL || (label->n > 0 && column->label == NULL))
        return kel__no_memory(err);
    c->slot = t->column_count++;
    return KEL_OK;
}

kel_status
kel__table_series(kel_table *t, const kel_table_options *options, kel_error *err)
{
    struct kel__table *in = t->inner;
    const kel__file_column *chosen;
    kel_status status = choose_series(&chosen, t, options->series, err);
    if (status == KEL_OK)
        status = mark_series(t, chosen, err);
    if (status != KEL_OK)
        return status;
    bool present[3] = { false, false, false }, fitted[3] = { false, false, false };
    for (size_t i = 0; i < in->sheet.raw.width; i++)
        if (in->columns[i].used && kel__is_value(in->columns[i].heading.quantity))
            present[kel__kind_of(in->columns[i].heading.quantity)] = true;
    if ((status = check_kind(t, present, options->kind, err)) != KEL_OK)
        return status;
    int best = present[KEL_KIND_EXPANSION] ? KEL_KIND_EXPANSION : present[KEL_KIND_MEAN] ? KEL_KIND_MEAN
        : KEL_KIND_COEFFICIENT;
    for (int k = 0; k < 3; k++)
        fitted[k] = present[k] && (options->kind == KEL_CHOOSE_ALL || (int)options->kind == k ||
                                   (options->kind < 0 && k == best));
    t->columns = in->fitted = kel_arena_take(in->memory, 3, sizeof *in->fitted);
    if (in->fitted == NULL)
        return kel__no_memory(err);
    for (size_t i = 0; i < in->sheet.raw.width && status == KEL_OK; i++) {
        kel__file_column *c = &in->columns[i];
        if (c->used && kel__is_value(c->heading.quantity) && fitted[kel__kind_of(c->heading.quantity)])
            status = add_column(t, &in->fitted[t->column_count], c, err);
    }
    if (status == KEL_OK && memcmp(present, fitted, sizeof present) != 0)
        status = warn_kinds(t, present, fitted, err);
    return status;
}
