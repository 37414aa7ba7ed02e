/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Whole fits, from rows to answers of the record: recovery, joins, transitions, sides, shared errors, weights, what is refused. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

static double
cubic(double t)
{
    double x = (t - 300) / 200;
    return 1e-5 * (1.2 + 0.4 * x - 0.1 * x * x + 0.05 * x * x * x);
}

/* Exact integral of the cubic, by two-point Gauss on each half, which is exact for degree 3. */
static double
cubic_integral(double a, double b)
{
    double m = (a + b) / 2, h = (b - a) / 2, d = h / sqrt(3);
    return h * (cubic(m - d) + cubic(m + d));
}

static const kel_table *tables[3];

static kel_record *
fit(by_hand *h, const kel_fit_options *options, kel_fit_report **report)
{
    kel_record *record;
    kel_error err = { 0 };
    tables[0] = &h->table;
    ck_assert_msg(kel_fit(&record, report, tables, 1, options, &err) == KEL_OK, "%s", err.message);
    return record;
}

static double
ask(const kel_record *record, kel_quantity quantity, double from, double to)
{
    kel_answer a;
    kel_query q = { quantity, from, to, from, NAN, -1 };
    ck_assert_int_ge(kel_record_answer(&a, record, &q, NULL), 0);
    return a.value;
}

static const struct { const char *label; kel_kind kind; double reference; kel_base base; } kinds[] = {
    { "coefficient", KEL_KIND_COEFFICIENT, 293.15, KEL_BASE_REFERENCE },
    { "mean", KEL_KIND_MEAN, 293.15, KEL_BASE_REFERENCE },
    { "expansion", KEL_KIND_EXPANSION, 293.15, KEL_BASE_REFERENCE },
    { "expansion below its reference", KEL_KIND_EXPANSION, 520, KEL_BASE_REFERENCE },
};

START_TEST(recovers_a_cubic)
{
    by_hand h;
    by_hand_start(&h, "cubic", kinds[_i].reference, kinds[_i].base);
    by_hand_column(&h, kinds[_i].kind, 0);
    double r = kinds[_i].reference;
    for (double t = 100; t <= 500; t += 20) {
        double value = kinds[_i].kind == KEL_KIND_COEFFICIENT ? cubic(t)
                       : cubic_integral(r, t) / (kinds[_i].kind == KEL_KIND_MEAN ? t - r : 1);
        by_hand_row(&h, 0, kinds[_i].kind == KEL_KIND_COEFFICIENT ? t : r, t, value, 0, 0);
    }
    kel_fit_report *report;
    kel_record *record = fit(&h, NULL, &report);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->parameters, 4);
    ck_assert_double_eq(c->range.hi, fmax(500, kinds[_i].kind == KEL_KIND_COEFFICIENT ? 0 : r));
    for (double t = 100; t <= 500; t += 7) {
        ck_assert_abs_for(kinds[_i].label, ask(record, KEL_COEFFICIENT, t, t), cubic(t), 1e-17, "1/K");
        ck_assert_abs_for(kinds[_i].label, ask(record, KEL_EXPANSION, t, t), cubic_integral(c->reference_temperature, t), 4e-17 * 100, "1");
    }
    ck_assert_double_eq(ask(record, KEL_EXPANSION, r, r), 0);
    kel_fit_report_free(report);
    kel_record_free(record);
}
END_TEST

/* Table referred to r, record to 293.15 K, and the current-length base: consistent rows give back the curve. */
static const struct { const char *label; kel_kind kind; double table_reference; kel_base table, record; } bases[] = {
    { "expansion from 150 K", KEL_KIND_EXPANSION, 150, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE },
    { "mean from 470 K", KEL_KIND_MEAN, 470, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE },
    { "coefficient over L(480 K)", KEL_KIND_COEFFICIENT, 480, KEL_BASE_REFERENCE, KEL_BASE_REFERENCE },
    { "expansion, current record", KEL_KIND_EXPANSION, 150, KEL_BASE_REFERENCE, KEL_BASE_CURRENT },
    { "mean, current record", KEL_KIND_MEAN, 150, KEL_BASE_REFERENCE, KEL_BASE_CURRENT },
    { "coefficient over L0, current record", KEL_KIND_COEFFICIENT, 150, KEL_BASE_REFERENCE, KEL_BASE_CURRENT },
};

