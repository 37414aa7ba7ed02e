/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The record's account of a fit: statistics by column, rows kept and left out, thinning of long tables, gaps, where the
   variance came from. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

enum { LONG_ROWS = 12000 };

static double
error_of(size_t i)
{
    return 2 * fmod((double)(i + 1) * 0.6180339887498949, 1.0) - 1;
}

static kel_record *
fit(const kel_table *table, const kel_fit_options *options)
{
    kel_record *record;
    kel_error err = { 0 };
    ck_assert_msg(kel_fit(&record, NULL, &table, 1, options, &err) == KEL_OK, "%s", err.message);
    return record;
}

/* n rows of 1e-5 (1 + T/1000 K) with errors, every 1000th left out, those above 400 K by the range. */
static const struct { size_t rows; bool thinned; size_t every; } lengths[] = {
    { 4999, false, 1 }, { 5000, false, 1 }, { 5001, true, 6 }, { LONG_ROWS, true, 12 },
};

START_TEST(long_tables)
{
    static kel_observation rows[LONG_ROWS];
    size_t n = lengths[_i].rows, out = 0, beyond = 0;
    kel_column column = { .kind = KEL_KIND_COEFFICIENT, .resolution = 1e-10 };
    for (size_t i = 0; i < n; i++) {
        double t = 100 + 350 * (double)i / (double)n;
        rows[i] = (kel_observation){ .kind = KEL_KIND_COEFFICIENT,
                                     .from = t,
                                     .to = t,
                                     .value = 1e-5 * (1 + t / 1000) + 1e-8 * error_of(i),
                                     .line = i + 2,
                                     .printed_lo = t,
                                     .printed_hi = t,
                                     .left_out = i % 1000 == 0 ? "set aside" : NULL };
        out += i % 1000 == 0;
        beyond += i % 1000 != 0 && t > 400;
    }
    kel_table table = { .name = "long.csv",
                        .digest = "",
                        .reference_temperature = NAN,
                        .columns = &column,
                        .column_count = 1,
                        .observations = rows,
                        .observation_count = n,
                        .rows = n };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    const int degree = 1;
    options.degrees = &degree;
    options.degree_count = 1;
    options.range.hi = 400;
    kel_record *record = fit(&table, &options);
    const kel_content *c = kel_record_content(record);

    /* Counts and statistics are of all rows. */
    ck_assert_uint_eq(c->observations, n - out - beyond);
    ck_assert_uint_eq(c->columns[0].observations, n - out - beyond);
    ck_assert_uint_eq(c->sources[0].rows, n);
    ck_assert_uint_eq(c->sources[0].left_out, out + beyond);
    double rss = 0;
    for (size_t i = 0; i < n; i++) {
        kel_answer a;
        if (rows[i].left_out != NULL || rows[i].to > 400)
            continue;
        ck_assert(kel_record_coefficient(&a, record, rows[i].to, NULL) == KEL_OK);
        rss += (rows[i].value - a.value) * (rows[i].value - a.value);
    }
    double freedom = (double)(n - out - beyond) - 2;
    ck_assert_lre(c->residual_standard_deviation, sqrt(rss / freedom), 9);
    ck_assert_lre(c->columns[0].residual_standard_deviation, sqrt(rss / freedom), 9);
    ck_assert_double_eq(c->degrees_of_freedom, freedom);
    ck_assert_double_eq(c->columns[0].degrees_of_freedom, freedom);

    /* Rows: all of them, or an even selection with its own fitted values. */
    ck_assert(c->thinned == lengths[_i].thinned);
    ck_assert_uint_eq(c->row_count, (n + lengths[_i].every - 1) / lengths[_i].every);
    for (size_t k = 0; k < c->row_count; k++) {
        const kel_fitted *r = &c->rows[k];
        size_t i = k * lengths[_i].every;
        kel_answer a;
        KEL_REQUIRE(r->line == i + 2 && r->to == rows[i].to && r->observed == rows[i].value, "row %zu is of line %zu",
                    k, r->line);
        kel_record_coefficient(&a, record, r->to, NULL);
        KEL_REQUIRE(fabs(r->fitted - a.value) <= 1e-20 && r->residual == r->observed - r->fitted, "row %zu: fitted %g",
                    k, r->fitted);
        const char *reason = rows[i].left_out != NULL ? "set aside"
                             : r->to > 400            ? "outside the range asked for"
                                                      : NULL;
        KEL_REQUIRE((reason == NULL) == (r->left_out == NULL), "row %zu at %g K", k, r->to);
        KEL_REQUIRE(reason == NULL ? r->u > 0 : strcmp(reason, r->left_out) == 0 && isnan(r->u), "row %zu: %s", k,
                    r->left_out);
    }
    kel_record_free(record);
}
END_TEST

