/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a fit must not depend on: the order of rows, the units printed, how a table is split, and the reference
   temperature that a table happens to use.

   The material is invented: alpha falls towards low temperature, and every row has an error of a fixed sequence, so
   that what is compared is a least-squares solution and not an interpolation. Two solutions of one problem whose data
   agree to some ulp differ by the condition number (about 3 here) times n eps: 1e-12 of the largest coefficient is held
   throughout, 1e-13 where the data are the same doubles. */
#include <math.h>

#include "../support/making.h"

enum { ROWS = 40 };

static double
alpha(double t)
{
    double x = t / 300.0;
    return 1e-6 * (1.5 + 17.0 * x - 6.0 * x * x + 1.1 * x * x * x);
}

/* Exact antiderivative of the above from 293.15 K. */
static double
expansion(double t)
{
    double sum[2];
    for (int i = 0; i < 2; i++) {
        double x = (i == 0 ? t : 293.15) / 300.0;
        sum[i] = 300e-6 * x * (1.5 + x * (8.5 + x * (-2.0 + x * 0.275)));
    }
    return sum[0] - sum[1];
}

/* A fixed sequence in -1..1 with little structure (Weyl's, by the golden ratio). */
static double
error_of(int i)
{
    double x = (i + 1) * 0.6180339887498949;
    return 2.0 * (x - floor(x)) - 1.0;
}

/* Curve, expansion and, where known, their u agree: within `limit` of the largest coefficient, and of it times the
   range. */
static void
same_curve(const kel_record *a, const kel_record *b, double limit, const char *what)
{
    const kel_interval r = kel_record_content(a)->range;
    double largest = 0.0;
    for (int i = 0; i <= 100; i++)
        largest = fmax(largest, fabs(ask(a, KEL_COEFFICIENT, 0, r.lo + (r.hi - r.lo) * i / 100).value));
    for (int i = 0; i <= 100; i++) {
        double t = fmin(r.hi, r.lo + (r.hi - r.lo) * i / 100.0);
        kel_answer x = ask(a, KEL_COEFFICIENT, t, t), y = ask(b, KEL_COEFFICIENT, t, t);
        ck_assert_abs_for(what, x.value, y.value, limit * largest, "1/K");
        if (!isnan(x.u) || !isnan(y.u))
            ck_assert_abs_for(what, x.u, y.u, limit * largest, "1/K");
        x = ask(a, KEL_EXPANSION, t, t);
        y = ask(b, KEL_EXPANSION, t, t);
        ck_assert_abs_for(what, x.value, y.value, limit * largest * (r.hi - r.lo), "1");
        if (!isnan(x.u) || !isnan(y.u))
            ck_assert_abs_for(what, x.u, y.u, limit * largest * (r.hi - r.lo), "1");
    }
}

/* Row i of the three kinds, u 1 % of 1e-5 where asked for. */
static kel_observation
row_of(kel_kind kind, int i, bool with_u)
{
    double t = 20.0 + 9.5 * i, noise = 1e-7 * error_of(i);
    t = t == 293.15 ? 293.0 : t;
    double from = kind == KEL_KIND_MEAN && i % 3 == 0 ? 90.0 : 293.15, width = fabs(t - from);
    double value = kind == KEL_KIND_COEFFICIENT ? alpha(t) + noise
                   : kind == KEL_KIND_EXPANSION ? expansion(t) + 100.0 * noise
                                                : (expansion(t) - expansion(from)) / (t - from) + noise;
    double u = kind == KEL_KIND_EXPANSION ? 1e-5 : kind == KEL_KIND_MEAN ? 1e-5 / width : 1e-7;
    return observe(kind, from, t, value, with_u ? u * (1.0 + 0.5 * error_of(7 * i)) : 0.0);
}

static kel_record *
fit_rows(const kel_observation *rows, size_t n, kel_kind kind)
{
    const int degree = 3;
    kel_fit_options options = degree_of(&degree);
    return make_fit_of(make_arrays(rows, n, kind, 293.15, KEL_BASE_REFERENCE), &options);
}

