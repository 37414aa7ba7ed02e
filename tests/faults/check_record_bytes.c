/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A record whose bytes are changed one at a time: each change is refused, or harmless.

   Harmless is what leaves the content as it was: the record that is read writes the same bytes as the unchanged one
   (blanks, another spelling of a number or a character). The member `annotations` is the user's and no part of the
   digest; a change in it may come out in it and nowhere else. */
#include "../support/contents.h"

/* Beside each bit flipped: what has a meaning in JSON, and what no text has. */
static const char others[] = " \n\"\\,:[]{}-+.eE019nt/\x80\xFF";

enum { CHANGES_MAX = 40 };

typedef struct original {
    const kel_text *text;
    kel_text bare;            /* written without the annotations */
    size_t first, end;        /* where the annotations' value is in the text; first = end: none */
} original;

/* The record's text without its annotations. */
static kel_text
write_bare(const kel_record *record)
{
    kel_content content = *kel_record_content(record);
    kel_record *copy;
    kel_error err;
    content.annotations = NULL;
    KEL_REQUIRE(kel_record_build(&copy, &content, &err) == KEL_OK, "%s", err.message);
    kel_text text = KEL_TEXT_INIT;
    KEL_REQUIRE(kel_record_format(&text, copy, &err) == KEL_OK, "%s", err.message);
    kel_record_free(copy);
    return text;
}

static void
begin(original *o, const kel_text *text)
{
    kel_record *record;
    kel_error err;
    *o = (original){ .text = text };
    ck_assert_msg(kel_record_parse(&record, text->bytes, text->size, &err) == KEL_OK, "%s", err.message);
    o->bare = write_bare(record);
    const char *key = strstr(text->bytes, "\"annotations\":");
    if (key != NULL) {
        o->first = (size_t)(key - text->bytes) + strlen("\"annotations\":");
        o->end = o->first + strlen(kel_record_content(record)->annotations) + 1;
    }
    kel_record_free(record);
}

/* Was it accepted? */
static bool
judge(const original *o, const char *bytes, size_t n, size_t at, const char *what)
{
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_record *record = (kel_record *)&err;
    kel_status status = kel_record_parse(&record, bytes, n, &err);
    if (status != KEL_OK) {
        KEL_REQUIRE(record == NULL && err.code == status && err.message[0] != '\0',
                    "byte %zu, %s: no clean error", at, what);
        KEL_REQUIRE(status == KEL_E_SYNTAX || status == KEL_E_DATA || status == KEL_E_DIGEST || status == KEL_E_RANGE ||
                    status == KEL_E_VERSION, "byte %zu, %s: %s: %s", at, what, kel_status_text(status), err.message);
        return false;
    }
    kel_text again = KEL_TEXT_INIT;
    KEL_REQUIRE(kel_record_format(&again, record, &err) == KEL_OK, "%s", err.message);
    if (again.size != o->text->size || memcmp(again.bytes, o->text->bytes, again.size) != 0) {
        KEL_REQUIRE(o->first <= at && at < o->end, "byte %zu, %s: accepted as another record", at, what);
        kel_text bare = write_bare(record);
        KEL_REQUIRE(bare.size == o->bare.size && memcmp(bare.bytes, o->bare.bytes, bare.size) == 0,
                    "byte %zu, %s: accepted, and not only the annotations differ", at, what);
        kel_text_free(&bare);
    }
    kel_text_free(&again);
    kel_record_free(record);
    return true;
}

static size_t
replacements(char out[CHANGES_MAX], char byte)
{
    size_t n = 0;
    for (int bit = 0; bit < 8; bit++)
        out[n++] = (char)(byte ^ (1 << bit));
    for (size_t i = 0; i < sizeof others; i++) /* its NUL too */
        if (others[i] != byte)
            out[n++] = others[i];
    return n;
}

/* Every `stride`-th byte, from `from`: replaced, taken out, doubled, changed places with the next one. */
static void
change_each(const original *o, size_t from, size_t stride)
{
    size_t n = o->text->size, accepted = 0, refused = 0;
    char *bytes = malloc(n + 1), with[CHANGES_MAX];
    for (size_t at = from; at < n; at += stride) {
        char what[40];
        memcpy(bytes, o->text->bytes, n);
        size_t count = replacements(with, bytes[at]);
        for (size_t k = 0; k < count; k++) {
            bytes[at] = with[k];
            snprintf(what, sizeof what, "replaced by 0x%02X", (unsigned char)with[k]);
            if (judge(o, bytes, n, at, what))
                accepted++;
            else
                refused++;
        }
        bytes[at] = o->text->bytes[at];
        memmove(bytes + at, bytes + at + 1, n - at - 1);
        judge(o, bytes, n - 1, at, "taken out");
        memcpy(bytes + at, o->text->bytes + at, n - at);
        memmove(bytes + at + 1, bytes + at, n - at);
        judge(o, bytes, n + 1, at, "doubled");
        memcpy(bytes + at, o->text->bytes + at, n - at);
        if (at + 1 < n) {
            bytes[at] = o->text->bytes[at + 1];
            bytes[at + 1] = o->text->bytes[at];
            judge(o, bytes, n, at, "swapped with the next");
        }
    }
    free(bytes);
    /* Most changes touch what the digest covers; some blanks are free. */
    ck_assert_uint_gt(accepted, 0);
    ck_assert_uint_gt(refused, 10 * accepted);
}

/* In parts, so that none takes long. Of the rich record, which is long, a share: what it has beyond the small one are
   more values of the same sorts. */
#if defined __SANITIZE_ADDRESS__
enum { PARTS = 8, SHARE = 16 };
#else
enum { PARTS = 8, SHARE = 4 };
#endif

START_TEST(rich_record)
{
    rich r;
    original o;
    kel_record *record = build_content(rich_content(&r));
    kel_text text = format_record(record);
    begin(&o, &text);
    ck_assert_uint_lt(o.first, o.end);
    change_each(&o, (size_t)_i, SHARE * PARTS);
    kel_record_free(record);
    kel_text_free(&text);
    kel_text_free(&o.bare);
}
END_TEST

START_TEST(small_record)
{
    original o;
    kel_content content = small_content();
    kel_record *record = build_content(&content);
    kel_text text = format_record(record);
    begin(&o, &text);
    change_each(&o, (size_t)_i, PARTS);
    kel_record_free(record);
    kel_text_free(&text);
    kel_text_free(&o.bare);
}
END_TEST

/* Within the annotations a change is the user's own, and the record stands. */
START_TEST(annotations_are_free)
{
    rich r;
    original o;
    kel_record *record = build_content(rich_content(&r));
    kel_text text = format_record(record);
    begin(&o, &text);
    char *limit = strstr(text.bytes + o.first, "1.50");
    ck_assert_ptr_nonnull(limit);
    limit[2] = '7';
    kel_text changed = KEL_TEXT_INIT;
    kel_text_add_bytes(&changed, text.bytes, text.size);
    limit[2] = '5';
    ck_assert(judge(&o, changed.bytes, changed.size, (size_t)(limit + 2 - text.bytes), "another limit"));
    kel_text_free(&changed);
    kel_record_free(record);
    kel_text_free(&text);
    kel_text_free(&o.bare);
}
END_TEST

static TCase *
all(void)
{
    TCase *c = tcase_create("bytes");
    tcase_add_loop_test(c, rich_record, 0, PARTS);
    tcase_add_loop_test(c, small_record, 0, PARTS);
    tcase_add_test(c, annotations_are_free);
    return c;
}

KEL_TEST_MAIN("record_bytes", all)
