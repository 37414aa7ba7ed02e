/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Cells of numbers written out again: digits and marks as printed, the decimal mark a point. A contraction becomes an
   expansion by its sign alone, so that no digit changes; a bound turns round with it (less than 3 of shrinking is more
   than -3 of expansion), and zero stays without a sign. */
#include "number_cell.h"

#include <string.h>

static size_t
sign_of(const char *p, size_t n)
{
    return n > 0 && (*p == '-' || *p == '+') ? 1 : n >= 3 && memcmp(p, "\xE2\x88\x92", 3) == 0 ? 3 : 0;
}

static bool
is_zero(const char *p, size_t n)
{
    for (size_t i = 0; i < n && p[i] != 'e' && p[i] != 'E'; i++)
        if (p[i] >= '1' && p[i] <= '9')
            return false;
    return true;
}

/* What stands before a number, with bounds turned round. */
static void
put_turned(kel_text *out, const char *p, size_t n)
{
    static const char *const pairs[][2] = { { "<", ">" }, { ">", "<" }, { "\xE2\x89\xA4", "\xE2\x89\xA5" },
                                            { "\xE2\x89\xA5", "\xE2\x89\xA4" } };
    for (size_t i = 0; i < n;) {
        size_t used = 0;
        for (size_t k = 0; k < sizeof pairs / sizeof pairs[0] && used == 0; k++)
            if (strlen(pairs[k][0]) <= n - i && memcmp(p + i, pairs[k][0], strlen(pairs[k][0])) == 0) {
                used = strlen(pairs[k][0]);
                kel_text_add(out, pairs[k][1]);
            }
        if (used == 0)
            kel_text_add_bytes(out, p + i, used = 1);
        i += used;
    }
}

void
kel__put_points(kel_text *out, const char *p, size_t n, bool comma)
{
    for (size_t i = 0; i < n; i++)
        kel_text_add_bytes(out, comma && p[i] == ',' ? "." : p + i, 1);
}

void
kel__put_cell(kel_text *out, const kel__cell *c, bool turn, bool comma)
{
    if (c->empty) {
        kel_text_add_bytes(out, c->p, c->n);
        return;
    }
    size_t before = (size_t)(c->core - c->p), n = c->core_n;
    const char *core = c->core, *behind = c->core + c->core_n;
    if (turn) {
        size_t sign = sign_of(core, n);
        bool positive = sign == 0 || *core == '+';
        core += sign;
        n -= sign;
        put_turned(out, c->p, before);
        kel_text_add(out, positive && !is_zero(core, n) ? "-" : "");
    } else {
        kel_text_add_bytes(out, c->p, before);
    }
    kel__put_points(out, core, n, comma);
    kel_text_add_bytes(out, behind, c->n - (size_t)(behind - c->p));
}
