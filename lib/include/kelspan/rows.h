/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Delimited text read a row at a time: strict quoting, every cell with its line and column. */
#ifndef KELSPAN_ROWS_H
#define KELSPAN_ROWS_H

#include <stdbool.h>
#include <kelspan/status.h>

#ifdef __cplusplus
extern "C" {
#endif

/* Where bytes come from. Returns the number read (> 0), 0 at the end, -1 on failure (then errno says why). */
typedef struct kel_input {
    long (*read)(void *context, char *buffer, size_t size);
    void *context;
} kel_input;

/* Reads from memory; `memory` must outlive the input. */
typedef struct kel_memory { const char *bytes; size_t size, at; } kel_memory;
KEL_API kel_input kel_input_memory(kel_memory *memory);

typedef enum kel_delimiter {
    KEL_DELIMITER_DETECT, KEL_DELIMITER_COMMA, KEL_DELIMITER_SEMICOLON, KEL_DELIMITER_TAB,
    KEL_DELIMITER_BLANKS   /* runs of blanks and tabs, for a table copied out of a document */
} kel_delimiter;

typedef struct kel_cell {
    const char *bytes;     /* trimmed of blanks; not NUL-terminated */
    size_t size;
    size_t column;         /* 1-based byte of its first character in the line */
} kel_cell;

typedef struct kel_row {
    size_t line;           /* 1-based */
    bool comment;          /* a line that starts with '#': one cell, the text behind the mark */
    const kel_cell *cells;
    size_t count;
} kel_row;

typedef struct kel_rows kel_rows;

/* A reader of rows; a UTF-8 byte order mark is skipped, CRLF and LF end a line, blank lines are passed over. The
   delimiter is detected on the first line that is no comment (the one of , ; tab that occurs most outside quotes; comma
   if none). Lines over 1 MiB, NUL bytes, a quote left open, a quote inside an unquoted cell: KEL_E_SYNTAX with line and
   column. Since 0.1. */
KEL_API kel_status kel_rows_new(kel_rows **out, kel_input input, kel_delimiter delimiter, kel_error *err);
/* The next row, or *row = NULL at the end. The row is valid until the next call. */
KEL_API kel_status kel_rows_next(const kel_row **row, kel_rows *rows, kel_error *err);
/* The delimiter in use (DETECT before the first row that is no comment). */
KEL_API kel_delimiter kel_rows_delimiter(const kel_rows *rows);
/* SHA-256 of all bytes read so far (of the whole input once the end was reached), 64 hexadecimal digits.
   For when reading is over: it is worked out once, rows read later do not count. */
KEL_API const char *kel_rows_digest(kel_rows *rows);
KEL_API void kel_rows_free(kel_rows *rows);

#ifdef __cplusplus
}
#endif
#endif
