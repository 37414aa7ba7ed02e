/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables from arrays: what a program gives is kept, checked and ranged as a printed table is. */
#include "tables.h"

#include <math.h>

static const kel_column columns[] = {
    { KEL_KIND_COEFFICIENT, NULL, "1/K", 0, false },
    { KEL_KIND_MEAN, "lot 2", NULL, 1e-8, false },
    { KEL_KIND_EXPANSION, NULL, "1", 1e-6, false },
};

static kel_observation
coefficient(double at, double value)
{
    return (kel_observation){ .kind = KEL_KIND_COEFFICIENT, .from = at, .to = at, .value = value, .column = 0 };
}

static kel_observation
mean(double from, double to, double value)
{
    return (kel_observation){ .kind = KEL_KIND_MEAN, .from = from, .to = to, .value = value, .column = 1 };
}

static kel_observation
expansion(double to, double value)
{
    return (kel_observation){ .kind = KEL_KIND_EXPANSION, .from = 293, .to = to, .value = value, .column = 2 };
}

static kel_status
make(kel_table **out, const kel_observation *o, size_t n, double reference, kel_error *err)
{
    return kel_table_from_arrays(out, "arrays", columns, 3, o, n, reference, KEL_BASE_REFERENCE, err);
}

START_TEST(kept)
{
    char reason[] = "cracked";
    kel_observation o[] = { coefficient(100, 11e-6), mean(293, 77, 12e-6), mean(20, 100, 9e-6), expansion(77, -3e-3),
                            expansion(293, 5e-7),
                            coefficient(0, 0), expansion(350, 1e-3) };
    o[0].u_absolute = 1e-7;
    o[2].u_relative = 0.01;
    o[2].line = 40;
    o[6].left_out = reason;
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(make(&t, o, 7, 293, &err) == KEL_OK, "%s", err.message);
    memset(reason, 'x', sizeof reason - 1); /* inputs are copied */
    memset(o, 0, sizeof o);
    ck_assert_str_eq(t->name, "arrays");
    ck_assert_str_eq(t->digest, "");
    ck_assert_uint_eq(t->observation_count, 7);
    ck_assert_uint_eq(t->column_count, 3);
    ck_assert_str_eq(t->columns[1].label, "lot 2");
    ck_assert_ptr_null(t->columns[1].unit);
    const kel_observation *p = t->observations;
    ck_assert(p[0].u_stated && p[2].u_stated && !p[1].u_stated);
    ck_assert_uint_eq(p[0].line, 1);
    ck_assert_uint_eq(p[2].line, 40);
    ck_assert_str_eq(p[4].left_out, "at the reference temperature: 5e-7 taken as zero"); /* below its digit */
    ck_assert_str_eq(p[6].left_out, "cracked");
    /* A mean from the reference has one printed temperature, another interval two. */
    ck_assert_ulp(p[1].printed_lo, 77, 0);
    ck_assert_ulp(p[1].printed_hi, 77, 0);
    ck_assert_ulp(p[2].printed_lo, 20, 0);
    ck_assert_ulp(p[2].printed_hi, 100, 0);
    ck_assert_ulp(t->range.lo, 0, 0);
    ck_assert_ulp(t->range.hi, 293, 0);
    ck_assert_uint_eq(t->rows, 7);
    ck_assert_uint_eq(t->rows_left_out, 2);
    kel_text text = KEL_TEXT_INIT;
    ck_assert_int_eq(kel_table_format(&text, t, NULL), KEL_E_ARGUMENT);
    kel_table_free(t);
}
END_TEST

enum { BAD = 2 };              /* the observation that is spoilt, from 0 */

static void cold(kel_observation *o) { o->from = o->to = -1e-300; }
static void no_temperature(kel_observation *o) { o->to = NAN; }
static void hot(kel_observation *o) { o->from = o->to = INFINITY; }
static void no_value(kel_observation *o) { o->value = NAN; }
static void large_value(kel_observation *o) { o->value = -INFINITY; }
static void steep(kel_observation *o) { o->value = 1.001e-3; }
static void negative_u(kel_observation *o) { o->u_absolute = -1e-300; }
static void no_u(kel_observation *o) { o->u_relative = NAN; }
static void large_u(kel_observation *o) { o->u_relative = INFINITY; }
static void zero_u(kel_observation *o) { o->u_stated = true; }
static void other_kind(kel_observation *o) { o->kind = KEL_KIND_MEAN; }
static void other_column(kel_observation *o) { o->column = 3; }
static void two_temperatures(kel_observation *o) { o->from = 5; }
static void other_reference(kel_observation *o) { *o = expansion(77, -3e-3); o->from = 294; }
static void not_zero(kel_observation *o) { *o = expansion(293, 1.1e-6); }

