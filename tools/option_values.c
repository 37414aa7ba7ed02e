/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The values of options: quantities with their units, words, lists, and what says how a table is to be read. */
#include "messages.h"
#include "options.h"

#include <errno.h>
#include <stdlib.h>
#include <string.h>

const option_group output_group = { "Output", (const option_entry[]){
    { OPT_JSON, 0, "json", NULL, false, "one JSON object on stdout with all digits, SI units in the keys; warnings "
      "stand in it, an error is an object on stderr" },
    { OPT_QUIET, 'q', "quiet", NULL, false, "no warnings and no progress on stderr" },
    { OPT_HELP, 'h', "help", NULL, false, "this help" },
    { 0, 0, NULL, NULL, false, NULL } } };

const option_group csv_group = { "", (const option_entry[]){
    { OPT_CSV, 0, "csv", NULL, false, "comma-separated values with all digits" },
    { 0, 0, NULL, NULL, false, NULL } } };

const option_group reservation_group = { "Answers with a reservation (status 3)", (const option_entry[]){
    { OPT_ACCEPT, 0, "accept", "CODE[,CODE]", true, "keep the note but give status 0 for these: extrapolated, gap, "
      "transition, unreachable, unknown-uncertainty" },
    { OPT_WITHIN_RANGE, 0, "within-range", NULL, false,
      "refuse an extrapolated answer: status 1 and nothing on stdout" },
    { 0, 0, NULL, NULL, false, NULL } } };

const option_group temperature_unit_group = { "", (const option_entry[]){
    { OPT_TEMPERATURE_UNIT, 0, "temperature-unit", "UNIT", false, "K, degC, degF or degR in text and CSV" },
    { 0, 0, NULL, NULL, false, NULL } } };

const option_group unit_group = { "Units", (const option_entry[]){
    { OPT_TEMPERATURE_UNIT, 0, "temperature-unit", "UNIT", false, "K, degC, degF or degR in text and CSV" },
    { OPT_COEFFICIENT_UNIT, 0, "coefficient-unit", "UNIT", false,
      "for example 1e-6/K, ppm/degF or um/(m.K), in text and CSV" },
    { 0, 0, NULL, NULL, false, NULL } } };

const option_group length_unit_group = { "", (const option_entry[]){
    { OPT_LENGTH_UNIT, 0, "length-unit", "UNIT", false,
      "for example mm, um, in or mil, for lengths and their change in text" },
    { 0, 0, NULL, NULL, false, NULL } } };

const option_group table_group = { "Reading tables", (const option_entry[]){
    { OPT_COLUMN, 0, "column", "'QUANTITY [UNIT]=COLUMN'", true,
      "what a column of a foreign file is; COLUMN is its name there or its number from 1" },
    { OPT_SET, 0, "set", "'KEY: VALUE'", true, "metadata that the file lacks, for example 'reference temperature: 20 "
      "degC'" },
    { OPT_HEADER, 0, "header", "none|N", false, "the header stands in line N, or there is none" },
    { OPT_DELIMITER, 0, "delimiter", "WORD", false,
      "comma, semicolon, tab, or blanks for a table copied out of a document" },
    { OPT_TRANSPOSE, 0, "transpose", NULL, false, "temperatures stand across the top" },
    { OPT_INCLUDE_MARKED, 0, "include-marked", NULL, false, "take rows with a status mark too" },
    { OPT_LEAVE_OUT, 0, "leave-out", "FILE:LINE=REASON", true, "leave a row out; the reason is kept in the record" },
    { OPT_SERIES, 0, "series", "LABEL", false, "which material's columns to take" },
    { OPT_KIND, 0, "kind", "KIND", false, "which of several columns of one measurement: coefficient, mean, "
      "expansion, or all" },
    { OPT_GAP, 0, "gap", "D", false, "a stretch without observations longer than this difference is a gap" },
    { 0, 0, NULL, NULL, false, NULL } } };

/* A quantity that cannot be read is wrong usage, not a failure: the library's own words say why. */
int
read_quantity(const job *j, const char *reading, kel_dimension dimension, const char *text, double *out, kel_unit *unit)
{
    kel_error err = { 0 };
    if (kel_quantity_parse(out, unit, dimension, text, &err) < 0)
        return err.code == KEL_E_NOMEM ? fail_memory(j) : usage(j, "%s: %s", reading, err.message);
    return EXIT_FINE;
}

/* "--from" for messages. name has room for the longest of our options. */
static const char *
option_name(const job *j, int id, char name[32])
{
    const char *found = option_entry_name(j, id);
    name[0] = name[1] = '-';
    strncpy(name + 2, found, 29);
    name[31] = '\0';
    return name;
}

int
option_quantity(const job *j, int id, kel_dimension dimension, double *out, kel_unit *unit)
{
    const char *text = option_value(j, id);
    char name[32];
    return text == NULL ? EXIT_FINE : read_quantity(j, option_name(j, id, name), dimension, text, out, unit);
}

int
option_unit(const job *j, int id, kel_dimension dimension, kel_unit *out)
{
    const char *text = option_value(j, id);
    kel_error err = { 0 };
    char name[32];
    if (text != NULL && kel_unit_parse(out, dimension, text, strlen(text), &err) < 0)
        return err.code == KEL_E_NOMEM ? fail_memory(j) : usage(j, "%s: %s", option_name(j, id, name), err.message);
    return EXIT_FINE;
}

