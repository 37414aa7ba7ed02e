/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The coefficient file (kelspan-coefficients(5)): what its lines say, checked as far as the text goes. Rows are kept
   until all metadata were seen, since `curve`, `variable` and `decimal` decide how their numbers are read. */
#include <stdlib.h>
#include <string.h>

#include "phrase.h"
#include "published.h"

/* More than any publication has; an endless file must end somewhere. */
enum { MOST_PIECES = 10000, MOST_CELLS = KEL__LARGEST_POWER + 3 };

struct sheet {
    kel__sheet_row *rows;      /* the header is the first */
    size_t count, capacity;
};

static kel_status
no_memory(kel_error *err)
{
    return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for coefficients");
}

static kel_status
keep_row(struct sheet *sheet, const kel_row *from, kel_arena *arena, kel_error *err)
{
    if (from->count > MOST_CELLS)
        return kel_error_set(err, KEL_E_DATA, from->line, from->cells[MOST_CELLS].column,
                             "a row of %zu cells; %d are the limit", from->count,
                             MOST_CELLS);
    if (sheet->count > MOST_PIECES)
        return kel_error_set(err, KEL_E_DATA, from->line, 1, "more than %d pieces", MOST_PIECES);
    if (sheet->count == sheet->capacity) {
        size_t capacity = sheet->capacity == 0 ? 16 : 2 * sheet->capacity;
        kel__sheet_row *p = realloc(sheet->rows, capacity * sizeof *p);
        if (p == NULL)
            return no_memory(err);
        sheet->rows = p;
        sheet->capacity = capacity;
    }
    kel_cell *cells = kel_arena_copy(arena, from->cells, from->count, sizeof *cells);
    if (cells == NULL)
        return no_memory(err);
    for (size_t i = 0; i < from->count; i++) {
        cells[i].bytes = kel_arena_bytes(arena, from->cells[i].bytes, from->cells[i].size);
        if (cells[i].bytes == NULL)
            return no_memory(err);
    }
    sheet->rows[sheet->count++] = (kel__sheet_row){ from->line, from->count, cells };
    return KEL_OK;
}

static kel_status
read_rows(struct sheet *sheet, kel__published *out, kel__metadata_reader *metadata, kel_input input, kel_error *err)
{
    kel_rows *rows;
    kel_status status = kel_rows_new(&rows, input, KEL_DELIMITER_DETECT, err);
    if (status != KEL_OK)
        return status;
    const kel_row *next;
    while ((status = kel_rows_next(&next, rows, err)) == KEL_OK && next != NULL) {
        const kel_cell *first = next->cells;
        status = next->comment ? kel__metadata_line(metadata, first->bytes, first->size, next->line, first->column, err)
                               : keep_row(sheet, next, out->arena, err);
        if (status != KEL_OK)
            break;
    }
    if (status == KEL_OK && (out->digest = kel_arena_string(out->arena, kel_rows_digest(rows))) == NULL)
        status = no_memory(err);
    kel_rows_free(rows);
    return status;
}

static kel_status
read_bound(double *out, const kel_unit *unit, size_t column, const kel__sheet_row *row, bool comma, kel_error *err)
{
    const kel_cell *cell = &row->cells[column];
    if (cell->size == 0)
        return kel_error_set(err, KEL_E_SYNTAX, row->line, cell->column, "the temperature where the piece starts or "
                                                                         "ends is missing");
    return kel__number_text(out, unit, cell->bytes, cell->size, comma, row->line, cell->column, err);
}

