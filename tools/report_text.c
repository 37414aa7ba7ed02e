/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What is said of a fit or of adopted coefficients, for people: how it was made, how well it meets its observations, where it
   holds, what its uncertainty covers. */
#include "report.h"

#include "messages.h"

#include <string.h>

double
show_value(const units *in, kel_kind kind, double si)
{
    return kind == KEL_KIND_EXPANSION ? 1e6 * si : kel_unit_from_si(&in->coefficient, si);
}

const char *
show_unit(const units *in, kel_kind kind)
{
    return kind == KEL_KIND_EXPANSION ? "1e-6" : in->coefficient.name;
}

void
add_label(kel_text *out, const char *label)
{
    kel_text_printf(out, "  %-27s  ", label);
}

void
add_interval(kel_text *out, const kel_unit *unit, double lo, double hi)
{
    add_temperature_number(out, unit, lo);
    kel_text_add(out, " to ");
    add_temperature(out, unit, hi);
}

/* x with a number of significant digits, without trailing zeros. */
static void
add_digits(kel_text *out, double x, int digits)
{
    char bytes[KEL_NUMBER_FIXED_SIZE];
    kel_number_format_digits(bytes, x, digits);
    if (strchr(bytes, '.') != NULL && strchr(bytes, 'e') == NULL) {
        size_t n = strlen(bytes);
        while (bytes[n - 1] == '0')
            n--;
        bytes[bytes[n - 1] == '.' ? n - 1 : n] = '\0';
    }
    kel_text_add(out, bytes);
}

static void
add_shown(kel_text *out, const units *in, kel_kind kind, double si, int digits)
{
    if (isnan(si)) {
        kel_text_add(out, "not known");
        return;
    }
    add_digits(out, show_value(in, kind, si), digits);
    add_unit(out, show_unit(in, kind));
}

/* --- tables as read --- */

static void
add_quoted(kel_text *out, const char *before, const char *text)
{
    if (text != NULL) {
        kel_text_add(out, before);
        kel_text_quote(out, text, strlen(text));
    }
}

