/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What is said of a fit or of adopted coefficients, for people: how it was made, how well it meets its observations,
   where it holds, what its uncertainty covers. */
#include "report.h"

#include "messages.h"

#include <string.h>

/* Expansions are shown in parts per million, in the form that says so: 1e-6. */
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

/* Labels have one width, so that the report can be read down its right side. */
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

/* Data from files may hold anything; on a terminal it must be harmless. */
void
add_quoted(kel_text *out, const char *before, const char *text)
{
    if (text != NULL) {
        kel_text_add(out, before);
        kel_text_quote(out, text, strlen(text));
    }
}

/* An SI value of a kind, in the unit of that kind. */
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

/* The degree is that of alpha. Pieces get a line each, with how they join the one before. */
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
    size_t compared = 0;
    for (size_t i = 0; r != NULL && i < r->candidate_count; i++)
        compared += r->candidates[i].refused == NULL;
    if (compared > 0)
        kel_text_printf(out, ", chosen among %zu degree%s", compared, compared == 1 ? "" : "s");
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
            kel_text_printf(out, k < 0 ? ", alpha may jump at its start" : ", continuous %s of alpha at its start",
                            joins[k + 1]);
        }
        kel_text_add(out, "\n");
    }
}

/* How well the curve meets its observations. A residual standard deviation far above the resolution that stands
   beside it is scatter; one below it is rounding. */
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
        /* Of mixed rows nu is not n - k, and a record alone does not say what it is. */
        double ratio = r != NULL ? r->scaled_factor * r->scaled_factor : c->chi2 / c->degrees_of_freedom;
        if (isfinite(ratio) && (r != NULL || c->variance != KEL_VARIANCE_MIXED)) {
            kel_text_add(out, "; chi2/nu ");
            add_digits(out, ratio, 3);
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

/* A fitted step comes with its U, a stated one is taken as it is. */
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

/* The lines that fit, adopt and show have in common. */
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
    static const char *const variances[] = { "of the rows not known", "of the rows as stated",
                                            "of the rows estimated from the residuals",
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

/* At the ends and in the middle of the range: ends carried by little data show as a large U. */
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
        if (a.flags & KEL_FLAG_GAP)
            kel_text_add(out, ", in a gap");
        kel_text_add(out, "\n");
    }
    return EXIT_FINE;
}