/* Two columns of n rows each; u stated for all, for some or for no rows. */
static const struct {
    const char *label;
    kel_kind second;
    size_t rows;
    bool first_stated, second_stated, half;
    kel_variance whole, columns[2];
    bool deviation, chi2, scatter_known;
} variances[] = {
    { "nothing stated",
      KEL_KIND_COEFFICIENT,
      20,
      false,
      false,
      false,
      KEL_VARIANCE_ESTIMATED,
      { KEL_VARIANCE_ESTIMATED, KEL_VARIANCE_ESTIMATED },
      true,
      false,
      true },
    { "mixed kinds",
      KEL_KIND_EXPANSION,
      20,
      false,
      false,
      false,
      KEL_VARIANCE_ESTIMATED,
      { KEL_VARIANCE_ESTIMATED, KEL_VARIANCE_ESTIMATED },
      false,
      false,
      true },
    { "all stated",
      KEL_KIND_COEFFICIENT,
      20,
      true,
      true,
      false,
      KEL_VARIANCE_GIVEN,
      { KEL_VARIANCE_GIVEN, KEL_VARIANCE_GIVEN },
      true,
      true,
      true },
    { "all stated, mixed kinds",
      KEL_KIND_MEAN,
      20,
      true,
      true,
      false,
      KEL_VARIANCE_GIVEN,
      { KEL_VARIANCE_GIVEN, KEL_VARIANCE_GIVEN },
      false,
      true,
      true },
    { "one column stated",
      KEL_KIND_COEFFICIENT,
      20,
      true,
      false,
      false,
      KEL_VARIANCE_MIXED,
      { KEL_VARIANCE_GIVEN, KEL_VARIANCE_ESTIMATED },
      true,
      true,
      true },
    { "half a column stated",
      KEL_KIND_EXPANSION,
      20,
      true,
      false,
      true,
      KEL_VARIANCE_MIXED,
      { KEL_VARIANCE_MIXED, KEL_VARIANCE_ESTIMATED },
      false,
      true,
      true },
    { "as many parameters as rows",
      KEL_KIND_COEFFICIENT,
      1,
      false,
      false,
      false,
      KEL_VARIANCE_NONE,
      { KEL_VARIANCE_NONE, KEL_VARIANCE_NONE },
      false,
      false,
      false },
    { "as many, but stated",
      KEL_KIND_COEFFICIENT,
      1,
      true,
      true,
      false,
      KEL_VARIANCE_GIVEN,
      { KEL_VARIANCE_GIVEN, KEL_VARIANCE_GIVEN },
      false,
      true,
      true },
};

