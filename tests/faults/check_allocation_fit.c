/* SPDX-License-Identifier: GPL-3.0-or-later */
/* libkelspan-fit with every allocation failed in turn: tables read and written out, fits of each form, coefficient
   files both ways, the plain solver, the reader of rows; and what is refused is still refused with its reason or for
   lack of memory. LAPACKE's and libcsv's own allocations are among those that fail.

   Reading can spare some allocations: where libcsv is refused a block it asks for half of it, and so on; and texts that
   might be one thing or another are tried, so that the words in a message that nobody will see may be lost. */
#include <unistd.h>

#include "../support/making.h"
#include "losing.h"

static char done;

/* Bytes of a file of tests/data. */
typedef struct named {
    const char *name;
    char *bytes;
    size_t size;
    kel_table_options options;
} named;

static named
data(const char *name)
{
    char relative[256];
    named n = { .name = name, .options = KEL_TABLE_OPTIONS_INIT };
    snprintf(relative, sizeof relative, "tests/data/%s", name);
    n.bytes = figures_bytes(&n.size, relative);
    return n;
}

/* ---- tables ---- */

static void *
read_table(kel_status *status, const void *input, kel_error *err)
{
    const named *n = input;
    kel_memory memory = { n->bytes, n->size, 0 };
    kel_table *table = (kel_table *)&done;
    *status = kel_table_read(&table, kel_input_memory(&memory), n->name, &n->options, err);
    return table;
}

static void
describe_table(kel_text *text, void *output)
{
    const kel_table *t = output;
    kel_error err;
    KEL_REQUIRE(kel_table_format(text, t, &err) == KEL_OK, "%s", err.message);
    kel_text_printf(text, "%s %zu %zu %zu %zu", t->digest, t->observation_count, t->gap_count, t->shared_count,
                    t->warning_count);
}

static void
release_table(void *output)
{
    kel_table_free(output);
}

