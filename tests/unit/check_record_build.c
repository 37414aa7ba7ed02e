/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Building: a deep copy with mended strings, check values where they belong, a digest of the right bytes,
   annotations as given. */
#include "../support/contents.h"

#include "record_parts.h"

START_TEST(copies_deeply)
{
    rich *r = malloc(sizeof *r);
    kel_record *record = build_content(rich_content(r));
    kel_text before = format_record(record);
    /* What was given may go. */
    memset(r, 0xA5, sizeof *r);
    free(r);
    kel_text after = format_record(record);
    ck_assert_str_eq(before.bytes, after.bytes);
    kel_text_free(&before);
    kel_text_free(&after);
    kel_record_free(record);
    kel_record_free(NULL);
    ck_assert_ptr_null(kel_record_content(NULL));
}
END_TEST

START_TEST(refuses_by_argument)
{
    kel_error err;
    kel_content content = small_content();
    kel_record *record = (kel_record *)&content;
    ck_assert_int_eq(kel_record_build(&record, NULL, &err), KEL_E_ARGUMENT);
    ck_assert_ptr_null(record);
    ck_assert_int_eq(kel_record_build(NULL, &content, NULL), KEL_E_ARGUMENT);
    content.base = (kel_base)7;
    record = (kel_record *)&content;
    ck_assert_int_eq(kel_record_build(&record, &content, &err), KEL_E_ARGUMENT);
    ck_assert_ptr_null(record);
    ck_assert_str_eq(err.message, "base is not a known word");
}
END_TEST

/* alpha = 1.5e-5 + 2e-6 x, x = (T - 200)/100: e(T) = 1.5e-5 (T - R) + 1e-8 [(T - 200)^2 - (R - 200)^2], R = 293.15
   K. */
START_TEST(makes_check_values)
{
    static const struct { const char *label; double at; const char *coefficient, *expansion; } want[] = {
        { "begin", 100.0, "1.3e-5", "-0.00288401922500" },
        { "quarter", 150.0, "1.4e-5", "-0.00220901922500" },
        { "middle", 200.0, "1.5e-5", "-0.00148401922500" },
        { "three quarters", 250.0, "1.6e-5", "-0.00070901922500" },
        { "end", 300.0, "1.7e-5", "0.00011598077500" },
        { "reference", 293.15, "1.6863e-5", "0" },
    };
    kel_content content = small_content();
    kel_record *record = build_content(&content);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->check_count, (size_t)KEL_LENGTH(want));
    for (size_t i = 0; i < c->check_count; i++) {
        ck_assert_double_eq(c->checks[i].at, want[i].at);
        ck_assert_lre_for(want[i].label, c->checks[i].coefficient, strtod(want[i].coefficient, NULL), 15.0);
        /* e is within a few eps of width times sum |c_k|. */
        ck_assert_abs_for(want[i].label, c->checks[i].expansion, strtod(want[i].expansion, NULL), 1e-17 * 200.0, "1");
    }
    ck_assert_double_eq(c->checks[5].expansion, 0.0);
    kel_record_free(record);
}
END_TEST

static const struct span { const char *label; double lo, hi, reference; size_t count; } spans[] = {
    { "reference outside", 100.0, 290.0, 293.15, 5 },
    { "reference is the end", 100.0, 293.15, 293.15, 5 },
    { "reference is the middle", 286.3, 300.0, 293.15, 5 },
    { "reference elsewhere inside", 100.0, 300.0, 293.15, 6 },
    { "one temperature", 150.0, 150.0, 293.15, 1 },
    { "one temperature, the reference", 293.15, 293.15, 293.15, 1 },
};

START_TEST(places_check_values)
{
    const struct span *s = &spans[_i];
    kel_content content = small_content();
    content.range = (kel_interval){ s->lo, s->hi };
    content.reference_temperature = s->reference;
    kel_record *record = build_content(&content);
    const kel_content *c = kel_record_content(record);
    ck_assert_msg(c->check_count == s->count, "%s: got %zu check values", s->label, c->check_count);
    ck_assert_double_eq(c->checks[0].at, s->lo);
    ck_assert(c->check_count < 5 || c->checks[4].at == s->hi);
    for (size_t i = 1; i < c->check_count && i < 5; i++)
        ck_assert_double_lt(c->checks[i - 1].at, c->checks[i].at);
    kel_record_free(record);
}
END_TEST

START_TEST(refuses_a_curve_beyond_doubles)
{
    const double mean[] = { 1.5e308, 1.5e308 };
    kel_content content = small_content();
    kel_record *record;
    kel_error err;
    content.mean.coefficients = mean;
    ck_assert_int_eq(kel_record_build(&record, &content, &err), KEL_E_ARGUMENT);
    ck_assert_str_eq(err.message, "the curve has no finite coefficient and expansion at 100 K");
}
END_TEST

/* The digest is SHA-256 of the text without the two members at the end. */
START_TEST(digests_the_text)
{
    rich r;
    char hex[65];
    kel_error err;
    kel_digest *digest;
    kel_record *record = build_content(rich_content(&r));
    kel_text text = format_record(record);
    const char *end = strstr(text.bytes, ",\n  \"digest\": ");
    ck_assert_ptr_nonnull(end);
    ck_assert_int_eq(kel_digest_new(&digest, &err), KEL_OK);
    kel_digest_add(digest, text.bytes, (size_t)(end - text.bytes));
    kel_digest_add(digest, "\n}\n", 3);
    kel_digest_finish(digest, hex);
    kel_digest_free(digest);
    ck_assert_str_eq(kel_record_content(record)->digest, hex);
    kel_text_free(&text);
    kel_record_free(record);
}
END_TEST

