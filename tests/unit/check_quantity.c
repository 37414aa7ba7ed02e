/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers with units: a column's numbers, and number and unit in one word, as on a command line. */
#include "unit.h"

#include <kelspan.h>
#include <math.h>
#include <string.h>

__extension__ typedef __int128 i128;

enum { T = KEL_DIM_TEMPERATURE, D = KEL_DIM_DIFFERENCE, A = KEL_DIM_PER_KELVIN, E = KEL_DIM_ONE, L = KEL_DIM_LENGTH };

/* Expected: the double nearest to the exact value. */
static const struct { const char *text; int dimension; double si; const char *unit; } quantities[] = {
    { "77K", T, 77.0, "K" }, { "77 K", T, 77.0, "K" }, { " 77\tK ", T, 77.0, "K" }, { "7.7e1K", T, 77.0, "K" },
    { "0K", T, 0.0, "K" },
    { "-0.0K", T, 0.0, "K" }, { "-0K", T, 0.0, "K" }, { "-459.67F", T, 0.0, "degF" }, { "-273.15degC", T, 0.0, "degC" },
    { "0R", T, 0.0, "degR" },
    { "5e-324K", T, 0x1p-1074, "K" }, { "-321degF", T, 13867.0 / 180.0, "degF" },
    { "-321F", T, 13867.0 / 180.0, "degF" },
    { "-321°F", T, 13867.0 / 180.0, "degF" }, { "−321 °F", T, 13867.0 / 180.0, "degF" },
    { "68degF", T, 293.15, "degF" },
    { "20degC", T, 293.15, "degC" }, { "20C", T, 293.15, "degC" }, { "20 deg C", T, 293.15, "degC" },
    { "+20°C", T, 293.15, "degC" },
    { "540degR", T, 300.0, "degR" }, { "540R", T, 300.0, "degR" },
    /* The same names as differences have no offset, and may be negative. */
    { "10K", D, 10.0, "K" }, { "10degC", D, 10.0, "degC" }, { "18degF", D, 10.0, "degF" }, { "-18F", D, -10.0, "degF" },
    { "-1K", D, -1.0, "K" },
    { "250mm", L, 0.25, "mm" }, { "12.5in", L, 0.3175, "in" }, { "1m", L, 1.0, "m" }, { "40um", L, 4e-5, "um" },
    { "40µm", L, 4e-5, "um" },
    { "1ft", L, 0.3048, "ft" }, { "2cm", L, 0.02, "cm" }, { "5mil", L, 0.000127, "mil" }, { "-3 mm", L, -0.003, "mm" },
    { "16.7e-6/K", A, 16.7e-6, "1/K" }, { "16.7 1e-6/K", A, 16.7e-6, "1e-6/K" },
    { "16.7 um/(m.K)", A, 16.7e-6, "um/(m.K)" },
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
    ck_assert_int_eq(kel_quantity_parse(&x, NULL, (kel_dimension)quantities[_i].dimension, quantities[_i].text, NULL),
                     KEL_OK);
}
END_TEST

