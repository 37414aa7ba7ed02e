/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Structural carbon steel as EN 1993-1-2:2005, 3.4.1.1 has it: three pieces, a plateau, and a step of -8.4e-6 at 750
   degC. Adopted from the published elongation, adopted from its derivative with the step declared, and fitted to
   sampled values.

   e(t) = 1.2e-5 t + 0.4e-8 t^2 - 2.416e-4 below 750 degC, 1.1e-2 from there to 860 degC, 2e-5 t - 6.2e-3 above.
   The constants are decimals, so the terms carry roundings of eps times 2.2e-2 (the largest term): the adopted curve is
   held to 16 of them. Figures and source: en1993_steel*.csv. */
#include <float.h>
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

static const double ROUNDING = 16.0 * DBL_EPSILON * 2.2e-2;

static double
kelvin(double t_degC)
{
    return t_degC + 273.15;
}

static quad
elongation(quad t)
{
    quad c[3] = { quad_read("-2.416e-4"), quad_read("1.2e-5"), quad_read("0.4e-8") };
    if (t < 750)
        return quad_horner(c, 3, t);
    return t <= 860 ? quad_read("1.1e-2") : quad_read("2e-5") * t - quad_read("6.2e-3");
}

static quad
slope(quad t)
{
    return t < 750 ? quad_read("1.2e-5") + quad_read("0.8e-8") * t : t < 860 ? (quad)0 : quad_read("2e-5");
}

/* Everything that the three ways have in common; `limit` bounds the expansion's error, limit_a the coefficient's. */
static void
hold(const kel_record *record, const char *way, double limit, double limit_a)
{
    kel_error err = { 0 };
    const kel_content *c = kel_record_content(record);
    ck_assert_msg(c->piece_count == 3, "%s: %zu pieces", way, c->piece_count);
    double steps = 0.0;
    for (size_t i = 0; i < c->transition_count; i++) {
        if (c->mean.steps[i] != 0.0)
            ck_assert_abs_for(way, c->transitions[i].at, 1023.15, 0.0, "K");
        steps += c->mean.steps[i];
    }
    ck_assert_abs_for(way, steps, -8.4e-6, limit, "1");

    figures *f = figures_read("tests/published/en1993_steel_values.csv");
    for (size_t i = 0; i < f->rows; i++) {
        double t = figures_number(f, i, "t_C");
        char label[64];
        snprintf(label, sizeof label, "%s, %s degC", way, figures_text(f, i, "t_C"));
        kel_answer e;
        kel_status status = kel_record_expansion(&e, record, kelvin(t), &err);
        ck_assert_msg(status == (t >= 750.0 ? KEL_W_TRANSITION : KEL_OK), "%s: %s", label, kel_status_text(status));
        ck_assert_published_for(label, e.value, figures_text(f, i, "steel"));
    }
    figures_free(f);

    double worst_e = 0.0, worst_a = 0.0;
    for (int i = 0; i <= 1180; i++) {
        /* Both sides evaluate the same double, T; the closed form takes it back to degC in 33 digits. */
        double T = kelvin(20.0 + i);
        quad t = (quad)T - quad_read("273.15");
        if (i == 730 || i == 840)
            t = 20 + i; /* a join itself: its side must not hang on the last bit of 273.15 */
        double e = ask(record, KEL_EXPANSION, T, T).value, a = ask(record, KEL_COEFFICIENT, T, T).value;
        worst_e = fmax(worst_e, fabs((double)((quad)e - elongation(t))));
        worst_a = fmax(worst_a, fabs((double)((quad)a - slope(t))));
    }
    printf("steel, %-32s expansion off by %.1e (limit %.1e), coefficient by %.1e 1/K (limit %.1e)\n", way, worst_e,
           limit, worst_a, limit_a);
    ck_assert_abs_for(way, worst_e, 0.0, limit, "1");
    ck_assert_abs_for(way, worst_a, 0.0, limit_a, "1/K");

    /* The plateau answers for the step's own temperature; one double below, the step is not crossed. */
    double below = ask(record, KEL_EXPANSION, 0.0, nextafter(1023.15, 0.0)).value;
    ck_assert_abs_for(way, below, 1.10084e-2, limit, "1");
    ck_assert_abs_for(way, ask(record, KEL_EXPANSION, 0.0, 1023.15).value, 1.1e-2, limit, "1");
    ck_assert_abs_for(way, ask(record, KEL_INTEGRAL, 1023.15, 1133.15).value, 0.0, limit, "1");
    ck_assert_abs_for(way, ask(record, KEL_INTEGRAL, kelvin(700.0), kelvin(900.0)).value, 0.0118 - 0.0101184, limit,
                      "1");
    ck_assert_abs_for(way, ask(record, KEL_EXPANSION, 293.15, 293.15).value, 0.0, 0.0, "1");

    const double outside[] = { nextafter(293.15, 0.0), nextafter(1473.15, 2000.0), 77.0, 1500.0 };
    for (size_t i = 0; i < sizeof outside / sizeof outside[0]; i++) {
        kel_answer a;
        ck_assert_int_eq(kel_record_coefficient(&a, record, outside[i], &err), KEL_W_EXTRAPOLATED);
    }
}

