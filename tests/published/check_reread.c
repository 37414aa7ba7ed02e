/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table in the product's own layout, read again: the same bytes out, and the same observations to the last bit.

   The tables are invented; they take turns in kinds, units, delimiters, marks, quotes, empty cells, intervals and
   metadata. */
#include <math.h>

#include "../support/making.h"

static const char *const texts[] = {
    "# material: alloy NT-40\n# reference temperature: 20 degC\n# source: bench data, run 3\n"
    "temperature [degC],expansion [%]\n-190,-0.251\n-100,-0.160\n0,-0.029\n100,0.122\n200,0.287\n",
    "# reference temperature: 68 °F\n# uncertainty: 2 %\n# uncertainty: 0.05 [1e-6/K] independent\n# note: one\n"
    "# note: two\n"
    "Temp (°F);mean alpha (ppm/°F);Status\n-320;4.90;\n-200;5.60;*\n0;6.30;\n200;6.91;(estimated)\n400;7.2;\n",
    "# a remark without a key\n# transition: 500 K step\n# contracts on heating: yes\n# reference temperature: 293 K\n"
    "temperature [K],contraction [1e-5]\n77,300\n\n100,280.5\n200,140\n300,-10\n500,-320\n500,-350\n600,-520\n",
    "# reference temperature: 20 degC\r\ninterval [degC]\tmean coefficient [10⁻⁶ K⁻¹]\r\n"
    "20-100\t16.7\r\n20–200\t17.2\r\n-50 to 20\t15.9\r\n",
    "temperature [K],coefficient: A-1 [1e-6/K],uncertainty [1e-6/K],source\n293,9.1,0.1,\"Lab 1, oven\"\n"
    "400,9.6,0.1,\"said \"\"good\"\"\"\n"
    "500,...,,n/a\n600,10.3,0.2,\n",
    "# reference temperature: 293 K\n# lot spread: 1 %\n# uncertainty: 3 % k=2 from 4 K to 100 K shared\n"
    "temperature [K],coefficient [1e-6/K],mean coefficient [1e-6/K],expansion [1e-5]\n"
    "20,0.5,12.0,-327.6\n100,9.5,14.9,-287.6\n"
    "200,14.0,16.3,-151.6\n293,16.6,16.6,0\n400,18.0,17.3,185.1\n",
};

START_TEST(written_and_read)
{
    kel_table *first = make_table(texts[_i]);
    kel_text once = KEL_TEXT_INIT, twice = KEL_TEXT_INIT;
    kel_error err = { 0 };
    made(kel_table_format(&once, first, &err), &err, "written");
    kel_table *second = make_table(once.bytes);
    made(kel_table_format(&twice, second, &err), &err, "written again");
    ck_assert_str_eq(once.bytes, twice.bytes);
    ck_assert_uint_eq(once.size, twice.size);
    ck_assert_uint_eq(first->observation_count, second->observation_count);
    ck_assert_uint_eq(first->rows_left_out, second->rows_left_out);
    for (size_t i = 0; i < first->observation_count; i++) {
        const kel_observation *a = &first->observations[i], *b = &second->observations[i];
        ck_assert_int_eq(a->kind, b->kind);
        ck_assert_ulp(a->from, b->from, 0);
        ck_assert_ulp(a->to, b->to, 0);
        ck_assert_ulp(a->value, b->value, 0);
        ck_assert_ulp(a->u_absolute, b->u_absolute, 0);
        ck_assert_ulp(a->u_relative, b->u_relative, 0);
        ck_assert_int_eq(a->left_out == NULL, b->left_out == NULL);
        ck_assert_ulp(first->columns[a->column].resolution, second->columns[b->column].resolution, 0);
    }
    kel_text_free(&once);
    kel_text_free(&twice);
    kel_table_free(first);
    kel_table_free(second);
}
END_TEST

static TCase *
reread(void)
{
    TCase *c = tcase_create("reread");
    tcase_add_loop_test(c, written_and_read, 0, KEL_LENGTH(texts));
    return c;
}

KEL_TEST_MAIN("reread", reread)
