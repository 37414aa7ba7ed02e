/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Model values and gradients of every kind of row, for all combinations of base and reference, against central differences and against the
   definitions worked out from lengths. */
#include "unit.h"
#include "problem.h"
#include "by_hand.h"

static const struct {
    const char *label;
    kel_base record, table;
    double record_reference, table_reference;
    kel_kind kind;
    double from, to;
} cases[] = {
    { "coefficient, same", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 293, 293, KEL_KIND_COEFFICIENT, 500, 500 },
    { "coefficient, other reference", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 293, 400, KEL_KIND_COEFFICIENT, 500, 500 },
    { "coefficient, current table", KEL_BASE_REFERENCE, KEL_BASE_CURRENT, 293, 293, KEL_KIND_COEFFICIENT, 900, 900 },
    { "coefficient, current record", KEL_BASE_CURRENT, KEL_BASE_REFERENCE, 293, 293, KEL_KIND_COEFFICIENT, 900, 900 },
    { "coefficient, both current", KEL_BASE_CURRENT, KEL_BASE_CURRENT, 293, 350, KEL_KIND_COEFFICIENT, 900, 900 },
    { "mean, same", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 293, 293, KEL_KIND_MEAN, 293, 800 },
    { "mean, other reference", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 293, 400, KEL_KIND_MEAN, 450, 800 },
    { "mean, current record", KEL_BASE_CURRENT, KEL_BASE_REFERENCE, 293, 400, KEL_KIND_MEAN, 450, 800 },
    { "mean at its reference", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 293, 400, KEL_KIND_MEAN, 400, 400 },
    { "mean at its reference, current record", KEL_BASE_CURRENT, KEL_BASE_REFERENCE, 293, 400, KEL_KIND_MEAN, 400, 400 },
    { "mean downward", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 800, 800, KEL_KIND_MEAN, 800, 310 },
    { "expansion, same", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 293, 293, KEL_KIND_EXPANSION, 293, 900 },
    { "expansion, other reference", KEL_BASE_REFERENCE, KEL_BASE_REFERENCE, 293, 500, KEL_KIND_EXPANSION, 500, 900 },
    { "expansion, current record", KEL_BASE_CURRENT, KEL_BASE_REFERENCE, 293, 500, KEL_KIND_EXPANSION, 500, 900 },
};

typedef struct set { by_hand hand; const kel_table *tables[1]; kel_fit_options options; kel__problem p; kel__layout l; kel_arena *memory; } set;

/* Two pieces, one fitted and one stated step. The rows at 300 K and 950 K make the hull. */
static void
make(set *s, int i)
{
    by_hand_start(&s->hand, "hand", cases[i].table_reference, cases[i].table);
    by_hand_column(&s->hand, cases[i].kind, 1e-8);
    by_hand_column(&s->hand, KEL_KIND_EXPANSION, 1e-8);
    by_hand_row(&s->hand, 0, cases[i].from, cases[i].to, 1e-5, 0, 0);
    by_hand_row(&s->hand, 1, cases[i].table_reference, 280, -2e-4, 0, 0);
    by_hand_row(&s->hand, 1, cases[i].table_reference, 950, 9e-3, 0, 0);
    by_hand_transition(&s->hand, 600, KEL_STEP_FITTED, 0);
    by_hand_transition(&s->hand, 700, KEL_STEP_STATED, -8e-6);
    s->tables[0] = &s->hand.table;
    s->options = (kel_fit_options)KEL_FIT_OPTIONS_INIT;
    s->options.reference = cases[i].record_reference;
    s->options.base = cases[i].record;
    s->memory = kel_arena_new();
    const int degrees[] = { 3, 2, 4 };
    ck_assert_int_eq(kel__problem_make(&s->p, s->memory, s->tables, 1, &s->options, NULL), KEL_OK);
    ck_assert_int_eq(kel__layout_make(&s->l, &s->p, s->memory, degrees, NULL), KEL_OK);
    ck_assert_uint_eq(s->l.curve, 4 + 3 + 5 + 1);
}

