/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan show RECORD: what a record holds; with --powers the coefficients as powers of the temperature. */
#include "commands.h"
#include "files.h"
#include "messages.h"
#include "report.h"
#include "reservations.h"

#include <string.h>
#include <unistd.h>

const option_group show_options = { "Content", (const option_entry[]){
    { OPT_POWERS, 0, "powers", NULL, false, "each piece's coefficients of powers of T with standard uncertainties, "
      "in the units asked for; with --csv as a file that adopt reads" },
    { 0, 0, NULL, NULL, false, NULL } } };

/* Powers of one piece with their u; the caller's job owns the memory. t = (T - centre)/scale. */
static int
powers_of(job *j, const subject *s, size_t piece, double centre, double scale, double **power, double **u)
{
    size_t n = s->content->pieces[piece].count;
    kel_error err = { 0 };
    *power = kel_arena_take(j->memory, n, sizeof **power);
    *u = kel_arena_take(j->memory, n, sizeof **u);
    if (*power == NULL || *u == NULL)
        return fail_memory(j);
    kel_status status = kel_record_powers(*power, *u, s->record, piece, centre, scale, &err);
    return status < 0 ? fail(j, s->name, &err) : EXIT_FINE;
}

/* --- JSON --- */

/* Of a mode: one list for each piece, one step for each transition. */
static void
json_curve(kel_json *json, const kel_content *c, const kel_curve *curve)
{
    kel_json_array(json, "chebyshev");
    for (size_t i = 0; i < c->piece_count; i++)
        kel_json_numbers(json, NULL, curve->coefficients + c->pieces[i].first, c->pieces[i].count);
    kel_json_end(json);
    kel_json_numbers(json, "steps", curve->steps, c->transition_count);
}

/* Always in kelvin, whatever --temperature-unit says: the unit is in the key. */
static int
json_pieces(job *j, kel_json *json, const subject *s)
{
    const kel_content *c = s->content;
    int status = EXIT_FINE;
    kel_json_array(json, "pieces");
    for (size_t i = 0; i < c->piece_count && status == EXIT_FINE; i++) {
        const kel_piece *p = &c->pieces[i];
        kel_json_object(json, NULL);
        kel_json_number(json, "from_K", p->from);
        kel_json_number(json, "to_K", p->to);
        kel_json_numbers(json, "chebyshev", c->mean.coefficients + p->first, p->count);
        if (option_given(j, OPT_POWERS)) {
            double *power, *u;
            status = powers_of(j, s, i, 0, 1, &power, &u);
            if (status == EXIT_FINE) {
                kel_json_numbers(json, "powers_per_K", power, p->count);
                kel_json_numbers(json, "powers_u", u, p->count);
            }
        }
        kel_json_end(json);
    }
    kel_json_end(json);
    return status;
}

/* Where the numbers came from, with the digest by which a file can be recognised. */
static void
json_sources(kel_json *json, const kel_content *c)
{
    kel_json_array(json, "sources");
    for (size_t i = 0; i < c->source_count; i++) {
        const kel_source *t = &c->sources[i];
        kel_json_object(json, NULL);
        kel_json_string(json, "table", t->name);
        kel_json_string(json, "sha256", t->digest);
        kel_json_string(json, "material", t->material);
        kel_json_string(json, "condition", t->condition);
        kel_json_string(json, "direction", t->direction);
        kel_json_string(json, "source", t->source);
        kel_json_count(json, "rows", t->rows);
        kel_json_count(json, "left_out", t->left_out);
        kel_json_end(json);
    }
    kel_json_end(json);
}

/* All of the curve, so that another program could evaluate it. */
static int
json_result(job *j, const subject *s, kel_text *out)
{
    static const char *const kinds[] = { "none", "fitted", "stated" };
    const kel_content *c = s->content;
    kel_json json;
    kel_json_begin(&json, out);
    kel_json_object(&json, NULL);
    kel_json_string(&json, "record", s->name);
    kel_json_string(&json, "form", c->form);
    kel_json_string(&json, "base", kel_base_name(c->base));
    kel_json_number(&json, "reference_temperature_K", c->reference_temperature);
    double range[2] = { c->range.lo, c->range.hi };
    kel_json_numbers(&json, "range_K", range, 2);
    kel_json_inline_array(&json, "gaps_K");
    for (size_t i = 0; i < c->gap_count; i++)
        kel_json_numbers(&json, NULL, (double[]){ c->gaps[i].lo, c->gaps[i].hi }, 2);
    kel_json_end(&json);
    int status = json_pieces(j, &json, s);
    kel_json_array(&json, "steps");
    for (size_t i = 0; i < c->transition_count; i++) {
        kel_json_inline_object(&json, NULL);
        kel_json_number(&json, "at_K", c->transitions[i].at);
        kel_json_string(&json, "kind", kinds[c->transitions[i].step]);
        kel_json_number(&json, "length", c->mean.steps[i]);
        kel_json_number(&json, "length_u", c->transitions[i].step == KEL_STEP_FITTED ? step_u(c, i) : (double)NAN);
        kel_json_end(&json);
    }
    kel_json_end(&json);
    kel_json_array(&json, "modes");
    for (size_t i = 0; i < c->mode_count; i++) {
        kel_json_object(&json, NULL);
        kel_json_string(&json, "kind", kel_mode_kind_name(c->modes[i].kind));
        kel_json_string(&json, "label", c->modes[i].label);
        json_curve(&json, c, &c->modes[i].curve);
        kel_json_end(&json);
    }
    kel_json_end(&json);
    kel_json_string(&json, "variance", kel_variance_name(c->variance));
    kel_json_bool(&json, "scatter_known", c->scatter_known);
    kel_json_number(&json, "degrees_of_freedom", c->degrees_of_freedom);
    json_sources(&json, c);
    kel_json_string(&json, "digest", c->digest);
    json_reservations(j, &json);
    json_warnings(j, &json);
    kel_json_end(&json);
    return status;
}

