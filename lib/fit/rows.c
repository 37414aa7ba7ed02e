/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows: physical lines, of which comments are kept whole, blank ones passed over and the others split into cells. The
   delimiter is settled on the first line that is no comment and stays. An error ends the reading: asked again, the
   reader gives it again. */
#include "blanks.h"
#include "cells.h"
#include "lines.h"

#include <stdlib.h>
#include <string.h>

struct kel_rows {
    kel__lines lines;
    kel__cells *splitter;
    kel_delimiter delimiter;
    kel_row row;
    kel_cell comment;
    bool ended;
    kel_status failed;
    kel_error failure;
};

static long
read_memory(void *context, char *buffer, size_t size)
{
    kel_memory *memory = context;
    size_t n = memory->size - memory->at;
    if (n > size)
        n = size;
    if (n > 0)
        memcpy(buffer, memory->bytes + memory->at, n);
    memory->at += n;
    return (long)n;
}

/* first: where the line's first byte that is no blank stands. */
static kel_status
make_row(kel_rows *rows, const char *line, size_t n, const char *first, kel_error *err)
{
    rows->row = (kel_row){ .line = rows->lines.number, .comment = *first == '#' };
    if (rows->row.comment) {
        const char *text = first + 1;
        size_t size = n - (size_t)(text - line);
        kel__trim(&text, &size);
        rows->comment = (kel_cell){ text, size, (size_t)(text - line) + 1 };
        rows->row.cells = &rows->comment;
        rows->row.count = 1;
        return KEL_OK;
    }
    if (rows->delimiter == KEL_DELIMITER_DETECT)
        rows->delimiter = kel__cells_detect(line, n);
    return kel__cells_split(&rows->row.cells, &rows->row.count, rows->splitter, rows->delimiter, line, n,
                            rows->lines.number, err);
}

static kel_status
advance(kel_rows *rows, kel_error *err)
{
    for (;;) {
        const char *line;
        size_t n;
        kel_status status = kel__lines_next(&line, &n, &rows->lines, err);
        if (status != KEL_OK)
            return status;
        rows->ended = line == NULL;
        if (rows->ended)
            return KEL_OK;
        const char *first = line;
        size_t size = n;
        kel__trim(&first, &size);
        if (size > 0)
            return make_row(rows, line, n, first, err);
    }
}

kel_input
kel_input_memory(kel_memory *memory)
{
    return (kel_input){ read_memory, memory };
}

kel_status
kel_rows_new(kel_rows **out, kel_input input, kel_delimiter delimiter, kel_error *err)
{
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no place for the reader of rows");
    *out = NULL;
    if (input.read == NULL || delimiter < KEL_DELIMITER_DETECT || delimiter > KEL_DELIMITER_BLANKS)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "a reader of rows needs an input and a known delimiter");
    kel_rows *rows = calloc(1, sizeof *rows);
    if (rows == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for reading");
    rows->delimiter = delimiter;
    kel_status status = kel__lines_start(&rows->lines, input, err);
    rows->splitter = kel__cells_new();
    if (status == KEL_OK && rows->splitter == NULL)
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for reading");
    if (status != KEL_OK) {
        kel_rows_free(rows);
        return status;
    }
    *out = rows;
    return KEL_OK;
}

kel_status
kel_rows_next(const kel_row **row, kel_rows *rows, kel_error *err)
{
    *row = NULL;
    if (rows->failed == KEL_OK)
        rows->failed = rows->ended ? KEL_OK : advance(rows, &rows->failure);
    if (rows->failed != KEL_OK) {
        if (err != NULL)
            *err = rows->failure;
        return rows->failed;
    }
    if (!rows->ended)
        *row = &rows->row;
    return KEL_OK;
}

kel_delimiter
kel_rows_delimiter(const kel_rows *rows)
{
    return rows->delimiter;
}

const char *
kel_rows_digest(kel_rows *rows)
{
    return kel__lines_digest(&rows->lines);
}

void
kel_rows_free(kel_rows *rows)
{
    if (rows == NULL)
        return;
    kel__lines_free(&rows->lines);
    kel__cells_free(rows->splitter);
    free(rows);
}
