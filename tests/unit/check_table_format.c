/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables written out: read again they give the same bytes and the same observations; what the layout changes and what
   it keeps. */
#include "tables.h"

#include <math.h>

#define FILES(X) X("good-answers.csv") X("good-blank-rows.csv") X("good-code-table.csv") X("good-coefficient.csv") \
    X("good-contraction.csv") X("good-current-length.csv") X("good-decimal-comma.csv") X("good-expansion-percent.csv") \
    X("good-from-to.csv") X("good-intervals.csv") X("good-limits.csv") X("good-mean.csv") X("good-notes.csv") \
    X("good-shifted.csv") X("good-status-marks.csv") X("good-transition.csv") X("good-uncertainty-percent.csv") \
    X("good-uncertainty.csv")
#define ITEM(name) name,
static const char *const good[] = { FILES(ITEM) };

/* Foreign and odd files, with what it takes to read them. */
static const struct {
    const char *file;
    kel_table_options options;
} odd[] = {
    { "odd-series.csv", { .series = "Parallel", .kind = -1, .header = -1 } },
    { "odd-series.csv", { .series = "normal", .kind = -1, .header = -1 } },
    { "odd-transposed.csv", { .kind = -1, .header = -1, .transpose = true } },
    { "odd-blanks.txt", { .kind = -1, .header = -1, .delimiter = KEL_DELIMITER_BLANKS,
                          .settings = (const char *const[]){ "reference temperature: 20 degC", "note: from page 3" },
                              .setting_count = 2 } },
    { "odd-foreign.csv", { .kind = -1, .header = -1, .columns = (const char *const[]){ "temperature [degC]=Temp",
                           "coefficient: x, y [ppm/K]=3" }, .column_count = 2 } },
    { "odd-title.csv", { .kind = -1, .header = 4 } },
    { "odd-no-header.csv", { .kind = -1, .header = 0, .columns = (const char *const[]){ "temperature [K]=1",
                                                                                        "coefficient [1e-6/K]=2" },
                             .column_count = 2 } },
};

static void
format(kel_text *out, const kel_table *t)
{
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel_table_format(out, t, &err) == KEL_OK, "%s: %s", t->name, err.message);
}

static void
assert_same_text(const char *label, const char *a, const char *b)
{
    ck_assert_msg((a == NULL) == (b == NULL) && (a == NULL || strcmp(a, b) == 0), "%s: '%s' and '%s'", label,
                  a == NULL ? "" : a,
                  b == NULL ? "" : b);
}

/* Units and digits are as printed, so equality is exact. */
static void
assert_same(const kel_table *a, const kel_table *b)
{
    const char *label = a->name;
    assert_same_text(label, a->material, b->material);
    assert_same_text(label, a->scale, b->scale);
    assert_same_text(label, a->lot_text, b->lot_text);
    ck_assert_uint_eq(a->observation_count, b->observation_count);
    ck_assert_uint_eq(a->column_count, b->column_count);
    ck_assert_uint_eq(a->note_count, b->note_count);
    ck_assert_uint_eq(a->shared_count, b->shared_count);
    ck_assert_uint_eq(a->transition_count, b->transition_count);
    ck_assert_uint_eq(a->marked_cells, b->marked_cells);
    ck_assert_uint_eq(a->empty_cells, b->empty_cells);
    ck_assert_int_eq(a->base, b->base);
    ck_assert_ulp_for(label, a->reference_temperature, b->reference_temperature, 0);
    ck_assert_ulp_for(label, a->shift, b->shift, 0);
    ck_assert_ulp_for(label, a->range.lo, b->range.lo, 0);
    ck_assert_ulp_for(label, a->range.hi, b->range.hi, 0);
    for (size_t i = 0; i < a->column_count; i++) {
        ck_assert_int_eq(a->columns[i].kind, b->columns[i].kind);
        ck_assert_ulp_for(label, a->columns[i].resolution, b->columns[i].resolution, 0);
        assert_same_text(label, a->columns[i].label, b->columns[i].label);
    }
    for (size_t i = 0; i < a->observation_count; i++) {
        const kel_observation *o = &a->observations[i], *p = &b->observations[i];
        ck_assert_ulp_for(label, o->from, p->from, 0);
        ck_assert_ulp_for(label, o->to, p->to, 0);
        ck_assert_ulp_for(label, o->value, p->value, 0);
        ck_assert_ulp_for(label, o->u_absolute, p->u_absolute, 0);
        ck_assert_ulp_for(label, o->u_relative, p->u_relative, 0);
        ck_assert_int_eq(o->u_stated, p->u_stated);
        ck_assert_int_eq(o->left_out == NULL, p->left_out == NULL);
        if (!a->columns[o->column].contraction) /* whose bounds turn round */
            assert_same_text(label, o->left_out, p->left_out);
    }
}

