/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Options. Every command's tables go to getopt_long as they are, so that what help shows is what is accepted. Options
   may stand anywhere behind the command's name: getopt is asked to hand operands over in order (a leading '-'), and
   an argument that starts with '-' and a digit or point is taken as an operand before getopt sees it: -321degF is a
   temperature. */
#include "options.h"

#include "commands.h"
#include "messages.h"

#include <ctype.h>
#include <getopt.h>
#include <stdlib.h>
#include <string.h>

enum { MOST_OPTIONS = 64 };

static const option_entry *
find_entry(const command *c, int id)
{
    for (const option_group *const *g = c->groups; *g != NULL; g++)
        for (const option_entry *e = (*g)->entries; e->id != 0; e++)
            if (e->id == id || (e->letter != 0 && e->letter == id))
                return e;
    return NULL;
}

/* getopt's tables from ours. letters: room for 2 characters an option and a start. */
static void
getopt_tables(const command *c, struct option *longs, char *letters)
{
    size_t n = 0;
    *letters++ = '-';
    *letters++ = ':';
    for (const option_group *const *g = c->groups; *g != NULL; g++)
        for (const option_entry *e = (*g)->entries; e->id != 0 && n < MOST_OPTIONS; e++) {
            longs[n++] = (struct option){ e->name, e->argument != NULL ? required_argument : no_argument, NULL, e->id };
            if (e->letter != 0) {
                *letters++ = e->letter;
                if (e->argument != NULL)
                    *letters++ = ':';
            }
        }
    longs[n] = (struct option){ NULL, 0, NULL, 0 };
    *letters = '\0';
}

static bool
is_number(const char *a)
{
    return a[0] == '-' && (isdigit((unsigned char)a[1]) || a[1] == '.');
}

static int
keep_option(job *j, int id, const char *value)
{
    const option_entry *e = find_entry(j->command, id);
    if (e->argument != NULL && !e->repeatable && option_given(j, e->id))
        return usage(j, "--%s is given twice", e->name);
    if (e->argument == NULL && option_given(j, e->id))
        return EXIT_FINE; /* said already; one argument can say it any number of times: -qqq */
    j->options[j->option_count++] = (given_option){ e->id, value };
    return EXIT_FINE;
}

/* getopt's report of what it did not understand, in our words. */
static int
refuse(const job *j, int code, const char *argument)
{
    kel_text shown = KEL_TEXT_INIT;
    if (optopt > 0 && optopt < 256)
        kel_text_printf(&shown, "-%c", isprint(optopt) ? optopt : '?');
    else
        kel_text_quote(&shown, argument, strcspn(argument, "="));
    const char *name = shown.failed ? "" : shown.bytes;
    int status;
    if (code == ':')
        status = usage(j, "option %s needs a value", name);
    else if (optopt != 0 && find_entry(j->command, optopt) != NULL)
        status = usage(j, "option %s takes no value", name);
    else
        status = usage(j, "unknown or ambiguous option %s", name);
    kel_text_free(&shown);
    return status;
}

int
options_read(job *j, int argc, char **argv)
{
    struct option longs[MOST_OPTIONS + 1];
    char letters[2 * MOST_OPTIONS + 3];
    getopt_tables(j->command, longs, letters);
    /* An argument holds one option with a value at most; those without count once each. */
    j->options = kel_arena_take(j->memory, (size_t)argc + MOST_OPTIONS, sizeof *j->options);
    j->operands = kel_arena_take(j->memory, (size_t)argc, sizeof *j->operands);
    if (j->options == NULL || j->operands == NULL)
        return fail_memory(j);
    for (int i = 1; i < argc && strcmp(argv[i], "--") != 0; i++)
        j->json = j->json || strcmp(argv[i], "--json") == 0; /* so that an error about the options is an object too */
    for (; argc > 1 && is_number(argv[1]); argv++, argc--)
        j->operands[j->operand_count++] = argv[1];
    opterr = 0;
    optind = 0; /* glibc: start afresh at argv[1] and forget main's own reading of the program's options */
    for (bool fresh = true;; fresh = false) {
        if (!fresh && optind < argc && is_number(argv[optind])) {
            j->operands[j->operand_count++] = argv[optind++];
            continue;
        }
        int code = getopt_long(argc, argv, letters, longs, NULL);
        if (code == -1)
            break;
        int status = EXIT_FINE;
        if (code == 1)
            j->operands[j->operand_count++] = optarg;
        else if (code == '?' || code == ':')
            status = refuse(j, code, argv[optind - 1]);
        else
            status = keep_option(j, code, optarg);
        if (status != EXIT_FINE)
            return status;
    }
    for (; optind < argc; optind++)
        j->operands[j->operand_count++] = argv[optind];
    j->json = option_given(j, OPT_JSON);
    j->csv = option_given(j, OPT_CSV);
    j->quiet = option_given(j, OPT_QUIET);
    j->within_range = option_given(j, OPT_WITHIN_RANGE);
    if (j->json && j->csv)
        return usage(j, "--json and --csv exclude each other");
    return EXIT_FINE;
}

const char *
option_entry_name(const job *j, int id)
{
    const option_entry *e = find_entry(j->command, id);
    return e != NULL ? e->name : "";
}

bool
option_given(const job *j, int id)
{
    for (size_t i = 0; i < j->option_count; i++)
        if (j->options[i].id == id)
            return true;
    return false;
}

const char *
option_value(const job *j, int id)
{
    for (size_t i = 0; i < j->option_count; i++)
        if (j->options[i].id == id)
            return j->options[i].value;
    return NULL;
}

const char *const *
option_values(job *j, int id, size_t *n)
{
    const char **values = kel_arena_take(j->memory, j->option_count, sizeof *values);
    *n = 0;
    for (size_t i = 0; i < j->option_count && values != NULL; i++)
        if (j->options[i].id == id)
            values[(*n)++] = j->options[i].value;
    return values;
}
