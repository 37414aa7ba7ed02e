/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables read: every layout to its observations, every refusal with its place. Also over table_uncertainty.c,
   table_range.c and table_words.c. */
#include "tables.h"

#include <ctype.h>
#include <math.h>

/* ---- refusals: tests/data/bad-tables.txt ---- */

static const struct { const char *name; kel_status code; } codes[] = {
    { "SYNTAX", KEL_E_SYNTAX }, { "UNIT", KEL_E_UNIT }, { "RANGE", KEL_E_RANGE }, { "DATA", KEL_E_DATA },
};

static kel_status
code_of(const char *name)
{
    for (size_t i = 0; i < sizeof codes / sizeof codes[0]; i++)
        if (strcmp(codes[i].name, name) == 0)
            return codes[i].code;
    ck_abort_msg("unknown code '%s'", name);
    return KEL_OK;
}

START_TEST(bad_files)
{
    size_t size, rows = 0;
    char *list = kel_test_bytes(&size, "tests/data/bad-tables.txt");
    for (char *line = list, *next; *line != '\0'; line = next) {
        next = line + strcspn(line, "\n");
        next += *next == '\n' ? (*next = '\0', 1) : 0;
        char file[80], code[16];
        size_t at_line, at_column;
        int used = 0;
        if (*line == '#')
            continue;
        ck_assert_msg(sscanf(line, "%79s %15s %zu %zu %n", file, code, &at_line, &at_column, &used) == 4, "%s", line);
        kel_table *t;
        kel_error err = { KEL_OK, 0, 0, "" };
        kel_status status = kel_test_read_file(&t, file, NULL, &err);
        ck_assert_msg(status == code_of(code) && err.code == status, "%s: status %d: %s", file, (int)status,
                      err.message);
        ck_assert_ptr_null(t);
        ck_assert_msg(err.line == at_line && err.column == at_column, "%s: at %zu:%zu, %s", file, err.line,
                      err.column, err.message);
        ck_assert_msg(strstr(err.message, line + used) != NULL, "%s: %s", file, err.message);
        size_t n = strlen(err.message);
        ck_assert_msg(n > 0 && err.message[n - 1] != '.', "%s: %s", file, err.message);
        for (size_t i = 0; i < n; i++)
            ck_assert_msg(!iscntrl((unsigned char)err.message[i]), "%s: %s", file, err.message);
        ck_assert_int_eq(kel_test_read_file(&t, file, NULL, NULL), status);
        rows++;
    }
    ck_assert_uint_ge(rows, 70);
    free(list);
}
END_TEST

/* ---- layouts ---- */

#define C KEL_KIND_COEFFICIENT
#define M KEL_KIND_MEAN
#define E KEL_KIND_EXPANSION

