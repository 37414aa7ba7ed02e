/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Plain decimal numbers: correctly rounded, whatever their length; everything else refused with its place. */
#include "unit.h"

#include <float.h>
#include <kelspan.h>
#include <locale.h>
#include <math.h>
#include <stdint.h>
#include <string.h>

static double
read_number(const char *text)
{
    double x = 0.0;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel_number_read(&x, text, strlen(text), &err);
    KEL_REQUIRE(status == KEL_OK, "'%.60s': %s", text, err.message);
    return x;
}

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
    } while (!isfinite(x));
    return x;
}

static const struct { const char *text; double want; } reads[] = {
    { "0", 0.0 }, { "1", 1.0 }, { "-12.5", -12.5 }, { "+3", 3.0 }, { ".5", 0.5 }, { "5.", 5.0 }, { "1e3", 1000.0 },
    { "1E-3", 1e-3 },
    { "\xE2\x88\x92" "40", -40.0 }, { "1e\xE2\x88\x92" "3", 1e-3 }, { "00012.50", 12.5 }, { "0e400", 0.0 },
    { "0.000e-9999999999999", 0.0 },
    /* At and around 2^53, where integers stop being exact. */
    { "9007199254740991", 0x1.fffffffffffffp+52 }, { "9007199254740992", 0x1p+53 }, { "9007199254740993", 0x1p+53 },
    { "9007199254740993.00000000000000000000000000001", 0x1.0000000000001p+53 },
    { "9007199254740995", 0x1.0000000000002p+53 },
    /* At the ends of the fast ways: 10^22 and 10^23, 19 and 20 digits, 5^27. */
    { "1e22", 1e22 }, { "1e23", 1e23 }, { "9007199254740991e22", 0x1.0f0cf064dd591p+126 }, { "1e-22", 1e-22 },
    { "1e-23", 1e-23 },
    { "9999999999999999999", 1e19 }, { "99999999999999999999", 1e20 },
    { "1234567890123456789e-27", 0x1.535afdf5ae86ep-30 },
    { "1234567890123456789e-28", 0x1.0f7bfe5e2538bp-33 },
    /* The range's ends. */
    { "1.7976931348623157e308", DBL_MAX }, { "179769313486231570814527423731704356798070e267", DBL_MAX },
    { "1.7976931348623158079372897140530341507993413271003782e308", DBL_MAX }, /* just below the tie that overflows */
    { "2.2250738585072014e-308", DBL_MIN }, { "2.2250738585072011e-308", 0x0.fffffffffffffp-1022 },
    { "4.9406564584124654e-324", 0x1p-1074 }, { "2.4703282292062328e-324", 0x1p-1074 },
    { "2.4703282292062327e-324", 0.0 },
    { "7.4109846876186981e-324", 0x1p-1074 }, { "7.4109846876186982e-324", 0x2p-1074 }, { "1e-400", 0.0 },
    { "1e-99999999999", 0.0 },
};

START_TEST(table)
{
    ck_assert_ulp_for(reads[_i].text, read_number(reads[_i].text), reads[_i].want, 0);
}
END_TEST

START_TEST(minus_zero_keeps_its_sign)
{
    ck_assert(signbit(read_number("-0")) && signbit(read_number("-0.0e5")) && !signbit(read_number("0")));
    ck_assert(signbit(read_number("-1e-400")));
}
END_TEST

static const struct { const char *text; kel_status status; size_t column; } refused[] = {
    { "", KEL_E_SYNTAX, 1 }, { " 1", KEL_E_SYNTAX, 1 }, { "1 ", KEL_E_SYNTAX, 2 }, { "-", KEL_E_SYNTAX, 1 },
    { ".", KEL_E_SYNTAX, 1 },
    { "1,5", KEL_E_SYNTAX, 2 }, { "1.5.2", KEL_E_SYNTAX, 4 }, { "0x10", KEL_E_SYNTAX, 2 }, { "nan", KEL_E_SYNTAX, 1 },
    { "inf", KEL_E_SYNTAX, 1 }, { "-inf", KEL_E_SYNTAX, 1 }, { "1e", KEL_E_SYNTAX, 2 }, { "1e+", KEL_E_SYNTAX, 2 },
    { "e5", KEL_E_SYNTAX, 1 },
    { "--1", KEL_E_SYNTAX, 1 }, { "12a", KEL_E_SYNTAX, 3 }, { "0.192:", KEL_E_SYNTAX, 6 }, { "1_000", KEL_E_SYNTAX, 2 },
    { "\xE2\x80\x93" "1", KEL_E_SYNTAX, 1 }, /* an en dash is no minus */
    { "1e309", KEL_E_RANGE, 1 }, { "-1e400", KEL_E_RANGE, 1 }, { "1e99999999999999999999", KEL_E_RANGE, 1 },
    { "1.7976931348623158079372897140530341507993413271003783e308", KEL_E_RANGE, 1 }, /* beyond the tie above DBL_MAX */
    { "1.7976931348623159e308", KEL_E_RANGE, 1 },
};

START_TEST(refusals)
{
    double x = 1.0;
    kel_error err = { KEL_OK, 9, 9, "" };
    kel_status status = kel_number_read(&x, refused[_i].text, strlen(refused[_i].text), &err);
    KEL_REQUIRE(status == refused[_i].status && err.code == status && err.column == refused[_i].column && err.line == 0,
                  "'%s': status %d, column %zu: %s", refused[_i].text, status, err.column, err.message);
    KEL_REQUIRE(isnan(x), "'%s': the output is %g", refused[_i].text, x);
    ck_assert(err.message[0] != '\0' && strchr(err.message, '\n') == NULL);
    ck_assert_int_eq(kel_number_read(&x, refused[_i].text, strlen(refused[_i].text), NULL), status);
}
END_TEST

