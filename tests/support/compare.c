/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The comparators of compare.h. */
#include "compare.h"

#include <ctype.h>
#include <float.h>
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* NaN and infinities: decided by kind alone. Returns true when that settles it, with the verdict in *same. */
static bool
special(bool *same, double got, double want)
{
    if (isfinite(got) && isfinite(want))
        return false;
    *same = (isnan(got) && isnan(want)) || (isinf(got) && got == want);
    return true;
}

static void
report(char *message, const char *label, double got, double want, const char *distance, const char *limit)
{
    snprintf(message, KEL_COMPARE_SIZE, "%.200s: got %.17g, expected %.17g, distance %s, limit %s",
             label, got, want, distance, limit);
}

/* Place on the line of doubles: neighbours differ by 1, both zeros are 0. */
static int64_t
place(double x)
{
    int64_t i;
    memcpy(&i, &x, sizeof i);
    return i >= 0 ? i : INT64_MIN - i;
}

bool
kel_compare_ulp(char *message, const char *label, double got, double want, double n)
{
    char distance[48] = "not a number of ulp", limit[48];
    bool same;
    if (!special(&same, got, want)) {
        int64_t a = place(got), b = place(want);
        uint64_t d = a > b ? (uint64_t)a - (uint64_t)b : (uint64_t)b - (uint64_t)a;
        snprintf(distance, sizeof distance, "%llu ulp", (unsigned long long)d);
        same = (double)d <= n;
    }
    snprintf(limit, sizeof limit, "%g ulp", n);
    if (!same)
        report(message, label, got, want, distance, limit);
    return same;
}

bool
kel_compare_lre(char *message, const char *label, double got, double want, double digits)
{
    char distance[48] = "no digits in common", limit[48];
    bool same;
    if (!special(&same, got, want)) {
        /* The difference of two doubles is exact or rounded once: far below what a digit count shows. */
        double d = fabs(got - want), lre = 17.0;
        if (d > 0.0)
            lre = fmin(17.0, -log10(want == 0.0 ? d : d / fabs(want)));
        snprintf(distance, sizeof distance, "%.3g (%.2f digits right)", d, lre);
        same = lre >= digits;
    }
    snprintf(limit, sizeof limit, "%g digits", digits);
    if (!same)
        report(message, label, got, want, distance, limit);
    return same;
}

/* Exponent of ten of the last printed digit: -7 for "16.7e-6". False where the text is no plain decimal. */
static bool
last_digit(int *exponent, const char *text)
{
    const char *p = text + (*text == '-' || *text == '+');
    int behind = 0;
    bool digits = false, point = false;
    for (; isdigit((unsigned char)*p) || (*p == '.' && !point); p++) {
        if (*p == '.')
            point = true;
        else {
            digits = true;
            behind += point;
        }
    }
    long e = 0;
    if (digits && (*p == 'e' || *p == 'E')) {
        char *end;
        e = strtol(p + 1, &end, 10);
        p = end == p + 1 ? p : end;
    }
    *exponent = (int)e - behind;
    return digits && *p == '\0' && strlen(text) < 60;
}

bool
kel_compare_published(char *message, const char *label, double got, const char *want)
{
    int e;
    if (!last_digit(&e, want)) {
        snprintf(message, KEL_COMPARE_SIZE, "%.200s: the expected value '%.80s' is not a printed decimal", label, want);
        return false;
    }
    /* The text without its point is an integer: no locale in the way, and 18 digits are exact in a long double. */
    long double m = 0.0L;
    for (const char *p = want; *p != '\0' && *p != 'e' && *p != 'E'; p++)
        if (isdigit((unsigned char)*p))
            m = 10.0L * m + (long double)(*p - '0');
    long double unit = powl(10.0L, (long double)abs(e));
    long double value = e < 0 ? m / unit : m * unit, half = e < 0 ? 0.5L / unit : 0.5L * unit;
    if (*want == '-')
        value = -value;
    if (!isfinite(got)) {
        report(message, label, got, (double)value, "not a number", want);
        return false;
    }
    long double d = fabsl((long double)got - value);
    long double rounding = (long double)(DBL_EPSILON / 2) * fabsl(value) + 4.0L * LDBL_EPSILON * fabsl(value);
    bool same = d <= half + rounding;
    if (!same)
        snprintf(message, KEL_COMPARE_SIZE, "%.200s: got %.17g, expected %.60s as printed, distance %.3Lg, limit %.3Lg",
                 label, got, want, d, half);
    return same;
}

bool
kel_compare_abs(char *message, const char *label, double got, double want, double limit, const char *unit)
{
    char distance[80] = "not a number", bound[80];
    bool same;
    if (!special(&same, got, want)) {
        double d = fabs(got - want);
        snprintf(distance, sizeof distance, "%.3g %.40s", d, unit);
        same = d <= limit;
    }
    snprintf(bound, sizeof bound, "%g %.40s", limit, unit);
    if (!same)
        report(message, label, got, want, distance, bound);
    return same;
}