static const struct {
    const char *text;
    int dimension;
    kel_status status;
    size_t column;
    const char *says;
} refused[] = {
    { "20", T, KEL_E_UNIT, 3, "20 needs a unit, for example 20 K or 20 degC" },
    { " -321 ", T, KEL_E_UNIT, 6, "-321 needs a unit, for example -321 K" },
    { "10", D, KEL_E_UNIT, 3, "10 needs a unit, for example 10 K or 10 degC" },
    { "250", L, KEL_E_UNIT, 4, "250 needs a unit, for example 250 mm or 250 in" },
    { "0.5", E, KEL_E_UNIT, 4, "0.5 needs a unit, for example 0.5 ppm or 0.5 %" },
    { "16.7e-6", A, KEL_E_UNIT, 8, "needs a unit" },
    { "", T, KEL_E_SYNTAX, 1, "a number with its unit is missing, for example 20 K" },
    { "  ", L, KEL_E_SYNTAX, 3, "for example 20 mm" },
    { "K", T, KEL_E_SYNTAX, 1, "'K' does not start with a number" },
    { "nanK", T, KEL_E_SYNTAX, 1, "'nanK'" },
    { "infK", T, KEL_E_SYNTAX, 1, "'infK'" },
    { "cold", T, KEL_E_SYNTAX, 1, "'cold'" },
    { "20,5degC", T, KEL_E_UNIT, 3, "',5degC'" },
    { "0x14K", T, KEL_E_UNIT, 3, "'14K' at byte 2" },
    { "20furlong", L, KEL_E_UNIT, 3, "'furlong'" },
    { "77 K.", T, KEL_E_UNIT, 6, "missing at its end" },
    { "77kelvinx", T, KEL_E_UNIT, 3, "'kelvinx'" },
    { "20mm", T, KEL_E_UNIT, 3, "'mm' is a length, expected a temperature such as K or degC" },
    { "20K", L, KEL_E_UNIT, 3, "'K' is a temperature, expected a length such as mm" },
    { "20 ppm/K", E, KEL_E_UNIT, 4, "'ppm/K' is a coefficient, expected a pure number" },
    { "-1K", T, KEL_E_RANGE, 1, "-1 K is below absolute zero, 0 K" },
    { "-1e-300K", T, KEL_E_RANGE, 1, "below absolute zero" },
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
    ck_assert_msg(status == refused[_i].status && err.code == status, "'%s': status %d: %s", refused[_i].text, status,
                  err.message);
    ck_assert_msg(err.column == refused[_i].column, "'%s': column %zu, expected %zu", refused[_i].text, err.column,
                  refused[_i].column);
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

/* ---- numbers in units ---- */

static double
read_in(const char *unit, const char *text, double *resolution)
{
    kel_unit u;
    double x = 0.0;
    kel_error err = { KEL_OK, 0, 0, "" };
    KEL_REQUIRE(kel_unit_parse_any(&u, unit, strlen(unit), &err) == KEL_OK, "%s", err.message);
    KEL_REQUIRE(kel_unit_read(&x, resolution, &u, text, strlen(text), &err) == KEL_OK, "%s", err.message);
    return x;
}

/* Exact factors: the expected doubles are the nearest to the exact values. */
static const struct { const char *unit, *text; double si, resolution; } values[] = {
    { "degF", "68", 293.15, 5.0 / 9.0 }, { "degF", "-459.67", 0.0, 0x1.6c16c16c16c17p-8 },
    { "degF", "212.0", 373.15, 0x1.c71c71c71c71cp-5 },
    { "degF", "70", 52967.0 / 180.0, 5.0 / 9.0 }, { "degC", "20", 293.15, 1.0 }, { "degC", "-273.15", 0.0, 0.01 },
    { "degC", "20.00", 293.15, 0.01 },
    { "K", "77", 77.0, 1.0 }, { "K", "-0.0", 0.0, 0.1 }, { "degR", "540", 300.0, 5.0 / 9.0 },
    { "1e-6/K", "16.7", 16.7e-6, 1e-7 }, { "1e-6/K", "1.25e-3", 1.25e-9, 1e-11 }, { "1/degF", "1", 1.8, 1.8 },
    { "1/degF", "1e-6", 1.8e-6, 1.8e-6 },
    { "uin/in/degF", "6.4", 1.152e-5, 1.8e-7 }, { "ppm/degF", "-0.5", -9e-7, 1.8e-7 },
    { "1/MK", "23.1", 2.31e-5, 1e-7 },
    { "%", "-0.415", -0.00415, 1e-5 }, { "in/100 ft", "1", 1.0 / 1200.0, 1.0 / 1200.0 },
    { "in/100 ft", "12.00", 0.01, 1.0 / 120000.0 },
    { "in", "12.5", 0.3175, 0.00254 }, { "ft", "1", 0.3048, 0.3048 }, { "mil", "5", 0.000127, 2.54e-5 },
    { "um", "300", 3e-4, 1e-6 },
    { "km", "1.0", 1000.0, 100.0 },
};

START_TEST(good_value)
{
    double resolution, si = read_in(values[_i].unit, values[_i].text, &resolution);
    char label[64];
    snprintf(label, sizeof label, "%s %s", values[_i].text, values[_i].unit);
    ck_assert_ulp_for(label, si, values[_i].si, 0);
    KEL_REQUIRE(!signbit(si) || si < 0.0, "%s: minus zero", label);
    ck_assert_ulp_for(label, resolution, values[_i].resolution, 0);
}
END_TEST

/* Is g the double nearest to n/d, ties to even? g = m 2^e with m of 53 bits: |d m - n 2^-e| <= d/2 in integers (e < 0
   here). */
static bool
nearest(double g, int64_t n, int64_t d)
{
    int e;
    int64_t m = (int64_t)ldexp(frexp(g, &e), 53);
    e -= 53;
    if (m == 0)
        return n == 0;
    i128 difference = (i128)d * m - (i128)n * ((i128)1 << -e), twice = 2 * (difference < 0 ? -difference : difference);
    return twice < d || (twice == d && m % 2 == 0);
}

/* Every tenth of a degree Fahrenheit, absolute zero to 2000 degF: (i/10 + 459.67) 5/9 = (10 i + 45967)/180. And every
   hundredth of a degree Celsius. */
START_TEST(all_tenths_of_degF)
{
    kel_unit degF, degC, per_degF;
    kel_error err;
    ck_assert(kel_unit_parse_any(&degF, "degF", 4, &err) == KEL_OK &&
              kel_unit_parse_any(&degC, "degC", 4, &err) == KEL_OK &&
              kel_unit_parse_any(&per_degF, "1e-6/degF", 9, &err) == KEL_OK);
    char text[32];
    double x;
    for (int i = -4596; i <= 20000; i++) {
        snprintf(text, sizeof text, "%s%d.%d", i < 0 ? "-" : "", abs(i) / 10, abs(i) % 10);
        KEL_REQUIRE(kel_unit_read(&x, NULL, &degF, text, strlen(text), &err) == KEL_OK, "%s", err.message);
        KEL_REQUIRE(nearest(x, 10 * (int64_t)i + 45967, 180), "%s degF: %a K", text, x);
        KEL_REQUIRE(kel_unit_read(&x, NULL, &per_degF, text, strlen(text), &err) == KEL_OK, "%s", err.message);
        KEL_REQUIRE(nearest(x, 18 * (int64_t)i, 100000000), "%s in 1e-6/degF: %a 1/K", text, x);
    }
    for (int i = -27315; i <= 200000; i++) {
        snprintf(text, sizeof text, "%s%d.%02d", i < 0 ? "-" : "", abs(i) / 100, abs(i) % 100);
        KEL_REQUIRE(kel_unit_read(&x, NULL, &degC, text, strlen(text), &err) == KEL_OK, "%s", err.message);
        KEL_REQUIRE(nearest(x, (int64_t)i + 27315, 100), "%s degC: %a K", text, x);
    }
}
END_TEST

static const struct { const char *unit, *text; kel_status status; size_t column; const char *says; } bad_values[] = {
    { "degF", "-459.68", KEL_E_RANGE, 1, "-459.68 degF is below absolute zero, -459.67 degF" },
    { "degF", "-459.6700000000000000000000001", KEL_E_RANGE, 1, "below absolute zero" },
    { "degC", "-300", KEL_E_RANGE, 1, "-300 degC is below absolute zero, -273.15 degC" },
    { "K", "-1", KEL_E_RANGE, 1, "-1 K is below absolute zero, 0 K" },
    { "K", "1e400", KEL_E_RANGE, 1, "1e400 K is beyond the range of a double" },
    { "km", "1e306", KEL_E_RANGE, 1, "beyond the range" },
    { "K", "12x", KEL_E_SYNTAX, 3, "'12x' is not a number" }, { "K", "", KEL_E_SYNTAX, 1, "a number is missing" },
    { "K", "0e400", KEL_E_RANGE, 1, "beyond the range" }, /* its resolution is */
};

START_TEST(bad_value)
{
    kel_unit u;
    kel_error err = { KEL_OK, 0, 0, "" };
    double x = 1.0, resolution;
    ck_assert(kel_unit_parse_any(&u, bad_values[_i].unit, strlen(bad_values[_i].unit), &err) == KEL_OK);
    kel_status status = kel_unit_read(&x, &resolution, &u, bad_values[_i].text, strlen(bad_values[_i].text), &err);
    KEL_REQUIRE(status == bad_values[_i].status && err.column == bad_values[_i].column && isnan(x),
                "'%s %s': status %d, column %zu", bad_values[_i].text, bad_values[_i].unit, status, err.column);
    KEL_REQUIRE(strstr(err.message, bad_values[_i].says) != NULL, "%s", err.message);
    ck_assert_int_eq(kel_unit_read(&x, &resolution, &u, bad_values[_i].text, strlen(bad_values[_i].text), NULL),
                     status);
}
END_TEST

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, good, 0, KEL_LENGTH(quantities));
    tcase_add_loop_test(c, bad, 0, KEL_LENGTH(refused));
    tcase_add_loop_test(c, good_value, 0, KEL_LENGTH(values));
    tcase_add_loop_test(c, bad_value, 0, KEL_LENGTH(bad_values));
    return c;
}

KEL_TCASE(cases, bad_arguments, all_tenths_of_degF)

KEL_TEST_MAIN("quantity", tables, cases)