/* Cells left empty at the end of a row are powers that this piece does not have. */
static kel_status
read_powers(kel__published *out, kel__published_piece *piece, const kel__layout *layout, const kel__sheet_row *row,
            kel_error *err)
{
    size_t n = layout->powers;
    while (n > 0 && row->cells[layout->power[n - 1]].size == 0)
        n--;
    size_t last = n == 0 ? 1 : n;
    piece->c = kel_arena_take(out->arena, last, sizeof *piece->c);
    piece->count = last;
    if (piece->c == NULL)
        return no_memory(err);
    for (size_t k = 0; k < last; k++) {
        const kel_cell *cell = &row->cells[layout->power[k]];
        if (cell->size == 0)
            return kel_error_set(err, KEL_E_SYNTAX, row->line, cell->column,
                                 "the coefficient of power %zu is missing (0 where it is not used)", k);
        kel_status status = kel__two_read(&piece->c[k], &out->unit, cell->bytes, cell->size,
                                          out->metadata.decimal_comma, row->line,
                                          cell->column, err);
        if (status != KEL_OK)
            return status;
    }
    out->numbers += last;
    return KEL_OK;
}

static kel_status
read_piece(kel__published *out, const kel__layout *layout, const kel__sheet_row *header, const kel__sheet_row *row,
           kel_error *err)
{
    kel__published_piece *piece = &out->pieces[out->piece_count++];
    const kel_cell *end = &row->cells[row->count < header->count ? row->count - 1 : header->count];
    bool comma = out->metadata.decimal_comma;
    if (row->count != header->count)
        return kel_error_set(err, KEL_E_SYNTAX, row->line, end->column, "%zu cells in a row under a header of %zu",
                             row->count, header->count);
    piece->line = row->line;
    piece->column = row->cells[layout->from].column;
    kel_status status;
    if ((status = read_bound(&piece->from, &layout->from_unit, layout->from, row, comma, err)) != KEL_OK ||
        (status = read_bound(&piece->to, &layout->to_unit, layout->to, row, comma, err)) != KEL_OK)
        return status;
    /* A record made of one temperature is written as one piece of no width. */
    bool point = piece->from == piece->to && out->only_piece && layout->powers == 1;
    if (!(piece->from < piece->to) && !point)
        return kel_error_set(err, KEL_E_DATA, row->line, piece->column, "the piece must run from the lower to the "
                                                                        "higher temperature");
    return read_powers(out, piece, layout, row, err);
}

static int
by_temperature(const void *a, const void *b)
{
    const kel__published_piece *p = a, *q = b;
    return (p->from > q->from) - (p->from < q->from);
}

/* One piece must start where the one before ends. The numbers come from decimal text by one rounding each, so 20 degC
   and 68 degF meet. */
static kel_status
check_joins(const kel__published *out, kel_error *err)
{
    for (size_t i = 1; i < out->piece_count; i++) {
        const kel__published_piece *before = &out->pieces[i - 1], *piece = &out->pieces[i];
        char from[KEL_NUMBER_SIZE], to[KEL_NUMBER_SIZE];
        if (before->to == piece->from)
            continue;
        kel_number_format(to, before->to);
        kel_number_format(from, piece->from);
        return kel_error_set(err, KEL_E_DATA, piece->line, piece->column,
                             "%s between the piece of line %zu, which ends at %s K, and this one from %s K",
                             before->to < piece->from ? "a gap" : "an overlap", before->line, to, from);
    }
    return KEL_OK;
}

static kel_status
read_pieces(kel__published *out, const struct sheet *sheet, kel_error *err)
{
    const kel__sheet_row *header = sheet->rows;
    if (sheet->count == 0)
        return kel_error_set(err, KEL_E_SYNTAX, 1, 1, "no header: a coefficient file has a row 'from [K],to "
                                                      "[K],power 0,...'");
    out->header_line = header->line;
    kel__layout layout;
    kel_status status;
    if ((status = kel__published_kind(out, err)) != KEL_OK || (status = kel__published_variable(out, err)) != KEL_OK ||
        (status = kel__published_header(&layout, header, err)) != KEL_OK)
        return status;
    if (sheet->count == 1)
        return kel_error_set(err, KEL_E_DATA, header->line, 1, "no piece under the header");
    out->only_piece = sheet->count == 2;
    out->pieces = kel_arena_take(out->arena, sheet->count - 1, sizeof *out->pieces);
    if (out->pieces == NULL)
        return no_memory(err);
    for (size_t i = 1; i < sheet->count && status == KEL_OK; i++)
        status = read_piece(out, &layout, header, &sheet->rows[i], err);
    if (status != KEL_OK)
        return status;
    qsort(out->pieces, out->piece_count, sizeof *out->pieces, by_temperature);
    return check_joins(out, err);
}

