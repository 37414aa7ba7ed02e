/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a row weighs. Rows without stated u have u_i^2 = s^2 w_i^2 + resolution^2/12 with w = 1, or 1/|Tb - Ta| for a
   mean, and s >= 0 solves sum r_i^2/u_i^2 = n - sum h_i, or is 0 where the sum is smaller already. A shared error
   weighs nothing: it moves no curve and does not shrink with the number of rows.

   Leverages are computed here by normal equations in 33 digits from the u that the record states, so that the equation
   is tested and not the library's bookkeeping. */
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

enum { N = 16, K = 2 };

/* A fixed sequence in -1..1 with little structure. */
static double
error_of(int i)
{
    return 2.0 * fmod((i + 1) * 0.6180339887498949, 1.0) - 1.0;
}

static double
alpha(double t)
{
    return 12e-6 + 1e-8 * (t - 293.0);
}

static double
expansion(double t)
{
    return (t - 293.0) * (12e-6 + 0.5e-8 * (t - 293.0));
}

/* n - sum h and sum r^2/u^2 for a straight alpha on the record's rows. */
static void
equation(double *left, double *right, const kel_content *c)
{
    quad m[K * K] = { 0 }, rows[N][K], sum = 0, leverage = 0;
    size_t n = 0;
    for (size_t i = 0; i < c->row_count; i++) {
        const kel_fitted *r = &c->rows[i];
        if (r->left_out != NULL)
            continue;
        ck_assert_uint_lt(n, N);
        quad a = (quad)r->from - 250, b = (quad)r->to - 250, u = (quad)r->u;
        /* the value at T, the mean, or the integral of 1 and T - 250 K */
        rows[n][0] = 1;
        rows[n][1] = (a + b) / 2;
        for (int k = 0; k < K; k++)
            rows[n][k] *= (r->kind == KEL_KIND_EXPANSION ? b - a : 1) / u;
        for (int k = 0; k < K; k++)
            for (int l = 0; l < K; l++)
                m[k * K + l] += rows[n][k] * rows[n][l];
        sum += ((quad)r->residual / u) * ((quad)r->residual / u);
        n++;
    }
    quad_invert(m, K);
    for (size_t i = 0; i < n; i++)
        for (int k = 0; k < K; k++)
            for (int l = 0; l < K; l++)
                leverage += rows[i][k] * m[k * K + l] * rows[i][l];
    *left = (double)sum;
    *right = (double)((quad)n - leverage);
}

/* noise and resolution in the column's unit as printed: 1e-6/K, or 1e-5 for an expansion. */
static const struct { const char *name; kel_kind kind; double noise; int decimals; bool floored; } columns[] = {
    { "coefficient, scatter above rounding", KEL_KIND_COEFFICIENT, 0.3, 2, false },
    { "coefficient, scatter like rounding", KEL_KIND_COEFFICIENT, 0.06, 1, false },
    { "coefficient, rounding alone", KEL_KIND_COEFFICIENT, 0.0, 3, true },
    { "mean, scatter above rounding", KEL_KIND_MEAN, 0.3, 2, false },
    { "mean, scatter like rounding", KEL_KIND_MEAN, 0.1, 1, false },
    { "expansion, scatter above rounding", KEL_KIND_EXPANSION, 0.5, 2, false },
    { "expansion, scatter like rounding", KEL_KIND_EXPANSION, 0.5, 0, false },
};

