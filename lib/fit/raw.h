/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The cells of a table as printed, packed: a row costs its bytes and some two bytes a cell. Not installed. */
#ifndef KELSPAN_RAW_H
#define KELSPAN_RAW_H

#include <kelspan.h>

/* Not NUL-terminated. */
typedef struct kel__printed { const char *bytes; size_t size, line, column; } kel__printed;

typedef struct kel__raw_chunk kel__raw_chunk;

typedef struct kel__raw {
    kel_arena *arena;
    kel__raw_chunk *first, *last;
    size_t rows, width;
    size_t number;             /* of the row added last */
} kel__raw;

/* Adds a row of raw->width cells. number: by which the row is known, not below that of the row before; usually its
   line. */
kel_status kel__raw_add(kel__raw *raw, size_t number, const kel__printed *cells, kel_error *err);

/* Runs over the rows in order. `cells` (width of them) hold for the row that kel__raw_next reached. kel__raw_stop
   releases them. */
typedef struct kel__cursor {
    const kel__raw *raw;
    const kel__raw_chunk *chunk;
    size_t at, number;
    kel__printed *cells;
} kel__cursor;

kel_status kel__raw_start(kel__cursor *cursor, const kel__raw *raw, kel_error *err);
bool kel__raw_next(kel__cursor *cursor);
void kel__raw_stop(kel__cursor *cursor);

/* Rows become columns. The number of a row of the result is the number of its column in the lines, from 1; its cells
   keep their places. */
kel_status kel__raw_transpose(kel__raw *out, const kel__raw *raw, kel_error *err);

#endif
