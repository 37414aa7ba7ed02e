/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One line split into cells. Not installed. */
#ifndef KELSPAN_CELLS_H
#define KELSPAN_CELLS_H

#include <stdbool.h>
#include <kelspan/rows.h>

typedef struct kel__cells kel__cells;

/* NULL if memory ran out. */
kel__cells *kel__cells_new(void);
void kel__cells_free(kel__cells *cells);

/* The cells of line[n], which is line `number` of its file; they are valid until the next call and as long as the
   line. The delimiter must be a known one, and the same in every call. */
kel_status kel__cells_split(const kel_cell **out, size_t *count, kel__cells *cells, kel_delimiter delimiter,
                            const char *line, size_t n, size_t number, kel_error *err);

/* The one of , ; tab that occurs most often outside quotes; of equals the first in this order. */
kel_delimiter kel__cells_detect(const char *line, size_t n);

#endif
