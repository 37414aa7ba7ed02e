/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Physics against misread tables.

   Zero at the reference. An expansion printed at its own reference temperature is zero by definition; by more than
   one printed digit and more than 3 stated u it shows another reference, another unit or a shifted curve. `shift to
   reference: yes` subtracts it from all expansions. The value itself says nothing that the fit does not know, so it
   is no observation.

   Size. No solid reaches 1e-3 1/K; what exceeds it has a wrong unit. An expansion counts with its mean from the
   reference, less one printed digit, so that rounding close to the reference does no harm.

   Sign. Most materials expand on heating: e (T - Tref) > 0, alpha > 0. A value that differs by more than its printed
   digit and 3 u earns a warning, unless the table says that its material contracts. */
#include "table_inner.h"

#include <math.h>
#include <string.h>

static const double largest = 1e-3; /* 1/K */

kel_status
kel__place_of(size_t *line, size_t *column, const kel_table *t, const kel_observation *o, kel_error *err)
{
    const struct kel__table *in = t->inner;
    *line = o->line;
    *column = 0;
    if (!in->printed)
        return KEL_OK;
    kel__cursor cursor;
    kel_status status = kel__raw_start(&cursor, &in->sheet.raw, err);
    size_t i = 0;
    while (i < in->sheet.raw.width && in->columns[i].slot != o->column)
        i++;
    while (status == KEL_OK && kel__raw_next(&cursor))
        if (cursor.number == o->line) {
            *line = cursor.cells[i].line;
            *column = cursor.cells[i].column;
            break;
        }
    kel__raw_stop(&cursor);
    return status;
}

/* An error at the cell of an observation. Takes text over. */
static kel_status
refuse(const kel_table *t, const kel_observation *o, kel_text *text, kel_error *err)
{
    size_t line, column;
    kel_status status = kel__place_of(&line, &column, t, o, err);
    if (status == KEL_OK)
        return kel__fail(err, KEL_E_DATA, line, column, text);
    kel_text_free(text);
    return status;
}

static bool
at_reference(const kel_observation *o)
{
    return o->kind == KEL_KIND_EXPANSION && o->from == o->to && o->left_out == NULL;
}

/* Stated absolute u at the reference, shared ones included. */
static double
u_at_reference(const kel_table *t, const kel_observation *o)
{
    double u = o->u_absolute;
    for (size_t i = 0; i < t->shared_count; i++)
        if (t->shared[i].dimension == KEL_DIM_ONE && o->to >= t->shared[i].lo && o->to <= t->shared[i].hi)
            u = hypot(u, t->shared[i].absolute);
    return u;
}

static kel_status
refuse_nonzero(const kel_table *t, const kel_observation *o, double u, kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "an expansion of ");
    kel__value_into(&text, o->kind, o->value);
    kel_text_add(&text, " at its own reference temperature ");
    kel__temperature_into(&text, o->to);
    kel_text_add(&text, ", where it is zero by definition (one printed digit is ");
    kel__value_into(&text, o->kind, t->columns[o->column].resolution);
    if (u > 0) {
        kel_text_add(&text, ", 3 u are ");
        kel__value_into(&text, o->kind, 3 * u);
    }
    kel_text_add(&text, "): check reference and unit; `shift to reference: yes` subtracts it from all rows");
    return refuse(t, o, &text, err);
}

static kel_status
shift_all(kel_table *t, kel_error *err)
{
    kel_observation *list = t->inner->observed;
    const kel_observation *zero = NULL;
    for (size_t i = 0; i < t->observation_count && zero == NULL; i++)
        zero = at_reference(&list[i]) ? &list[i] : NULL;
    kel_text text = KEL_TEXT_INIT;
    if (zero == NULL) {
        kel_text_add(&text,
                     "`shift to reference: yes`, but no expansion is printed at the reference temperature: nothing "
                     "was shifted");
        return kel__warn(t, "not-shifted", &text, 0, 1, err);
    }
    t->shift = zero->value;
    if (t->shift == 0)
        return KEL_OK;
    size_t n = 0;
    for (size_t i = 0; i < t->observation_count; i++)
        if (list[i].kind == KEL_KIND_EXPANSION) {
            list[i].value -= t->shift;
            n++;
        }
    kel_text_add(&text, "expansions are shifted by ");
    kel__value_into(&text, KEL_KIND_EXPANSION, -t->shift);
    kel_text_add(&text, ", to be zero at the reference temperature ");
    kel__temperature_into(&text, zero->to);
    return kel__warn(t, "shifted", &text, zero->line, n, err);
}

