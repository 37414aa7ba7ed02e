/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A coefficient file as it stands, between reading it (coefficients_read.c) and making a curve of it
   (coefficients_curve.c). Not installed. */
#ifndef KELSPAN_PUBLISHED_H
#define KELSPAN_PUBLISHED_H

#include <kelspan/coefficients.h>

#include "metadata.h"
#include "polynomial.h"

/* sum c[k] x^k on from..to; 1/K or 1. */
typedef struct kel__published_piece {
    double from, to;           /* K */
    kel__twofold *c;
    size_t count;
    size_t line, column;       /* of `from` */
} kel__published_piece;

typedef struct kel__published {
    kel_arena *arena;          /* everything lives here */
    const char *name;          /* last component of the file's name */
    const char *digest;
    kel__metadata metadata;
    size_t header_line;
    kel_kind kind;             /* KEL_KIND_COEFFICIENT or KEL_KIND_EXPANSION */
    kel_unit unit;
    kel__variable variable;
    kel__published_piece *pieces; size_t piece_count;  /* sorted, adjoining */
    bool only_piece;
    size_t numbers;            /* coefficients printed */
} kel__published;

enum { KEL__LARGEST_POWER = 127 };

/* A row of the file, and which of its cells is what (SIZE_MAX: none). */
typedef struct kel__sheet_row { size_t line, count; kel_cell *cells; } kel__sheet_row;
typedef struct kel__layout {
    size_t from, to;
    size_t power[KEL__LARGEST_POWER + 1], powers;
    kel_unit from_unit, to_unit;
} kel__layout;

/* kind and unit from `curve`; variable from `variable`, `centre` and `scale`; layout from the header. metadata and
   header_line are set. */
kel_status kel__published_kind(kel__published *out, kel_error *err);
kel_status kel__published_variable(kel__published *out, kel_error *err);
kel_status kel__published_header(kel__layout *layout, const kel__sheet_row *header, kel_error *err);

/* Warnings of a reading, each kind once. */
typedef struct kel__adopt_warnings { kel_warning list[8]; size_t count; } kel__adopt_warnings;

/* Counts a warning of that code; the first one's text (copied into the arena) and line stay. */
kel_status kel__adopt_warn(kel__adopt_warnings *warnings, kel_arena *arena, const char *code, size_t line,
                           const kel_text *text, kel_error *err);

/* Fills *out from the file; out->arena is set. */
kel_status kel__published_read(kel__published *out, kel_input input, const char *const *settings,
                               size_t setting_count, kel_error *err);
/* Makes the record. */
kel_status kel__published_curve(kel_record **out, kel__adopt_warnings *warnings, kel__published *published,
                                kel_error *err);
/* What a published expansion says beside its derivative: how far from zero it is at the reference (a warning), and
   the transitions, declared ones and jumps between its pieces, sorted. Of a coefficient curve only the declared
   ones. */
kel_status kel__published_steps(kel_declared_transition **out, size_t *count, kel__adopt_warnings *warnings,
                                const kel__published *published,
                                kel_error *err);
/* Modes of the stated uncertainty and lot spread for content's pieces and mean curve, and what goes with them. */
kel_status kel__published_modes(kel_content *content, kel__adopt_warnings *warnings, const kel__published *published,
                                kel_error *err);
/* Temperatures inside the pieces at which a stated uncertainty changes: into at[count...]. Room for four more a
   clause is needed. */
size_t kel__published_bounds(double *at, const kel__published *published);

#endif
