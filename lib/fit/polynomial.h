/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Polynomials in twice the precision, as published: read, differentiated, and rewritten in Chebyshev polynomials of
   an interval. Not installed. */
#ifndef KELSPAN_POLYNOMIAL_H
#define KELSPAN_POLYNOMIAL_H

#include <stdbool.h>
#include <kelspan/unit.h>

#include "twofold.h"

/* A number of the file in SI (as it stands if unit is NULL), to some 30 digits. Errors, grammar and `comma` as in
   kel__number_text. */
kel_status kel__two_read(kel__twofold *out, const kel_unit *unit, const char *text, size_t n, bool comma, size_t line,
                         size_t column,
                         kel_error *err);
/* x, which stands for a printed number of its unit, in SI; and the SI size of one step of the unit. */
kel__twofold kel__two_in_unit(kel__twofold x, const kel_unit *unit);
kel__twofold kel__two_unit(const kel_unit *unit);

/* The variable x = (T - centre)/scale, both in K. */
typedef struct kel__variable { kel__twofold centre, scale; } kel__variable;

kel__twofold kel__poly_variable(const kel__variable *variable, double t);
/* sum c[k] x^k, and the largest |c[k] x^k|, k < n. */
kel__twofold kel__poly_value(const kel__twofold *c, size_t n, kel__twofold x);
double kel__poly_largest(const kel__twofold *c, size_t n, kel__twofold x);
/* d/dT of sum c[k] x^k into c: one coefficient less, but at least one. Returns how many. */
size_t kel__poly_derivative(kel__twofold *c, size_t n, const kel__variable *variable);
/* The polynomial on from..to (K, from < to) as out[0] + out[1] T_1(y) + ..., y = (2T - from - to)/(to - from). work:
   room for 2n. */
void kel__poly_chebyshev(double *out, const kel__twofold *c, size_t n, const kel__variable *variable, double from,
                         double to,
                         kel__twofold *work);

#endif
