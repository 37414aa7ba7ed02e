/* SPDX-License-Identifier: Apache-2.0 */
/* Answers from a record, each with its standard uncertainty and its flags. */
#ifndef KELSPAN_ANSWER_H
#define KELSPAN_ANSWER_H

#include <kelspan/record.h>

#ifdef __cplusplus
extern "C" {
#endif

/* With e counted from the query's reference r, I the integral of the record's alpha plus the steps crossed, L a length:
     COEFFICIENT   alpha(to), 1/K, in the query's base
     MEAN          [e(to) - e(from)]/(to - from), 1/K; its limit where from = to
     EXPANSION     e(to)
     INTEGRAL      I(from, to): e(to) - e(from) for a record and query in `reference length`, ln L(to)/L(from) in
     `current length` LENGTH_RATIO  L(to)/L(from)
     CHANGE        [L(to) - L(from)]/L(at): times the length at `at`, the change of a part. Nearly always at = from. */
typedef enum kel_quantity {
    KEL_COEFFICIENT, KEL_MEAN, KEL_EXPANSION, KEL_INTEGRAL, KEL_LENGTH_RATIO, KEL_CHANGE
} kel_quantity;

typedef struct kel_query {
    kel_quantity quantity;
    double from, to, at;   /* K; COEFFICIENT and EXPANSION use `to` only, `at` is for CHANGE */
    double reference;      /* K; NaN: the record's */
    int base;              /* a kel_base; -1: the record's */
} kel_query;

/* u^2 = u_fit^2 + u_shared^2 + u_lot^2; all NaN and KEL_FLAG_UNKNOWN_U where u is not known. */
typedef struct kel_answer {
    double value, u;
    double u_fit, u_shared, u_lot;
    unsigned flags;        /* KEL_FLAG_... */
} kel_answer;

/* The general call. Returns KEL_OK or the gravest reservation among the flags; KEL_E_ARGUMENT for non-finite
   temperatures, an infinite reference, an unknown quantity or base; KEL_E_RANGE for a temperature below 0 K, or where
   the curve continued far outside gives no positive, finite length. On an error out is NaN with KEL_FLAG_UNKNOWN_U.
   Extrapolated unless all that the answer depends on lies inside the validity range: COEFFICIENT `to`, EXPANSION the
   reference and `to`, the others both ends, CHANGE `at` too. Beside these, in a reference-length record, with R its own
   reference temperature: LENGTH_RATIO and CHANGE need R; so do COEFFICIENT and INTEGRAL asked for in `current length`;
   whatever is asked for with another reference needs that and R (except in these four cases). In a current-length
   record: MEAN needs the reference, and so do COEFFICIENT and INTEGRAL asked for in `reference length`. Gap: `to` or an
   end of the interval lies strictly inside one. Transition: one lies in lo < T <= hi of the interval; EXPANSION is the
   interval from the reference, COEFFICIENT has none. Bounds compare exactly.
   Accuracy: each coefficient and integral of alpha that the answer is made of is within the bound below; its error goes into the answer with the
   answer's derivative by it, and 8 eps of the answer come on top. Since 0.1. */
KEL_API kel_status kel_record_answer(kel_answer *out, const kel_record *record, const kel_query *query, kel_error *err);

/* The same in the record's own reference and base. value within (2n + 4) eps sum |c_k| of the piece for the
   coefficient, times the width of the interval for the integral (n: degree): an interval of 1 mK is as accurate as one
   of 1000 K. Since 0.1. */
KEL_API kel_status kel_record_coefficient(kel_answer *out, const kel_record *record, double t, kel_error *err);
KEL_API kel_status kel_record_mean(kel_answer *out, const kel_record *record, double from, double to, kel_error *err);
KEL_API kel_status kel_record_expansion(kel_answer *out, const kel_record *record, double t, kel_error *err);
KEL_API kel_status kel_record_integral(kel_answer *out, const kel_record *record, double from, double to,
                                       kel_error *err);
KEL_API kel_status kel_record_length_ratio(kel_answer *out, const kel_record *record, double from, double to,
                                           kel_error *err);

/* Covariance of two answers from one record: sum over modes of the products of their derivatives along the mode.
   KEL_E_DATA where u is not known; errors as kel_record_answer (*out = NaN); else KEL_OK or the gravest reservation of
   the two. Since 0.1. */
KEL_API kel_status kel_record_covariance(double *out, const kel_record *record, const kel_query *a, const kel_query *b,
                                         kel_error *err);

/* Array calls: n answers into value[n]; u[n] and flags[n] may be NULL. No allocation; returns the worst status. A query that fails
   gives NaN, and the call goes on with the next; its status is negative at the end, err holds the first one with its place,
   counted from 1, in err->line. value or u may be the array `from`, `to` or `t`; flags, status and failures are those of single calls.
   Accuracy: curves whose pieces have at most degree 12, and whose rounding as powers of T - centre has been bounded beforehand, go through
   vector code. It gives alpha, mean and integral within 1e-13 of what sum |c_k| gives in the place of alpha (times the width for an
   integral; steps crossed count with their sizes), in the base `current length` expansion and length ratio within that times L(T)/L(from),
   and u within 1e-10 of what the modes' sum |c_k| gives; outside the pieces 1e-10, each term with the size that it has there. Degree 5 and
   below always do, higher ones where the coefficients fall off. All other curves, and length ratio and mean of a base where they lean on
   more than from and to, give the same bits as single calls. The processor chooses the code: last bits may differ between machines. Since 0.1. */
KEL_API kel_status kel_record_coefficient_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                                            const double *t, size_t n, kel_error *err);
KEL_API kel_status kel_record_mean_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                                     const double *from, const double *to, size_t n, kel_error *err);
KEL_API kel_status kel_record_expansion_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                                          const double *t, size_t n, kel_error *err);
KEL_API kel_status kel_record_integral_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                                         const double *from, const double *to, size_t n, kel_error *err);
KEL_API kel_status kel_record_length_ratio_n(double *value, double *u, unsigned char *flags, const kel_record *record,
                                             const double *from, const double *to, size_t n, kel_error *err);

/* Kelvin of the interval from..to that lie outside the validity range. 0 inside. */
KEL_API double kel_record_outside(const kel_record *record, double from, double to);

/* Is T inside the validity range (bounds included)? In a gap (ends excluded)? */
KEL_API bool kel_record_inside(const kel_record *record, double t);
KEL_API bool kel_record_in_gap(const kel_record *record, double t);

#ifdef __cplusplus
}
#endif
#endif
