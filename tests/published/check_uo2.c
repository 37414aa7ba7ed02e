/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Martin's uranium dioxide: two pieces of alpha = (1/L) dL/dT, base `current length`, so e = exp(integral) - 1.

   The published coefficient and the published length do not agree, neither with each other nor at 923 K. What is
   adopted here is the coefficient; so the record is held to quadrature of that (33 digits, another method than the
   library's), and the source's own difference is shown and bounded on both sides: it must neither be larger than known
   nor be smoothed away.

   Figures and source: uo2_martin1988.csv (coefficient), uo2_martin1988_length.csv, uo2_martin1988_values.csv. */
#include <float.h>
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

static const double LOW = 273.0, JOIN = 923.0, HIGH = 3120.0;

static const char *const alpha_text[2][4] = {
    { "9.828e-6", "-6.390e-10", "1.330e-12", "-1.757e-17" },
    { "1.1833e-5", "-5.013e-9", "3.756e-12", "-6.125e-17" },
};

static quad
alpha(int piece, quad t)
{
    quad c[4];
    for (int k = 0; k < 4; k++)
        c[k] = quad_read(alpha_text[piece][k]);
    return quad_horner(c, 4, t);
}

/* Gauss's rule of two points on each of 64 panels: exact for the cubic on every one, and not the library's way. */
static quad
quadrature(int piece, quad a, quad b)
{
    const quad g = 1 / quad_sqrt(3);
    quad sum = 0, h = (b - a) / 64;
    for (int i = 0; i < 64; i++) {
        quad m = a + h * ((quad)i + (quad)0.5);
        sum += h / 2 * (alpha(piece, m - g * h / 2) + alpha(piece, m + g * h / 2));
    }
    return sum;
}

static quad
integral(quad a, quad b)
{
    if (b < a)
        return -integral(b, a);
    quad sum = 0, j = (quad)JOIN;
    if (a < j)
        sum += quadrature(0, a, b < j ? b : j);
    if (b > j)
        sum += quadrature(1, a > j ? a : j, b);
    return sum;
}

static quad
published_length(const figures *f, int piece, quad t)
{
    static const char *const names[] = { "c0", "c1", "c2", "c3" };
    quad c[4];
    for (int k = 0; k < 4; k++)
        c[k] = quad_read(figures_text(f, (size_t)piece, names[k]));
    return quad_horner(c, 4, t);
}

START_TEST(own_quadrature)
{
    kel_record *record = make_adopted("tests/published/uo2_martin1988.csv", NULL, 0, NULL);
    const kel_content *c = kel_record_content(record);
    ck_assert_int_eq(c->base, KEL_BASE_CURRENT);
    ck_assert_uint_eq(c->piece_count, 2);
    const struct { double from, to; } rows[] = {
        { 273, 273.15 },  { 273, 293.15 },    { 293.15, 600 }, { 273, 923 },  { 922.999, 923 },
        { 923, 923.001 }, { 922.5, 923.5 },   { 300, 1500 },   { 923, 3120 }, { 273, 3120 },
        { 3120, 273 },    { 2000, 2000.001 }, { 1500, 600 },
    };
    /* The terms of alpha at 3120 K sum to 66e-6 1/K in absolute value before they cancel: that times eps is what a
       coefficient can be off after its change of basis; with (2n + 4) roundings for a cubic. */
    const double unit = 10.0 * DBL_EPSILON * 66e-6;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        double a = rows[i].from, b = rows[i].to, width = fabs(b - a);
        char label[64];
        snprintf(label, sizeof label, "from %.10g K to %.10g K", a, b);
        quad want = integral((quad)a, (quad)b), ratio = quad_exp(want);
        ck_assert_abs_for(label, ask(record, KEL_INTEGRAL, a, b).value, (double)want, unit * width, "1");
        ck_assert_abs_for(label, ask(record, KEL_LENGTH_RATIO, a, b).value, (double)ratio,
                          unit * width + 2 * DBL_EPSILON, "1");
        /* [e(b) - e(a)]/(b - a), e counted from 273 K */
        quad mean = quad_exp(integral((quad)LOW, (quad)a)) * (ratio - 1) / ((quad)b - (quad)a);
        ck_assert_abs_for(label, ask(record, KEL_MEAN, a, b).value, (double)mean, 2.0 * unit + 8 * DBL_EPSILON * 66e-6,
                          "1/K");
        /* a part's change: L(b)/L(a) - 1, without the cancellation */
        ck_assert_abs_for(label, ask(record, KEL_CHANGE, a, b).value, (double)(ratio - 1), unit * width * 2.0, "1");
    }
    for (double t = LOW; t <= HIGH; t += 36.5) {
        quad want = quad_exp(integral((quad)LOW, (quad)t)) - 1;
        ck_assert_abs(ask(record, KEL_EXPANSION, t, t).value, (double)want, unit * (t - LOW) * 2.0, "1");
    }
    ck_assert_abs(ask(record, KEL_EXPANSION, LOW, LOW).value, 0.0, 0.0, "1");
    kel_record_free(record);
}
END_TEST

