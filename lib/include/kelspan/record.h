/* SPDX-License-Identifier: Apache-2.0 */
/* The record: one mean curve, a few mode curves, what they stand for and where they came from. */
#ifndef KELSPAN_RECORD_H
#define KELSPAN_RECORD_H

#include <stdbool.h>
#include <kelspan/status.h>
#include <kelspan/text.h>

#ifdef __cplusplus
extern "C" {
#endif

typedef enum kel_base {
    KEL_BASE_REFERENCE, /* `reference length`: alpha = (1/L0) dL/dT, e = integral of alpha */
    KEL_BASE_CURRENT    /* `current length`:   alpha = (1/L) dL/dT,  e = expm1(integral of alpha) */
} kel_base;

typedef enum kel_kind { KEL_KIND_COEFFICIENT, KEL_KIND_MEAN, KEL_KIND_EXPANSION } kel_kind;

typedef enum kel_mode_kind { KEL_MODE_FIT, KEL_MODE_SHARED, KEL_MODE_LOT } kel_mode_kind;

/* Where the uncertainty of the rows came from. */
typedef enum kel_variance {
    KEL_VARIANCE_NONE,      /* u is not known (or holds only shared errors and lot spread) */
    KEL_VARIANCE_GIVEN,     /* every row's independent u was stated */
    KEL_VARIANCE_ESTIMATED, /* from the residuals */
    KEL_VARIANCE_MIXED,     /* stated for some rows, estimated for the others */
    KEL_VARIANCE_STATED     /* adopted: stated for the curve as a whole */
} kel_variance;

/* A piece owns [from, to), the last one [from, to]. With x = (2T - from - to)/(to - from) (0 if from = to), the mean
   curve is sum c_j T_j(x), c_0 not halved, c_j = coefficients[first + j] for j < count; 1 <= count <=
   KEL_COEFFICIENTS_MAX. */
enum { KEL_COEFFICIENTS_MAX = 128 };
typedef struct kel_piece {
    double from, to;   /* K */
    size_t first, count;
} kel_piece;

typedef enum kel_step_kind { KEL_STEP_NONE, KEL_STEP_FITTED, KEL_STEP_STATED } kel_step_kind;

/* A declared transition at T; inside the pieces' hull it is always a join. A step at T belongs to e(T): it is crossed
   by an interval lo..hi when lo < T <= hi. */
typedef struct kel_transition {
    double at;         /* K */
    kel_step_kind step;
} kel_transition;

/* Mean curve and modes have their own numbers on common pieces and transitions. */
typedef struct kel_curve {
    const double *coefficients; /* 1/K; content.coefficient_count of them */
    /* content.transition_count of them, in the integral's unit (1); 0 where there is no step */
    const double *steps;
} kel_curve;

typedef struct kel_mode {
    kel_mode_kind kind;
    const char *label;          /* what it stands for: "scatter", "table.csv relative 2 %", "lot spread 1 %" */
    kel_curve curve;
} kel_mode;

/* One table, or one set of adopted coefficients. Strings are NULL where nothing was stated. */
typedef struct kel_source {
    const char *name;           /* last component of the file's name */
    const char *digest;         /* SHA-256 of its bytes, 64 hexadecimal digits */
    const char *material, *condition, *direction, *product_form, *source, *lineage, *scale, *branch;
    double reference_temperature; /* K as the table has it; NaN if it has none */
    kel_base base;
    size_t rows, left_out;
    const char *const *uncertainty; size_t uncertainty_count; /* the metadata values as printed */
    const char *const *notes; size_t note_count;
} kel_source;

/* One value column that was fitted. NaN where not known. */
typedef struct kel_fit_column {
    size_t source;              /* index into content.sources */
    kel_kind kind;
    const char *label;          /* series label or NULL */
    size_t observations;
    double degrees_of_freedom;  /* n - sum of leverages */
    double residual_standard_deviation; /* 1/K or 1 */
    double scatter;             /* estimated s of this column (u_i^2 = s^2 w_i^2 + resolution^2/12) */
    double resolution;          /* one unit of the finest printed digit, SI */
    kel_variance variance;      /* given or estimated or none */
} kel_fit_column;

/* One row of one column. coefficient: from = to = T. mean: its interval. expansion: from = its reference, to = T. */
typedef struct kel_fitted {
    size_t source, column;      /* indices into content.sources and content.columns */
    size_t line;                /* in the table's file */
    kel_kind kind;
    double from, to;            /* K */
    double observed, fitted, residual; /* SI, in the table's own reference and base; fitted is the curve's value */
    double shared_term;         /* what the table's shared errors add at this row; residual does not count it */
    double u;                   /* independent standard uncertainty used, NaN if not known */
    int side;                   /* -1 below, +1 above a transition at `to`, 0 elsewhere */
    const char *left_out;       /* reason, NULL if it was fitted */
} kel_fitted;

typedef struct kel_interval { double lo, hi; } kel_interval;

typedef struct kel_check { double at, coefficient, expansion; } kel_check;

/* Everything a record holds. Unknown numbers are NaN. For building one, and for looking into one. */
typedef struct kel_content {
    const char *form;           /* "polynomial", "piecewise", "adopted" */
    kel_base base;
    double reference_temperature; /* K */
    bool reference_defaulted;   /* 293.15 K because no table said otherwise */
    kel_interval range;         /* validity range */
    const kel_interval *gaps; size_t gap_count;

    const kel_piece *pieces; size_t piece_count;
    const kel_transition *transitions; size_t transition_count;
    size_t coefficient_count;   /* of a curve, over all pieces */
    /* per inner join: -1 none, 0 value, 1 slope, 2 curvature of alpha */
    const int *continuity; size_t continuity_count;
    kel_curve mean;
    const kel_mode *modes; size_t mode_count; /* none: u is not known */

    kel_variance variance;
    bool scatter_known;         /* false: u covers only shared errors and lot spread */
    size_t observations, parameters; /* rows fitted; free parameters of the curve */
    double degrees_of_freedom;
    double residual_standard_deviation; /* NaN for mixed kinds */
    double chi2;                /* prior rows of shared errors included; NaN if no row's u was stated */
    const kel_source *sources; size_t source_count;
    const kel_fit_column *columns; size_t column_count;
    const kel_fitted *rows; size_t row_count; /* all rows, those left out included; a thinned set above 5,000 */
    bool thinned;

    const kel_check *checks; size_t check_count; /* kel_record_build makes them; ignored on input */
    const char *lot_spread;     /* as printed, or NULL */
    const char *annotations;    /* a JSON object as text, or NULL */
    const char *digest;         /* kel_record_build makes it; ignored on input */
} kel_content;

typedef struct kel_record kel_record;

/* Checks and copies content into a new record; computes check values and digest. KEL_E_ARGUMENT for content that breaks
   the rules above (pieces that do not adjoin, non-finite coefficients, step on no transition, ...); the message names
   the key of kelspan-record(5). Pieces take the coefficients in order and without a rest (first = sum of the counts
   before); the range lies within the pieces; observations is the number of rows that are not left out (unless thinned)
   and of the columns' together. Since 0.1. */
KEL_API kel_status kel_record_build(kel_record **out, const kel_content *content, kel_error *err);
KEL_API void kel_record_free(kel_record *record);

/* What the record holds; valid as long as the record. */
KEL_API const kel_content *kel_record_content(const kel_record *record);

/* Parses the JSON text of a record (kelspan-record(5)). KEL_E_SYNTAX with line and column; KEL_E_DATA unknown key,
   missing key, value that breaks a rule (the message names the key); KEL_E_VERSION; KEL_E_DIGEST. Since 0.1. */
KEL_API kel_status kel_record_parse(kel_record **out, const char *bytes, size_t n, kel_error *err);

/* Appends the record's JSON text: same record, same bytes. KEL_E_NOMEM. Since 0.1. */
KEL_API kel_status kel_record_format(kel_text *out, const kel_record *record, kel_error *err);

/* Reads a file (at most 16 MiB) and parses it. KEL_E_IO with the system's reason. Since 0.1. */
KEL_API kel_status kel_record_load(kel_record **out, const char *path, kel_error *err);

/* Writes beside the target and renames, so that a failure leaves what was there; a target that is not a regular file
   (a device, a pipe) is written directly. KEL_E_IO. Since 0.1. */
KEL_API kel_status kel_record_save(const kel_record *record, const char *path, kel_error *err);

/* The same way of writing, for any bytes. */
KEL_API kel_status kel_file_save(const char *path, const char *bytes, size_t n, kel_error *err);

/* SHA-256 in pieces. hex gets 64 digits and a NUL. */
typedef struct kel_digest kel_digest;
KEL_API kel_status kel_digest_new(kel_digest **out, kel_error *err);
KEL_API void kel_digest_add(kel_digest *digest, const void *bytes, size_t n);
KEL_API void kel_digest_finish(kel_digest *digest, char hex[65]);
KEL_API void kel_digest_free(kel_digest *digest);

/* Names used in files and messages: "reference length", "coefficient" | "mean coefficient" | "expansion", "fit" |
   "shared" | "lot", "none" | "given" | "estimated" | "mixed" | "stated". */
KEL_API const char *kel_base_name(kel_base base);
KEL_API const char *kel_kind_name(kel_kind kind);
KEL_API const char *kel_mode_kind_name(kel_mode_kind kind);
KEL_API const char *kel_variance_name(kel_variance variance);

/* Piece `piece` of the mean curve as sum_k coefficient[k] t^k, k < count of the piece, in 1/K per K^k if t is T in
   kelvin; t = (T - centre)/scale in general (centre, scale in K). u[k], may be NULL, its standard uncertainty from the
   modes (NaN if not known). Accurate to 8 eps of the largest term that makes up each coefficient (worked in twice the
   precision). KEL_E_ARGUMENT for a piece that does not exist, a centre or scale that is not finite, scale 0;
   KEL_E_RANGE where powers of so distant a centre exceed a double (all NaN then). Since 0.1. */
KEL_API kel_status kel_record_powers(double *coefficient, double *u, const kel_record *record, size_t piece,
                                     double centre, double scale, kel_error *err);

#ifdef __cplusplus
}
#endif
#endif
