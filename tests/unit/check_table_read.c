/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables read: every layout to its observations, every refusal with its place, what options do. Also over sheet.c, raw.c, table_columns.c,
   table_series.c, table_observe.c, table_uncertainty.c and table_leave_out.c. */
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
        ck_assert_msg(status == code_of(code) && err.code == status, "%s: status %d: %s", file, (int)status, err.message);
        ck_assert_ptr_null(t);
        ck_assert_msg(err.line == at_line && err.column == at_column, "%s: at %zu:%zu, %s", file, err.line, err.column, err.message);
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
    { "good-uncertainty.csv", 6, 0, C, 50, 50, 8.11e-6, 4.4721359549995794e-8, 0.01, 1e-8, 8, NULL },   /* 0.08/2 and 0.02 */
    { "good-uncertainty.csv", 6, 2, C, 150, 150, 14.25e-6, 3.6055512754639893e-8, 0.01, 1e-8, 10, NULL }, /* where ranges meet: the colder */
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
    ck_assert_msg(kel_test_read_file(&t, file, NULL, &err) == KEL_OK, "%s:%zu:%zu: %s", file, err.line, err.column, err.message);
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

/* ---- options ---- */

START_TEST(series)
{
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    o.series = "PARALLEL";
    ck_assert_int_eq(kel_test_read_file(&t, "odd-series.csv", &o, &err), KEL_OK);
    ck_assert_str_eq(t->columns[0].label, "parallel");
    ck_assert_uint_eq(t->observation_count, 4);
    ck_assert_uint_eq(t->rows, 6);
    ck_assert_ulp(t->observations[0].u_absolute, 5e-8, 0);
    kel_table_free(t);
    o.series = "normal";
    ck_assert_int_eq(kel_test_read_file(&t, "odd-series.csv", &o, &err), KEL_OK);
    ck_assert_uint_eq(t->observation_count, 6);
    ck_assert(!t->observations[0].u_stated); /* the uncertainty stands beside the other series */
    kel_table_free(t);
    o.series = "warp";
    ck_assert_int_eq(kel_test_read_file(&t, "odd-series.csv", &o, &err), KEL_E_ARGUMENT);
    ck_assert_str_eq(err.message, "no series 'warp': there are 'parallel', 'normal'");
    ck_assert_int_eq(kel_test_read_file(&t, "good-coefficient.csv", &o, &err), KEL_E_ARGUMENT);
    ck_assert_str_eq(err.message, "no series 'warp': the columns have no labels");
}
END_TEST

START_TEST(kinds)
{
    static const struct { kel_kind_choice choice; size_t columns, observations; kel_kind first; } rows[] = {
        { KEL_CHOOSE_DEFAULT, 1, 10, E }, { KEL_CHOOSE_COEFFICIENT, 1, 10, C }, { KEL_CHOOSE_MEAN, 1, 10, M },
        { KEL_CHOOSE_EXPANSION, 1, 10, E }, { KEL_CHOOSE_ALL, 3, 30, E },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        kel_table_options o = KEL_TABLE_OPTIONS_INIT;
        kel_table *t;
        o.kind = rows[i].choice;
        o.settings = (const char *const[]){ "lineage: x" };
        o.setting_count = 1;
        ck_assert_int_eq(kel_test_read_file(&t, "good-contraction.csv", &o, NULL), rows[i].first == E ? KEL_OK : KEL_E_UNIT);
        if (t == NULL)
            continue; /* its metadata state an uncertainty of the expansion */
        ck_assert_uint_eq(t->column_count, rows[i].columns);
        ck_assert_uint_eq(t->observation_count, rows[i].observations);
        ck_assert_int_eq(t->columns[0].kind, rows[i].first);
        ck_assert(t->columns[0].contraction);
        ck_assert_ptr_null(kel_test_warning(t, "cross-check"));
        ck_assert_int_eq(kel_test_warning(t, "kind") != NULL, rows[i].columns == 1);
        for (size_t k = 0; k < t->observation_count; k++) /* the absolute part concerns expansions alone */
            ck_assert_int_eq(t->observations[k].u_stated, t->observations[k].kind == E);
        kel_table_free(t);
    }
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    o.kind = KEL_CHOOSE_MEAN;
    ck_assert_int_eq(kel_test_read_file(&t, "good-coefficient.csv", &o, &err), KEL_E_DATA);
    ck_assert_str_eq(err.message, "no column of kind mean coefficient: there is coefficient");
    ck_assert_uint_eq(err.line, 5);
}
END_TEST

