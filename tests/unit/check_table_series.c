/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Series and kinds: which columns are read as one table, and which of them is fitted. */
#include "tables.h"

#define C KEL_KIND_COEFFICIENT
#define M KEL_KIND_MEAN
#define E KEL_KIND_EXPANSION

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
        ck_assert_int_eq(kel_test_read_file(&t, "good-contraction.csv", &o, NULL), rows[i].first == E ? KEL_OK
                         : KEL_E_UNIT);
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

KEL_TCASE(singles, series, kinds)

KEL_TEST_MAIN("table_series", singles)
