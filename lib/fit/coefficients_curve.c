/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From a published polynomial to a record. alpha is what is printed, or the derivative of a printed expansion.
   Declared transitions and the ends of ranges of uncertainty cut pieces in two: each part carries the same
   polynomial, rewritten on its own interval. */
#include <float.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "phrase.h"
#include "published.h"

/* |alpha| of solids stays below 1e-3 1/K, by a factor of ten for most. More is a unit misread. */
static const double largest_believed = 1e-3;

/* A piece of the record and the published one that it is cut from. */
typedef struct part { double from, to; const kel__published_piece *origin; } part;

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for coefficients");
}

static int
by_number(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return (x > y) - (x < y);
}

/* Ends of pieces and cuts between them, sorted; each stretch between two neighbours lies in one published piece. */
static kel_status
cut(part **out, size_t *count, const kel__published *p, const kel_declared_transition *transitions,
    size_t transition_count, kel_error *err)
{
    size_t clauses = p->metadata.uncertainty_count + p->metadata.lot_count, n = 0;
    double *at = kel_arena_take(p->arena, p->piece_count + 1 + transition_count + 2 * clauses, sizeof *at);
    part *parts = kel_arena_take(p->arena, p->piece_count + 1 + transition_count + 2 * clauses, sizeof *parts);
    if (at == NULL || parts == NULL)
        return no_memory(err);
    double lo = p->pieces[0].from, hi = p->pieces[p->piece_count - 1].to;
    for (size_t i = 0; i < p->piece_count; i++)
        at[n++] = p->pieces[i].from;
    at[n++] = hi;
    for (size_t i = 0; i < transition_count; i++)
        if (transitions[i].at > lo && transitions[i].at < hi)
            at[n++] = transitions[i].at;
    n += kel__published_bounds(at + n, p);
    qsort(at, n, sizeof *at, by_number);
    *count = 0;
    if (lo == hi)
        parts[(*count)++] = (part){ lo, hi, p->pieces };
    for (size_t i = 1, k = 0; i < n; i++) {
        if (at[i] == at[i - 1])
            continue;
        while (at[i - 1] >= p->pieces[k].to)
            k++;
        parts[(*count)++] = (part){ at[i - 1], at[i], &p->pieces[k] };
    }
    *out = parts;
    return KEL_OK;
}

static kel_status
check_size(const kel__published *p, const kel__published_piece *piece, kel_error *err)
{
    enum { POINTS = 32 };
    for (int i = 0; i <= POINTS; i++) {
        double t = piece->from + (piece->to - piece->from) * i / POINTS;
        double alpha = kel__poly_value(piece->c, piece->count, kel__poly_variable(&p->variable, t)).hi;
        if (fabs(alpha) <= largest_believed)
            continue;
        char value[KEL_NUMBER_SIZE], at[KEL_NUMBER_SIZE];
        kel__number_short(value, alpha);
        kel__number_short(at, t);
        return kel_error_set(err, KEL_E_DATA, piece->line, piece->column,
                             "the coefficient would be %s 1/K at %s K, beyond 0.001 1/K: check the unit "
                             "[%s] of `curve` and the unit and scale of `variable`", value, at, p->unit.name);
    }
    return KEL_OK;
}

/* How many derivatives of alpha agree where two parts meet, to the rounding of their terms: -1 none, 0 the value, 1
   the slope, 2 the curvature. Two parts of one polynomial agree in all. */
static int
continuity(const kel__published *p, const part *below, const part *above, kel__twofold *work)
{
    const kel__published_piece *a = below->origin, *b = above->origin;
    if (a == b)
        return 2;
    kel__twofold *c = work, *d = work + a->count, x = kel__poly_variable(&p->variable, above->from);
    size_t n = a->count, m = b->count;
    memcpy(c, a->c, n * sizeof *c);
    memcpy(d, b->c, m * sizeof *d);
    for (int order = 0; order <= 2; order++) {
        double difference = kel__two_sub(kel__poly_value(d, m, x), kel__poly_value(c, n, x)).hi;
        if (fabs(difference) > 8 * DBL_EPSILON * fmax(kel__poly_largest(c, n, x), kel__poly_largest(d, m, x)))
            return order - 1;
        n = kel__poly_derivative(c, n, &p->variable);
        m = kel__poly_derivative(d, m, &p->variable);
    }
    return 2;
}

