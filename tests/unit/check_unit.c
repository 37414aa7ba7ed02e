/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Units: every spelling that is taken, with its exact factor and the name that reads back; what is refused, where and
   how. */
#include "unit.h"

#include <kelspan.h>
#include <math.h>
#include <string.h>

enum { T = KEL_DIM_TEMPERATURE, D = KEL_DIM_DIFFERENCE, A = KEL_DIM_PER_KELVIN, E = KEL_DIM_ONE, L = KEL_DIM_LENGTH };

static const struct {
    const char *text;
    int dimension;
    long offset_e2, numerator, denominator;
    int exponent;
    const char *name;
} units[] = {
    /* temperatures */
    { "K", T, 0, 1, 1, 0, "K" },
    { "kelvin", T, 0, 1, 1, 0, "K" },
    { "Kelvin", T, 0, 1, 1, 0, "K" },
    { "\xE2\x84\xAA", T, 0, 1, 1, 0, "K" },
    { "degK", T, 0, 1, 1, 0, "K" },
    { " K ", T, 0, 1, 1, 0, "K" },
    { "°C", T, 27315, 1, 1, 0, "degC" },
    { "degC", T, 27315, 1, 1, 0, "degC" },
    { "C", T, 27315, 1, 1, 0, "degC" },
    { "deg C", T, 27315, 1, 1, 0, "degC" },
    { "deg. C", T, 27315, 1, 1, 0, "degC" },
    { "℃", T, 27315, 1, 1, 0, "degC" },
    { "Celsius", T, 27315, 1, 1, 0, "degC" },
    { "degrees Celsius", T, 27315, 1, 1, 0, "degC" },
    { "DEGC", T, 27315, 1, 1, 0, "degC" },
    { "° C", T, 27315, 1, 1, 0, "degC" },
    { "ºC", T, 27315, 1, 1, 0, "degC" },
    { "°F", T, 45967, 5, 9, 0, "degF" },
    { "F", T, 45967, 5, 9, 0, "degF" },
    { "degF", T, 45967, 5, 9, 0, "degF" },
    { "Deg F", T, 45967, 5, 9, 0, "degF" },
    { "℉", T, 45967, 5, 9, 0, "degF" },
    { "Fahrenheit", T, 45967, 5, 9, 0, "degF" },
    { "R", T, 0, 5, 9, 0, "degR" },
    { "°R", T, 0, 5, 9, 0, "degR" },
    { "degR", T, 0, 5, 9, 0, "degR" },
    { "Rankine", T, 0, 5, 9, 0, "degR" },
    /* coefficients */
    { "1e-6/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "1E-6/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "10^-6/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "10^-6 K^-1", A, 0, 1, 1, -6, "1e-6/K" },
    { "10⁻⁶ K⁻¹", A, 0, 1, 1, -6, "1e-6/K" },
    { "10⁻⁶/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "10**-6/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "10^−6/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "10^(-6)/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "x10^-6/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "×10⁻⁶/°C", A, 0, 1, 1, -6, "1e-6/degC" },
    { "x 1e-6 1/K", A, 0, 1, 1, -6, "1e-6/K" },
    { "1e-6 per K", A, 0, 1, 1, -6, "1e-6/K" },
    { "1e-5/K", A, 0, 1, 1, -5, "1e-5/K" },
    { "ppm/K", A, 0, 1, 1, -6, "ppm/K" },
    { "ppm/degC", A, 0, 1, 1, -6, "ppm/degC" },
    { "PPM/°C", A, 0, 1, 1, -6, "ppm/degC" },
    { "ppm/degF", A, 0, 18, 1, -7, "ppm/degF" },
    { "ppm per degF", A, 0, 18, 1, -7, "ppm/degF" },
    { "ppb/K", A, 0, 1, 1, -9, "ppb/K" },
    { "um/(m.K)", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/(m K)", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/(m·K)", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/(m*K)", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/(m⋅K)", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/(m-K)", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/m-K", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/m/K", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/m K", A, 0, 1, 1, -6, "um/(m.K)" },
    { "µm/m°C", A, 0, 1, 1, -6, "um/(m.degC)" },
    { "μm/m·°C", A, 0, 1, 1, -6, "um/(m.degC)" },
    { "µm/m/°C", A, 0, 1, 1, -6, "um/(m.degC)" },
    { "μm·m⁻¹·K⁻¹", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um m^-1 K^-1", A, 0, 1, 1, -6, "um/(m.K)" },
    { "um/m K^-1", A, 0, 1, 1, -6, "um/(m.K)" },
    { "mm/(m K)", A, 0, 1, 1, -3, "mm/(m.K)" },
    { "m/(m K)", A, 0, 1, 1, 0, "m/(m.K)" },
    { "1/MK", A, 0, 1, 1, -6, "1/MK" },
    { "MK^-1", A, 0, 1, 1, -6, "1/MK" },
    { "MK⁻¹", A, 0, 1, 1, -6, "1/MK" },
    { "uin/in/degF", A, 0, 18, 1, -7, "uin/(in.degF)" },
    { "uin/(in.degF)", A, 0, 18, 1, -7, "uin/(in.degF)" },
    { "µin/(in·°F)", A, 0, 18, 1, -7, "uin/(in.degF)" },
    { "uin/in-F", A, 0, 18, 1, -7, "uin/(in.degF)" },
    { "μin./in./°F", A, 0, 18, 1, -7, "uin/(in.degF)" },
    { "UIN/IN/DEGF", A, 0, 18, 1, -7, "uin/(in.degF)" },
    { "in/in/degF", A, 0, 18, 1, -1, "in/(in.degF)" },
    { "1e-6 in/in.°F", A, 0, 18, 1, -7, "1e-6 in/(in.degF)" },
    { "in/ft/degF", A, 0, 15, 1, -2, "in/(ft.degF)" },
    { "1/degR", A, 0, 18, 1, -1, "1/degR" },
    { "%/K", A, 0, 1, 1, -2, "%/K" },
    { "1/K", A, 0, 1, 1, 0, "1/K" },
    { "K^-1", A, 0, 1, 1, 0, "1/K" },
    { "/K", A, 0, 1, 1, 0, "1/K" },
    { "per degC", A, 0, 1, 1, 0, "1/degC" },
    { "/°F", A, 0, 18, 1, -1, "1/degF" },
    { "microstrain/degF", A, 0, 18, 1, -7, "microstrain/degF" },
    /* pure numbers */
    { "1", E, 0, 1, 1, 0, "1" },
    { "%", E, 0, 1, 1, -2, "%" },
    { "percent", E, 0, 1, 1, -2, "%" },
    { "ppm", E, 0, 1, 1, -6, "ppm" },
    { "ppb", E, 0, 1, 1, -9, "ppb" },
    { "1e-5", E, 0, 1, 1, -5, "1e-5" },
    { "1e-6", E, 0, 1, 1, -6, "1e-6" },
    { "10^-5", E, 0, 1, 1, -5, "1e-5" },
    { "x10^-5", E, 0, 1, 1, -5, "1e-5" },
    { "× 10⁻⁵", E, 0, 1, 1, -5, "1e-5" },
    { "10⁻¹²", E, 0, 1, 1, -12, "1e-12" },
    { "1/1000", E, 0, 1, 1, -3, "1e-3" },
    { "permille", E, 0, 1, 1, -3, "permille" },
    { "‰", E, 0, 1, 1, -3, "permille" },
    { "microstrain", E, 0, 1, 1, -6, "microstrain" },
    { "ustrain", E, 0, 1, 1, -6, "microstrain" },
    { "µε", E, 0, 1, 1, -6, "microstrain" },
    { "με", E, 0, 1, 1, -6, "microstrain" },
    { "um/m", E, 0, 1, 1, -6, "um/m" },
    { "mm/m", E, 0, 1, 1, -3, "mm/m" },
    { "m/m", E, 0, 1, 1, 0, "m/m" },
    { "uin/in", E, 0, 1, 1, -6, "uin/in" },
    { "mil/in", E, 0, 1, 1, -3, "mil/in" },
    { "in/in", E, 0, 1, 1, 0, "in/in" },
    { "in/ft", E, 0, 25, 3, -2, "in/ft" },
    { "in/100 ft", E, 0, 25, 3, -4, "in/100 ft" },
    { "in/100ft", E, 0, 25, 3, -4, "in/100 ft" },
    { "in. per 100 ft.", E, 0, 25, 3, -4, "in/100 ft" },
    { "inches/(100 feet)", E, 0, 25, 3, -4, "in/100 ft" },
    /* lengths */
    { "m", L, 0, 1, 1, 0, "m" },
    { "km", L, 0, 1, 1, 3, "km" },
    { "cm", L, 0, 1, 1, -2, "cm" },
    { "mm", L, 0, 1, 1, -3, "mm" },
    { "um", L, 0, 1, 1, -6, "um" },
    { "µm", L, 0, 1, 1, -6, "um" },
    { "μm", L, 0, 1, 1, -6, "um" },
    { "micron", L, 0, 1, 1, -6, "um" },
    { "nm", L, 0, 1, 1, -9, "nm" },
    { "in", L, 0, 254, 1, -4, "in" },
    { "in.", L, 0, 254, 1, -4, "in" },
    { "inch", L, 0, 254, 1, -4, "in" },
    { "ft", L, 0, 3048, 1, -4, "ft" },
    { "mil", L, 0, 254, 1, -7, "mil" },
    { "uin", L, 0, 254, 1, -10, "uin" },
    { "µin", L, 0, 254, 1, -10, "uin" },
};

static bool
same_unit(const kel_unit *a, const kel_unit *b)
{
    return a->dimension == b->dimension && a->offset_e2 == b->offset_e2 && a->numerator == b->numerator &&
           a->denominator == b->denominator && a->exponent == b->exponent && strcmp(a->name, b->name) == 0;
}

START_TEST(spelling)
{
    const char *text = units[_i].text;
    kel_unit u, back;
    kel_error err = { KEL_OK, 0, 0, "" };
    KEL_REQUIRE(kel_unit_parse_any(&u, text, strlen(text), &err) == KEL_OK, "%s", err.message);
    ck_assert_msg((int)u.dimension == units[_i].dimension, "'%s': dimension %d", text, u.dimension);
    ck_assert_msg(u.offset_e2 == units[_i].offset_e2 && u.numerator == units[_i].numerator &&
                      u.denominator == units[_i].denominator && u.exponent == units[_i].exponent,
                  "'%s': offset %ld/100, factor %ld/%ld 10^%d", text, (long)u.offset_e2, (long)u.numerator,
                  (long)u.denominator, u.exponent);
    ck_assert_str_eq(u.name, units[_i].name);
    KEL_REQUIRE(kel_unit_parse(&back, u.dimension, u.name, strlen(u.name), &err) == KEL_OK, "%s", err.message);
    ck_assert_msg(same_unit(&u, &back), "'%s': its name '%s' reads back as another unit", text, u.name);
    /* Every other dimension refuses it; a difference takes a temperature's name and no offset. */
    for (int d = T; d <= L; d++) {
        kel_status status = kel_unit_parse(&back, (kel_dimension)d, text, strlen(text), &err);
        if (d == units[_i].dimension)
            ck_assert_msg(status == KEL_OK && same_unit(&u, &back), "'%s' as what it is: status %d", text, status);
        else if (d == D && units[_i].dimension == T)
            ck_assert_msg(status == KEL_OK && back.offset_e2 == 0 && back.numerator == u.numerator,
                          "'%s' as a difference", text);
        else
            ck_assert_msg(status == KEL_E_UNIT && strstr(err.message, "expected") != NULL,
                          "'%s' as dimension %d: status %d", text, d, status);
    }
}
END_TEST

static const struct { const char *text; int dimension; size_t column; const char *says; } refused[] = {
    { "", A, 1, "a unit is missing, for example 1e-6/K" }, { "  ", T, 1, "a unit is missing, for example K or degC" },
    { "foo", A, 1, "'foo' at byte 1" }, { "1e-6/foo", A, 6, "'foo' at byte 6" }, { "1e-6/Kx", A, 6, "'Kx' at byte 6" },
    { "um/(m.K", A, 8, "missing at its end" }, { "1e-6/", A, 6, "missing at its end" },
    { "1e-6/K)", A, 7, "')' at byte 7" },
    { "K2", T, 2, "'2' at byte 2" }, { "1e-6/K/", A, 8, "missing at its end" }, { "um/(m/K)", A, 6, "'/K)' at byte 6" },
    { "um//m", E, 4, "'/m' at byte 4" }, { "K-1", A, 2, "'-1' at byte 2" }, { "10-6/K", A, 3, "'-6/K' at byte 3" },
    { "mK", D, 1, "'mK' at byte 1" }, { "um/mK", A, 4, "'mK' at byte 4" }, { "k", T, 1, "'k' at byte 1" },
    { "c", T, 1, "'c' at byte 1" },
    { "10e-6/K", A, 1, "byte 1" }, { "5/K", A, 1, "byte 1" }, { "2e-6/K", A, 1, "byte 1" },
    { "-1e-6/K", A, 1, "byte 1" },
    { "1e400/K", A, 1, "byte 1" }, { "1/10^-6 K", A, 3, "byte 3" }, { "xK", T, 1, "byte 1" },
    { "10^/K", A, 4, "byte 4" }, { "K^0", A, 2, "byte 2" },
    { "um\x01", L, 3, "\\x01" }, { "ppt", E, 1, "byte 1" }, { "1,8", E, 2, "byte 2" },
    { "x10^6/K", A, 1, "for printed numbers times 1e-6 write 1e-6/K" }, { "10^6/K", A, 1, "write 1e-6/K" },
    { "1e6", E, 1, "write 1e-6" },
    { "x 10⁵", E, 1, "times 1e-5 write 1e-5" }, { "10^6 um/(m.K)", A, 1, "write 1e-6 um/(m.K)" },
    { "um", A, 1, "'um' is a length, expected a coefficient such as 1e-6/K" },
    { "degC", A, 1, "'degC' is a temperature, expected a coefficient" },
    { "1e-6/K", E, 1, "'1e-6/K' is a coefficient, expected a pure number such as 1e-6 or %" },
    { "%", L, 1, "'%' is a pure number, expected a length such as mm" },
    { "ppm", T, 1, "'ppm' is a pure number, expected a temperature such as K or degC" },
    { "um/K", A, 1, "another dimension, expected a coefficient" }, { "m^2", L, 1, "another dimension" },
    { "MK", T, 1, "no plain unit of temperature" }, { "1 K", D, 1, "no plain unit of temperature" },
    { "K.m.m.m.m.m.m.m.m", A, 17, "byte 17" }, { "1e-30 um/(m.m.1000000000000.K)", A, 1, "more factors" },
};

START_TEST(refusals)
{
    const char *text = refused[_i].text;
    kel_unit u;
    kel_error err = { KEL_OK, 7, 99, "" };
    kel_status status = kel_unit_parse(&u, (kel_dimension)refused[_i].dimension, text, strlen(text), &err);
    ck_assert_msg(status == KEL_E_UNIT && err.code == status && err.line == 0, "'%s': status %d", text, status);
    ck_assert_msg(err.column == refused[_i].column, "'%s': column %zu, expected %zu: %s", text, err.column,
                  refused[_i].column, err.message);
    ck_assert_msg(strstr(err.message, refused[_i].says) != NULL, "'%s': %s", text, err.message);
    ck_assert_int_eq(kel_unit_parse(&u, (kel_dimension)refused[_i].dimension, text, strlen(text), NULL), KEL_E_UNIT);
}
END_TEST

START_TEST(any_and_bad_arguments)
{
    kel_unit u;
    kel_error err;
    ck_assert_int_eq(kel_unit_parse_any(&u, "um/K", 4, &err), KEL_E_UNIT);
    ck_assert_ptr_nonnull(strstr(err.message, "no temperature, coefficient, pure number or length"));
    ck_assert_int_eq(kel_unit_parse(&u, (kel_dimension)17, "K", 1, &err), KEL_E_ARGUMENT);
    /* Only the n bytes count. */
    ck_assert_int_eq(kel_unit_parse_any(&u, "mm/m", 2, &err), KEL_OK);
    ck_assert_int_eq(u.dimension, KEL_DIM_LENGTH);
    ck_assert_int_eq(kel_unit_parse_any(&u, "1e-6/K", 4, &err), KEL_OK);
    ck_assert_int_eq(u.dimension, KEL_DIM_ONE);
}
END_TEST

/* Every prefix of every spelling, and every one with a byte changed: accepted or refused, within its bytes (under a
   sanitizer this is the point), and what is accepted reads back. */
START_TEST(mutilated)
{
    for (int i = 0; i < KEL_LENGTH(units); i++) {
        size_t length = strlen(units[i].text);
        for (size_t n = 0; n <= length; n++)
            for (int change = 0; change < 5; change++) {
                char *text = malloc(n + 1);
                KEL_REQUIRE(text != NULL, "no memory");
                memcpy(text, units[i].text, n);
                if (n > 0 && change > 0)
                    text[n / 2] = "\xFF(-^"[change - 1];
                kel_unit u, back;
                kel_error err;
                text = realloc(text, n > 0 ? n : 1);
                kel_status status = kel_unit_parse_any(&u, text, n, &err);
                if (status == KEL_OK)
                    KEL_REQUIRE(kel_unit_parse_any(&back, u.name, strlen(u.name), &err) == KEL_OK &&
                                    same_unit(&u, &back),
                                "'%s'", u.name);
                else
                    KEL_REQUIRE(status == KEL_E_UNIT && err.column >= 1 && err.column <= n + 1, "%s", err.message);
                free(text);
            }
    }
}
END_TEST

/* si -> unit -> si returns within the rounding of the way there: half an ulp of the printed value, carried back, plus
   half an ulp. */
START_TEST(from_si_and_back)
{
    uint64_t s = 88172645463325252u;
    for (int i = 0; i < KEL_LENGTH(units); i++) {
        kel_unit u;
        kel_error err;
        ck_assert(kel_unit_parse_any(&u, units[i].text, strlen(units[i].text), &err) == KEL_OK);
        for (int j = 0; j < 50; j++) {
            s ^= s << 13, s ^= s >> 7, s ^= s << 17;
            double si = (double)(s >> 11) * 0x1p-53 * 2000.0, value = kel_unit_from_si(&u, si),
                   back = kel_unit_to_si(&u, value);
            double spacing = nextafter(fabs(value), INFINITY) - fabs(value);
            double scale = (double)u.numerator / (double)u.denominator * pow(10.0, u.exponent);
            double limit = 0.5 * spacing * scale * 1.000001 + 0.5 * (nextafter(si, INFINITY) - si);
            ck_assert_abs_for(u.name, back, si, limit, "SI");
        }
    }
}
END_TEST

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, spelling, 0, KEL_LENGTH(units));
    tcase_add_loop_test(c, refusals, 0, KEL_LENGTH(refused));
    return c;
}

KEL_TCASE(cases, any_and_bad_arguments, mutilated, from_si_and_back)

KEL_TEST_MAIN("unit", tables, cases)
