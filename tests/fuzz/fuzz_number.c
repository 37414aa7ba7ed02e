/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers: the bytes are read as text, and the first eight of them taken as a double that is written.

   Reading is compared with strtod of the C library (this process is in the C locale) and with a grammar of its own,
   writing with printf's correctly rounded digits. */
#include "fuzz.h"

#include <ctype.h>
#include <float.h>
#include <math.h>

const char *const fuzz_name = "number";
const char *const fuzz_data[] = { NULL };

enum { LONGEST = 20000 }; /* strtod's own time grows with the square of the digits */

/* Bytes of a sign, 0 if there is none. */
static size_t
sign(const char *p)
{
    return *p == '-' || *p == '+' ? 1 : strncmp(p, "\xE2\x88\x92", 3) == 0 ? 3 : 0;
}

/* Is the string a number in the header's grammar? */
static bool
is_number(const char *p)
{
    p += sign(p);
    size_t before = strspn(p, "0123456789");
    p += before;
    size_t behind = *p == '.' ? strspn(p + 1, "0123456789") : 0;
    p += (*p == '.') + behind;
    if (before + behind == 0)
        return false;
    if (*p == 'e' || *p == 'E') {
        p += 1 + sign(p + 1);
        size_t digits = strspn(p, "0123456789");
        if (digits == 0)
            return false;
        p += digits;
    }
    return *p == '\0';
}

/* U+2212 becomes '-', in place. */
static void
plain_signs(char *s)
{
    char *to = s;
    for (const char *p = s; *p != '\0';) {
        size_t n = sign(p);
        *to++ = n == 3 ? '-' : *p;
        p += n == 3 ? 3 : 1;
    }
    *to = '\0';
}

static void
read_text(const char *text, size_t n)
{
    kel_error err = { 0 };
    double x;
    kel_status status = kel_number_read(&x, text, n, &err);
    bool number = strlen(text) == n && is_number(text);
    if (status != KEL_OK) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(isnan(x), "left %a", x);
        FUZZ_REQUIRE(err.column >= 1 && err.column <= n + 1, "column %zu of %zu", err.column, n);
        FUZZ_REQUIRE((status == KEL_E_RANGE) == number, "'%s' gives %d", text, (int)status);
    }
    if (!number) {
        FUZZ_REQUIRE(status == KEL_E_SYNTAX, "'%s' gives %d", text, (int)status);
        return;
    }
    char *copy = malloc(n + 1), *end;
    FUZZ_REQUIRE(copy != NULL, "memory ran out");
    memcpy(copy, text, n + 1);
    plain_signs(copy);
    double want = strtod(copy, &end);
    FUZZ_REQUIRE(*end == '\0', "strtod leaves '%s'", end);
    if (status == KEL_OK)
        FUZZ_REQUIRE(fuzz_same_number(x, want), "'%s' gives %a, strtod %a", text, x, want);
    else
        FUZZ_REQUIRE(isinf(want), "'%s' is refused, strtod gives %a", text, want);
    free(copy);
}

/* The fewest digits of printf that read back as x. */
static int
fewest_digits(double x)
{
    char text[64];
    for (int digits = 1; digits < 17; digits++) {
        snprintf(text, sizeof text, "%.*e", digits - 1, x);
        if (strtod(text, NULL) == x)
            return digits;
    }
    return 17;
}

/* Significant digits of a text; zeros in front do not count, nor do those behind that only hold a place. */
static int
significant(const char *text)
{
    int n = 0, zeros = 0;
    for (const char *p = text; *p != '\0' && *p != 'e'; p++) {
        if (!isdigit((unsigned char)*p) || (*p == '0' && n == 0))
            continue;
        n++;
        zeros = *p == '0' ? zeros + 1 : 0;
    }
    return n - zeros;
}

static void
write_number(double x)
{
    char text[KEL_NUMBER_SIZE], fixed[KEL_NUMBER_FIXED_SIZE], want[512];
    size_t n = kel_number_format(text, x);
    FUZZ_REQUIRE(n == strlen(text) && n < KEL_NUMBER_SIZE, "%a: %zu bytes", x, n);
    if (!isfinite(x)) {
        FUZZ_REQUIRE(strcmp(text, isnan(x) ? "nan" : x > 0 ? "inf" : "-inf") == 0, "%a is '%s'", x, text);
        return;
    }
    double back;
    kel_error err = { 0 };
    FUZZ_REQUIRE(kel_number_read(&back, text, n, &err) == KEL_OK, "%a is '%s': %s", x, text, err.message);
    FUZZ_REQUIRE(fuzz_same_number(back, x), "%a is '%s', which is %a", x, text, back);
    if (x != 0) {
        int fewest = fewest_digits(x);
        FUZZ_REQUIRE(significant(text) <= fewest, "%a is '%s' with more than %d digits", x, text, fewest);
    }
    for (int digits = 1; digits <= 17; digits++) {
        n = kel_number_format_digits(text, x, digits);
        FUZZ_REQUIRE(n == strlen(text) && n < KEL_NUMBER_SIZE, "%a: %zu bytes", x, n);
        snprintf(want, sizeof want, "%.*e", digits - 1, x);
        FUZZ_REQUIRE(strtod(text, NULL) == strtod(want, NULL), "%a to %d digits is '%s', should be '%s'", x, digits,
                     text, want);
    }
    for (int decimals = 0; decimals <= 30 && fabs(x) < 1e22; decimals++) {
        n = kel_number_format_fixed(fixed, x, decimals);
        FUZZ_REQUIRE(n == strlen(fixed) && n < KEL_NUMBER_FIXED_SIZE, "%a: %zu bytes", x, n);
        snprintf(want, sizeof want, "%.*f", decimals, x);
        const char *unsigned_zero = want + (want[0] == '-' && strpbrk(want, "123456789") == NULL);
        FUZZ_REQUIRE(strcmp(fixed, unsigned_zero) == 0, "%a to %d decimals is '%s', should be '%s'", x, decimals, fixed,
                     unsigned_zero);
    }
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    if (size > LONGEST)
        return 0;
    char *text = malloc(size + 1);
    FUZZ_REQUIRE(text != NULL, "memory ran out");
    if (size != 0)
        memcpy(text, data, size);
    text[size] = '\0';
    read_text(text, size);
    free(text);
    if (size >= sizeof(double)) {
        double x;
        memcpy(&x, data, sizeof x);
        write_number(x);
    }
    return 0;
}
