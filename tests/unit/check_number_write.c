/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Doubles as text: shortest digits that read back, digits and decimals as the C library's exact conversion gives
   them. */
#include "unit.h"

#include <float.h>
#include <kelspan.h>
#include <locale.h>
#include <math.h>
#include <stdint.h>
#include <string.h>

static uint64_t
next_random(uint64_t *s)
{
    *s ^= *s << 13;
    *s ^= *s >> 7;
    *s ^= *s << 17;
    return *s;
}

static double
random_finite(uint64_t *s)
{
    double x;
    do {
        uint64_t bits = next_random(s);
        memcpy(&x, &bits, sizeof x);
    } while (!isfinite(x) || x == 0.0);
    return x;
}

/* Significant digits of a number's text and the exponent of ten of the first one, however it is laid out. */
static int
take_apart(char *digits, int *lead, const char *text)
{
    int n = 0, point = -1, before = 0;
    const char *p = text + (*text == '-');
    for (; *p != '\0' && *p != 'e'; p++) {
        if (*p == '.')
            point = before;
        else {
            before++;
            if (n > 0 || *p != '0')
                digits[n++] = *p;
        }
    }
    int places = point < 0 ? 0 : before - point;
    *lead = n - 1 - places + (*p == 'e' ? atoi(p + 1) : 0);
    digits[n] = '\0';
    return n;
}

/* ---- shortest ---- */

static const struct { double x; const char *want; } layouts[] = {
    { 0.0, "0" }, { -0.0, "-0" }, { 1.0, "1" }, { 100.0, "100" }, { -459.67, "-459.67" }, { 0.1, "0.1" },
    { 0.00123, "0.00123" },
    { 1e-5, "0.00001" }, { 0x1.4f8b588e368f0p-17, "9.999999999999999e-6" }, { 1.67e-5, "0.0000167" }, { 1e-6, "1e-6" },
    { -2.5e-7, "-2.5e-7" },
    { 1e16, "10000000000000000" }, { 99999999999999984.0, "99999999999999980" }, { 1e17, "1e17" },
    { 1.5e300, "1.5e300" },
    { 123456789012345680.0, "1.2345678901234568e17" }, { 12345678901234568.0, "12345678901234568" },
    { 9007199254740993.0, "9007199254740992" },
    { 293.15, "293.15" }, { 1.0 / 3.0, "0.3333333333333333" }, { 2.0 / 3.0, "0.6666666666666666" },
    { 5e-324, "5e-324" },
    { DBL_MAX, "1.7976931348623157e308" }, { DBL_MIN, "2.2250738585072014e-308" },
    { 9.5367431640625e-7, "9.5367431640625e-7" },
    { 1e23, "1e23" }, { 0x1.52d02c7e14af7p+76, "1.0000000000000001e23" }, { 0x1p-44, "5.684341886080802e-14" },
    { 2e22, "2e22" },
    { -0.000012345678901234567, "-0.000012345678901234568" },
    { NAN, "nan" }, { INFINITY, "inf" }, { -INFINITY, "-inf" },
};

START_TEST(layout)
{
    char text[KEL_NUMBER_SIZE];
    size_t n = kel_number_format(text, layouts[_i].x);
    ck_assert_str_eq(text, layouts[_i].want);
    ck_assert_uint_eq(n, strlen(text));
}
END_TEST

/* Reads back, is the C library's correctly rounded text of so many digits (so the nearest of its length), and with one
   digit less no text reads back: if any did, the nearest would (the interval that rounds to x lies evenly about it, but
   for powers of two). */