/* The file's figures of the published form, printed to 10 digits; the join belongs to the piece above. */
START_TEST(coefficient_rows)
{
    kel_record *record = make_adopted("tests/published/uo2_martin1988.csv", NULL, 0, NULL);
    figures *f = figures_read("tests/published/uo2_martin1988_values.csv");
    int held = 0;
    for (size_t i = 0; i < f->rows; i++) {
        double t = figures_number(f, i, "T_K");
        bool low = strcmp(figures_text(f, i, "piece"), "low") == 0;
        double at = low && t == JOIN ? nextafter(t, 0.0) : t;
        char want[64];
        snprintf(want, sizeof want, "%se-6", figures_text(f, i, "alpha_published_form_1e-6_per_K"));
        ck_assert_published_for(figures_text(f, i, "T_K"), ask(record, KEL_COEFFICIENT, at, at).value, want);
        held++;
    }
    ck_assert_int_eq(held, 21);
    /* alpha jumps up at the join, by 2.309e-10 1/K: held to the digits of the two figures. */
    double jump =
        ask(record, KEL_COEFFICIENT, JOIN, JOIN).value - ask(record, KEL_COEFFICIENT, 0, nextafter(JOIN, 0.0)).value;
    ck_assert_abs(jump, 10.35768358e-6 - 10.35745274e-6, 1e-14, "1/K");
    figures_free(f);
    kel_record_free(record);
}
END_TEST

/* Published length against the one that the published coefficient gives. */
START_TEST(difference_of_the_source)
{
    kel_record *record = make_adopted("tests/published/uo2_martin1988.csv", NULL, 0, NULL);
    figures *f = figures_read("tests/published/uo2_martin1988_length.csv");
    figures *values = figures_read("tests/published/uo2_martin1988_values.csv");
    double listed[2] = { 0.0, 0.0 };
    for (size_t i = 0; i < values->rows; i++) {
        /* the polynomials are the ones that the figures were computed from */
        int piece = strcmp(figures_text(values, i, "piece"), "low") != 0;
        quad published = published_length(f, piece, quad_read(figures_text(values, i, "T_K")));
        ck_assert_published((double)published, figures_text(values, i, "L_over_L273"));
        double t = figures_number(values, i, "T_K");
        listed[piece] =
            fmax(listed[piece], fabs((double)(published - 1 - (quad)ask(record, KEL_EXPANSION, t, t).value)));
    }
    double least[2] = { 1.0, 1.0 }, most[2] = { 0.0, 0.0 }, at[2] = { 0.0, 0.0 };
    for (double t = LOW; t <= HIGH; t += 1.0) {
        int piece = t >= JOIN;
        quad published = published_length(f, piece, (quad)t);
        double d = fabs((double)(published - 1 - (quad)ask(record, KEL_EXPANSION, t, t).value));
        least[piece] = fmin(least[piece], d);
        if (d > most[piece]) {
            most[piece] = d;
            at[piece] = t;
        }
    }
    for (int piece = 0; piece < 2; piece++)
        printf("uranium dioxide, %s 923 K: published length and coefficient differ by %.2e to %.2e (most at %.0f K)\n",
               piece == 0 ? "below" : "above", least[piece], most[piece], at[piece]);
    /* Some 5e-6 everywhere below; above, 2.1e-5 at the listed temperatures and 2.46e-5 between them, near 2750 K. */
    ck_assert_double_gt(least[0], 4.5e-6);
    ck_assert_double_lt(most[0], 5.5e-6);
    ck_assert_published(listed[1], "2.1e-5");
    ck_assert_published(most[1], "2.46e-5");
    /* At the join the published length falls by 1.07e-5; the adopted one does not. */
    ck_assert_published((double)(published_length(f, 1, (quad)JOIN) - published_length(f, 0, (quad)JOIN)), "-1.07e-5");
    ck_assert_abs(ask(record, KEL_INTEGRAL, nextafter(JOIN, 0.0), JOIN).value, 0.0, 1e-17, "1");
    figures_free(values);
    figures_free(f);
    kel_record_free(record);
}
END_TEST

KEL_TCASE(uo2, own_quadrature, coefficient_rows, difference_of_the_source)
KEL_TEST_MAIN("uo2", uo2)
