/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Files in and out, by read(2) and write(2): an error of the system is seen where it happens. */
#include "files.h"

#include "messages.h"

#include <errno.h>
#include <fcntl.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum { BUFFER = 1 << 16, PASS = 1 << 18 };

struct file {
    int fd;
    bool owned;
    size_t at, size;
    int error;       /* errno of a failure that came while looking ahead, reported when its place is reached */
    char buffer[BUFFER];
};

/* O_CLOEXEC is for the sake of anything that might ever be started from here; stdin is used as it is and left open.
   */
int
file_open(const job *j, file **out, const char *name)
{
    *out = NULL;
    file *f = calloc(1, sizeof *f);
    if (f == NULL)
        return fail_memory(j);
    f->owned = strcmp(name, "-") != 0;
    f->fd = f->owned ? open(name, O_RDONLY | O_CLOEXEC) : STDIN_FILENO;
    if (f->fd < 0) {
        int error = errno;
        free(f);
        return fail_text(j, name, "%s", strerror(error));
    }
    *out = f;
    return EXIT_FINE;
}

void
file_close(file *f)
{
    if (f != NULL && f->owned)
        close(f->fd);
    free(f);
}

/* read(2) again if a signal came between. */
static ssize_t
read_some(int fd, char *bytes, size_t n)
{
    ssize_t k;
    do
        k = read(fd, bytes, n);
    while (k < 0 && errno == EINTR);
    return k;
}

/* The library's way of reading: first what was looked at ahead, then the file itself. */
static long
take(void *context, char *bytes, size_t n)
{
    file *f = context;
    if (f->at == f->size) {
        if (f->error != 0) {
            errno = f->error;
            return -1;
        }
        return read_some(f->fd, bytes, n);
    }
    size_t k = f->size - f->at < n ? f->size - f->at : n;
    memcpy(bytes, f->buffer + f->at, k);
    f->at += k;
    return (long)k;
}

kel_input
file_input(file *f)
{
    return (kel_input){ take, f };
}

/* Looks as far as it must, at most a buffer: a file that opens with 64 KiB of blanks is left to the reader of tables.
   A byte order mark counts as blank here; the parser that gets the bytes afterwards judges it. */
bool
file_is_record(file *f)
{
    size_t at = 0;
    for (;;) {
        static const char mark[] = "\xEF\xBB\xBF";
        while (at < f->size && (strchr(" \t\r\n", f->buffer[at]) != NULL || (at < 3 && f->buffer[at] == mark[at])))
            if (f->buffer[at++] == '\0')
                return false;
        if (at < f->size || f->size == BUFFER || f->error != 0)
            return at < f->size && f->buffer[at] == '{';
        ssize_t k = read_some(f->fd, f->buffer + f->size, BUFFER - f->size);
        if (k < 0)
            f->error = errno;
        if (k <= 0)
            return false;
        f->size += (size_t)k;
    }
}

/* The limit is that of a record; whoever pipes something endless here gets an error, not a full memory. */
int
file_read_all(const job *j, kel_text *out, file *f, const char *name, size_t limit)
{
    char *bytes = malloc(BUFFER);
    long k = -1;
    int status = EXIT_FINE;
    if (bytes == NULL)
        return fail_memory(j);
    while (status == EXIT_FINE && (k = take(f, bytes, BUFFER)) > 0) {
        kel_text_add_bytes(out, bytes, (size_t)k);
        if (out->failed)
            status = fail_memory(j);
        else if (out->size > limit)
            status = fail_text(j, name, "larger than %zu MiB, the limit of a record", limit >> 20);
    }
    if (status == EXIT_FINE && k < 0)
        status = fail_text(j, name, "%s", strerror(errno));
    free(bytes);
    return status;
}

/* Compared by device and inode, so that another spelling, a symbolic or a hard link is recognised. A device is never
   replaced by what is written to it, so it may be both. */
int
output_is_no_input(const job *j, const char *output, const char *const *inputs, size_t n)
{
    struct stat out, in;
    if (output == NULL || strcmp(output, "-") == 0 || stat(output, &out) != 0 || !S_ISREG(out.st_mode))
        return EXIT_FINE;
    for (size_t i = 0; i < n; i++) {
        int found = strcmp(inputs[i], "-") == 0 ? fstat(STDIN_FILENO, &in) : stat(inputs[i], &in);
        if (found == 0 && in.st_dev == out.st_dev && in.st_ino == out.st_ino)
            return usage(j, "-o %s would overwrite the input %s", output, inputs[i]);
    }
    return EXIT_FINE;
}

/* A file that stdout was sent to would otherwise be replaced under the stream. What swallows everything, such as
   /dev/null, may be both without harm. */
bool
output_is_stdout(const char *output)
{
    struct stat to, out;
    if (strcmp(output, "-") == 0)
        return true;
    return stat(output, &to) == 0 && fstat(STDOUT_FILENO, &out) == 0 && to.st_dev == out.st_dev &&
           to.st_ino == out.st_ino && (!S_ISCHR(out.st_mode) || isatty(STDOUT_FILENO) == 1);
}

void
sink_begin(sink *s, int fd)
{
    *s = (sink){ fd, KEL_TEXT_INIT, 0 };
}

/* After an error nothing more is tried; sink_end says it once. */
void
sink_pour(sink *s)
{
    const char *bytes = s->pending.bytes;
    size_t n = s->pending.size;
    while (n > 0 && s->error == 0) {
        ssize_t k = write(s->fd, bytes, n);
        if (k < 0 && errno != EINTR)
            s->error = errno;
        if (k > 0) {
            bytes += k;
            n -= (size_t)k;
        }
    }
    kel_text_clear(&s->pending);
}

bool
sink_pass(sink *s)
{
    if (s->pending.size >= PASS)
        sink_pour(s);
    return s->error == 0 && !s->pending.failed;
}

/* Without the terminal in between there is no buffer left to flush: what write(2) took is out. */
int
sink_end(const job *j, sink *s)
{
    bool failed = s->pending.failed;
    if (!failed)
        sink_pour(s);
    kel_text_free(&s->pending);
    if (failed)
        return fail_memory(j);
    const char *name = s->fd == STDERR_FILENO ? "stderr" : "stdout";
    return s->error == 0 ? EXIT_FINE : fail_text(j, NULL, "cannot write to %s: %s", name, strerror(s->error));
}
