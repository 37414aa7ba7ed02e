/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Answers at one temperature, in every layout: what `value` and `tabulate` share. */
#ifndef KELSPAN_ANSWERS_H
#define KELSPAN_ANSWERS_H

#include "options.h"
#include "output.h"
#include "reservations.h"

enum { ANSWER_COEFFICIENT, ANSWER_MEAN, ANSWER_EXPANSION, ANSWER_RATIO, ANSWERS };

/* What is asked of every temperature. */
typedef struct question {
    const subject *from;
    double reference;     /* K; the record's or another */
    bool assumed;         /* no table states that reference temperature */
    int base;             /* a kel_base; the record's or another */
    int wanted;           /* the main quantity: flags, status and --within-range follow it */
    const units *in;
    bool ratio;           /* is the length ratio listed in text and CSV */
} question;

/* Reads --quantity, --reference and --base. */
int question_begin(const job *j, question *out, const subject *from, const units *in);

typedef struct answers { double t; kel_answer of[ANSWERS]; } answers;

/* EXIT_FINE, or EXIT_FAILED with the error said. */
int answers_at(const job *j, answers *out, const question *q, double t);
/* Keeps the main quantity's reservations. */
int answers_reserve(job *j, const answers *a, const question *q);

/* Writes a result in the layout that the job asks for: begin, a call for each row, end, and free in any case. The
   rows pass through the sink, so that their number is not limited by memory. EXIT_FINE or EXIT_FAILED. */
typedef struct answer_writer {
    const job *j;
    const question *q;
    sink *out;
    kel_json json;
    columns *rows;
    size_t waiting;       /* rows in `rows` */
    kel_text headings;    /* of `rows`, NUL-terminated one after another */
    const char *heading[11];
} answer_writer;
int answers_begin(answer_writer *w, const job *j, const question *q, sink *out);
/* t_text: the temperature as it is to be printed in text and CSV; NULL: from a->t. */
int answers_row(answer_writer *w, const answers *a, const char *t_text);
int answers_end(answer_writer *w);
void answers_free(answer_writer *w);

/* --quantity, --reference, --base. */
extern const option_group answer_group;

#endif
