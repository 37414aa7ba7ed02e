/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Packed cells. A row is a sequence of counts and bytes in one chunk of the arena:

       increase of the row's number, then for each cell: line less the row's number (mod 2^64), column, size, bytes

   Counts take 7 bits a byte, the low ones first, with the top bit on all but the last (so 0..127 is one byte). Tables
   are read forwards only, two or three times; a list of chunks is never copied, as a growing array would be, and its
   memory is known to be the file's size. */
#include "raw.h"

#include <stdlib.h>
#include <string.h>

enum { CHUNK = 1 << 15, LONGEST_COUNT = 10 };

struct kel__raw_chunk {
    kel__raw_chunk *next;
    size_t used, size;
    unsigned char *bytes;
};

static kel_status
no_memory(kel_error *err, size_t number)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for row %zu of a table", number);
}

static size_t
put_count(unsigned char *out, size_t x)
{
    size_t n = 0;
    for (; x > 127; x >>= 7)
        out[n++] = (unsigned char)(x | 128);
    out[n++] = (unsigned char)x;
    return n;
}

static size_t
get_count(const unsigned char *bytes, size_t *at)
{
    size_t x = 0;
    unsigned shift = 0;
    for (; bytes[*at] > 127; shift += 7)
        x |= (size_t)(bytes[(*at)++] & 127) << shift;
    return x | (size_t)bytes[(*at)++] << shift;
}

/* A chunk with at least `need` bytes free. */
static kel__raw_chunk *
room_for(kel__raw *raw, size_t need)
{
    kel__raw_chunk *last = raw->last;
    if (last != NULL && last->size - last->used >= need)
        return last;
    kel__raw_chunk *chunk = kel_arena_take(raw->arena, 1, sizeof *chunk);
    if (chunk == NULL)
        return NULL;
    chunk->size = need > CHUNK ? need : CHUNK;
    chunk->bytes = kel_arena_take(raw->arena, chunk->size, 1);
    if (chunk->bytes == NULL)
        return NULL;
    if (last != NULL)
        last->next = chunk;
    else
        raw->first = chunk;
    raw->last = chunk;
    return chunk;
}

kel_status
kel__raw_add(kel__raw *raw, size_t number, const kel__printed *cells, kel_error *err)
{
    size_t need = LONGEST_COUNT;
    for (size_t i = 0; i < raw->width; i++)
        need += cells[i].size + 3 * LONGEST_COUNT; /* lines are at most 1 MiB, so this cannot overflow */
    kel__raw_chunk *chunk = room_for(raw, need);
    if (chunk == NULL)
        return no_memory(err, number);
    unsigned char *p = chunk->bytes + chunk->used;
    p += put_count(p, number - raw->number);
    for (size_t i = 0; i < raw->width; i++) {
        p += put_count(p, cells[i].line - number);
        p += put_count(p, cells[i].column);
        p += put_count(p, cells[i].size);
        if (cells[i].size > 0)
            memcpy(p, cells[i].bytes, cells[i].size);
        p += cells[i].size;
    }
    chunk->used = (size_t)(p - chunk->bytes);
    raw->number = number;
    raw->rows++;
    return KEL_OK;
}

kel_status
kel__raw_start(kel__cursor *cursor, const kel__raw *raw, kel_error *err)
{
    *cursor = (kel__cursor){ .raw = raw, .chunk = raw->first };
    cursor->cells = calloc(raw->width, sizeof *cursor->cells);
    return cursor->cells == NULL ? no_memory(err, 1) : KEL_OK;
}

bool
kel__raw_next(kel__cursor *c)
{
    if (c->chunk != NULL && c->at == c->chunk->used) {
        c->chunk = c->chunk->next;
        c->at = 0;
    }
    if (c->chunk == NULL)
        return false;
    const unsigned char *bytes = c->chunk->bytes;
    c->number += get_count(bytes, &c->at);
    for (size_t i = 0; i < c->raw->width; i++) {
        kel__printed *cell = &c->cells[i];
        cell->line = c->number + get_count(bytes, &c->at);
        cell->column = get_count(bytes, &c->at);
        cell->size = get_count(bytes, &c->at);
        cell->bytes = (const char *)bytes + c->at;
        c->at += cell->size;
    }
    return true;
}

void
kel__raw_stop(kel__cursor *c)
{
    free(c->cells);
    c->cells = NULL;
}

kel_status
kel__raw_transpose(kel__raw *out, const kel__raw *raw, kel_error *err)
{
    *out = (kel__raw){ .arena = raw->arena, .width = raw->rows };
    kel__cursor cursor;
    kel_status status = kel__raw_start(&cursor, raw, err);
    if (status != KEL_OK)
        return status;
    kel__printed *all = kel_arena_take(raw->arena, raw->rows, raw->width * sizeof *all);
    if (all == NULL) {
        kel__raw_stop(&cursor);
        return no_memory(err, 1);
    }
    for (size_t i = 0; kel__raw_next(&cursor); i++)
        for (size_t j = 0; j < raw->width; j++)
            all[j * raw->rows + i] = cursor.cells[j];
    kel__raw_stop(&cursor);
    for (size_t j = 0; j < raw->width && status == KEL_OK; j++)
        status = kel__raw_add(out, j + 1, all + j * raw->rows, err);
    return status;
}
