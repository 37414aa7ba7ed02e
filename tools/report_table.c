/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What was understood of a table, for people, before and after it is fitted. */
#include "report.h"

#include "messages.h"

#include <string.h>

/* Where the assumption about a missing reference is said, this is it. */
static const double assumed_reference = 293.15;

/* The rule of kel_fit: all temperatures printed in the row lie inside. */
const char *
why_left_out(const kel_observation *o, kel_interval asked)
{
    bool inside = (isnan(asked.lo) || o->printed_lo >= asked.lo) && (isnan(asked.hi) || o->printed_hi <= asked.hi);
    return o->left_out != NULL ? o->left_out : inside ? NULL : "outside the range asked for";
}

/* Rows that the range asked for takes away from those that the table itself has. */
static size_t
rows_outside(const kel_table *t, kel_interval asked)
{
    size_t n = 0, last = 0;
    for (size_t i = 0; i < t->observation_count; i++) {
        const kel_observation *o = &t->observations[i];
        if (o->left_out == NULL && why_left_out(o, asked) != NULL && o->line != last) {
            last = o->line;
            n++;
        }
    }
    return n;
}

/* Counts the values that will be fitted, not the rows: a row may lack one. */
static void
text_columns(kel_text *out, const kel_table *t, kel_interval asked)
{
    const char *before = "";
    for (size_t i = 0; i < t->column_count; i++) {
        const kel_column *c = &t->columns[i];
        size_t n = 0;
        for (size_t k = 0; k < t->observation_count; k++)
            n += t->observations[k].column == i && why_left_out(&t->observations[k], asked) == NULL;
        kel_text_printf(out, "%s%s", before, c->contraction ? "contraction" : kel_kind_name(c->kind));
        if (c->unit != NULL) {
            kel_text_add(out, " [");
            kel_text_quote(out, c->unit, strlen(c->unit));
            kel_text_add(out, "]");
        }
        add_quoted(out, " of ", c->label);
        kel_text_printf(out, ", %zu value%s", n, n == 1 ? "" : "s");
        before = "; ";
    }
}

/* Lines of observations that were left out, each reason once with its lines. */
static void
text_left_out(kel_text *out, const kel_table *t, kel_interval asked)
{
    enum { MOST_LINES = 12 };
    bool first = true;
    for (size_t i = 0; i < t->observation_count; i++) {
        const char *reason = why_left_out(&t->observations[i], asked);
        bool seen = reason == NULL;
        for (size_t k = 0; k < i && !seen; k++) {
            const char *before = why_left_out(&t->observations[k], asked);
            seen = before != NULL && strcmp(before, reason) == 0;
        }
        if (seen)
            continue;
        add_label(out, first ? "left out" : "");
        first = false;
        size_t n = 0, last = 0;
        for (size_t k = i; k < t->observation_count; k++) {
            const kel_observation *o = &t->observations[k];
            const char *why = why_left_out(o, asked);
            if (why == NULL || strcmp(why, reason) != 0 || o->line == last)
                continue;
            last = o->line;
            if (n < MOST_LINES)
                kel_text_printf(out, n == 0 ? "line %zu" : ", %zu", o->line);
            n++;
        }
        if (n > MOST_LINES)
            kel_text_printf(out, " and %zu more", n - MOST_LINES);
        add_quoted(out, ": ", reason);
        kel_text_add(out, "\n");
    }
}

/* What is independent from row to row weighs the rows; what is shared or between lots does not. The line keeps them
   apart. */
static void
text_stated(kel_text *out, const kel_table *t, kel_interval asked)
{
    size_t stated = 0, fitted = 0;
    for (size_t i = 0; i < t->observation_count; i++)
        if (why_left_out(&t->observations[i], asked) == NULL) {
            fitted++;
            stated += t->observations[i].u_stated;
        }
    add_label(out, "uncertainty");
    if (stated == 0)
        kel_text_add(out, "none stated that is independent from row to row");
    else if (stated == fitted)
        kel_text_add(out, "stated for every value");
    else
        kel_text_printf(out, "stated for %zu of %zu values", stated, fitted);
    for (size_t i = 0; i < t->uncertainty_count; i++)
        add_quoted(out, i == 0 ? "; metadata: " : "; ", t->uncertainty[i]);
    if (t->shared_count > 0)
        kel_text_printf(out, "; %zu shared error%s", t->shared_count, t->shared_count == 1 ? "" : "s");
    add_quoted(out, "; lot spread ", t->lot_text);
    kel_text_add(out, "\n");
}

