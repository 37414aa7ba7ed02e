/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the files of a fit share: the rows, the layout of the unknowns, the triangular factor, a solution. Not
   installed.

   Unknowns are ordered [coefficients of all pieces | fitted steps | shared errors]. The first two are the curve's. */
#ifndef KELSPAN_PROBLEM_H
#define KELSPAN_PROBLEM_H

#include <math.h>
#include <stdint.h>
#include <kelspan-fit.h>

#if defined __FAST_MATH__
#error "kelspan needs IEEE arithmetic: do not compile with -ffast-math"
#endif

#define KEL__EPS 2.220446049250313e-16 /* 2^-52 */

/* A fitted row: its observation, the table and (over all tables) the column it came from. */
typedef struct kel__row {
    const kel_observation *seen;
    uint32_t table, column;
    int8_t side;            /* -1: just below a transition at seen->to, +1: above, 0: elsewhere */
    double width;           /* |Tb - Ta| of a mean (its nearest neighbour's at Ta = Tb), 1 for other kinds */
} kel__row;

/* A value column over all tables. */
typedef struct kel__column {
    size_t table, local;    /* which table, which of its columns */
    kel_kind kind;
    double resolution;      /* as printed, SI */
    double rounding;        /* of the doubles: 4 eps of the largest value */
    double least;           /* smallest independent u of a row: resolution/sqrt 12, or the doubles' own rounding */
    size_t rows, stated;    /* fitted rows; of these with a stated independent u */
    double typical_width;   /* median |Tb - Ta| of the unstated mean rows; 1 for other kinds */
} kel__column;

/* A shared error of a table: one parameter with a prior row of size 1. */
typedef struct kel__shared { size_t table; bool relative; } kel__shared;

typedef struct kel__problem {
    kel_arena *memory;
    const kel_table *const *tables; size_t table_count;
    const kel_fit_options *options;
    kel__row *rows; size_t row_count;           /* those that are fitted, in the tables' order */
    /* per observation, all tables in order: reason added by the fit, or NULL */
    const char **left_out;
    kel__column *columns; size_t column_count;
    size_t *first_column;                       /* per table */
    kel__shared *shared; size_t shared_count;
    double reference; bool reference_defaulted; /* of the record */
    kel_base base;
    kel_interval hull;                          /* of all supports: the pieces cover it */
    kel_interval range;                         /* hull clipped to options->range: the validity range */
    kel_declared_transition *transitions; size_t transition_count; /* merged from all tables, sorted */
    double *transition_reference;               /* per transition: reference temperature its stated length refers to */
    double *joins; size_t join_count;           /* all, sorted: transitions inside the hull, and options->joins */
    int *continuity;                            /* per join */
    bool uniform;     /* one weight serves all rows: one column, nothing stated, no shared errors, no unequal widths */
    bool linear;      /* all rows are linear in the unknowns */
    /* every row's u is stated as an absolute one and nothing is shared: weights are known beforehand */
    bool fixed;
} kel__problem;

/* The unknowns for given degrees. */
typedef struct kel__layout {
    kel_piece *pieces; size_t piece_count;
    size_t coefficients;                        /* over all pieces */
    size_t steps;                               /* fitted steps */
    size_t curve;                               /* coefficients + steps */
    size_t unknowns;                            /* curve + shared errors */
    /* per transition: its stated length in the integral's unit, 0 if none */
    double *step_length;
    size_t *step_unknown;                       /* per transition: index of the unknown, SIZE_MAX if it is not fitted */
    double *conditions; size_t condition_count; /* continuity: condition_count rows of `coefficients` numbers */
    double *nodes, *weights; size_t node_count; /* Gauss-Legendre on -1..1, exact for every piece */
} kel__layout;

/* R of a QR factorisation that grows block by block; the right-hand side is the last column. */
typedef struct kel__factor {
    size_t columns;         /* right-hand side included */
    double *r;              /* columns x columns, by columns, upper triangle */
    double *block;          /* BLOCK x columns, by columns */
    size_t filled;
} kel__factor;

