/* SPDX-License-Identifier: Apache-2.0 */
/* Finds where things stand in a JSON text.

   What users keep in a record's annotations is theirs to the byte: 1.50 stays 1.50, and their layout stays. A parsed
   tree has lost that, so the text is walked again. It was parsed before, so nothing but strings and brackets needs
   to be told apart. */
#include "json_raw.h"

#include <stdbool.h>
#include <string.h>

static bool
is_blank(char c)
{
    return c == ' ' || c == '\t' || c == '\n' || c == '\r';
}

static size_t
skip_blanks(const char *bytes, size_t n, size_t i)
{
    while (i < n && is_blank(bytes[i]))
        i++;
    return i;
}

/* From the opening quote to behind the closing one. */
static size_t
skip_string(const char *bytes, size_t n, size_t i)
{
    for (i++; i < n && bytes[i] != '"'; i++)
        if (bytes[i] == '\\')
            i++;
    return i < n ? i + 1 : n;
}

/* From the first byte of a value to the comma or bracket behind it. */
static size_t
skip_value(const char *bytes, size_t n, size_t i)
{
    size_t depth = 0;
    while (i < n) {
        char c = bytes[i];
        if (c == '"') {
            i = skip_string(bytes, n, i);
            continue;
        }
        if (depth == 0 && (c == ',' || c == '}' || c == ']'))
            break;
        if (c == '{' || c == '[')
            depth++;
        if (c == '}' || c == ']')
            depth--;
        i++;
    }
    return i;
}

size_t
kel__json_value_size(const char *bytes, size_t n)
{
    return skip_value(bytes, n, skip_blanks(bytes, n, 0));
}

size_t
kel__json_longest_token(const char *bytes, size_t n)
{
    size_t longest = 0;
    for (size_t i = 0; i < n;) {
        size_t end = i;
        if (bytes[i] == '"')
            end = skip_string(bytes, n, i);
        else
            while (end < n && !is_blank(bytes[end]) && strchr(",:[]{}\"", bytes[end]) == NULL)
                end++;
        if (end - i > longest)
            longest = end - i;
        i = end > i ? end : i + 1;
    }
    return longest;
}

const char *
kel__json_member_text(size_t *size, size_t place, const char *bytes, size_t n)
{
    size_t begin = 0, end = skip_blanks(bytes, n, 0);
    for (size_t member = 0; member <= place; member++) {
        /* bytes[end] is the opening bracket, later the comma before the next key. */
        size_t key = skip_blanks(bytes, n, end + 1);
        size_t colon = skip_blanks(bytes, n, skip_string(bytes, n, key));
        begin = skip_blanks(bytes, n, colon + 1);
        end = skip_value(bytes, n, begin);
    }
    while (end > begin && is_blank(bytes[end - 1]))
        end--;
    *size = end - begin;
    return bytes + begin;
}
