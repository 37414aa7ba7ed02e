/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Errors and warnings. An error is one line `kelspan: FILE:LINE:COLUMN: message` on stderr, or with --json one object
   there; nothing else is said by a run that fails. Warnings wait until the answer stands, then appear one line for
   each kind and file with their count and first place, or with --json as a member of the result. */
#include "messages.h"

#include "commands.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>
#include <unistd.h>

/* stderr is written in whole lines and without a buffer, so that lines of processes that share it do not mix. A failure
   to write there can be reported nowhere. */
void
say_line(const char *bytes, size_t n)
{
    while (n > 0) {
        ssize_t k = write(STDERR_FILENO, bytes, n);
        if (k <= 0)
            return;
        bytes += k;
        n -= (size_t)k;
    }
}

/* Appends the line end, says the line and frees it. Where memory ran out while it was put together, that is said
   instead. */
static void
say_text(kel_text *line)
{
    kel_text_add(line, "\n");
    if (line->failed)
        say_line("kelspan: out of memory\n", 23);
    else
        say_line(line->bytes, line->size);
    kel_text_free(line);
}

void
add_file_name(kel_text *text, const char *file)
{
    if (strcmp(file, "-") == 0)
        kel_text_add(text, "stdin");
    else
        kel_text_quote(text, file, strlen(file));
}

/* "FILE:LINE:COLUMN: ", as far as they are known, in the form that editors understand. */
static void
add_place(kel_text *text, const char *file, size_t line, size_t column)
{
    if (file != NULL) {
        add_file_name(text, file);
        kel_text_add(text, ":");
    }
    if (line != 0)
        kel_text_printf(text, file != NULL ? "%zu:" : "line %zu:", line);
    if (line != 0 && column != 0)
        kel_text_printf(text, "%zu:", column);
    if (file != NULL || line != 0)
        kel_text_add(text, " ");
}

/* Lines and columns count from 1; 0 stands for none. */
static void
json_place(kel_json *json, const char *key, size_t n)
{
    if (n == 0)
        kel_json_null(json, key);
    else
        kel_json_count(json, key, n);
}

/* The one place where an error leaves the program. */
static void
say_error(const job *j, const char *file, size_t line, size_t column, const char *message)
{
    kel_text text = KEL_TEXT_INIT;
    if (!j->json) {
        kel_text_add(&text, "kelspan: ");
        add_place(&text, file, line, column);
        kel_text_quote(&text, message, strlen(message)); /* it may hold words of the command line */
        say_text(&text);
        return;
    }
    kel_json json;
    kel_json_begin(&json, &text);
    kel_json_inline_object(&json, NULL);
    kel_json_string(&json, "error", message);
    kel_json_string(&json, "file", file);
    json_place(&json, "line", line);
    json_place(&json, "column", column);
    kel_json_end(&json);
    if (!text.failed)
        say_line(text.bytes, text.size);
    else
        say_line("{\"error\": \"out of memory\", \"file\": null, \"line\": null, \"column\": null}\n", 73);
    kel_text_free(&text);
}

/* The library's message is kept; a status without one gets its short name. */
int
fail(const job *j, const char *file, const kel_error *err)
{
    const char *message = err->message[0] != '\0' ? err->message : kel_status_text(err->code);
    say_error(j, file, err->line, err->column, message);
    return EXIT_FAILED;
}

/* With --json the name is wanted as a member too. */
int
fail_save(const job *j, const char *file, const kel_error *err)
{
    return fail(j, j->json ? file : NULL, err);
}

int
fail_text(const job *j, const char *file, const char *format, ...)
{
    char message[1024];
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(message, sizeof message, format, arguments);
    va_end(arguments);
    say_error(j, file, 0, 0, message);
    return EXIT_FAILED;
}

int
fail_or_usage(const job *j, const char *file, const kel_error *err)
{
    bool option = err->code == KEL_E_ARGUMENT || err->code == KEL_E_SYNTAX || err->code == KEL_E_UNIT;
    return option && err->line == 0 ? usage(j, "%s", err->message) : fail(j, file, err);
}

int
fail_memory(const job *j)
{
    return fail_text(j, NULL, "out of memory");
}

/* Says where help is in the same line, so that it is one line as every error. */
int
usage(const job *j, const char *format, ...)
{
    char message[1024];
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(message, sizeof message - 64, format, arguments);
    va_end(arguments);
    size_t n = strlen(message);
    snprintf(message + n, sizeof message - n, "; try: kelspan help%s%s", j->command != NULL ? " " : "",
             j->command != NULL ? j->command->name : "");
    say_error(j, NULL, 0, 0, message);
    return EXIT_USAGE;
}

static bool
same(const char *a, const char *b)
{
    return a == b || (a != NULL && b != NULL && strcmp(a, b) == 0);
}

/* Equal warnings of one file become one with a count; their first place is kept. */
int
warn(job *j, const char *code, const char *file, size_t line, size_t count, const char *text)
{
    note **end = &j->warnings;
    for (; *end != NULL; end = &(*end)->next)
        if (same((*end)->code, code) && same((*end)->file, file) && same((*end)->text, text)) {
            (*end)->count += count;
            return EXIT_FINE;
        }
    note *n = kel_arena_take(j->memory, 1, sizeof *n);
    if (n == NULL)
        return fail_memory(j);
    n->code = kel_arena_string(j->memory, code);
    n->text = kel_arena_string(j->memory, text);
    n->file = kel_arena_string(j->memory, file);
    n->line = line;
    n->count = count == 0 ? 1 : count;
    if (n->code == NULL || n->text == NULL || (file != NULL && n->file == NULL))
        return fail_memory(j);
    *end = n;
    return EXIT_FINE;
}

/* Those that the library counted already. */
int
warn_all(job *j, const char *file, const kel_warning *warnings, size_t n)
{
    for (size_t i = 0; i < n; i++) {
        int status = warn(j, warnings[i].code, file, warnings[i].line, warnings[i].count, warnings[i].text);
        if (status != EXIT_FINE)
            return status;
    }
    return EXIT_FINE;
}

void
say_warnings(const job *j)
{
    if (j->json || j->quiet)
        return;
    for (const note *n = j->warnings; n != NULL; n = n->next) {
        /* One line for a kind and file: that of its first note, which counts the later ones too. */
        bool first = true;
        for (const note *m = j->warnings; m != n; m = m->next)
            first = first && !(same(m->code, n->code) && same(m->file, n->file));
        if (!first)
            continue;
        size_t count = 0;
        for (const note *m = n; m != NULL; m = m->next)
            count += same(m->code, n->code) && same(m->file, n->file) ? m->count : 0;
        kel_text line = KEL_TEXT_INIT;
        kel_text_add(&line, "kelspan: ");
        add_place(&line, n->file, n->line, 0);
        kel_text_printf(&line, "warning: %s", n->text);
        if (count > 1)
            kel_text_printf(&line, n->line != 0 ? " (%zu times, first here)" : " (%zu times, this is the first)",
                            count);
        say_text(&line);
    }
}

/* All of them, not one for each kind: a program can sort for itself. */
void
json_warnings(const job *j, kel_json *json)
{
    kel_json_array(json, "warnings");
    for (const note *n = j->warnings; n != NULL; n = n->next) {
        kel_json_object(json, NULL);
        kel_json_string(json, "code", n->code);
        kel_json_string(json, "text", n->text);
        kel_json_string(json, "file", n->file);
        json_place(json, "line", n->line);
        kel_json_count(json, "count", n->count);
        kel_json_end(json);
    }
    kel_json_end(json);
}
