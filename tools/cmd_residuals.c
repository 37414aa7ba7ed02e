/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan residuals RECORD: the observations, what the curve makes of them, and what was left out. */
#include "commands.h"
#include "files.h"
#include "messages.h"
#include "report.h"
#include "reservations.h"

#include <string.h>
#include <unistd.h>

/* A coefficient has one temperature, and so has a mean at its own reference, which is one. */
static void
json_row(kel_json *json, const kel_content *c, const kel_fitted *f)
{
    kel_json_object(json, NULL);
    kel_json_string(json, "table", c->sources[f->source].name);
    kel_json_count(json, "line", f->line);
    kel_json_string(json, "kind", kel_kind_name(f->kind));
    if (f->kind == KEL_KIND_COEFFICIENT || f->from == f->to) {
        kel_json_number(json, "temperature_K", f->to);
    } else {
        kel_json_number(json, "from_K", f->from);
        kel_json_number(json, "to_K", f->to);
    }
    kel_json_number(json, "observed", f->observed);
    kel_json_number(json, "fitted", f->fitted);
    kel_json_number(json, "residual", f->residual);
    kel_json_number(json, "shared_term", f->shared_term);
    kel_json_number(json, "u", f->u);
    kel_json_string(json, "left_out", f->left_out);
    kel_json_end(json);
}

/* Rows pass through the sink one by one. */
static void
json_result(const job *j, const subject *s, sink *out)
{
    const kel_content *c = s->content;
    kel_json json;
    kel_json_begin(&json, &out->pending);
    kel_json_object(&json, NULL);
    kel_json_string(&json, "record", s->name);
    kel_json_bool(&json, "thinned", c->thinned);
    kel_json_array(&json, "rows");
    for (size_t i = 0; i < c->row_count && sink_pass(out); i++)
        json_row(&json, c, &c->rows[i]);
    kel_json_end(&json);
    json_reservations(j, &json);
    json_warnings(j, &json);
    kel_json_end(&json);
}

/* A name or a reason as one cell: in quotes where it holds what parts cells or rows. */
static void
csv_words(kel_text *out, const char *words)
{
    if (words == NULL)
        return;
    if (strpbrk(words, ",\"\n\r;\t") == NULL) {
        kel_text_add(out, words);
        return;
    }
    kel_text_add(out, "\"");
    for (const char *c = words; *c != '\0'; c++)
        kel_text_add_bytes(out, *c == '"' ? "\"\"" : c, *c == '"' ? 2 : 1);
    kel_text_add(out, "\"");
}

/* Empty where a number is not known. */
static void
csv_number(kel_text *out, double x)
{
    if (!isnan(x))
        kel_text_number(out, x);
    kel_text_add(out, ",");
}

/* One layout for all kinds: from = to for coefficients, the unit stands in each row. */
static void
csv_result(const subject *s, const units *in, sink *out)
{
    const kel_content *c = s->content;
    kel_text *text = &out->pending;
    kel_text_printf(text, "table,line,kind,from [%s],to [%s],observed,fitted,residual,shared term,u,unit,left out\n",
                    in->temperature.name, in->temperature.name);
    for (size_t i = 0; i < c->row_count && sink_pass(out); i++) {
        const kel_fitted *f = &c->rows[i];
        bool expansion = f->kind == KEL_KIND_EXPANSION;
        const double numbers[] = { f->observed, f->fitted, f->residual, f->shared_term, f->u };
        csv_words(text, c->sources[f->source].name);
        kel_text_printf(text, ",%zu,%s,", f->line, kel_kind_name(f->kind));
        csv_number(text, kel_unit_from_si(&in->temperature, f->from));
        csv_number(text, kel_unit_from_si(&in->temperature, f->to));
        for (size_t k = 0; k < sizeof numbers / sizeof numbers[0]; k++)
            csv_number(text, expansion ? numbers[k] : kel_unit_from_si(&in->coefficient, numbers[k]));
        kel_text_printf(text, "%s,", expansion ? "1" : in->coefficient.name);
        csv_words(text, f->left_out);
        kel_text_add(text, "\n");
    }
}

/* The table of the report, with the rows that were left out. */
static void
text_result(const subject *s, const units *in, sink *out)
{
    const kel_content *c = s->content;
    kel_text *text = &out->pending;
    add_file_name(text, s->name);
    kel_text_printf(text, ": %s, %zu observations, u is the standard uncertainty of a row%s\n", c->form,
                    c->observations,
                    c->thinned ? "; a thinned set of the rows" : "");
    if (c->reference_defaulted) {
        kel_text_add(text, "reference temperature none stated: ");
        add_temperature(text, &in->temperature, c->reference_temperature);
        kel_text_add(text, " is assumed\n");
    }
    kel_text_add(text, "\n");
    text_residuals(text, c, in, false);
}

/* Adopted coefficients have no observations. An empty list would look like a perfect fit, so that is an error. */
int
run_residuals(job *j)
{
    units in;
    subject s;
    if (j->operand_count != 1)
        return usage(j, "residuals takes one record, not %zu operands", j->operand_count);
    int status = units_begin(j, &in);
    if (status == EXIT_FINE)
        status = subject_open(j, &s, j->operands[0]);
    if (status != EXIT_FINE)
        return status;
    if (strcmp(s.content->form, "adopted") == 0) {
        status = fail_text(j, s.name, "adopted from published coefficients: it holds no observations, so there are no "
                                      "residuals");
    } else {
        sink out;
        sink_begin(&out, STDOUT_FILENO);
        if (j->json)
            json_result(j, &s, &out);
        else if (j->csv)
            csv_result(&s, &in, &out);
        else
            text_result(&s, &in, &out);
        status = sink_end(j, &out);
    }
    subject_close(&s);
    return status == EXIT_FINE ? finish(j) : status;
}
