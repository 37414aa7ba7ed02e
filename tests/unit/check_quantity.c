/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A number and its unit in one word, as on a command line. */
#include "unit.h"

#include <kelspan.h>
#include <math.h>
#include <string.h>

enum { T = KEL_DIM_TEMPERATURE, D = KEL_DIM_DIFFERENCE, A = KEL_DIM_PER_KELVIN, E = KEL_DIM_ONE, L = KEL_DIM_LENGTH };

/* Expected: the double nearest to the exact value. */
static const struct { const char *text; int dimension; double si; const char *unit; } quantities[] = {
    { "77K", T, 77.0, "K" }, { "77 K", T, 77.0, "K" }, { " 77\tK ", T, 77.0, "K" }, { "7.7e1K", T, 77.0, "K" }, { "0K", T, 0.0, "K" },
    { "-0.0K", T, 0.0, "K" }, { "-0K", T, 0.0, "K" }, { "-459.67F", T, 0.0, "degF" }, { "-273.15degC", T, 0.0, "degC" }, { "0R", T, 0.0, "degR" },
    { "5e-324K", T, 0x1p-1074, "K" }, { "-321degF", T, 13867.0 / 180.0, "degF" }, { "-321F", T, 13867.0 / 180.0, "degF" },
    { "-321°F", T, 13867.0 / 180.0, "degF" }, { "−321 °F", T, 13867.0 / 180.0, "degF" }, { "68degF", T, 293.15, "degF" },
    { "20degC", T, 293.15, "degC" }, { "20C", T, 293.15, "degC" }, { "20 deg C", T, 293.15, "degC" }, { "+20°C", T, 293.15, "degC" },
    { "540degR", T, 300.0, "degR" }, { "540R", T, 300.0, "degR" },
    /* The same names as differences have no offset, and may be negative. */
    { "10K", D, 10.0, "K" }, { "10degC", D, 10.0, "degC" }, { "18degF", D, 10.0, "degF" }, { "-18F", D, -10.0, "degF" }, { "-1K", D, -1.0, "K" },
    { "250mm", L, 0.25, "mm" }, { "12.5in", L, 0.3175, "in" }, { "1m", L, 1.0, "m" }, { "40um", L, 4e-5, "um" }, { "40µm", L, 4e-5, "um" },
    { "1ft", L, 0.3048, "ft" }, { "2cm", L, 0.02, "cm" }, { "5mil", L, 0.000127, "mil" }, { "-3 mm", L, -0.003, "mm" },
    { "16.7e-6/K", A, 16.7e-6, "1/K" }, { "16.7 1e-6/K", A, 16.7e-6, "1e-6/K" }, { "16.7 um/(m.K)", A, 16.7e-6, "um/(m.K)" },
    { "1/degF", A, 1.8, "1/degF" }, { "9.3ppm/degF", A, 1.674e-5, "ppm/degF" },
    { "0.415%", E, 0.00415, "%" }, { "415e-5 1", E, 0.00415, "1" }, { "300ppm", E, 3e-4, "ppm" },
};

START_TEST(good)
{
    double x = (double)NAN;
    kel_unit u;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel_quantity_parse(&x, &u, (kel_dimension)quantities[_i].dimension, quantities[_i].text, &err);
    ck_assert_msg(status == KEL_OK, "'%s': %s", quantities[_i].text, err.message);
    ck_assert_ulp_for(quantities[_i].text, x, quantities[_i].si, 0);
    ck_assert_msg(x != 0.0 || !signbit(x), "'%s': minus zero", quantities[_i].text);
    ck_assert_str_eq(u.name, quantities[_i].unit);
    ck_assert_int_eq(kel_quantity_parse(&x, NULL, (kel_dimension)quantities[_i].dimension, quantities[_i].text, NULL), KEL_OK);
}
END_TEST

