/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table from its file: read, understood, checked. Each step is a file of its own; here they are put in order.

   Memory: the rows as printed cost their bytes and some two bytes a cell, an observation 96 bytes; the checks take
   another 16 to 32 bytes a row while they run. Nothing is copied while it grows. */
#include "table_inner.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

kel_status
kel__table_new(kel_table **out, const char *name, kel_error *err)
{
    *out = NULL;
    kel_table *t = calloc(1, sizeof *t);
    if (t == NULL)
        return kel__no_memory(err);
    t->inner = calloc(1, sizeof *t->inner);
    if (t->inner != NULL)
        t->inner->memory = kel_arena_new();
    if (t->inner != NULL && t->inner->memory != NULL)
        t->name = kel_arena_string(t->inner->memory, name);
    if (t->name == NULL) {
        kel_table_free(t);
        return kel__no_memory(err);
    }
    t->digest = "";
    t->reference_temperature = NAN;
    t->range = (kel_interval){ NAN, NAN };
    *out = t;
    return KEL_OK;
}

void
kel_table_free(kel_table *table)
{
    if (table == NULL)
        return;
    if (table->inner != NULL)
        kel_arena_free(table->inner->memory);
    free(table->inner);
    free(table);
}

static kel_status
read_sheet(kel_table *t, kel_input input, const kel_table_options *options, kel_error *err)
{
    struct kel__table *in = t->inner;
    kel__metadata_reader *reader;
    kel_status status = kel__metadata_new(&reader, in->memory, false, err);
    for (size_t i = 0; i < options->setting_count && status == KEL_OK; i++)
        status = kel__metadata_set(reader, options->settings[i], err);
    if (status == KEL_OK)
        status = kel__sheet_read(&in->sheet, in->memory, input, options, reader, err);
    if (status == KEL_OK)
        status = kel__metadata_finish(&in->metadata, reader, err);
    kel__metadata_free(reader);
    return status;
}

static kel_stated
stated(const kel__clause *c)
{
    return (kel_stated){ c->relative, c->absolute, c->dimension, c->lo, c->hi, c->text };
}

static kel_status
list_uncertainties(kel_table *t, kel_error *err)
{
    const kel__metadata *m = &t->inner->metadata;
    kel_arena *memory = t->inner->memory;
    kel_stated *shared = kel_arena_take(memory, m->uncertainty_count, sizeof *shared);
    kel_stated *lot = kel_arena_take(memory, m->lot_count, sizeof *lot);
    const char **printed = kel_arena_take(memory, m->uncertainty_count, sizeof *printed);
    if (shared == NULL || lot == NULL || printed == NULL)
        return kel__no_memory(err);
    for (size_t i = 0; i < m->uncertainty_count; i++) {
        printed[t->uncertainty_count++] = m->uncertainty[i].text;
        if (!m->uncertainty[i].independent)
            shared[t->shared_count++] = stated(&m->uncertainty[i]);
    }
    for (size_t i = 0; i < m->lot_count; i++)
        lot[t->lot_count++] = stated(&m->lot[i]);
    t->shared = shared;
    t->lot = lot;
    t->lot_text = m->lot_text;
    t->uncertainty = printed;
    return KEL_OK;
}

/* What metadata say about the table as a whole. */
static kel_status
take_metadata(kel_table *t, kel_error *err)
{
    const kel__metadata *m = &t->inner->metadata;
    t->digest = t->inner->sheet.digest;
    t->material = m->material;
    t->condition = m->condition;
    t->direction = m->direction;
    t->product_form = m->product_form;
    t->source = m->source;
    t->lineage = m->lineage;
    t->scale = m->scale;
    t->branch = m->branch;
    t->reference_temperature = m->reference_temperature;
    t->reference_printed = m->reference_printed;
    t->base = m->base;
    t->base_stated = m->base_stated;
    t->contracts_on_heating = m->contracts_on_heating;
    t->shift_to_reference = m->shift_to_reference;
    t->transitions = m->transitions;
    t->transition_count = m->transition_count;
    t->notes = m->notes;
    t->note_count = m->note_count;
    kel_status status = list_uncertainties(t, err);
    for (size_t i = 0; i < m->warning_count && status == KEL_OK; i++) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_add(&text, m->warnings[i].text);
        status = kel__warn(t, m->warnings[i].code, &text, m->warnings[i].line, m->warnings[i].count, err);
    }
    return status;
}

static kel_status
warn_skipped(kel_table *t, kel_error *err)
{
    const kel__sheet *s = &t->inner->sheet;
    if (s->skipped == 0)
        return KEL_OK;
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "rows before the header are passed over");
    return kel__warn(t, "before-header", &text, s->skipped_line, s->skipped, err);
}

static kel_status
understand(kel_table *t, const kel_table_options *options, kel_error *err)
{
    kel_status status;
    if ((status = take_metadata(t, err)) != KEL_OK ||
        (status = warn_skipped(t, err)) != KEL_OK ||
        (status = kel__table_columns(t, options, err)) != KEL_OK ||
        (status = kel__table_series(t, options, err)) != KEL_OK ||
        (status = kel__clause_dimensions(t, err)) != KEL_OK ||
        (status = kel__table_leave_out(t, options, err)) != KEL_OK ||
        (status = kel__table_observe(t, options->include_marked, err)) != KEL_OK ||
        (status = kel__table_check(t, err)) != KEL_OK ||
        (status = kel__table_cross_check(t, err)) != KEL_OK ||
        (status = kel__table_order(t, err)) != KEL_OK)
        return status;
    return kel__table_range(t, options->gap, err);
}

kel_status
kel_table_read(kel_table **out, kel_input input, const char *name, const kel_table_options *options, kel_error *err)
{
    static const kel_table_options defaults = KEL_TABLE_OPTIONS_INIT;
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no place for the table");
    *out = NULL;
    if (options == NULL)
        options = &defaults;
    if (name == NULL || input.read == NULL || options->header < -1 || !(options->gap >= 0) ||
        options->kind < KEL_CHOOSE_DEFAULT ||
        options->kind > KEL_CHOOSE_ALL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "reading a table needs a name, an input and valid options");
    kel_table *t;
    kel_status status = kel__table_new(&t, name, err);
    if (status != KEL_OK)
        return status;
    t->inner->printed = true;
    t->transposed = options->transpose;
    status = read_sheet(t, input, options, err);
    if (status == KEL_OK)
        status = understand(t, options, err);
    if (status != KEL_OK) {
        kel_table_free(t);
        return status;
    }
    *out = t;
    return KEL_OK;
}
