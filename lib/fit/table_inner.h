/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table while it is being understood, and what stays behind for writing it out again. Not installed. */
#ifndef KELSPAN_TABLE_INNER_H
#define KELSPAN_TABLE_INNER_H

#include <kelspan.h>
#include <kelspan/table.h>

#include "header.h"
#include "metadata.h"
#include "number_cell.h"
#include "sheet.h"

#define KEL__NONE ((size_t)-1)

/* A column of the file. */
typedef struct kel__file_column {
    kel__printed head;
    kel__heading heading;
    bool named;                /* by --column, which overrules the head */
    bool used;                 /* belongs to the table as understood: temperatures, words, the chosen series */
    size_t owner;              /* of an uncertainty: the value column it belongs to */
    bool relative;             /* of an uncertainty: a fraction of the value */
    size_t uncertainty;        /* of a value: its column of uncertainty, or KEL__NONE */
    size_t slot;               /* of a value that is fitted: its index in table->columns, else KEL__NONE */
    double resolution;         /* of a value: one unit of the finest last digit, SI; 0 before any was printed */
} kel__file_column;

/* A row left out by hand. */
typedef struct kel__leave_out { size_t row; const char *reason; bool met; } kel__leave_out;

struct kel__table {
    kel_arena *memory;
    bool printed;              /* read from a file, so that it can be written out */
    bool foreign;              /* columns were named by --column: heads that say nothing are passed over */
    kel__metadata metadata;
    kel__sheet sheet;
    kel__file_column *columns; /* sheet.raw.width of them */
    kel_column *fitted;        /* table->columns, while they can still change */
    kel_observation *observed; /* table->observations, likewise */
    size_t temperature, from, to, interval, source, status, reservations; /* columns, or KEL__NONE */
    bool *at_reference;        /* observations that are left out as expansions at their own reference; NULL: none */
    kel__leave_out *leave_out; size_t leave_out_count;
    kel_warning *warnings; size_t warning_count, warning_capacity;
    const char *mark_reasons[KEL__MARK_SETS]; /* why a marked row is left out, made when first met */
};

kel_status kel__no_memory(kel_error *err);

/* A table with its arena and nothing in it. */
kel_status kel__table_new(kel_table **out, const char *name, kel_error *err);

/* Notes a warning. text is taken over (and freed, whatever happens). line 0: no place. */
kel_status kel__warn(kel_table *t, const char *code, kel_text *text, size_t line, size_t count, kel_error *err);

/* Appends data in quotes, made safe and cut to a length that fits a message. */
void kel__quote_into(kel_text *text, const char *bytes, size_t n);

/* An error whose message was put together in text, which is freed. */
kel_status kel__fail(kel_error *err, kel_status code, size_t line, size_t column, kel_text *text);

/* Appends "293.15 K", or a value of a kind with its unit, to seven digits. */
void kel__temperature_into(kel_text *text, double t);
void kel__value_into(kel_text *text, kel_kind kind, double value);

/* The steps of reading, in this order: heads and --column; what belongs together and what is fitted; --leave-out; rows
   to observations; physics (for arrays too); kinds printed side by side; repeated and unsorted rows (for arrays too);
   rows, hull and gaps (likewise). */
kel_status kel__table_columns(kel_table *t, const kel_table_options *options, kel_error *err);
kel_status kel__table_series(kel_table *t, const kel_table_options *options, kel_error *err);
kel_status kel__table_leave_out(kel_table *t, const kel_table_options *options, kel_error *err);
kel_status kel__table_observe(kel_table *t, bool include_marked, kel_error *err);
kel_status kel__table_check(kel_table *t, kel_error *err);
kel_status kel__table_cross_check(kel_table *t, kel_error *err);
kel_status kel__table_order(kel_table *t, kel_error *err);
kel_status kel__table_range(kel_table *t, double gap, kel_error *err);

/* Is the row (by its number) left out by hand? Then the reason, else NULL. */
const char *kel__left_out_by_hand(kel_table *t, size_t row);

/* The independent uncertainty of observation o, whose column of the file is c and whose row is `cells`. */
kel_status kel__row_uncertainty(kel_observation *o, const kel_table *t, const kel__file_column *c,
                                const kel__printed *cells, unsigned *marks,
                                kel_error *err);
/* Refuses absolute metadata uncertainties whose dimension is that of no fitted column. */
kel_status kel__clause_dimensions(const kel_table *t, kel_error *err);

/* The temperatures printed in a row. NaN where there is no such column. */
typedef struct kel__row_temperatures { double at, from, to; unsigned marks; } kel__row_temperatures;
kel_status kel__row_temperatures_of(kel__row_temperatures *out, const kel_table *t, const kel__printed *cells,
                                    kel_error *err);

/* The cell of observation o in its file, for errors; column 0 for arrays. */
kel_status kel__place_of(size_t *line, size_t *column, const kel_table *t, const kel_observation *o, kel_error *err);

static inline kel__cell
kel__cell_at(const kel__printed *cells, size_t column)
{
    return kel__cell_of(cells[column].bytes, cells[column].size, cells[column].line, cells[column].column);
}

#endif