static const struct { kel_kind kind; bool with_u; const char *name; } cases[] = {
    { KEL_KIND_COEFFICIENT, false, "coefficient" }, { KEL_KIND_COEFFICIENT, true, "coefficient with u" },
    { KEL_KIND_MEAN, false, "mean" }, { KEL_KIND_MEAN, true, "mean with u" },
    { KEL_KIND_EXPANSION, false, "expansion" }, { KEL_KIND_EXPANSION, true, "expansion with u" },
};

START_TEST(row_order)
{
    kel_observation rows[ROWS], mixed[ROWS];
    for (int i = 0; i < ROWS; i++)
        rows[i] = row_of(cases[_i].kind, i, cases[_i].with_u);
    for (int i = 0; i < ROWS; i++)
        mixed[i] = rows[(i * 17 + 5) % ROWS]; /* 17 and 40 have no common divisor: every row once */
    kel_record *a = fit_rows(rows, ROWS, cases[_i].kind), *b = fit_rows(mixed, ROWS, cases[_i].kind);
    same_curve(a, b, 1e-13, cases[_i].name);
    ck_assert_lre(kel_record_content(a)->residual_standard_deviation,
                  kel_record_content(b)->residual_standard_deviation, 12.0);
    kel_record_free(a);
    kel_record_free(b);
}
END_TEST

/* One table in two halves, odd and even rows: with a stated independent u the same rows weigh the same. */
START_TEST(split_in_two)
{
    const int k0 = 2 * _i + 1; /* the cases with u: without, each table's column has a scatter of its own */
    ck_assert(cases[k0].with_u);
    kel_observation rows[ROWS], half[2][ROWS / 2];
    for (int i = 0; i < ROWS; i++)
        half[i % 2][i / 2] = rows[i] = row_of(cases[k0].kind, i, true);
    kel_record *whole = fit_rows(rows, ROWS, cases[k0].kind);
    kel_table *two[2];
    for (int k = 0; k < 2; k++)
        two[k] = make_arrays(half[k], ROWS / 2, cases[k0].kind, 293.15, KEL_BASE_REFERENCE);
    const kel_table *const tables[] = { two[0], two[1] };
    const int degree = 3;
    kel_fit_options options = degree_of(&degree);
    kel_record *split = make_fit(tables, 2, &options, NULL);
    same_curve(whole, split, 1e-12, cases[k0].name);
    ck_assert_lre(kel_record_content(split)->chi2, kel_record_content(whole)->chi2, 12.0);
    for (int k = 0; k < 2; k++)
        kel_table_free(two[k]);
    kel_record_free(whole);
    kel_record_free(split);
}
END_TEST

/* The same table in two sets of units, every number exactly convertible: T in degC in fives is T in degF in nines, and
   0.09e-6/K is 0.05e-6/degF. Read with one rounding each, both give the same doubles. The printed resolution is another
   one; it enters the weights of mean values without stated u, so those state one. */
static const struct { const char *name; bool degF; kel_kind kind; const char *header[2]; } unit_cases[] = {
    { "1e-6/degF", true, KEL_KIND_COEFFICIENT,
      { "temperature [degC],coefficient [1e-6/K]", "temperature [degF],coefficient [1e-6/degF]" } },
    { "ppm/degF", true, KEL_KIND_COEFFICIENT,
      { "temperature [degC],coefficient [1e-6/degC]", "T [degF],alpha [ppm/degF]" } },
    { "uin/in/degF", true, KEL_KIND_COEFFICIENT,
      { "temperature [degC],coefficient [um/(m.K)]", "T [degF],alpha [uin/in/degF]" } },
    { "mean", true, KEL_KIND_MEAN,
      { "# uncertainty: 0.18 [1e-6/K] independent\ntemperature [degC],mean coefficient [1e-6/K]",
        "# uncertainty: 0.1 [1e-6/degF] independent\ntemperature [degF],mean coefficient [1e-6/degF]" } },
    { "percent and ppm", false, KEL_KIND_EXPANSION,
      { "temperature [degC],expansion [%]", "temperature [degC],expansion [ppm]" } },
};

