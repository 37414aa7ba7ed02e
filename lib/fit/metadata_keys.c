/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The keys of metadata and the readers of their values. A key is one line of the table below. */
#include "metadata_keys.h"

#include <string.h>

#include "blanks.h"
#include "clause.h"
#include "phrase.h"

const char kel__key_decimal[] = "decimal", kel__key_reference[] = "reference temperature",
    kel__key_lot[] = "lot spread";

/* "`key` is EXPECTED, not 'value'", the value made safe. */
static kel_status
refuse(const kel__item *item, const char *expected, kel_error *err)
{
    kel_text value = KEL_TEXT_INIT;
    kel_text_quote(&value, item->entry.value, strlen(item->entry.value));
    size_t column = item->entry.line == 0 ? 0 : item->entry.column;
    kel_status status = value.failed
        ? kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a message")
        : kel_error_set(err, KEL_E_SYNTAX, item->entry.line, column, "`%s` is %s, not '%s'", item->key->name, expected,
                        value.bytes == NULL ? "" : value.bytes);
    kel_text_free(&value);
    return status;
}

static bool
value_is(const kel__item *item, const char *word)
{
    return kel__is_word(item->entry.value, strlen(item->entry.value), word);
}

static void *
member(kel__draft *draft, const kel__item *item)
{
    return (char *)&draft->out + item->key->offset;
}

static kel_status
take_text(kel__draft *draft, kel__item *item, kel_error *err)
{
    (void)err;
    *(const char **)member(draft, item) = item->entry.value;
    return KEL_OK;
}

static kel_status
take_switch(kel__draft *draft, kel__item *item, const char *on, const char *off, const char *expected, kel_error *err)
{
    bool yes = value_is(item, on);
    if (!yes && !value_is(item, off))
        return refuse(item, expected, err);
    *(bool *)member(draft, item) = yes;
    return KEL_OK;
}

static kel_status
take_yes_or_no(kel__draft *draft, kel__item *item, kel_error *err)
{
    return take_switch(draft, item, "yes", "no", "yes or no", err);
}

static kel_status
take_decimal(kel__draft *draft, kel__item *item, kel_error *err)
{
    return take_switch(draft, item, "comma", "point", "point or comma", err);
}

static kel_status
take_base(kel__draft *draft, kel__item *item, kel_error *err)
{
    bool current = value_is(item, "current length");
    if (!current && !value_is(item, "reference length"))
        return refuse(item, "reference length or current length", err);
    draft->out.base = current ? KEL_BASE_CURRENT : KEL_BASE_REFERENCE;
    draft->out.base_stated = true;
    return KEL_OK;
}

/* A temperature and nothing else. */
static kel_status
whole_temperature(double *out, const char *text, size_t n, bool comma, size_t line, size_t column, kel_error *err)
{
    kel__phrase phrase = kel__phrase_of(text, n, comma, line, column);
    kel_status status = kel__phrase_temperature(out, &phrase, err);
    if (status == KEL_OK && kel__phrase_left(&phrase))
        status = kel__phrase_expected(&phrase, "nothing behind the temperature", err);
    return status;
}

kel_status
kel__temperature_text(double *out, const char *text, size_t n, size_t line, size_t column, kel_error *err)
{
    return whole_temperature(out, text, n, false, line, column, err);
}

static kel_status
take_reference(kel__draft *draft, kel__item *item, kel_error *err)
{
    const kel__entry *entry = &item->entry;
    draft->out.reference_printed = entry->value;
    return whole_temperature(&draft->out.reference_temperature, entry->value, strlen(entry->value),
                             draft->out.decimal_comma,
                             entry->line, entry->column, err);
}

static kel_status
take_word(kel__draft *draft, kel__item *item, const char *const *words, const char *expected, kel_error *err)
{
    for (; *words != NULL; words++)
        if (value_is(item, *words)) {
            *(const char **)member(draft, item) = *words;
            return KEL_OK;
        }
    return refuse(item, expected, err);
}

static kel_status
take_scale(kel__draft *draft, kel__item *item, kel_error *err)
{
    static const char *const scales[] = { "ITS-90", "IPTS-68", "IPTS-48", NULL };
    return take_word(draft, item, scales, "ITS-90, IPTS-68 or IPTS-48", err);
}

static kel_status
take_branch(kel__draft *draft, kel__item *item, kel_error *err)
{
    static const char *const branches[] = { "heating", "cooling", NULL };
    return take_word(draft, item, branches, "heating or cooling", err);
}

