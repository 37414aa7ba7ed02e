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

/* Of the codes of reservations two say that no data were there; what else stands in the column does no harm. */
static const struct { const char *cell, *left_out; } reservations[] = {
    { "", NULL }, { "-", NULL }, { "transition", NULL }, { "unknown-uncertainty", NULL },
    { "transition+unreachable+unknown-uncertainty", NULL }, { "+", NULL }, { "gaps", NULL },
    { "extrapolated gap", NULL }, { "left out: no", NULL },
    { "extrapolated", "reservation: extrapolated" }, { " Extrapolated ", "reservation: extrapolated" },
    { "gap", "reservation: gap" }, { "gap+transition", "reservation: gap" }, { "transition+gap", "reservation: gap" },
    { "unknown-uncertainty + extrapolated", "reservation: extrapolated" },
    { "extrapolated+gap+transition", "reservations: extrapolated, gap" },
};

START_TEST(reservation)
{
    const char *label = reservations[_i].cell, *want = reservations[_i].left_out;
    for (int include = 0; include < 2; include++) {
        char text[160];
        kel_table_options options = { .kind = -1, .header = -1, .include_marked = include };
        snprintf(text, sizeof text, "T [K],alpha [1e-6/K],reservations\n100,11.5,%s\n200,16.4,\n", label);
        kel_table *t = kel_test_table(text, &options);
        const char *reason = t->observations[0].left_out;
        bool same = want == NULL || include ? reason == NULL : reason != NULL && strcmp(reason, want) == 0;
        ck_assert_msg(same, "'%s': %s", label, reason == NULL ? "taken" : reason);
        ck_assert_ptr_null(t->observations[1].left_out);
        ck_assert_uint_eq(t->marked_cells, want != NULL);
        kel_table_free(t);
    }
}
END_TEST

/* The row's status is the graver word of the two. */
START_TEST(status_before_reservation)
{
    kel_table *t = kel_test_table("T [K],alpha [1e-6/K],reservations,status\n100,11.5,gap,doubtful\n"
                                  "200,16.4,gap,ok\n300,19,,\n", NULL);
    ck_assert_str_eq(t->observations[0].left_out, "status: doubtful");
    ck_assert_str_eq(t->observations[1].left_out, "reservation: gap");
    ck_assert_ptr_null(t->observations[2].left_out);
    kel_table_free(t);
}
END_TEST

KEL_TCASE(singles, marks, status_before_reservation)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, status, 0, KEL_LENGTH(statuses));
    tcase_add_loop_test(c, reservation, 0, KEL_LENGTH(reservations));
    return c;
}

KEL_TEST_MAIN("table_observe", singles, loops)
