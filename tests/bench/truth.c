/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How many certified digits do the polynomial fits reach? Every set in a folder, from its numbers read as doubles and
   from its decimal text (pairs of doubles):

       strd_*.csv      against strd_linear_certified.csv
       stress_*.csv    against stress_certified.csv

   Prints the least digits over a set's coefficients and over their standard deviations, those of the residual deviation
   and of R2, the condition of the design, and the fastest of 200 calls. 15 is all that a certificate shows. Where 0 is
   certified, the largest value that came out instead. Exit status 1 if a set misses what is asked of it below.

   Usage: truth FOLDER */
#include <dirent.h>
#include <math.h>
#include <stdio.h>
#include <string.h>
#include <time.h>

#include <kelspan-fit.h>

#include "sets.h"

enum { REPEATS = 200, SETS_MAX = 256, NAME = 256, PATH = 4096 };

/* What is asked for: digits, and for a certified 0 the most. */
static const struct { const char *label; bool pairs; double coefficient, deviation, r2, zero; } entries[] = {
    { "doubles", false, 13.0, 13.5, 14.0, 1e-14 },
    { "text", true, 14.0, 14.0, 14.0, 1e-14 },
};
static const struct { const char *prefix, *certified; } kinds[] = {
    { "strd_", "strd_linear_certified.csv" },
    { "stress_", "stress_certified.csv" },
};

/* Digits, or the size of what should be 0. */
typedef struct reached { double digits, zero; } reached;

static void
compare(reached *r, double got, quad want)
{
    if (want == 0)
        r->zero = isfinite(got) ? fmax(r->zero, fabs(got)) : (double)INFINITY;
    else
        r->digits = fmin(r->digits, set_digits(got, want));
}

/* Prints a cell, and whether it is as asked. */
static bool
show(reached r, double asked, double zero)
{
    if (isfinite(r.digits))
        printf("  %12.2f", r.digits);
    else
        printf("  %7.1e (0)", r.zero);
    return isfinite(r.digits) ? r.digits >= asked && r.zero <= zero : r.zero <= zero;
}

static kel_status
fit(kel_ls_result *r, double *microseconds, const ls_set *s, bool pairs, kel_error *err)
{
    kel_status status = KEL_OK;
    *microseconds = (double)INFINITY;
    for (int i = 0; i < REPEATS && status == KEL_OK; i++) {
        struct timespec a, b;
        clock_gettime(CLOCK_MONOTONIC, &a);
        status = kel_ls_polynomial_pairs(r, s->x, pairs ? s->x_lo : NULL, s->y, pairs ? s->y_lo : NULL, s->u, s->n,
                                         s->degree, s->constant, false, err);
        clock_gettime(CLOCK_MONOTONIC, &b);
        double took = 1e6 * (double)(b.tv_sec - a.tv_sec) + 1e-3 * (double)(b.tv_nsec - a.tv_nsec);
        *microseconds = fmin(*microseconds, took);
    }
    return status;
}

/* The lines of one set; false if something is missed. */
static bool
judge(const char *name, const ls_set *s, const ls_certificates *certified)
{
    const ls_certificate *sd = certificate_find(certified, name, "residual_sd");
    const ls_certificate *r2 = certificate_find(certified, name, "R2");
    size_t p = (size_t)s->degree + s->constant, skip = s->constant ? 0 : 1;
    if (sd == NULL || r2 == NULL) {
        printf("%-10s  skipped: it has no certificate of its residual deviation and R2\n", name);
        return true;
    }
    bool fine = true;
    for (size_t e = 0; e < sizeof entries / sizeof entries[0]; e++) {
        double b[SET_TERMS], u[SET_TERMS], time;
        kel_ls_result r = { .coefficient = b, .standard_deviation = u };
        kel_error err = { 0 };
        if (fit(&r, &time, s, entries[e].pairs, &err) < 0) {
            printf("%-10s  %-7s  failed: %s\n", name, entries[e].label, err.message);
            return false;
        }
        const reached none = { (double)INFINITY, 0 };
        reached coefficient = none, deviation = none, residual = none, square = none;
        for (size_t k = 0; k < p; k++) {
            char item[16];
            snprintf(item, sizeof item, "B%zu", k + skip);
            const ls_certificate *c = certificate_find(certified, name, item);
            if (c == NULL || !c->has_sd) {
                printf("%-10s  skipped: it has no certificate of %s\n", name, item);
                return true;
            }
            compare(&coefficient, b[k], c->value);
            compare(&deviation, u[k], c->sd);
        }
        compare(&residual, r.residual_standard_deviation, sd->value);
        compare(&square, r.r_squared, r2->value);
        printf("%-10s  %-7s  %5zu  %5zu", name, entries[e].label, s->n, p);
        bool reached_all = show(coefficient, entries[e].coefficient, entries[e].zero);
        reached_all &= show(deviation, entries[e].deviation, entries[e].zero);
        reached_all &= show(residual, entries[e].deviation, entries[e].zero);
        reached_all &= show(square, entries[e].r2, entries[e].zero);
        printf("  %9.2e  %7.1f%s\n", r.condition, time, reached_all ? "" : "  less than asked");
        fine &= reached_all;
    }
    return fine;
}

