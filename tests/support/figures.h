/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Published figures: small CSV files with `#` lines of provenance, a header, and cells kept as the text that was
   printed. A reader of its own, so that the figures do not pass through the code that they test. Quoted cells do not
   occur. */
#ifndef KEL_TEST_FIGURES_H
#define KEL_TEST_FIGURES_H

#include <string.h>

#include "unit.h"

enum { FIGURES_ROWS = 128, FIGURES_COLUMNS = 16 };

typedef struct figures {
    char *text;
    size_t columns, rows;
    const char *header[FIGURES_COLUMNS];
    const char *cell[FIGURES_ROWS][FIGURES_COLUMNS];
} figures;

/* The whole file, NUL-terminated; free it. */
static inline char *
figures_bytes(size_t *size, const char *relative)
{
    FILE *f = fopen(kel_test_file(relative), "rb");
    ck_assert_msg(f != NULL, "cannot open %s", kel_test_file(relative));
    size_t n = 0, room = 1 << 16;
    char *bytes = malloc(room);
    ck_assert_ptr_nonnull(bytes);
    for (size_t got; (got = fread(bytes + n, 1, room - n - 1, f)) > 0;) {
        n += got;
        ck_assert_msg(n < room - 1, "%s is longer than figures are", relative);
    }
    fclose(f);
    bytes[n] = '\0';
    if (size != NULL)
        *size = n;
    return bytes;
}

static inline size_t
figures_cut(const char **cell, char *line)
{
    size_t n = 0;
    for (char *end = line; end != NULL; line = end + 1) {
        ck_assert_msg(n < FIGURES_COLUMNS, "too many columns");
        end = strchr(line, ',');
        if (end != NULL)
            *end = '\0';
        cell[n++] = line;
        if (end == NULL)
            break;
    }
    return n;
}

static inline figures *
figures_read(const char *relative)
{
    figures *f = calloc(1, sizeof *f);
    ck_assert_ptr_nonnull(f);
    f->text = figures_bytes(NULL, relative);
    for (char *line = f->text, *end; *line != '\0'; line = end + 1) {
        end = strchr(line, '\n');
        ck_assert_msg(end != NULL, "%s has no newline at its end", relative);
        *end = '\0';
        if (*line == '#' || *line == '\0')
            continue;
        if (f->columns == 0) {
            f->columns = figures_cut(f->header, line);
            continue;
        }
        ck_assert_msg(f->rows < FIGURES_ROWS, "%s has too many rows", relative);
        size_t n = figures_cut(f->cell[f->rows++], line);
        ck_assert_msg(n == f->columns, "row %zu of %s has %zu cells, not %zu", f->rows, relative, n, f->columns);
    }
    ck_assert_msg(f->rows > 0, "%s holds no figures", relative);
    return f;
}

static inline void
figures_free(figures *f)
{
    free(f->text);
    free(f);
}

/* The cell as printed; "" where it is empty. */
static inline const char *
figures_text(const figures *f, size_t row, const char *column)
{
    for (size_t j = 0; j < f->columns; j++)
        if (strcmp(f->header[j], column) == 0)
            return f->cell[row][j];
    ck_abort_msg("there is no column '%s'", column);
    return "";
}

static inline double
figures_number(const figures *f, size_t row, const char *column)
{
    const char *text = figures_text(f, row, column);
    char *end;
    double x = strtod(text, &end); /* the tests that use figures run in the C locale */
    ck_assert_msg(end != text && *end == '\0', "'%s' in column '%s' is no number", text, column);
    return x;
}

/* Row whose cells in two columns are as given; the second pair may be NULL. */
static inline size_t
figures_row(const figures *f, const char *column, const char *text, const char *column2, const char *text2)
{
    for (size_t i = 0; i < f->rows; i++)
        if (strcmp(figures_text(f, i, column), text) == 0
            && (column2 == NULL || strcmp(figures_text(f, i, column2), text2) == 0))
            return i;
    ck_abort_msg("there is no row with %s = '%s'", column, text);
    return 0;
}

#endif
