/* SPDX-License-Identifier: Apache-2.0 */
/* The grammar of units over the names of unit_table.c.

       unit    = [ times ] factor { join factor }          times = "x" | U+00D7, before a power of ten only
       factor  = power of ten | name [ exponent ] | "(" factors joined by products ")"
       join    = "/" | "per" | "." | U+00B7 | U+22C5 | "*" | "-" | blank | nothing, before a degree sign
       power of ten = 1, 100, 1e-6, 10^-6, 10**-6, 10⁻⁶
       exponent = ^-1, **-1, ⁻¹

   After a slash the factors joined by products stay below it, as the trade writes um/m-K and in/100 ft, except one with
   a negative exponent of its own. A positive power of ten above the slash is refused: over a column, "a x 10^6" says
   that the printed numbers are a million times the coefficient, while "10^6/K" as a unit would say the opposite. */
#include "unit_table.h"

#include <string.h>

#include "decimal.h"

enum { MAX_POWER = 30 };

struct parser {
    const char *bytes;
    size_t n, at;
    kel__product *out;
};

static bool
take(struct parser *p, const char *text)
{
    size_t length = strlen(text);
    if (p->n - p->at < length || memcmp(p->bytes + p->at, text, length) != 0)
        return false;
    p->at += length;
    return true;
}

static bool
skip_blanks(struct parser *p)
{
    size_t before = p->at;
    while (take(p, " ") || take(p, "\t") || take(p, "\xC2\xA0") || take(p, "\xE2\x80\xAF") || take(p, "\xE2\x80\x89"))
        ;
    return p->at > before;
}

static bool
at_digit(const struct parser *p)
{
    return p->at < p->n && p->bytes[p->at] >= '0' && p->bytes[p->at] <= '9';
}

static int
take_digits(struct parser *p)
{
    int e = 0;
    for (; at_digit(p); p->at++)
        if (e <= MAX_POWER)
            e = 10 * e + (p->bytes[p->at] - '0');
    return e;
}

static int
take_superscript(struct parser *p)
{
    static const char *const digit[] = {
        "\xE2\x81\xB0", "\xC2\xB9",     "\xC2\xB2",     "\xC2\xB3",     "\xE2\x81\xB4",
        "\xE2\x81\xB5", "\xE2\x81\xB6", "\xE2\x81\xB7", "\xE2\x81\xB8", "\xE2\x81\xB9"
    };
    for (int i = 0; i < 10; i++)
        if (take(p, digit[i]))
            return i;
    return -1;
}

/* An exponent, if one stands here: *exponent, else 0. False if it is broken or 0. */
static bool
take_exponent(struct parser *p, int *exponent)
{
    *exponent = 0;
    size_t before = p->at;
    if (take(p, "^") || take(p, "**")) {
        bool bracket = take(p, "("), negative = take(p, "-") || take(p, "\xE2\x88\x92");
        if (!negative)
            take(p, "+");
        size_t digits = p->at;
        int e = take_digits(p);
        if (p->at == digits || (bracket && !take(p, ")")))
            return false;
        *exponent = negative ? -e : e;
    } else {
        bool negative = take(p, "\xE2\x81\xBB");
        int d = take_superscript(p), e = d;
        if (d < 0) {
            p->at = before;
            return true;
        }
        while ((d = take_superscript(p)) >= 0)
            if (e <= MAX_POWER)
                e = 10 * e + d;
        *exponent = negative ? -e : e;
    }
    if (*exponent != 0 && *exponent >= -MAX_POWER && *exponent <= MAX_POWER)
        return true;
    p->at = before;
    return false;
}

/* A power of ten. */
static bool
take_number(struct parser *p, int sign)
{
    kel__decimal d;
    size_t before = p->at, used = kel__decimal_scan(&d, p->bytes + p->at, p->n - p->at);
    int e = 0;
    used -= p->bytes[p->at + used - 1] == '.'; /* the point of a product: 100.ft */
    bool plain = used == 2 && d.head == 10 && d.exponent == 0; /* "10", which may have an exponent of its own */
    p->at += used;
    if (plain && !take_exponent(p, &e))
        return false;
    if (e == 0) {
        uint64_t m = d.head;
        /* 1e-6 and 1000, not 10e-6, which may have been meant as 10^-6. */
        if (m != 1 && d.exponent != 0)
            m = 0;
        for (e = (int)(d.exponent < -MAX_POWER || d.exponent > MAX_POWER ? MAX_POWER + 1 : d.exponent);
             m > 1 && m % 10 == 0; m /= 10)
            e++;
        if (m != 1 || e > MAX_POWER || d.negative || d.count > 19) {
            p->at = before;
            return false;
        }
    }
    if (sign < 0 && e < 0) { /* "1/10^-6" is a positive power in disguise */
        p->at = before;
        return false;
    }
    *(sign > 0 ? &p->out->above : &p->out->below) += e;
    p->out->bare_name = false;
    return true;
}