/* Formats a table, reads the result without options, and formats that. */
static void
assert_fixed_point(const kel_table *t)
{
    kel_text once = KEL_TEXT_INIT, twice = KEL_TEXT_INIT;
    format(&once, t);
    kel_table *again = kel_test_table(once.bytes, NULL);
    format(&twice, again);
    ck_assert_str_eq(once.bytes, twice.bytes);
    assert_same(t, again);
    kel_table_free(again);
    kel_text_free(&once);
    kel_text_free(&twice);
}

START_TEST(good_files)
{
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel_test_read_file(&t, good[_i], NULL, &err) == KEL_OK, "%s:%zu:%zu: %s", good[_i], err.line,
                  err.column, err.message);
    assert_fixed_point(t);
    kel_table_free(t);
}
END_TEST

START_TEST(odd_files)
{
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(kel_test_read_file(&t, odd[_i].file, &odd[_i].options, &err) == KEL_OK, "%s:%zu:%zu: %s",
                  odd[_i].file, err.line,
                  err.column, err.message);
    assert_fixed_point(t);
    kel_table_free(t);
}
END_TEST

static const struct { const char *label, *text, *want; } changes[] = {
    { "canonical words, units as printed",
      "# Material: A\nT (K);alpha(10\xE2\x81\xBB\xE2\x81\xB6 K\xE2\x81\xBB\xC2\xB9)\n100;11.50\n",
      "# material: A\ntemperature [K],coefficient [10\xE2\x81\xBB\xE2\x81\xB6 K\xE2\x81\xBB\xC2\xB9]\n100,11.50\n" },
    { "intervals",
      "interval [degC],mean alpha [ppm/K],source\n\"(-50 - 20)\",+9.56,a\n,,b\n"
      "\xE2\x88\x92" "50\xE2\x80\x93" "0,9.3:,\n",
      "from [degC],to [degC],mean coefficient [ppm/K],source\n(-50),(20),+9.56,a\n,,,b\n\xE2\x88\x92" "50,0,9.3:,\n" },
    { "contraction",
      "# reference temperature: 293 K\nT [K],contraction [1e-5],limits [1e-5]\n80,~390.0,1\n310,-35,\n293,0,1\n",
      "# reference temperature: 293 K\ntemperature [K],expansion [1e-5],limits "
      "[1e-5]\n80,~-390.0,1\n310,35,\n293,0,1\n" },
    { "decimal comma", "# decimal: comma\n# note: a, b\n# uncertainty: 1,5 % + 0,1 [1e-6/K] from 0,5 K to 400 K\n"
      "T [K];alpha [1e-6/K];source\n100,5;11,50;\"p. 3, 4\"\n",
      "# note: a, b\n# uncertainty: 1.5 % + 0.1 [1e-6/K] from 0.5 K to 400 K\ntemperature [K],coefficient "
      "[1e-6/K],source\n"
      "100.5,11.50,\"p. 3, 4\"\n" },
    { "quotes and marks of comments", "source,T [K],alpha [1e-6/K]\n\"#1 \"\"x\"\"\",100,11.50\n\"#2\",200,16.4\n",
      "source,temperature [K],coefficient [1e-6/K]\n\"#1 \"\"x\"\"\",100,11.50\n\"#2\",200,16.4\n" },
    { "comments that say nothing are dropped", "# a sentence\nT [K],alpha [1e-6/K]\n# 12 rows\n100,11.50\n",
      "temperature [K],coefficient [1e-6/K]\n100,11.50\n" },
};

