/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How good is the automatic degree? Simulated tables of 144 kinds, each drawn several times with fixed seeds:

       rows 5 .. 100  x  scatter 0.1, 1, 5 %  x  four curves  x  u stated or not,

   with coefficient, mean and expansion columns, and equal and unequal spacing, taking turns. Every table is fitted with
   each degree that the library's candidates carry. Two errors of a fit are measured over the range: the rms difference
   of its alpha from the true one, and that of its expansion, which is what most answers are made of. For each kind: the
   rms error (over its tables) of what a rule chose, divided by that of the one degree that would have been best for the
   kind, which nobody knows beforehand; 1 is perfect, and a rule that adapts to each table can come out below. The
   rules, from the same sums:

       kelspan   the library's choice
       Akaike    n ln(RSS/n) + 2p + 2p(p + 1)/(n - p - 1), p = k + 1    (C. Hurvich, C. Tsai, Biometrika 76 (1989) 297)
                 with stated u: chi2 + 2k + 2k(k + 1)/(n - k - 1)
       Bayes     n ln(RSS/n) + p ln n; with stated u: chi2 + k ln n     (G. Schwarz, Ann. Statist. 6 (1978) 461)
       trial     Bayes, the lowest within 4, with half of the rows to spare for mean and expansion columns;
                 with stated u: chi2 + 4k, the lowest within 2

   RSS of mean values counts with the squares of the intervals, as in the fit. Prints a line a kind and a summary; the
   numbers are the same on every run. */
#include <stdio.h>
#include <stdlib.h>

#include "simulated.h"

enum { TABLES = 24, DEGREES = 11, RULES = 4, ERRORS = 2, KINDS_MAX = 144 };
static const char *const rules[RULES] = { "kelspan", "Akaike", "Bayes", "trial" };

/* ---- one table ---- */

static void
stop(const char *what, const kel_error *err)
{
    fprintf(stderr, "simulate_degree: %s: %s\n", what, err->message);
    exit(EXIT_FAILURE);
}

/* Squared errors of alpha and of the expansion, mean over the range, and the residual sum as the fit weighs it. */
static void
judge(double square[ERRORS], double *rss, const kel_record *record, const kind *k)
{
    square[0] = square[1] = *rss = 0.0;
    for (int i = 0; i <= GRID; i++) {
        kel_answer a, e; /* a mean table may end 2 K off the reference: extrapolated is fine here */
        kel_record_coefficient(&a, record, truth[k->curve][i].t, NULL);
        kel_record_expansion(&e, record, truth[k->curve][i].t, NULL);
        double da = a.value - truth[k->curve][i].alpha, de = e.value - truth[k->curve][i].expansion;
        square[0] += da * da / (GRID + 1);
        square[1] += de * de / (GRID + 1);
    }
    const kel_content *c = kel_record_content(record);
    for (size_t i = 0; i < c->row_count; i++) {
        double r = c->rows[i].residual * (k->column == KEL_KIND_MEAN ? c->rows[i].to - c->rows[i].from : 1.0);
        *rss += r * r;
    }
}

/* What each rule makes of one candidate; infinite where it does not apply. */
static void
measure(double criterion[RULES], const kel_candidate *c, double rss, const kind *k)
{
    double n = (double)k->n, m = (double)c->parameters, p = m + 1.0, of_rss = n * log(rss / n);
    bool spare = k->column == KEL_KIND_COEFFICIENT || n - m >= fmax(2.0, floor(n / 2.0)) || c->degree == 0;
    criterion[0] = c->chosen ? 0.0 : (double)INFINITY;
    criterion[1] = k->stated ? c->chi2 + 2.0 * m + 2.0 * m * p / (n - m - 1.0)
                             : of_rss + 2.0 * p + 2.0 * p * (p + 1.0) / (n - p - 1.0);
    if (n - (k->stated ? m : p) - 1.0 <= 0.0)
        criterion[1] = (double)INFINITY;
    criterion[2] = k->stated ? c->chi2 + m * log(n) : of_rss + p * log(n);
    criterion[3] = k->stated ? c->chi2 + 4.0 * m : spare ? criterion[2] : (double)INFINITY;
}

/* square[d]: errors of degree d, NaN where it is no candidate; chosen[]: each rule's degree. */
static void
try_table(double square[DEGREES][ERRORS], int chosen[RULES], const kind *k, uint64_t *state)
{
    kel_observation rows[ROWS_MAX];
    kel_column column = { .kind = k->column, .unit = "1/K" };
    kel_table *table;
    kel_error err = { 0 };
    draw(rows, k, state);
    if (kel_table_from_arrays(&table, "drawn", &column, 1, rows, k->n, REFERENCE, KEL_BASE_REFERENCE, &err) < 0)
        stop("table", &err);
    const kel_table *const tables[] = { table };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    kel_record *record;
    kel_fit_report *report;
    if (kel_fit(&record, &report, tables, 1, &options, &err) < 0)
        stop("automatic fit", &err);
    kel_record_free(record);

    double criterion[DEGREES][RULES];
    for (int d = 0; d < DEGREES; d++) {
        const kel_candidate *c = d < (int)report->candidate_count ? &report->candidates[d] : NULL;
        square[d][0] = square[d][1] = (double)NAN;
        for (int r = 0; r < RULES; r++)
            criterion[d][r] = (double)INFINITY;
        if (c == NULL || c->refused != NULL)
            continue;
        double rss;
        options.degrees = &d;
        options.degree_count = 1;
        if (kel_fit(&record, NULL, tables, 1, &options, &err) < 0)
            stop("fit", &err);
        judge(square[d], &rss, record, k);
        kel_record_free(record);
        measure(criterion[d], c, rss, k);
    }
    const double within[RULES] = { 0.0, 0.0, 0.0, k->stated ? 2.0 : 4.0 };
    for (int r = 0; r < RULES; r++) {
        double least = (double)INFINITY;
        for (int d = 0; d < DEGREES; d++)
            least = fmin(least, criterion[d][r]);
        /* Five rows leave the corrected criterion degree 0 alone, at the worst nothing: then that is its choice. */
        for (chosen[r] = 0; chosen[r] < DEGREES - 1 && !(criterion[chosen[r]][r] <= least + within[r]);)
            chosen[r]++;
    }
    kel_fit_report_free(report);
    kel_table_free(table);
}