static int
by_name(const void *a, const void *b)
{
    return strcmp(a, b);
}

/* File names with the prefix, sorted, certificates left out. */
static size_t
find(char names[][NAME], const char *folder, const char *prefix)
{
    size_t n = 0;
    DIR *d = opendir(folder);
    for (struct dirent *e; d != NULL && n < SETS_MAX && (e = readdir(d)) != NULL;) {
        size_t length = strlen(e->d_name);
        if (length >= NAME || strncmp(e->d_name, prefix, strlen(prefix)) != 0 || length < 4
            || strcmp(e->d_name + length - 4, ".csv") != 0 || strstr(e->d_name, "_certified.csv") != NULL)
            continue;
        memcpy(names[n++], e->d_name, length + 1);
    }
    if (d != NULL)
        closedir(d);
    qsort(names, n, NAME, by_name);
    return n;
}

/* Sets of one kind; false if something is missed. *count goes up by the sets met. */
static bool
run(size_t *count, const char *folder, const char *prefix, const char *certified_name)
{
    static char names[SETS_MAX][NAME];
    char path[PATH], why[SET_WHY];
    size_t n = find(names, folder, prefix);
    ls_certificates certified = { 0 };
    *count += n;
    snprintf(path, sizeof path, "%.3000s/%s", folder, certified_name);
    if (n > 0 && !certificates_read(&certified, why, path)) {
        printf("%s: %s\n", path, why);
        certificates_free(&certified);
        return false;
    }
    bool fine = true;
    for (size_t i = 0; i < n; i++) {
        ls_set s;
        char name[NAME];
        snprintf(name, sizeof name, "%s", names[i] + strlen(prefix));
        name[strlen(name) - 4] = '\0';
        snprintf(path, sizeof path, "%.3000s/%.255s", folder, names[i]);
        if (set_read(&s, why, path))
            fine &= judge(name, &s, &certified);
        else {
            printf("%-10s  %s: %s\n", name, s.degree < 0 ? "skipped" : "failed", why);
            fine &= s.degree < 0;
        }
        set_free(&s);
    }
    certificates_free(&certified);
    return fine;
}

int
main(int argc, char **argv)
{
    if (argc != 2) {
        fprintf(stderr, "usage: truth FOLDER\n");
        return 2;
    }
    printf("Certified digits, the least of each set (at most %d); \"(0)\": where 0 is certified, what came out\n",
           SET_DIGITS);
    printf("%-10s  %-7s  %5s  %5s  %12s  %12s  %12s  %12s  %9s  %7s\n", "set", "from", "rows", "terms", "coefficients",
           "deviations", "residual SD", "R2", "condition", "us/call");
    bool fine = true;
    size_t count = 0;
    for (size_t k = 0; k < sizeof kinds / sizeof kinds[0]; k++)
        fine &= run(&count, argv[1], kinds[k].prefix, kinds[k].certified);
    if (count == 0) {
        fprintf(stderr, "truth: there are no sets in %s\n", argv[1]);
        return 1;
    }
    printf("asked for: ");
    for (size_t e = 0; e < sizeof entries / sizeof entries[0]; e++)
        printf("from %s %g, %g, %g, %g; ", entries[e].label, entries[e].coefficient, entries[e].deviation,
               entries[e].deviation, entries[e].r2);
    printf("in place of 0 at most %g: %s\n", entries[0].zero, fine ? "reached" : "MISSED");
    return fine ? 0 : 1;
}
