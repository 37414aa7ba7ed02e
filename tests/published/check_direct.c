/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A record's modes against the covariance written down directly.

   With A the rows' functionals, D their independent variances and F_j the column of a shared error times its size,
       V = D + sum F_j F_j',   H = (A' V^-1 A)^-1 A' V^-1,   c = H y,
       part of the scatter  g' H D H' g,   of error j  (g' H F_j)^2,   together  g' (A' V^-1 A)^-1 g
   for an answer g. Here V is made and inverted as it stands, in 33 digits, on powers of (T - 200 K)/100 K; relative
   errors are iterated to the curve's own value. The library never forms V; its errors are parameters with prior
   rows. */
#include <math.h>

#include "../support/making.h"
#include "../support/quad.h"

enum { N = 12, K = 3, SHARED = 2 };
static const double REFERENCE = 293.15;

/* c0 + c1 x + c2 x^2 at T, or its integral from a to b; as a row of numbers that multiply c. */
static void
value_row(quad row[K], quad t)
{
    for (int k = 0; k < K; k++)
        row[k] = k == 0 ? (quad)1 : row[k - 1] * (t - 200) / 100;
}

static void
integral_row(quad row[K], quad a, quad b)
{
    quad xa = (a - 200) / 100, xb = (b - 200) / 100, pa = 1, pb = 1;
    for (int k = 0; k < K; k++) {
        pa *= xa;
        pb *= xb;
        row[k] = 100 * (pb - pa) / (k + 1);
    }
}

typedef struct direct {
    quad a[N][K], y[N];
    /* independent u^2 = absolute^2 + (relative curve)^2, and with relative != 0 resolution^2/12 */
    quad absolute[N], relative[N], resolution;
    quad shared_relative[N], shared_absolute[N];
    quad c[K], h[K][N], d[N], f[SHARED][N], covariance[K * K];
} direct;

static quad
dot(const quad *x, const quad *y)
{
    quad sum = 0;
    for (int k = 0; k < K; k++)
        sum += x[k] * y[k];
    return sum;
}

static void
direct_solve(direct *q)
{
    static quad v[N * N];
    /* Each step gains a factor of some hundred; the first one starts from the printed values. */
    for (int step = 0; step < 40; step++) {
        for (int i = 0; i < N; i++) {
            quad fitted = step == 0 ? q->y[i] : dot(q->a[i], q->c), r = q->relative[i] * fitted;
            q->d[i] =
                q->absolute[i] * q->absolute[i] + r * r + (q->relative[i] > 0 ? q->resolution * q->resolution / 12 : 0);
            q->f[0][i] = q->shared_relative[i] * fitted;
            q->f[1][i] = q->shared_absolute[i];
        }
        for (int i = 0; i < N; i++)
            for (int j = 0; j < N; j++)
                v[i * N + j] = (i == j ? q->d[i] : 0) + q->f[0][i] * q->f[0][j] + q->f[1][i] * q->f[1][j];
        quad_invert(v, N);
        for (int k = 0; k < K; k++)
            for (int i = 0; i < N; i++) {
                q->h[k][i] = 0;
                for (int j = 0; j < N; j++)
                    q->h[k][i] += q->a[j][k] * v[j * N + i];
            }
        quad normal[K * K];
        for (int k = 0; k < K; k++)
            for (int l = 0; l < K; l++) {
                normal[k * K + l] = 0;
                for (int i = 0; i < N; i++)
                    normal[k * K + l] += q->h[k][i] * q->a[i][l];
            }
        quad_invert(normal, K);
        for (int k = 0; k < K * K; k++)
            q->covariance[k] = normal[k];
        quad av[K][N];
        for (int k = 0; k < K; k++)
            for (int i = 0; i < N; i++)
                av[k][i] = q->h[k][i];
        for (int k = 0; k < K; k++) {
            q->c[k] = 0;
            for (int i = 0; i < N; i++) {
                q->h[k][i] = 0;
                for (int l = 0; l < K; l++)
                    q->h[k][i] += normal[k * K + l] * av[l][i];
                q->c[k] += q->h[k][i] * q->y[i];
            }
        }
    }
}

/* g' C h */
static quad
covariance_of(const direct *q, const quad *g, const quad *h)
{
    quad sum = 0;
    for (int k = 0; k < K; k++)
        for (int l = 0; l < K; l++)
            sum += g[k] * q->covariance[k * K + l] * h[l];
    return sum;
}

/* Record and direct solution agree in values, parts of u and covariances, to `digits`. */
static void
hold(const kel_record *record, const direct *q, double digits, const char *what)
{
    enum { ANSWERS = 9 };
    static const struct { kel_quantity quantity; double from, to; } list[ANSWERS] = {
        { KEL_COEFFICIENT, 100, 100 },  { KEL_COEFFICIENT, 230, 230 }, { KEL_COEFFICIENT, 310, 310 },
        { KEL_EXPANSION, 80, 80 },      { KEL_EXPANSION, 310, 310 },   { KEL_INTEGRAL, 100, 200 },
        { KEL_INTEGRAL, 250, 250.001 }, { KEL_MEAN, 120, 300 },        { KEL_MEAN, 150, 150 },
    };
    quad g[ANSWERS][K];
    for (int i = 0; i < ANSWERS; i++) {
        quad from = (quad)list[i].from, to = (quad)list[i].to;
        if (list[i].quantity == KEL_COEFFICIENT || from == to)
            value_row(g[i], to);
        if (list[i].quantity == KEL_EXPANSION)
            integral_row(g[i], (quad)REFERENCE, to);
        else if (from != to)
            integral_row(g[i], from, to);
        for (int k = 0; k < K && list[i].quantity == KEL_MEAN && from != to; k++)
            g[i][k] /= to - from;
    }
    for (int i = 0; i < ANSWERS; i++) {
        kel_answer a = ask(record, list[i].quantity, list[i].from, list[i].to);
        char label[96];
        snprintf(label, sizeof label, "%s, answer %d", what, i);
        ck_assert_lre_for(label, a.value, (double)dot(g[i], q->c), digits);
        ck_assert_lre_for(label, a.u, (double)quad_sqrt(covariance_of(q, g[i], g[i])), digits);
        quad scatter = 0, shared = 0;
        for (int r = 0; r < N; r++) {
            quad w = 0;
            for (int k = 0; k < K; k++)
                w += g[i][k] * q->h[k][r];
            scatter += w * w * q->d[r];
        }
        for (int j = 0; j < SHARED; j++) {
            quad w = 0;
            for (int r = 0; r < N; r++)
                for (int k = 0; k < K; k++)
                    w += g[i][k] * q->h[k][r] * q->f[j][r];
            shared += w * w;
        }
        ck_assert_lre_for(label, a.u_fit, (double)quad_sqrt(scatter), digits);
        ck_assert_lre_for(label, a.u_shared, (double)quad_sqrt(shared), digits);
        ck_assert_abs_for(label, a.u_lot, 0.0, 0.0, "1");
        for (int j = 0; j < ANSWERS; j++) {
            kel_query p = { list[i].quantity, list[i].from, list[i].to, list[i].from, (double)NAN, -1 };
            kel_query s = { list[j].quantity, list[j].from, list[j].to, list[j].from, (double)NAN, -1 };
            double got;
            kel_error err = { 0 };
            made(kel_record_covariance(&got, record, &p, &s, &err), &err, label);
            double want = (double)covariance_of(q, g[i], g[j]);
            double size = (double)quad_sqrt(covariance_of(q, g[i], g[i]) * covariance_of(q, g[j], g[j]));
            ck_assert_abs_for(label, got, want, pow(10.0, -digits) * size, "product of units");
        }
    }
}

static quad
truth(quad t)
{
    return (quad)1e-6 * (14 + 4 * (t - 200) / 100 - (t - 200) * (t - 200) / 10000);
}

static double
sample_at(int i)
{
    return 70.0 + 22.0 * i;
}

/* Rows of all three kinds with independent u of their own. The digits: cond(A) is about 5, the data are doubles. */
START_TEST(mixed_kinds)
{
    static direct q;
    q = (direct){ .resolution = 0 };
    kel_observation rows[N];
    static const kel_column columns[] = { { .kind = KEL_KIND_COEFFICIENT, .unit = "1/K" },
                                          { .kind = KEL_KIND_MEAN, .unit = "1/K" },
                                          { .kind = KEL_KIND_EXPANSION, .unit = "1" } };
    for (int i = 0; i < N; i++) {
        kel_kind kind = (kel_kind)(i % 3);
        double t = sample_at(i), from = kind == KEL_KIND_EXPANSION ? REFERENCE : 60.0 + i;
        double size = kind == KEL_KIND_EXPANSION ? 1e-4 : 1e-5, u = size * (0.01 + 0.002 * (i % 5));
        if (kind == KEL_KIND_COEFFICIENT)
            value_row(q.a[i], (quad)t);
        else
            integral_row(q.a[i], (quad)from, (quad)t);
        for (int k = 0; k < K && kind == KEL_KIND_MEAN; k++)
            q.a[i][k] /= (quad)t - (quad)from;
        const quad c[K] = { (quad)14e-6, (quad)4e-6, (quad)-1e-6 };
        rows[i] = observe(kind, from, t, (double)dot(q.a[i], c) + u * (i % 2 ? 0.7 : -1.1), u);
        rows[i].column = (size_t)i % 3;
        q.y[i] = (quad)rows[i].value;
        q.absolute[i] = (quad)u;
    }
    direct_solve(&q);
    kel_table *table;
    kel_error err = { 0 };
    made(kel_table_from_arrays(&table, "mixed", columns, 3, rows, N, REFERENCE, KEL_BASE_REFERENCE, &err), &err,
         "arrays");
    const int degree = K - 1;
    kel_fit_options options = degree_of(&degree);
    kel_record *record = make_fit_of(table, &options);
    ck_assert_int_eq(kel_record_content(record)->variance, KEL_VARIANCE_GIVEN);
    hold(record, &q, 11.0, "mixed kinds");
    kel_record_free(record);
}
END_TEST

/* Tables of one coefficient column whose metadata state the rest. */
static const struct {
    const char *name, *metadata;
    double u_absolute, u_relative;      /* independent, all rows */
    double shared_relative, shared_absolute, from, to;
    bool column;                        /* an uncertainty column of 0.2 and 0.3e-6/K in turn */
} stated[] = {
    { "column only", "", 0, 0, 0, 0, 0, 1000, true },
    { "column, shared percent", "# uncertainty: 2 %\n", 0, 0, 0.02, 0, 0, 1000, true },
    { "column, shared absolute", "# uncertainty: 0.1 [1e-6/K] shared\n", 0, 0, 0, 1e-7, 0, 1000, true },
    { "column, shared both", "# uncertainty: 2 % + 0.1 [1e-6/K]\n", 0, 0, 0.02, 1e-7, 0, 1000, true },
    { "column, shared in a range", "# uncertainty: 6 % k=2 from 100 K to 200 K\n", 0, 0, 0.03, 0, 100, 200, true },
    { "percent of the curve", "# uncertainty: 1.5 % independent\n", 0, 0.015, 0, 0, 0, 1000, false },
    { "percent and absolute", "# uncertainty: 1.5 % + 0.3 [1e-6/K] independent\n", 3e-7, 0.015, 0, 0, 0, 1000, false },
    { "percent, shared percent", "# uncertainty: 1.5 % independent\n# uncertainty: 2 % shared\n", 0, 0.015, 0.02, 0, 0,
      1000, false },
};

START_TEST(stated_errors)
{
    static direct q;
    q = (direct){ .resolution = (quad)1e-8 };
    char text[2048];
    int n = sprintf(text, "# reference temperature: 293.15 K\n%stemperature [K],coefficient [1e-6/K]%s\n",
                    stated[_i].metadata, stated[_i].column ? ",uncertainty [1e-6/K]" : "");
    for (int i = 0; i < N; i++) {
        double t = sample_at(i);
        long units = lround((double)truth((quad)t) * 1e8) + (i * 7 % 5 - 2) * 12; /* of 0.01e-6/K */
        n += sprintf(text + n, "%.0f,%.2f%s\n", t, (double)units / 100.0,
                     !stated[_i].column ? "" : i % 2 ? ",0.3" : ",0.2");
        value_row(q.a[i], (quad)t);
        q.y[i] = (quad)units / 100000000;
        q.absolute[i] = stated[_i].column ? quad_read(i % 2 ? "0.3e-6" : "0.2e-6") : (quad)stated[_i].u_absolute;
        q.relative[i] = (quad)stated[_i].u_relative;
        bool in = t >= stated[_i].from && t <= stated[_i].to;
        q.shared_relative[i] = in ? (quad)stated[_i].shared_relative : 0;
        q.shared_absolute[i] = in ? (quad)stated[_i].shared_absolute : 0;
    }
    direct_solve(&q);
    const int degree = K - 1;
    kel_fit_options options = degree_of(&degree);
    kel_record *record = make_fit_of(make_table(text), &options);
    hold(record, &q, 10.0, stated[_i].name);
    kel_record_free(record);
}
END_TEST

static TCase *
covariance(void)
{
    TCase *c = tcase_create("covariance");
    tcase_add_test(c, mixed_kinds);
    tcase_add_loop_test(c, stated_errors, 0, KEL_LENGTH(stated));
    return c;
}

KEL_TEST_MAIN("direct", covariance)
