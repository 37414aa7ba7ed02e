/* SPDX-License-Identifier: Apache-2.0 */
/* Files written so that a failure leaves what was there.

   A regular target, or none yet: the bytes go to a new file beside it, which is synchronised and then renamed over
   it; POSIX makes the renaming atomic. A symbolic link is followed, so that what it points to is replaced and the
   link stays. The new file has the permissions of the old one, and its owner and group as far as the caller may give
   them; a file that the caller may not write is not replaced. Access control lists, extended attributes and other
   hard links are not carried over.

   Anything else (a device, a pipe, a socket) is opened and written: replacing it by a file would destroy it. So is a
   stream named by the system's folders, such as /dev/stderr, even where it leads to a regular file: what was written
   to that stream before stays. */
#include "io_error.h"
#include "save_path.h"

#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <time.h>
#include <unistd.h>

enum { NAMES_TRIED = 100 };

/* ---- bytes ---- */

/* 0, or the reason. */
static int
write_bytes(int fd, const char *bytes, size_t n)
{
    while (n > 0) {
        ssize_t written = write(fd, bytes, n);
        if (written < 0 && errno == EINTR)
            continue;
        if (written < 0)
            return errno;
        bytes += written;
        n -= (size_t)written;
    }
    return 0;
}

/* Writing to a pipe that nobody reads raises SIGPIPE, which would end the caller's program. It is held back in this
   thread, and one that this write raised is taken away, so that EPIPE is reported and nothing else changes. */
static int
write_quietly(int fd, const char *bytes, size_t n)
{
    sigset_t pipe_only, before, pending;
    sigemptyset(&pipe_only);
    sigaddset(&pipe_only, SIGPIPE);
    sigemptyset(&pending);
    sigpending(&pending);
    bool was_pending = sigismember(&pending, SIGPIPE) == 1;
    int reason = pthread_sigmask(SIG_BLOCK, &pipe_only, &before);
    if (reason != 0)
        return reason;
    reason = write_bytes(fd, bytes, n);
    if (reason == EPIPE && !was_pending) {
        const struct timespec at_once = { 0, 0 };
        while (sigtimedwait(&pipe_only, NULL, &at_once) < 0 && errno == EINTR)
            ;
    }
    pthread_sigmask(SIG_SETMASK, &before, NULL);
    return reason;
}

static int
write_in_place(const char *path, const char *bytes, size_t n)
{
    int fd;
    do
        fd = open(path, O_WRONLY | O_APPEND | O_CLOEXEC | O_NOCTTY);
    while (fd < 0 && errno == EINTR);
    if (fd < 0)
        return errno;
    int reason = write_quietly(fd, bytes, n);
    if (close(fd) != 0 && reason == 0 && errno != EINTR)
        reason = errno;
    return reason;
}

static bool
names_stream(const char *path)
{
    static const char *const folders[] = { "/dev/fd/", "/dev/stdout", "/dev/stderr", "/proc/" };
    for (size_t i = 0; i < sizeof folders / sizeof folders[0]; i++)
        if (strncmp(path, folders[i], strlen(folders[i])) == 0)
            return true;
    return false;
}

/* ---- a new file beside the target ---- */

/* Creates it under a name that is not taken. The mode is subject to umask, as for any new file. */
static int
create_beside(int *fd, char *name, const char *target, mode_t mode)
{
    for (unsigned i = 0; i < NAMES_TRIED; i++) {
        struct timespec now;
        clock_gettime(CLOCK_REALTIME, &now);
        kel__path_beside(name, target, (unsigned long)getpid(), (unsigned long)now.tv_nsec + i);
        *fd = open(name, O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC | O_NOFOLLOW, mode);
        if (*fd >= 0)
            return 0;
        if (errno != EEXIST && errno != EINTR)
            return errno;
    }
    return EEXIST;
}

/* Owner and group are a matter of what the caller is allowed to; without them bits that lend an identity would be
   wrong. */
static int
adopt_permissions(int fd, const struct stat *old)
{
    struct stat now;
    mode_t mode = old->st_mode & 07777;
    if (fstat(fd, &now) != 0)
        return errno;
    bool same = now.st_uid == old->st_uid && now.st_gid == old->st_gid;
    if (!same && fchown(fd, old->st_uid, old->st_gid) != 0)
        mode &= 0777;
    return fchmod(fd, mode) != 0 ? errno : 0;
}

/* So that the new name outlives a failure of power. Where a directory cannot be synchronised the file is in place
   all the same. */
static void
sync_directory(const char *target)
{
    char *directory = kel__path_directory(target);
    int fd = directory == NULL ? -1 : open(directory, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
    if (fd >= 0) {
        fsync(fd);
        close(fd);
    }
    free(directory);
}

/* old is NULL where there is no target yet. */
static int
replace(const char *target, const struct stat *old, const char *bytes, size_t n)
{
    int fd;
    if (old != NULL && faccessat(AT_FDCWD, target, W_OK, AT_EACCESS) != 0)
        return errno;
    char *name = malloc(kel__path_beside_size(target));
    if (name == NULL)
        return ENOMEM;
    int reason = create_beside(&fd, name, target, old != NULL ? old->st_mode & 0777 : 0666);
    if (reason != 0) {
        free(name);
        return reason;
    }
    reason = old != NULL ? adopt_permissions(fd, old) : 0;
    if (reason == 0)
        reason = write_bytes(fd, bytes, n);
    if (reason == 0 && fsync(fd) != 0)
        reason = errno;
    if (close(fd) != 0 && reason == 0)
        reason = errno;
    if (reason == 0 && rename(name, target) != 0)
        reason = errno;
    if (reason != 0)
        unlink(name);
    else
        sync_directory(target);
    free(name);
    return reason;
}

kel_status
kel_file_save(const char *path, const char *bytes, size_t n, kel_error *err)
{
    if (path == NULL || (bytes == NULL && n != 0))
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no %s was given", path == NULL ? "path" : "text");
    struct stat old;
    char *target = NULL;
    int reason = kel__path_follow(&target, path);
    if (reason == 0 && names_stream(path) && stat(path, &old) == 0) {
        reason = write_in_place(path, bytes, n);
    } else if (reason == 0) {
        bool there = stat(target, &old) == 0;
        if (!there && errno != ENOENT)
            reason = errno;
        else if (there && !S_ISREG(old.st_mode))
            reason = write_in_place(target, bytes, n);
        else
            reason = replace(target, there ? &old : NULL, bytes, n);
    }
    free(target);
    if (reason == ENOMEM)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for writing a file");
    return reason == 0 ? KEL_OK : kel__io_error(err, "write", path, reason);
}

kel_status
kel_record_save(const kel_record *record, const char *path, kel_error *err)
{
    kel_text text = KEL_TEXT_INIT;
    kel_status status = kel_record_format(&text, record, err);
    if (status == KEL_OK)
        status = kel_file_save(path, text.bytes, text.size, err);
    kel_text_free(&text);
    return status;
}