/* One observation of each layout; temperatures and values as the correctly rounded doubles that they are. */
static const struct {
    const char *file;
    size_t count, index;       /* observations in all; which one is looked at */
    kel_kind kind;
    double from, to, value, u_absolute, u_relative, resolution;
    size_t line;
    const char *left_out;
} layouts[] = {
    { "good-answers.csv", 6, 0, E, 293, 93, -0.0018, 1.25e-5, 0, 1e-7, 5, "reservation: extrapolated" },
    { "good-answers.csv", 6, 1, E, 293, 143, -0.0013875, 9.375e-6, 0, 1e-7, 6, "reservation: gap" },
    { "good-answers.csv", 6, 2, E, 293, 193, -0.00095, 6.25e-6, 0, 1e-7, 7, NULL },
    { "good-answers.csv", 6, 3, E, 293, 293, 0, 0, 0, 1e-7, 8, "zero at the reference temperature" },
    { "good-answers.csv", 6, 5, E, 293, 493, 0.0022, 0, 0, 1e-7, 10, NULL },
    { "good-coefficient.csv", 15, 3, C, 100, 100, 11.51e-6, 0, 0, 1e-8, 9, NULL },
    { "good-mean.csv", 8, 2, M, 293.15, 173.15, 17.51e-6, 0, 0, 1e-8, 7, NULL },
    { "good-mean.csv", 8, 5, M, 293.15, 293.15, 19.28e-6, 0, 0, 1e-8, 10, NULL },
    { "good-intervals.csv", 7, 0, M, 123.15, 293.15, 16.52e-6, 0, 0, 1e-8, 4, NULL },
    { "good-intervals.csv", 7, 2, M, 223.15, 273.15, 18.07e-6, 0, 0, 1e-8, 6, NULL },
    { "good-from-to.csv", 5, 3, M, 294.26111111111112, 373.15, 20.088e-6, 0, 0, 1.8e-8, 7, NULL },
    { "good-expansion-percent.csv", 9, 1, E, 293, 100, -0.00309, 0, 0, 1e-5, 6, NULL },
    { "good-expansion-percent.csv", 9, 5, E, 293, 293, 0, 0, 0, 1e-5, 10, "zero at the reference temperature" },
    { "good-contraction.csv", 10, 3, E, 293, 120, -0.002846, 2e-5, 0, 1e-6, 9, NULL },
    { "good-contraction.csv", 10, 0, E, 293, 20, -0.003790, 2e-5, 0, 1e-6, 6, "status: extrapolated" },
    { "good-code-table.csv", 9, 1, E, 294.26111111111112, 322.03888888888889, 0.65 / 1200, 0, 0, 0.01 / 1200, 6, NULL },
    /* 0.08/2 and 0.02 in quadrature; where two ranges meet, the colder one holds. */
    { "good-uncertainty.csv", 6, 0, C, 50, 50, 8.11e-6, 4.4721359549995794e-8, 0.01, 1e-8, 8, NULL },
    { "good-uncertainty.csv", 6, 2, C, 150, 150, 14.25e-6, 3.6055512754639893e-8, 0.01, 1e-8, 10, NULL },
    { "good-uncertainty.csv", 6, 3, C, 200, 200, 16.44e-6, 0, 0.005, 1e-8, 11, NULL },
    { "good-uncertainty.csv", 6, 4, C, 250, 250, 18.14e-6, 2e-8, 0.005, 1e-8, 12, NULL },
    { "good-uncertainty-percent.csv", 5, 2, C, 150, 150, 14.25e-6, 0, 0.015, 1e-8, 6, NULL },
    { "good-limits.csv", 5, 0, E, 293, 50, -0.003581, 1e-4 / 1.7320508075688772, 0, 1e-6, 5, NULL },
    { "good-status-marks.csv", 13, 0, C, 20, 20, 5.74e-6, 0, 0, 1e-8, 4, "status mark: in parentheses" },
    { "good-status-marks.csv", 13, 7, C, 160, 160, 14.7e-6, 0, 0, 1e-8, 11, "status mark: estimated" },
    { "good-transition.csv", 8, 4, E, 293.15, 333.15, 402e-6, 0, 0, 1e-6, 11, NULL },
    { "good-transition.csv", 8, 5, E, 293.15, 333.15, 552e-6, 0, 0, 1e-6, 12, NULL },
    { "good-decimal-comma.csv", 6, 4, E, 293.15, 333.15, 702.5e-6, 0, 0, 1e-7, 11, NULL },
    { "good-current-length.csv", 11, 1, C, 350, 350, 20.402e-6, 0, 0, 1e-9, 7, NULL },
    { "good-shifted.csv", 4, 0, E, 293, 100, -271.3e-5 - -0.4e-5, 0, 0, 1e-6, 6, NULL },
    { "good-notes.csv", 3, 0, C, 200 / 1.8, 200 / 1.8, -1.8e-6, 0, 0, 1.8e-8, 10, NULL },
    { "good-blank-rows.csv", 2, 1, C, 200, 200, 16.44e-6, 0, 0, 1e-8, 8, NULL },
};