static const struct {
    const char *label;
    void (*spoil)(kel_observation *o);
    kel_status code;
    const char *part;
} bad[] = {
    { "below 0 K", cold, KEL_E_RANGE, "not below 0 K" },
    { "temperature NaN", no_temperature, KEL_E_RANGE, "must be finite" },
    { "temperature infinite", hot, KEL_E_RANGE, "must be finite" },
    { "value NaN", no_value, KEL_E_RANGE, "not finite" },
    { "value infinite", large_value, KEL_E_RANGE, "not finite" },
    { "value too large", steep, KEL_E_DATA, "solids stay below 0.001 1/K" },
    { "u below zero", negative_u, KEL_E_RANGE, "not below zero" },
    { "u NaN", no_u, KEL_E_RANGE, "not below zero" },
    { "u infinite", large_u, KEL_E_RANGE, "must be finite" },
    { "stated u of zero", zero_u, KEL_E_RANGE, "above zero" },
    { "another kind", other_kind, KEL_E_ARGUMENT, "another kind" },
    { "no such column", other_column, KEL_E_ARGUMENT, "does not exist" },
    { "coefficient with two temperatures", two_temperatures, KEL_E_ARGUMENT, "from = to" },
    { "expansion from another reference", other_reference, KEL_E_ARGUMENT, "from = reference" },
    { "expansion not zero at its reference", not_zero, KEL_E_DATA, "zero by definition" },
};

START_TEST(refused)
{
    kel_observation o[] = { coefficient(10, 1e-6), coefficient(20, 2e-6), coefficient(30, 3e-6),
                            coefficient(40, 4e-6) };
    kel_table *t = (kel_table *)&t;
    kel_error err = { KEL_OK, 0, 0, "" };
    bad[_i].spoil(&o[BAD]);
    ck_assert_msg(make(&t, o, 4, 293, &err) == bad[_i].code, "%s: %s", bad[_i].label, err.message);
    ck_assert_ptr_null(t);
    ck_assert_msg(err.line == BAD + 1 && err.column == 0, "%s: %zu:%zu", bad[_i].label, err.line, err.column);
    ck_assert_msg(strstr(err.message, bad[_i].part) != NULL, "%s: %s", bad[_i].label, err.message);
}
END_TEST

START_TEST(arguments)
{
    kel_observation o = coefficient(10, 1e-6);
    kel_column wrong = { KEL_KIND_COEFFICIENT, NULL, NULL, NAN, false };
    kel_table *t;
    ck_assert_int_eq(kel_table_from_arrays(NULL, "a", columns, 3, &o, 1, NAN, KEL_BASE_REFERENCE, NULL),
                     KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_from_arrays(&t, NULL, columns, 3, &o, 1, NAN, KEL_BASE_REFERENCE, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_from_arrays(&t, "a", columns, 0, &o, 1, NAN, KEL_BASE_REFERENCE, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_from_arrays(&t, "a", columns, 3, &o, 0, NAN, KEL_BASE_REFERENCE, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_from_arrays(&t, "a", columns, 3, &o, 1, NAN, 2, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_from_arrays(&t, "a", columns, 3, &o, 1, -1, KEL_BASE_REFERENCE, NULL), KEL_E_RANGE);
    ck_assert_int_eq(kel_table_from_arrays(&t, "a", columns, 3, &o, 1, INFINITY, KEL_BASE_REFERENCE, NULL),
                     KEL_E_RANGE);
    ck_assert_int_eq(kel_table_from_arrays(&t, "a", &wrong, 1, &o, 1, NAN, KEL_BASE_REFERENCE, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_from_arrays(&t, "a", columns, 3, &o, 1, NAN, KEL_BASE_CURRENT, NULL), KEL_OK);
    ck_assert_int_eq(t->base, KEL_BASE_CURRENT);
    ck_assert(isnan(t->reference_temperature));
    kel_table_free(t);
}
END_TEST

/* Doubtful arrays are warned about as tables are. */
START_TEST(warned)
{
    kel_observation o[] = { coefficient(30, -1e-6), coefficient(10, 2e-6), coefficient(10, 3e-6),
                            coefficient(40, 4e-6) };
    kel_table *t;
    ck_assert_int_eq(make(&t, o, 4, NAN, NULL), KEL_OK);
    ck_assert_ptr_nonnull(kel_test_warning(t, "sign"));
    ck_assert_ptr_nonnull(kel_test_warning(t, "repeated"));
    ck_assert_ptr_nonnull(kel_test_warning(t, "unsorted"));
    kel_table_free(t);
}
END_TEST

KEL_TCASE(singles, kept, arguments, warned)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, refused, 0, KEL_LENGTH(bad));
    return c;
}

KEL_TEST_MAIN("table_arrays", singles, loops)
