/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The table of commands. A new command is a file cmd_NAME.c and a line here. */
#include "commands.h"

#include "answers.h"

#include <string.h>

#define GROUPS(...) (const option_group *const[]){ __VA_ARGS__, NULL }

const command commands[] = {
    { "read", "say what was understood of tables before anyone fits them", "TABLE...",
      "Reads tables of thermal expansion and prints their kinds, units, reference temperature, base, range, gaps, "
      "the rows left out and why, and what is known of their uncertainty. With --as csv a table is written in the "
      "product's own layout, in the units and digits printed.", run_read,
      GROUPS(&read_options, &temperature_unit_group, &table_group, &output_group) },
    { "fit", "fit alpha(T) to tables and save the coefficients in a record", "TABLE...",
      "Fits one curve alpha(T) to all values of all tables by weighted least squares: coefficients, mean "
      "coefficients and expansions each as what they are. Prints a report; with -o the record is saved, from which "
      "the other commands answer.",
      run_fit, GROUPS(&fit_options, &table_group, &unit_group, &output_group) },
    { "adopt", "make a record from published coefficients", "COEFFICIENTS.csv",
      "Reads polynomials that someone else has fitted, one row for each piece, and makes a record of them.",
      run_adopt, GROUPS(&adopt_options, &unit_group, &output_group) },
    { "show", "show what a record holds", "RECORD",
      "Shows pieces, validity range, gaps, transitions, uncertainty and sources of a record; --powers gives each "
      "piece's coefficients as powers of the temperature with their standard uncertainties.",
      run_show, GROUPS(&show_options, &csv_group, &unit_group, &table_group, &output_group) },
    { "residuals", "list the observations with fitted values and residuals", "RECORD",
      "Lists each observation that was fitted, the curve's value there, the residual, the share of a table's shared "
      "error and the standard uncertainty, and the rows that were left out with the reason.",
      run_residuals, GROUPS(&csv_group, &unit_group, &table_group, &output_group) },
    { "value", "coefficient, mean coefficient, expansion and length ratio at temperatures", "RECORD T...",
      "Answers at each temperature T. The mean coefficient, the expansion and the length ratio count from the "
      "reference temperature.", run_value,
      GROUPS(&answer_group, &csv_group, &reservation_group, &unit_group, &table_group, &output_group) },
    { "integrate", "integral, change in length and mean coefficient between two temperatures", "RECORD",
      "Answers for the interval from one temperature to another, or with --pairs for a stream of intervals in "
      "constant memory.",
      run_integrate,
      GROUPS(&integrate_options, &reservation_group, &unit_group, &length_unit_group, &table_group, &output_group) },
    { "tabulate", "a table of alpha, mean coefficient and expansion at even steps", "RECORD",
      "Answers from one temperature to another in steps, both ends included where the step divides the interval.",
      run_tabulate,
      GROUPS(&tabulate_options, &answer_group, &csv_group, &reservation_group, &unit_group, &table_group,
             &output_group) },
    { "help", "help on a command", "[COMMAND]", "Without COMMAND the list of commands.", run_help,
      GROUPS(&output_group) },
    { NULL, NULL, NULL, NULL, NULL, NULL },
};

const command *
command_find(const char *name)
{
    for (const command *c = commands; c->name != NULL; c++)
        if (strcmp(c->name, name) == 0)
            return c;
    return NULL;
}

/* Letters to insert, drop or exchange to turn a into b; names longer than the table count as far. */
static size_t
distance(const char *a, const char *b)
{
    enum { LONGEST = 24 };
    size_t n = strlen(a), m = strlen(b), row[LONGEST + 1];
    if (n > LONGEST || m > LONGEST)
        return LONGEST;
    for (size_t j = 0; j <= m; j++)
        row[j] = j;
    for (size_t i = 1; i <= n; i++) {
        size_t corner = row[0];
        row[0] = i;
        for (size_t j = 1; j <= m; j++) {
            size_t best = corner + (a[i - 1] != b[j - 1]);
            corner = row[j];
            best = row[j] + 1 < best ? row[j] + 1 : best;
            row[j] = row[j - 1] + 1 < best ? row[j - 1] + 1 : best;
        }
    }
    return row[m];
}

/* A name is near if three or fewer letters differ, or if it begins as the other does. */
const command *
command_near(const char *name)
{
    const command *nearest = NULL;
    size_t least = 4;
    for (const command *c = commands; c->name != NULL; c++) {
        size_t d = distance(name, c->name);
        if (strlen(name) >= 3 && strncmp(c->name, name, strlen(name)) == 0)
            d = 1; /* the start of a name */
        if (d < least && d < strlen(c->name)) {
            least = d;
            nearest = c;
        }
    }
    return nearest;
}