START_TEST(layout)
{
    const char *file = layouts[_i].file;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel_test_read_file(&t, file, NULL, &err) == KEL_OK, "%s:%zu:%zu: %s", file, err.line, err.column,
                  err.message);
    ck_assert_msg(t->observation_count == layouts[_i].count, "%s: %zu observations", file, t->observation_count);
    ck_assert_uint_eq(t->column_count, 1);
    ck_assert_str_eq(t->name, file);
    ck_assert_uint_eq(strlen(t->digest), 64);
    ck_assert_ptr_null(kel_test_warning(t, "cross-check"));
    const kel_observation *o = &t->observations[layouts[_i].index];
    ck_assert_int_eq(o->kind, layouts[_i].kind);
    ck_assert_int_eq(t->columns[o->column].kind, layouts[_i].kind);
    ck_assert_ulp_for(file, o->from, layouts[_i].from, 0);
    ck_assert_ulp_for(file, o->to, layouts[_i].to, 0);
    ck_assert_ulp_for(file, o->value, layouts[_i].value, 1); /* the constants here are rounded twice */
    ck_assert_ulp_for(file, o->u_absolute, layouts[_i].u_absolute, 1);
    ck_assert_ulp_for(file, o->u_relative, layouts[_i].u_relative, 1);
    ck_assert_int_eq(o->u_stated, layouts[_i].u_absolute > 0 || layouts[_i].u_relative > 0);
    ck_assert_ulp_for(file, t->columns[0].resolution, layouts[_i].resolution, 1);
    ck_assert_msg(o->line == layouts[_i].line, "%s: line %zu", file, o->line);
    bool same = o->left_out == NULL ? layouts[_i].left_out == NULL
                                    : layouts[_i].left_out != NULL && strcmp(o->left_out, layouts[_i].left_out) == 0;
    ck_assert_msg(same, "%s: left out: %s", file, o->left_out == NULL ? "no" : o->left_out);
    kel_table_free(t);
}
END_TEST

/* ---- tables as a whole ---- */

START_TEST(metadata)
{
    kel_table *t;
    ck_assert_int_eq(kel_test_read_file(&t, "good-notes.csv", NULL, NULL), KEL_OK);
    ck_assert_str_eq(t->material, "TS-2, \"soft\"");
    ck_assert_str_eq(t->lineage, "dilatometer B");
    ck_assert_str_eq(t->scale, "IPTS-68");
    ck_assert_uint_eq(t->note_count, 3);
    ck_assert(t->contracts_on_heating);
    ck_assert_ptr_nonnull(kel_test_warning(t, "unknown-key"));
    ck_assert_ptr_nonnull(kel_test_warning(t, "scale"));
    ck_assert_ptr_null(kel_test_warning(t, "sign"));
    ck_assert(isnan(t->reference_temperature) && t->reference_printed == NULL);
    kel_table_free(t);
    ck_assert_int_eq(kel_test_read_file(&t, "good-uncertainty.csv", NULL, NULL), KEL_OK);
    ck_assert_uint_eq(t->uncertainty_count, 3);
    ck_assert_uint_eq(t->shared_count, 1);
    ck_assert_ulp(t->shared[0].relative, 0.01, 0);
    ck_assert(isinf(t->shared[0].lo) && isinf(t->shared[0].hi));
    ck_assert_uint_eq(t->lot_count, 1);
    ck_assert_ulp(t->lot[0].relative, 0.015, 0);
    ck_assert_str_eq(t->lot_text, "1.5 %");
    kel_table_free(t);
    ck_assert_int_eq(kel_test_read_file(&t, "good-transition.csv", NULL, NULL), KEL_OK);
    ck_assert_uint_eq(t->transition_count, 2);
    ck_assert_int_eq(t->transitions[0].step, KEL_STEP_FITTED);
    ck_assert_ptr_null(kel_test_warning(t, "repeated")); /* two rows at a transition are meant */
    kel_table_free(t);
    ck_assert_int_eq(kel_test_read_file(&t, "good-current-length.csv", NULL, NULL), KEL_OK);
    ck_assert_int_eq(t->base, KEL_BASE_CURRENT);
    ck_assert(t->base_stated);
    kel_table_free(t);
}
END_TEST

