/* SPDX-License-Identifier: GPL-3.0-or-later */
/* NIST TN 1900, example E13: mean coefficient of a copper bar from its lengths at two temperatures, and its
   uncertainty,

       alpha = (L1 - L0)/[L0 (T1 - T0)].

   Propagated by hand, below: u(L0), u(L1), u(T0), u(T1) to the one printed value's u, because a table states the
   uncertainty of a value, not of a temperature. By the library: value and u of the observation to every answer.

   Figures and source: tn1900_e13.csv (u(T0) from memory; results recomputed by first-order propagation; the Note itself
   gives an interval from a Monte Carlo run, which is not among the figures). */
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

typedef struct bar {
    double T0, T1;
    quad alpha, u, e, u_e; /* the mean coefficient; the same as an expansion from T0 to T1 */
    char alpha_text[64], u_text[64];
} bar;

static quad
square(quad x)
{
    return x * x;
}

static bar
read_bar(void)
{
    static const char *const names[] = { "L0", "L1", "T0", "T1", "u(L0)", "u(L1)", "u(T0)", "u(T1)" };
    figures *f = figures_read("tests/published/tn1900_e13.csv");
    quad v[8];
    for (size_t k = 0; k < 8; k++)
        v[k] = quad_read(figures_text(f, figures_row(f, "item", names[k], NULL, NULL), "value"));
    quad L0 = v[0], L1 = v[1], d = v[3] - v[2];
    bar b = { .T0 = (double)v[2], .T1 = (double)v[3], .e = (L1 - L0) / L0 };
    b.alpha = b.e / d;
    /* d alpha/d L0 = -L1/(L0^2 d), d alpha/d L1 = 1/(L0 d), d alpha/d T1 = -alpha/d = -d alpha/d T0 */
    b.u = quad_sqrt(square(L1 / (L0 * L0 * d) * v[4]) + square(v[5] / (L0 * d))
                    + square(b.alpha / d) * (square(v[6]) + square(v[7])));
    b.u_e = b.u * d; /* the temperatures' part goes along: a table that prints e has it in u too */
    snprintf(b.alpha_text, sizeof b.alpha_text, "%s",
             figures_text(f, figures_row(f, "item", "alpha computed", NULL, NULL), "value"));
    snprintf(b.u_text, sizeof b.u_text, "%s",
             figures_text(f, figures_row(f, "item", "u(alpha) computed", NULL, NULL), "value"));
    figures_free(f);
    return b;
}

START_TEST(by_hand)
{
    bar b = read_bar();
    ck_assert_published((double)b.alpha, b.alpha_text);
    ck_assert_published((double)b.u, b.u_text);
}
END_TEST

/* What any record of the one value must answer. A chain of a few operations on doubles: 15 digits less one for the
   division by 85 K. A constant alpha has one parameter, so u of the mean is u of the row itself. */
static void
hold(const kel_record *record, const bar *b, const char *way)
{
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->observations, 1);
    ck_assert_uint_eq(c->parameters, 1);
    ck_assert_int_eq(c->variance, KEL_VARIANCE_GIVEN);
    ck_assert_abs_for(way, c->range.lo, b->T0, 0.0, "K");
    ck_assert_abs_for(way, c->range.hi, b->T1, 0.0, "K");
    kel_answer mean = ask(record, KEL_MEAN, b->T0, b->T1);
    printf("TN 1900 E13, %-20s alpha = %.15g 1/K (%s), u = %.9g 1/K (%s)\n", way, mean.value, b->alpha_text, mean.u,
           b->u_text);
    ck_assert_published_for(way, mean.value, b->alpha_text);
    ck_assert_published_for(way, mean.u, b->u_text);
    ck_assert_lre_for(way, mean.value, (double)b->alpha, 14.0);
    ck_assert_lre_for(way, mean.u, (double)b->u, 14.0);
    ck_assert_lre_for(way, mean.u_fit, (double)b->u, 14.0);
    kel_answer e = ask(record, KEL_EXPANSION, b->T0, b->T1);
    ck_assert_lre_for(way, e.value, (double)b->e, 14.0);
    ck_assert_lre_for(way, e.u, (double)b->u_e, 14.0);
    /* half of the interval: half of the expansion and half of its u, for a constant */
    kel_answer half = ask(record, KEL_EXPANSION, b->T0, (b->T0 + b->T1) / 2.0);
    ck_assert_lre_for(way, half.u, (double)b->u_e / 2.0, 13.5);
}

