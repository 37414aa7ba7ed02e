/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Metadata lines are collected here, and understood when the file was read (metadata_finish.c): `decimal: comma` may
   stand behind a number that it concerns. A comment counts as metadata if it starts with a known key, or looks like
   one. */
#include "metadata.h"

#include <stdlib.h>
#include <string.h>

#include "blanks.h"
#include "metadata_keys.h"

enum { KEY_WORDS = 3 };        /* more words before a colon are a sentence */

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for metadata");
}

/* Bytes of what can be a key at the start of the text, colon not counted; 0 if there is none: up to three words that
   start with a letter, then a colon that belongs to no address ("http://"). */
static size_t
key_size(const char *text, size_t n)
{
    const char *colon = n == 0 ? NULL : memchr(text, ':', n);
    if (colon == NULL || (n >= (size_t)(colon - text) + 3 && memcmp(colon, "://", 3) == 0))
        return 0;
    const char *p = text;
    size_t size = (size_t)(colon - text), words = 0;
    kel__trim(&p, &size);
    bool letter = size > 0 && (((*p | 0x20) >= 'a' && (*p | 0x20) <= 'z') || (unsigned char)*p >= 0x80);
    for (const char *end = p + size; p < end;) {
        size_t k;
        words++;
        while (p < end && kel__blank(p, end) == 0)
            p++;
        while (p < end && (k = kel__blank(p, end)) != 0)
            p += k;
    }
    return letter && words <= KEY_WORDS ? (size_t)(colon - text) : 0;
}

static kel_status
add_item(kel__metadata_reader *reader, const char *text, size_t n, size_t size, size_t line, size_t column, bool set,
         kel_error *err)
{
    if (reader->count == reader->capacity) {
        size_t capacity = reader->capacity == 0 ? 16 : 2 * reader->capacity;
        kel__item *p = realloc(reader->items, capacity * sizeof *p);
        if (p == NULL)
            return no_memory(err);
        reader->items = p;
        reader->capacity = capacity;
    }
    const char *name = text, *value = text + size + 1;
    size_t name_size = size, value_size = n - size - 1;
    kel__trim(&name, &name_size);
    kel__trim(&value, &value_size);
    char *copy = kel_arena_bytes(reader->arena, value, value_size);
    if (copy == NULL)
        return no_memory(err);
    const kel__key *key = kel__key_find(name, name_size, copy, reader->coefficients);
    const char *spelling = key != NULL ? key->name : kel_arena_bytes(reader->arena, name, name_size);
    if (spelling == NULL)
        return no_memory(err);
    if (value_size == 0 && (key == NULL || key->text))
        return KEL_OK;
    kel__entry entry = { spelling, copy, line, column + (size_t)(value - text) };
    reader->items[reader->count++] = (kel__item){ .entry = entry, .key = key, .set = set };
    return KEL_OK;
}

kel_status
kel__metadata_new(kel__metadata_reader **out, kel_arena *arena, bool coefficients, kel_error *err)
{
    *out = calloc(1, sizeof **out);
    if (*out == NULL)
        return no_memory(err);
    (*out)->arena = arena;
    (*out)->coefficients = coefficients;
    return KEL_OK;
}

void
kel__metadata_free(kel__metadata_reader *reader)
{
    if (reader == NULL)
        return;
    free(reader->items);
    free(reader);
}

kel_status
kel__metadata_line(kel__metadata_reader *reader, const char *text, size_t n, size_t line, size_t column, kel_error *err)
{
    size_t size = key_size(text, n);
    return size == 0 ? KEL_OK : add_item(reader, text, n, size, line, column, false, err);
}

kel_status
kel__metadata_set(kel__metadata_reader *reader, const char *setting, kel_error *err)
{
    size_t n = strlen(setting), size = key_size(setting, n), count = reader->count;
    kel_status status = size == 0 ? KEL_OK : add_item(reader, setting, n, size, 0, 0, true, err);
    if (status != KEL_OK || (reader->count > count && reader->items[count].key != NULL))
        return status;
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, setting, n);
    status = quoted.failed ? no_memory(err)
                           : kel_error_set(err, KEL_E_SYNTAX, 0, 0, "the setting '%s' is not `key: value` with a key "
                                                                    "of metadata and a value",
                                           quoted.bytes == NULL ? "" : quoted.bytes);
    kel_text_free(&quoted);
    return status;
}
