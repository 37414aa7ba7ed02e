/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What is said of a fit or of adopted coefficients, for programs: SI, all digits, null where not known. */
#include "report.h"

/* u^2 is the sum of squares of the step in the modes, as for any answer. */
double
step_u(const kel_content *c, size_t transition)
{
    double sum = 0;
    if (c->mode_count == 0)
        return (double)NAN;
    for (size_t k = 0; k < c->mode_count; k++)
        sum += c->modes[k].curve.steps[transition] * c->modes[k].curve.steps[transition];
    return sqrt(sum);
}

/* One number where the pieces agree, which is what scripts mostly want; a list in the order of temperature where not.
   */
static void
json_degree(kel_json *json, const kel_content *c)
{
    bool one = c->piece_count > 0;
    for (size_t i = 1; i < c->piece_count; i++)
        one = one && c->pieces[i].count == c->pieces[0].count;
    if (one) {
        kel_json_count(json, "degree", c->pieces[0].count - 1);
        return;
    }
    kel_json_inline_array(json, "degree");
    for (size_t i = 0; i < c->piece_count; i++)
        kel_json_count(json, NULL, c->pieces[i].count - 1);
    kel_json_end(json);
}

/* One object for each value column that was fitted. */
static void
json_columns(kel_json *json, const kel_content *c)
{
    kel_json_array(json, "columns");
    for (size_t i = 0; i < c->column_count; i++) {
        const kel_fit_column *f = &c->columns[i];
        kel_json_object(json, NULL);
        kel_json_string(json, "table", c->sources[f->source].name);
        kel_json_string(json, "kind", kel_kind_name(f->kind));
        kel_json_string(json, "label", f->label);
        kel_json_count(json, "observations", f->observations);
        kel_json_number(json, "residual_standard_deviation", f->residual_standard_deviation);
        kel_json_number(json, "degrees_of_freedom", f->degrees_of_freedom);
        kel_json_number(json, "scatter", f->scatter);
        kel_json_number(json, "resolution", f->resolution);
        kel_json_string(json, "variance", kel_variance_name(f->variance));
        kel_json_end(json);
    }
    kel_json_end(json);
}

/* A stated step has no uncertainty of its own: null, not 0. */
static void
json_transitions(kel_json *json, const kel_content *c)
{
    static const char *const kinds[] = { "none", "fitted", "stated" };
    kel_json_array(json, "transitions");
    for (size_t i = 0; i < c->transition_count; i++) {
        const kel_transition *t = &c->transitions[i];
        kel_json_inline_object(json, NULL);
        kel_json_number(json, "at_K", t->at);
        kel_json_string(json, "step", kinds[t->step]);
        kel_json_number(json, "length", t->step == KEL_STEP_NONE ? (double)NAN : c->mean.steps[i]);
        kel_json_number(json, "length_u", t->step == KEL_STEP_FITTED ? step_u(c, i) : (double)NAN);
        kel_json_end(json);
    }
    kel_json_end(json);
}

/* Keys in the order of the manual page. Integers are written as integers; what is not known is null. */
void
json_summary(kel_json *json, const kel_content *c)
{
    kel_json_string(json, "form", c->form);
    json_degree(json, c);
    kel_json_count(json, "observations", c->observations);
    kel_json_count(json, "parameters", c->parameters);
    kel_json_number(json, "degrees_of_freedom", c->degrees_of_freedom);
    kel_json_number(json, "residual_standard_deviation", c->residual_standard_deviation);
    json_columns(json, c);
    kel_json_number(json, "chi2", c->chi2);
    double range[2] = { c->range.lo, c->range.hi };
    kel_json_numbers(json, "range_K", range, 2);
    kel_json_inline_array(json, "gaps_K");
    for (size_t i = 0; i < c->gap_count; i++) {
        double gap[2] = { c->gaps[i].lo, c->gaps[i].hi };
        kel_json_numbers(json, NULL, gap, 2);
    }
    kel_json_end(json);
    kel_json_array(json, "pieces");
    for (size_t i = 0; i < c->piece_count; i++) {
        kel_json_inline_object(json, NULL);
        kel_json_number(json, "from_K", c->pieces[i].from);
        kel_json_number(json, "to_K", c->pieces[i].to);
        kel_json_count(json, "degree", c->pieces[i].count - 1);
        kel_json_end(json);
    }
    kel_json_end(json);
    json_transitions(json, c);
    kel_json_number(json, "reference_temperature_K", c->reference_temperature);
    kel_json_bool(json, "reference_assumed", c->reference_defaulted);
    kel_json_string(json, "base", kel_base_name(c->base));
    kel_json_string(json, "variance", kel_variance_name(c->variance));
    kel_json_bool(json, "scatter_known", c->scatter_known);
    kel_json_inline_array(json, "covers");
    for (int kind = KEL_MODE_FIT; kind <= KEL_MODE_LOT; kind++)
        for (size_t i = 0; i < c->mode_count; i++)
            if ((int)c->modes[i].kind == kind) {
                kel_json_string(json, NULL, kel_mode_kind_name(c->modes[i].kind));
                break;
            }
    kel_json_end(json);
    kel_json_string(json, "digest", c->digest);
}

/* chi2 exists only where an independent u was stated; its ratio to nu is null with it. */
void
json_fit_report(kel_json *json, const kel_content *c, const kel_fit_report *r)
{
    bool stated = !isnan(c->chi2);
    kel_json_number(json, "chi2_per_degree_of_freedom", stated ? r->scaled_factor * r->scaled_factor : (double)NAN);
    kel_json_number(json, "chi2_probability", r->chi2_probability);
    kel_json_number(json, "other_scaling", r->scaled_factor);
    kel_json_count(json, "rank", (uint64_t)r->rank);
    kel_json_number(json, "condition", r->condition);
    kel_json_count(json, "iterations", (uint64_t)r->iterations);
    kel_json_string(json, "criterion", r->criterion);
    kel_json_array(json, "candidates");
    for (size_t i = 0; i < r->candidate_count; i++) {
        const kel_candidate *k = &r->candidates[i];
        kel_json_object(json, NULL);
        kel_json_count(json, "degree", (uint64_t)k->degree);
        kel_json_count(json, "parameters", k->parameters);
        kel_json_number(json, "residual_standard_deviation", k->residual_standard_deviation);
        kel_json_number(json, "chi2", k->chi2);
        kel_json_number(json, "criterion", k->criterion);
        kel_json_bool(json, "chosen", k->chosen);
        kel_json_string(json, "refused", k->refused);
        kel_json_end(json);
    }
    kel_json_end(json);
}
