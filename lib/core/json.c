/* SPDX-License-Identifier: Apache-2.0 */
/* JSON (RFC 8259) with one fixed layout, so that equal calls give equal bytes.

   A level is an object or an array and is laid out either a member a line or all on one line; what stands inside a
   level on one line stands on that line too. The levels are bits of two words, which limits the depth to 63: a
   deeper call marks the text as failed, for no output of this library comes near. */
#include "core.h"
#include "utf8.h"

#include <math.h>
#include <string.h>

enum { DEEPEST = 63 };

static bool
level_bit(uint64_t bits, unsigned depth)
{
    return (bits >> depth & 1) != 0;
}

static uint64_t
with_bit(uint64_t bits, unsigned depth, bool on)
{
    uint64_t mask = UINT64_C(1) << depth;
    return on ? bits | mask : bits & ~mask;
}

static void
new_line(kel_json *json)
{
    kel_text_add(json->text, "\n");
    for (unsigned d = 0; d < json->depth; d++)
        kel_text_add(json->text, "  ");
}

/* A string with its quotes. DEL is escaped beside what JSON asks for, for the sake of terminals. */
static void
add_string(kel_text *text, const char *s)
{
    static const char named[] = "\"\\\b\f\n\r\t", letters[] = "\"\\bfnrt";
    kel_text_add(text, "\"");
    for (size_t i = 0, n = strlen(s); i < n;) {
        uint32_t point = 0;
        size_t size = kel__utf8_character(&point, s + i, n - i);
        const char *name = size == 1 ? strchr(named, s[i]) : NULL;
        if (size == 0)
            kel_text_add(text, "\xEF\xBF\xBD");
        else if (name != NULL)
            kel_text_printf(text, "\\%c", letters[name - named]);
        else if (point < 0x20 || point == 0x7F)
            kel_text_printf(text, "\\u%04x", (unsigned)point);
        else
            kel_text_add_bytes(text, s + i, size);
        i += size != 0 ? size : 1;
    }
    kel_text_add(text, "\"");
}

/* What stands before a value: comma, place, key. */
static void
start(kel_json *json, const char *key)
{
    if (json->depth > 0) {
        bool in_line = level_bit(json->is_inline, json->depth);
        if (json->any)
            kel_text_add(json->text, in_line ? ", " : ",");
        if (!in_line)
            new_line(json);
    }
    if (key != NULL) {
        add_string(json->text, key);
        kel_text_add(json->text, ": ");
    }
    json->any = true;
}

/* A value that stands alone is a text of its own and ends like one. */
static void
finish(kel_json *json)
{
    if (json->depth == 0)
        kel_text_add(json->text, "\n");
}

static void
open_level(kel_json *json, const char *key, bool is_array, bool is_inline)
{
    start(json, key);
    if (json->depth >= DEEPEST) {
        json->text->failed = true;
        return;
    }
    kel_text_add(json->text, is_array ? "[" : "{");
    bool inherited = json->depth > 0 && level_bit(json->is_inline, json->depth);
    json->depth++;
    json->is_array = with_bit(json->is_array, json->depth, is_array);
    json->is_inline = with_bit(json->is_inline, json->depth, is_inline || inherited);
    json->any = false;
}

void
kel_json_begin(kel_json *json, kel_text *text)
{
    *json = (kel_json){ .text = text };
}

void
kel_json_object(kel_json *json, const char *key)
{
    open_level(json, key, false, false);
}

void
kel_json_array(kel_json *json, const char *key)
{
    open_level(json, key, true, false);
}

void
kel_json_inline_object(kel_json *json, const char *key)
{
    open_level(json, key, false, true);
}

void
kel_json_inline_array(kel_json *json, const char *key)
{
    open_level(json, key, true, true);
}

void
kel_json_end(kel_json *json)
{
    /* After a level too many was refused, there is one end more than levels. */
    if (json->depth == 0)
        return;
    bool is_array = level_bit(json->is_array, json->depth), is_inline = level_bit(json->is_inline, json->depth);
    json->depth--;
    if (json->any && !is_inline)
        new_line(json);
    kel_text_add(json->text, is_array ? "]" : "}");
    json->any = true;
    finish(json);
}

void
kel_json_raw(kel_json *json, const char *key, const char *value)
{
    start(json, key);
    kel_text_add(json->text, value);
    finish(json);
}

void
kel_json_null(kel_json *json, const char *key)
{
    kel_json_raw(json, key, "null");
}

void
kel_json_bool(kel_json *json, const char *key, bool b)
{
    kel_json_raw(json, key, b ? "true" : "false");
}

void
kel_json_number(kel_json *json, const char *key, double x)
{
    char digits[KEL_NUMBER_SIZE] = "null";
    if (isfinite(x))
        kel_number_format(digits, x);
    kel_json_raw(json, key, digits);
}

void
kel_json_count(kel_json *json, const char *key, uint64_t n)
{
    start(json, key);
    kel_text_printf(json->text, "%llu", (unsigned long long)n);
    finish(json);
}

void
kel_json_string(kel_json *json, const char *key, const char *string)
{
    if (string == NULL) {
        kel_json_null(json, key);
        return;
    }
    start(json, key);
    add_string(json->text, string);
    finish(json);
}

void
kel_json_numbers(kel_json *json, const char *key, const double *x, size_t n)
{
    kel_json_inline_array(json, key);
    for (size_t i = 0; i < n; i++)
        kel_json_number(json, NULL, x[i]);
    kel_json_end(json);
}
