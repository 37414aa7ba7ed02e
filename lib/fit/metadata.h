/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The `# key: value` lines of tables and coefficient files. Not installed. */
#ifndef KELSPAN_METADATA_H
#define KELSPAN_METADATA_H

#include <kelspan.h>
#include <kelspan/rows.h>
#include <kelspan/table.h>

/* One clause of `uncertainty:` or `lot spread:`, already a standard uncertainty. */
typedef struct kel__clause {
    double relative, absolute;  /* fraction; SI; 0 where that part is missing */
    kel_dimension dimension;    /* of the absolute part, KEL_DIM_PER_KELVIN or KEL_DIM_ONE */
    bool independent;
    double lo, hi;              /* K; -infinity, infinity without a range */
    const char *text;           /* as printed */
    size_t line, column;        /* of the value; 0 from the command line */
} kel__clause;

typedef struct kel__entry { const char *key, *value; size_t line, column; } kel__entry;

/* NULL and NaN: not stated. Everything lives in the arena given to kel__metadata_new. */
typedef struct kel__metadata {
    const char *material, *condition, *direction, *product_form, *source, *lineage, *scale, *branch;
    double reference_temperature; const char *reference_printed;
    kel_base base; bool base_stated;
    bool contracts_on_heating, shift_to_reference, decimal_comma;
    const kel__clause *uncertainty; size_t uncertainty_count;
    const kel__clause *lot; size_t lot_count; const char *lot_text;
    const kel_declared_transition *transitions; size_t transition_count;
    const char *const *notes; size_t note_count;
    const kel_warning *warnings; size_t warning_count;   /* unknown keys kept as notes, ... */
    const kel__entry *entries; size_t entry_count;       /* all, in order, as printed: for writing the file again */
    /* of coefficient files only */
    const kel__entry *curve, *variable, *centre, *variable_scale;
} kel__metadata;

/* Collects and parses. `coefficients`: the file is a coefficient file (its own keys are known; `scale:` with a number
   in front is the variable's). */
typedef struct kel__metadata_reader kel__metadata_reader;
kel_status kel__metadata_new(kel__metadata_reader **out, kel_arena *arena, bool coefficients, kel_error *err);
/* A comment line's text (behind the '#'); lines that are no `key: value` pass. column is that of text's first byte. */
kel_status kel__metadata_line(kel__metadata_reader *reader, const char *text, size_t n, size_t line, size_t column,
                              kel_error *err);
/* 'key: value' from --set: overrides the file's value of that key (that is the user's decision), adds for repeatable
   keys. Call these before the file's lines; a wrong key is an error here, not a note. */
kel_status kel__metadata_set(kel__metadata_reader *reader, const char *setting, kel_error *err);
/* Cross-checks (same key twice with different values; overlapping ranges of one sort) and gives the result. */
kel_status kel__metadata_finish(kel__metadata *out, kel__metadata_reader *reader, kel_error *err);
void kel__metadata_free(kel__metadata_reader *reader);

/* "293.15 K", "20 °C", "-321 degF" inside a file: number, optional blank, unit. */
kel_status kel__temperature_text(double *out, const char *text, size_t n, size_t line, size_t column, kel_error *err);

#endif
