/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Least-squares sets with certified solutions: files of points and of certificates, both CSV with `#` lines.

       # model: y = B0+B1*x+...+B5*x^5, 21 points        or  y = B1*x (no intercept)
       x,y                                                a third column u: standard uncertainties

       dataset,item,certified,certified_sd                items B0, B1, ..., residual_sd, R2, residual_ss

   Certified numbers are kept in 33 digits and points as pairs of doubles: what the text says, not what one double
   holds. Plain C, for tests and for programs that measure; what fails is said in words. */
#ifndef KEL_TEST_SETS_H
#define KEL_TEST_SETS_H

#include <stdbool.h>

#include "quad.h"

enum { SET_DIGITS = 15, SET_TERMS = 64, SET_WHY = 256 };

typedef struct ls_set {
    size_t n;
    int degree;
    bool constant;
    double *x, *x_lo, *y, *y_lo, *u;   /* x_lo and y_lo may be passed over; u is NULL if there is no such column */
} ls_set;

typedef struct ls_certificate { char dataset[64], item[16]; quad value, sd; bool has_sd; } ls_certificate;
typedef struct ls_certificates { size_t n; ls_certificate *rows; } ls_certificates;

/* False: why says what is wrong; with degree -1 that no model of a polynomial was found. Release with set_free whatever
   came back. */
bool set_read(ls_set *out, char why[SET_WHY], const char *path);
void set_free(ls_set *set);
bool certificates_read(ls_certificates *out, char why[SET_WHY], const char *path);
void certificates_free(ls_certificates *certificates);
/* NULL if there is none. Names of sets are compared without case. */
const ls_certificate *certificate_find(const ls_certificates *certificates, const char *dataset, const char *item);

/* Digits of got that are right: -log10 |got - want|/|want|, at most the 15 of a certificate; want is not 0. */
double set_digits(double got, quad want);

#endif
