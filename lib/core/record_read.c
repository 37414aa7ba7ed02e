/* SPDX-License-Identifier: Apache-2.0 */
/* From the JSON tree of a record to its content: the mirror of record_format.c, key by key.

   Each object lists its keys, and must have these and no others. Getters are sticky (json_read.h), so that a loop
   only has to stop early for the sake of time and never for safety: lengths are zero after a failure. */
#include "record_read.h"

#include <math.h>
#include <string.h>

#define KEYS(...) \
    (const char *const[]){ __VA_ARGS__ }, sizeof(const char *const[]){ __VA_ARGS__ } / sizeof(const char *)

/* All numbers of an array, which must be `want` of them. */
static double *
read_numbers(kel__reader *reader, const kel__node *array, size_t want)
{
    size_t n = kel__read_length(reader, array);
    if (n != want) {
        kel_error what;
        kel_error_set(&what, KEL_OK, 0, 0, "holds %zu numbers, but must hold %zu", n, want);
        kel__read_fail(reader, array, what.message);
        return NULL;
    }
    double *x = kel__read_take(reader, n, sizeof *x);
    kel__node_numbers(reader, array, x, n);
    return x;
}

static kel_interval
read_interval(kel__reader *reader, const kel__node *array)
{
    const double *ends = read_numbers(reader, array, 2);
    return reader->status == KEL_OK ? (kel_interval){ ends[0], ends[1] } : (kel_interval){ NAN, NAN };
}

/* The n elements of a list, zeroed, in the reader's memory. */
static void *
open_list(kel__reader *reader, const kel__node *list, size_t *n, size_t size)
{
    *n = kel__read_length(reader, list);
    void *p = kel__read_take(reader, *n, size);
    if (p == NULL)
        *n = 0;
    return p;
}

static const char *const *
read_strings(kel__reader *reader, const kel__node *object, const char *key, size_t *n)
{
    const kel__node list = kel__read_member(reader, object, key);
    const char **strings = open_list(reader, &list, n, sizeof *strings);
    for (size_t i = 0; i < *n; i++) {
        const kel__node element = kel__read_element(reader, &list, i);
        strings[i] = kel__node_string(reader, &element);
    }
    return strings;
}

static void
read_gaps(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "gaps_K");
    kel_interval *gaps = open_list(reader, &list, &content->gap_count, sizeof *gaps);
    for (size_t i = 0; i < content->gap_count; i++) {
        const kel__node element = kel__read_element(reader, &list, i);
        gaps[i] = read_interval(reader, &element);
    }
    content->gaps = gaps;
}

static void
read_pieces(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "pieces");
    kel_piece *pieces = open_list(reader, &list, &content->piece_count, sizeof *pieces);
    /* The pieces' coefficients stand behind each other in one array, so they are counted first. */
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel__node element = kel__read_element(reader, &list, i);
        kel__read_keys(reader, &element, KEYS("from_K", "to_K", "chebyshev_per_K"), NULL);
        pieces[i].from = kel__read_number(reader, &element, "from_K");
        pieces[i].to = kel__read_number(reader, &element, "to_K");
        const kel__node numbers = kel__read_member(reader, &element, "chebyshev_per_K");
        pieces[i].first = content->coefficient_count;
        pieces[i].count = kel__read_length(reader, &numbers);
        content->coefficient_count += pieces[i].count;
    }
    double *coefficients = kel__read_take(reader, content->coefficient_count, sizeof *coefficients);
    for (size_t i = 0; i < content->piece_count && reader->status == KEL_OK; i++) {
        const kel__node element = kel__read_element(reader, &list, i);
        const kel__node numbers = kel__read_member(reader, &element, "chebyshev_per_K");
        kel__node_numbers(reader, &numbers, coefficients + pieces[i].first, pieces[i].count);
    }
    content->pieces = pieces;
    content->mean.coefficients = coefficients;
}

static void
read_continuity(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "continuity");
    int *continuity = open_list(reader, &list, &content->continuity_count, sizeof *continuity);
    for (size_t i = 0; i < content->continuity_count; i++) {
        const kel__node element = kel__read_element(reader, &list, i);
        continuity[i] = kel__node_word(reader, &element, &kel__continuities) - 1;
    }
    content->continuity = continuity;
}

static void
read_transitions(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "transitions");
    kel_transition *transitions = open_list(reader, &list, &content->transition_count, sizeof *transitions);
    double *steps = kel__read_take(reader, content->transition_count, sizeof *steps);
    for (size_t i = 0; i < content->transition_count && reader->status == KEL_OK; i++) {
        const kel__node element = kel__read_element(reader, &list, i);
        kel__read_keys(reader, &element, KEYS("at_K", "step", "length_step"), NULL);
        transitions[i].at = kel__read_number(reader, &element, "at_K");
        transitions[i].step = (kel_step_kind)kel__read_word(reader, &element, "step", &kel__step_kinds);
        steps[i] = kel__read_number(reader, &element, "length_step");
    }
    content->transitions = transitions;
    content->mean.steps = steps;
}

