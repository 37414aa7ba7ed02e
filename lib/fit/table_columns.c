/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The columns of a file: what their heads say, or what the user says instead.

   Without --column every head must be understood. With it, the file is a foreign one: columns that are not named keep
   what their heads say if that can be understood, else they are passed over, and a warning says so; a column whose
   head says what another was named as yields. */
#include "table_inner.h"

#include "blanks.h"

#include <stdlib.h>

enum { NAMES_SHOWN = 12 };

/* May the same thing not be said twice? */
static bool
is_unique(const kel__heading *h)
{
    return h->quantity != KEL__UNCERTAINTY && h->quantity != KEL__NOTHING;
}

/* An order in which those that say the same thing are equal; expansion and contraction do. */
static int
compare_meaning(const kel__heading *a, const kel__heading *b)
{
    bool value = kel__is_value(a->quantity);
    if (value != kel__is_value(b->quantity))
        return value ? 1 : -1;
    if (!value)
        return (int)a->quantity - (int)b->quantity;
    int kinds = (int)kel__kind_of(a->quantity) - (int)kel__kind_of(b->quantity);
    return kinds != 0 ? kinds : kel__compare_words(a->label.p, a->label.n, b->label.p, b->label.n);
}

static kel_status
parse_heads(kel_table *t, bool foreign, kel_error *err)
{
    struct kel__table *in = t->inner;
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        kel__file_column *c = &in->columns[i];
        const kel__printed *h = &in->sheet.heads[i];
        *c = (kel__file_column){ .head = *h, .owner = KEL__NONE, .uncertainty = KEL__NONE, .slot = KEL__NONE };
        double number;
        kel_error why = { .code = KEL_OK };
        kel_status status = kel__heading_parse(&c->heading, h->bytes, h->size, h->line, h->column, &why);
        if (status == KEL_OK)
            continue;
        if (status == KEL_E_NOMEM || (!foreign && kel_number_read(&number, h->bytes, h->size, NULL) != KEL_OK)) {
            if (err != NULL)
                *err = why;
            return status;
        }
        if (!foreign) {
            kel_text text = KEL_TEXT_INIT;
            kel_text_add(&text, "the header holds the number ");
            kel__quote_into(&text, h->bytes, h->size);
            kel_text_add(&text, ": the first row names the columns, for example temperature [K],coefficient [1e-6/K]; "
                                "for a file without a header use --header none and --column");
            return kel__fail(err, KEL_E_SYNTAX, h->line, h->column, &text);
        }
        c->heading = (kel__heading){ .quantity = KEL__NOTHING };
    }
    return KEL_OK;
}

/* The column that name stands for: one with that head, else the one with that number. */
static kel_status
find_column(size_t *out, const kel_table *t, kel__word name, kel_error *err)
{
    const struct kel__table *in = t->inner;
    size_t matches = 0, number = 0;
    for (size_t i = 0; i < in->sheet.raw.width; i++)
        if (in->columns[i].head.size > 0 && kel__same_words(in->columns[i].head.bytes, in->columns[i].head.size,
                                                            name.p, name.n)) {
            *out = i;
            matches++;
        }
    if (matches == 1)
        return KEL_OK;
    for (size_t i = 0; i < name.n && number != KEL__NONE; i++)
        number = name.p[i] < '0' || name.p[i] > '9' || number > in->sheet.raw.width ? KEL__NONE
            : 10 * number + (size_t)(name.p[i] - '0');
    if (matches == 0 && number != KEL__NONE && number >= 1 && number <= in->sheet.raw.width) {
        *out = number - 1;
        return KEL_OK;
    }
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "--column: ");
    kel__quote_into(&text, name.p, name.n);
    if (matches > 1)
        kel_text_printf(&text, " stands over %zu columns: give the column's number", matches);
    else
        kel_text_printf(&text, " is neither the head of a column nor a number from 1 to %zu", in->sheet.raw.width);
    return kel__fail(err, KEL_E_ARGUMENT, 0, 0, &text);
}

