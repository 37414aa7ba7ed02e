/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the bench programs share: the clock, the alternating runs, the heading with processor and compiler. Ratios are
   those of medians, from runs that take turns, so that a machine that slows down slows down every job. */
#ifndef KEL_TEST_BENCH_H
#define KEL_TEST_BENCH_H

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

/* Set by the build: the flags that this program and the libraries were compiled with. */
#ifndef BENCH_FLAGS
#define BENCH_FLAGS "unknown"
#endif

/* The compiler must believe that someone reads p. */
#define BENCH_KEEP(p) __asm__ volatile("" : : "r"(p) : "memory")

enum { BENCH_ROUNDS_MAX = 101 };

typedef struct bench_job {
    const char *label;
    void (*run)(void);
    double items;   /* a run does so many */
    double seconds; /* of processor time for an item: the median, from bench_run */
} bench_job;

/* Processor time of this program, which counts no time that others had the processor. */
static inline double
bench_clock(void)
{
    struct timespec now;
    clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &now);
    return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

static inline int
bench_compare(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return (x > y) - (x < y);
}

/* Every job once to warm up, then `rounds` <= BENCH_ROUNDS_MAX times in turns. */
static inline void
bench_run(bench_job *jobs, size_t n, int rounds)
{
    double *seconds = malloc(n * BENCH_ROUNDS_MAX * sizeof *seconds);
    if (seconds == NULL || rounds > BENCH_ROUNDS_MAX)
        exit(EXIT_FAILURE);
    for (int round = -1; round < rounds; round++)
        for (size_t i = 0; i < n; i++) {
            double start = bench_clock();
            jobs[i].run();
            if (round >= 0)
                seconds[i * BENCH_ROUNDS_MAX + (size_t)round] = bench_clock() - start;
        }
    for (size_t i = 0; i < n; i++) {
        double *mine = seconds + i * BENCH_ROUNDS_MAX;
        qsort(mine, (size_t)rounds, sizeof *mine, bench_compare);
        jobs[i].seconds = mine[rounds / 2] / jobs[i].items;
    }
    free(seconds);
}

/* Uniform in 0..1, the same on every run. */
static inline double
bench_random(unsigned long long *state)
{
    unsigned long long z = *state += 0x9E3779B97F4A7C15u;
    z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9u;
    z = (z ^ (z >> 27)) * 0x94D049BB133111EBu;
    return (double)((z ^ (z >> 31)) >> 11) * 0x1p-53;
}

/* What is measured, on what, built how. */
static inline void
bench_heading(const char *what)
{
    char line[256], model[256] = "unknown processor\n";
    int avx2 = 0;
    FILE *f = fopen("/proc/cpuinfo", "r");
    while (f != NULL && fgets(line, sizeof line, f) != NULL)
        if (strncmp(line, "model name", 10) == 0 && strchr(line, ':') != NULL)
            snprintf(model, sizeof model, "%.200s", strchr(line, ':') + 2);
    if (f != NULL)
        fclose(f);
#if defined __x86_64__ && defined __GNUC__
    avx2 = __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
#endif
    printf("%s\n  processor: %.*s (%s AVX2)\n  compiler: %s, flags: %s\n", what, (int)strcspn(model, "\n"), model,
           avx2 ? "with" : "without", __VERSION__, BENCH_FLAGS);
}

#endif