/* A solved problem. Sums over columns are arrays of problem->column_count numbers. */
typedef struct kel__solution {
    kel__layout layout;
    size_t parameters;      /* free ones of the curve: layout.curve less independent conditions */
    bool every_piece;       /* in every piece the rows determine all its coefficients by themselves */
    double *x;              /* layout.unknowns */
    double *basis;          /* Z, curve x parameters by columns: x_curve = Z z */
    /* R of [Z-columns | shared], square of parameters + shared, by columns, rows weighted by 1/u */
    double *triangle;
    double residual;        /* norm of what is left of the right-hand side, rows weighted by 1/u */
    double condition;
    int rank;
    double *scatter;        /* s of a column's unstated rows; NaN where not known */
    double factor;          /* u = factor * least of the columns with too few degrees of freedom */
    bool scatter_known;
    double *freedom;        /* of its unstated rows: their number less their leverages */
    double *leverage;       /* sum over all its rows */
    double *rss;            /* sum of squared residuals, net of shared terms */
    double *unstated_rss;   /* of the unstated rows, each over (w_i/median w)^2 */
    double *unstated_floor; /* what rounding alone would make of it */
    size_t stated;          /* rows with stated independent u */
    double stated_leverage;
    double chi2;            /* stated rows and prior rows */
    double relative_rss;    /* of the stated rows, each times (typical u/u)^2, typical: geometric mean */
    double relative_floor;
    int iterations;
} kel__solution;

/* observe.c */
kel_status kel__problem_make(kel__problem *problem, kel_arena *memory, const kel_table *const *tables,
                             size_t table_count, const kel_fit_options *options, kel_error *err);

/* joins.c: transitions of all tables in one list; then, with the hull known, joins, sides of rows and a look at the
   steps. */
kel_status kel__merge_transitions(kel__problem *problem, kel_error *err);
kel_status kel__lay_joins(kel__problem *problem, kel_error *err);

/* layout.c */
kel_status kel__layout_make(kel__layout *layout, const kel__problem *problem, kel_arena *memory, const int *degrees,
                            kel_error *err);

/* basis.c: rows of functionals. `row` has layout->curve numbers and is added to, times factor. The return value is the
   part that stated steps contribute. A point is (T, side); side < 0 lies just below a transition at T. */
static inline bool
kel__above(double t, int side, double transition)
{
    return t > transition || (t == transition && side >= 0);
}
size_t kel__piece_at(const kel__layout *layout, double t, int side);
void kel__add_value(double *row, const kel__layout *layout, double t, int side, double factor);
double kel__add_integral(double *row, const kel__layout *layout, const kel__problem *problem, double a, int side_a,
                         double b, int side_b, double factor);

/* model.c: one row's model value at x, its gradient (layout->curve numbers), and whether the model is linear (then
   value = gradient.x + constant). */
typedef struct kel__model { double value, constant; bool linear; } kel__model;
kel__model kel__model_row(double *gradient, double *work, const kel__problem *problem, const kel__layout *layout,
                          const kel__row *row, const double *x);
/* Reference temperature that a table's values refer to: its own, else the record's. */
double kel__table_reference(const kel__problem *problem, size_t table);
/* Stated steps in the integral's unit, which for some references and bases depends on the curve. */
void kel__model_steps(kel__layout *layout, const kel__problem *problem, const double *x, double *work);
/* What a table's shared error `index` adds per unit of its parameter to a row whose curve value is `value`. */
double kel__shared_size(const kel__problem *problem, size_t index, const kel__row *row, double value);

/* triangle.c */
kel_status kel__factor_new(kel__factor *factor, kel_arena *memory, size_t columns, kel_error *err);
void kel__factor_clear(kel__factor *factor);
void kel__factor_add(kel__factor *factor, const double *row, double weight); /* row[columns], multiplied by weight */
void kel__factor_flush(kel__factor *factor);

