/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan integrate: from one temperature to another, the integral of alpha, the length ratio, the mean coefficient, and
   with a length its change. */
#include "commands.h"
#include "files.h"
#include "messages.h"
#include "output.h"
#include "reservations.h"
#include "stream_pairs.h"

#include <unistd.h>

const option_group integrate_options = { "Interval", (const option_entry[]){
    { OPT_FROM, 0, "from", "T", false, "where the interval starts" },
    { OPT_TO, 0, "to", "T", false, "where it ends" },
    { OPT_LENGTH, 0, "length", "L", false, "a part's length, for its change" },
    { OPT_LENGTH_AT, 0, "length-at", "T", false, "the temperature at which the part has that length, default --from" },
    { OPT_PAIRS, 0, "pairs", "FILE|-", false, "instead: CSV rows 'from [K],to [K]' and perhaps 'length [mm]', a row of CSV out for "
      "each" },
    { 0, 0, NULL, NULL, false, NULL } } };

/* Below -150 degC and above 70 degC people and parts come to harm: see the caution. */
static const double cold_limit = 123.15, hot_limit = 343.15;

enum { INTEGRAL, RATIO, MEAN, CHANGE, QUANTITIES };
static const char *const keys[QUANTITIES] = { "integral", "length_ratio", "mean_coefficient_per_K", "change_m" };

typedef struct interval {
    double from, to, length, at;
    bool has_length;
    kel_answer of[QUANTITIES];
    kel_answer from_at;         /* L(from)/L(at) */
    kel_answer to_at;           /* L(to)/L(at) */
    int wanted;
    double outside;
} interval;

