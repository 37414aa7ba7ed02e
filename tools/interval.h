/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One interval from temperature to temperature: what `integrate` asks and what it got. */
#ifndef KELSPAN_INTERVAL_H
#define KELSPAN_INTERVAL_H

#include "output.h"
#include "reservations.h"

enum { INTEGRAL, RATIO, MEAN, CHANGE, QUANTITIES };

typedef struct interval {
    double from, to;            /* K */
    kel_unit from_unit, to_unit; /* as asked, for text */
    double length, at;          /* m, at this temperature in K */
    bool has_length;
    kel_answer of[QUANTITIES];  /* CHANGE counts per length at `at`; it is asked with a length only */
    kel_answer from_at, to_at;  /* L(from)/L(at), L(to)/L(at) */
    int wanted;                 /* the main quantity: the integral, with a length its change */
    double outside;             /* kelvin of the interval outside the validity range */
} interval;

/* Is quantity i, other than the main one, extrapolated? */
bool interval_other_extrapolated(const interval *v, int i);

void interval_text(kel_text *out, const job *j, const subject *s, const interval *v, const units *in);

#endif
