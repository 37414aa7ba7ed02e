/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The degree of alpha: as asked for, or chosen from 0..10, the same for all pieces.

   n rows, k free parameters of the curve. Candidates: k <= n - r with r = max(2, floor(n/3)), r = 1 for n of 3 or 4,
   and rows of full rank in every piece. Two rows give a line, one row a constant.
   Without stated u, Bayes' criterion (G. Schwarz, Ann. Statist. 6 (1978) 461), a variance for each value column c:
       sum_c n_c ln(RSS_c/n_c) + (k + number of columns) ln n,   RSS_c at least n_c max(resolution^2/12, (4 eps
       max|y|)^2)
   and of the degrees within 4 of the smallest value the lowest. With stated u: chi2 + 4k, the lowest within 2: a
   further coefficient must be worth two standard uncertainties. (With 2k, Mallows' C_p, Technometrics 15 (1973) 661,
   alpha came out two to three times worse in the tenth of the simulated tables where it went wrong.) Columns of both
   sorts: the sum, with the first penalty. Where chi2 of the choice lies outside its 0.1 % to 99.9 % range the stated u
   are taken as relative weights and the first rule decides. Measured by `make simulate`. */
#include "problem.h"

#include <gsl/gsl_cdf.h>

enum { HIGHEST = 10, CANDIDATES = HIGHEST + 1 };

static const char bayes[] = "Bayes criterion, lowest degree within 4 of the smallest";
static const char chi_square[] = "chi2 + 4k, lowest degree within 2 of the smallest";
static const char mixed[] =
    "chi2 of the stated rows + Bayes criterion of the others, lowest degree within 4 of the smallest";
static const char relative[] = "Bayes criterion with the stated u as relative weights (their chi2 is not credible), "
                               "lowest degree within 4 of the smallest";
static const char too_few[] = "the rows determine no more";

typedef struct candidate {
    bool compared;
    size_t k;
    double by_u, by_weights; /* criterion with stated u taken at their word, and as relative weights */
    double chi2, rss;
    const char *refused;
} candidate;

double
kel__chi2_below(double x, double nu)
{
    return nu > 0 && x >= 0 ? gsl_cdf_chisq_P(x, nu) : (double)NAN;
}

static size_t
rows_to_spare(size_t n)
{
    return n >= 5 ? (n / 3 > 2 ? n / 3 : 2) : n >= 3 ? 1 : 0;
}

/* Every column must keep as many rows to spare as a fit of it alone: a curve bent through the rows of one column would
   make their scatter, and with it their weight, whatever it likes. */
static bool
some_column_overfitted(const kel__problem *p, const kel__solution *s)
{
    for (size_t i = 0; i < p->column_count; i++) {
        size_t unstated = p->columns[i].rows - p->columns[i].stated;
        if (unstated >= 3 && s->freedom[i] < (double)rows_to_spare(unstated) - 1e-6)
            return true;
    }
    return false;
}

static void
measure(candidate *c, const kel__problem *p, const kel__solution *s)
{
    double n = (double)p->row_count, unstated = 0, columns = 0;
    c->k = s->parameters;
    c->chi2 = s->chi2;
    for (size_t i = 0; i < p->column_count; i++) {
        double rows = (double)(p->columns[i].rows - p->columns[i].stated);
        c->rss += s->rss[i];
        if (rows == 0)
            continue;
        unstated += rows * log(fmax(s->unstated_rss[i], s->unstated_floor[i]) / rows);
        columns++;
    }
    double k = (double)c->k, stated = (double)s->stated;
    double weighted = stated > 0 ? stated * log(fmax(s->relative_rss, s->relative_floor) / stated) : 0;
    c->by_weights = unstated + weighted + (k + columns + (stated > 0)) * log(n);
    c->by_u = stated == 0    ? c->by_weights
              : columns == 0 ? s->chi2 + 4 * k
                             : s->chi2 + unstated + (k + columns) * log(n);
}