static kel_status
name_column(kel_table *t, const char *option, kel_error *err)
{
    struct kel__table *in = t->inner;
    const char *copy = kel_arena_string(in->memory, option); /* the heading points into it */
    kel__heading heading;
    kel__word name;
    size_t i = 0;
    if (copy == NULL)
        return kel__no_memory(err);
    kel_status status = kel__heading_option(&heading, &name, copy, err);
    if (status == KEL_OK)
        status = find_column(&i, t, name, err);
    if (status != KEL_OK)
        return status;
    if (in->columns[i].named) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_printf(&text, "--column names column %zu twice", i + 1);
        return kel__fail(err, KEL_E_ARGUMENT, 0, 0, &text);
    }
    in->columns[i].heading = heading;
    in->columns[i].named = true;
    return KEL_OK;
}

/* What heads say yields to what was named. */
static kel_status
overrule(struct kel__table *in, kel_error *err)
{
    size_t width = in->sheet.raw.width, count = 0;
    const kel__heading **named = kel_arena_take(in->memory, width, sizeof *named);
    if (named == NULL)
        return kel__no_memory(err);
    for (size_t j = 0; j < width; j++)
        if (in->columns[j].named && is_unique(&in->columns[j].heading))
            named[count++] = &in->columns[j].heading;
    for (size_t i = 0; i < width; i++)
        for (size_t j = 0; j < count && !in->columns[i].named; j++)
            if (compare_meaning(&in->columns[i].heading, named[j]) == 0)
                in->columns[i].heading = (kel__heading){ .quantity = KEL__NOTHING };
    return KEL_OK;
}

static kel_status
warn_passed_over(kel_table *t, kel_error *err)
{
    const struct kel__table *in = t->inner;
    kel_text text = KEL_TEXT_INIT;
    size_t n = 0;
    kel_text_add(&text, "columns passed over:");
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        const kel__file_column *c = &in->columns[i];
        if (c->heading.quantity != KEL__NOTHING)
            continue;
        if (n++ >= NAMES_SHOWN)
            continue;
        kel_text_add(&text, n == 1 ? " " : ", ");
        if (c->head.size > 0)
            kel__quote_into(&text, c->head.bytes, c->head.size);
        else
            kel_text_printf(&text, "number %zu", i + 1);
    }
    if (n > NAMES_SHOWN)
        kel_text_printf(&text, " and %zu more", n - NAMES_SHOWN);
    if (n > 0)
        return kel__warn(t, "passed-over", &text, in->sheet.head_line, n, err);
    kel_text_free(&text);
    return KEL_OK;
}

static kel_status
at_head(kel_error *err, kel_status code, const kel__file_column *c, const char *before, const char *behind)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, before);
    kel__quote_into(&text, c->head.bytes, c->head.size);
    kel_text_add(&text, behind);
    return kel__fail(err, code, c->head.line, c->head.line == 0 ? 0 : c->head.column, &text);
}

/* By meaning, then by place in the file. */
static int
compare_columns(const void *a, const void *b)
{
    const kel__file_column *x = *(const kel__file_column *const *)a, *y = *(const kel__file_column *const *)b;
    int order = compare_meaning(&x->heading, &y->heading);
    return order != 0 ? order : x < y ? -1 : x > y;
}

/* Sorted, so that a file with very many columns takes no long time. The first one in the file that repeats another is
   reported. */
