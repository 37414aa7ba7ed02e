/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Exact decimals: text taken apart, and one rounding through a unit's factor, in all three ways and at the exact ties
   between doubles. */
#include "unit.h"

#include <float.h>
#include <math.h>
#include <stdint.h>
#include <string.h>

#include "decimal.h"

__extension__ typedef unsigned __int128 u128;

static const struct {
    const char *text;
    size_t used;
    bool negative;
    uint64_t head;
    size_t count;
    int64_t exponent;
} scans[] = {
    { "0", 1, false, 0, 0, 0 },
    { "-0.0", 4, true, 0, 0, -1 },
    { "12.50", 5, false, 1250, 4, -2 },
    { "+.5", 3, false, 5, 1, -1 },
    { "5.", 2, false, 5, 1, 0 },
    { "\xE2\x88\x92"
      "7e\xE2\x88\x92"
      "3",
      9, true, 7, 1, -3 },
    { "1.25e-3", 7, false, 125, 3, -5 },
    { "1E+2", 4, false, 1, 1, 2 },
    { "20e", 2, false, 20, 2, 0 },
    { "20e-K", 2, false, 20, 2, 0 },
    { "77K", 2, false, 77, 2, 0 },
    { "1.2.3", 3, false, 12, 2, -1 },
    { "0x10", 1, false, 0, 0, 0 },
    { "1e99999999999999999999", 22, false, 1, 1, 999999999999 },
    { "00012345678901234567890", 23, false, 1234567890123456789u, 20, 0 },
    { ".", 0, false, 0, 0, 0 },
    { "-", 0, false, 0, 0, 0 },
    { "e5", 0, false, 0, 0, 0 },
    { " 1", 0, false, 0, 0, 0 },
    { "nan", 0, false, 0, 0, 0 },
};

START_TEST(scan)
{
    const char *text = scans[_i].text;
    kel__decimal d = { false, 0, 0, NULL, 0 };
    size_t used = kel__decimal_scan(&d, text, strlen(text));
    ck_assert_msg(used == scans[_i].used, "'%s': %zu bytes used, expected %zu", text, used, scans[_i].used);
    if (used == 0)
        return;
    ck_assert_msg(d.negative == scans[_i].negative && d.head == scans[_i].head && d.count == scans[_i].count,
                  "'%s': negative %d, head %llu, count %zu", text, d.negative, (unsigned long long)d.head, d.count);
    ck_assert_msg(d.exponent == scans[_i].exponent, "'%s': exponent %lld", text, (long long)d.exponent);
}
END_TEST

static double
rounded(kel_status *status, const char *text, kel__factor f)
{
    kel__decimal d;
    double x;
    KEL_REQUIRE(kel__decimal_scan(&d, text, strlen(text)) == strlen(text), "'%.60s' is no number", text);
    *status = kel__decimal_round(&x, &d, &f);
    return x;
}

static const kel__factor one = { 0, 1, 1, 0 }, degF = { 45967, 5, 9, 0 }, inch = { 0, 254, 1, -4 };

/* Temperatures in degF whose value in kelvin is exactly halfway between x and the next double: 9/5 of the tie less
   459.67 is a finite decimal, computed with rational numbers in another language. */
static const struct { const char *tie; double x; } ties[] = {
    { "68.000000000000010231815394945442676544189453125", 0x1.2526666666666p+8 },
    { "0.2300000000000255795384873636066913604736328125", 0x1.ff00000000000p+7 },
    { "-459.6137499999999999937549954864834944601170718669891357421875", 0x1.0000000000000p-5 },
    { "-459.667299999999999999748638568330960652019712142646312713623046875", 0x1.89374bc6a7efap-10 },
};

START_TEST(halfway_with_offset)
{
    char text[6000];
    kel_status status;
    double x = ties[_i].x, next = nextafter(x, INFINITY);
    const char *tie = ties[_i].tie;
    /* All x of the table have an even last bit. Away from the kelvin's zero the tie's last digit may be lowered or
     * followed by others. */
    ck_assert_ulp_for(tie, rounded(&status, tie, degF), x, 0);
    bool negative = tie[0] == '-';
    strcpy(text, tie);
    size_t n = strlen(text);
    text[n - 1]--;
    ck_assert_ulp_for(text, rounded(&status, text, degF), negative ? next : x, 0);
    strcpy(text, tie);
    memset(text + n, '0', 4900);
    strcpy(text + n + 4900, "1");
    ck_assert_ulp_for("tie and 4900 zeros and 1", rounded(&status, text, degF), negative ? x : next, 0);
    ck_assert_int_eq(status, KEL_OK);
}
END_TEST

