/* SPDX-License-Identifier: Apache-2.0 */
/* The strict JSON reader, on jansson. The only file that knows jansson.

   Numbers: jansson is asked to take integers as reals too, so that -0 keeps its sign and every number is read by one rule: to
   the nearest double. It mends the decimal point for the C library's locale, which is not safe against another thread that
   changes the locale meanwhile. Integers are recognised by value.

   jansson does not say in all places that memory ran out: some show as wrong syntax, and a byte of a key or number may get
   lost. Whoever parses must take a failure for what it says only if it happens twice in the same way (record_parse.c).

   The depth is limited by jansson (2048 levels). */
#include "json_read.h"
#include "json_raw.h"

#include <jansson.h>
#include <math.h>
#include <string.h>

/* ---- the text ---- */

/* jansson counts columns in characters; its position is the number of bytes up to the end of the offending token. */
static void
find_place(size_t *line, size_t *column, const char *bytes, size_t n, int position)
{
    size_t end = position < 0 ? 0 : (size_t)position;
    end = end > n ? n : end;
    size_t begin = 0;
    *line = 1;
    for (size_t i = 0; i + 1 < end; i++)
        if (bytes[i] == '\n') {
            ++*line;
            begin = i + 1;
        }
    *column = end > begin ? end - begin : 1;
}

kel_status
kel__tree_parse(kel__tree **out, const char *bytes, size_t n, kel_error *err)
{
    *out = NULL;
    size_t line, column;
    const char *nul = n == 0 ? NULL : memchr(bytes, '\0', n);
    if (nul != NULL) {
        find_place(&line, &column, bytes, n, (int)(nul - bytes) + 1);
        return kel_error_set(err, KEL_E_SYNTAX, line, column, "the text holds a NUL byte");
    }
    json_error_t failure = { .text = "" };
    json_t *value = json_loadb(n == 0 ? "" : bytes, n, JSON_REJECT_DUPLICATES | JSON_DECODE_INT_AS_REAL, &failure);
    if (value != NULL) {
        *out = (kel__tree *)value;
        return KEL_OK;
    }
    if (failure.text[0] == '\0' || json_error_code(&failure) == json_error_out_of_memory)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the tree of a JSON text");
    find_place(&line, &column, bytes, n, failure.position);
    /* The message quotes what stands near the failure. */
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, failure.text, strlen(failure.text));
    bool range = json_error_code(&failure) == json_error_numeric_overflow;
    kel_status status = quoted.failed
        ? kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a message")
        : kel_error_set(err, range ? KEL_E_RANGE : KEL_E_SYNTAX, line, column, "not valid JSON: %s", quoted.bytes);
    kel_text_free(&quoted);
    return status;
}

void
kel__tree_free(kel__tree *tree)
{
    json_decref((json_t *)tree);
}

kel__node
kel__tree_root(const kel__tree *tree)
{
    return (kel__node){ .value = tree };
}

/* ---- objects and arrays ---- */

bool
kel__is_object(const kel__node *node)
{
    return json_is_object((const json_t *)node->value);
}

bool
kel__has_member(const kel__node *object, const char *key)
{
    return json_object_get(object->value, key) != NULL;
}

static bool
is_listed(const char *key, const char *const *keys, size_t n, const char *optional)
{
    for (size_t i = 0; i < n; i++)
        if (strcmp(key, keys[i]) == 0)
            return true;
    return optional != NULL && strcmp(key, optional) == 0;
}