START_TEST(recovers_across_bases)
{
    by_hand h;
    double r = bases[_i].table_reference;
    by_hand_start(&h, "cubic", r, bases[_i].table);
    by_hand_column(&h, bases[_i].kind, 0);
    bool current = bases[_i].record == KEL_BASE_CURRENT;
    for (double t = 100; t <= 500; t += 20) {
        /* cubic is the record's alpha: over L(293.15 K), or over L. */
        double lr = current ? exp(cubic_integral(293.15, r)) : 1 + cubic_integral(293.15, r);
        double e = current ? expm1(cubic_integral(r, t)) : cubic_integral(r, t) / lr;
        double value = bases[_i].kind == KEL_KIND_EXPANSION ? e
                       : bases[_i].kind == KEL_KIND_MEAN ? e / (t - r)
                       : current ? cubic(t) * (1 + e) : cubic(t) / lr;
        by_hand_row(&h, 0, bases[_i].kind == KEL_KIND_COEFFICIENT ? t : r, t, value, 0, 0);
    }
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    const int degree = 3;
    options.degrees = &degree;
    options.degree_count = 1;
    options.reference = 293.15;
    options.base = bases[_i].record;
    kel_record *record = fit(&h, &options, NULL);
    for (double t = 100; t <= 500; t += 7) {
        double want = current ? expm1(cubic_integral(293.15, t)) : cubic_integral(293.15, t);
        ck_assert_abs_for(bases[_i].label, ask(record, KEL_COEFFICIENT, t, t), cubic(t), 4e-17, "1/K");
        ck_assert_abs_for(bases[_i].label, ask(record, KEL_EXPANSION, t, t), want, 1e-14, "1");
    }
    kel_record_free(record);
}
END_TEST

/* A step at 300 K of -2e-5 and a jump of alpha, in expansion rows with one below and one above the transition. */
START_TEST(fits_a_step)
{
    by_hand h;
    by_hand_start(&h, "step", 200, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_EXPANSION, 0);
    by_hand_transition(&h, 300, KEL_STEP_FITTED, 0);
    for (double t = 220; t <= 300; t += 20)
        by_hand_row(&h, 0, 200, t, 1e-5 * (t - 200), 0, 0);
    for (double t = 300; t <= 400; t += 20)
        by_hand_row(&h, 0, 200, t, 1e-3 - 2e-5 + 1.5e-5 * (t - 300), 0, 0);
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    const int degree = 1;
    options.degrees = &degree;
    options.degree_count = 1;
    for (int turn = 0; turn < 2; turn++) { /* ascending, then descending order */
        kel_record *record = fit(&h, &options, NULL);
        const kel_content *c = kel_record_content(record);
        ck_assert_uint_eq(c->parameters, 5);
        ck_assert_abs(c->mean.steps[0], -2e-5, 1e-17, "1");
        ck_assert_abs(ask(record, KEL_EXPANSION, 0, 300), 1e-3 - 2e-5, 1e-17, "1");
        ck_assert_abs(ask(record, KEL_EXPANSION, 0, nextafter(300, 0)), 1e-3, 1e-17, "1");
        ck_assert_abs(ask(record, KEL_COEFFICIENT, 0, 300), 1.5e-5, 1e-18, "1/K");
        int sides = 0;
        for (size_t i = 0; i < c->row_count; i++)
            sides += c->rows[i].side;
        ck_assert_int_eq(sides, 0);
        kel_record_free(record);
        for (size_t i = 0, j = h.table.observation_count - 1; i < j; i++, j--) {
            kel_observation swap = h.rows[i];
            h.rows[i] = h.rows[j];
            h.rows[j] = swap;
        }
    }
    /* Without rows on its far side the step cannot be fitted. */
    h.table.observation_count = 4;
    tables[0] = &h.table;
    for (size_t i = 0; i < 4; i++)
        h.rows[i].to = 210 + 10 * (double)i;
    kel_record *record;
    kel_error err = { 0 };
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 1, &options, &err), KEL_E_DATA);
    ck_assert_ptr_nonnull(strstr(err.message, "300 K"));
    ck_assert_ptr_null(record);
}
END_TEST

static const struct { int continuity; size_t parameters; } joins[] = {
    { KEL_CONTINUITY_NONE, 8 }, { KEL_CONTINUITY_VALUE, 7 }, { KEL_CONTINUITY_SLOPE, 6 }, { KEL_CONTINUITY_CURVATURE, 5 },
};

