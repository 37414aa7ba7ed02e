/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan tabulate: the answers at even steps. The steps are counted in the unit of the question and each temperature
   is rounded there to 15 digits before it becomes kelvin, so that 20 degC and steps of 0.1 degC give 20.3 degC, not
   20.299999999999997. */
#include "answers.h"
#include "commands.h"
#include "messages.h"
#include "progress.h"

#include <string.h>
#include <unistd.h>

const option_group tabulate_options = { "Temperatures", (const option_entry[]){
    { OPT_FROM, 0, "from", "T", false, "the first temperature" },
    { OPT_TO, 0, "to", "T", false, "the last one, if the steps meet it; it may be the lower one" },
    { OPT_STEP, 0, "step", "D", false, "the step, a difference above 0, for example 10K or 18degF" },
    { 0, 0, NULL, NULL, false, NULL } } };

enum { MOST_ROWS = 10000000, DIGITS = 15 };

typedef struct grid {
    kel_unit unit;          /* of the question */
    double from, to, step;  /* in that unit, the step with its sign */
    double to_kelvin;
    size_t rows;
    bool meets_end;
} grid;

/* A step that divides the interval but for rounding counts as dividing it: 1e-9 of a step is far above the rounding
   of any sum of decimals, and far below what anyone means. */
static int
read_grid(const job *j, grid *g, units *in)
{
    double from, to, step;
    kel_unit difference;
    if (!option_given(j, OPT_FROM) || !option_given(j, OPT_TO) || !option_given(j, OPT_STEP))
        return usage(j, "tabulate needs --from T, --to T and --step D");
    int status = option_quantity(j, OPT_FROM, KEL_DIM_TEMPERATURE, &from, &g->unit);
    if (status == EXIT_FINE)
        status = option_quantity(j, OPT_TO, KEL_DIM_TEMPERATURE, &to, NULL);
    if (status == EXIT_FINE)
        status = option_quantity(j, OPT_STEP, KEL_DIM_DIFFERENCE, &step, &difference);
    if (status != EXIT_FINE)
        return status;
    if (!(step > 0))
        return usage(j, "--step must be above 0, not %s", option_value(j, OPT_STEP));
    if (!j->csv)
        units_follow(in, &g->unit);
    difference = g->unit;
    difference.offset_e2 = 0;
    g->from = kel_unit_from_si(&g->unit, from);
    g->to = kel_unit_from_si(&g->unit, to);
    g->step = kel_unit_from_si(&difference, to < from ? -step : step);
    g->to_kelvin = to;
    double n = (g->to - g->from) / g->step, whole = nearbyint(n);
    g->meets_end = fabs(n - whole) <= 1e-9 * fmax(1, n);
    double rows = (g->meets_end ? whole : floor(n)) + 1;
    if (!(rows <= MOST_ROWS))
        return usage(j, "--step %s gives more than %d rows", option_value(j, OPT_STEP), MOST_ROWS);
    g->rows = (size_t)rows;
    return EXIT_FINE;
}

/* Temperature of row i; digits gets its text in the question's unit. EXIT_FINE or EXIT_FAILED. */
static int
grid_at(const job *j, const grid *g, size_t i, double *t, char *digits)
{
    kel_error err = { 0 };
    if (i > 0 && i + 1 == g->rows && g->meets_end) {
        kel_number_format_digits(digits, g->to, DIGITS);
        *t = g->to_kelvin;
        return EXIT_FINE;
    }
    size_t n = kel_number_format_digits(digits, g->from + (double)i * g->step, DIGITS);
    return kel_unit_read(t, NULL, &g->unit, digits, n, &err) < 0 ? fail(j, NULL, &err) : EXIT_FINE;
}

/* With --within-range nothing may stand on stdout if one row is outside, so all are looked at first. */
static int
check_range(job *j, const grid *g, const question *q)
{
    char digits[KEL_NUMBER_FIXED_SIZE];
    answers a;
    int status = EXIT_FINE;
    for (size_t i = 0; i < g->rows && status == EXIT_FINE; i++) {
        status = grid_at(j, g, i, &a.t, digits);
        if (status == EXIT_FINE)
            status = answers_at(j, &a, q, a.t);
        if (status == EXIT_FINE && (a.of[q->wanted].flags & KEL_FLAG_EXTRAPOLATED))
            status = answers_reserve(j, &a, q);
    }
    return status;
}

/* The grid's own number, without trailing zeros, where the answer is in the question's unit; NULL otherwise. */
static const char *
shown_number(const grid *g, const units *in, char *digits)
{
    if (strcmp(in->temperature.name, g->unit.name) != 0)
        return NULL;
    if (strchr(digits, 'e') == NULL && strchr(digits, '.') != NULL) {
        size_t n = strlen(digits);
        while (digits[n - 1] == '0')
            n--;
        digits[digits[n - 1] == '.' ? n - 1 : n] = '\0';
    }
    return strcmp(digits, "-0") == 0 ? "0" : digits;
}

static int
write_rows(job *j, const grid *g, const question *q)
{
    char digits[KEL_NUMBER_FIXED_SIZE];
    sink out;
    answer_writer w;
    progress p;
    sink_begin(&out, STDOUT_FILENO);
    progress_begin(&p, j, "tabulating");
    int status = answers_begin(&w, j, q, &out);
    for (size_t i = 0; i < g->rows && status == EXIT_FINE; i++) {
        answers a;
        status = grid_at(j, g, i, &a.t, digits);
        if (status == EXIT_FINE)
            status = answers_at(j, &a, q, a.t);
        if (status == EXIT_FINE)
            status = answers_reserve(j, &a, q);
        if (status == EXIT_FINE)
            status = answers_row(&w, &a, shown_number(g, q->in, digits));
        progress_rows(&p, i, 0);
    }
    progress_end(&p);
    if (status == EXIT_FINE)
        status = answers_end(&w);
    answers_free(&w);
    kel_text_free(&out.pending);
    return status == EXIT_FINE ? finish(j) : status;
}

int
run_tabulate(job *j)
{
    units in;
    grid g = { 0 };
    if (j->operand_count != 1)
        return usage(j, "tabulate takes one record, not %zu operands", j->operand_count);
    int status = units_begin(j, &in);
    if (status == EXIT_FINE)
        status = read_grid(j, &g, &in);
    subject s;
    if (status == EXIT_FINE)
        status = subject_open(j, &s, j->operands[0]);
    if (status != EXIT_FINE)
        return status;
    question q;
    status = question_begin(j, &q, &s, &in);
    if (status == EXIT_FINE && j->within_range)
        status = check_range(j, &g, &q);
    if (status == EXIT_FINE)
        status = write_rows(j, &g, &q);
    subject_close(&s);
    return status;
}
