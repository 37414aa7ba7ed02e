/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Reading a sheet. The header is the first line that is no comment, unless the user says which line it is, or that
   there is none.

   In a file whose cells are parted by blanks a head such as `mean coefficient [1e-6/K]` falls apart into words. They
   are put together again up to the bracket that closes the unit; `source`, `status` and `reservations` have no unit and
   stand alone.
   With temperatures across the top every line starts with a head, and the rows are turned into columns once all are
   read. */
#include "sheet.h"

#include "blanks.h"

#include <stdlib.h>
#include <string.h>

enum { PROGRESS_EVERY = 1 << 12 };

typedef struct counted { kel_input inner; size_t bytes; } counted;

typedef struct reading {
    kel__sheet *sheet;
    const kel_table_options *options;
    kel__metadata_reader *metadata;
    kel__printed *cells;       /* of the row at hand */
    size_t capacity;
    bool blanks, has_width;
    kel__printed *line_heads;  /* of a transposed table: one a line, a growing array */
    size_t line_head_count, line_head_capacity;
} reading;

static long
read_counted(void *context, char *buffer, size_t size)
{
    counted *c = context;
    long n = c->inner.read(c->inner.context, buffer, size);
    if (n > 0)
        c->bytes += (size_t)n;
    return n;
}

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a table");
}

static bool
ends_in_bracket(const kel__printed *c)
{
    return c->size > 0 && (c->bytes[c->size - 1] == ']' || c->bytes[c->size - 1] == ')');
}

static bool
starts_with_bracket(const kel__printed *c)
{
    return c->size > 0 && (c->bytes[0] == '[' || c->bytes[0] == '(');
}

static int
depth_of(const kel__printed *c)
{
    int depth = 0;
    for (size_t i = 0; i < c->size; i++)
        depth += (c->bytes[i] == '[' || c->bytes[i] == '(') - (c->bytes[i] == ']' || c->bytes[i] == ')');
    return depth;
}

/* How many of the words make the first head. */
static size_t
words_of_head(const kel__printed *words, size_t n)
{
    static const char *const alone[] = { "source", "status", "reservations" };
    for (size_t i = 0; i < sizeof alone / sizeof alone[0]; i++)
        if (kel__is_word(words[0].bytes, words[0].size, alone[i]))
            return 1;
    int depth = 0;
    for (size_t i = 0; i < n; i++) {
        depth += depth_of(&words[i]);
        if (depth == 0 && ends_in_bracket(&words[i]) && (i + 1 == n || !starts_with_bracket(&words[i + 1])))
            return i + 1;
    }
    return 1;
}

/* Words put together with one blank between them, as a cell in the arena. */
static kel_status
join_words(kel__printed *out, kel_arena *arena, const kel__printed *words, size_t n, kel_error *err)
{
    size_t size = n - 1;
    for (size_t i = 0; i < n; i++)
        size += words[i].size;
    char *p = kel_arena_take(arena, size + 1, 1);
    if (p == NULL)
        return no_memory(err);
    *out = (kel__printed){ p, size, words[0].line, words[0].column };
    for (size_t i = 0; i < n; i++) {
        if (i > 0)
            *p++ = ' ';
        if (words[i].size > 0)
            memcpy(p, words[i].bytes, words[i].size);
        p += words[i].size;
    }
    return KEL_OK;
}

static kel_status
take_heads(reading *r, const kel__printed *cells, size_t count, kel_error *err)
{
    kel__sheet *s = r->sheet;
    s->heads = kel_arena_take(s->raw.arena, count, sizeof *s->heads);
    if (s->heads == NULL)
        return no_memory(err);
    for (size_t i = 0; i < count;) {
        size_t n = r->blanks ? words_of_head(cells + i, count - i) : 1;
        kel_status status = join_words(&s->heads[s->raw.width++], s->raw.arena, cells + i, n, err);
        if (status != KEL_OK)
            return status;
        i += n;
    }
    s->head_line = cells[0].line;
    r->has_width = true;
    return KEL_OK;
}

/* Takes the head at the start of a line; *cells and *count become what is left. */
static kel_status
take_line_head(reading *r, const kel__printed **cells, size_t *count, kel_error *err)
{
    if (r->line_head_count == r->line_head_capacity) {
        size_t capacity = r->line_head_capacity == 0 ? 16 : 2 * r->line_head_capacity;
        kel__printed *p = realloc(r->line_heads, capacity * sizeof *p);
        if (p == NULL)
            return no_memory(err);
        r->line_heads = p;
        r->line_head_capacity = capacity;
    }
    size_t n = r->blanks ? words_of_head(*cells, *count) : 1;
    kel_status status = join_words(&r->line_heads[r->line_head_count], r->sheet->raw.arena, *cells, n, err);
    if (status != KEL_OK)
        return status;
    r->line_head_count++;
    *cells += n;
    *count -= n;
    return KEL_OK;
}

