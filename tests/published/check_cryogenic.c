/* SPDX-License-Identifier: GPL-3.0-or-later */
/* NIST's correlations for technical solids at low temperature: y(T) = 1e5 (L - L293)/L293 = a + b T + .. + e T^4 above
   T_low, the constant f below. Each is sampled, fitted and recovered.

   The published y(293 K) is not exactly zero, so the samples are y(T) - y(293 K), which is. alpha = dy/dT is a
   polynomial of degree 2, or 3 where e is not 0: the fit has the right form, and what it misses by comes from rounding
   alone. Two limits therefore: 1e-12 absolute in 1/K and in expansion everywhere, and a bound that follows from the
   samples: they are exact to q = eps/2 max|y| (or half a printed digit), the solver adds a few eps of the same size,
   and least squares on n rows hands on at most sqrt(n) cond_2 of that, in alpha divided by the length scale (T_high -
   T_low)/2.

   Figures and source: nist_cryogenic.csv, nist_cryogenic_values.csv. */
#include <float.h>
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

enum { SAMPLES = 40, COLD_SAMPLES = 6 };
static const double REFERENCE = 293.0, HIGH = 300.0, REQUIRED = 1e-12;

typedef struct solid {
    const char *name;
    quad c[5], f;          /* y in units of 1 */
    double low;            /* T_low, or the lower end of the equation's range */
    bool two_pieces;
    int degree;            /* of alpha */
    double largest;        /* max |y(T) - y(293)| */
    double largest_alpha;
} solid;

static quad
expansion(const solid *s, quad t)
{
    quad y = s->two_pieces && t < (quad)s->low ? s->f : quad_horner(s->c, 5, t);
    return y - quad_horner(s->c, 5, (quad)REFERENCE);
}

static quad
coefficient(const solid *s, quad t)
{
    if (s->two_pieces && t < (quad)s->low)
        return 0;
    quad d[4];
    for (int k = 0; k < 4; k++)
        d[k] = (k + 1) * s->c[k + 1];
    return quad_horner(d, 4, t);
}

static solid
solid_of(const figures *f, size_t row)
{
    static const char *const names[] = { "a", "b", "c", "d", "e" };
    solid s = { .name = figures_text(f, row, "material") };
    for (size_t k = 0; k < 5; k++)
        s.c[k] = quad_read(figures_text(f, row, names[k])) / 100000;
    s.two_pieces = figures_text(f, row, "T_low_K")[0] != '\0';
    s.low = s.two_pieces ? figures_number(f, row, "T_low_K") : strtod(figures_text(f, row, "equation_range_K"), NULL);
    if (s.two_pieces)
        s.f = quad_read(figures_text(f, row, "f")) / 100000;
    s.degree = s.c[4] == 0 ? 2 : 3;
    for (int i = 0; i <= 100; i++) {
        quad t = (quad)s.low + (quad)(HIGH - s.low) * i / 100;
        s.largest = fmax(s.largest, fabs((double)expansion(&s, t)));
        s.largest_alpha = fmax(s.largest_alpha, fabs((double)coefficient(&s, t)));
    }
    return s;
}

/* Sample i of n: both ends, equal spacing, and never the reference, where an expansion is no observation. */
static double
sample_at(double lo, double hi, int i, int n)
{
    double t = round((lo + (hi - lo) * i / (n - 1)) * 4.0) / 4.0;
    return t == REFERENCE ? t + 0.25 : t;
}

/* The record against the closed form at 1000 places, ends included. */
static void
hold(const kel_record *record, const solid *s, double from, double condition, double q, const char *way)
{
    double scale = (HIGH - s->low) / 2.0, bound = sqrt((double)SAMPLES) * condition;
    double limit_e = fmin(REQUIRED, bound * q),
           limit_a = fmin(REQUIRED, bound * q / scale * (s->degree + 1) * (s->degree + 1));
    double worst_e = 0.0, worst_a = 0.0;
    for (int i = 0; i <= 1000; i++) {
        double t = from + (HIGH - from) * i / 1000.0;
        double e = ask(record, KEL_EXPANSION, t, t).value, a = ask(record, KEL_COEFFICIENT, t, t).value;
        worst_e = fmax(worst_e, fabs((double)((quad)e - expansion(s, (quad)t))));
        worst_a = fmax(worst_a, fabs((double)((quad)a - coefficient(s, (quad)t))));
    }
    printf("%-38.38s %-24s expansion off by %.1e (limit %.1e), coefficient by %.1e 1/K (limit %.1e)\n", s->name, way,
           worst_e, limit_e, worst_a, limit_a);
    ck_assert_abs_for(s->name, worst_e, 0.0, limit_e, "1");
    ck_assert_abs_for(s->name, worst_a, 0.0, limit_a, "1/K");
}