static const struct { const char *name, *series; bool transposed; kel_kind_choice kind; } tables[] = {
    { "good-blank-rows.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-code-table.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-code-table.csv", NULL, false, KEL_CHOOSE_ALL },
    { "good-coefficient.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-contraction.csv", NULL, false, KEL_CHOOSE_ALL },
    { "good-from-to.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-intervals.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-limits.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-notes.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-shifted.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-status-marks.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-transition.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-uncertainty.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "good-uncertainty-percent.csv", NULL, false, KEL_CHOOSE_DEFAULT },
    { "odd-transposed.csv", NULL, true, KEL_CHOOSE_DEFAULT },
    { "odd-series.csv", "parallel", false, KEL_CHOOSE_DEFAULT },
};

START_TEST(reading)
{
    static const char *const settings[] = { "condition: aged", "note: read by a test" };
    static const char *const left_out[] = { "good-coefficient.csv:9=slipped" };
    named n = data(tables[_i].name);
    n.options.series = tables[_i].series;
    n.options.transpose = tables[_i].transposed;
    n.options.kind = tables[_i].kind;
    if (strcmp(n.name, "good-coefficient.csv") == 0) {
        n.options.settings = settings + 1;
        n.options.setting_count = 1;
        n.options.leave_out = left_out;
        n.options.leave_out_count = 1;
    }
    const operation op = { n.name, &n, read_table, describe_table, release_table, SIZE_MAX, KEL_OK };
    lose_each(&op);
    free(n.bytes);
}
END_TEST

/* Those of tests/data/bad-tables.txt, whose first two words are the file and the code. */
START_TEST(refused_tables)
{
    static const struct { const char *word; kel_status status; } codes[] = {
        { "SYNTAX", KEL_E_SYNTAX }, { "UNIT", KEL_E_UNIT }, { "RANGE", KEL_E_RANGE }, { "DATA", KEL_E_DATA },
    };
    char *list = figures_bytes(NULL, "tests/data/bad-tables.txt");
    size_t seen = 0;
    for (char *line = strtok(list, "\n"); line != NULL; line = strtok(NULL, "\n")) {
        char file[100], code[20];
        kel_status status = KEL_OK;
        if (line[0] == '#' || sscanf(line, "%99s %19s", file, code) != 2)
            continue;
        for (int i = 0; i < KEL_LENGTH(codes); i++)
            if (strcmp(code, codes[i].word) == 0)
                status = codes[i].status;
        KEL_REQUIRE(status != KEL_OK, "%s: what is %s?", file, code);
        named n = data(file);
        const operation op = { file, &n, read_table, NULL, NULL, 0, status };
        lose_each(&op);
        free(n.bytes);
        seen++;
    }
    free(list);
    ck_assert_uint_gt(seen, 60);
}
END_TEST

static void *
from_arrays(kel_status *status, const void *input, kel_error *err)
{
    const kel_observation *rows = input;
    const kel_column column = { .kind = KEL_KIND_COEFFICIENT, .unit = "1/K", .label = "one" };
    kel_table *table = (kel_table *)&done;
    *status = kel_table_from_arrays(&table, "arrays", &column, 1, rows, 5, 293.15, KEL_BASE_REFERENCE, err);
    return table;
}

static void
describe_arrays(kel_text *text, void *output)
{
    const kel_table *t = output;
    for (size_t i = 0; i < t->observation_count; i++)
        kel_text_number(text, t->observations[i].value);
}

START_TEST(arrays)
{
    kel_observation rows[5];
    for (int i = 0; i < 5; i++)
        rows[i] = observe(KEL_KIND_COEFFICIENT, 0.0, 100.0 + 40 * i, 1e-5 + 1e-7 * i, 1e-8);
    operation op = { "arrays", rows, from_arrays, describe_arrays, release_table, 0, KEL_OK };
    lose_each(&op);
    rows[3].value = NAN;
    op.expected = KEL_E_RANGE;
    lose_each(&op);
}
END_TEST

/* ---- rows ---- */

static void *
read_rows(kel_status *status, const void *input, kel_error *err)
{
    const named *n = input;
    kel_memory memory = { n->bytes, n->size, 0 };
    kel_rows *rows = (kel_rows *)&done;
    const kel_row *row = NULL;
    *status = kel_rows_new(&rows, kel_input_memory(&memory), KEL_DELIMITER_DETECT, err);
    if (*status != KEL_OK)
        return rows;
    while ((*status = kel_rows_next(&row, rows, err)) == KEL_OK && row != NULL)
        ;
    if (*status == KEL_OK)
        return rows;
    kel_rows_free(rows);
    return NULL;
}

static void
describe_rows(kel_text *text, void *output)
{
    kel_text_add(text, kel_rows_digest(output));
}

static void
release_rows(void *output)
{
    kel_rows_free(output);
}

/* A quoted cell over several of libcsv's blocks, many cells, a line longer than the first buffer. */
START_TEST(rows)
{
    enum { LONG = 70000, CELLS = 3000 };
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "a,\"b \"\"quoted\"\"\",c\n\"");
    for (int i = 0; i < LONG; i++)
        kel_text_add(&text, "x");
    kel_text_add(&text, "\",1,2\n");
    for (int i = 0; i < CELLS; i++)
        kel_text_add(&text, "\"1\",");
    kel_text_add(&text, "\n");
    named n = { .name = "rows", .bytes = text.bytes, .size = text.size };
    const operation op = { "rows", &n, read_rows, describe_rows, release_rows, SIZE_MAX, KEL_OK };
    lose_each(&op);
    kel_text_free(&text);
}
END_TEST

/* ---- fits ---- */

typedef struct fit_input {
    const kel_table *tables[2];
    size_t count;
    kel_fit_options options;
} fit_input;

static void *
fit(kel_status *status, const void *input, kel_error *err)
{
    const fit_input *f = input;
    kel_record *record = (kel_record *)&done;
    kel_fit_report *report = (kel_fit_report *)&done;
    *status = kel_fit(&record, &report, f->tables, f->count, &f->options, err);
    KEL_REQUIRE((report == NULL) == (*status != KEL_OK), "a report without a record, or none with one");
    kel_fit_report_free(report);
    return record;
}

static void
describe_record(kel_text *text, void *output)
{
    kel_error err;
    KEL_REQUIRE(kel_record_format(text, output, &err) == KEL_OK, "%s", err.message);
}

static void
release_record(void *output)
{
    kel_record_free(output);
}

static const int line[] = { 1 }, mixed[] = { 2, 1 }, far_too_many[] = { 30 };
static const double joins[] = { 200.0 };
static const int slope[] = { KEL_CONTINUITY_SLOPE };

