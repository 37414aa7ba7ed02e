/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Metadata understood: what is said twice, what contradicts, what the user overrules, what is not known.

   A key stated twice must be stated alike, unless it may be repeated. What the user sets is a decision and replaces
   the file's statement of that key; of a repeatable key it is one more statement, only a lot spread replaces the
   file's, since a record has one. */
#include "metadata.h"

#include <math.h>
#include <string.h>

#include "blanks.h"
#include "metadata_keys.h"
#include "phrase.h"

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for metadata");
}

static bool
is_key(const kel__item *item, const char *name)
{
    return item->key != NULL && strcmp(item->key->name, name) == 0;
}

/* Do two statements of one key say the same? A temperature may be printed in two units. */
static bool
agree(const kel__item *a, const kel__item *b, bool comma)
{
    const char *s = a->entry.value, *t = b->entry.value;
    if (kel__same_words(s, strlen(s), t, strlen(t)))
        return true;
    if (!is_key(a, kel__key_reference))
        return false;
    kel__phrase first = kel__phrase_of(s, strlen(s), comma, 0, 0), second = kel__phrase_of(t, strlen(t), comma, 0, 0);
    double x, y;
    return kel__phrase_temperature(&x, &first, NULL) == KEL_OK &&
           kel__phrase_temperature(&y, &second, NULL) == KEL_OK && x == y &&
           !kel__phrase_left(&first) && !kel__phrase_left(&second);
}

static kel_status
contradiction(const kel__item *first, const kel__item *item, kel_error *err)
{
    if (item->entry.line == 0)
        return kel_error_set(err, KEL_E_DATA, 0, 0, "two settings of `%s` contradict each other", item->key->name);
    return kel_error_set(err, KEL_E_DATA, item->entry.line, item->entry.column,
                         "`%s` on line %zu contradicts the one on line %zu",
                         item->key->name, item->entry.line, first->entry.line);
}

/* The first statement holds: the user's come before the file's, and others must agree with it. */
static bool
decimal_comma(const kel__item *items, size_t count)
{
    for (size_t i = 0; i < count; i++)
        if (is_key(&items[i], kel__key_decimal))
            return kel__is_word(items[i].entry.value, strlen(items[i].entry.value), "comma");
    return false;
}

/* Marks what is said twice or overruled, and refuses contradictions. */
static kel_status
settle(kel__item *items, size_t count, kel_error *err)
{
    bool comma = decimal_comma(items, count);
    for (size_t i = 0; i < count; i++) {
        kel__item *item = &items[i];
        bool lot = is_key(item, kel__key_lot);
        if (item->key == NULL || (item->key->repeatable && !lot))
            continue;
        for (size_t j = 0; j < i && !item->dropped; j++) {
            const kel__item *first = &items[j];
            if (first->dropped || first->key != item->key)
                continue;
            item->dropped = first->set > item->set || agree(first, item, comma);
            if (!item->dropped && !lot)
                return contradiction(first, item, err);
        }
    }
    return KEL_OK;
}

/* Two clauses of one sort must not both hold at a temperature. Ranges that only meet are fine. */
static kel_status
check_overlap(const kel__clause *clauses, size_t count, const char *name, kel_error *err)
{
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < i; j++) {
            const kel__clause *a = &clauses[j], *b = &clauses[i];
            if (a->independent != b->independent || !(a->lo < b->hi && b->lo < a->hi))
                continue;
            return kel_error_set(err, KEL_E_DATA, b->line, b->line == 0 ? 0 : b->column,
                                 "`%s` is stated twice for some temperatures, here and on line %zu: two parts of one "
                                 "sort are written "
                                 "A %% + B [UNIT]", name, a->line);
        }
    return KEL_OK;
}

/* Unknown keys stay as notes; one warning names the first and counts them all. */
static kel_status
keep_note(kel__draft *draft, kel_warning *unknown, const kel__item *item, kel_arena *arena, kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_printf(&text, "%s: %s", item->entry.key, item->entry.value);
    const char *note = text.failed ? NULL : kel_arena_string(arena, text.bytes);
    kel_text_clear(&text);
    kel_text_add(&text, "the key '");
    kel_text_quote(&text, item->entry.key, strlen(item->entry.key));
    kel_text_add(&text, "' is not known; its line is kept as a note");
    const char *warning = text.failed ? NULL : kel_arena_string(arena, text.bytes);
    kel_text_free(&text);
    if (note == NULL || warning == NULL)
        return no_memory(err);
    draft->notes[draft->out.note_count++] = note;
    if (unknown->count++ == 0)
        *unknown = (kel_warning){ "unknown-key", warning, item->entry.line, 1 };
    return KEL_OK;
}

