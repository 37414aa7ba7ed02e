/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Cells of numbers.

   Tables print marks at doubtful values: (0.192), 0.192:, 0.192*, ~0.192, <0.192, est. 0.192. A lenient reader takes
   the number and loses the doubt; here marks are taken off, remembered, and decided upon elsewhere. What is left must
   be a plain decimal number to the last byte: digits are never picked out of text. Marks of thousands are refused,
   because 1,234 is 1.234 in the next country. */
#include "number_cell.h"

#include "blanks.h"
#include "phrase.h"

#include <string.h>

enum { LONGEST_NUMBER = 400, SHOWN = 40 };

typedef struct mark { const char *text; unsigned bit; } mark;

static const mark before[] = {
    { "~", KEL__MARK_ABOUT }, { "\xE2\x89\x88", KEL__MARK_ABOUT },       /* U+2248 */
    { "<", KEL__MARK_LESS }, { "\xE2\x89\xA4", KEL__MARK_LESS },         /* U+2264 */
    { ">", KEL__MARK_GREATER }, { "\xE2\x89\xA5", KEL__MARK_GREATER },   /* U+2265 */
    { "est.", KEL__MARK_ESTIMATED }, { "est", KEL__MARK_ESTIMATED },
};

static const mark behind[] = {
    { ":", KEL__MARK_COLON }, { "*", KEL__MARK_ASTERISK },
    { "\xE2\x80\xA0", KEL__MARK_DAGGER }, { "\xE2\x80\xA1", KEL__MARK_DAGGER }, /* dagger, double dagger */
    { "est.", KEL__MARK_ESTIMATED }, { "est", KEL__MARK_ESTIMATED },
};

static const char *const empty_cells[] = {
    "", "...", "\xE2\x80\xA6", "-", "--", "\xE2\x80\x93", "\xE2\x80\x94", "\xE2\x88\x92", "n/a",
};

/* Dashes that stand between the ends of an interval; the last one is the Unicode minus. */
static const char *const dashes[] = {
    "-", "\xE2\x80\x90", "\xE2\x80\x91", "\xE2\x80\x92", "\xE2\x80\x93", "\xE2\x80\x94", "\xE2\x88\x92",
};

/* Is text at p (case of ASCII letters folded)? Returns its length or 0. */
static size_t
starts(const char *p, size_t n, const char *text)
{
    size_t m = strlen(text);
    return m <= n && kel__same_words(p, m, text, m) && kel__blank(p, p + m) == 0 ? m : 0;
}

static bool
take_before(kel__cell *c)
{
    for (size_t i = 0; i < sizeof before / sizeof before[0]; i++) {
        size_t m = starts(c->core, c->core_n, before[i].text);
        if (m != 0) {
            c->core += m;
            c->core_n -= m;
            c->marks |= before[i].bit;
            return true;
        }
    }
    return false;
}

static bool
take_behind(kel__cell *c)
{
    for (size_t i = 0; i < sizeof behind / sizeof behind[0]; i++) {
        size_t m = strlen(behind[i].text);
        if (m <= c->core_n && starts(c->core + c->core_n - m, m, behind[i].text) != 0) {
            c->core_n -= m;
            c->marks |= behind[i].bit;
            return true;
        }
    }
    return false;
}

static bool
take_parentheses(kel__cell *c)
{
    if (c->core_n < 2 || c->core[0] != '(' || c->core[c->core_n - 1] != ')')
        return false;
    c->core++;
    c->core_n -= 2;
    c->marks |= KEL__MARK_PARENTHESES;
    return true;
}

static size_t
place(const kel__cell *c, const char *p)
{
    return c->line == 0 ? 0 : c->column + (size_t)(p - c->p);
}

static kel_status
refuse(const kel__cell *c, kel_status code, const char *at, const char *what, kel_error *err)
{
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, c->p, c->n > SHOWN ? SHOWN : c->n);
    kel_status status = quoted.failed ? kel_error_set(err, KEL_E_NOMEM, c->line, place(c, at),
                                                      "out of memory for a message")
                                      : kel_error_set(err, code, c->line, place(c, at), "'%s': %s", quoted.bytes, what);
    kel_text_free(&quoted);
    return status;
}

static bool
is_digit(const char *p, const char *end)
{
    return p < end && *p >= '0' && *p <= '9';
}

/* Most cells are plain numbers, and those need not be compared with every mark: no mark starts or ends as they do. */
static bool
is_plain(const char *p, size_t n)
{
    return n > 0 && is_digit(p + n - 1, p + n) && (is_digit(p, p + 1) || *p == '-' || *p == '+' || *p == '.');
}

kel__cell
kel__cell_of(const char *bytes, size_t n, size_t line, size_t column)
{
    const char *p = bytes;
    kel__trim(&p, &n);
    kel__cell c = { .p = p, .n = n, .core = p, .core_n = n, .line = line, .column = column + (size_t)(p - bytes) };
    if (is_plain(p, n))
        return c;
    for (size_t i = 0; i < sizeof empty_cells / sizeof empty_cells[0] && !c.empty; i++)
        c.empty = kel__is_word(p, n, empty_cells[i]);
    while (!c.empty && (take_parentheses(&c) || take_before(&c) || take_behind(&c)))
        kel__trim(&c.core, &c.core_n);
    return c;
}

