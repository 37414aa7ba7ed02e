/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The commands: one table that drives dispatch, help and completion. */
#ifndef KELSPAN_COMMANDS_H
#define KELSPAN_COMMANDS_H

#include "options.h"

typedef struct command {
    const char *name;
    const char *purpose;                  /* one line for the list of commands */
    const char *operands;                 /* as the synopsis shows them */
    const char *details;                  /* a paragraph for `kelspan help COMMAND` */
    int (*run)(job *j);                   /* gives the exit status */
    const option_group *const *groups;    /* ends with NULL */
} command;

/* All commands in the order in which a user meets them; ends with a NULL name. */
extern const command commands[];

/* NULL if there is none of that name. */
const command *command_find(const char *name);
/* The command whose name is nearest to `name`, NULL if none is near. */
const command *command_near(const char *name);

extern const option_group read_options, fit_options, adopt_options, show_options,
    integrate_options, tabulate_options;
int run_read(job *j);
int run_fit(job *j);
int run_adopt(job *j);
int run_show(job *j);
int run_residuals(job *j);
int run_value(job *j);
int run_integrate(job *j);
int run_tabulate(job *j);
int run_help(job *j);

/* Help of one command on stdout; EXIT_FINE, or EXIT_FAILED where stdout cannot be written. */
int help_of(const job *j, const command *c);
/* Wrong usage: there is no command of that name, but perhaps one that is near. */
int unknown_command(const job *j, const char *name);
/* The list of commands on stdout. */
int help_all(const job *j);

#endif
