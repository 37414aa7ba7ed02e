/* SPDX-License-Identifier: GPL-3.0-or-later */
/* malloc, calloc, realloc and their kin over the C library's heap. One thread. */
#include "failing_malloc.h"

#include <errno.h>
#include <stdlib.h>
#include <string.h>

static bool armed, failing_onwards;
static size_t calls, failing_call;
static long live;

void
allocation_arm(size_t n, bool onwards)
{
    armed = true;
    failing_onwards = onwards;
    calls = 0;
    failing_call = n;
}

size_t
allocation_disarm(void)
{
    armed = false;
    return calls;
}

long
allocation_live(void)
{
    return live;
}

#if defined __GLIBC__ && !defined __SANITIZE_ADDRESS__

void *__libc_malloc(size_t size);
void *__libc_calloc(size_t n, size_t size);
void *__libc_realloc(void *block, size_t size);
void *__libc_memalign(size_t alignment, size_t size);
void __libc_free(void *block);

/* Seen by other libraries whatever the build's default is. */
#pragma GCC visibility push(default)

static bool
refuse(void)
{
    if (!armed)
        return false;
    calls++;
    if (failing_call == 0 || (failing_onwards ? calls < failing_call : calls != failing_call))
        return false;
    errno = ENOMEM;
    return true;
}

static void *
counted(void *block)
{
    live += block != NULL;
    return block;
}

void *
malloc(size_t size)
{
    return refuse() ? NULL : counted(__libc_malloc(size));
}

void *
calloc(size_t n, size_t size)
{
    return refuse() ? NULL : counted(__libc_calloc(n, size));
}

void *
realloc(void *block, size_t size)
{
    if (block == NULL)
        return malloc(size);
    if (size == 0) {
        free(block);
        return NULL;
    }
    return refuse() ? NULL : __libc_realloc(block, size);
}

void *
aligned_alloc(size_t alignment, size_t size)
{
    return refuse() ? NULL : counted(__libc_memalign(alignment, size));
}

int
posix_memalign(void **block, size_t alignment, size_t size)
{
    void *p = aligned_alloc(alignment, size);
    if (p == NULL)
        return ENOMEM;
    *block = p;
    return 0;
}

void
free(void *block)
{
    live -= block != NULL;
    __libc_free(block);
}

#pragma GCC visibility pop

/* Not taken for granted: a tool may have put its own heap before this one. In the program and in the C library. By
   pointers, for a compiler takes it that malloc itself changes no variables. */
bool
allocation_fails(void)
{
    void *(*volatile request)(size_t) = malloc;
    char *(*volatile copy)(const char *) = strdup;
    allocation_arm(1, true);
    void *block = request(1);
    char *text = copy("text");
    bool failed = block == NULL && text == NULL && allocation_disarm() == 2;
    allocation_disarm();
    free(block);
    free(text);
    return failed;
}

#else

bool
allocation_fails(void)
{
    return false;
}

#endif
