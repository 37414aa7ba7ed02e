/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The growing text: what is added is there, and lack of memory is remembered. */
#include "../support/unit.h"

#include <float.h>
#include <kelspan.h>
#include <locale.h>
#include <math.h>
#include <stdint.h>
#include <string.h>

START_TEST(starts_empty)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add_bytes(&text, NULL, 0);
    ck_assert_str_eq(text.bytes, "");
    kel_text_free(&text);
    ck_assert_ptr_null(text.bytes);
    ck_assert_uint_eq(text.capacity, 0);
    kel_text_free(NULL);
}
END_TEST

/* Across many doublings each byte stays, and the terminator follows the last one. */
START_TEST(grows)
{
    kel_text text = KEL_TEXT_INIT;
    for (int i = 0; i < 5000; i++) {
        kel_text_printf(&text, "%d;", i);
        ck_assert_uint_lt(text.size, text.capacity);
        ck_assert_uint_eq(strlen(text.bytes), text.size);
    }
    const char *at = text.bytes;
    for (int i = 0; i < 5000; i++) {
        char *end;
        ck_assert_int_eq(strtol(at, &end, 10), i);
        ck_assert_int_eq(*end, ';');
        at = end + 1;
    }
    ck_assert_int_eq(*at, '\0');
    kel_text_free(&text);
}
END_TEST

/* A piece that just fills, or just exceeds, the capacity must not lose the terminator. */
START_TEST(fits_exactly)
{
    char piece[1024];
    memset(piece, 'x', sizeof piece);
    for (size_t n = 250; n <= 260; n++) {
        kel_text text = KEL_TEXT_INIT;
        kel_text_add_bytes(&text, piece, n);
        ck_assert_uint_eq(text.size, n);
        ck_assert_uint_eq(strlen(text.bytes), n);
        kel_text_printf(&text, "%.*s", (int)n, piece);
        ck_assert_uint_eq(strlen(text.bytes), 2 * n);
        kel_text_free(&text);
    }
}
END_TEST

START_TEST(keeps_nul_bytes)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add_bytes(&text, "a\0b", 3);
    kel_text_add(&text, "c");
    ck_assert_uint_eq(text.size, 4);
    ck_assert_mem_eq(text.bytes, "a\0bc", 5);
    kel_text_free(&text);
}
END_TEST

START_TEST(clears)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_clear(&text);
    ck_assert_uint_eq(text.size, 0);
    kel_text_add(&text, "something");
    size_t capacity = text.capacity;
    kel_text_clear(&text);
    ck_assert_str_eq(text.bytes, "");
    ck_assert_uint_eq(text.capacity, capacity);
    kel_text_add(&text, "else");
    ck_assert_str_eq(text.bytes, "else");
    kel_text_free(&text);
}
END_TEST

/* A request beyond all memory: the size is refused before any byte is read. */
START_TEST(remembers_failure)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "before");
    kel_text_add_bytes(&text, "x", SIZE_MAX - 2);
    ck_assert(text.failed);
    ck_assert_str_eq(text.bytes, "before");
    kel_text_add(&text, "after");
    kel_text_printf(&text, "%d", 1);
    kel_text_number(&text, 1.0);
    kel_text_quote(&text, "q", 1);
    ck_assert_str_eq(text.bytes, "before");
    kel_text_clear(&text);
    ck_assert_msg(text.failed, "a lost piece of a stream was forgotten");
    kel_text_free(&text);
    ck_assert(!text.failed);
}
END_TEST

static const struct quote { const char *label, *bytes; size_t n; const char *want; } quotes[] = {
    { "plain", "nt-40 (annealed).csv", 20, "nt-40 (annealed).csv" },
    { "nothing", "", 0, "" },
    { "UTF-8 of 2, 3 and 4 bytes", "\xC3\x9F\xE2\x88\x92\xF0\x9F\x8C\xA1", 9, "\xC3\x9F\xE2\x88\x92\xF0\x9F\x8C\xA1" },
    { "line ends and tab", "a\r\n\tb", 5, "a\\x0D\\x0A\\x09" "b" },
    { "escape sequence", "\x1B[31m", 5, "\\x1B[31m" },
    { "NUL", "a\0b", 3, "a\\x00" "b" },
    { "DEL", "\x7F", 1, "\\x7F" },
    { "first beyond DEL, a C1 control", "\xC2\x80", 2, "\\xC2\\x80" },
    { "C1 command introducer", "\xC2\x9B", 2, "\\xC2\\x9B" },
    { "last C1 control", "\xC2\x9F", 2, "\\xC2\\x9F" },
    { "no-break space is no control", "\xC2\xA0", 2, "\xC2\xA0" },
    { "line separator", "\xE2\x80\xA8", 3, "\\xE2\\x80\\xA8" },
    { "stray continuation byte", "a\x80z", 3, "a\\x80z" },
    { "cut character", "\xE2\x88", 2, "\\xE2\\x88" },
    { "overlong slash", "\xC0\xAF", 2, "\\xC0\\xAF" },
    { "overlong of three bytes", "\xE0\x9F\xBF", 3, "\\xE0\\x9F\\xBF" },
    { "surrogate", "\xED\xA0\x80", 3, "\\xED\\xA0\\x80" },
    { "last character", "\xF4\x8F\xBF\xBF", 4, "\xF4\x8F\xBF\xBF" },
    { "beyond the last character", "\xF4\x90\x80\x80", 4, "\\xF4\\x90\\x80\\x80" },
    { "no lead byte", "\xFF\xFE", 2, "\\xFF\\xFE" },
    { "Latin-1 degree sign", "20 \xB0" "C", 5, "20 \\xB0" "C" },
};

START_TEST(quotes_data)
{
    const struct quote *q = &quotes[_i];
    kel_text text = KEL_TEXT_INIT;
    kel_text_quote(&text, q->bytes, q->n);
    ck_assert_msg(q->n == 0 || strcmp(text.bytes, q->want) == 0, "%s: got '%s', expected '%s'", q->label, text.bytes,
                  q->want);
    ck_assert_uint_eq(text.size, strlen(q->want));
    kel_text_free(&text);
}
END_TEST

static const struct number { double x; const char *want; } numbers[] = {
    { 0.0, "0" }, { -0.0, "-0" }, { 293.15, "293.15" }, { 1.0 / 3.0, "0.3333333333333333" }, { -8.4e-06, "-8.4e-6" },
    { DBL_MAX, "1.7976931348623157e308" }, { 5e-324, "5e-324" }, { NAN, "nan" }, { INFINITY, "inf" }, { -INFINITY,
      "-inf" },
};

/* The last two locales have a decimal comma; where they are not installed the C locale is all there is to test. */
START_TEST(writes_numbers)
{
    static const char *const locales[] = { "C", "de_DE.UTF-8", "fr_FR.UTF-8" };
    for (int l = 0; l < KEL_LENGTH(locales); l++) {
        if (setlocale(LC_ALL, locales[l]) == NULL)
            continue;
        kel_text text = KEL_TEXT_INIT;
        kel_text_number(&text, numbers[_i].x);
        ck_assert_str_eq(text.bytes, numbers[_i].want);
        kel_text_free(&text);
    }
}
END_TEST

KEL_TCASE(basics, starts_empty, grows, fits_exactly, keeps_nul_bytes, clears, remembers_failure)

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, quotes_data, 0, KEL_LENGTH(quotes));
    tcase_add_loop_test(c, writes_numbers, 0, KEL_LENGTH(numbers));
    return c;
}

KEL_TEST_MAIN("text", basics, tables)