static const struct fit_row {
    const char *label, *first, *second;
    const int *degrees; size_t degree_count;
    bool joined;
    double reference;
    int base;
    kel_kind_choice kind;
    kel_status expected;
} fits[] = {
    { "degree auto", "good-coefficient.csv", NULL, NULL, 0, false, NAN, -1, KEL_CHOOSE_DEFAULT, KEL_OK },
    { "degree auto, stated u", "good-uncertainty-percent.csv", NULL, NULL, 0, false, NAN, -1, KEL_CHOOSE_DEFAULT,
      KEL_OK },
    { "shared and lot", "good-uncertainty.csv", NULL, line, 1, false, NAN, -1, KEL_CHOOSE_DEFAULT, KEL_OK },
    { "two pieces", "good-coefficient.csv", NULL, mixed, 2, true, NAN, -1, KEL_CHOOSE_DEFAULT, KEL_OK },
    { "a fitted step", "good-transition.csv", NULL, line, 1, false, NAN, -1, KEL_CHOOSE_DEFAULT, KEL_OK },
    { "three columns", "good-code-table.csv", NULL, line, 1, false, NAN, -1, KEL_CHOOSE_ALL, KEL_OK },
    { "two tables, another reference and base", "good-uncertainty.csv", "good-transition.csv", line, 1, false, 250.0,
      KEL_BASE_CURRENT,
      KEL_CHOOSE_DEFAULT, KEL_OK },
    { "more parameters than rows", "good-coefficient.csv", NULL, far_too_many, 1, false, NAN, -1, KEL_CHOOSE_DEFAULT,
      KEL_E_RANK },
};

/* LAPACKE says on stdout that memory ran out, unless its caller brings the memory. A library prints nothing. */
static long
printed(void)
{
    fflush(stdout);
    return (long)lseek(STDOUT_FILENO, 0, SEEK_CUR);
}

START_TEST(fitting)
{
    const struct fit_row *row = &fits[_i];
    named n[2];
    kel_table *read[2] = { NULL, NULL };
    fit_input input = { .count = row->second == NULL ? 1 : 2, .options = KEL_FIT_OPTIONS_INIT };
    kel_error err = { 0 };
    for (size_t i = 0; i < input.count; i++) {
        n[i] = data(i == 0 ? row->first : row->second);
        n[i].options.kind = row->kind;
        kel_status status;
        read[i] = read_table(&status, &n[i], &err);
        made(status, &err, n[i].name);
        input.tables[i] = read[i];
    }
    input.options.degrees = row->degrees;
    input.options.degree_count = row->degree_count;
    input.options.joins = joins;
    input.options.join_count = row->joined ? 1 : 0;
    input.options.continuity = slope;
    input.options.continuity_count = row->joined ? 1 : 0;
    input.options.reference = row->reference;
    input.options.base = row->base;
    int before = dup(STDOUT_FILENO);
    FILE *file = tmpfile();
    ck_assert(before >= 0 && file != NULL && dup2(fileno(file), STDOUT_FILENO) >= 0);
    const operation op = { row->label, &input, fit, describe_record, release_record, 0, row->expected };
    lose_each(&op);
    long bytes = printed();
    dup2(before, STDOUT_FILENO);
    ck_assert_msg(bytes == 0, "%s: %ld bytes were printed", row->label, bytes);
    fclose(file);
    for (size_t i = 0; i < input.count; i++) {
        kel_table_free(read[i]);
        free(n[i].bytes);
    }
}
END_TEST

/* ---- coefficient files ---- */

static void *
adopt(kel_status *status, const void *input, kel_error *err)
{
    const named *n = input;
    kel_memory memory = { n->bytes, n->size, 0 };
    kel_record *record = (kel_record *)&done;
    kel_adopt_report *report = (kel_adopt_report *)&done;
    *status = kel_coefficients_read(&record, &report, kel_input_memory(&memory), n->name, NULL, 0, err);
    KEL_REQUIRE((report == NULL) == (*status != KEL_OK), "a report without a record, or none with one");
    kel_adopt_report_free(report);
    return record;
}

