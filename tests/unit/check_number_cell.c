/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Cells of numbers: marks taken off, numbers read whole or not at all, intervals, and cells written out again. Also
   over cell_text.c. */
#include "unit.h"

#include <math.h>
#include <string.h>

#include "../../lib/fit/number_cell.h"

enum { LINE = 3, COLUMN = 9 };

#define DASH "\xE2\x80\x93"
#define MINUS "\xE2\x88\x92"
#define DAGGER "\xE2\x80\xA0"

static const struct {
    const char *cell, *core;   /* core NULL: empty */
    unsigned marks;
} cells[] = {
    { "", NULL, 0 },
    { " \t\xC2\xA0", NULL, 0 },
    { "...", NULL, 0 },
    { "\xE2\x80\xA6", NULL, 0 },
    { "-", NULL, 0 },
    { "--", NULL, 0 },
    { DASH, NULL, 0 },
    { "\xE2\x80\x94", NULL, 0 },
    { MINUS, NULL, 0 },
    { "N/A", NULL, 0 },
    { "0.192", "0.192", 0 },
    { " -0.192 ", "-0.192", 0 },
    { "(0.192)", "0.192", KEL__MARK_PARENTHESES },
    { "( 0.192 )", "0.192", KEL__MARK_PARENTHESES },
    { "0.192:", "0.192", KEL__MARK_COLON },
    { "15::", "15", KEL__MARK_COLON },
    { "0.192*", "0.192", KEL__MARK_ASTERISK },
    { "0.192 **", "0.192", KEL__MARK_ASTERISK },
    { "0.192" DAGGER, "0.192", KEL__MARK_DAGGER },
    { "0.192\xE2\x80\xA1", "0.192", KEL__MARK_DAGGER },
    { "~0.192", "0.192", KEL__MARK_ABOUT },
    { "\xE2\x89\x88 0.192", "0.192", KEL__MARK_ABOUT },
    { "<0.192", "0.192", KEL__MARK_LESS },
    { "\xE2\x89\xA4" "0.192", "0.192", KEL__MARK_LESS },
    { "> 0.192", "0.192", KEL__MARK_GREATER },
    { "\xE2\x89\xA5" "0.192", "0.192", KEL__MARK_GREATER },
    { "est. 0.192", "0.192", KEL__MARK_ESTIMATED },
    { "0.192 EST", "0.192", KEL__MARK_ESTIMATED },
    { "(~0.192:)*", "0.192", KEL__MARK_PARENTHESES | KEL__MARK_ABOUT | KEL__MARK_COLON | KEL__MARK_ASTERISK },
    { "*", "", KEL__MARK_ASTERISK },
    { "()", "", KEL__MARK_PARENTHESES },
    { "(0.192", "(0.192", 0 },
    { "0.192?", "0.192?", 0 },
    { "11.5(2)", "11.5(2)", 0 },
    { "....", "....", 0 },
};

START_TEST(stripped)
{
    const char *text = cells[_i].cell;
    kel__cell c = kel__cell_of(text, strlen(text), LINE, COLUMN);
    ck_assert_msg(c.empty == (cells[_i].core == NULL), "'%s': empty %d", text, c.empty);
    ck_assert_msg(c.marks == cells[_i].marks, "'%s': marks %x", text, c.marks);
    if (!c.empty)
        ck_assert_msg(c.core_n == strlen(cells[_i].core) && memcmp(c.core, cells[_i].core, c.core_n) == 0,
                      "'%s': core '%.*s'", text,
                      (int)c.core_n, c.core);
}
END_TEST

static const struct {
    const char *cell, *unit;
    kel_dimension dimension;
    bool comma;
    double value, resolution;
} numbers[] = {
    { "68", "degF", KEL_DIM_TEMPERATURE, false, 293.15, 1 / 1.8 },
    { "0", "K", KEL_DIM_TEMPERATURE, false, 0, 1 },
    { MINUS "40,0", "degC", KEL_DIM_TEMPERATURE, true, 233.15, 0.1 },
    { "(11.50)", "1e-6/K", KEL_DIM_PER_KELVIN, false, 11.5e-6, 1e-8 },
    { "11,5:", "1e-6/K", KEL_DIM_PER_KELVIN, true, 11.5e-6, 1e-7 },
    { "+1.25e-3", "1", KEL_DIM_ONE, false, 1.25e-3, 1e-5 },
    { "1,25e-3", "1", KEL_DIM_ONE, true, 1.25e-3, 1e-5 },
    { "-0.36", "%", KEL_DIM_ONE, false, -0.0036, 1e-4 },
    { "1200", "1e-5", KEL_DIM_ONE, false, 0.012, 1e-5 },
};

