/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan integrate: from one temperature to another, the integral of alpha, the length ratio, the mean coefficient,
   and with a length its change. */
#include "commands.h"
#include "interval.h"
#include "messages.h"
#include "stream_pairs.h"

#include <unistd.h>

const option_group integrate_options = { "Interval", (const option_entry[]){
    { OPT_FROM, 0, "from", "T", false, "where the interval starts" },
    { OPT_TO, 0, "to", "T", false, "where it ends" },
    { OPT_LENGTH, 0, "length", "L", false, "a part's length, for its change" },
    { OPT_LENGTH_AT, 0, "length-at", "T", false, "the temperature at which the part has that length, default --from" },
    { OPT_PAIRS, 0, "pairs", "FILE|-", false, "instead: CSV rows 'from [K],to [K]' and perhaps 'length [mm]', a row "
      "of CSV out for each" },
    { 0, 0, NULL, NULL, false, NULL } } };

static const char *const keys[QUANTITIES] = { "integral", "length_ratio", "mean_coefficient_per_K", "change_m" };

/* The text answers in the unit of --from, each end in its own. */
static int
read_interval(const job *j, interval *v, units *in)
{
    kel_unit unit;
    if (!option_given(j, OPT_FROM) || !option_given(j, OPT_TO))
        return usage(j, "integrate needs --from T and --to T, or --pairs FILE");
    int status = option_quantity(j, OPT_FROM, KEL_DIM_TEMPERATURE, &v->from, &v->from_unit);
    if (status == EXIT_FINE)
        status = option_quantity(j, OPT_TO, KEL_DIM_TEMPERATURE, &v->to, &v->to_unit);
    if (status != EXIT_FINE)
        return status;
    units_follow(in, &v->from_unit);
    if (in->temperature_asked)
        v->from_unit = v->to_unit = in->temperature;
    v->at = v->from;
    if (status == EXIT_FINE)
        status = option_quantity(j, OPT_LENGTH_AT, KEL_DIM_TEMPERATURE, &v->at, NULL);
    v->has_length = option_given(j, OPT_LENGTH);
    if (status == EXIT_FINE && !v->has_length && option_given(j, OPT_LENGTH_AT))
        return usage(j, "--length-at needs --length");
    v->length = NAN;
    if (status == EXIT_FINE && v->has_length)
        status = option_quantity(j, OPT_LENGTH, KEL_DIM_LENGTH, &v->length, &unit);
    if (status == EXIT_FINE && v->has_length && !in->length_asked)
        in->length = unit;
    if (status == EXIT_FINE && v->has_length && !(v->length > 0))
        return usage(j, "--length must be above 0, not %s", option_value(j, OPT_LENGTH));
    return status;
}

/* All in the reference temperature and base of the record: an integral does not depend on them, and a change of a
   real length must not. */
static int
answer(const job *j, const subject *s, kel_answer *out, kel_quantity quantity, double from, double to, double at)
{
    kel_query q = { quantity, from, to, at, NAN, -1 };
    kel_error err = { 0 };
    return kel_record_answer(out, s->record, &q, &err) < 0 ? fail(j, s->name, &err) : EXIT_FINE;
}

/* The lengths at both ends are ratios times the given one, in one step: going by way of the integral would round
   twice. */
static int
answer_all(const job *j, const subject *s, interval *v)
{
    static const kel_quantity quantities[QUANTITIES] = { KEL_INTEGRAL, KEL_LENGTH_RATIO, KEL_MEAN, KEL_CHANGE };
    int status = EXIT_FINE;
    for (int i = 0; i < QUANTITIES - !v->has_length && status == EXIT_FINE; i++)
        status = answer(j, s, &v->of[i], quantities[i], v->from, v->to, v->at);
    if (status == EXIT_FINE && v->has_length)
        status = answer(j, s, &v->from_at, KEL_LENGTH_RATIO, v->at, v->from, v->at);
    if (status == EXIT_FINE && v->has_length)
        status = answer(j, s, &v->to_at, KEL_LENGTH_RATIO, v->at, v->to, v->at);
    v->wanted = v->has_length ? CHANGE : INTEGRAL;
    v->outside = kel_record_outside(s->record, v->from, v->to);
    return status;
}

bool
interval_other_extrapolated(const interval *v, int i)
{
    return i != v->wanted && (i != CHANGE || v->has_length) && (v->of[i].flags & KEL_FLAG_EXTRAPOLATED) != 0;
}

/* --- JSON --- */

