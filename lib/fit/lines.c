/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Physical lines. The buffer holds whole lines, so that a line is delivered in place; it is refilled when it holds no
   further line end and grows only when a single line does not fit. A line that reaches the limit without an end is
   refused there and then: an endless line from a pipe costs one buffer and no more.

   What no table can hold is refused here, before anything is made of it: NUL bytes (binary files, UTF-16) and a
   carriage return inside a line. A UTF-8 byte order mark at the very start is passed over and does not count as a
   column. */
#include "lines.h"

#include <errno.h>
#include <stdlib.h>
#include <string.h>

enum { FIRST_CAPACITY = 1 << 16 };

kel_status
kel__lines_start(kel__lines *lines, kel_input input, kel_error *err)
{
    *lines = (kel__lines){ .input = input };
    kel_status status = kel_digest_new(&lines->digest, err);
    if (status != KEL_OK)
        return status;
    lines->buffer = malloc(FIRST_CAPACITY);
    if (lines->buffer == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for reading");
    lines->capacity = FIRST_CAPACITY;
    return KEL_OK;
}

/* Room behind `end`: by moving what is left to the front, then by growing. The limit and a CRLF fit into the largest
   buffer. */
static kel_status
make_room(kel__lines *lines, kel_error *err)
{
    if (lines->begin > 0) {
        memmove(lines->buffer, lines->buffer + lines->begin, lines->end - lines->begin);
        lines->end -= lines->begin;
        lines->searched -= lines->begin;
        lines->begin = 0;
    }
    if (lines->end < lines->capacity)
        return KEL_OK;
    size_t capacity = 2 * lines->capacity;
    if (capacity > KEL__LINE_LIMIT + 8)
        capacity = KEL__LINE_LIMIT + 8;
    char *p = realloc(lines->buffer, capacity);
    if (p == NULL)
        return kel_error_set(err, KEL_E_NOMEM, lines->number + 1, 0, "out of memory for a line of over %zu bytes",
                             lines->end);
    lines->buffer = p;
    lines->capacity = capacity;
    return KEL_OK;
}

static kel_status
refill(kel__lines *lines, kel_error *err)
{
    kel_status status = make_room(lines, err);
    if (status != KEL_OK)
        return status;
    size_t room = lines->capacity - lines->end;
    long n;
    do {
        errno = 0;
        n = lines->input.read(lines->input.context, lines->buffer + lines->end, room);
    } while (n < 0 && errno == EINTR);
    if (n < 0) {
        char text[128];
        const char *reason = errno == 0 ? "unknown reason" : strerror_r(errno, text, sizeof text);
        if (lines->number == 0)
            return kel_error_set(err, KEL_E_IO, 0, 0, "reading failed: %s", reason);
        return kel_error_set(err, KEL_E_IO, 0, 0, "reading failed behind line %zu: %s", lines->number, reason);
    }
    if ((size_t)n > room)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "an input delivered %ld bytes where %zu were asked for", n,
                             room);
    kel_digest_add(lines->digest, lines->buffer + lines->end, (size_t)n);
    lines->end += (size_t)n;
    lines->ended = n == 0;
    return KEL_OK;
}

/* The byte order mark may come in pieces, as from a pipe. */
static kel_status
skip_mark(kel__lines *lines, kel_error *err)
{
    static const char mark[] = "\xEF\xBB\xBF";
    const size_t size = sizeof mark - 1;
    lines->started = true;
    while (lines->end < size && !lines->ended) {
        kel_status status = refill(lines, err);
        if (status != KEL_OK)
            return status;
    }
    if (lines->end >= size && memcmp(lines->buffer, mark, size) == 0)
        lines->begin = lines->searched = size;
    return KEL_OK;
}

static kel_status
check_line(const char *line, size_t n, size_t number, kel_error *err)
{
    const char *bad = memchr(line, '\0', n);
    if (bad != NULL)
        return kel_error_set(err, KEL_E_SYNTAX, number, (size_t)(bad - line) + 1,
                             "a NUL byte in the text: the file is binary or not in UTF-8");
    bad = memchr(line, '\r', n);
    if (bad != NULL)
        return kel_error_set(err, KEL_E_SYNTAX, number, (size_t)(bad - line) + 1,
                             "a carriage return inside the line: lines end with LF or CRLF");
    return KEL_OK;
}

kel_status
kel__lines_next(const char **line, size_t *n, kel__lines *lines, kel_error *err)
{
    *line = NULL;
    *n = 0;
    kel_status status;
    if (!lines->started && (status = skip_mark(lines, err)) != KEL_OK)
        return status;
    const char *stop;
    for (;;) {
        stop = memchr(lines->buffer + lines->searched, '\n', lines->end - lines->searched);
        if (stop != NULL || lines->ended)
            break;
        lines->searched = lines->end;
        if (lines->end - lines->begin > KEL__LINE_LIMIT + 1)
            break;
        if ((status = refill(lines, err)) != KEL_OK)
            return status;
    }
    const char *start = lines->buffer + lines->begin;
    size_t size = stop != NULL ? (size_t)(stop - start) : lines->end - lines->begin;
    if (stop == NULL && size == 0)
        return KEL_OK;
    lines->number++;
    size_t used = stop != NULL ? size + 1 : size;
    if (size > 0 && start[size - 1] == '\r')
        size--;
    if (size > KEL__LINE_LIMIT)
        return kel_error_set(err, KEL_E_SYNTAX, lines->number, KEL__LINE_LIMIT + 1,
                             "the line is longer than %d bytes", KEL__LINE_LIMIT);
    if ((status = check_line(start, size, lines->number, err)) != KEL_OK)
        return status;
    lines->begin += used;
    lines->searched = lines->begin;
    *line = start;
    *n = size;
    return KEL_OK;
}

const char *
kel__lines_digest(kel__lines *lines)
{
    if (lines->hex[0] == '\0')
        kel_digest_finish(lines->digest, lines->hex);
    return lines->hex;
}

void
kel__lines_free(kel__lines *lines)
{
    kel_digest_free(lines->digest);
    free(lines->buffer);
    *lines = (kel__lines){ .digest = NULL };
}
