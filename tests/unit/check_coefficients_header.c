/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Every refusal of a coefficient file, with a fixture named after the defect, its place and its reason. */
#include "unit.h"

#include <kelspan-fit.h>
#include <math.h>
#include <string.h>

#include "adopting.h"

static const struct { const char *name; size_t line, column; kel_status status; const char *message; } refused[] = {
    { "below-absolute-zero", 5, 1, KEL_E_RANGE, "below absolute zero" },
    { "centre-no-number", 4, 11, KEL_E_SYNTAX, "'room'" },
    { "comments-only", 1, 1, KEL_E_SYNTAX, "no header" },
    { "curve-of-means", 2, 10, KEL_E_SYNTAX, "found 'mean'" },
    { "curve-tail", 2, 31, KEL_E_SYNTAX, "found 'axial'" },
    { "curve-unit-open", 2, 22, KEL_E_SYNTAX, "the bracket round the unit is not closed" },
    { "curve-without-unit", 2, 10, KEL_E_UNIT, "a unit in brackets is missing, for example [1e-6/K]" },
    { "curve-wrong-dimension", 2, 23, KEL_E_UNIT, "'1e-5' is a pure number" },
    { "decimal-comma-unasked", 5, 10, KEL_E_SYNTAX, "a decimal comma must be declared" },
    { "empty", 1, 1, KEL_E_SYNTAX, "no header" },
    { "expansion-of-current-length", 3, 10, KEL_E_DATA, "the base `current length` belongs to coefficients" },
    { "expansion-without-reference", 2, 10, KEL_E_DATA, "needs a line '# reference temperature: ...'" },
    { "gap", 6, 1, KEL_E_DATA, "a gap between the piece of line 5, which ends at 300 K, and this one from 310 K" },
    { "header-from-twice", 4, 10, KEL_E_DATA, "a second column of the same name" },
    { "header-from-without-unit", 4, 1, KEL_E_UNIT, "a unit in brackets is missing, for example [K]" },
    { "header-no-to", 4, 1, KEL_E_DATA, "'from [K]' and 'to [K]'" },
    { "header-only", 4, 1, KEL_E_DATA, "no piece under the header" },
    { "header-power-fraction", 4, 25, KEL_E_DATA, "a whole number from 0 to 127" },
    { "header-power-missing", 4, 1, KEL_E_DATA, "lacks 'power 1'" },
    { "header-power-too-high", 4, 25, KEL_E_DATA, "a whole number from 0 to 127" },
    { "header-power-twice", 4, 25, KEL_E_DATA, "a second column 'power 0'" },
    { "header-power-with-unit", 4, 25, KEL_E_SYNTAX, "found '['" },
    { "header-unknown-column", 4, 25, KEL_E_SYNTAX, "found 'slope'" },
    { "hexadecimal", 5, 9, KEL_E_SYNTAX, "'0x12'" },
    { "lot-elsewhere", 4, 15, KEL_E_DATA, "lies outside the pieces" },
    { "lot-of-expansion", 4, 15, KEL_E_UNIT, "stated in 1/K" },
    { "missing-bound", 5, 4, KEL_E_SYNTAX, "where the piece starts or ends is missing" },
    { "missing-coefficient", 5, 8, KEL_E_SYNTAX, "the coefficient of power 0 is missing" },
    { "nan", 5, 8, KEL_E_SYNTAX, "'nan'" },
    { "no-curve", 3, 1, KEL_E_DATA, "'# curve: coefficient [1e-6/K]'" },
    { "no-variable", 3, 1, KEL_E_DATA, "'# variable: T [K]'" },
    { "nul", 5, 13, KEL_E_SYNTAX, "a NUL byte" },
    { "number-too-large", 5, 8, KEL_E_RANGE, "beyond the range of a double" },
    { "open-quote", 5, 8, KEL_E_SYNTAX, "the quote is not closed" },
    { "overlap", 5, 1, KEL_E_DATA, "an overlap between the piece of line 6, which ends at 300 K, and this one from "
                                   "290 K" },
    { "piece-backwards", 5, 1, KEL_E_DATA, "from the lower to the higher temperature" },
    { "piece-of-no-width", 5, 1, KEL_E_DATA, "from the lower to the higher temperature" },
    { "ragged-long", 5, 19, KEL_E_SYNTAX, "5 cells in a row under a header of 4" },
    { "ragged-short", 6, 9, KEL_E_SYNTAX, "3 cells in a row under a header of 4" },
    { "scale-zero", 4, 10, KEL_E_RANGE, "must be above zero" },
    { "step-contradicts", 5, 15, KEL_E_DATA, "which steps by 1e-5 there" },
    { "step-not-published", 5, 15, KEL_E_DATA, "where the published expansion has none" },
    { "step-stated-not-published", 5, 15, KEL_E_DATA, "where the published expansion has none" },
    { "step-to-be-fitted", 4, 15, KEL_E_DATA, "state its size" },
    { "text-in-number", 5, 18, KEL_E_SYNTAX, "'0.004*'" },
    { "two-materials", 2, 13, KEL_E_DATA, "`material` on line 2 contradicts the one on line 1" },
    { "uncertainty-elsewhere", 4, 16, KEL_E_DATA, "lies outside the pieces" },
    { "uncertainty-independent", 4, 16, KEL_E_DATA, "leave the word `independent` out" },
    { "uncertainty-of-expansion", 4, 16, KEL_E_UNIT, "stated in 1/K" },
    { "unit-misread", 5, 1, KEL_E_DATA, "the coefficient would be 12.808 1/K at 77 K, beyond 0.001 1/K: check the "
                                        "unit [1/K] of `curve`" },
    { "variable-of-length", 3, 16, KEL_E_UNIT, "'mm' is a length" },
    { "variable-unknown", 3, 13, KEL_E_SYNTAX, "found 'x'" },
};

START_TEST(refuses)
{
    kel_record *record;
    kel_adopt_report *report;
    kel_error err = { KEL_OK, 0, 0, "" };
    char name[128];
    snprintf(name, sizeof name, "bad-coefficients-%s", refused[_i].name);
    kel_status status = read_fixture(&record, &report, name, &err);
    ck_assert_msg(status == refused[_i].status && err.code == status && err.line == refused[_i].line &&
                  err.column == refused[_i].column &&
                  strstr(err.message, refused[_i].message) != NULL && strchr(err.message, '\n') == NULL &&
                      record == NULL && report == NULL,
                  "%s: got %d at %zu:%zu (%s)", refused[_i].name, status, err.line, err.column, err.message);
}
END_TEST

static TCase *
loops(void)
{
    TCase *tcase = tcase_create("refused");
    tcase_add_loop_test(tcase, refuses, 0, KEL_LENGTH(refused));
    return tcase;
}

KEL_TEST_MAIN("coefficients_header", loops)
