/* SPDX-License-Identifier: Apache-2.0 */
/* Non-negative integers of bounded size, on the stack: exact arithmetic behind the conversion of numbers and units. */
#ifndef KELSPAN_BIG_H
#define KELSPAN_BIG_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* The largest integer comes up in reading a number of KEL__DECIMAL_KEPT digits (decimal.h): below 10^5600, which has
   18603 bits, shifted by less than two words. */
enum { KEL__BIG_WORDS = 300 };

/* sum word[i] 2^(64 i) for i < n; the highest word in use is not 0, zero has n = 0. Words from n on hold nothing. */
typedef struct kel__big {
    size_t n;
    uint64_t word[KEL__BIG_WORDS];
} kel__big;

/* None of these checks for overflow other than by assert: the caller's bounds exclude it. */
void kel__big_set(kel__big *a, uint64_t x);
void kel__big_multiply_add(kel__big *a, uint64_t m, uint64_t x); /* a = a m + x */
void kel__big_multiply_power10(kel__big *a, unsigned n);         /* a = a 10^n */
void kel__big_shift_left(kel__big *a, size_t bits);
void kel__big_add(kel__big *a, const kel__big *b);
void kel__big_subtract(kel__big *a, const kel__big *b);          /* a >= b */
int kel__big_compare(const kel__big *a, const kel__big *b);      /* < 0, 0, > 0 */
size_t kel__big_bits(const kel__big *a);                         /* 0 for zero, else floor(log2 a) + 1 */

/* Returns floor(a/b), which must be below 2^62, and leaves the remainder in a. b > 0. */
uint64_t kel__big_divide(kel__big *a, const kel__big *b);
/* Returns the remainder, leaves the quotient in a. d > 0. */
uint64_t kel__big_divide_word(kel__big *a, uint64_t d);
/* a = a/2^bits, rounded to the nearest integer, a half to even. */
void kel__big_shift_right_round(kel__big *a, size_t bits);

#endif