static const struct { const char *name; kel_status status; } coefficient_files[] = {
    { "good-coefficients-two-pieces.csv", KEL_OK },
    { "good-coefficients-expansion-three-pieces.csv", KEL_OK },
    { "good-coefficients-scaled-fahrenheit.csv", KEL_OK },
    { "bad-coefficients-gap.csv", KEL_E_DATA },
    { "bad-coefficients-text-in-number.csv", KEL_E_SYNTAX },
    { "bad-coefficients-uncertainty-independent.csv", KEL_E_DATA },
};

START_TEST(adopting)
{
    named n = data(coefficient_files[_i].name);
    const operation op = { n.name, &n, adopt, describe_record, release_record, SIZE_MAX, coefficient_files[_i].status };
    lose_each(&op);
    free(n.bytes);
}
END_TEST

static kel_text written;

static void *
format(kel_status *status, const void *input, kel_error *err)
{
    kel_unit kelvin, per_kelvin;
    kel_unit_parse(&kelvin, KEL_DIM_TEMPERATURE, "degC", 4, NULL);
    kel_unit_parse(&per_kelvin, KEL_DIM_PER_KELVIN, "1e-6/K", 6, NULL);
    *status = kel_coefficients_format(&written, input, &kelvin, &per_kelvin, err);
    if (*status == KEL_OK)
        return &done;
    kel_text_free(&written);
    return NULL;
}

static void *
format_table(kel_status *status, const void *input, kel_error *err)
{
    *status = kel_table_format(&written, input, err);
    if (*status == KEL_OK)
        return &done;
    kel_text_free(&written);
    return NULL;
}

static void
describe_written(kel_text *text, void *output)
{
    (void)output;
    kel_text_add_bytes(text, written.bytes, written.size);
}

static void
release_written(void *output)
{
    (void)output;
    kel_text_free(&written);
}

START_TEST(formatting)
{
    kel_error err = { 0 };
    kel_status status;
    for (int i = 0; i < 3; i++) {
        named n = data(coefficient_files[i].name);
        kel_record *record = adopt(&status, &n, &err);
        made(status, &err, n.name);
        const operation op = { n.name, record, format, describe_written, release_written, SIZE_MAX, KEL_OK };
        lose_each(&op);
        kel_record_free(record);
        free(n.bytes);
    }
    named n = data("good-uncertainty.csv");
    kel_table *table = read_table(&status, &n, &err);
    const operation op = { n.name, table, format_table, describe_written, release_written, 0, KEL_OK };
    lose_each(&op);
    kel_table_free(table);
    free(n.bytes);
}
END_TEST

/* ---- the plain solver ---- */

enum { POINTS = 20, PARAMETERS = 4 };
static double coefficient[PARAMETERS], deviation[PARAMETERS], covariance[PARAMETERS * PARAMETERS];

static void *
solve(kel_status *status, const void *input, kel_error *err)
{
    const double *x = input;
    kel_ls_result result = { .coefficient = coefficient, .standard_deviation = deviation, .covariance = covariance };
    *status = kel_ls_polynomial(&result, x, x + POINTS, x + 2 * POINTS, POINTS, PARAMETERS - 1, true, false, err);
    return *status == KEL_OK ? &done : NULL;
}

static void
describe_solution(kel_text *text, void *output)
{
    (void)output;
    for (int i = 0; i < PARAMETERS; i++) {
        kel_text_number(text, coefficient[i]);
        kel_text_number(text, deviation[i]);
    }
}

START_TEST(solving)
{
    double x[3 * POINTS];
    for (int i = 0; i < POINTS; i++) {
        x[i] = i;
        x[POINTS + i] = 1.0 + 0.5 * i - 0.01 * i * i + (i % 3 - 1) * 0.1;
        x[2 * POINTS + i] = 0.1;
    }
    const operation op = { "solver", x, solve, describe_solution, NULL, 0, KEL_OK };
    lose_each(&op);
}
END_TEST

static TCase *
all(void)
{
    TCase *c = tcase_create("allocation");
    tcase_add_loop_test(c, reading, 0, KEL_LENGTH(tables));
    tcase_add_test(c, refused_tables);
    tcase_add_test(c, arrays);
    tcase_add_test(c, rows);
    tcase_add_loop_test(c, fitting, 0, KEL_LENGTH(fits));
    tcase_add_loop_test(c, adopting, 0, KEL_LENGTH(coefficient_files));
    tcase_add_test(c, formatting);
    tcase_add_test(c, solving);
    return c;
}

LOSING_MAIN("allocation_fit", all)
