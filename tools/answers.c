/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Answers at one temperature T: the coefficient alpha(T), and from the reference temperature r the mean coefficient
   e(T)/(T - r), the expansion e(T) and the length ratio L(T)/L(r). One of them is the main quantity, which the flags
   and the exit status follow; the others that lean on the curve outside the validity range are named beside it. */
#include "answers.h"

#include "messages.h"

#include <string.h>

const option_group answer_group = { "Question", (const option_entry[]){
    { OPT_QUANTITY, 0, "quantity", "Q", false, "the main quantity, which reservations and status follow: coefficient "
      "(default), mean, expansion or ratio" },
    { OPT_REFERENCE, 0, "reference", "T", false, "reference temperature of the answers, default the record's" },
    { OPT_BASE, 0, "base", "reference|current", false, "length to which the coefficient refers, default the record's" },
    { 0, 0, NULL, NULL, false, NULL } } };

static const char *const keys[ANSWERS] = { "coefficient_per_K", "mean_coefficient_per_K", "expansion", "length_ratio" };
static const char *const u_keys[ANSWERS] = { "coefficient_u_per_K", "mean_coefficient_u_per_K", "expansion_u",
                                             "length_ratio_u" };
static const char *const names[ANSWERS] = { "coefficient", "mean coefficient", "expansion", "length ratio" };

/* Without options the answers are in the record's own reference temperature and base. */
int
question_begin(const job *j, question *out, const subject *from, const units *in)
{
    static const char *const words[ANSWERS] = { "coefficient", "mean", "expansion", "ratio" };
    *out = (question){ .from = from, .in = in, .reference = from->content->reference_temperature,
                       .base = (int)from->content->base,
                       .assumed = from->content->reference_defaulted && !option_given(j, OPT_REFERENCE) };
    const char *wanted = option_value(j, OPT_QUANTITY);
    while (wanted != NULL && out->wanted < ANSWERS && strcmp(wanted, words[out->wanted]) != 0)
        out->wanted++;
    if (out->wanted == ANSWERS)
        return usage(j, "--quantity is coefficient, mean, expansion or ratio, not %s", wanted);
    int status = option_quantity(j, OPT_REFERENCE, KEL_DIM_TEMPERATURE, &out->reference, NULL);
    return status == EXIT_FINE ? option_base(j, OPT_BASE, &out->base) : status;
}

/* The mean and the ratio start at the reference temperature of the question, and a mean there is its limit. */
int
answers_at(const job *j, answers *out, const question *q, double t)
{
    static const kel_quantity quantities[ANSWERS] = { KEL_COEFFICIENT, KEL_MEAN, KEL_EXPANSION, KEL_LENGTH_RATIO };
    out->t = t;
    for (int i = 0; i < ANSWERS; i++) {
        kel_query ask = { quantities[i], q->reference, t, q->reference, q->reference, q->base };
        kel_error err = { 0 };
        if (kel_record_answer(&out->of[i], q->from->record, &ask, &err) < 0)
            return fail(j, q->from->name, &err);
    }
    return EXIT_FINE;
}

/* The reference temperature is part of it: all but the coefficient lean on it. */
static concern
concern_of(const answers *a, const question *q)
{
    return (concern){ { a->t, 0 }, 1, q->reference, NAN, &q->in->temperature };
}

int
answers_reserve(job *j, const answers *a, const question *q)
{
    concern about = concern_of(a, q);
    return reserve(j, q->from, &about, a->of[q->wanted].flags, NULL, 0);
}

/* The main quantity has its own flag. */
static bool
other_extrapolated(const answers *a, const question *q, int i)
{
    return i != q->wanted && (a->of[i].flags & KEL_FLAG_EXTRAPOLATED) != 0;
}

/* --- JSON --- */

/* Keys are fixed; what is not known is null. */
static void
json_row(kel_json *json, const answers *a, const question *q)
{
    kel_json_object(json, NULL);
    kel_json_number(json, "temperature_K", a->t);
    for (int i = 0; i < ANSWERS; i++) {
        kel_json_number(json, keys[i], a->of[i].value);
        kel_json_number(json, u_keys[i], a->of[i].u);
    }
    kel_json_bool(json, "extrapolated", (a->of[q->wanted].flags & KEL_FLAG_EXTRAPOLATED) != 0);
    kel_json_inline_array(json, "extrapolated_quantities");
    for (int i = 0; i < ANSWERS; i++)
        if (other_extrapolated(a, q, i))
            kel_json_string(json, NULL, keys[i]);
    kel_json_end(json);
    concern about = concern_of(a, q);
    json_reservations_of(json, q->from, &about, a->of[q->wanted].flags);
    kel_json_end(json);
}