static const struct { const char *text; int dimension; kel_status status; size_t column; const char *says; } refused[] = {
    { "20", T, KEL_E_UNIT, 3, "20 needs a unit, for example 20 K or 20 degC" }, { " -321 ", T, KEL_E_UNIT, 6, "-321 needs a unit, for example -321 K" },
    { "10", D, KEL_E_UNIT, 3, "10 needs a unit, for example 10 K or 10 degC" }, { "250", L, KEL_E_UNIT, 4, "250 needs a unit, for example 250 mm or 250 in" },
    { "0.5", E, KEL_E_UNIT, 4, "0.5 needs a unit, for example 0.5 ppm or 0.5 %" },
    { "16.7e-6", A, KEL_E_UNIT, 8, "needs a unit" },
    { "", T, KEL_E_SYNTAX, 1, "a number with its unit is missing, for example 20 K" }, { "  ", L, KEL_E_SYNTAX, 3, "for example 20 mm" },
    { "K", T, KEL_E_SYNTAX, 1, "'K' does not start with a number" }, { "nanK", T, KEL_E_SYNTAX, 1, "'nanK'" }, { "infK", T, KEL_E_SYNTAX, 1, "'infK'" },
    { "cold", T, KEL_E_SYNTAX, 1, "'cold'" }, { "20,5degC", T, KEL_E_UNIT, 3, "',5degC'" }, { "0x14K", T, KEL_E_UNIT, 2, "'x14K'" },
    { "20furlong", L, KEL_E_UNIT, 3, "'furlong'" }, { "77 K.", T, KEL_E_UNIT, 6, "missing at its end" }, { "77kelvinx", T, KEL_E_UNIT, 3, "'kelvinx'" },
    { "20mm", T, KEL_E_UNIT, 3, "'mm' is a length, expected a temperature such as K or degC" },
    { "20K", L, KEL_E_UNIT, 3, "'K' is a temperature, expected a length such as mm" },
    { "20 ppm/K", E, KEL_E_UNIT, 4, "'ppm/K' is a coefficient, expected a pure number" },
    { "-1K", T, KEL_E_RANGE, 1, "-1 K is below absolute zero, 0 K" }, { "-1e-300K", T, KEL_E_RANGE, 1, "below absolute zero" },
    { " -500degF", T, KEL_E_RANGE, 2, "-500 degF is below absolute zero, -459.67 degF" },
    { "-459.671F", T, KEL_E_RANGE, 1, "-459.671 degF is below absolute zero, -459.67 degF" },
    { "-273.16C", T, KEL_E_RANGE, 1, "-273.16 degC is below absolute zero, -273.15 degC" },
    { "1e400K", T, KEL_E_RANGE, 1, "1e400 K is beyond the range of a double" },
};

START_TEST(bad)
{
    double x = 1.0;
    kel_unit u;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel_quantity_parse(&x, &u, (kel_dimension)refused[_i].dimension, refused[_i].text, &err);
    ck_assert_msg(status == refused[_i].status && err.code == status, "'%s': status %d: %s", refused[_i].text, status, err.message);
    ck_assert_msg(err.column == refused[_i].column, "'%s': column %zu, expected %zu", refused[_i].text, err.column, refused[_i].column);
    ck_assert_msg(strstr(err.message, refused[_i].says) != NULL, "'%s': %s", refused[_i].text, err.message);
    ck_assert_msg(isnan(x), "'%s': the output is %g", refused[_i].text, x);
    ck_assert_int_eq(kel_quantity_parse(&x, &u, (kel_dimension)refused[_i].dimension, refused[_i].text, NULL), status);
}
END_TEST

START_TEST(bad_arguments)
{
    double x;
    ck_assert_int_eq(kel_quantity_parse(&x, NULL, KEL_DIM_LENGTH, NULL, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_quantity_parse(&x, NULL, (kel_dimension)-1, "1m", NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_quantity_parse(&x, NULL, (kel_dimension)5, "1m", NULL), KEL_E_ARGUMENT);
}
END_TEST

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, good, 0, KEL_LENGTH(quantities));
    tcase_add_loop_test(c, bad, 0, KEL_LENGTH(refused));
    return c;
}

KEL_TCASE(cases, bad_arguments)

KEL_TEST_MAIN("quantity", tables, cases)
