/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Quantities of the command line: the bytes are one word, read as a temperature, a difference, a length and so on.

   What is accepted is written as number and unit by the unit's own name and must be read as the same quantity. */
#include "fuzz.h"

#include <float.h>
#include <math.h>

#include <kelspan/unit.h>

const char *const fuzz_name = "temperature";
const char *const fuzz_data[] = { NULL };

static void
read_back(double x, const kel_unit *u, const char *text)
{
    char word[KEL_NUMBER_SIZE + sizeof u->name + 1];
    kel_unit again;
    kel_error err = { 0 };
    double printed = kel_unit_from_si(u, x), y;
    if (!isfinite(printed))
        return;
    size_t n = kel_number_format(word, printed);
    /* A unit that starts with a digit would go on with the number. */
    snprintf(word + n, sizeof word - n, " %s", u->name);
    kel_status status = kel_quantity_parse(&y, &again, u->dimension, word, &err);
    FUZZ_REQUIRE(status == KEL_OK || (status == KEL_E_RANGE && x == 0), "'%s' is written '%s': %s", text, word,
                 err.message);
    if (status != KEL_OK)
        return;
    FUZZ_REQUIRE(strcmp(again.name, u->name) == 0, "'%s' has unit %s, then %s", text, u->name, again.name);
    double offset = fabs((double)u->offset_e2 / 100.0), scale = fmax(fabs(x), offset);
    if (fabs(printed) > DBL_MIN && scale > DBL_MIN)
        FUZZ_REQUIRE(fabs(x - y) <= 4 * DBL_EPSILON * scale, "'%s' is %a, '%s' is %a", text, x, word, y);
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    fuzz_bytes bytes = { data, size };
    char *text = fuzz_string(&bytes, '\0');
    size_t n = strlen(text);
    for (int d = KEL_DIM_TEMPERATURE; d <= KEL_DIM_LENGTH; d++) {
        kel_unit u = { 0 };
        kel_error err = { 0 };
        double x, without;
        kel_status status = kel_quantity_parse(&x, &u, (kel_dimension)d, text, &err);
        FUZZ_REQUIRE(kel_quantity_parse(&without, NULL, (kel_dimension)d, text, NULL) == status, "'%s': %d", text,
                     (int)status);
        FUZZ_REQUIRE(fuzz_same_number(x, without) || (isnan(x) && isnan(without)), "'%s': %a, %a", text, x, without);
        if (status != KEL_OK) {
            fuzz_error(status, &err);
            FUZZ_REQUIRE(isnan(x), "left %a", x);
            FUZZ_REQUIRE(err.column >= 1 && err.column <= n + 1, "column %zu of %zu", err.column, n);
            continue;
        }
        FUZZ_REQUIRE(isfinite(x) && (d != KEL_DIM_TEMPERATURE || x >= 0), "'%s' is %a", text, x);
        FUZZ_REQUIRE(u.dimension == (kel_dimension)d, "'%s' asked as %d is %d", text, d, (int)u.dimension);
        read_back(x, &u, text);
    }
    free(text);
    return 0;
}
