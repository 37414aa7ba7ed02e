/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Units: the bytes up to the first line end are a unit, those behind it a number to be read in it.

   A unit that is accepted has a name that is the same unit, whatever its spelling was; and a number read in it agrees
   with the number times the unit's factor. */
#include "fuzz.h"

#include <float.h>
#include <math.h>

#include <kelspan/unit.h>

const char *const fuzz_name = "unit";
const char *const fuzz_data[] = { NULL };

static void
same_unit(const kel_unit *a, const kel_unit *b)
{
    FUZZ_REQUIRE(a->dimension == b->dimension && a->offset_e2 == b->offset_e2 && a->numerator == b->numerator &&
                     a->denominator == b->denominator && a->exponent == b->exponent && strcmp(a->name, b->name) == 0,
                 "%s is dimension %d, %s dimension %d", a->name, (int)a->dimension, b->name, (int)b->dimension);
}

/* What the header promises of the numbers in a unit. */
static void
check_fields(const kel_unit *u)
{
    FUZZ_REQUIRE(u->numerator > 0 && u->numerator < INT64_C(1) << 31, "%s", u->name);
    FUZZ_REQUIRE(u->denominator > 0 && u->denominator < INT64_C(1) << 31, "%s", u->name);
    FUZZ_REQUIRE(u->offset_e2 == 0 || u->dimension == KEL_DIM_TEMPERATURE, "%s", u->name);
    size_t n = strnlen(u->name, sizeof u->name);
    FUZZ_REQUIRE(n > 0 && n < sizeof u->name, "%zu bytes", n);
    for (size_t i = 0; i < n; i++)
        FUZZ_REQUIRE(u->name[i] > ' ' - (i > 0) && u->name[i] < 0x7F, "%s", u->name);
}

/* The long double is exact enough to find anything but a slip of the last place. */
static void
read_in(const kel_unit *u, const char *number, size_t n)
{
    kel_error err = { 0 };
    double plain, si, resolution;
    kel_status status = kel_unit_read(&si, &resolution, u, number, n, &err);
    if (status != KEL_OK)
        fuzz_error(status, &err);
    if (kel_number_read(&plain, number, n, NULL) != KEL_OK) {
        FUZZ_REQUIRE(status == KEL_OK || status == KEL_E_SYNTAX || status == KEL_E_RANGE, "%d", (int)status);
        return;
    }
    long double want = ((long double)plain + (long double)u->offset_e2 / 100.0L) * (long double)u->numerator /
        (long double)u->denominator * powl(10.0L, (long double)u->exponent);
    long double scale = fabsl((long double)plain) * (long double)u->numerator / (long double)u->denominator *
        powl(10.0L, (long double)u->exponent);
    if (status == KEL_E_RANGE) {
        FUZZ_REQUIRE(want < 0 || fabsl(want) > (long double)DBL_MAX || scale > (long double)DBL_MAX / 2 || want != want,
                     "'%s' %s is refused, but is %La", number, u->name, want);
        return;
    }
    FUZZ_REQUIRE(status == KEL_OK, "'%s' %s: %s", number, u->name, err.message);
    FUZZ_REQUIRE(isfinite(si) && (u->dimension != KEL_DIM_TEMPERATURE || si >= 0), "'%s' %s is %a", number, u->name,
                 si);
    FUZZ_REQUIRE(isfinite(resolution) && resolution >= 0, "'%s' %s has resolution %a", number, u->name, resolution);
    /* plain is rounded already: half a unit of its last place, which the offset may leave as all there is. */
    long double allowed = (fabsl(want) + scale) * (long double)DBL_EPSILON + 2 * (long double)DBL_TRUE_MIN;
    FUZZ_REQUIRE(fabsl(want - (long double)si) <= allowed, "'%s' %s is %a, should be %La", number, u->name, si, want);
    double there = kel_unit_from_si(u, si), back = kel_unit_to_si(u, there);
    if (isfinite(there) && fabs(there) > DBL_MIN && fabs(si) > DBL_MIN)
        FUZZ_REQUIRE(fabs(back - si) <= 4 * DBL_EPSILON * (fabs(si) + (double)scale), "%a %s comes back as %a", si,
                     u->name, back);
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    fuzz_bytes bytes = { data, size };
    char *text = fuzz_string(&bytes, '\n');
    size_t n = (size_t)(bytes.at - data) - (bytes.at > data && bytes.at[-1] == '\n');
    char *number = fuzz_string(&bytes, '\n');
    kel_unit any = { 0 };
    kel_error err = { 0 };
    kel_status status = kel_unit_parse_any(&any, text, n, &err);
    if (status != KEL_OK) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(err.column >= 1 && err.column <= n + 1, "column %zu of %zu", err.column, n);
    }
    for (int d = KEL_DIM_TEMPERATURE; d <= KEL_DIM_LENGTH; d++) {
        kel_unit u = { 0 }, again = { 0 };
        kel_status one = kel_unit_parse(&u, (kel_dimension)d, text, n, &err);
        if (one != KEL_OK) {
            fuzz_error(one, &err);
            FUZZ_REQUIRE(status != KEL_OK || (kel_dimension)d != any.dimension, "'%s' fits %s and not dimension %d",
                         text, any.name, d);
            continue;
        }
        FUZZ_REQUIRE(status == KEL_OK, "'%s' is %s of dimension %d, but no unit", text, u.name, d);
        FUZZ_REQUIRE(u.dimension == (kel_dimension)d, "'%s' asked as %d is %d", text, d, (int)u.dimension);
        check_fields(&u);
        one = kel_unit_parse(&again, (kel_dimension)d, u.name, strlen(u.name), &err);
        FUZZ_REQUIRE(one == KEL_OK, "'%s' is named %s: %s", text, u.name, err.message);
        same_unit(&u, &again);
        read_in(&u, number, strlen(number));
    }
    free(text);
    free(number);
    return 0;
}
