/* SPDX-License-Identifier: GPL-3.0-or-later */
/* NIST SRM 731, borosilicate glass: the certificate's cubic adopted for 293 K to 640 K gives the published expansions,
   and says so where it is used outside.

   Figures and source: srm731.csv (the coefficients) and srm731_table.csv. Tolerances: half a unit of the printed
   digit. */
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

static const double LAST_K = 640.0;

/* The figure of a cell in its printed unit of 1e-6, as a decimal in SI. */
static const char *
millionths(const figures *f, size_t row, const char *column)
{
    static char text[2][64];
    static unsigned turn;
    char *t = text[turn++ % 2];
    snprintf(t, sizeof text[0], "%se-6", figures_text(f, row, column));
    return t;
}

START_TEST(table_inside)
{
    kel_record *record = make_adopted("tests/published/srm731.csv", NULL, 0, NULL);
    figures *f = figures_read("tests/published/srm731_table.csv");
    kel_error err = { 0 };
    int inside = 0;
    for (size_t i = 0; i < f->rows; i++) {
        double t = figures_number(f, i, "T_K");
        if (t > LAST_K)
            continue;
        inside++;
        char label[64];
        snprintf(label, sizeof label, "SRM 731 at %g K", t);
        kel_answer a, e;
        ck_assert_msg(kel_record_coefficient(&a, record, t, &err) == KEL_OK, "%s: %s", label, err.message);
        ck_assert_msg(kel_record_expansion(&e, record, t, &err) == KEL_OK, "%s: %s", label, err.message);
        ck_assert_published_for(label, a.value, millionths(f, i, "alpha_table_1e-6_per_K"));
        ck_assert_published_for(label, e.value, millionths(f, i, "expansion_table_ppm"));
        ck_assert_published_for(label, a.value, millionths(f, i, "alpha_computed"));
        ck_assert_published_for(label, e.value, millionths(f, i, "expansion_computed_ppm"));
        /* The file declares no uncertainty: unknown is not zero. */
        ck_assert_uint_eq(a.flags, KEL_FLAG_UNKNOWN_U);
        ck_assert(isnan(a.u) && isnan(e.u));
    }
    ck_assert_int_eq(inside, 19);
    figures_free(f);
    kel_record_free(record);
}
END_TEST

START_TEST(table_outside)
{
    kel_record *record = make_adopted("tests/published/srm731.csv", NULL, 0, NULL);
    figures *f = figures_read("tests/published/srm731_table.csv");
    kel_error err = { 0 };
    int outside = 0;
    for (size_t i = 0; i < f->rows; i++) {
        double t = figures_number(f, i, "T_K");
        if (t <= LAST_K)
            continue;
        outside++;
        kel_answer a;
        ck_assert_int_eq(kel_record_coefficient(&a, record, t, &err), KEL_W_EXTRAPOLATED);
        ck_assert_uint_ne(a.flags & KEL_FLAG_EXTRAPOLATED, 0);
        ck_assert_published(a.value, millionths(f, i, "alpha_computed"));
        ck_assert_int_eq(kel_record_expansion(&a, record, t, &err), KEL_W_EXTRAPOLATED);
        ck_assert_published(a.value, millionths(f, i, "expansion_computed_ppm"));
        ck_assert_int_eq(kel_record_integral(&a, record, 300.0, t, &err), KEL_W_EXTRAPOLATED);
        ck_assert_abs(kel_record_outside(record, 300.0, t), t - LAST_K, 0.0, "K");
    }
    ck_assert_int_eq(outside, 2); /* 660 K and 680 K */
    figures_free(f);
    kel_record_free(record);
}
END_TEST

/* The bounds compare exactly. */
START_TEST(bounds)
{
    kel_record *record = make_adopted("tests/published/srm731.csv", NULL, 0, NULL);
    const struct { double t; kel_status status; } rows[] = {
        { 293.0, KEL_OK }, { nextafter(293.0, 0.0), KEL_W_EXTRAPOLATED }, { nextafter(293.0, 300.0), KEL_OK },
        { LAST_K, KEL_OK }, { nextafter(LAST_K, 0.0), KEL_OK }, { nextafter(LAST_K, 700.0), KEL_W_EXTRAPOLATED },
        { 0.0, KEL_W_EXTRAPOLATED }, { -1e-300, KEL_E_RANGE }, { (double)NAN, KEL_E_ARGUMENT },
        { (double)INFINITY, KEL_E_ARGUMENT },
    };
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        kel_answer a;
        kel_status status = kel_record_coefficient(&a, record, rows[i].t, NULL);
        ck_assert_msg(status == rows[i].status, "T = %.17g K: status %d, not %d", rows[i].t, (int)status,
                      (int)rows[i].status);
        ck_assert_msg((status < 0) == isnan(a.value), "T = %.17g K: value %g", rows[i].t, a.value);
    }
    kel_record_free(record);
}
END_TEST

/* The quoted 0.03e-6/K taken as a standard uncertainty: one constant mode, so u(e) = 0.03e-6 |T - 293 K| to the
   rounding of a sum of one term, and any two answers are fully correlated. */
START_TEST(stated_uncertainty)
{
    const char *const settings[] = { "uncertainty: 0.03 [1e-6/K]" };
    kel_record *record = make_adopted("tests/published/srm731.csv", settings, 1, NULL);
    ck_assert_int_eq(kel_record_content(record)->variance, KEL_VARIANCE_STATED);
    for (double t = 293.0; t <= LAST_K; t += 34.7) {
        ck_assert_lre(ask(record, KEL_COEFFICIENT, t, t).u, 0.03e-6, 15.0);
        double u = ask(record, KEL_EXPANSION, t, t).u;
        if (t == 293.0)
            ck_assert_abs(u, 0.0, 0.0, "1");
        else
            ck_assert_lre(u, 0.03e-6 * (t - 293.0), 14.5);
        kel_query e = { KEL_EXPANSION, t, t, t, NAN, -1 }, mean = { KEL_MEAN, 400.0, 410.0, 400.0, NAN, -1 };
        double c;
        kel_error err = { 0 };
        made(kel_record_covariance(&c, record, &e, &mean, &err), &err, "covariance");
        ck_assert_lre(c, 0.03e-6 * u, 14.5);
    }
    kel_record_free(record);
}
END_TEST

KEL_TCASE(srm731, table_inside, table_outside, bounds, stated_uncertainty)
KEL_TEST_MAIN("srm731", srm731)
