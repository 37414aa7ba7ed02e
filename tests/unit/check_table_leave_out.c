/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows left out by hand: the option's form, the files it names, the rows it finds. */
#include "tables.h"

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

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, leave_out, 0, KEL_LENGTH(leave));
    return c;
}

KEL_TEST_MAIN("table_leave_out", loops)
