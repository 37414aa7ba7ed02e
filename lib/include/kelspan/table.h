/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Handbook tables (kelspan-table(5)): read, understood, checked, and written out again. */
#ifndef KELSPAN_TABLE_H
#define KELSPAN_TABLE_H

#include <kelspan/record.h>
#include <kelspan/rows.h>
#include <kelspan/unit.h>

#ifdef __cplusplus
extern "C" {
#endif

/* One printed value that takes part in a fit, or is listed as left out. SI; value and u in the table's own reference
   and base. coefficient: from = to = T.   mean: from, to its interval (from = to: the limit, a coefficient).  
   expansion: from = its reference, to = T. */
typedef struct kel_observation {
    kel_kind kind;
    double from, to;
    double value;
    /* independent standard uncertainty, absolute part (column and metadata in quadrature); 0: none */
    double u_absolute;
    double u_relative;         /* independent, fraction of the curve's value; 0: none */
    bool u_stated;             /* an independent u is stated for this row */
    size_t column;             /* index into the table's columns */
    size_t line;               /* in the file; of a transposed table the number of its column, from 1 */
    /* the temperatures printed in this row, K (equal where one is printed): what --range looks at */
    double printed_lo, printed_hi;
    const char *left_out;      /* reason, or NULL */
} kel_observation;

/* A value column that gives observations. */
typedef struct kel_column {
    kel_kind kind;
    const char *label;         /* series label, NULL if none */
    const char *unit;          /* as printed, for people */
    /* one unit of the finest last digit printed in it, SI; 0 if nothing was printed (arrays) */
    double resolution;
    bool contraction;          /* printed positive for shrinking */
} kel_column;

/* A shared error or lot spread that metadata state: standard uncertainties, relative (fraction) and absolute (SI), in
   lo..hi. */
typedef struct kel_stated {
    double relative, absolute;
    kel_dimension dimension;   /* of the absolute part: KEL_DIM_PER_KELVIN or KEL_DIM_ONE */
    double lo, hi;             /* K; -infinity, infinity where no range is stated */
    const char *text;          /* the metadata value as printed */
} kel_stated;

typedef struct kel_declared_transition {
    double at;                 /* K */
    kel_step_kind step;
    double length;             /* of a stated step, L/L0; 0 otherwise */
    const char *text;
} kel_declared_transition;

typedef struct kel_warning { const char *code, *text; size_t line; size_t count; } kel_warning;

/* A table as understood. All strings and arrays live as long as the table. */
typedef struct kel_table {
    const char *name;          /* as given */
    const char *digest;        /* SHA-256 of its bytes, "" for arrays */
    /* NULL: not stated */
    const char *material, *condition, *direction, *product_form, *source, *lineage, *scale, *branch;
    double reference_temperature; /* K; NaN: none stated */
    const char *reference_printed;
    kel_base base;
    bool base_stated;
    bool contracts_on_heating, shift_to_reference, transposed;
    double shift;              /* by which expansions were shifted */

    const kel_column *columns; size_t column_count;       /* those that are fitted */
    const kel_observation *observations; size_t observation_count; /* in the table's order, left-out ones included */
    size_t rows, rows_left_out; /* data rows; those without any fitted value */
    size_t empty_cells, marked_cells;
    kel_interval range;        /* hull of what the fitted observations support; NaN if none */
    const kel_interval *gaps; size_t gap_count;

    const kel_stated *shared; size_t shared_count;
    const kel_stated *lot; size_t lot_count;
    const char *lot_text;
    const kel_declared_transition *transitions; size_t transition_count;
    const char *const *uncertainty; size_t uncertainty_count; /* all `uncertainty:` values as printed */
    const char *const *notes; size_t note_count;
    const kel_warning *warnings; size_t warning_count;

    struct kel__table *inner;  /* what read --as csv needs */
} kel_table;

typedef enum kel_kind_choice {
    KEL_CHOOSE_DEFAULT = -1,
    KEL_CHOOSE_COEFFICIENT = KEL_KIND_COEFFICIENT,
    KEL_CHOOSE_MEAN = KEL_KIND_MEAN,
    KEL_CHOOSE_EXPANSION = KEL_KIND_EXPANSION,
    KEL_CHOOSE_ALL = 3
} kel_kind_choice;

typedef struct kel_table_options {
    const char *series;                    /* --series; NULL: the only one */
    kel_kind_choice kind;                  /* --kind */
    const char *const *columns; size_t column_count; /* --column 'QUANTITY [UNIT]=NAME-OR-NUMBER' */
    const char *const *settings; size_t setting_count; /* --set 'key: value' */
    long header;                           /* -1: found by itself; 0: none; N: the file's line N */
    kel_delimiter delimiter;
    bool transpose, include_marked;
    /* 'FILE:LINE=REASON'; those that name this table apply; FILE is compared with the name as given */
    const char *const *leave_out; size_t leave_out_count;
    double gap;                            /* K; 0: the default rule */
    void (*progress)(void *context, size_t rows, size_t bytes); void *progress_context; /* NULL: none */
} kel_table_options;

#define KEL_TABLE_OPTIONS_INIT                                                                                         \
    {                                                                                                                  \
        NULL, KEL_CHOOSE_DEFAULT, NULL, 0, NULL, 0, -1, KEL_DELIMITER_DETECT, false, false, NULL, 0, 0.0, NULL, NULL   \
    }

/* Reads one table. name is for messages and the record. Errors as kelspan-table(5) lists them, with line and column.
   Since 0.1. */
KEL_API kel_status kel_table_read(kel_table **out, kel_input input, const char *name, const kel_table_options *options,
                                  kel_error *err);

/* A table from arrays that a program holds. Observations' values in SI; column 0 .. column_count - 1 of `columns`. NaN
   and values that a table would refuse are refused with their number, from 1, in err->line. line 0 becomes that number;
   u_stated is what u says; a printed temperature left at 0 is derived. Strings are copied. Since 0.1. */
KEL_API kel_status kel_table_from_arrays(kel_table **out, const char *name, const kel_column *columns,
                                         size_t column_count, const kel_observation *observations, size_t n,
                                         double reference_temperature, kel_base base, kel_error *err);

/* The table in the product's own layout, units and digits as printed (kelspan-table(5): intervals as from/to,
   contraction as negative expansion, metadata, marks and left-out rows kept). Read and written again it gives the same
   bytes. KEL_E_ARGUMENT for a table from arrays, which was never printed. Since 0.1. */
KEL_API kel_status kel_table_format(kel_text *out, const kel_table *table, kel_error *err);

KEL_API void kel_table_free(kel_table *table);

#ifdef __cplusplus
}
#endif
#endif
