/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The automatic degree: the rule's arithmetic recomputed from the candidates' own numbers, and its limits. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

/* Standard deviation 1: the sum of twelve uniform numbers less 6, from a multiplicative generator started at the row's number. */
static double
noise(int i)
{
    uint64_t state = 88172645463325252u + (uint64_t)i * 0x9E3779B97F4A7C15u;
    double sum = -6;
    for (int k = 0; k < 12; k++) {
        state = (state ^ (state >> 31)) * 0xBF58476D1CE4E5B9u;
        sum += (double)(state >> 11) / 9007199254740992.0;
    }
    return sum;
}

static const kel_table *tables[1];

static kel_fit_report *
fit(by_hand *h, const double *join, size_t *parameters)
{
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.joins = join;
    options.join_count = join != NULL;
    tables[0] = &h->table;
    kel_record *record;
    kel_fit_report *report;
    kel_error err = { 0 };
    ck_assert_msg(kel_fit(&record, &report, tables, 1, &options, &err) == KEL_OK, "%s", err.message);
    *parameters = kel_record_content(record)->parameters;
    kel_record_free(record);
    return report;
}

static void
make(by_hand *h, int n, double sigma, double u)
{
    by_hand_start(h, "degree", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(h, KEL_KIND_COEFFICIENT, 1e-10);
    for (int i = 0; i < n; i++) {
        double t = 100 + 400.0 * i / n, x = (t - 300) / 200;
        by_hand_row(h, 0, t, t, 1e-5 * (1 + 0.4 * x - 0.2 * x * x) + sigma * noise(i), u, 0);
    }
}

START_TEST(criterion_without_u)
{
    by_hand h;
    make(&h, 40, 1e-8, 0);
    size_t k;
    kel_fit_report *r = fit(&h, NULL, &k);
    ck_assert_uint_eq(k, 3);
    ck_assert_uint_eq(r->candidate_count, 11);
    double least = INFINITY;
    for (int d = 0; d <= 10; d++) {
        const kel_candidate *c = &r->candidates[d];
        ck_assert_ptr_null(c->refused);
        ck_assert_uint_eq(c->parameters, (size_t)d + 1);
        double rss = c->residual_standard_deviation * c->residual_standard_deviation * (40.0 - d - 1);
        ck_assert_abs(c->criterion, 40 * log(rss / 40) + (d + 2) * log(40), 1e-9, "1");
        least = fmin(least, c->criterion);
    }
    for (int d = 0; d < 2; d++)
        ck_assert_double_gt(r->candidates[d].criterion, least + 4);
    ck_assert_double_le(r->candidates[2].criterion, least + 4);
    ck_assert(r->candidates[2].chosen);
    kel_fit_report_free(r);
}
END_TEST

START_TEST(criterion_with_u)
{
    by_hand h;
    make(&h, 40, 1e-8, 1e-8);
    size_t k;
    kel_fit_report *r = fit(&h, NULL, &k);
    ck_assert_uint_eq(k, 3);
    for (int d = 0; d <= 10; d++)
        ck_assert_abs(r->candidates[d].criterion, r->candidates[d].chi2 + 4 * (d + 1), 1e-9 * r->candidates[d].chi2, "1");
    ck_assert_ptr_nonnull(strstr(r->criterion, "chi2"));
    ck_assert_double_gt(r->chi2_probability, 0.001);
    kel_fit_report_free(r);
}
END_TEST

/* u ten times too small: taken at its word it would ask for high degrees; it serves as weights, and the warning says so. */
START_TEST(incredible_u_become_weights)
{
    by_hand h;
    make(&h, 40, 1e-8, 1e-9);
    size_t k;
    kel_fit_report *r = fit(&h, NULL, &k);
    ck_assert_uint_eq(k, 3);
    ck_assert_ptr_nonnull(strstr(r->criterion, "relative weights"));
    ck_assert_double_gt(r->scaled_factor, 5);
    ck_assert_str_eq(r->warnings[0].code, "chi2");
    kel_fit_report_free(r);
}
END_TEST

/* k <= n - max(2, n/3), n - 1 for 3 and 4 rows. */
static const struct { int rows; size_t most; } limits[] = { { 1, 1 }, { 2, 2 }, { 3, 2 }, { 4, 3 }, { 5, 3 }, { 6, 4 }, { 8, 6 }, { 9, 6 }, { 12, 8 }, { 15, 10 }, { 17, 11 } };

START_TEST(rows_to_spare)
{
    by_hand h;
    make(&h, limits[_i].rows, 1e-6, 0);
    size_t k, most = 0;
    kel_fit_report *r = fit(&h, NULL, &k);
    for (size_t d = 0; d < r->candidate_count; d++)
        if (r->candidates[d].refused == NULL)
            most = r->candidates[d].parameters;
    ck_assert_uint_eq(most, limits[_i].most);
    ck_assert_uint_le(k, most);
    kel_fit_report_free(r);
}
END_TEST

/* Only two rows beyond the join: no more than degree 1 there, although the value at the join would carry degree 2. */
START_TEST(every_piece_needs_its_rows)
{
    by_hand h;
    make(&h, 30, 0, 0);
    const double join = 470;
    for (size_t i = 0; i < h.table.observation_count; i++)
        h.rows[i].value += 1e-7 * noise((int)i);
    while (h.rows[h.table.observation_count - 3].to > join)
        h.table.observation_count--;
    size_t k;
    kel_fit_report *r = fit(&h, &join, &k);
    ck_assert_ptr_null(r->candidates[1].refused);
    ck_assert_str_eq(r->candidates[2].refused, "a piece has too few rows");
    kel_fit_report_free(r);
}
END_TEST

/* Stated and unstated rows by turns: no curve may buy its freedom by running through the unstated ones. */
START_TEST(unstated_rows_are_not_interpolated)
{
    by_hand h;
    make(&h, 17, 5e-8, 5e-8);
    for (size_t i = 0; i < h.table.observation_count; i += 2) {
        h.rows[i].u_absolute = 0;
        h.rows[i].u_stated = false;
    }
    size_t k;
    kel_fit_report *r = fit(&h, NULL, &k);
    ck_assert_uint_eq(k, 3);
    ck_assert_str_eq(r->candidates[8].refused, "too few rows in a column");
    kel_fit_report_free(r);
}
END_TEST

START_TEST(chi_square_probability)
{
    /* Upper 5 % points of chi-square, NIST/SEMATECH e-Handbook 1.3.6.7.4: 3.841 (1), 18.307 (10), 43.773 (30). */
    ck_assert_abs(kel__chi2_below(3.841, 1), 0.95, 2e-5, "1");
    ck_assert_abs(kel__chi2_below(18.307, 10), 0.95, 2e-5, "1");
    ck_assert_abs(kel__chi2_below(43.773, 30), 0.95, 2e-5, "1");
    ck_assert(isnan(kel__chi2_below(1, 0)));
}
END_TEST

static TCase *
by_rows(void)
{
    TCase *c = tcase_create("rows");
    tcase_add_loop_test(c, rows_to_spare, 0, KEL_LENGTH(limits));
    return c;
}

KEL_TCASE(rule, criterion_without_u, criterion_with_u, incredible_u_become_weights, every_piece_needs_its_rows,
          unstated_rows_are_not_interpolated, chi_square_probability)
KEL_TEST_MAIN("degree", rule, by_rows)