START_TEST(mends_strings)
{
    rich r;
    kel_content *content = rich_content(&r);
    r.sources[0].name = "stra\xDF" "e.csv";
    r.sources[0].digest = "";
    r.modes[0].label = "\xE2\x88";
    r.rows[3].left_out = "\xF4\x90\x80\x80";
    kel_record *record = build_content(content);
    const kel_content *c = kel_record_content(record);
    ck_assert_str_eq(c->sources[0].name, "stra\xEF\xBF\xBD" "e.csv");
    ck_assert_ptr_null(c->sources[0].digest);
    ck_assert_str_eq(c->modes[0].label, "\xEF\xBF\xBD\xEF\xBF\xBD");
    ck_assert_str_eq(c->rows[3].left_out, "\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD");
    kel_record_free(record);
}
END_TEST

static const struct annotation { const char *label, *given, *kept, *message; size_t line, column; } annotations[] = {
    { "none", NULL, NULL, NULL, 0, 0 },
    { "empty", "{}", "{}", NULL, 0, 0 },
    { "blanks around", "\n {\"a\" :1.50 }\t\n", "{\"a\" :1.50 }", NULL, 0, 0 },
    { "brackets in strings", "{\"}\": \"{\\\"\", \"b\": [\"]\", {}]}", "{\"}\": \"{\\\"\", \"b\": [\"]\", {}]}", NULL,
      0, 0 },
    { "integer beyond a double's", "{\"n\": 12345678901234567890}", "{\"n\": 12345678901234567890}", NULL, 0, 0 },
    { "not an object", "[1]", NULL, "annotations: annotations is not an object", 0, 0 },
    { "no JSON", "{\"a\": }", NULL, "annotations: not valid JSON: ", 1, 7 },
    { "nothing", "", NULL, "annotations: not valid JSON: ", 1, 1 },
    { "second line", "{\"a\": 1,\n \"b\" 2}", NULL, "annotations: not valid JSON: ", 2, 6 },
    { "duplicate", "{\"a\": 1, \"a\": 1}", NULL, "annotations: not valid JSON: the key that ends here occurs twice", 1,
      12 },
    { "second member", "{}, \"more\": {}", NULL, "annotations: more is not a known key", 0, 0 },
    { "closes more than it opens", "{}}, {", NULL, "annotations: not valid JSON: ", 1, 4 },
    { "invalid UTF-8", "{\"a\": \"\xFF\"}", NULL, "annotations: not valid JSON: ", 0, 0 },
    { "beyond a double", "{\"a\": 1e400}", NULL,
      "annotations: not valid JSON: a number is beyond the range of a double", 1, 11 },
};

START_TEST(keeps_annotations)
{
    const struct annotation *a = &annotations[_i];
    kel_content content = small_content();
    kel_record *record;
    kel_error err = { 0 };
    content.annotations = a->given;
    kel_status status = kel_record_build(&record, &content, &err);
    if (a->message == NULL) {
        ck_assert_msg(status == KEL_OK, "%s: %s", a->label, err.message);
        const char *kept = kel_record_content(record)->annotations;
        ck_assert_msg(kept == a->kept || strcmp(kept, a->kept) == 0, "%s: kept '%s'", a->label, kept);
    } else {
        ck_assert_msg(status == KEL_E_ARGUMENT, "%s: status %d", a->label, (int)status);
        ck_assert_msg(strncmp(err.message, a->message, strlen(a->message)) == 0, "%s: got '%s'", a->label, err.message);
        ck_assert_msg(a->line == 0 || (err.line == a->line && err.column == a->column), "%s: at %zu:%zu", a->label,
                      err.line,
                      err.column);
    }
    kel_record_free(record);
}
END_TEST

/* A record is not built that its own reader would refuse. */
START_TEST(limits_the_size)
{
    kel_content content = small_content();
    kel_record *record;
    kel_error err;
    size_t n = KEL__RECORD_LARGEST - 1000;
    char *long_text = malloc(n + 20);
    strcpy(long_text, "{\"a\": \"");
    memset(long_text + 7, 'x', n);
    strcpy(long_text + 7 + n, "\"}");
    content.annotations = long_text;
    ck_assert_int_eq(kel_record_build(&record, &content, &err), KEL_E_ARGUMENT);
    ck_assert_str_eq(err.message, "the record would be larger than 16 MiB");
    memmove(long_text + 7 + n - 2000, "\"}", 3);
    record = build_content(&content);
    kel_text text = format_record(record);
    ck_assert_uint_le(text.size, KEL__RECORD_LARGEST);
    kel_record_free(record);
    ck_assert_int_eq(kel_record_parse(&record, text.bytes, text.size, &err), KEL_OK);
    kel_record_free(record);
    kel_text_free(&text);
    free(long_text);
}
END_TEST

KEL_TCASE(single, copies_deeply, refuses_by_argument, makes_check_values, refuses_a_curve_beyond_doubles,
          digests_the_text,
          mends_strings, limits_the_size)

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, places_check_values, 0, KEL_LENGTH(spans));
    tcase_add_loop_test(c, keeps_annotations, 0, KEL_LENGTH(annotations));
    return c;
}

KEL_TEST_MAIN("record_build", single, tables)
