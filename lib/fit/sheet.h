/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A file's rows sorted into metadata, heads of columns and data, nothing understood yet. Not installed. */
#ifndef KELSPAN_SHEET_H
#define KELSPAN_SHEET_H

#include "metadata.h"
#include "raw.h"

typedef struct kel__sheet {
    kel__raw raw;              /* the data rows */
    kel__printed *heads;       /* raw.width of them; without a header empty ones */
    size_t head_line;          /* 0: the file has none */
    size_t skipped, skipped_line; /* lines before the header that was asked for, and the first of them */
    char digest[65];
} kel__sheet;

/* Reads all of input. Comments go to metadata. Nothing may be ragged; rows without any text in their cells are passed
   over like blank lines. */
kel_status kel__sheet_read(kel__sheet *out, kel_arena *arena, kel_input input, const kel_table_options *options,
                           kel__metadata_reader *metadata, kel_error *err);

#endif
