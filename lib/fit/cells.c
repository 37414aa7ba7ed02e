/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A line split into cells. The comma-separated forms are split by libcsv in strict mode, which gets one physical line
   at a time and is told that it is the last one: so a quote left open is found on its own line, and cells cannot run
   over lines. libcsv does not say where a cell stood; a second, cheaper scan of the same line keeps step with it and
   finds the column of each cell.

   An unquoted cell points into the line; a quoted one is copied, because doubled quotes in it stand for one. Its
   column is that of the first byte behind the quote, and is too small by the number of doubled quotes before it for a
   byte further in.

   Blanks as delimiter (a table copied out of a document) are split here: libcsv knows delimiters of one byte, not
   runs. */
#include "cells.h"

#include "blanks.h"

#include <csv.h>
#include <stdlib.h>
#include <string.h>

struct kel__cells {
    struct csv_parser parser;
    bool has_parser, no_memory;
    char mark;
    char *text;                /* quoted cells of the line; never more than the line has bytes */
    size_t text_capacity, text_used;
    kel_cell *list;
    size_t capacity, count;
    const char *line, *scan, *end; /* the line, the first byte not yet given to a cell, the line's end */
    size_t number;             /* of the line */
};

static const char marks[] = { [KEL_DELIMITER_COMMA] = ',', [KEL_DELIMITER_SEMICOLON] = ';',
                              [KEL_DELIMITER_TAB] = '\t' };

static size_t
column_of(const kel__cells *cells, const char *p)
{
    return (size_t)(p - cells->line) + 1;
}

static void
add_cell(kel__cells *cells, const char *bytes, size_t n, size_t column)
{
    if (cells->count == cells->capacity) {
        size_t capacity = cells->capacity == 0 ? 32 : 2 * cells->capacity;
        kel_cell *p = realloc(cells->list, capacity * sizeof *p);
        if (p == NULL) {
            cells->no_memory = true;
            return;
        }
        cells->list = p;
        cells->capacity = capacity;
    }
    const char *begin = bytes;
    kel__trim(&begin, &n);
    cells->list[cells->count++] = (kel_cell){ begin, n, column + (size_t)(begin - bytes) };
}

/* The quote that closes the one before p, or NULL. */
static const char *
closing_quote(const char *p, const char *end)
{
    while (p < end && (p = memchr(p, '"', (size_t)(end - p))) != NULL) {
        if (p + 1 == end || p[1] != '"')
            return p;
        p += 2;
    }
    return NULL;
}

/* The place at or behind p where neither libcsv's kind of blank nor the delimiter stops it. */
static const char *
skip_spaces(const char *p, const char *end, char mark)
{
    while (p < end && (*p == ' ' || *p == '\t') && *p != mark)
        p++;
    return p;
}

/* libcsv found the end of a cell: called in the order of the cells. */
static void
take_cell(void *bytes, size_t n, void *context)
{
    kel__cells *cells = context;
    const char *p = skip_spaces(cells->scan, cells->end, cells->mark), *stop = p;
    if (p < cells->end && *p == '"') {
        char *copy = cells->text + cells->text_used;
        memcpy(copy, bytes, n);
        cells->text_used += n;
        add_cell(cells, copy, n, column_of(cells, p) + 1);
        stop = closing_quote(p + 1, cells->end);
        if (stop == NULL)      /* libcsv closed it, so it is there */
            stop = cells->end;
    } else {
        add_cell(cells, p, n, column_of(cells, p));
    }
    const char *next = memchr(stop, cells->mark, (size_t)(cells->end - stop));
    cells->scan = next == NULL ? cells->end : next + 1;
}

static kel_status
no_memory(const kel__cells *cells, kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, cells->number, 0, "out of memory for the cells of line %zu", cells->number);
}

static kel_status
open_quote(const kel__cells *cells, const char *quote, kel_error *err)
{
    return kel_error_set(err, KEL_E_SYNTAX, cells->number, column_of(cells, quote),
                         "the quote is not closed on its line");
}

static kel_status
stray(const kel__cells *cells, const char *at, bool quoted, kel_error *err)
{
    return kel_error_set(err, KEL_E_SYNTAX, cells->number, column_of(cells, at),
                         quoted ? "text behind the closing quote of a cell (a quote inside a quoted cell is written "
                                  "twice)"
                                : "a quote inside a cell that does not start with one");
}

