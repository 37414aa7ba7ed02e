/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Writing files: what was there stays until all is written, links stay links, devices stay devices, permissions
   stay. */
#include "../support/contents.h"

#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <pthread.h>
#include <signal.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <unistd.h>

/* Each test works in an empty directory of its own. */
static char directory[64];

static void
enter(void)
{
    strcpy(directory, "/tmp/kelspan-save-XXXXXX");
    ck_assert_ptr_nonnull(mkdtemp(directory));
    ck_assert_int_eq(chdir(directory), 0);
    umask(022);
}

static void
clear(const char *path)
{
    DIR *dir = opendir(path);
    if (dir == NULL)
        return;
    for (struct dirent *e; (e = readdir(dir)) != NULL;) {
        char name[600];
        if (strcmp(e->d_name, ".") == 0 || strcmp(e->d_name, "..") == 0)
            continue;
        snprintf(name, sizeof name, "%s/%s", path, e->d_name);
        if (unlink(name) != 0) {
            chmod(name, 0700);
            clear(name);
        }
    }
    closedir(dir);
    rmdir(path);
}

static void
leave(void)
{
    ck_assert_int_eq(chdir("/"), 0);
    clear(directory);
}

/* Entries of the directory: nothing temporary may be left. */
static size_t
entries(const char *path)
{
    size_t n = 0;
    DIR *dir = opendir(path);
    while (readdir(dir) != NULL)
        n++;
    closedir(dir);
    return n - 2;
}

static void
put(const char *path, const char *text)
{
    int fd = open(path, O_WRONLY | O_CREAT | O_TRUNC, 0644);
    ck_assert_int_ge(fd, 0);
    ck_assert_int_eq((int)write(fd, text, strlen(text)), (int)strlen(text));
    close(fd);
}

static void
holds(const char *path, const char *want)
{
    char got[1000] = "";
    int fd = open(path, O_RDONLY);
    ck_assert_msg(fd >= 0, "%s: %s", path, strerror(errno));
    ssize_t n = read(fd, got, sizeof got - 1);
    close(fd);
    ck_assert_int_eq((int)n, (int)strlen(want));
    ck_assert_str_eq(got, want);
}

static void
save(const char *path, const char *text)
{
    kel_error err = { 0 };
    kel_status status = kel_file_save(path, text, strlen(text), &err);
    ck_assert_msg(status == KEL_OK, "%s: %s", path, err.message);
}

static void
fails(const char *path, const char *want)
{
    kel_error err = { 0 };
    ck_assert_int_eq(kel_file_save(path, "new", 3, &err), KEL_E_IO);
    ck_assert_int_eq(err.code, KEL_E_IO);
    ck_assert_str_eq(err.message, want);
    ck_assert_int_eq(kel_file_save(path, "new", 3, NULL), KEL_E_IO);
}

static mode_t
mode(const char *path)
{
    struct stat s;
    ck_assert_int_eq(stat(path, &s), 0);
    return s.st_mode & 07777;
}

START_TEST(makes_and_replaces)
{
    save("a", "one");
    holds("a", "one");
    struct stat before, after;
    stat("a", &before);
    save("a", "twice");
    holds("a", "twice");
    stat("a", &after);
    ck_assert_msg(before.st_ino != after.st_ino, "the file was written over, not replaced");
    save("a", "");
    holds("a", "");
    ck_assert_int_eq(kel_file_save("b", NULL, 0, NULL), KEL_OK);
    holds("b", "");
    ck_assert_uint_eq(entries("."), 2);
    kel_error err;
    ck_assert_int_eq(kel_file_save(NULL, "x", 1, &err), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_file_save("a", NULL, 1, &err), KEL_E_ARGUMENT);
}
END_TEST

START_TEST(keeps_permissions)
{
    static const mode_t modes[] = { 0600, 0644, 0664, 0755, 0604, 02750 };
    for (int i = 0; i < KEL_LENGTH(modes); i++) {
        put("a", "old");
        chmod("a", modes[i]);
        save("a", "new");
        ck_assert_msg(mode("a") == modes[i], "mode %o became %o", modes[i], mode("a"));
        unlink("a");
    }
}
END_TEST