START_TEST(joins_are_as_smooth_as_asked)
{
    by_hand h;
    by_hand_start(&h, "join", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
    for (double t = 100; t <= 500; t += 10)
        by_hand_row(&h, 0, t, t, cubic(t) + 2e-7 * sin(t), 0, 0);
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    const int degree = 3;
    const double join = 260;
    options.degrees = &degree;
    options.degree_count = 1;
    options.joins = &join;
    options.join_count = 1;
    options.continuity = &joins[_i].continuity;
    options.continuity_count = 1;
    kel_record *record = fit(&h, &options, NULL);
    const kel_content *c = kel_record_content(record);
    ck_assert_uint_eq(c->parameters, joins[_i].parameters);
    ck_assert_int_eq(c->continuity[0], joins[_i].continuity);
    double left[4], right[4]; /* derivatives at the join from powers of T - 260 K */
    ck_assert_int_eq(kel_record_powers(left, NULL, record, 0, join, 1, NULL), KEL_OK);
    ck_assert_int_eq(kel_record_powers(right, NULL, record, 1, join, 1, NULL), KEL_OK);
    for (int d = 0; d <= 2; d++) {
        double jump = fabs(left[d] - right[d]) * pow(100, d);
        if (d <= joins[_i].continuity)
            ck_assert_abs(jump, 0, 1e-18, "1/K, for a distance of 100 K");
        else
            ck_assert_double_gt(jump, 1e-10);
    }
    kel_record_free(record);
}
END_TEST

/* 200 rows with scatter, alone and with a 3 % shared error: the same curve, and 3 % in its uncertainty. */
START_TEST(shared_error_leaves_the_curve)
{
    by_hand h;
    by_hand_start(&h, "shared", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
    for (int i = 0; i < 200; i++) {
        double t = 100 + 2 * i;
        by_hand_row(&h, 0, t, t, cubic(t) * (1 + 0.01 * sin(37.0 * i * i)), 0, 0.01);
    }
    kel_record *plain = fit(&h, NULL, NULL);
    by_hand_shared(&h, 0.03, 0, KEL_DIM_PER_KELVIN);
    kel_record *shared = fit(&h, NULL, NULL);
    for (double t = 100; t <= 498; t += 11) {
        kel_answer a, b;
        ck_assert_int_eq(kel_record_coefficient(&a, plain, t, NULL), KEL_OK);
        ck_assert_int_eq(kel_record_coefficient(&b, shared, t, NULL), KEL_OK);
        ck_assert_abs(b.value / a.value, 1, 1e-9, "of the value");
        ck_assert_abs(b.u_shared / b.value, 0.03, 1e-6, "of the value");
        ck_assert_abs(b.u_fit / a.u_fit, 1, 1e-3, "of the scatter part");
    }
    kel_record_free(plain);
    kel_record_free(shared);
}
END_TEST

static const struct { const char *label; int degree; size_t rows; kel_status status; const char *words; } refusals[] = {
    { "degree for one row", 1, 1, KEL_E_RANK, "1 row to fit" },
    { "as many coefficients as rows and one", 5, 5, KEL_E_RANK, "5 rows to fit" },
    { "degree beyond what is possible", 61, 30, KEL_E_ARGUMENT, "between 0 and 60" },
    { "negative degree", -2, 30, KEL_E_ARGUMENT, "between 0 and 60" },
};

START_TEST(refuses)
{
    by_hand h;
    by_hand_start(&h, "refused", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
    for (size_t i = 0; i < refusals[_i].rows; i++)
        by_hand_row(&h, 0, 100 + 10 * (double)i, 100 + 10 * (double)i, 1e-5, 0, 0);
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.degrees = &refusals[_i].degree;
    options.degree_count = 1;
    tables[0] = &h.table;
    kel_record *record;
    kel_error err = { 0 };
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 1, &options, &err), refusals[_i].status);
    ck_assert_msg(strstr(err.message, refusals[_i].words) != NULL, "%s: %s", refusals[_i].label, err.message);
    ck_assert_ptr_null(record);
}
END_TEST

static const double no_references[] = { INFINITY, -INFINITY, -1e-300 };

START_TEST(a_reference_is_a_temperature)
{
    by_hand h;
    by_hand_start(&h, "reference", NAN, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
    for (int i = 0; i < 5; i++)
        by_hand_row(&h, 0, 100 + 10 * i, 100 + 10 * i, 1e-5, 0, 0);
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.reference = no_references[_i];
    tables[0] = &h.table;
    kel_record *record;
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 1, &options, NULL), KEL_E_ARGUMENT);
    options.reference = 0;
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 1, &options, NULL), KEL_OK);
    kel_record_free(record);
}
END_TEST

