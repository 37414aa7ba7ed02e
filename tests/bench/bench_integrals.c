/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How fast are integrals of arrays? A million intervals, every array touched beforehand, each job run alternately with
   the others; medians, and their ratios to two peers measured in the same run:

       plain loop   c[i] = a[i] + b[i], compiled with -O2 and kept out of line: what memory and one addition cost
       spline       gsl_spline_eval_integ on a cubic spline of 50 knots through the same curve, one interval a call

   Ends are drawn evenly from a range that is a little wider than the validity range, so that some answers are
   extrapolated. The check at the end holds kelspan's integrals against the spline's. */
#include <gsl/gsl_spline.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>

#include <kelspan.h>

#include "bench.h"
#include "kernel.h"

enum { N = 1000000, KNOTS = 50, PIECES = 4, COUNT = 6, MODES = 6, SPLINE_SHARE = 10 };

static double from[N], to[N], integral[N], u[N], sum[N];
static unsigned char flags[N];
static kel_record *one_piece, *four_pieces, *no_u;
static kel__kernel kernel_now; /* of no_u, with another code */
static gsl_spline *spline;
static gsl_interp_accel *accel;

/* A record of the bench: alpha rises from 4 to 20 e-6 1/K between 4 K and 1000 K; u by six modes of all orders. */
static kel_record *
make_record(size_t pieces, size_t modes)
{
    static const double shape[COUNT] = { 14e-6, 6.5e-6, -2.1e-6, 0.6e-6, -0.13e-6, 0.02e-6 };
    static double numbers[MODES + 1][PIECES * COUNT];
    static const double no_steps[1] = { 0.0 };
    kel_piece piece[PIECES];
    kel_mode mode[MODES];
    int joins[PIECES] = { 0, 0, 0, 0 };
    const double lo = 4.0, hi = 1000.0;
    for (size_t i = 0; i < pieces; i++) {
        double a = lo + (hi - lo) * (double)i / (double)pieces, b = lo + (hi - lo) * (double)(i + 1) / (double)pieces;
        piece[i] = (kel_piece){ i == 0 ? lo : piece[i - 1].to, b, i * COUNT, COUNT };
        for (size_t m = 0; m <= modes; m++)
            for (size_t j = 0; j < COUNT; j++)
                numbers[m][i * COUNT + j] =
                    m == 0 ? shape[j] * (a + b) / (lo + hi) : 1e-8 / (double)(1 + (m + j) % COUNT);
    }
    for (size_t m = 0; m < modes; m++)
        mode[m] = (kel_mode){ KEL_MODE_FIT, "scatter", { numbers[m + 1], no_steps } };
    const kel_content content = {
        .form = pieces == 1 ? "polynomial" : "piecewise", .base = KEL_BASE_REFERENCE,
        .reference_temperature = 293.15, .range = { lo, hi }, .pieces = piece, .piece_count = pieces,
        .coefficient_count = pieces * COUNT, .continuity = joins, .continuity_count = pieces - 1,
        .mean = { numbers[0], no_steps }, .modes = mode, .mode_count = modes,
        .variance = modes > 0 ? KEL_VARIANCE_STATED : KEL_VARIANCE_NONE, .scatter_known = modes > 0,
        .degrees_of_freedom = NAN, .residual_standard_deviation = NAN, .chi2 = NAN,
    };
    kel_record *record = NULL;
    kel_error err = { 0 };
    if (kel_record_build(&record, &content, &err) != KEL_OK) {
        fprintf(stderr, "bench_integrals: %s\n", err.message);
        exit(EXIT_FAILURE);
    }
    return record;
}

/* The last but one in the list, without AVX2 where there is one with it. */
static const kel__kernel_code *
second_code(void)
{
    size_t n = 0;
    while (kel__kernel_codes[n] != NULL)
        n++;
    return kel__kernel_codes[n < 2 ? 0 : n - 2];
}

/* ---- jobs ---- */

__attribute__((noinline)) static void
add(double *c, const double *a, const double *b, size_t n)
{
    for (size_t i = 0; i < n; i++)
        c[i] = a[i] + b[i];
}

static void
plain_loop(void)
{
    size_t n = N;
    BENCH_KEEP(&n); /* so that the loop is not compiled for this n */
    add(sum, from, to, n);
    BENCH_KEEP(sum);
}

static void
spline_loop(void)
{
    for (size_t i = 0; i < N / SPLINE_SHARE; i++)
        sum[i] = gsl_spline_eval_integ(spline, fmin(from[i], to[i]), fmax(from[i], to[i]), accel);
    BENCH_KEEP(sum);
}

