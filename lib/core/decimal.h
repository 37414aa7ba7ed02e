/* SPDX-License-Identifier: Apache-2.0 */
/* Exact decimal text, and one correctly rounded step from it, through an exact affine factor, to a double. */
#ifndef KELSPAN_DECIMAL_H
#define KELSPAN_DECIMAL_H

#include "core.h"
#include "big.h"

/* Significant digits that take part in the arithmetic. Longer numbers are rounded right too, or refused
   (kel__decimal_round). */
enum { KEL__DECIMAL_KEPT = 5100 };

/* A number as it stands in the text: (-1)^negative M 10^exponent with M the integer of all digits, the point left
   out. */
typedef struct kel__decimal {
    bool negative;
    uint64_t head;      /* the first 19 significant digits of M, or all of them */
    size_t count;       /* significant digits: from the first that is not 0 to the last printed; 0 for zero */
    const char *first;  /* the first significant digit, in the caller's text */
    int64_t exponent;   /* of the last printed digit: -2 in 1.25, -5 in 1.25e-3 */
} kel__decimal;

/* value = (number + offset_e2/100) numerator/denominator 10^exponent; numerator and denominator positive, below 2^31,
   |exponent| <= 40. */
typedef struct kel__factor {
    int64_t offset_e2, numerator, denominator;
    int exponent;
} kel__factor;

/* Scans the longest number at the front of the n bytes: sign (+, -, U+2212), digits with at most one point, at least
   one digit, then e or E, sign and digits. Returns the bytes used, 0 if there is no number. */
size_t kel__decimal_scan(kel__decimal *out, const char *bytes, size_t n);

/* The double nearest to the factor applied to d, ties to even. KEL_E_RANGE: beyond the largest double (*out is then an
   infinity), or so many digits that the first KEL__DECIMAL_KEPT leave the rounding open (*out is NaN; never for a plain
   number, whose halfway points have fewer digits). No message: the caller knows the text. */
kel_status kel__decimal_round(double *out, const kel__decimal *d, const kel__factor *factor);

/* The same for a finite double, and the inverse: x denominator/numerator 10^-exponent - offset_e2/100. Infinite where
   that overflows. */
double kel__factor_apply(const kel__factor *factor, double x);
double kel__factor_invert(const kel__factor *factor, double x);

/* (-1)^negative a/b to nearest, ties to even; b > 0; both are used up. bias -1 or +1: the true ratio is smaller or
   larger than a/b by less than anything that matters (the rest of a number that was cut). */
double kel__ratio_round(kel__big *a, kel__big *b, bool negative, int bias);

/* m 2^e to nearest, ties to even, for 2^54 <= m < 2^56 or so; `more` says that something below the last bit of m was
   dropped. */
double kel__bits_round(uint64_t m, int e, bool more);

/* What to put into a message about bytes that are no number or unit: quoted, cut after some 40 bytes. out:
   KEL__QUOTE_SIZE bytes. */
enum { KEL__QUOTE_SIZE = 200 };
const char *kel__quote(char *out, const char *bytes, size_t n);

#endif
