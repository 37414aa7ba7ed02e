/* SPDX-License-Identifier: Apache-2.0 */
/* The strict JSON reader, on jansson. The only file that knows jansson.

   Numbers: jansson is asked to take integers as reals too, so that -0 keeps its sign and every number is read by one
   rule: to the nearest double. It mends the decimal point for the C library's locale, which is not safe against
   another thread that changes the locale meanwhile. Integers are recognised by value.

   Lack of memory: jansson collects each token in a buffer that it doubles, ignores when that fails, and may then run
   past the end of a token that lost its last byte. So the text is fed to it as the second element of an array whose
   first one is a string longer than any token of the text: the buffer grows there, in the middle of a string of
   equal bytes, where a lost byte does no harm and shows in the string's length. Other failures of allocation come
   out as wrong syntax; what is wrong with a text is wrong every time, so a failure is believed when it happens twice
   in the same place.

   The depth is limited by jansson (2048 levels, one of them the array). */
#include "json_read.h"
#include "json_raw.h"

#include <jansson.h>
#include <math.h>
#include <string.h>

/* ---- the text ---- */

/* ["xxx",TEXT] with `filling` x, given out in pieces. */
typedef struct feed {
    const char *bytes;
    size_t n, filling, at;
} feed;

static const char before_filling[] = "[\"", behind_filling[] = "\",", behind_text[] = "]";

enum { BEFORE = sizeof before_filling - 1, BEHIND = sizeof behind_filling - 1 };

static size_t
give(void *buffer, size_t size, void *context)
{
    feed *f = context;
    const size_t text = BEFORE + f->filling + BEHIND;
    char *out = buffer;
    size_t n = 0;
    for (; n < size && f->at < text + f->n + 1; n++, f->at++) {
        if (f->at < BEFORE)
            out[n] = before_filling[f->at];
        else if (f->at < BEFORE + f->filling)
            out[n] = 'x';
        else if (f->at < text)
            out[n] = behind_filling[f->at - BEFORE - f->filling];
        else
            out[n] = f->at < text + f->n ? f->bytes[f->at - text] : behind_text[0];
    }
    return n;
}

/* The least power of two above the text's longest token and a byte read ahead. With so many x the buffer grows for
   the last time two bytes before the string's closing quote. */
static size_t
enough_filling(const char *bytes, size_t n)
{
    size_t longest = kel__json_longest_token(bytes, n), filling = 64;
    while (filling < longest + 2)
        filling *= 2;
    return filling;
}

/* One attempt: the array, or NULL. */
static json_t *
load(const char *bytes, size_t n, size_t filling, json_error_t *failure)
{
    feed f = { bytes, n, filling, 0 };
    json_t *array = json_load_callback(give, &f, JSON_REJECT_DUPLICATES | JSON_DECODE_INT_AS_REAL, failure);
    if (array == NULL || json_string_length(json_array_get(array, 0)) == filling)
        return array;
    json_decref(array);
    failure->text[0] = '\0';
    return NULL;
}

/* jansson's reason in words that fit a text which is not alone; its " near '...'", which it has for short tokens, is
   kept. */
static kel_status
explain(kel_error *err, const json_error_t *failure, const char *bytes, size_t n, size_t head)
{
    static const struct reason { enum json_error_code code; kel_status status; const char *what; } reasons[] = {
        { json_error_duplicate_key, KEL_E_SYNTAX, "the key that ends here occurs twice" },
        { json_error_numeric_overflow, KEL_E_RANGE, "a number is beyond the range of a double" },
        { json_error_stack_overflow, KEL_E_SYNTAX, "it is nested too deeply" },
        { json_error_invalid_utf8, KEL_E_SYNTAX, "it is no UTF-8" },
        { json_error_null_character, KEL_E_SYNTAX, "\\u0000 is not allowed" },
        { json_error_null_byte_in_key, KEL_E_SYNTAX, "\\u0000 is not allowed in a key" },
        { json_error_end_of_input_expected, KEL_E_SYNTAX, "something stands behind its end" },
    };
    const enum json_error_code code = json_error_code(failure);
    const size_t position =
        failure->position < 0 || (size_t)failure->position < head ? 0 : (size_t)failure->position - head;
    const char *near = strstr(failure->text, " near ");
    near = near == NULL ? "" : near;
    for (size_t i = 0; i < sizeof reasons / sizeof reasons[0]; i++)
        if (reasons[i].code == code)
            return kel__json_fail(err, reasons[i].status, bytes, n, position, reasons[i].what, near);
    /* The bracket behind the text was reached. */
    if (position > n)
        return kel__json_fail(err, KEL_E_SYNTAX, bytes, n, n, "it ends too early", "");
    return kel__json_fail(err, KEL_E_SYNTAX, bytes, n, position, "wrong syntax", near);
}

kel_status
kel__tree_parse(kel__tree **out, const char *bytes, size_t n, kel_error *err)
{
    *out = NULL;
    const char *nul = n == 0 ? NULL : memchr(bytes, '\0', n);
    if (nul != NULL)
        return kel__json_fail(err, KEL_E_SYNTAX, bytes, n, (size_t)(nul - bytes) + 1, "it holds a NUL byte", "");
    const size_t filling = enough_filling(bytes, n), head = BEFORE + filling + BEHIND;
    json_error_t first = { .text = "" }, second = { .text = "" };
    json_t *array = load(bytes, n, filling, &first);
    if (array == NULL && first.text[0] != '\0') {
        array = load(bytes, n, filling, &second);
        if (array == NULL && first.position == second.position && strcmp(first.text, second.text) == 0)
            return explain(err, &first, bytes, n, head);
    }
    if (array == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a JSON text");
    /* "{}, {}" would do as elements of an array. */
    if (json_array_size(array) != 2) {
        json_decref(array);
        return kel__json_fail(err, KEL_E_SYNTAX, bytes, n, kel__json_value_size(bytes, n) + 1,
                              "something stands behind its end", "");
    }
    *out = (kel__tree *)array;
    return KEL_OK;
}

void
kel__tree_free(kel__tree *tree)
{
    json_decref((json_t *)tree);
}

kel__node
kel__tree_root(const kel__tree *tree)
{
    return (kel__node){ .value = json_array_get((const json_t *)tree, 1) };
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
    /* jansson keeps the order of the text, and there are no duplicates: the place among its siblings finds the
       member, however its key is written. */
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
