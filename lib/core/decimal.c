/* SPDX-License-Identifier: Apache-2.0 */
/* The text of a decimal number taken apart, nothing rounded. One pass, no copy: digits beyond the first 19 stay in the
   caller's text. */
#include "decimal.h"

#include <string.h>

enum {
    HEAD_DIGITS = 19 /* 10^19 < 2^64 */
};

/* An exponent stops growing here: no text has the digits to bring such a number back into range. */
static const int64_t EXPONENT_LIMIT = 100000000000;

/* Bytes of a sign at p, 0 if there is none. */
static size_t
scan_sign(bool *negative, const char *p, const char *end)
{
    *negative = false;
    if (p < end && (*p == '-' || *p == '+')) {
        *negative = *p == '-';
        return 1;
    }
    if (end - p >= 3 && memcmp(p, "\xE2\x88\x92", 3) == 0) {
        *negative = true;
        return 3;
    }
    return 0;
}

static bool
is_digit(char c)
{
    return (unsigned)(c - '0') <= 9;
}

/* Bytes of an exponent part at p, 0 if what stands there is none. */
static size_t
scan_exponent(int64_t *exponent, const char *p, const char *end)
{
    if (p == end || (*p != 'e' && *p != 'E'))
        return 0;
    bool negative;
    const char *q = p + 1 + scan_sign(&negative, p + 1, end);
    if (q == end || !is_digit(*q))
        return 0;
    int64_t e = 0;
    for (; q < end && is_digit(*q); q++)
        if (e < EXPONENT_LIMIT)
            e = 10 * e + (*q - '0');
    *exponent += negative ? -e : e;
    return (size_t)(q - p);
}

size_t
kel__decimal_scan(kel__decimal *out, const char *bytes, size_t n)
{
    const char *p = bytes, *end = bytes + n, *point = NULL;
    bool negative;
    p += scan_sign(&negative, p, end);
    const char *start = p;
    /* Leading zeros and the point among them. */
    while (p < end && (*p == '0' || (*p == '.' && point == NULL))) {
        if (*p == '.')
            point = p;
        p++;
    }
    const char *first = p;
    uint64_t head = 0;
    size_t count = 0;
    for (; p < end; p++) {
        unsigned digit = (unsigned)(*p - '0');
        if (digit <= 9) {
            if (count < HEAD_DIGITS)
                head = 10 * head + digit;
            count++;
        } else if (*p == '.' && point == NULL)
            point = p;
        else
            break;
    }
    if (p - start - (point != NULL) < 1)
        return 0;
    out->exponent = point == NULL ? 0 : -(int64_t)(p - point - 1);
    p += scan_exponent(&out->exponent, p, end);
    out->negative = negative;
    out->head = head;
    out->count = count;
    out->first = first;
    return (size_t)(p - bytes);
}

const char *
kel__quote(char *out, const char *bytes, size_t n)
{
    enum { LONGEST = 40 };
    kel_text text = KEL_TEXT_INIT;
    kel_text_quote(&text, bytes, n < LONGEST ? n : LONGEST);
    if (n > LONGEST)
        kel_text_add(&text, "...");
    size_t size = text.failed || text.bytes == NULL ? 0 : text.size;
    if (size > KEL__QUOTE_SIZE - 1)
        size = KEL__QUOTE_SIZE - 1;
    if (size > 0)
        memcpy(out, text.bytes, size);
    out[size] = '\0';
    kel_text_free(&text);
    return out;
}