START_TEST(honours_umask)
{
    static const struct { mode_t mask, want; } rows[] = { { 022, 0644 }, { 077, 0600 }, { 0, 0666 }, { 0117, 0660 } };
    for (int i = 0; i < KEL_LENGTH(rows); i++) {
        umask(rows[i].mask);
        save("a", "new");
        ck_assert_msg(mode("a") == rows[i].want, "umask %o gave %o", rows[i].mask, mode("a"));
        unlink("a");
    }
    /* The mask is for new files only. */
    umask(022);
    put("b", "old");
    chmod("b", 0666);
    umask(077);
    save("b", "new");
    ck_assert_uint_eq(mode("b"), 0666);
}
END_TEST

static bool
is_link(const char *path)
{
    struct stat s;
    return lstat(path, &s) == 0 && S_ISLNK(s.st_mode);
}

START_TEST(follows_links)
{
    mkdir("sub", 0755);
    put("sub/target", "old");
    ck_assert_int_eq(symlink("sub/target", "direct"), 0);
    ck_assert_int_eq(symlink("direct", "indirect"), 0);
    ck_assert_int_eq(symlink("../indirect", "sub/upwards"), 0);
    ck_assert_int_eq(symlink("sub", "door"), 0);
    save("direct", "one");
    holds("sub/target", "one");
    save("indirect", "two");
    holds("sub/target", "two");
    save("sub/upwards", "three");
    holds("sub/target", "three");
    save("door/target", "four");
    holds("sub/target", "four");
    ck_assert(is_link("direct") && is_link("indirect") && is_link("sub/upwards") && is_link("door"));

    /* To what is not there yet, relative to the link's own place and absolute. */
    char path[600];
    snprintf(path, sizeof path, "%s/sub/absolute", directory);
    ck_assert_int_eq(symlink("sub/later", "dangling"), 0);
    ck_assert_int_eq(symlink(path, "far"), 0);
    save("dangling", "five");
    save("far", "six");
    ck_assert(is_link("dangling") && is_link("far"));
    holds("sub/later", "five");
    holds("sub/absolute", "six");
    ck_assert_uint_eq(entries("sub"), 4);
    ck_assert_uint_eq(entries("."), 6);
}
END_TEST

START_TEST(gives_up_a_circle)
{
    ck_assert_int_eq(symlink("b", "a"), 0);
    ck_assert_int_eq(symlink("a", "b"), 0);
    fails("a", "cannot write 'a': Too many levels of symbolic links");
    ck_assert_uint_eq(entries("."), 2);
}
END_TEST

START_TEST(names_the_reason)
{
    mkdir("sub", 0755);
    put("file", "old");
    fails("sub", "cannot write 'sub': Is a directory");
    fails("none/a", "cannot write 'none/a': No such file or directory");
    fails("file/a", "cannot write 'file/a': Not a directory");
    fails("", "cannot write '': No such file or directory");
    fails("none\x1B[31m/a", "cannot write 'none\\x1B[31m/a': No such file or directory");
    ck_assert_uint_eq(entries("."), 2);
    holds("file", "old");
}
END_TEST

/* The reason stands behind a path of any length. */
START_TEST(names_the_reason_of_long_paths)
{
    char path[900], want[300];
    memset(path, 'x', sizeof path);
    for (size_t i = 100; i < sizeof path; i += 100)
        path[i] = '/';
    path[sizeof path - 1] = '\0';
    snprintf(want, sizeof want, "cannot write '...%s': No such file or directory", path + sizeof path - 1 - 160);
    fails(path, want);
}
END_TEST

/* A limit on the size of files makes a write fail half-way. */
START_TEST(leaves_the_old_file)
{
    static char big[1 << 16];
    kel_error err;
    put("a", "old");
    signal(SIGXFSZ, SIG_IGN);
    setrlimit(RLIMIT_FSIZE, &(struct rlimit){ 1 << 12, 1 << 12 });
    memset(big, 'n', sizeof big);
    ck_assert_int_eq(kel_file_save("a", big, sizeof big, &err), KEL_E_IO);
    ck_assert_str_eq(err.message, "cannot write 'a': File too large");
    holds("a", "old");
    ck_assert_int_eq(kel_file_save("b", big, sizeof big, &err), KEL_E_IO);
    ck_assert_uint_eq(entries("."), 1);
}
END_TEST

/* root may write everything, so it becomes somebody else (each test is a process of its own). */
START_TEST(respects_write_protection)
{
    const uid_t somebody = 65534, myself = geteuid();
    if (myself == 0) {
        ck_assert_int_eq(chown(directory, somebody, somebody), 0);
        ck_assert_int_eq(seteuid(somebody), 0);
    }
    put("a", "old");
    chmod("a", 0444);
    fails("a", "cannot write 'a': Permission denied");
    holds("a", "old");
    mkdir("sub", 0755);
    put("sub/a", "old");
    chmod("sub", 0555);
    fails("sub/a", "cannot write 'sub/a': Permission denied");
    holds("sub/a", "old");
    ck_assert_uint_eq(entries("."), 2);
    ck_assert_int_eq(seteuid(myself), 0);
}
END_TEST