START_TEST(where_the_variance_came_from)
{
    by_hand h;
    by_hand_start(&h, "variance", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-9);
    by_hand_column(&h, variances[_i].second, 1e-9);
    for (size_t i = 0; i < variances[_i].rows; i++) {
        double t = 310 + 10 * (double)i, w = t - 293.15, a = 1e-5 + 1e-8 * w, e = 1e-5 * w + 5e-9 * w * w;
        bool coefficient = variances[_i].second == KEL_KIND_COEFFICIENT, mean = variances[_i].second == KEL_KIND_MEAN;
        double u = variances[_i].first_stated && (!variances[_i].half || i % 2 == 0) ? 3e-8 : 0, v = coefficient ? 4e-8
                                                                                                     : mean      ? 4e-8
                                                                                                                 : 4e-6;
        by_hand_row(&h, 0, t, t, a + 3e-8 * error_of(i), u, 0);
        by_hand_row(&h, 1, coefficient ? t + 5 : 293.15, coefficient ? t + 5 : t,
                    (coefficient ? a + 5e-8
                     : mean      ? e / w
                                 : e) +
                        v * error_of(i + 50),
                    variances[_i].second_stated ? v : 0, 0);
    }
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    const int degree = 1;
    options.degrees = &degree;
    options.degree_count = 1;
    kel_record *record = fit(&h.table, &options);
    const kel_content *c = kel_record_content(record);
    const char *label = variances[_i].label;
    ck_assert_msg(c->variance == variances[_i].whole, "%s: %s", label, kel_variance_name(c->variance));
    double freedom = 0;
    for (size_t i = 0; i < 2; i++) {
        ck_assert_msg(c->columns[i].variance == variances[_i].columns[i], "%s, column %zu: %s", label, i,
                      kel_variance_name(c->columns[i].variance));
        ck_assert_msg(isnan(c->columns[i].scatter) == (c->columns[i].variance != KEL_VARIANCE_ESTIMATED &&
                                                       c->columns[i].variance != KEL_VARIANCE_MIXED),
                      "%s, column %zu: s = %g", label, i, c->columns[i].scatter);
        freedom += c->columns[i].degrees_of_freedom;
    }
    ck_assert_abs_for(label, freedom, (double)(2 * variances[_i].rows) - 2, 1e-9, "1");
    ck_assert_msg(isnan(c->residual_standard_deviation) == !variances[_i].deviation, "%s: %g", label,
                  c->residual_standard_deviation);
    ck_assert_msg(isnan(c->chi2) == !variances[_i].chi2, "%s: chi2 = %g", label, c->chi2);
    ck_assert(c->scatter_known == variances[_i].scatter_known);
    double chi2 = 0;
    for (size_t i = 0; i < c->row_count; i++) {
        const kel_fitted *r = &c->rows[i];
        const kel_observation *o = &h.rows[i];
        ck_assert_double_eq(r->residual, r->observed - r->fitted);
        ck_assert(isnan(r->u) == !(o->u_stated || variances[_i].scatter_known));
        if (o->u_stated) {
            ck_assert_double_eq(r->u, o->u_absolute);
            chi2 += r->residual * r->residual / (r->u * r->u);
        }
    }
    if (variances[_i].rows > 1 && variances[_i].chi2)
        ck_assert_lre_for(label, c->chi2, chi2, 9);
    kel_record_free(record);
}
END_TEST

START_TEST(shared_terms)
{
    by_hand h;
    by_hand_start(&h, "shared", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-9);
    for (size_t i = 0; i < 20;
         i++) /* two halves that differ by 2 %: each table's shared error would take half of it, one table's cannot */
        by_hand_row(&h, 0, 100 + 10 * (double)i, 100 + 10 * (double)i, 1e-5 + 1e-8 * error_of(i), 1e-8, 0);
    by_hand k = h;
    k.table.name = "second";
    k.table.columns = k.columns;
    k.table.observations = k.rows;
    k.table.shared = k.shared;
    for (size_t i = 0; i < 20; i++)
        k.rows[i].value *= 1.02;
    by_hand_shared(&h, 0.01, 0, KEL_DIM_PER_KELVIN);
    by_hand_shared(&k, 0.01, 0, KEL_DIM_PER_KELVIN);
    const kel_table *both[] = { &h.table, &k.table };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    const int degree = 0;
    options.degrees = &degree;
    options.degree_count = 1;
    kel_record *record;
    ck_assert_int_eq(kel_fit(&record, NULL, both, 2, &options, NULL), KEL_OK);
    const kel_content *c = kel_record_content(record);
    double chi2 = 0, sum[2] = { 0, 0 };
    ck_assert_uint_eq(c->row_count, 40);
    for (size_t i = 0; i < 40; i++) {
        const kel_fitted *r = &c->rows[i];
        ck_assert_abs(r->fitted + r->shared_term + r->residual, r->observed, 4e-21, "1/K");
        ck_assert_double_eq(r->shared_term,
                            c->rows[i < 20 ? 0 : 20].shared_term); /* a constant curve: the same for a whole table */
        chi2 += r->residual * r->residual / (r->u * r->u);
        sum[i / 20] += r->residual;
    }
    /* Symmetric: about 1 % down and 1 % up, each one standard deviation of its prior, which chi2 counts. */
    double down = c->rows[0].shared_term, up = c->rows[20].shared_term, size = 0.01 * c->rows[0].fitted;
    ck_assert_abs(down / size, -1, 0.02, "prior standard deviations");
    ck_assert_abs(up / size, 1, 0.02, "prior standard deviations");
    ck_assert_lre(c->chi2, chi2 + (down / size) * (down / size) + (up / size) * (up / size), 9);
    /* Each term's own equation, z = size sum r/u^2: net residuals of a table nearly add up to zero. */
    ck_assert_lre(down / size, size * sum[0] / 1e-16, 6);
    ck_assert_lre(up / size, size * sum[1] / 1e-16, 6);
    kel_record_free(record);
}
END_TEST

