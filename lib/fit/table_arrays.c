/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table from arrays that a program holds: the same object and the same checks, without a file behind it. An error's
   line is the number of the observation, counted from 1. */
#include "table_inner.h"

#include <math.h>
#include <string.h>

static kel_status
refuse(kel_error *err, kel_status code, size_t i, const char *what)
{
    return kel_error_set(err, code, i + 1, 0, "observation %zu: %s", i + 1, what);
}

static bool
is_temperature(double t)
{
    return isfinite(t) && t >= 0;
}

/* The temperature or temperatures that a table would have printed. */
static void
set_printed(kel_observation *o, double reference)
{
    bool given = isfinite(o->printed_lo) && isfinite(o->printed_hi) && !(o->printed_lo == 0 && o->printed_hi == 0);
    if (given)
        return;
    bool interval = o->kind == KEL_KIND_MEAN && o->from != reference;
    o->printed_lo = interval ? fmin(o->from, o->to) : o->to;
    o->printed_hi = interval ? fmax(o->from, o->to) : o->to;
}

static kel_status
take_one(kel_observation *o, const kel_table *t, size_t i, kel_error *err)
{
    if (o->column >= t->column_count || o->kind != t->columns[o->column].kind)
        return refuse(err, KEL_E_ARGUMENT, i, "its column does not exist or is of another kind");
    if (!is_temperature(o->from) || !is_temperature(o->to))
        return refuse(err, KEL_E_RANGE, i, "temperatures must be finite and not below 0 K");
    if (!isfinite(o->value))
        return refuse(err, KEL_E_RANGE, i, "the value is not finite");
    if (!(o->u_absolute >= 0) || !(o->u_relative >= 0) || isinf(o->u_absolute) || isinf(o->u_relative))
        return refuse(err, KEL_E_RANGE, i, "an uncertainty must be finite and not below zero");
    if (o->u_stated && o->u_absolute == 0 && o->u_relative == 0)
        return refuse(err, KEL_E_RANGE, i, "a stated uncertainty must be above zero");
    if (o->kind == KEL_KIND_COEFFICIENT && o->from != o->to)
        return refuse(err, KEL_E_ARGUMENT, i, "a coefficient has one temperature: from = to");
    if (o->kind == KEL_KIND_EXPANSION && o->from != t->reference_temperature)
        return refuse(err, KEL_E_ARGUMENT, i,
                      "an expansion is counted from the table's reference temperature: from = reference");
    o->u_stated = o->u_absolute > 0 || o->u_relative > 0;
    o->line = o->line == 0 ? i + 1 : o->line;
    set_printed(o, t->reference_temperature);
    if (o->left_out != NULL) {
        o->left_out = kel_arena_string(t->inner->memory, o->left_out);
        if (o->left_out == NULL)
            return kel__no_memory(err);
    }
    return KEL_OK;
}

static kel_status
take_columns(kel_table *t, const kel_column *columns, size_t n, kel_error *err)
{
    struct kel__table *in = t->inner;
    t->columns = in->fitted = kel_arena_copy(in->memory, columns, n, sizeof *columns);
    if (in->fitted == NULL)
        return kel__no_memory(err);
    for (size_t i = 0; i < n; i++) {
        kel_column *c = &in->fitted[i];
        if (c->kind < KEL_KIND_COEFFICIENT || c->kind > KEL_KIND_EXPANSION || !(c->resolution >= 0) ||
            isinf(c->resolution))
            return kel_error_set(err, KEL_E_ARGUMENT, i + 1, 0,
                                 "column %zu: an unknown kind, or a resolution that is no size", i + 1);
        const char *label = kel_arena_string(in->memory, c->label), *unit = kel_arena_string(in->memory, c->unit);
        if ((c->label != NULL && label == NULL) || (c->unit != NULL && unit == NULL))
            return kel__no_memory(err);
        c->label = label;
        c->unit = unit;
    }
    t->column_count = n;
    return KEL_OK;
}

static kel_status
fill(kel_table *t, const kel_column *columns, size_t column_count, const kel_observation *observations, size_t n,
     kel_error *err)
{
    struct kel__table *in = t->inner;
    kel_status status = take_columns(t, columns, column_count, err);
    if (status != KEL_OK)
        return status;
    t->observations = in->observed = kel_arena_copy(in->memory, observations, n, sizeof *observations);
    if (in->observed == NULL)
        return kel__no_memory(err);
    t->observation_count = n;
    for (size_t i = 0; i < n; i++) {
        if ((status = take_one(&in->observed[i], t, i, err)) != KEL_OK)
            return status;
        t->rows += i == 0 || in->observed[i].line != in->observed[i - 1].line;
    }
    if ((status = kel__table_check(t, err)) != KEL_OK || (status = kel__table_order(t, err)) != KEL_OK)
        return status;
    return kel__table_range(t, 0, err);
}

kel_status
kel_table_from_arrays(kel_table **out, const char *name, const kel_column *columns, size_t column_count,
                      const kel_observation *observations,
                      size_t n, double reference_temperature, kel_base base, kel_error *err)
{
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no place for the table");
    *out = NULL;
    if (name == NULL || columns == NULL || column_count == 0 || observations == NULL || n == 0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "a table from arrays needs a name, columns and observations");
    if (base != KEL_BASE_REFERENCE && base != KEL_BASE_CURRENT)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "an unknown base");
    if (!isnan(reference_temperature) && !is_temperature(reference_temperature))
        return kel_error_set(err, KEL_E_RANGE, 0, 0,
                             "the reference temperature must be finite and not below 0 K, or NaN for none");
    kel_table *t;
    kel_status status = kel__table_new(&t, name, err);
    if (status != KEL_OK)
        return status;
    t->reference_temperature = reference_temperature;
    t->base = base;
    t->base_stated = true;
    status = fill(t, columns, column_count, observations, n, err);
    if (status != KEL_OK) {
        kel_table_free(t);
        return status;
    }
    *out = t;
    return KEL_OK;
}
