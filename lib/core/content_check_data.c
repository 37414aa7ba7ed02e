/* SPDX-License-Identifier: Apache-2.0 */
/* The rules of the data behind a record's curve: sources, columns, rows, and how their counts hang together. */
#include "content_check.h"

#include <string.h>

static void
check_count(kel__checker *checker, kel__place place, size_t got, const char *of, size_t want)
{
    kel_error what;
    if (got == want)
        return;
    kel_error_set(&what, KEL_OK, 0, 0, "= %zu differs from the number of %s, %zu", got, of, want);
    kel__breach(checker, place, what.message);
}

static void
check_index(kel__checker *checker, kel__place place, size_t index, const char *of, size_t count)
{
    kel_error what;
    if (index < count)
        return;
    kel_error_set(&what, KEL_OK, 0, 0, "= %zu points behind the %zu %s", index, count, of);
    kel__breach(checker, place, what.message);
}

/* 64 hexadecimal digits in lower case. */
static bool
is_digest(const char *s)
{
    return strlen(s) == 64 && strspn(s, "0123456789abcdef") == 64;
}

static void
check_strings(kel__checker *checker, kel__place place, const char *const *strings, size_t n)
{
    kel__check_there(checker, place, strings, n);
    for (size_t i = 0; i < n && checker->status == KEL_OK; i++)
        if (strings[i] == NULL)
            kel__breach(checker, place, "holds an entry without text");
}

static void
check_sources(kel__checker *checker, const kel_content *content)
{
    kel__check_there(checker, (kel__place){ .key = "sources" }, content->sources, content->source_count);
    for (size_t i = 0; i < content->source_count && checker->status == KEL_OK; i++) {
        const kel_source *s = &content->sources[i];
        if (s->name == NULL)
            kel__breach(checker, (kel__place){ "sources", i, "name" }, "is missing");
        /* A table that a program made of arrays has no bytes, hence no digest. */
        if (s->digest != NULL && s->digest[0] != '\0' && !is_digest(s->digest))
            kel__breach(checker, (kel__place){ "sources", i, "digest" }, "is not 64 hexadecimal digits");
        kel__check_number(checker, (kel__place){ "sources", i, "reference_temperature_K" }, s->reference_temperature,
                          KEL__NOT_NEGATIVE_OR_NAN);
        kel__check_word(checker, (kel__place){ "sources", i, "base" }, &kel__bases, (int)s->base);
        check_strings(checker, (kel__place){ "sources", i, "uncertainty" }, s->uncertainty, s->uncertainty_count);
        check_strings(checker, (kel__place){ "sources", i, "notes" }, s->notes, s->note_count);
    }
}

static void
check_columns(kel__checker *checker, const kel_content *content)
{
    const kel__place observations = { .key = "observations" };
    size_t sum = 0;
    kel__check_there(checker, (kel__place){ .key = "columns" }, content->columns, content->column_count);
    for (size_t i = 0; i < content->column_count && checker->status == KEL_OK; i++) {
        const kel_fit_column *c = &content->columns[i];
        check_index(checker, (kel__place){ "columns", i, "source" }, c->source, "sources", content->source_count);
        kel__check_word(checker, (kel__place){ "columns", i, "kind" }, &kel__kinds, (int)c->kind);
        kel__check_word(checker, (kel__place){ "columns", i, "variance" }, &kel__variances, (int)c->variance);
        /* n - sum of leverages may miss zero by its rounding, hence no rule about its sign. */
        kel__check_number(checker, (kel__place){ "columns", i, "degrees_of_freedom" }, c->degrees_of_freedom,
                          KEL__FINITE_OR_NAN);
        kel__check_number(checker, (kel__place){ "columns", i, "residual_standard_deviation" },
                          c->residual_standard_deviation, KEL__NOT_NEGATIVE_OR_NAN);
        kel__check_number(checker, (kel__place){ "columns", i, "scatter" }, c->scatter, KEL__NOT_NEGATIVE_OR_NAN);
        kel__check_number(checker, (kel__place){ "columns", i, "resolution" }, c->resolution, KEL__NOT_NEGATIVE_OR_NAN);
        sum += c->observations;
    }
    if (checker->status == KEL_OK && content->column_count != 0)
        check_count(checker, observations, content->observations, "observations of all columns", sum);
}

/* What was left out may have been left out for the sake of a number that is not there. */
static void
check_row(kel__checker *checker, const kel_content *content, size_t i)
{
    const kel_fitted *r = &content->rows[i];
    const bool fitted = r->left_out == NULL;
    const kel__rule rule = fitted ? KEL__FINITE : KEL__FINITE_OR_NAN;
    const kel__rule temperature = fitted ? KEL__NOT_NEGATIVE : KEL__FINITE_OR_NAN;
    check_index(checker, (kel__place){ "rows", i, "source" }, r->source, "sources", content->source_count);
    check_index(checker, (kel__place){ "rows", i, "column" }, r->column, "columns", content->column_count);
    if (checker->status == KEL_OK && content->columns[r->column].source != r->source)
        kel__breach(checker, (kel__place){ "rows", i, "column" }, "is a column of another source");
    kel__check_word(checker, (kel__place){ "rows", i, "kind" }, &kel__kinds, (int)r->kind);
    kel__check_number(checker, (kel__place){ "rows", i, "from_K" }, r->from, temperature);
    kel__check_number(checker, (kel__place){ "rows", i, "to_K" }, r->to, temperature);
    if (fitted && r->kind == KEL_KIND_COEFFICIENT && r->from != r->to)
        kel__breach(checker, (kel__place){ "rows", i, "from_K" }, "must equal to_K for a coefficient");
    kel__check_number(checker, (kel__place){ "rows", i, "observed" }, r->observed, rule);
    kel__check_number(checker, (kel__place){ "rows", i, "fitted" }, r->fitted, rule);
    kel__check_number(checker, (kel__place){ "rows", i, "residual" }, r->residual, rule);
    kel__check_number(checker, (kel__place){ "rows", i, "shared_term" }, r->shared_term, rule);
    kel__check_number(checker, (kel__place){ "rows", i, "u" }, r->u, KEL__NOT_NEGATIVE_OR_NAN);
    if (r->side < -1 || r->side > 1)
        kel__breach(checker, (kel__place){ "rows", i, "side" }, "is none of -1, 0, 1");
}

static void
check_rows(kel__checker *checker, const kel_content *content)
{
    size_t fitted = 0;
    kel__check_there(checker, (kel__place){ .key = "rows" }, content->rows, content->row_count);
    for (size_t i = 0; i < content->row_count && checker->status == KEL_OK; i++) {
        check_row(checker, content, i);
        fitted += content->rows[i].left_out == NULL;
    }
    if (checker->status == KEL_OK && !content->thinned)
        check_count(checker, (kel__place){ .key = "observations" }, content->observations, "rows that were fitted",
                    fitted);
}

void
kel__check_data(kel__checker *checker, const kel_content *content)
{
    kel__check_word(checker, (kel__place){ .key = "variance" }, &kel__variances, (int)content->variance);
    kel__check_number(checker, (kel__place){ .key = "degrees_of_freedom" }, content->degrees_of_freedom,
                      KEL__FINITE_OR_NAN);
    kel__check_number(checker, (kel__place){ .key = "residual_standard_deviation" },
                      content->residual_standard_deviation, KEL__NOT_NEGATIVE_OR_NAN);
    kel__check_number(checker, (kel__place){ .key = "chi2" }, content->chi2, KEL__NOT_NEGATIVE_OR_NAN);
    check_sources(checker, content);
    check_columns(checker, content);
    check_rows(checker, content);
}