static int
choose(const candidate *all, bool by_u, double within)
{
    double least = INFINITY;
    for (int d = 0; d < CANDIDATES; d++)
        if (all[d].compared)
            least = fmin(least, by_u ? all[d].by_u : all[d].by_weights);
    for (int d = 0; d < CANDIDATES; d++)
        if (all[d].compared && (by_u ? all[d].by_u : all[d].by_weights) <= least + within)
            return d;
    return -1;
}

static kel_status
try_degree(candidate *c, int degree, const kel__problem *p, int *degrees, const kel__factor *factor,
           const kel__layout *full, kel_error *err)
{
    kel_arena *scratch = kel_arena_new();
    if (scratch == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while choosing the degree");
    for (size_t i = 0; i <= p->join_count; i++)
        degrees[i] = degree;
    kel__solution s;
    kel_error mine = { 0 };
    kel_status status = factor != NULL ? kel__solve_from(&s, p, scratch, factor, full, degrees, &mine)
                                       : kel__solve(&s, p, scratch, degrees, &mine);
    if (status == KEL_OK) {
        size_t spare = rows_to_spare(p->row_count);
        measure(c, p, &s);
        c->refused = s.parameters + spare > p->row_count ? "too few rows" : NULL;
        if (c->refused == NULL && !s.every_piece)
            c->refused = "a piece has too few rows";
        if (c->refused == NULL && some_column_overfitted(p, &s))
            c->refused = "too few rows in a column";
        c->compared = c->refused == NULL;
    } else if (status == KEL_E_RANK || status == KEL_E_CONVERGENCE || (status == KEL_E_RANGE && degree > 0)) {
        c->refused = status == KEL_E_RANK ? "the rows do not determine it" : "no convergence";
    } else if (err != NULL) {
        *err = mine;
    }
    kel_arena_free(scratch);
    return c->refused != NULL ? KEL_OK : status;
}

static kel_status
try_all(candidate *all, const kel__problem *p, int *degrees, kel_arena *memory, kel_error *err)
{
    kel__factor factor;
    kel__layout full;
    bool shared_factor = (p->uniform || p->fixed) && p->linear && p->hull.lo < p->hull.hi;
    for (size_t i = 0; i <= p->join_count; i++)
        degrees[i] = HIGHEST;
    kel_status status = shared_factor ? kel__factor_all(&factor, &full, p, memory, degrees, err) : KEL_OK;
    for (int d = 0; d < CANDIDATES && status == KEL_OK; d++) {
        if (p->options->progress != NULL)
            p->options->progress(p->options->progress_context, (double)d / CANDIDATES);
        if (d > 0 && (size_t)d >= p->row_count)
            all[d].refused = "too few rows";
        else
            status = try_degree(&all[d], d, p, degrees, shared_factor ? &factor : NULL, &full, err);
    }
    return status;
}

static kel_status
list_candidates(kel_fit_report *report, const candidate *all, int chosen, bool by_u, const kel__problem *p,
                kel_arena *memory, kel_error *err)
{
    kel_candidate *list = kel_arena_take(memory, CANDIDATES, sizeof *list);
    if (list == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while choosing the degree");
    bool one_kind = true;
    for (size_t i = 1; i < p->column_count; i++)
        one_kind &= p->columns[i].kind == p->columns[0].kind;
    for (int d = 0; d < CANDIDATES; d++) {
        const candidate *c = &all[d];
        double freedom = (double)p->row_count - (double)c->k;
        list[d] = (kel_candidate){ .degree = d,
                                   .parameters = c->k,
                                   .chosen = d == chosen,
                                   .refused = c->refused,
                                   .residual_standard_deviation = NAN,
                                   .chi2 = NAN,
                                   .criterion = NAN };
        if (!c->compared)
            continue;
        list[d].chi2 = c->chi2;
        list[d].criterion = by_u ? c->by_u : c->by_weights;
        if (one_kind && freedom > 0)
            list[d].residual_standard_deviation = sqrt(c->rss / freedom);
    }
    report->candidates = list;
    report->candidate_count = CANDIDATES;
    return KEL_OK;
}

/* The automatic choice; degrees gets it for every piece. */
static kel_status
choose_automatically(int *degrees, kel_fit_report *report, const kel__problem *p, kel_arena *memory,
                     kel_arena *report_memory, kel_error *err)
{
    candidate all[CANDIDATES] = { 0 };
    kel_status status = try_all(all, p, degrees, memory, err);
    if (status < 0)
        return status;
    size_t stated = 0, columns = 0;
    for (size_t i = 0; i < p->column_count; i++) {
        stated += p->columns[i].stated;
        columns += p->columns[i].stated < p->columns[i].rows;
    }
    bool by_u = stated > 0;
    report->criterion = stated == 0 ? bayes : columns == 0 ? chi_square : mixed;
    int chosen;
    if (p->row_count <= 2) { /* nothing shows misfit: all that the rows determine */
        report->criterion = too_few;
        for (chosen = CANDIDATES - 1; chosen > 0 && !all[chosen].compared; chosen--)
            ;
        chosen = all[chosen].compared ? chosen : -1;
    } else {
        chosen = choose(all, by_u, columns == 0 && by_u ? 2 : 4);
        double freedom = chosen < 0 ? 0 : (double)stated * (1 - (double)all[chosen].k / (double)p->row_count);
        double below = by_u && chosen >= 0 ? kel__chi2_below(all[chosen].chi2, freedom) : (double)NAN;
        if (below < 0.001 || below > 0.999) {
            by_u = false;
            report->criterion = relative;
            chosen = choose(all, by_u, 4);
        }
    }
    if (chosen < 0)
        return kel_error_set(err, KEL_E_RANK, 0, 0,
                             "%zu rows do not carry even degree 0 in each of %zu pieces with two rows to spare: give "
                             "--degree, or fewer joins",
                             p->row_count, p->join_count + 1);
    for (size_t i = 0; i <= p->join_count; i++)
        degrees[i] = chosen;
    return list_candidates(report, all, chosen, by_u, p, report_memory, err);
}

static kel_status
take_degrees(int *degrees, const kel__problem *p, kel_error *err)
{
    const kel_fit_options *o = p->options;
    size_t pieces = p->join_count + 1, most = 0;
    if (o->degree_count > 1 && o->degree_count != pieces)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0,
                             "%zu degrees for %zu pieces: give one for all or one for each piece", o->degree_count,
                             pieces);
    for (size_t i = 0; i < pieces; i++) {
        degrees[i] = o->degrees[o->degree_count == 1 ? 0 : i];
        if (degrees[i] < 0 || degrees[i] > KEL_DEGREE_MAX)
            return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "degree %d: a degree lies between 0 and %d", degrees[i], KEL_DEGREE_MAX);
        most = (size_t)degrees[i] > most ? (size_t)degrees[i] : most;
    }
    if (pieces == 1 && most >= p->row_count)
        return kel_error_set(err, KEL_E_RANK, 0, 0, "degree %zu has %zu coefficients, and there %s %zu row%s to fit", most, most + 1,
                             p->row_count == 1 ? "is" : "are", p->row_count, p->row_count == 1 ? "" : "s");
    return KEL_OK;
}

kel_status
kel__choose_degree(kel__solution *solution, kel_fit_report *report, const kel__problem *problem, kel_arena *memory,
                   kel_arena *report_memory, kel_error *err)
{
    int *degrees = kel_arena_take(memory, problem->join_count + 1, sizeof *degrees);
    if (degrees == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory while choosing the degree");
    kel_status status = problem->options->degree_count > 0
                            ? take_degrees(degrees, problem, err)
                            : choose_automatically(degrees, report, problem, memory, report_memory, err);
    return status < 0 ? status : kel__solve(solution, problem, memory, degrees, err);
}
