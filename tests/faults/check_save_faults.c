/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Saving a record when the system fails or the process is ended: the target holds the old record or the new one,
   whole; nothing else stays beside it, except after a kill, when a temporary file of the documented name may. */
#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

#include "../support/contents.h"
#include "failing_files.h"

enum { CHUNK = 700, KILLS = 200 };

static char directory[64];
static kel_record *old_record, *new_record;
static kel_text old_text, new_text;

static void
enter(void)
{
    rich r;
    kel_content small = small_content();
    strcpy(directory, "/tmp/kelspan-faults-XXXXXX");
    ck_assert_ptr_nonnull(mkdtemp(directory));
    ck_assert_int_eq(chdir(directory), 0);
    old_record = build_content(&small);
    new_record = build_content(rich_content(&r));
    old_text = format_record(old_record);
    new_text = format_record(new_record);
}

/* Removes what begins so, counts it and what else there is. */
static size_t
sweep(const char *beginning, size_t *others)
{
    size_t n = 0;
    DIR *dir = opendir(".");
    *others = 0;
    for (struct dirent *e; (e = readdir(dir)) != NULL;)
        if (strncmp(e->d_name, beginning, strlen(beginning)) == 0 && strspn(e->d_name, ".") < strlen(e->d_name)) {
            unlink(e->d_name);
            n++;
        } else if (strcmp(e->d_name, ".") != 0 && strcmp(e->d_name, "..") != 0) {
            ++*others;
        }
    closedir(dir);
    return n;
}

static void
leave_directory(void)
{
    size_t others;
    sweep("", &others);
    ck_assert_int_eq(chdir("/"), 0);
    rmdir(directory);
    kel_record_free(old_record);
    kel_record_free(new_record);
    kel_text_free(&old_text);
    kel_text_free(&new_text);
}

static bool
holds(const char *path, const kel_text *text)
{
    static char block[1 << 16];
    FILE *f = fopen(path, "rb");
    size_t n = f == NULL ? 0 : fread(block, 1, sizeof block, f);
    if (f != NULL)
        fclose(f);
    return f != NULL && n == text->size && memcmp(block, text->bytes, n) == 0;
}

static void
put_old(bool there)
{
    kel_error err;
    if (there)
        KEL_REQUIRE(kel_record_save(old_record, "r.json", &err) == KEL_OK, "%s", err.message);
    else
        unlink("r.json");
}

/* The file with its temporary one: at least these calls make a save, and each of them is reached. */
static const char *const expected_calls[] = { "open", "write", "fsync", "close", "rename" };

/* Once over a file, once where none is. Without the last two calls, which synchronise the directory, the new file is in
   place: their failure is no failure. */
START_TEST(every_call_fails_in_turn)
{
    static const int errors[] = { EIO, ENOSPC, EDQUOT, EACCES };
    bool there = _i % 2 == 0;
    int error = errors[_i / 2];
    kel_error err;
    bool reached[KEL_LENGTH(expected_calls)] = { false };
    put_old(there);
    files_arm(0, FILE_FAIL, 0, CHUNK);
    KEL_REQUIRE(kel_record_save(new_record, "r.json", &err) == KEL_OK, "%s", err.message);
    size_t calls = files_disarm();
    ck_assert_uint_ge(calls, 5 + new_text.size / CHUNK);
    ck_assert(holds("r.json", &new_text));
    size_t failures = 0;
    for (size_t n = 1; n <= calls; n++) {
        size_t others;
        put_old(there);
        err = (kel_error){ KEL_OK, 0, 0, "" };
        files_arm(n, FILE_FAIL, error, CHUNK);
        kel_status status = kel_record_save(new_record, "r.json", &err);
        files_disarm();
        KEL_REQUIRE(files_failed() != NULL, "call %zu was not reached", n);
        for (int i = 0; i < KEL_LENGTH(expected_calls); i++)
            reached[i] = reached[i] || strcmp(files_failed(), expected_calls[i]) == 0;
        size_t left = sweep(".kelspan-", &others);
        KEL_REQUIRE(left == 0, "%s, call %zu: %zu temporary files left", files_failed(), n, left);
        if (status == KEL_OK) {
            KEL_REQUIRE(holds("r.json", &new_text), "%s, call %zu: said to be saved, and is not", files_failed(), n);
            continue;
        }
        failures++;
        char want[200];
        snprintf(want, sizeof want, "cannot write 'r.json': %s", strerror(error));
        KEL_REQUIRE(status == KEL_E_IO && strcmp(err.message, want) == 0, "%s, call %zu: %s: %s", files_failed(), n,
                    kel_status_text(status), err.message);
        KEL_REQUIRE(there ? holds("r.json", &old_text) && others == 1 : others == 0, "%s, call %zu: the old file",
                    files_failed(), n);
    }
    for (int i = 0; i < KEL_LENGTH(expected_calls); i++)
        ck_assert_msg(reached[i], "a save without %s", expected_calls[i]);
    /* The directory's open, fsync and close. */
    ck_assert_uint_eq(failures, calls - 3);
}
END_TEST