/* reduce.c: the reduced problem, by LAPACK. r has `height` rows and layout.unknowns + 1 columns, by columns, the last
   one the right-hand side. Fills parameters, every_piece, x, basis, triangle, residual, condition, rank. KEL_E_RANK. */
kel_status kel__reduce(kel__solution *solution, kel_arena *memory, const double *r, size_t height, kel_error *err);
/* 2-norm condition and rank of an upper triangle (n x n, by columns, `stride` apart) with its columns scaled to length
   1. KEL_E_RANGE: it is not finite. */
kel_status kel__condition(double *condition, int *rank, const double *triangle, size_t stride, size_t n,
                          kel_arena *memory, kel_error *err);
/* modes.c needs these three. */
/* R' y = b in place */
void kel__solve_transposed(double *b, const double *triangle, size_t n);
void kel__solve_upper(double *b, const double *triangle, size_t stride, size_t n);                /* R y = b in place */
/* vectors replace the matrix */
kel_status kel__eigen(double *values, double *symmetric, size_t n, kel_arena *memory, kel_error *err);
/* L of a = L Q, rows <= columns */
kel_status kel__lower_factor(double *out, double *a, size_t rows, size_t columns, kel_arena *memory, kel_error *err);

/* modes.c: columns of `out` (layout.curve numbers each): first *scatter_count of the rows' independent errors, then one
   per shared error. */
kel_status kel__modes(double **out, size_t *scatter_count, const kel__problem *problem, const kel__solution *solution,
                      kel_arena *memory, kel_error *err);

/* solve.c */
kel_status kel__solve(kel__solution *solution, const kel__problem *problem, kel_arena *memory, const int *degrees,
                      kel_error *err);
/* Linear problems whose weights are known beforehand (uniform or fixed): factor once at the highest degrees, then solve
   for any lower ones from that. With fixed weights leverages are not summed. */
kel_status kel__factor_all(kel__factor *factor, kel__layout *layout, const kel__problem *problem, kel_arena *memory,
                           const int *degrees, kel_error *err);
kel_status kel__solve_from(kel__solution *solution, const kel__problem *problem, kel_arena *memory,
                           const kel__factor *factor, const kel__layout *full, const int *degrees, kel_error *err);
/* row_result.c: what a solution says of one row. work: 3 layout.unknowns numbers. */
typedef struct kel__row_result { double fitted, residual, shared_term, u, leverage; } kel__row_result;
kel__row_result kel__row_evaluate(const kel__problem *problem, const kel__solution *solution, const kel__row *row,
                                  bool with_leverage, double *work);

/* variance.c */
kel_status kel__solution_arrays(kel__solution *solution, const kel__problem *problem, kel_arena *memory,
                                kel_error *err);
double kel__row_u(const kel__problem *problem, const kel__solution *solution, const kel__row *row, double value);
/* Sums of a solution over its rows, and the scatter that they show; *change: the largest relative change of a scatter.
   Without `leverages`, which scatter needs and stated u do not, those sums stay 0. */
kel_status kel__estimate_scatter(double *change, kel__solution *solution, const kel__problem *problem, bool leverages,
                                 kel_arena *memory, kel_error *err);
void kel__uniform_scatter(kel__solution *solution, const kel__problem *problem);

/* degree.c: the degrees asked for, or the automatic choice; and their solution. */
kel_status kel__choose_degree(kel__solution *solution, kel_fit_report *report, const kel__problem *problem,
                              kel_arena *memory, kel_arena *report_memory, kel_error *err);
/* Probability that a chi-square variable with nu degrees of freedom lies below x. */
double kel__chi2_below(double x, double nu);

/* account.c */
kel_status kel__account(kel_content *content, const kel__problem *problem, const kel__solution *solution,
                        kel_arena *memory, kel_error *err);
const char *kel__last_component(const char *name);

/* compile.c */
kel_status kel__compile(kel_record **out, const kel__problem *problem, const kel__solution *solution, kel_arena *memory,
                        kel_error *err);

#endif
