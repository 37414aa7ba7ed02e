/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One run of one command: what was asked, what has to be said beside the answer, and how it ends. Every function of the
   tool that can fail takes the job, reports its own error once, and gives the exit status. */
#ifndef KELSPAN_JOB_H
#define KELSPAN_JOB_H

#include <kelspan-fit.h>

struct command;

enum exit_status { EXIT_FINE = 0, EXIT_FAILED = 1, EXIT_USAGE = 2, EXIT_RESERVED = 3 };

/* Something to say beside the answer: a warning or a reservation. Equal code, text and file are one note with a
   count. */
typedef struct note {
    const char *code, *text, *file; /* file: NULL if the note belongs to none */
    size_t line, count;             /* of its first place; 0: it has no line */
    unsigned flag;                  /* of reservations; 0 in warnings */
    struct note *next;
} note;

typedef struct given_option { int id; const char *value; } given_option;

typedef struct job {
    const struct command *command;
    kel_arena *memory;              /* everything that lives as long as the run */
    given_option *options; size_t option_count;
    const char **operands; size_t operand_count;
    bool json, csv, quiet, within_range;
    unsigned accepted;              /* flags of reservations that leave the status alone */
    note *warnings, *reservations;  /* in the order in which they arose */
    bool report_on_stderr;          /* stdout carries a record (-o -) */
} job;

#endif