/* A signal that interrupts a write or an open is no failure; fsync and rename are not interrupted. */
START_TEST(interrupted_calls_are_repeated)
{
    kel_error err;
    put_old(true);
    files_arm(0, FILE_FAIL, 0, CHUNK);
    kel_record_save(new_record, "r.json", &err);
    size_t calls = files_disarm(), writes = 0;
    for (size_t n = 1; n <= calls; n++) {
        put_old(true);
        files_arm(n, FILE_INTERRUPT, 0, CHUNK);
        kel_status status = kel_record_save(new_record, "r.json", &err);
        files_disarm();
        if (strcmp(files_failed(), "write") != 0 && strcmp(files_failed(), "open") != 0)
            continue;
        KEL_REQUIRE(status == KEL_OK && holds("r.json", &new_text), "%s, call %zu: %s", files_failed(), n, err.message);
        writes++;
    }
    ck_assert_uint_gt(writes, new_text.size / CHUNK);
}
END_TEST

/* ---- kill -9 ---- */

/* After a child was killed while it saved: whole, old or new; and at most one temporary file, which is ours by its
   name. Says whether the new one is there. */
static bool
survived(bool there, const char *when, size_t number)
{
    size_t others;
    bool is_new = holds("r.json", &new_text);
    KEL_REQUIRE(is_new || (there ? holds("r.json", &old_text) : access("r.json", F_OK) != 0),
                "%s %zu: the file is neither the old nor the new record", when, number);
    size_t left = sweep(".kelspan-", &others);
    KEL_REQUIRE(left <= 1 && others == (is_new || there), "%s %zu: %zu temporary files and %zu others", when,
                number, left, others);
    return is_new;
}

/* At each call: before it, behind it, and when half of what it writes is written. */
START_TEST(killed_at_every_call)
{
    bool there = _i % 2 == 0;
    size_t olds = 0, news = 0, calls = SIZE_MAX;
    for (int kind = FILE_KILL_BEFORE; kind <= FILE_KILL_WITHIN; kind++) {
        calls = SIZE_MAX;
        for (size_t n = 1; n < calls; n++) {
            int status;
            put_old(there);
            pid_t child = fork();
            if (child == 0) {
                files_arm(n, (file_fault)kind, 0, CHUNK);
                _exit(kel_record_save(new_record, "r.json", NULL) == KEL_OK ? 0 : 1);
            }
            ck_assert_int_eq(waitpid(child, &status, 0), child);
            if (survived(there, "kill at call", n))
                news++;
            else
                olds++;
            if (WIFEXITED(status)) {
                ck_assert_int_eq(WEXITSTATUS(status), 0);
                calls = n;
            }
        }
    }
    ck_assert_uint_ge(olds, 3 * (3 + new_text.size / CHUNK));
    ck_assert_uint_ge(news, 3 * 3);
}
END_TEST

static uint64_t
next_random(uint64_t *state)
{
    *state ^= *state << 13;
    *state ^= *state >> 7;
    *state ^= *state << 17;
    return *state;
}

static uint64_t
now(void)
{
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return (uint64_t)t.tv_sec * 1000000000u + (uint64_t)t.tv_nsec;
}

/* At seeded moments of a process that saves one and the other without end. */
START_TEST(killed_at_any_moment)
{
    uint64_t state = 20240607;
    put_old(true);
    uint64_t begin = now();
    for (int i = 0; i < 8; i++)
        kel_record_save(i % 2 == 0 ? new_record : old_record, "r.json", NULL);
    const uint64_t one = (now() - begin) / 8 + 1;
    for (size_t i = 0; i < KILLS; i++) {
        int status, ready[2];
        char byte;
        put_old(true);
        ck_assert_int_eq(pipe(ready), 0);
        pid_t child = fork();
        if (child == 0) {
            if (write(ready[1], "", 1) != 1)
                _exit(2);
            for (int turn = 0;; turn++)
                if (kel_record_save(turn % 2 == 0 ? new_record : old_record, "r.json", NULL) != KEL_OK)
                    _exit(1);
        }
        ck_assert_int_eq(read(ready[0], &byte, 1), 1);
        uint64_t wait = next_random(&state) % (2 * one);
        struct timespec pause = { (time_t)(wait / 1000000000u), (long)(wait % 1000000000u) };
        nanosleep(&pause, NULL);
        kill(child, SIGKILL);
        ck_assert_int_eq(waitpid(child, &status, 0), child);
        ck_assert(WIFSIGNALED(status));
        close(ready[0]);
        close(ready[1]);
        survived(true, "kill", i);
    }
}
END_TEST

static TCase *
all(void)
{
    TCase *c = tcase_create("save");
    tcase_add_checked_fixture(c, enter, leave_directory);
    tcase_add_loop_test(c, every_call_fails_in_turn, 0, 8);
    tcase_add_test(c, interrupted_calls_are_repeated);
    tcase_add_loop_test(c, killed_at_every_call, 0, 2);
    tcase_add_test(c, killed_at_any_moment);
    return c;
}

KEL_TEST_MAIN("save_faults", all)