/* Why an expansion at its own reference is no observation; one that is not quite zero is named with its value. */
static kel_status
leave_out_zero(kel_table *t, size_t i, kel_error *err)
{
    struct kel__table *in = t->inner;
    kel_observation *o = &in->observed[i];
    if (in->at_reference == NULL)
        in->at_reference = kel_arena_take(in->memory, t->observation_count, sizeof *in->at_reference);
    if (in->at_reference == NULL)
        return kel__no_memory(err);
    in->at_reference[i] = true;
    o->left_out = "zero at the reference temperature";
    if (o->value == 0)
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "at the reference temperature: ");
    kel__value_into(&text, o->kind, o->value);
    kel_text_add(&text, " taken as zero");
    o->left_out = text.failed ? NULL : kel_arena_string(in->memory, text.bytes);
    kel_text_free(&text);
    return o->left_out == NULL ? kel__no_memory(err) : KEL_OK;
}

static kel_status
check_zero(kel_table *t, kel_error *err)
{
    if (t->shift_to_reference) {
        kel_status status = shift_all(t, err);
        if (status != KEL_OK)
            return status;
    }
    for (size_t i = 0; i < t->observation_count; i++) {
        const kel_observation *o = &t->observations[i];
        if (!at_reference(o))
            continue;
        /* Digit, u and value are decimals that were rounded to doubles. */
        double u = u_at_reference(t, o), allowed = fmax(t->columns[o->column].resolution, 3 * u);
        if (!(fabs(o->value) <= allowed * (1 + 1e-12)))
            return refuse_nonzero(t, o, u, err);
        kel_status status = leave_out_zero(t, i, err);
        if (status != KEL_OK)
            return status;
    }
    return KEL_OK;
}

static kel_status
check_size(const kel_table *t, kel_error *err)
{
    for (size_t i = 0; i < t->observation_count; i++) {
        const kel_observation *o = &t->observations[i];
        bool expansion = o->kind == KEL_KIND_EXPANSION;
        double width = fabs(o->to - o->from);
        double size = fabs(o->value);
        if (expansion)
            size = width == 0 ? 0 : (size - t->columns[o->column].resolution) / width;
        if (o->left_out != NULL || size <= largest)
            continue;
        kel_text text = KEL_TEXT_INIT;
        kel_text_printf(&text, "%s ", kel_kind_name(o->kind));
        kel__value_into(&text, o->kind, o->value);
        kel_text_add(&text, " at ");
        kel__temperature_into(&text, o->to);
        if (expansion) {
            kel_text_add(&text, " is ");
            kel__value_into(&text, KEL_KIND_MEAN, size);
            kel_text_add(&text, " in the mean from ");
            kel__temperature_into(&text, o->from);
        }
        kel_text_add(&text, ": solids stay below 0.001 1/K; is the unit right");
        if (t->columns[o->column].unit != NULL)
            kel_text_printf(&text, " ([%s])", t->columns[o->column].unit);
        return refuse(t, o, &text, err);
    }
    return KEL_OK;
}

static bool
is_clear(const kel_table *t, const kel_observation *o)
{
    double u = hypot(o->u_absolute, o->u_relative * o->value);
    return o->left_out == NULL && o->value != 0 && fabs(o->value) > t->columns[o->column].resolution &&
        fabs(o->value) > 3 * u;
}

static kel_status
check_sign(kel_table *t, size_t column, kel_error *err)
{
    size_t wrong = 0, all = 0, line = 0;
    kel_kind kind = t->columns[column].kind;
    for (size_t i = 0; i < t->observation_count; i++) {
        const kel_observation *o = &t->observations[i];
        if (o->column != column || !is_clear(t, o))
            continue;
        all++;
        if ((kind == KEL_KIND_EXPANSION && o->to < o->from ? -o->value : o->value) < 0 && wrong++ == 0)
            line = o->line;
    }
    if (wrong == 0)
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    if (kind != KEL_KIND_EXPANSION)
        kel_text_printf(&text, "%s below zero in %zu of %zu rows", kel_kind_name(kind), wrong, all);
    else if (2 * wrong > all)
        kel_text_printf(&text,
                        "expansion has the sign of a contraction in %zu of %zu rows: what is printed positive for "
                        "shrinking has the head "
                        "`contraction`", wrong, all);
    else
        kel_text_printf(&text, "expansion has the wrong sign for its temperature in %zu of %zu rows", wrong, all);
    kel_text_add(&text, "; `contracts on heating: yes` says that the material does that");
    return kel__warn(t, "sign", &text, line, wrong, err);
}

kel_status
kel__table_check(kel_table *t, kel_error *err)
{
    kel_status status = check_zero(t, err);
    if (status == KEL_OK)
        status = check_size(t, err);
    for (size_t c = 0; c < t->column_count && status == KEL_OK && !t->contracts_on_heating; c++)
        status = check_sign(t, c, err);
    return status;
}