static void
check_shortest(double x)
{
    char text[64], want[64], digits[64], wanted[64];
    int lead, lead_wanted;
    size_t length = kel_number_format(text, x);
    KEL_REQUIRE(length < KEL_NUMBER_SIZE && text[length] == '\0', "%a: length %zu", x, length);
    KEL_REQUIRE(strtod(text, NULL) == x, "%a: '%s' reads back as %a", x, text, strtod(text, NULL));
    int n = take_apart(digits, &lead, text);
    while (n > 1 && digits[n - 1] == '0') /* of an integer written out */
        digits[--n] = '\0';
    snprintf(want, sizeof want, "%.*e", n - 1, x);
    take_apart(wanted, &lead_wanted, want);
    KEL_REQUIRE(strcmp(digits, wanted) == 0 && lead == lead_wanted, "%a: '%s', the nearest of %d digits is '%s'", x,
                text, n, want);
    int e;
    if (n > 1 && fabs(frexp(x, &e)) != 0.5) {
        snprintf(want, sizeof want, "%.*e", n - 2, x);
        KEL_REQUIRE(strtod(want, NULL) != x, "%a: '%s' is not the shortest, '%s' is shorter", x, text, want);
    }
}

START_TEST(random_patterns)
{
    uint64_t s = 88172645463325252u;
    for (int i = 0; i < 100000; i++)
        check_shortest(random_finite(&s));
    /* Values as they occur: a few decimal digits, and every binade's first and last doubles. */
    for (int i = 1; i < 30000; i++) {
        check_shortest((double)i / 100.0);
        check_shortest((double)i * 1e-9);
    }
    for (int e = -1074; e < 1024; e++) {
        double x = ldexp(1.0, e);
        char text[KEL_NUMBER_SIZE];
        kel_number_format(text, x);
        KEL_REQUIRE(strtod(text, NULL) == x, "2^%d: '%s'", e, text);
        check_shortest(nextafter(x, INFINITY));
        if (e > -1074)
            check_shortest(nextafter(x, 0.0));
    }
}
END_TEST

/* ---- digits and decimals ---- */

static const struct { double x; int digits; const char *want; } with_digits[] = {
    { 1.5, 3, "1.50" }, { 0.0, 3, "0" }, { -0.0, 3, "0" }, { 293.15, 5, "293.15" }, { 293.15, 2, "290" },
    { 999.96, 4, "1000" },
    { 9.996, 3, "10.0" }, { 0.99999, 3, "1.00" }, { 123456.0, 3, "123000" }, { 1234567.0, 3, "1.23e6" },
    { 1234567.0, 7, "1234567" },
    { 0.000123456, 3, "0.000123" }, { 0.0000123456, 3, "1.23e-5" }, { -1.67e-5, 2, "-1.7e-5" }, { 2.5, 1, "2" },
    { 3.5, 1, "4" },
    { 1e300, 1, "1e300" }, { 5e-324, 17, "4.9406564584124654e-324" }, { DBL_MAX, 17, "1.7976931348623157e308" },
    { 9.5, 1, "10" }, { 99999.5, 5, "100000" }, { 999999.5, 6, "1.00000e6" }, { NAN, 3, "nan" },
    { -INFINITY, 3, "-inf" },
};

START_TEST(digits_table)
{
    char text[KEL_NUMBER_SIZE];
    size_t n = kel_number_format_digits(text, with_digits[_i].x, with_digits[_i].digits);
    ck_assert_str_eq(text, with_digits[_i].want);
    ck_assert_uint_eq(n, strlen(text));
}
END_TEST

START_TEST(random_digits)
{
    uint64_t s = 2463534242u;
    for (int i = 0; i < 100000; i++) {
        double x =
            i % 2 == 0 ? random_finite(&s) : ldexp((double)(next_random(&s) >> 50), (int)(next_random(&s) % 40) - 25);
        if (x == 0.0)
            continue;
        int digits = 1 + (int)(next_random(&s) % 17), lead, lead_wanted;
        char text[64], want[64], got[64], wanted[64];
        size_t length = kel_number_format_digits(text, x, digits);
        KEL_REQUIRE(length == strlen(text) && length < KEL_NUMBER_SIZE, "%a: length %zu", x, length);
        snprintf(want, sizeof want, "%.*e", digits - 1, x);
        take_apart(got, &lead, text);
        take_apart(wanted, &lead_wanted, want);
        for (size_t n = strlen(got); n > strlen(wanted) && got[n - 1] == '0'; n--) /* 12300 for 123 */
            got[n - 1] = '\0';
        KEL_REQUIRE(strcmp(got, wanted) == 0 && lead == lead_wanted && (text[0] == '-') == (x < 0.0),
                    "%a: got %s, expected %s", x, text, want);
    }
}
END_TEST

