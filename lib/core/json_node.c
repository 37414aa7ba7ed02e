/* SPDX-License-Identifier: Apache-2.0 */
/* What the strict JSON reader builds on its parser: places in messages, counts, words, arrays of numbers. Knows no
   parser. */
#include "json_read.h"

#include <math.h>
#include <string.h>

enum { LONGEST_QUOTE = 64 };

/* Integers up to here are exact as doubles. */
static const double largest_count = 9007199254740992.0;

kel_status
kel__json_fail(kel_error *err, kel_status code, const char *bytes, size_t n, size_t position, const char *what,
               const char *near)
{
    size_t end = position > n ? n : position, begin = 0, line = 1;
    for (size_t i = 0; i + 1 < end; i++)
        if (bytes[i] == '\n') {
            line++;
            begin = i + 1;
        }
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, near, strlen(near));
    kel_status status = quoted.failed
        ? kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a message")
        : kel_error_set(err, code, line, end > begin ? end - begin : 1, "not valid JSON: %s%s", what,
                        quoted.size == 0 ? "" : quoted.bytes);
    kel_text_free(&quoted);
    return status;
}

/* What a file says may be long; what is wrong with it must still fit behind it. */
static void
add_cut(kel_text *text, const char *s)
{
    size_t n = strlen(s);
    kel_text_quote(text, s, n < LONGEST_QUOTE ? n : LONGEST_QUOTE);
    if (n > LONGEST_QUOTE)
        kel_text_add(text, "...");
}

/* "columns[2].label": the way from the root. */
static void
add_place(kel_text *text, const kel__node *node)
{
    if (node->parent == NULL)
        return;
    add_place(text, node->parent);
    if (node->key == NULL) {
        kel_text_printf(text, "[%zu]", node->index);
        return;
    }
    if (text->size != 0)
        kel_text_add(text, ".");
    add_cut(text, node->key);
}

void
kel__read_fail(kel__reader *reader, const kel__node *node, const char *what)
{
    if (reader->status != KEL_OK)
        return;
    kel_text place = KEL_TEXT_INIT;
    add_place(&place, node);
    reader->status = place.failed
        ? kel_error_set(reader->err, KEL_E_NOMEM, 0, 0, "out of memory for a message")
        : kel_error_set(reader->err, KEL_E_DATA, 0, 0, "%s %s", place.size == 0 ? "the record" : place.bytes, what);
    kel_text_free(&place);
}

void *
kel__read_take(kel__reader *reader, size_t n, size_t size)
{
    void *p = reader->status == KEL_OK ? kel_arena_take(reader->memory, n, size) : NULL;
    if (p == NULL && reader->status == KEL_OK)
        reader->status = kel_error_set(reader->err, KEL_E_NOMEM, 0, 0, "out of memory for a record");
    return p;
}

void
kel__node_numbers(kel__reader *reader, const kel__node *array, double *out, size_t n)
{
    for (size_t i = 0; i < n && reader->status == KEL_OK; i++) {
        const kel__node element = kel__read_element(reader, array, i);
        out[i] = kel__node_number(reader, &element);
    }
}

double
kel__read_number(kel__reader *reader, const kel__node *object, const char *key)
{
    const kel__node node = kel__read_member(reader, object, key);
    return kel__node_number(reader, &node);
}

size_t
kel__read_count(kel__reader *reader, const kel__node *object, const char *key)
{
    const kel__node node = kel__read_member(reader, object, key);
    double x = kel__node_number(reader, &node);
    if (x >= 0.0 && x <= largest_count && x == floor(x))
        return (size_t)x;
    kel__read_fail(reader, &node, "is not a count (a whole number, not negative)");
    return 0;
}

const char *
kel__read_string(kel__reader *reader, const kel__node *object, const char *key)
{
    const kel__node node = kel__read_member(reader, object, key);
    return kel__node_string(reader, &node);
}

int
kel__node_word(kel__reader *reader, const kel__node *node, const kel__words *list)
{
    const char *word = kel__node_string(reader, node);
    int place = word == NULL ? -1 : kel__word_place(list, word);
    if (place >= 0 || reader->status != KEL_OK)
        return place >= 0 ? place : 0;
    kel_text what = KEL_TEXT_INIT;
    kel_text_add(&what, "= '");
    add_cut(&what, word);
    kel_text_add(&what, "' is none of ");
    for (int i = 0; i < list->count; i++)
        kel_text_printf(&what, "%s'%s'", i == 0 ? "" : ", ", list->words[i]);
    kel__read_fail(reader, node, what.failed ? "is no word that is known here" : what.bytes);
    kel_text_free(&what);
    return 0;
}

int
kel__read_word(kel__reader *reader, const kel__node *object, const char *key, const kel__words *list)
{
    const kel__node node = kel__read_member(reader, object, key);
    return kel__node_word(reader, &node, list);
}