START_TEST(read)
{
    const char *text = numbers[_i].cell;
    kel_unit unit;
    double value, resolution;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_int_eq(kel_unit_parse(&unit, numbers[_i].dimension, numbers[_i].unit, strlen(numbers[_i].unit), NULL),
                     KEL_OK);
    kel__cell c = kel__cell_of(text, strlen(text), LINE, COLUMN);
    ck_assert_msg(kel__cell_number(&value, &resolution, &c, &unit, numbers[_i].comma, &err) == KEL_OK, "%s: %s",
                  text, err.message);
    ck_assert_ulp_for(text, value, numbers[_i].value, 0); /* one rounding of number and unit together */
    ck_assert_ulp_for(text, resolution, numbers[_i].resolution, 1);
}
END_TEST

static const struct {
    const char *cell;
    bool comma;
    kel_status code;
    size_t at;                 /* byte of the cell, from 0 */
    const char *message;
} refused[] = {
    { "abc", false, KEL_E_SYNTAX, 0, "'abc'" },
    { "11.5a", false, KEL_E_SYNTAX, 4, "11.5a" },
    { "(11.5a)", false, KEL_E_SYNTAX, 5, "11.5a" },
    { "  ~ 11 5", false, KEL_E_SYNTAX, 6, "11 5" },
    { "nan", false, KEL_E_SYNTAX, 0, "'nan': no number; an empty cell, ... or n/a stands for no value" },
    { "-NaN", false, KEL_E_SYNTAX, 0, "no number" },
    { "inf", false, KEL_E_SYNTAX, 0, "no number" },
    { "+Infinity", false, KEL_E_SYNTAX, 0, "no number" },
    { "0x1p3", false, KEL_E_SYNTAX, 1, "0x1p3" },
    { "1e", false, KEL_E_SYNTAX, 1, "1e" },
    { "1.2.3", false, KEL_E_SYNTAX, 3, "1.2.3" },
    { "--1", false, KEL_E_SYNTAX, 0, "--1" },
    { "1,5", false, KEL_E_SYNTAX, 1, "a decimal comma must be declared" },
    { "1,234.5", false, KEL_E_SYNTAX, 1, "marks of thousands are not taken" },
    { "1.234,5", true, KEL_E_SYNTAX, 1, "a point, where the file declares `decimal: comma`" },
    { "1,234,5", true, KEL_E_SYNTAX, 5, "1.234,5" },
    { "1'234", false, KEL_E_SYNTAX, 1, "1'234" },
    { "*", false, KEL_E_SYNTAX, 0, "a status mark without a number" },
    { "1e400", false, KEL_E_RANGE, 0, "beyond the range of a double" },
    { "-50", false, KEL_E_RANGE, 0, "perhaps the column is in degC" },
    { "<" MINUS "50", false, KEL_E_RANGE, 1, "perhaps the column is in degC" },
    { "a\tb\x7f", false, KEL_E_SYNTAX, 0, "\\x7F" },
};

START_TEST(refusals)
{
    const char *text = refused[_i].cell;
    kel_unit unit;
    double value;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_int_eq(kel_unit_parse(&unit, KEL_DIM_TEMPERATURE, "K", 1, NULL), KEL_OK);
    kel__cell c = kel__cell_of(text, strlen(text), LINE, COLUMN);
    ck_assert_msg(kel__cell_number(&value, NULL, &c, &unit, refused[_i].comma, &err) == refused[_i].code, "%s: %s",
                  text, err.message);
    ck_assert_msg(err.line == LINE && err.column == COLUMN + refused[_i].at, "%s: %zu:%zu %s", text, err.line,
                  err.column, err.message);
    ck_assert_msg(strstr(err.message, refused[_i].message) != NULL, "%s: %s", text, err.message);
    ck_assert_int_eq(kel__cell_number(&value, NULL, &c, &unit, refused[_i].comma, NULL), refused[_i].code);
}
END_TEST

/* A number may be as long as 400 bytes, no longer. */
START_TEST(length)
{
    kel_unit unit;
    double value;
    char digits[402];
    memset(digits, '0', sizeof digits);
    digits[0] = '7';
    digits[1] = '.';
    ck_assert_int_eq(kel_unit_parse(&unit, KEL_DIM_TEMPERATURE, "K", 1, NULL), KEL_OK);
    kel__cell c = kel__cell_of(digits, 400, LINE, COLUMN);
    ck_assert_int_eq(kel__cell_number(&value, NULL, &c, &unit, false, NULL), KEL_OK);
    ck_assert_ulp(value, 7, 0);
    c = kel__cell_of(digits, 401, LINE, COLUMN);
    ck_assert_int_eq(kel__cell_number(&value, NULL, &c, &unit, false, NULL), KEL_E_SYNTAX);
}
END_TEST