static kel_status
take_uncertainty(kel__draft *draft, kel__item *item, kel_error *err)
{
    kel__clause *clause = &draft->uncertainty[draft->out.uncertainty_count++];
    return kel__clause_parse(clause, &item->entry, false, draft->out.decimal_comma, err);
}

static kel_status
take_lot(kel__draft *draft, kel__item *item, kel_error *err)
{
    kel__clause *clause = &draft->lot[draft->out.lot_count++];
    return kel__clause_parse(clause, &item->entry, true, draft->out.decimal_comma, err);
}

/* Two statements of one transition: the same is fine, the user's overrules the file's, others contradict each other.
   The user's come first. */
static kel_status
take_transition(kel__draft *draft, kel__item *item, kel_error *err)
{
    kel_declared_transition made;
    kel_status status = kel__transition_parse(&made, &item->entry, draft->out.decimal_comma, err);
    if (status != KEL_OK)
        return status;
    size_t n = draft->out.transition_count;
    for (size_t i = 0; i < n; i++) {
        const kel_declared_transition *old = &draft->transitions[i];
        const kel__item *first = draft->transition_items[i];
        if (old->at != made.at)
            continue;
        if ((old->step != made.step || old->length != made.length) && first->set == item->set)
            return kel_error_set(err, KEL_E_DATA, item->entry.line, item->entry.line == 0 ? 0 : item->entry.column,
                                 "the transition of line %zu is declared again with another step", first->entry.line);
        item->dropped = true;
        return KEL_OK;
    }
    draft->transitions[n] = made;
    draft->transition_items[n] = item;
    draft->out.transition_count = n + 1;
    return KEL_OK;
}

static kel_status
take_note(kel__draft *draft, kel__item *item, kel_error *err)
{
    (void)err;
    draft->notes[draft->out.note_count++] = item->entry.value;
    return KEL_OK;
}

static kel_status
take_entry(kel__draft *draft, kel__item *item, kel_error *err)
{
    (void)err;
    *(const kel__entry **)member(draft, item) = &item->entry;
    return KEL_OK;
}

#define AT(name) offsetof(kel__metadata, name)

static const kel__key keys[] = {
    { .name = "material", .take = take_text, .offset = AT(material), .text = true },
    { .name = "condition", .take = take_text, .offset = AT(condition), .text = true },
    { .name = "direction", .take = take_text, .offset = AT(direction), .text = true },
    { .name = "product form", .take = take_text, .offset = AT(product_form), .text = true },
    { .name = "source", .take = take_text, .offset = AT(source), .text = true },
    { .name = "lineage", .take = take_text, .offset = AT(lineage), .text = true },
    { .name = kel__key_reference, .take = take_reference },
    { .name = "base", .take = take_base },
    { .name = "scale", .take = take_scale, .offset = AT(scale) },
    { .name = "uncertainty", .take = take_uncertainty, .repeatable = true },
    { .name = kel__key_lot, .take = take_lot, .repeatable = true },
    { .name = "transition", .take = take_transition, .repeatable = true },
    { .name = "contracts on heating", .take = take_yes_or_no, .offset = AT(contracts_on_heating) },
    { .name = "shift to reference", .take = take_yes_or_no, .offset = AT(shift_to_reference) },
    { .name = "branch", .take = take_branch, .offset = AT(branch) },
    { .name = kel__key_decimal, .take = take_decimal, .offset = AT(decimal_comma) },
    { .name = "note", .take = take_note, .repeatable = true, .text = true },
    { .name = "curve", .take = take_entry, .offset = AT(curve), .coefficients = true },
    { .name = "variable", .take = take_entry, .offset = AT(variable), .coefficients = true },
    { .name = "centre", .other = "center", .take = take_entry, .offset = AT(centre), .coefficients = true },
};

/* In a coefficient file `scale: 100` is the variable's, `scale: IPTS-68` the temperatures'. */
static const kel__key variable_scale = { .name = "scale", .take = take_entry, .offset = AT(variable_scale),
                                         .coefficients = true };

static bool
starts_as_number(const char *value)
{
    return *value != '\0' && strchr("+-.,0123456789", *value) != NULL;
}

const kel__key *
kel__key_find(const char *name, size_t n, const char *value, bool coefficients)
{
    for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++) {
        const kel__key *key = &keys[i];
        bool same = kel__is_word(name, n, key->name) || (key->other != NULL && kel__is_word(name, n, key->other));
        if (!same || (key->coefficients && !coefficients))
            continue;
        return coefficients && key->take == take_scale && starts_as_number(value) ? &variable_scale : key;
    }
    return NULL;
}