START_TEST(scatter_solves_its_equation)
{
    const kel_kind kind = columns[_i].kind;
    const double unit = kind == KEL_KIND_EXPANSION ? 1e-5 : 1e-6, resolution = unit * pow(10.0, -columns[_i].decimals);
    char text[1024];
    int n = sprintf(text, "# reference temperature: 293 K\ntemperature [K],%s\n",
                    kind == KEL_KIND_COEFFICIENT ? "coefficient [1e-6/K]"
                    : kind == KEL_KIND_MEAN      ? "mean coefficient [1e-6/K]"
                                                 : "expansion [1e-5]");
    for (int i = 0; i < N; i++) {
        double t = 95.0 + 25.0 * i; /* alpha(T) then ends at the second decimal: a row of no noise is exact */
        double value = kind == KEL_KIND_COEFFICIENT ? alpha(t)
                       : kind == KEL_KIND_EXPANSION ? expansion(t)
                                                    : expansion(t) / (t - 293.0);
        double noise = columns[_i].noise * error_of(i);
        if (kind == KEL_KIND_MEAN)
            noise *= 50.0 / fabs(t - 293.0);
        n += sprintf(text + n, "%.0f,%.*f\n", t, columns[_i].decimals, value / unit + noise);
    }
    const int degree = 1;
    kel_fit_options options = degree_of(&degree);
    kel_record *record = make_fit_of(make_table(text), &options);
    const kel_content *c = kel_record_content(record);
    const kel_fit_column *column = &c->columns[0];
    ck_assert_int_eq(c->variance, KEL_VARIANCE_ESTIMATED);
    ck_assert_uint_eq(column->observations, N);
    ck_assert_lre_for(columns[_i].name, column->resolution, resolution, 15.0);

    double left, right;
    equation(&left, &right, c);
    ck_assert_lre_for(columns[_i].name, column->degrees_of_freedom, right, 10.0);
    printf("%-38s s = %.3g, resolution/sqrt 12 = %.3g, sum r^2/u^2 = %.9g, n - sum h = %.9g\n", columns[_i].name,
           column->scatter, resolution / sqrt(12.0), left, right);
    if (columns[_i].floored) {
        ck_assert_ulp_for(columns[_i].name, column->scatter, 0.0, 0);
        ck_assert_double_lt(left, right);
    } else {
        ck_assert_double_gt(column->scatter, 0.0);
        ck_assert_lre_for(columns[_i].name, left, right, 9.0);
    }
    for (size_t i = 0; i < c->row_count; i++) {
        const kel_fitted *r = &c->rows[i];
        double w = kind == KEL_KIND_MEAN ? 1.0 / fabs(r->to - r->from) : 1.0;
        ck_assert_lre_for(columns[_i].name, r->u, hypot(column->scatter * w, resolution / sqrt(12.0)), 10.0);
        ck_assert_abs_for(columns[_i].name, r->residual, r->observed - r->fitted, 1e-20, "printed unit");
    }
    kel_record_free(record);
}
END_TEST

/* A mean from Tref is an expansion over its interval: as rows without u they give one curve, and one u of it. */
START_TEST(means_weigh_by_their_interval)
{
    kel_observation means[N], expansions[N];
    for (int i = 0; i < N; i++) {
        double t = 95.0 + 25.0 * i, e = expansion(t) + 3e-6 * error_of(i);
        means[i] = observe(KEL_KIND_MEAN, 293.0, t, e / (t - 293.0), 0.0);
        expansions[i] = observe(KEL_KIND_EXPANSION, 293.0, t, e, 0.0);
    }
    const int degree = 2;
    kel_fit_options options = degree_of(&degree);
    kel_record *a = make_fit_of(make_arrays(means, N, KEL_KIND_MEAN, 293.0, KEL_BASE_REFERENCE), &options);
    kel_record *b = make_fit_of(make_arrays(expansions, N, KEL_KIND_EXPANSION, 293.0, KEL_BASE_REFERENCE), &options);
    for (double t = 95.0; t < 468.0; t += 11.5) {
        kel_answer x = ask(a, KEL_COEFFICIENT, t, t), y = ask(b, KEL_COEFFICIENT, t, t);
        ck_assert_lre(x.value, y.value, 12.0);
        ck_assert_lre(x.u, y.u, 9.0);
        ck_assert_lre(ask(a, KEL_INTEGRAL, 95.0, t + 0.5).u, ask(b, KEL_INTEGRAL, 95.0, t + 0.5).u, 9.0);
    }
    kel_record_free(a);
    kel_record_free(b);
}
END_TEST