static kel_status
fill_pieces(kel_content *content, const kel__published *p, const part *parts, size_t count, kel_error *err)
{
    size_t total = 0;
    for (size_t i = 0; i < count; i++)
        total += parts[i].origin->count;
    kel_piece *pieces = kel_arena_take(p->arena, count, sizeof *pieces);
    double *coefficients = kel_arena_take(p->arena, total, sizeof *coefficients);
    int *joins = kel_arena_take(p->arena, count, sizeof *joins);
    kel__twofold *work = kel_arena_take(p->arena, 2 * (KEL__LARGEST_POWER + 1), sizeof *work);
    if (pieces == NULL || coefficients == NULL || joins == NULL || work == NULL)
        return no_memory(err);
    size_t first = 0;
    for (size_t i = 0; i < count; i++) {
        const kel__published_piece *origin = parts[i].origin;
        kel__poly_chebyshev(coefficients + first, origin->c, origin->count, &p->variable, parts[i].from, parts[i].to,
                            work);
        pieces[i] = (kel_piece){ parts[i].from, parts[i].to, first, origin->count };
        first += origin->count;
        if (i == 0)
            continue;
        joins[i - 1] = continuity(p, &parts[i - 1], &parts[i], work);
        for (size_t j = 0; j < content->transition_count; j++)
            if (content->transitions[j].at == parts[i].from)
                joins[i - 1] = -1;
    }
    content->pieces = pieces;
    content->piece_count = count;
    content->coefficient_count = total;
    content->mean.coefficients = coefficients;
    content->continuity = joins;
    content->continuity_count = count - 1;
    content->range = (kel_interval){ parts[0].from, parts[count - 1].to };
    return KEL_OK;
}

static kel_status
fill_transitions(kel_content *content, const kel__published *p, const kel_declared_transition *list, size_t count,
                 kel_error *err)
{
    kel_transition *transitions = kel_arena_take(p->arena, count, sizeof *transitions);
    double *steps = kel_arena_take(p->arena, count, sizeof *steps);
    if (transitions == NULL || steps == NULL)
        return no_memory(err);
    for (size_t i = 0; i < count; i++) {
        transitions[i] = (kel_transition){ list[i].at, list[i].step };
        steps[i] = list[i].length;
    }
    content->transitions = transitions;
    content->transition_count = count;
    content->mean.steps = steps;
    return KEL_OK;
}

/* What an expansion needs beside its numbers. */
static kel_status
check_expansion(const kel__published *p, kel_error *err)
{
    const kel__entry *curve = p->metadata.curve;
    size_t column = curve->line == 0 ? 0 : curve->column;
    if (isnan(p->metadata.reference_temperature))
        return kel_error_set(err, KEL_E_DATA, curve->line, column, "an expansion curve needs a line '# reference "
                                                                   "temperature: ...', for example 293.15 K");
    if (p->metadata.base_stated && p->metadata.base == KEL_BASE_CURRENT)
        return kel_error_set(err, KEL_E_DATA, curve->line, column, "an expansion curve counts from the length at its "
                                                                   "reference: the base `current length` "
                             "belongs to coefficients");
    return KEL_OK;
}

static kel_source
source_of(const kel__published *p)
{
    const kel__metadata *m = &p->metadata;
    return (kel_source){
        .name = p->name, .digest = p->digest, .material = m->material, .condition = m->condition,
            .direction = m->direction,
        .product_form = m->product_form, .source = m->source, .lineage = m->lineage, .scale = m->scale,
            .branch = m->branch,
        .reference_temperature = m->reference_temperature, .base = m->base, .rows = p->piece_count,
        .notes = m->notes, .note_count = m->note_count,
    };
}

kel_status
kel__published_curve(kel_record **out, kel__adopt_warnings *warnings, kel__published *published, kel_error *err)
{
    const kel__metadata *m = &published->metadata;
    bool defaulted = isnan(m->reference_temperature);
    kel_declared_transition *transitions;
    size_t transition_count, count = 0;
    part *parts = NULL;
    kel_status status = published->kind == KEL_KIND_EXPANSION ? check_expansion(published, err) : KEL_OK;
    if (status != KEL_OK || (status = kel__published_steps(&transitions, &transition_count, warnings, published,
                                                           err)) != KEL_OK)
        return status;
    for (size_t i = 0; i < published->piece_count; i++) {
        kel__published_piece *piece = &published->pieces[i];
        if (published->kind == KEL_KIND_EXPANSION)
            piece->count = kel__poly_derivative(piece->c, piece->count, &published->variable);
        if ((status = check_size(published, piece, err)) != KEL_OK)
            return status;
    }
    kel_source source = source_of(published);
    const char **uncertainty = kel_arena_take(published->arena, m->uncertainty_count, sizeof *uncertainty);
    if (uncertainty == NULL)
        return no_memory(err);
    for (size_t i = 0; i < m->uncertainty_count; i++)
        uncertainty[i] = m->uncertainty[i].text;
    source.uncertainty = uncertainty;
    source.uncertainty_count = m->uncertainty_count;
    kel_content content = {
        .form = "adopted", .base = m->base, .reference_temperature = defaulted ? 293.15 : m->reference_temperature,
        .reference_defaulted = defaulted, .parameters = published->numbers, .degrees_of_freedom = NAN,
        .residual_standard_deviation = NAN, .chi2 = NAN, .sources = &source, .source_count = 1,
            .lot_spread = m->lot_text,
    };
    if ((status = cut(&parts, &count, published, transitions, transition_count, err)) != KEL_OK ||
        (status = fill_transitions(&content, published, transitions, transition_count, err)) != KEL_OK ||
        (status = fill_pieces(&content, published, parts, count, err)) != KEL_OK ||
        (status = kel__published_modes(&content, warnings, published, err)) != KEL_OK)
        return status;
    return kel_record_build(out, &content, err);
}
