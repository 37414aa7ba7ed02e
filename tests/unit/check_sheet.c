/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Sheets: where the header stands, tables that lie on their side, cells parted by blanks, long tables. Also over
   raw.c. */
#include "tables.h"

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
        { "T [K],1,2\nalpha [1e-6/K],3\n", "2:17" }, { "T [K],1,2\nalpha [1e-6/K],3,x\n", "2:18" },
            { "T [K]\nalpha [1e-6/K]\n", "1:1" },
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
    ck_assert_int_eq(t->columns[0].kind, KEL_KIND_MEAN);
    ck_assert_ulp(t->observations[2].u_absolute, 4e-8, 0);
    kel_table_free(t);
    /* Heads that fall apart: units with blanks and brackets, labels with brackets, words without a unit anywhere. */
    t = kel_test_table("source T (K) mean CTE: lot (a) [1e-6 / K] u (k=2) [%] status expansion: lot (a) [in/100 "
                       "ft]\na 100 14.5 3 ok -0.3\n", &o);
    ck_assert_int_eq(t->columns[0].kind, KEL_KIND_EXPANSION);
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

static void
count_calls(void *context, size_t rows, size_t bytes)
{
    size_t *seen = context;
    seen[0]++;
    ck_assert_uint_ge(rows, seen[1]);
    ck_assert_uint_ge(bytes, 8 * rows);
    seen[1] = rows;
}

/* A long table: progress is told, the packed rows come back in full, order is kept. 0 K and cells of every length are
   among them. */
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

KEL_TCASE(singles, headers, transposed, blanks, long_table)

KEL_TEST_MAIN("sheet", singles)