/* A mean printed at its own reference is a coefficient there; it takes the weight of the nearest other row. */
START_TEST(mean_at_its_reference)
{
    kel_observation means[N];
    for (int i = 0; i < N; i++) {
        double t = i == 8 ? 293.0 : 95.0 + 25.0 * i; /* neighbours: 270 K, the nearer one, and 320 K */
        means[i] = observe(KEL_KIND_MEAN, 293.0, t,
                           (i == 8 ? alpha(t) : expansion(t) / (t - 293.0)) + 1e-7 * error_of(i), 0.0);
    }
    const int degree = 1;
    kel_fit_options options = degree_of(&degree);
    kel_record *record = make_fit_of(make_arrays(means, N, KEL_KIND_MEAN, 293.0, KEL_BASE_REFERENCE), &options);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->row_count, N);
    ck_assert_lre(c->rows[8].u, c->rows[7].u, 12.0);
    ck_assert_lre(c->rows[7].u * (293.0 - 270.0), c->rows[9].u * (320.0 - 293.0), 10.0);
    ck_assert_lre(c->rows[8].fitted, ask(record, KEL_COEFFICIENT, 293.0, 293.0).value, 14.0);
    kel_record_free(record);
}
END_TEST

/* 1,000 rows of 1 % scatter: with a shared error of 3 % the curve is what it is without (1e-9), and 3 % stay in
   its u. */
START_TEST(thousand_rows)
{
    enum { ROWS = 1000 };
    char *text[2] = { malloc(ROWS * 32 + 256), malloc(ROWS * 32 + 256) };
    kel_record *record[2];
    const int degree = 2;
    kel_fit_options options = degree_of(&degree);
    for (int k = 0; k < 2; k++) {
        ck_assert_ptr_nonnull(text[k]);
        int n = sprintf(text[k],
                        "# reference temperature: 293.15 K\n# uncertainty: 1 %% independent\n%s"
                        "temperature [K],coefficient [1e-6/K]\n",
                        k == 1 ? "# uncertainty: 3 % shared\n" : "");
        for (int i = 0; i < ROWS; i++) {
            double t = 70.0 + 0.25 * i, sum = 0.0; /* twelve equal distributions: a standard normal one, nearly */
            for (int j = 1; j <= 12; j++)
                sum += fmod((12 * i + j) * 0.6180339887498949, 1.0) - 0.5;
            n += sprintf(text[k] + n, "%.2f,%.4f\n", t,
                         (14.0 + 0.04 * (t - 200.0) - 1e-4 * (t - 200.0) * (t - 200.0)) * (1.0 + 0.01 * sum));
        }
        record[k] = make_fit_of(make_table(text[k]), &options);
        free(text[k]);
    }
    double worst = 0.0;
    for (int i = 0; i <= 100; i++) {
        double t = 70.0 + 2.4975 * i;
        kel_answer without = ask(record[0], KEL_COEFFICIENT, t, t), with = ask(record[1], KEL_COEFFICIENT, t, t);
        worst = fmax(worst, fabs(with.value / without.value - 1.0));
        ck_assert_abs(with.value, without.value, 1e-9 * without.value, "1/K");
        /* The error's column is the curve itself, so its mode is 3 % of the curve, and the scatter's part
           is untouched. */
        ck_assert_abs(with.u_shared, 0.03 * with.value, 1e-9 * with.value, "1/K");
        ck_assert_abs(with.u_fit, without.u_fit, 1e-9 * with.value, "1/K");
        ck_assert_lre(with.u, hypot(with.u_fit, with.u_shared), 12.0);
        ck_assert_double_lt(without.u / without.value, 0.002); /* 1 % shrinks with the rows, 3 % does not */
        with = ask(record[1], KEL_INTEGRAL, 70.0, t);
        ck_assert_abs(with.u_shared, 0.03 * with.value, 1e-9 * with.value, "1");
    }
    printf("1,000 rows: a shared error of 3 %% moves the curve by %.1e of itself\n", worst);
    kel_record_free(record[0]);
    kel_record_free(record[1]);
}
END_TEST

static TCase *
weights(void)
{
    TCase *c = tcase_create("weights");
    tcase_add_loop_test(c, scatter_solves_its_equation, 0, KEL_LENGTH(columns));
    tcase_add_test(c, means_weigh_by_their_interval);
    tcase_add_test(c, mean_at_its_reference);
    tcase_add_test(c, thousand_rows);
    return c;
}

KEL_TEST_MAIN("weights", weights)
