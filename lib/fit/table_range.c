/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a table by itself covers: rows that give something, validity range, gaps. */
#include "table_inner.h"
#include "support.h"

#include <math.h>
#include <stdlib.h>

kel_status
kel__table_range(kel_table *t, double gap, kel_error *err)
{
    size_t kept = 0, rows = 0, line = 0;
    for (size_t i = 0; i < t->observation_count; i++) {
        const kel_observation *o = &t->observations[i];
        if (o->left_out != NULL)
            continue;
        rows += kept == 0 || o->line != line; /* the values of a row follow each other */
        line = o->line;
        kept++;
    }
    t->rows_left_out = t->rows - rows;
    t->range = (kel_interval){ NAN, NAN };
    if (kept == 0)
        return KEL_OK;
    kel_interval *support = malloc(kept * sizeof *support);
    if (support == NULL)
        return kel__no_memory(err);
    size_t n = 0;
    for (size_t i = 0; i < t->observation_count; i++)
        if (t->observations[i].left_out == NULL)
            support[n++] = kel__support_of(&t->observations[i]);
    t->range = kel__support_hull(support, n);
    kel_status status = kel__support_gaps(&t->gaps, &t->gap_count, t->inner->memory, support, n, t->range, gap, err);
    free(support);
    return status;
}