/* The closed form's values, computed to 10 digits: as y = 1e5 e + y(293) and alpha in 1e-6/K. */
static void
hold_rows(const kel_record *record, const solid *s, const figures *values, double from)
{
    int held = 0;
    for (size_t i = 0; i < values->rows; i++) {
        double t = figures_number(values, i, "T_K");
        if (strcmp(figures_text(values, i, "material"), s->name) != 0)
            continue;
        kel_answer e, a;
        kel_status status = kel_record_expansion(&e, record, t, NULL);
        bool out = t < from || strcmp(figures_text(values, i, "range"), "OUT") == 0;
        ck_assert_int_eq(kel_record_coefficient(&a, record, t, NULL), out ? KEL_W_EXTRAPOLATED : KEL_OK);
        ck_assert_msg(out == (status == KEL_W_EXTRAPOLATED), "%s at %g K: %s", s->name, t, kel_status_text(status));
        if (t < from && s->two_pieces)
            continue; /* the polynomial alone does not answer for the plateau */
        held++;
        double y = (double)(100000 * ((quad)e.value + quad_horner(s->c, 5, (quad)REFERENCE)));
        double want_y = figures_number(values, i, "y_1e-5"), want_a = figures_number(values, i, "alpha_1e-6_per_K");
        /* half of the tenth digit; the requirement where the figure is zero */
        double half_y = 0.5 * pow(10.0, floor(log10(fabs(want_y))) - 9.0);
        double half_a = want_a == 0.0 ? REQUIRED * 1e6 : 0.5 * pow(10.0, floor(log10(fabs(want_a))) - 9.0);
        ck_assert_abs_for(s->name, y, want_y, half_y * (1.0 + 1e-4), "1e-5");
        ck_assert_abs_for(s->name, a.value * 1e6, want_a, half_a * (1.0 + 1e-4), "1e-6/K");
    }
    ck_assert_int_ge(held, 7); /* of ten; the plateau of the one solid with T_low = 80 K has three */
}

/* Fits rows of one kind, exact to a double, or the same as text with digits to 1e-17 (expansion) or 1e-20 1/K
   (coefficient). */
static void
recover(kel_kind kind, bool text, int row)
{
    figures *f = figures_read("tests/published/nist_cryogenic.csv"),
            *values = figures_read("tests/published/nist_cryogenic_values.csv");
    solid s = solid_of(f, (size_t)row);
    kel_observation rows[SAMPLES];
    char *table_text = malloc(SAMPLES * 64 + 256);
    ck_assert_ptr_nonnull(table_text);
    int n = sprintf(table_text, "# reference temperature: 293 K\n# contracts on heating: yes\ntemperature [K],%s\n",
                    kind == KEL_KIND_EXPANSION ? "expansion [1e-5]" : "coefficient [1e-6/K]");
    for (int i = 0; i < SAMPLES; i++) {
        double t = sample_at(s.low, HIGH, i, SAMPLES);
        quad y = kind == KEL_KIND_EXPANSION ? expansion(&s, (quad)t) : coefficient(&s, (quad)t);
        rows[i] = observe(kind, REFERENCE, t, (double)y, 0.0);
        n += sprintf(table_text + n, kind == KEL_KIND_EXPANSION ? "%.2f,%.12f\n" : "%.2f,%.14f\n", t,
                     (double)(y * (kind == KEL_KIND_EXPANSION ? 100000 : 1000000)));
    }
    kel_table *table = text ? make_table(table_text) : make_arrays(rows, SAMPLES, kind, REFERENCE, KEL_BASE_REFERENCE);
    free(table_text);
    const kel_table *const tables[] = { table };
    kel_fit_options options = degree_of(&s.degree);
    options.reference = REFERENCE;
    kel_fit_report *report;
    kel_record *record = make_fit(tables, 1, &options, &report);
    ck_assert_uint_eq(kel_record_content(record)->observations, SAMPLES);
    ck_assert_double_ge(report->condition, 1.0);

    /* The size of what is wrong in a sample, as an expansion: its rounding and 16 like it from the solver (a multiple
       that does not grow with the condition). A coefficient's counts over the whole range. */
    double size = kind == KEL_KIND_EXPANSION ? s.largest : s.largest_alpha * (HIGH - s.low);
    double printed = !text ? 0.0 : kind == KEL_KIND_EXPANSION ? 0.5e-17 : 0.5e-20 * (HIGH - s.low);
    hold(record, &s, s.low, report->condition, 16.0 * DBL_EPSILON * size + printed,
         kind == KEL_KIND_EXPANSION ? text ? "expansion, text" : "expansion"
                                    : text ? "coefficient, text" : "coefficient");
    hold_rows(record, &s, values, s.low);
    kel_fit_report_free(report);
    kel_record_free(record);
    kel_table_free(table);
    figures_free(values);
    figures_free(f);
}