/* sign: of a factor without exponent. keeps: the line does not hold for a factor with a negative exponent. */
static bool
take_name(struct parser *p, int sign, bool keeps)
{
    size_t used, before = p->at;
    const kel__symbol *symbol = kel__symbol_match(&used, p->bytes + p->at, p->n - p->at);
    if (symbol == NULL)
        return false;
    p->at += used;
    /* "in." and "ft." with the point of an abbreviation. */
    if (symbol->length == 1 && p->at < p->n && p->bytes[p->at] == '.' &&
        (p->at + 1 == p->n || strchr("/) ", p->bytes[p->at + 1]) != NULL))
        p->at++;
    int e;
    if (!take_exponent(p, &e))
        return false;
    if (e != 0) {
        if (e < 0 && keeps)
            sign = 1;
        sign = e < 0 ? -sign : sign;
        p->out->bare_name = false;
    }
    int times = e == 0 ? 1 : e < 0 ? -e : e;
    if (times > KEL__MAX_FACTORS || p->out->count + (size_t)times > KEL__MAX_FACTORS) {
        p->at = before;
        return false;
    }
    for (int i = 0; i < times; i++) {
        p->out->factor[p->out->count].symbol = symbol;
        p->out->factor[p->out->count++].sign = sign;
    }
    return true;
}

/* A sign of a product. A hyphen before a digit is none: K-1 may be an exponent that lost its place. */
static bool
take_product(struct parser *p)
{
    size_t before = p->at;
    if (take(p, "-")) {
        if (!at_digit(p) && p->at < p->n)
            return true;
        p->at = before;
        return false;
    }
    return take(p, ".") || take(p, "\xC2\xB7") || take(p, "\xE2\x8B\x85") || take(p, "*");
}

static bool
take_factor(struct parser *p, int sign, bool keeps)
{
    return at_digit(p) ? take_number(p, sign) : take_name(p, sign, keeps);
}

/* "100ft": a name may follow a number of ones and zeros at once. */
static bool
after_hundred(const struct parser *p)
{
    char c = p->bytes[p->at];
    return p->at > 0 && p->bytes[p->at - 1] == '0' && ((c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z'));
}

/* What stands between two factors inside a bracket, or between products outside. Leaves p->at alone if nothing does. */
static bool
join_product(struct parser *p)
{
    size_t before = p->at;
    bool blank = skip_blanks(p);
    if (p->at < p->n && take_product(p)) {
        skip_blanks(p);
        return true;
    }
    if (p->at < p->n && p->bytes[p->at] != ')' && p->bytes[p->at] != '/' &&
        (blank || kel__degree_sign(p->bytes + p->at, p->n - p->at) || after_hundred(p)))
        return true;
    p->at = before;
    return false;
}

/* "(m.K)", or one factor. */
static bool
take_group(struct parser *p, int sign, bool keeps)
{
    if (!take(p, "("))
        return take_factor(p, sign, keeps);
    p->out->bare_name = false;
    do {
        skip_blanks(p);
        if (!take_factor(p, sign, false))
            return false;
    } while (join_product(p));
    skip_blanks(p);
    return take(p, ")");
}

static bool
take_slash(struct parser *p)
{
    size_t before = p->at;
    skip_blanks(p);
    if (take(p, "/"))
        return true;
    if (take(p, "per") && skip_blanks(p))
        return true;
    p->at = before;
    return false;
}

/* The whole text. On failure p->at is the first byte that is not understood. */
static bool
parse(struct parser *p)
{
    skip_blanks(p);
    size_t start = p->at;
    if (take(p, "x") || take(p, "X") || take(p, "\xC3\x97")) {
        skip_blanks(p);
        if (!at_digit(p)) {
            p->at = start;
            return false;
        }
    }
    int sign = 1;
    size_t first = p->at;
    if (take_slash(p))
        p->at = first; /* "/K": nothing above the line */
    else if (!take_group(p, 1, false))
        return false;
    for (;;) {
        if (take_slash(p)) {
            sign = -1;
            p->out->bare_name = false;
            skip_blanks(p);
            if (!take_group(p, -1, false))
                return false;
            continue;
        }
        size_t before = p->at;
        skip_blanks(p);
        if (p->at == p->n)
            return true;
        p->at = before;
        if (!join_product(p) || !take_group(p, sign, sign < 0))
            return false;
    }
}

bool
kel__unit_grammar(kel__product *out, size_t *at, const char *bytes, size_t n)
{
    struct parser p = { bytes, n, 0, out };
    *out = (kel__product){ .bare_name = true };
    bool whole = parse(&p);
    *at = p.at;
    return whole;
}