START_TEST(writes_devices_directly)
{
    struct stat s;
    fails("/dev/full", "cannot write '/dev/full': No space left on device");
    ck_assert_int_eq(symlink("/dev/full", "full"), 0);
    fails("full", "cannot write 'full': No space left on device");
    save("/dev/null", "lost");
    ck_assert(stat("/dev/null", &s) == 0 && S_ISCHR(s.st_mode));
    ck_assert(stat("/dev/full", &s) == 0 && S_ISCHR(s.st_mode));
    ck_assert_uint_eq(entries("."), 1);

    rich r;
    kel_error err;
    kel_record *record = build_content(rich_content(&r));
    ck_assert_int_eq(kel_record_save(record, "/dev/full", &err), KEL_E_IO);
    ck_assert_str_eq(err.message, "cannot write '/dev/full': No space left on device");
    kel_record_free(record);
}
END_TEST

/* Reads what comes through a pipe, at most `most` bytes, then closes it. */
typedef struct reader { const char *path; size_t most, got; } reader;

static void *
read_pipe(void *argument)
{
    reader *r = argument;
    static char block[1 << 12];
    int fd = open(r->path, O_RDONLY);
    for (ssize_t n; r->got < r->most && (n = read(fd, block, sizeof block)) > 0;)
        r->got += (size_t)n;
    close(fd);
    return NULL;
}

/* With SIGPIPE as it is by default: a reader that goes away must not end the program, nor leave the signal pending
   or blocked. */
START_TEST(writes_pipes_directly)
{
    static char big[1 << 20];
    struct stat s;
    signal(SIGPIPE, SIG_DFL);
    ck_assert_int_eq(mkfifo("pipe", 0600), 0);
    for (int cut = 0; cut <= 1; cut++) {
        pthread_t thread;
        reader r = { "pipe", cut ? 1 : sizeof big + 1, 0 };
        kel_error err = { 0 };
        ck_assert_int_eq(pthread_create(&thread, NULL, read_pipe, &r), 0);
        kel_status status = kel_file_save("pipe", big, sizeof big, &err);
        pthread_join(thread, NULL);
        ck_assert_int_eq(status, cut ? KEL_E_IO : KEL_OK);
        if (cut)
            ck_assert_str_eq(err.message, "cannot write 'pipe': Broken pipe");
        else
            ck_assert_uint_eq(r.got, sizeof big);
        sigset_t set;
        sigpending(&set);
        ck_assert_int_eq(sigismember(&set, SIGPIPE), 0);
        pthread_sigmask(SIG_BLOCK, NULL, &set);
        ck_assert_int_eq(sigismember(&set, SIGPIPE), 0);
    }
    ck_assert(stat("pipe", &s) == 0 && S_ISFIFO(s.st_mode));
    ck_assert_uint_eq(entries("."), 1);
}
END_TEST

START_TEST(saves_records)
{
    rich r;
    kel_error err;
    kel_record *record = build_content(rich_content(&r)), *again;
    kel_text text = format_record(record);
    ck_assert_int_eq(kel_record_save(record, "record.json", &err), KEL_OK);
    ck_assert_int_eq(kel_record_load(&again, "record.json", &err), KEL_OK);
    kel_text loaded = format_record(again);
    ck_assert_str_eq(text.bytes, loaded.bytes);
    kel_text_free(&text);
    kel_text_free(&loaded);
    kel_record_free(record);
    kel_record_free(again);
    ck_assert_int_eq(kel_record_save(NULL, "record.json", &err), KEL_E_ARGUMENT);
}
END_TEST

static TCase *
all(void)
{
    const TTest *const tests[] = {
        makes_and_replaces, keeps_permissions, honours_umask, follows_links, gives_up_a_circle, names_the_reason,
        names_the_reason_of_long_paths, leaves_the_old_file, respects_write_protection, writes_devices_directly,
        writes_pipes_directly, saves_records,
    };
    TCase *c = tcase_create("save");
    tcase_add_checked_fixture(c, enter, leave);
    for (int i = 0; i < KEL_LENGTH(tests); i++)
        tcase_add_test(c, tests[i]);
    return c;
}

KEL_TEST_MAIN("save", all)
