/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Finding members, ends and tokens in the text of JSON. */
#include "../support/unit.h"

#include <string.h>

#include "json_raw.h"

static const struct member { const char *label, *text; size_t place; const char *want; } members[] = {
    { "first", "{\"a\": 1, \"b\": 2}", 0, "1" },
    { "last", "{\"a\": 1, \"b\": 2}", 1, "2" },
    { "blanks", " {\t\"a\"\n:\r [ 1 , 2 ] ,\"b\" :\n true \n}\n", 0, "[ 1 , 2 ]" },
    { "no blanks", "{\"a\":[1],\"b\":{}}", 1, "{}" },
    { "word before the end", " {\"a\" : null\n , \"b\" :\n true \n}\n", 1, "true" },
    { "brackets in strings", "{\"a}\": \"]},{\", \"b\": {\"c\": [\"}\"]}}", 1, "{\"c\": [\"}\"]}" },
    { "escaped quotes", "{\"a\\\"\\\\\": \"\\\\\", \"b\": \"\\\"}\", \"c\": 3}", 2, "3" },
    { "string", "{\"a\": \"x\\\"y\", \"b\": 2}", 0, "\"x\\\"y\"" },
    { "deep", "{\"a\": [[[{}, {\"b\": []}]]], \"c\": -0.5e-7}", 1, "-0.5e-7" },
};

START_TEST(finds_members)
{
    const struct member *m = &members[_i];
    size_t size;
    const char *text = kel__json_member_text(&size, m->place, m->text, strlen(m->text));
    ck_assert_msg(size == strlen(m->want) && memcmp(text, m->want, size) == 0, "%s: got '%.*s'", m->label, (int)size,
                  text);
}
END_TEST

static const struct token { const char *label, *text; size_t n, longest; } tokens[] = {
    { "nothing", "", 0, 0 },
    { "brackets", "{[]}", 4, 0 },
    { "number", "[1, -12.5e-7, 3]", 16, 8 },
    { "word", "[true,false]", 12, 5 },
    { "string counts its quotes", "[\"abcd\"]", 8, 6 },
    { "escaped quotes are inside", "[\"a\\\"b\\\"c\\\\\",1]", 15, 11 },
    { "string without end", "[\"abc", 5, 4 },
    { "escape without end", "[\"abc\\", 6, 5 },
    { "blanks inside a string", "\"a b\tc\"", 7, 7 },
    { "no JSON", "xy==zzzz;.", 10, 10 },
    { "word up to a quote", "xyz\"a\"", 6, 3 },
    { "bytes above 127", "\xE2\x88\x92\xE2\x88\x92", 6, 6 },
    { "NUL", "ab\0c", 4, 2 },
};

START_TEST(finds_the_longest_token)
{
    const struct token *t = &tokens[_i];
    /* At the end of a block of its own, so that reading beyond it shows. */
    char *bytes = malloc(t->n);
    ck_assert(bytes != NULL || t->n == 0);
    if (t->n != 0)
        memcpy(bytes, t->text, t->n);
    size_t got = kel__json_longest_token(bytes, t->n);
    ck_assert_msg(got == t->longest, "%s: got %zu, expected %zu", t->label, got, t->longest);
    free(bytes);
}
END_TEST

START_TEST(finds_the_end_of_a_value)
{
    ck_assert_uint_eq(kel__json_value_size("{}, {}", 6), 2);
    ck_assert_uint_eq(kel__json_value_size(" \n[1, {\"a\": \",\"}] ,2", 20), 18);
    ck_assert_uint_eq(kel__json_value_size("\"a,b\",1", 7), 5);
    ck_assert_uint_eq(kel__json_value_size("12", 2), 2);
}
END_TEST

KEL_TCASE(ends, finds_the_end_of_a_value)

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, finds_members, 0, KEL_LENGTH(members));
    tcase_add_loop_test(c, finds_the_longest_token, 0, KEL_LENGTH(tokens));
    return c;
}

KEL_TEST_MAIN("json_raw", ends, tables)
