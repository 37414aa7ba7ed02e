/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Stated uncertainty and lot spread of adopted coefficients as modes. */
#include "unit.h"

#include <kelspan-fit.h>
#include <math.h>
#include <string.h>

#include "adopting.h"

static const struct { const char *label, *uncertainty; double u; } sizes[] = {
    { "percent", "2 %", 0.02 * 12e-6 }, { "absolute", "0.3 [1e-6/K]", 0.3e-6 }, { "limits", "3 % limits",
                                                                                  0.03 / 1.7320508075688772 * 12e-6 },
    { "expanded", "1 [ppm/K] k=2", 0.5e-6 }, { "both", "3 % + 0.48 [1e-6/K] k=2", 0.3e-6 },
        { "shared in so many words", "2 % shared", 0.02 * 12e-6 },
    { "a range beyond the pieces", "2 % from 0 K to 1000 K", 0.02 * 12e-6 },
};

START_TEST(uncertainty)
{
    char text[512];
    snprintf(text, sizeof text, HEAD "# uncertainty: %s\nfrom [K],to [K],power 0\n100,300,12\n", sizes[_i].uncertainty);
    kel_record *record = good(text, NULL);
    ck_assert_lre_for(sizes[_i].label, coefficient(record, 200).u, sizes[_i].u, 14);
    /* Shared by the whole curve: the integral's grows with the width. */
    ck_assert_lre_for(sizes[_i].label, integral(record, 150, 250).u, 100 * sizes[_i].u, 14);
    ck_assert_uint_eq(kel_record_content(record)->piece_count, 1);
    kel_record_free(record);
}
END_TEST

START_TEST(lot_only)
{
    kel_record *record = good(HEAD "# lot spread: 1 % from 50 K to 200 K\n# lot spread: 0.2 [1e-6/K] from 200 K to "
                                   "300 K\nfrom [K],to [K],power 0\n100,300,12\n", NULL);
    const kel_content *c = kel_record_content(record);
    ck_assert_int_eq(c->variance, KEL_VARIANCE_NONE);
    ck_assert_uint_eq(c->mode_count, 2);
    ck_assert_str_eq(c->lot_spread, "1 % from 50 K to 200 K; 0.2 [1e-6/K] from 200 K to 300 K");
    ck_assert_str_eq(c->modes[1].label, "lot spread absolute 2e-7 1/K");
    ck_assert_lre(coefficient(record, 150).u_lot, 0.12e-6, 14);
    ck_assert_lre(coefficient(record, 250).u_lot, 0.2e-6, 14);
    kel_record_free(record);
}
END_TEST

static TCase *
loops(void)
{
    TCase *tcase = tcase_create("sizes");
    tcase_add_loop_test(tcase, uncertainty, 0, KEL_LENGTH(sizes));
    return tcase;
}

KEL_TCASE(lots, lot_only)
KEL_TEST_MAIN("coefficients_modes", loops, lots)