/* Expansions from 293.15 K at 100 K to 200 K: a gap from 200 K to the reference, as far as the range goes. */
static const struct { const char *label; double hi, gap; size_t gaps; double to; } gaps[] = {
    { "whole", NAN, 0, 1, 293.15 },
    { "clipped", 250, 0, 1, 250 },
    { "clipped away", 200, 0, 0, 0 },
    { "wider gaps allowed", NAN, 94, 0, 0 },
    { "just wide enough", NAN, 93.14, 1, 293.15 },
};

START_TEST(gaps_inside_the_range)
{
    by_hand h;
    by_hand_start(&h, "gaps", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_EXPANSION, 1e-8);
    for (int t = 100; t <= 200; t += 10)
        by_hand_row(&h, 0, 293.15, t, 1e-5 * (t - 293.15), 0, 0);
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.range.hi = gaps[_i].hi;
    options.gap = gaps[_i].gap;
    kel_record *record = fit(&h.table, &options);
    const kel_content *c = kel_record_content(record);
    ck_assert_msg(c->gap_count == gaps[_i].gaps, "%s: %zu gaps", gaps[_i].label, c->gap_count);
    for (size_t i = 0; i < c->gap_count; i++) {
        ck_assert_double_eq(c->gaps[i].lo, 200);
        ck_assert_double_eq(c->gaps[i].hi, gaps[_i].to);
    }
    ck_assert_double_eq(c->range.lo, 100);
    ck_assert_double_eq(c->range.hi, isnan(gaps[_i].hi) ? 293.15 : gaps[_i].hi);
    kel_record_free(record);
}
END_TEST

START_TEST(provenance)
{
    by_hand h;
    by_hand_start(&h, "some/where/alloy.csv", 293.15, KEL_BASE_CURRENT);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
    h.columns[0].label = "as cast";
    for (int i = 0; i < 5; i++)
        by_hand_row(&h, 0, 100 + 50 * i, 100 + 50 * i, 1e-5, 0, 0);
    static const char *const notes[] = { "one", "two" };
    h.table.material = "alloy";
    h.table.direction = "along";
    h.table.notes = notes;
    h.table.note_count = 2;
    kel_record *record = fit(&h.table, NULL);
    const kel_content *c = kel_record_content(record);
    ck_assert_str_eq(c->form, "polynomial");
    ck_assert_str_eq(c->sources[0].name, "alloy.csv");
    ck_assert_str_eq(c->sources[0].material, "alloy");
    ck_assert_str_eq(c->sources[0].direction, "along");
    ck_assert_ptr_null(c->sources[0].condition);
    ck_assert_str_eq(c->sources[0].notes[1], "two");
    ck_assert_int_eq(c->sources[0].base, KEL_BASE_CURRENT);
    ck_assert_double_eq(c->sources[0].reference_temperature, 293.15);
    ck_assert_str_eq(c->columns[0].label, "as cast");
    ck_assert_double_eq(c->columns[0].resolution, 1e-8);
    ck_assert(!c->reference_defaulted);
    kel_record_free(record);
}
END_TEST

START_TEST(last_component)
{
    static const char *const names[][2] = { { "a/b.csv", "b.csv" }, { "b.csv", "b.csv" }, { "/b.csv", "b.csv" },
                                            { "a/", "a/" },         { "", "" },           { "a/b/c", "c" } };
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        ck_assert_str_eq(kel__last_component(names[i][0]), names[i][1]);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, long_tables, 0, KEL_LENGTH(lengths));
    tcase_add_loop_test(c, where_the_variance_came_from, 0, KEL_LENGTH(variances));
    tcase_add_loop_test(c, gaps_inside_the_range, 0, KEL_LENGTH(gaps));
    return c;
}

KEL_TCASE(single, shared_terms, provenance, last_component)
KEL_TEST_MAIN("account", loops, single)