kel_status
kel__published_read(kel__published *out, kel_input input, const char *const *settings, size_t setting_count,
                    kel_error *err)
{
    struct sheet sheet = { .count = 0 };
    kel__metadata_reader *metadata;
    kel_status status = kel__metadata_new(&metadata, out->arena, true, err);
    for (size_t i = 0; i < setting_count && status == KEL_OK; i++)
        status = kel__metadata_set(metadata, settings[i], err);
    if (status == KEL_OK)
        status = read_rows(&sheet, out, metadata, input, err);
    if (status == KEL_OK)
        status = kel__metadata_finish(&out->metadata, metadata, err);
    if (status == KEL_OK)
        status = read_pieces(out, &sheet, err);
    kel__metadata_free(metadata);
    free(sheet.rows);
    return status;
}

kel_status
kel__adopt_warn(kel__adopt_warnings *warnings, kel_arena *arena, const char *code, size_t line, const kel_text *text,
                kel_error *err)
{
    for (size_t i = 0; i < warnings->count; i++)
        if (strcmp(warnings->list[i].code, code) == 0) {
            warnings->list[i].count++;
            return KEL_OK;
        }
    const char *copy = text->failed ? NULL : kel_arena_string(arena, text->bytes);
    if (copy == NULL)
        return no_memory(err);
    warnings->list[warnings->count++] = (kel_warning){ code, copy, line, 1 };
    return KEL_OK;
}

/* What the caller sees is the first member. */
typedef struct held_report { kel_adopt_report report; kel_arena *arena; } held_report;

static kel_status
make_report(kel_adopt_report **out, const kel__adopt_warnings *warnings, kel_error *err)
{
    held_report *made = calloc(1, sizeof *made);
    if (made == NULL || (made->arena = kel_arena_new()) == NULL) {
        free(made);
        return no_memory(err);
    }
    kel_warning *list = kel_arena_copy(made->arena, warnings->list, warnings->count, sizeof *list);
    bool complete = list != NULL;
    for (size_t i = 0; i < warnings->count && complete; i++)
        complete = (list[i].text = kel_arena_string(made->arena, list[i].text)) != NULL;
    made->report = (kel_adopt_report){ list, warnings->count };
    if (!complete) {
        kel_adopt_report_free(&made->report);
        return no_memory(err);
    }
    *out = &made->report;
    return KEL_OK;
}

void
kel_adopt_report_free(kel_adopt_report *made)
{
    if (made == NULL)
        return;
    kel_arena_free(((held_report *)made)->arena);
    free(made);
}

kel_status
kel_coefficients_read(kel_record **out, kel_adopt_report **report, kel_input input, const char *name,
                      const char *const *settings,
                      size_t setting_count, kel_error *err)
{
    if (report != NULL)
        *report = NULL;
    if (out == NULL || name == NULL || (settings == NULL && setting_count > 0))
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "coefficients need a name and a place for the record");
    *out = NULL;
    kel__published published = { .arena = kel_arena_new() };
    if (published.arena == NULL)
        return no_memory(err);
    const char *slash = strrchr(name, '/');
    published.name = slash == NULL ? name : slash + 1;
    kel__adopt_warnings warnings = { .count = 0 };
    kel_status status = kel__published_read(&published, input, settings, setting_count, err);
    for (size_t i = 0; i < published.metadata.warning_count && status == KEL_OK; i++)
        warnings.list[warnings.count++] = published.metadata.warnings[i];
    if (status == KEL_OK)
        status = kel__published_curve(out, &warnings, &published, err);
    if (status == KEL_OK && report != NULL && (status = make_report(report, &warnings, err)) != KEL_OK) {
        kel_record_free(*out);
        *out = NULL;
    }
    kel_arena_free(published.arena);
    return status;
}
