/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Errors and warnings: one line each on stderr, or objects with --json. */
#ifndef KELSPAN_MESSAGES_H
#define KELSPAN_MESSAGES_H

#include "job.h"

/* Reports an error and gives EXIT_FAILED. file may be NULL; its place comes from err. */
int fail(const job *j, const char *file, const kel_error *err);
/* A file that could not be written: the library's message names it already. */
int fail_save(const job *j, const char *file, const kel_error *err);
/* The same with a text of our own. */
int fail_text(const job *j, const char *file, const char *format, ...) __attribute__((format(printf, 3, 4)));
int fail_memory(const job *j);
/* An error of a call that got options along: where it concerns one of them and no line of the file it is wrong usage,
   else as fail. */
int fail_or_usage(const job *j, const char *file, const kel_error *err);
/* Wrong usage: the error, then where help is. Gives EXIT_USAGE. */
int usage(const job *j, const char *format, ...) __attribute__((format(printf, 2, 3)));

/* Keeps a warning for the end of the run: a command that fails says its error only. The strings are copied. count is
   how often it occurred (at least once). */
int warn(job *j, const char *code, const char *file, size_t line, size_t count, const char *text);
/* Those of a table, of a fit or of adopted coefficients. */
int warn_all(job *j, const char *file, const kel_warning *warnings, size_t n);

/* Prints the warnings on stderr, unless --quiet or --json. */
void say_warnings(const job *j);
/* Adds the member "warnings" to a result. */
void json_warnings(const job *j, kel_json *json);

/* Name of a file for people: quoted, "stdin" for "-". */
void add_file_name(kel_text *text, const char *file);
/* Writes a line on stderr. */
void say_line(const char *bytes, size_t n);

#endif