/* A mode's numbers, laid out like the mean curve's. */
static kel_curve
read_mode_curve(kel__reader *reader, const kel__node *mode, const kel_content *content)
{
    const kel__node pieces = kel__read_member(reader, mode, "chebyshev_per_K");
    const kel__node steps = kel__read_member(reader, mode, "length_steps");
    if (kel__read_length(reader, &pieces) != content->piece_count)
        kel__read_fail(reader, &pieces, "has another number of pieces than the curve");
    double *coefficients = kel__read_take(reader, content->coefficient_count, sizeof *coefficients);
    for (size_t i = 0; i < content->piece_count && reader->status == KEL_OK; i++) {
        const kel__node numbers = kel__read_element(reader, &pieces, i);
        const double *x = read_numbers(reader, &numbers, content->pieces[i].count);
        if (reader->status == KEL_OK)
            memcpy(coefficients + content->pieces[i].first, x, content->pieces[i].count * sizeof *x);
    }
    return (kel_curve){ coefficients, read_numbers(reader, &steps, content->transition_count) };
}

static void
read_modes(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "modes");
    kel_mode *modes = open_list(reader, &list, &content->mode_count, sizeof *modes);
    for (size_t k = 0; k < content->mode_count && reader->status == KEL_OK; k++) {
        const kel__node element = kel__read_element(reader, &list, k);
        kel__read_keys(reader, &element, KEYS("kind", "label", "chebyshev_per_K", "length_steps"), NULL);
        modes[k].kind = (kel_mode_kind)kel__read_word(reader, &element, "kind", &kel__mode_kinds);
        modes[k].label = kel__read_string(reader, &element, "label");
        modes[k].curve = read_mode_curve(reader, &element, content);
    }
    content->modes = modes;
}

static void
read_sources(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "sources");
    kel_source *sources = open_list(reader, &list, &content->source_count, sizeof *sources);
    for (size_t i = 0; i < content->source_count && reader->status == KEL_OK; i++) {
        const kel__node e = kel__read_element(reader, &list, i);
        kel_source *s = &sources[i];
        kel__read_keys(reader, &e,
                       KEYS("name", "digest", "material", "condition", "direction", "product_form", "source", "lineage",
                            "scale", "branch", "reference_temperature_K", "base", "rows", "left_out", "uncertainty",
                            "notes"),
                       NULL);
        s->name = kel__read_string(reader, &e, "name");
        s->digest = kel__read_string_or_null(reader, &e, "digest");
        s->material = kel__read_string_or_null(reader, &e, "material");
        s->condition = kel__read_string_or_null(reader, &e, "condition");
        s->direction = kel__read_string_or_null(reader, &e, "direction");
        s->product_form = kel__read_string_or_null(reader, &e, "product_form");
        s->source = kel__read_string_or_null(reader, &e, "source");
        s->lineage = kel__read_string_or_null(reader, &e, "lineage");
        s->scale = kel__read_string_or_null(reader, &e, "scale");
        s->branch = kel__read_string_or_null(reader, &e, "branch");
        s->reference_temperature = kel__read_number_or_null(reader, &e, "reference_temperature_K");
        s->base = (kel_base)kel__read_word(reader, &e, "base", &kel__bases);
        s->rows = kel__read_count(reader, &e, "rows");
        s->left_out = kel__read_count(reader, &e, "left_out");
        s->uncertainty = read_strings(reader, &e, "uncertainty", &s->uncertainty_count);
        s->notes = read_strings(reader, &e, "notes", &s->note_count);
    }
    content->sources = sources;
}

static void
read_columns(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "columns");
    kel_fit_column *columns = open_list(reader, &list, &content->column_count, sizeof *columns);
    for (size_t i = 0; i < content->column_count && reader->status == KEL_OK; i++) {
        const kel__node e = kel__read_element(reader, &list, i);
        kel_fit_column *c = &columns[i];
        kel__read_keys(reader, &e,
                       KEYS("source", "kind", "label", "observations", "degrees_of_freedom",
                            "residual_standard_deviation", "scatter", "resolution", "variance"),
                       NULL);
        c->source = kel__read_count(reader, &e, "source");
        c->kind = (kel_kind)kel__read_word(reader, &e, "kind", &kel__kinds);
        c->label = kel__read_string_or_null(reader, &e, "label");
        c->observations = kel__read_count(reader, &e, "observations");
        c->degrees_of_freedom = kel__read_number_or_null(reader, &e, "degrees_of_freedom");
        c->residual_standard_deviation = kel__read_number_or_null(reader, &e, "residual_standard_deviation");
        c->scatter = kel__read_number_or_null(reader, &e, "scatter");
        c->resolution = kel__read_number_or_null(reader, &e, "resolution");
        c->variance = (kel_variance)kel__read_word(reader, &e, "variance", &kel__variances);
    }
    content->columns = columns;
}