static const struct { const char *cell, *from, *to; size_t from_at, to_at; } intervals[] = {
    { "20-100", "20", "100", 0, 3 },
    { "20" DASH "100", "20", "100", 0, 5 },
    { "20\xE2\x80\x94" "100", "20", "100", 0, 5 },
    { "20" MINUS "100", "20", "100", 0, 5 },
    { "20 to 100", "20", "100", 0, 6 },
    { "20to100", "20", "100", 0, 4 },
    { "-50 to 20", "-50", "20", 0, 7 },
    { "-50 - 20", "-50", "20", 0, 6 },
    { MINUS "50" DASH "20", MINUS "50", "20", 0, 8 },
    { "-50 - -20", "-50", "-20", 0, 6 },
    { "-50--20", "-50", "-20", 0, 4 },
    { "-196 to " MINUS "50", "-196", MINUS "50", 0, 8 },
    { "2.5e1-1e2", "2.5e1", "1e2", 0, 6 },
    { "2e-1-1e+2", "2e-1", "1e+2", 0, 5 },
    { "20,5-100,5", "20,5", "100,5", 0, 5 },
    { "(20-100)*", "20", "100", 1, 4 },
};

static void
assert_end(const char *label, const kel__cell *got, const char *want, size_t at)
{
    ck_assert_msg(got->core_n == strlen(want) && memcmp(got->core, want, got->core_n) == 0, "%s: '%.*s'", label,
                  (int)got->core_n,
                  got->core);
    ck_assert_msg(got->line == LINE && got->column == COLUMN + at, "%s: %zu:%zu", label, got->line, got->column);
}

START_TEST(interval)
{
    const char *text = intervals[_i].cell;
    kel__cell c = kel__cell_of(text, strlen(text), LINE, COLUMN), from, to;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel__cell_interval(&from, &to, &c, &err) == KEL_OK, "%s: %s", text, err.message);
    assert_end(text, &from, intervals[_i].from, intervals[_i].from_at);
    assert_end(text, &to, intervals[_i].to, intervals[_i].to_at);
    ck_assert_uint_eq(from.marks, c.marks);
}
END_TEST

START_TEST(no_interval)
{
    static const char *const wrong[] = { "20", "-50", "20-", "20 to", "to 20", "a-b", "20..100", "20 100", "20/100",
                                         "-", "until 100" };
    const char *text = wrong[_i];
    kel__cell c = kel__cell_of(text, strlen(text), LINE, COLUMN), from, to;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel__cell_interval(&from, &to, &c, &err) == KEL_E_SYNTAX, "%s", text);
    ck_assert_uint_eq(err.line, LINE);
    ck_assert_uint_eq(err.column, COLUMN);
}
END_TEST

static const struct { const char *cell; bool turn, comma; const char *want; } written[] = {
    { "600.30", false, false, "600.30" },
    { "600.30", true, false, "-600.30" },
    { "+600.30", true, false, "-600.30" },
    { "-22.6", true, false, "22.6" },
    { MINUS "22,6", true, true, "22.6" },
    { MINUS "22,6", false, true, MINUS "22.6" },
    { "0.0", true, false, "0.0" },
    { "-0.0", true, false, "0.0" },
    { "0e5", true, false, "0e5" },
    { "(600,3)", true, true, "(-600.3)" },
    { "0.192::", true, false, "-0.192::" },
    { "<5", true, false, ">-5" },
    { "\xE2\x89\xA5 -5*", true, false, "\xE2\x89\xA4 5*" },
    { "<5", false, false, "<5" },
    { "~ 5", true, false, "~ -5" },
    { "...", true, true, "..." },
    { "-", true, false, "-" },
    { "", true, false, "" },
};

START_TEST(text)
{
    kel__cell c = kel__cell_of(written[_i].cell, strlen(written[_i].cell), LINE, COLUMN);
    kel_text out = KEL_TEXT_INIT;
    kel__put_cell(&out, &c, written[_i].turn, written[_i].comma);
    ck_assert_str_eq(out.bytes == NULL ? "" : out.bytes, written[_i].want);
    kel_text_free(&out);
}
END_TEST

START_TEST(words)
{
    kel_text out = KEL_TEXT_INIT;
    kel__marks_text(&out, KEL__MARK_PARENTHESES | KEL__MARK_COLON | KEL__MARK_ESTIMATED);
    ck_assert_str_eq(out.bytes, "in parentheses, with a colon, estimated");
    kel_text_free(&out);
}
END_TEST

KEL_TCASE(singles, length, words)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, stripped, 0, KEL_LENGTH(cells));
    tcase_add_loop_test(c, read, 0, KEL_LENGTH(numbers));
    tcase_add_loop_test(c, refusals, 0, KEL_LENGTH(refused));
    tcase_add_loop_test(c, interval, 0, KEL_LENGTH(intervals));
    tcase_add_loop_test(c, no_interval, 0, 11);
    tcase_add_loop_test(c, text, 0, KEL_LENGTH(written));
    return c;
}

KEL_TEST_MAIN("number_cell", singles, loops)