/* What makes a core no number, in words better than those for a number in general; NULL if nothing known. */
static const char *
known_trouble(const kel__cell *c, bool comma, const char **at)
{
    static const char *const words[] = { "nan", "inf", "infinity" };
    *at = c->core;
    if (c->core_n == 0)
        return "a status mark without a number";
    const char *p = c->core + (c->core[0] == '-' || c->core[0] == '+');
    size_t n = c->core_n - (size_t)(p - c->core);
    for (size_t i = 0; i < sizeof words / sizeof words[0]; i++)
        if (kel__is_word(p, n, words[i]))
            return "no number; an empty cell, ... or n/a stands for no value";
    if ((*at = memchr(c->core, comma ? '.' : ',', c->core_n)) != NULL)
        return comma ? "a point, where the file declares `decimal: comma` (marks of thousands are not taken)"
                     : "a comma: a decimal comma must be declared by `decimal: comma`, and marks of thousands are "
                       "not taken";
    return NULL;
}

kel_status
kel__cell_number(double *out, double *resolution, const kel__cell *c, const kel_unit *unit, bool comma, kel_error *err)
{
    char copy[LONGEST_NUMBER];
    const char *at, *trouble = known_trouble(c, comma, &at);
    if (trouble != NULL)
        return refuse(c, KEL_E_SYNTAX, at, trouble, err);
    if (c->core_n > sizeof copy)
        return refuse(c, KEL_E_SYNTAX, c->core, "too long for a number", err);
    memcpy(copy, c->core, c->core_n);
    char *decimal = comma ? memchr(copy, ',', c->core_n) : NULL;
    if (decimal != NULL)
        *decimal = '.';
    kel_error inner;
    kel_status status = kel_unit_read(out, resolution, unit, copy, c->core_n, &inner);
    if (status == KEL_OK)
        return KEL_OK;
    bool negative = copy[0] == '-' || (c->core_n >= 3 && memcmp(copy, "\xE2\x88\x92", 3) == 0);
    if (status == KEL_E_RANGE && negative && unit->dimension == KEL_DIM_TEMPERATURE && strcmp(unit->name, "K") == 0)
        return refuse(c, KEL_E_RANGE, c->core, "a temperature below 0 K: perhaps the column is in degC", err);
    return kel__error_at(err, &inner, c->line, place(c, c->core));
}

/* Bytes of the sign at p, or 0. */
static size_t
sign(const char *p, const char *end)
{
    return p < end && (*p == '-' || *p == '+') ? 1 : end - p >= 3 && memcmp(p, "\xE2\x88\x92", 3) == 0 ? 3 : 0;
}

/* Where what looks like a number at p ends; p if there is none. */
static const char *
number_end(const char *p, const char *end)
{
    const char *q = p + sign(p, end), *digits = q;
    while (is_digit(q, end) || (q < end && (*q == '.' || *q == ',')))
        q++;
    if (q == digits)
        return p;
    if (q < end && (*q == 'e' || *q == 'E')) {
        const char *exponent = q + 1 + sign(q + 1, end);
        while (is_digit(exponent, end))
            q = ++exponent;
    }
    return q;
}

static const char *
skip_blanks(const char *p, const char *end)
{
    size_t k;
    while (p < end && (k = kel__blank(p, end)) != 0)
        p += k;
    return p;
}

/* An end of the interval as a cell of its own, with the place it has in the file. */
static kel__cell
end_cell(const kel__cell *c, const char *p, size_t n)
{
    return (kel__cell){ .p = p, .n = n, .core = p, .core_n = n, .line = c->line, .column = place(c, p),
                        .marks = c->marks };
}

kel_status
kel__cell_interval(kel__cell *from, kel__cell *to, const kel__cell *c, kel_error *err)
{
    const char *end = c->core + c->core_n, *first = number_end(c->core, end), *p = skip_blanks(first, end);
    size_t m = first == c->core ? 0 : starts(p, (size_t)(end - p), "to");
    for (size_t i = 0; i < sizeof dashes / sizeof dashes[0] && m == 0 && first != c->core; i++)
        m = starts(p, (size_t)(end - p), dashes[i]);
    if (m == 0)
        return refuse(c, KEL_E_SYNTAX, c->core, "no interval such as 20-100, 20 to 100 or -50 to 20", err);
    p = skip_blanks(p + m, end);
    *from = end_cell(c, c->core, (size_t)(first - c->core));
    *to = end_cell(c, p, (size_t)(end - p));
    return p < end ? KEL_OK : refuse(c, KEL_E_SYNTAX, c->core, "an interval without its upper end", err);
}

void
kel__marks_text(kel_text *text, unsigned marks)
{
    static const mark names[] = {
        { "in parentheses", KEL__MARK_PARENTHESES }, { "with a colon", KEL__MARK_COLON },
            { "with an asterisk", KEL__MARK_ASTERISK },
        { "with a dagger", KEL__MARK_DAGGER }, { "about", KEL__MARK_ABOUT }, { "less than", KEL__MARK_LESS },
        { "greater than", KEL__MARK_GREATER }, { "estimated", KEL__MARK_ESTIMATED },
    };
    bool any = false;
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        if ((marks & names[i].bit) != 0) {
            kel_text_add(text, any ? ", " : "");
            kel_text_add(text, names[i].text);
            any = true;
        }
}
