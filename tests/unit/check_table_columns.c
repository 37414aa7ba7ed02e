/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Columns of foreign files: named on the command line, by head or number; what is passed over, and what is overruled.
   */
#include "tables.h"

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
        ck_assert_int_eq(t->columns[0].kind, KEL_KIND_MEAN);
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
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=99999999999999999999999" }, KEL_E_ARGUMENT,
          "a number from 1 to 4" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=Alpha" }, KEL_E_ARGUMENT, "'Alpha' is neither the head" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=1" }, KEL_E_ARGUMENT, "names column 1 twice" },
        { { "temperature [degC]=Temp", "coefficient [ppm/K]=Heat", "coefficient [ppm/K]=3" }, KEL_E_DATA,
          "repeats the kind" },
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

KEL_TCASE(singles, foreign, overruled)

KEL_TEST_MAIN("table_columns", singles)