START_TEST(printed_units)
{
    const kel_kind kind = unit_cases[_i].kind;
    const bool degF = unit_cases[_i].degF, e = kind == KEL_KIND_EXPANSION;
    char text[2][ROWS * 48 + 256];
    int n[2];
    for (int k = 0; k < 2; k++)
        n[k] = sprintf(text[k], "# reference temperature: %s\n%s\n", k == 1 && degF ? "68 degF" : "20 degC",
                       unit_cases[_i].header[k]);
    for (int i = 0; i < ROWS; i++) {
        int t = -250 + 10 * i + (i > 26 ? 5 : 0); /* degC, never 20 */
        double T = t + 273.15, value = e                       ? expansion(T)
                                       : kind == KEL_KIND_MEAN ? expansion(T) / (T - 293.15)
                                                               : alpha(T);
        /* counted in units of 5e-6, which are 0.0005 %, or of 0.09e-6/K */
        double units = round(value / (e ? 5e-6 : 0.09e-6) + 2.0 * error_of(i));
        const int decimals[2] = { e ? 4 : 2, e ? 0 : 2 }, temperature[2] = { t, degF ? t * 9 / 5 + 32 : t };
        const double unit[2] = { e ? 0.0005 : 0.09, e ? 5.0 : 0.05 };
        for (int k = 0; k < 2; k++)
            n[k] += snprintf(text[k] + n[k], sizeof text[k] - (size_t)n[k], "%d,%.*f\n", temperature[k], decimals[k],
                             units * unit[k]);
    }
    kel_record *record[2];
    const int degree = 3;
    kel_fit_options options = degree_of(&degree);
    for (int k = 0; k < 2; k++)
        record[k] = make_fit_of(make_table(text[k]), &options);
    ck_assert_ulp(kel_record_content(record[0])->reference_temperature, 293.15, 0);
    ck_assert_ulp(kel_record_content(record[1])->reference_temperature, 293.15, 0);
    same_curve(record[0], record[1], 1e-13, unit_cases[_i].name);
    kel_record_free(record[0]);
    kel_record_free(record[1]);
}
END_TEST

/* Exact expansions and coefficients of one material, referred to 20 degC and to r by e' = [e(T) - e(r)]/[1 + e(r)] and
   alpha' = alpha/[1 + e(r)]: one curve, whichever of them is fitted, alone or together. */
static kel_table *
referred_to(kel_kind kind, double r, int odd)
{
    kel_observation rows[ROWS / 2];
    for (int i = 0; i < ROWS / 2; i++) {
        double t = 20.25 + 19.0 * i + 9.5 * odd, grown = 1.0 + expansion(r);
        double value = kind == KEL_KIND_COEFFICIENT ? alpha(t) / grown
                       : kind == KEL_KIND_EXPANSION ? (expansion(t) - expansion(r)) / grown
                                                    : (expansion(t) - expansion(r)) / grown / (t - r);
        rows[i] = observe(kind, r, t, value, kind == KEL_KIND_EXPANSION ? 1e-6 : 1e-8);
    }
    return make_arrays(rows, ROWS / 2, kind, r, KEL_BASE_REFERENCE);
}

static const struct { const char *name; double r; } references[] = {
    { "20 degC", 293.15 }, { "70 degF", (70.0 + 459.67) * 5.0 / 9.0 }, { "0 degC", 273.15 }, { "4 K", 4.0 },
    { "700 K", 700.0 },
};