static void
with_flags(void)
{
    kel_record_integral_n(integral, NULL, flags, no_u, from, to, N, NULL);
}

static void
with_u(void)
{
    kel_record_integral_n(integral, u, flags, one_piece, from, to, N, NULL);
}

static void
in_four_pieces(void)
{
    kel_record_integral_n(integral, NULL, flags, four_pieces, from, to, N, NULL);
}

/* The codes that the library would choose on an older processor, and on one that it has no vectors for. */
static void
with_code(const kel__kernel_code *code)
{
    kel_record record = *no_u;
    kernel_now = *no_u->kernel;
    kernel_now.code = code;
    record.kernel = &kernel_now;
    kel_record_integral_n(integral, NULL, flags, &record, from, to, N, NULL);
}

static void
without_avx2(void)
{
    with_code(second_code());
}

static void
in_plain_c(void)
{
    with_code(&kel__kernel_plain);
}

static void
means(void)
{
    kel_record_mean_n(integral, NULL, flags, no_u, from, to, N, NULL);
}

static void
coefficients(void)
{
    kel_record_coefficient_n(integral, NULL, flags, no_u, to, N, NULL);
}

static void
expansions(void)
{
    kel_record_expansion_n(integral, NULL, flags, no_u, to, N, NULL);
}

int
main(void)
{
    bench_job jobs[] = {
        { "plain loop c[i] = a[i] + b[i]", plain_loop, N, 0.0 },
        { "gsl_spline_eval_integ, 50 knots", spline_loop, N / SPLINE_SHARE, 0.0 },
        { "integral, degree 5, flags", with_flags, N, 0.0 },
        { "the same without AVX2", without_avx2, N, 0.0 },
        { "the same in plain C", in_plain_c, N, 0.0 },
        { "integral, flags, u of 6 modes", with_u, N, 0.0 },
        { "integral, 4 pieces, flags", in_four_pieces, N, 0.0 },
        { "mean coefficient, flags", means, N, 0.0 },
        { "coefficient, flags", coefficients, N, 0.0 },
        { "expansion, flags", expansions, N, 0.0 },
    };
    enum { LOOP, SPLINE, FLAGS, SSE2, PLAIN, U, JOBS = sizeof jobs / sizeof jobs[0] };
    double knot[KNOTS], alpha[KNOTS];
    unsigned long long state = 1;
    no_u = make_record(1, 0);
    one_piece = make_record(1, MODES);
    four_pieces = make_record(PIECES, 0);
    for (int i = 0; i < KNOTS; i++) {
        kel_answer answer;
        knot[i] = 1001.0 * i / (KNOTS - 1);
        kel_record_coefficient(&answer, one_piece, knot[i], NULL);
        alpha[i] = answer.value;
    }
    spline = gsl_spline_alloc(gsl_interp_cspline, KNOTS);
    accel = gsl_interp_accel_alloc();
    if (spline == NULL || accel == NULL || gsl_spline_init(spline, knot, alpha, KNOTS) != 0)
        return EXIT_FAILURE;
    for (size_t i = 0; i < N; i++) {
        from[i] = 1001.0 * bench_random(&state);
        to[i] = 1001.0 * bench_random(&state);
    }

    bench_heading("integrals of 1,000,000 intervals");
    bench_run(jobs, JOBS, 15);
    for (size_t i = 0; i < JOBS; i++)
        printf("  %-34s %8.2f ns each %8.2f of the plain loop\n", jobs[i].label, 1e9 * jobs[i].seconds,
               jobs[i].seconds / jobs[LOOP].seconds);
    printf("  integral with flags: %.0f times faster than gsl_spline_eval_integ\n",
           jobs[SPLINE].seconds / jobs[FLAGS].seconds);
    printf("  with u of 6 modes: %.2f times the call without\n", jobs[U].seconds / jobs[FLAGS].seconds);

    /* The same curve, so that the two ways agree as well as a spline follows a polynomial. */
    kel_record_integral_n(integral, NULL, NULL, one_piece, from, to, N, NULL);
    spline_loop();
    double worst = 0.0;
    for (size_t i = 0; i < N / SPLINE_SHARE; i++)
        worst = fmax(worst, fabs(fabs(integral[i]) - fabs(sum[i])));
    printf("  largest difference to the spline's integrals: %.1e\n", worst);
    gsl_spline_free(spline);
    gsl_interp_accel_free(accel);
    kel_record_free(one_piece);
    kel_record_free(four_pieces);
    kel_record_free(no_u);
    return worst < 1e-6 ? EXIT_SUCCESS : EXIT_FAILURE;
}