START_TEST(layout)
{
    kel_table *t = kel_test_table(changes[_i].text, NULL);
    kel_text out = KEL_TEXT_INIT;
    format(&out, t);
    ck_assert_str_eq(out.bytes, changes[_i].want);
    assert_fixed_point(t);
    kel_text_free(&out);
    kel_table_free(t);
}
END_TEST

/* A row left out by hand stays left out, with its reason, and a status of its own stays readable. */
START_TEST(left_out)
{
    static const char *const out[] = { "test.csv:3=specimen had moved", "test.csv:4=a, b" };
    static const struct { const char *text, *want; } tables[] = {
        { "T [K],alpha [1e-6/K]\n100,11.5\n200,16.4\n300,19.1\n",
          "temperature [K],coefficient [1e-6/K],status\n100,11.5,\n200,16.4,left out: specimen had "
          "moved\n300,19.1,\"left out: a, b\"\n" },
        { "T [K],status,alpha [1e-6/K]\n100,ok,11.5\n200,doubtful,16.4\n300,,19.1\n",
          "temperature [K],status,coefficient [1e-6/K]\n100,ok,11.5\n200,left out: specimen had moved; doubtful,16.4\n"
          "300,\"left out: a, b\",19.1\n" },
    };
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    o.leave_out = out;
    o.leave_out_count = 2;
    kel_table *t = kel_test_table(tables[_i].text, &o);
    kel_text once = KEL_TEXT_INIT, twice = KEL_TEXT_INIT;
    format(&once, t);
    ck_assert_str_eq(once.bytes, tables[_i].want);
    o.leave_out_count = 0;
    o.include_marked = true; /* marks can be included, decisions stand */
    kel_table *again = kel_test_table(once.bytes, &o);
    ck_assert_str_eq(t->observations[1].left_out, "specimen had moved");
    ck_assert_ptr_nonnull(again->observations[1].left_out);
    ck_assert_int_eq(strncmp(again->observations[1].left_out, "specimen had moved", 18), 0);
    ck_assert_str_eq(again->observations[2].left_out, "a, b");
    format(&twice, again);
    ck_assert_str_eq(once.bytes, twice.bytes);
    kel_text_free(&once);
    kel_text_free(&twice);
    kel_table_free(t);
    kel_table_free(again);
}
END_TEST

/* Setting a key on the command line is written too; a text that would end a line cannot. */
START_TEST(settings)
{
    static const char *const set[] = { "material: B\nT [K]", "note: x" };
    kel_table_options o = KEL_TABLE_OPTIONS_INIT;
    o.settings = set;
    o.setting_count = 2;
    kel_table *t = kel_test_table("# material: A\nT [K],alpha [1e-6/K]\n100,11.5\n", &o);
    kel_text out = KEL_TEXT_INIT;
    format(&out, t);
    ck_assert_str_eq(out.bytes, "# material: B T [K]\n# note: x\ntemperature [K],coefficient [1e-6/K]\n100,11.5\n");
    kel_text_free(&out);
    kel_table_free(t);
}
END_TEST

START_TEST(arguments)
{
    kel_table *t = kel_test_table("T [K],alpha [1e-6/K]\n100,11.5\n", NULL);
    kel_text out = KEL_TEXT_INIT;
    ck_assert_int_eq(kel_table_format(NULL, t, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_table_format(&out, NULL, NULL), KEL_E_ARGUMENT);
    out.failed = true;
    ck_assert_int_eq(kel_table_format(&out, t, NULL), KEL_E_NOMEM);
    kel_table_free(t);
}
END_TEST

KEL_TCASE(singles, settings, arguments)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, good_files, 0, KEL_LENGTH(good));
    tcase_add_loop_test(c, odd_files, 0, KEL_LENGTH(odd));
    tcase_add_loop_test(c, layout, 0, KEL_LENGTH(changes));
    tcase_add_loop_test(c, left_out, 0, 2);
    return c;
}

KEL_TEST_MAIN("table_format", singles, loops)
