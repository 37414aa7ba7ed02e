/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows left out by hand, FILE:LINE=REASON. FILE may hold colons and signs of equality: the first `:digits=` is the
   separator. */
#include "table_inner.h"

#include <string.h>

/* Splits the text; false if it has not that form. */
static bool
split(size_t *name_size, size_t *line, const char **reason, const char *text)
{
    for (const char *p = strchr(text, ':'); p != NULL; p = strchr(p + 1, ':')) {
        size_t n = 0;
        const char *q = p + 1;
        for (; *q >= '0' && *q <= '9' && n < KEL__NONE / 16; q++)
            n = 10 * n + (size_t)(*q - '0');
        if (q == p + 1 || *q != '=' || p == text)
            continue;
        q += 1 + strspn(q + 1, " \t");
        *name_size = (size_t)(p - text);
        *line = n;
        *reason = q;
        return *q != '\0';
    }
    return false;
}

kel_status
kel__table_leave_out(kel_table *t, const kel_table_options *options, kel_error *err)
{
    struct kel__table *in = t->inner;
    in->leave_out = kel_arena_take(in->memory, options->leave_out_count, sizeof *in->leave_out);
    if (in->leave_out == NULL)
        return kel__no_memory(err);
    for (size_t i = 0; i < options->leave_out_count; i++) {
        size_t name_size, row;
        const char *reason;
        if (!split(&name_size, &row, &reason, options->leave_out[i])) {
            kel_text text = KEL_TEXT_INIT;
            kel_text_add(&text, "--leave-out ");
            kel__quote_into(&text, options->leave_out[i], strlen(options->leave_out[i]));
            kel_text_add(&text, ": write FILE:LINE=REASON, for example 'bars.csv:12=specimen had moved'");
            return kel__fail(err, KEL_E_ARGUMENT, 0, 0, &text);
        }
        if (strlen(t->name) != name_size || memcmp(t->name, options->leave_out[i], name_size) != 0)
            continue;
        kel_text text = KEL_TEXT_INIT;
        kel_text_quote(&text, reason, strlen(reason)); /* it will stand in files and messages */
        const char *copy = text.failed ? NULL : kel_arena_string(in->memory, text.bytes);
        kel_text_free(&text);
        if (copy == NULL)
            return kel__no_memory(err);
        in->leave_out[in->leave_out_count++] = (kel__leave_out){ row, copy, false };
    }
    return KEL_OK;
}

const char *
kel__left_out_by_hand(kel_table *t, size_t row)
{
    struct kel__table *in = t->inner;
    const char *reason = NULL;
    for (size_t i = 0; i < in->leave_out_count; i++)
        if (in->leave_out[i].row == row) {
            in->leave_out[i].met = true;
            reason = reason == NULL ? in->leave_out[i].reason : reason;
        }
    return reason;
}
