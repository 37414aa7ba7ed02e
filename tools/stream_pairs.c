/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan integrate --pairs: a row in, a row out, in constant memory. Rows are gathered into batches for the
   library's array call. At a bad row the output stops before it: the rows that stand are right, the error names the
   line. */
#include "stream_pairs.h"

#include "messages.h"
#include "reservations.h"

#include <stdlib.h>
#include <string.h>
#include <strings.h>
#include <unistd.h>

enum { BATCH = 4096, FROM = 0, TO, LENGTH, INPUTS };

typedef struct batch {
    size_t n;
    double in[INPUTS][BATCH];
    size_t line[BATCH];
    double integral[BATCH], u[BATCH];
    unsigned char flags[BATCH];
} batch;

typedef struct stream {
    job *j;
    const subject *s;
    const char *name;
    kel_rows *rows;
    sink out;
    kel_unit kelvin;
    kel_unit unit[INPUTS];
    size_t cell[INPUTS];  /* which cell of a row holds it */
    size_t cells;         /* in a row */
    bool lengths;
    batch *now;
} stream;

static int
fail_at(const stream *p, size_t line, size_t column, kel_error *err)
{
    err->line = line;
    err->column = column;
    return fail(p->j, p->name, err);
}

/* --- header --- */

/* "from [K]" or "from (K)": gives the length of the name and the unit's place and length. */
static bool
split_header(const kel_cell *c, size_t *name, size_t *unit, size_t *unit_size)
{
    size_t i = 0;
    while (i < c->size && c->bytes[i] != '[' && c->bytes[i] != '(')
        i++;
    if (i == c->size || c->bytes[c->size - 1] != (c->bytes[i] == '[' ? ']' : ')'))
        return false;
    *unit = i + 1;
    *unit_size = c->size - i - 2;
    while (i > 0 && c->bytes[i - 1] == ' ')
        i--;
    *name = i;
    return true;
}

static int
read_header_cell(stream *p, const kel_row *row, size_t k)
{
    static const char *const names[INPUTS] = { "from", "to", "length" };
    const kel_cell *c = &row->cells[k];
    kel_error err = { 0 };
    size_t name, unit, unit_size;
    if (split_header(c, &name, &unit, &unit_size))
        for (int i = 0; i < INPUTS; i++) {
            if (strlen(names[i]) != name || strncasecmp(names[i], c->bytes, name) != 0)
                continue;
            if (p->cell[i] != 0) {
                kel_error_set(&err, KEL_E_SYNTAX, 0, 0, "the header has '%s' twice", names[i]);
                return fail_at(p, row->line, c->column, &err);
            }
            p->cell[i] = k + 1;
            kel_dimension d = i == LENGTH ? KEL_DIM_LENGTH : KEL_DIM_TEMPERATURE;
            if (kel_unit_parse(&p->unit[i], d, c->bytes + unit, unit_size, &err) < 0)
                return fail_at(p, row->line, c->column + unit + (err.column > 0 ? err.column - 1 : 0), &err);
            return EXIT_FINE;
        }
    kel_text shown = KEL_TEXT_INIT;
    kel_text_quote(&shown, c->bytes, c->size);
    kel_error_set(&err, KEL_E_SYNTAX, 0, 0, "a header of pairs is 'from [K],to [K]' and perhaps 'length [mm]', not "
                                            "'%s'",
                  shown.bytes != NULL ? shown.bytes : "");
    kel_text_free(&shown);
    return fail_at(p, row->line, c->column, &err);
}

/* The next row that is no comment, NULL at the end. */
static kel_status
next_row(const stream *p, const kel_row **row, kel_error *err)
{
    do {
        kel_status status = kel_rows_next(row, p->rows, err);
        if (status < 0)
            return status;
    } while (*row != NULL && (*row)->comment);
    return KEL_OK;
}

static int
read_header(stream *p)
{
    const kel_row *row;
    kel_error err = { 0 };
    if (next_row(p, &row, &err) < 0)
        return fail(p->j, p->name, &err);
    if (row == NULL)
        return fail_text(p->j, p->name, "no header 'from [K],to [K]': the file is empty");
    for (size_t k = 0; k < row->count; k++) {
        int status = read_header_cell(p, row, k);
        if (status != EXIT_FINE)
            return status;
    }
    if (p->cell[FROM] == 0 || p->cell[TO] == 0) {
        kel_error_set(&err, KEL_E_SYNTAX, 0, 0, "the header has no '%s'", p->cell[FROM] == 0 ? "from [K]" : "to [K]");
        return fail_at(p, row->line, 1, &err);
    }
    p->lengths = p->cell[LENGTH] != 0;
    p->cells = row->count;
    kel_text_printf(&p->out.pending, "from [K],to [K],integral [1],u [1],outside [K],%sreservations\n",
                    p->lengths ? "change [m],u change [m]," : "");
    return EXIT_FINE;
}

/* --- rows out --- */

static void
add_number(kel_text *out, double x)
{
    char digits[KEL_NUMBER_SIZE + 1];
    size_t n = isnan(x) ? 0 : kel_number_format(digits, x);
    digits[n] = ',';
    kel_text_add_bytes(out, digits, n + 1);
}