/* --- text --- */

/* t = (T - centre)/scale counts in the unit: its zero in kelvin, and its degree in kelvin. */
static void
unit_frame(const kel_unit *unit, double *centre, double *scale)
{
    kel_unit degree = *unit;
    degree.offset_e2 = 0;
    *centre = kel_unit_to_si(unit, 0);
    *scale = kel_unit_to_si(&degree, 1);
}

/* Fifteen digits: fewer would change the curve, more would show the noise of the conversion. --csv has all. */
static int
text_powers(job *j, kel_text *out, const subject *s, const units *in)
{
    const kel_content *c = s->content;
    double centre, scale;
    unit_frame(&in->temperature, &centre, &scale);
    kel_text_printf(out, "\nPowers: alpha in %s is the sum of coefficient times T^power, T in %s\n",
                    in->coefficient.name,
                    in->temperature.name);
    static const char *const headings[] = { "piece", "power", "coefficient", "standard uncertainty" };
    columns *table = columns_new(headings, 4);
    kel_text cell = KEL_TEXT_INIT;
    int status = table == NULL ? fail_memory(j) : EXIT_FINE;
    for (size_t i = 0; i < c->piece_count && status == EXIT_FINE; i++) {
        double *power, *u;
        status = powers_of(j, s, i, centre, scale, &power, &u);
        for (size_t k = 0; k < c->pieces[i].count && status == EXIT_FINE; k++) {
            if (k == 0)
                add_interval(&cell, &in->temperature, c->pieces[i].from, c->pieces[i].to);
            columns_add_text(table, &cell);
            kel_text_printf(&cell, "%zu", k);
            columns_add_text(table, &cell);
            add_digits(&cell, kel_unit_from_si(&in->coefficient, power[k]), 15);
            columns_add_text(table, &cell);
            add_digits(&cell, kel_unit_from_si(&in->coefficient, u[k]), 3);
            columns_add_text(table, &cell);
        }
    }
    if (status == EXIT_FINE)
        columns_flush(table, out, "  ");
    kel_text_free(&cell);
    columns_free(table);
    return status;
}

/* The same summary as that of a fit, made from the record alone. */
static int
text_result(job *j, const subject *s, const units *in, kel_text *out)
{
    const kel_content *c = s->content;
    add_file_name(out, s->name);
    kel_text_add(out, "\n");
    for (size_t i = 0; i < c->source_count; i++) {
        const kel_source *t = &c->sources[i];
        add_label(out, i == 0 ? "made from" : "");
        add_file_name(out, t->name);
        add_quoted(out, ": ", t->material);
        add_quoted(out, ", ", t->condition);
        add_quoted(out, ", direction ", t->direction);
        add_quoted(out, "; source: ", t->source);
        kel_text_add(out, "\n");
    }
    text_summary(out, c, NULL, in);
    int status = text_answers(j, out, s->record, in);
    add_label(out, "digest");
    kel_text_printf(out, "%s\n", c->digest != NULL ? c->digest : "none");
    if (status == EXIT_FINE && option_given(j, OPT_POWERS))
        status = text_powers(j, out, s, in);
    return status;
}

/* --csv is a layout of powers only; a record as a whole has no table. */
int
run_show(job *j)
{
    units in;
    subject s;
    if (j->operand_count != 1)
        return usage(j, "show takes one record, not %zu operands", j->operand_count);
    if (j->csv && !option_given(j, OPT_POWERS))
        return usage(j, "--csv needs --powers");
    int status = units_begin(j, &in);
    if (status == EXIT_FINE)
        status = subject_open(j, &s, j->operands[0]);
    if (status != EXIT_FINE)
        return status;
    kel_error err = { 0 };
    sink out;
    sink_begin(&out, STDOUT_FILENO);
    if (j->json)
        status = json_result(j, &s, &out.pending);
    else if (!j->csv)
        status = text_result(j, &s, &in, &out.pending);
    else if (kel_coefficients_format(&out.pending, s.record, &in.temperature, &in.coefficient, &err) < 0)
        status = fail(j, s.name, &err);
    if (status == EXIT_FINE)
        status = sink_end(j, &out);
    kel_text_free(&out.pending);
    subject_close(&s);
    return status == EXIT_FINE ? finish(j) : status;
}
