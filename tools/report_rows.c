/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables of a report: the candidates among which a degree was chosen, and the observations with their residuals. */
#include "report.h"

#include "messages.h"

/* A degree that could not be compared says why in the place of its criterion. */
void
text_candidates(kel_text *out, const kel_content *c, const kel_fit_report *r, const units *in)
{
    kel_text heading = KEL_TEXT_INIT, cell = KEL_TEXT_INIT;
    kel_kind kind = c->column_count > 0 ? c->columns[0].kind : KEL_KIND_COEFFICIENT;
    kel_text_printf(&heading, "residual s.d.\n[%s]", show_unit(in, kind));
    bool chi2 = false;
    for (size_t i = 0; i < r->candidate_count; i++)
        chi2 = chi2 || !isnan(r->candidates[i].chi2);
    const char *const with[] = { "degree", "parameters", heading.bytes, "chi2", "criterion", "" };
    const char *const without[] = { "degree", "parameters", heading.bytes, "criterion", "" };
    columns *table = heading.failed ? NULL : columns_new(chi2 ? with : without, chi2 ? 6 : 5);
    if (table == NULL) {
        out->failed = true;
        kel_text_free(&heading);
        return;
    }
    for (size_t i = 0; i < r->candidate_count; i++) {
        const kel_candidate *k = &r->candidates[i];
        kel_text_printf(&cell, "%d", k->degree);
        columns_add_text(table, &cell);
        if (k->parameters > 0)
            kel_text_printf(&cell, "%zu", k->parameters);
        columns_add_text(table, &cell);
        if (!isnan(k->residual_standard_deviation))
            add_digits(&cell, show_value(in, kind, k->residual_standard_deviation), 3);
        columns_add_text(table, &cell);
        if (!isnan(k->chi2))
            add_digits(&cell, k->chi2, 4);
        if (chi2)
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

/* A mean over no interval is a coefficient and is shown as one. */
void
add_row_temperatures(kel_text *out, const kel_unit *unit, const kel_fitted *row)
{
    if (row->kind != KEL_KIND_COEFFICIENT && row->from != row->to) {
        add_temperature_number(out, unit, row->from);
        kel_text_add(out, " to ");
    }
    add_temperature_number(out, unit, row->to);
}

/* Numbers of one row have the same decimals, so that observed less fitted can be checked by eye. */
static void
residual_cells(columns *table, kel_text *cell, const kel_content *c, const kel_fitted *f, const units *in, bool sources,
               bool shared, bool largest)
{
    double U = 2 * show_value(in, f->kind, f->u), res = show_value(in, f->kind, c->columns[f->column].resolution);
    /* Two digits more than were printed show the residual of a value that was rounded. */
    int d = decimals_for(show_value(in, f->kind, f->observed), isfinite(U) && U > 0 ? fmin(U, res > 0 ? res : U)
                         : res) + 1;
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
        if (i == 3 && !shared)
            continue;
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

/* The unit stands in the heading where all rows share one. The column of shared terms appears only if there are any.
   */
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
    bool shared = false;
    for (size_t i = 0; i < c->row_count; i++)
        shared = shared || fabs(c->rows[i].shared_term) > 1e-9 * fabs(c->rows[i].observed);
    const char *headings[10];
    size_t n = 0;
    if (sources)
        headings[n++] = "table";
    headings[n++] = "line";
    headings[n++] = "kind";
    headings[n++] = h.bytes;
    headings[n++] = h.bytes != NULL ? h.bytes + at : "";
    headings[n++] = "fitted";
    headings[n++] = "residual";
    if (shared)
        headings[n++] = "shared";
    headings[n++] = "u";
    headings[n++] = "";
    columns *table = h.failed ? NULL : columns_new(headings, n);
    if (table == NULL) {
        out->failed = true;
        kel_text_free(&h);
        return;
    }
    const kel_fitted *largest = largest_residual(c);
    for (size_t i = 0; i < c->row_count; i++)
        if (!fitted || c->rows[i].left_out == NULL)
            residual_cells(table, &cell, c, &c->rows[i], in, sources, shared, &c->rows[i] == largest);
    columns_flush(table, out, "  ");
    columns_free(table);
    kel_text_free(&cell);
    kel_text_free(&h);
}