static void
read_rows(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "rows");
    kel_fitted *rows = open_list(reader, &list, &content->row_count, sizeof *rows);
    for (size_t i = 0; i < content->row_count && reader->status == KEL_OK; i++) {
        const kel__node e = kel__read_element(reader, &list, i);
        kel_fitted *r = &rows[i];
        kel__read_keys(reader, &e,
                       KEYS("source", "column", "line", "kind", "from_K", "to_K", "observed", "fitted", "residual",
                            "shared_term", "u", "side", "left_out"),
                       NULL);
        r->source = kel__read_count(reader, &e, "source");
        r->column = kel__read_count(reader, &e, "column");
        r->line = kel__read_count(reader, &e, "line");
        r->kind = (kel_kind)kel__read_word(reader, &e, "kind", &kel__kinds);
        r->from = kel__read_number_or_null(reader, &e, "from_K");
        r->to = kel__read_number_or_null(reader, &e, "to_K");
        r->observed = kel__read_number_or_null(reader, &e, "observed");
        r->fitted = kel__read_number_or_null(reader, &e, "fitted");
        r->residual = kel__read_number_or_null(reader, &e, "residual");
        r->shared_term = kel__read_number_or_null(reader, &e, "shared_term");
        r->u = kel__read_number_or_null(reader, &e, "u");
        r->side = kel__read_word(reader, &e, "side", &kel__sides) - 1;
        r->left_out = kel__read_string_or_null(reader, &e, "left_out");
    }
    content->thinned = kel__read_bool(reader, root, "rows_thinned");
    content->rows = rows;
}

static void
read_checks(kel__reader *reader, const kel__node *root, kel_content *content)
{
    const kel__node list = kel__read_member(reader, root, "checks");
    kel_check *checks = open_list(reader, &list, &content->check_count, sizeof *checks);
    for (size_t i = 0; i < content->check_count && reader->status == KEL_OK; i++) {
        const kel__node e = kel__read_element(reader, &list, i);
        kel__read_keys(reader, &e, KEYS("temperature_K", "coefficient_per_K", "expansion"), NULL);
        checks[i].at = kel__read_number(reader, &e, "temperature_K");
        checks[i].coefficient = kel__read_number(reader, &e, "coefficient_per_K");
        checks[i].expansion = kel__read_number(reader, &e, "expansion");
    }
    content->checks = checks;
}

void
kel__content_read(kel_content *content, kel__reader *reader, const kel__node *root)
{
    kel__read_keys(reader, root,
                   KEYS("kelspan_record", "form", "base", "reference_temperature_K", "reference_defaulted", "range_K",
                        "gaps_K", "pieces", "continuity", "transitions", "modes", "variance", "scatter_known",
                        "observations", "parameters", "degrees_of_freedom", "residual_standard_deviation", "chi2",
                        "lot_spread", "sources", "columns", "rows_thinned", "rows", "checks", "digest"),
                   "annotations");
    content->form = kel__read_string(reader, root, "form");
    content->base = (kel_base)kel__read_word(reader, root, "base", &kel__bases);
    content->reference_temperature = kel__read_number(reader, root, "reference_temperature_K");
    content->reference_defaulted = kel__read_bool(reader, root, "reference_defaulted");
    const kel__node range = kel__read_member(reader, root, "range_K");
    content->range = read_interval(reader, &range);
    read_gaps(reader, root, content);
    read_pieces(reader, root, content);
    read_continuity(reader, root, content);
    read_transitions(reader, root, content);
    read_modes(reader, root, content);
    content->variance = (kel_variance)kel__read_word(reader, root, "variance", &kel__variances);
    content->scatter_known = kel__read_bool(reader, root, "scatter_known");
    content->observations = kel__read_count(reader, root, "observations");
    content->parameters = kel__read_count(reader, root, "parameters");
    content->degrees_of_freedom = kel__read_number_or_null(reader, root, "degrees_of_freedom");
    content->residual_standard_deviation = kel__read_number_or_null(reader, root, "residual_standard_deviation");
    content->chi2 = kel__read_number_or_null(reader, root, "chi2");
    content->lot_spread = kel__read_string_or_null(reader, root, "lot_spread");
    read_sources(reader, root, content);
    read_columns(reader, root, content);
    read_rows(reader, root, content);
    read_checks(reader, root, content);
    content->digest = kel__read_string(reader, root, "digest");
}
