/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows that their source doubts: statuses, and marks at every cell of a row. */
#include "tables.h"

/* What counts as a status that leaves a row out. */
static const struct { const char *status, *left_out; } statuses[] = {
    { "", NULL }, { "ok", NULL }, { "Measured", NULL }, { "recommended", NULL }, { "-", NULL }, { "...", NULL },
    { "provisional", "status: provisional" }, { "est.", "status: est." }, { "left out: cracked", "cracked" },
        { "Left Out:  a: b", "a: b" },
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

KEL_TCASE(singles, marks)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, status, 0, KEL_LENGTH(statuses));
    return c;
}

KEL_TEST_MAIN("table_observe", singles, loops)
