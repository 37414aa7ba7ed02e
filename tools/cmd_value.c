/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan value RECORD T...: the answers at the temperatures given. */
#include "answers.h"
#include "commands.h"
#include "messages.h"

#include <unistd.h>

/* The temperatures of all operands but the first; each may be a list. */
static int
read_temperatures(job *j, double **out, size_t *n, units *in)
{
    const char *rest, *item;
    size_t most = 0, size;
    for (size_t i = 1; i < j->operand_count; i++)
        for (rest = j->operands[i]; next_item(&rest, &item, &size);)
            most++;
    *out = kel_arena_take(j->memory, most, sizeof **out);
    *n = 0;
    if (*out == NULL)
        return fail_memory(j);
    for (size_t i = 1; i < j->operand_count; i++) {
        for (rest = j->operands[i]; next_item(&rest, &item, &size);) {
            const char *one = kel_arena_bytes(j->memory, item, size);
            kel_unit unit;
            if (one == NULL)
                return fail_memory(j);
            int status = read_quantity(j, "temperature", KEL_DIM_TEMPERATURE, one, *out + *n, &unit);
            if (status != EXIT_FINE)
                return status;
            if ((*n)++ == 0 && !j->csv)
                units_follow(in, &unit);
        }
    }
    return EXIT_FINE;
}

/* All answers are worked out before the first is written: a refusal by --within-range at the last temperature leaves
   stdout empty. */
static int
answer_all(job *j, const question *q, const double *t, size_t n)
{
    answers *all = kel_arena_take(j->memory, n, sizeof *all);
    if (all == NULL)
        return fail_memory(j);
    int status = EXIT_FINE;
    for (size_t i = 0; i < n && status == EXIT_FINE; i++) {
        status = answers_at(j, &all[i], q, t[i]);
        if (status == EXIT_FINE)
            status = answers_reserve(j, &all[i], q);
    }
    if (status != EXIT_FINE)
        return status;
    sink out;
    answer_writer w;
    sink_begin(&out, STDOUT_FILENO);
    status = answers_begin(&w, j, q, &out);
    for (size_t i = 0; i < n && status == EXIT_FINE; i++)
        status = answers_row(&w, &all[i], NULL);
    if (status == EXIT_FINE)
        status = answers_end(&w);
    answers_free(&w);
    kel_text_free(&out.pending);
    return status == EXIT_FINE ? finish(j) : status;
}

/* Temperatures are read before the record, so that a missing unit is said even of a large table. */
int
run_value(job *j)
{
    units in;
    double *t;
    size_t n;
    if (j->operand_count == 0)
        return usage(j, "value needs a record and temperatures");
    if (j->operand_count == 1)
        return usage(j, "value needs temperatures behind the record, for example 77K");
    int status = units_begin(j, &in);
    if (status == EXIT_FINE)
        status = read_temperatures(j, &t, &n, &in);
    subject s;
    if (status == EXIT_FINE)
        status = subject_open(j, &s, j->operands[0]);
    if (status != EXIT_FINE)
        return status;
    question q;
    status = question_begin(j, &q, &s, &in);
    q.ratio = true;
    if (status == EXIT_FINE)
        status = answer_all(j, &q, t, n);
    subject_close(&s);
    return status;
}