static kel_status
split_delimited(kel__cells *cells, kel_error *err)
{
    size_t n = (size_t)(cells->end - cells->line);
    if (!cells->has_parser && csv_init(&cells->parser, CSV_STRICT | CSV_STRICT_FINI | CSV_APPEND_NULL) != 0)
        return no_memory(cells, err);
    cells->has_parser = true;
    csv_set_delim(&cells->parser, (unsigned char)cells->mark);
    csv_set_blk_size(&cells->parser, 4096);
    size_t done = csv_parse(&cells->parser, cells->line, n, take_cell, NULL, cells);
    bool complete = done == n && csv_fini(&cells->parser, take_cell, NULL, cells) == 0;
    int failed = complete ? CSV_SUCCESS : csv_error(&cells->parser);
    if (cells->no_memory || (failed != CSV_SUCCESS && failed != CSV_EPARSE))
        return no_memory(cells, err);
    if (failed == CSV_EPARSE) {
        const char *cell = skip_spaces(cells->scan, cells->end, cells->mark);
        return done == n ? open_quote(cells, cell, err) : stray(cells, cells->line + done, *cell == '"', err);
    }
    return KEL_OK;
}

/* begin..end stands between quotes: of each doubled one, one is left. */
static void
add_quoted(kel__cells *cells, const char *begin, const char *end)
{
    char *copy = cells->text + cells->text_used;
    size_t n = 0;
    for (const char *p = begin; p < end; p++) {
        copy[n++] = *p;
        p += *p == '"';
    }
    cells->text_used += n;
    add_cell(cells, copy, n, column_of(cells, begin));
}

/* Cells between runs of blanks; a quoted cell may hold blanks. */
static kel_status
split_blanks(kel__cells *cells, kel_error *err)
{
    const char *end = cells->end;
    size_t k;
    for (const char *p = cells->line;;) {
        while (p < end && (k = kel__blank(p, end)) != 0)
            p += k;
        if (p == end || cells->no_memory)
            break;
        const char *begin = p;
        bool quoted = *p == '"';
        if (quoted) {
            p = closing_quote(begin + 1, end);
            if (p == NULL)
                return open_quote(cells, begin, err);
            add_quoted(cells, begin + 1, p);
            p++;
            if (p < end && kel__blank(p, end) == 0)
                return stray(cells, p, true, err);
        } else {
            while (p < end && kel__blank(p, end) == 0 && *p != '"')
                p++;
            if (p < end && *p == '"')
                return stray(cells, p, false, err);
            add_cell(cells, begin, (size_t)(p - begin), column_of(cells, begin));
        }
    }
    return cells->no_memory ? no_memory(cells, err) : KEL_OK;
}

kel_delimiter
kel__cells_detect(const char *line, size_t n)
{
    size_t count[sizeof marks] = { 0 };
    bool quoted = false;
    for (const char *p = line; p < line + n; p++) {
        if (*p == '"')
            quoted = !quoted;
        for (size_t d = KEL_DELIMITER_COMMA; d <= KEL_DELIMITER_TAB; d++)
            count[d] += !quoted && *p == marks[d];
    }
    kel_delimiter best = KEL_DELIMITER_COMMA;
    for (kel_delimiter d = KEL_DELIMITER_SEMICOLON; d <= KEL_DELIMITER_TAB; d++)
        if (count[d] > count[best])
            best = d;
    return best;
}

kel__cells *
kel__cells_new(void)
{
    return calloc(1, sizeof(kel__cells));
}

void
kel__cells_free(kel__cells *cells)
{
    if (cells == NULL)
        return;
    if (cells->has_parser)
        csv_free(&cells->parser);
    free(cells->text);
    free(cells->list);
    free(cells);
}

kel_status
kel__cells_split(const kel_cell **out, size_t *count, kel__cells *cells, kel_delimiter delimiter,
                 const char *line, size_t n, size_t number, kel_error *err)
{
    *out = NULL;
    *count = 0;
    cells->count = cells->text_used = 0;
    cells->line = cells->scan = line;
    cells->end = line + n;
    cells->number = number;
    if (cells->text_capacity < n) {
        char *p = realloc(cells->text, 2 * n);
        if (p == NULL)
            return no_memory(cells, err);
        cells->text = p;
        cells->text_capacity = 2 * n;
    }
    kel_status status;
    if (delimiter == KEL_DELIMITER_BLANKS) {
        status = split_blanks(cells, err);
    } else {
        cells->mark = marks[delimiter];
        status = split_delimited(cells, err);
    }
    *out = cells->list;
    *count = cells->count;
    return status;
}
