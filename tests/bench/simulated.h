/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Simulated tables: four true curves of alpha, and rows drawn from them with normal scatter and fixed seeds. The curves
   are invented; what counts is that one is a line, one nearly so, one falls off towards 0 K and one has a bump that a
   polynomial of low degree cannot follow. */
#ifndef KEL_BENCH_SIMULATED_H
#define KEL_BENCH_SIMULATED_H

#include <math.h>
#include <stdint.h>

#include <kelspan-fit.h>

enum { ROWS_MAX = 100, GRID = 200 };
static const double REFERENCE = 293.15;

/* ---- curves ---- */

/* Heat capacity of a Debye solid over its limit, 3 y^3 int_0^(1/y) x^4 e^x/(e^x - 1)^2 dx with y = T/theta, by
   Simpson's rule. */
static double
debye(double y)
{
    enum { PANELS = 64 };
    double top = 1.0 / y, h = top / PANELS, sum = 0.0;
    for (int i = 1; i <= PANELS; i++) {
        double x = i * h, s = x > 600.0 ? 0.0 : x * x / (2.0 * sinh(x / 2.0));
        sum += s * s * (i == PANELS ? 1.0 : i % 2 ? 4.0 : 2.0);
    }
    return 3.0 * y * y * y * sum * h / 3.0;
}

static double
cold(double t)
{
    return 23e-6 * debye(t / 390.0) * (1.0 + 1.2e-4 * t);
}

static double
steel(double t)
{
    return 11.2e-6 + 8.5e-9 * (t - 293.0) - 2.5e-12 * (t - 293.0) * (t - 293.0);
}

static double
line(double t)
{
    return 8.4e-6 + 3.1e-9 * (t - 293.0);
}

static double
bump(double t)
{
    double x = (t - 760.0) / 80.0;
    return 12e-6 + 4e-9 * (t - 293.0) + 4e-6 * exp(-x * x);
}

static const struct { const char *name; double (*alpha)(double); double lo, hi; } curves[] = {
    { "cold", cold, 10.0, 300.0 },
    { "steel", steel, 293.15, 1000.0 },
    { "line", line, 293.15, 600.0 },
    { "bump", bump, 293.15, 1100.0 },
};

static double
integral(double (*alpha)(double), double a, double b)
{
    enum { PANELS = 40 };
    double h = (b - a) / PANELS, sum = alpha(a) + alpha(b);
    for (int i = 1; i < PANELS; i++)
        sum += alpha(a + i * h) * (i % 2 ? 4.0 : 2.0);
    return sum * h / 3.0;
}

/* True alpha and expansion on the grid of the errors, made once. */
static struct { double t, alpha, expansion; } truth[4][GRID + 1];

static void
prepare(void)
{
    for (size_t c = 0; c < sizeof curves / sizeof curves[0]; c++)
        for (int i = 0; i <= GRID; i++) {
            double t = curves[c].lo + (curves[c].hi - curves[c].lo) * i / GRID;
            truth[c][i].t = t;
            truth[c][i].alpha = curves[c].alpha(t);
            truth[c][i].expansion = integral(curves[c].alpha, REFERENCE, t);
        }
}

/* ---- tables ---- */

typedef struct kind {
    size_t n, curve;
    double scatter;
    bool unequal, stated;
    kel_kind column;
} kind;

/* xorshift64* for uniform numbers, Box and Muller's pair for normal ones. */
static double
uniform(uint64_t *state)
{
    *state ^= *state >> 12;
    *state ^= *state << 25;
    *state ^= *state >> 27;
    return ((double)((*state * UINT64_C(2685821657736338717)) >> 11) + 0.5) / 9007199254740992.0;
}

static double
normal(uint64_t *state)
{
    double r = sqrt(-2.0 * log(uniform(state)));
    return r * cos(6.283185307179586 * uniform(state));
}

/* The scatter is a share of the largest coefficient, or of the largest expansion; a mean value has the expansion's. */
static void
draw(kel_observation *rows, const kind *k, uint64_t *state)
{
    double (*alpha)(double) = curves[k->curve].alpha;
    double lo = curves[k->curve].lo, hi = curves[k->curve].hi, largest = 0.0;
    for (int i = 0; i <= GRID; i++)
        largest = fmax(
            largest, fabs(k->column == KEL_KIND_COEFFICIENT ? truth[k->curve][i].alpha : truth[k->curve][i].expansion));
    for (size_t i = 0; i < k->n; i++) {
        double x = (double)i / (double)(k->n - 1), t = lo + (hi - lo) * (k->unequal ? pow(x, 1.7) : x),
               u = k->scatter * largest;
        bool coefficient = k->column == KEL_KIND_COEFFICIENT;
        if (!coefficient && fabs(t - REFERENCE) < 2.0)
            t = REFERENCE + (t < REFERENCE ? -2.0 : 2.0);
        double value = coefficient ? alpha(t) : integral(alpha, REFERENCE, t);
        if (k->column == KEL_KIND_MEAN) {
            value /= t - REFERENCE;
            u /= fabs(t - REFERENCE);
        }
        rows[i] = (kel_observation){ .kind = k->column,
                                     .from = coefficient ? t : REFERENCE,
                                     .to = t,
                                     .value = value + u * normal(state),
                                     .u_absolute = k->stated ? u : 0.0,
                                     .u_stated = k->stated,
                                     .printed_lo = t,
                                     .printed_hi = t };
    }
}

#endif