/* Without a length its keys are there and null, so that a script finds them. */
static void
json_result(const job *j, const subject *s, const interval *v, kel_text *out)
{
    kel_json json;
    const kel_answer *a = v->of;
    double length = v->has_length ? v->length : (double)NAN;
    kel_json_begin(&json, out);
    kel_json_object(&json, NULL);
    kel_json_string(&json, "record", s->name);
    kel_json_number(&json, "from_K", v->from);
    kel_json_number(&json, "to_K", v->to);
    kel_json_number(&json, "integral", a[INTEGRAL].value);
    kel_json_number(&json, "integral_u", a[INTEGRAL].u);
    kel_json_number(&json, "length_ratio", a[RATIO].value);
    kel_json_number(&json, "length_ratio_u", a[RATIO].u);
    kel_json_number(&json, "length_m", length * v->from_at.value);
    kel_json_number(&json, "length_to_m", length * v->to_at.value);
    kel_json_number(&json, "length_at_K", v->has_length ? v->at : (double)NAN);
    kel_json_number(&json, "change_m", length * a[CHANGE].value);
    kel_json_number(&json, "change_u_m", length * a[CHANGE].u);
    kel_json_number(&json, "mean_coefficient_per_K", a[MEAN].value);
    kel_json_number(&json, "mean_coefficient_u_per_K", a[MEAN].u);
    kel_json_bool(&json, "extrapolated", (a[v->wanted].flags & KEL_FLAG_EXTRAPOLATED) != 0);
    kel_json_inline_array(&json, "extrapolated_quantities");
    for (int i = 0; i < QUANTITIES; i++)
        if (interval_other_extrapolated(v, i))
            kel_json_string(&json, NULL, keys[i]);
    kel_json_end(&json);
    kel_json_number(&json, "outside_K", v->outside);
    kel_json_inline_object(&json, "covers");
    kel_json_number(&json, "fit", a[INTEGRAL].u_fit * a[INTEGRAL].u_fit);
    kel_json_number(&json, "shared", a[INTEGRAL].u_shared * a[INTEGRAL].u_shared);
    kel_json_number(&json, "lot", a[INTEGRAL].u_lot * a[INTEGRAL].u_lot);
    kel_json_end(&json);
    kel_json_string(&json, "variance", kel_variance_name(s->content->variance));
    kel_json_number(&json, "degrees_of_freedom", s->content->degrees_of_freedom);
    json_reservations(j, &json);
    json_warnings(j, &json);
    kel_json_end(&json);
}

/* Reservations first: with --within-range they end the run before anything is written. */
static int
one_interval(job *j, const subject *s, interval *v, const units *in)
{
    int status = answer_all(j, s, v);
    concern about = { { v->from, v->to }, 2, NAN, v->has_length ? v->at : (double)NAN, &in->temperature };
    if (status == EXIT_FINE)
        status = reserve(j, s, &about, v->of[v->wanted].flags, NULL, 0);
    if (status != EXIT_FINE)
        return status;
    sink out;
    sink_begin(&out, STDOUT_FILENO);
    if (j->json)
        json_result(j, s, v, &out.pending);
    else
        interval_text(&out.pending, j, s, v, in);
    status = sink_end(j, &out);
    return status == EXIT_FINE ? finish(j) : status;
}

/* A stream of pairs has its own layout and brings temperatures and lengths with it, so the options of one interval
   are refused beside it. */
int
run_integrate(job *j)
{
    const char *pairs = option_value(j, OPT_PAIRS);
    if (j->operand_count != 1)
        return usage(j, "integrate takes one record, not %zu operands", j->operand_count);
    if (pairs != NULL && (option_given(j, OPT_FROM) || option_given(j, OPT_TO) || option_given(j, OPT_LENGTH) ||
                          option_given(j, OPT_LENGTH_AT)))
        return usage(j, "--pairs brings temperatures and lengths with it: no --from, --to, --length or --length-at");
    if (pairs != NULL && j->json)
        return usage(j, "--pairs answers in CSV: no --json");
    if (pairs != NULL && pairs[0] == '-' && pairs[1] == '\0' && j->operands[0][0] == '-' && j->operands[0][1] == '\0')
        return usage(j, "record and pairs cannot both come from stdin");
    units in;
    interval v = { 0 };
    int status = units_begin(j, &in);
    if (status == EXIT_FINE && pairs == NULL)
        status = read_interval(j, &v, &in);
    subject s;
    if (status == EXIT_FINE)
        status = subject_open(j, &s, j->operands[0]);
    if (status != EXIT_FINE)
        return status;
    status = pairs != NULL ? stream_pairs(j, &s, pairs) : one_interval(j, &s, &v, &in);
    subject_close(&s);
    return status;
}
