/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables: read, written, read and written again, fitted.

   The bytes are a table, read with no options. If the first one is 01, options come before it: a byte of switches, a
   byte of kind and header line, then words that end with 02, the last one with a line end; a word's first letter says
   whose it is: c --column, s --set, l --leave-out, n --series, g the limit of a gap. */
#include "fuzz_answers.h"

#include <math.h>

#include <kelspan-fit.h>

const char *const fuzz_name = "table";
const char *const fuzz_data[] = { "tests/data/*-*.csv", "tests/data/odd-*.txt", "datasets/*.csv", NULL };

enum { MOST_WORDS = 16, MOST_FITTED = 60, LARGEST = 1 << 16 };

static const char name[] = "table.csv";

typedef struct asked {
    kel_table_options options;
    char *words[MOST_WORDS]; size_t word_count;
    const char *columns[MOST_WORDS], *settings[MOST_WORDS], *leave_out[MOST_WORDS];
} asked;

static void
take_word(asked *a, char *word)
{
    kel_table_options *o = &a->options;
    a->words[a->word_count++] = word;
    double gap;
    switch (word[0]) {
    case 'c':
        a->columns[o->column_count++] = word + 1;
        break;
    case 's':
        a->settings[o->setting_count++] = word + 1;
        break;
    case 'l':
        a->leave_out[o->leave_out_count++] = word + 1;
        break;
    case 'n':
        o->series = word + 1;
        break;
    case 'g':
        if (kel_number_read(&gap, word + 1, strlen(word + 1), NULL) == KEL_OK && gap > 0)
            o->gap = gap;
        break;
    default:
        break;
    }
}

static void
take_options(asked *a, fuzz_bytes *bytes)
{
    a->options = (kel_table_options)KEL_TABLE_OPTIONS_INIT;
    kel_table_options *o = &a->options;
    if (bytes->left == 0 || bytes->at[0] != 1)
        return;
    fuzz_byte(bytes);
    unsigned switches = fuzz_byte(bytes), choice = fuzz_byte(bytes);
    o->delimiter = (kel_delimiter)((switches & 7) % (KEL_DELIMITER_BLANKS + 1));
    o->transpose = (switches & 8) != 0;
    o->include_marked = (switches & 16) != 0;
    o->kind = (kel_kind_choice)((int)(choice & 7) % 5 - 1);
    o->header = (long)(choice >> 3) % 8 - 1;
    char *line = fuzz_string(bytes, '\n');
    fuzz_bytes rest = { (const uint8_t *)line, strlen(line) };
    while (rest.left > 0 && a->word_count < MOST_WORDS)
        take_word(a, fuzz_string(&rest, 2));
    free(line);
    o->columns = a->columns;
    o->settings = a->settings;
    o->leave_out = a->leave_out;
}

static kel_status
read_bytes(kel_table **out, const void *bytes, size_t n, const kel_table_options *options, kel_error *err)
{
    kel_memory memory = { bytes, n, 0 };
    return kel_table_read(out, kel_input_memory(&memory), name, options, err);
}

/* Contractions are written as expansions, which is the only thing that may change. */
static void
same_observations(const kel_table *a, const kel_table *b)
{
    FUZZ_REQUIRE(a->observation_count == b->observation_count, "%zu, then %zu", a->observation_count,
                 b->observation_count);
    FUZZ_REQUIRE(a->column_count == b->column_count, "%zu, then %zu", a->column_count, b->column_count);
    FUZZ_REQUIRE(fuzz_same_number(a->shift, b->shift) || a->shift == b->shift, "%a, then %a", a->shift, b->shift);
    for (size_t i = 0; i < a->observation_count; i++) {
        const kel_observation *o = &a->observations[i], *p = &b->observations[i];
        FUZZ_REQUIRE(o->kind == p->kind && o->column == p->column && o->u_stated == p->u_stated &&
                         (o->left_out == NULL) == (p->left_out == NULL),
                     "observation %zu in line %zu, then %zu", i, o->line, p->line);
        FUZZ_REQUIRE(o->from == p->from && o->to == p->to && o->printed_lo == p->printed_lo &&
                         o->printed_hi == p->printed_hi,
                     "observation %zu: %a to %a, then %a to %a", i, o->from, o->to, p->from, p->to);
        FUZZ_REQUIRE((o->value == p->value || (isnan(o->value) && isnan(p->value))) && o->u_absolute == p->u_absolute &&
                         o->u_relative == p->u_relative,
                     "observation %zu: %a, then %a", i, o->value, p->value);
    }
}

