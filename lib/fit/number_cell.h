/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Cells of numbers: what is printed round a number, and the number itself. Not installed. */
#ifndef KELSPAN_NUMBER_CELL_H
#define KELSPAN_NUMBER_CELL_H

#include <kelspan.h>

/* Status marks: the source doubts, extrapolates or bounds the value. Bits, so that a row collects them. */
enum {
    KEL__MARK_PARENTHESES = 1, KEL__MARK_COLON = 2, KEL__MARK_ASTERISK = 4, KEL__MARK_DAGGER = 8,
    KEL__MARK_ABOUT = 16, KEL__MARK_LESS = 32, KEL__MARK_GREATER = 64, KEL__MARK_ESTIMATED = 128,
    KEL__MARK_SETS = 256
};

typedef struct kel__cell {
    const char *p, *core;      /* the trimmed cell, and what is left of it without its marks */
    size_t n, core_n;
    size_t line, column;       /* of p */
    unsigned marks;
    bool empty;                /* nothing, ... - -- n/a, an ellipsis or a dash */
} kel__cell;

/* Takes the marks off. Never fails. */
kel__cell kel__cell_of(const char *bytes, size_t n, size_t line, size_t column);

/* The number that the core is, in SI; *resolution (may be NULL) one unit of its last digit. comma: the decimal mark
   is a comma. Errors stand at the offending byte. A negative number of kelvin is answered by the advice to look at
   the unit. */
kel_status kel__cell_number(double *out, double *resolution, const kel__cell *cell, const kel_unit *unit, bool comma,
                            kel_error *err);

/* The core as an interval, "20-100", "20 to 100", "-50 - 20", with any dash: *from and *to get its ends as cores with
   their places. */
kel_status kel__cell_interval(kel__cell *from, kel__cell *to, const kel__cell *cell, kel_error *err);

/* Appends the marks as words, "in parentheses, with an asterisk". */
void kel__marks_text(kel_text *text, unsigned marks);

/* Appends n bytes; with comma, points for commas. */
void kel__put_points(kel_text *out, const char *p, size_t n, bool comma);

/* Appends the cell with its marks; turn: with the other sign. */
void kel__put_cell(kel_text *out, const kel__cell *cell, bool turn, bool comma);

#endif