START_TEST(foreign)
{
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    static const char *const good[] = { "temperature [degC]=temp", "mean coefficient [ppm/degC]=CTE (ppm/C)" };
    static const char *const numbers[] = { "temperature [degC]=1", "mean coefficient [ppm/degC]=3" };
    static const char *const set[] = { "reference temperature: 20 degC" };
    o.settings = set;
    o.setting_count = 1;
    o.column_count = 2;
    for (int i = 0; i < 2; i++) {
        o.columns = i == 0 ? good : numbers;
        ck_assert_msg(kel_test_read_file(&t, "odd-foreign.csv", &o, &err) == KEL_OK, "%s", err.message);
        ck_assert_uint_eq(t->observation_count, 3);
        ck_assert_int_eq(t->columns[0].kind, M);
        ck_assert_ulp(t->observations[0].value, 15.28e-6, 0);
        ck_assert_ulp(t->observations[0].from, 293.15, 0);
        const kel_warning *w = kel_test_warning(t, "passed-over");
        ck_assert_ptr_nonnull(w);
        ck_assert_str_eq(w->text, "columns passed over: 'Heat', 'Remark'");
        kel_table_free(t);
    }
    static const struct { const char *columns[3]; kel_status code; const char *message; } wrong[] = {
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=5" }, KEL_E_ARGUMENT, "a number from 1 to 4" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=0" }, KEL_E_ARGUMENT, "a number from 1 to 4" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=99999999999999999999999" }, KEL_E_ARGUMENT, "a number from 1 to 4" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=Alpha" }, KEL_E_ARGUMENT, "'Alpha' is neither the head" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=1" }, KEL_E_ARGUMENT, "names column 1 twice" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=Heat", "coefficient [ppm/K]=3" }, KEL_E_DATA, "repeats the kind" },
        { { "temperature [degC]=Temp", "source=Remark" }, KEL_E_DATA, "no column of values" },
    };
    for (size_t i = 0; i < sizeof wrong / sizeof wrong[0]; i++) {
        o.columns = wrong[i].columns;
        o.column_count = wrong[i].columns[2] != NULL ? 3 : 2;
        ck_assert_int_eq(kel_test_read_file(&t, "odd-foreign.csv", &o, &err), wrong[i].code);
        ck_assert_msg(strstr(err.message, wrong[i].message) != NULL, "%s", err.message);
    }
}
END_TEST

/* What the head says yields to what the user names; what is not named keeps its meaning. */
START_TEST(overruled)
{
    static const char *const columns[] = { "temperature [degC]=3" };
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    o.columns = columns;
    o.column_count = 1;
    kel_table *t = kel_test_table("T [K],alpha [1e-6/K],t/C\n100,11.5,-173\n", &o);
    ck_assert_ulp(t->observations[0].to, 100.15, 0);
    ck_assert_ulp(t->observations[0].value, 11.5e-6, 0);
    ck_assert_str_eq(kel_test_warning(t, "passed-over")->text, "columns passed over: 'T [K]'");
    kel_table_free(t);
}
END_TEST

START_TEST(headers)
{
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    o.header = 4;
    ck_assert_int_eq(kel_test_read_file(&t, "odd-title.csv", &o, &err), KEL_OK);
    ck_assert_uint_eq(t->observation_count, 2);
    ck_assert_str_eq(t->material, "TS-1");
    ck_assert_uint_eq(kel_test_warning(t, "before-header")->count, 2);
    ck_assert_uint_eq(kel_test_warning(t, "before-header")->line, 1);
    kel_table_free(t);
    o.header = 3;
    ck_assert_int_eq(kel_test_read_file(&t, "odd-title.csv", &o, &err), KEL_E_DATA);
    ck_assert_uint_eq(err.line, 3);
    o.header = 40;
    ck_assert_int_eq(kel_test_read_file(&t, "odd-title.csv", &o, &err), KEL_E_DATA);
    ck_assert_uint_eq(err.line, 40);
    o.header = 0;
    ck_assert_int_eq(kel_test_read_file(&t, "odd-no-header.csv", &o, &err), KEL_E_ARGUMENT);
    o.columns = (const char *const[]){ "temperature [K]=1", "coefficient [1e-6/K]=2" };
    o.column_count = 2;
    ck_assert_msg(kel_test_read_file(&t, "odd-no-header.csv", &o, &err) == KEL_OK, "%s", err.message);
    ck_assert_uint_eq(t->observation_count, 3);
    ck_assert_uint_eq(t->observations[0].line, 1);
    kel_table_free(t);
    o.header = 2;
    o.transpose = true;
    ck_assert_int_eq(kel_test_read_file(&t, "odd-no-header.csv", &o, &err), KEL_E_ARGUMENT);
}
END_TEST