START_TEST(mean_row)
{
    bar b = read_bar();
    char text[512];
    snprintf(text, sizeof text,
             "# material: copper bar\n# reference temperature: 288.15 K\n"
             "from [K],to [K],mean coefficient [1/K],uncertainty [1/K]\n288.15,373.10,%.17g,%.17g\n",
             (double)b.alpha, (double)b.u);
    kel_table *table = make_table(text);
    const kel_table *const tables[] = { table };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    kel_fit_report *report;
    kel_record *record = make_fit(tables, 1, &options, &report);
    ck_assert_uint_ge(report->warning_count, 1); /* one row: nothing shows misfit */
    hold(record, &b, "mean row");
    kel_fit_report_free(report);
    kel_record_free(record);
    kel_table_free(table);
}
END_TEST

START_TEST(arrays)
{
    bar b = read_bar();
    const int constant = 0;
    kel_fit_options options = degree_of(&constant);
    kel_observation mean = observe(KEL_KIND_MEAN, b.T0, b.T1, (double)b.alpha, (double)b.u);
    kel_record *record = make_fit_of(make_arrays(&mean, 1, KEL_KIND_MEAN, b.T0, KEL_BASE_REFERENCE), &options);
    hold(record, &b, "mean from arrays");
    kel_record_free(record);
    kel_observation e = observe(KEL_KIND_EXPANSION, b.T0, b.T1, (double)b.e, (double)b.u_e);
    record = make_fit_of(make_arrays(&e, 1, KEL_KIND_EXPANSION, b.T0, KEL_BASE_REFERENCE), &options);
    hold(record, &b, "expansion");
    kel_record_free(record);
}
END_TEST

/* Counted from 20 degC instead, alpha' = alpha/[1 + e(20 degC)]; asked in the bar's own reference the figures
   return. */
START_TEST(other_reference)
{
    bar b = read_bar();
    const int constant = 0;
    const double r = 293.15;
    kel_fit_options options = degree_of(&constant);
    options.reference = r;
    kel_observation mean = observe(KEL_KIND_MEAN, b.T0, b.T1, (double)b.alpha, (double)b.u);
    kel_record *record = make_fit_of(make_arrays(&mean, 1, KEL_KIND_MEAN, b.T0, KEL_BASE_REFERENCE), &options);
    quad grown = 1 + b.alpha * ((quad)r - (quad)b.T0);
    ck_assert_lre(ask(record, KEL_MEAN, b.T0, b.T1).value, (double)(b.alpha / grown), 14.0);
    kel_query query = { KEL_MEAN, b.T0, b.T1, b.T0, b.T0, -1 };
    kel_answer a;
    kel_error err = { 0 };
    made(kel_record_answer(&a, record, &query, &err), &err, "mean in the bar's reference");
    ck_assert_lre(a.value, (double)b.alpha, 14.0);
    /* u' = u/grown of the parameter and the derivative grown^2 back again, less what e(20 degC) itself carries:
       d alpha/d alpha' = 1/[1 - alpha'(r - T0)]^2 = grown^2, and u(alpha') = u/grown in a solve that holds
       1 + e(r) at its last value. So u comes back to a factor `grown` = 1.00009. */
    ck_assert_double_gt(a.u / (double)b.u, 0.9998);
    ck_assert_double_lt(a.u / (double)b.u, 1.0002);
    kel_record_free(record);
}
END_TEST

KEL_TCASE(tn1900, by_hand, mean_row, arrays, other_reference)
KEL_TEST_MAIN("tn1900", tn1900)
