/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a set of observations covers: its hull and the gaps inside it. Used by tables one by one and by fits over all
   of theirs. Not installed. */
#ifndef KELSPAN_SUPPORT_H
#define KELSPAN_SUPPORT_H

#include <kelspan.h>
#include <kelspan/table.h>

/* The interval that an observation supports, lo <= hi. */
kel_interval kel__support_of(const kel_observation *observation);

/* The hull of n intervals (each lo <= hi); NaN, NaN for none. */
kel_interval kel__support_hull(const kel_interval *support, size_t n);

/* The gaps: stretches between neighbouring distinct supporting temperatures (ends of the n intervals) longer than 4
   times the median stretch and than 10 % of `range`; with limit > 0 (K) longer than that instead. They are cut to
   `range` (usually the hull, or the hull clipped) and ascend. *gaps lives in the arena (NULL for none). KEL_E_NOMEM.
   */
kel_status kel__support_gaps(const kel_interval **gaps, size_t *count, kel_arena *arena, const kel_interval *support,
                             size_t n,
                             kel_interval range, double limit, kel_error *err);

#endif
