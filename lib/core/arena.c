/* SPDX-License-Identifier: Apache-2.0 */
/* Blocks in a list, each twice the one before up to a limit; a large request gets a block of its own. */
#include "core.h"

#include <stdalign.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

enum { FIRST_BLOCK = 1 << 10, LARGEST_BLOCK = 1 << 18 };

struct block {
    struct block *next;
    size_t used, size;
    alignas(max_align_t) char bytes[];
};

struct kel_arena {
    struct block *newest;
    size_t next_size;
};

kel_arena *
kel_arena_new(void)
{
    kel_arena *arena = calloc(1, sizeof *arena);
    if (arena != NULL)
        arena->next_size = FIRST_BLOCK;
    return arena;
}

void
kel_arena_free(kel_arena *arena)
{
    if (arena == NULL)
        return;
    for (struct block *b = arena->newest; b != NULL;) {
        struct block *next = b->next;
        free(b);
        b = next;
    }
    free(arena);
}

static struct block *
add_block(kel_arena *arena, size_t least)
{
    size_t size = least > arena->next_size ? least : arena->next_size;
    if (size > (size_t)PTRDIFF_MAX - sizeof(struct block)) /* no object can be larger */
        return NULL;
    struct block *b = malloc(sizeof *b + size);
    if (b == NULL)
        return NULL;
    b->used = 0;
    b->size = size;
    b->next = arena->newest;
    arena->newest = b;
    if (arena->next_size < LARGEST_BLOCK)
        arena->next_size *= 2;
    return b;
}

void *
kel_arena_take(kel_arena *arena, size_t n, size_t size)
{
    const size_t align = alignof(max_align_t);
    if (size != 0 && n > (SIZE_MAX - align) / size)
        return NULL;
    size_t want = (n * size + align - 1) / align * align;
    struct block *b = arena->newest;
    if (b == NULL || b->size - b->used < want)
        b = add_block(arena, want);
    if (b == NULL)
        return NULL;
    void *p = b->bytes + b->used;
    b->used += want;
    memset(p, 0, want);
    return p;
}

void *
kel_arena_copy(kel_arena *arena, const void *from, size_t n, size_t size)
{
    void *p = kel_arena_take(arena, n, size);
    if (p != NULL && n * size != 0)
        memcpy(p, from, n * size);
    return p;
}

char *
kel_arena_bytes(kel_arena *arena, const char *bytes, size_t n)
{
    char *p = n == SIZE_MAX ? NULL : kel_arena_take(arena, n + 1, 1);
    if (p != NULL && n != 0)
        memcpy(p, bytes, n);
    return p;
}

char *
kel_arena_string(kel_arena *arena, const char *string)
{
    return string == NULL ? NULL : kel_arena_bytes(arena, string, strlen(string));
}
