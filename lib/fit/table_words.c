/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How tables complain: errors and warnings put together from data, numbers and words. */
#include "table_inner.h"

#include <string.h>

enum { SHOWN = 60 };

kel_status
kel__no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a table");
}

void
kel__quote_into(kel_text *text, const char *bytes, size_t n)
{
    kel_text_add(text, "'");
    kel_text_quote(text, bytes, n > SHOWN ? SHOWN : n);
    kel_text_add(text, n > SHOWN ? "...'" : "'");
}

/* Up to seven digits, no zeros behind the last one that counts. */
static void
number_into(kel_text *text, double x)
{
    char number[KEL_NUMBER_SIZE];
    double rounded;
    size_t n = kel_number_format_digits(number, x, 7);
    kel_text_number(text, kel_number_read(&rounded, number, n, NULL) == KEL_OK ? rounded : x);
}

void
kel__temperature_into(kel_text *text, double t)
{
    number_into(text, t);
    kel_text_add(text, " K");
}

void
kel__value_into(kel_text *text, kel_kind kind, double value)
{
    number_into(text, value);
    kel_text_add(text, kind == KEL_KIND_EXPANSION ? "" : " 1/K");
}

kel_status
kel__fail(kel_error *err, kel_status code, size_t line, size_t column, kel_text *text)
{
    kel_status status = text->failed ? kel__no_memory(err)
        : kel_error_set(err, code, line, column, "%s", text->bytes == NULL ? "" : text->bytes);
    kel_text_free(text);
    return status;
}

/* Few are ever made, so the array grows in the arena and leaves its smaller forms behind. */
kel_status
kel__warn(kel_table *t, const char *code, kel_text *text, size_t line, size_t count, kel_error *err)
{
    struct kel__table *in = t->inner;
    const char *copy = text->failed ? NULL : kel_arena_string(in->memory, text->bytes);
    kel_text_free(text);
    if (copy == NULL)
        return kel__no_memory(err);
    if (in->warning_count == in->warning_capacity) {
        size_t capacity = in->warning_capacity == 0 ? 8 : 2 * in->warning_capacity;
        kel_warning *more = kel_arena_take(in->memory, capacity, sizeof *more);
        if (more == NULL)
            return kel__no_memory(err);
        if (in->warning_count > 0)
            memcpy(more, in->warnings, in->warning_count * sizeof *more);
        in->warnings = more;
        in->warning_capacity = capacity;
    }
    in->warnings[in->warning_count++] = (kel_warning){ code, copy, line, count };
    t->warnings = in->warnings;
    t->warning_count = in->warning_count;
    return KEL_OK;
}