/* The change of row i's length and its flags, which are then those of the row. */
static int
change_of(stream *p, size_t i, kel_answer *change)
{
    batch *b = p->now;
    kel_query q = { KEL_CHANGE, b->in[FROM][i], b->in[TO][i], b->in[FROM][i], NAN, -1 };
    kel_error err = { 0 };
    if (kel_record_answer(change, p->s->record, &q, &err) < 0)
        return fail_at(p, b->line[i], 0, &err);
    change->value *= b->in[LENGTH][i];
    change->u *= b->in[LENGTH][i];
    return EXIT_FINE;
}

static int
write_row(stream *p, size_t i)
{
    batch *b = p->now;
    kel_text *out = &p->out.pending;
    double from = b->in[FROM][i], to = b->in[TO][i];
    unsigned flags = b->flags[i];
    kel_answer change = { 0 };
    if (p->lengths) {
        int status = change_of(p, i, &change);
        if (status != EXIT_FINE)
            return status;
        flags = change.flags;
    }
    if (flags != 0) {
        concern about = { { from, to }, 2, NAN, NAN, &p->kelvin };
        int status = reserve(p->j, p->s, &about, flags, p->name, b->line[i]);
        if (status != EXIT_FINE)
            return status;
    }
    add_number(out, from);
    add_number(out, to);
    add_number(out, b->integral[i]);
    add_number(out, b->u[i]);
    add_number(out, kel_record_outside(p->s->record, from, to));
    if (p->lengths) {
        add_number(out, change.value);
        add_number(out, change.u);
    }
    add_codes(out, flags, "+");
    kel_text_add(out, "\n");
    return EXIT_FINE;
}

static int
write_batch(stream *p)
{
    batch *b = p->now;
    kel_error err = { 0 };
    size_t good = b->n;
    kel_status worst = kel_record_integral_n(b->integral, b->u, b->flags, p->s->record, b->in[FROM], b->in[TO], b->n,
                                             &err);
    if (worst < 0)
        good = err.line < b->n ? err.line : 0;
    int status = EXIT_FINE;
    for (size_t i = 0; i < good && status == EXIT_FINE; i++)
        status = write_row(p, i);
    if (status == EXIT_FINE && worst < 0)
        status = fail_at(p, b->line[good], 0, &err);
    b->n = 0;
    if (status == EXIT_FINE && !sink_pass(&p->out))
        status = sink_end(p->j, &p->out);
    return status;
}

/* --- rows in --- */

static kel_status
read_row(stream *p, const kel_row *row, kel_error *err)
{
    batch *b = p->now;
    if (row->count != p->cells)
        return kel_error_set(err, KEL_E_SYNTAX, row->line, 1, "%zu cells, but the header has %zu", row->count,
                             p->cells);
    for (int i = 0; i < INPUTS; i++) {
        if (p->cell[i] == 0)
            continue;
        const kel_cell *c = &row->cells[p->cell[i] - 1];
        if (c->size == 0)
            return kel_error_set(err, KEL_E_SYNTAX, row->line, c->column, "an empty cell where a number is needed");
        kel_status status = kel_unit_read(&b->in[i][b->n], NULL, &p->unit[i], c->bytes, c->size, err);
        if (status < 0) {
            err->line = row->line;
            err->column = c->column + (err->column > 0 ? err->column - 1 : 0);
            return status;
        }
    }
    if (p->lengths && !(b->in[LENGTH][b->n] > 0)) {
        const kel_cell *c = &row->cells[p->cell[LENGTH] - 1];
        return kel_error_set(err, KEL_E_DATA, row->line, c->column, "the length must be above 0 m");
    }
    b->line[b->n++] = row->line;
    return KEL_OK;
}

static int
run(stream *p)
{
    int status = read_header(p);
    const kel_row *row = NULL;
    kel_error err = { 0 };
    kel_status in = KEL_OK;
    while (status == EXIT_FINE && (in = next_row(p, &row, &err)) >= 0 && row != NULL && (in = read_row(p, row,
        &err)) >= 0)
        if (p->now->n == BATCH)
            status = write_batch(p);
    /* What waits stands before the bad row; an error found there is the earlier one, and the only one said. */
    if (status == EXIT_FINE && p->now->n > 0)
        status = write_batch(p);
    return status == EXIT_FINE && in < 0 ? fail(p->j, p->name, &err) : status;
}

int
stream_pairs(job *j, const subject *s, const char *name)
{
    stream p = { .j = j, .s = s, .name = name };
    file *f;
    int status = file_open(j, &f, name);
    if (status != EXIT_FINE)
        return status;
    kel_error err = { 0 };
    sink_begin(&p.out, STDOUT_FILENO);
    p.now = malloc(sizeof *p.now);
    if (p.now != NULL)
        p.now->n = 0;
    if (p.now == NULL)
        status = fail_memory(j);
    else if (kel_unit_parse(&p.kelvin, KEL_DIM_TEMPERATURE, "K", 1, &err) < 0 ||
             kel_rows_new(&p.rows, file_input(f), KEL_DELIMITER_DETECT, &err) < 0)
        status = fail(j, name, &err);
    else
        status = run(&p);
    if (status == EXIT_FINE)
        status = sink_end(j, &p.out);
    else
        sink_pour(&p.out); /* the rows before the bad one stand */
    kel_rows_free(p.rows);
    free(p.now);
    kel_text_free(&p.out.pending);
    file_close(f);
    return status == EXIT_FINE ? finish(j) : status;
}
