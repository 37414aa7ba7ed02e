/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Records from files: those of tests/data that must load, those that must not, and what is no file. */
#include "../support/contents.h"

#include <sys/stat.h>
#include <unistd.h>

static const struct row { const char *file; kel_status status; size_t line; const char *message; } rows[] = {
    { "good-record.json", KEL_OK, 0, NULL },
    { "good-record-other-layout.json", KEL_OK, 0, NULL },
    { "good-record-modes.json", KEL_OK, 0, NULL },
    { "bad-record-unknown-key.json", KEL_E_DATA, 0, "referance_defaulted is not a known key" },
    { "bad-record-missing-key.json", KEL_E_DATA, 0, "pieces[0].to_K is missing" },
    { "bad-record-duplicate-key.json", KEL_E_SYNTAX, 5, "not valid JSON: the key that ends here occurs twice" },
    { "bad-record-cut.json", KEL_E_SYNTAX, 11, "not valid JSON: it ends too early" },
    { "bad-record-1e400.json", KEL_E_RANGE, 10, "not valid JSON: a number is beyond the range of a double" },
    { "bad-record-comma.json", KEL_E_SYNTAX, 5, "not valid JSON: wrong syntax near '15'" },
    { "bad-record-nul.json", KEL_E_SYNTAX, 3, "not valid JSON: it holds a NUL byte" },
    { "bad-record-wrong-type.json", KEL_E_DATA, 0, "range_K[1] is not a number" },
    { "bad-record-pieces-apart.json", KEL_E_DATA, 0,
      "pieces[1].from_K = 200.5 must equal the end of the piece before, 200" },
    { "bad-record-digest.json", KEL_E_DIGEST, 0, "the content does not match its digest" },
    { "bad-record-check-values.json", KEL_E_DIGEST, 0,
      "the check value of the coefficient at 150 K is 0.000013 1/K, but the curve gives 0.000014 1/K" },
    { "bad-record-newer.json", KEL_E_VERSION, 0,
      "written by a newer kelspan (record version 2, this one reads up to 1)" },
    { "bad-record-no-record.json", KEL_E_DATA, 0, "not a record: the key kelspan_record is missing" },
    { "bad-record-empty.json", KEL_E_SYNTAX, 1, "not a record: it is empty" },
};

START_TEST(loads_or_says_why_not)
{
    const struct row *row = &rows[_i];
    char name[100];
    kel_error err = { 0 };
    kel_record *record = (kel_record *)&err;
    snprintf(name, sizeof name, "tests/data/%s", row->file);
    kel_status status = kel_record_load(&record, kel_test_file(name), &err);
    ck_assert_msg(status == row->status, "%s: %s: %s", row->file, kel_status_text(status), err.message);
    ck_assert((record != NULL) == (status == KEL_OK));
    if (status != KEL_OK) {
        ck_assert_msg(strncmp(err.message, row->message, strlen(row->message)) == 0, "%s: got '%s'", row->file,
                      err.message);
        ck_assert_msg(err.line == row->line, "%s: line %zu", row->file, err.line);
    }
    kel_record_free(record);
}
END_TEST

/* The one layout is the writer's, the other one was made by hand; the record is the same. */
START_TEST(layouts_agree)
{
    kel_error err;
    kel_record *one, *two;
    ck_assert_int_eq(kel_record_load(&one, kel_test_file("tests/data/good-record.json"), &err), KEL_OK);
    ck_assert_int_eq(kel_record_load(&two, kel_test_file("tests/data/good-record-other-layout.json"), &err), KEL_OK);
    kel_text first = format_record(one), second = format_record(two);
    ck_assert_str_eq(first.bytes, second.bytes);
    FILE *file = fopen(kel_test_file("tests/data/good-record.json"), "rb");
    ck_assert_ptr_nonnull(file);
    char *bytes = malloc(first.size + 1);
    ck_assert_uint_eq(fread(bytes, 1, first.size + 1, file), first.size);
    ck_assert_mem_eq(bytes, first.bytes, first.size);
    fclose(file);
    free(bytes);
    kel_text_free(&first);
    kel_text_free(&second);
    kel_record_free(one);
    kel_record_free(two);
}
END_TEST

/* The example of kelspan-record(5), which breaks its long lines: a record, and its arithmetic in the page. */
START_TEST(manual_example)
{
    FILE *file = fopen(kel_test_file("man/kelspan-record.5"), "rb");
    ck_assert_ptr_nonnull(file);
    static char page[1 << 16];
    size_t n = fread(page, 1, sizeof page - 1, file);
    fclose(file);
    ck_assert_uint_lt(n, sizeof page - 1);
    page[n] = '\0';
    const char *begin = strstr(page, "\n.Bd -literal\n{\n"), *end = begin == NULL ? NULL : strstr(begin, "\n.Ed\n");
    ck_assert_ptr_nonnull(end);
    begin += strlen("\n.Bd -literal\n");
    kel_record *record;
    kel_answer e;
    kel_error err = { 0 };
    kel_status status = kel_record_parse(&record, begin, (size_t)(end - begin), &err);
    ck_assert_msg(status == KEL_OK, "%s (line %zu, column %zu of the example)", err.message, err.line, err.column);
    ck_assert_int_eq(kel_record_expansion(&e, record, 77.0, &err), KEL_W_TRANSITION);
    ck_assert_published(e.value, "-1.68395e-3");
    kel_record_free(record);
}
END_TEST

START_TEST(names_the_reason)
{
    kel_error err;
    kel_record *record;
    ck_assert_int_eq(kel_record_load(&record, "/no/such/record.json", &err), KEL_E_IO);
    ck_assert_str_eq(err.message, "cannot read '/no/such/record.json': No such file or directory");
    ck_assert_int_eq(kel_record_load(&record, "/", &err), KEL_E_IO);
    ck_assert_str_eq(err.message, "cannot read '/': Is a directory");
    ck_assert_int_eq(kel_record_load(&record, NULL, &err), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_load(NULL, "/", &err), KEL_E_ARGUMENT);
}
END_TEST

/* A source without end is given up at the limit. */
START_TEST(gives_up_what_has_no_end)
{
    kel_error err;
    kel_record *record;
    ck_assert_int_eq(kel_record_load(&record, "/dev/zero", &err), KEL_E_DATA);
    ck_assert_str_eq(err.message, "not a record: it is larger than 16 MiB");
}
END_TEST

KEL_TCASE(single, layouts_agree, manual_example, names_the_reason, gives_up_what_has_no_end)

static TCase *
tables(void)
{
    TCase *c = tcase_create("files");
    tcase_add_loop_test(c, loads_or_says_why_not, 0, KEL_LENGTH(rows));
    return c;
}

KEL_TEST_MAIN("record_load", single, tables)