START_TEST(adopted_elongation)
{
    kel_adopt_report *report;
    kel_record *record = make_adopted("tests/published/en1993_steel.csv", NULL, 0, &report);
    /* The jump between the published pieces is not smoothed over silently. */
    ck_assert_uint_ge(report->warning_count, 1);
    bool said = false;
    for (size_t i = 0; i < report->warning_count; i++)
        said |= strstr(report->warnings[i].text, "1023.15 K") != NULL
                || strstr(report->warnings[i].text, "750 degC") != NULL;
    ck_assert(said);
    hold(record, "adopted elongation", ROUNDING, ROUNDING / 100.0);
    kel_adopt_report_free(report);
    kel_record_free(record);
}
END_TEST

START_TEST(adopted_coefficient)
{
    kel_record *record = make_adopted("tests/published/en1993_steel_alpha.csv", NULL, 0, NULL);
    hold(record, "adopted coefficient", ROUNDING, ROUNDING / 100.0);
    kel_record_free(record);
}
END_TEST

/* Sampled every 10 K, with a row just below the step beside the one at it. Both ways of declaring the step. The samples
   are rounded at 1e-15 as text; least squares passes on at most sqrt(n) cond of that, n rows in all. */
static void
fitted(const char *transition, const char *way)
{
    enum { ROWS = 120 };
    char text[ROWS * 64 + 512];
    int n = sprintf(text, "# reference temperature: 20 degC\n# transition: %s\n# transition: 860 degC\n"
                    "temperature [degC],expansion [1]\n", transition), rows = 0;
    for (int t = 30; t <= 1200; t += 10) {
        if (t == 750) {
            n += sprintf(text + n, "750,%.15f\n", 1.10084e-2); /* first of two at 750 degC: adjoins the colder rows */
            rows++;
        }
        n += sprintf(text + n, "%d,%.15f\n", t, (double)elongation((quad)t));
        rows++;
    }
    ck_assert_int_le(rows, ROWS);
    kel_table *table = make_table(text);
    const kel_table *const tables[] = { table };
    const int degrees[] = { 1, 0, 0 };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.degrees = degrees;
    options.degree_count = 3;
    kel_fit_report *report;
    kel_record *record = make_fit(tables, 1, &options, &report);
    bool stated = strstr(transition, "-8.4e-6") != NULL;
    ck_assert_uint_eq(kel_record_content(record)->parameters, stated ? 4 : 5);
    double limit = sqrt((double)rows) * report->condition * (0.5e-15 + ROUNDING);
    /* Markov's inequality for a parabola on the half-width of the narrowest piece */
    hold(record, way, limit, 4.0 * limit / 55.0);
    kel_fit_report_free(report);
    kel_record_free(record);
    kel_table_free(table);
}

START_TEST(fitted_step) { fitted("750 degC step", "fitted with its step"); } END_TEST
START_TEST(stated_step) { fitted("750 degC step -8.4e-6", "fitted with the stated step"); } END_TEST

KEL_TCASE(steel, adopted_elongation, adopted_coefficient, fitted_step, stated_step)
KEL_TEST_MAIN("steel", steel)
