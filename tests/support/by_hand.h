/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table put together by hand, for tests of the solver that should not lean on the reader. Include after problem.h. */
#ifndef KEL_TEST_BY_HAND_H
#define KEL_TEST_BY_HAND_H

#include <string.h>

enum { BY_HAND_ROWS = 400, BY_HAND_COLUMNS = 4 };

typedef struct by_hand {
    kel_table table;
    kel_observation rows[BY_HAND_ROWS];
    kel_column columns[BY_HAND_COLUMNS];
    kel_stated shared[4];
    kel_declared_transition transitions[4];
} by_hand;

/* An empty table in the given reference (NaN: none) and base; give it columns, then rows. */
static inline void
by_hand_start(by_hand *h, const char *name, double reference, kel_base base)
{
    memset(h, 0, sizeof *h);
    h->table = (kel_table){ .name = name, .digest = "", .reference_temperature = reference, .base = base, .columns = h->columns,
        .observations = h->rows, .shared = h->shared, .transitions = h->transitions };
}

static inline void
by_hand_column(by_hand *h, kel_kind kind, double resolution)
{
    h->columns[h->table.column_count++] = (kel_column){ .kind = kind, .resolution = resolution };
}

static inline void
by_hand_row(by_hand *h, size_t column, double from, double to, double value, double u_absolute, double u_relative)
{
    h->rows[h->table.observation_count] = (kel_observation){ .kind = h->columns[column].kind, .from = from, .to = to, .value = value,
        .u_absolute = u_absolute, .u_relative = u_relative, .u_stated = u_absolute > 0 || u_relative > 0, .column = column,
        .line = h->table.observation_count + 2, .printed_lo = to, .printed_hi = to };
    h->table.observation_count++;
    h->table.rows++;
}

static inline void
by_hand_shared(by_hand *h, double relative, double absolute, kel_dimension dimension)
{
    h->shared[h->table.shared_count++] = (kel_stated){ relative, absolute, dimension, -INFINITY, INFINITY, "by hand" };
}

static inline void
by_hand_transition(by_hand *h, double at, kel_step_kind step, double length)
{
    h->transitions[h->table.transition_count++] = (kel_declared_transition){ at, step, length, "by hand" };
}

#endif