static kel_status
ragged(const reading *r, const kel__printed *cells, size_t count, kel_error *err)
{
    const kel__printed *at = count > r->sheet->raw.width ? &cells[r->sheet->raw.width] : &cells[count - 1];
    size_t column = count > r->sheet->raw.width ? at->column : at->column + at->size;
    return kel_error_set(err, KEL_E_SYNTAX, at->line, column, "a row of %zu cells where the %s has %zu", count,
                         r->sheet->head_line != 0 ? "header" : "first row", r->sheet->raw.width);
}

static kel_status
take_cells(reading *r, const kel__printed *cells, size_t count, kel_error *err)
{
    kel__sheet *s = r->sheet;
    long header = r->options->header;
    size_t line = cells[0].line;
    if (!r->has_width && header > 0 && line < (size_t)header) {
        s->skipped_line = s->skipped++ == 0 ? line : s->skipped_line;
        return KEL_OK;
    }
    if (!r->has_width && header > 0 && line > (size_t)header)
        return kel_error_set(err, KEL_E_DATA, (size_t)header, 1,
                             "no header on line %ld: the line is blank or a comment", header);
    if (!r->has_width && header != 0 && !r->options->transpose)
        return take_heads(r, cells, count, err);
    if (r->options->transpose && header != 0) {
        kel_status status = take_line_head(r, &cells, &count, err);
        if (status != KEL_OK)
            return status;
        if (count == 0)
            return kel_error_set(err, KEL_E_SYNTAX, line, 1, "a line of a transposed table without a value");
    }
    if (!r->has_width)
        s->raw.width = count;
    r->has_width = true;
    if (count != s->raw.width)
        return ragged(r, cells, count, err);
    return kel__raw_add(&s->raw, line, cells, err);
}

static kel_status
take_row(reading *r, const kel_row *row, kel_error *err)
{
    if (row->comment)
        return kel__metadata_line(r->metadata, row->cells[0].bytes, row->cells[0].size, row->line,
                                  row->cells[0].column, err);
    if (row->count > r->capacity) {
        kel__printed *p = realloc(r->cells, 2 * row->count * sizeof *p);
        if (p == NULL)
            return no_memory(err);
        r->cells = p;
        r->capacity = 2 * row->count;
    }
    bool any = false;
    for (size_t i = 0; i < row->count; i++) {
        r->cells[i] = (kel__printed){ row->cells[i].bytes, row->cells[i].size, row->line, row->cells[i].column };
        any = any || row->cells[i].size > 0;
    }
    return any ? take_cells(r, r->cells, row->count, err) : KEL_OK;
}

static kel_status
finish(reading *r, kel_error *err)
{
    kel__sheet *s = r->sheet;
    long header = r->options->header;
    if (!r->has_width && header > 0)
        return kel_error_set(err, KEL_E_DATA, (size_t)header, 1,
                             "the file has no row on line %ld, where its header should be", header);
    if (!r->has_width)
        return kel_error_set(err, KEL_E_DATA, 1, 1, "the file holds no table: neither a header nor a row");
    if (r->options->transpose) {
        kel__raw lines = s->raw;
        kel_status status = kel__raw_transpose(&s->raw, &lines, err);
        if (status != KEL_OK)
            return status;
        s->heads = header == 0 ? NULL : kel_arena_copy(s->raw.arena, r->line_heads, r->line_head_count,
                                                       sizeof *s->heads);
        if (header != 0 && s->heads == NULL)
            return no_memory(err);
        s->head_line = header == 0 ? 0 : s->heads[0].line;
    }
    if (s->raw.rows == 0)
        return kel_error_set(err, KEL_E_DATA, s->head_line, 1, "a header and no rows below it");
    if (s->heads == NULL)
        s->heads = kel_arena_take(s->raw.arena, s->raw.width, sizeof *s->heads);
    return s->heads == NULL ? no_memory(err) : KEL_OK;
}

kel_status
kel__sheet_read(kel__sheet *out, kel_arena *arena, kel_input input, const kel_table_options *options,
                kel__metadata_reader *metadata, kel_error *err)
{
    *out = (kel__sheet){ .raw.arena = arena };
    if (options->transpose && options->header > 0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0,
                             "a transposed table has its heads at the start of its lines, not on line %ld",
                             options->header);
    reading r = { .sheet = out, .options = options, .metadata = metadata,
                  .blanks = options->delimiter == KEL_DELIMITER_BLANKS };
    counted bytes = { input, 0 };
    kel_rows *rows;
    kel_status status = kel_rows_new(&rows, (kel_input){ read_counted, &bytes }, options->delimiter, err);
    for (size_t n = 1; status == KEL_OK; n++) {
        const kel_row *row;
        status = kel_rows_next(&row, rows, err);
        if (status != KEL_OK || row == NULL)
            break;
        status = take_row(&r, row, err);
        if (options->progress != NULL && n % PROGRESS_EVERY == 0)
            options->progress(options->progress_context, out->raw.rows, bytes.bytes);
    }
    if (status == KEL_OK)
        status = finish(&r, err);
    if (status == KEL_OK)
        memcpy(out->digest, kel_rows_digest(rows), sizeof out->digest);
    kel_rows_free(rows);
    free(r.cells);
    free(r.line_heads);
    return status;
}