START_TEST(bytes_are_bounded_and_quoted)
{
    double x;
    kel_error err;
    ck_assert_int_eq(kel_number_read(&x, "12345", 3, &err), KEL_OK);
    ck_assert_ulp(x, 123.0, 0);
    ck_assert_int_eq(kel_number_read(&x, "1\0002", 3, &err), KEL_E_SYNTAX);
    ck_assert_uint_eq(err.column, 2);
    ck_assert_ptr_nonnull(strstr(err.message, "\\x00"));
    ck_assert_int_eq(kel_number_read(&x, "1\x1b[31m", 6, &err), KEL_E_SYNTAX);
    ck_assert(strchr(err.message, '\x1b') == NULL);
}
END_TEST

/* Random bit patterns in 17 digits, which come back as they were; strtod (correctly rounded in this C library) for
   other lengths. */
static void
compare_with_strtod(void)
{
    uint64_t s = 88172645463325252u;
    for (int i = 0; i < 100000; i++) {
        char text[64];
        double x = random_finite(&s);
        snprintf(text, sizeof text, "%.17g", x);
        for (char *p = text; *p != '\0'; p++)
            if (*p == ',')
                *p = '.';
        double got = read_number(text);
        KEL_REQUIRE(got == x, "%s: got %a, expected %a", text, got, x);
    }
}

START_TEST(random_patterns)
{
    compare_with_strtod();
    uint64_t s = 2463534242u;
    for (int i = 0; i < 100000; i++) {
        char text[64];
        uint64_t m = next_random(&s) >> (next_random(&s) % 64), extra = next_random(&s);
        int e = (int)(next_random(&s) % 640) - 340, n = 0;
        n += snprintf(text, sizeof text, "%s%llu", i % 3 == 0 ? "-" : "", (unsigned long long)m);
        if (i % 2 == 0)
            n += snprintf(text + n, sizeof text - (size_t)n, ".%llu", (unsigned long long)(extra >> (extra % 64)));
        if (i % 5 != 0)
            snprintf(text + n, sizeof text - (size_t)n, "e%d", e);
        double want = strtod(text, NULL), got = 0.0;
        kel_status status = kel_number_read(&got, text, strlen(text), NULL);
        if (isinf(want))
            KEL_REQUIRE(status == KEL_E_RANGE, "%s: status %d", text, status);
        else
            KEL_REQUIRE(status == KEL_OK && got == want, "%s: got %a, expected %a", text, got, want);
    }
}
END_TEST

/* The exact decimal of the tie above x (its 54 bits fit a long double), then with its last digit lowered, then with up
   to 5,000 digits behind it. Ties go to even. */
START_TEST(ties)
{
    static char text[8000];
    uint64_t s = 362436069u;
    for (int i = 0; i < 3000; i++) {
        double x = fabs(random_finite(&s));
        if (i % 3 == 0) /* subnormals */
            x = ldexp((double)(next_random(&s) >> (12 + next_random(&s) % 50)), -1074);
        double next = nextafter(x, INFINITY);
        if (isinf(next))
            continue;
        long double tie = (long double)x + ((long double)next - (long double)x) / 2.0L;
        uint64_t bits;
        memcpy(&bits, &x, sizeof bits);
        double even = (bits & 1) == 0 ? x : next;
        int n = snprintf(text, sizeof text, "%.1080Lf", tie); /* 1075 binary places end within 1075 decimals */
        KEL_REQUIRE(read_number(text) == even, "tie above %a: got %a", x, read_number(text));
        memset(text + n, '0', 3000);
        strcpy(text + n + 3000, "1");
        KEL_REQUIRE(read_number(text) == next, "just above the tie above %a: got %a", x, read_number(text));
        text[n] = '\0';
        char *last = text + n - 1;
        for (; *last == '0' || *last == '.'; last--)
            *last = *last == '.' ? '.' : '9';
        --*last;
        KEL_REQUIRE(read_number(text) == x, "just below the tie above %a: got %a", x, read_number(text));
    }
    /* 5,000 digits and more before the point, too, brought back by the exponent. */
    memset(text, '7', 5000);
    strcpy(text + 5000, "e-5000");
    ck_assert_ulp(read_number(text), 7.0 / 9.0, 0);
}
END_TEST

START_TEST(comma_locale)
{
    static const char *const names[] = { "de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8", "fr_FR.utf8",
                                         "de_DE",       "nl_NL.utf8", "it_IT.utf8" };
    for (int i = 0; i < KEL_LENGTH(names); i++)
        if (setlocale(LC_ALL, names[i]) != NULL && strcmp(localeconv()->decimal_point, ",") == 0) {
            double x;
            ck_assert_ulp(read_number("12.5"), 12.5, 0);
            ck_assert_int_eq(kel_number_read(&x, "12,5", 4, NULL), KEL_E_SYNTAX);
            compare_with_strtod();
            return;
        }
    puts("check_number_read: comma locale skipped, this system has none");
}
END_TEST

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, table, 0, KEL_LENGTH(reads));
    tcase_add_loop_test(c, refusals, 0, KEL_LENGTH(refused));
    return c;
}

KEL_TCASE(cases, minus_zero_keeps_its_sign, bytes_are_bounded_and_quoted, random_patterns, ties, comma_locale)

KEL_TEST_MAIN("number_read", tables, cases)