static kel_status
check_duplicates(const struct kel__table *in, kel_error *err)
{
    size_t count = 0;
    const kel__file_column **sorted = kel_arena_take(in->memory, in->sheet.raw.width, sizeof *sorted), *first = NULL;
    if (sorted == NULL)
        return kel__no_memory(err);
    for (size_t i = 0; i < in->sheet.raw.width; i++)
        if (is_unique(&in->columns[i].heading))
            sorted[count++] = &in->columns[i];
    qsort(sorted, count, sizeof *sorted, compare_columns);
    for (size_t i = 1; i < count; i++)
        if (compare_meaning(&sorted[i - 1]->heading, &sorted[i]->heading) == 0 && (first == NULL || sorted[i] < first))
            first = sorted[i];
    if (first == NULL)
        return KEL_OK;
    return at_head(err, KEL_E_DATA, first, "the column ",
                   kel__is_value(first->heading.quantity)
                   ? " repeats the kind of another one: labels tell series apart, as in `coefficient: lot 2 [1e-6/K]`"
                   : " repeats another one");
}

/* Which temperatures there are, and whether the values find those that they need. */
static kel_status
check_temperatures(const struct kel__table *in, kel_error *err)
{
    const kel__file_column *c = in->columns;
    if ((in->from == KEL__NONE) != (in->to == KEL__NONE))
        return at_head(err, KEL_E_DATA, &c[in->from == KEL__NONE ? in->to : in->from], "the column ",
                       in->from == KEL__NONE ? " needs a column `from` beside it" : " needs a column `to` beside it");
    if (in->interval != KEL__NONE && in->from != KEL__NONE)
        return at_head(err, KEL_E_DATA, &c[in->interval], "the column ",
                       " stands beside `from` and `to`: one of them is too many");
    bool intervals = in->interval != KEL__NONE || in->from != KEL__NONE, any = false;
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        kel__quantity q = c[i].heading.quantity;
        if (!kel__is_value(q))
            continue;
        any = true;
        if (in->temperature == KEL__NONE && !(intervals && q == KEL__MEAN))
            return at_head(err, KEL_E_DATA, &c[i], "the column ",
                           intervals ? " needs a column `temperature`: only mean coefficients belong to intervals"
                                     : " has no column of temperatures beside it: `temperature [K]`, or `from [K]` "
                                       "and `to [K]` for means");
    }
    if (!any)
        return kel_error_set(err, KEL_E_DATA, in->sheet.head_line, in->sheet.head_line == 0 ? 0 : 1,
                             "no column of values: coefficient, mean coefficient, expansion or contraction");
    return KEL_OK;
}

kel_status
kel__table_columns(kel_table *t, const kel_table_options *options, kel_error *err)
{
    struct kel__table *in = t->inner;
    bool foreign = in->foreign = options->column_count > 0;
    in->columns = kel_arena_take(in->memory, in->sheet.raw.width, sizeof *in->columns);
    if (in->columns == NULL)
        return kel__no_memory(err);
    if (options->header == 0 && !foreign)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0,
                             "without a header each column is named by --column 'QUANTITY [UNIT]=NUMBER'");
    kel_status status = parse_heads(t, foreign, err);
    for (size_t i = 0; i < options->column_count && status == KEL_OK; i++)
        status = name_column(t, options->columns[i], err);
    if (status != KEL_OK)
        return status;
    if ((status = overrule(in, err)) != KEL_OK || (foreign && (status = warn_passed_over(t, err)) != KEL_OK) ||
        (status = check_duplicates(in, err)) != KEL_OK)
        return status;
    size_t *const roles[] = { [KEL__TEMPERATURE] = &in->temperature, [KEL__FROM] = &in->from, [KEL__TO] = &in->to,
                              [KEL__INTERVAL] = &in->interval, [KEL__SOURCE] = &in->source,
                              [KEL__STATUS] = &in->status, [KEL__RESERVATIONS] = &in->reservations };
    for (size_t q = 0; q < sizeof roles / sizeof roles[0]; q++)
        if (roles[q] != NULL)
            *roles[q] = KEL__NONE;
    for (size_t i = 0; i < in->sheet.raw.width; i++) {
        kel__quantity q = in->columns[i].heading.quantity;
        if (q < sizeof roles / sizeof roles[0] && roles[q] != NULL) {
            *roles[q] = i;
            in->columns[i].used = true;
        }
    }
    return check_temperatures(in, err);
}
