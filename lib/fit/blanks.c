/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Blanks. Text copied out of documents brings the no-break space U+00A0 (C2 A0), the thin space U+2009 (E2 80 89) and
   the narrow no-break space U+202F (E2 80 AF) where a keyboard gives 20; none of them may become part of a number or
   a name. */
#include "blanks.h"

#include <string.h>

size_t
kel__blank(const char *p, const char *end)
{
    if (*p == ' ' || *p == '\t')
        return 1;
    size_t n = (size_t)(end - p);
    if (n >= 2 && memcmp(p, "\xC2\xA0", 2) == 0)
        return 2;
    if (n >= 3 && (memcmp(p, "\xE2\x80\x89", 3) == 0 || memcmp(p, "\xE2\x80\xAF", 3) == 0))
        return 3;
    return 0;
}

/* The blank that ends at `end`, seen from behind. */
static size_t
blank_before(const char *begin, const char *end)
{
    for (size_t n = 1; n <= 3 && n <= (size_t)(end - begin); n++)
        if (kel__blank(end - n, end) == n)
            return n;
    return 0;
}

void
kel__trim(const char **p, size_t *n)
{
    if (*p == NULL) /* no text: there is nothing that a pointer could move in */
        *p = "";
    const char *begin = *p, *end = *p + *n;
    size_t k;
    while (begin < end && (k = kel__blank(begin, end)) != 0)
        begin += k;
    while (begin < end && (k = blank_before(begin, end)) != 0)
        end -= k;
    *p = begin;
    *n = (size_t)(end - begin);
}

/* The next character with case folded and a run of blanks as one space; 0 at the end. */
static int
folded(const char **p, const char *end)
{
    if (*p == end)
        return 0;
    size_t k = kel__blank(*p, end);
    if (k == 0) {
        unsigned char c = (unsigned char)*(*p)++;
        return c >= 'A' && c <= 'Z' ? c - 'A' + 'a' : c;
    }
    while (*p < end && (k = kel__blank(*p, end)) != 0)
        *p += k;
    return ' ';
}

int
kel__compare_words(const char *a, size_t n, const char *b, size_t m)
{
    kel__trim(&a, &n);
    kel__trim(&b, &m);
    const char *a_end = a + n, *b_end = b + m;
    int c, d;
    do {
        c = folded(&a, a_end);
        d = folded(&b, b_end);
    } while (c == d && c != 0);
    return c - d;
}

bool
kel__same_words(const char *a, size_t n, const char *b, size_t m)
{
    return kel__compare_words(a, n, b, m) == 0;
}

bool
kel__is_word(const char *p, size_t n, const char *word)
{
    return kel__same_words(p, n, word, strlen(word));
}