/* x/0.0254 for a tie between doubles is periodic: text that follows it for any number of digits. x = m/2^45, m <
   2^54. */
static void
follow(char *text, uint64_t m, int digits)
{
    u128 num = (u128)m * 10000, den = (u128)254 << 45;
    int n = sprintf(text, "%llu.", (unsigned long long)(num / den));
    num %= den;
    for (int i = 0; i < digits; i++) {
        num *= 10;
        text[n++] = (char)('0' + (int)(num / den));
        num %= den;
    }
    text[n] = '\0';
}

START_TEST(halfway_with_periodic_tie)
{
    static char text[8000];
    static const int digits[] = { 20, 60, 760, 1200, 5000 };
    const uint64_t m =
        ((uint64_t)5404319552844595 << 1) + 1; /* halfway between an odd and an even double, near 307 m */
    const double below = ldexp((double)(m - 1), -45), above = nextafter(below, INFINITY);
    kel_status status;
    follow(text, m, digits[_i]);
    ck_assert_ulp_for("cut below the tie", rounded(&status, text, inch), below, 0);
    ck_assert_int_eq(status, KEL_OK);
    char *last = text + strlen(text) - 1;
    for (; *last == '9'; last--)
        *last = '0';
    ++*last;
    ck_assert_ulp_for("rounded up above the tie", rounded(&status, text, inch), above, 0);
}
END_TEST

START_TEST(more_digits_than_kept)
{
    static char text[12000];
    kel_status status;
    /* Undecided within the digits kept: refused, not guessed. */
    follow(text, ((uint64_t)5404319552844595 << 1) + 1, 6000);
    rounded(&status, text, inch);
    ck_assert_int_eq(status, KEL_E_RANGE);
    /* Decided: as long as you like. */
    memset(text, '3', 11000);
    memcpy(text, "0.", 2);
    text[11000] = '\0';
    ck_assert_ulp(rounded(&status, text, one), 1.0 / 3.0, 0);
    ck_assert_int_eq(status, KEL_OK);
    ck_assert_ulp(rounded(&status, text, inch), 0x1.156f8c384071ap-7, 0); /* 127/15000 */
    /* 10000 zeros in front, and an exponent that brings the number back. */
    memset(text, '0', 10002);
    text[1] = '.';
    strcpy(text + 10002, "125e10001");
    ck_assert_ulp(rounded(&status, text, one), 1.25, 0);
}
END_TEST

START_TEST(extremes_with_factor)
{
    kel_status status;
    /* So small that only its sign is left beside the offset. */
    ck_assert_ulp(rounded(&status, "1e-5000", degF), 45967.0 / 180.0, 0);
    ck_assert_ulp(rounded(&status, "-1e-5000", degF), 45967.0 / 180.0, 0);
    ck_assert_ulp(rounded(&status, "1e-5000", one), 0.0, 0);
    ck_assert_ulp(rounded(&status, "1e300", degF), 0x1.a8bd17aab2d58p+995, 0);
    ck_assert(isinf(rounded(&status, "1e5000", one)));
    ck_assert_int_eq(status, KEL_E_RANGE);
    ck_assert(isinf(rounded(&status, "-1e401", inch)) && status == KEL_E_RANGE);
    /* Absolute zero is exact, and so is one digit of the last place above it. */
    ck_assert_ulp(rounded(&status, "-459.67", degF), 0.0, 0);
    ck_assert_ulp(rounded(&status, "-459.669999999999999999999999999999999", degF), 1e-33 / 1.8, 0);
    ck_assert_ulp(rounded(&status, "-45967000000000000000000000000e-26", degF), 0.0, 0);
}
END_TEST

/* Against long double arithmetic: with 64 bits its error is below 4 units in the last place, so where both ends of that
   band round to one double, it is the nearest. The band straddles a tie in about one case of 500. */