static void
text_columns(kel_text *out, const kel_table *t)
{
    const char *before = "";
    for (size_t i = 0; i < t->column_count; i++) {
        const kel_column *c = &t->columns[i];
        size_t n = 0;
        for (size_t k = 0; k < t->observation_count; k++)
            n += t->observations[k].column == i && t->observations[k].left_out == NULL;
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
text_left_out(kel_text *out, const kel_table *t)
{
    enum { MOST_LINES = 12 };
    bool first = true;
    for (size_t i = 0; i < t->observation_count; i++) {
        const char *reason = t->observations[i].left_out;
        bool seen = reason == NULL;
        for (size_t k = 0; k < i && !seen; k++)
            seen = t->observations[k].left_out != NULL && strcmp(t->observations[k].left_out, reason) == 0;
        if (seen)
            continue;
        add_label(out, first ? "left out" : "");
        first = false;
        size_t n = 0, last = 0;
        for (size_t k = i; k < t->observation_count; k++) {
            const kel_observation *o = &t->observations[k];
            if (o->left_out == NULL || strcmp(o->left_out, reason) != 0 || o->line == last)
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

static void
text_stated(kel_text *out, const kel_table *t)
{
    size_t stated = 0, fitted = 0;
    for (size_t i = 0; i < t->observation_count; i++)
        if (t->observations[i].left_out == NULL) {
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

void
text_table(kel_text *out, const kel_table *t, const units *in)
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
    text_columns(out, t);
    kel_text_add(out, "\n");
    add_label(out, "rows");
    kel_text_printf(out, "%zu", t->rows);
    if (t->rows_left_out > 0)
        kel_text_printf(out, ", %zu left out", t->rows_left_out);
    if (t->empty_cells > 0)
        kel_text_printf(out, ", %zu cell%s without a value", t->empty_cells, t->empty_cells == 1 ? "" : "s");
    if (t->marked_cells > 0)
        kel_text_printf(out, ", %zu with a status mark", t->marked_cells);
    if (t->transposed)
        kel_text_add(out, ", temperatures across the top");
    kel_text_add(out, "\n");
    text_left_out(out, t);
    add_label(out, "reference temperature");
    if (isnan(t->reference_temperature))
        kel_text_add(out, "none stated");
    else
        add_temperature(out, &in->temperature, t->reference_temperature);
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
    text_stated(out, t);
    for (size_t i = 0; i < t->note_count; i++) {
        add_label(out, i == 0 ? "note" : "");
        add_quoted(out, "", t->notes[i]);
        kel_text_add(out, "\n");
    }
}

/* --- the fit --- */

static void
text_form(kel_text *out, const kel_content *c, const kel_fit_report *r, const units *in)
{
    add_label(out, "form");
    kel_text_add(out, c->form);
    if (c->piece_count == 1) {
        kel_text_printf(out, " of degree %zu in alpha", c->pieces[0].count - 1);
    } else {
        kel_text_printf(out, ", %zu pieces", c->piece_count);
    }
    if (r != NULL && r->candidate_count > 0)
        kel_text_printf(out, ", chosen among %zu degrees", r->candidate_count);
    kel_text_add(out, "\n");
    if (r != NULL && r->candidate_count > 0 && r->criterion != NULL) {
        add_label(out, "chosen by");
        kel_text_printf(out, "%s\n", r->criterion);
    }
    for (size_t i = 0; i < c->piece_count && c->piece_count > 1; i++) {
        static const char *const joins[] = { "jump", "value", "slope", "curvature" };
        char label[40];
        size_t n = kel_number_format(label, (double)(i + 1));
        memmove(label + 6, label, n + 1);
        memcpy(label, "piece ", 6);
        add_label(out, label);
        add_interval(out, &in->temperature, c->pieces[i].from, c->pieces[i].to);
        kel_text_printf(out, ", degree %zu", c->pieces[i].count - 1);
        if (i > 0 && i - 1 < c->continuity_count) {
            int k = c->continuity[i - 1];
            kel_text_printf(out, k < 0 ? ", alpha may jump at its start" : ", continuous %s of alpha at its start", joins[k + 1]);
        }
        kel_text_add(out, "\n");
    }
}

static void
text_quality(kel_text *out, const kel_content *c, const kel_fit_report *r, const units *in)
{
    add_label(out, "observations");
    kel_text_printf(out, "%zu, for %zu parameter%s; degrees of freedom ", c->observations, c->parameters,
                    c->parameters == 1 ? "" : "s");
    add_digits(out, c->degrees_of_freedom, 4);
    kel_text_add(out, "\n");
    for (size_t i = 0; i < c->column_count; i++) {
        const kel_fit_column *f = &c->columns[i];
        add_label(out, i == 0 ? "residual standard deviation" : "");
        add_shown(out, in, f->kind, f->residual_standard_deviation, 3);
        if (c->column_count > 1) {
            kel_text_printf(out, " for %zu %ss of ", f->observations, kel_kind_name(f->kind));
            add_file_name(out, c->sources[f->source].name);
            add_quoted(out, ", ", f->label);
        }
        kel_text_add(out, "; printed to ");
        add_shown(out, in, f->kind, f->resolution, 3);
        kel_text_add(out, "\n");
    }
    if (!isnan(c->chi2)) {
        add_label(out, "chi2");
        add_digits(out, c->chi2, 4);
        if (c->degrees_of_freedom > 0) {
            kel_text_add(out, "; chi2/nu ");
            add_digits(out, c->chi2 / c->degrees_of_freedom, 3);
        }
        if (r != NULL && !isnan(r->chi2_probability)) {
            kel_text_add(out, "; a smaller one has probability ");
            add_digits(out, r->chi2_probability, 3);
        }
        kel_text_add(out, "\n");
    }
    if (r != NULL && !isnan(r->scaled_factor)) {
        add_label(out, "scaling of U");
        kel_text_add(out, "as stated; by the residuals the scatter's part would be ");
        add_digits(out, r->scaled_factor, 3);
        kel_text_add(out, " times as large\n");
    }
    if (r != NULL) {
        add_label(out, "rank, condition");
        kel_text_printf(out, "%d (full), ", r->rank);
        add_digits(out, r->condition, 2);
        kel_text_add(out, "\n");
    }
}

static void
text_transitions(kel_text *out, const kel_content *c, const units *in)
{
    for (size_t i = 0; i < c->transition_count; i++) {
        const kel_transition *t = &c->transitions[i];
        add_label(out, i == 0 ? "transitions" : "");
        add_temperature(out, &in->temperature, t->at);
        if (t->step == KEL_STEP_NONE) {
            kel_text_add(out, ", alpha may jump\n");
            continue;
        }
        double x = 1e6 * c->mean.steps[i], U = t->step == KEL_STEP_FITTED ? 2e6 * step_u(c, i) : (double)NAN;
        int d = decimals_for(x, U);
        kel_text_printf(out, ", %s step ", t->step == KEL_STEP_FITTED ? "fitted" : "stated");
        add_rounded(out, x, d);
        kel_text_add(out, "e-6");
        if (t->step == KEL_STEP_FITTED) {
            kel_text_add(out, "   U = ");
            add_uncertainty(out, U, d);
            kel_text_add(out, isnan(U) ? "" : "e-6 (k = 2)");
        }
        kel_text_add(out, "\n");
    }
}

void
text_summary(kel_text *out, const kel_content *c, const kel_fit_report *r, const units *in)
{
    text_form(out, c, r, in);
    if (c->column_count > 0)
        text_quality(out, c, r, in);
    add_label(out, "validity range");
    add_interval(out, &in->temperature, c->range.lo, c->range.hi);
    kel_text_add(out, "\n");
    add_label(out, "gaps");
    for (size_t i = 0; i < c->gap_count; i++) {
        kel_text_add(out, i == 0 ? "" : ", ");
        add_interval(out, &in->temperature, c->gaps[i].lo, c->gaps[i].hi);
    }
    kel_text_add(out, c->gap_count == 0 ? "none\n" : "\n");
    text_transitions(out, c, in);
    add_label(out, "reference temperature");
    add_temperature(out, &in->temperature, c->reference_temperature);
    kel_text_add(out, c->reference_defaulted ? ", assumed: no table states one\n" : "\n");
    add_label(out, "base");
    kel_text_printf(out, "%s\n", kel_base_name(c->base));
    add_label(out, "uncertainty");
    static const char *const variances[] = { "of the rows not known", "of the rows as stated", "of the rows estimated from the residuals",
                                             "of the rows partly stated, partly estimated from the residuals",
                                             "stated for the curve" };
    kel_text_printf(out, "%s\n", variances[c->variance]);
    add_label(out, "U (k = 2) covers");
    add_covers(out, c);
    kel_text_add(out, "\n");
    if (student_applies(c)) {
        add_label(out, "");
        add_student(out, c);
    }
}

void
text_candidates(kel_text *out, const kel_content *c, const kel_fit_report *r, const units *in)
{
    kel_text heading = KEL_TEXT_INIT, cell = KEL_TEXT_INIT;
    kel_kind kind = c->column_count > 0 ? c->columns[0].kind : KEL_KIND_COEFFICIENT;
    kel_text_printf(&heading, "residual s.d.\n[%s]", show_unit(in, kind));
    const char *const headings[] = { "degree", "parameters", heading.bytes, "chi2", "criterion", "" };
    columns *table = heading.failed ? NULL : columns_new(headings, 6);
    if (table == NULL) {
        out->failed = true;
        kel_text_free(&heading);
        return;
    }
    for (size_t i = 0; i < r->candidate_count; i++) {
        const kel_candidate *k = &r->candidates[i];
        kel_text_printf(&cell, "%d", k->degree);
        columns_add_text(table, &cell);
        kel_text_printf(&cell, "%zu", k->parameters);
        columns_add_text(table, &cell);
        if (!isnan(k->residual_standard_deviation))
            add_digits(&cell, show_value(in, kind, k->residual_standard_deviation), 3);
        columns_add_text(table, &cell);
        if (!isnan(k->chi2))
            add_digits(&cell, k->chi2, 4);
        columns_add_text(table, &cell);
        if (!isnan(k->criterion))
            add_rounded(&cell, k->criterion, 2);
        columns_add_text(table, &cell);
        kel_text_add(&cell, k->chosen ? "chosen" : k->refused != NULL ? k->refused : "");
        columns_add_text(table, &cell);
    }
    kel_text_add(out, "\nCandidates\n");
    columns_flush(table, out, "  ");
    columns_free(table);
    kel_text_free(&cell);
    kel_text_free(&heading);
}

/* --- residuals --- */

void
add_row_temperatures(kel_text *out, const kel_unit *unit, const kel_fitted *row)
{
    if (row->kind != KEL_KIND_COEFFICIENT && row->from != row->to) {
        add_temperature_number(out, unit, row->from);
        kel_text_add(out, " to ");
    }
    add_temperature_number(out, unit, row->to);
}

static void
residual_cells(columns *table, kel_text *cell, const kel_content *c, const kel_fitted *f, const units *in, bool sources,
               bool largest)
{
    double U = 2 * show_value(in, f->kind, f->u), res = show_value(in, f->kind, c->columns[f->column].resolution);
    /* Two digits more than were printed show the residual of a value that was rounded. */
    int d = decimals_for(show_value(in, f->kind, f->observed), isfinite(U) && U > 0 ? fmin(U, res > 0 ? res : U) : res) + 1;
    if (sources) {
        add_file_name(cell, c->sources[f->source].name);
        columns_add_text(table, cell);
    }
    kel_text_printf(cell, "%zu", f->line);
    columns_add_text(table, cell);
    kel_text_add(cell, kel_kind_name(f->kind));
    columns_add_text(table, cell);
    add_row_temperatures(cell, &in->temperature, f);
    columns_add_text(table, cell);
    const double numbers[] = { f->observed, f->fitted, f->residual, f->shared_term, f->u };
    for (size_t i = 0; i < sizeof numbers / sizeof numbers[0]; i++) {
        if (!isnan(numbers[i]))
            add_rounded(cell, show_value(in, f->kind, numbers[i]), d);
        else if (i == 4 && f->left_out == NULL)
            kel_text_add(cell, "not known");
        columns_add_text(table, cell);
    }
    if (f->left_out != NULL)
        add_quoted(cell, "left out: ", f->left_out);
    else if (largest)
        kel_text_add(cell, "largest");
    columns_add_text(table, cell);
}

/* The row whose residual is largest against its u, or by itself where u is not known. */
static const kel_fitted *
largest_residual(const kel_content *c)
{
    const kel_fitted *found = NULL;
    double most = 0;
    for (size_t i = 0; i < c->row_count; i++) {
        const kel_fitted *f = &c->rows[i];
        double size = fabs(f->residual) / (f->u > 0 ? f->u : 1);
        if (f->left_out == NULL && size > most) {
            most = size;
            found = f;
        }
    }
    return found;
}

void
text_residuals(kel_text *out, const kel_content *c, const units *in, bool fitted)
{
    bool coefficients = false, expansions = false;
    for (size_t i = 0; i < c->column_count; i++) {
        coefficients = coefficients || c->columns[i].kind != KEL_KIND_EXPANSION;
        expansions = expansions || c->columns[i].kind == KEL_KIND_EXPANSION;
    }
    kel_text h = KEL_TEXT_INIT, cell = KEL_TEXT_INIT;
    const char *unit = coefficients && !expansions ? in->coefficient.name : !coefficients && expansions ? "1e-6" : NULL;
    kel_text_printf(&h, "T\n[%s]", in->temperature.name);
    kel_text_add_bytes(&h, "", 1);
    size_t at = h.size;
    if (unit != NULL)
        kel_text_printf(&h, "observed\n[%s]", unit);
    else
        kel_text_printf(&h, "observed\n[%s, 1e-6]", in->coefficient.name);
    bool sources = c->source_count > 1;
    const char *headings[] = { "table", "line", "kind", h.bytes, h.bytes != NULL ? h.bytes + at : "", "fitted", "residual",
                               "shared", "u", "" };
    columns *table = h.failed ? NULL : columns_new(headings + (sources ? 0 : 1), sources ? 10 : 9);
    if (table == NULL) {
        out->failed = true;
        kel_text_free(&h);
        return;
    }
    const kel_fitted *largest = largest_residual(c);
    for (size_t i = 0; i < c->row_count; i++)
        if (!fitted || c->rows[i].left_out == NULL)
            residual_cells(table, &cell, c, &c->rows[i], in, sources, &c->rows[i] == largest);
    columns_flush(table, out, "  ");
    columns_free(table);
    kel_text_free(&cell);
    kel_text_free(&h);
}

/* --- a few answers --- */

int
text_answers(const job *j, kel_text *out, const kel_record *record, const units *in)
{
    const kel_content *c = kel_record_content(record);
    for (int i = 0; i < 3; i++) {
        double t = i == 0 ? c->range.lo : i == 2 ? c->range.hi : (c->range.lo + c->range.hi) / 2;
        if (i > 0 && c->range.lo == c->range.hi)
            break;
        kel_answer a;
        kel_error err = { 0 };
        if (kel_record_coefficient(&a, record, t, &err) < 0)
            return fail(j, NULL, &err);
        kel_text label = KEL_TEXT_INIT;
        kel_text_add(&label, "alpha at ");
        add_temperature(&label, &in->temperature, t);
        add_label(out, label.failed ? "" : label.bytes);
        out->failed = out->failed || label.failed;
        kel_text_free(&label);
        add_measured(out, &in->coefficient, a.value, a.u);
        if (!isnan(a.u))
            kel_text_add(out, " (k = 2)");
        if (a.flags & KEL_FLAG_GAP)
            kel_text_add(out, ", in a gap");
        kel_text_add(out, "\n");
    }
    return EXIT_FINE;
}
