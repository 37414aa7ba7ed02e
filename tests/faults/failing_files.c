/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The calls by their numbers in the kernel, with a gate before them. close is let through to the kernel even when it
   reports a failure, as kernels do: otherwise a descriptor would be lost. */
#undef _FORTIFY_SOURCE /* its macros would stand before these definitions */
#include "failing_files.h"

#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdarg.h>
#include <stdio.h>
#include <sys/stat.h>
#include <sys/syscall.h>
#include <unistd.h>

static bool armed;
static size_t calls, faulty, largest;
static file_fault kind;
static int reason;
static const char *failed;

void
files_arm(size_t n, file_fault fault, int error, size_t chunk)
{
    armed = true;
    calls = 0;
    faulty = n;
    kind = fault;
    reason = error;
    largest = chunk;
    failed = NULL;
}

size_t
files_disarm(void)
{
    armed = false;
    return calls;
}

const char *
files_failed(void)
{
    return failed;
}

static void
die(void)
{
    syscall(SYS_kill, syscall(SYS_getpid), SIGKILL);
}

/* Is this call the one? Ends the process where it is to end before the call. */
static bool
is_faulty(const char *name)
{
    if (!armed || ++calls != faulty)
        return false;
    failed = name;
    if (kind == FILE_KILL_BEFORE)
        die();
    return true;
}

/* Behind the call. */
static long
leave(bool fault, long result)
{
    if (fault && kind >= FILE_KILL_BEFORE)
        die();
    return result;
}

static bool
refuses(bool fault)
{
    if (!fault || kind >= FILE_KILL_BEFORE)
        return false;
    errno = kind == FILE_INTERRUPT ? EINTR : reason;
    return true;
}

/* Before those of the C library, whatever the build's default is. */
#pragma GCC visibility push(default)

ssize_t
write(int fd, const void *bytes, size_t n)
{
    bool fault = is_faulty("write");
    if (refuses(fault))
        return -1;
    if (armed && largest != 0 && n > largest)
        n = largest;
    if (fault && kind == FILE_KILL_WITHIN)
        n /= 2;
    return (ssize_t)leave(fault, syscall(SYS_write, fd, bytes, n));
}

int
open(const char *path, int flags, ...)
{
    bool fault = is_faulty("open");
    mode_t mode = 0;
    if ((flags & O_CREAT) != 0) {
        va_list arguments;
        va_start(arguments, flags);
        mode = va_arg(arguments, mode_t);
        va_end(arguments);
    }
    return refuses(fault) ? -1 : (int)leave(fault, syscall(SYS_openat, AT_FDCWD, path, flags, mode));
}

int
close(int fd)
{
    bool fault = is_faulty("close");
    long result = syscall(SYS_close, fd);
    return refuses(fault) ? -1 : (int)leave(fault, result);
}

int
fsync(int fd)
{
    bool fault = is_faulty("fsync");
    return refuses(fault) ? -1 : (int)leave(fault, syscall(SYS_fsync, fd));
}

int
rename(const char *from, const char *to)
{
    bool fault = is_faulty("rename");
    return refuses(fault) ? -1 : (int)leave(fault, syscall(SYS_renameat2, AT_FDCWD, from, AT_FDCWD, to, 0));
}

int
fchmod(int fd, mode_t mode)
{
    bool fault = is_faulty("fchmod");
    return refuses(fault) ? -1 : (int)leave(fault, syscall(SYS_fchmod, fd, mode));
}

#pragma GCC visibility pop