/* Rows are known by the number of their column; errors keep the place in the file. */
START_TEST(transposed)
{
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    o.transpose = true;
    o.leave_out = (const char *const[]){ "odd-transposed.csv:3=cracked" };
    o.leave_out_count = 1;
    ck_assert_msg(kel_test_read_file(&t, "odd-transposed.csv", &o, &err) == KEL_OK, "%s", err.message);
    ck_assert(t->transposed);
    ck_assert_uint_eq(t->observation_count, 5);
    ck_assert_uint_eq(t->observations[0].line, 1);
    ck_assert_ulp(t->observations[0].to, 100, 0);
    ck_assert_ulp(t->observations[0].value, -308.8e-5, 0);
    ck_assert_str_eq(t->observations[2].left_out, "cracked");
    kel_table_free(t);
    static const char *const bad[][2] = {
        { "T [K],1,2\nalpha [1e-6/K],3\n", "2:17" }, { "T [K],1,2\nalpha [1e-6/K],3,x\n", "2:18" }, { "T [K]\nalpha [1e-6/K]\n", "1:1" },
        { "T [K],1,2\nalpha,3,4\n", "2:1" }, { "# x: 1\n", "1:1" },
    };
    o.leave_out_count = 0;
    for (size_t i = 0; i < sizeof bad / sizeof bad[0]; i++) {
        char at[40];
        ck_assert_int_lt(kel_test_read_text(&t, bad[i][0], &o, &err), 0);
        snprintf(at, sizeof at, "%zu:%zu", err.line, err.column);
        ck_assert_msg(strcmp(at, bad[i][1]) == 0, "%s: %s %s", bad[i][0], at, err.message);
    }
}
END_TEST

START_TEST(blanks)
{
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    o.delimiter = KEL_DELIMITER_BLANKS;
    o.settings = (const char *const[]){ "reference temperature: 20 degC" };
    o.setting_count = 1;
    ck_assert_msg(kel_test_read_file(&t, "odd-blanks.txt", &o, &err) == KEL_OK, "%s", err.message);
    ck_assert_uint_eq(t->observation_count, 3);
    ck_assert_int_eq(t->columns[0].kind, M);
    ck_assert_ulp(t->observations[2].u_absolute, 4e-8, 0);
    kel_table_free(t);
    /* Heads that fall apart: units with blanks and brackets, labels with brackets, words without a unit anywhere. */
    t = kel_test_table("source T (K) mean CTE: lot (a) [1e-6 / K] u (k=2) [%] status expansion: lot (a) [in/100 ft]\na 100 14.5 3 ok -0.3\n", &o);
    ck_assert_int_eq(t->columns[0].kind, E);
    ck_assert_str_eq(t->columns[0].label, "lot (a)");
    ck_assert_str_eq(t->columns[0].unit, "in/100 ft");
    kel_table_free(t);
    o.transpose = true;
    t = kel_test_table("T [K]  100 200\nmean coefficient [1e-6/K]  14.5 16.9\nsource a b\n", &o);
    ck_assert_uint_eq(t->observation_count, 2);
    ck_assert_ulp(t->observations[1].value, 16.9e-6, 0);
    kel_table_free(t);
}
END_TEST

static const struct { const char *option; kel_status code; const char *message; } leave[] = {
    { "test.csv:3=moved", KEL_OK, NULL },
    { "test.csv:3= moved", KEL_OK, NULL },
    { "other.csv:3=moved", KEL_OK, "" },
    { "test.csv:1=moved", KEL_E_DATA, "no row of data on line 1" },
    { "test.csv:5=moved", KEL_E_DATA, "no row of data on line 5" },
    { "test.csv:0=moved", KEL_E_DATA, "no row of data on line 0" },
    { "test.csv:3=", KEL_E_ARGUMENT, "write FILE:LINE=REASON" },
    { "test.csv:3", KEL_E_ARGUMENT, "write FILE:LINE=REASON" },
    { "test.csv=3", KEL_E_ARGUMENT, "write FILE:LINE=REASON" },
    { ":3=x", KEL_E_ARGUMENT, "write FILE:LINE=REASON" },
    { "test.csv:-3=x", KEL_E_ARGUMENT, "write FILE:LINE=REASON" },
    { "a:b=c:3=x:4=y", KEL_OK, "" },
};