START_TEST(random_factors)
{
    uint64_t s = 88172645463325252u;
    int decided = 0;
    enum { CASES = 100000 };
    for (int i = 0; i < CASES; i++) {
        s ^= s << 13, s ^= s >> 7, s ^= s << 17;
        char text[64];
        int e = (int)(s >> 8 & 31) - 25;
        uint64_t m = s >> (1 + (s & 31));
        kel__factor f = { (s >> 20 & 1) != 0 ? (int64_t)(s >> 21 & 0xFFFF) : 0, (int64_t)(s >> 37 & 0xFFFFF) + 1,
                          (int64_t)(s >> 13 & 0x3FFF) + 1, (int)(s >> 45 & 7) - 4 };
        snprintf(text, sizeof text, "%llue%d", (unsigned long long)m, e);
        long double v = (long double)m;
        v = e < 0 ? v / powl(10.0L, (long double)-e) : v * powl(10.0L, (long double)e);
        v += (long double)f.offset_e2 / 100.0L;
        v = v * (long double)f.numerator / (long double)f.denominator;
        v = f.exponent < 0 ? v / powl(10.0L, (long double)-f.exponent) : v * powl(10.0L, (long double)f.exponent);
        double low = (double)(v * (1.0L - 4.0L * LDBL_EPSILON)), high = (double)(v * (1.0L + 4.0L * LDBL_EPSILON));
        kel_status status;
        double got = rounded(&status, text, f);
        KEL_REQUIRE(status == KEL_OK, "%s: status %d", text, status);
        if (low == high) {
            decided++;
            ck_assert_ulp_for(text, got, low, 0);
        } else
            KEL_REQUIRE(got == low || got == high, "%s: got %a, expected %a or %a", text, got, low, high);
    }
    ck_assert_int_gt(decided, CASES * 98 / 100);
}
END_TEST

/* Doubles through a factor and back, each way rounded once. Expected values from exact rational arithmetic on the
   doubles as they are: 293.15 is not a double, and the nearest one is 68 degF less 4e-14. */
static const struct { const char *label; kel__factor f; double x, si, back; } doubles[] = {
    { "68 degF", { 45967, 5, 9, 0 }, 68.0, 0x1.2526666666666p+8, 0x1.0fffffffffffdp+6 },
    { "32 degF", { 45967, 5, 9, 0 }, 32.0, 0x1.1126666666666p+8, 0x1.ffffffffffff4p+4 },
    { "0 degF: nothing cancels", { 45967, 5, 9, 0 }, 0.0, 0x1.febe93e93e93fp+7, 0x1.851eb851eb852p-46 },
    { "-459.67, which is no double: below 0 K", { 45967, 5, 9, 0 }, -459.67, -0x1.3e93e93e93e94p-47, -459.67 },
    { "20 degC", { 27315, 1, 1, 0 }, 20.0, 0x1.2526666666666p+8, 0x1.3fffffffffffap+4 },
    { "10 ppm/degF", { 0, 18, 1, -7 }, 10.0, 1.8e-5, 10.0 },
    { "12.5 in", { 0, 254, 1, -4 }, 12.5, 0.3175, 12.5 },
    { "16.7e-6/K", { 0, 1, 1, -6 }, 16.7, 16.7e-6, 16.7 },
    { "kelvin", { 0, 1, 1, 0 }, 77.0, 77.0, 77.0 },
    { "largest", { 0, 5, 9, 0 }, DBL_MAX, 0x1.1c71c71c71c71p+1023, DBL_MAX },
    { "least", { 0, 1, 1, -3 }, 0x1p-1074, 0.0, 0.0 },
    { "infinity", { 45967, 5, 9, 0 }, INFINITY, INFINITY, INFINITY },
    { "NaN", { 45967, 5, 9, 0 }, NAN, NAN, NAN },
};

START_TEST(factor_apply_and_invert)
{
    double si = kel__factor_apply(&doubles[_i].f, doubles[_i].x);
    ck_assert_ulp_for(doubles[_i].label, si, doubles[_i].si, 0);
    ck_assert_ulp_for(doubles[_i].label, kel__factor_invert(&doubles[_i].f, si), doubles[_i].back, 0);
}
END_TEST

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, scan, 0, KEL_LENGTH(scans));
    tcase_add_loop_test(c, halfway_with_offset, 0, KEL_LENGTH(ties));
    tcase_add_loop_test(c, halfway_with_periodic_tie, 0, 5);
    tcase_add_loop_test(c, factor_apply_and_invert, 0, KEL_LENGTH(doubles));
    return c;
}

KEL_TCASE(cases, more_digits_than_kept, extremes_with_factor, random_factors)

KEL_TEST_MAIN("decimal", tables, cases)