static void
json_head(kel_json *json, const question *q)
{
    kel_json_object(json, NULL);
    kel_json_string(json, "record", q->from->name);
    kel_json_number(json, "reference_temperature_K", q->reference);
    kel_json_string(json, "base", kel_base_name((kel_base)q->base));
    double range[2] = { q->from->content->range.lo, q->from->content->range.hi };
    kel_json_numbers(json, "range_K", range, 2);
    kel_json_string(json, "quantity", keys[q->wanted]);
    kel_json_array(json, "rows");
}

/* --- CSV: a table of our own grammar, so that it can be read back --- */

/* The length ratio has no place in that grammar; it is 1 + expansion. The grammar's column `source` holds free text:
   there stand the quantities beside the main one that lean on the curve outside the validity range. */

/* Metadata only where the record has one table behind it: of several, no one name is right. */
static void
csv_setting(kel_text *out, const char *key, const char *value)
{
    if (value != NULL)
        kel_text_printf(out, "# %s: %s\n", key, value);
}

/* The reference temperature and base make the table readable again: without them its expansions would mean nothing.
   */
static void
csv_head(kel_text *out, const question *q)
{
    const kel_content *c = q->from->content;
    const char *t = q->in->temperature.name, *a = q->in->coefficient.name;
    if (c->source_count == 1) {
        csv_setting(out, "material", c->sources[0].material);
        csv_setting(out, "condition", c->sources[0].condition);
        csv_setting(out, "direction", c->sources[0].direction);
    }
    kel_text_add(out, "# reference temperature: ");
    kel_text_number(out, q->reference);
    kel_text_printf(out, " K\n# base: %s\n", kel_base_name((kel_base)q->base));
    kel_text_printf(out, "temperature [%s],coefficient [%s],uncertainty [%s],mean coefficient [%s],uncertainty [%s],"
                         "expansion [1],uncertainty [1],reservations,source\n", t, a, a, a, a);
}

/* Empty where a number is not known. */
static void
csv_number(kel_text *out, double x)
{
    kel_text_add(out, ",");
    if (!isnan(x))
        kel_text_number(out, x);
}

static void
csv_row(kel_text *out, const answers *a, const question *q, const char *t_text)
{
    const kel_unit *alpha = &q->in->coefficient;
    if (t_text != NULL)
        kel_text_add(out, t_text);
    else
        kel_text_number(out, kel_unit_from_si(&q->in->temperature, a->t));
    for (int i = 0; i < ANSWER_RATIO; i++) {
        bool coefficient = i == ANSWER_COEFFICIENT || i == ANSWER_MEAN;
        csv_number(out, coefficient ? kel_unit_from_si(alpha, a->of[i].value) : a->of[i].value);
        csv_number(out, coefficient ? kel_unit_from_si(alpha, a->of[i].u) : a->of[i].u);
    }
    kel_text_add(out, ",");
    add_codes(out, a->of[q->wanted].flags, "+");
    const char *before = ",extrapolated: ";
    for (int i = 0; i < ANSWER_RATIO; i++)
        if (other_extrapolated(a, q, i)) {
            kel_text_printf(out, "%s%s", before, names[i]);
            before = "+";
        }
    kel_text_add(out, before[0] == ',' ? ",\n" : "\n");
}

/* --- text --- */

/* Expansions are shown in parts per million, in the form that says so: 1e-6. */
enum { COLUMNS_WITHOUT_RATIO = 8, PASS_ROWS = 1000 };

/* The headings are put together in one text and point into it; it lives as long as the writer. */
static int
text_head(answer_writer *w)
{
    const question *q = w->q;
    const char *a = q->in->coefficient.name;
    kel_text *out = &w->out->pending, *h = &w->headings;
    add_file_name(out, q->from->name);
    kel_text_add(out, ": reference temperature ");
    if (q->assumed)
        kel_text_add(out, "none stated: ");
    add_temperature(out, &q->in->temperature, q->reference);
    kel_text_printf(out, "%s, base %s, validity range ", q->assumed ? " is assumed" : "",
                    kel_base_name((kel_base)q->base));
    add_temperature(out, &q->in->temperature, q->from->content->range.lo);
    kel_text_add(out, " to ");
    add_temperature(out, &q->in->temperature, q->from->content->range.hi);
    kel_text_add(out, "\n\n");
    size_t n = 0, at[11];
    at[n++] = h->size;
    kel_text_printf(h, "T\n[%s]", q->in->temperature.name);
    for (int i = 0; i < ANSWERS - !q->ratio; i++) {
        kel_text_add_bytes(h, "", 1);
        at[n++] = h->size;
        if (i == ANSWER_RATIO) {
            kel_text_add(h, "length ratio");
            continue;
        }
        bool coefficient = i != ANSWER_EXPANSION;
        kel_text_printf(h, "%s\n[%s]", i == ANSWER_MEAN ? "mean coeff." : names[i], coefficient ? a : "1e-6");
        kel_text_add_bytes(h, "", 1);
        at[n++] = h->size;
        kel_text_add(h, "U\n(k = 2)");
    }
    kel_text_add_bytes(h, "", 1);
    at[n++] = h->size;
    kel_text_add(h, "reservations");
    if (h->failed)
        return fail_memory(w->j);
    for (size_t i = 0; i < n; i++)
        w->heading[i] = h->bytes + at[i];
    w->rows = columns_new(w->heading, n);
    return w->rows != NULL ? EXIT_FINE : fail_memory(w->j);
}