/* Lines that would say nothing are not printed, but those on which a fit depends (reference, base, uncertainty)
   always are. */
void
text_table(kel_text *out, const kel_table *t, const units *in, kel_interval asked, bool assumed)
{
    add_file_name(out, t->name);
    kel_text_add(out, "\n");
    if (t->material != NULL || t->condition != NULL || t->direction != NULL || t->product_form != NULL) {
        add_label(out, "material");
        add_quoted(out, "", t->material != NULL ? t->material : "not named");
        add_quoted(out, ", ", t->condition);
        add_quoted(out, ", ", t->product_form);
        add_quoted(out, ", direction ", t->direction);
        kel_text_add(out, "\n");
    }
    if (t->source != NULL || t->lineage != NULL) {
        add_label(out, "source");
        add_quoted(out, "", t->source != NULL ? t->source : "not named");
        add_quoted(out, ", lineage ", t->lineage);
        kel_text_add(out, "\n");
    }
    add_label(out, "values");
    text_columns(out, t, asked);
    kel_text_add(out, "\n");
    add_label(out, "rows");
    kel_text_printf(out, "%zu", t->rows);
    size_t left_out = t->rows_left_out + rows_outside(t, asked);
    if (left_out > 0)
        kel_text_printf(out, ", %zu left out", left_out);
    if (t->empty_cells > 0)
        kel_text_printf(out, ", %zu cell%s without a value", t->empty_cells, t->empty_cells == 1 ? "" : "s");
    if (t->marked_cells > 0)
        kel_text_printf(out, ", %zu with a status mark", t->marked_cells);
    if (t->transposed)
        kel_text_add(out, ", temperatures across the top");
    kel_text_add(out, "\n");
    text_left_out(out, t, asked);
    add_label(out, "reference temperature");
    if (isnan(t->reference_temperature)) {
        kel_text_add(out, assumed ? "none stated: " : "none stated");
        if (assumed) {
            add_temperature(out, &in->temperature, assumed_reference);
            kel_text_add(out, " is assumed");
        }
    } else {
        add_temperature(out, &in->temperature, t->reference_temperature);
    }
    if (t->reference_printed != NULL && !isnan(t->reference_temperature))
        add_quoted(out, ", printed as ", t->reference_printed);
    kel_text_printf(out, "; base %s%s\n", kel_base_name(t->base), t->base_stated ? "" : " (not stated)");
    if (t->shift != 0) {
        add_label(out, "shifted by");
        add_digits(out, 1e6 * t->shift, 6);
        kel_text_add(out, "e-6, so that the expansion is 0 at its reference\n");
    }
    if (t->scale != NULL || t->branch != NULL) {
        add_label(out, "scale, branch");
        add_quoted(out, "", t->scale != NULL ? t->scale : "ITS-90");
        add_quoted(out, ", ", t->branch);
        kel_text_add(out, "\n");
    }
    if (!isnan(t->range.lo)) {
        add_label(out, "range");
        add_interval(out, &in->temperature, t->range.lo, t->range.hi);
        for (size_t i = 0; i < t->gap_count; i++) {
            kel_text_add(out, i == 0 ? "; gap " : ", ");
            add_interval(out, &in->temperature, t->gaps[i].lo, t->gaps[i].hi);
        }
        kel_text_add(out, "\n");
    }
    for (size_t i = 0; i < t->transition_count; i++) {
        add_label(out, i == 0 ? "transition" : "");
        add_quoted(out, "", t->transitions[i].text);
        kel_text_add(out, "\n");
    }
    text_stated(out, t, asked);
    for (size_t i = 0; i < t->note_count; i++) {
        add_label(out, i == 0 ? "note" : "");
        add_quoted(out, "", t->notes[i]);
        kel_text_add(out, "\n");
    }
}
