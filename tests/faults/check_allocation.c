/* SPDX-License-Identifier: GPL-3.0-or-later */
/* libkelspan with every allocation failed in turn: records built, parsed, loaded, written, saved. And what must not
   allocate at all: every evaluation.

   Reading a JSON text can do without some allocations: what fails in jansson comes out as wrong syntax, which is
   believed only when it happens again (json_read.c), so that one lost block costs a second attempt. Building a record
   reads its annotations that way. */
#include <dirent.h>
#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include "../support/contents.h"
#include "losing.h"

/* An output that is no object: something that is not NULL. */
static char done;

static char directory[64];
static kel_text rich_text, small_text;
static kel_record *rich_record;
static rich filled;

static void
enter(void)
{
    strcpy(directory, "/tmp/kelspan-faults-XXXXXX");
    ck_assert_ptr_nonnull(mkdtemp(directory));
    rich_record = build_content(rich_content(&filled));
    rich_text = format_record(rich_record);
    kel_content small = small_content();
    kel_record *record = build_content(&small);
    small_text = format_record(record);
    kel_record_free(record);
    ck_assert_int_eq(chdir(directory), 0);
    ck_assert_int_eq(kel_file_save("rich.json", rich_text.bytes, rich_text.size, NULL), KEL_OK);
    ck_assert_int_eq(symlink("target.json", "link.json"), 0);
}

static void
leave(void)
{
    kel_record_free(rich_record);
    kel_text_free(&rich_text);
    kel_text_free(&small_text);
    ck_assert_int_eq(chdir(directory), 0);
    DIR *dir = opendir(".");
    for (struct dirent *e; (e = readdir(dir)) != NULL;)
        unlink(e->d_name);
    closedir(dir);
    ck_assert_int_eq(chdir("/"), 0);
    rmdir(directory);
}

/* ---- records ---- */

static void
describe_record(kel_text *text, void *output)
{
    kel_error err;
    KEL_REQUIRE(kel_record_format(text, output, &err) == KEL_OK, "%s", err.message);
}

static void
release_record(void *output)
{
    kel_record_free(output);
}

static void *
build(kel_status *status, const void *input, kel_error *err)
{
    kel_record *record = (kel_record *)&done;
    *status = kel_record_build(&record, input, err);
    return record;
}

static void *
parse(kel_status *status, const void *input, kel_error *err)
{
    const kel_text *text = input;
    kel_record *record = (kel_record *)&done;
    *status = kel_record_parse(&record, text->bytes, text->size, err);
    return record;
}

static void *
load(kel_status *status, const void *input, kel_error *err)
{
    kel_record *record = (kel_record *)&done;
    *status = kel_record_load(&record, input, err);
    return record;
}

START_TEST(records)
{
    const operation operations[] = {
        { "build", &filled.content, build, describe_record, release_record, SIZE_MAX, KEL_OK },
        { "parse a rich one", &rich_text, parse, describe_record, release_record, SIZE_MAX, KEL_OK },
        { "parse a small one", &small_text, parse, describe_record, release_record, SIZE_MAX, KEL_OK },
        { "load", "rich.json", load, describe_record, release_record, SIZE_MAX, KEL_OK },
    };
    lose_each(&operations[_i]);
}
END_TEST

/* What is wrong with a file is said, or that memory ran out; never another thing. */
static const struct { const char *file; kel_status status; } refused[] = {
    { "bad-record-1e400.json", KEL_E_RANGE },          { "bad-record-check-values.json", KEL_E_DIGEST },
    { "bad-record-comma.json", KEL_E_SYNTAX },         { "bad-record-cut.json", KEL_E_SYNTAX },
    { "bad-record-digest.json", KEL_E_DIGEST },        { "bad-record-duplicate-key.json", KEL_E_SYNTAX },
    { "bad-record-missing-key.json", KEL_E_DATA },     { "bad-record-newer.json", KEL_E_VERSION },
    { "bad-record-no-record.json", KEL_E_DATA },       { "bad-record-nul.json", KEL_E_SYNTAX },
    { "bad-record-pieces-apart.json", KEL_E_DATA },    { "bad-record-unknown-key.json", KEL_E_DATA },
    { "bad-record-wrong-type.json", KEL_E_DATA },
};

