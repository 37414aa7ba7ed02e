/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan help [COMMAND]: written from the tables of commands and options, so that it cannot fall behind them. */
#include "commands.h"
#include "files.h"
#include "messages.h"
#include "reservations.h"

#include <string.h>
#include <unistd.h>

enum { SCREEN = 79, OPTION_INDENT = 8 };

/* Appends words with line breaks, each line indented; the first line starts at `column`. */
static void
add_wrapped(kel_text *out, const char *words, size_t indent, size_t column)
{
    for (; column < indent; column++)
        kel_text_add(out, " ");
    bool first = true;
    while (*words != '\0') {
        size_t n = strcspn(words, " ");
        if (!first && column + 1 + n > SCREEN) {
            kel_text_add(out, "\n");
            for (column = 0; column < indent; column++)
                kel_text_add(out, " ");
            first = true;
        }
        if (!first) {
            kel_text_add(out, " ");
            column++;
        }
        kel_text_add_bytes(out, words, n);
        column += n;
        first = false;
        words += n + (words[n] == ' ');
    }
    kel_text_add(out, "\n");
}

/* The name and its argument on one line, what it does below: the longest names leave no room beside them. */
static void
add_group(kel_text *out, const option_group *g)
{
    if (g->heading[0] != '\0')
        kel_text_printf(out, "\n%s\n", g->heading);
    for (const option_entry *e = g->entries; e->id != 0; e++) {
        kel_text_add(out, "    ");
        if (e->letter != 0)
            kel_text_printf(out, "-%c, ", e->letter);
        kel_text_printf(out, "--%s", e->name);
        if (e->argument != NULL)
            kel_text_printf(out, " %s", e->argument);
        kel_text_add(out, "\n");
        add_wrapped(out, e->help, OPTION_INDENT, 0);
    }
}

/* Takes the text over. */
static int
deliver(const job *j, kel_text *text)
{
    sink s;
    sink_begin(&s, STDOUT_FILENO);
    s.pending = *text;
    *text = (kel_text)KEL_TEXT_INIT;
    return sink_end(j, &s);
}

/* The groups come in the order of the command table: what is particular first, what all share last. */
int
help_of(const job *j, const command *c)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_printf(&text, "kelspan %s [options] %s\n\n", c->name, c->operands);
    add_wrapped(&text, c->details, 0, 0);
    for (const option_group *const *g = c->groups; *g != NULL; g++)
        add_group(&text, *g);
    if (c->run == run_help)
        kel_text_add(&text, "\nThe manual page kelspan(1) says more.\n");
    else
        kel_text_printf(&text, "\nThe manual page kelspan-%s(1) says more.\n", c->name);
    return deliver(j, &text);
}

/* The list of commands, and what a beginner stumbles over first: units. */
int
help_all(const job *j)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add(&text, "kelspan COMMAND [options] ...\n\nFits tables of linear thermal expansion and answers from "
                        "the fit with "
                        "uncertainty and flags.\n\n");
    for (const command *c = commands; c->name != NULL; c++) {
        kel_text_printf(&text, "    %-11s ", c->name);
        add_wrapped(&text, c->purpose, 16, 16);
    }
    kel_text_add(&text, "\nkelspan help COMMAND tells a command's options, kelspan --version the version.\n"
                        "Temperatures and lengths carry their unit: 77K, -321degF, 20degC, 250mm.\n");
    return deliver(j, &text);
}

/* The same for programs: what commands there are. */
static int
help_json(const job *j)
{
    kel_text text = KEL_TEXT_INIT;
    kel_json json;
    kel_json_begin(&json, &text);
    kel_json_object(&json, NULL);
    kel_json_string(&json, "version", kel_version());
    kel_json_array(&json, "commands");
    for (const command *c = commands; c->name != NULL; c++) {
        kel_json_object(&json, NULL);
        kel_json_string(&json, "name", c->name);
        kel_json_string(&json, "purpose", c->purpose);
        kel_json_string(&json, "operands", c->operands);
        kel_json_inline_array(&json, "options");
        for (const option_group *const *g = c->groups; *g != NULL; g++)
            for (const option_entry *e = (*g)->entries; e->id != 0; e++)
                kel_json_string(&json, NULL, e->name);
        kel_json_end(&json);
        kel_json_end(&json);
    }
    kel_json_end(&json);
    json_reservations(j, &json);
    json_warnings(j, &json);
    kel_json_end(&json);
    return deliver(j, &text);
}

/* The name may hold anything, so it is quoted. */
int
unknown_command(const job *j, const char *name)
{
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, name, strlen(name));
    const command *near = command_near(name);
    const char *shown = quoted.failed || quoted.bytes == NULL ? "" : quoted.bytes;
    int status = near == NULL ? usage(j, "there is no command '%s'", shown)
                              : usage(j, "there is no command '%s', the nearest is %s", shown, near->name);
    kel_text_free(&quoted);
    return status;
}

int
run_help(job *j)
{
    if (j->operand_count > 1)
        return usage(j, "help takes one command, not %zu", j->operand_count);
    if (j->operand_count == 0)
        return j->json ? help_json(j) : help_all(j);
    const command *c = command_find(j->operands[0]);
    if (c == NULL)
        return unknown_command(j, j->operands[0]);
    return help_of(j, c);
}