START_TEST(counts)
{
    kel_table *t;
    ck_assert_int_eq(kel_test_read_file(&t, "good-status-marks.csv", NULL, NULL), KEL_OK);
    ck_assert_uint_eq(t->rows, 17);
    ck_assert_uint_eq(t->empty_cells, 4);
    ck_assert_uint_eq(t->marked_cells, 8);
    ck_assert_uint_eq(t->rows_left_out, 12);
    ck_assert_ulp(t->range.lo, 180, 0);
    ck_assert_ulp(t->range.hi, 340, 0);
    ck_assert_uint_eq(t->gap_count, 1);
    ck_assert_ulp(t->gaps[0].lo, 240, 0);
    const kel_warning *w = kel_test_warning(t, "marked");
    ck_assert_ptr_nonnull(w);
    ck_assert_uint_eq(w->count, 8);
    ck_assert_uint_eq(w->line, 4);
    w = kel_test_warning(t, "empty");
    ck_assert_ptr_nonnull(w);
    ck_assert_uint_eq(w->count, 4);
    ck_assert_uint_eq(w->line, 16);
    kel_table_free(t);

    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    o.include_marked = true;
    o.gap = 1;
    ck_assert_int_eq(kel_test_read_file(&t, "good-status-marks.csv", &o, NULL), KEL_OK);
    ck_assert_uint_eq(t->rows_left_out, 4);
    ck_assert_uint_eq(t->marked_cells, 8);
    ck_assert_ulp(t->range.lo, 20, 0);
    ck_assert_uint_eq(t->gap_count, 12);
    for (size_t i = 0; i < t->observation_count; i++)
        ck_assert_ptr_null(t->observations[i].left_out);
    kel_table_free(t);
}
END_TEST

static long
fail_to_read(void *context, char *buffer, size_t size)
{
    (void)context, (void)buffer, (void)size;
    return -1;
}

START_TEST(arguments)
{
    kel_table *t = (kel_table *)&t;
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_input none = { NULL, NULL }, broken = { fail_to_read, NULL };
    ck_assert_int_eq(kel_table_read(&t, none, "x", NULL, NULL), KEL_E_ARGUMENT);
    ck_assert_ptr_null(t);
    ck_assert_int_eq(kel_table_read(&t, broken, NULL, NULL, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_read(NULL, broken, "x", NULL, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_read(&t, broken, "x", NULL, NULL), KEL_E_IO);
    o.header = -2;
    ck_assert_int_eq(kel_test_read_text(&t, "T [K],alpha [1/K]\n1,0\n", &o, NULL), KEL_E_ARGUMENT);
    o = (kel_table_options)KEL_TABLE_OPTIONS_INIT;
    o.gap = NAN;
    ck_assert_int_eq(kel_test_read_text(&t, "T [K],alpha [1/K]\n1,0\n", &o, NULL), KEL_E_ARGUMENT);
    o = (kel_table_options)KEL_TABLE_OPTIONS_INIT;
    o.kind = 4;
    ck_assert_int_eq(kel_test_read_text(&t, "T [K],alpha [1/K]\n1,0\n", &o, NULL), KEL_E_ARGUMENT);
    o = (kel_table_options)KEL_TABLE_OPTIONS_INIT;
    o.settings = (const char *const[]){ "colour: red" };
    o.setting_count = 1;
    ck_assert_int_eq(kel_test_read_text(&t, "T [K],alpha [1/K]\n1,0\n", &o, NULL), KEL_E_SYNTAX);
    ck_assert_ptr_null(t);
    kel_table_free(NULL);
}
END_TEST

KEL_TCASE(singles, bad_files, metadata, counts, arguments)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, layout, 0, KEL_LENGTH(layouts));
    return c;
}

KEL_TEST_MAIN("table_read", singles, loops)