START_TEST(reference_of_the_table)
{
    static const kel_kind kinds[] = { KEL_KIND_COEFFICIENT, KEL_KIND_MEAN, KEL_KIND_EXPANSION };
    const int degree = 3;
    kel_fit_options options = degree_of(&degree);
    options.reference = 293.15;
    for (size_t k = 0; k < sizeof kinds / sizeof kinds[0]; k++) {
        kel_record *own = make_fit_of(referred_to(kinds[k], 293.15, 0), &options);
        kel_record *other = make_fit_of(referred_to(kinds[k], references[_i].r, 0), &options);
        ck_assert_ulp(kel_record_content(other)->reference_temperature, 293.15, 0);
        kel_table *two[] = { referred_to(kinds[k], 293.15, 0), referred_to(kinds[k], references[_i].r, 1) };
        const kel_table *const tables[] = { two[0], two[1] };
        kel_record *both = make_fit(tables, 2, &options, NULL);
        for (int i = 0; i <= 100; i++) {
            double t = 20.25 + 3.6 * i;
            const kel_record *const records[] = { own, other, both };
            for (int j = 0; j < 3; j++) {
                /* ask() refuses an extrapolation, and a range may end before 293.15 K is reached: answer as it is. */
                kel_answer a, e;
                ck_assert_int_ge(kel_record_coefficient(&a, records[j], t, NULL), 0);
                ck_assert_int_ge(kel_record_expansion(&e, records[j], t, NULL), 0);
                ck_assert_abs_for(references[_i].name, a.value, alpha(t), 1e-12 * 14e-6, "1/K");
                ck_assert_abs_for(references[_i].name, e.value, expansion(t), 1e-12 * 14e-6 * 400.0, "1");
            }
        }
        /* There and back: the fitted curve answers in the table's own reference with the table's own values. */
        kel_query query = { KEL_EXPANSION, 100.0, 100.0, 100.0, references[_i].r, -1 };
        kel_answer e;
        ck_assert_int_ge(kel_record_answer(&e, other, &query, NULL), 0);
        ck_assert_abs_for(references[_i].name, e.value,
                          (expansion(100.0) - expansion(references[_i].r)) / (1.0 + expansion(references[_i].r)),
                          1e-12 * 14e-6 * 400.0, "1");
        kel_table_free(two[0]);
        kel_table_free(two[1]);
        kel_record_free(own);
        kel_record_free(other);
        kel_record_free(both);
    }
}
END_TEST

/* Both bases of one length change: alpha(reference length) = alpha(current length) (1 + e). With exact expansions a
   record in either base gives the same expansions to the fit's own ability: ln(1 + e) is no polynomial, so the degree
   is high. */
START_TEST(base_of_the_record)
{
    const int degree = 8;
    kel_fit_options options = degree_of(&degree);
    options.reference = 293.15;
    options.base = KEL_BASE_CURRENT;
    kel_record *record = make_fit_of(referred_to(KEL_KIND_EXPANSION, references[_i].r, 0), &options);
    ck_assert_int_eq(kel_record_content(record)->base, KEL_BASE_CURRENT);
    for (int i = 0; i <= 100; i++) {
        double t = 20.25 + 3.6 * i;
        kel_answer e;
        ck_assert_int_ge(kel_record_expansion(&e, record, t, NULL), 0);
        /* alpha/(1 + e) continued as a series in e: the ninth power of 5e-3 and less, 1e-14 with what degree 8
           leaves */
        ck_assert_abs_for(references[_i].name, e.value, expansion(t), 1e-12, "1");
    }
    kel_record_free(record);
}
END_TEST

static TCase *
invariance(void)
{
    TCase *c = tcase_create("invariance");
    tcase_add_loop_test(c, row_order, 0, KEL_LENGTH(cases));
    tcase_add_loop_test(c, split_in_two, 0, KEL_LENGTH(cases) / 2);
    tcase_add_loop_test(c, printed_units, 0, KEL_LENGTH(unit_cases));
    tcase_add_loop_test(c, reference_of_the_table, 0, KEL_LENGTH(references));
    tcase_add_loop_test(c, base_of_the_record, 0, KEL_LENGTH(references));
    return c;
}

KEL_TEST_MAIN("invariance", invariance)