/* ---- a kind, and all of them ---- */

static void
run_kind(double ratio[ERRORS][RULES], const kind *k, uint64_t seed)
{
    static const char *const names[] = { "coefficient", "mean", "expansion" };
    double sum[ERRORS][DEGREES] = { 0 }, of_rule[ERRORS][RULES] = { 0 }, degree[RULES] = { 0 };
    uint64_t state = UINT64_C(0x9E3779B97F4A7C15) * (seed + 1);
    for (int i = 0; i < TABLES; i++) {
        double square[DEGREES][ERRORS];
        int chosen[RULES];
        try_table(square, chosen, k, &state);
        for (int e = 0; e < ERRORS; e++) {
            for (int d = 0; d < DEGREES; d++)
                sum[e][d] += square[d][e];
            for (int r = 0; r < RULES; r++)
                of_rule[e][r] += square[chosen[r]][e];
        }
        for (int r = 0; r < RULES; r++)
            degree[r] += (double)chosen[r] / TABLES;
    }
    printf("%4zu  %5.1f %%  %-5s  %-7s  %-11s  %-6s", k->n, 100.0 * k->scatter, curves[k->curve].name,
           k->unequal ? "unequal" : "equal", names[k->column], k->stated ? "stated" : "none");
    for (int e = 0; e < ERRORS; e++) {
        int best = 0;
        for (int d = 1; d < DEGREES; d++)
            if (sum[e][d] < sum[e][best]) /* false for NaN */
                best = d;
        printf("  %4d %.1e", best, sqrt(sum[e][best] / TABLES));
        for (int r = 0; r < RULES; r++) {
            ratio[e][r] = sqrt(of_rule[e][r] / sum[e][best]);
            printf(" %5.2f", ratio[e][r]);
        }
    }
    for (int r = 0; r < RULES; r++)
        printf(" %5.1f", degree[r]);
    printf("\n");
}

static int
ascending(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return (x > y) - (x < y);
}

/* Median, nine tenths and worst over the kinds with rows in [from, to). */
static void
summarise(double (*ratio)[ERRORS][RULES], const kind *kinds, size_t n, bool stated, size_t from, size_t to)
{
    for (int e = 0; e < ERRORS; e++) {
        printf("u %-10s  %-13s  %-9s", stated ? "stated" : "not stated", from == 0 ? "below 16 rows" : "from 16 rows",
               e == 0 ? "alpha" : "expansion");
        for (int r = 0; r < RULES; r++) {
            double list[KINDS_MAX];
            size_t m = 0;
            for (size_t i = 0; i < n; i++)
                if (kinds[i].stated == stated && kinds[i].n >= from && kinds[i].n < to)
                    list[m++] = ratio[i][e][r];
            qsort(list, m, sizeof list[0], ascending);
            printf("   %s %.2f, %.2f, %.2f", rules[r], list[m / 2], list[m * 9 / 10], list[m - 1]);
        }
        printf("\n");
    }
}

int
main(void)
{
    static const size_t counts[] = { 5, 8, 12, 20, 40, 100 };
    static const double scatters[] = { 0.001, 0.01, 0.05 };
    static kind kinds[KINDS_MAX];
    static double ratio[KINDS_MAX][ERRORS][RULES];
    size_t n = 0;
    prepare();
    printf("rows, scatter, curve, spacing, column, u; for alpha, then for the expansion: best degree, its error, error "
           "of each rule over that:");
    for (int r = 0; r < RULES; r++)
        printf(" %s%s", rules[r], r < RULES - 1 ? "," : "; mean degree of each\n");
    for (int stated = 0; stated < 2; stated++)
        for (size_t i = 0; i < sizeof counts / sizeof counts[0]; i++)
            for (size_t j = 0; j < sizeof scatters / sizeof scatters[0]; j++)
                for (size_t c = 0; c < sizeof curves / sizeof curves[0]; c++, n++) {
                    /* sums of indices: every column and spacing meets every count, scatter and curve */
                    kinds[n] = (kind){ .n = counts[i],
                                       .curve = c,
                                       .scatter = scatters[j],
                                       .unequal = (i + j / 2 + c) % 2 == 1,
                                       .stated = stated == 1,
                                       .column = (kel_kind)((i + j + c) % 3) };
                    run_kind(ratio[n], &kinds[n], n);
                }
    printf(
        "\nerror over that of the best degree in hindsight, %zu kinds of %d tables each: median, nine tenths, worst\n",
        n, TABLES);
    for (int stated = 0; stated < 2; stated++) {
        summarise(ratio, kinds, n, stated == 1, 0, 16);
        summarise(ratio, kinds, n, stated == 1, 16, ROWS_MAX + 1);
    }
    return EXIT_SUCCESS;
}
