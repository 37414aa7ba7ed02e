/* SPDX-License-Identifier: GPL-3.0-or-later */
/* --form, --degree, --joins, --continuity, --reference, --base and --range of `fit`. */
#include "fit_settings.h"

#include "messages.h"

#include <string.h>

/* An upper bound for the items of a list. */
static size_t
items(const char *list)
{
    size_t n = 1;
    for (const char *c = list; *c != '\0'; c++)
        n += *c == ',';
    return n;
}

/* Whole decimal numbers and nothing else: strtol would take blanks, signs and 0x. */
static int
read_degrees(job *j, kel_fit_options *o)
{
    const char *rest = option_value(j, OPT_DEGREE), *item;
    size_t size;
    if (rest == NULL || strcmp(rest, "auto") == 0)
        return EXIT_FINE;
    int *degrees = kel_arena_take(j->memory, items(rest), sizeof *degrees);
    if (degrees == NULL)
        return fail_memory(j);
    while (next_item(&rest, &item, &size)) {
        int n = 0;
        bool good = size > 0 && size <= 3 && strspn(item, "0123456789") >= size;
        for (size_t i = 0; i < size && good; i++)
            n = 10 * n + (item[i] - '0');
        if (!good || n > KEL_DEGREE_MAX)
            return usage(j, "--degree is auto or a whole number from 0 to %d, or one for each piece, not %s",
                         KEL_DEGREE_MAX,
                         option_value(j, OPT_DEGREE));
        degrees[o->degree_count++] = n;
    }
    o->degrees = degrees;
    return EXIT_FINE;
}

/* Degrees and continuities are given in the order of temperature, so the joins must be too. The library judges whether
   they lie inside the data. */
static int
read_joins(job *j, kel_fit_options *o)
{
    const char *rest = option_value(j, OPT_JOINS), *item;
    size_t size;
    if (rest == NULL)
        return EXIT_FINE;
    double *joins = kel_arena_take(j->memory, items(rest), sizeof *joins);
    if (joins == NULL)
        return fail_memory(j);
    while (next_item(&rest, &item, &size)) {
        const char *one = kel_arena_bytes(j->memory, item, size);
        if (one == NULL)
            return fail_memory(j);
        int status = read_quantity(j, "--joins", KEL_DIM_TEMPERATURE, one, &joins[o->join_count++], NULL);
        if (status != EXIT_FINE)
            return status;
        if (o->join_count > 1 && !(joins[o->join_count - 2] < joins[o->join_count - 1]))
            return usage(j, "--joins %s: the lower temperature comes first", option_value(j, OPT_JOINS));
    }
    o->joins = joins;
    return EXIT_FINE;
}

/* One for all joins or one for each. What belongs to declared transitions is not listed here: they always part the
   curve. */
static int
read_continuity(job *j, kel_fit_options *o)
{
    static const char *const names[] = { "none", "value", "slope", "curvature" }; /* -1, 0, 1, 2 */
    const char *rest = option_value(j, OPT_CONTINUITY), *item;
    size_t size;
    if (rest == NULL)
        return EXIT_FINE;
    int *continuity = kel_arena_take(j->memory, items(rest), sizeof *continuity);
    if (continuity == NULL)
        return fail_memory(j);
    while (next_item(&rest, &item, &size)) {
        int k = 0;
        while (k < 4 && (strlen(names[k]) != size || memcmp(names[k], item, size) != 0))
            k++;
        if (k == 4)
            return usage(j, "--continuity is value, slope, curvature or none, or one for each join, not %s",
                         option_value(j, OPT_CONTINUITY));
        continuity[o->continuity_count++] = k - 1;
    }
    o->continuity = continuity;
    return EXIT_FINE;
}

/* Only what contradicts itself is refused here; whether pieces are possible depends on the tables. */
static int
read_form(const job *j, kel_fit_options *o)
{
    const char *form = option_value(j, OPT_FORM);
    if (form != NULL && strcmp(form, "piecewise") == 0)
        o->piecewise = true;
    else if (form != NULL && strcmp(form, "polynomial") != 0)
        return usage(j, "--form is polynomial or piecewise, not %s", form);
    else if (form != NULL && o->join_count > 0)
        return usage(j, "--form polynomial has no --joins");
    if (o->continuity_count > 0 && o->join_count == 0)
        return usage(j, "--continuity needs --joins");
    if (o->continuity_count > 1 && o->continuity_count != o->join_count)
        return usage(j, "--continuity lists %zu, --joins %zu", o->continuity_count, o->join_count);
    return EXIT_FINE;
}

/* The colon parts the ends, since a blank would need quoting and a minus sign may begin a temperature. */
static int
read_range(job *j, kel_fit_options *o)
{
    const char *text = option_value(j, OPT_RANGE);
    if (text == NULL)
        return EXIT_FINE;
    const char *colon = strchr(text, ':');
    if (colon == NULL)
        return usage(j, "--range is LO:HI, for example 77K:300K, not %s", text);
    const char *lo = kel_arena_bytes(j->memory, text, (size_t)(colon - text));
    if (lo == NULL)
        return fail_memory(j);
    int status = read_quantity(j, "--range", KEL_DIM_TEMPERATURE, lo, &o->range.lo, NULL);
    if (status == EXIT_FINE)
        status = read_quantity(j, "--range", KEL_DIM_TEMPERATURE, colon + 1, &o->range.hi, NULL);
    if (status == EXIT_FINE && !(o->range.lo <= o->range.hi))
        return usage(j, "--range %s: the lower end comes first", text);
    return status;
}

/* In the order in which a reader of the command line meets them, so that the first error said is the first made. */
int
fit_settings_read(job *j, fit_settings *out)
{
    kel_fit_options start = KEL_FIT_OPTIONS_INIT;
    kel_fit_options *o = &out->options;
    *o = start;
    int status = read_degrees(j, o);
    if (status == EXIT_FINE)
        status = read_joins(j, o);
    if (status == EXIT_FINE)
        status = read_continuity(j, o);
    if (status == EXIT_FINE)
        status = read_form(j, o);
    if (status == EXIT_FINE)
        status = read_range(j, o);
    if (status == EXIT_FINE)
        status = option_quantity(j, OPT_REFERENCE, KEL_DIM_TEMPERATURE, &o->reference, NULL);
    return status == EXIT_FINE ? option_base(j, OPT_BASE, &o->base) : status;
}
