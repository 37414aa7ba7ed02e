/* SPDX-License-Identifier: Apache-2.0 */
/* The JSON text of a record, kelspan-record(5): order and layout of the keys are fixed, every key is always there
   (but for `annotations`), and numbers have the fewest digits that read back as the same double. So equal content
   gives equal bytes, which the digest rests on. Adding, removing or moving a key needs a new KEL__RECORD_VERSION. */
#include "record_parts.h"
#include "names.h"

#include <string.h>

static void
write_interval(kel_json *json, const char *key, kel_interval interval)
{
    const double ends[2] = { interval.lo, interval.hi };
    kel_json_numbers(json, key, ends, 2);
}

static void
write_strings(kel_json *json, const char *key, const char *const *strings, size_t n)
{
    kel_json_array(json, key);
    for (size_t i = 0; i < n; i++)
        kel_json_string(json, NULL, strings[i]);
    kel_json_end(json);
}

static void
write_pieces(kel_json *json, const kel_content *content)
{
    kel_json_array(json, "pieces");
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel_piece *p = &content->pieces[i];
        kel_json_inline_object(json, NULL);
        kel_json_number(json, "from_K", p->from);
        kel_json_number(json, "to_K", p->to);
        kel_json_numbers(json, "chebyshev_per_K", content->mean.coefficients + p->first, p->count);
        kel_json_end(json);
    }
    kel_json_end(json);
    kel_json_inline_array(json, "continuity");
    for (size_t i = 0; i < content->continuity_count; i++)
        kel_json_string(json, NULL, kel__word(&kel__continuities, content->continuity[i] + 1));
    kel_json_end(json);
}

static void
write_transitions(kel_json *json, const kel_content *content)
{
    kel_json_array(json, "transitions");
    for (size_t i = 0; i < content->transition_count; i++) {
        kel_json_inline_object(json, NULL);
        kel_json_number(json, "at_K", content->transitions[i].at);
        kel_json_string(json, "step", kel__word(&kel__step_kinds, (int)content->transitions[i].step));
        kel_json_number(json, "length_step", content->mean.steps[i]);
        kel_json_end(json);
    }
    kel_json_end(json);
}

static void
write_modes(kel_json *json, const kel_content *content)
{
    kel_json_array(json, "modes");
    for (size_t k = 0; k < content->mode_count; k++) {
        const kel_mode *mode = &content->modes[k];
        kel_json_object(json, NULL);
        kel_json_string(json, "kind", kel_mode_kind_name(mode->kind));
        kel_json_string(json, "label", mode->label);
        kel_json_array(json, "chebyshev_per_K");
        for (size_t i = 0; i < content->piece_count; i++)
            kel_json_numbers(json, NULL, mode->curve.coefficients + content->pieces[i].first, content->pieces[i].count);
        kel_json_end(json);
        kel_json_numbers(json, "length_steps", mode->curve.steps, content->transition_count);
        kel_json_end(json);
    }
    kel_json_end(json);
}

static void
write_sources(kel_json *json, const kel_content *content)
{
    kel_json_array(json, "sources");
    for (size_t i = 0; i < content->source_count; i++) {
        const kel_source *s = &content->sources[i];
        kel_json_object(json, NULL);
        kel_json_string(json, "name", s->name);
        kel_json_string(json, "digest", s->digest);
        kel_json_string(json, "material", s->material);
        kel_json_string(json, "condition", s->condition);
        kel_json_string(json, "direction", s->direction);
        kel_json_string(json, "product_form", s->product_form);
        kel_json_string(json, "source", s->source);
        kel_json_string(json, "lineage", s->lineage);
        kel_json_string(json, "scale", s->scale);
        kel_json_string(json, "branch", s->branch);
        kel_json_number(json, "reference_temperature_K", s->reference_temperature);
        kel_json_string(json, "base", kel_base_name(s->base));
        kel_json_count(json, "rows", s->rows);
        kel_json_count(json, "left_out", s->left_out);
        write_strings(json, "uncertainty", s->uncertainty, s->uncertainty_count);
        write_strings(json, "notes", s->notes, s->note_count);
        kel_json_end(json);
    }
    kel_json_end(json);
}

static void
write_columns(kel_json *json, const kel_content *content)
{
    kel_json_array(json, "columns");
    for (size_t i = 0; i < content->column_count; i++) {
        const kel_fit_column *c = &content->columns[i];
        kel_json_inline_object(json, NULL);
        kel_json_count(json, "source", c->source);
        kel_json_string(json, "kind", kel_kind_name(c->kind));
        kel_json_string(json, "label", c->label);
        kel_json_count(json, "observations", c->observations);
        kel_json_number(json, "degrees_of_freedom", c->degrees_of_freedom);
        kel_json_number(json, "residual_standard_deviation", c->residual_standard_deviation);
        kel_json_number(json, "scatter", c->scatter);
        kel_json_number(json, "resolution", c->resolution);
        kel_json_string(json, "variance", kel_variance_name(c->variance));
        kel_json_end(json);
    }
    kel_json_end(json);
}

