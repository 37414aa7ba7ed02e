/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables, fits and records for tests in one call each: what fails here ends the test with the library's own message. */
#ifndef KEL_TEST_MAKING_H
#define KEL_TEST_MAKING_H

#include <string.h>

#include <kelspan-fit.h>

#include "figures.h"

static inline void
made(kel_status status, const kel_error *err, const char *what)
{
    ck_assert_msg(status == KEL_OK, "%s: %s: %s (line %zu, column %zu)", what, kel_status_text(status),
                  status < 0 ? err->message : "", err->line, err->column);
}

static inline kel_table *
make_table(const char *text)
{
    kel_memory memory = { text, strlen(text), 0 };
    kel_table_options options = KEL_TABLE_OPTIONS_INIT;
    kel_table *table;
    kel_error err = { 0 };
    made(kel_table_read(&table, kel_input_memory(&memory), "table.csv", &options, &err), &err, "table");
    return table;
}

/* A table of one column of exact numbers: no printed digits, hence resolution 0. */
static inline kel_table *
make_arrays(const kel_observation *rows, size_t n, kel_kind kind, double reference, kel_base base)
{
    kel_column column = { .kind = kind, .unit = kind == KEL_KIND_EXPANSION ? "1" : "1/K" };
    kel_table *table;
    kel_error err = { 0 };
    made(kel_table_from_arrays(&table, "arrays", &column, 1, rows, n, reference, base, &err), &err, "arrays");
    return table;
}

/* An observation of the three kinds; mean: from a to b, expansion: from its reference a to b, coefficient: at b. */
static inline kel_observation
observe(kel_kind kind, double a, double b, double value, double u)
{
    kel_observation o = { .kind = kind, .from = kind == KEL_KIND_COEFFICIENT ? b : a, .to = b, .value = value,
                          .u_absolute = u, .u_stated = u > 0.0, .printed_lo = b, .printed_hi = b };
    if (kind == KEL_KIND_MEAN) {
        o.printed_lo = a < b ? a : b;
        o.printed_hi = a < b ? b : a;
    }
    return o;
}

static inline kel_record *
make_fit(const kel_table *const *tables, size_t n, const kel_fit_options *options, kel_fit_report **report)
{
    kel_record *record;
    kel_error err = { 0 };
    made(kel_fit(&record, report, tables, n, options, &err), &err, "fit");
    return record;
}

/* Options for one degree in every piece. `degree` must outlive the options. */
static inline kel_fit_options
degree_of(const int *degree)
{
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.degrees = degree;
    options.degree_count = 1;
    return options;
}

/* One table in, its record out; the table is freed. */
static inline kel_record *
make_fit_of(kel_table *table, const kel_fit_options *options)
{
    const kel_table *const tables[] = { table };
    kel_record *record = make_fit(tables, 1, options, NULL);
    kel_table_free(table);
    return record;
}

static inline kel_record *
make_adopted_text(const char *text, const char *const *settings, size_t n, kel_adopt_report **report)
{
    kel_memory memory = { text, strlen(text), 0 };
    kel_record *record;
    kel_error err = { 0 };
    made(kel_coefficients_read(&record, report, kel_input_memory(&memory), "coefficients.csv", settings, n, &err), &err,
         "coefficients");
    return record;
}

static inline kel_record *
make_adopted(const char *relative, const char *const *settings, size_t n, kel_adopt_report **report)
{
    char *text = figures_bytes(NULL, relative);
    kel_record *record = make_adopted_text(text, settings, n, report);
    free(text);
    return record;
}

/* The answer of a query that must come without reservation. */
static inline kel_answer
ask(const kel_record *record, kel_quantity quantity, double from, double to)
{
    kel_query query = { .quantity = quantity, .from = from, .to = to, .at = from, .reference = NAN, .base = -1 };
    kel_answer a;
    kel_error err = { 0 };
    kel_status status = kel_record_answer(&a, record, &query, &err);
    ck_assert_msg(status == KEL_OK || status == KEL_W_TRANSITION, "answer from %g K to %g K: %s %s", from, to,
                  kel_status_text(status), status < 0 ? err.message : "");
    return a;
}

#endif
