/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Kinds printed side by side are one measurement, so they must agree within their printed digits. With e the
   expansion, m the mean coefficient from the reference r, a the coefficient, and d one unit of the last printed digit
   of each (sources round and cut, so a whole one):

       e against m, row by row:       |e - m (T - r)| <= d_e + d_m |T - r|
       e against a, between rows:     s = (e_2 - e_1)/(T_2 - T_1) is the mean of a between T_1 and T_2, so
                                      min(a_1, a_2) - w <= s <= max(a_1, a_2) + w,
                                      w = d_a + 2 d_e/(T_2 - T_1) + 3 (T_2 - T_1)^2 |a''|/12

   The last term is three times what a parabola can rise above both of its ends in the mean, with a'' the larger of the
   second differences on either side. Without e, m (T - r) stands for it with d_m |T - r|. In the base `current length`
   s is the slope of ln(1 + e). Pairs across a declared transition, rows that are left out, marked values and means over
   intervals take no part. */
#include "table_inner.h"

#include <math.h>
#include <stdlib.h>

/* NaN: not printed. */
typedef struct line { double at, e, m, a; size_t line; } line;

typedef struct findings { size_t count, line; const line *first; double found, expected; } findings;

static bool
means_from_reference(const kel_table *t)
{
    return t->inner->from == KEL__NONE && t->inner->interval == KEL__NONE;
}

/* One unit of the last digit of a kind's column. */
static double
digit(const kel_table *t, kel_kind kind)
{
    const struct kel__table *in = t->inner;
    for (size_t i = 0; i < in->sheet.raw.width; i++)
        if (in->columns[i].used && kel__is_value(in->columns[i].heading.quantity) &&
            kel__kind_of(in->columns[i].heading.quantity) == kind)
            return in->columns[i].resolution;
    return 0;
}

static kel_status
read_line(line *out, const kel_table *t, const kel__cursor *cursor, kel_error *err)
{
    const struct kel__table *in = t->inner;
    *out = (line){ NAN, NAN, NAN, NAN, cursor->number };
    kel__row_temperatures temperatures;
    kel_status status = kel__row_temperatures_of(&temperatures, t, cursor->cells, err);
    out->at = temperatures.at;
    for (size_t i = 0; i < in->sheet.raw.width && status == KEL_OK; i++) {
        kel__quantity q = in->columns[i].heading.quantity;
        kel__cell cell = kel__cell_at(cursor->cells, i);
        if (!in->columns[i].used || !kel__is_value(q) || cell.empty || cell.marks != 0)
            continue;
        double value;
        status = kel__cell_number(&value, NULL, &cell, &in->columns[i].heading.unit, in->metadata.decimal_comma, err);
        if (q == KEL__COEFFICIENT)
            out->a = value;
        else if (q == KEL__MEAN)
            out->m = means_from_reference(t) ? value : (double)NAN;
        else
            out->e = (q == KEL__CONTRACTION ? -value : value) - t->shift;
    }
    return status;
}

/* The rows that take part. Observations come in the order of rows, which tells who is left out. */
static kel_status
collect(line *lines, size_t *n, const kel_table *t, kel_error *err)
{
    kel__cursor cursor;
    kel_status status = kel__raw_start(&cursor, &t->inner->sheet.raw, err);
    size_t k = 0;
    *n = 0;
    while (status == KEL_OK && kel__raw_next(&cursor)) {
        bool kept = false;
        for (; k < t->observation_count && t->observations[k].line <= cursor.number; k++)
            kept = kept || t->observations[k].left_out == NULL ||
                   (t->inner->at_reference != NULL && t->inner->at_reference[k]);
        if (!kept)
            continue;
        status = read_line(&lines[*n], t, &cursor, err);
        *n += isnan(lines[*n].at) ? 0 : 1;
    }
    kel__raw_stop(&cursor);
    return status;
}

static int
by_temperature(const void *a, const void *b)
{
    const line *p = a, *q = b;
    int order = (p->at > q->at) - (p->at < q->at);
    return order != 0 ? order : (p->line > q->line) - (p->line < q->line);
}

static void
note(findings *f, const line *at, double found, double expected)
{
    if (f->count++ == 0 || at->line < f->line)
        *f = (findings){ f->count, at->line, at, found, expected };
}

static bool
crosses(const kel_table *t, double lo, double hi)
{
    for (size_t i = 0; i < t->transition_count; i++)
        if (lo < t->transitions[i].at && t->transitions[i].at <= hi)
            return true;
    return false;
}