static const double x[] = { 1.2e-5, 2e-6, 3e-7, -2e-7, 1.6e-5, 1e-6, 2e-7, 2e-5, 1e-6, -3e-7, 1e-7, 5e-8, 3e-4 };

START_TEST(gradient_is_derivative)
{
    set s;
    make(&s, _i);
    double gradient[16], spare[16], work[16], y[16];
    kel__model model = kel__model_row(gradient, work, &s.p, &s.l, &s.p.rows[0], x);
    for (size_t j = 0; j < s.l.curve; j++) {
        double h = 1e-8; /* moves a length by up to 7e-6: error (7e-6)^2 of the derivative, and eps/h of a value of 1e-2 */
        memcpy(y, x, sizeof x);
        y[j] = x[j] + h;
        double up = kel__model_row(spare, work, &s.p, &s.l, &s.p.rows[0], y).value;
        y[j] = x[j] - h;
        double down = kel__model_row(spare, work, &s.p, &s.l, &s.p.rows[0], y).value;
        double size = fmax(1, fabs(gradient[j]));
        ck_assert_abs_for(cases[_i].label, gradient[j] / size, (up - down) / (2 * h) / size, 1e-9, "1");
    }
    if (!model.linear)
        for (size_t j = 0; j < s.l.curve; j++)
            model.constant += gradient[j] * x[j];
    if (!model.linear)
        ck_assert_abs_for(cases[_i].label, model.constant, model.value, 1e-17, "value");
    kel_arena_free(s.memory);
}
END_TEST

/* L(T)/L(R) of the record from its own functionals, and from that the printed quantity by definition. */
static double
length_at(const set *s, double t, int side)
{
    double row[16] = { 0 }, i = kel__add_integral(row, &s->l, &s->p, s->p.reference, 0, t, side, 1);
    for (size_t j = 0; j < s->l.curve; j++)
        i += row[j] * x[j];
    return s->p.base == KEL_BASE_CURRENT ? exp(i) : 1 + i;
}

START_TEST(value_follows_definition)
{
    set s;
    make(&s, _i);
    double gradient[16], work[16], row[16] = { 0 }, alpha = 0;
    double got = kel__model_row(gradient, work, &s.p, &s.l, &s.p.rows[0], x).value;
    double lr = length_at(&s, cases[_i].table_reference, 0), to = length_at(&s, cases[_i].to, 0), from = length_at(&s, cases[_i].from, 0);
    kel__add_value(row, &s.l, cases[_i].to, 0, 1);
    for (size_t j = 0; j < s.l.curve; j++)
        alpha += row[j] * x[j];
    double slope = s.p.base == KEL_BASE_CURRENT ? alpha * to : alpha; /* dL/dT over L(R) */
    double want;
    if (cases[_i].kind == KEL_KIND_EXPANSION)
        want = (to - lr) / lr;
    else if (cases[_i].kind == KEL_KIND_MEAN && cases[_i].from != cases[_i].to)
        want = (to - from) / lr / (cases[_i].to - cases[_i].from);
    else
        want = cases[_i].kind == KEL_KIND_COEFFICIENT && cases[_i].table == KEL_BASE_CURRENT ? slope / to : slope / lr;
    /* The definition subtracts lengths near 1: its own rounding is 2 eps, over the interval for a mean. */
    double limit = 4 * KEL__EPS / (cases[_i].kind == KEL_KIND_MEAN && cases[_i].from != cases[_i].to ? 300 : 1);
    ck_assert_abs_for(cases[_i].label, got, want, cases[_i].kind == KEL_KIND_COEFFICIENT ? 4 * KEL__EPS * 2e-5 : limit, "SI");
    kel_arena_free(s.memory);
}
END_TEST

static TCase *
combinations(void)
{
    TCase *c = tcase_create("combinations");
    tcase_add_loop_test(c, gradient_is_derivative, 0, KEL_LENGTH(cases));
    tcase_add_loop_test(c, value_follows_definition, 0, KEL_LENGTH(cases));
    return c;
}

KEL_TEST_MAIN("model", combinations)
