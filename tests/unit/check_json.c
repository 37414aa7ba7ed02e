/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The JSON writer: its layout to the byte, escapes, and what it makes of unknown numbers and of invalid UTF-8. */
#include "../support/unit.h"

#include <kelspan.h>
#include <math.h>
#include <string.h>

/* Compares and frees. */
static void
expect(kel_text *text, const char *want)
{
    ck_assert(!text->failed);
    ck_assert_str_eq(text->bytes, want);
    kel_text_free(text);
}

START_TEST(lays_out_members)
{
    kel_text text = KEL_TEXT_INIT;
    kel_json json;
    kel_json_begin(&json, &text);
    kel_json_object(&json, NULL);
    kel_json_number(&json, "t_K", 293.15);
    kel_json_count(&json, "n", UINT64_MAX);
    kel_json_bool(&json, "yes", true);
    kel_json_bool(&json, "no", false);
    kel_json_null(&json, "nothing");
    kel_json_string(&json, "text", "NT-40");
    kel_json_string(&json, "none", NULL);
    kel_json_numbers(&json, "x", (const double[]){ 1.0, -0.0, 2.5e-06 }, 3);
    kel_json_numbers(&json, "empty", NULL, 0);
    kel_json_raw(&json, "raw", "{\"a\":1}");
    kel_json_end(&json);
    expect(&text, "{\n"
                  "  \"t_K\": 293.15,\n"
                  "  \"n\": 18446744073709551615,\n"
                  "  \"yes\": true,\n"
                  "  \"no\": false,\n"
                  "  \"nothing\": null,\n"
                  "  \"text\": \"NT-40\",\n"
                  "  \"none\": null,\n"
                  "  \"x\": [1, -0, 2.5e-6],\n"
                  "  \"empty\": [],\n"
                  "  \"raw\": {\"a\":1}\n"
                  "}\n");
}
END_TEST

START_TEST(nests)
{
    kel_text text = KEL_TEXT_INIT;
    kel_json json;
    kel_json_begin(&json, &text);
    kel_json_object(&json, NULL);
    kel_json_array(&json, "a");
    kel_json_object(&json, NULL);
    kel_json_end(&json);
    kel_json_inline_object(&json, NULL);
    kel_json_number(&json, "p", 1.0);
    kel_json_object(&json, "q"); /* inherits the line */
    kel_json_array(&json, "r");
    kel_json_number(&json, NULL, 2.0);
    kel_json_number(&json, NULL, 3.0);
    kel_json_end(&json);
    kel_json_end(&json);
    kel_json_null(&json, "s");
    kel_json_end(&json);
    kel_json_inline_array(&json, NULL);
    kel_json_end(&json);
    kel_json_array(&json, NULL);
    kel_json_null(&json, NULL);
    kel_json_end(&json);
    kel_json_end(&json);
    kel_json_bool(&json, "after", true);
    kel_json_end(&json);
    expect(&text, "{\n"
                  "  \"a\": [\n"
                  "    {},\n"
                  "    {\"p\": 1, \"q\": {\"r\": [2, 3]}, \"s\": null},\n"
                  "    [],\n"
                  "    [\n"
                  "      null\n"
                  "    ]\n"
                  "  ],\n"
                  "  \"after\": true\n"
                  "}\n");
}
END_TEST

/* Objects in a row, as a stream of them has it, each end with a line. */
START_TEST(starts_anew)
{
    kel_text text = KEL_TEXT_INIT;
    kel_json json;
    kel_json_begin(&json, &text);
    for (int i = 0; i < 2; i++) {
        kel_json_inline_object(&json, NULL);
        kel_json_count(&json, "i", (uint64_t)i);
        kel_json_end(&json);
    }
    kel_json_number(&json, NULL, 7.0);
    expect(&text, "{\"i\": 0}\n{\"i\": 1}\n7\n");
}
END_TEST

START_TEST(unknown_is_null)
{
    kel_text text = KEL_TEXT_INIT;
    kel_json json;
    kel_json_begin(&json, &text);
    kel_json_numbers(&json, NULL, (const double[]){ NAN, INFINITY, -INFINITY, 0.0 }, 4);
    expect(&text, "[null, null, null, 0]\n");
}
END_TEST

static const struct escape { const char *label, *string, *want; } escapes[] = {
    { "empty", "", "\"\"\n" },
    { "quote and backslash", "a\"b\\c", "\"a\\\"b\\\\c\"\n" },
    { "named", "\b\f\n\r\t", "\"\\b\\f\\n\\r\\t\"\n" },
    { "first and last control", "\x01\x1F ", "\"\\u0001\\u001f \"\n" },
    { "DEL", "\x7F", "\"\\u007f\"\n" },
    { "slash stays", "dL/L0", "\"dL/L0\"\n" },
    { "UTF-8 stays", "10\xE2\x81\xBB\xE2\x81\xB6 \xF0\x9F\x8C\xA1",
      "\"10\xE2\x81\xBB\xE2\x81\xB6 \xF0\x9F\x8C\xA1\"\n" },
    { "stray bytes", "\xB0" "C\xFF", "\"\xEF\xBF\xBD" "C\xEF\xBF\xBD\"\n" },
    { "cut character", "a\xE2\x88", "\"a\xEF\xBF\xBD\xEF\xBF\xBD\"\n" },
    { "surrogate", "\xED\xA0\x80", "\"\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD\"\n" },
};

START_TEST(escapes_strings)
{
    kel_text text = KEL_TEXT_INIT;
    kel_json json;
    kel_json_begin(&json, &text);
    kel_json_string(&json, NULL, escapes[_i].string);
    ck_assert_msg(strcmp(text.bytes, escapes[_i].want) == 0, "%s: got %s", escapes[_i].label, text.bytes);
    kel_text_free(&text);
}
END_TEST

START_TEST(escapes_keys)
{
    kel_text text = KEL_TEXT_INIT;
    kel_json json;
    kel_json_begin(&json, &text);
    kel_json_inline_object(&json, NULL);
    kel_json_null(&json, "a\"\n");
    kel_json_end(&json);
    expect(&text, "{\"a\\\"\\n\": null}\n");
}
END_TEST

/* 63 levels are written; one more marks the text as failed, and closing them all is harmless. */
START_TEST(limits_depth)
{
    for (unsigned levels = 63; levels <= 70; levels++) {
        kel_text text = KEL_TEXT_INIT;
        kel_json json;
        kel_json_begin(&json, &text);
        for (unsigned d = 0; d < levels; d++)
            kel_json_inline_array(&json, NULL);
        for (unsigned d = 0; d < levels; d++)
            kel_json_end(&json);
        ck_assert_msg(text.failed == (levels > 63), "%u levels", levels);
        if (levels == 63)
            ck_assert_uint_eq(text.size, 2 * 63 + 1);
        kel_text_free(&text);
    }
}
END_TEST

KEL_TCASE(layout, lays_out_members, nests, starts_anew, unknown_is_null, escapes_keys, limits_depth)

static TCase *
tables(void)
{
    TCase *c = tcase_create("strings");
    tcase_add_loop_test(c, escapes_strings, 0, KEL_LENGTH(escapes));
    return c;
}

KEL_TEST_MAIN("json", layout, tables)
