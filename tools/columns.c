/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table of cells for people. A column of numbers is aligned at the decimal points, one of words at the left. The
   rows wait until they are flushed; the widths that were found stay, so that a long table can be flushed in parts. */
#include "output.h"

#include <stdlib.h>
#include <string.h>

/* Places on the screen left and right of the decimal point, and of words. */
typedef struct shape { size_t head, tail, words; } shape;

struct columns {
    const char *const *headings;
    size_t count;
    shape *shapes;
    kel_text cells;      /* each NUL-terminated, row after row */
    size_t cell_count;
    bool headed;
};

columns *
columns_new(const char *const *headings, size_t count)
{
    columns *c = calloc(1, sizeof *c);
    if (c == NULL)
        return NULL;
    c->headings = headings;
    c->count = count;
    c->shapes = calloc(count, sizeof *c->shapes);
    if (c->shapes == NULL) {
        free(c);
        return NULL;
    }
    return c;
}

void
columns_free(columns *c)
{
    if (c == NULL)
        return;
    kel_text_free(&c->cells);
    free(c->shapes);
    free(c);
}

/* Columns on the screen: continuation bytes of UTF-8 take none. */
static size_t
width(const char *s, size_t n)
{
    size_t w = 0;
    for (size_t i = 0; i < n; i++)
        w += ((unsigned char)s[i] & 0xC0) != 0x80;
    return w;
}

static bool
is_number(const char *s)
{
    size_t n = strlen(s);
    return n > 0 && strspn(s, "+-.0123456789e") == n && strpbrk(s, "0123456789") != NULL;
}

/* Bytes up to the decimal point, or to the end. */
static size_t
head_of(const char *s)
{
    return strcspn(s, ".e");
}

void
columns_add(columns *c, const char *text)
{
    if (text == NULL)
        text = "";
    size_t n = strlen(text);
    shape *s = &c->shapes[c->cell_count++ % c->count];
    if (is_number(text)) {
        size_t head = head_of(text);
        s->head = head > s->head ? head : s->head;
        s->tail = n - head > s->tail ? n - head : s->tail;
    } else {
        size_t w = width(text, n);
        s->words = w > s->words ? w : s->words;
    }
    kel_text_add_bytes(&c->cells, text, n + 1);
}

void
columns_add_text(columns *c, kel_text *text)
{
    if (text->failed)
        c->cells.failed = true;
    columns_add(c, text->bytes);
    kel_text_clear(text);
}

/* Blanks only: a tabulator would depend on the terminal. */
static void
pad(kel_text *out, size_t n)
{
    while (n-- > 0)
        kel_text_add(out, " ");
}

/* First or second line of a heading; returns its length. */
static size_t
line_of(const char *heading, int line, const char **start)
{
    const char *cut = strchr(heading, '\n');
    *start = line == 0 ? heading : cut != NULL ? cut + 1 : "";
    return line == 0 && cut != NULL ? (size_t)(cut - heading) : strlen(*start);
}

static size_t
column_width(const columns *c, size_t i)
{
    const shape *s = &c->shapes[i];
    size_t w = s->head + s->tail > s->words ? s->head + s->tail : s->words;
    for (int line = 0; line < 2; line++) {
        const char *start;
        size_t n = line_of(c->headings[i], line, &start), h = width(start, n);
        w = h > w ? h : w;
    }
    return w;
}

/* Trailing blanks help nobody. */
static void
end_line(kel_text *out, size_t line_start)
{
    while (!out->failed && out->size > line_start && out->bytes[out->size - 1] == ' ')
        out->bytes[--out->size] = '\0';
    kel_text_add(out, "\n");
}

/* Above numbers a heading stands at the right, above words at the left. */
static void
add_headings(const columns *c, kel_text *out, const char *indent)
{
    bool two = false;
    for (size_t i = 0; i < c->count; i++)
        two = two || strchr(c->headings[i], '\n') != NULL;
    for (int line = 0; line < (two ? 2 : 1); line++) {
        size_t start_of_line = out->size;
        kel_text_add(out, indent);
        for (size_t i = 0; i < c->count; i++) {
            const char *start;
            size_t n = line_of(c->headings[i], line, &start), w = column_width(c, i);
            bool numbers = c->shapes[i].head > 0;
            size_t room = w - width(start, n);
            pad(out, numbers ? room : 0);
            kel_text_add_bytes(out, start, n);
            pad(out, (numbers ? 0 : room) + 3);
        }
        end_line(out, start_of_line);
    }
}

/* Headings come with the first rows, when their widths are known. */
void
columns_flush(columns *c, kel_text *out, const char *indent)
{
    if (c->cells.failed) {
        out->failed = true;
        return;
    }
    if (!c->headed)
        add_headings(c, out, indent);
    c->headed = true;
    const char *cell = c->cells.bytes;
    for (size_t k = 0; k < c->cell_count; k += c->count) {
        size_t start = out->size;
        kel_text_add(out, indent);
        for (size_t i = 0; i < c->count; i++) {
            size_t n = strlen(cell), w = column_width(c, i), used = width(cell, n);
            const shape *s = &c->shapes[i];
            size_t before = 0;
            if (is_number(cell))
                before = w - s->tail - head_of(cell);
            else if (s->head > 0 && w >= used)
                before = w - used; /* words in a column of numbers stand at its right */
            pad(out, before);
            kel_text_add_bytes(out, cell, n);
            pad(out, w - before - used + 3);
            cell += n + 1;
        }
        end_line(out, start);
    }
    kel_text_clear(&c->cells);
    c->cell_count = 0;
}
