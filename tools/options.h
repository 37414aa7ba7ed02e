/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Options: tables of what each command takes, and reading them off the command line. */
#ifndef KELSPAN_OPTIONS_H
#define KELSPAN_OPTIONS_H

#include "job.h"

/* One number for each option of the tool, so that a command asks for it by name. Above the range of characters. */
enum option_id {
    OPT_HELP = 256, OPT_JSON, OPT_CSV, OPT_QUIET, OPT_ACCEPT, OPT_WITHIN_RANGE, OPT_TEMPERATURE_UNIT,
    OPT_COEFFICIENT_UNIT, OPT_LENGTH_UNIT, OPT_COLUMN, OPT_SET, OPT_HEADER, OPT_DELIMITER, OPT_TRANSPOSE,
    OPT_INCLUDE_MARKED, OPT_LEAVE_OUT, OPT_SERIES, OPT_KIND, OPT_GAP, OPT_OUTPUT, OPT_AS, OPT_FORM, OPT_DEGREE,
    OPT_JOINS, OPT_CONTINUITY, OPT_REFERENCE, OPT_BASE, OPT_RANGE, OPT_CANDIDATES, OPT_POWERS, OPT_QUANTITY,
    OPT_FROM, OPT_TO, OPT_LENGTH, OPT_LENGTH_AT, OPT_PAIRS, OPT_STEP
};

typedef struct option_entry {
    int id;
    char letter;            /* short form, 0: none */
    const char *name;       /* long form */
    const char *argument;   /* as help shows it; NULL: takes none */
    bool repeatable;        /* may be given several times, each counts */
    const char *help;
} option_entry;

typedef struct option_group {
    const char *heading;
    const option_entry *entries; /* ends with id 0 */
} option_group;

/* Groups that several commands share. */
extern const option_group output_group, csv_group, reservation_group, table_group;
extern const option_group unit_group, temperature_unit_group, length_unit_group;

/* Reads the arguments behind the command's name into the job. EXIT_FINE, or EXIT_USAGE after saying what is wrong. */
int options_read(job *j, int argc, char **argv);

/* The long name of an option of this command, without dashes. */
const char *option_entry_name(const job *j, int id);
bool option_given(const job *j, int id);
/* The value of an option, NULL if it was not given. */
const char *option_value(const job *j, int id);
/* All values of a repeatable one, in order. NULL (with *n = 0 set) only if memory ran out. */
const char *const *option_values(job *j, int id, size_t *n);

/* Reading of values. Each leaves *out alone where the option was not given, and gives EXIT_FINE or EXIT_USAGE. */
int option_quantity(const job *j, int id, kel_dimension dimension, double *out, kel_unit *unit);
int option_unit(const job *j, int id, kel_dimension dimension, kel_unit *out);
int option_base(const job *j, int id, int *out);
/* `reading` names what the text is for ("--from", "temperature"). */
int read_quantity(const job *j, const char *reading, kel_dimension dimension, const char *text, double *out,
                  kel_unit *unit);

/* Next item of a comma-separated list: sets *item and its length, moves *rest behind it; false at the end. */
bool next_item(const char **rest, const char **item, size_t *n);

/* The options that say how to read a table. */
int table_options(job *j, kel_table_options *out);

#endif