static const struct { double x; int decimals; const char *want; } with_decimals[] = {
    { 0.0, 0, "0" }, { -0.0, 2, "0.00" }, { -0.001, 2, "0.00" }, { -0.005000001, 2, "-0.01" }, { 0.5, 0, "0" },
    { 1.5, 0, "2" }, { 2.5, 0, "2" },
    { 0.125, 2, "0.12" }, { 0.375, 2, "0.38" }, { 999.995, 2, "1000.00" }, { 9.9999, 3, "10.000" },
    { 293.15, 2, "293.15" },
    { 293.15, 30, "293.149999999999977262632455676794" }, { 5e-324, 30, "0.000000000000000000000000000000" },
    { 1e15, 1, "1000000000000000.0" },
    { 1e-30, 30, "0.000000000000000000000000000001" },
    { 9999999999999997902848.0, 30, "9999999999999997902848.000000000000000000000000000000" },
    { -9999999999999997902848.0, 0, "-9999999999999997902848" }, { 1e22, 3, "1.0000000000000000e22" },
    { NAN, 2, "nan" }, { INFINITY, 2, "inf" },
};

START_TEST(decimals_table)
{
    char text[KEL_NUMBER_FIXED_SIZE];
    size_t n = kel_number_format_fixed(text, with_decimals[_i].x, with_decimals[_i].decimals);
    ck_assert_str_eq(text, with_decimals[_i].want);
    ck_assert_uint_eq(n, strlen(text));
}
END_TEST

START_TEST(random_decimals)
{
    uint64_t s = 362436069u;
    for (int i = 0; i < 100000; i++) {
        /* Half of them with few bits, so that exact ties occur. */
        double x = ldexp((double)(int64_t)next_random(&s), -(int)(next_random(&s) % 130));
        if (i % 2 == 0)
            x = ldexp((double)(next_random(&s) >> 54), -(int)(next_random(&s) % 12));
        int decimals = (int)(next_random(&s) % 31);
        char text[KEL_NUMBER_FIXED_SIZE], want[128];
        snprintf(want, sizeof want, "%.*f", decimals, x);
        if (want[0] == '-' && strpbrk(want, "123456789") == NULL)
            memmove(want, want + 1, strlen(want));
        kel_number_format_fixed(text, x, decimals);
        KEL_REQUIRE(strcmp(text, want) == 0, "%a with %d decimals: got %s, expected %s", x, decimals, text, want);
    }
}
END_TEST

START_TEST(comma_locale)
{
    static const char *const names[] = { "de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8", "fr_FR.utf8",
                                         "de_DE",       "nl_NL.utf8", "it_IT.utf8" };
    for (int i = 0; i < KEL_LENGTH(names); i++)
        if (setlocale(LC_ALL, names[i]) != NULL && strcmp(localeconv()->decimal_point, ",") == 0) {
            char text[KEL_NUMBER_FIXED_SIZE];
            for (int j = 0; j < KEL_LENGTH(layouts); j++) {
                kel_number_format(text, layouts[j].x);
                ck_assert_str_eq(text, layouts[j].want);
            }
            kel_number_format_digits(text, 293.15, 5);
            ck_assert_str_eq(text, "293.15");
            kel_number_format_fixed(text, 293.15, 1);
            ck_assert_str_eq(text, "293.1");
            return;
        }
    puts("check_number_write: comma locale skipped, this system has none");
}
END_TEST

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, layout, 0, KEL_LENGTH(layouts));
    tcase_add_loop_test(c, digits_table, 0, KEL_LENGTH(with_digits));
    tcase_add_loop_test(c, decimals_table, 0, KEL_LENGTH(with_decimals));
    return c;
}

KEL_TCASE(cases, random_patterns, random_digits, random_decimals, comma_locale)

KEL_TEST_MAIN("number_write", tables, cases)