START_TEST(from_expansion) { recover(KEL_KIND_EXPANSION, false, _i); } END_TEST
START_TEST(from_coefficient) { recover(KEL_KIND_COEFFICIENT, false, _i); } END_TEST
START_TEST(from_expansion_text) { recover(KEL_KIND_EXPANSION, true, _i); } END_TEST
START_TEST(from_coefficient_text) { recover(KEL_KIND_COEFFICIENT, true, _i); } END_TEST

/* With the plateau below T_low as a second piece: the correlation steps there by the printed jump, and the step is
   fitted. */
START_TEST(plateau)
{
    figures *f = figures_read("tests/published/nist_cryogenic.csv"),
            *values = figures_read("tests/published/nist_cryogenic_values.csv");
    solid s = solid_of(f, (size_t)_i);
    char text[(SAMPLES + COLD_SAMPLES) * 64 + 256];
    int n = sprintf(text, "# reference temperature: 293 K\n# contracts on heating: yes\n# transition: %g K step\n"
                    "temperature [K],expansion [1e-5]\n", s.low);
    for (int i = 0; i < SAMPLES + COLD_SAMPLES; i++) {
        double t = i < COLD_SAMPLES ? 4.0 + (s.low - 4.0) * i / COLD_SAMPLES
                                    : sample_at(s.low, HIGH, i - COLD_SAMPLES, SAMPLES);
        n += sprintf(text + n, "%.17g,%.12f\n", t, (double)(100000 * expansion(&s, (quad)t)));
    }
    kel_table *table = make_table(text);
    const kel_table *const tables[] = { table };
    const int degrees[] = { 0, s.degree };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.degrees = degrees;
    options.degree_count = 2;
    kel_fit_report *report;
    kel_record *record = make_fit(tables, 1, &options, &report);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->piece_count, 2);
    ck_assert_uint_eq(c->transition_count, 1);
    ck_assert_uint_eq(c->parameters, (size_t)s.degree + 3);
    ck_assert_abs_for(s.name, c->range.lo, 4.0, 0.0, "K");
    ck_assert_abs_for(s.name, c->range.hi, HIGH, 0.0, "K");

    /* The file prints the jump to six digits, as polynomial less plateau, in 1e-5. */
    double jump = c->mean.steps[0] * 1e5, want = figures_number(f, (size_t)_i, "jump_at_Tlow");
    ck_assert_abs_for(s.name, jump, want, 0.5 * pow(10.0, floor(log10(fabs(want))) - 5.0) * 1.0001, "1e-5");
    double crossing = ask(record, KEL_INTEGRAL, nextafter(s.low, 0.0), s.low).value * 1e5;
    ck_assert_abs_for(s.name, crossing, jump, 1e-12 * 1e5, "1e-5");
    hold(record, &s, 4.0, report->condition, 16.0 * DBL_EPSILON * s.largest + 0.5e-17, "two pieces");
    hold_rows(record, &s, values, 4.0);
    kel_fit_report_free(report);
    kel_record_free(record);
    kel_table_free(table);
    figures_free(values);
    figures_free(f);
}
END_TEST

static TCase *
solids(void)
{
    enum { ROWS = 8, ROWS_WITH_PLATEAU = 5 }; /* in the file's order; rows of the file, held against it below */
    TCase *c = tcase_create("solids");
    tcase_add_loop_test(c, from_expansion, 0, ROWS);
    tcase_add_loop_test(c, from_coefficient, 0, ROWS);
    tcase_add_loop_test(c, from_expansion_text, 0, ROWS);
    tcase_add_loop_test(c, from_coefficient_text, 0, ROWS);
    tcase_add_loop_test(c, plateau, 0, ROWS_WITH_PLATEAU);
    return c;
}

START_TEST(every_row_is_tested)
{
    figures *f = figures_read("tests/published/nist_cryogenic.csv");
    ck_assert_uint_eq(f->rows, 8);
    for (size_t i = 0; i < f->rows; i++)
        ck_assert_int_eq(figures_text(f, i, "T_low_K")[0] != '\0', i < 5);
    figures_free(f);
}
END_TEST

KEL_TCASE(whole, every_row_is_tested)
KEL_TEST_MAIN("cryogenic", solids, whole)
