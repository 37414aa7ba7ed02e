/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The answer of `integrate` for people: the change first if a length was given, then what it comes from, what its
   uncertainty covers, and all that its user has to know. */
#include "interval.h"

#include "messages.h"

/* Below -150 degC and above 70 degC people and parts come to harm: see the caution. */
static const double cold_limit = 123.15, hot_limit = 343.15;

static void
add_label(kel_text *out, const char *label)
{
    kel_text_printf(out, "%-18s", label);
}

/* The length that was given stands as it was given; the other has digits by its own U, or where that is not known
   some below those of the change. */
static void
add_length(kel_text *out, const units *in, const interval *v, double ratio, double u, double t, const kel_unit *unit)
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
    add_temperature(out, unit, t);
    kel_text_add(out, "\n");
}

/* Shares of u squared, since that is what adds up. A single part needs none. */
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

/* The factor for 95 % of this answer: its degrees of freedom by Welch and Satterthwaite, the other parts counting as
   known. */
static void
add_factor(kel_text *out, const subject *s, const kel_answer *a)
{
    if (!student_applies(s->content) || !(a->u_fit > 0))
        return;
    double nu = s->content->degrees_of_freedom * pow(a->u / a->u_fit, 4);
    if (!(nu < 30))
        return;
    add_label(out, "");
    kel_text_add(out, "for 95 % take k = ");
    add_rounded(out, student_factor(nu), 2);
    kel_text_add(out, " (Student, degrees of freedom ");
    add_digits(out, nu, 3);
    kel_text_add(out, ")\n");
}

/* Each transition inside the interval, with its step: a reader should know what the number holds. */
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
            double x = 1e6 * c->mean.steps[i], U = t->step == KEL_STEP_FITTED ? 2e6 * step_u(c, i) : (double)NAN;
            add_rounded(out, x, decimals_for(x, U));
            kel_text_add(out, "e-6");
        }
        kel_text_add(out, "\n");
    }
}

/* Own words, short, and only where the temperature calls for it: a caution under every answer is read under none. */
static void
add_cautions(kel_text *out, const interval *v)
{
    bool cold = fmin(v->from, v->to) < cold_limit, hot = fmax(v->from, v->to) > hot_limit;
    if (!cold && !hot)
        return;
    kel_text_printf(out, "\n%s: a computed temperature is not a procedure. How parts are %s safely is settled by the "
                         "site's rules\n"
                    "and by people competent for it.\n",
                    cold && hot ? "Deep cold and heat" : cold ? "Deep cold" : "Heat",
                    cold && hot ? "cooled and heated" : cold ? "cooled" : "heated");
}

/* The main quantity's reservations, and which of the others lean on the curve outside where it does not. */
static void
add_reservations(const job *j, kel_text *out, const interval *v)
{
    static const char *const names[QUANTITIES] = { "integral", "length ratio", "mean coefficient", "change in length" };
    const char *label = "reservation", *before = "extrapolated: ";
    for (const note *n = j->reservations; n != NULL; n = n->next) {
        add_label(out, label);
        kel_text_printf(out, "%s: %s\n", n->code, n->text);
        label = "";
    }
    if (v->of[v->wanted].flags & KEL_FLAG_EXTRAPOLATED)
        return;
    for (int i = 0; i < QUANTITIES; i++)
        if (interval_other_extrapolated(v, i)) {
            if (before[0] == 'e')
                add_label(out, label);
            kel_text_printf(out, "%s%s", before, names[i]);
            before = ", ";
        }
    if (before[0] != 'e')
        kel_text_add(out, "\n");
}

void
interval_text(kel_text *out, const job *j, const subject *s, const interval *v, const units *in)
{
    const kel_answer *a = v->of;
    add_file_name(out, s->name);
    kel_text_add(out, ": from ");
    add_temperature(out, &v->from_unit, v->from);
    kel_text_add(out, " to ");
    add_temperature(out, &v->to_unit, v->to);
    kel_text_add(out, "\n\n");
    if (v->has_length) {
        kel_unit unit = change_unit(in, v->length * a[CHANGE].value);
        add_label(out, "change in length");
        add_measured(out, &unit, v->length * a[CHANGE].value, v->length * a[CHANGE].u);
        kel_text_add(out, "\n");
        add_label(out, "length");
        add_length(out, in, v, v->from_at.value, v->from_at.u, v->from, &v->from_unit);
        add_label(out, "");
        add_length(out, in, v, v->to_at.value, v->to_at.u, v->to, &v->to_unit);
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
    kel_text_add(out, isnan(a[RATIO].u) ? "\n" : " (k = 2)\n");
    add_label(out, "mean coefficient");
    add_measured(out, &in->coefficient, a[MEAN].value, a[MEAN].u);
    kel_text_add(out, "\n");
    add_shares(out, s, &a[v->wanted]);
    add_factor(out, s, &a[v->wanted]);
    add_transitions(out, s, v, in);
    if (s->content->reference_defaulted) {
        add_label(out, "reference");
        kel_text_add(out, "none stated: ");
        add_temperature(out, &in->temperature, s->content->reference_temperature);
        kel_text_add(out, " is assumed\n");
    }
    add_label(out, "validity range");
    add_temperature(out, &in->temperature, s->content->range.lo);
    kel_text_add(out, " to ");
    add_temperature(out, &in->temperature, s->content->range.hi);
    if (v->outside > 0) {
        kel_text_add(out, ", ");
        add_difference(out, &in->temperature, v->outside);
        kel_text_add(out, " of the interval lie outside");
    }
    kel_text_add(out, "\n");
    add_reservations(j, out, v);
    add_cautions(out, v);
}