static void
write_rows(kel_json *json, const kel_content *content)
{
    kel_json_bool(json, "rows_thinned", content->thinned);
    kel_json_array(json, "rows");
    for (size_t i = 0; i < content->row_count; i++) {
        const kel_fitted *r = &content->rows[i];
        kel_json_inline_object(json, NULL);
        kel_json_count(json, "source", r->source);
        kel_json_count(json, "column", r->column);
        kel_json_count(json, "line", r->line);
        kel_json_string(json, "kind", kel_kind_name(r->kind));
        kel_json_number(json, "from_K", r->from);
        kel_json_number(json, "to_K", r->to);
        kel_json_number(json, "observed", r->observed);
        kel_json_number(json, "fitted", r->fitted);
        kel_json_number(json, "residual", r->residual);
        kel_json_number(json, "shared_term", r->shared_term);
        kel_json_number(json, "u", r->u);
        kel_json_string(json, "side", kel__word(&kel__sides, r->side + 1));
        kel_json_string(json, "left_out", r->left_out);
        kel_json_end(json);
    }
    kel_json_end(json);
}

static void
write_checks(kel_json *json, const kel_content *content)
{
    kel_json_array(json, "checks");
    for (size_t i = 0; i < content->check_count; i++) {
        kel_json_inline_object(json, NULL);
        kel_json_number(json, "temperature_K", content->checks[i].at);
        kel_json_number(json, "coefficient_per_K", content->checks[i].coefficient);
        kel_json_number(json, "expansion", content->checks[i].expansion);
        kel_json_end(json);
    }
    kel_json_end(json);
}

void
kel__record_write(kel_text *out, const kel_content *content, bool whole)
{
    kel_json json;
    kel_json_begin(&json, out);
    kel_json_object(&json, NULL);
    kel_json_count(&json, "kelspan_record", KEL__RECORD_VERSION);
    kel_json_string(&json, "form", content->form);
    kel_json_string(&json, "base", kel_base_name(content->base));
    kel_json_number(&json, "reference_temperature_K", content->reference_temperature);
    kel_json_bool(&json, "reference_defaulted", content->reference_defaulted);
    write_interval(&json, "range_K", content->range);
    kel_json_array(&json, "gaps_K");
    for (size_t i = 0; i < content->gap_count; i++)
        write_interval(&json, NULL, content->gaps[i]);
    kel_json_end(&json);
    write_pieces(&json, content);
    write_transitions(&json, content);
    write_modes(&json, content);
    kel_json_string(&json, "variance", kel_variance_name(content->variance));
    kel_json_bool(&json, "scatter_known", content->scatter_known);
    kel_json_count(&json, "observations", content->observations);
    kel_json_count(&json, "parameters", content->parameters);
    kel_json_number(&json, "degrees_of_freedom", content->degrees_of_freedom);
    kel_json_number(&json, "residual_standard_deviation", content->residual_standard_deviation);
    kel_json_number(&json, "chi2", content->chi2);
    kel_json_string(&json, "lot_spread", content->lot_spread);
    write_sources(&json, content);
    write_columns(&json, content);
    write_rows(&json, content);
    write_checks(&json, content);
    if (whole)
        kel_json_string(&json, "digest", content->digest);
    if (whole && content->annotations != NULL)
        kel_json_raw(&json, "annotations", content->annotations);
    kel_json_end(&json);
}

kel_status
kel__record_digest(char hex[65], size_t *size, const kel_content *content, kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    kel_digest *digest = NULL;
    kel__record_write(&text, content, false);
    kel_status status = text.failed ? kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the text of a record")
                                    : kel_digest_new(&digest, err);
    if (status == KEL_OK) {
        kel_digest_add(digest, text.bytes, text.size);
        kel_digest_finish(digest, hex);
        if (size != NULL)
            *size = text.size;
    }
    kel_digest_free(digest);
    kel_text_free(&text);
    return status;
}

kel_status
kel_record_format(kel_text *out, const kel_record *record, kel_error *err)
{
    if (out == NULL || record == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no %s was given", out == NULL ? "text" : "record");
    kel__record_write(out, &record->content, true);
    if (out->failed)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the text of a record");
    return KEL_OK;
}