START_TEST(refused_records)
{
    char name[100];
    snprintf(name, sizeof name, "tests/data/%s", refused[_i].file);
    const operation op = { refused[_i].file, kel_test_file(name), load, NULL, NULL, 0, refused[_i].status };
    lose_each(&op);
}
END_TEST

/* ---- writing ---- */

static kel_text written;

static void *
format(kel_status *status, const void *input, kel_error *err)
{
    *status = kel_record_format(&written, input, err);
    if (*status == KEL_OK)
        return &done;
    kel_text_free(&written);
    return NULL;
}

static void
describe_written(kel_text *text, void *output)
{
    (void)output;
    kel_text_add_bytes(text, written.bytes, written.size);
}

static void
release_written(void *output)
{
    (void)output;
    kel_text_free(&written);
}

START_TEST(formatting)
{
    const operation op = { "format", rich_record, format, describe_written, release_written, 0, KEL_OK };
    lose_each(&op);
}
END_TEST

static void
put(const char *path, const char *bytes)
{
    int fd = open(path, O_WRONLY | O_CREAT | O_TRUNC, 0600);
    KEL_REQUIRE(fd >= 0 && write(fd, bytes, strlen(bytes)) == (ssize_t)strlen(bytes), "cannot write %s", path);
    close(fd);
}

static void
holds(const char *path, const char *bytes, size_t n)
{
    static char block[1 << 16];
    int fd = open(path, O_RDONLY);
    ssize_t got = fd < 0 ? -1 : read(fd, block, sizeof block);
    close(fd);
    KEL_REQUIRE(got == (ssize_t)n && memcmp(block, bytes, n) == 0, "%s: %zd bytes, not the %zu expected", path, got, n);
}

static size_t
entries(void)
{
    static char buffer[1 << 12] __attribute__((aligned(16)));
    size_t count = 0;
    int fd = open(".", O_RDONLY | O_DIRECTORY);
    for (ssize_t n; (n = getdents64(fd, buffer, sizeof buffer)) > 0;)
        for (ssize_t at = 0; at < n; count++)
            at += ((struct dirent64 *)(void *)(buffer + at))->d_reclen;
    close(fd);
    return count;
}

/* input: the path as given; target.json is where it leads. */
static void *
save(kel_status *status, const void *input, kel_error *err)
{
    put("target.json", "old");
    size_t before = entries();
    *status = kel_record_save(rich_record, input, err);
    KEL_REQUIRE(entries() == before, "something was left beside the target");
    if (*status == KEL_OK)
        holds("target.json", rich_text.bytes, rich_text.size);
    else
        holds("target.json", "old", 3);
    return *status == KEL_OK ? &done : NULL;
}

/* The directory is synchronised by its name, for which memory may be lacking: by then the file is in place. */
START_TEST(saving)
{
    const operation operations[] = {
        { "save", "target.json", save, NULL, NULL, 1, KEL_OK },
        { "save by a link", "link.json", save, NULL, NULL, 1, KEL_OK },
        { "save by an absolute path", NULL, save, NULL, NULL, 1, KEL_OK },
    };
    char path[100];
    snprintf(path, sizeof path, "%s/target.json", directory);
    operation op = operations[_i];
    if (op.input == NULL)
        op.input = path;
    lose_each(&op);
}
END_TEST

static void *
make_digest(kel_status *status, const void *input, kel_error *err)
{
    kel_digest *digest = (kel_digest *)&done;
    (void)input;
    *status = kel_digest_new(&digest, err);
    return digest;
}

static void
release_digest(void *output)
{
    kel_digest_free(output);
}

START_TEST(digests)
{
    const operation op = { "digest", NULL, make_digest, NULL, release_digest, 0, KEL_OK };
    lose_each(&op);
}
END_TEST

/* ---- evaluation ---- */

enum { N = 257 };

/* Every answer from a record with transitions, gaps and modes, inside and outside, with every allocation failing:
   none is made. */
