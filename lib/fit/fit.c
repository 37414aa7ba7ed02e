/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kel_fit: tables in, record and report out. The steps are observe (rows), choose the degree, solve, compile; this file
   strings them together and collects what the user should be told. */
#include "problem.h"
#include "blanks.h"
#include "number_text.h"

#include <stdlib.h>
#include <string.h>

enum { MOST_WARNINGS = 16, BAND_POINTS = 64 };

/* A report owns one arena that all it points to lives in. */
typedef struct owned_report {
    kel_fit_report report; /* first, so that a pointer to it is a pointer to the whole */
    kel_arena *memory;
    kel_warning list[MOST_WARNINGS];
} owned_report;

static kel_status
warn(owned_report *r, const char *code, kel_error *err, const char *text)
{
    char *copy = kel_arena_string(r->memory, text);
    if (copy == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while reporting a fit");
    if (r->report.warning_count < MOST_WARNINGS)
        r->list[r->report.warning_count++] = (kel_warning){ code, copy, 0, 1 };
    return KEL_OK;
}

static kel_status
warn_text(owned_report *r, const char *code, kel_text *text, kel_error *err)
{
    kel_status status = text->failed ? kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while reporting a fit") : warn(r, code, err, text->bytes);
    kel_text_free(text);
    return status;
}

static void
add_temperature(kel_text *text, double t)
{
    char name[KEL_NUMBER_SIZE];
    kel__temperature_name(name, t);
    kel_text_printf(text, "%s K", name);
}

static kel_status
warn_materials(owned_report *r, const kel__problem *p, kel_error *err)
{
    const kel_table *first = NULL;
    for (size_t i = 0; i < p->table_count; i++) {
        const kel_table *t = p->tables[i];
        if (t->material == NULL)
            continue;
        if (first == NULL)
            first = t;
        if (kel__is_word(first->material, strlen(first->material), t->material))
            continue;
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, "the tables name their material differently: '");
        kel_text_quote(&text, first->material, strlen(first->material));
        kel_text_add(&text, "' and '");
        kel_text_quote(&text, t->material, strlen(t->material));
        kel_text_add(&text, "'");
        return warn_text(r, "material", &text, err);
    }
    return KEL_OK;
}

static kel_status
warn_uncertainty(owned_report *r, const kel__problem *p, const kel__solution *s, kel_error *err)
{
    bool all_stated = s->stated == p->row_count;
    kel_status status = KEL_OK;
    if (s->parameters == p->row_count)
        status = warn(r, "no-misfit", err, "as many parameters as rows: nothing shows how well the curve fits");
    if (status == KEL_OK && !all_stated && !s->scatter_known)
        status = warn(r, "scatter-unknown", err,
                      p->shared_count > 0 ? "too few rows to estimate their scatter: u holds only what is stated"
                                          : "too few rows to estimate their scatter, and none is stated for all of them");
    double below = r->report.chi2_probability;
    if (status == KEL_OK && (below < 0.001 || below > 0.999)) {
        kel_text text = KEL_TEXT_INIT;
        char value[KEL_NUMBER_SIZE];
        kel_number_format_digits(value, r->report.scaled_factor * r->report.scaled_factor, 3);
        kel_text_printf(&text,
                        "chi2 per degree of freedom is %s: the stated uncertainties are %s than the residuals show",
                        value, below > 0.5 ? "smaller" : "larger");
        status = warn_text(r, "chi2", &text, err);
    }
    return status;
}

/* Does something in the piece resolve less than half of it? A coefficient, a short interval, or two intervals of one
   column that share an end. */
static bool
well_supported(const kel__problem *p, const kel_piece *piece)
{
    double half = (piece->to - piece->from) / 2;
    const kel__row *before = NULL;
    for (size_t i = 0; i < p->row_count; i++) {
        const kel__row *row = &p->rows[i];
        const kel_observation *o = row->seen;
        double lo = fmin(o->from, o->to), hi = fmax(o->from, o->to);
        if (before != NULL && before->column == row->column && before->seen->from == o->from) {
            lo = fmin(before->seen->to, o->to);
            hi = fmax(before->seen->to, o->to);
            if (hi - lo <= half && lo < piece->to && hi > piece->from && lo < hi)
                return true;
        }
        before = row;
        lo = fmin(o->from, o->to), hi = fmax(o->from, o->to);
        bool touches = o->kind == KEL_KIND_COEFFICIENT ? o->to >= piece->from && o->to <= piece->to
                                                       : lo < piece->to && hi > piece->from;
        if (touches && hi - lo <= half)
            return true;
    }
    return false;
}

static kel_status
warn_support(owned_report *r, const kel__problem *p, const kel__solution *s, kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    size_t pieces = 0;
    for (size_t i = 0; i < s->layout.piece_count; i++) {
        const kel_piece *piece = &s->layout.pieces[i];
        if (piece->from == piece->to || well_supported(p, piece) || pieces++ > 0)
            continue;
        kel_text_add(&text, "the piece from ");
        add_temperature(&text, piece->from);
        kel_text_add(&text, " to ");
        add_temperature(&text, piece->to);
        kel_text_add(&text, " rests only on intervals wider than half of it");
    }
    if (pieces == 0)
        return KEL_OK;
    kel_status status = warn_text(r, "wide-support", &text, err);
    r->list[r->report.warning_count - 1].count = pieces;
    return status;
}

