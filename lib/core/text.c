/* SPDX-License-Identifier: Apache-2.0 */
/* A text buffer that grows by doubling, and data made fit for a message.

   The buffer remembers that memory ran out instead of saying so at each call, so that code which writes a long text
   stays readable: one look at `failed` at the end tells whether all of it is there. That includes kel_text_clear: a
   stream that is written out piece by piece keeps the memory of a lost piece until kel_text_free. */
#include "core.h"
#include "utf8.h"

#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { FIRST_CAPACITY = 256 };

void
kel_text_free(kel_text *text)
{
    if (text == NULL)
        return;
    free(text->bytes);
    *text = (kel_text)KEL_TEXT_INIT;
}

void
kel_text_clear(kel_text *text)
{
    text->size = 0;
    if (text->bytes != NULL)
        text->bytes[0] = '\0';
}

/* Room for n more bytes and the terminator. */
static bool
make_room(kel_text *text, size_t n)
{
    if (text->failed)
        return false;
    if (n < text->capacity - text->size)
        return true;
    size_t capacity = text->capacity == 0 ? FIRST_CAPACITY : text->capacity;
    while (n >= capacity - text->size) {
        if (capacity > SIZE_MAX / 2) {
            text->failed = true;
            return false;
        }
        capacity *= 2;
    }
    char *bytes = realloc(text->bytes, capacity);
    if (bytes == NULL) {
        text->failed = true;
        return false;
    }
    text->bytes = bytes;
    text->capacity = capacity;
    return true;
}

void
kel_text_add_bytes(kel_text *text, const char *bytes, size_t n)
{
    if (!make_room(text, n))
        return;
    if (n != 0)
        memcpy(text->bytes + text->size, bytes, n);
    text->size += n;
    text->bytes[text->size] = '\0';
}

void
kel_text_add(kel_text *text, const char *string)
{
    kel_text_add_bytes(text, string, strlen(string));
}

void
kel_text_printf(kel_text *text, const char *format, ...)
{
    va_list arguments;
    va_start(arguments, format);
    int n = vsnprintf(NULL, 0, format, arguments);
    va_end(arguments);
    if (n < 0) {
        text->failed = true;
        return;
    }
    if (!make_room(text, (size_t)n))
        return;
    va_start(arguments, format);
    vsnprintf(text->bytes + text->size, (size_t)n + 1, format, arguments);
    va_end(arguments);
    text->size += (size_t)n;
}

void
kel_text_number(kel_text *text, double x)
{
    char digits[KEL_NUMBER_SIZE];
    kel_text_add_bytes(text, digits, kel_number_format(digits, x));
}

/* C0 and C1 (a terminal may take U+009B for the start of a command), DEL, and the two characters that end a line. */
static bool
is_control(uint32_t point)
{
    return point < 0x20 || (point >= 0x7F && point < 0xA0) || point == 0x2028 || point == 0x2029;
}

void
kel_text_quote(kel_text *text, const char *bytes, size_t n)
{
    for (size_t i = 0; i < n;) {
        uint32_t point = 0;
        size_t size = kel__utf8_character(&point, bytes + i, n - i);
        if (size != 0 && !is_control(point)) {
            kel_text_add_bytes(text, bytes + i, size);
            i += size;
            continue;
        }
        for (size_t end = i + (size != 0 ? size : 1); i < end; i++)
            kel_text_printf(text, "\\x%02X", (unsigned)(unsigned char)bytes[i]);
    }
}