/* What every table that was accepted keeps. */
static void
check_table(const kel_table *t)
{
    size_t left_out = 0;
    for (size_t i = 0; i < t->observation_count; i++) {
        const kel_observation *o = &t->observations[i];
        left_out += o->left_out != NULL;
        FUZZ_REQUIRE(o->column < t->column_count, "%zu of %zu", o->column, t->column_count);
        if (o->left_out != NULL)
            continue;
        FUZZ_REQUIRE(isfinite(o->value) && o->from >= 0 && o->to >= 0 && isfinite(o->from) && isfinite(o->to),
                     "line %zu: %a from %a to %a", o->line, o->value, o->from, o->to);
        FUZZ_REQUIRE(o->u_absolute >= 0 && o->u_relative >= 0 && isfinite(o->u_absolute) && isfinite(o->u_relative),
                     "line %zu: u = %a, %a", o->line, o->u_absolute, o->u_relative);
        FUZZ_REQUIRE(o->kind != KEL_KIND_COEFFICIENT || (o->from == o->to && fabs(o->value) <= 1e-3), "line %zu: %a",
                     o->line, o->value);
    }
    FUZZ_REQUIRE(t->rows >= t->rows_left_out, "%zu of %zu", t->rows_left_out, t->rows);
    FUZZ_REQUIRE((left_out < t->observation_count) == (t->range.lo <= t->range.hi), "%zu of %zu, range %a to %a",
                 left_out, t->observation_count, t->range.lo, t->range.hi);
    for (size_t i = 0; i < t->warning_count; i++) {
        kel_error as = { .code = KEL_E_DATA };
        snprintf(as.message, sizeof as.message, "%s", t->warnings[i].text);
        fuzz_error(KEL_E_DATA, &as);
    }
}

static void
fit(const kel_table *t)
{
    kel_record *record = NULL;
    kel_fit_report *report = NULL;
    kel_error err = { 0 };
    if (t->rows > MOST_FITTED || t->observation_count > MOST_FITTED)
        return;
    kel_status status = kel_fit(&record, &report, &t, 1, NULL, &err);
    if (status < 0) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(record == NULL && report == NULL, "%s", err.message);
        return;
    }
    fuzz_record(record, NULL);
    kel_fit_report_free(report);
    kel_record_free(record);
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    fuzz_bytes bytes = { data, size };
    asked a = { .word_count = 0 };
    kel_table *table = NULL, *again = NULL;
    kel_text first = KEL_TEXT_INIT, second = KEL_TEXT_INIT;
    kel_error err = { 0 };
    if (size > LARGEST)
        return 0;
    take_options(&a, &bytes);
    kel_status status = read_bytes(&table, bytes.at, bytes.left, &a.options, &err);
    if (status < 0) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(table == NULL, "%s", err.message);
        FUZZ_REQUIRE(err.line != 0 || err.column == 0 || a.word_count > 0, "column %zu of no line: %s", err.column,
                     err.message);
    } else {
        check_table(table);
        FUZZ_REQUIRE(kel_table_format(&first, table, &err) == KEL_OK, "%s", err.message);
        /* Marks and columns are kept as printed, so what takes them is asked for again. */
        kel_table_options same = KEL_TABLE_OPTIONS_INIT;
        same.include_marked = a.options.include_marked;
        same.kind = a.options.kind;
        status = read_bytes(&again, first.bytes, first.size, &same, &err);
        FUZZ_REQUIRE(status == KEL_OK, "line %zu, column %zu: %s\n%s", err.line, err.column, err.message, first.bytes);
        FUZZ_REQUIRE(kel_table_format(&second, again, &err) == KEL_OK, "%s", err.message);
        fuzz_same_text(&first, &second, "table");
        same_observations(table, again);
        fit(table);
    }
    kel_text_free(&first);
    kel_text_free(&second);
    kel_table_free(table);
    kel_table_free(again);
    for (size_t i = 0; i < a.word_count; i++)
        free(a.words[i]);
    return 0;
}