/* The base in the short words of the option, or as files spell it. */
int
option_base(const job *j, int id, int *out)
{
    const char *text = option_value(j, id);
    if (text == NULL)
        return EXIT_FINE;
    if (strcmp(text, "reference") == 0 || strcmp(text, kel_base_name(KEL_BASE_REFERENCE)) == 0)
        *out = KEL_BASE_REFERENCE;
    else if (strcmp(text, "current") == 0 || strcmp(text, kel_base_name(KEL_BASE_CURRENT)) == 0)
        *out = KEL_BASE_CURRENT;
    else
        return usage(j, "--base is reference or current, not %s", text);
    return EXIT_FINE;
}

/* An empty item, as behind a trailing comma, is handed over like any other: whoever reads it refuses it. */
bool
next_item(const char **rest, const char **item, size_t *n)
{
    if (*rest == NULL)
        return false;
    *item = *rest;
    *n = strcspn(*rest, ",");
    *rest = (*item)[*n] == ',' ? *item + *n + 1 : NULL;
    return true;
}

static int
read_delimiter(const job *j, kel_delimiter *out)
{
    static const struct { const char *name; kel_delimiter delimiter; } names[] = {
        { "comma", KEL_DELIMITER_COMMA }, { "semicolon", KEL_DELIMITER_SEMICOLON },
        { "tab", KEL_DELIMITER_TAB }, { "blanks", KEL_DELIMITER_BLANKS },
    };
    const char *text = option_value(j, OPT_DELIMITER);
    for (size_t i = 0; text != NULL && i < sizeof names / sizeof names[0]; i++)
        if (strcmp(text, names[i].name) == 0) {
            *out = names[i].delimiter;
            return EXIT_FINE;
        }
    return text == NULL ? EXIT_FINE : usage(j, "--delimiter is comma, semicolon, tab or blanks, not %s", text);
}

/* The kind is given in the short words of the option or as files spell it. */
static int
read_kind(const job *j, kel_kind_choice *out)
{
    static const struct { const char *name; kel_kind_choice kind; } names[] = {
        { "coefficient", KEL_CHOOSE_COEFFICIENT }, { "mean", KEL_CHOOSE_MEAN }, { "mean coefficient", KEL_CHOOSE_MEAN },
        { "expansion", KEL_CHOOSE_EXPANSION }, { "all", KEL_CHOOSE_ALL },
    };
    const char *text = option_value(j, OPT_KIND);
    for (size_t i = 0; text != NULL && i < sizeof names / sizeof names[0]; i++)
        if (strcmp(text, names[i].name) == 0) {
            *out = names[i].kind;
            return EXIT_FINE;
        }
    return text == NULL ? EXIT_FINE : usage(j, "--kind is coefficient, mean, expansion or all, not %s", text);
}

/* Lines count from 1; "none" becomes the 0 that the reader of tables expects. */
static int
read_header(const job *j, long *out)
{
    const char *text = option_value(j, OPT_HEADER);
    if (text == NULL)
        return EXIT_FINE;
    if (strcmp(text, "none") == 0) {
        *out = 0;
        return EXIT_FINE;
    }
    char *end;
    errno = 0;
    long n = strtol(text, &end, 10);
    if (errno != 0 || end == text || *end != '\0' || n < 1)
        return usage(j, "--header is none or a line from 1, not %s", text);
    *out = n;
    return EXIT_FINE;
}

/* A name that is misspelt would leave nothing out and say nothing. All operands are compared: those of `value` that
   are temperatures do no harm. */
static int
check_leave_out(const job *j, const char *text)
{
    for (size_t i = 0; i < j->operand_count; i++) {
        const char *name = j->operands[i];
        size_t n = strlen(name);
        if (strncmp(text, name, n) == 0 && text[n] == ':' && text[n + 1] >= '0' && text[n + 1] <= '9')
            return EXIT_FINE;
    }
    return usage(j, strchr(text, ':') == NULL || strchr(text, '=') == NULL
                    ? "--leave-out is FILE:LINE=REASON, not %s" : "--leave-out %s names none of the tables read", text);
}

/* All that says how a table is to be read. The lists belong to the job. */
int
table_options(job *j, kel_table_options *out)
{
    *out = (kel_table_options)KEL_TABLE_OPTIONS_INIT;
    out->columns = option_values(j, OPT_COLUMN, &out->column_count);
    out->settings = option_values(j, OPT_SET, &out->setting_count);
    out->leave_out = option_values(j, OPT_LEAVE_OUT, &out->leave_out_count);
    if (out->columns == NULL || out->settings == NULL || out->leave_out == NULL)
        return fail_memory(j);
    out->series = option_value(j, OPT_SERIES);
    out->transpose = option_given(j, OPT_TRANSPOSE);
    out->include_marked = option_given(j, OPT_INCLUDE_MARKED);
    int status = read_delimiter(j, &out->delimiter);
    for (size_t i = 0; i < out->leave_out_count && status == EXIT_FINE; i++)
        status = check_leave_out(j, out->leave_out[i]);
    if (status == EXIT_FINE)
        status = read_kind(j, &out->kind);
    if (status == EXIT_FINE)
        status = read_header(j, &out->header);
    if (status == EXIT_FINE)
        status = option_quantity(j, OPT_GAP, KEL_DIM_DIFFERENCE, &out->gap, NULL);
    if (status == EXIT_FINE && option_given(j, OPT_GAP) && !(out->gap > 0))
        return usage(j, "--gap must be above 0 K, not %s", option_value(j, OPT_GAP));
    return status;
}
