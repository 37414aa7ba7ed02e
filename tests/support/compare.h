/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Four ways to compare a double with what it should be, for Check tests. A failure prints label, got, expected,
   distance and limit. The plain forms use the text of `got` as label; the `_for` forms take one, for rows of a table.
   Arguments are evaluated once.

   NaN equals NaN only, an infinity itself only; 0 and -0 are equal (compare signbit where the sign matters). */
#ifndef KEL_TEST_COMPARE_H
#define KEL_TEST_COMPARE_H

#include <stdbool.h>
#include <stddef.h>

enum { KEL_COMPARE_SIZE = 512 };

/* Each fills message when it returns false. */
bool kel_compare_ulp(char *message, const char *label, double got, double want, double n);
bool kel_compare_lre(char *message, const char *label, double got, double want, double digits);
bool kel_compare_published(char *message, const char *label, double got, const char *want);
bool kel_compare_abs(char *message, const char *label, double got, double want, double limit, const char *unit);

#define KEL_COMPARE(function, ...)                        \
    do {                                                  \
        char kel_message[KEL_COMPARE_SIZE];               \
        if (!function(kel_message, __VA_ARGS__))          \
            ck_abort_msg("%s", kel_message);              \
    } while (0)

/* At most n doubles apart, counted along the line of all doubles. */
#define ck_assert_ulp_for(label, got, want, n) KEL_COMPARE(kel_compare_ulp, label, got, want, n)
#define ck_assert_ulp(got, want, n) ck_assert_ulp_for(#got, got, want, n)

/* At least that many digits right: -log10 |got - want|/|want|; for want = 0, -log10 |got|. Equal values are right to 17
   digits. */
#define ck_assert_lre_for(label, got, want, digits) KEL_COMPARE(kel_compare_lre, label, got, want, digits)
#define ck_assert_lre(got, want, digits) ck_assert_lre_for(#got, got, want, digits)

/* want as printed in the source, "16.7e-6" or "-0.360": within half a unit of its last digit, the half included. got
   may miss an exact half by its own rounding to a double, no more. */
#define ck_assert_published_for(label, got, want) KEL_COMPARE(kel_compare_published, label, got, want)
#define ck_assert_published(got, want) ck_assert_published_for(#got, got, want)

/* |got - want| <= limit, in the unit named ("1/K", "m"; "1" for a pure number). */
#define ck_assert_abs_for(label, got, want, limit, unit) KEL_COMPARE(kel_compare_abs, label, got, want, limit, unit)
#define ck_assert_abs(got, want, limit, unit) ck_assert_abs_for(#got, got, want, limit, unit)

#endif
