/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Physical lines of an input, one at a time, in memory bounded by the longest line. Not installed. */
#ifndef KELSPAN_LINES_H
#define KELSPAN_LINES_H

#include <stdbool.h>
#include <kelspan/record.h>
#include <kelspan/rows.h>

enum { KEL__LINE_LIMIT = 1 << 20 };    /* bytes of a line, its end not counted */

typedef struct kel__lines {
    kel_input input;
    kel_digest *digest;
    char hex[65];              /* "" until asked for */
    char *buffer;              /* bytes begin..end are read but not yet delivered */
    size_t capacity, begin, end, searched;
    bool started, ended;
    size_t number;             /* of the line delivered last, 1-based */
} kel__lines;

/* Fills *lines; kel__lines_free after a failure too. */
kel_status kel__lines_start(kel__lines *lines, kel_input input, kel_error *err);
/* The next line without its end, valid until the next call; *line = NULL at the end of the input. */
kel_status kel__lines_next(const char **line, size_t *n, kel__lines *lines, kel_error *err);
const char *kel__lines_digest(kel__lines *lines);
void kel__lines_free(kel__lines *lines);

#endif