START_TEST(leave_out)
{
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    o.leave_out = &leave[_i].option;
    o.leave_out_count = 1;
    kel_status status = kel_test_read_text(&t, "T [K],alpha [1e-6/K]\n100,11.5\n200,16.4\n300,19.1\n", &o, &err);
    ck_assert_msg(status == leave[_i].code, "%s: %s", leave[_i].option, err.message);
    if (status != KEL_OK) {
        ck_assert_msg(strstr(err.message, leave[_i].message) != NULL, "%s: %s", leave[_i].option, err.message);
        return;
    }
    if (leave[_i].message == NULL)
        ck_assert_str_eq(t->observations[1].left_out, "moved");
    else
        ck_assert_ptr_null(t->observations[1].left_out);
    ck_assert_uint_eq(t->rows_left_out, leave[_i].message == NULL);
    kel_table_free(t);
}
END_TEST

/* What counts as a status that leaves a row out. */
static const struct { const char *status, *left_out; } statuses[] = {
    { "", NULL }, { "ok", NULL }, { "Measured", NULL }, { "recommended", NULL }, { "-", NULL }, { "...", NULL },
    { "provisional", "status: provisional" }, { "est.", "status: est." }, { "left out: cracked", "cracked" }, { "Left Out:  a: b", "a: b" },
    { "left out:", "status: left out:" },
};

START_TEST(status)
{
    char text[120];
    snprintf(text, sizeof text, "T [K],alpha [1e-6/K],status\n100,11.5,%s\n200,16.4,\n", statuses[_i].status);
    kel_table *t = kel_test_table(text, NULL);
    if (statuses[_i].left_out == NULL)
        ck_assert_ptr_null(t->observations[0].left_out);
    else
        ck_assert_str_eq(t->observations[0].left_out, statuses[_i].left_out);
    ck_assert_ptr_null(t->observations[1].left_out);
    kel_table_free(t);
}
END_TEST

START_TEST(marks)
{
    /* A mark at a temperature or an uncertainty concerns the row as one at the value does. */
    kel_table *t = kel_test_table("T [K],alpha [1e-6/K],u [1e-6/K]\n~100,11.5,1\n200,16.4,(1)\n300,19.1,1\n", NULL);
    ck_assert_str_eq(t->observations[0].left_out, "status mark: about");
    ck_assert_str_eq(t->observations[1].left_out, "status mark: in parentheses");
    ck_assert_ptr_null(t->observations[2].left_out);
    ck_assert_uint_eq(t->marked_cells, 2);
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

static void
count_calls(void *context, size_t rows, size_t bytes)
{
    size_t *seen = context;
    seen[0]++;
    ck_assert_uint_ge(rows, seen[1]);
    ck_assert_uint_ge(bytes, 8 * rows);
    seen[1] = rows;
}

/* A long table: progress is told, the packed rows come back in full, order is kept. 0 K and cells of every length are among them. */
START_TEST(long_table)
{
    enum { ROWS = 20000 };
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "temperature [K],coefficient [1e-6/K],source\n");
    for (int i = 0; i < ROWS; i++) {
        kel_text_printf(&text, "%d.%02d,%d.5,", i / 100, i % 100, i % 17);
        for (int k = 0; k < i % 151; k++)
            kel_text_add(&text, "s");
        kel_text_add(&text, "\n");
    }
    size_t seen[2] = { 0, 0 };
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    o.progress = count_calls;
    o.progress_context = seen;
    kel_table *t = kel_test_table(text.bytes, &o);
    ck_assert_uint_eq(t->observation_count, ROWS);
    ck_assert_uint_ge(seen[0], 4);
    for (size_t i = 0; i < ROWS; i++) {
        ck_assert_uint_eq(t->observations[i].line, i + 2);
        ck_assert_ulp(t->observations[i].to, (double)i / 100, 0);
    }
    kel_text out = KEL_TEXT_INIT;
    ck_assert_int_eq(kel_table_format(&out, t, NULL), KEL_OK);
    ck_assert_str_eq(out.bytes, text.bytes);
    kel_text_free(&out);
    kel_text_free(&text);
    kel_table_free(t);
}
END_TEST

KEL_TCASE(singles, bad_files, metadata, counts, series, kinds, foreign, overruled, headers, transposed, blanks, marks, arguments, long_table)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, layout, 0, KEL_LENGTH(layouts));
    tcase_add_loop_test(c, leave_out, 0, KEL_LENGTH(leave));
    tcase_add_loop_test(c, status, 0, KEL_LENGTH(statuses));
    return c;
}

KEL_TEST_MAIN("table_read", singles, loops)