START_TEST(few_rows)
{
    for (size_t n = 1; n <= 3; n++) {
        by_hand h;
        by_hand_start(&h, "few", 293.15, KEL_BASE_REFERENCE);
        by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
        for (size_t i = 0; i < n; i++)
            by_hand_row(&h, 0, 300 + 50 * (double)i, 300 + 50 * (double)i, 1e-5 + 1e-6 * (double)i, 0, 0);
        kel_fit_report *report;
        kel_record *record = fit(&h, NULL, &report);
        const kel_content *c = kel_record_content(record);
        ck_assert_uint_eq(c->parameters, n == 1 ? 1 : 2);
        if (n < 3) {
            ck_assert_uint_eq(c->mode_count, 0);
            ck_assert_int_eq(c->variance, KEL_VARIANCE_NONE);
            ck_assert_str_eq(report->warnings[0].code, "no-misfit");
        }
        if (n == 1) {
            ck_assert_double_eq(c->range.lo, 300);
            ck_assert_double_eq(c->range.hi, 300);
            kel_answer a;
            ck_assert_int_eq(kel_record_coefficient(&a, record, 300, NULL), KEL_OK);
            ck_assert_int_eq(kel_record_coefficient(&a, record, 301, NULL), KEL_W_EXTRAPOLATED);
            ck_assert_double_eq(a.value, 1e-5);
        }
        kel_fit_report_free(report);
        kel_record_free(record);
    }
}
END_TEST

START_TEST(one_temperature)
{
    by_hand h;
    by_hand_start(&h, "one temperature", 293.15, KEL_BASE_REFERENCE);
    by_hand_column(&h, KEL_KIND_COEFFICIENT, 1e-8);
    for (int i = 0; i < 6; i++)
        by_hand_row(&h, 0, 300, 300, 1e-5 + 1e-8 * i, 0, 0);
    kel_record *record = fit(&h, NULL, NULL);
    ck_assert_uint_eq(kel_record_content(record)->parameters, 1);
    ck_assert_abs(ask(record, KEL_COEFFICIENT, 0, 300), 1.0025e-5, 1e-20, "1/K");
    kel_record_free(record);
    const int one = 1;
    kel_fit_options options = KEL_FIT_OPTIONS_INIT;
    options.degrees = &one;
    options.degree_count = 1;
    kel_error err = { 0 };
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 1, &options, &err), KEL_E_RANK);
    ck_assert_ptr_nonnull(strstr(err.message, "one temperature"));
}
END_TEST

START_TEST(directions_do_not_mix)
{
    by_hand h, k;
    by_hand_start(&h, "a.csv", 293.15, KEL_BASE_REFERENCE);
    by_hand_start(&k, "b.csv", 293.15, KEL_BASE_REFERENCE);
    by_hand *both[] = { &h, &k };
    for (int i = 0; i < 2; i++) {
        by_hand_column(both[i], KEL_KIND_COEFFICIENT, 1e-8);
        by_hand_row(both[i], 0, 300, 300, 1e-5, 0, 0);
        tables[i] = &both[i]->table;
    }
    h.table.direction = "parallel to fibre";
    k.table.direction = "normal to fibre";
    kel_record *record;
    kel_error err = { 0 };
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 2, NULL, &err), KEL_E_DATA);
    ck_assert_ptr_nonnull(strstr(err.message, "normal to fibre"));
    k.table.direction = "Parallel to Fibre";
    ck_assert_int_eq(kel_fit(&record, NULL, tables, 2, NULL, &err), KEL_OK);
    kel_record_free(record);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, recovers_a_cubic, 0, KEL_LENGTH(kinds));
    tcase_add_loop_test(c, recovers_across_bases, 0, KEL_LENGTH(bases));
    tcase_add_loop_test(c, joins_are_as_smooth_as_asked, 0, KEL_LENGTH(joins));
    tcase_add_loop_test(c, refuses, 0, KEL_LENGTH(refusals));
    tcase_add_loop_test(c, a_reference_is_a_temperature, 0, KEL_LENGTH(no_references));
    return c;
}

KEL_TCASE(single, fits_a_step, shared_error_leaves_the_curve, few_rows, one_temperature, directions_do_not_mix)
KEL_TEST_MAIN("fit", loops, single)