/* Codes of the main quantity, then the others that lean on the curve outside where it does not itself. */
static void
text_notes(kel_text *cell, const answers *a, const question *q)
{
    unsigned flags = a->of[q->wanted].flags;
    add_codes(cell, flags, ", ");
    if (flags & KEL_FLAG_EXTRAPOLATED)
        return;
    const char *before = flags != 0 ? "; extrapolated: " : "extrapolated: ";
    for (int i = 0; i < ANSWERS; i++)
        if (other_extrapolated(a, q, i)) {
            kel_text_printf(cell, "%s%s", before, names[i]);
            before = ", ";
        }
}

static void
text_row(answer_writer *w, const answers *a, const char *t_text)
{
    const question *q = w->q;
    kel_text cell = KEL_TEXT_INIT;
    if (t_text != NULL)
        kel_text_add(&cell, t_text);
    else
        add_temperature_number(&cell, &q->in->temperature, a->t);
    columns_add_text(w->rows, &cell);
    for (int i = 0; i < ANSWERS - !q->ratio; i++) {
        double x = a->of[i].value, U = 2 * a->of[i].u;
        if (i == ANSWER_COEFFICIENT || i == ANSWER_MEAN) {
            x = kel_unit_from_si(&q->in->coefficient, x);
            U = kel_unit_from_si(&q->in->coefficient, U);
        } else if (i == ANSWER_EXPANSION) {
            x *= 1e6;
            U *= 1e6;
        }
        int d = decimals_for(x, U);
        if (i == ANSWER_RATIO && (isnan(U) || U == 0))
            d = 9;
        add_rounded(&cell, x, d);
        columns_add_text(w->rows, &cell);
        if (i == ANSWER_RATIO)
            continue; /* its U is that of the expansion */
        add_uncertainty(&cell, U, d);
        columns_add_text(w->rows, &cell);
    }
    text_notes(&cell, a, q);
    columns_add_text(w->rows, &cell);
    kel_text_free(&cell);
    if (++w->waiting == PASS_ROWS) {
        columns_flush(w->rows, &w->out->pending, "");
        w->waiting = 0;
    }
}

/* What U covers stands below every table that shows one. */
static void
text_end(answer_writer *w)
{
    kel_text *out = &w->out->pending;
    columns_flush(w->rows, out, "");
    kel_text_add(out, "\nU (k = 2) covers: ");
    add_covers(out, w->q->from->content);
    kel_text_add(out, "\n");
    add_student(out, w->q->from->content);
}

/* --- the three of them --- */

static int
pass(answer_writer *w)
{
    return w->out->pending.failed ? fail_memory(w->j) : sink_pass(w->out) ? EXIT_FINE : sink_end(w->j, w->out);
}

/* Text needs its headings first, the others stream from the start. */
int
answers_begin(answer_writer *w, const job *j, const question *q, sink *out)
{
    *w = (answer_writer){ .j = j, .q = q, .out = out };
    if (j->json) {
        kel_json_begin(&w->json, &out->pending);
        json_head(&w->json, q);
    } else if (j->csv) {
        csv_head(&out->pending, q);
    } else {
        return text_head(w);
    }
    return EXIT_FINE;
}

int
answers_row(answer_writer *w, const answers *a, const char *t_text)
{
    if (w->j->json)
        json_row(&w->json, a, w->q);
    else if (w->j->csv)
        csv_row(&w->out->pending, a, w->q, t_text);
    else
        text_row(w, a, t_text);
    return pass(w);
}

/* Warnings come last: working out the rows may have added some. */
int
answers_end(answer_writer *w)
{
    if (w->j->json) {
        kel_json_end(&w->json);
        json_reservations(w->j, &w->json);
        json_warnings(w->j, &w->json);
        kel_json_end(&w->json);
    } else if (!w->j->csv) {
        text_end(w);
    }
    return sink_end(w->j, w->out);
}

void
answers_free(answer_writer *w)
{
    columns_free(w->rows);
    kel_text_free(&w->headings);
}