static int
read_interval(const job *j, interval *v, units *in)
{
    kel_unit unit;
    if (!option_given(j, OPT_FROM) || !option_given(j, OPT_TO))
        return usage(j, "integrate needs --from T and --to T, or --pairs FILE");
    int status = option_quantity(j, OPT_FROM, KEL_DIM_TEMPERATURE, &v->from, &unit);
    if (status != EXIT_FINE)
        return status;
    units_follow(in, &unit);
    status = option_quantity(j, OPT_TO, KEL_DIM_TEMPERATURE, &v->to, NULL);
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

static int
answer(const job *j, const subject *s, kel_answer *out, kel_quantity quantity, double from, double to, double at)
{
    kel_query q = { quantity, from, to, at, NAN, -1 };
    kel_error err = { 0 };
    return kel_record_answer(out, s->record, &q, &err) < 0 ? fail(j, s->name, &err) : EXIT_FINE;
}

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

static bool
other_extrapolated(const interval *v, int i)
{
    return i != v->wanted && (i != CHANGE || v->has_length) && (v->of[i].flags & KEL_FLAG_EXTRAPOLATED) != 0;
}

/* --- JSON --- */

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
        if (other_extrapolated(v, i))
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

/* --- text --- */

static void
add_label(kel_text *out, const char *label)
{
    kel_text_printf(out, "%-18s", label);
}

static void
add_length(kel_text *out, const units *in, const interval *v, double ratio, double u, double t)
{
    double x = kel_unit_from_si(&in->length, v->length * ratio);
    double U = 2 * kel_unit_from_si(&in->length, v->length * u);
    if (ratio == 1 && v->at == t) {
        char digits[KEL_NUMBER_SIZE];
        kel_number_format(digits, x); /* as it was given */
        kel_text_add(out, digits);
    } else {
        int d = decimals_for(x, U);
        add_rounded(out, x, isnan(U) || U == 0 ? d + 3 : d);
    }
    add_unit(out, in->length.name);
    kel_text_add(out, " at ");
    add_temperature(out, &in->temperature, t);
    kel_text_add(out, "\n");
}

static void
add_shares(kel_text *out, const subject *s, const kel_answer *a)
{
    static const char *const names[] = { "scatter of the fit", "stated shared error", "lot spread" };
    const double parts[] = { a->u_fit, a->u_shared, a->u_lot };
    size_t n = 0;
    for (int i = 0; i < 3; i++)
        n += parts[i] > 0;
    add_label(out, "U covers");
    if (n < 2 || !(a->u > 0)) {
        add_covers(out, s->content);
    } else {
        const char *before = "";
        for (int i = 0; i < 3; i++)
            if (parts[i] > 0) {
                double share = 100 * (parts[i] / a->u) * (parts[i] / a->u);
                char digits[KEL_NUMBER_FIXED_SIZE];
                kel_number_format_fixed(digits, share, share < 1 || share > 99 ? 1 : 0);
                kel_text_printf(out, "%s%s (%s %% of u^2)", before, names[i], digits);
                before = ", ";
            }
        if (!s->content->scatter_known && s->content->variance != KEL_VARIANCE_STATED)
            kel_text_add(out, "; the scatter is not known and not in it");
    }
    kel_text_add(out, "\n");
}

/* The factor for 95 % of this answer: its degrees of freedom by Welch and Satterthwaite, the other parts counting as known. */
static void
add_factor(kel_text *out, const subject *s, const kel_answer *a)
{
    if (!student_applies(s->content) || !(a->u_fit > 0))
        return;
    double nu = s->content->degrees_of_freedom * pow(a->u / a->u_fit, 4);
    if (!(nu < 30))
        return;
    char digits[KEL_NUMBER_FIXED_SIZE], dof[KEL_NUMBER_FIXED_SIZE];
    kel_number_format_fixed(digits, student_factor(nu), 2);
    kel_number_format_fixed(dof, nu, fabs(nu - nearbyint(nu)) < 0.05 ? 0 : 1);
    add_label(out, "");
    kel_text_printf(out, "for 95 %% take k = %s (Student, %s degrees of freedom)\n", digits, dof);
}

static void
add_transitions(kel_text *out, const subject *s, const interval *v, const units *in)
{
    static const char *const kinds[] = { "alpha may jump", "fitted step ", "stated step " };
    const kel_content *c = s->content;
    double lo = fmin(v->from, v->to), hi = fmax(v->from, v->to);
    for (size_t i = 0; i < c->transition_count; i++) {
        const kel_transition *t = &c->transitions[i];
        if (!(lo < t->at && t->at <= hi))
            continue;
        add_label(out, "transition");
        add_temperature(out, &in->temperature, t->at);
        kel_text_printf(out, " crossed, %s", kinds[t->step]);
        if (t->step != KEL_STEP_NONE) {
            add_rounded(out, 1e6 * c->mean.steps[i], decimals_for(1e6 * c->mean.steps[i], NAN));
            kel_text_add(out, "e-6");
        }
        kel_text_add(out, "\n");
    }
}

static void
add_cautions(kel_text *out, const interval *v)
{
    bool cold = fmin(v->from, v->to) < cold_limit, hot = fmax(v->from, v->to) > hot_limit;
    if (!cold && !hot)
        return;
    kel_text_printf(out, "\n%s: a computed temperature is not a procedure. How parts are %s safely is settled by the site's rules\n"
                    "and by people competent for it.\n",
                    cold && hot ? "Deep cold and heat" : cold ? "Deep cold" : "Heat",
                    cold && hot ? "cooled and heated" : cold ? "cooled" : "heated");
}

static void
text_result(const job *j, const subject *s, const interval *v, const units *in, kel_text *out)
{
    const kel_answer *a = v->of;
    add_file_name(out, s->name);
    kel_text_add(out, ": from ");
    add_temperature(out, &in->temperature, v->from);
    kel_text_add(out, " to ");
    add_temperature(out, &in->temperature, v->to);
    kel_text_add(out, "\n\n");
    if (v->has_length) {
        kel_unit unit = change_unit(in, v->length * a[CHANGE].value);
        add_label(out, "change in length");
        add_measured(out, &unit, v->length * a[CHANGE].value, v->length * a[CHANGE].u);
        kel_text_add(out, "\n");
        add_label(out, "length");
        add_length(out, in, v, v->from_at.value, v->from_at.u, v->from);
        add_label(out, "");
        add_length(out, in, v, v->to_at.value, v->to_at.u, v->to);
    }
    add_label(out, "integral");
    kel_unit ppm = { KEL_DIM_ONE, 0, 1, 1, -6, "1e-6" };
    add_measured(out, &ppm, a[INTEGRAL].value, a[INTEGRAL].u);
    kel_text_add(out, "\n");
    add_label(out, "length ratio");
    int d = decimals_for(a[RATIO].value, 2 * a[RATIO].u);
    add_rounded(out, a[RATIO].value, a[RATIO].u > 0 ? d : 9);
    kel_text_add(out, "   U = ");
    add_uncertainty(out, 2 * a[RATIO].u, d);
    kel_text_add(out, "\n");
    add_label(out, "mean coefficient");
    add_measured(out, &in->coefficient, a[MEAN].value, a[MEAN].u);
    kel_text_add(out, "\n");
    add_shares(out, s, &a[v->wanted]);
    add_factor(out, s, &a[v->wanted]);
    add_transitions(out, s, v, in);
    add_label(out, "validity range");
    add_temperature(out, &in->temperature, s->content->range.lo);
    kel_text_add(out, " to ");
    add_temperature(out, &in->temperature, s->content->range.hi);
    if (v->outside > 0) {
        kel_unit difference = in->temperature;
        difference.offset_e2 = 0;
        kel_text_add(out, ", ");
        add_temperature(out, &difference, v->outside);
        kel_text_add(out, " of the interval lie outside");
    }
    kel_text_add(out, "\n");
    for (const note *n = j->reservations; n != NULL; n = n->next) {
        add_label(out, n == j->reservations ? "reservation" : "");
        kel_text_printf(out, "%s: %s\n", n->code, n->text);
    }
    const char *before = "extrapolated too: ";
    for (int i = 0; i < QUANTITIES; i++)
        if (other_extrapolated(v, i)) {
            static const char *const names[QUANTITIES] = { "integral", "length ratio", "mean coefficient", "change in length" };
            if (before[0] == 'e')
                add_label(out, j->reservations == NULL ? "reservation" : "");
            kel_text_printf(out, "%s%s", before, names[i]);
            before = ", ";
        }
    if (before[0] != 'e')
        kel_text_add(out, "\n");
    add_cautions(out, v);
}

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
        text_result(j, s, v, in, &out.pending);
    status = sink_end(j, &out);
    return status == EXIT_FINE ? finish(j) : status;
}

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