/* The expansion of a row, from its mean if need be, and its rounding. NaN if neither is printed. */
static double
expansion_of(double *rounding, const kel_table *t, const line *l)
{
    double width = l->at - t->reference_temperature;
    bool mean = isnan(l->e);
    *rounding = mean ? digit(t, KEL_KIND_MEAN) * fabs(width) : digit(t, KEL_KIND_EXPANSION);
    return mean ? l->m * width : l->e;
}

static findings
compare_means(const kel_table *t, const line *lines, size_t n)
{
    findings f = { .count = 0 };
    double d_e = digit(t, KEL_KIND_EXPANSION), d_m = digit(t, KEL_KIND_MEAN);
    for (size_t i = 0; i < n; i++) {
        double width = lines[i].at - t->reference_temperature, expected = lines[i].m * width;
        /* Tables of all digits are rounded as doubles, not as print. */
        double rounded = 8 * 2.220446049250313e-16 * fabs(expected);
        if (fabs(lines[i].e - expected) > (d_e + d_m * fabs(width)) * (1 + 1e-9) + rounded) /* false for NaN */
            note(&f, &lines[i], lines[i].e, expected);
    }
    return f;
}

/* |a''| at the inner one of three rows; 0 where there are no three. */
static double
bend(const line *lines, size_t n, size_t inner)
{
    if (inner == 0 || inner + 1 >= n)
        return 0;
    const line *p = &lines[inner - 1], *q = &lines[inner], *r = &lines[inner + 1];
    double left = (q->a - p->a) / (q->at - p->at), right = (r->a - q->a) / (r->at - q->at);
    double second = fabs(2 * (right - left) / (r->at - p->at));
    return isfinite(second) ? second : 0;
}

static findings
compare_coefficients(const kel_table *t, const line *lines, size_t n)
{
    findings f = { .count = 0 };
    for (size_t i = 0; i + 1 < n; i++) {
        const line *p = &lines[i], *q = &lines[i + 1];
        double d_p, d_q, e_p = expansion_of(&d_p, t, p), e_q = expansion_of(&d_q, t, q), width = q->at - p->at;
        if (isnan(e_p) || isnan(e_q) || isnan(p->a) || isnan(q->a) || !(width > 0) || crosses(t, p->at, q->at))
            continue;
        double s = (t->base == KEL_BASE_CURRENT ? log1p(e_q) - log1p(e_p) : e_q - e_p) / width;
        double curved = width * width * fmax(bend(lines, n, i), bend(lines, n, i + 1)) / 4;
        double w = digit(t, KEL_KIND_COEFFICIENT) + (d_p + d_q) / width + curved;
        if (s < fmin(p->a, q->a) - w || s > fmax(p->a, q->a) + w)
            note(&f, q, s, (p->a + q->a) / 2);
    }
    return f;
}

static kel_status
warn(kel_table *t, const findings *f, const char *what, const char *against, kel_kind kind, kel_error *err)
{
    if (f->count == 0)
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_printf(&text, "%s and %s printed side by side disagree by more than their rounding: at ", what, against);
    kel__temperature_into(&text, f->first->at);
    kel_text_add(&text, " ");
    kel__value_into(&text, kind, f->found);
    kel_text_add(&text, " against ");
    kel__value_into(&text, kind, f->expected);
    return kel__warn(t, "cross-check", &text, f->line, f->count, err);
}

kel_status
kel__table_cross_check(kel_table *t, kel_error *err)
{
    const struct kel__table *in = t->inner;
    size_t kinds = 0, n;
    bool expansions = false;
    for (size_t i = 0; i < in->sheet.raw.width; i++)
        if (in->columns[i].used && kel__is_value(in->columns[i].heading.quantity)) {
            kinds++;
            expansions = expansions || kel__kind_of(in->columns[i].heading.quantity) == KEL_KIND_EXPANSION;
        }
    if (kinds < 2 || isnan(t->reference_temperature))
        return KEL_OK;
    line *lines = malloc(in->sheet.raw.rows * sizeof *lines);
    if (lines == NULL)
        return kel__no_memory(err);
    kel_status status = collect(lines, &n, t, err);
    if (status == KEL_OK) {
        qsort(lines, n, sizeof *lines, by_temperature);
        findings means = compare_means(t, lines, n), coefficients = compare_coefficients(t, lines, n);
        status = warn(t, &means, "expansion", "mean coefficient", KEL_KIND_EXPANSION, err);
        if (status == KEL_OK)
            status = warn(t, &coefficients, expansions ? "the slope of the expansion" : "the slope of the means",
                          "coefficient", KEL_KIND_MEAN, err);
    }
    free(lines);
    return status;
}