void
kel__read_keys(kel__reader *reader, const kel__node *object, const char *const *keys, size_t n, const char *optional)
{
    if (reader->status != KEL_OK)
        return;
    if (!kel__is_object(object)) {
        kel__read_fail(reader, object, "is not an object");
        return;
    }
    /* jansson's iterators want a value that is not const, though they change nothing. */
    json_t *value = (json_t *)(uintptr_t)object->value;
    for (void *i = json_object_iter(value); i != NULL; i = json_object_iter_next(value, i)) {
        const char *key = json_object_iter_key(i);
        if (!is_listed(key, keys, n, optional)) {
            const kel__node unknown = { .parent = object, .key = key };
            kel__read_fail(reader, &unknown, "is not a known key");
            return;
        }
    }
    for (size_t i = 0; i < n; i++)
        if (!kel__has_member(object, keys[i])) {
            const kel__node missing = { .parent = object, .key = keys[i] };
            kel__read_fail(reader, &missing, "is missing");
            return;
        }
}

kel__node
kel__read_member(kel__reader *reader, const kel__node *object, const char *key)
{
    kel__node node = { .parent = object, .key = key };
    if (reader->status == KEL_OK)
        node.value = json_object_get(object->value, key);
    if (node.value == NULL)
        kel__read_fail(reader, &node, "is missing");
    return node;
}

kel__node
kel__read_element(kel__reader *reader, const kel__node *array, size_t index)
{
    kel__node node = { .parent = array, .index = index };
    if (reader->status == KEL_OK)
        node.value = json_array_get(array->value, index);
    return node;
}

size_t
kel__read_length(kel__reader *reader, const kel__node *array)
{
    if (!json_is_array((const json_t *)array->value)) {
        kel__read_fail(reader, array, "is not an array");
        return 0;
    }
    return reader->status == KEL_OK ? json_array_size(array->value) : 0;
}

/* ---- typed values ---- */

double
kel__node_number(kel__reader *reader, const kel__node *node)
{
    if (json_is_real((const json_t *)node->value))
        return json_real_value(node->value);
    kel__read_fail(reader, node, "is not a number");
    return 0.0;
}

const char *
kel__node_string(kel__reader *reader, const kel__node *node)
{
    const char *s = json_string_value(node->value);
    if (s == NULL) {
        kel__read_fail(reader, node, "is not a string");
        return NULL;
    }
    size_t n = json_string_length(node->value);
    char *copy = kel__read_take(reader, n + 1, 1);
    if (copy != NULL)
        memcpy(copy, s, n);
    return copy;
}

double
kel__read_number_or_null(kel__reader *reader, const kel__node *object, const char *key)
{
    const kel__node node = kel__read_member(reader, object, key);
    if (json_is_null((const json_t *)node.value))
        return NAN;
    if (!json_is_real((const json_t *)node.value))
        kel__read_fail(reader, &node, "is neither a number nor null");
    return json_real_value(node.value);
}

bool
kel__read_bool(kel__reader *reader, const kel__node *object, const char *key)
{
    const kel__node node = kel__read_member(reader, object, key);
    if (!json_is_boolean((const json_t *)node.value))
        kel__read_fail(reader, &node, "is neither true nor false");
    return json_is_true((const json_t *)node.value);
}

const char *
kel__read_string_or_null(kel__reader *reader, const kel__node *object, const char *key)
{
    const kel__node node = kel__read_member(reader, object, key);
    if (json_is_null((const json_t *)node.value))
        return NULL;
    if (!json_is_string((const json_t *)node.value))
        kel__read_fail(reader, &node, "is neither a string nor null");
    return reader->status == KEL_OK ? kel__node_string(reader, &node) : NULL;
}

const char *
kel__read_raw(kel__reader *reader, const kel__node *root, const char *key, const char *bytes, size_t n)
{
    /* jansson keeps the order of the text, and there are no duplicates: the place among its siblings finds the member, however
       its key is written. */
    json_t *value = (json_t *)(uintptr_t)root->value;
    size_t place = 0, size;
    for (void *i = json_object_iter(value); i != NULL; i = json_object_iter_next(value, i), place++)
        if (strcmp(json_object_iter_key(i), key) == 0)
            break;
    const char *text = kel__json_member_text(&size, place, bytes, n);
    char *copy = kel__read_take(reader, size + 1, 1);
    if (copy != NULL)
        memcpy(copy, text, size);
    return copy;
}
