/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Small phrases in metadata values and coefficient files ("2 % + 0.1 [1e-6/K] k=2 from 20 degC to 100 degC"), read
   word by word. Not installed. */
#ifndef KELSPAN_PHRASE_H
#define KELSPAN_PHRASE_H

#include <stdbool.h>
#include <kelspan/text.h>
#include <kelspan/unit.h>

/* What is left to read, and where its first byte stood. line 0: from the command line. */
typedef struct kel__phrase {
    const char *p, *end;
    const char *start;         /* stands at `column` */
    size_t line, column;
    bool comma;                /* numbers have a decimal comma */
} kel__phrase;

typedef struct kel__word { const char *p; size_t n; } kel__word;

kel__phrase kel__phrase_of(const char *text, size_t n, bool comma, size_t line, size_t column);

/* Skips blanks. Is anything left? */
bool kel__phrase_left(kel__phrase *phrase);
/* The next word: up to a blank or one of + % = [ ( (which are words of their own). Empty at the end. Does not move
   on. */
kel__word kel__phrase_peek(kel__phrase *phrase);
/* Moves on over the next word if it is this one (case folded). */
bool kel__phrase_take(kel__phrase *phrase, const char *word);
/* Fails at the next word: "expected `expected`, found 'word'" or "... the text ends". */
kel_status kel__phrase_expected(kel__phrase *phrase, const char *expected, kel_error *err);

/* A number at the next word, in SI if a unit is given. what: names it in messages, "a percentage". */
kel_status kel__phrase_number(double *out, kel__phrase *phrase, const kel_unit *unit, const char *what, kel_error *err);
/* "[UNIT]" or "(UNIT)": the text between. */
kel_status kel__phrase_bracket(kel__word *unit, kel__phrase *phrase, kel_error *err);
/* A temperature with its unit: "293.15 K", "20°C". */
kel_status kel__phrase_temperature(double *out, kel__phrase *phrase, kel_error *err);

/* A number in a cell or value of its own. A decimal comma is taken only where comma is true, and then no point.
   text[n] at line, column. */
kel_status kel__number_text(double *out, const kel_unit *unit, const char *text, size_t n, bool comma, size_t line,
                            size_t column, kel_error *err);

/* x for a message or label: at most six significant digits, no zeros behind the last. out: KEL_NUMBER_SIZE bytes. */
void kel__number_short(char *out, double x);

/* Gives an error of a lower level its place: its column counted within a text that stands at line, column. */
kel_status kel__error_at(kel_error *err, const kel_error *inner, size_t line, size_t column);

#endif
