/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Fits: tables in, a record out. */
#ifndef KELSPAN_FIT_H
#define KELSPAN_FIT_H

#include <kelspan/table.h>

#ifdef __cplusplus
extern "C" {
#endif

enum { KEL_DEGREE_AUTO = -1, KEL_DEGREE_MAX = 60 };
enum { KEL_CONTINUITY_NONE = -1, KEL_CONTINUITY_VALUE = 0, KEL_CONTINUITY_SLOPE = 1, KEL_CONTINUITY_CURVATURE = 2 };

typedef struct kel_fit_options {
    /* none: auto; one: for all pieces; else one a piece, in order of temperature */
    const int *degrees; size_t degree_count;
    const double *joins; size_t join_count;    /* K, beside the declared transitions */
    /* none: value; one: for all joins; else one a join of `joins`, in order of temperature */
    const int *continuity; size_t continuity_count;
    bool piecewise;                            /* the form was asked for by name: without joins an error */
    double reference;                          /* K; NaN: the first table's, else 293.15 K */
    int base;                                  /* a kel_base; -1: the first table's */
    kel_interval range;                        /* NaN: all */
    double gap;                                /* K; 0: the default rule */
    void (*progress)(void *context, double share); void *progress_context;
} kel_fit_options;

#define KEL_FIT_OPTIONS_INIT { NULL, 0, NULL, 0, NULL, 0, false, NAN, -1, { NAN, NAN }, 0.0, NULL, NULL }

/* One candidate that degree auto compared. */
typedef struct kel_candidate {
    int degree;
    size_t parameters;
    double residual_standard_deviation; /* NaN for mixed kinds */
    double chi2;                        /* NaN where no u is stated */
    double criterion;
    bool chosen;
    const char *refused;                /* why it could not be compared, or NULL */
} kel_candidate;

/* What a fit says beside its record. */
typedef struct kel_fit_report {
    const kel_candidate *candidates; size_t candidate_count;   /* none with explicit degrees */
    const char *criterion;              /* which rule decided, for people */
    const kel_warning *warnings; size_t warning_count;
    int rank;                           /* of the free parameters: always full in a delivered fit */
    double condition;                   /* 2-norm condition number of the column-scaled weighted problem */
    double chi2_probability;            /* lower tail; NaN without stated u */
    /* sqrt(chi2/nu): by which the other scaling would multiply the scatter part of u; NaN where only one exists */
    double scaled_factor;
    int iterations;
} kel_fit_report;

/* Fits alpha(T) to the tables' observations by weighted linear least squares: Chebyshev basis on the pieces, every row
   the functional it is, e(Tref) = 0 by construction. report may be NULL; free it with kel_fit_report_free. KEL_E_RANK
   (rows do not determine the parameters; the message names the piece), KEL_E_DATA (different directions, step that no
   row crosses, ...), KEL_E_CONVERGENCE, KEL_E_NOMEM. Since 0.1. */
KEL_API kel_status kel_fit(kel_record **out, kel_fit_report **report, const kel_table *const *tables,
                           size_t table_count, const kel_fit_options *options, kel_error *err);
KEL_API void kel_fit_report_free(kel_fit_report *report);

#ifdef __cplusplus
}
#endif
#endif
