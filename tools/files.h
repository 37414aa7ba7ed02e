/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Files in and out. */
#ifndef KELSPAN_FILES_H
#define KELSPAN_FILES_H

#include "job.h"

/* A file being read through a buffer, so that its first bytes can be looked at before they are used. */
typedef struct file file;

/* Opens NAME, `-` is stdin. EXIT_FINE or EXIT_FAILED. */
int file_open(const job *j, file **out, const char *name);
kel_input file_input(file *f);
void file_close(file *f);

/* Does the file's first character that is no blank open a JSON object, as a record does? */
bool file_is_record(file *f);

/* The bytes of a file for those who need all of it, at most `limit`. EXIT_FINE or EXIT_FAILED. */
int file_read_all(const job *j, kel_text *out, file *f, const char *name, size_t limit);

/* What a command answers from: a record, or a table that was fitted with the defaults (a warning says so). */
typedef struct subject {
    const char *name;
    kel_record *record;
    const kel_content *content;
    bool fitted;
} subject;

int subject_open(job *j, subject *out, const char *name);
void subject_close(subject *s);

/* Reads a table and collects its warnings. */
int table_open(job *j, kel_table **out, const char *name, const kel_table_options *options);

/* EXIT_USAGE if writing to `output` would overwrite one of the inputs, EXIT_FINE otherwise. */
int output_is_no_input(const job *j, const char *output, const char *const *inputs, size_t n);

/* Does -o mean stdout: as `-`, or by naming what stdout is, such as /dev/stdout? */
bool output_is_stdout(const char *output);

/* Bytes on a stream, kept until `sink_end`, or written in large blocks where more than that comes. */
typedef struct sink { int fd; kel_text pending; int error; } sink;
void sink_begin(sink *s, int fd);
/* Writes out what is pending if it is much. False once writing failed. */
bool sink_pass(sink *s);
/* Writes out what is pending and says nothing of a failure. */
void sink_pour(sink *s);
/* Writes the rest. EXIT_FINE, or EXIT_FAILED with the error said. */
int sink_end(const job *j, sink *s);

#endif