/* `decimal` is taken in a round of its own, before the values that it concerns. */
static kel_status
take_items(kel__draft *draft, kel_warning *unknown, kel__item *items, size_t count, bool decimal, kel_arena *arena,
           kel_error *err)
{
    for (size_t i = 0; i < count; i++) {
        kel__item *item = &items[i];
        if (item->dropped || is_key(item, kel__key_decimal) != decimal)
            continue;
        kel_status status = item->key == NULL ? keep_note(draft, unknown, item, arena, err)
                                              : item->key->take(draft, item, err);
        if (status != KEL_OK)
            return status;
    }
    return KEL_OK;
}

/* What holds, in order. */
static kel_status
list_entries(kel__metadata *out, const kel__item *items, size_t count, kel_arena *arena, kel_error *err)
{
    kel__entry *entries = kel_arena_take(arena, count, sizeof *entries);
    if (entries == NULL)
        return no_memory(err);
    for (size_t i = 0; i < count; i++)
        if (!items[i].dropped)
            entries[out->entry_count++] = items[i].entry;
    out->entries = entries;
    return KEL_OK;
}

static kel_status
list_warnings(kel__metadata *out, const kel_warning *unknown, kel_arena *arena, kel_error *err)
{
    kel_warning list[2];
    size_t n = 0;
    if (unknown->count > 0)
        list[n++] = *unknown;
    if (out->scale != NULL && strcmp(out->scale, "ITS-90") != 0) {
        static const char *const text[] = { "temperatures are on IPTS-68 and are not converted to ITS-90",
                                            "temperatures are on IPTS-48 and are not converted to ITS-90" };
        list[n++] = (kel_warning){ "scale", text[strcmp(out->scale, "IPTS-68") != 0], 0, 1 };
    }
    out->warnings = kel_arena_copy(arena, list, n, sizeof list[0]);
    out->warning_count = n;
    return out->warnings == NULL ? no_memory(err) : KEL_OK;
}

static kel_status
join_lot_text(kel__metadata *out, kel_arena *arena, kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    for (size_t i = 0; i < out->lot_count; i++) {
        kel_text_add(&text, i == 0 ? "" : "; ");
        kel_text_add(&text, out->lot[i].text);
    }
    if (out->lot_count > 0)
        out->lot_text = text.failed ? NULL : kel_arena_string(arena, text.bytes);
    kel_text_free(&text);
    return out->lot_count > 0 && out->lot_text == NULL ? no_memory(err) : KEL_OK;
}

kel_status
kel__metadata_finish(kel__metadata *out, kel__metadata_reader *reader, kel_error *err)
{
    kel_arena *arena = reader->arena;
    size_t count = reader->count;
    kel_warning unknown = { .count = 0 };
    kel__draft draft = {
        .out.reference_temperature = NAN,
        .uncertainty = kel_arena_take(arena, count, sizeof *draft.uncertainty),
        .lot = kel_arena_take(arena, count, sizeof *draft.lot),
        .transitions = kel_arena_take(arena, count, sizeof *draft.transitions),
        .transition_items = kel_arena_take(arena, count, sizeof *draft.transition_items),
        .notes = kel_arena_take(arena, count, sizeof *draft.notes),
    };
    /* Copied, because the result points to entries and the reader goes. */
    kel__item *items = kel_arena_copy(arena, reader->items, count, sizeof *items);
    *out = draft.out;
    if (items == NULL || draft.uncertainty == NULL || draft.lot == NULL || draft.transitions == NULL ||
        draft.transition_items == NULL ||
        draft.notes == NULL)
        return no_memory(err);
    kel_status status;
    if ((status = settle(items, count, err)) != KEL_OK ||
        (status = take_items(&draft, &unknown, items, count, true, arena, err)) != KEL_OK ||
        (status = take_items(&draft, &unknown, items, count, false, arena, err)) != KEL_OK ||
        (status = check_overlap(draft.uncertainty, draft.out.uncertainty_count, "uncertainty", err)) != KEL_OK ||
        (status = check_overlap(draft.lot, draft.out.lot_count, kel__key_lot, err)) != KEL_OK)
        return status;
    draft.out.uncertainty = draft.uncertainty;
    draft.out.lot = draft.lot;
    draft.out.transitions = draft.transitions;
    draft.out.notes = draft.notes;
    if ((status = list_entries(&draft.out, items, count, arena, err)) != KEL_OK ||
        (status = list_warnings(&draft.out, &unknown, arena, err)) != KEL_OK ||
        (status = join_lot_text(&draft.out, arena, err)) != KEL_OK)
        return status;
    *out = draft.out;
    return KEL_OK;
}