/* Where alpha is smaller than its expanded uncertainty its very sign is open. */
static kel_status
warn_band(owned_report *r, const kel_record *record, kel_error *err)
{
    const kel_content *c = kel_record_content(record);
    for (size_t i = 0; i < c->piece_count; i++)
        for (int k = 0; k <= BAND_POINTS; k++) {
            double t = c->pieces[i].from + (c->pieces[i].to - c->pieces[i].from) * k / BAND_POINTS;
            kel_answer a;
            if (!kel_record_inside(record, t) || kel_record_coefficient(&a, record, t, NULL) < 0 ||
                !(fabs(a.value) < 2 * a.u))
                continue;
            kel_text text = KEL_TEXT_INIT;
            kel_text_add(&text, "at ");
            add_temperature(&text, t);
            kel_text_add(&text,
                         " the coefficient is smaller than its own uncertainty (k = 2): its sign is not settled there");
            return warn_text(r, "sign-open", &text, err);
        }
    return KEL_OK;
}

static kel_status
warn_reference(owned_report *r, const kel_record *record, kel_error *err)
{
    const kel_content *c = kel_record_content(record);
    if (kel_record_inside(record, c->reference_temperature))
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "the reference temperature ");
    add_temperature(&text, c->reference_temperature);
    kel_text_add(&text, " lies outside the validity range ");
    add_temperature(&text, c->range.lo);
    kel_text_add(&text, " to ");
    add_temperature(&text, c->range.hi);
    kel_text_add(&text, ": every expansion from it is an extrapolation");
    return warn_text(r, "reference-outside", &text, err);
}

/* chi2 counts the stated rows and the prior rows; its expectation is n - k less what the unstated rows hold of that. */
static double
chi2_freedom(const kel__problem *p, const kel__solution *s)
{
    double all = -s->stated_leverage, unstated = (double)(p->row_count - s->stated);
    for (size_t c = 0; c < p->column_count; c++)
        all += s->leverage[c];
    double freedom = (double)p->row_count - (double)s->parameters;
    return unstated > 0 ? freedom - (unstated - all) : freedom;
}

static void
fill_numbers(kel_fit_report *r, const kel__problem *p, const kel__solution *s)
{
    double freedom = chi2_freedom(p, s);
    r->rank = s->rank;
    r->condition = s->condition;
    r->iterations = s->iterations;
    r->chi2_probability = s->stated > 0 && freedom > 1e-6 ? kel__chi2_below(s->chi2, freedom) : (double)NAN;
    r->scaled_factor = s->stated > 0 && freedom > 1e-6 ? sqrt(s->chi2 / freedom) : (double)NAN;
}

static kel_status
check_options(const kel_fit_options *o, size_t table_count, kel_error *err)
{
    if (table_count == 0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "a fit needs a table");
    if (o->piecewise && o->join_count == 0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0,
                             "a piecewise form needs joins: the temperatures where its pieces meet");
    if (o->base < -1 || o->base > KEL_BASE_CURRENT || o->range.lo > o->range.hi || o->gap < 0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "fit options: unknown base, empty range or negative gap");
    if (isinf(o->reference) || o->reference < 0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "fit options: the reference is not a temperature");
    for (size_t i = 0; i < o->continuity_count; i++)
        if (o->continuity[i] < KEL_CONTINUITY_NONE || o->continuity[i] > KEL_CONTINUITY_CURVATURE)
            return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "fit options: unknown continuity %d", o->continuity[i]);
    for (size_t i = 0; i < o->join_count; i++)
        if (!isfinite(o->joins[i]))
            return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "fit options: join %zu is not a temperature", i + 1);
    return KEL_OK;
}

kel_status
kel_fit(kel_record **out, kel_fit_report **report, const kel_table *const *tables, size_t table_count,
        const kel_fit_options *options, kel_error *err)
{
    static const kel_fit_options defaults = KEL_FIT_OPTIONS_INIT;
    const kel_fit_options *o = options != NULL ? options : &defaults;
    *out = NULL;
    if (report != NULL)
        *report = NULL;
    kel_status status = check_options(o, table_count, err);
    if (status < 0)
        return status;
    kel_arena *memory = kel_arena_new();
    owned_report *r = calloc(1, sizeof *r);
    if (r != NULL)
        r->memory = kel_arena_new();
    if (memory == NULL || r == NULL || r->memory == NULL) {
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory in a fit");
        goto end;
    }
    kel__problem p;
    kel__solution s;
    if ((status = kel__problem_make(&p, memory, tables, table_count, o, err)) < 0 ||
        (status = kel__choose_degree(&s, &r->report, &p, memory, r->memory, err)) < 0 ||
        (status = kel__compile(out, &p, &s, memory, err)) < 0)
        goto end;
    fill_numbers(&r->report, &p, &s);
    r->report.warnings = r->list;
    if ((status = warn_materials(r, &p, err)) < 0 || (status = warn_uncertainty(r, &p, &s, err)) < 0 ||
        (status = warn_support(r, &p, &s, err)) < 0 || (status = warn_band(r, *out, err)) < 0)
        goto end;
    status = warn_reference(r, *out, err);

end:
    kel_arena_free(memory);
    if (status < 0) {
        kel_record_free(*out);
        *out = NULL;
    }
    if (r != NULL && (report == NULL || status < 0)) {
        kel_fit_report_free(&r->report);
    } else if (report != NULL && r != NULL) {
        *report = &r->report;
    }
    return status;
}

void
kel_fit_report_free(kel_fit_report *report)
{
    if (report == NULL)
        return;
    owned_report *r = (owned_report *)report;
    kel_arena_free(r->memory);
    free(r);
}