START_TEST(evaluation_takes_no_memory)
{
    static double t[N], from[N], value[N], u[N], powers[KEL_COEFFICIENTS_MAX], powers_u[KEL_COEFFICIENTS_MAX];
    static unsigned char flags[N];
    kel_error err;
    kel_answer a;
    double covariance;
    for (int i = 0; i < N; i++) {
        t[i] = 4.0 * i;
        from[i] = 1000.0 - 3.0 * i;
    }
    from[N - 1] = -1.0; /* refused, with a message */
    allocation_arm(1, true);
    for (int i = 0; i < N; i++)
        for (int quantity = KEL_COEFFICIENT; quantity <= KEL_CHANGE; quantity++)
            for (int base = -1; base <= KEL_BASE_CURRENT; base++) {
                const double reference = i % 2 == 0 ? (double)NAN : 77.0;
                const kel_query q = { (kel_quantity)quantity, from[i], t[i], 300.0, reference, base };
                const kel_query other = { KEL_EXPANSION, 0.0, t[i], 0.0, NAN, -1 };
                kel_record_answer(&a, rich_record, &q, &err);
                kel_record_covariance(&covariance, rich_record, &q, &other, &err);
            }
    for (int i = 0; i < N; i++) {
        kel_record_coefficient(&a, rich_record, t[i], &err);
        kel_record_mean(&a, rich_record, from[i], t[i], &err);
        kel_record_expansion(&a, rich_record, t[i], &err);
        kel_record_integral(&a, rich_record, from[i], t[i], &err);
        kel_record_length_ratio(&a, rich_record, from[i], t[i], &err);
        kel_record_outside(rich_record, from[i], t[i]);
        kel_record_inside(rich_record, t[i]);
        kel_record_in_gap(rich_record, t[i]);
    }
    kel_status status[] = {
        kel_record_coefficient_n(value, u, flags, rich_record, t, N, &err),
        kel_record_mean_n(value, u, flags, rich_record, from, t, N - 1, &err),
        kel_record_expansion_n(value, u, NULL, rich_record, t, N, &err),
        kel_record_integral_n(value, NULL, NULL, rich_record, from, t, N - 1, &err),
        kel_record_length_ratio_n(value, u, flags, rich_record, from, t, N - 1, &err),
        kel_record_integral_n(value, u, flags, rich_record, from, t, N, &err),
        kel_record_powers(powers, powers_u, rich_record, 0, 0.0, 1.0, &err),
    };
    size_t calls = allocation_disarm();
    ck_assert_msg(calls == 0, "%zu allocations", calls);
    for (int i = 0; i < 5; i++)
        ck_assert_msg(status[i] == KEL_W_EXTRAPOLATED, "array call %d: %s", i, kel_status_text(status[i]));
    ck_assert_int_eq(status[5], KEL_E_RANGE);
    ck_assert_int_eq(status[6], KEL_OK);
}
END_TEST

/* Temperatures, units and numbers neither. */
START_TEST(reading_a_quantity_takes_no_memory)
{
    static const char *const units[] = {
        "1e-6/K", "um/(m.K)", "10\xE2\x81\xBB\xE2\x81\xB6 K\xE2\x81\xBB\xC2\xB9", "ppm/degF"
    };
    static const char number[] = "299792458.000000000000000000000000000000000000001e-3";
    kel_unit unit;
    double x;
    allocation_arm(1, true);
    for (int i = 0; i < KEL_LENGTH(units); i++) {
        kel_unit_parse(&unit, KEL_DIM_PER_KELVIN, units[i], strlen(units[i]), NULL);
        kel_unit_read(&x, NULL, &unit, "12.5", 4, NULL);
    }
    kel_number_read(&x, number, strlen(number), NULL);
    size_t calls = allocation_disarm();
    ck_assert_msg(calls == 0, "%zu allocations", calls);
    ck_assert_double_eq(x, 299792.458);
}
END_TEST

static TCase *
all(void)
{
    TCase *c = tcase_create("allocation");
    tcase_add_checked_fixture(c, enter, leave);
    tcase_add_loop_test(c, records, 0, 4);
    tcase_add_loop_test(c, refused_records, 0, KEL_LENGTH(refused));
    tcase_add_test(c, formatting);
    tcase_add_loop_test(c, saving, 0, 3);
    tcase_add_test(c, digests);
    tcase_add_test(c, evaluation_takes_no_memory);
    tcase_add_test(c, reading_a_quantity_takes_no_memory);
    return c;
}

LOSING_MAIN("allocation", all)
