/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Validity range and gaps.

   A coefficient supports its T, a mean its Ta to Tb, an expansion its reference to T. The ends of these intervals are
   the supporting temperatures t_1 < t_2 < ... < t_m; the stretches are d_i = t_(i+1) - t_i. Stretch i is a gap if

       d_i > 4 median(d)   and   d_i > (hi - lo)/10         by the default rule,
       d_i > limit                                          if a limit is given.

   An interval that runs over a stretch does not fill it: a mean from 20 K to 300 K says nothing about where between
   them alpha rises. The median of an even number of stretches is the mean of the middle two. Time n log n, memory 16
   bytes an interval while it works. */
#include "support.h"

#include <math.h>
#include <stdlib.h>

static int
ascending(const void *a, const void *b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return (x > y) - (x < y);
}

/* The distinct ends in ascending order. Returns their number. Tables are nearly always in order already, and then
   need no sorting. */
static size_t
distinct_ends(double *t, const kel_interval *support, size_t n)
{
    size_t m = 0, distinct = 0;
    bool sorted = true;
    for (size_t i = 0; i < n; i++) {
        t[m++] = support[i].lo;
        if (support[i].hi != support[i].lo)
            t[m++] = support[i].hi;
    }
    for (size_t i = 1; i < m; i++)
        sorted = sorted && t[i - 1] <= t[i];
    if (!sorted)
        qsort(t, m, sizeof *t, ascending);
    for (size_t i = 0; i < m; i++)
        if (i == 0 || t[i] != t[distinct - 1])
            t[distinct++] = t[i];
    return distinct;
}

/* Moves the k-th smallest of n numbers to d[k], no larger ones before it (Hoare's FIND, Algorithm 65, with the middle
   as pivot). Unlike sorting it needs no second array, which for a long table would be its largest. */
static void
select_kth(double *d, size_t n, size_t k)
{
    size_t lo = 0, hi = n - 1;
    while (lo < hi) {
        double pivot = d[lo + (hi - lo) / 2];
        size_t i = lo, j = hi;
        for (;; i++, j--) {
            while (d[i] < pivot)
                i++;
            while (d[j] > pivot)
                j--;
            if (i >= j)
                break;
            double swap = d[i];
            d[i] = d[j];
            d[j] = swap;
        }
        /* d[lo..j] <= pivot <= d[j+1..hi], and j < hi because the pivot stands left of hi. */
        if (k <= j)
            hi = j;
        else
            lo = j + 1;
    }
}

/* The length above which a stretch is a gap. d: room for m - 1 numbers, m >= 2. */
static double
gap_limit(double *d, const double *t, size_t m, kel_interval range)
{
    size_t n = m - 1;
    for (size_t i = 0; i < n; i++)
        d[i] = t[i + 1] - t[i];
    double tenth = (range.hi - range.lo) / 10, longest = 0;
    for (size_t i = 0; i < n; i++)
        longest = fmax(longest, d[i]);
    if (longest <= tenth)
        return tenth; /* none is a gap whatever the median is */
    select_kth(d, n, n / 2);
    double median = d[n / 2];
    if (n % 2 == 0) {
        select_kth(d, n / 2, n / 2 - 1); /* all of them are below the middle */
        median = 0.5 * (d[n / 2 - 1] + median);
    }
    return fmax(4 * median, tenth);
}

/* Stretch i cut to the range; lo >= hi if nothing is left of it. */
static kel_interval
cut(const double *t, size_t i, kel_interval range)
{
    return (kel_interval){ fmax(t[i], range.lo), fmin(t[i + 1], range.hi) };
}

kel_interval
kel__support_of(const kel_observation *o)
{
    return o->from <= o->to ? (kel_interval){ o->from, o->to } : (kel_interval){ o->to, o->from };
}

kel_interval
kel__support_hull(const kel_interval *support, size_t n)
{
    kel_interval hull = { NAN, NAN };
    for (size_t i = 0; i < n; i++) {
        hull.lo = fmin(hull.lo, support[i].lo); /* fmin and fmax pass over NaN */
        hull.hi = fmax(hull.hi, support[i].hi);
    }
    return hull;
}

kel_status
kel__support_gaps(const kel_interval **gaps, size_t *count, kel_arena *arena, const kel_interval *support, size_t n,
                  kel_interval range, double limit, kel_error *err)
{
    *gaps = NULL;
    *count = 0;
    if (n == 0)
        return KEL_OK;
    double *t = malloc(2 * n * sizeof *t), *d = NULL;
    kel_interval *list = NULL;
    kel_status status = KEL_OK;
    if (t == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the gaps of %zu observations", n);
    size_t m = distinct_ends(t, support, n), found = 0;
    if (m < 2)
        goto done;
    if (!(limit > 0)) {
        d = malloc((m - 1) * sizeof *d);
        if (d == NULL) {
            status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the gaps of %zu observations", n);
            goto done;
        }
        limit = gap_limit(d, t, m, range);
    }
    for (size_t i = 0; i + 1 < m; i++) {
        kel_interval gap = cut(t, i, range);
        found += t[i + 1] - t[i] > limit && gap.lo < gap.hi;
    }
    if (found == 0)
        goto done;
    list = kel_arena_take(arena, found, sizeof *list);
    if (list == NULL) {
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the gaps of %zu observations", n);
        goto done;
    }
    for (size_t i = 0; i + 1 < m; i++) {
        kel_interval gap = cut(t, i, range);
        if (t[i + 1] - t[i] > limit && gap.lo < gap.hi)
            list[(*count)++] = gap;
    }
    *gaps = list;
done:
    free(t);
    free(d);
    return status;
}
